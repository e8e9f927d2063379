"""A comparison of two run sets as text, and as a notebook's fragment."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from plumbfall._version import __version__
from plumbfall.calibration.compare import LEVEL, Comparison
from plumbfall.report.compare_figure import draw_comparison
from plumbfall.report.fragment import table_fragment
from plumbfall.report.placing import own_figure
from plumbfall.report.scales import CELSIUS, Scale, viscosity_scale
from plumbfall.report.summary import basis, percent, visible
from plumbfall.report.svg import inline_svg
from plumbfall.report.text import wrapped
from plumbfall.report.words import Explainer

if TYPE_CHECKING:
    from plumbfall.report.compare_report import ComparisonReport

__all__ = ["compare_fragment", "compare_text"]

PERCENT = Scale("%", 100.0)


def compare_text(report: ComparisonReport) -> str:
    """Return the comparison as text of at most 80 columns, long names apart."""
    return "\n".join(_lines(report)) + "\n"


def compare_fragment(report: ComparisonReport) -> str:
    """Return a table of ratio and difference with what they show, and the drawing."""
    result = report.result
    rows = [(label, text) for label, text, _ in _facts(result, report.bench.viscosity_unit)]
    picture = inline_svg(
        own_figure(lambda ax: draw_comparison(result, ax)),
        "comparison",
        "Ratio of two run sets",
        "Ratio with its bounds",
    )
    return table_fragment(
        f"{result.sets[0]} against {result.sets[1]}",
        ("What", "Value"),
        rows,
        _conclusions(result),
        picture,
    )


def _lines(report: ComparisonReport) -> Iterator[str]:
    result, explain = report.result, Explainer()
    first, second = map(visible, result.sets)
    yield f"{first} / {second}  {_ratio(result)}"
    for told in _conclusions(result):
        yield from wrapped("  ", told)
    for label, text, term in _facts(result, report.bench.viscosity_unit):
        why = explain(term)
        yield from wrapped(f"  {label:<24}", visible(f"{text}  ({why})" if why else text))
    yield f"plumbfall {__version__}"


def _facts(result: Comparison, unit: str | None) -> Iterator[tuple[str, str, str]]:
    """Yield label, text and the word to explain."""
    scale = viscosity_scale(max(value.value for value in result.values), unit)
    for name, value, kelvin in zip(result.sets, result.values, result.temperatures, strict=True):
        pair = scale.pair(value.value, value.expanded)
        told = f"{pair.plus_minus} {scale.unit} ({basis(value)})"
        yield name, f"{told} at {CELSIUS.fixed(kelvin, 2)} degC", ""
    yield "Ratio", _ratio(result), ""
    difference = result.difference
    pair = scale.pair(difference.value, difference.expanded)
    yield "Difference", f"{pair.plus_minus} {scale.unit} ({basis(difference)})", ""
    yield "Correlation", Scale("").fixed(result.correlation, 3), "correlation"
    yield "No difference: p", f"{result.p_value:.2g}", "p-value"
    if result.equivalence_p_value is not None and result.margin is not None:
        margin = f"{100 * result.margin:g} %"
        yield f"Apart by {margin}: p", f"{result.equivalence_p_value:.2g}", ""
    precision = result.precision
    if precision is not None:
        sd = f"{PERCENT.alone(precision.sd, 2)} %, from {precision.source}"
        yield "Scatter of one drop", sd, ""
        limit = f"{PERCENT.alone(precision.limit, 2)} %"
        yield "Repeatability limit", limit, "repeatability limit"
        critical = f"{PERCENT.alone(precision.critical, 2)} %"
        yield "Critical difference", critical, "critical difference"


def _ratio(result: Comparison) -> str:
    pair = Scale("").pair(result.ratio.value, result.ratio.expanded)
    return f"{pair.plus_minus} ({basis(result.ratio)})"


def _conclusions(result: Comparison) -> Iterator[str]:
    off = f"{PERCENT.alone(result.ratio.value - 1, 2)} %"
    level = percent(LEVEL)
    if result.different:
        yield f"A difference of {off} is shown at the {level} level."
    else:
        half = f"{PERCENT.alone(result.ratio.expanded, 2)} %"
        yield (
            f"No difference is shown at the {level} level; one of less than {half} would hardly be "
            "seen."
        )
    if result.margin is not None:
        margin = f"{100 * result.margin:g} %"
        shown = "are shown" if result.equivalent else "are not shown"
        yield f"The two {shown} to be equal within {margin}, at the {level} level."
    precision = result.precision
    if precision is not None and abs(result.ratio.value - 1) <= precision.critical:
        yield "The scatter of drops alone explains a difference as large."
    if precision is not None and precision.uneven:
        yield (
            f"One set scatters far more than the other (Cochran's test, {precision.cochran:.3f} "
            f"beyond {precision.cochran_limit:.3f}): find out why before the two are pooled."
        )
    if not result.one_temperature:
        yield (
            "The two hold at different temperatures: give the liquid a viscosity_slope and the "
            "bench a reference_temperature to compare them at one."
        )
