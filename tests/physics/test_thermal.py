from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.special import j0

from plumbfall import physics
from plumbfall.physics.thermal import equilibration_time

kelvins = st.floats(min_value=270.0, max_value=370.0)


def test_expansion_of_a_steel_ball():
    # EN 10088-1 gives 10.4e-6 /K for this steel: 20 K are 0.0208 % of the diameter
    length = physics.expanded_length(
        length=2e-3, expansion=10.4e-6, temperature=313.15, reference_temperature=293.15
    )
    assert length == pytest.approx(2e-3 * 1.000208, rel=1e-12)


@given(temperature=kelvins, reference=kelvins)
def test_the_mass_of_an_expanding_ball_stays(temperature, reference):
    change = {
        "expansion": 9e-5,
        "temperature": temperature,
        "reference_temperature": reference,
    }
    diameter = physics.expanded_length(length=3e-3, **change)
    density = physics.expanded_solid_density(density=1180.0, **change)
    mass = density * physics.sphere_volume(ball_diameter=diameter)
    assert mass == pytest.approx(1180.0 * physics.sphere_volume(ball_diameter=3e-3), rel=1e-12)


def test_density_of_silicone_oil_falls_by_its_usual_rate():
    # dimethyl silicone near 970 kg/m3: about -0.9 kg/m3 a kelvin (from memory)
    density = physics.liquid_density(
        density=970.0, expansion=9.2e-4, temperature=299.15, reference_temperature=298.15
    )
    assert density - 970.0 == pytest.approx(-0.9, abs=0.05)


@pytest.mark.parametrize(
    "law", [physics.expanded_length, physics.expanded_solid_density, physics.liquid_density]
)
@given(temperature=kelvins)
def test_nothing_changes_at_the_reference_temperature(law, temperature):
    name = "length" if law is physics.expanded_length else "density"
    same = law(
        **{name: 123.0},
        expansion=1e-3,
        temperature=temperature,
        reference_temperature=temperature,
    )
    assert same == 123.0


@pytest.mark.parametrize(("radius", "minutes"), [(10e-3, 3), (20e-3, 12), (30e-3, 27)])
def test_equilibration_time_constants_of_a_cylinder(radius, minutes):
    # R2/(5.783 alpha), 5.783 the square of the first zero of J0: Carslaw and Jaeger, Conduction of
    # Heat in Solids, 2nd edition, chapter 7 (from memory); the minutes are for 9.6e-8 m2/s
    found = equilibration_time(tube_bore=2 * radius, thermal_diffusivity=9.6e-8)
    assert found / 60 == pytest.approx(minutes, abs=0.5)


def test_the_first_mode_of_a_cylinder_solves_the_equation_of_conduction():
    # exp(-t/tau) J0(j r/R) obeys dT/dt = alpha (T'' + T'/r), and vanishes at the wall
    radius, alpha = 0.02, 9.5e-8
    tau = equilibration_time(tube_bore=2 * radius, thermal_diffusivity=alpha)
    wave = 1 / math.sqrt(alpha * tau)
    assert j0(wave * radius) == pytest.approx(0.0, abs=1e-12)
