"""What passes from a notebook to a sheet, and what does not."""

from __future__ import annotations

import nbformat
import pytest
import samples

from calcpack.export import record_bytes, sheet_content
from calcpack.export.blocks import every, plain_text, read_blocks
from calcpack.export.markdown import markdown_blocks
from calcpack.export.text import clean, pieces
from calcpack.job.errors import CalcpackError


def kinds(content):
    return [block.type for block in every(content.blocks)]


def test_every_kind_of_block_arrives_in_order():
    content = sheet_content(samples.ordinary(markdown="## Own words\n\nand *more*.", plain=True))
    found = kinds(content)
    # what is not satisfied comes first
    assert found[:6] == ["text", "heading", "text", "heading", "columns", "figure"]
    assert set(found) == {
        "heading",
        "text",
        "columns",
        "figure",
        "ratios",
        "line",
        "table",
        "derivation",
        "list",
        "facts",
        "notation",
        "signoff",
        "plain",
        "formula",
        "picture",
    }
    assert content.mark == "B5"
    assert content.header.prepared.name == "K. Lindqvist"
    assert content.record["results"]["governing"]["ratio"] == 0.757


def test_plain_outputs_are_shown_as_they_are_and_the_error_stream_is_not():
    content = sheet_content(samples.notebook([], plain=True))
    plain = [block.text for block in content.blocks if block.type == "plain"]
    assert plain == ["own cell: 12 bars\n  indented", "frame"]
    (formula,) = [block for block in content.blocks if block.type == "formula"]
    assert (formula.latex, formula.alt) == (r"\frac{x^{2}}{3}", "x**2/3")


def test_unexecuted_notebook_is_refused():
    node = samples.ordinary()
    node.cells[1].execution_count = None
    with pytest.raises(CalcpackError) as caught:
        sheet_content(node)
    assert str(caught.value) == "B5: cell 2 has not been executed; execute the notebook to its end first"


def test_failed_notebook_is_refused():
    node = samples.ordinary()
    node.cells[0].outputs = [
        nbformat.v4.new_output("error", ename="ValueError", evalue="no such bar", traceback=[])
    ]
    with pytest.raises(CalcpackError, match="cell 1 stopped with an error: ValueError: no such bar"):
        sheet_content(node)


def test_foreign_notebook_is_refused():
    node = nbformat.v4.new_notebook()
    with pytest.raises(CalcpackError, match="not a sheet of calcpack"):
        sheet_content(node)


def test_wrong_metadata_is_named():
    node = samples.ordinary()
    del node.metadata["calcpack"]["header"]["date"]
    with pytest.raises(CalcpackError, match=r"header\.date: Field required"):
        sheet_content(node)


@pytest.mark.parametrize(
    ("block", "words"),
    [
        ({"type": "dance"}, "dance"),
        ({"type": "text", "runs": [{"html": "<b>"}]}, "html"),
        ({"type": "line", "no": "1.01", "kind": "guess"}, "kind"),
        ({"type": "table", "columns": [{"head": "a"}], "rows": [["1", "2"]]}, "as many cells"),
        ({"type": "figure", "svg": "<html/>", "alt": "a"}, "<svg>"),
        ({"type": "figure", "svg": "<svg", "alt": "a"}, "well-formed"),
        ({"type": "figure", "svg": samples.figure(), "alt": "a", "width_mm": -1}, "width_mm"),
        (
            {"type": "ratios", "rows": [samples.ratio(float("nan"))]},
            "ratio",
        ),
    ],
)
def test_blocks_that_are_not_as_agreed_are_named_by_their_cell(block, words):
    with pytest.raises(CalcpackError) as caught:
        sheet_content(samples.notebook([[{"type": "text", "runs": "good"}], [block]]))
    assert "cell 2 shows something that is not as agreed" in str(caught.value)
    assert words in str(caught.value)


def test_unseen_letters_are_named_not_obeyed():
    # "12" followed by a mark that turns the reading order must not be read as "21".
    assert clean("span \u202e12\u202c m\x00") == "span ⟨U+202E⟩12⟨U+202C⟩ m⟨U+0000⟩"
    (block,) = read_blocks([{"type": "text", "runs": ["a\u200f", {"strong": "b\ufeff"}]}])
    assert plain_text(block.runs) == "a⟨U+200F⟩b⟨U+FEFF⟩"


def test_long_words_can_be_broken_and_nothing_is_lost():
    text = "a " + "x" * 100 + " b"
    assert "".join(pieces(text)) == text
    assert max(len(piece) for piece in pieces(text)) <= 14


def test_markdown_goes_the_same_road():
    blocks = markdown_blocks(
        "# Title $x_1$\n\n1. one\n   - two\n\n| a | b |\n|:-|-:|\n| 1 | **2** |\n\n"
        "<img src=x onerror=y()>\n\n"
        "```\ncode  here\n```\n\n$$\n\\frac{a}{b}\n$$\n\n"
        "see [there](http://x.test) ![plan](plan.png)\n\n> a note"
    )
    assert [block.type for block in blocks] == [
        "heading",
        "list",
        "table",
        "plain",
        "plain",
        "formula",
        "text",
        "text",
    ]
    assert [plain_text(item) for item in blocks[1].items] == ["1. one", "– two"]
    assert blocks[3].text == "<img src=x onerror=y()>"
    assert plain_text(blocks[6].runs) == "see there (http://x.test) [plan]"
    assert blocks[7].role == "note"


def test_record_is_the_same_from_memory_and_from_the_file():
    node = samples.ordinary()
    again = nbformat.reads(nbformat.writes(node), as_version=4)
    assert sheet_content(node).record_bytes == sheet_content(again).record_bytes
    assert sheet_content(node).notebook == sheet_content(again).notebook
    with pytest.raises(ValueError, match="JSON compliant"):
        record_bytes({"value": float("nan")})


def requirements(notebook):
    for cell in notebook.cells:
        for output in cell.get("outputs", []):
            for block in (
                output.get("data", {}).get("application/vnd.calcpack.blocks+json", {}).get("blocks", [])
            ):
                if block["type"] == "line" and block["kind"] == "require":
                    yield block


def test_an_unmet_requirement_is_the_first_thing_said():
    notebook = samples.ordinary()
    (stated, *_) = requirements(notebook)
    stated["passes"] = False
    first = sheet_content(notebook).blocks[0]
    assert first.role == "unsafe"
    assert stated["no"] in [run.text for run in first.runs]
    for block in requirements(notebook):
        block["passes"] = True
    assert sheet_content(notebook).blocks[0].type == "heading"
