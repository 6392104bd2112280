"""Rows of the published tables in shared/verification, for tests."""

from __future__ import annotations

import pytest

from calcpack.verification.reckon import compare_row, rows
from calcpack.verification.tables import Row


def published(topic: str, *tables: str, by: str = "") -> list:
    """Parameters: the rows of some tables, named by their labels or by the cells of ``by``."""
    return [
        pytest.param(row, id="-".join(row.text(column) for column in by.split(",")) if by else row.label)
        for table in tables
        for row in rows(topic, table)
    ]


def wrong(row: Row) -> list[str]:
    """Every comparison of a row that does not hold."""
    return [str(each) for each in compare_row(row) if not each.holds]
