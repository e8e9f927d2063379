r"""A ball released from rest on the axis of an endless tube, with inertia: unsteady Navier-Stokes.

The ball's centre is the origin, so that the mesh of the steady solver serves (``mesh``,
``tube_elements``); u is the velocity of the liquid relative to the ball and w = u - v e that
relative to the tube, e the direction from which the ball sees the tube coming. In

.. math:: \rho\left(\partial_t w + u\cdot\nabla u\right) = -\nabla p + \eta\nabla^2 u

nothing fictitious appears: the acceleration of the frame is the difference between the time
derivatives of w and u. In terms of u it is a uniform body force, which a pressure like that of
weight in resting liquid would balance; here it stays on the left, the pressure is the true one,
and the reaction at the ball's nodes is the whole force, added mass and history included. Wall and
far liquid, at rest in w, move past the ball at u = v e. The speed follows from

.. math:: m\,\dot v = W - F(u, p, v)

as one more unknown of the same linear system, as an added mass demands. Steps are BDF2, linearised
once about an extrapolated state (an error of the fourth order), their length governed by the error
of the speed relative to what is still missing of it.
Lengths are in ball radii a, speeds in the terminal v_t, times in a^2/nu.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.flow.condensation import CondensedSystem
from plumbfall.flow.mesh import MeshSettings, TubeMesh, tube_mesh
from plumbfall.flow.navier_stokes import TubeFlow
from plumbfall.flow.quads import quad_element
from plumbfall.flow.tube_elements import TubeElements

__all__ = ["InertialStart", "StartHistory"]

Array = NDArray[np.float64]

DEGREE = 4
"""Degree of the velocity polynomials used for the shipped table."""

_FIRST_STEP = 1e-4
_GROWTH = 1.3
_LEAST_SPEED_MISSING = 1e-3  # the error of a step is judged relative to at least this
_MOST_STEPS = 2000


@dataclass(frozen=True)
class StartHistory:
    """A start: at each time the speed over v_t, and the lost time, the integral of the deficit.

    Times are viscous times 4 nu t / d^2; the distance fallen is v_t times ``time - lost``.
    """

    time: Array
    speed: Array
    lost: Array
    last_slope: float

    @property
    def lost_in_all(self) -> float:
        """Lost time long after the release, the last decay carried on as an exponential."""
        missing = 1.0 - float(self.speed[-1])
        return float(self.lost[-1]) + missing**2 / self.last_slope


class InertialStart:
    """Starts at one diameter ratio and terminal Reynolds number, for balls of any density.

    Parameters
    ----------
    diameter_ratio : float
        Ball diameter over bore, above 0 and below 1.
    reynolds : float
        Terminal Reynolds number v_t d / nu, 0 included.
    degree : int
        Degree of the velocity polynomials.
    settings : MeshSettings, optional
        Fineness and lengths of the mesh.
    """

    def __init__(
        self,
        *,
        diameter_ratio: float,
        reynolds: float,
        degree: int = DEGREE,
        settings: MeshSettings | None = None,
    ) -> None:
        settings = settings or MeshSettings(wake_reynolds=30.0)
        mesh = tube_mesh(diameter_ratio=diameter_ratio, settings=settings)
        velocity, pressure = mesh.number_nodes(degree), mesh.number_nodes(degree - 1)
        count = velocity.count
        self.reynolds = reynolds
        self._unknowns = np.concatenate(
            (velocity.nodes, count + velocity.nodes, 2 * count + pressure.nodes), axis=1
        )
        self._size = 2 * count + pressure.count
        self._elements = TubeElements(mesh, degree)
        self._mass = _mass_matrix(mesh, degree)
        self._axial = np.zeros(self._size)
        self._axial[:count] = 1.0
        self._stream = np.zeros(self._size)
        self._stream[velocity.wall] = self._stream[velocity.inlet] = 1.0
        self._ball = np.zeros(self._size)
        self._ball[velocity.ball] = 1.0
        free = np.ones(self._size, dtype=bool)
        given = np.concatenate((velocity.ball, velocity.wall, velocity.inlet))
        free[given] = free[count + given] = free[count + velocity.axis] = False
        self._system = CondensedSystem(unknowns=self._unknowns, inner=_inside(degree), free=free)
        steady = TubeFlow(diameter_ratio=diameter_ratio, degree=degree, settings=settings)
        self.steady_factor = steady.drag_factor(reynolds)

    def run(
        self, *, density_ratio: float, missing: float = 1e-4, tolerance: float = 2e-3
    ) -> StartHistory:
        """Follow the ball from rest until little of its speed is missing.

        Parameters
        ----------
        density_ratio : float [1]
            Density of the ball over that of the liquid.
        missing : float [1]
            Deficit 1 - v / v_t at which to stop.
        tolerance : float
            Error of a step over the deficit.

        Returns
        -------
        StartHistory
            From time 0 on.

        Raises
        ------
        ArithmeticError
            If the speed does not come near its terminal value.
        """
        past = _Past(self._size)
        step = _FIRST_STEP
        while abs(1.0 - past.speeds[-1]) > missing:
            if len(past.times) > _MOST_STEPS:
                raise ArithmeticError(f"start at Reynolds number {self.reynolds:g} does not end")
            now = past.times[-1] + step
            state, speed = past.extrapolated(now)
            expected = speed
            state, speed, slope = self._advance(past, now, state, speed, density_ratio)
            allowed = tolerance * max(abs(1.0 - speed), _LEAST_SPEED_MISSING)
            error = abs(speed - expected) / 4.0
            change = 0.9 * (allowed / max(error, 1e-300)) ** (1.0 / 3.0)
            if change < 0.6 and len(past.times) > 2:
                step *= max(change, 0.3)
                continue
            past.append(now, state, speed, slope)
            step *= min(_GROWTH, change)
        return past.history()

    def _advance(
        self, past: _Past, now: float, state: Array, speed: float, density_ratio: float
    ) -> tuple[Array, float, float]:
        """Return state, speed and its slope at a later time, from a guess of the first two."""
        weights = past.slope_weights(now)
        lead = weights[0]
        inertia = 2.0 / 3.0 * density_ratio
        # rates of change of w and v so far as they are known, and with the guess
        known, known_slope = past.combined(weights[1:], self._axial)
        rate = lead * (state - speed * self._axial) + known
        local = state[self._unknowns]
        half = self.reynolds / 2.0
        velocities = self._mass.shape[1]
        matrix = self._elements.tangent(local, half).copy()
        residual = self._elements.residual(local, half)
        across = slice(velocities, 2 * velocities)
        for part in (slice(0, velocities), across):
            matrix[:, part, part] += lead * self._mass
            moved = rate[self._unknowns[:, part]]
            residual[:, part] += (self._mass @ moved[..., None])[..., 0]
        by_speed = (matrix @ self._stream[self._unknowns][..., None])[..., 0]
        by_speed[:, :velocities] -= lead * self._mass.sum(axis=2)
        # the given velocities of wall and inlet follow the speed, the guess already does
        found = self._system.solve(matrix, -np.stack((residual, by_speed), axis=-1))
        found[:, 1] += self._stream
        at_ball = self._ball[self._unknowns]
        row = (at_ball[:, None, :] @ matrix)[:, 0]
        by_state = np.einsum("el,elc->c", row, found[self._unknowns])
        by_state[1] -= lead * float((at_ball[:, :velocities, None] * self._mass).sum())
        drag = -float((at_ball * residual).sum())
        # inertia (lead (speed + d) + known_slope) = 3 K - drag + by_state . (1, d)
        excess = 3.0 * self.steady_factor - drag + by_state[0]
        excess -= inertia * (lead * speed + known_slope)
        change = excess / (inertia * lead - by_state[1])
        state = state + found[:, 0] + change * found[:, 1]
        speed += change
        return state, speed, lead * speed + known_slope


class _Past:
    """States so far, the last three of them kept."""

    def __init__(self, size: int) -> None:
        self.times, self.speeds, self.slopes = [0.0], [0.0], [0.0]
        self._states = [np.zeros(size)]  # latest first

    def append(self, time: float, state: Array, speed: float, slope: float) -> None:
        if len(self.times) == 1:
            self.slopes[0] = slope
        self.times.append(time)
        self.speeds.append(speed)
        self.slopes.append(slope)
        self._states = [state, *self._states[:2]]

    def extrapolated(self, now: float) -> tuple[Array, float]:
        """State and speed at a later time by the parabola through the last three."""
        known = np.array(self.times[-1:-4:-1])
        weights = [
            np.prod([(now - other) / (one - other) for other in known if other != one])
            for one in known
        ]
        state = np.asarray(sum(w * one for w, one in zip(weights, self._states, strict=True)))
        return state, float(np.dot(weights, self.speeds[-1:-4:-1]))

    def slope_weights(self, now: float) -> list[float]:
        """Weights of the slope at a later time: on the value then, and on the last ones."""
        first = now - self.times[-1]
        if len(self.times) == 1:
            return [1.0 / first, -1.0 / first]
        second = now - self.times[-2]
        between = second - first
        return [
            1.0 / first + 1.0 / second,
            -second / (first * between),
            first / (second * between),
        ]

    def combined(self, weights: list[float], axial: Array) -> tuple[Array, float]:
        """Weighted sums of the last velocities relative to the tube, and of the last speeds."""
        speeds = self.speeds[-1 : -1 - len(weights) : -1]
        total = sum(
            weight * (state - speed * axial)
            for weight, state, speed in zip(weights, self._states, speeds, strict=False)
        )
        return np.asarray(total), float(np.dot(weights, speeds))

    def history(self) -> StartHistory:
        """Integrate the deficit, by cubics that meet its slopes."""
        time, speed, slope = (np.array(one) for one in (self.times, self.speeds, self.slopes))
        step = np.diff(time)
        parts = step * (1.0 - 0.5 * (speed[1:] + speed[:-1]))
        parts -= step**2 * (slope[:-1] - slope[1:]) / 12.0
        lost = np.concatenate(([0.0], np.cumsum(parts)))
        return StartHistory(time=time, speed=speed, lost=lost, last_slope=float(slope[-1]))


def _mass_matrix(mesh: TubeMesh, degree: int) -> Array:
    element = quad_element(degree)
    _, rho, jacobian = mesh.map_points(element.points)
    weight = element.weights * abs(np.linalg.det(jacobian)) * rho
    matrix: Array = element.velocity.T @ (weight[..., None] * element.velocity)
    return matrix


def _inside(degree: int) -> NDArray[np.bool_]:
    """Which unknowns of an element no other element shares."""

    def of(order: int) -> NDArray[np.bool_]:
        flag = np.zeros((order + 1, order + 1), dtype=bool)
        flag[1:-1, 1:-1] = True
        return flag.ravel()

    return np.concatenate((of(degree), of(degree), of(degree - 1)))
