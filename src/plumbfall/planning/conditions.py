"""Under which conditions drops are planned or invented: liquid, clock, thermometer, temperature."""

from __future__ import annotations

from dataclasses import dataclass

from plumbfall.bench.notation import read_quantity
from plumbfall.bench.records import Bench, RunSetEntry
from plumbfall.errors import InputError
from plumbfall.planning.arrangement import choose

__all__ = ["Conditions", "conditions_of", "kelvin", "nominal_temperature"]

ROOM_TEMPERATURE = 293.15
"""Where nothing says how warm the liquid is [K] (ISO 1)."""


@dataclass(frozen=True, slots=True)
class Conditions:
    """What every drop of a plan has in common, codes counting into the bench's mappings.

    ``entry`` is the run set's entry whose temperature the drops have, ``None`` where each drop's
    temperature is read; ``temperature`` is in kelvin.
    """

    bench: Bench
    liquid: int
    timer: int
    thermometer: int
    temperature: float
    entry: RunSetEntry | None = None


def conditions_of(
    bench: Bench,
    *,
    run_set: str | None = None,
    liquid: str | None = None,
    timer: str | None = None,
    thermometer: str | None = None,
    temperature: float | str | None = None,
) -> Conditions:
    """Look up the conditions of a plan.

    Parameters
    ----------
    bench : Bench
        The bench sheet.
    run_set : str, optional
        Run set whose entry says what is not given here; the bench's only one by default.
    liquid, timer, thermometer : str, optional
        Which one, where the bench has several.
    temperature : float [K] or str, optional
        Of the liquid; by default as :func:`nominal_temperature` says.

    Raises
    ------
    InputError
        Where the bench has several and nothing says which.
    """
    if run_set is not None and run_set not in bench.sets:
        raise InputError(
            f"there is no run set '{run_set}' on the bench sheet",
            path=bench.path,
            remedy=f"known: {', '.join(bench.sets) or 'none'}",
        )
    if run_set is None and len(bench.sets) == 1:
        run_set = next(iter(bench.sets))
    name = run_set or ""
    codes = {
        "liquid": choose(bench, "liquid", name, liquid),
        "timer": choose(bench, "timer", name, timer),
        "thermometer": choose(bench, "thermometer", name, thermometer),
    }
    entry = bench.sets.get(name)
    own = temperature is None and entry is not None and entry.temperature is not None
    at = (
        nominal_temperature(bench, name, codes["liquid"], codes["thermometer"])
        if temperature is None
        else kelvin(temperature)
    )
    return Conditions(bench, **codes, temperature=at, entry=entry if own else None)


def nominal_temperature(bench: Bench, run_set: str, liquid: int, thermometer: int) -> float:
    """Return the temperature [K] that a run set is meant for, as far as the bench sheet says.

    That of the run set's entry, corrected; else the bench's reference temperature, else that of
    the liquid's density, else 20 degC.
    """
    entry = bench.sets.get(run_set)
    if entry is not None and entry.temperature is not None:
        instruments = list(bench.thermometers.values())
        correction = instruments[thermometer].correction.value if thermometer >= 0 else 0.0
        return entry.temperature.value + correction
    if bench.reference_temperature is not None:
        return bench.reference_temperature
    density_at = list(bench.liquids.values())[liquid].density_temperature
    return ROOM_TEMPERATURE if density_at is None else density_at


def kelvin(temperature: float | str) -> float:
    """Return a temperature given in kelvin, or as text with its unit."""
    if isinstance(temperature, str):
        return float(read_quantity(temperature, "temperature").value)
    return float(temperature)
