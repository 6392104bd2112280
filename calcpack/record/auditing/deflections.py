"""Deflections of a design, cracked and long-term: each is the value of the line that the results name."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from calcpack.record.auditing.book import Book
from calcpack.record.auditing.lines import WorkedLine
from calcpack.record.auditing.reading import Record
from calcpack.record.auditing.units import unit

STATED_BY = "deflection_lines"
_KEYS = ("total_mm", "live_mm")


def stated_deflections(book: Book, record: Record, lines: Sequence[WorkedLine]) -> None:
    """Hold the deflections against the lines that state them; a sheet without such lines has elastic ones.

    Parameters
    ----------
    book : Book
        Where the findings go.
    record : Record
    lines : sequence of WorkedLine
    """
    named = record.results.get(STATED_BY)
    if named is None:
        return
    if not isinstance(named, Mapping):
        book.wrong(f"results.{STATED_BY}", "it does not name lines")
        return
    by_number = {worked.line.no: worked for worked in lines}
    for key in _KEYS:
        path, at = f"results.deflection.{key}", f"results.{STATED_BY}.{key}"
        book.seen(at)
        no = named.get(key)
        if no is None:
            _without(book, record, key, path)
            continue
        worked = by_number.get(no) if isinstance(no, str) else None
        if worked is None or worked.line.symbol.partition("_")[0] not in ("delta", "Delta"):
            book.wrong(at, "it names no line that states a deflection")
            book.seen(path)
            continue
        size = None if worked.value is None else worked.value
        if size is None or size.dimension != unit("mm").dimension:
            book.wrong(at, f"line {no} is no length")
            book.seen(path)
            continue
        book.compare(path, size.near * 1000, "mm", f"{worked.line.says}, line {no}", scale=1.0)


def _without(book: Book, record: Record, key: str, path: str) -> None:
    """No line states it: there is none where no live load stands on the beam."""
    if key == "total_mm":
        book.wrong(path, "no line states it")
        return
    if (record.results.get("loads") or {}).get("live"):
        book.wrong(path, "no line states it, though live load stands on the beam")
    else:
        book.compare(path, 0.0, "mm", "no live load", scale=1.0)
