"""Names and marks of timing files against the bench sheet."""

from __future__ import annotations

from pathlib import Path

import pytest

from plumbfall.bench.records import RunSetEntry, TimingHints
from plumbfall.timings import collect, read_timings
from timings.benches import bench


@pytest.fixture
def says(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)

    def read(text, sheet, severity="error"):
        Path("t.csv").write_text(text)
        problems = collect("t.csv", sheet).problems
        return [str(problem) for problem in problems if problem.severity == severity]

    return read


def test_known_names_pass(tmp_path):
    path = tmp_path / "t.csv"
    path.write_text("ball,tube,liquid,timer,thermometer,time [s]\nA,T,oil,watch,probe,1\n")
    assert read_timings(path, bench()).table["tube"].tolist() == ["T"]


def test_every_unknown_name_is_told_once_with_the_nearest_known_one(says):
    text = (
        "ball,tube,liquid,timer,thermometer,time [s]\nB,t,oil,wach,Probe,1\nC,T,oli,,,2\nC,T,,,,3\n"
    )
    assert says(text, bench()) == [
        "t.csv:2:2: tube 't' is not in the bench sheet; did you mean 'T'? correct the name, or add"
        " [tube.t] to the bench sheet",
        "t.csv:2:4: timer 'wach' is not in the bench sheet; did you mean 'watch'? correct the name,"
        " or add [timer.wach] to the bench sheet",
        "t.csv:2:5: thermometer 'Probe' is not in the bench sheet; did you mean 'probe'? correct"
        " the name, or add [thermometer.Probe] to the bench sheet",
        "t.csv:3:1: ball 'C' is not in the bench sheet (2 rows); the bench sheet has A, B; correct"
        " the name, or add [ball.C] to the bench sheet",
        "t.csv:3:3: liquid 'oli' is not in the bench sheet; did you mean 'oil'? correct the name,"
        " or add [liquid.oli] to the bench sheet",
    ]


def test_the_ball_must_be_named_where_the_bench_has_several(says):
    assert says("set,time [s]\nx,1\nx,2\ny,3\n", bench()) == [
        f"t.csv:1: no column names the ball of set '{name}', and the bench sheet has several; add"
        f' a column "ball", or ball = "…" under [set.{name}] in the bench sheet, which has A, B'
        for name in "xy"
    ]
    assert says("ball,time [s]\nA,1\n,2\n-,n/a\n", bench()) == [
        't.csv:3:1: the ball is missing; add a column "ball", or ball = "…" under [set.t] in the'
        " bench sheet, which has A, B"
    ]
    assert not says("time [s]\n1\n", bench(balls="A"))
    named = RunSetEntry(name="x", ball="B")
    assert not says("set,time [s]\nx,1\n", bench(sets={"x": named}))


def test_marks_must_be_those_of_the_tube(says):
    columns = "ball,mark 1 [s],mark 2 [s]\nA,0,1\n"
    assert not says(columns, bench(marks=2))
    assert says(columns, bench(marks=3)) == [
        "t.csv:1:2: the marks of this file are those of 2 marks; tube 'T' has 3; give a column for"
        " every mark (a reading that was not taken is an empty cell), or correct tube.T.marks in"
        " the bench sheet"
    ]
    assert not says("ball,mark 2 [s],mark 3 [s]\nA,1,2\n", bench(marks=3))
    assert says("ball,interval 1 [s],interval 2 [s]\nA,1,2\n", bench(marks=2)) == [
        "t.csv:1:2: the intervals of this file are those of 3 marks; tube 'T' has 2; give a column"
        " for every mark (a reading that was not taken is an empty cell), or correct tube.T.marks"
        " in the bench sheet"
    ]
    assert not says(columns, bench(marks=0))  # a calibrated tube may lack marks


def test_the_tube_of_a_set_is_looked_up(says):
    text = "set,ball,mark 1 [s],mark 2 [s]\nx,A,0,1\n"
    two = bench(marks=3, tubes="TU")
    assert not says(text, two)  # which tube it is, the reduction will ask
    named = bench(marks=3, tubes="TU", sets={"x": RunSetEntry(name="x", tube="U")})
    assert len(says(text, named)) == 1


def test_numbered_times_that_may_be_intervals_are_refused_with_both_remedies(says):
    text = "ball,time 1 [s],time 2 [s]\nA,6.5,6.6\n"
    assert says(text, bench(marks=3)) == [
        "t.csv:1:2: 'time 1 [s]' to 'time 2 [s]' may be 2 drops, or one drop's times between the 3"
        " marks of tube 'T'; head them repeat 1 to repeat 2 if they are drops, interval 1 to"
        " interval 2 if they are times between marks"
    ]
    assert not says(text, bench(marks=2))
    assert not says(text, bench(marks=4))
    assert not says(text.replace("time", "repeat"), bench(marks=3))


def test_a_set_name_that_nearly_is_in_the_bench_sheet_is_warned_about(says):
    entries = {"batch 118": RunSetEntry(name="batch 118", ball="A")}
    text = "set,ball,time [s]\nbatch 18,A,1\n"
    assert says(text, bench(sets=entries), "warning") == [
        "t.csv:2:1: run set 'batch 18' has no entry in the bench sheet, which has 'batch 118';"
        " write the same name in both if the same set is meant"
    ]
    both = text + "batch 118,A,2\n"
    assert not says(both, bench(sets=entries), "warning")


def test_declarations_that_meet_nothing_are_warned_about(says):
    hints = TimingHints(columns={"Fallzeit": "time"}, units={"tiem": "s"})
    assert says("ball,time [s]\nA,1\n", bench(timings=hints), "warning") == [
        "bench.toml: timings.columns.Fallzeit: no timing file has a column headed 'Fallzeit';"
        " correct the heading, or leave the line out",
        "bench.toml: timings.units.tiem: 'tiem' is not a column whose unit can be declared; write"
        " time or temperature, or the heading itself",
    ]


def test_a_declared_header_row_without_headings_is_refused(says):
    assert says("ball,time [s]\nA,1\n", bench(timings=TimingHints(header_row=9))) == [
        "t.csv: timings.header_row: there are no headings in line 9; correct header_row under"
        " [timings] in the bench sheet"
    ]
