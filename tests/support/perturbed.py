"""Records with one input moved, to set differences of a whole chain against its derivatives."""

from __future__ import annotations

import dataclasses

from plumbfall.estimate import Estimate

__all__ = ["perturbed"]


def perturbed(record: object, name: str, step: float) -> object:
    """Return records with the value of every estimate of a name moved."""
    if isinstance(record, Estimate):
        if record.name != name:
            return record
        return dataclasses.replace(record, value=record.value + step)
    if isinstance(record, tuple):
        return tuple(perturbed(one, name, step) for one in record)
    if hasattr(record, "items"):
        return {key: perturbed(value, name, step) for key, value in record.items()}
    if dataclasses.is_dataclass(record) and not isinstance(record, type):
        moved = {
            field.name: perturbed(getattr(record, field.name), name, step)
            for field in dataclasses.fields(record)
            if field.name != "source"
        }
        return dataclasses.replace(record, **moved)
    return record
