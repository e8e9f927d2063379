"""Every detector, in the order in which its findings are listed."""

from __future__ import annotations

from plumbfall.findings.ball_densities import density_off_material
from plumbfall.findings.balls import balls_disagree, diameter_ratio_trend, shear_dependence
from plumbfall.findings.claims import uncertainty_implausible
from plumbfall.findings.constants import (
    constant_outside_domain,
    constant_varies,
    input_changed,
)
from plumbfall.findings.counts import (
    nothing_left,
    reused_balls,
    too_few_drops,
    void_without_reason,
)
from plumbfall.findings.data import Detector, RunData
from plumbfall.findings.dates import calibration_overdue, reference_expired
from plumbfall.findings.densities import density_implausible, radius_as_diameter
from plumbfall.findings.diameters import nominal_diameter
from plumbfall.findings.drifts import temperature_lag, temperature_trend, time_trend
from plumbfall.findings.duplicates import duplicate_rows
from plumbfall.findings.equilibrium import first_drops_off, not_equilibrated
from plumbfall.findings.gaps import default_gravity, missing_uncertainty
from plumbfall.findings.geometry import (
    end_near,
    geometry_unknown,
    off_axis_suspected,
    run_in_short,
)
from plumbfall.findings.intervals import intervals_disagree
from plumbfall.findings.left_out import many_excluded
from plumbfall.findings.minutes import minutes_as_decimals
from plumbfall.findings.outliers import outlier, outlier_pair, straggler
from plumbfall.findings.resolution import resolution_coarse
from plumbfall.findings.scatter import scatter_large, scatter_small
from plumbfall.findings.solvability import (
    ball_not_denser,
    diameter_ratio_high,
    no_solution,
    reynolds_high,
    reynolds_uncertain,
)
from plumbfall.findings.swaps import swapped_ball
from plumbfall.findings.temperature_units import temperature_unit
from plumbfall.findings.temperatures import (
    density_temperature,
    fitted_slope,
    slope_sign,
    slope_unknown,
    temperature_spread,
)
from plumbfall.findings.timing import fall_time_short
from plumbfall.findings.unit_slips import implausible_lengths, unit_slip
from plumbfall.results import SEVERITIES, Finding

__all__ = ["DETECTORS", "OF_EQUIPMENT", "find"]

DETECTORS: tuple[Detector, ...] = (
    nothing_left,
    ball_not_denser,
    no_solution,
    reynolds_high,
    diameter_ratio_high,
    radius_as_diameter,
    density_implausible,
    density_off_material,
    implausible_lengths,
    temperature_unit,
    unit_slip,
    swapped_ball,
    outlier,
    outlier_pair,
    not_equilibrated,
    first_drops_off,
    time_trend,
    temperature_trend,
    temperature_lag,
    intervals_disagree,
    balls_disagree,
    shear_dependence,
    diameter_ratio_trend,
    reynolds_uncertain,
    run_in_short,
    end_near,
    off_axis_suspected,
    temperature_spread,
    density_temperature,
    slope_sign,
    fitted_slope,
    slope_unknown,
    minutes_as_decimals,
    scatter_large,
    scatter_small,
    duplicate_rows,
    resolution_coarse,
    fall_time_short,
    many_excluded,
    void_without_reason,
    constant_outside_domain,
    constant_varies,
    calibration_overdue,
    reference_expired,
    uncertainty_implausible,
    straggler,
    too_few_drops,
    reused_balls,
    nominal_diameter,
    geometry_unknown,
    missing_uncertainty,
    input_changed,
    default_gravity,
)


OF_EQUIPMENT: tuple[Detector, ...] = (
    ball_not_denser,
    no_solution,
    reynolds_high,
    diameter_ratio_high,
    radius_as_diameter,
    density_implausible,
    reynolds_uncertain,
    run_in_short,
    end_near,
    off_axis_suspected,
    density_temperature,
    slope_sign,
    slope_unknown,
    fall_time_short,
    constant_outside_domain,
    constant_varies,
    nominal_diameter,
    geometry_unknown,
    missing_uncertainty,
    default_gravity,
)
"""Those that judge ball, tube and bench sheet, not readings: they hold for planned drops too."""


def find(
    data: RunData, detectors: tuple[Detector, ...] = DETECTORS
) -> tuple[tuple[Finding, ...], ...]:
    """Run every detector; findings by run set, the gravest first."""
    found: list[list[Finding]] = [[] for _ in data.names]
    for detector in detectors:
        for run_set, finding in detector(data):
            found[run_set].append(finding)
    return tuple(
        tuple(sorted(findings, key=lambda finding: SEVERITIES.index(finding.severity)))
        for findings in found
    )
