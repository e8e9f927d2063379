"""What was understood of timing files and bench sheet, as a table to check at a glance."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING, Any

from plumbfall.report.inspection import counts_of

if TYPE_CHECKING:
    import pandas as pd

    from plumbfall.bench.records import Bench
    from plumbfall.timings.records import Block, TimingFile, Timings

__all__ = ["inspection_text"]

_DELIMITERS = {",": "comma", ";": "semicolon", "\t": "tab", "|": "pipe", " ": "space"}
_DECIMALS = {".": "point", ",": "comma"}
_LISTED = 20
"""Rows that the text shows of each file; the JSON holds them all."""


def inspection_text(timings: Timings, bench: Bench | None) -> str:
    """Return the inspection as plain text, for a person to check at a glance."""
    lines: list[str] = []
    for file in timings.files:
        own = (timings.table["file"] == file.path).to_numpy()
        marks = None if timings.marks_s is None else timings.marks_s[own]
        lines += [*_file_lines(file, timings.table[own], marks), ""]
    if bench is not None:
        lines += [*_bench_lines(bench), ""]
    lines.append(_counted(timings.table))
    lines += _listing(
        "repaired", (_placed(r.file, r.line, r.column, r.what) for r in timings.repairs)
    )
    for severity, title in (("warning", "warnings"), ("error", "errors")):
        lines += _listing(title, (str(p) for p in timings.problems if p.severity == severity))
    if timings.offers:
        lines += [
            "",
            "lines for the bench sheet that would settle what is ambiguous; write those that are"
            " true",
            "  [timings]",
            *(f"  {_one_line(offer)}" for offer in timings.offers),
        ]
    return "\n".join(lines) + "\n"


def _counted(table: pd.DataFrame) -> str:
    counts = counts_of(table)
    refused = f" ({counts['refused']} of them refused)" if counts["refused"] else ""
    return (
        f"rows read {counts['read']} = used {counts['used']} + void {counts['void']}"
        f" + excluded {counts['excluded']}{refused}"
    )


def _placed(file: str, line: int | None, column: int | None, what: str) -> str:
    place = file
    if line is not None:
        place += f":{line}" + (f":{column}" if column is not None else "")
    return f"{place}: {what}" if place else what


def _listing(title: str, entries: Iterable[str]) -> list[str]:
    found = [_one_line(entry) for entry in entries]
    return ["", f"{title} ({len(found)})", *(f"  {entry}" for entry in found)] if found else []


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


def _file_lines(file: TimingFile, table: pd.DataFrame, marks: Any) -> list[str]:
    across = "column" if file.transposed else "line"
    lines = [f"file {_one_line(file.path)}", f"  SHA-256 {file.sha256}"]
    if file.encoding:
        heading = "not found" if file.heading_line is None else f"in {across} {file.heading_line}"
        lines.append(
            f"  encoding {file.encoding}, delimiter {_DELIMITERS.get(file.delimiter, 'none')},"
            f" decimal {_DECIMALS.get(file.decimal, 'other')}, headings {heading}"
        )
    elif file.heading_line is not None:
        lines.append(f"  headings in {across} {file.heading_line}")
    if file.transposed:
        lines.append("  transposed, as declared: a drop is a column")
    if len(table):
        lines.append("  " + _counted(table))
    for block in file.blocks:
        lines += _block_lines(block, file)
    if len(table):
        lines += ["", *_drop_lines(table, marks, file.transposed)]
    return lines


def _block_lines(block: Block, file: TimingFile) -> list[str]:
    lines = [""]
    if len(file.blocks) > 1:
        rows_told = f"{block.rows} row{'s' if block.rows != 1 else ''}"
        lines.append(f"  headings in line {block.heading_line}, for {rows_told}")
    rows = [
        (str(one.column or "-"), one.heading, one.meaning or "not used", one.unit)
        for one in block.columns
    ]
    first = "line" if file.transposed else "column"
    return lines + _columned([(first, "heading", "meaning", "unit"), *rows], frozenset({0}))


def _drop_lines(table: pd.DataFrame, marks: Any, transposed: bool) -> list[str]:
    shown = table.head(_LISTED)
    place = "column" if transposed else "line"
    names = (place, "set", "drop", "ball", "status", "note")
    times = map(_shown, shown["time_s"].tolist())
    celsius = map(_shown, (shown["temperature_K"] - 273.15).tolist())
    clocks = [""] * len(shown)
    if marks is not None:
        clocks = [
            "" if all(map(math.isnan, row)) else " ".join(map(_shown, row))
            for row in marks[: len(shown)].tolist()
        ]
    rows: list[Sequence[str]] = [
        (place, "set", "drop", "ball", "time / s", "temperature / degC", "status")
        + (("marks / s",) if marks is not None else ())
        + ("note",)
    ]
    for (at, run_set, drop, ball, status, note), time, degrees, clock in zip(
        shown[list(names)].astype(object).itertuples(index=False, name=None),
        times,
        celsius,
        clocks,
        strict=True,
    ):
        middle = (clock,) if marks is not None else ()
        rows.append((str(at), run_set, str(drop), ball, time, degrees, status, *middle, note))
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
