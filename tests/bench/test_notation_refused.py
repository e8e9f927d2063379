from __future__ import annotations

import pytest

from plumbfall.bench.notation import read_quantity
from plumbfall.errors import InputError

PM = "certificate: add ', k=2'; tolerance: add ', limits'; standard uncertainty: write '{}'"


@pytest.mark.parametrize(
    ("written", "dimension", "said"),
    [
        # ± without its meaning
        (
            "50.0 ± 0.1 mm",
            "length",
            "'50.0 ± 0.1 mm' does not say what ± means; " + PM.format("50.0(1) mm"),
        ),
        (
            "50 mm +/- 20 um",
            "length",
            "'50 mm +/- 20 um' does not say what ± means; " + PM.format("50.00(2) mm"),
        ),
        (
            "1.2021 Pa.s ± 0.25 %",
            "viscosity",
            "'1.2021 Pa.s ± 0.25 %' does not say what ± means; " + PM.format("1.2021(30) Pa.s"),
        ),
        (
            "0.00 ± 0.03 s",
            "time",
            "'0.00 ± 0.03 s' does not say what ± means; " + PM.format("0.00(3) s"),
        ),
        # two readings possible
        (
            "1.5e-3(2) m",
            "length",
            "'1.5e-3(2) m' can be read in two ways; write the power of ten last, such as "
            "'1.5(2)e-3 m'",
        ),
        (
            "2.0000(5) mm, k=2",
            "length",
            "'2.0000(5) mm, k=2': digits in brackets are a standard uncertainty already; drop "
            "', k=2', or write '2.0000 ± 0.0005 mm, k=2' if they were not",
        ),
        (
            "2,0000(5) mm",
            "length",
            "'2,0000(5) mm' has a comma inside a number; write '2.0000(5) mm' (decimal point, "
            "digits not grouped)",
        ),
        (
            "50,0 ± 0,1 mm, k=2",
            "length",
            "'50,0 ± 0,1 mm, k=2' has a comma inside a number; write '50.0 ± 0.1 mm, k=2' "
            "(decimal point, digits not grouped)",
        ),
        (
            "1,000 kg/m3",
            "density",
            "'1,000 kg/m3' has a comma inside a number; write '1.000 kg/m3' or '1000 kg/m3' "
            "(decimal point, digits not grouped)",
        ),
        (
            "1,234.5 mm",
            "length",
            "'1,234.5 mm' has a comma inside a number; write '1234.5 mm' (decimal point, digits "
            "not grouped)",
        ),
        # units
        (
            "2.0000(5)",
            "length",
            "'2.0000(5)' has no unit; add one; a length is in m, cm, mm, um or in",
        ),
        (2.0, "length", "2.0 has no unit; write it in quotes with its unit, such as '2.0 mm'"),
        (970, "density", "970 has no unit; write it in quotes with its unit, such as '970 kg/m3'"),
        ("25 mm", "density", "'25 mm' is a length; a density is wanted, such as '970.2(2) kg/m3'"),
        (
            "25 degC",
            "length",
            "'25 degC' is a temperature; a length is wanted, such as '50.00(2) mm'",
        ),
        (
            "2.0 nm",
            "length",
            "unknown unit 'nm'; did you mean 'm'? a length is written in m, cm, mm, um or in",
        ),
        (
            "50.0 mm ± 0.1, k=2",
            "length",
            "'50.0 mm ± 0.1, k=2' has no unit after ±; write '50.0 mm ± 0.1 mm, k=2'",
        ),
        (
            "50.0 mm ± 0.1 g, k=2",
            "length",
            "'50.0 mm ± 0.1 g, k=2' is a mass; a length is wanted, such as '50.00(2) mm'",
        ),
        # what follows the quantity
        (
            "50 mm, k=2",
            "length",
            "'50 mm, k=2' says 'k=2' but has no ±; write '50 ± ... mm, k=2'",
        ),
        (
            "2.0 ± 0.1 mm, 95 %",
            "length",
            "'2.0 ± 0.1 mm, 95 %' says '95 %' after the quantity; only ', k=2' (an expanded "
            "uncertainty) or ', limits' (a tolerance) may follow",
        ),
        (
            "2.0 ± 0.1 mm, k=0",
            "length",
            "the coverage factor in '2.0 ± 0.1 mm, k=0' is not above zero; write the k of the "
            "certificate, such as k=2",
        ),
        (
            "2.0 ± -0.1 mm, k=2",
            "length",
            "'2.0 ± -0.1 mm, k=2' has a negative uncertainty; write it without sign",
        ),
        # relative to nothing
        (
            "0 s ± 5 %, k=2",
            "time",
            "'0 s ± 5 %, k=2' has an uncertainty relative to zero; write the uncertainty in s",
        ),
        (
            "25 degC ± 1 %, k=2",
            "temperature",
            "'25 degC ± 1 %, k=2' has an uncertainty relative to a temperature; write the "
            "uncertainty in degC",
        ),
        # no quantity at all
        ("", "length", "'' cannot be read as a length; write '50.00(2) mm'"),
        ("abc", "density", "'abc' cannot be read as a density; write '970.2(2) kg/m3'"),
        ("nan mm", "length", "'nan mm' cannot be read as a length; write '50.00(2) mm'"),
        ("about 5 mm", "length", "'about 5 mm' cannot be read as a length; write '50.00(2) mm'"),
        (
            "1 ± 2 ± 3 mm, k=2",
            "length",
            "'1 ± 2 ± 3 mm, k=2' cannot be read as a length; write '50.00(2) mm'",
        ),
        (True, "length", "true cannot be read as a length; write '50.00(2) mm'"),
        (["5 mm"], "length", "['5 mm'] cannot be read as a length; write '50.00(2) mm'"),
        ("1e400 m", "length", "'1e400 m' is too large or too small; check the power of ten"),
        ("1e-400 m", "length", "'1e-400 m' is too large or too small; check the power of ten"),
        # tables
        (
            {"value": 2.0, "unit": "mm", "U": 0.001},
            "length",
            "{ value = 2.0, unit = 'mm', U = 0.001 } has an expanded uncertainty U without its "
            "coverage factor; add k, such as k = 2, or give the standard uncertainty as u",
        ),
        (
            {"value": 2.0, "unit": "mm", "u": 0.001, "k": 2},
            "length",
            "{ value = 2.0, unit = 'mm', u = 0.001, k = 2 } has k without U; add U",
        ),
        (
            {"value": 2.0, "unit": "mm", "u": 0.1, "within": 0.1},
            "length",
            "{ value = 2.0, unit = 'mm', u = 0.1, within = 0.1 } states its uncertainty more than "
            "once; keep one of u (standard), U with k (expanded) and within (bounds)",
        ),
        (
            {"value": 2.0},
            "length",
            "{ value = 2.0 } has no unit; add unit, one of m, cm, mm, um or in",
        ),
        ({"unit": "mm"}, "length", "{ unit = 'mm' } has no value; add value, or readings"),
        (
            {"value": "2.0", "unit": "mm"},
            "length",
            "value = '2.0' is not a number; write it as a plain number in the unit of the value",
        ),
        (
            {"value": 2.0, "unit": "mm", "u": -0.1},
            "length",
            "u is negative in { value = 2.0, unit = 'mm', u = -0.1 }; write it without sign",
        ),
        (
            {"value": 2.0, "unit": "mm", "u": 0.1, "dof": 0},
            "length",
            "dof = 0 is not above zero; correct it",
        ),
        (
            {"value": 2.0, "unit": "mm", "within": 0.1, "shape": "gaussian"},
            "length",
            "shape = 'gaussian' is not known; use one of rectangular, triangular, arcsine",
        ),
        (
            {"value": 2.0, "unit": "mm", "plusminus": 0.1},
            "length",
            "'plusminus' is not a key of a quantity; known keys are value, unit, u, dof, U, k, "
            "within, shape, readings",
        ),
        (
            {"value": float("inf"), "unit": "mm"},
            "length",
            "value = inf is no finite number; correct it",
        ),
        (
            {"readings": [1.5], "unit": "mm"},
            "length",
            "one reading shows no scatter; give at least two readings, or a value with its "
            "uncertainty u",
        ),
        (
            {"readings": [1.5, 1.6], "unit": "mm", "u": 0.1},
            "length",
            "readings stand together with u; keep readings and unit only; the instrument's own "
            "error belongs in its entry",
        ),
        (
            {"readings": [1.5, "1.6"], "unit": "mm"},
            "length",
            "readings = '1.6' is not a number; write it as a plain number in the unit of the value",
        ),
        (
            {"readings": 1.5, "unit": "mm"},
            "length",
            "readings = 1.5 is not a list; write readings = [1.1, 1.2]",
        ),
    ],
)
def test_what_is_refused_says_what_to_type(written, dimension, said):
    with pytest.raises(InputError) as refused:
        read_quantity(written, dimension)
    assert str(refused.value) == said
    assert refused.value.remedy


@pytest.mark.parametrize(
    "written",
    [
        "1e99999999 m",
        "1" * 5000 + " mm",
        {"value": 10**5000, "unit": "mm"},
        {"value": 1e300, "unit": "mm", "U": 1e300, "k": 1e-300},
        {"readings": [1e300, -1e300], "unit": "mm"},
        " " * 100_000 + "k",
        "2.0" + "(" * 50 + "5" + ")" * 50 + " mm",
    ],
    ids=["power", "digits", "integer", "quotient", "variance", "blanks", "brackets"],
)
def test_absurd_quantities_are_refused_at_once(written):
    with pytest.raises(InputError):
        read_quantity(written, "length")
