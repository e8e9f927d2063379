"""The report on a terminal: an overview of several run sets as a table, verdicts in colour."""

from __future__ import annotations

import os
from typing import TYPE_CHECKING, TextIO

from plumbfall.report.page_sets import OverviewRow, overview
from plumbfall.report.summary import visible
from plumbfall.report.text import WIDTH, printable, text_lines

if TYPE_CHECKING:
    from rich.table import Table

    from plumbfall.report.report import Report

__all__ = ["show"]

STYLES = {
    "valid": "bold cyan",
    "valid-with-warnings": "bold yellow",
    "invalid": "bold red",
    "error": "bold red",
    "warning": "bold yellow",
}
"""Colours of what a line begins with; the words alone say the same."""

WORDS = {"valid-with-warnings": "warnings"}
"""Shorter verdicts of the table, whose columns are narrow."""


def show(report: Report, stream: TextIO) -> None:
    """Write the report to a stream: a table and verdicts in colour on a terminal, plain when piped.

    ``NO_COLOR`` in the environment, or a terminal that calls itself dumb, keeps it plain.
    Characters that the stream's encoding lacks are spelled in ASCII.
    """
    lines = [printable(line, stream.encoding) for line in text_lines(report)]
    plain = not stream.isatty() or os.environ.get("NO_COLOR") or os.environ.get("TERM") == "dumb"
    if plain:
        stream.write("\n".join(lines) + "\n")
        return
    from rich.console import Console
    from rich.text import Text

    console = Console(file=stream, highlight=False, emoji=False, markup=False, soft_wrap=True)
    if len(report) > 1:
        width = max(WIDTH, min(console.width, 120))
        table = _table(overview(report), stream.encoding, width)
        console.print(table, width=width, soft_wrap=False)
        console.print()
    for line in lines:
        text = Text(line)
        word = line.lstrip().split(" ", 1)[0]
        if word in STYLES and len(line) - len(line.lstrip()) in (0, 2):
            start = line.index(word)
            text.stylize(STYLES[word], start, start + len(word))
        console.print(text)


def _table(rows: list[OverviewRow], encoding: str | None, width: int) -> Table:
    """Return verdict, value and bounds of every run set, one below the other.

    Where the product is judged, eighty columns have no room for the bounds, which the verdict
    lines below give.
    """
    from rich import box
    from rich.table import Table
    from rich.text import Text

    judged = any(row.product != "–" for row in rows)
    with_bounds = not judged or width >= 100
    table = Table(
        box=box.ASCII if printable("─", encoding) != "─" else box.SIMPLE_HEAD,
        show_edge=False,
        pad_edge=False,
    )
    table.add_column("Run set", overflow="fold", ratio=1, min_width=10)
    table.add_column("Verdict", no_wrap=True)
    headings = ["Viscosity", *(["Bounds"] if with_bounds else []), "degC", "Drops"]
    for heading in headings:
        table.add_column(heading, justify="right", no_wrap=True)
    if judged:
        table.add_column("Product", no_wrap=True)
    for row in rows:
        head = row.headline
        bounds = f"{head.low} to {head.high}" if head else "–"
        cells = [
            visible(row.name),
            WORDS.get(row.status, row.status),
            f"{head.pair} {head.unit}" if head else "none",
            *([bounds] if with_bounds else []),
            head.temperature if head else "–",
            row.drops.replace(" of ", "/"),
            *([row.product] if judged else []),
        ]
        texts = [Text(printable(cell, encoding)) for cell in cells]
        texts[1].stylize(STYLES[row.status])
        table.add_row(*texts)
    return table
