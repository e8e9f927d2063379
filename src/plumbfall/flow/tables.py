"""Tables that solvers write for use at run time: their form, their files, who makes them.

A table is a small JSON file: what it holds and what made it under ``about``, its numbers under
``arrays`` (``null`` where a node has no value). A module that makes a table defines a
``TableBuilder`` called ``TABLE`` and is named in ``TABLE_MODULES``.
"""

from __future__ import annotations

import importlib
import json
import os
import tempfile
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from importlib.resources import files
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

__all__ = [
    "TABLE_MODULES",
    "NodeCheck",
    "Table",
    "TableBuilder",
    "builders",
    "read_table",
    "tables_directory",
    "write_table",
]

FORMAT = "plumbfall/table/1"

# one line a table; imported only when its turn comes, as some need more than numpy and scipy
TABLE_MODULES = (
    "plumbfall.flow.creeping_tube",
    "plumbfall.flow.off_axis",
    "plumbfall.flow.end_excess",
    "plumbfall.flow.drag_map_table",
    "plumbfall.flow.start_table",
)


@dataclass(frozen=True)
class Table:
    """Numbers and what made them.

    ``about`` has at least ``quantity``, ``solver``, ``settings`` and an entry whose name starts
    with ``estimated``: the error the solver's author stands for.
    """

    name: str
    about: Mapping[str, object]
    arrays: Mapping[str, NDArray[np.float64]]


@dataclass(frozen=True)
class NodeCheck:
    """A node of a shipped table beside the same node computed anew."""

    node: str
    shipped: float
    recomputed: float
    tolerance: float
    absolute: bool = False

    @property
    def difference(self) -> float:
        """Difference, relative to the recomputed value unless the check is absolute."""
        difference = abs(self.shipped - self.recomputed)
        return difference if self.absolute else difference / abs(self.recomputed)

    @property
    def passed(self) -> bool:
        """Whether the two agree within the tolerance."""
        return self.difference <= self.tolerance


@dataclass(frozen=True)
class TableBuilder:
    """How a table is made and checked.

    ``build`` is handed a function to call after each of ``steps`` steps, for the progress bar;
    ``check`` recomputes a sample of the nodes of a table that was read. A ``slow`` table may
    be left out.
    """

    name: str
    title: str
    steps: int
    build: Callable[[Callable[[], None]], Table]
    check: Callable[[Table], Iterable[NodeCheck]]
    slow: bool = False


def builders() -> list[TableBuilder]:
    """Every table builder, in the order of ``TABLE_MODULES``."""
    return [importlib.import_module(module).TABLE for module in TABLE_MODULES]


def tables_directory() -> Path:
    """Directory of the tables that ship with the package."""
    return Path(str(files("plumbfall") / "physics" / "tables"))


def _listed(values: NDArray[np.float64]) -> str:
    """JSON of an array, one innermost list a line."""
    if values.ndim > 1:
        return "[\n" + ",\n".join(_listed(row) for row in values) + "\n]"
    return json.dumps([None if np.isnan(value) else float(value) for value in values])


def write_table(table: Table, directory: Path) -> Path:
    """Write a table beside its target and rename it, so that no half-written file is left.

    Parameters
    ----------
    table : Table
        What to write.
    directory : Path
        Where; the file is named after the table.

    Returns
    -------
    Path
        The file written.
    """
    target = directory / f"{table.name}.json"
    head = {"format": FORMAT, "name": table.name, "about": dict(table.about)}
    arrays = ",\n".join(
        f"{json.dumps(name)}: {_listed(values)}" for name, values in table.arrays.items()
    )
    opening = json.dumps(head, ensure_ascii=False, allow_nan=False, indent=1).removesuffix("\n}")
    content = f'{opening},\n "arrays": {{\n{arrays}\n}}\n}}\n'
    handle, draft = tempfile.mkstemp(dir=directory, prefix=f".{table.name}.", suffix=".json")
    try:
        with os.fdopen(handle, "w", encoding="utf-8") as file:
            file.write(content)
        Path(draft).chmod(0o644)
        os.replace(draft, target)
    except BaseException:
        Path(draft).unlink(missing_ok=True)
        raise
    return target


def read_table(name: str, directory: Path) -> Table:
    """Read a table that ``write_table`` wrote.

    Parameters
    ----------
    name : str
        Name of the table.
    directory : Path
        Where it is.

    Returns
    -------
    Table
        Its numbers as float arrays, NaN where a node has no value.

    Raises
    ------
    ValueError
        If the file is not a table of the expected format.
    """
    path = directory / f"{name}.json"
    content = json.loads(path.read_text(encoding="utf-8"))
    if content.get("format") != FORMAT:
        raise ValueError(f"{path}: format is {content.get('format')!r}, expected {FORMAT!r}")
    arrays = {key: np.array(values, dtype=float) for key, values in content["arrays"].items()}
    return Table(name=content["name"], about=content["about"], arrays=arrays)
