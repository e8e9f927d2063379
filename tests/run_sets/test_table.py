"""The run-set table, of sets that gave nothing too."""

from __future__ import annotations

import copy
import math
import pickle

import pytest

import plumbfall as pf
from support.benches import bench_dict, drops_table

TIMES = {"B1": [14.91, 14.93, 14.89], "B2": [9.78, 9.80, 9.76]}


def test_a_set_without_viscosity_has_no_coverage_factor():
    light = bench_dict(liquid__oil__density="9.9 g/cm3")
    table = pf.reduce(drops_table(TIMES), light).table()
    assert table["status"].tolist() == ["invalid"]
    for name in ("viscosity", "standard_uncertainty", "expanded_uncertainty", "low", "high"):
        assert math.isnan(table[f"{name}_mPa_s"].iloc[0])
    assert math.isnan(table["coverage_factor"].iloc[0])


@pytest.mark.parametrize(
    "copied", [copy.deepcopy, lambda report: pickle.loads(pickle.dumps(report))]
)
def test_reports_can_be_copied_and_handed_to_other_processes(copied):
    report = pf.reduce(drops_table(TIMES), bench_dict())
    other = copied(report)
    assert other.to_dict() == report.to_dict()
    assert dict(other.bench.balls) == dict(report.bench.balls)
    with pytest.raises(TypeError):
        other.bench.balls["B9"] = None
