"""The report as a browser shows it: on a desk, on a phone, in the dark, to a screen reader."""

from __future__ import annotations

from pathlib import Path

import pytest

import plumbfall as pf
from browser.chromium import Tab
from report.invented_report import HOSTILE_NAMES, HOSTILE_NOTE

SAMPLES = Path(__file__).parents[2] / "sample_runs"
NAMES = ("sample", "several", "hostile")
WIDTHS = (1280, 390)

CONTRAST = """
(() => {
  const parse = (text) => (text.match(/[\\d.]+/g) || []).map(Number);
  const light = ([r, g, b]) => {
    const part = (v) => (v /= 255, v <= 0.04045 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4);
    return 0.2126 * part(r) + 0.7152 * part(g) + 0.0722 * part(b);
  };
  const ground = (element) => {
    for (let at = element; at; at = at.parentElement) {
      const found = parse(getComputedStyle(at).backgroundColor);
      if (found.length === 3 || found[3] > 0) return found;
    }
    return [255, 255, 255];
  };
  const poor = [];
  for (const element of document.body.querySelectorAll("*")) {
    const own = [...element.childNodes].some((n) => n.nodeType === 3 && n.data.trim());
    if (!own || element.closest("title, desc, .skip")) continue;
    const style = getComputedStyle(element);
    const drawn = element.tagName.toLowerCase() === "text";
    const one = light(parse(drawn ? style.fill : style.color));
    const other = light(ground(element));
    const ratio = (Math.max(one, other) + 0.05) / (Math.min(one, other) + 0.05);
    if (ratio < 4.5) poor.push(`${element.textContent.trim().slice(0, 40)}: ${ratio.toFixed(2)}`);
  }
  return poor;
})()
"""
"""Texts whose contrast is below 4.5 to 1, the least of WCAG 2.1, success criterion 1.4.3 (AA)."""


@pytest.mark.parametrize("width", WIDTHS)
@pytest.mark.parametrize("name", NAMES)
def test_no_complaint_no_request_no_sideways_scrolling(
    tab: Tab, pages: dict[str, Path], name: str, width: int
) -> None:
    tab.open(pages[name], width=width)
    assert tab.complaints() == []
    assert [url for url in tab.requests() if not url.startswith(("file:", "data:"))] == []
    assert tab.value("innerWidth") == width
    root = "document.documentElement"
    assert tab.value(f"{root}.scrollWidth") <= tab.value(f"{root}.clientWidth")
    assert tab.picture().startswith(b"\x89PNG")


@pytest.mark.parametrize("width", WIDTHS)
def test_verdict_and_value_are_seen_without_scrolling(
    tab: Tab, pages: dict[str, Path], width: int
) -> None:
    tab.open(pages["sample"], width=width, height=844)
    for what in (".result .verdict", ".result .value"):
        bottom = tab.value(f"document.querySelector('{what}').getBoundingClientRect().bottom")
        assert 0 < bottom < 844
    assert "Valid, with warnings" in tab.value("document.querySelector('.result').innerText")


@pytest.mark.parametrize("dark", [False, True])
@pytest.mark.parametrize("name", ["sample", "several"])
def test_every_text_stands_out_from_its_ground(
    tab: Tab, pages: dict[str, Path], name: str, dark: bool
) -> None:
    tab.open(pages[name], width=1280, dark=dark)
    ground = tab.value("getComputedStyle(document.documentElement).backgroundColor")
    assert (ground == "rgb(20, 27, 31)") == dark
    assert tab.value(CONTRAST) == []


def test_verdicts_are_told_apart_without_colour(tab: Tab, pages: dict[str, Path]) -> None:
    tab.open(pages["several"], width=1280)
    marks = tab.value(
        "[...document.querySelectorAll('.bar .verdict')].map("
        "(v) => getComputedStyle(v, '::before').content + v.innerText)"
    )
    assert len(set(marks)) == 3
    borders = tab.value(
        "[...document.querySelectorAll('.result')].map((v) => getComputedStyle(v).borderLeftStyle)"
    )
    assert borders == ["solid", "double", "dashed"]


def test_names_and_notes_are_text(tab: Tab, pages: dict[str, Path]) -> None:
    tab.open(pages["hostile"], width=1280)
    shown = tab.value("document.body.textContent")
    for name in HOSTILE_NAMES:
        assert name in shown
    assert HOSTILE_NOTE.replace("\x1b", "\\x1b") in shown
    assert tab.value("document.querySelectorAll('script, img, iframe, object').length") == 0
    assert tab.complaints() == []


def test_from_the_file_to_the_page_nothing_is_taken_for_code(tab: Tab, tmp_path: Path) -> None:
    lines = (SAMPLES / "damping_fluid_clean" / "drops.csv").read_text("utf-8").splitlines()
    lines = [line.replace("tank 3", "<script>alert(1)</script>") for line in lines]
    lines[-1] = lines[-1].removesuffix(",,") + ",void,=cmd()"
    (tmp_path / "drops.csv").write_text("\n".join(lines) + "\n", "utf-8")
    report = pf.reduce(
        tmp_path / "drops.csv", SAMPLES / "damping_fluid_clean" / "bench.toml", draws=0
    )
    report.write(tmp_path / "out")
    tab.open(tmp_path / "out" / "report.html", width=390)
    shown = tab.value("document.body.innerText")
    assert "Run set <script>alert(1)</script>" in shown
    assert "=cmd()" in shown
    assert tab.value("document.scripts.length") == 0
    assert tab.complaints() == []
    assert "'=cmd()" in (tmp_path / "out" / "drops.csv").read_text("utf-8")


def test_a_screen_reader_finds_its_way(tab: Tab, pages: dict[str, Path]) -> None:
    tab.open(pages["several"], width=1280)
    nodes = [
        (node["role"]["value"], node.get("name", {}).get("value", ""), node)
        for node in tab.ask("Accessibility.getFullAXTree")["nodes"]
        if not node.get("ignored")
    ]
    roles = [role for role, _, _ in nodes]
    for landmark in ("banner", "navigation", "main", "contentinfo"):
        assert roles.count(landmark) == 1, landmark
    assert {name for role, name, _ in nodes if role == "navigation"} == {"Contents"}
    drawings = [(name, node) for role, name, node in nodes if role == "image"]
    assert len(drawings) == tab.value("document.querySelectorAll('svg').length") > 0
    for name, node in drawings:
        assert name
        assert "The numbers are in the" in name + node.get("description", {}).get("value", "")
    tables = [name for role, name, _ in nodes if role == "table"]
    assert len(tables) > 8
    assert all(tables)
    assert {"columnheader", "rowheader"} <= set(roles)


@pytest.mark.parametrize("width", WIDTHS)
def test_contents_and_overview_lead_to_each_set_and_back(
    tab: Tab, pages: dict[str, Path], width: int
) -> None:
    tab.open(pages["several"], width=width)
    for index in (1, 2, 3):
        tab.value(f"document.querySelector('.overview a[href=\"#set-{index}\"]').click()")
        assert tab.value("location.hash") == f"#set-{index}"
        tab.value(f"document.querySelector('#set-{index} .back a').click()")
        assert tab.value("location.hash") == "#overview"
