"""Tube constants: found by generalised least squares, and what cancels when they are used.

The figures are those of the measurement equation worked by hand: the constant of a ball and tube
is certified viscosity / ((ball density - liquid density) x time), so that in use the elasticity to
the ball's density is rho/(rho - rho_use) - rho/(rho - rho_cal), and the thermometer's error counts
by the difference of the two liquids' temperature slopes.
"""

from __future__ import annotations

import dataclasses
import json
import math

import numpy as np
import pandas as pd
import pytest

import plumbfall as pf
from plumbfall.bench.constant_file import content_hash
from support.calibrated_bench import GLASS, STEEL, bench, calibrated, drops, with_scatter
from support.perturbed import perturbed

CAL = drops(with_scatter(60.0, 0.001, 5), "oil", "cal")


def elasticity(result, name: str) -> float:
    line = next(line for line in result.budget if line.input == name)
    return line.sensitivity * line.value / result.viscosity.value


def test_the_constant_is_the_certified_viscosity_over_densities_apart_and_time():
    found = pf.calibrate(CAL, bench(), reference="R").to_dict()
    (constant,) = found["constants"]
    assert found["schema"] == "plumbfall/constants/1"
    # by hand: 1.2021 Pa.s / (6830 kg/m3 x 60 s); Vogel's law goes through the point at 20 degC
    assert constant["value"] == pytest.approx(1.2021 / (6830 * 60), rel=1e-9)
    assert constant["unit"] == "m2/s2"
    assert (constant["tube"], constant["ball"], constant["references"]) == ("incl", "s", ["R"])
    assert constant["certificates"][0] == {
        "reference": "R",
        "certificate": "C-1",
        "identity": "bottle 7",
    }
    assert constant["domain"]["temperature_K"] == [293.15, 293.15]
    assert constant["domain"]["tilt_rad"] == pytest.approx(math.radians(10))
    parts = constant["sensitivities"]
    # dK/d(liquid density) = K/(rho_b - rho_l), and to the ball's the same with the other sign
    by_density = constant["value"] / 6830
    assert parts["liquid.oil.density"]["sensitivity"] == pytest.approx(by_density, rel=1e-9)
    assert parts["ball.s.density"]["sensitivity"] == pytest.approx(-by_density, rel=1e-9)
    assert parts["thermometer.P.correction"]["identity"] == "TH-1"
    by_temperature = parts["thermometer.P.correction"]["sensitivity"] / constant["value"]
    assert by_temperature == pytest.approx(-0.065, rel=0.01)
    whole = sum((part["sensitivity"] * part["u"]) ** 2 for part in parts.values())
    whole += constant["scatter"]["standard_uncertainty"] ** 2
    assert constant["standard_uncertainty"] == pytest.approx(math.sqrt(whole), rel=1e-12)


def test_its_uncertainty_is_that_of_certificate_scatter_and_temperature():
    """METROLOGY 3.6: 0.15 %, 0.1 %/sqrt(5) and 0.06 % (temperature) are 0.168 % together."""
    sheet = bench(
        ball_density="7700 kg/m3",
        timer={"T": {"per_drop": "0.05 s"}},
        thermometer={"P": {"correction": {"value": 0.0, "unit": "K", "u": 0.06 / 6.5}}},
        liquid={"oil": {"density": "870 kg/m3"}},
        reference={"R": bench()["reference"]["R"]},
    )
    (constant,) = pf.calibrate(CAL, sheet, reference="R").constants
    relative = constant.stored.u / constant.stored.value
    assert 100 * relative == pytest.approx(0.168, abs=0.0005)
    assert 100 * constant.stored.own_u / constant.stored.value == pytest.approx(0.1 / 5**0.5)


@pytest.mark.parametrize(
    ("ball", "liquid", "net", "naive"),
    [
        (STEEL, "glycerol", 0.0685, 1.64),
        (GLASS, "glycerol", 0.662, 2.83),
        (GLASS, "light", 0.173, 2.44),
    ],
)
def test_the_density_of_the_ball_nearly_cancels(tmp_path, ball, liquid, net, naive):
    """METROLOGY 3.6: net sensitivities with 870 kg/m3 at the calibration, and without them."""
    sheet = bench(ball_density=f"{ball} ± 6.9 kg/m3, k=1")
    using = calibrated(tmp_path, sheet, CAL)
    table = drops(with_scatter(58.0, 0.001, 5), liquid, "use")
    result = pf.reduce(table, using, draws=0)["use"].result
    # half of the last printed digit
    assert elasticity(result, "ball.s.density") == pytest.approx(net, abs=6e-4)
    by_hand = bench(
        ball_density=f"{ball} ± 6.9 kg/m3, k=1",
        constant={"K": {"value": "1e-6 m2/s2", "tube": "incl"}},
    )
    independent = elasticity(pf.reduce(table, by_hand, draws=0)["use"].result, "ball.s.density")
    then = ball / (ball - 870.0)
    assert math.hypot(independent, then) == pytest.approx(naive, abs=0.011)


def test_the_thermometer_counts_by_the_difference_of_the_slopes(tmp_path):
    """METROLOGY 3.6, u = 0.05 K, -8.9 and -6.5 %/K: 0.12 % by one thermometer, 0.55 % by two."""
    using = calibrated(tmp_path, bench(), CAL)
    table = drops(with_scatter(58.0, 0.001, 5), "glycerol", "use")

    def part(sheet) -> float:
        result = pf.reduce(table, sheet, draws=0)["use"].result
        found = [line for line in result.budget if line.input.startswith("thermometer.P")]
        return 100 * math.hypot(*(line.contribution for line in found)) / result.viscosity.value

    assert part(using) == pytest.approx(0.12, abs=0.005)
    other = {"P": {**using["thermometer"]["P"], "identity": "TH-2"}}
    assert part({**using, "thermometer": other}) == pytest.approx(0.55, abs=0.005)


def test_an_input_that_changed_is_independent_and_said(tmp_path):
    using = calibrated(tmp_path, bench(), CAL)
    table = drops(with_scatter(58.0, 0.001, 5), "oil", "use")
    same = pf.reduce(table, using, draws=0)["use"].result
    assert not [one for one in same.findings if one.code == "input-changed"]
    for change in (
        {"ball": {"s": {"diameter": "15.600(1) mm", "density": "7701(23) kg/m3"}}},
        {"ball": {"s": {"diameter": "15.600(1) mm", "density": "7700(20) kg/m3"}}},
        {"ball": {"s": {**using["ball"]["s"], "identity": "B-2"}}},
    ):
        changed = pf.reduce(table, {**using, **change}, draws=0)["use"].result
        (note,) = [one for one in changed.findings if one.code == "input-changed"]
        assert "ball.s.density" in note.message
        assert note.severity == "note"
        assert changed.viscosity.u > 1.2 * same.viscosity.u
        names = {line.input for line in changed.budget}
        assert {"ball.s.density", "ball.s.density (at calibration)"} <= names


def test_the_certified_value_never_cancels(tmp_path):
    """Measured with its own certificate, a liquid still carries all of the certificate's error."""
    using = calibrated(tmp_path, bench(), CAL)
    result = pf.reduce(drops([60.0, 60.1, 59.9, 60.0], "oil", "use"), using, draws=0)["use"].result
    line = next(line for line in result.budget if line.input == "reference.R.viscosity")
    assert line.contribution / result.viscosity.value == pytest.approx(0.0015, rel=1e-3)


def test_draws_share_what_the_linear_propagation_shares(tmp_path):
    using = calibrated(tmp_path, bench(scatter={"relative": "0.1 %", "dof": 300}), CAL.iloc[1:4])
    for liquid in ("oil", "glycerol"):
        table = drops(with_scatter(58.0, 0.001, 3), liquid, "use")
        result = pf.reduce(table, using, draws=100_000, seed=2)["use"].result
        drawn, linear = result.monte_carlo, result.linear
        error = 5 * math.sqrt(0.025 * 0.975) / 0.0584 / math.sqrt(100_000) * linear.u
        assert (drawn.low, drawn.high) == pytest.approx((linear.low, linear.high), abs=error)


def test_two_liquids_are_joined_with_their_joint_covariance():
    """Against a GLS written out: values and covariance by hand, solved by numpy alone."""
    table = pd.concat(
        [CAL, drops(with_scatter(15.0, 0.002, 5), "thin oil", "cal 2")], ignore_index=True
    )
    (constant,) = pf.calibrate(table, bench(), reference=["R", "R2"]).constants
    logs = np.log([1.2021 / (6830 * 60.0), 0.3000 / (6860 * 15.0)])
    slopes = [-0.065, -0.055]
    parts = np.array(
        [  # ball density, bias and temperature are shared; liquids, certificates, scatter are not
            [-23 / 6830, 0.03 / 60, 0.05 * slopes[0], 0.2 / 6830, 0, 0.0015, 0],
            [-23 / 6860, 0.03 / 15, 0.05 * slopes[1], 0, 0.2 / 6860, 0, 0.0015],
        ]
    )
    scatter = np.array([0.001, 0.002]) / 5**0.5
    covariance = parts @ parts.T + np.diag(scatter**2)
    of_drop = np.mean(scatter**2)  # weights take the drops' scatter as one
    inverse = np.linalg.inv(parts @ parts.T + np.eye(2) * of_drop)
    weights = inverse.sum(axis=0) / inverse.sum()
    assert constant.stored.value == pytest.approx(math.exp(weights @ logs), rel=1e-5)
    u = math.sqrt(weights @ covariance @ weights)
    assert constant.stored.u / constant.stored.value == pytest.approx(u, rel=2e-3)
    assert [one.weight for one in constant.sets] == pytest.approx(weights, abs=2e-3)
    pull = np.linalg.inv(covariance)
    middle = pull.sum(axis=0) @ logs / pull.sum()
    chi = (logs - middle) @ pull @ (logs - middle)
    assert constant.constancy.chi_squared == pytest.approx(chi, rel=0.01)


def test_a_constant_that_changes_with_time_is_found_and_passed_on(tmp_path):
    table = pd.concat(
        [CAL, drops(with_scatter(15.0 * 0.97, 0.001, 5), "thin oil", "cal 2")], ignore_index=True
    )
    (constant,) = pf.calibrate(table, bench(), reference=["R", "R2"]).constants
    (finding,) = [one for one in constant.findings if one.code == "constant-varies"]
    assert finding.severity == "warning"
    using = calibrated(tmp_path, bench(), table, "R", "R2")
    result = pf.reduce(drops([60.0, 60.1, 59.9], "oil", "use"), using, draws=0)["use"].result
    (told,) = [one for one in result.findings if one.code == "constant-varies"]
    assert finding.message in told.message
    assert finding.p_value < 0.01
    trends = {trend.along: trend for trend in constant.constancy.trends}
    assert set(trends) == {"time", "reynolds"}
    value = [one.value for one in constant.sets]
    assert trends["time"].change == pytest.approx(value[0] / value[1] - 1, rel=1e-9)


def test_several_balls_of_one_set_have_a_constant_each(tmp_path):
    sheet = bench(
        ball={
            "s": {"diameter": "15.600(1) mm", "density": "7700(23) kg/m3"},
            "g": {"diameter": "15.700(1) mm", "density": "2230(2) kg/m3"},
        }
    )
    table = CAL.assign(ball=["s", "g", "s", "g", "s"])
    table["time [s]"] = [60.0, 300.0, 60.1, 300.5, 59.9]
    using = calibrated(tmp_path, sheet, table)
    document = json.loads((tmp_path / "constant.json").read_text())
    assert [one["ball"] for one in document["constants"]] == ["s", "g"]
    use = drops([60.0, 60.1, 300.2, 300.0], "oil", "use", ball=["s", "s", "g", "g"])
    result = pf.reduce(use, using, draws=0)["use"].result
    one, other = (ball.viscosity.value for ball in result.balls)
    assert one == pytest.approx(1.2021, rel=2e-3)
    assert other == pytest.approx(1.2021, rel=2e-3)


@pytest.mark.parametrize(
    ("change", "columns", "says"),
    [
        ({}, {"temperature [degC]": 22.0}, "22.00 degC, found from 20.00 degC"),
        ({}, {"time [s]": [90.0, 90.1, 89.9]}, "1.81 Pa.s, found from 1.2 Pa.s"),
        ({"tube": {"incl": {"kind": "calibrated", "constant": "K", "tilt": "11 deg"}}}, {},
         "tilted by 11 deg, found at 10 deg"),
    ],
)  # fmt: skip
def test_outside_its_domain_a_constant_is_warned_of(tmp_path, change, columns, says):
    using = {**calibrated(tmp_path, bench(), CAL), **change}
    table = drops([60.0, 60.1, 59.9], "oil", "use").assign(**columns)
    report = pf.reduce(table, using, draws=0)
    (finding,) = [
        one for one in report["use"].result.findings if one.code == "constant-outside-domain"
    ]
    assert says in finding.message
    assert finding.severity == "warning"
    inside = drops([60.0, 60.1, 59.9], "oil", "use")
    if not change:
        codes = {one.code for one in pf.reduce(inside, using, draws=0)["use"].result.findings}
        assert "constant-outside-domain" not in codes


def test_a_file_edited_by_hand_is_recognised(tmp_path):
    using = calibrated(tmp_path, bench(), CAL)
    path = tmp_path / "constant.json"
    document = json.loads(path.read_text())
    assert document["content_sha256"] == content_hash(document)
    table = drops([60.0, 60.1, 59.9], "oil", "use")

    def notes() -> list[str]:
        findings = pf.reduce(table, using, draws=0)["use"].result.findings
        return [one.message for one in findings if one.code == "input-changed"]

    path.write_text(json.dumps(document))  # laid out otherwise, it says the same
    assert notes() == []
    document["constants"][0]["value"] *= 1.01
    path.write_text(json.dumps(document))
    assert "edited by hand" in notes()[0]


def test_the_report_names_the_file_of_constants_among_its_inputs(tmp_path):
    using = calibrated(tmp_path, bench(), CAL)
    report = pf.reduce(drops([60.0, 60.1], "oil", "use"), using, draws=0).to_dict()
    assert [one["path"] for one in report["inputs"]][-1] == str(tmp_path / "constant.json")


def test_what_cannot_be_calibrated_is_refused():
    def says(table, *references, **sections) -> str:
        with pytest.raises(pf.InputError) as error:
            pf.calibrate(table, bench(**sections), reference=references)
        return str(error.value)

    assert "did you mean 'R2'?" in says(CAL, "R22")
    assert "in liquid 'oil', which none of the references named certifies" in says(CAL, "R2")
    assert "30.00 degC is asked for" in says(CAL.assign(**{"temperature [degC]": 30.0}), "R")
    assert "has no temperature" in says(CAL.drop(columns="temperature [degC]"), "R")
    void = CAL.assign(status="void", note="bubble")
    assert "no drop that is used" in says(void, "R")


def test_a_run_set_that_is_invalid_gives_no_constant_and_no_file(tmp_path):
    sheet = bench(ball_density="860(1) kg/m3")
    found = pf.calibrate(CAL, sheet, reference="R")
    assert not found.complete
    assert found.to_dict()["constants"] == []
    assert found.to_dict()["invalid"][0]["findings"][0]["code"] == "ball-not-denser"
    with pytest.raises(pf.InputError):
        found.to_json(tmp_path / "constant.json")
    assert list(tmp_path.iterdir()) == []


def test_the_day_is_that_of_the_last_drop_and_an_expired_certificate_is_said():
    sheet = bench()
    sheet["reference"]["R"]["expires"] = "2026-03-01"
    starts = [f"2026-03-0{day}T10:00:00" for day in (1, 1, 2, 2, 2)]
    found = pf.calibrate(CAL.assign(started=starts), sheet, reference="R")
    assert found.to_dict()["date"] == "2026-03-02"
    assert "reference-expired" in {one.code for one in found.constants[0].findings}
    assert pf.calibrate(CAL, bench(), reference="R").to_dict()["date"] is None


def test_the_objects_can_be_looked_at():
    table = pd.concat([CAL, drops([15.0, 15.02, 15.01], "thin oil", "cal 2")], ignore_index=True)
    found = pf.calibrate(table, bench(), reference=["R", "R2"])
    assert list(found.table()["constant"]) == ["incl s"]
    assert len(found.sets_table()) == 2
    assert "incl" in found._repr_html_()
    assert len(found.plot().axes) == 1
    text = found.text()
    assert max(map(len, text.splitlines())) <= 80
    assert "Does it change with the fall time?" in text
    assert json.loads(found.to_json()) == found.to_dict()


CHAIN = {
    "timer": {"T": {"per_drop": "0.05 s", "bias": "0.05(3) s", "rate": "40(20) ppm"}},
    "thermometer": {"P": {"correction": "0.04(5) K"}},
    "gauge": {"G": {"correction": "0.5(5) um"}},
    "balance": {"B": {"correction": "0.10(5) mg"}},
    "ball": {
        "s": {
            "diameter": "15.600(1) mm",
            "mass": "4.4320(5) g",
            "gauge": "G",
            "balance": "B",
            "expansion": "3.3(2)e-6 /K",
        }
    },
    "liquid": {
        "oil": {
            "density": "870.0(2) kg/m3",
            "density_temperature": "25 degC",
            "expansion": "7.0(3)e-4 /K",
        },
        "thin oil": {"density": "840.0(2) kg/m3"},
        "glycerol": {"density": "1261.0(2) kg/m3", "viscosity_slope": "-8.9(3) %/K"},
    },
}


def test_every_net_sensitivity_agrees_with_differences_of_the_whole_chain(tmp_path):
    """Calibrate and use on a bench with one input moved: both feel it, as the file says."""
    sheet = pf.read_bench(bench(**CHAIN))
    table = pd.concat(
        [
            drops([300.0, 300.3, 299.8], "oil", "cal"),
            drops([73.116, 73.215, 73.164], "thin oil", "cal 2"),
        ]
    )
    use = drops([250.0, 250.2, 250.1], "glycerol", "use")
    path = tmp_path / "constant.json"

    def chain(by_name: str = "", step: float = 0.0) -> pf.Report:
        moved = perturbed(sheet, by_name, step)
        pf.calibrate(table, moved, reference=["R", "R2"]).to_json(path)
        constant = dataclasses.replace(moved.constants["K"], file=str(path))
        return pf.reduce(use, dataclasses.replace(moved, constants={"K": constant}), draws=0)

    sets = chain().reduced.sets
    eta, warm = sets.scatter.mean[0], sets.columns.set_temperature[0]
    checked = set()
    for column, estimate in enumerate(sets.inputs.estimates):
        name = estimate.name
        if name not in sheet.quantities() or name.startswith("constant"):
            continue
        step = max(abs(estimate.value) * 1e-5, estimate.u * 1e-2)
        found = []
        for sign in (1, -1):
            again = chain(name, sign * step).reduced.sets
            shift = again.columns.set_temperature[0] - warm
            slope = again.inputs.roles["slope"].value[0]
            found.append(again.scatter.mean[0] * math.exp(-slope * shift))
        difference = (found[0] - found[1]) / (2 * step)
        analytic = sets.jacobian.matrix[0, column]
        size = eta / max(abs(estimate.value), estimate.u)
        # weights hang on the inputs too, times the misfit of the liquids, which is next to nothing
        assert analytic == pytest.approx(difference, rel=2e-3, abs=2e-5 * size), name
        checked.add(name.split(".")[0])
    assert checked == {"ball", "balance", "gauge", "liquid", "thermometer", "timer"}


def test_constants_of_two_files_share_what_they_were_both_found_with(tmp_path):
    """Two balls, calibrated apart with one certificate: its error does not average down."""
    balls = {
        "s": {"diameter": "15.600(1) mm", "density": "7700(1) kg/m3"},
        "g": {"diameter": "15.700(1) mm", "density": "7700(1) kg/m3"},
    }
    for ball, time in (("s", 60.0), ("g", 80.0)):
        table = drops(with_scatter(time, 0.001, 5), "oil", f"cal {ball}", ball=ball)
        found = pf.calibrate(table, bench(ball=balls), reference="R")
        found.to_json(tmp_path / f"{ball}.json")
    using = bench(
        ball=balls,
        tube={"incl": {"kind": "calibrated", "constant": ["Ks", "Kg"], "tilt": "10.0 deg"}},
        constant={f"K{ball}": {"file": str(tmp_path / f"{ball}.json")} for ball in balls},
    )
    use = drops([60.0, 60.1, 80.0, 80.1], "oil", "use", ball=["s", "s", "g", "g"])
    result = pf.reduce(use, using, draws=0)["use"].result
    parts = [one for one in result.budget if one.input.startswith("reference.R.viscosity")]
    assert [one.input for one in parts] == ["reference.R.viscosity"]
    assert parts[0].contribution / result.viscosity.value == pytest.approx(0.0015, rel=1e-3)
    assert {one.ball for one in result.constants} == {"s", "g"}


def test_two_unknowns_measured_with_one_constant_are_correlated(tmp_path):
    using = calibrated(tmp_path, bench(), CAL)
    both = pd.concat([drops([60.0, 60.1, 59.9], "oil", one) for one in ("monday", "tuesday")])
    report = pf.reduce(both, using, draws=0)
    ratio = report["monday"].viscosity / report["tuesday"].viscosity
    alone = report["monday"].result.viscosity
    assert report.correlation()[0, 1] > 0.9
    assert ratio.std_dev < 0.4 * alone.u / alone.value
