"""Calibrated tubes in simulations and plans: their constant stands for drag and geometry."""

from __future__ import annotations

import numpy as np
import pytest

import plumbfall as pf
from plumbfall.planning.simulation import simulate_sets
from support.benches import bench_dict

TUBES = {
    "C": {"kind": "calibrated", "constant": "k"},
    "A": bench_dict()["tube"]["A"],
}


@pytest.fixture
def bench() -> pf.Bench:
    return pf.read_bench(
        bench_dict(
            tube=TUBES,
            constant={"k": {"tube": "C", "ball": "B1", "value": "2.00(1)e-8 m2/s2"}},
            timer={"T1": {"kind": "stopwatch"}},
        )
    )


def test_the_time_is_viscosity_over_constant_and_density_difference(bench):
    # eta = K (rho_b - rho_f) t, ISO 12058-1 (from memory), worked by hand at 25 degC: densities
    # 7.7 and 0.9702 g/cm3, the ball's 5 K of expansion 0.016 % less
    table = pf.simulate(bench, viscosity=0.1, tube="C", balls="B1", exact=True)
    true_time = 0.1 / (2e-8 * (7700 * (1 - 3 * 10.4e-6 * 5) - 970.2))
    assert table["time [s]"][0] == pytest.approx(true_time, rel=1e-5)
    found = pf.reduce(table, bench, draws=0)["A"].viscosity
    assert found.nominal_value == pytest.approx(0.1, rel=1e-9)


def test_bounds_cover_the_truth(bench):
    made = simulate_sets(bench, viscosity=0.1, tube="C", balls="B1", sets=2000, drops=6)
    table = pf.reduce(made.table(), bench, draws=0).table()
    truth = 1e3 * made.viscosity_at(table["temperature_degC"].to_numpy() + 273.15)
    covered = ((table["low_mPa_s"] <= truth) & (truth <= table["high_mPa_s"])).mean()
    assert 0.93 < covered < 0.98


def test_a_plan_compares_calibrated_and_plain_tubes(bench):
    planned = pf.plan(bench, viscosity=0.1, balls=["B1", "B2"], target="2 %")
    by_pair = {(one.tube, one.ball): one for one in planned.combinations}
    constant = by_pair["C", "B1"]
    assert constant.reynolds is None
    assert constant.suitable
    assert constant.dominant_input == "constant.k.value"
    # 0.5 % of the constant, and little else: U = 1.96 x 0.5 %
    assert constant.relative_expanded_uncertainty == pytest.approx(0.0098, rel=0.02)
    (reason,) = by_pair["C", "B2"].reasons
    assert reason.code == "constant-missing"
    assert not by_pair["A", "B1"].suitable
    made = simulate_sets(bench, viscosity=0.1, tube="C", balls="B1", sets=200)
    table = pf.reduce(made.table(), bench, draws=0).table()
    relative = table["expanded_uncertainty_mPa_s"] / table["viscosity_mPa_s"]
    assert np.median(relative) == pytest.approx(constant.relative_expanded_uncertainty, rel=0.05)
    assert "no tube constant" in planned.text()


def test_calibrated_tubes_without_any_constant_are_refused(bench):
    with pytest.raises(pf.InputError, match="no constant for the calibrated tube 'C'"):
        pf.plan(bench, viscosity=1.0, balls=["B2", "B3"], tubes="C")
