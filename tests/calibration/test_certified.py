"""Certified liquids: values between a certificate's points, their uncertainty and correlation."""

from __future__ import annotations

import datetime as dt
import math

import pytest

import plumbfall as pf
from plumbfall.calibration.certified import certified_value, is_expired
from support.benches import bench_dict

ZERO = 273.15
# IAPWS R12-08 and SR6-08, 0.1 MPa, in mPa.s, rounded to five decimals
WATER = {15: 1.13757, 20: 1.00160, 25: 0.89002, 30: 0.79722, 35: 0.71913, 40: 0.65273}


def reference(points=None, **keys):
    """Return the reference and its liquid, as the bench reader makes them."""
    if points is not None:
        keys["viscosity"] = [
            {"temperature": f"{celsius} degC", "value": value} for celsius, value in points.items()
        ]
    bench = pf.read_bench(bench_dict(reference={"R": {"liquid": "oil", **keys}}))
    return bench.references["R"], bench.liquids["oil"]


def value_at(celsius, points=None, **keys):
    made, liquid = reference(points, **keys)
    return certified_value(made, temperature=ZERO + celsius, liquid=liquid)


@pytest.mark.parametrize("celsius", WATER)
def test_water_by_name(celsius):
    found = value_at(celsius, law="water")
    assert found.value * 1e3 == pytest.approx(WATER[celsius], rel=5e-5)
    # ISO/TR 3666 (from memory): 0.17 % at 20 degC, as expanded uncertainty
    assert 2 * found.u / found.value == pytest.approx(0.0017, rel=0.06)


def test_slope_of_water_is_that_in_print():
    # -2.45 %/K at 20 degC and -2.28 %/K at 25 degC
    for celsius, percent in ((20, -2.45), (25, -2.28)):
        found = value_at(celsius, law="water")
        assert 100 * found.slope / found.value == pytest.approx(percent, abs=0.005)


def test_a_certified_temperature_gives_the_certified_value_and_its_uncertainty():
    two = {20: "1.2021 ± 0.0030 Pa.s, k=2", 40: "0.3105 ± 0.0008 Pa.s, k=2"}
    three = {**two, 25: "0.8433 ± 0.0021 Pa.s, k=2"}
    for points in (two, three):
        for celsius, (value, u) in {20: (1.2021, 0.0015), 40: (0.3105, 0.0004)}.items():
            found = value_at(celsius, points)
            assert found.value == pytest.approx(value, rel=1e-10)
            assert found.u == pytest.approx(u, rel=1e-8)


def glycerol(celsius):
    # Cheng 2008: within 0 to 100 degC a published formula that follows neither law
    return pf.physics.glycerol_water_viscosity(glycerol_fraction=1.0, temperature=ZERO + celsius)


def water(celsius):
    return pf.physics.water_viscosity_at_atmosphere(temperature=ZERO + celsius)


@pytest.mark.parametrize("liquid", [glycerol, water])
@pytest.mark.parametrize(
    ("certified", "wanted"), [((20, 40), (25, 30)), ((15, 25, 40), (18, 20, 30, 35))]
)
def test_published_formulas_lie_within_the_limits_of_the_law(liquid, certified, wanted):
    points = {celsius: f"{liquid(celsius):.9f} Pa.s" for celsius in certified}
    for celsius in wanted:
        found = value_at(celsius, points)
        (law,) = (part for part in found.parts if part.input.name == "reference.R.law")
        off = abs(found.value - liquid(celsius))
        assert off < abs(law.sensitivity)
        assert off < (0.02 if len(certified) == 2 else 0.001) * found.value
        slope = (liquid(celsius + 0.01) - liquid(celsius - 0.01)) / 0.02
        assert found.slope == pytest.approx(slope, rel=0.06)


THREE = (("20", 1.2021, 0.0015), ("25", 0.8433, 0.0021), ("40", 0.3105, 0.0004))
# values that no law fits well: what the fit leaves counts too
FIVE = (*THREE, ("30", 0.6043, 0.0010), ("50", 0.1761, 0.0003))


@pytest.mark.parametrize("lines", [THREE[:2], THREE, FIVE])
def test_sensitivities_are_those_of_differences(lines):
    celsius, step = 23.0, 1e-6

    def at(shift=(), warmer=0.0):
        points = {
            t: {"value": value * (1 + step * (n in shift)), "unit": "Pa.s", "u": u}
            for n, (t, value, u) in enumerate(lines)
        }
        return value_at(celsius + warmer, points, correlation=0.0)

    found = at()
    by_name = found.sensitivities
    for n, (_, value, _) in enumerate(lines):
        difference = (at((n,)).value - found.value) / (step * value)
        assert by_name[f"reference.R.viscosity[{n}].value"] == pytest.approx(
            difference, rel=1e-4, abs=1e-5
        )
    slope = (at(warmer=1e-3).value - at(warmer=-1e-3).value) / 2e-3
    assert found.slope == pytest.approx(slope, rel=1e-6)


def test_errors_of_one_certificate_are_one_error_unless_it_says_otherwise():
    points = {20: {"value": 1.2, "unit": "Pa.s", "u": 0.0024}}
    points[40] = {"value": 0.3, "unit": "Pa.s", "u": 0.0006}
    shared, apart, half = (value_at(29, points, correlation=r) for r in (1.0, 0.0, 0.5))
    names = [part.input.name for part in shared.parts]
    assert names == ["reference.R.viscosity", "reference.R.law"]
    # 0.2 % everywhere, one error: nearly 0.2 % between; two errors: down to its root of a half
    of_points = [
        math.hypot(*(part.contribution for part in found.parts[:-1])) / found.value
        for found in (shared, apart, half)
    ]
    assert of_points[0] == pytest.approx(0.002, rel=0.02)
    assert of_points[1] == pytest.approx(0.002 / math.sqrt(2), rel=0.05)
    assert of_points[2] ** 2 == pytest.approx((of_points[0] ** 2 + of_points[1] ** 2) / 2)
    assert apart.parts[0].input.name == "reference.R.viscosity[0].value"


def test_one_point_is_carried_by_the_slope_of_its_liquid():
    found = value_at(25.5, {25: "1.0000(10) Pa.s"})
    assert found.value == pytest.approx(math.exp(-0.02 * 0.5), rel=1e-4)
    assert found.slope / found.value == pytest.approx(-0.02, rel=5e-3)
    assert found.sensitivities["liquid.oil.viscosity_slope"] == pytest.approx(0.495, rel=0.01)
    with pytest.raises(pf.InputError, match=r"certified at 25 degC, and 26\.50 degC is asked"):
        value_at(26.5, {25: "1.0000(10) Pa.s"})


def test_one_point_without_a_slope_holds_at_its_temperature_alone():
    made, _ = reference({25: "1.0000(10) Pa.s"})
    found = certified_value(made, temperature=298.15)
    assert (found.value, found.u) == (1.0, pytest.approx(0.001))
    with pytest.raises(pf.InputError, match="add a second value") as refused:
        certified_value(made, temperature=298.25)
    assert refused.value.key == "reference.R.viscosity"


def test_a_viscosity_that_rises_is_refused():
    wrong = {20: "1.2 Pa.s", 25: "1.4 Pa.s", 40: "0.3 Pa.s"}
    with pytest.raises(pf.InputError, match="compare each temperature and viscosity"):
        value_at(23, wrong)


def test_points_bent_the_wrong_way_are_joined_two_by_two():
    # ln(viscosity) falls faster the warmer it gets, which no law of Vogel does
    bent = {20: "1.0(1) Pa.s", 25: "0.9(1) Pa.s", 40: "0.5(1) Pa.s"}
    found, two = value_at(23, bent), value_at(23, dict(list(bent.items())[:2]))
    assert (found.value, found.u) == (two.value, pytest.approx(two.u))
    assert "no law of Vogel" in found.law


def test_a_law_carries_one_kelvin_beyond_the_certificate():
    points = {20: "1.2 Pa.s", 40: "0.3 Pa.s"}
    assert value_at(19.2, points).value > 1.2
    with pytest.raises(pf.InputError, match=r"from 20 to 40 degC, and 41\.20 degC") as refused:
        value_at(41.2, points)
    assert refused.value.key == "reference.R"


def test_a_certificate_holds_on_its_last_day():
    made, _ = reference(law="water", expires=dt.date(2026, 5, 31))
    assert not is_expired(made, dt.date(2026, 5, 31))
    assert is_expired(made, dt.date(2026, 6, 1))
    assert not is_expired(reference(law="water")[0], dt.date(2099, 1, 1))
