"""Hints at what made a bias: each slip gives itself away by its size, worked by hand."""

from __future__ import annotations

import math

import pytest

from plumbfall.calibration.explanations import explanations


def hints(ratio, density=850.0, slope=None, u=0.001):
    return " ".join(explanations(ratio=ratio, u=u, density=density, slope=slope))


@pytest.mark.parametrize(
    ("ratio", "said"),
    [
        (0.85, "kinematic to dynamic"),
        (1 / 0.85, "kinematic to dynamic"),
        (10.02, "10^1"),
        (0.001, "10^-3"),
        (4.03, "radius"),
        (0.248, "radius"),
    ],
)
def test_a_slip_is_told_by_its_ratio(ratio, said):
    assert said in hints(ratio)


def test_a_row_of_the_certificate_is_told_by_its_temperature():
    # -2 %/K: 5 K is exp(0.1)
    found = hints(math.exp(0.1), slope=-0.02)
    assert "5 K of temperature: another row" in found
    assert "an error of temperature of 5 K alone" in found


def test_a_small_bias_has_the_temperature_that_would_make_it_and_no_slip():
    assert explanations(ratio=1.01, u=0.001, density=850.0, slope=-0.02) == (
        "an error of temperature of 0.5 K alone would make it",
    )


def test_a_liquid_as_dense_as_water_tells_no_kind_of_viscosity():
    assert hints(1.0, density=995.0) == ""
    assert hints(0.995, density=995.0) == ""
