"""Whole chains worked by hand: a bench sheet and timings in, viscosity and bounds out.

Ladenburg's and Bohlin's wall factors are explicit, so that paper and pencil suffice. All numbers
are invented and round.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import cache, partial
from typing import Any

import pandas as pd

from plumbfall.bench.reader import read_bench
from plumbfall.published.figure import DEFINITION, figures
from plumbfall.reduction.drops import reduce_drops
from plumbfall.report.report import Report
from plumbfall.results import RunSetResult
from plumbfall.timings.reader import read_timings

__all__ = ["FIGURES"]

_EXACT = {
    "site": {"gravity": "9.8 m/s2"},
    "tube": {"A": {"bore": "40 mm", "distance": "200 mm"}},
    "ball": {"s": {"diameter": "2 mm", "density": "8000 kg/m3"}},
    "liquid": {"o": {"density": "1000 kg/m3"}},
    "methods": {"drag": "product ladenburg stokes", "model_uncertainty": "0 %"},
}
_MEASURED = {
    **_EXACT,
    "tube": {"A": {"bore": "40.0(2) mm", "distance": "200.0(5) mm"}},
    "ball": {"s": {"diameter": "2.000(2) mm", "density": "8.00(4) g/cm3"}},
    "liquid": {"o": {"density": "1000(5) kg/m3"}},
}
_BENCHES: dict[str, dict[str, Any]] = {
    "one": _EXACT,
    "three": _MEASURED,
    "two-sets": {**_MEASURED, "timer": {"T": {"per_drop": "0.10 s"}}},
    "weighed": {
        **_MEASURED,
        # pi/6 x 8 mm3 of the density of the balance's weights, which the air does not lighten
        "ball": {
            "s": {
                "diameter": "2.000(2) mm",
                "mass": {"value": 33.510321638291124, "unit": "mg", "u": 3e-3},
            }
        },
    },
    "bohlin": {
        "site": {"gravity": "9.8(1) m/s2"},
        "tube": {"A": {"bore": "50.0(2) mm", "distance": "200.0(5) mm"}},
        "ball": {"s": {"diameter": "2.000(2) mm", "density": "7.70(4) g/cm3"}},
        "liquid": {"o": {"density": "970(5) kg/m3"}},
        "timer": {"T": {"rate": "0(20) ppm"}},
        "methods": {"drag": "product bohlin stokes", "model_uncertainty": "0 %"},
    },
    "reference": {
        **_EXACT,
        "bench": {"reference_temperature": "25 degC"},
        "liquid": {"o": {"density": "1000(5) kg/m3", "viscosity_slope": "-2.0(2) %/K"}},
    },
}
_TIMES: dict[str, dict[str, tuple[float, ...]]] = {
    "one": {"a": (10.0,)},
    "three": {"a": (9.9, 10.0, 10.1)},
    "two-sets": {"a": (10.0,), "b": (20.0,)},
    "weighed": {"a": (10.0,)},
    "bohlin": {"a": (10.0,)},
    "reference": {"a": (10.0,)},
}


@cache
def _report(example: str) -> Report:
    rows = [
        {"set": name, "time [s]": time, "temperature [degC]": 24.0}
        for name, times in _TIMES[example].items()
        for time in times
    ]
    bench = read_bench(_BENCHES[example])
    return Report(reduce_drops(read_timings(pd.DataFrame(rows), bench), bench))


Get = Callable[[RunSetResult], Any]


def _of(example: str, get: Get) -> Callable[[], float]:
    return partial(_get, example, get)


def _get(example: str, get: Get) -> float:
    return float(get(_report(example)["a"].result))


def _elasticity(example: str, entry: str) -> Callable[[], float]:
    """Relative change of the viscosity for one of an input, from the budget's sensitivity."""

    def get(result: RunSetResult) -> float:
        (line,) = (line for line in result.budget if line.input == entry)
        assert result.viscosity is not None
        return line.sensitivity * line.value / result.viscosity.value

    return _of(example, get)


def _contribution(example: str, entry: str) -> Callable[[], float]:
    def get(result: RunSetResult) -> float:
        (line,) = (line for line in result.budget if line.input == entry)
        assert result.viscosity is not None
        return 100.0 * line.contribution / result.viscosity.value

    return _of(example, get)


def _part(output: str, name: str) -> Get:
    """Get a number of one of the results' records, such as the ``u`` of the ``viscosity``."""
    return lambda result: getattr(getattr(result, output), name)


def _ratio(name: str) -> float:
    report = _report("two-sets")
    ratio = report["a"].viscosity / report["b"].viscosity
    return float(getattr(ratio, name))


_BY_HAND = partial(figures, "chain", DEFINITION)

_ONE = _BY_HAND(
    "one drop of a 2 mm ball, 8000 kg/m3, over 200 mm in 10 s, bore 40 mm, liquid 1000 kg/m3, "
    "9.8 m/s2; by hand, SI: Stokes 7000 x 9.8 x 4e-6/(18 x 0.02) = 0.2744/0.36; wall 1 + 2.4/20; "
    "viscosity 0.2744/0.36/1.12; over 1000; Reynolds number 1000 x 0.02 x 0.002/0.680556; shear "
    "3 x 0.02/0.002 and 7000 x 9.8 x 0.002/6",
    [
        ("one-drop.stokes", "0.76222222", _of("one", _part("stokes_viscosity", "value"))),
        ("one-drop.wall", "1.12000000", _of("one", lambda one: one.corrections[0].factor)),
        ("one-drop.viscosity", "0.68055556", _of("one", _part("viscosity", "value"))),
        (
            "one-drop.kinematic",
            "0.00068055556",
            _of("one", _part("kinematic_viscosity", "value")),
        ),
        ("one-drop.reynolds", "0.05877551", _of("one", lambda one: one.reynolds)),
        ("one-drop.diameter-ratio", "0.05000000", _of("one", lambda one: one.diameter_ratio)),
        ("one-drop.shear-rate", "30.000000", _of("one", lambda one: one.shear_rate)),
        ("one-drop.shear-stress", "22.866667", _of("one", lambda one: one.shear_stress)),
    ],
)

_THREE = _BY_HAND(
    "the same in 9.9, 10.0 and 10.1 s, u: bore 0.5 %, distance 0.25 %, diameter 0.1 %, ball "
    "density 0.5 %, liquid density 0.5 %; by hand, in percent: scatter 1/sqrt 3; ball density "
    "8/7 x 0.5; distance 0.25; diameter (2 - 0.12/1.12) x 0.1; liquid density 1/7 x 0.5; bore "
    "0.12/1.12 x 0.5; together the root of 0.766165; degrees of freedom 2 x 0.766165^2/0.333333^2",
    [
        ("three-drops.viscosity", "0.6805556", _of("three", _part("viscosity", "value"))),
        ("three-drops.scatter", "0.577350", _contribution("three", "set.a.scatter")),
        ("three-drops.ball-density", "0.571429", _contribution("three", "ball.s.density")),
        ("three-drops.distance", "0.250000", _contribution("three", "tube.A.distance")),
        ("three-drops.diameter", "0.189286", _contribution("three", "ball.s.diameter")),
        ("three-drops.liquid-density", "0.071429", _contribution("three", "liquid.o.density")),
        ("three-drops.bore", "0.053571", _contribution("three", "tube.A.bore")),
        ("three-drops.u", "0.00595696", _of("three", _part("viscosity", "u"))),
        ("three-drops.dof", "10.566", _of("three", _part("viscosity", "effective_dof"))),
    ],
)

_TWO = _BY_HAND(
    "two run sets on that bench, one drop of 10 s and one of 20 s, each known to 0.1 s: all else "
    "is shared and cancels in the ratio; by hand: 1/2, and u = 1/2 sqrt(0.01^2 + 0.005^2)",
    [
        ("two-sets.ratio", "0.50000000", partial(_ratio, "nominal_value")),
        ("two-sets.ratio.u", "0.00559017", partial(_ratio, "std_dev")),
    ],
)

_WEIGHED = _BY_HAND(
    "the same ball weighed in air of 1.2 kg/m3 against weights of 8000 kg/m3; relative "
    "sensitivities by hand: mass 8000 (1 - 1.2/8000)/7000, diameter -1 - 3 (1000 - 1.2)/7000 - "
    "0.12/1.12, liquid density -1/7",
    [
        ("weighed.viscosity", "0.6805556", _of("weighed", _part("viscosity", "value"))),
        ("weighed.mass", "1.142686", _elasticity("weighed", "ball.s.mass")),
        ("weighed.diameter", "-1.535200", _elasticity("weighed", "ball.s.diameter")),
        ("weighed.liquid-density", "-0.142857", _elasticity("weighed", "liquid.o.density")),
    ],
)

_BOHLIN = _BY_HAND(
    "steel 7700 kg/m3 in 970 kg/m3 at diameter ratio 0.04, Bohlin's wall; relative sensitivities "
    "by hand: gravity 1, distance -1, ball density 7700/6730, liquid density -970/6730, bore w = "
    "0.0914636 from the polynomial's derivative, diameter 2 - w",
    [
        ("elasticity.gravity", "1.000000", _elasticity("bohlin", "site.gravity")),
        ("elasticity.distance", "-1.000000", _elasticity("bohlin", "tube.A.distance")),
        ("elasticity.ball-density", "1.144131", _elasticity("bohlin", "ball.s.density")),
        ("elasticity.liquid-density", "-0.144131", _elasticity("bohlin", "liquid.o.density")),
        ("elasticity.bore", "0.091464", _elasticity("bohlin", "tube.A.bore")),
        ("elasticity.diameter", "1.908536", _elasticity("bohlin", "ball.s.diameter")),
    ],
)

_REFERENCE = _BY_HAND(
    "one drop at 24 degC brought to 25 degC by -2.0(2) %/K, liquid density known to 0.5 %; by "
    "hand: 0.680556 exp(-0.02), u = that times sqrt(0.002^2 + (0.005/7)^2)",
    [
        (
            "reference.viscosity",
            "0.6670797",
            _of("reference", _part("viscosity_at_reference", "value")),
        ),
        ("reference.u", "0.00141669", _of("reference", _part("viscosity_at_reference", "u"))),
    ],
)

FIGURES = (*_ONE, *_THREE, *_TWO, *_WEIGHED, *_BOHLIN, *_REFERENCE)
