"""Residuals of the drops against what they should not depend on."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from plumbfall.report.ball_symbols import scatter_drops
from plumbfall.report.house_style import COLOURS, house_style, legend_below
from plumbfall.report.scales import CELSIUS, pretty_unit
from plumbfall.results import DropResult, RunSetResult

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["AGAINST", "draw_residuals", "residuals_vary"]

AGAINST = {
    "temperature": f"Temperature / {pretty_unit(CELSIUS.unit)}",
    "diameter_ratio": "Diameter ratio",
    "reynolds": "Reynolds number",
}
"""What residuals can be drawn against, with the words on the axis."""


def draw_residuals(
    result: RunSetResult, ax: Axes, against: str = "temperature", *, legend: bool = True
) -> Axes:
    """Draw residuals of the used drops: how far each is from the set's value, in percent.

    Parameters
    ----------
    result : RunSetResult
        The run set.
    ax : Axes
        Where to draw.
    against : str
        ``temperature``, ``diameter_ratio`` or ``reynolds``.
    legend : bool
        Whether to say which symbol is which ball.

    Returns
    -------
    Axes
        The same.
    """
    with house_style():
        ax.axhline(0.0, color=COLOURS["muted"], lw=0.8)
        scatter_drops(
            ax,
            [
                (across, 100.0 * drop.residual, drop)
                for drop, across in _places(result, against)
                if drop.residual is not None
            ],
        )
        ax.margins(x=0.08, y=0.15)
        ax.locator_params(nbins=4)
        ax.set_xlabel(AGAINST[against])
        ax.set_ylabel("Residual / %")
        if legend:
            legend_below(ax)
    return ax


def residuals_vary(result: RunSetResult, against: str) -> bool:
    """Whether the drops differ in it by more than rounding; else there is nothing to see."""
    places = [across for _, across in _places(result, against)]
    if len(places) < 2:
        return False
    least, most = min(places), max(places)
    return most - least > 1e-6 * max(abs(most), abs(least))


def _places(result: RunSetResult, against: str) -> list[tuple[DropResult, float]]:
    found = []
    for drop in result.drops:
        value = getattr(drop, against)
        if drop.used and drop.residual is not None and value is not None and math.isfinite(value):
            across = value * CELSIUS.factor + CELSIUS.offset if against == "temperature" else value
            found.append((drop, across))
    return found
