"""Analytic derivatives of the laws, in the variables in which the force balance is solved.

Walls: K0 and its local power ``d ln K0 / d ln(ratio)``. Inertia: the excess ``phi - 1`` and its
derivative by ``ln Re``, from an array of ``ln Re`` (minus infinity at rest). Together: ``K - 1``
from the excess of one and the other, of which the latter is an array, with the derivative by the
latter (every rule treats both alike); and the half-width of what the rule may be wrong by,
relative to K. Every array returned is new, and the caller's to overwrite.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.polynomial import Polynomial
from numpy.typing import NDArray

from plumbfall.physics import inertia, wall
from plumbfall.physics.exact import creeping_wall_factor
from plumbfall.physics.numeric import Numeric

__all__ = [
    "additive_excess",
    "inertia_excess_abraham",
    "inertia_excess_brown_lawler",
    "inertia_excess_clift_grace_weber",
    "inertia_excess_compact",
    "inertia_excess_oseen",
    "inertia_excess_schiller_naumann",
    "inertia_excess_stokes",
    "product_excess",
    "screened_excess",
    "wall_pair_bohlin",
    "wall_pair_exact",
    "wall_pair_faxen",
    "wall_pair_faxen_cubic",
    "wall_pair_faxen_linear",
    "wall_pair_francis",
    "wall_pair_haberman_sayre",
    "wall_pair_ladenburg",
]

Array = NDArray[np.float64]
Pair = tuple[Numeric, Numeric]
ArrayPair = tuple[Array, Array]

_TINY = np.finfo(np.float64).tiny
_LN10 = math.log(10.0)


def wall_pair_exact(ratio: Numeric) -> Pair:
    """Exact wall factor and its local power, interpolated together."""
    return creeping_wall_factor(ratio)


def wall_pair_ladenburg(ratio: Numeric) -> Pair:
    """Ladenburg's wall factor and its local power."""
    return wall.wall_factor_ladenburg(diameter_ratio=ratio), _power(wall.LADENBURG, ratio)


def wall_pair_faxen_linear(ratio: Numeric) -> Pair:
    """Faxén's wall factor cut after the first power, and its local power."""
    return wall.wall_factor_faxen_linear(diameter_ratio=ratio), -_power(wall.FAXEN_LINEAR, ratio)


def wall_pair_faxen_cubic(ratio: Numeric) -> Pair:
    """Faxén's wall factor cut after the third power, and its local power."""
    return wall.wall_factor_faxen_cubic(diameter_ratio=ratio), -_power(wall.FAXEN_CUBIC, ratio)


def wall_pair_faxen(ratio: Numeric) -> Pair:
    """Faxén's wall factor and its local power."""
    return wall.wall_factor_faxen(diameter_ratio=ratio), -_power(wall.FAXEN, ratio)


def wall_pair_bohlin(ratio: Numeric) -> Pair:
    """Bohlin's wall factor and its local power."""
    return wall.wall_factor_bohlin(diameter_ratio=ratio), -_power(wall.BOHLIN, ratio)


def wall_pair_francis(ratio: Numeric) -> Pair:
    """Francis' wall factor and its local power."""
    power = 4.0 * ratio * (1.0 / (1.0 - ratio) - wall.FRANCIS / (1.0 - wall.FRANCIS * ratio))
    return wall.wall_factor_francis(diameter_ratio=ratio), power


def wall_pair_haberman_sayre(ratio: Numeric) -> Pair:
    """Haberman and Sayre's wall factor and its local power."""
    over, under = wall.HABERMAN_SAYRE
    power = _power(over, ratio) - _power(under, ratio)
    return wall.wall_factor_haberman_sayre(diameter_ratio=ratio), power


def _power(polynomial: Polynomial, ratio: Numeric) -> Numeric:
    """Local power of a polynomial: d ln P / d ln(ratio)."""
    power: Numeric = ratio * polynomial.deriv()(ratio) / polynomial(ratio)
    return power


def inertia_excess_stokes(log_reynolds: Array) -> ArrayPair:
    """No excess, no slope."""
    return np.zeros_like(log_reynolds), np.zeros_like(log_reynolds)


def inertia_excess_oseen(log_reynolds: Array) -> ArrayPair:
    """Excess of Oseen's law, and its slope, which is the same."""
    excess = inertia.OSEEN * np.exp(log_reynolds)
    return excess, excess.copy()


def inertia_excess_compact(log_reynolds: Array) -> ArrayPair:
    """Excess of the compact fit, and its slope; in place, as new arrays cost more than the sums."""
    scale, power, root = inertia.COMPACT
    slope = power * log_reynolds
    np.exp(slope, out=slope)
    slope *= scale
    whole = 1.0 + slope
    slope /= whole
    slope *= -root * power
    slope += 1.0
    excess = np.log(whole, out=whole)
    excess *= -root
    excess += log_reynolds
    np.exp(excess, out=excess)
    excess *= inertia.OSEEN
    slope *= excess
    return excess, slope


def inertia_excess_schiller_naumann(log_reynolds: Array) -> ArrayPair:
    """Excess of Schiller and Naumann's law, and its slope."""
    scale, power = inertia.SCHILLER_NAUMANN
    excess = scale * np.exp(power * log_reynolds)
    return excess, power * excess


def inertia_excess_clift_grace_weber(log_reynolds: Array) -> ArrayPair:
    """Excess of Clift, Grace and Weber's law, and its slope within each piece."""
    reynolds = np.exp(log_reynolds)
    y = np.maximum(log_reynolds, math.log(inertia.CLIFT_BOUNDS[0]))
    w = y / _LN10
    creeping = inertia.OSEEN * reynolds
    low = 0.1315 * np.exp(y * (0.82 - 0.05 * w))
    moderate = 0.1935 * np.exp(0.6305 * y)
    excesses, slopes = [creeping, low, moderate], [creeping, low * (0.82 - 0.1 * w)]
    slopes.append(0.6305 * moderate)
    for log_drag in inertia.CLIFT_LOG_DRAG:
        factor = np.exp(y + _LN10 * log_drag(w)) / 24.0
        excesses.append(factor - 1.0)
        slopes.append(factor * (1.0 + log_drag.deriv()(w)))
    pieces = inertia.clift_pieces(reynolds)
    return (
        np.select(pieces, excesses[:-1], excesses[-1]),
        np.select(pieces, slopes[:-1], slopes[-1]),
    )


def inertia_excess_brown_lawler(log_reynolds: Array) -> ArrayPair:
    """Excess of Brown and Lawler's law, and its slope."""
    scale, power, plateau, turn = inertia.BROWN_LAWLER
    reynolds = np.exp(log_reynolds)
    low = scale * np.exp(power * log_reynolds)
    part = reynolds / (reynolds + turn)
    high = plateau / 24.0 * reynolds * part
    return low + high, power * low + high * (2.0 - part)


def inertia_excess_abraham(log_reynolds: Array) -> ArrayPair:
    """Excess of Abraham's law, and its slope."""
    layer = np.exp(0.5 * log_reynolds) / inertia.ABRAHAM
    return layer * (2.0 + layer), layer * (1.0 + layer)


def screened_excess(one: Numeric, other: Array) -> ArrayPair:
    """K - 1 of the screened rule, and its derivative by the other excess; 0 where all is 0."""
    excess = other * other
    excess += one * one
    np.sqrt(excess, out=excess)
    slope = np.maximum(excess, _TINY)
    np.divide(other, slope, out=slope)
    return excess, slope


def additive_excess(one: Numeric, other: Array) -> ArrayPair:
    """K - 1 of the additive rule, and its derivative by the other excess."""
    excess = one + other
    return excess, np.ones_like(excess)


def product_excess(one: Numeric, other: Array) -> ArrayPair:
    """K - 1 of the product rule, and its derivative by the other excess."""
    excess = one + other
    excess += one * other
    return excess, 1.0 + (one + np.zeros_like(excess))
