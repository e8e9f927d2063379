"""Faults at a size that matters, planted in invented run sets: one or several for every code."""

from __future__ import annotations

import copy
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np
import pandas as pd

from plumbfall.planning.simulation import simulate_sets
from support.planted import bench_of

__all__ = ["FAULTS", "Fault", "Made", "changed", "invented"]

Bench = dict[str, Any]
Made = tuple[pd.DataFrame, Bench]


@dataclass(frozen=True)
class Fault:
    """A fault: the code that is to find it, what it is, and how run sets with it are made.

    ``make`` takes a number of run sets and a seed, and returns the timing table with the bench
    sheet to reduce it with.
    """

    code: str
    severity: str
    what: str
    make: Callable[[int, int], Made]


def invented(bench: Bench, sets: int, seed: int, **how: Any) -> pd.DataFrame:
    """Return good drops, each run set on a bench drawn for itself."""
    how = {"viscosity": 2.0, "drops": 10, "temperature": 298.15, "scatter": 0.001} | how
    return simulate_sets(bench, sets=sets, seed=seed, **how).table()


def changed(bench: Bench, **changes: Any) -> Bench:
    """Return a bench sheet with keys replaced; ``tube__A__bore`` reaches inside, None takes out."""
    bench = copy.deepcopy(bench)
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


def _times(table: pd.DataFrame, drop: int, factor: float) -> None:
    """Change the time of one drop of every run set."""
    table.loc[table["drop"] == drop, "time [s]"] *= factor


def one_bad_drop(sets: int, seed: int) -> Made:
    bench = bench_of(balls=1)
    table = invented(bench, sets, seed, scatter=0.003)
    _times(table, 6, 1.03)
    return table, bench


def two_bad_drops(sets: int, seed: int) -> Made:
    bench = bench_of(balls=1)
    table = invented(bench, sets, seed, scatter=0.003)
    _times(table, 3, 1.03)
    _times(table, 8, 1.032)
    return table, bench


def one_bad_drop_among_balls(sets: int, seed: int) -> Made:
    bench = bench_of(balls=3, timer="stopwatch")
    table = invented(bench, sets, seed, drops=12, viscosity=12.0)
    _times(table, 6, 1.06)
    return table, bench


def drift(sets: int, seed: int) -> Made:
    bench = bench_of(balls=2)
    rising = 2.0 * (1 + np.linspace(0, 0.015, 12))
    return invented(bench, sets, seed, drops=12, viscosity=rising, scatter=0.002), bench


def drift_by_stopwatch(sets: int, seed: int) -> Made:
    bench = bench_of(balls=2, timer="stopwatch")
    rising = 20.0 * (1 + np.linspace(0, 0.03, 12))
    return invented(bench, sets, seed, drops=12, viscosity=rising), bench


def drift_over_balls(sets: int, seed: int) -> Made:
    bench = bench_of(balls=4)
    rising = 2.0 * (1 + np.linspace(0, 0.03, 8))
    balls = ["B2", "B2", "B4", "B4", "B1", "B1", "B3", "B3"]
    return invented(bench, sets, seed, drops=8, viscosity=rising, balls=balls), bench


WARM = 298.15 + np.array([0.0, 0.3, 0.5, 0.2, 0.6, 0.1, 0.4, 0.0, 0.5, 0.3])


def wrong_slope(sets: int, seed: int) -> Made:
    bench = bench_of(balls=2, slope="-8.0(2) %/K")
    table = invented(bench, sets, seed, temperatures=WARM)
    return table, changed(bench, liquid__oil__viscosity_slope="-5.0(2) %/K")


def no_slope(sets: int, seed: int) -> Made:
    bench = bench_of(balls=2, slope="-4.0(2) %/K")
    table = invented(bench, sets, seed, temperatures=WARM)
    return table, changed(bench, liquid__oil__viscosity_slope=None)


def lagging_thermometer(sets: int, seed: int) -> Made:
    bench = bench_of(balls=1, slope="-8.0(2) %/K")
    true = 298.15 + 0.4 * np.sin(np.arange(16) * 2 * np.pi / 8)
    table = invented(bench, sets, seed, drops=16, temperatures=true)
    # the reading is what the liquid was three quarters of a drop before
    reading = table["temperature [degC]"].to_numpy().reshape(sets, 16)
    before = 25 + 0.4 * np.sin((np.arange(16) - 0.75) * 2 * np.pi / 8)
    table["temperature [degC]"] = (reading + before - (true - 273.15)).ravel()
    return table, bench


def unsettled_bath(sets: int, seed: int) -> Made:
    bench = bench_of(balls=2)
    above = 2.0 * (1 + 0.02 * np.exp(-np.arange(12) / 2.5))
    return invented(bench, sets, seed, drops=12, viscosity=above, scatter=0.001), bench


def begun_too_soon(sets: int, seed: int) -> Made:
    bench = bench_of(balls=2)
    table = invented(bench, sets, seed)
    table["started"] = "2026-03-02T08:40:00"
    names = table["set"].unique()
    return table, changed(bench, set={name: {"filled": "2026-03-02T08:10:00"} for name in names})


def one_wrong_ball(sets: int, seed: int) -> Made:
    bench = bench_of(balls=4)
    table = invented(bench, sets, seed, drops=12)
    return table, changed(bench, ball__B2__diameter="2.0213(5) mm")


def two_balls_apart(sets: int, seed: int) -> Made:
    bench = bench_of(balls=2, timer="stopwatch")
    table = invented(bench, sets, seed, drops=12, viscosity=20.0)
    size = float(bench["ball"]["B1"]["diameter"][:6])
    return table, changed(bench, ball__B1__diameter=f"{size * 1.025:.4f}(5) mm")


STEEL, GLASS, CARBIDE = "7.700(3) g/cm3", "3.200(2) g/cm3", "14.90(1) g/cm3"


def _shear_bench() -> Bench:
    balls = {
        f"B{number}": {"diameter": f"{size:.4f}(5) mm", "density": density, "gauge": "G1"}
        for number, (size, density) in enumerate(
            [(2.0, STEEL), (3.0, STEEL), (2.0, GLASS), (3.0, GLASS), (2.0, CARBIDE)], 1
        )
    }
    return changed(bench_of(), ball=balls)


def shear_thinning(sets: int, seed: int) -> Made:
    bench = _shear_bench()
    stress = np.array([(7700 - 970) * 2, (7700 - 970) * 3, (3200 - 970) * 2, (3200 - 970) * 3.0,
                       (14900 - 970) * 2])  # fmt: skip
    viscosity = 4.0 * np.resize((stress / stress[0]) ** -0.03, 15)
    return invented(bench, sets, seed, drops=15, viscosity=viscosity), bench


def wrong_bore(sets: int, seed: int) -> Made:
    bench = bench_of(balls=5)
    table = invented(bench, sets, seed, drops=15)
    return table, changed(bench, tube__A__bore="40.00(2) mm")


def wrong_bore_and_densities(sets: int, seed: int) -> Made:
    bench = _shear_bench()
    table = invented(bench, sets, seed, drops=15, viscosity=4.0)
    return table, changed(bench, tube__A__bore="40.00(2) mm")


def still_gaining_speed(sets: int, seed: int) -> Made:
    bench = bench_of(balls=2, marks=True)
    slow = 2.0 * np.array([1.01, 1.0]) * np.ones((10, 1))
    return invented(bench, sets, seed, viscosity=slow, marks=True, drops=10), bench


def layers(sets: int, seed: int) -> Made:
    bench = bench_of(balls=2)
    bench["tube"]["A"]["marks"] = ["0.00(3) mm", "60.00(5) mm", "130.00(5) mm", "200.00(5) mm"]
    thicker = 2.0 * np.array([0.99, 1.0, 1.01]) * np.ones((10, 1))
    return invented(bench, sets, seed, viscosity=thicker, marks=True, drops=10), bench


def mark_out_of_place(sets: int, seed: int) -> Made:
    bench = bench_of(balls=2, marks=True)
    table = invented(bench, sets, seed, marks=True)
    return table, changed(bench, tube__A__marks=["0.00(3) mm", "101.00(5) mm", "200.00(5) mm"])


FAULTS: tuple[Fault, ...] = (
    Fault("outlier", "warning", "one of ten drops 3 % long, drops scatter by 0.3 %", one_bad_drop),
    Fault("outlier", "warning", "two of ten drops 3 % long", two_bad_drops),
    Fault(
        "outlier", "warning", "one of twelve drops of three balls 6 % long, by stopwatch",
        one_bad_drop_among_balls,
    ),
    Fault("time-trend", "warning", "1.5 % over twelve drops that scatter by 0.2 %", drift),
    Fault("time-trend", "warning", "3 % over twelve drops, by stopwatch", drift_by_stopwatch),
    Fault("time-trend", "warning", "3 % over eight drops, two of each ball after one another",
          drift_over_balls),
    Fault(
        "temperature-trend", "warning", "-5 %/K given where -8 %/K is true, over 0.6 K", wrong_slope
    ),
    Fault("temperature-trend", "warning", "no slope given where -4 %/K is true", no_slope),
    Fault(
        "temperature-trend", "warning", "a thermometer that lags by 0.75 drops, -8 %/K, 0.8 K",
        lagging_thermometer,
    ),
    Fault("not-equilibrated", "warning", "first drops 2 % off, dying away", unsettled_bath),
    Fault("not-equilibrated", "warning", "begun 30 min after filling a bore of 50 mm",
          begun_too_soon),
    Fault("balls-disagree", "warning", "one of four balls measured 20 um too large",
          one_wrong_ball),
    Fault("balls-disagree", "warning", "one of two balls 2.5 % too large, by stopwatch",
          two_balls_apart),
    Fault(
        "shear-dependence", "warning", "viscosity falls as shear^-0.03, balls of three densities",
        shear_thinning,
    ),
    Fault("diameter-ratio-trend", "warning", "a bore of 50 mm given as 40 mm, five balls",
          wrong_bore),
    Fault(
        "diameter-ratio-trend", "warning",
        "the same with balls of three densities", wrong_bore_and_densities,
    ),
    Fault("intervals-disagree", "warning", "the upper of two intervals 1 % slow",
          still_gaining_speed),
    Fault("intervals-disagree", "warning", "2 % between top and bottom, four marks", layers),
    Fault("intervals-disagree", "warning", "the middle of three marks 1 mm out of place",
          mark_out_of_place),
)  # fmt: skip
