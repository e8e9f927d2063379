from __future__ import annotations

import pytest

from plumbfall.errors import InputError
from plumbfall.physics import law, laws_of
from plumbfall.physics.laws import DEFAULTS, KINDS

# the names that a bench sheet may choose; more may be added
CHOICES = {
    "walls": "exact ladenburg faxen francis haberman-sayre bohlin",
    "inertia": "stokes oseen schiller-naumann clift-grace-weber brown-lawler abraham",
    "together": "table screened additive product",
    "ends": "table none classical",
    "run-in": "table",
}


@pytest.mark.parametrize("kind", KINDS)
def test_the_promised_names_may_be_chosen(kind):
    assert set(CHOICES[kind].split()) <= set(laws_of(kind))


@pytest.mark.parametrize("kind", KINDS)
def test_each_kind_has_a_default_among_its_laws(kind):
    assert DEFAULTS[kind] in laws_of(kind)


@pytest.mark.parametrize("kind", KINDS)
def test_each_law_says_what_it_is(kind):
    for name, entry in laws_of(kind).items():
        assert (entry.name, entry.kind) == (name, kind)
        assert law(kind, name) is entry
        assert entry.low < entry.high
        assert entry.error
        assert entry.citation
        assert callable(entry.function)


def test_an_unknown_kind_names_the_nearest():
    with pytest.raises(InputError, match="did you mean 'walls'"):
        laws_of("wall")


def test_an_unknown_law_lists_what_there_is():
    with pytest.raises(InputError, match="known: table, screened, additive, product") as caught:
        law("together", "zzz")
    assert caught.value.key == "methods.together"


def test_the_registry_cannot_be_changed_by_its_readers():
    with pytest.raises(TypeError):
        laws_of("walls")["mine"] = law("walls", "exact")  # type: ignore[index]
