"""The force balance of one fall: from raw inputs to weight less buoyancy, speed and geometry.

A ball that falls at its terminal speed v in a liquid of density rho_f is in balance:

    K(lambda, Re) 3 pi eta d v = W = (m - rho_f pi d^3 / 6) g cos(tilt)

with d the ball's diameter and rho_f the liquid's density at the drop's temperature, lambda the
diameter ratio and K the drag factor. Everything but eta and K is computed here.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.measurement.inputs import Column, Inputs
from plumbfall.physics.thermal import expanded_length, liquid_density
from plumbfall.physics.weight import mass_from_weighing, sphere_volume

__all__ = ["Balance", "Codes", "Numbers", "balance", "corrected_temperature", "spread"]

Numbers = NDArray[np.float64]
Codes = NDArray[np.intp]


@dataclass(frozen=True, slots=True)
class Balance:
    """One block of drops in SI units; each array broadcasts to shape (drops,).

    ``ball_offset``, ``tube_offset`` and ``liquid_offset`` are temperatures less the one at
    which the ball, the tube and the liquid's density were measured, 0 where unknown.
    ``speed`` is that far from ends and release, and ``time`` what it would take. ``cold_diameter``
    and ``cold_volume`` are those at the measuring temperature, gauge corrected.
    """

    temperature: Numbers
    ball_offset: Numbers
    tube_offset: Numbers
    liquid_offset: Numbers
    cold_diameter: Numbers
    cold_volume: Numbers
    diameter: Numbers
    volume: Numbers
    bore: Numbers
    distance: Numbers
    time: Numbers
    speed: Numbers
    mass: Numbers
    liquid_density: Numbers
    net_mass: Numbers
    weight: Numbers
    diameter_ratio: Numbers


def spread(values: Numbers, cell: Codes) -> Numbers:
    """Values of cells taken to drops; one number stays one number, to save passes."""
    return values[:1] if len(values) and (values == values[0]).all() else values[cell]


def corrected_temperature(inputs: Inputs, cell: Codes, reading: Numbers) -> Numbers:
    """Thermometer readings, or the run set's where a drop has none, with the correction added."""
    if inputs.temperature_known.any():
        of_set = np.where(inputs.temperature_known, inputs.roles["temperature"].value, np.nan)
        reading = np.where(np.isnan(reading), of_set[cell], reading)
    return reading + spread(inputs.roles["thermometer"].value, cell)


def balance(
    inputs: Inputs,
    cell: Codes,
    time: Numbers,
    temperature: Numbers,
    end_factor: Numbers | float = 1.0,
    run_in: Numbers | float = 0.0,
) -> Balance:
    """Compute the force balance of a block of drops.

    Parameters
    ----------
    inputs : Inputs
        Raw inputs by cell.
    cell : array of int, shape (drops,)
        Each drop's cell.
    time : array, shape (drops,) [s]
        Clock readings between the marks.
    temperature : array, shape (drops,) [K]
        The drops' corrected temperatures; NaN where unknown.
    end_factor : array, shape (drops,) [1]
        Mean over the path of the drag over its value far from the tube's ends.
    run_in : array, shape (drops,) [s]
        Time lost between the marks because the ball started from rest.

    Returns
    -------
    Balance
        The quantities of the balance, before any drag law.
    """
    roles = inputs.roles

    def take(role: str) -> Numbers:
        return spread(roles[role].value, cell)

    ball_offset = _offset(temperature, spread(inputs.ball_measured_at, cell))
    tube_offset = _offset(temperature, spread(inputs.tube_measured_at, cell))
    liquid_offset = _offset(temperature, spread(inputs.liquid_density_at, cell))

    cold_diameter = take("diameter") + take("gauge")
    cold_volume = np.asarray(sphere_volume(ball_diameter=cold_diameter))
    mass = take("ball_density") * cold_volume
    if inputs.weighed.any():
        reading = (take("mass") + take("balance")) / spread(inputs.together, cell)
        weighed = mass_from_weighing(reading=reading, ball_diameter=cold_diameter)
        mass = np.where(inputs.weighed[cell], weighed, mass)

    diameter = _grown(cold_diameter, roles["ball_expansion"], cell, ball_offset)
    volume = np.asarray(sphere_volume(ball_diameter=diameter))
    bore = _grown(take("bore"), roles["tube_expansion"], cell, tube_offset)
    distance = take("to_mark") - take("from_mark")
    distance = _grown(distance, roles["tube_expansion"], cell, tube_offset)
    density = np.asarray(
        liquid_density(
            density=take("liquid_density"),
            expansion=take("liquid_expansion"),
            temperature=liquid_offset,
            reference_temperature=0.0,
        )
    )

    true_time = time * (1 + take("rate")) - take("bias") - run_in
    net_mass = mass - density * volume
    weight = net_mass * (take("gravity") * np.cos(take("tilt")))
    return Balance(
        temperature=temperature,
        ball_offset=ball_offset,
        tube_offset=tube_offset,
        liquid_offset=liquid_offset,
        cold_diameter=cold_diameter,
        cold_volume=cold_volume,
        diameter=diameter,
        volume=volume,
        bore=bore,
        distance=distance,
        time=true_time,
        speed=distance * end_factor / true_time,
        mass=mass,
        liquid_density=density,
        net_mass=net_mass,
        weight=weight,
        diameter_ratio=diameter / bore,
    )


def _grown(length: Numbers, expansion: Column, cell: Codes, offset: Numbers) -> Numbers:
    if not expansion.present:
        return length  # saves the passes
    return np.asarray(
        expanded_length(
            length=length,
            expansion=spread(expansion.value, cell),
            temperature=offset,
            reference_temperature=0.0,
        )
    )


def _offset(temperature: Numbers, measured_at: Numbers) -> Numbers:
    """Temperature less the measuring one; an unknown temperature expands nothing."""
    return np.nan_to_num(temperature - measured_at, nan=0.0)
