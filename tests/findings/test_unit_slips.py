"""Slips of a unit, planted on the bench sheet or in the times, and found by the factor."""

from __future__ import annotations

import pandas as pd
import pytest

import plumbfall as pf
from support.benches import bench_dict, drops_table

CODE = "unit-slip-suspected"
REFERENCE = {
    "R": {"liquid": "oil", "viscosity": [{"temperature": "25 degC", "value": "2.000(4) Pa.s"}]}
}


@pytest.fixture(scope="module")
def times():
    """Times of a liquid of exactly 2 Pa.s."""
    return pf.simulate(
        bench_dict(), viscosity=2.0, drops=6, balls=["B1", "B2", "B3"], exact=True
    ).assign(note="")


def found(table, **changes):
    report = pf.reduce(table, bench_dict(**changes), draws=0)
    return [one for one in report["A"].result.findings if one.code == CODE]


def test_a_right_result_is_left_alone(times):
    assert found(times, reference=REFERENCE) == []


@pytest.mark.parametrize(
    ("factor", "says"),
    [
        (60, "seconds read as minutes"),
        (1 / 60, "minutes read as seconds"),
        (10, "a slip of 10 in a unit"),
        (0.1, "a slip of 10 in a unit"),
        (1000, "a slip of 1000 in a unit"),
    ],
)
def test_times_in_another_unit_are_told_by_the_certificate(times, factor, says):
    table = times.copy()
    table["time [s]"] *= factor
    thick = {"R": {"liquid": "oil", "viscosity": [{"temperature": "25 degC", "value": "2.0 Pa.s"}]}}
    many = found(table, reference=thick, timer__T1__bias="0.000(1) s")
    (one,) = many
    assert says in one.message
    assert one.statistic == pytest.approx(1 / factor, rel=0.3)  # inertia, when much too fast
    assert "the certificate of R" in one.message


@pytest.mark.parametrize(
    ("factor", "says"), [(0.5, "radii written as diameters"), (2.0, "diameters twice too large")]
)
def test_all_diameters_off_by_two_are_told_walls_included(times, factor, says):
    changes = {
        "ball__B1__diameter": f"{2.0003 * factor:.5f}(20) mm",
        "ball__B2__diameter": f"{2.5001 * factor:.5f}(20) mm",
        "ball__B3": {"diameter": f"{3.0002 * factor:.5f}(20) mm", "density": "7.70(1) g/cm3"},
    }
    (one,) = found(times, reference=REFERENCE, **changes)
    assert says in one.message


@pytest.mark.parametrize("value", ["2.0614(8) Pa.s", "1.9404(8) Pa.s"])
def test_kinematic_viscosity_taken_for_viscosity_is_told_by_the_density(times, value):
    """2 Pa.s over 0.9702 g/cm3 is 2061.4 mm2/s; typed as mPa.s, or the other way round."""
    reference = {"R": {"liquid": "oil", "viscosity": [{"temperature": "25 degC", "value": value}]}}
    (one,) = found(times, reference=reference)
    assert "the liquid has 0.9702 g/cm3" in one.message
    assert "mm2/s" in one.remedy


@pytest.mark.parametrize("value", ["2.020(4) Pa.s", "1.900(4) Pa.s", "2.6(4) Pa.s"])
def test_another_bias_is_no_slip(times, value):
    reference = {"R": {"liquid": "oil", "viscosity": [{"temperature": "25 degC", "value": value}]}}
    assert found(times, reference=reference) == []


def test_a_specification_tells_a_slip_but_not_a_bad_batch(times):
    def limits(low, high):
        return {"liquid__oil__specification": {"low": low, "high": high, "temperature": "25 degC"}}

    assert found(times, **limits("1.9 Pa.s", "2.1 Pa.s")) == []
    assert found(times, **limits("1.2 Pa.s", "1.3 Pa.s")) == []
    (one,) = found(times, **limits("190 mPa.s", "210 mPa.s"))
    assert "the specification of oil" in one.message
    assert "a slip of 10" in one.message


def test_the_other_run_sets_outvote_one_in_minutes():
    tables = [
        pf.simulate(
            bench_dict(), viscosity=2.0, run_set=name, drops=4, balls=["B1", "B2"], seed=i
        ).assign(note="")
        for i, name in enumerate("BCDA")
    ]
    assert all(found_in(tables, name) == [] for name in "ABCD")
    tables[3]["time [s]"] *= 60
    (one,) = found_in(tables, "A")
    assert "the other run sets of the liquid" in one.message
    assert "seconds read as minutes" in one.message
    assert found_in(tables, "B") == []


def found_in(tables, name):
    report = pf.reduce(pd.concat(tables), bench_dict(), draws=0)
    return [one for one in report[name].result.findings if one.code == CODE]


@pytest.mark.parametrize(
    ("changes", "says"),
    [
        (
            {"tube__A__bore": "500.0(2) mm"},
            "the bore of tube A is 500 mm, outside the usual 3 to 300 mm; 0.1 times it would be 50",
        ),
        (
            {"tube__A__marks": ["0 mm", "20000(5) mm"], "tube__A__bottom_below": None},
            "the distance between marks of tube A is 2e+04 mm, outside the usual 5 to 3000 mm",
        ),
        ({"ball__B1__diameter": "0.0787(2) mm"}, "the diameter of ball B1 is 0.0787 mm, outside"),
    ],
)
def test_lengths_that_no_bench_has_are_told_with_the_factor_that_mends_them(changes, says):
    many = found(drops_table({"B1": [14.91, 14.93, 14.92]}), **changes)
    assert any(says in one.message for one in many), [one.message for one in many]


@pytest.mark.parametrize(("typed", "says"), [(77.0, "read as degF it would be 25.0 degC")])
def test_a_temperature_in_another_unit_is_told_by_that_of_the_density(typed, says):
    """77 degF are 25 degC, by definition of the scales."""
    (one,) = found(drops_table({"B1": [14.91, 14.93, 14.92]}, temperature=typed))
    assert says in one.message
    assert "temperature [degF]" in one.remedy


@pytest.mark.parametrize("typed", [25.0, 40.0, 60.0, 100.0])
def test_a_hot_bath_is_no_slip(typed):
    assert found(drops_table({"B1": [14.91, 14.93, 14.92]}, temperature=typed)) == []
