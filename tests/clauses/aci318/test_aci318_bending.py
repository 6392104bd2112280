"""Bending: the strips of a second road, the closed forms of the sheet, the solver; and what must hold."""

import numpy as np
import pytest
from aci_samples import ES, KIP_FT, KSI, PSI, begin, group
from fibres import strength

from calcpack.clauses.aci318.flexure import Demand, state_bending
from calcpack.clauses.aci318.strength import INCH, Block, Steel, bending

# name, f'c [psi], fy [ksi], web, depth, flange (width, depth), tension bars, compression bars [in]
CASES = [
    ("one layer", 4000, 60, 12, 20, None, (3, "#8"), None),
    ("two layers", 5000, 60, 14, 28, None, (8, "#9"), None),
    ("high strength", 9000, 80, 14, 26, None, (4, "#9"), None),
    ("grade 100", 6000, 100, 14, 26, None, (3, "#8"), None),
    ("block in the flange", 4000, 60, 12, 24, (60, 5), (4, "#9"), None),
    ("block below the flange", 3000, 60, 10, 30, (28, 6), (6, "#10"), None),
    ("compression bars elastic", 4000, 60, 12, 24, None, (5, "#9"), (2, "#8")),
    ("compression bars yield", 4000, 60, 14, 32, None, (7, "#10"), (2, "#9")),
    ("compression bars in two layers", 4000, 60, 12, 30, None, (8, "#10"), (5, "#8")),
    ("flange and compression bars", 3000, 60, 10, 30, (20, 4), (6, "#10"), (2, "#9")),
    ("over-reinforced", 3000, 80, 18, 18, None, (5, "#11"), None),
    ("over-reinforced, compression bars", 3000, 100, 18, 18, None, (5, "#11"), (2, "#8")),
    ("metric", 4000, 60, 12, 20, None, (3, "25 mm"), None),
]


def settled(case):
    _, fc, fy, web, depth, flange, tension, pressed = case
    bars = group(*tension, web, depth)
    other = group(*pressed, web, depth) if pressed else None
    block = Block((flange[0] if flange else web) * INCH, web * INCH, flange[1] * INCH if flange else 0.0)
    steel = Steel(bars.area, bars.depth, bars.outermost)
    if other:
        steel = steel._replace(area_c=other.area, depth_c=other.centroid)
    return bars, other, block, bending(block, steel, fc * PSI, fy * KSI, ES)


def written(case, system="SI", share=0.8):
    _, fc, fy, web, depth, flange, _, _ = case
    bars, other, _, state = settled(case)
    sheet, materials, size = begin(fc, fy, web, depth, flange, system)
    demand = Demand(share * state.design, "Moment", "test", "bottom")
    return sheet, state_bending(sheet, materials, size, bars, other, state, demand), state


@pytest.mark.parametrize("case", CASES, ids=lambda case: case[0])
def test_the_sheet_and_the_solver_are_two_roads_to_one_strength(case):
    sheet, lines, state = written(case)
    by = {line.symbol: line for line in sheet.lines.values()}
    assert by["c"].value == pytest.approx(state.c * 1000, rel=1e-9)
    assert by["a"].value == pytest.approx(state.a * 1000, rel=1e-9)
    assert by["epsilon_t"].value == pytest.approx(state.strain, rel=1e-8)
    assert by["phi"].value == pytest.approx(state.phi, rel=1e-9)
    assert lines.nominal.value == pytest.approx(state.nominal, rel=1e-9)
    if state.stress_c:
        assert by["f'_s"].value == pytest.approx(state.stress_c / 1000, rel=1e-9)


@pytest.mark.parametrize("case", CASES, ids=lambda case: case[0])
def test_strips_give_the_same_strength(case):
    _, fc, fy, web, depth, flange, _, _ = case
    bars, other, _, state = settled(case)

    def width_at(y):
        return np.where(y < flange[1], flange[0], web) if flange else web

    tension = [
        (number * bars.bar.area / INCH**2, depth - height / INCH)
        for number, height in zip(bars.layers, bars.heights, strict=True)
    ]
    pressed = [(other.area / INCH**2, other.centroid / INCH)] if other else []
    beta = {3000: 0.85, 4000: 0.85, 5000: 0.80, 6000: 0.75, 9000: 0.65}[fc]  # Table 22.2.2.4.3
    moment, c = strength(width_at, depth, [*tension, *pressed], fc / 1000, fy, 29000, beta)
    assert moment / 12 == pytest.approx(state.nominal / KIP_FT, rel=5e-4)
    assert c == pytest.approx(state.c / INCH, rel=1e-3)


@pytest.mark.parametrize(("share", "passes"), [(0.9999, True), (1.0001, False)])
def test_strength_is_phi_times_nominal(share, passes):
    _, lines, _ = written(CASES[0], share=share)
    assert dict(lines.checks)["bending, sagging"].passes is passes


def test_the_strips_would_see_a_wrong_block():
    case = CASES[0]
    *_, state = settled(case)
    wrong, _ = strength(lambda y: 12, 20, [(2.37, 17.625)], 4.0 * 0.9, 60, 29000, 0.85)
    assert wrong / 12 != pytest.approx(state.nominal / KIP_FT, rel=2e-3)


@pytest.mark.parametrize("case", CASES, ids=lambda case: case[0])
def test_si_and_us_sheets_agree(case):
    checks = [written(case, system)[1].checks for system in ("SI", "US")]
    for (name, one), (_, other) in zip(*checks, strict=True):
        assert one.check(name)["ratio"] == pytest.approx(other.check(name)["ratio"], rel=1e-9)


def test_regimes_are_as_they_are_called():
    states = {case[0]: settled(case)[3] for case in CASES}
    assert states["block in the flange"].a < 5 * INCH
    assert states["block below the flange"].a > 6 * INCH
    assert 0 < states["compression bars elastic"].stress_c < 60 * KSI * 0.999
    assert states["compression bars yield"].stress_c == 60 * KSI
    assert states["over-reinforced"].stress < 80 * KSI * 0.999
    assert states["over-reinforced"].phi == pytest.approx(0.65)


def least_of(count, size, **keys):
    """The checks of a lightly reinforced section, for a small moment."""
    case = ("", 4000, 60, 12, 20, None, (count, size), None)
    sheet, lines, _ = written(case, share=keys.get("share", 0.8))
    return dict(lines.checks), sheet


def test_steel_below_the_least_fails_unless_a_third_more_than_needed():
    checks, _ = least_of(2, "#4", share=0.9)
    assert not checks["least steel, sagging"].passes
    assert checks["least steel, sagging"].cite == "ACI 318-19 9.6.1.3"
    checks, _ = least_of(2, "#4", share=0.5)
    assert checks["least steel, sagging"].passes
    checks, _ = least_of(2, "#6")
    assert checks["least steel, sagging"].cite == "ACI 318-19 9.6.1.2"


def test_four_thirds_is_where_it_turns():
    """A_s,req goes by the moment; at 3/4 of the steel's own moment it holds within the block's curvature."""
    *_, state = settled(("", 4000, 60, 12, 20, None, (2, "#4"), None))
    needed = 0.75 * 0.4 * INCH**2
    depth = group(2, "#4", 12, 20).depth
    a = needed * 60 * KSI / (0.85 * 4000 * PSI * 12 * INCH)
    turning = 0.9 * needed * 60 * KSI * (depth - a / 2) / state.design
    for share, holds in ((turning * 0.999, True), (turning * 1.001, False)):
        checks, _ = least_of(2, "#4", share=share)
        assert checks["least steel, sagging"].passes is holds


def test_steel_exactly_the_least_is_enough():
    sheet, materials, size = begin()
    bars = group(3, "#8", 12, 20)
    least = 200 / 60000 * 12 * bars.depth / INCH
    exact = type(bars.bar)("exact", bars.bar.diameter, least * INCH**2 / 3)
    exactly = type(bars)(exact, (3,), bars.cage)
    state = bending(Block(12 * INCH, 12 * INCH), Steel(exactly.area, exactly.depth, exactly.outermost),
                    4000 * PSI, 60 * KSI, ES)  # fmt: skip
    lines = state_bending(sheet, materials, size, exactly, None, state, Demand(10.0, "", "test", "bottom"))
    check = dict(lines.checks)["least steel, sagging"]
    assert check.passes
    assert check.check("x")["ratio"] == pytest.approx(1.0, abs=1e-9)


def test_a_determinate_flange_in_tension_doubles_the_web():
    sheet, materials, size = begin(flange=(60, 5))
    bars = group(4, "#8", 12, 20)
    state = bending(Block(12 * INCH, 12 * INCH), Steel(bars.area, bars.depth, bars.outermost),
                    4000 * PSI, 60 * KSI, ES)  # fmt: skip
    plain = size._replace(face=None, flange=None)
    for flange, width in ((None, 12), (size.face, 24)):
        lines = state_bending(
            sheet, materials, plain, bars, None, state, Demand(50.0, "", "test", "top", flange)
        )
        check = dict(lines.checks)["least steel, hogging"].check("x")
        assert check["demand"] / 25.4**2 == pytest.approx(200 / 60000 * width * bars.depth / INCH)


def test_f_y_counts_up_to_80_ksi_in_the_least_steel():
    found = {}
    for fy in (80, 100):
        case = ("", 6000, fy, 12, 20, None, (3, "#8"), None)
        found[fy] = dict(written(case)[1].checks)["least steel, sagging"].check("x")["demand"]
    assert found[80] == found[100]


@pytest.mark.parametrize(("fy", "counted"), [(79.5, 79.5), (80, 80), (80.5, 80)])
def test_the_least_steel_by_hand_about_80_ksi(fy, counted):
    """9.6.1.2: 3 √6000 = 232.379 psi over f_y, on 12 in by 17.625 in."""
    case = ("", 6000, fy, 12, 20, None, (3, "#8"), None)
    found = dict(written(case)[1].checks)["least steel, sagging"].check("x")["demand"]
    assert found / 25.4**2 == pytest.approx(0.232379 / counted * 12 * 17.625, rel=1e-5)


def test_less_than_the_least_steel_does_not_carry_more_than_its_strength():
    """9.6.1.3 is for a moment within the strength; beyond it the least steel itself is asked for."""
    checks, _ = least_of(2, "#4", share=1.01)
    assert checks["least steel, sagging"].cite == "ACI 318-19 9.6.1.2"
    checks, _ = least_of(2, "#4", share=0.999)
    assert checks["least steel, sagging"].cite == "ACI 318-19 9.6.1.3"


def test_a_section_exactly_tension_controlled_passes():
    yield_strain = 60 / 29000
    depth = 17.625
    c = 0.003 * depth / (0.003 + yield_strain + 0.003)
    area = 0.85 * 4 * 0.85 * c * 12 / 60
    bars = group(3, "#8", 12, 20)
    for scale, passes, phi in ((1.0, True, 0.9), (1.02, False, None)):
        exact = type(bars)(type(bars.bar)("x", INCH, area * scale * INCH**2 / 3), (3,), bars.cage)
        state = bending(Block(12 * INCH, 12 * INCH), Steel(exact.area, exact.depth, exact.outermost),
                        4000 * PSI, 60 * KSI, ES)  # fmt: skip
        sheet, materials, size = begin()
        lines = state_bending(sheet, materials, size, exact, None, state, Demand(10.0, "", "t", "bottom"))
        assert dict(lines.checks)["net tensile strain, sagging"].passes is passes
        assert (lines.phi.value == pytest.approx(0.9)) is (phi == 0.9)
