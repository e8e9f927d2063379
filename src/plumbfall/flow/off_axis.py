r"""A small ball off the axis of an infinite tube: how its place changes the wall's first effect.

To first order in the diameter ratio a ball is a point force, and the velocity that the wall sends
back to it lowers its speed: :math:`F = 6\pi\eta a v/(1 - f(\beta)\lambda)`, with the ball at
:math:`\beta` bore radii from the axis and free to rotate. The point force, parallel to the axis,
is written as a Fourier integral along the tube and a sum over azimuthal orders m. For each wave
number k and order m, three regular creeping flows inside the bore,

.. math:: u = \nabla\Psi + \nabla\times(e_z\Omega) + \nabla(\rho\,\partial_\rho\Pi)
              + 2 e_z\,\partial_z\Pi,

with :math:`\Psi, \Omega, \Pi` multiples of :math:`I_m(k\rho)e^{im\phi}`, cancel the force's three
velocities on the wall. Sums and differences of these flows are taken as unknowns so that none of
them become parallel when k is small, and Bessel functions enter only as ratios of neighbouring
orders, so that none overflow.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator

import numpy as np
from numpy.typing import NDArray
from scipy.special import ive, kve

from plumbfall.flow.tables import NodeCheck, Table, TableBuilder
from plumbfall.flow.tube_wall import wave_numbers

__all__ = ["TABLE", "off_axis_coefficient_of_order", "settled_off_axis_coefficient"]

Array = NDArray[np.float64]

HIGHEST_OFFSET = 0.9
_NODES = 28
_TOLERANCE = 1e-10


def _rising_ratios(x: Array, highest: int) -> Array:
    """I_{m+1}(x)/I_m(x) for m = 0 to ``highest``, by downward recurrence (stable)."""
    ratios = np.empty((highest + 1, x.size))
    start = highest + 60
    ratio = x / (start + 2 + np.hypot(start + 2, x))
    for m in range(start, -1, -1):
        ratio = x / (2.0 * (m + 1) + x * ratio)
        if m <= highest:
            ratios[m] = ratio
    return ratios


def _falling_slopes(x: Array, highest: int) -> Array:
    """K_m'(x)/K_m(x) for m = 0 to ``highest``, by upward recurrence (stable)."""
    slopes = np.empty((highest + 1, x.size))
    ratio = kve(1, x) / kve(0, x)
    slopes[0] = -ratio
    for m in range(1, highest + 1):
        ratio = 2.0 * m / x + 1.0 / ratio
        slopes[m] = m / x - ratio
    return slopes


def off_axis_coefficient_of_order(*, offset_ratio: float, order: int) -> float:
    """Coefficient f with azimuthal orders up to a given one.

    Parameters
    ----------
    offset_ratio : float [1]
        Distance from the axis over bore radius, from 0 to below 1.
    order : int
        Highest azimuthal order.

    Returns
    -------
    float [1]
        Coefficient f of the diameter ratio.
    """
    # the wall's answer falls as exp(-2 k (1 - offset)) in wave number
    k, weights = wave_numbers(18.0 / (1.0 - offset_ratio))
    m = np.arange(order + 1)[:, None]
    inner = max(offset_ratio, 1e-30) * k
    up, up_inner = _rising_ratios(k, order + 2), _rising_ratios(inner, order + 2)
    slope_k = _falling_slopes(k, order + 1)

    # I_m(k b)/I_m(k), and I_m(k) K_m(k) from the Wronskian
    first = ive(0, inner) / ive(0, k) * np.exp(inner - k)
    shares = first * np.concatenate(
        [np.ones((1, k.size)), np.cumprod(up_inner[: order + 1] / up[: order + 1], axis=0)]
    )
    orders = np.arange(order + 2)[:, None]
    product = 1.0 / (k * (up[: order + 2] + orders / k - slope_k))
    kernel = shares * product  # I_m(k b) K_m(k)
    before = np.concatenate([kernel[1:2], kernel[:-2]])  # order m - 1, and -1 is 1
    after = kernel[1:]
    here, share = kernel[:-1], shares[:-1]
    steep, steep_inner = up[: order + 1], up_inner[: order + 1]

    axial = here * (2.0 + inner * steep_inner + m + k * slope_k[:-1])
    radial = k * (here - offset_ratio * (before + after) / 2.0)
    azimuthal = k * offset_ratio * (before - after) / 2.0

    # columns: Psi - Omega; Omega; Pi - (m + 2) Psi + 2 Omega over k I_{m+1}/I_m: never parallel
    rise = k * steep
    columns = np.zeros((order + 1, k.size, 3, 3))
    columns[..., 0, 0] = columns[..., 0, 2] = k
    columns[..., 1, 0] = columns[..., 2, 0] = rise
    columns[..., 1, 1] = m
    columns[..., 2, 1] = -(rise + m)
    columns[..., 1, 2] = m + k * up[1 : order + 2]
    columns[..., 2, 2] = -(m + 2)
    source = np.stack([axial, radial, azimuthal], axis=-1)[..., None]
    answer = np.linalg.solve(columns, -source)[..., 0]

    back = k * share * (answer[..., 0] + answer[..., 2] * inner * steep_inner / rise)
    sides = np.where(m == 0, 1.0, 2.0)
    velocity = 2.0 / np.pi * float(np.sum(sides * back * weights))
    return -0.75 * velocity


def settled_off_axis_coefficient(
    *, offset_ratio: float, tolerance: float = _TOLERANCE
) -> tuple[float, float]:
    """Coefficient f with enough azimuthal orders.

    Parameters
    ----------
    offset_ratio : float [1]
        Distance from the axis over bore radius, 0 to 0.95.
    tolerance : float
        Relative change on adding half as many orders again, at which to stop.

    Returns
    -------
    tuple of two floats [1]
        Coefficient f, and the relative change at the last step.

    Raises
    ------
    ArithmeticError
        If the orders tried do not settle the result to the tolerance.
    """
    # the terms fall as offset^(2 m)
    order = 6 + int(8.0 / -np.log(max(offset_ratio, 0.05)))
    last = off_axis_coefficient_of_order(offset_ratio=offset_ratio, order=order)
    change = np.inf
    for _ in range(4):
        order += order // 2
        value = off_axis_coefficient_of_order(offset_ratio=offset_ratio, order=order)
        change, last = abs(value / last - 1.0), value
        if change < tolerance:
            return value, change
    raise ArithmeticError(
        f"off-axis coefficient at {offset_ratio} unsettled by {change:.1e} at order {order}"
    )


def _build(step: Callable[[], None]) -> Table:
    angle = np.pi * (np.arange(_NODES) + 0.5) / _NODES
    # even in the offset: nodes in its square
    offsets = HIGHEST_OFFSET * np.sqrt((1.0 - np.cos(angle)) / 2.0)
    coefficients, changes = np.empty(_NODES), np.empty(_NODES)
    for i, offset in enumerate(offsets):
        coefficients[i], changes[i] = settled_off_axis_coefficient(offset_ratio=float(offset))
        step()
    return Table(
        name=TABLE.name,
        about={
            "quantity": "coefficient f of the diameter ratio in 1/(1 - f ratio), the drag on a "
            "small ball off the axis of an infinite tube over its Stokes drag",
            "solver": "plumbfall.flow.off_axis: point force with its reflection from the bore, "
            "Fourier integral along the tube and azimuthal sum",
            "settings": f"{_NODES} Chebyshev nodes of the squared offset in 0 to "
            f"{HIGHEST_OFFSET}^2; orders raised until the change is below {_TOLERANCE:g}",
            "estimated_relative_error": float(f"{max(changes.max(), _TOLERANCE):.1e}"),
            "highest_offset_ratio": HIGHEST_OFFSET,
        },
        arrays={"offset_ratio": offsets, "coefficient": coefficients},
    )


def _check(table: Table) -> Iterator[NodeCheck]:
    offsets, coefficients = table.arrays["offset_ratio"], table.arrays["coefficient"]
    for i in range(0, offsets.size, 6):
        yield NodeCheck(
            node=f"offset ratio {offsets[i]:.4f}",
            shipped=float(coefficients[i]),
            recomputed=settled_off_axis_coefficient(offset_ratio=float(offsets[i]))[0],
            tolerance=1e-9,
        )


TABLE = TableBuilder(
    name="off_axis_coefficient",
    title="small ball off the axis, Reynolds number 0",
    steps=_NODES,
    build=_build,
    check=_check,
)
