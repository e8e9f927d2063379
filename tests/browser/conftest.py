"""Pages as files, and a browser to look at them with; without one the tests say so."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

import pytest

import plumbfall as pf
from browser.chromium import Tab, chromium
from plumbfall.errors import InputError
from plumbfall.report import Report
from plumbfall.report.browser import find_browser
from report.invented_report import hostile_sets, three_sets

SAMPLES = Path(__file__).parents[2] / "sample_runs"


@pytest.fixture(scope="session")
def browser() -> str:
    try:
        return find_browser()
    except InputError as missing:
        pytest.skip(f"pages are not looked at: {missing}")


@pytest.fixture(scope="session")
def tab(browser: str) -> Iterator[Tab]:
    with chromium() as opened:
        yield opened


@pytest.fixture(scope="session")
def pages(tmp_path_factory: pytest.TempPathFactory) -> dict[str, Path]:
    """Pages of a sample run, of several sets of every verdict, and of names that would do harm."""
    folder = tmp_path_factory.mktemp("pages")
    reports = {
        "sample": pf.reduce(SAMPLES / "resin_bad_drop" / "drops.csv", draws=5000),
        "several": Report(three_sets()),
        "hostile": Report(hostile_sets()),
    }
    for name, report in reports.items():
        report.to_html(folder / f"{name}.html")
    return {name: folder / f"{name}.html" for name in reports}
