"""From paths, dicts, tables or a report to a check, a comparison or a control chart."""

from __future__ import annotations

import datetime as dt
import hashlib
import json
import os
from collections.abc import Sequence
from typing import Any

from plumbfall.bench.notation import read_quantity
from plumbfall.calibration.chart import control_chart
from plumbfall.calibration.check import check_run_sets
from plumbfall.calibration.compare import compare_run_sets
from plumbfall.calibration.history import append_history, history_line
from plumbfall.calibration.history_lines import read_history
from plumbfall.errors import InputError
from plumbfall.measurement.constants import constant_files
from plumbfall.reduction.reduced import Reduction
from plumbfall.report.chart_report import ChartReport
from plumbfall.report.check_report import CheckReport
from plumbfall.report.compare_report import ComparisonReport
from plumbfall.report.report import Report
from plumbfall.workflow import BenchSource, TimingSource, reduce

__all__ = ["chart", "check", "compare"]

Source = TimingSource | Report


def check(
    timings: Source,
    bench: BenchSource | None = None,
    *,
    reference: str,
    tolerance: str | float | None = None,
    history: str | os.PathLike[str] | None = None,
    date: str | dt.date | None = None,
    coverage: float | None = None,
    encoding: str | None = None,
) -> CheckReport:
    """Check run sets against a certified liquid: bias, scores, and a decision with its reason.

    Parameters
    ----------
    timings : path, list of paths, DataFrame, dict of columns, Timings or Report
        Timed drops of the certified liquid, or a report of them.
    bench : path, dict or Bench, optional
        The bench sheet; ``bench.toml`` beside the timing file where not given.
    reference : str
        Name of the ``[reference.NAME]`` entry.
    tolerance : str or float, optional
        Largest bias allowed, such as ``"0.5 %"``, or as a ratio. Passed where the bias lies within
        it with a probability of at least 95 %, failed where of at most 5 %, else undecided.
        Without it, passed where E_n is within 1.
    history : path, optional
        CSV to append the checks to; those it has already are left alone.
    date : str or date, optional
        When the drops were made, such as ``"2026-03-02"``, where they do not say.
    coverage : float, optional
        Coverage probability of the bounds.
    encoding : str, optional
        Encoding of the timing files where they are not UTF-8.

    Returns
    -------
    CheckReport
        One check a run set, and the gravest decision.

    Raises
    ------
    InputError
        With everything wrong with the inputs; nothing has then been written.
    """
    reduction = _reduced(timings, bench, coverage, encoding)
    checks = check_run_sets(
        reduction,
        reference,
        tolerance=None if tolerance is None else _ratio(tolerance, "tolerance"),
        date=_date(date),
    )
    appended = None
    if history is not None:
        digest = _digest(reduction)
        appended = append_history(history, [history_line(one, digest) for one in checks])
    return CheckReport(
        checks=checks,
        bench=reduction.bench,
        inputs=reduction.inputs,
        passed_over=tuple(
            name for name in reduction.names if name not in {one.run_set for one in checks}
        ),
        appended=appended,
    )


def compare(
    timings: Source,
    bench: BenchSource | None = None,
    *,
    sets: Sequence[str],
    margin: str | float | None = None,
    coverage: float | None = None,
    encoding: str | None = None,
) -> ComparisonReport:
    """Compare two run sets: ratio and difference, the errors that they share cancelled.

    Parameters
    ----------
    timings : path, list of paths, DataFrame, dict of columns, Timings or Report
        Timed drops of both sets, or a report of them.
    bench : path, dict or Bench, optional
        The bench sheet; ``bench.toml`` beside the timing file where not given.
    sets : two str
        Names of the run sets; the first is divided by the second.
    margin : str or float, optional
        How far the ratio may be off 1, such as ``"1 %"``, for the two to count as equal.
    coverage : float, optional
        Coverage probability of the bounds.
    encoding : str, optional
        Encoding of the timing files where they are not UTF-8.

    Returns
    -------
    ComparisonReport
        Ratio, difference and correlation, the tests of difference and equivalence, and what
        repeatability explains.

    Raises
    ------
    InputError
        With everything wrong with the inputs.
    """
    reduction = _reduced(timings, bench, coverage, encoding)
    ratio = None if margin is None else _ratio(margin, "margin")
    return ComparisonReport(compare_run_sets(reduction, sets, margin=ratio), reduction.bench)


def chart(
    history: str | os.PathLike[str],
    *,
    reference: str | None = None,
    baseline: int | None = None,
) -> ChartReport:
    """Draw the control chart of a history of checks.

    Parameters
    ----------
    history : path
        The CSV that ``check`` appended to.
    reference : str, optional
        Chart the checks of this reference liquid alone.
    baseline : int, optional
        Take the limits from the first so many checks.

    Returns
    -------
    ChartReport
        Limits, points with their signals, moving average and drift.

    Raises
    ------
    InputError
        Where the file is no history of checks, or has fewer than two.
    """
    lines = read_history(history)
    return ChartReport(
        control_chart(lines, reference=reference, baseline=baseline, path=os.fspath(history))
    )


def _reduced(
    timings: Source, bench: BenchSource | None, coverage: float | None, encoding: str | None
) -> Reduction:
    """Reduce without draws: what two values share is propagated linearly."""
    if not isinstance(timings, Report):
        timings = reduce(timings, bench, draws=0, coverage=coverage, encoding=encoding)
    reduced = timings.reduced
    if not isinstance(reduced, Reduction):
        raise InputError(
            "this report was not made by a reduction", remedy="give the timings themselves"
        )
    return reduced


def _ratio(given: str | float, name: str) -> float:
    """Read a ratio above 0: text with its unit, or a plain number from Python."""
    if isinstance(given, str):
        read = read_quantity(given, "ratio")
        if read.u > 0:
            raise InputError(
                f"a {name} of {given} has an uncertainty", key=name, remedy="write such as 0.5 %"
            )
        found = read.value
    else:
        found = float(given)
    if not 0 < found < 1:
        raise InputError(
            f"a {name} of {given} is not between 0 and 1", key=name, remedy="write such as 0.5 %"
        )
    return found


def _date(given: str | dt.date | None) -> dt.date | None:
    if given is None or isinstance(given, dt.date):
        return given
    try:
        return dt.date.fromisoformat(given)
    except ValueError:
        raise InputError(
            f"'{given}' is no date", key="date", remedy="write such as 2026-03-02"
        ) from None


def _digest(reduction: Reduction) -> str:
    """Return one SHA-256 of all inputs: timings, bench sheet and files of constants."""
    timings, bench = reduction.timings, reduction.bench
    parts = [file.sha256 for file in timings.files]
    if not parts:
        parts.append(_sha256(timings.table.to_csv()))
    parts.append(bench.sha256 or _sha256(json.dumps(_plain(bench.source), sort_keys=True)))
    parts += [file.sha256 for file in constant_files(bench).values()]
    return _sha256("\n".join(sorted(parts)))


def _plain(source: Any) -> Any:
    if hasattr(source, "items"):
        return {str(key): _plain(value) for key, value in source.items()}
    if isinstance(source, list | tuple):
        return [_plain(value) for value in source]
    return str(source)


def _sha256(text: str) -> str:
    return hashlib.sha256(text.encode("utf-8")).hexdigest()
