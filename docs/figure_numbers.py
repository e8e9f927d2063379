"""The numbers that the figures of docs/methods.md are drawn from, out of the shipped tables."""

from __future__ import annotations

from typing import TypeAlias

import numpy as np
from numpy.typing import ArrayLike
from scipy.integrate import cumulative_simpson

from plumbfall.physics import (
    creeping_start_speed_ratio,
    end_excess,
    plane_factor,
    tube_drag_factor,
    wall_factor,
)
from plumbfall.physics.laws import laws_of
from plumbfall.physics.measured_errors import (
    inertia_error,
    no_run_in_bias,
    together_error,
    wall_error,
)

__all__ = [
    "RULES",
    "RULE_RATIOS",
    "Numbers",
    "Series",
    "drag_map",
    "ends",
    "inertia",
    "run_in",
    "together",
    "walls",
]

Series: TypeAlias = list[float | None]
Numbers: TypeAlias = dict[str, Series]

RULE_RATIOS = (0.05, 0.1, 0.3)
RULES = ("screened", "additive", "product")

# an invented bench: a 3 mm steel ball in a 40 mm bore, timed over 50 mm in aqueous glycerol
DIAMETER, BORE, LENGTH, BALL, LIQUID = 3e-3, 40e-3, 50e-3, 7800.0, 1200.0


def rounded(values: ArrayLike) -> Series:
    """Return numbers to four digits, more than an eye sees; what is not a number becomes None."""
    return [None if np.isnan(one) else float(f"{one:.4g}") for one in np.ravel(values)]


def walls() -> Numbers:
    """Size of each wall law's error in percent."""
    ratio = np.linspace(0.02, 0.7, 69)
    found = {"ratio": rounded(ratio)}
    for name in laws_of("walls"):
        if name != "exact":
            found[name] = rounded(100 * np.abs(wall_error(name, ratio)))
    return found


def inertia() -> Numbers:
    """Error of each inertia law in percent."""
    reynolds = np.geomspace(0.01, 100, 61)
    found = {"Reynolds number": rounded(reynolds)}
    for name in laws_of("inertia"):
        found[name] = rounded(100 * inertia_error(name, reynolds))
    return found


def together() -> Numbers:
    """Error of each joining rule in percent."""
    reynolds = np.geomspace(0.05, 100, 45)
    found = {"Reynolds number": rounded(reynolds)}
    for ratio in RULE_RATIOS:
        for name in RULES:
            found[f"{name} {ratio:g}"] = rounded(100 * together_error(name, ratio, reynolds))
        found[f"walls alone {ratio:g}"] = rounded(
            100
            * (
                wall_factor(diameter_ratio=ratio)
                / tube_drag_factor(diameter_ratio=ratio, reynolds=reynolds)
                - 1
            )
        )
    return found


def drag_map() -> Numbers:
    """K over the Reynolds number, and where inertia has come to a share of it."""
    reynolds = np.geomspace(0.01, 100, 41)
    found = {"Reynolds number": rounded(reynolds)}
    for ratio in (0.8, 0.6, 0.5, 0.4, 0.3, 0.2, 0.1, 0.01):
        found[f"K {ratio:g}"] = rounded(tube_drag_factor(diameter_ratio=ratio, reynolds=reynolds))
    found["K 0"] = rounded(tube_drag_factor(diameter_ratio=0.0, reynolds=reynolds))
    ratios = np.geomspace(0.01, 0.8, 41)
    dense = np.geomspace(1e-3, 100, 1001)
    share = tube_drag_factor(diameter_ratio=ratios[:, None], reynolds=dense)
    share = share / wall_factor(diameter_ratio=ratios[:, None]) - 1
    found["ratio"] = rounded(ratios)
    for level in (0.1, 1.0, 10.0, 100.0):
        found[f"{level:g} %"] = rounded(
            [
                np.exp(
                    np.interp(
                        np.log(level / 100), np.log(row), np.log(dense), left=np.nan, right=np.nan
                    )
                )
                for row in share
            ]
        )
    return found


def ends() -> Numbers:
    """Excess of the drag near the ends in percent, and that of a plane without a tube."""
    distance = np.linspace(0.35, 1.75, 71)
    found = {"distance": rounded(distance)}
    for ratio in (0.3, 0.1, 0.05):
        found[f"bottom, ratio {ratio:g}"] = rounded(
            100 * np.asarray(end_excess(diameter_ratio=ratio, distance=distance))
        )
    excess = 100 * np.asarray(end_excess(diameter_ratio=0.1, distance=distance, end="surface"))
    found["free surface, ratio 0.1"] = rounded(np.where(excess > 0, excess, np.nan))
    plane = np.asarray(plane_factor(gap_ratio=distance / 0.1))
    found["plane without a tube, ratio 0.1"] = rounded(100 * (plane - 1))
    found["factor of 1907, ratio 0.1, 10 radii of liquid"] = rounded(np.full(distance.shape, 3.3))
    return found


def run_in() -> Numbers:
    """Part of a timing that is too long, in percent, by the height of the release."""
    first = np.linspace(1.0, 40.0, 40)
    found = {"release": rounded(first)}
    ratio = DIAMETER / BORE
    for reynolds in (20.0, 6.8, 1.0):
        found[f"computed, Re {reynolds:g}"] = rounded(
            100
            * no_run_in_bias(
                reynolds,
                1e-3 * first / DIAMETER,
                diameter_ratio=ratio,
                density_ratio=BALL / LIQUID,
                length=LENGTH / DIAMETER,
            )
        )
    viscosity = 0.1
    speed = 6.8 * viscosity / (LIQUID * DIAMETER)
    factor = float(tube_drag_factor(diameter_ratio=ratio, reynolds=6.8))
    moved = np.pi / 6 * DIAMETER**3 * (BALL + LIQUID / 2)
    relaxation = moved / (3 * np.pi * viscosity * DIAMETER * factor)
    time = np.linspace(0, 2.0, 20001)
    starts = {
        "history force of textbooks, Re 6.8": np.append(
            0.0,
            creeping_start_speed_ratio(
                time=time[1:],
                ball_diameter=DIAMETER,
                ball_density=BALL,
                liquid_density=LIQUID,
                viscosity=viscosity,
            ),
        ),
        "exponential, Re 6.8": -np.expm1(-time / relaxation),
    }
    for name, share in starts.items():
        fallen = speed * cumulative_simpson(share, x=time, initial=0.0)
        early, late = (np.interp(1e-3 * first + more, fallen, time) for more in (0.0, LENGTH))
        found[name] = rounded(100 * (1 - LENGTH / speed / (late - early)))
    return found
