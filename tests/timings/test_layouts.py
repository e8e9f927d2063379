"""Files as technicians produce them, each with the drops it must read to. All data are invented."""

from __future__ import annotations

import tomllib
from pathlib import Path

import pytest

from plumbfall.bench.records import TimingHints
from plumbfall.timings import collect
from timings.benches import bench

CASES = tomllib.loads((Path(__file__).parent / "layouts.toml").read_text(encoding="utf-8"))


def read(case, folder):
    path = folder / "t.csv"
    path.write_bytes(case["file"].encode(case.get("bytes", "utf-8")))
    hints = TimingHints(**case.get("timings", {}))
    if not case.get("bench", True):
        return collect("t.csv")
    return collect("t.csv", bench(balls="ABCD", marks=case.get("marks", 3), timings=hints))


def drops_of(timings):
    """Return line, set, ball, seconds, degrees Celsius and, where not used, the status."""
    rows = []
    for drop in timings.table.itertuples():
        row = [drop.line, drop.set, drop.ball]
        row.append("" if drop.time_s != drop.time_s else round(drop.time_s, 9))
        celsius = drop.temperature_K - 273.15
        row.append("" if celsius != celsius else round(celsius, 9))
        rows.append(row + ([] if drop.status == "used" else [drop.status]))
    return rows


@pytest.mark.parametrize("name", CASES)
def test_a_layout_is_read_to_the_right_drops(name, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    case = CASES[name]
    timings = read(case, tmp_path)
    assert [str(problem) for problem in timings.problems] == case.get("problems", [])
    assert drops_of(timings) == case["drops"]
    repairs = [f"{one.line}:{one.column}: {one.what}" for one in timings.repairs]
    assert repairs == case.get("repairs", [])


def test_there_are_enough_layouts():
    assert len(CASES) >= 50
