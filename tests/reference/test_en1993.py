"""EN 1993-1-1 steel beams beside printed answers: shared/verification/en1993.toml."""

from __future__ import annotations

import pytest
from published import published, wrong


@pytest.mark.parametrize("row", published("en1993", "unrestrained beam", by="symbol,printed"))
def test_unrestrained_beam(row):
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("en1993", "unrestrained beam, own factors"))
def test_unrestrained_beam_with_its_own_factors(row):
    """C1 from the diagram in place of the printed 1.127: less than one per cent apart."""
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("en1993", "resistances"))
def test_resistances_of_the_section_tables(row):
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("en1993", "buckling curves", by="slenderness"))
def test_buckling_curves(row):
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("en1993", "end moments", by="ψ,C1"))
def test_diagram_factor_under_end_moments(row):
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("en1993", "loads"))
def test_factors_under_loads(row):
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("en1993", "printed constants"))
def test_critical_moment_from_printed_constants(row):
    assert wrong(row) == []
