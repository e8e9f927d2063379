"""Planned drops, worked out: each falls by the measurement equation, and is reduced.

A drop of every combination of tube, ball and viscosity is let fall without errors, and reduced,
each combination as a run set. So limits, findings and budget are those of the reduction itself.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
import pandas as pd
from numpy.typing import NDArray
from scipy import sparse

from plumbfall.bench.records import Bench
from plumbfall.findings.limits import limits_from
from plumbfall.findings.registry import OF_EQUIPMENT, find
from plumbfall.measurement.balance import Codes, Numbers
from plumbfall.measurement.ends import path_ends
from plumbfall.measurement.gather import gather
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.law import drag_law, model_estimate
from plumbfall.measurement.run_in import releases
from plumbfall.measurement.selection import KINDS, Cells
from plumbfall.physics.drag import DragLaw
from plumbfall.physics.laws import DEFAULTS
from plumbfall.planning.conditions import Conditions
from plumbfall.planning.forward import Fall, fall
from plumbfall.reduction.numbers import reduce_numbers, run_data
from plumbfall.results import Finding
from plumbfall.run_sets.own_errors import OwnErrors, own_errors
from plumbfall.timings.records import COLUMNS, Timings
from plumbfall.uncertainty.linear import Propagation, propagate

__all__ = ["Evaluation", "evaluate", "interval_times"]


@dataclass(frozen=True, slots=True)
class Evaluation:
    """Planned drops in columns of shape (combinations,).

    ``fallen`` are the falls; ``solved`` are the places of those that have a time, and only they
    are in what follows: ``found`` (findings), ``shared`` (contributions of the entries, relative
    to the viscosity), ``own`` (relative variances of what each drop has to itself).
    """

    conditions: Conditions
    tube: Codes
    ball: Codes
    viscosity: Numbers
    law: DragLaw
    inputs: Inputs
    fallen: Fall
    solved: NDArray[np.intp]
    found: tuple[tuple[Finding, ...], ...]
    shared: Propagation
    own: OwnErrors
    columns: tuple[str, ...]


def evaluate(
    conditions: Conditions, tube: Codes, ball: Codes, viscosity: Numbers, drops: int = 1
) -> Evaluation:
    """Work out drops of combinations of tube, ball and viscosity.

    Parameters
    ----------
    conditions : Conditions
        What they have in common.
    tube, ball : array of int, shape (combinations,)
        Codes into the bench's tubes and balls.
    viscosity : array, shape (combinations,) [Pa.s]
        Viscosity of the liquid.
    drops : int
        Drops of a run set, by which their own errors average out in findings.

    Returns
    -------
    Evaluation
        Falls, findings and contributions.
    """
    n = len(viscosity)
    names = tuple(f"planned {place}" for place in range(n))
    bench = _bench_of(conditions, names)
    tubes = list(bench.tubes.values())
    last = np.array([len(one.marks) - 1 for one in tubes], dtype=np.intp)[tube]
    cells = _cells(conditions, tube, ball, np.arange(n), np.zeros(n, dtype=np.intp), last)
    law = drag_law(bench)
    inputs = gather(cells, bench, names, model_estimate(bench))
    fallen = _fall(conditions, bench, law, cells, inputs, viscosity)
    solved = np.flatnonzero(fallen.clock > 0)
    if not len(solved):
        none = np.zeros(0)
        shared = propagate(sensitivities=np.zeros((0, 0)), u=none)
        return Evaluation(
            conditions, tube, ball, viscosity, law, inputs, fallen, solved, (), shared,
            OwnErrors(*[none] * len(OwnErrors.__slots__)), (),
        )  # fmt: skip
    timings = _timings(conditions, cells, inputs, fallen, names, solved)
    sets = reduce_numbers(timings, bench)
    data = run_data(sets, limits_from(bench.limits, bench.path))
    averaged = {kind: getattr(sets.sums, kind) / drops for kind in ("timing", "reading", "lot")}
    found = find(replace(data, sums=replace(sets.sums, **averaged)), OF_EQUIPMENT)
    jacobian, eta = sets.jacobian, sets.scatter.mean
    entries = jacobian.n_inputs + len(jacobian.squared)
    relative = sparse.diags_array(1 / eta) @ jacobian.matrix[:, :entries]
    own = own_errors(sets.selection, sets.inputs, sets.sums)
    return Evaluation(
        conditions=conditions,
        tube=tube,
        ball=ball,
        viscosity=viscosity,
        law=law,
        inputs=inputs,
        fallen=fallen,
        solved=solved,
        found=found,
        shared=propagate(
            sensitivities=relative, u=jacobian.u[:entries], dof=jacobian.dof[:entries]
        ),
        own=OwnErrors(*(getattr(own, kind) / eta**2 for kind in OwnErrors.__slots__)),
        columns=tuple(
            sets.inputs.estimates[jacobian.input_of(column)].name for column in range(entries)
        ),
    )


def interval_times(evaluation: Evaluation, places: Codes) -> list[tuple[float, ...]]:
    """Return the times [s] between successive marks of combinations, NaN where there are none."""
    conditions, tube = evaluation.conditions, evaluation.tube[places]
    bench = conditions.bench
    tubes = list(bench.tubes.values())
    counts = np.array([len(one.marks) - 1 for one in tubes], dtype=np.intp)[tube]
    of = np.repeat(np.arange(len(places)), counts)
    first = np.concatenate([np.arange(count) for count in counts]).astype(np.intp)
    at = places[of]
    cells = _cells(
        conditions, evaluation.tube[at], evaluation.ball[at], np.zeros(len(at), dtype=np.intp),
        first, first + 1,
    )  # fmt: skip
    inputs = gather(cells, bench, ("planned",), model_estimate(bench))
    fallen = _fall(conditions, bench, evaluation.law, cells, inputs, evaluation.viscosity[at])
    split = np.split(fallen.time, np.cumsum(counts)[:-1])
    return [tuple(times.tolist()) for times in split]


def _bench_of(conditions: Conditions, names: tuple[str, ...]) -> Bench:
    """Return the bench with entries of the planned run sets alone.

    There is nothing yet that a temperature law could be fitted to.
    """
    bench, entry = conditions.bench, conditions.entry
    entries = {} if entry is None else {name: replace(entry, name=name) for name in names}
    return replace(bench, sets=entries, methods=replace(bench.methods, slope=None))


def _cells(
    conditions: Conditions, tube: Codes, ball: Codes, run_set: Codes, first: Codes, last: Codes
) -> Cells:
    def every(code: int) -> Codes:
        return np.full(len(tube), code, dtype=np.intp)

    return Cells(
        run_set=run_set,
        ball=ball,
        tube=tube,
        liquid=every(conditions.liquid),
        timer=every(conditions.timer),
        thermometer=every(conditions.thermometer),
        from_mark=first,
        to_mark=last,
    )


def _fall(
    conditions: Conditions,
    bench: Bench,
    law: DragLaw,
    cells: Cells,
    inputs: Inputs,
    viscosity: Numbers,
) -> Fall:
    methods, n = bench.methods, len(cells)
    tubes = list(bench.tubes.values())
    return fall(
        inputs,
        law,
        path_ends(inputs, cells, tubes, methods.ends or DEFAULTS["ends"]),
        None if methods.run_in == "none" else releases(inputs),
        np.arange(n),
        viscosity,
        np.full(n, conditions.temperature),
    )


def _timings(
    conditions: Conditions,
    cells: Cells,
    inputs: Inputs,
    fallen: Fall,
    names: tuple[str, ...],
    solved: NDArray[np.intp],
) -> Timings:
    """Return the planned drops as a timing table, one a run set."""
    bench, n = conditions.bench, len(solved)
    reading = conditions.temperature - inputs.roles["thermometer"].value[solved]
    if conditions.entry is not None:
        reading = np.full(n, np.nan)

    def coded(codes: NDArray[np.intp], words: list[str]) -> object:
        return pd.Categorical.from_codes(codes, dtype=pd.CategoricalDtype(words))

    def text(value: str) -> object:
        return coded(np.zeros(n, dtype=np.intp), [value])

    columns: dict[str, object] = {
        "file": text("planned"),
        "line": np.arange(1, n + 1),
        "column": np.ones(n, dtype=np.int64),
        "set": coded(np.arange(n), [names[place] for place in solved]),
        "drop": np.ones(n, dtype=np.int64),
        "status": text("used"),
        "time_s": fallen.clock[solved],
        "from_mark": np.ones(n, dtype=np.int64),
        "to_mark": np.zeros(n, dtype=np.int64),
        "temperature_K": reading,
    }
    for kind, attribute in KINDS.items():
        codes, known = getattr(cells, kind)[solved], list(getattr(bench, attribute))
        columns[kind] = coded(np.where(codes < 0, len(known), codes), [*known, ""])
    for name in ("operator", "started", "note"):
        columns[name] = text("")
    return Timings(pd.DataFrame({name: columns[name] for name in COLUMNS}))
