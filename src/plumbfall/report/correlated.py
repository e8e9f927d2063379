"""The report's results as numbers with uncertainty that know what they share."""

from __future__ import annotations

import math
import warnings
from typing import TYPE_CHECKING

from plumbfall.run_sets.joint import Joint

if TYPE_CHECKING:
    from uncertainties import UFloat

__all__ = ["CorrelatedNumbers"]


class CorrelatedNumbers:
    """Results as ufloats, made when asked for, from one variable an input.

    A variable stands for an input's error in units of its standard uncertainty, its tag being the
    key path, so that ``number.error_components()`` is the budget. Copied or pickled alone numbers
    lose their correlation; pickled together, as in their report, they keep it.
    """

    def __init__(self, joint: Joint) -> None:
        self._joint = joint
        self._variables: dict[int, UFloat] = {}
        self._made: dict[tuple[str, str], UFloat] = {}

    def number(self, run_set: str, quantity: str) -> UFloat:
        """Return a quantity of a run set in its SI unit; NaN where it has no value."""
        key = (run_set, quantity)
        if key not in self._made:
            with warnings.catch_warnings():
                # an exact value has no spread, which is no mistake
                warnings.filterwarnings("ignore", message=".*std_dev==0.*")
                self._made[key] = self._number(self._joint.places.get(key))
        return self._made[key]

    def _number(self, place: int | None) -> UFloat:
        from uncertainties import ufloat

        if place is None:
            return ufloat(math.nan, math.nan)
        value = ufloat(float(self._joint.values[place]), 0.0)
        for column, contribution in self._joint.row(place).items():
            if column not in self._variables:
                self._variables[column] = ufloat(0.0, 1.0, tag=self._joint.inputs[column])
            value = value + contribution * self._variables[column]
        return value
