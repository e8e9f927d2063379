"""Tables of statistics: Student's t, and Grubbs' tests for one outlier and for two."""

from __future__ import annotations

import math

from plumbfall.findings.grubbs import grubbs_critical, grubbs_pair_critical
from plumbfall.published.figure import FROM_MEMORY, called, figures
from plumbfall.uncertainty.coverage import coverage_factor

__all__ = ["FIGURES"]

# One, two and three standard deviations of a normal distribution: the table's own note says that
# its columns 68.27, 95.45 and 99.73 % are these.
_PROBABILITIES = {
    "68.27": 0.682689492137086,
    "90": 0.90,
    "95": 0.95,
    "95.45": 0.954499736103642,
    "99": 0.99,
    "99.73": 0.997300203936740,
}
_TABLE_G2 = {
    1: "1.84 6.31 12.71 13.97 63.66 235.80",
    2: "1.32 2.92 4.30 4.53 9.92 19.21",
    3: "1.20 2.35 3.18 3.31 5.84 9.22",
    4: "1.14 2.13 2.78 2.87 4.60 6.62",
    5: "1.11 2.02 2.57 2.65 4.03 5.51",
    7: "1.08 1.89 2.36 2.43 3.50 4.53",
    10: "1.05 1.81 2.23 2.28 3.17 3.96",
    16: "1.03 1.75 2.12 2.17 2.92 3.54",
    20: "1.03 1.72 2.09 2.13 2.85 3.42",
    50: "1.01 1.68 2.01 2.05 2.68 3.16",
    math.inf: "1.000 1.645 1.960 2.000 2.576 3.000",
}

_STUDENT = figures(
    "statistics",
    FROM_MEMORY,
    "JCGM 100:2008, table G.2: Student's t by degrees of freedom and percent",
    [
        (
            f"gum.g2.{dof}.{percent}",
            printed,
            called(coverage_factor, dof=dof, probability=_PROBABILITIES[percent]),
        )
        for dof, row in _TABLE_G2.items()
        for percent, printed in zip(_PROBABILITIES, row.split(), strict=True)
    ],
)

_TWO_SIDED = figures(
    "statistics",
    FROM_MEMORY,
    "ISO 5725-2:1994, table 5: Grubbs' test for one outlier, by values and percent (two-sided); "
    "allowed half a last digit more, as the table is known to be off by one in places",
    [
        (
            f"grubbs.two-sided.{n}.{percent}",
            printed,
            called(grubbs_critical, n=n, level=percent / 100),
        )
        for n, one, five in (
            (3, "1.155", "1.155"),
            (4, "1.496", "1.481"),
            (5, "1.764", "1.715"),
            (6, "1.973", "1.887"),
            (7, "2.139", "2.020"),
            (8, "2.274", "2.126"),
            (10, "2.482", "2.290"),
            (15, "2.806", "2.549"),
            (20, "3.001", "2.709"),
        )
        for percent, printed in ((1, one), (5, five))
    ],
    allowance=5e-4,
)

_ONE_SIDED = figures(
    "statistics",
    FROM_MEMORY,
    "Grubbs 1969, Technometrics 11, 1, and ASTM E178: test for one outlier, by values and percent "
    "(one-sided); allowed half a last digit more, as the table is known to be off by one in places",
    [
        (
            f"grubbs.one-sided.{n}.{percent}",
            printed,
            called(grubbs_critical, n=n, level=2 * percent / 100),
        )
        for n, five, one in (
            (5, "1.672", "1.749"),
            (8, "2.032", "2.221"),
            (10, "2.176", "2.410"),
            (20, "2.557", "2.884"),
        )
        for percent, printed in ((5, five), (1, one))
    ],
    allowance=5e-4,
)

_PAIR = figures(
    "statistics",
    FROM_MEMORY,
    "ISO 5725-2:1994, table 5: Grubbs' test for two outliers on one side, lower values by values "
    "and percent (two-sided); allowed half a last digit more, as the table is known to be off by "
    "one in places",
    [
        (
            f"grubbs.pair.{n}.{percent}",
            printed,
            called(grubbs_pair_critical, n=n, level=percent / 100),
        )
        for n, one, five in (
            (5, "0.0018", "0.0090"),
            (6, "0.0116", "0.0349"),
            (7, "0.0308", "0.0708"),
            (8, "0.0563", "0.1101"),
            (10, "0.1150", "0.1864"),
        )
        for percent, printed in ((1, one), (5, five))
    ],
    allowance=5e-5,
)

FIGURES = (*_STUDENT, *_TWO_SIDED, *_ONE_SIDED, *_PAIR)
