"""Columns of cells: the quick ways agree with the plain ones."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from plumbfall.timings.byte_columns import PADDING, SliceColumn
from plumbfall.timings.clocks import read_clock
from plumbfall.timings.columns import FloatColumn, TextColumn

CELLS = st.text(st.characters(exclude_characters="\n,\x00\x01\x02\x03", exclude_categories=("Cs",)))


def sliced(cells):
    parts = [cell.encode("utf-8") for cell in cells]
    buffer = np.frombuffer(b"".join(part + b"," for part in parts) + bytes(PADDING), np.uint8)
    ends = np.cumsum([len(part) + 1 for part in parts]) - 1
    before = np.concatenate(([-1], ends[:-1]))
    return SliceColumn(buffer, before, ends, padded=True, delimiter=",")


@settings(deadline=None)
@given(st.lists(CELLS, min_size=1))
def test_distinct_texts_of_bytes_and_of_strings_agree(cells):
    for column in (sliced(cells), TextColumn(cells)):
        codes, names = column.distinct()
        assert [names[code] for code in codes] == [cell.strip() for cell in cells]
        assert len(set(names)) == len(names)
        assert [column.text(row) for row in range(len(cells))] == [cell.strip() for cell in cells]


@settings(deadline=None)
@given(st.lists(st.text("0123456789.-", max_size=18), min_size=1))
def test_plain_numbers_of_bytes_and_of_strings_are_the_nearest_floats(cells):
    for column in (sliced(cells), TextColumn(cells)):
        numbers = column.numbers(".")
        for cell, value, clean in zip(cells, numbers.values, numbers.clean, strict=True):
            if clean:
                assert value == float(cell)
            else:
                assert np.isnan(value)


@pytest.mark.parametrize(
    ("cell", "clean"),
    [
        ("12.84", True),
        ("-0.5", True),
        (".5", True),
        ("12.", True),
        ("123456789012345", True),
        ("0.00000000000001", True),
        ("", False),
        (".", False),
        ("-", False),
        ("--1", False),
        ("1.2.3", False),
        ("1e5", False),
        ("+1", False),
        ("1234567890123456", False),
        ("12345678 9", False),
        ("٣", False),
    ],
)
def test_what_counts_as_a_plain_number(cell, clean):
    assert sliced([cell, "1"]).numbers(".").clean.tolist() == [clean, True]


def test_a_decimal_comma_is_read_where_asked():
    assert sliced(["12,84".replace(",", ";")]).numbers(";").values.tolist() == [12.84]
    assert TextColumn(["12,84"]).numbers(",").values.tolist() == [12.84]
    assert not TextColumn(["12,84"]).numbers(".").clean.any()


def test_numbers_in_memory_are_shown_as_typed():
    column = FloatColumn(np.array([12.84, 1e-7, 3.0, np.nan, np.inf]))
    assert [column.text(row) for row in range(5)] == ["12.84", "0.0000001", "3", "", "inf"]


CLOCKS = st.one_of(
    st.text("0123456789:.,", max_size=14),
    st.from_regex(r"\A([0-9]{1,3}:)?[0-9]{1,4}:[0-9]{2}([.,][0-9]{1,6})?\Z"),
)


@settings(deadline=None, max_examples=300)
@given(st.lists(CLOCKS, min_size=1))
def test_clock_times_of_bytes_are_those_of_single_texts(cells):
    cells = [cell.replace(",", ";") for cell in cells]  # the comma parts the cells here
    found = sliced(cells).clocks()
    for cell, value, clean, whole in zip(
        cells, found.values, found.clean, found.whole, strict=True
    ):
        expected = read_clock(cell)
        if clean:
            assert value == expected
            assert whole == (
                cell.count(":") == 2 and value % 60 == 0 and value >= 3600 and "." not in cell
            )
    assert sliced(["1:03.15", "01:02:03", "9:59"]).clocks().clean.all()
