from __future__ import annotations

import numpy as np
import pytest

from plumbfall.physics import equivalent_time, fall_time

BALL = {"ball_diameter": 3.175e-3, "ball_density": 7900.0, "liquid_density": 900.0}


def test_in_a_wide_tube_times_go_as_stokes_law_says():
    # ASTM D1343 without walls: density difference times squared diameter, by hand
    found = equivalent_time(
        fall_time=np.array([10.0, 20.0]), other_ball_diameter=2.38125e-3,
        other_ball_density=2500.0, tube_bore=1e6, **BALL,
    )  # fmt: skip
    by_hand = (7000 * 3.175**2) / (1600 * 2.38125**2)
    assert found == pytest.approx(np.array([10.0, 20.0]) * by_hand, rel=1e-6)


def test_walls_take_part_as_faxen_has_them():
    # Faxén, diameter ratio 0.05 and 0.10: factors 1.117 and 1.258 (handbook values)
    found = equivalent_time(
        fall_time=1.0, other_ball_diameter=1.5875e-3, other_ball_density=7900.0,
        tube_bore=31.75e-3, **BALL,
    )  # fmt: skip
    assert found == pytest.approx(4 * 1.117 / 1.263, rel=2e-3)


def test_it_is_the_time_of_the_whole_chain_where_inertia_is_nothing():
    tube = {"tube_bore": 25e-3, "marks": (0.0, 0.2), "surface_above": 0.1, "bottom_below": 0.1,
            "release_above": 0.08, "gravity": 9.81, "viscosity": 300.0}  # fmt: skip
    first = fall_time(**tube, **BALL)
    other = fall_time(**tube, **{**BALL, "ball_diameter": 2.381e-3})
    found = equivalent_time(
        fall_time=first, other_ball_diameter=2.381e-3, other_ball_density=7900.0,
        tube_bore=25e-3, **BALL,
    )  # fmt: skip
    assert found == pytest.approx(other, rel=2e-4)


def test_the_same_ball_takes_the_same_time():
    same = {"other_ball_diameter": 3.175e-3, "other_ball_density": 7900.0}
    assert equivalent_time(fall_time=12.5, tube_bore=25e-3, **same, **BALL) == pytest.approx(12.5)
