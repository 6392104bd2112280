"""Where shear is checked, the spacing there, the zones; beams of 300 x 500, d = 450, C30, B500, two legs of 8."""

import math
from dataclasses import replace

import numpy as np
import pytest
from cases_en1992 import beam, given

from calcpack.clauses.bars import bar
from calcpack.clauses.en1992.model import Outline, Stirrups
from calcpack.clauses.en1992.stirrups import (
    checked_shear,
    shear_design,
    shear_places,
    spacing_limit,
    stirrup_sizes,
)

TWO = Stirrups(bar("8 mm"), 2)
AREA = 2 * math.pi * 8**2 / 4 * 1e-6
FYD = 500e3 / 1.15
D = 0.45


def carried(spacing, cot=2.5):
    """(6.8): A_sw/s z fyd cot, z = 0.9 d."""
    return AREA / spacing * 0.9 * D * FYD * cot


# Where shear is checked ----------------------------------------------------------------------------------


def test_shear_is_checked_at_d_from_the_face():
    """60 kN/m over 6 m: 180 at the support, 171 at the face 150 mm on, 144 at d = 450 beyond (6.2.1(8))."""
    left, right = shear_places(beam([6.0], 60.0, half=0.15), D)
    assert left[:3] == (0, "right", 0.15)
    assert left[3:6] == pytest.approx((0.6, 171.0, 144.0))
    assert left.why == ""
    assert right[:2] == (1, "left")
    assert right[2:6] == pytest.approx((5.85, 5.4, 171.0, 144.0))


def test_both_sides_of_an_inner_support():
    """Two spans of 6 m: 3/8 q L = 135 outside, 5/8 q L = 225 on each side inside."""
    found = shear_places(beam([6.0, 6.0], 60.0, half=0.15), D)
    assert [(each.support, each.side) for each in found] == [
        (0, "right"),
        (1, "left"),
        (1, "right"),
        (2, "left"),
    ]
    assert [each.at for each in found] == pytest.approx([0.6, 5.4, 6.6, 11.4])
    assert [each.v_at for each in found] == pytest.approx([99.0, 189.0, 189.0, 99.0])


def test_carried_by_another_beam_shear_is_checked_at_the_face():
    left, right = shear_places(beam([6.0], 60.0, direct=False), D)
    assert (left.why, right.why) == ("carried by a beam", "carried by a beam")
    assert (left.at, right.at) == (0.0, 6.0)
    assert left.v_at == left.v_face == pytest.approx(180.0)


@pytest.mark.parametrize(("at", "near"), [(1.049, True), (1.051, False)])
def test_a_point_load_within_2_d_of_the_face(at, near):
    """150 + 2 x 450 = 1050 mm from the support; on either side."""
    for place, which in ((at, 0), (6.0 - at, 1)):
        found = shear_places(beam([6.0], 60.0, half=0.15, points=((place, 10.0),)), D)
        assert found[which].why == ("point load near" if near else "")
        assert found[1 - which].why == ""
        assert (found[which].at == found[which].face) is near
    over = shear_places(beam([6.0, 6.0], 60.0, half=0.15, points=((6.0, 10.0),)), D)
    assert {each.why for each in over} == {""}  # over a support it does not cross a face


def test_short_overhang_is_checked_at_its_tip():
    """300 mm beyond the support, face at 150: only 150 mm of room for d; beyond a tip there is nothing."""
    found = shear_places(beam([6.0], 60.0, half=0.15, overhang=0.3), D)
    assert [(each.support, each.side) for each in found] == [(0, "right"), (1, "left"), (1, "right")]
    assert found[-1].at == pytest.approx(6.3)
    start = shear_places(beam([6.0], 60.0, half=0.15, start=0.3), D)
    assert start[0].side == "left"
    assert start[0].at == pytest.approx(0.0)


def test_checked_shear_between_support_and_place():
    """Not above that of the place, nothing at the support itself; beyond it the shear."""
    case = beam([6.0], 60.0, half=0.15)
    x = np.array([0.0, 0.3, 0.6, 1.0, 3.0, 5.0, 5.7, 6.0])
    found = checked_shear(case, x, shear_places(case, D))
    assert found == pytest.approx([0.0, 144.0, 144.0, 120.0, 0.0, 120.0, 144.0, 0.0], abs=1e-9)
    # an overhang's shear is less than that of the place: it stays as it is
    case = beam([6.0], 60.0, half=0.15, overhang=1.0)
    found = checked_shear(case, np.array([6.8]), shear_places(case, D))
    assert found == pytest.approx([60.0 * 0.2])


# Spacing -------------------------------------------------------------------------------------------------


def test_widest_spacing():
    """0.75 d (9.6N), A_sw over the least ratio 0.08 root 30/500 of b (9.5N), 15 bars in compression."""
    case = beam([6.0])
    assert spacing_limit(case, TWO, 0.4, None) == pytest.approx(0.3)
    by_ratio = AREA / (0.08 * math.sqrt(30) / 500 * 0.3)
    assert spacing_limit(case, TWO, 1.0, None) == pytest.approx(by_ratio)
    assert spacing_limit(case, TWO, 0.4, 0.012) == pytest.approx(0.18)  # 9.2.1.2(3)


def test_spacing_and_zones_by_hand():
    """Shear 3 q - q x; at 300 mm the stirrups carry 147.5 kN, which the shear passes up to 1.7995 m."""
    q = carried(0.3) / (3 - 1.7995)
    found = shear_design(beam([6.0], q, half=0.2), TWO, D, None)
    assert found.cot == 2.5
    assert found.spacings == pytest.approx((0.15, 0.15))  # 288.8 kN at 0.65 m, 295.0 carried
    assert [tuple(zone) for zone in found.zones] == [
        pytest.approx((0.0, 1.8, 0.15)),
        pytest.approx((1.8, 4.2, 0.3)),
        pytest.approx((4.2, 6.0, 0.15)),
    ]
    assert found.widest == pytest.approx(0.75 * D)
    assert found.arm == pytest.approx(0.405)
    assert found.shift == pytest.approx(0.405 * 2.5 / 2)  # (9.2)
    assert found.legs_apart == pytest.approx(0.3 - 0.06 - 0.008)
    ratios = [found.ratio(number) for number in (0, 1)]
    assert ratios == pytest.approx([q * (3 - 0.65) / carried(0.15)] * 2)
    at, force, ties = found.along
    assert (at, force, ties) == pytest.approx((1.8, q * 1.2, carried(0.3)))


def test_zones_follow_uneven_shear():
    """Two spans: close spacing on both sides of the inner support alone; zones of one spacing are one."""
    found = shear_design(beam([6.0, 6.0], 60.0, half=0.15), TWO, D, None)
    # 225 - 60 x = 147.5 at 1.291 m, so 1.30 m; 189 kN at 0.6 m asks for 234 mm: 225
    assert found.spacings == pytest.approx((0.3, 0.225, 0.225, 0.3))
    assert [tuple(zone) for zone in found.zones] == [
        pytest.approx((0.0, 4.7, 0.3)),
        pytest.approx((4.7, 7.3, 0.225)),
        pytest.approx((7.3, 12.0, 0.3)),
    ]
    assert found.governing in (1, 2)
    assert found.largest == 1


def test_zones_of_an_overhang():
    """Close to the support, wide to the tip, at either end."""
    after = shear_design(beam([4.0], 80.0, overhang=3.0, half=0.15), TWO, D, None)
    before = shear_design(beam([4.0], 80.0, start=3.0, half=0.15), TWO, D, None)
    # 240 - 80 x = 147.5 at 1.156 m of the overhang
    assert tuple(after.zones[-1]) == pytest.approx((5.2, 7.0, 0.3))
    assert tuple(before.zones[0]) == pytest.approx((0.0, 1.8, 0.3))
    assert after.zones[-2].spacing == after.spacings[-1] < 0.3
    assert before.zones[1].spacing == before.spacings[0] < 0.3


def test_close_zone_up_to_a_load_beside_midspan():
    """2 x 147.5 kN at 2.985 m of 6 m: 148.3 kN on its left, which 300 mm do not carry, 146.8 on its right."""
    found = shear_design(beam([6.0], 0.0, points=((2.985, 2 * carried(0.3)),)), TWO, D, None)
    assert [tuple(zone) for zone in found.zones] == [
        pytest.approx((0.0, 3.0, 0.275)),
        pytest.approx((3.0, 6.0, 0.3)),
    ]


def test_close_zones_on_both_sides_of_a_load_beside_midspan():
    """4 kN/m besides 294.7 kN at 2.985 m: over 147.5 kN up to the load, and again from 3.22 m on."""
    load = 0.999 * 2 * carried(0.3)
    found = shear_design(beam([6.0], 4.0, points=((2.985, load),)), TWO, D, None)
    assert [tuple(zone) for zone in found.zones] == [
        pytest.approx((0.0, 3.0, 0.275)),
        pytest.approx((3.0, 3.2, 0.3)),
        pytest.approx((3.2, 6.0, 0.275)),
    ]


def test_one_spacing_where_the_close_zones_meet():
    """A load at 0.8 m of 1.7 m: 318 kN on its left, 282 on its right; the closer spacing all along."""
    found = shear_design(beam([1.7], 0.0, points=((0.8, 600.0),)), TWO, D, None)
    assert found.spacings == pytest.approx((0.125, 0.15))
    assert [tuple(zone) for zone in found.zones] == [pytest.approx((0.0, 1.7, 0.125))]


@pytest.mark.parametrize(
    ("depth", "spacing"), [(0.4, 0.3), (0.3999, 0.275), (0.3334, 0.25), (0.3333, 0.225), (0.02, 0.025)]
)
def test_spacings_are_multiples_of_25_mm(depth, spacing):
    """The widest is 0.75 d, at most 300."""
    found = shear_design(beam([6.0], 1.0), TWO, depth, None)
    assert found.spacings == pytest.approx((spacing, spacing))


def test_closest_spacing_is_75_mm():
    found = shear_design(beam([6.0], 600.0), TWO, D, None)
    assert found.spacings == pytest.approx((0.075, 0.075))
    assert found.ratio(0) > 1
    deep = replace(beam([6.0], 1.0), sagging=Outline(0.3, 2.0, 0.3, 0.0))
    assert shear_design(deep, TWO, 1.9, None).spacings == pytest.approx((0.3, 0.3))


@pytest.mark.parametrize(("share", "spacing"), [(0.999, 0.15), (1.001, 0.125)])
def test_stirrups_exactly_enough(share, spacing):
    """Shear at 0.6 m is 2.4 q."""
    found = shear_design(beam([6.0], share * carried(0.15) / 2.4, half=0.15), TWO, D, None)
    assert min(found.spacings) == pytest.approx(spacing)


@pytest.mark.parametrize(("share", "enough"), [(0.999, True), (1.001, False)])
def test_struts_exactly_enough(share, enough):
    """b z nu fcd/(cot + tan) = 300 x 405 x 0.528 x 20/2.9 = 442.4 kN against the shear at a face."""
    most = 0.3 * 0.405 * 0.528 * 20e3 / 2.9
    case = beam([6.0], share * most / (3 - 2.5), half=2.5, given=given(cot=2.5))
    # the place of check is 2.95 m from the support, next to midspan: struts govern alone
    found = shear_design(case, TWO, D, None)
    assert (found.spacings[0] == pytest.approx(0.3)) is enough
    assert (found.ratio(0) <= 1) is enough


def test_given_stirrups_hold_all_along():
    case = beam([6.0], 60.0, half=0.15, given=given(stirrups=(2, "8 mm", 0.2)))
    found = shear_design(case, TWO, D, None)
    assert found.spacings == (0.2, 0.2)
    assert [tuple(zone) for zone in found.zones] == [(0.0, 6.0, 0.2)]
    assert found.cot == 2.5
    fixed = replace(case, given=given(stirrups=(2, "8 mm", 0.2), cot=1.5))
    assert shear_design(fixed, TWO, D, None).capacity(0.2)[0] == pytest.approx(carried(0.2, 1.5))


# Sizes ---------------------------------------------------------------------------------------------------

ALL = [("8 mm", 2), ("10 mm", 2), ("12 mm", 2), ("10 mm", 4), ("12 mm", 4), ("12 mm", 6), ("16 mm", 6)]


@pytest.mark.parametrize(
    ("web", "first"), [(0.3, 0), (0.3679, 0), (0.3681, 1), (0.38, 3), (0.9699, 3), (0.9701, 4), (3.0, 6)]
)
def test_legs_near_enough(web, first):
    """0.75 x 0.8 h = 300 mm between the legs (9.2.2(8)); cover 30: b - 60 - diameter over legs - 1."""
    case = replace(beam([6.0]), sagging=Outline(web, 0.5, web, 0.0))
    found = [(each.bar.name, each.legs) for each in stirrup_sizes(case)]
    assert found == ALL[first:]


def test_given_stirrups_are_tried_alone():
    (found,) = stirrup_sizes(beam([6.0], given=given(stirrups=(3, "10 mm", 0.2))))
    assert (found.legs, found.bar.name) == (3, "10 mm")
    assert found.area == pytest.approx(3 * math.pi * 25e-6)
