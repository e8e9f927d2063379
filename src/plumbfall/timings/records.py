"""Timed drops as a table in SI units, each row with the file, line and column it came from."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from plumbfall.errors import Problem

if TYPE_CHECKING:
    import numpy as np
    import pandas as pd
    from numpy.typing import NDArray

__all__ = ["COLUMNS", "Block", "ColumnRead", "Repair", "TimingFile", "Timings"]

COLUMNS = (
    "file",
    "line",
    "column",
    "set",
    "drop",
    "ball",
    "tube",
    "liquid",
    "timer",
    "thermometer",
    "operator",
    "started",
    "status",
    "note",
    "time_s",
    "from_mark",
    "to_mark",
    "temperature_K",
)
"""Columns of :attr:`Timings.table`, in order.

``file set ball tube liquid timer thermometer operator started status note`` are strings held as
pandas categoricals (empty where not given); ``line column drop from_mark to_mark`` are integers;
``time_s`` and ``temperature_K`` are floats, NaN where missing. ``from_mark`` counts from 1;
``to_mark`` 0 stands for the tube's last mark. ``status`` is ``used``, ``void`` or ``excluded``;
an excluded row's ``note`` opens with the rule that excluded it, such as ``no-time``.
"""

STATUSES = ("used", "void", "excluded")
SHOWN = ("file", "line", "set", "drop", "ball", "time_s", "temperature_K", "status", "note")
"""Columns that a notebook shows of a table that it is asked to show as a whole."""


@dataclass(frozen=True, slots=True)
class ColumnRead:
    """A column as it was understood; ``meaning`` is empty where it is not used.

    ``column`` counts from 1, and is 0 for what a title above the headings names; ``unit`` is that
    of plain numbers, empty where none is needed.
    """

    column: int
    heading: str
    meaning: str
    unit: str = ""


@dataclass(frozen=True, slots=True)
class Block:
    """Rows under one row of headings: where these are, what they mean, and how many rows."""

    heading_line: int | None
    columns: tuple[ColumnRead, ...]
    rows: int


@dataclass(frozen=True, slots=True)
class TimingFile:
    """A file that was read, and the dialect it was found to be written in.

    ``heading_line`` and ``columns`` are those of the first block, ``None`` and empty where no
    headings were found. In a ``transposed`` file the headings stand in a column of that number.
    """

    path: str
    sha256: str
    encoding: str
    delimiter: str
    decimal: str
    heading_line: int | None = None
    columns: tuple[ColumnRead, ...] = ()
    blocks: tuple[Block, ...] = ()
    transposed: bool = False


@dataclass(frozen=True, slots=True)
class Repair:
    """Something that was put right in reading, never silently."""

    file: str
    line: int | None
    column: int | None
    what: str


@dataclass(frozen=True, slots=True)
class Timings:
    """Every drop that was read: used, void and excluded alike.

    ``marks_s`` holds clock readings at the tube's marks, shape (rows, marks), seconds since the
    first mark's clock zero, NaN where not read; ``None`` where only total times were given.
    ``offers`` are lines for ``[timings]`` of the bench sheet that would settle what is ambiguous.
    """

    table: pd.DataFrame
    marks_s: NDArray[np.float64] | None = None
    files: tuple[TimingFile, ...] = ()
    repairs: tuple[Repair, ...] = ()
    problems: tuple[Problem, ...] = field(default=())
    offers: tuple[str, ...] = ()

    @classmethod
    def empty(cls, problems: tuple[Problem, ...] = ()) -> Timings:
        """Return timings without rows, such as an input that could not be read."""
        import pandas as pd

        return cls(pd.DataFrame(columns=list(COLUMNS)), problems=problems)

    def __len__(self) -> int:
        return len(self.table)

    def __repr__(self) -> str:
        return f"<timings: {self._told()}>"

    def _repr_html_(self) -> str:
        from html import escape

        remarks = [f"repaired: {one.file}:{one.line}: {one.what}" for one in self.repairs]
        remarks += [f"{one.severity}: {one}" for one in self.problems]
        said = "".join(f"<p>{escape(remark)}</p>\n" for remark in remarks)
        shown = [name for name in SHOWN if name in self.table]
        table: str = self.table[shown].to_html(max_rows=20, index=False, border=0)
        return f'<div class="plumbfall">\n<p>{escape(self._told())}</p>\n{table}\n{said}</div>'

    def _told(self) -> str:
        names = self.table["set"].astype(str).nunique() if len(self) else 0
        status = self.table["status"].astype(str)
        counts = ", ".join(f"{int((status == one).sum())} {one}" for one in STATUSES)
        return f"{len(self)} rows in {names} run sets: {counts}"
