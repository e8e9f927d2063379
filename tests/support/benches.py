"""An invented bench, as a dict, and drops that obey the measurement equation on it.

All equipment, liquids and data here are invented.
"""

from __future__ import annotations

import copy
from typing import Any

import numpy as np
import pandas as pd

import plumbfall as pf

BENCH: dict[str, Any] = {
    "bench": {"title": "Invented bench"},
    "site": {"gravity": "9.8123(1) m/s2"},
    "timer": {
        "T1": {
            "kind": "gate",
            "per_drop": "0.003 s",
            "resolution": "0.001 s",
            "bias": "0.002(1) s",
            "rate": "5(20) ppm",
        }
    },
    "thermometer": {"P1": {"correction": "0.03(2) K", "per_reading": "0.01 K"}},
    "gauge": {"G1": {"correction": "0.2(5) um"}},
    "balance": {"W1": {"correction": "0.02(5) mg"}},
    "tube": {
        "A": {
            "bore": "50.00(2) mm",
            "marks": ["0.00(3) mm", "200.00(5) mm"],
            "surface_above": "80(2) mm",
            "bottom_below": "80(2) mm",
            "release_above": "70(2) mm",
            "tilt": "0.5(3) deg",
            "expansion": "9.0(5)e-6 /K",
            "measured_at": "20 degC",
        }
    },
    "material": {"steel": {"density": "7.700(3) g/cm3", "expansion": "10.4(4)e-6 /K"}},
    "ball": {
        "B1": {"diameter": "2.0003(2) mm", "material": "steel", "gauge": "G1"},
        "B2": {"diameter": "2.5001(2) mm", "density": "7.690(2) g/cm3", "gauge": "G1"},
        "B3": {
            "diameter": "3.0002(2) mm",
            "mass": "108.85(1) mg",
            "gauge": "G1",
            "balance": "W1",
            "expansion": "10.4(4)e-6 /K",
        },
        "B4": {"diameter": "4.0001(2) mm", "mass": "258.0(1) mg", "balance": "W1"},
    },
    "liquid": {
        "oil": {
            "density": "970.2(2) kg/m3",
            "density_temperature": "25 degC",
            "expansion": "9.2(3)e-4 /K",
            "viscosity_slope": "-2.0(2) %/K",
        }
    },
}


def bench_dict(**changes: Any) -> dict[str, Any]:
    """Return the invented bench with keys replaced; ``tube__A__bore="…"`` reaches inside."""
    bench = copy.deepcopy(BENCH)
    for path, value in changes.items():
        *parents, last = path.split("__")
        place = bench
        for name in parents:
            place = place.setdefault(name, {})
        if value is None:
            place.pop(last, None)
        else:
            place[last] = value
    return bench


def drops_table(
    times: dict[str, list[float]], *, run_set: str = "A", temperature: float = 25.0
) -> pd.DataFrame:
    """Return a timing table with the times (s) of each ball."""
    return pd.DataFrame(
        [
            {"set": run_set, "ball": ball, "time [s]": time, "temperature [degC]": temperature}
            for ball, of_ball in times.items()
            for time in of_ball
        ]
    )


def exact_time(
    *, viscosity: float, diameter: float, density: float, liquid_density: float, bore: float,
    distance: float, gravity: float,
) -> float:  # fmt: skip
    """Return the time between marks of a steady fall, by bisection on the force balance alone."""
    weight = (density - liquid_density) * gravity * np.pi * diameter**3 / 6
    low, high = 1e-9, 1e3
    for _ in range(200):
        speed = np.sqrt(low * high)
        reynolds = liquid_density * speed * diameter / viscosity
        factor = pf.physics.tube_drag_factor(diameter_ratio=diameter / bore, reynolds=reynolds)
        drag = factor * 3 * np.pi * viscosity * diameter * speed
        low, high = (speed, high) if drag < weight else (low, speed)
    return float(distance / speed)
