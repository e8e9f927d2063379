"""Which equipment of a bench drops are made with, before there is a timing file that says so."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from plumbfall.bench.records import Bench
from plumbfall.errors import InputError, nearest_name
from plumbfall.measurement.balance import Codes
from plumbfall.measurement.gather import gather
from plumbfall.measurement.inputs import Inputs
from plumbfall.measurement.law import drag_law, model_estimate
from plumbfall.measurement.selection import KINDS, Cells
from plumbfall.physics.drag import DragLaw

__all__ = ["Arrangement", "arrange", "choose"]


@dataclass(frozen=True, slots=True)
class Arrangement:
    """Drops of one run set, by the codes and inputs that the measurement equation takes.

    ``balls`` names the ball of each drop. ``cell`` has shape (intervals, drops): a cell is a ball
    between two marks. ``equipment`` names the tube, liquid, timer and thermometer, empty where the
    bench has none.
    """

    bench: Bench
    run_set: str
    balls: tuple[str, ...]
    equipment: dict[str, str]
    cells: Cells
    cell: Codes
    inputs: Inputs
    law: DragLaw


def arrange(
    bench: Bench,
    run_set: str,
    balls: str | Sequence[str] | None,
    drops: int,
    *,
    successive: bool = False,
    tube: str | None = None,
    liquid: str | None = None,
) -> Arrangement:
    """Look up what drops of some balls are made with.

    Parameters
    ----------
    bench : Bench
        The bench sheet.
    run_set : str
        Name of the run set; its entry in the bench sheet says what several there are of.
    balls : str or sequence of str, optional
        The ball of each drop, repeated in turn; those of the bench in turn where neither is given
        here nor in the run set's entry.
    drops : int
        How many drops.
    successive : bool
        Between successive marks instead of from the first to the last.
    tube, liquid : str, optional
        Which one, instead of the run set's entry.

    Returns
    -------
    Arrangement
        With a cell of its own for every drop of a lot.

    Raises
    ------
    InputError
        For equipment that is not on the bench, or cannot be known.
    """
    if drops < 1:
        raise InputError(f"{drops} drops are none", remedy="ask for at least one")
    given = {"tube": tube, "liquid": liquid}
    codes = {
        kind: choose(bench, kind, run_set, given.get(kind)) for kind in KINDS if kind != "ball"
    }
    names = _balls(bench, run_set, balls, drops)
    known = list(bench.balls)
    ball = np.array([known.index(name) for name in names], dtype=np.intp)
    if any(bench.balls[name].lot for name in names):
        own, of_drop = ball, np.arange(drops)
    else:
        own, of_drop = np.unique(ball, return_inverse=True)
    n_marks = len(bench.tubes[list(bench.tubes)[codes["tube"]]].marks)
    if successive and n_marks < 2:
        raise InputError(
            f"tube '{list(bench.tubes)[codes['tube']]}' has no marks to read the clock at",
            path=bench.path,
            remedy="ask for total times",
        )
    first = np.arange(n_marks - 1) if successive else np.zeros(1, dtype=np.intp)
    last = first + 1 if successive else np.array([n_marks - 1])
    n, n_balls = len(first) * len(own), len(own)

    def every(code: int) -> Codes:
        return np.full(n, code, dtype=np.intp)

    cells = Cells(
        run_set=every(0),
        ball=np.tile(own, len(first)),
        from_mark=np.repeat(first, n_balls).astype(np.intp),
        to_mark=np.repeat(last, n_balls).astype(np.intp),
        **{kind: every(code) for kind, code in codes.items()},
    )
    return Arrangement(
        bench=bench,
        run_set=run_set,
        balls=names,
        equipment={
            kind: list(getattr(bench, KINDS[kind]))[code] if code >= 0 else ""
            for kind, code in codes.items()
        },
        cells=cells,
        cell=np.arange(len(first))[:, None] * n_balls + of_drop,
        inputs=gather(cells, bench, (run_set,), model_estimate(bench)),
        law=drag_law(bench),
    )


def choose(bench: Bench, kind: str, run_set: str, given: str | None = None) -> int:
    """Return the code of a run set's tube, liquid, timer or thermometer; -1 where there is none.

    Raises
    ------
    InputError
        Where there are several and nothing says which, or no such one.
    """
    known = list(getattr(bench, KINDS[kind]))
    entry = bench.sets.get(run_set)
    name = given or getattr(entry, kind, None)
    if name is not None:
        return _place(bench, kind, name, known)
    if len(known) == 1:
        return 0
    if not known and kind in ("timer", "thermometer"):
        return -1
    if not known:
        raise InputError(
            f"no {kind} is described",
            path=bench.path,
            remedy=f"add a [{kind}.NAME] section to the bench sheet",
        )
    raise InputError(
        f"the bench has several: {', '.join(known)}; nothing says which {kind} is used",
        path=bench.path,
        remedy=f'add {kind} = "{known[0]}" to [set."{run_set}"] of the bench sheet'
        if run_set
        else f"name one of them ({kind}=, --{kind} NAME)",
    )


def _balls(
    bench: Bench, run_set: str, balls: str | Sequence[str] | None, drops: int
) -> tuple[str, ...]:
    entry = bench.sets.get(run_set)
    if balls is None and entry is not None and entry.ball is not None:
        balls = entry.ball
    names = [balls] if isinstance(balls, str) else list(bench.balls if balls is None else balls)
    if not names:
        raise InputError(
            "no ball is described",
            path=bench.path,
            remedy="add a [ball.NAME] section to the bench sheet",
        )
    for name in names:
        _place(bench, "ball", name, list(bench.balls))
    return tuple(names[drop % len(names)] for drop in range(drops))


def _place(bench: Bench, kind: str, name: str, known: list[str]) -> int:
    if name in known:
        return known.index(name)
    near = nearest_name(name, known)
    raise InputError(
        f"{kind} '{name}' is not on the bench sheet",
        path=bench.path,
        remedy=f"did you mean '{near}'?"
        if near
        else f"the bench has: {', '.join(known) or 'none'}",
    )
