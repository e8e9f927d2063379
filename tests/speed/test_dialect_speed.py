"""Dialects other than the canonical one against pandas.read_csv of the clean file, in one run.

Run by itself for the figures: ``python tests/speed/test_dialect_speed.py``.
"""

from __future__ import annotations

import sys
import tempfile
from collections.abc import Callable
from pathlib import Path

import pandas as pd
import pytest

from plumbfall.bench.records import Bench, TimingHints
from plumbfall.timings import collect
from speed.test_read_speed import cpu_seconds, write_drops

TARGET = 20.0
"""Times what pandas takes; the gate stands at twice that, as a noisy machine must not fail it."""
"""Times pandas.read_csv of the clean file that any other dialect may take; the test gates there."""

Lines = list[list[str]]


def _clock(seconds: str) -> str:
    hundredths = round(float(seconds) * 300)
    return f"{hundredths // 6000}:{hundredths % 6000 / 100:05.2f}"


def _with_times(change: Callable[[str], str], name: str = "time [s]") -> Callable[[Lines], str]:
    def made(lines: Lines) -> str:
        rows = [[*row[:4], change(row[4]), *row[5:]] for row in lines[1:]]
        head = [*lines[0][:4], name, *lines[0][5:]]
        return "\n".join(",".join(row) for row in [head, *rows]) + "\n"

    return made


def _blocks(lines: Lines) -> str:
    parts = []
    size = max(len(lines) // 100, 1)
    for number, start in enumerate(range(1, len(lines), size)):
        parts.append(f"Ball {'ABCD'[number % 4]}\ndrop,time [s]\n")
        parts += [f"{n},{row[4]}\n" for n, row in enumerate(lines[start : start + size], 1)]
    return "".join(parts)


DIALECTS: dict[str, Callable[[Lines], str]] = {
    "semicolons and decimal commas": lambda lines: "".join(
        ";".join(row).replace(".", ",") + "\n" for row in lines
    ),
    "minutes and seconds": _with_times(_clock),
    "prime marks": _with_times(lambda text: _clock(text).replace(":", "'").replace(".", '"')),
    "units in the cells": _with_times(lambda text: text + " s", "time"),
    "all quoted": lambda lines: "".join('"' + '","'.join(row) + '"\n' for row in lines),
    "rows of uneven width": lambda lines: "".join(
        ",".join(row[: 5 + n % 3]) + "\n" for n, row in enumerate(lines, 2)
    ),
    "line breaks in quotes": lambda lines: "".join(
        ",".join(row) + ('"a\nb"' if n % 100 == 1 else "") + "\n" for n, row in enumerate(lines)
    ),
    "quotes in quotes": lambda lines: "".join(
        ",".join(row) + ('"a ""b"""' if n else "") + "\n" for n, row in enumerate(lines)
    ),
    "spaces before quotes": lambda lines: "".join(
        ",".join(row) + (' "b"' if n else "") + "\n" for n, row in enumerate(lines)
    ),
    "blocks": _blocks,
    "many missing": _with_times(lambda text: text if text[-1] in "02468" else "n/a"),
    "Windows-1252": lambda lines: "".join(",".join(row) + "\n" for row in lines).replace(
        "degC", "°C"
    ),
}


def made(name: str, clean: Path) -> Path:
    """Write the same drops in another dialect."""
    lines = [line.split(",") for line in clean.read_text(encoding="utf-8").splitlines()]
    path = clean.with_name("other.csv")
    encoding = "cp1252" if name == "Windows-1252" else "utf-8"
    path.write_text(DIALECTS[name](lines), encoding=encoding, newline="")
    return path


@pytest.fixture(scope="module")
def clean(tmp_path_factory):
    path = write_drops(tmp_path_factory.mktemp("speed") / "drops.csv", 50_000)
    return path, cpu_seconds(lambda: pd.read_csv(path))


@pytest.mark.parametrize("name", DIALECTS)
def test_any_dialect_is_read_in_at_most_twenty_times_what_pandas_takes(name, clean):
    path, plain = clean
    other = made(name, path)
    found = cpu_seconds(lambda: collect(other), repeats=2) / plain
    sys.stderr.write(f"\n{name}: {found:.1f}\n")
    assert found < 2 * TARGET
    assert len(collect(other)) == 50_000


def test_a_file_of_nothing_but_faults_is_refused_in_bounded_time(clean):
    """Fifty thousand faults: the first are told, the others counted; no dialect, so no target."""
    path, plain = clean
    lines = [line.split(",") for line in path.read_text("utf-8").splitlines()]
    wrong = path.with_name("faults.csv")
    made_of = _with_times(lambda text: "x" + text)
    wrong.write_text(made_of(lines), "utf-8")
    found = cpu_seconds(lambda: collect(wrong), repeats=1) / plain
    sys.stderr.write(f"\nnothing but faults: {found:.1f}\n")
    assert found < 5 * TARGET
    *told, rest = collect(wrong).problems
    assert len(told) == 500
    assert "49500" in rest.message.replace(",", "")


def test_a_sheet_of_a_hundred_thousand_columns_is_refused_at_once(tmp_path):
    path = tmp_path / "t.csv"
    path.write_text("time [s]," + "1," * 40_000 + "\nnote\n")
    hints = Bench(timings=TimingHints(transposed=True))
    assert cpu_seconds(lambda: collect(path, hints), repeats=1) < 20


def main() -> None:
    """Print the ratios for a million rows."""
    with tempfile.TemporaryDirectory() as folder:
        clean = write_drops(Path(folder) / "drops.csv", 1_000_000)
        plain = cpu_seconds(lambda: pd.read_csv(clean))
        for name in DIALECTS:
            other = made(name, clean)
            found = cpu_seconds(lambda path=other: collect(path), repeats=1) / plain
            sys.stdout.write(f"{name}: {found:.1f}\n")


if __name__ == "__main__":
    main()
