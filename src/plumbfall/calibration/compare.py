"""Two run sets held against each other: ratio and difference, shared errors cancelled."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from scipy.special import stdtr

from plumbfall.calibration.precision import (
    cochran_critical,
    cochran_statistic,
    critical_difference,
    pooled_sd,
    repeatability_limit,
)
from plumbfall.errors import InputError, nearest_name
from plumbfall.reduction.reduced import Reduction
from plumbfall.results import Measured, RunSetResult
from plumbfall.run_sets.outputs import Outputs
from plumbfall.uncertainty.coverage import coverage_factor
from plumbfall.uncertainty.type_a import group_scatter

__all__ = ["LEVEL", "Comparison", "Precision", "compare_run_sets"]

LEVEL = 0.05
"""Significance of the tests of difference and equivalence."""

COCHRAN_LEVEL = 0.01
"""Significance of Cochran's test for an outlying variance (ISO 5725-2, 7.3.3)."""

SAME_TEMPERATURE = 0.1
"""Kelvin within which two sets count as of one temperature (common practice, no source)."""


@dataclass(frozen=True, slots=True)
class Precision:
    """What drops of the two sets scatter by, relative, and what differences that explains.

    ``sd`` is that of one drop, pooled, with ``dof``; ``limit`` is what two single drops stay within
    (95 %), ``critical`` what the two means do if nothing but that scatter parts them. ``source``
    says where it is from. ``cochran`` is the larger variance over the sum of both, beyond
    ``cochran_limit`` (1 %) one set scatters too much to be pooled; ``None`` where not tested.
    """

    sd: float
    dof: float
    limit: float
    critical: float
    source: str
    cochran: float | None = None
    cochran_limit: float | None = None

    @property
    def uneven(self) -> bool:
        """Whether one set scatters far more than the other."""
        if self.cochran is None or self.cochran_limit is None:
            return False
        return self.cochran > self.cochran_limit


@dataclass(frozen=True, slots=True, kw_only=True)
class Comparison:
    """The first run set against the second: their ratio and their difference.

    ``quantity`` is ``viscosity`` or ``viscosity_at_reference``; ``temperatures`` in kelvin are
    where the values hold. ``p_value`` is that of no difference, two-sided. With a ``margin``
    (a ratio) ``equivalence_p_value`` is the larger of the two one-sided tests. ``precision`` is
    ``None`` where no set has two drops.
    """

    sets: tuple[str, str]
    quantity: str
    temperatures: tuple[float, float]
    values: tuple[Measured, Measured]
    ratio: Measured
    difference: Measured
    correlation: float
    p_value: float
    margin: float | None
    equivalence_p_value: float | None
    precision: Precision | None

    @property
    def different(self) -> bool:
        """Whether a difference is shown at the level of 5 %."""
        return self.p_value < LEVEL

    @property
    def equivalent(self) -> bool | None:
        """Whether the ratio is shown to lie within the margin; ``None`` without one."""
        return None if self.equivalence_p_value is None else self.equivalence_p_value < LEVEL

    @property
    def one_temperature(self) -> bool:
        """Whether both values hold at one temperature."""
        return abs(self.temperatures[0] - self.temperatures[1]) <= SAME_TEMPERATURE


def compare_run_sets(
    reduction: Reduction, sets: Sequence[str], *, margin: float | None = None
) -> Comparison:
    """Compare two run sets.

    Every error that both share (the bore, the gauge, the thermometer) acts on both values alike;
    what it does to their ratio and difference is little, and is counted so. The values at the
    reference temperature are compared where both sets have them.

    Parameters
    ----------
    reduction : Reduction
        The reduced drops.
    sets : two names
        The first is divided by the second.
    margin : float, optional
        Ratio off 1 within which the two count as equal.

    Returns
    -------
    Comparison
        With both tests.

    Raises
    ------
    InputError
        Where a set is unknown, named twice, or has no viscosity.

    References
    ----------
    JCGM 100:2008, 5.2.2 and F.1.2.3 (shared inputs); ISO 5725-6, 4.2.1 (critical difference); two
    one-sided tests: Schuirmann 1987 (from memory).
    """
    first, second = _results(reduction, sets)
    at_reference = first.viscosity_at_reference, second.viscosity_at_reference
    quantity, values = "viscosity_at_reference", at_reference
    if None in at_reference:
        quantity, values = "viscosity", (first.viscosity, second.viscosity)
    one, other = values
    for result, value in zip((first, second), values, strict=True):
        if value is None or result.status == "invalid":
            codes = ", ".join(f.code for f in result.findings if f.severity == "error")
            raise InputError(
                f"run set '{result.name}' is invalid ({codes}), and has nothing to compare",
                remedy="mend its data, or compare other sets",
            )
    assert one is not None
    assert other is not None
    ratio, difference, correlation = _propagated(reduction, quantity, sets, one.value, other.value)
    scaled = abs(difference.value) / difference.u if difference.u else math.inf
    p_value = _upper(scaled, _dof(difference)) * 2
    return Comparison(
        sets=(first.name, second.name),
        quantity=quantity,
        temperatures=_temperatures(reduction, quantity, first, second),
        values=(one, other),
        ratio=ratio,
        difference=difference,
        correlation=correlation,
        p_value=p_value if difference.value else 1.0,
        margin=margin,
        equivalence_p_value=None if margin is None else _equivalence(ratio, margin),
        precision=_precision(reduction, first.name, second.name),
    )


def _results(reduction: Reduction, sets: Sequence[str]) -> tuple[RunSetResult, RunSetResult]:
    names = tuple(sets)
    if len(names) != 2 or names[0] == names[1]:
        raise InputError(
            f"{len(set(names))} run sets are named, and two are compared",
            key="sets",
            remedy="name two run sets",
        )
    for name in names:
        if name not in reduction.names:
            near = nearest_name(name, reduction.names)
            known = ", ".join(reduction.names[:10])
            raise InputError(
                f"there is no run set '{name}'",
                key="sets",
                remedy=f"did you mean '{near}'?" if near else f"the run sets are {known}",
            )
    return reduction.run_set(names[0]), reduction.run_set(names[1])


def _propagated(
    reduction: Reduction, quantity: str, sets: Sequence[str], first: float, second: float
) -> tuple[Measured, Measured, float]:
    """Return ratio and difference, each input's parts in both values taken together."""
    outputs = reduction.sets.outputs
    start = outputs.rows(quantity).start
    rows = [start + reduction.names.index(name) for name in sets]
    (a, both), (_, b) = outputs.propagation.covariance(rows)
    ratio = first / second
    scale = math.sqrt(a * b)
    return (
        _measured(ratio, outputs, rows, (1 / second, -ratio / second), "1"),
        _measured(first - second, outputs, rows, (1.0, -1.0), "Pa.s"),
        float(both) / scale if scale else math.nan,
    )


def _measured(
    value: float, outputs: Outputs, rows: Sequence[int], weights: tuple[float, float], unit: str
) -> Measured:
    u, effective = outputs.combination(rows, np.array(weights))
    factor = float(coverage_factor(dof=effective, probability=outputs.coverage))
    return Measured(
        value=value,
        unit=unit,
        u=u,
        effective_dof=effective,
        coverage_probability=outputs.coverage,
        coverage_factor=factor,
        expanded=factor * u,
        low=value - factor * u,
        high=value + factor * u,
    )


def _dof(measured: Measured) -> float:
    return math.inf if measured.effective_dof is None else measured.effective_dof


def _upper(scaled: float, dof: float) -> float:
    """Return the probability of so many standard uncertainties or more, upwards."""
    return float(stdtr(min(dof, 1e9), -scaled))


def _equivalence(ratio: Measured, margin: float) -> float:
    """Return the larger p-value of the two one-sided tests that the ratio is off by the margin."""
    if ratio.u == 0:
        return 0.0 if abs(ratio.value - 1) < margin else 1.0
    above = (ratio.value - (1 - margin)) / ratio.u
    below = ((1 + margin) - ratio.value) / ratio.u
    return _upper(min(above, below), _dof(ratio))


def _temperatures(
    reduction: Reduction, quantity: str, first: RunSetResult, second: RunSetResult
) -> tuple[float, float]:
    reference = reduction.bench.reference_temperature
    if quantity == "viscosity_at_reference" and reference is not None:
        return reference, reference
    found = [math.nan if one.temperature is None else one.temperature.value
             for one in (first, second)]  # fmt: skip
    return found[0], found[1]


def _precision(reduction: Reduction, first: str, second: str) -> Precision | None:
    """Pool the scatter of both sets' drops, or take the bench's known repeatability."""
    sets = reduction.sets
    drops = group_scatter(sets.columns.at_set, sets.selection.run_set, len(reduction.names))
    places = [reduction.names.index(name) for name in (first, second)]
    counts = sets.weights.n_drops[places].astype(float)
    with np.errstate(invalid="ignore"):
        relative = drops.sd[places] / np.abs(drops.mean[places])
    sd, dof = pooled_sd(np.nan_to_num(relative), np.maximum(counts - 1, 0))
    source = "the drops of both sets"
    cochran = cochran_limit = None
    if reduction.bench.scatter is None and (counts >= 2).all():
        cochran = float(cochran_statistic(relative))
        cochran_limit = float(cochran_critical(groups=2, n=counts.mean(), level=COCHRAN_LEVEL))
    if reduction.bench.scatter is not None:
        sd, dof = reduction.bench.scatter.relative.value, reduction.bench.scatter.dof
        source = "the bench sheet's [scatter]"
    if math.isnan(sd):
        return None
    return Precision(
        sd=sd,
        dof=dof,
        limit=float(repeatability_limit(sd)),
        critical=float(critical_difference(sd, n_first=counts[0], n_second=counts[1])),
        source=source,
        cochran=cochran,
        cochran_limit=cochran_limit,
    )
