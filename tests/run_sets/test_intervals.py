"""Speeds between successive marks, worked by hand."""

from __future__ import annotations

import math

import pandas as pd
import pytest

import plumbfall as pf
from support.benches import bench_dict


def ratios(clock: dict[str, list[float]], marks: list[str]) -> list[tuple[float, ...]]:
    sheet = bench_dict()
    (tube,) = sheet["tube"].values()
    tube.pop("distance", None)
    tube["marks"] = marks
    balls = next(iter(sheet["ball"]))
    columns = {f"{name} [s]": values for name, values in clock.items()}
    table = pd.DataFrame({"ball": balls, "temperature [degC]": 25.0, **columns})
    report = pf.reduce(table, sheet)
    (view,) = report
    return [drop.interval_ratios for drop in view.result.drops]


def test_mean_speeds_over_that_of_the_whole_drop():
    # 100 mm in 5.0 s, then 100 mm in 5.1 s; as a whole 200 mm in 10.1 s
    (found,) = ratios(
        {"mark 1": [2.0], "mark 2": [7.0], "mark 3": [12.1]}, ["0 mm", "100 mm", "200 mm"]
    )
    assert found == pytest.approx((10.1 / 10.0, 10.1 / 10.2))


def test_a_mark_that_was_not_read_leaves_its_intervals_out():
    (found,) = ratios(
        {"mark 1": [0.0], "mark 2": [4.0], "mark 3": [math.nan], "mark 4": [16.0]},
        ["0 mm", "50 mm", "100 mm", "200 mm"],
    )
    assert found[0] == pytest.approx(1.0)
    assert math.isnan(found[1])
    assert math.isnan(found[2])


def test_two_marks_have_nothing_to_compare():
    assert ratios({"mark 1": [0.0], "mark 2": [10.0]}, ["0 mm", "200 mm"]) == [()]
