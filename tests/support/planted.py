"""Invented run sets on invented benches: clean ones over the whole range, and ones with a fault.

Nothing here decides what is found; it only plants. All equipment, liquids and data are invented.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

import numpy as np
import pandas as pd

from plumbfall.planning.simulation import simulate_sets

__all__ = ["Clean", "bench_of", "clean_benches", "many"]

SIZES = (1.5, 2.0, 2.5, 3.0, 3.5, 4.0)
"""Diameters of the balls, mm."""

TIMERS: dict[str, dict[str, str]] = {
    "stopwatch": {"kind": "stopwatch"},
    "gate": {
        "kind": "gate",
        "per_drop": "0.003 s",
        "resolution": "0.001 s",
        "bias": "0.000(1) s",
        "rate": "0(20) ppm",
    },
}


@dataclass(frozen=True)
class Clean:
    """One bench with one kind of run set: how many drops of which balls, how timed."""

    balls: int
    drops: int
    timer: str
    lot: bool
    viscosity: float
    slope: str
    scatter: float
    warmth: float
    marks: bool

    @property
    def bench(self) -> dict[str, Any]:
        """The bench sheet."""
        return bench_of(
            balls=self.balls, timer=self.timer, lot=self.lot, slope=self.slope, marks=self.marks
        )


def bench_of(
    *,
    balls: int = 3,
    timer: str = "gate",
    lot: bool = False,
    slope: str = "-2.0(1) %/K",
    marks: bool = False,
    **more: Any,
) -> dict[str, Any]:
    """Return an invented bench of steel balls, every error of it declared."""
    middle = ["100.00(5) mm"] if marks else []
    entries: dict[str, dict[str, Any]] = {}
    for number in range(balls):
        size = SIZES[(2 * number + 1) % len(SIZES)] if balls < 4 else SIZES[number]
        entry: dict[str, Any] = {"diameter": f"{size + 0.0013:.4f}(5) mm", "gauge": "G1"}
        if lot:
            entry |= {"lot": True, "spread": "0.3 um", "density": "7.700(5) g/cm3"}
        else:
            mass = 7.70e-3 * np.pi / 6 * (size + 0.0013) ** 3 * 1e3
            entry |= {"mass": f"{mass:.3f}(10) mg", "balance": "W1"}
        entries[f"B{number + 1}"] = entry
    bench: dict[str, Any] = {
        "bench": {"title": "Invented bench"},
        "site": {"gravity": "9.8123(1) m/s2"},
        "timer": {"T1": dict(TIMERS[timer])},
        "thermometer": {"P1": {"correction": "0.00(2) K", "per_reading": "0.01 K"}},
        "gauge": {"G1": {"correction": "0.0(3) um"}},
        "balance": {"W1": {"correction": "0.00(1) mg"}},
        "tube": {
            "A": {
                "bore": "50.00(2) mm",
                "marks": ["0.00(3) mm", *middle, "200.00(5) mm"],
                "surface_above": "110(2) mm",
                "bottom_below": "90(2) mm",
                "release_above": "100(2) mm",
                "release_offset": "0.0(5) mm",
                "tilt": "0.0(3) deg",
            }
        },
        "ball": entries,
        "liquid": {
            "oil": {
                "density": "970.2(2) kg/m3",
                "density_temperature": "25 degC",
                "expansion": "9.2(3)e-4 /K",
                "viscosity_slope": slope,
            }
        },
    }
    for path, value in more.items():
        *parents, last = path.split("__")
        place = bench
        for name in parents:
            place = place.setdefault(name, {})
        place[last] = value
    return bench


def clean_benches(count: int, seed: int) -> Iterator[Clean]:
    """Yield kinds of clean run sets over the whole range that the program is meant for."""
    draw = np.random.default_rng(seed)
    for number in range(count):
        balls = int(draw.integers(1, 7))
        timer = ("stopwatch", "gate")[number % 2]
        slow = 6.0 if timer == "stopwatch" else 1.0
        yield Clean(
            balls=balls,
            drops=int(draw.integers(3, 31)),
            timer=timer,
            lot=bool(draw.random() < 0.3),
            viscosity=slow * float(np.exp(draw.uniform(np.log(1.0), np.log(6.0)))),
            slope=("-2.0(1) %/K", "-8.2(4) %/K")[int(draw.integers(2))],
            scatter=float(draw.choice([0.0, 0.001, 0.003])),
            warmth=float(draw.choice([0.0, 0.02, 0.15])),
            marks=bool(draw.random() < 0.3),
        )


def many(clean: Clean, sets: int, seed: int) -> pd.DataFrame:
    """Return the timing table of clean run sets, each on a bench drawn for itself."""
    draw = np.random.default_rng(seed)
    temperatures = 298.15 + clean.warmth * draw.standard_normal(clean.drops)
    return simulate_sets(
        clean.bench,
        viscosity=clean.viscosity,
        sets=sets,
        drops=clean.drops,
        seed=seed,
        temperature=298.15,
        temperatures=temperatures,
        marks=clean.marks,
        scatter=clean.scatter,
    ).table()
