r"""Table of what one end of a tube adds to the drag on a ball: the end excess.

:math:`E = K/K_0 - 1` against distance from a solid end and from a free surface. Both change over
the gap to the end when the ball is near it, and over the bore radius when it is not, so the nodes
are Chebyshev points in

.. math:: w = \ln\frac{h - \lambda}{\lambda} + c\,(h - \lambda),

h and the diameter ratio :math:`\lambda` in bore radii, from the least gap to the reach; and in
:math:`\ln(\lambda/(1 - \lambda))`. The excess is the difference of two solutions with the same
multipoles, so that it keeps its digits where it is small.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq

from plumbfall.flow.ball_in_tube import BallInTube
from plumbfall.flow.finite_tube import starting_order
from plumbfall.flow.reflection import EndKind
from plumbfall.flow.tables import NodeCheck, Table, TableBuilder

__all__ = ["TABLE", "end_excess"]

Array = NDArray[np.float64]

RATIOS = (0.01, 0.8)
LEAST_GAP = 0.01  # in ball radii
REACH = 3.0  # in bore radii
STRETCH = 3.0  # c above
# The interpolant is the excess times exp(DECAY (distance - ratio)).
DECAY = 5.0  # below the true rate of 8.93 per bore radius, or rounding would be amplified
_ENDS: tuple[EndKind, EndKind] = ("solid", "free")
_RATIO_NODES, _DISTANCE_NODES = 18, 30
_MODES = 20
_ORDER_STEP = 8  # distances share a set of multipoles


def end_excess(*, ball: BallInTube, distance: float, end: EndKind) -> float:
    """Excess of the drag near one end over that far from both.

    Parameters
    ----------
    ball : BallInTube
        Ball, tube, and how finely they are resolved.
    distance : float [1]
        Distance of the ball's centre from the end over bore radius.
    end : {"solid", "free"}
        What the end is.

    Returns
    -------
    float [1]
        K/K0 - 1.
    """
    return ball.factor(distance=distance, end=end) / ball.factor_without_ends - 1.0


def _chebyshev(count: int) -> Array:
    return np.asarray((1.0 - np.cos(np.pi * (np.arange(count) + 0.5) / count)) / 2.0)


def _ratios() -> Array:
    low, high = (np.log(ratio / (1.0 - ratio)) for ratio in RATIOS)
    return np.asarray(1.0 / (1.0 + np.exp(-(low + (high - low) * _chebyshev(_RATIO_NODES)))))


def _distances(ratio: float) -> Array:
    def place(gap: float) -> float:
        return float(np.log(gap / ratio) + STRETCH * gap)

    nearest, farthest = LEAST_GAP * ratio, REACH - ratio
    places = place(nearest) + (place(farthest) - place(nearest)) * _chebyshev(_DISTANCE_NODES)
    gaps = [
        brentq(lambda gap, target=target: place(gap) - target, 0.9 * nearest, 1.1 * farthest)
        for target in places
    ]
    return ratio + np.array(gaps)


def _ball(balls: dict[int, BallInTube], ratio: float, distance: float) -> BallInTube:
    order = starting_order(diameter_ratio=ratio, distance=distance)
    order = _ORDER_STEP * -(-order // _ORDER_STEP)
    if order not in balls:
        balls[order] = BallInTube(diameter_ratio=ratio, order=order, modes=_MODES)
    return balls[order]


def _build(step: Callable[[], None]) -> Table:
    ratios = _ratios()
    distances = np.stack([_distances(float(ratio)) for ratio in ratios])
    excess = {end: np.empty_like(distances) for end in _ENDS}
    for i, ratio in enumerate(ratios):
        balls: dict[int, BallInTube] = {}
        for j, distance in enumerate(distances[i]):
            ball = _ball(balls, float(ratio), float(distance))
            for end in _ENDS:
                excess[end][i, j] = end_excess(ball=ball, distance=float(distance), end=end)
            step()
    return Table(
        name=TABLE.name,
        about={
            "quantity": "excess of the drag on a ball on the axis near one end of a long tube, "
            "K/K0 - 1, Reynolds number 0; distances of the ball's centre in bore radii",
            "solver": "plumbfall.flow.ball_in_tube: multipoles and their images in the end, "
            "Fourier-Bessel wall answers and end modes, least squares on ball and end",
            "settings": f"{_RATIO_NODES} Chebyshev nodes of ln(ratio/(1 - ratio)), "
            f"{_DISTANCE_NODES} of ln(gap/ratio) + {STRETCH:g} gap; {_MODES} end modes; "
            "orders of multipole by the gap",
            "estimated_relative_error_of_drag": 5e-6,
            "lowest_diameter_ratio": RATIOS[0],
            "highest_diameter_ratio": RATIOS[1],
            "least_gap_in_ball_radii": LEAST_GAP,
            "reach_in_bore_radii": REACH,
            "stretch": STRETCH,
            "decay": DECAY,
        },
        arrays={
            "diameter_ratio": ratios,
            "distance": distances,
            "excess_solid": excess["solid"],
            "excess_free": excess["free"],
        },
    )


def _check(table: Table) -> Iterator[NodeCheck]:
    """Recompute with half as many multipoles and modes again."""
    ratios, distances = table.arrays["diameter_ratio"], table.arrays["distance"]
    for i, j in ((0, 0), (2, 18), (5, 9), (8, 14), (11, 3), (14, 6), (17, 12)):
        ratio, distance = float(ratios[i]), float(distances[i, j])
        order = starting_order(diameter_ratio=ratio, distance=distance)
        ball = BallInTube(
            diameter_ratio=ratio, order=order + order // 2, modes=_MODES + _MODES // 2
        )
        for end in _ENDS:
            yield NodeCheck(
                node=f"1 + excess, diameter ratio {ratio:.4f}, distance {distance:.4f}, {end}",
                shipped=1.0 + float(table.arrays[f"excess_{end}"][i, j]),
                recomputed=1.0 + end_excess(ball=ball, distance=distance, end=end),
                tolerance=1e-5,
            )


TABLE = TableBuilder(
    name="end_excess",
    title="ball near an end of the tube, Reynolds number 0",
    steps=_RATIO_NODES * _DISTANCE_NODES,
    build=_build,
    check=_check,
)
