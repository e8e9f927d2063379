"""Draw the figures of docs/methods.md from the shipped tables.

``python docs/figures.py`` writes docs/figures/*.svg; ``--check`` writes nothing and exits 1 when
the numbers that a figure was drawn from are no longer those of the program. Every figure carries
its numbers in its ``metadata`` element, as JSON.
"""

from __future__ import annotations

import argparse
import io
import json
import re
import sys
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from html import escape, unescape
from pathlib import Path

import figure_numbers as made  # stands beside this script
import matplotlib as mpl
import numpy as np
from figure_numbers import RULE_RATIOS, RULES, Numbers, Series
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from plumbfall.report.house_style import COLOURS, house_style

__all__ = ["FIGURES", "current", "main", "stored"]

WHERE = Path(__file__).parent / "figures"
INK, MUTED, RULE = COLOURS["ink"], COLOURS["muted"], COLOURS["rule"]
LINES = [
    (colour, dash)
    for dash in ("-", (0, (5, 2)), (0, (1.2, 1.6)))
    for colour in (COLOURS["petrol"], COLOURS["amber"], COLOURS["plum"])
]
"""Three colours that colour-blind readers tell apart, and dashes for those who print in grey."""


@dataclass(frozen=True)
class Drawing:
    """One figure: its numbers, how they are drawn, and what it shows in words."""

    title: str
    description: str
    width: float
    numbers: Callable[[], Numbers]
    draw: Callable[[Figure, Numbers], None]


def series(values: Series) -> np.ndarray:
    """Return stored numbers as an array."""
    return np.array([np.nan if one is None else one for one in values])


# --- walls and inertia ----------------------------------------------------------------------------


def draw_walls(figure: Figure, numbers: Numbers) -> None:
    """Logarithmic, as the laws differ by orders of magnitude."""
    ax = figure.add_subplot()
    for (name, values), style in zip(rest(numbers), LINES, strict=False):
        line(ax, numbers["ratio"], values, name, style)
    ax.set(xlabel="diameter ratio", ylabel="size of the error of K0 [%]")
    ax.set(yscale="log", xlim=(0, 0.7), ylim=(1e-4, 20))
    percent_ticks(ax, (1e-4, 1e-3, 1e-2, 0.1, 1, 10))
    beside(ax)


def draw_inertia(figure: Figure, numbers: Numbers) -> None:
    """Signed: the power laws are too high where laboratories work, too low above."""
    ax = figure.add_subplot()
    ax.axhline(0, color=RULE, lw=0.8)
    for (name, values), style in zip(rest(numbers), LINES, strict=False):
        line(ax, numbers["Reynolds number"], values, name, style)
    ax.set(xlabel="Reynolds number", ylabel="error of the drag [%]")
    ax.set(xscale="log", xlim=(0.01, 100), ylim=(-13, 13))
    plain_ticks(ax, (0.01, 0.1, 1, 10, 100))
    beside(ax)


# --- together -------------------------------------------------------------------------------------


def draw_together(figure: Figure, numbers: Numbers) -> None:
    """One panel a ratio."""
    axes = figure.subplots(1, len(RULE_RATIOS), sharey=True)
    for ax, ratio in zip(axes, RULE_RATIOS, strict=True):
        ax.axhline(0, color=RULE, lw=0.8)
        for name, style in zip((*RULES, "walls alone"), LINES, strict=False):
            line(ax, numbers["Reynolds number"], numbers[f"{name} {ratio:g}"], name, style)
        ax.set(title=f"diameter ratio {ratio:g}", xlabel="Reynolds number")
        ax.set(xscale="log", xlim=(0.05, 100), ylim=(-25, 50))
        plain_ticks(ax, (0.1, 1, 10, 100))
    axes[0].set_ylabel("error of the drag [%]")
    beside(axes[-1])


def draw_drag_map(figure: Figure, numbers: Numbers) -> None:
    """Left the factor, right the share of inertia."""
    left, right = figure.subplots(1, 2)
    reynolds = numbers["Reynolds number"]
    for name in numbers:
        if name.startswith("K "):
            left.plot(reynolds, series(numbers[name]), color=COLOURS["petrol"], lw=1.3)
            if name not in ("K 0", "K 0.01"):
                place = (0.0115, 1.03 * numbers[name][0])
                left.annotate(name.removeprefix("K "), place, fontsize=7.5)
    left.annotate("0.01 and 0", (0.0115, 0.98), fontsize=7.5, va="top")
    left.set(xlabel="Reynolds number", ylabel="drag factor K", xscale="log", yscale="log")
    left.set(xlim=(0.01, 100), ylim=(0.8, 110), title="by diameter ratio")
    plain_ticks(left, (0.01, 0.1, 1, 10, 100))
    left.set_yticks([1, 2, 5, 10, 20, 50, 100], ["1", "2", "5", "10", "20", "50", "100"])
    left.minorticks_off()
    for (name, values), style in zip(rest(numbers, "ratio"), LINES, strict=False):
        line(right, numbers["ratio"], values, name, style)
    right.set(xlabel="diameter ratio", ylabel="Reynolds number", xscale="log", yscale="log")
    right.set(xlim=(0.01, 0.8), ylim=(0.005, 100), title="inertia adds to the walls' drag")
    plain_ticks(right, (0.01, 0.03, 0.1, 0.3, 0.8))
    right.set_yticks([0.01, 0.1, 1, 10, 100], ["0.01", "0.1", "1", "10", "100"])
    right.minorticks_off()
    beside(right)


# --- ends and run-in ------------------------------------------------------------------------------


def draw_ends(figure: Figure, numbers: Numbers) -> None:
    """Logarithmic: straight lines die off exponentially."""
    ax = figure.add_subplot()
    for (name, values), style in zip(rest(numbers), LINES, strict=False):
        line(ax, numbers["distance"], values, name, style)
    ax.set(xlabel="distance of the ball's centre from the end [bore radii]")
    ax.set(ylabel="excess of the drag [%]", yscale="log", xlim=(0.35, 1.75), ylim=(1e-4, 200))
    percent_ticks(ax, (1e-4, 1e-3, 1e-2, 0.1, 1, 10, 100))
    beside(ax)


def draw_run_in(figure: Figure, numbers: Numbers) -> None:
    """Logarithmic, with the limit of the finding."""
    ax = figure.add_subplot()
    for (name, values), style in zip(rest(numbers), LINES, strict=False):
        line(ax, numbers["release"], values, name, style)
    ax.axhline(0.2, color=MUTED, lw=0.7)
    ax.text(40, 0.21, "run-in-short", ha="right", va="bottom", fontsize=7.5, color=MUTED)
    ax.set(xlabel="release above the first mark [mm]", ylabel="timing too long by [%]")
    ax.set(yscale="log", xlim=(0, 40), ylim=(1e-3, 50))
    percent_ticks(ax, (1e-3, 1e-2, 0.1, 1, 10))
    beside(ax)


# --- drawing --------------------------------------------------------------------------------------


def rest(numbers: Numbers, after: str = "") -> Iterator[tuple[str, Series]]:
    """Yield the series after the one that they are drawn over, by default the first."""
    names = list(numbers)
    for name in names[names.index(after) + 1 if after else 1 :]:
        yield name, numbers[name]


def line(ax: Axes, x: Series, y: Series, name: str, style: tuple[str, object]) -> None:
    """Draw one series."""
    colour, dash = style
    ax.plot(series(x), series(y), color=colour, linestyle=dash, lw=1.4, label=name)


def plain_ticks(ax: Axes, places: Sequence[float]) -> None:
    """Label a logarithmic axis of abscissas in plain numbers."""
    ax.set_xticks(places, [f"{place:g}" for place in places])
    ax.xaxis.minorticks_off()


def percent_ticks(ax: Axes, places: Sequence[float]) -> None:
    """Label a logarithmic axis of ordinates in plain numbers."""
    ax.set_yticks(places, [np.format_float_positional(place, trim="-") for place in places])
    ax.yaxis.minorticks_off()
    ax.grid(axis="y", color=RULE, lw=0.5)


def beside(ax: Axes) -> None:
    """Put the legend beside the axes."""
    ax.legend(loc="upper left", bbox_to_anchor=(1.02, 1.02), handlelength=2.6)


FIGURES: Mapping[str, Drawing] = {
    "walls": Drawing(
        "Error of the wall laws",
        "Size of each wall law's error against the exact factor, by diameter ratio, each over the "
        "range in which it may be used.",
        6.6,
        made.walls,
        draw_walls,
    ),
    "inertia": Drawing(
        "Error of the inertia laws",
        "Error of each inertia law against the computed drag of a ball without walls, by Reynolds "
        "number.",
        6.6,
        made.inertia,
        draw_inertia,
    ),
    "together": Drawing(
        "Error of the rules that join walls and inertia",
        "Error of the screened, additive and product rules, and of the walls alone, against the "
        "computed drag in the tube, by Reynolds number, at diameter ratios 0.05, 0.1 and 0.3.",
        8.6,
        made.together,
        draw_together,
    ),
    "drag_map": Drawing(
        "The computed drag factor",
        "Drag factor by Reynolds number for diameter ratios 0 to 0.8, and the Reynolds number at "
        "which inertia has added 0.1, 1, 10 and 100 percent, by diameter ratio.",
        8.2,
        made.drag_map,
        draw_drag_map,
    ),
    "ends": Drawing(
        "Excess of the drag near an end",
        "Excess of the drag near a bottom and a free surface in a tube, by distance, beside that "
        "of a plane without a tube and the end factor of 1907.",
        6.8,
        made.ends,
        draw_ends,
    ),
    "run_in": Drawing(
        "Bias of a timing by the run-in",
        "By how much a timing over 50 mm of a 3 mm ball in a 40 mm bore is too long, by the height "
        "of the release above the first mark, beside two textbook models.",
        7.0,
        made.run_in,
        draw_run_in,
    ),
}


def current(name: str) -> Numbers:
    """Return the numbers of a figure as the program has them now."""
    return FIGURES[name].numbers()


def stored(name: str) -> Numbers:
    """Return the numbers that a figure was drawn from."""
    text = (WHERE / f"{name}.svg").read_text("utf-8")
    found = re.search(r"<metadata>(.*?)</metadata>", text, re.S)
    if found is None:
        raise SystemExit(f"{name}.svg has no numbers; run python docs/figures.py")
    numbers: Numbers = json.loads(unescape(found[1]))
    return numbers


def same(one: Numbers, other: Numbers) -> bool:
    """Whether two sets of numbers agree but for the last of their four digits."""
    return list(one) == list(other) and all(
        len(one[name]) == len(other[name])
        and np.allclose(series(one[name]), series(other[name]), 2e-3, 1e-6, equal_nan=True)
        for name in one
    )


def svg(drawing: Drawing, numbers: Numbers) -> str:
    """Return a figure as SVG, the same for the same numbers."""
    settings = {"svg.fonttype": "none", "svg.hashsalt": "plumbfall", "path.simplify": True}
    nothing = dict.fromkeys(("Date", "Creator", "Format", "Type"))
    buffer = io.StringIO()
    with house_style(), mpl.rc_context(settings):
        figure = Figure(figsize=(drawing.width, 3.0), layout="constrained")
        drawing.draw(figure, numbers)
        figure.savefig(buffer, format="svg", facecolor="white", metadata=nothing)
    text = buffer.getvalue()
    text = re.sub(r"<!--.*?-->\n?", "", text[text.index("<svg") :], flags=re.S)
    text = re.sub(r"<metadata>.*?</metadata>", "", text, flags=re.S)
    text = text.replace("'DejaVu Sans'", "'DejaVu Sans', sans-serif")
    text = re.sub(r"(?<![>\d])\d+\.\d{3,}", lambda found: f"{float(found[0]):.2f}", text)
    head, tag, body = text.partition(">")
    about = (
        f"\n <title>{escape(drawing.title)}</title>\n <desc>{escape(drawing.description)}</desc>"
        f"\n <metadata>{escape(json.dumps(numbers), quote=False)}</metadata>"
    )
    return re.sub(r"\n\s*", "\n", head + tag + about + body)


def main(arguments: Sequence[str] | None = None) -> int:
    """Draw the figures, or say which are stale; return the exit code."""
    parser = argparse.ArgumentParser(description="Draw the figures of the documents.")
    parser.add_argument("--check", action="store_true", help="write nothing; exit 1 when stale")
    check = parser.parse_args(arguments).check
    stale = False
    for name, drawing in FIGURES.items():
        numbers, path = current(name), WHERE / f"{name}.svg"
        if path.exists() and same(numbers, stored(name)) and check:
            continue
        stale = True
        sys.stdout.write(
            f"{path.name}: {'stale; run python docs/figures.py' if check else 'new'}\n"
        )
        if not check:
            beside_it = path.with_suffix(".new")
            beside_it.write_text(svg(drawing, numbers), "utf-8")
            beside_it.replace(path)
    return int(check and stale)


if __name__ == "__main__":
    sys.exit(main())
