"""Monte Carlo of run sets, against linear propagation, tables and an explicit equation."""

from __future__ import annotations

import json
import math
import pickle
from importlib.resources import files
from pathlib import Path

import numpy as np
import pandas as pd
import pytest
from jsonschema import Draft202012Validator

import plumbfall as pf
from plumbfall.reduction.drops import reduce_drops
from plumbfall.reduction.reduced import Reduction
from plumbfall.run_sets.monte_carlo import draw_run_set
from plumbfall.run_sets.set_model import SetModel
from support.benches import bench_dict, drops_table

SAMPLES = Path(__file__).parents[2] / "sample_runs"
TIMES = {"B1": [14.91, 14.93, 14.89], "B2": [9.78, 9.80, 9.76], "B3": [6.95, 6.96, 6.94]}
DRAWS = 100_000
END_SPREAD = math.sqrt(0.025 * 0.975) / 0.0584
"""Standard deviation of a normal 2.5 % quantile is this times u over the root of the draws."""

LIGHT = {
    "site": {"gravity": "9.81 m/s2"},
    "timer": {"T1": {"per_drop": "0.05 s"}},
    "tube": {"A": {"bore": "50.00(2) mm", "distance": "20.0(15) mm"}},
    "ball": {"nylon": {"diameter": "4.00(1) mm", "mass": "38.202(20) mg"}},
    "liquid": {"oil": {"density": "970.0(5) kg/m3"}},
    "methods": {
        "drag": "product bohlin stokes",
        "ends": "none",
        "run_in": "none",
        "model_uncertainty": "0.5 %",
    },
}
"""A nylon ball of 1140 kg/m3 in 970 kg/m3, timed over a short way judged by eye.

1 % of the ball's diameter is 17 % of its weight in oil, and the way, known to 7.5 %, divides."""


def reduced(table, bench: dict) -> Reduction:
    read = pf.read_bench(bench)
    return reduce_drops(pf.read_timings(table, read), read)


def close_bench(**changes) -> dict:
    """Return the invented bench with everything near: ends, release, an offset from the axis."""
    changes.setdefault("tube__A__release_offset", "3(1) mm")
    bench = bench_dict(
        bench__reference_temperature="20 degC",
        tube__A__marks=["0.00(3) mm", "100.00(4) mm", "200.00(5) mm"],
        tube__A__surface_above="28.0(2) mm",
        tube__A__bottom_below="31.0(2) mm",
        tube__A__release_above="4.0(2) mm",
        **changes,
    )
    bench["site"] = {"latitude": "50.0(2) deg", "elevation": "300(20) m"}
    return bench


def test_at_the_estimates_the_model_is_the_reduction():
    reduction = reduced(drops_table(TIMES, temperature=24.3), close_bench())
    outputs = reduction.sets.outputs
    model = SetModel(reduction.sets, 0, np.arange(9))
    at = np.array([[estimate.value] * 3 for estimate in model.inputs.estimates])
    assert len(model.quantities) == 3
    for quantity, found in zip(model.quantities, model(at), strict=True):
        np.testing.assert_allclose(found, outputs.of(quantity).value[0], rtol=1e-11)


@pytest.mark.parametrize("ends", ["table", "classical", "none"])
def test_slopes_of_the_model_are_the_linear_sensitivities(ends):
    """Everything drawn moves the model as the closed sensitivities say: nothing is left out."""
    last = 4.19 if ends == "classical" else 4.135  # as the known repeatability wants it
    table = drops_table({"B1": [15.0], "B4": [last]}, temperature=24.3)
    bench = close_bench(methods={"ends": ends}, scatter={"relative": "0.3 %", "dof": 200})
    reduction = reduced(table, bench)
    sets = reduction.sets
    model = SetModel(sets, 0, np.arange(2))
    estimates = model.inputs.estimates
    row = sets.jacobian.matrix[[0]].toarray()[0]
    felt = np.flatnonzero(row * sets.jacobian.u)
    names = [estimate.name for estimate in sets.inputs.estimates]
    linear = {names[place] for place in felt if place < len(names)} | {"set.A.scatter"}
    assert len(linear) > 20
    assert linear <= {estimate.name for estimate in estimates}
    middle = np.array([estimate.value for estimate in estimates])
    for place, estimate in enumerate(estimates):
        step = 0.2 * estimate.u
        both = np.stack([middle, middle], axis=1)
        both[place] += step, -step
        slope = (model(both)[0] @ [1.0, -1.0]) / (2 * step)
        expected = 1.0 if estimate.name == "set.A.scatter" else row[names.index(estimate.name)]
        largest = float(sets.outputs.of("viscosity").u[0])
        # to 2 % and, where hardly felt, to a thousandth of the whole uncertainty
        assert slope == pytest.approx(expected, rel=0.02, abs=1e-3 * largest / estimate.u), (
            estimate.name
        )


def test_a_clean_set_agrees_with_linear_propagation():
    bench = bench_dict(scatter={"relative": "0.30 %", "dof": 200})
    report = pf.reduce(drops_table({"B1": [14.91], "B2": [9.78]}), bench, draws=DRAWS, seed=3)
    result = report["A"].result
    drawn, linear = result.monte_carlo, result.linear
    assert drawn.validated_linear
    assert result.viscosity == linear
    assert drawn.standard_uncertainty == pytest.approx(linear.u, rel=4 / math.sqrt(2 * DRAWS))
    assert "linear-not-validated" not in {finding.code for finding in result.findings}
    error = 5 * END_SPREAD / math.sqrt(DRAWS) * linear.u
    assert (drawn.low, drawn.high) == pytest.approx((linear.low, linear.high), abs=error)
    assert drawn.shortest_high - drawn.shortest_low <= drawn.high - drawn.low


def light_ball(draws: int) -> np.ndarray:
    """Draw the explicit equation of a ball without inertia; K by Bohlin 1960, as in print."""
    rng = np.random.default_rng(20)

    def normal(value: float, u: float) -> np.ndarray:
        return value + u * rng.standard_normal(draws)

    d, bore, length = normal(4e-3, 1e-5), normal(0.05, 2e-5), normal(0.02, 1.5e-3)
    reading, density = normal(38.202e-6, 20e-9), normal(970.0, 0.5)
    time, law = normal(16.0, 0.05), normal(1.0, 0.005)
    volume = np.pi * d**3 / 6
    mass = reading * (1 - 1.2 / 8000) + 1.2 * volume  # weighed in air, OIML D 28
    r = d / bore
    inverse = 1 - 2.10443 * r + 2.08877 * r**3 - 0.94813 * r**5
    inverse += -1.372 * r**6 + 3.87 * r**8 - 4.19 * r**10
    weight = (mass - density * volume) * 9.81
    return weight * inverse * time / (3 * np.pi * d * length * law)


def test_a_light_ball_is_quoted_by_monte_carlo():
    table = drops_table({"nylon": [16.0]})
    report = pf.reduce(table, LIGHT, draws=200_000, seed=1)
    result = report["A"].result
    expected = light_ball(200_000)
    low, high = np.quantile(expected, [0.025, 0.975])
    u = expected.std(ddof=1)
    error = 5 * math.sqrt(2) * END_SPREAD / math.sqrt(200_000) * u  # of two such estimates
    quoted, linear = result.viscosity, result.linear
    assert (quoted.low, quoted.high) == pytest.approx((low, high), abs=error)
    assert quoted.u == pytest.approx(u, rel=0.01)
    assert (quoted.method, linear.method) == ("monte-carlo", "linear")
    assert quoted.coverage_factor is None
    assert quoted.effective_dof is None
    assert quoted.expanded == pytest.approx((quoted.high - quoted.low) / 2)
    assert not result.monte_carlo.validated_linear
    assert max(abs(linear.low - low), abs(linear.high - high)) > 2 * error
    notes = {finding.code: finding for finding in result.findings}
    assert notes["linear-not-validated"].severity == "note"
    assert notes["linear-not-validated"].statistic > 1
    assert report["A"].interval == (quoted.low, quoted.high)
    row = report.table().iloc[0]
    assert row["low_mPa_s"] == pytest.approx(1e3 * quoted.low)
    assert row["high_mPa_s"] == pytest.approx(1e3 * quoted.high)
    assert row["expanded_uncertainty_mPa_s"] == pytest.approx(1e3 * quoted.expanded)
    assert math.isnan(row["coverage_factor"])
    assert "Monte Carlo, 95 %" in report["A"].summary


def only_scatter(times: list[float], **options) -> pf.Report:
    bench = {
        "tube": {"A": {"bore": "50 mm", "distance": "200 mm"}},
        "ball": {"X": {"lot": True, "diameter": "2 mm", "density": "7700 kg/m3"}},
        "liquid": {"oil": {"density": "970 kg/m3"}},
        "methods": {"model_uncertainty": "0 %"},
    }
    return pf.reduce(drops_table({"X": times}), bench, **options)


def test_scatter_of_three_has_bounds_but_no_standard_uncertainty():
    """t for 2 degrees of freedom and 95 % is 4.30: JCGM 100:2008, table G.2."""
    result = only_scatter([15.0, 15.1, 15.05], draws=DRAWS)["A"].result
    drawn, u = result.monte_carlo, result.linear.u
    assert drawn.standard_uncertainty is None
    density = (1 + 4.303**2 / 2) ** -1.5 / math.sqrt(8)  # of t with 2 degrees of freedom
    error = 5 * math.sqrt(0.025 * 0.975 / DRAWS) / density * u
    middle = result.viscosity.value
    assert drawn.low == pytest.approx(middle - 4.303 * u, abs=error)
    assert drawn.high == pytest.approx(middle + 4.303 * u, abs=error)
    assert math.isfinite(result.viscosity.u)


def test_scatter_of_eight_is_a_scaled_t():
    """Its u is sqrt((n - 1)/(n - 3)) s/sqrt(n): JCGM 101:2008, 6.4.9.4."""
    times = [15.0, 15.1, 15.05, 15.02, 14.97, 15.08, 15.03, 14.99]
    result = only_scatter(times, draws=DRAWS)["A"].result
    expected = math.sqrt(7 / 5) * result.linear.u
    assert result.monte_carlo.standard_uncertainty == pytest.approx(expected, rel=0.015)


def test_a_seed_gives_the_same_and_another_does_not():
    table, bench = drops_table(TIMES), bench_dict()
    first, again, other = (pf.reduce(table, bench, draws=5_000, seed=s) for s in (7, 7, 8))
    assert first.to_json() == again.to_json()
    assert first["A"].result.monte_carlo != other["A"].result.monte_carlo
    assert first.to_dict()["seed"] == 7
    assert pickle.loads(pickle.dumps(first)).to_json() == first.to_json()


def test_the_size_of_the_blocks_changes_nothing():
    sets = reduced(drops_table(TIMES), close_bench()).sets
    found = [
        draw_run_set(sets, 0, np.arange(9), draws=3_000, seed=2, block=block).found
        for block in (3_000, 777)
    ]
    np.testing.assert_allclose(found[0].low, found[1].low, rtol=1e-9)
    np.testing.assert_allclose(found[0].u, found[1].u, rtol=1e-7)


def test_draws_are_made_unless_none_are_asked_for():
    table, bench = drops_table(TIMES), bench_dict()
    default, none = pf.reduce(table, bench), pf.reduce(table, bench, draws=0)
    assert default["A"].result.monte_carlo.draws == 200_000
    assert none["A"].result.monte_carlo is None
    assert {run_set["monte_carlo"] for run_set in none.to_dict()["run_sets"]} == {None}


def test_run_sets_share_draws_and_are_as_if_drawn_alone():
    """Names decide the streams, so that what a set says does not depend on its company."""
    both = pd.concat([drops_table(TIMES), drops_table(TIMES, run_set="B")])
    report = pf.reduce(both, bench_dict(), draws=20_000)
    alone = pf.reduce(drops_table(TIMES, run_set="B"), bench_dict(), draws=20_000)
    assert report["B"].result.monte_carlo == alone["B"].result.monte_carlo


def test_progress_is_told():
    said = []
    both = pd.concat([drops_table(TIMES), drops_table(TIMES, run_set="B")])
    pf.reduce(both, bench_dict(), draws=2_000, progress=lambda *where: said.append(where))
    assert said == [(1, 2), (2, 2)]


def test_draws_leave_the_linear_result_alone():
    table, bench = drops_table(TIMES), bench_dict()
    linear, drawn = (pf.reduce(table, bench, draws=draws) for draws in (0, 5_000))
    assert drawn["A"].result.linear == linear["A"].result.viscosity
    assert drawn["A"].result.budget == linear["A"].result.budget


def test_an_invalid_set_is_not_drawn():
    report = pf.reduce(SAMPLES / "wash_oil_invalid" / "drops.csv", draws=1_000)
    assert {view.status for view in report} == {"invalid"}
    assert {run_set["monte_carlo"] for run_set in report.to_dict()["run_sets"]} == {None}


def test_every_drop_has_errors_of_its_own():
    """Two drops of a lot with a known repeatability: each ball has its own size."""
    lot = {"lot": True, "diameter": "2.000 mm", "spread": "20 um", "density": "7.70 g/cm3"}
    bench = bench_dict(ball={"lot": lot}, scatter={"relative": "0.01 %", "dof": 200})
    report = pf.reduce(drops_table({"lot": [15.0, 15.0]}), bench, draws=DRAWS)
    result = report["A"].result
    share = {line.input: line.share for line in result.budget}["ball.lot.spread"]
    assert share > 0.8
    assert result.monte_carlo.standard_uncertainty == pytest.approx(result.linear.u, rel=0.01)


def test_a_single_drop_is_drawn_by_what_its_instruments_declare():
    bench = bench_dict(
        timer__T1__per_drop="0.1 s",
        timer__T1__resolution="0.2 s",
        thermometer__P1__per_reading="1 K",
    )
    result = pf.reduce(drops_table({"B1": [15.05]}), bench, draws=DRAWS)["A"].result
    shares = {line.input: line.share for line in result.budget}
    own = ("timer.T1.per_drop", "timer.T1.resolution", "thermometer.P1.per_reading")
    assert min(shares[name] for name in own) > 0.05
    assert result.monte_carlo.standard_uncertainty == pytest.approx(result.linear.u, rel=0.01)


def test_draws_without_a_viscosity_are_counted_and_bounds_are_not_invented():
    """A ball hardly denser than the liquid: many draws float."""
    bench = {**LIGHT, "ball": {"nylon": {"diameter": "4.00 mm", "density": "980(10) kg/m3"}}}
    report = pf.reduce(drops_table({"nylon": [200.0]}), bench, draws=20_000)
    result = report["A"].result
    assert 0.1 < result.monte_carlo.undefined / 20_000 < 0.25  # 16 % below -1 u
    assert result.monte_carlo.low == -math.inf
    assert result.viscosity == result.linear
    note = next(f for f in result.findings if f.code == "linear-not-validated")
    assert "have no viscosity" in note.message
    document = report.to_dict()
    assert document["run_sets"][0]["monte_carlo"]["low"] is None
    assert list(validator().iter_errors(document)) == []
    assert "unlimited" in report_text(report)


def test_auto_draws_until_the_bounds_stand():
    bench = bench_dict(scatter={"relative": "0.30 %", "dof": 200})
    result = pf.reduce(drops_table({"B1": [14.91], "B2": [9.78]}), bench, draws="auto")["A"].result
    assert result.monte_carlo.draws % 10_000 == 0
    assert result.monte_carlo.stable
    assert result.monte_carlo.validated_linear


@pytest.mark.parametrize("draws", [-1, True, 1.5, "many", 10])
def test_what_is_no_number_of_draws_is_refused(draws):
    with pytest.raises(pf.InputError):
        pf.reduce(drops_table(TIMES), bench_dict(), draws=draws)


def validator() -> Draft202012Validator:
    schema = json.loads((files("plumbfall") / "report" / "report.schema.json").read_text("utf-8"))
    return Draft202012Validator(schema)


def report_text(report: pf.Report) -> str:
    from plumbfall.report.text import plain_text

    return plain_text(report)


def test_json_text_and_page_show_both(tmp_path):
    report = pf.reduce(drops_table({"nylon": [16.0]}), LIGHT, draws=20_000, seed=5)
    document = json.loads(report.to_json())
    assert list(validator().iter_errors(document)) == []
    run_set = document["run_sets"][0]
    assert set(run_set["monte_carlo"]) == {
        "low", "high", "standard_uncertainty", "draws", "validated_linear", "histogram",
    }  # fmt: skip
    assert run_set["monte_carlo"]["draws"] == 20_000
    assert run_set["linear"]["method"] == "linear"
    assert run_set["viscosity"]["method"] == "monte-carlo"
    assert run_set["viscosity"]["coverage_factor"] is None
    text = report_text(report)
    assert "Linear against Monte Carlo" in text
    assert "20000 draws" in " ".join(text.split())
    assert "does not agree" in " ".join(text.split())
    report.to_html(tmp_path / "report.html")
    page = (tmp_path / "report.html").read_text("utf-8")
    assert "Linear against Monte Carlo" in page
    assert "linear-not-validated" in page
