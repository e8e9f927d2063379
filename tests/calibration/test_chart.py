"""The control chart of a history: limits, signals, order, exit codes, and what is drawn."""

from __future__ import annotations

import json

import numpy as np
import pytest

import plumbfall as pf
from plumbfall.calibration.control_charts import individuals
from plumbfall.calibration.history_lines import COLUMNS
from plumbfall.cli.program import main
from plumbfall.published.statistics_charts import INDIVIDUALS


def history(path, values, *, days=None, references=None, first="2026-01"):
    """Write a history of biases in percent, a week apart."""
    lines = [",".join(COLUMNS)]
    start = np.datetime64("2026-01-05")
    for n, value in enumerate(values):
        when = start + np.timedelta64(7 * n if days is None else days[n], "D")
        reference = "R" if references is None else references[n]
        lines.append(f"{when}T09:00:00,set {n},{reference},{value},0.1,0.2,passed,25,EK,0.1.0,{n}")
    path.write_text("\n".join(lines) + "\n", "utf-8")
    return path


CALM = np.round(0.1 + 0.05 * np.random.default_rng(2).standard_normal(24), 4).tolist()


def test_limits_are_those_of_the_handbook(tmp_path):
    # NIST/SEMATECH e-Handbook 6.3.2.2 (from memory): 55.8041 and 45.8159, dividing by 1.128
    chart = pf.chart(history(tmp_path / "h.csv", INDIVIDUALS)).result
    assert chart.action == pytest.approx((45.8159, 55.8041), abs=1.7e-3)
    assert chart.warning[1] - chart.centre == pytest.approx((55.8041 - 50.81) * 2 / 3, abs=2e-3)
    assert chart.provisional
    assert not chart.out_of_control


def test_a_bench_in_control_exits_with_0_and_a_jump_with_1(tmp_path, capsys):
    assert main(["chart", str(history(tmp_path / "h.csv", CALM))]) == 0
    assert capsys.readouterr().out.startswith("in control  24 checks, no signal")
    assert main(["chart", str(history(tmp_path / "h.csv", [*CALM, 0.9]))]) == 1
    out, err = capsys.readouterr()
    assert out.startswith("out of control  25 checks, ")
    assert "beyond-action" in out
    assert err == ""
    assert max(map(len, out.splitlines())) <= 110


def test_a_lasting_shift_is_seen_by_the_average(tmp_path):
    shifted = [*CALM, *(value + 0.09 for value in CALM[:10])]
    report = pf.chart(history(tmp_path / "h.csv", shifted), baseline=24)
    signals = {name for point in report.result.points[24:] for name in point.signals}
    assert "average-beyond-limits" in signals
    assert not any(point.signals for point in report.result.points[:24])


def test_limits_of_a_baseline_leave_later_checks_out(tmp_path):
    report = pf.chart(history(tmp_path / "h.csv", [*CALM, 0.9, 0.8]), baseline=24)
    expected = individuals(CALM)
    assert report.result.centre == pytest.approx(expected.centre)
    assert report.result.limits.sd == pytest.approx(expected.sd)


def test_checks_are_put_in_order_of_time(tmp_path):
    days = [0, 14, 7, 21]
    report = pf.chart(history(tmp_path / "h.csv", [0.1, 0.3, 0.2, 0.4], days=days))
    assert [point.value for point in report.result.points] == [0.1, 0.2, 0.3, 0.4]
    drift = report.result.drift
    # 0.1 % a week
    assert drift.slope == pytest.approx(0.1 / 7)
    assert report.result.drift_by == "day"


def test_moments_with_and_without_zones_have_no_order(tmp_path):
    path = history(tmp_path / "h.csv", [0.1, 0.2, 0.3])
    path.write_text(path.read_text().replace("2026-01-12T09:00:00", "2026-01-12T09:00:00+01:00"))
    with pytest.raises(pf.InputError, match="time zone"):
        pf.chart(path)


def test_one_reference_may_be_charted_alone(tmp_path):
    path = history(tmp_path / "h.csv", [0.1, 0.3, 0.2, 0.4, 0.1], references=list("RSRSR"))
    both, alone = pf.chart(path), pf.chart(path, reference="S")
    assert (len(both), len(alone)) == (5, 2)
    assert "charted together (R, S)" in " ".join(both.text().split())
    with pytest.raises(pf.InputError, match="has no check of reference 'T'"):
        pf.chart(path, reference="T")


def test_too_few_checks_make_no_chart(tmp_path, capsys):
    assert main(["chart", str(history(tmp_path / "h.csv", [0.1]))]) == 2
    assert "a chart needs two points or more" in capsys.readouterr().err
    assert main(["chart", str(tmp_path / "none.csv")]) == 2


def test_checks_without_a_bias_are_left_out_and_counted(tmp_path):
    path = history(tmp_path / "h.csv", [0.1, "", 0.3])
    report = pf.chart(path)
    assert (len(report), report.result.left_out) == (2, 1)
    assert "1 check without a bias left out" in report.text()


def test_equal_checks_have_no_limits_to_pass(tmp_path):
    report = pf.chart(history(tmp_path / "h.csv", [0.1] * 5))
    assert not report.out_of_control
    assert report.result.action == pytest.approx((0.1, 0.1))
    assert len(report.text()) > 100


def test_document_and_table(tmp_path, capsys):
    path = history(tmp_path / "h.csv", [*CALM, 0.9])
    assert main(["chart", str(path), "--json"]) == 1
    document = json.loads(capsys.readouterr().out)
    assert document["schema"] == "plumbfall/chart/1"
    assert {"centre", "warning", "action", "points", "ewma"} <= set(document)
    last = document["points"][-1]
    assert (last["value"], last["when"]) == (0.9, "2026-06-22T09:00:00")
    assert "beyond-action" in last["signals"]
    assert len(document["warning"]) == len(document["action"]) == 2
    table = pf.chart(path).table()
    assert table["bias_percent"].tolist()[-1] == 0.9
    assert table["signals"].tolist()[0] == ""


@pytest.mark.parametrize("name", ["chart.png", "chart.svg", "chart.csv", "chart.json"])
def test_files_are_written_whole_and_the_same_each_time(tmp_path, name, capsys):
    path = history(tmp_path / "h.csv", CALM)
    written = []
    for _ in range(2):
        assert main(["chart", str(path), "--out", str(tmp_path / name)]) == 0
        written.append((tmp_path / name).read_bytes())
    assert written[0] == written[1]
    assert len(written[0]) > 500
    starts = {"png": b"\x89PNG", "svg": b"<?xml", "csv": b"when,", "json": b"{"}
    assert written[0].startswith(starts[name.split(".")[1]])


def test_other_endings_are_refused_and_nothing_is_printed(tmp_path, capsys):
    path = history(tmp_path / "h.csv", CALM)
    assert main(["chart", str(path), "--out", str(tmp_path / "chart.bmp")]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert "end the name in .png, .svg, .csv, .json" in err


def test_drawing_and_fragment(tmp_path):
    report = pf.chart(history(tmp_path / "h.csv", [*CALM, 0.9]))
    assert len(report.plot().axes) == 2
    html = report._repr_html_()
    assert "beyond the action limits" in html
    assert "<svg" in html


def test_few_benches_in_control_are_called_out_of_control(tmp_path):
    # by simulation, what docs/calibration.md says: of charts of 20 checks some one in seven
    from plumbfall.calibration.chart import control_chart
    from plumbfall.calibration.history_lines import HistoryLine

    random = np.random.default_rng(11)
    found = 0
    for values in random.standard_normal((300, 20)):
        lines = [
            HistoryLine(
                when=f"2026-01-{n + 1:02d}", run_set="A", reference="R", bias_percent=float(value),
                u_percent=None, e_n=None, decision="passed", temperature_degC=25.0, operator="",
                version="", input_sha256="",
            )
            for n, value in enumerate(values)
        ]  # fmt: skip
        found += control_chart(lines).out_of_control
    assert 0.07 < found / 300 < 0.22
