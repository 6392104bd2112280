"""The pack: cover, index, basis, schedule, reactions, all sheets, appendices and manifest as one document.

``paginate`` lays the pack out and tells every sheet its numbers; with these the single sheets are
written, and ``build_pack`` sets the pack itself, its manifest naming their hashes. Nothing in a number
changes the layout, so a sheet's own file has the pages the pack has.
"""

from __future__ import annotations

import hashlib
import posixpath
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any
from urllib.parse import quote

from markupsafe import Markup

from calcpack.export import blocks as kinds
from calcpack.export.blocks import Block, formulas_of, levelled, read_blocks
from calcpack.export.content import CAUTION, SheetContent, SheetNumbers
from calcpack.export.mathematics import Mathematics
from calcpack.export.page_html import Screen, header_fields, render
from calcpack.export.paper import Data, Paper, document_data, foot, sheet_part
from calcpack.export.pdf import attachments
from calcpack.export.tables import reaction_blocks, schedule_blocks
from calcpack.export.text import shown_date
from calcpack.export.typesetting import Attached, Typeset, typeset, with_known_letters
from calcpack.job.errors import CalcpackError
from calcpack.job.model import Header, Submission

_HEIGHTS = {"A4": 297.0, "Letter": 279.4}  # [mm]
_POINT = 72 / 25.4


@dataclass(frozen=True)
class Section:
    """A section of the pack that is not a sheet: a title and its blocks."""

    title: str
    blocks: tuple[Block, ...]

    @classmethod
    def of(cls, title: str, blocks: Sequence[Mapping[str, Any]]) -> Section:
        """A section from blocks in their data form."""
        return cls(title, levelled(read_blocks(list(blocks))))


@dataclass(frozen=True)
class PackedFile:
    """A file of the output folder, for the manifest."""

    name: str
    sha256: str
    says: str = ""

    @classmethod
    def of(cls, name: str, data: bytes, says: str = "") -> PackedFile:
        """A file with the hash of its content."""
        return cls(name, hashlib.sha256(data).hexdigest(), says)


@dataclass(frozen=True)
class Pack:
    """All a pack is made of.

    Parameters
    ----------
    header, submission : Header, Submission
    program, input_digest : str
        Program and version; hash of the job's input.
    sheets : tuple of SheetContent
        In the order they are bound.
    supports : mapping
        Column or wall -> case -> load [kN], unfactored.
    key_plan : Figure block or None
        The framing plan.
    front : tuple of Section
        What follows the index: for a resubmission the list of changes and the answers.
    basis : tuple of Section
        The basis of design.
    appendices : tuple of SheetContent
        Bound after the sheets.
    annex : tuple of Section
        What stands at the very end, before the manifest: the input as it was read.
    files : tuple of PackedFile
        The manifest: every other file of the output folder.
    attached : tuple of Attached
        Files carried inside beside the sheets' own; only where attachments are wanted.
    """

    header: Header
    submission: Submission
    program: str
    input_digest: str
    sheets: tuple[SheetContent, ...]
    supports: Mapping[str, Mapping[str, float]] = field(default_factory=dict)
    key_plan: kinds.Figure | None = None
    front: tuple[Section, ...] = ()
    basis: tuple[Section, ...] = ()
    appendices: tuple[SheetContent, ...] = ()
    annex: tuple[Section, ...] = ()
    files: tuple[PackedFile, ...] = ()
    attached: tuple[Attached, ...] = ()

    @property
    def bound(self) -> tuple[SheetContent, ...]:
        """Sheets and appendices in order."""
        return (*self.sheets, *self.appendices)


@dataclass(frozen=True)
class SigningPlace:
    """Room for a signature: ``box`` is left, bottom, right, top in PDF points; ``page`` counts from 0."""

    role: str
    page: int
    box: tuple[float, float, float, float]


@dataclass(frozen=True)
class BuiltPack:
    """The pack's file, every sheet's numbers, and where it is signed."""

    pdf: bytes
    numbers: dict[str, SheetNumbers]
    signing: tuple[SigningPlace, ...]


def paginate(pack: Pack, mathematics: Mathematics | None = None) -> dict[str, SheetNumbers]:
    """Lay the pack out and number its sheets.

    Parameters
    ----------
    pack : Pack
        With as many ``files`` as the final one will have, under their final names; their hashes may be empty.
    mathematics : Mathematics
        Formulas known already.

    Returns
    -------
    dict
        Mark of every sheet and appendix -> its first page and the count of all.

    Raises
    ------
    CalcpackError
        Two sheets have the same mark, or something cannot be set.
    """
    return _numbers(_set(pack, mathematics or Mathematics(), pdf=False))


def build_pack(pack: Pack, mathematics: Mathematics | None = None) -> BuiltPack:
    """Set the pack.

    Parameters
    ----------
    pack : Pack
    mathematics : Mathematics
        Formulas known already.

    Returns
    -------
    BuiltPack
        Equal for equal packs, byte by byte.

    Raises
    ------
    CalcpackError
        Two sheets have the same mark, something cannot be set, or the manifest changed the count of
        pages since the sheets were numbered.
    """
    done = _set(pack, mathematics or Mathematics(), pdf=True)
    numbers = _numbers(done)
    for content in pack.bound:
        given = content.numbers
        if given.of > 1 and given != numbers[content.mark]:
            raise CalcpackError(
                f"the sheet is numbered {given.first} of {given.of}, but the pack puts it at"
                f" {numbers[content.mark].first} of {numbers[content.mark].of}",
                mark=content.mark,
                remedy="number the sheets again with the pack as it is",
            )
    height = _HEIGHTS[pack.submission.paper]
    signing = tuple(
        SigningPlace(
            place["role"],
            place["page"] - 1,
            (
                round(place["x"] * _POINT, 2),
                round((height - place["y"] - place["height"]) * _POINT, 2),
                round((place["x"] + place["width"]) * _POINT, 2),
                round((height - place["y"]) * _POINT, 2),
            ),
        )
        for place in done.places["signing"]
        if place["part"] == "cover"
    )
    return BuiltPack(done.pdf, numbers, signing)


def _numbers(done: Typeset) -> dict[str, SheetNumbers]:
    (total,) = done.places["pages"]
    return {
        start["sheet"]: SheetNumbers(first=start["page"], of=total)
        for start in done.places["start"]
        if start["sheet"]
    }


def _set(pack: Pack, mathematics: Mathematics, *, pdf: bool) -> Typeset:
    marks = [content.mark for content in pack.bound]
    for mark in marks:
        if marks.count(mark) > 1:
            raise CalcpackError(f"two sheets of the pack have the mark '{mark}'")
    general = _sections(pack)
    shown = [*(content.blocks for content in pack.bound), *(part.blocks for part in (*general, *pack.annex))]
    mathematics.learn(latex for blocks in shown for latex in formulas_of(blocks))
    paper = Paper(mathematics)
    header = pack.header
    bound = [sheet_part(content, paper, str(number)) for number, content in enumerate(pack.bound)]
    manifest = _part("manifest", "", "Manifest", pack) | {
        "files": [
            {
                "name": paper.words(file.name),
                "sha256": (file.sha256 or "0" * 64)[:64],
                "says": paper.words(file.says),
            }
            for file in pack.files
        ]
    }
    title = f"{header.title} – structural calculations, job {header.number}, revision {header.revision}"
    data = document_data(header, pack.submission.paper, title, f"Calculation pack of {header.title}")
    data |= {
        "first": 1,
        "of": 0,
        "cover": _part("cover", "", "Cover", pack) | _cover(pack, paper),
        "general": _general("general", "General", general, pack, paper),
        "parts": bound,
        "annex": _general("annex", "Annex", pack.annex, pack, paper),
        "manifest": manifest,
        "maths": paper.formulas,
    }
    attached: list[Attached] = []
    if pack.submission.attachments and pdf:
        attached = [file for content in pack.bound for file in attachments(content)] + list(pack.attached)
    return typeset(
        "pack.typ",
        data,
        header.date,
        attached=attached,
        files=paper.pictures,
        queries=("start", "pages", "signing"),
        pdf=pdf,
    )


def _part(identity: str, mark: str, title: str, pack: Pack) -> Data:
    return {
        "id": identity,
        "mark": mark,
        "title": title,
        "foot": foot([pack.program], pack.input_digest),
        "running": identity != "cover",
        "revision": with_known_letters(pack.header.revision),
        "date": shown_date(pack.header.date),
        "sheet": None,
        "hangs": False,
        "narrow": False,
    }


def _general(identity: str, title: str, sections: Sequence[Section], pack: Pack, paper: Paper) -> Data:
    """Sections that follow each other without a new page; their text can lead to every sheet and line."""
    elsewhere = {content.mark: f"{place}/" for place, content in enumerate(pack.bound)}
    elsewhere |= {
        f"{content.mark} {line}": f"{place}/{line}"
        for place, content in enumerate(pack.bound)
        for line in content.line_numbers
    }
    return _part(identity, "", title, pack) | {
        "sections": [
            {
                "title": with_known_letters(section.title),
                "blocks": paper.part(f"{identity}{number}", section.blocks, elsewhere=elsewhere),
            }
            for number, section in enumerate(sections)
        ]
    }


def _sections(pack: Pack) -> list[Section]:
    """All sections between the index and the sheets."""
    system = pack.header.units
    sections = [*pack.front, *pack.basis]
    if pack.key_plan is not None:
        sections.append(Section("Framing plan", (pack.key_plan,)))
    if pack.sheets:
        sections.append(Section("Schedule of beams", schedule_blocks(pack.sheets, system)))
    if pack.supports:
        sections.append(Section("Reactions", reaction_blocks(pack.supports, system)))
    return sections


def _cover(pack: Pack, paper: Paper) -> Data:
    header = pack.header
    facts = {
        "job": header.number,
        "site": header.site,
        "client": header.client,
        "authority": header.authority,
        "permit": header.permit,
        "engineer's contact": header.contact,
        "revision": header.revision,
        "date": shown_date(header.date),
    }
    people = (("prepared", header.prepared), ("checked", header.checked), ("approved", header.approved))
    signers = [
        {"key": role, "role": paper.words(role), "name": paper.words(who.name),
         "licence": paper.words(who.licence), "date": []}
        for role, who in people
    ]  # fmt: skip
    return {
        "job-title": paper.words(header.title),
        "facts": [[paper.words(label), paper.words(value)] for label, value in facts.items() if value],
        "check-level": pack.submission.check_level,
        "signers": signers,
        "caution": CAUTION,
        "contents": [with_known_letters(section.title) for section in _sections(pack)],
        "sheets": len(pack.sheets),
    }


def index_html(pack: Pack, mathematics: Mathematics | None = None) -> str:
    """The pack's page for the screen: leads to every sheet's page.

    Parameters
    ----------
    pack : Pack
        Its sheets numbered.
    mathematics : Mathematics
        Formulas known already.
    """
    sections = [*_sections(pack), *pack.annex]
    blocks = [block for section in sections for block in section.blocks]
    addresses = {content.mark: sheet_address(content.mark, "html") for content in pack.bound}
    addresses |= {
        f"{content.mark} {line}": Markup("{}#line-{}").format(sheet_address(content.mark, "html"), line)
        for content in pack.bound
        for line in content.line_numbers
    }
    screen = Screen(mathematics or Mathematics(), blocks, frozenset(), addresses)
    sheets = [
        {
            "mark": content.mark,
            "title": content.title,
            "first": content.numbers.first if content.numbers.of > 1 else None,
            "html": sheet_address(content.mark, "html"),
            "pdf": sheet_address(content.mark, "pdf"),
        }
        for content in pack.bound
    ]
    return render(
        "index.html.j2",
        pack.submission.paper,
        head=pack.header,
        date=shown_date(pack.header.date),
        fields=[("site", pack.header.site), *header_fields(pack.header)],
        sheets=sheets,
        sections=sections,
        files=pack.files,
        foot=foot([pack.program], pack.input_digest),
        changed=frozenset(),
        below=2,
        **screen.names(),
    )


def sheet_address(mark: str, ending: str) -> Markup:
    """Where a sheet's file stands, seen from the pack's page.

    Examples
    --------
    >>> str(sheet_address("B 1", "html"))
    'sheets/B%201.html'
    """
    return Markup(posixpath.join("sheets", f"{quote(mark, safe='')}.{ending}"))
