"""What the pages of a PDF show, held against the record."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Iterator, Mapping, Sequence
from types import MappingProxyType

from calcpack.record.auditing.findings import Finding, Verdict, good, unchecked, wrong
from calcpack.record.auditing.reading import Record, RecordLine

_FOOT = re.compile(r"^(?P<mark>.{1,200}) page (?P<page>[0-9]+) of [0-9]+$", re.M)
_BEGINS = re.compile(r"(?m)^([0-9]{1,3}\.[0-9]{2,3})(?=\s)")
_MORE_DIGITS = frozenset("0123456789.")
_NOTHING: Mapping[str, str] = MappingProxyType({})
_LONG = 25  # letters of a cell that may take several rows of text
_WORDS = 12  # letters of a line's words that tell it from a number


def sheet_pages(pages: Sequence[str]) -> dict[str, tuple[str, ...]]:
    """The pages of each sheet of a pack, by the mark at their foot.

    Examples
    --------
    >>> found = sheet_pages(["cover", "...\\nB1 page 1 of 2", "...\\nB1 page 2 of 2", "B2 page 1 of 1"])
    >>> {mark: len(pages) for mark, pages in found.items()}
    {'B1': 2, 'B2': 1}
    """
    found: dict[str, list[str]] = {}
    for text in pages:
        marks = list(_FOOT.finditer(text))
        if marks:
            found.setdefault(marks[-1]["mark"], []).append(text)
    return {mark: tuple(texts) for mark, texts in found.items()}


def upright(text: str) -> str:
    """With plain letters: how a PDF slants and raises them says nothing."""
    if text.isascii():
        return text
    return unicodedata.normalize("NFKC", text.replace("·", "\ue000")).replace("\ue000", "·")


def bare(text: str) -> str:
    """Upright, and without any space: how a PDF spaces its letters says nothing either."""
    return "".join(upright(text).split())


def audit_pages(
    record: Record,
    pages: Sequence[str] | None,
    compared: Mapping[str, str] = _NOTHING,
    rows: Sequence[str] = (),
) -> tuple[Finding, ...]:
    """Whether the visible pages show each line with its printed value.

    Parameters
    ----------
    record : Record
    pages : sequence of str or None
    compared : mapping
        What requirements compare as a copy shows it, by line: "25.0 mm ≤ 30.0 mm".
    rows : sequence of str
        The rows of tables as a copy shows them, their cells' bare letters parted by "|".

    Returns
    -------
    tuple of Finding
        One a line; one for the tables, or one a row that is not there.
    """
    if pages is None:
        return (unchecked("pages", "PDF", "there is no PDF of this sheet at hand"),)
    if not pages:
        return (wrong("pages", "PDF", "the PDF has no pages of this sheet"),)
    text = "\n".join(_without_foot(page) for page in pages)
    by_line = _parts(text, record)
    lines = (_shown_on(line, by_line, compared.get(line.no, "")) for line in record.lines)
    return (*lines, *_tables(text, rows))


def _tables(text: str, rows: Sequence[str]) -> Iterator[Finding]:
    """Whether the pages have every row of a copy's tables.

    A row with long words may be broken at the end of a page: of such a one every cell is looked for.
    """
    letters = bare(text)
    missing = [
        row
        for row in dict.fromkeys(rows)
        if row.replace("|", "") not in letters
        and (max(map(len, row.split("|"))) < _LONG or not all(cell in letters for cell in row.split("|")))
    ]
    for row in missing:
        yield wrong("pages", "a table's row in the PDF", "the pages do not show it so", other=row[:80])
    if rows and not missing:
        yield good("pages", "tables in the PDF", f"{len(rows)} rows as the notebook shows them")


def _without_foot(page: str) -> str:
    match = None
    for match in _FOOT.finditer(page):  # noqa: B007 - the last one counts
        pass
    return page if match is None else page[: match.start()]


def _parts(text: str, record: Record) -> dict[str, list[str]]:
    """What follows each line's number and words, up to the next line.

    A number at the beginning of a row is that of a line where the line's words follow it; else it is
    a number in a fraction.
    """
    says = {line.no: bare(line.says)[:_WORDS] for line in record.lines}
    begins = [
        match
        for match in _BEGINS.finditer(text)
        if match[1] in says and bare(text[match.end() : match.end() + 6 * _WORDS]).startswith(says[match[1]])
    ]
    found: dict[str, list[str]] = {}
    for place, match in enumerate(begins):
        end = begins[place + 1].start() if place + 1 < len(begins) else len(text)
        found.setdefault(match[1], []).append(upright(text[match.end() : end]))
    return found


def shows_value(line: RecordLine, parts: Sequence[str], compared: str) -> bool:
    """Whether one of some texts of a line shows its value; of a requirement what it compares and its verdict.

    Parameters
    ----------
    line : RecordLine
    parts : sequence of str
        With plain letters, as :func:`upright` makes them.
    compared : str
        What a requirement compares; "" where no copy tells.
    """
    if line.kind == "require":
        shown, flat = bare(compared) + bare(line.shown), ["".join(part.split()) for part in parts]
        return any(shown in part and ("notsatisfied" in part) == (line.passes is False) for part in flat)
    pieces = upright(line.shown).split()
    usual = "= " + " ".join(pieces)
    if any(usual in part and part.partition(usual)[2][:1] not in _MORE_DIGITS for part in parts):
        return True
    words = r"\s*".join(map(re.escape, pieces))
    whole = re.compile(rf"=\s*{words}(?![0-9.])")
    return any(whole.search(part) for part in parts)


def _shown_on(line: RecordLine, by_line: Mapping[str, Sequence[str]], compared: str) -> Finding:
    parts = by_line.get(line.no, ())
    place = f"line {line.no}"
    if not parts:
        return wrong(
            "pages",
            place,
            "the pages do not show a line of this number and these words",
            says=line.says,
            printed=line.shown,
        )
    if shows_value(line, parts, compared):
        return Finding("pages", place, line.says, line.shown)
    return Finding(
        "pages",
        place,
        line.says,
        line.shown,
        verdict=Verdict.WRONG,
        remark="the pages show this line with another value",
    )
