"""From the validated sheet to records: every quantity gets its key path as its name."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from plumbfall.bench import choice_keys, records, run_keys
from plumbfall.bench.build_equipment import (
    balance_from,
    ball_from,
    gauge_from,
    material_from,
    thermometer_from,
    timer_from,
    tube_from,
)
from plumbfall.bench.naming import identity, named, value
from plumbfall.bench.read_only import ReadOnly
from plumbfall.bench.schema import Sheet

__all__ = ["bench_from"]


def bench_from(
    sheet: Sheet, *, source: Mapping[str, Any], path: str = "", sha256: str = ""
) -> records.Bench:
    """Return the records of a validated sheet.

    Parameters
    ----------
    sheet
        The sheet as the schema read it.
    source
        The same as written.
    path, sha256
        Of the file it was read from.
    """
    materials = {name: material_from(name, keys) for name, keys in sheet.material.items()}
    return records.Bench(
        title=sheet.bench.title,
        reference_temperature=value(sheet.bench.reference_temperature),
        coverage=sheet.bench.coverage,
        viscosity_unit=sheet.bench.viscosity_unit,
        laboratory=_words(sheet.laboratory),
        report=_words(sheet.report),
        sample=_words(sheet.sample),
        site=records.Site(
            gravity=named(sheet.site.gravity, "site", "gravity"),
            latitude=named(sheet.site.latitude, "site", "latitude"),
            elevation=named(sheet.site.elevation, "site", "elevation"),
        ),
        timers=_each(sheet.timer, timer_from),
        thermometers=_each(sheet.thermometer, thermometer_from),
        gauges=_each(sheet.gauge, gauge_from),
        balances=_each(sheet.balance, balance_from),
        tubes=_each(sheet.tube, tube_from),
        materials=ReadOnly(materials),
        balls=ReadOnly(
            {name: ball_from(name, keys, materials) for name, keys in sheet.ball.items()}
        ),
        liquids=_each(sheet.liquid, _liquid),
        sets=_each(sheet.set, _run_set),
        scatter=_scatter(sheet.scatter),
        references=_each(sheet.reference, _reference),
        constants=_each(sheet.constant, _constant),
        timings=_timings(sheet.timings),
        methods=_methods(sheet.methods),
        limits=ReadOnly(sheet.limits),
        path=path,
        sha256=sha256,
        source=ReadOnly(source),
    )


def _each(entries: Mapping[str, Any], build: Any) -> Mapping[str, Any]:
    return ReadOnly({name: build(name, keys) for name, keys in entries.items()})


def _words(keys: Any) -> Mapping[str, str]:
    given = {name: getattr(keys, name) for name in type(keys).model_fields}
    return ReadOnly({name: str(value) for name, value in given.items() if value})


def _liquid(name: str, keys: run_keys.LiquidKeys) -> records.Liquid:
    parts = ("liquid", name)
    limits = keys.specification
    specification = None
    if limits is not None:
        specification = records.Specification(
            low=named(limits.low, *parts, "specification", "low"),
            high=named(limits.high, *parts, "specification", "high"),
            temperature=limits.temperature.value,
        )
    return records.Liquid(
        name=name,
        density=named(keys.density, *parts, "density"),
        density_temperature=value(keys.density_temperature),
        expansion=named(keys.expansion, *parts, "expansion"),
        viscosity_slope=named(keys.viscosity_slope, *parts, "viscosity_slope"),
        specification=specification,
        identity=identity(keys),
    )


def _run_set(name: str, keys: run_keys.SetKeys) -> records.RunSetEntry:
    return records.RunSetEntry(
        name=name,
        tube=keys.tube,
        liquid=keys.liquid,
        ball=keys.ball,
        timer=keys.timer,
        thermometer=keys.thermometer,
        temperature=named(keys.temperature, "set", name, "temperature"),
        filled=keys.filled,
    )


def _scatter(keys: run_keys.ScatterKeys | None) -> records.Scatter | None:
    if keys is None:
        return None
    return records.Scatter(relative=named(keys.relative, "scatter", "relative"), dof=keys.dof)


def _reference(name: str, keys: run_keys.ReferenceKeys) -> records.Reference:
    points = tuple(
        records.ReferencePoint(
            temperature=point.temperature.value,
            viscosity=named(point.value, "reference", name, "viscosity", n, "value"),
        )
        for n, point in enumerate(keys.viscosity)
    )
    return records.Reference(
        name=name,
        liquid=keys.liquid,
        points=points,
        correlation=keys.correlation,
        law=keys.law,
        expires=keys.expires,
        identity=identity(keys),
    )


def _constant(name: str, keys: run_keys.ConstantKeys) -> records.Constant:
    return records.Constant(
        name=name,
        tube=keys.tube,
        ball=keys.ball,
        value=named(keys.value, "constant", name, "value"),
        file=keys.file,
        identity=identity(keys),
    )


def _timings(keys: choice_keys.TimingsKeys) -> records.TimingHints:
    return records.TimingHints(
        columns=ReadOnly(keys.columns),
        units=ReadOnly(keys.units),
        delimiter="\t" if keys.delimiter == "tab" else keys.delimiter,
        decimal=keys.decimal,
        encoding=keys.encoding,
        header_row=keys.header_row,
        sheet=keys.sheet,
        thousands=keys.thousands,
        transposed=keys.transposed,
    )


def _methods(keys: choice_keys.MethodKeys) -> records.Methods:
    """Return the choices; ``drag`` names every law of the drag that the sheet chooses."""
    words = [word for word in (keys.drag, keys.walls, keys.inertia) if word]
    return records.Methods(
        drag=" ".join(words) or None,
        ends=keys.ends,
        run_in=keys.run_in,
        walls=keys.walls,
        inertia=keys.inertia,
        slope=keys.slope,
        model_uncertainty=named(keys.model_uncertainty, "methods", "model_uncertainty"),
    )
