"""The page on the report names every figure that can be asked for, and no other."""

from __future__ import annotations

import plumbfall as pf
from plumbfall.report.figures import PLOTS
from support.documents import ROOT, table_headed


def test_every_kind_of_figure_is_explained() -> None:
    _, *rows = table_headed("report.md", "| kind |")
    assert [row[0].strip("`") for row in rows] == list(PLOTS)
    assert all(shows and look for _, shows, look in rows)


def test_every_kind_saves_in_every_form(tmp_path) -> None:
    report = pf.reduce(ROOT / "sample_runs" / "three_batches" / "drops.csv", draws=2000)
    for kind in PLOTS:
        figure = report.plot(kind, "batch 232")
        for form in ("png", "svg", "pdf"):
            figure.savefig(tmp_path / f"{kind}.{form}")
            assert (tmp_path / f"{kind}.{form}").stat().st_size > 3000
