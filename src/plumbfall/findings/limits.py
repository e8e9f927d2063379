"""The limits that findings use, in one table; each may be overridden in ``[limits]``."""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Mapping
from dataclasses import dataclass

from plumbfall.errors import InputError, Problem, nearest_name

__all__ = ["Limits", "limits_from"]


@dataclass(frozen=True, slots=True)
class Limits:
    """Limits of the findings; relative ones are ratios, temperatures in kelvin.

    exclude_outliers
        Leave out drops beyond Grubbs' 1 % limit, under the rule ``grubbs-1-percent``.
    outlier_level, straggler_level
        Two-sided significance of an outlier and of a straggler (ISO 5725-2, 7.3.4).
    warning_level
        Part of clean sets that all other statistical warnings together may raise; they share it.
    too_few_drops
        Fewer drops than this are noted (common practice, no source).
    many_excluded
        Largest part of the rows that may be void or excluded (common practice, no source).
    temperature_agreement
        Largest range of temperature in a set that needs no slope.
    temperature_spread
        Largest range of temperature in a set before it is warned of (common practice, no source).
    slope_extrapolation
        Largest distance of the reference temperature from those a law was fitted to (common
        practice, no source).
    equilibration_times
        Time constants of the bore to wait after filling: five leave 1 % (common practice, no
        source).
    model_bound
        Largest half-width of the drag law itself before the Reynolds number is warned of.
    end_clearance
        Least distance of a mark from an end of the liquid, in bore radii (Tanner 1963).
    run_in
        Largest part of the time lost in the run-in before it is warned of.
    ball_density_low, ball_density_high
        Plausible ball densities in kg/m3: polymers to tungsten carbide.
    liquid_density_low, liquid_density_high
        Plausible densities of liquids that balls are dropped in, kg/m3.
    density_temperature
        Largest distance of the liquid's temperature from that of its density, where its
        expansion is not given.
    density_effect
        Least effect on the viscosity, as a ratio, before that is warned of.
    excluded_effect
        Largest part of the expanded uncertainty by which what was left out may move the result.
    timing_effect
        Largest standard uncertainty of the result by its timing alone, relative to it: one drop
        of 20 s by stopwatch (Am. J. Phys. 87, 110, 2019).
    scatter_excess
        Least unexplained scatter of a drop, relative to its viscosity, before it is warned of.
    resolution_share
        Largest step of written times over their scatter (common practice, no source).
    resolution_effect
        Least effect of half such a step on the viscosity, as a ratio, before it is warned of.
    swap_effect
        Least difference of what two balls give for one drop, as a ratio, before they are tried
        for each other.
    swap_match
        How near a drop must come to the others when taken for another ball, as a ratio (common
        practice, no source).
    slip_match
        How near a viscosity must be to what is expected of it times a slip's factor, as a ratio.
    kinematic_match
        The same where the factor is the liquid's density, mm2/s having been taken for mPa.s.
    best_uncertainty
        Least relative standard uncertainty to be believed: BIPM key comparison CCM.V-K1.
    constant_temperature
        Largest distance from the temperatures a tube constant was found at (common practice, no
        source).
    constant_range
        By how much, as a ratio, viscosity and time may leave those a tube constant was found
        between (common practice, no source).
    constant_tilt
        Largest difference, in degrees, of the tube's tilt from that the constant was found at
        (common practice, no source).
    constant_gravity
        Largest relative difference of gravity (ISO 3104, 7, has it for capillary viscometers).
    stopwatch_share
        Least uncertainty to be believed of a stopwatch, over that of usual timing by hand.
    """

    exclude_outliers: bool = False
    outlier_level: float = 0.01
    straggler_level: float = 0.05
    warning_level: float = 0.03
    too_few_drops: float = 5
    many_excluded: float = 0.20
    temperature_agreement: float = 0.1
    temperature_spread: float = 1.0
    slope_extrapolation: float = 2.0
    equilibration_times: float = 5.0
    model_bound: float = 0.01
    end_clearance: float = 1.0
    run_in: float = 2e-3
    ball_density_low: float = 900.0
    ball_density_high: float = 20000.0
    liquid_density_low: float = 600.0
    liquid_density_high: float = 3500.0
    density_temperature: float = 0.5
    density_effect: float = 5e-4
    excluded_effect: float = 1 / 3
    timing_effect: float = 0.005
    scatter_excess: float = 0.005
    resolution_share: float = 0.5
    resolution_effect: float = 1e-3
    swap_effect: float = 0.02
    swap_match: float = 0.01
    slip_match: float = 0.05
    kinematic_match: float = 0.005
    best_uncertainty: float = 4e-4
    constant_temperature: float = 1.0
    constant_range: float = 0.25
    constant_tilt: float = 0.5
    constant_gravity: float = 1e-3
    stopwatch_share: float = 0.5


_PROBABILITIES = ("outlier_level", "straggler_level", "warning_level", "many_excluded")


def limits_from(overrides: Mapping[str, float | bool], path: str = "") -> Limits:
    """Return the limits with the bench sheet's overrides.

    Raises
    ------
    InputError
        For a limit that no finding uses (it names the nearest one), and for a number that
        cannot be one.
    """
    known = [f.name for f in dataclasses.fields(Limits)]
    problems = []
    for name in overrides:
        if name not in known:
            near = nearest_name(name, known)
            problems.append(
                Problem(
                    f"no finding uses a limit '{name}'",
                    f"did you mean '{near}'?" if near else f"known: {', '.join(known)}",
                    path=path,
                    key=f"limits.{name}",
                )
            )
        elif not 0 <= float(overrides[name]) < (1 if name in _PROBABILITIES else math.inf):
            wanted = "from 0 to below 1" if name in _PROBABILITIES else "of at least 0"
            problems.append(
                Problem(
                    f"{overrides[name]:g} cannot be a limit of this kind",
                    f"write a number {wanted}",
                    path=path,
                    key=f"limits.{name}",
                )
            )
    if problems:
        raise InputError(problems)
    return dataclasses.replace(Limits(), **overrides)  # type: ignore[arg-type]  # numbers, one bool
