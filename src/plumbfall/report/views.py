"""A run set's numbers as the strings that the page and the text both show."""

from __future__ import annotations

import math
from dataclasses import dataclass

from plumbfall.report.rounding import NO_VALUE
from plumbfall.report.scales import CELSIUS, Scale, scale_for, viscosity_scale
from plumbfall.report.summary import basis, counted, is_apparent, percent, way
from plumbfall.results import (
    Conformity,
    ConstantUsed,
    Measured,
    MonteCarloResult,
    Quantity,
    RunSetResult,
)

__all__ = [
    "BOTH_WAYS",
    "Fact",
    "Headline",
    "Product",
    "TableView",
    "drop_place",
    "facts",
    "headline",
    "product",
    "set_scale",
]

BOTH_WAYS = "Linear against Monte Carlo"


@dataclass(frozen=True, slots=True)
class Fact:
    """A label and what is said under it.

    ``term`` is a word to explain where first printed, ``note`` what is said small beside the text.
    """

    label: str
    text: str
    unit: str = ""
    term: str = ""
    note: str = ""


@dataclass(frozen=True, slots=True)
class Product:
    """What the specification says of the product, for the head of a run set."""

    decision: str
    told: str


@dataclass(frozen=True, slots=True)
class TableView:
    """A table of strings. ``kinds`` has one letter a column: ``n`` number, ``t`` text, ``u`` unit.

    ``marks`` names the style of each row: empty, ``unused``, ``flagged`` or ``total``.
    """

    caption: str
    headings: tuple[str, ...]
    kinds: str
    rows: tuple[tuple[str, ...], ...]
    marks: tuple[str, ...] = ()
    terms: tuple[str, ...] = ()
    note: str = ""


@dataclass(frozen=True, slots=True)
class Headline:
    """The value with its bounds, in parts, so that each shows it in its own way."""

    pair: str
    unit: str
    low: str
    high: str
    coverage: str
    way: str
    temperature: str


def set_scale(result: RunSetResult, viscosity_unit: str | None) -> Scale:
    """Return the unit that all viscosities of a set are shown in."""
    known = result.viscosity or result.stokes_viscosity
    return viscosity_scale(0.0 if known is None else known.value, viscosity_unit)


def drop_place(result: RunSetResult, scale: Scale) -> int:
    """Return the decimal place that single drops are shown to, as decimal exponent.

    That of the set's standard uncertainty, or the fifth digit where that is finer: the scatter
    of drops may be far below what all of them share.
    """
    known = result.viscosity or result.stokes_viscosity
    if known is None or not known.value:
        return -4
    fifth = math.floor(math.log10(abs(known.value * scale.factor))) - 4
    return min(fifth, scale.pair(known.value, known.u).place) if known.u else fifth


def headline(measured: Measured | None, scale: Scale, temperature: float | None) -> Headline | None:
    """Return a measured viscosity with its bounds as strings; ``None`` where there is none."""
    if measured is None:
        return None
    pair = scale.pair(measured.value, measured.expanded)
    return Headline(
        pair=pair.plus_minus,
        unit=scale.unit,
        low=scale.bound(measured.low, pair.place),
        high=scale.bound(measured.high, pair.place),
        coverage=percent(measured.coverage_probability),
        way=way(measured),
        temperature=CELSIUS.fixed(temperature, 2),
    )


def facts(result: RunSetResult, scale: Scale) -> list[Fact]:
    """Return everything about a set that is a single figure, in the order it is asked for."""
    shown: list[Fact] = []
    if result.viscosity is not None:
        shown += _of_measured(result.viscosity, scale)
    if result.linear is not None and result.monte_carlo is not None:
        shown.append(_of_draws(result.linear, result.monte_carlo, scale))
    shown += _of_temperature(result)
    if result.viscosity_at_reference is not None:
        at = CELSIUS.fixed(result.reference_temperature, 2)
        shown.append(_interval(f"Viscosity at {at} degC", result.viscosity_at_reference, scale))
    if result.conformity is not None:
        shown.append(_of_conformity(result.conformity))
    if result.kinematic_viscosity is not None:
        measured = result.kinematic_viscosity
        where = scale_for(measured.unit, measured.value)
        shown.append(_interval("Kinematic viscosity", measured, where, "kinematic viscosity"))
    if result.stokes_viscosity is not None:
        text = scale.alone(result.stokes_viscosity.value, 5)
        shown.append(Fact("By Stokes' law alone", text, scale.unit, "Stokes' law"))
    counts = f"{result.n_drops} of {counted(result.n_read, 'drop')}"
    shown.append(Fact("Drops and balls", f"{counts}, {counted(result.n_balls, 'ball')}"))
    shown += [_of_constant(used) for used in result.constants]
    return shown + _of_flow(result)


def _of_constant(used: ConstantUsed) -> Fact:
    """Say which tube constant was used, and on which certificates it rests."""
    scale = scale_for(used.constant.unit, used.constant.value)
    text = f"{scale.pair(used.constant.value, used.constant.u).concise} {scale.unit}, "
    text += f"from {used.file}" if used.file else "typed by hand, independent of all else"
    if used.certificates:
        text += f", by {', '.join(used.certificates)}"
    return Fact(f"Tube constant K, ball {used.ball}", text, scale.unit, "tube constant")


def _of_measured(measured: Measured, scale: Scale) -> list[Fact]:
    wide = scale.pair(measured.value, measured.expanded)
    narrow = scale.pair(measured.value, measured.u)
    bounds = f"{scale.bound(measured.low, wide.place)} to {scale.bound(measured.high, wide.place)}"
    relative = Scale("%", 100.0).alone(abs(measured.relative_expanded), 2)
    shown = [
        Fact(
            f"Bounds ({percent(measured.coverage_probability)} coverage interval)",
            bounds,
            scale.unit,
            "coverage interval",
        ),
        Fact(
            "Expanded uncertainty",
            f"{wide.u or '0'} {scale.unit}, {relative} %",
            term="expanded uncertainty",
        ),
    ]
    if measured.coverage_factor is not None:
        factor = f"{measured.coverage_factor:.2f}"
        shown.append(Fact("Coverage factor k", factor, term="coverage factor"))
    shown.append(Fact("Standard uncertainty", narrow.u or "0", scale.unit, "standard uncertainty"))
    if measured.effective_dof is not None:
        shown.append(
            Fact(
                "Effective degrees of freedom",
                dof_text(measured.effective_dof),
                term="degrees of freedom",
            )
        )
    shown.append(Fact("Way of propagation", measured.method, term=measured.method))
    return shown


def product(judged: Conformity | None) -> Product | None:
    """Return the decision on the product, and with what it was compared."""
    if judged is None:
        return None
    if judged.probability is None:
        return Product("Undecided", f"with {judged.limits}: {judged.rule}")
    told = f"with {judged.limits}, probability {_probability(judged.probability)}"
    return Product(judged.decision.replace("-", " ").capitalize(), told)


def _of_conformity(judged: Conformity) -> Fact:
    text = f"{judged.decision.replace('-', ' ')} with {judged.limits}"
    if judged.probability is not None:
        text += f", probability {_probability(judged.probability)}"
    return Fact("Conformity of the product", text, note=judged.rule)


def _probability(probability: float) -> str:
    """Return a percentage; what is nearly none or nearly all is not said to be it."""
    if probability < 5e-4:
        return "below 0.1 %"
    if probability > 0.9995:
        return "above 99.9 %"
    return f"{Scale('%', 100.0).fixed(probability, 1)} %"


def _of_draws(linear: Measured, drawn: MonteCarloResult, scale: Scale) -> Fact:
    """Say in one line how the linear bounds compare with those of the draws."""
    place = scale.pair(linear.value, linear.expanded).place
    bounds = [scale.bound(at, place) for at in (linear.low, linear.high)]
    found = [
        scale.bound(at, place) if math.isfinite(at) else "unlimited"
        for at in (drawn.low, drawn.high)
    ]
    verdict = "agrees" if drawn.validated_linear else "does not agree"
    text = f"linear {' to '.join(bounds)} {scale.unit} {verdict} with {' to '.join(found)}"
    text += f" of {counted(drawn.draws, 'draw')}"
    if drawn.stable is False:
        text += ", too few for bounds that stand"
    return Fact(BOTH_WAYS, text, scale.unit, "monte-carlo")


def dof_text(dof: float) -> str:
    """Return degrees of freedom truncated to a whole number, as the GUM does (G.4.1, note 1)."""
    if math.isnan(dof):
        return NO_VALUE
    return "unlimited" if math.isinf(dof) else str(math.floor(dof + 1e-9))


def _of_temperature(result: RunSetResult) -> list[Fact]:
    if result.temperature is None:
        return [Fact("Temperature", NO_VALUE)]
    text = _quantity(result.temperature, CELSIUS)
    return [Fact("Temperature of the result", text, CELSIUS.unit)]


def _of_flow(result: RunSetResult) -> list[Fact]:
    shown: list[Fact] = []
    if result.reynolds is not None:
        text = Scale("").alone(result.reynolds, 3)
        shown.append(Fact("Largest Reynolds number", text, term="Reynolds number"))
    if result.diameter_ratio is not None:
        text = Scale("").alone(result.diameter_ratio, 4)
        shown.append(Fact("Largest diameter ratio", text, term="diameter ratio"))
    if result.shear_rate is not None:
        text = Scale("").alone(result.shear_rate, 3)
        shown.append(Fact("Largest shear rate", text, "1/s", "shear rate"))
    if result.shear_stress is not None:
        shown.append(Fact("Largest shear stress", Scale("").alone(result.shear_stress, 3), "Pa"))
    if result.liquid_density is not None:
        text = Scale("").alone(result.liquid_density, 5)
        shown.append(Fact("Liquid density at that temperature", text, "kg/m3"))
    if is_apparent(result):
        shown.append(Fact("Kind of value", "apparent viscosity", term="apparent viscosity"))
    return shown


def _interval(label: str, measured: Measured, scale: Scale, term: str = "") -> Fact:
    pair = scale.pair(measured.value, measured.expanded)
    text = f"{pair.plus_minus} {scale.unit} ({basis(measured)})"
    low, high = (scale.bound(bound, pair.place) for bound in (measured.low, measured.high))
    return Fact(label, f"{text}: {low} to {high}", scale.unit, term)


def _quantity(quantity: Quantity, scale: Scale) -> str:
    if quantity.u:
        return scale.pair(quantity.value, quantity.u).concise
    return scale.fixed(quantity.value, 2)
