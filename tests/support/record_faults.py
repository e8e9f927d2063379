"""Faults of the bench sheet, the record and the times, planted in invented run sets."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from typing import Any

import numpy as np
import pandas as pd

from support.faults import Fault, Made, changed, invented
from support.planted import bench_of

__all__ = ["FAULTS_OF_RECORDS"]

Alter = Callable[[pd.DataFrame, np.random.Generator], None]


def _sheet(changes: dict[str, Any], how: dict[str, Any], sets: int, seed: int) -> Made:
    """Return good drops, and a bench sheet with keys changed after they were made."""
    bench = bench_of(
        balls=how.get("balls", 2), timer=how.get("timer", "gate"), **how.get("true", {})
    )
    table = invented(bench, sets, seed, **how.get("drops", {}))
    if "started" in how:
        table["started"] = how["started"]
    return table, changed(bench, **changes)


def sheet(how: dict[str, Any] | None = None, **changes: Any) -> Callable[[int, int], Made]:
    """Return a maker of good drops with a wrong bench sheet."""
    return partial(_sheet, changes, how or {})


def _record(
    alter: Alter, timer: str, balls: int, how: dict[str, Any], sets: int, seed: int
) -> Made:
    bench = bench_of(balls=balls, timer=timer)
    table = invented(bench, sets, seed, **how)
    for name, rows in table.groupby("set", sort=False):
        part = rows.reset_index(drop=True)
        alter(part, np.random.default_rng([seed, len(str(name)), int(rows.index[0])]))
        for column in part:
            if column not in table:
                table[column] = ""
            table.loc[rows.index, column] = part[column].to_numpy()
    return table, bench


def record(
    alter: Alter, *, timer: str = "stopwatch", balls: int = 1, **how: Any
) -> Callable[[int, int], Made]:
    """Return a maker of drops whose record is altered, run set by run set."""
    return partial(_record, alter, timer, balls, how)


TIME = "time [s]"


def rounded(rows: pd.DataFrame, draw: np.random.Generator) -> None:
    rows[TIME] = rows[TIME].round(0)


def scattered(rows: pd.DataFrame, draw: np.random.Generator) -> None:
    rows[TIME] = (rows[TIME] * (1 + 0.012 * draw.standard_normal(len(rows)))).round(2)


def too_good(rows: pd.DataFrame, draw: np.random.Generator) -> None:
    rows[TIME] = (rows[TIME].mean() + 0.02 * draw.standard_normal(len(rows))).round(2)


def as_decimals(rows: pd.DataFrame, draw: np.random.Generator) -> None:
    seconds = rows[TIME].round(0)
    rows[TIME] = (seconds // 60 + (seconds % 60) / 100) * 60


def copied(rows: pd.DataFrame, draw: np.random.Generator) -> None:
    for column in (TIME, "temperature [degC]"):
        rows.loc[5:, column] = rows.loc[:4, column].to_numpy()


def void(rows: pd.DataFrame, draw: np.random.Generator, *, note: str, count: int) -> None:
    rows["status"] = ""
    rows["note"] = ""
    rows.loc[: count - 1, "status"] = "void"
    rows.loc[: count - 1, "note"] = note


def fast(rows: pd.DataFrame, draw: np.random.Generator, *, factor: float) -> None:
    rows[TIME] *= factor


def taken_for_another(rows: pd.DataFrame, draw: np.random.Generator) -> None:
    """One drop of the second ball is written down as one of the first."""
    rows.loc[5, "ball"] = "B1"


FILLED = "2026-03-02T08:10:00"
NO_UNCERTAINTY = {
    "gauge__G1__correction": "0.0 um",
    "thermometer__P1__correction": "0.00 K",
    "liquid__oil__density": "970.2 kg/m3",
    "tube__A__marks": ["0.00 mm", "200.00 mm"],
    "ball__B1__diameter": "2.0013 mm",
    "ball__B1__mass": "32.317 mg",
    "balance__W1__correction": "0.00 mg",
    "methods__model_uncertainty": "0.001 %",
}
WIDE = {"temperatures": 298.15 + np.linspace(0, 1.5, 10)}
WARM = {"temperatures": 298.15 + np.resize([0.0, 0.0, 0.5, 0.5], 10)}

FAULTS_OF_RECORDS: tuple[Fault, ...] = (
    Fault("ball-not-denser", "error", "the liquid's density ten times too large",
          sheet(liquid__oil__density="9702(2) kg/m3")),
    Fault("no-solution", "error", "times a thousand times too short",
          record(partial(fast, factor=1e-3), timer="gate")),
    Fault("reynolds-high", "error", "times 40 times too short",
          record(partial(fast, factor=1 / 40), timer="gate", viscosity=1.0)),
    Fault("reynolds-high", "warning", "a law good to Reynolds number 10, used at 5 to 9",
          sheet({"drops": {"viscosity": 0.08}}, methods__drag="screened schiller-naumann")),
    Fault("diameter-ratio-high", "error", "a bore of 3.05 mm given for a ball of 3 mm",
          sheet(tube__A__bore="3.05(1) mm")),
    Fault("radius-as-diameter-suspected", "error", "a radius written as the diameter",
          sheet(ball__B1__diameter="1.0007(5) mm")),
    Fault("density-implausible", "error", "a mass ten times too large",
          sheet(ball__B1__mass="1089.(1) mg")),
    Fault("run-in-short", "warning", "let go 2 mm above the first mark, 100 mPa.s",
          sheet({"drops": {"viscosity": 0.1}, "true": {"tube__A__release_above": "2.0(1) mm"}})),
    Fault("end-near", "warning", "the last mark 12 mm above the bottom",
          sheet(tube__A__bottom_below="12(1) mm")),
    Fault("off-axis-suspected", "warning", "let go 23 mm off the axis of a bore of 50 mm",
          sheet(tube__A__release_offset="23.0(5) mm")),
    Fault("temperature-spread", "warning", "temperatures over 1.5 K", sheet({"drops": WIDE})),
    Fault("slope-unknown", "warning", "no slope, temperatures over 0.5 K",
          sheet({"drops": WARM}, liquid__oil__viscosity_slope=None)),
    Fault("density-temperature", "warning", "density of 5 degC without expansion",
          sheet(liquid__oil__density_temperature="5 degC", liquid__oil__expansion=None)),
    Fault("unit-slip-suspected", "warning", "a slope without its minus",
          sheet(liquid__oil__viscosity_slope="2.0(1) %/K")),
    Fault("unit-slip-suspected", "warning", "centimetres written as millimetres, liquid certified",
          sheet(reference={"R": {"liquid": "oil", "viscosity": [
              {"temperature": "25 degC", "value": "2.00 ± 0.01 Pa.s, k=2"}]}},
              tube__A__marks=["0.000(3) mm", "20.000(5) mm"])),
    Fault("density-implausible", "warning", "a weighed steel ball of 7.47 g/cm3",
          sheet(ball__B1__mass="31.35(1) mg")),
    Fault("swapped-ball-suspected", "warning",
          "one drop of ten of a 3 mm ball written down as of a 2 mm one",
          record(taken_for_another, balls=2)),
    Fault("fall-time-short", "warning", "falls of 3 s by stopwatch",
          sheet({"timer": "stopwatch", "drops": {"viscosity": 0.25}})),
    Fault("resolution-coarse", "warning", "whole seconds of a stopwatch that reads 0.01 s",
          record(rounded)),
    Fault("scatter-large", "warning", "drops scatter by 1.2 %, by stopwatch",
          record(scattered, viscosity=6.0)),
    Fault("scatter-small", "warning", "times by hand that scatter by 0.02 s", record(too_good)),
    Fault("minutes-as-decimals-suspected", "warning", "1 min 58 s typed as 1.58",
          record(as_decimals, viscosity=8.04, scatter=0.006)),
    Fault("duplicate-rows", "warning", "five rows copied", record(copied)),
    Fault("many-excluded", "warning", "three of ten drops void",
          record(partial(void, note="bubble", count=3))),
    Fault("void-without-reason", "warning", "a void drop without a note",
          record(partial(void, note="", count=1))),
    Fault("calibration-overdue", "warning", "a timer due the day before",
          sheet({"started": FILLED}, timer__T1__due="2026-03-01")),
    Fault("reference-expired", "warning", "a certified liquid that has expired",
          sheet({"started": FILLED}, reference={"R": {
              "liquid": "oil", "expires": "2026-01-31",
              "viscosity": [{"temperature": "25 degC", "value": "2.00 ± 0.01 Pa.s, k=2"}]}})),
    Fault("uncertainty-implausible", "warning", "nearly everything said to be exact",
          sheet({"drops": {"scatter": 0.0}, "balls": 1}, **NO_UNCERTAINTY)),
    Fault("too-few-drops", "note", "three drops", sheet({"drops": {"drops": 3}})),
    Fault("reused-balls", "note", "ten drops of two balls", sheet()),
    Fault("nominal-diameter", "note", "a diameter of 2 mm as the catalogue has it",
          sheet(ball__B1__diameter="2.000(5) mm")),
    Fault("geometry-unknown", "note", "no distance to the bottom",
          sheet(tube__A__bottom_below=None)),
    Fault("missing-uncertainty", "note", "a bore without uncertainty",
          sheet(tube__A__bore="50 mm")),
    Fault("default-gravity", "note", "no gravity", sheet(site={})),
)  # fmt: skip
