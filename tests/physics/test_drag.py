from __future__ import annotations

import itertools

import numpy as np
import pytest

from physics.formula_book import EXACT_WALL_FACTOR, IN_TUBE_POINTS, UNBOUNDED, half_digit
from plumbfall.errors import InputError, PhysicsRangeError
from plumbfall.physics import DragLaw
from plumbfall.physics.laws import laws_of

RULES = [name for name in laws_of("together") if name != "table"]  # that has tests of its own
EVERY = list(itertools.product(RULES, laws_of("walls"), laws_of("inertia")))
STEP = 1e-5


def grid(law):
    ratio = np.linspace(0.01, law.max_ratio, 25)[:, np.newaxis]
    log_reynolds = np.linspace(-9.0, np.log(law.max_reynolds), 41)
    return np.minimum(ratio, law.max_ratio), log_reynolds


@pytest.mark.parametrize("names", EVERY, ids="-".join)
def test_value_and_slopes_of_every_combination(names):
    law = DragLaw(*names)
    ratio, x = grid(law)
    drag = law.at(ratio)
    log_factor, slope = drag.evaluate(x)
    by_ratio, same_slope = drag.slopes(x)
    formula = law.together_law.function(
        wall_factor=law.wall_law.function(diameter_ratio=ratio),
        inertia_factor=law.inertia_law.function(reynolds=np.exp(x)),
    )
    assert log_factor == pytest.approx(np.log(formula), abs=1e-13)
    assert np.array_equal(slope, same_slope)
    up, down = (drag.evaluate(x + step)[0] for step in (STEP, -STEP))
    assert slope == pytest.approx((up - down) / (2 * STEP), abs=1e-7)
    inner = ratio[:-1]
    up, down = (law.at(inner * np.exp(step)).evaluate(x)[0] for step in (STEP, -STEP))
    assert by_ratio[:-1] == pytest.approx((up - down) / (2 * STEP), abs=1e-7)


# formula book, section 1: s of the unbounded ball by Schiller and Naumann, w of the exact walls
@pytest.mark.parametrize(
    ("reynolds", "printed"), [(0.1, ".021"), (1.0, ".090"), (10.0, ".29"), (100.0, ".54")]
)
def test_slope_by_reynolds_number_as_printed(reynolds, printed):
    drag = DragLaw(together="additive", inertia="schiller-naumann").at(0.0)
    _, slope = drag.evaluate(np.log(reynolds))
    assert slope == pytest.approx(float(printed), abs=half_digit(printed))


@pytest.mark.parametrize(
    ("ratio", "printed"),
    [(0.05, ".117"), (0.1, ".258"), (0.2, ".626"), (0.3, "1.133"), (0.5, "2.79")],
)
def test_slope_by_diameter_ratio_as_printed(ratio, printed):
    by_ratio, _ = DragLaw("screened").at(ratio).slopes(-np.inf)
    assert by_ratio == pytest.approx(float(printed), abs=half_digit(printed))


def test_all_is_finite_where_walls_and_inertia_vanish():
    drag = DragLaw("screened").at(np.array([0.0, 1e-12, 0.1]))
    for x in (-np.inf, -700.0, -300.0, 0.0):
        for values in (*drag.evaluate(x), *drag.slopes(x), drag.relative_bound(x)):
            assert np.all(np.isfinite(values))
    log_factor, slope = DragLaw("screened").at(0.0).evaluate(-np.inf)
    assert (log_factor, slope) == (0.0, 0.0)


def test_the_unbounded_ball_has_the_slope_of_its_inertia():
    x = np.log([0.1, 1.0, 10.0])
    screened = DragLaw("screened").at(0.0).evaluate(x)
    additive = DragLaw(together="additive").at(0.0).evaluate(x)
    assert screened == pytest.approx(np.array(additive), rel=1e-14)


@pytest.mark.parametrize("rule", RULES)
@pytest.mark.parametrize(("ratio", "reynolds", "factor"), IN_TUBE_POINTS)
def test_the_bound_covers_navier_stokes(rule, ratio, reynolds, factor):
    law = DragLaw(together=rule)
    drag = law.at(ratio)
    if reynolds > law.max_reynolds:
        with pytest.raises(PhysicsRangeError):
            drag.check(reynolds)
        return
    with np.errstate(divide="ignore"):
        bound = drag.relative_bound(np.log(reynolds))
    own = drag.factor(reynolds)
    assert abs(own / factor - 1.0) <= bound + 5e-5 / factor + 1e-9


@pytest.mark.parametrize("name", laws_of("walls"))
@pytest.mark.parametrize("ratio", [0.05, 0.1, 0.2])
def test_the_bound_covers_the_error_of_the_walls(name, ratio):
    drag = DragLaw(walls=name).at(ratio)
    bound = drag.relative_bound(-np.inf)
    error = abs(drag.wall / EXACT_WALL_FACTOR[ratio] - 1.0)
    assert error <= bound + 1e-8
    assert bound == pytest.approx(error, abs=1e-8)


@pytest.mark.parametrize("name", laws_of("inertia"))
@pytest.mark.parametrize("reynolds", [0.1, 0.5, 1.0, 5.0, 10.0])
def test_the_bound_covers_the_error_of_the_inertia(name, reynolds):
    law = DragLaw(inertia=name)
    drag = law.at(0.0)
    if reynolds > law.max_reynolds:
        with pytest.raises(PhysicsRangeError):
            drag.check(reynolds)
        return
    error = abs(drag.factor(reynolds) / float(UNBOUNDED[reynolds]) - 1.0)
    assert error <= drag.relative_bound(np.log(reynolds)) + 1e-4


def test_the_bound_of_a_rule_vanishes_at_rest():
    for rule in RULES:
        drag = DragLaw(rule).at(np.array([0.05, 0.1, 0.3]))
        assert np.all(drag.relative_bound(-np.inf) == 0.0)


@pytest.mark.parametrize("names", EVERY[:: len(EVERY) // 20], ids="-".join)
def test_the_bound_covers_how_far_a_law_is_from_the_computed_one(names):
    law = DragLaw(*names)
    ratio = np.linspace(0.001, law.max_ratio, 60)
    x = np.log(np.geomspace(1e-3, law.max_reynolds, 60))[:, np.newaxis]
    drag, computed = law.at(ratio), DragLaw().at(ratio)
    apart = np.abs(np.exp(drag.evaluate(x)[0] - computed.evaluate(x)[0]) - 1.0)
    bound = drag.relative_bound(x)
    assert (apart <= bound + 1e-15).all()
    assert (bound <= apart + 1.6e-4).all()


def test_limits_and_the_laws_that_set_them():
    screened = DragLaw("screened")
    assert (screened.max_reynolds, screened.reynolds_law.name) == (10.0, "screened")
    assert (screened.max_ratio, screened.ratio_law.name) == (0.8, "screened")
    other = DragLaw(together="product", walls="faxen", inertia="oseen")
    assert (other.max_reynolds, other.reynolds_law.name) == (2.0, "oseen")
    assert (other.max_ratio, other.ratio_law.name) == (0.5, "faxen")
    assert DragLaw(together="additive", inertia="brown-lawler").reynolds_law.name == "additive"


def test_binding_beyond_the_ratio_is_refused():
    with pytest.raises(PhysicsRangeError, match=r"diameter ratio 0\.85 is beyond 0\.8"):
        DragLaw("screened").at(np.array([0.1, 0.85]))
    with pytest.raises(PhysicsRangeError, match=r"diameter ratio 0\.3 is beyond 0\.2"):
        DragLaw(walls="ladenburg").at(0.3)


def test_a_reynolds_number_beyond_the_law_is_refused():
    drag = DragLaw("screened").at(0.1)
    drag.check(10.0)
    with pytest.raises(PhysicsRangeError, match=r"Reynolds number 10\.5 is beyond 10"):
        drag.check(np.array([1.0, 10.5]))


@pytest.mark.parametrize(
    ("names", "near"),
    [
        ({"together": "screen"}, "screened"),
        ({"walls": "haberman"}, "haberman-sayre"),
        ({"inertia": "schiller"}, "schiller-naumann"),
    ],
)
def test_an_unknown_law_names_the_nearest(names, near):
    with pytest.raises(InputError, match=f"did you mean '{near}'"):
        DragLaw(**names)


def test_description_and_source_name_the_laws():
    law = DragLaw(together="product", walls="bohlin", inertia="abraham")
    drag = law.at(0.1)
    assert drag.description == law.description == "product rule, walls bohlin, inertia abraham"
    for citation in ("common practice, no source", "Bohlin 1960", "Abraham 1970"):
        assert citation in drag.source


def test_shapes_follow_balls_and_reynolds_numbers():
    assert np.ndim(DragLaw("screened").at(0.1).evaluate(0.0)[0]) == 0
    assert DragLaw("screened").at(0.1).evaluate(np.zeros(4))[0].shape == (4,)
    assert DragLaw("screened").at(np.full(4, 0.1)).slopes(0.0)[0].shape == (4,)
    assert DragLaw("screened").at(np.full((2, 1), 0.1)).evaluate(np.zeros(3))[1].shape == (2, 3)


@pytest.mark.parametrize("names", EVERY, ids="-".join)
def test_the_argument_is_left_as_it_was(names):
    law = DragLaw(*names)
    ratio, x = grid(law)
    before, drag = x.copy(), law.at(ratio)
    walls = drag.wall_excess.copy()
    first = drag.evaluate(x)
    again = drag.evaluate(x)
    assert np.array_equal(x, before)
    assert np.array_equal(drag.wall_excess, walls)
    assert np.array_equal(first, again)


def test_the_default_is_the_computed_table():
    law = DragLaw()
    assert (law.together, law.max_reynolds, law.max_ratio) == ("table", 100.0, 0.8)
    assert law.at(0.1).factor(1.0) == pytest.approx(1.2895, abs=1e-4)  # formula book, section 3b
    assert "table" in law.description


def test_the_table_takes_no_other_law_beside_it():
    with pytest.raises(InputError, match="'table' has walls and inertia in it") as caught:
        DragLaw(together="table", walls="faxen")
    assert "such as 'screened'" in caught.value.remedy


def test_a_law_named_alone_is_joined_by_the_screened_rule():
    assert DragLaw(walls="bohlin").together == "screened"
    assert DragLaw(inertia="oseen").together == "screened"
