"""Lines of EN 1992 written one at a time: effective flange, limits of deflection, bars required."""

import pytest
from cases_en1992 import NATIONAL, beam, concrete, given
from written_en1992 import start

from calcpack.clauses.bars import bar
from calcpack.clauses.en1992.anchorage import anchorage
from calcpack.clauses.en1992.bending import steel_for
from calcpack.clauses.en1992.design import design_beam
from calcpack.clauses.en1992.flange import effective_side
from calcpack.clauses.en1992.samples import C30
from calcpack.clauses.en1992.write_anchorage import write_bond
from calcpack.clauses.en1992.write_bending import write_required
from calcpack.clauses.en1992.write_deflection import limit_term
from calcpack.clauses.en1992.write_materials import millimetres, write_flange, write_strengths
from calcpack.sheet import Sheet


@pytest.fixture
def sheet():
    found = Sheet("B1")
    found.section("Section")
    return found


def span(sheet, value, word):
    return sheet.take(f"L_{word[-1]}", value, "m", "Span", "grid", word=word)


def test_effective_flange_of_a_simple_span(sheet):
    """5.3.2.1(3): l_0 = 6 m; 0.2 x 2.1 + 0.6 = 1.02 m on the one side, all of 0.4 m on the other."""
    web = sheet.take("b", 300, "mm", "Width of the web", "section")
    sides = (effective_side(2.1, 6.0), effective_side(0.4, 6.0))
    found = write_flange(sheet, "sag", "span 1", web, [(1.0, span(sheet, 6.0, "span 1"))], sides, "plan")
    assert found.value == pytest.approx(300 + 1020 + 400)


@pytest.mark.parametrize(("reach", "effective"), [(9.0, 850.0), (0.005, 5.0), (0.0, 0.0)])
def test_effective_flange_beside_wide_and_narrow_slabs(sheet, reach, effective):
    """l_0 = 0.85 x 5 = 4.25 m: not more than 0.2 l_0 = 850 mm, nor than there is."""
    web = sheet.take("b", 300, "mm", "Width of the web", "section")
    sides = (effective_side(reach, 4.25), effective_side(0.0, 4.25))
    found = write_flange(sheet, "sag", "span 1", web, [(0.85, span(sheet, 5.0, "span 1"))], sides, "plan")
    assert found.value == pytest.approx(300 + effective)
    assert next(each for each in sheet.lines.values() if each.symbol == "l_0,sag").value == pytest.approx(
        4.25
    )


def test_flange_over_a_support_takes_what_is_known(sheet):
    """0.15 (6 + 4) = 1.5 m: 0.2 x 2.1 + 0.15 is over 0.2 l_0 = 0.3 m on both sides; b_i written once."""
    web = sheet.take("b", 300, "mm", "Width of the web", "section")
    lengths = [(0.15, span(sheet, 6.0, "span 1")), (0.15, span(sheet, 4.0, "span 2"))]
    sides, known = (effective_side(2.1, 1.5), effective_side(2.1, 1.5)), {}
    for symbol in ("sag", "hog"):
        found = write_flange(sheet, symbol, "support", web, lengths, sides, "plan", known)
        assert found.value == pytest.approx(300 + 2 * 300)
    assert sorted(known) == ["l 2.1", "r 2.1"]
    assert [each.symbol for each in sheet.lines.values() if each.symbol[:4] in ("b_l,", "b_r,")] == [
        "b_l,sag",
        "b_r,sag",
    ]
    assert known["l 2.1"].value == 2100.0


def test_strengths_up_to_c50_and_beyond(sheet):
    """3.1.7(3), 5.5(4): 0.8, 1.0 and 0.448 at 50 MPa; by the formulas at 50.4."""
    low = write_strengths(sheet, concrete(50.0), NATIONAL, "material c")
    assert (low.lam.value, low.eta.value, low.limit.value) == (0.8, 1.0, pytest.approx(0.448))
    assert low.limit.cite.endswith("(5.10a)")
    sheet = Sheet("B2")
    sheet.section("Section")
    high = write_strengths(sheet, concrete(50.4), NATIONAL, "material c")
    strain = 2.6 + 35 * 0.396**4
    assert (high.lam.value, high.eta.value) == pytest.approx((0.8 - 0.4 / 400, 1 - 0.4 / 200))
    assert high.limit.value == pytest.approx(0.46 / (1.25 * (0.6 + 1.4 / strain)))
    assert high.limit.cite.endswith("(5.10b)")


def test_strengths_of_c30(sheet):
    """Table 3.1 in MPa; 30/1.5, 2.0/1.5, 500/1.15."""
    lines = write_strengths(sheet, C30, NATIONAL, "material c")
    found = [
        lines.fck,
        lines.fctm,
        lines.fctk,
        lines.ecm,
        lines.fyk,
        lines.es,
        lines.fcd,
        lines.fctd,
        lines.fyd,
    ]
    assert [each.value for each in found] == pytest.approx(
        [30, 2.9, 2.0, 33e3, 500, 200e3, 20, 2.0 / 1.5, 500 / 1.15]
    )
    assert lines.strain.value == 0.0035
    assert millimetres(0.0351) == 35.1
    assert millimetres(1 / 3) == pytest.approx(1000 / 3, abs=1e-8)


@pytest.mark.parametrize(("length", "overhang", "limit"), [(6.0, False, 24.0), (2.0, True, 16.0)])
def test_limit_of_a_deflection(sheet, length, overhang, limit):
    """7.4.1(4): span over 250; an overhang counts twice."""
    line = span(sheet, length, "span 1")
    found = sheet.hence("w_lim", limit_term(line, overhang, 250.0), "mm", "Limit", "7.4.1(4)", word="limit")
    assert found.value == pytest.approx(limit)


# Bond and anchorage --------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("size", "inset", "stress", "good", "bent", "fctk"),
    [("20 mm", 0.04, 300.0, True, False, 2000.0), ("20 mm", 0.04, 300.0, False, False, 2000.0),
     ("12 mm", 0.04, 300.0, True, False, 2000.0), ("12 mm", 0.04, 300.0, True, True, 2000.0),
     ("12 mm", 0.0362, 300.0, True, True, 2000.0), ("12 mm", 0.0359, 300.0, True, True, 2000.0),
     ("20 mm", 0.04, 1.0, True, False, 2000.0), ("8 mm", 0.04, 1.0, True, False, 2000.0),
     ("20 mm", 0.04, 300.0, True, False, 3090.0), ("20 mm", 0.04, 300.0, True, False, 3110.0),
     ("20 mm", 0.01, 300.0, True, False, 2000.0)],
)  # fmt: skip
def test_anchorage_length_on_the_sheet(size, inset, stress, good, bent, fctk):
    """8.4.2 to 8.4.4 at their bounds: alpha from 0.7 to 1, a bend from 3 phi on, 10 phi and 100 mm at least."""
    diameter = bar(size).diameter
    case = beam([6.0], 20.0, cover=inset - 0.008, strength=concrete(60.0, fctk_005=fctk),
                given=given(bottom=(2, size), top=(2, "12 mm"), stirrups=(2, "8 mm", 0.2)))  # fmt: skip
    sheet, strength, _, faces = start(case, design_beam(case))
    steel = sheet.take("sigma", stress, "MPa", "Stress", "trial", word="stress")
    expected = anchorage(diameter, stress * 1e3, inset, good, case.strength, bent=bent)
    found = write_bond(sheet, faces["sag"], strength, steel, expected, good=good, tag="x", bent=bent)
    lines = {each.symbol: each for each in sheet.lines.values()}
    assert lines["f_bd,x"].value == pytest.approx(expected.bond / 1e3, rel=1e-12)
    assert lines["alpha_x,a"].value == pytest.approx(expected.alpha, rel=1e-12)
    assert found.value == pytest.approx(expected.length * 1e3, rel=1e-12)
    assert ("not above that of C60/75" in lines["f_bd,x"].says) is (fctk > 3100)
    assert ("other than good" in lines["f_bd,x"].says) is not good


# Words and forms -----------------------------------------------------------------------------------------


def test_layers_are_said_with_the_depth():
    for bottom, words in (((6, "20 mm"), "layers of 4 and 2 bars"), ((4, "20 mm"), "bottom")):
        case = beam(
            [6.0], 20.0, cover=0.03, given=given(bottom=bottom, top=(2, "12 mm"), stirrups=(2, "10 mm", 0.2))
        )
        *_, faces = start(case, design_beam(case))
        assert faces["sag"].effective.says.endswith(words)


@pytest.mark.parametrize(("moment", "kind"), [(90.0, "hence"), (400.0, "take")])
def test_bars_required_in_closed_form_or_solved(moment, kind):
    """Up to the limit of x/d As = fcd b d/fyd (1 - root(1 - 2K)); beyond it by equilibrium of the section."""
    case = beam([6.0], 20.0, given=given(bottom=(4, "20 mm"), top=(2, "12 mm"), stirrups=(2, "10 mm", 0.2)))
    sheet, strength, _, faces = start(case, design_beam(case))
    demand = sheet.take("M", moment, "kN*m", "Moment", "trial", word="moment")
    required, _ = steel_for(moment, case.sagging, case.strength, faces["sag"].face.depth, 0.448, 0.04)
    found = write_required(sheet, faces["sag"], strength, demand, required)
    assert (found.kind, found.value) == (kind, pytest.approx(required * 1e6, rel=1e-9))
