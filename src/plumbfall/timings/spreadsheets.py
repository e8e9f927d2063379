"""A sheet of an XLSX workbook as rows of cells."""

from __future__ import annotations

import datetime as dt
import io
import re
import zipfile
import zlib

from plumbfall.errors import nearest_name
from plumbfall.timings.columns import number_text
from plumbfall.timings.files import RawFile
from plumbfall.timings.grid import StoredTime
from plumbfall.timings.notices import Notices, quoted

__all__ = ["LARGEST_WORKBOOK", "sheet_rows"]

LARGEST_WORKBOOK = 200_000_000
"""Bytes of the largest workbook that is read, once unpacked."""

_MOST_CELLS = 20_000_000
_CELL = re.compile(rb"""<(?:\w+:)?(?:c|row)\s(?:[^>]*?\s)?r=["']([A-Z]{0,3})([0-9]{1,7})["']""")
_AS_CSV = "save the sheet as CSV and name that file"


def sheet_rows(raw: RawFile, sheet: str | None, notices: Notices) -> list[list[str]] | None:
    """Return the rows of the first or the named sheet as texts, from row 1 on.

    ``None``, and an error in the notices, where that fails or the sheet is empty.
    """
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
            notices.offer("sheet", f'"{names[0]}"')
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
    rows = [[_text(value) for value in row] for row in values]
    if not any(text.strip() for row in rows for text in row):
        notices.error("the sheet is empty", "it needs headings and one row for each drop")
        return None
    return rows


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
        return number_text(value)
    if isinstance(value, (dt.time, dt.timedelta)):
        return StoredTime(value)
    return value.isoformat() if isinstance(value, dt.datetime) else str(value)
