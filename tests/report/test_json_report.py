from __future__ import annotations

import copy
import json
import math
from dataclasses import replace
from importlib import resources

import jsonschema
import pytest

from plumbfall.report import Report
from plumbfall.report.json_report import json_text
from report.invented_report import InventedReduction, hostile_sets, three_sets, valid_set

SCHEMA = json.loads(
    resources.files("plumbfall.report").joinpath("report.schema.json").read_text("utf-8")
)
VALIDATOR = jsonschema.Draft202012Validator(SCHEMA)


@pytest.fixture
def document() -> dict:
    return Report(three_sets()).to_dict()


def test_the_schema_is_a_schema() -> None:
    jsonschema.Draft202012Validator.check_schema(SCHEMA)


@pytest.mark.parametrize("made", [three_sets, hostile_sets])
def test_documents_are_as_the_schema_says(made) -> None:
    VALIDATOR.validate(Report(made()).to_dict())


def test_names_of_the_interface(document: dict) -> None:
    assert document["schema"] == "plumbfall/report/1"
    assert list(document) == [
        "schema", "software", "inputs", "seed", "date", "rows", "run_sets", "correlation",
        "covariance", "temperature_fit", "findings",
    ]  # fmt: skip
    assert {
        "name", "status", "summary", "n_drops", "n_balls", "temperature", "viscosity",
        "viscosity_at_reference", "kinematic_viscosity", "stokes_viscosity", "conformity",
        "reynolds", "diameter_ratio", "shear_rate_1_s", "shear_stress_Pa", "corrections", "budget",
        "linear", "monte_carlo", "balls", "drops", "findings",
    } <= set(document["run_sets"][0])  # fmt: skip
    assert set(document["run_sets"][0]["viscosity"]) == {
        "value", "unit", "standard_uncertainty", "effective_dof", "coverage_probability",
        "coverage_factor", "expanded_uncertainty", "low", "high", "method",
    }  # fmt: skip
    assert document["rows"] == {"read": 19, "used": 17, "void": 1, "excluded": 1}


def test_values_are_si_and_unrounded(document: dict) -> None:
    first = document["run_sets"][0]
    assert first["viscosity"]["value"] == 0.8513
    assert first["viscosity"]["unit"] == "Pa.s"
    assert first["temperature"]["value"] == 298.15
    assert first["drops"][0]["temperature_K"] == pytest.approx(298.16, rel=1e-14)
    assert sum(line["share"] for line in first["budget"]) == pytest.approx(1.0)


def test_what_has_no_value_is_null(document: dict) -> None:
    third = document["run_sets"][2]
    assert third["viscosity"] is None
    assert third["linear"] is None
    assert document["run_sets"][1]["drops"][7]["time_s"] is None
    assert document["run_sets"][0]["budget"][0]["dof"] is None
    assert document["correlation"]["matrix"][2] == [None, None, None]
    assert document["correlation"]["matrix"][0][:2] == [1.0, 0.6]


def test_monte_carlo_has_no_factor_and_is_not_called_linear(document: dict) -> None:
    second = document["run_sets"][1]
    assert second["viscosity"]["method"] == "monte-carlo"
    assert second["viscosity"]["coverage_factor"] is None
    assert second["linear"]["method"] == "linear"
    assert second["monte_carlo"]["histogram"]["counts"][0] == 1


def test_nan_and_infinity_never_reach_the_text() -> None:
    result = replace(valid_set("A"), reynolds=math.nan, shear_rate=math.inf)
    text = json_text(Report(InventedReduction((result,))).to_dict())
    assert "NaN" not in text
    assert "Infinity" not in text
    assert json.loads(text)["run_sets"][0]["reynolds"] is None


def test_the_text_is_ascii_and_comes_back(document: dict) -> None:
    text = json_text(document)
    assert text.isascii()
    assert json.loads(text) == document


def test_numpy_numbers_are_written_as_numbers() -> None:
    import numpy as np

    result = replace(valid_set("A"), reynolds=np.float64(0.036), n_drops=np.int64(8))
    assert json.loads(json_text(Report(InventedReduction((result,))).to_dict()))["run_sets"][0][
        "reynolds"
    ] == pytest.approx(0.036)


@pytest.mark.parametrize(
    ("path", "wrong"),
    [
        (("schema",), "plumbfall/report/2"),
        (("seed",), "0"),
        (("run_sets", 0, "status"), "good"),
        (("run_sets", 0, "viscosity", "value"), None),
        (("run_sets", 0, "viscosity", "method"), "guess"),
        (("run_sets", 0, "viscosity"), None),
        (("run_sets", 0, "budget", 0, "scope"), "day"),
        (("run_sets", 0, "drops", 0, "used"), "yes"),
        (("run_sets", 2, "findings"), []),
        (("inputs", 0, "sha256"), "abc"),
        (("correlation", "matrix", 0, 1), 1.5),
    ],
)
def test_the_schema_refuses(document: dict, path: tuple, wrong: object) -> None:
    changed = copy.deepcopy(document)
    place = changed
    for step in path[:-1]:
        place = place[step]
    place[path[-1]] = wrong
    assert list(VALIDATOR.iter_errors(changed))


def test_the_schema_needs_every_name_and_takes_more(document: dict) -> None:
    for key in list(document["run_sets"][0]["viscosity"]):
        changed = copy.deepcopy(document)
        del changed["run_sets"][0]["viscosity"][key]
        assert list(VALIDATOR.iter_errors(changed)), key
    document["run_sets"][0]["added_later"] = {"any": "thing"}
    VALIDATOR.validate(document)
