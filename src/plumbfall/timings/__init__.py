"""Timing files: how timed drops are written down, and reading them into SI units."""

from __future__ import annotations

from plumbfall.timings.reader import collect, read_timings
from plumbfall.timings.records import ColumnRead, Repair, TimingFile, Timings

__all__ = ["ColumnRead", "Repair", "TimingFile", "Timings", "collect", "read_timings"]
