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

__all__ = ["entries_of", "problems_of"]

Place = tuple[str | int, ...]

_EXAMPLE = {"set": "batch 1", "liquid": "oil", "material": "steel"}


def problems_of(error: ValidationError, sheet: type[BaseModel]) -> list[Problem]:
    """Return every problem of a sheet.

    Parameters
    ----------
    error
        What validating the sheet raised.
    sheet
        The schema, for the names of known keys.
    """
    found: dict[tuple[str, str], Problem] = {}
    for item in error.errors(include_url=False):
        for problem in _problems(item, sheet):
            found.setdefault((problem.key, problem.message), problem)
    return list(found.values())


def entries_of(error: ValidationError, sheet: type[BaseModel]) -> set[Place]:
    """Return where something is wrong: entries as ``("tube", "A")``, tables as ``("site",)``."""
    places = (tuple(item["loc"]) for item in error.errors(include_url=False))
    return {place[:1] if _model_at(place[:1], sheet) else place[:2] for place in places}


def _problems(item: Mapping[str, Any], sheet: type[BaseModel]) -> list[Problem]:
    parts: Place = tuple(item["loc"])
    raised = item.get("ctx", {}).get("error")
    if isinstance(raised, InputError):
        return [replace(problem, key=key_path(*parts)) for problem in raised.problems]
    key, kind = key_path(*parts), item["type"]
    if kind == "extra_forbidden":
        return [_unknown_key(parts, sheet)]
    if kind == "missing":
        return [Problem("is missing", f"add {parts[-1]}", key=key)]
    if kind in ("model_type", "dict_type"):
        return [_no_table(parts, item["input"], sheet)]
    if kind in ("tuple_type", "list_type"):
        return [Problem("is not a list", f"write {parts[-1]} = [..., ...]", key=key)]
    return [Problem(str(item["msg"]), "correct it", key=key)]


def _unknown_key(parts: Place, sheet: type[BaseModel]) -> Problem:
    *table, wrong = parts
    model = _model_at(tuple(table), sheet)
    known = list(model.model_fields) if model else []
    near = nearest_name(str(wrong), known) or _containing(str(wrong), known)
    what = "key" if table else "table"
    remedy = f"did you mean '{near}'?" if near else f"known are {', '.join(known)}"
    return Problem(f"unknown {what} '{wrong}'", remedy, key=key_path(*parts))


def _containing(wrong: str, known: list[str]) -> str | None:
    """Return the one known name that a short form stands for, such as ``temp``."""
    alike = [name for name in known if len(wrong) > 2 and wrong.casefold() in name]
    return alike[0] if len(alike) == 1 else None


def _no_table(parts: Place, written: object, sheet: type[BaseModel]) -> Problem:
    key, kind = key_path(*parts), str(parts[0])
    named = _model_at((kind,), sheet) is None
    header = key_path(kind, _EXAMPLE.get(kind, "A")) if named else kind
    if len(parts) == 2 and named:
        said = f"'{written}'" if isinstance(written, str) else "this"
        return Problem(
            f"{said} stands where the name of an entry is wanted",
            f"every {kind} has a name: head its table [{header}] instead of [{kind}]",
            key=key,
        )
    if len(parts) == 1:
        return Problem("is not a table", f"write [{header}] and its keys below it", key=key)
    return Problem("is not a table", "write { KEY = ..., KEY = ... }", key=key)


def _model_at(parts: Place, model: type[BaseModel]) -> type[BaseModel] | None:
    """Return the schema of the table at nested keys, or ``None`` where entries have names."""
    place: object = model
    for part in parts:
        if isinstance(place, type) and issubclass(place, BaseModel):
            field = place.model_fields.get(str(part))
            if field is None:
                return None
            place = _without_none(field.annotation)
        else:
            inner = typing.get_args(place)
            place = _without_none(inner[0] if isinstance(part, int) else inner[-1])
    return place if isinstance(place, type) and issubclass(place, BaseModel) else None


def _without_none(annotation: object) -> object:
    if isinstance(annotation, types.UnionType):
        return next(kind for kind in typing.get_args(annotation) if kind is not type(None))
    return annotation
