"""Where run sets lie on the map of the drag factor over diameter ratio and Reynolds number."""

from __future__ import annotations

from collections.abc import Sequence
from functools import cache
from typing import TYPE_CHECKING, Any

from plumbfall.report.house_style import COLOURS, house_style, legend_below, short_name
from plumbfall.results import RunSetResult

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["draw_map", "on_map"]

RATIOS = (0.01, 0.5)
REYNOLDS = (1e-4, 100.0)
LEVELS = (1.03, 1.1, 1.2, 1.3, 1.5, 2.0, 3.0, 4.0)
TICKS = (0.01, 0.02, 0.05, 0.1, 0.2, 0.5)
MOST_NAMED = 6

_SYMBOLS = "osD^vP"


def draw_map(results: Sequence[RunSetResult], ax: Axes) -> Axes:
    """Draw lines of equal drag factor, and each run set at its largest ratio and Reynolds number.

    The drag factor is the drag on a ball on the axis of a long tube over its drag by Stokes' law,
    from the computed table. Where the lines run level only the walls count; where they bend the
    inertia does too.

    Parameters
    ----------
    results : sequence of RunSetResult
        Those without a Reynolds number (no solution, calibrated tube) are left out.
    ax : Axes
        Where to draw.

    Returns
    -------
    Axes
        The same.
    """
    from matplotlib.ticker import FuncFormatter

    shown = [result for result in results if on_map(result)]
    with house_style():
        reynolds, ratios, factor = _grid()
        left = min([REYNOLDS[0], *(0.5 * (result.reynolds or 1.0) for result in shown)])
        ax.set_xscale("log")
        ax.set_yscale("log")
        lines = ax.contour(
            reynolds, ratios, factor, levels=LEVELS, colors=COLOURS["muted"], linewidths=0.8
        )
        ax.clabel(lines, fmt="%g", fontsize=7.5)
        if len(shown) > MOST_NAMED:
            groups = [(f"{len(shown)} run sets", "o", shown)]
        else:
            groups = [
                (short_name(result.name, 24), _SYMBOLS[index], [result])
                for index, result in enumerate(shown)
            ]
        for label, symbol, group in groups:
            ax.scatter(
                [result.reynolds or 0.0 for result in group],
                [result.diameter_ratio or 0.0 for result in group],
                s=42,
                marker=symbol,
                facecolor=COLOURS["petrol"],
                edgecolor="white",
                linewidth=0.8,
                zorder=3,
                clip_on=False,
                label=label,
            )
        ax.set_xlim(left, REYNOLDS[1])
        ax.xaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g}"))
        ax.set_ylim(*RATIOS)
        ax.minorticks_off()
        ax.set_yticks(TICKS, [f"{tick:g}" for tick in TICKS])
        ax.set_xlabel("Reynolds number")
        ax.set_ylabel("Diameter ratio")
        legend_below(ax)
    return ax


def on_map(result: RunSetResult) -> bool:
    """Whether a set has a place on the map."""
    return bool(result.reynolds) and bool(result.diameter_ratio)


@cache
def _grid() -> tuple[Any, Any, Any]:
    import numpy as np

    from plumbfall.physics.drag_map import DragMap

    reynolds = np.geomspace(REYNOLDS[0], REYNOLDS[1], 61)
    ratios = np.geomspace(*RATIOS, 41)
    factor = np.array([DragMap().at(np.full(61, ratio)).factor(reynolds) for ratio in ratios])
    return reynolds, ratios, factor
