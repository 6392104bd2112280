"""The list of changes that make no difference fits the clauses as they are, each place once or more."""

from __future__ import annotations

from functools import lru_cache
from pathlib import Path

import pytest
from mutants import mutants, read_indifferent

ROOT = Path(__file__).resolve().parents[2]


@lru_cache
def changes(file):
    text = (ROOT / file).read_text(encoding="utf-8")
    lines = text.splitlines()
    return [(lines[each.line - 1], each) for each in mutants(text)]


@pytest.mark.parametrize(
    "entry", read_indifferent(), ids=lambda entry: f"{Path(entry.file).name} {entry.fragment}"
)
def test_an_entry_fits_a_change(entry):
    assert any(entry.fits(line, each) for line, each in changes(entry.file))
    assert entry.why


def test_what_is_changed():
    text = '"""At most 2."""\nTOP = 4\n\n\ndef f(x, y=2):\n    return "1.5", f"{3}", x <= 0 or x * True\n'
    found = [(each.line, each.said, each.owner) for each in mutants(text)]
    assert sorted(found) == [
        (2, "4 -> 4.04", ""),
        (5, "2 -> 2.02", ""),
        (6, "'1.5' -> '1.515'", "f"),
        (6, "0 -> 0.01", "f"),
        (6, "x <= 0 turned over", "f"),
    ]
    assert any("x > 0" in each.text for each in mutants(text))
