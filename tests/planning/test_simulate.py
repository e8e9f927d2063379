"""Invented timings: they obey the measurement equation, and err as the bench sheet says."""

from __future__ import annotations

import math

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from plumbfall.errors import InputError, PhysicsRangeError
from plumbfall.planning.simulation import simulate_sets
from support.benches import bench_dict, exact_time

THREE_MARKS = ["0 mm", "90.00(3) mm", "200.00(5) mm"]


def reduced(table: pd.DataFrame, bench: pf.Bench):
    return pf.reduce(table, bench, draws=0)


def of_drops(table: pd.DataFrame, bench: pf.Bench) -> np.ndarray:
    """Viscosity of each drop at its own temperature."""
    report = reduced(table, bench)
    return np.array([drop["viscosity_Pa_s"] for drop in report.to_dict()["run_sets"][0]["drops"]])


# --- it closes ----------------------------------------------------------------------------------


@pytest.mark.parametrize("marks", [False, True])
@pytest.mark.parametrize("viscosity", [0.12, 0.85, 14.0])
def test_without_errors_the_reduction_returns_the_viscosity(viscosity, marks):
    bench = pf.read_bench(
        bench_dict(tube__A__marks=THREE_MARKS, tube__A__release_offset="2.0(5) mm")
    )
    table = pf.simulate(bench, viscosity=viscosity, drops=8, marks=marks, exact=True)
    assert of_drops(table, bench) == pytest.approx(np.full(8, viscosity), rel=1e-9)


def test_it_closes_near_the_ends_and_during_the_run_in():
    bench = pf.read_bench(
        bench_dict(
            tube__A__surface_above="24(1) mm",
            tube__A__bottom_below="9(1) mm",
            tube__A__release_above="12(1) mm",
        )
    )
    table = pf.simulate(bench, viscosity=0.2, balls=["B1", "B4"], exact=True)
    assert of_drops(table, bench) == pytest.approx(np.full(8, 0.2), rel=1e-9)
    result = reduced(table, bench).to_dict()["run_sets"][0]
    factors = {one["name"]: one["factor"] for one in result["corrections"]}
    assert factors["ends"] > 1.0005  # so that they were in it
    assert factors["run-in"] > 1.001


def test_it_closes_with_laws_chosen_by_name():
    bench = pf.read_bench(bench_dict(methods={"drag": "product faxen schiller-naumann"}))
    table = pf.simulate(bench, viscosity=0.5, balls="B2", exact=True)
    assert of_drops(table, bench) == pytest.approx(np.full(8, 0.5), rel=1e-9)


def test_every_drop_may_have_a_viscosity_and_a_temperature_of_its_own():
    bench = pf.read_bench(bench_dict())
    eta, warm = np.linspace(0.8, 0.9, 8), 298.15 + np.linspace(0, 2, 8)
    table = pf.simulate(bench, viscosity=eta, temperature=298.15, temperatures=warm, exact=True)
    assert of_drops(table, bench) == pytest.approx(eta * np.exp(-0.02 * (warm - 298.15)), rel=1e-9)


def test_times_are_those_of_the_force_balance_solved_by_bisection():
    bench = pf.read_bench(
        {
            "site": {"gravity": "9.81 m/s2"},
            "tube": {"A": {"bore": "50 mm", "distance": "200 mm"}},
            "ball": {"B": {"diameter": "3 mm", "density": "7700 kg/m3"}},
            "liquid": {"oil": {"density": "970 kg/m3"}},
        }
    )
    table = pf.simulate(bench, viscosity=0.3, drops=1, exact=True)
    expected = exact_time(
        viscosity=0.3, diameter=3e-3, density=7700, liquid_density=970, bore=0.05, distance=0.2,
        gravity=9.81,
    )  # fmt: skip
    assert table["time [s]"][0] == pytest.approx(expected, rel=1e-9)


# --- every error source --------------------------------------------------------------------------


def test_a_clock_errs_by_its_scatter_and_shows_its_steps():
    bench = pf.read_bench(
        bench_dict(timer__T1={"per_drop": "0.10 s", "resolution": "0.01 s", "bias": "0 s"})
    )
    made = simulate_sets(bench, viscosity=0.85, balls="B1", drops=400, scatter=0.0)
    times = made.clock[0, :, 0]
    # sd of 400 is known to 3.5 %; the clock's two roundings add 0.01/sqrt(6) (JCGM 101, 6.4.5)
    assert times.std(ddof=1) == pytest.approx(math.hypot(0.10, 0.01 / math.sqrt(6)), rel=0.12)
    assert np.abs(times * 100 - np.round(times * 100)).max() < 1e-9


def test_marks_share_their_timing_errors():
    bench = pf.read_bench(
        bench_dict(tube__A__marks=THREE_MARKS, timer__T1={"per_drop": "0.10 s", "bias": "0 s"})
    )
    table = pf.simulate(bench, viscosity=2.0, balls="B1", drops=2000, marks=True)
    first, second, third = (table[f"mark {number} [s]"].to_numpy() for number in (1, 2, 3))
    upper, lower = second - first, third - second
    # both intervals carry the middle mark's error, with opposite signs: correlation -1/2
    assert np.corrcoef(upper, lower)[0, 1] == pytest.approx(-0.5, abs=0.08)
    assert (third - first).std(ddof=1) == pytest.approx(0.10, rel=0.08)


def test_a_thermometer_errs_by_its_correction_and_its_reading():
    bench = pf.read_bench(bench_dict())
    made = simulate_sets(bench, viscosity=0.85, drops=5, sets=4000, temperature="25 degC")
    off = made.reading - 298.15
    # the readings of one set share the correction, 0.03(2) K; each has 0.01 K of its own
    assert off.mean() == pytest.approx(-0.03, abs=0.002)
    assert off.mean(axis=0).std() == pytest.approx(math.hypot(0.02, 0.01 / math.sqrt(5)), rel=0.05)
    assert off.std(axis=0, ddof=1).mean() == pytest.approx(0.94 * 0.01, rel=0.05)  # c4(5) = 0.940


def test_every_entry_of_the_bench_is_drawn_once_for_a_run_set():
    bench = pf.read_bench(bench_dict())
    made = simulate_sets(bench, viscosity=0.85, sets=4000)
    names = [estimate.name for estimate in made.arrangement.inputs.estimates]
    for name in (
        "tube.A.bore", "tube.A.marks[1]", "gauge.G1.correction", "balance.W1.correction",
        "thermometer.P1.correction", "liquid.oil.density", "liquid.oil.viscosity_slope",
        "site.gravity", "timer.T1.bias", "timer.T1.rate", "ball.B1.diameter", "ball.B3.mass",
        "material.steel.density", "tube.A.tilt", "tube.A.release_above",
        "methods.model_uncertainty",
    ):  # fmt: skip
        estimate = made.arrangement.inputs.estimates[names.index(name)]
        drawn = made.entries[names.index(name)]
        assert drawn.mean() == pytest.approx(estimate.value, abs=4 * estimate.u / math.sqrt(4000))
        assert drawn.std() == pytest.approx(estimate.u, rel=0.06)


def test_balls_of_a_lot_differ_by_its_spread():
    lot = {"diameter": "2.000 mm", "material": "steel", "lot": True, "spread": "8 um"}
    still = {"per_drop": "0 s", "bias": "0 s", "rate": "0 ppm"}
    bench = pf.read_bench(bench_dict(ball={"L": lot}, timer__T1=still))
    made = simulate_sets(bench, viscosity=0.85, drops=2000, temperature=298.15)
    times = made.clock[0, :, 0]
    # ln t = -(2 - w) ln d: the walls' power w is 0.087 at diameter ratio 0.04 (exact wall factor)
    assert times.std() / times.mean() == pytest.approx((2 - 0.087) * 8e-6 / 2e-3, rel=0.08)


def test_known_scatter_of_the_bench_is_that_of_the_drops():
    bench = pf.read_bench(bench_dict(scatter={"relative": "1.0 %", "dof": 24}))
    made = simulate_sets(bench, viscosity=0.85, balls="B1", drops=3000)
    times = made.clock[0, :, 0]
    assert times.std() / times.mean() == pytest.approx(0.01, rel=0.06)


# --- what is shared, and what is not -------------------------------------------------------------


def test_run_sets_of_one_seed_share_what_is_true_of_the_bench():
    bench = pf.read_bench(bench_dict())
    one = pf.simulate(bench, viscosity=0.85, run_set="A", seed=3)
    two = pf.simulate(bench, viscosity=0.5, run_set="B", seed=3, balls=["B1", "B2"])
    shared = one.attrs["true_values"].keys() & two.attrs["true_values"].keys()
    assert "tube.A.bore" in shared
    assert all(one.attrs["true_values"][key] == two.attrs["true_values"][key] for key in shared)
    other = pf.simulate(bench, viscosity=0.85, run_set="A", seed=4, bench_seed=3)
    assert other.attrs["true_values"] == one.attrs["true_values"]
    assert (other["time [s]"] != one["time [s]"]).any()
    both = reduced(pd.concat([one, two]), bench)
    assert both.names == ("A", "B")


def test_a_seed_gives_the_same_timings_again():
    bench = pf.read_bench(bench_dict())
    tables = [pf.simulate(bench, viscosity=0.85, seed=seed) for seed in (5, 5, 6)]
    pd.testing.assert_frame_equal(tables[0], tables[1])
    assert (tables[0]["time [s]"] != tables[2]["time [s]"]).all()


def test_every_row_says_that_it_is_invented(tmp_path):
    table = pf.simulate(bench_dict(), viscosity="850 mPa.s")
    assert table.attrs["invented"]
    table.to_csv(tmp_path / "drops.csv", index=False)
    again = pf.read_timings(tmp_path / "drops.csv", pf.read_bench(bench_dict())).table
    assert set(again["note"]) == {"invented"}


def test_a_run_set_without_readings_has_its_temperature_from_the_bench_sheet():
    bench = pf.read_bench(bench_dict(set={"A": {"temperature": "23.00(5) degC"}}))
    table = pf.simulate(bench, viscosity=0.85, exact=True)
    assert "temperature [degC]" not in table
    assert of_drops(table, bench) == pytest.approx(np.full(8, 0.85), rel=1e-9)


def test_equipment_is_named_where_the_bench_has_several():
    tubes = bench_dict()["tube"]
    tubes["B"] = tubes["A"] | {"bore": "40.00(2) mm"}
    bench = pf.read_bench(bench_dict(tube=tubes))
    table = pf.simulate(bench, viscosity=0.85, tube="B", exact=True)
    assert set(table["tube"]) == {"B"}
    assert of_drops(table, bench) == pytest.approx(np.full(8, 0.85), rel=1e-9)
    with pytest.raises(InputError, match="nothing says which tube"):
        pf.simulate(bench, viscosity=0.85)


# --- the bounds that the reduction claims --------------------------------------------------------


def test_bounds_cover_the_truth_as_often_as_they_claim():
    lots = {
        name: {"diameter": size, "material": "steel", "lot": True, "spread": "1 um"}
        for name, size in (("L1", "2.0003(10) mm"), ("L2", "3.0001(10) mm"))
    }
    bench = pf.read_bench(bench_dict(ball=lots, limits={"exclude_outliers": False}))
    sets = 4000
    for ball, viscosity in (("L1", 0.85), ("L2", 0.4), ("L2", 6.0)):
        made = simulate_sets(bench, viscosity=viscosity, balls=ball, sets=sets, drops=6)
        table = reduced(made.table(), bench).table()
        truth = 1e3 * made.viscosity_at(table["temperature_degC"].to_numpy() + 273.15)
        covered = (table["low_mPa_s"] <= truth) & (truth <= table["high_mPa_s"])
        # 0.95 within 4 standard deviations of a count, from below; more is what bounds that
        # round up the small samples may give
        least = 0.95 - 4 * math.sqrt(0.95 * 0.05 / sets)
        assert least < covered.mean() < 0.985


# --- what it refuses ------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("wrong", "said"),
    [
        ({"viscosity": -1.0}, "not above zero"),
        ({"viscosity": [0.8, 0.9]}, "shape"),
        ({"drops": 0}, "none"),
        ({"balls": "B9"}, "ball 'B9' is not on the bench sheet"),
        ({"seed": -1}, "seed"),
        ({"scatter": 2.0}, "scatter"),
    ],
)
def test_what_does_not_fit_the_bench_is_refused(wrong, said):
    with pytest.raises(InputError, match=said):
        pf.simulate(bench_dict(), **({"viscosity": 0.85} | wrong))


def test_balls_that_cannot_measure_the_liquid_are_refused():
    with pytest.raises(PhysicsRangeError, match=r"ball B4 falls at a Reynolds number above 100"):
        pf.simulate(bench_dict(), viscosity=1e-3, balls="B4")
    light = bench_dict(ball={"P": {"diameter": "3 mm", "density": "0.93 g/cm3"}})
    with pytest.raises(PhysicsRangeError, match="is not denser than the liquid"):
        pf.simulate(light, viscosity=0.85)
