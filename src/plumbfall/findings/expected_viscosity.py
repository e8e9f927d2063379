"""What a run set's viscosity should be, where the bench sheet or other run sets say so."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.records import Reference
from plumbfall.findings.data import RunData
from plumbfall.physics.liquids import water_viscosity_at_atmosphere

__all__ = ["Expected", "expected_viscosities"]

Numbers = NDArray[np.float64]

FARTHEST = 10.0
"""Kelvin that a value is carried by the liquid's slope, or between two certified points."""
SAME = 0.1
"""Kelvin within which a value holds without a slope."""
FEWEST_SETS = 3
"""Run sets of a liquid that can outvote one of them."""


@dataclass(frozen=True, slots=True)
class Expected:
    """Expected viscosities of the run sets in Pa.s, NaN where nothing is known, (run sets,).

    ``u`` is their relative standard uncertainty; ``within`` the ratio by which a good run set may
    differ from them at most; ``source`` says in words what they rest on.
    """

    source: str
    value: Numbers
    u: Numbers
    within: float


def expected_viscosities(data: RunData) -> Iterator[Expected]:
    """Yield what is expected by certificates, by specifications, and by the other run sets."""
    liquid = np.full(len(data.names), -1, dtype=np.intp)
    liquid[data.selection.cells.run_set] = data.selection.cells.liquid
    for name, reference in data.bench.references.items():
        codes = [code for code, one in enumerate(data.liquids) if one.name == reference.liquid]
        if codes:
            yield _certified(data, f"the certificate of {name}", reference, liquid == codes[0])
    for code, one in enumerate(data.liquids):
        limits = one.specification
        if limits is not None and limits.low is not None and limits.high is not None:
            low, high = limits.low.value, limits.high.value
            carried = _carry(data, liquid == code, limits.temperature)
            yield Expected(
                source=f"the specification of {one.name}",
                value=np.sqrt(low * high) * carried,
                u=np.full(len(data.names), np.log(high / low) / 2),
                within=float(np.log(high / low)),
            )
    yield from _by_others(data, liquid)


def _carry(data: RunData, here: NDArray[np.bool_], temperature: float) -> Numbers:
    """Factor that brings a value from a temperature to each run set's; NaN where it is too far."""
    slope, known = np.zeros(len(data.names)), np.zeros(len(data.names), dtype=bool)
    slope[data.selection.cells.run_set] = data.inputs.roles["slope"].value
    known[data.selection.cells.run_set] = data.inputs.slope_known
    apart = data.columns.set_temperature - temperature
    with np.errstate(invalid="ignore"):
        able = here & (np.abs(apart) <= np.where(known, FARTHEST, SAME))
        return np.where(able, np.exp(slope * apart), np.nan)


def _certified(
    data: RunData, source: str, reference: Reference, here: NDArray[np.bool_]
) -> Expected:
    temperature = data.columns.set_temperature
    value, u = np.full(len(data.names), np.nan), np.full(len(data.names), 0.0)
    if reference.law == "water":
        able = here & (temperature > 273.15) & (temperature < 373.15)
        value[able] = water_viscosity_at_atmosphere(temperature=temperature[able])
        return Expected(source, value, u, 0.0)
    for point in sorted(reference.points, key=lambda one: one.temperature):
        carried = point.viscosity.value * _carry(data, here, point.temperature)
        apart = np.abs(temperature - point.temperature)
        others = [abs(temperature - other.temperature) for other in reference.points]
        nearest = apart <= np.min(others, axis=0)
        value = np.where(nearest & np.isfinite(carried), carried, value)
        u = np.where(nearest, point.viscosity.relative + 0.01 * apart, u)  # the slope's own error
    return Expected(source, value, u, 0.0)


def _by_others(data: RunData, liquid: NDArray[np.intp]) -> Iterator[Expected]:
    """Expect what most run sets of the liquid have."""
    found = data.outputs.of("viscosity").value
    value = np.full(len(found), np.nan)
    for code in np.unique(liquid[liquid >= 0]):
        here = (liquid == code) & np.isfinite(found)
        if here.sum() < FEWEST_SETS:
            continue
        middle = float(np.median(data.columns.set_temperature[here]))
        carried = _carry(data, here, middle)
        at_middle = found / carried
        if not np.isfinite(at_middle).any():
            continue
        able = np.isfinite(at_middle)
        if able.sum() < FEWEST_SETS:
            continue
        median = np.median(at_middle[able])
        spread = np.median(np.abs(np.log(at_middle[able] / median)))
        if spread < MOST_SPREAD:
            value[able] = median * carried[able]
    if np.isfinite(value).any():
        yield Expected("the other run sets of the liquid", value, np.zeros(len(found)), MOST_SPREAD)


MOST_SPREAD = 0.05
"""Half of a liquid's run sets must agree within this ratio before they outvote another."""
