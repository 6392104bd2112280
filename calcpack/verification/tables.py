"""The published values the program is compared with: data in shared/verification, one file a topic."""

from __future__ import annotations

import datetime
import re
import tomllib
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import cached_property, lru_cache
from pathlib import Path
from typing import Any, Literal

from pydantic import Field, ValidationError, model_validator

from calcpack.job.errors import CalcpackError
from calcpack.job.house import house_folder
from calcpack.job.model import Frozen
from calcpack.verification.arithmetic import worked_out

Known = Literal["from memory", "read on the page", "read in a transcription", "by hand", "own method"]
Cell = str | float | int | bool


class Source(Frozen):
    """Where values were published, and how they came into the table."""

    title: str
    edition: str = ""
    known: Known


class Quantity(Frozen):
    """A column of published values.

    ``within`` says how far ours may be: "half a unit" (of the last printed digit), "N units", "1 %",
    "1e-11 relative", a number in the column's unit, "rounded up to N", "N below, N above", "same"
    (words), or the name of a column that says so row by row; ``formula`` the same where a formula is
    published ("= w*l/2"); ``because`` says why where it is not the printed rounding.
    """

    column: str
    name: str = ""
    unit: str = ""
    within: str = "half a unit"
    formula: str = "1e-11 relative"
    because: str = ""

    @property
    def shown(self) -> str:
        """Name and unit."""
        return (self.name or self.column) + (f" [{self.unit}]" if self.unit else "")


class Noticed(Frozen):
    """A slip that the tolerances have to notice: a column's numbers, or our results, times a factor."""

    column: str = ""
    times: float
    says: str
    rows: int = 0  # at least so many rows where it cannot be all, a value of 0 say; 0 for all


class Table(Frozen):
    """A table of published values; the cells of ``compared`` columns are strings, as printed."""

    key: str
    title: str
    kind: Literal["published", "deviation"] = "published"
    source: str = ""
    says: str = ""
    note: str = ""
    label: str = ""
    columns: tuple[str, ...]
    compared: tuple[Quantity, ...] = Field(min_length=1)
    rows: tuple[tuple[Cell, ...], ...] = Field(min_length=1)
    noticed: Noticed | None = None

    @model_validator(mode="after")
    def _even(self) -> Table:
        for number, row in enumerate(self.rows, 1):
            if len(row) != len(self.columns):
                raise ValueError(f"row {number} of '{self.key}' has {len(row)} cells for {len(self.columns)}")
        for quantity in self.compared:
            if quantity.column not in self.columns:
                raise ValueError(f"'{self.key}' has no column '{quantity.column}'")
            place = self.columns.index(quantity.column)
            for number, row in enumerate(self.rows, 1):
                if not isinstance(row[place], str):
                    raise ValueError(
                        f"row {number} of '{self.key}': {quantity.column} is not in quotes, as printed"
                    )
        return self


class Method(Frozen):
    """A comparison with another method, run over many cases."""

    key: str
    title: str
    by: str
    says: str
    cases: int = Field(gt=0)
    first: int = 0
    within: float = Field(gt=0)
    noticed: str = ""
    measure: str
    live: bool = False


class Topic(Frozen):
    """A file of tables."""

    name: str
    order: int
    says: str
    revised: datetime.date
    sources: dict[str, Source] = Field(default_factory=dict)
    letters: dict[str, str] = Field(default_factory=dict)
    lines: dict[str, dict[str, Any]] = Field(default_factory=dict)
    loads: dict[str, tuple[tuple[str, ...], ...]] = Field(default_factory=dict)
    data: dict[str, Any] = Field(default_factory=dict)
    table: tuple[Table, ...] = ()
    method: tuple[Method, ...] = ()
    key: str = ""

    @cached_property
    def values(self) -> dict[str, float]:
        """Value of every letter, each worked out from those before it."""
        found: dict[str, float] = {}
        for letter, formula in self.letters.items():
            found[letter] = worked_out(formula, found)
        return found

    def find(self, key: str) -> Table:
        """The table of that key."""
        return next(table for table in self.table if table.key == key)

    def find_method(self, key: str) -> Method:
        """The method of that key."""
        return next(method for method in self.method if method.key == key)

    def rows_of(self, table: Table) -> Iterator[Row]:
        """A table's rows."""
        for cells in table.rows:
            yield Row(self, table, dict(zip(table.columns, cells, strict=True)))

    @model_validator(mode="after")
    def _known_sources(self) -> Topic:
        for table in self.table:
            for row in self.rows_of(table):
                if not row.sources:
                    raise ValueError(
                        f"'{row.label}' of '{table.key}' names none of the sources {list(self.sources)}"
                    )
        return self


@dataclass(frozen=True)
class Row:
    """A row of a table with what its topic says."""

    topic: Topic
    table: Table
    cells: Mapping[str, Cell]

    @property
    def label(self) -> str:
        """What the row is, in words."""
        if self.table.label:
            return self.table.label.format(**self.cells)
        return str(self.cells[self.table.columns[0]])

    @property
    def citation(self) -> str:
        """The source as the table cites it: key and place, several parted by commas."""
        return str(self.cells.get("source") or self.table.source)

    @property
    def sources(self) -> tuple[tuple[Source, str], ...]:
        """Every source that is cited, with the place in it."""
        keys = "|".join(sorted(map(re.escape, self.topic.sources), key=len, reverse=True))
        if not keys:
            return ()
        parts = re.split(rf", (?=(?:{keys})\b)", self.citation)
        found = (re.match(rf"({keys})\b *(.*)", part) for part in parts)
        return tuple((self.topic.sources[match[1]], match[2]) for match in found if match)

    @property
    def from_memory(self) -> bool:
        """Whether none of its sources was at hand."""
        return all(source.known == "from memory" for source, _ in self.sources)

    @property
    def by_hand(self) -> bool:
        """Whether it was worked out by hand, or is stated by ourselves."""
        return all(source.known in ("by hand", "own method") for source, _ in self.sources)

    def number(self, column: str) -> float:
        """A cell's number; a formula, where the cell is text."""
        cell = self.cells[column]
        return worked_out(cell, self.topic.values) if isinstance(cell, str) else float(cell)

    def text(self, column: str) -> str:
        """A cell's text."""
        return str(self.cells[column])

    def published(self, quantity: Quantity) -> str:
        """What is printed; "" where there is nothing to compare."""
        return self.text(quantity.column)

    def slipped(self, column: str, times: float) -> Row:
        """The row with a number that is wrong."""
        return Row(self.topic, self.table, {**self.cells, column: self.number(column) * times})


def verification_folder() -> Path:
    """Where the tables stand."""
    return house_folder("shared") / "verification"


@lru_cache(maxsize=4)
def read_topics(folder: Path | None = None) -> tuple[Topic, ...]:
    """Every topic, in the order of the manual.

    Parameters
    ----------
    folder : Path
        Of the tables; the ones that come with the program where left out.

    Raises
    ------
    CalcpackError
        A file is not as it should be; names the file and the place in it.
    """
    folder = folder or verification_folder()
    topics = [_read(path) for path in sorted(folder.glob("*.toml"))]
    if not topics:
        raise CalcpackError(
            f"'{folder}' holds no tables", remedy="name a folder with files like those of shared/verification"
        )
    return tuple(sorted(topics, key=lambda topic: (topic.order, topic.key)))


def _read(path: Path) -> Topic:
    try:
        return Topic.model_validate({**tomllib.loads(path.read_text(encoding="utf-8")), "key": path.stem})
    except ValidationError as error:
        first = error.errors()[0]
        place = ".".join(str(part) for part in first["loc"])
        message = "this key is missing" if first["type"] == "missing" else first["msg"]
        message = message.removeprefix("Value error, ")
        raise CalcpackError(
            message,
            file=path.name,
            key=place,
            remedy="compare it with a table of shared/verification; DEVELOPERS.md says what a table holds",
        ) from None
    except (OSError, ValueError) as error:
        raise CalcpackError(f"the table cannot be read: {error}", file=path.name) from None


def find_topic(key: str) -> Topic:
    """A topic that comes with the program, by the name of its file."""
    return next(topic for topic in read_topics() if topic.key == key)
