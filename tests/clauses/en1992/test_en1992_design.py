"""The design of a beam as a whole: anchorage at its ends, bars that stop, what is chosen where; 300 x 500, C30."""

import math
from dataclasses import replace

import numpy as np
import pytest
from cases_en1992 import beam, given

from calcpack.clauses.en1992 import design as module
from calcpack.clauses.en1992.design import design_beam
from calcpack.clauses.en1992.model import Outline

FYD = 500e3 / 1.15
GIVEN = {"stirrups": (2, "8 mm", 0.15), "top": (2, "12 mm")}


def bars(design):
    """Bottom, all top, running through: (count, diameter)."""
    return [
        each and (each.bars.count, each.bars.bar.name) for each in (design.bottom, design.top, design.through)
    ]


# Anchorage -----------------------------------------------------------------------------------------------


def test_force_to_anchor_at_the_end():
    """V at the face 171 kN; a_l/z = cot/2: 213.75 kN in 942.5 mm2, 226.8 MPa (9.2.1.4(2), (9.3)).

    l_b,rqd = 20/4 x 226.8/3.0; c_d = 38 mm, less than half of 41: 1 - 0.15 x 18/20 of it (8.4.4).
    """
    found = design_beam(beam([6.0], 60.0, half=0.3, given=given(bottom=(3, "20 mm"), **GIVEN)))
    first = found.ends[0]
    face = 60.0 * (3 - 0.3)
    assert first.shear == pytest.approx(face)
    assert first.force == pytest.approx(face * 1.25)
    stress = face * 1.25 / (3 * math.pi * 1e-4)
    assert first.stress == pytest.approx(stress)
    assert first.length.basic == pytest.approx(0.005 * stress / 3000)
    assert first.length.alpha == pytest.approx(1 - 0.15 * 18 / 20)
    assert first.room == pytest.approx(0.6 - 0.03)
    assert not first.bent
    assert found.anchored
    assert len(found.ends) == 2


def test_half_the_clear_distance_where_bars_stand_close():
    """Four of 12 mm: (300 - 76 - 48)/3 = 58.67, half of it 29.33 below the cover of 38."""
    found = design_beam(beam([6.0], 10.0, given=given(bottom=(4, "12 mm"), **GIVEN)))
    assert found.ends[0].length.alpha == pytest.approx(1 - 0.15 * (176 / 6 - 12) / 12)


def test_stress_to_anchor_is_not_above_the_design_strength():
    found = design_beam(beam([6.0], 60.0, given=given(bottom=(2, "12 mm"), **GIVEN)))
    assert found.ends[0].force > 2 * math.pi * 36e-6 * FYD
    assert found.ends[0].stress == FYD


@pytest.mark.parametrize(("half", "bent"), [(0.1775, False), (0.1765, True)])
def test_bars_are_bent_up_where_there_is_no_room(half, bent):
    """Straight 0.865 x 20/4 x 1.25 x 60 (3 - half)/942.5/3.0 = 324 mm; room is the support's width less 30 mm."""
    case = beam([6.0], 60.0, half=half, given=given(bottom=(3, "20 mm"), **GIVEN))
    found = design_beam(case)
    for each in found.ends:
        assert each.bent is bent
        assert each.room == pytest.approx(2 * half - 0.03)
        # with a bend c_d = 38 mm is below 3 phi: nothing is gained, alpha_1 = alpha_2 = 1
        assert each.length.alpha == (1.0 if bent else pytest.approx(0.865))
    assert found.anchored is not bent


def test_the_end_that_asks_most():
    """Without widths the longest anchorage; with them the largest part of the room."""
    case = beam([6.0], 60.0, points=((1.5, 40.0),), given=given(bottom=(3, "20 mm"), **GIVEN))
    assert design_beam(case).end.support.at == 0.0
    wide = replace(case, supports=(case.supports[0]._replace(half=0.5), case.supports[1]._replace(half=0.1)))
    assert design_beam(wide).end.support.at == 6.0
    held = beam([6.0], 60.0, fixed=(True, True))
    assert design_beam(held).end is None
    assert design_beam(beam([], 10.0, overhang=2.0, fixed=(True, False))).ends == ()


@pytest.mark.parametrize(("depth", "good"), [(0.29795, True), (0.29805, False)])
def test_bond_of_top_bars(depth, good):
    """h - 38 - 20/2 of concrete below them, up to 250 mm (8.4.2(2), Figure 8.2 b)."""
    found = design_beam(beam([6.0], 5.0, given=given(bottom=(3, "20 mm"), stirrups=(2, "8 mm", 0.15),
                                                    top=(2, "20 mm"))))  # fmt: skip
    low = replace(found, case=replace(found.case, sagging=Outline(0.3, depth, 0.3, 0.0)))
    assert low.stopped.bond == pytest.approx(3000.0 if good else 2100.0)
    assert low.stopped.basic == pytest.approx(0.005 * FYD / low.stopped.bond)
    assert low.ends[0].length.bond == pytest.approx(3000.0)  # bottom bars always


# Along the beam ------------------------------------------------------------------------------------------


def test_top_bars_that_run_through_and_those_that_stop():
    """5.4 m spans of 70 kN/m: 255.15 kNm over the support; two bars run through, all of them lie about it."""
    found = design_beam(beam([5.4, 5.4], 70.0, half=0.15))
    assert found.top is not None
    assert found.top.bars.count > found.through.bars.count >= 2
    (zone,) = found.zones
    assert zone.start < 5.4 < zone.end
    assert zone.full_start - zone.start == pytest.approx(found.stopped.length)
    at = {place: float(np.interp(place, found.case.places, found.top_resistance)) for place in (1.0, 5.4)}
    assert at[1.0] == pytest.approx(found.through.bending.moment)
    assert at[5.4] == pytest.approx(found.top.bending.moment)
    assert np.all(found.hogging <= found.top_resistance * (1 + 1e-9))
    assert found.along.ratio <= 1
    # within a_l of the support the shifted moment is that over it
    near = np.abs(found.case.places - 5.4) < 0.99 * found.shear.shift
    assert found.hogging[near] == pytest.approx(255.15)


def test_end_moments_are_carried_by_the_bars_that_run_through():
    """beta_1 = 0.15 of 90 kNm = 13.5 kNm (9.2.1.2(1)); given bars all run through."""
    found = design_beam(beam([6.0]))
    assert (found.top, found.through.moment) == (None, pytest.approx(13.5))
    assert found.through.resists
    assert found.through.lasting == 0.0
    own = design_beam(beam([6.0], given=given(top=(3, "16 mm"))))
    assert bars(own)[1:] == [None, (3, "16 mm")]
    assert (own.through.moment, own.through.lasting) == (pytest.approx(13.5), 0.0)
    assert own.zones == ()


def test_a_cantilever_has_bars_at_the_bottom_that_carry_nothing():
    found = design_beam(beam([], 30.0, overhang=2.0, fixed=(True, False)))
    assert (found.bottom.moment, found.bottom.lasting) == (0.0, 0.0)
    assert bars(found)[0] == (2, "12 mm")
    assert found.top.moment == pytest.approx(60.0)
    assert found.top.lasting == pytest.approx(60.0)
    assert found.through.lasting == 0.0


def test_a_fixed_beam_has_no_free_end():
    """No end moment to allow for: the thinnest bars hold the stirrups where no bars are needed at the top."""
    held = beam([6.0], 20.0, points=((3.0, 1.0),))
    bare = replace(held, supports=tuple(each._replace(end=False) for each in held.supports))
    found = design_beam(bare)
    assert bars(found)[1:] == [None, (2, "12 mm")]
    assert (found.through.moment, found.through.lasting) == (0.0, 0.0)
    # where bars in compression are counted, with as much as is counted
    pressed = design_beam(replace(beam([6.0], 95.0, limits=(None, None)), supports=bare.supports))
    assert pressed.bottom.doubly
    assert pressed.through.bars == pressed.bottom.compression
    assert pressed.bottom.resists


@pytest.mark.parametrize("load", [66.0, 75.0])
def test_end_supports_that_ask_for_more_than_the_hogging_moments(load):
    """An overhang of 300 mm hogs with 0.045 q, the end support with 0.15 of q L2/8: more than two of 12 mm."""
    found = design_beam(beam([6.0], load, overhang=0.3, half=0.2, limits=(None, None)))
    assert found.top.moment == pytest.approx(load * 0.3**2 / 2)
    assert found.top.lasting == pytest.approx(load * 0.3**2 / 2)
    assert found.through.moment > 44.04  # what two of 12 mm carry
    assert found.through.resists
    assert found.through.lasting == 0.0
    assert found.top.bars == found.through.bars


def test_lasting_moments_of_each_face():
    """20 of 32 kN/m last: 5/8 of the moments; a simple beam has none at the top."""
    found = design_beam(beam([6.0, 6.0], 20.0, 12.0))
    assert found.bottom.lasting == pytest.approx(found.bottom.moment * 5 / 8)
    assert found.top.lasting == pytest.approx(found.top.moment * 5 / 8)
    assert module._lasting(beam([6.0])) == (pytest.approx(90.0), 0.0)
    assert module._lasting(beam([], 20.0, overhang=2.0, fixed=(True, False))) == (0.0, pytest.approx(40.0))


# What is chosen ------------------------------------------------------------------------------------------


def test_more_bottom_bars_in_three_steps_for_the_deflection(monkeypatch):
    """At most half as much again as strength asks for; where that is not enough, those that it asks for."""
    asked = []

    def watched(*positional, least=0.0, **keys):
        face = choose(*positional, least=least, **keys)
        if positional[2] == case.sag:
            asked.append((least, face.required[0]))
        return face

    choose = module.choose
    case = beam([6.0], limits=(None, 5000.0))
    monkeypatch.setattr(module, "choose", watched)
    found = module._deflecting(case, module.stirrup_sizes(case)[0], module.SIZES)
    strength = asked[0][1]
    assert [least / strength for least, _ in asked if least] == pytest.approx([1.15, 1.3, 1.5], rel=1e-9)
    assert found.bottom == choose(case, case.sagging, case.sag, found.bottom.lasting, 0.008,
                                  compression=module._hangers(case, 0.008))  # fmt: skip


def test_more_bottom_bars_only_as_far_as_the_deflection_asks():
    plain = design_beam(beam([6.0], limits=(None, None), crack_limit=1e-3))
    total = plain.deflections[0].total
    found = design_beam(beam([6.0], limits=(None, 6.0 / (0.97 * total)), crack_limit=1e-3))
    assert found.bottom.bars.area > plain.bottom.bars.area
    assert found.deflects_fine
    assert plain.deflects_fine
    given_bars = design_beam(beam([6.0], limits=(None, 5000.0), given=given(bottom=(2, "20 mm"))))
    assert bars(given_bars)[0] == (2, "20 mm")
    assert not given_bars.deflects_fine


@pytest.mark.parametrize(("share", "fine"), [(0.995, True), (1.005, False)])
def test_deflection_at_its_limit(share, fine):
    found = design_beam(beam([6.0], given=given(bottom=(3, "20 mm"))))
    total = found.deflections[0].total
    limited = replace(found.case, limits=(None, 6.0 * share / total))
    assert replace(found, case=limited).deflects_fine is fine


def test_thicker_stirrups_where_thin_ones_are_not_enough():
    """8 mm at 75 mm: 0.405 x 434.8 x 2.5 x 1.34 mm2/mm = 590 kN, but the struts carry 442 at that angle."""
    thin = design_beam(beam([6.0], 60.0))
    assert (thin.shear.stirrups.bar.name, thin.shear.stirrups.legs) == ("8 mm", 2)
    own = {"half": 0.15, "given": given(bottom=(6, "25 mm"), top=(2, "20 mm"))}
    thick = design_beam(beam([2.0], 700.0, **own))
    assert thick.shear.stirrups.bar.diameter > 0.008
    assert all(thick.shear.ratio(number) <= 1 for number in range(2))
    most = design_beam(beam([2.0], 5000.0, **own))
    assert (most.shear.stirrups.bar.name, most.shear.stirrups.legs) == ("16 mm", 6)


@pytest.mark.parametrize(("share", "fine"), [(0.995, True), (1.005, False)])
def test_shear_at_its_limit(share, fine):
    found = design_beam(beam([6.0], 60.0, half=0.15, given=given(stirrups=(2, "8 mm", 0.15)))).shear
    assert module._shear_fine(found)
    more = 60.0 * share / found.ratio(0)
    case = beam([6.0], more, half=0.15, given=given(stirrups=(2, "8 mm", 0.15)))
    assert module._shear_fine(module.shear_design(case, found.stirrups, found.depth, None)) is fine


@pytest.mark.parametrize(("share", "fine"), [(0.995, True), (1.005, False)])
def test_struts_at_their_limit(share, fine):
    """Faces 2.5 m from the supports: 0.5 q there, 442.4 kN the struts carry (6.9); the stirrups carry more."""
    load = share * 0.3 * 0.9 * 0.45 * 0.528 * 20e3 / 2.9 / 0.5
    case = beam([6.0], load, half=2.5, given=given(stirrups=(2, "10 mm", 0.075), cot=2.5))
    shear = module.shear_design(case, module.stirrup_sizes(case)[0], 0.45, None)
    assert module._shear_fine(shear) is fine


@pytest.mark.parametrize(("spacing", "fine"), [(0.0751, True), (0.0749, False)])
def test_stirrups_closer_than_75_mm_are_not_chosen(spacing, fine):
    found = design_beam(beam([6.0], 60.0, half=0.15, given=given(stirrups=(2, "8 mm", spacing))))
    assert module._shear_fine(found.shear) is fine


def test_thinner_bars_where_the_support_is_narrow():
    """Thick bars have no room to be anchored on 200 mm, thin ones do."""
    case = beam([6.0], 25.0, half=0.11, limits=(None, None))
    found = design_beam(case)
    wide = design_beam(beam([6.0], 25.0, half=0.4, limits=(None, None)))
    assert found.anchored
    assert found.bottom.bars.bar.diameter < wide.bottom.bars.bar.diameter


def test_given_bars_in_compression_are_counted_where_the_neutral_axis_asks_for_them():
    """Six of 25 mm are more than 0.448 d allows alone; three are not."""
    many = design_beam(beam([6.0], 100.0, given=given(bottom=(6, "25 mm"))))
    few = design_beam(beam([6.0], 60.0, given=given(bottom=(3, "25 mm"))))
    assert many.bottom.doubly
    assert many.bottom.bending.x <= many.bottom.limit * many.bottom.depth * (1 + 1e-9)
    assert many.bottom.compression == many.through.bars
    assert few.bottom.compression is None
    # so many that none of the bars above is enough: the largest of them is tried and shown
    hopeless = design_beam(beam([6.0], 100.0, given=given(bottom=(12, "32 mm"))))
    assert hopeless.bottom.compression is not None
    assert not hopeless.bottom.resists


def test_top_bars_are_not_less_than_those_counted_in_compression():
    chosen = design_beam(beam([6.0], 95.0, limits=(None, None)))
    assert chosen.bottom.doubly
    assert chosen.bottom.compression == chosen.through.bars
    assert chosen.bottom.resists


def test_the_smallest_bars_that_hold_stirrups_come_first():
    found = module._hangers(beam([6.0]), 0.008)
    assert (found[0].count, found[0].bar.name) == (2, "12 mm")
    assert {len(each.layers) for each in found} == {1}
    areas = [each.area for each in found]
    assert areas == sorted(areas)
    (own,) = module._hangers(beam([6.0], given=given(top=(4, "16 mm"))), 0.008)
    assert (own.count, own.bar.name) == (4, "16 mm")
