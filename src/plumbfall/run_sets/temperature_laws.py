"""The temperature laws as models of ln(viscosity) that can be fitted."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.physics.temperature_laws import (
    andrade_slope,
    andrade_viscosity,
    vogel_slope,
    vogel_viscosity,
)
from plumbfall.uncertainty.least_squares import Evaluated, NoFitError

__all__ = ["LAWS", "TemperatureLaw"]

Numbers = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class TemperatureLaw:
    """ln(viscosity) of temperature with parameters to be fitted.

    ``parameters`` are names and SI units; as many temperatures are needed at least. ``evaluate``
    gives ln(viscosity) at temperatures with its derivatives by the parameters; ``slope`` is d
    ln(viscosity)/dT; ``start`` guesses parameters from temperatures and ln(viscosity).
    """

    name: str
    title: str
    equation: str
    source: str
    parameters: tuple[tuple[str, str], ...]
    evaluate: Callable[[Numbers, Numbers], Evaluated]
    slope: Callable[[Numbers, Numbers], Numbers]
    start: Callable[[Numbers, Numbers], Numbers]

    @property
    def fewest(self) -> int:
        """Temperatures that are needed at least."""
        return len(self.parameters)


def _andrade(parameters: Numbers, temperature: Numbers) -> Evaluated:
    a, b = parameters
    viscosity = andrade_viscosity(intercept=a, slope=b, temperature=temperature)
    return Evaluated(
        np.log(viscosity), np.stack([np.ones_like(temperature), 1 / temperature], axis=1)
    )


def _andrade_slope(parameters: Numbers, temperature: Numbers) -> Numbers:
    return np.asarray(andrade_slope(slope=parameters[1], temperature=temperature))


def _andrade_start(temperature: Numbers, log_viscosity: Numbers) -> Numbers:
    # a line through the values: the model is linear, so any start leads to the same fit
    return np.polyfit(1 / temperature, log_viscosity, 1)[::-1].copy()


def _vogel(parameters: Numbers, temperature: Numbers) -> Evaluated:
    a, b, t0 = parameters
    inverse = 1 / (temperature - t0)
    viscosity = vogel_viscosity(intercept=a, slope=b, vogel_temperature=t0, temperature=temperature)
    curvature = np.zeros((len(temperature), 3, 3))
    curvature[:, 1, 2] = curvature[:, 2, 1] = inverse**2
    curvature[:, 2, 2] = 2 * b * inverse**3
    design = np.stack([np.ones_like(temperature), inverse, b * inverse**2], axis=1)
    return Evaluated(np.log(viscosity), design, curvature)


def _vogel_slope(parameters: Numbers, temperature: Numbers) -> Numbers:
    _, b, t0 = parameters
    return np.asarray(vogel_slope(slope=b, vogel_temperature=t0, temperature=temperature))


def _vogel_start(temperature: Numbers, log_viscosity: Numbers) -> Numbers:
    """Best of many temperatures T0, each with its line through the values."""
    coldest = float(temperature.min())
    best, least = None, np.inf
    for t0 in coldest - np.geomspace(5.0, coldest - 1.0, 25):
        design = np.stack([np.ones_like(temperature), 1 / (temperature - t0)], axis=1)
        line, *_ = np.linalg.lstsq(design, log_viscosity, rcond=None)
        squares = float(np.sum((log_viscosity - design @ line) ** 2))
        if squares < least:
            best, least = np.array([*line, t0]), squares
    if best is None:
        raise NoFitError("the values do not determine the parameters")
    return best


LAWS = {
    law.name: law
    for law in (
        TemperatureLaw(
            "andrade",
            "Andrade's law",
            "ln(viscosity) = A + B/T",
            "Andrade 1930",
            (("A", "1"), ("B", "K")),
            _andrade,
            _andrade_slope,
            _andrade_start,
        ),
        TemperatureLaw(
            "vogel",
            "Vogel's law",
            "ln(viscosity) = A + B/(T - T0)",
            "Vogel 1921",
            (("A", "1"), ("B", "K"), ("T0", "K")),
            _vogel,
            _vogel_slope,
            _vogel_start,
        ),
    )
}
"""Laws that ``[methods] slope`` may name."""
