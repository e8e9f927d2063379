"""Where a single drawing goes: into the place that is given, else into a figure of its own."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

from plumbfall.report.house_style import house_style

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["in_its_place", "own_figure"]

WIDTH, BASE, ROW = 6.4, 1.6, 0.4
"""Inches."""


def in_its_place(draw: Callable[[Axes], Axes], ax: Axes | None, rows: int = 1) -> Figure | Axes:
    """Draw into the Axes that are given and return them, or return a new Figure."""
    return own_figure(draw, rows) if ax is None else draw(ax)


def own_figure(draw: Callable[[Axes], Axes], rows: int = 1) -> Figure:
    """Draw into a new figure, outside pyplot, as high as so many ``rows`` of marks need."""
    from plumbfall.report.drawn_figure import DrawnFigure

    figure = DrawnFigure(figsize=(WIDTH, BASE + ROW * rows), layout="constrained")
    with house_style():
        place = figure.add_subplot()
    draw(place)
    return figure
