"""How long findings take, within one run.

Target: all findings of 1,000 run sets of 10 drops in less time than their reduction with its
default Monte Carlo takes. That is drawn for 20 of them here, and counted fifty times; the gate
stands at half of it. Run with ``-s`` to see the figures.
"""

from __future__ import annotations

import sys
import time

import pandas as pd
import pytest

import plumbfall as pf
from plumbfall.findings.limits import Limits
from plumbfall.findings.registry import find
from plumbfall.planning.simulation import simulate_sets
from plumbfall.reduction.numbers import reduce_numbers, run_data
from support.planted import bench_of

SETS, DRAWN, DROPS = 1_000, 20, 10


def table(marks: bool) -> tuple[pf.Bench, pd.DataFrame]:
    sheet = bench_of(balls=3, marks=marks)
    made = simulate_sets(
        sheet, viscosity=2.0, sets=SETS, drops=DROPS, seed=1, temperature=298.15, scatter=0.001,
        marks=marks,
    )  # fmt: skip
    return pf.read_bench(sheet), made.table()


@pytest.mark.parametrize("marks", [False, True], ids=["times", "marks"])
def test_findings_take_less_time_than_the_default_monte_carlo(marks, capsys):
    bench, rows = table(marks)
    sets = reduce_numbers(pf.read_timings(rows, bench), bench)
    seconds = []
    for _ in range(3):
        start = time.process_time()
        find(run_data(sets, Limits()))
        seconds.append(time.process_time() - start)
    few = rows[rows["set"].isin(rows["set"].unique()[:DRAWN])]
    start = time.process_time()
    pf.reduce(few, bench)
    drawn = (time.process_time() - start) * SETS / DRAWN
    with capsys.disabled():
        sys.stdout.write(
            f"\n  findings of {SETS:,} run sets: {min(seconds):.2f} s; their reduction with the "
            f"default Monte Carlo: {drawn:.0f} s\n"
        )
    assert min(seconds) < drawn / 2
