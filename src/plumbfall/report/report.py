"""The report: what a reduction gave, as numbers to work with, pages to read, files to keep."""

from __future__ import annotations

import dataclasses
import datetime as dt
import os
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, Any

from plumbfall.calibration.conformity import conformity
from plumbfall.errors import InputError, Problem, nearest_name
from plumbfall.report.reduced import Reduced
from plumbfall.report.run_set import RunSetView
from plumbfall.report.summary import summary_line, visible
from plumbfall.results import Finding, TemperatureFitResult

if TYPE_CHECKING:
    import numpy as np
    import pandas as pd
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure
    from numpy.typing import NDArray
    from uncertainties import UFloat

    from plumbfall.bench.records import Bench
    from plumbfall.report.correlated import CorrelatedNumbers
    from plumbfall.timings.records import Timings

__all__ = ["Reduced", "Report", "UnknownRunSetError"]


class UnknownRunSetError(InputError, KeyError):
    """No run set has the name that was asked for."""

    def __str__(self) -> str:
        return str(self.first)


@dataclass(frozen=True, eq=False)
class Report:
    """Viscosities of run sets with their bounds, and everything that led to them.

    ``report["A"]`` is a run set, ``len(report)`` their number, and iterating gives one after
    the other. Files are written whole or not at all, and are the same byte for byte for the same
    inputs, seed and version.
    """

    reduced: Reduced
    date: dt.date | None = None
    """Day of the report as given; never taken from the clock."""

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the run sets, in order."""
        return self.reduced.names

    @property
    def rows(self) -> Mapping[str, int]:
        """Rows ``read``, ``used``, ``void`` and ``excluded``; the last three make up the first."""
        return self.reduced.rows

    @property
    def inputs(self) -> tuple[tuple[str, str], ...]:
        """Path as typed and SHA-256 of every input file."""
        return self.reduced.inputs

    @property
    def coverage(self) -> float:
        """Coverage probability of the intervals."""
        return self.reduced.coverage

    @property
    def seed(self) -> int:
        """Seed of the random numbers."""
        return self.reduced.seed

    @property
    def bench(self) -> Bench:
        """The bench sheet that was used."""
        return self.reduced.bench

    @property
    def timings(self) -> Timings:
        """The drops as they were read."""
        return self.reduced.timings

    @property
    def findings(self) -> tuple[Finding, ...]:
        """Findings that concern more than one run set."""
        return self.reduced.findings

    @property
    def temperature_fits(self) -> tuple[TemperatureFitResult, ...]:
        """Temperature laws fitted to the run sets, one a liquid; empty without ``slope``."""
        return self.reduced.temperature_fits

    def __len__(self) -> int:
        return len(self.names)

    def __iter__(self) -> Iterator[RunSetView]:
        return (self[name] for name in self.names)

    def __contains__(self, name: object) -> bool:
        return name in self._known

    def __getitem__(self, name: str) -> RunSetView:
        if name not in self._known:
            near = nearest_name(name, self.names) if isinstance(name, str) else None
            known = ", ".join(visible(known) for known in self.names[:10])
            more = f" and {len(self) - 10} more" if len(self) > 10 else ""
            raise UnknownRunSetError(
                Problem(
                    f"there is no run set named {name!r}",
                    f"did you mean {near!r}?" if near else f"the run sets are: {known}{more}",
                )
            )
        if name not in self._views:
            result = self.reduced.run_set(name)
            result = dataclasses.replace(
                result,
                summary=summary_line(result, self.bench.viscosity_unit),
                conformity=conformity(result, self.bench.liquids.get(result.liquid)),
            )
            self._views[name] = RunSetView(self, result)
        return self._views[name]

    def __repr__(self) -> str:
        return f"<report of {len(self)} run sets: {', '.join(map(visible, self.names[:5]))}>"

    def _ipython_key_completions_(self) -> list[str]:
        return list(self.names)

    def table(self) -> pd.DataFrame:
        """Return the columns of ``run_sets.csv``: one row a run set, units in the names."""
        return self.reduced.summary_table().copy()

    def covariance(self, quantity: str = "viscosity") -> NDArray[np.float64]:
        """Return covariances of the sets, shape (sets, sets), in (Pa.s)2."""
        return self.reduced.covariance(quantity)

    def correlation(self) -> NDArray[np.float64]:
        """Return correlations of the sets' viscosities, shape (sets, sets)."""
        return self.reduced.correlation()

    @cached_property
    def viscosities(self) -> Mapping[str, UFloat]:
        """Every set's viscosity in Pa.s as correlated ufloats; NaN where there is none."""
        return {name: self.numbers.number(name, "viscosity") for name in self.names}

    @cached_property
    def numbers(self) -> CorrelatedNumbers:
        """All quantities of all sets as ufloats of one family; see :class:`RunSetView`."""
        from plumbfall.report.correlated import CorrelatedNumbers

        return CorrelatedNumbers(self.reduced.joint)

    def joint_covariance(self) -> pd.DataFrame:
        """Return the covariance of all quantities of all sets, SI units (JCGM 102).

        Rows and columns are pairs of set and quantity; a quantity without a value is missing.
        """
        import pandas as pd

        joint = self.reduced.joint
        labels = pd.MultiIndex.from_tuples(list(joint.places), names=["set", "quantity"])
        return pd.DataFrame(joint.covariance, index=labels, columns=labels)

    def to_dict(self) -> dict[str, Any]:
        """Return the document of the schema ``plumbfall/report/1``: SI units, full precision."""
        from plumbfall.report.json_report import report_document

        return report_document(self)

    def to_json(self, path: str | os.PathLike[str] | None = None) -> str:
        """Return the document as JSON text, and write it to a file if one is named."""
        from plumbfall.report.json_report import json_text
        from plumbfall.report.writing import write_file

        text = json_text(self.to_dict())
        if path is not None:
            write_file(path, text.encode("ascii"))
        return text

    def to_html(self, path: str | os.PathLike[str] | None = None) -> str:
        """Return the report as one self-contained page, and write it if a file is named."""
        from plumbfall.report.html import page
        from plumbfall.report.writing import write_file

        text = page(self)
        if path is not None:
            write_file(path, text.encode("utf-8"))
        return text

    def to_pdf(self, path: str | os.PathLike[str]) -> None:
        """Write the page as PDF, printed by an installed Chromium.

        Raises
        ------
        InputError
            Where no Chromium is found, or the file cannot be written.
        """
        from plumbfall.report.browser import pdf_of
        from plumbfall.report.writing import write_file

        write_file(path, pdf_of(self.to_html()))

    def to_csv(self, folder: str | os.PathLike[str]) -> None:
        """Write ``run_sets.csv`` and ``drops.csv`` into a folder, both or none."""
        from plumbfall.report.writing import write_folder

        write_folder(folder, self._csv_files())

    def write(
        self,
        folder: str | os.PathLike[str],
        *,
        pdf: bool = False,
        progress: Callable[[int, int], None] | None = None,
    ) -> None:
        """Write report.html, report.json, run_sets.csv and drops.csv, all of them or none.

        With ``pdf`` also report.pdf, printed by an installed Chromium. ``progress`` is called with
        the run sets laid out so far and how many there are.

        Raises
        ------
        InputError
            If they cannot be written there; the folder then is as it was.
        """
        from plumbfall.report.html import page as laid_out
        from plumbfall.report.writing import write_folder

        page = laid_out(self, progress)
        files = {
            "report.html": page.encode("utf-8"),
            "report.json": self.to_json().encode("ascii"),
        }
        if pdf:
            from plumbfall.report.browser import pdf_of

            files["report.pdf"] = pdf_of(page)
        write_folder(folder, files | self._csv_files())

    def plot(
        self,
        kind: str = "drops",
        run_set: str | None = None,
        ax: Axes | None = None,
        *,
        against: str | None = None,
    ) -> Figure | Axes:
        """Draw a figure of the report; save it with ``.savefig("name.png")``, ``.svg`` or ``.pdf``.

        Parameters
        ----------
        kind : str
            ``drops`` in order with scatter and bounds, ``budget`` of the uncertainty, ``draws`` of
            Monte Carlo, ``residuals`` against temperature, diameter ratio and Reynolds number,
            ``intervals`` between three or more marks; or all ``sets`` beside each other, or on the
            ``map`` of the drag factor.
        run_set : str, optional
            Name of the set; without it the sets are drawn one below the other, or together.
        ax : Axes, optional
            Where to draw one set; without it a Figure is made.
        against : str, optional
            For residuals: ``temperature``, ``diameter_ratio`` or ``reynolds`` alone.

        Returns
        -------
        Figure or Axes
            The Axes that were given, else a new Figure.

        Raises
        ------
        InputError
            If the kind or the set is unknown, or if one place is given for several panels.
        """
        from plumbfall.report.figures import draw

        views = tuple(self) if run_set is None else (self[run_set],)
        results = [view.result for view in views]
        return draw(kind, results, self.bench.viscosity_unit, ax, against)

    def text(self) -> str:
        """Return the report as plain text, 80 columns wide."""
        from plumbfall.report.text import plain_text

        return plain_text(self)

    def _repr_html_(self) -> str:
        from plumbfall.report.notebook import report_fragment

        return report_fragment(self)

    @cached_property
    def _known(self) -> frozenset[str]:
        return frozenset(self.names)

    @cached_property
    def _views(self) -> dict[str, RunSetView]:
        return {}

    def _csv_files(self) -> dict[str, bytes]:
        from plumbfall.report.tables import csv_text, drops_table

        drops = drops_table(view.result for view in self)
        return {
            "run_sets.csv": csv_text(self.table()).encode("utf-8", "backslashreplace"),
            "drops.csv": csv_text(drops).encode("utf-8", "backslashreplace"),
        }
