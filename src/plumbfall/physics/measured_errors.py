"""Errors of the laws that may be chosen, measured against the computed tables when asked for.

An error is that of the factor of the drag, (law - computed) / computed: above 0 the law's drag is
too large, and a viscosity found with it too small. It is NaN where the law may not be used. The
computed tables themselves are held against their solvers and against print by the tests.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from types import MappingProxyType

import numpy as np
from numpy.typing import ArrayLike, NDArray

from plumbfall.physics.drag_map import DragMap
from plumbfall.physics.drag_surface import unbounded_excess
from plumbfall.physics.ends import end_excess
from plumbfall.physics.exact import creeping_wall_factor
from plumbfall.physics.laws import Law, law, laws_of
from plumbfall.physics.numeric import Numeric
from plumbfall.physics.path import path_excess
from plumbfall.physics.start_up import run_in_delay

__all__ = [
    "COMPUTED",
    "PLACES",
    "MeasuredError",
    "classical_end_error",
    "inertia_error",
    "measured_errors",
    "no_end_error",
    "no_run_in_bias",
    "together_error",
    "wall_error",
]

Array = NDArray[np.float64]

COMPUTED: Mapping[str, str] = MappingProxyType(
    {"walls": "exact", "together": "table", "ends": "table", "run-in": "table"}
)
"""The law of a kind that is the computed table itself, against which the others are measured."""

PLACES: Mapping[tuple[str, str], tuple[str, ...]] = MappingProxyType(
    {
        ("walls", ""): ("diameter ratio",),
        ("inertia", ""): ("Reynolds number",),
        ("together", ""): ("diameter ratio", "Reynolds number"),
        ("ends", "none"): ("diameter ratio", "bore radii from the bottom"),
        ("ends", "classical"): ("diameter ratio", "bore radii of liquid"),
        ("run-in", "none"): ("Reynolds number", "ball diameters above the first mark"),
    }
)
"""What the numbers of a place mean, by kind and law; an empty name stands for every law."""

_RATIOS = (0.05, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6)
_NUMBERS = (0.1, 0.5, 1.0, 5.0, 10.0, 50.0, 100.0)
_START_RATIO, _START_DENSITY, _START_LENGTH = 0.1, 8.0, 20.0


@dataclass(frozen=True, slots=True)
class MeasuredError:
    """Error of a law at one place; ``place`` as :data:`PLACES` explains it."""

    law: str
    place: tuple[float, ...]
    error: float


def wall_error(name: str, diameter_ratio: ArrayLike) -> Array:
    """Return the error of a wall law at diameter ratios, against the exact factor."""
    chosen = law("walls", name)
    ratio = np.asarray(diameter_ratio, dtype=np.float64)
    return _within(
        chosen, ratio, chosen.function(diameter_ratio=ratio) / creeping_wall_factor(ratio)[0] - 1.0
    )


def inertia_error(name: str, reynolds: ArrayLike) -> Array:
    """Return the error of an inertia law at Reynolds numbers to 100, against the computed drag."""
    chosen = law("inertia", name)
    number = np.asarray(reynolds, dtype=np.float64)
    computed = np.exp(unbounded_excess(np.log(number))[0])
    return _within(chosen, number, chosen.function(reynolds=number) / computed - 1.0)


def together_error(name: str, diameter_ratio: ArrayLike, reynolds: ArrayLike) -> Array:
    """Return the error of a joining rule with exact walls and inertia, against the table."""
    chosen = law("together", name)
    ratio, number = np.broadcast_arrays(
        np.asarray(diameter_ratio, dtype=np.float64), np.asarray(reynolds, dtype=np.float64)
    )
    factor = chosen.function(
        wall_factor=creeping_wall_factor(ratio)[0],
        inertia_factor=np.exp(unbounded_excess(np.log(number))[0]),
    )
    return _within(chosen, number, factor / DragMap().at(ratio).factor(number) - 1.0)


def no_end_error(diameter_ratio: ArrayLike, distance: ArrayLike) -> Array:
    """Return the error of leaving a solid end out, at distances from it in bore radii."""
    ratio = np.asarray(diameter_ratio, dtype=np.float64)
    excess = end_excess(diameter_ratio=ratio, distance=np.asarray(distance, dtype=np.float64))
    return np.asarray(1.0 / (1.0 + excess) - 1.0)


def classical_end_error(diameter_ratio: ArrayLike, height: ArrayLike) -> Array:
    """Return the error of the end factor of 1907 for marks a quarter of the liquid from each end.

    ``height`` is that of the liquid in bore radii.
    """
    ratio, column = np.broadcast_arrays(
        np.asarray(diameter_ratio, dtype=np.float64), np.asarray(height, dtype=np.float64)
    )
    factor = law("ends", "classical").function(height_ratio=column / ratio)
    balls, quarter = np.ravel(ratio), np.ravel(column) / 4.0
    one = np.ones_like(quarter)
    lower = path_excess(balls, quarter, 2.0 * quarter, one, "solid").mean
    upper = path_excess(balls, quarter, 2.0 * quarter, one, "free").mean
    return np.asarray(factor / (1.0 + (lower + upper).reshape(column.shape)) - 1.0)


def no_run_in_bias(
    reynolds: ArrayLike,
    release: ArrayLike,
    *,
    diameter_ratio: float = _START_RATIO,
    density_ratio: float = _START_DENSITY,
    length: float = _START_LENGTH,
) -> Array:
    """Return by how much of itself a timing is too long where the run-in is left out.

    ``release`` is the height of the release above the first mark and ``length`` the distance
    between the marks, both in ball diameters; ``density_ratio`` is ball over liquid.
    """
    number, first = np.broadcast_arrays(
        np.asarray(reynolds, dtype=np.float64), np.asarray(release, dtype=np.float64)
    )
    early, late = (
        run_in_delay(
            depth=depth,
            ball_diameter=1.0,
            tube_bore=1.0 / diameter_ratio,
            fall_speed=number,
            liquid_density=1.0,
            viscosity=1.0,
            ball_density=density_ratio,
        )
        for depth in (first, first + length)
    )
    bias: Array = np.asarray(late - early) * number / length
    return bias / (1.0 + bias)


def measured_errors(kind: str) -> tuple[MeasuredError, ...]:
    """Return the errors of the laws of a kind at a few places, in the order of the registry.

    What is computed has no line here; leaving the ends or the run-in out has one, called ``none``.
    """
    if kind == "walls":
        return _measure(kind, [(r,) for r in _RATIOS], wall_error)
    if kind == "inertia":
        return _measure(kind, [(n,) for n in _NUMBERS], inertia_error)
    if kind == "together":
        places = [(r, n) for r in (0.05, 0.1, 0.3) for n in (0.1, 1.0, 10.0, 100.0)]
        return _measure(kind, places, together_error)
    if kind == "ends":
        near = [(r, h) for r in (0.05, 0.1, 0.3) for h in (1.0, 1.25, 1.5)]
        columns = [(r, h) for r in (0.05, 0.1, 0.3) for h in (10.0, 20.0)]
        return (
            *(MeasuredError("none", at, float(no_end_error(*at))) for at in near),
            *(MeasuredError("classical", at, float(classical_end_error(*at))) for at in columns),
        )
    starts = [(n, y) for n in (1.0, 5.0, 20.0) for y in (1.0, 3.0, 10.0)]
    return tuple(MeasuredError("none", at, float(no_run_in_bias(*at))) for at in starts)


def _measure(
    kind: str, places: Sequence[tuple[float, ...]], error_of: Callable[..., Array]
) -> tuple[MeasuredError, ...]:
    """Errors of every law of a kind that is not the computed one, where it may be used."""
    found = (
        MeasuredError(name, place, float(error_of(name, *place)))
        for name in laws_of(kind)
        if name != COMPUTED.get(kind)
        for place in places
    )
    return tuple(one for one in found if not np.isnan(one.error))


def _within(chosen: Law, value: Array, error: Numeric) -> Array:
    return np.asarray(np.where((value >= chosen.low) & (value <= chosen.high), error, np.nan))
