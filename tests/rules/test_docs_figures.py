"""Figures in the documents are those of the code, and the code's are those in print."""

from __future__ import annotations

import math
import re

import numpy as np
import pytest

import plumbfall as pf
from plumbfall.physics.drag import DragLaw
from plumbfall.physics.exact import off_axis_coefficient
from plumbfall.physics.laws import laws_of
from plumbfall.uncertainty.coverage import coverage_factor
from support.documents import TEXTS, number, table_headed


def test_coverage_factors_of_few_values():
    # JCGM 100:2008, table G.2, 95 %: 12.71 4.30 3.18 2.78 2.36 2.26 2.09 1.96
    values, factors = table_headed("uncertainty.md", "| values |")
    printed = [12.71, 4.30, 3.18, 2.78, 2.36, 2.26, 2.09, 1.960]
    assert [float(factor) for factor in factors[1:]] == pytest.approx(printed, abs=0.005)
    dof = np.array([math.inf if n == "∞" else int(n) - 1 for n in values[1:]])
    assert coverage_factor(dof=dof, probability=0.95) == pytest.approx(printed, abs=0.005)


def test_wall_factors_and_off_axis_coefficients_are_those_of_the_code():
    ratios, factors = table_headed("physics.md", "| λ | 0.01")
    for ratio, factor in zip(ratios[1:], factors[1:], strict=True):
        computed = pf.physics.wall_factor(diameter_ratio=float(ratio))
        assert computed == pytest.approx(float(factor), rel=6e-7)
    offsets, coefficients = table_headed("physics.md", "| β |")
    for offset, coefficient in zip(offsets[1:], coefficients[1:], strict=True):
        computed, _ = off_axis_coefficient(float(offset))
        assert computed == pytest.approx(float(coefficient), abs=1.1e-5)


def test_range_of_the_default_law_is_that_of_the_code():
    ranges = re.findall(r"\(([\d.]+) with the defaults", TEXTS["physics.md"])
    assert [float(value) for value in ranges] == [DragLaw().max_ratio, DragLaw().max_reynolds]


@pytest.mark.parametrize(
    ("head", "kind", "argument", "best", "allowed"),
    [
        ("λ = 0.05", "walls", "diameter_ratio", "exact", 0.0),
        ("Re = 0.1", "inertia", "reynolds", "compact", 0.16),
    ],
)
def test_errors_of_the_classical_laws_are_those_of_the_code(head, kind, argument, best, allowed):
    first, *rows = table_headed("physics.md", f"| law | {head} |")
    points = [float(cell.split("=")[-1]) for cell in first[1:]]
    laws = laws_of(kind)
    for row in rows:
        law = laws[re.findall(r"`([^`]+)`", row[0])[0]]
        for point, cell in zip(points, row[1:], strict=True):
            if cell:
                ratio = law.function(**{argument: point}) / laws[best].function(**{argument: point})
                step = 10.0 ** -len(cell.partition(".")[2])  # one unit of the last digit printed
                assert 100 * (ratio - 1) == pytest.approx(number(cell), abs=step + allowed), row[0]


def test_errors_of_the_combining_rules_follow_from_the_printed_drag_factors():
    _, *rows = table_headed("physics.md", "| λ, Re |")
    first, *grid = table_headed("physics.md", "| λ | Re = 0 |")
    numbers = [float(cell.split("=")[-1]) for cell in first[1:]]
    truth = {
        (float(row[0]), reynolds): float(cell)
        for row in grid
        for reynolds, cell in zip(numbers, row[1:], strict=True)
    }
    compared = 0
    for point, *cells in rows:
        ratio, reynolds = (float(part) for part in point.split(","))
        if (ratio, reynolds) not in truth:
            continue
        wall = pf.physics.wall_factor(diameter_ratio=ratio)
        inertia = pf.physics.inertia_factor(reynolds=reynolds)
        rules = [laws_of("together")[name].function for name in ("screened", "additive", "product")]
        factors = [rule(wall_factor=wall, inertia_factor=inertia) for rule in rules] + [wall]
        for factor, cell in zip(factors, cells, strict=True):
            error = 100 * (factor / truth[ratio, reynolds] - 1)
            # whole percents are printed without decimals; phi of the law is within 0.1 %
            assert error == pytest.approx(number(cell), abs=0.6 if "." not in cell else 0.16)
            compared += 1
    assert compared == 20


def test_end_excess_is_that_of_the_code():
    head, *rows = table_headed("physics.md", "| h/R |")
    for distance, *cells in rows:
        for name, cell in zip(head[1:], cells, strict=True):
            ratio = float(name.split("=")[-1])
            printed = re.fullmatch(r"(\S+) \((\S+)\)", cell)
            for end, text in zip(("bottom", "surface"), printed.groups(), strict=True):
                computed = pf.physics.end_excess(
                    diameter_ratio=ratio, distance=float(distance), end=end
                )
                assert computed == pytest.approx(float(text), rel=0.05), (distance, ratio, end)
