"""Minutes and seconds typed with a decimal point: 1.58 for 1 min 58 s."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray
from scipy.special import fdtrc

from plumbfall.findings.data import Found, RunData
from plumbfall.results import Finding
from plumbfall.uncertainty.type_a import group_scatter

__all__ = ["minutes_as_decimals"]

UNITS = {"seconds": 1.0, "minutes": 60.0}
"""What the heading may have said of numbers that were minutes and seconds."""

FEWEST = 3


def minutes_as_decimals(data: RunData) -> Iterator[Found]:
    """Find times without a fraction of 0.60 or more that agree better when read as mm:ss.

    That no fraction is above 0.59 proves nothing, as repeats lie close together; the scatter must
    shrink, by Fisher's ratio of variances.
    """
    n_sets, run_set = len(data.names), data.selection.run_set
    level = data.level
    value = _proportional_to_time(data)
    before = group_scatter(value, run_set, n_sets)
    for unit, seconds in UNITS.items():
        read, possible = _as_minutes(data.selection.time / seconds)
        able = (np.bincount(run_set[~possible], minlength=n_sets) == 0) & (before.n >= FEWEST)
        if not able.any():
            continue
        with np.errstate(invalid="ignore", divide="ignore"):
            shift = np.log(read / data.selection.time)
            after = group_scatter(value + shift, run_set, n_sets)
            f = before.sd**2 / after.sd**2
            dof = np.maximum(before.n - 1, 1)
            p_value = np.where(able, fdtrc(dof, dof, f), 1.0)
            factor = np.exp(after.mean - before.mean)
        for place in np.flatnonzero(p_value < level):
            drops = np.flatnonzero(run_set == place)
            worst = drops[np.argmax(data.selection.time[drops])]
            typed = data.selection.time[worst] / seconds
            yield (
                int(place),
                Finding(
                    code="minutes-as-decimals-suspected",
                    severity="warning",
                    statistic=float(f[place]),
                    p_value=float(p_value[place]),
                    effect=float(factor[place] - 1),
                    message=f"the times look like minutes and seconds typed with a decimal point "
                    f"and read as {unit}: as {_clock(read[worst])} for {typed:.2f} and so on they "
                    f"scatter by {100 * after.sd[place]:.2g} % instead of "
                    f"{100 * before.sd[place]:.2g} %, and the viscosity would be "
                    f"{factor[place]:.3g} times as high",
                    remedy="write them with a colon, such as 1:58 or 1:58.4, which needs no unit",
                ),
            )


def _proportional_to_time(data: RunData) -> NDArray[np.float64]:
    """Logarithm of what a drop gives with walls but without inertia, shape (drops,).

    Times that are wrong by a factor make the inertia so too.
    """
    columns = data.columns
    with np.errstate(invalid="ignore", divide="ignore"):
        plain = np.where(np.isnan(columns.stokes), columns.at_set, columns.stokes / columns.wall)
        return np.asarray(np.log(plain))


def _as_minutes(typed: NDArray[np.float64]) -> tuple[NDArray[np.float64], NDArray[np.bool_]]:
    """Read 1.58 as 118 s, and say whether it can be read so."""
    hundredths = np.rint(100 * typed)
    seconds = hundredths % 100
    possible = (np.abs(100 * typed - hundredths) < 1e-6 * np.maximum(typed, 1)) & (seconds < 60)
    return 60 * (hundredths // 100) + seconds, possible & (hundredths > 0)


def _clock(seconds: float) -> str:
    return f"{int(seconds) // 60}:{int(seconds) % 60:02d}"
