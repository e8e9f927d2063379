"""The file of tube constants: what is read from it, and what is refused."""

from __future__ import annotations

import copy
import json
import math

import pytest

import plumbfall as pf
from plumbfall.bench.constant_file import content_hash, read_constants

# As the description of the file has it, without anything that may be added.
PLAIN = {
    "schema": "plumbfall/constants/1",
    "constants": [
        {
            "name": "incl s",
            "tube": "incl",
            "ball": "s",
            "value": 2.9e-6,
            "unit": "m2/s2",
            "standard_uncertainty": 1.5e-8,
            "dof": 12.0,
            "sensitivities": {
                "ball.s.density": {"value": 7700.0, "u": 23.0, "sensitivity": -4.3e-10}
            },
            "domain": {"temperature_K": [293.0, 298.0], "viscosity_Pa_s": [], "time_s": [20, 90]},
            "references": ["R"],
        }
    ],
    "inputs": [],
}


def written(folder, **changes):
    """Write the plain file, with values of its constant changed (None: left out)."""
    document = copy.deepcopy(PLAIN)
    for key, value in changes.items():
        document["constants"][0].pop(key)
        if value is not None:
            document["constants"][0][key] = value
    path = folder / "constant.json"
    path.write_text(json.dumps(document))
    return path


def test_a_file_with_nothing_added_is_read(tmp_path):
    file = read_constants(written(tmp_path))
    (constant,) = file.constants
    assert (constant.value, constant.u) == (2.9e-6, 1.5e-8)
    by_density = 4.3e-10 * 23
    assert constant.own_u == pytest.approx(math.sqrt(1.5e-8**2 - by_density**2), rel=1e-9)
    # Welch and Satterthwaite: u^4/dof of the whole is that of its own part, the only one with any
    assert constant.own_dof == pytest.approx(12 * (constant.own_u / constant.u) ** 4, rel=1e-9)
    assert constant.domain.time == (20.0, 90.0)
    assert constant.domain.viscosity is None
    assert [one.reference for one in constant.certified] == ["R"]
    assert file.edited  # no hash
    assert not constant.scatter  # nothing says that its own part is no certificate's error


def test_the_hash_is_of_what_is_said_not_of_how_it_is_laid_out():
    document = {"b": [1.0, {"x": None}], "a": "ü"}
    again = json.loads(json.dumps(document, indent=4))
    assert content_hash(again) == content_hash({**document, "content_sha256": "other"})
    assert content_hash({**document, "a": "u"}) != content_hash(document)


@pytest.mark.parametrize(
    ("changes", "says"),
    [
        ({"value": -1.0}, "constants[0].value: -1.0 is no number above 0"),
        ({"value": None}, "constants[0].value: is missing"),
        ({"value": "2"}, "constants[0].value: '2' is no number"),
        ({"standard_uncertainty": 1e-9}, "is less than what its sensitivities come to"),
        ({"ball": ""}, "constants[0].ball: is missing"),
        ({"dof": 0}, "constants[0].dof: 0 is no number above 0"),
        ({"domain": {"time_s": ["a"]}}, "constants[0].domain.time_s: ['a'] is no range"),
        (
            {"sensitivities": {"x": {"value": 1.0, "u": -1.0, "sensitivity": 1.0}}},
            'constants[0].sensitivities."x".u: -1.0 is no number of 0 or more',
        ),
        ({"sensitivities": {"x": 3}}, 'constants[0].sensitivities."x": has no value'),
    ],
)
def test_what_no_constant_can_be_is_refused_with_its_place(tmp_path, changes, says):
    with pytest.raises(pf.InputError) as error:
        read_constants(written(tmp_path, **changes))
    assert says in str(error.value)
    assert "constant.json" in str(error.value)


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ("{", "is no JSON"),
        ("[]", "is no file of tube constants"),
        ('{"schema": "plumbfall/report/1"}', "is no file of tube constants"),
        ('{"schema": "plumbfall/constants/1", "constants": [3]}', "constants[0]: is no constant"),
    ],
)
def test_other_files_are_refused(tmp_path, text, says):
    path = tmp_path / "constant.json"
    path.write_text(text)
    with pytest.raises(pf.InputError) as error:
        read_constants(path)
    assert says in str(error.value)


def test_two_constants_of_one_tube_and_ball_are_refused(tmp_path):
    document = {**PLAIN, "constants": PLAIN["constants"] * 2}
    path = tmp_path / "constant.json"
    path.write_text(json.dumps(document))
    with pytest.raises(pf.InputError, match="have a second constant"):
        read_constants(path)
