"""The documents say what the program does: examples are read, links lead somewhere."""

from __future__ import annotations

import ast
import datetime as dt
import importlib.util
import re
import shlex
import subprocess
import sys
import tomllib
from pathlib import Path
from typing import Annotated, get_args

import jsonschema
import pydantic
import pytest

import plumbfall as pf
from plumbfall.bench.common_keys import Keys
from plumbfall.bench.notation import read_quantity
from plumbfall.bench.schema import Sheet, json_schema
from plumbfall.cli.exit_codes import BAD_INPUT, DONE, INVALID, UNDECIDED
from plumbfall.cli.program import build_parser
from plumbfall.findings.limits import Limits
from plumbfall.results import SEVERITIES
from plumbfall.timings import collect
from support.documents import DOCS, FENCE, ROOT, TEXTS, blocks, number, table_headed

GENERATED = re.compile(r"<!-- begin .*?<!-- end \w+ -->", re.S)

# Every code that a report may hold, by the description of its JSON; the last two are additions
# to it, for drops between Grubbs' 5 % and 1 % limits, and for tube constants that are none.
CODES = {
    "reynolds-high", "diameter-ratio-high", "no-solution", "ball-not-denser", "run-in-short",
    "end-near", "geometry-unknown", "off-axis-suspected", "too-few-drops", "outlier",
    "time-trend", "temperature-trend", "temperature-spread", "slope-unknown",
    "not-equilibrated", "balls-disagree", "reused-balls", "swapped-ball-suspected",
    "fall-time-short", "resolution-coarse", "scatter-small", "scatter-large",
    "minutes-as-decimals-suspected", "unit-slip-suspected", "radius-as-diameter-suspected",
    "nominal-diameter", "density-implausible", "density-temperature", "default-gravity",
    "missing-uncertainty", "input-changed", "shear-dependence", "diameter-ratio-trend",
    "intervals-disagree", "duplicate-rows", "many-excluded", "void-without-reason",
    "linear-not-validated", "constant-outside-domain", "calibration-overdue",
    "reference-expired", "reference-not-independent", "uncertainty-implausible",
    "straggler", "constant-varies",
}  # fmt: skip


@pytest.fixture(scope="module")
def generate():
    spec = importlib.util.spec_from_file_location("docs_generate", DOCS / "generate.py")
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


# --- generated parts ----------------------------------------------------------------------------


def test_generated_parts_are_current():
    done = subprocess.run(
        [sys.executable, DOCS / "generate.py", "--check"], capture_output=True, text=True
    )
    assert done.returncode == 0, done.stdout + done.stderr


def test_a_changed_part_is_noticed_and_written_anew(generate, tmp_path, monkeypatch, capsys):
    for name, text in TEXTS.items():
        stale = text.replace("| `bore` |", "| `boar` |") if name == "bench_sheet.md" else text
        (tmp_path / name).write_text(stale, "utf-8")
    monkeypatch.setattr(generate, "DOCS", tmp_path)
    assert generate.main(["--check"]) == 1
    assert "bench_sheet.md: stale" in capsys.readouterr().out
    assert "`boar`" in (tmp_path / "bench_sheet.md").read_text("utf-8")
    assert generate.main([]) == 0
    assert (tmp_path / "bench_sheet.md").read_text("utf-8") == TEXTS["bench_sheet.md"]
    assert generate.main(["--check"]) == 0


def models(model=Sheet):
    """Yield every table of the bench sheet's schema."""
    yield model
    for field in model.model_fields.values():
        inner = [field.annotation, *get_args(field.annotation)]
        for one in inner:
            if isinstance(one, type) and issubclass(one, pydantic.BaseModel):
                yield from models(one)


def test_every_example_of_a_key_is_taken_by_its_reader(generate):
    read = 0
    for model in set(models()) - {Sheet}:
        for name, field in model.model_fields.items():
            written = tomllib.loads(f"{name} = {generate.toml(field.examples[0])}")[name]
            kind = field.annotation
            for annotation in field.metadata:
                kind = Annotated[kind, annotation]
            # the key alone: a table's own checks want the keys beside it
            alone = pydantic.create_model("Alone", __base__=Keys, **{name: (kind, ...)})
            alone.model_validate({name: written})
            read += 1
    assert read > 90


def as_json(value):
    """Return a sheet as editors hand it to a schema: dates as text."""
    if isinstance(value, dict):
        return {key: as_json(item) for key, item in value.items()}
    if isinstance(value, list):
        return [as_json(item) for item in value]
    return value.isoformat() if isinstance(value, dt.date | dt.datetime) else value


# --- bench sheet --------------------------------------------------------------------------------


@pytest.mark.parametrize(("document", "text", "_after"), blocks("toml"))
def test_sheets_are_read(document, text, _after):
    sheet = tomllib.loads(text)
    Sheet.model_validate(sheet)
    jsonschema.Draft202012Validator(json_schema()).validate(as_json(sheet))


@pytest.mark.parametrize(("document", "text", "after"), blocks("toml", "refused"))
def test_refused_sheets_are_refused_as_shown(document, text, after, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    Path("bench.toml").write_text(text, "utf-8")
    with pytest.raises(pf.InputError) as refused:
        pf.read_bench("bench.toml")
    assert str(refused.value) == after.strip()


def test_forms_of_a_quantity_mean_what_the_table_says():
    head, *rows = table_headed("bench_sheet.md", "| written |")
    assert head[1:3] == ["value", "standard uncertainty u"]
    for written, value, u, *_ in rows:
        quantity = tomllib.loads(f"q = {written.strip('`')}")["q"]
        found = read_quantity(quantity, "length")
        assert 1000 * found.value == pytest.approx(number(value.removesuffix(" mm")), rel=5e-5)
        if u == "none":
            assert found.u == 0
        else:
            assert 1000 * found.u == pytest.approx(number(u.removesuffix(" mm")), rel=1e-3)
    assert len(rows) == 11


def test_the_commented_sheet_and_the_first_timing_file_give_a_valid_result(tmp_path):
    sheets = [block for block in blocks("toml") if block.values[0] == "bench_sheet.md"]
    files = [block for block in blocks("csv") if block.values[0] == "timing_files.md"]
    (tmp_path / "bench.toml").write_text(sheets[0].values[1], "utf-8")
    (tmp_path / "drops.csv").write_text(files[0].values[1], "utf-8")
    report = pf.reduce(tmp_path / "drops.csv")
    (row,) = report.table().to_dict("records")
    assert row["status"] == "valid"
    assert (row["n_drops"], row["n_balls"]) == (5, 4)
    assert row["reference_temperature_degC"] == 25
    assert {finding.severity for finding in report["tank 3"].findings} == {"note"}
    assert {finding.code for finding in report["tank 3"].findings} == {
        "reused-balls",
        "linear-not-validated",
    }


# --- timing files -------------------------------------------------------------------------------


@pytest.mark.parametrize(("document", "text", "_after"), blocks("csv"))
def test_timing_files_are_read(document, text, _after, tmp_path):
    (tmp_path / "drops.csv").write_text(text, "utf-8")
    timings = pf.read_timings(tmp_path / "drops.csv")
    assert len(timings)
    assert not timings.problems
    assert not timings.repairs
    assert (timings.table["status"] == "used").any()


@pytest.mark.parametrize(("document", "text", "after"), blocks("csv", "repaired"))
def test_repairs_are_listed_as_shown(document, text, after, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    Path("drops.csv").write_text(text, "utf-8")
    timings = pf.read_timings("drops.csv")
    shown = [
        ":".join(str(part) for part in (one.file, one.line, one.column) if part is not None)
        + f": {one.what}"
        for one in timings.repairs
    ]
    assert shown == after.splitlines()


@pytest.mark.parametrize(("document", "text", "after"), blocks("csv", "refused"))
def test_files_are_refused_as_shown(document, text, after, tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    Path("drops.csv").write_text(text, "utf-8")
    with pytest.raises(pf.InputError) as refused:
        pf.read_timings("drops.csv")
    assert str(refused.value).splitlines() == after.splitlines()


def test_headings_of_the_table_are_understood(tmp_path):
    from plumbfall.timings.headings import read_heading

    _, *rows = table_headed("timing_files.md", "| heading |")
    for headings, _, _, also in rows:
        meanings = {read_heading(name, 1).meaning for name in re.findall(r"`([^`]+)`", headings)}
        assert "" not in meanings, headings
        synonyms = [name for name in re.split(r"[,;] ?", also) if name]
        assert synonyms
        for name in synonyms:
            numbered = meanings <= {"mark", "interval", "repeat"}
            found = read_heading(f"{name} 1" if numbered else name, 1).meaning
            assert found in meanings, f"{name} is read as {found or 'nothing'}"


def test_spellings_of_a_missing_time_are_no_time(tmp_path):
    text = TEXTS["timing_files.md"]
    (listed,) = re.findall(r"Missing is an empty\s+cell, or one of (.*?)\.\n", text, re.S)
    spellings = re.findall(r"`([^`]+)`", listed)
    assert len(spellings) > 8
    lines = "".join(f"{spelling}\n" for spelling in spellings)
    (tmp_path / "drops.csv").write_text(f"time [s]\n14.1\n{lines}", "utf-8")
    table = collect(tmp_path / "drops.csv").table
    assert table["status"].tolist() == ["used"] + ["excluded"] * len(spellings)
    assert set(table["note"].astype(str)[1:]) == {"no-time"}


# --- command line -------------------------------------------------------------------------------


def command_lines():
    for name, text in TEXTS.items():
        for found in FENCE.finditer(text):
            if found[1] == "sh":
                yield from ((name, line) for line in found[3].splitlines())
        prose = FENCE.sub("", GENERATED.sub("", text))
        for line in re.findall(r"`(plumbfall [^`]+)`", prose):
            yield name, line


@pytest.mark.parametrize(("document", "line"), list(command_lines()))
def test_command_lines_parse(document, line):
    program, *arguments = shlex.split(line)
    assert program == "plumbfall"
    assert build_parser().parse_args(arguments).run


def test_exit_codes_are_those_of_the_command_line():
    _, *rows = table_headed("command_line.md", "| code |")
    assert [int(code) for code, _ in rows] == [DONE, INVALID, BAD_INPUT, UNDECIDED]


# --- findings -----------------------------------------------------------------------------------


def emitted():
    """Return every (code, severity) that a detector can make, from the source."""
    found = set()
    package = ROOT / "src" / "plumbfall"
    for path in (*(package / "findings").glob("*.py"), *(package / "calibration").glob("*.py")):
        for node in ast.walk(ast.parse(path.read_text("utf-8"))):
            if isinstance(node, ast.Call) and getattr(node.func, "id", "") == "Finding":
                given = {keyword.arg: keyword.value for keyword in node.keywords}
                severity = given["severity"]
                if isinstance(severity, ast.IfExp):
                    severities = [severity.body, severity.orelse]
                else:
                    severities = [severity]
                found |= {(given["code"].value, one.value) for one in severities}
    return found


def test_every_finding_is_in_the_table_and_no_other():
    head, *rows = table_headed("findings.md", "| code |")
    assert head == ["code", "severity", "when", "what to do"]
    listed = [(code.strip("`"), severity) for code, severity, *_ in rows]
    assert len(set(listed)) == len(listed)
    assert set(listed) == emitted()
    assert {code for code, _ in listed} <= CODES
    assert {severity for _, severity in listed} <= set(SEVERITIES)
    assert all(when and remedy for *_, when, remedy in rows)


def test_limits_quoted_in_the_findings_are_the_defaults():
    quoted = re.findall(r"`(\w+)` \(([\d.]+)( %| K)?\)", TEXTS["findings.md"])
    assert len(quoted) >= 4
    for name, value, unit in quoted:
        assert getattr(Limits(), name) * (100 if unit == " %" else 1) == pytest.approx(float(value))


# --- links --------------------------------------------------------------------------------------


def anchors(text):
    """Return the anchors of a document's headings, as usual hosts make them."""
    headings = re.findall(r"^#+ (.*)$", FENCE.sub("", text), re.M)
    return {
        re.sub(r"[^\w\- ]", "", heading.replace("`", "").casefold()).strip().replace(" ", "-")
        for heading in headings
    }


@pytest.mark.parametrize("document", TEXTS)
def test_links_lead_somewhere(document):
    text = FENCE.sub("", TEXTS[document])
    links = re.findall(r"\]\(([^)\s]+)\)", text)
    assert document in ("references.md", "cautions.md") or links
    for link in links:
        if link.startswith("https://"):
            continue
        path, _, anchor = link.partition("#")
        target = path or document
        assert (DOCS / target).exists(), link
        assert not anchor or anchor in anchors(TEXTS[target]), link


def test_every_document_is_in_the_index():
    linked = set(re.findall(r"\]\(([\w.]+\.md)\)", TEXTS["README.md"]))
    assert linked == set(TEXTS) - {"README.md"}


@pytest.mark.parametrize("document", TEXTS)
def test_cited_references_are_listed(document):
    listed = re.findall(r"^\| \[([^\]]+)\] \|", TEXTS["references.md"], re.M)
    assert len(listed) == len(set(listed))
    cited = re.findall(r"\[([^\[\]]+)\]\]?\(references\.md\)", TEXTS[document])
    assert {key for key in cited if key[0].isupper() and key != "References"} <= set(listed)
