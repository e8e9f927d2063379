from __future__ import annotations

import tomllib
from pathlib import Path

import pytest


@pytest.fixture
def whole_sheet_file() -> Path:
    return Path(__file__).with_name("whole_sheet.toml")


@pytest.fixture
def whole_sheet(whole_sheet_file):
    return tomllib.loads(whole_sheet_file.read_text(encoding="utf-8"))


@pytest.fixture
def write_sheet(tmp_path):
    def write(text: str | bytes) -> Path:
        file = tmp_path / "bench.toml"
        file.write_bytes(text.encode() if isinstance(text, str) else text)
        return file

    return write
