"""The control chart of a history of checks, as numbers, a document, text and a drawing."""

from __future__ import annotations

import math
import os
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

from plumbfall.calibration.chart import ControlChart
from plumbfall.errors import InputError
from plumbfall.report.json_report import json_text
from plumbfall.report.json_values import finite_or_none

if TYPE_CHECKING:
    import pandas as pd
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["SCHEMA", "ChartReport"]

SCHEMA = "plumbfall/chart/1"

FORMATS = (".png", ".svg", ".csv", ".json")
"""Endings of files that :meth:`ChartReport.write` knows."""


@dataclass(frozen=True, eq=False)
class ChartReport:
    """A control chart; ``result`` holds its numbers, in percent."""

    result: ControlChart

    @property
    def out_of_control(self) -> bool:
        """Whether any point signals."""
        return self.result.out_of_control

    def table(self) -> pd.DataFrame:
        """Return one row a check, in order of time, values in percent."""
        import pandas as pd

        return pd.DataFrame(
            [
                {
                    "when": point.when,
                    "run_set": point.run_set,
                    "reference": point.reference,
                    "bias_percent": point.value,
                    "u_percent": math.nan if point.u is None else point.u,
                    "moving_range_percent": math.nan
                    if point.moving_range is None
                    else point.moving_range,
                    "moving_average_percent": point.average,
                    "moving_average_low_percent": point.average_low,
                    "moving_average_high_percent": point.average_high,
                    "decision": point.decision,
                    "signals": " ".join(point.signals),
                }
                for point in self.result.points
            ]
        )

    def to_dict(self) -> dict[str, Any]:
        """Return the document of the schema ``plumbfall/chart/1``, values in percent."""
        result, points = self.result, self.result.points
        return {
            "schema": SCHEMA,
            "unit": "%",
            "centre": result.centre,
            "standard_deviation": result.limits.sd,
            "warning": list(result.warning),
            "action": list(result.action),
            "baseline": result.baseline,
            "provisional": result.provisional,
            "out_of_control": result.out_of_control,
            "references": list(result.references),
            "points": [
                {
                    "when": point.when,
                    "value": point.value,
                    "signals": list(point.signals),
                    "run_set": point.run_set,
                    "reference": point.reference,
                    "standard_uncertainty": finite_or_none(point.u),
                }
                for point in points
            ],
            "moving_range": {
                "mean": result.limits.mean_range,
                "action": result.limits.highest_range,
                "values": [finite_or_none(point.moving_range) for point in points],
            },
            "ewma": {
                "weight": result.weight,
                "values": [point.average for point in points],
                "low": [point.average_low for point in points],
                "high": [point.average_high for point in points],
            },
            "drift": None
            if result.drift is None
            else {
                "per": result.drift_by,
                "slope": result.drift.slope,
                "standard_uncertainty": result.drift.u,
                "dof": result.drift.dof,
                "p_value": result.drift.p_value,
                "detectable": finite_or_none(result.drift.detectable),
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
        """Return limits and points as plain text, 80 columns wide."""
        from plumbfall.report.chart_text import chart_text

        return chart_text(self.result)

    def plot(self, ax: Axes | None = None) -> Figure | Axes:
        """Draw the checks in order with their limits; return the Axes given, or a Figure.

        A figure of its own has the moving ranges below.
        """
        from plumbfall.report.chart_figure import chart_figure, draw_chart

        return chart_figure(self.result) if ax is None else draw_chart(self.result, ax)

    def write(self, path: str | os.PathLike[str]) -> None:
        """Write the chart as PNG or SVG, or its points as CSV or JSON, by the file's ending.

        Raises
        ------
        InputError
            If the ending is none of these, or the file cannot be written.
        """
        from plumbfall.report.chart_figure import chart_file
        from plumbfall.report.tables import csv_text
        from plumbfall.report.writing import write_file

        ending = Path(path).suffix.lower()
        if ending not in FORMATS:
            raise InputError(
                f"a chart cannot be written as '{ending or Path(path).name}'",
                path=os.fspath(path),
                remedy=f"end the name in {', '.join(FORMATS)}",
            )
        if ending == ".csv":
            content = csv_text(self.table()).encode("utf-8")
        elif ending == ".json":
            content = self.to_json().encode("ascii")
        else:
            content = chart_file(self.result, ending.removeprefix("."))
        write_file(path, content)

    def __len__(self) -> int:
        return len(self.result.points)

    def __repr__(self) -> str:
        state = "out of control" if self.out_of_control else "in control"
        return f"<control chart of {len(self)} checks: {state}>"

    def _repr_html_(self) -> str:
        from plumbfall.report.chart_text import chart_fragment

        return chart_fragment(self.result)
