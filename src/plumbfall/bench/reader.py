"""A bench sheet, from a TOML file or a dict, as records in SI units."""

from __future__ import annotations

import os
from collections.abc import Mapping
from dataclasses import replace
from typing import Any

from plumbfall.bench.read_only import ReadOnly
from plumbfall.bench.records import Bench
from plumbfall.errors import InputError, Problem

__all__ = ["read_bench"]


def read_bench(source: str | os.PathLike[str] | Mapping[str, Any]) -> Bench:
    """Read and check a bench sheet.

    Parameters
    ----------
    source
        Path of a TOML file, or a mapping nested like one. In a mapping, ``None`` stands for a
        key that is not given, lists may be tuples or arrays, and a ``ufloat`` is taken as a
        quantity in its SI unit (without the correlations it may have with others).

    Returns
    -------
    Bench
        Its ``sha256`` is that of the file's bytes, or of a mapping's JSON with sorted keys.

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
    from plumbfall.bench.file import read_file
    from plumbfall.bench.lines import placed
    from plumbfall.bench.plain import digest, plain_tree, written_tree

    if isinstance(source, Mapping):
        bench, problems = _read(plain_tree(source))
        if problems:
            raise InputError(problems)
        tree = written_tree(bench.source, bench.quantities())
        return replace(bench, source=ReadOnly(tree), sha256=digest(tree))
    file = read_file(source)
    path = os.fspath(source)
    try:
        bench, problems = _read(plain_tree(file.tree))
    except InputError as error:
        problems = list(error.problems)
    if problems:
        raise InputError(placed(problems, path=path, text=file.text))
    return replace(bench, path=path, sha256=file.sha256)


def _read(tree: dict[str, Any]) -> tuple[Bench, list[Problem]]:
    """Return the records of a tree, or what is wrong with it (and then whatever was sound)."""
    from pydantic import ValidationError

    from plumbfall.bench.build import bench_from
    from plumbfall.bench.checks import cross_check
    from plumbfall.bench.problems import entries_of, problems_of
    from plumbfall.bench.schema import Sheet

    problems: list[Problem] = []
    sound = tree
    try:
        sheet = Sheet.model_validate(tree)
    except ValidationError as error:
        problems = problems_of(error, Sheet)
        sound = _without(tree, entries_of(error, Sheet))
        sheet = Sheet.model_validate(sound)
    bench = bench_from(sheet, source=tree)
    names = {kind: tuple(found) for kind, found in tree.items() if isinstance(found, dict)}
    return bench, problems + cross_check(sheet, bench, names=names, whole=sound is tree)


def _without(tree: dict[str, Any], entries: set[tuple[str | int, ...]]) -> dict[str, Any]:
    """Return the tree without the named entries, so that the others can still be checked."""
    sound: dict[str, Any] = {}
    for kind, found in tree.items():
        if (kind,) in entries:
            continue
        if isinstance(found, dict):
            sound[kind] = {
                name: item for name, item in found.items() if (kind, name) not in entries
            }
        else:
            sound[kind] = found
    return sound
