"""Does the page stand alone, say everything, and take hostile text as text?"""

from __future__ import annotations

import re
from dataclasses import replace
from html.parser import HTMLParser
from xml.etree import ElementTree

import pytest

from tests.report.sample import HOSTILE, sample_exhibits, sample_result
from tuner.report.figure_response import response_picture
from tuner.report.figure_ruler import ruler_picture
from tuner.report.figure_trade import trade_caption, trade_picture
from tuner.report.page import caution_letters, page
from tuner.report.records import Exhibit, ph_grid
from tuner.report.svg import Scale, themed, ticks
from tuner.report.wording import CAUTIONS, HOW_SURE

VOID = frozenset({"meta", "br", "link", "img", "hr", "input", "rect", "line", "circle"})


class Balance(HTMLParser):
    """Checks that every element that is opened is closed, and gathers attributes and text."""

    def __init__(self) -> None:
        super().__init__()
        self.open: list[str] = []
        self.attributes: list[tuple[str, str, str | None]] = []
        self.words: list[str] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.attributes += [(tag, name, value) for name, value in attrs]
        if tag not in VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.attributes += [(tag, name, value) for name, value in attrs]

    def handle_endtag(self, tag: str) -> None:
        if tag not in VOID:
            assert self.open.pop() == tag

    def handle_data(self, data: str) -> None:
        self.words.append(data)


@pytest.fixture(scope="module")
def html() -> str:
    """The page of the sample."""
    return page(sample_result(), sample_exhibits()).decode("utf-8")


@pytest.fixture(scope="module")
def parsed(html: str) -> Balance:
    """The page, parsed."""
    parser = Balance()
    parser.feed(html)
    return parser


def test_every_element_is_closed(parsed: Balance) -> None:
    assert parsed.open == []


def test_nothing_is_loaded_from_anywhere(html: str, parsed: Balance) -> None:
    assert not [a for a in parsed.attributes if a[1] in ("src", "srcset", "action", "data")]
    links = {value for _, name, value in parsed.attributes if name in ("href", "xlink:href")}
    assert links
    assert all(link and link.startswith("#") for link in links)
    assert "<script" not in html
    assert not re.search(r"url\(|@import", html)


def test_links_lead_to_sections_that_are_there(parsed: Balance) -> None:
    places = {value for _, name, value in parsed.attributes if name == "id"}
    assert {value[1:] for _, name, value in parsed.attributes if name == "href" and value} <= places


def test_hostile_text_stays_text(html: str, parsed: Balance) -> None:
    assert HOSTILE not in html
    assert any(HOSTILE in words for words in parsed.words)
    assert "Label with &lt;angle&gt; &amp; sign" in html


def test_cautions_and_meanings_stand_on_the_page(parsed: Balance) -> None:
    words = " ".join(parsed.words)
    for line in (*CAUTIONS, *HOW_SURE):
        assert line in words


def test_the_first_candidate_is_told_with_units(parsed: Balance) -> None:
    words = " ".join(" ".join(parsed.words).split())
    for part in (
        "6.43 ± 0.18",
        "71 %",
        "g/mol",
        "pH per 10 K",
        "knee of the front",
        "Measured: pKa′ 6.50 (own)",
    ):
        assert part in words
    assert "6.1 ± 0.6" in words, "a wide error leaves one decimal"


def test_search_counts_and_inputs_are_told(parsed: Balance) -> None:
    words = " ".join(" ".join(parsed.words).split())
    for part in (
        "All 1300 analogs were evaluated.",
        "no route from the shelf",
        "abcdef012345",
        "000000000000",
    ):
        assert part in words


def test_an_empty_result_makes_a_page() -> None:
    empty = replace(sample_result(), candidates=(), front=(), cloud=(), campaign=None)
    assert "No analog meets the brief." in page(empty, {}).decode("utf-8")


def test_a_page_without_exhibits_has_no_response(parsed: Balance) -> None:
    assert 'id="response"' not in page(sample_result(), {}).decode("utf-8")


def test_the_same_result_gives_the_same_page(html: str) -> None:
    assert page(sample_result(), sample_exhibits()).decode("utf-8") == html


@pytest.mark.parametrize(
    "draw", [trade_picture, ruler_picture, lambda r: response_picture(r, sample_exhibits())]
)
def test_each_picture_is_well_formed(draw) -> None:  # type: ignore[no-untyped-def]
    root = ElementTree.fromstring(draw(sample_result()))
    assert root.tag.endswith("svg")
    assert root.attrib["viewBox"].startswith("0 0 960 ")


def test_marks_of_the_picture_lie_inside_it() -> None:
    root = ElementTree.fromstring(trade_picture(sample_result()))
    height = float(root.attrib["viewBox"].split()[3])
    marks = [node for node in root.iter() if node.tag.endswith("circle")]
    assert marks
    assert all(0 < float(m.attrib["cx"]) < 960 and 0 < float(m.attrib["cy"]) < height for m in marks)


def test_the_front_is_drawn_last_so_that_nothing_hides_it() -> None:
    classes = re.findall(r'class="mark (\w+)"', trade_picture(sample_result()))
    assert classes == sorted(classes, key=("cloud", "listed", "front").index)
    assert (classes.count("listed"), classes.count("front")) == (2, 2)


def test_the_caption_counts_what_is_outside() -> None:
    far = replace(sample_result().cloud[0], offset=9.0)
    assert "1 marks lie outside" in trade_caption(replace(sample_result(), cloud=(far,), candidates=()))


def test_a_picture_of_nothing_is_empty() -> None:
    assert trade_picture(replace(sample_result(), front=(), cloud=(), candidates=())) == ""
    assert response_picture(sample_result(), {"x": Exhibit()}) == ""


def test_a_drawing_follows_the_colours_of_the_page() -> None:
    backdrop = "<rect style='opacity:1.0;fill:#FFFFFF;stroke:none' width='9' height='4'> </rect>"
    line = "<path class='bond' d='M0 0' style='stroke:#000000' />\n<path d='M1 1' style='stroke:#000000'/>"
    head = "<?xml version='1.0'?>\n<svg width='9px' height='4px' viewBox='0 0 9 4'><!-- x -->"
    svg = f"{head}{backdrop}{line}</svg>"
    path = "<path d='M0 0 M1 1' style='stroke:currentColor'/>"
    assert themed(svg) == f"<svg viewBox='0 0 9 4'>{path}</svg>"


def test_a_scale_of_one_point_stays_on_the_page() -> None:
    assert Scale(3.0, 3.0, 10.0, 90.0)(3.0) == 10.0


def test_ticks_are_round_and_inside() -> None:
    assert ticks(0.03, 0.98, 5) == (0.2, 0.4, 0.6, 0.8)
    assert ticks(5.0, 5.0) == (5.0,)


def test_the_grid_of_ph_is_symmetric_about_the_target() -> None:
    grid = ph_grid(6.4)
    assert (grid[0], grid[len(grid) // 2], grid[-1]) == (2.9, 6.4, 9.9)


def test_cautions_of_the_table_are_lettered_and_told_once(parsed: Balance) -> None:
    letters = caution_letters(sample_result())
    assert letters == {"azo dye": "a", HOSTILE: "b"}
    words = " ".join(" ".join(parsed.words).split())
    assert "a azo dye" in words
