"""The folder tree is the dependency diagram: imports go one way."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).parents[2]


def test_layers_contract_holds():
    lint = Path(sys.executable).with_name("lint-imports")
    done = subprocess.run(
        [lint, "--config", ROOT / ".importlinter", "--no-cache"],
        cwd=ROOT,
        capture_output=True,
        text=True,
        check=False,
    )
    assert done.returncode == 0, done.stdout + done.stderr


def test_physics_runs_without_the_solvers():
    """Run time reads tables; the solvers and their libraries are only needed to make them."""
    code = (
        "import sys, plumbfall as pf; pf.physics.tube_drag_factor(diameter_ratio=0.1, reynolds=1.);"
        "assert not any(name.startswith(('plumbfall.flow', 'skfem')) for name in sys.modules)"
    )
    subprocess.run([sys.executable, "-c", code], check=True)


def test_help_and_import_load_nothing_heavy():
    code = (
        "import sys, plumbfall; from plumbfall.cli.program import build_parser;"
        "build_parser().format_help();"
        "heavy = {'numpy', 'scipy', 'pandas', 'pint', 'pydantic', 'matplotlib', 'jinja2', 'rich'};"
        "assert not heavy & set(sys.modules), heavy & set(sys.modules)"
    )
    subprocess.run([sys.executable, "-c", code], check=True)
