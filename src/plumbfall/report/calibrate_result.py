"""What a calibration says: constants with what their errors come from, as an object to look at."""

from __future__ import annotations

import html
import math
import os
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from plumbfall.calibration.constant import Calibration, TubeConstant

if TYPE_CHECKING:
    import pandas as pd
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["CalibrationReport"]


@dataclass(frozen=True)
class CalibrationReport:
    """The constants of balls and tubes, as ``plumbfall calibrate`` prints and writes them."""

    calibration: Calibration

    @property
    def constants(self) -> tuple[TubeConstant, ...]:
        """The constants, one for each ball and tube."""
        return self.calibration.constants

    @property
    def complete(self) -> bool:
        """Whether every run set was valid, so that every ball and tube has its constant."""
        return not self.calibration.invalid

    def __repr__(self) -> str:
        names = ", ".join(constant.stored.name for constant in self.constants)
        return f"<calibration: {names or 'no constant'}>"

    def to_dict(self) -> dict[str, Any]:
        """Return the document of the schema ``plumbfall/constants/1``, in SI units."""
        from plumbfall.report.calibrate_document import constants_document

        return constants_document(self.calibration)

    def to_json(self, path: str | os.PathLike[str] | None = None) -> str:
        """Return the document as JSON text, and write it to a file if one is named.

        Raises
        ------
        InputError
            If a file is named and a run set is invalid; nothing is written then.
        """
        from plumbfall.errors import InputError
        from plumbfall.report.json_report import json_text
        from plumbfall.report.writing import write_file

        text = json_text(self.to_dict())
        if path is None:
            return text
        if not self.complete:
            names = ", ".join(name for name, _ in self.calibration.invalid)
            raise InputError(
                f"not written, as there is no constant from the invalid run set {names}",
                path=os.fspath(path),
                remedy="correct or leave out the run set",
            )
        write_file(path, text.encode("ascii"))
        return text

    def table(self) -> pd.DataFrame:
        """Return one row a constant, numeric, units in the column names."""
        import pandas as pd

        return pd.DataFrame([_row(constant) for constant in self.constants])

    def sets_table(self) -> pd.DataFrame:
        """Return one row a calibration set: its own constant, weight and residual."""
        import pandas as pd

        return pd.DataFrame(
            {
                "constant": constant.stored.name,
                "set": one.name,
                "reference": one.reference,
                "temperature_degC": one.temperature - 273.15,
                "viscosity_mPa_s": 1e3 * one.viscosity,
                "time_s": one.time,
                "n_drops": one.n_drops,
                "constant_mPa_s_cm3_per_g_s": 1e6 * one.value,
                "standard_uncertainty_mPa_s_cm3_per_g_s": 1e6 * one.u,
                "weight": one.weight,
                "residual_percent": 100 * one.residual,
            }
            for constant in self.constants
            for one in constant.sets
        )

    def text(self) -> str:
        """Return the calibration as plain text, 80 columns wide."""
        from plumbfall.report.calibrate_text import calibration_text

        return calibration_text(self.calibration)

    def plot(self, constant: str | None = None, ax: Axes | None = None) -> Figure | Axes:
        """Draw what each set says of a constant along the fall time.

        Parameters
        ----------
        constant : str, optional
            Name of the constant; without it all are drawn one below the other.
        ax : Axes, optional
            Where to draw one; without it a Figure is made.

        Raises
        ------
        InputError
            If the constant is unknown, or one place is given for several.
        """
        from plumbfall.report.calibrate_figure import draw_constants

        return draw_constants(self.constants, constant, ax)

    def _repr_html_(self) -> str:
        shown = self.table().to_html(index=False, border=0, escape=True)
        notes = "".join(
            f"<li>{html.escape(f'{one.severity} {one.code}: {one.message}')}</li>"
            for constant in self.constants
            for one in constant.findings
        )
        return f"<div>{shown}<ul>{notes}</ul></div>" if notes else f"<div>{shown}</div>"


def _row(constant: TubeConstant) -> dict[str, Any]:
    stored, domain = constant.stored, constant.stored.domain
    times, viscosities = domain.time or (math.nan,) * 2, domain.viscosity or (math.nan,) * 2
    temperatures = domain.temperature or (math.nan,) * 2
    return {
        "constant": stored.name,
        "tube": stored.tube,
        "ball": stored.ball,
        "constant_mPa_s_cm3_per_g_s": 1e6 * stored.value,
        "standard_uncertainty_mPa_s_cm3_per_g_s": 1e6 * stored.u,
        "relative_standard_uncertainty_percent": 100 * stored.u / stored.value,
        "dof": constant.dof,
        "n_sets": len(constant.sets),
        "n_drops": sum(one.n_drops for one in constant.sets),
        "time_low_s": times[0],
        "time_high_s": times[1],
        "viscosity_low_mPa_s": 1e3 * viscosities[0],
        "viscosity_high_mPa_s": 1e3 * viscosities[1],
        "temperature_low_degC": temperatures[0] - 273.15,
        "temperature_high_degC": temperatures[1] - 273.15,
        "least_p_value": constant.constancy.least_p_value,
        "references": " ".join(one.reference for one in stored.certified),
    }
