"""Faults within a run set: what is found, with how much, and what the technician is told to do."""

from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from plumbfall.findings.limits import Limits
from plumbfall.findings.significance import level_of_each
from support.benches import bench_dict, drops_table
from support.planted import bench_of

NOISE = np.array([3, -5, 1, 4, -2, -4, 5, 0, 2, -3, -1, 4.0]) * 1e-4


def found_in(table, bench):
    result = pf.reduce(table, bench, draws=0)["A"].result
    return {finding.code: finding for finding in result.findings}, result


def table_of(viscosity, bench=None, **how):
    """Return exact drops of the given viscosities, which scatter as NOISE does."""
    viscosity = np.asarray(viscosity, dtype=float)
    drops = len(viscosity)
    scale = 1 + np.resize(NOISE, drops)
    shape = scale[:, None] if viscosity.ndim == 2 else scale
    return pf.simulate(
        bench or bench_of(balls=1), viscosity=viscosity * shape, drops=drops, exact=True,
        temperature=298.15, **how,
    )  # fmt: skip


# --- outliers -----------------------------------------------------------------------------------


def test_copper_wires_have_a_straggler_that_is_kept_and_noted():
    # Grubbs 1969, Technometrics 11, 1 (from memory): 2.39, between the 5 % limit 2.290 and the 1 %
    # limit 2.482 of ISO 5725-2; as times their logarithms are compared, 2.37.
    wires = [568, 570, 570, 570, 572, 572, 572, 578, 584, 596]
    found, result = found_in(drops_table({"B1": [w / 20 for w in wires]}), bench_dict())
    straggler = found["straggler"]
    assert "outlier" not in found
    assert (straggler.severity, straggler.drops) == ("note", (10,))
    assert 0.01 < straggler.p_value < 0.05
    assert "5 % limit 2.29 for 10 drops" in straggler.message
    assert result.n_drops == 10


def test_the_straggler_level_may_be_set():
    wires = [568, 570, 570, 570, 572, 572, 572, 578, 584, 596]
    table = drops_table({"B1": [w / 20 for w in wires]})
    assert "straggler" not in found_in(table, bench_dict(limits={"straggler_level": 0.02}))[0]
    assert "outlier" in found_in(table, bench_dict(limits={"outlier_level": 0.04}))[0]


def test_two_outliers_that_hide_each_other_are_found_together():
    times = [14.91, 14.93, 14.90, 15.90, 14.92, 14.91, 15.95, 14.93]
    found, result = found_in(drops_table({"B1": times}), bench_dict())
    outlier = found["outlier"]
    assert outlier.drops == (4, 7)
    assert outlier.detectable > 0.01
    kept = [time for time in times if time < 15]
    without = found_in(drops_table({"B1": kept}), bench_dict())[1].viscosity.value
    assert outlier.effect == pytest.approx(without / result.viscosity.value - 1, rel=1e-6)
    assert "Grubbs' test for two" in outlier.message


def test_digits_that_changed_places_are_hinted_at():
    times = [15.39, 15.41, 15.38, 15.42, 15.40, 15.39, 13.59, 15.41]  # 15.39 typed as 13.59
    message = found_in(drops_table({"B1": times}), bench_dict())[0]["outlier"].message
    assert "with two digits changed about it would read 15.39 s and belong" in message


def test_no_digits_are_blamed_where_none_would_do():
    times = [15.39, 15.41, 15.38, 15.42, 15.40, 15.39, 17.77, 15.41]
    message = found_in(drops_table({"B1": times}), bench_dict())[0]["outlier"].message
    assert "digits" not in message


def test_a_fast_ball_by_stopwatch_is_not_an_outlier_for_its_scatter():
    # 0.1 s is 1 % of a fast ball's time and 0.2 % of a slow one's: both are as declared
    slow = {"B1": [59.9, 60.1, 60.0, 59.95, 60.05], "B4": [14.80, 14.99, 14.89]}
    bench = bench_dict(timer={"T1": {"kind": "stopwatch"}})
    assert "outlier" not in found_in(drops_table(slow), bench)[0]


# --- drift and temperature ----------------------------------------------------------------------


def test_a_drift_is_told_with_its_interval_and_what_would_have_shown():
    found, _ = found_in(table_of(2.0 * (1 + np.linspace(0, 0.02, 12))), bench_of(balls=1))
    drift = found["time-trend"]
    assert drift.severity == "warning"
    assert drift.effect == pytest.approx(0.02, abs=0.001)
    assert 0 < drift.detectable < 0.01
    assert drift.p_value < level_of_each(Limits())
    assert "rises by" in drift.message
    assert "95 % interval" in drift.message
    assert "times the expanded uncertainty" in drift.message
    assert "evaporation" in drift.remedy


def test_a_drift_of_balls_dropped_in_turn_is_told_apart_from_the_balls():
    bench = bench_of(balls=3)
    falling = 2.0 * (1 - np.linspace(0, 0.02, 12))
    found, _ = found_in(table_of(falling, bench), bench)
    assert found["time-trend"].effect == pytest.approx(-0.02, abs=0.002)
    assert "balls-disagree" not in found


def test_balls_dropped_one_after_another_are_no_drift():
    # B1 is wrong by 1 %; all its drops come first
    bench = bench_of(balls=2)
    table = table_of(np.full(12, 2.0), bench, balls=["B1"] * 6 + ["B2"] * 6)
    wrong = bench_of(balls=2, ball__B1__mass="64.95(1) mg")
    found, _ = found_in(table, wrong)
    assert "balls-disagree" in found
    assert "time-trend" not in found


def test_a_drift_over_balls_dropped_one_after_another_is_told_with_its_doubt():
    bench = bench_of(balls=4)
    # two drops of a ball differ by as much from scatter as from the drift
    rising = 2.0 * (1 + np.linspace(0, 0.03, 8) + 4 * NOISE[:8])
    order = ["B2", "B2", "B4", "B4", "B1", "B1", "B3", "B3"]
    found, _ = found_in(table_of(rising, bench, balls=order), bench)
    assert "balls that differ would look the same" in found["time-trend"].message
    assert "drop the balls in turn" in found["time-trend"].remedy
    assert found["time-trend"].effect == pytest.approx(0.03, abs=0.003)


def test_a_drift_that_the_temperature_makes_is_called_that():
    bench = bench_of(balls=1, slope="-8.0(2) %/K")
    warm = 298.15 + np.linspace(0, 0.6, 12)
    table = table_of(np.full(12, 2.0), bench, temperatures=warm)
    found, _ = found_in(table, bench_of(balls=1, slope="-5.0(2) %/K"))
    trend = found["temperature-trend"]
    assert "time-trend" not in found
    assert "the drops change by -8(" in trend.message
    assert "where -5 %/K is given" in trend.message
    assert "accounts for their drift in time too" in trend.message
    assert trend.effect == pytest.approx(-0.03 * 0.6, rel=0.1)
    assert "[liquid.oil]" in trend.remedy


def test_temperature_steps_no_larger_than_a_readings_scatter_show_nothing():
    # the bath is steady; readings scatter by 0.01 K as declared, and 8 %/K makes 0.08 % of it
    bench = bench_of(balls=1, slope="-8.0(2) %/K")
    table = table_of(np.full(12, 2.0), bench)
    table["temperature [degC]"] += np.resize([0.012, -0.008, 0.0, -0.014, 0.01], 12)
    assert "temperature-trend" not in found_in(table, bench)[0]


def test_a_lagging_thermometer_is_told_from_a_wrong_slope():
    bench = bench_of(balls=1, slope="-8.0(2) %/K")
    wave = 0.4 * np.sin(np.arange(16) * 2 * np.pi / 8)
    table = table_of(np.full(16, 2.0), bench, temperatures=298.15 + wave)
    late = 0.4 * np.sin((np.arange(16) - 0.75) * 2 * np.pi / 8)
    table["temperature [degC]"] += late - wave
    trend = found_in(table, bench)[0]["temperature-trend"]
    assert "the thermometer lags the liquid" in trend.message
    assert "beside the balls' path" in trend.remedy


# --- equilibrium --------------------------------------------------------------------------------


def begun(started, filled="2026-03-02T08:10:00"):
    bench = bench_dict(set={"A": {"filled": filled}})
    table = drops_table({"B1": [14.91, 14.93, 14.9, 14.92, 14.95]})
    table["started"] = started
    return found_in(table, bench)[0]


def test_a_set_begun_too_soon_after_filling_is_found_by_the_bore():
    # R = 25 mm: R2/(5.783 x 9.5e-8 m2/s) = 19 min; five of them are 95 min (Carslaw and Jaeger)
    finding = begun("2026-03-02T08:40:00")["not-equilibrated"]
    assert "started 30 min after filling" in finding.message
    assert "a bore of 50 mm needs 95 min, 5 time constants" in finding.message
    assert "wait 95 min" in finding.remedy
    # 1.602 exp(-30/18.96) = 0.33 of the first difference on the axis, times 2 %/K
    assert finding.effect == pytest.approx(0.02 * 1.602 * np.exp(-30 / 18.96), rel=0.01)


@pytest.mark.parametrize("started", ["2026-03-02T09:50:00", "9:50:00", "09:50", "2026-03-02", ""])
def test_a_set_that_waited_or_does_not_say_is_not_found(started):
    assert "not-equilibrated" not in begun(started)


def test_a_time_of_day_alone_is_taken_after_filling():
    assert "started 30 min after filling" in begun("8:40:00")["not-equilibrated"].message


def test_a_start_before_filling_is_a_slip_of_the_bench_sheet():
    finding = begun("2026-03-02T08:00:00")["not-equilibrated"]
    assert "the tube was filled 10 min after the first drop was started" in finding.message
    assert "correct filled" in finding.remedy


def test_first_drops_that_approach_the_others_are_named_with_their_cost():
    above = 2.0 * (1 + 0.02 * np.exp(-np.arange(12) / 2))
    found, result = found_in(table_of(above), bench_of(balls=1))
    finding = found["not-equilibrated"]
    assert finding.drops[:2] == (1, 2)
    assert "time-trend" not in found
    assert finding.effect == pytest.approx(2.0 / result.viscosity.value - 1, abs=5e-4)
    assert "as if the liquid had been 0.99 K off" in finding.message


def test_one_bad_first_drop_is_an_outlier_and_no_bath():
    once = np.full(12, 2.0)
    once[0] *= 1.02
    found, _ = found_in(table_of(once), bench_of(balls=1))
    assert found["outlier"].drops == (1,)
    assert "not-equilibrated" not in found


# --- balls --------------------------------------------------------------------------------------


def test_a_ball_that_differs_is_named_with_the_cost_of_leaving_it_out():
    bench = bench_of(balls=4)
    wrong = bench_of(balls=4, ball__B2__diameter="2.0213(5) mm")
    table = table_of(np.full(12, 2.0), bench)
    found, result = found_in(table, wrong)
    finding = found["balls-disagree"]
    assert finding.drops == (2, 6, 10)
    assert "ball B2 gives 1.58 % less than the 3 others together" in finding.message
    rest = table[table["ball"] != "B2"].assign(drop=range(1, 10))
    without = found_in(rest, wrong)[1].viscosity.value
    assert finding.effect == pytest.approx(without / result.viscosity.value - 1, abs=2e-4)
    assert "clean, weigh and measure" in finding.remedy


def test_balls_may_differ_by_what_the_bench_declares_of_them():
    bench = bench_of(balls=4)
    doubtful = bench_of(
        balls=4, ball__B2__diameter="2.021(15) mm", gauge__G1__correction="0.0(3) um"
    )
    found, _ = found_in(table_of(np.full(12, 2.0), bench), doubtful)
    assert "balls-disagree" not in found


def test_balls_dropped_once_each_are_not_compared():
    bench = bench_of(balls=4, ball__B2__diameter="2.0213(5) mm")
    found, _ = found_in(table_of(np.full(4, 2.0), bench_of(balls=4)), bench)
    assert "balls-disagree" not in found


STEEL, CERAMIC = "7.700(3) g/cm3", "3.200(2) g/cm3"


def of_sizes(*balls):
    entries = {
        f"B{n}": {"diameter": f"{size:.4f}(5) mm", "density": density, "gauge": "G1"}
        for n, (size, density) in enumerate(balls, 1)
    }
    bench = bench_of()
    bench["ball"] = entries
    return bench


def stress_of(bench):
    balls = bench["ball"].values()
    return np.array([(float(b["density"][:5]) - 0.9702) * float(b["diameter"][:6]) for b in balls])


def test_a_trend_with_size_alone_is_said_to_be_undecidable():
    bench = of_sizes((1.5, STEEL), (2.0, STEEL), (2.5, STEEL), (3.0, STEEL))
    thinning = 4.0 * np.resize((stress_of(bench) / 10) ** -0.05, 12)
    found, _ = found_in(table_of(thinning, bench), bench)
    finding = found["diameter-ratio-trend"]
    assert "shear-dependence" not in found
    assert "cannot be told" in finding.message
    assert "equal diameter and different density" in finding.remedy
    assert finding.effect == pytest.approx(-0.05 * np.log(2), rel=0.1)


def test_shear_is_told_from_walls_by_balls_of_equal_diameter_and_other_density():
    bench = of_sizes((2.0, STEEL), (3.0, STEEL), (2.0, CERAMIC), (3.0, CERAMIC))
    thinning = 4.0 * np.resize((stress_of(bench) / 10) ** -0.05, 12)
    found, result = found_in(table_of(thinning, bench), bench)
    assert "diameter-ratio-trend" not in found
    finding = found["shear-dependence"]
    assert "beyond what their sizes do" in finding.message
    assert "apparent viscosity" in pf.reduce(table_of(thinning, bench), bench)["A"].summary
    assert finding.effect < -0.03
    assert result.status == "valid-with-warnings"


def test_walls_are_told_from_shear_by_the_same_balls():
    bench = of_sizes((2.0, STEEL), (3.0, STEEL), (2.0, CERAMIC), (3.0, CERAMIC))
    table = table_of(np.full(12, 4.0), bench)
    bench["tube"]["A"]["bore"] = "38.00(2) mm"
    found, _ = found_in(table, bench)
    assert "shear-dependence" not in found
    assert "it is the size and not the shear" in found["diameter-ratio-trend"].message


# --- intervals ----------------------------------------------------------------------------------

MARKS = ["0.00(3) mm", "60.00(5) mm", "130.00(5) mm", "200.00(5) mm"]


def with_marks(marks=MARKS):
    bench = bench_of(balls=2)
    bench["tube"]["A"]["marks"] = list(marks)
    return bench


def intervals(viscosity, bench=None):
    bench = bench or with_marks()
    rows = np.ones((10, 1)) * 2.0 * np.asarray(viscosity)
    return found_in(table_of(rows, with_marks(), marks=True), bench)[0]


def test_equal_intervals_are_not_found():
    assert "intervals-disagree" not in intervals([1.0, 1.0, 1.0])


def test_a_slow_first_interval_is_a_run_in_and_costs_its_share():
    finding = intervals([1.01, 1.0, 1.0])["intervals-disagree"]
    assert "still gaining speed" in finding.message
    assert "let the ball go higher" in finding.remedy
    assert finding.effect == pytest.approx(-0.01 * 60 / 200, rel=0.05)


def test_a_slow_last_interval_is_the_bottom():
    finding = intervals([1.0, 1.0, 1.01])["intervals-disagree"]
    assert "as if the bottom, or what lies on it, were felt" in finding.message


def test_layers_are_given_as_the_difference_of_temperature_that_would_do_it():
    finding = intervals([0.99, 1.0, 1.01])["intervals-disagree"]
    assert "changes with depth" in finding.message
    assert "K colder at the bottom would do it" in finding.message


def test_a_mark_out_of_place_is_named_and_does_not_touch_the_result():
    moved = with_marks(["0.00(3) mm", "60.00(5) mm", "131.00(5) mm", "200.00(5) mm"])
    finding = intervals([1.0, 1.0, 1.0], moved)["intervals-disagree"]
    assert "mark 3 looks 1.00 mm too far down" in finding.message
    assert finding.effect is None
    assert "[tube.A]" in finding.remedy


def test_two_intervals_leave_the_cause_open():
    marks = ["0.00(3) mm", "100.00(5) mm", "200.00(5) mm"]
    bench = with_marks(marks)
    rows = np.ones((10, 1)) * 2.0 * np.array([1.01, 1.0])
    found, _ = found_in(table_of(rows, bench, marks=True), bench)
    message = found["intervals-disagree"].message
    assert "the upper interval gives 1.00 % more than the lower one; either the ball" in message
    assert "mark 2 is given 0.50 mm too far up" in message
    assert "a further mark would tell" in found["intervals-disagree"].remedy


# --- all ----------------------------------------------------------------------------------------


def test_exact_drops_have_no_finding_of_rounding():
    bench = bench_of(balls=3)
    table = pf.simulate(bench, viscosity=2.0, drops=12, exact=True, temperature=298.15)
    found, _ = found_in(table, bench)
    assert not {"outlier", "straggler", "time-trend", "balls-disagree"} & set(found)


def test_one_drop_and_no_drop_are_tested_for_nothing():
    one = pd.DataFrame({"ball": ["B1"], "time [s]": [14.9], "set": ["A"]})
    assert "outlier" not in found_in(one, bench_dict())[0]
    one["status"], one["note"] = "void", "bubble"
    assert "no-solution" in found_in(one, bench_dict())[0]


def test_one_step_of_a_coarse_clock_is_no_outlier():
    bench = bench_dict(timer={"T1": {"kind": "stopwatch", "resolution": "0.1 s"}})
    times = [14.9, 14.9, 14.9, 14.9, 15.0, 14.9, 14.9, 14.9]
    for with_timer in (bench, bench_dict(timer={})):
        assert "outlier" not in found_in(drops_table({"B1": times}), with_timer)[0]


def test_intervals_of_equal_readings_without_a_timer_are_compared():
    bench = bench_of(balls=1, marks=True, timer__T1=None)
    del bench["timer"]
    table = pd.DataFrame({
        "set": "A", "ball": "B1", "temperature [degC]": 25.0, "mark 1 [s]": 0.0,
        "mark 2 [s]": [15.0] * 6, "mark 3 [s]": [30.0] * 6,
    })  # fmt: skip
    assert "intervals-disagree" not in found_in(table, bench)[0]
    table["mark 2 [s]"] = 16.0
    assert "intervals-disagree" in found_in(table, bench)[0]
