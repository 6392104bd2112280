"""A beam as the clauses see it, and one face of it: requirements at their bounds, the choice of bars."""

from dataclasses import replace

import numpy as np
import pytest
from cases_en1992 import NATIONAL, RECTANGLE, beam, concrete, face

from calcpack.clauses.bars import Bar, bar
from calcpack.clauses.en1992.case import places
from calcpack.clauses.en1992.faces import Face, bars_of, candidates, choose
from calcpack.clauses.en1992.model import Bars, Outline, within
from calcpack.clauses.en1992.samples import C30
from calcpack.statics import Band, Curve


def level(value):
    return Curve(np.array([0.0, 1.0]), np.array([[value]]))


def test_two_sides_of_a_requirement_are_equal_but_for_rounding():
    assert within(1.0 + 0.9e-9, 1.0)
    assert not within(1.0 + 1.1e-9, 1.0)


# The beam ------------------------------------------------------------------------------------------------


def test_places_are_at_most_20_mm_apart():
    """1.01 m in 51 parts, the first and the last at the ends; further places within the length only."""
    even = places(1.01, [])
    assert (len(even), even[0], even[-1]) == (52, 0.0, 1.01)
    assert places(1.0, [-0.5, 0.004, 0.5 + 1e-12, 2.0], 0.5) == pytest.approx([0.0, 0.004, 0.5, 1.0])
    assert len(places(0.6, [], 0.2)) == 4  # 0.6/0.2 is 2.9999999999999996
    assert len(places(2.1, [], 0.7)) == 4  # 2.1/0.7 is 3.0000000000000004
    assert len(places(0.01, [], 1.0)) == 3


def test_moments_of_a_beam():
    """q L2/8 = 90 sagging; an end that turns freely is given beta_1 = 0.15 of it (9.2.1.2(1))."""
    simple = beam([6.0])
    assert (simple.sag, simple.hog) == (pytest.approx(90.0), 0.0)
    assert simple.end_moment == pytest.approx(13.5)
    held = beam([6.0], fixed=(True, True))
    assert (held.sag, held.hog) == (pytest.approx(30.0), pytest.approx(60.0))
    assert held.end_moment == 0.0
    assert beam([], overhang=2.0, fixed=(True, False)).sag == 0.0
    assert simple.length == 6.0
    assert 3.0 in simple.places


@pytest.mark.parametrize(("small", "counts"), [(0.999e-6, False), (1.001e-6, True)])
def test_a_millionth_of_the_largest_moment_is_rounding(small, counts):
    case = beam([6.0])
    sagging = replace(case, moment=Band(level(small), level(-1.0)))
    hogging = replace(case, moment=Band(level(1.0), level(-small)))
    assert (sagging.sag, sagging.hog) == (small if counts else 0.0, 1.0)
    assert (hogging.sag, hogging.hog) == (1.0, small if counts else 0.0)


# One face ------------------------------------------------------------------------------------------------


def of_area(area, **keys):
    """Three bars of any area in all [m2], 40 mm from the face, d = 450 mm; lam x b fcd = As fyd."""
    return Face(beam([6.0]), RECTANGLE, Bars(Bar("own", 0.02, area / 3), (3,), 0.04, 0.041), 0.0, 0.0, **keys)


def test_effective_depth_and_distances():
    """500 - 40 - 10 = 450; clear (300 - 80 - 60)/2 = 80, centres 100 apart; rule 16 + 5 = 21 (8.2(2))."""
    found = face(beam([6.0]))
    assert found.depth == pytest.approx(0.45)
    assert found.clear == pytest.approx((0.08, 0.021))
    assert found.apart == pytest.approx(0.1)
    assert found.most == pytest.approx(0.04 * 0.3 * 0.5)  # 9.2.1.1(3)


@pytest.mark.parametrize(("share", "fine"), [(0.995, True), (1.005, False)])
def test_neutral_axis_at_its_limit(share, fine):
    """x = As fyd/(0.8 b fcd) up to 0.448 d (5.5(4)); beyond it compression bars are counted."""
    area = share * 0.448 * 0.45 * 0.8 * 0.3 * 20e3 / (500e3 / 1.15)
    found = of_area(area, compression=Bars(bar("20 mm"), (2,), 0.04, 0.041))
    assert found.doubly is not fine
    assert of_area(area).doubly is False
    assert of_area(area).resists is fine
    assert (found.bending.stress_2 > 0) is not fine
    # beyond it the two bars above yield too: 0.8 x b fcd = (As - As2) fyd
    pressed = 0.0 if fine else 2 * np.pi * 0.02**2 / 4
    assert found.bending.x == pytest.approx((area - pressed) * (500e3 / 1.15) / (0.8 * 0.3 * 20e3), rel=1e-9)


@pytest.mark.parametrize(("share", "fine"), [(0.995, True), (1.0, True), (1.005, False)])
def test_moment_at_the_resistance(share, fine):
    found = face(beam([6.0]))
    assert replace(found, moment=share * found.bending.moment).resists is fine


@pytest.mark.parametrize(("share", "fine"), [(0.995, False), (1.005, True)])
def test_least_bars(share, fine):
    """0.26 fctm/fyk b d = 0.26 x 2.9/500 x 300 x 450 = 203.6 mm2 (9.2.1.1(1))."""
    assert of_area(share * 203.58e-6).resists is fine


@pytest.mark.parametrize(("share", "fine"), [(0.995, True), (1.005, False)])
def test_most_bars(share, fine):
    """0.04 x 300 x 500 = 6000 mm2 (9.2.1.1(3)), with as much in compression."""
    area = share * 6000e-6
    pressed = Bars(Bar("own", 0.02, 2500e-6), (2,), 0.04, 0.041)
    assert of_area(area, compression=pressed).bending.x < 0.448 * 0.45
    assert of_area(area, compression=pressed).resists is fine


@pytest.mark.parametrize(("width", "fine"), [(0.1819, False), (0.1821, True)])
def test_clear_distance_at_its_least(width, fine):
    """Three bars of 20 mm, 40 mm in from each side, 21 mm between them: 80 + 60 + 42 = 182 mm (8.2(2))."""
    found = replace(face(beam([6.0])), outline=Outline(width, 0.5, width, 0.0))
    assert found.fits is fine


@pytest.mark.parametrize(("inset", "fine"), [(0.02999, False), (0.03, True)])
def test_cover_of_the_bars_for_bond(inset, fine):
    """c_min,b is the bar's diameter, 20 mm, and 10 mm for deviation (4.4.1.2(3), 4.4.1.3(1))."""
    found = face(beam([6.0]))
    assert replace(found, bars=replace(found.bars, inset=inset)).fits is fine


@pytest.mark.parametrize(("share", "fine"), [(0.995, True), (1.005, False)])
def test_crack_width_at_its_limit(share, fine):
    found = face(beam([6.0]), lasting=90.0)
    narrow = replace(found.case, crack_limit=found.crack.width / share)
    assert replace(found, case=narrow).cracks_fine is fine


def test_bars_required_take_the_compression_bars_where_they_lie():
    """M = 450 kNm is more than the block at 0.448 d gives: the rest over d - d2, d2 = 40 + 8 or the inset."""
    x = 0.448 * 0.45
    most = 20e3 * 0.3 * 0.8 * x * (0.45 - 0.4 * x)
    for compression, near in ((None, 0.04), (Bars(bar("16 mm"), (2,), 0.04, 0.037), 0.048)):
        found = face(beam([6.0]), moment=450.0, compression=compression)
        area_2 = (450.0 - most) / (0.45 - near) / min(0.0035 * (x - near) / x * 200e6, 500e3 / 1.15)
        assert found.required[1] == pytest.approx(area_2, rel=1e-9)


# The choice ----------------------------------------------------------------------------------------------


def test_bars_inside_the_stirrups():
    """Cover 30 and stirrup 8: five bars of 20 mm have 21 mm or more between them, a sixth goes up."""
    case = beam([6.0])
    assert bars_of(case, bar("20 mm"), 5, 0.008).layers == (5,)
    assert bars_of(case, bar("20 mm"), 7, 0.008).layers == (5, 2)
    assert bars_of(case, bar("20 mm"), 5, 0.008).inset == pytest.approx(0.038)


def test_fewest_layers_then_fewest_bars_then_least_area():
    tried = list(candidates(beam([6.0]), 0.008))
    first = [each for each in tried if each.bar.name != "32 mm"]
    assert tried[: len(first)] == first  # the thickest come last
    keys = [(len(each.layers), each.count, each.area) for each in first]
    assert keys == sorted(keys)
    assert {each.count for each in first} == set(range(2, 17))
    assert len(first) == 4 * 15
    assert (first[0].count, first[0].bar.name) == (2, "12 mm")


def test_the_first_that_does_everything_is_chosen():
    """90 kNm at d = 456 or so asks for 470 mm2: two bars of 20 mm, 628 mm2, after two of 16 mm, 402."""
    case = beam([6.0])
    found = choose(case, case.sagging, 90.0, 20.0, 0.008)
    assert (found.bars.count, found.bars.bar.name) == (2, "20 mm")
    more = choose(case, case.sagging, 90.0, 20.0, 0.008, least=0.0007)
    assert more.bars.area >= 0.0007
    assert (more.bars.count, more.bars.bar.name) == (2, "25 mm")


def test_cracks_ask_for_other_bars_than_strength():
    case = replace(beam([6.0]), crack_limit=2e-4)
    plain = choose(beam([6.0]), case.sagging, 90.0, 85.0, 0.008)
    found = choose(case, case.sagging, 90.0, 85.0, 0.008)
    assert found.bars != plain.bars
    assert found.crack.width <= 2e-4 < replace(plain, case=case).crack.width


def test_where_nothing_does_everything_the_nearest_is_taken():
    case = beam([6.0])
    heavy = choose(case, case.sagging, 5000.0, 0.0, 0.008)
    assert heavy.bending.x <= heavy.limit * heavy.depth
    within_limit = [
        each.bending.moment
        for bars in candidates(case, 0.008)
        if (each := Face(case, case.sagging, bars, 0.0, 0.0)).fits
        and each.bending.x <= each.limit * each.depth
    ]
    assert heavy.bending.moment == pytest.approx(max(within_limit))
    cracked = replace(case, crack_limit=1e-6)
    assert choose(cracked, case.sagging, 90.0, 85.0, 0.008).resists
    narrow = replace(case, sagging=Outline(0.12, 0.5, 0.12, 0.0))
    bare = choose(narrow, narrow.sagging, 20.0, 0.0, 0.008, sizes=(("40 mm",),))
    assert (bare.bars.count, bare.bars.bar.name) == (2, "12 mm")


def test_compression_bars_where_tension_bars_alone_are_not_enough():
    """C30, 300 x 500: the block at 0.448 d carries 357 kNm at d = 450; 450 kNm needs bars above."""
    case = beam([6.0])
    others = (Bars(bar("20 mm"), (3,), 0.038, 0.041),)
    assert choose(case, case.sagging, 450.0, 0.0, 0.008, compression=others).doubly
    assert not choose(case, case.sagging, 200.0, 0.0, 0.008, compression=others).doubly


def test_limit_of_the_neutral_axis_for_high_strength():
    """(1 - 0.54)/(1.25 (0.6 + 0.0014/eps_cu2)) above C50, eps_cu2 = 2.6 + 35 x 0.2^4 per mille for C70."""
    high = face(beam([6.0], strength=concrete(70.0)))
    assert high.limit == pytest.approx(0.46 / (1.25 * (0.6 + 1.4 / (2.6 + 35 * 0.2**4))), rel=1e-9)
    assert face(beam([6.0], strength=C30)).limit == pytest.approx(0.448)
    assert NATIONAL["delta_k3"] == 0.54
