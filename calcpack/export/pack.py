"""The pack: cover, index, basis, schedule, reactions, all sheets, appendices and manifest as one document.

``paginate`` lays everything out and tells every sheet its numbers; with these ``set_sheets`` sets the single
sheets, and ``build_pack`` sets what stands around them, its manifest naming their hashes, and binds all.
Nothing in a number changes the layout, and a sheet's own file has the pages the pack has.
"""

from __future__ import annotations

import hashlib
import itertools
import posixpath
from collections import Counter
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field, replace
from typing import Any
from urllib.parse import quote

from markupsafe import Markup

from calcpack.export import blocks as kinds
from calcpack.export.binding import Bound, Place, bind
from calcpack.export.blocks import Block, formulas_of, levelled, read_blocks
from calcpack.export.content import CAUTION, SheetContent, SheetNumbers
from calcpack.export.mathematics import Mathematics
from calcpack.export.page_html import Screen, header_fields, render
from calcpack.export.paper import BOUND, Data, Paper, document_data, foot
from calcpack.export.pdf import sheet_setting
from calcpack.export.press import Press
from calcpack.export.tables import reaction_blocks, schedule_blocks
from calcpack.export.text import shown_date
from calcpack.export.typesetting import Attached, Setting, Typeset, typeset, with_known_letters
from calcpack.job.errors import CalcpackError
from calcpack.job.model import Header, Submission

_HEIGHTS = {"A4": 297.0, "Letter": 279.4}  # [mm]
_POINT = 72 / 25.4
_MOST_TRIES = 8  # to lay out an index that tells numbers which depend on its own length


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


def paginate(
    pack: Pack,
    mathematics: Mathematics | None = None,
    press: Press | None = None,
    *,
    done: Callable[[], None] = lambda: None,
) -> dict[str, SheetNumbers]:
    """Lay everything out and number the sheets.

    Parameters
    ----------
    pack : Pack
        With as many ``files`` as the final one will have, under their final names; their hashes may be empty.
    mathematics : Mathematics
        Formulas known already.
    press : Press
        Sets the sheets.
    done : callable
        Called as each sheet is laid out.

    Returns
    -------
    dict
        Mark of every sheet and appendix -> its first page and the count of all.

    Raises
    ------
    CalcpackError
        Two sheets have the same mark, or something cannot be set.
    """
    design = _Design(pack, mathematics or Mathematics())
    laid = (press or Press()).set_all(design.sheets(), pdf=False, done=done)
    return design.numbers([_pages(each) for each in laid])


def set_sheets(
    pack: Pack,
    mathematics: Mathematics | None = None,
    press: Press | None = None,
    *,
    done: Callable[[], None] = lambda: None,
) -> dict[str, Typeset]:
    """Every sheet and appendix of a pack as its own PDF, and where the lines stand that the pack leads to.

    Parameters
    ----------
    pack : Pack
        Its sheets numbered.
    mathematics, press, done
        As of :func:`paginate`.

    Returns
    -------
    dict
        Mark -> its file, the same as that of :func:`sheet_pdf`.
    """
    design = _Design(pack, mathematics or Mathematics())
    done_sheets = (press or Press()).set_all(design.sheets(), done=done)
    return {content.mark: each for content, each in zip(pack.bound, done_sheets, strict=True)}


def build_pack(
    pack: Pack, mathematics: Mathematics | None = None, sheets: Mapping[str, Typeset] | None = None
) -> BuiltPack:
    """Set what stands before and behind the sheets and bind all.

    Parameters
    ----------
    pack : Pack
        Its sheets numbered.
    mathematics : Mathematics
        Formulas known already.
    sheets : mapping
        The sheets as :func:`set_sheets` made them of the same pack; without it they are set here.

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
    mathematics = mathematics or Mathematics()
    design = _Design(pack, mathematics)
    made = sheets or set_sheets(pack, mathematics)
    numbers = design.numbers([_pages(made[content.mark]) for content in pack.bound])
    for content in pack.bound:
        given = content.numbers
        if given != numbers[content.mark]:
            raise CalcpackError(
                f"the sheet is numbered {given.first} of {given.of}, but the pack puts it at"
                f" {numbers[content.mark].first} of {numbers[content.mark].of}",
                mark=content.mark,
                remedy="number the sheets again with the pack as it is",
            )
    start, end = (typeset(each) for each in design.around)
    parts = [
        Bound("start", start.pdf),
        *(
            Bound(
                str(number),
                made[content.mark].pdf,
                {
                    at["line"]: Place(at["page"] - 1, at["x"], at["y"])
                    for at in made[content.mark].places["led-to"]
                },
            )
            for number, content in enumerate(pack.bound)
        ),
        Bound("end", end.pdf),
    ]
    return BuiltPack(
        bind(parts, files=pack.submission.attachments), numbers, tuple(_signing(start, pack.submission.paper))
    )


def _pages(done: Typeset) -> int:
    (count,) = done.places["pages"]
    return int(count)


def _signing(start: Typeset, paper: str) -> Iterator[SigningPlace]:
    height = _HEIGHTS[paper]
    for place in start.places["signing"]:
        if place["part"] == "cover":
            box = (
                place["x"],
                height - place["y"] - place["height"],
                place["x"] + place["width"],
                height - place["y"],
            )
            left, bottom, right, top = (round(each * _POINT, 2) for each in box)
            yield SigningPlace(place["role"], place["page"] - 1, (left, bottom, right, top))


class _Design:
    """What a pack is set from: its beginning, its sheets and its end, each a document of its own.

    Parameters
    ----------
    pack : Pack
    mathematics : Mathematics

    Raises
    ------
    CalcpackError
        Two sheets have the same mark.
    """

    def __init__(self, pack: Pack, mathematics: Mathematics) -> None:
        marks = [content.mark for content in pack.bound]
        if twice := [mark for mark, count in Counter(marks).items() if count > 1]:
            raise CalcpackError(f"two sheets of the pack have the mark '{twice[0]}'")
        self._pack = pack
        self._mathematics = mathematics
        general = _sections(pack)
        shown = [
            *(content.blocks for content in pack.bound),
            *(part.blocks for part in (*general, *pack.annex)),
        ]
        mathematics.learn(latex for blocks in shown for latex in formulas_of(blocks))
        self._led_to: set[str] = set()
        self._start = self._beginning(general)
        self._end = self._ending()

    def _beginning(self, general: Sequence[Section]) -> Setting:
        pack, paper = self._pack, Paper(self._mathematics)
        data = {
            "cover": _part("cover", "", "Cover", pack) | _cover(pack, paper),
            "general": _general("general", "General", general, pack, paper),
            "behind": [],
        }
        attached = pack.attached if pack.submission.attachments else ()
        return self._around("pack.typ", data, paper, attached, ("pages", "signing"))

    def _ending(self) -> Setting:
        pack, paper = self._pack, Paper(self._mathematics)
        files = [
            {
                "name": paper.words(file.name),
                "sha256": (file.sha256 or "0" * 64)[:64],
                "says": paper.words(file.says),
            }
            for file in pack.files
        ]
        data = {
            "annex": _general("annex", "Annex", pack.annex, pack, paper),
            "manifest": _part("manifest", "", "Manifest", pack) | {"files": files},
        }
        return self._around("pack_end.typ", data, paper, (), ("pages", "entry"))

    def _around(
        self, design: str, own: Data, paper: Paper, attached: Sequence[Attached], queries: Sequence[str]
    ) -> Setting:
        pack, header = self._pack, self._pack.header
        self._led_to |= paper.ways_out
        title = f"{header.title} – structural calculations, job {header.number}, revision {header.revision}"
        data = document_data(header, pack.submission.paper, title, f"Calculation pack of {header.title}")
        return Setting(
            design,
            data | own | {"maths": paper.formulas},
            header.date,
            attached=attached,
            files=paper.pictures,
            queries=queries,
        )

    def sheets(self) -> list[Setting]:
        """The sheets and appendices, numbered as they are."""
        return [
            sheet_setting(content, self._mathematics, self._lines_led_to(place))
            for place, content in enumerate(self._pack.bound)
        ]

    def _lines_led_to(self, place: int) -> list[str]:
        start = f"{BOUND}{place}/"
        return sorted(
            way.removeprefix(start) for way in self._led_to if way.startswith(start) and way != start
        )

    def numbers(self, pages: Sequence[int]) -> dict[str, SheetNumbers]:
        """Where every sheet begins, from the pages each has; what stands around them is numbered too."""
        end = typeset(self._end, pdf=False)
        before = 0
        for _ in range(_MOST_TRIES):
            firsts = list(itertools.accumulate(pages, initial=before + 1))
            total = firsts[-1] - 1 + _pages(end)
            start = replace(
                self._start,
                data={**self._start.data, "behind": self._behind(firsts, end.places["entry"])},
                of=total,
            )
            found = _pages(typeset(start, pdf=False))
            if found == before:
                break
            before = found
        else:
            raise CalcpackError("the index has no settled count of pages", remedy="please report this")
        self._start, self._end = start, replace(self._end, first=firsts[-1], of=total)
        return {
            content.mark: SheetNumbers(first=first, of=total)
            for content, first in zip(self._pack.bound, firsts, strict=False)
        }

    def _behind(self, firsts: Sequence[int], entries: Sequence[int]) -> list[list[Any]]:
        """The index's rows of what is bound behind it: name, first page, way there."""
        pack = self._pack
        rows = [
            [with_known_letters(f"{content.mark} {content.title}"), first, f"{BOUND}{place}/"]
            for place, (content, first) in enumerate(zip(pack.bound, firsts, strict=False))
        ]
        names = [*(with_known_letters(section.title) for section in pack.annex), "Manifest"]
        rows += [
            [name, firsts[-1] - 1 + page, f"{BOUND}end/{number}"]
            for number, (name, page) in enumerate(zip(names, entries, strict=True))
        ]
        return rows

    @property
    def around(self) -> tuple[Setting, Setting]:
        """What stands before and what behind the sheets, as they were last numbered."""
        return self._start, self._end


def _part(identity: str, mark: str, title: str, pack: Pack) -> Data:
    return {
        "id": identity,
        "mark": mark,
        "title": title,
        "foot": foot([pack.program], pack.input_digest),
        "running": identity != "cover",
        "revision": with_known_letters(pack.header.revision),
        "date": shown_date(pack.header.date),
        "hangs": False,
        "narrow": False,
    }


def _general(identity: str, title: str, sections: Sequence[Section], pack: Pack, paper: Paper) -> Data:
    """Sections that follow each other without a new page; their text can lead to every sheet and line."""
    elsewhere = {content.mark: f"{BOUND}{place}/" for place, content in enumerate(pack.bound)}
    elsewhere |= {
        f"{content.mark} {line}": f"{BOUND}{place}/{line}"
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
