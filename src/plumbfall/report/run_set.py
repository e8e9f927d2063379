"""One run set of a report, as a notebook handles it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from plumbfall.results import Finding, RunSetResult

if TYPE_CHECKING:
    import pandas as pd
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure
    from uncertainties import UFloat

    from plumbfall.report.report import Report

__all__ = ["RunSetView"]


@dataclass(frozen=True, eq=False)
class RunSetView:
    """One run set of a report; ``result`` holds all its numbers as plain records in SI units."""

    report: Report
    result: RunSetResult

    @property
    def name(self) -> str:
        """Name of the run set."""
        return self.result.name

    @property
    def status(self) -> str:
        """What the data are worth: ``valid``, ``valid-with-warnings`` or ``invalid``."""
        return self.result.status

    @property
    def summary(self) -> str:
        """Verdict, value, bounds, drops and warnings in one line."""
        return self.result.summary

    @property
    def viscosity(self) -> UFloat:
        """Viscosity in Pa.s, correlated with that of the report's other sets; NaN without one."""
        return self.report.numbers.number(self.name, "viscosity")

    @property
    def kinematic_viscosity(self) -> UFloat:
        """Kinematic viscosity in m2/s, correlated with all other results of the report."""
        return self.report.numbers.number(self.name, "kinematic_viscosity")

    @property
    def viscosity_at_reference(self) -> UFloat:
        """Viscosity in Pa.s at the reference temperature, correlated likewise; NaN without one."""
        return self.report.numbers.number(self.name, "viscosity_at_reference")

    @property
    def interval(self) -> tuple[float, float]:
        """Coverage interval of the viscosity in Pa.s; NaN where there is no viscosity."""
        return self.result.interval

    @property
    def findings(self) -> tuple[Finding, ...]:
        """What the reduction noticed, each with a remedy."""
        return self.result.findings

    def budget(self) -> pd.DataFrame:
        """Return the uncertainty budget, one row an input, SI units."""
        from plumbfall.report.tables import budget_table

        return budget_table(self.result)

    def halving(self) -> pd.DataFrame:
        """Return what change of each dominant input alone would halve the expanded uncertainty."""
        from plumbfall.report.tables import halving_table

        return halving_table(self.result)

    def drops(self) -> pd.DataFrame:
        """Return the drops, void and excluded ones included, units in the column names."""
        from plumbfall.report.tables import drops_table

        return drops_table([self.result])

    def plot(
        self, kind: str = "drops", ax: Axes | None = None, *, against: str | None = None
    ) -> Figure | Axes:
        """Draw a figure of this set; see :meth:`Report.plot` for the kinds."""
        return self.report.plot(kind, run_set=self.name, ax=ax, against=against)

    def __repr__(self) -> str:
        return f"<run set: {self.summary}>"

    def _repr_html_(self) -> str:
        from plumbfall.report.notebook import run_set_fragment

        return run_set_fragment(self)
