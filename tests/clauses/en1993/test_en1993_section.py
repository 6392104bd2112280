"""The cross-section: limits exactly, resistances by hand, lines against numbers."""

import math
from dataclasses import replace

import pytest
from beams_en1993 import profile

from calcpack.clauses.en1993.lines_profile import classify, limits_of, take_factors, take_profile
from calcpack.clauses.en1993.lines_section import bending, bending_beside_shear, shear, shear_share
from calcpack.clauses.en1993.rules import LIMITS, OUTSTAND, WEB, Factors
from calcpack.clauses.en1993.section import part_class, profile_of, yield_strength
from calcpack.job.errors import CalcpackError
from calcpack.job.library import rolled_sections
from calcpack.job.model import Material
from calcpack.sheet import Sheet
from calcpack.verification.reckon import compare_row, rows

STEEL = Material(
    key="s", kind="steel", modulus=210e6, unit_weight=78.5, values={"fy": 355e3, "fy_thick": 335e3}
)


# EN 1993-1-1:2005, Table 5.2 (from memory): exactly at a limit the part is still in the class.
@pytest.mark.parametrize(
    ("limits", "bounds"), [(OUTSTAND, (9.0, 10.0, 14.0)), (WEB, (72.0, 83.0, 124.0))], ids=["flange", "web"]
)
@pytest.mark.parametrize("epsilon", [1.0, math.sqrt(235 / 355)])
def test_exactly_at_a_class_limit(limits, bounds, epsilon):
    for rank, bound in enumerate(bounds, start=1):
        assert part_class(bound * epsilon, epsilon, limits) == rank
        assert part_class(bound * epsilon * 1.0001, epsilon, limits) == rank + 1


# As printed in the section tables of the European mills: shared/verification/en1993.toml.
@pytest.mark.parametrize("row", rows("en1993", "section classes"), ids=lambda row: row.label)
def test_class_of_rolled_sections(row):
    assert all(each.holds for each in compare_row(row))
    assert profile(row.text("section"), row.text("grade")).section_class == int(row.text("class"))


def test_yield_strength_at_40_mm():
    assert yield_strength(STEEL, 0.040) == 355e3
    assert yield_strength(STEEL, 0.0401) == 335e3


def test_what_is_no_steel_section_is_refused_in_words():
    with pytest.raises(CalcpackError, match="needs a rolled section"):
        profile_of(None, STEEL)
    with pytest.raises(CalcpackError, match="needs a material"):
        profile_of(rolled_sections()["ipe300"], None)
    concrete = STEEL.model_copy(update={"kind": "concrete"})
    with pytest.raises(CalcpackError, match="gives no fy"):
        profile_of(rolled_sections()["ipe300"], concrete)
    bare = STEEL.model_copy(update={"values": {"fy": 235e3}})
    with pytest.raises(CalcpackError, match="fy_thick for a part 50 mm"):
        yield_strength(bare, 0.05)


def test_shear_modulus_from_poisson_where_it_is_not_given():
    assert profile_of(rolled_sections()["ipe300"], STEEL).shear_modulus == pytest.approx(210e6 / 2.6)


def test_class_3_takes_the_elastic_modulus():
    hea = profile("HE 300 A", "S355")
    # HE 300 A: Wel,y 1260 cm3, Wpl,y 1383 cm3 (EN 10365 tables, from memory)
    assert hea.bending == pytest.approx(1260e-6 * 355e3, rel=1e-3)
    assert profile("HE 300 A", "S235").bending == pytest.approx(1383e-6 * 235e3, rel=1e-3)


def test_shear_exactly_at_half_the_resistance_takes_nothing_away():
    ipe = profile("IPE 300")
    assert ipe.bending_with_shear(ipe.shear / 2) == ipe.bending
    assert ipe.bending_with_shear(0.5001 * ipe.shear) <= ipe.bending
    # at the full shear only what is not web is left: Mf = (Wpl - Aw^2/4tw) fy
    flanges = 628.4e-6 - (0.2786 * 0.0071) ** 2 / (4 * 0.0071)
    assert ipe.bending_with_shear(ipe.shear) == pytest.approx(flanges * 235e3, rel=1e-3)


def test_shear_takes_the_webs_part_of_an_elastic_modulus():
    hea = profile("HE 300 A", "S355")
    web = 0.0085 * 0.262**3 / (6 * 0.290)  # hand: tw hw^3 / 12 over h/2
    assert hea.bending_with_shear(hea.shear) == pytest.approx((1260e-6 - web) * 355e3, rel=1e-3)


def test_factors_of_the_job():
    plain, other = profile("IPE 300"), profile("IPE 300", factors=Factors(1.1, 1.2, 1.2))
    assert other.bending == pytest.approx(plain.bending / 1.1)
    assert plain.shear_area == pytest.approx(2568e-6, rel=2e-3)  # tables: Avz 25.68 cm2
    # with eta = 1.2 the lower bound 1.2 hw tw is 1.2 x 278.6 x 7.1 = 2374 mm2, still below
    assert other.shear_area == plain.shear_area
    # without fillets and on a slender web the lower bound takes over: 1.2 x 278.6 x 7.1 mm
    bare = plain.shape._replace(root_radius=0.0, area=2 * 0.150 * 0.0107 + 0.2786 * 0.0071)
    assert replace(other, shape=bare).shear_area == pytest.approx(1.2 * 0.2786 * 0.0071)
    assert replace(plain, shape=bare).shear_area == pytest.approx((0.2786 + 0.0107) * 0.0071)


def test_web_slenderness_limit_counts_eta():
    ipe = profile("IPE 600", "S460")
    assert not ipe.web_may_buckle  # 562/12 = 46.8 against 72 x 0.715 = 51.5
    assert profile("IPE 600", "S460", Factors(eta=1.2)).web_may_buckle  # against 42.9


@pytest.mark.parametrize("name", ["IPE 330", "HE 200 A", "HE 300 A", "HE 200 B", "IPE 600"])
@pytest.mark.parametrize("grade", ["S235", "S355"])
def test_lines_say_what_the_numbers_say(name, grade):
    found = profile(name, grade, Factors(1.05, 1.1, 1.1))
    sheet = Sheet("B1")
    sheet.section("Section")
    given, partial = take_profile(sheet, found), take_factors(sheet, found)
    classes = classify(sheet, given, found)
    assert all(line.passes for _, line in limits_of(sheet, given))
    bent = bending(sheet, given, partial, found, 100.0, "moment")
    sheared = shear(sheet, given, partial, classes.epsilon, 0.8 * found.shear, "shear")
    both = bending_beside_shear(
        sheet, given, partial, found, sheared.resistance, "1 m", 90.0, 0.8 * found.shear
    )
    assert bent.resistance.value == pytest.approx(found.bending, rel=1e-12)
    assert sheared.resistance.value == pytest.approx(found.shear, rel=1e-12)
    assert sheared.area.value == pytest.approx(found.shear_area * 1e6, rel=1e-12)
    assert sheared.web.passes is not found.web_may_buckle
    assert both.resistance.value == pytest.approx(found.bending_with_shear(0.8 * found.shear), rel=1e-12)
    assert classes.check.passes == (found.section_class <= 3)


def test_class_4_is_said_in_words_and_fails():
    wide = profile("HE 300 A", "S460")
    thin = replace(wide, shape=wide.shape._replace(flange=0.007))
    assert thin.section_class == 4
    sheet = Sheet("B1")
    sheet.section("Section")
    found = classify(sheet, take_profile(sheet, thin), thin)
    assert found.check.passes is False
    assert any("buckles locally" in str(block.get("caption", "")) for block in sheet.blocks)


def test_limits_of_validity_are_one_table():
    assert LIMITS["thickness"].holds(80.0)
    assert not LIMITS["thickness"].holds(80.1)
    assert LIMITS["yield"].holds(460.0)
    assert not LIMITS["class"].holds(4)
    assert {key: (each.least, each.largest) for key, each in LIMITS.items()} == {
        "thickness": (0.0, 80.0),
        "yield": (200.0, 460.0),
        "class": (1, 3),
    }


def test_factor_for_the_strength():
    assert profile("IPE 300").epsilon == 1.0
    assert profile("IPE 300", "S355").epsilon == pytest.approx(0.8136, abs=5e-5)  # Table 5.2 prints 0.81


def test_web_exactly_at_the_limit_of_shear_buckling():
    ipe = profile("IPE 300")
    for slenderness, buckles in ((72.0, False), (72.1, True)):
        web = replace(ipe, shape=ipe.shape._replace(web=ipe.web_depth / slenderness))
        assert web.web_may_buckle is buckles
        sheet = Sheet("B1")
        sheet.section("Section")
        given, partial = take_profile(sheet, web), take_factors(sheet, web)
        lines = shear(sheet, given, partial, classify(sheet, given, web).epsilon, 10.0, "shear")
        assert lines.web.passes is not buckles


def test_limits_on_the_sheet_exactly_at_the_bounds():
    ipe = profile("IPE 300")
    for thickness, strength, passes in ((0.080, 460e3, [True, True]), (0.0801, 460.5e3, [False, False])):
        thick = replace(ipe, shape=ipe.shape._replace(flange=thickness), strength=strength)
        sheet = Sheet("B1")
        sheet.section("Section")
        assert [line.passes for _, line in limits_of(sheet, take_profile(sheet, thick))] == passes


@pytest.mark.parametrize("part", ["flange", "web"])
def test_class_3_on_the_sheet_exactly_at_the_limit(part):
    ipe = profile("IPE 300")
    for factor, passes in ((1.0 - 1e-9, True), (1.001, False)):
        if part == "flange":
            shape = ipe.shape._replace(flange=ipe.shape.flange_outstand / (14 * factor))
            shape = shape._replace(depth=2 * (shape.flange + shape.root_radius) + ipe.shape.flat_web)
        else:
            shape = ipe.shape._replace(web=ipe.shape.flat_web / (124 * factor))
        changed = replace(ipe, shape=shape)
        sheet = Sheet("B1")
        sheet.section("Section")
        found = classify(sheet, take_profile(sheet, changed), changed)
        assert found.check.passes is passes
        assert (changed.section_class == 4) is not passes


def test_shear_just_below_half_takes_nothing_away():
    ipe = profile("IPE 300")
    assert ipe.bending_with_shear(0.498 * ipe.shear) == ipe.bending


@pytest.mark.parametrize(("share", "words"), [(0.499, "not above 0.5"), (0.501, ": above 0.5")])
def test_words_on_the_share_of_the_shear(share, words):
    ipe = profile("IPE 300")
    sheet = Sheet("B1")
    sheet.section("Section")
    given, partial = take_profile(sheet, ipe), take_factors(sheet, ipe)
    epsilon = classify(sheet, given, ipe).epsilon
    found = shear(sheet, given, partial, epsilon, share * ipe.shear, "shear")
    assert words in shear_share(sheet, found).says


@pytest.mark.parametrize(("grade", "equation"), [("S235", "(6.13)"), ("S355", "(6.14)")])
def test_equation_of_the_class(grade, equation):
    hea = profile("HE 300 A", grade)
    sheet = Sheet("B1")
    sheet.section("Section")
    given, partial = take_profile(sheet, hea), take_factors(sheet, hea)
    assert bending(sheet, given, partial, hea, 10.0, "moment").resistance.cite.endswith(equation)
