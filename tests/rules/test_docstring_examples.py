"""The examples in docstrings give what they say."""

from __future__ import annotations

import doctest
import importlib
import pkgutil

import pytest

import plumbfall

MODULES = sorted(
    module.name
    for module in pkgutil.walk_packages(plumbfall.__path__, "plumbfall.")
    if not module.name.endswith("__main__")
)


@pytest.mark.parametrize("name", MODULES)
def test_examples_give_what_they_say(name):
    result = doctest.testmod(importlib.import_module(name), optionflags=doctest.ELLIPSIS)
    assert result.failed == 0


def test_there_are_examples():
    finder = doctest.DocTestFinder(exclude_empty=True)
    found = sum(
        bool(one.examples)
        for name in MODULES
        if name.startswith("plumbfall.physics.")
        for one in finder.find(importlib.import_module(name))
    )
    assert found > 60
