from __future__ import annotations

import copy

import pytest

from plumbfall.bench import read_bench
from plumbfall.errors import InputError

TUBE = {"bore": "50.00(2) mm", "distance": "200.00(5) mm"}
BALL = {"diameter": "2.0000(5) mm", "density": "7.700(3) g/cm3"}
OIL = {"density": "970.2(2) kg/m3"}
GOOD = {"tube": {"A": TUBE}, "ball": {"A": BALL}, "liquid": {"oil": OIL}}


def refusal(changes):
    """Return what is said of a good sheet after changes: key path -> value, None removes."""
    sheet = copy.deepcopy(GOOD)
    for path, value in changes.items():
        *tables, key = path.split("/")
        place = sheet
        for table in tables:
            place = place.setdefault(table, {})
        if value is None:
            del place[key]
        else:
            place[key] = value
    with pytest.raises(InputError) as refused:
        read_bench(sheet)
    assert all(problem.remedy for problem in refused.value.problems)
    return str(refused.value)


SCHEMA = [
    # quantities at their keys
    (
        {"tube/A/bore": "50.0 ± 0.1 mm"},
        "tube.A.bore: '50.0 ± 0.1 mm' does not say what ± means; certificate: add ', k=2'; "
        "tolerance: add ', limits'; standard uncertainty: write '50.0(1) mm'",
    ),
    (
        {"tube/A/bore": 50.0},
        "tube.A.bore: 50.0 has no unit; write it in quotes with its unit, such as '50.0 mm'",
    ),
    (
        {"liquid/oil/density": "25 mm"},
        "liquid.oil.density: '25 mm' is a length; a density is wanted, such as '970.2(2) kg/m3'",
    ),
    (
        {"tube/A/bore": "0 mm"},
        "tube.A.bore: '0 mm' is not above zero; check sign and value",
    ),
    (
        {"ball/A/diameter": "-2 mm"},
        "ball.A.diameter: '-2 mm' is not above zero; check sign and value",
    ),
    (
        {"ball/A/diameter": "2(5) mm"},
        "ball.A.diameter: '2(5) mm' has a standard uncertainty as large as itself; digits in "
        "brackets count in the last digits: 2.0000(5) is 2.0000 with 0.0005",
    ),
    (
        {"liquid/oil/density": "0.97 kg/m3"},
        "liquid.oil.density: '0.97 kg/m3' is 0.00097 g/cm3, outside 0.5 to 25 g/cm3; check the "
        "value, its sign and its unit",
    ),
    (
        {"ball/A/density": "7700 g/cm3"},
        "ball.A.density: '7700 g/cm3' is 7700 g/cm3, outside 0.5 to 25 g/cm3; check the value, "
        "its sign and its unit",
    ),
    (
        {"ball/A/expansion": "10.4 /K"},
        "ball.A.expansion: '10.4 /K' is 10.4 /K, outside -0.0001 to 0.001 /K; check the value, "
        "its sign and its unit",
    ),
    (
        {"liquid/oil/viscosity_slope": "-2.0 /K"},
        "liquid.oil.viscosity_slope: '-2.0 /K' is -200 %/K, outside -100 to 100 %/K; check the "
        "value, its sign and its unit",
    ),
    (
        {"site": {"gravity": "981 m/s2"}},
        "site.gravity: '981 m/s2' is 981 m/s2, outside 9.7 to 9.9 m/s2; check the value, its sign "
        "and its unit",
    ),
    (
        {"set/s/temperature": "25.0(1) K"},
        "set.s.temperature: '25.0(1) K' is -248.15 degC, outside -100 to 400 degC; check the "
        "value, its sign and its unit",
    ),
    (
        {"tube/A/tilt": "95 deg"},
        "tube.A.tilt: '95 deg' is 95 deg, outside -89.9 to 89.9 deg; check the value, its sign "
        "and its unit",
    ),
    (
        {"timer": {"T": {"per_drop": "0.10(2) s"}}},
        "timer.T.per_drop: '0.10(2) s' has an uncertainty, which is not taken here; give the "
        "value alone: it is a standard deviation itself",
    ),
    (
        {"liquid/oil/density_temperature": "25.0(1) degC"},
        "liquid.oil.density_temperature: '25.0(1) degC' has an uncertainty, which is not taken "
        "here; give the value alone: its error belongs in the uncertainty of what holds at it",
    ),
    # keys
    ({"tube/A/boer": "50 mm"}, "tube.A.boer: unknown key 'boer'; did you mean 'bore'?"),
    (
        {"liquid/oil/temp": "25 degC"},
        "liquid.oil.temp: unknown key 'temp'; did you mean 'density_temperature'?",
    ),
    (
        {"site": {"colour": "blue"}},
        "site.colour: unknown key 'colour'; known are gravity, latitude, elevation",
    ),
    ({"set/s/temp": "25 degC"}, "set.s.temp: unknown key 'temp'; did you mean 'temperature'?"),
    ({"tubes": {"A": TUBE}}, "tubes: unknown table 'tubes'; did you mean 'tube'?"),
    ({"ball/A/diameter": None}, "ball.A.diameter: is missing; add diameter"),
    ({"scatter": {"relative": "0.3 %"}}, "scatter.dof: is missing; add dof"),
    # tables
    (
        {"liquid": OIL},
        "liquid.density: '970.2(2) kg/m3' stands where the name of an entry is wanted; every "
        "liquid has a name: head its table [liquid.oil] instead of [liquid]",
    ),
    ({"ball": "A"}, "ball: is not a table; write [ball.A] and its keys below it"),
    ({"site": "here"}, "site: is not a table; write [site] and its keys below it"),
    (
        {"liquid/oil/specification": "950 mPa.s"},
        "liquid.oil.specification: is not a table; write { KEY = ..., KEY = ... }",
    ),
    (
        {"tube/A": {"bore": "5 cm", "marks": "0 mm"}},
        "tube.A.marks: is not a list; write marks = [..., ...]",
    ),
    # words
    (
        {"timer": {"T": {"kind": "stopwach"}}},
        "timer.T.kind: 'stopwach' is not known; did you mean 'stopwatch'? known are stopwatch, "
        "gate, video",
    ),
    (
        {"methods": {"drag": "screend"}},
        "methods.drag: 'screend' is no drag law; did you mean 'screened'? known are together: "
        "table, screened, additive, product; walls: exact, ladenburg, faxen, francis, "
        "haberman-sayre, bohlin; inertia: compact, stokes, oseen, schiller-naumann, "
        "clift-grace-weber, brown-lawler, abraham",
    ),
    (
        {"methods": {"drag": "faxen bohlin"}},
        "methods.drag: 'faxen' and 'bohlin' are both laws for walls; keep one of them",
    ),
    (
        {"methods": {"slope": "arrhenius"}},
        "methods.slope: 'arrhenius' is not known; known are andrade, vogel",
    ),
    (
        {"bench": {"coverage": 95}},
        "bench.coverage: 95 is outside 0.5 to 0.9999; write a probability between 0.5 and 0.9999, "
        "such as 0.95",
    ),
    (
        {"bench": {"coverage": "95 %"}},
        "bench.coverage: '95 %' is not a plain number; write a probability between 0.5 and "
        "0.9999, such as 0.95",
    ),
    (
        {"bench": {"viscosity_unit": "cSt"}},
        "bench.viscosity_unit: 'cSt' is a kinematic viscosity; a viscosity is wanted, such as "
        "'950 mPa.s'",
    ),
    ({"ball/A/lot": "yes"}, "ball.A.lot: 'yes' is neither true nor false; write true or false"),
    (
        {"tube/A/calibrated": "02.03.2026"},
        "tube.A.calibrated: '02.03.2026' is not a date; write it as 2026-03-02",
    ),
    (
        {"set": {"s": {"filled": "2026-03-02"}}},
        "set.s.filled: '2026-03-02' is not a date with its time of day; write it as "
        "2026-03-02T08:10:00",
    ),
    (
        {"tube/A/identity": 1.5},
        "tube.A.identity: 1.5 is not text; write it in quotes",
    ),
    (
        {"timings": {"columns": {"Fall time": "tiem"}}},
        "timings.columns: 'tiem', declared for the heading 'Fall time', is no column; did you "
        "mean 'time'?",
    ),
    (
        {"timings": {"units": {"time": "sx"}}},
        "timings.units: 'sx', declared for the column 'time', is no unit; write such as s, min, "
        "mm:ss or degC",
    ),
    (
        {"timings": {"encoding": "cp9"}},
        'timings.encoding: \'cp9\' is not an encoding; write such as "utf-8" or "cp1252"',
    ),
    (
        {"timings": {"header_row": 0}},
        "timings.header_row: 0 is not a whole number above zero; write the line of the headings, "
        "counted from 1",
    ),
    (
        {"limits": {"exclude_outliers": 1}},
        "limits: 1 is neither true nor false; write true or false",
    ),
    (
        {"limits": {"exclude_outlier": True}},
        "limits: unknown limit 'exclude_outlier'; did you mean 'exclude_outliers'?",
    ),
    (
        {"limits": {"too_few_drops": "five"}},
        "limits: 'five' is not a plain number; write too_few_drops as a plain number",
    ),
]

CROSS = [
    # names
    ({"set/s/tube": "AA"}, "set.s.tube: there is no tube 'AA'; did you mean 'A'?"),
    (
        {"set/s/timer": "T1"},
        "set.s.timer: there is no timer 'T1'; add [timer.T1]",
    ),
    (
        {
            "ball/A/density": None,
            "ball/A/material": "stel",
            "material": {"steel": {"density": "7.7 g/cm3"}},
        },
        "ball.A.material: there is no material 'stel'; did you mean 'steel'?",
    ),
    (
        {"set/batch 118/liquid": "water"},
        "set.\"batch 118\".liquid: there is no liquid 'water'; add [liquid.water]; known are oil",
    ),
    (
        {"reference": {"R": {"law": "water", "liquid": "oli"}}},
        "reference.R.liquid: there is no liquid 'oli'; did you mean 'oil'?",
    ),
    ({"tube/": TUBE}, 'tube."": an entry has an empty name; give it a name'),
    # balls
    (
        {"ball/A/mass": "32 mg"},
        "ball.A: both density and mass are given; keep one of them",
    ),
    (
        {"ball/A/density": None},
        "ball.A: nothing says how heavy it is; add density, material or mass",
    ),
    (
        {"ball/A/weighed_together": 20},
        "ball.A.weighed_together: stands without mass; add mass, or drop weighed_together",
    ),
    (
        {"ball/A/spread": "0.5 um"},
        "ball.A.spread: a single ball has no spread from ball to ball; add lot = true, or drop "
        "spread",
    ),
    (
        {"ball/A/diameter": "60 mm"},
        "ball.A.diameter: ball 'A' of '60 mm' does not fit tube 'A' with a bore of '50.00(2) mm'; "
        "check both diameters and their units",
    ),
    (
        {
            "tube/N": {"bore": "8.00(1) mm", "distance": "100.0(1) mm"},
            "ball/B": {"diameter": "10.00(1) mm", "density": "2.5 g/cm3"},
            "set/s": {"tube": "N", "ball": "B"},
        },
        "ball.B.diameter: ball 'B' of '10.00(1) mm' does not fit tube 'N' with a bore of "
        "'8.00(1) mm'; check both diameters and their units",
    ),
    # tubes
    ({"tube/A/bore": None}, 'tube.A.bore: is missing; add bore, such as "50.00(2) mm"'),
    (
        {"tube/A/distance": None},
        'tube.A: a vertical tube has no marks; add distance = "200.00(5) mm", or marks = ["0 mm", '
        '"200.00(5) mm"]',
    ),
    (
        {"tube/A/marks": ["0 mm", "200 mm"]},
        "tube.A: both marks and distance are given; keep one of them",
    ),
    (
        {"tube/A": {"bore": "50 mm", "marks": ["0 mm", "200 mm", "100 mm"]}},
        "tube.A.marks[2]: '100 mm' is not below the mark before it, '200 mm'; give distances down "
        "from the first mark, in order",
    ),
    (
        {"tube/A": {"bore": "50 mm", "marks": ["0 mm"]}},
        "tube.A.marks: one mark gives no distance; give two marks or more",
    ),
    (
        {"tube/A/release_above": "90(2) mm", "tube/A/surface_above": "80(2) mm"},
        "tube.A.release_above: '90(2) mm' above the first mark is above the liquid surface "
        "('80(2) mm'); a ball is let go below the surface",
    ),
    (
        {"tube/A/release_offset": "30(1) mm"},
        "tube.A.release_offset: '30(1) mm' from the axis is outside the bore ('50.00(2) mm'); "
        "give the distance from the axis",
    ),
    (
        {"tube/C": {"kind": "calibrated"}},
        'tube.C: a calibrated tube has no constant; add constant = "NAME" with [constant.NAME], '
        'or tube = "C" to one (a file that calibrate has yet to write need not be there)',
    ),
    (
        {"tube/A/constant": "K", "constant": {"K": {"value": "1e-8 m2/s2"}}},
        'tube.A.constant: a vertical tube takes no constant; add kind = "calibrated", or drop '
        "constant",
    ),
    # the rest
    (
        {"site": {"gravity": "9.81 m/s2", "latitude": "52 deg"}},
        "site: both gravity and latitude are given; keep gravity if it was measured",
    ),
    (
        {"site": {"elevation": "40 m"}},
        "site: elevation stands without latitude; add latitude",
    ),
    (
        {"reference": {"R": {"liquid": "oil"}}},
        "reference.R: has no viscosity; add viscosity = [ { ... } ], or law",
    ),
    (
        {"constant": {"K": {"tube": "A"}}},
        "constant.K: has neither value nor file; add value, or file",
    ),
    (
        {
            "tube/C": {"kind": "calibrated", "constant": ["K", "L"]},
            "constant": {"K": {"value": "1e-8 m2/s2", "ball": "A"}, "L": {"value": "2e-8 m2/s2"}},
        },
        "tube.C.constant: several constants of this tube are for the same ball or for any ball; "
        "name a ball of its own in each [constant.NAME]",
    ),
    (
        {
            "tube/C": {"kind": "calibrated", "constant": "K"},
            "constant": {"K": {"value": "1e-8 m2/s2", "tube": "A"}},
        },
        "tube.C.constant: constant 'K' is that of tube 'A'; name a constant of this tube",
    ),
    (
        {
            "liquid/oil/specification": {
                "low": "1050 mPa.s",
                "high": "950 mPa.s",
                "temperature": "25 degC",
            }
        },
        "liquid.oil.specification: low '1050 mPa.s' is not below high '950 mPa.s'; exchange them",
    ),
    (
        {"liquid/oil/specification": {"temperature": "25 degC"}},
        "liquid.oil.specification: has no limit; add low, high or both",
    ),
]


def test_the_sheet_these_tests_spoil_is_good():
    assert read_bench(GOOD).tubes["A"].bore.value == 0.05


@pytest.mark.parametrize(("changes", "said"), SCHEMA)
def test_a_key_that_is_wrong(changes, said):
    assert refusal(changes) == said


@pytest.mark.parametrize(("changes", "said"), CROSS)
def test_entries_that_do_not_agree(changes, said):
    assert refusal(changes) == said


def test_everything_wrong_is_said_at_once():
    said = refusal(
        {
            "tube/A/bore": "50.0 ± 0.1 mm",
            "tube/A/boer": 3,
            "ball/A/mass": "32 mg",
            "set/s/tube": "a",
            "set/s/ball": "ball",
            "bench": {"coverage": 95},
        }
    ).split("\n")
    assert [line.split(":")[0] for line in said] == [
        "bench.coverage",
        "tube.A.bore",
        "tube.A.boer",
        "set.s.tube",
        "set.s.ball",
        "ball.A",
    ]


def test_a_refused_entry_is_still_known_by_name():
    said = refusal({"tube/A/bore": "50 kg", "set/s/tube": "A"})
    assert "there is no tube" not in said
    assert "is missing" not in said


def test_a_refused_constant_raises_no_second_complaint():
    said = refusal(
        {"tube/C": {"kind": "calibrated"}, "constant": {"K": {"value": "1 m", "tube": "C"}}}
    )
    assert said.count("\n") == 0


def test_a_key_twice_in_a_dict():
    with pytest.raises(InputError, match=r"^ball\.1: is given twice; keep one of the two$"):
        read_bench({"ball": {1: BALL, "1": BALL}})
