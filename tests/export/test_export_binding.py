"""Parts bound into one PDF: its pages, tags, named places, links and files hold together as each part's do.

Source of what is asked: ISO 32000-1, 14.7.4.4 (parent tree), 14.8.5.7 (table headers), 7.9.6 (name trees).
"""

from __future__ import annotations

import dataclasses
from collections import Counter

import pypdf
import pypdfium2
import pytest
import samples
from pages import identification, page_texts, reader, squeezed, structure
from test_export_pack import made, numbered

from calcpack.export import Mathematics, Press, Section, build_pack, paginate, set_sheets, sheet_content
from calcpack.export.binding import Bound, Place, bind


@pytest.fixture(scope="module")
def mathematics():
    return Mathematics()


@pytest.fixture(scope="module")
def pack(mathematics):
    answers = Section.of(
        "Answers", [{"type": "text", "runs": ["See ", {"line": "B2 2.03"}, " and ", {"line": "B10"}, "."]}]
    )
    listing = {"type": "plain", "numbered": True, "text": "format = 1"}
    annex = Section.of("Input", [listing, {"type": "text", "runs": ["As ", {"line": "B1 2.03"}]}])
    return numbered(made(front=(answers,), annex=(annex,)), mathematics)


@pytest.fixture(scope="module")
def sheets(pack, mathematics):
    return set_sheets(pack, mathematics)


@pytest.fixture(scope="module")
def whole(pack, sheets, mathematics):
    return build_pack(pack, mathematics, sheets).pdf


def parents(file: pypdf.PdfReader) -> dict[int, object]:
    numbers = file.trailer["/Root"]["/StructTreeRoot"]["/ParentTree"]["/Nums"]
    keys = [int(key) for key in numbers[::2]]
    assert keys == sorted(set(keys))
    return dict(zip(keys, numbers[1::2], strict=True))


def kids(element: pypdf.generic.DictionaryObject) -> list[object]:
    found = element.get("/K", [])
    return [
        each.get_object() for each in (found if isinstance(found, list) else [found])
    ]  # integers, dictionaries


def test_every_page_and_link_finds_its_elements_and_they_find_it(whole):
    file = reader(whole)
    tree = parents(file)
    used = set()
    for page in file.pages:
        key = page["/StructParents"]
        used.add(key)
        for mcid, element in enumerate(tree[key].get_object()):
            element = element.get_object()
            if isinstance(element, pypdf.generic.NullObject):
                continue
            mentions = [each for each in kids(element) if each == mcid and element["/Pg"] == page]
            mentions += [
                each
                for each in kids(element)
                if isinstance(each, dict) and each.get("/MCID") == mcid and each["/Pg"] == page
            ]
            assert mentions, (key, mcid)
        for annot in page.get("/Annots", []):
            annot = annot.get_object()
            used.add(annot["/StructParent"])
            element = tree[annot["/StructParent"]].get_object()
            assert element["/S"] == "/Link"
            references = [each for each in kids(element) if isinstance(each, dict) and "/Obj" in each]
            assert annot in [each["/Obj"] for each in references]
    assert used == set(tree)
    assert file.trailer["/Root"]["/StructTreeRoot"]["/ParentTreeNextKey"] == max(tree) + 1


def test_every_element_knows_its_parent_and_headers_are_found_once(whole):
    root = reader(whole).trailer["/Root"]["/StructTreeRoot"]
    identities, asked = Counter(), set()

    def walk(element, parent):
        assert element["/P"] == parent
        if "/ID" in element:
            identities[str(element["/ID"])] += 1
        for attributes in element.get("/A", []):
            asked.update(str(header) for header in attributes.get_object().get("/Headers", []))
        for kid in kids(element):
            if isinstance(kid, dict) and "/S" in kid:
                walk(kid, element)

    for top in kids(root):
        walk(top, root)
    assert set(identities.values()) == {1}
    assert asked
    assert asked <= set(identities)
    names = root["/IDTree"]["/Names"]
    listed = {str(name): element.get_object() for name, element in zip(names[::2], names[1::2], strict=True)}
    assert {name: str(element["/ID"]) for name, element in listed.items()} == {
        name: name for name in identities
    }


def test_tags_are_those_of_the_parts_in_their_order(whole, sheets):
    tags = structure(whole)
    assert tags[0] == ("Document", None)
    assert Counter(tag for tag, _ in tags)["Part"] == len(sheets) + 2
    starts = [number for number, (tag, _) in enumerate(tags) if tag == "Part"] + [len(tags)]
    for number, sheet in enumerate(sheets.values(), start=1):
        assert tags[starts[number] + 1 : starts[number + 1]] == structure(sheet.pdf)[1:]


def test_pages_are_the_parts_pages(whole, sheets, pack):
    texts = page_texts(whole)
    for content in pack.bound:
        own = page_texts(sheets[content.mark].pdf)
        assert texts[content.numbers.first - 1 :][: len(own)] == own


def ways(file: pypdf.PdfReader, page: int) -> list[tuple[int, float, str]]:
    """Links of a page that lead to named places: page, height, and what is said of them."""
    found = []
    for annot in file.pages[page].get("/Annots", []):
        annot = annot.get_object()
        assert "/URI" not in annot.get("/A", {})
        if isinstance(annot["/Dest"], str):
            place = file.named_destinations[annot["/Dest"]]
            found.append((file.get_destination_page_number(place), float(place.top), annot["/Contents"]))
    return found


def test_links_from_part_to_part_lead_to_the_line(whole, pack):
    file = reader(whole)
    texts = page_texts(whole)
    first = {content.mark: content.numbers.first - 1 for content in pack.bound}
    index = ways(file, 1)[:12]  # the section behind it begins on the same page
    assert [page for page, _, _ in index[::2]] == [*first.values(), len(texts) - 2, len(texts) - 1]
    assert [says for _, _, says in index] == [f"page {page + 1}" for page, _, _ in index]
    answers = next(number for number, text in enumerate(texts) if squeezed("See B2 2.03") in squeezed(text))
    (line, sheet) = ways(file, answers)[12:]
    assert line[0] == first["B2"]
    assert sheet[0] == first["B10"]
    assert line[1] == pytest.approx(height_of(whole, line[0], "2.03"), abs=3)
    (input_way,) = ways(file, len(texts) - 2)
    assert input_way[0] == first["B1"]


def height_of(pdf: bytes, page: int, words: str) -> float:
    """Where in the page's left column these words stand [pt from below, upper edge]."""
    text = pypdfium2.PdfDocument(pdf)[page].get_textpage()
    search = text.search(words)
    while found := search.get_next():
        left, _, _, top = text.get_charbox(found[0])
        if left < 60:
            return float(top)
    raise AssertionError(f"no {words} on the page")


def test_metadata_tell_of_the_whole(whole, pack):
    file = reader(whole)
    xmp = file.trailer["/Root"]["/Metadata"].get_data().decode()
    assert f"<xmpTPg:NPages>{len(file.pages)}</xmpTPg:NPages>" in xmp
    assert identification(whole) == {"pdfaid:part": "3", "pdfaid:conformance": "A", "pdfuaid:part": "1"}
    assert pack.header.title in file.metadata["/Title"]
    assert [file.page_labels[number] for number in (0, len(file.pages) - 1)] == ["1", str(len(file.pages))]
    other = dataclasses.replace(pack, sheets=pack.sheets[::-1])
    other = numbered(other, Mathematics())
    swapped = reader(build_pack(other, Mathematics()).pdf).trailer["/Root"]["/Metadata"].get_data().decode()
    assert swapped != xmp  # another file has another name


def test_a_press_of_several_processes_sets_the_same(pack, sheets, mathematics):
    with Press(len(pack.bound)) as press:
        assert paginate(pack, mathematics, press) == {each.mark: each.numbers for each in pack.bound}
        assert {mark: each.pdf for mark, each in set_sheets(pack, mathematics, press).items()} == {
            mark: each.pdf for mark, each in sheets.items()
        }


def test_names_of_places_are_sorted_by_their_bytes(whole):
    names = reader(whole).trailer["/Root"]["/Names"]
    for tree in ("/Dests", "/EmbeddedFiles"):
        found = [bytes(name.original_bytes) for name in names[tree]["/Names"][::2]]
        assert found == sorted(found)
        assert len(found) == len(set(found))


def test_a_place_is_measured_from_the_upper_edge(sheets):
    sheet = sheets["B1"].pdf
    bound = bind([Bound("a", sheet), Bound("b", sheet, {"x": Place(0, 10.0, 41.89)})])
    place = reader(bound).named_destinations["b/x"]
    assert (float(place.left), float(place.top)) == (10.0, 800.0)


def test_hostile_sheet_is_bound(mathematics):
    hostile = sheet_content(samples.hostile())
    pack = numbered(dataclasses.replace(made(), sheets=(hostile,), appendices=()), mathematics)
    file = reader(build_pack(pack, mathematics).pdf)
    for page in file.pages:
        for annot in page.get("/Annots", []):
            assert "/A" not in annot.get_object()
