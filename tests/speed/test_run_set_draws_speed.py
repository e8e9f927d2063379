"""Monte Carlo of whole run sets: time and memory, as ratios within one run.

Targets: a million draws of 10 drops of 4 balls within 3 times a bare numpy loop that draws as many
normals and evaluates the explicit Stokes formula of every drop; memory below 500 MB at 10 million
draws; time in proportion to the run sets. The gate of the first stands at the target itself, as
the draws alone are a third of it.
"""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from plumbfall.reduction.drops import reduce_drops
from plumbfall.run_sets.set_model import SetModel
from support.benches import bench_dict, drops_table
from support.costs import cost

DROPS = {
    "B1": [14.93, 14.88, 14.91],
    "B2": [9.79, 9.77, 9.80],
    "B3": [6.96, 6.94],
    "B4": [4.13, 4.14],
}
DRAWS = 1_000_000


def bare_loop(n_inputs: int, draws: int, block: int = 16_384) -> np.ndarray:
    """Return bounds by what one would type: as many normals, and Stokes' law for every drop."""
    rng = np.random.default_rng(1)
    times = np.array([time for of_ball in DROPS.values() for time in of_ball])
    ball = np.repeat(np.arange(4), [len(of_ball) for of_ball in DROPS.values()])
    found = np.empty(draws)
    for start in range(0, draws, block):
        n = min(block, draws - start)
        drawn = rng.standard_normal((n_inputs, n))
        gravity = 9.8123 + 5e-4 * drawn[0]
        distance = 0.2 + 5e-5 * drawn[1]
        liquid = 970 + 0.4 * drawn[2]
        bias = 1e-3 * drawn[3]
        total = np.zeros(n)
        for drop in range(len(times)):
            density = 7700 + 5.0 * drawn[4 + ball[drop]]
            diameter = 2.5e-3 + 1e-6 * drawn[8 + ball[drop]]
            fall = times[drop] - bias
            total += gravity * (density - liquid) * diameter**2 * fall / (18 * distance)
        found[start : start + n] = total / len(times)
    return np.quantile(found, [0.025, 0.975])


def test_a_million_draws_within_three_times_a_bare_loop(say):
    bench = pf.read_bench(bench_dict())
    timings = pf.read_timings(drops_table(DROPS), bench)
    sets = reduce_drops(timings, bench).sets
    n_inputs = len(SetModel(sets, 0, np.arange(10)).inputs.estimates)
    ours = cost(lambda: reduce_drops(timings, bench, draws=DRAWS))
    theirs = cost(lambda: bare_loop(n_inputs, DRAWS))
    say(
        f"{DRAWS:.0e} draws of 10 drops, 4 balls, {n_inputs} inputs, the whole reduction: "
        f"{ours:.2f} s, {ours / theirs:.2f} times a bare numpy loop (target 3)"
    )
    assert ours / theirs <= 3


def test_time_is_proportional_to_the_run_sets(say):
    bench = pf.read_bench(bench_dict())

    def reduce(n: int) -> float:
        table = pd.concat([drops_table(DROPS, run_set=f"set {i}") for i in range(n)])
        timings = pf.read_timings(table, bench)
        return cost(lambda: reduce_drops(timings, bench, draws=20_000), repeats=2)

    few, many = reduce(10), reduce(60)
    say(
        f"run sets of 20,000 draws: {1e3 * many / 60:.0f} ms each; 6 times as many {many / few:.1f}"
    )
    assert many / few < 6 * 1.3


MEMORY = r"""
import re, sys
from pathlib import Path
sys.path.insert(0, "tests")
import plumbfall as pf
from plumbfall.reduction.drops import reduce_drops
from support.benches import bench_dict, drops_table
bench = pf.read_bench(bench_dict())
timings = pf.read_timings(drops_table({times}), bench)
reduce_drops(timings, bench, draws=int(sys.argv[1]))
# not ru_maxrss, which a child inherits from who started it
print(int(re.search(r"VmHWM:\s*(\d+)", Path("/proc/self/status").read_text())[1]) // 1024)
"""


@pytest.mark.slow
@pytest.mark.skipif(not Path("/proc/self/status").exists(), reason="memory is read from /proc")
def test_memory_at_ten_million_draws(say):
    program = MEMORY.format(times=DROPS)
    most = {
        draws: int(
            subprocess.run(
                [sys.executable, "-c", program, str(draws)],
                capture_output=True, text=True, check=True,
            ).stdout
        )
        for draws in (1_000_000, 10_000_000)
    }  # fmt: skip
    say(f"most memory: {most[1_000_000]} MB at 1e6 draws, {most[10_000_000]} MB at 1e7")
    assert most[10_000_000] < 500
