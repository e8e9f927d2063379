"""Tube constants as plain text for a terminal or a pipe, 80 columns wide."""

from __future__ import annotations

import math
import textwrap
from collections.abc import Iterable, Iterator

from plumbfall._version import __version__
from plumbfall.calibration.constancy import Constancy, Trend
from plumbfall.calibration.constant import Calibration, TubeConstant
from plumbfall.report.scales import CELSIUS, Scale, scale_for, viscosity_scale
from plumbfall.report.summary import counted, visible
from plumbfall.report.views import dof_text
from plumbfall.results import Finding

__all__ = ["calibration_text"]

WIDTH = 80
TOP_INPUTS = 5
PERCENT = Scale("%", 100.0)
ALONG = {"time": "fall time", "reynolds": "Reynolds number"}


def calibration_text(calibration: Calibration) -> str:
    """Return the constants, what they come from, and whether they are constant."""
    return "\n".join(_lines(calibration)) + "\n"


def _lines(calibration: Calibration) -> Iterator[str]:
    yield from _wrapped(
        "", "Tube constants K: viscosity = K x (ball density - liquid density) x time"
    )
    yield ""
    for constant in calibration.constants:
        yield from _of_constant(constant)
        yield ""
    for name, findings in calibration.invalid:
        yield f"invalid  {visible(name)}  no constant"
        yield from _of_findings(findings)
        yield ""
    date = "not supplied" if calibration.date is None else calibration.date.isoformat()
    yield f"date of the drops {date}"
    yield f"plumbfall {__version__}"


def _of_constant(constant: TubeConstant) -> Iterator[str]:
    stored = constant.stored
    scale = scale_for("m2/s2", stored.value)
    pair = scale.pair(stored.value, stored.u)
    relative = PERCENT.alone(stored.u / stored.value, 2)
    yield from _wrapped(
        "",
        f"tube {visible(stored.tube)}, ball {visible(stored.ball)}  {pair.concise} {scale.unit}  "
        f"(standard uncertainty {relative} %, degrees of freedom {dof_text(constant.dof)})",
        2,
    )
    yield from _of_findings(constant.findings)
    yield from _of_sets(constant, scale)
    yield from _of_constancy(constant.constancy)
    yield from _of_domain(constant)
    yield from _of_inputs(constant)


def _of_sets(constant: TubeConstant, scale: Scale) -> Iterator[str]:
    for one in constant.sets:
        viscosity = viscosity_scale(one.viscosity)
        certified = viscosity.pair(one.viscosity, one.viscosity_u)
        told = (
            f"{visible(one.reference)}, {certified.concise} {viscosity.unit} at "
            f"{CELSIUS.fixed(one.temperature, 2)} degC ({one.law}); {counted(one.n_drops, 'drop')} "
            f"of {Scale('s').alone(one.time, 4)} s; gives {scale.pair(one.value, one.u).concise}, "
            f"{_signed(one.residual, 2)} from the joint value, weight {one.weight:.2f}"
        )
        yield from _wrapped(f"  {visible(one.name)}: ", told, 4)


def _of_constancy(steady: Constancy) -> Iterator[str]:
    if steady.dof == 0:
        yield from _wrapped(
            "  ",
            "One set alone cannot show whether the constant changes with the fall time: calibrate "
            "with a second liquid, so that the two bracket what is to be measured.",
        )
        return
    if math.isnan(steady.chi_squared):
        yield from _wrapped(
            "  ", "No uncertainty is given that sets could agree within: it cannot be told.", 4
        )
        return
    yield from _wrapped(
        "  ",
        f"Do the sets agree? chi-squared {steady.chi_squared:.2f} with "
        f"{counted(steady.dof, 'degree')} of freedom, p-value {_p(steady.p_value)} (how often "
        "sound data would show at least as much)",
        4,
    )
    for trend in steady.trends:
        yield from _wrapped("  ", _of_trend(trend), 4)


def _of_trend(trend: Trend) -> str:
    return (
        f"Does it change with the {ALONG[trend.along]}? by {_signed(trend.change, 2)} over a "
        f"factor of {trend.most / trend.least:.1f}, p-value {_p(trend.p_value)}; a change of "
        f"{PERCENT.alone(trend.detectable, 2)} % would most likely have been seen"
    )


def _of_domain(constant: TubeConstant) -> Iterator[str]:
    domain = constant.stored.domain
    parts = []
    if domain.temperature is not None:
        parts.append(f"{_span(domain.temperature, CELSIUS, 2)} degC")
    if domain.viscosity is not None:
        scale = viscosity_scale(domain.viscosity[1])
        low, high = (scale.alone(limit) for limit in domain.viscosity)
        parts.append(f"{low if low == high else f'{low} to {high}'} {scale.unit}")
    if domain.time is not None:
        parts.append(f"{_span(domain.time, Scale('s'), 2)} s")
    if domain.tilt is not None:
        parts.append(f"tilt {scale_for('rad', domain.tilt).alone(domain.tilt, 3)} deg")
    yield from _wrapped("  Holds for ", ", ".join(parts), 4)
    for one in constant.stored.certified:
        certificate = visible(one.certificate) or "not supplied"
        yield from _wrapped("  Rests on ", f"{visible(one.reference)}, certificate {certificate}")


def _of_inputs(constant: TubeConstant) -> Iterator[str]:
    stored = constant.stored
    parts = {
        one.estimate.name: (one.sensitivity * one.estimate.u / stored.u) ** 2
        for one in stored.inputs
        if one.estimate.u and stored.u
    }
    if stored.own_u:
        parts["scatter of the drops"] = (stored.own_u / stored.u) ** 2
    if not parts:
        return
    yield "  Largest parts of its squared standard uncertainty"
    ranked = sorted(parts.items(), key=lambda part: -part[1])
    for name, share in ranked[:TOP_INPUTS]:
        yield from _wrapped(f"    {visible(name):<40}", f"{PERCENT.fixed(share, 1):>5} %")
    if rest := ranked[TOP_INPUTS:]:
        share = sum(part for _, part in rest)
        yield f"    {counted(len(rest), 'smaller input'):<40}{PERCENT.fixed(share, 1):>5} %"


def _of_findings(findings: Iterable[Finding]) -> Iterator[str]:
    order = {"error": 0, "warning": 1, "note": 2}
    for finding in sorted(findings, key=lambda finding: order.get(finding.severity, 3)):
        yield from _wrapped(f"  {finding.severity} {finding.code}: ", visible(finding.message), 4)
        if finding.remedy:
            yield from _wrapped("    remedy: ", visible(finding.remedy), 6)


def _span(limits: tuple[float, float], scale: Scale, decimals: int) -> str:
    low, high = (scale.fixed(limit, decimals) for limit in limits)
    return low if low == high else f"{low} to {high}"


def _signed(ratio: float, decimals: int) -> str:
    rounded = round(100 * ratio, decimals) + 0.0  # no minus sign before nothing
    return f"{rounded:+.{decimals}f} %"


def _p(value: float) -> str:
    return f"{value:.3f}" if value >= 0.001 else "below 0.001"


def _wrapped(start: str, text: str, indent: int = 4) -> list[str]:
    return textwrap.wrap(
        text,
        WIDTH,
        initial_indent=start,
        subsequent_indent=" " * indent,
        break_on_hyphens=False,
    ) or [start.rstrip()]
