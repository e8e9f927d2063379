"""What the tests of a set would have found: put in what is said to show, and count how often."""

from __future__ import annotations

import numpy as np

import plumbfall as pf
from support.benches import bench_dict, drops_table

TIMES = {"B1": [14.91, 14.93, 14.89], "B2": [9.78, 9.80, 9.76], "B3": [6.95, 6.96, 6.94]}


def test_a_drift_of_the_size_said_is_found_about_four_times_of_five() -> None:
    sheet = bench_dict()
    sizes = []
    for seed in range(40):  # each set says a size by its own scatter: what they say together
        drops = pf.simulate(sheet, viscosity=0.85, drops=10, balls="B1", seed=seed)
        (view,) = pf.reduce(drops, sheet, draws=0)
        sizes.append({one.code: one.detectable for one in view.result.reach}["time-trend"])
    size = float(np.sqrt(np.mean(np.square(sizes))))
    true = 0.85 * (1 + size * np.linspace(-0.5, 0.5, 10))
    found = 0
    for seed in range(100):
        drops = pf.simulate(sheet, viscosity=true, drops=10, balls="B1", seed=1000 + seed)
        (view,) = pf.reduce(drops, sheet, draws=0)
        # a drift that happens to begin steeply is read as a bath that settles
        found += bool({one.code for one in view.findings} & {"time-trend", "not-equilibrated"})
    # four standard deviations of 100 trials; the size itself is known to some 4 %
    assert 80 - 20 < found < 80 + 16


def test_what_cannot_be_tested_is_not_said_to_show() -> None:
    (view,) = pf.reduce(drops_table({"B1": [14.91]}), bench_dict(), draws=0)
    assert view.result.reach == ()


def test_sizes_are_relative_and_each_test_is_named_once() -> None:
    (view,) = pf.reduce(drops_table(TIMES), bench_dict(), draws=0)
    codes = [one.code for one in view.result.reach]
    assert codes == ["time-trend"]  # one temperature: no trend with it
    assert all(0 < one.detectable < 1 for one in view.result.reach)
