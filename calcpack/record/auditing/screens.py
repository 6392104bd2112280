"""What a sheet's page for the screen shows, held against the record: read as text, nothing of it is run."""

from __future__ import annotations

import html
import itertools
import re
from collections import Counter
from collections.abc import Iterator, Mapping, Sequence
from types import MappingProxyType

from calcpack.job.errors import CalcpackError
from calcpack.record.auditing.findings import Finding, Verdict, good, wrong
from calcpack.record.auditing.pages import bare, shows_value, upright
from calcpack.record.auditing.reading import Record, RecordLine

LARGEST_SCREEN = 20_000_000  # bytes
MOST_LINES = 20_000
_MOST_LIKE, _LONGEST_TAG = 5_000, 20_000  # words like an attribute that are looked at; letters of a tag
_GROUP = "pages"
_NOTHING: Mapping[str, str] = MappingProxyType({})
_LINE = re.compile(r'<div class="line [a-z ]{1,40}" id="line-([0-9]{1,3}\.[0-9]{2,3})">\n')
_PART = re.compile(r'<div class="(no|main|notes)">')
_END = "</div>\n</div>"
_ROW = re.compile(r"<tr[^<>]*>(.*?)</tr>", re.S)
_CELL = re.compile(r"<td[^<>]*>(.*?)</td>", re.S)
_TAG = re.compile(r"<[^<>]*>")
# What could hide a line, show another in its place or do something; no sheet has any of it.
_FOREIGN = re.compile(
    "<(?:[!?]|/?(?:script|iframe|frame|frameset|object|embed|link|base|form|input|button|select|textarea|template|"
    "noscript|foreignobject|portal|dialog|details|audio|video|canvas|animate|set|style)(?![a-z]))"
)
# The same of attributes, which words of a sheet may be like.
_ACTING = re.compile(r"on[a-z]{1,30}\s*=")
_LEADING = ('="javascript:', '="vbscript:', '="data:text', '="refresh', "='", "= '")


def audit_screen(
    record: Record,
    content: bytes | None,
    name: str,
    compared: Mapping[str, str] = _NOTHING,
    rows: Sequence[str] = (),
) -> Iterator[Finding]:
    """Whether a sheet's HTML shows each line with its words and its printed value.

    Parameters
    ----------
    record : Record
    content : bytes or None
        The page; None where there is none, of which nothing is said.
    name : str
        Of its file, for messages.
    compared : mapping
        What requirements compare as a copy shows it, by line: "25.0 mm ≤ 30.0 mm".
    rows : sequence of str
        The rows of tables as a copy shows them, their cells' bare letters parted by "|".

    Yields
    ------
    Finding
        One a line, one for what the page is made of, one for the tables or one a row that is not there.

    Raises
    ------
    CalcpackError
        It is no text, or larger than any sheet.
    """
    if content is None:
        return
    if len(content) > LARGEST_SCREEN:
        raise CalcpackError("it is larger than any sheet", file=name)
    try:
        page = content.decode("utf-8")
    except UnicodeDecodeError:
        raise CalcpackError("it is no text", file=name) from None
    yield _plain(page, name)
    shown = _lines(page)
    for line in record.lines:
        yield _shown_in(line, shown.get(line.no, []), name, compared.get(line.no, ""))
    for number in sorted(set(shown) - {line.no for line in record.lines}):
        yield wrong(_GROUP, f"{name}, line {number}", "the page shows a line that the record does not have")
    if rows:
        yield from _tables(page, rows, name)


def _tables(page: str, rows: Sequence[str], name: str) -> Iterator[Finding]:
    """Whether the page has every row of a copy's tables."""
    there = Counter(
        "|".join(bare(html.unescape(_TAG.sub("", cell))) for cell in _CELL.findall(row))
        for row in _ROW.findall(page)
    )
    missing = Counter(rows) - there
    for row in missing:
        yield wrong(_GROUP, f"{name}, a table's row", "the page does not show it so", other=row[:80])
    if not missing:
        yield good(_GROUP, f"{name}, tables", f"{len(rows)} rows as the notebook shows them")


def _plain(page: str, name: str) -> Finding:
    """A sheet has one style sheet at its head, no script, no comment, nothing that acts."""
    head, _, body = page.removeprefix("<!DOCTYPE html>").partition("</style>")
    if head.count("<style") != 1:
        return wrong(_GROUP, name, "the page has not one style sheet at its head, as a sheet has")
    strange = next(_strange(head.partition("<style")[0]), None) or next(_strange(body), None)
    if strange is None:
        return good(_GROUP, name, "no script, no comment, one style sheet")
    return wrong(_GROUP, name, "the page holds what no sheet has", printed=" ".join(strange.split())[:40])


def _strange(part: str) -> Iterator[str]:
    """What of a page's text no sheet has."""
    low = part.lower()
    yield from (found[0] for found in _FOREIGN.finditer(low))
    yield from (each for each in _LEADING if each in low)
    for found in itertools.islice(_ACTING.finditer(low), _MOST_LIKE):
        at = found.start()
        tag = low.rfind("<", max(0, at - _LONGEST_TAG), at)
        begun = tag >= 0 and low.find(">", tag, at) < 0
        if begun and low[at - 1] in " \t\n\f\r/\"'" and not low.count('"', tag, at) % 2:
            yield found[0]


def _lines(page: str) -> dict[str, list[str]]:
    """The marked-up text of each line by its number; of a line that stands there twice, both."""
    found: dict[str, list[str]] = {}
    begins = list(itertools.islice(_LINE.finditer(page), MOST_LINES))
    for begin, following in itertools.zip_longest(begins, begins[1:]):
        last = following.start() if following else len(page)
        end = page.find(_END, begin.end(), last)
        found.setdefault(begin[1], []).append(page[begin.end() : end if end >= 0 else last])
    return found


def _parts(marked_up: str) -> dict[str, str]:
    """Number, main part and notes of a line, as they are read."""
    pieces = _PART.split(marked_up)
    return {
        kind: html.unescape(_TAG.sub("", text)) for kind, text in zip(pieces[1::2], pieces[2::2], strict=True)
    }


def _shown_in(line: RecordLine, shown: list[str], name: str, compared: str) -> Finding:
    place = f"{name}, line {line.no}"
    if len(shown) != 1:
        times = "not" if not shown else f"{len(shown)} times"
        return wrong(_GROUP, place, f"the page shows this line {times}", says=line.says, printed=line.shown)
    parts = _parts(shown[0])
    main = parts.get("main", "")
    if bare(parts.get("no", "")) != line.no or not bare(main).startswith(bare(line.says)):
        return wrong(_GROUP, place, "the page shows this line with other words", says=line.says)
    if line.kind == "require":
        right = shows_value(line, [upright(main)], compared)
    else:  # what follows the last sign of equality
        right = bare(main).rpartition("=")[2] == bare(line.shown)
    if right:
        return Finding(_GROUP, place, line.says, line.shown)
    remark = "the page shows this line with another value"
    return Finding(_GROUP, place, line.says, line.shown, verdict=Verdict.WRONG, remark=remark)
