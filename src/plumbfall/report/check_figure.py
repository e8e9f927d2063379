"""The bias of run sets against a certified liquid, with bounds."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from plumbfall.calibration.check import CheckResult
from plumbfall.calibration.verdict import FAILED, PASSED
from plumbfall.errors import InputError
from plumbfall.report.house_style import COLOURS, house_style, legend_above, short_name
from plumbfall.uncertainty.coverage import coverage_factor

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["draw_checks"]

SHAPES = {PASSED: ("petrol", "o"), FAILED: ("plum", "X")}
UNDECIDED_SHAPE = ("amber", "D")


def draw_checks(checks: Sequence[CheckResult], ax: Axes) -> Axes:
    """Draw each run set's bias in percent with its expanded uncertainty, and the tolerance.

    Raises
    ------
    InputError
        Where no run set has a bias.
    """
    shown = [check for check in checks if check.bias is not None]
    if not shown:
        raise InputError("no run set has a bias to draw", remedy="mend the data first")
    with house_style():
        tolerance = shown[0].tolerance
        if tolerance is not None:
            ax.axvspan(
                -100 * tolerance, 100 * tolerance, color=COLOURS["rule"], lw=0, label="tolerance"
            )
        ax.axvline(0.0, color=COLOURS["muted"], lw=0.8)
        seen = set()
        for place, check in enumerate(shown):
            assert check.bias is not None
            colour, shape = SHAPES.get(check.decision, UNDECIDED_SHAPE)
            probability = 0.95 if check.measured is None else check.measured.coverage_probability
            factor = float(coverage_factor(dof=check.bias_dof, probability=probability))
            ax.errorbar(
                100 * check.bias.value,
                place,
                xerr=100 * factor * check.bias.u,
                fmt=shape,
                ms=5,
                capsize=3,
                lw=1.2,
                color=COLOURS[colour],
                label=None if check.decision in seen else check.decision,
            )
            seen.add(check.decision)
        names = [short_name(check.run_set, 24) for check in shown]
        ax.set_yticks(range(len(shown)), names, parse_math=False)
        ax.set_ylim(len(shown) - 0.5, -0.5)
        ax.set_xlabel("Bias with its expanded uncertainty / %")
        legend_above(ax)
    return ax
