"""From what the user named to bytes: wildcards, files that are none, encodings, line ends."""

from __future__ import annotations

import glob
import hashlib
import os
from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path

import numpy as np

from plumbfall.timings.grid import LONGEST_LINE
from plumbfall.timings.notices import Notices, quoted
from plumbfall.timings.windows_text import as_windows_1252

__all__ = ["LARGEST_FILE", "RawFile", "decode", "expand", "load"]

LARGEST_FILE = 400_000_000
"""Bytes in the largest file that is read, some ten million drops."""

_AS_CSV = "save the timings as CSV (comma or semicolon separated, UTF-8) or as XLSX"
_MARKS = (
    # a UTF-32 mark begins with a UTF-16 mark, so it is looked for first
    (b"\xff\xfe\x00\x00", "utf-32"),
    (b"\x00\x00\xfe\xff", "utf-32"),
    (b"\xef\xbb\xbf", "utf-8-sig"),
    (b"\xff\xfe", "utf-16"),
    (b"\xfe\xff", "utf-16"),
)
_FOREIGN = (
    (b"\xd0\xcf\x11\xe0", "an old spreadsheet or office document"),
    (b"%PDF", "a PDF document"),
    (b"\x1f\x8b", "a compressed file"),
    (b"\x89PNG", "a picture"),
    (b"\xff\xd8\xff", "a picture"),
)
_MOST_STRAY_BYTES = 20


@dataclass(frozen=True, slots=True)
class RawFile:
    """A file's bytes as they are on disk, and their SHA-256."""

    path: str
    data: bytes
    sha256: str

    @property
    def is_spreadsheet(self) -> bool:
        """Whether the bytes are a zip archive, as XLSX is."""
        return self.data.startswith(b"PK\x03\x04")


def expand(sources: Iterable[str | os.PathLike[str]], notices: Notices) -> list[str]:
    """Return the paths that the sources name, wildcards written out, each once."""
    paths: dict[str, str] = {}
    for source in sources:
        typed = os.fspath(source)
        found = [typed]
        if glob.has_magic(typed) and "\0" not in typed and not os.path.exists(typed):
            found = sorted(glob.glob(typed, recursive=True))
            if not found:
                notices.error(
                    "no file matches this pattern", "check the folder and the name", path=typed
                )
        for path in found:
            same = path if "\0" in path else os.path.realpath(path)
            if same in paths:
                notices.repair(f"{path} is named twice and read once")
            else:
                paths[same] = path
    return list(paths.values())


def load(path: str, notices: Notices) -> RawFile | None:
    """Read a file whole; ``None``, and an error in the notices, where that cannot be done."""
    try:
        if not path:
            notices.error("a timing file's name is empty", "name the file")
            return None
        if os.path.isdir(path):
            notices.error(
                "is a folder, not a timing file",
                f"name the files in it, such as {quoted(os.path.join(path, '*.csv'))}",
            )
            return None
        size = os.path.getsize(path)
        if size > LARGEST_FILE:
            notices.error(
                f"the file has {size:,} bytes; at most {LARGEST_FILE:,} are read", "split the file"
            )
            return None
        data = Path(path).read_bytes()
    except FileNotFoundError:
        notices.error("there is no such file", "check the folder and the name")
        return None
    except (OSError, ValueError) as fault:
        reason = getattr(fault, "strerror", None) or str(fault)
        notices.error(f"the file cannot be read: {reason}", "check the name and the permissions")
        return None
    if not _has_text(data):
        notices.error("the file is empty", "it needs headings and one row for each drop")
        return None
    return RawFile(path, data, hashlib.sha256(data).hexdigest())


def decode(raw: RawFile, encoding: str | None, notices: Notices) -> tuple[bytes, str] | None:
    """Return the text as UTF-8 with line feeds, and the encoding it was found in.

    ``encoding`` is what the user declared; otherwise a byte order mark, UTF-8, or Windows-1252,
    which is listed. ``None``, and an error in the notices, where the bytes are no text.
    """
    data = raw.data
    marked = next((name for mark, name in _MARKS if data.startswith(mark)), None)
    if encoding is None and not marked:
        foreign = next((what for magic, what in _FOREIGN if data.startswith(magic)), None)
        if foreign is None and b"\0" in data:
            foreign = "a binary file"
        if foreign:
            notices.error(f"the file is {foreign}, not text", _AS_CSV)
            return None
    found = marked or encoding or "utf-8"
    try:
        if found.replace("_", "-").casefold() in ("utf-8", "utf8", "utf-8-sig"):
            text = data[3:] if data.startswith(b"\xef\xbb\xbf") else data
            if not text.isascii():
                text.decode("utf-8")
        else:
            text = data.decode(found).removeprefix("\ufeff").encode("utf-8")
    except LookupError:
        notices.error(
            f"there is no encoding {quoted(found)}", "usual ones are utf-8, utf-16 and cp1252"
        )
        return None
    except UnicodeError:
        western = None if marked or encoding else as_windows_1252(data, notices)
        if western is None:
            _note_stray_bytes(data, found, notices)
            return None
        text, found = western, "cp1252"
    if b"\0" in text:
        notices.error("the file is a binary file, not text", _AS_CSV)
        return None
    if b"\r" in text:
        text = text.replace(b"\r\n", b"\n").replace(b"\r", b"\n")
    if _note_long_line(text, notices):
        return None
    if not _has_text(text):
        notices.error("the file is empty", "it needs headings and one row for each drop")
        return None
    if not text.endswith(b"\n"):
        notices.repair("the last line has no line end; see that it is whole", text.count(b"\n") + 1)
    return text, found


def _has_text(data: bytes) -> bool:
    return bool(data[:10_000].strip() or data.strip())  # the first part spares a copy of it all


def _note_stray_bytes(data: bytes, encoding: str, notices: Notices) -> None:
    """List the bytes that the encoding does not know, each by line and place in the line."""
    start = 3 if data.startswith(b"\xef\xbb\xbf") else 0
    if encoding.casefold().startswith(("utf-16", "utf_16", "utf-32", "utf_32")):
        notices.error(
            f"the file is not whole {encoding} text", "save it again as UTF-8, or copy it again"
        )
        return
    for _ in range(_MOST_STRAY_BYTES):
        try:
            data[start:].decode(encoding)
        except UnicodeDecodeError as fault:
            at = start + fault.start
            before = data[:at].replace(b"\r\n", b"\n").replace(b"\r", b"\n")
            line_start = before.rfind(b"\n") + 1
            place = len(before[line_start:].decode(encoding, "replace")) + 1
            notices.error(
                f"byte 0x{data[at]:02x} at place {place} of the line is not {encoding} text",
                'save the file as UTF-8, or set encoding = "cp1252" (or whatever it is written'
                " in) under [timings] in the bench sheet",
                before.count(b"\n") + 1,
                place,
            )
            start = at + 1
        except UnicodeError:
            return
        else:
            return


def _note_long_line(text: bytes, notices: Notices) -> bool:
    ends = np.flatnonzero(np.frombuffer(text, dtype=np.uint8) == 10)
    lengths = np.diff(ends, prepend=-1, append=len(text)) - 1
    longest = int(lengths.argmax())
    if lengths[longest] <= LONGEST_LINE:
        return False
    notices.error(
        f"the line is {int(lengths[longest]):,} bytes long; at most {LONGEST_LINE:,} are read",
        "a timing file has one short line for each drop; look for lost line ends",
        longest + 1,
    )
    return True
