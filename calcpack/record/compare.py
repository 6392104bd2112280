"""Two editions of a pack compared: beams, inputs, lines, requirements."""

from __future__ import annotations

import difflib
import math
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from calcpack.record.editions import Edition, RecordLine, SheetRecord

_NOISE = 1e-9  # what rounding may leave between two runs of the same numbers
_FOUND = ("analysis", "chosen", "second method")  # how the origin of a value begins that no file gives


@dataclass(frozen=True)
class LineChange:
    """One line that is not as it was; ``old`` or ``new`` is None where it is only in one edition."""

    mark: str
    old: RecordLine | None
    new: RecordLine | None

    @property
    def line(self) -> RecordLine:
        """The line as it is now, or as it was."""
        line = self.new or self.old
        assert line is not None
        return line

    @property
    def percent(self) -> float | None:
        """By how much the value changed [%]; None where that says nothing."""
        if self.old is None or self.new is None or self.old.unit != self.new.unit:
            return None
        if self.line.kind == "require":
            return None
        before, after = self.old.value, self.new.value
        if not _is_number(before) or not _is_number(after) or before == 0:
            return None
        return float(100.0 * (after - before) / abs(before))

    @property
    def turned(self) -> str:
        """Which side a requirement changed to; "" where it did not."""
        before, after = (None if each is None else each.passes for each in (self.old, self.new))
        if self.line.kind != "require" or before == after or after is None:
            return ""
        return "satisfied now" if after else "not satisfied any more" if before else "not satisfied"

    @property
    def is_input(self) -> bool:
        """Whether it is a value that the job gives."""
        origin = self.line.origin
        return self.line.kind == "take" and bool(origin) and not origin.startswith(_FOUND)


@dataclass(frozen=True)
class InputChange:
    """A value of the job that changed, with the beams whose sheets show it."""

    origin: str
    says: str
    old: str
    new: str
    marks: tuple[str, ...]


@dataclass(frozen=True)
class Comparison:
    """What changed from one edition to another.

    Parameters
    ----------
    old, new : Edition
    added, removed, unchanged : tuple of str
        Marks.
    lines : mapping of mark to tuple of LineChange
        Of the beams that changed.
    """

    old: Edition
    new: Edition
    added: tuple[str, ...]
    removed: tuple[str, ...]
    unchanged: tuple[str, ...]
    lines: Mapping[str, tuple[LineChange, ...]]

    @property
    def changed(self) -> tuple[str, ...]:
        """Marks of the beams that changed."""
        return tuple(self.lines)

    @property
    def all(self) -> Iterator[LineChange]:
        """Every changed line."""
        for changes in self.lines.values():
            yield from changes

    @property
    def inputs(self) -> tuple[InputChange, ...]:
        """The job's values that changed, each once."""
        found: dict[tuple[str, str, str, str], dict[str, None]] = {}
        for change in self.all:
            if change.is_input:
                shown = tuple("–" if each is None else each.shown for each in (change.old, change.new))
                key = (change.line.origin, change.line.says, shown[0], shown[1])
                if shown[0] != shown[1]:
                    found.setdefault(key, {})[change.mark] = None
        return tuple(InputChange(*key, tuple(marks)) for key, marks in found.items())

    @property
    def turned(self) -> tuple[LineChange, ...]:
        """Requirements that changed side."""
        return tuple(change for change in self.all if change.turned)

    def marked(self, mark: str) -> tuple[str, ...]:
        """Numbers of the lines to be marked on a sheet."""
        return tuple(change.new.no for change in self.lines.get(mark, ()) if change.new is not None)


def compare(old: Edition, new: Edition) -> Comparison:
    """Compare two editions.

    Parameters
    ----------
    old, new : Edition

    Returns
    -------
    Comparison
        Beams in the order of the new edition.
    """
    both = [mark for mark in new.sheets if mark in old.sheets]
    lines = {mark: tuple(compare_sheets(old.sheets[mark], new.sheets[mark])) for mark in both}
    return Comparison(
        old,
        new,
        added=tuple(mark for mark in new.sheets if mark not in old.sheets),
        removed=tuple(mark for mark in old.sheets if mark not in new.sheets),
        unchanged=tuple(mark for mark in both if not lines[mark]),
        lines={mark: changes for mark, changes in lines.items() if changes},
    )


def compare_sheets(old: SheetRecord, new: SheetRecord) -> Iterator[LineChange]:
    """The lines of a sheet that changed, in its order; those left out come where they stood.

    A line is known again by its words, kind and symbol and by its neighbours, not by its number: a line put
    in above does not make all lines below it new ones.
    """
    before_keys, after_keys = (
        [(line.kind, line.symbol, line.says) for line in sheet.lines] for sheet in (old, new)
    )
    matcher = difflib.SequenceMatcher(None, before_keys, after_keys, autojunk=False)
    for kind, old_from, old_to, new_from, new_to in matcher.get_opcodes():
        before, after = old.lines[old_from:old_to], new.lines[new_from:new_to]
        if kind == "equal":
            pairs: Sequence[tuple[RecordLine | None, RecordLine | None]] = list(
                zip(before, after, strict=True)
            )
        else:
            pairs = _paired(before, after)
        for one, other in pairs:
            if one is None or other is None or _differs(one, other):
                yield LineChange(new.mark, one, other)


def _paired(
    before: Sequence[RecordLine], after: Sequence[RecordLine]
) -> list[tuple[RecordLine | None, RecordLine | None]]:
    """Lines of a stretch that was replaced, those of the same kind and symbol side by side."""
    rest = list(before)
    pairs: list[tuple[RecordLine | None, RecordLine | None]] = []
    for line in after:
        twin = next((each for each in rest if line.symbol and _same(each, line)), None)
        if twin is not None:
            rest.remove(twin)
        pairs.append((twin, line))
    return [*((line, None) for line in rest), *pairs]


def _same(one: RecordLine, other: RecordLine) -> bool:
    return (one.kind, one.symbol) == (other.kind, other.symbol)


def _differs(one: RecordLine, other: RecordLine) -> bool:
    said = [
        (line.kind, line.symbol, line.says, line.unit, line.shown, line.cite, line.origin, line.passes)
        for line in (one, other)
    ]
    return (
        said[0] != said[1]
        or not _equal(one.value, other.value)
        or not _equal(one.expression, other.expression)
    )


def _is_number(value: object) -> bool:
    return isinstance(value, int | float) and not isinstance(value, bool)


def _equal(one: Any, other: Any) -> bool:
    """Whether two values or formulas are the same, rounding of the last digits aside."""
    if _is_number(one) and _is_number(other):
        return math.isclose(one, other, rel_tol=_NOISE, abs_tol=_NOISE)
    if isinstance(one, Mapping) and isinstance(other, Mapping):
        return one.keys() == other.keys() and all(_equal(one[key], other[key]) for key in one)
    if isinstance(one, list | tuple) and isinstance(other, list | tuple):
        return len(one) == len(other) and all(map(_equal, one, other))
    return bool(one == other)
