"""Invented drops of one or many run sets, and what is true of them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import ArrayLike

from plumbfall.measurement.balance import Numbers
from plumbfall.planning.arrangement import Arrangement

if TYPE_CHECKING:
    import pandas as pd

__all__ = ["NOTE", "Simulated"]

NOTE = "invented"
"""What stands in the note of every invented row, so that a saved file says so too."""

ZERO_CELSIUS = 273.15


@dataclass(frozen=True)
class Simulated:
    """Invented drops of one or many run sets, and what is true of them.

    ``clock`` holds clock readings [s], shape (marks, drops, sets) with marks, else total times,
    shape (1, drops, sets). ``reading`` is the temperature read, shape (drops, sets) [K], ``None``
    where the bench sheet gives the run set one. ``viscosity`` and ``temperature`` are the true
    ones, shape (drops, sets); ``entries`` those of the bench, shape (inputs, sets). ``slope`` is
    the true d ln(viscosity)/dT, shape (sets,), and ``nominal`` the viscosity at ``at`` [K], shape
    (drops,).
    """

    arrangement: Arrangement
    clock: Numbers
    reading: Numbers | None
    viscosity: Numbers
    temperature: Numbers
    entries: Numbers
    slope: Numbers
    nominal: Numbers
    at: float
    seed: int

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the run sets: numbered where there are several."""
        name, n = self.arrangement.run_set, self.viscosity.shape[1]
        return (name,) if n == 1 else tuple(f"{name}-{number}" for number in range(1, n + 1))

    def viscosity_at(self, temperature: ArrayLike) -> Numbers:
        """Return the true viscosity at a temperature [K], mean of the drops', shape (sets,)."""
        offset = np.asarray(temperature, dtype=float) - self.at
        return np.asarray(self.nominal.mean() * np.exp(self.slope * offset))

    def table(self) -> pd.DataFrame:
        """Return the timing table, one row a drop, as ``read_timings`` takes it."""
        import pandas as pd

        shape = self.viscosity.shape
        n_drops, n_sets = shape

        def by_set(values: Numbers) -> Numbers:
            return np.asarray(np.broadcast_to(values, shape).T.ravel())

        columns: dict[str, Any] = {
            "set": np.repeat(np.array(self.names, dtype=object), n_drops),
            "drop": np.tile(np.arange(1, n_drops + 1), n_sets),
            "ball": np.tile(np.array(self.arrangement.balls, dtype=object), n_sets),
        }
        columns |= {kind: name for kind, name in self._equipment().items()}
        if self.reading is not None:
            columns["temperature [degC]"] = by_set(self.reading) - ZERO_CELSIUS
        if len(self.clock) == 1:
            columns["time [s]"] = by_set(self.clock[0])
        else:
            for mark, clock in enumerate(self.clock, 1):
                columns[f"mark {mark} [s]"] = by_set(clock)
        columns["note"] = NOTE
        table = pd.DataFrame(columns)
        table.attrs.update(self._truth())
        return table

    def _equipment(self) -> dict[str, str]:
        """Return what the timing table must name: what the bench has several of."""
        given = self.arrangement.bench.sets.get(self.arrangement.run_set)
        named = given is not None and len(self.names) == 1
        return {
            kind: name
            for kind, name in self.arrangement.equipment.items()
            if name
            and not (named and getattr(given, kind) == name)
            and len(getattr(self.arrangement.bench, f"{kind}s")) > 1
        }

    def _truth(self) -> dict[str, Any]:
        """Return what the table says of itself, with the true values of a single run set."""
        said: dict[str, Any] = {"invented": True, "seed": self.seed}
        if len(self.names) == 1:
            names = (estimate.name for estimate in self.arrangement.inputs.estimates)
            said |= {
                "true_viscosity_Pa_s": float(self.nominal.mean()),
                "true_viscosity_at_K": self.at,
                "true_slope_1_K": float(self.slope[0]),
                "true_values": dict(zip(names, self.entries[:, 0].tolist(), strict=True)),
            }
        return said
