"""GUM H.3, a line through readings; H.5, a scatter split in two; E.1, how well one is known."""

from __future__ import annotations

import math
from collections.abc import Callable
from functools import cache, partial

import numpy as np

from plumbfall.calibration.chart_constants import chart_constants
from plumbfall.findings.significance import f_p_value
from plumbfall.published.figure import FROM_MEMORY, called, figures
from plumbfall.published.statistics_anova import analysed
from plumbfall.uncertainty.anova import OneWay
from plumbfall.uncertainty.coverage import joint_coverage_factor
from plumbfall.uncertainty.least_squares import LeastSquares, fit_linear
from plumbfall.uncertainty.linear import Propagation, propagate

__all__ = ["FIGURES"]

AREA = "uncertainty"

# --- H.3: corrections of a thermometer against its readings, degC ---------------------------------

_READINGS = (
    21.521, 22.012, 22.512, 23.003, 23.507, 23.999, 24.513, 25.002, 25.503, 26.010, 26.511,
)  # fmt: skip
_CORRECTIONS = (
    -0.171, -0.169, -0.166, -0.159, -0.164, -0.165, -0.156, -0.157, -0.159, -0.161, -0.160,
)  # fmt: skip


@cache
def _line() -> LeastSquares:
    """Fit the line y1 + y2 (t - 20 degC) to values that all weigh the same."""
    design = np.stack([np.ones(11), np.array(_READINGS) - 20.0], axis=1)
    return fit_linear(design, _CORRECTIONS, np.eye(11))


def _parameter(place: int) -> Callable[[], float]:
    return lambda: float(_line().parameters[place])


def _parameter_u(place: int) -> Callable[[], float]:
    return lambda: float(_line().scaled().u[place])


def _scatter() -> float:
    return math.sqrt(_line().chi_squared / _line().dof)


def _r() -> float:
    line = _line().scaled()
    return float(line.covariance[0, 1] / np.prod(line.u))


def _at_30() -> Propagation:
    line = _line().scaled()
    return propagate(
        sensitivities=np.array([[1.0, 10.0]]),
        u=line.u,
        correlation=line.covariance / np.outer(line.u, line.u),
    )


_H3 = figures(
    AREA,
    FROM_MEMORY,
    "JCGM 100:2008, H.3: line through the corrections of a thermometer; intercept at 20 degC and "
    "slope, their u and correlation, scatter, correction at 30 degC and its u; degC",
    [
        ("gum.h3.intercept", "-0.1712", _parameter(0)),
        ("gum.h3.intercept.u", "0.0029", _parameter_u(0)),
        ("gum.h3.slope", "0.00218", _parameter(1)),
        ("gum.h3.slope.u", "0.00067", _parameter_u(1)),
        ("gum.h3.r", "-0.930", _r),
        ("gum.h3.scatter", "0.0035", _scatter),
        ("gum.h3.at-30", "-0.1494", lambda: float(_line().parameters @ [1.0, 10.0])),
        ("gum.h3.at-30.u", "0.0041", lambda: float(_at_30().u[0])),
    ],
)

# --- H.5: ten days of five readings of a voltage standard, uV above 10 V --------------------------

_DAYS = (172.0, 116.0, 13.0, 144.0, 106.0, 31.0, 60.0, 125.0, 163.0, 41.0)
_WITHIN = (60.0, 77.0, 111.0, 101.0, 67.0, 93.0, 80.0, 73.0, 88.0, 86.0)


@cache
def _voltage() -> OneWay:
    """Analyse the days; of one's readings only mean and standard deviation matter."""
    shape = np.array([-1.0, -1.0, 0.0, 1.0, 1.0])  # mean 0, standard deviation 1
    days = zip(_DAYS, _WITHIN, strict=True)
    return analysed(tuple(tuple(mean + s * shape) for mean, s in days))


def _between_sd() -> float:
    found = _voltage()
    return float(np.sqrt(found.between[0] / found.between_dof[0]))


_H5 = (
    *figures(
        AREA,
        FROM_MEMORY,
        "JCGM 100:2008, H.5: scatter of the days' means times the root of five, and of readings "
        "within a day, uV",
        [
            ("gum.h5.anova.between", "128", _between_sd),
            ("gum.h5.anova.within", "85", lambda: float(_voltage().within_sd[0])),
        ],
    ),
    *figures(
        AREA,
        FROM_MEMORY,
        "JCGM 100:2008, H.5: F of days against readings; allowed also 0.012, as print divides "
        "5 x 57^2 by 85^2, rounded to whole uV",
        [("gum.h5.anova.F", "2.25", lambda: float(_voltage().f[0]))],
        allowance=0.012,
    ),
    *figures(
        AREA,
        FROM_MEMORY,
        "JCGM 100:2008, H.5: the limits of F for 9 and 40 degrees of freedom, 2.12 and 2.45, are "
        "passed by chance with 5 and 2.5 %",
        [
            ("gum.h5.anova.F95", "5.0", lambda: _chance(2.12)),
            ("gum.h5.anova.F975", "2.5", lambda: _chance(2.45)),
        ],
    ),
)


def _chance(f: float) -> float:
    return 100 * float(f_p_value(f=f, dof=9, dof_within=40))


# --- E.4.3 and JCGM 102 ---------------------------------------------------------------------------


def _doubt(n: int) -> float:
    # limits of a chart of standard deviations lie three of their own away from their mean
    return 100 * (chart_constants(n).B4 - 1) / 3


_E1 = figures(
    AREA,
    FROM_MEMORY,
    "JCGM 100:2008, table E.1: relative standard deviation of a standard deviation of n readings, "
    "percent, by the factor B4 of a chart of standard deviations: (B4 - 1)/3",
    [
        (f"gum.e1.{n}", printed, partial(_doubt, n))
        for n, printed in (
            (2, "76"), (3, "52"), (4, "42"), (5, "36"), (10, "24"), (20, "16"), (30, "13"),
            (50, "10"),
        )
    ],
)  # fmt: skip

_JOINT = figures(
    AREA,
    FROM_MEMORY,
    "JCGM 102:2011, 6.5: coverage factor at 95 % of an ellipse for one, two and three results",
    [
        (f"jcgm102.{n}", printed, called(joint_coverage_factor, outputs=n, probability=0.95))
        for n, printed in ((1, "1.96"), (2, "2.45"), (3, "2.80"))
    ],
)

FIGURES = (*_H3, *_H5, *_E1, *_JOINT)
