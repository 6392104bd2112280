"""Lines shown in short: the audit sees to it that each names a line in full with the same formula."""

from __future__ import annotations

import json
import shutil

import pytest

from calcpack.record.audit import audit_target

BLOCKS = "application/vnd.calcpack.blocks+json"


def lines_of(notebook):
    def inside(blocks):
        for block in blocks:
            if block["type"] == "line":
                yield block
            for column in block.get("columns", ()) if block["type"] == "columns" else ():
                yield from inside(column)

    for cell in notebook["cells"]:
        for output in cell.get("outputs", ()):
            data = output.get("data", {}).get(BLOCKS)
            yield from inside(data["blocks"] if isinstance(data, dict) else data or ())


@pytest.fixture
def sheet(built, tmp_path):
    """B1's record and notebook in a folder of their own."""
    for ending in ("json", "ipynb"):
        shutil.copy(built("rope_walk") / f"sheets/B1.{ending}", tmp_path / f"B1.{ending}")
    return tmp_path / "B1.json"


def wrong_after(sheet, edit):
    path = sheet.with_suffix(".ipynb")
    notebook = json.loads(path.read_text(encoding="utf-8"))
    lines = list(lines_of(notebook))
    short = next(line for line in lines if line.get("like"))
    edit(short, lines)
    path.write_text(json.dumps(notebook), encoding="utf-8")
    (audited,) = audit_target(sheet, processes=1).sheets
    return short["no"], {each.place: each.remark for each in audited.wrong}


def test_as_it_is_built_nothing_is_wrong(sheet):
    _, wrong = wrong_after(sheet, lambda short, lines: None)
    assert wrong == {}


def test_a_line_with_another_formula_is_not_taken(sheet):
    def edit(short, lines):
        short["like"] = next(
            line["no"] for line in lines if line["kind"] == short["kind"] and line["no"] != short["like"]
        )

    no, wrong = wrong_after(sheet, edit)
    assert "whose formula is another" in wrong[f"line {no}"]


def test_a_line_that_is_short_itself_is_not_taken(sheet):
    def edit(short, lines):
        short["like"] = short["no"]

    no, wrong = wrong_after(sheet, edit)
    assert "not shown in full" in wrong[f"line {no}"]


def test_a_short_line_shows_its_own_value(sheet):
    def edit(short, lines):
        short["rows"] = [["\\textbf{1 mm}"]]

    no, wrong = wrong_after(sheet, edit)
    assert "the notebook does not show it as" in wrong[f"line {no}"]
