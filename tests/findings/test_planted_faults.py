"""Planted faults are found, and good run sets are left alone, at the rates that are promised.

The long study is marked slow; docs/findings.md has its figures.
"""

from __future__ import annotations

import pytest

from support.documents import ROOT, table_headed
from support.study import ALL_FAULTS, ELSEWHERE, clean_sets, found_share, long_study

ids = [f"{fault.code}: {fault.what}" for fault in ALL_FAULTS]


@pytest.mark.parametrize("fault", ALL_FAULTS, ids=ids)
def test_a_planted_fault_is_found(fault):
    assert found_share(fault, 20, seed=11) >= 0.9


def test_good_run_sets_are_left_alone():
    quiet = clean_sets(20, 15, seed=13)
    assert quiet.sets == 300
    assert quiet.share <= 0.05, quiet.codes


@pytest.mark.slow
def test_the_long_study_keeps_what_is_promised_and_is_in_the_document():
    study = long_study()
    for fault, share in study.faults:
        assert share >= 0.9, fault.what
    assert study.quiet.sets == 2000
    assert study.quiet.share <= 0.05, study.quiet.codes
    text = (ROOT / "docs" / "findings.md").read_text("utf-8")
    for fault, share in study.faults:
        assert f"| {fault.what} | {100 * share:.1f} % |" in text
    assert f"{study.quiet.warned} ({100 * study.quiet.share:.1f} %) are warned about" in text


def test_every_code_has_a_planted_fault_or_is_tested_elsewhere():
    listed = {code.strip("`") for code, *_ in table_headed("findings.md", "| code |")[1:]}
    planted = {fault.code for fault in ALL_FAULTS}
    assert not planted & set(ELSEWHERE)
    assert planted | set(ELSEWHERE) >= listed
