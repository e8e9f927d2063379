"""The raw inputs of the measurement equation, by cell, each with the entry it comes from.

The equation takes what was written on the bench sheet, never a quantity derived from it, so that
whatever uses one entry shares its error (DESIGN: correlation follows identity).
"""

from __future__ import annotations

from dataclasses import dataclass, field, replace

import numpy as np
from numpy.typing import NDArray

from plumbfall.estimate import Estimate
from plumbfall.measurement.constants import ConstantInUse
from plumbfall.physics.weight import sphere_volume

__all__ = ["MODEL_INPUT", "Column", "Inputs", "cold_ball_density"]

MODEL_INPUT = "methods.model_uncertainty"
"""Key path of the drag law's own relative uncertainty."""

BY_CELL = (
    "weighed", "together", "lot", "ball_measured_at", "tube_measured_at", "liquid_density_at",
    "spread", "per_drop", "resolution", "per_reading", "slope_known", "temperature_known",
    "constant_of",
)  # fmt: skip
"""Arrays of :class:`Inputs` of shape (cells,), roles apart."""


@dataclass(frozen=True, slots=True)
class Column:
    """One role of the measurement equation in all cells, shape (cells,).

    ``entry`` counts into :attr:`Inputs.estimates`; -1 where the bench has no such entry and
    ``value`` is the neutral one.
    """

    value: NDArray[np.float64]
    entry: NDArray[np.intp]

    @property
    def present(self) -> bool:
        """Whether any cell has an entry."""
        return bool((self.entry >= 0).any())


@dataclass(frozen=True, slots=True)
class Inputs:
    """Every raw input by role, and the distinct estimates they come from.

    ``weighed`` says which cells know their ball's mass (instead of its density), ``together``
    how many balls were weighed at once; reference temperatures are in kelvin; ``model_declared``
    says that the drag law's uncertainty is the bench sheet's own, not the law's; ``individual``
    marks the entries that belong to one ball (not to a lot or a material). ``constant_of`` is each
    cell's place in ``constants``, -1 where the tube is not calibrated.
    """

    estimates: tuple[Estimate, ...]
    roles: dict[str, Column]
    weighed: NDArray[np.bool_]
    together: NDArray[np.float64]
    lot: NDArray[np.bool_]
    ball_measured_at: NDArray[np.float64]
    tube_measured_at: NDArray[np.float64]
    liquid_density_at: NDArray[np.float64]
    spread: NDArray[np.float64]
    per_drop: NDArray[np.float64]
    resolution: NDArray[np.float64]
    per_reading: NDArray[np.float64]
    slope_known: NDArray[np.bool_]
    temperature_known: NDArray[np.bool_]
    constant_of: NDArray[np.intp]
    constants: tuple[ConstantInUse, ...] = ()
    model_declared: bool = False
    gravity_slopes: tuple[float, float] = (0.0, 0.0)
    individual: NDArray[np.bool_] = field(default_factory=lambda: np.zeros(0, dtype=bool))

    def take(self, cells: NDArray[np.intp]) -> Inputs:
        """Return the inputs of some of the cells, shape (taken,), in an order of their own."""
        roles = {
            role: Column(column.value[cells], column.entry[cells])
            for role, column in self.roles.items()
        }
        return replace(self, roles=roles, **{name: getattr(self, name)[cells] for name in BY_CELL})

    @property
    def calibrated(self) -> NDArray[np.bool_]:
        """Whether each cell's tube has a constant instead of a geometry, shape (cells,)."""
        return self.constant_of >= 0

    def constants_of(self, cells: NDArray[np.intp]) -> list[int]:
        """Return the places of the tube constants that cells have."""
        places = np.unique(self.constant_of[cells])
        return [int(place) for place in places[places >= 0]]

    @property
    def u(self) -> NDArray[np.float64]:
        """Standard uncertainties of the estimates, shape (inputs,)."""
        return np.array([estimate.u for estimate in self.estimates])

    @property
    def dof(self) -> NDArray[np.float64]:
        """Degrees of freedom of the estimates, shape (inputs,)."""
        return np.array([estimate.dof for estimate in self.estimates])


def cold_ball_density(inputs: Inputs) -> NDArray[np.float64]:
    """Density of each cell's ball as given, or by its mass and diameter, shape (cells,) [kg/m3]."""
    roles = inputs.roles
    volume = sphere_volume(ball_diameter=roles["diameter"].value + roles["gauge"].value)
    mass = (roles["mass"].value + roles["balance"].value) / inputs.together
    density: NDArray[np.float64] = np.where(
        inputs.weighed, mass / volume, roles["ball_density"].value
    )
    return density
