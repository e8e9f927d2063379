"""The lines of a history file of checks, and how they are read."""

from __future__ import annotations

import csv
import io
import math
import os
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from pathlib import Path

from plumbfall.calibration.moments import moment_of
from plumbfall.errors import InputError, Problem

__all__ = ["COLUMNS", "FORMULA_STARTS", "HistoryLine", "heading_of", "read_history"]

COLUMNS = (
    "when", "run_set", "reference", "bias_percent", "u_percent", "e_n", "decision",
    "temperature_degC", "operator", "version", "input_sha256",
)  # fmt: skip

FORMULA_STARTS = ("=", "+", "-", "@")
"""What a spreadsheet takes for the start of a formula: names get an apostrophe in front."""


@dataclass(frozen=True, slots=True, kw_only=True)
class HistoryLine:
    """One check as the history file keeps it; numbers are ``None`` where there were none."""

    when: str
    run_set: str
    reference: str
    bias_percent: float | None
    u_percent: float | None
    e_n: float | None
    decision: str
    temperature_degC: float | None
    operator: str
    version: str
    input_sha256: str

    @property
    def key(self) -> tuple[str, str, str]:
        """What makes two lines one and the same check."""
        return self.run_set, self.reference, self.input_sha256


def read_history(path: str | os.PathLike[str]) -> tuple[HistoryLine, ...]:
    """Read a history of checks, in the order of the file.

    Raises
    ------
    InputError
        With everything wrong with it, each with its line and column.
    """
    target = Path(path)
    try:
        text = target.read_bytes().decode("utf-8-sig")
    except UnicodeDecodeError as error:
        raise InputError(
            f"is not UTF-8 text at byte {error.start}",
            path=str(path),
            remedy="save it as CSV in UTF-8",
        ) from None
    except OSError as error:
        raise InputError(
            f"cannot be read: {error.strerror or error}",
            path=str(path),
            remedy="name the history that plumbfall check --history wrote",
        ) from error
    reader = csv.reader(io.StringIO(text, newline=""), strict=False)
    problems: list[Problem] = []
    found = []
    try:
        heading = heading_of(reader)
        _check_heading(heading, str(path))
        for row in reader:
            if any(cell.strip() for cell in row) and not _is_comment(row):
                found.append(_line(row, heading, str(path), reader.line_num, problems))
    except csv.Error as error:
        problems.append(Problem(f"is no CSV: {error}", path=str(path), line=reader.line_num))
    if problems:
        raise InputError(problems)
    return tuple(found)


def _check_heading(heading: Sequence[str], path: str) -> None:
    missing = [name for name in COLUMNS if name not in heading]
    if missing:
        raise InputError(
            f"is no history of checks: it has no column {', '.join(missing)}",
            path=path,
            line=1,
            remedy=f"its headings are {','.join(COLUMNS)}",
        )


def _line(
    row: list[str], heading: list[str], path: str, number: int, problems: list[Problem]
) -> HistoryLine:
    def refuse(name: str, what: str, remedy: str) -> None:
        column = heading.index(name) + 1
        problems.append(Problem(what, remedy, path=path, line=number, column=column))

    cells = dict(zip(heading, [_as_typed(cell.strip()) for cell in row], strict=False))
    if len(row) != len(heading):
        problems.append(
            Problem(
                f"has {len(row)} cells, and there are {len(heading)} headings",
                "give every heading a cell",
                path=path,
                line=number,
            )
        )

    def measured(name: str) -> float | None:
        text = cells.get(name, "")
        if not text:
            return None
        try:
            value = float(text)
        except ValueError:
            value = math.nan
        if not math.isfinite(value):
            refuse(name, f"'{text}' is no number", "write such as 0.12")
            return None
        return value

    if moment_of(cells.get("when", "")) is None:
        refuse("when", f"'{cells.get('when', '')}' is no date", "write such as 2026-03-02T09:10:00")
    return HistoryLine(
        when=cells.get("when", ""),
        run_set=cells.get("run_set", ""),
        reference=cells.get("reference", ""),
        bias_percent=measured("bias_percent"),
        u_percent=measured("u_percent"),
        e_n=measured("e_n"),
        decision=cells.get("decision", ""),
        temperature_degC=measured("temperature_degC"),
        operator=cells.get("operator", ""),
        version=cells.get("version", ""),
        input_sha256=cells.get("input_sha256", ""),
    )


def heading_of(rows: Iterator[list[str]]) -> list[str]:
    """Return the first row that is no comment."""
    return [name.strip() for name in next((row for row in rows if not _is_comment(row)), [])]


def _is_comment(row: Sequence[str]) -> bool:
    return bool(row) and row[0].lstrip().startswith("#")


def _as_typed(cell: str) -> str:
    return cell[1:] if cell[:1] == "'" and cell[1:].startswith(FORMULA_STARTS) else cell
