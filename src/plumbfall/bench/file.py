"""A bench sheet's file as a tree of plain values, with what is wrong with it as a file."""

from __future__ import annotations

import hashlib
import os
import re
from pathlib import Path
from typing import Any, NamedTuple

from plumbfall.errors import InputError

__all__ = ["SheetFile", "read_file"]

_LARGEST = 16_000_000
_PLACE = re.compile(r"\s*\(at (?:line (\d+), column (\d+)|end of document)\)")


class SheetFile(NamedTuple):
    """What a file holds, its text, and the hash of its bytes."""

    tree: dict[str, Any]
    text: str
    sha256: str


def read_file(source: str | os.PathLike[str]) -> SheetFile:
    """Read and parse a bench sheet.

    Raises
    ------
    InputError
        With file and, where the text is no TOML, line, column and remedy.
    """
    path = os.fspath(source)
    data = _bytes_of(path)
    text = _text_of(data, path)
    return SheetFile(_parse(text, path), text, hashlib.sha256(data).hexdigest())


def _bytes_of(path: str) -> bytes:
    if "\n" in path:
        raise InputError(
            "the bench sheet was given as text, not as the name of a file",
            remedy="give the path, or the parsed sheet as a dict",
        )
    file = Path(path)
    try:
        if file.is_dir():
            inside = file / "bench.toml"
            remedy = f"give {inside}" if inside.is_file() else "give the bench sheet inside it"
            raise InputError("is a folder, not a bench sheet", path=path, remedy=remedy)
        if not file.exists():
            raise InputError(
                "no such file",
                path=path,
                remedy="check the folder and the name",
            )
        if not file.is_file():
            raise InputError("is not a regular file", path=path, remedy="give a bench sheet")
        if file.stat().st_size > _LARGEST:
            raise InputError(
                f"is larger than {_LARGEST // 1_000_000} MB",
                path=path,
                remedy="is this the bench sheet, not a timing file?",
            )
        return file.read_bytes()
    except (OSError, ValueError) as problem:
        if isinstance(problem, InputError):
            raise
        reason = getattr(problem, "strerror", None) or str(problem)
        raise InputError(
            f"cannot be read: {reason}", path=path, remedy="check the path and who may read it"
        ) from None


def _text_of(data: bytes, path: str) -> str:
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        raise InputError("is written in UTF-16", path=path, remedy="save it as UTF-8")
    if data.startswith(b"PK\x03\x04"):
        raise InputError(
            "is a workbook or archive, not a bench sheet", path=path, remedy="give a TOML file"
        )
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError as problem:
        line = data.count(b"\n", 0, problem.start) + 1
        column = problem.start - data.rfind(b"\n", 0, problem.start)
        raise InputError(
            f"byte 0x{data[problem.start]:02x} is not UTF-8",
            path=path,
            line=line,
            column=column,
            remedy="save the file as UTF-8 (the micro, degree and ± signs are usual causes)",
        ) from None
    if not text.strip():
        raise InputError(
            "is empty",
            path=path,
            remedy="describe the equipment in it, or name another bench sheet",
        )
    return text


def _parse(text: str, path: str) -> dict[str, Any]:
    import tomllib

    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError as problem:
        raise _syntax_error(str(problem), text, path) from None
    except RecursionError:
        raise InputError(
            "is nested too deeply", path=path, remedy="a bench sheet needs three levels"
        ) from None
    except ValueError as problem:
        raise InputError(
            f"cannot be read: {problem}", path=path, remedy="correct the number"
        ) from None


def _syntax_error(said: str, text: str, path: str) -> InputError:
    lines = text.split("\n")
    found = _PLACE.search(said)
    if found and found[1]:
        line, column = int(found[1]), int(found[2])
    else:
        line = max((n for n, row in enumerate(lines, 1) if row.strip()), default=1)
        column = len(lines[line - 1].rstrip()) + 1
    row = lines[line - 1] if line <= len(lines) else ""
    what = _PLACE.sub("", said).strip()
    return InputError(
        f"{what[:1].lower()}{what[1:]}",
        path=path,
        line=line,
        column=column,
        remedy=_syntax_remedy(what, row),
    )


def _syntax_remedy(what: str, row: str) -> str:
    """Return what to type instead, from the parser's complaint and the line it is about."""
    key, equals, value = (part.strip() for part in row.partition("="))
    if any(mark in row for mark in "“”„«»‘’"):
        return 'use straight quotes: "..."'
    if "overwrite" in what.lower() or "twice" in what.lower() or "immutable" in what.lower():
        return "this name is there already: keep one of the two"
    if not equals and not row.lstrip().startswith("["):
        return 'write KEY = "value", or # before a remark'
    if row.lstrip().startswith("["):
        return 'a table is headed [kind.NAME]; a name with blanks is quoted: [set."batch 118"]'
    if re.fullmatch(r"[+-]?\d+,\d+", value):
        return f"write a decimal point: {key} = {value.replace(',', '.')}"
    if value and value[0] not in "\"'[{":
        return f'write quantities, text and names in quotes: {key} = "{value}"'
    if value[:1] == '"' and "\\" in value:
        return "write a path with / or in single quotes: '...'"
    if value[:1] in "\"'" and value.count(value[0]) % 2:
        return f"close the quotes: {key} = {value}{value[0]}"
    return "see that quotes, brackets and commas are in pairs on this line or above it"
