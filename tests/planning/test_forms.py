"""Templates: a sheet that reads without errors, a timing file and a form, never over others."""

from __future__ import annotations

import html.parser
import json

import pandas as pd
import pytest

import plumbfall as pf
from plumbfall.cli.program import main
from plumbfall.errors import InputError
from support.benches import bench_dict

NAMES = {"bench.toml", "drops.csv", "recording_form.html"}

SHEET = """
[timer]
T = { kind = "gate" }
[tube.A]
bore = "50.00(2) mm"
marks = ["0 mm", "80.00(5) mm", "200.00(5) mm"]
release_above = "70(2) mm"
[ball]
small = { diameter = "2.0004(5) mm", density = "7.700(3) g/cm3" }
big = { diameter = "6.0004(5) mm", density = "7.700(3) g/cm3" }
[liquid]
oil = { density = "970.2(2) kg/m3", density_temperature = "25 degC" }
"""


class Rows(html.parser.HTMLParser):
    """Counts the rows of the table of drops."""

    def __init__(self) -> None:
        super().__init__()
        self.text: list[str] = []
        self.rows = 0
        self.inside = False

    def handle_starttag(self, tag, attrs):
        if tag == "table":
            self.inside = ("class", "drops") in attrs
        self.rows += tag == "tr" and self.inside

    def handle_data(self, data):
        self.text.append(data)


@pytest.fixture
def sheet(tmp_path):
    path = tmp_path / "bench.toml"
    path.write_text(SHEET, encoding="utf-8")
    return path


def test_the_template_reads_without_errors(tmp_path, capsys):
    folder = tmp_path / "new"
    assert main(["template", str(folder)]) == 0
    assert {path.name for path in folder.iterdir()} == NAMES
    assert main(["inspect", str(folder / "drops.csv"), "--json"]) == 0
    document = json.loads(capsys.readouterr().out)
    assert [p for p in document["problems"] if p["severity"] == "error"] == []
    bench = pf.read_bench(folder / "bench.toml")
    text = (folder / "bench.toml").read_text("utf-8")
    assert text.count("#") > 30  # it is commented
    assert pf.plan(bench, viscosity="850 mPa.s").combinations
    table = pd.read_csv(folder / "drops.csv")
    assert set(table["ball"]) <= set(bench.balls)
    assert table["time [s]"].isna().all()


def test_once_filled_in_it_is_reduced(tmp_path):
    folder = tmp_path / "new"
    main(["template", str(folder)])
    bench = pf.read_bench(folder / "bench.toml")
    table = pd.read_csv(folder / "drops.csv")
    made = pf.simulate(bench, viscosity=0.85, run_set="batch 1", balls="one", drops=len(table))
    for column in ("time [s]", "temperature [degC]"):
        table[column] = made[column]
    table.to_csv(folder / "drops.csv", index=False)
    report = pf.reduce(folder / "drops.csv", draws=0)
    low, high = report["batch 1"].interval
    assert low < 0.85 < high


def test_nothing_is_overwritten(tmp_path, capsys):
    folder = tmp_path / "new"
    main(["template", str(folder)])
    (folder / "drops.csv").write_text("mine", encoding="utf-8")
    assert main(["template", str(folder)]) == 2
    assert "not overwritten" in capsys.readouterr().err
    assert (folder / "drops.csv").read_text("utf-8") == "mine"


def test_a_planned_bench_becomes_forms(sheet, tmp_path):
    folder = tmp_path / "forms"
    arguments = ["template", str(folder), "--bench", str(sheet), "--viscosity", "1 Pa.s",
                 "--target", "0.6 %", "--set", "batch 7"]  # fmt: skip
    assert main(arguments) == 0
    best = pf.plan(sheet, viscosity="1 Pa.s", target="0.6 %").combinations[0]
    table = pd.read_csv(folder / "drops.csv")
    assert set(table["set"]) == {"batch 7"}
    assert set(table["ball"]) == {best.ball}
    assert len(table) == best.drops
    assert [name for name in table if name.startswith("mark")] == [
        "mark 1 [s]", "mark 2 [s]", "mark 3 [s]",
    ]  # fmt: skip
    page = Rows()
    page.feed((folder / "recording_form.html").read_text("utf-8"))
    assert page.rows == best.drops + 1
    text = " ".join(page.text)
    assert "batch 7" in text
    assert f"{best.fall_time:.1f} s" in text
    assert (folder / "bench.toml").read_bytes() == sheet.read_bytes()
    made = pf.simulate(sheet, viscosity=1.0, balls=best.ball, drops=len(table), marks=True)
    for column in [name for name in made if name.startswith(("mark", "temperature"))]:
        table[column] = made[column]
    found = pf.reduce(table.drop(columns="started"), sheet, draws=0)["batch 7"].viscosity
    assert found.nominal_value == pytest.approx(1.0, rel=0.02)


def test_forms_may_go_beside_the_bench_sheet(sheet):
    names = pf.plan(sheet, viscosity=1.0).write_forms(sheet.parent, run_set="B")
    assert set(names) == NAMES - {"bench.toml"}
    assert sheet.read_text("utf-8") == SHEET


def test_forms_of_a_plan_without_a_suitable_ball_are_refused(sheet, tmp_path, capsys):
    folder = tmp_path / "forms"
    assert main(["template", str(folder), "--bench", str(sheet), "--viscosity", "1 mPa.s"]) == 2
    assert "no ball on the bench will do at 1.00 mPa.s" in capsys.readouterr().err
    assert not folder.exists()
    assert main(["template", str(folder), "--bench", str(sheet)]) == 2
    assert "needs both" in capsys.readouterr().err


def test_forms_choose_among_several_liquids(sheet, tmp_path, capsys):
    sheet.write_text(
        SHEET + 'syrup = { density = "1300.0(3) kg/m3" }\n[set]\nS = { liquid = "syrup" }\n',
        encoding="utf-8",
    )
    wanted = ["template", str(tmp_path / "forms"), "--bench", str(sheet), "--viscosity", "1 Pa.s"]
    assert main([*wanted, "--liquid", "syrup", "--set", "T"]) == 0
    assert set(pd.read_csv(tmp_path / "forms" / "drops.csv")["liquid"]) == {"syrup"}
    wanted[1] = str(tmp_path / "more")
    assert main([*wanted, "--set", "S"]) == 0
    wanted[1] = str(tmp_path / "none")
    assert main([*wanted, "--balls", "catalogue", "--set", "S"]) == 2
    assert "not on the bench sheet" in capsys.readouterr().err


def test_files_of_constants_are_copied_with_the_sheet(tmp_path):
    folder = tmp_path / "far" / "away"
    bench = pf.read_bench(bench_dict(constant={"k": {"file": "sub/constant.json"}}))
    assert bench.path == ""  # a dict has no file to copy
    names = pf.plan(bench, viscosity=1.0).write_forms(folder)
    assert set(names) == NAMES - {"bench.toml"}


def test_constants_in_another_folder_are_not_lost(sheet, tmp_path):
    sheet.write_text(SHEET + '[constant]\nk = { file = "sub/constant.json" }\n', encoding="utf-8")
    planned = pf.plan(sheet, viscosity=1.0)
    with pytest.raises(InputError, match="another folder"):
        planned.write_forms(tmp_path / "forms")
