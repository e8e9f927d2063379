"""How fast drops become run sets, as ratios within one run.

Targets: at least 200 times faster per drop than the plain script for the numbers alone, at least
100 times with findings, and within 40 times pandas.read_csv of the file. The gates stand at half
of each target, so that a noisy machine does not fail them; run with ``-s`` to see the figures.
"""

from __future__ import annotations

import io
import tracemalloc

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from plumbfall.reduction.drops import reduce_drops
from plumbfall.reduction.numbers import reduce_numbers
from plumbfall.run_sets.table import summary_table
from plumbfall.timings.records import Timings
from speed.plain_script import run_script
from support.benches import bench_dict
from support.costs import cost

BALLS = {"B1": 2.0003e-3, "B2": 2.5001e-3, "B3": 3.0002e-3, "B4": 4.0001e-3}
TIMES = {"B1": 14.878, "B2": 9.762, "B3": 6.935, "B4": 4.099}
"""A liquid of 1 Pa.s by all balls, so that the run sets are clean ones."""


def invented_drops(n: int, sets: int) -> pd.DataFrame:
    """Return n drops of four balls in so many run sets, with 0.3 % scatter."""
    rng = np.random.default_rng(20260302)
    ball = np.resize(np.array(list(BALLS)), n)
    names = np.array([f"set {i}" for i in range(sets)])
    return pd.DataFrame(
        {
            "set": np.repeat(names, n // sets),
            "ball": ball,
            "time [s]": np.array([TIMES[name] for name in ball])
            * (1 + 0.003 * rng.standard_normal(n)),
            "temperature [degC]": 25 + 0.02 * rng.standard_normal(n),
        }
    )


def numbers_alone(timings: Timings, bench: pf.Bench) -> pd.DataFrame:
    """Return the run-set table without findings."""
    sets = reduce_numbers(timings, bench)
    return summary_table(sets, ((),) * len(sets.selection.names))


@pytest.fixture(scope="module")
def bench() -> pf.Bench:
    return pf.read_bench(bench_dict())


@pytest.fixture(scope="module")
def drops() -> pd.DataFrame:
    return invented_drops(100_000, 1_000)


@pytest.fixture(scope="module")
def timings(drops, bench) -> Timings:
    return pf.read_timings(drops, bench)


def test_far_faster_than_a_row_by_row_script(drops, timings, bench, say):
    sample = drops.iloc[:1000]
    script = cost(lambda: run_script(sample, BALLS), 2) / len(sample)
    numbers = cost(lambda: numbers_alone(timings, bench), 5) / len(drops)
    full = cost(lambda: reduce_drops(timings, bench).summary_table(), 5) / len(drops)
    say(
        f"a drop: script {1e6 * script:.0f} us; numbers {1e6 * numbers:.2f} us, "
        f"{script / numbers:.0f} times faster (target 200); with findings "
        f"{1e6 * full:.2f} us, {script / full:.0f} times faster (target 100)"
    )
    assert script / numbers >= 100
    assert script / full >= 50


def test_within_forty_times_reading_the_csv(drops, timings, bench, say):
    text = drops.to_csv(index=False)
    read = cost(lambda: pd.read_csv(io.StringIO(text)), 3)
    full = cost(lambda: reduce_drops(timings, bench).summary_table(), 3)
    say(f"reduction {full / read:.1f} times pandas.read_csv (target within 40)")
    assert full / read <= 80


def test_time_grows_no_faster_than_the_drops(timings, bench, drops, say):
    few = pf.read_timings(drops.iloc[:20_000], bench)
    ratio = cost(lambda: reduce_drops(timings, bench).summary_table(), 3) / cost(
        lambda: reduce_drops(few, bench).summary_table(), 3
    )
    say(f"five times the drops take {ratio:.1f} times the time")
    assert ratio < 7.5


def test_memory_of_many_drops_is_bounded(timings, bench, say):
    tracemalloc.start()
    reduce_drops(timings, bench).summary_table()
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    per_drop = peak / len(timings)
    say(f"{per_drop:.0f} bytes a drop at most: {per_drop / 1e3:.2f} GB at 1e6 drops")
    assert per_drop < 1000  # 1 GB at 1e6 drops
