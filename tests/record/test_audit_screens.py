"""The page for the screen: an untouched one agrees, any other digit, word or hidden thing is named."""

from __future__ import annotations

import json
import random
import re
from dataclasses import replace

import pytest

from calcpack.job.errors import CalcpackError
from calcpack.record.audit import audit_sheet
from calcpack.record.auditing.copies import comparisons
from calcpack.record.auditing.files import find_target
from calcpack.record.auditing.findings import Verdict
from calcpack.record.auditing.given import read_notebook
from calcpack.record.auditing.reading import read_record
from calcpack.record.auditing.screens import audit_screen

DIGITS = 200
NOTHING: dict[str, str] = {}


@pytest.fixture(scope="module")
def sheet(loft):
    """Record and page of a sheet with all kinds of lines."""
    path = sorted((loft / "sheets").glob("B*.json"))[0]
    return read_record(path.read_bytes(), path.name), path.with_suffix(".html").read_text(encoding="utf-8")


def wrong(record, page: str | bytes, compared=NOTHING) -> list[str]:
    content = page if isinstance(page, bytes) else page.encode()
    found = list(audit_screen(record, content, "B1.html", compared))
    assert len(found) >= len(record.lines)
    return [f"{each.place}: {each.remark}" for each in found if each.verdict is Verdict.WRONG]


def test_an_untouched_page_agrees_line_by_line(sheet):
    record, page = sheet
    assert wrong(record, page) == []
    assert len(list(audit_screen(record, page.encode(), "B1.html"))) == len(record.lines) + 1
    assert list(audit_screen(record, None, "B1.html")) == []


def results(page: str) -> list[tuple[str, int]]:
    """Line and place of every digit of a printed value; a requirement's value is its verdict."""
    found = []
    for line in re.finditer(
        r'<div class="line (?:take|hence)[a-z ]*" id="line-([0-9.]+)">.*?<div class="notes">', page, re.S
    ):
        for value in re.finditer(r"<b>([^<]*[0-9][^<]*)</b>", line[0]):
            start = line.start() + value.start(1)
            found += [(line[1], start + at) for at, letter in enumerate(value[1]) if letter in "0123456789"]
    return found


def test_any_digit_of_a_printed_value_is_found(sheet):
    record, page = sheet
    chance = random.Random(7)
    places = results(page)
    assert len(places) > 100
    for line, place in chance.sample(places, min(DIGITS, len(places))):
        digit = chance.choice([each for each in "0123456789" if each != page[place]])
        changed = page[:place] + digit + page[place + 1 :]
        found = wrong(record, changed)
        assert found[:1] == [f"B1.html, line {line}: the page shows this line with another value"], page[
            place - 20 : place + 9
        ]


@pytest.fixture(scope="module")
def steel(loft):
    """A sheet with requirements: its files, its record, its page, what its notebook compares."""
    (files,) = (each for each in find_target(loft).sheets if each.record_name == "J1.json")
    notebook = read_notebook(files.notebook_bytes(), "J1.ipynb")
    page = files.screen_bytes().decode("utf-8")
    return files, read_record(files.record, "J1.json"), page, comparisons(notebook)


def compared_digits(text: str, sides: str) -> list[int]:
    """Places of the digits of what is compared, where it stands last in a line's text."""
    text = re.sub("<[^>]*>", lambda tag: " " * len(tag[0]), text)
    found, at = [], len(text)
    for letter in reversed(sides):
        if letter.isdigit() or letter == ".":
            at = text.rindex(letter, 0, at)
            found += [at] if letter.isdigit() else []
    return found


def test_any_digit_that_a_requirement_compares_is_found_on_the_screen(steel):
    _, record, page, sides = steel
    assert wrong(record, page, sides) == []
    required = [line.no for line in record.lines if line.kind == "require"]
    assert required == list(sides)
    count = 0
    for number in required:
        start = page.index(f'id="line-{number}"')
        text = page[start : page.index('<div class="notes">', start)]
        for place in compared_digits(text, re.sub("[⁰¹²³⁴⁵⁶⁷⁸⁹]", "", sides[number])):
            changed = text[:place] + str((int(text[place]) + 1) % 10) + text[place + 1 :]
            assert wrong(record, page.replace(text, changed), sides) == [
                f"B1.html, line {number}: the page shows this line with another value"
            ]
            count += 1
    assert count > 40


def test_any_digit_that_a_requirement_compares_is_found_in_the_notebook(steel):
    files, record, _, _ = steel
    notebook = read_notebook(files.notebook_bytes(), "J1.ipynb")
    rows = [block["rows"][-1] for block in notebook.lines.values() if block["kind"] == "require"]
    assert len(rows) == sum(line.kind == "require" for line in record.lines)
    count = 0
    for row in rows:
        for side, text in enumerate(row):
            for place in [
                match.start() for match in re.finditer("[0-9](?![^{]*})|[0-9](?=[^{}]*\\xa0)", text)
            ]:
                row[side] = text[:place] + str((int(text[place]) + 1) % 10) + text[place + 1 :]
                changed = replace(files, notebook=json.dumps(notebook.data).encode(), pdf=None, screen=None)
                audit, _ = audit_sheet(changed)
                assert [each for each in audit.wrong if each.group == "second copy"], row[side]
                count += 1
            row[side] = text
    assert count > 40


def test_lines_left_out_doubled_invented_or_reworded(sheet):
    record, page = sheet
    line = record.lines[5]
    start = page.index(f'id="line-{line.no}">') - len('<div class="line take" ')
    start = page.rindex("<div", 0, start + 8)
    end = page.index("</div>\n</div>", start) + len("</div>\n</div>")
    one = page[start:end]
    place = f"B1.html, line {line.no}: the page shows this line"
    assert wrong(record, page.replace(one, "")) == [f"{place} not"]
    assert wrong(record, page.replace(one, one * 2)) == [f"{place} 2 times"]
    reworded = one.replace(line.says[:8], "Another ", 1)
    assert wrong(record, page.replace(one, reworded)) == [f"{place} with other words"]
    other = one.replace(f"line-{line.no}", "line-99.01")
    assert wrong(record, page.replace(one, one + other)) == [
        "B1.html, line 99.01: the page shows a line that the record does not have"
    ]


@pytest.mark.parametrize(
    "hidden",
    [
        "<script>document.title = 1</script>",
        "<SCRIPT src=x>",
        "<!-- a remark -->",
        "<style>.line { display: none }</style>",
        '<p onclick="x()">a</p>',
        "<p onclick=x()>a</p>",
        "<img src='x'>",
        '<a href="javascript:x()">a</a>',
        "<iframe></iframe>",
        '<svg><a xlink:href="javascript:x()"/></svg>',
        '<svg/onload="x()">',
        "<template>",
    ],
)
def test_what_no_sheet_has_is_named(sheet, hidden):
    record, page = sheet
    assert wrong(record, page.replace("</body>", hidden + "</body>")) == [
        "B1.html: the page holds what no sheet has"
    ]


def test_words_of_a_sheet_may_look_like_it(sheet):
    record, page = sheet
    harmless = '<p title="one = 3, only=4">javascript: one = 3, only=4, &lt;script&gt; ="data:text"</p>'
    assert wrong(record, page.replace("</body>", harmless.replace('="data:text"', "") + "</body>")) == []


def test_no_page_of_a_sheet(sheet):
    record, _ = sheet
    assert wrong(record, "<p>nothing</p>")[0] == (
        "B1.html: the page has not one style sheet at its head, as a sheet has"
    )
    with pytest.raises(CalcpackError, match=r"B1\.html: it is no text"):
        wrong(record, b"\xff\xfe<html>")
