"""The sheet on the screen: one file, harmless, complete, reachable."""

from __future__ import annotations

import base64
import dataclasses
import hashlib
import re

import pytest
import samples
from pages import Elements, squeezed

from calcpack.export import SheetNumbers, sheet_content, sheet_html


@pytest.fixture(scope="module")
def ordinary():
    return sheet_content(samples.ordinary(markdown="## Own words", plain=True))


@pytest.fixture(scope="module")
def page(ordinary):
    return sheet_html(ordinary)


def assert_harmless(page: str) -> None:
    found = Elements(page)
    names = {name for name, _ in found.elements}
    assert not names & {
        "script",
        "iframe",
        "object",
        "embed",
        "link",
        "base",
        "form",
        "foreignobject",
        "animate",
    }
    for _name, attributes in found.elements:
        for key, value in attributes.items():
            assert not key.startswith("on"), (key, value)
            assert key != "style"
            if key in ("href", "xlink:href", "src", "action", "srcset"):
                assert value.startswith(
                    ("#", "data:image/png;base64,", "sheets/", "pack.pdf", "schedule.csv")
                ), value
    addresses = set(re.findall(r"https?://[^\s\"'<)]+", page))
    assert addresses <= {"http://www.w3.org/2000/svg"}  # the name of SVG, which nothing fetches


def test_one_file_without_script_or_outside_address(page):
    assert_harmless(page)
    assert "url(data:font/woff2" in page


def test_policy_lets_only_its_own_style_sheet_in(page):
    found = Elements(page)
    (policy,) = [meta["content"] for meta in found.of("meta") if "http-equiv" in meta]
    assert policy.startswith("default-src 'none';")
    assert "unsafe" not in policy
    digest = base64.b64encode(hashlib.sha256(found.style.encode()).digest()).decode()
    assert f"style-src 'sha256-{digest}'" in policy


def test_lines_can_be_linked_to_and_links_lead_somewhere(page):
    found = Elements(page)
    assert len(set(found.ids)) == len(found.ids)
    assert {"line-2.01", "line-3.02", "line-3.05"} <= set(found.ids)
    targets = [anchor["href"] for anchor in found.of("a")]
    assert all(target[1:] in found.ids for target in targets if target.startswith("#"))
    assert "#line-9.99" not in targets  # named as a source, but not on this sheet
    assert "9.99" in found.text
    sources = page[page.index('id="line-3.02"') : page.index('id="line-3.03"')]
    links = re.sub(r' title="[^"]*"', "", sources)
    assert 'from <a href="#line-2.02">2.02</a>, <a href="#line-2.03">2.03</a>' in links
    # whoever points at a link is told what the line says
    assert sources.count(' title="') == 3  # the fourth is no line of this sheet
    assert ": " in sources.split(' title="')[1].split('"')[0]


def test_landmarks_language_and_alternatives(page):
    found = Elements(page)
    assert found.of("html") == [{"lang": "en"}]
    for landmark in ("header", "main", "footer", "nav"):
        assert len(found.of(landmark)) == 1
    assert len(found.of("h1")) == 1
    for formula in (element for _, element in found.elements if element.get("role") == "math"):
        assert formula["aria-label"].strip()
    labels = [drawing["aria-label"] for drawing in found.of("svg") if drawing.get("role") == "img"]
    assert "bending moment, largest 54.0 kN·m at 3.00 m" in labels
    assert all(picture["alt"] for picture in found.of("img"))
    bars = [drawing for drawing in found.of("svg") if "aria-hidden" in drawing]
    assert len(bars) == 4


def test_formulas_are_mathml_and_verdicts_are_words(page):
    found = Elements(page)
    assert len(found.of("math")) > 40
    assert page.count("<strong>not satisfied</strong>") == 2  # the line, and its row of the schedule
    assert ">satisfied<" in page
    line = page[page.index('id="line-3.02"') : page.index('id="line-3.03"')]
    assert 'aria-label="equal largest moment, 10.06 kN/m"' in line
    assert "<mfrac>" in line
    assert line.count('<span class="sign">=</span>') == 3


def test_inner_names_of_figures_do_not_collide(page):
    assert 'id="f1-c"' in page
    assert 'id="f2-c"' in page
    assert 'clip-path="url(#f2-c)"' in page


def test_title_block_and_foot(page):
    text = Elements(page).text
    for words in (
        "2417",
        "Boat workshop, loft floor",
        "Norrhamn building office",
        "NB-2026-118",
        "1 Dec 2026",
        "K. Lindqvist",
        "calcpack 0.1.0",
        "concrete_beam_en1992 1.0",
        "input 3f9a07c1",
        "reviewed and sealed by a licensed engineer",
    ):
        assert words in text


def test_hostile_words_are_shown_as_they_are():
    page = sheet_html(sheet_content(samples.hostile()))
    assert_harmless(page)
    text = squeezed(Elements(page).text)
    for words in samples.HOSTILE:
        assert squeezed(words) in text
    assert text.count(squeezed(samples.HOSTILE[4])) > 12
    for words in samples.NOT_FORMULAS[:5]:
        assert squeezed(words) in text
    assert "49" not in text.replace("1049", "")


def test_blocks_with_nothing_in_them_do_no_harm():
    page = sheet_html(sheet_content(samples.notebook([samples.empties()])))
    assert_harmless(page)
    assert 'id="line-1.03"' in page


def test_same_content_same_bytes(ordinary, page):
    again = sheet_content(samples.ordinary(markdown="## Own words", plain=True))
    assert sheet_html(again) == page


def test_paper_number_and_revised_lines(ordinary):
    submission = ordinary.submission.model_copy(update={"paper": "Letter"})
    content = dataclasses.replace(
        ordinary, submission=submission, changed=frozenset({"3.01"}), numbers=SheetNumbers(first=7, of=31)
    )
    page = sheet_html(content)
    assert "@page{size: letter" in page
    assert "sheet <strong>7 of 31</strong>" in page
    assert page.count("<strong>revised</strong>") == 1
    assert '<div class="line hence changed" id="line-3.01">' in page
