"""Temperatures that look written in another unit than they were read in."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from plumbfall.findings.data import Found, RunData
from plumbfall.results import Finding

__all__ = ["temperature_unit"]

ZERO = 273.15
NEAR = 1.0
"""Kelvin within which a temperature read in the other unit must meet a known one."""
FAR = 15.0
"""Kelvin by which it must miss it as it stands."""


def temperature_unit(data: RunData) -> Iterator[Found]:
    """Find temperatures that, read as degF or K, are those of the liquid's density or reference.

    The known temperature is that of the liquid's density, or the one that results are reduced to.
    """
    found, n_sets = data.columns.set_temperature, len(data.names)
    of_density = np.full(n_sets, np.nan)
    of_density[data.selection.cells.run_set] = data.inputs.liquid_density_at
    reference = data.bench.reference_temperature
    of_reference = np.full(n_sets, np.nan if reference is None else reference)
    others = {"degF": (found - ZERO - 32) / 1.8 + ZERO, "K": found - ZERO}
    told = np.zeros(n_sets, dtype=bool)
    for unit, kelvin in others.items():
        for known, what in ((of_reference, "the reference"), (of_density, "the density's")):
            with np.errstate(invalid="ignore"):
                hit = (np.abs(kelvin - known) < NEAR) & (np.abs(found - known) > FAR)
            for run_set in np.flatnonzero(hit & ~told):
                yield (
                    int(run_set),
                    Finding(
                        code="unit-slip-suspected",
                        severity="warning",
                        statistic=float(found[run_set]),
                        message=f"the drops' temperature of {found[run_set] - ZERO:.1f} degC is "
                        f"{abs(found[run_set] - known[run_set]):.0f} K from {what} temperature; "
                        f"read as {unit} it would be {kelvin[run_set] - ZERO:.1f} degC",
                        remedy=f"if the thermometer shows {unit}, write it into the heading, such "
                        f"as temperature [{unit}]",
                    ),
                )
            told |= hit
