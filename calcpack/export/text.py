"""Text as it may stand on a page: nothing invisible, nothing that turns the reading order."""

from __future__ import annotations

import datetime
import itertools
import re

# Controls, marks that override the reading order (they could make 12 read as 21), private use, lone
# surrogates, tags and the byte-order mark: shown by number instead of obeyed.
_UNSEEN = re.compile(
    "[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f\u061c\u200e\u200f\u202a-\u202e\u2060-\u206f\ufeff\ufff0-\ufffb"
    "\ue000-\uf8ff\ud800-\udfff\U000e0000-\U000e0fff\U000f0000-\U0010ffff]"
)
_LINE_BREAKS = re.compile(r"\r\n|[\r\u0085\u2028\u2029]")
_BLANKS = re.compile(r"[ \t\n]+")
_LONG = re.compile(r"\S{25,}")
_STEP = 12  # a long word may be broken after so many characters
_MONTHS = ("Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec")


def by_number(character: str) -> str:
    """A character named by its number, for one that cannot be shown.

    Examples
    --------
    >>> by_number(chr(0x202e))
    '⟨U+202E⟩'
    """
    return f"⟨U+{ord(character):04X}⟩"


def clean_lines(text: str) -> str:
    """Text with its line breaks kept, unseen characters shown by number.

    Examples
    --------
    >>> clean_lines("a" + chr(13) + chr(10) + "b" + chr(7))
    'a\\nb⟨U+0007⟩'
    """
    return _UNSEEN.sub(lambda match: by_number(match[0]), _LINE_BREAKS.sub("\n", text))


def clean(text: str) -> str:
    """Text of one paragraph: blanks run together, unseen characters shown by number.

    Examples
    --------
    >>> clean(" 12" + chr(0x202e) + "34  kN ")
    ' 12⟨U+202E⟩34 kN '
    """
    return _BLANKS.sub(" ", clean_lines(text))


def pieces(text: str) -> list[str]:
    """Text cut where a line may be broken inside a very long word.

    Examples
    --------
    >>> pieces("short words only")
    ['short words only']
    >>> pieces("a " + "x" * 30)
    ['a xxxxxxxxxxxx', 'xxxxxxxxxxxx', 'xxxxxx']
    """
    cuts = [
        cut
        for match in _LONG.finditer(text)
        for cut in range(match.start() + _STEP, match.end(), _STEP)
    ]  # fmt: skip
    edges = [0, *cuts, len(text)]
    return [text[a:b] for a, b in itertools.pairwise(edges)]


def shown_date(date: datetime.date) -> str:
    """A date nobody can read two ways.

    Examples
    --------
    >>> shown_date(datetime.date(2026, 12, 1))
    '1 Dec 2026'
    """
    return f"{date.day} {_MONTHS[date.month - 1]} {date.year}"
