"""Reading a clean canonical file against pandas.read_csv of the same file, in one run.

Run by itself for the figures: ``python tests/speed/test_read_speed.py``.
"""

from __future__ import annotations

import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from plumbfall.timings import read_timings

TARGET = 4.0
"""Times pandas.read_csv that a clean file may take; the test gates at twice that."""


def write_drops(path: Path, rows: int) -> Path:
    """Write invented drops: run sets of a hundred, four balls, times of two decimals."""
    random = np.random.default_rng(20260302)
    number = np.arange(rows)
    seconds = (12.8 + number // 100 % 50) * (1 + 0.003 * random.standard_normal(rows))
    degrees = 25 + 0.02 * random.standard_normal(rows)
    with path.open("w", encoding="utf-8") as file:
        file.write("set,drop,ball,temperature [degC],time [s],status,note\n")
        file.writelines(
            f"batch {n // 100},{n % 100 + 1},{'ABCD'[n % 4]},{t:.2f},{s:.2f},,\n"
            for n, t, s in zip(number.tolist(), degrees.tolist(), seconds.tolist(), strict=True)
        )
    return path


def cpu_seconds(call: Callable[[], object], repeats: int = 3) -> float:
    """Return the least processor time of a few calls; others' work does not count."""
    best = float("inf")
    for _ in range(repeats):
        start = time.process_time()
        call()
        best = min(best, time.process_time() - start)
    return best


def ratio(path: Path) -> float:
    """Return how many times pandas.read_csv the reader takes."""
    return cpu_seconds(lambda: read_timings(path)) / cpu_seconds(lambda: pd.read_csv(path))


def test_a_clean_file_is_read_in_a_few_times_what_pandas_takes(tmp_path):
    path = write_drops(tmp_path / "drops.csv", 200_000)
    found = ratio(path)
    sys.stderr.write(f"\nread_timings / pandas.read_csv, 200,000 rows: {found:.1f}\n")
    assert found < 2 * TARGET


def test_time_grows_no_faster_than_the_number_of_drops(tmp_path):
    few = write_drops(tmp_path / "few.csv", 50_000)
    many = write_drops(tmp_path / "many.csv", 400_000)
    growth = cpu_seconds(lambda: read_timings(many)) / cpu_seconds(lambda: read_timings(few))
    assert growth < 2 * 8


@pytest.mark.slow
def test_a_million_rows(tmp_path):
    path = write_drops(tmp_path / "drops.csv", 1_000_000)
    found = ratio(path)
    sys.stderr.write(f"\nread_timings / pandas.read_csv, 1,000,000 rows: {found:.1f}\n")
    assert found < 2 * TARGET
    assert len(read_timings(path)) == 1_000_000


def main() -> None:
    """Print the ratio and the peak of memory for a million rows."""
    with tempfile.TemporaryDirectory() as folder:
        path = write_drops(Path(folder) / "drops.csv", 1_000_000)
        read_timings(path)
        lines = []
        if sys.platform != "win32":
            import resource

            peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
            peak_megabytes = peak / (1e6 if sys.platform == "darwin" else 1e3)
            lines.append(f"peak memory of read_timings, MB: {peak_megabytes:.0f}")
        lines.append(f"read_timings / pandas.read_csv, 1,000,000 rows: {ratio(path):.2f}")
        sys.stdout.write("\n".join(lines) + "\n")


if __name__ == "__main__":
    main()
