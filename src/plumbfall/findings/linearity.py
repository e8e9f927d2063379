"""Whether the linear bounds hold, where distributions were propagated too."""

from __future__ import annotations

from plumbfall.results import Finding
from plumbfall.run_sets.drawn import Drawn
from plumbfall.run_sets.outputs import Outputs

__all__ = ["linear_not_validated"]


def linear_not_validated(outputs: Outputs, drawn: Drawn, run_set: int) -> tuple[Finding, ...]:
    """Say by how much the linear bounds of a run set are off; empty where they are validated.

    References
    ----------
    JCGM 101:2008, 8.1.
    """
    failed = [
        quantity for quantity, validation in drawn.validations.items() if not validation.validated
    ]
    if not failed:
        return ()
    first = failed[0]
    linear, found = outputs.of(first), drawn.output(first)
    validation = drawn.validations[first]
    value = float(linear.value[run_set])
    if not drawn.replaces(first):
        share = 100 * found.undefined / drawn.found.draws
        return (
            Finding(
                code="linear-not-validated",
                severity="note",
                message=f"{share:.1f} % of the draws have no viscosity, so that Monte Carlo gives "
                "no bounds; the linear ones stand, unvalidated",
                remedy="measure the inputs with the largest shares of the uncertainty better",
            ),
        )
    apart = max(validation.d_low, validation.d_high)
    low = 100 * (found.low - float(linear.low[run_set])) / value
    high = 100 * (found.high - float(linear.high[run_set])) / value
    names = ", ".join(quantity.replace("_", " ") for quantity in failed)
    return (
        Finding(
            code="linear-not-validated",
            severity="note",
            statistic=apart / validation.delta if validation.delta else None,
            effect=apart / abs(value),
            message=f"Monte Carlo moves the lower linear bound by {low:+.2g} % of the value and "
            f"the upper by {high:+.2g} %, more than the {100 * validation.delta / value:.2g} % "
            f"that may be: its bounds are quoted ({names})",
            remedy="nothing is wrong with the data; quote the bounds, not a coverage factor",
        ),
    )
