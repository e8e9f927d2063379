"""What a reduction says of one run set, as plain frozen records in SI units.

They are built when a run set is looked at; the numbers themselves are kept in columns.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

__all__ = [
    "SEVERITIES",
    "BallResult",
    "BudgetLine",
    "Conformity",
    "ConstantUsed",
    "Correction",
    "DropResult",
    "Finding",
    "Histogram",
    "Improvement",
    "Measured",
    "MonteCarloResult",
    "Quantity",
    "Reach",
    "RunSetResult",
    "SecondOrderResult",
    "TemperatureFitResult",
]

SEVERITIES = ("error", "warning", "note")


@dataclass(frozen=True, slots=True)
class Quantity:
    """A value in its SI unit with its standard uncertainty.

    0 where the value is exact, NaN where no uncertainty is claimed.
    """

    value: float
    unit: str
    u: float = 0.0


@dataclass(frozen=True, slots=True)
class Measured:
    """A measured value with its coverage interval.

    ``method`` is ``linear`` (GUM) or ``monte-carlo`` (JCGM 101); with the latter
    ``coverage_factor`` and ``effective_dof`` are ``None``. ``effective_dof`` may be infinite.
    """

    value: float
    unit: str
    u: float
    effective_dof: float | None
    coverage_probability: float
    coverage_factor: float | None
    expanded: float
    low: float
    high: float
    method: str = "linear"

    @property
    def relative_expanded(self) -> float:
        """Expanded uncertainty over the value."""
        return self.expanded / self.value


@dataclass(frozen=True, slots=True)
class Histogram:
    """How many draws fell into each of equal bins between ``low`` and ``high``, and outside."""

    low: float
    high: float
    counts: tuple[int, ...]
    below: int = 0
    above: int = 0


@dataclass(frozen=True, slots=True)
class MonteCarloResult:
    """What draws of the inputs say of a run set's viscosity, in Pa.s (JCGM 101).

    ``low`` and ``high`` bound the probabilistically symmetric interval, infinite where too many
    draws have no viscosity, which ``undefined`` counts. ``standard_uncertainty`` is ``None`` where
    it does not exist. ``validated_linear`` says that the linear interval agrees with it at one
    significant digit of the standard uncertainty (JCGM 101, 8). ``stable`` says whether the draws
    were enough for that, where they were to be; ``None`` where their number was given.
    ``histogram`` is ``None`` where the interval has no bounds or no width.
    """

    low: float
    high: float
    shortest_low: float
    shortest_high: float
    standard_uncertainty: float | None
    draws: int
    validated_linear: bool
    undefined: int = 0
    stable: bool | None = None
    histogram: Histogram | None = None


@dataclass(frozen=True, slots=True)
class Correction:
    """One correction: the factor by which it divides Stokes' viscosity, and where it is from."""

    name: str
    factor: float
    method: str
    source: str


@dataclass(frozen=True, slots=True)
class BudgetLine:
    """One input's part in the uncertainty of a run set's viscosity.

    ``contribution`` is sensitivity times standard uncertainty, in Pa.s, unsigned; the squares of
    all contributions add up to the squared uncertainty of the result, and ``share`` is each
    one's part of it. ``scope`` is ``shared``, ``ball`` or ``drop``.
    """

    input: str
    value: float
    unit: str
    u: float
    distribution: str
    dof: float
    sensitivity: float
    contribution: float
    share: float
    scope: str


@dataclass(frozen=True, slots=True)
class Improvement:
    """What change of one input alone would halve a run set's expanded uncertainty.

    ``what`` is ``standard uncertainty``, ``drops`` or ``balls``; it is ``now`` and must become
    ``needed``, ``None`` where that input alone cannot do it. Of several inputs together it is the
    ``factor`` by which all their contributions must shrink. ``remaining`` is the part of the
    expanded uncertainty that would be left without the input's error (it may exceed 1, where few
    degrees of freedom of other inputs then count in full).
    """

    input: str
    what: str
    unit: str
    now: float
    needed: float | None
    remaining: float


@dataclass(frozen=True, slots=True)
class BallResult:
    """The mean of one ball's drops in a run set."""

    ball: str
    n_drops: int
    viscosity: Quantity
    reynolds: float
    diameter_ratio: float
    shear_rate: float
    shear_stress: float


@dataclass(frozen=True, slots=True)
class DropResult:
    """One drop: as recorded, and what it gave.

    ``viscosity`` is at the drop's own temperature and ``viscosity_at_set`` brought to the set's;
    both ``None`` where the drop was not used or has no solution. ``residual`` is the drop's
    viscosity (brought to the set's temperature) over the set's value, less 1. ``wall``,
    ``inertia`` and ``end`` are factors of the drag. ``interval_ratios`` are the mean speed between
    successive marks over the drop's, NaN where a mark was not read, and empty with fewer than
    three marks.
    """

    file: str
    line: int
    drop: int
    ball: str
    time: float
    temperature: float
    viscosity: float | None
    viscosity_at_set: float | None
    stokes_viscosity: float | None
    reynolds: float | None
    fall_speed: float | None
    wall: float | None
    inertia: float | None
    end: float | None
    residual: float | None
    used: bool
    status: str
    note: str
    findings: tuple[str, ...] = ()
    diameter_ratio: float | None = None
    interval_ratios: tuple[float, ...] = ()


@dataclass(frozen=True, slots=True)
class Conformity:
    """What a liquid's specification says of a viscosity; it never judges the data.

    ``probability`` is that of lying within the limits, ``None`` where nothing could be judged, and
    ``rule`` then says why. ``decision`` is ``conforms``, ``does-not-conform`` or ``undecided``;
    ``limits`` are those of the bench sheet, as written there; ``low`` and ``high`` [Pa.s] at
    ``temperature`` [K] are their numbers, ``None`` where there is none.
    """

    probability: float | None
    rule: str
    decision: str
    limits: str
    low: float | None = None
    high: float | None = None
    temperature: float | None = None


@dataclass(frozen=True, slots=True)
class Finding:
    """What a careful colleague would have noticed, and what to do about it.

    ``effect`` and ``detectable`` are relative changes of the viscosity (0.01 is one percent);
    ``drops`` are drop numbers of the set. ``severity`` is ``error``, ``warning`` or ``note``.
    """

    code: str
    severity: str
    message: str
    remedy: str
    drops: tuple[int, ...] = ()
    statistic: float | None = None
    p_value: float | None = None
    effect: float | None = None
    detectable: float | None = None


@dataclass(frozen=True, slots=True)
class TemperatureFitResult:
    """A temperature law fitted to the run sets of one liquid.

    ``law`` is its name in the bench sheet, ``equation`` in words; ``parameters`` pairs names with
    values, ``covariance`` is theirs, in the products of their units. ``sets`` were fitted, at
    ``temperatures`` in kelvin; ``residuals`` are ln(measured/fitted) and ``slopes`` the fitted d
    ln(viscosity)/dT there, 1/K. ``chi_squared`` is ``None`` where the sets have no errors of their
    own. ``viscosity_at_reference`` is the curve's own value, from all sets together.
    """

    liquid: str
    law: str
    title: str
    equation: str
    source: str
    parameters: tuple[tuple[str, Quantity], ...]
    covariance: tuple[tuple[float, ...], ...]
    sets: tuple[str, ...]
    temperatures: tuple[float, ...]
    residuals: tuple[float, ...]
    slopes: tuple[float, ...]
    chi_squared: float | None
    dof: int
    p_value: float | None
    reference_temperature: float | None
    viscosity_at_reference: Measured | None


@dataclass(frozen=True, slots=True)
class SecondOrderResult:
    """What the second-order terms of some inputs would do to the linear result, not applied.

    ``change_of_u`` is relative: 0.01 would make the standard uncertainty 1 % larger. ``shift`` is
    that of the mean of the viscosity, Pa.s.
    """

    inputs: tuple[str, ...]
    change_of_u: float
    shift: float


@dataclass(frozen=True, slots=True)
class ConstantUsed:
    """The constant of a calibrated tube and a ball [m2/s2], and what it rests on.

    ``file`` is empty where it was typed by hand; ``certificates`` are those of the reference
    liquids, each with the liquid's name where it is known.
    """

    tube: str
    ball: str
    constant: Quantity
    file: str
    certificates: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Reach:
    """The smallest change that a test of the set would have found four times of five.

    ``code`` is that of the finding it would have made, ``what`` says it in words, and
    ``detectable`` is a relative change of the viscosity.
    """

    code: str
    what: str
    detectable: float


@dataclass(frozen=True, slots=True)
class RunSetResult:
    """Everything a reduction says of one run set; temperatures in kelvin, all else SI.

    ``viscosity`` is ``None`` where none can be had; ``viscosity_at_reference`` is ``None``
    without a temperature slope or a reference temperature. ``reynolds``, ``diameter_ratio``,
    ``shear_rate`` and ``shear_stress`` are the largest of the set. ``linear`` is the viscosity as
    the law of propagation gives it; ``monte_carlo`` is ``None`` where nothing was drawn, and
    ``conformity`` without a specification. ``constants`` are those of calibrated tubes,
    and ``reach`` says what the tests of the set would have found.
    """

    name: str
    status: str
    summary: str
    n_drops: int
    n_balls: int
    n_read: int
    tube: str
    liquid: str
    temperature: Quantity | None
    reference_temperature: float | None
    viscosity: Measured | None
    viscosity_at_reference: Measured | None
    kinematic_viscosity: Measured | None
    stokes_viscosity: Quantity | None
    liquid_density: float | None
    reynolds: float | None
    diameter_ratio: float | None
    shear_rate: float | None
    shear_stress: float | None
    corrections: tuple[Correction, ...]
    budget: tuple[BudgetLine, ...]
    balls: tuple[BallResult, ...]
    drops: tuple[DropResult, ...]
    findings: tuple[Finding, ...]
    linear: Measured | None = None
    monte_carlo: MonteCarloResult | None = None
    conformity: Conformity | None = None
    improvements: tuple[Improvement, ...] = ()
    second_order: SecondOrderResult | None = None
    constants: tuple[ConstantUsed, ...] = ()
    reach: tuple[Reach, ...] = ()

    @property
    def interval(self) -> tuple[float, float]:
        """Coverage interval of the viscosity, in Pa.s; NaN where there is no viscosity."""
        if self.viscosity is None:
            return (math.nan, math.nan)
        return (self.viscosity.low, self.viscosity.high)

    def count(self, severity: str) -> int:
        """How many findings have the severity."""
        return sum(finding.severity == severity for finding in self.findings)
