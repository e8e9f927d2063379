"""The kinds of drawings of run sets, in a figure of their own or in a place that is given.

Matplotlib is imported when something is drawn; pyplot never.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import TYPE_CHECKING, TypeAlias

from plumbfall.errors import InputError, nearest_name
from plumbfall.report.budget_figure import draw_budget
from plumbfall.report.draws_figure import draw_draws
from plumbfall.report.drops_figure import draw_drops
from plumbfall.report.house_style import house_style, short_name
from plumbfall.report.intervals_figure import draw_intervals
from plumbfall.report.map_figure import draw_map
from plumbfall.report.residuals_figure import AGAINST, draw_residuals
from plumbfall.report.sets_figure import draw_sets
from plumbfall.results import RunSetResult

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["KINDS", "PLOTS", "TOGETHER", "draw", "new_figure", "page_figure"]

Draw: TypeAlias = "Callable[[RunSetResult, Axes, str | None], Axes]"
DrawTogether: TypeAlias = "Callable[[Sequence[RunSetResult], Axes, str | None], Axes]"


def _residuals(against: str) -> Draw:
    def draw_against(result: RunSetResult, ax: Axes, _unit: str | None) -> Axes:
        return draw_residuals(result, ax, against)

    return draw_against


KINDS: dict[str, Draw] = {
    "drops": draw_drops,
    "budget": draw_budget,
    "draws": draw_draws,
    "intervals": draw_intervals,
    **{f"residuals-{name}": _residuals(name) for name in AGAINST},
}
"""Every kind of figure of one run set by name."""

TOGETHER: dict[str, DrawTogether] = {
    "sets": draw_sets,
    "map": lambda results, ax, _unit: draw_map(results, ax),
}
"""Every kind of figure that shows all run sets in one place."""

PLOTS = (*(kind for kind in KINDS if "-" not in kind), "residuals", *TOGETHER)
"""What may be asked for: ``residuals`` is all three side by side unless one is named."""

MOST_PANELS = 12
SIZE = (4.9, 3.3)

_POINTS = 72.0  # of an inch


def draw(
    kind: str,
    results: Sequence[RunSetResult],
    viscosity_unit: str | None,
    ax: Axes | None,
    against: str | None = None,
) -> Figure | Axes:
    """Draw a kind of figure for one or several run sets.

    Returns
    -------
    Figure or Axes
        The Axes that were given, else a new Figure with one panel a run set; those of
        ``TOGETHER`` show all sets in one.

    Raises
    ------
    InputError
        If the kind is unknown, there is nothing to draw, one place is given for several sets or
        panels, or there are too many sets for one figure.
    """
    _refuse_unknown("figure of kind", kind, PLOTS)
    if against is not None:
        _refuse_unknown("axis for residuals named", against, AGAINST)
    if kind in TOGETHER:
        if ax is not None:
            return TOGETHER[kind](results, ax, viscosity_unit)
        figure = new_figure()
        with house_style():
            TOGETHER[kind](results, figure.add_subplot(), viscosity_unit)
        return figure
    kinds = [kind]
    if kind == "residuals":
        kinds = [f"residuals-{name}" for name in AGAINST if against in (None, name)]
    if ax is not None and len(results) != 1:
        raise InputError("one place for several run sets", remedy="say which with run_set=")
    if ax is not None and len(kinds) != 1:
        raise InputError(
            "one place for several panels", remedy='say which with against="temperature"'
        )
    if not 1 <= len(results) <= MOST_PANELS:
        raise InputError(
            f"{len(results)} run sets do not fit into one figure",
            remedy=f"say which with run_set= (at most {MOST_PANELS} at once)",
        )
    if ax is not None:
        return KINDS[kinds[0]](results[0], ax, viscosity_unit)
    figure = new_figure(len(results), len(kinds))
    for row, result in enumerate(results):
        for column, one in enumerate(kinds):
            with house_style():
                place = row * len(kinds) + column + 1
                panel = figure.add_subplot(len(results), len(kinds), place)
            KINDS[one](result, panel, viscosity_unit)
            if column == 0:
                panel.set_title(short_name(result.name, 60), loc="left", parse_math=False)
    return figure


def _refuse_unknown(what: str, name: str, known: Sequence[str] | Mapping[str, object]) -> None:
    if name in known:
        return
    near = nearest_name(name, known)
    listed = ", ".join(map(repr, known))
    remedy = f"did you mean {near!r}?" if near else f"write one of {listed}"
    raise InputError(f"there is no {what} {name!r}", remedy=remedy)


def new_figure(panels: int = 1, columns: int = 1) -> Figure:
    """Return an empty figure in the house's size, outside pyplot."""
    from plumbfall.report.drawn_figure import DrawnFigure

    return DrawnFigure(figsize=(SIZE[0] * columns, SIZE[1] * panels), layout="constrained")


def page_figure(
    draw_into: Callable[[Axes], object],
    *,
    left: float = 50.0,
    width: float = 4.1,
    panel_height: float = 140.0,
) -> Figure:
    """Return a figure for a page, its margins fixed but for the rows of the legend.

    Matplotlib's own layout measures every text several times, which a page of a hundred run sets
    cannot wait for. ``left`` and ``panel_height`` are in points, ``width`` is in inches.
    """
    from matplotlib.figure import Figure

    with house_style():
        figure = Figure(figsize=(width, SIZE[1]))
        ax = figure.add_axes((0.2, 0.3, 0.7, 0.6))
        draw_into(ax)
    across = width * _POINTS
    legend = ax.get_legend()
    legend_rows = 0 if legend is None else (len(legend.get_texts()) + 1) // 2
    bottom = 34.0 + (8.0 + 11.5 * legend_rows if legend_rows else 0.0)
    height = bottom + panel_height + 8.0
    figure.set_size_inches(width, height / _POINTS)
    panel_width = across - left - 8.0
    ax.set_position((left / across, bottom / height, panel_width / across, panel_height / height))
    # placed here, the labels of the axes need not be placed by measuring every tick once more
    ax.xaxis.set_label_coords(ax.xaxis.label.get_position()[0], -19.5 / panel_height)
    ax.yaxis.set_label_coords(-(left - 12.0) / panel_width, ax.yaxis.label.get_position()[1])
    return figure
