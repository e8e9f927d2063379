"""The forward problem: how long a ball takes from mark to mark in a liquid of known viscosity."""

from __future__ import annotations

from typing import Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from plumbfall.errors import InputError, PhysicsRangeError
from plumbfall.physics.drag import DragLaw
from plumbfall.physics.path import path_excess
from plumbfall.physics.start_up import (
    RUN_IN_DENSITY_RATIO_LIMITS,
    RUN_IN_HIGHEST_REYNOLDS,
    RUN_IN_RATIO_LIMITS,
    run_in_delay,
)
from plumbfall.physics.terminal import terminal_log_reynolds
from plumbfall.physics.weight import effective_weight

__all__ = ["fall_time", "terminal_speed"]


def terminal_speed(
    *,
    viscosity: ArrayLike,
    weight: ArrayLike,
    ball_diameter: ArrayLike,
    liquid_density: ArrayLike,
    tube_bore: ArrayLike,
) -> NDArray[np.float64]:
    r"""Speed at which drag equals weight less buoyancy, far from the ends of a tube.

    .. math:: 3\pi\eta d v\, K(\lambda, Re) = W

    Parameters
    ----------
    viscosity : float or array, shape (..., drops) [Pa.s]
        Dynamic viscosity of the liquid.
    weight : float or array, shape (..., drops) [N]
        Weight less buoyancy W.
    ball_diameter : float or array, shape (..., drops) [m]
        Diameter d.
    liquid_density : float or array, shape (..., drops) [kg/m3]
        Density of the liquid.
    tube_bore : float or array, shape (..., drops) [m]
        Bore of the tube.

    Returns
    -------
    array [m/s]
        Terminal speed.

    Raises
    ------
    PhysicsRangeError
        Where the ball does not sink, or its Reynolds number is beyond the drag law.

    Valid range
    -----------
    That of the default drag law; a ball denser than the liquid.

    Notes
    -----
    Newton's method in ln Re on ln K + ln Re = ln(Re of Stokes' law), which increases in Re.

    References
    ----------
    [Stokes1851]

    Examples
    --------
    >>> speed = terminal_speed(
    ...     viscosity=1.0, weight=2.76e-4, ball_diameter=2e-3, liquid_density=970.0, tube_bore=0.05
    ... )
    >>> f"{1e3 * speed:.2f}"
    '13.41'
    """
    eta, w, d, rho, bore = np.broadcast_arrays(
        *(
            np.asarray(value, dtype=float)
            for value in (viscosity, weight, ball_diameter, liquid_density, tube_bore)
        )
    )
    if not (w > 0).all():
        raise PhysicsRangeError("a ball that is not denser than the liquid does not sink")
    law = DragLaw()
    drag = law.at(d / bore)
    x, beyond = terminal_log_reynolds(drag, np.log(w * rho / (3 * np.pi * eta**2)))
    if beyond.any():
        raise PhysicsRangeError(
            f"the ball would fall at a Reynolds number above {drag.max_reynolds:g}, the limit "
            f"of the drag law '{law.together}'"
        )
    speed: NDArray[np.float64] = np.exp(x) * eta / (rho * d)
    return speed


def fall_time(
    *,
    viscosity: ArrayLike,
    ball_diameter: ArrayLike,
    ball_density: ArrayLike,
    liquid_density: ArrayLike,
    tube_bore: ArrayLike,
    marks: ArrayLike,
    surface_above: ArrayLike = np.inf,
    bottom_below: ArrayLike = np.inf,
    release_above: ArrayLike = np.inf,
    gravity: ArrayLike = 9.80665,
    surface: str = "free",
) -> NDArray[np.float64]:
    r"""Time between successive marks of a ball falling on the axis of a vertical tube.

    .. math:: t = \int \frac{dz}{v(z)} = \frac{L}{v}\,(1 + \bar E) + \tau(y_2) - \tau(y_1)

    Parameters
    ----------
    viscosity : float or array, shape (drops,) [Pa.s]
        Dynamic viscosity of the liquid.
    ball_diameter : float or array, shape (drops,) [m]
        Diameter of the ball.
    ball_density : float or array, shape (drops,) [kg/m3]
        Density of the ball.
    liquid_density : float or array, shape (drops,) [kg/m3]
        Density of the liquid.
    tube_bore : float or array, shape (drops,) [m]
        Bore of the tube.
    marks : array, shape (marks,) [m]
        Distances down from the first mark, at least two, increasing.
    surface_above : float or array, shape (drops,) [m]
        Liquid surface above the first mark; infinite where it is not felt.
    bottom_below : float or array, shape (drops,) [m]
        Bottom below the last mark; infinite where it is not felt.
    release_above : float or array, shape (drops,) [m]
        Ball let go from rest this far above the first mark; infinite where the run-in is over.
    gravity : float or array, shape (drops,) [m/s2]
        Acceleration of free fall.
    surface : str
        What the liquid ends with at the top: ``free`` or ``lid``.

    Returns
    -------
    array, shape (..., marks - 1) [s]
        Times between successive marks.

    Raises
    ------
    InputError
        If the marks do not increase or the surface is neither.
    PhysicsRangeError
        If the ball does not sink, or beyond the range.

    Valid range
    -----------
    That of the default drag law and of the end excess.

    Notes
    -----
    The ends are felt within a bore radius or two; what they add is averaged over the path. The
    delay tau of a start from rest is a difference of two depths y below the release.

    References
    ----------
    [Stokes1851], [Tanner1963]

    Examples
    --------
    >>> time = fall_time(
    ...     viscosity=1.0, ball_diameter=2e-3, ball_density=7700.0, liquid_density=970.0,
    ...     tube_bore=0.05, marks=[0.0, 0.1, 0.2], gravity=9.81
    ... )
    >>> [f"{t:.2f}" for t in time]
    ['7.44', '7.44']
    """
    places = np.asarray(marks, dtype=float)
    if places.ndim != 1 or len(places) < 2 or (np.diff(places) <= 0).any():
        raise InputError(
            "marks are not a list of at least two increasing distances",
            remedy="give distances down from the first mark, such as [0.0, 0.2]",
        )
    if surface not in ("free", "lid"):
        raise InputError(f"there is no surface '{surface}'", remedy="known: free, lid")
    per_drop = (
        np.asarray(value, dtype=float)[..., None]
        for value in (
            viscosity, ball_diameter, ball_density, liquid_density, tube_bore, surface_above,
            bottom_below, release_above, gravity,
        )
    )  # fmt: skip
    eta, d, rho_b, rho, bore, above, below, release, g = per_drop
    weight = effective_weight(ball_diameter=d, ball_density=rho_b, liquid_density=rho, gravity=g)
    speed = terminal_speed(
        viscosity=eta, weight=weight, ball_diameter=d, liquid_density=rho, tube_bore=bore
    )
    ratio, length, radius = d / bore, np.diff(places), bore / 2
    from_surface = above + places[:-1] - places[0]
    from_bottom = below + places[-1] - places[1:]
    at_top: Literal["free", "solid"] = "free" if surface == "free" else "solid"
    lower = path_excess(ratio, from_bottom, length, radius, "solid")
    upper = path_excess(ratio, from_surface, length, radius, at_top)
    mean = lower.mean + upper.mean
    if np.isnan(mean).any():
        raise PhysicsRangeError(
            "a mark is so near an end of the liquid that the drag there is not known"
        )
    times = np.asarray(length / speed * (1 + mean))
    if np.isinf(release).all():
        return times
    delays = run_in_delay(
        depth=release + places - places[0],
        ball_diameter=d,
        tube_bore=bore,
        fall_speed=speed,
        liquid_density=rho,
        viscosity=eta,
        ball_density=rho_b,
    )
    late = np.where(np.isinf(release), 0.0, np.diff(delays, axis=-1))
    if np.isnan(late).any():
        raise PhysicsRangeError(
            f"the run-in is known for diameter ratios {RUN_IN_RATIO_LIMITS[0]:g} to "
            f"{RUN_IN_RATIO_LIMITS[1]:g}, Reynolds numbers to {RUN_IN_HIGHEST_REYNOLDS:g} and "
            f"density ratios {RUN_IN_DENSITY_RATIO_LIMITS[0]:g} to "
            f"{RUN_IN_DENSITY_RATIO_LIMITS[1]:g}; leave release_above out, or stay within"
        )
    return times + late
