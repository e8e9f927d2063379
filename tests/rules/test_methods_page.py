"""The page of methods: its figures are drawn from the program's numbers as they are now."""

from __future__ import annotations

import importlib.util
import re
import subprocess
import sys
import xml.etree.ElementTree as ET

import numpy as np
import pytest

import plumbfall as pf
from plumbfall.physics.measured_errors import together_error
from support.documents import DOCS, TEXTS, number, table_headed

PAGE = TEXTS["methods.md"]
SVG = "{http://www.w3.org/2000/svg}"


@pytest.fixture(scope="module")
def figures():
    sys.path.insert(0, str(DOCS))
    try:
        spec = importlib.util.spec_from_file_location("docs_figures", DOCS / "figures.py")
        module = importlib.util.module_from_spec(spec)
        sys.modules["docs_figures"] = module  # its dataclass looks itself up
        spec.loader.exec_module(module)
        yield module
    finally:
        sys.path.remove(str(DOCS))
        sys.modules.pop("docs_figures", None)


def test_figures_are_current():
    done = subprocess.run(
        [sys.executable, DOCS / "figures.py", "--check"], capture_output=True, text=True
    )
    assert done.returncode == 0, done.stdout + done.stderr


def test_a_changed_number_is_noticed_and_drawn_anew(figures, tmp_path, monkeypatch, capsys):
    monkeypatch.setattr(figures, "WHERE", tmp_path)
    monkeypatch.setattr(figures, "FIGURES", {"walls": figures.FIGURES["walls"]})
    path = tmp_path / "walls.svg"
    assert figures.main([]) == 0
    drawn = path.read_text("utf-8")
    numbers = figures.stored("walls")
    first = numbers["bohlin"][20]
    path.write_text(drawn.replace(f"{first}", f"{first * 1.01:.4g}", 1), "utf-8")
    capsys.readouterr()
    assert figures.main(["--check"]) == 1
    assert "walls.svg: stale" in capsys.readouterr().out
    assert figures.main([]) == 0
    assert path.read_text("utf-8") == drawn
    assert figures.main(["--check"]) == 0
    assert [one.name for one in tmp_path.iterdir()] == ["walls.svg"]


def test_figures_are_small_described_and_on_the_page(figures):
    paths = sorted((DOCS / "figures").glob("*.svg"))
    assert [path.stem for path in paths] == sorted(figures.FIGURES)
    assert sum(path.stat().st_size for path in paths) < 150_000
    shown = re.findall(r"!\[([^\]]+)\]\(figures/(\w+)\.svg\)", PAGE)
    assert sorted(name for _, name in shown) == sorted(figures.FIGURES)
    for path in paths:
        root = ET.fromstring(path.read_text("utf-8"))
        assert root.find(f"{SVG}title").text
        assert root.find(f"{SVG}desc").text
        assert "dc:date" not in path.read_text("utf-8")
        assert figures.stored(path.stem)


def test_table_of_1958_as_the_page_has_it():
    # Haberman and Sayre 1958, David Taylor Model Basin report 1143 (from memory)
    head, printed, exact, off = (
        row[1:] for row in table_headed("methods.md", "| λ | 0.1 | 0.2 | 0.3")
    )
    assert printed == ["1.263", "1.680", "2.371", "3.596", "5.970", "11.135", "24.955", "73.555"]
    computed = pf.physics.wall_factor(diameter_ratio=np.array([float(one) for one in head]))
    assert [float(one) for one in exact] == pytest.approx(computed, abs=5.1e-5)
    errors = 100 * (np.array([float(one) for one in printed]) / computed - 1)
    assert [number(one) for one in off] == pytest.approx(errors, abs=0.0051)


def test_leaving_inertia_out_beats_adding_it_to_twenty_times_the_ratio():
    assert "at least up to Re = 20 λ" in PAGE
    for ratio in (0.05, 0.1, 0.2, 0.3):

        def gain(times: float, ratio: float = ratio) -> float:
            reynolds = times * ratio
            factor = pf.physics.tube_drag_factor(diameter_ratio=ratio, reynolds=reynolds)
            alone = pf.physics.wall_factor(diameter_ratio=ratio) / factor - 1
            return float(together_error("additive", ratio, reynolds)) - abs(alone)

        assert gain(20) > 0 > gain(70)
