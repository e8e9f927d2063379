"""The report as plain text for a terminal or a pipe: 80 columns, nothing but characters."""

from __future__ import annotations

import textwrap
from collections.abc import Iterable, Iterator, Sequence
from typing import TYPE_CHECKING

from plumbfall._version import __version__
from plumbfall.report.improvement_view import HALVING, halving_lines
from plumbfall.report.observed import reading_remarks
from plumbfall.report.scales import Scale
from plumbfall.report.set_tables import finding_evidence, why_not_used
from plumbfall.report.summary import counted, visible
from plumbfall.report.temperature_fit_view import fit_facts, fit_heading
from plumbfall.report.views import Fact, facts, set_scale
from plumbfall.report.words import Explainer
from plumbfall.results import Finding, RunSetResult

if TYPE_CHECKING:
    from plumbfall.report.report import Report

__all__ = ["WIDTH", "plain_text", "printable", "text_lines", "wrapped"]

WIDTH = 80
MANY_SETS = 12
TOP_INPUTS = 5

_PLAIN_FORMS = {
    "±": "+/-", "–": "-", "·": ".", "°": "deg", "µ": "u", "²": "2", "³": "3", "×": "x",
    "…": "...", "≤": "<=", "≥": ">=", "’": "'", "“": '"', "”": '"', "é": "e", "ü": "u",
}  # fmt: skip


def plain_text(report: Report) -> str:
    """Return the report as text of at most 80 columns, long names apart.

    With more than twelve run sets only those that are not plainly valid are told in full.
    """
    return "\n".join(text_lines(report)) + "\n"


def printable(text: str, encoding: str | None) -> str:
    """Return a text with what an encoding cannot hold spelled in ASCII.

    Examples
    --------
    >>> printable("851.3 ± 4.2", "ascii")
    '851.3 +/- 4.2'
    """
    try:
        text.encode(encoding or "ascii")
    except UnicodeEncodeError:
        for character, spelled in _PLAIN_FORMS.items():
            text = text.replace(character, spelled)
        return text.encode(encoding or "ascii", "backslashreplace").decode(encoding or "ascii")
    except LookupError:
        return printable(text, "ascii")
    return text


def text_lines(report: Report) -> Iterator[str]:
    """Yield the lines of the report as text."""
    explain = Explainer()
    few = len(report) <= MANY_SETS
    for view in report:
        yield view.summary
        if few or view.status != "valid":
            yield from _of_set(view.result, report.bench.viscosity_unit, explain)
            yield ""
    if not few:
        yield ""
        yield from wrapped("", "Sets that are valid are told in full by --out DIR.")
    for fit in report.temperature_fits:
        yield from wrapped("", visible(fit_heading(fit)))
        yield from _of_facts(fit_facts(fit, report.bench.viscosity_unit), explain)
        yield ""
    yield from _of_findings(report.findings)
    rows = report.rows
    yield from wrapped(
        "",
        f"{counted(rows['read'], 'row')} read = {rows['used']} used + {rows['void']} void + "
        f"{rows['excluded']} excluded by rule",
    )
    for kind, what in reading_remarks(report.timings):
        yield from wrapped(f"{kind}  ", visible(what))
    yield f"plumbfall {__version__}, seed {report.seed}"


def _of_set(result: RunSetResult, unit: str | None, explain: Explainer) -> Iterator[str]:
    scale = set_scale(result, unit)
    yield from _of_findings(result.findings)
    yield from _of_facts(facts(result, scale), explain)
    for drop in result.drops:
        if not drop.used:
            reason = ": ".join(filter(None, (why_not_used(drop), drop.note)))
            where = f"{drop.file}:{drop.line}"
            yield from wrapped("  not used  ", visible(f"drop {drop.drop}, {where}, {reason}"))
    yield from _of_corrections(result, explain)
    yield from _of_budget(result, scale, explain)
    yield from _of_halving(result)


def _of_facts(shown: Iterable[Fact], explain: Explainer) -> Iterator[str]:
    for fact in shown:
        text = f"{fact.text} {fact.unit}" if fact.unit not in fact.text else fact.text
        why = explain(fact.term) or explain.once(fact.note)
        yield from wrapped(f"  {fact.label:<36}", visible(f"{text}  ({why})" if why else text))


def _of_corrections(result: RunSetResult, explain: Explainer) -> Iterator[str]:
    if not result.corrections:
        return
    why = explain("drag factor")
    yield from wrapped("  ", "Corrections, each a factor that divides Stokes' viscosity" + (
        f" (together the drag factor: {why})" if why else ""
    ))  # fmt: skip
    for correction in result.corrections:
        factor = Scale("").fixed(correction.factor, 5)
        told = f"{factor}  {correction.method} [{correction.source}]"
        yield from wrapped(f"    {correction.name:<12}", visible(told))


def _of_budget(result: RunSetResult, scale: Scale, explain: Explainer) -> Iterator[str]:
    if not result.budget:
        return
    lines = sorted(result.budget, key=lambda line: -line.share)
    why = explain("share")
    heading = "Largest parts of the uncertainty" + (f" (share: {why})" if why else "")
    yield from wrapped("  ", heading)
    for line in lines[:TOP_INPUTS]:
        share = Scale("%", 100.0).fixed(line.share, 1)
        part = f"{scale.alone(line.contribution, 2)} {scale.unit}"
        told = f"{share:>5} %  {part}  {line.scope}"
        yield from wrapped(f"    {visible(line.input):<30}", told)
    if rest := lines[TOP_INPUTS:]:
        share = Scale("%", 100.0).fixed(sum(line.share for line in rest), 1)
        yield from wrapped(f"    {counted(len(rest), 'smaller input'):<30}", f"{share:>5} %")


def _of_halving(result: RunSetResult) -> Iterator[str]:
    if not result.improvements:
        return
    yield from wrapped("  ", HALVING)
    for name, told in halving_lines(result.improvements):
        yield from wrapped(f"    {visible(name):<30}", told)


def _of_findings(findings: Sequence[Finding]) -> Iterator[str]:
    order = {"error": 0, "warning": 1, "note": 2}
    for finding in sorted(findings, key=lambda finding: order.get(finding.severity, 3)):
        evidence = finding_evidence(finding)
        told = f"{finding.message} ({evidence})" if evidence else finding.message
        yield from wrapped(f"  {finding.severity} {visible(finding.code)}: ", visible(told), 4)
        if finding.remedy:
            yield from wrapped("    remedy: ", visible(finding.remedy), 6)


def wrapped(start: str, text: str, indent: int | None = None) -> Iterable[str]:
    """Return lines of at most 80 columns: ``start``, then the text, indented under itself."""
    lead = " " * (min(len(start), 40) if indent is None else indent)
    return textwrap.wrap(
        text,
        WIDTH,
        initial_indent=start,
        subsequent_indent=lead,
        break_on_hyphens=False,
        replace_whitespace=False,
        drop_whitespace=True,
    ) or [start.rstrip()]
