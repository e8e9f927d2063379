"""Recompute every figure from print with the shipped code; none stops the others."""

from __future__ import annotations

import math
from collections.abc import Iterable

from plumbfall.published import (
    chain_constants,
    chain_units,
    chain_worked,
    flow_laws,
    flow_spheres,
    liquid_solutions,
    liquid_water,
    statistics_anova,
    statistics_charts,
    statistics_data,
    statistics_decisions,
    statistics_tables,
    uncertainty_correlated,
    uncertainty_fits,
    uncertainty_gum,
    uncertainty_inputs,
    uncertainty_supplement,
)
from plumbfall.published.figure import Figure
from plumbfall.report.selftest_result import CheckedFigure, SelfTest

__all__ = ["FIGURES", "selftest"]

FIGURES: tuple[Figure, ...] = (
    *chain_units.FIGURES,
    *chain_worked.FIGURES,
    *chain_constants.FIGURES,
    *flow_laws.FIGURES,
    *flow_spheres.FIGURES,
    *uncertainty_inputs.FIGURES,
    *uncertainty_gum.FIGURES,
    *uncertainty_correlated.FIGURES,
    *uncertainty_fits.FIGURES,
    *uncertainty_supplement.FIGURES,
    *statistics_tables.FIGURES,
    *statistics_data.FIGURES,
    *statistics_anova.FIGURES,
    *statistics_decisions.FIGURES,
    *statistics_charts.FIGURES,
    *liquid_water.FIGURES,
    *liquid_solutions.FIGURES,
)
"""Every figure, by area."""


def selftest(figures: Iterable[Figure] = FIGURES) -> SelfTest:
    """Recompute figures and compare each with print.

    A figure whose computation raises an exception has failed, and carries what was said.
    """
    return SelfTest(tuple(_checked(figure) for figure in figures))


def _checked(figure: Figure) -> CheckedFigure:
    computed, problem = math.nan, ""
    try:
        computed = figure.compute()
    except Exception as error:  # whatever goes wrong in one figure, the others must be checked
        problem = f"{type(error).__name__}: {error}"
    return CheckedFigure(
        id=figure.id,
        area=figure.area,
        basis=figure.basis,
        source=figure.source,
        printed=figure.printed,
        published=figure.published,
        computed=computed,
        tolerance=figure.tolerance,
        problem=problem,
    )
