"""What a calibration itself finds: certificates that had expired, and constants that are none."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence

from plumbfall.bench.records import Bench
from plumbfall.calibration.calibration_sets import SetOf
from plumbfall.calibration.certified import is_expired
from plumbfall.calibration.constancy import Constancy
from plumbfall.results import Finding

__all__ = ["VARIES_LEVEL", "expired", "varying"]

VARIES_LEVEL = 0.01
"""Significance below which a constant is said to vary (common practice, no source)."""


def expired(bench: Bench, sets: Sequence[SetOf], date: dt.date | None) -> list[Finding]:
    """Say which certificates had expired on the day of the drops."""
    names = dict.fromkeys(one.certified.reference for one in sets)
    return [
        Finding(
            code="reference-expired",
            severity="warning",
            message=f"the certificate of reference {name} held until "
            f"{bench.references[name].expires}, and the drops were made on {date}",
            remedy="calibrate with a liquid whose certificate holds",
        )
        for name in names
        if date is not None and is_expired(bench.references[name], date)
    ]


def varying(steady: Constancy) -> list[Finding]:
    """Say that the sets do not have one constant."""
    if steady.least_p_value >= VARIES_LEVEL:
        return []
    trends = [trend for trend in steady.trends if trend.p_value < VARIES_LEVEL]
    if trends:
        worst = min(trends, key=lambda trend: trend.p_value)
        what = "the fall time" if worst.along == "time" else "the Reynolds number"
        message = (
            f"the constant changes by {100 * worst.change:.2g} % as {what} goes from its least to "
            "its most, more than its uncertainties explain"
        )
        remedy = (
            "use the constant near each time it was found at alone, or a slower ball: inertia, a "
            "timing bias or a wrong certificate row makes it change"
        )
        effect, statistic, p = abs(worst.change), worst.slope / worst.u, worst.p_value
    else:
        message = "the sets have different constants, more than their uncertainties explain"
        remedy = (
            "look for the set that stands out, and its temperature, ball, cleanness and "
            "certificate row; repeat it"
        )
        effect, statistic, p = None, steady.chi_squared, steady.p_value
    return [
        Finding(
            code="constant-varies",
            severity="warning",
            message=message,
            remedy=remedy,
            statistic=statistic,
            p_value=p,
            effect=effect,
        )
    ]
