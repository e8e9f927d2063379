"""Whether the drops have a viscosity at all, and whether the drag law may be trusted there."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from plumbfall.findings.data import Found, RunData
from plumbfall.physics.inertia import reynolds_of_drag_abraham
from plumbfall.results import Finding

__all__ = [
    "ball_not_denser",
    "diameter_ratio_high",
    "no_solution",
    "reynolds_high",
    "reynolds_uncertain",
]


def ball_not_denser(data: RunData) -> Iterator[Found]:
    """Find balls that are not denser than the liquid, and so cannot fall."""
    for run_set, drops in data.flagged(data.columns.floating):
        names = _ball_names(data, drops)
        yield (
            run_set,
            Finding(
                code="ball-not-denser",
                severity="error",
                drops=data.numbers(drops),
                message=f"ball {names} is not denser than the liquid, so it cannot have fallen",
                remedy="check the ball's density or mass, and the liquid's density and unit",
            ),
        )


def no_solution(data: RunData) -> Iterator[Found]:
    """Find falls so fast that no viscosity, however small, allows them."""
    for run_set, drops in data.flagged(data.columns.no_root):
        yield (
            run_set,
            Finding(
                code="no-solution",
                severity="error",
                drops=data.numbers(drops),
                message="no liquid, however thin, lets a ball of this weight fall so fast: "
                "the drag it would need lies below that of any sphere",
                remedy="check the times and their unit, the marks, and the timer's bias",
            ),
        )


def reynolds_high(data: RunData) -> Iterator[Found]:
    """Find Reynolds numbers beyond the drag law's limit: refused, not extrapolated."""
    columns, limiting = data.columns, data.law.reynolds_law
    for run_set, drops in data.flagged(columns.too_fast):
        density = data.inputs.roles["liquid_density"].value[data.selection.cell[drops]]
        needed = 8 * columns.shear_stress[drops] / (density * columns.fall_speed[drops] ** 2)
        reynolds = float(np.max(reynolds_of_drag_abraham(drag_coefficient=needed)))
        yield (
            run_set,
            Finding(
                code="reynolds-high",
                severity="error",
                drops=data.numbers(drops),
                statistic=reynolds,
                message=f"the Reynolds number is about {reynolds:.0f} (by Abraham's law, without "
                f"walls), above {limiting.high:g}, the limit of the drag law '{limiting.name}'; "
                "no viscosity is given, as the drag is not known there",
                remedy="use a smaller or lighter ball, so that it falls more slowly",
            ),
        )


def diameter_ratio_high(data: RunData) -> Iterator[Found]:
    """Find balls that fill more of the bore than the drag law covers."""
    for run_set, drops in data.flagged(data.columns.too_wide & ~data.columns.floating):
        ratio = float(np.max(data.columns.diameter_ratio[drops]))
        yield (
            run_set,
            Finding(
                code="diameter-ratio-high",
                severity="error",
                drops=data.numbers(drops),
                statistic=ratio,
                message=f"the diameter ratio {ratio:.5g} is above {data.law.max_ratio:g}, the "
                f"limit of the drag law '{data.law.ratio_law.name}'",
                remedy="use a smaller ball or a wider tube, or calibrate the tube with this ball",
            ),
        )


def reynolds_uncertain(data: RunData) -> Iterator[Found]:
    """Find drops where the law holds, but inertia makes it less certain than the rest."""
    of_law = data.columns.model_bound - data.columns.start_bound
    flag = of_law > data.limits.model_bound
    for run_set, drops in data.flagged(flag):
        worst = drops[np.argmax(data.columns.reynolds[drops])]
        reynolds = float(data.columns.reynolds[worst])
        bound = float(of_law[worst])
        yield (
            run_set,
            Finding(
                code="reynolds-high",
                severity="warning",
                drops=data.numbers(drops),
                statistic=reynolds,
                effect=bound,
                message=f"at Reynolds number {reynolds:.2g} the drag law '{data.law.together}' "
                f"(known to {data.law.max_reynolds:g}) is uncertain by up to {100 * bound:.1f} %; "
                "the bounds include it",
                remedy="use a smaller or lighter ball for narrower bounds",
            ),
        )


def _ball_names(data: RunData, drops: np.ndarray) -> str:
    codes = np.unique(data.selection.cells.ball[data.selection.cell[drops]])
    return ", ".join(data.balls[code].name for code in codes)
