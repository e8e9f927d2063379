"""Files that must be refused, each with everything a technician would read about it."""

from __future__ import annotations

import tomllib
from pathlib import Path

import pytest

from plumbfall.bench.records import TimingHints
from plumbfall.errors import InputError
from plumbfall.timings import collect, read_timings
from timings.benches import bench

CASES = tomllib.loads((Path(__file__).parent / "wrong_files.toml").read_text(encoding="utf-8"))


@pytest.mark.parametrize("name", CASES)
def test_a_wrong_file_is_refused_with_every_problem_in_it(name, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    Path("t.csv").write_text(CASES[name]["file"], encoding="utf-8", newline="")
    sheet = None
    if "timings" in CASES[name] or "marks" in CASES[name]:
        hints = TimingHints(**CASES[name].get("timings", {}))
        sheet = bench(balls="AB", marks=CASES[name].get("marks", 0), timings=hints)
    with pytest.raises(InputError) as refused:
        read_timings("t.csv", sheet)
    assert [str(problem) for problem in refused.value.problems] == CASES[name]["says"]


def test_there_are_enough_wrong_files():
    assert len(CASES) >= 60


_TEXT = "save the timings as CSV (comma or semicolon separated, UTF-8) or as XLSX"
_UTF8 = (
    'save the file as UTF-8, or set encoding = "cp1252" (or whatever it is written in) under'
    " [timings] in the bench sheet"
)
BYTES = {
    "empty": (b"", ["t.csv: the file is empty; it needs headings and one row for each drop"]),
    "white space": (
        b"\n \n\n",
        ["t.csv: the file is empty; it needs headings and one row for each drop"],
    ),
    "mark alone": (
        b"\xef\xbb\xbf",
        ["t.csv: the file is empty; it needs headings and one row for each drop"],
    ),
    "nulls": (b"ab\0cd", [f"t.csv: the file is a binary file, not text; {_TEXT}"]),
    "portable document": (b"%PDF-1.7\n", [f"t.csv: the file is a PDF document, not text; {_TEXT}"]),
    "old workbook": (
        b"\xd0\xcf\x11\xe0\xa1\xb1",
        [f"t.csv: the file is an old spreadsheet or office document, not text; {_TEXT}"],
    ),
    "compressed": (b"\x1f\x8b\x08", [f"t.csv: the file is a compressed file, not text; {_TEXT}"]),
    "picture": (b"\x89PNG\r\n\x1a\n", [f"t.csv: the file is a picture, not text; {_TEXT}"]),
    "not a zip": (
        b"PK\x03\x04abc",
        [
            "t.csv: the workbook cannot be read: File is not a zip file; save the sheet as CSV and"
            " name that file"
        ],
    ),
    "stray bytes": (
        b"drop,time [s],note\r\n1,12.84,25\xc2\xb0\r\n2,12.84,\xb5\r\n",
        [f"t.csv:3:9: byte 0xb5 at place 9 of the line is not utf-8 text; {_UTF8}"],
    ),
    "a byte that no encoding has": (
        b"drop,time [s],note\r\n1,12.84,25\x81\r\n2,12.84,\x8d\r\n",
        [
            f"t.csv:2:11: byte 0x81 at place 11 of the line is not utf-8 text; {_UTF8}",
            f"t.csv:3:9: byte 0x8d at place 9 of the line is not utf-8 text; {_UTF8}",
        ],
    ),
    "half of a character": (
        b"\xff\xfet\x00i",
        ["t.csv: the file is not whole utf-16 text; save it again as UTF-8, or copy it again"],
    ),
    "long line": (
        b"time [s]\n" + b"1" * 50_000_000,
        [
            "t.csv:2: the line is 50,000,000 bytes long; at most 100,000 are read; a timing file"
            " has one short line for each drop; look for lost line ends"
        ],
    ),
    "wide headings": (
        b"time [s]" + b",x" * 1200 + b"\n1\n",
        ["t.csv:1: the headings have 1201 cells; a timing file has at most 1000 columns"],
    ),
    "heading alone": (
        b"time [s]",
        ["t.csv:1: there are headings but no rows under them; write one row for each drop"],
    ),
    "long name": (
        b"set,time [s]\n" + b"A" * 300 + b",12.84\n",
        ["t.csv:2:1: the set 'AAAAAAAAAAAAAAAAAAAA…' has 300 characters; use names of at most 120"],
    ),
    "long quoted cell": (
        b'time [s],note\n1,"' + b"x" * 90_000 + b"\n" + b"y" * 90_000 + b'"\n',
        ["t.csv:2:2: the note has 180001 characters; write at most 2000"],
    ),
}


@pytest.mark.parametrize("name", BYTES)
def test_bytes_that_are_no_timing_file_are_refused(name, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    content, says = BYTES[name]
    Path("t.csv").write_bytes(content)
    with pytest.raises(InputError) as refused:
        read_timings("t.csv")
    assert [str(problem) for problem in refused.value.problems] == says


def test_what_is_no_file_is_refused(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    Path("folder").mkdir()
    problems = collect(["nothing.csv", "folder", "*.tsv", "a\0b"]).problems
    assert [str(problem) for problem in problems] == [
        "*.tsv: no file matches this pattern; check the folder and the name",
        "nothing.csv: there is no such file; check the folder and the name",
        "folder: is a folder, not a timing file; name the files in it, such as 'folder/*.csv'",
        "a\0b: the file cannot be read: embedded null byte; check the name and the permissions",
    ]
    assert str(collect([]).problems[0]) == "no timing file was named; name one or more files"
    with pytest.raises(TypeError, match="a source of timings is a path or a DataFrame, not int"):
        read_timings([3])


def test_an_unknown_encoding_is_refused(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    Path("t.csv").write_text("time [s]\n1\n")
    problems = collect("t.csv", encoding="latin-99").problems
    assert [str(problem) for problem in problems] == [
        "t.csv: there is no encoding 'latin-99'; usual ones are utf-8, utf-16 and cp1252"
    ]


def test_problems_of_a_hopeless_file_are_counted_beyond_the_first_500(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    Path("t.csv").write_text("time [s]\n" + "".join(f"x{n}\n" for n in range(700)))
    problems = collect("t.csv").problems
    assert len(problems) == 501
    assert problems[0].line == 2
    assert str(problems[-1]) == (
        "t.csv: and 200 more problems of this file; correct those listed first"
    )


def test_a_wrong_time_in_a_void_row_is_a_warning(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    Path("t.csv").write_text("time [s],status,note\n0,void,false start\n12.84,,\n")
    timings = read_timings("t.csv")
    assert timings.table["status"].tolist() == ["void", "used"]
    assert timings.table["time_s"].isna().tolist() == [True, False]
    assert [(str(problem), problem.severity) for problem in timings.problems] == [
        (
            "t.csv:2:1: '0' is not a fall time, which is above zero; the row is void, so the"
            " value is left out",
            "warning",
        )
    ]


def test_minutes_and_seconds_that_a_spreadsheet_made_hours_are_warned_about(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    Path("t.csv").write_text("time\n1:03:00\n1:04:00\n")
    assert [(str(problem), problem.severity) for problem in read_timings("t.csv").problems] == [
        (
            "t.csv:2:1: all clock times of 'time' are whole minutes, such as 1:03:00; if minutes"
            " and seconds were typed, a spreadsheet has made them hours and minutes: format the"
            " column as text and type them again",
            "warning",
        )
    ]
    for rest in ("1:04:01", "0:04:00", "4:00"):
        Path("t.csv").write_text(f"time\n1:03:00\n{rest}\n")
        assert not read_timings("t.csv").problems
