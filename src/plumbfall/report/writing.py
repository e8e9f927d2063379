"""Writing files whole or not at all: into a temporary place beside the target, then renamed."""

from __future__ import annotations

import os
import secrets
import shutil
from collections.abc import Callable, Mapping
from pathlib import Path

from plumbfall.errors import InputError

__all__ = ["write_file", "write_folder"]

TEMPORARY = ".plumbfall-"


def write_file(path: str | os.PathLike[str], content: bytes) -> None:
    """Write one file, replacing one of that name; a failure leaves the old one as it was.

    Raises
    ------
    InputError
        If the file cannot be written there; nothing has been written then.
    """
    target = Path(path)
    try:
        if target.is_dir():
            raise InputError("is a folder", path=str(path), remedy="give the name of a file")
        if not target.parent.is_dir():
            raise InputError(
                "its folder does not exist", path=str(path), remedy="make the folder first"
            )
        target = target.resolve()  # a link keeps pointing at the file that is replaced
        temporary = target.with_name(TEMPORARY + secrets.token_hex(8))
        try:
            _write_through(temporary, content)
            temporary.replace(target)
        finally:
            temporary.unlink(missing_ok=True)
    except OSError as error:
        raise _refusal(path, error) from error


def write_folder(folder: str | os.PathLike[str], files: Mapping[str, bytes]) -> None:
    """Write files into a folder, all of them or none; the folder is made where it is missing.

    Files of these names that stand there are replaced, any others left alone.

    Raises
    ------
    InputError
        If they cannot be written; the folder then is as it was.
    """
    target = Path(folder)
    try:
        if target.exists() and not target.is_dir():
            raise InputError(
                "is a file, and a folder is needed", path=str(folder), remedy="name another folder"
            )
        if target.is_dir():
            _write_into(target.resolve(), files)
        else:
            _write_new(target, files)
    except OSError as error:
        raise _refusal(folder, error) from error


def _write_new(target: Path, files: Mapping[str, bytes]) -> None:
    missing = [parent for parent in target.parents if not parent.exists()]
    temporary = target.with_name(TEMPORARY + secrets.token_hex(8))
    try:
        temporary.mkdir(parents=True)
        for name, content in files.items():
            _write_through(temporary / name, content)
        temporary.rename(target)
    except BaseException:
        shutil.rmtree(temporary, ignore_errors=True)
        for parent in missing:
            _quietly(parent.rmdir)
        raise


def _write_into(target: Path, files: Mapping[str, bytes]) -> None:
    """Write beside the files that stand there, swap them, and swap back if one swap fails."""
    for name in files:
        if (target / name).is_dir():
            raise InputError(
                f"holds a folder named {name}", path=str(target), remedy="name another folder"
            )
    temporary = target / (TEMPORARY + secrets.token_hex(8))
    former = temporary / "former"
    try:
        former.mkdir(parents=True)
        for name, content in files.items():
            _write_through(temporary / name, content)
        _swap(target, temporary, former, list(files))
    finally:
        shutil.rmtree(temporary, ignore_errors=True)


def _swap(target: Path, temporary: Path, former: Path, names: list[str]) -> None:
    placed: list[str] = []
    try:
        for name in names:
            if (target / name).exists():
                (target / name).replace(former / name)
            placed.append(name)
            (temporary / name).replace(target / name)
    except BaseException:
        for name in names:
            if (former / name).exists():
                (former / name).replace(target / name)
            elif name in placed:
                _quietly((target / name).unlink)
        raise


def _write_through(path: Path, content: bytes) -> None:
    with path.open("xb") as file:
        file.write(content)
        file.flush()
        os.fsync(file.fileno())


def _quietly(action: Callable[[], None]) -> None:
    try:
        action()
    except OSError:
        return  # the error that led here is the one worth reporting


def _refusal(path: str | os.PathLike[str], error: OSError) -> InputError:
    return InputError(
        f"cannot be written: {error.strerror or error}",
        path=str(path),
        remedy="name a place you may write to, and close the file where it is open",
    )
