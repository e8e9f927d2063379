"""Every public function of physics: its docstring says what the template asks for, and is true."""

from __future__ import annotations

import importlib
import inspect
import pkgutil
import re
from pathlib import Path

import pytest

from plumbfall import physics
from plumbfall.physics.laws import KINDS, laws_of
from plumbfall.quantities import DIMENSIONS, QUANTITIES

SECTIONS = (
    "Parameters",
    "Returns",
    "Raises",
    "Valid range",
    "Notes",
    "References",
    "Examples",
)
OPTIONAL = {"Raises"}
DERIVED_UNITS = {"m3", "N", "s/m", "m/s2/rad", "1/s2"}
REFERENCES = Path(__file__).parents[2] / "docs" / "references.md"
# machinery of the inverse and look-ups of tables, not formulas: the equation stands in the module
SUPPORT = {
    "drag",
    "drag_map",
    "drag_surface",
    "exact",
    "exact_ends",
    "laws",
    "measured_errors",
    "numeric",
    "path",
    "piecewise",
    "ranges",
    "slopes",
    "tables",
    "terminal",
}
MODULES = sorted(module.name for module in pkgutil.iter_modules(physics.__path__))


def formulas():
    for module_name in MODULES:
        if module_name in SUPPORT:
            continue
        module = importlib.import_module(f"plumbfall.physics.{module_name}")
        for name in module.__all__:
            member = getattr(module, name)
            if inspect.isfunction(member):
                yield pytest.param(member, id=f"{module_name}.{name}")


EVERY = list(formulas())


def sections_of(function):
    """Sections of a docstring by heading, in order, the summary under an empty heading."""
    lines = inspect.getdoc(function).splitlines()
    sections, heading = {"": []}, ""
    for line, below in zip(lines, [*lines[1:], ""], strict=True):
        if re.fullmatch(r"-{3,}", below) and len(below) == len(line):
            heading = line
            sections[heading] = []
        elif not re.fullmatch(r"-{3,}", line):
            sections[heading].append(line)
    return {name: "\n".join(text).strip() for name, text in sections.items()}


def described(text):
    """Name, type and unit of each entry of a Parameters section."""
    return re.findall(r"(?m)^(\w+) : (.+?)(?: \[([^\]]+)\])?$", text)


def test_there_are_formulas_to_check():
    assert len(EVERY) > 40


@pytest.mark.parametrize("function", EVERY)
def test_sections_stand_in_their_order(function):
    headings = [name for name in sections_of(function) if name]
    expected = [name for name in SECTIONS if name in headings or name not in OPTIONAL]
    assert headings == expected
    assert all(sections_of(function).values())


@pytest.mark.parametrize("function", EVERY)
def test_an_equation_is_given(function):
    assert ".. math::" in sections_of(function)[""]


@pytest.mark.parametrize("function", EVERY)
def test_parameters_are_those_of_the_signature(function):
    names = [name for name, _, _ in described(sections_of(function)["Parameters"])]
    parameters = inspect.signature(function).parameters
    assert names == list(parameters)
    assert all(one.kind is inspect.Parameter.KEYWORD_ONLY for one in parameters.values())


@pytest.mark.parametrize("function", EVERY)
def test_units_are_si_and_those_of_the_table_of_quantities(function):
    units = {dimension.unit for dimension in DIMENSIONS.values()} | DERIVED_UNITS
    parts = sections_of(function)
    for name, kind, unit in described(parts["Parameters"]):
        if kind == "str":
            continue
        assert unit in units, name
        quantity = QUANTITIES.get(name.replace("_", " "))
        if quantity is not None:
            assert unit == quantity.unit
    first_line = parts["Returns"].splitlines()[0]
    assert re.search(r"\[(.+)\]$", first_line).group(1) in units


@pytest.mark.parametrize("function", EVERY)
def test_the_source_is_in_the_list_of_references(function):
    known = set(re.findall(r"(?m)^\| \[(\w+(?:-\w+)?)\] \|", REFERENCES.read_text("utf-8")))
    keys = re.findall(r"\[([\w-]+)\]", sections_of(function)["References"])
    assert keys
    assert set(keys) <= known


@pytest.mark.parametrize("function", EVERY)
def test_what_is_raised_is_said(function):
    raises = "PhysicsRangeError" in inspect.getsource(function).split('"""')[-1] or any(
        word in inspect.getsource(function).split('"""')[-1]
        for word in ("check_range(", ".check(", "_sine_squared(")
    )
    assert raises == ("Raises" in sections_of(function))


@pytest.mark.parametrize("function", EVERY)
def test_an_example_is_there_to_be_run(function):
    assert ">>>" in sections_of(function)["Examples"]


@pytest.mark.parametrize("kind", KINDS)
def test_the_source_of_each_law_is_that_of_its_formula(kind):
    for law in laws_of(kind).values():
        assert f"[{law.source_key}]" in sections_of(law.function)["References"]


def test_every_reference_is_listed_once_and_in_order():
    keys = re.findall(r"(?m)^\| \[([\w-]+)\] \|", REFERENCES.read_text("utf-8"))
    assert keys == sorted(keys, key=str.casefold)
    assert len(keys) == len(set(keys))


@pytest.mark.parametrize("module_name", sorted(SUPPORT & set(MODULES)))
def test_supporting_functions_have_a_docstring(module_name):
    module = importlib.import_module(f"plumbfall.physics.{module_name}")
    for name in module.__all__:
        member = getattr(module, name)
        if inspect.isfunction(member) or inspect.isclass(member):
            assert inspect.getdoc(member)


def test_every_public_name_is_loaded_on_demand():
    for name in physics.__all__:
        member = getattr(physics, name)
        assert member is not None
    assert set(physics.__all__) <= set(dir(physics))
    with pytest.raises(AttributeError, match="no attribute 'nonsense'"):
        _ = physics.nonsense
