"""Editions compared; changes marked in the new pack; what is unchanged left alone; answers to comments."""

from __future__ import annotations

import csv
import io
import json
import random
import signal
import time

import pypdf
import pytest
import signing_packs as packs

from calcpack.build import build_job
from calcpack.job.errors import CalcpackError
from calcpack.record.changes import as_csv, as_text
from calcpack.record.comments import comments_section
from calcpack.record.compare import compare
from calcpack.record.editions import Edition, SheetRecord, read_edition

JOB = """\
format = 1
[job]
number = "8"
title = "Two bays"
revision = "{revision}"
date = 2026-12-0{day}
[grid]
x = {{ A = "0 m", B = "4 m", C = "8 m" }}
y = {{ 1 = "0 m", 2 = "4 m" }}
[sections.s]
shape = "rectangle"
width = "200 mm"
depth = "400 mm"
[materials.m]
grade = "C25/30"
[[panel]]
mark = "P1"
corners = ["A1", "B2"]
thickness = "150 mm"
live = "2 kPa"
[[panel]]
mark = "P2"
corners = ["B1", "C2"]
thickness = "150 mm"
live = "{live} kPa"
[[beam]]
mark = "B1"
line = ["A1", "B1"]
section = "s"
material = "m"
[[beam]]
mark = "B2"
line = ["B1", "C1"]
section = "s"
material = "m"
[[beam.load]]
case = "dead"
line = "4 kN/m"
{limit}
[[wall]]
mark = "W1"
line = ["A1", "A2"]
[[wall]]
mark = "W2"
line = ["B1", "B2"]
[[wall]]
mark = "W3"
line = ["C1", "C2"]
[[wall]]
mark = "W4"
line = ["A2", "C2"]
"""


def line(no, says, value, **more):
    return {
        "no": no, "kind": "hence", "symbol": "M", "says": says, "value": value, "unit": "kN*m",
        "shown": f"{value} kN·m", "expression": {"op": "number", "value": value}, **more,
    }  # fmt: skip


def edition(*sheets, revision="A", date="2026-12-01"):
    read = [
        SheetRecord.model_validate(
            {"mark": mark, "revision": revision, "job": {"date": date, "revision": revision}, "lines": lines}
        )
        for mark, lines in sheets
    ]
    return Edition(f"revision {revision}", {each.mark: each for each in read})


def test_a_line_put_in_does_not_make_the_others_new():
    old = edition(("B1", [line("1.01", "first", 2.0), line("1.02", "second", 3.0)]))
    new = edition(
        ("B1", [line("1.01", "first", 2.0), line("1.02", "between", 9.0), line("1.03", "second", 3.3)]),
        revision="B",
    )
    found = compare(old, new).lines["B1"]
    assert [(each.old and each.old.no, each.new and each.new.no) for each in found] == [
        (None, "1.02"),
        ("1.02", "1.03"),
    ]
    assert found[1].percent == pytest.approx(10.0)
    assert compare(old, new).marked("B1") == ("1.02", "1.03")
    assert compare(old, old).unchanged == ("B1",)


def test_what_rounding_leaves_is_no_change():
    old = edition(("B1", [line("1.01", "first", 2.0)]))
    new = edition(("B1", [line("1.01", "first", 2.0 * (1 + 1e-13), shown="2.0 kN·m")]))
    assert compare(old, new).unchanged == ("B1",)
    other = edition(("B1", [line("1.01", "first", 2.0, cite="EN 1992-1-1 6.1")]))
    assert compare(old, other).changed == ("B1",)


def test_requirements_that_change_side_and_beams_that_come_and_go():
    before = line("2.01", "Deflection", 1.0, kind="require", symbol="", passes=True)
    after = before | {"value": 0.0, "passes": False}
    comparison = compare(edition(("B1", [before]), ("B2", [])), edition(("B1", [after]), ("B3", [])))
    assert [(each.mark, each.turned) for each in comparison.turned] == [("B1", "not satisfied any more")]
    assert (comparison.added, comparison.removed) == (("B3",), ("B2",))
    said = as_text(comparison)
    assert "new: B3" in said
    assert "left out: B2" in said
    assert "B1 line 2.01: Deflection: not satisfied any more" in said
    table = list(csv.DictReader(io.StringIO(as_csv(comparison))))
    assert {row["beam"] for row in table} == {"B1", "B2", "B3"}
    assert table[-1]["requirement"] == "not satisfied any more"


def test_what_the_analysis_finds_is_no_input():
    def taken(value, origin):
        return line("3.01", "Value", value, kind="take", origin=origin)

    for origin, counts in (("panel P2 live", 1), ("analysis, envelope", 0), ("chosen", 0)):
        comparison = compare(edition(("B1", [taken(1.0, origin)])), edition(("B1", [taken(2.0, origin)])))
        assert len(comparison.inputs) == counts
        assert comparison.changed == ("B1",)


def test_text_of_a_record_is_no_formula_in_a_table():
    comparison = compare(edition(("=B1", [line("1", "@x", 1.0)])), edition(("=B1", [line("1", "@x", -2.0)])))
    (row,) = csv.DictReader(io.StringIO(as_csv(comparison)))
    assert (row["beam"], row["words"], row["now"]) == ("'=B1", "'@x", "-2.0 kN·m")


def test_what_is_no_edition(tmp_path):
    for source, words in (("nowhere", "holds no register"), (str(tmp_path), "holds no records")):
        with pytest.raises(CalcpackError, match=words):
            read_edition(source, tmp_path)
    (tmp_path / "sheets").mkdir()
    (tmp_path / "sheets" / "B1.json").write_text("[1]")
    with pytest.raises(CalcpackError, match=r"'B1\.json' of .* is no sheet's record"):
        read_edition(str(tmp_path))


# ------------------------------------------------------------------ a new revision built


@pytest.fixture(scope="module")
def revisions(tmp_path_factory):
    """Three revisions of a job, each built since the one before; only P2's live load changes."""
    top = tmp_path_factory.mktemp("revisions")
    before, folders = None, {}
    for day, (revision, live) in enumerate((("A", "2"), ("B", "3"), ("C", "3.2")), start=1):
        home = top / f"job{revision}"
        home.mkdir()
        limit = "[beam.design]\ndeflection_limits = { total = 6000 }" if revision == "C" else ""
        text = JOB.format(revision=revision, day=day, live=live, limit=limit)
        (home / "job.toml").write_text(text, encoding="utf-8")
        if revision == "C":
            (home / "comments.csv").write_text(
                "no,sheet,comment,answer,line\n7,B2,Why so light?,It is 3.2 kPa now.,3.09\n8,,And?,,\n"
            )
        folders[revision] = top / revision
        formats = frozenset({"pdf", "html", "notebook"} if revision == "C" else {"html", "notebook"})
        begun = time.monotonic()
        build_job(
            home / "job.toml", folders[revision], formats=formats, since=before and read_edition(str(before))
        )
        before = folders[revision]
        if revision == "B":
            folders["seconds"] = time.monotonic() - begun
    return folders


def test_what_changed_is_said(revisions):
    comparison = compare(*(read_edition(str(revisions[each])) for each in "AB"))
    assert (comparison.changed, comparison.unchanged) == (("B2",), ("B1",))
    (given,) = comparison.inputs
    assert (given.origin, given.old, given.new, given.marks) == (
        "panel P2 live", "2.00\u00a0kPa", "3.00\u00a0kPa", ("B2",),
    )  # fmt: skip
    shear = next(each for each in comparison.lines["B2"] if each.line.says.startswith("All the live load"))
    assert shear.percent == pytest.approx(50.0)


def test_changed_lines_are_marked_on_the_sheet(revisions):
    notebook = json.loads((revisions["B"] / "sheets" / "B2.ipynb").read_text(encoding="utf-8"))
    marked = notebook["metadata"]["calcpack"]["changed"]
    comparison = compare(*(read_edition(str(revisions[each])) for each in "AB"))
    assert tuple(marked) == comparison.marked("B2")
    page = (revisions["B"] / "sheets" / "B2.html").read_text(encoding="utf-8")
    assert page.count("<strong>revised</strong>") == len(marked)
    untouched = (revisions["B"] / "sheets" / "B1.html").read_text(encoding="utf-8")
    assert "<strong>revised</strong>" not in untouched


def test_an_unchanged_sheet_keeps_its_bytes_and_its_letter(revisions):
    numbers = [
        json.loads((revisions[each] / "sheets" / "B1.ipynb").read_text())["metadata"]["calcpack"]["sheets"]
        for each in "ABC"
    ]
    assert numbers[1] == numbers[2]
    for ending in ("html", "ipynb", "json"):
        one, other = ((revisions[each] / "sheets" / f"B1.{ending}").read_bytes() for each in "BC")
        assert one == other, ending
    letters = [json.loads((revisions[each] / "sheets" / "B1.json").read_text())["revision"] for each in "ABC"]
    assert letters == [
        "A",
        "B" if numbers[0] != numbers[1] else "A",
        "B" if numbers[0] != numbers[1] else "A",
    ]
    assert json.loads((revisions["C"] / "sheets" / "B2.json").read_text())["revision"] == "C"
    pages = [page.extract_text() for page in pypdf.PdfReader(revisions["C"] / "pack.pdf").pages]
    first = numbers[2]["first"] - 1
    assert f"revision {letters[2]} " in pages[first]
    assert "revision C " in pages[first - 1]


def test_the_new_pack_lists_changes_and_answers(revisions):
    reader = pypdf.PdfReader(revisions["C"] / "pack.pdf")
    text = " ".join(" ".join(page.extract_text() for page in reader.pages[1:4]).split())
    for words in (
        "Changes since revision B", "panel P2 live", "3.00 kPa 3.20 kPa", "not satisfied",
        "Answers to review comments", "It is 3.2 kPa now.", "not answered yet",
    ):  # fmt: skip
        assert words in text.replace("\u00a0", " "), words
    linked = {
        reader.get_destination_page_number(reader.named_destinations[str(note["/Dest"])])
        if isinstance(note.get("/Dest"), str)
        else None
        for page in reader.pages[1:4]
        for note in (each.get_object() for each in page.get("/Annots", ()))
    }
    assert linked
    index = (revisions["C"] / "index.html").read_text(encoding="utf-8")
    assert '<a href="sheets/B2.html#line-3.09">B2 3.09</a>' in index


def test_the_same_edition_builds_the_same_bytes(revisions, tmp_path):
    job = revisions["A"].parent / "jobB" / "job.toml"
    again = tmp_path / "again"
    build_job(job, again, formats=frozenset({"html", "notebook"}), since=read_edition(str(revisions["A"])))
    for path in sorted(again.rglob("*")):
        if path.is_file():
            assert path.read_bytes() == (revisions["B"] / path.relative_to(again)).read_bytes(), path.name


def test_killed_while_building(tmp_path, revisions):
    chance, job = random.Random(2), revisions["A"].parent / "jobA" / "job.toml"
    out = tmp_path / "out"
    killed = 0
    for _ in range(packs.KILLS // 2):
        child = packs.FRESH.Process(target=packs.build_pages, args=(str(job), str(out)))
        child.start()
        child.join(chance.uniform(0.4, 0.95) * revisions["seconds"])
        child.kill()
        child.join()
        killed += child.exitcode == -signal.SIGKILL
        for path in out.rglob("*") if out.exists() else ():
            if path.is_file() and not path.name.endswith(".part"):
                assert path.read_bytes() == (revisions["A"] / path.relative_to(out)).read_bytes()
    assert killed
    packs.build_pages(str(job), str(out))
    for path in revisions["A"].rglob("*"):
        if path.is_file():
            assert (out / path.relative_to(revisions["A"])).read_bytes() == path.read_bytes()


# ------------------------------------------------------------------ comments


def comments(tmp_path, text):
    (tmp_path / "comments.csv").write_text(text, encoding="utf-8")
    return comments_section(tmp_path, {"B1": frozenset({"3.05"}), "B2": frozenset()})


def test_comments_lead_to_their_place(tmp_path):
    assert comments_section(tmp_path, {}) is None
    section = comments(
        tmp_path, "\ufeffNo.,Sheet,Comment,Answer,Line\n1,B1,=Why?,Because.,3.05\n2,B2,And?,,\n"
    )
    (table,) = section.blocks
    shown = [["".join(run.text for run in cell) for cell in row] for row in table.rows]
    assert shown == [["1", "=Why?", "Because.", "B1 3.05"], ["2", "And?", "not answered yet", "B2"]]


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("no,sheet,comment,reply\n", "comments.csv:1: there is no column 'reply'"),
        ("no,sheet,comment\n1,,a\n", "comments.csv:1: the column 'answer' is missing"),
        ("no,sheet,comment,answer\n1,B3,a,b\n", "comments.csv:2: there is no sheet 'B3'"),
        ("no,sheet,comment,answer,line\n\n1,B1,a,b,3.50\n", "comments.csv:3: sheet B1 has no line 3.50"),
        ("no,sheet,comment,answer,line\n1,,a,b,3.05\n", "comments.csv:2: line 3.05 of which sheet?"),
    ],
)
def test_comments_that_lead_nowhere(tmp_path, text, said):
    with pytest.raises(CalcpackError) as caught:
        comments(tmp_path, text)
    assert said in str(caught.value)
