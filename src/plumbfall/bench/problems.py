"""What the schema found wrong, as problems a technician can act on: key, what, remedy."""

from __future__ import annotations

import types
import typing
from collections.abc import Mapping
from dataclasses import replace
from typing import Any

from pydantic import BaseModel, ValidationError

from plumbfall.bench.keys import key_path
from plumbfall.errors import InputError, Problem, nearest_name

__all__ = ["problems_of"]

_EXAMPLE = {"tube": "A", "ball": "A", "set": "batch 1", "liquid": "oil"}


def problems_of(error: ValidationError, sheet: type[BaseModel]) -> list[Problem]:
    """Return every problem of a sheet, in the order of the sheet's tables.

    Parameters
    ----------
    error
        What validating the sheet raised.
    sheet
        The schema, for the names of known keys.
    """
    found: dict[str, Problem] = {}
    for item in error.errors(include_url=False, include_input=True):
        for problem in _problems(item, sheet):
            found.setdefault(f"{problem.key}: {problem.message}", problem)
    return list(found.values())


def _problems(item: Mapping[str, Any], sheet: type[BaseModel]) -> list[Problem]:
    parts = tuple(item["loc"])
    raised = item.get("ctx", {}).get("error")
    if isinstance(raised, InputError):
        return [
            replace(problem, key=key_path(*parts, *([problem.key] if problem.key else [])))
            for problem in raised.problems
        ]
    kind = item["type"]
    if kind == "extra_forbidden":
        return [_unknown_key(parts, sheet)]
    if kind == "missing":
        return [Problem("is missing", f"add {parts[-1]}", key=key_path(*parts))]
    if kind in ("model_type", "dict_type", "model_attributes_type"):
        return [_no_table(parts, item["input"])]
    if kind in ("tuple_type", "list_type"):
        name = parts[-1]
        return [Problem("is not a list", f"write {name} = [..., ...]", key=key_path(*parts))]
    return [Problem(str(item["msg"]), "correct it", key=key_path(*parts))]


def _unknown_key(parts: tuple[str | int, ...], sheet: type[BaseModel]) -> Problem:
    *table, wrong = parts
    model = _model_at(tuple(table), sheet)
    known = list(model.model_fields) if model else []
    near = nearest_name(str(wrong), known)
    what = "table" if not table else "key"
    remedy = f"did you mean '{near}'?" if near else f"known are {', '.join(known)}"
    return Problem(f"unknown {what} '{wrong}'", remedy, key=key_path(*parts))


def _no_table(parts: tuple[str | int, ...], written: object) -> Problem:
    key = key_path(*parts)
    kind = str(parts[0])
    name = _EXAMPLE.get(kind, "A")
    header = key_path(kind, name)
    if len(parts) == 2 and kind not in ("liquid.specification",):
        return Problem(
            f"{_said(written)} stands where the name of an entry is wanted",
            f"every {kind} has a name: head its table [{header}] instead of [{kind}]",
            key=key,
        )
    if len(parts) == 1:
        return Problem("is not a table", f"write [{kind}] and its keys below it", key=key)
    return Problem("is not a table", "write { KEY = ..., KEY = ... }", key=key)


def _model_at(parts: tuple[str | int, ...], model: type[BaseModel]) -> type[BaseModel] | None:
    """Return the schema of the table at nested keys."""
    place: object = model
    for part in parts:
        if isinstance(place, type) and issubclass(place, BaseModel):
            field = place.model_fields.get(str(part))
            if field is None:
                return None
            place = _without_none(field.annotation)
        else:
            place = _without_none(typing.get_args(place)[0 if isinstance(part, int) else 1])
    return place if isinstance(place, type) and issubclass(place, BaseModel) else None


def _without_none(annotation: object) -> object:
    if isinstance(annotation, types.UnionType):
        return next(kind for kind in typing.get_args(annotation) if kind is not type(None))
    return annotation


def _said(written: object) -> str:
    return f"'{written}'" if isinstance(written, str) else str(written).lower()
