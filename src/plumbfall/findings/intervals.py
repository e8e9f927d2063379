"""Intervals between successive marks that do not agree, and what explains them best."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.records import Tube
from plumbfall.findings.data import Found, RunData
from plumbfall.findings.interval_fits import IntervalFit
from plumbfall.findings.least_squares import weighted_squares
from plumbfall.findings.significance import detectable
from plumbfall.results import Finding

__all__ = ["intervals_disagree"]

Numbers = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class _Cause:
    """One explanation: its pattern over the intervals, the words, and what it costs."""

    pattern: Numbers
    rest: float
    size: float
    error: float
    says: str
    remedy: str
    effect: float


def intervals_disagree(data: RunData) -> Iterator[Found]:
    """Find falls that are slower in one part of the tube than in another."""
    drops = data.interval_drops
    if drops is None:
        return
    fits = data.interval_fits
    for at in np.flatnonzero(fits.p_value < data.level):
        run_set, tube = int(drops.set_run[at]), data.tubes[drops.set_tube[at]]
        fit = fits.fits[int(at)]
        slope = float(data.warmth.slope[run_set])
        cause = _best(fit, tube, slope)
        seen = detectable(standard_error=cause.error, dof=fits.scatter_dof[at], level=data.level)
        parts = " / ".join(f"{100 * value:+.2f}" for value in fit.value)
        also = ""
        if abs(cause.effect) > 0:
            also = f", the viscosity is {100 * abs(cause.effect):.2f} % too "
            also += "high by that" if cause.effect > 0 else "low by that"
        yield (
            run_set,
            Finding(
                code="intervals-disagree",
                severity="warning",
                statistic=float(fits.f[at]),
                p_value=float(fits.p_value[at]),
                effect=-cause.effect or None,
                detectable=float(seen),
                message=f"the intervals of tube {tube.name} give different viscosities (from the "
                f"top {parts} % about their mean): {cause.says}{also}",
                remedy=cause.remedy,
            ),
        )


def _best(fit: IntervalFit, tube: Tube, slope: float) -> _Cause:
    """Return the simplest explanation that leaves the least between the intervals."""
    if len(fit.value) == 2:
        return _of_two(fit, tube, slope)
    return min(_causes(fit, tube, slope), key=lambda cause: cause.rest)


def _of_two(fit: IntervalFit, tube: Tube, slope: float) -> _Cause:
    """Name every cause that may be: two intervals show no more than that they differ."""
    above = float(fit.value[0] - fit.value[1])
    contrast = np.array([1.0, -1.0])
    error = float(np.sqrt(contrast @ fit.covariance @ contrast))
    marks = np.array([mark.value for mark in tube.marks])
    upper, lower = np.diff(marks)
    out = above * upper * lower / (upper + lower)
    slow = (
        "the ball still gains speed, or is colder than the liquid, at the first mark"
        if above > 0
        else "the bottom, or what lies on it, is felt at the last mark"
    )
    warm = ""
    if slope:
        warm = f" (by {abs(above / slope):.2g} K from the one interval to the other)"
    return _Cause(
        pattern=contrast, rest=0.0, size=above, error=error,
        says=f"the upper interval gives {100 * abs(above):.2f} % {'more' if above > 0 else 'less'} "
        f"than the lower one; either {slow}, or the liquid's temperature changes with depth{warm}, "
        f"or mark 2 is given {1000 * abs(out):.2f} mm too far {'down' if above < 0 else 'up'}; if "
        "the first of these",
        remedy=(
            "let the ball go higher above the first mark"
            if above > 0
            else "keep the last mark higher above the bottom, take out the balls that lie there"
        )
        + f"; read the temperature at both ends; measure mark 2 of [tube.{tube.name}] again; a "
        "further mark would tell which it is",
        effect=float(abs(above) * (upper if above > 0 else lower) / (upper + lower)),
    )  # fmt: skip


def _causes(fit: IntervalFit, tube: Tube, slope: float) -> Iterator[_Cause]:
    k = len(fit.value)
    marks = np.array([mark.value for mark in tube.marks])
    lengths = np.diff(marks)
    share = lengths / lengths.sum()
    inverse: Numbers = np.asarray(np.linalg.inv(fit.covariance)[None], dtype=float)

    def fitted(pattern: Numbers) -> tuple[float, float, float]:
        rest, size, error = weighted_squares(
            inverse, fit.value[None], [np.ones((1, k))], pattern[None]
        )
        return float(rest[0]), float(size[0]), float(error[0])

    first, last = np.eye(k)[0], np.eye(k)[-1]
    rest, size, error = fitted(first)
    if size > 0:
        yield _Cause(
            first, rest, size, error,
            f"the first one takes {100 * size:.2f} % longer than the others, as if the ball were "
            "still gaining speed, or colder than the liquid, at the first mark",
            "let the ball go higher above the first mark, and keep the balls in the bath",
            size * float(share[0]),
        )  # fmt: skip
    rest, size, error = fitted(last)
    if size > 0:
        yield _Cause(
            last, rest, size, error,
            f"the last one takes {100 * size:.2f} % longer than the others, as if the bottom, or "
            "what lies on it, were felt there",
            "keep the last mark higher above the bottom, and take out the balls that lie there",
            size * float(share[-1]),
        )  # fmt: skip
    middle = (marks[1:] + marks[:-1]) / 2
    depth = (middle - middle.mean()) / np.ptp(marks)
    rest, size, error = fitted(depth)
    warm = ""
    if slope:
        colder = "colder" if size * slope < 0 else "warmer"
        warm = f" ({abs(size / slope):.2g} K {colder} at the bottom would do it)"
    yield _Cause(
        depth, rest, size, error,
        f"it {'rises' if size > 0 else 'falls'} downwards, by {100 * abs(size):.2f} % from the "
        f"first mark to the last, as in a liquid whose temperature or make-up changes with depth"
        f"{warm}",
        "stir or wait until the liquid is even, and read the temperature at both ends of the tube",
        0.0,
    )  # fmt: skip
    for mark in range(1, k):
        pattern = np.zeros(k)
        pattern[mark - 1], pattern[mark] = -1 / lengths[mark - 1], 1 / lengths[mark]
        rest, size, error = fitted(pattern)
        yield _Cause(
            pattern, rest, size, error * float(np.ptp(pattern)),
            f"mark {mark + 1} looks {1000 * abs(size):.2f} mm too far "
            f"{'up' if size < 0 else 'down'} in the bench sheet, or is read "
            f"{'late' if size < 0 else 'early'}; the result runs from the first mark to the last "
            "and is not touched by it",
            f"measure mark {mark + 1} of [tube.{tube.name}] again",
            0.0,
        )  # fmt: skip
