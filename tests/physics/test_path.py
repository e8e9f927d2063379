"""The end excess along a path, also of balls smaller than the table's."""

from __future__ import annotations

import numpy as np
import pytest

from plumbfall.flow.ball_in_tube import BallInTube
from plumbfall.physics import plane_factor
from plumbfall.physics.path import path_excess

ONE = np.ones(1)


def mean(ratio, distance, length=1e-3, end="solid"):
    """Mean over a path, by default so short that it is the excess at its middle."""
    found = path_excess(np.asarray(ratio), distance - length / 2, length * ONE, ONE, end)
    return float(np.ravel(found.mean)[0])


@pytest.mark.parametrize(("distance", "within"), [(0.1, 2.5e-4), (0.3, 1e-5), (1.0, 1e-6)])
@pytest.mark.parametrize("ratio", [0.001, 0.004, 0.007, 0.0099])
def test_balls_below_the_table_are_the_solvers(ratio, distance, within):
    ball = BallInTube(diameter_ratio=ratio, order=12, modes=30)
    solved = ball.factor(distance=distance, end="solid") / ball.factor_without_ends - 1
    # a path of 0.001 bore radii about the place adds its curvature, 1e-6 of the excess
    assert mean([ratio], distance) == pytest.approx(solved, abs=within)


def test_a_very_small_ball_feels_a_plane():
    # Brenner 1961, Chem. Eng. Sci. 16, 242. The coefficient is read off a ball that is two radii
    # from the bottom here, whose drag has third powers too: 6 % of it; the walls take another 4 %
    ratio, distance = 1e-4, 0.02
    plane = plane_factor(gap_ratio=distance / ratio) - 1
    assert 0.89 * plane < mean([ratio], distance) < plane


@pytest.mark.parametrize("end", ["solid", "free"])
def test_the_edge_of_the_table_is_crossed_smoothly(end):
    inside, outside = (
        path_excess(np.array([r]), 0.2 * ONE, 2 * ONE, ONE, end)
        for r in (0.01, np.nextafter(0.01, 0))
    )
    assert inside.mean == pytest.approx(outside.mean, rel=1e-9)
    assert inside.by_distance == pytest.approx(outside.by_distance, rel=1e-9)
    # below it the third power of the ratio is left out
    assert inside.by_ratio == pytest.approx(outside.by_ratio, rel=1e-2)


@pytest.mark.parametrize("ratio", [0.002, 0.009, 0.05, 0.4])
@pytest.mark.parametrize("end", ["solid", "free"])
def test_derivatives_are_those_of_the_mean(ratio, end):
    def at(ratio=ratio, distance=0.5, radius=1.0, length=1.5):
        return path_excess(np.array([ratio]), distance * ONE, length * ONE, radius * ONE, end)

    step, here = 1e-5, at()
    by_ratio = (at(ratio * (1 + step)).mean - at(ratio * (1 - step)).mean) / (2 * step)
    assert here.by_ratio == pytest.approx(by_ratio, rel=1e-5, abs=1e-10)
    by_distance = (at(distance=0.5 + step).mean - at(distance=0.5 - step).mean) / (2 * step)
    assert here.by_distance == pytest.approx(by_distance, rel=1e-4, abs=1e-9)
    by_bore = (at(radius=1 + step).mean - at(radius=1 - step).mean) / (2 * step)
    assert here.by_bore == pytest.approx(by_bore, rel=1e-4, abs=1e-9)
