"""What `inspect` says of invented files: every value of the JSON, and the table."""

from __future__ import annotations

import json
import tomllib
from pathlib import Path

import pytest

from plumbfall.bench import read_bench
from plumbfall.bench.records import Bench, Tube
from plumbfall.estimate import Estimate
from plumbfall.report.inspection import inspection_to_dict
from plumbfall.report.inspection_text import inspection_text
from plumbfall.timings import collect

TEXT = (
    "set;drop;Temp [°C];mark 1 [s];mark 2 [s];mark 3 [s];status;note;colour\n"
    "A;1;25,0;0,5;6,5;12,6;;;red\n"
    "A;2;;0,1;;12,6;void;slipped;\n"
    "A;3;25,0;;;;;;\n"
    "A;4;25,0;1O,5;6,5;12,6;;;\n"
)


@pytest.fixture
def timings(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    (tmp_path / "t.csv").write_text(TEXT, encoding="utf-8")
    return collect("t.csv")


@pytest.fixture
def bench():
    bore = Estimate(0.05, 2e-5, "normal", 9.0, "tube.T.bore", "m", "50.00(2) mm")
    return Bench(
        tubes={"T": Tube(name="T", bore=bore)},
        path="bench.toml",
        sha256="ab12",
        source={"tube": {"T": {"bore": "50.00(2) mm", "marks": [1.5, None]}}},
    )


def test_the_json_has_every_drop_and_every_problem(timings):
    found = inspection_to_dict(timings, None)
    assert json.loads(json.dumps(found, allow_nan=False)) == found
    assert found["schema"] == "plumbfall/inspect/1"
    assert found["bench"] is None
    file = found["files"][0]
    assert file["sha256"] == timings.files[0].sha256
    assert len(file["sha256"]) == 64
    assert {key: file[key] for key in ("path", "encoding", "delimiter", "decimal")} == {
        "path": "t.csv",
        "encoding": "utf-8",
        "delimiter": ";",
        "decimal": ",",
    }
    assert file["heading_line"] == 1
    assert file["columns"][2] == {
        "column": 3,
        "heading": "Temp [°C]",
        "meaning": "temperature",
        "unit": "°C",
    }
    assert file["columns"][8]["meaning"] is None
    first, second, third, fourth = found["drops"]
    assert {
        key: first[key] for key in ("file", "line", "set", "drop", "ball", "status", "note")
    } == {
        "file": "t.csv",
        "line": 2,
        "set": "A",
        "drop": 1,
        "ball": "",
        "status": "used",
        "note": "",
    }
    assert first["time_s"] == pytest.approx(12.1)
    assert first["marks_s"] == [0.5, 6.5, 12.6]
    assert first["temperature_K"] == 298.15
    assert (second["status"], second["note"]) == ("void", "slipped")
    assert second["temperature_K"] is None
    assert second["marks_s"] == [0.1, None, 12.6]
    assert (third["status"], third["note"]) == ("excluded", "no-time")
    assert third["time_s"] is None
    assert third["marks_s"] is None
    assert (fourth["status"], fourth["note"]) == ("excluded", "refused")
    assert found["rows"] == {"read": 4, "used": 1, "void": 1, "excluded": 2, "refused": 1}
    assert file["rows"] == found["rows"]
    assert file["blocks"] == [{"heading_line": 1, "rows": 4, "columns": file["columns"]}]
    assert found["offers"] == []
    assert found["repairs"] == [
        {"file": "t.csv", "line": 1, "column": 9, "what": "column 'colour' is not used"},
        {"file": "t.csv", "line": 3, "column": 5, "what": "mark 2 is empty; the point is left out"},
    ]
    assert found["problems"] == [
        {
            "file": "t.csv",
            "line": 5,
            "column": 4,
            "key": "",
            "severity": "error",
            "message": "'1O,5' has a letter among its digits",
            "remedy": "type 10,5 if that is meant",
        }
    ]


def test_total_times_have_no_marks(tmp_path):
    path = tmp_path / "t.csv"
    path.write_text("time [s]\n12.84\n")
    drop = inspection_to_dict(collect(path), None)["drops"][0]
    assert drop["marks_s"] is None
    assert drop["time_s"] == 12.84


def test_the_bench_is_shown_as_written_and_as_read(timings, bench):
    found = inspection_to_dict(timings, bench)["bench"]
    assert json.loads(json.dumps(found, allow_nan=False)) == found
    assert found["path"] == "bench.toml"
    assert found["written"] == {"tube": {"T": {"bore": "50.00(2) mm", "marks": [1.5, None]}}}
    assert found["read"] == {
        "tube.T.bore": {
            "text": "50.00(2) mm",
            "value": 0.05,
            "unit": "m",
            "standard_uncertainty": 2e-5,
            "distribution": "normal",
            "dof": 9.0,
        }
    }


def test_the_text_can_be_checked_at_a_glance(timings, bench):
    sha256 = timings.files[0].sha256
    assert inspection_text(timings, bench).splitlines() == [
        "file t.csv",
        f"  SHA-256 {sha256}",
        "  encoding utf-8, delimiter semicolon, decimal comma, headings in line 1",
        "  rows read 4 = used 1 + void 1 + excluded 2 (1 of them refused)",
        "",
        "  column  heading     meaning      unit",
        "       1  set         set",
        "       2  drop        drop",
        "       3  Temp [°C]   temperature  °C",
        "       4  mark 1 [s]  mark 1       s",
        "       5  mark 2 [s]  mark 2       s",
        "       6  mark 3 [s]  mark 3       s",
        "       7  status      status",
        "       8  note        note",
        "       9  colour      not used",
        "",
        "  line  set  drop  ball  time / s  temperature / degC  status    marks / s     note",
        "     2  A       1            12.1                  25  used      0.5 6.5 12.6",
        "     3  A       2            12.5                   -  void      0.1 - 12.6    slipped",
        "     4  A       3               -                  25  excluded                no-time",
        "     5  A       4               -                  25  excluded  - 6.5 12.6    refused",
        "",
        "bench sheet bench.toml",
        "  entry        as written   as read  standard uncertainty",
        "  tube.T.bore  50.00(2) mm  0.05 m   2e-05 m",
        "",
        "rows read 4 = used 1 + void 1 + excluded 2 (1 of them refused)",
        "",
        "repaired (2)",
        "  t.csv:1:9: column 'colour' is not used",
        "  t.csv:3:5: mark 2 is empty; the point is left out",
        "",
        "errors (1)",
        "  t.csv:5:4: '1O,5' has a letter among its digits; type 10,5 if that is meant",
    ]


def test_long_files_are_shown_in_part_and_counted(tmp_path):
    path = tmp_path / "t.csv"
    path.write_text("time [s]\n" + "12.84\n" * 50)
    lines = inspection_text(collect(path), None).splitlines()
    assert "  and 30 more rows" in lines
    assert lines[-1] == "rows read 50 = used 50 + void 0 + excluded 0"


def test_nothing_read_is_no_traceback(tmp_path):
    timings = collect(tmp_path / "nothing.csv")
    found = inspection_to_dict(timings, None)
    assert found["drops"] == []
    assert found["rows"]["read"] == 0
    assert "there is no such file" in inspection_text(timings, None)


def test_every_block_is_shown_and_lines_that_would_settle_it_are_offered(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    (tmp_path / "t.csv").write_text(
        "Ball A\ndrop;time;temp\n1;1,234;25\nBall B\ndrop;time [ms];temp [°C]\n1;1,301;25\n",
        encoding="cp1252",
    )
    timings = collect("t.csv")
    offers = [
        'encoding = "cp1252"',
        'decimal = ","',
        'thousands = ","',
        'units.temperature = "degC"',
    ]
    assert inspection_to_dict(timings, None)["offers"] == offers
    lines = inspection_text(timings, None).splitlines()
    assert lines[3:17] == [
        "  rows read 2 = used 0 + void 0 + excluded 2 (2 of them refused)",
        "",
        "  headings in line 2, for 1 row",
        "  column  heading     meaning      unit",
        "       1  drop        drop",
        "       2  time        time",
        "       3  temp        temperature",
        "       -  A (line 1)  ball",
        "",
        "  headings in line 5, for 1 row",
        "  column  heading     meaning      unit",
        "       1  drop        drop",
        "       2  time [ms]   time         ms",
        "       3  temp [°C]   temperature  °C",
    ]
    assert lines[-6:] == [
        "lines for the bench sheet that would settle what is ambiguous; write those that are true",
        "  [timings]",
        *(f"  {offer}" for offer in offers),
    ]


def test_what_is_offered_is_read_by_the_bench_sheet(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    (tmp_path / "t.csv").write_text("ball,tiem,T\nA,1.5,25\n")
    assert collect("t.csv").offers == ('columns."tiem" = "time"',)
    for name, text in {
        "columns": "ball,tiem,T\nA,1.5,25\n",
        "units": "ball,time,T\nA,1.5,25\n",
        "spaces": "ball time_s\nA 1.5\n",
        "turned": "ball,A\ntime [s],1.5\n",
        "tie": "time [s];note,remarks\n12;a\n",
    }.items():
        Path("t.csv").write_text(text)
        offers = collect("t.csv").offers
        assert offers, name
        sheet = {"timings": tomllib.loads("\n".join(offers))}
        sheet |= {"ball": {"A": {"diameter": "2.0000(5) mm", "density": "7.700(3) g/cm3"}}}
        again = collect("t.csv", read_bench(sheet)).offers
        assert not set(offers) & set(again), name
