"""Any table written in any supported dialect reads back; damage never misleads silently."""

from __future__ import annotations

import csv
import io
import math
import tempfile
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from plumbfall.timings import collect

FIXTURES = settings(max_examples=100, deadline=None, suppress_health_check=[HealthCheck.too_slow])
NAMES = st.text(
    st.characters(exclude_categories=("C", "Z"), exclude_characters='"#'), min_size=1, max_size=6
).filter(
    lambda name: (
        name.isalnum()
        and name.casefold() not in ("na", "nan", "none", "null", "nil", "void", "missing")
    )
)
NOTES = st.text(st.sampled_from(" ab,;\"'|é°µ\n7"), max_size=8).map(str.strip)


@dataclass(frozen=True)
class Drop:
    run_set: str
    time: float
    temperature: float
    status: str
    note: str


DROPS = st.builds(
    Drop,
    run_set=NAMES,
    time=st.integers(1, 10_000_000).map(lambda n: n / 1000),
    temperature=st.integers(-4000, 30000).map(lambda n: n / 100),
    status=st.sampled_from(["", "used", "void"]),
    note=NOTES,
)


@dataclass(frozen=True)
class Dialect:
    delimiter: str
    decimal: str
    newline: str
    mark: bool
    quoting: int
    heading: str
    clock: bool

    @property
    def is_possible(self) -> bool:
        return not (self.decimal == "," == self.delimiter)


DIALECTS = st.builds(
    Dialect,
    delimiter=st.sampled_from([",", ";", "\t", "|"]),
    decimal=st.sampled_from([".", ","]),
    newline=st.sampled_from(["\n", "\r\n", "\r"]),
    mark=st.booleans(),
    quoting=st.sampled_from([csv.QUOTE_MINIMAL, csv.QUOTE_ALL]),
    heading=st.sampled_from(["{} [{}]", "{} ({})", "{} / {}", "{}_{}"]),
    clock=st.booleans(),
).filter(lambda dialect: dialect.is_possible)


def clock_text(seconds: float) -> str:
    milliseconds = round(seconds * 1000)
    minutes, rest = divmod(milliseconds, 60_000)
    return f"{minutes}:{rest // 1000:02d}.{rest % 1000:03d}"


def written(drops: list[Drop], dialect: Dialect) -> bytes:
    out = io.StringIO()
    writer = csv.writer(
        out, delimiter=dialect.delimiter, quoting=dialect.quoting, lineterminator="\n"
    )
    writer.writerow(
        [
            "Run set",
            dialect.heading.format("fall time", "s"),
            dialect.heading.format("temperature", "degC"),
            "status",
            "note",
        ]
    )
    for drop in drops:
        time = clock_text(drop.time) if dialect.clock else f"{drop.time:.3f}"
        numbers = [time, f"{drop.temperature:.2f}"]
        numbers = [number.replace(".", dialect.decimal) for number in numbers]
        writer.writerow([drop.run_set, *numbers, drop.status, drop.note])
    text = out.getvalue().replace("\n", dialect.newline)
    return (b"\xef\xbb\xbf" if dialect.mark else b"") + text.encode("utf-8")


def read(content: bytes):
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "t.csv"
        path.write_bytes(content)
        return collect(path)


@FIXTURES
@given(st.lists(DROPS, min_size=1, max_size=5), DIALECTS)
def test_a_table_reads_back_to_the_same_values(drops, dialect):
    timings = read(written(drops, dialect))
    assert not timings.problems
    table = timings.table
    assert table["set"].tolist() == [drop.run_set for drop in drops]
    assert table["time_s"].tolist() == [float(f"{drop.time:.3f}") for drop in drops]
    np.testing.assert_allclose(
        table["temperature_K"], [drop.temperature + 273.15 for drop in drops], rtol=1e-15
    )
    assert table["status"].tolist() == [drop.status or "used" for drop in drops]
    assert table["note"].tolist() == [drop.note for drop in drops]
    assert timings.files[0].delimiter == dialect.delimiter
    counts = table["status"].value_counts()
    assert counts[["used", "void", "excluded"]].sum() == len(drops)


MARKS = st.lists(
    st.one_of(st.none(), st.integers(1, 99_999).map(lambda n: n / 100)), min_size=2, max_size=5
)


@FIXTURES
@given(st.lists(MARKS, min_size=1, max_size=4), st.sampled_from([",", ";", "\t"]))
def test_marks_read_back_and_time_runs_from_the_first_to_the_last(rows, delimiter):
    width = max(map(len, rows))
    clocks = [sorted({c for c in row if c is not None}) for row in rows]
    holes = [[c is None for c in row] + [True] * (width - len(row)) for row in rows]
    cells = []
    for clock, hole in zip(clocks, holes, strict=True):
        left = iter(clock)
        cells.append([None if empty else next(left, None) for empty in hole])
    lines = [delimiter.join(["drop", *(f"mark {n + 1} [s]" for n in range(width))])]
    for number, row in enumerate(cells, 1):
        lines.append(delimiter.join([str(number), *("" if c is None else f"{c:.2f}" for c in row)]))
    timings = read(("\n".join(lines) + "\n").encode())
    assert not timings.problems
    expected = [[math.nan if c is None else float(f"{c:.2f}") for c in row] for row in cells]
    np.testing.assert_array_equal(timings.marks_s, expected)
    for row, drop in zip(expected, timings.table.itertuples(), strict=True):
        read_marks = [n for n, clock in enumerate(row, 1) if not math.isnan(clock)]
        if len(read_marks) < 2:
            assert drop.status == "excluded"
            assert math.isnan(drop.time_s)
        else:
            first, last = read_marks[0], read_marks[-1]
            assert (drop.from_mark, drop.to_mark) == (first, last)
            assert drop.time_s == row[last - 1] - row[first - 1]


CLEAN = (
    "set{0}drop{0}time [s]{0}temperature [degC]{0}status{0}note\n"
    "A{0}1{0}12.84{0}25.01{0}{0}\nA{0}2{0}12.91{0}25.02{0}void{0}slipped\n"
    "B{0}1{0}1:03.15{0}25.03{0}used{0}\nB{0}2{0}63.40{0}25.04{0}{0}clear\n"
)


def drops_of(timings):
    table = timings.table
    rows = zip(
        table["set"],
        table["drop"],
        table["time_s"].fillna(-1),
        table["temperature_K"].fillna(-1),
        table["status"],
        strict=True,
    )
    return list(rows)


@st.composite
def damaged(draw):
    """Return a clean file with one wound that leaves every number's own characters alone.

    A digit, point or sign that becomes another one is a number like any other: no reader can
    see it.
    """
    delimiter = draw(st.sampled_from([",", ";", "\t", "|"]))
    text = CLEAN.format(delimiter)
    places = [n for n, character in enumerate(text) if character not in "0123456789.:"]
    place = draw(st.sampled_from(places))
    kind = draw(st.sampled_from(["lose", "replace", "insert", "swap", "cut", "repeat line"]))
    foreign = st.sampled_from([*",;\t|\"'\n\r #OlxeE:+/[]()_\x00\x01\x1f\u00a0°", delimiter])
    if kind == "lose":
        text = text[:place] + text[place + 1 :]
    elif kind == "replace":
        text = text[:place] + draw(foreign) + text[place + 1 :]
    elif kind == "insert":
        at = draw(st.integers(0, len(text)))
        text = text[:at] + draw(foreign) + text[at:]
    elif kind == "swap":
        pair = text[place : place + 2]
        if not any(character.isdigit() for character in pair):  # see above
            text = text[:place] + pair[::-1] + text[place + 2 :]
    elif kind == "cut":
        # whole lines that were never written leave no trace
        text = text[: draw(st.integers(1, len(text) - 1).filter(lambda n: text[n - 1] != "\n"))]
    else:
        lines = text.splitlines(keepends=True)
        number = draw(st.integers(0, len(lines) - 1))
        text = "".join(lines[: number + 1] + lines[number:])
    return delimiter, text


@settings(max_examples=400, deadline=None)
@given(damaged())
def test_damage_never_gives_a_silently_different_number(case):
    delimiter, text = case
    sound = drops_of(read(CLEAN.format(delimiter).encode()))
    timings = read(text.encode())
    for problem in timings.problems:
        assert problem.message
        assert problem.remedy
        assert problem.path
    if not timings.problems and not timings.repairs:
        assert [drop[2:] for drop in drops_of(timings)] == [drop[2:] for drop in sound]


@settings(max_examples=100, deadline=None)
@given(st.binary(max_size=200))
def test_no_bytes_whatever_give_a_traceback(content):
    for prefix in (b"", b"time [s],note\n", b"\xff\xfe", b"PK\x03\x04"):
        timings = read(prefix + content)
        counts = timings.table["status"].value_counts()
        assert counts[["used", "void", "excluded"]].sum() == len(timings)


@settings(max_examples=100, deadline=None)
@given(st.text(st.sampled_from('0123456789.,:-+ eEOl"\n;'), max_size=30))
def test_no_text_under_a_heading_is_misread(text):
    timings = read(f"time [s];note\n{text}\n".encode())
    good = timings.table["time_s"].dropna()
    assert (good > 0).all()
    assert np.isfinite(good).all()


@pytest.mark.parametrize("seconds", [0.01, 12.84, 63.15, 59.999, 3599.99, 86399.5])
def test_clock_text_is_what_it_should_be(seconds):
    minutes, rest = clock_text(seconds).split(":")
    assert 60 * int(minutes) + float(rest) == pytest.approx(seconds, abs=5e-4)
