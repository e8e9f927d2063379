"""Means and standard deviations of published data sets."""

from __future__ import annotations

from collections.abc import Iterable
from functools import partial

import numpy as np

from plumbfall.published.figure import FROM_MEMORY, SEEN_IN_PRINT, Figure, figures
from plumbfall.uncertainty.type_a import group_scatter, means_of_series

__all__ = ["FIGURES", "mean_of", "sd_of", "u_of_mean"]

Values = tuple[float, ...]


def mean_of(values: Iterable[float]) -> float:
    """Return the mean as the run sets' is computed."""
    numbers = np.array(list(values))
    return float(group_scatter(numbers, np.zeros(len(numbers), dtype=np.intp), 1).mean[0])


def sd_of(values: Iterable[float]) -> float:
    """Return the experimental standard deviation as the run sets' is computed."""
    numbers = np.array(list(values))
    return float(group_scatter(numbers, np.zeros(len(numbers), dtype=np.intp), 1).sd[0])


def u_of_mean(values: Iterable[float]) -> float:
    """Return the standard uncertainty of the mean of repeated readings."""
    return float(means_of_series(list(values)).u[0])


def _certified(
    name: str, mean: str, sd: str, values: Values, rounding: float
) -> tuple[Figure, ...]:
    # the certified values are exact; the data are not, once they are floats
    return tuple(
        Figure(
            id=f"strd.{name}.{what}",
            area="statistics",
            basis=SEEN_IN_PRINT,
            source=f"NIST StRD, univariate, {name}: certified value of the {words}, exact but for "
            f"{rounding:g}, the rounding of the data to floats",
            printed=printed,
            compute=partial(compute, values),
            allowance=rounding,
            exact=True,
        )
        for what, words, printed, compute in (
            ("mean", "mean", mean, mean_of),
            ("sd", "standard deviation", sd, sd_of),
        )
    )


_STRD = (
    *_certified("NumAcc1", "10000002", "1", (10000001.0, 10000003.0, 10000002.0), 0.0),
    *_certified("NumAcc2", "1.2", "0.1", (1.2, *(1.1, 1.3) * 500), 3e-16),
    *_certified("NumAcc3", "1000000.2", "0.1", (1000000.2, *(1000000.1, 1000000.3) * 500), 1.2e-10),
    *_certified(
        "NumAcc4", "10000000.2", "0.1", (10000000.2, *(10000000.1, 10000000.3) * 500), 1.9e-9
    ),
)

_WIRES = (568.0, 570.0, 570.0, 570.0, 572.0, 572.0, 572.0, 578.0, 584.0, 596.0)
_GRUBBS = figures(
    "statistics",
    FROM_MEMORY,
    "Grubbs 1969, Technometrics 11, 1: breaking strength of ten copper wires, mean and standard "
    "deviation",
    [
        ("grubbs.wires.mean", "575.2", partial(mean_of, _WIRES)),
        ("grubbs.wires.sd", "8.70", partial(sd_of, _WIRES)),
    ],
)

FIGURES = (*_STRD, *_GRUBBS)
