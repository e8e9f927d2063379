"""What the bench sheet says of laboratory, sample, equipment and place, for an auditor."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import fields

from plumbfall.bench.records import Bench, Identity
from plumbfall.estimate import Estimate
from plumbfall.report.scales import CELSIUS, scale_for
from plumbfall.report.views import Fact, TableView
from plumbfall.report.words import NOT_SUPPLIED

__all__ = ["bench_conditions", "equipment_view", "identification", "shown_estimate"]

_KINDS = (
    ("tube", "tubes"),
    ("ball", "balls"),
    ("material", "materials"),
    ("liquid", "liquids"),
    ("timer", "timers"),
    ("thermometer", "thermometers"),
    ("gauge", "gauges"),
    ("balance", "balances"),
    ("reference", "references"),
    ("constant", "constants"),
)

_IDENTIFICATION = (
    ("Laboratory", "laboratory", (("Name", "name"), ("Place", "place"))),
    (
        "Report",
        "report",
        (
            ("Number", "number"),
            ("Customer", "customer"),
            ("Method", "method"),
            ("Deviations, additions, exclusions", "deviations"),
            ("Issued", "issued"),
            ("Authorised by", "authorised_by"),
        ),
    ),
    (
        "Sample",
        "sample",
        (("Identity", "identity"), ("Condition", "condition"), ("Received", "received")),
    ),
)


def identification(bench: Bench) -> list[tuple[str, list[Fact]]]:
    """Return laboratory, report and sample, a blank item as ``not supplied``."""
    groups = []
    for heading, attribute, items in _IDENTIFICATION:
        given: Mapping[str, object] = getattr(bench, attribute)
        shown = [Fact(label, str(given.get(key) or NOT_SUPPLIED)) for label, key in items]
        known = {key for _, key in items}
        shown += [Fact(key, str(value)) for key, value in given.items() if key not in known]
        groups.append((heading, shown))
    return groups


def equipment_view(bench: Bench) -> TableView:
    """Return every piece of equipment with identity, calibration and the values it is given."""
    rows = []
    for kind, attribute in _KINDS:
        for name, entry in getattr(bench, attribute).items():
            identity: Identity = entry.identity
            rows.append(
                (
                    f"{kind} {name}",
                    identity.identity or NOT_SUPPLIED,
                    identity.certificate or NOT_SUPPLIED,
                    identity.calibrated.isoformat() if identity.calibrated else NOT_SUPPLIED,
                    identity.due.isoformat() if identity.due else NOT_SUPPLIED,
                    "; ".join(_values(entry)),
                    identity.note,
                )
            )
    return TableView(
        caption="Equipment, balls and liquids, as the bench sheet has them",
        headings=(
            "Entry", "Identity", "Certificate", "Calibrated", "Due", "Values as written", "Note",
        ),
        kinds="ttttttt",
        rows=tuple(rows),
    )  # fmt: skip


def bench_conditions(bench: Bench) -> list[Fact]:
    """Return what holds for every run set: gravity, reference temperature, methods, repeatability.

    A method that the sheet does not choose is the default, which each set's corrections name.
    """
    shown = [Fact("Gravity", _gravity(bench))]
    if bench.reference_temperature is None:
        shown.append(Fact("Reference temperature", "none asked for"))
    else:
        at = CELSIUS.fixed(bench.reference_temperature, 2)
        shown.append(Fact("Reference temperature", at, CELSIUS.unit))
    chosen = [
        f"{field.name} {value}"
        for field in fields(bench.methods)
        if isinstance(value := getattr(bench.methods, field.name), str)
    ]
    shown.append(Fact("Methods chosen in the bench sheet", ", ".join(chosen) or "the defaults"))
    if bench.methods.model_uncertainty is not None:
        text = shown_estimate(bench.methods.model_uncertainty)
        shown.append(Fact("Uncertainty of the drag law", text))
    if bench.scatter is not None:
        text = f"{shown_estimate(bench.scatter.relative)} with dof {bench.scatter.dof:g}"
        shown.append(Fact("Known repeatability of one drop", text))
    return shown


def _gravity(bench: Bench) -> str:
    site = bench.site
    if site.gravity is not None:
        return f"{shown_estimate(site.gravity)}, from the bench sheet"
    if site.latitude is not None:
        height = f" and elevation {shown_estimate(site.elevation)}" if site.elevation else ""
        return f"computed from latitude {shown_estimate(site.latitude)}{height}"
    return "9.80665 m/s2, standard gravity, as the bench sheet gives no place"


def shown_estimate(estimate: Estimate) -> str:
    """Return an estimate as it was written, or rounded where it was not written as text."""
    if estimate.text:
        return estimate.text
    scale = scale_for(estimate.unit, max(abs(estimate.value), abs(estimate.u)))
    return f"{scale.pair(estimate.value, estimate.u).concise} {scale.unit}".rstrip()


def _values(entry: object) -> Iterator[str]:
    for field in fields(entry):  # type: ignore[arg-type]  # every bench entry is a dataclass
        value = getattr(entry, field.name)
        if isinstance(value, Estimate):
            yield f"{field.name} {shown_estimate(value)}"
        elif isinstance(value, tuple) and value and isinstance(value[0], Estimate):
            yield f"{field.name} {', '.join(shown_estimate(item) for item in value)}"
        elif field.name in _WORDS_SHOWN and value:
            yield f"{field.name} {value}"
    if usual := getattr(entry, "usual_values", ()):
        source = getattr(entry, "usual_source", "") or "no source given"
        yield f"usual values, not measured: {', '.join(usual)} ({source})"


_WORDS_SHOWN = ("kind", "material", "gauge", "balance", "law", "file", "lot", "surface")
