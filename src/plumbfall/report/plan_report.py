"""A plan as users see it: text, table, page, drawing, document."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from os import PathLike
from typing import TYPE_CHECKING, Any

from plumbfall.planning.asked import Amount, BenchSource, plan_bench, viscosities_of
from plumbfall.planning.catalogue import GRADE
from plumbfall.planning.combination import Combination
from plumbfall.planning.plan import Plan
from plumbfall.planning.wanted import DROPS, LONGEST, MOST_DROPS
from plumbfall.report.plan_json import plan_document
from plumbfall.report.plan_text import plan_text
from plumbfall.report.writing import write_file, write_folder

if TYPE_CHECKING:
    import pandas as pd
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["PlanReport", "plan"]


def plan(
    bench: BenchSource,
    *,
    viscosity: Amount | Iterable[Amount],
    target: Amount | None = None,
    drops: int = DROPS,
    most_drops: int = MOST_DROPS,
    longest: Amount = LONGEST,
    coverage: float | None = None,
    run_set: str | None = None,
    liquid: str | None = None,
    timer: str | None = None,
    thermometer: str | None = None,
    temperature: Amount | None = None,
    tubes: str | Sequence[str] | None = None,
    balls: str | Sequence[str] | None = None,
    grade: str = GRADE,
) -> PlanReport:
    """Plan a measurement: which of the balls and tubes will reach the wanted uncertainty.

    Parameters
    ----------
    bench : path, dict or Bench
        The bench sheet.
    viscosity : float [Pa.s], str, or several of them
        Expected viscosity, such as ``"0.5 Pa.s"``; of two, the range from one to the other.
    target : float or str, optional
        Wanted relative expanded uncertainty, such as ``0.005`` or ``"0.5 %"``.
    drops, most_drops : int
        Drops of a run set, and the most that are made to reach the target.
    longest : float [s] or str
        Longest fall time, such as ``"30 min"``.
    coverage : float, optional
        Coverage probability; that of the bench sheet where not given.
    run_set : str, optional
        Run set whose entry in the bench sheet says what is not given here.
    liquid, timer, thermometer : str, optional
        Which one, where the bench has several.
    temperature : float [K] or str, optional
        Of the liquid; by default that of the run set's entry, else the reference temperature, else
        that of the liquid's density, else 20 degC.
    tubes, balls : str or list of str, optional
        Only these. ``balls="catalogue"`` looks for the best ball instead: the diameter and density
        that would do best, and the preferred sizes of balls that are sold.
    grade : str
        Grade of ISO 3290-1 of those, such as ``"G10"``.

    Returns
    -------
    PlanReport
        Every ball and tube, ranked.

    Raises
    ------
    InputError
        For what is not on the bench, or cannot be known.
    """
    return PlanReport(
        plan_bench(
            bench,
            viscosity=viscosity,
            target=target,
            drops=drops,
            most_drops=most_drops,
            longest=longest,
            coverage=coverage,
            run_set=run_set,
            liquid=liquid,
            timer=timer,
            thermometer=thermometer,
            temperature=temperature,
            tubes=tubes,
            balls=balls,
            grade=grade,
        )
    )


@dataclass(frozen=True)
class PlanReport:
    """What a plan says; numbers stay numbers in ``combinations``, ``table()`` and ``to_dict()``."""

    plan: Plan

    @property
    def combinations(self) -> tuple[Combination, ...]:
        """Every ball, tube and viscosity, the best first."""
        return self.plan.combinations

    @property
    def suitable(self) -> bool:
        """Whether any ball and tube will do at every viscosity asked for."""
        return self.plan.suitable

    def text(self) -> str:
        """Return the plan as text of at most 80 columns."""
        return plan_text(self.plan)

    def table(self) -> pd.DataFrame:
        """Return one row a combination, numeric, SI units in the column names."""
        import pandas as pd

        rows = []
        for one in self.to_dict()["combinations"]:
            left_out = ("intervals_s", "budget", "better")
            row = {key: value for key, value in one.items() if key not in left_out}
            row |= {key: "; ".join(one[key]) for key in ("reasons", "cautions")}
            rows.append(row)
        return pd.DataFrame(rows)

    def to_dict(self) -> dict[str, Any]:
        """Return the document of the schema ``plumbfall/plan/1``."""
        return plan_document(self.plan)

    def to_json(self, path: str | PathLike[str] | None = None) -> str:
        """Return the document as JSON, and write it where a path is given."""
        from plumbfall.report.json_report import json_text

        text = json_text(self.to_dict())
        if path is not None:
            write_file(path, text.encode("ascii"))
        return text

    def to_html(self, path: str | PathLike[str] | None = None) -> str:
        """Return the plan as a page that needs no other file; write it where a path is given."""
        from plumbfall.report.plan_page import plan_page

        text = plan_page(self.plan)
        if path is not None:
            write_file(path, text.encode("utf-8"))
        return text

    def write(self, folder: str | PathLike[str]) -> None:
        """Write ``plan.html`` and ``plan.json`` into a folder, both or neither."""
        files = {
            "plan.html": self.to_html().encode("utf-8"),
            "plan.json": self.to_json().encode("ascii"),
        }
        write_folder(folder, files)

    def write_forms(
        self,
        folder: str | PathLike[str],
        *,
        run_set: str = "A",
        viscosity: Amount | None = None,
    ) -> tuple[str, ...]:
        """Write what is filled in at the bench for the best ball and tube.

        Parameters
        ----------
        folder : path
            Where the bench sheet, ``drops.csv`` and ``recording_form.html`` go, all or none.
        run_set : str
            Name of the run set.
        viscosity : float [Pa.s] or str, optional
            Which of the plan's viscosities, where no one ball will do at all of them.

        Returns
        -------
        tuple of str
            Names of the files written.

        Raises
        ------
        InputError
            Where nothing will do, or a file stands there already: nothing is overwritten.
        """
        from plumbfall.report.plan_forms import forms_of_plan, write_forms

        at = None if viscosity is None else viscosities_of(viscosity)[0]
        return write_forms(folder, forms_of_plan(self.plan, run_set, at), self.plan.bench)

    def plot(self, ax: Axes | None = None) -> Figure | Axes:
        """Draw the usable viscosities of each ball; return the Axes given, else a new Figure."""
        from plumbfall.report.plan_figure import draw_plan, new_plan_figure

        return new_plan_figure(self.plan) if ax is None else draw_plan(self.plan, ax)

    def __repr__(self) -> str:
        will = sum(one.suitable for one in self.combinations)
        return f"<plan: {will} of {len(self.combinations)} combinations will do>"

    def _repr_html_(self) -> str:
        from plumbfall.report.plan_page import plan_fragment

        return plan_fragment(self.plan)
