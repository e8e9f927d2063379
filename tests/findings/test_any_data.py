"""Whatever the drops and the bench sheet, findings are made, and of finite numbers."""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from support.benches import bench_dict

TIMES = {"B1": 14.9, "B2": 9.8, "B3": 6.95}


def bench_by(draw: np.random.Generator, marks: bool) -> dict[str, Any]:
    """Return a bench sheet with this and that missing."""
    changes: dict[str, Any] = {}
    choices: list[tuple[float, str, Any]] = [
        (0.2, "timer", {}),
        (0.3, "timer", {"T1": {"kind": "stopwatch"}}),
        (0.3, "thermometer", {}),
        (0.2, "liquid__oil__viscosity_slope", None),
        (0.2, "liquid__oil__expansion", None),
        (0.2, "scatter", {"relative": "0.3 %", "dof": 24}),
        (0.2, "tube__A__release_above", None),
        (0.2, "ball__B1__lot", True),
        (0.2, "methods", {"model_uncertainty": "0 %"}),
        (0.2, "set", {"1": {"filled": "2026-03-02T08:00:00"}}),
        (0.3 * (not marks), "tube__B", {"bore": "30.00(2) mm", "distance": "150.0(1) mm"}),
        (float(marks), "tube__A__marks", ["0 mm", "70.00(5) mm", "140 mm", "200.00(5) mm"]),
    ]
    for chance, path, value in choices:
        if draw.random() < chance:
            changes[path] = value
    return bench_dict(**changes)


def drops_by(draw: np.random.Generator, marks: bool, two_tubes: bool) -> pd.DataFrame:
    """Return drops from exact ones to nonsense."""
    scatter = float(draw.choice([0.0, 1e-12, 5e-4, 0.01, 0.3, 3.0]))
    warmth = float(draw.choice([0.0, 0.02, 0.5]))
    rows = []
    for number in range(int(draw.integers(1, 14))):
        ball = f"B{draw.integers(1, 4)}"
        time = (
            TIMES[ball] * np.exp(scatter * draw.normal()) * (0.001 if draw.random() < 0.01 else 1)
        )
        row: dict[str, Any] = {
            "set": str(draw.integers(1, 3)),
            "ball": ball,
            "tube": "B" if two_tubes and draw.random() < 0.3 else "A",
            "temperature [degC]": 25 + warmth * draw.normal(),
            "status": "void" if draw.random() < 0.05 else "",
            "note": "as seen",
            "started": f"2026-03-02T{8 + number // 6:02d}:{number % 6}0:00",
        }
        digits = int(draw.integers(1, 4))
        if marks:
            for mark, part in enumerate((0.35, 0.7, 1.0), 2):
                missing = draw.random() < 0.05
                row[f"mark {mark} [s]"] = "" if missing else round(part * time, digits)
        else:
            row["time [s]"] = round(time, digits)
        rows.append(row)
    return pd.DataFrame(rows)


@pytest.mark.parametrize("seed", range(80))
def test_findings_of_any_data_are_finite(seed):
    draw = np.random.default_rng(seed)
    marks = bool(draw.random() < 0.4)
    bench = bench_by(draw, marks)
    table = drops_by(draw, marks, "B" in bench["tube"])
    try:
        report = pf.reduce(table, bench, draws=0)
    except pf.InputError:  # nonsense is refused, with its line
        return
    for found in report.reduced.found:
        for one in found:
            numbers = (one.statistic, one.p_value, one.effect, one.detectable)
            assert all(number is None or math.isfinite(number) for number in numbers), one
            assert "nan" not in one.message, one
            assert one.remedy
