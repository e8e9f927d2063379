"""Checks against a certified liquid: bias, scores, decisions, and the history that keeps them."""

from __future__ import annotations

import csv
import json
import math
import subprocess
import sys

import numpy as np
import pytest

import plumbfall as pf
from plumbfall.calibration.history_lines import COLUMNS, read_history
from plumbfall.cli.program import main
from support.benches import bench_dict, drops_table

TIMES = {"B1": [14.09, 14.11, 14.08, 14.10, 14.09]}
VISCOSITY = pf.reduce(drops_table(TIMES), bench_dict(), draws=0)["A"].result.viscosity


def bench_with(bias=0.0, u=0.001, **keys):
    """Return the invented bench with a certificate that makes the drops' bias what is asked."""
    # the thermometer's correction of +0.03 K makes the set's temperature 25.03 degC
    certified = VISCOSITY.value / (1 + bias)
    point = {"temperature": "25.03 degC", "value": {"value": certified, "unit": "Pa.s", "u": u}}
    return bench_dict(reference={"R": {"liquid": "oil", "viscosity": [point], **keys}})


def checked(bias=0.0, u=0.001, *, bench=None, table=None, **options):
    drops = drops_table(TIMES) if table is None else table
    report = pf.check(drops, bench or bench_with(bias, u), reference="R", **options)
    (one,) = report.checks
    return one


def test_bias_is_measured_over_certified_less_1_with_both_uncertainties():
    one = checked(bias=0.012, u=0.002)
    assert one.bias.value == pytest.approx(0.012, rel=1e-9)
    parts = VISCOSITY.u / VISCOSITY.value, 0.002 / one.certified.value
    assert one.bias.u == pytest.approx(1.012 * math.hypot(*parts), rel=1e-6)
    # ISO 13528: difference over the root of the sum of squares
    off = VISCOSITY.value - one.certified.value
    assert one.zeta == pytest.approx(off / math.hypot(VISCOSITY.u, 0.002))
    expanded = VISCOSITY.expanded, 1.959964 * 0.002
    assert one.e_n == pytest.approx(off / math.hypot(*expanded), rel=1e-6)


def test_without_a_tolerance_e_n_decides():
    assert checked(bias=0.001).decision == "passed"
    failed = checked(bias=0.02)
    assert (failed.decision, failed.conformance_probability) == ("failed", None)
    assert "beyond 1" in failed.reason


@pytest.mark.parametrize(
    ("bias", "tolerance", "decision"),
    [
        (0.0, "1.5 %", "passed"),
        (0.006, "0.5 %", "undecided"),
        (0.02, "0.5 %", "failed"),
        (-0.02, 0.005, "failed"),
        (0.0, "0.1 %", "undecided"),
    ],
)
def test_with_a_tolerance_the_conformance_probability_decides(bias, tolerance, decision):
    one = checked(bias, tolerance=tolerance)
    assert one.decision == decision
    low, high = {"passed": (0.95, 1), "failed": (0, 0.05), "undecided": (0.05, 0.95)}[decision]
    assert low <= one.conformance_probability <= high
    # JCGM 106: drawn from Student's t about the bias
    draws = np.random.default_rng(1).standard_t(min(one.bias_dof, 1e6), 200_000)
    inside = np.abs(one.bias.value + one.bias.u * draws) <= one.tolerance
    assert one.conformance_probability == pytest.approx(inside.mean(), abs=5e-3)


def test_a_measurement_that_could_never_pass_says_so():
    assert "not capable" in checked(bias=0.0, tolerance="0.1 %").reason
    assert "not capable" not in checked(bias=0.013, tolerance="1.4 %").reason


def test_a_failed_check_says_what_the_bias_looks_like():
    # 970.2 kg/m3: 3 % off is the kinematic value typed for the dynamic one
    failed = checked(bias=0.9702 - 1)
    assert failed.decision == "failed"
    assert any("kinematic" in hint for hint in failed.explanations)
    assert any("1.5 K alone" in hint for hint in failed.explanations)
    assert checked(bias=0.0).explanations == ()


def test_an_expired_certificate_decides_nothing():
    table = drops_table(TIMES).assign(started="2026-06-01T09:00")
    bench = bench_with(expires="2026-05-31")
    assert checked(bench=bench, table=table).decision == "undecided"
    assert checked(bench=bench, date="2026-05-31").decision == "passed"
    unknown = checked(bench=bench)
    assert unknown.decision == "passed"
    assert "is not known, as the drops have no date" in unknown.reason


def test_warnings_of_the_data_stand_beside_the_decision():
    table = drops_table(TIMES).assign(started="2026-06-01T09:00")
    report = pf.check(table, bench_with(expires="2026-05-31"), reference="R")
    assert "reference-expired" in {finding.code for finding in report["A"].findings}
    assert "Found         reference-expired" in report.text()
    codes = [one["code"] for one in report.to_dict()["checks"][0]["findings"]]
    assert "reference-expired" in codes


def test_sets_of_other_liquids_are_passed_over_by_name():
    bench = bench_with()
    bench["liquid"]["syrup"] = {"density": "1.3 g/cm3"}
    bench["set"] = {"B": {"liquid": "syrup"}, "A": {"liquid": "oil"}}
    import pandas as pd

    table = pd.concat([drops_table(TIMES), drops_table(TIMES, run_set="B")])
    report = pf.check(table, bench, reference="R")
    assert ([one.run_set for one in report], report.passed_over) == (["A"], ("B",))
    assert "not checked: B" in report.text()
    with pytest.raises(pf.InputError, match="is of the liquid 'oil', and the drops are of syrup"):
        pf.check(drops_table(TIMES, run_set="B"), bench, reference="R")


def test_unknown_references_are_named():
    known = bench_dict(reference={"oil-1000": {"law": "water"}})
    with pytest.raises(pf.InputError, match="did you mean 'oil-1000'"):
        pf.check(drops_table(TIMES), known, reference="oil-100")
    with pytest.raises(pf.InputError, match="the bench sheet has oil-1000"):
        pf.check(drops_table(TIMES), known, reference="R")
    with pytest.raises(pf.InputError, match=r"add \[reference\.R\]"):
        pf.check(drops_table(TIMES), bench_dict(), reference="R")


def test_tolerances_that_are_none_are_refused():
    for wrong in ("0 %", 1.5, "-1 %"):
        with pytest.raises(pf.InputError, match="not between 0 and 1"):
            checked(tolerance=wrong)
    with pytest.raises(pf.InputError):
        checked(tolerance="5 mm")
    with pytest.raises(pf.InputError, match="has an uncertainty"):
        checked(tolerance="0.5(1) %")


def test_temperature_counts_where_the_liquid_has_no_slope():
    # the certificate's own slope takes the thermometer's 0.02 K to the certified value
    points = [
        {"temperature": "20 degC", "value": "1.05 Pa.s"},
        {"temperature": "25 degC", "value": "0.95 Pa.s"},
        {"temperature": "40 degC", "value": "0.72 Pa.s"},
    ]
    bench = bench_dict(reference={"R": {"liquid": "oil", "viscosity": points}})
    with_slope = checked(bench=bench)
    del bench["liquid"]["oil"]["viscosity_slope"]
    without = checked(bench=bench)
    assert without.certified.u > with_slope.certified.u
    assert without.certified.u / without.certified.value == pytest.approx(0.02 * 0.0195, rel=0.1)
    assert without.bias.u == pytest.approx(with_slope.bias.u, rel=0.02)


def constant_file(tmp_path, reference="R", certificate=""):
    """Write a file of constants as ``calibrate`` does, resting on a certificate."""
    document = {
        "schema": "plumbfall/constants/1",
        "constants": [
            {
                "name": "K",
                "tube": "A",
                "ball": "B1",
                "value": 1.0e-8,
                "unit": "m2/s2",
                "standard_uncertainty": 2e-11,
                "dof": 50,
                "sensitivities": {},
                "domain": {},
                "references": [reference],
                "certificates": [{"reference": reference, "certificate": certificate}],
            }
        ],
        "inputs": [],
    }
    (tmp_path / "constant.json").write_text(json.dumps(document))
    return str(tmp_path / "constant.json")


def calibrated(tmp_path, **rests_on):
    bench = bench_with(bias=0.0, certificate="C-17")
    bench["tube"]["A"] = {"kind": "calibrated", "constant": "K"}
    bench["constant"] = {"K": {"tube": "A", "file": constant_file(tmp_path, **rests_on)}}
    measured = 1.0e-8 * (7700.0 - 970.2) * 14.09
    bench["reference"]["R"]["viscosity"][0]["value"] = {
        "value": measured,
        "unit": "Pa.s",
        "u": 1e-6,
    }
    return checked(bench=bench, tolerance="2 %")


def test_a_constant_from_the_same_certificate_leaves_the_check_undecided(tmp_path):
    for certified in ({"reference": "R"}, {"reference": "old", "certificate": "C-17"}):
        one = calibrated(tmp_path, **certified)
        assert (one.decision, one.e_n, one.zeta) == ("undecided", None, None)
        assert "not independent" in one.reason
        assert one.findings[-1].code == "reference-not-independent"
    assert calibrated(tmp_path, reference="other", certificate="C-18").decision == "passed"


# --- the command line ---------------------------------------------------------------------------


def written(tmp_path, bias=0.0, times=(14.09, 14.11, 14.08, 14.10, 14.09), dated=True):
    """Write bench sheet and timing file; return the path of the latter."""
    bench = bench_with(bias)
    point = bench["reference"]["R"]["viscosity"][0]
    lines = [
        '[timer.T1]\nkind = "gate"\nper_drop = "0.003 s"\nresolution = "0.001 s"',
        '[thermometer.P1]\ncorrection = "0.03(2) K"',
        '[tube.A]\nbore = "50.00(2) mm"\nmarks = ["0 mm", "200.00(5) mm"]\n'
        'surface_above = "80(2) mm"\nbottom_below = "80(2) mm"\nrelease_above = "70(2) mm"',
        '[ball.B1]\ndiameter = "2.0003(2) mm"\ndensity = "7.700(3) g/cm3"',
        '[liquid.oil]\ndensity = "970.2(2) kg/m3"\nviscosity_slope = "-2.0(2) %/K"',
        '[site]\ngravity = "9.8123(1) m/s2"',
        '[reference.R]\nliquid = "oil"\nviscosity = [ { temperature = "25.03 degC", '
        f'value = "{point["value"]["value"]:.6f} ± 0.0020 Pa.s, k=2" }} ]',
    ]
    (tmp_path / "bench.toml").write_text("\n\n".join(lines), "utf-8")
    head = "ball,time [s],temperature [degC],started,operator\n"
    when = "2026-03-02T09:1{}:00" if dated else ""
    rows = "".join(f"B1,{time},25.00,{when.format(n)},EK\n" for n, time in enumerate(times, 1))
    (tmp_path / "drops.csv").write_text(head + rows, "utf-8")
    return str(tmp_path / "drops.csv")


@pytest.mark.parametrize(
    ("bias", "options", "code", "word"),
    [
        (0.0, (), 0, "passed"),
        (0.05, (), 1, "failed"),
        (0.0, ("--tolerance", "2 %"), 0, "passed"),
        (0.05, ("--tolerance", "2 %"), 1, "failed"),
        (0.0, ("--tolerance", "0.05 %"), 3, "undecided"),
    ],
)
def test_exit_codes(tmp_path, capsys, bias, options, code, word):
    assert main(["check", written(tmp_path, bias), "--reference", "R", *options]) == code
    out, err = capsys.readouterr()
    assert out.startswith(f"{word}  drops  against R  bias ")
    assert err == ""
    assert max(map(len, out.splitlines()[1:])) <= 80


def test_bad_input_exits_with_2_and_writes_no_history(tmp_path, capsys):
    drops, history = written(tmp_path), tmp_path / "history.csv"
    wrong = ["check", drops, "--reference", "S", "--history", str(history)]
    assert main(wrong) == 2
    assert not history.exists()
    undated = written(tmp_path, dated=False)
    assert main(["check", undated, "--reference", "R", "--history", str(history)]) == 2
    assert "give --date 2026-03-02" in capsys.readouterr().err
    assert not history.exists()


def test_json_has_the_names_of_its_schema(tmp_path, capsys):
    arguments = ["check", written(tmp_path), "--reference", "R", "--tolerance", "2 %", "--json"]
    assert main(arguments) == 0
    document = json.loads(capsys.readouterr().out)
    assert document["schema"] == "plumbfall/check/1"
    (one,) = document["checks"]
    assert {
        "run_set", "reference", "measured", "certified", "bias", "e_n", "zeta", "tolerance",
        "conformance_probability", "decision", "reason",
    } <= set(one)  # fmt: skip
    assert one["bias"]["unit"] == "1"
    assert one["tolerance"] == 0.02


# --- the history --------------------------------------------------------------------------------


def test_history_has_one_line_a_check_and_the_same_inputs_once(tmp_path, capsys):
    drops, history = written(tmp_path), tmp_path / "history.csv"
    arguments = ["check", drops, "--reference", "R", "--history", str(history)]
    for said in ("1 appended", "0 appended"):
        main(arguments)
        assert said in capsys.readouterr().err
    (row,) = csv.DictReader(history.read_text("utf-8").splitlines())
    assert tuple(row) == COLUMNS
    assert (row["when"], row["run_set"], row["operator"]) == ("2026-03-02T09:15:00", "drops", "EK")
    assert len(row["input_sha256"]) == 64
    # one more drop is another input; so is another bench sheet
    main([*arguments[:1], written(tmp_path, times=(14.09, 14.11, 14.1)), *arguments[2:]])
    main([*arguments[:1], written(tmp_path, bias=0.001), *arguments[2:]])
    assert len(read_history(history)) == 3


def test_two_processes_appending_at_once_lose_nothing(tmp_path):
    history = tmp_path / "history.csv"
    code = (
        "import sys\n"
        "from plumbfall.calibration.history import append_history\n"
        "from plumbfall.calibration.history_lines import HistoryLine\n"
        "for n in range(25):\n"
        "    line = HistoryLine(when='2026-03-02', run_set=f'{sys.argv[2]} {n}', reference='R',\n"
        "        bias_percent=0.1, u_percent=0.2, e_n=0.3, decision='passed',\n"
        "        temperature_degC=25.0, operator='EK', version='0', input_sha256='x')\n"
        "    append_history(sys.argv[1], [line])\n"
    )
    started = [subprocess.Popen([sys.executable, "-c", code, str(history), name]) for name in "ABC"]
    assert [process.wait(timeout=300) for process in started] == [0, 0, 0]
    names = [line.run_set for line in read_history(history)]
    assert len(names) == len(set(names)) == 75


def test_a_disk_that_is_full_takes_back_what_was_written(tmp_path, monkeypatch):
    from plumbfall.calibration import history as module

    path = tmp_path / "history.csv"
    pf.check(drops_table(TIMES), bench_with(), reference="R", history=path, date="2026-03-02")
    before = path.read_bytes()

    def full(_):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(module.os, "fsync", full)
    with pytest.raises(pf.InputError, match="No space left"):
        pf.check(
            drops_table(TIMES), bench_with(0.001), reference="R", history=path, date="2026-03-03"
        )
    assert path.read_bytes() == before


def test_other_files_are_no_history(tmp_path):
    path = tmp_path / "notes.csv"
    path.write_text("a,b\n1,2\n")
    with pytest.raises(pf.InputError, match="is no history of checks") as refused:
        pf.check(drops_table(TIMES), bench_with(), reference="R", history=path, date="2026-03-02")
    assert refused.value.line == 1
    assert path.read_text() == "a,b\n1,2\n"


def test_everything_wrong_with_a_history_is_named_at_once(tmp_path):
    path = tmp_path / "history.csv"
    good = "2026-03-02,A,R,0.1,0.2,0.3,passed,25,EK,0.1,x"
    bad = [good.replace("2026-03-02", "March"), good.replace("0.1,0.2", "O.1,0.2"), "2026-03-02,A"]
    path.write_text("\n".join([",".join(COLUMNS), good, *bad]))
    with pytest.raises(pf.InputError) as refused:
        read_history(path)
    assert [(one.line, one.column) for one in refused.value.problems] == [(3, 1), (4, 4), (5, None)]


def test_a_line_typed_by_hand_without_its_end_keeps_its_own(tmp_path):
    path = tmp_path / "history.csv"
    path.write_text(
        "# kept by EK\n" + ",".join(COLUMNS) + "\n2026-03-01,A,R,0.1,0.2,0.3,passed,25,EK,0.1,x"
    )
    pf.check(drops_table(TIMES), bench_with(), reference="R", history=path, date="2026-03-02")
    assert [line.when for line in read_history(path)] == ["2026-03-01", "2026-03-02"]


def test_names_that_a_spreadsheet_would_run_are_kept_harmless(tmp_path):
    path = tmp_path / "history.csv"
    table = drops_table(TIMES, run_set="=1+1")
    for _ in range(2):
        pf.check(table, bench_with(), reference="R", history=path, date="2026-03-02")
    assert ",'=1+1," in path.read_text()
    assert [line.run_set for line in read_history(path)] == ["=1+1"]


# --- the object ---------------------------------------------------------------------------------


def test_table_document_drawing_and_fragment():
    report = pf.check(drops_table(TIMES), bench_with(0.002), reference="R", tolerance="1 %")
    (row,) = report.table().to_dict("records")
    assert row["bias_percent"] == pytest.approx(0.2)
    assert json.loads(report.to_json())["checks"][0]["decision"] == report.decision
    assert len(report.plot().axes) == 1
    html = report._repr_html_()
    assert "<svg" in html
    assert "style=" not in html[html.index("<svg") : html.index("</svg>")]
    assert "passed" in html


def test_invalid_data_are_neither_passed_nor_failed(tmp_path, capsys):
    drops = written(tmp_path)
    sheet = (tmp_path / "bench.toml").read_text("utf-8").replace("7.700(3)", "0.900(3)")
    (tmp_path / "bench.toml").write_text(sheet, "utf-8")
    assert main(["check", drops, "--reference", "R"]) == 1
    assert capsys.readouterr().out.startswith("undecided  drops  against R  no bias")
