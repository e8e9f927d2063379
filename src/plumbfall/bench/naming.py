"""Quantities of the sheet under their names: the key path that makes each a random variable."""

from __future__ import annotations

from dataclasses import replace
from typing import overload

from plumbfall.bench import records
from plumbfall.bench.common_keys import Equipment
from plumbfall.bench.keys import key_path
from plumbfall.estimate import Estimate

__all__ = ["identity", "named", "value", "zero"]


@overload
def named(found: Estimate, *parts: str | int) -> Estimate: ...
@overload
def named(found: None, *parts: str | int) -> None: ...
@overload
def named(found: Estimate | None, *parts: str | int) -> Estimate | None: ...


def named(found: Estimate | None, *parts: str | int) -> Estimate | None:
    """Return an estimate under the key path of ``parts``; one not given stays ``None``."""
    return None if found is None else replace(found, name=key_path(*parts))


def zero(unit: str, *parts: str | int) -> Estimate:
    """Return the exact zero that stands for a correction not given."""
    return Estimate(0.0, name=key_path(*parts), unit=unit)


def value(found: Estimate | None) -> float | None:
    """Return the SI value of a quantity that carries no uncertainty."""
    return None if found is None else found.value


def identity(keys: Equipment) -> records.Identity:
    """Return what an auditor asks of a piece of equipment."""
    return records.Identity(
        identity=keys.identity,
        certificate=keys.certificate,
        calibrated=keys.calibrated,
        due=keys.due,
        note=keys.note,
    )
