"""The command line as a user types it: what is printed, what is written, and the exit code."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from plumbfall.cli.program import main

SAMPLES = Path(__file__).parents[2] / "sample_runs"
CLEAN = SAMPLES / "damping_fluid_clean" / "drops.csv"
BAD = SAMPLES / "resin_bad_drop" / "drops.csv"
INVALID = SAMPLES / "wash_oil_invalid" / "drops.csv"


def test_reduce_prints_a_verdict_a_set_and_exits_with_0(capsys):
    assert main(["reduce", str(CLEAN)]) == 0
    out, err = capsys.readouterr()
    assert out.startswith("valid  tank 3  ")
    assert "8 of 8 drops, 4 balls  0 warnings" in out.splitlines()[0]
    assert err == ""


def test_json_is_the_report_alone(capsys):
    assert main(["reduce", str(CLEAN), "--json"]) == 0
    document = json.loads(capsys.readouterr().out)
    assert document["schema"] == "plumbfall/report/1"
    assert document["rows"] == {"read": 8, "used": 8, "void": 0, "excluded": 0}


def test_out_writes_four_files_whole(tmp_path, capsys):
    out = tmp_path / "report"
    assert main(["reduce", str(CLEAN), "--out", str(out)]) == 0
    assert sorted(path.name for path in out.iterdir()) == [
        "drops.csv",
        "report.html",
        "report.json",
        "run_sets.csv",
    ]
    assert "written to" in capsys.readouterr().err
    assert os.listdir(tmp_path) == ["report"]


def test_the_report_bears_the_day_that_is_given_and_no_other(tmp_path, capsys):
    assert main(["reduce", str(CLEAN), "--draws", "0", "--json", "--date", "2026-03-04"]) == 0
    assert json.loads(capsys.readouterr().out)["date"] == "2026-03-04"
    assert main(["reduce", str(CLEAN), "--draws", "0", "--json"]) == 0
    assert json.loads(capsys.readouterr().out)["date"] is None
    with pytest.raises(SystemExit) as usage:
        main(["reduce", str(CLEAN), "--date", "4 March"])
    assert usage.value.code == 2
    assert "'4 March' is no day; write it as 2026-03-02" in capsys.readouterr().err


def test_an_invalid_set_exits_with_1_and_still_reports(tmp_path, capsys):
    out = tmp_path / "report"
    assert main(["reduce", str(INVALID), "--out", str(out)]) == 1
    assert (out / "report.html").exists()
    assert capsys.readouterr().out.startswith("invalid  drops  no viscosity")


def test_strict_exits_with_1_on_a_warning(capsys):
    assert main(["reduce", str(BAD)]) == 0
    assert main(["reduce", str(BAD), "--strict"]) == 1
    assert "outlier" in capsys.readouterr().out


def test_coverage_widens_the_bounds(capsys):
    def half_width(*options: str) -> float:
        main(["reduce", str(CLEAN), "--json", *options])
        viscosity = json.loads(capsys.readouterr().out)["run_sets"][0]["viscosity"]
        return viscosity["high"] - viscosity["low"]

    assert half_width("--coverage", "0.99") > 1.25 * half_width()


def test_bad_input_exits_with_2_and_writes_nothing(tmp_path, capsys):
    timings = tmp_path / "drops.csv"
    timings.write_text("ball,time [s]\nA,12.4\nZ,12.5\nB,1O.2\n", "utf-8")
    out = tmp_path / "report"
    bench = SAMPLES / "damping_fluid_clean" / "bench.toml"
    assert main(["reduce", str(timings), "--bench", str(bench), "--out", str(out)]) == 2
    err = capsys.readouterr().err
    assert f"{timings}:3" in err  # the unknown ball
    assert f"{timings}:4" in err  # the letter O, in the same breath
    assert not out.exists()


def test_no_bench_sheet_says_how_to_name_one(tmp_path, capsys):
    timings = tmp_path / "drops.csv"
    timings.write_text("time [s]\n12.4\n", "utf-8")
    assert main(["reduce", str(timings)]) == 2
    assert capsys.readouterr().err == (
        f"error: there is no bench.toml beside {timings}; "
        "name the bench sheet (--bench FILE, or the second argument)\n"
    )


def test_inspect_computes_nothing_and_lists_what_was_understood(capsys):
    assert main(["inspect", str(CLEAN)]) == 0
    out = capsys.readouterr().out
    assert "utf-8" in out.lower()
    assert "8" in out
    assert "Pa.s" not in out


def test_inspect_json_has_its_schema(capsys):
    assert main(["inspect", str(CLEAN), "--json"]) == 0
    document = json.loads(capsys.readouterr().out)
    assert document["schema"] == "plumbfall/inspect/1"
    assert len(document["drops"]) == 8


def test_inspect_of_a_broken_file_exits_with_2(tmp_path, capsys):
    timings = tmp_path / "drops.csv"
    timings.write_text("ball,time\nA,12.4\n", "utf-8")
    assert main(["inspect", str(timings)]) == 2
    out, err = capsys.readouterr()
    assert "time [s]" in out + err


def test_inspect_of_a_bench_alone(capsys):
    bench = SAMPLES / "damping_fluid_clean" / "bench.toml"
    assert main(["inspect", "--bench", str(bench)]) == 0
    assert "tube.long.bore" in capsys.readouterr().out


def test_methods_lists_every_law_with_its_source(capsys):
    assert main(["methods"]) == 0
    out = capsys.readouterr().out
    for name in ("bohlin", "haberman-sayre", "schiller-naumann", "screened", "classical"):
        assert name in out
    assert max(len(line) for line in out.splitlines()) <= 80


def test_usage_errors_exit_with_2(capsys):
    with pytest.raises(SystemExit) as stop:
        main(["reduce"])
    assert stop.value.code == 2
    with pytest.raises(SystemExit) as stop:
        main(["reduce", "x.csv", "--coverage", "95"])
    assert stop.value.code == 2
    assert "write 0.95 for 95 %" in capsys.readouterr().err


def test_draws_are_made_where_asked_for(capsys):
    assert main(["reduce", str(CLEAN), "--draws", "1000", "--seed", "4", "--json"]) == 0
    out, err = capsys.readouterr()
    document = json.loads(out)
    assert err == ""
    assert document["seed"] == 4
    assert document["run_sets"][0]["monte_carlo"]["draws"] == 1000
    assert main(["reduce", str(CLEAN), "--json", "--draws", "0"]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    assert json.loads(out)["run_sets"][0]["monte_carlo"] is None


def test_draws_are_made_by_default_as_the_help_says(capsys):
    assert main(["reduce", str(CLEAN), "--json"]) == 0
    document = json.loads(capsys.readouterr().out)
    assert document["run_sets"][0]["monte_carlo"]["draws"] == 200_000
    with pytest.raises(SystemExit):
        main(["reduce", "--help"])
    assert "default 200000" in " ".join(capsys.readouterr().out.split())
    assert main(["reduce", str(CLEAN), "--draws", "auto", "--json"]) == 0
    assert json.loads(capsys.readouterr().out)["run_sets"][0]["monte_carlo"]["draws"] >= 20_000
    for wrong, said in ((["--draws", "many"], "write 200000, or auto"), (["--seed", "-1"], "seed")):
        with pytest.raises(SystemExit):
            main(["reduce", str(CLEAN), *wrong])
        assert said in capsys.readouterr().err
    assert main(["reduce", str(CLEAN), "--draws", "5"]) == 2
    assert "too few" in capsys.readouterr().err


def test_inspect_json_lists_what_is_wrong_with_the_bench_sheet(tmp_path, capsys):
    bench = tmp_path / "bench.toml"
    bench.write_text('[tube.A]\nbor = "50.00(2) mm"\n', "utf-8")
    assert main(["inspect", str(CLEAN), "--bench", str(bench), "--json"]) == 2
    out, err = capsys.readouterr()
    (problem,) = json.loads(out)["problems"]
    assert (problem["file"], problem["line"], problem["key"]) == (str(bench), 2, "tube.A.bor")
    assert problem["remedy"] == "did you mean 'bore'?"
    assert str(bench) in err


def test_an_empty_name_is_said_to_be_empty(capsys):
    bench = str(CLEAN.with_name("bench.toml"))
    assert main(["reduce", "", "--bench", bench]) == 2
    assert capsys.readouterr().err == "error: a timing file's name is empty; name the file\n"


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="no device that is always full")
def test_a_full_disk_under_the_output_is_no_verdict():
    with open("/dev/full", "wb") as full:
        done = subprocess.run(
            [sys.executable, "-m", "plumbfall", "reduce", str(CLEAN)],
            stdout=full,
            stderr=subprocess.PIPE,
        )
    assert done.returncode == 2
    assert done.stderr.startswith(b"error: the standard output cannot be written: ")
    assert b"Traceback" not in done.stderr


@pytest.mark.skipif(os.name == "nt", reason="a shell of POSIX closes the streams")
def test_closed_streams_leave_the_exit_code_as_it_is():
    def code(arguments: str) -> int:
        shell = f'exec "{sys.executable}" -m plumbfall reduce {arguments}'
        return subprocess.run(["sh", "-c", shell], stdout=subprocess.DEVNULL).returncode

    assert code(f'"{CLEAN}" >&-') == 0
    assert code(f'"{INVALID}" >&-') == 1
    assert code('"no such file.csv" 2>&-') == 2


def test_a_reader_that_leaves_early_keeps_the_verdict():
    command = [sys.executable, "-m", "plumbfall", "reduce", str(INVALID), "--json"]
    with subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE) as done:
        done.stdout.close()
        assert done.stderr.read() == b""
    assert done.returncode == 1


def test_console_without_unicode_gets_ascii():
    done = subprocess.run(
        [sys.executable, "-m", "plumbfall", "reduce", str(CLEAN)],
        env={**os.environ, "PYTHONIOENCODING": "ascii"},
        capture_output=True,
        check=True,
    )
    assert b"+/-" in done.stdout
    assert all(byte < 128 for byte in done.stdout)


def test_output_is_the_same_byte_for_byte(tmp_path):
    # at another time, in another time zone, with other hashes: nothing of that shows
    for name, zone, seed in (("one", "UTC", "1"), ("two", "Pacific/Auckland", "2")):
        command = [sys.executable, "-m", "plumbfall", "reduce", str(BAD), "--out", name]
        environment = {**os.environ, "TZ": zone, "PYTHONHASHSEED": seed}
        subprocess.run(command, check=True, capture_output=True, cwd=tmp_path, env=environment)
    written = sorted((tmp_path / "one").iterdir())
    assert len(written) == 4
    for path in written:
        assert path.read_bytes() == (tmp_path / "two" / path.name).read_bytes()
