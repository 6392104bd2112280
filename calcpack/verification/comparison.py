"""A published value beside ours, and whether ours is as near as the table's rounding allows."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from decimal import Decimal
from functools import cached_property
from typing import Any

from calcpack.verification.arithmetic import worked_out
from calcpack.verification.tables import Quantity, Row, Table, Topic

Ours = Mapping[str, float | str]
Reckoner = Callable[[Row], Ours]
_HALF = 0.5001  # of a unit of the last place; halves are rounded either way
_NUMBER = re.compile(r"-?[\d.]+")
_WITHIN = re.compile(
    r"(?P<units>[\d.]+) units?|(?P<percent>[\d.]+) %|(?P<relative>[\d.e-]+) relative|(?P<plain>[\d.e-]+)"
    r"|rounded up to (?P<up>[\d.]+)|(?P<below>[\d.]+) below, (?P<above>[\d.]+) above"
)


def last_place(printed: str) -> float:
    """A unit of the last digit of a printed number.

    Examples
    --------
    >>> last_place("0.128"), last_place("2880")
    (0.001, 1.0)
    """
    return float(10.0 ** int(Decimal(printed).as_tuple().exponent))


@dataclass(frozen=True)
class Allowed:
    """How far below and above a published value ours may be."""

    below: float
    above: float

    @classmethod
    def of(cls, rule: str, printed: str, value: float) -> Allowed:
        """Read a rule of a table (see :class:`calcpack.verification.tables.Quantity`).

        Raises
        ------
        ValueError
            It is no rule.

        Examples
        --------
        >>> Allowed.of("1 %", "250", 250.0)
        Allowed(below=2.5, above=2.5)
        """
        if rule == "half a unit":
            return cls.both(_HALF * last_place(printed))
        found = _WITHIN.fullmatch(rule)
        if found is None:
            raise ValueError(f"'{rule}' is no tolerance")
        if found["units"]:
            return cls.both(float(found["units"]) * last_place(printed) * (1 + 1e-9))
        if found["percent"]:
            return cls.both(float(found["percent"]) / 100 * abs(value))
        if found["relative"]:
            return cls.both(float(found["relative"]) * abs(value) or float(found["relative"]))
        if found["up"]:
            return cls(float(found["up"]), 1e-9 * abs(value))
        if found["below"]:
            return cls(float(found["below"]), float(found["above"]))
        return cls.both(float(found["plain"]))

    @classmethod
    def both(cls, size: float) -> Allowed:
        """The same either way."""
        return cls(size, size)


def _finite(value: float | str) -> float | str | None:
    """A value as JSON can hold it."""
    return value if isinstance(value, str) or math.isfinite(value) else None


@dataclass(frozen=True)
class Comparison:
    """One published value and ours.

    Parameters
    ----------
    row : Row
        With table, topic and sources.
    quantity : Quantity
        What is compared, its unit and its tolerance.
    ours : float or str
        In the table's unit; words where the table has words.
    """

    row: Row
    quantity: Quantity
    ours: float | str

    @property
    def table(self) -> Table:
        """The table it stands in."""
        return self.row.table

    @property
    def topic(self) -> Topic:
        """The topic of the table."""
        return self.row.topic

    @property
    def published(self) -> str:
        """As printed; a formula where the source has a formula."""
        return self.row.published(self.quantity)

    @property
    def rule(self) -> str:
        """The tolerance's rule."""
        if self.is_formula:
            return self.quantity.formula
        within = self.quantity.within
        return self.row.text(within) if within in self.table.columns else within

    @property
    def in_words(self) -> bool:
        """Whether words are compared, not numbers."""
        return not self.is_formula and (self.rule == "same" or not _NUMBER.fullmatch(self.published))

    @property
    def is_formula(self) -> bool:
        """Whether the source has a formula in place of a number."""
        return self.published.startswith("=")

    @cached_property
    def value(self) -> float:
        """The published number, or what the published formula gives."""
        if self.is_formula:
            return worked_out(self.published[1:], self.topic.values | self._numbers)
        return float(self.published)

    @property
    def _numbers(self) -> dict[str, float]:
        cells = self.row.cells.items()
        return {key: float(cell) for key, cell in cells if isinstance(cell, int | float)}

    @cached_property
    def allowed(self) -> Allowed:
        """How far ours may be."""
        return Allowed.of(self.rule, self.published, self.value)

    @property
    def difference(self) -> float:
        """Ours less theirs; not a number for words."""
        return math.nan if isinstance(self.ours, str) else self.ours - self.value

    @cached_property
    def share(self) -> float:
        """The difference as a part of what is allowed; 1 is the most. Of words 0 or infinity."""
        if self.in_words:
            return 0.0 if self.ours == self.published else math.inf
        if isinstance(self.ours, str) or not math.isfinite(self.ours):
            return math.inf
        off = self.difference
        room = self.allowed.above if off > 0 else self.allowed.below
        return 0.0 if off == 0 else abs(off) / room if room else math.inf

    @property
    def holds(self) -> bool:
        """Whether ours is as near as the table allows."""
        return self.share <= 1.0

    def times(self, factor: float) -> Comparison:
        """With ours wrong by a factor; words with another word."""
        return replace(self, ours="?" if isinstance(self.ours, str) else self.ours * factor)

    def __str__(self) -> str:
        return (
            f"{self.topic.name}: {self.table.title}: {self.row.label}, {self.quantity.shown}:"
            f" {self.ours} beside {self.published}"
        )

    def as_data(self) -> dict[str, Any]:
        """Plain data, for programs."""
        words = self.in_words
        return {
            "topic": self.topic.name,
            "table": self.table.title,
            "kind": self.table.kind,
            "row": self.row.label,
            "quantity": self.quantity.name or self.quantity.column,
            "unit": self.quantity.unit,
            "sources": [
                {"title": source.title, "edition": source.edition, "place": place, "known": source.known}
                for source, place in self.row.sources
            ],
            "from_memory": self.row.from_memory,
            "published": self.published,
            "value": None if words else self.value,
            "ours": _finite(self.ours),
            "difference": None if words else _finite(self.difference),
            "allowed": None if words else [-self.allowed.below, self.allowed.above],
            "tolerance": self.rule,
            "holds": self.holds,
        }
