"""Figures along a beam: loads, responses, the spans of derivations."""

import numpy as np
import pytest
from figure_cases import CROWDED_LOADS, FIVE, PLAIN_LOADS, TWO, drawn, five_spans, responses
from svg_reading import crossed, inks, strokes, words

from calcpack.equivalent import shape_of
from calcpack.figures import equivalents_figure, free_body, load_figure, response_figure
from calcpack.figures.drawing import HAIR
from calcpack.figures.load_stack import pile, point_loads, together
from calcpack.statics.loads import LineLoad, PointLoad

NBSP = "\u00a0"


def height_of(figure, text):
    """The middle of a text, downwards from the top [pt]."""
    return next(float(item.corners[:, 1].mean()) for item in inks(figure) if item.text == text)


def test_loads_are_named_with_their_values():
    shown = words(drawn("loads"))
    for text in ("P1 9.00 kN/m", "P3 9.00 kN/m", "self weight 4.13 kN/m", "B7 12.0 kN", "P1 6.75 kN/m"):
        assert text.replace(" kN", f"{NBSP}kN") in shown
    assert f"together 22.13{NBSP}kN/m" in shown  # 9 + 9 + 4.125
    assert f"total 104.3{NBSP}kN" in shown  # 2 * 33.75 + 24.75 + 12
    assert {"dead", "live", "C1", "B9", f"6.00{NBSP}m"} <= set(shown)


def test_loads_are_piled_up():
    layers = pile(6.0, PLAIN_LOADS["dead"])
    assert [layer.source for layer in layers] == ["self weight", "P1", "P3"]
    assert together(layers) == (3.0, 22.125)
    tops = [float(layer.top.max()) for layer in layers]
    assert tops == [4.125, 13.125, 22.125]
    figure = drawn("loads")
    levels = [height_of(figure, f"{name}{NBSP}kN/m") for name in ("self weight 4.13", "P1 9.00", "P3 9.00")]
    assert levels == sorted(levels, reverse=True)


def test_the_pile_carries_what_the_loads_do():
    for loads in CROWDED_LOADS.values():
        layers = pile(20.0, loads)
        area = sum(float((layer.own.mean(axis=1) * np.diff(layer.breaks)).sum()) for layer in layers)
        points = sum(load.force for _, group in point_loads(loads) for load in group)
        assert area + points == pytest.approx(sum(load.total for load in loads))


def test_a_load_that_varies_tells_both_ends():
    figure = load_figure(4.0, TWO[:1], {"live": [LineLoad(0.5, 3.5, 2.0, 5.0, "load 1")]}, "B1")
    assert f"load 1: 2.00{NBSP}kN/m to 5.00{NBSP}kN/m" in words(figure)


def test_a_source_looks_alike_in_every_case():
    panel = PLAIN_LOADS["dead"][:3]
    weight = LineLoad(0, 6, 4.125, 4.125, "self weight")
    figure = load_figure(6.0, TWO, {"dead": [*panel, weight], "live": panel}, "B5")
    hatches = [
        line for stroke in strokes(figure) if stroke.weight == HAIR for line in stroke.lines if len(line) == 2
    ]
    slanted = [
        line for line in hatches if abs(line[0, 0] - line[1, 0]) > 1 and abs(line[0, 1] - line[1, 1]) > 1
    ]
    middle = height_of(figure, "live")
    # Second in the pile under dead, alone under live: hatched upwards to the right both times.
    for strip in ([y for y in slanted if y[0, 1] < middle], [y for y in slanted if y[0, 1] > middle]):
        assert len(strip) > 20
        assert all((b[0] - a[0]) * (b[1] - a[1]) < 0 for a, b in strip)


def test_an_unknown_quantity_is_refused():
    with pytest.raises(ValueError, match="no diagram is known for torsion"):
        response_figure(6.0, TWO, {"torsion": [([0, 6], [1, 1], "line")]})


def test_no_arrow_runs_through_a_text():
    assert crossed(drawn("loads, crowded"), 0.9) == []
    assert crossed(drawn("loads"), 0.9) == []


def test_every_point_load_of_a_crowd_is_named():
    shown = words(drawn("loads, crowded"))
    assert {f"B{20 + n}" for n in range(13)} <= {word.split()[0] for word in shown if word.strip()}


def test_a_low_strip_says_that_it_has_a_scale_of_its_own():
    shown = words(drawn("loads, crowded"))
    assert f"total 40.0{NBSP}kN; drawn to a larger scale" in shown
    assert f"total 50.6{NBSP}kN" in words(drawn("loads"))


def test_loads_in_words():
    assert drawn("loads").alt == (
        "Loads on B5, dead: self weight 4.13 kN/m; P1 9.00 kN/m, largest at 3.00 m; "
        "P3 9.00 kN/m, largest at 3.00 m; B7 12.0 kN at 2.10 m; "
        "live: P1 6.75 kN/m, largest at 3.00 m; P3 6.75 kN/m, largest at 3.00 m."
    )
    assert drawn("loads, none").alt == "Loads on B5, dead: none."
    assert "0.617 klf" in drawn("loads, narrow, feet").alt


def test_an_upward_load_points_up():
    down = load_figure(6.0, TWO, {"live": [PointLoad(3.0, 5.0, "B7")]}, "B1")
    up = load_figure(6.0, TWO, {"live": [PointLoad(3.0, -5.0, "B7")]}, "B1")
    ends = []
    for figure in (down, up):
        (line,) = next(stroke for stroke in strokes(figure) if stroke.weight == 0.9).lines
        ends.append(line[1][1] - line[0][1])  # downwards positive
    assert ends[0] > 0 > ends[1]
    assert f"B7 −5.00{NBSP}kN" in words(up)


def test_a_beam_without_length_is_refused():
    with pytest.raises(ValueError, match="length 0"):
        load_figure(0.0, TWO, {}, "B1")


def test_extremes_are_written_at_their_places():
    figure = drawn("response")
    shown = [word.replace(NBSP, " ") for word in words(figure)]
    assert {"54.0 kN·m at 3.00 m", "36.0 kN", "−36.0 kN", "10.1 mm at 3.00 m", "limit 24.0 mm"} <= set(shown)
    assert shown.count("36.0 kN") == 3  # the shear at the start and both reactions
    assert figure.alt == (
        "Shear of B5, largest 36.0 kN at 0.00 m, smallest −36.0 kN at 6.00 m; "
        "bending moment, largest 54.0 kN·m at 3.00 m; deflection, largest 10.1 mm at 3.00 m; "
        "reactions C1 36.0 kN, B9 36.0 kN."
    )


def test_moment_is_drawn_on_the_tension_side():
    x = np.linspace(0.0, 6.0, 61)
    for sign in (1.0, -1.0):
        curve = sign * 12.0 * x * (6.0 - x) / 2
        figure = response_figure(6.0, TWO, {"moment": [(x, curve, "line")]})
        lines = {stroke.weight: stroke.lines[0] for stroke in strokes(figure) if stroke.weight in (0.6, 0.8)}
        below = lines[0.8][:, 1].mean() - lines[0.6][:, 1].mean()  # y runs downwards
        assert (below > 0) == (sign > 0)


def test_shear_is_drawn_upwards_at_the_start():
    x = np.array([0.0, 6.0])
    figure = response_figure(6.0, TWO, {"shear": [(x, np.array([36.0, -36.0]), "line")]})
    lines = {stroke.weight: stroke.lines[0] for stroke in strokes(figure) if stroke.weight in (0.6, 0.8)}
    assert lines[0.8][1, 1] < lines[0.6][0, 1] < lines[0.8][2, 1]


def test_a_curve_keeps_its_shape():
    x = np.linspace(0.0, 6.0, 601)
    figure = response_figure(6.0, TWO, {"moment": [(x, 12.0 * x * (6.0 - x) / 2, "line")]}, width_mm=120)
    curve = next(stroke.lines[0] for stroke in strokes(figure) if stroke.weight == 0.8)
    depth = (curve[:, 1] - curve[0, 1]) / (curve[:, 1].max() - curve[0, 1])
    part = (curve[:, 0] - curve[0, 0]) / (curve[-1, 0] - curve[0, 0])
    assert np.abs(depth - 4 * part * (1 - part)).max() < 2e-3
    assert len(curve) < 80


def test_what_stands_out_in_every_span_is_found():
    shown = [word.replace(NBSP, " ") for word in words(drawn("response, five spans"))]
    assert sum(word.endswith(" kN·m") for word in shown) == 4  # over the four inner supports
    assert sum(" kN·m at " in word for word in shown) == 5
    assert sum(word.endswith(" kN") and word[0] not in "m" for word in shown) == 10  # two sides of five spans


def test_no_curve_runs_through_a_label():
    for name in ("response", "response, five spans", "response, jumps", "response, cantilever"):
        assert crossed(drawn(name), 0.8) == []


def test_reactions_stand_under_their_supports():
    figure = drawn("response, five spans")
    shown = [word.replace(NBSP, " ") for word in words(figure)]
    curves, reactions = responses(6.0, [0, 6], [[LineLoad(0, 6, 12, 12)]], [1], [0])
    assert len([word for word in shown if word.startswith("max ")]) == 6
    place = {item.text: float(item.corners[:, 0].mean()) for item in inks(figure)}
    assert [
        mark for mark in sorted(place, key=place.__getitem__) if mark in {f"C{n}" for n in range(1, 7)}
    ] == [f"C{n}" for n in range(1, 7)]
    with pytest.raises(ValueError, match="1 reactions for 2 bearings"):
        response_figure(6.0, TWO, curves, reactions=[reactions[0][0]])


def test_a_limit_far_off_is_said_not_drawn():
    x = np.linspace(0.0, 6.0, 61)
    curves = {"deflection": [(x, 0.002 * np.sin(np.pi * x / 6), "line")]}
    near = response_figure(6.0, TWO, curves, limits=[("deflection", 0, 6, 0.004)])
    far = response_figure(6.0, TWO, curves, limits=[("deflection", 0, 6, 0.024)])
    assert any(stroke.dashed and stroke.weight == 0.6 for stroke in strokes(near))
    assert not any(stroke.dashed and stroke.weight == 0.6 for stroke in strokes(far))
    assert f"limit 24.0{NBSP}mm" in words(far)


def test_both_systems_show_the_same_places():
    metric, customary = five_spans(160), five_spans(160, "US")
    assert f"73.4{NBSP}kN·m at 2.20{NBSP}m" in words(metric)
    assert f"54.2{NBSP}kip·ft at 7.20{NBSP}ft" in words(customary)


def test_nothing_but_zero_is_drawn_too():
    x = np.linspace(0.0, 6.0, 7)
    figure = response_figure(6.0, TWO, {"moment": [(x, 0 * x, "line")]})
    assert figure.alt == "No response."


def test_letters_of_the_derivations():
    triangle = shape_of(6.0, [LineLoad(0, 3, 0, 9), LineLoad(3, 6, 9, 0)])
    assert {"a", "L", "w", "0", "R"} <= set(words(free_body(triangle)))
    assert {"M", "F"} <= set(words(free_body(triangle, held=True)))
    general = drawn("free body, general")
    assert {"P", "i", "i1", "i2", "A", "B"} <= set(words(general))
    assert general.alt.startswith("Span L on two supports cut into stretches: i from a i to b i")


def test_a_trapezoid_is_drawn_in_its_own_proportions():
    for rise in (0.5, 2.25):
        shape = shape_of(
            6.0,
            [LineLoad(0, rise, 0, 9), LineLoad(rise, 6 - rise, 9, 9), LineLoad(6 - rise, 6, 9, 0)],
        )
        outline = next(
            line
            for stroke in strokes(free_body(shape))
            if stroke.weight == 0.5
            for line in stroke.lines
            if len(line) == 5
        )
        left, right, shoulder = outline[0, 0], outline[1, 0], outline[3, 0]
        assert (shoulder - left) / (right - left) == pytest.approx(rise / 6, abs=2e-3)


def test_level_loads_are_in_order_of_size():
    figure = drawn("level loads, trapezoid")
    shown = [word for word in words(figure) if "kN/m" in word]
    assert f"fixed-end moment 6.94{NBSP}kN/m" in shown
    places = {item.text: float(item.corners[:, 1].mean()) for item in inks(figure)}
    found = sorted(shown, key=lambda word: places[word], reverse=True)
    values = [float(word.replace(NBSP, " ").split()[-2]) for word in found]
    assert values == sorted(values)
    assert "moment 7.31 kN/m (carried forward)" in figure.alt
    assert equivalents_figure(6.0, [], {}).alt.endswith("equivalents: none.")


def test_supports_are_drawn_by_kind():
    kinds = {
        kind: sum(len(stroke.lines) for stroke in strokes(load_figure(6.0, [(0, kind, "X")], {}, "B1")))
        for kind in ("column", "wall", "beam")
    }
    assert len(set(kinds.values())) == 3
    assert FIVE[0][1] == "wall"
