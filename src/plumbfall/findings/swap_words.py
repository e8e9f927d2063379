"""A supposed exchange of balls, and what is said of it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.data import RunData
from plumbfall.findings.other_balls import FACTORS, Candidates
from plumbfall.results import Finding

__all__ = ["Swap", "SwapFit", "swap_finding"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]


@dataclass(frozen=True, slots=True)
class Swap:
    """A supposed exchange: what each drop's ln(viscosity) was shifted by, shape (drops,).

    ``truly`` is the candidate each drop is then taken for, -1 where it stays.
    """

    shift: Numbers
    truly: Codes


@dataclass(frozen=True, slots=True)
class SwapFit:
    """How well a supposed exchange explains a set: its probability by chance, and what is left."""

    swap: Swap
    p_value: float
    left: float


def swap_finding(
    data: RunData, drops: Codes, others: Candidates, best: SwapFit, alike: list[SwapFit]
) -> Finding:
    """Return the finding of the likeliest exchange; others as likely are named with it."""
    moved = np.flatnonzero(best.swap.truly >= 0)
    factor = others.factor[best.swap.truly[moved[0]]]
    said = [_said(data, drops, others, fit.swap) for fit in (best, *alike)]
    said = list(dict.fromkeys(said))
    ball = data.balls[data.selection.cells.ball[data.selection.cell[drops[moved[0]]]]].name
    size = 100 * float(np.abs(best.swap.shift).max())
    common: dict[str, Any] = {
        "drops": data.numbers(drops[moved]),
        "statistic": float(np.exp(best.swap.shift[moved[0]])),
        "p_value": best.p_value,
        "effect": _effect(data, drops, others, best.swap),
        "detectable": data.limits.swap_effect,
        "message": f"{', or '.join(said)}: that explains {size:.1f} % of viscosity, and the drops "
        "then agree",
    }
    slip = f"check [ball.{ball}] diameter and its unit"
    if factor == 2:
        return Finding(code="radius-as-diameter-suspected", severity="error", remedy=slip, **common)
    if factor != 1:
        return Finding(code="unit-slip-suspected", severity="warning", remedy=slip, **common)
    return Finding(
        code="swapped-ball-suspected",
        severity="warning",
        remedy="look into the record which ball it was, and measure it; correct the ball column, "
        "or mark the drops void and note the reason",
        **common,
    )


def _said(data: RunData, drops: Codes, others: Candidates, swap: Swap) -> str:
    moved = np.flatnonzero(swap.truly >= 0)
    own = data.selection.cells.ball[data.selection.cell[drops]]
    first = moved[0]
    name, truly = data.balls[own[first]].name, int(swap.truly[first])
    factor = float(others.factor[truly])
    if factor != 1:
        return (
            f"ball {name} looks as if its diameter were {factor:g} times as large (written "
            f"{FACTORS[factor]})"
        )
    other = data.balls[others.ball[truly]].name
    whole = [np.array_equal(np.flatnonzero(own == b), moved[own[moved] == b]) for b in
             np.unique(own[moved])]  # fmt: skip
    numbers = data.numbers(drops[moved])
    if len(np.unique(own[moved])) == 2:
        if all(whole):
            return f"balls {' and '.join(sorted((name, other)))} look exchanged"
        return (
            f"drops {numbers[0]} and {numbers[1]} look like each other's balls, {name} and {other}"
        )
    if all(whole):
        return f"ball {name} looks like ball {other}"
    return f"drop {numbers[0]} of ball {name} looks like ball {other}"


def _effect(data: RunData, drops: Codes, others: Candidates, swap: Swap) -> float:
    """Relative change of the set's viscosity if the drops are given their supposed balls."""
    own = data.selection.cells.ball[data.selection.cell[drops]]
    ball = np.where(swap.truly >= 0, others.ball[swap.truly], own)
    value = data.columns.at_set[drops] * np.exp(-swap.shift)
    if data.inputs.lot[data.selection.cell[drops]].any():
        mean = value.mean()
    else:
        _, code = np.unique(ball, return_inverse=True)
        mean = (np.bincount(code, weights=value) / np.bincount(code)).mean()
    return float(mean / data.scatter.mean[data.selection.run_set[drops[0]]] - 1)
