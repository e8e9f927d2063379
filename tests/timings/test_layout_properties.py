"""The same drops, laid out in any way that is read, give the same values; damage is seen."""

from __future__ import annotations

import csv
import io
import tempfile
from dataclasses import dataclass
from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from plumbfall.bench.records import TimingHints
from plumbfall.timings import collect
from timings.benches import bench

SLOW = [HealthCheck.too_slow]


@dataclass(frozen=True)
class Drop:
    ball: str
    hundredths: int | None
    tenths: int

    @property
    def values(self):
        time = None if self.hundredths is None else self.hundredths / 100
        return self.ball, time, round(self.tenths / 10 + 273.15, 6)


DROPS = st.lists(
    st.builds(
        Drop,
        ball=st.sampled_from("ABCD"),
        hundredths=st.one_of(st.none(), st.integers(101, 99_999)),
        tenths=st.integers(-50, 900),
    ),
    min_size=1,
    max_size=8,
).filter(lambda drops: any(drop.hundredths for drop in drops))


@dataclass(frozen=True)
class Sheet:
    """How a table is laid out and written."""

    delimiter: str
    decimal: str
    newline: str
    encoding: str
    quoting: int
    form: str
    unit: str
    missing: str
    title: bool
    numbered: bool
    again: int
    blocks: bool
    foot: bool
    transposed: bool

    @property
    def is_possible(self):
        if self.decimal == "," == self.delimiter:
            return False
        if self.transposed and (self.again or self.blocks or self.foot or self.unit == "row"):
            return False
        return not (self.blocks and self.again)


SHEETS = st.builds(
    Sheet,
    delimiter=st.sampled_from([",", ";", "\t", "|"]),
    decimal=st.sampled_from([".", ","]),
    newline=st.sampled_from(["\n", "\r\n", "\r"]),
    encoding=st.sampled_from(["utf-8", "utf-8-sig", "utf-16", "cp1252"]),
    quoting=st.sampled_from([csv.QUOTE_MINIMAL, csv.QUOTE_ALL]),
    form=st.sampled_from(["plain", "clock", "primes", "words"]),
    unit=st.sampled_from(["heading", "row", "cells"]),
    missing=st.sampled_from(["", "-", "–", "n/a", "NaN", "missing", "null", "?"]),
    title=st.booleans(),
    numbered=st.booleans(),
    again=st.sampled_from([0, 0, 2]),
    blocks=st.booleans(),
    foot=st.booleans(),
    transposed=st.booleans(),
).filter(lambda sheet: sheet.is_possible)


def time_text(drop, sheet):
    if drop.hundredths is None:
        return "-" if sheet.missing == "–" and sheet.encoding == "utf-16" else sheet.missing
    minutes, rest = divmod(drop.hundredths, 6000)
    seconds, hundredths = divmod(rest, 100)
    if sheet.form == "clock":
        return f"{minutes}:{seconds:02d}.{hundredths:02d}"
    if sheet.form == "primes":
        return f"{minutes}'{seconds:02d}\"{hundredths:02d}"
    if sheet.form == "words":
        return f"{minutes} min {seconds}.{hundredths:02d} s"
    text = f"{drop.hundredths / 100:.2f}"
    return text + " s" if sheet.unit == "cells" else text


def table_of(drops, sheet):
    """Return the rows of a sheet, and its drops in the order they stand there."""
    heading = ["time", "temperature", "note"]
    if sheet.unit == "heading":
        heading[:2] = ["time [s]", "temperature [°C]"]
    named = [] if sheet.blocks else ["ball"]
    numbered = ["drop"] if sheet.numbered else []
    head = [[*numbered, *named, *heading]]
    if sheet.unit == "row":
        head.append([*["-" for _ in (*numbered, *named)], "s", "°C", ""])
    groups = [drops]
    if sheet.blocks:
        balls = dict.fromkeys(drop.ball for drop in drops)
        groups = [[drop for drop in drops if drop.ball == ball] for ball in balls]
    rows = [["Compass fluid of Monday"]] if sheet.title else []
    for group in groups:
        if sheet.blocks:
            rows.append([f"Ball {group[0].ball}"])
        rows += head
        for number, drop in enumerate(group, 1):
            degrees = f"{drop.tenths / 10:.1f}" + (" °C" if sheet.unit == "cells" else "")
            cells = [time_text(drop, sheet), degrees, ""]
            cells = [cell.replace(".", sheet.decimal) for cell in cells]
            rows.append([*[str(number)][: len(numbered)], *[drop.ball][: len(named)], *cells])
            if sheet.again and number % sheet.again == 0 and number < len(group):
                rows += head
        if sheet.foot:
            label = "mean" if (numbered or named) else ""
            cells = [*[label, ""][: len(numbered) + len(named)], "12.84", "25.0"]
            if sheet.form == "plain" and sheet.unit != "cells" and label:
                rows.append([*(cell.replace(".", sheet.decimal) for cell in cells), ""])
    if sheet.transposed:
        width = max(map(len, rows))
        padded = [row + [""] * (width - len(row)) for row in rows]
        rows = [list(row) for row in zip(*padded, strict=True)]
    return rows, [drop for group in groups for drop in group]


def text_of(rows, sheet):
    out = io.StringIO()
    csv.writer(
        out, delimiter=sheet.delimiter, quoting=sheet.quoting, lineterminator=sheet.newline
    ).writerows(rows)
    return out.getvalue()


def read(content, sheet):
    hints = TimingHints(transposed=sheet.transposed)
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "t.csv"
        path.write_bytes(content)
        return collect(path, bench(balls="ABCD", marks=2, timings=hints))


def values_of(timings):
    return [
        (
            drop.ball,
            None if drop.time_s != drop.time_s else drop.time_s,
            round(drop.temperature_K, 6),
        )
        for drop in timings.table.itertuples()
    ]


@settings(max_examples=80, deadline=None, suppress_health_check=SLOW)
@given(DROPS, SHEETS)
def test_every_layout_of_the_same_drops_reads_back_to_them(drops, sheet):
    rows, order = table_of(drops, sheet)
    timings = read(text_of(rows, sheet).encode(sheet.encoding), sheet)
    assert [str(problem) for problem in timings.problems] == []
    assert values_of(timings) == [drop.values for drop in order]
    for drop in timings.table.itertuples():
        assert (drop.status == "used") == (drop.time_s == drop.time_s)


WOUNDS = st.sampled_from(["lose", "replace", "insert", "lose a cell", "double a cell", "byte"])


@settings(max_examples=100, deadline=None, suppress_health_check=SLOW)
@given(DROPS, SHEETS, WOUNDS, st.data())
def test_damage_to_any_layout_is_seen_or_does_no_harm(drops, sheet, wound, data):
    rows, order = table_of(drops, sheet)
    sound = text_of(rows, sheet)
    if wound in ("lose a cell", "double a cell"):
        rows = [list(row) for row in rows]
        row = data.draw(st.sampled_from(rows))
        place = data.draw(st.integers(0, len(row) - 1))
        row[place : place + 1] = [] if wound == "lose a cell" else [row[place]] * 2
        content = text_of(rows, sheet).encode(sheet.encoding)
    elif wound == "byte":
        content = bytearray(sound.encode(sheet.encoding))
        # a digit, a mark or a sign that becomes another one nobody can see
        places = [n for n, byte in enumerate(content) if chr(byte) not in "0123456789.,:'\" -"]
        content[data.draw(st.sampled_from(places))] = data.draw(st.integers(128, 255))
        content = bytes(content)
    else:
        places = [n for n, letter in enumerate(sound) if letter not in "0123456789.,:'\" -"]
        place = data.draw(st.sampled_from(places))
        foreign = data.draw(st.sampled_from([*";\t|\n #OlxE/[]()_\u00a0°", sheet.delimiter]))
        end = place if wound == "insert" else place + 1
        damaged = sound[:place] + ("" if wound == "lose" else foreign) + sound[end:]
        content = damaged.encode(sheet.encoding)
    timings = read(content, sheet)
    for problem in timings.problems:
        assert problem.message
        assert problem.remedy
        assert problem.path
    untouched = read(sound.encode(sheet.encoding), sheet)
    listed = {repair.what for repair in untouched.repairs}
    if not timings.problems and {repair.what for repair in timings.repairs} <= listed:
        # a drop without a time is none, whatever else of its row is lost
        assert [one for one in values_of(timings) if one[1]] == [
            drop.values for drop in order if drop.hundredths
        ]


def test_minutes_are_told_from_metres_and_hours():
    sheet = None
    for text, seconds in {"1m03.15s": 63.15, "1 h 2 min": 3720.0, "2 min": 120.0}.items():
        with tempfile.TemporaryDirectory() as folder:
            path = Path(folder) / "t.csv"
            path.write_text(f"time\n{text}\n")
            assert collect(path, sheet).table["time_s"].tolist() == [pytest.approx(seconds)]
