"""Several files, wildcards and tables in memory read together."""

from __future__ import annotations

import datetime as dt

import numpy as np
import pandas as pd
import pytest

from plumbfall.errors import InputError
from plumbfall.timings import collect, read_timings


@pytest.fixture
def folder(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    return tmp_path


def test_wildcards_are_expanded_in_order(folder):
    for name, time in (("b.csv", 2), ("a.csv", 1), ("c.txt", 3)):
        (folder / name).write_text(f"time [s]\n{time}\n")
    timings = read_timings("*.csv")
    assert timings.table["time_s"].tolist() == [1.0, 2.0]
    assert timings.table["set"].tolist() == ["a", "b"]
    assert [file.path for file in timings.files] == ["a.csv", "b.csv"]


def test_a_name_with_brackets_that_exists_is_no_wildcard(folder):
    (folder / "run [1].csv").write_text("time [s]\n1\n")
    assert read_timings("run [1].csv").table["set"].tolist() == ["run [1]"]


def test_sets_named_in_columns_are_joined_and_that_is_listed(folder):
    (folder / "monday.csv").write_text("set,drop,time [s]\nA,1,1\nB,1,2\n")
    (folder / "tuesday.csv").write_text("set,drop,time [s]\nA,1,3\nA,2,4\n")
    timings = read_timings(["monday.csv", "tuesday.csv"])
    assert timings.table["set"].tolist() == ["A", "B", "A", "A"]
    assert timings.table["drop"].tolist() == [1, 1, 2, 3]
    assert [repair.what for repair in timings.repairs] == [
        "rows of run set 'A' are joined from monday.csv, tuesday.csv",
        "files of run set 'A' use the same drop numbers; its drops are numbered 1 to 3 in the"
        " order they were read",
    ]


def test_numbers_that_do_not_collide_are_kept(folder):
    (folder / "monday.csv").write_text("set,drop,time [s]\nA,5,1\n")
    (folder / "tuesday.csv").write_text("set,drop,time [s]\nA,3,3\n")
    timings = read_timings("*day.csv")
    assert timings.table["drop"].tolist() == [5, 3]
    assert [repair.what for repair in timings.repairs][1:] == [
        "drops of run set 'A' are numbered up to 5, and there are 2"
    ]


def test_equal_stems_are_refused(folder):
    (folder / "one").mkdir()
    (folder / "two").mkdir()
    (folder / "one" / "A.csv").write_text("time [s]\n1\n")
    (folder / "two" / "A.csv").write_text("time [s]\n2\n")
    with pytest.raises(InputError) as refused:
        read_timings(["one/A.csv", "two/A.csv"])
    assert str(refused.value) == (
        "both one/A.csv, two/A.csv would be run set 'A', the name of the file; add a column"
        ' "set" that names the run sets, or rename the file'
    )


def test_a_set_named_in_one_file_and_by_another_file_s_name_is_refused(folder):
    (folder / "A.csv").write_text("time [s]\n1\n")
    (folder / "b.csv").write_text("set,time [s]\nA,2\n")
    assert [str(problem) for problem in collect(["A.csv", "b.csv"]).problems] == [
        "A.csv, b.csv: run set 'A' is named in a column of one file, and is the name of another;"
        ' add a column "set" that names the run sets, or rename the file'
    ]


def test_the_same_file_counts_once(folder):
    (folder / "a.csv").write_text("time [s]\n1\n")
    timings = read_timings(["a.csv", "./a.csv"])
    assert len(timings) == 1
    assert [repair.what for repair in timings.repairs] == ["./a.csv is named twice and read once"]
    (folder / "copy.csv").write_text("time [s]\n1\n")
    assert [str(problem) for problem in collect(["a.csv", "copy.csv"]).problems] == [
        "copy.csv: the file is the same, byte for byte, as a.csv; leave one of them out; a drop"
        " counts once"
    ]


def test_all_problems_of_all_files_come_at_once(folder):
    (folder / "a.csv").write_text("time [s]\n1x\n")
    (folder / "b.csv").write_text("time\n1\n")
    with pytest.raises(InputError) as refused:
        read_timings(["a.csv", "b.csv", "c.csv"])
    assert [problem.path for problem in refused.value.problems] == ["a.csv", "b.csv", "c.csv"]


def test_marks_of_files_with_and_without_them_share_one_array(folder):
    (folder / "a.csv").write_text("mark 1 [s],mark 2 [s],mark 3 [s]\n0,1,2\n")
    (folder / "b.csv").write_text("mark 2 [s]\n5\n")
    (folder / "c.csv").write_text("time [s]\n7\n")
    timings = read_timings("?.csv")
    np.testing.assert_array_equal(
        timings.marks_s, [[0, 1, 2], [0, 5, np.nan], [np.nan, np.nan, np.nan]]
    )
    assert timings.table["to_mark"].tolist() == [3, 2, 0]
    assert timings.table["time_s"].tolist() == [2, 5, 7]


def test_tables_in_memory_are_read_like_files():
    frame = pd.DataFrame(
        {
            "batch": pd.Categorical(["A", "A", "B"]),
            "ball": [1, 2, 2],
            "Fall time [s]": [12.84, None, 0.1 + 0.2],
            "temp_degC": np.array([25, 26, 27]),
            "started": pd.to_datetime(["2026-03-02 09:00", None, "2026-03-02 09:10"]),
            "note": ["x", None, pd.NA],
        }
    )
    timings = read_timings(frame)
    assert timings.table["file"].tolist() == ["<table>"] * 3
    assert timings.table["line"].tolist() == [1, 2, 3]
    assert timings.table["set"].tolist() == ["A", "A", "B"]
    assert timings.table["ball"].tolist() == ["1", "2", "2"]
    assert timings.table["time_s"].tolist()[::2] == [12.84, 0.1 + 0.2]
    assert timings.table["temperature_K"].tolist() == [298.15, 299.15, 300.15]
    assert timings.table["started"].tolist() == ["2026-03-02T09:00:00", "", "2026-03-02T09:10:00"]
    assert timings.table["note"].tolist() == ["x", "no-time", ""]
    assert timings.table["status"].tolist() == ["used", "excluded", "used"]
    again = read_timings(frame.copy())
    assert timings.files[0].sha256 == again.files[0].sha256
    assert read_timings(frame.assign(ball=3)).files[0].sha256 != again.files[0].sha256


def test_a_table_s_default_set_and_named_index(folder):
    frame = pd.DataFrame({"time [s]": [1.0, 2.0]}, index=pd.Index([4, 9], name="drop"))
    timings = read_timings(frame)
    assert timings.table["set"].tolist() == ["table"] * 2
    assert timings.table["drop"].tolist() == [4, 9]


@pytest.mark.parametrize(
    ("columns", "says"),
    [
        (
            {"time": [12.84]},
            "<table>: column 'time' has plain numbers such as 12.84 and no unit; write its heading"
            " as 'time [s]' if that is the unit, or set units = { time = \"s\" } under [timings] in"
            " the bench sheet",
        ),
        (
            {"time [s]": [np.inf]},
            "<table>:1:1: 'inf' is not a finite number; type seconds such as 12.84, or minutes and"
            " seconds such as 1:03.15, or leave the cell empty",
        ),
        (
            {"time [s]": [-1]},
            "<table>:1:1: '-1' is not a fall time, which is above zero; correct it, leave the cell"
            " empty, or write void in a status column",
        ),
        ({"time [s]": []}, "<table>: the table is empty; it needs one row for each drop"),
        (
            {"time [ms]": pd.to_timedelta([12], unit="s")},
            "<table>:1:1: '12 s' has another unit than its heading; write all cells of a column in"
            " the unit of its heading",
        ),
    ],
)
def test_wrong_tables_are_refused(columns, says):
    assert str(collect(pd.DataFrame(columns)).problems[0]) == says


def test_a_dict_of_columns_is_a_table():
    columns = {"set": ["a", "a"], "time [s]": [12.5, 12.6]}
    frame = pd.DataFrame(columns)
    pd.testing.assert_frame_equal(read_timings(columns).table, read_timings(frame).table)
    with pytest.raises(TypeError, match="a source of timings is a path or a DataFrame, not 5"):
        read_timings(5)


def test_a_column_of_durations_needs_no_unit():
    durations = pd.to_timedelta(["12.84 s", "63.15 s", None])
    for heading in ("time", "time [s]"):
        table = read_timings(pd.DataFrame({heading: durations})).table
        assert table["time_s"].tolist()[:2] == [12.84, 63.15]
        assert table["status"].tolist() == ["used", "used", "excluded"]
    mixed = pd.DataFrame({"time": [dt.timedelta(seconds=12.84), dt.time(0, 1, 3, 150_000)]})
    assert read_timings(mixed).table["time_s"].tolist() == [12.84, 63.15]
