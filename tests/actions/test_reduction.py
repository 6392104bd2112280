"""Live-load reduction: the formulas at their limits, what is exempt."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcpack.actions.reduction import (
    ASCE,
    EN,
    FOOT,
    HEAVY,
    asce_factor,
    en_factor,
    exemption,
    one_way_slab_area,
    reduction,
)
from calcpack.job.units import parse_quantity

areas = st.floats(0.1, 2000.0)


def square_feet(value):
    return value * FOOT**2


@pytest.mark.parametrize(
    ("influence", "factor"),
    # 15/√ of round areas: the square roots are whole numbers
    [
        (399.9, 1.0),
        (400, 1.0),
        (420.25, 0.25 + 15 / 20.5),
        (625, 0.85),
        (900, 0.75),
        (1600, 0.625),
        (2500, 0.55),
        (3600, 0.5),
        (4000, 0.5),
    ],
)
def test_asce_at_round_areas(influence, factor):
    assert asce_factor(square_feet(influence / 2), 2.0) == pytest.approx(factor, rel=1e-12)
    assert asce_factor(square_feet(influence), 1.0) == pytest.approx(factor, rel=1e-12)


def test_the_floor_is_lower_under_several_floors():
    assert asce_factor(square_feet(5000), 2.0, floors=2) == pytest.approx(0.4)
    assert asce_factor(square_feet(5000), 2.0) == 0.5
    assert asce_factor(square_feet(1600), 2.0, floors=2) == pytest.approx(0.25 + 15 / math.sqrt(3200))


@given(areas, areas)
def test_a_larger_area_is_never_loaded_more(one, other):
    small, large = sorted((one, other))
    for category in "ABCD":
        assert en_factor(large, 0.7, category) <= en_factor(small, 0.7, category) <= 1.0
    assert 0.5 <= asce_factor(large, 2.0) <= asce_factor(small, 2.0) <= 1.0


@given(areas)
def test_the_metric_form_of_the_standard_is_the_same_rounded(area):
    influence = 2 * area
    if influence >= 37.2:
        assert asce_factor(area, 2.0) == pytest.approx(max(0.25 + 4.57 / math.sqrt(influence), 0.5), abs=4e-4)


def test_en_where_it_begins_and_ends():
    # 5/7 of 0.7 is a half: the area at which 10/A makes the other half is 20 m²
    assert en_factor(20.0, 0.7, "B") == pytest.approx(1.0)
    assert en_factor(20.1, 0.7, "B") < 1.0
    assert en_factor(19.0, 0.7, "B") == 1.0
    # in C and D the least is reached where 10/A is a tenth: 100 m²
    assert en_factor(100.0, 0.7, "C") == pytest.approx(0.6)
    assert en_factor(99.0, 0.7, "D") > 0.6
    assert en_factor(500.0, 0.7, "D") == 0.6
    assert en_factor(500.0, 0.7, "A") == pytest.approx(0.52)
    assert en_factor(0.0, 0.7, "A") == 1.0


@pytest.mark.parametrize("category", "EFGH")
def test_en_reduces_a_to_d_only(category):
    assert en_factor(500.0, 0.7, category) == 1.0
    assert exemption(EN, 3.0, category) == f"category {category} is none of A to D"
    assert reduction(EN, 500.0, category=category).factor == 1.0


def test_without_a_category_it_is_that_of_the_combination_factors():
    found = reduction(EN, 50.0)
    assert (found.category, found.psi0) == ("B", 0.7)
    assert found.factor == pytest.approx(0.5 + 10 / 50)
    assert exemption(EN, 20.0) == ""


def test_exactly_a_hundred_pounds_may_be_reduced():
    assert parse_quantity("100 psf", "pressure") == pytest.approx(HEAVY, rel=1e-12)
    assert exemption(ASCE, parse_quantity("100 psf", "pressure")) == ""
    assert exemption(ASCE, parse_quantity("100.1 psf", "pressure")) == "heavier than 100 psf (4.7.3)"


@pytest.mark.parametrize(
    ("category", "reason"), [("C", "assembly"), ("F", "garage"), ("G", "garage"), ("B", "")]
)
def test_asce_exempts_by_use(category, reason):
    found = exemption(ASCE, 2.0, category)
    assert found.startswith(reason)
    assert bool(found) == bool(reason)


def test_cantilevers_have_half_the_influence_area():
    assert reduction(ASCE, 30.0).influence == 60.0
    assert reduction(ASCE, 30.0, cantilever=True).influence == 30.0
    assert reduction(ASCE, 30.0, cantilever=True).factor == 1.0
    assert reduction(ASCE, 30.0).factor == pytest.approx(0.25 + 4.572 / math.sqrt(60.0))


def test_a_one_way_slab_counts_one_and_a_half_spans():
    assert one_way_slab_area(4.0, 100.0) == 24.0
    assert one_way_slab_area(4.0, 23.9) == 23.9


def test_each_rule_knows_only_its_own_factors():
    assert reduction(ASCE, 80.0, category="A").psi0 == 0.0
    assert reduction(EN, 80.0, category="E").psi0 == 0.0
    assert reduction(EN, 80.0, category="A").influence == 80.0
