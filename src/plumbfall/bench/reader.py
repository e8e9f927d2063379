"""A bench sheet, from a TOML file or a dict, as records in SI units."""

from __future__ import annotations

import os
from collections.abc import Mapping
from dataclasses import replace
from types import MappingProxyType
from typing import Any

from plumbfall.bench.records import Bench
from plumbfall.errors import InputError

__all__ = ["read_bench"]


def read_bench(source: str | os.PathLike[str] | Mapping[str, Any]) -> Bench:
    """Read and check a bench sheet.

    Parameters
    ----------
    source
        Path of a TOML file, or a mapping nested like one. In a mapping, ``None`` stands for a
        key that is not given, lists may be tuples or arrays, and a ``ufloat`` is taken as a
        quantity in its SI unit (without the correlations it may have with others).

    Raises
    ------
    InputError
        With every problem of the sheet: file, line, key, what is wrong and what to type.

    Examples
    --------
    >>> bench = read_bench({"tube": {"A": {"bore": "50.00(2) mm", "distance": "200.00(5) mm"}}})
    >>> bench.tubes["A"].bore.value
    0.05
    """
    from pydantic import ValidationError

    from plumbfall.bench.build import bench_from
    from plumbfall.bench.checks import cross_check
    from plumbfall.bench.file import read_file
    from plumbfall.bench.plain import digest, plain_tree, written_tree
    from plumbfall.bench.problems import problems_of
    from plumbfall.bench.schema import Sheet

    if isinstance(source, Mapping):
        tree = plain_tree(source)
        path, sha256 = "", ""
    else:
        found = read_file(source)
        tree, path, sha256 = plain_tree(found.tree), os.fspath(source), found.sha256
    try:
        sheet = Sheet.model_validate(tree)
    except ValidationError as error:
        raise InputError(problems_of(error, Sheet)) from None
    bench = bench_from(sheet, source=tree, path=path, sha256=sha256)
    problems = cross_check(sheet, bench)
    if problems:
        raise InputError(problems)
    source_tree = written_tree(tree, bench.quantities())
    return replace(
        bench,
        source=MappingProxyType(source_tree),
        sha256=sha256 or digest(source_tree),
    )
