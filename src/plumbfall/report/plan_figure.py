"""From which to which viscosity each ball will do: a bar, its limits named at its ends."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from plumbfall.planning.plan import Plan
from plumbfall.planning.windows import Window, viscosity_span
from plumbfall.report.house_style import COLOURS, house_style, short_name
from plumbfall.report.plan_words import limit_word
from plumbfall.report.scales import pretty_unit, viscosity_scale

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["MOST_BARS", "draw_plan", "new_plan_figure"]

MOST_BARS = 14
WIDTH, HEIGHT_OF_BAR, REST = 8.2, 0.42, 1.15  # inches
BAR = 0.34
NARROW = 40.0
"""Viscosity ratio below which a bar is short."""


def new_plan_figure(plan: Plan) -> Figure:
    """Return the chart in a figure of its own, as high as its bars need."""
    from plumbfall.report.drawn_figure import DrawnFigure

    bars = min(len(plan.windows), MOST_BARS)
    figure = DrawnFigure(figsize=(WIDTH, REST + HEIGHT_OF_BAR * bars), layout="constrained")
    with house_style():
        draw_plan(plan, figure.add_subplot())
    return figure


def draw_plan(plan: Plan, ax: Axes) -> Axes:
    """Draw a bar of usable viscosities for each ball and tube, the best on top.

    Bars that hold every wanted viscosity are filled, others hatched. The wanted viscosity is a
    line, or a band where it is a range.

    Returns
    -------
    Axes
        The same as given.
    """
    windows = plan.windows[:MOST_BARS]
    wanted = plan.wanted.viscosities
    low, high = min(wanted), max(wanted)
    scale = viscosity_scale(high, plan.bench.viscosity_unit)
    span = np.array(viscosity_span(plan.wanted)) * scale.factor
    with house_style():
        ax.set_xscale("log")
        ax.set_xlim(*span)
        ax.xaxis.set_major_formatter(lambda value, _: f"{value:g}")
        if high > low:
            ax.axvspan(low * scale.factor, high * scale.factor, color=COLOURS["rule"], zorder=0)
        for edge in {low, high}:
            ax.axvline(edge * scale.factor, color=COLOURS["ink"], linewidth=1.4, zorder=3)
        for place, window in enumerate(windows):
            _bar(ax, place, window, scale.factor, (low, high), span)
        names = [short_name(f"{one.ball} in {one.tube}", 34) for one in windows]
        ax.set_yticks(range(len(windows)), names, parse_math=False)
        ax.tick_params(axis="y", length=0)
        ax.set_ylim(len(windows) - 0.4, -1.0)
        ax.text(
            np.sqrt(low * high) * scale.factor, -0.62, "wanted", ha="center", va="center",
            fontsize=8, color=COLOURS["ink"], zorder=4,
            bbox={"facecolor": "white", "edgecolor": "none", "pad": 1.0},
        )  # fmt: skip
        ax.set_xlabel(f"Viscosity / {pretty_unit(scale.unit)}")
        ax.set_title(_title(plan), loc="left")
    return ax


def _title(plan: Plan) -> str:
    if plan.wanted.target is None:
        return "Usable viscosities of each ball"
    return (
        f"Viscosities that each ball measures to {100 * plan.wanted.target:.3g} % "
        f"in at most {plan.wanted.most_drops} drops"
    )


def _bar(
    ax: Axes,
    place: int,
    window: Window,
    factor: float,
    wanted: tuple[float, float],
    span: np.ndarray,
) -> None:
    if window.low is None or window.high is None:
        word = limit_word(window.low_limit, window.low_input)
        ax.text(
            np.sqrt(span[0] * span[1]), place, f"nowhere: {short_name(word, 40)}", ha="center",
            va="center", fontsize=8, color=COLOURS["muted"], parse_math=False,
        )  # fmt: skip
        return
    low, high = window.low * factor, window.high * factor
    slack = 1e-6
    whole = window.low <= wanted[0] * (1 + slack) and window.high >= wanted[1] * (1 - slack)
    ax.barh(
        place,
        high - low,
        left=low,
        height=BAR,
        color=COLOURS["petrol"] if whole else "none",
        edgecolor=COLOURS["petrol"],
        hatch="" if whole else "////",
        zorder=2,
    )
    for edge, reason, part, side in (
        (low, window.low_limit, window.low_input, "left"),
        (high, window.high_limit, window.high_input, "right"),
    ):
        word = limit_word(reason, part)
        if not word:
            continue
        beside = high < NARROW * low  # two words do not fit under a short bar
        across = -1 if side == "left" else 1
        ax.annotate(
            short_name(word, 30), (edge, place if beside else place + 0.36),
            xytext=(3 * across if beside else 0, 0), textcoords="offset points",
            ha={"left": "right", "right": "left"}[side] if beside else side, va="center",
            fontsize=7, color=COLOURS["ink"], parse_math=False, zorder=4,
        )  # fmt: skip
