"""Blocks as the page designs read them: plain data for Typst, formulas by number.

Every string is placed as text by the designs. Letters no face has are named here, long words get
places to break, links are made only to lines that are there.
"""

from __future__ import annotations

import base64
import binascii
import re
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from types import MappingProxyType
from typing import Any

from calcpack.export import blocks as kinds
from calcpack.export.blocks import Block, Run, formulas_of
from calcpack.export.content import CAUTION, SheetContent
from calcpack.export.mathematics import Mathematics
from calcpack.export.text import clean_lines, pieces, shown_date
from calcpack.export.typesetting import with_known_letters
from calcpack.job.errors import CalcpackError
from calcpack.job.model import Header, Person

Data = dict[str, Any]
_NOWHERE: Mapping[str, str] = MappingProxyType({})
PAPERS = {"A4": "a4", "Letter": "us-letter"}
SHEET = "sheet"  # what the labels of a sheet begin with
BOUND = "bound:"  # what an address in another document of the same pack begins with
_TEXT = re.compile(r"(<text\b[^>]*>)(.*?)(</text>)", re.S)
_BETWEEN_TAGS = re.compile(r"[^<>]+(?=<|$)")
_PNG_HEAD = b"\x89PNG\r\n\x1a\n"
_DOTS_PER_MM = 96 / 25.4
MOST_RATIO = 100  # a ratio beyond it says no more than that


class Paper:
    """Turns blocks into data; gathers the document's formulas, pictures and ways out of it.

    Parameters
    ----------
    mathematics : Mathematics
        Knows, or learns, all formulas.
    """

    def __init__(self, mathematics: Mathematics) -> None:
        self._mathematics = mathematics
        self._numbers: dict[str, int] = {}
        self.formulas: list[str] = []
        self.pictures: dict[str, bytes] = {}
        self.ways_out: set[str] = set()

    def part(
        self,
        identity: str,
        blocks: Sequence[Block],
        lines: frozenset[str] = frozenset(),
        changed: frozenset[str] = frozenset(),
        elsewhere: Mapping[str, str] = _NOWHERE,
    ) -> list[Data]:
        """A part's blocks, with links to its own ``lines`` and to what stands ``elsewhere`` by its label."""
        self._mathematics.learn(formulas_of(blocks))
        place = _Place(identity, lines, changed, elsewhere)
        on_paper = (block for block in blocks if not (isinstance(block, kinds.Figure) and block.screen))
        return [self._block(block, place) for block in on_paper]

    def runs(self, runs: Iterable[Run], place: _Place | None = None) -> list[list[Any]]:
        """Running text as (kind, text, ...)."""
        found: list[list[Any]] = []
        for run in runs:
            if run.kind == "math":
                formula = self._mathematics[run.text]
                found.append(["m", self.formula(run.text), with_known_letters(formula.spoken)])
            elif run.kind == "line":
                found.append(self._link(run.text, place))
            else:
                for number, piece in enumerate(pieces(with_known_letters(run.text))):
                    found += [["b"]] if number else []
                    found.append([{"text": "t", "strong": "s", "em": "e", "code": "c"}[run.kind], piece])
        return found

    def _link(self, text: str, place: _Place | None) -> list[Any]:
        """What leads to a line or a section: in this document, or in another that is bound with it."""
        leads = place.known(text) if place is not None else None
        if leads is None or not leads.startswith(BOUND):
            return ["l", with_known_letters(text), leads]
        self.ways_out.add(leads)
        return ["x", with_known_letters(text), leads]

    def words(self, text: str) -> list[list[Any]]:
        """A string as running text."""
        return self.runs([Run("text", text)]) if text else []

    def formula(self, latex: str) -> int | str:
        """A formula's number in the document, or how it is written where it cannot be set."""
        if latex not in self._numbers:
            typst = self._mathematics[latex].typst
            if not typst:
                return with_known_letters(clean_lines(latex).replace("\n", " "))
            self._numbers[latex] = len(self.formulas)
            self.formulas.append(typst)
        return self._numbers[latex]

    def _spoken(self, latex: str) -> str:
        return self._mathematics[latex].spoken

    def _block(self, block: Block, place: _Place) -> Data:
        data: Data = {"type": block.type}
        runs = self.runs
        match block:
            case kinds.Heading():
                data |= {"level": block.level, "number": with_known_letters(block.number)}
                data |= {"text": self._heading(block, place)}
            case kinds.Text():
                data |= {"role": block.role, "runs": runs(block.runs, place)}
            case kinds.Listing():
                data |= {"items": [runs(item, place) for item in block.items]}
            case kinds.Line():
                data |= self._line(block, place)
            case kinds.Derivation():
                data |= {"steps": [self._step(step, place) for step in block.steps]}
            case kinds.Table():
                data |= self._table(block, place)
            case kinds.Ratios():
                data |= {"rows": [self._ratio(row, place) for row in block.rows]}
            case kinds.Facts():
                data |= {"rows": [[runs(label, place), runs(value, place)] for label, value in block.rows]}
            case kinds.Notation():
                data |= {
                    "rows": [
                        [self.formula(symbol), self._spoken(symbol), runs(meaning), self.words(unit)]
                        for symbol, meaning, unit in block.rows
                    ]
                }
            case kinds.Signoff():
                data |= {"rows": [self._signer(row) for row in block.rows]}
            case kinds.Figure():
                data |= {"source": drawn_letters(block.svg), "format": "svg", "width-mm": block.width_mm}
                data |= {
                    "alt": with_known_letters(block.alt) or "figure",
                    "caption": runs(block.caption, place),
                }
            case kinds.Picture():
                data |= self._picture(block)
            case kinds.Formula():
                alt = block.alt or self._spoken(block.latex)
                data |= {
                    "formula": self.formula(block.latex),
                    "alt": with_known_letters(alt).strip() or "formula",
                }
            case kinds.Plain():
                lines = [with_known_letters(line) for line in block.text.expandtabs(4).split("\n")]
                data |= {"numbered": block.numbered, "lines": [pieces(kept_blanks(line)) for line in lines]}
            case kinds.Columns():
                data |= {
                    "widths": list(block.widths) or [1] * len(block.columns),
                    "columns": [[self._block(part, place) for part in column] for column in block.columns],
                }
        return data

    def _heading(self, heading: kinds.Heading, place: _Place) -> list[list[Any]]:
        """A heading's words; a formula that stands alone is said, as a bookmark holds no formula."""
        if any(run.kind != "math" and run.text.strip() for run in heading.text):
            return self.runs(heading.text, place)
        said = " ".join(self._spoken(run.text) for run in heading.text if run.kind == "math")
        return self.words(said.strip() or "–")

    def _line(self, line: kinds.Line, place: _Place) -> Data:
        rows = [[self.formula(chunk) for chunk in row if chunk.strip()] for row in line.rows]
        return {
            "no": with_known_letters(line.no),
            "id": place.label(line.no),
            "kind": line.kind,
            "says": self.runs(line.says, place),
            "symbol": self.formula(line.symbol) if line.symbol.strip() else None,
            "rows": [row for row in rows if row],
            "alt": with_known_letters(line.alt or line_alt(line, self._mathematics)),
            "cite": self.words(line.cite) or None,
            "origin": self.words(line.origin) or None,
            "sources": self.runs([Run("line", source) for source in line.from_], place),
            "like": self.runs([Run("line", line.like)] if line.like else [], place),
            "passes": line.passes,
            "changed": line.no in place.changed,
        }

    def _step(self, step: kinds.Step, place: _Place) -> Data:
        alt = step.alt or "; ".join(self._spoken(row) for row in step.rows)
        rows = [self.formula(row) for row in step.rows if row.strip()]
        return {"says": self.runs(step.says, place), "rows": rows, "alt": with_known_letters(alt)}

    def _table(self, table: kinds.Table, place: _Place) -> Data:
        columns = [{"head": self.runs(column.head, place), "align": column.align} for column in table.columns]
        return {
            "caption": self.runs(table.caption, place),
            "columns": columns,
            "rows": [[self.runs(cell, place) for cell in row] for row in table.rows],
            "strong-rows": list(table.strong_rows),
        }

    def _ratio(self, row: kinds.Ratio, place: _Place) -> Data:
        return {
            "says": self.runs(row.says, place),
            "demand": self.words(row.demand),
            "resistance": self.words(row.resistance),
            "ratio": row.ratio,
            "shown": f"{row.ratio:.2f}" if row.ratio < MOST_RATIO else f"over {MOST_RATIO}",
            "passes": row.passes,
        }

    def _signer(self, row: kinds.SignoffRow) -> Data:
        return {
            "key": row.role,
            "role": self.words(row.role),
            "name": self.words(row.name),
            "licence": self.words(row.licence),
            "date": self.words(row.date),
        }

    def _picture(self, picture: kinds.Picture) -> Data:
        raw = png_bytes(picture)
        name = f"picture{len(self.pictures)}.png"
        self.pictures[name] = raw
        width = int.from_bytes(raw[16:20], "big") / _DOTS_PER_MM
        return {
            "picture": name,
            "width-mm": min(width, 400.0),
            "alt": with_known_letters(picture.alt) or "picture",
        }


@dataclass(frozen=True)
class _Place:
    """Where a block stands: its part, the part's lines, those that are revised, and what is elsewhere."""

    identity: str
    lines: frozenset[str]
    changed: frozenset[str]
    elsewhere: Mapping[str, str]

    def label(self, number: str) -> str:
        return f"{self.identity}/{number}"

    def known(self, text: str) -> str | None:
        """The label of a line here, or of what stands elsewhere: "B7", "B7 3.05", "section 4"."""
        return self.label(text) if text in self.lines else self.elsewhere.get(text)


def kept_blanks(line: str) -> str:
    """A printed line with every blank kept, and broken only after the last blank of a run.

    Examples
    --------
    >>> kept_blanks("  a b   c").replace(chr(0xa0), "~")
    '~~a b~~ c'
    """
    line = re.sub(r" {2,}", lambda blanks: "\u00a0" * (len(blanks[0]) - 1) + " ", line)
    return re.sub(r"^\u00a0* ", lambda blanks: "\u00a0" * len(blanks[0]), line)


def png_bytes(picture: kinds.Picture) -> bytes:
    """The image itself.

    Raises
    ------
    CalcpackError
        It is not a PNG.
    """
    try:
        raw = base64.b64decode(picture.png)
    except (binascii.Error, ValueError):
        raw = b""
    if not raw.startswith(_PNG_HEAD) or len(raw) < 24:
        raise CalcpackError("a picture in the notebook is not a PNG image")
    return raw


def drawn_letters(svg: str) -> str:
    """The drawing with letters no face has named by number."""
    return _TEXT.sub(
        lambda match: (
            match[1] + _BETWEEN_TAGS.sub(lambda part: with_known_letters(part[0]), match[2]) + match[3]
        ),
        svg,
    )


def line_alt(line: kinds.Line, mathematics: Mathematics) -> str:
    """A line's formula in words, where the line does not bring its own."""
    parts = [mathematics[line.symbol].spoken] if line.symbol.strip() else []
    parts += [" ".join(mathematics[chunk].spoken for chunk in row) for row in line.rows]
    said = " = ".join(part for part in parts if part) or line.no
    return said + {True: ", satisfied", False: ", not satisfied", None: ""}[line.passes]


def person(who: Person) -> str:
    """Somebody as the running head names them."""
    return who.name or "–"


def foot_of(content: SheetContent) -> list[str]:
    """What stands at the foot of each page of a sheet: who made it, from what, and the caution."""
    stamp = content.template
    return foot([content.program, f"template {stamp.name} {stamp.version}"], content.input_digest)


def foot(makers: Sequence[str], input_digest: str) -> list[str]:
    """The foot of a page: what made it and the start of the input's hash; the caution."""
    parts = [*makers, f"input {input_digest[:8]}"] if input_digest else [*makers]
    return [with_known_letters(" · ".join(parts)), CAUTION]


def document_data(header: Header, paper: str, title: str, says: str) -> Data:
    """What every document's data begin with."""
    names = [who.name for who in (header.prepared, header.checked, header.approved) if who.name]
    return {
        "paper": PAPERS[paper],
        "title": with_known_letters(title),
        "description": with_known_letters(says),
        "authors": [with_known_letters(name) for name in dict.fromkeys(names)],
        "keywords": [with_known_letters(f"job {header.number}"), f"revision {header.revision}"],
        "date": [header.date.year, header.date.month, header.date.day],
        "running": {
            key: with_known_letters(value)
            for key, value in {
                "job": " · ".join(part for part in (f"Job {header.number}", header.site) if part),
                "title": header.title,
                "revision": header.revision,
                "date": shown_date(header.date),
                "prepared": person(header.prepared),
                "checked": person(header.checked),
            }.items()
        },
    }


def sheet_part(content: SheetContent, paper: Paper) -> Data:
    """A sheet as the part of a document."""
    mark = with_known_letters(content.mark)
    title = with_known_letters(content.title)
    return {
        "id": SHEET,
        "mark": mark,
        "title": title,
        "name": f"{mark} {title}",
        "revision": with_known_letters(content.header.revision),
        "date": shown_date(content.header.date),
        "foot": foot_of(content),
        "running": True,
        "hangs": True,
        "narrow": True,
        "blocks": paper.part(SHEET, content.blocks, content.line_numbers, content.changed),
    }
