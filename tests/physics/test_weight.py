from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from plumbfall import physics

STEEL = {"ball_density": 7800.0, "liquid_density": 970.0}
NYLON = {"ball_density": 1140.0, "liquid_density": 970.0}


def log_slope(function, name, values):
    step = 1e-6
    up, down = ({**values, name: values[name] * math.exp(sign * step)} for sign in (1, -1))
    return (math.log(function(**up)) - math.log(function(**down))) / (2 * step)


# formula book, section 1 (computed): sensitivities of Stokes' viscosity; its d is that of the force
# less 1, printed to three or four digits
@pytest.mark.parametrize(
    ("material", "diameter", "density", "liquid"),
    [(STEEL, 2.0, 1.142, -0.142), (NYLON, 2.0, 6.71, -5.71)],
)
def test_sensitivities_of_the_density_form(material, diameter, density, liquid):
    values = {"ball_diameter": 2e-3, "gravity": 9.81, **material}

    def slope(name):
        return log_slope(physics.effective_weight, name, values)

    assert slope("ball_diameter") - 1.0 == pytest.approx(diameter, abs=5e-4)
    assert slope("ball_density") == pytest.approx(density, abs=0.005)
    assert slope("liquid_density") == pytest.approx(liquid, abs=0.005)
    assert slope("gravity") == pytest.approx(1.0, abs=1e-9)


@pytest.mark.parametrize(
    ("material", "diameter", "mass", "liquid"),
    [(STEEL, -1.426, 1.142, -0.142), (NYLON, -18.1, 6.71, -5.71)],
)
def test_sensitivities_of_the_mass_form(material, diameter, mass, liquid):
    volume = physics.sphere_volume(ball_diameter=2e-3)
    values = {
        "ball_mass": material["ball_density"] * volume,
        "ball_diameter": 2e-3,
        "liquid_density": material["liquid_density"],
        "gravity": 9.81,
    }

    def slope(name):
        return log_slope(physics.effective_weight_of_mass, name, values)

    assert slope("ball_diameter") - 1.0 == pytest.approx(diameter, abs=0.05)
    assert slope("ball_mass") == pytest.approx(mass, abs=0.005)
    assert slope("liquid_density") == pytest.approx(liquid, abs=0.005)


@given(
    diameter=st.floats(min_value=1e-4, max_value=1e-1),
    density=st.floats(min_value=900.0, max_value=16000.0),
)
def test_both_forms_of_the_weight_agree(diameter, density):
    mass = density * physics.sphere_volume(ball_diameter=diameter)
    by_mass = physics.effective_weight_of_mass(
        ball_mass=mass, ball_diameter=diameter, liquid_density=800.0, gravity=9.81
    )
    by_density = physics.effective_weight(
        ball_diameter=diameter, ball_density=density, liquid_density=800.0, gravity=9.81
    )
    assert by_mass == pytest.approx(by_density, rel=1e-11)


# Buoyancy of weighing, percent of the mass, OIML D 28 conventions (from memory): figures recomputed
@pytest.mark.parametrize(
    ("density", "percent", "half_digit"),
    [
        (7700.0, 0.0006, 0.00005),
        (2230.0, 0.039, 0.0005),
        (2150.0, 0.041, 0.0005),
        (1180.0, 0.087, 0.0005),
    ],
    ids=["steel", "glass", "PTFE", "PMMA"],
)
def test_weighing_in_air_against_the_usual_quotient(density, percent, half_digit):
    diameter = 3e-3
    mass = density * physics.sphere_volume(ball_diameter=diameter)
    reading = mass * (1.0 - 1.2 / density) / (1.0 - 1.2 / 8000.0)
    found = physics.mass_from_weighing(reading=reading, ball_diameter=diameter)
    assert found == pytest.approx(mass, rel=1e-14)
    assert (found / reading - 1.0) * 100.0 == pytest.approx(percent, abs=half_digit)


def test_a_ball_of_the_density_of_the_weights_reads_its_mass():
    mass = 8000.0 * physics.sphere_volume(ball_diameter=3e-3)
    assert physics.mass_from_weighing(reading=mass, ball_diameter=3e-3) == pytest.approx(mass)


def test_a_floating_ball_has_a_negative_weight():
    weight = physics.effective_weight(
        ball_diameter=2e-3, ball_density=900.0, liquid_density=1000.0, gravity=9.81
    )
    assert weight < 0.0
