"""Drops on a bench as drawn: fresh balls, falls, further scatter, and a clock that reads them."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.random import Generator

from plumbfall.measurement.balance import Numbers
from plumbfall.measurement.ends import path_ends
from plumbfall.measurement.inputs import Column, Inputs
from plumbfall.measurement.run_in import releases
from plumbfall.physics.laws import DEFAULTS
from plumbfall.planning.arrangement import Arrangement
from plumbfall.planning.forward import Fall, fall

__all__ = ["extra_scatter", "fall_all", "read_clock", "with_lots"]


def with_lots(true: Inputs, plan: Arrangement, own: Generator, sets: int, exact: bool) -> Inputs:
    """Give every fresh ball of a lot a diameter of its own, the same between all marks."""
    if exact or not plan.inputs.lot.any():
        return true
    intervals, drops = plan.cell.shape
    spread = plan.inputs.spread[plan.cell[0]][:, None] * own.standard_normal((drops, sets))
    role = true.roles["diameter"]
    fresh = role.value + np.tile(spread, (intervals, 1)).ravel()
    return replace(true, roles={**true.roles, "diameter": Column(fresh, role.entry)})


def fall_all(
    plan: Arrangement,
    true: Inputs,
    viscosity: Numbers,
    temperature: Numbers,
    sets: int,
    log_extra: Numbers | float = 0.0,
) -> Fall:
    """Let every drop fall between its marks; results are of shape (intervals x drops x sets,)."""
    methods, every = plan.bench.methods, (*plan.cell.shape, sets)
    cells = plan.cells.take(np.repeat(np.arange(len(plan.cells)), sets))
    ends = path_ends(true, cells, list(plan.bench.tubes.values()), methods.ends or DEFAULTS["ends"])
    return fall(
        true,
        plan.law,
        ends,
        None if methods.run_in == "none" else releases(true),
        (plan.cell[:, :, None] * sets + np.arange(sets)).ravel(),
        np.broadcast_to(viscosity, every).ravel(),
        np.broadcast_to(temperature, every).ravel(),
        np.broadcast_to(log_extra, every).ravel(),
    )


def extra_scatter(
    plan: Arrangement, made: Fall, slope: Numbers, scatter: float | None
) -> Numbers | float:
    """Scatter that is not the instruments', relative to the viscosity, shape (drops, sets)."""
    if scatter is not None:
        return scatter
    known = plan.bench.scatter
    if known is None:
        return 0.0
    inputs, cell = plan.inputs, plan.cell[0]
    every = (*plan.cell.shape, len(slope))
    time = made.time.reshape(every).sum(axis=0)
    s = made.reynolds_slope.reshape(every)[0]
    timing = (inputs.per_drop**2 + inputs.resolution**2 / 6)[cell][:, None]
    declared = ((1 + s) / (1 - s) / time) ** 2 * timing
    declared = declared + (slope * inputs.per_reading[cell][:, None]) ** 2
    return np.asarray(np.sqrt(np.maximum(known.relative.value**2 - declared, 0.0)))


def read_clock(
    plan: Arrangement, true: Inputs, made: Fall, own: Generator, sets: int, marks: bool, exact: bool
) -> Numbers:
    """Read the clock: its errors, then its steps."""
    intervals, drops = plan.cell.shape
    per_drop = plan.inputs.per_drop[plan.cell[0]][:, None]
    step = plan.inputs.resolution[plan.cell[0]][:, None]
    begin = own.uniform(1.0, 3.0, (drops, sets))
    noise = own.standard_normal((intervals + 1, drops, sets))
    if exact:
        per_drop, step, begin = 0.0 * per_drop, 0.0 * step, 0.0 * begin
    if not marks:
        total = made.clock.reshape(drops, sets) + per_drop * noise[0]
        return (_stepped(begin + total, step) - _stepped(begin, step))[None]
    bias, rate = (true.roles[role].value[:sets] for role in ("bias", "rate"))
    since = np.cumsum(made.time.reshape(intervals, drops, sets), axis=0)
    at_marks = np.concatenate([np.zeros((1, drops, sets)), (since + bias) / (1 + rate)])
    return _stepped(begin + at_marks + per_drop / np.sqrt(2) * noise, step)


def _stepped(time: Numbers, step: Numbers) -> Numbers:
    """Round to the steps of a clock; the last decimals of its steps are not noise."""
    with np.errstate(invalid="ignore", divide="ignore"):
        return np.where(step > 0, np.round(np.round(time / step) * step, 12), time)
