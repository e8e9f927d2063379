"""What a notebook shows of a bench sheet: every quantity as written, and as read."""

from __future__ import annotations

from collections.abc import Mapping
from html import escape

from plumbfall.estimate import Estimate

__all__ = ["bench_markup"]


def bench_markup(title: str, path: str, quantities: Mapping[str, Estimate]) -> str:
    """Return a table of the quantities of a sheet; all text is escaped."""
    rows = "".join(
        f'<tr><th scope="row" style="text-align:left">{escape(name)}</th>'
        f'<td style="text-align:left">{escape(estimate.text)}</td>'
        f"<td>{estimate.value:.10g}</td><td>{estimate.u:.3g}</td>"
        f'<td style="text-align:left">{escape(estimate.unit)}</td>'
        f'<td style="text-align:left">{escape(estimate.distribution)}</td></tr>\n'
        for name, estimate in quantities.items()
    )
    headings = ("Entry", "As written", "Value", "Standard uncertainty", "SI unit", "Distribution")
    head = "".join(f'<th scope="col">{heading}</th>' for heading in headings)
    caption = " – ".join(escape(part) for part in (title or "Bench sheet", path) if part)
    return (
        f'<div class="plumbfall">\n<table>\n<caption style="text-align:left">{caption}</caption>\n'
        f"<thead><tr>{head}</tr></thead>\n<tbody>\n{rows}</tbody>\n</table>\n</div>"
    )
