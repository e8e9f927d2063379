"""The laws that may be chosen, each with its range, source and error, stated and measured."""

from __future__ import annotations

import math
import textwrap
from collections.abc import Iterator, Sequence
from itertools import groupby

from plumbfall.physics.laws import DEFAULTS, KINDS, laws_of
from plumbfall.physics.measured_errors import PLACES, MeasuredError, measured_errors

__all__ = ["TITLES", "methods_text", "percent"]

WIDTH = 80
TITLES = {
    "walls": "Walls: drag on the axis of a long tube over Stokes' drag, Reynolds number 0",
    "inertia": "Inertia: drag in an unbounded liquid over Stokes' drag",
    "together": "Together: how walls and inertia join",
    "ends": "Ends of the tube",
    "run-in": "Run-in: the start from rest (ends and run-in may also be switched off: none)",
}
_SMALLEST = 5e-6  # an error below it is printed as 0


def methods_text() -> str:
    """Return every registered law with its range, stated and measured error, and source."""
    lines = []
    for kind in KINDS:
        lines += [TITLES[kind], ""]
        measured = {
            name: tuple(errors)
            for name, errors in groupby(measured_errors(kind), lambda one: one.law)
        }
        for name, law in laws_of(kind).items():
            default = "  (default)" if DEFAULTS.get(kind) == name else ""
            lines.append(f"  {name}{default}")
            lines += _paragraph(
                f"{law.variable} {law.low:g} to {law.high:g}; {law.error}. Source: {law.citation}."
            )
            lines += _measured(kind, measured.pop(name, ()))
        for name, left in measured.items():
            lines.append(f"  {name}")
            lines += _measured(kind, left)
        lines.append("")
    lines += textwrap.wrap(
        'In a bench sheet, [methods] drag = "NAME …" takes one name of a kind or several; what '
        "is not named is the default. The drag factor is the drag on the ball over its drag by "
        "Stokes' law. A measured error is that of the law's factor, in percent of the computed "
        "one, worked out just now from the tables of this program: above 0 the drag is too large "
        "and the viscosity too small by about as much. For the run-in it is the part of the time "
        "between the marks, 20 ball diameters, that is taken for steady fall and is not (diameter "
        "ratio 0.1, ball 8 times as dense as the liquid).",
        WIDTH,
    )
    return "\n".join(lines) + "\n"


def percent(value: float) -> str:
    """Return a part as signed percents with two significant digits.

    >>> percent(0.0868), percent(-0.01838), percent(-4e-6), percent(-2.4e-7), percent(0.95)
    ('+8.7', '-1.8', '-0.0004', '0', '+95')
    """
    if abs(value) < _SMALLEST / 2:
        return "0"
    number = 100.0 * value
    digits = 1 - math.floor(math.log10(abs(float(f"{number:.1e}"))))
    return f"{number:+.{min(max(digits, 0), 4)}f}"


def _measured(kind: str, errors: Sequence[MeasuredError]) -> Iterator[str]:
    """Yield the lines of a law's measured errors, one for each first number of a place."""
    for first, group in groupby(errors, lambda one: one.place[:-1]):
        ones = list(group)
        names = PLACES.get((kind, ones[0].law)) or PLACES[kind, ""]
        at = f"{names[0]} {first[0]:g}, {names[-1]} " if first else f"{names[-1]} "
        places = ", ".join(f"{one.place[-1]:g}" for one in ones)
        found = ", ".join(percent(one.error) for one in ones)
        yield from _paragraph(f"Measured at {at}{places}: {found}\N{NO-BREAK SPACE}%.")


def _paragraph(text: str) -> list[str]:
    indent = " " * 6
    lines = textwrap.wrap(
        text, WIDTH, initial_indent=indent, subsequent_indent=indent, break_on_hyphens=False
    )
    return [line.replace("\N{NO-BREAK SPACE}", " ") for line in lines]
