"""A certificate's points joined by a law of viscosity and temperature.

Each law also says how much of every point's error it passes on, which the uncertainty needs.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.errors import InputError
from plumbfall.physics.ranges import check_range
from plumbfall.physics.temperature_laws import (
    andrade_slope,
    andrade_viscosity,
    vogel_slope,
    vogel_viscosity,
    walther_ordinate,
    walther_viscosity_of_ordinate,
)

__all__ = ["Interpolated", "by_andrade", "by_vogel", "by_walther"]

Numbers = NDArray[np.float64]

STEPS = 100
LN10 = float(np.log(10.0))


@dataclass(frozen=True, slots=True)
class Interpolated:
    """A viscosity between points of a certificate.

    ``viscosity`` is in Pa.s, ``slope`` is d ln(viscosity)/dT in 1/K, and ``weights``, shape
    (points,), are d ln(viscosity)/d ln(viscosity of each point).
    """

    law: str
    viscosity: float
    slope: float
    weights: Numbers


def by_andrade(temperatures: Numbers, viscosities: Numbers, temperature: float) -> Interpolated:
    """Interpolate between two points by Andrade's law.

    Parameters
    ----------
    temperatures : array, shape (2,) [K]
        Where the points hold.
    viscosities : array, shape (2,) [Pa.s]
        Viscosity there.
    temperature : float [K]
        Where it is wanted.

    Returns
    -------
    Interpolated
        Exact at the points.
    """
    inverse = 1.0 / temperatures
    share = (1.0 / temperature - inverse[1]) / (inverse[0] - inverse[1])
    logs = np.log(viscosities)
    slope = (logs[0] - logs[1]) / (inverse[0] - inverse[1])
    intercept = logs[0] - slope * inverse[0]
    return Interpolated(
        law="andrade",
        viscosity=float(
            andrade_viscosity(intercept=intercept, slope=slope, temperature=temperature)
        ),
        slope=float(andrade_slope(slope=slope, temperature=temperature)),
        weights=np.array([share, 1.0 - share]),
    )


def by_walther(
    *,
    temperatures: Numbers,
    viscosities: Numbers,
    densities: Numbers,
    temperature: float,
    density: float,
    density_slope: float,
) -> Interpolated:
    """Interpolate between two points by the double-logarithmic law, of kinematic viscosity.

    Parameters
    ----------
    temperatures : array, shape (2,) [K]
        Where the points hold.
    viscosities : array, shape (2,) [Pa.s]
        Viscosity there.
    densities : array, shape (2,) [kg/m3]
        Density of the liquid there.
    temperature : float [K]
        Where the viscosity is wanted.
    density : float [kg/m3]
        Density of the liquid there.
    density_slope : float [1/K]
        d ln(density)/dT there.

    Returns
    -------
    Interpolated
        Exact at the points: the ordinate is inverted by Newton's method, not by the standard's
        own formula, which is off by up to 2e-4 between 0.3 and 2 mm2/s.

    Raises
    ------
    PhysicsRangeError
        Outside 0.21 to 2e7 mm2/s, where the chart ends.

    References
    ----------
    ASTM D341.
    """
    kinematic = viscosities / densities
    check_range(
        kinematic * 1e6,
        low=0.21,
        high=2e7,
        variable="kinematic viscosity in mm2/s",
        where="the viscosity-temperature chart (ASTM D341)",
    )
    ordinates = np.log10(np.log10(walther_ordinate(kinematic_viscosity=kinematic)))
    logs = np.log10(temperatures)
    share = (np.log10(temperature) - logs[1]) / (logs[0] - logs[1])
    ordinate = share * ordinates[0] + (1.0 - share) * ordinates[1]
    found = _kinematic(10.0 ** (10.0**ordinate))
    stretch = _log_slope(found)
    steepness = (ordinates[0] - ordinates[1]) / (logs[0] - logs[1]) / (temperature * LN10)
    return Interpolated(
        law="walther",
        viscosity=float(found * density),
        slope=float(steepness / stretch + density_slope),
        weights=np.array([share, 1.0 - share]) * _log_slope(kinematic) / stretch,
    )


def by_vogel(temperatures: Numbers, viscosities: Numbers, temperature: float) -> Interpolated:
    """Interpolate between three or more points by the law of Vogel, Fulcher and Tammann.

    Parameters
    ----------
    temperatures : array, shape (points,) [K]
        Where the points hold; three give the law, more are fitted by least squares of the
        logarithm.
    viscosities : array, shape (points,) [Pa.s]
        Viscosity there.
    temperature : float [K]
        Where it is wanted.

    Returns
    -------
    Interpolated
        Exact at the points where there are three.

    Raises
    ------
    InputError
        Where no such law passes through the points.
    """
    middle = float(temperatures.mean())
    offsets, logs = temperatures - middle, np.log(viscosities)
    # (y - a)(s - c) = b is linear in a, c and b - a c: exact for three points, a start for more
    design = np.column_stack([offsets, logs, np.ones_like(offsets)])
    a, c, rest = np.linalg.lstsq(design, logs * offsets, rcond=None)[0]
    b = rest + a * c
    sensitivity: Numbers = np.zeros((3, len(logs)))
    for _ in range(STEPS):
        distance = offsets - c
        if not (np.isfinite([a, b, c]).all() and (distance > 0).all() and b > 0):
            raise InputError(
                "no law of Vogel passes through the certified values",
                remedy="compare each temperature and viscosity with the certificate",
            )
        fitted = np.column_stack([np.ones_like(offsets), 1.0 / distance, b / distance**2])
        sensitivity = np.asarray(np.linalg.pinv(fitted), dtype=float)
        step = sensitivity @ (logs - a - b / distance)
        a, b, c = np.array([a, b, c]) + step
        if np.abs(fitted @ step).max() < 1e-13:
            break
    distance = offsets - c
    residuals = logs - a - b / distance
    bend: Numbers = np.zeros((3, 3))  # second derivatives of the law, weighed by what the fit left
    bend[1, 2] = bend[2, 1] = residuals @ distance**-2
    bend[2, 2] = residuals @ (2 * b / distance**3)
    bent = np.eye(3) - sensitivity @ sensitivity.T @ bend
    sensitivity = np.asarray(np.linalg.solve(bent, sensitivity), dtype=float)
    distance = temperature - middle - c
    here = np.array([1.0, 1.0 / distance, b / distance**2])
    return Interpolated(
        law="vogel",
        viscosity=float(
            vogel_viscosity(
                intercept=a, slope=b, vogel_temperature=middle + c, temperature=temperature
            )
        ),
        slope=float(vogel_slope(slope=b, vogel_temperature=middle + c, temperature=temperature)),
        weights=here @ sensitivity,
    )


def _kinematic(ordinate: float) -> float:
    """Invert the ordinate of ASTM D341 to the last digit."""
    found = float(walther_viscosity_of_ordinate(ordinate=ordinate))
    for _ in range(STEPS):
        missing = ordinate - float(walther_ordinate(kinematic_viscosity=found))
        step = missing / float(_ordinate_slope(found))
        found += step
        if abs(step) < 1e-15 * found:
            break
    return found


def _ordinate_slope(kinematic: float | Numbers) -> Numbers:
    """Return dZ/dnu of the ordinate, nu in m2/s."""
    nu = np.asarray(kinematic) * 1e6
    return 1e6 * (1.0 + np.exp(-1.47 - 1.84 * nu - 0.51 * nu**2) * (-1.84 - 1.02 * nu))


def _log_slope(kinematic: float | Numbers) -> Numbers:
    """Return d(log log Z)/d ln nu, logarithms to base 10 but for the last."""
    ordinate = np.asarray(walther_ordinate(kinematic_viscosity=kinematic))
    by_ordinate = 1.0 / (LN10 * np.log(ordinate) * ordinate)
    return np.asarray(kinematic * _ordinate_slope(kinematic) * by_ordinate)
