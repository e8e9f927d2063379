import numpy as np
import pytest

from plumbfall.flow.ball_in_tube import BallInTube
from plumbfall.flow.end_excess import end_excess
from plumbfall.flow.finite_tube import starting_order
from plumbfall.physics.exact import creeping_wall_factor
from plumbfall.physics.exact_ends import (
    END_EXCESS_LEAST_GAP,
    END_EXCESS_RATIO_LIMITS,
    END_EXCESS_REACH,
    end_excess_table,
)

# between nodes; ratio, gap in ball radii
PLACES = [(0.0115, 0.013), (0.014, 6.0), (0.037, 0.4), (0.071, 0.027), (0.13, 3.3), (0.25, 0.11),
          (0.33, 1.7), (0.47, 0.35), (0.61, 0.013), (0.72, 0.07), (0.78, 0.5)]  # fmt: skip


@pytest.mark.parametrize("end", ["solid", "free"])
@pytest.mark.parametrize(("ratio", "gap"), PLACES)
def test_excess_between_the_nodes_is_the_solvers(ratio, gap, end):
    distance = ratio * (1 + gap)
    order = starting_order(diameter_ratio=ratio, distance=distance) + 8
    ball = BallInTube(diameter_ratio=ratio, order=order, modes=24)
    solved = end_excess(ball=ball, distance=distance, end=end)
    excess, _, _ = end_excess_table(ratio, distance, end)
    assert 1 + excess == pytest.approx(1 + solved, rel=1e-4)


def drag_near(ratio, distance, end):
    return creeping_wall_factor(ratio)[0] * (1 + end_excess_table(ratio, distance, end)[0])


@pytest.mark.parametrize(("height", "printed"), [(1.1276, 9.2518), (1.5431, 3.0361)])
def test_wide_tube_gives_the_printed_factors_of_a_plane(height, printed):
    # Brenner 1961, Chem. Eng. Sci. 16, 242: heights cosh 0.5 and cosh 1 in ball radii. The
    # height is rounded to 5 digits; the bore adds 1e-4 at ratio 0.01.
    assert drag_near(0.01, 0.01 * height, "solid") == pytest.approx(printed, rel=5e-4)


def test_one_bore_radius_away_it_is_below_tanners_bound():
    # Tanner 1963, J. Fluid Mech. 17, 161: less than 4.5e-3 of Faxén's drag (that is, of K0 - 1)
    factor, _ = creeping_wall_factor(0.01)
    excess, _, _ = end_excess_table(0.01, 1.0, "solid")
    assert 4.2e-3 < excess / (factor - 1) < 4.5e-3


@pytest.mark.parametrize("end", ["solid", "free"])
def test_slopes_are_those_of_the_value(end):
    rng = np.random.default_rng(20)
    ratio = rng.uniform(0.011, 0.79, 300)
    distance = ratio * (1.02 + rng.exponential(1.0, 300))
    _, of_distance, of_ratio = end_excess_table(ratio, distance, end)
    step = 1e-5 * (distance - ratio)
    for slope, (ratio_step, distance_step) in (
        (of_distance, (0.0, step)),
        (of_ratio, (np.minimum(step, 1e-5 * ratio), 0.0)),
    ):
        above = end_excess_table(ratio + ratio_step, distance + distance_step, end)[0]
        below = end_excess_table(ratio - ratio_step, distance - distance_step, end)[0]
        difference = (above - below) / (2 * np.maximum(ratio_step, distance_step))
        np.testing.assert_allclose(slope, difference, rtol=1e-5, atol=1e-6)


def test_excess_falls_with_distance_from_a_solid_end_where_it_matters():
    for ratio in (0.01, 0.1, 0.5, 0.8):
        distance = ratio + np.geomspace(0.0101 * ratio, 1.2 - ratio, 500)
        excess, of_distance, _ = end_excess_table(ratio, distance, "solid")
        assert (np.diff(excess) < 0).all()
        assert (of_distance < 0).all()


def test_beyond_the_reach_it_is_nothing_and_just_within_it_nearly_so():
    ratio = np.array([0.0, 0.001, 0.3, 0.8, 0.94])
    for values in end_excess_table(ratio, END_EXCESS_REACH, "solid"):
        np.testing.assert_array_equal(values, 0.0)
    inside = np.geomspace(*END_EXCESS_RATIO_LIMITS, 40)[1:-1]
    for end in ("solid", "free"):
        excess, _, _ = end_excess_table(inside, END_EXCESS_REACH - 1e-9, end)
        assert np.abs(excess).max() < 1e-9


def test_beyond_the_limits_it_is_nan():
    low, high = END_EXCESS_RATIO_LIMITS
    ratio = np.array([low * 0.999, high * 1.001, 0.1, 0.1, np.nan, 0.1, -0.1, 1.0])
    closest = 0.1 * (1 + END_EXCESS_LEAST_GAP)
    distance = np.array([1.0, 1.0, closest * 0.999, 0.05, 1.0, np.nan, 5.0, 5.0])
    for values in end_excess_table(ratio, distance, "free"):
        assert np.isnan(values).all()


def test_at_the_limits_it_is_known():
    low, high = END_EXCESS_RATIO_LIMITS
    ratio = np.array([low, high, 0.1])
    distance = np.array([1.0, 1.0, 0.1 * (1 + END_EXCESS_LEAST_GAP)])
    for values in end_excess_table(ratio, distance, "solid"):
        assert np.isfinite(values).all()


def test_shape_type_and_end():
    assert all(isinstance(value, float) for value in end_excess_table(0.1, 1.0, "free"))
    excess, _, _ = end_excess_table(np.array([0.1, 0.2]), np.array([[0.5], [1.0], [4.0]]), "solid")
    assert excess.shape == (3, 2)
    with pytest.raises(ValueError, match="lid"):
        end_excess_table(0.1, 1.0, "lid")
