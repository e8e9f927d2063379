from __future__ import annotations

import copy
import datetime as dt
import hashlib
import json
import math
import subprocess
import sys

import numpy as np
import pytest
from uncertainties import ufloat

from plumbfall.bench import read_bench
from plumbfall.errors import InputError


def test_the_whole_sheet_reads_into_si(whole_sheet_file):
    bench = read_bench(whole_sheet_file)
    found = {name: (item.value, item.u) for name, item in bench.quantities().items()}
    sqrt3 = math.sqrt(3)
    by_hand = {
        "site.gravity": (9.8123, 1e-4),
        "timer.T1.per_drop": (0.10, 0.0),
        "timer.T1.bias": (0.0, 0.03),
        "timer.T1.rate": (0.0, 20e-6),
        "timer.T1.resolution": (0.01, 0.0),
        "thermometer.P.correction": (0.0, 0.05),
        "thermometer.P.per_reading": (0.01, 0.0),
        "gauge.G.correction": (0.0, 0.5e-6),
        "balance.B.correction": (0.0, 0.05e-6),
        "tube.A.bore": (0.05, 2e-5),
        "tube.A.marks[0]": (0.0, 0.0),
        "tube.A.marks[1]": (0.2, 5e-5),
        "tube.A.surface_above": (0.08, 2e-3),
        "tube.A.bottom_below": (0.08, 2e-3),
        "tube.A.release_above": (0.07, 2e-3),
        "tube.A.release_offset": (0.0, 5e-4),
        "tube.A.tilt": (0.0, 0.3 * math.pi / 180),
        "tube.A.expansion": (3.3e-6, 0.0),
        "tube.D.bore": (0.025, 1e-5),
        "tube.D.marks[0]": (0.0, 0.0),
        "tube.D.distance": (0.1, 0.1e-3 / sqrt3),  # s = 0.1 mm, n = 3
        "material.steel.density": (7700.0, 3.0),
        "material.steel.expansion": (10.4e-6, 0.0),
        'ball."2 mm".diameter': (2e-3, 5e-7),
        'ball."2 mm".spread': (0.5e-6, 0.0),
        "ball.M.diameter": (2e-3, 5e-7),
        "ball.M.mass": (645.0e-6, 0.1e-6),
        "ball.own.diameter": (3e-3, 1e-6),
        "ball.own.density": (2500.0, 5.0),
        "ball.own.expansion": (9e-6, 0.0),
        "liquid.oil.density": (970.2, 0.2),
        "liquid.oil.expansion": (9.2e-4, 0.0),
        "liquid.oil.viscosity_slope": (-0.02, 2e-3),
        "liquid.oil.specification.low": (0.95, 0.0),
        "liquid.oil.specification.high": (1.05, 0.0),
        'set."batch 118".temperature': (298.15, 0.05),
        "scatter.relative": (3e-3, 0.0),
        "reference.R.viscosity[0].value": (1.2021, 1.5e-3),
        "constant.KC.value": (0.0123e-6, 0.5e-10),  # 1 mPa.s.cm3/(g.s) = 1e-6 m2/s2
        "methods.model_uncertainty": (5e-4, 0.0),
    }
    assert set(found) == set(by_hand)
    for name, (value, u) in by_hand.items():
        assert found[name] == (pytest.approx(value, rel=1e-14), pytest.approx(u, rel=1e-12)), name


def test_the_whole_sheet_keeps_its_words(whole_sheet_file):
    bench = read_bench(whole_sheet_file)
    assert bench.path == str(whole_sheet_file)
    assert bench.sha256 == hashlib.sha256(whole_sheet_file.read_bytes()).hexdigest()
    assert (bench.title, bench.coverage, bench.viscosity_unit) == ("Invented oil", 0.95, "mPa.s")
    assert bench.reference_temperature == 298.15
    assert bench.laboratory == {"name": "An invented laboratory", "place": "Nowhere"}
    assert bench.report["issued"] == "2026-03-02"
    assert bench.sample["received"] == "2026-03-01"
    tube = bench.tubes["A"]
    assert (tube.kind, tube.surface, tube.measured_at) == ("vertical", "free", 293.15)
    assert tube.identity.calibrated == dt.date(2026, 1, 1)
    assert (tube.identity.certificate, tube.identity.note) == ("C-17", "glass")
    assert bench.tubes["C"].constant == ("KC", "KD")
    assert bench.balls["M"].weighed_together == 20
    assert bench.balls["own"].measured_at == 296.15
    assert bench.liquids["oil"].density_temperature == 298.15
    assert bench.liquids["oil"].specification.temperature == 298.15
    run_set = bench.sets["batch 118"]
    assert (run_set.tube, run_set.liquid, run_set.ball) == ("A", "oil", "2 mm")
    assert run_set.filled == dt.datetime(2026, 3, 2, 8, 10)
    assert bench.scatter.dof == 24
    assert bench.references["R"].expires == dt.date(2027, 5, 31)
    assert bench.references["R"].points[0].temperature == 293.15
    assert bench.references["R"].correlation == 1.0
    assert bench.references["water"].law == "water"
    assert bench.constants["KD"].file == "constant.json"
    hints = bench.timings
    assert (hints.columns, hints.units) == ({"Fall time": "time"}, {"time": "s"})
    assert (hints.delimiter, hints.decimal, hints.encoding) == (";", ",", "cp1252")
    assert (hints.header_row, hints.sheet) == (6, "S")
    assert (bench.methods.drag, bench.methods.slope) == ("screened", "andrade")
    assert bench.limits == {"exclude_outliers": False}


def test_a_dict_reads_as_its_file_does(whole_sheet_file, whole_sheet):
    from_file, from_dict = read_bench(whole_sheet_file), read_bench(whole_sheet)
    assert from_dict.quantities() == from_file.quantities()
    assert from_dict.source == from_file.source
    assert from_dict.path == ""
    assert read_bench(from_dict.source).sha256 == from_dict.sha256


def test_the_hash_of_a_dict_follows_its_content(whole_sheet):
    before = read_bench(whole_sheet).sha256
    assert before == read_bench(dict(reversed(whole_sheet.items()))).sha256
    whole_sheet["tube"]["A"]["bore"] = "50.00(3) mm"
    assert read_bench(whole_sheet).sha256 != before


def test_a_material_is_one_random_variable_for_all_its_balls():
    bench = read_bench(
        {
            "material": {"steel": {"density": "7.700(3) g/cm3", "expansion": "10.4e-6 /K"}},
            "ball": {
                "A": {"diameter": "2.000(1) mm", "material": "steel"},
                "B": {"diameter": "3.000(1) mm", "material": "steel", "expansion": "11e-6 /K"},
            },
        }
    )
    assert bench.balls["A"].density is bench.balls["B"].density
    assert bench.balls["A"].density.name == "material.steel.density"
    assert bench.balls["A"].expansion.name == "material.steel.expansion"
    assert bench.balls["B"].expansion.name == "ball.B.expansion"


def test_a_distance_is_the_second_of_two_marks():
    tube = read_bench({"tube": {"A": {"bore": "5 cm", "distance": "200.00(5) mm"}}}).tubes["A"]
    assert [mark.name for mark in tube.marks] == ["tube.A.marks[0]", "tube.A.distance"]
    assert [mark.value for mark in tube.marks] == [0.0, 0.2]
    assert tube.marks[0].exact


def test_marks_keep_the_figures_of_the_scale():
    marks = ["100.0(1) mm", "200.0(1) mm", "300.0(1) mm"]
    tube = read_bench({"tube": {"A": {"bore": "5 cm", "marks": marks}}}).tubes["A"]
    assert [(mark.name, mark.value) for mark in tube.marks] == [
        ("tube.A.marks[0]", 0.1),
        ("tube.A.marks[1]", 0.2),
        ("tube.A.marks[2]", 0.3),
    ]


def test_lengths_hold_at_20_degC_unless_said():
    # ISO 1:2022: standard reference temperature of geometrical specifications
    tube = {"bore": "5 cm", "distance": "20 cm"}
    sheet = {
        "tube": {"A": tube | {"expansion": "3.3e-6 /K"}, "B": tube},
        "ball": {"A": {"diameter": "2 mm", "density": "7.7 g/cm3"}},
    }
    bench = read_bench(sheet)
    assert (bench.tubes["A"].measured_at, bench.tubes["B"].measured_at) == (293.15, None)
    assert bench.balls["A"].measured_at == 293.15


def test_a_name_that_is_no_bare_key_is_quoted_in_the_path():
    sheet = {"set": {'a "b".c': {"temperature": "25.0(1) degC"}}}
    assert list(read_bench(sheet).quantities()) == ['set."a \\"b\\".c".temperature']


def test_python_values_stand_for_toml_ones():
    bench = read_bench(
        {
            "tube": {
                "A": {
                    "bore": ufloat(0.05, 2e-5),
                    "marks": ("0 mm", "200 mm"),
                    "tilt": None,
                    "calibrated": "2026-01-01",
                }
            },
            "ball": {
                1: {
                    "diameter": {"readings": np.array([2.0, 2.2]), "unit": "mm"},
                    "density": {"value": np.float64(7.7), "unit": "g/cm3"},
                    "weighed_together": None,
                }
            },
            "set": {"s": {"filled": "2026-03-02T08:10", "ball": 1}},
            "bench": {"coverage": np.float64(0.9)},
        }
    )
    assert (bench.tubes["A"].bore.value, bench.tubes["A"].bore.u) == (0.05, 2e-5)
    assert bench.tubes["A"].identity.calibrated == dt.date(2026, 1, 1)
    assert bench.balls["1"].diameter.u == pytest.approx(1e-4)
    assert bench.sets["s"].filled == dt.datetime(2026, 3, 2, 8, 10)
    assert bench.source["tube"]["A"]["bore"] == {"value": 0.05, "unit": "m", "u": 2e-5}
    plain = dict(bench.source)
    assert json.loads(json.dumps(plain)) == plain
    again = read_bench(plain)
    for name, found in bench.quantities().items():
        assert (again.quantities()[name].value, again.quantities()[name].u) == (
            found.value,
            found.u,
        )


@pytest.mark.parametrize(
    "text",
    [
        b'\xef\xbb\xbf[tube.A]\nbore = "5 cm"\ndistance = "20 cm"\n',  # byte order mark
        b'[tube.A]\r\nbore = "5 cm"\r\ndistance = "20 cm"\r\n',
        b'tube.A = { bore = "5 cm", distance = "20 cm" }',
    ],
    ids=["bom", "crlf", "inline"],
)
def test_the_same_sheet_in_other_dress(write_sheet, text):
    assert read_bench(write_sheet(text)).tubes["A"].bore.value == 0.05


def test_light_balls_and_near_limits_are_left_to_the_reduction():
    # a nylon ball in glycerol rises: a finding of the reduction, not an error of the sheet
    read_bench(
        {
            "ball": {"nylon": {"diameter": "3 mm", "density": "1.14 g/cm3"}},
            "liquid": {"glycerol": {"density": "1.261 g/cm3"}},
        }
    )


@pytest.mark.parametrize(
    "sheet",
    [
        {"ball": {"o": {"diameter": "2 mm", "density": "22.59 g/cm3"}}},  # osmium
        {"ball": {"f": {"diameter": "5 mm", "density": "0.6 g/cm3"}}},  # syntactic foam
        {"liquid": {"p": {"density": "626 kg/m3"}}},  # pentane
        {"liquid": {"m": {"density": "13.534 g/cm3", "expansion": "1.8e-4 /K"}}},  # mercury
        {"liquid": {"w": {"density": "999.9 kg/m3", "expansion": "-6e-5 /K"}}},  # water at 0 degC
        {"liquid": {"g": {"density": "1.26 g/cm3", "viscosity_slope": "-9(1) %/K"}}},
        {"ball": {"p": {"diameter": "3 mm", "density": "2.2 g/cm3", "expansion": "119e-6 /K"}}},
        {"site": {"gravity": "9.780 m/s2"}},  # equator
        {"site": {"gravity": "9.832 m/s2"}},  # pole
        {"site": {"latitude": "-90 deg", "elevation": "-400 m"}},
        {"set": {"cold": {"temperature": "-60.0(1) degC"}}},
        {"set": {"hot": {"temperature": "390(1) degC"}}},
        {
            "tube": {"i": {"kind": "calibrated", "constant": "K", "tilt": "10.0(1) deg"}},
            "constant": {"K": {"value": "1.1e-8 m2/s2"}},
        },
        {"tube": {"t": {"bore": "8 mm", "distance": "5 cm", "surface_above": "5(5) mm"}}},
        {"ball": {"m": {"diameter": "2 mm", "mass": "32.25(1) mg"}}},
        {"timer": {"t": {"per_drop": "0 s", "bias": "-0.03(2) s"}}},
    ],
)
def test_honest_extremes_are_read(sheet):
    read_bench(sheet)


def test_reading_records_loads_neither_schema_nor_units():
    code = (
        "import sys, plumbfall.bench.records; "
        "print([name for name in ('pydantic', 'pint', 'numpy') if name in sys.modules])"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"


def test_a_thousand_run_sets_do_not_slow_the_reader():
    sets = {f"set {n}": {"tube": "A", "temperature": "25.00(5) degC"} for n in range(1000)}
    sheet = {"tube": {"A": {"bore": "5 cm", "distance": "20 cm"}}, "set": sets}
    assert len(read_bench(sheet).sets) == 1000


def places(node, path=()):
    """Yield the path of every table, list and value."""
    if path:
        yield path
    if isinstance(node, dict | list):
        for key in node if isinstance(node, dict) else range(len(node)):
            yield from places(node[key], (*path, key))


JUNK = [
    *(0, -1, 1e308, math.nan, math.inf, 10**400, True, "", " ", "0 mm", "1 kg", "ä\ud800", b"x"),
    *([], [[]], ["A"], {}, {"": {}}, {"A": {}}, {"value": 1}, {"value": 1, "unit": "mm"}),
    *(dt.date(2026, 1, 1), dt.time(3), object(), ufloat(1.0, 0.1), ufloat(math.nan, 1.0)),
]


def test_junk_anywhere_is_read_or_refused_as_bad_input(whole_sheet):
    refused = 0
    for n, place in enumerate(places(whole_sheet)):
        for junk in JUNK[n % 8 :: 8]:
            sheet = copy.deepcopy(whole_sheet)
            *tables, key = place
            node = sheet
            for table in tables:
                node = node[table]
            node[key] = junk
            try:
                read_bench(sheet)
            except InputError:
                refused += 1
    assert refused > 300
