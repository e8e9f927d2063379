"""How fast balls and tubes are planned, as a ratio within one run.

Target: 1,000 combinations of ball, tube and viscosity, each with fall time, run-in, budget and
drops needed, within 100 times what 1,000 inversions of the force balance take at once. The gate
stands at twice that, so that a noisy machine does not fail it; run with ``-s`` to see the figures.
"""

from __future__ import annotations

import numpy as np

import plumbfall as pf
from plumbfall.measurement.balance import balance
from plumbfall.measurement.inverse import invert
from plumbfall.physics.drag import DragLaw
from plumbfall.planning.arrangement import arrange
from plumbfall.planning.simulation import simulate_sets
from support.benches import bench_dict
from support.costs import cost

COMBINATIONS = 1000


def test_a_thousand_combinations_cost_a_hundred_thousand_inversions(say):
    bench = pf.read_bench(bench_dict())
    viscosities = np.geomspace(0.1, 10.0, COMBINATIONS // len(bench.balls)).tolist()
    found = pf.plan(bench, viscosity=viscosities, target="0.5 %").combinations
    assert len(found) == COMBINATIONS
    planned = cost(
        lambda: pf.plan(bench, viscosity=viscosities, target="0.5 %").combinations, repeats=5
    )

    times = np.array([one.fall_time for one in found])
    balls = [one.ball for one in found]
    drops = arrange(bench, "A", balls, COMBINATIONS)
    law, warm = DragLaw(), np.full(COMBINATIONS, 298.15)
    forces = balance(drops.inputs, drops.cell[0], times, warm)
    inverted = cost(lambda: invert(forces, law.at(forces.diameter_ratio)), repeats=50)
    say(f"1,000 combinations planned: {planned / inverted:.0f} times 1,000 inversions")
    assert planned < 200 * inverted


def test_inventing_run_sets_costs_no_more_than_reducing_them(say):
    bench = pf.read_bench(bench_dict())
    made = simulate_sets(bench, viscosity=0.85, sets=500)
    timings = pf.read_timings(made.table(), bench)
    invented = cost(lambda: simulate_sets(bench, viscosity=0.85, sets=500), repeats=3)
    reduced = cost(lambda: pf.reduce(timings, bench, draws=0), repeats=3)
    say(f"500 run sets invented: {invented / reduced:.2f} times their reduction")
    assert invented < 2 * reduced
