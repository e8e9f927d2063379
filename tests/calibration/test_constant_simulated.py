"""Invented timings in calibrated tubes: without errors the reduction returns what was put in."""

from __future__ import annotations

import numpy as np
import pytest

import plumbfall as pf
from support.calibrated_bench import bench, calibrated, drops, with_scatter


def test_without_errors_the_viscosity_comes_back(tmp_path):
    cal = drops(with_scatter(60.0, 0.001, 5), "oil", "cal")
    using = {**calibrated(tmp_path, bench(), cal), "set": {"use": {"liquid": "glycerol"}}}
    table = pf.simulate(using, viscosity=0.85, run_set="use", drops=3, exact=True)
    viscosity = pf.reduce(table, using, draws=0)["use"].result.viscosity
    assert viscosity.value == pytest.approx(0.85, rel=1e-6)  # times are written to a microsecond


def test_invented_errors_are_those_of_the_bounds(tmp_path):
    """Ball, thermometer and clock are drawn once, for the constant's own errors too."""
    cal = drops(with_scatter(60.0, 0.0002, 30), "oil", "cal")
    using = {**calibrated(tmp_path, bench(), cal), "set": {"use": {"liquid": "glycerol"}}}
    read = pf.read_bench(using)
    found = []
    for seed in range(60):
        table = pf.simulate(read, viscosity=0.85, run_set="use", drops=4, seed=seed)
        result = pf.reduce(table, read, draws=0)["use"].result
        slope = np.exp(-0.089 * (result.temperature.value - 293.15))
        found.append((result.viscosity.value - 0.85 * slope) / result.viscosity.u)
    # sixty of them: a standard deviation of 1 within three of its own
    assert np.std(found) == pytest.approx(1.0, abs=0.3)
