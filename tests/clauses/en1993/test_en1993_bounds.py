"""Single steps of EN 1993 at their bounds and by hand; IPE 330 in S235."""

import math
from dataclasses import replace

import numpy as np
import pytest
from beams_en1993 import analysed, profile

from calcpack.actions import Combination, LoadSet, analyse_beam
from calcpack.clauses.en1993.bearing import bearing
from calcpack.clauses.en1993.buckling import (
    critical_moment,
    held_stiffness,
    imperfection,
    load_factor,
    quarter_points,
    reduction,
    twisting_load,
    wave_share,
)
from calcpack.clauses.en1993.design import (
    Conditions,
    _point_loads,
    beside_shear,
    buckling_of,
    design,
    height_of,
    local_forces,
)
from calcpack.clauses.en1993.rules import RECOMMENDED, Factors
from calcpack.clauses.en1993.segments import segments
from calcpack.clauses.steel import SegmentMoments
from calcpack.statics import BeamLine, Curve, Extreme, LineLoad, PointLoad

IPE = profile("IPE 330")
BOTH = (False, False)


# Local forces, EN 1993-1-5, 6 ----------------------------------------------------------------------------


@pytest.mark.parametrize(("slenderness", "counts"), [(0.4975, False), (0.5025, True)])
def test_m2_counts_from_a_slenderness_of_one_half(slenderness, counts):
    """lambda_F2 = l_y tw fy/F_cr, l_y = s_s + 2 tf (1 + root m1), F_cr = 0.9 x 6 E tw3/hw."""
    critical = 5.4 * 210e6 * 0.0075**3 / 0.307
    loaded = slenderness**2 * critical / (0.0075 * 235e3)
    stiff = loaded - 0.023 * (1 + math.sqrt(160 / 7.5))
    found = bearing(IPE, stiff, None)
    assert (found.second > 0) is counts
    if not counts:
        assert found.slenderness == pytest.approx(slenderness)


# Moments and loads of a segment --------------------------------------------------------------------------


def moments(*values):
    """Largest, then at the quarter points [kNm]."""
    most, first, middle, last = values
    none = Extreme(0.0, 0.0)
    return SegmentMoments(
        0.0, 6.0, 0.0, first, middle, last, 0.0, Extreme(most, 0.0), Extreme(most, 0.0), none
    )


def test_quarter_points_by_hand():
    """root(35/(1 + 9 M2^2 + 16 M3^2 + 9 M4^2)); nothing for no moment at all."""
    assert quarter_points(moments(1.0, 0.75, 0.5, 0.25)) == pytest.approx(math.sqrt(35 / 10.625))
    assert quarter_points(moments(1.0, 0.25, 0.5, 0.75)) == pytest.approx(math.sqrt(35 / 10.625))
    assert quarter_points(moments(1.0, 0.0, 0.0, 0.0)) == pytest.approx(math.sqrt(35))
    assert quarter_points(moments(0.0, 0.0, 0.0, 0.0)) == 1.0


def test_share_of_an_even_moment():
    even = Curve(np.array([0.0, 6.0]), np.array([[-5.0]]))
    assert wave_share(even, 0.0, 6.0, 5.0) == pytest.approx(1.0, rel=1e-12)
    assert wave_share(even, 1.0, 3.0, 10.0) == pytest.approx(0.25, rel=1e-12)


def test_half_a_triangle_of_load():
    """10/3 x kN/m up to 3 m of 6: 10/3 (9/4 + 9/pi2) with the square of the half sine wave."""
    half = LineLoad(0.0, 3.0, 0.0, 10.0)
    by_hand = 10 / 3 * (9 / 4 + 9 / math.pi**2)
    assert twisting_load([(half, 1.0)], 0.0, 6.0) == pytest.approx(by_hand, rel=1e-12)
    # the same beam from the other end, two metres further on
    turned = LineLoad(5.0, 8.0, 10.0, 0.0)
    assert twisting_load([(turned, 2.0)], 2.0, 8.0) == pytest.approx(2 * by_hand, rel=1e-12)
    assert twisting_load([(turned, 2.0)], 0.0, 5.0) == 0.0
    assert twisting_load([(PointLoad(6.0, 5.0), 1.0), (PointLoad(0.0, 5.0), 1.0)], 0.0, 6.0) == 0.0


def test_load_factor_by_hand():
    """C1 L F/(pi2 M); nothing to take it over where there is no moment."""
    assert load_factor(1.2, 6.0, 30.0, -45.0) == pytest.approx(1.2 * 6 * 30 / (math.pi**2 * 45), rel=1e-12)
    assert load_factor(1.2, 6.0, 30.0, 0.0) == 0.0


# The critical moment and the reduction, 6.3.2 ------------------------------------------------------------


def test_critical_moment_by_hand():
    """SN003b (1), k = kw = 1: C1 pi2 E Iz/L2 (root(Iw/Iz + L2 G It/(pi2 E Iz) + (C2 zg)2) - C2 zg)."""
    s = IPE.shape
    euler = math.pi**2 * 210e6 * s.weak_inertia / 5.0**2
    inside = s.warping / s.weak_inertia + 80.77e6 * s.torsion / euler
    for term in (0.0, 0.05, -0.05):
        by_hand = 1.3 * euler * (math.sqrt(inside + term**2) - term)
        assert critical_moment(IPE, 5.0, 1.3, term) == pytest.approx(by_hand, rel=1e-12)
    warping, torsion = held_stiffness(IPE, 5.0)
    assert warping == pytest.approx(euler * (s.warping / s.weak_inertia + 0.33**2 / 4), rel=1e-12)
    assert torsion == pytest.approx(80.77e6 * s.torsion, rel=1e-12)


def test_modified_reduction_never_passes_the_critical_moment():
    """alpha = 0.21, C1 = 2.7, lambda = 1.1: chi/f = 0.708/0.839 = 0.844, over 1/1.21 = 0.826 (6.58)."""
    found = reduction(1.1, 0.21, "rolled", RECOMMENDED, 2.7)
    assert found.chi == pytest.approx(1 / (1.02725 + math.sqrt(1.02725**2 - 0.9075)), rel=1e-12)
    assert found.correction == pytest.approx(1 - 0.5 * (1 - 1 / math.sqrt(2.7)) * (1 - 2 * 0.09), rel=1e-12)
    assert found.reduced == pytest.approx(1 / 1.21, rel=1e-12)
    assert reduction(1.1, 0.21, "general", RECOMMENDED, 2.7).correction == 1.0


def test_reduction_by_hand():
    """(6.56) at lambda = 1, curve b: phi = 0.5 (1 + 0.34 x 0.8 + 1); (6.57): 0.5 (1 + 0.34 x 0.6 + 0.75)."""
    general, rolled = (reduction(1.0, 0.34, curves, Factors(), 1.0) for curves in ("general", "rolled"))
    assert general.phi == pytest.approx(1.136)
    assert general.chi == pytest.approx(1 / (1.136 + math.sqrt(1.136**2 - 1)), rel=1e-12)
    assert rolled.phi == pytest.approx(0.977)
    assert rolled.chi == pytest.approx(1 / (0.977 + math.sqrt(0.977**2 - 0.75)), rel=1e-12)


@pytest.mark.parametrize(("ratio", "alpha"), [(2.0, 0.21), (2.01, 0.34)])
def test_curve_beside_a_side_ratio_of_two(ratio, alpha):
    """Table 6.4: h/b up to 2 curve a, beyond b."""
    shape = IPE.shape._replace(depth=0.16 * ratio)
    assert imperfection(replace(IPE, shape=shape), "general")[1] == alpha


# A beam worked out ---------------------------------------------------------------------------------------


def test_height_of_the_load():
    assert [height_of(IPE, where) for where in ("top", "centre", "bottom")] == pytest.approx(
        [0.165, 0.0, -0.165]
    )


def simple(load, points=(), span=4.0):
    sets = [LoadSet("dead", (LineLoad(0, span, load, load), *(PointLoad(*each) for each in points)))]
    return analyse_beam(BeamLine(span, (0.0, span)), sets, [Combination("G", "strength", {"dead": 1.0})])


@pytest.mark.parametrize(("share", "counts"), [(0.497, False), (0.503, True)])
def test_shear_beside_moment_from_half_the_resistance_on(share, counts):
    """6.2.8(2)."""
    beam = simple(0.0, [(1.0, 4 / 3 * share * IPE.shear)])
    found = beside_shear(IPE, beam)
    assert (found is not None) is counts
    if found is not None:
        assert (found.at, found.shear) == (1.0, pytest.approx(share * IPE.shear))
        assert found.moment == pytest.approx(share * IPE.shear * 1.0)


def test_where_shear_and_moment_use_most():
    """Uniform load: of the places whose shear passes half, the one with most of the moment, the first of two alike.

    240 parts of 4 m: V = q (2 - x) passes V_pl/2 up to 2 - V_pl/(2 q); the last of the 16.67 mm places.
    """
    load = 0.8 * IPE.shear / 2.0
    found = beside_shear(IPE, simple(load))
    at = math.floor((2.0 - 0.5 / 0.4) / (4.0 / 240)) * 4.0 / 240
    assert found.at == pytest.approx(at - (4.0 / 240 if abs(at - 0.75) < 1e-9 else 0.0))
    assert found.moment == pytest.approx(load * found.at * (4.0 - found.at) / 2)
    assert found.resistance == pytest.approx(IPE.bending_with_shear(found.shear))


def buckled(beam, conditions=None, **keys):
    return buckling_of(IPE, beam, segments([(0, 4)], [0, 4], **keys), conditions or Conditions())[0]


def test_load_at_its_height():
    """C2 z_g: above with C1, below as for C1 = 1; nothing where no load stands on the segment."""
    beam = simple(10.0)
    twisting = 10.0 * 4 / 2
    top, bottom, centre = (
        buckled(beam, Conditions(load_height=where)) for where in ("top", "bottom", "centre")
    )
    assert (top.twisting, bottom.twisting, centre.twisting) == pytest.approx((twisting, twisting, 0.0))
    assert top.load == pytest.approx(top.diagram * 4 * twisting / (math.pi**2 * 20.0))
    assert bottom.load == pytest.approx(4 * twisting / (math.pi**2 * 20.0))
    assert top.critical == pytest.approx(critical_moment(IPE, 4.0, top.diagram, top.load * 0.165))
    assert bottom.critical == pytest.approx(critical_moment(IPE, 4.0, top.diagram, -bottom.load * 0.165))
    assert (centre.load, centre.height, top.height, bottom.height) == pytest.approx((0.0, 0.0, 0.165, -0.165))
    ends = simple(0.0, [(2.0, 30.0)])
    first = buckled(ends, unbraced=2.0)
    assert (first.twisting, first.load, first.height) == (0.0, 0.0, 0.0)
    # a load that pulls upwards does not press the beam over
    lifted = analyse_beam(
        BeamLine(4.0, (0.0, 4.0)),
        [LoadSet("dead", (PointLoad(2.0, -30.0),))],
        [Combination("G", "strength", {"dead": 1.0})],
    )
    assert (buckled(lifted).twisting, buckled(lifted).load) == (0.0, 0.0)


def test_an_overhang_and_a_held_flange_go_without_a_diagram():
    """The overhang's own length or 2.5 times it, C1 = 1, no C2 (BS 5950-1 Table 14); the held one without k_c."""
    beam = analyse_beam(
        BeamLine(2.0, (0.0,), fixed_start=True),
        [LoadSet("dead", (LineLoad(0, 2, 9, 9),))],
        [Combination("G", "strength", {"dead": 1.0})],
    )
    parts = segments([(0, 2)], [0])
    for where, length in (("top", 5.0), ("centre", 2.0)):
        (found,) = buckling_of(IPE, beam, parts, Conditions("rolled", where))
        assert (found.length, found.diagram, found.share, found.twisting, found.load) == (
            length,
            1.0,
            1.0,
            0.0,
            0.0,
        )
        assert found.critical == pytest.approx(critical_moment(IPE, length, 1.0, 0.0), rel=1e-12)
    (held,) = buckling_of(
        IPE, beam, segments([(0, 2)], [0], braced="continuous", tip_held=True), Conditions("rolled")
    )
    assert (held.share, held.twisting, held.load, held.reduction.correction) == (1.0, 0.0, 0.0, 1.0)
    assert held.critical == pytest.approx(held.diagram * sum(held_stiffness(IPE, 2.0)) / 0.33, rel=1e-12)


def test_slenderness_and_resistance_of_a_segment():
    """root(W fy/M_cr); chi W fy/gamma_M1 (6.55)."""
    steel = profile("IPE 330", factors=Factors(1.0, 1.1))
    (found,) = buckling_of(
        steel, simple(10.0), segments([(0, 4)], [0, 4]), Conditions("rolled", "centre", 1.13)
    )
    plastic = steel.shape.plastic_modulus * 235e3
    assert found.slenderness == pytest.approx(math.sqrt(plastic / found.critical))
    assert found.resistance == pytest.approx(found.reduction.reduced * plastic / 1.1)
    assert found.reduction == reduction(found.slenderness, 0.49, "rolled", steel.factors, 1.13)


# Forces on the flanges -----------------------------------------------------------------------------------


def test_forces_of_a_simple_beam():
    """Reactions at the ends, the bearing flush with them; no moment there."""
    first, last = local_forces(IPE, simple(10.0), Conditions(), BOTH)
    assert [(each.support, each.at, each.beyond, each.moment) for each in (first, last)] == [
        (0, 0.0, 0.0, 0.0),
        (1, 4.0, 0.0, 0.0),
    ]
    assert (first.force, last.force) == pytest.approx((20.0, 20.0))
    under = local_forces(IPE, simple(0.0, [(1.0, 40.0)]), Conditions(bears_at_supports=False), BOTH)
    assert [(each.at, each.force, each.moment) for each in under] == [(1.0, 40.0, pytest.approx(30.0))]


def test_small_forces_count_and_lifting_ones_do_not():
    first, last = local_forces(IPE, simple(0.0025), Conditions(), BOTH)
    assert (first.force, last.force) == pytest.approx((0.005, 0.005))
    assert [each.at for each in local_forces(IPE, simple(-5.0, [(2.0, -1.0)]), Conditions(), BOTH)] == []
    small = _point_loads(IPE, simple(10.0, [(2.0, 0.005)]), Conditions())
    assert [each.force for each in small] == pytest.approx([0.005])


@pytest.mark.parametrize(("apart", "forces"), [(0.995e-6, [35.0]), (1.005e-6, [30.0, 5.0])])
def test_two_forces_at_one_place(apart, forces):
    """Less than a micrometre apart they are one; so beside a support."""
    beam = simple(1.0, [(2.0, 30.0), (2.0 + apart, 5.0), (apart, 7.0)])
    found = [each.force for each in _point_loads(IPE, beam, Conditions())]
    assert found == pytest.approx(forces if len(forces) == 1 else [7.0, *forces])


@pytest.mark.parametrize(("overhang", "beyond"), [(0.3069, 0.2569), (0.3071, None), (0.03, 0.0)])
def test_what_lies_beyond_the_bearing(overhang, beyond):
    """Nearer to the end than the web's depth, 307 mm: type (c), less half the bearing of 100 mm."""
    beam = analysed([6.0], 8.0, overhang=overhang)
    found = local_forces(IPE, beam, Conditions(), BOTH)[1]
    assert found.beyond == (None if beyond is None else pytest.approx(beyond))
    loads = _point_loads(IPE, simple(1.0, [(4.0 - overhang, 9.0)]), Conditions())
    assert loads[0].beyond == (None if beyond is None else pytest.approx(beyond))


def test_force_and_bending_together():
    """eta_2 + 0.8 eta_1 (7.2), elastic modulus: the support inside takes more than the ends."""
    beam = analysed([4.0, 4.0], 20.0)
    found = design(IPE, beam, segments([(0, 4), (4, 8)], [0, 4, 8]), Conditions())
    each = found.interaction
    elastic = IPE.shape.elastic_modulus * 235e3
    assert each.support == 1
    assert found.force.force / found.force.bearing.resistance == max(
        one.force / one.bearing.resistance for one in found.forces
    )
    assert each.moment == pytest.approx(1.35 * 20 * 16 / 8)
    assert found.together(each) == pytest.approx(
        each.force / each.bearing.resistance + 0.8 * each.moment / elastic, rel=1e-12
    )
