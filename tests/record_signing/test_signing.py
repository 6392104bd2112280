"""Signatures: valid for others too, in order, by the right people; whatever changes is caught."""

from __future__ import annotations

import random
import re
import shutil
import subprocess

import pypdf
import pytest
import signing_packs as packs
from pyhanko.pdf_utils import generic
from pyhanko.pdf_utils.reader import PdfFileReader
from pyhanko.sign.validation import validate_pdf_signature
from pyhanko_certvalidator import ValidationContext

from calcpack.files import digest
from calcpack.job.errors import CalcpackError
from calcpack.record import sign as sign_module
from calcpack.record import verify as verify_module
from calcpack.record.numbers import NumbersResult
from calcpack.record.pdf_update import Update, name
from calcpack.record.sign import sign_file, signature_file
from calcpack.record.verify import verify_file


@pytest.fixture(autouse=True)
def _quick(monkeypatch, tmp_path_factory):
    """The audit has tests of its own; here it passes unless a test says otherwise."""
    monkeypatch.setenv("PYTEST_TMP", str(tmp_path_factory.getbasetemp()))
    for module in (sign_module, verify_module):
        monkeypatch.setattr(module, "audited", lambda _path: NumbersResult(True, "the audit passes"))


@pytest.fixture
def people():
    return packs.person("Maria Ravn"), packs.person("Ivo Okoro"), packs.person("Ana Lind")


@pytest.fixture
def signed(tmp_path, people):
    """A pack signed by three people."""
    pack = packs.out_folder(tmp_path / "out") / "pack.pdf"
    if not _SIGNED:
        for role, who in zip(("prepared", "checked", "approved"), people, strict=True):
            sign_file(pack, packs.signing(role, who))
        _SIGNED.append(pack.read_bytes())
    pack.write_bytes(_SIGNED[0])
    return pack


_SIGNED: list[bytes] = []


def refusal(work, *words, **more):
    with pytest.raises(CalcpackError) as caught:
        work(*words, **more)
    return str(caught.value)


def says(report):
    return [finding.says for finding in report.findings if finding.holds is False]


# ------------------------------------------------------------------ what a signed pack is


def test_three_people_sign_and_other_validators_agree(signed, people):
    report = verify_file(signed, packs.trust(*people))
    assert report.passes, report.as_text()
    assert [each.role for each in report.signatures] == ["prepared", "checked", "approved"]
    with signed.open("rb") as file:
        for embedded in PdfFileReader(file).embedded_signatures:
            roots = [each.signer.signing_cert for each in people]
            status = validate_pdf_signature(embedded, ValidationContext(trust_roots=roots, moment=packs.NOW))
            assert status.bottom_line, status.pretty_print_details()


@pytest.mark.skipif(shutil.which("pdfsig") is None, reason="poppler's pdfsig is not installed")
def test_poppler_agrees(signed):
    said = subprocess.run(["pdfsig", "-nocert", signed], capture_output=True, text=True, check=False).stdout
    assert said.count("Signature Validation: Signature is Valid.") == 3
    assert "Total document signed" in said


def test_the_first_signature_certifies_and_leaves_room_for_the_others(signed):
    root = pypdf.PdfReader(signed).trailer["/Root"]
    certifying = root["/Perms"]["/DocMDP"]
    assert certifying["/Reference"][0]["/TransformParams"]["/P"] == 2
    assert certifying["/SubFilter"] == "/ETSI.CAdES.detached"


def test_markup_is_left_possible_where_the_job_wants_it(tmp_path, people):
    pack = packs.out_folder(tmp_path / "out", level="self", markup=True) / "pack.pdf"
    sign_file(pack, packs.signing("prepared", people[0]))
    root = pypdf.PdfReader(pack).trailer["/Root"]
    assert root["/Perms"]["/DocMDP"]["/Reference"][0]["/TransformParams"]["/P"] == 3


def commented(pack, *, more=None, **entries):
    """A reviewer's comment put on the cover, and whatever else is done in the same go."""
    update = Update(pack.read_bytes())
    page = update.find_page_for_modification(0)[0].get_object()
    comment = generic.DictionaryObject(
        {
            name("Type"): name("Annot"),
            name("Subtype"): name("Text"),
            name("Rect"): generic.ArrayObject(map(generic.FloatObject, (50, 50, 70, 70))),
            name("Contents"): generic.TextStringObject("Please show line 4.02"),
            **{name(key): value for key, value in entries.items()},
        }
    )
    page["/Annots"].append(update.add_object(comment))
    update.update_container(page["/Annots"])
    if more is not None:
        more(update, page)
    pack.write_bytes(update.bytes())


def drawn_over(update, page):
    page[name("Contents")] = update.add_object(generic.StreamObject(stream_data=b"0 0 400 400 re f"))
    update.update_container(page)


def comment_taken_away(update, page):
    del page["/Annots"][0]


@pytest.mark.parametrize("markup", [True, False])
def test_a_reviewers_comment_is_said_in_words(tmp_path, people, markup):
    pack = packs.out_folder(tmp_path / "out", level="self", markup=markup) / "pack.pdf"
    sign_file(pack, packs.signing("prepared", people[0]))
    commented(pack)
    report = verify_file(pack, packs.trust(*people))
    comment = "page 1: 'Please show line 4.02'"
    if markup:
        assert report.passes
        assert [finding.says for finding in report.findings][:2] == [
            "nothing but comments was added since it was signed",
            f"not part of what was signed: {comment}",
        ]
        sign_file(pack, packs.signing("checked", people[1]))
        assert verify_file(pack, packs.trust(*people)).passes
    else:
        assert not report.passes
        assert f"a comment was put into the file after it, and it allows none: {comment}" in says(report)[0]


@pytest.mark.parametrize(
    "how",
    [
        {"more": drawn_over},
        {"more": comment_taken_away},
        {"A": generic.DictionaryObject({name("S"): name("Launch")})},
        {"Subtype": name("FileAttachment")},
    ],
)
def test_a_comment_hides_no_other_change(tmp_path, people, how):
    pack = packs.out_folder(tmp_path / "out", level="self", markup=True) / "pack.pdf"
    sign_file(pack, packs.signing("prepared", people[0]))
    commented(pack, **how)
    report = verify_file(pack, packs.trust(*people))
    assert "changed after it in a way it does not allow" in says(report)[0]


def test_still_an_archival_and_accessible_file(signed):
    reader = pypdf.PdfReader(signed)
    root = reader.trailer["/Root"]
    xmp = root["/Metadata"].get_data().decode()
    assert "<pdfaid:part>3</pdfaid:part>" in xmp
    assert "<pdfuaid:part>1</pdfuaid:part>" in xmp
    assert xmp.count("<xmp:ModifyDate>") <= 1
    info_date = reader.metadata.modification_date.replace(tzinfo=None)
    stated = re.search(r"<xmp:ModifyDate>([^<]*)<", xmp)
    assert stated is None or stated[1][:19] == info_date.isoformat()
    assert "/NeedAppearances" not in root["/AcroForm"]
    tree = root["/StructTreeRoot"]["/ParentTree"]["/Nums"]
    parents = {tree[at]: tree[at + 1].get_object() for at in range(0, len(tree), 2)}
    for field in root["/AcroForm"]["/Fields"]:
        widget = field.get_object()
        element = parents[widget["/StructParent"]]
        assert element["/S"] == "/Form"
        assert element["/P"]["/S"] == "/TD"
        assert element["/K"]["/Obj"] == widget
        assert widget["/TU"].startswith("Signature: ")
        assert widget["/F"] & 4  # printed
        assert widget["/F"] & 3 == 0  # neither invisible nor hidden
        fonts = list(_fonts(widget["/AP"]["/N"]))
        assert fonts
        for font in fonts:
            assert "/ToUnicode" in font
            below = font["/DescendantFonts"][0].get_object()
            assert any(key.startswith("/FontFile") for key in below["/FontDescriptor"])


def _fonts(form):
    resources = form.get("/Resources", {})
    yield from (font.get_object() for font in resources.get("/Font", {}).values())
    for inner in resources.get("/XObject", {}).values():
        yield from _fonts(inner.get_object())


def test_the_appearance_says_who_what_when_and_why(tmp_path):
    who = packs.person("Ravn, Maria")
    pack = packs.out_folder(tmp_path / "out", prepared="M. Ravn", level="self") / "pack.pdf"
    sign_file(pack, packs.signing("prepared", who, reason="Worked out from drawing 14."))
    widget = pypdf.PdfReader(pack).trailer["/Root"]["/AcroForm"]["/Fields"][0].get_object()
    if shutil.which("pdftotext"):
        shown = subprocess.run(
            ["pdftotext", "-l", "1", pack, "-"], capture_output=True, text=True, check=True
        )
        for words in (
            "Ravn, Maria · PE 77",
            "prepared · 1 Dec 2026 09:05 UTC",
            "Worked out from drawing 14.",
        ):
            assert words in shown.stdout
    assert widget["/V"]["/Reason"] == "Worked out from drawing 14."


def test_what_was_built_is_still_there_unchanged(tmp_path, people):
    pack = packs.out_folder(tmp_path / "out") / "pack.pdf"
    before = pack.read_bytes()
    sign_file(pack, packs.signing("prepared", people[0]))
    assert pack.read_bytes().startswith(before)
    assert sorted(path.name for path in pack.parent.iterdir()) == [
        "job.json",
        "manifest.sha256",
        "pack.pdf",
        "sheets",
    ]


def test_the_places_to_sign_are_the_same_bytes_for_the_same_pack(tmp_path):
    one, other = (packs.out_folder(tmp_path / each) / "pack.pdf" for each in ("a", "b"))
    assert one.read_bytes() == other.read_bytes()


# ------------------------------------------------------------------ what is caught


def caught(tmp_path, data, people):
    changed = tmp_path / "changed.pdf"
    changed.write_bytes(data)
    report = verify_file(changed, packs.trust(*people))
    return not report.passes and any(f.about == "integrity" and f.holds is False for f in report.findings)


def test_any_flipped_byte_is_caught(signed, people, tmp_path):
    data, chance = signed.read_bytes(), random.Random(41)
    assert not caught(tmp_path, data, people)
    last = data.rindex(b"/Contents <")
    places = [chance.randrange(len(data)) for _ in range(200)]
    places += [last + 10 + chance.randrange(3200) for _ in range(40)]  # the container nothing else covers
    for place in places:
        flipped = bytearray(data)
        flipped[place] ^= 1 << chance.randrange(8)
        assert caught(tmp_path, bytes(flipped), people), place


def test_the_letter_case_of_a_digit_is_caught(signed, people, tmp_path):
    data = signed.read_bytes()
    place = data.index(b"A", data.rindex(b"/Contents <") + 12)
    assert caught(tmp_path, data[:place] + b"a" + data[place + 1 :], people)


@pytest.mark.parametrize("key", ["TU", "T", "Rect", "F", "V"])
@pytest.mark.parametrize("role", ["prepared", "approved"])
def test_any_changed_value_of_a_field_is_caught(signed, people, tmp_path, key, role):
    update = Update(signed.read_bytes())
    fields = update.root["/AcroForm"]["/Fields"]
    field = next(
        each.get_object() for each in map(fields.raw_get, range(3)) if each.get_object()["/T"] == role
    )
    values = {
        "TU": generic.TextStringObject("Signature: somebody"),
        "T": generic.TextStringObject("other"),
        "Rect": generic.ArrayObject(map(generic.FloatObject, (0, 0, 400, 400))),
        "F": generic.NumberObject(2),
        "V": generic.TextStringObject("yes"),
    }
    field[name(key)] = values[key]
    update.update_container(field)
    assert caught(tmp_path, update.bytes(), people)


@pytest.mark.parametrize("key", ["Reason", "Name", "M"])
def test_any_changed_value_of_a_signature_is_caught(signed, people, tmp_path, key):
    update = Update(signed.read_bytes())
    fields = update.root["/AcroForm"]["/Fields"]
    value = fields.raw_get(0).get_object()["/V"]
    value[name(key)] = generic.TextStringObject("D:20200101000000Z")
    update.update_container(value)
    assert caught(tmp_path, update.bytes(), people)


def test_a_page_drawn_over_is_caught(signed, people, tmp_path):
    update = Update(signed.read_bytes())
    page = update.find_page_for_modification(0)[0].get_object()
    page[name("Contents")] = update.add_object(generic.StreamObject(stream_data=b"0 0 400 400 re f"))
    update.update_container(page)
    assert caught(tmp_path, update.bytes(), people)


def test_a_pack_without_a_signature_does_not_pass(tmp_path, people):
    report = verify_file(packs.out_folder(tmp_path / "out") / "pack.pdf", packs.trust(*people))
    assert says(report) == ["it is not signed"]


# ------------------------------------------------------------------ who may sign


def test_first_prepared_then_checked_then_approved(tmp_path, people):
    pack = packs.out_folder(tmp_path / "out") / "pack.pdf"
    assert "nobody has signed this as prepared yet" in refusal(
        sign_file, pack, packs.signing("checked", people[1])
    )
    sign_file(pack, packs.signing("prepared", people[0]))
    assert "nobody has signed this as checked yet" in refusal(
        sign_file, pack, packs.signing("approved", people[2])
    )
    assert "Maria Ravn has signed this as prepared already" in refusal(
        sign_file, pack, packs.signing("prepared", people[1])
    )


def test_nobody_checks_his_own_work_unless_agreed(tmp_path, people):
    pack = packs.out_folder(tmp_path / "out") / "pack.pdf"
    sign_file(pack, packs.signing("prepared", people[0]))
    said = refusal(sign_file, pack, packs.signing("checked", people[0], despite="I am alone"))
    assert "the level of checking is 'second person'; somebody else has to check" in said
    alone = packs.out_folder(tmp_path / "alone", level="self") / "pack.pdf"
    sign_file(alone, packs.signing("prepared", people[0]))
    sign_file(alone, packs.signing("checked", people[0]))


def test_a_third_party_is_of_another_organisation(tmp_path):
    one, same, other = (
        packs.person(*each) for each in (("A B", "Slip & Co"), ("C D", "Slip & Co"), ("E F", "Quay"))
    )
    pack = packs.out_folder(tmp_path / "out", level="third party") / "pack.pdf"
    sign_file(pack, packs.signing("prepared", one))
    assert "preparer and checker are both of Slip & Co" in refusal(
        sign_file, pack, packs.signing("checked", same)
    )
    sign_file(pack, packs.signing("checked", other))


def test_somebody_else_than_the_job_names(tmp_path, people):
    pack = packs.out_folder(tmp_path / "out", prepared="M. Ravn") / "pack.pdf"
    said = refusal(sign_file, pack, packs.signing("prepared", people[1]))
    assert "the job names M. Ravn as preparer, the certificate is Ivo Okoro's" in said
    sign_file(pack, packs.signing("prepared", people[1], despite="M. Ravn is ill; I worked it out again"))
    report = verify_file(pack, packs.trust(*people))
    assert report.signatures[0].despite == "M. Ravn is ill; I worked it out again"


# ------------------------------------------------------------------ what stands against it


def test_a_requirement_not_satisfied_asks_for_a_reason(tmp_path, people):
    pack = packs.out_folder(tmp_path / "out", level="self", fails=True) / "pack.pdf"
    said = refusal(sign_file, pack, packs.signing("prepared", people[0]))
    assert "not satisfied: B1 line 4.02: Deflection" in said
    assert "--despite" in said
    done = sign_file(pack, packs.signing("prepared", people[0], despite="camber ordered, letter 14"))
    assert done.despite == ("not satisfied: B1 line 4.02: Deflection",)
    report = verify_file(pack, packs.trust(*people))
    assert report.passes
    assert report.signatures[0].despite == "camber ordered, letter 14"
    assert report.as_data()["unmet"] == ["B1 line 4.02: Deflection"]


def test_a_reason_too_long_to_be_read_is_refused(tmp_path, people):
    pack = packs.out_folder(tmp_path / "out", level="self", fails=True) / "pack.pdf"
    before = pack.read_bytes()
    said = refusal(sign_file, pack, packs.signing("prepared", people[0], despite="because " * 150))
    assert "too long to be read" in said
    assert pack.read_bytes() == before


def test_numbers_that_do_not_pass_their_audit_are_not_signed(tmp_path, people, monkeypatch):
    monkeypatch.setattr(sign_module, "audited", lambda _path: NumbersResult(False, "the audit does not pass"))
    pack = packs.out_folder(tmp_path / "out", level="self") / "pack.pdf"
    said = refusal(sign_file, pack, packs.signing("prepared", people[0], despite="never mind"))
    assert "the audit does not pass" in said


def test_a_file_that_is_not_what_was_built_is_not_signed(tmp_path, people):
    pack = packs.out_folder(tmp_path / "out", level="self") / "pack.pdf"
    pack.write_bytes(pack.read_bytes() + b"\n")
    assert "is not what was built" in refusal(sign_file, pack, packs.signing("prepared", people[0]))
    lonely = tmp_path / "lonely" / "deep" / "deeper" / "pack.pdf"
    lonely.parent.mkdir(parents=True)
    shutil.copy(packs.out_folder(tmp_path / "other", level="self") / "pack.pdf", lonely)
    assert "no manifest.sha256 stands beside" in refusal(
        sign_file, lonely, packs.signing("prepared", people[0])
    )


def test_a_signed_pack_proves_itself_where_it_is_sent_on_alone(tmp_path, people):
    pack = packs.out_folder(tmp_path / "out") / "pack.pdf"
    sign_file(pack, packs.signing("prepared", people[0]))
    sent = tmp_path / "mail" / "in" / "box" / "pack.pdf"
    sent.parent.mkdir(parents=True)
    data = pack.read_bytes()
    sent.write_bytes(data.replace(b"/MediaBox", b"/MediaBix", 1))
    assert "does not hold" in refusal(sign_file, sent, packs.signing("checked", people[1]))
    sent.write_bytes(data)
    sign_file(sent, packs.signing("checked", people[1]))
    assert verify_file(sent, packs.trust(*people)).passes


def test_neither_a_sheet_nor_another_file_is_signed(tmp_path, people):
    other = tmp_path / "other.pdf"
    writer = pypdf.PdfWriter()
    writer.add_blank_page(100, 100)
    writer.write(other)
    assert "has no places to sign" in refusal(sign_file, other, packs.signing("prepared", people[0]))
    other.write_bytes(b"%PDF-1.7 nothing")
    assert "cannot be read as a PDF" in refusal(sign_file, other, packs.signing("prepared", people[0]))
    text = tmp_path / "notes.txt"
    text.write_bytes(b"")
    assert "neither a pack nor a sheet" in refusal(sign_file, text, packs.signing("prepared", people[0]))


# ------------------------------------------------------------------ sheets for the screen


def test_a_sheet_for_the_screen_gets_a_signature_beside_it(tmp_path, people):
    page = packs.out_folder(tmp_path / "out") / "sheets" / "B1.html"
    assert "nobody has signed this as prepared" in refusal(
        sign_file, page, packs.signing("checked", people[1])
    )
    sign_file(page, packs.signing("prepared", people[0]))
    sign_file(page, packs.signing("checked", people[1], reason="Seen line by line."))
    report = verify_file(page, packs.trust(*people))
    assert report.passes, report.as_text()
    assert [(each.role, each.reason) for each in report.signatures] == [
        ("prepared", "I prepared this calculation."),
        ("checked", "Seen line by line."),
    ]
    assert verify_file(signature_file(page, "checked"), packs.trust(*people)).passes
    good, chance = page.read_bytes(), random.Random(5)
    for _ in range(10):
        flipped = bytearray(good)
        flipped[chance.randrange(len(good))] ^= 1 << chance.randrange(8)
        page.write_bytes(flipped)
        assert "what was signed has been changed" in " ".join(says(verify_file(page, packs.trust(*people))))
    page.write_bytes(good)
    container = signature_file(page, "checked")
    whole = container.read_bytes()
    for _ in range(40):
        flipped = bytearray(whole)
        flipped[chance.randrange(len(whole))] ^= 1 << chance.randrange(8)
        container.write_bytes(flipped)
        assert not verify_file(page, packs.trust(*people)).passes
    container.unlink()
    signature_file(page, "prepared").rename(signature_file(page, "approved"))
    assert "it was signed as prepared, not as approved" in " ".join(
        says(verify_file(page, packs.trust(*people)))
    )


def test_the_hash_of_a_page_is_what_the_report_gives(tmp_path, people):
    page = packs.out_folder(tmp_path / "out", level="self") / "sheets" / "B1.html"
    sign_file(page, packs.signing("prepared", people[0]))
    assert verify_file(page, packs.trust(*people)).sha256 == digest(page.read_bytes())
