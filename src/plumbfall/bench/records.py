"""The bench sheet as records in SI units: what the equipment, the liquid and the runs are.

Every quantity is an :class:`~plumbfall.estimate.Estimate` whose name is its key path in the
bench sheet, or ``None`` where the sheet does not give it. Records hold no arithmetic.
"""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from plumbfall.bench.read_only import ReadOnly
from plumbfall.estimate import Estimate

__all__ = [
    "Balance",
    "Ball",
    "Bench",
    "Constant",
    "Gauge",
    "Identity",
    "Liquid",
    "Material",
    "Methods",
    "Reference",
    "ReferencePoint",
    "RunSetEntry",
    "Scatter",
    "Site",
    "Specification",
    "Thermometer",
    "Timer",
    "TimingHints",
    "Tube",
]


def _none() -> Mapping[str, Any]:
    return ReadOnly()


@dataclass(frozen=True, slots=True, kw_only=True)
class Identity:
    """What an auditor asks of a piece of equipment; blank where not supplied."""

    identity: str = ""
    certificate: str = ""
    calibrated: dt.date | None = None
    due: dt.date | None = None
    note: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class Site:
    """Local gravity, or what it is computed from; all ``None`` means standard gravity."""

    gravity: Estimate | None = None
    latitude: Estimate | None = None
    elevation: Estimate | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Timer:
    """A clock: true interval = reading x (1 + rate) - bias.

    ``per_drop`` is the standard deviation of one timed interval, start and stop together;
    ``resolution`` is that of one clock reading. ``usual_values`` names the keys whose value
    stands in from ``kind``, with ``usual_source`` as their source.
    """

    name: str
    kind: str | None
    per_drop: Estimate
    bias: Estimate
    rate: Estimate
    resolution: Estimate | None
    usual_values: tuple[str, ...] = ()
    usual_source: str = ""
    identity: Identity = field(default_factory=Identity)


@dataclass(frozen=True, slots=True, kw_only=True)
class Thermometer:
    """``correction`` is added to every reading and shared; ``per_reading`` is not shared."""

    name: str
    correction: Estimate
    per_reading: Estimate | None = None
    identity: Identity = field(default_factory=Identity)


@dataclass(frozen=True, slots=True, kw_only=True)
class Gauge:
    """``correction`` is added to every diameter measured with it."""

    name: str
    correction: Estimate
    identity: Identity = field(default_factory=Identity)


@dataclass(frozen=True, slots=True, kw_only=True)
class Balance:
    """``correction`` is added to every mass read on it."""

    name: str
    correction: Estimate
    identity: Identity = field(default_factory=Identity)


@dataclass(frozen=True, slots=True, kw_only=True)
class Tube:
    """A fall tube. ``marks`` are distances down from the first mark, the first one included.

    A ``distance`` of the sheet becomes the second of two marks (named ``tube.X.distance``);
    a mark of a list is named ``tube.X.marks[0]``, ``tube.X.marks[1]`` and so on.
    A calibrated tube has ``constant`` and may lack all geometry.
    """

    name: str
    kind: str = "vertical"
    bore: Estimate | None = None
    marks: tuple[Estimate, ...] = ()
    surface_above: Estimate | None = None
    bottom_below: Estimate | None = None
    release_above: Estimate | None = None
    release_offset: Estimate | None = None
    surface: str = "free"
    tilt: Estimate | None = None
    expansion: Estimate | None = None
    measured_at: float | None = None
    constant: tuple[str, ...] = ()
    identity: Identity = field(default_factory=Identity)


@dataclass(frozen=True, slots=True, kw_only=True)
class Material:
    """What balls are made of; its density is shared by all balls of the material."""

    name: str
    density: Estimate
    expansion: Estimate | None = None
    identity: Identity = field(default_factory=Identity)


@dataclass(frozen=True, slots=True, kw_only=True)
class Ball:
    """A ball, or a lot of balls of which each drop uses a fresh one.

    Exactly one of ``density`` (own), ``material`` and ``mass`` says how heavy it is. ``density``
    and ``expansion`` given by a material are the material's own estimates, names included.
    ``mass`` is the reading in air for ``weighed_together`` balls. ``measured_at`` is the
    temperature, in kelvin, at which diameter and density hold.
    """

    name: str
    diameter: Estimate
    density: Estimate | None = None
    material: str | None = None
    mass: Estimate | None = None
    weighed_together: int = 1
    lot: bool = False
    spread: Estimate | None = None
    gauge: str | None = None
    balance: str | None = None
    expansion: Estimate | None = None
    measured_at: float = 293.15
    identity: Identity = field(default_factory=Identity)


@dataclass(frozen=True, slots=True, kw_only=True)
class Specification:
    """Limits a viscosity is judged by, either one possibly absent, at a temperature in kelvin."""

    low: Estimate | None
    high: Estimate | None
    temperature: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Liquid:
    """A liquid: density at ``density_temperature`` (kelvin), volumetric ``expansion``.

    ``viscosity_slope`` is d ln(viscosity)/dT in 1/K.
    """

    name: str
    density: Estimate
    density_temperature: float | None = None
    expansion: Estimate | None = None
    viscosity_slope: Estimate | None = None
    specification: Specification | None = None
    identity: Identity = field(default_factory=Identity)


@dataclass(frozen=True, slots=True, kw_only=True)
class RunSetEntry:
    """What the bench sheet says of a run set beyond its timing file."""

    name: str
    tube: str | None = None
    liquid: str | None = None
    ball: str | None = None
    timer: str | None = None
    thermometer: str | None = None
    temperature: Estimate | None = None
    filled: dt.datetime | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Scatter:
    """The bench's known repeatability: relative standard deviation of one drop, and its dof."""

    relative: Estimate
    dof: float


@dataclass(frozen=True, slots=True, kw_only=True)
class ReferencePoint:
    """One line of a reference liquid's certificate; ``temperature`` in kelvin."""

    temperature: float
    viscosity: Estimate


@dataclass(frozen=True, slots=True, kw_only=True)
class Reference:
    """A certified liquid: points of a certificate, or a law such as water's."""

    name: str
    liquid: str | None = None
    points: tuple[ReferencePoint, ...] = ()
    correlation: float = 1.0
    law: str | None = None
    expires: dt.date | None = None
    identity: Identity = field(default_factory=Identity)


@dataclass(frozen=True, slots=True, kw_only=True)
class Constant:
    """A tube constant, from a file that ``calibrate`` wrote or typed by hand (m2/s2)."""

    name: str
    tube: str | None = None
    ball: str | None = None
    value: Estimate | None = None
    file: str | None = None
    identity: Identity = field(default_factory=Identity)


@dataclass(frozen=True, slots=True, kw_only=True)
class TimingHints:
    """How to read the timing file where its own headings do not say."""

    columns: Mapping[str, str] = field(default_factory=_none)
    units: Mapping[str, str] = field(default_factory=_none)
    delimiter: str | None = None
    decimal: str | None = None
    encoding: str | None = None
    header_row: int | None = None
    sheet: str | None = None
    thousands: str | None = None
    transposed: bool = False


@dataclass(frozen=True, slots=True, kw_only=True)
class Methods:
    """Choices among the registered laws; ``None`` means the default, which the report names.

    ``drag`` names every law of the drag that was chosen, those of ``walls`` and ``inertia`` too.
    """

    drag: str | None = None
    ends: str | None = None
    run_in: str | None = None
    walls: str | None = None
    inertia: str | None = None
    slope: str | None = None
    model_uncertainty: Estimate | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Bench:
    """A whole bench sheet. Mappings are read-only and keep the order of the sheet."""

    title: str = ""
    reference_temperature: float | None = None
    coverage: float = 0.95
    viscosity_unit: str | None = None
    laboratory: Mapping[str, str] = field(default_factory=_none)
    report: Mapping[str, str] = field(default_factory=_none)
    sample: Mapping[str, str] = field(default_factory=_none)
    site: Site = field(default_factory=Site)
    timers: Mapping[str, Timer] = field(default_factory=_none)
    thermometers: Mapping[str, Thermometer] = field(default_factory=_none)
    gauges: Mapping[str, Gauge] = field(default_factory=_none)
    balances: Mapping[str, Balance] = field(default_factory=_none)
    tubes: Mapping[str, Tube] = field(default_factory=_none)
    materials: Mapping[str, Material] = field(default_factory=_none)
    balls: Mapping[str, Ball] = field(default_factory=_none)
    liquids: Mapping[str, Liquid] = field(default_factory=_none)
    sets: Mapping[str, RunSetEntry] = field(default_factory=_none)
    scatter: Scatter | None = None
    references: Mapping[str, Reference] = field(default_factory=_none)
    constants: Mapping[str, Constant] = field(default_factory=_none)
    timings: TimingHints = field(default_factory=TimingHints)
    methods: Methods = field(default_factory=Methods)
    limits: Mapping[str, float | bool] = field(default_factory=_none)
    path: str = ""
    sha256: str = ""
    source: Mapping[str, Any] = field(default_factory=_none)
    """The sheet as written (parsed TOML or the dict given), for ``inspect`` and the report."""

    def quantities(self) -> dict[str, Estimate]:
        """Every estimate of the sheet by key path, in the order of the sheet."""
        return dict(_walk(self))

    def _repr_html_(self) -> str:
        from plumbfall.bench.display import bench_markup

        return bench_markup(self.title, self.path, self.quantities())


def _walk(record: object) -> list[tuple[str, Estimate]]:
    if isinstance(record, Estimate):
        return [(record.name, record)]
    if isinstance(record, Mapping):
        return [pair for value in record.values() for pair in _walk(value)]
    if isinstance(record, tuple):
        return [pair for value in record for pair in _walk(value)]
    names = getattr(type(record), "__dataclass_fields__", ())
    return [pair for name in names if name != "source" for pair in _walk(getattr(record, name))]
