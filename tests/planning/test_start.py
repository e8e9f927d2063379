"""Run-in distances of planned balls, against starts that were solved independently."""

from __future__ import annotations

import numpy as np
import pytest

import plumbfall as pf
from plumbfall.planning.conditions import conditions_of
from plumbfall.planning.evaluation import evaluate
from plumbfall.planning.start import run_in_distances


def distance(viscosity: float, diameter: str, density: str, bore: str, liquid: str) -> float:
    bench = pf.read_bench(
        {
            "site": {"gravity": "9.81 m/s2"},
            "tube": {"A": {"bore": bore, "distance": "200 mm", "release_above": "70 mm"}},
            "ball": {"B": {"diameter": diameter, "density": density}},
            "liquid": {"oil": {"density": liquid}},
        }
    )
    zero = np.zeros(1, dtype=np.intp)
    made = evaluate(conditions_of(bench), zero, zero, np.array([viscosity]))
    fallen = made.fallen
    found = run_in_distances(fallen.forces, fallen.reynolds, made.viscosity, np.ones(1))
    return float(found[0])


def test_a_steel_ball_in_a_thick_liquid():
    # exact unsteady Stokes flow in the tube, by a solver other than the table's: 2 mm steel in
    # 1 Pa.s, ratio 0.05: 99.9 % after 0.90 mm (computed beforehand, not from print)
    assert distance(1.0, "2 mm", "7800 kg/m3", "40 mm", "970 kg/m3") == pytest.approx(
        0.90e-3, rel=0.05
    )


def test_a_steel_ball_with_inertia():
    # Navier-Stokes without a model of the start: 3 mm steel in 0.1 Pa.s, ratio 0.075, Re 6.8:
    # 99.9 % after 38 mm (computed beforehand, not from print)
    assert distance(0.1, "3 mm", "7700 kg/m3", "40 mm", "970 kg/m3") == pytest.approx(
        38e-3, rel=0.15
    )


def test_beyond_the_computed_starts_there_is_an_answer():
    assert 0 < distance(0.02, "3 mm", "7700 kg/m3", "100 mm", "970 kg/m3") < 1
    assert 0 < distance(5.0, "0.3 mm", "7700 kg/m3", "60 mm", "970 kg/m3") < 0.01
