"""An invented bench with one calibrated tube, as METROLOGY's figures for K have it."""

from __future__ import annotations

from typing import Any

import numpy as np
import pandas as pd

import plumbfall as pf

STEEL, GLASS = 7700.0, 2230.0


def bench(ball_density: str = "7700(23) kg/m3", **sections: Any) -> dict[str, Any]:
    """Return a bench with an oil of 870 kg/m3 certified at 20 degC, and liquids to be measured."""
    sheet: dict[str, Any] = {
        "timer": {"T": {"per_drop": "0.05 s", "bias": "0.00(3) s"}},
        "thermometer": {"P": {"correction": "0.00(5) K", "identity": "TH-1"}},
        "tube": {"incl": {"kind": "calibrated", "constant": "K", "tilt": "10.0 deg"}},
        "ball": {"s": {"diameter": "15.600(1) mm", "density": ball_density}},
        "liquid": {
            "oil": {"density": "870.0(2) kg/m3"},
            "thin oil": {"density": "840.0(2) kg/m3"},
            "glycerol": {"density": "1261.0(2) kg/m3", "viscosity_slope": "-8.9 %/K"},
            "light": {"density": "1000.0(2) kg/m3", "viscosity_slope": "-2.0 %/K"},
        },
        "reference": {
            "R": {
                "liquid": "oil",
                "certificate": "C-1",
                "identity": "bottle 7",
                "viscosity": points(1.2021, 0.0015, -0.065),
            },
            "R2": {"liquid": "thin oil", "viscosity": points(0.3000, 0.0015, -0.055)},
        },
        "constant": {"K": {"file": "constant.json"}},
    }
    return {**sheet, **sections}


def points(viscosity: float, relative_u: float, slope: float) -> list[dict[str, Any]]:
    """Return a certificate at 19, 20 and 21 degC, of an oil with a slope at 20 degC."""
    values = [viscosity * np.exp(slope * at + 0.5e-3 * at**2) for at in (-1, 0, 1)]
    return [
        {
            "temperature": f"{celsius} degC",
            "value": {"value": float(value), "unit": "Pa.s", "u": float(relative_u * value)},
        }
        for celsius, value in zip((19, 20, 21), values, strict=True)
    ]


def drops(times: list[float], liquid: str, run_set: str, **columns: Any) -> pd.DataFrame:
    """Return a timing table of one set, at 20 degC."""
    table = {"set": run_set, "liquid": liquid, "time [s]": times, "temperature [degC]": 20.0}
    return pd.DataFrame({**table, **columns})


def with_scatter(mean: float, relative: float, n: int) -> list[float]:
    """Return times of exactly this mean and standard deviation."""
    pattern = np.arange(n) - (n - 1) / 2
    return (mean * (1 + relative * pattern / pattern.std(ddof=1))).tolist()


def calibrated(folder, sheet: dict[str, Any], table: pd.DataFrame, *references: str):
    """Calibrate, write constant.json into a folder, and return the bench that uses it."""
    found = pf.calibrate(table, sheet, reference=references or ("R",))
    found.to_json(folder / "constant.json")
    return {**sheet, "constant": {"K": {"file": str(folder / "constant.json")}}}
