"""Balls taken for other balls, planted in invented run sets."""

from __future__ import annotations

import numpy as np
import pytest

import plumbfall as pf
from findings.planted import GATE, STOPWATCH, findings_of, first, share_with
from support.benches import bench_dict, drops_table, exact_time

CODE = "swapped-ball-suspected"
BALLS = ["B1", "B2", "B3", "B4"]


def relabel(**names):
    """Return a plant that gives drops, counted from 1, other ball names."""

    def plant(table, rng):
        for number, name in names.items():
            table.loc[int(number[1:]) - 1, "ball"] = name

    return plant


@pytest.mark.parametrize("timer", [STOPWATCH, GATE])
def test_one_drop_of_another_ball_is_found_and_named(timer):
    found = findings_of(relabel(d3="B1"), timer=timer, balls=["B1", "B1", "B2"] * 4, drops=12)
    assert share_with(found, CODE) >= 0.9
    one = first(found, CODE)
    assert one.drops == (3,)
    assert "drop 3 of ball B1 looks like ball B2" in one.message
    assert "correct the ball column" in one.remedy


def test_a_ball_of_the_bench_that_no_row_names_is_found():
    found = findings_of(relabel(d5="B1"), balls=["B1"] * 4 + ["B3"] + ["B1"] * 5, drops=10)
    assert share_with(found, CODE) >= 0.9
    assert "drop 5 of ball B1 looks like ball B3" in first(found, CODE).message


@pytest.mark.parametrize("timer", [STOPWATCH, GATE])
def test_two_drops_with_each_others_ball_are_found(timer):
    found = findings_of(relabel(d1="B2", d2="B1"), timer=timer, balls=["B1", "B2"], drops=10)
    assert share_with(found, CODE) >= 0.9
    one = first(found, CODE)
    assert one.drops == (1, 2)
    assert "drops 1 and 2 look like each other's balls, B2 and B1" in one.message


@pytest.mark.parametrize("timer", [STOPWATCH, GATE])
def test_balls_exchanged_throughout_are_found(timer):
    def plant(table, rng):
        table["ball"] = table["ball"].replace({"B1": "B2", "B2": "B1"})

    found = findings_of(plant, timer=timer, balls=["B1", "B2", "B3"], drops=12)
    assert share_with(found, CODE) >= 0.9
    assert "balls B1 and B2 look exchanged" in first(found, CODE).message


def test_a_ball_that_is_another_throughout_is_found():
    def plant(table, rng):
        table["ball"] = table["ball"].replace({"B3": "B4"})

    found = findings_of(plant, balls=["B1", "B2", "B3"], drops=12)
    assert share_with(found, CODE) >= 0.9
    assert "ball B4 looks like ball B3" in first(found, CODE).message


def test_of_two_balls_either_may_be_the_other():
    def plant(table, rng):
        table["ball"] = table["ball"].replace({"B2": "B1"})
        table.loc[:3, "ball"] = "B2"

    found = findings_of(plant, balls=["B2"], drops=8)
    assert share_with(found, CODE) >= 0.9
    message = first(found, CODE).message
    assert "ball B2 looks like ball B1" in message
    assert "ball B1 looks like ball B2" in message


def test_the_effect_is_that_of_correcting_the_ball_column():
    times = {"B1": [14.91, 14.93, 14.92], "B2": [9.78, 9.80, 9.79, 14.92], "B3": [6.95, 6.96]}
    table = drops_table(times)
    wrong = pf.reduce(table, bench_dict(), draws=0)["A"].result
    (found,) = (one for one in wrong.findings if one.code == CODE)
    assert found.drops == (7,)
    table.loc[6, "ball"] = "B1"
    right = pf.reduce(table, bench_dict(), draws=0)["A"].result
    assert found.effect == pytest.approx(
        right.viscosity.value / wrong.viscosity.value - 1, abs=2e-4
    )
    assert CODE not in {one.code for one in right.findings}


def test_the_ratio_is_that_of_weight_and_drag_without_inertia():
    """Stokes with Faxen's walls (1922): (density difference) d^2 over the drag, by hand."""
    common = {"liquid_density": 970.2, "bore": 0.05, "distance": 0.2, "gravity": 9.8123}
    b1 = {"diameter": 2.0005e-3, "density": 7700.0, **common}
    b2 = {"diameter": 2.5003e-3, "density": 7690.0, **common}
    times = {"B1": [exact_time(viscosity=5.0, **b1)] * 5, "B2": [exact_time(viscosity=5.0, **b2)]}
    times["B1"] = [time * (1 + 1e-4 * k) for k, time in enumerate(times["B1"])]
    table = drops_table(times)
    table.loc[5, "ball"] = "B1"
    found = pf.reduce(table, bench_dict(), draws=0)["A"].result.findings
    (one,) = (one for one in found if one.code == CODE)

    def walls(ratio):
        return 1 / (1 - 2.104 * ratio + 2.09 * ratio**3 - 0.95 * ratio**5)

    pull = [(b["density"] - 970.2) * b["diameter"] ** 2 / walls(b["diameter"] / 0.05)
            for b in (b1, b2)]  # fmt: skip
    assert one.statistic == pytest.approx(pull[0] / pull[1], rel=2e-3)


@pytest.mark.parametrize(
    ("timer", "drops"), [(STOPWATCH, 8), (GATE, 8), (GATE, 20), (STOPWATCH, 4)]
)
def test_clean_sets_stay_quiet(timer, drops):
    found = findings_of(timer=timer, balls=BALLS[: 1 + drops // 6], drops=drops, n_sets=50)
    for code in (CODE, "radius-as-diameter-suspected", "unit-slip-suspected"):
        assert share_with(found, code) <= 0.02


def test_a_bubble_is_not_called_another_ball():
    def plant(table, rng):
        table.loc[2, "time [s]"] = round(table.loc[2, "time [s]"] * 1.08, 2)

    found = findings_of(plant, balls=["B1", "B2"], drops=10)
    assert share_with(found, "outlier") >= 0.9
    assert share_with(found, CODE) <= 0.02


def test_balls_of_nearly_one_size_are_not_tried_for_each_other():
    changes = {"ball__B5": {"diameter": "2.0103(2) mm", "material": "steel", "gauge": "G1"}}
    found = findings_of(
        relabel(d3="B1"), changes=changes, balls=["B1", "B1", "B5"] * 3, drops=9, timer=GATE
    )
    assert share_with(found, CODE) == 0


# --- slips of a diameter -------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("written", "code", "severity", "says"),
    [
        ("1.25005(20) mm", "radius-as-diameter-suspected", "error", "2 times as large"),
        ("25.001(2) mm", "unit-slip-suspected", "warning", "0.1 times as large"),
        ("0.25001(2) mm", "unit-slip-suspected", "warning", "10 times as large"),
    ],
)
def test_a_slip_in_one_balls_diameter_is_found_by_the_factor_that_mends_it(
    written, code, severity, says
):
    found = findings_of(
        balls=["B1", "B2", "B3"], drops=9, viscosity=5.0, read_with={"ball__B2__diameter": written}
    )
    assert share_with(found, code) >= 0.9
    one = first(found, code)
    assert one.severity == severity
    assert says in one.message
    assert "check [ball.B2] diameter" in one.remedy
    assert np.isfinite(one.p_value)
