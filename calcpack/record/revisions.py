"""Which revision comes after which."""

from __future__ import annotations

import re
from collections.abc import Sequence

_PARTS = re.compile(r"([A-Za-z]*)[ ._-]*(\d*)")


def series_and_rank(revision: str) -> tuple[str, tuple[int, str]] | None:
    """A revision's series and its rank in it; None where it is not letters, digits, or letters then digits.

    Letters alone are one series (A ... Z, AA ...), digits alone another; "P02" belongs to the series P.

    Examples
    --------
    >>> series_and_rank("B"), series_and_rank("P02"), series_and_rank("11")
    (('letters', (1, 'B')), ('P', (2, '')), ('', (11, '')))
    """
    match = _PARTS.fullmatch(revision.strip())
    if match is None or not revision.strip():
        return None
    letters, digits = match[1].upper(), match[2]
    if not digits:
        return "letters", (len(letters), letters)
    return letters, (int(digits), "")


def backwards(revision: str, issued: Sequence[str]) -> str:
    """Why a revision cannot follow those issued, in words; "" where it can.

    Parameters
    ----------
    revision : str
        Not the one issued last.
    issued : sequence of str
        In the order of issue.

    Examples
    --------
    >>> backwards("B", ["A"]), backwards("C1", ["P1", "P2"])
    ('', '')
    >>> backwards("A", ["A", "B"])
    'revision B was issued after it'
    >>> backwards("P3", ["P1", "C1"])
    'the series of revision C1 was begun after it'
    """
    if not issued:
        return ""
    if revision in issued:
        return f"revision {issued[-1]} was issued after it"
    new = series_and_rank(revision)
    ranks = [(each, series_and_rank(each)) for each in issued]
    if new is None or any(rank is None for _, rank in ranks):
        return ""  # freely named revisions have the order in which they are issued
    before = [(each, rank) for each, rank in ranks if rank and rank[0] == new[0]]
    if before and ranks[-1][1] and ranks[-1][1][0] != new[0]:
        return f"the series of revision {issued[-1]} was begun after it"
    higher = [each for each, rank in before if rank[1] >= new[1]]
    return f"revision {higher[-1]} was issued already" if higher else ""
