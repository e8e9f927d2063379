"""Results come with one joint covariance: in a notebook, pickled, and in JSON (JCGM 102)."""

from __future__ import annotations

import json
import math
import pickle

import numpy as np
import pandas as pd
import pytest
from uncertainties import covariance_matrix

import plumbfall as pf
from plumbfall.run_sets.outputs import QUANTITIES
from plumbfall.uncertainty.coverage import joint_coverage_factor
from support.benches import bench_dict, drops_table

TIMES = {"B1": [14.91, 14.93, 14.89], "B2": [9.78, 9.80, 9.76], "B3": [6.95, 6.96, 6.94]}

# Inertia and ends left out: ln(viscosity) = ln(time) - ln(distance) + ln(ball less liquid) + …
STEEL = {
    "site": {"gravity": "9.81 m/s2"},
    "tube": {"A": {"bore": "50 mm", "distance": "200.00(24) mm"}},
    "ball": {"x": {"lot": True, "diameter": "2 mm", "density": "7700 kg/m3"}},
    "liquid": {"oil": {"density": "970.000(194) kg/m3"}},
    "methods": {"drag": "product faxen stokes", "ends": "none", "run_in": "none",
                "model_uncertainty": "0 %"},
}  # fmt: skip


def two_sets() -> pf.Report:
    table = pd.concat([drops_table(TIMES), drops_table(TIMES, run_set="B", temperature=27.0)])
    return pf.reduce(table, bench_dict(bench__reference_temperature="20 degC"), draws=0)


def test_dynamic_and_kinematic_viscosity_share_almost_everything():
    """METROLOGY 3.5 [derived]: r = 0.987 in a typical set; here 0.12 % of all but the density,
    0.02 % of the density, whose sensitivities are -0.144 and -1.144 for steel in 970 kg/m3."""
    report = pf.reduce(drops_table({"x": [100.0]}), STEEL, draws=0)
    eta, nu = report["A"].viscosity, report["A"].kinematic_viscosity
    assert nu.n == pytest.approx(eta.n / 970.0, rel=1e-12)
    s = 970.0 / (7700.0 - 970.0)
    others, density = 0.0012, 0.0002
    covariance = others**2 + s * (1 + s) * density**2
    u_eta, u_nu = math.hypot(others, s * density), math.hypot(others, (1 + s) * density)
    assert eta.s / eta.n == pytest.approx(u_eta, rel=1e-6)
    assert nu.s / nu.n == pytest.approx(u_nu, rel=1e-6)
    found = covariance_matrix([eta, nu])
    r = found[0][1] / (eta.s * nu.s)
    assert r == pytest.approx(covariance / (u_eta * u_nu), rel=1e-9)
    assert r == pytest.approx(0.987, abs=5e-4)
    # their ratio is the density, and nothing else is left of all they share
    ratio = eta / nu
    assert (ratio.n, ratio.s) == pytest.approx((970.0, 0.194), rel=1e-6)


def test_a_ratio_of_two_sets_keeps_their_own_scatter_only():
    """METROLOGY 3.3 [derived]: shared 0.6 %, 0.25 % each: 0.35 %; as if independent 0.92 %."""
    shape = np.linspace(-1.0, 1.0, 5)
    noise = 0.0025 * math.sqrt(5) * shape / shape.std(ddof=1)
    bench = {**STEEL, "tube": {"A": {"bore": "50 mm", "distance": "200.0(1.2) mm"}},
             "liquid": {"oil": {"density": "970 kg/m3"}}}  # fmt: skip
    table = pd.concat(
        [
            drops_table({"x": list(100.0 * (1 + noise))}),
            drops_table({"x": list(130.0 * (1 + noise))}, run_set="B"),
        ]
    )
    report = pf.reduce(table, bench, draws=0)
    a, b = report["A"].viscosity, report["B"].viscosity
    ratio = b / a
    assert 100 * ratio.s / ratio.n == pytest.approx(0.35, abs=0.005)
    assert 100 * math.hypot(a.s / a.n, b.s / b.n) == pytest.approx(0.92, abs=0.005)


def test_numbers_of_the_notebook_have_the_joint_covariance():
    report = two_sets()
    joint = report.joint_covariance()
    assert list(joint.index) == [(name, quantity) for name in "AB" for quantity in QUANTITIES]
    numbers = [getattr(report[name], quantity) for name, quantity in joint.index]
    assert np.array(covariance_matrix(numbers)) == pytest.approx(joint.to_numpy(), rel=1e-9)
    for name, quantity in joint.index:
        measured = getattr(report[name].result, quantity)
        assert math.sqrt(joint.loc[(name, quantity), (name, quantity)]) == pytest.approx(measured.u)
        assert getattr(report[name], quantity).n == pytest.approx(measured.value)
    assert joint.loc[[("A", "viscosity"), ("B", "viscosity")],
                     [("A", "viscosity"), ("B", "viscosity")]].to_numpy() == pytest.approx(
        report.covariance()
    )  # fmt: skip
    eigenvalues = np.linalg.eigvalsh(joint / np.sqrt(np.outer(np.diag(joint), np.diag(joint))))
    assert eigenvalues.min() > -1e-12


def test_a_number_carries_its_budget():
    report = two_sets()
    parts = {v.tag: u for v, u in report["A"].viscosity.error_components().items()}
    for line in report["A"].result.budget:
        if line.input in parts:
            both = math.hypot(parts[line.input], parts.get(f"{line.input} squared", 0.0))
            assert both == pytest.approx(line.contribution, rel=1e-9)
    assert {"tube.A.bore", "thermometer.P1.correction"} <= set(parts)
    # both sets have the same balls, so that their scatter is kept ball by ball
    (scatter,) = (line for line in report["A"].result.budget if line.input == "set.A.scatter")
    of_balls = [u for tag, u in parts.items() if str(tag).endswith(".scatter")]
    assert math.hypot(*of_balls) == pytest.approx(scatter.contribution, rel=1e-9)


def test_a_pickled_report_keeps_the_covariance():
    report = two_sets()
    ratio = report["B"].viscosity / report["A"].viscosity
    again = pickle.loads(pickle.dumps(report))
    pickled = again["B"].viscosity / again["A"].viscosity
    assert (pickled.n, pickled.s) == pytest.approx((ratio.n, ratio.s), rel=1e-12)
    assert ratio.s < 0.9 * ratio.n * math.hypot(
        *(report[name].viscosity.s / report[name].viscosity.n for name in "AB")
    )


def test_json_alone_gives_the_ratio():
    report = two_sets()
    block = json.loads(report.to_json())["covariance"]
    labels = [(label["run_set"], label["quantity"]) for label in block["labels"]]
    a, b = labels.index(("A", "viscosity")), labels.index(("B", "viscosity"))
    matrix = np.array(block["matrix"])
    values = {name: report[name].result.viscosity.value for name in "AB"}
    slope = np.zeros(len(labels))
    slope[b], slope[a] = 1 / values["A"], -values["B"] / values["A"] ** 2
    ratio = report["B"].viscosity / report["A"].viscosity
    assert math.sqrt(slope @ matrix @ slope) == pytest.approx(ratio.s, rel=1e-9)
    inputs = sorted(set().union(*block["contributions"]))
    table = np.array([[row.get(name, 0.0) for name in inputs] for row in block["contributions"]])
    assert table @ table.T == pytest.approx(matrix, rel=1e-9, abs=1e-20)
    assert block["pair_coverage_factor"] == pytest.approx(2.448, abs=5e-4)


def test_many_sets_give_the_contributions_alone():
    table = pd.concat([drops_table({"B1": [15.0]}, run_set=f"s{i}") for i in range(70)])
    block = pf.reduce(table, bench_dict(), draws=0).to_dict()["covariance"]
    assert block["matrix"] is None
    assert len(block["contributions"]) == len(block["labels"]) == 140


def test_a_set_without_a_value_has_no_label():
    table = pd.concat([drops_table(TIMES), drops_table({"B1": [0.5]}, run_set="B")])
    bench = bench_dict()
    bench["ball"]["B1"] = {"diameter": "2 mm", "density": "900 kg/m3"}
    report = pf.reduce(table, bench, draws=0)
    assert math.isnan(report["B"].viscosity.n)
    assert math.isnan(report["B"].kinematic_viscosity.n)


def test_factor_of_the_joint_ellipse():
    """JCGM 102:2011, table 1 (from memory): 2.45 for two results and 2.80 for three at 95 %."""
    assert joint_coverage_factor(outputs=1, probability=0.95) == pytest.approx(1.960, abs=5e-4)
    assert joint_coverage_factor(outputs=2, probability=0.95) == pytest.approx(2.448, abs=5e-4)
    assert joint_coverage_factor(outputs=3, probability=0.95) == pytest.approx(2.795, abs=5e-4)
