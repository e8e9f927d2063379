"""The one line that says what a run set gave."""

from __future__ import annotations

from plumbfall.report.scales import CELSIUS, viscosity_scale
from plumbfall.results import Measured, RunSetResult

__all__ = ["basis", "counted", "is_apparent", "percent", "summary_line", "visible", "way"]


def summary_line(result: RunSetResult, viscosity_unit: str | None = None) -> str:
    """Return verdict, name, value with bounds, temperature, drops, balls and warnings of a set.

    Parameters
    ----------
    result : RunSetResult
        The run set; its own ``summary`` is not read.
    viscosity_unit : str, optional
        Unit of the value; by its size if not given.

    Returns
    -------
    str
        Such as ``valid  batch 118  851.3 ± 4.2 mPa.s (k=2.0, 95 %) at 25.00 degC  8 of 8 drops,
        4 balls  0 warnings``, parts two spaces apart, control characters of the name spelled out.
    """
    parts = [result.status, visible(result.name)]
    if result.viscosity is None:
        parts.append("no viscosity")
    else:
        scale = viscosity_scale(result.viscosity.value, viscosity_unit)
        pair = scale.pair(result.viscosity.value, result.viscosity.expanded)
        value = f"{pair.plus_minus} {scale.unit} ({basis(result.viscosity)})"
        if result.temperature is not None:
            value += f" at {CELSIUS.fixed(result.temperature.value, 2)} degC"
        parts.append(f"apparent viscosity {value}" if is_apparent(result) else value)
    drops = f"{result.n_drops} of {counted(result.n_read, 'drop')}"
    parts.append(f"{drops}, {counted(result.n_balls, 'ball')}")
    if errors := [visible(f.code) for f in result.findings if f.severity == "error"]:
        parts.append(f"{counted(len(errors), 'error')} ({', '.join(dict.fromkeys(errors))})")
    parts.append(counted(result.count("warning"), "warning"))
    return "  ".join(parts)


def basis(measured: Measured) -> str:
    """Return how an expanded uncertainty came about: ``k=2.0, 95 %`` or ``Monte Carlo, 95 %``."""
    return f"{way(measured)}, {percent(measured.coverage_probability)}"


def way(measured: Measured) -> str:
    """Return the coverage factor as ``k=2.0``, or ``Monte Carlo`` where there is none."""
    if measured.coverage_factor is None:
        return "Monte Carlo"
    return f"k={measured.coverage_factor:.1f}"


def percent(probability: float) -> str:
    """Return a probability as a percentage, with no digits that say nothing."""
    return f"{100.0 * probability:.6g} %"


def counted(number: int, noun: str) -> str:
    """Return ``1 drop``, ``2 drops``."""
    return f"{number} {noun}" if number == 1 else f"{number} {noun}s"


def is_apparent(result: RunSetResult) -> bool:
    """Whether the viscosity changes with shear, so that the value is an apparent viscosity."""
    return any(finding.code == "shear-dependence" for finding in result.findings)


def visible(text: str) -> str:
    r"""Spell out characters that would act on a terminal or a page rather than show.

    Examples
    --------
    >>> visible("batch\x1b[2J")
    'batch\\x1b[2J'
    """
    if text.isprintable():
        return text
    return "".join(
        c if c.isprintable() or c == "\u00a0" else c.encode("unicode_escape").decode("ascii")
        for c in text
    )
