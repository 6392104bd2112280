"""The lines that the clauses write, against the numbers they hold for; beams made by hand."""

import math
from dataclasses import replace
from functools import cache

import numpy as np
import pytest
from cases_en1992 import NATIONAL, beam, concrete, given
from written_en1992 import written

from calcpack.clauses.en1992.deflection import curvature
from calcpack.clauses.en1992.detailing import nominal_cover
from calcpack.clauses.en1992.model import Outline
from calcpack.clauses.en1992.shear import concrete_shear, largest_leg_spacing, largest_spacing, least_stirrups

SAME = 1e-9
TEE = Outline(0.3, 0.5, 0.8, 0.12)
THIN = Outline(0.25, 0.5, 0.5, 0.06)
STIRRUPS = {"stirrups": (2, "10 mm", 0.15), "top": (3, "20 mm")}
CASES = {
    "plain": lambda: beam([6.0], 30.0, 10.0, half=0.2, given=given(bottom=(4, "20 mm"), **STIRRUPS)),
    "narrow": lambda: beam([6.0], 30.0, 10.0, half=0.1, given=given(bottom=(4, "20 mm"), **STIRRUPS)),
    "far": lambda: beam([7.5], 9.0, cover=0.02, given=given(bottom=(2, "20 mm"), **STIRRUPS)),
    "lean": lambda: beam([6.0], 6.0, given=given(bottom=(2, "20 mm"), **STIRRUPS)),
    "two layers": lambda: beam([6.0], 50.0, given=given(bottom=(6, "20 mm"), **STIRRUPS)),
    "overstressed": lambda: beam([6.0], 55.0, given=given(bottom=(12, "25 mm"), stirrups=(2, "10 mm", 0.15))),
    "tee": lambda: beam([6.0, 6.0], 40.0, outline=TEE, half=0.2,
                        given=given(bottom=(3, "25 mm"), top=(5, "25 mm"), stirrups=(2, "10 mm", 0.1))),
    "web": lambda: beam([6.0], 60.0, outline=THIN, given=given(bottom=(4, "25 mm"), **STIRRUPS)),
    "pressed tee": lambda: beam([6.0], 80.0, outline=THIN, given=given(bottom=(9, "25 mm"), **STIRRUPS)),
    "strong": lambda: beam([6.0], 60.0, strength=concrete(70.0), given=given(bottom=(5, "25 mm"), **STIRRUPS)),
    "high": lambda: beam([7.5], 60.0, strength=concrete(90.0, fctk_005=3500.0),
                         given=given(bottom=(4, "32 mm"), cot=1.5, **STIRRUPS)),
    "next to C60": lambda: beam([6.0], 30.0, strength=concrete(60.0, fctk_005=3110.0),
                                given=given(bottom=(4, "20 mm"), **STIRRUPS)),
    "fine": lambda: beam([6.0], 10.0, aggregate=0.010, given=given(bottom=(5, "12 mm"), **STIRRUPS)),
    "pressed": lambda: beam([6.0], 100.0, given=given(bottom=(6, "25 mm"), top=(4, "25 mm"),
                                                      stirrups=(2, "10 mm", 0.1))),
    "few": lambda: beam([3.0], 5.0, given=given(bottom=(2, "12 mm"), **STIRRUPS)),
    "shallow": lambda: beam([2.0], 10.0, outline=Outline(0.4, 0.2, 0.4, 0.0), cover=0.02,
                            given=given(bottom=(4, "20 mm"), top=(2, "12 mm"), stirrups=(2, "8 mm", 0.1))),
    "No. 10": lambda: beam([6.0], 30.0, cover=0.05, given=given(bottom=(3, "#10"), **STIRRUPS)),
    "as far as deep": lambda: beam([6.0], 30.0, outline=Outline(0.3008, 0.5, 0.3008, 0.0),
                                   given=given(bottom=(3, "20 mm"), **STIRRUPS)),
    "thick": lambda: beam([6.0], 30.0, half=0.3, cover=0.05,
                          given=given(bottom=(2, "40 mm"), top=(2, "20 mm"), stirrups=(2, "8 mm", 0.3))),
    "numbered": lambda: beam([6.0], 30.0, half=0.3, given=given(bottom=(3, "#8"), top=(2, "#6"),
                                                               stirrups=(2, "#3", 0.2))),
    "overhang": lambda: beam([5.0, 5.0], 35.0, overhang=2.0,
                             given=given(bottom=(3, "20 mm"), top=(4, "20 mm"), stirrups=(2, "10 mm", 0.15))),
    "stopped": lambda: beam([5.4, 5.4], 70.0, half=0.15, limits=(None, None)),
    "outdone": lambda: beam([6.0], 10.0, given=given(bottom=(3, "20 mm"), top=(2, "16 mm"),
                                                     stirrups=(4, "16 mm", 0.075))),
}  # fmt: skip


@cache
def found(name):
    return written(CASES[name]())


ALL = pytest.mark.parametrize("name", CASES)
WHERE = {"sag": "span", "hog": "support", "end": "end support"}
BARS = {"sag": "bottom", "hog": "top"}


def used(beam):
    return [tag for tag in ("sag", "hog") if f"bending, {WHERE[tag]}" in beam.checks]


@ALL
def test_bending(name):
    beam = found(name)
    tags = [*used(beam), *(["end"] if "bending, end support" in beam.checks else [])]
    assert tags
    for tag in tags:
        face = beam.faces[tag].face
        demand, capacity = beam.sides(f"bending, {WHERE[tag]}")
        assert (demand, capacity) == pytest.approx((face.moment, face.bending.moment), rel=SAME)
        assert beam.faces[tag].area.value == pytest.approx(face.bars.area * 1e6, rel=SAME)
        assert beam.faces[tag].effective.value == pytest.approx(face.depth * 1e3, rel=SAME)
        assert beam.faces[tag].bar.value == pytest.approx(face.bars.bar.diameter * 1e3, rel=SAME)
        assert beam.line(f"x,{tag}" if "_" in "x" else f"x_{tag}").value == pytest.approx(
            face.bending.x * 1e3, rel=1e-7
        )
        closed = not face.doubly and face.bending.stress >= face.case.strength.fyd * (1 - SAME)
        assert beam.has(f"sigma_s,{tag}") or closed
        if not closed:
            assert beam.requirement("The forces balance").passes
        if face.doubly:
            assert beam.line(f"sigma_s2,{tag}").value == pytest.approx(face.bending.stress_2 / 1e3, rel=1e-6)
    for tag in used(beam):
        face = beam.faces[tag].face
        assert beam.sides(f"neutral axis, {WHERE[tag]}") == pytest.approx(
            (face.bending.x / face.depth, face.limit), rel=1e-7
        )


@ALL
def test_amounts_and_spacing(name):
    beam = found(name)
    for tag in used(beam):
        face, bars = beam.faces[tag].face, BARS[tag]
        assert beam.sides(f"least reinforcement, {bars}") == pytest.approx(
            (face.least * 1e6, face.bars.area * 1e6), rel=SAME
        )
        if face.bars.layers[0] > 1:
            clear, rule = face.clear
            assert beam.sides(f"bar spacing, {bars}") == pytest.approx((rule * 1e3, clear * 1e3), rel=SAME)
    largest = max(beam.faces[tag].face.bars.area for tag in used(beam))
    own = beam.design.case.sagging
    assert beam.sides("most reinforcement") == pytest.approx((largest * 1e6, 0.04 * own.area * 1e6), rel=SAME)


@ALL
def test_cover(name):
    beam = found(name)
    case, stirrup = beam.design.case, beam.design.shear.stirrups.bar.diameter
    assert beam.sides("cover") == pytest.approx(
        (nominal_cover(stirrup, case.exposure, NATIONAL) * 1e3, case.cover * 1e3), rel=SAME
    )
    thick = max(beam.faces[tag].face.bars.bar.diameter for tag in used(beam))
    assert beam.sides("cover for bond") == pytest.approx(
        (thick * 1e3 + 10, (case.cover + stirrup) * 1e3), rel=SAME
    )


def test_least_cover_is_10_mm():
    """4.4.1.2(2): max(c_min,b; c_min,dur; 10 mm), where durability and bond ask for less."""
    case = CASES["plain"]()
    small = NATIONAL.model_copy(update={"cover": {"XC1": 0.005}})
    thin = replace(case, national=small, given=given(bottom=(4, "20 mm"), top=(3, "20 mm"),
                                                     stirrups=(2, "8 mm", 0.15)))  # fmt: skip
    assert written(thin).sides("cover")[0] == pytest.approx(20.0)


@ALL
def test_shear(name):
    beam = found(name)
    design = beam.design
    shear, case = design.shear, design.case
    ties, struts = shear.capacity(min(shear.spacings))
    governing, largest = shear.places[shear.governing], shear.places[shear.largest]
    assert beam.sides("shear, stirrups") == pytest.approx((governing.v_at, ties), rel=SAME)
    assert beam.sides("shear, struts") == pytest.approx((largest.v_face, struts), rel=SAME)
    assert beam.line("a_l").value == pytest.approx(shear.shift * 1e3, rel=SAME)
    assert beam.line("cot theta").value == pytest.approx(shear.cot, rel=SAME)
    first = case.supports[governing.support].end or design.top is None
    face = design.bottom if first else design.top
    carried = concrete_shear(case.sagging.web, shear.depth, face.bars.area, case.strength, NATIONAL)
    assert beam.line("V_Rd,c").value == pytest.approx(carried, rel=SAME)
    assert beam.sides("shear along the beam") == pytest.approx(shear.along[1:], rel=SAME)
    assert beam.sides("moments along the beam") == pytest.approx(
        (design.along.moment, design.along.resistance), rel=SAME
    )
    widest = max(zone.spacing for zone in shear.zones)
    least = least_stirrups(case.sagging.web, case.strength, NATIONAL)
    web = case.sagging.web
    assert beam.sides("least stirrups") == pytest.approx(
        (least / web, shear.stirrups.area / widest / web), rel=SAME
    )
    assert beam.sides("stirrup spacing") == pytest.approx(
        (widest * 1e3, largest_spacing(shear.depth, NATIONAL) * 1e3), rel=SAME
    )
    assert beam.sides("stirrup legs") == pytest.approx(
        (shear.legs_apart * 1e3, largest_leg_spacing(shear.depth, NATIONAL) * 1e3), rel=SAME
    )
    held = [each.compression.bar.diameter for each in (design.bottom, design.top) if each and each.doubly]
    assert ("stirrups about compression bars" in beam.checks) is bool(held)
    if held:
        sides = beam.sides("stirrups about compression bars")
        assert sides == pytest.approx((widest * 1e3, 15 * min(held) * 1e3), rel=SAME)


@ALL
def test_words_on_stirrups_by_calculation(name):
    beam = found(name)
    needs = beam.line("V_Ed").value > beam.line("V_Rd,c").value
    assert ("(6.2.1(3))" in beam.words) is needs
    assert ("(6.2.1(4))" in beam.words) is not needs


@ALL
def test_anchorage(name):
    beam = found(name)
    design = beam.design
    lengths = [("e", design.end.length)] if design.end else []
    lengths += [("t", design.stopped)] if design.zones else []
    for tag, length in lengths:
        assert beam.line(f"f_bd,{tag}").value == pytest.approx(length.bond / 1e3, rel=SAME)
        assert beam.line(f"l_b,{tag}").value == pytest.approx(length.basic * 1e3, rel=SAME)
        assert beam.line(f"alpha_{tag},a").value == pytest.approx(length.alpha, rel=SAME)
        assert beam.line(f"l_bd,{tag}").value == pytest.approx(length.length * 1e3, rel=SAME)
    if design.end:
        force = design.bottom.bars.area * design.case.strength.fyd
        assert beam.sides("bars at the end support") == pytest.approx((design.end.force, force), rel=SAME)
        room = design.end.room
        assert ("anchorage at the end support" in beam.checks) is (room is not None)
        if room is not None:
            assert beam.sides("anchorage at the end support") == pytest.approx(
                (design.end.length.length * 1e3, room * 1e3), rel=SAME
            )


@ALL
def test_cracks(name):
    beam = found(name)
    for tag in used(beam):
        face = beam.faces[tag].face
        symbol = {"x_II": face.elastic.x_2 * 1e3, "I_II": face.elastic.inertia_2 * 1e12,
                  "sigma_s": face.crack.stress / 1e3, "h_c,ef": face.crack.height * 1e3,
                  "rho_p": face.crack.ratio, "s_r,max": face.crack.spacing * 1e3,
                  "Delta epsilon": face.crack.strain, "w_k": face.crack.width * 1e3}  # fmt: skip
        for base, value in symbol.items():
            line = beam.line(f"{base},{tag}" if "_" in base else f"{base}_{tag}")
            assert line.value == pytest.approx(value, rel=SAME), base
    creep = beam.design.case.creep
    assert beam.line("E_c,eff").value == pytest.approx(beam.design.case.strength.ecm / 1e3 / (1 + creep))
    assert beam.line("alpha_e").value == pytest.approx(beam.faces[used(beam)[0]].face.elastic.ratio)


@ALL
def test_span_over_depth(name):
    beam = found(name)
    last = beam.design.span_depths[-1]
    assert beam.line("lambda_0").value == pytest.approx(last.basic, rel=SAME)
    assert beam.line("lambda_lim").value == pytest.approx(last.limit, rel=SAME)
    assert beam.line("lambda_s").value == pytest.approx(last.actual, rel=SAME)
    tag = "hog" if beam.design.case.spans[last.number].overhang else "sag"
    assert beam.line(f"A_s,req,{tag}").value == pytest.approx(last.required * 1e6, rel=SAME)
    equation = "7.16a" if last.ratio <= 1e-3 * math.sqrt(beam.design.case.strength.fck / 1e3) else "7.16b"
    assert equation in beam.line("lambda_0").cite
    notes = beam.line("lambda_lim").says
    assert ("wide flange" in notes, "over 7 m" in notes) == (last.flanged != 1, last.long != 1)


@ALL
def test_curvature(name):
    beam = found(name)
    design, tag = beam.design, used(beam)[-1]
    case, face = design.case, beam.faces[tag].face
    each = next(
        (each for each in design.deflections if case.spans[each.number].overhang is (tag == "hog")), None
    )
    if each is None:
        tag = "sag"
        face, each = beam.faces[tag].face, design.deflections[0]
    by_hand = max(0.0, 1 - 0.5 * (face.elastic.cracking / each.moment) ** 2)
    zeta = by_hand if each.moment >= face.elastic.cracking else 0.0
    assert beam.line("zeta").value == pytest.approx(zeta, rel=SAME)
    kappa = curvature(
        np.array([each.moment]),
        np.array([zeta]),
        face.elastic,
        case.strength.ecm / (1 + case.creep),
        case.shrinkage,
    )
    assert beam.line("kappa").value == pytest.approx(float(kappa[0]), rel=1e-8)


def test_the_cases_reach_every_branch():
    """What the table of cases is there for."""
    assert found("far").line("s_r,max,sag").cite.endswith("(7.14)")
    assert found("plain").line("s_r,max,sag").cite.endswith("(7.11)")
    assert found("lean").line("zeta").value == 0.0
    assert found("web").has("F_f,sag")
    assert found("web").has("S_f,sag")
    assert found("two layers").design.bottom.bars.layers == (4, 2)
    assert not found("two layers").design.bottom.doubly
    assert found("pressed tee").design.bottom.doubly
    assert found("overstressed").design.bottom.doubly
    assert found("stopped").design.zones
    assert found("thick").line("f_bd,e").value == pytest.approx(2.25 * 0.92 * 2.0 / 1.5)
    assert found("high").line("f_bd,e").value == pytest.approx(2.25 * 3.1 / 1.5)
    assert found("narrow").design.end.bent
    assert not found("plain").design.end.bent
    assert str(found("outdone").line("cot theta").expression).count("Number(text='0')") == 1
    assert found("pressed").design.span_depths[0].ratio_2 > 0
    # the largest moment of a span is said anew where it is not that of the face
    assert not found("plain").has("M_Ed,s")
    assert found("overhang").has("M_Ed,s")
    # a metric bar's area is that of its circle, a US bar's that of its table
    for name, circle in (("plain", True), ("numbered", False)):
        assert found(name).has("A_sag") is not circle
        assert ("pi" in str(found(name).line("A_sw").expression).lower()) is circle
