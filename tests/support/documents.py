"""The project's documents: their text, their fenced blocks and their tables."""

from __future__ import annotations

import re
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
DOCS = ROOT / "docs"
TEXTS = {path.name: path.read_text("utf-8") for path in sorted(DOCS.glob("*.md"))}
FENCE = re.compile(
    r"^```(\w+)( refused| repaired)?\n(.*?)^```$(?:\n\n^```text\n(.*?)^```$)?", re.M | re.S
)


def blocks(language, kind=""):
    """Return (document, text, text block that follows) of every fenced block of a language."""
    return [
        pytest.param(name, found[3], found[4] or "", id=f"{name}-{number}")
        for name, text in TEXTS.items()
        for number, found in enumerate(FENCE.finditer(text), 1)
        if found[1] == language and (found[2] or "").strip() == kind
    ]


def table_headed(document, start):
    """Return the head and the rows of the one table whose line begins with a text."""
    (table,) = re.findall(rf"^ *{re.escape(start)}.*(?:\n *\|.*)+", TEXTS[document], re.M)
    rows = [re.split(r"(?<!\\)\|", line.strip().strip("|")) for line in table.splitlines()]
    return [[cell.strip() for cell in row] for row in (rows[0], *rows[2:])]


def number(text):
    """Return a printed number; a minus sign may be the typographic one."""
    return float(text.replace("−", "-"))
