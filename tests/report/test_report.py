from __future__ import annotations

import json
import math
import warnings
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from plumbfall.errors import InputError
from plumbfall.report import Report, RunSetView
from report.invented_report import InventedReduction, measured, three_sets, valid_set


@pytest.fixture
def report() -> Report:
    return Report(three_sets())


def test_it_is_a_collection_of_run_sets(report: Report) -> None:
    assert len(report) == 3
    assert report.names == ("batch 118", "batch 119", "batch 120")
    assert [view.name for view in report] == list(report.names)
    assert isinstance(report["batch 118"], RunSetView)
    assert report["batch 118"] is report["batch 118"]
    assert "batch 119" in report
    assert "batch 9" not in report
    assert 3 not in report


def test_a_run_set_tells_its_result(report: Report) -> None:
    view = report["batch 118"]
    assert view.status == "valid"
    assert view.summary.startswith("valid  batch 118  851.3 ± 4.2 mPa.s")
    assert view.result.summary == view.summary
    low, high = view.interval
    assert low < view.viscosity.nominal_value < high
    assert view.findings == ()


def test_an_unknown_name_is_refused_with_the_nearest(report: Report) -> None:
    with pytest.raises(InputError, match="no run set named 'batch118'; did you mean 'batch 118'"):
        report["batch118"]
    with pytest.raises(KeyError, match="the run sets are: batch 118, batch 119, batch 120"):
        report["zzz"]


def test_viscosities_carry_the_correlation_of_the_sets(report: Report) -> None:
    first, second = report["batch 118"].viscosity, report["batch 119"].viscosity
    assert first.nominal_value == pytest.approx(0.8513, rel=1e-12)
    assert first.std_dev == pytest.approx(0.8513 * 0.00247, rel=1e-9)
    # u of a ratio with correlation r (JCGM 100, 5.2.2): relative variances less 2 r u1 u2
    u1, u2 = first.std_dev / first.nominal_value, second.std_dev / second.nominal_value
    expected = math.sqrt(u1**2 + u2**2 - 2 * 0.6 * u1 * u2)
    ratio = first / second
    assert ratio.std_dev / ratio.nominal_value == pytest.approx(expected, rel=1e-9)


def test_a_set_without_value_is_not_a_number(report: Report) -> None:
    assert math.isnan(report["batch 120"].viscosity.nominal_value)
    assert all(math.isnan(bound) for bound in report["batch 120"].interval)


def test_a_report_of_sets_without_value_has_none(report: Report) -> None:
    alone = Report(InventedReduction((report["batch 120"].result,)))
    assert math.isnan(alone["batch 120"].viscosity.nominal_value)


def test_exact_and_fully_correlated_sets_warn_of_nothing() -> None:
    sets = tuple(
        replace(valid_set(name), viscosity=measured(0.85, u))
        for name, u in (("A", 0.0), ("B", 0.1))
    )
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        exact = Report(InventedReduction(sets))["A"].viscosity
        same = Report(InventedReduction((valid_set("A"), valid_set("B")), correlated=1.0))
        assert exact.std_dev == 0.0
        assert (same["A"].viscosity / same["B"].viscosity).std_dev == pytest.approx(0.0, abs=1e-9)


def test_sets_of_very_different_size_keep_their_uncertainties() -> None:
    # 1e6 in viscosity is 1e12 in variance: a decomposition of covariances would lose the smaller.
    sets = (valid_set("thin", 1e-3), valid_set("thick", 1e3))
    report = Report(InventedReduction(sets))
    assert report["thin"].viscosity.std_dev == pytest.approx(0.00247e-3, rel=1e-9)


def test_tables_are_numeric_and_named(report: Report) -> None:
    table = report.table()
    assert list(table["set"]) == list(report.names)
    assert table["viscosity_mPa_s"].dtype == np.float64
    assert math.isnan(table["viscosity_mPa_s"].iloc[2])
    table.loc[0, "viscosity_mPa_s"] = 0.0
    assert report.table()["viscosity_mPa_s"].iloc[0] == pytest.approx(851.3)


def test_the_budget_adds_up(report: Report) -> None:
    budget = report["batch 118"].budget()
    assert list(budget)[:3] == ["input", "value", "unit"]
    assert budget["share"].sum() == pytest.approx(1.0)
    total = math.sqrt((budget["contribution"] ** 2).sum())
    assert total == pytest.approx(report["batch 118"].viscosity.std_dev, rel=1e-9)


def test_drops_of_a_set_hold_those_not_used_too(report: Report) -> None:
    drops = report["batch 119"].drops()
    assert len(drops) == 8
    assert drops["viscosity_mPa_s"].isna().sum() == 2
    assert list(drops["status"].iloc[6:]) == ["void", "excluded"]
    assert drops["temperature_degC"].iloc[0] == pytest.approx(25.01)


def test_a_folder_is_written_whole(report: Report, tmp_path: Path) -> None:
    report.write(tmp_path / "out" / "here")
    written = sorted(path.name for path in (tmp_path / "out" / "here").iterdir())
    assert written == ["drops.csv", "report.html", "report.json", "run_sets.csv"]
    assert json.loads((tmp_path / "out/here/report.json").read_text("utf-8")) == report.to_dict()


def test_the_same_report_gives_the_same_bytes(tmp_path: Path) -> None:
    for folder in ("one", "two"):
        Report(three_sets()).write(tmp_path / folder)
    for path in (tmp_path / "one").iterdir():
        assert path.read_bytes() == (tmp_path / "two" / path.name).read_bytes(), path.name


def test_single_files_are_written_where_asked(report: Report, tmp_path: Path) -> None:
    report.to_json(tmp_path / "r.json")
    report.to_html(tmp_path / "r.html")
    report.to_csv(tmp_path)
    assert (tmp_path / "r.html").read_text("utf-8").startswith("<!DOCTYPE html>")
    assert (tmp_path / "r.json").read_text("ascii").startswith("{")
    assert (tmp_path / "run_sets.csv").exists()
    assert (tmp_path / "drops.csv").exists()


def test_notebooks_get_a_fragment(report: Report) -> None:
    shown = report._repr_html_()
    assert "851.3 ± 4.2 mPa·s" in shown
    assert "<html" not in shown
    assert "<svg" in report["batch 118"]._repr_html_()
    assert "batch 118" in repr(report)
    assert repr(report["batch 120"]).startswith("<run set: invalid")
    assert report._ipython_key_completions_() == list(report.names)


def test_a_run_set_is_built_only_when_looked_at() -> None:
    class Lazy(InventedReduction):
        def run_set(self, name: str):
            asked.append(name)
            return super().run_set(name)

    asked: list[str] = []
    report = Report(Lazy(three_sets().sets))
    report.table()
    _ = report["batch 119"].viscosity
    assert asked == ["batch 119"]
