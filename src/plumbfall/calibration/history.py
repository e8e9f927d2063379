"""The history file of checks: one line each, appended under a lock and on disk before return."""

from __future__ import annotations

import csv
import io
import math
import os
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from pathlib import Path

from plumbfall._version import __version__
from plumbfall.calibration.check import CheckResult
from plumbfall.calibration.moments import moment_of
from plumbfall.errors import InputError, Problem

__all__ = ["COLUMNS", "HistoryLine", "append_history", "history_line", "read_history"]

COLUMNS = (
    "when", "run_set", "reference", "bias_percent", "u_percent", "e_n", "decision",
    "temperature_degC", "operator", "version", "input_sha256",
)  # fmt: skip

FORMULA_STARTS = ("=", "+", "-", "@")
"""What a spreadsheet takes for the start of a formula: names get an apostrophe in front."""

SECONDS = 60.0
"""How long an append waits for another process to finish its own."""


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


def history_line(check: CheckResult, input_sha256: str) -> HistoryLine:
    """Return the line of a check.

    Raises
    ------
    InputError
        Where nobody says when it was made.
    """
    if not check.when:
        raise InputError(
            f"the drops of run set '{check.run_set}' have no date, which the history needs",
            remedy="add a column started, such as 2026-03-02T09:10:00, or give --date 2026-03-02",
        )
    known = check.bias is not None
    return HistoryLine(
        when=check.when,
        run_set=check.run_set,
        reference=check.reference,
        bias_percent=100 * check.bias.value if check.bias is not None else None,
        u_percent=100 * check.bias.u if check.bias is not None else None,
        e_n=check.e_n,
        decision=check.decision,
        temperature_degC=check.temperature - 273.15 if known else None,
        operator=check.operator,
        version=__version__,
        input_sha256=input_sha256,
    )


def append_history(path: str | os.PathLike[str], lines: Sequence[HistoryLine]) -> int:
    """Append checks that the history does not have yet; return how many were appended.

    Processes that append at the same time wait for each other. A check of the same run set,
    reference and inputs is there once. The lines are on disk when this returns; where they could
    not all be written the file is as it was.

    Raises
    ------
    InputError
        Where the file is no history of checks, or cannot be written.
    """
    from filelock import FileLock, Timeout

    target = Path(path)
    if not target.parent.is_dir():
        raise InputError(
            "its folder does not exist", path=str(path), remedy="make the folder first"
        )
    try:
        with FileLock(f"{target}.lock", timeout=SECONDS):
            known = {line.key for line in read_history(target)} if _has_text(target) else set()
            new = list({line.key: line for line in lines if line.key not in known}.values())
            if new:
                _append(target, new)
            return len(new)
    except Timeout:
        raise InputError(
            f"another program has held its lock for {SECONDS:g} s",
            path=str(path),
            remedy=f"wait for it to end, or remove {target}.lock if there is none",
        ) from None
    except OSError as error:
        raise InputError(
            f"cannot be written: {error.strerror or error}",
            path=str(path),
            remedy="name a place you may write to, and close the file where it is open",
        ) from error


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
        heading = _heading(reader)
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


def _has_text(path: Path) -> bool:
    return path.exists() and path.stat().st_size > 0


def _append(path: Path, lines: Sequence[HistoryLine]) -> None:
    """Append lines and wait for the disk; what was written of them is taken back on failure."""
    existed, new = path.exists(), not _has_text(path)
    heading = list(COLUMNS)
    if not new:
        with path.open(encoding="utf-8-sig", newline="") as file:
            heading = _heading(csv.reader(file))
    buffer = io.StringIO(newline="")
    writer = csv.writer(buffer, lineterminator="\n")
    if new:
        writer.writerow(heading)
    for line in lines:
        cells = {name: _cell(getattr(line, name)) for name in COLUMNS}
        writer.writerow([cells.get(name, "") for name in heading])
    with open(path, "a+b") as file:
        before = file.seek(0, os.SEEK_END)
        text = buffer.getvalue()
        if before:
            file.seek(before - 1)
            if file.read(1) not in (b"\n", b"\r"):  # its last line was typed by hand
                text = "\n" + text
        try:
            file.write(text.encode("utf-8"))
            file.flush()
            os.fsync(file.fileno())
        except OSError:
            os.truncate(path, before)
            if not existed:
                path.unlink()
            raise
    if new and hasattr(os, "O_DIRECTORY"):  # a new name is on disk once its folder is
        folder = os.open(path.parent, os.O_RDONLY | os.O_DIRECTORY)
        try:
            os.fsync(folder)
        finally:
            os.close(folder)


def _heading(rows: Iterator[list[str]]) -> list[str]:
    """Return the first row that is no comment."""
    return [name.strip() for name in next((row for row in rows if not _is_comment(row)), [])]


def _is_comment(row: Sequence[str]) -> bool:
    return bool(row) and row[0].lstrip().startswith("#")


def _cell(value: str | float | None) -> str:
    if value is None:
        return ""
    if isinstance(value, float):
        return f"{value:.6g}"
    text = " ".join(value.split())
    return f"'{text}" if text.startswith(FORMULA_STARTS) else text


def _as_typed(cell: str) -> str:
    return cell[1:] if cell[:1] == "'" and cell[1:].startswith(FORMULA_STARTS) else cell
