"""The factors of the drag, checked against the range of the law that is asked for."""

from __future__ import annotations

import numpy as np

from plumbfall.physics.drag import DragLaw
from plumbfall.physics.laws import DEFAULTS, law
from plumbfall.physics.numeric import Numeric

__all__ = ["inertia_factor", "tube_drag_factor", "wall_factor"]


def wall_factor(*, diameter_ratio: Numeric, method: str = DEFAULTS["walls"]) -> Numeric:
    r"""Drag on a ball on the axis of a long tube over its Stokes drag, at Reynolds number 0.

    .. math:: K_0(\lambda) = F / (3 \pi \eta d v)

    Parameters
    ----------
    diameter_ratio : float or array, shape (..., drops) [1]
        Ball diameter over tube bore, symbol lambda.
    method : str
        Name of a wall law: exact, ladenburg, faxen, faxen-cubic, faxen-linear, francis,
        haberman-sayre or bohlin.

    Returns
    -------
    float or array [1]
        Factor K0, at least 1, same shape as the input.

    Raises
    ------
    PhysicsRangeError
        If a ratio is outside the range of the law; number, limit and law are named.
    InputError
        If there is no such law; the nearest name is given.

    Valid range
    -----------
    That of the law in the registry: to 0.95 for the exact factor.

    Notes
    -----
    The exact factor is interpolated to better than 1e-6 up to 0.8; the error of the others stands
    with each.

    References
    ----------
    [Plumbfall]

    Examples
    --------
    >>> f"{wall_factor(diameter_ratio=0.1):.6f}"
    '1.263214'
    """
    chosen = law("walls", method)
    ratio = _floats(diameter_ratio)
    chosen.check(ratio)
    return chosen.function(diameter_ratio=ratio)


def inertia_factor(*, reynolds: Numeric, method: str = DEFAULTS["inertia"]) -> Numeric:
    r"""Drag on a ball in an unbounded liquid over its Stokes drag.

    .. math:: \phi = C_d\, Re / 24

    Parameters
    ----------
    reynolds : float or array, shape (..., drops) [1]
        Reynolds number on the diameter.
    method : str
        Name of an inertia law: compact, stokes, oseen, schiller-naumann, clift-grace-weber,
        brown-lawler or abraham.

    Returns
    -------
    float or array [1]
        Factor phi, at least 1, same shape as the input.

    Raises
    ------
    PhysicsRangeError
        If a Reynolds number is outside the range of the law; number, limit and law are named.
    InputError
        If there is no such law; the nearest name is given.

    Valid range
    -----------
    That of the law in the registry: to Reynolds number 100 for the compact fit.

    Notes
    -----
    The compact fit is within 0.10 % of Navier-Stokes; the error of the others stands with each.

    References
    ----------
    [Plumbfall]

    Examples
    --------
    >>> f"{inertia_factor(reynolds=0.1):.4f}"
    '1.0174'
    """
    chosen = law("inertia", method)
    numbers = _floats(reynolds)
    chosen.check(numbers)
    return chosen.function(reynolds=numbers)


def tube_drag_factor(*, diameter_ratio: Numeric, reynolds: Numeric) -> Numeric:
    r"""Drag on a ball on the axis of a long tube over its Stokes drag, walls and inertia together.

    .. math:: K(\lambda, Re) = F / (3 \pi \eta d v)

    Parameters
    ----------
    diameter_ratio : float or array, shape (..., drops) [1]
        Ball diameter over tube bore, symbol lambda.
    reynolds : float or array, shape (..., drops) [1]
        Reynolds number on the diameter.

    Returns
    -------
    float or array [1]
        Factor K by the default drag law, of the shape the arguments broadcast to.

    Raises
    ------
    PhysicsRangeError
        If a ratio or a Reynolds number is outside the range; number, limit and law are named.

    Valid range
    -----------
    Diameter ratio 0 to 0.8, Reynolds number 0 to 100.

    Notes
    -----
    The table computed from Navier-Stokes, within 0.005 %, and 0.015 % below ratio 0.01; exact at
    Reynolds number 0.

    References
    ----------
    [Plumbfall]

    Examples
    --------
    >>> f"{tube_drag_factor(diameter_ratio=0.1, reynolds=0.0):.6f}"
    '1.263214'
    """
    drag = DragLaw().at(_floats(diameter_ratio))
    numbers = _floats(reynolds)
    drag.check(numbers)
    return drag.factor(numbers)


def _floats(value: Numeric) -> Numeric:
    floats: Numeric = np.asarray(value, dtype=np.float64)[()]
    return floats
