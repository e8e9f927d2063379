"""The notebooks run from the first cell to the last, and what their text says holds."""

from __future__ import annotations

import importlib.util
import sys
from pathlib import Path
from types import ModuleType
from typing import Any

import pytest

from support.documents import DOCS, ROOT

SCRIPTS = sorted((DOCS / "notebooks").glob("*.py"))


@pytest.fixture(scope="module")
def notebooks() -> ModuleType:
    spec = importlib.util.spec_from_file_location("docs_notebooks", DOCS / "notebooks.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules[spec.name] = module
    spec.loader.exec_module(module)
    return module


def run(notebooks: ModuleType, name: str, monkeypatch: pytest.MonkeyPatch) -> list[Any]:
    monkeypatch.chdir(ROOT)
    cells: list[Any] = notebooks.execute(DOCS / "notebooks" / f"{name}.py")
    return cells


def test_cells_are_text_or_code(notebooks: ModuleType) -> None:
    text = "# settings\n# %% [markdown]\n# # Title\n#\n# words\n# %%\nx = 1\nx + 1\n# %%\n"
    first, second = notebooks.cells_of(text)
    assert (first.source, first.is_text) == ("# Title\n\nwords", True)
    assert (second.source, second.is_text) == ("x = 1\nx + 1", False)


def test_outputs_stand_below_their_cells(notebooks: ModuleType, tmp_path: Path) -> None:
    script = tmp_path / "small.py"
    script.write_text(
        "# %%\nprint('said')\n# %%\n1 + 1\n# %%\nfrom matplotlib.figure import Figure\nFigure()\n",
        "utf-8",
    )
    page = notebooks.page_of(notebooks.execute(script), "small", tmp_path)
    assert "print('said')\n```\n\n```text\nsaid\n```" in page
    assert "```text\n2\n```" in page
    assert "![figure of the cell above](small-3.svg)" in page
    assert (tmp_path / "small-3.svg").exists()


@pytest.mark.parametrize("script", SCRIPTS, ids=lambda path: path.stem)
def test_it_runs_and_says_that_its_data_are_invented(
    notebooks: ModuleType, script: Path, monkeypatch: pytest.MonkeyPatch, tmp_path: Path
) -> None:
    cells = run(notebooks, script.stem, monkeypatch)
    assert cells[0].is_text
    assert "data are invented" in cells[0].source
    assert sum(cell.value is not None or bool(cell.printed) for cell in cells) > 5
    page = notebooks.page_of(cells, script.stem, tmp_path)
    assert page.startswith("# ")
    assert all(line == line.rstrip() or "html" in page for line in page.splitlines()[:3])


def test_what_the_three_batches_are_said_to_show(
    notebooks: ModuleType, monkeypatch: pytest.MonkeyPatch
) -> None:
    names = run(notebooks, "three_batches", monkeypatch)[-1].names
    report, budget = names["report"], names["budget"]
    decisions = [view.result.conformity.decision for view in report]
    assert decisions == ["conforms", "undecided", "does-not-conform"]
    middle = report["batch 232"].result.viscosity_at_reference
    assert middle.value < 1.05 < middle.high  # inside, by less than its uncertainty
    assert names["by_scope"]["shared"] > 0.9
    assert budget["input"].iloc[0] == "thermometer.probe.correction"
    assert budget["share"].iloc[0] > 0.5
    ratio, alone = names["ratio"], names["alone"]
    assert ratio.s / ratio.n < alone.s / alone.n / 4
    spread = report["batch 233"].drops().query("used")["residual"].std()
    assert 2 * spread < report["batch 233"].result.viscosity.relative_expanded


def test_what_the_check_is_said_to_show(
    notebooks: ModuleType, monkeypatch: pytest.MonkeyPatch
) -> None:
    names = run(notebooks, "calibration_check", monkeypatch)[-1].names
    assert names["check"].decision == "passed"
    assert abs(names["result"].e_n) < 1
    assert names["wrong"].decision == "failed"
    (found,) = names["wrong"].checks
    assert found.bias.value == pytest.approx(0.01, abs=0.002)  # "the percent that it makes"
    weeks = names["chart"].table().set_index(names["chart"].table()["when"].str[:10])
    assert weeks.loc["2026-01-12", "decision"] == "failed"
    assert weeks.loc["2026-01-19", "decision"] == "passed"
    assert weeks.loc["2026-02-02", "decision"] == "passed"
    assert weeks.loc["2026-02-02", "signals"] == "average-beyond-limits"
    assert set(weeks.loc["2026-02-09":, "decision"]) == {"failed"}
