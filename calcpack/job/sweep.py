"""What no text or number of a job may be, whatever its key."""

from __future__ import annotations

import math
import unicodedata
from collections.abc import Iterator
from typing import Any

from calcpack.job.entries import Entry, Problems
from calcpack.job.source import DEEPEST

LONGEST = 2000  # characters of one text
LARGEST = 10**15


def sweep(entry: Entry, problems: Problems) -> None:
    """Note texts with control characters, endless texts, numbers that are none.

    Examples
    --------
    >>> problems = Problems()
    >>> sweep(Entry("beam B1", {"design": {"ratios": [1.0, float("nan")]}}, "a.toml", 3), problems)
    >>> print(*problems.found)
    a.toml:3: beam B1: design.ratios: nan is no number; give a finite number
    """
    for key, message, remedy in _faults(entry.data, ""):
        problems.add(entry.problem(message, remedy, key))


def _faults(value: Any, key: str) -> Iterator[tuple[str, str, str]]:
    if isinstance(value, dict | list):
        if key.count(".") >= DEEPEST:
            yield key, "tables are nested too deeply", ""
            return
        for part, inner in value.items() if isinstance(value, dict) else enumerate(value):
            yield from _faults(inner, f"{key}.{part}" if key else str(part))
    elif isinstance(value, str):
        if any(unicodedata.category(each) in ("Cc", "Zl", "Zp", "Cs") for each in value):
            yield key, "the text has a line break or a control character", "write it on one line"
        elif len(value) > LONGEST:
            yield key, f"the text has {len(value)} characters", f"give at most {LONGEST}"
    elif isinstance(value, float) and not math.isfinite(value):
        yield key, f"{value} is no number", "give a finite number"
    elif isinstance(value, int) and abs(value) > LARGEST:
        yield key, "the number is too large", f"give at most {LARGEST:.0e}"
