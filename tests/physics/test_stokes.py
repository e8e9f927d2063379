from __future__ import annotations

import math

import fluids
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from plumbfall import physics
from plumbfall.physics import water_density, water_viscosity_at_atmosphere

# ASTM D422-63, table 3: K in diameter (mm) = K sqrt(depth in cm / time in min) of grains of
# specific gravity 2.65 settling in water (from memory). It is Stokes' law with the water table of
# its day, 1.005 mPa.s at 20 degC, and g = 980 cm/s2.
GRAIN_CONSTANTS = {16: 0.01435, 18: 0.01399, 20: 0.01365, 22: 0.01332, 25: 0.01286, 28: 0.01243}


def grain_viscosity(constant: float, celsius: float) -> float:
    return physics.stokes_viscosity(
        ball_diameter=constant * 1e-3,
        ball_density=2650.0,
        liquid_density=water_density(temperature=celsius + 273.15),
        fall_speed=0.01 / 60.0,
        gravity=9.80,
    )


@pytest.mark.parametrize(("celsius", "constant"), GRAIN_CONSTANTS.items())
def test_stokes_law_gives_water_from_the_settling_table_of_astm_d422(celsius, constant):
    half_digit = 2.0 * 0.000005 / constant
    datum = 1.005 / 1.0016  # water was 1.005 mPa.s at 20 degC in the tables of the time
    water = datum * water_viscosity_at_atmosphere(temperature=celsius + 273.15)
    # ratios of older water tables agree with the present ones within 0.15 %
    assert grain_viscosity(constant, celsius) == pytest.approx(water, rel=half_digit + 1.5e-3)


def test_the_settling_table_at_20_degrees_is_its_own_datum_of_water():
    # 1.005 mPa.s: Bingham and Jackson 1918, the datum of the time
    assert grain_viscosity(0.01365, 20.0) == pytest.approx(1.005e-3, rel=0.00005 / 0.1365 + 5e-4)


def test_stokes_agrees_with_the_terminal_speed_of_the_fluids_package():
    speed = fluids.v_terminal(D=1e-5, rhop=2600.0, rho=1000.0, mu=1e-2, Method="Stokes")
    viscosity = physics.stokes_viscosity(
        ball_diameter=1e-5,
        ball_density=2600.0,
        liquid_density=1000.0,
        fall_speed=speed,
        gravity=9.80665,
    )
    assert viscosity == pytest.approx(1e-2, rel=1e-6)


def test_density_form_and_force_form_are_one():
    weight = physics.effective_weight(
        ball_diameter=2e-3, ball_density=7700.0, liquid_density=970.0, gravity=9.81
    )
    from_force = physics.stokes_viscosity_of_weight(
        effective_weight=weight, ball_diameter=2e-3, fall_speed=0.0147
    )
    from_density = physics.stokes_viscosity(
        ball_diameter=2e-3,
        ball_density=7700.0,
        liquid_density=970.0,
        fall_speed=0.0147,
        gravity=9.81,
    )
    assert from_force == pytest.approx(from_density, rel=1e-14)


def test_weight_less_buoyancy_equals_drag_at_the_steady_speed():
    # common practice, no source
    weight = physics.effective_weight(
        ball_diameter=2e-3, ball_density=7700.0, liquid_density=970.0, gravity=9.81
    )
    viscosity = physics.stokes_viscosity(
        ball_diameter=2e-3,
        ball_density=7700.0,
        liquid_density=970.0,
        fall_speed=0.0147,
        gravity=9.81,
    )
    assert weight == pytest.approx(3.0 * math.pi * viscosity * 2e-3 * 0.0147, rel=1e-14)


def test_the_radius_formula_of_the_textbooks():
    # eta = 2 (rho_b - rho_f) g a^2 / (9 v): Stokes 1851, as every textbook prints it
    a = 1e-3
    expected = 2.0 * (7700.0 - 970.0) * 9.81 * a**2 / (9.0 * 0.0147)
    assert physics.stokes_viscosity(
        ball_diameter=2 * a,
        ball_density=7700.0,
        liquid_density=970.0,
        fall_speed=0.0147,
        gravity=9.81,
    ) == pytest.approx(expected, rel=1e-14)


def test_shear_stress_is_viscosity_times_shear_rate_under_stokes_law():
    # Happel and Brenner 1965, chapter 4: the greatest shear stress is 3 eta v / d
    given = {"ball_diameter": 2e-3, "ball_density": 7700.0, "liquid_density": 970.0}
    viscosity = physics.stokes_viscosity(**given, fall_speed=0.01, gravity=9.81)
    rate = physics.shear_rate(fall_speed=0.01, ball_diameter=2e-3)
    assert physics.shear_stress(**given, gravity=9.81) == pytest.approx(viscosity * rate, rel=1e-14)


def test_formulas_broadcast_draws_over_drops():
    viscosity = physics.stokes_viscosity(
        ball_diameter=np.full((3, 1), 2e-3),
        ball_density=7700.0,
        liquid_density=970.0,
        fall_speed=np.linspace(0.01, 0.02, 4),
        gravity=9.81,
    )
    assert viscosity.shape == (3, 4)
    assert np.all(np.diff(viscosity, axis=1) < 0.0)


scale = st.floats(min_value=1e-3, max_value=1e3)


@given(length=scale, mass=scale, time=scale)
def test_a_change_of_units_changes_nothing_but_the_unit(length, mass, time):
    def at(length, mass, time):
        density = mass / length**3
        viscosity = physics.stokes_viscosity(
            ball_diameter=2e-3 * length,
            ball_density=7700.0 * density,
            liquid_density=970.0 * density,
            fall_speed=0.0147 * length / time,
            gravity=9.81 * length / time**2,
        )
        reynolds = physics.reynolds_number(
            ball_diameter=2e-3 * length,
            fall_speed=0.0147 * length / time,
            liquid_density=970.0 * density,
            viscosity=viscosity,
        )
        return viscosity, reynolds

    viscosity, reynolds = at(1.0, 1.0, 1.0)
    scaled_viscosity, scaled_reynolds = at(length, mass, time)
    assert scaled_viscosity == pytest.approx(viscosity * mass / (length * time), rel=1e-12)
    assert scaled_reynolds == pytest.approx(reynolds, rel=1e-12)
