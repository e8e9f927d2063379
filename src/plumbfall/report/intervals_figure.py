"""Speeds between successive marks over the speed of the whole drop."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from plumbfall.report.ball_symbols import scatter_drops
from plumbfall.report.house_style import COLOURS, house_style, legend_below
from plumbfall.results import DropResult, RunSetResult

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["draw_intervals", "interval_count"]


def draw_intervals(result: RunSetResult, ax: Axes, viscosity_unit: str | None = None) -> Axes:
    """Draw each drop's mean speed between successive marks over that of the whole drop.

    A ball at its final speed in an even liquid shows 1 everywhere, within the timing. The mean of
    all drops stands beside them as a bar. The unit is not used; it stands so that all figures
    are called alike.

    Returns
    -------
    Axes
        The same as given.
    """
    count = interval_count(result)
    drops = [drop for drop in result.drops if drop.used and drop.interval_ratios]
    points: list[tuple[float, float, DropResult]] = []
    for place, drop in enumerate(drops):
        beside = 0.0 if len(drops) < 2 else 0.36 * (place / (len(drops) - 1) - 0.5)
        points += [
            (number + beside, ratio, drop)
            for number, ratio in enumerate(drop.interval_ratios, 1)
            if math.isfinite(ratio)
        ]
    with house_style():
        ax.axhline(1.0, color=COLOURS["muted"], lw=0.8)
        for number in range(1, count + 1):
            there = [ratio for across, ratio, _ in points if round(across) == number]
            if there:
                ax.plot(
                    [number - 0.3, number + 0.3],
                    [sum(there) / len(there)] * 2,
                    color=COLOURS["petrol"],
                    lw=2,
                    label="mean of the drops" if number == 1 else None,
                )
        scatter_drops(ax, points)
        ax.set_xticks(range(1, count + 1), [f"{n} to {n + 1}" for n in range(1, count + 1)])
        ax.locator_params(axis="y", nbins=5)
        ax.set_xlim(0.4, max(count, 1) + 0.6)
        ax.set_xlabel("Between marks")
        ax.set_ylabel("Speed over the drop's mean speed")
        legend_below(ax)
    return ax


def interval_count(result: RunSetResult) -> int:
    """Return how many intervals the drops were timed over; 0 with fewer than three marks."""
    return max((len(drop.interval_ratios) for drop in result.drops if drop.used), default=0)
