"""The sheet on paper: what the file says of itself, what it shows, what it carries."""

from __future__ import annotations

import dataclasses
import json
import shutil
import subprocess

import nbformat
import pytest
import samples
from pages import bookmarks, identification, page_texts, reader, squeezed, structure

from calcpack.export import Mathematics, SheetNumbers, sheet_content, sheet_pdf, typesetting
from calcpack.export.typesetting import settable_formulas, with_known_letters
from calcpack.job.errors import CalcpackError


@pytest.fixture(scope="module")
def ordinary():
    return sheet_content(samples.ordinary(markdown="## Own words", plain=True))


@pytest.fixture(scope="module")
def pdf(ordinary):
    return sheet_pdf(ordinary)


def test_conforms_to_archiving_and_accessibility(pdf):
    assert identification(pdf) == {"pdfaid:part": "3", "pdfaid:conformance": "A", "pdfuaid:part": "1"}
    root = reader(pdf).trailer["/Root"]
    assert root["/Lang"] == "en"
    assert root["/MarkInfo"]["/Marked"]


def test_title_author_and_date_come_from_the_job(pdf):
    about = reader(pdf).metadata
    assert about.title == "B5 Concrete beam, EN 1992-1-1 – job 2417, revision A"
    assert about.author == "K. Lindqvist, M. Achterberg"
    assert about.creation_date.isoformat() == "2026-12-01T00:00:00+00:00"
    assert about.modification_date == about.creation_date


def test_same_content_same_bytes(pdf):
    again = sheet_content(samples.ordinary(markdown="## Own words", plain=True))
    assert sheet_pdf(again, Mathematics()) == pdf


def test_every_formula_and_figure_has_its_alternative(pdf):
    tags = structure(pdf)
    spoken = [alt for kind, alt in tags if kind in ("Formula", "Figure")]
    assert all(alt and alt.strip() for alt in spoken)
    assert "equal largest moment, 10.06 kN/m" in spoken
    assert "plan with beam B5 on line 2" in spoken
    assert "m = S over L = 4.50 m over 6.00 m = 0.750" in spoken
    kinds = {kind for kind, _ in tags}
    assert {"H1", "H2", "H3", "Table", "TH", "TD", "L", "Link", "Caption", "P"} <= kinds


def test_bookmarks_follow_the_headings(pdf):
    assert bookmarks(pdf) == [
        (0, "B5 Concrete beam, EN 1992-1-1", 0),
        (1, "Own words", 0),
        (1, "1 Where this beam stands", 0),
        (1, "2 Taken from the job", 0),
        (1, "3 Load from the panels", 0),
        (1, "4 Analysis", 0),
        (2, "4.1 Derivation", 1),
    ]


def test_running_head_and_foot_on_every_page(pdf):
    texts = page_texts(pdf)
    for number, text in enumerate(texts, start=1):
        for words in (
            f"sheet {number} of {len(texts)}",
            "Boat workshop, loft floor",
            "B5",
            "revision A",
            "1 Dec 2026",
            "prepared K. Lindqvist",
            "checked M. Achterberg",
            f"B5 page {number} of {len(texts)}",
            "calcpack 0.1.0 · template concrete_beam_en1992 1.0 · input 3f9a07c1",
            "reviewed and sealed by a licensed engineer",
        ):
            assert squeezed(words) in squeezed(text), words


def test_numbers_in_the_pack_do_not_change_the_layout(ordinary, pdf):
    numbered = sheet_pdf(ordinary.numbered(SheetNumbers(first=7, of=31)))
    before, after = page_texts(pdf), page_texts(numbered)
    assert len(before) == len(after)
    assert "sheet 7 of 31" in after[0]
    assert reader(numbered).page_labels[0] == "7"
    for number, (old, new) in enumerate(zip(before, after, strict=True)):
        assert old.replace(f"sheet {number + 1} of {len(before)}", f"sheet {number + 7} of 31") == new


def test_results_stay_searchable(pdf):
    text = "\n".join(page_texts(pdf))
    assert "U+" not in text
    for words in (
        "10.06 kN/m",
        "0.750",
        "not satisfied",
        "54.0 kN·m at 3.00 m",
        "own cell: 12 bars",
    ):
        assert words in text


def test_links_lead_to_lines(pdf):
    pages = reader(pdf).pages
    links = [
        note.get_object()
        for page in pages
        for note in page.get("/Annots", [])
        if note.get_object()["/Subtype"] == "/Link"
    ]
    # what is not satisfied, one in the text, two sources of 3.01, three of 3.02 (9.99 is none), one of 3.04
    assert len(links) == 8
    assert all("/URI" not in str(link.get("/A", "")) for link in links)


def test_attachments_are_the_files_themselves(ordinary, pdf):
    carried = reader(pdf).attachments
    assert set(carried) == {"B5.ipynb", "B5.json"}
    assert carried["B5.ipynb"] == [ordinary.notebook]
    assert json.loads(carried["B5.json"][0])["mark"] == "B5"
    nbformat.validate(nbformat.reads(carried["B5.ipynb"][0].decode(), as_version=4))
    without = dataclasses.replace(
        ordinary, submission=ordinary.submission.model_copy(update={"attachments": False})
    )
    bare = sheet_pdf(without)
    assert reader(bare).attachments == {}
    assert identification(bare) == identification(pdf)


@pytest.mark.parametrize(("paper", "size"), [("A4", (595.276, 841.89)), ("Letter", (612, 792))])
def test_paper(ordinary, paper, size):
    content = dataclasses.replace(
        ordinary, submission=ordinary.submission.model_copy(update={"paper": paper})
    )
    box = reader(sheet_pdf(content)).pages[0].mediabox
    assert (float(box.width), float(box.height)) == pytest.approx(size, abs=0.01)


def test_hostile_words_are_shown_as_they_are():
    pdf = sheet_pdf(sheet_content(samples.hostile()))
    text = squeezed("".join(page_texts(pdf)))
    for words in samples.HOSTILE:
        if words.startswith("שלום"):
            assert any(part in text for part in ("שלום", "םולש"))  # in reading or in visual order
        else:
            assert squeezed(with_known_letters(words)) in text, words
    for words in samples.NOT_FORMULAS[:5]:
        assert squeezed(words) in text
    assert "⟨U+6881⟩" in text
    file = reader(pdf)
    assert "/OpenAction" not in file.trailer["/Root"]
    assert b"/JavaScript" not in pdf


def test_blocks_with_nothing_in_them_do_no_harm():
    pdf = sheet_pdf(sheet_content(samples.notebook([samples.empties()])))
    assert identification(pdf)["pdfuaid:part"] == "1"
    assert "1.03" in page_texts(pdf)[0]


def test_a_face_beside_the_designs_is_used(tmp_path, monkeypatch):
    letter = "\u1d81"  # none of the page's faces has it
    cached = (typesetting._fonts, typesetting.settable, typesetting._families_beside)
    page = shutil.copytree(typesetting.page_folder(), tmp_path / "page")
    from matplotlib import get_data_path

    shutil.copy(f"{get_data_path()}/fonts/ttf/STIXGeneral.ttf", page)
    monkeypatch.setattr(typesetting, "page_folder", lambda: page)
    try:
        for function in cached:
            function.cache_clear()
        assert typesetting.with_known_letters(letter) == letter
        assert typesetting.settable_formulas([f'upright("{letter}")']) == [True]
    finally:
        for function in cached:
            function.cache_clear()
    monkeypatch.undo()
    assert typesetting.with_known_letters(letter) == "⟨U+1D81⟩"
    assert typesetting.settable_formulas([f'upright("{letter}")']) == [False]


def words_on_page(pdf: bytes, folder, page: int) -> list[tuple[float, float, str]]:
    """Left and right edge of every word of a page [pt]."""
    if not shutil.which("pdftotext"):
        pytest.skip("pdftotext is not installed")
    (folder / "a.pdf").write_bytes(pdf)
    command = ["pdftotext", "-bbox", "-f", str(page), "-l", str(page), str(folder / "a.pdf"), "-"]
    lines = subprocess.run(command, capture_output=True, text=True, check=True).stdout.splitlines()
    found = []
    for line in lines:
        if "<word" in line:
            parts = line.split('"')
            found.append((float(parts[1]), float(parts[5]), line.split(">")[1].split("<")[0]))
    return found


def terms(count: int) -> list[str]:
    return [
        "w_0",
        *(rf"+ \frac{{\gamma_{{{n}}}\,q_{{{n}}}\,S_{{{n}}}}}{{24\,L_{{{n}}}}}" for n in range(1, count)),
    ]


@pytest.mark.parametrize("narrow", [False, True])
@pytest.mark.parametrize(
    "rows",
    [
        [terms(24), ["\\textbf{9.99 kN}"]],
        [["\\frac{" + " + ".join(f"a_{{{n}}}" for n in range(60)) + "}{b}"], ["\\textbf{9.99 kN}"]],
    ],
    ids=["broken between chunks", "made smaller"],
)
def test_a_wide_formula_stays_on_the_page(tmp_path, rows, narrow):
    block = samples.line("1.01", "hence", "wide", "w", rows)
    if narrow:
        block = {
            "type": "columns",
            "widths": [1, 1],
            "columns": [[block], [{"type": "text", "runs": "beside"}]],
        }
    pdf = sheet_pdf(sheet_content(samples.notebook([[block]])))
    words = words_on_page(pdf, tmp_path, 1)
    margin, aside = 15 / 25.4 * 72, 31 / 25.4 * 72
    # What no line can hold may take the room of the notes too, which then stand under it.
    limit = 595.28 / 2 - 10 if narrow else 595.28 - margin - (aside if len(rows[0]) > 1 else 0)
    formula = [(left, right) for left, right, word in words if "𝛾" in word or "𝑎" in word or "9.99" in word]
    assert len(formula) > 3
    assert max(right for _, right in formula) < limit
    assert min(left for left, _ in formula) > 19 / 25.4 * 72


def test_no_heading_stands_alone_at_the_foot():
    pages = set()
    for filler in range(38, 54):
        blocks = [{"type": "text", "runs": f"paragraph {number}"} for number in range(filler)]
        blocks += [
            {"type": "heading", "level": 1, "number": "9", "text": "Last heading"},
            samples.line("9.01", "hence", "what follows", "w", [["\\frac{a}{b}"], ["\\textbf{1 kN}"]]),
        ]
        texts = page_texts(sheet_pdf(sheet_content(samples.notebook([blocks]))))
        (page,) = [number for number, text in enumerate(texts) if "Last heading" in text]
        assert "what follows" in texts[page]
        pages.add(page)
    assert pages == {0, 1}  # it was brought to the foot of the first page, and over it


@pytest.mark.parametrize("caption", ["", "long caption"])
def test_a_long_table_repeats_its_head(caption):
    filler = [{"type": "text", "runs": f"paragraph {number}"} for number in range(36)]
    table = {
        "type": "table",
        "caption": caption,
        "columns": [{"head": "first head"}, {"head": "second head", "align": "right"}],
        "rows": [[f"row {number}.", "x"] for number in range(150)],
    }
    texts = page_texts(sheet_pdf(sheet_content(samples.notebook([[*filler, table]]))))
    assert len(texts) > 2
    with_rows = [text for text in texts if "row " in text]
    assert all("second head" in text for text in with_rows)
    assert all(caption not in text or "row 0." in text for text in texts if caption)
    assert all(f"row {number}." in "".join(texts) for number in range(150))


def test_a_listing_counts_its_lines():
    text = "\n".join(f"key{number} = {number}" for number in range(100))
    pdf = sheet_pdf(sheet_content(samples.notebook([[{"type": "plain", "text": text, "numbered": True}]])))
    assert squeezed("99 key98 = 98 100 key99 = 99") in squeezed("".join(page_texts(pdf)))


def test_a_line_twice_is_refused():
    one = samples.line("1.01", "take", "a", "L", [["1"]])
    with pytest.raises(CalcpackError, match=r"line 1\.01 occurs twice"):
        sheet_pdf(sheet_content(samples.notebook([[one, one]])))


def test_a_picture_that_is_none_is_refused():
    node = samples.notebook([])
    node.cells[0].outputs = [nbformat.v4.new_output("display_data", {"image/png": "AAAA", "text/plain": "a"})]
    with pytest.raises(CalcpackError, match="not a PNG"):
        sheet_pdf(sheet_content(node))


def test_formulas_that_cannot_be_set_are_found_among_others():
    assert settable_formulas(["a", "nosuch(a)", "b", 'upright("梁")', "c"]) == [
        True,
        False,
        True,
        False,
        True,
    ]
