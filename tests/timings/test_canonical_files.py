"""Canonical timing files (invented) against SI values typed by hand."""

from __future__ import annotations

import codecs
import math

import numpy as np
import pytest

from plumbfall.bench.records import Bench, TimingHints
from plumbfall.timings import read_timings
from plumbfall.timings.records import COLUMNS

NAN = math.nan


def read(tmp_path, content, name="batch 118.csv", **options):
    path = tmp_path / name
    path.write_bytes(content if isinstance(content, bytes) else content.encode("utf-8"))
    return read_timings(path, **options)


def times(timings):
    return timings.table["time_s"].tolist()


SAME = {
    "comma": "drop,ball,temperature [degC],time [s]\n1,A,25.0,12.84\n2,A,25.1,63.15\n",
    "semicolon": "drop;ball;temperature (degC);time (s)\n1;A;25.0;12.84\n2;A;25.1;63.15\n",
    "decimal comma": "Drop;Ball;Temp [°C];Fall time [s]\n1;A;25,0;12,84\n2;A;25,1;63,15\n",
    "tab": "drop\tball\ttemperature / °C\ttime / s\n1\tA\t25.0\t12.84\n2\tA\t25.1\t63.15\n",
    "pipe": "drop | ball | temp_C | time_s\n 1 | A | 25.0 | 12.84\n 2 | A | 25.1 | 63.15\n",
    "byte order mark": "\ufeffdrop,ball,T_degC,t_s\n1,A,25.0,12.84\n2,A,25.1,63.15\n",
    "line feeds and returns": "n,ball,T [C],t [s]\r\n1,A,25.0,12.84\r\n2,A,25.1,63.15\r\n",
    "returns": "no,sphere,T (degC),t (s)\r1,A,25.0,12.84\r2,A,25.1,63.15\r",
    "quotes": '"drop","ball","temp [degC]","time [s]"\n1,"A","25.0","12.84"\n2,"A",25.1,63.15\n',
    "comments and blanks": (
        "# invented\n\ndrop,ball,T [degC],time [s]\n1,A,25.0,12.84\n\n# x\n2,A,25.1,63.15\n"
    ),
    "minutes and seconds": "drop,ball,temp [degC],time\n1,A,25.0,0:12.84\n2,A,25.1,1:03.15\n",
    "hours": "drop,ball,temp [degC],time [h:mm:ss]\n1,A,25.0,0:00:12.84\n2,A,25.1,0:01:03.15\n",
    "milliseconds": "drop,ball,temp [degC],time [ms]\n1,A,25.0,12840\n2,A,25.1,63150\n",
    "minutes": "drop,ball,temp [degC],time [min]\n1,A,25.0,0.214\n2,A,25.1,1.0525\n",
    "kelvin": "drop,ball,temperature [K],time [s]\n1,A,298.15,12.84\n2,A,298.25,63.15\n",
    "fahrenheit": "drop,ball,temperature [degF],time [s]\n1,A,77,12.84\n2,A,77.18,63.15\n",
    "capitals": "DROP NO.,BALL,TEMP [DEGC],FALL TIME [S]\n1,A,25,12.84\n2,A,25.1,63.15\n",
    "order is free": "time [s],temperature [degC],ball,drop\n12.84,25.0,A,1\n63.15,25.1,A,2\n",
}


@pytest.mark.parametrize("name", SAME)
def test_every_way_of_writing_gives_the_same_drops(name, tmp_path):
    timings = read(tmp_path, SAME[name])
    table = timings.table
    assert tuple(table.columns) == COLUMNS
    assert times(timings) == pytest.approx([12.84, 63.15], rel=1e-15)
    assert table["temperature_K"].tolist() == pytest.approx([298.15, 298.25], rel=1e-15)
    assert table["ball"].tolist() == ["A", "A"]
    assert table["drop"].tolist() == [1, 2]
    assert table["set"].tolist() == ["batch 118", "batch 118"]
    assert table["status"].tolist() == ["used", "used"]
    assert not timings.problems
    assert not timings.repairs


@pytest.mark.parametrize(
    ("encoding", "mark"), [("utf-16", b""), ("utf-16-le", codecs.BOM_UTF16_LE)]
)
def test_utf_16_with_its_mark_is_read(encoding, mark, tmp_path):
    timings = read(tmp_path, mark + "time [s],note\n12.84,25 °C\n".encode(encoding))
    assert timings.table["note"].tolist() == ["25 °C"]
    assert timings.files[0].encoding == "utf-16"


def test_a_declared_encoding_is_used(tmp_path):
    text = "time [s];note\n12,84;25 °C\n"
    timings = read(tmp_path, text.encode("cp1252"), encoding="cp1252")
    assert timings.table["note"].tolist() == ["25 °C"]
    assert (timings.files[0].encoding, timings.files[0].decimal) == ("cp1252", ",")


def test_every_column_is_read(tmp_path):
    timings = read(
        tmp_path,
        "set,drop,ball,tube,liquid,timer,thermometer,operator,started,status,note,time [s]\n"
        'warm,7,A,T1,oil,watch,probe,NA,2026-03-02 09:15,VOID,"slipped, twice",12.84\n',
    )
    row = timings.table.iloc[0]
    assert row.to_dict() | {"file": "", "temperature_K": 0} == {
        "file": "",
        "line": 2,
        "column": 12,
        "set": "warm",
        "drop": 7,
        "ball": "A",
        "tube": "T1",
        "liquid": "oil",
        "timer": "watch",
        "thermometer": "probe",
        "operator": "NA",
        "started": "2026-03-02T09:15",
        "status": "void",
        "note": "slipped, twice",
        "time_s": 12.84,
        "from_mark": 1,
        "to_mark": 0,
        "temperature_K": 0,
    }
    assert math.isnan(row["temperature_K"])


def test_line_numbers_are_right_after_a_quoted_line_break(tmp_path):
    timings = read(tmp_path, 'time [s],note\n12.84,"two\nlines"\n# c\n\n63.15,x\n')
    assert timings.table["line"].tolist() == [2, 6]
    assert timings.table["note"].tolist() == ["two\nlines", "x"]
    assert [(r.line, r.column, r.what) for r in timings.repairs] == [
        (2, 2, "a quoted cell runs on to line 3")
    ]


def test_marks_across(tmp_path):
    timings = read(
        tmp_path,
        "ball,mark 1 [s],mark 2 [s],mark 3 [s],note\n"
        "A,0.5,6.5,12.6,\nB,,6.5,12.6,\nC,0.1,,12.6,\nD,0.1,-,,lost\nE,,n/a,,\n",
    )
    table = timings.table
    assert times(timings) == pytest.approx([12.1, 6.1, 12.5, NAN, NAN], nan_ok=True)
    assert table["from_mark"].tolist()[:3] == [1, 2, 1]
    assert table["to_mark"].tolist()[:3] == [3, 3, 3]
    assert table["status"].tolist() == ["used"] * 3 + ["excluded"] * 2
    assert table["note"].tolist()[3:] == ["no-time: only mark 1 was read; lost", "no-time"]
    expected = [[0.5, 6.5, 12.6], [NAN, 6.5, 12.6], [0.1, NAN, 12.6], [0.1, NAN, NAN], [NAN] * 3]
    np.testing.assert_array_equal(timings.marks_s, expected)
    assert [(r.line, r.column, r.what) for r in timings.repairs] == [
        (3, 2, "mark 1 is empty; the point is left out"),
        (4, 3, "mark 2 is empty; the point is left out"),
    ]


def test_without_mark_1_the_clock_starts_there(tmp_path):
    timings = read(tmp_path, "drop,gate 2 [s],gate 3 [s]\n1,6.5,0:12.6\n2,-,\n")
    assert times(timings) == pytest.approx([12.6, NAN], nan_ok=True)
    np.testing.assert_array_equal(timings.marks_s, [[0, 6.5, 12.6], [0, NAN, NAN]])


def test_intervals_across(tmp_path):
    timings = read(
        tmp_path,
        "drop,interval 1 [s],interval 2 [s],interval 3 [s]\n"
        "1,6.5,6.4,6.3\n2,,6.4,6.3\n3,6.5,6.4,\n4,6.5,,6.3\n5,,,\n",
    )
    assert times(timings) == pytest.approx([19.2, 12.7, 12.9, NAN, NAN], nan_ok=True)
    assert timings.table["from_mark"].tolist()[:3] == [1, 2, 1]
    assert timings.table["to_mark"].tolist()[:3] == [4, 4, 3]
    assert timings.table["note"].tolist()[3:] == [
        "no-time: interval 2 is empty between others",
        "no-time",
    ]
    np.testing.assert_allclose(timings.marks_s[0], [0, 6.5, 12.9, 19.2])
    np.testing.assert_allclose(timings.marks_s[1], [NAN, 0, 6.4, 12.7])


@pytest.mark.parametrize("name", ["repeat", "time", "rep"])
def test_repeats_across(name, tmp_path):
    timings = read(tmp_path, f"ball;{name} 1 [s];{name} 2 [s];note\nA;12,8;12,9;x\nB;6,8;n/a;\n")
    assert times(timings) == pytest.approx([12.8, 12.9, 6.8, NAN], nan_ok=True)
    assert timings.table["line"].tolist() == [2, 2, 3, 3]
    assert timings.table["column"].tolist() == [2, 3, 2, 3]
    assert timings.table["drop"].tolist() == [1, 2, 3, 4]
    assert timings.table["ball"].tolist() == ["A", "A", "B", "B"]
    assert timings.table["note"].tolist() == ["x", "x", "", "no-time"]


@pytest.mark.parametrize("missing", ["", "-", "–", "n/a", "NA", "NaN", "none", "null", "Missing"])
def test_a_missing_time_is_no_drop_but_never_lost(missing, tmp_path):
    timings = read(tmp_path, f"drop,time [s],note\n1,12.84,\n2,{missing},stuck\n")
    assert timings.table["status"].tolist() == ["used", "excluded"]
    assert timings.table["note"].tolist() == ["", "no-time; stuck"]
    assert timings.table["line"].tolist() == [2, 3]


def test_drops_are_numbered_in_order_within_their_set(tmp_path):
    timings = read(tmp_path, "run,time [s]\nA,1\nB,2\nA,3\n")
    assert timings.table["drop"].tolist() == [1, 1, 2]


def test_numbers_that_begin_again_with_each_ball_are_renumbered_and_listed(tmp_path):
    timings = read(tmp_path, "ball,drop,time [s]\nA,1,1\nA,2,2\nB,1,3\nB,2,4\n")
    assert timings.table["drop"].tolist() == [1, 2, 3, 4]
    assert [r.what for r in timings.repairs] == [
        "drops of set 'batch 118' are numbered from 1 for each ball; they are numbered 1 to 4"
        " through the set"
    ]


def test_what_is_repaired_is_listed(tmp_path):
    timings = read(
        tmp_path,
        "drop,time [s],colour,temprature [degC],\n"
        "1,12.84\n2,12.9,blue,25,,,\n,,,,\n#3,12.9,red,25,\n4,13.0,red,25,",
    )
    assert times(timings) == [12.84, 12.9, 13.0]
    assert [(r.line, r.column, r.what) for r in timings.repairs] == [
        (None, None, "drops of run set 'batch 118' are numbered up to 4, and there are 3"),
        (1, None, "column 5 has no heading and is not used"),
        (1, 3, "column 'colour' is not used"),
        (1, 4, "column 'temprature [degC]' is not used; did you mean 'temperature'?"),
        (2, None, "the row has 2 of 5 cells; the others are taken as empty"),
        (3, 6, "2 empty cells beyond the headings"),
        (4, None, "a row of empty cells is left out"),
        (5, 1, "begins with # and is taken as a comment, not as a row"),
        (6, None, "the last line has no line end; see that it is whole"),
    ]


def test_the_bench_sheet_says_what_the_headings_do_not(tmp_path):
    hints = TimingHints(
        columns={"Fallzeit": "time", "Prüfer": "operator", "Temp. Bad": "temperature"},
        units={"time": "s", "temperature": "degC"},
        delimiter="tab",
        decimal=",",
        encoding="cp1252",
        header_row=3,
    )
    text = "Protokoll 7\n\nPrüfer\tTemp. Bad\tFallzeit\nA\t25,0\t1,234\n"
    timings = read(tmp_path, text.encode("cp1252"), bench=Bench(timings=hints))
    assert times(timings) == [1.234]
    assert timings.table["temperature_K"].tolist() == [298.15]
    assert timings.table["line"].tolist() == [4]
    assert [(r.line, r.what) for r in timings.repairs] == [
        (1, "lines above the headings in line 3 are not read: 'Protokoll 7'")
    ]
    assert [(c.heading, c.meaning, c.unit) for c in timings.files[0].columns] == [
        ("Prüfer", "operator", ""),
        ("Temp. Bad", "temperature", "degC"),
        ("Fallzeit", "time", "s"),
    ]


def test_declared_units_yield_to_the_heading_s_own(tmp_path):
    bench = Bench(timings=TimingHints(units={"time": "min"}))
    assert times(read(tmp_path, "time [s]\n12.84\n", bench=bench)) == [12.84]
    assert times(read(tmp_path, "time\n12\n", bench=bench)) == [720.0]


def test_a_quoted_decimal_comma_is_read_where_declared(tmp_path):
    bench = Bench(timings=TimingHints(decimal=","))
    assert times(read(tmp_path, 'drop,time [s]\n1,"12,84"\n', bench=bench)) == [12.84]


def test_rows_read_are_used_void_and_excluded(tmp_path):
    rows = [("12.84", ""), ("n/a", ""), ("12.9", "void"), ("", "void"), ("12.8", "used")] * 6
    timings = read(tmp_path, "time [s],status\n" + "".join(f"{t},{s}\n" for t, s in rows))
    counts = timings.table["status"].value_counts()
    assert counts.to_dict() == {"used": 12, "void": 12, "excluded": 6}
    assert len(timings) == len(rows)
