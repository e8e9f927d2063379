"""Invented timings: what a bench would record of a liquid of known viscosity, errors and all.

Every entry of the bench sheet is drawn once (the true bore, the true density, the thermometer's
true correction ...), and for each drop what it has to itself. The drops then fall by the
measurement equation of the reduction, so that without errors the reduction returns the viscosity.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from os import PathLike
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import ArrayLike

from plumbfall.bench.reader import read_bench
from plumbfall.bench.records import Bench
from plumbfall.errors import PhysicsRangeError
from plumbfall.measurement.balance import Numbers
from plumbfall.planning.arrangement import Arrangement, arrange
from plumbfall.planning.conditions import kelvin, nominal_temperature
from plumbfall.planning.forward import Fall
from plumbfall.planning.invented_drops import extra_scatter, fall_all, read_clock, with_lots
from plumbfall.planning.simulated import Simulated
from plumbfall.planning.simulation_arguments import (
    check_simulation,
    per_drop,
    true_viscosities,
)
from plumbfall.planning.truth import draw_entries, drops_generator, with_entries

if TYPE_CHECKING:
    import pandas as pd

__all__ = ["simulate", "simulate_sets"]


def simulate(
    bench: str | PathLike[str] | Mapping[str, Any] | Bench,
    *,
    viscosity: ArrayLike | str,
    run_set: str = "A",
    drops: int = 8,
    seed: int = 0,
    bench_seed: int | None = None,
    balls: str | Sequence[str] | None = None,
    tube: str | None = None,
    liquid: str | None = None,
    temperature: float | str | None = None,
    temperatures: ArrayLike | None = None,
    marks: bool = False,
    scatter: float | None = None,
    exact: bool = False,
) -> pd.DataFrame:
    """Invent timings of a bench and a liquid of known viscosity, with every error source.

    Parameters
    ----------
    bench : path, dict or Bench
        The bench sheet.
    viscosity : float [Pa.s], array or str
        True viscosity at ``temperature``: one for all drops, shape (drops,), or with ``marks``
        shape (drops, intervals); or text such as ``"850 mPa.s"``.
    run_set : str
        Name of the run set; its entry in the bench sheet says what it is made with.
    drops : int
        How many.
    seed : int
        From 0 up. The same seed gives the same timings.
    bench_seed : int, optional
        Seed of what is true of the bench, where run sets of several seeds are to share it.
    balls : str or list of str, optional
        The ball of each drop, repeated in turn; by default all of the bench in turn.
    tube, liquid : str, optional
        Which one, where the bench has several and the run set's entry does not say.
    temperature : float [K] or str, optional
        Where ``viscosity`` holds, and the true temperature of the liquid; by default that of the
        run set's entry, else the bench's reference temperature, else that of the liquid's density,
        else 20 degC.
    temperatures : array, shape (drops,) [K], optional
        True temperature of each drop, where they differ.
    marks : bool
        Write clock readings at successive marks instead of total times.
    scatter : float, optional
        Further scatter of the drops, a relative standard deviation of the viscosity; by default
        what the bench's ``[scatter]`` has beyond what its instruments declare.
    exact : bool
        Draw nothing and round nothing: a bench without any error.

    Returns
    -------
    DataFrame
        A timing table as ``read_timings`` takes it. Every row's note says that it is invented;
        ``attrs`` hold the seed and what is true.

    Raises
    ------
    InputError
        For arguments that do not fit the bench.
    PhysicsRangeError
        Where a ball does not sink, or falls too fast for the drag law.
    """
    return simulate_sets(
        bench,
        viscosity=viscosity,
        run_set=run_set,
        drops=drops,
        seed=seed,
        bench_seed=bench_seed,
        balls=balls,
        tube=tube,
        liquid=liquid,
        temperature=temperature,
        temperatures=temperatures,
        marks=marks,
        scatter=scatter,
        exact=exact,
    ).table()


def simulate_sets(
    bench: str | PathLike[str] | Mapping[str, Any] | Bench,
    *,
    viscosity: ArrayLike | str,
    sets: int = 1,
    run_set: str = "A",
    drops: int = 8,
    seed: int = 0,
    bench_seed: int | None = None,
    balls: str | Sequence[str] | None = None,
    tube: str | None = None,
    liquid: str | None = None,
    temperature: float | str | None = None,
    temperatures: ArrayLike | None = None,
    marks: bool = False,
    scatter: float | None = None,
    exact: bool = False,
) -> Simulated:
    """Invent many run sets at once, each on a bench drawn for itself, for studies of coverage.

    The arguments are those of :func:`simulate`, and ``sets`` says how many.

    Returns
    -------
    Simulated
        Readings and truth in columns; its ``table()`` holds all run sets.
    """
    if not isinstance(bench, Bench):
        bench = read_bench(bench)
    check_simulation(seed, bench_seed, sets, scatter)
    plan = arrange(bench, run_set, balls, drops, successive=marks, tube=tube, liquid=liquid)
    inputs = plan.inputs
    if exact:
        values = np.array([estimate.value for estimate in inputs.estimates])
        entries = np.repeat(values[:, None], sets, axis=1)
    else:
        entries = draw_entries(inputs, seed if bench_seed is None else bench_seed, sets)
    own = drops_generator(seed, run_set)
    true = with_lots(with_entries(inputs, entries), plan, own, sets, exact)

    def of_sets(role: str) -> Numbers:
        return np.asarray(true.roles[role].value[:sets])

    codes = (int(plan.cells.liquid[0]), int(plan.cells.thermometer[0]))
    at = nominal_temperature(bench, run_set, *codes) if temperature is None else kelvin(temperature)
    read = True
    if temperatures is not None:
        of_drops = per_drop(temperatures, drops, "temperatures")
        warmth = np.broadcast_to(of_drops[:, None], (drops, sets))
    elif temperature is None and inputs.temperature_known.any():
        warmth = np.broadcast_to(of_sets("temperature") + of_sets("thermometer"), (drops, sets))
        read = False
    else:
        warmth = np.full((drops, sets), at)
    nominal = true_viscosities(viscosity, drops, len(plan.cell))
    slope = of_sets("slope")
    viscous = nominal[:, :, None] * np.exp(slope * (warmth - at))

    made = fall_all(plan, true, viscous, warmth, sets)
    _check_falls(plan, made, viscous)
    if not exact:
        extra = extra_scatter(plan, made, slope, scatter) * own.standard_normal((drops, sets))
        factor = entries[inputs.roles["model"].entry[0]] - 1.0
        bound = 1.0 if inputs.model_declared else made.bound.reshape(len(plan.cell), drops, sets)
        viscous = viscous * (1.0 + extra)
        made = fall_all(plan, true, viscous, warmth, sets, np.log1p(bound * factor))
        _check_falls(plan, made, viscous)

    reading = None
    if read:
        noise = inputs.per_reading[plan.cell[0]][:, None] * own.standard_normal((drops, sets))
        reading = warmth - of_sets("thermometer") + (0.0 if exact else noise)
    return Simulated(
        arrangement=plan,
        clock=read_clock(plan, true, made, own, sets, marks, exact),
        reading=reading,
        viscosity=viscous.mean(axis=0),
        temperature=np.asarray(warmth),
        entries=entries,
        slope=slope,
        nominal=nominal.mean(axis=0),
        at=at,
        seed=seed,
    )


def _check_falls(plan: Arrangement, made: Fall, viscosity: Numbers) -> None:
    every = (*plan.cell.shape, viscosity.shape[-1])
    for flags, why in (
        (made.floating, "is not denser than the liquid, and does not sink"),
        (made.too_wide, f"is wider than {plan.law.max_ratio:g} of the bore, the drag law's limit"),
        (
            made.too_fast,
            f"falls at a Reynolds number above {plan.law.max_reynolds:g}, the drag law's limit",
        ),
        (~(made.time > 0), "has no fall time in this tube"),
    ):
        drops = np.flatnonzero(flags.reshape(every).any(axis=(0, 2)))
        if len(drops):
            raise PhysicsRangeError(
                f"drop {drops[0] + 1}: ball {plan.balls[drops[0]]} {why}; choose another ball, "
                "or a viscosity that it can measure"
            )
