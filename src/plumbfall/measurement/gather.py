"""Looking the raw inputs of the measurement equation up in the bench sheet, by cell."""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Callable, Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.records import Balance, Ball, Bench, Gauge, Tube
from plumbfall.errors import InputError, Problem
from plumbfall.estimate import Estimate
from plumbfall.measurement.constants import ConstantsInUse, enter_constants
from plumbfall.measurement.inputs import Column, Inputs
from plumbfall.measurement.selection import Cells
from plumbfall.physics.gravity import (
    STANDARD_GRAVITY,
    normal_gravity,
    normal_gravity_by_elevation,
    normal_gravity_by_latitude,
)

__all__ = ["gather"]


class _Register:
    """Distinct estimates by key path: one name, one random variable."""

    def __init__(self) -> None:
        self.place: dict[str, int] = {}
        self.estimates: list[Estimate] = []

    def add(self, estimate: Estimate | None) -> int:
        if estimate is None:
            return -1
        known = self.place.setdefault(estimate.name, len(self.estimates))
        if known == len(self.estimates):
            self.estimates.append(estimate)
        return known


def _column(
    register: _Register,
    codes: NDArray[np.intp],
    estimates: Sequence[Estimate | None],
    neutral: float = 0.0,
) -> Column:
    """Spread the estimates of one kind's entries over the cells."""
    value = np.array([neutral if e is None else e.value for e in estimates] + [neutral])
    entry = np.array([register.add(e) for e in estimates] + [-1], dtype=np.intp)
    return Column(value[codes], entry[codes])  # code -1 reads the neutral last place


def gather(cells: Cells, bench: Bench, run_sets: Sequence[str], model: Estimate) -> Inputs:
    """Look up every raw input of the measurement equation, by cell.

    Parameters
    ----------
    cells : Cells
        Distinct combinations of run set and equipment.
    bench : Bench
        The bench sheet.
    run_sets : sequence of str
        Run-set names, as the cells count them.
    model : Estimate
        The drag law's factor 1 with its relative standard uncertainty.

    Returns
    -------
    Inputs
        Values and entries in columns of shape (cells,).

    Raises
    ------
    InputError
        Where a tube lacks the geometry or the constant its drops need.
    """
    tubes, balls = [_of_geometry(t) for t in bench.tubes.values()], list(bench.balls.values())
    liquids, timers = list(bench.liquids.values()), list(bench.timers.values())
    thermometers = list(bench.thermometers.values())
    _check_tubes([tubes[i] for i in np.unique(cells.tube)], bench)

    register = _Register()
    n = len(cells)
    roles: dict[str, Column] = {}

    def of(role: str, codes: NDArray[np.intp], estimates: Sequence[Estimate | None]) -> None:
        roles[role] = _column(register, codes, estimates)

    slopes = _gravity(bench, register, roles, n)
    roles["bore"] = _column(register, cells.tube, [tube.bore for tube in tubes], 1.0)
    of("tilt", cells.tube, [tube.tilt for tube in tubes])
    of("tube_expansion", cells.tube, [tube.expansion for tube in tubes])
    of("release_above", cells.tube, [tube.release_above for tube in tubes])
    of("surface_above", cells.tube, [tube.surface_above for tube in tubes])
    of("bottom_below", cells.tube, [tube.bottom_below for tube in tubes])
    of("release_offset", cells.tube, [tube.release_offset for tube in tubes])
    for role, marks in (("from_mark", cells.from_mark), ("to_mark", cells.to_mark)):
        roles[role] = _marks(register, cells.tube, marks, tubes, float(role == "to_mark"))
    n_marks = np.array([len(tube.marks) for tube in tubes], dtype=np.intp)
    roles["first_mark"] = _marks(register, cells.tube, np.zeros(n, dtype=np.intp), tubes)
    roles["last_mark"] = _marks(register, cells.tube, n_marks[cells.tube] - 1, tubes, 1.0)

    of("diameter", cells.ball, [ball.diameter for ball in balls])
    of("gauge", cells.ball, [_correction(ball.gauge, bench.gauges) for ball in balls])
    of("ball_density", cells.ball, [ball.density for ball in balls])
    of("mass", cells.ball, [ball.mass for ball in balls])
    of("balance", cells.ball, [_correction(ball.balance, bench.balances) for ball in balls])
    of("ball_expansion", cells.ball, [ball.expansion for ball in balls])

    of("liquid_density", cells.liquid, [liquid.density for liquid in liquids])
    of("liquid_expansion", cells.liquid, [liquid.expansion for liquid in liquids])
    of("slope", cells.liquid, [liquid.viscosity_slope for liquid in liquids])

    of("bias", cells.timer, [timer.bias for timer in timers])
    of("rate", cells.timer, [timer.rate for timer in timers])
    of("thermometer", cells.thermometer, [t.correction for t in thermometers])
    _set_temperatures(bench, register, roles, cells, run_sets)
    roles["model"] = Column(np.ones(n), np.full(n, register.add(model), dtype=np.intp))
    constants = _constants(cells, bench, register, roles)

    def number(
        codes: NDArray[np.intp], records: Sequence[object], read: Callable[..., float | None]
    ) -> NDArray[np.float64]:
        got = [read(record) for record in records]
        return np.array([math.nan if x is None else x for x in got] + [math.nan])[codes]

    def sd(codes: NDArray[np.intp], estimates: Sequence[Estimate | None]) -> NDArray[np.float64]:
        return np.array([0.0 if e is None else e.value for e in estimates] + [0.0])[codes]

    return Inputs(
        estimates=tuple(register.estimates),
        roles=roles,
        weighed=roles["mass"].entry >= 0,
        together=number(cells.ball, balls, lambda ball: float(ball.weighed_together)),
        lot=number(cells.ball, balls, lambda ball: float(ball.lot)) > 0,
        ball_measured_at=number(cells.ball, balls, lambda ball: ball.measured_at),
        tube_measured_at=number(
            cells.tube, tubes, lambda tube: 293.15 if tube.measured_at is None else tube.measured_at
        ),
        liquid_density_at=number(cells.liquid, liquids, lambda lq: lq.density_temperature),
        spread=sd(cells.ball, [ball.spread for ball in balls]),
        per_drop=sd(cells.timer, [timer.per_drop for timer in timers]),
        resolution=sd(cells.timer, [timer.resolution for timer in timers]),
        per_reading=sd(cells.thermometer, [t.per_reading for t in thermometers]),
        slope_known=roles["slope"].entry >= 0,
        temperature_known=roles["temperature"].entry >= 0,
        constant_of=constants.place,
        constants=constants.used,
        model_declared=bench.methods.model_uncertainty is not None,
        gravity_slopes=slopes,
        individual=_individual(register.estimates, balls, constants),
    )


def _of_geometry(tube: Tube) -> Tube:
    """Return a tube as the force balance has it; a calibrated one stands without geometry."""
    if tube.kind != "calibrated":
        return tube
    return Tube(name=tube.name, kind=tube.kind)


def _constants(
    cells: Cells, bench: Bench, register: _Register, roles: dict[str, Column]
) -> ConstantsInUse:
    """Constants of the cells in calibrated tubes, which gravity and law then have no part in."""
    tubes, balls = list(bench.tubes.values()), list(bench.balls)
    calibrated = np.array([tube.kind == "calibrated" for tube in tubes])[cells.tube]
    pairs: dict[tuple[str, str], int] = {}
    place = np.full(len(cells), -1, dtype=np.intp)
    for cell in np.flatnonzero(calibrated).tolist():
        pair = tubes[cells.tube[cell]].name, balls[cells.ball[cell]]
        place[cell] = pairs.setdefault(pair, len(pairs))
    known = {estimate.name: estimate for estimate in register.estimates}
    constants = enter_constants(
        bench, {at: pair for pair, at in pairs.items()}, place, register.add, known
    )
    roles["constant"] = Column(constants.value, constants.own_entry)
    for role in ("gravity", "latitude", "elevation"):
        column = roles[role]
        roles[role] = Column(column.value, np.where(calibrated, -1, column.entry))
    return constants


def _gravity(
    bench: Bench, register: _Register, roles: dict[str, Column], n: int
) -> tuple[float, float]:
    """Gravity itself, or what it is computed from; returns its slopes in the latter."""
    site = bench.site
    none = np.full(n, -1, dtype=np.intp)
    slopes = (0.0, 0.0)
    if site.gravity is None and site.latitude is not None:
        height = site.elevation.value if site.elevation is not None else 0.0
        where = {"latitude": site.latitude.value, "elevation": height}
        value = float(normal_gravity(**where))
        slopes = (
            float(normal_gravity_by_latitude(**where)),
            float(normal_gravity_by_elevation(**where)),
        )
    else:
        value = site.gravity.value if site.gravity is not None else STANDARD_GRAVITY
    roles["gravity"] = Column(np.full(n, value), none + 1 + register.add(site.gravity))
    by_position = site.gravity is None and site.latitude is not None
    for role, estimate in (("latitude", site.latitude), ("elevation", site.elevation)):
        entry = register.add(estimate) if by_position else -1
        roles[role] = Column(np.zeros(n), none + 1 + entry)
    return slopes


def _set_temperatures(
    bench: Bench,
    register: _Register,
    roles: dict[str, Column],
    cells: Cells,
    run_sets: Sequence[str],
) -> None:
    """Temperatures given for a whole run set, one reading of its thermometer's each."""
    if not any(entry.temperature for entry in bench.sets.values()):
        roles["temperature"] = _column(register, np.full(len(cells), -1, dtype=np.intp), [])
        return
    per_reading = [t.per_reading for t in bench.thermometers.values()]
    thermometer_of = dict(zip(cells.run_set.tolist(), cells.thermometer.tolist(), strict=True))
    estimates: list[Estimate | None] = []
    for code, name in enumerate(run_sets):
        entry = bench.sets.get(name)
        estimate = entry.temperature if entry is not None else None
        thermometer = thermometer_of.get(code, -1)
        own = per_reading[thermometer] if thermometer >= 0 else None
        if estimate is not None and own is not None:
            shape = estimate.distribution if estimate.u > own.value else "normal"
            u = math.hypot(estimate.u, own.value)
            estimate = dataclasses.replace(estimate, u=u, distribution=shape)
        estimates.append(estimate)
    roles["temperature"] = _column(register, cells.run_set, estimates)


def _marks(
    register: _Register,
    tube: NDArray[np.intp],
    mark: NDArray[np.intp],
    tubes: Sequence[Tube],
    neutral: float = 0.0,
) -> Column:
    n_marks = np.array([len(t.marks) for t in tubes], dtype=np.intp)
    starts = np.cumsum([0, *n_marks])
    flat = [estimate for t in tubes for estimate in t.marks]
    place = np.where(n_marks[tube] > 0, starts[tube] + mark, -1)
    return _column(register, place.astype(np.intp), flat, neutral)


def _correction(
    name: str | None, instruments: Mapping[str, Gauge] | Mapping[str, Balance]
) -> Estimate | None:
    return None if name is None else instruments[name].correction


def _individual(
    estimates: Sequence[Estimate], balls: Sequence[Ball], constants: ConstantsInUse
) -> NDArray[np.bool_]:
    """Entries whose error one ball has to itself; a lot's are its mean's, so shared.

    What a ball's constant was found with, and its scatter then, are the ball's own too.
    """
    lots = {ball.name for ball in balls if ball.lot}
    own = {
        name
        for constant in constants.used
        if constant.chosen.stored is not None and constant.chosen.ball not in lots
        for name in (
            *((constant.chosen.own.name,) if constant.chosen.stored.scatter else ()),
            *(
                estimates[entry].name
                for entry in constant.entries
                if estimates[entry].name.startswith("ball.")
            ),
        )
    }
    own |= {
        estimate.name
        for ball in balls
        if not ball.lot
        for estimate in (ball.diameter, ball.density, ball.mass, ball.expansion)
        if estimate is not None and not estimate.name.startswith("material.")
    }
    return np.array([estimate.name in own for estimate in estimates], dtype=bool)


def _check_tubes(tubes: Sequence[Tube], bench: Bench) -> None:
    problems = []
    for tube in tubes:
        if tube.kind != "calibrated" and (tube.bore is None or len(tube.marks) < 2):
            missing = "bore" if tube.bore is None else "distance"
            problems.append(
                Problem(
                    f"the tube has no {missing}",
                    f'add {missing} = "… mm" to [tube.{tube.name}]',
                    path=bench.path,
                    key=f"tube.{tube.name}",
                )
            )
    if problems:
        raise InputError(problems)
