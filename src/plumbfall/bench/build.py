"""From the validated sheet to records: every quantity gets its key path as its name."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from types import MappingProxyType
from typing import Any, TypeVar

from plumbfall.bench import equipment_keys as equipment
from plumbfall.bench import records, run_keys
from plumbfall.bench.common_keys import Equipment
from plumbfall.bench.keys import key_path
from plumbfall.bench.notation import read_quantity
from plumbfall.bench.schema import Sheet
from plumbfall.bench.usual import FRAME_INTERVAL, USUAL, video_scatter
from plumbfall.estimate import Estimate

__all__ = ["bench_from"]

ISO_REFERENCE = 293.15
"""Temperature at which lengths are stated unless the sheet says otherwise: 20 degC (ISO 1)."""

T = TypeVar("T")


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
    materials = {name: _material(name, keys) for name, keys in sheet.material.items()}
    return records.Bench(
        title=sheet.bench.title,
        reference_temperature=_value(sheet.bench.reference_temperature),
        coverage=sheet.bench.coverage,
        viscosity_unit=sheet.bench.viscosity_unit,
        laboratory=_words(sheet.laboratory),
        report=_words(sheet.report),
        sample=_words(sheet.sample),
        site=records.Site(
            gravity=_named(sheet.site.gravity, "site", "gravity"),
            latitude=_named(sheet.site.latitude, "site", "latitude"),
            elevation=_named(sheet.site.elevation, "site", "elevation"),
        ),
        timers=_each(sheet.timer, _timer),
        thermometers=_each(sheet.thermometer, _thermometer),
        gauges=_each(sheet.gauge, _gauge),
        balances=_each(sheet.balance, _balance),
        tubes=_each(sheet.tube, _tube),
        materials=MappingProxyType(materials),
        balls=MappingProxyType(
            {name: _ball(name, keys, materials) for name, keys in sheet.ball.items()}
        ),
        liquids=_each(sheet.liquid, _liquid),
        sets=_each(sheet.set, _run_set),
        scatter=_scatter(sheet.scatter),
        references=_each(sheet.reference, _reference),
        constants=_each(sheet.constant, _constant),
        timings=_timings(sheet.timings),
        methods=_methods(sheet.methods),
        limits=MappingProxyType(dict(sheet.limits)),
        path=path,
        sha256=sha256,
        source=MappingProxyType(dict(source)),
    )


def _each(entries: Mapping[str, Any], build: Any) -> Mapping[str, Any]:
    return MappingProxyType({name: build(name, keys) for name, keys in entries.items()})


def _named(found: Estimate | None, *parts: str | int) -> Estimate | None:
    return None if found is None else replace(found, name=key_path(*parts))


def _surely(found: Estimate, *parts: str | int) -> Estimate:
    return replace(found, name=key_path(*parts))


def _zero(unit: str, *parts: str | int) -> Estimate:
    return Estimate(0.0, name=key_path(*parts), unit=unit)


def _value(found: Estimate | None) -> float | None:
    return None if found is None else found.value


def _identity(keys: Equipment) -> records.Identity:
    return records.Identity(
        identity=keys.identity,
        certificate=keys.certificate,
        calibrated=keys.calibrated,
        due=keys.due,
        note=keys.note,
    )


def _words(keys: Any) -> Mapping[str, str]:
    given = {name: getattr(keys, name) for name in type(keys).model_fields}
    return MappingProxyType({name: str(value) for name, value in given.items() if value})


def _timer(name: str, keys: equipment.TimerKeys) -> records.Timer:
    given = {key: getattr(keys, key) for key in ("per_drop", "bias", "rate", "resolution")}
    usual = USUAL[keys.kind] if keys.kind else None
    stand_in = []
    for key, found in given.items():
        if found is not None or usual is None:
            continue
        written = getattr(usual, key)
        if written:
            given[key] = read_quantity(written, "ratio" if key == "rate" else "time")
            stand_in.append(key)
        elif key == "per_drop":
            frame = keys.resolution.value if keys.resolution else FRAME_INTERVAL
            given[key] = Estimate(video_scatter(frame), unit="s", text="frame interval / √6")
            stand_in.append(key)
    parts = ("timer", name)
    return records.Timer(
        name=name,
        kind=keys.kind,
        per_drop=_named(given["per_drop"], *parts, "per_drop") or _zero("s", *parts, "per_drop"),
        bias=_named(given["bias"], *parts, "bias") or _zero("s", *parts, "bias"),
        rate=_named(given["rate"], *parts, "rate") or _zero("1", *parts, "rate"),
        resolution=_named(given["resolution"], *parts, "resolution"),
        usual_values=tuple(stand_in),
        usual_source=usual.source_of(tuple(stand_in)) if usual else "",
        identity=_identity(keys),
    )


def _thermometer(name: str, keys: equipment.ThermometerKeys) -> records.Thermometer:
    parts = ("thermometer", name)
    return records.Thermometer(
        name=name,
        correction=_named(keys.correction, *parts, "correction")
        or _zero("K", *parts, "correction"),
        per_reading=_named(keys.per_reading, *parts, "per_reading"),
        identity=_identity(keys),
    )


def _gauge(name: str, keys: equipment.GaugeKeys) -> records.Gauge:
    parts = ("gauge", name, "correction")
    return records.Gauge(
        name=name,
        correction=_named(keys.correction, *parts) or _zero("m", *parts),
        identity=_identity(keys),
    )


def _balance(name: str, keys: equipment.BalanceKeys) -> records.Balance:
    parts = ("balance", name, "correction")
    return records.Balance(
        name=name,
        correction=_named(keys.correction, *parts) or _zero("kg", *parts),
        identity=_identity(keys),
    )


def _tube(name: str, keys: equipment.TubeKeys) -> records.Tube:
    parts = ("tube", name)
    marks = tuple(_surely(mark, *parts, "marks", n) for n, mark in enumerate(keys.marks))
    if keys.distance is not None:
        marks = (_zero("m", *parts, "marks", 0), _surely(keys.distance, *parts, "distance"))
    measured_at = _value(keys.measured_at)
    if keys.expansion is not None and measured_at is None:
        measured_at = ISO_REFERENCE
    quantities = {
        key: _named(getattr(keys, key), *parts, key)
        for key in (
            "bore",
            "surface_above",
            "bottom_below",
            "release_above",
            "release_offset",
            "tilt",
            "expansion",
        )
    }
    return records.Tube(
        name=name,
        kind=keys.kind,
        marks=marks,
        surface=keys.surface,
        measured_at=measured_at,
        constant=keys.constant,
        identity=_identity(keys),
        **quantities,
    )


def _material(name: str, keys: equipment.MaterialKeys) -> records.Material:
    parts = ("material", name)
    return records.Material(
        name=name,
        density=_surely(keys.density, *parts, "density"),
        expansion=_named(keys.expansion, *parts, "expansion"),
        identity=_identity(keys),
    )


def _ball(
    name: str, keys: equipment.BallKeys, materials: Mapping[str, records.Material]
) -> records.Ball:
    parts = ("ball", name)
    material = materials.get(keys.material) if keys.material else None
    density = _named(keys.density, *parts, "density")
    expansion = _named(keys.expansion, *parts, "expansion")
    if material is not None:
        density = density or material.density
        expansion = expansion or material.expansion
    return records.Ball(
        name=name,
        diameter=_surely(keys.diameter, *parts, "diameter"),
        density=density,
        material=keys.material,
        mass=_named(keys.mass, *parts, "mass"),
        weighed_together=keys.weighed_together,
        lot=keys.lot,
        spread=_named(keys.spread, *parts, "spread"),
        gauge=keys.gauge,
        balance=keys.balance,
        expansion=expansion,
        measured_at=ISO_REFERENCE if keys.measured_at is None else keys.measured_at.value,
        identity=_identity(keys),
    )


def _liquid(name: str, keys: run_keys.LiquidKeys) -> records.Liquid:
    parts = ("liquid", name)
    limits = keys.specification
    specification = None
    if limits is not None:
        specification = records.Specification(
            low=_named(limits.low, *parts, "specification", "low"),
            high=_named(limits.high, *parts, "specification", "high"),
            temperature=limits.temperature.value,
        )
    return records.Liquid(
        name=name,
        density=_surely(keys.density, *parts, "density"),
        density_temperature=_value(keys.density_temperature),
        expansion=_named(keys.expansion, *parts, "expansion"),
        viscosity_slope=_named(keys.viscosity_slope, *parts, "viscosity_slope"),
        specification=specification,
        identity=_identity(keys),
    )


def _run_set(name: str, keys: run_keys.SetKeys) -> records.RunSetEntry:
    return records.RunSetEntry(
        name=name,
        tube=keys.tube,
        liquid=keys.liquid,
        ball=keys.ball,
        timer=keys.timer,
        thermometer=keys.thermometer,
        temperature=_named(keys.temperature, "set", name, "temperature"),
        filled=keys.filled,
    )


def _scatter(keys: run_keys.ScatterKeys | None) -> records.Scatter | None:
    if keys is None:
        return None
    return records.Scatter(relative=_surely(keys.relative, "scatter", "relative"), dof=keys.dof)


def _reference(name: str, keys: run_keys.ReferenceKeys) -> records.Reference:
    points = tuple(
        records.ReferencePoint(
            temperature=point.temperature.value,
            viscosity=_surely(point.value, "reference", name, "viscosity", n, "value"),
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
        identity=_identity(keys),
    )


def _constant(name: str, keys: run_keys.ConstantKeys) -> records.Constant:
    return records.Constant(
        name=name,
        tube=keys.tube,
        ball=keys.ball,
        value=_named(keys.value, "constant", name, "value"),
        file=keys.file,
        identity=_identity(keys),
    )


def _timings(keys: run_keys.TimingsKeys) -> records.TimingHints:
    return records.TimingHints(
        columns=MappingProxyType(dict(keys.columns)),
        units=MappingProxyType(dict(keys.units)),
        delimiter="\t" if keys.delimiter == "tab" else keys.delimiter,
        decimal=keys.decimal,
        encoding=keys.encoding,
        header_row=keys.header_row,
        sheet=keys.sheet,
    )


def _methods(keys: run_keys.MethodKeys) -> records.Methods:
    return records.Methods(
        drag=keys.drag,
        ends=keys.ends,
        run_in=keys.run_in,
        walls=keys.walls,
        inertia=keys.inertia,
        slope=keys.slope,
        model_uncertainty=_named(keys.model_uncertainty, "methods", "model_uncertainty"),
    )
