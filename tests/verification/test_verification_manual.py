"""The verification manual and the command that makes it."""

from __future__ import annotations

import hashlib
import io
import json
import re
import shutil
import subprocess
from pathlib import Path

import pypdf
import pytest
from typer.testing import CliRunner

import calcpack
from calcpack.cli import app, main
from calcpack.job.house import house_folder
from calcpack.verification.findings import verify
from calcpack.verification.identity import RECIPE, part_of, shipped_templates
from calcpack.verification.manual import manual_pdf, sections
from calcpack.verification.pages import table_blocks
from calcpack.verification.tables import verification_folder


def squeezed(text: str) -> str:
    return re.sub(r"\s+", "", text)


def text_of(pdf: bytes) -> str:
    return squeezed("".join(page.extract_text() for page in pypdf.PdfReader(io.BytesIO(pdf)).pages))


@pytest.fixture(scope="module")
def found():
    return verify()


@pytest.fixture(scope="module")
def pdf(found):
    return manual_pdf(found)


@pytest.fixture(scope="module")
def text(pdf):
    return text_of(pdf)


def words(block) -> str:
    """All words of a block in its data form."""
    if isinstance(block, dict):
        return " ".join(words(each) for each in block.values())
    if isinstance(block, list | tuple):
        return " ".join(words(each) for each in block)
    return str(block)


# --- what stands in it -----------------------------------------------------------------------------------


def test_it_holds_and_counts(found, text):
    assert found.holds
    assert found.failing == ()
    assert len(found.comparisons) == sum(summary.comparisons for summary in found.summaries)
    assert len(found.comparisons) > 1500
    assert squeezed(f"{len(found.comparisons)} published values") in text
    assert "everycomparisonholds" in text
    assert "doesnothold" not in text.replace("whenavaluedoesnothold", "").replace("rowdoesnothold", "")


def test_every_table_and_every_method_stands_in_it(found, text):
    for topic in found.topics:
        assert squeezed(topic.name) in text
        for table in topic.table:
            assert squeezed(table.title) in text, table.title
        for method in topic.method:
            assert squeezed(method.title) in text
            assert squeezed(method.by) in text


def test_every_row_stands_under_its_table(found):
    for topic in found.topics:
        for table in topic.table:
            comparisons = [each for each in found.comparisons if each.table is table]
            body = words(table_blocks(table, comparisons)[-1])
            for each in comparisons:
                assert each.row.label in body
                assert (
                    each.quantity.unit in words(table_blocks(table, comparisons[:1]))
                    or each.quantity.unit in body
                )


def test_each_table_says_how_its_values_are_known(found, text):
    for topic in found.topics:
        for table in topic.table:
            comparisons = [each for each in found.comparisons if each.table is table]
            said = words(table_blocks(table, comparisons)[1])
            known = {source.known for each in comparisons for source, _ in each.row.sources}
            assert known
            for each in known:
                assert f"({each})" in said, table.title
            if any(each.row.from_memory for each in comparisons):
                assert "(from memory)" in said
    memory = sum(each.row.from_memory for each in found.comparisons)
    assert (
        squeezed(f"{memory} of {len(found.comparisons)} published values were recalled from memory") in text
    )


def test_what_authorities_ask_for(found, text):
    titles = [section.title for section in sections(found)]
    for title in (
        "Summary",
        "Identification",
        "What authorities ask of a program",
        "Scope",
        "Theory in brief",
        "Limits of validity",
        "Known deviations",
        "How any number is found again",
        "Responsibility",
    ):
        assert title in titles
    assert squeezed("Local codes and licensed practice come first") in text
    assert f"calcpack{calcpack.__version__}" in text
    for template in shipped_templates():
        assert template.sha256 in text
        for assumption in template.settings.assumptions:
            assert squeezed(assumption) in text
        for left_out in template.settings.not_covered:
            assert squeezed(left_out) in text


def test_the_first_table_is_the_summary(found, text):
    first = next(block for block in sections(found)[0].blocks if block["type"] == "table")
    assert [words(row[0]).split()[-len(topic.name.split()) :] for row, topic in zip(first["rows"], found.topics, strict=False)] == [
        topic.name.split() for topic in found.topics
    ]  # fmt: skip
    for row, summary in zip(first["rows"], found.summaries, strict=False):
        if summary.comparisons:
            assert row[1:4] == [str(summary.comparisons), str(summary.from_memory), str(summary.by_hand)]


# --- the file --------------------------------------------------------------------------------------------


def test_archiving_and_accessibility(pdf):
    file = pypdf.PdfReader(io.BytesIO(pdf))
    root = file.trailer["/Root"]
    xmp = root["/Metadata"].get_data().decode()
    about = dict(re.findall(r"<(pdf\w*id:\w+)>([^<]*)<", xmp))
    assert about == {"pdfaid:part": "3", "pdfaid:conformance": "A", "pdfuaid:part": "1"}
    assert root["/MarkInfo"]["/Marked"]
    assert root["/Lang"] == "en"
    assert file.metadata.title == "Verification manual"
    assert file.metadata.creation_date.date() == max(topic.revised for topic in verify().topics)


def test_pages_are_numbered_and_contents_lead_there(pdf):
    file = pypdf.PdfReader(io.BytesIO(pdf))
    count = len(file.pages)
    for number in (1, 2, count):
        assert f"page {number} of {count}" in file.pages[number - 1].extract_text()
    links = [
        each.get_object()
        for each in file.pages[0].get("/Annots", [])
        if each.get_object()["/Subtype"] == "/Link"
    ]
    assert len(links) > 60
    titles = [item.title for item in file.outline if not isinstance(item, list)]
    assert "Known deviations" in " ".join(titles)


def test_same_bytes(pdf):
    assert manual_pdf(verify()) == pdf


# --- which program -----------------------------------------------------------------------------------------


@pytest.mark.skipif(shutil.which("sha256sum") is None, reason="needs sha256sum")
@pytest.mark.parametrize("folder", [Path(calcpack.__file__).parent, house_folder("shared") / "sections"])
def test_the_recipe_gives_the_hash_again(folder):
    part = part_of(folder, "x", "x")
    told = subprocess.run(["bash", "-c", RECIPE], cwd=folder, check=True, capture_output=True, text=True)
    assert told.stdout.split()[0] == part.sha256


def test_a_letter_in_any_file_changes_the_hash(tmp_path):
    (tmp_path / "inner").mkdir()
    (tmp_path / "a.py").write_text("a = 1\n")
    (tmp_path / "inner" / "b.py").write_text("b = 1\n")
    first = part_of(tmp_path, "x", "x")
    (tmp_path / "a.pyc").write_bytes(b"not counted")
    assert part_of(tmp_path, "x", "x") == first
    (tmp_path / "inner" / "b.py").write_text("b = 2\n")
    assert part_of(tmp_path, "x", "x").sha256 != first.sha256
    assert first.files == 2
    assert first.sha256 != hashlib.sha256(b"").hexdigest()


# --- the command -------------------------------------------------------------------------------------------


def falsified(tmp_path: Path, old: str, new: str) -> Path:
    """The table of rolled sections alone, with one published value changed."""
    folder = tmp_path / "tables"
    folder.mkdir()
    path = folder / "sections.toml"
    text = (verification_folder() / "sections.toml").read_text(encoding="utf-8")
    assert text.count(old) == 1
    path.write_text(text.replace(old, new), encoding="utf-8")
    return folder


def test_the_command_writes_the_same_manual(tmp_path, pdf):
    out = tmp_path / "manual.pdf"
    ran = CliRunner().invoke(app, ["verification", "--out", str(out)], catch_exceptions=False)
    assert ran.exit_code == 0
    assert out.read_bytes() == pdf
    assert [path.name for path in tmp_path.iterdir()] == ["manual.pdf"]
    assert "all hold" in ran.stdout


def test_json(found):
    ran = CliRunner().invoke(app, ["verification", "--json"], catch_exceptions=False)
    assert ran.exit_code == 0
    data = json.loads(ran.stdout)
    assert data["holds"] is True
    assert data["program"] == f"calcpack {calcpack.__version__}"
    assert data["comparisons"] == json.loads(json.dumps([each.as_data() for each in found.comparisons]))
    one = next(each for each in data["comparisons"] if each["row"] == "IPE 300" and each["quantity"] == "A")
    assert one["published"] == "53.8"
    assert one["ours"] == pytest.approx(53.81, abs=0.01)
    assert one["from_memory"] is True
    assert {each["method"] for each in data["methods"]} >= {"Direct stiffness", "Finite elements"}


def test_a_falsified_value_is_named_and_ends_in_1(tmp_path):
    folder = falsified(tmp_path, '["IPE 300", "53.8", "8356"]', '["IPE 300", "54.8", "8356"]')
    out = tmp_path / "manual.pdf"
    ran = CliRunner().invoke(app, ["verification", "--tables", str(folder), "--out", str(out)])
    assert ran.exit_code == 1
    assert "does not hold: Rolled sections: IPE sections: IPE 300, A [cm²]:" in ran.stderr
    assert ran.stderr.count("does not hold") == 1
    assert "1 do not hold" in ran.stdout
    text = text_of(out.read_bytes())
    assert squeezed("Do not hold: Rolled sections: IPE sections: IPE 300, A [cm²]") in text
    assert "Adoesnothold" in text


def test_a_falsified_value_in_json(tmp_path):
    folder = falsified(tmp_path, '["IPE 300", "53.8", "8356"]', '["IPE 300", "none", "8356"]')
    ran = CliRunner().invoke(app, ["verification", "--tables", str(folder), "--json"])
    assert ran.exit_code == 1
    data = json.loads(ran.stdout)
    wrong = [each for each in data["comparisons"] if not each["holds"]]
    assert [(each["row"], each["published"]) for each in wrong] == [("IPE 300", "none")]


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (["--out", "nowhere/manual.pdf"], "there is no folder 'nowhere'"),
        (["--out", "."], "'.' is a folder"),
        (["--tables", "nowhere"], "'nowhere' is no folder"),
        (["--tables", "empty"], "holds no tables"),
        (["--tables", "broken", "--out", "manual.pdf"], "sections.toml"),
    ],
)
def test_what_is_asked_wrongly_ends_in_2_and_writes_nothing(
    tmp_path, monkeypatch, capsys, arguments, message
):
    monkeypatch.chdir(tmp_path)
    (tmp_path / "empty").mkdir()
    (tmp_path / "broken").mkdir()
    (tmp_path / "broken" / "sections.toml").write_text("name = ", encoding="utf-8")
    (tmp_path / "manual.pdf").write_bytes(b"mine")
    monkeypatch.setattr("sys.argv", ["calcpack", "verification", *arguments])
    with pytest.raises(SystemExit) as stopped:
        main()
    assert stopped.value.code == 2
    told = capsys.readouterr().err
    assert "error: " in told
    assert message in told
    assert "Traceback" not in told
    assert (tmp_path / "manual.pdf").read_bytes() == b"mine"
    assert sorted(path.name for path in tmp_path.iterdir()) == ["broken", "empty", "manual.pdf"]
