"""What a user can get wrong, said once and in full."""

from __future__ import annotations

import difflib
import re
from collections.abc import Iterable
from dataclasses import dataclass, replace
from itertools import islice, takewhile

# What could steer a terminal or turn a line round: control characters but tab and line feed, and the marks of
# writing direction.
_CONTROL = re.compile("[\x00-\x08\x0b-\x1f\x7f-\x9f\u202a-\u202e\u2066-\u2069\ud800-\udfff]")
MANY = 12  # choices a message lists in full
MOST = 2000  # choices looked at for the nearest, and the longest word there is one for
LONGEST = 80


@dataclass(frozen=True)
class Problem:
    """One thing that is wrong in what the user gave.

    Parameters
    ----------
    message : str
        What is wrong, in the words of the trade.
    remedy : str
        What would be right.
    file, line : str, int
        Where it stands; the line counts from 1.
    mark : str
        What it belongs to, as the user would say it: ``beam B3``, ``panel P1``.
    key : str
        The key of the job file, dotted: ``design.cover``.
    """

    message: str
    remedy: str = ""
    file: str | None = None
    line: int | None = None
    mark: str | None = None
    key: str | None = None

    def __str__(self) -> str:
        place = ":".join(str(part) for part in (self.file, self.line) if part is not None)
        parts = [part for part in (place, self.mark, self.key) if part]
        text = ": ".join([*parts, self.message])
        text = f"{text}; {self.remedy}" if self.remedy else text
        return _CONTROL.sub("\N{REPLACEMENT CHARACTER}", text)

    def at(self, **place: str | int | None) -> Problem:
        """Fill in those parts of the place that are not known yet."""
        missing = {key: value for key, value in place.items() if getattr(self, key) is None}
        return replace(self, **missing)  # type: ignore[arg-type]


class CalcpackError(Exception):
    """Everything a user can cause; carries one problem or several.

    Examples
    --------
    >>> error = CalcpackError("no section 'rb2'", remedy="did you mean 'rb1'?", file="a.toml", line=7)
    >>> str(error)
    "a.toml:7: no section 'rb2'; did you mean 'rb1'?"
    """

    def __init__(self, *problems: Problem | str, **fields: str | int | None) -> None:
        self.problems = tuple(
            problem if isinstance(problem, Problem) else Problem(problem, **fields)  # type: ignore[arg-type]
            for problem in problems
        )
        super().__init__("\n".join(str(problem) for problem in self.problems))


def _likeness(word: str, other: str) -> tuple[float, int]:
    """How alike two words are; of two equally alike the one that begins alike."""
    ratio = difflib.SequenceMatcher(None, other, word).ratio()
    return ratio, sum(1 for _ in takewhile(lambda pair: pair[0] == pair[1], zip(word, other, strict=False)))


def closest(word: str, words: Iterable[str]) -> str | None:
    """The right word a mistyped one stands for, capitals aside; None where none is near.

    Examples
    --------
    >>> closest("KN", ["kN", "kPa"]), closest("xyz", ["kN", "kPa"])
    ('kN', None)
    """
    folded: dict[str, str] = {}
    if len(word) > LONGEST:
        return None
    for choice in islice(words, MOST):
        folded.setdefault(choice.casefold(), choice)
    close = difflib.get_close_matches(word.casefold(), folded, n=5, cutoff=0.55)
    return folded[max(close, key=lambda each: _likeness(word.casefold(), each))] if close else None


def nearest(word: str, words: Iterable[str]) -> str:
    """The remedy for a mistyped word: the nearest right one, or what there is.

    Examples
    --------
    >>> nearest("sheer", ["shear", "moment"])
    "did you mean 'shear'?"
    >>> nearest("xyz", ["shear", "moment"])
    "it can be 'shear' or 'moment'"
    """
    choices = list(dict.fromkeys(words))
    if close := closest(word, choices):
        return f"did you mean '{close}'?"
    if not choices:
        return "there are none"
    if len(choices) > MANY:
        return f"it can be {', '.join(repr(choice) for choice in choices[:MANY])} and so on"
    *first, last = [f"'{choice}'" for choice in choices]
    return f"it can be {', '.join(first)} or {last}" if first else f"it can only be {last}"
