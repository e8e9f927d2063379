"""Invented run sets to test the report with: no drop here was ever timed.

The figures hang together (bounds, shares, means) as a reduction's would, but come from nowhere.
"""

from __future__ import annotations

import datetime as dt
import math
from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from functools import cached_property
from types import MappingProxyType
from typing import Any

import numpy as np
import pandas as pd
from scipy import sparse

from plumbfall.bench.records import (
    Ball,
    Bench,
    Identity,
    Liquid,
    Methods,
    Scatter,
    Site,
    Thermometer,
    Timer,
    Tube,
)
from plumbfall.errors import Problem
from plumbfall.estimate import Estimate
from plumbfall.results import (
    BallResult,
    BudgetLine,
    Correction,
    DropResult,
    Finding,
    Histogram,
    Measured,
    MonteCarloResult,
    Quantity,
    RunSetResult,
    TemperatureFitResult,
)
from plumbfall.run_sets.joint import Joint, Label
from plumbfall.timings.records import COLUMNS, Repair, TimingFile, Timings

HOSTILE_NAMES = ("<script>alert(1)</script>", "=cmd()", "../../x", "n" * 300)
HOSTILE_NOTE = '=cmd("&<b>") \x1b[31m $x^2 style="fill: red"'

CORRECTIONS = (
    Correction("wall", 1.09184, "exact", "computed tables, creeping flow in a long tube"),
    Correction("inertia", 1.00034, "screened", "computed tables, Navier-Stokes"),
    Correction("end", 1.0, "negligible", "no end within one bore radius of the marks"),
)


def measured(value: float, u: float, k: float | None = 2.0, dof: float | None = 61.3) -> Measured:
    expanded = u * (k or 2.0)
    return Measured(
        value=value,
        unit="Pa.s",
        u=u,
        effective_dof=dof,
        coverage_probability=0.95,
        coverage_factor=k,
        expanded=expanded,
        low=value - expanded,
        high=value + expanded,
        method="linear" if k else "monte-carlo",
    )


def budget(u: float) -> tuple[BudgetLine, ...]:
    parts = (
        ("tube.A.bore", 0.05, "m", 2e-5, "normal", math.inf, "shared", 0.06),
        ("tube.A.distance", 0.2, "m", 5e-5, "normal", math.inf, "shared", 0.09),
        ("thermometer.bath.correction", 0.0, "K", 0.05, "rectangular", math.inf, "shared", 0.34),
        ("liquid.oil.density", 970.2, "kg/m3", 0.2, "normal", 9.0, "shared", 0.01),
        ("timer.watch.rate", 0.0, "1", 2e-5, "normal", math.inf, "shared", 0.005),
        ("ball.a.diameter", 0.002, "m", 5e-7, "normal", 9.0, "ball", 0.115),
        ("timer.watch.per_drop", 0.0, "s", 0.1, "normal", math.inf, "drop", 0.38),
    )
    return tuple(
        BudgetLine(
            input=name,
            value=value,
            unit=unit,
            u=spread,
            distribution=shape,
            dof=dof,
            sensitivity=math.sqrt(share) * u / spread,
            contribution=math.sqrt(share) * u,
            share=share,
            scope=scope,
        )
        for name, value, unit, spread, shape, dof, scope, share in parts
    )


def drop(number: int, value: float, scale: float, **changes: Any) -> DropResult:
    made = DropResult(
        file="runs/invented.csv",
        line=number + 1,
        drop=number,
        ball="abcd"[(number - 1) % 4],
        time=12.67 * value / scale,
        temperature=298.15 + 0.01 * (number % 3),
        viscosity=value * 0.9998,
        viscosity_at_set=value,
        stokes_viscosity=value * 1.0922,
        reynolds=0.036,
        fall_speed=0.01578,
        wall=1.09184,
        inertia=1.00034,
        end=1.0,
        residual=value / scale - 1.0,
        used=True,
        status="used",
        note="",
    )
    return replace(made, **changes)


def not_used(number: int, status: str, note: str, time: float = math.nan) -> DropResult:
    return drop(
        number,
        1.0,
        1.0,
        time=time,
        viscosity=None,
        viscosity_at_set=None,
        stokes_viscosity=None,
        reynolds=None,
        fall_speed=None,
        wall=None,
        inertia=None,
        end=None,
        residual=None,
        used=False,
        status=status,
        note=note,
    )


def valid_set(name: str, value: float = 0.8513) -> RunSetResult:
    """Four balls, eight drops, nothing to find."""
    wiggle = (0.9985, 1.0012, 0.9994, 1.0021, 1.0003, 0.9979, 1.0009, 0.9997)
    u = value * 0.00247
    return RunSetResult(
        name=name,
        status="valid",
        summary="",
        n_drops=8,
        n_balls=4,
        n_read=8,
        tube="A",
        liquid="oil",
        temperature=Quantity(298.15, "K", 0.029),
        reference_temperature=298.15,
        viscosity=measured(value, u),
        viscosity_at_reference=measured(value, u * 1.01),
        kinematic_viscosity=replace(measured(value / 970.2, u / 970.2), unit="m2/s"),
        stokes_viscosity=Quantity(value * 1.0922, "Pa.s", u * 1.1),
        liquid_density=970.2,
        reynolds=0.036,
        diameter_ratio=0.04,
        shear_rate=23.7,
        shear_stress=20.1,
        corrections=CORRECTIONS,
        budget=budget(u),
        balls=tuple(
            BallResult(ball, 2, Quantity(value, "Pa.s", u / 2), 0.036, 0.04, 23.7, 20.1)
            for ball in "abcd"
        ),
        drops=tuple(drop(n, value * w, value) for n, w in enumerate(wiggle, 1)),
        findings=(),
    )


def warned_set(name: str) -> RunSetResult:
    """Warnings, a note, a void drop and one excluded by rule; Monte Carlo bounds."""
    made = valid_set(name, 1.2021)
    drops = (
        *made.drops[:5],
        replace(made.drops[5], findings=("outlier",), residual=0.031),
        not_used(7, "void", HOSTILE_NOTE, 9.1),
        not_used(8, "excluded", "no-time"),
    )
    findings = (
        Finding(
            "outlier",
            "warning",
            "drop 6 lies apart from the others",
            "look at the recording of drop 6; void it with a reason, or keep it",
            drops=(6,),
            statistic=2.41,
            p_value=0.00031,
            effect=0.031,
            detectable=0.012,
        ),
        Finding("missing-uncertainty", "note", "tube.A.tilt has no uncertainty", "state one"),
    )
    drops = tuple(
        replace(drop, interval_ratios=(0.99 + 0.001 * drop.drop, 1.01 - 0.001 * drop.drop))
        if drop.used
        else drop
        for drop in drops
    )
    counts = (1, 40, 900, 6000, 20_000, 49_000, 60_000, 41_000, 16_000, 5000, 1900, 140)
    drawn = MonteCarloResult(
        low=1.1793,
        high=1.2301,
        shortest_low=1.1781,
        shortest_high=1.2288,
        standard_uncertainty=0.0123,
        draws=200_000,
        validated_linear=True,
        undefined=12,
        histogram=Histogram(1.154, 1.255, counts, below=2, above=5),
    )
    return replace(
        made,
        linear=measured(1.2021, 0.0123),
        monte_carlo=drawn,
        status="valid-with-warnings",
        n_drops=6,
        drops=drops,
        findings=findings,
        viscosity=replace(measured(1.2021, 0.0123, None, None), low=1.1793, high=1.2301),
        viscosity_at_reference=None,
        reference_temperature=None,
    )


def invalid_set(name: str) -> RunSetResult:
    """No viscosity: the balls float."""
    made = valid_set(name)
    return replace(
        made,
        status="invalid",
        n_drops=0,
        n_balls=0,
        temperature=None,
        viscosity=None,
        viscosity_at_reference=None,
        kinematic_viscosity=None,
        stokes_viscosity=None,
        reynolds=None,
        shear_rate=None,
        shear_stress=None,
        corrections=(),
        budget=(),
        balls=(),
        drops=tuple(not_used(n, "used", "", 12.0 + n) for n in range(1, 4)),
        n_read=3,
        findings=(
            Finding(
                "ball-not-denser",
                "error",
                "ball a (965 kg/m3) is not denser than the liquid (970 kg/m3)",
                "check ball.a.density and liquid.oil.density, or use a denser ball",
            ),
        ),
    )


def estimate(value: float, u: float, unit: str, name: str, text: str = "") -> Estimate:
    return Estimate(value, u, "normal" if u else "exact", math.inf, name, unit, text)


def bench(**changes: Any) -> Bench:
    watch = Timer(
        name="watch",
        kind="stopwatch",
        per_drop=estimate(0.1, 0.0, "s", "timer.watch.per_drop", "0.10 s"),
        bias=estimate(0.0, 0.03, "s", "timer.watch.bias", "0.00(3) s"),
        rate=estimate(0.0, 2e-5, "1", "timer.watch.rate", "0(20) ppm"),
        resolution=None,
        usual_values=("bias",),
        usual_source="an invented source",
        identity=Identity(identity="W-3", certificate="C 17", due=dt.date(2027, 1, 31)),
    )
    bath = Thermometer(name="bath", correction=estimate(0.0, 0.05, "K", "thermometer.bath"))
    tube = Tube(
        name="A",
        bore=estimate(0.05, 2e-5, "m", "tube.A.bore", "50.00(2) mm"),
        marks=(
            estimate(0.0, 0.0, "m", "tube.A.marks[0]"),
            estimate(0.2, 5e-5, "m", "tube.A.marks[1]"),
        ),
        identity=Identity(identity="T-1", calibrated=dt.date(2026, 1, 12)),
    )
    balls = {
        name: Ball(
            name=name,
            diameter=estimate(0.002, 5e-7, "m", f"ball.{name}.diameter", "2.0000(5) mm"),
            density=estimate(7700.0, 3.0, "kg/m3", f"ball.{name}.density", "7.700(3) g/cm3"),
        )
        for name in "abcd"
    }
    made = Bench(
        title="Invented oils, second week",
        reference_temperature=298.15,
        laboratory=MappingProxyType({"name": "A laboratory that does not exist"}),
        sample=MappingProxyType({"identity": "<b>sample</b>"}),
        site=Site(gravity=estimate(9.8123, 1e-4, "m/s2", "site.gravity", "9.8123(1) m/s2")),
        timers=MappingProxyType({"watch": watch}),
        thermometers=MappingProxyType({"bath": bath}),
        tubes=MappingProxyType({"A": tube}),
        balls=MappingProxyType(balls),
        liquids=MappingProxyType(
            {"oil": Liquid(name="oil", density=estimate(970.2, 0.2, "kg/m3", "liquid.oil.density"))}
        ),
        scatter=Scatter(relative=estimate(0.003, 0.0, "1", "scatter.relative", "0.30 %"), dof=24),
        methods=Methods(drag="screened"),
        path="bench.toml",
    )
    return replace(made, **changes)


@dataclass(frozen=True, eq=False)
class InventedReduction:
    """Stands where a reduction does; ``correlated`` is the correlation between any two sets."""

    sets: tuple[RunSetResult, ...]
    bench: Bench = field(default_factory=bench)
    correlated: float = 0.6
    inputs: tuple[tuple[str, str], ...] = (
        ("runs/invented.csv", "0f" * 32),
        ("bench.toml", "a1" * 32),
    )
    coverage: float = 0.95
    seed: int = 0
    findings: tuple[Finding, ...] = ()
    temperature_fits: tuple[TemperatureFitResult, ...] = ()

    @property
    def names(self) -> tuple[str, ...]:
        return tuple(result.name for result in self.sets)

    @property
    def rows(self) -> Mapping[str, int]:
        status = [drop.status for result in self.sets for drop in result.drops]
        counts = {name: status.count(name) for name in ("used", "void", "excluded")}
        return {"read": len(status), **counts}

    @cached_property
    def timings(self) -> Timings:
        rows = [
            (
                drop.file, drop.line, 1, result.name, drop.drop, drop.ball, "", "", "watch", "",
                "someone", f"2026-03-02T0{9 + index // 9 % 1}:0{index % 10}:00", drop.status,
                drop.note, drop.time, 1, 0, drop.temperature,
            )
            for result in self.sets
            for index, drop in enumerate(result.drops)
        ]  # fmt: skip
        table = pd.DataFrame(rows, columns=list(COLUMNS))
        for name in ("file", "set", "ball", "tube", "liquid", "timer", "thermometer",
                     "operator", "started", "status", "note"):  # fmt: skip
            table[name] = table[name].astype("category")
        return Timings(
            table,
            files=(TimingFile("runs/invented.csv", "0f" * 32, "utf-8-sig", ";", ","),),
            repairs=(Repair("runs/invented.csv", 3, 2, "a blank before the unit was taken out"),),
            problems=(
                Problem("no reason is given", "write a note", "runs/invented.csv", 8,
                        severity="warning"),
            ),
        )  # fmt: skip

    def run_set(self, name: str) -> RunSetResult:
        return next(result for result in self.sets if result.name == name)

    def summary_table(self) -> pd.DataFrame:
        return pd.DataFrame([_row(result) for result in self.sets])

    def covariance(self, quantity: str = "viscosity") -> np.ndarray:
        assert quantity == "viscosity"
        u = np.array([r.viscosity.u if r.viscosity else math.nan for r in self.sets])
        return self.correlation() * np.outer(u, u)

    @cached_property
    def joint(self) -> Joint:
        have = [i for i, result in enumerate(self.sets) if result.viscosity]
        covariance = self.covariance()[np.ix_(have, have)]
        return Joint(
            labels=tuple(Label(self.sets[i].name, "viscosity", "Pa.s") for i in have),
            values=np.array([self.sets[i].viscosity.value for i in have]),
            inputs=tuple(f"part {i}" for i in range(len(have))),
            contributions=sparse.csr_array(_root(covariance)),
        )

    def correlation(self) -> np.ndarray:
        size = len(self.sets)
        matrix = np.full((size, size), self.correlated) + (1 - self.correlated) * np.eye(size)
        for index, result in enumerate(self.sets):
            if result.viscosity is None:
                matrix[index, :] = matrix[:, index] = math.nan
        return matrix


def _root(covariance: np.ndarray) -> np.ndarray:
    values, vectors = np.linalg.eigh(covariance)
    return vectors * np.sqrt(np.maximum(values, 0.0))


def _row(result: RunSetResult) -> dict[str, Any]:
    m = result.viscosity
    at = result.viscosity_at_reference
    nan = math.nan
    return {
        "set": result.name,
        "status": result.status,
        "viscosity_mPa_s": m.value * 1e3 if m else nan,
        "standard_uncertainty_mPa_s": m.u * 1e3 if m else nan,
        "expanded_uncertainty_mPa_s": m.expanded * 1e3 if m else nan,
        "coverage_factor": m.coverage_factor if m and m.coverage_factor else nan,
        "coverage_probability": 0.95,
        "low_mPa_s": m.low * 1e3 if m else nan,
        "high_mPa_s": m.high * 1e3 if m else nan,
        "temperature_degC": result.temperature.value - 273.15 if result.temperature else nan,
        "viscosity_at_reference_mPa_s": at.value * 1e3 if at else nan,
        "reference_temperature_degC": 25.0 if at else nan,
        "n_drops": result.n_drops,
        "n_balls": result.n_balls,
        "findings": " ".join(finding.code for finding in result.findings),
    }


def three_sets() -> InventedReduction:
    return InventedReduction(
        (valid_set("batch 118"), warned_set("batch 119"), invalid_set("batch 120"))
    )


def hostile_sets() -> InventedReduction:
    plain = [valid_set(name) for name in HOSTILE_NAMES]
    plain[0] = replace(warned_set(HOSTILE_NAMES[0]), liquid="<img src=x onerror=alert(1)>")
    named = tuple(replace(d, ball="$_^{<i>") for d in plain[1].drops)
    plain[1] = replace(plain[1], drops=named)
    return InventedReduction(tuple(plain))
