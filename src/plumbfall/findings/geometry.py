"""The tube: ends, run-in, and what the bench sheet does not say of them."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from plumbfall.bench.records import Tube
from plumbfall.findings.data import Found, RunData
from plumbfall.measurement.off_axis import near_wall
from plumbfall.results import Finding

__all__ = ["end_near", "geometry_unknown", "off_axis_suspected", "run_in_short"]

GEOMETRY = {
    "surface_above": "the end effect of the surface",
    "bottom_below": "the end effect of the bottom",
    "release_above": "the run-in",
}


def geometry_unknown(data: RunData) -> Iterator[Found]:
    """Find tubes without the distances that ends and run-in are judged by."""
    for run_set, tube in _tubes(data):
        missing = [name for name in GEOMETRY if getattr(tube, name) is None]
        if missing:
            unjudged = ", ".join(GEOMETRY[name] for name in missing)
            yield (
                run_set,
                Finding(
                    code="geometry-unknown",
                    severity="note",
                    message=f"tube {tube.name} does not give {', '.join(missing)}: "
                    f"{unjudged} cannot be judged and is taken as nil",
                    remedy=f"measure it and add it to [tube.{tube.name}]",
                ),
            )


def end_near(data: RunData) -> Iterator[Found]:
    """Find marks within one bore radius of an end of the liquid, where the end is felt."""
    for run_set, tube in _tubes(data):
        assert tube.bore is not None  # a vertical tube has one
        radius = tube.bore.value / 2
        for name, distance, end in (
            ("first", tube.surface_above, "surface"),
            ("last", tube.bottom_below, "bottom"),
        ):
            if distance is None or distance.value >= data.limits.end_clearance * radius:
                continue
            allowed, effect = _allowed_for(data, run_set)
            yield (
                run_set,
                Finding(
                    code="end-near",
                    severity="warning",
                    statistic=distance.value / radius,
                    effect=effect,
                    message=f"the {name} mark of tube {tube.name} is only "
                    f"{distance.value / radius:.2f} bore radii from the {end}; the drag there is "
                    f"higher, {allowed}",
                    remedy=f"keep the {name} mark at least one bore radius "
                    f"({1000 * radius:.0f} mm) from the {end}, better one and a half",
                ),
            )


def run_in_short(data: RunData) -> Iterator[Found]:
    """Find drops that reach the first mark before they have reached their terminal speed."""
    columns = data.columns
    tube = data.selection.cells.tube[data.selection.cell]
    released = _of_tubes(data, "release_above")[tube]
    bias = columns.run_in - 1
    unknown = columns.start_unknown
    for run_set, drops in data.flagged((bias > data.limits.run_in) | unknown):
        late = np.where(unknown, 1.0 + columns.start_bound, bias)
        worst = drops[np.argmax(late[drops])]
        if unknown[worst]:
            cost = (
                "how much later the last mark is reached because of that is not known here; the "
                f"viscosity may be {100 * columns.start_bound[worst]:.2g} % too high, which only "
                "the bounds allow for"
            )
        else:
            cost = (
                f"the timing is {100 * bias[worst]:.2f} % too long because of that, which the "
                "result allows for"
            )
        yield (
            run_set,
            Finding(
                code="run-in-short",
                severity="warning",
                drops=data.numbers(drops),
                statistic=float(released[worst]),
                effect=float(columns.start_bound[worst] if unknown[worst] else bias[worst]),
                message=f"the ball is let go only {1000 * released[worst]:.0f} mm above the first "
                f"mark and is still gaining speed there; {cost}",
                remedy="let the ball go higher above the first mark, or use a smaller ball",
            ),
        )


def _allowed_for(data: RunData, run_set: int) -> tuple[str, float | None]:
    """Say whether the result allows for the ends, and by how much."""
    if data.ends is None:
        return "and the viscosity comes out too high", None
    cells = data.selection.cells.run_set == run_set
    if data.ends.unknown[cells].any():
        return "by an unknown amount, and the viscosity comes out too high", None
    effect = float(np.max(data.ends.factor[cells])) - 1
    return f"which the result allows for ({100 * effect:.2f} % of viscosity)", effect


def off_axis_suspected(data: RunData) -> Iterator[Found]:
    """Find releases so far off the axis that the ball falls beside the wall."""
    tube = data.selection.cells.tube[data.selection.cell]
    radius = _of_tubes(data, "bore")[tube] / 2
    beta = np.abs(_of_tubes(data, "release_offset")[tube]) / radius
    let_go_beside = _beside(beta, data.columns.diameter_ratio)
    yield from _tilted(data, ~let_go_beside)
    for run_set, drops in data.flagged(let_go_beside):
        worst = drops[np.argmax(beta[drops])]
        yield (
            run_set,
            Finding(
                code="off-axis-suspected",
                severity="warning",
                drops=data.numbers(drops),
                statistic=float(beta[worst]),
                message=f"the ball is let go {beta[worst]:.2f} bore radii off the axis and "
                "falls so near the wall that its drag there is not known; it is taken as on the "
                "axis, and the viscosity comes out too high",
                remedy="let the ball go on the axis, through a guide",
            ),
        )


def _beside(beta: np.ndarray, ratio: np.ndarray) -> np.ndarray:
    """Whether a ball's drag off the axis is not known, and it is off by more than a touch.

    A wide ball is near the wall on the axis too, where its drag is known: a tenth of its
    clearance is let pass (common practice, no source).
    """
    beside: np.ndarray = near_wall(beta, ratio) & (beta > (1 - ratio) / 10)
    return beside


def _tilted(data: RunData, among: np.ndarray) -> Iterator[Found]:
    """Find tubes so far from the vertical that the ball meets the wall before the last mark."""
    cell = data.selection.cell
    tube = data.selection.cells.tube[cell]
    known = {key: np.nan_to_num(_of_tubes(data, key)) for key in ("tilt", "release_above")}
    path = known["release_above"][tube] + data.inputs.roles["to_mark"].value[cell]
    drift = path * np.abs(np.tan(known["tilt"][tube])) / (_of_tubes(data, "bore")[tube] / 2)
    for run_set, drops in data.flagged(among & _beside(drift, data.columns.diameter_ratio)):
        worst = drops[np.argmax(drift[drops])]
        tilt = np.degrees(abs(known["tilt"][tube[worst]]))
        yield (
            run_set,
            Finding(
                code="off-axis-suspected",
                severity="warning",
                drops=data.numbers(drops),
                statistic=float(drift[worst]),
                message=f"the tube is tilted by {tilt:.2g} deg, which brings a ball "
                f"{drift[worst]:.2f} bore radii off the axis by the last mark, near the wall; its "
                "drag there is not known, and the viscosity comes out too high",
                remedy="plumb the tube, and repeat the run set",
            ),
        )


def _of_tubes(data: RunData, key: str) -> np.ndarray:
    """One estimate's value of every tube, NaN where it is not given or a constant stands in."""
    estimates = [None if tube.kind == "calibrated" else getattr(tube, key) for tube in data.tubes]
    return np.array([np.nan if one is None else one.value for one in estimates])


def _tubes(data: RunData) -> Iterator[tuple[int, Tube]]:
    """Tubes whose geometry is looked at, by run set."""
    for run_set, code in data.pairs("tube"):
        if data.tubes[code].kind != "calibrated":
            yield int(run_set), data.tubes[code]
