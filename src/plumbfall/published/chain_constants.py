"""Tube constants worked by hand: from a certified liquid to the constant, and to an unknown.

All numbers are invented and round. With K = viscosity / ((ball density - liquid density) time) at
the calibration and viscosity = K (ball density - liquid density) time in use, the elasticity to
the ball's density is rho/(rho - rho_use) - rho/(rho - rho_cal), and the thermometer's error counts
by the difference of the liquids' temperature slopes.
"""

from __future__ import annotations

import math
import tempfile
from collections.abc import Callable
from functools import cache, partial
from pathlib import Path
from typing import Any

import pandas as pd

from plumbfall.bench.reader import read_bench
from plumbfall.calibration.constant import calibrate_tubes
from plumbfall.published.figure import DEFINITION, figures
from plumbfall.reduction.drops import reduce_drops
from plumbfall.report.calibrate_result import CalibrationReport
from plumbfall.results import RunSetResult
from plumbfall.timings.reader import read_timings

__all__ = ["FIGURES"]

_STEPS = [step / math.sqrt(2.5) for step in (-2, -1, 0, 1, 2)]
_TIMES = [60.0 * (1 + 0.001 * step) for step in _STEPS]  # their standard deviation is 0.1 %


def _sheet(ball: float, u_kelvin: float) -> dict[str, Any]:
    return {
        "thermometer": {"P": {"correction": {"value": 0.0, "unit": "K", "u": u_kelvin}}},
        "tube": {"T": {"kind": "calibrated", "constant": "K"}},
        "ball": {"b": {"diameter": "15 mm", "density": f"{ball} ± 1 kg/m3, k=1"}},
        "liquid": {
            "oil": {"density": "870 kg/m3", "viscosity_slope": "-6.5 %/K"},
            "glycerol": {"density": "1261 kg/m3", "viscosity_slope": "-8.9 %/K"},
            "light": {"density": "1000 kg/m3", "viscosity_slope": "-2 %/K"},
        },
        "reference": {
            "R": {
                "liquid": "oil",
                "viscosity": [
                    {
                        "temperature": "20 degC",
                        "value": {"value": 1.2021, "unit": "Pa.s", "u": 0.0015 * 1.2021},
                    }
                ],
            }
        },
        "constant": {"K": {"value": "0.007 mPa.s.cm3/(g.s)"}},
    }


def _table(liquid: str) -> pd.DataFrame:
    return pd.DataFrame({"liquid": liquid, "time [s]": _TIMES, "temperature [degC]": 20.0})


@cache
def _calibrated(ball: float, u_kelvin: float) -> CalibrationReport:
    bench = read_bench(_sheet(ball, u_kelvin))
    return CalibrationReport(calibrate_tubes(read_timings(_table("oil"), bench), bench, ["R"]))


@cache
def _used(ball: float, liquid: str, thermometer: str = "") -> RunSetResult:
    """Measure a liquid with the constant, by the thermometer of the calibration or another."""
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "constant.json"
        _calibrated(ball, 0.05).to_json(path)
        sheet = {**_sheet(ball, 0.05), "constant": {"K": {"file": str(path)}}}
        sheet["thermometer"]["P"]["identity"] = thermometer
        bench = read_bench(sheet)
        reduction = reduce_drops(read_timings(_table(liquid), bench), bench)
        return reduction.run_set(reduction.names[0])


def _elasticity(ball: float, liquid: str) -> float:
    result = _used(ball, liquid)
    line = next(line for line in result.budget if line.input == "ball.b.density")
    return line.sensitivity * line.value / _viscosity(result)


def _percent(start: str, thermometer: str = "") -> float:
    """Relative part of inputs of a name in the uncertainty, whenever they were met, %."""
    result = _used(7700.0, "glycerol", thermometer)
    parts = [line.contribution for line in result.budget if line.input.startswith(start)]
    return 100 * math.hypot(*parts) / _viscosity(result)


def _viscosity(result: RunSetResult) -> float:
    assert result.viscosity is not None  # the drops are sound
    return result.viscosity.value


def _constant() -> float:
    return 1e6 * _calibrated(7700.0, 0.05).constants[0].stored.value


def _constant_u() -> float:
    """Of certificate, scatter and temperature alone: the ball's density left out, %."""
    stored = _calibrated(7700.0, 0.06 / 6.5).constants[0].stored
    (ball,) = (one for one in stored.inputs if one.estimate.name == "ball.b.density")
    without = stored.u**2 - (ball.sensitivity * ball.estimate.u) ** 2
    return 100 * math.sqrt(without) / stored.value


def _by_hand() -> float:
    bench = read_bench(_sheet(2230.0, 0.05))
    reduction = reduce_drops(read_timings(_table("oil"), bench), bench)
    return 1e3 * _viscosity(reduction.run_set(reduction.names[0]))


_ROWS: tuple[tuple[str, str, Callable[[], float]], ...] = (
    ("chain.constant.viscosity", "0.5712", _by_hand),
    ("chain.constant.value", "2.93338", _constant),
    ("chain.constant.uncertainty", "0.1676", _constant_u),
    ("chain.constant.steel", "0.06846", partial(_elasticity, 7700.0, "glycerol")),
    ("chain.constant.glass", "0.66164", partial(_elasticity, 2230.0, "glycerol")),
    ("chain.constant.glass-light", "0.17330", partial(_elasticity, 2230.0, "light")),
    ("chain.constant.thermometer", "0.1200", partial(_percent, "thermometer.P")),
    ("chain.constant.thermometers", "0.5510", partial(_percent, "thermometer.P", "another")),
    ("chain.constant.certificate", "0.1500", partial(_percent, "reference.R")),
)

FIGURES = figures(
    "chain",
    DEFINITION,
    "tube constants worked by hand: viscosity (mPa.s), constant (mPa.s.cm3/(g.s)) and its "
    "uncertainty (%), net elasticity to the ball's density, parts of one thermometer, of two, and "
    "of the certificate (%)",
    _ROWS,
)
"""A steel ball of 7700 and a glass one of 2230 kg/m3, calibrated at 870, used at 1261 and 1000."""
