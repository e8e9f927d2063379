"""A plan as one self-contained page: no script, no network, a strict content policy."""

from __future__ import annotations

import base64
import hashlib
from html import escape
from importlib import resources
from itertools import groupby
from typing import Any

from plumbfall._version import __version__
from plumbfall.planning.combination import Combination
from plumbfall.planning.plan import Plan
from plumbfall.report.html import template
from plumbfall.report.plan_figure import new_plan_figure
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
    percent_text,
    time_text,
    viscosity_text,
)
from plumbfall.report.rounding import NO_VALUE, round_alone
from plumbfall.report.svg import inline_svg
from plumbfall.report.words import CAUTIONS, TERMS

__all__ = ["plan_fragment", "plan_page"]

HEADINGS = (
    "Viscosity", "Fall time", "Speed / mm/s", "Reynolds number", "Scatter of a drop",
    "Expanded uncertainty", "with drops", "Drops needed", "Most of it from", "Will do",
)  # fmt: skip
MOST_PAIRS = 40
EXPLAINED = (
    "Reynolds number", "expanded uncertainty", "coverage interval", "shear rate", "diameter ratio",
)  # fmt: skip


def plan_page(plan: Plan) -> str:
    """Return the plan as a page of HTML, the same byte for byte for the same plan."""
    style = resources.files("plumbfall.report").joinpath("page.css").read_text("utf-8")
    digest = base64.b64encode(hashlib.sha256(style.encode("utf-8")).digest()).decode("ascii")
    groups = [
        list(group) for _, group in groupby(plan.combinations, lambda one: (one.tube, one.ball))
    ]
    return template("plan.html.j2").render(
        style=_markup(style),
        style_hash=digest,
        title=plan.bench.title or "Viscosity by falling ball",
        version=__version__,
        conditions=conditions_text(plan),
        answer=answer_text(plan),
        ideal=list(ideal_texts(plan)),
        picture=_markup(_picture(plan)),
        headings=HEADINGS,
        pairs=[_pair(plan, group) for group in groups[:MOST_PAIRS]],
        left_out=max(len(groups) - MOST_PAIRS, 0),
        findings=plan.findings,
        terms=[(term, TERMS[term]) for term in EXPLAINED],
        cautions=CAUTIONS,
    )


def plan_fragment(plan: Plan) -> str:
    """Return the answer and the chart, for a notebook."""
    said = f"{escape(conditions_text(plan))}<br>{escape(answer_text(plan))}"
    return f"<p>{said}</p>{_picture(plan)}"


def _picture(plan: Plan) -> str:
    return inline_svg(
        new_plan_figure(plan), "plan", "Usable viscosities of each ball", answer_text(plan)
    )


def _pair(plan: Plan, group: list[Combination]) -> dict[str, Any]:
    first = next((one for one in group if one.fall_time is not None), group[0])
    facts = list(facts_of(plan, first))
    worst = max(group, key=lambda one: one.relative_expanded_uncertainty or 0.0)
    if parts := parts_text(worst):
        facts.append((f"largest parts at {viscosity_text(plan, worst.viscosity)}", parts))
    if times := interval_text(first):
        facts.append(("between successive marks", times))
    return {
        "title": f"Ball {first.ball} in tube {first.tube}",
        "rows": [{"cells": _cells(plan, one), "suitable": one.suitable} for one in group],
        "facts": facts,
        "against": [
            {
                "at": viscosity_text(plan, one.viscosity),
                "why": str(reason),
                "better": list(better_text(one)) if reason.code == "uncertainty" else [],
            }
            for one in group
            for reason in one.reasons + one.cautions
        ],
    }


def _cells(plan: Plan, one: Combination) -> list[str]:
    speed = None if one.speed is None else 1e3 * one.speed
    return [
        viscosity_text(plan, one.viscosity),
        time_text(one.fall_time),
        round_alone(speed, 3),
        round_alone(one.reynolds, 2),
        percent_text(one.scatter),
        percent_text(one.relative_expanded_uncertainty),
        str(one.drops),
        NO_VALUE if one.drops_needed is None else str(one.drops_needed),
        one.dominant_input or NO_VALUE,
        "yes" if one.suitable else "no",
    ]


def _markup(text: str) -> Any:
    import markupsafe

    return markupsafe.Markup(text)  # our own style sheet and drawing, whose texts are escaped
