"""Which stretches are checked, under which arrangement of load, and how the whole comes out."""

from __future__ import annotations

import math
from itertools import pairwise

import pytest

from calcpack.actions import LoadSet, analyse_beam
from calcpack.actions.combinations import Combination
from calcpack.clauses.aisc360 import strength
from calcpack.clauses.aisc360.design import Concentrated, Demands, Options, SpanOf, SteelDesign, segments
from calcpack.clauses.aisc360.strength import Steel
from calcpack.clauses.steel import arrangements, held_points, i_section, segment_moments, stretch
from calcpack.job.library import rolled_sections
from calcpack.statics import BeamLine, LineLoad, PointLoad

SHAPE = i_section(rolled_sections()["w18x50"])
STEEL = Steel(344.738e3, 199.948e6)
STIFFNESS = STEEL.modulus * SHAPE.inertia
SERVICE = Combination("D + L", "service", {"dead": 1.0, "live": 1.0})
STRENGTH = Combination("1.2 D + 1.6 L", "strength", {"dead": 1.2, "live": 1.6})
ONLY_DEAD = Combination("1.4 D", "strength", {"dead": 1.4})


def two_spans(dead=5.0, live=10.0, first=8.0, second=6.0, overhang=0.0):
    """A beam on three supports, perhaps with an overhang; live load span by span."""
    ends = [0.0, first, first + second]
    if overhang:
        ends.append(first + second + overhang)
    line = BeamLine(ends[-1], tuple(ends[:3]))
    sets = [LoadSet("dead", (LineLoad(0.0, ends[-1], dead, dead),))]
    sets += [
        LoadSet("live", (LineLoad(a, b, live, live),), f"span {number}")
        for number, (a, b) in enumerate(pairwise(ends))
    ]
    spans = tuple(SpanOf(number, a, b, number < 2) for number, (a, b) in enumerate(pairwise(ends)))
    analysed = analyse_beam(line, sets, [ONLY_DEAD, STRENGTH, SERVICE], STIFFNESS)
    return Demands(analysed, spans, ())


def design(demands, **options):
    return SteelDesign(SHAPE, STEEL, Options("LRFD", **options), demands)


SPANS = (SpanOf(0, 0.0, 8.0, True), SpanOf(1, 8.0, 10.0, False))


def shown(found):
    return [(each.flange, each.start, each.end, each.held, each.free) for each in found]


def test_segments_of_the_whole_span():
    assert shown(segments(SPANS, Options("LRFD"), (4.0,))) == [
        ("both", 0.0, 8.0, False, False),
        ("both", 8.0, 10.0, False, True),
    ]


def test_segments_at_beams():
    found = segments(SPANS, Options("LRFD", braced="at beams"), (3.0, 8.0, 9.0))
    assert shown(found) == [
        ("top", 0.0, 3.0, False, False),
        ("top", 3.0, 8.0, False, False),
        ("bottom", 0.0, 8.0, False, False),
        ("both", 8.0, 10.0, False, True),
    ]


def test_segments_held_all_along():
    found = segments(SPANS, Options("LRFD", braced="continuous"), ())
    assert shown(found) == [
        ("top", 0.0, 8.0, True, False),
        ("bottom", 0.0, 8.0, False, False),
        ("both", 8.0, 10.0, False, True),
    ]
    both = segments(SPANS, Options("LRFD", braced="continuous", bottom_with_top=True), ())
    assert shown(both) == [("both", 0.0, 8.0, True, False), ("both", 8.0, 10.0, True, True)]
    assert [each.unbraced for each in both] == [0.0, 0.0]


def test_held_points():
    assert held_points(0.0, 9.0, every=3.0).tolist() == [0.0, 3.0, 6.0, 9.0]
    assert held_points(0.0, 9.0, every=12.0).tolist() == [0.0, 9.0]
    assert held_points(0.0, 9.0, at=(4.0, 4.0 + 1e-9, 2.0)).tolist() == [0.0, 2.0, 4.0, 9.0]
    with pytest.raises(ValueError, match="distance"):
        held_points(0.0, 9.0, every=0.0)


def test_arrangements_are_those_of_the_envelope():
    demands = two_spans()
    tried = arrangements(demands.analysed, 0.0, 8.0)
    assert {each.combination.name for each in tried} == {"1.4 D", "1.2 D + 1.6 L"}
    live = {each.sense: each.factors for each in tried if each.combination is STRENGTH}
    assert live[1] == (1.2, 1.6, 0.0)  # sagging: its own span alone
    assert live[-1] == (1.2, 1.6, 1.6)  # hogging at the support: both spans
    band = demands.analysed.band("moment")
    most = max(stretch(each.moment, 0.0, 8.0).largest.value for each in tried)
    least = min(stretch(each.moment, 0.0, 8.0).smallest.value for each in tried)
    assert most == pytest.approx(stretch(band.upper, 0.0, 8.0).largest.value)
    assert least == pytest.approx(stretch(band.lower, 0.0, 8.0).smallest.value)


def test_a_moment_diagram_acts_together():
    """C_b comes from one arrangement: its quarter moments follow from statics of the loaded span."""
    demands = two_spans()
    check = next(each for each in design(demands, braced="continuous").bending if not each.sagging)
    end = segment_moments(check.arrangement.moment, 0.0, 8.0).last
    load = 1.2 * 5.0 + 1.6 * 10.0
    for part, found in zip((0.25, 0.5, 0.75), check.moments[3:6], strict=True):
        assert found == pytest.approx(load * 64 / 2 * part * (1 - part) + end * part, rel=1e-9)


def test_the_worst_arrangement_is_taken():
    demands = two_spans()
    worst = max(each.ratio for each in design(demands).bending)
    for each in arrangements(demands.analysed, 0.0, 8.0):
        moments = segment_moments(each.moment, 0.0, 8.0)
        nominal = strength.bending_strength(SHAPE, STEEL, 8.0, strength.diagram_factor(moments)).nominal
        assert abs(moments.largest.value) / (0.9 * nominal) <= worst * (1 + 1e-9)


def test_bending_of_a_simple_beam_by_hand():
    line = BeamLine(6.0, (0.0, 6.0))
    sets = [LoadSet("dead", (LineLoad(0, 6, 10, 10),)), LoadSet("live", (LineLoad(0, 6, 20, 20),))]
    analysed = analyse_beam(line, sets, [STRENGTH, SERVICE], STIFFNESS)
    (check,) = design(Demands(analysed, (SpanOf(0, 0.0, 6.0, True),), ())).bending
    assert check.demand == pytest.approx((12 + 32) * 36 / 8)
    assert check.at == pytest.approx(3.0)
    assert check.diagram_factor == pytest.approx(12.5 / 11)
    nominal = strength.bending_strength(SHAPE, STEEL, 6.0, 12.5 / 11).nominal
    assert check.ratio == pytest.approx((12 + 32) * 36 / 8 / (0.9 * nominal))
    asd = SteelDesign(SHAPE, STEEL, Options("ASD"), Demands(analysed, (SpanOf(0, 0.0, 6.0, True),), ()))
    assert asd.bending[0].available == pytest.approx(nominal / 1.67)


def test_a_small_moment_has_its_sense_as_well():
    """1.4 x 0.001 kN/m on 6 m: 0.0063 kNm, sagging."""
    load = LoadSet("dead", (LineLoad(0, 6, 0.001, 0.001),))
    analysed = analyse_beam(BeamLine(6.0, (0.0, 6.0)), [load], [ONLY_DEAD], STIFFNESS)
    (check,) = design(Demands(analysed, (SpanOf(0, 0.0, 6.0, True),), ())).bending
    assert check.demand == pytest.approx(0.0063)
    assert check.sagging


def test_a_cantilever_has_no_diagram_factor():
    check = next(each for each in design(two_spans(overhang=2.0)).bending if each.segment.free)
    assert (check.diagram_factor, check.segment.unbraced, check.sagging) == (1.0, 2.0, False)


def test_the_job_may_set_the_diagram_factor():
    found = design(two_spans(overhang=2.0), diagram_factor=1.05).bending
    assert [each.diagram_factor for each in found] == [1.05, 1.05, 1.0]


def test_forces_near_the_end_and_inside():
    demands = two_spans()
    forces = (
        Concentrated("K1", 0.0, 100.0, True),
        Concentrated("load 1", 0.3, 50.0, False),
        Concentrated("K2", 8.0, 200.0, True),
    )
    found = design(Demands(demands.analysed, demands.spans, forces)).web
    assert [(each.limit, each.force.name) for each in found] == [
        (limit, name) for name in ("K1", "load 1", "K2") for limit in ("yielding", "crippling")
    ]
    assert [each.from_end for each in found[::2]] == pytest.approx([0.0, 0.3, 6.0])
    assert found[0].available == pytest.approx(strength.web_yielding(SHAPE, STEEL, 0.1, 0.0))
    assert found[1].available == pytest.approx(0.75 * strength.web_crippling(SHAPE, STEEL, 0.1, 0.0))
    assert found[3].available == pytest.approx(0.75 * strength.web_crippling(SHAPE, STEEL, 0.1, 0.3))
    assert found[5].ratio == pytest.approx(200 / found[5].available)
    assert design(Demands(demands.analysed, demands.spans, forces), seated=False).web == ()


def test_deflection_of_each_span_by_hand():
    """Simple beam: 5 w l⁴ / (384 E I); a cantilever's limit counts twice its length."""
    line = BeamLine(6.0, (0.0, 6.0))
    sets = [LoadSet("dead", (LineLoad(0, 6, 10, 10),)), LoadSet("snow", (LineLoad(0, 6, 20, 20),))]
    service = Combination("D + S", "service", {"dead": 1.0, "snow": 1.0})
    analysed = analyse_beam(line, sets, [ONLY_DEAD, service], STIFFNESS)
    live, total = design(Demands(analysed, (SpanOf(0, 0.0, 6.0, True),), ())).deflection
    assert live.found == pytest.approx(5 * 20 * 6**4 / 384 / STIFFNESS)
    assert (live.under, live.allowed) == ("snow", pytest.approx(6 / 360))
    assert total.found == pytest.approx(5 * 30 * 6**4 / 384 / STIFFNESS)
    assert (total.under, total.allowed) == ("D + S", pytest.approx(6 / 240))
    tip = [
        each
        for each in design(two_spans(overhang=2.0), live_limit=300.0).deflection
        if not each.span.supported
    ]
    assert [each.allowed for each in tip] == pytest.approx([4 / 300, 4 / 240])


def test_passes_and_fails():
    weak = design(two_spans(live=10.0))
    assert weak.passes == (max(weak.ratios) <= 1)
    assert design(two_spans(live=5.0)).passes
    assert not design(two_spans(live=60.0)).passes


def test_passing_ends_at_one():
    base = design(two_spans(live=5.0))
    total = max(each.ratio for each in base.deflection if each.kind == "total")
    for ratio, passes in ((0.999, True), (1.0, True), (1.001, False)):
        found = design(two_spans(live=5.0), total_limit=240 * ratio / total)
        assert max(found.ratios) == pytest.approx(ratio, rel=1e-9)
        assert found.passes == passes


def test_a_web_that_is_not_compact_passes_nothing():
    thin = SteelDesign(SHAPE._replace(web=0.003), Steel(1.5e6, 200e6), Options("LRFD"), two_spans(live=1.0))
    assert (thin.covered, thin.bending, thin.passes) == (False, (), False)


def test_a_point_load_that_lifts():
    """Upward load: the overhang sags; it is checked by size, as both flanges are."""
    line = BeamLine(10.0, (0.0, 8.0))
    analysed = analyse_beam(
        line, [LoadSet("dead", (PointLoad(10.0, -20.0),))], [ONLY_DEAD, SERVICE], STIFFNESS
    )
    found = design(Demands(analysed, SPANS, ())).bending
    assert [each.sagging for each in found] == [True, True]
    assert [each.demand for each in found] == pytest.approx([56.0, 56.0])
    assert math.isclose(found[0].diagram_factor, 12.5 / (2.5 + 3 * 0.25 + 4 * 0.5 + 3 * 0.75))
