"""Checks against a certified liquid, as numbers, a document, a page's fragment and a drawing."""

from __future__ import annotations

import math
import os
from collections.abc import Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from plumbfall.calibration.check import CheckResult
from plumbfall.calibration.verdict import FAILED, PASSED, UNDECIDED
from plumbfall.report.json_report import finding_document, json_text, measured_document
from plumbfall.report.json_values import finite_or_none
from plumbfall.results import Measured, Quantity

if TYPE_CHECKING:
    import pandas as pd
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

    from plumbfall.bench.records import Bench

__all__ = ["SCHEMA", "CheckReport"]

SCHEMA = "plumbfall/check/1"


@dataclass(frozen=True, eq=False)
class CheckReport:
    """One check a run set.

    ``passed_over`` names run sets of other liquids; ``appended`` counts the lines that the history
    gained, ``None`` without one.
    """

    checks: tuple[CheckResult, ...]
    bench: Bench
    inputs: tuple[tuple[str, str], ...] = ()
    passed_over: tuple[str, ...] = ()
    appended: int | None = None

    @property
    def decision(self) -> str:
        """The gravest decision: ``failed``, else ``undecided``, else ``passed``."""
        decisions = {check.decision for check in self.checks}
        return next(one for one in (FAILED, UNDECIDED, PASSED) if one in decisions)

    @property
    def invalid(self) -> bool:
        """Whether the data of any run set are invalid."""
        return any(check.invalid for check in self.checks)

    def __len__(self) -> int:
        return len(self.checks)

    def __iter__(self) -> Iterator[CheckResult]:
        return iter(self.checks)

    def __getitem__(self, name: str) -> CheckResult:
        return next(check for check in self.checks if check.run_set == name)

    def table(self) -> pd.DataFrame:
        """Return one row a run set, numeric, units in the column names."""
        import pandas as pd

        return pd.DataFrame(
            [
                {
                    "run_set": check.run_set,
                    "reference": check.reference,
                    "measured_mPa_s": _value(check.measured, 1e3),
                    "certified_mPa_s": _value(check.certified, 1e3),
                    "bias_percent": _value(check.bias, 100),
                    "u_percent": math.nan if check.bias is None else 100 * check.bias.u,
                    "e_n": _times(check.e_n, 1),
                    "zeta": _times(check.zeta, 1),
                    "tolerance_percent": _times(check.tolerance, 100),
                    "conformance_probability": _times(check.conformance_probability, 1),
                    "decision": check.decision,
                    "reason": check.reason,
                    "temperature_degC": check.temperature - 273.15,
                    "when": check.when,
                    "operator": check.operator,
                }
                for check in self.checks
            ]
        )

    def to_dict(self) -> dict[str, Any]:
        """Return the document of the schema ``plumbfall/check/1``: SI units, full precision."""
        return {
            "schema": SCHEMA,
            "checks": [_document(check) for check in self.checks],
            "decision": self.decision,
            "passed_over": list(self.passed_over),
            "inputs": [{"path": path, "sha256": sha256} for path, sha256 in self.inputs],
        }

    def to_json(self, path: str | os.PathLike[str] | None = None) -> str:
        """Return the document as JSON text, and write it to a file if one is named."""
        from plumbfall.report.writing import write_file

        text = json_text(self.to_dict())
        if path is not None:
            write_file(path, text.encode("ascii"))
        return text

    def text(self) -> str:
        """Return the checks as plain text, 80 columns wide."""
        from plumbfall.report.check_text import check_text

        return check_text(self)

    def plot(self, ax: Axes | None = None) -> Figure | Axes:
        """Draw the bias of every run set with its bounds; return the Axes given, or a Figure."""
        from plumbfall.report.check_figure import draw_checks
        from plumbfall.report.placing import in_its_place

        return in_its_place(lambda place: draw_checks(self.checks, place), ax, len(self))

    def __repr__(self) -> str:
        return f"<check of {len(self)} run sets: {self.decision}>"

    def _repr_html_(self) -> str:
        from plumbfall.report.check_text import check_fragment

        return check_fragment(self)


def _document(check: CheckResult) -> dict[str, Any]:
    bias = check.bias
    return {
        "run_set": check.run_set,
        "reference": check.reference,
        "temperature_K": finite_or_none(check.temperature),
        "measured": measured_document(check.measured),
        "certified": measured_document(check.certified),
        "law": check.law,
        "bias": None
        if bias is None
        else {
            "value": bias.value,
            "unit": bias.unit,
            "standard_uncertainty": bias.u,
            "effective_dof": finite_or_none(check.bias_dof),
        },
        "e_n": finite_or_none(check.e_n),
        "zeta": finite_or_none(check.zeta),
        "tolerance": finite_or_none(check.tolerance),
        "conformance_probability": finite_or_none(check.conformance_probability),
        "decision": check.decision,
        "reason": check.reason,
        "when": check.when,
        "operator": check.operator,
        "explanations": list(check.explanations),
        "findings": [finding_document(finding) for finding in check.findings],
    }


def _value(known: Measured | Quantity | None, factor: float) -> float:
    return math.nan if known is None else known.value * factor


def _times(value: float | None, factor: float) -> float:
    return math.nan if value is None else value * factor
