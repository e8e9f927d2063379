from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import quad

from plumbfall.errors import PhysicsRangeError
from plumbfall.physics import (
    creeping_start_speed_ratio,
    relaxation_time,
    run_in_distance,
    run_in_guard_distance,
)


def test_relaxation_time_of_small_and_large_steel_balls():
    # notes on metrology (derived): 2 mm steel in 1 Pa.s 1.8 ms, 3 mm steel in 0.1 Pa.s 41 ms
    def milliseconds(diameter, viscosity):
        return 1e3 * relaxation_time(
            ball_diameter=diameter, ball_density=7800.0, liquid_density=900.0, viscosity=viscosity
        )

    assert milliseconds(2e-3, 1.0) == pytest.approx(1.8, abs=0.05)
    assert milliseconds(3e-3, 0.1) == pytest.approx(41.0, abs=0.5)


def test_relaxation_time_is_moved_mass_over_drag():
    d, eta, factor = 2e-3, 0.5, 1.7
    moved = math.pi / 6 * d**3 * (7800.0 + 0.5 * 970.0)
    expected = moved / (3 * math.pi * eta * d * factor)
    assert relaxation_time(
        ball_diameter=d,
        ball_density=7800.0,
        liquid_density=970.0,
        viscosity=eta,
        drag_factor=factor,
    ) == pytest.approx(expected, rel=1e-14)


@pytest.mark.parametrize(("fraction", "printed"), [(0.99, 3.615), (0.999, 5.909)])
def test_run_in_distance_as_printed(fraction, printed):
    # formula book, section 5: x99 = 3.615 v tau, x99.9 = 5.909 v tau
    distance = run_in_distance(fall_speed=1.0, relaxation_time=1.0, fraction=fraction)
    assert distance == pytest.approx(printed, abs=5e-4)


@given(st.floats(min_value=0.01, max_value=0.9999))
def test_run_in_distance_is_the_integral_of_the_speed(fraction):
    end = -math.log1p(-fraction)
    integral, _ = quad(lambda t: -math.expm1(-t), 0.0, end)
    distance = run_in_distance(fall_speed=1.0, relaxation_time=1.0, fraction=fraction)
    assert distance == pytest.approx(integral, rel=1e-9)


# formula book, section 5: deficit 1 - v/vt of the unbounded creeping start, density ratio 8.04
@pytest.mark.parametrize(
    ("s", "deficit"),
    [(1.0, 0.695), (3.0, 0.437), (10.0, 0.207), (30.0, 0.108), (100.0, 0.057), (300.0, 0.033)],
)
def test_unbounded_creeping_start_as_printed(s, deficit):
    d, eta, rho = 2e-3, 0.3, 970.0
    ratio = creeping_start_speed_ratio(
        time=s * (d / 2) ** 2 * rho / eta,
        ball_diameter=d,
        ball_density=8.04 * rho,
        liquid_density=rho,
        viscosity=eta,
    )
    assert 1.0 - ratio == pytest.approx(deficit, abs=5e-4)


UNIT = {"ball_diameter": 2.0, "ball_density": 8.0, "liquid_density": 1.0, "viscosity": 1.0}


def test_creeping_start_begins_with_weight_over_moved_mass():
    # without drag: v/vt = t D/M = t / (2/9 (r + 1/2)); the history force lowers it by order sqrt(t)
    c = 2 / 9 * 8.5
    t = 1e-8
    ratio = creeping_start_speed_ratio(time=t, **UNIT)
    assert ratio * c / t == pytest.approx(1.0, abs=1e-3)


def test_creeping_start_ends_with_the_tail_of_the_history_force():
    # Clift, Grace and Weber 1978, chapter 11: the deficit tends to a / sqrt(pi nu t)
    for s in (1e4, 1e6):
        deficit = 1.0 - creeping_start_speed_ratio(time=s, **UNIT)
        assert deficit * math.sqrt(math.pi * s) == pytest.approx(1.0, abs=2.0 / math.sqrt(s))


def test_one_percent_takes_3200_diffusion_times():
    # formula book, section 5
    deficit = 1.0 - creeping_start_speed_ratio(time=3200.0, **UNIT)
    assert deficit == pytest.approx(0.01, abs=2e-4)


def test_creeping_start_solves_the_equation_of_motion():
    # Basset 1888, Boussinesq 1885: M v' = W - D v - B' integral of v'(s)/sqrt(t - s)
    # in units of a, nu and vt: c v' = 1 - v - (1/sqrt(pi)) integral of v'(s)/sqrt(t - s) ds
    c, t = 2 / 9 * 8.5, 2.0

    def speed(time):
        return float(creeping_start_speed_ratio(time=time, **UNIT))

    def acceleration(time):
        step = 1e-4 * max(time, 1e-4)
        return (speed(time + step) - speed(time - step)) / (2 * step)

    # s = t - u^2 takes the root out of the integral
    history, _ = quad(lambda u: 2.0 * acceleration(t - u**2), 0.0, math.sqrt(t) * (1 - 1e-9))
    left = c * acceleration(t)
    right = 1.0 - speed(t) - history / math.sqrt(math.pi)
    assert left == pytest.approx(right, rel=1e-4)


@given(st.floats(min_value=1e-6, max_value=1e6))
def test_creeping_start_only_speeds_up(time):
    earlier, later = (creeping_start_speed_ratio(time=t, **UNIT) for t in (time, 1.1 * time))
    assert 0.0 < earlier < later < 1.0


def guard(reynolds, ratio, diameter=3e-3):
    return run_in_guard_distance(
        ball_diameter=diameter,
        tube_bore=diameter / ratio,
        fall_speed=reynolds * 0.1 / (900.0 * diameter),
        liquid_density=900.0,
        viscosity=0.1,
    )


def test_guard_of_the_computed_start():
    # formula book, section 5: 3 mm steel at ratio 0.075, Reynolds number 6.8: 0.20 % after 20 mm,
    # 0.04 % after 30 mm, so that the rule for a 0.2 % result lies between the two
    assert 20e-3 <= guard(6.8, 0.075) <= 30e-3
    assert guard(6.8, 0.075) == pytest.approx(25e-3, rel=1e-12)


def test_guard_by_the_walls_where_that_is_smaller():
    # v R^2 / (4 nu) = Re d / (16 ratio^2)
    assert guard(6.8, 0.4) == pytest.approx(6.8 * 3e-3 / (16 * 0.4**2), rel=1e-12)
    assert guard(0.1, 0.05) == pytest.approx(0.1 * 3e-3 / (16 * 0.05**2), rel=1e-12)


def test_guard_covers_the_exact_start_in_a_thick_liquid():
    # formula book, section 5: 2 mm steel in 1 Pa.s at ratio 0.05 is at 99.9 % after 0.90 mm
    speed = 6830.0 * 9.81 * 4e-6 / 18.0 / 1.11727
    distance = run_in_guard_distance(
        ball_diameter=2e-3,
        tube_bore=40e-3,
        fall_speed=speed,
        liquid_density=970.0,
        viscosity=1.0,
    )
    assert 0.9e-3 < distance < 2.0e-3


def test_guard_at_below_and_above_its_limits():
    assert guard(5.0, 0.01) == pytest.approx(25e-3, rel=1e-12)
    assert guard(4.99, 0.01) > 1.0
    assert guard(29.99, 0.01) == pytest.approx(25e-3, rel=1e-12)
    with pytest.raises(PhysicsRangeError, match=r"Reynolds number 30\.1 is beyond 30"):
        guard(30.1, 0.1)
    assert np.shape(guard(np.array([1.0, 10.0]), 0.1)) == (2,)
