"""The kinds of drawings of run sets, in a figure of their own or in a place that is given.

Matplotlib is imported when something is drawn; pyplot never.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import TYPE_CHECKING

from plumbfall.errors import InputError, nearest_name
from plumbfall.report.budget_figure import draw_budget
from plumbfall.report.drops_figure import draw_drops
from plumbfall.report.house_style import house_style, short_name
from plumbfall.results import RunSetResult

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = [
    "KINDS",
    "draw",
    "new_figure",
    "page_figure",
]

KINDS: dict[str, Callable[[RunSetResult, Axes, str | None], Axes]] = {
    "drops": draw_drops,
    "budget": draw_budget,
}
"""Every kind of figure by name."""

MOST_PANELS = 12
SIZE = (4.9, 3.3)

_POINTS = 72.0  # of an inch
_PANEL_HEIGHT = 150.0  # points


def draw(
    kind: str, results: Sequence[RunSetResult], viscosity_unit: str | None, ax: Axes | None
) -> Figure | Axes:
    """Draw a kind of figure for one or several run sets.

    Returns
    -------
    Figure or Axes
        The Axes that were given, else a new Figure with one panel a run set.

    Raises
    ------
    InputError
        If the kind is unknown, there is nothing to draw, one place is given for several sets, or
        there are too many sets for one figure.
    """
    if kind not in KINDS:
        near = nearest_name(kind, KINDS)
        known = " or ".join(map(repr, KINDS))
        remedy = f"did you mean {near!r}?" if near else f"write {known}"
        raise InputError(f"there is no figure of kind {kind!r}", remedy=remedy)
    if ax is not None and len(results) != 1:
        raise InputError("one place for several run sets", remedy="say which with run_set=")
    if not 1 <= len(results) <= MOST_PANELS:
        raise InputError(
            f"{len(results)} run sets do not fit into one figure",
            remedy=f"say which with run_set= (at most {MOST_PANELS} at once)",
        )
    if ax is not None:
        return KINDS[kind](results[0], ax, viscosity_unit)
    figure = new_figure(len(results))
    for index, result in enumerate(results):
        with house_style():
            panel = figure.add_subplot(len(results), 1, index + 1)
        KINDS[kind](result, panel, viscosity_unit)
        panel.set_title(short_name(result.name, 60), loc="left", parse_math=False)
    return figure


def new_figure(panels: int = 1) -> Figure:
    """Return an empty figure in the house's size, outside pyplot."""
    from matplotlib.figure import Figure

    return Figure(figsize=(SIZE[0], SIZE[1] * panels), layout="constrained")


def page_figure(kind: str, result: RunSetResult, viscosity_unit: str | None) -> Figure:
    """Return a figure of one set for a page, its margins taken from the length of its labels.

    Matplotlib's own layout measures every text several times, which a page of a hundred run sets
    cannot wait for.
    """
    from matplotlib.figure import Figure

    figure = Figure(figsize=SIZE)
    with house_style():
        ax = figure.add_axes((0.2, 0.3, 0.7, 0.6))
        KINDS[kind](result, ax, viscosity_unit)
        labels = [text.get_text() for text in ax.get_yticklabels()]
        longest = max((len(label) for label in labels), default=0)
    width = SIZE[0] * _POINTS
    left = longest * 5.1 + (10.0 if kind == "budget" else 26.0)
    legend_rows = (len(ax.get_legend_handles_labels()[1]) + 1) // 2
    bottom = 42.0 + 11.5 * legend_rows
    height = bottom + _PANEL_HEIGHT + 8.0
    figure.set_size_inches(SIZE[0], height / _POINTS)
    ax.set_position(
        (left / width, bottom / height, 1.0 - (left + 8.0) / width, _PANEL_HEIGHT / height)
    )
    return figure
