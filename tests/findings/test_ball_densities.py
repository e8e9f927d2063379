"""Ball densities against what balls are made of: published ranges, and what the sheet says."""

from __future__ import annotations

import pytest

import plumbfall as pf
from plumbfall.findings.ball_materials import material_named
from support.benches import bench_dict, drops_table

CODE = "density-implausible"


def found(ball, **changes):
    table = drops_table({"X": [9.01, 9.02, 9.03]})
    if "name" in ball:
        name = ball.pop("name")
        table["ball"] = name
    else:
        name = "X"
    result = pf.reduce(table, bench_dict(ball={name: ball}, **changes), draws=0)["A"].result
    return [one for one in result.findings if one.code == CODE], result


@pytest.mark.parametrize(
    ("name", "density"),
    [
        # EN 10088-1: 7700 and 8000; data sheets; ISO 3585: 2230; 3900 to 3990 for ruby (METROLOGY)
        ("steel 440C", 7700),
        ("AISI 420", 7750),
        ("316 steel", 8000),
        ("52100", 7810),
        ("borosilicate 3.3", 2230),
        ("soda-lime glass", 2500),
        ("ruby", 3985),
        ("ruby", 3900),
        ("tungsten carbide 6 Co", 14900),
        ("silicon nitride", 3200),
        ("PTFE", 2160),
        ("PMMA", 1180),
        ("polyamide 66", 1140),
    ],
)
def test_published_densities_lie_within_the_range_of_their_name(name, density):
    material = material_named(name)
    assert material.low <= density <= material.high


def test_a_number_alone_is_no_alloy():
    assert material_named("304") is None
    assert material_named("ball 420") is None


def test_steel_that_is_too_light_is_warned_of_with_what_it_costs():
    ball = {"name": "steel 3", "diameter": "3.0002(2) mm", "density": "7.070(3) g/cm3"}
    (one,), result = found(ball)
    assert one.severity == "warning"
    assert result.status == "valid-with-warnings"
    assert one.effect == pytest.approx((7600 - 7070) / (7070 - 970.2), rel=1e-3)
    assert "has a density of 7.07 g/cm3, but steel has 7.6 to 8.06 g/cm3" in one.message


def test_a_weighed_ball_of_no_known_material_is_warned_of():
    """A 3 mm ball of 108.85 mg is steel of 7.70; read as 3.10 mm it would be 6.98 g/cm3."""
    (one,), _ = found({"diameter": "3.1002(2) mm", "mass": "108.85(1) mg"})
    assert "no usual ball has it; the nearest is" in one.message
    assert "of diameter, would explain it" in one.remedy
    assert found({"diameter": "3.0002(2) mm", "mass": "108.85(1) mg"})[0] == []


def test_the_name_of_the_material_entry_counts_too():
    ball = {"diameter": "3.0002(2) mm", "material": "glass"}
    material = {"glass": {"density": "3.90(1) g/cm3"}}
    assert "glass has 2.18 to 2.7" in found(ball, material=material)[0][0].message
    assert found(ball, material={"glass": {"density": "2.51(1) g/cm3"}})[0] == []


def test_its_own_uncertainty_is_allowed_for():
    ball = {"name": "steel 3", "diameter": "3.0002(2) mm", "density": "7.55(5) g/cm3"}
    assert found(ball)[0] == []


def test_beyond_every_ball_it_stays_an_error():
    (one,), result = found({"name": "steel 3", "diameter": "6.0 mm", "density": "21.0(1) g/cm3"})
    assert one.severity == "error"
    assert result.status == "invalid"


@pytest.mark.parametrize(
    ("material", "density"), [("steel", 7.70), ("borosilicate", 2.23), ("PMMA", 1.185)]
)
def test_a_radius_is_told_for_light_balls_too(material, density):
    """Weighed balls of published densities, the diameter halved: 8 times the density."""
    mass = density * 1e-3 * 3.14159265 / 6 * 4.0002**3 * 1e3  # mg for mm
    table = drops_table({"X": [30.01, 30.02, 30.03]})
    ball = {"diameter": "2.0001(2) mm", "mass": f"{mass:.3f}(10) mg"}
    result = pf.reduce(table, bench_dict(ball={"X": ball}), draws=0)["A"].result
    (one,) = (f for f in result.findings if f.code == "radius-as-diameter-suspected")
    assert f"with twice the diameter it would be {density:.2f}" in one.message
    assert CODE not in {f.code for f in result.findings}
    assert result.status == "invalid"
