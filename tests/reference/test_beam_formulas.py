"""Beam tables of handbooks against the analysis: shared/verification/statics.toml.

Two kinds of rows. A formula is met to 1e-11. A printed decimal is met to half a unit of its last place, the
rounding the table itself has.
"""

from __future__ import annotations

from dataclasses import replace

import pytest
from published import published, wrong

from calcpack.statics import Load, PointLoad
from calcpack.verification.comparison import Comparison
from calcpack.verification.ours.beams import formula_row, inflections, loads_of, worst_placement
from calcpack.verification.reckon import compare_row, rows

FORMULAS = ("simple beams", "beams held at an end", "cantilevers and overhangs", "continuous beams")
SPAN = 6.0


@pytest.mark.parametrize("row", published("statics", *FORMULAS))
def test_table_is_met(row):
    assert wrong(row) == []


def heavier(load: Load, by: float) -> Load:
    if isinstance(load, PointLoad):
        return replace(load, force=load.force * by)
    return replace(load, first=load.first * by, last=load.last * by)


def moved(load: Load, by: float) -> Load:
    if isinstance(load, PointLoad):
        return replace(load, at=abs(load.at - by))
    return replace(load, start=load.start + by)


@pytest.mark.parametrize("row", published("statics", *FORMULAS))
def test_tolerance_tells_other_loads_apart(row):
    """Formulas: a load heavier, moved or added by a millionth; printed decimals: by a twentieth."""
    (comparison,) = compare_row(row)
    by = 1e-6 if comparison.is_formula else 0.05
    loads = loads_of(row.topic, row.text("loads"))
    assert row.topic.values["l"] == SPAN
    others = [
        tuple(heavier(load, 1 + by) for load in loads),
        tuple(moved(load, by * SPAN) for load in loads),
        (*loads, PointLoad(0.37 * SPAN, by * sum(load.total for load in loads))),
    ]
    found = [
        Comparison(row, comparison.quantity, formula_row(row, other)["published"]).holds for other in others
    ]
    assert not all(found)


@pytest.mark.parametrize("count", range(1, 8))
def test_equal_spans_as_printed(count):
    spans = [row for row in rows("statics", "equal spans") if row.number("spans") == count]
    assert [row.number("span") for row in spans] == list(range(1, count // 2 + 2))
    for row in spans:
        assert wrong(row) == []
        printed = [row.text("first inflection"), row.text("second inflection")]
        assert inflections(row) == sum(1 for each in printed if each)


@pytest.mark.parametrize("row", published("statics", "worst placement", by="spans,sagging"))
def test_worst_placement_on_equal_spans(row):
    assert wrong(row) == []
    count = int(row.number("spans"))
    assert worst_placement(count).moment.smallest.at == 1.0
    sagging = compare_row(row)[0]
    assert sagging.quantity.column == "sagging"
    assert not sagging.times(1.02).holds
