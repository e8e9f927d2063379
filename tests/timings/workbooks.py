"""Writes small XLSX workbooks part by part, as ISO/IEC 29500 lays them out."""

from __future__ import annotations

import zipfile
from collections.abc import Mapping, Sequence
from pathlib import Path
from xml.sax.saxutils import escape

_MAIN = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
_RELATIONS = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
_PACKAGE = "http://schemas.openxmlformats.org/package/2006"

# cell styles: 0 general, 1 mm:ss.0 (built-in format 47), 2 h:mm:ss (21), 3 date (14)
_STYLES = (
    f'<styleSheet xmlns="{_MAIN}"><fonts count="1"><font/></fonts><fills count="1"><fill/></fills>'
    '<borders count="1"><border/></borders><cellStyleXfs count="1"><xf/></cellStyleXfs>'
    '<cellXfs count="4"><xf numFmtId="0"/><xf numFmtId="47" applyNumberFormat="1"/>'
    '<xf numFmtId="21" applyNumberFormat="1"/><xf numFmtId="14" applyNumberFormat="1"/></cellXfs>'
    "</styleSheet>"
)


class Styled(float):
    """A number with a cell style: a time or date as a spreadsheet stores it."""

    style: int

    def __new__(cls, value: float, style: int) -> Styled:
        made = super().__new__(cls, value)
        made.style = style
        return made


class Broken(str):
    """An error value such as ``#DIV/0!``."""

    __slots__ = ()


def _cell(value: object, name: str) -> str:
    if value is None:
        return ""
    if isinstance(value, Broken):
        return f'<c r="{name}" t="e"><v>{escape(value)}</v></c>'
    if isinstance(value, bool):
        return f'<c r="{name}" t="b"><v>{int(value)}</v></c>'
    if isinstance(value, (int, float)):
        return f'<c r="{name}" s="{getattr(value, "style", 0)}"><v>{value!r}</v></c>'
    return f'<c r="{name}" t="inlineStr"><is><t>{escape(str(value))}</t></is></c>'


def _sheet(rows: Sequence[Sequence[object]]) -> str:
    lines = []
    for number, row in enumerate(rows, 1):
        cells = "".join(_cell(value, f"{chr(65 + n)}{number}") for n, value in enumerate(row))
        if cells:
            lines.append(f'<row r="{number}">{cells}</row>')
    return f'<worksheet xmlns="{_MAIN}"><sheetData>{"".join(lines)}</sheetData></worksheet>'


def write_workbook(path: Path, sheets: Mapping[str, Sequence[Sequence[object]]]) -> Path:
    """Write a workbook of the given sheets, each a list of rows of values."""
    names = list(sheets)
    kinds = "application/vnd.openxmlformats-officedocument.spreadsheetml"
    overrides = "".join(
        f'<Override PartName="/xl/worksheets/sheet{n}.xml" ContentType="{kinds}.worksheet+xml"/>'
        for n in range(1, len(names) + 1)
    )
    listed = "".join(
        f'<sheet name="{escape(name)}" sheetId="{n}" r:id="rId{n}"/>'
        for n, name in enumerate(names, 1)
    )
    relations = "".join(
        f'<Relationship Id="rId{n}" Type="{_RELATIONS}/worksheet"'
        f' Target="worksheets/sheet{n}.xml"/>'
        for n in range(1, len(names) + 1)
    )
    relations += (
        f'<Relationship Id="rId{len(names) + 1}" Type="{_RELATIONS}/styles" Target="styles.xml"/>'
    )
    with zipfile.ZipFile(path, "w", zipfile.ZIP_DEFLATED) as archive:
        archive.writestr(
            "[Content_Types].xml",
            f'<Types xmlns="{_PACKAGE}/content-types">'
            '<Default Extension="rels" ContentType="application/vnd.openxmlformats-package'
            '.relationships+xml"/><Default Extension="xml" ContentType="application/xml"/>'
            f'<Override PartName="/xl/workbook.xml" ContentType="{kinds}.sheet.main+xml"/>'
            f'<Override PartName="/xl/styles.xml" ContentType="{kinds}.styles+xml"/>'
            f"{overrides}</Types>",
        )
        archive.writestr(
            "_rels/.rels",
            f'<Relationships xmlns="{_PACKAGE}/relationships"><Relationship Id="rId1"'
            f' Type="{_RELATIONS}/officeDocument" Target="xl/workbook.xml"/></Relationships>',
        )
        archive.writestr(
            "xl/workbook.xml",
            f'<workbook xmlns="{_MAIN}" xmlns:r="{_RELATIONS}"><sheets>{listed}</sheets>'
            "</workbook>",
        )
        archive.writestr(
            "xl/_rels/workbook.xml.rels",
            f'<Relationships xmlns="{_PACKAGE}/relationships">{relations}</Relationships>',
        )
        archive.writestr("xl/styles.xml", _STYLES)
        for number, name in enumerate(names, 1):
            archive.writestr(f"xl/worksheets/sheet{number}.xml", _sheet(sheets[name]))
    return path
