"""What a notebook shows of a report or of one run set: a fragment, not a page."""

from __future__ import annotations

from typing import TYPE_CHECKING

from plumbfall.report.html import rows_sum, template
from plumbfall.report.page_pictures import pictures
from plumbfall.report.page_sets import overview_row
from plumbfall.report.summary import counted, percent

if TYPE_CHECKING:
    from plumbfall.report.report import Report
    from plumbfall.report.run_set import RunSetView

__all__ = ["report_fragment", "run_set_fragment"]

MOST_ROWS = 60


def report_fragment(report: Report) -> str:
    """Return a table of the run sets with verdict, value and bounds."""
    unit = report.bench.viscosity_unit
    results = [report[name].result for name in report.names[:MOST_ROWS]]
    rows = [overview_row(result, index, unit) for index, result in enumerate(results, 1)]
    more = len(report) - len(rows)
    caption = f"{counted(len(report), 'run set')}, {percent(report.coverage)} coverage; "
    caption += rows_sum(report)
    if more:
        caption += f"; the first {len(rows)} are shown, table() has all"
    return template("notebook.html.j2").render(
        caption=caption,
        rows=rows,
        findings=report.findings,
        pictures=(),
        judged=any(result.conformity for result in results),
    )


def run_set_fragment(view: RunSetView) -> str:
    """Return the line of one run set, its findings and its drawings."""
    unit = view.report.bench.viscosity_unit
    index = view.report.names.index(view.name) + 1
    return template("notebook.html.j2").render(
        caption="Run set",
        rows=[overview_row(view.result, index, unit)],
        findings=view.findings,
        judged=view.result.conformity is not None,
        pictures=pictures(view.result, index, unit),
    )
