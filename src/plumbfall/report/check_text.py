"""Checks against a certified liquid as text, and as a notebook's fragment."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from plumbfall._version import __version__
from plumbfall.calibration.check import CheckResult
from plumbfall.calibration.decisions import chance
from plumbfall.report.check_figure import draw_checks
from plumbfall.report.fragment import table_fragment
from plumbfall.report.placing import own_figure
from plumbfall.report.scales import CELSIUS, Scale, viscosity_scale
from plumbfall.report.summary import basis, percent, visible
from plumbfall.report.svg import inline_svg
from plumbfall.report.text import wrapped
from plumbfall.report.words import Explainer
from plumbfall.results import Measured
from plumbfall.uncertainty.coverage import coverage_factor

if TYPE_CHECKING:
    from plumbfall.report.check_report import CheckReport

__all__ = ["bias_text", "check_fragment", "check_line", "check_text"]

PERCENT = Scale("%", 100.0)

LAWS = {"vogel": "Vogel's law", "walther": "Walther's law"}
"""What the laws that join a certificate's points are called."""

CAUTION = (
    "A correct result on a reference liquid does not rule out errors that happen to cancel each "
    "other."
)


def check_text(report: CheckReport) -> str:
    """Return the checks as text of at most 80 columns, long names apart."""
    return "\n".join(_lines(report)) + "\n"


def check_line(check: CheckResult) -> str:
    """Return decision, run set, bias with its bounds and the scores in one line."""
    parts = [check.decision, visible(check.run_set), f"against {visible(check.reference)}"]
    if check.bias is None:
        parts.append("no bias")
    else:
        parts.append(f"bias {bias_text(check)}")
    if check.e_n is not None and check.zeta is not None:
        parts.append(f"E_n {check.e_n:+.2f}  zeta {check.zeta:+.2f}")
    return "  ".join(parts)


def bias_text(check: CheckResult) -> str:
    """Return the bias with its expanded uncertainty in percent."""
    assert check.bias is not None
    probability = 0.95 if check.measured is None else check.measured.coverage_probability
    factor = float(coverage_factor(dof=check.bias_dof, probability=probability))
    pair = PERCENT.pair(check.bias.value, factor * check.bias.u)
    sign = "+" if check.bias.value > 0 else ""
    return f"{sign}{pair.plus_minus} % (k={factor:.1f}, {percent(probability)})"


def _lines(report: CheckReport) -> Iterator[str]:
    explain = Explainer()
    unit = report.bench.viscosity_unit
    for check in report.checks:
        yield check_line(check)
        yield from wrapped("  ", f"{check.reason}")
        if check.measured is not None:
            told = _value(check.measured, unit)
            told += f" at {CELSIUS.fixed(check.temperature, 2)} degC"
            yield from wrapped(f"  {'Measured':<14}", told)
        if check.certified is not None:
            told = f"{_value(check.certified, unit)} by {LAWS.get(check.law, check.law)}"
            yield from wrapped(f"  {'Certified':<14}", told)
        if check.bias is not None:
            yield from wrapped(f"  {'Bias':<14}", _with(bias_text(check), explain("bias")))
        if check.e_n is not None and check.zeta is not None:
            yield from wrapped(f"  {'E_n':<14}", _with(f"{check.e_n:+.3f}", explain("E_n")))
            yield from wrapped(f"  {'zeta':<14}", _with(f"{check.zeta:+.3f}", explain("zeta")))
        if check.conformance_probability is not None and check.tolerance is not None:
            told = f"{chance(check.conformance_probability)} within "
            told += f"{100 * check.tolerance:g} % either way"
            why = explain("conformance probability")
            yield from wrapped(f"  {'Probability':<14}", _with(told, why))
        for hint in check.explanations:
            yield from wrapped(f"  {'Looks like':<14}", hint)
        if codes := [one.code for one in check.findings if one.severity != "note"]:
            told = f"{', '.join(dict.fromkeys(codes))}: reduce the drops to be told in full"
            yield from wrapped(f"  {'Found':<14}", visible(told))
        yield ""
    if report.passed_over:
        names = ", ".join(map(visible, report.passed_over))
        yield from wrapped("", f"Not of this liquid, and not checked: {names}")
    yield from wrapped("", CAUTION)
    yield f"plumbfall {__version__}"


def _value(measured: Measured, unit: str | None) -> str:
    scale = viscosity_scale(measured.value, unit)
    pair = scale.pair(measured.value, measured.expanded)
    return f"{pair.plus_minus} {scale.unit} ({basis(measured)})"


def _with(text: str, why: str) -> str:
    return f"{text}  ({why})" if why else text


def check_fragment(report: CheckReport) -> str:
    """Return a table of the checks with their reasons, and the drawing."""
    rows = [
        (
            check.run_set,
            check.decision,
            bias_text(check) if check.bias is not None else "–",
            "–" if check.e_n is None else f"{check.e_n:+.2f}",
            "–" if check.zeta is None else f"{check.zeta:+.2f}",
            check.reason,
        )
        for check in report.checks
    ]
    picture = ""
    if any(check.bias is not None for check in report.checks):
        picture = inline_svg(
            own_figure(lambda ax: draw_checks(report.checks, ax), len(report)),
            "check",
            "Bias",
            "Bias of each run set with its bounds",
        )
    headings = ("Run set", "Decision", "Bias", "E_n", "zeta", "Reason")
    return table_fragment(
        f"Check against {report.checks[0].reference}", headings, rows, (CAUTION,), picture
    )
