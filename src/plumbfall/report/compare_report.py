"""A comparison of two run sets, as numbers, a document, text and a drawing."""

from __future__ import annotations

import math
import os
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from plumbfall.calibration.compare import Comparison
from plumbfall.report.json_report import json_text, measured_document
from plumbfall.report.json_values import finite_or_none

if TYPE_CHECKING:
    import pandas as pd
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from plumbfall.bench.records import Bench

__all__ = ["SCHEMA", "ComparisonReport"]

SCHEMA = "plumbfall/comparison/1"


@dataclass(frozen=True, eq=False)
class ComparisonReport:
    """Two run sets against each other; ``result`` holds the numbers in SI units."""

    result: Comparison
    bench: Bench

    @property
    def ratio(self) -> float:
        """First value over the second."""
        return self.result.ratio.value

    @property
    def different(self) -> bool:
        """Whether a difference is shown."""
        return self.result.different

    @property
    def equivalent(self) -> bool | None:
        """Whether equality within the margin is shown; ``None`` without a margin."""
        return self.result.equivalent

    def table(self) -> pd.DataFrame:
        """Return ratio and difference, one row each, with bounds."""
        import pandas as pd

        result = self.result
        rows = [
            ("ratio", "1", result.ratio, 1.0),
            ("difference", "mPa.s", result.difference, 1e3),
        ]
        return pd.DataFrame(
            [
                {
                    "quantity": name,
                    "unit": unit,
                    "value": factor * measured.value,
                    "standard_uncertainty": factor * measured.u,
                    "low": factor * measured.low,
                    "high": factor * measured.high,
                    "effective_dof": math.nan
                    if measured.effective_dof is None
                    else measured.effective_dof,
                }
                for name, unit, measured, factor in rows
            ]
        )

    def to_dict(self) -> dict[str, Any]:
        """Return the document of the schema ``plumbfall/comparison/1``: SI units."""
        result = self.result
        precision = result.precision
        return {
            "schema": SCHEMA,
            "sets": list(result.sets),
            "quantity": result.quantity,
            "temperatures_K": [finite_or_none(kelvin) for kelvin in result.temperatures],
            "values": [measured_document(value) for value in result.values],
            "ratio": measured_document(result.ratio),
            "difference": measured_document(result.difference),
            "correlation": finite_or_none(result.correlation),
            "difference_test": {"p_value": result.p_value, "different": result.different},
            "equivalence_test": None
            if result.margin is None
            else {
                "margin": result.margin,
                "p_value": finite_or_none(result.equivalence_p_value),
                "equivalent": result.equivalent,
            },
            "repeatability": None
            if precision is None
            else {
                "relative_sd": precision.sd,
                "dof": finite_or_none(precision.dof),
                "limit": precision.limit,
                "critical_difference": precision.critical,
                "source": precision.source,
                "cochran": finite_or_none(precision.cochran),
                "cochran_limit": finite_or_none(precision.cochran_limit),
            },
        }

    def to_json(self, path: str | os.PathLike[str] | None = None) -> str:
        """Return the document as JSON text, and write it to a file if one is named."""
        from plumbfall.report.writing import write_file

        text = json_text(self.to_dict())
        if path is not None:
            write_file(path, text.encode("ascii"))
        return text

    def text(self) -> str:
        """Return the comparison as plain text, 80 columns wide."""
        from plumbfall.report.compare_text import compare_text

        return compare_text(self)

    def plot(self, ax: Axes | None = None) -> Figure | Axes:
        """Draw the ratio with its bounds; return the Axes given, or a new Figure."""
        from plumbfall.report.compare_figure import draw_comparison
        from plumbfall.report.placing import in_its_place

        return in_its_place(lambda place: draw_comparison(self.result, place), ax)

    def __repr__(self) -> str:
        first, second = self.result.sets
        return f"<comparison: {first} / {second} = {self.ratio:.5g}>"

    def _repr_html_(self) -> str:
        from plumbfall.report.compare_text import compare_fragment

        return compare_fragment(self)
