"""Colours, type and legend that all drawings share."""

from __future__ import annotations

from collections.abc import Iterator
from contextlib import contextmanager
from contextvars import ContextVar
from typing import TYPE_CHECKING, Any

from plumbfall.report.summary import visible

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["COLOURS", "house_style", "legend_above", "legend_below", "short_name"]

COLOURS = {
    "ink": "#24333b",
    "muted": "#687780",
    "rule": "#d5dcdf",
    "petrol": "#146172",
    "amber": "#c27a0e",
    "plum": "#7c4a86",
}
"""Told apart by colour-blind readers and, with hatches and shapes, in monochrome."""

_entered: ContextVar[bool] = ContextVar("house style entered", default=False)


@contextmanager
def house_style() -> Iterator[None]:
    """Draw in the house's style, whatever the reader's own settings are.

    Within another ``with house_style()`` it costs nothing: a page of many drawings enters it once.
    """
    import matplotlib as mpl

    if _entered.get():
        yield
        return
    ink, muted = COLOURS["ink"], COLOURS["muted"]
    style: dict[Any, Any] = {
        "font.family": ["DejaVu Sans"],
        "font.size": 8.5,
        "text.color": ink,
        "text.parse_math": False,
        "axes.labelcolor": ink,
        "axes.edgecolor": muted,
        "axes.facecolor": "none",
        "axes.spines.top": False,
        "axes.spines.right": False,
        "axes.titlesize": 9.0,
        "axes.grid": False,
        "axes.unicode_minus": False,
        "axes.formatter.useoffset": False,
        "xtick.color": muted,
        "ytick.color": muted,
        "xtick.labelcolor": ink,
        "ytick.labelcolor": ink,
        "legend.frameon": False,
        "legend.fontsize": 8.0,
        "hatch.linewidth": 0.6,
        "svg.fonttype": "none",
        "svg.hashsalt": "plumbfall",
    }
    token = _entered.set(True)
    try:
        with mpl.rc_context(style):
            yield
    finally:
        _entered.reset(token)


def legend_below(ax: Axes, *, at_right: bool = False) -> None:
    """Put the legend under the axes; names in it are never taken for formulas."""
    handles, labels = ax.get_legend_handles_labels()
    if handles:
        legend = ax.legend(
            handles,
            labels,
            loc="upper right" if at_right else "upper left",
            bbox_to_anchor=(1.02 if at_right else -0.02, -0.19),
            ncols=2,
            handlelength=1.6,
            columnspacing=1.2,
            borderaxespad=0.4,
        )
        for text in legend.get_texts():
            text.set_parse_math(False)


def legend_above(ax: Axes) -> None:
    """Put the legend over the axes, clear of what stands under them whatever their height."""
    if ax.get_legend_handles_labels()[0]:
        legend = ax.legend(
            loc="lower left", bbox_to_anchor=(-0.01, 1.0), ncols=3, borderaxespad=0.3
        )
        for text in legend.get_texts():
            text.set_parse_math(False)


def short_name(text: str, most: int) -> str:
    """Return a name with its middle left out where it is too long for a figure."""
    text = visible(text)
    keep = (most - 1) // 2
    return text if len(text) <= most else f"{text[:keep]}…{text[-keep:]}"
