"""One run set's columns as a record of results, built when somebody looks at it."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.keys import key_path
from plumbfall.bench.records import Bench
from plumbfall.measurement.columns import DropColumns
from plumbfall.measurement.ends import Ends
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.selection import Selection
from plumbfall.measurement.sensitivities import Sums
from plumbfall.measurement.values import Weights
from plumbfall.physics.drag import TABLE, DragLaw
from plumbfall.physics.laws import DEFAULTS, OWN, law
from plumbfall.physics.stokes import shear_rate
from plumbfall.results import (
    ConstantUsed,
    Correction,
    Finding,
    Measured,
    Quantity,
    RunSetResult,
)
from plumbfall.run_sets.budget import budget_lines
from plumbfall.run_sets.drawn import Drawn
from plumbfall.run_sets.drop_records import ball_results, drop_results
from plumbfall.run_sets.improvements import improvements
from plumbfall.run_sets.jacobian import Jacobian
from plumbfall.run_sets.outputs import UNITS, Output, Outputs, SetConditions
from plumbfall.run_sets.repeatability import Repeatability
from plumbfall.run_sets.temperature_fit import TemperatureFit
from plumbfall.timings.records import Timings

__all__ = ["SetColumns", "build_result", "status_of"]


@dataclass(frozen=True)
class SetColumns:
    """Everything that was computed of all run sets, in columns."""

    bench: Bench
    timings: Timings
    selection: Selection
    inputs: Inputs
    columns: DropColumns
    sums: Sums
    weights: Weights
    scatter: Repeatability
    jacobian: Jacobian
    liquid: SetConditions
    outputs: Outputs
    law: DragLaw
    ends: Ends | None
    fits: tuple[TemperatureFit, ...] = ()

    def slope_fitted(self, run_set: int) -> bool:
        """Whether a run set's temperature slope was fitted to the run sets themselves."""
        return any(run_set in fit.members for fit in self.fits)


def status_of(findings: tuple[Finding, ...]) -> str:
    """Return the status of the data: the gravest of its findings."""
    severities = {finding.severity for finding in findings}
    if "error" in severities:
        return "invalid"
    return "valid-with-warnings" if "warning" in severities else "valid"


def build_result(
    all_sets: SetColumns,
    run_set: int,
    used: NDArray[np.intp],
    rows: NDArray[np.intp],
    findings: tuple[Finding, ...],
    drawn: Drawn | None = None,
) -> RunSetResult:
    """Build the record of one run set.

    Parameters
    ----------
    all_sets : SetColumns
        The columns of every run set.
    run_set : int
        Which one.
    used : array of int
        Places of its used drops.
    rows : array of int
        Rows of the timing table that belong to it, used or not.
    findings : tuple of Finding
        What was found in it.
    drawn : Drawn, optional
        What Monte Carlo says of it.

    Returns
    -------
    RunSetResult
        With an empty summary; whoever shows it writes that.
    """
    drops = all_sets.columns
    temperature = float(drops.set_temperature[run_set])
    cells = np.unique(all_sets.selection.cell[used])
    invalid = status_of(findings) == "invalid"

    n_balls = _count_balls(all_sets, cells, used)
    budget = budget_lines(
        all_sets.jacobian,
        all_sets.inputs,
        all_sets.sums,
        all_sets.selection,
        all_sets.scatter,
        all_sets.bench,
        run_set,
    )

    def quoted(quantity: str) -> Measured | None:
        linear = _measured(all_sets.outputs, quantity, run_set)
        return linear if drawn is None else drawn.quoted(quantity, linear)

    return RunSetResult(
        name=all_sets.selection.names[run_set],
        status=status_of(findings),
        summary="",
        n_drops=len(used),
        n_balls=n_balls,
        n_read=len(rows),
        tube=_names(all_sets.bench.tubes, all_sets.selection.cells.tube[cells]),
        liquid=_names(all_sets.bench.liquids, all_sets.selection.cells.liquid[cells]),
        temperature=None
        if math.isnan(temperature)
        else Quantity(temperature, "K", _temperature_u(all_sets, cells)),
        reference_temperature=all_sets.bench.reference_temperature,
        viscosity=quoted("viscosity"),
        viscosity_at_reference=quoted("viscosity_at_reference"),
        kinematic_viscosity=quoted("kinematic_viscosity"),
        stokes_viscosity=_stokes(all_sets, used),
        liquid_density=float(all_sets.liquid.density[run_set]) if len(used) else None,
        reynolds=_largest(drops.reynolds[used]),
        diameter_ratio=_largest(drops.diameter_ratio[used]),
        shear_rate=_largest(
            np.asarray(
                shear_rate(fall_speed=drops.fall_speed[used], ball_diameter=drops.diameter[used])
            )
        ),
        shear_stress=_largest(drops.shear_stress[used]),
        corrections=() if invalid else _corrections(all_sets, used),
        budget=budget,
        improvements=improvements(
            budget,
            n_drops=len(used),
            n_balls=n_balls,
            coverage=all_sets.outputs.coverage,
            own=key_path("set", all_sets.selection.names[run_set], "scatter"),
        ),
        balls=ball_results(all_sets.bench, all_sets.selection, all_sets.columns, used),
        drops=drop_results(
            all_sets.bench,
            all_sets.timings,
            all_sets.selection,
            all_sets.columns,
            float(all_sets.scatter.mean[run_set]),
            used,
            rows,
            findings,
        ),
        findings=findings,
        linear=_measured(all_sets.outputs, "viscosity", run_set),
        monte_carlo=None if drawn is None else drawn.record(),
        constants=_constants(all_sets, cells),
    )


def _measured(outputs: Outputs, quantity: str, run_set: int) -> Measured | None:
    column: Output = outputs.of(quantity)
    if not math.isfinite(column.value[run_set]):
        return None
    return Measured(
        value=float(column.value[run_set]),
        unit=UNITS[quantity],
        u=float(column.u[run_set]),
        effective_dof=float(column.dof[run_set]),
        coverage_probability=outputs.coverage,
        coverage_factor=float(column.factor[run_set]),
        expanded=float(column.expanded[run_set]),
        low=float(column.low[run_set]),
        high=float(column.high[run_set]),
    )


def _largest(values: NDArray[np.float64]) -> float | None:
    largest = float(np.nanmax(values)) if len(values) and not np.isnan(values).all() else math.nan
    return None if math.isnan(largest) else largest


def _names(known: Mapping[str, object], codes: NDArray[np.intp]) -> str:
    names = list(known)
    return ", ".join(names[code] for code in np.unique(codes))


def _count_balls(all_sets: SetColumns, cells: NDArray[np.intp], used: NDArray[np.intp]) -> int:
    """Balls that were dropped; a lot's drops are a ball each."""
    fresh = all_sets.inputs.lot[all_sets.selection.cell[used]]
    reused = cells[~all_sets.inputs.lot[cells]]
    return int(fresh.sum()) + len(np.unique(all_sets.selection.cells.ball[reused]))


def _temperature_u(all_sets: SetColumns, cells: NDArray[np.intp]) -> float:
    """Return what all readings share: the correction, and a reading for the whole set."""
    entries = {
        int(all_sets.inputs.roles[role].entry[cell])
        for role in ("thermometer", "temperature")
        for cell in cells
    }
    return math.hypot(*(all_sets.inputs.estimates[entry].u for entry in entries if entry >= 0))


def _stokes(all_sets: SetColumns, used: NDArray[np.intp]) -> Quantity | None:
    """Return Stokes' law's own answer; no uncertainty is claimed for what leaves the walls out."""
    value = float(np.sum(all_sets.weights.weight[used] * all_sets.columns.stokes[used]))
    return (
        Quantity(value, "Pa.s", math.nan)
        if len(used) and math.isfinite(value) and value > 0
        else None
    )


def _constants(all_sets: SetColumns, cells: NDArray[np.intp]) -> tuple[ConstantUsed, ...]:
    """Return the tube constants that the cells of a set have."""
    chosen = [all_sets.inputs.constants[n].chosen for n in all_sets.inputs.constants_of(cells)]
    return tuple(
        ConstantUsed(
            tube=one.tube,
            ball=one.ball,
            constant=Quantity(one.own.value, "m2/s2", one.stored.u if one.stored else one.own.u),
            file="" if one.file is None else one.file.path,
            certificates=tuple(
                " ".join(filter(None, (known.reference, known.certificate)))
                for known in one.certified
            ),
        )
        for one in chosen
    )


def _corrections(all_sets: SetColumns, used: NDArray[np.intp]) -> tuple[Correction, ...]:
    if not len(used) or all_sets.inputs.calibrated[all_sets.selection.cell[used[0]]]:
        return ()  # a tube constant stands for them all
    law, drops = all_sets.law, all_sets.columns
    wall = float(drops.wall[used].mean())
    total = float(drops.drag_factor[used].mean())
    off_axis = float(drops.off_axis[used].mean())
    run_in = float(drops.run_in[used].mean())
    others = wall * off_axis * float(drops.end[used].mean()) * run_in
    beside = Correction(
        "off axis",
        off_axis,
        "small ball beside the axis, free to turn",
        "computed by plumbfall from Stokes flow; Happel and Brenner 1965, chapter 7",
    )
    return (
        Correction("wall", wall, law.wall_law.name, law.wall_law.citation),
        Correction(
            "inertia",
            total / others,
            _inertia_method(law),
            law.source,
        ),
        *((beside,) if off_axis != 1 else ()),
        _ends(all_sets, float(drops.end[used].mean())),
        _run_in(all_sets, run_in),
    )


def _run_in(all_sets: SetColumns, factor: float) -> Correction:
    if all_sets.bench.methods.run_in == "none":
        return Correction("run-in", factor, "none", "")
    return Correction("run-in", factor, "computed start from rest in the tube", OWN)


def _inertia_method(law: DragLaw) -> str:
    if law.together == TABLE:
        return "table of walls and inertia together, over the walls alone"
    return f"{law.inertia_law.name}, joined by the {law.together_law.name} rule"


def _ends(all_sets: SetColumns, factor: float) -> Correction:
    chosen = law("ends", all_sets.bench.methods.ends or DEFAULTS["ends"])
    method = "mean of the end excess over the path" if chosen.name == "table" else chosen.name
    return Correction("ends", factor, method, chosen.citation)
