"""A sheet of an XLSX workbook as a grid of cells."""

from __future__ import annotations

import datetime as dt
import io
import re
import zipfile
import zlib

import numpy as np

from plumbfall.errors import nearest_name
from plumbfall.timings.columns import FloatColumn, TextColumn
from plumbfall.timings.files import RawFile
from plumbfall.timings.grid import Grid
from plumbfall.timings.notices import Notices, quoted

__all__ = ["LARGEST_WORKBOOK", "spreadsheet_grid"]

LARGEST_WORKBOOK = 200_000_000
"""Bytes of the largest workbook that is read, once unpacked."""

_MOST_CELLS = 20_000_000
_CELL = re.compile(rb"""<(?:\w+:)?(?:c|row)\s(?:[^>]*?\s)?r=["']([A-Z]{0,3})([0-9]{1,7})["']""")
_AS_CSV = "save the sheet as CSV and name that file"


def spreadsheet_grid(
    raw: RawFile, sheet: str | None, header_row: int | None, notices: Notices
) -> Grid | None:
    """Read the first or the named sheet; ``None``, and an error noted, where that fails."""
    rows = _rows(raw, sheet, notices)
    if rows is None:
        return None
    filled = [n for n, row in enumerate(rows, 1) if any(text.strip() for text in row)]
    if not filled:
        notices.error("the sheet is empty", "it needs headings and one row for each drop")
        return None
    heading = header_row if header_row is not None else filled[0]
    if heading not in filled:
        notices.error(
            f"there are no headings in row {heading}",
            "correct header_row under [timings] in the bench sheet",
            key="timings.header_row",
        )
        return None
    if heading != filled[0]:
        notices.repair(f"rows above the headings in row {heading} are not read", filled[0])
    below = [n for n in filled if n > heading]
    width = max(len(rows[n - 1]) for n in filled)
    headings = tuple(text.strip() for text in rows[heading - 1])
    cells = [[*rows[n - 1], *[""] * (width - len(rows[n - 1]))] for n in below]
    headings += ("",) * (width - len(headings))
    columns = tuple(TextColumn([row[place] for row in cells]) for place in range(width))
    stored = {
        place + 1: np.flatnonzero([isinstance(row[place], _StoredTime) for row in cells])
        for place in range(width)
    }
    return Grid(
        headings,
        heading,
        np.array(below, dtype=np.int64),
        columns,
        stored_times={place: found for place, found in stored.items() if found.size},
    )


class _StoredTime(str):
    """Text of a cell that the spreadsheet stores as a time of day or a duration."""

    __slots__ = ()


def _rows(raw: RawFile, sheet: str | None, notices: Notices) -> list[list[str]] | None:
    from python_calamine import CalamineError, CalamineWorkbook

    try:
        with zipfile.ZipFile(io.BytesIO(raw.data)) as archive:
            trouble = _trouble(archive)
        if trouble:
            notices.error(trouble, _AS_CSV)
            return None
        workbook = CalamineWorkbook.from_filelike(io.BytesIO(raw.data))
        names = list(workbook.sheet_names)
        if sheet is not None and sheet not in names:
            near = nearest_name(sheet, names)
            notices.error(
                f"there is no sheet {quoted(sheet)}",
                (f"did you mean {quoted(near)}? " if near else "")
                + f"the workbook has {', '.join(map(quoted, names[:8]))}",
                key="timings.sheet",
            )
            return None
        if sheet is None and len(names) > 1:
            notices.repair(f"the first of {len(names)} sheets, {quoted(names[0])}, is read")
        chosen = workbook.get_sheet_by_name(sheet if sheet is not None else names[0])
        values = chosen.to_python(skip_empty_area=False)
    except (
        zipfile.BadZipFile,
        zlib.error,
        CalamineError,
        OSError,
        ValueError,
        RuntimeError,
    ) as fault:
        notices.error(f"the workbook cannot be read: {fault}", _AS_CSV)
        return None
    return [[_text(value) for value in row] for row in values]


def _trouble(archive: zipfile.ZipFile) -> str:
    """Say why an archive is not to be unpacked, before anything large is made of it."""
    size = sum(entry.file_size for entry in archive.infolist())
    if "xl/workbook.xml" not in archive.namelist():
        return "the file is a zip archive, not a workbook"
    if size > LARGEST_WORKBOOK:
        return f"the workbook has {size:,} bytes unpacked; at most {LARGEST_WORKBOOK:,} are read"
    for name in archive.namelist():
        content = archive.read(name)  # checks that it is no longer than it says
        if name.startswith("xl/worksheets/"):
            cells = [(_column_number(found[1]), int(found[2])) for found in _CELL.finditer(content)]
            width = max((column for column, _ in cells), default=0)
            height = max((row for _, row in cells), default=0)
            if width * height > _MOST_CELLS:
                return f"a sheet spans {height:,} rows by {width:,} columns, mostly empty"
    return ""


def _column_number(letters: bytes) -> int:
    number = 0
    for letter in letters:
        number = number * 26 + letter - 64
    return number


def _text(value: object) -> str:
    """Return a cell's value as one would type it."""
    if isinstance(value, float):
        return FloatColumn(np.array([value])).text(0)
    if isinstance(value, (dt.time, dt.timedelta)):
        return _StoredTime(value)
    return value.isoformat() if isinstance(value, dt.datetime) else str(value)
