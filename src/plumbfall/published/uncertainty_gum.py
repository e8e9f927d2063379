"""Worked examples of the GUM (JCGM 100:2008) and of its Supplement 1 as far as it is linear."""

from __future__ import annotations

import math
from collections.abc import Callable
from functools import partial

import numpy as np
from numpy.typing import NDArray

from plumbfall.published.figure import (
    DEFINITION,
    FROM_MEMORY,
    SEEN_IN_PRINT,
    called,
    figures,
)
from plumbfall.published.statistics_data import mean_of, sd_of, u_of_mean
from plumbfall.report.rounding import round_pair
from plumbfall.uncertainty.coverage import coverage_factor
from plumbfall.uncertainty.linear import Propagation, propagate
from plumbfall.uncertainty.second_order import second_order

__all__ = ["FIGURES"]


def _combined(*contributions: float, dof: tuple[float, ...] | None = None) -> Propagation:
    return propagate(
        sensitivities=np.ones((1, len(contributions))),
        u=np.array(contributions),
        dof=None if dof is None else np.array(dof),
    )


def _u(*contributions: float) -> Callable[[], float]:
    return lambda: float(_combined(*contributions).u[0])


def _half_width(probability: float, *contributions: float) -> Callable[[], float]:
    def half_width() -> float:
        k = coverage_factor(dof=np.inf, probability=probability)
        return float(k * _combined(*contributions).u[0])

    return half_width


_END_GAUGE = (25.0, 9.7, 2.9, 16.6)
_END_GAUGE_DOF = (18.0, 25.6, 50.0, 2.0)
_COMPARISON = (5.8, 3.9, 6.7)
_COMPARISON_DOF = (24.0, 5.0, 8.0)


def _effective(contributions: tuple[float, ...], dof: tuple[float, ...]) -> float:
    return float(_combined(*contributions, dof=dof).effective_dof[0])


def _end_gauge_expanded() -> float:
    result = _combined(*_END_GAUGE, dof=_END_GAUGE_DOF)
    whole = np.floor(result.effective_dof[0])  # the GUM truncates here
    return float(coverage_factor(dof=whole, probability=0.99) * result.u[0])


_H1 = (
    *figures(
        "uncertainty",
        FROM_MEMORY,
        "JCGM 100:2008, H.1: end gauge; contributions 5.8, 3.9 and 6.7 nm of the comparison, 25, "
        "9.7, 2.9 and 16.6 nm of the whole: u and, at 99 %, t and the expanded uncertainty; nm",
        [
            ("gum.h1.comparison.u", "9.7", _u(*_COMPARISON)),
            ("gum.h1.u", "32", _u(*_END_GAUGE)),
            ("gum.h1.t99", "2.92", called(coverage_factor, dof=16, probability=0.99)),
            ("gum.h1.expanded", "93", _end_gauge_expanded),
        ],
    ),
    *figures(
        "uncertainty",
        FROM_MEMORY,
        "JCGM 100:2008, H.1: effective degrees of freedom of 5.8, 3.9 and 6.7 nm with 24, 5 and 8; "
        "allowed also 0.42, what the last digits of these three can make",
        [("gum.h1.comparison.dof", "25.6", partial(_effective, _COMPARISON, _COMPARISON_DOF))],
        allowance=0.42,
    ),
    *figures(
        "uncertainty",
        FROM_MEMORY,
        "JCGM 100:2008, H.1: effective degrees of freedom of 25, 9.7, 2.9 and 16.6 nm with 18, "
        "25.6, 50 and 2; allowed also 0.11, what the last digits of 9.7, 2.9 and 16.6 can make",
        [("gum.h1.dof", "16.7", partial(_effective, _END_GAUGE, _END_GAUGE_DOF))],
        allowance=0.11,
    ),
)


def _end_gauge(x: NDArray[np.float64]) -> NDArray[np.float64]:
    """H.1.1: length of an end gauge, nm, beside a standard at another temperature."""
    standard, difference, d_alpha, theta, alpha, d_theta = x
    return np.asarray(standard + difference - standard * (d_alpha * theta + alpha * d_theta))


def _second_order() -> float:
    found = second_order(
        _end_gauge,
        [50_000_623.0, 215.0, 0.0, -0.1, 11.5e-6, 0.0],
        [25.0, 9.7, 0.58e-6, 0.41, 1.2e-6, 0.029],
    )
    return math.nan if found is None else math.sqrt(found.first + found.second)


_H1_SECOND = figures(
    "uncertainty",
    FROM_MEMORY,
    "JCGM 100:2008, H.1.7: end gauge, u with the second-order terms, nm",
    [("gum.h1.second-order", "34", _second_order)],
)

_ZENER = tuple(10.0 + 1e-6 * v for v in (172, 116, 13, 144, 106, 31, 60, 125, 163, 41))
_H5 = figures(
    "uncertainty",
    FROM_MEMORY,
    "JCGM 100:2008, H.5: ten daily means of a voltage standard; their mean (V), standard deviation "
    "and that of the mean (uV)",
    [
        ("gum.h5.mean", "10.000097", partial(mean_of, _ZENER)),
        ("gum.h5.sd", "57", lambda: 1e6 * sd_of(_ZENER)),
        ("gum.h5.u", "18", lambda: 1e6 * u_of_mean(_ZENER)),
    ],
)

_SUPPLEMENT = figures(
    "uncertainty",
    FROM_MEMORY,
    "JCGM 101:2008, 9.2 to 9.4: what the GUM's own framework gives there. 9.2.2, 9.2.3: four "
    "inputs of u = 1; 9.2.4: one of 10; 9.3: masses of 0.050 and 0.020 mg; 9.4: 2 x1 u(x1) at x1 = "
    "0.010 and 0.050, in 1e-6; u and half of the 95 % interval",
    [
        ("s1.9.2.2.u", "2.0", _u(1, 1, 1, 1)),
        ("s1.9.2.2.half-width", "3.92", _half_width(0.95, 1, 1, 1, 1)),
        ("s1.9.2.4.u", "10.1", _u(1, 1, 1, 10)),
        ("s1.9.2.4.half-width", "19.9", _half_width(0.95, 1, 1, 1, 10)),
        ("s1.9.3.u", "0.0539", _u(0.050, 0.020)),
        ("s1.9.3.half-width", "0.1055", _half_width(0.95, 0.050, 0.020)),
        ("s1.9.4.0.010.u", "100", _u(1e6 * 0.02 * 0.005, 0.0)),
        ("s1.9.4.0.010.half-width", "196", _half_width(0.95, 1e6 * 0.02 * 0.005, 0.0)),
        ("s1.9.4.0.050.u", "500", _u(1e6 * 0.1 * 0.005, 0.0)),
        ("s1.9.4.0.050.half-width", "980", _half_width(0.95, 1e6 * 0.1 * 0.005, 0.0)),
    ],
)

_SHARED = figures(
    "uncertainty",
    DEFINITION,
    "mean of n drops with one shared error and one of their own, percent, by hand: sqrt(shared^2 + "
    "own^2/n)",
    [
        (f"shared.{shared}.{own}.{n}", printed, _u(shared, *(own / n for _ in range(n))))
        for shared, own, n, printed in (
            (0.6, 0.8, 5, "0.698570"),
            (0.6, 0.8, 10, "0.651153"),
            (0.6, 0.8, 30, "0.617522"),
            (0.2, 0.3, 10, "0.221359"),
            (1.5, 1.0, 10, "1.532971"),
        )
    ],
)

# --- clause 7: stating --------------------------------------------------------------------------

_STATED = (
    *figures(
        "uncertainty",
        SEEN_IN_PRINT,
        "JCGM 100:2008, 7.2.6: 10.057 62 ohm with u = 27 mohm is stated as 10.058, and u = 28.05 "
        "kHz as 28",
        [
            ("gum.7.2.6.value", "10.058", lambda: float(round_pair(10.05762, 0.027).value)),
            ("gum.7.2.6.u", "28", lambda: float(round_pair(1000.0, 28.05).u)),
        ],
    ),
    *figures(
        "uncertainty",
        FROM_MEMORY,
        "JCGM 100:2008, 7.2.4: coverage factor at 95 % and 9 degrees of freedom",
        [("gum.7.2.4", "2.26", called(coverage_factor, dof=9, probability=0.95))],
    ),
)

FIGURES = (*_H1, *_H1_SECOND, *_H5, *_SUPPLEMENT, *_SHARED, *_STATED)
