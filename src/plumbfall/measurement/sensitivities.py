"""Analytic sensitivities of a drop's viscosity to every raw input.

With s = dlnK/dlnRe and w = dlnK/dln(lambda) at the solution, the implicit derivative of the force
balance is, E standing for 1/(1 - s),

    dln eta = E [ dln W - (1+w+s) dln d - (1+s) dln v + w dln D - s dln rho_f ]

and in a calibrated tube, t being the time,

    dln eta = dln K + dln W - 3 dln d + dln t

from which the chain rule leads to what was written on the bench sheet. Every sensitivity here is
a weighted sum over the drops of a cell, because all drops of a cell read the same entries.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from plumbfall.measurement.balance import Balance, Codes, Numbers, spread
from plumbfall.measurement.ends import Ends
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.off_axis import OffAxis
from plumbfall.measurement.run_in import RunIn
from plumbfall.physics.weight import AIR_DENSITY, WEIGHTS_DENSITY

__all__ = ["DropSlopes", "Sums", "add_block", "empty_sums"]


@dataclass(frozen=True, slots=True)
class DropSlopes:
    """What the drag law adds to a block's balance, each of shape (drops,).

    ``ratio_slope`` is w, ``reynolds_slope`` s, ``model_bound`` the law's own relative half-width.
    ``beside`` is what being off the axis adds, ``None`` where no offset is given; ``ends`` what
    the tube's ends add to each cell's path, ``None`` where they are out of reach; ``start`` what
    the run-in takes, a given number but for the height of the release. ``calibrated`` says that a
    tube constant stands for all that: then the slopes are 0.
    """

    ratio_slope: Numbers
    reynolds_slope: Numbers
    model_bound: Numbers
    beside: OffAxis | None = None
    ends: Ends | None = None
    start: RunIn | None = None
    calibrated: bool = False


@dataclass(slots=True)
class Sums:
    """Sums over drops, by cell: weight x viscosity x d ln(viscosity)/d(input).

    ``first`` holds them by role; ``second`` the second derivatives of the inputs that enter by
    their square (tilt, offset from the axis). ``timing``, ``reading`` and ``lot`` are the
    variances, per unit of the squared standard deviation, of errors that every drop has to itself.
    """

    first: dict[str, Numbers]
    second: dict[str, Numbers]
    model_plain: Numbers
    timing: Numbers
    reading: Numbers
    lot: Numbers
    n_cells: int = field(default=0)


FIRST = (
    "gravity", "latitude", "elevation", "tilt", "bore", "tube_expansion", "from_mark", "to_mark",
    "diameter", "gauge", "ball_density", "mass", "balance", "ball_expansion", "liquid_density",
    "liquid_expansion", "slope", "bias", "rate", "thermometer", "temperature", "release_offset",
    "surface_above", "bottom_below", "release_above", "constant", "model",
)  # fmt: skip


def empty_sums(n_cells: int) -> Sums:
    """Return the sums of no drops."""

    def zeros() -> Numbers:
        return np.zeros(n_cells)

    return Sums(
        first={role: zeros() for role in FIRST},
        second={"tilt": zeros(), "release_offset": zeros()},
        model_plain=zeros(),
        timing=zeros(),
        reading=zeros(),
        lot=zeros(),
        n_cells=n_cells,
    )


def add_block(
    sums: Sums,
    inputs: Inputs,
    cell: Codes,
    clock: Numbers,
    forces: Balance,
    slopes: DropSlopes,
    pull: Numbers,
    set_offset: Numbers,
    own_reading: NDArray[np.bool_],
) -> None:
    """Add a block of drops to the sums.

    Parameters
    ----------
    sums : Sums
        Added to in place.
    inputs : Inputs
        Raw inputs by cell.
    cell : array of int, shape (drops,)
        Each drop's cell.
    clock : array, shape (drops,) [s]
        Clock readings, before correction.
    forces : Balance
        The block's force balance.
    slopes : DropSlopes
        Log slopes of the drag law at the solution.
    pull : array, shape (drops,) [Pa.s]
        Weight of the drop in its run set's mean times its viscosity at the set's temperature.
    set_offset : array, shape (drops,) [K]
        The set's temperature less the drop's; 0 where either is unknown.
    own_reading : array of bool, shape (drops,)
        Whether the drop's temperature was read for it alone, not for its run set.
    """
    roles, n = inputs.roles, sums.n_cells

    def take(role: str) -> Numbers:
        return spread(roles[role].value, cell)

    def total(values: Numbers) -> Numbers:
        weights = np.broadcast_to(values, cell.shape)
        return np.asarray(np.bincount(cell, weights=weights, minlength=n), dtype=float)

    def add(role: str, values: Callable[[], Numbers]) -> None:
        if roles[role].present:
            sums.first[role] += total(values())

    s, w = slopes.reynolds_slope, slopes.ratio_slope
    a_weight = pull / (1 - s)
    a_bore = a_weight * w
    a_liquid = a_weight * -s
    a_speed = a_liquid - a_weight
    a_diameter = a_speed - a_bore
    if (beside := slopes.beside) is not None:
        # the bore also scales the distance from the axis
        a_bore = a_bore + a_weight * take("release_offset") * beside.by_offset
    displaced = a_weight * (forces.liquid_density * forces.volume / forces.net_mass)
    carried = a_weight + displaced  # a_weight x mass / net mass

    # What dln d, dln D (and the length), dln rho_f do, weight included.
    by_volume = -3 * displaced
    by_density = a_liquid - displaced
    grown = 1 + take("ball_expansion") * forces.ball_offset
    tube_grown = 1 + take("tube_expansion") * forces.tube_offset
    liquid_grown = 1 + take("liquid_expansion") * forces.liquid_offset

    gravity = take("gravity")
    add("gravity", lambda: a_weight / gravity)
    for role, slope in zip(("latitude", "elevation"), inputs.gravity_slopes, strict=True):
        if roles[role].present:
            sums.first[role] += total(a_weight * (slope / gravity))
    if roles["tilt"].present:
        tangent = np.tan(take("tilt"))
        sums.first["tilt"] += total(-a_weight * tangent)
        sums.second["tilt"] += total(-a_weight * (1 + tangent**2))
    if beside is not None:
        sums.first["release_offset"] += total(-a_weight * beside.by_offset)
        sums.second["release_offset"] += total(-a_weight * beside.by_offset_twice)

    add("bore", lambda: a_bore / take("bore"))
    a_length = a_speed
    if (ends := slopes.ends) is not None:
        a_length = a_speed * spread(ends.length_share, cell)
        _add_ends(sums, inputs, ends, total(a_speed))
    add("tube_expansion", lambda: (a_bore + a_length) * (forces.tube_offset / tube_grown))
    by_mark = a_length * (tube_grown / forces.distance)
    add("from_mark", lambda: -by_mark)
    add("to_mark", lambda: by_mark)

    cold = forces.cold_diameter
    of_mass = 3 * carried
    if inputs.weighed.any():
        buoyed = 3 * AIR_DENSITY * a_weight * (forces.cold_volume / forces.net_mass)
        of_mass = np.where(inputs.weighed[cell], buoyed, of_mass)
        by_reading = (
            a_weight
            * (1 - AIR_DENSITY / WEIGHTS_DENSITY)
            / (forces.net_mass * spread(inputs.together, cell))
        )
        add("mass", lambda: by_reading)
        add("balance", lambda: by_reading)
    grow = a_diameter + by_volume
    if slopes.calibrated:  # not weight over diameter, but net mass over volume
        grow = -3 * carried
        add("constant", lambda: pull / take("constant"))
    by_diameter = (grow + of_mass) / cold
    add("diameter", lambda: by_diameter)
    add("gauge", lambda: by_diameter)
    add("ball_density", lambda: np.where(inputs.weighed[cell], 0.0, carried / take("ball_density")))
    add("ball_expansion", lambda: grow * (forces.ball_offset / grown))

    add("liquid_density", lambda: by_density / take("liquid_density"))
    add("liquid_expansion", lambda: -by_density * (forces.liquid_offset / liquid_grown))
    add("slope", lambda: pull * set_offset)

    by_time = a_speed / forces.time  # dln v = -dt/t, and t falls as the bias grows
    add("bias", lambda: by_time)
    add("rate", lambda: -by_time * clock)
    if (start := slopes.start) is not None:
        add("release_above", lambda: by_time * start.by_release)

    by_temperature = (
        grow * (take("ball_expansion") / grown)
        + (a_bore + a_length) * (take("tube_expansion") / tube_grown)
        - by_density * (take("liquid_expansion") / liquid_grown)
        - pull * take("slope")
    )
    add("thermometer", lambda: by_temperature)
    add("temperature", lambda: np.where(own_reading, 0.0, by_temperature))
    if not slopes.calibrated:  # a tube constant has no drag law
        by_model = -a_weight if inputs.model_declared else -a_weight * slopes.model_bound
        sums.first["model"] += total(by_model)
        sums.model_plain += total(-a_weight)

    sums.timing += total((by_time * (1 + take("rate"))) ** 2)
    sums.reading += total(np.where(own_reading, by_temperature**2, 0.0))
    if inputs.lot.any():
        sums.lot += total(by_diameter**2)


def _add_ends(sums: Sums, inputs: Inputs, ends: Ends, pull: Numbers) -> None:
    """Add what the ends' factor of the speed does, its derivatives being those of a cell.

    The factor is that of the sheet's own lengths: their expansion by some kelvin does not move it.
    """
    roles = inputs.roles
    cold_diameter = roles["diameter"].value + roles["gauge"].value
    sums.first["bore"] += pull * (ends.by_bore - ends.by_ratio) / roles["bore"].value
    sums.first["diameter"] += pull * ends.by_ratio / cold_diameter
    sums.first["gauge"] += pull * ends.by_ratio / cold_diameter
    sums.first["surface_above"] += pull * ends.by_surface
    sums.first["bottom_below"] += pull * ends.by_bottom
