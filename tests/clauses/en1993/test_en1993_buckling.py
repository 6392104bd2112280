"""From segments to M_b,Rd: the plateau, the cap, braces, arrangements, lines against numbers."""

import math
from dataclasses import replace

import pytest
from beams_en1993 import analysed, profile

from calcpack.actions import Combination, LoadSet, analyse_beam
from calcpack.clauses.en1993.buckling import imperfection, load_factor, reduction, twisting_load
from calcpack.clauses.en1993.design import Conditions, beside_shear, design
from calcpack.clauses.en1993.lines_buckling import buckling, critical
from calcpack.clauses.en1993.lines_profile import take_factors, take_profile
from calcpack.clauses.en1993.rules import RECOMMENDED, Factors
from calcpack.clauses.en1993.segments import segments, tried
from calcpack.job.errors import CalcpackError
from calcpack.sheet import Sheet
from calcpack.statics import BeamLine, LineLoad, PointLoad


@pytest.mark.parametrize("alpha", [0.21, 0.34, 0.49, 0.76])
def test_exactly_at_the_end_of_the_plateau_nothing_is_lost(alpha):
    assert reduction(0.2, alpha, "general", RECOMMENDED, 1.0).reduced == pytest.approx(1.0, abs=1e-12)
    assert reduction(0.4, alpha, "rolled", RECOMMENDED, 1.0).reduced == pytest.approx(1.0, abs=1e-12)
    assert reduction(0.21, alpha, "general", RECOMMENDED, 1.0).reduced < 1.0
    assert reduction(0.41, alpha, "rolled", RECOMMENDED, 1.0).reduced < 1.0


def test_general_case_keeps_its_own_plateau_whatever_the_rolled_one_is():
    other = Factors(plateau=0.2, beta=1.0)
    assert reduction(0.9, 0.34, "general", other, 1.5) == reduction(0.9, 0.34, "general", RECOMMENDED, 1.5)
    # with 0.2 and 1.0 the rolled case is the general one
    assert reduction(0.9, 0.34, "rolled", other, 1.0).chi == pytest.approx(
        reduction(0.9, 0.34, "general", other, 1.0).chi
    )


def test_rolled_reduction_never_passes_the_critical_moment():
    for slenderness in (1.5, 2.0, 3.0):
        found = reduction(slenderness, 0.34, "rolled", RECOMMENDED, 2.7)
        assert found.reduced <= 1 / slenderness**2 * (1 + 1e-12)
    assert reduction(3.0, 0.21, "rolled", RECOMMENDED, 1.0).chi == pytest.approx(1 / 9)


def test_factor_for_the_diagram_by_hand():
    # kc = 1/sqrt(1.21) = 0.909; f = 1 - 0.5 x 0.0909 x (1 - 2 x 0.04) = 0.9582
    assert reduction(1.0, 0.34, "rolled", RECOMMENDED, 1.21).correction == pytest.approx(0.95818, abs=1e-5)
    assert reduction(2.5, 0.34, "rolled", RECOMMENDED, 1.21).correction == 1.0  # beyond, never above 1


@pytest.mark.parametrize(
    ("name", "general", "rolled"),
    [("HE 300 A", "a", "b"), ("IPE 200", "a", "b"), ("IPE 300", "a", "b"), ("IPE 330", "b", "c")],
)
def test_curves_by_the_side_ratio(name, general, rolled):
    # IPE 200 and IPE 300 stand exactly at h/b = 2
    assert imperfection(profile(name), "general")[0] == general
    assert imperfection(profile(name), "rolled")[0] == rolled


def test_curve_just_over_a_side_ratio_of_two():
    ipe = profile("IPE 300")
    over = replace(ipe, shape=ipe.shape._replace(depth=0.301))
    assert [imperfection(each, "general") for each in (ipe, over)] == [("a", 0.21), ("b", 0.34)]


def test_work_of_the_loads_height():
    ramp = LineLoad(1.0, 5.0, 0.0, 8.0)
    pieces = [
        PointLoad(1.0 + 4.0 * (k + 0.5) / 4000, 8.0 * (k + 0.5) / 4000 * 4.0 / 4000) for k in range(4000)
    ]
    exact = twisting_load([(ramp, 1.5)], 0.0, 6.0, above=False)
    assert exact == pytest.approx(twisting_load([(p, 1.5) for p in pieces], 0.0, 6.0, above=False), rel=1e-6)
    # clipped to the segment, and nothing at its ends
    assert twisting_load([(ramp, 1.0), (PointLoad(3.0, 9.0), 1.0)], 3.0, 6.0) == pytest.approx(
        twisting_load([(LineLoad(3.0, 5.0, 4.0, 8.0), 1.0)], 3.0, 6.0)
    )
    side = [(PointLoad(1.5, 10.0), 1.0)]
    assert twisting_load(side, 0.0, 6.0) == pytest.approx(10 * math.sqrt(0.5))
    assert twisting_load(side, 0.0, 6.0, above=False) == pytest.approx(5.0)
    assert load_factor(1.0, 6.0, 0.0, 45.0) == 0.0


def test_segments():
    spans, supports = [(0.0, 6.0), (6.0, 11.0)], [0.0, 6.0, 11.0]
    assert [part[:3] for part in segments(spans, supports)] == [(0, 6, 6), (6, 11, 5)]
    held = segments(spans, supports, braced="at beams", beams=[2.0, 6.0, 8.5])
    assert [part[:2] for part in held] == [(0, 2), (2, 6), (6, 8.5), (8.5, 11)]
    deck = segments(spans, supports, braced="continuous", unbraced=4.0)
    assert [(part.start, part.end, part.held_top) for part in deck][:2] == [(0, 4, True), (4, 6, True)]
    with pytest.raises(CalcpackError, match="takes no unbraced length"):
        segments(spans, supports, braced="at beams", unbraced=2.0)
    tips = segments([(0.0, 2.0), (2.0, 8.0), (8.0, 9.0)], [2.0, 8.0])
    assert [part.free_tip for part in tips] == [True, False, True]
    tips = segments([(0.0, 2.0), (2.0, 8.0), (8.0, 9.0)], [2.0, 8.0], tip_held=True)
    assert not any(part.free_tip for part in tips)


IPE = profile("IPE 330", "S275")


def worked(beam, spans, supports, conditions=None, **keys):
    return design(IPE, beam, segments(spans, supports, **keys), conditions or Conditions())


def test_load_height_counts_the_right_way():
    beam = analysed([6.0], 8.0, 5.0)
    top, centre, bottom = (
        worked(beam, [(0, 6)], [0, 6], Conditions(load_height=where)).segments[0].resistance
        for where in ("top", "centre", "bottom")
    )
    assert top < 0.9 * centre
    assert bottom > 1.05 * centre


def test_bracing_counts_the_right_way():
    beam = analysed([6.0], 8.0, 5.0)
    ratios = [
        worked(beam, [(0, 6)], [0, 6], unbraced=length).buckling.ratio
        for length in (9.0, None, 3.0, 2.0, 1.0)
    ]
    assert ratios == sorted(ratios, reverse=True)
    assert worked(beam, [(0, 6)], [0, 6], braced="continuous").segments == ()


def test_every_strength_combination_and_arrangement_is_tried():
    """Live load on the next span alone hogs a light span all along: no combination with all spans does."""
    beam = analysed([4.0, 9.0], 0.5, 30.0)
    found = worked(beam, [(0, 4), (4, 13)], [0, 4, 13], Conditions(load_height="centre"))
    first = found.segments[0]
    assert first.arrangement.factors == (1.35, 0.0, 1.5)
    assert first.moments.middle < 0
    everywhere = beam.response.combined([1.35, 1.5, 1.5]).curve("moment")
    assert everywhere.at(2.0) > first.moments.middle


def test_hogging_under_a_held_top_flange():
    beam = analysed([6.0, 5.0], 8.0, 12.0)
    found = worked(beam, [(0, 6), (6, 11)], [0, 6, 11], braced="continuous")
    assert [each.demand for each in found.segments] == pytest.approx([-beam.moment_min.value] * 2)
    assert all(each.arrangement.sense <= 0 for each in found.segments)
    assert all(each.reduction.correction == 1.0 for each in found.segments)
    # a brace of the bottom flange a metre from the support helps
    braced = worked(beam, [(0, 6), (6, 11)], [0, 6, 11], braced="continuous", unbraced=1.0)
    assert braced.buckling.critical > found.buckling.critical


def test_overhang_with_a_free_tip():
    beam = analysed([6.0], 4.0, 6.0, overhang=2.0)
    spans, supports = [(0, 6), (6, 8)], [0, 6]
    free = worked(beam, spans, supports).segments[1]
    assert (free.length, free.diagram, free.height) == (5.0, 1.0, 0.0)
    centre = worked(beam, spans, supports, Conditions(load_height="centre")).segments[1]
    assert centre.length == 2.0
    held = worked(beam, spans, supports, Conditions(load_height="centre"), tip_held=True).segments[1]
    assert held.diagram > 1.5


def test_cantilever_held_at_its_root_alone():
    beam = analyse_beam(
        BeamLine(2.0, (0.0,), fixed_start=True),
        [LoadSet("dead", (LineLoad(0, 2, 9, 9), PointLoad(2.0, 12.0)))],
        [Combination("1.35 G", "strength", {"dead": 1.35})],
    )
    found = design(IPE, beam, segments([(0, 2)], [0]), Conditions(), fixed=(True, False))
    assert found.bending.value == pytest.approx(-1.35 * (9 * 2 + 12 * 2))
    assert (found.segments[0].length, found.segments[0].diagram) == (5.0, 1.0)
    # the root bears on nothing; the load at the very tip does press on the flange there
    assert [(each.support, each.at, each.beyond) for each in found.forces] == [(None, 2.0, 0.0)]


def test_given_diagram_factor():
    beam = analysed([6.0], 8.0)
    found = worked(beam, [(0, 6)], [0, 6], Conditions(load_height="centre", diagram=1.0)).segments[0]
    own = worked(beam, [(0, 6)], [0, 6], Conditions(load_height="centre")).segments[0]
    assert own.critical / found.critical == pytest.approx(own.diagram)


def test_shear_beside_moment_is_looked_for_everywhere():
    """A heavy load beside a support: the worst place is under the load, the shear just left of it."""
    beam = analysed([4.0], 1.0, points=[(0.6, 330.0)])
    found = beside_shear(IPE, beam)
    assert found is not None
    assert found.at == pytest.approx(0.6)
    assert found.shear > IPE.shear / 2
    assert found.moment == pytest.approx(beam.moment_max.value)
    assert found.resistance == pytest.approx(IPE.bending_with_shear(found.shear))
    assert found.resistance < IPE.bending
    assert beside_shear(IPE, analysed([4.0], 10.0)) is None


CASES = {
    "top, general": (Conditions(), {}),
    "top, rolled": (Conditions("rolled"), {}),
    "bottom, rolled": (Conditions("rolled", "bottom"), {}),
    "centre, given C1": (Conditions("general", "centre", 1.3), {}),
    "longer": (Conditions(), {"unbraced": 9.0}),
    "shorter": (Conditions("rolled"), {"unbraced": 2.0}),
    "very short, general": (Conditions("general", "centre"), {"unbraced": 0.3}),
    "very short, rolled": (Conditions("rolled", "centre"), {"unbraced": 0.3}),
    "very long, rolled": (Conditions("rolled", "centre", 1.3), {"unbraced": 40.0}),
    "held, rolled": (Conditions("rolled"), {"braced": "continuous"}),
    "held, general": (Conditions(), {"braced": "continuous", "unbraced": 3.0}),
}


@pytest.mark.parametrize("name", CASES)
@pytest.mark.parametrize("system", ["SI", "US"])
def test_lines_say_what_the_numbers_say(name, system):
    conditions, keys = CASES[name]
    beam = analysed([6.0, 5.0], 8.0, 12.0, overhang=1.5)
    steel = profile("IPE 330", "S275", Factors(1.05, 1.1, 1.0, 0.35, 0.8))
    parts = segments([(0, 6), (6, 11), (11, 12.5)], [0, 6, 11], **keys)
    found = design(steel, beam, parts, conditions)
    for each in found.segments:
        sheet = Sheet("B1", system)
        sheet.section("Buckling")
        given, partial = take_profile(sheet, steel), take_factors(sheet, steel)
        start = critical(sheet, given, each, conditions)
        lines = buckling(sheet, given, partial, steel, conditions, start)
        assert start.critical.value == pytest.approx(each.critical, rel=1e-9)
        assert lines.slenderness.value == pytest.approx(each.slenderness, rel=1e-9)
        assert lines.chi.value == pytest.approx(each.reduction.reduced, rel=1e-9)
        assert lines.resistance.value == pytest.approx(each.resistance, rel=1e-9)
        assert lines.check.check("LTB")["ratio"] == pytest.approx(each.ratio, rel=1e-9)


def test_modified_reduction_is_never_above_one():
    assert reduction(0.45, 0.34, "rolled", RECOMMENDED, 2.5).reduced == 1.0
    assert reduction(0.3, 0.34, "rolled", RECOMMENDED, 1.0).chi == 1.0
    assert reduction(0.1, 0.34, "general", RECOMMENDED, 1.0).reduced == 1.0


def test_diagrams_that_a_segment_is_tried_under():
    """4, 9 and 4 m, the middle one: live load where it sags or hogs most, at the quarters too, and everywhere.

    By the influence lines of a continuous beam: beside the far support a load on the near span hogs, one on
    the far span sags.
    """
    beam = analysed([4.0, 9.0, 4.0], 2.0, 20.0)
    found = {
        (each.sense, each.at): each.factors[1:]
        for each in tried(beam, segments([(4, 13)], [4, 13])[0])
        if each.combination.name == "1.35 G + 1.5 Q" and each.sense
    }
    first, middle, last = 1.5, 1.5, 1.5
    assert found == {
        (1, 8.5): (0.0, middle, 0.0),
        (-1, 4.0): (first, middle, 0.0),
        (1, 6.25): (0.0, middle, last),
        (-1, 6.25): (first, 0.0, 0.0),
        (-1, 8.5): (first, 0.0, last),
        (-1, 10.75): (0.0, 0.0, last),
    }
    every = [each.factors for each in tried(beam, segments([(4, 13)], [4, 13])[0]) if not each.sense]
    assert every == [(1.35, 1.5, 1.5, 1.5), (1.0, 1.5, 1.5, 1.5)]
