from __future__ import annotations

from plumbfall.bench import read_bench, unstated_uncertainties


def test_measured_quantities_without_uncertainty_are_listed():
    bench = read_bench(
        {
            "site": {"gravity": "9.81 m/s2"},
            "timer": {"T": {"bias": "0.02 s", "rate": "0(20) ppm", "per_drop": "0.1 s"}},
            "tube": {
                "A": {
                    "bore": "50 mm",
                    "marks": ["0 mm", "100 mm", "200.0(1) mm"],
                    "tilt": "0 deg",
                    "expansion": "3e-6 /K",
                },
                "B": {"bore": "50.0(1) mm", "distance": "100 mm"},
            },
            "material": {"steel": {"density": "7.7 g/cm3"}},
            "ball": {
                "a b": {"diameter": "2 mm", "material": "steel"},
                "c": {"diameter": "2.000(1) mm", "mass": "32 mg"},
            },
            "liquid": {"oil": {"density": "970 kg/m3", "viscosity_slope": "-2 %/K"}},
            "set": {"s": {"temperature": "25 degC"}},
            "reference": {
                "R": {"viscosity": [{"temperature": "20 degC", "value": "1.2 Pa.s"}]},
            },
            "constant": {"K": {"value": "1e-8 m2/s2"}},
        }
    )
    assert sorted(unstated_uncertainties(bench)) == [
        'ball."a b".diameter',
        "ball.c.mass",
        "constant.K.value",
        "liquid.oil.density",
        "liquid.oil.viscosity_slope",
        "material.steel.density",
        "reference.R.viscosity[0].value",
        "set.s.temperature",
        "site.gravity",
        "timer.T.bias",
        "tube.A.bore",
        "tube.A.marks[1]",
        "tube.A.tilt",
        "tube.B.distance",
    ]


def test_an_instrument_with_an_uncertainty_speaks_for_what_it_measured():
    bench = read_bench(
        {
            "gauge": {"G": {"correction": "0.0(5) um"}},
            "balance": {"B": {"correction": "0.00(5) mg"}},
            "thermometer": {"P": {"correction": "0.00(5) K"}},
            "ball": {"A": {"diameter": "2 mm", "gauge": "G", "mass": "32 mg", "balance": "B"}},
            "set": {"s": {"temperature": "25 degC"}},
        }
    )
    assert unstated_uncertainties(bench) == ()


def test_what_was_not_given_is_not_listed():
    bench = read_bench(
        {"timer": {"T": {}}, "gauge": {"G": {}}, "thermometer": {"P": {}}, "balance": {"B": {}}}
    )
    assert unstated_uncertainties(bench) == ()


def test_readings_state_an_uncertainty_even_where_they_agree():
    sheet = {
        "ball": {
            "A": {"diameter": {"readings": [2.0, 2.0], "unit": "mm"}, "density": "7.70(1) g/cm3"}
        }
    }
    assert unstated_uncertainties(read_bench(sheet)) == ()


def test_the_whole_sheet_states_every_uncertainty(whole_sheet_file):
    assert unstated_uncertainties(read_bench(whole_sheet_file)) == ()
