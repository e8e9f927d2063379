"""Scores, conformity under uncertainty, precision limits and Cochran's test."""

from __future__ import annotations

from plumbfall.calibration.decisions import (
    conformance_probability,
    consumers_risk_at_limit,
    guard_factor,
)
from plumbfall.calibration.precision import (
    cochran_critical,
    critical_range,
    repeatability_limit,
)
from plumbfall.calibration.scores import e_n, zeta_score
from plumbfall.published.figure import (
    DEFINITION,
    FROM_MEMORY,
    SEEN_IN_PRINT,
    called,
    figures,
)

__all__ = ["FIGURES"]

AREA = "statistics"

_SCORES = figures(
    AREA,
    DEFINITION,
    "ISO 13528, definitions of E_n and zeta: 1.012 with U 0.010 against 1.000 with U 0.003, k = 2",
    [
        (
            "iso13528.e_n",
            "1.1494",
            called(e_n, value=1.012, expanded=0.010, reference_value=1.0, reference_expanded=0.003),
        ),
        (
            "iso13528.zeta",
            "2.2988",
            called(zeta_score, value=1.012, u=0.005, reference_value=1.0, reference_u=0.0015),
        ),
    ],
)

_GUARD = figures(
    AREA,
    FROM_MEMORY,
    "JCGM 106:2012, table 1: z for a one-sided conformance probability",
    [
        (f"jcgm106.z.{percent}", printed, called(guard_factor, probability=percent / 100))
        for percent, printed in (
            (80, "0.84"),
            (90, "1.28"),
            (95, "1.64"),
            (99, "2.33"),
            (99.9, "3.09"),
        )
    ],
)

_CONFORMITY = (
    *figures(
        AREA,
        FROM_MEMORY,
        "JCGM 106:2012, worked example of a breakdown voltage: -5.47 V, u = 0.05 V, limit -5.40 V",
        [
            (
                "jcgm106.zener",
                "0.92",
                called(conformance_probability, value=-5.47, u=0.05, high=-5.40),
            )
        ],
    ),
    *figures(
        AREA,
        FROM_MEMORY,
        "JCGM 106:2012, 8.3: risk at the acceptance limit behind a guard band of U, in percent",
        [("jcgm106.guard-of-U", "2.3", called(consumers_risk_at_limit, guard=2.0, scale=100.0))],
    ),
)

# f(n) for 2 to 10 values
_FACTORS = ("2.8", "3.3", "3.6", "3.9", "4.0", "4.2", "4.3", "4.4", "4.5")

_RANGES = (
    *figures(
        AREA,
        SEEN_IN_PRINT,
        "ISO 5725-6: repeatability limit over the repeatability standard deviation",
        [("iso5725-6.limit", "2.8", called(repeatability_limit, sd=1.0))],
    ),
    *figures(
        AREA,
        FROM_MEMORY,
        "ISO 5725-6, table 1: critical range factor f(n)",
        [
            (f"iso5725-6.f.{n}", printed, called(critical_range, sd=1.0, n=n))
            for n, printed in zip(
                range(2, 11),
                ["2.8", "3.3", "3.6", "3.9", "4.0", "4.2", "4.3", "4.4", "4.5"],
                strict=True,
            )
        ],
    ),
    *figures(
        AREA,
        DEFINITION,
        "range of two normal values at 95 %: 1.959964 times the root of 2",
        [("range.of-two", "2.771808", called(critical_range, sd=1.0, n=2))],
    ),
)

_COCHRAN = figures(
    AREA,
    FROM_MEMORY,
    "ISO 5725-2:1994, table 4: Cochran's test, by groups, values and percent; allowed half a last "
    "digit more",
    [
        (
            f"cochran.{groups}.{n}.{percent}",
            printed,
            called(cochran_critical, groups=groups, n=n, level=percent / 100),
        )
        for groups, n, one, five in ((10, 2, "0.718", "0.602"), (5, 3, "0.788", "0.684"))
        for percent, printed in ((1, one), (5, five))
    ],
    allowance=5e-4,
)

FIGURES = (*_SCORES, *_GUARD, *_CONFORMITY, *_RANGES, *_COCHRAN)
