from itertools import pairwise

import numpy as np
import pytest

from plumbfall.flow.off_axis import off_axis_coefficient_of_order, settled_off_axis_coefficient

# Computed by another program than this package, six digits.
INDEPENDENT = {0.0: 2.10444, 0.05: 2.10271, 0.1: 2.09764, 0.2: 2.07945, 0.3: 2.05697,
               0.35: 2.04809, 0.45: 2.04835, 0.5: 2.06576, 0.6: 2.16969, 0.7: 2.45992,
               0.8: 3.23166, 0.9: 5.91024}  # fmt: skip


@pytest.mark.parametrize(("offset", "coefficient"), INDEPENDENT.items())
def test_agrees_with_an_independent_computation(offset, coefficient):
    value, change = settled_off_axis_coefficient(offset_ratio=offset)
    assert value == pytest.approx(coefficient, abs=6e-6)
    assert change < 1e-10


def test_on_the_axis_it_is_faxens_coefficient():
    # Faxén 1922: 2.10444
    value, _ = settled_off_axis_coefficient(offset_ratio=0.0)
    assert value == pytest.approx(2.10444, abs=5e-6)


def test_near_the_axis_it_falls_as_happel_and_brenner_print():
    # Happel & Brenner 1965, Low Reynolds Number Hydrodynamics, section 7-3:
    # 2.10444 - 0.6977 beta^2
    offsets = np.array([0.01, 0.02])
    values = [settled_off_axis_coefficient(offset_ratio=float(b))[0] for b in offsets]
    curvature = (values[1] - values[0]) / (offsets[1] ** 2 - offsets[0] ** 2)
    assert curvature == pytest.approx(-0.6977, abs=2e-3)


def test_near_the_wall_it_tends_to_a_plane_walls():
    # Lorentz 1907 (Happel & Brenner 1965, section 7-4): 1 - (9/16) a/distance alongside a plane
    products = [(1 - b) * settled_off_axis_coefficient(offset_ratio=b)[0] for b in (0.9, 0.95)]
    extrapolated = 2 * products[1] - products[0]
    assert extrapolated == pytest.approx(9 / 16, rel=2e-2)


def test_terms_fall_as_the_offset_to_twice_the_order():
    limit, _ = settled_off_axis_coefficient(offset_ratio=0.7)
    errors = [
        abs(off_axis_coefficient_of_order(offset_ratio=0.7, order=m) - limit) for m in (6, 10, 14)
    ]
    for earlier, later in pairwise(errors):
        assert later / earlier == pytest.approx(0.7**8, rel=0.5)
