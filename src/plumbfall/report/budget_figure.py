"""What the uncertainty of a run set is made of, as bars."""

from __future__ import annotations

from typing import TYPE_CHECKING

from plumbfall.report.house_style import COLOURS, house_style, legend_below, short_name
from plumbfall.results import RunSetResult

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["draw_budget"]

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
        for place, (_, share, _) in enumerate(bars):
            ax.annotate(
                f"{100.0 * share:.1f}",
                (100.0 * share, place),
                xytext=(3, 0),
                textcoords="offset points",
                va="center",
                fontsize=8,
            )
        ax.set_yticks(range(len(bars)), [name for name, _, _ in bars], parse_math=False)
        ax.tick_params(axis="y", length=0)
        ax.invert_yaxis()
        ax.set_xlabel("Share of the squared standard uncertainty / %")
        ax.set_xlim(0.0, max([10.0, *(112.0 * share for _, share, _ in bars)]))
        legend_below(ax)
    return ax


def _bars(result: RunSetResult) -> list[tuple[str, float, str]]:
    """Return name, share and scope of the largest inputs, the others summed by scope."""
    lines = sorted(result.budget, key=lambda line: -line.share)
    bars = [(short_name(line.input, 30), line.share, line.scope) for line in lines[:MOST_BARS]]
    for scope in SCOPES:
        rest = [line.share for line in lines[MOST_BARS:] if line.scope == scope]
        if rest:
            bars.append((f"{len(rest)} more, {scope}", sum(rest), scope))
    return bars
