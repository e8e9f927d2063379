"""GUM H.2: resistance, reactance and impedance from readings that were taken together."""

from __future__ import annotations

from collections.abc import Callable
from functools import cache

import numpy as np
from numpy.typing import NDArray

from plumbfall.published.figure import FROM_MEMORY, SEEN_IN_PRINT, figures
from plumbfall.uncertainty.linear import Propagation, propagate
from plumbfall.uncertainty.type_a import Means, means_of_series

__all__ = ["FIGURES"]

# V in V, I in A, phase in rad (JCGM 100:2008, table H.2)
_READINGS = (
    (5.007, 4.994, 5.005, 4.990, 4.999),
    (19.663e-3, 19.639e-3, 19.640e-3, 19.685e-3, 19.678e-3),
    (1.0456, 1.0438, 1.0468, 1.0428, 1.0433),
)
_VOLTAGE, _CURRENT, _PHASE = range(3)


@cache
def _means() -> Means:
    return means_of_series(_READINGS)


@cache
def _outputs() -> tuple[NDArray[np.float64], Propagation]:
    """R, X and Z with their propagation: the example's equations and partial derivatives."""
    means = _means()
    voltage, current, phase = means.mean
    cos, sin, z = np.cos(phase), np.sin(phase), voltage / current
    sensitivities = np.array(
        [
            [cos / current, -z * cos / current, -z * sin],
            [sin / current, -z * sin / current, z * cos],
            [1 / current, -z / current, 0.0],
        ]
    )
    return z * np.array([cos, sin, 1.0]), propagate(
        sensitivities=sensitivities, u=means.u, correlation=means.correlation
    )


def _mean(quantity: int, scale: float = 1.0) -> Callable[[], float]:
    return lambda: scale * float(_means().mean[quantity])


def _mean_u(quantity: int, scale: float = 1.0) -> Callable[[], float]:
    return lambda: scale * float(_means().u[quantity])


def _input_r(one: int, other: int) -> Callable[[], float]:
    return lambda: float(_means().correlation[one, other])


def _value(output: int) -> Callable[[], float]:
    return lambda: float(_outputs()[0][output])


def _u(output: int) -> Callable[[], float]:
    return lambda: float(_outputs()[1].u[output])


def _r(one: int, other: int) -> Callable[[], float]:
    def correlation() -> float:
        covariance = _outputs()[1].covariance()
        u = np.sqrt(np.diag(covariance))
        return float(covariance[one, other] / (u[one] * u[other]))

    return correlation


_INPUTS = (
    *figures(
        "uncertainty",
        SEEN_IN_PRINT,
        "JCGM 100:2008, H.2, as quoted in the documentation of a library of GUM calculations: "
        "means of voltage (V), current (mA) and phase (rad), and their u",
        [
            ("gum.h2.voltage", "4.999", _mean(_VOLTAGE)),
            ("gum.h2.voltage.u", "0.0032", _mean_u(_VOLTAGE)),
            ("gum.h2.current", "19.661", _mean(_CURRENT, 1e3)),
            ("gum.h2.current.u", "0.0095", _mean_u(_CURRENT, 1e3)),
            ("gum.h2.phase", "1.04446", _mean(_PHASE)),
            ("gum.h2.phase.u", "0.00075", _mean_u(_PHASE)),
        ],
    ),
    *figures(
        "uncertainty",
        SEEN_IN_PRINT,
        "JCGM 100:2008, H.2, as quoted there: correlation of the means",
        [
            ("gum.h2.r.voltage-current", "-0.36", _input_r(_VOLTAGE, _CURRENT)),
            ("gum.h2.r.voltage-phase", "0.86", _input_r(_VOLTAGE, _PHASE)),
            ("gum.h2.r.current-phase", "-0.65", _input_r(_CURRENT, _PHASE)),
        ],
    ),
)

_OUTPUTS = (
    *figures(
        "uncertainty",
        FROM_MEMORY,
        "JCGM 100:2008, H.2: resistance, reactance, impedance, ohm, and their correlation",
        [
            ("gum.h2.resistance", "127.732", _value(0)),
            ("gum.h2.reactance", "219.847", _value(1)),
            ("gum.h2.impedance", "254.260", _value(2)),
            ("gum.h2.r.resistance-reactance", "-0.588", _r(0, 1)),
            ("gum.h2.r.resistance-impedance", "-0.485", _r(0, 2)),
            ("gum.h2.r.reactance-impedance", "0.993", _r(1, 2)),
        ],
    ),
    *figures(
        "uncertainty",
        FROM_MEMORY,
        "JCGM 100:2008, H.2: u of resistance, reactance, impedance, ohm; allowed half a last digit "
        "more, as the u of the inputs are printed with two digits",
        [
            ("gum.h2.resistance.u", "0.071", _u(0)),
            ("gum.h2.reactance.u", "0.295", _u(1)),
            ("gum.h2.impedance.u", "0.236", _u(2)),
        ],
        allowance=5e-4,
    ),
)

FIGURES = (*_INPUTS, *_OUTPUTS)
