"""The drops of a run set in order, with their spread and the bounds of the result."""

from __future__ import annotations

import statistics
from collections.abc import Sequence
from functools import partial
from typing import TYPE_CHECKING

from plumbfall.report.ball_symbols import scatter_drops
from plumbfall.report.house_style import COLOURS, house_style, legend_below
from plumbfall.report.scales import pretty_unit
from plumbfall.report.summary import percent
from plumbfall.report.views import set_scale
from plumbfall.results import DropResult, RunSetResult

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["draw_drops"]


def draw_drops(result: RunSetResult, ax: Axes, viscosity_unit: str | None = None) -> Axes:
    """Draw the drops in order, with the spread of single drops and the bounds of the result.

    Each drop is at the set's temperature; drops not used stand on the axis as crosses. Where a
    set has no viscosity its fall times are drawn.

    Parameters
    ----------
    result : RunSetResult
        The run set.
    ax : Axes
        Where to draw.
    viscosity_unit : str, optional
        Unit of the viscosity; by its size if not given.

    Returns
    -------
    Axes
        The same.
    """
    from matplotlib.ticker import FuncFormatter, MaxNLocator

    scale = set_scale(result, viscosity_unit)
    with_values = any(drop.viscosity_at_set is not None for drop in result.drops)

    def height(drop: DropResult) -> float | None:
        if not with_values:
            return drop.time
        value = drop.viscosity_at_set
        return value * scale.factor if value is not None and drop.used else None

    with house_style():
        if result.viscosity is not None and with_values:
            _draw_bands(result, ax, scale.factor)
        drops = list(enumerate(result.drops, 1))
        scatter_drops(ax, [(n, y, drop) for n, drop in drops if (y := height(drop)) is not None])
        absent = [n for n, drop in drops if height(drop) is None]
        if absent:
            ax.plot(
                absent,
                [0.03] * len(absent),
                "x",
                color=COLOURS["ink"],
                transform=ax.get_xaxis_transform(),
                clip_on=False,
                label="not used",
            )
        unit = pretty_unit(scale.unit)
        ax.set_ylabel(f"Viscosity / {unit}" if with_values else "Fall time / s")
        ax.set_xlabel("Drop, in order")
        ax.xaxis.set_major_locator(MaxNLocator(integer=True))
        ax.locator_params(axis="y", nbins=5)
        ax.xaxis.set_major_formatter(FuncFormatter(partial(_drop_number, result.drops)))
        ax.set_xlim(0.4, max(len(result.drops), 1) + 0.6)
        legend_below(ax)
    return ax


def _drop_number(drops: Sequence[DropResult], place: float, _tick: int | None) -> str:
    """Return the number of the drop at a place: void rows between others are numbered last."""
    index = round(place) - 1
    return str(drops[index].drop) if 0 <= index < len(drops) else ""


def _draw_bands(result: RunSetResult, ax: Axes, factor: float) -> None:
    """Two bands: where single drops lie (dashed edge), where the result lies (solid edge)."""
    assert result.viscosity is not None  # the caller has seen to it
    measured = result.viscosity
    at_set = [d.viscosity_at_set for d in result.drops if d.used and d.viscosity_at_set is not None]
    if len(at_set) > 1:
        spread = 2.0 * statistics.stdev(at_set)
        centre = statistics.fmean(at_set)
        edges = [(centre - spread) * factor, (centre + spread) * factor]
        ax.axhspan(*edges, color=COLOURS["amber"], alpha=0.13, lw=0, zorder=0)
        for number, edge in enumerate(edges):
            label = "spread of single drops" if number == 0 else None
            ax.axhline(edge, color=COLOURS["amber"], lw=1, ls=(0, (4, 3)), zorder=1, label=label)
    bounds = [measured.low * factor, measured.high * factor]
    ax.axhspan(*bounds, color=COLOURS["petrol"], alpha=0.2, lw=0, zorder=0)
    coverage = percent(measured.coverage_probability)
    for number, bound in enumerate(bounds):
        label = f"bounds of the result, {coverage}" if number == 0 else None
        ax.axhline(bound, color=COLOURS["petrol"], lw=1, zorder=1, label=label)
    ax.axhline(measured.value * factor, color=COLOURS["petrol"], lw=2, zorder=1, label="the result")
