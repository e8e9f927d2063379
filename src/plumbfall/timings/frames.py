"""A pandas table in memory as a grid of cells."""

from __future__ import annotations

import datetime as dt
import hashlib
from collections.abc import Hashable

import numpy as np
import pandas as pd

from plumbfall.timings.columns import Column, FloatColumn, TextColumn, number_text
from plumbfall.timings.grid import Grid
from plumbfall.timings.notices import Notices

__all__ = ["FRAME_NAME", "FRAME_STEM", "frame_grid", "frame_sha256"]

FRAME_NAME = "<table>"
"""What stands for the path of a table that never was a file."""
FRAME_STEM = "table"


def frame_grid(frame: pd.DataFrame, notices: Notices) -> Grid:
    """Return a table's cells; its rows count as lines from 1, named index levels as columns."""
    if any(name is not None and name not in frame.columns for name in frame.index.names):
        frame = frame.reset_index()
    headings = tuple(_heading(name) for name in frame.columns)
    columns = tuple(_column(frame.iloc[:, place]) for place in range(frame.shape[1]))
    if not columns or not len(frame):
        notices.error("the table is empty", "it needs one row for each drop")
    return Grid(headings, None, np.arange(1, len(frame) + 1, dtype=np.int64), columns, decimal=".")


def frame_sha256(frame: pd.DataFrame) -> str:
    """Return a hash of a table's headings and values; equal tables have equal hashes."""
    digest = hashlib.sha256("\n".join(map(_heading, frame.columns)).encode())
    for place in range(frame.shape[1]):
        texts = frame.iloc[:, place]
        values = texts.astype(str) if texts.dtype == object else texts
        digest.update(pd.util.hash_array(values.to_numpy()).tobytes())
    return digest.hexdigest()


def _heading(name: Hashable) -> str:
    if isinstance(name, tuple):
        return " ".join(str(part) for part in name if str(part))
    return str(name).strip()


def _column(values: pd.Series) -> Column:
    if pd.api.types.is_bool_dtype(values.dtype):
        return TextColumn([str(value) for value in values])
    if pd.api.types.is_timedelta64_dtype(values.dtype):
        return TextColumn([_text(value) for value in values])
    if pd.api.types.is_integer_dtype(values.dtype) or pd.api.types.is_float_dtype(values.dtype):
        return FloatColumn(values.to_numpy(dtype=float, na_value=np.nan))
    return TextColumn([_text(value) for value in values])


def _text(value: object) -> str:
    if isinstance(value, str):
        return value
    if value is None or value is pd.NA or value is pd.NaT:
        return ""
    if isinstance(value, (float, np.floating)):
        return number_text(float(value))
    if isinstance(value, dt.timedelta):
        return f"{number_text(value.total_seconds())} s"
    if isinstance(value, pd.Timestamp):
        return value.isoformat()
    return str(value)
