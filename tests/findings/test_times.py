"""Findings in the times themselves: scatter, steps, copies, minutes typed as decimals.

Each fault is planted in invented run sets, and clean ones must stay quiet.
"""

from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from findings.planted import GATE, STOPWATCH, findings_of, first, share_with
from plumbfall.findings.clock_steps import clock_steps
from support.benches import bench_dict, drops_table

TIME = "time [s]"
QUIET = {
    "scatter-large",
    "scatter-small",
    "resolution-coarse",
    "duplicate-rows",
    "minutes-as-decimals-suspected",
}


@pytest.mark.parametrize("timer", [STOPWATCH, GATE])
@pytest.mark.parametrize("drops", [3, 8, 20])
def test_clean_sets_stay_quiet(timer, drops):
    found = findings_of(timer=timer, drops=drops, balls=["B1", "B2"][: 1 + drops // 8])
    noisy = [one for findings in found for one in findings if one.code in QUIET]
    assert len(noisy) <= 2, noisy  # of 25 sets; five tests at 0.2 % each


# --- scatter -------------------------------------------------------------------------------------


def test_scatter_beyond_the_timers_is_found():
    def plant(table, rng):
        table[TIME] = (table[TIME] * (1 + 0.012 * rng.standard_normal(len(table)))).round(2)

    found = findings_of(plant, balls=["B1", "B2"], drops=10)
    assert share_with(found, "scatter-large") >= 0.9
    one = first(found, "scatter-large")
    assert one.p_value < 0.0025
    assert "times the 0.4" in one.message  # 0.10 s of some 24 s
    assert "off the axis" in one.remedy


def test_scatter_is_held_against_the_known_repeatability_where_there_is_one():
    def plant(table, rng):
        table[TIME] = (table[TIME] * (1 + 0.02 * rng.standard_normal(len(table)))).round(3)

    changes = {"scatter": {"relative": "0.30 %", "dof": 24}}
    found = findings_of(plant, timer=GATE, balls=["B1"], drops=10, changes=changes)
    assert share_with(found, "scatter-large") >= 0.9
    assert "known repeatability" in first(found, "scatter-large").message
    clean = findings_of(timer=GATE, balls=["B1"], drops=10, changes=changes)
    assert share_with(clean, "scatter-large") <= 0.04


def test_an_outlier_alone_is_not_called_scatter():
    def plant(table, rng):
        table.loc[3, TIME] = round(table.loc[3, TIME] * 1.06, 2)

    found = findings_of(plant, balls=["B1"], drops=10)
    assert share_with(found, "outlier") >= 0.9
    assert share_with(found, "scatter-large") <= 0.05


def test_times_too_good_for_a_hand_are_found():
    """Start and stop by hand scatter by 0.10 s (Am. J. Phys. 87, 110, 2019)."""

    def plant(table, rng):
        noise = 0.02 * rng.standard_normal(len(table))
        table[TIME] = (table[TIME].mean() + noise).round(2)

    found = findings_of(plant, balls=["B1"], drops=8)
    assert share_with(found, "scatter-small") >= 0.9
    assert "too good" in first(found, "scatter-small").message


def test_scatter_that_steps_may_hide_is_not_called_small():
    def plant(table, rng):
        table[TIME] = table[TIME].round(1)

    found = findings_of(plant, balls=["B1"], drops=3, n_sets=100)
    assert share_with(found, "scatter-small") <= 0.01


# --- steps ---------------------------------------------------------------------------------------


@pytest.mark.parametrize("step", [0.1, 0.2, 0.5, 1.0])
def test_steps_coarser_than_the_watch_are_found(step):
    def plant(table, rng):
        table[TIME] = (step * (table[TIME] / step).round()).round(2)

    found = findings_of(plant, drops=6, balls=["B1", "B2"])
    assert share_with(found, "resolution-coarse") >= 0.9
    one = first(found, "resolution-coarse")
    assert one.statistic == pytest.approx(step)
    assert f"multiples of {step:g} s (the timer reads 0.01 s)" in one.message
    assert "write down every digit" in one.remedy


def test_a_declared_step_is_no_news():
    def plant(table, rng):
        table[TIME] = table[TIME].round(1)

    timer = {"T1": {"kind": "stopwatch", "resolution": "0.1 s"}}
    assert share_with(findings_of(plant, timer=timer), "resolution-coarse") == 0


@pytest.mark.parametrize(
    ("times", "step"),
    [
        ([14.2, 14.6, 15.0], 0.2),
        ([14.25, 14.75, 15.5], 0.25),
        ([14.0, 15.0, 17.0], 1.0),
        ([14.21, 14.63, 15.0], 0.01),
        ([14.2103, 14.63, 15.0], 1e-4),
        ([14.21037, 14.63, 15.0], 0.0),
    ],
)
def test_the_step_is_the_largest_that_all_times_are_multiples_of(times, step):
    from plumbfall.bench.reader import read_bench
    from plumbfall.findings.limits import Limits
    from plumbfall.reduction.numbers import reduce_numbers, run_data

    bench = read_bench(bench_dict())
    sets = reduce_numbers(pf.read_timings(drops_table({"B1": times}), bench), bench)
    assert clock_steps(run_data(sets, Limits())).found == pytest.approx([step])


# --- copies --------------------------------------------------------------------------------------


def test_a_copied_block_is_found():
    def plant(table, rng):
        for name in (TIME, "temperature [degC]"):
            table.loc[4:, name] = table.loc[:3, name].to_numpy()

    found = findings_of(plant, drops=8, balls=["B1"])
    assert share_with(found, "duplicate-rows") >= 0.9
    one = first(found, "duplicate-rows")
    assert one.drops == (5, 6, 7, 8)
    assert "to the last digit" in one.message


def test_copied_blocks_are_found_where_all_temperatures_are_equal_too():
    def plant(table, rng):
        table["temperature [degC]"] = 25.0
        table.loc[4:, TIME] = table.loc[:3, TIME].to_numpy()

    assert share_with(findings_of(plant, drops=8, balls=["B1"]), "duplicate-rows") >= 0.9

    def equal(table, rng):
        table["temperature [degC]"] = 25.0

    clean = findings_of(equal, drops=20, balls=["B1"], n_sets=100)
    assert share_with(clean, "duplicate-rows") <= 0.01


def test_a_run_set_that_is_a_copy_of_another_is_found():
    tables = [
        pf.simulate(bench_dict(timer=STOPWATCH), viscosity=2.0, run_set=name, drops=5, seed=seed)
        for name, seed in (("one", 1), ("two", 2), ("three", 3))
    ]
    report = pf.reduce(pd.concat(tables), bench_dict(timer=STOPWATCH), draws=0)
    assert all("duplicate-rows" not in {f.code for f in one.result.findings} for one in report)
    tables[2][TIME] = tables[0][TIME].to_numpy()
    report = pf.reduce(pd.concat(tables), bench_dict(timer=STOPWATCH), draws=0)
    (found,) = (f for f in report["three"].result.findings if f.code == "duplicate-rows")
    assert "all 5 times are those of run set 'one'" in found.message
    assert "duplicate-rows" not in {f.code for f in report["one"].result.findings}


def test_one_ball_is_not_let_go_twice_at_one_moment():
    table = drops_table({"B1": [29.91, 29.83], "B2": [19.78, 19.86]})
    table["started"] = ["2026-03-02T09:10", "2026-03-02T09:20", "2026-03-02T09:20", "09:30"]
    assert "duplicate-rows" not in codes(table)
    table["started"] = ["2026-03-02T09:10", "2026-03-02T09:10", "2026-03-02T09:20", "09:30"]
    found = codes(table)["duplicate-rows"]
    assert found.drops == (2,)
    assert "same moment as an earlier drop of the same ball: drop 2" in found.message


@pytest.mark.parametrize("started", ["2026-03-02", "2026-03-02T09:10"])
def test_a_day_or_one_moment_for_the_whole_set_is_no_copy(started):
    table = drops_table({"B1": [29.91, 29.83], "B2": [19.78, 19.86]})
    table["started"] = started
    assert "duplicate-rows" not in codes(table)


def codes(table):
    result = pf.reduce(table, bench_dict(timer=STOPWATCH), draws=0)["A"].result
    return {finding.code: finding for finding in result.findings}


# --- minutes -------------------------------------------------------------------------------------


def test_minutes_and_seconds_typed_with_a_point_are_found():
    """1.58 and 2.01 for 1 min 58 s and 2 min 1 s: the ratio is 1.27, not 1.025."""

    def plant(table, rng):
        seconds = (120.0 + 3.0 * rng.standard_normal(len(table))).round()
        table[TIME] = seconds // 60 + (seconds % 60) / 100

    found = findings_of(plant, drops=10, balls=["B1"], viscosity=8.0)
    assert share_with(found, "minutes-as-decimals-suspected") >= 0.9
    one = first(found, "minutes-as-decimals-suspected")
    assert "write them with a colon" in one.remedy
    assert "read as seconds" in one.message


def test_minutes_and_seconds_in_a_column_of_minutes_are_found_too():
    times = [1.58, 2.01, 1.59, 2.02, 1.57, 2.00, 1.59, 2.01]
    table = drops_table({"B1": times}).rename(columns={TIME: "time [min]"})
    assert "read as minutes" in codes(table)["minutes-as-decimals-suspected"].message


def test_real_decimals_without_high_fractions_are_left_alone():
    rng = np.random.default_rng(5)
    quiet = 0
    for _ in range(100):
        times = 21.3 + np.clip(0.1 * rng.standard_normal(6), -0.29, 0.29)
        quiet += "minutes-as-decimals-suspected" not in codes(drops_table({"B1": times.round(2)}))
    assert quiet >= 99
