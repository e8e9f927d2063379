"""From what a user asks, with units, to a plan."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import replace
from numbers import Integral
from os import PathLike
from typing import Any, TypeAlias

from plumbfall.bench.notation import read_quantity
from plumbfall.bench.reader import read_bench
from plumbfall.bench.records import Bench
from plumbfall.errors import InputError
from plumbfall.planning.catalogue import GRADE, catalogue_bench, grade_named
from plumbfall.planning.conditions import conditions_of
from plumbfall.planning.ideal import ideal_ball
from plumbfall.planning.plan import Plan, make_plan
from plumbfall.planning.wanted import DROPS, LONGEST, MOST_DROPS, Wanted

__all__ = ["CATALOGUE", "Amount", "BenchSource", "bench_from", "plan_bench", "viscosities_of"]

Amount: TypeAlias = float | str
"""A number in the SI unit, or text with its unit."""

CATALOGUE = "catalogue"
"""Instead of balls of the bench: look for the best among those that are sold."""

BenchSource: TypeAlias = str | PathLike[str] | Mapping[str, Any] | Bench


def bench_from(bench: BenchSource) -> Bench:
    """Return a bench, read where it is named or written out."""
    return bench if isinstance(bench, Bench) else read_bench(bench)


def plan_bench(
    bench: BenchSource,
    *,
    viscosity: Amount | Iterable[Amount],
    target: Amount | None = None,
    drops: int = DROPS,
    most_drops: int = MOST_DROPS,
    longest: Amount = LONGEST,
    coverage: float | None = None,
    run_set: str | None = None,
    liquid: str | None = None,
    timer: str | None = None,
    thermometer: str | None = None,
    temperature: Amount | None = None,
    tubes: str | Sequence[str] | None = None,
    balls: str | Sequence[str] | None = None,
    grade: str = GRADE,
) -> Plan:
    """Plan drops; see :func:`plumbfall.plan` for the arguments."""
    sheet, only = bench_from(bench), _names(balls)
    searched = only == [CATALOGUE] and CATALOGUE not in sheet.balls
    if searched:
        sheet, only = catalogue_bench(sheet, grade_named(grade)), None
    for name, count in (("drops", drops), ("most_drops", most_drops)):
        if isinstance(count, bool) or not isinstance(count, Integral) or count < 1:
            raise InputError(f"{name} = {count!r} is no number of drops", remedy="write 8")
    wanted = Wanted(
        viscosities=viscosities_of(viscosity),
        target=None if target is None else _positive(target, "ratio", "target", "0.5 %"),
        coverage=_coverage(sheet.coverage if coverage is None else coverage),
        drops=int(drops),
        most_drops=max(int(most_drops), int(drops)),
        longest=_positive(longest, "time", "longest", "30 min"),
    )
    conditions = conditions_of(
        sheet,
        run_set=run_set,
        liquid=liquid,
        timer=timer,
        thermometer=thermometer,
        temperature=temperature,
    )
    plan = make_plan(conditions, wanted, tubes=_names(tubes), balls=only)
    if not searched:
        return plan
    chosen = _names(tubes) or list(sheet.tubes)
    ideal = (
        ideal_ball(conditions, wanted, tube, grade_named(grade))
        for tube in chosen
        if sheet.tubes[tube].kind != "calibrated"
    )
    return replace(plan, grade=grade, ideal=tuple(filter(None, ideal)))


def viscosities_of(asked: Amount | Iterable[Amount]) -> tuple[float, ...]:
    """Return the viscosities [Pa.s] of a plan; between two, their geometric mean is added.

    Examples
    --------
    >>> [f"{viscosity:.2f}" for viscosity in viscosities_of(["500 mPa.s", "2 Pa.s"])]
    ['0.50', '1.00', '2.00']
    """
    many = [asked] if isinstance(asked, (str, float, int)) else list(asked)
    values = sorted({_positive(one, "viscosity", "viscosity", "500 mPa.s") for one in many})
    if not values:
        raise InputError("no viscosity is given", remedy='write "0.5 Pa.s", or a range of two')
    if len(values) == 2:
        values.insert(1, math.sqrt(values[0] * values[1]))
    return tuple(values)


def _positive(amount: Amount, dimension: str, name: str, example: str) -> float:
    if isinstance(amount, str):
        try:
            value = read_quantity(amount, dimension).value
        except InputError as error:
            raise InputError(f"{name}: {error}") from None
    else:
        value = float(amount)
    if not 0 < value < math.inf:
        raise InputError(
            f"{name} = {amount!r} is not above zero", remedy=f"write a number such as {example}"
        )
    return value


def _coverage(probability: float) -> float:
    if not 0 < probability < 1:
        raise InputError(
            f"a coverage probability of {probability:g} is not between 0 and 1",
            key="coverage",
            remedy="write 0.95 for 95 %",
        )
    return probability


def _names(names: str | Sequence[str] | None) -> list[str] | None:
    return [names] if isinstance(names, str) else None if names is None else list(names)
