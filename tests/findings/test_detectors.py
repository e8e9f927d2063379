"""Every detector finds its fault, says what to do, and keeps quiet on clean data."""

from __future__ import annotations

import pandas as pd
import pytest

import plumbfall as pf
from support.benches import bench_dict, drops_table

CLEAN = {"B1": [14.91, 14.93], "B2": [9.78, 9.80], "B3": [6.95, 6.96]}


def findings(times=CLEAN, table=None, temperature=25.0, **changes):
    table = drops_table(times, temperature=temperature) if table is None else table
    result = pf.reduce(table, bench_dict(**changes), draws=0)["A"].result
    return {finding.code: finding for finding in result.findings}, result


def test_clean_data_stay_clean():
    found, result = findings()
    assert set(found) == {"reused-balls"}  # a note
    assert result.status == "valid"


@pytest.mark.parametrize(
    ("changes", "code", "severity", "says", "remedy"),
    [
        (
            {"site": {}},
            "default-gravity",
            "note",
            "the standard 9.80665 m/s2 is used",
            "latitude and elevation",
        ),
        (
            {"tube__A__bore": "50 mm"},
            "missing-uncertainty",
            "note",
            "no uncertainty is given for tube.A.bore",
            "50.00(2) mm",
        ),
        (
            {"tube__A__bottom_below": None},
            "geometry-unknown",
            "note",
            "bottom_below: the end effect of the bottom cannot be judged",
            "[tube.A]",
        ),
        (
            {"tube__A__bottom_below": "12(1) mm"},
            "end-near",
            "warning",
            "the last mark of tube A is only 0.48 bore radii from the bottom",
            "at least one bore radius (25 mm)",
        ),
        (
            {"tube__A__surface_above": "24(1) mm", "tube__A__release_above": "20(1) mm"},
            "end-near",
            "warning",
            "the first mark of tube A is only 0.96 bore radii from the surface",
            "at least one bore radius",
        ),
        (
            {"tube__A__release_offset": "23.0(5) mm"},
            "off-axis-suspected",
            "warning",
            "0.92 bore radii off the axis",
            "through a guide",
        ),
        (
            {"tube__A__tilt": "5.0(3) deg"},
            "off-axis-suspected",
            "warning",
            "the tube is tilted by 5 deg, which brings a ball 0.94 bore radii off the axis",
            "plumb the tube",
        ),
        (
            {"timer": {}},
            "missing-uncertainty",
            "note",
            "no timer is described: the bounds leave out the error that all times share",
            "add [timer.NAME]",
        ),
        (
            {"liquid__oil__viscosity_slope": None},
            "slope-unknown",
            "note",
            "liquid oil has no viscosity_slope: the bounds leave out temperature",
            "[liquid.oil]",
        ),
        (
            {"liquid__oil__viscosity_slope": None, "bench__reference_temperature": "20 degC"},
            "slope-unknown",
            "warning",
            "nothing is reduced to the reference temperature",
            "viscosity_slope",
        ),
        (
            {"liquid__oil__viscosity_slope": "2.0(2) %/K"},
            "unit-slip-suspected",
            "warning",
            "is said to rise by 2 %/K as it warms",
            "check the sign",
        ),
        (
            {"ball__B3__diameter": "1.5001(2) mm"},
            "radius-as-diameter-suspected",
            "error",
            "mass and diameter give a density of 61.6 g/cm3; with twice the diameter it would be "
            "7.70 g/cm3",
            "looks like a radius",
        ),
        (
            {"ball__B3__mass": "108.85(1) g"},
            "density-implausible",
            "error",
            "ball B3 has a density of 7.7e+03 g/cm3",
            "were several balls on the balance? then add weighed_together",
        ),
        (
            {"ball__B3__diameter": "7.0000(2) mm"},
            "density-implausible",
            "error",
            "outside 0.9 to 20 g/cm3",
            "is the diameter twice too large?",
        ),
        (
            {"liquid__oil__density": "550(1) kg/m3"},
            "density-implausible",
            "error",
            "liquid oil has a density of 0.55 g/cm3, outside 0.6 to 3.5 g/cm3",
            "check its density",
        ),
        (
            {
                "liquid__oil__density_temperature": "5 degC",
                "liquid__oil__expansion": None,
            },
            "density-temperature",
            "warning",
            "the density of oil holds 20.0 K away",
            "add expansion",
        ),
        (
            {"liquid__oil__density": "7750(1) kg/m3", "limits": {"liquid_density_high": 9000}},
            "ball-not-denser",
            "error",
            "is not denser than the liquid",
            "check the ball's density or mass",
        ),
    ],
)
def test_a_fault_of_the_bench_is_found(changes, code, severity, says, remedy):
    found, result = findings(**changes)
    assert code in found
    assert found[code].severity == severity
    assert says in found[code].message
    assert remedy in found[code].remedy
    expected = {"note": "valid", "warning": "valid-with-warnings", "error": "invalid"}[severity]
    assert result.status == expected


def test_a_short_run_in_is_found():
    thin = {"B1": [1.20, 1.21]}
    table = drops_table(thin)
    bench = {"tube__A__release_above": "3(1) mm", "liquid__oil__density": "870(1) kg/m3"}
    found, _ = findings(table=table, **bench)
    assert found["run-in-short"].severity == "warning"
    assert "let go only 3 mm above the first mark" in found["run-in-short"].message
    assert found["run-in-short"].drops == (1, 2)


def test_an_outlier_is_named_and_kept_with_its_effect():
    times = [14.91, 14.93, 14.90, 14.94, 14.92, 14.91, 16.2, 14.93]
    found, result = findings({"B1": times})
    outlier = found["outlier"]
    assert outlier.drops == (7,)
    assert result.n_drops == 8
    without = findings({"B1": times[:6] + times[7:]})[1].viscosity.value
    assert outlier.effect == pytest.approx(without / result.viscosity.value - 1, rel=1e-6)
    assert "it is kept" in outlier.message


def test_an_outlier_among_balls_has_the_effect_of_leaving_it_out():
    times = {"B1": [14.91, 14.93, 15.9], "B2": [9.78, 9.80, 9.79], "B3": [6.95, 6.96, 6.94]}
    found, result = findings(times)
    without = findings({**times, "B1": times["B1"][:2]})[1].viscosity.value
    assert found["outlier"].drops == (3,)
    assert found["outlier"].effect == pytest.approx(without / result.viscosity.value - 1, rel=1e-6)


def test_an_outlier_is_left_out_only_by_the_named_rule():
    times = [14.91, 14.93, 14.90, 14.94, 14.92, 14.91, 16.2, 14.93]
    table = drops_table({"B1": times})
    report = pf.reduce(table, bench_dict(limits={"exclude_outliers": True}))
    assert dict(report.rows) == {"read": 8, "used": 7, "void": 0, "excluded": 1}
    drop = report["A"].result.drops[6]
    assert (drop.used, drop.status, drop.note) == (False, "excluded", "grubbs-1-percent")


def test_an_outlier_is_told_with_the_level_it_was_judged_by():
    times = [14.91, 14.93, 14.90, 14.94, 14.92, 14.91, 16.2, 14.93]
    found, _ = findings({"B1": times}, limits={"outlier_level": 0.001})
    assert ", 0.1 % limit 2.38 for 8 drops" in found["outlier"].message


def test_three_drops_have_no_outlier_and_that_is_said():
    found, _ = findings({"B1": [14.9, 14.9, 19.0]})
    assert "outlier" not in found
    assert "no outlier can be told among so few" in found["too-few-drops"].message


def test_void_rows_need_a_reason():
    table = drops_table({"B1": [14.91, 14.93, 14.9, 14.92, 14.95, 14.91]})
    table["status"] = ["", "", "void", "", "", ""]
    found, result = findings(table=table)
    assert found["void-without-reason"].drops == (3,)
    assert result.n_drops == 5
    table["note"] = ["", "", "bubble", "", "", ""]
    assert "void-without-reason" not in findings(table=table)[0]


def test_many_excluded_drops_are_warned_of():
    table = drops_table({"B1": [14.91, 14.93, 14.9, 14.92, 14.95, 14.91]})
    table["status"] = ["void", "", "void", "", "", ""]
    table["note"] = ["bubble", "", "bubble", "", "", ""]
    found, _ = findings(table=table)
    assert "2 of 6 drops (33 %) are void or excluded" in found["many-excluded"].message


def test_a_set_without_any_drop_left_is_invalid():
    table = drops_table({"B1": [14.91, 14.93]})
    table["status"], table["note"] = "void", "bubble"
    found, result = findings(table=table)
    assert result.status == "invalid"
    assert result.viscosity is None
    assert "no drop of this run set can be used" in found["no-solution"].message


def test_wide_temperatures_are_warned_of_with_their_cost():
    table = drops_table({"B1": [14.91, 14.6, 14.3, 14.0]})
    table["temperature [degC]"] = [25.0, 26.0, 27.0, 28.0]
    found, _ = findings(table=table)
    assert found["temperature-spread"].effect == pytest.approx(0.02 * 3.0)
    assert "differ by 3.00 K, 6.0 % of viscosity" in found["temperature-spread"].message


def test_no_temperature_at_all_is_said():
    table = pd.DataFrame({"ball": ["B1"], "time [s]": [14.9], "set": ["A"]})
    found, result = findings(table=table, liquid__oil__viscosity_slope=None)
    assert "no temperature was recorded" in found["slope-unknown"].message
    assert result.temperature is None


def test_no_temperature_is_said_of_a_liquid_with_a_slope_too():
    table = pd.DataFrame({"ball": ["B1"], "time [s]": [14.9], "set": ["A"]})
    found, result = findings(table=table, bench__reference_temperature="20 degC")
    assert found["density-temperature"].severity == "warning"
    assert "no temperature was recorded" in found["density-temperature"].message
    assert "nothing is reduced to the reference" in found["density-temperature"].message
    assert result.viscosity_at_reference is None


def test_a_wide_ball_on_the_axis_is_not_called_off_it():
    wide = {"diameter": "30.000(5) mm", "density": "7.700(3) g/cm3"}
    tube = {"tube__A__release_offset": "0.0(5) mm", "tube__A__tilt": None}
    found, _ = findings({"B9": [12.60, 12.61]}, ball={"B9": wide}, **tube)
    assert "off-axis-suspected" not in found
    tube["tube__A__release_offset"] = "2.0(5) mm"
    assert "off-axis-suspected" in findings({"B9": [12.60, 12.61]}, ball={"B9": wide}, **tube)[0]


def test_a_ratio_just_beyond_a_limit_is_told_from_it():
    wide = {"diameter": "30.003(5) mm", "density": "7.700(3) g/cm3"}
    found, _ = findings({"B9": [12.60]}, ball={"B9": wide}, methods={"drag": "bohlin"})
    assert "diameter ratio 0.60003 is above 0.6," in found["diameter-ratio-high"].message


@pytest.mark.parametrize(
    ("limits", "says"),
    [
        ({"outlier_level": 5}, "5 cannot be a limit of this kind; write a number from 0 to below"),
        ({"temperature_spread": -1}, "-1 cannot be a limit of this kind; write a number of at"),
    ],
)
def test_a_number_that_cannot_be_the_limit_is_refused(limits, says):
    with pytest.raises(pf.InputError, match=f"limits.{next(iter(limits))}: {says}"):
        findings(limits=limits)


def test_limits_may_be_overridden_and_unknown_ones_are_refused():
    assert "too-few-drops" in findings({"B1": [14.9] * 6}, limits={"too_few_drops": 7})[0]
    with pytest.raises(pf.InputError, match="did you mean 'too_few_drops'"):
        findings(limits={"to_few_drops": 7})


def test_a_drop_without_temperature_among_others_is_refused_with_its_line():
    table = drops_table({"B1": [14.9, 14.9, 14.9]})
    table.loc[1, "temperature [degC]"] = float("nan")
    with pytest.raises(pf.InputError, match="drop 2 of run set 'A' has no temperature") as error:
        findings(table=table)
    assert error.value.line == 2
    bench = bench_dict(set={"A": {"temperature": "25.00(5) degC"}})
    line = {x.input: x for x in pf.reduce(table, bench, draws=0)["A"].result.budget}[
        "set.A.temperature"
    ]
    assert line.u == pytest.approx((0.05**2 + 0.01**2) ** 0.5)  # the reading's own scatter joins
