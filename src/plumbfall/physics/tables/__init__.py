"""The tables that the flow solvers wrote, read when they are first asked for."""

from __future__ import annotations

import json
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files

import numpy as np
from numpy.typing import NDArray

__all__ = ["ShippedTable", "shipped_table"]


@dataclass(frozen=True)
class ShippedTable:
    """Numbers of a table, and under ``about`` what they are, what made them, and their error."""

    about: Mapping[str, object]
    arrays: Mapping[str, NDArray[np.float64]]


@cache
def shipped_table(name: str) -> ShippedTable:
    """Read a table that ships with the package, once.

    Parameters
    ----------
    name : str
        Name of the table, as ``python -m plumbfall.flow --list`` prints it.

    Returns
    -------
    ShippedTable
        Float arrays, read-only; NaN where a node has no value.

    Raises
    ------
    FileNotFoundError
        If the package ships no such table.
    """
    text = (files(__name__) / f"{name}.json").read_text(encoding="utf-8")
    content = json.loads(text)
    arrays = {key: np.array(values, dtype=float) for key, values in content["arrays"].items()}
    for values in arrays.values():
        values.flags.writeable = False
    return ShippedTable(about=content["about"], arrays=arrays)
