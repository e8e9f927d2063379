from __future__ import annotations

import math

import numpy as np
import pytest

from plumbfall.errors import PhysicsRangeError
from plumbfall.physics import (
    STANDARD_GRAVITY,
    normal_gravity,
    normal_gravity_by_elevation,
    normal_gravity_by_latitude,
)

# WGS 84 (NGA.STND.0036): equator 9.7803253359, pole 9.8321849379 m/s2. GRS 80 (Moritz 1980): mean
# 9.797644656, at 45 degrees 9.806199203 m/s2; the two ellipsoids differ by about 1e-6. All from
# memory.


def test_gravity_at_equator_and_pole_of_wgs_84():
    assert normal_gravity(latitude=0.0) == pytest.approx(9.7803253359, abs=5e-11)
    assert normal_gravity(latitude=math.pi / 2) == pytest.approx(9.8321849379, abs=2e-10)
    assert normal_gravity(latitude=-math.pi / 2) == pytest.approx(9.8321849379, abs=2e-10)


def test_gravity_at_45_degrees_of_grs_80():
    assert normal_gravity(latitude=math.radians(45)) == pytest.approx(9.806199203, abs=2e-6)


def test_mean_gravity_over_the_ellipsoid_of_grs_80():
    latitude = np.linspace(-math.pi / 2, math.pi / 2, 20001)
    # area of a belt of the ellipsoid, e^2 = 0.00669438
    area = np.cos(latitude) / (1.0 - 0.00669438 * np.sin(latitude) ** 2) ** 2
    mean = np.sum(normal_gravity(latitude=latitude) * area) / np.sum(area)
    assert mean == pytest.approx(9.797644656, abs=2e-6)


def test_standard_gravity_is_within_the_range_of_latitudes():
    # 3rd CGPM (1901): 9.80665 m/s2, meant for 45 degrees at sea level
    assert STANDARD_GRAVITY == 9.80665
    assert pytest.approx(normal_gravity(latitude=math.radians(45)), abs=5e-4) == STANDARD_GRAVITY


def test_pole_and_equator_differ_by_half_a_percent():
    # formula book, section 1: local gravity matters, 0.5 % from pole to equator
    ratio = normal_gravity(latitude=math.pi / 2) / normal_gravity(latitude=0.0)
    assert 100.0 * (ratio - 1.0) == pytest.approx(0.5, abs=0.05)


def test_free_air_gradient():
    # 0.3086 mGal/m, the usual free-air gradient of geophysics (from memory)
    slope = normal_gravity_by_elevation(latitude=math.radians(45))
    assert slope == pytest.approx(-3.086e-6, abs=0.0005e-6)


@pytest.mark.parametrize("degrees", [-89.0, -40.0, 0.0, 12.0, 45.0, 52.1, 80.0])
@pytest.mark.parametrize("elevation", [-400.0, 0.0, 40.0, 4000.0])
def test_derivatives_against_differences(degrees, elevation):
    latitude, step = math.radians(degrees), 1e-5
    by_latitude = (
        normal_gravity(latitude=latitude + step, elevation=elevation)
        - normal_gravity(latitude=latitude - step, elevation=elevation)
    ) / (2 * step)
    by_elevation = (
        normal_gravity(latitude=latitude, elevation=elevation + 10.0)
        - normal_gravity(latitude=latitude, elevation=elevation - 10.0)
    ) / 20.0
    given = {"latitude": latitude, "elevation": elevation}
    assert normal_gravity_by_latitude(**given) == pytest.approx(by_latitude, abs=1e-9)
    assert normal_gravity_by_elevation(**given) == pytest.approx(by_elevation, abs=1e-13)


def test_degrees_given_as_radians_are_refused():
    with pytest.raises(PhysicsRangeError, match=r"latitude in rad 52\.1 is beyond 1\.57"):
        normal_gravity(latitude=52.1)


@pytest.mark.parametrize("elevation", [-501.0, 10001.0, math.nan])
def test_elevations_beyond_any_laboratory_are_refused(elevation):
    with pytest.raises(PhysicsRangeError, match="elevation in m"):
        normal_gravity(latitude=0.5, elevation=elevation)
