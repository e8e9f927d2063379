"""Evaluating one input by the GUM (JCGM 100:2008, clause 4): readings, and what is stated."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial

from plumbfall.bench.notation import read_quantity
from plumbfall.published.figure import FROM_MEMORY, figures
from plumbfall.published.statistics_data import mean_of, sd_of, u_of_mean

__all__ = ["FIGURES"]


def _stated(written: object, dimension: str, scale: float) -> Callable[[], float]:
    return lambda: scale * read_quantity(written, dimension).u


_TEMPERATURES = (
    96.90, 98.18, 98.25, 98.61, 99.03, 99.49, 99.56, 99.74, 99.89, 100.07,
    100.33, 100.42, 100.68, 100.95, 101.11, 101.20, 101.57, 101.84, 102.36, 102.72,
)  # fmt: skip


_TYPE_A = (
    *figures(
        "uncertainty",
        FROM_MEMORY,
        "JCGM 100:2008, 4.4.3: twenty temperatures, their standard deviation and that of the mean, "
        "degC",
        [
            ("gum.4.4.3.sd", "1.49", partial(sd_of, _TEMPERATURES)),
            ("gum.4.4.3.u", "0.33", partial(u_of_mean, _TEMPERATURES)),
        ],
    ),
    *figures(
        "uncertainty",
        FROM_MEMORY,
        "JCGM 100:2008, 4.4.3: mean of twenty temperatures, degC; it is 100.145, a tie that print "
        "rounds down",
        [("gum.4.4.3.mean", "100.14", partial(mean_of, _TEMPERATURES))],
        allowance=1e-9,
    ),
)

_TYPE_B = (
    *figures(
        "uncertainty",
        FROM_MEMORY,
        "JCGM 100:2008, 4.3.4: certificate of a mass, U = 240 ug at k = 3: u in ug",
        [
            (
                "gum.4.3.4",
                "80",
                _stated({"value": 1000000.325, "unit": "mg", "U": 0.24, "k": 3}, "mass", 1e9),
            )
        ],
    ),
    *figures(
        "uncertainty",
        FROM_MEMORY,
        "JCGM 100:2008, 4.3.7: expansion of copper, 16.52e-6 /K within 0.40e-6 /K: u in 1e-6 /K",
        [
            (
                "gum.4.3.7",
                "0.23",
                _stated("16.52e-6 ± 0.40e-6 /K, limits", "temperature coefficient", 1e6),
            )
        ],
    ),
    *figures(
        "uncertainty",
        FROM_MEMORY,
        "JCGM 100:2008, 4.4.5 and 4.4.6: 100 degC within 4 K, rectangular and triangular: u in K",
        [
            ("gum.4.4.5", "2.3", _stated("100 ± 4 degC, limits", "temperature", 1.0)),
            (
                "gum.4.4.6",
                "1.6",
                _stated(
                    {"value": 100, "unit": "degC", "within": 4, "shape": "triangular"},
                    "temperature",
                    1.0,
                ),
            ),
        ],
    ),
    *figures(
        "uncertainty",
        FROM_MEMORY,
        "JCGM 100:2008, H.1.3: expansion coefficient within 2e-6 and its difference within 1e-6 "
        "(rectangular, 1e-6 /K), temperature difference within 0.05 K (rectangular) and cyclic "
        "variation within 0.5 K (arcsine): u",
        [
            (
                "gum.h1.alpha",
                "1.2",
                _stated("11.5e-6 ± 2e-6 /K, limits", "temperature coefficient", 1e6),
            ),
            (
                "gum.h1.delta-alpha",
                "0.58",
                _stated("0 ± 1e-6 /K, limits", "temperature coefficient", 1e6),
            ),
            (
                "gum.h1.delta-theta",
                "0.029",
                _stated("0 ± 0.05 K, limits", "temperature difference", 1.0),
            ),
            (
                "gum.h1.cyclic",
                "0.35",
                _stated(
                    {"value": 0, "unit": "K", "within": 0.5, "shape": "arcsine"},
                    "temperature difference",
                    1.0,
                ),
            ),
        ],
    ),
)

FIGURES = (*_TYPE_A, *_TYPE_B)
