"""Drawings of a run set: its drops in order, and what its uncertainty is made of.

Matplotlib is imported when something is drawn; pyplot never.
"""

from __future__ import annotations

import statistics
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from typing import TYPE_CHECKING, Any

from plumbfall.errors import InputError, nearest_name
from plumbfall.report.scales import pretty_unit
from plumbfall.report.summary import percent, visible
from plumbfall.report.views import set_scale
from plumbfall.results import DropResult, RunSetResult

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = [
    "COLOURS",
    "KINDS",
    "draw",
    "draw_budget",
    "draw_drops",
    "house_style",
    "new_figure",
    "page_figure",
]

COLOURS = {
    "ink": "#24333b",
    "muted": "#687780",
    "rule": "#d5dcdf",
    "petrol": "#146172",
    "amber": "#c27a0e",
    "plum": "#7c4a86",
}
"""Told apart by colour-blind readers and, with hatches and shapes, in monochrome."""

SCOPES = {"shared": ("petrol", ""), "ball": ("amber", "///"), "drop": ("plum", "xxx")}
"""Colour and hatch of each scope in the budget."""

MANY_POINTS = 2000
"""Above so many points a scatter is drawn as pixels."""

MOST_BARS = 10
MOST_BALLS = 8
MOST_PANELS = 12
SIZE = (4.9, 3.3)

_POINTS = 72.0  # of an inch
_PANEL_HEIGHT = 150.0  # points

_SYMBOLS = "osD^vP<>"


def draw(
    kind: str, results: Sequence[RunSetResult], viscosity_unit: str | None, ax: Axes | None
) -> Figure | Axes:
    """Draw a kind of figure for one or several run sets.

    Returns
    -------
    Figure or Axes
        The Axes that were given, else a new Figure with one panel a run set.

    Raises
    ------
    InputError
        If the kind is unknown, there is nothing to draw, one place is given for several sets, or
        there are too many sets for one figure.
    """
    if kind not in KINDS:
        near = nearest_name(kind, KINDS)
        known = " or ".join(map(repr, KINDS))
        remedy = f"did you mean {near!r}?" if near else f"write {known}"
        raise InputError(f"there is no figure of kind {kind!r}", remedy=remedy)
    if ax is not None and len(results) != 1:
        raise InputError("one place for several run sets", remedy="say which with run_set=")
    if not 1 <= len(results) <= MOST_PANELS:
        raise InputError(
            f"{len(results)} run sets do not fit into one figure",
            remedy=f"say which with run_set= (at most {MOST_PANELS} at once)",
        )
    if ax is not None:
        return KINDS[kind](results[0], ax, viscosity_unit)
    figure = new_figure(len(results))
    for index, result in enumerate(results):
        with house_style():
            panel = figure.add_subplot(len(results), 1, index + 1)
        KINDS[kind](result, panel, viscosity_unit)
        panel.set_title(_short(result.name, 60), loc="left", parse_math=False)
    return figure


def new_figure(panels: int = 1) -> Figure:
    """Return an empty figure in the house's size, outside pyplot."""
    from matplotlib.figure import Figure

    return Figure(figsize=(SIZE[0], SIZE[1] * panels), layout="constrained")


def page_figure(kind: str, result: RunSetResult, viscosity_unit: str | None) -> Figure:
    """Return a figure of one set for a page, its margins taken from the length of its labels.

    Matplotlib's own layout measures every text several times, which a page of a hundred run sets
    cannot wait for.
    """
    from matplotlib.figure import Figure

    figure = Figure(figsize=SIZE)
    with house_style():
        ax = figure.add_axes((0.2, 0.3, 0.7, 0.6))
        KINDS[kind](result, ax, viscosity_unit)
        labels = [text.get_text() for text in ax.get_yticklabels()]
        longest = max((len(label) for label in labels), default=0)
    width = SIZE[0] * _POINTS
    left = longest * 5.1 + (10.0 if kind == "budget" else 26.0)
    legend_rows = (len(ax.get_legend_handles_labels()[1]) + 1) // 2
    bottom = 42.0 + 11.5 * legend_rows
    height = bottom + _PANEL_HEIGHT + 8.0
    figure.set_size_inches(SIZE[0], height / _POINTS)
    ax.set_position(
        (left / width, bottom / height, 1.0 - (left + 8.0) / width, _PANEL_HEIGHT / height)
    )
    return figure


@contextmanager
def house_style() -> Iterator[None]:
    """Draw in the house's style, whatever the reader's own settings are."""
    import matplotlib as mpl

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
    }
    with mpl.rc_context(style):
        yield


def draw_drops(result: RunSetResult, ax: Axes, viscosity_unit: str | None = None) -> Axes:
    """Draw the drops in order, with the spread of single drops and the bounds of the result.

    Each drop is at the set's temperature; drops not used stand on the axis as crosses. Where a
    set has no viscosity its fall times are drawn.

    Parameters
    ----------
    result : RunSetResult
        The run set.
    ax : Axes
        Where to draw.
    viscosity_unit : str, optional
        Unit of the viscosity; by its size if not given.

    Returns
    -------
    Axes
        The same.
    """
    from matplotlib.ticker import MaxNLocator

    scale = set_scale(result, viscosity_unit)
    with_values = any(drop.viscosity_at_set is not None for drop in result.drops)

    def height(drop: DropResult) -> float | None:
        if not with_values:
            return drop.time
        value = drop.viscosity_at_set
        return value * scale.factor if value is not None and drop.used else None

    with house_style():
        if result.viscosity is not None and with_values:
            _draw_bands(result, ax, scale.factor)
        shown = [(n, d, y) for n, d in enumerate(result.drops, 1) if (y := height(d)) is not None]
        _draw_points(shown, ax)
        absent = [n for n, drop in enumerate(result.drops, 1) if height(drop) is None]
        if absent:
            ax.plot(
                absent,
                [0.03] * len(absent),
                "x",
                color=COLOURS["ink"],
                transform=ax.get_xaxis_transform(),
                clip_on=False,
                label="not used",
            )
        unit = pretty_unit(scale.unit)
        ax.set_ylabel(f"Viscosity / {unit}" if with_values else "Fall time / s")
        ax.set_xlabel("Drop, in order")
        ax.xaxis.set_major_locator(MaxNLocator(integer=True))
        ax.set_xlim(0.4, max(len(result.drops), 1) + 0.6)
        _legend(ax)
    return ax


def _draw_bands(result: RunSetResult, ax: Axes, factor: float) -> None:
    """Two bands: where single drops lie (dashed edge), where the result lies (solid edge)."""
    assert result.viscosity is not None  # the caller has seen to it
    measured = result.viscosity
    at_set = [d.viscosity_at_set for d in result.drops if d.used and d.viscosity_at_set is not None]
    if len(at_set) > 1:
        spread = 2.0 * statistics.stdev(at_set)
        centre = statistics.fmean(at_set)
        edges = [(centre - spread) * factor, (centre + spread) * factor]
        ax.axhspan(*edges, color=COLOURS["amber"], alpha=0.13, lw=0, zorder=0)
        for number, edge in enumerate(edges):
            label = "single drops: mean ± 2 standard deviations" if number == 0 else None
            ax.axhline(edge, color=COLOURS["amber"], lw=1, ls=(0, (4, 3)), zorder=1, label=label)
    bounds = [measured.low * factor, measured.high * factor]
    ax.axhspan(*bounds, color=COLOURS["petrol"], alpha=0.2, lw=0, zorder=0)
    coverage = percent(measured.coverage_probability)
    for number, bound in enumerate(bounds):
        label = f"the result's bounds, {coverage}" if number == 0 else None
        ax.axhline(bound, color=COLOURS["petrol"], lw=1, zorder=1, label=label)
    ax.axhline(measured.value * factor, color=COLOURS["petrol"], lw=2, zorder=1, label="the result")


def _draw_points(shown: Sequence[tuple[int, DropResult, float]], ax: Axes) -> None:
    balls = list(dict.fromkeys(drop.ball for _, drop, _ in shown))
    pixels = len(shown) > MANY_POINTS
    size = 4.0 if pixels else 30.0
    if len(balls) > MOST_BALLS:
        groups = [("drops", "o", shown)]
    else:
        groups = [
            (f"ball {_short(ball, 16)}" if ball else "drops", _SYMBOLS[index],
             [point for point in shown if point[1].ball == ball])
            for index, ball in enumerate(balls)
        ]  # fmt: skip
    for label, symbol, points in groups:
        ax.scatter(
            [number for number, _, _ in points],
            [value for _, _, value in points],
            s=size,
            marker=symbol,
            facecolor=COLOURS["ink"],
            edgecolor="none",
            zorder=3,
            label=label,
            rasterized=pixels,
        )


def draw_budget(result: RunSetResult, ax: Axes, viscosity_unit: str | None = None) -> Axes:
    """Draw each input's share of the squared standard uncertainty, largest on top.

    Shared inputs, those of a ball and those of a drop differ in colour and hatch. The unit is
    not used; it stands so that all figures are called alike.

    Returns
    -------
    Axes
        The same as given.
    """
    lines = sorted(result.budget, key=lambda line: -line.share)
    bars = [(_short(line.input, 30), line.share, line.scope) for line in lines[:MOST_BARS]]
    for scope in SCOPES:
        rest = [line.share for line in lines[MOST_BARS:] if line.scope == scope]
        if rest:
            bars.append((f"{len(rest)} smaller ones, {scope}", sum(rest), scope))
    with house_style():
        for scope, (colour, hatch) in SCOPES.items():
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
                    label=_SCOPE_LABELS[scope],
                )
        for place, bar in enumerate(bars):
            ax.annotate(
                f"{100.0 * bar[1]:.1f}",
                (100.0 * bar[1], place),
                xytext=(3, 0),
                textcoords="offset points",
                va="center",
                fontsize=8,
            )
        ax.set_yticks(range(len(bars)), [bar[0] for bar in bars], parse_math=False)
        ax.tick_params(axis="y", length=0)
        ax.invert_yaxis()
        ax.set_xlabel("Share of the squared standard uncertainty / %")
        ax.set_xlim(0.0, max([10.0, *(112.0 * bar[1] for bar in bars)]))
        _legend(ax)
    return ax


_SCOPE_LABELS = {"shared": "shared by all drops", "ball": "of one ball", "drop": "of one drop"}

KINDS: dict[str, Callable[[RunSetResult, Axes, str | None], Axes]] = {
    "drops": draw_drops,
    "budget": draw_budget,
}
"""Every kind of figure by name."""


def _legend(ax: Axes) -> None:
    handles, labels = ax.get_legend_handles_labels()
    if handles:
        legend = ax.legend(
            handles,
            labels,
            loc="upper left",
            bbox_to_anchor=(-0.02, -0.19),
            ncols=2,
            handlelength=1.6,
            columnspacing=1.2,
            borderaxespad=0.4,
        )
        for text in legend.get_texts():
            text.set_parse_math(False)


def _short(text: str, most: int) -> str:
    """Return a name with its middle left out where it is too long for a figure."""
    text = visible(text)
    keep = (most - 1) // 2
    return text if len(text) <= most else f"{text[:keep]}…{text[-keep:]}"
