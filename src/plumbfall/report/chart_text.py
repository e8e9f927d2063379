"""A control chart as text, and as a notebook's fragment."""

from __future__ import annotations

from collections.abc import Iterator

from plumbfall._version import __version__
from plumbfall.calibration.chart import PROVISIONAL, ControlChart, ControlPoint
from plumbfall.report.chart_figure import chart_figure
from plumbfall.report.fragment import table_fragment
from plumbfall.report.scales import Scale
from plumbfall.report.summary import counted, visible
from plumbfall.report.svg import inline_svg
from plumbfall.report.text import WIDTH, wrapped
from plumbfall.report.words import Explainer

__all__ = ["SIGNALS", "chart_fragment", "chart_text"]

PLAIN = Scale("%")
DAYS_A_YEAR = 365.25

SIGNALS = {
    "beyond-action": "beyond the action limits",
    "two-of-three-beyond-warning": "two of three beyond the warning limit of one side",
    "nine-on-one-side": "nine in a row on one side of the centre",
    "six-rising": "six in a row rising",
    "six-falling": "six in a row falling",
    "average-beyond-limits": "moving average beyond its limits",
}
"""What each signal says."""

REMEDY = (
    "Out of control: stop, find what changed (ball, tube, thermometer, bath, certified liquid, "
    "operator), put it right and check again. A signal is no verdict on one check alone."
)


def chart_text(chart: ControlChart) -> str:
    """Return limits, drift and points as text of at most 80 columns, long names apart."""
    return "\n".join(_lines(chart)) + "\n"


def chart_fragment(chart: ControlChart) -> str:
    """Return a table of the points with their signals, and the chart."""
    rows = [
        (
            point.when,
            point.run_set,
            PLAIN.fixed(point.value, _decimals(chart)),
            PLAIN.fixed(point.average, _decimals(chart)),
            "; ".join(SIGNALS[name] for name in point.signals),
        )
        for point in chart.points
    ]
    picture = inline_svg(
        chart_figure(chart), "chart", "Control chart", "Bias of checks in order with their limits"
    )
    headings = ("When", "Run set", "Bias / %", "Moving average / %", "Signals")
    remarks = [_state(chart), *_remarks(chart)]
    return table_fragment("Control chart", headings, rows, remarks, picture)


def _lines(chart: ControlChart) -> Iterator[str]:
    explain = Explainer()
    decimals = _decimals(chart)

    def told(label: str, text: str, term: str = "") -> Iterator[str]:
        why = explain(term)
        yield from wrapped(f"  {label:<18}", f"{text}  ({why})" if why else text)

    yield _state(chart)
    if chart.out_of_control:
        yield from wrapped("  ", REMEDY)
    yield from told("Centre", f"{PLAIN.fixed(chart.centre, decimals)} %")
    yield from told("Warning limits", _span(chart.warning, decimals), "warning limits")
    yield from told("Action limits", _span(chart.action, decimals), "action limits")
    told_range = f"mean {PLAIN.fixed(chart.limits.mean_range, decimals)} %, action limit "
    told_range += f"{PLAIN.fixed(chart.limits.highest_range, decimals)} %"
    yield from told("Moving range", told_range, "moving range")
    last = chart.points[-1]
    yield from told(
        "Moving average",
        f"{PLAIN.fixed(last.average, decimals)} %, limits "
        f"{_span((last.average_low, last.average_high), decimals)}, weight {chart.weight:g}",
        "moving average",
    )
    yield from told("Drift", _drift(chart))
    yield ""
    width = max(len(point.when) for point in chart.points)
    names = max(len(visible(point.run_set)) for point in chart.points)
    yield f"  {'when':<{width}}  {'run set':<{names}}  {'bias':>9}  {'average':>9}  signals"
    for point in chart.points:
        yield from _rows(point, width, names, decimals)
    yield ""
    for remark in _remarks(chart):
        yield from wrapped("", remark)
    yield f"plumbfall {__version__}"


def _rows(point: ControlPoint, width: int, names: int, decimals: int) -> Iterator[str]:
    """Yield a point's line, and its signals on another where they do not fit."""
    bias = f"{PLAIN.fixed(point.value, decimals)} %"
    average = f"{PLAIN.fixed(point.average, decimals)} %"
    row = f"  {point.when:<{width}}  {visible(point.run_set):<{names}}  {bias:>9}  {average:>9}"
    signals = ", ".join(point.signals)
    if len(row) + 2 + len(signals) <= WIDTH:
        yield f"{row}  {signals}".rstrip()
    else:
        yield row
        yield from wrapped("      ", signals)


def _state(chart: ControlChart) -> str:
    signalling = sum(bool(point.signals) for point in chart.points)
    count = counted(len(chart.points), "check")
    if not signalling:
        return f"in control  {count}, no signal"
    return f"out of control  {count}, {signalling} with a signal"


def _remarks(chart: ControlChart) -> Iterator[str]:
    if chart.provisional:
        yield (
            f"The limits rest on {counted(chart.baseline, 'check')} and are provisional: "
            f"{PROVISIONAL} or more make limits that stand."
        )
    if len(chart.references) > 1:
        yield (
            f"Checks of {len(chart.references)} certified liquids are charted together "
            f"({', '.join(map(visible, chart.references))}); a step between them may be theirs."
        )
    if chart.left_out:
        yield f"{counted(chart.left_out, 'check')} without a bias left out."


def _drift(chart: ControlChart) -> str:
    drift = chart.drift
    if drift is None:
        return "needs three checks"
    per, factor = "check", 1.0
    if chart.drift_by == "day":
        per, factor = "year", DAYS_A_YEAR
    pair = Scale("%", factor).pair(drift.slope, drift.u)
    least = Scale("%", factor).alone(drift.detectable, 2)
    shown = "shown" if drift.p_value < 0.05 else "none shown"
    text = f"{pair.plus_minus} % a {per} (standard uncertainty), {shown} (p {drift.p_value:.2g})"
    return f"{text}; {least} % a {per} would be seen 4 times of 5"


def _span(limits: tuple[float, float], decimals: int) -> str:
    low, high = (PLAIN.fixed(limit, decimals) for limit in limits)
    return f"{low} to {high} %"


def _decimals(chart: ControlChart) -> int:
    """Return decimals that show two digits of the standard deviation."""
    pair = PLAIN.pair(chart.centre, chart.limits.sd)
    return max(0, -pair.place) if chart.limits.sd else 3
