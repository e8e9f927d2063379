from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from plumbfall.errors import InputError, PhysicsRangeError
from plumbfall.physics import end_factor_classical, plane_factor
from plumbfall.physics.ends import end_factor_none

# formula book, section 4 (computed), by centre distance over ball radius: solid, free
PLANES = {
    1.01: (101.896172, 28.114022),
    1.05: (21.585820, 7.413298),
    1.1: (11.459157, 4.625543),
    math.cosh(0.5): (9.251765, 3.986699),
    1.25: (5.305324, 2.772419),
    math.cosh(1.0): (3.036064, 1.973681),
    2.0: (2.125536, 1.596682),
    3.0: (1.569205, 1.330154),
    math.cosh(2.0): (1.412874, 1.247126),
    5.0: (1.285087, 1.175601),
    10.0: (1.126194, 1.080962),
    20.0: (1.059536, 1.038946),
    50.0: (1.023014, 1.015227),
    100.0: (1.011377, 1.007557),
}


@pytest.mark.parametrize("gap", PLANES)
@pytest.mark.parametrize("surface", ["solid", "free"])
def test_a_plane_by_the_formula_book(gap, surface):
    printed = PLANES[gap][surface == "free"]
    assert plane_factor(gap_ratio=gap, surface=surface) == pytest.approx(printed, abs=5.1e-7)


# Brenner 1961, Chem. Eng. Sci. 16, 242: table of the solid plane (printed values from memory)
@pytest.mark.parametrize(("alpha", "printed"), [(0.5, 9.2518), (1.0, 3.0361), (2.0, 1.4129)])
def test_a_solid_plane_by_brenner(alpha, printed):
    assert plane_factor(gap_ratio=math.cosh(alpha)) == pytest.approx(printed, abs=5e-5)


# Cox and Brenner 1967, Chem. Eng. Sci. 22, 1753: lubrication, eps the gap over the radius
@pytest.mark.parametrize("eps", [1e-6, 1e-5, 1e-4, 1e-3])
def test_a_near_plane_by_lubrication(eps):
    lubrication = 1.0 / eps - 0.2 * math.log(eps) + 0.97128
    # the next term is of order eps ln(eps) / 21
    next_term = abs(eps * math.log(eps)) / 21.0
    assert plane_factor(gap_ratio=1.0 + eps) == pytest.approx(
        lubrication, abs=2.0 * next_term + 1e-5 + 1e-9 / eps
    )


def test_lubrication_at_the_gap_printed_in_the_formula_book():
    # -0.002 is what lubrication lacks at 0.005
    lubrication = 1.0 / 0.005 - 0.2 * math.log(0.005) + 0.97128
    assert lubrication - plane_factor(gap_ratio=1.005) == pytest.approx(-0.002, abs=5e-4)


@pytest.mark.parametrize("gap", [100.0, 300.0, 1000.0, 1e5, 1e9])
def test_a_far_plane_by_the_first_reflections(gap):
    # Lorentz 1907: 9/8 a/h; Happel and Brenner 1965: 1/(1 - 9/8 a/h + 1/2 (a/h)^3), free 3/4 a/h
    near = 1.0 / gap
    solid = 1.0 / (1.0 - 9 / 8 * near + 0.5 * near**3)
    assert plane_factor(gap_ratio=gap) - 1.0 == pytest.approx(
        solid - 1.0, rel=2 * near**2, abs=2e-15
    )
    free = 1.0 / (1.0 - 0.75 * near)
    assert plane_factor(gap_ratio=gap, surface="free") - 1.0 == pytest.approx(
        free - 1.0, rel=2 * near**2, abs=2e-15
    )


def test_the_series_against_the_sum_as_brenner_writes_it():
    # term by term as printed, where cancellation does no harm yet
    for gap in (1.1, 1.5, 2.5):
        alpha = math.acosh(gap)
        total = 0.0
        for n in range(1, 100):
            k = 2 * n + 1
            over = 2 * math.sinh(k * alpha) + k * math.sinh(2 * alpha)
            under = 4 * math.sinh(k * alpha / 2) ** 2 - (k * math.sinh(alpha)) ** 2
            total += n * (n + 1) / ((2 * n - 1) * (2 * n + 3)) * (over / under - 1.0)
            if k * alpha > 40.0:
                break
        assert plane_factor(gap_ratio=gap) == pytest.approx(
            4 / 3 * math.sinh(alpha) * total, rel=1e-12
        )


@pytest.mark.parametrize("surface", ["solid", "free"])
def test_the_factor_falls_to_one_over_the_whole_range(surface):
    gaps = np.geomspace(1e-3, 1e3, 400) + 1.0
    factor = plane_factor(gap_ratio=gaps, surface=surface)
    assert np.all(np.diff(factor) < 0.0)
    assert np.all(factor > 1.0)


@given(st.floats(min_value=1.001, max_value=1e3))
def test_a_free_surface_resists_less_than_a_bottom(gap):
    solid, free = (plane_factor(gap_ratio=gap, surface=name) for name in ("solid", "free"))
    assert 1.0 < free < solid


@pytest.mark.parametrize("gap", [1.0, 0.999, 0.0, -2.0, 1.0 + 1e-7, 1.1e9, math.inf])
def test_a_ball_that_touches_the_plane_is_refused(gap):
    with pytest.raises(PhysicsRangeError, match=r"gap ratio .* the plane's series"):
        plane_factor(gap_ratio=[2.0, gap])


def test_an_unknown_surface_is_refused():
    with pytest.raises(InputError, match="did you mean 'solid'"):
        plane_factor(gap_ratio=2.0, surface="soled")


def test_single_values_arrays_and_nothing():
    assert isinstance(plane_factor(gap_ratio=2.0), float)
    assert plane_factor(gap_ratio=np.full((2, 3), 2.0)).shape == (2, 3)
    assert plane_factor(gap_ratio=np.array([])).shape == (0,)


# Ladenburg 1907, as the formula book reckons it: liquid of ten bore radii in height
@pytest.mark.parametrize(("ratio", "percent"), [(0.1, 3.3), (0.05, 1.65)])
def test_the_classical_end_factor(ratio, percent):
    factor = end_factor_classical(height_ratio=10.0 / ratio)
    assert 100.0 * (factor - 1.0) == pytest.approx(percent, abs=1e-9)


def test_marks_clear_of_the_ends_have_no_end_factor():
    # Tanner 1963, J. Fluid Mech. 17, 161: at one bore radius below 4.5e-3 of the drag
    assert np.all(end_factor_none(distance_ratio=np.array([1.0, 3.0])) == 1.0)
