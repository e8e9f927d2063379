"""Slips of a unit, told by the factor that would put them right."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.data import Found, RunData
from plumbfall.findings.expected_viscosity import Expected, expected_viscosities
from plumbfall.findings.other_balls import candidates, shifts
from plumbfall.quantities import from_si
from plumbfall.results import Finding

__all__ = ["implausible_lengths", "unit_slip"]

Numbers = NDArray[np.float64]

LEAST_RATIO = 1.5
"""Less than this factor is no slip of a unit, but for viscosity against kinematic viscosity."""


@dataclass(frozen=True, slots=True)
class _Slip:
    """A factor by which the viscosity would have to be multiplied, shape (run sets,)."""

    factor: Numbers
    looks: str
    remedy: str


def unit_slip(data: RunData) -> Iterator[Found]:
    """Find viscosities off by the factor of a likely slip from what is expected of them."""
    viscosity = data.outputs.of("viscosity")
    without_inertia = _without_inertia(data)
    told: set[int] = set()
    for expected in expected_viscosities(data):
        with np.errstate(invalid="ignore", divide="ignore"):
            plain = np.log(expected.value / without_inertia)
            wanted = np.log(expected.value / viscosity.value)
            wanted = np.where(np.isfinite(wanted), wanted, plain)
            u = np.hypot(np.nan_to_num(viscosity.u / viscosity.value), expected.u)
            off = np.abs(wanted) > np.log(LEAST_RATIO) + expected.within
        slips = list(_slips(data)) if off.any() else []
        for slip in slips:
            with np.errstate(invalid="ignore", divide="ignore"):
                left = np.abs(wanted - np.log(slip.factor))
                left = np.fmin(left, np.abs(plain - np.log(slip.factor)))
                allowed = np.fmax(data.limits.slip_match, np.fmax(3 * u, expected.within))
                allowed = np.fmin(allowed, np.abs(np.log(slip.factor)) / 4)
            for run_set in np.flatnonzero(off & (left < allowed)):
                if run_set not in told:
                    told.add(int(run_set))
                    yield int(run_set), _finding(expected, wanted, slip, int(run_set))
        for run_set in np.flatnonzero(_kinematic(data, wanted, u, expected)):
            if run_set not in told:
                told.add(int(run_set))
                yield int(run_set), _as_kinematic(data, expected, wanted, int(run_set))


def _without_inertia(data: RunData) -> Numbers:
    """Viscosity of each set with walls but without inertia, which a wrong time makes wrong too."""
    columns, n_sets = data.columns, len(data.names)
    with np.errstate(invalid="ignore", divide="ignore"):
        plain = np.where(np.isnan(columns.stokes), columns.at_set, columns.stokes / columns.wall)
        total = np.bincount(data.selection.run_set, weights=plain, minlength=n_sets)
        return np.asarray(total / np.bincount(data.selection.run_set, minlength=n_sets))


def _slips(data: RunData) -> Iterator[_Slip]:
    one = np.ones(len(data.names))
    for factor in (60.0, 1 / 60):
        unit = "minutes read as seconds" if factor > 1 else "seconds read as minutes"
        yield _Slip(factor * one, unit, "check the unit of the time column")
    for size in (0.1, 0.01, 0.001, 10.0, 100.0, 1000.0):
        yield _Slip(
            size * one,
            f"a slip of {max(size, 1 / size):g} in a unit",
            "check the units of times, marks, diameters and of the expected value (P and Pa.s, cm "
            "and mm, s and ms)",
        )
    radius = _all_diameters(data, 2.0)
    yield _Slip(radius, "radii written as diameters", "check the diameters of the balls")
    twice = _all_diameters(data, 0.5)
    yield _Slip(twice, "diameters twice too large", "check the diameters of the balls")


def _all_diameters(data: RunData, factor: float) -> Numbers:
    """Factor of each set's viscosity if all diameters were multiplied, walls included."""
    n_sets, run_set = len(data.names), data.selection.run_set
    drops = np.unique(run_set, return_index=True)[1]
    of_set = run_set[drops]
    others = candidates(data, (factor,))
    own = data.selection.cells.ball[data.selection.cell[drops]]
    n = len(data.balls)
    shift = shifts(data, drops, others, data.columns.at_set[drops] * factor**2)
    found = np.full(n_sets, np.nan)
    found[of_set] = np.exp(-shift[np.arange(len(drops)), n + own])
    return found


def _kinematic(data: RunData, wanted: Numbers, u: Numbers, expected: Expected) -> NDArray[np.bool_]:
    """Say which sets are off by the liquid's density in g/cm3: mm2/s taken for mPa.s."""
    if expected.within:
        return np.zeros(len(wanted), dtype=bool)
    ratio = np.log(_density(data))
    least = data.limits.kinematic_match
    with np.errstate(invalid="ignore"):
        near = np.abs(np.abs(wanted) - np.abs(ratio)) < least
        return np.asarray(near & (np.abs(ratio) > np.fmax(2 * least, 4 * u)))


def _density(data: RunData) -> Numbers:
    """Density of each set's liquid in g/cm3, as the bench sheet has it."""
    density = np.full(len(data.names), np.nan)
    density[data.selection.cells.run_set] = data.inputs.roles["liquid_density"].value / 1000
    return density


def _finding(expected: Expected, wanted: Numbers, slip: _Slip, run_set: int) -> Finding:
    factor = float(np.exp(wanted[run_set]))
    return Finding(
        code="unit-slip-suspected",
        severity="warning",
        statistic=factor,
        effect=factor - 1,
        message=f"by {expected.source} the viscosity should be {factor:.3g} times what it is; "
        f"that looks like {slip.looks}, a factor of {float(slip.factor[run_set]):.3g}",
        remedy=slip.remedy,
    )


def _as_kinematic(data: RunData, expected: Expected, wanted: Numbers, run_set: int) -> Finding:
    factor = float(np.exp(wanted[run_set]))
    return Finding(
        code="unit-slip-suspected",
        severity="warning",
        statistic=factor,
        effect=factor - 1,
        message=f"by {expected.source} the viscosity should be {factor:.4f} times what it is, and "
        f"the liquid has {_density(data)[run_set]:.4f} g/cm3: is the one in mPa.s and the other "
        "in mm2/s?",
        remedy="see whether the certificate states viscosity (mPa.s) or kinematic viscosity "
        "(mm2/s), and write the value with its unit",
    )


# --- lengths -------------------------------------------------------------------------------------

USUAL = {
    "bore": (3e-3, 0.3),
    "distance between marks": (5e-3, 3.0),
    "diameter": (1e-4, 0.05),
}
"""Lengths in m that fall tubes and their balls have (common practice, no source)."""

LENGTH_FACTORS = (10.0, 0.1, 100.0, 0.01, 1000.0, 0.001, 25.4, 1 / 25.4)


def implausible_lengths(data: RunData) -> Iterator[Found]:
    """Find bores, marks and diameters that no fall tube or ball has, with the factor that mends."""
    cells, roles = data.selection.cells, data.inputs.roles
    measured = ~data.inputs.calibrated  # a calibrated tube has no lengths
    lengths = {
        "bore": (roles["bore"].value * measured, cells.tube, "tube"),
        "distance between marks": (
            (roles["to_mark"].value - roles["from_mark"].value) * measured,
            cells.tube,
            "tube",
        ),
        "diameter": (roles["diameter"].value, cells.ball, "ball"),
    }
    for what, (value, code, kind) in lengths.items():
        low, high = USUAL[what]
        wrong = (value > 0) & ((value < low) | (value > high))
        if not wrong.any():
            continue
        entries = list(getattr(data, f"{kind}s"))
        for run_set, at in np.unique(np.stack([cells.run_set, code], axis=1)[wrong], axis=0):
            place = np.flatnonzero(wrong & (cells.run_set == run_set) & (code == at))[0]
            length = float(value[place])
            mends = [f for f in LENGTH_FACTORS if low <= length * f <= high]
            name = entries[at].name
            would = (
                f"; {mends[0]:.3g} times it would be {_shown(length * mends[0])} mm"
                if mends
                else ""
            )
            yield (
                int(run_set),
                Finding(
                    code="unit-slip-suspected",
                    severity="warning",
                    statistic=length,
                    message=f"the {what} of {kind} {name} is {_shown(length)} mm, outside the "
                    f"usual {_shown(low)} to {_shown(high)} mm{would}",
                    remedy=f"check the unit in [{kind}.{name}]",
                ),
            )


def _shown(metres: float) -> str:
    return f"{from_si(metres, 'mm', 'length'):.4g}"
