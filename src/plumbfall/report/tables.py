"""Run sets, drops and budgets as tables of numbers, units in the column names; and as CSV."""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING, Any

from plumbfall.results import RunSetResult

if TYPE_CHECKING:
    import pandas as pd

__all__ = ["budget_table", "csv_text", "drops_table", "halving_table"]

FORMULA_STARTS = ("=", "+", "-", "@", "\t", "\n")
"""What a spreadsheet takes for the start of a formula (common practice, no source)."""

_BUDGET_COLUMNS = (
    "input",
    "value",
    "unit",
    "standard_uncertainty",
    "distribution",
    "dof",
    "sensitivity",
    "contribution",
    "share",
    "scope",
)

_DROP_COLUMNS = (
    "set",
    "drop",
    "ball",
    "file",
    "line",
    "status",
    "used",
    "time_s",
    "temperature_degC",
    "viscosity_mPa_s",
    "viscosity_at_set_mPa_s",
    "stokes_viscosity_mPa_s",
    "reynolds",
    "fall_speed_mm_s",
    "wall_factor",
    "inertia_factor",
    "end_factor",
    "residual",
    "note",
    "findings",
)


def budget_table(result: RunSetResult) -> pd.DataFrame:
    """Return the uncertainty budget of a run set, one row an input, in SI units.

    ``contribution`` is in Pa.s; ``dof`` may be infinite; the ``share`` column adds up to 1.
    """
    import pandas as pd

    rows = [
        (
            line.input,
            line.value,
            line.unit,
            line.u,
            line.distribution,
            line.dof,
            line.sensitivity,
            line.contribution,
            line.share,
            line.scope,
        )
        for line in result.budget
    ]
    return pd.DataFrame(rows, columns=list(_BUDGET_COLUMNS))


def halving_table(result: RunSetResult) -> pd.DataFrame:
    """Return what would halve the expanded uncertainty, one row a dominant input, in SI units.

    ``what`` (a standard uncertainty, or a number of drops or balls) is ``now`` and must become
    ``needed``; NaN where that input alone cannot do it. ``remaining`` is the part of the expanded
    uncertainty left without the input's error.
    """
    import pandas as pd

    names = ("input", "what", "unit", "now", "needed", "remaining")
    rows = [tuple(getattr(one, name) for name in names) for one in result.improvements]
    return pd.DataFrame(rows, columns=list(names)).astype({"now": float, "needed": float})


def drops_table(results: Iterable[RunSetResult]) -> pd.DataFrame:
    """Return the drops of run sets, one row a drop, void and excluded ones included.

    Numbers are floats, NaN where a drop gave none; ``residual`` is relative (0.01 is 1 %).
    """
    import pandas as pd

    frame = pd.DataFrame(
        [row for result in results for row in _drop_rows(result)], columns=list(_DROP_COLUMNS)
    )
    floats = [name for name in _DROP_COLUMNS[7:18] if name in frame]
    return frame.astype(dict.fromkeys(floats, float))


def csv_text(frame: pd.DataFrame) -> str:
    """Return a table as CSV with plain line feeds and every digit of its numbers.

    A text cell that a spreadsheet would run as a formula gets an apostrophe in front; a carriage
    return in one, which readers take for the end of the row, becomes a line feed.
    """
    safe = frame.copy()
    for name in safe.columns:
        if safe[name].dtype.kind not in "fiub":
            safe[name] = [_harmless(cell) for cell in safe[name]]
    text: str = safe.to_csv(index=False, lineterminator="\n")
    return text


def _harmless(cell: Any) -> Any:
    if not isinstance(cell, str):
        return cell
    text = cell.replace("\r\n", "\n").replace("\r", "\n")
    return f"'{text}" if text.startswith(FORMULA_STARTS) else text


def _drop_rows(result: RunSetResult) -> Iterable[tuple[object, ...]]:
    for drop in result.drops:
        yield (
            result.name,
            drop.drop,
            drop.ball,
            drop.file,
            drop.line,
            drop.status,
            drop.used,
            drop.time,
            drop.temperature - 273.15,
            _times(drop.viscosity, 1e3),
            _times(drop.viscosity_at_set, 1e3),
            _times(drop.stokes_viscosity, 1e3),
            drop.reynolds,
            _times(drop.fall_speed, 1e3),
            drop.wall,
            drop.inertia,
            drop.end,
            drop.residual,
            drop.note,
            " ".join(drop.findings),
        )


def _times(value: float | None, factor: float) -> float | None:
    return None if value is None else value * factor
