"""The history file of checks: one line each, appended under a lock and on disk before return."""

from __future__ import annotations

import csv
import io
import os
from collections.abc import Sequence
from pathlib import Path

from plumbfall._version import __version__
from plumbfall.calibration.check import CheckResult
from plumbfall.calibration.history_lines import (
    COLUMNS,
    FORMULA_STARTS,
    HistoryLine,
    heading_of,
    read_history,
)
from plumbfall.errors import InputError

__all__ = ["append_history", "history_line"]

SECONDS = 60.0
"""How long an append waits for another process to finish its own."""


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


def _has_text(path: Path) -> bool:
    return path.exists() and path.stat().st_size > 0


def _append(path: Path, lines: Sequence[HistoryLine]) -> None:
    """Append lines and wait for the disk; what was written of them is taken back on failure."""
    existed, new = path.exists(), not _has_text(path)
    heading = list(COLUMNS)
    if not new:
        with path.open(encoding="utf-8-sig", newline="") as file:
            heading = heading_of(csv.reader(file))
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


def _cell(value: str | float | None) -> str:
    if value is None:
        return ""
    if isinstance(value, float):
        return f"{value:.6g}"
    text = " ".join(value.split())
    return f"'{text}" if text.startswith(FORMULA_STARTS) else text
