"""What a reduction gives: every run set's results, as records when somebody looks at them."""

from __future__ import annotations

import dataclasses
from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np

from plumbfall.bench.records import Bench
from plumbfall.findings.data import RunData
from plumbfall.findings.limits import limits_from
from plumbfall.findings.reach import reach_of
from plumbfall.results import Finding, RunSetResult, TemperatureFitResult
from plumbfall.run_sets.drawn import Drawn
from plumbfall.run_sets.joint import Joint, joint_results
from plumbfall.run_sets.result import SetColumns, build_result
from plumbfall.run_sets.second_order import second_order_of
from plumbfall.run_sets.table import summary_table
from plumbfall.run_sets.temperature_fit_result import fit_result
from plumbfall.timings.records import Timings

if TYPE_CHECKING:
    import pandas as pd
    from numpy.typing import NDArray

from plumbfall.reduction.groups import grouped
from plumbfall.reduction.numbers import run_data

__all__ = ["Reduction"]


@dataclass(frozen=True)
class Reduction:
    """Every run set's results in columns; a run set's record is built when it is asked for.

    ``found`` holds the findings by run set, ``inputs`` the files with their hashes,
    ``drawn`` what Monte Carlo says of those that were drawn, by their place.
    """

    sets: SetColumns
    found: tuple[tuple[Finding, ...], ...]
    coverage: float
    seed: int
    inputs: tuple[tuple[str, str], ...]
    findings: tuple[Finding, ...] = ()
    drawn: Mapping[int, Drawn] = field(default_factory=dict)

    @property
    def bench(self) -> Bench:
        """The bench sheet."""
        return self.sets.bench

    @property
    def timings(self) -> Timings:
        """The drops as read, those excluded by a rule marked so."""
        return self.sets.timings

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the run sets, in order of first appearance."""
        return self.sets.selection.names

    @cached_property
    def rows(self) -> Mapping[str, int]:
        """Rows read, and how many of them were used, void and excluded."""
        status = self.timings.table["status"].astype(str)
        counts = {name: int((status == name).sum()) for name in ("used", "void", "excluded")}
        return {"read": len(status), **counts}

    def run_set(self, name: str) -> RunSetResult:
        """Return one run set's record, built once."""
        if name not in self._built:
            place = self._place[name]
            used = self._used_by_set[place]
            built = build_result(
                self.sets,
                place,
                used,
                self._rows_by_set[place],
                self.found[place],
                self.drawn.get(place),
            )
            terms = second_order_of(self.sets, place, used, built.budget)
            self._built[name] = dataclasses.replace(
                built, second_order=terms, reach=reach_of(self._data, place)
            )
        return self._built[name]

    def summary_table(self) -> pd.DataFrame:
        """Return one row a run set, numeric, units in the column names (INTERFACE section 6)."""
        return summary_table(self.sets, self.found, self.drawn)

    def covariance(self, quantity: str = "viscosity") -> NDArray[np.float64]:
        """Covariance of the run sets' values of a quantity; NaN where a set has none."""
        covariance = self.sets.outputs.covariance(quantity)
        missing = ~np.isfinite(self.sets.outputs.of(quantity).value)
        covariance[missing] = np.nan
        covariance[:, missing] = np.nan
        return covariance

    def correlation(self) -> NDArray[np.float64]:
        """Correlation of the run sets' viscosities; NaN where a set has none."""
        covariance = self.covariance()
        u = np.sqrt(np.diag(covariance))
        with np.errstate(invalid="ignore", divide="ignore"):
            correlation: NDArray[np.float64] = covariance / np.outer(u, u)
        np.fill_diagonal(correlation, np.where(np.isnan(u), np.nan, 1.0))
        return correlation

    @cached_property
    def joint(self) -> Joint:
        """All quantities of all run sets with what each input contributes to each."""
        return joint_results(
            self.sets.outputs,
            self.sets.jacobian,
            self.sets.inputs,
            self.names,
            self.bench.balls,
        )

    @cached_property
    def temperature_fits(self) -> tuple[TemperatureFitResult, ...]:
        """Temperature laws fitted to the run sets, one a liquid; empty where none was asked for."""
        return tuple(
            fit_result(fit, self.sets.jacobian, self.names, self.bench, self.coverage)
            for fit in self.sets.fits
        )

    @cached_property
    def _place(self) -> dict[str, int]:
        return {name: place for place, name in enumerate(self.names)}

    @cached_property
    def _data(self) -> RunData:
        return run_data(self.sets, limits_from(self.bench.limits, self.bench.path))

    @cached_property
    def _built(self) -> dict[str, RunSetResult]:
        return {}

    @cached_property
    def _used_by_set(self) -> list[NDArray[np.intp]]:
        return grouped(self.sets.selection.run_set, len(self.names))

    @cached_property
    def _rows_by_set(self) -> list[NDArray[np.intp]]:
        return grouped(self.sets.selection.row_set, len(self.names))
