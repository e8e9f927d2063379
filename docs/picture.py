"""Take the README's picture: the head of a sample run's report, as a headless Chromium shows it.

``python docs/picture.py`` writes docs/figures/report.png. Take it again when the page's look or
the sample run's numbers change.
"""

from __future__ import annotations

import os
import subprocess
import sys
import tempfile
from pathlib import Path

import plumbfall as pf
from plumbfall.report.browser import QUIET, find_browser, sandbox

ROOT = Path(__file__).parents[1]
PICTURE = ROOT / "docs" / "figures" / "report.png"
RUN = "sample_runs/three_batches/drops.csv"
SIZE = (1180, 1222)


def main() -> int:
    """Reduce the sample run and photograph its page."""
    os.chdir(ROOT)  # paths stand in reports as typed
    with tempfile.TemporaryDirectory(ignore_cleanup_errors=True) as folder:
        page, shot = Path(folder, "report.html"), Path(folder, "report.png")
        pf.reduce(RUN, date="2026-03-04").to_html(page)
        command = [
            find_browser(),
            *QUIET,
            *sandbox(),
            "--hide-scrollbars",
            f"--user-data-dir={Path(folder, 'profile')}",
            f"--window-size={SIZE[0]},{SIZE[1]}",
            f"--screenshot={shot}",
            page.as_uri(),
        ]
        subprocess.run(command, check=True, capture_output=True, timeout=300)
        PICTURE.write_bytes(shot.read_bytes())
    return 0


if __name__ == "__main__":
    sys.exit(main())
