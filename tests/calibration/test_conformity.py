"""Conformity with a liquid's specification, beside the status of the data and apart from it."""

from __future__ import annotations

import dataclasses
import json
import math

import pytest
from scipy import stats

import plumbfall as pf
from plumbfall.bench.records import Specification
from plumbfall.calibration.conformity import conformity
from plumbfall.estimate import Estimate
from support.benches import bench_dict, drops_table

TIMES = {"B1": [14.09, 14.11, 14.08, 14.10, 14.09]}


def reduced(specification, times=None, temperature=25.0, **changes):
    bench = bench_dict(liquid__oil__specification=specification, **changes)
    return pf.reduce(drops_table(times or TIMES, temperature=temperature), bench)


def judged(*arguments, **changes):
    report = reduced(*arguments, **changes)
    (run_set,) = json.loads(report.to_json())["run_sets"]
    return run_set["conformity"], report["A"].result


def limits(**given):
    return {**given, "temperature": "25 degC"}


def test_nothing_is_judged_without_a_specification():
    report = pf.reduce(drops_table(TIMES), bench_dict())
    assert report.to_dict()["run_sets"][0]["conformity"] is None
    assert "Conformity" not in report.text()


def test_probability_is_students_between_the_limits():
    wide, result = judged(limits(low="900 mPa.s", high="1000 mPa.s"))
    value, u, dof = (getattr(result.viscosity, n) for n in ("value", "u", "effective_dof"))
    assert wide["decision"] == "conforms"
    assert wide["limits"] == "900 mPa.s to 1000 mPa.s at 25 degC"
    for away, decision in ((2.5, "conforms"), (0.3, "undecided"), (-2.5, "does-not-conform")):
        # the drops are 0.03 K off 25 degC by their thermometer's correction
        limit = (value - away * u) * math.exp(0.02 * 0.03)
        found, _ = judged(limits(low=f"{limit!r} Pa.s"))
        assert found["decision"] == decision
        assert found["probability"] == pytest.approx(stats.t.cdf(away, dof), abs=1e-3)
        assert found["limits"].startswith("at least")
    assert judged(limits(high="900 mPa.s"))[0]["decision"] == "does-not-conform"


def test_the_slope_brings_the_value_to_the_limits_and_its_error_with_it():
    warm, result = judged(limits(low="940 mPa.s", high="1100 mPa.s"), temperature=30.0)
    at_25, _ = judged(
        limits(low="940 mPa.s", high="1100 mPa.s"),
        temperature=30.0,
        bench__reference_temperature="25 degC",
    )
    assert result.viscosity.value < 0.96
    assert warm["probability"] == pytest.approx(at_25["probability"], abs=2e-3)
    assert 0.05 < warm["probability"] < 1


def test_without_a_slope_limits_hold_at_their_temperature_alone():
    found, _ = judged(limits(low="900 mPa.s"), temperature=27.0, liquid__oil__viscosity_slope=None)
    assert (found["decision"], found["probability"]) == ("undecided", None)
    assert "27.03 degC" in found["rule"]
    assert "viscosity_slope" in found["rule"]
    near, _ = judged(limits(low="900 mPa.s"), liquid__oil__viscosity_slope=None)
    assert near["decision"] == "conforms"


def test_conformity_never_touches_the_status_of_the_data():
    report = reduced(limits(high="900 mPa.s"))
    assert report["A"].status == "valid"
    assert report["A"].result.conformity.decision == "does-not-conform"
    assert "does not conform with at most 900 mPa.s at 25 degC" in " ".join(report.text().split())
    assert "does not conform" in report.to_html()


def test_invalid_data_support_no_decision():
    # a ball lighter than the liquid has no viscosity, and nothing to judge
    report = reduced(limits(high="900 mPa.s"), material__steel__density="0.9 g/cm3")
    assert report["A"].status == "invalid"
    assert report["A"].result.conformity is None


def test_where_monte_carlo_is_quoted_the_tails_are_those_of_its_bounds():
    result = reduced(limits(low="900 mPa.s"), {"B1": TIMES["B1"][:3]})["A"].result
    quoted = dataclasses.replace(
        result.viscosity, method="monte-carlo", effective_dof=None, coverage_factor=None,
        u=1.7 * result.linear.u, expanded=1.1 * result.linear.expanded,
    )  # fmt: skip
    at = result.temperature.value
    low = Estimate(quoted.value - quoted.expanded, unit="Pa.s", text="low")
    liquid = dataclasses.replace(
        pf.read_bench(bench_dict()).liquids["oil"],
        specification=Specification(low=low, high=None, temperature=at),
    )
    found = conformity(dataclasses.replace(result, viscosity=quoted), liquid)
    # below a two-sided 95 % interval lie 2.5 %, whatever the standard deviation of the draws
    assert found.probability == pytest.approx(0.975, abs=1e-6)
