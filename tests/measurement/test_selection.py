"""Which equipment a drop was made with, and what is refused where it cannot be known."""

from __future__ import annotations

import pandas as pd
import pytest

import plumbfall as pf
from support.benches import bench_dict, drops_table

TIMES = {"B1": [14.91, 14.93]}
SECOND = {
    "tube": {"bore": "75.00(2) mm", "distance": "200.00(5) mm"},
    "liquid": {"density": "900(1) kg/m3"},
    "timer": {"kind": "stopwatch"},
    "thermometer": {"correction": "0.0(2) K"},
}


@pytest.mark.parametrize("kind", SECOND)
def test_of_several_one_must_be_named(kind):
    bench = bench_dict(**{f"{kind}__second": SECOND[kind]})
    with pytest.raises(pf.InputError, match=f"does not say which {kind} was used") as error:
        pf.reduce(drops_table(TIMES), bench)
    assert f"add a '{kind}' column" in error.value.remedy


@pytest.mark.parametrize("kind", SECOND)
def test_the_run_set_or_the_row_names_it(kind):
    bench = bench_dict(**{f"{kind}__second": SECOND[kind]})
    first = next(iter(bench[kind]))
    table = drops_table(TIMES)
    by_row = pf.reduce(table.assign(**{kind: first}), bench)["A"].interval
    by_set = pf.reduce(table, {**bench, "set": {"A": {kind: first}}})["A"].interval
    alone = pf.reduce(table, bench_dict())["A"].interval
    assert by_row == by_set == alone


def test_a_row_overrides_its_run_set():
    bench = bench_dict(tube__second=SECOND["tube"], set={"A": {"tube": "second"}})
    table = drops_table(TIMES).assign(tube=["A", ""])
    drops = pf.reduce(table, bench)["A"].result.drops
    assert drops[0].wall > drops[1].wall  # the second drop fell in the wider tube


def test_nothing_described_is_said():
    bench = {key: value for key, value in bench_dict().items() if key != "liquid"}
    with pytest.raises(pf.InputError, match="no liquid is described"):
        pf.reduce(drops_table(TIMES), bench)


def test_run_sets_keep_the_order_of_the_file():
    table = pd.concat([drops_table(TIMES, run_set=name) for name in ("z", "a", "m")])
    assert pf.reduce(table, bench_dict()).names == ("z", "a", "m")


def test_a_run_set_in_two_liquids_is_refused_with_its_line():
    bench = bench_dict(liquid__second=SECOND["liquid"])
    table = drops_table(TIMES).assign(liquid=["oil", "second"])
    with pytest.raises(pf.InputError, match="drops in liquid 'oil' and, from here, in 'sec") as e:
        pf.reduce(table, bench)
    assert e.value.line == 2
    assert "a run set of their own" in e.value.remedy
    apart = pf.reduce(table.assign(set=["A", "B"]), bench)
    assert apart.names == ("A", "B")


def test_laws_that_cannot_be_joined_are_refused_with_the_sheet(tmp_path):
    sheet = tmp_path / "bench.toml"
    sheet.write_text(
        '[tube.A]\nbore = "50.00(2) mm"\ndistance = "200.00(5) mm"\n'
        '[ball.B1]\ndiameter = "2.0000(5) mm"\ndensity = "7.700(3) g/cm3"\n'
        '[liquid.oil]\ndensity = "970.2(2) kg/m3"\n[methods]\ndrag = "table oseen"\n'
    )
    with pytest.raises(pf.InputError) as error:
        pf.reduce(drops_table(TIMES), sheet)
    assert (error.value.path, error.value.key) == (str(sheet), "methods.drag")
