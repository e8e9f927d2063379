"""The analytic Jacobian against differences of the whole chain, for every input of the bench."""

from __future__ import annotations

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from plumbfall.bench.records import Bench
from plumbfall.reduction.drops import reduce_drops
from support.benches import bench_dict
from support.perturbed import perturbed

DROPS = pd.DataFrame(
    {
        "set": ["A"] * 8 + ["B"] * 4,
        "ball": ["B1", "B1", "B2", "B2", "B3", "B3", "B4", "B4", "B1", "B3", "B3", "B4"],
        "time [s]": [15.05, 15.08, 9.80, 9.79, 6.91, 6.92, 4.00, 4.01, 3.01, 1.45, 1.46, 0.95],
        "temperature [degC]": [25.0, 25.4, 24.9, 25.1, 26.0, 25.2, 25.0, 24.8, 40.0, 40.2, 41, 40],
    }
)


SITE = {"latitude": "52.1(1) deg", "elevation": "400(20) m"}
NEAR = {"tube__A__surface_above": "24(1) mm", "tube__A__bottom_below": "15(1) mm"}
NEAR |= {"tube__A__release_above": "20(1) mm", "tube__A__expansion": None}


@pytest.mark.parametrize(
    "changes",
    [
        {"bench__reference_temperature": "20 degC"},
        {"site": SITE, "tube__A__release_offset": "2.0(5) mm"},
        NEAR,
        {**NEAR, "tube__A__surface": "lid"},
        {**NEAR, "methods": {"ends": "classical"}},
        {"methods": {"drag": "additive"}},
        {"methods": {"drag": "product haberman-sayre brown-lawler"}},
    ],
    ids=lambda changes: ", ".join(changes)[:40],
)
def test_every_sensitivity_agrees_with_differences(changes):
    changes = dict(changes)
    # The run-in is a given number in the Jacobian, which has a test of its own.
    methods = {"run_in": "none", **changes.pop("methods", {})}
    bench = pf.read_bench(bench_dict(**changes, methods=methods))
    timings = pf.read_timings(DROPS, bench)
    reduced = reduce_drops(timings, bench)
    jacobian = reduced.sets.jacobian
    checked = 0
    set_temperature = reduced.sets.columns.set_temperature
    slope = bench.liquids["oil"].viscosity_slope.value

    def viscosities(moved: Bench) -> np.ndarray:
        again = reduce_drops(timings, moved).sets
        # The value holds at the temperature first reported, whatever the thermometer's error was.
        shift = again.columns.set_temperature - set_temperature
        moved_slope = moved.liquids["oil"].viscosity_slope.value
        return again.scatter.mean * np.exp(-moved_slope * shift)

    for column, estimate in enumerate(reduced.sets.inputs.estimates):
        if estimate.name == "methods.model_uncertainty":
            continue
        step = max(abs(estimate.value) * 1e-5, estimate.u * 1e-3)
        up = viscosities(perturbed(bench, estimate.name, step))
        down = viscosities(perturbed(bench, estimate.name, -step))
        differences = (up - down) / (2 * step)
        # Individual ball inputs are left out of the Jacobian's rows: they are in the scatter.
        individual = reduced.sets.inputs.individual[column]
        analytic = jacobian.matrix[:, [column]].toarray().ravel()
        if individual:
            assert (analytic == 0).all()
            analytic = own_sums(reduced, column)
        scale = np.abs(differences) + 1e-9 * reduced.sets.scatter.mean / max(step, 1e-12) * 1e-3
        np.testing.assert_allclose(analytic / scale, differences / scale, rtol=2e-6, atol=2e-6)
        checked += 1
    assert checked >= 19
    assert slope < 0


def own_sums(reduced, column: int) -> np.ndarray:
    """Sum the sensitivities to an input over each run set, contained in the scatter or not."""
    sets = reduced.sets
    total = np.zeros(len(reduced.names))
    for role, sums in sets.sums.first.items():
        here = sets.inputs.roles[role].entry == column
        np.add.at(total, sets.selection.cells.run_set[here], sums[here])
    return total


def test_an_offset_from_the_axis_lowers_the_drag_as_happel_and_brenner_say():
    """Happel and Brenner 1965, chapter 7: f = 2.10444 - 0.6977 beta^2 near the axis."""
    plain = pf.reduce(DROPS.iloc[:2], bench_dict())["A"].result.viscosity.value
    moved = bench_dict(tube__A__release_offset="0.50(1) mm")
    viscosity = pf.reduce(DROPS.iloc[:2], moved)["A"].result.viscosity.value
    ratio, beta = 2.0005 / 50, 0.02
    expected = (1 - (2.10444 - 0.6977 * beta**2) * ratio) / (1 - 2.10444 * ratio)
    assert viscosity / plain - 1 == pytest.approx(expected - 1, rel=2e-3)


def test_an_uncertain_offset_about_zero_counts_by_its_square():
    """JCGM 100:2008, note to 5.1.2: the variance of a squared normal input is f''^2 u^4 / 2."""
    result = pf.reduce(DROPS.iloc[:2], bench_dict(tube__A__release_offset="0.0(30) mm"))["A"].result
    line = next(line for line in result.budget if line.input == "tube.A.release_offset")
    ratio, beta = 2.0005 / 50, 3.0 / 25
    curvature = 2 * 0.6977 * ratio / (1 - 2.10444 * ratio)
    expected = curvature * beta**2 / 2**0.5 * result.viscosity.value
    assert line.contribution == pytest.approx(expected, rel=5e-3)


# Thin liquid, heavy ball, short run-in: the timing is some 1 % too long.
THIN = {
    "tube__A__release_above": "6(1) mm",
    "ball__B1": {"diameter": "3.000(1) mm", "density": "7.80(1) g/cm3"},
    "tube__A__marks": ["0 mm", "100.00(5) mm"],
    "tube__A__tilt": None,
}


def test_sensitivity_to_the_height_of_the_release():
    table = DROPS.iloc[:1].assign(**{"time [s]": 0.53})

    def viscosity(height: float) -> float:
        bench = bench_dict(**{**THIN, "tube__A__release_above": f"{height}(1) mm"})
        return pf.reduce(table, bench)["A"].result.viscosity.value

    result = pf.reduce(table, bench_dict(**THIN))["A"].result
    run_in = next(c.factor for c in result.corrections if c.name == "run-in")
    assert run_in > 1.005
    line = next(line for line in result.budget if line.input == "tube.A.release_above")
    difference = (viscosity(6.01) - viscosity(5.99)) / 0.02e-3
    assert line.sensitivity == pytest.approx(difference, rel=5 * (run_in - 1))


def test_other_sensitivities_miss_no_more_than_some_times_the_run_in():
    table = DROPS.iloc[:1].assign(**{"time [s]": 0.53})
    bench = pf.read_bench(bench_dict(**THIN))
    timings = pf.read_timings(table, bench)
    reduced = reduce_drops(timings, bench)
    run_in = reduced.sets.columns.run_in[0] - 1
    for column, estimate in enumerate(reduced.sets.inputs.estimates):
        if estimate.name == "methods.model_uncertainty" or not estimate.u:
            continue
        step = max(abs(estimate.value) * 1e-5, estimate.u * 1e-2)
        up, down = (
            reduce_drops(timings, perturbed(bench, estimate.name, sign * step)).sets.scatter.mean
            for sign in (1, -1)
        )
        difference = (up - down)[0] / (2 * step)
        analytic = reduced.sets.jacobian.matrix[0, column]
        if estimate.name == "thermometer.P1.correction":
            difference += 0.02 * reduced.sets.scatter.mean[0]  # the value's own temperature moves
        # in parts of the sensitivity, or of the viscosity for as large a part of the input
        size = max(abs(difference), reduced.sets.scatter.mean[0] / max(abs(estimate.value), 1e-3))
        assert abs(analytic - difference) <= 6 * run_in * size, estimate.name


@pytest.mark.parametrize("offset", [1.0, -1.0])
def test_the_budget_line_of_an_offset_is_that_of_happel_and_brenner(offset):
    """Happel and Brenner 1965, chapter 7: ln K falls as 0.6977 ratio beta^2/(1 - 2.10444 ratio)."""
    bench = bench_dict(tube__A__release_offset=f"{offset}(2) mm")
    result = pf.reduce(DROPS.iloc[:2], bench)["A"].result
    line = next(line for line in result.budget if line.input == "tube.A.release_offset")
    ratio, radius = 2.0005e-3 / 50e-3, 25e-3
    beta = offset * 1e-3 / radius
    slope = 2 * 0.6977 * beta / radius * ratio / (1 - 2.10444 * ratio)
    # off the axis the ball falls faster, which by the law on the axis would be a thinner liquid
    assert line.sensitivity == pytest.approx(slope * result.viscosity.value, rel=2e-2)
    assert abs(line.contribution) == pytest.approx(abs(line.sensitivity) * 0.2e-3, rel=2e-2)
