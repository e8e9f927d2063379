"""What would halve the bounds, as the strings that the page and the text both show."""

from __future__ import annotations

import math
from collections.abc import Sequence

from plumbfall.report.scales import Scale, scale_for
from plumbfall.report.views import TableView
from plumbfall.results import Improvement

__all__ = ["HALVING", "halving_lines", "halving_view"]

HALVING = "What would halve the expanded uncertainty"


def halving_lines(found: Sequence[Improvement]) -> list[tuple[str, str]]:
    """Return each input and what must become of it."""
    return [(one.input, _told(one)) for one in found]


def halving_view(found: Sequence[Improvement]) -> TableView:
    """Return the same as a table."""
    return TableView(
        caption=HALVING,
        headings=("Input", "Change"),
        kinds="tt",
        rows=tuple(halving_lines(found)),
        note="The coverage factor follows the degrees of freedom; all else stays as it is.",
    )


def _told(one: Improvement) -> str:
    if one.what == "factor":
        if one.needed is None:
            return "not even they, as the others would be left"
        part = Scale("%", 100.0).fixed(math.floor(100 * one.needed) / 100, 0)
        return f"each at {part} % of what it is now"
    if one.needed is None:
        if one.remaining >= 0.995:
            return "no, it counts for little"
        left = Scale("%", 100.0).fixed(one.remaining, 0)
        return f"not alone: {left} % is left without its error"
    if one.what != "standard uncertainty":
        return f"{one.needed:.0f} {one.what} instead of {one.now:.0f}"
    unit = scale_for(one.unit, one.now)
    # rounded down: what is printed must do
    needed = _two_digits_down(one.needed * unit.factor)
    now = unit.alone(one.now, 2)
    return f"standard uncertainty {needed} instead of {now} {unit.unit}".rstrip()


def _two_digits_down(value: float) -> str:
    if value <= 0:
        return "0"
    place = math.floor(math.log10(value)) - 1
    return Scale("").alone(math.floor(value / 10.0**place * (1 + 1e-12)) * 10.0**place, 2)
