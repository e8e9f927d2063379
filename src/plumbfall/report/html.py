"""The report as one self-contained page: no script, no network, a strict content policy."""

from __future__ import annotations

import base64
import hashlib
from collections.abc import Callable
from functools import cache
from importlib import resources
from typing import TYPE_CHECKING, Any

from plumbfall._version import __version__
from plumbfall.report.equipment import bench_conditions, equipment_view, identification
from plumbfall.report.house_style import house_style
from plumbfall.report.json_report import json_text, report_document
from plumbfall.report.observed import observed
from plumbfall.report.page_pictures import map_picture, sets_picture
from plumbfall.report.page_sets import overview, set_page
from plumbfall.report.scales import pretty_unit
from plumbfall.report.set_tables import unused_view
from plumbfall.report.summary import counted, visible
from plumbfall.report.temperature_fit_view import fit_facts, fit_heading
from plumbfall.report.words import CAUTIONS, NOT_SUPPLIED, STATEMENTS, Explainer

if TYPE_CHECKING:
    import jinja2

    from plumbfall.report.report import Report

__all__ = ["page", "report_identity", "template"]

PARTS = (
    ("who", "Laboratory, report and sample"),
    ("how", "Bench and equipment"),
    ("data", "Data this report stands on"),
    ("say", "Statements"),
    ("care", "Cautions"),
)
"""The parts that follow the run sets: the anchor and the heading of each."""

_RUNNING_FOOT = (
    '@page {{ @bottom-left {{ content: "Run-set report {identity}"; font-size: 8pt; }} }}\n'
)


def page(report: Report, progress: Callable[[int, int], None] | None = None) -> str:
    """Return the report as a page of HTML, the same byte for byte for the same report.

    ``progress`` is called with the run sets laid out so far and how many there are.
    """
    identity = report_identity(report)
    style = _read("page.css") + _RUNNING_FOOT.format(identity=identity)
    digest = base64.b64encode(hashlib.sha256(style.encode("utf-8")).digest()).decode("ascii")
    seen = observed(report.timings)
    several = len(report) > 1
    results = [view.result for view in report]
    with house_style():
        sets = []
        for index, result in enumerate(results, 1):
            sets.append(set_page(result, index, report.bench, seen.get(result.name)))
            if progress is not None:
                progress(index, len(results))
        where = map_picture(results)
        together = [sets_picture(results, report.bench.viscosity_unit)] if several else []
        together += [where] if where is not None else []
    if not several:
        sets[0].pictures.extend(together)
    return template("page.html.j2").render(
        style=_markup(style),
        style_hash=digest,
        title=report.bench.title or "Viscosity by falling ball",
        identity=identity,
        version=__version__,
        number=report.bench.report.get("number") or NOT_SUPPLIED,
        overview=overview(report) if several else None,
        together=together,
        sets=sets,
        parts=PARTS,
        date=str(report.date or NOT_SUPPLIED),
        several=several,
        judged=any(result.conformity for result in results),
        fits=[
            (fit_heading(fit), fit_facts(fit, report.bench.viscosity_unit))
            for fit in report.temperature_fits
        ],
        identification=identification(report.bench),
        conditions=bench_conditions(report.bench),
        equipment=equipment_view(report.bench),
        report=report,
        rows_sum=rows_sum(report),
        unused=unused_view(results),
        statements=STATEMENTS,
        cautions=CAUTIONS,
        explain=Explainer(),
    )


def report_identity(report: Report) -> str:
    """Return what names this report: the first digits of the SHA-256 of its JSON."""
    text = json_text(report_document(report))
    return hashlib.sha256(text.encode("ascii")).hexdigest()[:16]


def rows_sum(report: Report) -> str:
    """Return the sum that shows that no row was lost."""
    rows = report.rows
    return (
        f"{counted(rows['read'], 'row')} read = {rows['used']} used + {rows['void']} void + "
        f"{rows['excluded']} excluded by rule"
    )


@cache
def _environment() -> jinja2.Environment:
    import jinja2

    environment = jinja2.Environment(
        loader=jinja2.FunctionLoader(_read),
        autoescape=True,
        undefined=jinja2.StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
        finalize=_shown,
    )
    environment.filters["unit"] = pretty_unit
    return environment


def template(name: str) -> jinja2.Template:
    """Return a template of this package; every text put into it is escaped."""
    return _environment().get_template(name)


@cache
def _read(name: str) -> str:
    return resources.files("plumbfall.report").joinpath(name).read_text("utf-8")


def _markup(text: str) -> Any:
    import markupsafe

    return markupsafe.Markup(text)  # our own style sheet, from the package


def _shown(value: Any) -> Any:
    """Spell out control characters in plain text; markup is our own and passes."""
    if isinstance(value, str) and not hasattr(value, "__html__"):
        return visible(value)
    return value
