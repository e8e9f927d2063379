from __future__ import annotations

import base64
import datetime as dt
import hashlib
import itertools
import re
from dataclasses import replace
from html.parser import HTMLParser

import pytest

from plumbfall.bench.records import Specification
from plumbfall.report import Report
from plumbfall.report.views import product
from plumbfall.report.words import CAUTIONS, STATEMENTS, TERMS
from plumbfall.results import Conformity, Reach
from report.invented_report import (
    HOSTILE_NAMES,
    HOSTILE_NOTE,
    InventedReduction,
    bench,
    drop,
    estimate,
    hostile_sets,
    three_sets,
    valid_set,
    warned_set,
)

VOID = {"meta", "br", "hr", "img", "link", "input", "path", "use", "rect", "image"}


class Page(HTMLParser):
    """The elements of a page: (tag, attributes, text inside it, depth)."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.tags: list[tuple[str, dict[str, str | None]]] = []
        self.open: list[str] = []
        self.text: list[str] = []
        self.feed(text)
        self.close()

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append((tag, dict(attrs)))
        if tag not in VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append((tag, dict(attrs)))

    def handle_endtag(self, tag: str) -> None:
        if tag in ("td", "th", "dt", "dd", "p", "span", "li", "caption", "tr", "title"):
            self.text.append(" ")
        if tag not in VOID:
            assert self.open, f"</{tag}> closes nothing"
            assert self.open.pop() == tag

    def handle_data(self, data: str) -> None:
        if self.open and self.open[-1] != "style":
            self.text.append(data)

    def all(self, tag: str) -> list[dict[str, str | None]]:
        return [attributes for name, attributes in self.tags if name == tag]

    @property
    def shown(self) -> str:
        return " ".join("".join(self.text).split())


@pytest.fixture(scope="module")
def html() -> str:
    return Report(three_sets()).to_html()


@pytest.fixture(scope="module")
def page(html: str) -> Page:
    return Page(html)


@pytest.fixture(scope="module")
def hostile() -> str:
    return Report(hostile_sets()).to_html()


class TestSelfContained:
    def test_elements_are_closed_in_order(self, page: Page) -> None:
        assert page.open == []

    def test_nothing_is_fetched_or_run(self, page: Page) -> None:
        assert not {"script", "link", "iframe", "object", "embed", "form"} & {
            tag for tag, _ in page.tags
        }
        for tag, attributes in page.tags:
            for name, value in attributes.items():
                assert not name.startswith("on"), (tag, name)
                if name in ("src", "href", "xlink:href"):
                    assert value is not None
                    assert value.startswith(("#", "data:image/png;")), (tag, value)

    def test_the_content_policy_allows_only_our_style(self, html: str, page: Page) -> None:
        policy = next(m["content"] for m in page.all("meta") if "http-equiv" in m)
        assert policy is not None
        assert policy.startswith("default-src 'none'; ")
        assert "unsafe" not in policy
        style = html[html.index("<style>") + 7 : html.index("</style>")]
        digest = base64.b64encode(hashlib.sha256(style.encode()).digest()).decode()
        assert f"'sha256-{digest}'" in policy
        assert html.count("<style") == 1
        assert not [attributes for _, attributes in page.tags if "style" in attributes]
        assert "url(" not in style
        assert "@import" not in style

    def test_ids_are_unique_and_references_lead_somewhere(self, html: str, page: Page) -> None:
        ids = [attributes["id"] for _, attributes in page.tags if "id" in attributes]
        assert len(ids) == len(set(ids))
        for _, attributes in page.tags:
            for name in ("href", "xlink:href"):
                if (attributes.get(name) or "").startswith("#"):
                    assert attributes[name][1:] in ids
            for name in (attributes.get("aria-labelledby") or "").split():
                assert name in ids
        for name in re.findall(r"url\(#([^)]*)\)", html):
            assert name in ids

    def test_a_hundred_sets_would_stay_under_five_megabytes(self, html: str) -> None:
        some = tuple(warned_set(name) for name in "AB")  # with every kind of figure
        one = len(Report(InventedReduction(some[:1])).to_html())
        two = len(Report(InventedReduction(some)).to_html())
        assert one + 99 * (two - one) < 5_000_000


class TestAccessible:
    def test_language_title_and_headings(self, page: Page) -> None:
        assert page.all("html")[0]["lang"] == "en"
        levels = [int(tag[1]) for tag, _ in page.tags if re.fullmatch("h[1-6]", tag)]
        assert levels.count(1) == 1
        assert levels[0] == 1
        assert all(below - above <= 1 for above, below in itertools.pairwise(levels))

    def test_tables_have_captions_and_scopes(self, page: Page) -> None:
        assert len(page.all("caption")) == len(page.all("table")) > 8
        assert all(attributes.get("scope") in ("col", "row") for attributes in page.all("th"))

    def test_drawings_are_described(self, page: Page) -> None:
        drawings = page.all("svg")
        # 1: drops, budget, residuals against temperature; 2: these, draws and intervals;
        # 3: drops of the set without viscosity; and for all of them, values and map
        assert len(drawings) == 3 + 5 + 1 + 2
        assert all(drawing["role"] == "img" for drawing in drawings)
        assert len(page.all("desc")) == len(drawings)
        assert len(page.all("figcaption")) == len(drawings)

    def test_scrolling_regions_are_reached_by_keyboard(self, page: Page) -> None:
        regions = [a for a in page.all("div") if (a.get("class") or "").startswith("scroll")]
        assert regions
        assert all(a["tabindex"] == "0" and a["role"] == "region" for a in regions)


class TestContent:
    def test_verdict_and_value_come_first(self, page: Page) -> None:
        text = page.shown
        start = text.index("Run set batch 118 851.3")
        assert text[start - 7 : start].strip() == "Valid"
        value = "851.3 ± 4.2 mPa·s Viscosity at 25.00 °C, between 847.1 and 855.5 mPa·s"
        assert text[start:].startswith(f"Run set batch 118 {value} with 95 %")

    def test_contents_and_overview_link_to_each_set_and_back(self, page: Page) -> None:
        links = [a["href"] for a in page.all("a")]
        assert links.count("#set-1") == 2  # contents and overview
        assert links.count("#set-2") == links.count("#set-3") == 3  # and the set before
        assert links.count("#overview") == 1 + 3
        assert {"#who", "#how", "#data", "#say", "#care"} <= set(links)

    def test_linear_and_monte_carlo_stand_side_by_side(self, page: Page) -> None:
        # bounds 1.1775 to 1.2267 and 1.1793 to 1.2301 Pa.s: 0.0018 and 0.0034 apart, where half a
        # unit of the first digit of u = 0.0123 is 0.005 (JCGM 101:2008, 7.9.2 and 8)
        text = page.shown
        start = text.index("Linear against Monte Carlo: the viscosity's bounds by both ways")
        found = text[start : text.index("seed", start)]
        assert "linear (GUM) 1.1775 1.2267 0.0123 61" in found
        assert "Monte Carlo, 200000 draws 1.1793 1.2301 0.0123 – quoted" in found
        assert "apart by 0.0018 0.0034 0.0050 Pa·s allowed – the linear bounds hold" in found
        assert "12 draws had no viscosity and count as outside the bounds." in found

    def test_what_the_specification_says_stands_with_the_value(self) -> None:
        limits = Specification(
            low=estimate(0.8505, 0.0, "Pa.s", "low", "850.5 mPa.s"), high=None, temperature=298.15
        )
        oil = replace(bench().liquids["oil"], specification=limits)
        sets = (valid_set("A"), replace(valid_set("B"), liquid="another"))
        reduced = InventedReduction(sets, bench=bench(liquids={"oil": oil}))
        text = Page(Report(reduced).to_html()).shown
        # t = (0.8513 - 0.8505) / 0.002124 = 0.3767; with 61 degrees of freedom that is 64.6 %
        assert "Undecided with at least 850.5 mPa·s at 25 °C, probability 64.6 %" in text
        assert text.count("conforms where the value lies within the limits") == 1
        assert re.search("A Valid .{40,90} 0 Undecided B Valid .{40,90} 0 – ", text)
        assert "Product" not in Page(Report(three_sets()).to_html()).shown

    @pytest.mark.parametrize(
        ("probability", "shown"),
        [(1.0, "above 99.9 %"), (0.99949, "99.9 %"), (2e-55, "below 0.1 %"), (0.05, "5.0 %")],
    )
    def test_nearly_certain_is_not_certain(self, probability: float, shown: str) -> None:
        made = product(Conformity(probability, "a rule", "conforms", "limits"))
        assert made is not None
        assert made.told == f"with limits, probability {shown}"

    def test_what_would_have_been_found_is_told_unless_it_was(self) -> None:
        reach = (Reach("time-trend", "a drift", 0.0042), Reach("outlier", "another", 0.1))
        found = replace(warned_set("A"), reach=reach)
        text = Page(Report(InventedReduction((found,))).to_html()).shown
        told = "These would have been found four times of five, had they been there: a drift, from "
        assert told + "0.42 %." in text

    def test_rows_in_no_result_are_listed_with_their_reason(self, page: Page) -> None:
        text = page.shown
        start = text.index("Rows that are in no result")
        assert "batch 119 8 d invented.csv:9 – excluded no-time" in text[start:]
        alone = Page(Report(InventedReduction((valid_set("A"),))).to_html()).shown
        assert "Every row was used; none is left out of the results." in alone

    def test_the_date_is_the_one_given(self) -> None:
        reduced = InventedReduction((valid_set("A"),))
        assert "Date: not supplied" in Page(Report(reduced).to_html()).shown
        assert "Date: 2026-03-02" in Page(Report(reduced, date=dt.date(2026, 3, 2)).to_html()).shown

    def test_one_set_has_no_overview(self) -> None:
        assert "Overview" not in Page(Report(InventedReduction((valid_set("A"),))).to_html()).shown

    @pytest.mark.parametrize(
        "part",
        [
            # what ISO/IEC 17025:2017, 7.8.2 and 7.8.3 ask of a report (clause text from memory)
            "Run-set report",
            "Number: not supplied",
            "A laboratory that does not exist",
            "Place not supplied",
            "Customer not supplied",
            "Method not supplied",
            "Deviations, additions, exclusions not supplied",
            "Authorised by not supplied",
            "Received not supplied",
            "timer watch W-3 C 17 not supplied 2027-01-31 ",
            "tube A T-1 not supplied 2026-01-12 not supplied ",
            "bore 50.00(2) mm; marks 0 mm, 200.000(50) mm",
            "usual values, not measured: bias (an invented source)",
            "9.8123(1) m/s², from the bench sheet",
            "Performed 2026-03-02 09:00:00 to 2026-03-02 09:07:00",
            "Operator someone",
            "19 rows read = 17 used + 1 void + 1 excluded by rule",
            "excluded: no-time",
            "a blank before the unit was taken out",
            "0f" * 32,
            "seed 0",
            "Remedy: look at the recording of drop 6",
            "p-value 3.1e-4; effect 3.1 %; smallest that would show 1.2 %",
            "wall 1.09184 exact computed tables, creeping flow in a long tube",
            "thermometer.bath.correction 0.000 0.050 K rectangular unlimited",
            "all of scope shared 1.5 50.5 shared",
            "End of report",
        ],
    )
    def test_it_holds(self, page: Page, part: str) -> None:
        assert part in page.shown

    def test_statements_and_cautions(self, page: Page) -> None:
        for sentence in (*STATEMENTS, *CAUTIONS):
            assert sentence in page.shown

    def test_words_are_explained_once(self, page: Page) -> None:
        for term in ("coverage factor", "degrees of freedom", "drag factor", "Reynolds number",
                     "expanded uncertainty"):  # fmt: skip
            assert page.shown.count(TERMS[term].replace("m2", "m²")) == 1

    def test_marks_are_listed_where_there_are_any(self) -> None:
        import numpy as np

        reduction = InventedReduction((valid_set("A"),))
        clocks = np.arange(24.0).reshape(8, 3) / 8
        clocks[0, 1] = np.nan
        object.__setattr__(reduction, "timings", replace(reduction.timings, marks_s=clocks))
        text = Page(Report(reduction).to_html()).shown
        assert "Clock readings at the marks in s, as recorded" in text
        assert "0 – 0.25" in text

    def test_long_sets_list_only_what_matters_and_say_so(self) -> None:
        made = valid_set("A")
        many = tuple(drop(n, 0.85, 0.85) for n in range(1, 1500))
        many = (*many, replace(many[0], drop=1500, findings=("outlier",)))
        reduction = InventedReduction((replace(made, drops=many, n_drops=1500, n_read=1500),))
        text = Page(Report(reduction).to_html()).shown
        assert "1500 drops in all; listed are those not used and those that a finding names" in text
        assert "[outlier]" in text

    def test_an_identity_names_the_numbers(self) -> None:
        def identity(value: float) -> str:
            found = re.search(
                r"Identity: (\w{16})",
                Page(Report(InventedReduction((valid_set("A", value),))).to_html()).shown,
            )
            assert found
            return found[1]

        assert identity(0.85) == identity(0.85)
        assert identity(0.85) != identity(0.8500001)


class TestHostileText:
    def test_names_are_shown_as_text(self, hostile: str) -> None:
        page = Page(hostile)
        assert page.open == []
        for name in HOSTILE_NAMES:
            assert name in page.shown
        assert "<script>alert" not in hostile
        assert "<img" not in hostile

    def test_notes_are_shown_as_text(self, hostile: str) -> None:
        shown = HOSTILE_NOTE.replace("\x1b", "\\x1b")
        assert shown in Page(hostile).shown
        assert "\x1b" not in hostile

    def test_names_never_make_ids_or_links(self, hostile: str) -> None:
        for _, attributes in Page(hostile).tags:
            for name in ("id", "href", "xlink:href"):
                assert re.fullmatch(r"#?[\w.-]+|data:image/png;.*", attributes.get(name) or "x")

    def test_the_title_of_the_bench_is_escaped(self) -> None:
        reduction = InventedReduction(
            (valid_set("A"),), bench=bench(title="</title><script>x</script>", viscosity_unit="P")
        )
        html = Report(reduction).to_html()
        assert "<script>" not in html
        assert "8.513 ± 0.042 P" in Page(html).shown
