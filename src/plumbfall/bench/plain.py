"""A bench sheet given from Python, as the plain tree that a file would have held."""

from __future__ import annotations

import hashlib
import json
from collections.abc import Mapping
from typing import Any

from plumbfall.bench.keys import key_path
from plumbfall.bench.readings import LARGEST_BITS
from plumbfall.errors import InputError
from plumbfall.estimate import Estimate

__all__ = ["digest", "plain_tree", "written_tree"]

_DEEPEST = 12


def plain_tree(source: Mapping[Any, Any]) -> dict[str, Any]:
    """Return nested dicts and lists of plain values; keys that are ``None`` are left out.

    Values with ``nominal_value`` and ``std_dev`` stay as they are, for the notation to read.
    """
    tree: dict[str, Any] = _plain(source, ())
    return tree


def _plain(value: Any, parts: tuple[str | int, ...]) -> Any:
    if len(parts) > _DEEPEST:
        raise InputError(
            "is nested too deeply",
            key=key_path(*parts[:3]),
            remedy="a bench sheet needs three levels",
        )
    if isinstance(value, Mapping):
        tree: dict[str, Any] = {}
        for key, item in value.items():
            name = _whole_text(str(key), parts)
            if name in tree:
                raise InputError(
                    "is given twice", key=key_path(*parts, name), remedy="keep one of the two"
                )
            if item is not None:
                tree[name] = _plain(item, (*parts, name))
        return tree
    if isinstance(value, list | tuple):
        return [_plain(item, (*parts, n)) for n, item in enumerate(value)]
    if isinstance(value, str):
        return _whole_text(value, parts)
    if isinstance(value, int) and value.bit_length() > LARGEST_BITS:
        raise InputError(
            "is a number beyond 1e300", key=key_path(*parts), remedy="correct the number"
        )
    if hasattr(value, "tolist") and not hasattr(value, "nominal_value"):
        return _plain(value.tolist(), (*parts, 0))
    return value


def _whole_text(text: str, parts: tuple[str | int, ...]) -> str:
    """Return text that has a UTF-8 form; a lone surrogate has none."""
    if any("\ud800" <= character <= "\udfff" for character in text):
        raise InputError(
            "holds half a character", key=key_path(*parts), remedy="type the text anew"
        )
    return text


def written_tree(tree: Mapping[str, Any], quantities: Mapping[str, Estimate]) -> dict[str, Any]:
    """Return the tree with values from ``uncertainties`` written as tables of the notation."""
    written: dict[str, Any] = _written(tree, (), quantities)
    return written


def _written(value: Any, parts: tuple[str | int, ...], known: Mapping[str, Estimate]) -> Any:
    if isinstance(value, Mapping):
        return {key: _written(item, (*parts, key), known) for key, item in value.items()}
    if isinstance(value, list):
        return [_written(item, (*parts, n), known) for n, item in enumerate(value)]
    if hasattr(value, "nominal_value"):
        found = known.get(key_path(*parts))
        if found is None:  # a temperature that something is stated for; it carries no uncertainty
            return {"value": float(value.nominal_value), "unit": "K"}
        return {"value": found.value, "unit": found.unit, "u": found.u}
    return value


def digest(tree: Mapping[str, Any]) -> str:
    """Return the SHA-256 of a tree that was in no file: of its JSON with sorted keys."""
    text = json.dumps(tree, sort_keys=True, ensure_ascii=False, default=str)
    return hashlib.sha256(text.encode("utf-8", "surrogatepass")).hexdigest()
