"""What the lines of EN 1993 say, and where a requirement passes; IPE 330 in S235 on 4 m."""

from dataclasses import replace

import pytest
from beams_en1993 import profile

from calcpack.actions import Combination, LoadSet, analyse_beam
from calcpack.clauses.en1993.bearing import bearing
from calcpack.clauses.en1993.buckling import quarter_points
from calcpack.clauses.en1993.design import Conditions, LocalForce, buckling_of
from calcpack.clauses.en1993.lines_bearing import bearing as write
from calcpack.clauses.en1993.lines_buckling import buckling, critical
from calcpack.clauses.en1993.lines_profile import classify, take_factors, take_profile
from calcpack.clauses.en1993.lines_section import bending, bending_beside_shear, modulus_line, shear
from calcpack.clauses.en1993.rules import Factors
from calcpack.clauses.en1993.segments import segments
from calcpack.sheet import Sheet
from calcpack.statics import BeamLine, LineLoad, PointLoad

IPE = profile("IPE 330")


def simple(load, points=(), span=4.0):
    sets = [LoadSet("dead", (LineLoad(0, span, load, load), *(PointLoad(*each) for each in points)))]
    return analyse_beam(BeamLine(span, (0.0, span)), sets, [Combination("G", "strength", {"dead": 1.0})])


def buckled(beam, conditions, steel=IPE, **keys):
    return buckling_of(steel, beam, segments([(0, 4)], [0, 4], **keys), conditions)[0]


def said(beam, conditions, steel=IPE, **keys):
    """Lines of the first segment."""
    part = buckled(beam, conditions, steel, **keys)
    sheet = Sheet("B1")
    sheet.section("Buckling")
    given, partial = take_profile(sheet, steel), take_factors(sheet, steel)
    start = critical(sheet, given, part, conditions)
    return sheet, start, buckling(sheet, given, partial, steel, conditions, start)


def found_line(sheet, symbol):
    return next(each for each in sheet.lines.values() if each.symbol == symbol)


def test_words_on_the_loads_height():
    sheet, start, _ = said(simple(10.0), Conditions(load_height="top"))
    assert "above the shear centre" in found_line(sheet, "z_g").says
    assert found_line(sheet, "F_phi").says.endswith("point loads times sin")
    assert start.load.says == "Load factor, for its height"
    sheet, start, _ = said(simple(10.0), Conditions(load_height="bottom"))
    assert "below the shear centre" in found_line(sheet, "z_g").says
    assert found_line(sheet, "F_phi").says.endswith("half wave of twist")
    assert start.load.says.endswith("below, as for C1 = 1")


def test_where_the_buckling_length_comes_from():
    """A length that the job gives and that is longer than the segment is said to be the job's."""
    assert said(simple(10.0), Conditions())[1].length.origin == "segment"
    assert said(simple(10.0), Conditions(), unbraced=2.0)[1].length.origin == "segment"
    assert said(simple(10.0), Conditions(), unbraced=5.0)[1].length.origin == "design.unbraced_length"


def test_words_on_the_side_ratio():
    """IPE 330: h/b = 330/160, over 2; IPE 300 exactly 2."""
    for name, words in (("IPE 330", "h/b over 2"), ("IPE 300", "h/b not over 2")):
        sheet, _, _ = said(simple(10.0), Conditions(), profile(name))
        assert found_line(sheet, "alpha_LT").says.endswith(words)


def test_diagram_factor_from_the_quarter_points():
    """A load at 1 m: M2 = 30, M3 = 20, M4 = 10 of 30 kNm: root(35/(1 + 9 + 16/2.25 + 1))."""
    sheet, _, _ = said(simple(0.0, [(1.0, 40.0)]), Conditions(load_height="centre"))
    assert found_line(sheet, "C_1,q").value == pytest.approx((35 / (11 + 16 / 2.25)) ** 0.5)
    part = buckled(simple(0.0, [(1.0, 40.0)]), Conditions(load_height="centre"))
    assert found_line(sheet, "C_1,q").value == pytest.approx(quarter_points(part.moments))


def test_modified_reduction_stays_below_the_critical_moment_on_the_sheet():
    """HE 200 B with C1 = 2.7 and beta = 0.5: chi/f passes 1/lambda2, which is taken (6.58)."""
    steel = profile("HE 200 B", "S355", Factors(beta=0.5))
    _, _, lines = said(simple(10.0), Conditions("rolled", "centre", 2.7), steel, unbraced=20.0)
    assert 1.0 < lines.slenderness.value < 1.2
    assert lines.chi.value == pytest.approx(1 / lines.slenderness.value**2, rel=1e-12)


@pytest.mark.parametrize(("thickness", "words"), [(0.040, "up to 40 mm"), (0.0401, "over 40 mm")])
def test_words_on_the_thickness(thickness, words):
    """Table 3.1."""
    sheet = Sheet("B1")
    sheet.section("Section")
    thick = replace(IPE, shape=IPE.shape._replace(flange=thickness))
    assert words in take_profile(sheet, thick).f_y.says


@pytest.mark.parametrize(("share", "passes"), [(0.99, True), (1.01, False)])
def test_moment_and_shear_at_their_resistance(share, passes):
    sheet = Sheet("B1")
    sheet.section("Section")
    given, partial = take_profile(sheet, IPE), take_factors(sheet, IPE)
    epsilon = classify(sheet, given, IPE).epsilon
    assert bending(sheet, given, partial, IPE, share * IPE.bending, "moment").check.passes is passes
    sheared = shear(sheet, given, partial, epsilon, share * IPE.shear, "shear")
    assert sheared.check.passes is passes
    force = 0.8 * IPE.shear
    bent = share * IPE.bending_with_shear(force)
    both = bending_beside_shear(sheet, given, partial, IPE, sheared.resistance, "1 m", bent, force)
    assert both.check.passes is passes


@pytest.mark.parametrize(("share", "passes"), [(0.99, True), (1.01, False)])
def test_force_at_the_resistance_of_the_web(share, passes):
    web = bearing(IPE, 0.1, None)
    force = LocalForce(None, 2.0, share * web.resistance, "G", 0.0, None, web)
    sheet = Sheet("B1")
    sheet.section("Bearing")
    given, partial = take_profile(sheet, IPE), take_factors(sheet, IPE)
    assert write(sheet, given, partial, force, Conditions(), "at 2 m").check.passes is passes


@pytest.mark.parametrize(
    ("name", "grade", "symbol", "words"),
    [("IPE 330", "S235", "W_pl,y", "plastic, class 1"), ("HE 200 A", "S355", "W_pl,y", "plastic, class 2"),
     ("HE 300 A", "S355", "W_el,y", "elastic, class 3")],
)  # fmt: skip
def test_modulus_of_the_class(name, grade, symbol, words):
    """6.2.5(2)."""
    sheet = Sheet("B1")
    sheet.section("Section")
    steel = profile(name, grade)
    line, said_so = modulus_line(take_profile(sheet, steel), steel)
    assert (line.symbol, said_so) == (symbol, words)
    assert line.value == pytest.approx(steel.modulus_of_section * 1e9)


@pytest.mark.parametrize("curves", ["general", "rolled"])
def test_nothing_is_lost_on_a_short_segment(curves):
    """300 mm: on the plateau chi is 1, not more (6.56), (6.57)."""
    sheet, _, lines = said(simple(10.0), Conditions(curves, "centre"), unbraced=0.3)
    assert (lines.chi.value, found_line(sheet, "chi_LT").value) == (1.0, 1.0)


def test_very_slender_segments_stay_below_the_critical_moment():
    """6.57: chi up to 1/lambda2, which is less than the curve from lambda = 3 on."""
    sheet, _, lines = said(simple(10.0), Conditions("rolled", "centre", 1.0), unbraced=60.0)
    assert lines.slenderness.value > 3
    assert found_line(sheet, "chi_LT").value == pytest.approx(1 / lines.slenderness.value**2, rel=1e-12)


@pytest.mark.parametrize(
    ("name", "equation"), [("IPE 330", "(6.13)"), ("HE 200 A", "(6.13)"), ("HE 300 A", "(6.14)")]
)
def test_equation_of_the_class(name, equation):
    """6.2.5(2): S355, classes 1, 2 and 3."""
    sheet, steel = Sheet("B1"), profile(name, "S355")
    sheet.section("Section")
    given, partial = take_profile(sheet, steel), take_factors(sheet, steel)
    assert bending(sheet, given, partial, steel, 10.0, "moment").resistance.cite.endswith(equation)
