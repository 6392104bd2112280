"""What is chosen where a job leaves it open: the bounds of each choice, worked by hand."""

import math

import pytest
from aci_samples import ES, KIP, KIP_FT, KSI, PSI, cage, group

from calcpack.clauses.aci318.arrangement import Group
from calcpack.clauses.aci318.choice import (
    CLOSEST,
    STEP,
    Strengths,
    Task,
    Web,
    candidates,
    choose_bars,
    legs_needed,
    rounded_down,
)
from calcpack.clauses.aci318.strength import INCH, Block, Steel, bending
from calcpack.clauses.bars import Bar

STRENGTHS = Strengths(4000 * PSI, 60 * KSI, 60 * KSI, ES)
ROOT = math.sqrt(4000) / 1000  # [ksi]


def task(demand=0.0, width=12, depth=20, cover=1.5, strengths=STRENGTHS):
    face = Block(width * INCH, width * INCH)
    return Task(demand * KIP_FT, face, width * INCH, cage(width, depth, cover), strengths)


def web(width=12, depth=20):
    return Web(width * INCH, depth * INCH, 0.01, STRENGTHS)


def of_area(inches, count=3, diameter=1.0):
    """Bars of one layer with a given area in all [in2]."""
    return Group(Bar("x", diameter * INCH, inches * INCH**2 / count), (count,), cage(12, 20))


def test_lengths_of_practice():
    """Whole inches or 25 mm; no stirrups closer than 3 in or 75 mm."""
    assert [round(STEP[system] * 1000, 6) for system in ("US", "SI")] == [25.4, 25.0]
    assert [round(CLOSEST[system] * 1000, 6) for system in ("US", "SI")] == [76.2, 75.0]
    assert rounded_down(0.2499, 0.025) == 0.225
    assert rounded_down(0.3, 0.1) == 0.3


def test_few_bars_before_many_and_one_layer_before_two():
    found = [each.words for each in candidates(cage(12, 20), ("#5", "#8"), 4, 5)]
    assert found == ["4 #5", "4 #8", "5 #5", "5 #8 in two layers"]


@pytest.mark.parametrize(("area", "ductile"), [(1.0, True), (1.003, False)])
def test_a_section_exactly_tension_controlled(area, ductile):
    """Table 21.2.2: ε_ty + 0.003 = 0.0050690 at d_t = 17.625 in, c = 0.003/0.0080690 of it = 6.5529 in.

    The block, 0.85 of it deep, presses with 0.85 x 4 x 12 x 5.5699 = 227.25 kip: 3.7876 in2 at 60 ksi.
    """
    strain = 60 / 29000
    exact = 0.85 * 4 * 12 * 0.85 * 17.625 * 0.003 / (strain + 0.006) / 60
    assert exact == pytest.approx(3.7876, rel=1e-4)
    bars = of_area(area * exact)
    state = bending(Block(12 * INCH, 12 * INCH), Steel(bars.area, bars.depth, bars.outermost),
                    4000 * PSI, 60 * KSI, ES)  # fmt: skip
    assert task().ductile(state) is ductile


def test_strength_exactly_what_is_asked():
    state = task().state(group(3, "#8", 12, 20))
    for share, strong in ((1.0, True), (1.001, False)):
        assert task(share * state.design / KIP_FT).strong(state) is strong


@pytest.mark.parametrize(("area", "suits"), [(1.001, True), (0.999, False)])
def test_bars_suit_from_the_least_steel_on(area, suits):
    """9.6.1.2: 200/60000 x 12 x 17.625 = 0.705 in2."""
    assert task().suits(of_area(0.705 * area)) is suits


@pytest.mark.parametrize(("width", "suits"), [(15.05, True), (15.08, False)])
def test_bars_suit_up_to_the_spacing_for_crack_control(width, suits):
    """Table 24.3.2 with f_s = 40 ksi, c_c = 1.875 in: 15 - 4.6875 = 10.3125 in; two No. 8 stand b - 4.75 apart."""
    assert task(width=width).suits(group(2, "#8", width, 20)) is suits


def test_compression_bars_are_no_more_than_the_tension_bars():
    found = choose_bars(task(280), ("#8", "#9", "#10"))
    assert found.pressed is not None
    assert found.pressed.area <= found.group.area


def test_where_no_group_is_ductile_the_first_is_named():
    """9 in deep, two No. 14: the neutral axis is too deep, and bars 2.7 in down are not compressed."""
    found = choose_bars(task(500, 12, 9), ("#14",), 2, 2)
    assert (found.group.words, found.satisfied) == ("2 #14", False)
    assert not task(500, 12, 9).ductile(task(500, 12, 9).state(found.group))


def test_shear_without_stirrups():
    """9.6.3.1: 0.75 x √4000 x 12 x 20 = 11.384 kip."""
    assert web().without() / KIP == pytest.approx(0.75 * ROOT * 240)


def test_shear_with_and_without_the_least_stirrups():
    """Table 22.5.5.1: (a) 2 roots; (c) 8 x √(2/3) x 0.01^(1/3) = 1.40727 roots at d = 20 in."""
    assert web().concrete() / KIP == pytest.approx(2 * ROOT * 240)
    assert web().concrete(with_least=False) / KIP == pytest.approx(1.40727 * ROOT * 240, rel=1e-5)


@pytest.mark.parametrize(("area", "enough"), [(0.10, True), (0.0999, False)])
def test_the_least_stirrups_exactly(area, enough):
    """9.6.3.4: 50/60000 x 12 = 0.01 in2/in, 0.1 in2 at 10 in."""
    assert web().enough(area * INCH**2, 10 * INCH) is enough


def test_few_stirrups_leave_less_to_the_concrete():
    """0.09 in2 at 10 in: 0.09 x 60 x 20 / 10 = 10.8 kip beside row (c) of the concrete."""
    found = web().strength(0.09 * INCH**2, 10 * INCH) / KIP
    assert found == pytest.approx(0.75 * (1.40727 * ROOT * 240 + 10.8), rel=1e-5)


def test_many_stirrups_carry_eight_roots():
    """22.5.1.2: 2 + 8 roots in all, whatever the stirrups."""
    assert web().strength(2 * INCH**2, 2 * INCH) / KIP == pytest.approx(0.75 * 10 * ROOT * 240)


@pytest.mark.parametrize(
    ("shear", "area", "spacing"),
    [(0.0, 0.22, 10.0), (0.0, 0.08, 8.0), (60.0, 0.22, 0.22 * 60 * 20 / (60 / 0.75 - 2 * ROOT * 240)),
     (0.75 * 7 * ROOT * 240, 0.88, 5.0)],
)  # fmt: skip
def test_the_widest_spacing(shear, area, spacing):
    """d/2, the least stirrups at 0.01 in2/in, what strength asks for, d/4 beyond four roots."""
    found = web().widest(shear * KIP, area * INCH**2)
    assert found / INCH == pytest.approx(spacing)


@pytest.mark.parametrize(
    ("width", "roots", "legs"),
    [
        (12, 0.0, 2),
        (23.3, 0.0, 2),
        (23.5, 0.0, 3),
        (43.3, 0.0, 3),
        (43.39, 0.0, 4),
        (13.3, 5.0, 2),
        (13.5, 5.0, 3),
    ],
)
def test_legs_across_a_wide_web(width, roots, legs):
    """Table 9.7.6.2.2: at most d = 20 in apart, 10 in beyond four roots; the outer ones b - 3.375 in apart."""
    demand = 0.75 * (2 + roots) * ROOT * width * 20
    assert legs_needed(web(width), cage(width, 20), demand * KIP) == legs
