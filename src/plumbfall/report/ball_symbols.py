"""Points of drops, each ball with a symbol of its own, pixels where there are very many."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from plumbfall.report.house_style import COLOURS, short_name
from plumbfall.results import DropResult

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["MANY_POINTS", "scatter_drops"]

MANY_POINTS = 2000
"""Above so many points a scatter is drawn as pixels."""

MOST_BALLS = 8

_SYMBOLS = "osD^vP<>"


def scatter_drops(ax: Axes, points: Sequence[tuple[float, float, DropResult]]) -> None:
    """Draw points of drops: where across, how high, and whose."""
    balls = list(dict.fromkeys(drop.ball for *_, drop in points))
    pixels = len(points) > MANY_POINTS
    if len(balls) > MOST_BALLS:
        groups = [("drops", "o", points)]
    else:
        groups = [
            (f"ball {short_name(ball, 24)}" if ball else "drops", _SYMBOLS[index],
             [point for point in points if point[2].ball == ball])
            for index, ball in enumerate(balls)
        ]  # fmt: skip
    for label, symbol, group in groups:
        ax.scatter(
            [across for across, _, _ in group],
            [height for _, height, _ in group],
            s=4.0 if pixels else 30.0,
            marker=symbol,
            facecolor=COLOURS["ink"],
            edgecolor="none",
            zorder=3,
            label=label,
            rasterized=pixels,
        )
