"""The report on paper: printed by the browser, with page numbers and nothing cut off."""

from __future__ import annotations

import io
import re
import stat
import sys
from pathlib import Path

import pypdf
import pytest

from plumbfall.cli.program import main
from plumbfall.report import Report
from plumbfall.report.browser import ENVIRONMENT, pdf_of
from report.invented_report import three_sets

CLEAN = Path(__file__).parents[2] / "sample_runs" / "damping_fluid_clean" / "drops.csv"


def texts(pdf: bytes) -> list[str]:
    return [
        " ".join(page.extract_text().split()) for page in pypdf.PdfReader(io.BytesIO(pdf)).pages
    ]


def test_pages_are_numbered_and_bear_the_reports_identity(browser: str) -> None:
    html = Report(three_sets()).to_html()
    (identity,) = set(re.findall(r"Identity: <code>(\w{16})", html))
    pages = texts(pdf_of(html))
    assert len(pages) > 3
    for number, text in enumerate(pages, 1):
        assert f"page {number} of {len(pages)}" in text
        assert f"Run-set report {identity}" in text
    for name in ("batch 118", "batch 119", "batch 120"):  # each set begins on a page of its own
        begins = rf"{identity} . (Valid|Valid, with warnings|Invalid) Run set {name} "
        assert sum(bool(re.search(begins, text)) for text in pages) == 1, name
    assert "Back to the overview" not in " ".join(pages)
    assert "End of report" in pages[-1]


def test_the_command_writes_it_beside_the_page(browser: str, tmp_path: Path, capsys) -> None:
    out = tmp_path / "out"
    command = ["reduce", str(CLEAN), "--draws", "0", "--out", str(out), "--format", "pdf"]
    assert main(command) == 0
    assert "report.pdf" in capsys.readouterr().err
    assert "tank 3" in " ".join(texts((out / "report.pdf").read_bytes()))
    assert (out / "report.html").exists()


def test_without_a_browser_it_says_so_and_writes_nothing(tmp_path: Path, capsys, monkeypatch):
    monkeypatch.setenv(ENVIRONMENT, "no-such-browser")
    out = tmp_path / "out"
    command = ["reduce", str(CLEAN), "--draws", "0", "--out", str(out), "--format", "pdf"]
    assert main(command) == 2
    said = capsys.readouterr().err
    assert "a PDF is printed by Chromium, and 'no-such-browser', named in PLUMBFALL_CHROMI" in said
    assert "print report.html from any browser" in said
    assert not out.exists()
    monkeypatch.delenv(ENVIRONMENT)
    monkeypatch.setenv("PATH", str(tmp_path))
    assert main(command) == 2
    assert "none is found; install Chromium" in capsys.readouterr().err


def test_it_needs_a_folder(capsys) -> None:
    assert main(["reduce", str(CLEAN), "--format", "pdf"]) == 2
    assert "--format pdf needs a folder; add --out DIR" in capsys.readouterr().err


@pytest.mark.skipif(sys.platform == "win32", reason="the stand-in for a browser is a shell script")
def test_a_browser_that_prints_nothing_is_named(tmp_path: Path, capsys, monkeypatch) -> None:
    broken = tmp_path / "broken"
    broken.write_text("#!/bin/sh\necho 'no display' >&2\nexit 1\n", "utf-8")
    broken.chmod(broken.stat().st_mode | stat.S_IXUSR)
    monkeypatch.setenv(ENVIRONMENT, str(broken))
    out = tmp_path / "out"
    command = ["reduce", str(CLEAN), "--draws", "0", "--out", str(out), "--format", "pdf"]
    assert main(command) == 2
    assert "printed no PDF: no display" in capsys.readouterr().err
    assert not out.exists()
