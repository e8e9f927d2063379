"""What a run set's scatter stands for, and what it replaces."""

from __future__ import annotations

import math

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from support.benches import bench_dict, drops_table

# Times of a liquid of 1 Pa.s with some 0.2 % of scatter, found by trial.
TIMES = {"B1": [14.91, 14.93, 14.89], "B2": [9.78, 9.80, 9.76], "B3": [6.95, 6.96, 6.94]}


def budget(report: pf.Report, name: str = "A") -> dict:
    return {line.input: line for line in report[name].result.budget}


def test_shares_add_to_one_and_contributions_to_the_uncertainty():
    result = pf.reduce(drops_table(TIMES), bench_dict())["A"].result
    assert math.fsum(line.share for line in result.budget) == pytest.approx(1.0, abs=1e-12)
    total = math.fsum(line.contribution**2 for line in result.budget)
    assert math.sqrt(total) == pytest.approx(result.viscosity.u, rel=1e-12)
    shares = [line.share for line in result.budget]
    assert shares == sorted(shares, reverse=True)


def test_ball_means_where_balls_repeat():
    report = pf.reduce(drops_table(TIMES), bench_dict())
    result = report["A"].result
    means = np.array([ball.viscosity.value for ball in result.balls])
    scatter = budget(report)["set.A.scatter"]
    assert result.viscosity.value == pytest.approx(means.mean(), rel=1e-12)
    assert scatter.u == pytest.approx(means.std(ddof=1) / math.sqrt(3), rel=1e-9)
    assert (scatter.dof, scatter.scope, scatter.distribution) == (2, "ball", "t")


def test_observed_scatter_of_balls_contains_what_is_a_balls_own():
    lines = budget(pf.reduce(drops_table(TIMES), bench_dict()))
    assert "ball.B1.diameter" not in lines
    assert "timer.T1.per_drop" not in lines
    assert "gauge.G1.correction" in lines  # shared by all balls, so no scatter shows it


def test_one_balls_own_error_stays_as_its_scatter_cannot_show_it():
    lines = budget(pf.reduce(drops_table({"B1": TIMES["B1"]}), bench_dict()))
    assert lines["ball.B1.diameter"].scope == "ball"
    assert lines["set.A.scatter"].dof == 2
    assert lines["set.A.scatter"].scope == "drop"
    assert "timer.T1.per_drop" not in lines


def test_a_single_drop_uses_what_the_bench_declares():
    lines = budget(pf.reduce(drops_table({"B1": [15.05]}), bench_dict()))
    assert "set.A.scatter" not in lines
    drop = lines["timer.T1.per_drop"]
    viscosity = 1.0069  # by the reduction; only the size matters for a sensitivity of -eta/t
    assert drop.contribution == pytest.approx(viscosity / 15.05 * 0.003, rel=1e-2)
    assert lines["timer.T1.resolution"].u == pytest.approx(0.001 / math.sqrt(6))
    assert lines["thermometer.P1.per_reading"].scope == "drop"


def test_known_repeatability_stands_in_for_short_sets_only():
    bench = bench_dict(scatter={"relative": "0.30 %", "dof": 24})
    short = pf.reduce(drops_table({"B1": [15.05, 15.06]}), bench)
    line = budget(short)["scatter.relative"]
    value = short["A"].result.viscosity.value
    assert line.contribution == pytest.approx(0.003 * value / math.sqrt(2), rel=1e-9)
    assert line.dof == 24
    five = drops_table({"B1": [15.05, 15.06, 15.04, 15.09, 15.02]})
    assert "scatter.relative" in budget(pf.reduce(five, bench))
    six = drops_table({"B1": [15.05, 15.06, 15.04, 15.09, 15.02, 15.07]})
    assert "scatter.relative" not in budget(pf.reduce(six, bench))


def test_a_known_repeatability_gives_way_to_what_contradicts_it():
    """15.0 and 15.3 s differ by 2 %: with 0.3 % known, 4.7 of its standard deviations."""
    bench = bench_dict(scatter={"relative": "0.30 %", "dof": 24})
    lines = budget(pf.reduce(drops_table({"B1": [15.0, 15.3]}), bench))
    assert "scatter.relative" not in lines
    assert lines["set.A.scatter"].dof == 1
    near = budget(pf.reduce(drops_table({"B1": [15.0, 15.1]}), bench))
    assert "scatter.relative" in near


def test_balls_may_differ_by_their_own_errors_beside_a_known_repeatability():
    """1 % of a diameter is some 2 % of viscosity, which two balls' means then may be apart."""
    known = {"relative": "0.30 %", "dof": 24}
    times = {"B1": [15.0], "B2": [10.0]}  # 1.7 % apart
    precise = budget(pf.reduce(drops_table(times), bench_dict(scatter=known)))
    assert "scatter.relative" not in precise
    rough = bench_dict(scatter=known)
    for name in ("B1", "B2"):
        nominal = str(rough["ball"][name]["diameter"]).partition("(")[0]
        rough["ball"][name]["diameter"] = {"value": float(nominal), "unit": "mm", "u": 0.02}
    lines = budget(pf.reduce(drops_table(times), rough))
    assert "scatter.relative" in lines
    assert "ball.B1.diameter" in lines


def test_resolution_is_the_floor_of_equal_times():
    bench = bench_dict(timer__T1__resolution="0.1 s")
    line = budget(pf.reduce(drops_table({"B1": [15.0] * 5}), bench))["set.A.scatter"]
    value = 1.0
    expected = value / 15.0 * 0.1 / math.sqrt(6) / math.sqrt(5)
    assert line.u == pytest.approx(expected, rel=2e-2)
    assert line.distribution == "rectangular"


def test_every_drop_of_a_lot_is_its_own_ball():
    bench = bench_dict(
        ball={"lot": {"lot": True, "diameter": "2.000(1) mm", "spread": "0.5 um",
                      "density": "7.70(1) g/cm3"}}
    )  # fmt: skip
    table = drops_table({"lot": [15.05, 15.09, 15.02, 15.07]})
    report = pf.reduce(table, bench)
    result, lines = report["A"].result, budget(report)
    assert result.n_balls == 4
    assert lines["set.A.scatter"].dof == 3
    assert lines["ball.lot.diameter"].scope == "shared"  # the lot's mean is one error for all
    assert not any(f.code == "reused-balls" for f in result.findings)
    alone = budget(pf.reduce(table.iloc[:1], bench))
    assert "ball.lot.spread" in alone


def test_order_of_rows_changes_nothing():
    table = drops_table(TIMES)
    mixed = table.sample(frac=1.0, random_state=3)
    a, b = pf.reduce(table, bench_dict())["A"].result, pf.reduce(mixed, bench_dict())["A"].result
    assert a.viscosity.value == pytest.approx(b.viscosity.value, rel=1e-14)
    assert a.viscosity.u == pytest.approx(b.viscosity.u, rel=1e-12)


def test_shared_errors_correlate_run_sets_and_cancel_in_their_ratio():
    others = {ball: list(reversed(times)) for ball, times in TIMES.items()}
    others["B2"] = [1.004 * time for time in others["B2"]]
    table = pd.concat([drops_table(TIMES), drops_table(others, run_set="B")])
    report = pf.reduce(table, bench_dict())
    a, b = report["A"].viscosity, report["B"].viscosity
    correlation = report.correlation()[0, 1]
    assert 0.05 < correlation < 1
    ratio = a / b
    one, other = a.std_dev / a.n, b.std_dev / b.n
    variance = one**2 + other**2 - 2 * correlation * one * other
    assert ratio.std_dev / ratio.n == pytest.approx(math.sqrt(variance), rel=1e-6)


def test_drops_of_a_set_do_not_average_a_shared_error_away():
    """METROLOGY 0.1 [derived]: shared 0.6 % and per-drop 0.8 % give 0.651 % for ten drops."""
    rng = np.random.default_rng(5)
    noise = rng.standard_normal(10)
    noise = 0.008 * (noise - noise.mean()) / noise.std(ddof=1)
    bench = {
        "tube": {"A": {"bore": "5000 mm", "distance": "200.0(1.2) mm"}},
        "ball": {"X": {"lot": True, "diameter": "2 mm", "density": "7700 kg/m3"}},
        "liquid": {"oil": {"density": "970 kg/m3"}},
        "methods": {"model_uncertainty": "0 %"},
    }
    report = pf.reduce(drops_table({"X": list(1000 * (1 + noise))}), bench)
    viscosity = report["A"].result.viscosity
    assert viscosity.u / viscosity.value == pytest.approx(0.00651, abs=5e-6)
