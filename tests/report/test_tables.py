from __future__ import annotations

import csv
import io

import pandas as pd
import pytest

from plumbfall.report import Report
from plumbfall.report.tables import csv_text, drops_table
from report.invented_report import HOSTILE_NAMES, hostile_sets, three_sets


@pytest.mark.parametrize("text", ["=cmd()", "+1", "-1", "@sum", "\tx", "\rx", "\nx"])
def test_a_text_cell_never_starts_a_formula(text: str) -> None:
    read = list(csv.reader(io.StringIO(csv_text(pd.DataFrame({"note": [text]})), newline="")))
    assert read == [["note"], ["'" + text.replace("\r", "\n")]]


def test_a_line_break_in_a_cell_is_no_new_row() -> None:
    text = csv_text(pd.DataFrame({"note": ["one\rtwo\r\nthree\nfour"], "n": [1]}))
    assert text == 'note,n\n"one\ntwo\nthree\nfour",1\n'


def test_numbers_stay_numbers_whatever_their_sign() -> None:
    frame = pd.DataFrame({"a": [-1.5, float("nan")], "b": [-2, 3], "t": ["x", None]})
    assert csv_text(frame) == "a,b,t\n-1.5,-2,x\n,3,\n"


def test_every_digit_is_kept() -> None:
    assert csv_text(pd.DataFrame({"a": [0.1 + 0.2]})) == "a\n0.30000000000000004\n"


def test_line_ends_are_plain(tmp_path) -> None:
    Report(three_sets()).to_csv(tmp_path)
    for name in ("run_sets.csv", "drops.csv"):
        content = (tmp_path / name).read_bytes()
        assert b"\r" not in content
        assert content.endswith(b"\n")


def test_run_sets_have_the_columns_of_the_interface(tmp_path) -> None:
    Report(three_sets()).to_csv(tmp_path)
    heading = (tmp_path / "run_sets.csv").read_text("utf-8").splitlines()[0]
    assert heading == (
        "set,status,viscosity_mPa_s,standard_uncertainty_mPa_s,expanded_uncertainty_mPa_s,"
        "coverage_factor,coverage_probability,low_mPa_s,high_mPa_s,temperature_degC,"
        "viscosity_at_reference_mPa_s,reference_temperature_degC,n_drops,n_balls,findings"
    )


def test_hostile_names_and_notes_come_back_harmless(tmp_path) -> None:
    Report(hostile_sets()).to_csv(tmp_path)
    with (tmp_path / "drops.csv").open(encoding="utf-8", newline="") as file:
        rows = list(csv.DictReader(file))
    assert len(rows) == 32
    assert {row["set"] for row in rows} == {HOSTILE_NAMES[0], "'=cmd()", *HOSTILE_NAMES[2:]}
    assert rows[6]["note"].startswith("'=cmd(")
    assert sorted(path.name for path in tmp_path.iterdir()) == ["drops.csv", "run_sets.csv"]


def test_no_run_sets_no_drops_is_a_heading_only() -> None:
    assert csv_text(drops_table([])).count("\n") == 1
