"""Single clauses of EN 1992-1-1 at their bounds and by hand; C30, B500, 300 x 500 where nothing else is said."""

import math

import numpy as np
import pytest
from cases_en1992 import NATIONAL, RECTANGLE, concrete

from calcpack.clauses.en1992.along import TopZone, nearest, resistance, shifted, top_zones
from calcpack.clauses.en1992.anchorage import anchorage, bond_strength, good_bond
from calcpack.clauses.en1992.bending import bending, block_force, depth_limit, least_steel, steel_for
from calcpack.clauses.en1992.flange import reaches, span_zero_moments, support_zero_moments
from calcpack.clauses.en1992.model import Outline
from calcpack.clauses.en1992.national import national
from calcpack.clauses.en1992.samples import C30
from calcpack.clauses.en1992.shear import best_cot

FYD = 500e3 / 1.15


# Bending, 6.1 with 3.1.7(3) ------------------------------------------------------------------------------


def test_few_bars():
    """10 mm2: 0.8 x 300 x 20 x = 4348 N, x = 0.906 mm; nothing of bars in compression."""
    found = bending(RECTANGLE, C30, 10e-6, 0.45)
    assert found.x == pytest.approx(10e-6 * FYD / (0.8 * 0.3 * 20e3), rel=1e-9)
    assert found.moment == pytest.approx(10e-6 * FYD * (0.45 - 0.4 * found.x), rel=1e-9)
    assert (found.strain_2, found.stress_2) == (0.0, 0.0)
    assert found.strain == pytest.approx(0.0035 * (0.45 - found.x) / found.x)


def test_bars_for_small_moments():
    """M = 0.005 kNm and 1 kNm: M/(z fyd), z next to d; none for nothing."""
    for moment in (0.005, 1.0):
        share = moment / (0.3 * 0.45**2 * 20e3)
        area = 20e3 * 0.3 * 0.45 / FYD * (1 - math.sqrt(1 - 2 * share))
        assert steel_for(moment, RECTANGLE, C30, 0.45, 0.448, 0.05) == (pytest.approx(area, rel=1e-6), 0.0)
    assert steel_for(0.0, RECTANGLE, C30, 0.45, 0.448, 0.05) == (0.0, 0.0)
    assert steel_for(-5.0, RECTANGLE, C30, 0.45, 0.448, 0.05) == (0.0, 0.0)


def test_the_block_stays_within_the_section():
    """Over-reinforced and shallow: 0.8 x cannot pass h."""
    assert block_force(Outline(0.3, 0.1, 0.3, 0.0), C30, 1.0) == pytest.approx((600.0, 30.0))


@pytest.mark.parametrize(("fck", "limit"), [(50.0, 0.448), (50.4, None)])
def test_limit_of_the_neutral_axis_up_to_c50(fck, limit):
    """5.5(4): (5.10a) up to 50 MPa, beyond (5.10b) with k3 = 0.54, eps_cu2 = 2.6 + 35 ((90 - fck)/100)^4."""
    strain = 3.5 if limit else 2.6 + 35 * (0.9 - fck / 100) ** 4
    found = depth_limit(concrete(fck), NATIONAL)
    assert found == pytest.approx(limit or 0.46 / (1.25 * (0.6 + 1.4 / strain)), rel=1e-9)


def test_least_bars_at_both_bounds():
    """9.2.1.1(1): 0.26 fctm/fyk with C30, 0.0013 with C12 (0.26 x 0.3 x 12^(2/3)/500 = 0.00082)."""
    assert least_steel(RECTANGLE, C30, 0.45, NATIONAL) == pytest.approx(0.26 * 2.9 / 500 * 0.3 * 0.45)
    assert least_steel(RECTANGLE, concrete(12.0), 0.45, NATIONAL) == pytest.approx(0.0013 * 0.3 * 0.45)


# Shear, 6.2.3 --------------------------------------------------------------------------------------------


def test_strut_angle_between_limits_of_a_country():
    """cot theta from 1.2 to 2.0: many stirrups stand at the one, few at the other."""
    own = national(changes={"cot_theta_min": 1.2, "cot_theta_max": 2.0})
    assert best_cot(0.3, 20e-3, C30, own) == pytest.approx(1.2)
    assert best_cot(0.3, 0.1e-3, C30, own) == pytest.approx(2.0)


# Flange, 5.3.2.1 -----------------------------------------------------------------------------------------


def test_lengths_between_zero_moments():
    """Figure 5.2: 0.85 l of an end span, 0.7 of an inner one, 0.15 of both beside a support."""
    assert span_zero_moments(6.0, "simple", "simple") == (6.0, 1.0)
    assert span_zero_moments(6.0, "continuous", "simple") == (pytest.approx(5.1), 0.85)
    assert span_zero_moments(6.0, "continuous", "continuous") == (pytest.approx(4.2), 0.7)
    assert span_zero_moments(2.0, "continuous", "free") == (2.0, 1.0)
    assert support_zero_moments(6.0, 4.0) == pytest.approx(1.5)


SLAB = [(0.0, 0.0), (6.0, 0.0), (6.0, 4.5), (0.0, 4.5)]
SPAN = ((0.0, 0.0), (6.0, 0.0))


def test_no_slab_no_reach():
    assert reaches(SPAN, [SLAB], [], 0.3) == (pytest.approx(4.35), 0.0)
    assert reaches(SPAN, [], [], 0.0) == (0.0, 0.0)
    # a neighbour so near that the webs touch
    assert reaches(SPAN, [SLAB], [((0.0, 0.2), (6.0, 0.2))], 0.3)[0] == 0.0


@pytest.mark.parametrize(("start", "reach"), [(5.41, 4.35), (5.39, 0.85)])
def test_a_neighbour_beside_the_last_of_nine_places(start, reach):
    """At 5.4 m: 600 mm from the neighbour's far end, which is 590 or 610 mm away from its near one."""
    for one in (((6.0, 2.0), (start, 2.0)), ((start, 2.0), (6.0, 2.0))):
        assert reaches(SPAN, [SLAB], [one], 0.3)[0] == pytest.approx(reach)
    start = 5.404 if reach > 1 else 5.396
    assert reaches(SPAN, [SLAB], [((6.0, 2.0), (start, 2.0))], 0.3)[0] == pytest.approx(reach)


def test_reach_beside_a_beam_along_y():
    """The slab's edge runs from x = 4 at y = 0 to x = 2 at y = 6: least at nine tenths, 4 - 2 x 0.9 = 2.2."""
    slab = [(0.0, 0.0), (4.0, 0.0), (2.0, 6.0), (0.0, 6.0)]
    assert reaches(((0.0, 0.0), (0.0, 6.0)), [slab], [], 0.3) == (0.0, pytest.approx(2.05))
    assert reaches(((0.0, 6.0), (0.0, 0.0)), [slab], [], 0.3) == (pytest.approx(2.05), 0.0)


# Along the beam, 9.2.1.3 ---------------------------------------------------------------------------------


def test_shifted_moments():
    """The largest within a_l on either side, places at a_l itself among them; nothing below zero."""
    x = np.array([0.0, 0.1, 0.2, 0.3, 0.4, 0.5])
    moment = np.array([1.0, 7.0, 2.0, -3.0, -4.0, -5.0])
    assert shifted(x, moment, 0.1) == pytest.approx([7.0, 7.0, 7.0, 2.0, 0.0, 0.0])
    assert shifted(x, moment, 0.3) == pytest.approx([7.0, 7.0, 7.0, 7.0, 7.0, 2.0])


def test_bars_over_two_supports():
    """Needed from 2 to 4 and from 10 to 12: one place further, 0.72 of anchorage, ends at 50 mm."""
    x = np.linspace(0.0, 14.0, 15)
    hogging = np.zeros(15)
    hogging[[2, 3, 4, 10, 11, 12]] = 20.0
    first, second = top_zones(x, hogging, 10.0, 0.72)
    assert tuple(first) == pytest.approx((0.25, 5.75, 0.97, 5.03))
    assert tuple(second) == pytest.approx((8.25, 13.75, 8.97, 13.03))
    # with 3.3 m they meet; past the ends of the beam they are cut, and count there in full
    (both,) = top_zones(x, hogging, 10.0, 3.3)
    assert tuple(both) == pytest.approx((0.0, 14.0, 0.0, 14.0))
    assert top_zones(x, hogging, 20.0, 0.7) == ()
    assert top_zones(x, np.full(15, 20.0), 10.0, 0.7) == (TopZone(0.0, 14.0, 0.0, 14.0),)


def test_zones_begin_at_multiples_of_50_mm():
    """1.00 - 0.50 = 0.50 stays, 0.49 goes to 0.45; 3.51 to 3.55."""
    x = np.linspace(0.0, 5.0, 6)
    hogging = np.array([0.0, 0.0, 20.0, 0.0, 0.0, 0.0])
    assert tuple(top_zones(x, hogging, 10.0, 0.5)[0][:2]) == pytest.approx((0.5, 3.5))
    assert tuple(top_zones(x, hogging, 10.0, 0.51)[0][:2]) == pytest.approx((0.45, 3.55))


def test_line_of_resistance():
    """Within l_bd of a bar's end it grows in proportion; bars cut at the beam's end count in full there."""
    x = np.array([0.0, 1.99, 2.0, 2.25, 3.0, 6.0, 7.5, 8.0, 8.01, 12.0])
    found = resistance(x, [TopZone(2.0, 8.0, 3.0, 7.0)], 10.0, 50.0)
    assert found == pytest.approx([10, 10, 10, 20, 50, 50, 30, 10, 10, 10])
    found = resistance(x, [TopZone(0.0, 8.0, 0.0, 7.0)], 10.0, 50.0)
    assert found == pytest.approx([50, 50, 50, 50, 50, 50, 30, 10, 10, 10])
    found = resistance(x, [TopZone(2.0, 12.0, 3.0, 12.0)], 10.0, 50.0)
    assert found == pytest.approx([10, 10, 10, 20, 50, 50, 50, 50, 50, 50])
    assert resistance(x, (), 10.0, 50.0) == pytest.approx(np.full(10, 10.0))


def test_where_the_moment_comes_nearest():
    """The first of those that tie but for rounding."""
    x = np.array([0.0, 1.0, 2.0, 3.0])
    found = nearest(x, np.array([1.0, 4.0, 8.0, 2.0]), np.array([10.0, 10.0, 20.0 * (1 - 1e-12), 10.0]), True)
    assert tuple(found) == (1.0, 4.0, 10.0, True)
    assert found.ratio == 0.4
    assert found._replace(resistance=0.0).ratio == 0.0
    assert found._replace(resistance=0.005).ratio == 800.0


# Anchorage, 8.4 ------------------------------------------------------------------------------------------


@pytest.mark.parametrize(("depth", "good"), [(0.604, True), (0.596, False)])
def test_bond_conditions_beside_600_mm(depth, good):
    """Figure 8.2: 301 mm from the top: beyond h = 600 only the upper 300 are poor; up to it all but 250."""
    assert good_bond(True, depth, depth - 0.301) is good
    assert good_bond(True, 0.6, 0.299) is False


def test_bond_of_bars_over_32_mm():
    """eta_2 = (132 - phi)/100: 0.998 at 32.2 mm."""
    assert bond_strength(0.0322, True, C30) == pytest.approx(2.25 * 0.998 * 2000 / 1.5)
    assert bond_strength(0.0322, False, C30) == pytest.approx(0.7 * 2.25 * 0.998 * 2000 / 1.5)


def test_form_of_a_bent_bar_beside_3_diameters():
    """Table 8.2: alpha_1 = 0.7 where c_d is over 3 phi = 60 mm; alpha_2 = 1 - 0.15 (c_d - 3 phi)/phi."""
    assert anchorage(0.02, FYD, 0.0601, True, C30, bent=True).alpha == pytest.approx(
        0.7 * (1 - 0.15 * 0.1 / 20)
    )
    assert anchorage(0.02, FYD, 0.06, True, C30, bent=True).alpha == 1.0


def test_cover_of_a_straight_bar():
    """Table 8.2: alpha_2 = 1 - 0.15 (c_d - phi)/phi from 1 down to 0.7: 0.85 at 40 mm of 20."""
    found = [anchorage(0.02, FYD, cover, True, C30).alpha for cover in (0.01, 0.02, 0.04, 0.06, 0.1)]
    assert found == pytest.approx([1.0, 1.0, 0.85, 0.7, 0.7])
