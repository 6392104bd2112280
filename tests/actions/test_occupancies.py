"""Imposed loads by occupancy: every entry is sound, and the tables say where they come from."""

from io import StringIO

import pytest
from rich.console import Console

from calcpack.actions import combination_set, occupancy_tables
from calcpack.actions.reduction import ASCE, EN, exemption
from calcpack.overview import print_loads

TABLES = {table.name: table for table in occupancy_tables()}
EVERY = [(table.name, use) for table in occupancy_tables() for use in table.uses]
every = pytest.mark.parametrize(("name", "use"), EVERY, ids=[f"{name}, {use.key}" for name, use in EVERY])


@every
def test_a_use_is_complete(name, use):
    assert 0.1 < use.uniform < 15
    assert use.point is None or 0.5 < use.point < 100
    assert use.cite.startswith("Table ")
    assert use.says
    if use.bounds:
        low, high = use.bounds
        assert low <= use.uniform <= high


def test_keys_are_said_once():
    for table in TABLES.values():
        keys = [use.key for use in table.uses]
        assert len(keys) == len(set(keys))


def test_tables_name_their_source():
    assert "Table 4.3-1" in TABLES["ASCE 7-22"].source
    assert "EN 1991-1-1:2002" in TABLES["EN 1991-1-1"].source
    for table in TABLES.values():
        assert "from memory" in table.source
        assert "governs" in table.source


def test_every_category_has_its_combination_factors():
    for use in TABLES["EN 1991-1-1"].uses:
        case = "roof_live" if use.category == "H" else "live"
        occupancy = "" if use.category == "H" else use.category
        found = combination_set("EN 1990", [case], occupancy=occupancy).psi[case]
        assert found["category"] == use.category


def test_the_tables_and_the_rules_agree_on_what_is_not_reduced():
    for use in TABLES["EN 1991-1-1"].uses:
        assert bool(use.reduced) == bool(exemption(EN, use.uniform, use.category))
    for use in TABLES["ASCE 7-22"].uses:
        if use.reduced.endswith("4.7.3"):
            assert exemption(ASCE, use.uniform) == "heavier than 100 psf (4.7.3)"
        elif not use.reduced:
            assert exemption(ASCE, use.uniform) == ""


def test_the_listing_shows_every_use():
    console = Console(width=200, record=True, file=StringIO())
    print_loads(console)
    text = console.export_text()
    for table in TABLES.values():
        assert table.source in text
        for use in table.uses:
            assert use.written[0] in text
            assert use.says in text
