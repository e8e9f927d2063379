r"""The table behind the drag map: K over diameter ratio and Reynolds number, and unbounded.

Nodes are where polynomials want them, in variables in which the drag is as smooth as it gets:

* diameter ratio: Chebyshev-Lobatto in ln(lambda / (1 - lambda)), from 0.01 to 0.8;
* Reynolds number: Chebyshev-Radau (without Re = 0, where the logarithm below vanishes) in
  x = ln(1 + (Re / Re_s)^2) / 2, from there to Re = 100, with Re_s = 20 lambda / (1 - lambda), where
  screening by the walls ends: in a tube the drag is even in Re, so that ln(K / K0) is x times a
  smooth function of x;
* unbounded: Chebyshev-Lobatto in ln(1 + 4 sqrt(Re)), without Re = 0; ball in a tube ten thousand
  times wider, and below Re = 0.03, where even that tube would be felt, the expansion of Chester
  and Breach 1969 (J. Fluid Mech. 37, 751), whose next term is of the order 1e-6 there.

K0 is solved on the same mesh as K, so that most of the error of the mesh cancels in their ratio.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator

import numpy as np
from numpy.typing import NDArray

from plumbfall.flow.navier_stokes import DEGREE, tube_drag_factors
from plumbfall.flow.tables import NodeCheck, Table, TableBuilder

__all__ = ["TABLE"]

Array = NDArray[np.float64]

_RATIO_LIMITS = (0.01, 0.8)
_HIGHEST_REYNOLDS = 100.0
_SCREENING = 20.0
_RATIOS = 20
_REYNOLDS = 11
_UNBOUNDED_RATIO = 1e-4
_UNBOUNDED = 19
_UNBOUNDED_FROM = 0.03
_TOLERANCE = 2e-6  # between one computer and another, and Newton paths


def _lobatto(count: int, low: float, high: float) -> Array:
    """Chebyshev-Lobatto points, ascending, both ends included."""
    angle = np.pi * np.arange(count) / (count - 1)
    return low + (high - low) * 0.5 * (1.0 - np.cos(angle))


def _radau(count: int, high: float) -> Array:
    """Chebyshev-Radau points on 0 to ``high``, ascending, without 0."""
    angle = 2.0 * np.pi * np.arange(count)[::-1] / (2 * count - 1)
    return high * 0.5 * (1.0 + np.cos(angle))


def ratio_nodes() -> Array:
    """Diameter ratios of the table, ascending."""
    low, high = (np.log(ratio / (1.0 - ratio)) for ratio in _RATIO_LIMITS)
    ratios = 1.0 / (1.0 + np.exp(-_lobatto(_RATIOS, low, high)))
    ratios[[0, -1]] = _RATIO_LIMITS
    return ratios


def reynolds_nodes(diameter_ratio: float) -> Array:
    """Reynolds numbers of the table at a diameter ratio, ascending, the last one 100."""
    scale = _SCREENING * diameter_ratio / (1.0 - diameter_ratio)
    highest = 0.5 * np.log1p((_HIGHEST_REYNOLDS / scale) ** 2)
    nodes = scale * np.sqrt(np.expm1(2.0 * _radau(_REYNOLDS, highest)))
    nodes[-1] = _HIGHEST_REYNOLDS
    return nodes


def unbounded_nodes() -> Array:
    """Reynolds numbers of the table for an unbounded ball, ascending, the last one 100."""
    highest = np.log1p(4.0 * np.sqrt(_HIGHEST_REYNOLDS))
    nodes = (np.expm1(_lobatto(_UNBOUNDED, 0.0, highest)[1:]) / 4.0) ** 2
    nodes[-1] = _HIGHEST_REYNOLDS
    return nodes


def chester_breach(reynolds: Array) -> Array:
    """Return the drag factor of an unbounded ball at small Reynolds numbers."""
    log_half = np.log(reynolds / 2.0)
    bracket = log_half + np.euler_gamma + 5.0 / 3.0 * np.log(2.0) - 323.0 / 360.0
    series: Array = (
        1.0
        + 3.0 / 16.0 * reynolds
        + 9.0 / 160.0 * reynolds**2 * bracket
        + 27.0 / 640.0 * reynolds**3 * log_half
    )
    return series


def _build(step: Callable[[], None]) -> Table:
    ratios = ratio_nodes()
    reynolds = np.stack([reynolds_nodes(float(ratio)) for ratio in ratios])
    fine, coarse = (np.empty((_RATIOS, _REYNOLDS + 1)) for _ in range(2))
    for i, ratio in enumerate(ratios):
        for factors, degree in ((fine, DEGREE), (coarse, DEGREE - 1)):
            factors[i] = tube_drag_factors(
                diameter_ratio=float(ratio), reynolds=(0.0, *reynolds[i]), degree=degree
            )
        step()
    unbounded = unbounded_nodes()
    small = unbounded < _UNBOUNDED_FROM
    wide = np.concatenate(
        (
            chester_breach(unbounded[small]),
            tube_drag_factors(diameter_ratio=_UNBOUNDED_RATIO, reynolds=list(unbounded[~small])),
        )
    )
    step()
    error = abs(coarse / fine - 1.0)
    return Table(
        name=TABLE.name,
        about={
            "quantity": "drag on a ball at rest on the axis of an infinite tube over its Stokes "
            "drag, wall and far liquid moving past it together; Reynolds number v d / nu",
            "solver": "plumbfall.flow.navier_stokes: steady axisymmetric Navier-Stokes, "
            "Taylor-Hood finite elements, Newton's method",
            "settings": f"velocity of degree {DEGREE}, default mesh; K0 on the same mesh as K; "
            f"unbounded: diameter ratio {_UNBOUNDED_RATIO:g}, below Reynolds number "
            f"{_UNBOUNDED_FROM:g} the expansion of Chester and Breach 1969",
            "estimated_relative_error": float(f"{error.max():.1e}"),
            "estimated_relative_error_of": "the node where it is largest: change of K on going "
            f"from degree {DEGREE} to {DEGREE - 1}; node by node in relative_error",
            "screening": f"Re_s = {_SCREENING:g} ratio / (1 - ratio)",
        },
        arrays={
            "diameter_ratio": ratios,
            "reynolds": reynolds,
            "creeping_factor": _short(fine[:, 0]),
            "drag_factor": _short(fine[:, 1:]),
            "relative_error": np.array([[float(f"{e:.1e}") for e in row] for row in error[:, 1:]]),
            "unbounded_reynolds": unbounded,
            "unbounded_factor": _short(wide),
        },
    )


def _short(factors: Array) -> Array:
    """Factors to ten digits: more are noise."""
    return np.array([float(f"{factor:.10g}") for factor in factors.flat]).reshape(factors.shape)


def _check(table: Table) -> Iterator[NodeCheck]:
    arrays = table.arrays
    for i, columns in ((0, (3, 10)), (9, (4, 10)), (14, (2, 10)), (19, (5, 10))):
        ratio, reynolds = float(arrays["diameter_ratio"][i]), arrays["reynolds"][i]
        found = tube_drag_factors(diameter_ratio=ratio, reynolds=[reynolds[j] for j in columns])
        for j, factor in zip(columns, found, strict=True):
            yield NodeCheck(
                node=f"diameter ratio {ratio:.4f}, Reynolds number {reynolds[j]:.4g}",
                shipped=float(arrays["drag_factor"][i, j]),
                recomputed=float(factor),
                tolerance=_TOLERANCE,
            )


TABLE = TableBuilder(
    name="drag_map",
    title="drag over diameter ratio and Reynolds number",
    steps=_RATIOS + 1,
    build=_build,
    check=_check,
)
