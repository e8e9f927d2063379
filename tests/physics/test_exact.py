import numpy as np
import pytest

from plumbfall.flow.creeping_tube import wall_factor
from plumbfall.flow.off_axis import settled_off_axis_coefficient
from plumbfall.physics.exact import (
    OFF_AXIS_OFFSET_LIMITS,
    WALL_FACTOR_RATIO_LIMITS,
    creeping_wall_factor,
    off_axis_coefficient,
)


@pytest.mark.parametrize("ratio", [0.003, 0.0377, 0.111, 0.27, 0.493, 0.666, 0.77, 0.91, 0.9495])
def test_wall_factor_between_the_nodes_is_the_solvers(ratio):
    factor, _ = creeping_wall_factor(ratio)
    assert factor == pytest.approx(wall_factor(diameter_ratio=ratio)[0], rel=1e-11)


@pytest.mark.parametrize(
    ("ratio", "factor"),
    [(0.15, 1.44657215), (0.25, 1.97907741), (0.35, 2.88905245), (0.45, 4.56383695),
     (0.9, 469.22439)],
)  # fmt: skip
def test_wall_factor_agrees_with_independent_computations(ratio, factor):
    # computed by other programs than this package, 9 and 8 digits
    assert creeping_wall_factor(ratio)[0] == pytest.approx(factor, rel=3e-9)


def test_wide_tube_limit_is_faxens():
    # Faxén 1922: K0 = 1 + 2.10444 ratio
    assert creeping_wall_factor(0.0) == (1.0, 0.0)
    ratio = 1e-7
    factor, sensitivity = creeping_wall_factor(ratio)
    assert (factor - 1) / ratio == pytest.approx(2.10444, abs=1e-5)
    assert sensitivity / ratio == pytest.approx(2.10444, abs=1e-5)


def test_sensitivity_is_the_slope_of_the_value():
    ratio = np.linspace(0.002, 0.949, 400)
    step = 1e-4 * np.minimum(ratio, 0.95 - ratio)
    above, _ = creeping_wall_factor(ratio + step)
    below, _ = creeping_wall_factor(ratio - step)
    _, sensitivity = creeping_wall_factor(ratio)
    slope = ratio * np.log(above / below) / (2 * step)
    np.testing.assert_allclose(sensitivity, slope, rtol=2e-7)


def test_wall_factor_rises_throughout():
    ratio = np.linspace(0, 0.95, 20001)
    factor, sensitivity = creeping_wall_factor(ratio)
    assert (np.diff(factor) > 0).all()
    assert (sensitivity[1:] > 0).all()


def test_wall_factor_beyond_its_limits_is_nan_and_at_them_is_not():
    low, high = WALL_FACTOR_RATIO_LIMITS
    factor, sensitivity = creeping_wall_factor(
        np.array([low, high, np.nextafter(high, 1), -1e-12, np.nan, np.inf])
    )
    np.testing.assert_array_equal(np.isnan(factor), [False, False, True, True, True, True])
    np.testing.assert_array_equal(np.isnan(sensitivity), np.isnan(factor))


def test_wall_factor_keeps_shape_and_type():
    assert isinstance(creeping_wall_factor(0.1)[0], float)
    factor, sensitivity = creeping_wall_factor(np.full((3, 2), 0.1))
    assert factor.shape == sensitivity.shape == (3, 2)
    assert creeping_wall_factor(np.array([]))[0].shape == (0,)


@pytest.mark.parametrize("offset", [0.0, 0.033, 0.15, 0.41, 0.555, 0.73, 0.87, 0.9])
def test_off_axis_coefficient_between_the_nodes_is_the_solvers(offset):
    coefficient, _ = off_axis_coefficient(offset)
    solved, _ = settled_off_axis_coefficient(offset_ratio=offset)
    assert coefficient == pytest.approx(solved, rel=1e-9)


def test_off_axis_coefficient_is_faxens_on_the_axis_and_level_there():
    coefficient, slope = off_axis_coefficient(0.0)
    assert coefficient == pytest.approx(2.10444, abs=5e-6)  # Faxén 1922
    assert slope == 0.0


def test_off_axis_slope_is_the_slope_of_the_value():
    offset = np.linspace(0.001, 0.899, 300)
    step = 1e-5
    difference = off_axis_coefficient(offset + step)[0] - off_axis_coefficient(offset - step)[0]
    np.testing.assert_allclose(off_axis_coefficient(offset)[1], difference / (2 * step), atol=1e-7)


def test_off_axis_coefficient_beyond_its_limits_is_nan():
    low, high = OFF_AXIS_OFFSET_LIMITS
    coefficient, slope = off_axis_coefficient(np.array([low, high, high + 1e-9, -1e-9, np.nan]))
    np.testing.assert_array_equal(np.isnan(coefficient), [False, False, True, True, True])
    np.testing.assert_array_equal(np.isnan(slope), np.isnan(coefficient))
