"""The measurement equation of a whole run set as a function of its inputs' draws.

The set's cells are repeated once a draw, so that the very functions that reduce drops reduce all
draws of all drops. What is not drawn (the temperature the result is for, the half-width of the
drag law's error) is what the linear propagation has too.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.records import Tube
from plumbfall.measurement.balance import corrected_temperature
from plumbfall.measurement.ends import Ends, path_ends
from plumbfall.measurement.inputs import Column, Inputs
from plumbfall.measurement.run_in import releases
from plumbfall.measurement.solving import cell_ratios, viscosities
from plumbfall.physics.gravity import normal_gravity
from plumbfall.physics.laws import DEFAULTS
from plumbfall.physics.thermal import liquid_density
from plumbfall.run_sets.drawn_inputs import DrawnInputs, drawn_inputs
from plumbfall.run_sets.outputs import QUANTITIES
from plumbfall.run_sets.result import SetColumns

__all__ = ["SetModel"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]

AT_A_TIME = 16_384
"""Drops times draws that are solved at a time: they stay in the processor's cache."""

POSITIVE = ("bore", "liquid_density", "constant")
"""Roles that have no meaning at zero or below."""


class SetModel:
    """From draws of a run set's inputs, shape (inputs, draws), to its quantities.

    Calling it returns shape (quantities, draws), those of ``QUANTITIES`` that the set has, in SI
    units; NaN where a draw has none.
    """

    def __init__(self, sets: SetColumns, run_set: int, used: Codes) -> None:
        self.inputs: DrawnInputs = drawn_inputs(sets, run_set, used)
        self.quantities = tuple(
            quantity
            for quantity in QUANTITIES
            if np.isfinite(sets.outputs.of(quantity).value[run_set])
            # a fitted slope has the errors of all sets, which the draws of one do not hold
            and not (quantity == "viscosity_at_reference" and sets.slope_fitted(run_set))
        )
        selection, liquid = sets.selection, sets.liquid
        self._sets = sets
        self._cells, self._cell = np.unique(selection.cell[used], return_inverse=True)
        if (self.inputs.size >= 0).any():  # balls of a lot differ: each drop is a cell of its own
            self._cells, self._cell = selection.cell[used], np.arange(len(used))
        self._n_drops = len(used)
        self._clock, self._reading = selection.time[used], selection.temperature[used]
        self._weight, self._bound = sets.weights.weight[used], sets.columns.model_bound[used]
        if sets.inputs.model_declared:
            self._bound = np.ones(len(used))
        self._set_temperature = float(sets.columns.set_temperature[run_set])
        self._offset = float(liquid.offset[run_set])
        reference = sets.bench.reference_temperature
        self._distance = (reference or 0.0) - self._set_temperature
        self._tubes: list[Tube] = list(sets.bench.tubes.values())
        self._nominal = np.array([estimate.value for estimate in self.inputs.estimates])
        self._base = sets.inputs.take(self._cells)
        self._repeated: dict[int, Inputs] = {}

    def __call__(self, drawn: Numbers) -> Numbers:
        """Return the quantities of the draws."""
        return self.quantities_of(drawn, np.exp(self.log_mean(drawn)))

    def log_mean(self, drawn: Numbers) -> Numbers:
        """Logarithm of the drops' mean viscosity [Pa.s] without their scatter, shape (draws,)."""
        out = np.empty(drawn.shape[1])
        step = max(AT_A_TIME // self._n_drops, 1)
        for start in range(0, len(out), step):
            part = slice(start, min(start + step, len(out)))
            out[part] = self._log_mean(drawn[:, part])
        return out

    def quantities_of(self, drawn: Numbers, mean: Numbers) -> Numbers:
        """Return the quantities where the drops' mean viscosity [Pa.s] is known.

        ``mean``, shape (draws,), is without scatter, which is added here.
        """
        rows = self.inputs
        if rows.scatter >= 0:
            mean = mean + drawn[rows.scatter]
        found = []
        for quantity in self.quantities:
            if quantity == "viscosity":
                found.append(mean)
            elif quantity == "viscosity_at_reference":
                found.append(mean * np.exp(self._of_first_cell("slope", drawn) * self._distance))
            else:
                density = liquid_density(
                    density=self._of_first_cell("liquid_density", drawn),
                    expansion=self._of_first_cell("liquid_expansion", drawn),
                    temperature=self._offset,
                    reference_temperature=0.0,
                )
                found.append(mean / density)
        return np.stack(found)

    def _of_first_cell(self, role: str, drawn: Numbers) -> Numbers:
        """Draws of what all cells of a set share."""
        column = self._base.roles[role]
        entry = int(column.entry[0])
        row = int(self.inputs.row_of_entry[entry]) if entry >= 0 else -1
        return drawn[row] if row >= 0 else column.value[:1]

    def _log_mean(self, drawn: Numbers) -> Numbers:
        n, sets, rows = drawn.shape[1], self._sets, self.inputs
        inputs = self._inputs(drawn)
        lost = self._meaningless(inputs, n)
        if lost.any():  # they are worked out at the estimates, to be struck out at the end
            drawn = np.where(lost, self._nominal[:, None], drawn)
            inputs = self._inputs(drawn)
        cells = sets.selection.cells.take(np.repeat(self._cells, n))
        cell = (self._cell[:, None] * n + np.arange(n)).ravel()
        methods = sets.bench.methods
        ends = path_ends(inputs, cells, self._tubes, methods.ends or DEFAULTS["ends"])
        released = None if methods.run_in == "none" else releases(inputs)

        clock = self._clock[:, None] + _own(drawn, rows.clock) + _own(drawn, rows.resolution)
        reading = self._reading[:, None] + _own(drawn, rows.reading)
        every = (self._n_drops, n)
        clock, reading = (np.broadcast_to(part, every).ravel() for part in (clock, reading))
        temperature = corrected_temperature(inputs, cell, reading)
        at_set = np.full(len(cells), self._set_temperature)
        factor = drawn[rows.row_of_entry[sets.inputs.roles["model"].entry[self._cells[0]]]] - 1.0
        found = viscosities(
            inputs,
            sets.law,
            ends,
            released,
            cell,
            clock,
            temperature,
            cell_ratios(inputs, at_set),
            np.log1p(self._bound[:, None] * factor).ravel(),
        )
        slope = inputs.roles["slope"].value
        to_set = np.nan_to_num(self._set_temperature - temperature, nan=0.0)
        viscosity = (found * np.exp(slope[cell] * to_set)).reshape(every)
        # summed row by row, not as a matrix product, whose rounding depends on the number of draws
        mean = (self._weight[:, None] * viscosity).sum(axis=0)
        mean[lost | self._ends_lost(ends, n)] = np.nan
        with np.errstate(invalid="ignore", divide="ignore"):
            return np.asarray(np.log(mean))

    def _inputs(self, drawn: Numbers) -> Inputs:
        """Return inputs of shape (cells x draws,), a cell's draws together."""
        n, rows = drawn.shape[1], self.inputs.row_of_entry
        if n not in self._repeated:
            self._repeated = {n: self._base.take(np.repeat(np.arange(len(self._cells)), n))}
        repeated = self._repeated[n]
        roles = dict(repeated.roles)

        def of(role: str) -> Numbers:
            column = self._base.roles[role]
            row = np.where(column.entry >= 0, rows[column.entry], -1)
            grid = np.where((row >= 0)[:, None], drawn[row], column.value[:, None])
            return np.asarray(grid)

        for role, column in self._base.roles.items():
            if ((column.entry >= 0) & (rows[column.entry] >= 0)).any():
                roles[role] = Column(of(role).ravel(), repeated.roles[role].entry)
        if places := self._base.constants_of(np.arange(len(self._cells))):
            constant = of("constant")
            for place in places:
                here = self._base.constant_of == place
                constant[here] += self._shared_with_constant(drawn, place)
            roles["constant"] = Column(constant.ravel(), repeated.roles["constant"].entry)
        if (size := self.inputs.size).max(initial=-1) >= 0:
            fresh = roles["diameter"].value.reshape(-1, n) + _own(drawn, size)
            roles["diameter"] = Column(fresh.ravel(), repeated.roles["diameter"].entry)
        if self._base.roles["latitude"].present:
            roles["gravity"] = Column(self._gravity(drawn), repeated.roles["gravity"].entry)
        return replace(repeated, roles=roles)

    def _shared_with_constant(self, drawn: Numbers, place: int) -> Numbers:
        """Return what the draws of its inputs add to a tube constant, shape (draws,)."""
        constant, shared = self._base.constants[place], np.zeros(drawn.shape[1])
        for entry, slope in zip(constant.entries.tolist(), constant.slopes.tolist(), strict=True):
            if (row := self.inputs.row_of_entry[entry]) >= 0:
                shared += slope * (drawn[row] - self._nominal[row])
        return shared

    def _gravity(self, drawn: Numbers) -> Numbers:
        """Gravity by the draws of latitude and elevation, which the roles do not hold."""
        where = []
        for role in ("latitude", "elevation"):
            entry = int(self._base.roles[role].entry[0])
            value = self._base.estimates[entry].value if entry >= 0 else 0.0
            row = self.inputs.row_of_entry[entry] if entry >= 0 else -1
            where.append(drawn[row] if row >= 0 else np.full(drawn.shape[1], value))
        return np.tile(
            np.asarray(normal_gravity(latitude=where[0], elevation=where[1])), len(self._cells)
        )

    def _meaningless(self, inputs: Inputs, n: int) -> NDArray[np.bool_]:
        """Draws that no bench can have: lengths and densities that are not positive."""
        roles = inputs.roles
        diameter = roles["diameter"].value + roles["gauge"].value
        distance = roles["to_mark"].value - roles["from_mark"].value
        bad = (diameter <= 0) | (distance <= 0)
        for role in POSITIVE:
            bad |= roles[role].value <= 0
        return np.asarray(bad.reshape(-1, n).any(axis=0))

    def _ends_lost(self, ends: Ends | None, n: int) -> NDArray[np.bool_]:
        """Draws nearer an end than is computed, where the estimates themselves are not."""
        if ends is None or not ends.unknown.any():
            return np.zeros(n, dtype=bool)
        already = self._sets.ends.unknown[self._cells] if self._sets.ends is not None else False
        unknown = ends.unknown.reshape(-1, n) & ~np.broadcast_to(
            np.atleast_1d(already)[:, None], (len(self._cells), n)
        )
        return np.asarray(unknown.any(axis=0))


def _own(drawn: Numbers, rows: Codes) -> Numbers:
    """Errors that each drop has to itself, shape (drops, draws), or (drops, 1) without any."""
    if (rows < 0).all():
        return np.zeros((len(rows), 1))
    return np.where((rows >= 0)[:, None], drawn[rows], 0.0)
