"""What a report asks of a reduction."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING, Protocol

from plumbfall.results import Finding, RunSetResult, TemperatureFitResult

if TYPE_CHECKING:
    import numpy as np
    import pandas as pd
    from numpy.typing import NDArray

    from plumbfall.bench.records import Bench
    from plumbfall.run_sets.joint import Joint
    from plumbfall.timings.records import Timings

__all__ = ["Reduced"]


class Reduced(Protocol):
    """What a report is made from. Run sets are built when asked for; columns come at once."""

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the run sets, in order."""

    @property
    def rows(self) -> Mapping[str, int]:
        """How many rows were ``read``, ``used``, ``void`` and ``excluded``."""

    @property
    def inputs(self) -> tuple[tuple[str, str], ...]:
        """Path as typed and SHA-256 of every input file."""

    @property
    def coverage(self) -> float:
        """Coverage probability of the intervals."""

    @property
    def seed(self) -> int:
        """Seed of the random numbers."""

    @property
    def bench(self) -> Bench:
        """The bench sheet."""

    @property
    def timings(self) -> Timings:
        """The drops as read."""

    @property
    def findings(self) -> tuple[Finding, ...]:
        """Findings that concern more than one run set."""

    @property
    def temperature_fits(self) -> tuple[TemperatureFitResult, ...]:
        """Temperature laws fitted to the run sets, one a liquid."""

    @property
    def joint(self) -> Joint:
        """All quantities of all run sets with what each input contributes to each."""

    def run_set(self, name: str) -> RunSetResult:
        """Return one run set; ``name`` is one of :attr:`names`."""

    def summary_table(self) -> pd.DataFrame:
        """Return the columns of ``run_sets.csv``, one row a run set, in the order of the names."""

    def covariance(self, quantity: str = "viscosity") -> NDArray[np.float64]:
        """Return covariances of the sets, shape (sets, sets), (Pa.s)2; NaN without a value."""

    def correlation(self) -> NDArray[np.float64]:
        """Return correlations of the sets' viscosities, shape (sets, sets); NaN likewise."""
