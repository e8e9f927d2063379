from __future__ import annotations

import os
import stat
from pathlib import Path

import pytest

from plumbfall.errors import InputError
from plumbfall.report import writing
from plumbfall.report.writing import write_file, write_folder

FILES = {"a.txt": b"one", "b.txt": b"two"}


def names(folder: Path) -> list[str]:
    return sorted(path.name for path in folder.iterdir())


def test_a_missing_folder_is_made_with_its_parents(tmp_path: Path) -> None:
    write_folder(tmp_path / "x" / "y", FILES)
    assert names(tmp_path / "x" / "y") == ["a.txt", "b.txt"]
    assert names(tmp_path / "x") == ["y"]


def test_files_are_replaced_and_others_left(tmp_path: Path) -> None:
    (tmp_path / "a.txt").write_bytes(b"old")
    (tmp_path / "kept.txt").write_bytes(b"kept")
    write_folder(tmp_path, FILES)
    assert names(tmp_path) == ["a.txt", "b.txt", "kept.txt"]
    assert (tmp_path / "a.txt").read_bytes() == b"one"


@pytest.mark.skipif(os.name != "posix", reason="permission bits are POSIX")
def test_the_folder_has_the_usual_permissions(tmp_path: Path) -> None:
    write_folder(tmp_path / "new", FILES)
    (tmp_path / "plain").mkdir()
    assert stat.S_IMODE((tmp_path / "new").stat().st_mode) == stat.S_IMODE(
        (tmp_path / "plain").stat().st_mode
    )


@pytest.mark.parametrize("fails_at", [0, 1])
def test_a_failure_while_writing_leaves_nothing(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, fails_at: int
) -> None:
    (tmp_path / "there").mkdir()
    (tmp_path / "there" / "a.txt").write_bytes(b"old")
    plain, calls = writing._write_through, []

    def full(path: Path, content: bytes) -> None:
        calls.append(path)
        plain(path, content)
        if (len(calls) - 1) % 2 == fails_at:
            raise OSError(28, "No space left on device")

    monkeypatch.setattr(writing, "_write_through", full)
    for folder in ("there", "new/deep"):
        calls.clear()
        with pytest.raises(InputError, match="cannot be written: No space left on device"):
            write_folder(tmp_path / folder, FILES)
    assert names(tmp_path) == ["there"]
    assert names(tmp_path / "there") == ["a.txt"]
    assert (tmp_path / "there" / "a.txt").read_bytes() == b"old"


def test_a_failure_while_swapping_puts_the_old_files_back(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    (tmp_path / "a.txt").write_bytes(b"old a")
    plain = Path.replace

    def locked(self: Path, target: Path) -> Path:
        if self.name == "b.txt" and self.parent.name.startswith(".plumbfall-"):
            raise PermissionError(13, "Permission denied")
        return plain(self, target)

    monkeypatch.setattr(Path, "replace", locked)
    with pytest.raises(InputError, match="Permission denied; name a place you may write to"):
        write_folder(tmp_path, FILES)
    assert names(tmp_path) == ["a.txt"]
    assert (tmp_path / "a.txt").read_bytes() == b"old a"


def test_an_interrupt_leaves_nothing_either(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    def interrupted(path: Path, content: bytes) -> None:
        path.write_bytes(content[:1])
        raise KeyboardInterrupt

    monkeypatch.setattr(writing, "_write_through", interrupted)
    with pytest.raises(KeyboardInterrupt):
        write_folder(tmp_path / "out", FILES)
    with pytest.raises(KeyboardInterrupt):
        write_folder(tmp_path, FILES)
    with pytest.raises(KeyboardInterrupt):
        write_file(tmp_path / "c.txt", b"three")
    assert names(tmp_path) == []


def test_a_file_where_a_folder_is_wanted(tmp_path: Path) -> None:
    (tmp_path / "out").write_bytes(b"")
    with pytest.raises(InputError, match="out: is a file, and a folder is needed"):
        write_folder(tmp_path / "out", FILES)
    with pytest.raises(InputError, match="cannot be written: Not a directory"):
        write_folder(tmp_path / "out" / "below", FILES)


def test_a_folder_where_a_file_is_wanted(tmp_path: Path) -> None:
    (tmp_path / "a.txt").mkdir()
    with pytest.raises(InputError, match=r"holds a folder named a\.txt"):
        write_folder(tmp_path, FILES)
    with pytest.raises(InputError, match="is a folder; give the name of a file"):
        write_file(tmp_path / "a.txt", b"")
    assert names(tmp_path) == ["a.txt"]


def test_a_file_in_a_folder_that_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="its folder does not exist; make the folder first"):
        write_file(tmp_path / "no" / "a.txt", b"")
    assert names(tmp_path) == []


def test_a_link_keeps_pointing_at_its_file(tmp_path: Path) -> None:
    (tmp_path / "real.txt").write_bytes(b"old")
    link = tmp_path / "link.txt"
    try:
        link.symlink_to(tmp_path / "real.txt")
    except OSError:
        pytest.skip("links cannot be made here")
    write_file(link, b"new")
    assert link.is_symlink()
    assert (tmp_path / "real.txt").read_bytes() == b"new"
