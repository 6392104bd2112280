"""Sections, bars, capacities and deflected beams: what is drawn, where, and what is said."""

import hashlib
import re

import numpy as np
import pytest
from strength_cases import FOUR, MOMENTS, PARABOLA, RB, SINE, STRENGTH, TEE, TWO, simple, strong
from svg_reading import crossed, inks, outside, overlapping, root, strokes, words

from calcpack.figures import bar_layout, capacity_figure, deflected_shape, section_figure
from calcpack.figures.drawing import INK, WHITE

every = pytest.mark.parametrize("name", STRENGTH)
POINTS = 72 / 25.4  # user units a millimetre


@every
def test_no_text_lies_on_another(name):
    assert overlapping(strong(name)) == []


@every
def test_no_text_is_cut_off(name):
    assert outside(strong(name)) == []


@every
def test_no_heavy_line_runs_through_a_text(name):
    for weight in (1.2, 1.3, 1.5):
        assert crossed(strong(name), weight) == []


@every
def test_twice_the_same_bytes(name):
    assert STRENGTH[name]() == strong(name)


@every
def test_stands_alone_and_is_spoken(name):
    figure = strong(name)
    bare = figure.svg.replace('xmlns="http://www.w3.org/2000/svg"', "")
    for word in ("://", "href", "url(", "<style", "<!", " id=", "nan", "inf"):
        assert word not in re.sub(r'aria-label="[^"]*"', "", bare)
    assert figure.alt.endswith(".")
    assert root(figure).attrib["aria-label"] == figure.alt
    assert root(figure).attrib["width"] == f"{figure.width_mm:g}mm"


def extent_of(stroke):
    points = np.vstack(stroke.lines)
    return np.ptp(points, axis=0)


def filled(figure, tone):
    """The filled rings of a tone, in user units."""
    found = []
    for element in root(figure).iter("{http://www.w3.org/2000/svg}path"):
        if f"fill: {tone}" in element.attrib.get("style", ""):
            for piece in re.findall(r"M[^M]*", element.attrib["d"]):
                numbers = [float(number) for number in re.findall(r"-?\d+\.?\d*(?:e-?\d+)?", piece)]
                found.append(np.array(numbers).reshape(-1, 2))
    return found


def test_a_section_is_to_scale():
    (outline,) = [stroke for stroke in strokes(strong("section")) if stroke.weight == 0.9]
    wide, deep = extent_of(outline)
    assert deep / wide == pytest.approx(0.55 / 0.3, rel=1e-3)
    discs = filled(strong("section"), INK)
    sizes = sorted(np.ptp(ring, axis=0)[0] for ring in discs if len(ring) > 20)
    assert len(sizes) == 6
    # Bars of 16 mm would be thinner than the least that is drawn: 0.8 mm across.
    scale = wide / 0.3
    assert sizes[-1] == pytest.approx(max(0.02 * scale, 0.8 * POINTS), rel=0.02)
    bottom = max(ring[:, 1].mean() for ring in discs if len(ring) > 20)
    foot = max(np.vstack(outline.lines)[:, 1])
    assert (foot - bottom) / scale == pytest.approx(0.06, abs=1e-3)


def test_a_rolled_section_has_its_plates_and_root_radii():
    figure = strong("section, rolled")
    (outline,) = [stroke for stroke in strokes(figure) if stroke.weight == 0.9]
    ring = np.vstack(outline.lines)
    wide, deep = extent_of(outline)
    assert deep / wide == pytest.approx(300 / 150, rel=1e-3)
    scale = wide / 150
    middle = (ring[:, 0].max() + ring[:, 0].min()) / 2
    web = 2 * np.abs(ring[:, 0] - middle).min() / scale
    assert web == pytest.approx(7.1, abs=0.05)
    # On the flange's inner face the root ends half a web and one radius from the middle.
    heights = ring[:, 1].max() - ring[:, 1]
    inner = np.abs(ring[np.isclose(heights / scale, 10.7, atol=0.05), 0] - middle) / scale
    assert inner.min() == pytest.approx(7.1 / 2 + 15, abs=0.1)
    assert {"flange 10.7\u00a0mm", "web 7.1\u00a0mm", "300\u00a0mm", "150\u00a0mm"} <= set(words(figure))
    assert figure.alt == "Section of B9: IPE 300 150 mm by 300 mm."


def test_a_section_names_its_sizes():
    shown = set(words(strong("section")))
    assert {
        "h = 550\u00a0mm",
        "b = 300\u00a0mm",
        "d = 490\u00a0mm",
        "cover 40\u00a0mm",
        "x = 132\u00a0mm",
    } <= shown
    assert {"4 ⌀20", "(1257 mm²)", "⌀10 at 150"} <= shown
    assert {"h = 21.65\u00a0in", "a = 4.17\u00a0in"} <= set(words(strong("section, inches, four legs")))


def hatched_below(figure):
    """How far down from the section's top face the hatching reaches, as a part of the depth."""
    (outline,) = [stroke for stroke in strokes(figure) if stroke.weight == 0.9]
    ring = np.vstack(outline.lines)
    lines = np.vstack([line for stroke in strokes(figure) if stroke.weight == 0.3 and stroke.tone == INK
                       for line in stroke.lines if len(line) == 2])  # fmt: skip
    top, foot = ring[:, 1].min(), ring[:, 1].max()
    return (lines[:, 1].min() - top) / (foot - top), (lines[:, 1].max() - top) / (foot - top)


def test_the_stress_block_lies_at_the_face_of_the_neutral_axis():
    assert hatched_below(strong("section")) == pytest.approx((0.0, 0.106 / 0.55), abs=0.01)
    high, low = hatched_below(section_figure(RB, neutral_axis=(0.2, "bottom"), stress_block=0.16))
    assert (high, low) == pytest.approx((1 - 0.16 / 0.55, 1.0), abs=0.01)
    lines = [s for s in strokes(strong("section")) if s.dashed]
    (axis,) = [line for stroke in lines for line in stroke.lines]
    (outline,) = [stroke for stroke in strokes(strong("section")) if stroke.weight == 0.9]
    ring = np.vstack(outline.lines)
    assert (axis[0][1] - ring[:, 1].min()) / np.ptp(ring[:, 1]) == pytest.approx(0.132 / 0.55, abs=2e-3)


def test_a_wide_flange_is_broken_off_but_its_width_is_true():
    figure = strong("section, tee")
    assert "bf = 1500\u00a0mm" in words(figure)
    assert "tee 1500 mm by 600 mm, web 300 mm" in figure.alt
    assert "flange: as the clause gives" in words(strong("section, tee without flange width"))
    # Bars of the flange beyond the break are not drawn: 5 of 7 lie within.
    assert len([ring for ring in filled(strong("section, tee hogging"), INK) if len(ring) > 20]) == 5


def test_a_stirrup_keeps_its_cover():
    figure = section_figure(RB, stirrup=(0.04, 0.01, 2))
    (outline,) = [stroke for stroke in strokes(figure) if stroke.weight == 0.9]
    (stirrup,) = [stroke for stroke in strokes(figure) if stroke.weight == 0.4]
    wide, _ = extent_of(outline)
    gap = np.vstack(stirrup.lines)[:, 0].min() - np.vstack(outline.lines)[:, 0].min()
    assert gap / wide == pytest.approx(0.04 / 0.3, abs=2e-3)
    assert len(stirrup.lines) == 4  # its two edges, two hooks
    four = section_figure(RB, stirrup=(0.04, 0.01, 4), bars=FOUR)
    assert sum(len(s.lines) for s in strokes(four) if s.weight == 0.4) == 6


@pytest.mark.parametrize(
    ("options", "message"),
    [
        ({"bars": [(0.0, 0.6, 0.02)]}, "is not in the section"),
        ({"neutral_axis": (0.6, "top")}, "not within the section"),
        ({"stress_block": -0.1}, "not within the section"),
        ({"stirrup": (0.16, 0.01, 2)}, "does not fit"),
    ],
)
def test_what_does_not_fit_into_a_section_is_refused(options, message):
    with pytest.raises(ValueError, match=message):
        section_figure(RB, **options)


def test_a_section_needs_its_sizes():
    with pytest.raises(ValueError, match="width not positive"):
        section_figure(TEE.model_copy(update={"dimensions": {**TEE.dimensions, "width": 0.0}}))


def test_bars_and_zones_say_their_lengths():
    shown = words(strong("bars"))
    assert {"3 ⌀20, 17.00\u00a0m", "4 ⌀20, 3.60\u00a0m", "⌀10 at 100, 30 pcs", "3.00\u00a0m"} <= set(shown)
    assert "⌀10 at 100, 12 pcs, 1.20\u00a0m" in shown  # too narrow: hangs under the chain
    assert "top 4 ⌀20 from 9.60 m to 13.40 m" in strong("bars").alt


def test_bars_lie_where_they_are():
    figure = strong("bars")
    heavy = [line for stroke in strokes(figure) if stroke.weight == 1.2 for line in stroke.lines]
    assert len(heavy) == 2 * 8  # in the beam, and drawn out
    left = min(line[:, 0].min() for line in heavy)
    scale = (max(line[:, 0].max() for line in heavy) - left) / 17.0
    spans = sorted(
        (round((line[0][0] - left) / scale, 2), round((line[-1][0] - left) / scale, 2)) for line in heavy
    )
    assert spans.count((1.2, 4.8)) == spans.count((9.6, 13.4)) == 2


def test_stirrups_stand_at_their_spacing():
    figure = bar_layout(6.0, TWO, [], [(0.0, 1.2, 0.1, "a"), (1.2, 6.0, 0.3, "b")])
    upright = sorted(
        line[0][0] / POINTS
        for stroke in strokes(figure)
        if stroke.weight == 0.3 and not stroke.dashed
        for line in stroke.lines
        if len(line) == 2 and abs(line[0][0] - line[1][0]) < 1e-6
    )
    steps = np.diff(upright)
    scale = (170.0 - 14.0) / 6.0
    assert steps[:12] == pytest.approx(0.1 * scale, abs=0.02)
    assert steps[-16:] == pytest.approx(0.3 * scale, abs=0.02)


@pytest.mark.parametrize(
    ("layers", "zones", "message"),
    [
        ([("side", 0.0, 1.0, "")], [], "top or the bottom"),
        ([("top", 1.0, 1.0, "")], [], "no length"),
        ([], [(0.0, 1.0, 0.0, "")], "stirrup zone"),
    ],
)
def test_bars_that_cannot_be_are_refused(layers, zones, message):
    with pytest.raises(ValueError, match=message):
        bar_layout(6.0, TWO, layers, zones)


def test_the_worst_ratio_is_found_at_a_step():
    # 1.20 m from the support the smaller capacity ends: 12 (6 - 1.2) 1.2 / 2 = 34.56 against 30.
    figure = simple(capacity=[(0.0, 1.2, 30.0, 0.0), (1.2, 6.0, 90.0, 0.0)])
    assert (
        figure.alt == "Bending moment and resistance of B5: largest ratio 1.15 at 1.20 m (34.6 of 30.0 kN·m)."
    )
    assert "ratio 1.15 at 1.20\u00a0m (34.6 of 30.0\u00a0kN·m)" in words(figure)


def test_the_worst_ratio_on_a_slope_is_between_its_ends():
    # 6 x (6 - x) against 60 (6 - x) / 6 + 6 x / 6: largest where the derivative of the ratio is nought.
    x = np.linspace(0.0, 6.0, 6001)
    ratio = 6 * x * (6 - x) / (60 - 9 * x)
    figure = simple(capacity=[(0.0, 6.0, 60.0, 1.0, 6.0, 1.0)])
    assert f"largest ratio {ratio.max():.2f} at" in figure.alt


def test_ratios_are_compared_only_where_asked():
    figure = simple("shear", [(0.0, 6.0, 40.0, 40.0)], compared=[(0.5, 5.5)])
    assert "ratio 0.75 at 0.500 m (30.0 of 40.0 kN)" in figure.alt
    assert "other way ratio 0.75 at 5.50 m" in figure.alt
    assert "ratio 0.90 (36.0 of 40.0\u00a0kN)" in words(simple("shear", [(0.0, 6.0, 40.0, 40.0)]))


def test_given_ratios_are_written_as_given():
    figure = simple(governing=[(3.0, 54.0, 80.0)])
    assert figure.alt.endswith("largest ratio 0.68 at 3.00 m (54.0 of 80.0 kN·m).")


def test_a_shear_ratio_at_a_support_takes_its_own_side_of_the_jump():
    x = np.array([0.0, 3.0, 3.0, 6.0])
    y = np.array([10.0, -50.0, 40.0, -10.0])
    figure = capacity_figure(
        6.0,
        [*TWO[:1], (3.0, "column", "C2"), TWO[1]],
        "shear",
        ((x, y), (x, y)),
        [(0.0, 3.0, 100.0, 100.0), (3.0, 6.0, 80.0, 100.0)],
    )
    assert figure.alt == (
        "Shear and resistance: largest ratio 0.50 at 3.00 m (40.0 of 80.0 kN), "
        "other way ratio 0.50 at 3.00 m (50.0 of 100.0 kN)."
    )


def test_what_is_beyond_the_capacity_is_hatched():
    def hatch(figure):
        return [
            line
            for stroke in strokes(figure)
            if stroke.weight == 0.3 and stroke.tone == INK
            for line in stroke.lines
            if len(line) == 2 and abs(line[0][0] - line[1][0]) > 1e-3
        ]

    assert len(hatch(strong("capacity, exceeded, feet"))) > 5
    assert hatch(strong("capacity, simple")) == []


def test_the_capacity_is_drawn_on_the_side_of_its_moment():
    heavy = [
        line for stroke in strokes(simple()) if stroke.weight == 1.5 for line in stroke.lines if len(line) > 2
    ]
    assert len(heavy) == 2
    reach = sorted(np.ptp(line[:, 1]) for line in heavy)
    assert reach[1] / reach[0] == pytest.approx(90 / 30, rel=1e-2)
    # Sagging capacity, the larger, hangs below the beam's line.
    larger = max(heavy, key=lambda line: np.ptp(line[:, 1]))
    assert larger[:, 1].max() > larger[0][1] + 1
    shown = words(strong("capacity, moment"))
    assert {"160.0\u00a0kN·m", "140.0\u00a0kN·m"} <= set(shown)


def test_no_resistance_at_all_is_said():
    assert "ratio without limit" in strong("capacity, none").alt


@pytest.mark.parametrize(
    ("capacity", "message"),
    [
        ([], "no capacity"),
        ([(0.0, 3.0, -1.0, 0.0)], "not negative"),
        ([(0.0, 3.0, 1.0, 0.0), (2.0, 6.0, 1.0, 0.0)], "not in order"),
        ([(3.0, 3.0, 1.0, 0.0)], "not in order"),
    ],
)
def test_capacities_that_cannot_be_are_refused(capacity, message):
    with pytest.raises(ValueError, match=message):
        simple(capacity=capacity)


def test_an_unknown_quantity_is_refused():
    with pytest.raises(ValueError, match="torsion"):
        capacity_figure(6.0, TWO, "torsion", ((PARABOLA, SINE), (PARABOLA, SINE)), MOMENTS)


def test_each_span_says_its_deflection_and_limit():
    shown = words(strong("deflected, three spans"))
    assert {"limit 24.0\u00a0mm", "limit 22.0\u00a0mm", "deflection, total", "deflection, least"} <= set(
        shown
    )
    figure = strong("deflected")
    assert figure.alt == "B5: deflection: 8.40 mm at 3.00 m (limit 24.0 mm)."
    assert {"8.40\u00a0mm at 3.00\u00a0m", "limit 24.0\u00a0mm"} <= set(words(figure))


def test_the_deflection_keeps_its_proportion_to_the_limit():
    figure = strong("deflected")
    (curve,) = [line for stroke in strokes(figure) if stroke.weight == 1.3 for line in stroke.lines]
    (limit,) = [line for stroke in strokes(figure) if stroke.weight == 0.6 for line in stroke.lines]
    zero = curve[0][1]
    assert (curve[:, 1].max() - zero) / (limit[0][1] - zero) == pytest.approx(8.4 / 24, rel=1e-2)
    upward = strong("deflected, upward")
    (curve,) = [line for stroke in strokes(upward) if stroke.weight == 1.3 for line in stroke.lines]
    (limit,) = [line for stroke in strokes(upward) if stroke.weight == 0.6 for line in stroke.lines]
    assert curve[:, 1].max() == pytest.approx(curve[0][1])
    assert limit[0][1] < curve[0][1]
    assert "−8.40\u00a0mm at 3.00\u00a0m" in words(upward)


def test_a_far_limit_is_said_beside_the_title():
    shown = words(strong("deflected, far limit, inches"))
    assert "limit 0.945\u00a0in" in shown
    assert not [stroke for stroke in strokes(strong("deflected, far limit, inches")) if stroke.weight == 0.6]


def test_deflected_shapes_that_cannot_be_are_refused():
    with pytest.raises(ValueError, match="0 places"):
        deflected_shape(6.0, TWO, [], [], [])
    with pytest.raises(ValueError, match="positive amount"):
        deflected_shape(6.0, TWO, PARABOLA, SINE, [(0.0, 6.0, 0.0)])


def test_hostile_words_are_shown_as_they_are():
    assert any(word.startswith("$x$ <b>") for word in words(strong("section, hostile")))
    assert any(word.endswith("…, 0.10\u00a0m") for word in words(strong("bars, hostile")))


def test_names_of_the_bars_are_text():
    assert len(inks(strong("section"))) >= 9
    assert WHITE in strong("section").svg
    assert len({hashlib.sha256(strong(name).svg.encode()).digest() for name in STRENGTH}) == len(STRENGTH)


@pytest.mark.parametrize("sign", [1.0, -1.0])
def test_a_hogging_moment_has_a_ratio_by_size(sign):
    figure = capacity_figure(
        6.0, TWO, "moment", ((PARABOLA, SINE), (PARABOLA, -80 * SINE)), MOMENTS[:1],
        governing=[(3.0, -80.0, sign * 100.0)],
    )  # fmt: skip
    assert "ratio 0.80" in figure.alt
    assert "ratio 0.80" in " ".join(words(figure))
