"""One-way analysis of variance: certified results of published data sets."""

from __future__ import annotations

from functools import partial

import numpy as np

from plumbfall.published.figure import SEEN_IN_PRINT, Figure
from plumbfall.uncertainty.anova import OneWay, one_way

__all__ = ["FIGURES", "SIRSTV", "analysed", "small_less"]

SIRSTV = (
    (196.3052, 196.1240, 196.1890, 196.2569, 196.3403),
    (196.3042, 196.3825, 196.1669, 196.3257, 196.0422),
    (196.1303, 196.2005, 196.2889, 196.0343, 196.1811),
    (196.2795, 196.1748, 196.1494, 196.1485, 195.9885),
    (196.2119, 196.1051, 196.1850, 196.0052, 196.2090),
)
"""Resistivity of silicon wafers by five instruments, ohm.cm."""


def small_less(offset: float) -> tuple[tuple[float, ...], ...]:
    """Nine treatments of 21 values about an offset, as the certified sets are made."""
    return tuple(
        (offset + middle, *((offset + middle - 0.1, offset + middle + 0.1) * 10))
        for middle in (0.4, *(0.3, 0.5) * 4)
    )


def analysed(groups: tuple[tuple[float, ...], ...]) -> OneWay:
    """Return the analysis of one data set, as that of a run set's repeated drops is made."""
    values = np.array([value for group in groups for value in group])
    group = np.repeat(np.arange(len(groups)), [len(one) for one in groups])
    return one_way(values, group, np.zeros(len(groups), dtype=np.intp), 1)


def _f(groups: tuple[tuple[float, ...], ...]) -> float:
    return float(analysed(groups).f[0])


def _between(groups: tuple[tuple[float, ...], ...]) -> float:
    return float(analysed(groups).between[0])


def _within(groups: tuple[tuple[float, ...], ...]) -> float:
    return float(analysed(groups).within[0])


def _sd(groups: tuple[tuple[float, ...], ...]) -> float:
    return float(analysed(groups).within_sd[0])


def _figure(
    name: str, what: str, printed: str, compute: partial[float], allowance: float
) -> Figure:
    return Figure(
        id=f"strd.{name}.{what.replace(' ', '-')}",
        area="statistics",
        basis=SEEN_IN_PRINT,
        source=f"NIST StRD, analysis of variance, {name}: certified {what}, exact but for "
        f"{allowance:g}, the rounding of the data to floats",
        printed=printed,
        compute=compute,
        allowance=allowance,
        exact=True,
    )


# Certified to 15 digits. Data near 196 are rounded to floats by 1.4e-14 each, which moves the sums
# of squares by up to 6e-14; data near 1e12 are rounded by 6e-5 each.
FIGURES = (
    _figure("SiRstv", "sum of squares between", "5.11462616E-02", partial(_between, SIRSTV), 6e-14),
    _figure("SiRstv", "sum of squares within", "2.1663656E-01", partial(_within, SIRSTV), 6e-14),
    _figure("SiRstv", "F", "1.18046237440255", partial(_f, SIRSTV), 1e-12),
    _figure("SiRstv", "residual sd", "0.104076068334656", partial(_sd, SIRSTV), 2e-14),
    _figure("SmLs01", "F", "21", partial(_f, small_less(1.0)), 1e-12),
    _figure("SmLs04", "F", "21", partial(_f, small_less(1e6)), 1e-7),
    _figure("SmLs07", "F", "21", partial(_f, small_less(1e12)), 0.041),
)
