"""The ten-minute start: its sheet and its file give the line that it prints."""

from __future__ import annotations

import pytest

import plumbfall as pf
from support.documents import FENCE, TEXTS


def test_its_sheet_and_file_give_its_line(tmp_path, monkeypatch: pytest.MonkeyPatch) -> None:
    found = {match[1]: match[3] for match in FENCE.finditer(TEXTS["start.md"])}
    monkeypatch.chdir(tmp_path)
    (tmp_path / "bench.toml").write_text(found["toml"], "utf-8")
    (tmp_path / "drops.csv").write_text(found["csv"], "utf-8")
    report = pf.reduce("drops.csv")
    assert report["tank 3"].summary == found["text"].strip()
    parts = [
        line.split("`")[1] for line in TEXTS["start.md"].splitlines() if line.startswith("| `")
    ]
    assert len(parts) == 4
    for part in parts:
        assert part in report["tank 3"].summary
