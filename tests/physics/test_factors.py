from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from plumbfall.errors import InputError, PhysicsRangeError
from plumbfall.physics import inertia_factor, tube_drag_factor, wall_factor
from plumbfall.physics.laws import laws_of


@pytest.mark.parametrize("name", laws_of("walls"))
def test_a_wall_law_at_below_and_above_its_limit(name):
    high = laws_of("walls")[name].high
    assert wall_factor(diameter_ratio=high, method=name) > 1.0
    assert wall_factor(diameter_ratio=np.nextafter(high, 0.0), method=name) > 1.0
    with pytest.raises(PhysicsRangeError, match=rf"diameter ratio .* beyond {high:g}, .*'{name}'"):
        wall_factor(diameter_ratio=np.nextafter(high, 1.0), method=name)
    with pytest.raises(PhysicsRangeError, match="diameter ratio -1e-09 is below 0"):
        wall_factor(diameter_ratio=-1e-9, method=name)


@pytest.mark.parametrize("name", laws_of("inertia"))
def test_an_inertia_law_at_below_and_above_its_limit(name):
    high = laws_of("inertia")[name].high
    assert inertia_factor(reynolds=high, method=name) >= 1.0
    assert inertia_factor(reynolds=np.nextafter(high, 0.0), method=name) >= 1.0
    with pytest.raises(PhysicsRangeError, match=rf"Reynolds number .* beyond {high:g}, .*'{name}'"):
        inertia_factor(reynolds=np.nextafter(high, np.inf), method=name)
    with pytest.raises(PhysicsRangeError, match=r"Reynolds number -0\.5 is below 0"):
        inertia_factor(reynolds=-0.5, method=name)


def test_the_default_law_at_its_limits():
    assert tube_drag_factor(diameter_ratio=0.8, reynolds=100.0) > 74.0
    with pytest.raises(PhysicsRangeError, match=r"Reynolds number 123 is beyond 100, .* table"):
        tube_drag_factor(diameter_ratio=0.1, reynolds=123.0)
    with pytest.raises(PhysicsRangeError, match=r"diameter ratio 0\.81 is beyond 0\.8, .* table"):
        tube_drag_factor(diameter_ratio=0.81, reynolds=1.0)


@pytest.mark.parametrize("value", [math.nan, [0.1, math.nan]])
def test_what_is_not_a_number_is_refused(value):
    with pytest.raises(PhysicsRangeError, match="not a number"):
        wall_factor(diameter_ratio=value)
    with pytest.raises(PhysicsRangeError, match="not a number"):
        inertia_factor(reynolds=value)
    with pytest.raises(PhysicsRangeError, match="not a number"):
        tube_drag_factor(diameter_ratio=0.1, reynolds=value)


def test_one_value_out_of_range_among_many_is_named():
    with pytest.raises(PhysicsRangeError, match=r"0\.96 is beyond 0\.95"):
        wall_factor(diameter_ratio=[0.1, 0.96, 0.2])


def test_an_unknown_law_names_the_nearest():
    with pytest.raises(InputError, match="did you mean 'bohlin'") as caught:
        wall_factor(diameter_ratio=0.1, method="bolin")
    assert caught.value.key == "methods.walls"
    with pytest.raises(InputError, match="known: compact, stokes, oseen"):
        inertia_factor(reynolds=0.1, method="xyz")


def test_single_values_come_back_single_and_arrays_in_shape():
    assert isinstance(wall_factor(diameter_ratio=0.1), float)
    assert isinstance(inertia_factor(reynolds=0), float)
    assert isinstance(tube_drag_factor(diameter_ratio=0.1, reynolds=1), float)
    factor = tube_drag_factor(
        diameter_ratio=np.array([[0.1], [0.2]]), reynolds=np.array([0.0, 1.0, 2.0])
    )
    assert factor.shape == (2, 3)


ratios = st.floats(min_value=1e-3, max_value=0.79)
numbers = st.floats(min_value=1e-3, max_value=9.8)


@given(ratio=ratios, reynolds=numbers)
def test_the_drag_factor_grows_with_ratio_and_reynolds_number(ratio, reynolds):
    here = tube_drag_factor(diameter_ratio=ratio, reynolds=reynolds)
    assert tube_drag_factor(diameter_ratio=ratio * 1.01, reynolds=reynolds) > here
    assert tube_drag_factor(diameter_ratio=ratio, reynolds=reynolds * 1.01) >= here
    assert here >= wall_factor(diameter_ratio=ratio)
    assert here >= inertia_factor(reynolds=reynolds) * (1 - 1e-3)  # the fit's stated error


def test_a_wide_tube_leaves_the_unbounded_factor():
    reynolds = np.linspace(0.0, 10.0, 21)
    assert tube_drag_factor(diameter_ratio=0.0, reynolds=reynolds) == pytest.approx(
        inertia_factor(reynolds=reynolds),
        rel=1e-3,  # the fit's stated error
    )
