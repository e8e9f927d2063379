"""The force balance solved forwards: the Reynolds number at a known viscosity."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from plumbfall.physics.drag import Bound

__all__ = ["terminal_log_reynolds"]

TOLERANCE = 1e-14
MOST_STEPS = 60


def terminal_log_reynolds(
    drag: Bound, log_creeping: NDArray[np.float64]
) -> tuple[NDArray[np.float64], NDArray[np.bool_]]:
    r"""Logarithm of the Reynolds number at which drag equals weight less buoyancy.

    .. math:: \ln K(\lambda, x) + x = \ln\frac{W \rho_f}{3\pi\eta^2}, \quad x = \ln Re

    Parameters
    ----------
    drag : Bound
        A drag law at the balls' diameter ratios.
    log_creeping : array, shape (..., drops)
        Logarithm of the Reynolds number that Stokes' law alone gives, W rho_f / (3 pi eta^2).

    Returns
    -------
    x : array, shape (..., drops)
        ln Re, the drag law's limit where it lies beyond.
    beyond : array of bool, shape (..., drops)
        Whether the Reynolds number is beyond the drag law.

    Notes
    -----
    Newton's method; the left side increases in x, and its value without inertia is too high.

    Examples
    --------
    >>> from plumbfall.physics.drag import DragLaw
    >>> x, beyond = terminal_log_reynolds(DragLaw().at(np.array([0.1])), np.log(np.array([1.0])))
    >>> f"{np.exp(x[0]):.3f}"
    '0.781'
    """
    top = float(np.log(drag.max_reynolds))
    shape = np.broadcast_shapes(np.shape(log_creeping), np.shape(drag.wall))
    x = np.broadcast_to(np.minimum(log_creeping - np.log(drag.wall), top), shape)
    beyond = np.zeros(shape, bool)
    for _ in range(MOST_STEPS):
        log_factor, slope = drag.evaluate(x)
        step = (log_creeping - log_factor - x) / (1 + slope)
        beyond = (x + step > top + 1e-9) & (x >= top)
        x = np.minimum(x + step, top)
        # a ball without a solution is NaN, or beyond, and must not end the others' steps
        size = np.where(beyond, 0.0, np.abs(step) / np.maximum(1.0, np.abs(x)))
        if not np.fmax.reduce(size, axis=None, initial=0.0) >= TOLERANCE:
            break
    return x, beyond
