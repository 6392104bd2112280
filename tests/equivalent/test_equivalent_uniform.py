"""Equivalent loads by what they mean, and their comparison with the actual load."""

from __future__ import annotations

import math
import random

import pytest

from calcpack.equivalent import (
    EFFECTS,
    KINDS,
    comparison,
    equivalent_factor,
    equivalents,
    responses,
    under_panel,
)
from calcpack.statics import LineLoad, Load, PointLoad

MATCHED = {
    "shear": "shear",
    "moment": "moment",
    "deflection": "deflection",
    "fixed-end moment": "end_moment",
    "total": "total",
}


def skew(seed: int) -> tuple[float, list[Load]]:
    rng = random.Random(seed)
    span = rng.uniform(2, 12)
    return span, [
        LineLoad(0, span * 0.3, 0, rng.uniform(1, 30)),
        LineLoad(span * 0.2, span, rng.uniform(1, 30), 0),
        PointLoad(rng.uniform(0.1, 0.9) * span, rng.uniform(0, 40)),
    ]


def trapezoid(span: float, rise: float, peak: float) -> list[Load]:
    return [
        LineLoad(0, rise, 0, peak),
        LineLoad(rise, span - rise, peak, peak),
        LineLoad(span - rise, span, peak, 0),
    ]


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("seed", range(12))
def test_the_equivalent_does_the_same(kind: str, seed: int) -> None:
    span, loads = skew(seed)
    load = equivalents(span, loads).of(kind)  # type: ignore[arg-type]
    same = responses(span, [LineLoad(0, span, load, load)])
    assert math.isclose(
        getattr(same, MATCHED[kind]), getattr(responses(span, loads), MATCHED[kind]), rel_tol=1e-12
    )


@pytest.mark.parametrize("seed", range(12))
def test_the_ratios_are_those_of_two_analyses(seed: int) -> None:
    span, loads = skew(seed)
    actual = responses(span, loads)
    table = comparison(span, loads)
    assert tuple(row.kind for row in table.rows) == KINDS
    for row in table.rows:
        same = responses(span, [LineLoad(0, span, row.load, row.load)])
        for effect in EFFECTS:
            assert math.isclose(
                row.ratio(effect), getattr(same, effect) / getattr(actual, effect), rel_tol=1e-11
            )
            assert row.unsafe_for(effect) == (row.ratio(effect) < 1 - 1e-9)
        assert row.unsafe == tuple(effect for effect in EFFECTS if row.ratio(effect) < 1 - 1e-9)


@pytest.mark.parametrize("kind", ["shear", "moment", "deflection", "fixed-end moment"])
def test_what_an_equivalent_matches_is_never_unsafe(kind: str) -> None:
    effect = MATCHED[kind]
    for seed in range(40):
        row = comparison(*skew(seed)).row(kind)  # type: ignore[arg-type]
        assert math.isclose(row.ratio(effect), 1, rel_tol=1e-12)  # type: ignore[arg-type]
        assert effect not in row.unsafe


def test_which_equivalents_of_a_triangle_are_unsafe() -> None:
    """The ratios are fractions of whole numbers: 1/2 : 2/3 : 16/25 : 5/8 of the peak."""
    table = comparison(4, [LineLoad(0, 2, 0, 10), LineLoad(2, 4, 10, 0)])
    assert table.row("moment").unsafe == ()
    assert table.row("moment").shear == pytest.approx(4 / 3)
    assert table.row("deflection").unsafe == ("moment",)
    assert table.row("deflection").moment == pytest.approx(0.96)
    assert table.row("fixed-end moment").unsafe == ("moment", "deflection")
    assert table.row("total").unsafe == ("moment", "deflection", "end_moment")
    assert table.row("total").end_moment == pytest.approx(0.8)


def test_a_point_load_near_a_support_is_short_in_shear_by_moment() -> None:
    """The other way round from a panel's load: no equivalent is safe for everything by its name alone."""
    row = comparison(6, [PointLoad(0.3, 100)]).row("moment")
    assert "shear" in row.unsafe
    assert row.moment == pytest.approx(1)


def test_a_uniform_load_is_its_own_equivalent() -> None:
    table = comparison(7.3, [LineLoad(0, 7.3, 4.2, 4.2)])
    for row in table.rows:
        assert row.load == pytest.approx(4.2, rel=1e-13)
        assert row.unsafe == ()


def test_no_load_has_no_equivalent_and_nothing_unsafe() -> None:
    table = comparison(6, [])
    assert [row.load for row in table.rows] == [0] * 5
    assert all(row.ratio(effect) == 1 for row in table.rows for effect in EFFECTS)
    assert all(row.unsafe == () for row in table.rows)


def test_uplift_has_negative_equivalents_with_the_same_ratios() -> None:
    down, up = (comparison(6, trapezoid(6, 2, peak)) for peak in (9.0, -9.0))
    for one, other in zip(down.rows, up.rows, strict=True):
        assert one.load == -other.load < math.inf
        assert [one.ratio(effect) for effect in EFFECTS] == [other.ratio(effect) for effect in EFFECTS]


def test_an_equivalent_that_points_the_other_way_is_unsafe() -> None:
    """Uplift in the middle governs the moment, weight near the supports the shear."""
    loads = [LineLoad(0, 1, 30, 30), LineLoad(5, 6, 30, 30), LineLoad(2, 4, -25, -25)]
    table = comparison(6, loads)
    assert table.actual.moment < 0 < table.actual.shear
    assert table.row("shear").moment < 0
    assert "moment" in table.row("shear").unsafe


def test_balanced_loads_have_no_total_and_say_so() -> None:
    table = comparison(8, [LineLoad(0, 4, -3, -3), LineLoad(4, 8, 3, 3)])
    assert table.row("total").load == 0
    assert table.row("total").unsafe == EFFECTS


@pytest.mark.parametrize("kind", KINDS)
def test_the_closed_forms_agree_with_the_sums(kind: str) -> None:
    rng = random.Random(11)
    for _ in range(60):
        span, m, peak = rng.uniform(1, 15), rng.uniform(1e-6, 1), rng.uniform(0.1, 80)
        found = equivalents(span, trapezoid(span, m * span / 2, peak)).of(kind)  # type: ignore[arg-type]
        assert math.isclose(found, peak * equivalent_factor(kind, m), rel_tol=1e-12)  # type: ignore[arg-type]


@pytest.mark.parametrize("kind", KINDS)
def test_a_square_panel_loads_all_its_beams_alike(kind: str) -> None:
    sides = [under_panel(kind, 5, 4, 4, under_long=long) for long in (False, True)]  # type: ignore[arg-type]
    assert sides[0] == sides[1]


def test_a_long_panel_tends_to_one_way() -> None:
    for kind in KINDS:
        assert under_panel(kind, 5, 4, 4e6, under_long=True) == pytest.approx(10, rel=1e-6)


def test_limits_of_the_closed_forms() -> None:
    with pytest.raises(ValueError, match="not between 0 and 1"):
        equivalent_factor("moment", 1.0001)
    with pytest.raises(ValueError, match="not a short and a long one"):
        under_panel("moment", 5, 6, 4, under_long=True)
