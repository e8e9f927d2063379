"""What the Monte Carlo draws of a run set give, beside the bounds of both ways."""

from __future__ import annotations

from typing import TYPE_CHECKING

from plumbfall.report.house_style import COLOURS, house_style, legend_below
from plumbfall.report.scales import pretty_unit
from plumbfall.report.summary import percent
from plumbfall.report.views import set_scale
from plumbfall.results import RunSetResult

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["draw_draws"]


def draw_draws(result: RunSetResult, ax: Axes, viscosity_unit: str | None = None) -> Axes:
    """Draw how often the draws gave which viscosity, with the bounds by both ways of propagation.

    Parameters
    ----------
    result : RunSetResult
        The run set; without draws the Axes stay empty but for a word that says so.
    ax : Axes
        Where to draw.
    viscosity_unit : str, optional
        Unit of the viscosity; by its size if not given.

    Returns
    -------
    Axes
        The same.
    """
    scale = set_scale(result, viscosity_unit)
    drawn = result.monte_carlo
    with house_style():
        if drawn is None or drawn.histogram is None or result.linear is None:
            ax.set_axis_off()
            ax.text(0.5, 0.5, "no draws to show", ha="center", transform=ax.transAxes)
            return ax
        bins = drawn.histogram
        width = (bins.high - bins.low) / len(bins.counts)
        edges = [(bins.low + n * width) * scale.factor for n in range(len(bins.counts) + 1)]
        shares = [100.0 * count / drawn.draws for count in bins.counts]
        ax.stairs(
            shares,
            edges,
            fill=True,
            facecolor=COLOURS["petrol"],
            alpha=0.25,
            edgecolor="none",
            label="draws",
        )
        top = max(shares)
        coverage = percent(result.linear.coverage_probability)
        ways = (
            (1.2, drawn.low, drawn.high, "petrol", "-", f"Monte Carlo bounds, {coverage}"),
            (
                1.1,
                result.linear.low,
                result.linear.high,
                "amber",
                "--",
                f"linear bounds, {coverage}",
            ),
        )
        for level, low, high, colour, dash, label in ways:
            bounds = [low * scale.factor, high * scale.factor]
            ax.plot(
                bounds,
                [level * top] * 2,
                color=COLOURS[colour],
                lw=2,
                ls=dash,
                marker="|",
                ms=9,
                mew=2,
                label=label,
            )
            for bound in bounds:
                ax.plot([bound, bound], [0.0, level * top], color=COLOURS[colour], lw=0.8, ls=dash)
        ax.locator_params(nbins=5)
        ax.set_ylim(0.0, 1.3 * top)
        ends = [bound * scale.factor for bound in (result.linear.low, result.linear.high)]
        ax.set_xlim(min(edges[0], *ends), max(edges[-1], *ends))
        ax.set_xlabel(f"Viscosity / {pretty_unit(scale.unit)}")
        ax.set_ylabel("Share of the draws / %")
        legend_below(ax)
    return ax
