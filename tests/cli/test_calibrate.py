"""The command ``calibrate`` as a user types it."""

from __future__ import annotations

import json
import shutil
from pathlib import Path

import pytest

from plumbfall.cli.program import main

SAMPLE = Path(__file__).parents[2] / "sample_runs" / "inclined_tube"


@pytest.fixture
def folder(tmp_path):
    """Return a copy of the sample without its constant, as before the first calibration."""
    for name in ("bench.toml", "calibration.csv", "drops.csv"):
        shutil.copy(SAMPLE / name, tmp_path)
    return tmp_path


def test_a_constant_is_found_written_and_used(folder, capsys):
    cal, out = folder / "calibration.csv", folder / "constant.json"
    arguments = ["calibrate", str(cal), "--reference", "thin", "thick", "--out", str(out)]
    assert main(arguments) == 0
    printed, said = capsys.readouterr()
    assert "tube inclined, ball glass  0.59993(89) mPa.s.cm3/(g.s)" in printed
    assert "written to" in said
    assert json.loads(out.read_text())["schema"] == "plumbfall/constants/1"
    assert main(["reduce", str(folder / "drops.csv"), "--draws", "0"]) == 0
    assert capsys.readouterr().out.startswith("valid  drum 12  46.2")


def test_without_its_file_the_drops_are_refused_with_what_to_do(folder, capsys):
    assert main(["reduce", str(folder / "drops.csv")]) == 2
    said = capsys.readouterr().err
    assert "constant.K.file" in said
    assert "no such file" in said
    assert "plumbfall calibrate" in said


def test_json_is_the_file(folder, capsys):
    out = folder / "constant.json"
    cal = str(folder / "calibration.csv")
    main(["calibrate", cal, "--reference", "thin", "thick", "--out", str(out), "--json"])
    assert json.loads(capsys.readouterr().out) == json.loads(out.read_text())


def test_a_wrong_reference_is_bad_input_and_writes_nothing(folder, capsys):
    out = folder / "constant.json"
    cal = str(folder / "calibration.csv")
    assert main(["calibrate", cal, "--reference", "thinn", "--out", str(out)]) == 2
    assert "did you mean 'thin'?" in capsys.readouterr().err
    assert not out.exists()


def test_an_invalid_set_exits_with_1_and_writes_nothing(folder, capsys):
    sheet = folder / "bench.toml"
    sheet.write_text(sheet.read_text("utf-8").replace("2.2300(9) g/cm3", "0.8500(9) g/cm3"))
    out = folder / "constant.json"
    cal = str(folder / "calibration.csv")
    assert main(["calibrate", cal, "--reference", "thin", "thick", "--out", str(out)]) == 1
    printed, said = capsys.readouterr()
    assert "ball-not-denser" in printed
    assert "nothing is written" in said
    assert not out.exists()
