"""The laws that may be chosen, each with its range, error and source, as text."""

from __future__ import annotations

import textwrap

from plumbfall.physics.laws import DEFAULTS, KINDS, laws_of

__all__ = ["methods_text"]

WIDTH = 80
TITLES = {
    "walls": "Walls: drag on the axis of a long tube over Stokes' drag, Reynolds number 0",
    "inertia": "Inertia: drag in an unbounded liquid over Stokes' drag",
    "together": "Together: how walls and inertia join",
    "ends": "Ends of the tube",
    "run-in": "Run-in: the start from rest (ends and run-in may also be switched off: none)",
}


def methods_text() -> str:
    """Return every registered law with its range, stated error and source."""
    lines = []
    for kind in KINDS:
        lines += [TITLES[kind], ""]
        for name, law in laws_of(kind).items():
            default = "  (default)" if DEFAULTS.get(kind) == name else ""
            lines.append(f"  {name}{default}")
            about = (
                f"{law.variable} {law.low:g} to {law.high:g}; {law.error}. Source: {law.citation}."
            )
            lines += textwrap.wrap(
                about, WIDTH, initial_indent="      ", subsequent_indent="      "
            )
        lines.append("")
    lines += textwrap.wrap(
        'In a bench sheet, [methods] drag = "NAME …" takes one name of a kind or several; what '
        "is not named is the default. The drag factor is the drag on the ball over its drag by "
        "Stokes' law; a law's error is that against the computed one.",
        WIDTH,
    )
    return "\n".join(lines) + "\n"
