"""The pack: numbers, index, tables, manifest, places to sign; a sheet's own file equals its pages here."""

from __future__ import annotations

import csv
import dataclasses
import io
import shutil
import subprocess

import pytest
import samples
from pages import Elements, bookmarks, identification, page_texts, reader, squeezed
from test_export_html import assert_harmless

from calcpack.export import (
    Attached,
    Mathematics,
    Pack,
    PackedFile,
    Section,
    SheetNumbers,
    build_pack,
    index_html,
    paginate,
    schedule_csv,
    sheet_content,
    sheet_pdf,
)
from calcpack.export.blocks import read_blocks
from calcpack.job.errors import CalcpackError

SUPPORTS = {"C1": {"dead": 20.0, "live": 15.25}, "W1": {"dead": 60.1, "live": 25.0}}


def made(paper: str = "A4", **changes) -> Pack:
    submission = {"paper": paper, "check_level": "third party", "attachments": True, "allow_markup": False}
    sheets = tuple(
        sheet_content(samples.ordinary(mark, submission=submission)) for mark in ("B1", "B2", "B10")
    )
    appendix = samples.notebook([samples.working()], mark="D1", title="Derivations", submission=submission)
    (plan,) = read_blocks(
        [
            {
                "type": "figure",
                "svg": samples.figure(160, 90),
                "alt": "framing plan of 3 beams",
                "width_mm": 160,
            }
        ]
    )
    basis = Section.of(
        "Basis of design",
        [
            {"type": "heading", "level": 1, "number": "1", "text": "Codes"},
            {"type": "facts", "rows": [["actions", "EN 1990"]]},
            {"type": "text", "runs": ["Load factor ", {"math": "\\gamma_{\\text{G}} = 1.35"}]},
        ],
    )
    files = tuple(
        PackedFile(f"sheets/{content.mark}.{ending}", "") for content in sheets for ending in ("html", "pdf")
    )
    pack = Pack(
        header=sheets[0].header,
        submission=sheets[0].submission,
        program="calcpack 0.1.0",
        input_digest="3f9a07c1" * 8,
        sheets=sheets,
        supports=SUPPORTS,
        key_plan=plan,
        basis=(basis,),
        appendices=(sheet_content(appendix),),
        files=files,
    )
    return dataclasses.replace(pack, **changes)


def numbered(pack: Pack, mathematics: Mathematics) -> Pack:
    numbers = paginate(pack, mathematics)
    return dataclasses.replace(
        pack,
        sheets=tuple(content.numbered(numbers[content.mark]) for content in pack.sheets),
        appendices=tuple(content.numbered(numbers[content.mark]) for content in pack.appendices),
    )


@pytest.fixture(scope="module")
def mathematics():
    return Mathematics()


@pytest.fixture(scope="module")
def pack(mathematics):
    return numbered(made(), mathematics)


@pytest.fixture(scope="module")
def built(pack, mathematics):
    return build_pack(pack, mathematics)


def test_one_conforming_file_that_is_the_same_twice(pack, built):
    assert identification(built.pdf) == {"pdfaid:part": "3", "pdfaid:conformance": "A", "pdfuaid:part": "1"}
    assert build_pack(pack, Mathematics()).pdf == built.pdf


def test_sheets_are_numbered_over_the_whole_pack(built):
    texts = page_texts(built.pdf)
    assert {numbers.of for numbers in built.numbers.values()} == {len(texts)}
    assert list(built.numbers) == ["B1", "B2", "B10", "D1"]
    for number, text in enumerate(texts[1:], start=2):  # the cover has no running head
        assert f"sheet {number} of {len(texts)}" in text
    for mark, numbers in built.numbers.items():
        assert squeezed(f"{mark} page 1 of") in squeezed(texts[numbers.first - 1])


@pytest.mark.parametrize("paper", ["A4", "Letter"])
def test_a_sheets_own_file_has_the_pages_of_the_pack(paper, mathematics, tmp_path):
    pack = numbered(made(paper), mathematics)
    whole = build_pack(pack, mathematics).pdf
    texts = page_texts(whole)
    for content in pack.bound:
        own = sheet_pdf(content, mathematics)
        own_texts = page_texts(own)
        first, count = content.numbers.first, len(own_texts)
        assert [squeezed(text) for text in own_texts] == [
            squeezed(text) for text in texts[first - 1 : first - 1 + count]
        ]
    assert pictures(own, tmp_path, 1, count) == pictures(whole, tmp_path, first, count)


def pictures(pdf: bytes, folder, first: int, count: int) -> list[bytes]:
    """Pages as pixels, where there is a program to draw them."""
    if not shutil.which("pdftoppm"):
        return []
    (folder / "a.pdf").write_bytes(pdf)
    ends = ["-f", str(first), "-l", str(first + count - 1)]
    subprocess.run(
        ["pdftoppm", "-r", "60", "-gray", *ends, str(folder / "a.pdf"), str(folder / "a")], check=True
    )
    pages = sorted(folder.glob("a-*.pgm"))
    found = [page.read_bytes() for page in pages]
    for page in pages:
        page.unlink()
    return found


def test_cover_tells_the_permit_file_what_it_asks(built):
    cover = squeezed(page_texts(built.pdf)[0])
    for words in (
        "Boat workshop, loft floor",
        "2417",
        "Quay 4, Norrhamn",
        "Norrhamn Boat Guild",
        "Norrhamn building office",
        "NB-2026-118",
        "office@example.test",
        "Engineer’s seal",
        "K. Lindqvist",
        "SE-10432",
        "prepared",
        "checked",
        "approved",
        "third party",
        "1 Dec 2026",
        "to be reviewed and sealed by a licensed engineer",
        "the local code and authority govern",
    ):
        assert squeezed(words) in cover, words


def test_index_names_every_part_with_its_page(built):
    texts = page_texts(built.pdf)
    index = squeezed(texts[1])
    for title, page in (
        ("Basis of design", 2),
        ("Schedule of beams", None),
        ("Reactions", None),
        ("Manifest", len(texts)),
    ):
        assert squeezed(f"{title}{page or ''}") in index
    for mark, numbers in built.numbers.items():
        title = "Derivations" if mark == "D1" else "Concrete beam, EN 1992-1-1"
        assert squeezed(f"{mark} {title}{numbers.first}") in index


def test_bookmarks_of_all_sheets(built):
    tops = [(title, page) for depth, title, page in bookmarks(built.pdf) if depth == 0]
    assert [title for title, _ in tops] == [
        "Boat workshop, loft floor",
        "Index",
        "Basis of design",
        "Framing plan",
        "Schedule of beams",
        "Reactions",
        "B1 Concrete beam, EN 1992-1-1",
        "B2 Concrete beam, EN 1992-1-1",
        "B10 Concrete beam, EN 1992-1-1",
        "D1 Derivations",
        "Manifest",
    ]
    places = dict(tops)
    assert places["B2 Concrete beam, EN 1992-1-1"] == built.numbers["B2"].first - 1


def test_annex_stands_between_the_sheets_and_the_manifest(pack, mathematics):
    lines = {"type": "plain", "numbered": True, "text": 'format = 1\nnumber = "2417"'}
    built = build_pack(
        dataclasses.replace(numbered(made(annex=(Section.of("Input", [lines]),)), mathematics)), mathematics
    )
    tops = [title for depth, title, _ in bookmarks(built.pdf) if depth == 0]
    assert tops[-3:] == ["D1 Derivations", "Input", "Manifest"]
    assert squeezed('2 number = "2417"') in squeezed(page_texts(built.pdf)[-2])


def test_schedule_and_reactions(built):
    general = squeezed("".join(page_texts(built.pdf)[1 : built.numbers["B1"].first - 1]))
    for words in ("110.7", "−42.5", "61.3", "8.40", "bending", "0.76", "6.00 + 5.00"):
        assert squeezed(words) in general
    assert squeezed("sum 80.1 40.3") in general  # 20.0 + 60.1 and 15.25 + 25.0, rounded once


def test_places_to_sign_lie_on_the_cover_in_their_order(built):
    assert [place.role for place in built.signing] == ["prepared", "checked", "approved"]
    tops = []
    for place in built.signing:
        left, bottom, right, top = place.box
        assert place.page == 0
        assert 0 < left < right < 595.28
        assert 0 < bottom < top < 841.89
        assert right - left > 120
        assert top - bottom > 25
        tops.append(top)
    assert tops == sorted(tops, reverse=True)


def test_manifest_names_files_and_hashes(pack, mathematics):
    files = tuple(PackedFile.of(file.name, file.name.encode()) for file in pack.files)
    texts = page_texts(build_pack(dataclasses.replace(pack, files=files), mathematics).pdf)
    last = squeezed(texts[-1])
    assert files[0].sha256 != files[1].sha256
    for file in files:
        assert f"{file.name}{file.sha256}" in last


def test_attachments_present_and_absent(pack, built, mathematics):
    marks = ("B1", "B2", "B10", "D1")
    expected = {f"{mark}.{ending}" for mark in marks for ending in ("ipynb", "json")}
    assert set(reader(built.pdf).attachments) == expected
    more = dataclasses.replace(pack, attached=(Attached("job.json", b"{}\n", "application/json", "The job"),))
    assert reader(build_pack(more, mathematics).pdf).attachments["job.json"] == [b"{}\n"]
    none = pack.submission.model_copy(update={"attachments": False})
    assert reader(build_pack(dataclasses.replace(more, submission=none), mathematics).pdf).attachments == {}


def test_stale_numbers_are_refused(pack, mathematics):
    first = pack.sheets[0].numbered(SheetNumbers(first=9, of=31))
    with pytest.raises(CalcpackError, match="B1: the sheet is numbered 9 of 31, but the pack puts it at"):
        build_pack(dataclasses.replace(pack, sheets=(first, *pack.sheets[1:])), mathematics)


def test_the_same_mark_twice_is_refused(mathematics):
    pack = made()
    with pytest.raises(CalcpackError, match="two sheets of the pack have the mark 'B1'"):
        paginate(dataclasses.replace(pack, appendices=pack.sheets[:1]), mathematics)


def test_a_sheet_without_results_is_named(mathematics):
    pack = made()
    bare = dataclasses.replace(pack.sheets[0], record=None)
    with pytest.raises(CalcpackError, match="B1: the sheet has no record of results"):
        paginate(dataclasses.replace(pack, sheets=(bare,)), mathematics)


def test_index_page_leads_to_every_sheet(pack, mathematics):
    page = index_html(pack, mathematics)
    assert_harmless(page)
    found = Elements(page)
    leads = [anchor["href"] for anchor in found.of("a")]
    for mark in ("B1", "B2", "B10", "D1"):
        assert f"sheets/{mark}.html" in leads
        assert f"sheets/{mark}.pdf" in leads
    assert "framing plan of 3 beams" in [drawing.get("aria-label") for drawing in found.of("svg")]
    assert "110.7" in found.text
    assert index_html(pack, Mathematics()) == page


def test_schedule_as_csv(pack, built):
    text = schedule_csv(pack.sheets, {mark: numbers.first for mark, numbers in built.numbers.items()})
    rows = list(csv.DictReader(io.StringIO(text)))
    assert [row["mark"] for row in rows] == ["B1", "B2", "B10"]
    assert rows[0]["sheet"] == str(built.numbers["B1"].first)
    assert (rows[0]["spans [m]"], rows[0]["dead [kN]"], rows[0]["snow [kN]"]) == ("6 + 5", "60", "")
    assert (rows[0]["moment min [kNm]"], rows[0]["ratio"], rows[0]["satisfied"]) == ("-42.5", "0.757", "yes")


def test_no_cell_of_the_csv_is_a_formula(pack):
    sheet = dataclasses.replace(pack.sheets[0], mark='=HYPERLINK("x")')
    (row,) = csv.DictReader(io.StringIO(schedule_csv([sheet], {})))
    assert row["mark"] == '\'=HYPERLINK("x")'


def test_hostile_titles_in_the_pack(mathematics):
    pack = made()
    hostile = sheet_content(samples.hostile())
    pack = dataclasses.replace(pack, header=hostile.header, sheets=(hostile,), appendices=())
    built = build_pack(numbered(pack, mathematics), mathematics)
    cover = squeezed(page_texts(built.pdf)[0])
    for words in (
        samples.HOSTILE[0],
        samples.HOSTILE[2],
        samples.HOSTILE[4],
        samples.HOSTILE[1],
        samples.HOSTILE[3],
    ):
        assert squeezed(words) in cover
    assert_harmless(index_html(pack, mathematics))


def test_us_units_and_letter():
    pack = made("Letter")
    header = pack.header.model_copy(update={"units": "US"})
    pack = numbered(dataclasses.replace(pack, header=header), Mathematics())
    texts = page_texts(build_pack(pack, Mathematics()).pdf)
    general = squeezed("".join(texts[1:4]))
    assert "kip·ft" in general
    assert "81.6" in general  # 110.7 kNm
    assert "13.8" in general  # 61.3 kN
