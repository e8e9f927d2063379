"""What was understood of timing files and bench sheet, as JSON and as a table to check."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    import pandas as pd

    from plumbfall.bench.records import Bench
    from plumbfall.estimate import Estimate
    from plumbfall.timings.records import TimingFile, Timings

__all__ = ["SCHEMA", "inspection_text", "inspection_to_dict"]

SCHEMA = "plumbfall/inspect/1"
_DELIMITERS = {",": "comma", ";": "semicolon", "\t": "tab", "|": "pipe", " ": "space", "": "none"}
_DECIMALS = {".": "point", ",": "comma"}
_NAMES = ("tube", "liquid", "timer", "thermometer", "operator", "started")
_LISTED = 20
"""Rows, repairs and entries of each kind that the text shows; the JSON holds them all."""


def inspection_to_dict(timings: Timings, bench: Bench | None) -> dict[str, Any]:
    """Return the whole inspection as plain lists, dicts, strings and finite numbers."""
    return {
        "schema": SCHEMA,
        "files": [_file(file) for file in timings.files],
        "bench": None if bench is None else _bench(bench),
        "rows": _counts(timings),
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
    }


def _file(file: TimingFile) -> dict[str, Any]:
    return {
        "path": file.path,
        "sha256": file.sha256,
        "encoding": file.encoding,
        "delimiter": file.delimiter,
        "decimal": file.decimal,
        "heading_line": file.heading_line,
        "columns": [
            {
                "column": column.column,
                "heading": column.heading,
                "meaning": column.meaning or None,
                "unit": column.unit or None,
            }
            for column in file.columns
        ],
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


def _counts(timings: Timings) -> dict[str, int]:
    counts = timings.table["status"].value_counts()
    return {
        "read": len(timings.table),
        **{status: int(counts.get(status, 0)) for status in ("used", "void", "excluded")},
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


def inspection_text(timings: Timings, bench: Bench | None) -> str:
    """Return the inspection as plain text, for a person to check at a glance."""
    lines: list[str] = []
    for file in timings.files:
        lines += [*_file_lines(file, timings.table[timings.table["file"] == file.path]), ""]
    if bench is not None:
        lines += [*_bench_lines(bench), ""]
    counts = _counts(timings)
    lines.append(
        f"rows read {counts['read']} = used {counts['used']} + void {counts['void']}"
        f" + excluded {counts['excluded']}"
    )
    lines += _listing(
        "repaired", (_placed(r.file, r.line, r.column, r.what) for r in timings.repairs)
    )
    for severity, title in (("warning", "warnings"), ("error", "errors")):
        lines += _listing(
            title, (str(p) for p in timings.problems if p.severity == severity), most=None
        )
    return "\n".join(lines) + "\n"


def _placed(file: str, line: int | None, column: int | None, what: str) -> str:
    place = file
    if line is not None:
        place += f":{line}" + (f":{column}" if column is not None else "")
    return f"{place}: {what}" if place else what


def _listing(title: str, entries: Iterable[str], most: int | None = _LISTED) -> list[str]:
    found = [_one_line(entry) for entry in entries]
    if not found:
        return []
    shown = found if most is None else found[:most]
    rest = [f"  and {len(found) - len(shown)} more"] if len(shown) < len(found) else []
    return ["", f"{title} ({len(found)})", *(f"  {entry}" for entry in shown), *rest]


def _one_line(text: str) -> str:
    return "".join(c if c.isprintable() else " " for c in text)


def _columned(rows: Sequence[Sequence[str]], right: frozenset[int] = frozenset()) -> list[str]:
    rows = [[_one_line(cell) for cell in row] for row in rows]
    widths = [max(len(row[place]) for row in rows) for place in range(len(rows[0]))]
    return [
        "  "
        + "  ".join(
            cell.rjust(width) if place in right else cell.ljust(width)
            for place, (cell, width) in enumerate(zip(row, widths, strict=True))
        ).rstrip()
        for row in rows
    ]


def _file_lines(file: TimingFile, table: pd.DataFrame) -> list[str]:
    lines = [f"file {_one_line(file.path)}", f"  SHA-256 {file.sha256}"]
    if file.encoding:
        lines.append(
            f"  encoding {file.encoding}, delimiter {_DELIMITERS.get(file.delimiter, 'other')},"
            f" decimal {_DECIMALS.get(file.decimal, 'other')}, headings in line"
            f" {file.heading_line or 'not found'}"
        )
    if file.columns:
        lines += _columned(
            [
                ("column", "heading", "meaning", "unit"),
                *(
                    (str(c.column), c.heading, c.meaning or "not used", c.unit)
                    for c in file.columns
                ),
            ],
            frozenset({0}),
        )
    if len(table):
        lines += ["", *_drop_lines(table)]
    return lines


def _drop_lines(table: pd.DataFrame) -> list[str]:
    shown = table.head(_LISTED)
    rows: list[Sequence[str]] = [
        ("line", "set", "drop", "ball", "time / s", "temperature / K", "status", "note")
    ]
    columns = [shown[name].tolist() for name in ("line", "set", "drop", "ball", "status", "note")]
    measured = [map(_shown, shown[name].tolist()) for name in ("time_s", "temperature_K")]
    for line, run_set, drop, ball, status, note, time, temperature in zip(
        *columns, *measured, strict=True
    ):
        rows.append((str(line), run_set, str(drop), ball, time, temperature, status, note))
    rest = len(table) - len(shown)
    more = [f"  and {rest} more rows"] if rest else []
    return _columned(rows, frozenset({0, 2, 4, 5})) + more


def _shown(value: float) -> str:
    return "-" if math.isnan(value) else f"{value:.10g}"


def _bench_lines(bench: Bench) -> list[str]:
    rows: list[Sequence[str]] = [("entry", "as written", "as read", "standard uncertainty")]
    for key, estimate in bench.quantities().items():
        unit = "" if estimate.unit == "1" else f" {estimate.unit}"
        rows.append(
            (
                key,
                estimate.text,
                f"{estimate.value:.10g}{unit}",
                "exact" if estimate.exact else f"{estimate.u:.3g}{unit}",
            )
        )
    title = f"bench sheet {_one_line(bench.path)}".rstrip()
    return [title, *(_columned(rows) if len(rows) > 1 else [])]
