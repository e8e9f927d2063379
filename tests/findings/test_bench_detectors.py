"""Findings of the bench sheet and of what was left out: dates, claims, sizes, short falls."""

from __future__ import annotations

from datetime import date

import numpy as np
import pytest

import plumbfall as pf
from plumbfall.findings.diameters import is_catalogue_size
from support.benches import bench_dict, drops_table

CLEAN = {"B1": [14.911, 14.915], "B2": [9.783, 9.786], "B3": [6.955, 6.957]}


def findings(times=CLEAN, table=None, **changes):
    table = drops_table(times) if table is None else table
    result = pf.reduce(table, bench_dict(**changes), draws=0)["A"].result
    return {finding.code: finding for finding in result.findings}, result


def dated(day: str):
    table = drops_table(CLEAN)
    table["started"] = [f"{day}T09:{10 + 5 * i}:00" for i in range(len(table))]
    return table


# --- dates ---------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("kind", "name", "what"),
    [
        ("timer", "T1", "timer T1"),
        ("thermometer", "P1", "thermometer P1"),
        ("gauge", "G1", "gauge G1"),
        ("balance", "W1", "balance W1"),
        ("tube", "A", "tube A"),
        ("ball", "B1", "ball B1"),
    ],
)
def test_a_calibration_is_overdue_from_the_day_after_it_was_due(kind, name, what):
    due = {f"{kind}__{name}__due": date(2026, 3, 1)}
    found, result = findings(table=dated("2026-03-02"), **due)
    overdue = found["calibration-overdue"]
    assert f"calibration of {what} was due on 2026-03-01, 1 day before" in overdue.message
    assert result.status == "valid-with-warnings"
    assert "calibration-overdue" not in findings(table=dated("2026-03-01"), **due)[0]


def test_equipment_that_was_not_used_is_not_overdue():
    found, _ = findings(table=dated("2026-03-02"), ball__B4__due=date(2020, 1, 1))
    assert "calibration-overdue" not in found


def test_without_dates_of_drops_the_day_of_issue_counts_and_never_the_clock():
    due = {"timer__T1__due": date(2020, 1, 1)}
    assert "calibration-overdue" not in findings(**due)[0]
    found, _ = findings(report={"issued": date(2026, 3, 9)}, **due)
    assert "on the day of the run, 2026-03-09" in found["calibration-overdue"].message


def test_an_expired_reference_liquid_is_found_on_the_day_after_its_last():
    reference = {
        "R": {
            "liquid": "oil",
            "viscosity": [{"temperature": "25 degC", "value": "1.0 ± 0.004 Pa.s, k=2"}],
            "expires": date(2026, 3, 1),
        }
    }
    found, _ = findings(table=dated("2026-03-02"), reference=reference)
    assert "R expired on 2026-03-01, 1 day before" in found["reference-expired"].message
    assert "reference-expired" not in findings(table=dated("2026-03-01"), reference=reference)[0]


# --- sizes and falls -----------------------------------------------------------------------------


@pytest.mark.parametrize("size", [0.794, 1.588, 2.0, 2.381, 2.5, 3.175, 4.762, 4.763, 6.35, 7.938])
def test_sizes_that_balls_are_sold_by(size):
    """Nominal diameters in mm: whole and half millimetres, 1/32, 1/16 ... inch (ISO 3290-1)."""
    assert is_catalogue_size(size)


@pytest.mark.parametrize("size", [0.8013, 2.0003, 2.3805, 2.382, 3.1762, 4.7613])
def test_measured_sizes_are_not_taken_for_sold_ones(size):
    assert not is_catalogue_size(size)


def test_a_catalogue_diameter_is_noted_with_what_the_lot_may_be_off():
    found, result = findings(ball__B1__diameter="2.000(1) mm")
    note = found["nominal-diameter"]
    assert note.severity == "note"
    assert result.status == "valid"
    # grade 10: 9 um (ISO 3290-1); the viscosity goes with the square of the diameter
    assert note.effect == pytest.approx(2 * 9e-6 / 2e-3)
    assert "B1 (2 mm)" in note.message


@pytest.mark.parametrize(
    "diameter",
    ["2.000 ± 0.009 mm, limits", {"readings": [1.999, 2.0, 2.001], "unit": "mm"}],
)
def test_a_lots_tolerance_or_readings_are_no_catalogue_entry(diameter):
    assert "nominal-diameter" not in findings(ball__B1__diameter=diameter)[0]


WATCH = {"timer": {"T1": {"kind": "stopwatch"}}}


def test_one_drop_by_stopwatch_must_fall_for_twenty_seconds():
    """Start and stop by hand scatter by 0.10 s: 0.5 % at 20 s (Am. J. Phys. 87, 110, 2019)."""
    found, _ = findings({"B1": [19.0]}, **WATCH)
    short = found["fall-time-short"]
    assert short.effect == pytest.approx(np.hypot(0.10, 0.03) / 19.0, rel=2e-3)
    assert "with falls as short as 19 s the timing alone leaves a standard uncertainty of" in (
        short.message
    )
    assert "fall-time-short" not in findings({"B1": [22.0]}, **WATCH)[0]


@pytest.mark.parametrize(("time", "short"), [(8.5, True), (10.5, False)])
def test_more_drops_average_the_hand_but_not_the_bias(time, short):
    found, _ = findings({"B1": [time] * 8}, **WATCH)
    assert ("fall-time-short" in found) is short
    assert "fall-time-short" in findings({"B1": [5.0] * 100}, **WATCH)[0]


def test_what_timing_may_cost_can_be_set():
    assert (
        "fall-time-short"
        not in findings({"B1": [19.0]}, limits={"timing_effect": 0.01}, **WATCH)[0]
    )


# --- claims --------------------------------------------------------------------------------------


def exact_bench(u: str):
    """Every input all but exact; the drag law has the standard uncertainty given."""
    changes = {"methods": {"model_uncertainty": u}, "site": {"gravity": "9.8123(1) m/s2"}}
    changes["thermometer"] = {"P1": {"correction": "0.000(1) K", "per_reading": "0.001 K"}}
    changes["gauge__G1__correction"] = "0.00(1) um"
    changes["tube__A__bore"] = "50.000(1) mm"
    changes["tube__A__marks"] = ["0.000(1) mm", "200.000(1) mm"]
    changes["tube__A__tilt"] = "0.00(1) deg"
    changes["liquid__oil__density"] = "970.20(1) kg/m3"
    changes["material__steel__density"] = "7.70000(1) g/cm3"
    changes["timer__T1__bias"] = "0.0000(1) s"
    return changes


def test_less_than_national_institutes_reach_is_not_believed():
    """CCM.V-K1: relative standard uncertainties of 0.04 % and more at 1300 mm2/s."""
    times = {"B1": [14.911, 14.913, 14.910, 14.912, 14.914, 14.911]}
    found, _ = findings(times, **exact_bench("0.005 %"))
    claim = found["uncertainty-implausible"]
    assert claim.statistic < 4e-4
    assert "national institutes" in claim.message
    assert "uncertainty-implausible" not in findings(times, **exact_bench("0.06 %"))[0]


def test_a_hand_on_a_stopwatch_is_not_believed_to_be_a_light_gate():
    times = {"B1": [14.91, 14.92, 14.91, 14.92, 14.90, 14.91, 14.92, 14.91]}
    watch = {"kind": "stopwatch", "per_drop": "0.005 s", "bias": "0.000(1) s"}
    changes = exact_bench("0.05 %")
    del changes["timer__T1__bias"]
    found, _ = findings(times, timer={"T1": watch}, **changes)
    assert "a hand on a stopwatch" in found["uncertainty-implausible"].message
    usual = findings(times, timer={"T1": {"kind": "stopwatch"}}, **changes)[0]
    assert "uncertainty-implausible" not in usual


# --- left out ------------------------------------------------------------------------------------


def test_leaving_out_one_drop_that_moves_the_result_is_warned_of():
    table = drops_table({"B1": [14.91, 15.03, 14.8, 14.92, 14.95, 14.71, 15.3]})
    everything = pf.reduce(table, bench_dict(), draws=0)["A"].result.viscosity.value
    table["status"], table["note"] = [""] * 6 + ["void"], [""] * 6 + ["bubble"]
    found, result = findings(table=table)
    warned = found["many-excluded"]
    assert warned.effect == pytest.approx(everything / result.viscosity.value - 1, rel=1e-3)
    assert "1 of 7 drops (14 %) is void or excluded; with it the viscosity would be" in (
        warned.message
    )
    table.loc[6, "time [s]"] = 14.93
    assert "many-excluded" not in findings(table=table)[0]


def test_a_blunder_with_a_reason_may_be_left_out():
    """Grubbs' test would have called it an outlier: that is no choice of what fits."""
    table = drops_table({"B1": [14.91, 14.93, 14.9, 14.92, 14.95, 14.91, 17.25]})
    table["status"], table["note"] = [""] * 6 + ["void"], [""] * 6 + ["bubble"]
    found, result = findings(table=table)
    assert "many-excluded" not in found
    assert result.status == "valid"


@pytest.mark.parametrize("lot", [False, True])
def test_what_left_out_drops_would_do_allows_for_balls_and_temperature(lot):
    changes = {"bench__reference_temperature": "25 degC"}
    if lot:
        changes |= {f"ball__B{i}__lot": True for i in (1, 2, 3)}
    times = {"B1": [14.91, 14.99, 14.95, 15.2], "B2": [9.78, 9.79, 9.80], "B3": [6.96, 6.97]}
    table = drops_table(times)
    table["temperature [degC]"] = 25 + 0.05 * np.arange(9)
    changes["limits"] = {"excluded_effect": 0.01}
    whole = pf.reduce(table, bench_dict(**changes), draws=0)[
        "A"
    ].result.viscosity_at_reference.value
    table["status"], table["note"] = "", "bubble"
    table.loc[3, "status"] = "void"
    found, result = findings(table=table, **changes)
    moved = whole / result.viscosity_at_reference.value - 1
    assert found["many-excluded"].effect == pytest.approx(moved, rel=2e-3)
