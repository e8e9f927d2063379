"""A small table with remarks and a drawing, as a notebook shows it: a fragment, not a page."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from html import escape

from plumbfall.report.scales import pretty_unit
from plumbfall.report.summary import visible

__all__ = ["table_fragment"]


def table_fragment(
    caption: str,
    headings: Sequence[str],
    rows: Iterable[Sequence[str]],
    remarks: Iterable[str] = (),
    picture: str = "",
) -> str:
    """Return markup of a table; all text is escaped, ``picture`` is markup of our own."""
    head = "".join(f'<th scope="col">{_shown(name)}</th>' for name in headings)
    body = "".join(
        "<tr>" + "".join(f'<td style="text-align:left">{_shown(cell)}</td>' for cell in row)
        + "</tr>\n"
        for row in rows
    )  # fmt: skip
    parts = [
        f'<div class="plumbfall">\n<table>\n<caption style="text-align:left">{_shown(caption)}'
        f"</caption>\n<thead><tr>{head}</tr></thead>\n<tbody>\n{body}</tbody>\n</table>",
        *(f"<p>{_shown(remark)}</p>" for remark in remarks),
    ]
    if picture:
        parts.append(
            '<figure style="max-width:44em;margin:0.5em 0;background:#fff;color:#24333b">'
            f"{picture}</figure>"
        )
    return "\n".join(parts) + "\n</div>"


def _shown(text: str) -> str:
    return escape(pretty_unit(visible(text)))
