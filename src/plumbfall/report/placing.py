"""Where a single drawing goes: into the place that is given, else into a figure of its own."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

from plumbfall.report.house_style import house_style

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["in_its_place", "own_figure"]

SIZE = (6.4, 3.4)


def in_its_place(draw: Callable[[Axes], Axes], ax: Axes | None) -> Figure | Axes:
    """Draw into the Axes that are given and return them, or return a new Figure."""
    return own_figure(draw) if ax is None else draw(ax)


def own_figure(draw: Callable[[Axes], Axes]) -> Figure:
    """Draw into a new figure, outside pyplot."""
    from matplotlib.figure import Figure

    figure = Figure(figsize=SIZE, layout="constrained")
    with house_style():
        place = figure.add_subplot()
    draw(place)
    return figure
