from __future__ import annotations

import io

import pytest

from plumbfall.report import Report
from plumbfall.report.terminal import show
from plumbfall.report.text import printable
from report.invented_report import (
    InventedReduction,
    hostile_sets,
    invalid_set,
    three_sets,
    valid_set,
)


class Stream(io.StringIO):
    def __init__(self, encoding: str, terminal: bool) -> None:
        super().__init__()
        self._encoding = encoding
        self._terminal = terminal

    @property
    def encoding(self) -> str:
        return self._encoding

    def isatty(self) -> bool:
        return self._terminal


@pytest.fixture
def text() -> str:
    return Report(three_sets()).text()


def test_a_verdict_line_opens_each_set(text: str) -> None:
    opened = [line for line in text.splitlines() if line and not line.startswith(" ")]
    assert opened[0].startswith("valid  batch 118  851.3 ± 4.2 mPa.s (k=2.0, 95 %) at 25.00 degC")
    assert opened[1].startswith("valid-with-warnings  batch 119")
    assert opened[2].startswith("invalid  batch 120  no viscosity")
    assert opened[3] == "19 rows read = 17 used + 1 void + 1 excluded by rule"
    assert opened[-1].startswith("plumbfall ")


def test_eighty_columns_are_enough_but_for_the_verdict(text: str) -> None:
    long = [line for line in text.splitlines() if len(line) > 80]
    assert all(line.startswith(("valid", "invalid")) for line in long)


@pytest.mark.parametrize(
    "part",
    [
        "847.1 to 855.5 mPa.s",
        "Coverage factor k                   2.00",
        "Effective degrees of freedom        61",
        "8 of 8 drops, 4 balls",
        "wall        1.09184  exact",
        "timer.watch.per_drop           38.0 %  1.3 mPa.s  drop",
        "not used  drop 8, runs/invented.csv:9, excluded: no-time",
        "warning outlier: drop 6 lies apart from the others (drop 6; statistic 2.41;",
        "remedy: look at the recording of drop 6",
        "repaired  runs/invented.csv:3: a blank before the unit was taken out",
    ],
)
def test_it_holds(text: str, part: str) -> None:
    assert part in text


def test_what_was_repaired_or_looks_wrong_in_the_files_is_told(text: str) -> None:
    flat = " ".join(text.split())
    assert "repaired runs/invented.csv:3: a blank before the unit was taken out" in flat
    assert "warning runs/invented.csv:8: no reason is given; write a note" in flat


def test_a_word_is_explained_once(text: str) -> None:
    assert " ".join(text.split()).count("this many standard uncertainties") == 1
    assert " ".join(text.split()).count("drag on the ball in this tube over its drag") == 1


def test_many_sets_are_told_in_full_only_where_not_valid() -> None:
    sets = (*(valid_set(f"set {n}") for n in range(20)), invalid_set("bad"))
    lines = Report(InventedReduction(sets)).text().splitlines()
    assert sum(line.startswith("valid  set") for line in lines) == 20
    assert sum("Bounds" in line for line in lines) == 0
    assert any("ball-not-denser" in line for line in lines)
    assert any("told in full by --out DIR" in line for line in lines)


def test_plain_when_piped() -> None:
    stream = Stream("utf-8", terminal=False)
    report = Report(three_sets())
    show(report, stream)
    assert stream.getvalue() == report.text()


@pytest.mark.parametrize("variable", ["NO_COLOR", "TERM"])
def test_plain_where_colour_is_not_wanted(monkeypatch: pytest.MonkeyPatch, variable: str) -> None:
    monkeypatch.delenv("NO_COLOR", raising=False)
    monkeypatch.setenv("TERM", "xterm-256color")
    monkeypatch.setenv(variable, "1" if variable == "NO_COLOR" else "dumb")
    stream = Stream("utf-8", terminal=True)
    show(Report(three_sets()), stream)
    assert "\x1b" not in stream.getvalue()


def test_a_terminal_gets_colour_and_the_same_words(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delenv("NO_COLOR", raising=False)
    monkeypatch.setenv("TERM", "xterm-256color")
    import re

    stream = Stream("utf-8", terminal=True)
    report = Report(InventedReduction(three_sets().sets[1:2]))
    show(report, stream)
    assert "\x1b[1;33mvalid-with-warnings\x1b[0m  batch 119" in stream.getvalue()
    assert "  \x1b[1;33mwarning\x1b[0m outlier" in stream.getvalue()
    assert re.sub(r"\x1b\[[0-9;]*m", "", stream.getvalue()) == report.text()


@pytest.mark.parametrize("encoding", ["utf-8", "ascii"])
def test_several_sets_on_a_terminal_begin_with_a_table(
    monkeypatch: pytest.MonkeyPatch, encoding: str
) -> None:
    monkeypatch.delenv("NO_COLOR", raising=False)
    monkeypatch.setenv("TERM", "xterm-256color")
    monkeypatch.setenv("COLUMNS", "80")
    import re

    stream = Stream(encoding, terminal=True)
    report = Report(three_sets())
    show(report, stream)
    shown = re.sub(r"\x1b\[[0-9;]*m", "", stream.getvalue())
    table, _, rest = shown.partition("\n\n")
    assert rest == printable(report.text(), encoding)
    lines = table.splitlines()
    assert max(map(len, lines)) <= 80
    assert [re.split(r"[ |]{2,}", line)[:2] for line in lines if line.startswith("batch")] == [
        ["batch 118", "valid"], ["batch 119", "warnings"], ["batch 120", "invalid"],
    ]  # fmt: skip
    assert printable("851.3 ± 4.2 mPa.s", encoding) in lines[2]
    assert "847.1 to 855.5" in lines[2]
    assert "none" in lines[4]


@pytest.mark.parametrize("encoding", ["ascii", "cp437", "latin-1", "cp1252"])
def test_consoles_that_lack_characters(encoding: str) -> None:
    stream = Stream(encoding, terminal=False)
    show(Report(hostile_sets()), stream)
    shown = stream.getvalue()
    shown.encode(encoding)
    assert ("+/-" in shown) == (encoding == "ascii")
    assert "?" not in shown


def test_names_cannot_drive_a_terminal() -> None:
    named = InventedReduction((valid_set("\x1b]0;title\x07[bold red]x[/]\r"),))
    text = Report(named).text()
    assert "\x1b" not in text
    assert "\r" not in text
    assert r"\x1b]0;title\x07[bold red]x[/]\r" in text


def test_printable_falls_back_for_any_encoding() -> None:
    assert printable("851.3 ± 4.2 µm", "ascii") == "851.3 +/- 4.2 um"
    assert printable("球", "latin-1") == "\\u7403"
    assert printable("±", None) == "+/-"
    assert printable("±", "no-such-encoding") == "+/-"
    assert printable("±", "utf-8") == "±"
