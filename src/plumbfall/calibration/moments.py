"""When a run set was measured, and by whom, from what its drops say."""

from __future__ import annotations

import datetime as dt

from plumbfall.timings.records import Timings

__all__ = ["day_of", "last_started", "moment_of", "operators"]


def moment_of(text: str) -> dt.datetime | None:
    """Return a date, or date and time, of ISO 8601; ``None`` where the text is neither."""
    try:
        return dt.datetime.fromisoformat(text)
    except ValueError:
        return None


def day_of(text: str) -> dt.date | None:
    """Return the day of a moment."""
    moment = moment_of(text)
    return None if moment is None else moment.date()


def last_started(timings: Timings, run_set: str) -> str:
    """Return the last ``started`` of a run set's drops that has a date; empty without one."""
    dated = [(moment, text) for text in _texts(timings, run_set, "started")
             if (moment := moment_of(text)) is not None]  # fmt: skip
    if not dated:
        return ""
    zoned = any(moment.tzinfo is not None for moment, _ in dated)
    plain = any(moment.tzinfo is None for moment, _ in dated)
    if zoned and plain:  # moments with and without a zone have no order but the file's
        return dated[-1][1]
    return max(dated)[1]


def operators(timings: Timings, run_set: str) -> str:
    """Return the operators of a run set's drops, in order of first appearance."""
    return "; ".join(dict.fromkeys(_texts(timings, run_set, "operator")))


def _texts(timings: Timings, run_set: str, column: str) -> list[str]:
    table = timings.table
    here = (table["set"].astype(str) == run_set) & (table["status"].astype(str) == "used")
    return [text for text in table.loc[here, column].astype(str) if text]
