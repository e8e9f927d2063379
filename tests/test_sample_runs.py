"""The sample runs: what the README promises of each, and the expected reports beside them."""

from __future__ import annotations

import json
import math
from pathlib import Path

import pytest

import plumbfall as pf

FOLDER = Path(__file__).parents[1] / "sample_runs"
RUNS = {
    "damping_fluid_clean": "drops.csv",
    "resin_bad_drop": "drops.csv",
    "three_batches": "drops.csv",
    "varnish_warm": "drops.tsv",
    "wash_oil_invalid": "drops.csv",
    "inclined_tube": "drops.csv",
}


CHECKS = {
    "certified_oil_check": "check",
    "resin_batches_compared": "comparison",
    "check_history": "chart",
}
"""What the other commands' folders expect."""


@pytest.fixture(autouse=True)
def at_the_root(monkeypatch):
    """Paths stand in reports as typed."""
    monkeypatch.chdir(FOLDER.parent)


def reduced(name: str) -> pf.Report:
    return pf.reduce(f"sample_runs/{name}/{RUNS[name]}")


@pytest.mark.parametrize("name", RUNS)
def test_every_file_says_that_the_data_are_invented(name):
    for path in ("bench.toml", RUNS[name]):
        assert "invented data" in (FOLDER / name / path).read_text("utf-8").lower()


@pytest.mark.parametrize("name", RUNS)
def test_expected_report(name):
    expected = json.loads((FOLDER / name / "expected_report.json").read_text("utf-8"))
    same(json.loads(reduced(name).to_json()), expected, "report")
    text = (FOLDER / name / "expected_report.txt").read_text("utf-8")
    assert reduced(name).text() == text


def made(name: str):
    """Return what a command of another kind makes of its folder."""
    folder = f"sample_runs/{name}"
    if name == "certified_oil_check":
        return pf.check(f"{folder}/drops.csv", reference="bottle-3", tolerance="0.5 %")
    if name == "resin_batches_compared":
        return pf.compare(f"{folder}/drops.csv", sets=("batch 122", "batch 121"), margin="3 %")
    return pf.chart(f"{folder}/history.csv", baseline=18)


@pytest.mark.parametrize("name", CHECKS)
def test_expected_check_comparison_and_chart(name):
    folder, what = FOLDER / name, CHECKS[name]
    for path in folder.glob("[!e]*"):
        assert "invented data" in path.read_text("utf-8").lower()
    expected = json.loads((folder / f"expected_{what}.json").read_text("utf-8"))
    same(json.loads(made(name).to_json()), expected, what)
    assert made(name).text() == (folder / f"expected_{what}.txt").read_text("utf-8")


def same(ours: object, expected: object, place: str) -> None:
    """Assert equal documents; numbers may differ in their last digits between machines."""
    if isinstance(expected, dict):
        assert isinstance(ours, dict)
        assert list(ours) == list(expected), place
        for key, value in expected.items():
            if key != "version":
                same(ours[key], value, f"{place}.{key}")
    elif isinstance(expected, list):
        assert isinstance(ours, list)
        assert len(ours) == len(expected), place
        for index, (one, other) in enumerate(zip(ours, expected, strict=True)):
            same(one, other, f"{place}[{index}]")
    elif isinstance(expected, float):
        assert ours == pytest.approx(expected, rel=1e-6, abs=1e-12), place
    else:
        assert ours == expected, place


def test_clean_set_covers_the_truth():
    clean = reduced("damping_fluid_clean")["tank 3"]
    slope = -0.019
    truth = 0.9472 * math.exp(slope * (clean.result.temperature.value - 298.15))
    assert clean.interval[0] < truth < clean.interval[1]
    assert clean.result.status == "valid"


def test_bad_drop_is_named_and_without_it_the_truth_is_covered():
    resin = reduced("resin_bad_drop")["batch 118"].result
    (warning,) = (f for f in resin.findings if f.severity == "warning")
    assert (warning.code, warning.drops) == ("outlier", (6,))
    without = resin.viscosity.value * (1 + warning.effect)
    truth = 1.620 * math.exp(-0.082 * (resin.temperature.value - 296.15))
    assert without == pytest.approx(truth, rel=0.01)
    (void,) = (drop for drop in resin.drops if not drop.used)
    assert void.note == "ball touched the wall"


def test_three_batches_hold_the_truth_and_are_judged_by_it():
    report = reduced("three_batches")
    truths = {"batch 231": 1.001, "batch 232": 1.0504, "batch 233": 1.074}
    assert dict.fromkeys(truths) == dict.fromkeys(report.names)
    for run_set in report:
        at_25 = run_set.result.viscosity_at_reference
        assert at_25.low < truths[run_set.name] < at_25.high
        assert run_set.status == "valid"
    decisions = [run_set.result.conformity.decision for run_set in report]
    assert decisions == ["conforms", "undecided", "does-not-conform"]
    (void,) = (drop for drop in report["batch 233"].result.drops if not drop.used)
    assert void.note.startswith("gate 2 did not trigger")


def test_warm_sets_are_reduced_to_the_reference_temperature():
    report = reduced("varnish_warm")
    for run_set in report:
        at_25 = run_set.result.viscosity_at_reference
        assert at_25.low < 1.150 < at_25.high
    ratio = report["tuesday"].viscosity / report["monday"].viscosity
    relative = [s.result.viscosity.u / s.result.viscosity.value for s in report]
    assert ratio.std_dev / ratio.n < math.hypot(*relative)


def test_invalid_set_has_no_viscosity():
    result = reduced("wash_oil_invalid")["drops"].result
    assert (result.status, result.viscosity) == ("invalid", None)
    assert result.findings[0].code == "reynolds-high"


def test_check_covers_the_truth_and_passes():
    (check,) = made("certified_oil_check").checks
    # the certificate was drawn 0.06 % too high
    assert check.decision == "passed"
    assert abs(check.bias.value + 0.0006) < 2 * check.bias.u
    slope = -0.019
    truth = 0.9472 * math.exp(slope * (check.temperature - 298.15))
    assert check.measured.low < truth < check.measured.high


def test_comparison_finds_the_thicker_batch_surer_than_either_value():
    result = made("resin_batches_compared").result
    assert result.ratio.low < 1.640 / 1.612 < result.ratio.high
    assert result.different
    assert result.ratio.u < 0.5 * result.values[0].u / result.values[0].value


def test_chart_signals_when_the_thermometer_has_drifted_and_not_before():
    report = made("check_history")
    signals = [bool(point.signals) for point in report.result.points]
    assert not any(signals[:18])  # it drifts from week 20 on
    assert all(signals[-3:])
    assert report.out_of_control


def test_the_constant_of_the_inclined_tube_is_the_one_in_its_file():
    found = pf.calibrate("sample_runs/inclined_tube/calibration.csv", reference=["thin", "thick"])
    expected = json.loads((FOLDER / "inclined_tube" / "constant.json").read_text("utf-8"))
    ours = json.loads(found.to_json())
    for document in (ours, expected):
        del document["content_sha256"]  # it holds the last digits, and the version
    same(ours, expected, "constant")
    text = (FOLDER / "inclined_tube" / "expected_calibration.txt").read_text("utf-8")
    assert found.text() == text
    (constant,) = found.constants
    assert abs(constant.stored.value - 0.6e-6) < 2 * constant.stored.u  # the truth of the README


def test_the_unknown_in_the_inclined_tube_covers_the_truth_more_surely_than_its_constant():
    result = reduced("inclined_tube")["drum 12"].result
    truth = 46.30e-3 * math.exp(-0.041 * (result.temperature.value - 298.15))
    assert result.status == "valid"
    assert result.viscosity.low < truth < result.viscosity.high
    used = result.constants[0].constant
    assert result.viscosity.u / result.viscosity.value < 0.75 * used.u / used.value
    assert result.reynolds is None
