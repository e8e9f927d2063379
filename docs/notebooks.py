"""Execute a notebook kept as text, cell by cell, and write it with its outputs as a page.

A notebook is a Python file whose cells begin with ``# %%``; its text cells, ``# %% [markdown]``,
are comments. Editors and Jupyter (with jupytext) open it as a notebook, Python runs it as it is.
"""

from __future__ import annotations

import ast
import contextlib
import io
import re
from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

__all__ = ["Cell", "cells_of", "execute", "page_of"]

_CELL = re.compile(r"^# %%(.*)$", re.M)


@dataclass
class Cell:
    """A cell: its text or code, what it printed, and what its last line gave."""

    source: str
    is_text: bool
    printed: str = ""
    value: Any = None
    names: dict[str, Any] = field(default_factory=dict)


def cells_of(text: str) -> Iterator[Cell]:
    """Yield the cells of a notebook; what stands before the first is its settings."""
    parts = _CELL.split(text)
    for mark, body in zip(parts[1::2], parts[2::2], strict=True):
        if "[markdown]" in mark:
            lines = [re.sub(r"^# ?", "", line) for line in body.strip().splitlines()]
            yield Cell("\n".join(lines), is_text=True)
        elif body.strip():
            yield Cell(body.strip(), is_text=False)


def execute(script: Path) -> list[Cell]:
    """Run every code cell of a notebook in one name space; the last cell carries its names."""
    names: dict[str, Any] = {"__name__": "notebook"}
    done = []
    for number, cell in enumerate(cells_of(script.read_text("utf-8")), 1):
        if not cell.is_text:
            tree = ast.parse(cell.source)
            place = f"{script.name}, cell {number}"
            last = tree.body.pop() if isinstance(tree.body[-1], ast.Expr) else None
            said = io.StringIO()
            with contextlib.redirect_stdout(said):
                exec(compile(tree, place, "exec"), names)
                if isinstance(last, ast.Expr):
                    cell.value = eval(compile(ast.Expression(last.value), place, "eval"), names)
            cell.printed = said.getvalue()
        cell.names = names
        done.append(cell)
    return done


def page_of(cells: list[Cell], name: str, folder: Path) -> str:
    """Return an executed notebook as Markdown; figures are put beside it as files."""
    parts = []
    for number, cell in enumerate(cells, 1):
        if cell.is_text:
            parts.append(cell.source)
            continue
        parts.append(f"```python\n{cell.source}\n```")
        if cell.printed:
            parts.append(f"```text\n{cell.printed.rstrip()}\n```")
        if cell.value is not None:
            parts.append(_shown(cell.value, folder / f"{name}-{number}.svg"))
    return "\n\n".join(parts) + "\n"


def _shown(value: Any, drawing: Path) -> str:
    """Return what a notebook shows of a value."""
    figure = value.figure if hasattr(value, "get_figure") else value
    if hasattr(figure, "savefig"):
        import matplotlib as mpl

        with mpl.rc_context({"svg.hashsalt": drawing.stem}):
            figure.savefig(drawing, metadata={"Date": None})
        return f"![figure of the cell above]({drawing.name})"
    if hasattr(value, "_repr_html_"):
        html = re.sub(r"<table[^>]*>", '<table class="docutils">', value._repr_html_())
        return f"```{{raw}} html\n{html}\n```"
    return f"```text\n{value!r}\n```"
