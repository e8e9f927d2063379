"""What would halve the bounds: by hand, and by doing it."""

from __future__ import annotations

import math

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from plumbfall.results import BudgetLine, Improvement
from plumbfall.run_sets.improvements import improvements
from support.benches import bench_dict, drops_table

TIMES = {"B1": [14.91, 14.93, 14.89], "B2": [9.78, 9.80, 9.76], "B3": [6.95, 6.96, 6.94]}


def line(name: str, contribution: float, dof: float = math.inf, scope: str = "shared"):
    return BudgetLine(
        name, 1.0, "m", 2 * contribution, "normal", dof, 0.5, contribution, 0.0, scope
    )


def found(*lines: BudgetLine, n_drops: int = 8, n_balls: int = 4) -> dict[str, Improvement]:
    variance = sum(each.contribution**2 for each in lines)
    shared = [
        BudgetLine(*(getattr(each, name) for name in BudgetLine.__slots__[:8]),
                   each.contribution**2 / variance, each.scope)
        for each in lines
    ]  # fmt: skip
    made = improvements(
        shared, n_drops=n_drops, n_balls=n_balls, coverage=0.95, own="set.A.scatter"
    )
    return {each.input: each for each in made}


def test_one_dominant_input_by_hand():
    """sqrt(x^2 + 1) = sqrt(16 + 1)/2: x = sqrt(13)/2 of 4; the other alone cannot."""
    one = found(line("tube.A.bore", 4.0), line("gauge.G.correction", 1.0))["tube.A.bore"]
    assert one.what == "standard uncertainty"
    assert one.now == 8.0
    assert one.needed == pytest.approx(2 * math.sqrt(17 / 4 - 1), rel=1e-9)
    assert one.remaining == pytest.approx(1 / math.sqrt(17), rel=1e-9)


def test_four_times_the_drops_halve_pure_scatter_of_known_size():
    (only,) = found(line("scatter.relative", 1.0, scope="drop"), n_drops=6).values()
    assert (only.what, only.now, only.needed) == ("drops", 6.0, 24.0)


def test_more_balls_also_bring_degrees_of_freedom():
    """Three balls have t = 4.30 (2); seven have 2.45 (6): 2.45/sqrt(7) is below 4.30/sqrt(3)/2,
    and of six 2.57/sqrt(6) is too (table G.2); of five 2.78/sqrt(5) is not above it either."""
    (only,) = found(line("set.A.scatter", 1.0, 2.0, "ball"), n_drops=9, n_balls=3).values()
    half = 4.303 / math.sqrt(3) / 2
    by_table = {4: 3.182 / 2, 5: 2.776 / math.sqrt(5), 6: 2.571 / math.sqrt(6)}
    fewest = min(n for n, half_width in by_table.items() if half_width <= half)
    assert (only.what, only.needed) == ("balls", float(fewest))


def test_where_none_alone_can_all_must_shrink():
    made = found(*(line(f"tube.A.{i}", 1.0) for i in range(4)))
    assert all(one.needed is None for name, one in made.items() if name.startswith("tube"))
    together = made["all of these together"]
    assert (together.what, together.needed) == ("factor", pytest.approx(0.5))
    assert made["tube.A.0"].remaining == pytest.approx(math.sqrt(3) / 2)


def test_only_lines_that_matter_are_looked_at():
    made = found(line("a", 1.0), line("b", 0.01), line("c", 0.01))
    assert list(made) == ["a"]


def test_without_a_budget_nothing_is_said():
    assert improvements([], n_drops=0, n_balls=0, coverage=0.95, own="") == ()


def test_doing_it_halves_the_bounds():
    """A bench with the thermometer improved as said has half the bounds."""
    poor = bench_dict(thermometer__P1__correction="0.03(50) K")
    report = pf.reduce(drops_table(TIMES), poor, draws=0)
    result = report["A"].result
    one = result.improvements[0]
    assert one.input == "thermometer.P1.correction"
    better = bench_dict(thermometer__P1__correction={"value": 0.03, "unit": "K", "u": one.needed})
    again = pf.reduce(drops_table(TIMES), better, draws=0)["A"].result
    assert again.linear.expanded == pytest.approx(result.linear.expanded / 2, rel=1e-6)


def test_the_report_says_it():
    poor = bench_dict(thermometer__P1__correction="0.03(50) K")
    report = pf.reduce(drops_table(TIMES), poor, draws=0)
    table = report["A"].halving()
    assert isinstance(table, pd.DataFrame)
    assert table.loc[0, "what"] == "standard uncertainty"
    assert table.loc[0, "now"] == 0.5
    assert np.isfinite(table.loc[0, "needed"])
    (first, *_) = report.to_dict()["run_sets"][0]["halving"]
    assert first["needed"] == pytest.approx(table.loc[0, "needed"])
    assert "What would halve the expanded uncertainty" in report.to_html()
