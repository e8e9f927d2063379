"""The self-test as text: every figure with source, basis and difference, then the totals."""

from __future__ import annotations

import textwrap
from collections.abc import Iterator, Sequence
from itertools import groupby

from plumbfall._version import __version__
from plumbfall.report.selftest_result import AREAS, BASES, CheckedFigure, SelfTest

__all__ = ["selftest_text", "totals_table"]

WIDTH = 80
_TITLES = {
    "chain": "From the readings to the viscosity",
    "flow": "Drag on a ball",
    "uncertainty": "Uncertainty",
    "statistics": "Statistics",
    "liquid": "Liquids",
}
_BASES = {
    "seen-in-print": "the figure was read in a public text",
    "from-memory": "the figure is carried from the source and was not read there again",
    "definition": "the figure is a defining value, or exact mathematics worked by hand",
}


def selftest_text(result: SelfTest) -> str:
    """Return the self-test as text of at most 80 columns."""
    lines = [f"plumbfall {__version__}: figures recomputed with this installation"]
    lines += ["Each as printed, as computed, the difference, and how large that may be", ""]
    for area, of_area in groupby(result.items, lambda item: item.area):
        lines += [_TITLES[area], ""]
        for (source, basis), items in groupby(of_area, lambda item: (item.source, item.basis)):
            lines += textwrap.wrap(
                f"{source} [{basis}]", WIDTH, subsequent_indent="  ", break_on_hyphens=False
            )
            for item in items:
                lines += _row(item)
            lines.append("")
    lines += [_cells(row) for row in totals_table(result)]
    lines.append("")
    for basis in BASES:
        lines += textwrap.wrap(f"{basis}: {_BASES[basis]}", WIDTH, subsequent_indent="  ")
    failing = [item.id for item in result.items if not item.passed]
    lines.append("")
    lines.append(f"{result.passed} passed, {result.failed} failed")
    lines += [f"  FAILED {name}" for name in failing]
    return "\n".join(lines) + "\n"


def totals_table(result: SelfTest) -> list[tuple[str, ...]]:
    """Return a table of how many figures there are by area (rows) and basis (columns)."""
    totals = result.totals()
    rows: list[tuple[str, ...]] = [("area", *BASES, "all")]
    for area in AREAS:
        counts = [totals[area, basis] for basis in BASES]
        rows.append((area, *map(str, counts), str(sum(counts))))
    sums = [sum(totals[area, basis] for area in AREAS) for basis in BASES]
    rows.append(("all", *map(str, sums), str(sum(sums))))
    return rows


def _cells(row: Sequence[str]) -> str:
    first, *others = row
    return f"{first:<13}" + "".join(f"{cell:>15}" for cell in others)


def _row(item: CheckedFigure) -> Iterator[str]:
    """Yield the lines of one figure: printed, computed, difference, and what is allowed."""
    verdict = "ok" if item.passed else "FAILED"
    computed = f"{item.computed:.10g}" if not item.problem else "none"
    difference = f"{item.difference:+.1e}" if not item.problem else ""
    name = f"  {verdict:<7}{item.id}"
    numbers = f" {item.printed:>12} {computed:>12}{difference:>9} of {item.tolerance:.1e}"
    if len(name) + len(numbers) + 1 <= WIDTH:
        yield f"{name}{numbers:>{WIDTH - len(name)}}"
    else:
        yield name
        yield f"{numbers:>{WIDTH}}"
    if item.problem:
        yield from textwrap.wrap(
            item.problem, WIDTH, initial_indent=" " * 9, subsequent_indent=" " * 9
        )
