r"""Creeping flow past a ball on the axis of an infinite tube: the wall factor at Reynolds number 0.

The ball moves along the axis; tube and far liquid are at rest. With the bore radius as unit of
length the flow is a sum of multipoles at the ball's centre (``multipoles``), each together with
the flow by which the wall answers it (``tube_wall``), so that no slip on the bore and rest far
away hold exactly. No slip on the ball is met by least squares at Gauss-Legendre points of its
meridian, twice as many equations as unknowns or nearly so; fore-and-aft symmetry leaves the even
orders. The drag follows from the first multipole alone, the only one that carries a force:
:math:`K_0 = (4/3) A_0` in the scaling used here.

The error falls as the power of the number of orders that the distance to the image in the wall
and the width of the lubricating gap allow. Orders are added until two results agree.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator

import numpy as np

from plumbfall.flow.multipoles import multipole_velocities
from plumbfall.flow.tables import NodeCheck, Table, TableBuilder
from plumbfall.flow.tube_wall import TubeWall

__all__ = ["TABLE", "wall_factor", "wall_factor_of_order"]

HIGHEST_RATIO = 0.95
_NODES = 44
_TOLERANCE = 1e-12


def wall_factor_of_order(*, diameter_ratio: float, order: int) -> float:
    """Wall factor with multipoles up to a given order.

    Parameters
    ----------
    diameter_ratio : float [1]
        Ball diameter over bore, between 0 and 1.
    order : int
        Highest order of multipole, even.

    Returns
    -------
    float [1]
        Drag over Stokes drag.
    """
    orders = np.arange(0, order + 1, 2)
    nodes, weights = np.polynomial.legendre.leggauss(3 * order // 4 + 8)
    cosine, root_weight = (nodes + 1.0) / 2.0, np.sqrt(weights / 2.0)
    rho, z = diameter_ratio * np.sqrt(1.0 - cosine**2), diameter_ratio * cosine
    free = multipole_velocities(orders=orders, radius=diameter_ratio, rho=rho, z=z)
    answers = TubeWall(orders=orders, radius=diameter_ratio, rho=rho).velocities(z=z)
    columns = np.concatenate([free[0] + answers[0], free[1] + answers[1]], axis=1)
    # (axis, unknown, point) -> (axis and point, unknown)
    matrix = (columns * root_weight).transpose(0, 2, 1).reshape(-1, 2 * orders.size)
    unit_velocity = np.concatenate([root_weight, np.zeros_like(root_weight)])
    size = np.linalg.norm(matrix, axis=0)
    strengths = np.linalg.lstsq(matrix / size, unit_velocity, rcond=None)[0] / size
    return float(strengths[0]) * 4.0 / 3.0


def wall_factor(*, diameter_ratio: float, tolerance: float = _TOLERANCE) -> tuple[float, float]:
    """Converged wall factor of a ball on the axis of an infinite tube at Reynolds number 0.

    Parameters
    ----------
    diameter_ratio : float [1]
        Ball diameter over bore, above 0 and at most 0.95.
    tolerance : float
        Relative change on adding half as many orders again, at which to stop.

    Returns
    -------
    tuple of two floats [1]
        Drag over Stokes drag, and the relative change at the last step.

    Raises
    ------
    ArithmeticError
        If the orders tried do not settle the result to the tolerance.
    """
    # the image in the wall and the width of the gap set how fast the error falls
    order = 2 * int(5 + 8 * diameter_ratio / np.sqrt(1.0 - diameter_ratio))
    last = wall_factor_of_order(diameter_ratio=diameter_ratio, order=order)
    change = np.inf
    for _ in range(6):
        order = 2 * (3 * order // 4 + 1)
        value = wall_factor_of_order(diameter_ratio=diameter_ratio, order=order)
        change, last = abs(value / last - 1.0), value
        if change < tolerance:
            return value, change
    raise ArithmeticError(
        f"wall factor at diameter ratio {diameter_ratio} unsettled by {change:.1e} at order {order}"
    )


def _build(step: Callable[[], None]) -> Table:
    angle = np.pi * (np.arange(_NODES) + 0.5) / _NODES
    ratios = HIGHEST_RATIO * (1.0 - np.cos(angle)) / 2.0
    factors, changes = np.empty(_NODES), np.empty(_NODES)
    for i, ratio in enumerate(ratios):
        factors[i], changes[i] = wall_factor(diameter_ratio=float(ratio))
        step()
    return Table(
        name=TABLE.name,
        about={
            "quantity": "drag on a ball on the axis of an infinite tube over its Stokes drag, "
            "Reynolds number 0, tube and far liquid at rest",
            "solver": "plumbfall.flow.creeping_tube: multipoles with Fourier-Bessel wall answers, "
            "least squares on the ball",
            "settings": f"{_NODES} Chebyshev nodes of the diameter ratio in 0 to {HIGHEST_RATIO}; "
            f"orders raised until the change is below {_TOLERANCE:g}",
            "estimated_relative_error": float(f"{max(changes.max(), _TOLERANCE):.1e}"),
            "highest_diameter_ratio": HIGHEST_RATIO,
        },
        arrays={"diameter_ratio": ratios, "wall_factor": factors},
    )


def _check(table: Table) -> Iterator[NodeCheck]:
    ratios, factors = table.arrays["diameter_ratio"], table.arrays["wall_factor"]
    for i in range(0, ratios.size, 7):
        yield NodeCheck(
            node=f"diameter ratio {ratios[i]:.4f}",
            shipped=float(factors[i]),
            recomputed=wall_factor(diameter_ratio=float(ratios[i]))[0],
            tolerance=1e-11,
        )


TABLE = TableBuilder(
    name="wall_factor",
    title="wall factor on the axis, Reynolds number 0",
    steps=_NODES,
    build=_build,
    check=_check,
)
