"""What a certified liquid's viscosity is at a temperature, and how surely it is known.

The errors of a certificate are named inputs like any others of the bench sheet, so that
whatever uses one certificate twice shares its errors.
"""

from __future__ import annotations

import datetime as dt
import math
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from plumbfall.bench.keys import key_path
from plumbfall.bench.records import Liquid, Reference
from plumbfall.calibration.interpolation import Interpolated, by_andrade, by_vogel, by_walther
from plumbfall.errors import InputError
from plumbfall.estimate import Estimate
from plumbfall.physics.liquids import water_viscosity_at_atmosphere
from plumbfall.physics.thermal import liquid_density
from plumbfall.uncertainty.coverage import effective_dof

__all__ = ["CertifiedPart", "CertifiedValue", "certified_value", "is_expired"]

Numbers = NDArray[np.float64]

BEYOND = 1.0
"""Kelvin by which a law may leave the certified temperatures: common practice, no source."""

WATER = (273.15, 373.15)
WATER_DATUM = 1.0016e-3
"""Viscosity of water at 20 degC in Pa.s: ISO/TR 3666 (from memory)."""
WATER_DATUM_U = 0.0017 / 2
"""Relative: 0.17 % as an expanded uncertainty, k = 2 (ISO/TR 3666, from memory)."""
WATER_RATIO_U = 0.0005 / 2
"""Relative: ratios to 20 degC hold within 0.05 %, taken with k = 2 (Kestin and others 1978)."""

UNIT = "Pa.s"


@dataclass(frozen=True, slots=True)
class CertifiedPart:
    """One input's part in a certified value: d(viscosity)/d(input), Pa.s over the input's unit."""

    input: Estimate
    sensitivity: float

    @property
    def contribution(self) -> float:
        """Sensitivity times standard uncertainty, with sign, in Pa.s."""
        return self.sensitivity * self.input.u


@dataclass(frozen=True, slots=True)
class CertifiedValue:
    """A certified viscosity at a temperature, in Pa.s and K.

    ``slope`` is d(viscosity)/dT in Pa.s/K, NaN where one certified point is all there is: the
    temperature's own uncertainty is the caller's and is not in ``u``. ``parts`` are independent
    of each other and add up to ``u``. ``law`` says how the points were joined.
    """

    reference: str
    temperature: float
    value: float
    slope: float
    parts: tuple[CertifiedPart, ...]
    law: str

    @property
    def u(self) -> float:
        """Standard uncertainty in Pa.s, that of the temperature left out."""
        return math.hypot(*(part.contribution for part in self.parts))

    @property
    def dof(self) -> float:
        """Effective degrees of freedom."""
        fourth = sum(part.contribution**4 / part.input.dof for part in self.parts)
        return float(effective_dof(u=self.u, contributions_fourth=fourth))

    @property
    def sensitivities(self) -> dict[str, float]:
        """Sensitivity by the name of the input."""
        return {part.input.name: part.sensitivity for part in self.parts}


def is_expired(reference: Reference, day: dt.date) -> bool:
    """Whether a certificate had expired on a day; it holds on its last day."""
    return reference.expires is not None and day > reference.expires


def certified_value(
    reference: Reference, *, temperature: float, liquid: Liquid | None = None
) -> CertifiedValue:
    """Return a certified liquid's viscosity at a temperature.

    Two points are joined by Walther's law and three or more by Vogel's. How far another law
    through the nearest two points (Andrade's, or Walther's) lies from it are the limits of the
    law's own error. Where no law of Vogel passes through them the nearest two are joined as if
    they were alone. One point is carried over at most 1 K by the liquid's temperature slope.

    Parameters
    ----------
    reference : Reference
        The certificate, or the law, of the bench sheet.
    temperature : float [K]
        Where the viscosity is wanted, at most 1 K beyond the certified temperatures.
    liquid : Liquid, optional
        The certified liquid; its density makes kinematic viscosities, and its temperature slope
        carries a single point.

    Returns
    -------
    CertifiedValue
        Value, slope, and every input's part in it.

    Raises
    ------
    InputError
        Where the reference does not say what the viscosity is there.
    """
    if reference.law == "water":
        return _water(reference, temperature)
    points = sorted(reference.points, key=lambda point: point.temperature)
    known = np.array([point.temperature for point in points])
    if not known[0] - BEYOND <= temperature <= known[-1] + BEYOND:
        raise _too_far(reference, temperature, known)
    values = np.array([point.viscosity.value for point in points])
    estimates = [point.viscosity for point in points]
    if len(points) == 1:
        return _from_one(reference, temperature, estimates[0], float(known[0]), liquid)
    if (np.diff(values) >= 0).any():
        raise InputError(
            "the certified viscosity does not fall from one temperature to the next",
            key=key_path("reference", reference.name, "viscosity"),
            remedy="compare each temperature and viscosity with the certificate",
        )
    found, other = _joined(known, values, temperature, liquid)
    parts = _points(reference, estimates, found.viscosity * found.weights / values)
    parts.append(_law(reference, other.viscosity - found.viscosity))
    return CertifiedValue(
        reference=reference.name,
        temperature=temperature,
        value=found.viscosity,
        slope=found.viscosity * found.slope,
        parts=tuple(parts),
        law=found.law,
    )


def _joined(
    known: Numbers, values: Numbers, temperature: float, liquid: Liquid | None
) -> tuple[Interpolated, Interpolated]:
    """Return the value by the law that is used, and by another one."""
    pair = _nearest_pair(known, temperature)
    nearest = _walther(known[pair], values[pair], temperature, liquid)
    if len(known) > 2:
        try:
            return by_vogel(known, values, temperature), nearest
        except InputError:  # bent the wrong way, as invented or rounded points may be
            weights = np.zeros(len(known))
            weights[pair] = nearest.weights
            told = "walther between the nearest two, as no law of Vogel passes through all"
            nearest = replace(nearest, law=told, weights=weights)
    return nearest, by_andrade(known[pair], values[pair], temperature)


def _nearest_pair(known: Numbers, temperature: float) -> slice:
    upper = int(np.clip(np.searchsorted(known, temperature), 1, len(known) - 1))
    return slice(upper - 1, upper + 1)


def _walther(
    temperatures: Numbers, viscosities: Numbers, temperature: float, liquid: Liquid | None
) -> Interpolated:
    """Interpolate kinematic viscosities; without a liquid as if it were as dense as water.

    The density nearly cancels: a tenth of it moves a value halfway between 20 and 40 degC by
    some 1e-4.
    """
    density, expansion, at = 1000.0, 0.0, temperature
    if liquid is not None:
        density = liquid.density.value
        expansion = 0.0 if liquid.expansion is None else liquid.expansion.value
        at = temperature if liquid.density_temperature is None else liquid.density_temperature

    def density_at(kelvin: float | Numbers) -> Numbers:
        return np.asarray(
            liquid_density(
                density=density, expansion=expansion, temperature=kelvin, reference_temperature=at
            )
        )

    return by_walther(
        temperatures=temperatures,
        viscosities=viscosities,
        densities=density_at(temperatures),
        temperature=temperature,
        density=float(density_at(temperature)),
        density_slope=-expansion / (1.0 + expansion * (temperature - at)),
    )


def _points(
    reference: Reference, estimates: list[Estimate], sensitivities: Numbers
) -> list[CertifiedPart]:
    """Split the points' errors into the one they share and each one's own.

    With correlation r of any two, the shared error has r of every point's variance. It is named
    for all the points, and counted in units of the most uncertain one's.
    """
    r = reference.correlation
    u = np.array([estimate.u for estimate in estimates])
    parts = []
    if r > 0:
        anchor = estimates[int(np.argmax(u))]
        ratio = u / anchor.u if anchor.u > 0 else np.ones_like(u)
        shared = replace(anchor, name=key_path("reference", reference.name, "viscosity"))
        total = math.sqrt(r) * float(sensitivities @ ratio)
        parts.append(CertifiedPart(shared, total))
    if r < 1:
        own = math.sqrt(1 - r) * sensitivities
        parts += [CertifiedPart(*pair) for pair in zip(estimates, own.tolist(), strict=True)]
    return parts


def _law(reference: Reference, difference: float) -> CertifiedPart:
    """Return the law's own part: another law's difference as limits, in Pa.s."""
    position = Estimate(
        0.0, 1 / math.sqrt(3), "rectangular", name=key_path("reference", reference.name, "law")
    )
    return CertifiedPart(position, difference)


def _from_one(
    reference: Reference,
    temperature: float,
    point: Estimate,
    known: float,
    liquid: Liquid | None,
) -> CertifiedValue:
    """Carry a single point over by Andrade's law with the liquid's slope at the point."""
    steepness = None if liquid is None else liquid.viscosity_slope
    if steepness is None:
        if temperature != known:
            raise InputError(
                f"has one certified value, at {known - 273.15:g} degC, and nothing to bring it to "
                f"{temperature - 273.15:.2f} degC",
                key=key_path("reference", reference.name, "viscosity"),
                remedy="add a second value of the certificate, or viscosity_slope in the "
                "[liquid.NAME] that it names",
            )
        parts = _points(reference, [point], np.ones(1))
        return CertifiedValue(
            reference.name, temperature, point.value, math.nan, tuple(parts), "one point"
        )
    stretched = known * (temperature - known) / temperature
    value = point.value * math.exp(steepness.value * stretched)
    straight = point.value * math.exp(steepness.value * (temperature - known))
    parts = _points(reference, [point], np.array([value / point.value]))
    parts.append(CertifiedPart(steepness, value * stretched))
    parts.append(_law(reference, straight - value))
    return CertifiedValue(
        reference=reference.name,
        temperature=temperature,
        value=value,
        slope=value * steepness.value * (known / temperature) ** 2,
        parts=tuple(parts),
        law="one point and the liquid's slope",
    )


def _water(reference: Reference, temperature: float) -> CertifiedValue:
    if not WATER[0] <= temperature <= WATER[1]:
        raise _too_far(reference, temperature, np.array(WATER))
    value = float(water_viscosity_at_atmosphere(temperature=temperature))
    step = 1e-3
    cooler, warmer = (
        float(water_viscosity_at_atmosphere(temperature=temperature + by)) for by in (-step, step)
    )
    name = key_path("reference", reference.name, "law")
    datum = Estimate(WATER_DATUM, WATER_DATUM_U * WATER_DATUM, "normal", name=name, unit=UNIT)
    ratio = Estimate(1.0, WATER_RATIO_U, "normal", name=f"{name}.ratio")
    return CertifiedValue(
        reference=reference.name,
        temperature=temperature,
        value=value,
        slope=(warmer - cooler) / (2 * step),
        parts=(CertifiedPart(datum, value / WATER_DATUM), CertifiedPart(ratio, value)),
        law="water (IAPWS SR6-08)",
    )


def _too_far(reference: Reference, temperature: float, known: Numbers) -> InputError:
    low, high = (f"{kelvin - 273.15:g}" for kelvin in (known[0], known[-1]))
    where = f"at {low} degC" if low == high else f"from {low} to {high} degC"
    return InputError(
        f"'{reference.name}' is certified {where}, and {temperature - 273.15:.2f} degC is asked "
        "for",
        key=key_path("reference", reference.name),
        remedy="measure at a certified temperature, or add the certificate's value there "
        "(a law carries no further than 1 K)",
    )
