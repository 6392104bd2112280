"""Shear: lines against numbers worked out in lb and in, at the limits of each rule."""

import math

import pytest
from aci_samples import KIP, begin

from calcpack.clauses.aci318.choice import Strengths, Web
from calcpack.clauses.aci318.shear import (
    state_concrete,
    state_least_stirrups,
    state_section_limit,
    state_torsion,
    state_zone,
    take_stirrups,
)
from calcpack.clauses.aci318.strength import INCH, PSI, shear_of_concrete, stirrup_limits
from calcpack.clauses.bars import bar


def concrete_of(
    fc=4000, fy=60, with_least=True, d=20.0, steel=2.37, spacing=8.0, legs=2, system="SI", width=12
):
    sheet, materials, size = begin(fc, fy, width=width, system=system)
    depth = sheet.take("d", d * 25.4, "mm", "d", "test")
    area = sheet.take("A_s", steel * 25.4**2, "mm^2", "A_s", "test")
    stirrups = take_stirrups(sheet, bar("#3"), legs, spacing * INCH, "test", words="")
    found = state_concrete(sheet, materials, size, depth, area, stirrups, with_least=with_least)
    return sheet, materials, size, stirrups, found


def test_with_the_least_stirrups():
    *_, found = concrete_of()
    assert found.strength.value / KIP == pytest.approx(2 * math.sqrt(4000) * 12 * 20 / 1000)
    assert found.phi.value == 0.75


@pytest.mark.parametrize(("d", "steel"), [(20.0, 2.37), (8.0, 1.2), (40.0, 4.0)])
def test_with_less_than_the_least(d, steel):
    *_, found = concrete_of(with_least=False, d=d, steel=steel)
    effect = min(math.sqrt(2 / (1 + d / 10)), 1)
    ratio = steel / (12 * d)
    by_hand = 8 * effect * ratio ** (1 / 3) * math.sqrt(4000) * 12 * d / 1000
    assert found.strength.value / KIP == pytest.approx(by_hand)
    number = shear_of_concrete(4000 * PSI, 12 * INCH, d * INCH, ratio, with_least=False)
    assert number == pytest.approx(found.strength.value)


def test_no_more_than_five_roots():
    *_, found = concrete_of(with_least=False, d=8.0, steel=40.0)
    assert found.strength.value / KIP == pytest.approx(5 * math.sqrt(4000) * 12 * 8 / 1000)
    number = shear_of_concrete(4000 * PSI, 12 * INCH, 8 * INCH, 40 / 96, with_least=False)
    assert number == pytest.approx(found.strength.value)


@pytest.mark.parametrize(("fc", "root"), [(10_000, 100.0), (12_000, 100.0), (8100, 90.0)])
def test_the_root_is_at_most_100_psi(fc, root):
    *_, found = concrete_of(fc)
    assert found.strength.value / KIP == pytest.approx(2 * root * 12 * 20 / 1000)


@pytest.mark.parametrize(("fy", "fyt"), [(40, 40), (60, 60), (80, 60)])
def test_stirrups_by_their_yield_strength(fy, fyt):
    sheet, materials, size, stirrups, found = concrete_of(fy=fy)
    demand = sheet.take("V_u", 40 * KIP, "kN", "V_u", "test")
    design, checks = state_zone(sheet, materials, size, found, demand, stirrups, "here")
    carried = 0.22 * fyt * 20 / 8
    concrete = 2 * math.sqrt(4000) * 240 / 1000
    assert design.value / KIP == pytest.approx(0.75 * (concrete + carried))
    assert [name for name, line in checks] == ["shear, here", "stirrup spacing, here"]
    web = Web(12 * INCH, 20 * INCH, 0.01, Strengths(4000 * PSI, fy * 1000 * PSI, fyt * 1000 * PSI, 2e8))
    assert web.strength(0.22 * INCH**2, 8 * INCH) == pytest.approx(design.value)


@pytest.mark.parametrize(("share", "passes"), [(0.9999, True), (1.0001, False)])
def test_strength_is_what_the_concrete_and_the_stirrups_carry(share, passes):
    sheet, materials, size, stirrups, found = concrete_of()
    shear = 0.75 * (2 * math.sqrt(4000) * 240 / 1000 + 0.22 * 60 * 20 / 8)
    demand = sheet.take("V_u", share * shear * KIP, "kN", "V_u", "test")
    _, checks = state_zone(sheet, materials, size, found, demand, stirrups, "here")
    assert checks[0][1].passes is passes


def test_stirrups_carry_no_more_than_eight_roots():
    sheet, materials, size, stirrups, found = concrete_of(spacing=1.0, legs=6)
    demand = sheet.take("V_u", 40 * KIP, "kN", "V_u", "test")
    design, _ = state_zone(sheet, materials, size, found, demand, stirrups, "here")
    assert design.value / KIP == pytest.approx(0.75 * 10 * math.sqrt(4000) * 240 / 1000)


@pytest.mark.parametrize(
    ("roots", "spacing", "passes"),
    [(4.0, 10.0, True), (4.0, 10.01, False), (4.001, 5.0, True), (4.001, 5.01, False)],
)
def test_spacing_halves_above_four_roots(roots, spacing, passes):
    sheet, materials, size, stirrups, found = concrete_of(spacing=spacing)
    shear = 0.75 * (2 + roots) * math.sqrt(4000) * 240 / 1000
    demand = sheet.take("V_u", shear * KIP, "kN", "V_u", "test")
    _, checks = state_zone(sheet, materials, size, found, demand, stirrups, "here")
    assert checks[1][1].passes is passes
    along, across = stirrup_limits(
        4000 * PSI, 12 * INCH, 20 * INCH, roots * math.sqrt(4000) * 240 / 1000 * KIP
    )
    assert along / INCH == pytest.approx(10 if roots == 4 else 5)
    assert across / INCH == pytest.approx(20 if roots == 4 else 10)


@pytest.mark.parametrize(("roots", "most"), [(3, 24), (5, 12)])
def test_spacing_in_deep_beams(roots, most):
    along, across = stirrup_limits(
        4000 * PSI, 12 * INCH, 60 * INCH, roots * math.sqrt(4000) * 720 / 1000 * KIP
    )
    assert (along / INCH, across / INCH) == (pytest.approx(most), pytest.approx(most))
    sheet, materials, size, stirrups, found = concrete_of(d=60.0, spacing=most + 0.01)
    demand = sheet.take("V_u", 0.75 * (2 + roots) * math.sqrt(4000) * 720 / 1000 * KIP, "kN", "V", "test")
    _, checks = state_zone(sheet, materials, size, found, demand, stirrups, "here")
    assert not checks[1][1].passes
    assert checks[1][1].check("x")["capacity"] == pytest.approx(most * 25.4)


@pytest.mark.parametrize(
    ("width", "roots", "passes"), [(23.37, 3, True), (23.38, 3, False), (13.38, 5, False), (13.37, 5, True)]
)
def test_legs_across_the_web(width, roots, passes):
    """Between two legs: web less twice the cover and a stirrup, at most d (20 in) or half of it."""
    sheet, _, size, stirrups, found = concrete_of(width=width)
    shear = 0.75 * (2 + roots) * math.sqrt(4000) * width * 20 / 1000
    demand = sheet.take("V_u", shear * KIP, "kN", "V_u", "test")
    checks = dict(state_section_limit(sheet, size, found, demand, stirrups))
    assert checks["stirrup legs across"].passes is passes


@pytest.mark.parametrize(("roots", "most"), [(4.0, 20), (4.001, 10)])
def test_three_legs_stand_half_as_far_apart(roots, most):
    sheet, _, size, stirrups, found = concrete_of(width=30, legs=3)
    shear = 0.75 * (2 + roots) * math.sqrt(4000) * 30 * 20 / 1000
    demand = sheet.take("V_u", shear * KIP, "kN", "V_u", "test")
    check = dict(state_section_limit(sheet, size, found, demand, stirrups))["stirrup legs across"].check("x")
    assert check["demand"] / 25.4 == pytest.approx((30 - 3.375) / 2)
    assert check["capacity"] / 25.4 == pytest.approx(most)


@pytest.mark.parametrize(("share", "passes"), [(0.9999, True), (1.0001, False)])
def test_the_web_is_too_small_beyond_ten_roots(share, passes):
    sheet, _, size, stirrups, found = concrete_of()
    demand = sheet.take("V_u", share * 0.75 * 10 * math.sqrt(4000) * 240 / 1000 * KIP, "kN", "V_u", "test")
    assert dict(state_section_limit(sheet, size, found, demand, stirrups))["size of the web"].passes is passes


@pytest.mark.parametrize(("fc", "stress"), [(4000, 50.0), (6400, 60.0)])
def test_the_least_stirrups(fc, stress):
    spacing = 0.22 * 60000 / (stress * 12)
    for factor, passes in ((0.9999, True), (1.0001, False)):
        sheet, materials, size, stirrups, found = concrete_of(fc, spacing=spacing * factor)
        demand = sheet.take("V_u", 100.0, "kN", "V_u", "test")
        checks = state_least_stirrups(sheet, materials, size, found, demand, stirrups)
        assert dict(checks)["least stirrups"].passes is passes
        web = Web(12 * INCH, 20 * INCH, 0.01, Strengths(fc * PSI, 6e4 * PSI, 6e4 * PSI, 2e8))
        assert web.enough(0.22 * INCH**2, spacing * factor * INCH) is passes


def test_stirrups_are_asked_for_above_phi_root_only():
    free = 0.75 * math.sqrt(4000) * 240 / 1000
    for factor, count in ((0.9999, 0), (1.0001, 1)):
        sheet, materials, size, stirrups, found = concrete_of()
        demand = sheet.take("V_u", free * factor * KIP, "kN", "V_u", "test")
        assert len(state_least_stirrups(sheet, materials, size, found, demand, stirrups)) == count


def test_threshold_torsion():
    sheet, materials, size, _, found = concrete_of()
    ((_, line),) = state_torsion(sheet, materials, size, found.phi)
    by_hand = 0.75 * math.sqrt(4000) * (12 * 20) ** 2 / (2 * (12 + 20)) / 12000  # [kip ft]
    assert line.check("x")["capacity"] / (12 * KIP * INCH) == pytest.approx(by_hand)
    assert line.passes
    assert line.check("x")["demand"] == 0


def test_si_and_us_sheets_agree():
    ratios = []
    for system in ("SI", "US"):
        sheet, materials, size, stirrups, found = concrete_of(system=system, with_least=False)
        demand = sheet.take("V_u", 100.0, "kN", "V_u", "test")
        checks = [
            *state_zone(sheet, materials, size, found, demand, stirrups, "here")[1],
            *state_section_limit(sheet, size, found, demand, stirrups),
            *state_least_stirrups(sheet, materials, size, found, demand, stirrups),
        ]
        ratios.append([line.check(name)["ratio"] for name, line in checks])
    assert ratios[0] == pytest.approx(ratios[1], rel=1e-9)


def test_spacing_chosen_is_the_widest_that_holds():
    web = Web(12 * INCH, 20 * INCH, 0.01, Strengths(4000 * PSI, 6e4 * PSI, 6e4 * PSI, 2e8))
    area = 0.22 * INCH**2
    for shear in (30, 45, 60, 80):
        spacing = web.widest(shear * KIP, area)
        assert web.strength(area, spacing) >= shear * KIP * (1 - 1e-9)
        along, _ = stirrup_limits(4000 * PSI, 12 * INCH, 20 * INCH, shear * KIP / 0.75 - web.concrete())
        assert spacing == pytest.approx(along) or web.strength(area, spacing * 1.001) < shear * KIP
