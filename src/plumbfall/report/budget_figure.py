"""What the uncertainty of a run set is made of, as bars."""

from __future__ import annotations

from typing import TYPE_CHECKING

from plumbfall.report.house_style import COLOURS, house_style, legend_below, short_name
from plumbfall.results import RunSetResult

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["draw_budget", "label_width"]

SCOPES = {
    "shared": ("petrol", "", "shared by all drops"),
    "ball": ("amber", "///", "of one ball"),
    "drop": ("plum", "xxx", "of one drop"),
}
"""Colour, hatch and label of each scope."""

MOST_BARS = 10


def draw_budget(result: RunSetResult, ax: Axes, viscosity_unit: str | None = None) -> Axes:
    """Draw each input's share of the squared standard uncertainty, largest on top.

    Shared inputs, those of a ball and those of a drop differ in colour and hatch. The unit is
    not used; it stands so that all figures are called alike.

    Returns
    -------
    Axes
        The same as given.
    """
    bars = _bars(result)
    top = max([10.0, *(112.0 * share for _, share, _ in bars)])
    with house_style():
        for scope, (colour, hatch, label) in SCOPES.items():
            places = [place for place, bar in enumerate(bars) if bar[2] == scope]
            if places:
                ax.barh(
                    places,
                    [100.0 * bars[place][1] for place in places],
                    height=0.66,
                    color=COLOURS[colour],
                    hatch=hatch,
                    edgecolor="white",
                    linewidth=0,
                    label=label,
                )
        for place, (name, share, _) in enumerate(bars):
            ax.text(share * 100.0 + 0.012 * top, place, f"{100.0 * share:.1f}", va="center", size=8)
            ax.text(-0.012 * top, place, name, ha="right", va="center")
        ax.set_yticks([])
        ax.invert_yaxis()
        ax.locator_params(axis="x", nbins=6)
        ax.set_xlabel("Share of the squared uncertainty / %", loc="right")
        ax.set_xlim(0.0, top)
        legend_below(ax, at_right=True)
    return ax


def label_width(result: RunSetResult) -> float:
    """Return how much room the names of the bars need, in points."""
    return 10.0 + 5.1 * max((len(name) for name, _, _ in _bars(result)), default=0)


def _bars(result: RunSetResult) -> list[tuple[str, float, str]]:
    """Return name, share and scope of the largest inputs, the others summed by scope."""
    lines = sorted(result.budget, key=lambda line: -line.share)
    bars = [(short_name(line.input, 30), line.share, line.scope) for line in lines[:MOST_BARS]]
    for scope in SCOPES:
        rest = [line.share for line in lines[MOST_BARS:] if line.scope == scope]
        if rest:
            bars.append((f"{len(rest)} more, {scope}", sum(rest), scope))
    return bars
