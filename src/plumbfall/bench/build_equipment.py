"""Records of clocks, thermometers, gauges, balances, tubes and balls from their keys."""

from __future__ import annotations

from collections.abc import Mapping

from plumbfall.bench import equipment_keys as equipment
from plumbfall.bench import records
from plumbfall.bench.naming import identity, named, value, zero
from plumbfall.bench.notation import read_quantity
from plumbfall.bench.usual import FRAME_INTERVAL, USUAL, video_scatter
from plumbfall.estimate import Estimate

__all__ = [
    "ISO_REFERENCE",
    "balance_from",
    "ball_from",
    "gauge_from",
    "material_from",
    "thermometer_from",
    "timer_from",
    "tube_from",
]

ISO_REFERENCE = 293.15
"""Temperature at which lengths are stated unless the sheet says otherwise: 20 degC (ISO 1)."""


def timer_from(name: str, keys: equipment.TimerKeys) -> records.Timer:
    """Return a clock, usual values standing in for keys not given where its kind is known."""
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
            # A frame interval that is given as the resolution counts as that, not twice.
            scatter = 0.0 if keys.resolution else video_scatter(FRAME_INTERVAL)
            given[key] = Estimate(scatter, unit="s", text=f"{scatter:.4f} s")
            stand_in.append(key)
    parts = ("timer", name)
    return records.Timer(
        name=name,
        kind=keys.kind,
        per_drop=named(given["per_drop"], *parts, "per_drop") or zero("s", *parts, "per_drop"),
        bias=named(given["bias"], *parts, "bias") or zero("s", *parts, "bias"),
        rate=named(given["rate"], *parts, "rate") or zero("1", *parts, "rate"),
        resolution=named(given["resolution"], *parts, "resolution"),
        usual_values=tuple(stand_in),
        usual_source=usual.source_of(tuple(stand_in)) if usual else "",
        identity=identity(keys),
    )


def thermometer_from(name: str, keys: equipment.ThermometerKeys) -> records.Thermometer:
    """Return a thermometer."""
    parts = ("thermometer", name)
    return records.Thermometer(
        name=name,
        correction=named(keys.correction, *parts, "correction") or zero("K", *parts, "correction"),
        per_reading=named(keys.per_reading, *parts, "per_reading"),
        identity=identity(keys),
    )


def gauge_from(name: str, keys: equipment.GaugeKeys) -> records.Gauge:
    """Return a diameter gauge."""
    parts = ("gauge", name, "correction")
    return records.Gauge(
        name=name,
        correction=named(keys.correction, *parts) or zero("m", *parts),
        identity=identity(keys),
    )


def balance_from(name: str, keys: equipment.BalanceKeys) -> records.Balance:
    """Return a balance."""
    parts = ("balance", name, "correction")
    return records.Balance(
        name=name,
        correction=named(keys.correction, *parts) or zero("kg", *parts),
        identity=identity(keys),
    )


def tube_from(name: str, keys: equipment.TubeKeys) -> records.Tube:
    """Return a tube; a distance becomes the second of two marks."""
    parts = ("tube", name)
    marks = tuple(named(mark, *parts, "marks", n) for n, mark in enumerate(keys.marks))
    if keys.distance is not None:
        marks = (zero("m", *parts, "marks", 0), named(keys.distance, *parts, "distance"))
    measured_at = value(keys.measured_at)
    if keys.expansion is not None and measured_at is None:
        measured_at = ISO_REFERENCE
    quantities = {
        key: named(getattr(keys, key), *parts, key)
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
        identity=identity(keys),
        **quantities,
    )


def material_from(name: str, keys: equipment.MaterialKeys) -> records.Material:
    """Return a material."""
    parts = ("material", name)
    return records.Material(
        name=name,
        density=named(keys.density, *parts, "density"),
        expansion=named(keys.expansion, *parts, "expansion"),
        identity=identity(keys),
    )


def ball_from(
    name: str, keys: equipment.BallKeys, materials: Mapping[str, records.Material]
) -> records.Ball:
    """Return a ball; its material's density and expansion keep the material's names."""
    parts = ("ball", name)
    material = materials.get(keys.material) if keys.material else None
    density = named(keys.density, *parts, "density")
    expansion = named(keys.expansion, *parts, "expansion")
    if material is not None:
        density = density or material.density
        expansion = expansion or material.expansion
    return records.Ball(
        name=name,
        diameter=named(keys.diameter, *parts, "diameter"),
        density=density,
        material=keys.material,
        mass=named(keys.mass, *parts, "mass"),
        weighed_together=keys.weighed_together,
        lot=keys.lot,
        spread=named(keys.spread, *parts, "spread"),
        gauge=keys.gauge,
        balance=keys.balance,
        expansion=expansion,
        measured_at=ISO_REFERENCE if keys.measured_at is None else keys.measured_at.value,
        identity=identity(keys),
    )
