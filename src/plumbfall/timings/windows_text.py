"""Text in Windows-1252 that nobody declared: read where it is certain to be no UTF-8."""

from __future__ import annotations

import re

from plumbfall.timings.notices import Notices

__all__ = ["as_windows_1252"]

_UTF8_LETTER = re.compile(
    rb"[\xc2-\xdf][\x80-\xbf]|[\xe0-\xef][\x80-\xbf]{2}|[\xf0-\xf4][\x80-\xbf]{3}"
)
_FOREIGN = re.compile(rb"[\x80-\xff]")
_SHOWN = 12


def as_windows_1252(data: bytes, notices: Notices) -> bytes | None:
    """Return bytes that are no UTF-8 as the UTF-8 text that they are in Windows-1252.

    ``None`` where they hold letters in UTF-8 too, so that a stray byte has spoilt them, or bytes
    that Windows-1252 lacks. What is read so is listed, with the letters that come of it.
    """
    if _UTF8_LETTER.search(data):
        return None
    try:
        text = data.decode("cp1252")
    except UnicodeDecodeError:
        return None
    found = _FOREIGN.search(data)
    assert found is not None  # ASCII alone is UTF-8
    before = data[: found.start()].replace(b"\r\n", b"\n").replace(b"\r", b"\n")
    place = len(before) - before.rfind(b"\n")
    letters = list(dict.fromkeys(letter for letter in text if letter > "\x7f"))
    shown = " ".join(letters[:_SHOWN]) + (" …" if len(letters) > _SHOWN else "")
    notices.repair(
        f"the file is no UTF-8 and is read as Windows-1252, with the letters {shown} (the first at"
        f" place {place} of this line); see that they are right",
        before.count(b"\n") + 1,
    )
    notices.offer("encoding", '"cp1252"')
    return text.encode("utf-8")
