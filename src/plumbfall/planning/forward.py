"""The measurement equation forwards: the clock reading of a drop in a liquid of known viscosity.

It is that of ``measurement/solving.py`` with the unknown exchanged: the same balance, drag law,
ends, run-in and place beside the axis, so that the inverse returns the viscosity put in. Nothing
is repeated here, as the run-in follows from the viscosity, which is given.
"""

from __future__ import annotations

from dataclasses import dataclass, fields, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from plumbfall.measurement.balance import Balance, Codes, Numbers, balance, spread
from plumbfall.measurement.ends import Ends
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.inverse import Inverse
from plumbfall.measurement.law import LEFT_OUT
from plumbfall.measurement.off_axis import off_axis
from plumbfall.measurement.run_in import Release, RunIn, run_in
from plumbfall.physics.drag import DragLaw
from plumbfall.physics.terminal import terminal_log_reynolds

__all__ = ["Fall", "fall"]


@dataclass(frozen=True, slots=True)
class Fall:
    """A block of falls between two marks each, arrays of shape (drops,).

    ``clock`` is the reading that a clock of the inputs' bias and rate would show, ``time`` the
    true time, ``speed`` that far from ends and release. ``reynolds_slope`` is d ln K / d ln Re,
    ``bound`` the half-width of what is not known of the drag. A drop that does not sink
    (``floating``), or is beyond the drag law (``too_fast``, ``too_wide``), has NaN times. In a
    calibrated tube nothing is known of the speed.
    """

    clock: Numbers
    time: Numbers
    speed: Numbers
    reynolds: Numbers
    reynolds_slope: Numbers
    bound: Numbers
    forces: Balance
    start: RunIn | None
    floating: NDArray[np.bool_]
    too_fast: NDArray[np.bool_]
    too_wide: NDArray[np.bool_]


def fall(
    inputs: Inputs,
    law: DragLaw,
    ends: Ends | None,
    released: Release | None,
    cell: Codes,
    viscosity: Numbers,
    temperature: Numbers,
    log_extra: Numbers | float = 0.0,
) -> Fall:
    """Solve the force balance of a block of drops for their times, or use their tube's constant.

    Parameters
    ----------
    inputs : Inputs
        Raw inputs by cell.
    law : DragLaw
        The drag law.
    ends : Ends, optional
        What the tubes' ends add to the drag on each cell's path.
    released : Release, optional
        Depths of the marks below the release; without it no run-in is added.
    cell : array of int, shape (drops,)
        Each drop's cell.
    viscosity : array, shape (drops,) [Pa.s]
        Viscosity of the liquid that each drop falls in.
    temperature : array, shape (drops,) [K]
        Its temperature.
    log_extra : array, shape (drops,)
        Logarithm of a further factor of the drag.

    Returns
    -------
    Fall
        Times, and all that led to them.
    """
    calibrated = inputs.calibrated[cell]
    if calibrated.all():
        return _by_constant(inputs, cell, viscosity, temperature)
    if calibrated.any():
        return _mixed(inputs, law, ends, released, cell, viscosity, temperature, log_extra)
    shape = cell.shape
    with np.errstate(invalid="ignore", divide="ignore"):
        end_factor = 1.0 if ends is None else spread(ends.factor, cell)
        forces = balance(inputs, cell, np.ones(shape), temperature, end_factor)
        ratio = np.broadcast_to(forces.diameter_ratio, shape)
        too_wide = ~(ratio <= law.max_ratio)
        drag = law.at(np.minimum(ratio, law.max_ratio))
        beside = off_axis(inputs, cell, forces)
        beyond_table = (beside.log_factor if beside is not None else 0.0) + log_extra
        floating = np.broadcast_to(~(forces.weight > 0), shape)
        creeping = forces.weight * forces.liquid_density / (3 * np.pi * viscosity**2)
        x, too_fast = terminal_log_reynolds(
            drag, np.broadcast_to(np.log(creeping) - beyond_table, shape)
        )
        x = np.where(floating | too_wide | too_fast, np.nan, x)
        reynolds = np.exp(x)
        speed = reynolds * viscosity / (forces.liquid_density * forces.diameter)
        steady = forces.distance * end_factor / speed
        ratio_slope, reynolds_slope = (np.asarray(part) for part in drag.slopes(x))
        forces = replace(forces, time=steady, speed=speed)
        none = np.zeros(shape, bool)
        found = Inverse(viscosity, reynolds, x, ratio_slope, reynolds_slope, none, none, none, none)
        start = None if released is None else run_in(released, cell, forces, found)
        bound = np.asarray(drag.relative_bound(x)) + LEFT_OUT
        time = steady
        if start is not None:
            time = steady + start.bias
            bound = bound + (1 + reynolds_slope) * start.error
        clock = _clock(inputs, cell, time)
    return Fall(
        clock=clock,
        time=time,
        speed=speed,
        reynolds=reynolds,
        reynolds_slope=reynolds_slope,
        bound=bound,
        forces=forces,
        start=start,
        floating=floating,
        too_fast=too_fast & ~floating & ~too_wide,
        too_wide=too_wide & ~floating,
    )


def _clock(inputs: Inputs, cell: Codes, time: Numbers) -> Numbers:
    bias, rate = (spread(inputs.roles[role].value, cell) for role in ("bias", "rate"))
    return (time + bias) / (1 + rate)


def _by_constant(inputs: Inputs, cell: Codes, viscosity: Numbers, temperature: Numbers) -> Fall:
    """Return the times of drops in calibrated tubes, t = eta / (K (rho_b - rho_f))."""
    none, nothing = np.full(cell.shape, np.nan), np.zeros(cell.shape)
    never = np.zeros(cell.shape, bool)
    with np.errstate(invalid="ignore", divide="ignore"):
        forces = balance(inputs, cell, np.ones(cell.shape), temperature)
        floating = np.broadcast_to(~(forces.net_mass > 0), cell.shape)
        constant = spread(inputs.roles["constant"].value, cell)
        excess = forces.mass / forces.volume - forces.liquid_density
        time = np.where(floating, np.nan, viscosity / (constant * excess))
        clock = _clock(inputs, cell, time)
    return Fall(
        clock=clock,
        time=time,
        speed=none,
        reynolds=none,
        reynolds_slope=nothing,
        bound=nothing,
        forces=replace(forces, time=time, speed=none, diameter_ratio=none),
        start=None,
        floating=floating,
        too_fast=never,
        too_wide=never,
    )


def _mixed(
    inputs: Inputs,
    law: DragLaw,
    ends: Ends | None,
    released: Release | None,
    cell: Codes,
    viscosity: Numbers,
    temperature: Numbers,
    log_extra: Numbers | float,
) -> Fall:
    """Join the falls in calibrated tubes and those in others; no start is given."""
    calibrated = inputs.calibrated[cell]
    extra = np.broadcast_to(log_extra, cell.shape)
    parts = [
        fall(inputs, law, ends, released, cell[here], viscosity[here], temperature[here],
             extra[here])
        for here in (calibrated, ~calibrated)
    ]  # fmt: skip

    def join(by_constant: Numbers, other: Numbers) -> Numbers:
        whole = np.empty(cell.shape, dtype=np.asarray(other).dtype)
        whole[calibrated], whole[~calibrated] = by_constant, other
        return whole

    def joined(record: object, other: object, names: set[str]) -> dict[str, Any]:
        return {name: join(getattr(record, name), getattr(other, name)) for name in names}

    plain = {field.name for field in fields(Fall)} - {"forces", "start"}
    of_forces = {field.name for field in fields(Balance)}
    return Fall(
        **joined(parts[0], parts[1], plain),
        forces=Balance(**joined(parts[0].forces, parts[1].forces, of_forces)),
        start=None,
    )
