"""Files and names made to do harm end in a clear error within bounded time and memory."""

from __future__ import annotations

import csv
import io
import os
import signal
import subprocess
import sys
import textwrap
import time
import zipfile

import pandas as pd
import pytest

from plumbfall.bench import read_bench
from plumbfall.errors import InputError
from plumbfall.report.tables import csv_text
from plumbfall.timings import collect

RUN = [sys.executable, "-c"]


def within_a_gigabyte(code, folder):
    """Run code in a process of its own that may not use more than 1 GB; return what it says."""
    if sys.platform == "win32":
        pytest.skip("there is no limit of memory to set here")
    limited = "import resource; resource.setrlimit(resource.RLIMIT_DATA, (10**9, 10**9))\n"
    done = subprocess.run(
        [*RUN, limited + textwrap.dedent(code)],
        cwd=folder,
        capture_output=True,
        text=True,
        timeout=60,
        env=os.environ | {"OPENBLAS_NUM_THREADS": "1"},
        check=False,
    )
    assert "Traceback" not in done.stderr, done.stderr[-2000:]
    return done.stdout


INSPECT = """
from plumbfall.timings import collect
for problem in collect("{}").problems:
    print(problem)
"""


def test_a_line_of_fifty_megabytes(tmp_path):
    (tmp_path / "t.csv").write_bytes(b"time [s]\n" + b"1" * 50_000_000)
    assert "at most 100,000 are read" in within_a_gigabyte(INSPECT.format("t.csv"), tmp_path)


def test_a_workbook_that_unpacks_to_gigabytes(tmp_path):
    with zipfile.ZipFile(tmp_path / "t.xlsx", "w", zipfile.ZIP_DEFLATED) as archive:
        archive.writestr("xl/workbook.xml", "<workbook/>")
        with archive.open("xl/worksheets/sheet1.xml", "w", force_zip64=True) as sheet:
            for _ in range(100):
                sheet.write(b" " * 10_000_000)
    assert (tmp_path / "t.xlsx").stat().st_size < 2_000_000
    said = within_a_gigabyte(INSPECT.format("t.xlsx"), tmp_path)
    assert "1,000,000,011 bytes unpacked; at most 200,000,000 are read" in said


@pytest.mark.parametrize("opening", ["[", "{a = ", "[[a.b]]\n[", '"""'])
def test_a_bench_sheet_that_nests_without_end(opening, tmp_path):
    path = tmp_path / "bench.toml"
    path.write_text("a = " + opening * 100_000)
    with pytest.raises(InputError) as refused:
        read_bench(path)
    assert str(path) in str(refused.value)


def test_names_of_three_hundred_characters(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    for heading in ("set", "ball", "tube", "operator"):
        (tmp_path / "t.csv").write_text(f"{heading},time [s]\n{'A' * 300},12.84\n")
        assert "use names of at most 120" in collect("t.csv").problems[0].remedy
    (tmp_path / "t.csv").write_text(f"{'time' * 300} [s],time [s]\n1,12.84\n")
    assert not collect("t.csv").problems
    assert "no such file" in collect("A" * 300 + ".csv").problems[0].message or (
        "too long" in collect("A" * 300 + ".csv").problems[0].message
    )


@pytest.mark.parametrize("start", ["=", "+", "-", "@", "\t", "\r", "\n"])
def test_no_cell_that_is_written_runs_as_a_formula(start):
    cell = start + 'HYPERLINK("x")'
    text = csv_text(pd.DataFrame({"set": [cell, "A"], "value": [-1.5, 2.0]}))
    first, second = list(csv.reader(io.StringIO(text)))[1:]
    assert first[0].startswith("'")
    assert (first[1], second) == ("-1.5", ["A", "2.0"])


WRITE = """
import os, sys
from plumbfall.report import writing
original = os.fsync
def slowly(number):
    original(number)
    print("half", flush=True)
    sys.stdin.read()
os.fsync = slowly
writing.write_folder("out", {"report.html": b"new" * 1000, "report.json": b"{}"})
"""


@pytest.mark.skipif(sys.platform == "win32", reason="signals of that kind are not sent there")
@pytest.mark.parametrize("number", [signal.SIGTERM, signal.SIGKILL, signal.SIGINT])
@pytest.mark.parametrize("before", [False, True])
def test_a_run_that_is_killed_while_writing_leaves_no_partial_file(number, before, tmp_path):
    if before:
        (tmp_path / "out").mkdir()
        (tmp_path / "out" / "report.html").write_bytes(b"old")
    with subprocess.Popen(
        [*RUN, WRITE],
        cwd=tmp_path,
        stdin=subprocess.PIPE,
        stdout=subprocess.PIPE,
        stderr=subprocess.DEVNULL,
    ) as process:
        assert process.stdout.readline() == b"half\n"
        time.sleep(0.1)
        process.send_signal(number)
        process.wait(30)
    found = {path.name for path in tmp_path.rglob("*") if path.name.startswith("report")}
    visible = sorted(path.name for path in (tmp_path / "out").glob("report*"))
    if before:
        assert visible == ["report.html"]
        assert (tmp_path / "out" / "report.html").read_bytes() == b"old"
    else:
        assert not visible
    assert found <= {"report.html", "report.json"}
