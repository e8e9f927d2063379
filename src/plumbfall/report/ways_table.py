"""Linear propagation beside Monte Carlo: the bounds of both, how far apart, how far they may be."""

from __future__ import annotations

import math

from plumbfall.report.rounding import NO_VALUE
from plumbfall.report.scales import Scale, pretty_unit
from plumbfall.report.summary import counted
from plumbfall.report.views import TableView, dof_text
from plumbfall.results import Measured, MonteCarloResult, RunSetResult
from plumbfall.uncertainty.intervals import tolerance_delta

__all__ = ["ways_view"]


def ways_view(result: RunSetResult, scale: Scale) -> TableView | None:
    """Return both ways side by side, the quoted one marked; ``None`` where nothing was drawn."""
    linear, drawn = result.linear, result.monte_carlo
    if linear is None or drawn is None:
        return None
    place = scale.pair(linear.value, linear.expanded).place - 1  # one digit more, to compare
    quoted = result.viscosity.method if result.viscosity is not None else ""

    def bound(value: float) -> str:
        return scale.bound(value, place) if math.isfinite(value) else "unlimited"

    def spread(value: float | None) -> str:
        return "does not exist" if value is None else scale.alone(value, 3)

    linear_row = (
        "linear (GUM)",
        bound(linear.low),
        bound(linear.high),
        spread(linear.u),
        NO_VALUE if linear.effective_dof is None else dof_text(linear.effective_dof),
        "quoted" if quoted == "linear" else "",
    )
    drawn_row = (
        f"Monte Carlo, {counted(drawn.draws, 'draw')}",
        bound(drawn.low),
        bound(drawn.high),
        spread(drawn.standard_uncertainty),
        NO_VALUE,
        "quoted" if quoted == "monte-carlo" else "",
    )
    shortest = (
        "Monte Carlo, shortest interval",
        bound(drawn.shortest_low),
        bound(drawn.shortest_high),
        NO_VALUE,
        NO_VALUE,
        "",
    )
    return TableView(
        caption="Linear against Monte Carlo: the viscosity's bounds by both ways",
        headings=(
            "Way", f"Lower bound / {scale.unit}", f"Upper bound / {scale.unit}",
            f"Standard uncertainty / {scale.unit}", "Effective degrees of freedom", "",
        ),
        kinds="tnnnnt",
        rows=(linear_row, drawn_row, shortest, _apart(linear, drawn, scale)),
        marks=("", "", "", "total"),
        terms=("linear", "monte-carlo", "degrees of freedom"),
        note=_lost(drawn),
    )  # fmt: skip


def _apart(linear: Measured, drawn: MonteCarloResult, scale: Scale) -> tuple[str, ...]:
    """Return how far the bounds are apart and how far they may be (JCGM 101:2008, 8)."""
    u = drawn.standard_uncertainty
    delta = tolerance_delta(linear.u if u is None else u)
    ends = ((linear.low, drawn.low), (linear.high, drawn.high))
    apart = [scale.alone(abs(one - other), 2) if math.isfinite(other) else NO_VALUE
             for one, other in ends]  # fmt: skip
    verdict = (
        "the linear bounds hold" if drawn.validated_linear else "the linear bounds do not hold"
    )
    allowed = f"{scale.alone(delta, 2)} {pretty_unit(scale.unit)} allowed"
    return ("apart by", *apart, allowed, NO_VALUE, verdict)


def _lost(drawn: MonteCarloResult) -> str:
    parts = []
    if drawn.undefined:
        parts.append(
            f"{counted(drawn.undefined, 'draw')} had no viscosity and count as outside the bounds."
        )
    if drawn.stable is False:
        parts.append("The draws were too few for bounds that stand.")
    return " ".join(parts)
