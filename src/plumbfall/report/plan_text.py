"""A plan as plain text of 80 columns."""

from __future__ import annotations

import textwrap
from collections.abc import Iterator
from itertools import groupby

from plumbfall._version import __version__
from plumbfall.planning.combination import Combination
from plumbfall.planning.plan import Plan
from plumbfall.report.plan_sentences import (
    answer_text,
    conditions_text,
    facts_of,
    ideal_texts,
    parts_text,
)
from plumbfall.report.plan_words import (
    better_text,
    interval_text,
    limit_word,
    percent_text,
    source_word,
    time_text,
    verdict_text,
    viscosity_text,
)
from plumbfall.report.rounding import NO_VALUE, round_alone
from plumbfall.report.summary import visible
from plumbfall.report.words import TERMS

__all__ = ["plan_text"]

WIDTH = 80
MOST_PAIRS = 12
EXPLAINED = ("Reynolds number", "expanded uncertainty", "shear rate", "diameter ratio")
COLUMNS = {
    "uncertainty": "expanded uncertainty of {drops} drops, or of as many as the target needs",
    "drops": "the fewest that reach the target",
    "run-in": "distance from rest to 99.9 % of the ball's speed",
}


def plan_text(plan: Plan) -> str:
    """Return the plan as text, the best ball and tube first."""
    return "\n".join(_lines(plan)) + "\n"


def _lines(plan: Plan) -> Iterator[str]:
    yield from _wrapped("plan  ", conditions_text(plan))
    for text in (*ideal_texts(plan), answer_text(plan)):
        yield from _wrapped("", visible(text))
    yield ""
    pairs = [
        list(group) for _, group in groupby(plan.combinations, lambda one: (one.tube, one.ball))
    ]
    for group in pairs[:MOST_PAIRS]:
        yield from _pair(plan, group)
        yield ""
    if len(pairs) > MOST_PAIRS:
        yield f"{len(pairs) - MOST_PAIRS} more are in --json and in --out DIR"
        yield ""
    yield from _windows(plan)
    for finding in plan.findings:
        yield from _wrapped(f"{finding.severity} {finding.code}: ", visible(finding.message), 2)
        if finding.remedy:
            yield from _wrapped("  remedy: ", visible(finding.remedy), 4)
    for term in EXPLAINED:
        yield from _wrapped(f"{term}: ", TERMS[term], 2)
    for column, text in COLUMNS.items():
        yield from _wrapped(f"{column}: ", text.format(drops=plan.wanted.drops), 2)
    yield f"plumbfall {__version__}"


def _pair(plan: Plan, group: list[Combination]) -> Iterator[str]:
    first = group[0]
    yield visible(f"ball {first.ball} in tube {first.tube}")
    yield "  viscosity fall time  Reynolds uncertainty drops will do  most of it from"
    for one in group:
        bounds, drops = percent_text(one.relative_expanded_uncertainty), one.drops_needed
        yield (
            f"{viscosity_text(plan, one.viscosity):>11}{time_text(one.fall_time):>10}"
            f"{round_alone(one.reynolds, 2):>10}{bounds:>12}"
            f"{NO_VALUE if drops is None else drops:>6}"
            f"{'yes' if one.suitable else 'no':>8}  {visible(source_word(one.dominant_input))}"
        )
    worst = max(group, key=lambda one: one.relative_expanded_uncertainty or 0.0)
    if parts := parts_text(worst):
        at = viscosity_text(plan, worst.viscosity)
        yield from _wrapped(f"    {f'largest parts at {at}':<32}", visible(parts))
    for label, text in facts_of(plan, _slowest(group)):
        yield from _wrapped(f"    {label:<32}", text)
    if times := interval_text(_slowest(group)):
        yield from _wrapped(f"    {'between successive marks':<32}", times)
    for one in group:
        at = viscosity_text(plan, one.viscosity)
        for reason in one.reasons:
            yield from _wrapped(f"    {verdict_text(one)} at {at}: ", visible(str(reason)), 6)
        for better in better_text(one):
            yield from _wrapped("      better: ", visible(better), 8)
        for caution in one.cautions:
            yield from _wrapped(f"    will be warned of at {at}: ", visible(str(caution)), 6)


def _slowest(group: list[Combination]) -> Combination:
    """Return the combination whose start is longest, that of the thinnest liquid with a time."""
    timed = [one for one in group if one.fall_time is not None]
    return timed[0] if timed else group[0]


def _windows(plan: Plan) -> Iterator[str]:
    yield "Usable viscosities, and what limits them"
    for window in plan.windows[:MOST_PAIRS]:
        name = visible(f"{window.ball} in {window.tube}")
        if window.low is None or window.high is None:
            limit = limit_word(window.low_limit, window.low_input)
            yield from _wrapped(f"  {name:<16}", f"none: {limit}", 18)
            continue
        ends = [
            f"{viscosity_text(plan, edge)} ({limit_word(reason, part) or 'not met'})"
            for edge, reason, part in (
                (window.low, window.low_limit, window.low_input),
                (window.high, window.high_limit, window.high_input),
            )
        ]
        yield from _wrapped(f"  {name:<16}", " to ".join(ends), 18)
    yield ""


def _wrapped(start: str, text: str, indent: int | None = None) -> list[str]:
    lead = " " * (len(start) if indent is None else indent)
    return textwrap.wrap(
        text,
        WIDTH,
        initial_indent=start,
        subsequent_indent=lead,
        break_on_hyphens=False,
        break_long_words=False,
    ) or [start.rstrip()]
