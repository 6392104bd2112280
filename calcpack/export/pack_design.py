"""A pack as documents to be set: what stands before the sheets, the sheets, and what stands behind them."""

from __future__ import annotations

import itertools
from collections import Counter
from collections.abc import Iterator, Sequence
from dataclasses import replace
from typing import Any

from calcpack.export.blocks import formulas_of
from calcpack.export.content import CAUTION, SheetNumbers
from calcpack.export.mathematics import Mathematics
from calcpack.export.pack import Pack, Section
from calcpack.export.paper import BOUND, Data, Paper, document_data, foot
from calcpack.export.pdf import sheet_setting
from calcpack.export.text import shown_date
from calcpack.export.typesetting import Attached, Setting, Typeset, typeset, with_known_letters
from calcpack.job.errors import CalcpackError

_MOST_TRIES = 8  # to lay out an index that tells numbers which depend on its own length


def pages_of(done: Typeset) -> int:
    """How many pages a document has."""
    (count,) = done.places["pages"]
    return int(count)


class PackDesign:
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
        general = pack.sections
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

    def sheets(self) -> Iterator[Setting]:
        """The sheets and appendices, numbered as they are."""
        for place, content in enumerate(self._pack.bound):
            yield sheet_setting(content, self._mathematics, self._lines_led_to(place))

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
            total = firsts[-1] - 1 + pages_of(end)
            start = replace(
                self._start,
                data={**self._start.data, "behind": self._behind(firsts, end.places["entry"])},
                of=total,
            )
            found = pages_of(typeset(start, pdf=False))
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
