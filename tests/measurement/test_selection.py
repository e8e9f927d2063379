"""Which equipment a drop was made with, and what is refused where it cannot be known."""

from __future__ import annotations

import pandas as pd
import pytest
from support.benches import bench_dict, drops_table

import plumbfall as pf

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
