"""When a run set was measured, and by whom, from what its drops say."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterable

from plumbfall.timings.records import Timings

__all__ = ["day_of", "moment_of", "who_and_when"]


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


def who_and_when(timings: Timings) -> dict[str, tuple[str, str]]:
    """Return of every run set the last ``started`` of its used drops, and their operators.

    Empty where no drop has a date; operators in order of first appearance.
    """
    table = timings.table[timings.table["status"].astype(str) == "used"]
    columns = (table[name].astype(str) for name in ("set", "started", "operator"))
    of_sets: dict[str, tuple[dict[str, None], dict[str, None]]] = {}
    for run_set, started, operator in zip(*columns, strict=True):
        moments, names = of_sets.setdefault(run_set, ({}, {}))
        moments[started] = names[operator] = None
    return {
        run_set: (_last(moments), "; ".join(filter(None, names)))
        for run_set, (moments, names) in of_sets.items()
    }


def _last(texts: Iterable[str]) -> str:
    dated = [(moment, text) for text in texts if (moment := moment_of(text)) is not None]
    if not dated:
        return ""
    if len({moment.tzinfo is None for moment, _ in dated}) > 1:
        return dated[-1][1]  # moments with and without a zone have no order but the file's
    return max(dated)[1]
