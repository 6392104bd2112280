"""The lines of a sheet against the figures: every branch, both methods, both unit systems."""

from __future__ import annotations

import pytest

from calcpack.clauses.aisc360 import lines, shape_lines, strength, web_lines
from calcpack.clauses.aisc360.strength import Steel
from calcpack.clauses.steel import i_section
from calcpack.job.library import rolled_sections
from calcpack.sheet import Sheet

EXACT = 1e-9
SHAPES = ("W18X50", "W14X30", "W12X65", "W16X26", "IPE300")


def begun(name, fy=345e3, system="SI"):
    shape, steel = i_section(rolled_sections()[name.casefold()]), Steel(fy, 200e6)
    sheet = Sheet("B1", system)
    sheet.section("Section")
    steels = shape_lines.state_steel(sheet, steel, "steel", "job")
    shapes = shape_lines.state_shape(sheet, shape, name, "job")
    return sheet, shape, steel, steels, shapes


@pytest.mark.parametrize("name", SHAPES)
@pytest.mark.parametrize("length", [0.5, 2.5, 12.0])
@pytest.mark.parametrize("fy", [250e3, 345e3, 690e3, 1.5e6])
def test_bending(name, length, fy):
    sheet, shape, steel, steels, shapes = begun(name, fy)
    ratios = strength.slenderness(shape, steel)
    if not ratios.compact_web:
        ratios = None
    slender = shape_lines.state_slenderness(
        sheet, ratios or strength.slenderness(shape, steel), steels, shapes
    )
    assert slender.web_compact.passes == (ratios is not None)
    assert [line for line in sheet.failed if line is not slender.web_compact] == []
    if ratios is None:
        return
    basis = lines.state_bending_basis(sheet, ratios, "LRFD", steels, shapes, slender)
    limits = strength.limiting_lengths(shape, steel)
    assert (basis.short.value, basis.long.value) == pytest.approx(limits, rel=EXACT)
    unbraced = sheet.take("L_b", length, "m", "length", "job")
    factor = sheet.take("C_b", 1.2, "1", "factor", "job")
    wanted = strength.bending_strength(shape, steel, length, 1.2)
    found = lines.state_bending(sheet, wanted.zone, basis, steels, shapes, unbraced, factor)
    assert found.value == pytest.approx(wanted.nominal, rel=EXACT)


def test_every_zone_and_flange_is_met():
    met = set()
    for name in SHAPES:
        shape = i_section(rolled_sections()[name.casefold()])
        for fy in (250e3, 345e3, 690e3, 1.5e6):
            ratios = strength.slenderness(shape, Steel(fy, 200e6))
            if ratios.compact_web:
                for length in (0.5, 2.5, 12.0):
                    zone = strength.bending_strength(shape, Steel(fy, 200e6), length).zone
                    met.add((zone, shape_lines.class_of(ratios)))
    assert {zone for zone, _ in met} == {"yielding", "inelastic", "elastic"}
    assert {flange for _, flange in met} >= {"compact", "noncompact"}


@pytest.mark.parametrize("web", [25.0, 60.0, 150.0])
def test_slender_flange(web):
    """k_c at its upper bound, between the bounds and at the lower one."""
    sheet, shape, steel, steels, _ = begun("W12X65", 100e3)
    shape = shape._replace(flange=0.003)
    shape = shape._replace(web=shape.flat_web / web)
    shapes = shape_lines.state_shape(sheet, shape, "thin", "job")
    ratios = strength.slenderness(shape, steel)
    assert ratios.slender_flange
    slender = shape_lines.state_slenderness(sheet, ratios, steels, shapes)
    basis = lines.state_bending_basis(sheet, ratios, "ASD", steels, shapes, slender, inelastic=False)
    assert basis.flange.value == pytest.approx(strength.bending_strength(shape, steel, 0.0).flange, rel=EXACT)
    found = lines.state_bending(sheet, "yielding", basis, steels, shapes, None, None)
    assert found.value == pytest.approx(strength.bending_strength(shape, steel, 0.0).nominal, rel=EXACT)


def test_buckling_without_a_length_is_a_mistake():
    sheet, shape, steel, steels, shapes = begun("W18X50")
    ratios = strength.slenderness(shape, steel)
    slender = shape_lines.state_slenderness(sheet, ratios, steels, shapes)
    basis = lines.state_bending_basis(sheet, ratios, "LRFD", steels, shapes, slender)
    with pytest.raises(ValueError, match="needs an unbraced length"):
        lines.state_bending(sheet, "elastic", basis, steels, shapes, None, None)


@pytest.mark.parametrize("name", SHAPES)
@pytest.mark.parametrize("fy", [250e3, 345e3, 1.5e6])
@pytest.mark.parametrize("method", ["LRFD", "ASD"])
def test_shear(name, fy, method):
    sheet, shape, steel, steels, shapes = begun(name, fy)
    slender = shape_lines.state_slenderness(sheet, strength.slenderness(shape, steel), steels, shapes)
    wanted = strength.shear_strength(shape, steel)
    found = lines.state_shear(sheet, wanted, method, steels, shapes, slender.web)
    assert found.nominal.value == pytest.approx(wanted.nominal, rel=EXACT)
    assert not [line for line in sheet.failed if "G2.1" in line.cite]
    assert found.factor.value == (wanted.factor.phi if method == "LRFD" else wanted.factor.omega)
    limit = sheet.require(
        sheet.take("V_r", 100.0, "kN", "demand", "job")
        <= shape_lines.available(found.factor, found.nominal, method),
        "shear",
    )
    assert limit.sides[1] == pytest.approx(wanted.factor.available(wanted.nominal, method), rel=EXACT)


def test_shear_beyond_every_limit_is_met():
    shape = i_section(rolled_sections()["w16x26"])
    assert strength.shear_strength(shape, Steel(1.5e6, 200e6)).coefficient < 1
    assert not strength.shear_strength(shape, Steel(345e3, 200e6)).stocky
    assert strength.shear_strength(shape, Steel(250e3, 200e6)).stocky


@pytest.mark.parametrize("name", SHAPES)
@pytest.mark.parametrize("from_end", [0.0, 0.17, 0.3, 3.0])
@pytest.mark.parametrize("bearing", [0.02, 0.1])
def test_web(name, from_end, bearing):
    sheet, shape, steel, steels, shapes = begun(name)
    length = sheet.take("l_b", bearing * 1000, "mm", "bearing", "job")
    found = web_lines.state_web_yielding(sheet, shape, from_end, steels, shapes, length)
    assert found.value == pytest.approx(strength.web_yielding(shape, steel, bearing, from_end), rel=EXACT)
    found = web_lines.state_web_crippling(sheet, shape, bearing, from_end, steels, shapes, length)
    assert found.value == pytest.approx(strength.web_crippling(shape, steel, bearing, from_end), rel=EXACT)


def test_web_beside_the_limits_of_its_equations():
    """Bearing 0.201 of the depth, the force 0.497 of it from the end: no limit may lie a hundredth off."""
    sheet, shape, steel, steels, shapes = begun("W18X50")
    bearing, from_end = 0.201 * shape.depth, 0.497 * shape.depth
    length = sheet.take("l_b", bearing * 1000, "mm", "bearing", "job")
    found = web_lines.state_web_crippling(sheet, shape, bearing, from_end, steels, shapes, length)
    assert found.cite == "AISC 360-22 (J10-5b)"
    assert found.value == pytest.approx(strength.web_crippling(shape, steel, bearing, from_end), rel=EXACT)


def test_diagram_factor():
    sheet, *_ = begun("W18X50")
    values = {"M_r": 6.0, "M_A": 2.0, "M_B": 5.0, "M_C": 8.0}
    four = [sheet.take(name, value, "kN*m", name, "analysis") for name, value in values.items()]
    assert lines.state_diagram_factor(sheet, lines.Moments(*four, True)).value == pytest.approx(75 / 65)
    smaller = sheet.take("M_r,2", 1.0, "kN*m", "small", "analysis")
    assert lines.state_diagram_factor(sheet, lines.Moments(smaller, *four[1:], True)).value == 1.0


def test_si_and_us_agree():
    found = []
    for system in ("SI", "US"):
        sheet, shape, steel, steels, shapes = begun("W18X50", 344738.0, system)
        ratios = strength.slenderness(shape, steel)
        slender = shape_lines.state_slenderness(sheet, ratios, steels, shapes)
        basis = lines.state_bending_basis(sheet, ratios, "LRFD", steels, shapes, slender)
        unbraced = sheet.take("L_b", 6.0, "m", "length", "job")
        factor = sheet.take("C_b", 1.14, "1", "factor", "job")
        nominal = lines.state_bending(sheet, "elastic", basis, steels, shapes, unbraced, factor)
        demand = sheet.take("M_r", 100.0, "kN*m", "demand", "job")
        line = sheet.require(demand <= shape_lines.available(basis.factor, nominal, "LRFD"), "bending")
        found.append(line.check("bending")["ratio"])
    assert found[0] == pytest.approx(found[1], rel=1e-9)
