"""How much of a slab goes to which side: the dividing lines against a code table and against plate theory.

Dividing lines are a rule of practice, no theory of plates. These tests state how far they are from the
tables in shared/verification/slabs.toml, which names the sources.

Ratios are ours over theirs. A stated ratio is met to half a unit of its last place, both at its least and
its most, so that a change of the rule, better or worse, is noticed.
"""

from __future__ import annotations

from itertools import chain

import numpy as np
import pytest
from published import published, wrong

from calcpack.equivalent import KINDS, equivalents, loads_on, shape_of, under_panel
from calcpack.job.model import Beam, Column, Point
from calcpack.verification.comparison import Comparison
from calcpack.verification.methods import PLATES
from calcpack.verification.ours.slabs import (
    HERE,
    coefficients,
    extremes,
    ratios,
    rectangle,
    shares,
    stands,
    tabulated,
)
from calcpack.verification.plate import Plate, plate
from calcpack.verification.reckon import compare_row
from calcpack.verification.tables import find_topic

SLABS = find_topic("slabs")
BALANCE = SLABS.find_method("balance of the plate")


# --- BS 8110-1:1997, Table 3.15 ----------------------------------------------------------------------


@pytest.mark.parametrize("continuous", coefficients(SLABS))
def test_the_table_carries_the_whole_load(continuous: str) -> None:
    """Each column adds up to the load within the rounding of its coefficients: a misprint would show."""
    for column, ratio in enumerate(ratios(SLABS)):
        total = sum(tabulated(SLABS, continuous, column))
        rounding = 0.005 * 0.75 * (2 * ratio + 2)
        assert abs(total - ratio) <= rounding
        for misprint in (0.05, -0.05):  # in the coefficient of one long side
            assert abs(total + misprint * 0.75 * ratio - ratio) > rounding


@pytest.mark.parametrize("row", published("slabs", "sides held alike"))
def test_sides_held_alike_agree_with_the_table(row) -> None:
    """45° lines give the table's coefficients to one unit of their last place; two units would show."""
    assert wrong(row) == []
    column = ratios(SLABS).index(row.number("ratio"))
    found = shares(row.number("ratio"), row.text("continuous"), row.text("lines"))
    table = coefficients(SLABS)[row.text("continuous")]
    held = "continuous" if row.text("continuous") == "1111" else "discontinuous"
    assert found[0] == pytest.approx(found[1], rel=1e-12)
    assert found[2] == pytest.approx(found[3], rel=1e-12)
    for each, printed in zip(
        compare_row(row), (table[f"long {held}"][column], table[f"short {held}"][0]), strict=True
    ):
        assert each.value == printed
        assert not Comparison(row, each.quantity, each.ours - 0.02).holds


@pytest.mark.parametrize("lines", ["45", "60 at continuous edges"])
@pytest.mark.parametrize("continuous", ["1111", "0000"])
def test_sides_held_alike_over_all_ratios(continuous: str, lines: str) -> None:
    least, most = extremes(SLABS, continuous, lines, continuous[0])
    assert (least, most) == pytest.approx((0.99, 1.01), abs=0.0051)


@pytest.mark.parametrize("row", published("slabs", "sides held differently, 45", by="continuous"))
def test_45_degrees_where_sides_are_held_differently(row) -> None:
    """The table gives a continuous side half as much again as a discontinuous one; 45° lines do not.

    They leave continuous sides up to 26 % short of the table, and bring the others up to 39 % more.
    """
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("slabs", "sides held differently, 60", by="continuous"))
def test_60_degrees_where_sides_are_held_differently(row) -> None:
    """60° lines go further than the table.

    Continuous sides get from 9 % less to 44 % more, the others from 11 % more down to 31 % less.
    """
    assert wrong(row) == []


def test_every_panel_of_the_table_is_compared() -> None:
    tables = ("sides held alike", "sides held differently, 45")
    rows = chain.from_iterable(SLABS.rows_of(SLABS.find(table)) for table in tables)
    assert {row.text("continuous") for row in rows} == set(coefficients(SLABS))


# --- the elastic plate -------------------------------------------------------------------------------


@pytest.mark.parametrize("row", published("slabs", "the plate", by="ratio"))
def test_the_plate_is_timoshenkos(row) -> None:
    """Reactions to half a unit of the last place; the corner force to one (0.0859 is printed 0.085)."""
    assert wrong(row) == []
    other = Plate(row.number("ratio"), poisson=0.2)  # what the table is not for
    _, long, _, corner = compare_row(row)
    assert not Comparison(row, long.quantity, other.on_long(0.0)).holds
    assert not Comparison(row, corner.quantity, other.corner).holds


@pytest.mark.parametrize("row", published("slabs", "largest reaction of the plate", by="ratio,γ"))
def test_the_largest_reaction_is_roarks(row) -> None:
    """To one unit of the last place: 0.4558 is printed 0.455."""
    assert wrong(row) == []
    (reaction,) = compare_row(row)
    ratio = row.number("ratio")
    other = plate(ratio * 1.1 if ratio < 2 else ratio / 2).on_long(0.0)
    assert not Comparison(row, reaction.quantity, other).holds


@pytest.mark.parametrize("ratio", PLATES)
def test_reactions_less_corner_forces_are_the_load(ratio: float) -> None:
    assert len(PLATES) == BALANCE.cases
    assert abs(plate(ratio).unbalanced) < BALANCE.within
    long, short = plate(ratio).sides
    assert 2 * long + 2 * short > 1.12 * ratio  # without the corners' holding down nothing balances


@pytest.mark.parametrize("ratio", [1.0, 1.5, 2.0])
def test_the_sides_are_the_integrals_of_the_reactions(ratio: float) -> None:
    nodes, weights = np.polynomial.legendre.leggauss(60)
    found = plate(ratio)
    long = sum(w * found.on_long(x * ratio / 2) for x, w in zip(nodes, weights, strict=True)) * ratio / 2
    short = sum(w * found.on_short((x + 1) / 2) for x, w in zip(nodes, weights, strict=True)) / 2
    assert (long, short) == pytest.approx(found.sides, abs=1e-3)


@pytest.mark.parametrize("row", published("slabs", "load on a side", by="ratio,long side,short side"))
def test_45_degrees_share_the_load_nearly_as_the_plate_does(row) -> None:
    """Of what arrives on a side, the corners' holding down taken off half and half.

    By the rule long sides get up to 3.5 % more, short sides up to 8 % less.
    """
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("slabs", "moment of a beam", by="ratio,long side,short side"))
def test_45_degrees_are_short_of_the_elastic_plate_in_the_beams_moment(row) -> None:
    """A limit of the rule worth knowing.

    The elastic plate on unyielding sides presses on them with more than its load and pulls back at the held
    corners, which spares no beam any moment: under a long side a simple beam would bend 1 to 12 % more, under
    a short one 12 to 32 % more than by trapezoid and triangle. Real beams yield and shed load; the rule
    counts on that.
    """
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("slabs", "reaction along a side"))
def test_the_shape_of_the_reaction_against_the_trapezoid(row) -> None:
    """Along the long side of a panel 1 by 2, over q a: the plate is fuller than the ramp near the corners."""
    assert wrong(row) == []


# --- from a framed floor to the equivalent load ------------------------------------------------------


@pytest.mark.parametrize(("short", "long"), [(4.5, 6.0), (4.0, 4.0), (3.6, 7.0)])
def test_beams_round_a_panel_get_the_shapes_and_the_published_loads(short: float, long: float) -> None:
    corners: list[Point] = [(0, 0), (long, 0), (long, short), (0, short)]
    beams = [
        Beam(
            mark=f"B{k}",
            points=(corners[k], corners[(k + 1) % 4]),
            point_names=("start", "end"),
            equivalent="moment",
            design_loads="actual",
            place=HERE,
        )
        for k in range(4)
    ]
    columns = [
        Column(mark=f"C{k}", at=corner, point_name=str(corner), place=HERE)
        for k, corner in enumerate(corners)
    ]
    floor = stands([rectangle("P", (0, 0), (long, short), 5.5)], [], beams, columns, "45")
    for mark, span in (("B0", long), ("B1", short), ("B2", long), ("B3", short)):
        loads = loads_on(floor.beams[mark].loads["live"], 0, span)
        shape = shape_of(span, loads)
        assert shape.kind == ("trapezoid" if span > short else "triangle")
        assert shape.peak == pytest.approx(5.5 * short / 2, rel=1e-12)
        assert shape.side_ratio == pytest.approx(short / span, rel=1e-12)
        found = equivalents(span, loads)
        for kind in KINDS:
            expected = under_panel(kind, 5.5, short, long, under_long=span > short)
            assert found.of(kind) == pytest.approx(expected, rel=1e-12)
    assert set(chain.from_iterable(beam.panels for beam in floor.beams.values())) == {"P"}
