"""Build the documents as a site: ``python docs/site.py OUT``.

The pages stay the plain Markdown that they are. They are copied, the notebooks are executed into
pages beside them, the report of a sample run is put with them, and Sphinx makes the site; a
warning of its fails the build.
"""

from __future__ import annotations

import argparse
import os
import re
import shutil
import sys
import tempfile
from collections.abc import Sequence
from pathlib import Path

from notebooks import execute, page_of  # stands beside this script

DOCS = Path(__file__).parent
ROOT = DOCS.parent
SAMPLE = "sample_runs/three_batches/drops.csv"


def main(arguments: Sequence[str] | None = None) -> int:
    """Build the site; return the exit code of Sphinx."""
    from sphinx.cmd.build import main as build

    parser = argparse.ArgumentParser(description="Build the documents as a site.")
    parser.add_argument("out", metavar="OUT", help="folder of the site")
    out = Path(parser.parse_args(arguments).out).resolve()
    with tempfile.TemporaryDirectory(ignore_cleanup_errors=True) as folder:
        source = Path(folder, "source")
        assemble(source)
        code = build(["-q", "-W", "--keep-going", "-b", "html", str(source), str(out)])
    return int(code)


def assemble(source: Path) -> None:
    """Put together what Sphinx reads."""
    shutil.copytree(DOCS / "figures", source / "figures")
    shutil.copy(DOCS / "conf.py", source)
    pages = sorted(path for path in DOCS.glob("*.md") if path.name != "README.md")
    for path in pages:
        (source / path.name).write_text(_linked(path.read_text("utf-8")), "utf-8")
    names = [path.stem for path in pages]
    for script in sorted((DOCS / "notebooks").glob("*.py")):
        names.append(f"notebooks/{script.stem}")
        _notebook(script, source / "notebooks")
    _sample_report(source / "sample")
    index = _linked((DOCS / "README.md").read_text("utf-8"))
    listed = sorted(names, key=lambda name: (index.find(f"{name}."), name))
    tree = "\n".join(["```{toctree}", ":hidden:", "", *listed, "```"])
    (source / "index.md").write_text(f"{index}\n{tree}\n", "utf-8")


def _linked(text: str) -> str:
    """Point links to the index and to the notebooks at their pages of the site."""
    text = re.sub(r"\]\(README\.md(#[^)]*)?\)", r"](index.md\1)", text)
    return re.sub(r"\]\((notebooks/\w+)\.py\)", r"](\1.md)", text)


def _notebook(script: Path, folder: Path) -> None:
    folder.mkdir(exist_ok=True)
    here = os.getcwd()
    os.chdir(ROOT)  # notebooks name the sample runs from there
    try:
        page = page_of(execute(script), script.stem, folder)
    finally:
        os.chdir(here)
    (folder / f"{script.stem}.md").write_text(page, "utf-8")


def _sample_report(folder: Path) -> None:
    import plumbfall as pf

    folder.mkdir()
    here = os.getcwd()
    os.chdir(ROOT)
    try:
        pf.reduce(SAMPLE, date="2026-03-04").to_html(folder / "report.html")
    finally:
        os.chdir(here)


if __name__ == "__main__":
    sys.exit(main())
