r"""The table behind the run-in delay: starts from rest over ratio, Reynolds number and density.

A start is told by the lost time T, the integral of 1 - v/v_t, in viscous times a^2/nu: how late
the ball is in the end; and by how it gets there, as a function of the depth y fallen, of which

.. math:: Z = \frac{y}{v_t T}, \qquad \mathrm{lost}(Z) = T\left(1 - e^{-G(Z)}\right)

so that ln G over ln Z is smooth: of slope 1/2 at first, as under gravity
alone, and 1 or so at last.
Nodes are where polynomials want them, Chebyshev-Lobatto points of

* ln(ratio / (1 - ratio)), from 0.01 to 0.4;
* ln(1 + (Re / Re_s)^2) / 2 from Re = 0 to 30, with Re_s = 20 ratio / (1 - ratio) as in the drag
  map: between walls a start is even in Re;
* ln(density ratio + 1/2), the half being the added mass, from 1.1 to 15.

At Re = 0 the start is the exact one (``start_creeping``), beyond that ``start_inertial``. A run
stops when only 1e-4 of the speed is missing, half of what a transit may be wrong by; from there
ln G goes on as a straight line. In wide tubes the vortex that the start left behind keeps up to
7e-5 missing for longer, which is left out.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.interpolate import CubicSpline

from plumbfall.flow.start_creeping import CreepingStart
from plumbfall.flow.start_inertial import InertialStart
from plumbfall.flow.tables import NodeCheck, Table, TableBuilder

__all__ = ["TABLE", "StartCurve", "creeping_curve", "inertial_curve"]

Array = NDArray[np.float64]

_RATIO_LIMITS = (0.01, 0.4)
_DENSITY_LIMITS = (1.1, 15.0)
_HIGHEST_REYNOLDS = 30.0
_SCREENING = 20.0
_ADDED = 0.5
_RATIOS, _REYNOLDS, _DENSITIES = 7, 7, 5
_SCALED_DEPTHS = np.geomspace(3e-4, 200.0, 35)
_DEGREE = 3
_STEP_TOLERANCE = 4e-4
_MISSING = 1e-4
_FIRST = 2e-3  # viscous time before which a run has not forgotten its first steps
_FREE_FALL = 0.5  # slope of ln G at first, before the drag has grown
_LEAST_LEFT = 3e-4  # of the lost time, from where on ln G is a straight line


@dataclass(frozen=True)
class StartCurve:
    """A start as the table tells it.

    ``total`` is the lost time in viscous times 4 nu t / d^2, ``depth`` the distance fallen over
    v_t in the same, ``left`` the share of the total still to be lost there.
    """

    total: float
    depth: Array
    left: Array

    def log_shape(self, scaled_depth: Array) -> Array:
        """Return ln G at depths over v_t T."""
        sound = (self.depth > 0.0) & (self.left > _LEAST_LEFT) & (self.left < 1.0)
        x = np.log(self.depth[sound] / self.total)
        y = np.log(-np.log(self.left[sound]))
        at = np.log(scaled_depth)
        inside = CubicSpline(x, y)(np.clip(at, x[0], x[-1]))
        before, beyond = np.minimum(at - x[0], 0.0), np.maximum(at - x[-1], 0.0)
        last_slope = (y[-1] - y[-5]) / (x[-1] - x[-5])
        shape: Array = inside + _FREE_FALL * before + last_slope * beyond
        return shape


def creeping_curve(*, start: CreepingStart, density_ratio: float) -> StartCurve:
    """Start without inertia, of a ball of a density ratio."""
    time = np.geomspace(_FIRST, start.last, 400)
    lost = start.lost_time(time=time, density_ratio=density_ratio)
    return StartCurve(total=float(lost[-1]), depth=time - lost, left=1.0 - lost / lost[-1])


def inertial_curve(
    *,
    start: InertialStart,
    density_ratio: float,
    missing: float = _MISSING,
    tolerance: float = _STEP_TOLERANCE,
) -> StartCurve:
    """Start with inertia, of a ball of a density ratio."""
    run = start.run(density_ratio=density_ratio, missing=missing, tolerance=tolerance)
    kept = run.time >= _FIRST
    total, lost = run.lost_in_all, run.lost[kept]
    return StartCurve(total=total, depth=run.time[kept] - lost, left=1.0 - lost / total)


def _lobatto(count: int, low: float, high: float) -> Array:
    """Chebyshev-Lobatto points, ascending, both ends included."""
    return low + (high - low) * 0.5 * (1.0 - np.cos(np.pi * np.arange(count) / (count - 1)))


def ratio_nodes() -> Array:
    """Diameter ratios of the table, ascending."""
    low, high = (np.log(ratio / (1.0 - ratio)) for ratio in _RATIO_LIMITS)
    ratios = 1.0 / (1.0 + np.exp(-_lobatto(_RATIOS, low, high)))
    ratios[[0, -1]] = _RATIO_LIMITS
    return ratios


def reynolds_nodes(diameter_ratio: float) -> Array:
    """Reynolds numbers of the table at a diameter ratio, ascending from 0 to 30."""
    scale = _SCREENING * diameter_ratio / (1.0 - diameter_ratio)
    highest = 0.5 * np.log1p((_HIGHEST_REYNOLDS / scale) ** 2)
    nodes = scale * np.sqrt(np.expm1(2.0 * _lobatto(_REYNOLDS, 0.0, highest)))
    nodes[-1] = _HIGHEST_REYNOLDS
    return nodes


def density_nodes() -> Array:
    """Density ratios of the table, ascending."""
    low, high = (np.log(ratio + _ADDED) for ratio in _DENSITY_LIMITS)
    ratios = np.exp(_lobatto(_DENSITIES, low, high)) - _ADDED
    ratios[[0, -1]] = _DENSITY_LIMITS
    return ratios


def _curves(diameter_ratio: float, reynolds: float) -> Iterator[StartCurve]:
    """Curves of all density ratios."""
    if reynolds == 0.0:
        exact = CreepingStart(diameter_ratio=diameter_ratio, first=_FIRST)
        for density_ratio in density_nodes():
            yield creeping_curve(start=exact, density_ratio=float(density_ratio))
        return
    start = InertialStart(diameter_ratio=diameter_ratio, reynolds=reynolds, degree=_DEGREE)
    for density_ratio in density_nodes():
        yield inertial_curve(start=start, density_ratio=float(density_ratio))


def _build(step: Callable[[], None]) -> Table:
    ratios, densities = ratio_nodes(), density_nodes()
    reynolds = np.stack([reynolds_nodes(float(ratio)) for ratio in ratios])
    totals = np.empty((_RATIOS, _REYNOLDS, _DENSITIES))
    shapes = np.empty((*totals.shape, _SCALED_DEPTHS.size))
    for i, ratio in enumerate(ratios):
        for j, number in enumerate(reynolds[i]):
            for k, curve in enumerate(_curves(float(ratio), float(number))):
                totals[i, j, k] = float(f"{curve.total:.6g}")
                shapes[i, j, k] = np.round(curve.log_shape(_SCALED_DEPTHS), 4)
            step()
    return Table(
        name=TABLE.name,
        about={
            "quantity": "start from rest of a ball on the axis of an infinite tube: lost_time, "
            "T = integral of 1 - v/v_t over 4 nu t / d^2; log_shape, ln G over Z = y / (v_t T), "
            "of which T (1 - exp(-G)) is lost at depth y",
            "solver": "plumbfall.flow.start_creeping at Reynolds number 0: multipoles and "
            "Fourier-Bessel wall answers of unsteady Stokes flow, Laplace inversion; beyond, "
            "plumbfall.flow.start_inertial: unsteady Navier-Stokes, Taylor-Hood finite elements, "
            "BDF2, ball and flow coupled",
            "settings": f"velocity of degree {_DEGREE}, default mesh, step tolerance "
            f"{_STEP_TOLERANCE:g}, runs to a speed deficit of {_MISSING:g}; Chebyshev-Lobatto "
            "nodes of ln(ratio/(1 - ratio)), ln(1 + (Re/Re_s)^2)/2 and ln(density ratio + 1/2), "
            f"Re_s = {_SCREENING:g} ratio/(1 - ratio)",
            "estimated_relative_error_of_bias": 0.15,
            "estimated_relative_error_of_bias_of": "timings over a ball diameter or more whose "
            "bias is above 0.1 % of the transit; below, 1.5e-4 of the transit; against starts with "
            "finer elements and steps at random between the nodes",
        },
        arrays={
            "diameter_ratio": ratios,
            "reynolds": reynolds,
            "density_ratio": densities,
            "lost_time": totals,
            "scaled_depth": _SCALED_DEPTHS,
            "log_shape": shapes,
        },
    )


def _check(table: Table) -> Iterator[NodeCheck]:
    """Recompute with finer elements and steps, or with later runs for the creeping start."""
    arrays = table.arrays
    for i, j, k in ((0, 6, 0), (1, 3, 4), (3, 0, 2), (3, 5, 1), (5, 4, 3), (6, 6, 4)):
        ratio, number = float(arrays["diameter_ratio"][i]), float(arrays["reynolds"][i, j])
        density = float(arrays["density_ratio"][k])
        if number == 0.0:
            exact = CreepingStart(diameter_ratio=ratio, first=_FIRST)
            curve = creeping_curve(start=exact, density_ratio=density)
        else:
            start = InertialStart(diameter_ratio=ratio, reynolds=number, degree=_DEGREE + 1)
            curve = inertial_curve(
                start=start, density_ratio=density, tolerance=_STEP_TOLERANCE / 2
            )
        node = f"ratio {ratio:.4f}, Reynolds number {number:.4f}, density ratio {density:.4f}"
        yield NodeCheck(
            node=f"lost time, {node}",
            shipped=float(arrays["lost_time"][i, j, k]),
            recomputed=curve.total,
            tolerance=5e-3,
        )
        for depth in (6, 16, 22):
            yield NodeCheck(
                node=f"ln G at {_SCALED_DEPTHS[depth]:.3g}, {node}",
                shipped=float(arrays["log_shape"][i, j, k, depth]),
                recomputed=float(curve.log_shape(_SCALED_DEPTHS)[depth]),
                tolerance=0.02,
                absolute=True,
            )


TABLE = TableBuilder(
    name="start_up",
    title="start from rest, all Reynolds numbers to 30",
    steps=_RATIOS * _REYNOLDS,
    build=_build,
    check=_check,
    slow=True,
)
