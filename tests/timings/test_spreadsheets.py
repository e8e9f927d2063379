"""XLSX workbooks (invented) through the same path as text."""

from __future__ import annotations

import zipfile

import pytest

from plumbfall.bench.records import Bench, TimingHints
from plumbfall.timings import collect, read_timings
from timings.workbooks import Broken, Styled, write_workbook

# days since 1899-12-30 in the 1900 date system: ISO/IEC 29500-1, 18.17.4.1
MARCH_2 = 46083


def test_the_first_sheet_is_read(tmp_path):
    path = write_workbook(
        tmp_path / "a.xlsx",
        {
            "drops": [
                [],
                ["set", "drop", "ball", "time [s]", "temp [degC]", "started", "status", "note"],
                ["A", 1, 2, 12.84, 25, Styled(MARCH_2 + 0.375, 3), "", "x"],
                [],
                ["A", 2, 2, "1:03.15", 25.1, Styled(0.375, 2), "void", Broken("#N/A")],
                ["A", 3, 2, "n/a", None, "2026-03-02", None, None],
            ],
            "more": [["time [s]"], [3]],
        },
    )
    timings = read_timings(path)
    table = timings.table
    assert table["line"].tolist() == [3, 5, 6]
    assert table["time_s"].tolist()[:2] == [12.84, 63.15]
    assert table["temperature_K"].tolist()[:2] == [298.15, 298.25]
    assert table["ball"].tolist() == ["2", "2", "2"]
    assert table["started"].tolist() == ["2026-03-02T09:00:00", "09:00:00", "2026-03-02"]
    assert table["status"].tolist() == ["used", "void", "excluded"]
    assert [repair.what for repair in timings.repairs] == [
        "the first of 2 sheets, 'drops', is read"
    ]
    assert read_timings(path, sheet="more").table["time_s"].tolist() == [3.0]


def test_times_that_a_spreadsheet_made_its_own_are_refused(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    rows = [
        ["time [s]"],
        [Styled(63 / 1440, 2)],
        [Styled(MARCH_2 + 0.5, 3)],
        [True],
        ["12,84"],
        [7.5],
    ]
    write_workbook(tmp_path / "a.xlsx", {"S": rows})
    typed = "format the column as text and type"
    assert [str(problem) for problem in collect("a.xlsx").problems] == [
        "a.xlsx:2:1: '01:03:00' is stored as a time of day; it may have been typed as minutes and"
        f" seconds, and be sixty times too long; {typed} the times again, type seconds, or head the"
        " column 'time [h:mm:ss]' if it is right",
        "a.xlsx:3:1: '2026-03-02T12:00:00' is a date where a time is expected; spreadsheets turn"
        f" entries into dates; {typed} the value again as it was recorded",
        "a.xlsx:4:1: 'True' is not a time; type seconds such as 12.84, or minutes and seconds such"
        " as 1:03.15",
        "a.xlsx:5:1: '12,84' has a comma, and other numbers of this file have a decimal point;"
        ' write all numbers with a point, or all with a comma and set decimal = "," under [timings]'
        " in the bench sheet",
    ]


def test_workbooks_that_cannot_be_read_are_refused(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    write_workbook(tmp_path / "a.xlsx", {"drops": [["time [s]"], [1]], "empty": []})
    assert str(collect("a.xlsx", sheet="drop").problems[0]) == (
        "a.xlsx: timings.sheet: there is no sheet 'drop'; did you mean 'drops'? the workbook has"
        " 'drops', 'empty'"
    )
    assert str(collect("a.xlsx", sheet="empty").problems[0]) == (
        "a.xlsx: the sheet is empty; it needs headings and one row for each drop"
    )
    with zipfile.ZipFile("b.xlsx", "w") as archive:
        archive.writestr("word/document.xml", "<x/>")
    assert str(collect("b.xlsx").problems[0]) == (
        "b.xlsx: the file is a zip archive, not a workbook; save the sheet as CSV and name that"
        " file"
    )
    whole = (tmp_path / "a.xlsx").read_bytes()
    (tmp_path / "c.xlsx").write_bytes(whole[:-40])
    assert "c.xlsx: the workbook cannot be read" in str(collect("c.xlsx").problems[0])


def test_headings_further_down_are_found(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    rows = [["Lab 7"], [], ["drop", "time"], ["", "s"], [1, 12.84], ["mean", 12.84]]
    write_workbook(tmp_path / "a.xlsx", {"S": rows})
    timings = read_timings("a.xlsx")
    assert timings.table[["line", "time_s"]].values.tolist() == [[5, 12.84]]
    assert [(one.line, one.what) for one in timings.repairs] == [
        (1, "lines above the headings in line 3 are not read: 'Lab 7'"),
        (4, "units are taken from this row: time in s"),
        (6, "'mean' is no drop; the row is left out"),
    ]


def test_a_transposed_sheet_is_read_where_declared(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    rows = [["ball", "A", "B"], ["time [s]", 12.84, "soon"], ["temperature [degC]", 25, 26]]
    write_workbook(tmp_path / "a.xlsx", {"S": rows})
    timings = collect("a.xlsx", Bench(timings=TimingHints(transposed=True), balls={"A": 1, "B": 2}))
    assert timings.table["temperature_K"].tolist() == [298.15, 299.15]
    assert timings.table[["line", "column"]].values.tolist() == [[2, 2], [2, 3]]
    assert [problem.place for problem in timings.problems] == ["a.xlsx:2:3"]


@pytest.mark.parametrize("size", [300_000_000])
def test_a_workbook_that_unpacks_to_too_much_is_refused(size, tmp_path):
    path = write_workbook(tmp_path / "a.xlsx", {"S": [["time [s]"], [1]]})
    with zipfile.ZipFile(path, "a", zipfile.ZIP_DEFLATED) as archive:
        archive.writestr("xl/worksheets/sheet2.xml", b" " * size)
    assert path.stat().st_size < 1_000_000
    assert "bytes unpacked; at most 200,000,000 are read" in collect(path).problems[0].message


def test_a_cell_at_the_far_corner_does_not_fill_the_memory(tmp_path):
    path = write_workbook(tmp_path / "a.xlsx", {"S": [["time [s]"], [1]]})
    with zipfile.ZipFile(path) as archive:
        parts = {name: archive.read(name) for name in archive.namelist()}
    sheet = "xl/worksheets/sheet1.xml"
    far = b'<row r="1048576"><c r="XFD1048576"><v>1</v></c></row></sheetData>'
    parts[sheet] = parts[sheet].replace(b"</sheetData>", far)
    with zipfile.ZipFile(path, "w") as archive:
        for name, content in parts.items():
            archive.writestr(name, content)
    assert collect(path).problems[0].message == (
        "a sheet spans 1,048,576 rows by 16,384 columns; at most 3,000,000 cells are read"
    )


def test_times_with_seconds_are_read_as_a_spreadsheet_stores_them(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    rows = [["time"], [Styled(63.15 / 86400, 1)], [Styled(62 / 86400, 2)], ["1:03.15"]]
    write_workbook(tmp_path / "a.xlsx", {"S": rows})
    assert read_timings("a.xlsx").table["time_s"].tolist() == [63.15, 62.0, 63.15]
    rows = [["time [h:mm:ss]"], [Styled(63 / 1440, 2)]]
    write_workbook(tmp_path / "b.xlsx", {"S": rows})
    assert read_timings("b.xlsx").table["time_s"].tolist() == [3780.0]


@pytest.mark.parametrize(
    ("saved", "seconds"), [("<v>12.84</v>", 12.84), ("", None), ("<v/>", None)]
)
def test_a_formula_is_read_by_its_value_and_refused_without_one(
    saved, seconds, tmp_path, monkeypatch
):
    monkeypatch.chdir(tmp_path)
    path = write_workbook(tmp_path / "a.xlsx", {"S": [["time [s]"], [1.5], [2.5]]})
    with zipfile.ZipFile(path) as archive:
        parts = {name: archive.read(name) for name in archive.namelist()}
    sheet = "xl/worksheets/sheet1.xml"
    old = b"<v>2.5</v>"
    assert old in parts[sheet]
    parts[sheet] = parts[sheet].replace(old, b"<f>6.42*2</f>" + saved.encode())
    with zipfile.ZipFile(path, "w") as archive:
        for name, content in parts.items():
            archive.writestr(name, content)
    timings = collect("a.xlsx")
    if seconds:
        assert not timings.problems
        assert timings.table["time_s"].tolist() == [1.5, seconds]
    else:
        assert [str(problem) for problem in timings.problems] == [
            "a.xlsx:3:1: cell A3 has a formula without its value; open the workbook in a"
            " spreadsheet program and save it, or save the sheet as CSV"
        ]
