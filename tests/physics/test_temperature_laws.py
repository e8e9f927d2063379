from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from plumbfall import physics
from plumbfall.physics.temperature_laws import walther_ordinate, walther_viscosity_of_ordinate


def test_walther_through_two_points():
    # formula book, section 8 (computed from ASTM D341): nu40 = 100, nu100 = 11.1 mm2/s
    a, b = physics.walther_coefficients(
        kinematic_viscosity=(100e-6, 11.1e-6), temperature=(313.15, 373.15)
    )
    assert a == pytest.approx(9.203413, abs=5e-7)
    assert b == pytest.approx(3.566750, abs=5e-7)


@pytest.mark.parametrize(
    ("celsius", "mm2_s", "half_digit"),
    [(20.0, 341.798, 5e-4), (40.0, 100.0, 5e-4), (60.0, 39.6787, 5e-5), (100.0, 11.1, 5e-4)],
)
def test_walther_between_and_beyond_the_points(celsius, mm2_s, half_digit):
    a, b = physics.walther_coefficients(
        kinematic_viscosity=(100e-6, 11.1e-6), temperature=(313.15, 373.15)
    )
    nu = physics.walther_kinematic_viscosity(intercept=a, slope=b, temperature=celsius + 273.15)
    assert nu * 1e6 == pytest.approx(mm2_s, abs=half_digit)


@pytest.mark.parametrize(("kelvin", "percent"), [(293.15, -7.12), (313.15, -5.29)])
def test_relative_slope_of_a_mineral_oil(kelvin, percent):
    # an oil of 100 mm2/s at 40 degC, 11.1 at 100 degC (notes on metrology, computed)
    a, b = physics.walther_coefficients(
        kinematic_viscosity=(100e-6, 11.1e-6), temperature=(313.15, 373.15)
    )
    up, down = (
        physics.walther_kinematic_viscosity(intercept=a, slope=b, temperature=kelvin + step)
        for step in (0.01, -0.01)
    )
    assert 100.0 * math.log(up / down) / 0.02 == pytest.approx(percent, abs=0.005)


def test_the_inverse_of_the_standard_over_its_published_range():
    # ASTM D341 is published for 0.21 to 2e7 mm2/s; its own inverse is 2e-4 out from 0.3 to 2
    nu = np.geomspace(0.21e-6, 20.0, 4001)
    back = walther_viscosity_of_ordinate(ordinate=walther_ordinate(kinematic_viscosity=nu))
    error = np.abs(back / nu - 1.0)
    assert error.max() < 3e-4
    assert error[nu > 2e-6].max() < 1e-4
    assert error[nu > 10e-6].max() < 1e-6
    assert error.max() > 1e-5  # the standard's inverse, not one of our own


@given(st.floats(min_value=0.3e-6, max_value=1.0))
def test_the_ordinate_grows_with_viscosity(nu):
    assert walther_ordinate(kinematic_viscosity=nu * 1.001) > walther_ordinate(
        kinematic_viscosity=nu
    )


def test_vogel_describes_water_within_its_usual_scatter():
    # ln eta = -3.7188 + 578.919 / (T - 137.546), eta in mPa.s, T in K: the constants that are
    # quoted for water from 273 to 373 K (Reid, Prausnitz and Poling, from memory)
    kelvin = np.linspace(278.15, 368.15, 19)
    vogel = 1e-3 * physics.vogel_viscosity(
        intercept=-3.7188, slope=578.919, vogel_temperature=137.546, temperature=kelvin
    )
    water = physics.water_viscosity_at_atmosphere(temperature=kelvin)
    assert np.abs(vogel / water - 1.0).max() < 0.02


def test_vogel_with_no_vogel_temperature_is_andrade():
    kelvin = np.linspace(280.0, 330.0, 6)
    constants = {"intercept": -20.0, "slope": 6000.0, "temperature": kelvin}
    assert physics.vogel_viscosity(vogel_temperature=0.0, **constants) == pytest.approx(
        physics.andrade_viscosity(**constants), rel=1e-14
    )


@pytest.mark.parametrize("kelvin", [278.15, 298.15, 333.15])
def test_slopes_against_differences(kelvin):
    def difference(law, **constants):
        up, down = (math.log(law(temperature=kelvin + step, **constants)) for step in (1e-3, -1e-3))
        return (up - down) / 2e-3

    assert physics.andrade_slope(slope=6000.0, temperature=kelvin) == pytest.approx(
        difference(physics.andrade_viscosity, intercept=-20.0, slope=6000.0), rel=1e-8
    )
    assert physics.vogel_slope(
        slope=1050.0, vogel_temperature=150.0, temperature=kelvin
    ) == pytest.approx(
        difference(physics.vogel_viscosity, intercept=-7.0, slope=1050.0, vogel_temperature=150.0),
        rel=1e-8,
    )
