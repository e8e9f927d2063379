"""By simulation: as many checks and comparisons are right as they say."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from plumbfall.calibration.certified import certified_value

SAMPLES = Path(__file__).parents[2] / "sample_runs"
BALLS = ["A", "B", "C", "D"]
RUNS = 200
WITHIN = (0.92, 0.985)
"""Three standard deviations of 200 draws at 95 %, either way."""

pytestmark = pytest.mark.slow


def test_e_n_of_a_bench_without_a_bias_is_within_1_in_19_checks_of_20():
    bench = pf.read_bench(SAMPLES / "certified_oil_check" / "bench.toml")
    reference, liquid = bench.references["bottle-3"], bench.liquids["oil"]
    known = certified_value(reference, temperature=298.15, liquid=liquid)
    random = np.random.default_rng(6)
    within = 0
    for seed in range(RUNS):
        true = known.value + known.u * float(random.standard_normal())
        drops = pf.simulate(
            bench, viscosity=true, temperature="25 degC", run_set="x", drops=8, seed=9000 + seed,
            bench_seed=seed, balls=BALLS,
        )  # fmt: skip
        (check,) = pf.check(drops, bench, reference="bottle-3").checks
        within += abs(check.e_n) <= 1
    assert WITHIN[0] < within / RUNS < WITHIN[1]


def test_bounds_of_a_ratio_hold_the_true_one_in_19_comparisons_of_20():
    bench = pf.read_bench(SAMPLES / "resin_batches_compared" / "bench.toml")
    held = 0
    for seed in range(RUNS):
        tables = [
            pf.simulate(
                bench, viscosity=true, temperature="23 degC", run_set=name, drops=8,
                seed=7000 + 2 * seed + place, bench_seed=seed, balls=BALLS,
            )
            for place, (name, true) in enumerate((("x", 1.6), ("y", 1.616)))
        ]  # fmt: skip
        ratio = pf.compare(pd.concat(tables), bench, sets=("x", "y")).result.ratio
        held += ratio.low < 1.6 / 1.616 < ratio.high
    assert WITHIN[0] < held / RUNS
