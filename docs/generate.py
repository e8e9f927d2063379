"""Write those parts of the documents that are generated from the program itself.

A part stands between two comments of its document and is named there. ``python docs/generate.py``
writes every part anew; with ``--check`` nothing is written, and stale documents exit with 1.
"""

from __future__ import annotations

import argparse
import dataclasses
import inspect
import json
import re
import sys
from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from pathlib import Path
from typing import Any

from plumbfall.bench.common_keys import LEFT_OUT, Equipment
from plumbfall.bench.schema import Sheet
from plumbfall.bench.usual import USUAL
from plumbfall.cli.program import build_parser
from plumbfall.findings.ball_materials import MATERIALS
from plumbfall.findings.limits import Limits
from plumbfall.flow.tables import read_table, tables_directory
from plumbfall.physics.laws import DEFAULTS, KINDS, laws_of
from plumbfall.physics.measured_errors import PLACES, measured_errors
from plumbfall.published.selftest import selftest
from plumbfall.quantities import DIMENSIONS
from plumbfall.report.methods import TITLES, percent
from plumbfall.report.selftest_text import totals_table

__all__ = ["DOCS", "PARTS", "filled", "main", "toml"]

DOCS = Path(__file__).parent
NOTHING = "–"
Schema = Mapping[str, Any]


def main(arguments: Sequence[str] | None = None) -> int:
    """Write the generated parts, or say which documents are stale; return the exit code."""
    parser = argparse.ArgumentParser(description="Write the generated parts of the documents.")
    parser.add_argument("--check", action="store_true", help="write nothing; exit 1 when stale")
    check = parser.parse_args(arguments).check
    stale = False
    for name in sorted({document for document, _ in PARTS}):
        path = DOCS / name
        old = path.read_text("utf-8")
        new = filled(name, old)
        if new != old:
            stale = True
            sys.stdout.write(
                f"{name}: {'stale; run python docs/generate.py' if check else 'new'}\n"
            )
            if not check:
                beside = path.with_suffix(".new")
                beside.write_text(new, "utf-8")
                beside.replace(path)
    return int(check and stale)


def filled(document: str, text: str) -> str:
    """Return a document's text with its generated parts as they are now."""
    for (name, part), make in PARTS.items():
        if name != document:
            continue
        begin = f"<!-- begin {part}: written by generate.py -->"
        end = f"<!-- end {part} -->"
        if text.count(begin) != 1 or text.count(end) != 1:
            raise SystemExit(f"{document} needs one '{begin}' and one '{end}'")
        before, _, rest = text.partition(begin)
        after = rest.partition(end)[2]
        text = f"{before}{begin}\n\n{make().strip()}\n\n{end}{after}"
    return text


def table(head: Sequence[str], rows: Iterable[Sequence[str]]) -> str:
    """Return a Markdown table; a bar within a cell is escaped."""
    lines = [head, ["---"] * len(head), *rows]
    return "\n".join(
        "| " + " | ".join(cell.replace("|", "\\|") or NOTHING for cell in line) + " |"
        for line in lines
    )


def toml(value: object) -> str:
    """Return a value as it is typed in a bench sheet.

    >>> toml({"time": "s"}), toml("2026-03-02"), toml(["0 mm"])
    ('{ time = "s" }', '2026-03-02', '["0 mm"]')
    """
    if isinstance(value, dict):
        pairs = (f"{_key(name)} = {toml(inner)}" for name, inner in value.items())
        return "{ " + ", ".join(pairs) + " }"
    if isinstance(value, list):
        return "[" + ", ".join(map(toml, value)) + "]"
    if isinstance(value, str) and re.match(r"\d{4}-\d{2}-\d{2}(T|$)", value):
        return value
    return json.dumps(value, ensure_ascii=False)


def _key(name: str) -> str:
    return name if re.fullmatch(r"[A-Za-z0-9_-]+", name) else json.dumps(name, ensure_ascii=False)


# --- bench sheet ---------------------------------------------------------------------------------


def bench_keys() -> str:
    """Return every section of the bench sheet with its keys."""
    schema = Sheet.model_json_schema()
    parts = [*_section("Equipment", Equipment.model_json_schema(), schema)]
    for name, node in schema["properties"].items():
        if name == "limits":
            parts += [
                "### `[limits]`",
                "The limits that findings use: see [findings](findings.md#limits).",
            ]
            continue
        many = "additionalProperties" in node
        keys = _target(node["additionalProperties"] if many else node, schema)
        parts += _section(f"`[{name}{'.NAME' if many else ''}]`", keys, schema)
    return "\n\n".join(parts)


def _section(title: str, keys: Schema, schema: Schema, level: str = "###") -> Iterator[str]:
    """Yield a section's heading, what it is, its keys, and the tables within them."""
    properties = keys["properties"]
    about = " ".join(keys["description"].split())
    shared = Equipment.model_fields.keys()
    if shared < properties.keys():
        properties = {name: node for name, node in properties.items() if name not in shared}
        about += " The keys of [equipment](#equipment) may stand here too."
    yield f"{level} {title}"
    yield about
    rows = (_row(name, node, keys.get("required", ()), schema) for name, node in properties.items())
    yield table(("key", "kind", "if left out", "example", "meaning"), rows)
    for name, node in properties.items():
        inner = _target(node.get("items", node), schema)
        if "properties" in inner:
            which = "Each table of" if "items" in node else "The table of"
            yield from _section(f"{which} `{name}`", inner, schema, level="####")


def _row(name: str, node: Schema, required: Sequence[str], schema: Schema) -> tuple[str, ...]:
    meaning, _, left_out = node["description"].partition(LEFT_OUT)
    if name in required:
        left_out = "**required**"
    elif node.get("default") not in (None, "", [], {}):
        left_out = f"`{toml(node['default'])}`"
    if "enum" in node:
        meaning += "; one of " + ", ".join(f"`{toml(one)}`" for one in node["enum"])
    example = toml(node["examples"][0])
    return f"`{name}`", _kind(node, schema), left_out, f"`{example}`", meaning


def _kind(node: Schema, schema: Schema) -> str:
    """Return what may stand at a key, in a word or two."""
    if "x-quantity" in node:
        return str(node["x-quantity"])
    if "items" in node:
        inner = _kind(node["items"], schema)
        return f"list of {inner}s"
    if "properties" in _target(node, schema) or node.get("type") == "object":
        return "table"
    if "anyOf" in node:
        return "name, or list of names"
    if "enum" in node:
        return "choice"
    kind = node["type"]
    words = {"integer": "whole number", "number": "number", "boolean": "true or false"}
    if isinstance(kind, list):
        return "text"
    formats = {"date": "date", "date-time": "date and time"}
    return words.get(kind) or formats.get(node.get("format", ""), "text")


def _target(node: Schema, schema: Schema) -> Schema:
    """Return the table that a node refers to, or the node itself."""
    for one in (node, *node.get("anyOf", ())):
        if "$ref" in one:
            found: Schema = schema["$defs"][one["$ref"].rpartition("/")[2]]
            return found
    return node


def units() -> str:
    """Return every kind of quantity of the bench sheet with its units."""
    text = json.dumps(Sheet.model_json_schema())
    used = [name for name in DIMENSIONS if f'"x-quantity": "{name}"' in text]
    rows = (
        (name, ", ".join(f"`{unit}`" for unit in DIMENSIONS[name].units), DIMENSIONS[name].unit)
        for name in used
    )
    return table(("kind", "units", "in JSON"), rows)


def timers() -> str:
    """Return the usual values that stand in by a timer's kind."""
    rows = (
        (f"`{kind}`", f"`{key}`", getattr(usual, key) or "see the source", usual.sources[key])
        for kind, usual in USUAL.items()
        for key in ("per_drop", "bias", "rate", "resolution")
        if key in usual.sources
    )
    return table(("kind", "key", "usual value", "source"), rows)


# --- command line, laws, limits ------------------------------------------------------------------


def commands() -> str:
    """Return every command with its arguments."""
    parser = build_parser()
    choices = next(action.choices for action in parser._actions if isinstance(action.choices, dict))
    parts = [parser.description or ""]
    parts += [_arguments(parser)]
    for command in choices.values():
        parts += [f"### `{command.prog}`", command.description or ""]
        parts += [f"```text\n{_usage(command)}\n```", _arguments(command)]
        if command.epilog:
            parts.append(command.epilog)
    return "\n\n".join(parts)


def _usage(parser: argparse.ArgumentParser) -> str:
    words = [parser.prog]
    for action in parser._actions:
        written = _written(action)
        optional = action.option_strings or action.nargs == "*"
        if "-h" not in action.option_strings:
            words.append(f"[{written}]" if optional else written)
    return " ".join(words)


def _written(action: argparse.Action) -> str:
    name = action.metavar or action.dest
    value = name if isinstance(name, str) else " ".join(name)
    if not action.option_strings:
        return value + (" …" if action.nargs in ("*", "+") else "")
    return action.option_strings[-1] + ("" if action.nargs == 0 else f" {value}")


def _arguments(parser: argparse.ArgumentParser) -> str:
    shown = [action for action in parser._actions if not isinstance(action.choices, dict)]
    return table(
        ("argument", "meaning"),
        ((f"`{_written(action)}`", (action.help or "").replace("%%", "%")) for action in shown),
    )


def laws() -> str:
    """Return every registered law with range, error and source."""
    parts = []
    for kind in KINDS:
        rows = (
            (
                f"`{name}`" + (" (default)" if DEFAULTS[kind] == name else ""),
                f"{law.variable} {law.low:g} to {law.high:g}",
                law.error,
                law.citation,
            )
            for name, law in laws_of(kind).items()
        )
        parts += [f"**{TITLES[kind]}**", table(("law", "range", "error", "source"), rows)]
    return "\n\n".join(parts)


def errors() -> str:
    """Return the measured error of every law in percent, a table for each kind and place."""
    parts = []
    for kind in KINDS:
        found = measured_errors(kind)
        for law_or_all in sorted({name for of, name in PLACES if of == kind}, reverse=True):
            ones = [one for one in found if law_or_all in ("", one.law)]
            cells = {(one.law, one.place): percent(one.error) for one in ones}
            places = sorted({one.place for one in ones})
            names = list(dict.fromkeys(one.law for one in ones))
            head = ", ".join(PLACES[kind, law_or_all])
            rows = (
                (f"`{name}`", *(cells.get((name, place), "") for place in places)) for name in names
            )
            columns = (", ".join(f"{number:g}" for number in place) for place in places)
            parts += [f"**{TITLES[kind]}**", table((f"law; {head}", *columns), rows)]
    return "\n\n".join(parts)


def shipped() -> str:
    """Return every shipped table with what made it and the error it states."""
    rows = []
    for name in sorted(path.stem for path in tables_directory().glob("*.json")):
        about = read_table(name, tables_directory()).about
        size = (tables_directory() / f"{name}.json").stat().st_size
        error = next(value for key, value in about.items() if key.startswith("estimated"))
        made = (str(about[key]) for key in ("quantity", "solver", "settings"))
        rows.append((f"`{name}`", *made, f"{error:g}", f"{size / 1000:.0f}"))
    return table(("table", "what", "solver", "settings", "estimated error", "kB"), rows)


def limits() -> str:
    """Return every limit of the findings with its default."""
    about = dict(_described(inspect.getdoc(Limits) or ""))
    fields = dataclasses.fields(Limits)
    rows = ((f"`{one.name}`", f"`{toml(one.default)}`", about[one.name]) for one in fields)
    return table(("limit", "default", "meaning"), rows)


def materials() -> str:
    """Return the densities that balls are held against."""
    rows = (
        (one.name, f"{one.low / 1000:g} to {one.high / 1000:g}", one.source) for one in MATERIALS
    )
    return table(("material", "density, g/cm³", "source"), rows)


def totals() -> str:
    """Return how many figures the self-test recomputes, by area and basis."""
    head, *rows = totals_table(selftest())
    return table(head, rows)


def sources() -> str:
    """Return where every figure of the self-test comes from, and how many there are."""
    found: dict[tuple[str, str, str], int] = {}
    for item in selftest().items:
        source = item.source.replace("; ", ", ")
        key = (item.area, source, item.basis)
        found[key] = found.get(key, 0) + 1
    rows = ((area, source, basis, str(count)) for (area, source, basis), count in found.items())
    return table(("area", "source, and what of it", "basis", "figures"), rows)


def _described(docstring: str) -> Iterator[tuple[str, str]]:
    """Yield the names that a docstring explains, each with its text."""
    for found in re.finditer(r"^(\w+(?:, \w+)*)\n((?:    .*\n?)+)", docstring, re.MULTILINE):
        for name in found[1].split(", "):
            yield name, " ".join(found[2].split()).replace("``", "`")


PARTS: Mapping[tuple[str, str], Callable[[], str]] = {
    ("bench_sheet.md", "units"): units,
    ("bench_sheet.md", "timers"): timers,
    ("bench_sheet.md", "keys"): bench_keys,
    ("command_line.md", "commands"): commands,
    ("findings.md", "limits"): limits,
    ("findings.md", "materials"): materials,
    ("methods.md", "errors"): errors,
    ("methods.md", "tables"): shipped,
    ("physics.md", "laws"): laws,
    ("validation.md", "totals"): totals,
    ("validation.md", "sources"): sources,
}
"""What makes each generated part, by document and name."""


if __name__ == "__main__":
    sys.exit(main())
