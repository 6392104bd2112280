"""Every table of published values beside what the program makes of it."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence

from calcpack.job.errors import CalcpackError
from calcpack.progress import Follow
from calcpack.verification.comparison import Comparison, Reckoner
from calcpack.verification.ours import (
    aci318,
    actions,
    aisc360,
    beams,
    en1992,
    en1993,
    en1993_eigenvalues,
    equivalent,
    sections,
    slabs,
)
from calcpack.verification.tables import Row, Table, Topic, find_topic

RECKONERS: Mapping[str, Mapping[str, Reckoner]] = {
    "statics": beams.RECKONERS,
    "equivalent": equivalent.RECKONERS,
    "slabs": slabs.RECKONERS,
    "actions": actions.RECKONERS,
    "sections": sections.RECKONERS,
    "aci318": aci318.RECKONERS,
    "en1992": en1992.RECKONERS,
    "aisc360": aisc360.RECKONERS,
    "en1993": {**en1993.RECKONERS, "eigenvalues": en1993_eigenvalues.eigenvalue_row},
}
"""Name of a topic's file -> key of a table -> what makes ours of a row."""


def _place(row: Row) -> dict[str, str]:
    return {"file": f"{row.topic.key}.toml", "key": row.table.key}


def _reckoner(row: Row) -> Reckoner:
    reckoner = RECKONERS.get(row.topic.key, {}).get(row.table.key)
    if reckoner is None:
        known = ", ".join(f"'{key}'" for key in RECKONERS.get(row.topic.key, {})) or "none of this file"
        raise CalcpackError(
            "nothing in the program belongs to this table",
            remedy=f"tables it knows: {known}",
            **_place(row),
        )
    return reckoner


def compare_row(row: Row, ours: Row | None = None) -> tuple[Comparison, ...]:
    """Every published value of a row beside ours.

    Parameters
    ----------
    row : Row
    ours : Row
        What ours is made of, where it is to differ from the row.

    Raises
    ------
    CalcpackError
        The program does not know the table, or cannot work the row out.
    """
    reckoner = _reckoner(row)
    try:
        made = reckoner(ours or row)
        found = tuple(
            Comparison(row, quantity, made[quantity.column])
            for quantity in row.table.compared
            if row.published(quantity) != ""
        )
        for each in found:
            _ = each.holds  # formulas and tolerances are read here
    except CalcpackError:
        raise
    except (KeyError, ValueError, ArithmeticError, AssertionError, IndexError, StopIteration) as error:
        said = str(error) or type(error).__name__
        raise CalcpackError(f"the row '{row.label}' cannot be worked out: {said}", **_place(row)) from error
    return found


def compare_table(topic: Topic, table: Table) -> tuple[Comparison, ...]:
    """Every comparison of a table, row by row."""
    return tuple(each for row in topic.rows_of(table) for each in compare_row(row))


def compare_all(topics: Sequence[Topic], follow: Follow | None = None) -> tuple[Comparison, ...]:
    """Every comparison of the topics; ``follow`` hears how far it is (words, done, of)."""
    tables = [(topic, table) for topic in topics for table in topic.table]
    found: list[Comparison] = []
    for number, (topic, table) in enumerate(tables):
        if follow:
            follow("tables", number, len(tables))
        found += compare_table(topic, table)
    if follow:
        follow("tables", len(tables), len(tables))
    return tuple(found)


def rows(topic: str, table: str) -> list[Row]:
    """The rows of a table that comes with the program."""
    found = find_topic(topic)
    return list(found.rows_of(found.find(table)))


def notices(row: Row, comparisons: Sequence[Comparison] | None = None) -> bool:
    """Whether the row's tolerances notice the slip that its table names."""
    slip = row.table.noticed
    if slip is None:
        return False
    if slip.column:
        return not all(each.holds for each in compare_row(row, row.slipped(slip.column, slip.times)))
    return not all(each.times(slip.times).holds for each in comparisons or compare_row(row))


def noticing(topic: Topic, table: Table) -> Iterator[bool]:
    """For every row whether it notices the table's slip."""
    return (notices(row) for row in topic.rows_of(table))
