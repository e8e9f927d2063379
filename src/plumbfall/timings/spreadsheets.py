"""A sheet of an XLSX workbook as rows of cells."""

from __future__ import annotations

import datetime as dt
import io
import re
import zipfile
import zlib
from collections.abc import Iterator

from plumbfall.errors import nearest_name
from plumbfall.timings.columns import number_text
from plumbfall.timings.files import RawFile
from plumbfall.timings.grid import StoredTime
from plumbfall.timings.notices import Notices, quoted

__all__ = ["LARGEST_WORKBOOK", "sheet_rows"]

LARGEST_WORKBOOK = 200_000_000
"""Bytes of the largest workbook that is read, once unpacked."""

_MOST_CELLS = 3_000_000
_CELL = re.compile(rb"""<(?:\w+:)?(?:c|row)\s(?:[^>]*?\s)?r=["']([A-Z]{0,3})([0-9]{1,7})["']""")
_SHEET = re.compile(rb"""<(?:\w+:)?sheet\s[^>]*\br:id=["']([^"']*)["']""")
_FORMULA_ALONE = re.compile(
    rb"""<c\s(?:[^>]*?\s)?r=["']([A-Z]{1,3})([0-9]{1,7})["'][^>]*>\s*"""
    rb"""<f(?:\s[^>]*)?(?:/>|>[^<]*</f>)\s*(?:<v\s*/>|<v></v>)?\s*</c>"""
)
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
        with zipfile.ZipFile(io.BytesIO(raw.data)) as archive:
            _note_formulas(archive, names.index(sheet) if sheet is not None else 0, notices)
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
    known: dict[str, str] = {}  # equal texts are kept once
    rows = []
    for row in values:
        texts = [_text(value) for value in row]
        rows.append([known.setdefault(one, one) if type(one) is str else one for one in texts])
    del values
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
            letters: set[bytes] = set()
            height = 0
            for found in _CELL.finditer(content):
                letters.add(found[1])
                row = int(found[2])
                if row > height:
                    height = row
            width = max(map(_column_number, letters), default=0)
            if width * height > _MOST_CELLS:
                return (
                    f"a sheet spans {height:,} rows by {width:,} columns; at most"
                    f" {_MOST_CELLS:,} cells are read"
                )
    return ""


def _note_formulas(archive: zipfile.ZipFile, number: int, notices: Notices) -> None:
    """Note formulas of a sheet that were saved without their values, which would read as empty."""
    sheets = _SHEET.findall(archive.read("xl/workbook.xml"))
    related = archive.read("xl/_rels/workbook.xml.rels") if number < len(sheets) else b""
    targets = dict(_related(related))
    path = "xl/" + targets.get(sheets[number] if number < len(sheets) else b"", "").lstrip("/")
    path = path.replace("xl/xl/", "xl/")
    if path not in archive.namelist():
        return
    for found in _FORMULA_ALONE.finditer(archive.read(path)):
        notices.error(
            f"cell {found[1].decode()}{found[2].decode()} has a formula without its value",
            "open the workbook in a spreadsheet program and save it, or save the sheet as CSV",
            int(found[2]),
            _column_number(found[1]),
        )


def _related(relations: bytes) -> Iterator[tuple[bytes, str]]:
    """Yield the name and the target of every relation of a workbook."""
    for tag in re.findall(rb"<(?:\w+:)?Relationship\s[^>]*>", relations):
        name = re.search(rb"""\sId=["']([^"']*)["']""", tag)
        target = re.search(rb"""\sTarget=["']([^"']*)["']""", tag)
        if name and target:
            yield name[1], target[1].decode("utf-8", "replace")


def _column_number(letters: bytes) -> int:
    number = 0
    for letter in letters:
        number = number * 26 + letter - 64
    return number


def _text(value: object) -> str:
    """Return a cell's value as one would type it."""
    if isinstance(value, float):
        return number_text(value)
    if isinstance(value, dt.time):
        value = dt.timedelta(
            hours=value.hour,
            minutes=value.minute,
            seconds=value.second,
            microseconds=value.microsecond,
        )
    if isinstance(value, dt.timedelta):
        return StoredTime(_clock_text(value))
    return value.isoformat() if isinstance(value, dt.datetime) else str(value)


def _clock_text(span: dt.timedelta) -> str:
    """Return a span of time as ``h:mm:ss.ff``, without zeros at its end."""
    seconds, rest = divmod(span, dt.timedelta(seconds=1))
    fraction = f".{rest.microseconds:06d}".rstrip("0").rstrip(".")
    minutes, seconds = divmod(seconds, 60)
    return f"{minutes // 60:02d}:{minutes % 60:02d}:{seconds:02d}{fraction}"
