"""The tables of published values: every comparison holds, and every tolerance can fail."""

from __future__ import annotations

import shutil
from pathlib import Path

import pytest

from calcpack.job.errors import CalcpackError
from calcpack.verification.arithmetic import worked_out
from calcpack.verification.comparison import Allowed, Comparison
from calcpack.verification.methods import RUNS
from calcpack.verification.reckon import RECKONERS, compare_all, compare_row, compare_table, noticing
from calcpack.verification.tables import read_topics, verification_folder

TOPICS = read_topics()
TABLES = [
    pytest.param(topic, table, id=f"{topic.key}: {table.key}") for topic in TOPICS for table in topic.table
]


@pytest.mark.parametrize(("topic", "table"), TABLES)
def test_every_comparison_holds(topic, table):
    comparisons = compare_table(topic, table)
    assert comparisons
    assert [str(each) for each in comparisons if not each.holds] == []


@pytest.mark.parametrize(("topic", "table"), TABLES)
def test_every_tolerance_can_fail(topic, table):
    """The slip that the table names is noticed in every row, or in as many as it says."""
    assert table.noticed is not None
    noticed = list(noticing(topic, table))
    assert sum(noticed) >= (table.noticed.rows or len(noticed))
    assert 2 * sum(noticed) > len(noticed)


@pytest.mark.parametrize(("topic", "table"), TABLES)
def test_published_values_are_all_compared(topic, table):
    """No column of a table is left out: each is compared, a number or name of the row, or a tolerance."""
    compared = compare_table(topic, table)
    for quantity in table.compared:
        assert any(each.quantity == quantity for each in compared), quantity.column


def test_every_table_has_its_reckoner_and_every_reckoner_its_table():
    assert {topic.key: {table.key for table in topic.table} for topic in TOPICS if topic.table} == {
        topic: set(reckoners) for topic, reckoners in RECKONERS.items()
    }
    live = {(topic.key, method.key) for topic in TOPICS for method in topic.method if method.live}
    assert live == set(RUNS)


def test_a_tolerance_that_is_not_the_printed_rounding_says_why():
    for topic in TOPICS:
        for table in topic.table:
            for quantity in table.compared:
                printed = ("half a unit", "same", "rounded up to 1", "rounded up to 10")
                assert quantity.within in printed or quantity.because, f"{table.key}: {quantity.column}"


# --- reading ---------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("rule", "printed", "below", "above"),
    [
        ("half a unit", "0.128", 0.0005001, 0.0005001),
        ("half a unit", "2880", 0.5001, 0.5001),
        ("1 unit", "0.85", 0.01, 0.01),
        ("2.5 units", "0.5", 0.25, 0.25),
        ("1 %", "250", 2.5, 2.5),
        ("1e-9 relative", "-4", 4e-9, 4e-9),
        ("0.006", "4.65", 0.006, 0.006),
        ("rounded up to 10", "230", 10.0, 2.3e-7),
        ("0.1 below, 0.02 above", "0.3", 0.1, 0.02),
    ],
)
def test_rules_of_tolerance(rule, printed, below, above):
    found = Allowed.of(rule, printed, float(printed))
    assert (found.below, found.above) == pytest.approx((below, above), rel=1e-6)


def test_a_rule_that_is_none_is_an_error():
    with pytest.raises(ValueError, match="'about right' is no tolerance"):
        Allowed.of("about right", "1.0", 1.0)


@pytest.mark.parametrize(
    "formula",
    ["__import__('os')", "l.real", "open", "(lambda: 1)()", "'a'", "l if l else 1", "[1][0]", "2 +", "1/0"],
)
def test_a_formula_is_arithmetic_and_nothing_else(formula):
    with pytest.raises(ValueError):
        worked_out(formula, {"l": 6.0})


def test_a_value_on_either_side_of_its_tolerance():
    row = next(TOPICS[0].rows_of(TOPICS[0].find("worst placement")))
    each = compare_row(row)[0]
    assert each.published == "0.0957"
    for off, holds in ((0.00005, True), (-0.00005, True), (0.000051, False), (-0.000051, False)):
        assert Comparison(row, each.quantity, 0.0957 + off).holds is holds
    assert not Comparison(row, each.quantity, float("nan")).holds
    assert not Comparison(row, each.quantity, "0.0957").holds


def changed(tmp_path: Path, old: str, new: str) -> Path:
    """A copy of the tables with one text changed in the file of live loads."""
    folder = tmp_path / "tables"
    shutil.copytree(verification_folder(), folder)
    path = folder / "actions.toml"
    text = path.read_text(encoding="utf-8")
    assert text.count(old) >= 1
    path.write_text(text.replace(old, new, 1), encoding="utf-8")
    return folder


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ('["B", "3.0", "4.5"]', '["B", "3.0"]', "row 4 of 'EN 1991-1-1' has 2 cells for 3"),
        (
            '["B", "3.0", "4.5"]',
            '["B", 3.0, "4.5"]',
            "row 4 of 'EN 1991-1-1': qk is not in quotes, as printed",
        ),
        ('column = "Qk"', 'column = "Q"', "'EN 1991-1-1' has no column 'Q'"),
        ('source = "GUIDE"', 'source = "GUIED"', "names none of the sources"),
        ('key = "areas"', 'key = "areas', "cannot be read"),
        ('title = "Reduction factor for areas"', 'titel = "x"', "actions.toml"),
    ],
)
def test_what_is_wrong_in_a_table_is_said(tmp_path, old, new, message):
    with pytest.raises(CalcpackError) as caught:
        read_topics(changed(tmp_path, old, new))
    assert message in str(caught.value)
    assert "actions.toml" in str(caught.value)


@pytest.mark.parametrize(
    ("old", "new", "message"),
    [
        ('["B", "3.0", "4.5"]', '["Bee", "3.0", "4.5"]', "the row 'Bee' cannot be worked out"),
        ('key = "areas"', 'key = "area"', "nothing in the program belongs to this table"),
        ('within = "0.3 %"', 'within = "0.3 percent"', "'0.3 percent' is no tolerance"),
    ],
)
def test_a_row_that_cannot_be_worked_out_is_named(tmp_path, old, new, message):
    topics = read_topics(changed(tmp_path, old, new))
    actions = next(topic for topic in topics if topic.key == "actions")
    with pytest.raises(CalcpackError) as caught:
        compare_all([actions])
    assert message in str(caught.value)
    assert "actions.toml" in str(caught.value)
