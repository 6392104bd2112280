"""Deflection: cracked sections against first principles, lines against numbers in lb and in."""

import math

import numpy as np
import pytest
from aci_samples import KIP_FT, begin
from fibres import properties

from calcpack.clauses.aci318.deflection import (
    DURATIONS,
    LEAST_DEPTH,
    Bent,
    Limits,
    Sag,
    cracked_depth,
    least_depth,
    state_average,
    state_deflection,
    state_effective_inertia,
    state_gross,
    state_least_depth,
)
from calcpack.clauses.aci318.strength import effective_inertia
from calcpack.sheet import number


def section(flange=None, fc=4000, web=12, depth=20, d=17.5, steel=2.37, system="SI"):
    sheet, materials, size = begin(fc, width=web, depth=depth, flange=flange, system=system)
    line = sheet.take("d", d * 25.4, "mm", "d", "test")
    area = sheet.take("A_s", steel * 25.4**2, "mm^2", "A_s", "test")
    return sheet, materials, size, state_gross(sheet, materials, size), area, line


@pytest.mark.parametrize("flange", [None, (60, 6)])
def test_gross_section(flange):
    *_, gross, _, _ = section(flange)
    _, centre, inertia = properties(lambda y: np.where(y < flange[1], flange[0], 12) if flange else 12, 20)
    assert gross.top.value / 25.4 == pytest.approx(centre, rel=1e-6)
    assert gross.inertia.value / 25.4**4 == pytest.approx(inertia, rel=1e-6)
    assert gross.rupture.value / 6.894757293e-3 == pytest.approx(7.5 * math.sqrt(4000))
    assert gross.ratio.value == pytest.approx(29000 / (57 * math.sqrt(4000)))


CRACKED = [
    ("rectangle", None, False, 2.37),
    ("axis in the flange", (60, 6), False, 2.37),
    ("axis in the web", (24, 3), False, 5.0),
    ("flange in tension", (60, 6), True, 2.37),
]


@pytest.mark.parametrize(("name", "flange", "top", "steel"), CRACKED, ids=lambda value: str(value)[:20])
def test_cracked_and_effective_section(name, flange, top, steel):
    sheet, materials, size, gross, area, depth = section(flange, steel=steel)
    bent = Bent(120 * KIP_FT, "moment", area, depth, top)
    found = state_effective_inertia(sheet, materials, size, gross, bent)
    lines = {line.symbol: line for line in sheet.lines.values()}
    n = 29000 / (57 * math.sqrt(4000))
    wide = flange if flange and not top else (12, 0)

    def width_at(y):
        return np.where(y < wide[1], wide[0], 12)

    c = lines["c_cr"].value / 25.4
    area_c, centre, own = properties(width_at, c)
    assert area_c * (c - centre) == pytest.approx(n * steel * (17.5 - c), rel=1e-4)  # first moments balance
    inertia = own + area_c * (c - centre) ** 2 + n * steel * (17.5 - c) ** 2
    assert lines["I_cr"].value / 25.4**4 == pytest.approx(inertia, rel=1e-4)
    assert c == pytest.approx(cracked_depth(wide[0], 12, wide[1], n * steel, 17.5))
    edge = gross.top.value if top else 20 * 25.4 - gross.top.value
    cracking = gross.rupture.value * gross.inertia.value / edge / 1e6
    assert lines["M_cr"].value == pytest.approx(cracking)
    expected = effective_inertia(120 * KIP_FT, cracking, gross.inertia.value, lines["I_cr"].value)
    assert found.value == pytest.approx(expected)
    assert lines["I_cr"].value < found.value < gross.inertia.value


@pytest.mark.parametrize(("share", "whole"), [(0.9999, True), (1.0001, False)])
def test_two_thirds_of_the_cracking_moment(share, whole):
    sheet, materials, size, gross, area, depth = section()
    cracking = gross.rupture.value * gross.inertia.value / (10 * 25.4) / 1e6
    bent = Bent(share * 2 / 3 * cracking, "moment", area, depth, False)
    found = state_effective_inertia(sheet, materials, size, gross, bent)
    assert (found.value == gross.inertia.value) is whole
    # the formula takes off from the gross section without a jump
    assert found.value == pytest.approx(gross.inertia.value, rel=1e-3)


def test_far_beyond_cracking_the_cracked_section_remains():
    assert effective_inertia(1e6, 1.0, 100.0, 40.0) == pytest.approx(40.0)
    assert effective_inertia(4 / 3, 1.0, 3.0, 1.0) == pytest.approx(1.2)  # 1 / (1 - 1/4 · 2/3)


def test_just_beyond_two_thirds_of_the_cracking_moment():
    """Table 24.2.3.5 at 0.67 M_cr, I_cr = 0.4 I_g: (0.66667/0.67)² = 0.990075, 40 / (1 - 0.594045) = 98.533."""
    assert effective_inertia(0.67, 1.0, 100.0, 40.0) == pytest.approx(98.533, rel=1e-5)
    assert effective_inertia(0.665, 1.0, 100.0, 40.0) == 100.0


def test_average_of_critical_sections():
    sheet, *_ = section()
    lines = [sheet.take(f"I_{n}", value, "mm^4", "", "test") for n, value in enumerate((100.0, 60.0, 40.0))]
    assert state_average(sheet, lines[0], []) is lines[0]
    assert state_average(sheet, lines[0], lines[1:2]).value == pytest.approx(80)
    assert state_average(sheet, lines[0], lines[1:]).value == pytest.approx(75)


@pytest.mark.parametrize("held", LEAST_DEPTH)
@pytest.mark.parametrize("fy", [40, 60, 80])
def test_least_depth(held, fy):
    part = (16, 18.5, 21, 8)[list(LEAST_DEPTH).index(held)]  # Table 9.3.1.1, row by row
    sheet, materials, size = begin(fy=fy)
    span = sheet.take("ell", 20 * 0.3048, "m", "", "test")
    found = state_least_depth(sheet, materials, size, span, held)
    assert found.value / 25.4 == pytest.approx(240 / part * (0.4 + fy / 100))
    assert least_depth(240.0, held, fy * 1000) == pytest.approx(found.value / 25.4)
    said = str(sheet.blocks[-1]["runs"])
    assert ("no less than this" in said) is (240 / part * (0.4 + fy / 100) <= 20)


@pytest.mark.parametrize(("duration", "xi"), [("3 months", 1.0), ("6 months", 1.2), ("12 months", 1.4),
                                              ("5 years", 2.0)])  # fmt: skip
@pytest.mark.parametrize("pressed", [0.0, 0.005])
def test_immediate_and_long_term(duration, xi, pressed):
    assert set(DURATIONS) == {"3 months", "6 months", "12 months", "5 years"}
    sheet, materials, *_ = section()
    inertia = sheet.take("I_e", 1e9, "mm^4", "", "test")
    span = sheet.take("ell", 6.0, "m", "", "test")
    sag, limits = Sag(100.0, 150.0, "test"), Limits(360, 240, span.as_expression())
    ratio = number(pressed) if pressed else None
    checks = dict(state_deflection(sheet, materials, inertia, sag, limits, duration, ratio, "span 1").checks)
    rigidity = materials.ec.value * 1e3 * 1e9 / 1e12  # [kNm2]
    live, sustained = 100 / rigidity * 1000, 150 / rigidity * 1000
    after = xi / (1 + 50 * pressed) * sustained + live
    one, other = checks["deflection, live"].check("x"), checks["deflection, long-term"].check("x")
    assert (one["demand"], one["capacity"]) == (pytest.approx(live), pytest.approx(6000 / 360))
    assert (other["demand"], other["capacity"]) == (pytest.approx(after), pytest.approx(6000 / 240))


def test_si_and_us_sheets_agree():
    found = []
    for system in ("SI", "US"):
        sheet, materials, size, gross, area, depth = section((60, 6), system=system)
        bent = Bent(120 * KIP_FT, "moment", area, depth, False)
        found.append(state_effective_inertia(sheet, materials, size, gross, bent).value)
    assert found[0] == pytest.approx(found[1], rel=1e-9)
