"""How much later a ball released from rest passes a depth than one that fell at full speed."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.polynomial import chebyshev
from numpy.typing import NDArray

from plumbfall.physics.numeric import Numeric
from plumbfall.physics.tables import shipped_table

__all__ = [
    "RUN_IN_DENSITY_RATIO_LIMITS",
    "RUN_IN_ERROR",
    "RUN_IN_FLOOR",
    "RUN_IN_HIGHEST_REYNOLDS",
    "RUN_IN_RATIO_LIMITS",
    "run_in_delay",
    "run_in_delay_and_slope",
]

Array = NDArray[np.float64]

RUN_IN_RATIO_LIMITS = (0.01, 0.4)
"""Diameter ratios between which starts are known."""
RUN_IN_HIGHEST_REYNOLDS = 30.0
"""Largest terminal Reynolds number of which starts are known."""
RUN_IN_DENSITY_RATIO_LIMITS = (1.1, 15.0)
"""Ball densities over that of the liquid between which starts are known."""

RUN_IN_ERROR, RUN_IN_FLOOR = 0.15, 1.5e-4
"""Stated error of a timing's bias: a part of the bias, or of the transit where that is more."""

_SCREENING = 20.0
_ADDED = 0.5
_ROUNDING = 1e-12  # a limit asked for is within the range however it was rounded
_DEPTH_DEGREE = 12
_BLOCK = 4096  # drops at a time, so that the work stays in the processor's cache


@dataclass(frozen=True)
class _Starts:
    """The table as a polynomial.

    ``series`` holds, over Chebyshev series in the three scaled variables (ratio and Reynolds
    number taken together, density), ln T and the powers of ln G over the scaled ln Z, lowest
    first; shape (ratio x Reynolds, density x (1 + powers)).
    """

    series: Array
    terms: tuple[int, int, int]
    ratio_ends: Array
    density_ends: Array
    depth_ends: Array

    def at(self, ratio: Array, reynolds: Array, density: Array) -> Array:
        """Return ln T and the powers of ln G, shape (1 + powers, drops)."""
        found = np.empty((self.series.shape[1] // self.terms[2], ratio.size))
        for start in range(0, ratio.size, _BLOCK):
            part = slice(start, start + _BLOCK)
            found[:, part] = self._block(ratio[part], reynolds[part], density[part])
        return found

    def _block(self, ratio: Array, reynolds: Array, density: Array) -> Array:
        odds = ratio / (1.0 - ratio)
        scale = _SCREENING * odds
        highest = np.log1p((RUN_IN_HIGHEST_REYNOLDS / scale) ** 2)
        by_ratio = _chebyshev(_scaled(np.log(odds), self.ratio_ends), self.terms[0])
        screened = 2.0 * np.log1p((reynolds / scale) ** 2) / highest - 1.0
        by_reynolds = _chebyshev(screened, self.terms[1])
        by_density = _chebyshev(_scaled(np.log(density + _ADDED), self.density_ends), self.terms[2])
        both = (by_ratio[:, None] * by_reynolds).reshape(-1, ratio.size)
        partial = (self.series.T @ both).reshape(self.terms[2], -1, ratio.size)
        found: Array = by_density[0] * partial[0]
        for term, part in zip(by_density[1:], partial[1:], strict=True):
            part *= term
            found += part
        return found

    def log_shape(self, powers: Array, log_depth: Array) -> tuple[Array, Array]:
        """Return ln G and its slope by ln Z.

        Both are continued straight beyond the depths of the table, at first as in free fall.
        """
        place = _scaled(log_depth, self.depth_ends)
        inside = np.clip(place, -1.0, 1.0)
        value: Array = powers[-1] * inside
        slope: Array = np.broadcast_to(powers[-1], value.shape).copy()
        for power in powers[-2:0:-1]:
            value += power
            slope *= inside
            slope += value
            value *= inside
        value += powers[0]
        if (beyond := place != inside).any():
            free_fall = 0.25 * (self.depth_ends[1] - self.depth_ends[0])
            last = np.tensordot(np.arange(len(powers)), powers, axes=1)
            outside = np.where(place < inside, free_fall, last)
            value = np.where(beyond, value + (place - inside) * outside, value)
            slope = np.where(beyond, outside, slope)
        return value, slope * (2.0 / (self.depth_ends[1] - self.depth_ends[0]))


def _scaled(values: Array, ends: Array) -> Array:
    """Return values with the ends of their range taken to -1 and 1."""
    scaled: Array = (values - ends[0]) * (2.0 / (ends[1] - ends[0])) - 1.0
    return scaled


def _chebyshev(x: Array, count: int) -> Array:
    """First Chebyshev polynomials, shape (count, drops)."""
    terms = np.empty((count, x.size))
    terms[0], terms[1] = 1.0, x
    twice = 2.0 * x
    for n in range(2, count):
        np.multiply(twice, terms[n - 1], out=terms[n])
        terms[n] -= terms[n - 2]
    return terms


@cache
def _starts() -> _Starts:
    arrays = shipped_table("start_up").arrays
    log_depth = np.log(arrays["scaled_depth"])
    depth_ends = log_depth[[0, -1]]
    vander = chebyshev.chebvander(_scaled(log_depth, depth_ends), _DEPTH_DEGREE)
    shape = arrays["log_shape"]
    fitted = np.linalg.lstsq(vander, shape.reshape(-1, log_depth.size).T, rcond=None)[0]
    powers = np.stack([chebyshev.cheb2poly(column) for column in fitted.T])
    values = np.concatenate(
        (np.log(arrays["lost_time"])[..., None], powers.reshape(*shape.shape[:3], -1)), axis=-1
    )
    # the nodes are Chebyshev-Lobatto points of all three variables
    for axis in range(3):
        count = values.shape[axis]
        nodes = -np.cos(np.pi * np.arange(count) / (count - 1))
        to_series = np.linalg.inv(chebyshev.chebvander(nodes, count - 1))
        values = np.moveaxis(np.tensordot(to_series, values, axes=(1, axis)), 0, axis)
    ratios, numbers, densities, outputs = values.shape
    ends = arrays["diameter_ratio"][[0, -1]]
    return _Starts(
        series=np.ascontiguousarray(values.reshape(ratios * numbers, densities * outputs)),
        terms=(ratios, numbers, densities),
        ratio_ends=np.log(ends / (1.0 - ends)),
        density_ends=np.log(arrays["density_ratio"][[0, -1]] + _ADDED),
        depth_ends=depth_ends,
    )


def run_in_delay(
    *,
    depth: Numeric,
    ball_diameter: Numeric,
    tube_bore: Numeric,
    fall_speed: Numeric,
    liquid_density: Numeric,
    viscosity: Numeric,
    ball_density: Numeric,
) -> Numeric:
    r"""Time by which a ball released from rest passes a depth later than one at full speed.

    .. math:: t(y) - \frac{y}{v} = \frac{d^2}{4 \nu}\, T \left[1 - e^{-G(Z)}\right],
        \quad Z = \frac{4 \nu\, y}{d^2\, v\, T}

    Parameters
    ----------
    depth : float or array, shape (..., drops) [m]
        Distance y below the point of release, 0 included.
    ball_diameter : float or array, shape (..., drops) [m]
        Diameter d.
    tube_bore : float or array, shape (..., drops) [m]
        Bore of the tube.
    fall_speed : float or array, shape (..., drops) [m/s]
        Speed v long after the release.
    liquid_density : float or array, shape (..., drops) [kg/m3]
        Density of the liquid.
    viscosity : float or array, shape (..., drops) [Pa.s]
        Viscosity of the liquid; over the density it is nu.
    ball_density : float or array, shape (..., drops) [kg/m3]
        Density of the ball.

    Returns
    -------
    float or array [s]
        Delay: 0 at the point of release, rising to a constant; NaN outside the range. A timing
        between two marks is too long by the difference of their delays.

    Valid range
    -----------
    Ratio 0.01 to 0.4, Reynolds number 0 to 30, density ratio 1.1 to 15; release from rest, fully
    submerged, on the axis, in quiet liquid, far from the ends of the tube.

    Notes
    -----
    T and G are polynomials through the table of ``plumbfall.flow.start_table``. The bias of a
    timing over a ball diameter or more is known to 15 %, or to 1.5e-4 of the transit where that is
    more: the largest seen against 56 starts computed between the nodes are 12 % and 1e-4, at ratios
    near 0.04 and Reynolds numbers of 0.7 to 2; elsewhere 8 % and 7e-5.
    In wide tubes the vortex left behind takes another 7e-5 of the speed for longer; left out.

    References
    ----------
    [Plumbfall]

    Examples
    --------
    3 mm steel at Reynolds number 6.8, timed over 50 mm from 10 mm below the release, is late.

    >>> ball = {"ball_diameter": 3e-3, "tube_bore": 40e-3, "fall_speed": 0.1889}
    >>> liquid = {"liquid_density": 1200.0, "viscosity": 0.1}
    >>> first, second = (
    ...     run_in_delay(depth=y, **ball, **liquid, ball_density=7800.0) for y in (10e-3, 60e-3)
    ... )
    >>> f"{100 * (second - first) / (50e-3 / 0.1889):.1f} %"
    '1.1 %'
    """
    delay, _ = _delay_and_slope(
        depth,
        (ball_diameter, tube_bore, fall_speed, liquid_density, viscosity, ball_density),
    )
    return float(delay) if np.ndim(delay) == 0 else delay


def run_in_delay_and_slope(
    *,
    depth: Numeric,
    ball_diameter: Numeric,
    tube_bore: Numeric,
    fall_speed: Numeric,
    liquid_density: Numeric,
    viscosity: Numeric,
    ball_density: Numeric,
) -> tuple[Numeric, Numeric]:
    r"""Delay of a ball released from rest, and its growth with the depth: 1/v(y) less 1/v.

    .. math:: \frac{d}{dy}\left[t(y) - \frac{y}{v}\right]
        = \frac{d^2}{4 \nu}\, T\, e^{-G}\, \frac{G}{y}\, \frac{d \ln G}{d \ln Z}

    Parameters
    ----------
    depth : float or array, shape (..., drops) [m]
        Distance y below the point of release, above 0.
    ball_diameter : float or array, shape (..., drops) [m]
        Diameter d.
    tube_bore : float or array, shape (..., drops) [m]
        Bore of the tube.
    fall_speed : float or array, shape (..., drops) [m/s]
        Speed v long after the release.
    liquid_density : float or array, shape (..., drops) [kg/m3]
        Density of the liquid.
    viscosity : float or array, shape (..., drops) [Pa.s]
        Viscosity of the liquid; over the density it is nu.
    ball_density : float or array, shape (..., drops) [kg/m3]
        Density of the ball.

    Returns
    -------
    float or array [s]
        Delay, that of :func:`run_in_delay`.
    float or array [s/m]
        Its slope, falling from infinity at the point of release to 0; NaN outside the range.

    Valid range
    -----------
    That of :func:`run_in_delay`.

    Notes
    -----
    The slope is analytic. Both come from one look-up, which depths of one ball share.

    References
    ----------
    [Plumbfall]

    Examples
    --------
    >>> ball = {"ball_diameter": 3e-3, "tube_bore": 40e-3, "fall_speed": 0.1889}
    >>> liquid = {"liquid_density": 1200.0, "viscosity": 0.1}
    >>> _, slope = run_in_delay_and_slope(depth=10e-3, **ball, **liquid, ball_density=7800.0)
    >>> f"{slope:.3f}"
    '0.495'
    """
    delay, slope = _delay_and_slope(
        depth,
        (ball_diameter, tube_bore, fall_speed, liquid_density, viscosity, ball_density),
    )
    return (float(delay), float(slope)) if np.ndim(delay) == 0 else (delay, slope)


def _delay_and_slope(depth: Numeric, given: tuple[Numeric, ...]) -> tuple[Array, Array]:
    d, bore, v, rho, eta, rho_b = np.broadcast_arrays(*(np.asarray(one, float) for one in given))
    diameter, speed = d.ravel(), v.ravel()
    kinematic = (eta / rho).ravel()
    ratio, density = (d / bore).ravel(), (rho_b / rho).ravel()
    reynolds = speed * diameter / kinematic
    inside = (
        _between(ratio, *RUN_IN_RATIO_LIMITS)
        & _between(reynolds, 0.0, RUN_IN_HIGHEST_REYNOLDS)
        & _between(density, *RUN_IN_DENSITY_RATIO_LIMITS)
    )
    starts = _starts()
    found = starts.at(
        np.where(inside, ratio, RUN_IN_RATIO_LIMITS[1]),
        np.where(inside, reynolds, 0.0),
        np.where(inside, density, RUN_IN_DENSITY_RATIO_LIMITS[1]),
    )
    unit = diameter**2 / (4.0 * kinematic)
    lost = np.where(inside, unit * np.exp(found[0]), np.nan).reshape(d.shape)
    with np.errstate(divide="ignore", invalid="ignore"):
        log_depth = np.log(np.asarray(depth, float) / (v * lost))
        shape, by_depth = starts.log_shape(found[1:].reshape(-1, *d.shape), log_depth)
        grown = np.exp(shape)
        delay: Array = -lost * np.expm1(-grown)
        slope: Array = lost * np.exp(-grown) * grown * by_depth / np.asarray(depth, float)
        # as in free fall, where a time goes as the root of the depth
        slope = np.where((np.asarray(depth, float) == 0.0) & ~np.isnan(delay), np.inf, slope)
    return delay, slope


def _between(values: Array, low: float, high: float) -> NDArray[np.bool_]:
    inside: NDArray[np.bool_] = (values >= low * (1.0 - _ROUNDING)) & (
        values <= high * (1.0 + _ROUNDING)
    )
    return inside
