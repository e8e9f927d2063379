"""The whole chain against GTC, a metrology institute's library, on the same measurand.

The measurement equation is typed here once more, as a metrologist would in GTC, with Bohlin's
wall polynomial and no inertia so that it is explicit. GTC carries its own derivatives, degrees of
freedom and correlations; none of our code is in it.
"""

from __future__ import annotations

import math

import pandas as pd
import pytest
from GTC import cos, dof, exp, get_correlation, ureal
from GTC import uncertainty as u_of

import plumbfall as pf

BENCH = {
    "site": {"gravity": "9.8123(5) m/s2"},
    "timer": {"T": {"bias": "0.010(5) s", "rate": "20(50) ppm", "per_drop": "0.05 s"}},
    "thermometer": {"P": {"correction": "0.05(3) K", "per_reading": "0.02 K"}},
    "gauge": {"G": {"correction": {"value": 0.3, "unit": "um", "u": 0.6, "dof": 9}}},
    "balance": {"W": {"correction": "0.03(4) mg"}},
    "tube": {"A": {"bore": "50.00(4) mm", "distance": "200.00(8) mm"}},
    "ball": {
        "heavy": {"diameter": "2.500(1) mm", "mass": "63.00(3) mg", "gauge": "G", "balance": "W"},
        "given": {"diameter": "3.000(1) mm", "density": "7.70(1) g/cm3", "gauge": "G"},
    },
    "liquid": {
        "oil": {
            "density": {"value": 970.2, "unit": "kg/m3", "u": 0.4, "dof": 5},
            "density_temperature": "20 degC",
            "expansion": "9.2(4)e-4 /K",
            "viscosity_slope": "-3.0(2) %/K",
        }
    },
    "methods": {"drag": "product bohlin stokes", "model_uncertainty": "0.10 %"},
}

READINGS = {"one": ("heavy", 9.71, 25.3), "two": ("given", 6.93, 24.1)}


def by_gtc():
    gravity = ureal(9.8123, 0.0005)
    bias, rate = ureal(0.010, 0.005), ureal(20e-6, 50e-6)
    thermometer = ureal(0.05, 0.03)
    gauge = ureal(0.3e-6, 0.6e-6, 9)
    balance = ureal(0.03e-6, 0.04e-6)
    bore, distance = ureal(50.00e-3, 0.04e-3), ureal(200.00e-3, 0.08e-3)
    cold_density, expansion = ureal(970.2, 0.4, 5), ureal(9.2e-4, 0.4e-4)
    slope = ureal(-0.030, 0.002)
    model = ureal(1.0, 0.001)

    def viscosity(diameter, mass, density, reading, temperature):
        d = diameter + gauge
        volume = math.pi / 6 * d**3
        if mass is not None:
            mass = (mass + balance) * (1 - 1.2 / 8000) + 1.2 * volume
        else:
            mass = density * volume
        true = temperature + thermometer + ureal(0.0, 0.02)
        rho = cold_density / (1 + expansion * (true - 20.0))
        weight = (mass - rho * volume) * gravity * cos(0.0)
        time = (reading + ureal(0.0, 0.05)) * (1 + rate) - bias
        r = d / bore
        wall = 1 / (
            1 - 2.10443 * r + 2.08877 * r**3 - 0.94813 * r**5 - 1.372 * r**6 + 3.87 * r**8
            - 4.19 * r**10
        )  # fmt: skip
        at_drop = weight * time / (3 * math.pi * d * distance * wall * model)
        # the result holds at the temperature that is reported, whatever the thermometer's error
        return at_drop * exp(slope * (temperature + thermometer.x - true))

    one = viscosity(ureal(2.5e-3, 1e-6), ureal(63.00e-6, 0.03e-6), None, 9.71, 25.3)
    two = viscosity(ureal(3.0e-3, 1e-6), None, ureal(7700.0, 10.0), 6.93, 24.1)
    return one, two


@pytest.fixture(scope="module")
def report() -> pf.Report:
    rows = [
        {"set": name, "ball": ball, "time [s]": time, "temperature [degC]": temperature}
        for name, (ball, time, temperature) in READINGS.items()
    ]
    return pf.reduce(pd.DataFrame(rows), BENCH)


def test_value_uncertainty_and_degrees_of_freedom(report):
    for name, theirs in zip(READINGS, by_gtc(), strict=True):
        ours = report[name].result.viscosity
        assert ours.value == pytest.approx(theirs.x, rel=1e-12)
        assert ours.u == pytest.approx(u_of(theirs), rel=1e-9)
        assert ours.effective_dof == pytest.approx(dof(theirs), rel=1e-6)


def test_correlation_of_two_run_sets(report):
    one, two = by_gtc()
    assert report.correlation()[0, 1] == pytest.approx(get_correlation(one, two), rel=1e-9)


def test_ratio_of_two_run_sets(report):
    one, two = by_gtc()
    ratio = report["one"].viscosity / report["two"].viscosity
    assert ratio.std_dev == pytest.approx(u_of(one / two), rel=1e-7)


def test_budget_lines_are_theirs(report):
    from GTC import reporting

    theirs = sorted((line.u for line in reporting.budget(by_gtc()[0], trim=0)), reverse=True)
    ours = [line.contribution for line in report["one"].result.budget]
    assert ours == pytest.approx(theirs[: len(ours)], rel=1e-6)
    assert all(rest == 0 for rest in theirs[len(ours) :])
