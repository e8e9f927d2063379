"""A page as PDF, printed by a Chromium that is installed; nothing is fetched for it."""

from __future__ import annotations

import os
import shutil
import subprocess
import tempfile
from pathlib import Path

from plumbfall.errors import InputError

__all__ = ["ENVIRONMENT", "QUIET", "find_browser", "pdf_of", "sandbox"]

ENVIRONMENT = "PLUMBFALL_CHROMIUM"
"""Names the program to use where it is not found by itself."""

NAMES = ("chromium", "chromium-browser", "chromium-headless-shell")

QUIET = (
    "--headless",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
    "--disable-extensions",
    "--no-default-browser-check",
)
"""It shows no window, and asks nothing of any network."""

LONGEST = 300.0  # seconds that printing may take


def find_browser() -> str:
    """Return the path of a Chromium.

    Raises
    ------
    InputError
        Where none is found.
    """
    named = os.environ.get(ENVIRONMENT)
    for name in (named,) if named else NAMES:
        if found := shutil.which(name):
            return found
    missing = f"{named!r}, named in {ENVIRONMENT}, is no program" if named else "none is found"
    raise InputError(
        f"a PDF is printed by Chromium, and {missing}",
        key="format",
        remedy=f"install Chromium, or name its program in {ENVIRONMENT}, or print report.html from "
        "any browser",
    )


def pdf_of(page: str) -> bytes:
    """Print a self-contained page.

    Raises
    ------
    InputError
        Where there is no Chromium, or it prints nothing.
    """
    browser = find_browser()
    with tempfile.TemporaryDirectory(ignore_cleanup_errors=True) as folder:
        source, target = Path(folder, "report.html"), Path(folder, "report.pdf")
        source.write_text(page, "utf-8")
        command = [
            browser,
            *QUIET,
            *sandbox(),
            f"--user-data-dir={Path(folder, 'profile')}",
            "--no-pdf-header-footer",
            f"--print-to-pdf={target}",
            source.as_uri(),
        ]
        try:
            done = subprocess.run(command, capture_output=True, timeout=LONGEST, check=False)
            said = done.stderr.decode("utf-8", "replace").strip().splitlines()
        except (OSError, subprocess.TimeoutExpired) as error:
            said = [str(error)]
        if target.is_file() and (printed := target.read_bytes()).startswith(b"%PDF"):
            return printed
    raise InputError(
        f"{browser} printed no PDF: {said[-1] if said else 'it said nothing'}",
        key="format",
        remedy="print report.html from any browser",
    )


def sandbox() -> tuple[str, ...]:
    """Chromium refuses to sandbox itself for the superuser, as in a container."""
    superuser = hasattr(os, "geteuid") and os.geteuid() == 0
    return ("--no-sandbox",) if superuser else ()
