"""Tables against lines and results: untouched ones agree, any digit changed in a table that is known is found."""

from __future__ import annotations

import copy
import json
import re
from dataclasses import replace

import pytest

from calcpack.record.audit import audit_sheet, open_sheet
from calcpack.record.auditing.files import find_target
from calcpack.record.auditing.findings import Verdict
from calcpack.record.auditing.given import Notebook
from calcpack.record.auditing.pages import audit_pages
from calcpack.record.auditing.screens import audit_screen
from calcpack.record.auditing.tables import audit_tables, shown_rows

KNOWN = {
    "largest": 4,
    "combination": 20,
    "": 6,
    "equal": 20,
}  # first head -> numbers held one by one, at least


@pytest.fixture(scope="module", params=["B1", "B2", "J1"])
def sheet(request, loft):
    """A sheet opened, with its files."""
    (files,) = (each for each in find_target(loft).sheets if each.record_name == f"{request.param}.json")
    return open_sheet(files), files


def wrong(opened, notebook):
    found = audit_tables(opened.record, notebook, opened.lines)
    return [each for each in found if each.verdict is Verdict.WRONG]


def test_untouched_tables_agree(sheet):
    opened, _ = sheet
    found = list(audit_tables(opened.record, opened.notebook, opened.lines))
    agreeing = [each for each in found if each.verdict is Verdict.AGREES]
    assert len(agreeing) == len(opened.notebook.tables)
    assert [each for each in found if each.verdict is Verdict.WRONG] == []
    assert sum(int(each.says.split()[0]) for each in agreeing) > 50


def test_any_digit_of_a_table_that_is_known_is_found(sheet):
    opened, _ = sheet
    count = dict.fromkeys(KNOWN, 0)
    for number, table in enumerate(opened.notebook.tables):
        first = table["columns"][0]["head"]
        if first not in KNOWN or any("limit" in str(column["head"]) for column in table["columns"][3:]):
            continue
        for i, row in enumerate(table["rows"]):
            for j, cell in enumerate(row):
                if not isinstance(cell, str) or not re.fullmatch(r"−?[0-9][0-9.]*(\s\S+)?", cell):
                    continue
                if first == "largest" and (j == 2 and row[0] not in ("moment, sagging", "moment, hogging")):
                    continue  # where the shear and the deflection are largest, no result says
                digits = [at for at, letter in enumerate(cell) if letter in "0123456789"]
                for at in digits:
                    other = cell[:at] + str((int(cell[at]) + 1) % 10) + cell[at + 1 :]
                    assert spoilt(opened, number, i, j, other), (first, row, cell, other)
                count[first] += 1
    assert all(count[first] >= least for first, least in KNOWN.items()), count


def spoilt(opened, number, i, j, other):
    """Whether a table with one cell changed is found wrong."""
    tables = copy.deepcopy(opened.notebook.tables)
    tables[number]["rows"][i][j] = other
    notebook = Notebook(opened.notebook.data, opened.notebook.name)
    notebook.__dict__["tables"] = tables
    return wrong(opened, notebook)


def test_a_table_on_the_screen_shows_the_notebooks_rows(sheet):
    opened, files = sheet
    page, rows = files.screen_bytes().decode("utf-8"), shown_rows(opened.notebook)
    assert len(rows) >= 8

    def missing(text):
        found = audit_screen(opened.record, text.encode(), "x.html", {}, rows)
        return [each for each in found if each.verdict is Verdict.WRONG and "table" in each.place]

    assert missing(page) == []
    cells = list(re.finditer(r'<td class="right-side" dir="auto">([^<]*[0-9][^<]*)</td>', page))
    assert len(cells) > 30
    for cell in cells[:: max(1, len(cells) // 40)]:
        place = cell.start(1) + re.search("[0-9]", cell[1]).start()
        digit = str((int(page[place]) + 1) % 10)
        assert missing(page[:place] + digit + page[place + 1 :]), cell[0]


def test_a_table_on_paper_shows_the_notebooks_rows(sheet):
    opened, files = sheet
    pages, rows = files.page_texts(), shown_rows(opened.notebook)

    def missing(changed):
        found = audit_pages(opened.record, changed, {}, rows)
        return [each for each in found if each.verdict is Verdict.WRONG and "table" in each.place]

    assert missing(pages) == []
    count = 0
    for number, page in enumerate(pages):
        for row in re.finditer(r"^R[0-9] (?:wall|column|beam) .*$", page, re.M):
            for digit in re.finditer("[0-9]", row[0]):
                place = row.start() + digit.start()
                other = page[:place] + str((int(page[place]) + 1) % 10) + page[place + 1 :]
                assert missing([*pages[:number], other, *pages[number + 1 :]]), row[0]
                count += 1
    assert count > 20


@pytest.mark.parametrize(
    "table",
    [
        {"columns": [], "rows": [[]]},
        {"columns": [{}], "rows": [[{"math": "x"}], 7, ["5 kN"] * 9]},
        {"columns": [{"head": "equal"}, {"head": "w_x kN/m"}], "rows": [["shear", "x"], ["y"]]},
        {"columns": [{"head": ""}, {"head": "passed on to"}], "rows": [["R9", "w"], ["", ""], [[], {}]]},
        {"columns": [{"head": "combination"}, {"head": "limit state"}], "rows": [[{}, None]]},
        {"columns": [{"head": "largest"}, {"head": "value"}], "rows": [["moment, sagging"]]},
        {"columns": [None, "x"], "rows": [[["1.5"], "9" * 400]]},
        {"columns": [{"head": ["a", {"b": 1}]}], "rows": [[{"line": 4}]], "caption": 7},
    ],
)
def test_tables_like_no_other_end_in_no_trace(loft, table):
    (files, *_) = find_target(loft).sheets
    data = json.loads(files.notebook_bytes())
    for cell in data["cells"]:
        for output in cell.get("outputs", []):
            held = output.get("data", {}).get("application/vnd.calcpack.blocks+json")
            if held:
                held["blocks"].append({"type": "table", **table})
                changed = replace(files, notebook=json.dumps(data).encode(), pdf=None)
                audit, _ = audit_sheet(changed)
                assert audit.findings
                return
