"""What the page shows of each run set, and the overview of several."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from plumbfall.report.improvement_view import halving_view
from plumbfall.report.observed import Observed
from plumbfall.report.page_pictures import Picture, pictures, residual_pictures
from plumbfall.report.scales import CELSIUS, Scale
from plumbfall.report.set_tables import (
    ball_view,
    budget_view,
    correction_view,
    drop_view,
    finding_evidence,
)
from plumbfall.report.views import (
    BOTH_WAYS,
    Fact,
    Headline,
    Product,
    TableView,
    facts,
    headline,
    product,
    set_scale,
)
from plumbfall.report.ways_table import ways_view
from plumbfall.report.words import NOT_SUPPLIED, VERDICTS
from plumbfall.results import Finding, RunSetResult

if TYPE_CHECKING:
    from plumbfall.bench.records import Bench
    from plumbfall.report.report import Report

__all__ = [
    "OverviewRow",
    "SetPage",
    "overview",
    "overview_row",
    "set_page",
]

_PERCENT = Scale("%", 100.0)


@dataclass(frozen=True, slots=True)
class SetPage:
    """Everything the page shows of one run set, as strings."""

    anchor: str
    name: str
    status: str
    verdict: str
    apparent: bool
    headline: Headline | None
    facts: list[Fact]
    findings: list[tuple[Finding, str]]
    notes: list[tuple[Finding, str]]
    pictures: list[Picture]
    tables: list[TableView]
    conditions: list[Fact]
    product: Product | None
    reach: list[tuple[str, str]]


@dataclass(frozen=True, slots=True)
class OverviewRow:
    """One line of the overview of several run sets."""

    anchor: str
    name: str
    status: str
    verdict: str
    headline: Headline | None
    drops: str
    balls: str
    warnings: str
    product: str


def overview(report: Report) -> list[OverviewRow]:
    """Return one line a run set."""
    unit = report.bench.viscosity_unit
    return [overview_row(view.result, index, unit) for index, view in enumerate(report, 1)]


def overview_row(result: RunSetResult, index: int, viscosity_unit: str | None) -> OverviewRow:
    """Return the line of one run set."""
    return OverviewRow(
        anchor=_anchor(index),
        name=result.name,
        status=result.status,
        verdict=VERDICTS.get(result.status, result.status),
        headline=_headline(result, viscosity_unit),
        drops=f"{result.n_drops} of {result.n_read}",
        balls=str(result.n_balls),
        warnings=str(result.count("warning")),
        product=judged.decision if (judged := product(result.conformity)) else "–",
    )


def set_page(result: RunSetResult, index: int, bench: Bench, seen: Observed | None) -> SetPage:
    """Return what the page shows of a run set, its drawings included."""
    viscosity_unit = bench.viscosity_unit
    scale = set_scale(result, viscosity_unit)
    tables = [drop_view(result, scale)]
    if result.balls:
        tables.append(ball_view(result, scale))
    if result.corrections:
        tables.append(correction_view(result))
    if result.budget:
        tables.append(budget_view(result, scale))
    if result.improvements:
        tables.append(halving_view(result.improvements))
    if (both := ways_view(result, scale)) is not None:
        tables.append(both)
    if seen is not None and seen.marks:
        tables.insert(1, _marks_view(result, seen.marks))
    found = [(finding, finding_evidence(finding)) for finding in _by_weight(result.findings)]
    both_ways = "" if both is None else BOTH_WAYS  # the table says it better
    return SetPage(
        anchor=_anchor(index),
        name=result.name,
        status=result.status,
        verdict=VERDICTS.get(result.status, result.status),
        apparent=any(finding.code == "shear-dependence" for finding in result.findings),
        headline=_headline(result, viscosity_unit),
        facts=[fact for fact in facts(result, scale) if fact.label != both_ways],
        findings=[one for one in found if one[0].severity != "note"],
        notes=[one for one in found if one[0].severity == "note"],
        pictures=pictures(result, index, viscosity_unit) + residual_pictures(result, index),
        tables=tables,
        conditions=_conditions(result, bench, seen or Observed()),
        product=product(result.conformity),
        reach=[
            (one.what, _PERCENT.alone(one.detectable, 2))
            for one in result.reach
            if one.code not in {finding.code for finding in result.findings}
        ],
    )


def _anchor(index: int) -> str:
    """Return an id that no name of a run set can break."""
    return f"set-{index}"


def _headline(result: RunSetResult, viscosity_unit: str | None) -> Headline | None:
    temperature = None if result.temperature is None else result.temperature.value
    return headline(result.viscosity, set_scale(result, viscosity_unit), temperature)


def _by_weight(findings: tuple[Finding, ...]) -> list[Finding]:
    order = {"error": 0, "warning": 1, "note": 2}
    return sorted(findings, key=lambda finding: order.get(finding.severity, 3))


def _marks_view(result: RunSetResult, marks: dict[tuple[str, int, int], str]) -> TableView:
    rows = [
        (str(drop.drop), str(drop.line), marks.get((drop.file, drop.line, drop.drop), ""))
        for drop in result.drops
    ]
    return TableView(
        caption="Clock readings at the marks in s, as recorded",
        headings=("Drop", "Line", "At successive marks"),
        kinds="nnt",
        rows=tuple(rows),
    )


def _conditions(result: RunSetResult, bench: Bench, seen: Observed) -> list[Fact]:
    entry = bench.sets.get(result.name)
    timers = _named(seen.timers, entry.timer if entry else None, bench.timers)
    thermometers = _named(
        seen.thermometers, entry.thermometer if entry else None, bench.thermometers
    )
    low, high = (CELSIUS.fixed(reading, 2) for reading in seen.temperatures)
    shown = [
        Fact("Liquid", result.liquid or NOT_SUPPLIED),
        Fact("Tube", result.tube or NOT_SUPPLIED),
        Fact("Timer", timers),
        Fact("Thermometer", thermometers),
        Fact("Temperatures as read", f"{low} to {high}", CELSIUS.unit),
        Fact("Performed", " to ".join(seen.started).replace("T", " ") or NOT_SUPPLIED),
        Fact("Operator", ", ".join(seen.operators) or NOT_SUPPLIED),
    ]
    if entry is not None and entry.filled is not None:
        shown.insert(5, Fact("Tube filled", entry.filled.isoformat(sep=" ")))
    return shown


def _named(rows: tuple[str, ...], entry: str | None, known: Mapping[str, object]) -> str:
    """Return what the rows name, else what the set's entry does, else the only one there is."""
    if rows:
        return ", ".join(rows)
    return entry or (next(iter(known)) if len(known) == 1 else NOT_SUPPLIED)
