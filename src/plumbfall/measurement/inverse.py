"""The inverse of the force balance: the viscosity from speed, weight and geometry.

The unknown is x = ln Re. With the demand q = W / (3 pi rho_f v^2 d^2) the balance reads
ln K(lambda, x) - x = ln q, strictly decreasing in x below the drag crisis, so that Newton's
method from the creeping solution (a lower bound, as K >= K0) climbs to the one low-Re root.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.measurement.balance import Balance, Numbers
from plumbfall.physics.drag import Bound

__all__ = ["MINIMUM_DRAG_COEFFICIENT", "Inverse", "invert"]

MINIMUM_DRAG_COEFFICIENT = 0.38
"""No unbounded sphere has less drag below the drag crisis.

Brown and Lawler 2003 give a minimum of 0.3895 at Reynolds number 3981, Clift, Grace and Weber
1978 0.387 at 5370; walls only add to it.
"""

NEAR, TOLERANCE = 1e-7, 1e-13
"""Last steps in ln Re: after one below the first, Newton's next is below 1e-14 on a smooth law."""

MOST_STEPS = 60


@dataclass(frozen=True, slots=True)
class Inverse:
    """What the balance gives, each of shape (drops,); NaN viscosity where there is none.

    ``ratio_slope`` and ``reynolds_slope`` are the local powers of K at the solution.
    ``floating``, ``too_fast``, ``too_wide`` and ``no_root`` say why: the ball is not denser than
    the liquid; its Reynolds number is beyond the law's; its diameter ratio is; no viscosity at
    all makes it fall so fast (or the corrected time is not positive).
    """

    viscosity: Numbers
    reynolds: Numbers
    log_reynolds: Numbers
    ratio_slope: Numbers
    reynolds_slope: Numbers
    floating: NDArray[np.bool_]
    too_fast: NDArray[np.bool_]
    too_wide: NDArray[np.bool_]
    no_root: NDArray[np.bool_]


def invert(
    forces: Balance,
    drag: Bound,
    log_extra: Numbers | float = 0.0,
    shift: Numbers | float = 0.0,
) -> Inverse:
    """Solve the force balance for the viscosity of every drop.

    Parameters
    ----------
    forces : Balance
        Weight, speed and geometry, arrays of shape (drops,).
    drag : Bound
        A drag law at the drops' diameter ratios.
    log_extra : array, shape (drops,)
        Logarithm of a further factor of the drag that does not depend on the Reynolds number.
    shift : array, shape (drops,)
        Logarithm of each drop's diameter ratio over the one its law is bound to, so small that
        the first order is exact enough.

    Returns
    -------
    Inverse
        Viscosity [Pa.s] and Reynolds number; NaN, with the reason, where there is none.

    Notes
    -----
    The Reynolds number is rho_f v d / eta. The residual of the balance is below 1e-12.
    """
    shape = np.broadcast_shapes(forces.weight.shape, forces.speed.shape, forces.diameter.shape)
    floating = np.broadcast_to(forces.weight <= 0, shape)
    late = np.broadcast_to(~(forces.speed > 0) | np.isinf(forces.speed), shape)
    too_wide = np.broadcast_to(~(forces.diameter_ratio <= drag.max_ratio), shape)
    inertial = forces.liquid_density * (forces.speed * forces.diameter) ** 2
    top = float(np.log(drag.max_reynolds))
    with np.errstate(invalid="ignore", divide="ignore"):
        log_demand = np.log(forces.weight / (3 * np.pi * inertial)) - log_extra
        start = np.log(drag.wall) - log_demand
        x, beyond = _newton(drag, log_demand, top, start, shape, NEAR)
        bad = floating | late | too_wide | beyond
        log_factor, ratio_slope, reynolds_slope = (np.asarray(part) for part in drag.expand(x))
        left = np.abs(log_factor - x - log_demand, where=~bad, out=np.zeros(shape))
        if left.max(initial=0.0) > TOLERANCE:  # a law with a kink at the root
            x, beyond = _newton(drag, log_demand, top, x, shape, TOLERANCE)
            bad = floating | late | too_wide | beyond
            ratio_slope, reynolds_slope = (np.asarray(part) for part in drag.slopes(x))
    if bad.any():
        x, ratio_slope, reynolds_slope = (
            np.where(bad, np.nan, part) for part in (x, ratio_slope, reynolds_slope)
        )
    x = x + ratio_slope * shift / (1 - reynolds_slope)
    reynolds = np.exp(x)
    no_root = late | (beyond & (log_demand < np.log(MINIMUM_DRAG_COEFFICIENT / 24)))
    return Inverse(
        viscosity=forces.liquid_density * forces.speed * forces.diameter / reynolds,
        reynolds=reynolds,
        log_reynolds=x,
        ratio_slope=ratio_slope,
        reynolds_slope=reynolds_slope,
        floating=floating,
        too_fast=beyond & ~no_root & ~floating & ~too_wide,
        too_wide=too_wide,
        no_root=no_root & ~floating,
    )


def _newton(
    drag: Bound,
    log_demand: Numbers,
    top: float,
    start: Numbers,
    shape: tuple[int, ...],
    tolerance: float,
) -> tuple[Numbers, NDArray[np.bool_]]:
    """Return the root, kept below the law's limit, and whether it lies beyond that limit."""
    x = np.minimum(np.broadcast_to(start, shape), top)
    for _ in range(MOST_STEPS):
        log_factor, slope = drag.evaluate(x)
        step = (log_factor - x - log_demand) / (1 - slope)
        beyond = x + step > top
        x = np.minimum(x + step, top)
        # a drop without a solution is NaN from the start, and must not end the others' steps
        size = np.abs(step, where=~beyond, out=np.zeros(shape))
        if not np.fmax.reduce(size, axis=None, initial=0.0) > tolerance:
            break
    return x, beyond
