from __future__ import annotations

import math
import subprocess
import sys
from fractions import Fraction

import pytest

from plumbfall.errors import InputError
from plumbfall.quantities import (
    DIMENSIONS,
    QUANTITIES,
    exact_unit,
    from_si,
    is_unit,
    unit_to_si,
)


@pytest.mark.parametrize(
    ("unit", "dimension", "factor"),
    [
        # SI Brochure, 9th edition, tables 7 and 8: prefixes, minute, hour, litre
        ("ms", "time", Fraction(1, 1000)),
        ("min", "time", Fraction(60)),
        ("h", "time", Fraction(3600)),
        ("cm", "length", Fraction(1, 100)),
        ("mm", "length", Fraction(1, 1000)),
        ("um", "length", Fraction(1, 10**6)),
        ("g", "mass", Fraction(1, 1000)),
        ("mg", "mass", Fraction(1, 10**6)),
        ("g/cm3", "density", Fraction(1000)),
        ("g/mL", "density", Fraction(1000)),
        ("kg/L", "density", Fraction(1000)),
        ("mPa.s", "viscosity", Fraction(1, 1000)),
        ("mm2/s", "kinematic viscosity", Fraction(1, 10**6)),
        ("%", "ratio", Fraction(1, 100)),
        ("ppm", "ratio", Fraction(1, 10**6)),
        ("%/K", "temperature coefficient", Fraction(1, 100)),
        # NIST SP 811 (2008), B.8: inch 25.4 mm exactly, poise, stokes, degree Fahrenheit
        ("in", "length", Fraction(254, 10000)),
        ("P", "viscosity", Fraction(1, 10)),
        ("cP", "viscosity", Fraction(1, 1000)),
        ("St", "kinematic viscosity", Fraction(1, 10**4)),
        ("cSt", "kinematic viscosity", Fraction(1, 10**6)),
        ("degF", "temperature difference", Fraction(5, 9)),
        ("/degF", "temperature coefficient", Fraction(9, 5)),
        # viscosity = constant x density difference x time: 1e-3 Pa.s/(1e3 kg/m3 x 1 s)
        ("mPa.s.cm3/(g.s)", "tube constant", Fraction(1, 10**6)),
    ],
)
def test_units_are_their_definitions_exactly(unit, dimension, factor):
    assert exact_unit(unit, dimension).factor == factor


def test_a_right_angle_is_half_pi():
    factor, offset = unit_to_si("deg", "angle")
    assert (90 * factor, offset) == (math.pi / 2, 0.0)


@pytest.mark.parametrize(
    ("unit", "number", "kelvin"),
    [
        # SI Brochure 2.3.1: t/degC = T/K - 273.15; NIST SP 811 B.8: T/K = (t/degF + 459.67)/1.8
        ("degC", "0", Fraction("273.15")),
        ("degC", "-273.15", Fraction(0)),
        ("degF", "32", Fraction("273.15")),
        ("degF", "212", Fraction("373.15")),
        ("K", "300", Fraction(300)),
    ],
)
def test_temperatures_convert_with_offset(unit, number, kelvin):
    exact = exact_unit(unit, "temperature")
    assert Fraction(number) * exact.factor + exact.offset == kelvin


@pytest.mark.parametrize("unit", ["degC", "degF", "K"])
def test_a_temperature_difference_has_no_offset(unit):
    assert exact_unit(unit, "temperature difference").offset == 0


@pytest.mark.parametrize(
    ("dimension", "spellings"),
    [
        (
            "viscosity",
            [
                *("mPa.s", "mPa·s", "mPa*s", "mPas", "mPa⋅s", "mPa×s", "mPa-s", "mPa s"),
                *("mPa . s", " mPa.s ", "mPa^1.s", "mPa¹·s", "cP", "cps", "centipoise"),
            ],
        ),
        (
            "density",
            ["kg/m3", "kg/m³", "kg/m^3", "kg/m**3", "kg m-3", "kg·m⁻³", "kg.m^-3", "kg∕m3"],
        ),
        ("length", ["um", "µm", "μm", "micron"]),
        ("temperature", ["degC", "°C", "℃", "C", "deg C", "º C", "° C", "˚C", "celsius"]),
        ("temperature coefficient", ["/K", "1/K", "K-1", "K⁻¹", "K^-1", "/degC", "1/°C", "/ K"]),
        ("acceleration", ["m/s2", "m/s²", "m/s^2", "m/s/s", "m.s-2", "m·s⁻²"]),
        ("kinematic viscosity", ["mm2/s", "mm²/s", "cSt", "cst", "mm^2/s"]),
        (
            "tube constant",
            ["mPa.s.cm3/(g.s)", "mPa·s·cm³/(g·s)", "mPa s cm3/(g s)", "mPa.s.cm3/g/s"],
        ),
        ("angle", ["deg", "°", "degree"]),
        ("ratio", ["%", "percent"]),
    ],
)
def test_usual_spellings_mean_the_same(dimension, spellings):
    assert len({exact_unit(spelling, dimension) for spelling in spellings}) == 1


def test_joined_millipascal_seconds_are_not_millipascals():
    # a registry that strips a plural s would read mPas as millipascal
    assert unit_to_si("mPas", "viscosity") == unit_to_si("mPa.s", "viscosity")
    assert unit_to_si("Pas", "viscosity") == (1.0, 0.0)


@pytest.mark.parametrize(
    ("unit", "dimension", "said"),
    [
        ("mm", "density", "'mm' is a length; a density is wanted, such as '970.2(2) kg/m3'"),
        (
            "cSt",
            "viscosity",
            "'cSt' is a kinematic viscosity; a viscosity is wanted, such as '950 mPa.s'",
        ),
        (
            "kg.m",
            "mass",
            "'kg.m' is no quantity of a bench sheet; a mass is wanted, such as '32.25(1) mg'",
        ),
        ("furlong", "length", "unknown unit 'furlong'; a length is written in m, cm, mm, um or in"),
        (
            "mpa.s",
            "viscosity",
            "unknown unit 'mpa'; did you mean 'mPa.s'? a viscosity is written in Pa.s, mPa.s, P "
            "or cP",
        ),
        (
            "MPa.s",
            "viscosity",
            "unknown unit 'MPa'; did you mean 'mPa.s'? a viscosity is written in Pa.s, mPa.s, P "
            "or cP",
        ),
        (
            "MM",
            "length",
            "unknown unit 'MM'; did you mean 'mm'? a length is written in m, cm, mm, um or in",
        ),
        (
            "kg/m.s",
            "viscosity",
            "the unit 'kg/m.s' can be read in two ways; a viscosity is written in Pa.s, mPa.s, P "
            "or cP",
        ),
        (
            "kg//m3",
            "density",
            "the unit 'kg//m3' cannot be read; a density is written in kg/m3, g/cm3, g/mL or kg/L",
        ),
        ("", "length", "the unit '' cannot be read; a length is written in m, cm, mm, um or in"),
    ],
)
def test_a_wrong_unit_is_refused_with_what_to_type(unit, dimension, said):
    with pytest.raises(InputError) as refused:
        unit_to_si(unit, dimension)
    assert str(refused.value) == said


@pytest.mark.parametrize(
    "unit", ["mm)", "(mm", "mm.", ".mm", "m10", "m--3", "kg/(m", "mm;", "2mm", "m^", "m3.5", "ss"]
)
def test_no_half_read_unit(unit):
    assert not is_unit(unit)


@pytest.mark.parametrize("name", DIMENSIONS)
def test_the_usual_units_of_a_dimension_are_of_it(name):
    for unit in (*DIMENSIONS[name].units, DIMENSIONS[name].unit):
        assert exact_unit(unit, name).factor > 0
    assert exact_unit(DIMENSIONS[name].unit, name).factor == 1


def test_every_quantity_has_a_known_dimension_and_its_si_unit():
    for quantity in QUANTITIES.values():
        assert quantity.unit == DIMENSIONS[quantity.dimension].unit


def test_from_si_undoes_a_unit():
    assert from_si(298.15, "degF", "temperature") == 77.0
    assert from_si(0.0254, "in", "length") == 1.0
    assert math.isnan(from_si(math.nan, "mm", "length"))


def test_importing_loads_no_unit_library():
    code = "import sys, plumbfall.quantities; print('pint' in sys.modules)"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "False"


def test_a_power_of_zero_is_no_unit():
    with pytest.raises(InputError, match="'l0' cannot be read"):
        exact_unit("l0", "time")


@pytest.mark.parametrize("text", ["% mm", "ppm mm", "mm.%", "%.kg/m3"])
def test_a_share_of_a_unit_is_no_unit(text):
    with pytest.raises(InputError, match="mixes a share with a unit"):
        exact_unit(text, "length")


def test_a_share_per_kelvin_is_a_unit():
    assert exact_unit("%/K", "temperature coefficient").factor == Fraction(1, 100)
    assert exact_unit("ppm/degC", "temperature coefficient").factor == Fraction(1, 10**6)
