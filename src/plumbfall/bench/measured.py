"""Which quantities of a bench sheet are measured, so that one without uncertainty is noticed."""

from __future__ import annotations

from collections.abc import Iterator

from plumbfall.bench.keys import key_path
from plumbfall.bench.records import Bench
from plumbfall.estimate import Estimate

__all__ = ["MEASURED", "unstated_uncertainties"]

MEASURED = {
    "site": ("gravity",),
    "timer": ("bias", "rate"),
    "thermometer": ("correction",),
    "gauge": ("correction",),
    "balance": ("correction",),
    "tube": (
        "bore",
        "marks",
        "surface_above",
        "bottom_below",
        "release_above",
        "release_offset",
        "tilt",
    ),
    "material": ("density",),
    "ball": ("diameter", "density", "mass"),
    "liquid": ("density", "viscosity_slope"),
    "set": ("temperature",),
    "reference": ("points",),
    "constant": ("value",),
}
"""Fields of each kind of record that a laboratory measures or reads from a certificate.

Handbook values (expansion, latitude), limits and standard deviations are not among them.
"""

_ATTRIBUTE = {
    "timer": "timers",
    "thermometer": "thermometers",
    "gauge": "gauges",
    "balance": "balances",
    "tube": "tubes",
    "material": "materials",
    "ball": "balls",
    "liquid": "liquids",
    "set": "sets",
    "reference": "references",
    "constant": "constants",
}


def unstated_uncertainties(bench: Bench) -> tuple[str, ...]:
    """Return the key paths of measured quantities that were given without uncertainty.

    A quantity that was not given at all is not listed, nor is one whose instrument, named beside
    it, states an uncertainty: that of a diameter by its gauge, of a mass by its balance, of a
    temperature by its thermometer. The first mark is where distances start, and is exact.
    """
    listed = dict.fromkeys(
        found.name
        for found, instrument in _measured(bench)
        if found.text and found.distribution == "exact" and (instrument is None or instrument.exact)
    )
    return tuple(listed)


def _measured(bench: Bench) -> Iterator[tuple[Estimate, Estimate | None]]:
    """Yield measured quantities, each with the correction of its instrument if one is named."""
    for kind, keys in MEASURED.items():
        if kind == "site":
            records: list[object] = [bench.site]
        else:
            records = list(getattr(bench, _ATTRIBUTE[kind]).values())
        for record in records:
            for key in keys:
                for found in _estimates(getattr(record, key)):
                    if found.name != key_path("tube", getattr(record, "name", ""), "marks", 0):
                        yield found, _instrument(bench, record, key)


def _estimates(value: object) -> Iterator[Estimate]:
    if isinstance(value, Estimate):
        yield value
    elif isinstance(value, tuple):
        for item in value:
            yield from _estimates(getattr(item, "viscosity", item))


def _instrument(bench: Bench, record: object, key: str) -> Estimate | None:
    if key == "diameter":
        gauge = bench.gauges.get(getattr(record, "gauge", None) or "")
        return gauge.correction if gauge else None
    if key == "mass":
        balance = bench.balances.get(getattr(record, "balance", None) or "")
        return balance.correction if balance else None
    if key == "temperature":
        name = getattr(record, "thermometer", None)
        if name is None and len(bench.thermometers) == 1:
            name = next(iter(bench.thermometers))
        thermometer = bench.thermometers.get(name or "")
        return thermometer.correction if thermometer else None
    return None
