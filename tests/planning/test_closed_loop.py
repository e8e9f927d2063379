"""The closed loop: plan on a random bench, simulate the plan's choice, reduce, compare.

What is drawn of a bench is invented. The truth must lie within the bounds as often as they claim,
and the bounds must come out as wide as was predicted.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

import plumbfall as pf
from plumbfall.planning.simulation import simulate_sets

MATERIALS = {"steel": 7700.0, "glass": 2500.0, "ruby": 3985.0, "polymer": 1400.0}


def draw(rng: np.random.Generator) -> tuple[dict, float]:
    """Return a bench and a viscosity, both invented."""

    def spread(low: float, high: float) -> float:
        return float(np.exp(rng.uniform(math.log(low), math.log(high))))

    def measured(value: float, unit: str, relative: float) -> dict:
        u = relative * value * spread(0.3, 3.0)
        entry = {"value": value, "unit": unit, "u": u}
        if rng.random() < 0.2:
            entry["dof"] = int(rng.integers(4, 30))
        elif rng.random() < 0.2:
            entry = {"value": value, "unit": unit, "within": u * math.sqrt(3)}
        return entry

    bore = spread(15.0, 80.0)
    distance = spread(50.0, 400.0)
    liquid = float(rng.uniform(800.0, 1250.0))
    radius = bore / 2
    bench: dict = {
        "site": {"gravity": measured(9.81, "m/s2", 1e-5)},
        "timer": {
            "T": [
                {"kind": "stopwatch"},
                {"kind": "gate"},
                {"kind": "video", "per_drop": "14 ms", "bias": "0(4) ms"},
            ][rng.integers(3)]
        },
        "thermometer": {
            "P": {
                "correction": {"value": 0.02, "unit": "K", "u": spread(0.01, 0.1)},
                "per_reading": f"{spread(0.003, 0.03):.4f} K",
            }
        },
        "gauge": {"G": {"correction": {"value": 0.1, "unit": "um", "u": spread(0.2, 3.0)}}},
        "tube": {
            "A": {
                "bore": measured(bore, "mm", 5e-4),
                "distance": measured(distance, "mm", 4e-4),
                "surface_above": measured(radius * spread(2.0, 5.0), "mm", 0.01),
                "bottom_below": measured(radius * spread(1.2, 5.0), "mm", 0.01),
                "release_above": measured(radius * spread(1.0, 1.8), "mm", 0.01),
                "expansion": "9.0(5)e-6 /K",
                "measured_at": "20 degC",
            }
        },
        "ball": {},
        "liquid": {
            "oil": {
                "density": measured(liquid, "kg/m3", 2e-4),
                "density_temperature": "25 degC",
                "expansion": "7.5(5)e-4 /K",
                "viscosity_slope": {
                    "value": -rng.uniform(1.5, 8.0),
                    "unit": "%/K",
                    "u": rng.uniform(0.05, 0.5),
                },
            }
        },
    }
    for place, (name, density) in enumerate(MATERIALS.items()):
        size = bore * spread(0.02, 0.25)
        ball: dict = {"diameter": measured(size, "mm", 2e-4), "gauge": "G"}
        if rng.random() < 0.4:
            ball["mass"] = measured(density * math.pi * size**3 / 6e3, "mg", 4e-4)
            ball["mass"]["value"] *= 1e-3  # mm3 x kg/m3 / 1000 is micrograms
            for key in ("u", "within"):
                if key in ball["mass"]:
                    ball["mass"][key] *= 1e-3
        else:
            ball["density"] = measured(density, "kg/m3", 4e-4)
        if rng.random() < 0.5:
            ball |= {"lot": True, "spread": f"{1e3 * size * spread(1e-4, 2e-3):.4f} um"}
        bench["ball"][f"{name} {place}"] = ball
    if rng.random() < 0.3:
        bench["scatter"] = {"relative": f"{spread(0.1, 1.0):.3f} %", "dof": 24}
    return bench, spread(0.05, 30.0)


def loop(count: int, seed: int) -> tuple[np.ndarray, np.ndarray]:
    """Return whether the truth was covered, and the reported over the predicted uncertainty."""
    rng = np.random.default_rng(seed)
    covered, ratios = [], []
    while len(covered) < count:
        sheet, viscosity = draw(rng)
        drops = int(rng.integers(6, 11))
        bench = pf.read_bench(sheet)
        choice = pf.plan(bench, viscosity=viscosity, drops=drops).combinations[0]
        if not choice.suitable:  # nothing on this bench will do, which the plan says
            continue
        made = simulate_sets(
            bench, viscosity=viscosity, balls=choice.ball, drops=drops,
            seed=int(rng.integers(2**31)), temperature=298.15,
        )  # fmt: skip
        table = pf.reduce(made.table(), bench, draws=0).table()
        (truth,) = 1e3 * made.viscosity_at(table["temperature_degC"][0] + 273.15)
        covered.append(table["low_mPa_s"][0] <= truth <= table["high_mPa_s"][0])
        reported = table["expanded_uncertainty_mPa_s"][0] / table["viscosity_mPa_s"][0]
        ratios.append(reported / choice.relative_expanded_uncertainty)
    return np.array(covered), np.array(ratios)


def check(covered: np.ndarray, ratios: np.ndarray) -> None:
    n = len(covered)
    assert covered.mean() >= 0.95 - 3 * math.sqrt(0.95 * 0.05 / n)
    assert covered.mean() <= 0.95 + 3 * math.sqrt(0.95 * 0.05 / n)
    assert np.median(np.abs(ratios - 1)) < 0.25
    assert np.median(ratios) == pytest.approx(1.0, abs=0.1)


def test_a_few_random_benches():
    check(*loop(60, seed=20))


@pytest.mark.slow  # a minute
def test_five_hundred_random_benches():
    covered, ratios = loop(500, seed=8)
    check(covered, ratios)
