"""Bars in their layers, cover, cracks, development: lines against numbers, at the limits of each rule."""

import math

import pytest
from aci_samples import KIP, KIP_FT, KSI, PSI, begin, cage, group

from calcpack.clauses.aci318.arrangement import Group, arranged, crack_spacing, least_cover
from calcpack.clauses.aci318.choice import Strengths, Task, choose_bars, rounded_down
from calcpack.clauses.aci318.detailing import (
    End,
    available,
    state_development,
    state_end,
    state_service_stress,
    state_spacing,
    state_top_length,
)
from calcpack.clauses.aci318.flange import Wing, state_flange, state_given_flange
from calcpack.clauses.aci318.flexure import BendingLines, state_compression_ties
from calcpack.clauses.aci318.limits import guard
from calcpack.clauses.aci318.materials import state_cover, state_not_deep
from calcpack.clauses.aci318.strength import INCH, Block, development_length
from calcpack.clauses.bars import Bar, bar
from calcpack.job.errors import CalcpackError


def layer_of(sheet, materials, size, bars, stone):
    return state_spacing(sheet, size, bars, stone, state_service_stress(sheet, materials), "bottom")


@pytest.mark.parametrize(
    ("size", "aggregate", "needed"),
    [("#8", 0.75, 1.0), ("#6", 0.5, 1.0), ("#10", 0.75, 1.27), ("#5", 1.5, 2.0)],
)
def test_clear_distance_is_the_largest_of_three(size, aggregate, needed):
    """25.2.1: 1 in, d_b, 4/3 of the aggregate; a web just wide enough holds the bars, any less not."""
    diameter = bar(size).diameter / INCH
    width = 3.75 + 3 * diameter + 2 * needed
    for more, count in ((1e-6, 3), (-1e-3, 2)):
        assert cage(width + more, 20, aggregate=aggregate).most(bar(size)) == count
    sheet, materials, box = begin(width=width - 1e-3)
    stone = sheet.take("d_agg", aggregate * 25.4, "mm", "", "test")
    three = Group(bar(size), (3,), cage(width - 1e-3, 20, aggregate=aggregate))
    checks = dict(layer_of(sheet, materials, box, three, stone).checks)
    assert not checks["clear distance, bottom bars"].passes
    assert checks["clear distance, bottom bars"].check("x")["demand"] == pytest.approx(needed * 25.4)


@pytest.mark.parametrize(("fy", "cover"), [(60, 1.5), (60, 3.0), (80, 1.5), (40, 1.5)])
def test_crack_control(fy, cover):
    fs = 2 / 3 * fy * 1000
    clear = cover + 0.375
    by_hand = min(15 * 40000 / fs - 2.5 * clear, 12 * 40000 / fs)
    assert crack_spacing(fs * PSI, clear * INCH) / INCH == pytest.approx(by_hand)
    sheet, materials, size = begin(fy=fy, width=20, cover=cover)
    stone = sheet.take("d_agg", 19.05, "mm", "", "test")
    bars = group(2, "#8", 20, 20, cover)
    line = dict(layer_of(sheet, materials, size, bars, stone).checks)["crack control, bottom bars"]
    check = line.check("x")
    assert check["capacity"] / 25.4 == pytest.approx(by_hand)
    assert check["demand"] / 25.4 == pytest.approx(20 - 2 * clear - 1)
    assert line.passes is (20 - 2 * clear - 1 <= by_hand)


@pytest.mark.parametrize(("clear", "passes"), [(80.1, True), (80.0, False), (79.9, False)])
def test_a_deep_beam_is_none_of_these(clear, passes):
    """9.9.1.1: a deep beam's clear span does not exceed four times its depth of 20 in."""
    sheet, _, size = begin()
    span = sheet.take("ell_n", clear * 0.0254, "m", "", "test")
    ((_, line),) = state_not_deep(sheet, size, span)
    assert line.passes is passes


def test_layers_from_the_face():
    bars = group(6, "#9", 12, 24)
    assert bars.layers == (4, 2)
    first = 1.5 + 0.375 + 1.128 / 2
    assert [y / INCH for y in bars.heights] == pytest.approx([first, first + 2 * 1.128])
    assert bars.centroid / INCH == pytest.approx((4 * first + 2 * (first + 2.256)) / 6)
    assert bars.outermost / INCH == pytest.approx(24 - first)
    assert len(bars.places) == 6
    assert bars.places[0][0] == pytest.approx(-bars.places[3][0])
    assert not arranged(12, bar("#9"), cage(12, 24)).fits


@pytest.mark.parametrize(
    ("exposure", "stirrup", "main", "inches"),
    [("inside", "#3", "#8", 1.5), ("weather", "#3", "#5", 1.5), ("weather", "#3", "#8", 1.625),
     ("weather", "#6", "#8", 2.0), ("ground", "#3", "#8", 3.0)],
)  # fmt: skip
def test_cover(exposure, stirrup, main, inches):
    sizes = bar(stirrup).diameter, bar(main).diameter
    assert least_cover(exposure, *sizes) / INCH == pytest.approx(inches)
    for more, passes in ((1e-3, True), (-1e-3, False)):
        sheet, _, size = begin(cover=inches + more)
        ((_, line),) = state_cover(sheet, size.cover, exposure, *sizes)
        assert line.passes is passes


def bent(sheet, nominal=200.0, depth=18.0):
    take = sheet.take
    inches = depth * 25.4
    values = [
        ("M_u", 100, "kN*m"),
        ("A_s", 1500, "mm^2"),
        ("d", inches, "mm"),
        ("d_t", inches, "mm"),
        ("M_n", nominal * KIP_FT, "kN*m"),
        ("phi", 0.9, "1"),
    ]
    return BendingLines(*(take(symbol, value, unit, "", "test") for symbol, value, unit in values), ())


def developed(size, count, width=12, fc=4000, fy=60, top=False):
    sheet, materials, box = begin(fc, fy, width=width)
    bars = group(count, size, width, 20)
    stone = sheet.take("d_agg", 19.05, "mm", "", "test")
    layer = layer_of(sheet, materials, box, bars, stone)
    lines = bent(sheet, depth=bars.depth / INCH)
    return sheet, lines, bars, state_development(sheet, materials, box, bars, layer, lines.outermost, top=top)


@pytest.mark.parametrize("top", [False, True])
@pytest.mark.parametrize(
    ("size", "count", "width", "fc", "fy"),
    [("#8", 3, 12, 4000, 60), ("#6", 3, 12, 4000, 60), ("#9", 4, 12, 5000, 80), ("#11", 2, 16, 4000, 100),
     ("#4", 2, 12, 8000, 60), ("#8", 3, 18, 12000, 60)],
)  # fmt: skip
def test_development_length(size, count, width, fc, fy, top):
    _, _, bars, found = developed(size, count, width, fc, fy, top)
    d_b = bar(size).diameter / INCH
    edge = 1.5 + 0.375 + d_b / 2
    half = (width - 3.75 - d_b) / (count - 1) / 2
    factors = (1.3 if top else 1.0) * (0.8 if d_b <= 0.751 else 1.0) * {60: 1.0, 80: 1.15, 100: 1.3}[fy]
    root = min(math.sqrt(fc), 100)
    ratio = min(min(edge, half) / d_b, 2.5)
    by_hand = max(3 / 40 * fy * 1000 / root * factors / ratio * d_b, 12)
    assert found.length.value / 25.4 == pytest.approx(by_hand)
    number = development_length(bars.bar.diameter, fc * PSI, fy * KSI, min(edge, half) / d_b, top=top,
                                small=d_b <= 0.751)  # fmt: skip
    assert number / INCH == pytest.approx(by_hand)


@pytest.mark.parametrize(
    ("kind", "beyond"), [("confined", 4.0), ("support", 4.0), ("support", 0.0), ("inflection", 0.0)]
)
def test_the_moment_rises_no_faster_than_the_bars_are_developed(kind, beyond):
    sheet, lines, bars, found = developed("#8", 3)
    factor = 1.3 if kind == "confined" else 1.0
    extra = max(bars.depth / INCH, 12.0) if kind == "inflection" else beyond
    shear = factor * 200 * 12 / (found.length.value / 25.4 - extra)  # [kip]
    for share, passes in ((0.9999, True), (1.0001, False)):
        end = End(shear * share * KIP, "place", kind, beyond * INCH)
        tag = "A" if share < 1 else "B"
        ((_, line),) = state_end(sheet, lines, found, end, tag)
        assert line.passes is passes
        at_hand = available(end, 200 * KIP_FT, bars.depth, bars.bar.diameter)
        assert (found.length.value / 1000 <= at_hand) is passes


@pytest.mark.parametrize(("clear", "governs"), [(10, "depth"), (40, "clear"), (10, "development")])
def test_top_bars_run_past_the_hogging_moment(clear, governs):
    sheet, lines, bars, found = developed("#8", 3, top=True)
    hogging = 1.0 if governs == "development" else 6.0
    x = sheet.take("x_h", hogging * 0.3048, "m", "", "test")
    span = sheet.take("ell_n", clear * 0.3048, "m", "", "test")
    half = sheet.take("w_2", 6 * 25.4, "mm", "", "test")
    line = state_top_length(sheet, lines, found, x, span, half)
    past = hogging * 12 + max(bars.depth / INCH, 12.0, clear * 12 / 16)
    assert line.value * 1000 / 25.4 == pytest.approx(max(past, 6 + found.length.value / 25.4))


@pytest.mark.parametrize(("wings", "reach"), [
    ((10.0, 10.0), [min(8 * 6, 60, 20 * 12 / 8)] * 2),
    ((3.0, 10.0), [18, 30]),
    ((40.0, 40.0), [30, 30]),
    ((10.0,), [min(6 * 6, 60, 20 * 12 / 12)]),
    ((2.0,), [12]),
    ((), []),
])  # fmt: skip
def test_effective_flange(wings, reach):
    sheet, _, size = begin(flange=(60, 6))
    clear = sheet.take("ell_n", 20 * 0.3048, "m", "", "test")
    found = state_flange(
        sheet, size, tuple(Wing(each * 0.3048, "beam") for each in wings), clear, size.flange, "b_e"
    )
    assert found.value / 25.4 == pytest.approx(12 + sum(reach))


def test_slab_thickness_can_govern_the_flange():
    for count, part in ((2, 8), (1, 6)):
        sheet, _, size = begin(flange=(60, 2))
        clear = sheet.take("ell_n", 20 * 0.3048, "m", "", "test")
        wings = tuple(Wing(3.0, "beam") for _ in range(count))
        found = state_flange(sheet, size, wings, clear, size.flange, "b_e")
        assert found.value / 25.4 == pytest.approx(12 + count * part * 2)


@pytest.mark.parametrize(("flange", "passes"), [((48, 6), (True, True)), ((48.1, 6), (True, False)),
                                                ((40, 5.9), (False, True))])  # fmt: skip
def test_an_isolated_tee(flange, passes):
    sheet, _, size = begin(flange=flange)
    assert tuple(line.passes for _, line in state_given_flange(sheet, size, None)) == passes


@pytest.mark.parametrize(("spacing", "passes"), [(12.0, True), (12.01, False)])
def test_stirrups_about_compression_bars(spacing, passes):
    """16 d_b = 16 in, 48 stirrup diameters = 18 in, the web = 12 in."""
    sheet, _, size = begin()
    line = sheet.take("s", spacing * 25.4, "mm", "", "test")
    ((_, found),) = state_compression_ties(sheet, size, line, group(2, "#8", 12, 20), size.stirrup)
    assert found.passes is passes
    sheet, _, size = begin(width=30)
    for bars, capacity in (("#5", 10.0), ("#11", 18.0)):
        line = sheet.take(f"s_{bars[1:]}", 100, "mm", "", "test")
        ((_, found),) = state_compression_ties(sheet, size, line, group(2, bars, 30, 20), size.stirrup)
        assert found.check("x")["capacity"] / 25.4 == pytest.approx(capacity)


def test_values_outside_of_the_limits_are_refused():
    guard({"f'_c": 2500 * PSI, "f_y": 100 * KSI}, "US")
    guard({"f'_c": 2500 * PSI, "f_y": 40 * KSI}, "US")
    for values in ({"f'_c": 2490 * PSI}, {"f_y": 101 * KSI}, {"f_y": 39 * KSI}):
        with pytest.raises(CalcpackError, match="ACI 318-19"):
            guard(values, "US", "beam B1")


# The choice


STRENGTHS = Strengths(4000 * PSI, 60 * KSI, 60 * KSI, 29000 * KSI)


def task(demand, width=12, depth=20, **keys):
    return Task(
        demand * KIP_FT,
        Block(width * INCH, width * INCH),
        width * INCH,
        cage(width, depth),
        STRENGTHS,
        **keys,
    )


def test_the_fewest_bars_that_suit():
    for demand in (20, 60, 100, 150, 180):
        found = choose_bars(task(demand), ("#5", "#6", "#7", "#8", "#9"))
        assert found.satisfied
        assert task(demand).suits(found.group)
        if found.group.count > 2 and len(found.group.layers) == 1:
            fewer = [arranged(found.group.count - 1, bar(size), cage(12, 20)) for size in ("#5", "#7", "#9")]
            assert not any(len(each.layers) == 1 and task(demand).suits(each) for each in fewer)


def test_two_layers_only_where_one_is_not_enough():
    found = choose_bars(task(190), ("#5", "#6"))
    assert len(found.group.layers) == 2
    assert not any(task(190).suits(arranged(n, bar("#6"), cage(12, 20))) for n in range(2, 5))


def test_compression_bars_where_tension_bars_are_not_enough():
    found = choose_bars(task(280), ("#8", "#9", "#10"))
    assert found.satisfied
    assert found.pressed is not None
    assert not any(task(280).suits(arranged(n, bar("#10"), cage(12, 20))) for n in range(2, 9))


def test_nothing_suits():
    found = choose_bars(task(1000), ("#8", "#9"))
    assert not found.satisfied
    assert task(1000).state(found.group, found.pressed).strain >= 60 / 29000 + 0.003 - 1e-9


def test_what_else_is_asked_for_counts():
    thin = choose_bars(task(100, also=lambda group, state: group.bar.diameter < 0.017), ("#5", "#9"))
    assert thin.group.bar.name == "#5"


def test_a_web_too_narrow_for_two_bars():
    with pytest.raises(ValueError, match="no bars fit"):
        choose_bars(task(10, width=4), ("#5",))


def test_least_steel_governs_a_small_moment():
    found = choose_bars(task(1), ("#5",))
    assert found.group.area / INCH**2 >= 200 / 60000 * 12 * found.group.depth / INCH
    assert found.group.count == 3


def test_the_bar_type_is_plain_data():
    assert Bar("x", 0.02, 3e-4) == Bar("x", 0.02, 3e-4)
    assert rounded_down(0.30000001, 0.025) == 0.3
