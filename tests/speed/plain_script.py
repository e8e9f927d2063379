"""What a careful lab script does with the same rows: one row after another.

pandas.apply, a root-finder for every drop (scipy's brentq on the force balance), and
uncertainties.wrap to carry the shared errors. It is the baseline that the benchmarks compare with.
"""

from __future__ import annotations

import math
from collections.abc import Callable

import pandas as pd
import uncertainties
from scipy.optimize import brentq
from uncertainties import ufloat

__all__ = ["run_script"]


def wall(ratio: float) -> float:
    """Bohlin 1960."""
    r = ratio
    return 1 / (
        1 - 2.10443 * r + 2.08877 * r**3 - 0.94813 * r**5 - 1.372 * r**6 + 3.87 * r**8
        - 4.19 * r**10
    )  # fmt: skip


def viscosity(
    time: float, diameter: float, ball: float, liquid: float, bore: float, length: float, g: float
) -> float:
    """Solve the force balance of one drop with walls and inertia."""
    speed = length / time
    weight = (ball - liquid) * g * math.pi * diameter**3 / 6
    excess = wall(diameter / bore) - 1

    def surplus(log_viscosity: float) -> float:
        eta = math.exp(log_viscosity)
        reynolds = liquid * speed * diameter / eta
        inertia = 0.15 * reynolds**0.687
        factor = 1 + math.hypot(excess, inertia)
        return math.log(factor * 3 * math.pi * eta * diameter * speed / weight)

    return math.exp(brentq(surplus, math.log(1e-4), math.log(1e4), xtol=1e-10))


def run_script(table: pd.DataFrame, ball: dict[str, float]) -> pd.DataFrame:
    """Return each set's mean with its uncertainty, row by row as a script does."""
    solve: Callable[..., object] = uncertainties.wrap(viscosity)
    bore, length = ufloat(50e-3, 0.02e-3), ufloat(200e-3, 0.05e-3)
    steel, oil, g = ufloat(7700.0, 3.0), ufloat(970.2, 0.2), ufloat(9.8123, 1e-4)
    diameters = {name: ufloat(d, 0.5e-6) for name, d in ball.items()}

    def one(row: pd.Series) -> object:
        time = ufloat(row["time [s]"], 0.003)
        return solve(time, diameters[row["ball"]], steel, oil, bore, length, g)

    drops = table.assign(viscosity=table.apply(one, axis=1))
    return drops.groupby("set", observed=True)["viscosity"].agg(lambda v: v.sum() / len(v))
