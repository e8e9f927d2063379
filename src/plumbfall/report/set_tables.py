"""Drops, balls, corrections, budget and findings of a run set as tables of strings."""

from __future__ import annotations

import os
from collections.abc import Iterable

from plumbfall.report.rounding import NO_VALUE
from plumbfall.report.scales import CELSIUS, Scale, scale_for
from plumbfall.report.summary import counted
from plumbfall.report.views import TableView, dof_text, drop_place
from plumbfall.report.words import NOT_SUPPLIED
from plumbfall.results import BudgetLine, DropResult, Finding, RunSetResult

__all__ = [
    "MOST_DROPS",
    "ball_view",
    "budget_view",
    "correction_view",
    "drop_view",
    "finding_evidence",
    "unused_view",
    "why_not_used",
]

MOST_DROPS = 1000
"""Above so many drops a page lists only those that were not used or that a finding names."""

MOST_INPUTS = 60
"""So many inputs of a budget are listed; the rest, always the smallest, are summed up."""

_PLAIN = Scale("")
_PERCENT = Scale("%", 100.0)


def drop_view(result: RunSetResult, scale: Scale) -> TableView:
    """Return the drops in order, void and excluded ones with the reason they carry."""
    place = drop_place(result, scale)
    named = {number for finding in result.findings for number in finding.drops}
    drops = list(result.drops)
    note = ""
    if len(drops) > MOST_DROPS:
        drops = [d for d in drops if not d.used or d.findings or d.drop in named]
        note = (
            f"{counted(len(result.drops), 'drop')} in all; listed are those not used and those "
            "that a finding names. Every drop is in drops.csv and report.json."
        )
    files = {drop.file for drop in result.drops}
    unit = scale.unit
    return TableView(
        caption=f"Drops, as recorded in {files.pop()}" if len(files) == 1 else "Drops, as recorded",
        headings=(
            "Drop", "Ball", "Line" if not files else "File and line", "Time / s",
            "Temperature / degC", f"Viscosity / {unit}", f"At the set's temperature / {unit}",
            "Residual / %", f"Stokes' law alone / {unit}", "Fall speed / mm/s", "Reynolds number",
            "Wall factor", "Inertia factor", "End factor", "Notes and findings",
        ),
        kinds="ntnnnnnnnnnnnnt" if not files else "nttnnnnnnnnnnnt",
        rows=tuple(_drop_row(drop, scale, place, with_file=bool(files)) for drop in drops),
        marks=tuple(_mark(drop, named) for drop in drops),
        terms=("residual", "Stokes' law", "Reynolds number", "drag factor"),
        note=note,
    )  # fmt: skip


def _drop_row(drop: DropResult, scale: Scale, place: int, *, with_file: bool) -> tuple[str, ...]:
    def viscosity(value: float | None) -> str:
        return NO_VALUE if value is None else scale.bound(value, place)

    line = f"{os.path.basename(drop.file)}:{drop.line}" if with_file else str(drop.line)
    return (
        str(drop.drop),
        drop.ball,
        line,
        _as_recorded(drop.time),
        CELSIUS.fixed(drop.temperature, 2),
        viscosity(drop.viscosity),
        viscosity(drop.viscosity_at_set),
        NO_VALUE if drop.residual is None else _PERCENT.fixed(drop.residual, 2),
        viscosity(drop.stokes_viscosity),
        Scale("mm/s", 1e3).alone(drop.fall_speed),
        _PLAIN.alone(drop.reynolds, 3),
        _PLAIN.alone(drop.wall, 5),
        _PLAIN.alone(drop.inertia, 5),
        _PLAIN.alone(drop.end, 5),
        _remarks(drop),
    )


def _as_recorded(time: float) -> str:
    """Return a time with the digits it has, at most ten of them."""
    return _PLAIN.pair(time, 0.0).value


def _remarks(drop: DropResult) -> str:
    remarks = [drop.note] if drop.note else []
    if not drop.used:
        remarks.insert(0, why_not_used(drop))
    return ": ".join(remarks) + (f" [{', '.join(drop.findings)}]" if drop.findings else "")


def why_not_used(drop: DropResult) -> str:
    """Return ``void``, ``excluded``, or that a drop recorded as used has no viscosity."""
    return "no viscosity" if drop.status == "used" else drop.status


def unused_view(results: Iterable[RunSetResult]) -> TableView:
    """Return every row that is in no result, with the reason or the rule."""
    rows = tuple(
        (
            result.name,
            str(drop.drop),
            drop.ball,
            f"{os.path.basename(drop.file)}:{drop.line}" if drop.file else str(drop.line),
            _as_recorded(drop.time),
            why_not_used(drop),
            drop.note or NOT_SUPPLIED,
        )
        for result in results
        for drop in result.drops
        if not drop.used
    )
    return TableView(
        caption="Rows that are in no result",
        headings=(
            "Run set", "Drop", "Ball", "File and line", "Time / s", "Status", "Reason or rule",
        ),
        kinds="tnttntt",
        rows=rows,
    )  # fmt: skip


def _mark(drop: DropResult, named: set[int]) -> str:
    if not drop.used:
        return "unused"
    return "flagged" if drop.findings or drop.drop in named else ""


def ball_view(result: RunSetResult, scale: Scale) -> TableView:
    """Return the mean of each ball, whose mean in turn is the value of the set."""
    rows = tuple(
        (
            ball.ball,
            str(ball.n_drops),
            scale.pair(ball.viscosity.value, ball.viscosity.u).concise,
            _PLAIN.alone(ball.reynolds, 3),
            _PLAIN.alone(ball.diameter_ratio),
            _PLAIN.alone(ball.shear_rate, 3),
            _PLAIN.alone(ball.shear_stress, 3),
        )
        for ball in result.balls[:MOST_DROPS]
    )
    more = len(result.balls) - len(rows)
    return TableView(
        caption="Means of the balls; digits in brackets are the standard uncertainty",
        headings=(
            "Ball", "Drops", f"Viscosity / {scale.unit}", "Reynolds number", "Diameter ratio",
            "Shear rate / 1/s", "Shear stress / Pa",
        ),
        kinds="tnnnnnn",
        rows=rows,
        note=f"and {counted(more, 'more ball')}, listed in report.json" if more else "",
    )  # fmt: skip


def correction_view(result: RunSetResult) -> TableView:
    """Return what Stokes' viscosity is divided by, with method and source."""
    return TableView(
        caption="Corrections: Stokes' viscosity is divided by each factor",
        headings=("Correction", "Factor", "Method", "Source"),
        kinds="tntt",
        rows=tuple(
            (c.name, _PLAIN.fixed(c.factor, 5), c.method, c.source) for c in result.corrections
        ),
        terms=("drag factor",),
    )


def budget_view(result: RunSetResult, scale: Scale) -> TableView:
    """Return the uncertainty budget, largest part first, with a total for each scope."""
    lines = sorted(result.budget, key=lambda line: -line.share)
    rows = [_budget_row(line, scale) for line in lines[:MOST_INPUTS]]
    marks = [""] * len(rows)
    if rest := lines[MOST_INPUTS:]:
        rows.append(_total_row(f"{counted(len(rest), 'smaller input')}", rest, scale, ""))
        marks.append("total")
    for scope in ("shared", "ball", "drop"):
        if part := [line for line in lines if line.scope == scope]:
            rows.append(_total_row(f"all of scope {scope}", part, scale, scope))
            marks.append("total")
    if lines:
        rows.append(_total_row("together", lines, scale, ""))
        marks.append("total")
    return TableView(
        caption="Uncertainty budget of the viscosity, largest part first",
        headings=(
            "Input", "Value", "Standard uncertainty", "Unit", "Distribution",
            "Degrees of freedom", f"Sensitivity / {scale.unit} per unit",
            f"Contribution / {scale.unit}", "Share / %", "Scope",
        ),
        kinds="tnnutnnnnt",
        rows=tuple(rows),
        marks=tuple(marks),
        terms=("sensitivity", "share", "scope", "degrees of freedom"),
    )  # fmt: skip


def _budget_row(line: BudgetLine, scale: Scale) -> tuple[str, ...]:
    unit = scale_for(line.unit, max(abs(line.value), abs(line.u)))
    pair = unit.pair(line.value, line.u)
    power = f"e{pair.exponent}" if pair.exponent else ""
    return (
        line.input,
        pair.value + power,
        (pair.u or "0") + (power if pair.u else ""),
        unit.unit,
        line.distribution,
        dof_text(line.dof),
        _PLAIN.alone(line.sensitivity * scale.factor / unit.factor, 3),
        scale.alone(line.contribution, 2),
        _PERCENT.fixed(line.share, 1),
        line.scope,
    )


def _total_row(
    label: str, lines: Iterable[BudgetLine], scale: Scale, scope: str
) -> tuple[str, ...]:
    lines = list(lines)
    total = sum(line.contribution**2 for line in lines) ** 0.5
    share = sum(line.share for line in lines)
    return (
        label, "", "", "", "", "", "",
        scale.alone(total, 2), _PERCENT.fixed(share, 1), scope,
    )  # fmt: skip


def finding_evidence(finding: Finding) -> str:
    """Return the numbers behind a finding, as far as it has any."""
    parts = []
    if finding.drops:
        noun = "drop" if len(finding.drops) == 1 else "drops"
        shown = ", ".join(map(str, finding.drops[:20]))
        more = f" and {len(finding.drops) - 20} more" if len(finding.drops) > 20 else ""
        parts.append(f"{noun} {shown}{more}")
    if finding.statistic is not None:
        parts.append(f"statistic {_PLAIN.alone(finding.statistic, 3)}")
    if finding.p_value is not None:
        parts.append(f"p-value {_PLAIN.alone(finding.p_value, 2)}")
    if finding.effect is not None:
        parts.append(f"effect {_PERCENT.alone(finding.effect, 2)} %")
    if finding.detectable is not None:
        parts.append(f"smallest that would show {_PERCENT.alone(finding.detectable, 2)} %")
    return "; ".join(parts)
