"""What is decided of a bias, and in what words."""

from __future__ import annotations

from plumbfall.calibration.bias import Bias
from plumbfall.calibration.decisions import ACCEPT, REJECT, chance, is_capable

__all__ = ["FAILED", "PASSED", "UNDECIDED", "by_score", "by_tolerance"]

PASSED, FAILED, UNDECIDED = "passed", "failed", "undecided"


def by_tolerance(bias: Bias, tolerance: float, probability: float) -> tuple[str, str]:
    """Decide by the probability that the bias lies within the tolerance; return also why."""
    told = (
        f"the bias of {_percent(bias.value)} lies within {_percent(tolerance, False)} either way "
        f"with a probability of {chance(probability)}"
    )
    if probability >= ACCEPT:
        return PASSED, f"{told}, at least {100 * ACCEPT:g} %"
    if probability <= REJECT:
        return FAILED, f"{told}, at most {100 * REJECT:g} %"
    told += f", between {100 * REJECT:g} and {100 * ACCEPT:g} %"
    if not is_capable(low=-tolerance, high=tolerance, u=bias.u, dof=bias.dof):
        told += (
            f"; no bias could pass, as its standard uncertainty of {_percent(bias.u, False)} is "
            "too large for the tolerance: the measurement is not capable"
        )
    return UNDECIDED, told


def by_score(score: float) -> tuple[str, str]:
    """Decide by E_n, which is satisfactory within 1; return also why."""
    if abs(score) <= 1:
        return PASSED, f"E_n of {score:.2f} is within 1"
    return FAILED, f"E_n of {score:.2f} is beyond 1"


def _percent(ratio: float, signed: bool = True) -> str:
    return f"{100 * ratio:{'+' if signed else ''}.3g} %"
