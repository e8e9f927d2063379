"""What was understood of timing files and bench sheet, as JSON."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    import pandas as pd

    from plumbfall.bench.records import Bench
    from plumbfall.estimate import Estimate
    from plumbfall.timings.records import ColumnRead, TimingFile, Timings

__all__ = ["SCHEMA", "counts_of", "inspection_to_dict"]

SCHEMA = "plumbfall/inspect/1"
_NAMES = ("tube", "liquid", "timer", "thermometer", "operator", "started")


def inspection_to_dict(timings: Timings, bench: Bench | None) -> dict[str, Any]:
    """Return the whole inspection as plain lists, dicts, strings and finite numbers."""
    return {
        "schema": SCHEMA,
        "files": [_file(file, timings) for file in timings.files],
        "bench": None if bench is None else _bench(bench),
        "rows": counts_of(timings.table),
        "drops": _drops(timings),
        "repairs": [
            {"file": r.file, "line": r.line, "column": r.column, "what": r.what}
            for r in timings.repairs
        ],
        "problems": [
            {
                "file": problem.path,
                "line": problem.line,
                "column": problem.column,
                "key": problem.key,
                "severity": problem.severity,
                "message": problem.message,
                "remedy": problem.remedy,
            }
            for problem in timings.problems
        ],
        "offers": list(timings.offers),
    }


def _file(file: TimingFile, timings: Timings) -> dict[str, Any]:
    return {
        "path": file.path,
        "sha256": file.sha256,
        "encoding": file.encoding,
        "delimiter": file.delimiter,
        "decimal": file.decimal,
        "transposed": file.transposed,
        "heading_line": file.heading_line,
        "columns": [_column(column) for column in file.columns],
        "blocks": [
            {
                "heading_line": block.heading_line,
                "rows": block.rows,
                "columns": [_column(column) for column in block.columns],
            }
            for block in file.blocks
        ],
        "rows": counts_of(timings.table[timings.table["file"] == file.path]),
    }


def _column(column: ColumnRead) -> dict[str, Any]:
    return {
        "column": column.column or None,
        "heading": column.heading,
        "meaning": column.meaning or None,
        "unit": column.unit or None,
    }


def _bench(bench: Bench) -> dict[str, Any]:
    """Return every entry as it is written, and every quantity as it was read, in SI."""
    return {
        "path": bench.path,
        "sha256": bench.sha256,
        "written": _plain(bench.source),
        "read": {key: _quantity(estimate) for key, estimate in bench.quantities().items()},
    }


def _quantity(estimate: Estimate) -> dict[str, Any]:
    return {
        "text": estimate.text,
        "value": _number(estimate.value),
        "unit": estimate.unit,
        "standard_uncertainty": _number(estimate.u),
        "distribution": estimate.distribution,
        "dof": _number(estimate.dof),
    }


def _plain(value: Any) -> Any:
    if isinstance(value, Mapping):
        return {str(key): _plain(inner) for key, inner in value.items()}
    if isinstance(value, (list, tuple)):
        return [_plain(inner) for inner in value]
    if isinstance(value, float):
        return _number(value)
    return value if value is None or isinstance(value, (bool, int, str)) else str(value)


def _number(value: float | None) -> float | None:
    return None if value is None or not math.isfinite(value) else float(value)


def counts_of(table: pd.DataFrame) -> dict[str, int]:
    """Count the rows of a table of drops by what became of them; those refused are excluded too."""
    counts = table["status"].value_counts()
    excluded = table["note"][table["status"] == "excluded"].astype(str)
    return {
        "read": len(table),
        **{status: int(counts.get(status, 0)) for status in ("used", "void", "excluded")},
        "refused": int(excluded.str.startswith("refused").sum()),
    }


def _drops(timings: Timings) -> list[dict[str, Any]]:
    table = timings.table
    marks: Sequence[Any] = [None] * len(table)
    if timings.marks_s is not None:
        rows = timings.marks_s.tolist()
        marks = [
            None if all(map(math.isnan, row)) else [_number(clock) for clock in row] for row in rows
        ]
    texts = {
        name: table[name].astype(object).tolist()
        for name in (*_NAMES, "file", "set", "ball", "status", "note")
    }
    numbers = {
        name: table[name].tolist()
        for name in ("line", "column", "drop", "time_s", "from_mark", "to_mark", "temperature_K")
    }
    return [
        {
            "file": texts["file"][row],
            "line": numbers["line"][row],
            "column": numbers["column"][row],
            "set": texts["set"][row],
            "drop": numbers["drop"][row],
            "ball": texts["ball"][row],
            "time_s": _number(numbers["time_s"][row]),
            "marks_s": marks[row],
            "from_mark": numbers["from_mark"][row],
            "to_mark": numbers["to_mark"][row],
            "temperature_K": _number(numbers["temperature_K"][row]),
            "status": texts["status"][row],
            "note": texts["note"][row],
            **{name: texts[name][row] for name in _NAMES},
        }
        for row in range(len(table))
    ]
