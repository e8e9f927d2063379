"""Where in a bench sheet's text its tables and keys stand."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterable
from dataclasses import replace

from plumbfall.bench.keys import key_path
from plumbfall.errors import Problem

__all__ = ["lines_of_keys", "placed"]

_HEADER = re.compile(r"\s*(\[\[?)\s*(.+?)\s*\]\]?\s*(?:#.*)?")
_NAME = r"""(?:[A-Za-z0-9_-]+|"(?:[^"\\]|\\.)*"|'[^']*')"""
_KEY = re.compile(rf"\s*({_NAME}(?:\s*\.\s*{_NAME})*)\s*=")
_TRIPLE = re.compile(r'"""|' + "'''")


def lines_of_keys(text: str) -> dict[str, int]:
    """Return the line, from 1, of every table and key, by key path."""
    lines: dict[str, int] = {}
    counts: dict[str, int] = {}
    table: tuple[str | int, ...] = ()
    in_text = False
    for line, row in enumerate(text.split("\n"), 1):
        inside = in_text
        in_text ^= len(_TRIPLE.findall(row)) % 2 == 1
        if inside:
            continue
        header = _HEADER.fullmatch(row.rstrip("\r"))
        key = _KEY.match(row)
        parts = _parts(header[2]) if header else _parts(key[1]) if key else ()
        if not parts:
            continue
        if header:
            table = parts
            if header[1] == "[[":
                path = key_path(*parts)
                counts[path] = counts.get(path, -1) + 1
                table = (*parts, counts[path])
            lines.setdefault(key_path(*table), line)
        else:
            lines.setdefault(key_path(*table, *parts), line)
    return lines


def _parts(dotted: str) -> tuple[str, ...]:
    """Return the names of a dotted key, as TOML reads them; none where it is no key."""
    try:
        tree = tomllib.loads(f"{dotted} = 0")
    except tomllib.TOMLDecodeError:
        return ()
    parts: list[str] = []
    while isinstance(tree, dict) and len(tree) == 1:
        name, tree = next(iter(tree.items()))
        parts.append(name)
    return tuple(parts)


def placed(problems: Iterable[Problem], *, path: str, text: str) -> list[Problem]:
    """Return problems in the file's order, each with the line of its key or of its table."""
    lines = lines_of_keys(text)
    found = [replace(problem, path=path, line=_line(problem.key, lines)) for problem in problems]
    return sorted(found, key=lambda problem: problem.line or 0)


def _line(key: str, lines: dict[str, int]) -> int | None:
    above = [path for path in lines if key == path or key.startswith((f"{path}.", f"{path}["))]
    return lines[max(above, key=len)] if above else None
