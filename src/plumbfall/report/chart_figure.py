"""The control chart drawn: checks in order with limits and moving average; moving ranges below."""

from __future__ import annotations

import io
from collections.abc import Iterable
from typing import TYPE_CHECKING

from plumbfall.calibration.chart import ControlChart
from plumbfall.report.house_style import COLOURS, house_style, legend_above

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["chart_figure", "chart_file", "draw_chart", "draw_ranges"]

SIZE = (7.2, 5.4)
MOST_LABELS = 12


def chart_figure(chart: ControlChart) -> Figure:
    """Return a figure with the checks above and their moving ranges below."""
    from plumbfall.report.drawn_figure import DrawnFigure

    figure = DrawnFigure(figsize=SIZE, layout="constrained")
    with house_style():
        above, below = figure.subplots(2, 1, height_ratios=(2.2, 1.0), sharex=True)
    draw_chart(chart, above)
    draw_ranges(chart, below)
    with house_style():
        above.tick_params(axis="x", labelbottom=False)
        above.set_xlabel("")
    return figure


def chart_file(chart: ControlChart, form: str) -> bytes:
    """Return the chart as a ``png`` or ``svg`` file, the same for the same points."""
    import matplotlib as mpl

    buffer = io.BytesIO()
    nothing = {"Date": None, "Creator": None} if form == "svg" else {"Software": None}
    with house_style(), mpl.rc_context({"svg.hashsalt": "plumbfall"}):
        chart_figure(chart).savefig(buffer, format=form, dpi=160, metadata=nothing)
    return buffer.getvalue()


def draw_chart(chart: ControlChart, ax: Axes) -> Axes:
    """Draw every check's bias in order, with limits, moving average and signals marked."""
    places = range(1, len(chart.points) + 1)
    with house_style():
        _lines(ax, chart.action, "plum", "-", "action limits")
        _lines(ax, chart.warning, "amber", "--", "warning limits")
        ax.axhline(chart.centre, color=COLOURS["muted"], lw=0.8, label="centre")
        ax.plot(
            places, [point.average for point in chart.points], color=COLOURS["muted"], lw=1.6,
            alpha=0.7, label="moving average",
        )  # fmt: skip
        ax.plot(
            places, [point.value for point in chart.points], "o-", color=COLOURS["petrol"], ms=4,
            lw=0.8, label="bias",
        )  # fmt: skip
        signals = [place for place, point in zip(places, chart.points, strict=True)
                   if point.signals]  # fmt: skip
        if signals:
            ax.plot(
                signals, [chart.points[place - 1].value for place in signals], "s", ms=9,
                mfc="none", mec=COLOURS["plum"], mew=1.4, ls="", label="signal",
            )  # fmt: skip
        ax.set_ylabel("Bias / %")
        _dates(ax, chart)
        legend_above(ax)
    return ax


def draw_ranges(chart: ControlChart, ax: Axes) -> Axes:
    """Draw the difference of each check from the one before, with its mean and action limit."""
    with house_style():
        ax.axhline(chart.limits.highest_range, color=COLOURS["plum"], lw=1)
        ax.axhline(chart.limits.mean_range, color=COLOURS["muted"], lw=0.8)
        ranges = [point.moving_range for point in chart.points]
        known = [(place, size) for place, size in enumerate(ranges, 1) if size is not None]
        ax.plot(*zip(*known, strict=True), "o-", color=COLOURS["petrol"], ms=3, lw=0.8)
        ax.set_ylim(bottom=0)
        ax.set_ylabel("Moving range / %")
        _dates(ax, chart)
    return ax


def _lines(ax: Axes, limits: Iterable[float], colour: str, style: str, label: str) -> None:
    for place, limit in enumerate(limits):
        ax.axhline(limit, color=COLOURS[colour], ls=style, lw=1, label=None if place else label)


def _dates(ax: Axes, chart: ControlChart) -> None:
    count = len(chart.points)
    step = -(-count // MOST_LABELS)
    places = list(range(1, count + 1, step))
    days = [chart.points[place - 1].when[:10] for place in places]
    ax.set_xticks(places, days, rotation=30, ha="right", parse_math=False)
    ax.set_xlim(0.5, count + 0.5)
    ax.set_xlabel("Check, in order of time")
