"""The README says what the program does: its printed result, its Python, its two commands."""

from __future__ import annotations

import re
from pathlib import Path

import plumbfall as pf

ROOT = Path(__file__).parents[2]
README = (ROOT / "README.md").read_text("utf-8")


def blocks(language: str) -> list[str]:
    return re.findall(rf"```{language}\n(.*?)\n```", README, re.S)


def test_exactly_two_commands_of_one_line_each():
    commands = blocks("sh")
    assert len(commands) == 2
    assert all("\n" not in command for command in commands)


def test_printed_result_is_what_is_printed(monkeypatch):
    monkeypatch.chdir(ROOT)
    printed = pf.reduce("sample_runs/damping_fluid_clean/drops.csv").text()
    (shown, *_) = blocks("text")
    assert shown.splitlines()[0] == printed.splitlines()[0]
    for line in shown.splitlines():
        assert line == "…" or line in printed.splitlines()


def test_python_example_runs(monkeypatch, tmp_path, capsys):
    (code,) = blocks("python")
    monkeypatch.chdir(tmp_path)
    (tmp_path / "sample_runs").symlink_to(ROOT / "sample_runs")
    exec(compile(code, "README.md", "exec"), {})
    assert (tmp_path / "report.html").exists()
    assert capsys.readouterr().out.startswith("valid  monday")


def test_top_level_holds_what_the_owner_wants_and_no_more():
    tracked = {"README.md", "DEVELOPERS.md", "pyproject.toml"}
    tracked |= {"src", "tests", "docs", "sample_runs"}
    present = {path.name for path in ROOT.iterdir() if not path.name.startswith(".")}
    assert tracked <= present
    assert present - tracked <= {"report", "build", "dist"}  # what git ignores
