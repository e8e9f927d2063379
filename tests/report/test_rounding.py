from __future__ import annotations

import math
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st
from uncertainties import ufloat

from plumbfall.report.rounding import NO_VALUE, round_alone, round_bound, round_pair


class TestPublishedExamples:
    @pytest.mark.parametrize(
        ("value", "u", "shown"),
        [
            # JCGM 100:2008, 7.2.4: "m_S = (100.021 47 ± 0.000 79) g, U = 0.79 mg"
            (100.02147, 0.00079, "100.02147 ± 0.00079"),
            # JCGM 100:2008, 7.2.6: "y = 10.057 62 ohm with u = 27 mohm is rounded to 10.058"
            (10.05762, 0.027, "10.058 ± 0.027"),
            # JCGM 100:2008, 7.2.6: u(x) = 28.05 kHz should be rounded to 28 kHz
            (1000.0, 28.05, "1000 ± 28"),
            # JCGM 100:2008, H.1.7 (figures from memory): (50.000 838 ± 0.000 093) mm
            (50.000838, 93e-6, "50.000838 ± 0.000093"),
        ],
    )
    def test_plus_minus(self, value: float, u: float, shown: str) -> None:
        assert round_pair(value, u).plus_minus == shown

    @pytest.mark.parametrize(
        ("value", "u", "shown"),
        [
            # JCGM 100:2008, 7.2.2: "m_S = 100.021 47(35) g"
            (100.02147, 0.00035, "100.02147(35)"),
            # JCGM 100:2008, H.2 (R) and H.3 (intercept, slope); figures from memory
            (127.73217, 0.07107, "127.732(71)"),
            (-0.17120, 0.002878, "-0.1712(29)"),
            (0.0021827, 0.000668, "0.00218(67)"),
        ],
    )
    def test_concise(self, value: float, u: float, shown: str) -> None:
        assert round_pair(value, u).concise == shown


class TestPitfalls:
    def test_a_carry_does_not_make_a_third_digit(self) -> None:
        assert round_pair(1.23456, 0.0996).plus_minus == "1.23 ± 0.10"
        assert round_pair(1.23456, 0.0995).plus_minus == "1.23 ± 0.10"
        assert round_pair(851.3, 9.96).plus_minus == "851 ± 10"

    def test_a_value_just_below_a_power_of_ten(self) -> None:
        assert round_pair(9.9999e-5, 2.0e-7).plus_minus == "0.00010000 ± 0.00000020"
        assert round_alone(9.9999e-5) == "1.000e-4"
        assert round_alone(0.99996) == "1.000"
        assert round_alone(9999996.0, 5) == "1.0000e7"

    def test_never_a_row_of_zeros(self) -> None:
        assert round_alone(1.2e-8, 3) == "1.20e-8"
        assert round_pair(1.2345e-8, 1.2e-11).plus_minus == "(1.2345 ± 0.0012)e-8"
        assert round_pair(0.0, 2e-9).plus_minus == "(0.0 ± 2.0)e-9"

    def test_an_uncertainty_larger_than_the_value(self) -> None:
        assert round_pair(0.4, 12.3).plus_minus == "0 ± 12"
        assert round_pair(-0.4, 12.3).plus_minus == "0 ± 12"

    def test_an_uncertainty_of_hundreds_rounds_the_value_too(self) -> None:
        assert round_pair(12345.6, 678.0).plus_minus == "12350 ± 680"
        assert round_pair(12345.6, 678.0).concise == "12350(680)"

    def test_a_concise_uncertainty_across_the_point_keeps_it(self) -> None:
        assert round_pair(23.456, 1.24).concise == "23.5(1.2)"

    def test_halves(self) -> None:
        assert round_pair(0.125, 0.1).value == "0.12"  # even digit; 0.125 is exact in binary
        assert round_pair(2.675, 0.10).value == "2.68"  # as written, not 2.67499999...
        assert round_pair(1.0, 0.245).u == "0.25"  # uncertainties go up

    def test_exact_values_keep_their_digits(self) -> None:
        assert round_pair(0.05, 0.0, factor=1e3).plus_minus == "50"
        assert round_pair(0.0, 0.0).plus_minus == "0"
        assert round_pair(0.1 + 0.2, 0.0).plus_minus == "0.3"
        assert round_pair(0.05, 0.0).concise == "0.05"

    @pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf])
    def test_no_number(self, value: float) -> None:
        assert round_pair(value, 0.1).plus_minus == NO_VALUE
        assert round_alone(value) == NO_VALUE
        assert round_bound(value, -2) == NO_VALUE

    def test_an_uncertainty_that_is_no_number(self) -> None:
        assert round_pair(1.23456789, math.nan).plus_minus == "1.2346"
        assert round_pair(1.23456789, math.inf).plus_minus == "1.2346"

    def test_units_shift_without_float_noise(self) -> None:
        assert round_pair(298.15, 0.05, offset=-273.15).value == "25.000"
        assert round_bound(298.15, -2, offset=-273.15) == "25.00"
        assert round_bound(-0.00001, -2) == "0.00"


exponents = st.floats(-4, 4)
mantissas = st.floats(1.0, 9.99)


@given(mantissas, exponents, st.floats(1e-4, 0.5))
def test_two_digits_and_the_same_decimal(mantissa: float, power: float, relative: float) -> None:
    value = mantissa * 10**power
    u = value * relative
    shown = round_pair(value, u)
    spread, centre = Decimal(shown.u), Decimal(shown.value)
    ten = Decimal(10) ** shown.exponent
    assert spread.as_tuple().exponent == centre.as_tuple().exponent
    assert len(shown.u.replace(".", "").lstrip("0")) - (shown.place > 0) * shown.place == 2
    half = Decimal(10) ** shown.place / 2
    assert abs(spread * ten - Decimal(repr(u))) <= half * Decimal("1.0000001")
    assert abs(centre * ten - Decimal(repr(value))) <= half


@given(st.floats(1.0, 999.0), st.floats(0.0011, 0.0999))
def test_agrees_with_the_uncertainties_library(value: float, u: float) -> None:
    # Reference: the formatter of the uncertainties package, two digits, shorthand notation.
    expected = f"{ufloat(value, u):.2uS}"
    shown = round_pair(value, u)
    at_a_half = any(
        abs(abs(Decimal(repr(x)) / Decimal(10) ** shown.place % 1) - Decimal("0.5"))
        < Decimal("1e-6")
        for x in (value, u)
    )
    assert at_a_half or shown.concise == expected
