"""Write the figures of the planted-fault study into findings.md: a minute or two.

Run sets are invented with a fault in each, and others without, by ``tests/support``. With
``--check`` nothing is written, and a stale document exits with 1.
"""

from __future__ import annotations

import argparse
import sys
from collections.abc import Sequence
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parents[1] / "tests"))

from support.study import Study, long_study

__all__ = ["filled", "main"]

DOCUMENT = Path(__file__).parent / "findings.md"
BEGIN, END = "<!-- begin study: written by findings_study.py -->", "<!-- end study -->"


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the study and write its figures, or say whether they are stale; return the exit code."""
    parser = argparse.ArgumentParser(description="Write the figures of the planted-fault study.")
    parser.add_argument("--check", action="store_true", help="write nothing; exit 1 when stale")
    check = parser.parse_args(arguments).check
    old = DOCUMENT.read_text("utf-8")
    new = filled(old, long_study())
    if new != old:
        sys.stdout.write(f"{DOCUMENT.name}: {'stale' if check else 'new'}\n")
        if not check:
            beside = DOCUMENT.with_suffix(".new")
            beside.write_text(new, "utf-8")
            beside.replace(DOCUMENT)
    return int(check and new != old)


def filled(text: str, study: Study) -> str:
    """Return the document's text with the figures of a study."""
    before, _, rest = text.partition(BEGIN)
    after = rest.partition(END)[2]
    return f"{before}{BEGIN}\n\n{_written(study)}\n\n{END}{after}"


def _written(study: Study) -> str:
    quiet = study.quiet
    lines = [
        "| finding | severity | fault in each run set | found in |",
        "| --- | --- | --- | --- |",
        *(
            f"| `{fault.code}` | {fault.severity} | {fault.what} | {100 * share:.1f} % |"
            for fault, share in study.faults
        ),
        "",
        f"Of {quiet.sets} good run sets {quiet.warned} ({100 * quiet.share:.1f} %) are warned "
        "about:",
        "",
        "| warning | good run sets that raise it |",
        "| --- | --- |",
        *(f"| `{code}` | {count} |" for code, count in quiet.codes.most_common()),
    ]
    return "\n".join(lines)


if __name__ == "__main__":
    raise SystemExit(main())
