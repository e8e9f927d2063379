"""Tube constants: whether they are used where they were found, and with what they were found."""

from __future__ import annotations

import math
from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.data import Found, RunData
from plumbfall.measurement.constants import ChosenConstant
from plumbfall.results import Finding

__all__ = ["constant_outside_domain", "constant_varies", "input_changed"]

MOST_KEYS = 8
CELSIUS_ZERO = 273.15


def constant_outside_domain(data: RunData) -> Iterator[Found]:
    """Find drops made where the tube's constant was not shown to hold."""
    for run_set, chosen, drops in _in_use(data):
        outside = [*_ranges(data, chosen, drops), *_setting(data, chosen)]
        if not outside:
            continue
        yield (
            run_set,
            Finding(
                code="constant-outside-domain",
                severity="warning",
                message=f"the constant of tube {chosen.tube} with ball {chosen.ball} is used where "
                f"it was not found: {'; '.join(outside)}",
                remedy="calibrate with certified liquids that bracket this one, at this "
                "temperature, with this ball and tube",
            ),
        )


def _ranges(data: RunData, chosen: ChosenConstant, drops: NDArray[np.intp]) -> Iterator[str]:
    """Say which of temperature, viscosity and time leave what the constant was found between."""
    domain, columns = chosen.domain, data.columns
    kelvin, wider = data.limits.constant_temperature, 1.0 + data.limits.constant_range
    for found, used, add, times, say in (
        (domain.temperature, columns.temperature[drops], kelvin, 1.0, _celsius),
        (domain.viscosity, columns.viscosity[drops], 0.0, wider, _viscosity),
        (domain.time, data.selection.time[drops], 0.0, wider, _seconds),
    ):
        if found is None or np.isnan(used).all():
            continue
        least, most = float(np.nanmin(used)), float(np.nanmax(used))
        if least < found[0] / times - add or most > found[1] * times + add:
            worst = most if most > found[1] * times + add else least
            yield f"{say(worst)}, found from {say(found[0])} to {say(found[1])}"


def _celsius(kelvin: float) -> str:
    return f"{kelvin - CELSIUS_ZERO:.2f} degC"


def _viscosity(value: float) -> str:
    return f"{value:.3g} Pa.s" if value >= 1 else f"{1e3 * value:.3g} mPa.s"


def _seconds(time: float) -> str:
    return f"{time:.4g} s"


def _setting(data: RunData, chosen: ChosenConstant) -> Iterator[str]:
    """Say what of tube, ball and place is not as it was."""
    domain, bench = chosen.domain, data.bench
    tube, ball = bench.tubes[chosen.tube], bench.balls[chosen.ball]
    if tube.tilt is not None and domain.tilt is not None:
        now, then = math.degrees(tube.tilt.value), math.degrees(domain.tilt)
        if abs(now - then) > data.limits.constant_tilt:
            yield f"the tube is tilted by {now:.4g} deg, found at {then:.4g} deg"
    gravity = bench.site.gravity
    if gravity is not None and domain.gravity is not None:
        ratio = gravity.value / domain.gravity - 1
        if abs(ratio) > data.limits.constant_gravity:
            yield f"gravity here differs by {100 * ratio:.2f} %, and the viscosity by as much"
    for what, now_identity, then_identity in (
        ("tube", tube.identity.identity, domain.tube_identity),
        ("ball", ball.identity.identity, domain.ball_identity),
    ):
        if now_identity and then_identity and now_identity != then_identity:
            yield f"the {what} is {now_identity}, found with {then_identity}"


def constant_varies(data: RunData) -> Iterator[Found]:
    """Pass on what the calibration said of a constant that is none."""
    for run_set, chosen, _ in _in_use(data):
        if chosen.stored is not None and chosen.stored.varies:
            yield (
                run_set,
                Finding(
                    code="constant-varies",
                    severity="warning",
                    message=f"of the constant of tube {chosen.tube} with ball {chosen.ball} its "
                    f"calibration said: {chosen.stored.varies}",
                    remedy="mend the calibration first: the bounds here do not allow for it",
                ),
            )


def input_changed(data: RunData) -> Iterator[Found]:
    """Find constants whose errors are no longer shared, as the bench sheet has changed since."""
    for run_set, chosen, _ in _in_use(data):
        constant = next(one for one in data.inputs.constants if one.chosen is chosen)
        if constant.changed:
            shown = ", ".join(constant.changed[:MOST_KEYS])
            if more := len(constant.changed) - MOST_KEYS:
                shown += f" and {more} more" if more > 0 else ""
            yield (
                run_set,
                Finding(
                    code="input-changed",
                    severity="note",
                    statistic=float(len(constant.changed)),
                    message=f"not as when the constant of tube {chosen.tube} with ball "
                    f"{chosen.ball} was found: {shown}; errors then and now count as independent, "
                    "so that none of them cancels",
                    remedy="if nothing has changed, write value, uncertainty and identity as in "
                    "the bench sheet of the calibration; otherwise calibrate anew",
                ),
            )
        if chosen.file is not None and chosen.file.edited:
            yield (
                run_set,
                Finding(
                    code="input-changed",
                    severity="note",
                    message=f"{chosen.file.path} is not as plumbfall calibrate wrote it: "
                    "it was edited by hand, and is used as it stands",
                    remedy="write it anew with plumbfall calibrate --out, or say in the report why "
                    "it was changed",
                ),
            )


def _in_use(data: RunData) -> Iterator[tuple[int, ChosenConstant, NDArray[np.intp]]]:
    """Constants in use by run set, with the places of the drops that use them."""
    if not data.inputs.constants:
        return
    of_drop = data.inputs.constant_of[data.selection.cell]
    for place, constant in enumerate(data.inputs.constants):
        for run_set, drops in data.flagged(of_drop == place):
            yield run_set, constant.chosen, drops
