"""The arguments of a simulation: what fits the drops, and what is refused."""

from __future__ import annotations

from numbers import Integral

import numpy as np
from numpy.typing import ArrayLike

from plumbfall.bench.notation import read_quantity
from plumbfall.errors import InputError
from plumbfall.measurement.balance import Numbers

__all__ = ["check_simulation", "per_drop", "true_viscosities"]


def true_viscosities(viscosity: ArrayLike | str, drops: int, intervals: int) -> Numbers:
    """Return the true viscosity by interval and drop, shape (intervals or 1, drops)."""
    if isinstance(viscosity, str):
        viscosity = read_quantity(viscosity, "viscosity").value
    values = np.asarray(viscosity, dtype=float)
    if not (np.isfinite(values) & (values > 0)).all():
        raise InputError("a viscosity is not above zero", remedy="give it in Pa.s, such as 0.85")
    if values.ndim < 2:
        return per_drop(values, drops, "viscosity")[None]
    if values.shape != (drops, intervals):
        raise InputError(
            f"viscosity has the shape {values.shape}",
            remedy=f"give one number, {drops} of them, or {drops} rows of {intervals}",
        )
    return np.ascontiguousarray(values.T)


def per_drop(values: ArrayLike, drops: int, name: str) -> Numbers:
    """Return one number for each drop, shape (drops,)."""
    array = np.asarray(values, dtype=float)
    if array.shape not in ((), (1,), (drops,)):
        raise InputError(
            f"{name} has the shape {array.shape}, with {drops} drops",
            remedy=f"give one number, or {drops} of them",
        )
    return np.array(np.broadcast_to(array, (drops,)))


def check_simulation(seed: int, bench_seed: int | None, sets: int, scatter: float | None) -> None:
    """Refuse seeds, counts and a scatter that cannot be."""
    for name, value in (("seed", seed), ("bench_seed", bench_seed)):
        if value is not None and (
            isinstance(value, bool) or not isinstance(value, Integral) or value < 0
        ):
            raise InputError(
                f"{name} = {value!r} is not a whole number from 0 up", remedy="write 0, or 12345"
            )
    if sets < 1:
        raise InputError(f"{sets} run sets are none", remedy="ask for at least one")
    if scatter is not None and not 0 <= scatter < 1:
        raise InputError(
            f"a scatter of {scatter:g} is not from 0 to below 1",
            remedy="write 0.003 for 0.3 % of the viscosity",
        )
