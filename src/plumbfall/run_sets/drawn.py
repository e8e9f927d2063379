"""What Monte Carlo says of a run set beside the linear propagation, and what is quoted."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from plumbfall.results import Measured, MonteCarloResult
from plumbfall.run_sets.outputs import Outputs
from plumbfall.uncertainty.intervals import Validation, validate
from plumbfall.uncertainty.monte_carlo_result import MonteCarlo, MonteCarloOutput

__all__ = ["Drawn", "compare"]


@dataclass(frozen=True, slots=True)
class Drawn:
    """One run set's draws, summarised, and the validation of each quantity that it has.

    The outputs of ``found`` are in the order of ``validations``.
    """

    found: MonteCarlo
    validations: dict[str, Validation]

    def output(self, quantity: str) -> MonteCarloOutput:
        """Return what the draws say of a quantity that the set has."""
        return self.found.output(list(self.validations).index(quantity))

    def replaces(self, quantity: str) -> bool:
        """Whether the Monte Carlo interval is quoted: the linear one is not validated.

        An interval without bounds, as too many draws have no value, cannot be quoted.
        """
        output = self.output(quantity)
        bounded = math.isfinite(output.low) and math.isfinite(output.high)
        return bounded and not self.validations[quantity].validated

    def quoted(self, quantity: str, linear: Measured | None) -> Measured | None:
        """Return a quantity with the interval that holds.

        The standard uncertainty is the linear one where the draws have none.
        """
        if linear is None or quantity not in self.validations or not self.replaces(quantity):
            return linear
        output = self.output(quantity)
        u = output.standard_uncertainty
        return Measured(
            value=linear.value,
            unit=linear.unit,
            u=linear.u if u is None else u,
            effective_dof=None,
            coverage_probability=linear.coverage_probability,
            coverage_factor=None,
            expanded=(output.high - output.low) / 2,
            low=output.low,
            high=output.high,
            method="monte-carlo",
        )

    def record(self) -> MonteCarloResult:
        """Return what the draws say of the viscosity."""
        output = self.output("viscosity")
        return MonteCarloResult(
            low=output.low,
            high=output.high,
            shortest_low=output.shortest_low,
            shortest_high=output.shortest_high,
            standard_uncertainty=output.standard_uncertainty,
            draws=self.found.draws,
            validated_linear=self.validations["viscosity"].validated,
            undefined=output.undefined,
            stable=self.found.converged,
            histogram=output.histogram,
        )


def compare(found: MonteCarlo, quantities: Sequence[str], outputs: Outputs, run_set: int) -> Drawn:
    """Validate every linear interval of a run set to one digit of u (JCGM 101:2008, 8)."""
    validations = {}
    for place, quantity in enumerate(quantities):
        linear, output = outputs.of(quantity), found.output(place)
        u = output.standard_uncertainty
        validations[quantity] = validate(
            linear_low=float(linear.low[run_set]),
            linear_high=float(linear.high[run_set]),
            low=output.low,
            high=output.high,
            u=float(linear.u[run_set]) if u is None else u,
        )
    return Drawn(found, validations)
