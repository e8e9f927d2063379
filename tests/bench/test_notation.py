from __future__ import annotations

import math
import statistics
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st
from uncertainties import ufloat

from plumbfall.bench.digits import concise
from plumbfall.bench.notation import read_quantity
from plumbfall.errors import InputError
from plumbfall.quantities import DIMENSIONS

INF = math.inf


@pytest.mark.parametrize(
    ("written", "dimension", "value", "u", "distribution", "dof"),
    [
        # the forms of the notation, by hand
        ("2.0000(5) mm", "length", 2e-3, 5e-7, "normal", INF),
        ("2.0000 mm", "length", 2e-3, 0.0, "exact", INF),
        ({"value": 2.0, "unit": "mm"}, "length", 2e-3, 0.0, "exact", INF),
        ("2.0000 ± 0.0010 mm, k=2", "length", 2e-3, 5e-7, "normal", INF),
        ("50.0 ± 0.1 mm, limits", "length", 0.05, 1e-4 / math.sqrt(3), "rectangular", INF),
        (
            {"value": 2.0, "unit": "mm", "u": 0.0005, "dof": 9},
            "length",
            2e-3,
            5e-7,
            "normal",
            9.0,
        ),
        ({"value": 2.0, "unit": "mm", "U": 0.001, "k": 2}, "length", 2e-3, 5e-7, "normal", INF),
        (
            {"value": 2.0, "unit": "mm", "within": 0.001},
            "length",
            2e-3,
            1e-6 / math.sqrt(3),
            "rectangular",
            INF,
        ),
        (
            {"value": 2.0, "unit": "mm", "within": 0.001, "shape": "triangular"},
            "length",
            2e-3,
            1e-6 / math.sqrt(6),
            "triangular",
            INF,
        ),
        (
            {"value": 2.0, "unit": "mm", "within": 0.001, "shape": "arcsine"},
            "length",
            2e-3,
            1e-6 / math.sqrt(2),
            "arcsine",
            INF,
        ),
        # whole numbers, signs, zeros
        ("0(20) ppm", "ratio", 0.0, 2e-5, "normal", INF),
        ("0.0(5) um", "length", 0.0, 5e-7, "normal", INF),
        ("-2.0(2) %/K", "temperature coefficient", -0.02, 2e-3, "normal", INF),
        ("80(2) mm", "length", 0.08, 2e-3, "normal", INF),
        ("970(12) kg/m3", "density", 970.0, 12.0, "normal", INF),
        (".5(1) s", "time", 0.5, 0.1, "normal", INF),
        # brackets with a decimal point hold the uncertainty itself (GUM 7.2.2, third form)
        ("2.0000(0.0005) mm", "length", 2e-3, 5e-7, "normal", INF),
        # powers of ten
        ("10.4e-6 /K", "temperature coefficient", 10.4e-6, 0.0, "exact", INF),
        ("10.4(3)e-6 /K", "temperature coefficient", 10.4e-6, 3e-7, "normal", INF),
        ("10.4 × 10⁻⁶ /K", "temperature coefficient", 10.4e-6, 0.0, "exact", INF),
        ("10.4·10^-6 K⁻¹", "temperature coefficient", 10.4e-6, 0.0, "exact", INF),
        ("10.4 x 10-6 1/K", "temperature coefficient", 10.4e-6, 0.0, "exact", INF),
        ("(10.4 ± 0.6)e-6 /K, k=2", "temperature coefficient", 10.4e-6, 3e-7, "normal", INF),
        # temperatures: the value with offset, its uncertainty without
        ("25.00(5) degC", "temperature", 298.15, 0.05, "normal", INF),
        ("77.0 ± 0.9 degF, k=2", "temperature", 298.15, 0.25, "normal", INF),
        ("77.00(18) °F", "temperature", 298.15, 0.1, "normal", INF),
        ("298.15(5) K", "temperature", 298.15, 0.05, "normal", INF),
        ("25 °C ± 0.1 K, k=2", "temperature", 298.15, 0.05, "normal", INF),
        ("0.00(5) degC", "temperature difference", 0.0, 0.05, "normal", INF),
        ({"value": 77, "unit": "degF", "u": 0.9}, "temperature", 298.15, 0.5, "normal", INF),
        # ± in other dress
        ("2.0000 +/- 0.0010 mm, k=2", "length", 2e-3, 5e-7, "normal", INF),
        ("2.0000 +- 0.0010 mm; k = 2", "length", 2e-3, 5e-7, "normal", INF),
        ("(2.0000 ± 0.0010) mm (k = 2)", "length", 2e-3, 5e-7, "normal", INF),
        ("2.0000 mm ± 0.0010 mm, k=2.00", "length", 2e-3, 5e-7, "normal", INF),
        ("50.00 mm ± 20 um, k=2", "length", 0.05, 1e-5, "normal", INF),
        ("1.2000 Pa.s ± 0.25 %, k=2", "viscosity", 1.2, 1.5e-3, "normal", INF),
        ("0.30 ± 0.06 %, k=2", "ratio", 3e-3, 3e-4, "normal", INF),
        ("-2.0 %/K ± 10 %, k=2", "temperature coefficient", -0.02, 1e-3, "normal", INF),
        # typography: minus sign, no-break and thin blanks, no blank, a blank before the bracket
        ("−2.0(2) %/K", "temperature coefficient", -0.02, 2e-3, "normal", INF),
        ("50.0\u00a0±\u20090.2\u202fmm, k=2", "length", 0.05, 1e-4, "normal", INF),
        ("2.0000(5)mm", "length", 2e-3, 5e-7, "normal", INF),
        ("2.0000 (5) mm", "length", 2e-3, 5e-7, "normal", INF),
        # digits in groups of three (SI Brochure 5.4.4); a 1 before "/" is the unit 1
        ("1 000.5(2) kg/m3", "density", 1000.5, 0.2, "normal", INF),
        ("14 900 kg/m3", "density", 14900.0, 0.0, "exact", INF),
        ("0.500 1/K", "temperature coefficient", 0.5, 0.0, "exact", INF),
        ("0.500 1", "ratio", 0.5, 0.0, "exact", INF),
    ],
)
def test_every_form_reads_into_si(written, dimension, value, u, distribution, dof):
    found = read_quantity(written, dimension)
    assert found.value == pytest.approx(value, rel=1e-15, abs=0)
    assert found.u == pytest.approx(u, rel=1e-14, abs=0)
    assert (found.distribution, found.dof) == (distribution, dof)
    assert found.unit == DIMENSIONS[dimension].unit


GUM_MASS = 0.10002147


@pytest.mark.parametrize(
    ("written", "u_mg", "digits"),
    [
        # GUM (JCGM 100:2008) 7.2.2: one mass with u_c = 0.35 mg, forms 2 and 3
        ("100.021 47(35) g", 0.35, 2),
        ("100.021 47(0.000 35) g", 0.35, 2),
        # 7.2.4: (100.021 47 ± 0.000 79) g, U = k u_c, u_c = 0.35 mg, k = 2.26
        ("(100.021 47 ± 0.000 79) g, k=2.26", 0.35, 2),
        ("100.02147(35) g", 0.35, 2),
    ],
)
def test_the_mass_of_the_gum(written, u_mg, digits):
    found = read_quantity(written, "mass")
    assert found.value == GUM_MASS
    assert round(found.u * 1e6, digits) == u_mg


def test_the_mass_of_the_gum_in_its_fourth_form_is_ambiguous():
    # 7.2.2 itself says of (100.021 47 ± 0.000 35) g that the form should be avoided
    with pytest.raises(ValueError, match=r"write '100\.02147\(35\) g'"):
        read_quantity("(100.021 47 ± 0.000 35) g", "mass")


def test_readings_give_mean_and_scatter_of_the_mean():
    # GUM 4.2.3 with 4.2.2, by the standard library's statistics
    readings = [1.534, 1.493, 1.523, 1.543, 1.501]
    found = read_quantity({"readings": readings, "unit": "mm"}, "length")
    assert found.value == pytest.approx(statistics.mean(readings) * 1e-3, rel=1e-15)
    assert found.u == pytest.approx(statistics.stdev(readings) * 1e-3 / math.sqrt(5), rel=1e-13)
    assert (found.distribution, found.dof) == ("t", 4.0)


def test_readings_of_a_temperature_scatter_without_offset():
    found = read_quantity({"readings": [24.9, 25.1], "unit": "degC"}, "temperature")
    assert found.value == 298.15
    assert found.u == pytest.approx(0.1, rel=1e-14)


def test_equal_readings_show_no_scatter_but_keep_their_degrees_of_freedom():
    found = read_quantity({"readings": [2.0, 2.0, 2.0], "unit": "mm"}, "length")
    assert (found.value, found.u, found.distribution, found.dof) == (2e-3, 0.0, "t", 2.0)


def test_a_ufloat_is_taken_in_the_si_unit():
    found = read_quantity(ufloat(0.05, 2e-5), "length")
    assert (found.value, found.u, found.distribution) == (0.05, 2e-5, "normal")


def test_digits_convert_exactly():
    # 50.1 * 0.001 is 0.050100000000000006 in binary arithmetic
    assert read_quantity("50.1 mm", "length").value == 0.0501
    assert read_quantity("1 in", "length").value == read_quantity("25.4 mm", "length").value


def test_text_is_kept_as_written():
    assert read_quantity("50.0 +/- 0.1 mm, limits", "length").text == "50.0 +/- 0.1 mm, limits"
    table = {"value": 2.0, "unit": "mm", "u": 0.5}
    assert read_quantity(table, "length").text == "{ value = 2.0, unit = 'mm', u = 0.5 }"


@pytest.mark.parametrize(
    ("value", "u", "written"),
    [
        # GUM 7.2.2 and H.1.7 (50.000 838 mm, u_c = 32 nm), decimals as given
        ("100.02147", "0.00035", "100.02147(35)"),
        ("50.000838", "0.000032", "50.000838(32)"),
        ("50.0", "0.1", "50.0(1)"),
        ("50", "0.1", "50.0(1)"),
        ("50.00", "0.1", "50.00(10)"),
        ("970", "10", "970(10)"),
        ("-2.0", "0.2", "-2.0(2)"),
        ("0", "0.03", "0.00(3)"),
        ("1.5E-15", "2E-16", "1.5(2)e-15"),
    ],
)
def test_concise_writes_brackets(value, u, written):
    assert concise(Decimal(value), Decimal(u)) == written


DIGITS = st.decimals(-9999, 9999, places=4, allow_nan=False).filter(lambda value: value != 0)
UNIT = st.sampled_from([("mm", 3), ("m", 0), ("cm", 2), ("um", 6), ("µm", 6)])


@given(value=DIGITS, digits=st.integers(1, 9999), unit=UNIT)
def test_one_quantity_reads_alike_in_every_form(value, digits, unit):
    name, places = unit
    u = Decimal(digits).scaleb(-4)
    forms = [
        f"{value}({digits}) {name}",
        f"{value}({u:f}) {name}",
        f"{value} ± {2 * u} {name}, k=2",
        f"({value} +/- {2 * u}) {name} (k=2)",
        f"{value} {name} ± {2 * u} {name}; k=2.0",
        f"{value.scaleb(3):f}({u.scaleb(3).normalize():f})e-3 {name}"
        if "." in f"{u.scaleb(3).normalize():f}"
        else f"{value}({digits}) {name}",
        f"{value}({digits}) {name}".replace("-", "−").replace(" ", "\u202f"),
        {"value": float(value), "unit": name, "u": float(u)},
        {"value": float(value), "unit": name, "U": float(2 * u), "k": 2},
    ]
    for form in forms:
        found = read_quantity(form, "length")
        assert found.value == float(value.scaleb(-places)), form
        assert found.u == pytest.approx(float(u.scaleb(-places)), rel=1e-14), form
        assert found.distribution == "normal"


@given(value=DIGITS, digits=st.integers(1, 99), unit=UNIT)
def test_what_concise_writes_reads_back(value, digits, unit):
    u = Decimal(digits).scaleb(-3)
    found = read_quantity(f"{concise(value, u)} {unit[0]}", "length")
    assert found.value == float(value.scaleb(-unit[1]))
    assert found.u == pytest.approx(float(u.scaleb(-unit[1])), rel=1e-14)


def remedy_or_estimate(written):
    try:
        return read_quantity(written, "length")
    except InputError as refused:
        return refused.remedy


@given(st.text(max_size=30))
def test_any_text_is_read_or_refused_with_a_remedy(text):
    found = remedy_or_estimate(text)
    assert found
    assert isinstance(found, str) or math.isfinite(found.value)


@given(
    st.recursive(
        st.none() | st.booleans() | st.floats() | st.integers() | st.text(max_size=8),
        lambda inner: (
            st.lists(inner, max_size=3)
            | st.dictionaries(
                st.sampled_from(["value", "unit", "u", "U", "k", "dof", "within", "readings"]),
                inner,
            )
        ),
        max_leaves=8,
    )
)
def test_any_value_is_read_or_refused_with_a_remedy(written):
    found = remedy_or_estimate(written)
    assert found
    assert isinstance(found, str) or (math.isfinite(found.value) and found.u >= 0)
