"""The drawing paper itself: hatching, spreading, placing, measuring."""

import itertools
import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from matplotlib.textpath import TextPath
from svg_reading import inks, strokes

from calcpack.figures.drawing import Drawing, Stroke
from calcpack.figures.labels import Box, Placer, fits, meets, overlap, spread
from calcpack.figures.lettering import face, plain, text_width
from calcpack.figures.parts import dimension_chain
from calcpack.figures.shapes import centroid, clip_ring, clip_segment, hatching, simplified, within

coordinate = st.floats(-20, 20).map(lambda value: round(value, 3))
point = st.tuples(coordinate, coordinate)


@given(st.lists(coordinate, min_size=1, max_size=9), st.floats(0.1, 5))
def test_spread_keeps_the_gaps_and_the_order(wanted, gap):
    wanted = sorted(wanted)
    places = spread(wanted, [gap] * (len(wanted) - 1), -1e6, 1e6)
    assert all(b - a >= gap - 1e-6 for a, b in itertools.pairwise(places))
    if all(b - a >= gap for a, b in itertools.pairwise(wanted)):
        assert places == pytest.approx(wanted)
    assert sum(places) == pytest.approx(sum(wanted), abs=1e-6)  # nobody is favoured


@given(
    st.tuples(point, point, point), st.floats(0, 180).map(lambda angle: round(angle, 6)), st.floats(0.3, 3)
)
def test_hatching_lies_inside_and_covers(corners, angle, spacing):
    (ax, ay), (bx, by), (cx, cy) = corners
    area = abs((bx - ax) * (cy - ay) - (cx - ax) * (by - ay)) / 2
    longest = max(math.dist(a, b) for a, b in itertools.combinations(corners, 2))
    pieces = list(hatching(corners, angle, spacing))
    middle = np.array(centroid(corners))
    for piece in pieces:
        for end in piece:
            x, y = end + (middle - end) * 1e-6
            assert within(list(corners), x, y)
        dx, dy = piece[1] - piece[0]
        off = (math.degrees(math.atan2(dy, dx)) - angle) % 180
        assert min(off, 180 - off) < 1e-6
    # Lines a spacing apart measure the area, but for what is left over at the ends.
    if area > 20 * spacing**2 and area / longest > 6 * spacing:
        length = sum(float(np.hypot(*(piece[1] - piece[0]))) for piece in pieces)
        assert length * spacing == pytest.approx(area, rel=0.25)


@given(st.lists(point, min_size=2, max_size=40, unique=True))
def test_a_simplified_line_stays_within_its_tolerance(points):
    line = np.array(points)
    short = simplified(line, 0.5)
    assert (short[0] == line[0]).all()
    assert (short[-1] == line[-1]).all()
    for place in line:
        nearest = min(_distance(place, a, b) for a, b in itertools.pairwise(short))
        assert nearest <= 0.5 + 1e-9


def _distance(place, a, b):
    along = b - a
    length = float(along @ along)
    part = 0.0 if length == 0 else min(max(float((place - a) @ along) / length, 0.0), 1.0)
    return float(np.hypot(*(place - a - part * along)))


@given(point, point)
def test_a_clipped_segment_is_the_part_inside(start, end):
    window = (-5.0, -4.0, 6.0, 7.0)
    found = clip_segment(start, end, window)
    inside = [
        t
        for t in np.linspace(0, 1, 201)
        if -5 <= start[0] + t * (end[0] - start[0]) <= 6 and -4 <= start[1] + t * (end[1] - start[1]) <= 7
    ]
    if found is None:
        assert len(inside) <= 1
    else:
        length = math.dist(start, end)
        assert math.dist(*found) >= (inside[-1] - inside[0] if inside else 0) * length - 1e-6


def test_clipping_an_outline_keeps_the_area_inside():
    ring = clip_ring([(0, 0), (10, 0), (10, 4), (0, 4)], (2.0, 1.0, 6.0, 9.0))
    assert sorted(ring.tolist()) == [[2, 1], [2, 4], [6, 1], [6, 4]]
    assert clip_ring([(0, 0), (1, 0), (0, 1)], (5.0, 5.0, 6.0, 6.0)).shape == (0, 2)


@pytest.mark.parametrize("text", ["44.5 kN·m at 3.00 m", "W", "fjord", "−0.183 mm", "(old wall)"])
@pytest.mark.parametrize("bold", [False, True])
def test_a_box_holds_its_ink(text, bold):
    drawing = Drawing()
    box = drawing.text(20.0, 10.0, text, 8.0, bold=bold)
    left, bottom, right, top = box.bounds()
    item = inks(drawing.finish(40.0, text, bottom=0.0, top=20.0))[0]
    x, y = item.corners[:, 0] * 25.4 / 72, 20.0 - item.corners[:, 1] * 25.4 / 72
    assert left - 0.1 <= x.min() <= x.max() <= right + 0.1
    assert bottom - 0.15 <= y.min() <= y.max() <= top + 0.1


def test_widths_are_those_of_the_outlines():
    ink = TextPath((0, 0), "Boat workshop", prop=face(8.0)).get_extents().width * 25.4 / 72
    assert text_width("Boat workshop", 8.0) == pytest.approx(ink, rel=0.03)
    assert text_width("", 8.0) == 0.0
    assert text_width("梁", 10.0) == pytest.approx(10 * 25.4 / 72)


def test_control_characters_become_spaces():
    assert plain("a\x00b\tc\u2028d") == "a b c d"


def test_areas_of_one_tone_do_not_cancel_where_they_overlap():
    drawing = Drawing()
    drawing.area([(0, 0), (4, 0), (4, 4), (0, 4)])
    drawing.area([(2, 2), (2, 6), (6, 6), (6, 2)])  # the other way round
    svg = drawing.finish(10.0, "Two squares.").svg
    path = svg.split('<path d="')[2].split('"')[0]
    rings = [
        np.array(piece.replace("L", " ").replace("z", " ").split(), float) for piece in path.split("M")[1:]
    ]
    turns = []
    for ring in rings:
        x, y = ring.reshape(-1, 2).T
        turns.append(float(np.sum(x * np.roll(y, -1) - np.roll(x, -1) * y)))
    assert turns[0] * turns[1] > 0


def test_dashes_are_said_in_points():
    drawing = Drawing()
    drawing.line([(0, 0), (9, 0)], Stroke(0.3, dash=(5.0, 1.5)))
    assert "stroke-dasharray: 5,1.5" in drawing.finish(10.0, "A line.").svg


def test_a_pasted_drawing_is_moved_whole():
    one, other = Drawing(), Drawing()
    other.line([(0, 0), (5, 0)])
    other.text(2.0, 1.0, "x")
    one.paste(other, 3.0, -2.0)
    a, b, c, d = other.extent()
    assert one.extent() == pytest.approx((a + 3, b - 2, c + 3, d - 2))
    assert Drawing().extent() == (0.0, 0.0, 0.0, 0.0)


def test_dimensions_that_are_too_wide_hang_below():
    drawing = Drawing()
    deep = dimension_chain(drawing, [0.0, 3.0, 6.0, 40.0], ["3.00 m", "3.00 m", "34.00 m"], (5.0, 10.0))
    found = inks(drawing.finish(50.0, "Three lengths.", top=20.0, bottom=0.0))
    line = (20.0 - 10.0) * 72 / 25.4
    assert [item.corners[:, 1].mean() > line for item in found] == [True, True, False]
    assert deep > 2 * 2.3
    assert (
        len(next(stroke for stroke in strokes(drawing.finish(50.0, "x")) if stroke.weight == 0.5).lines) == 4
    )


def test_placing_prefers_the_first_free_place():
    placer = Placer((0.0, 0.0, 30.0, 10.0))
    placer.block_line([(0.0, 5.0), (10.0, 5.0)])
    box = placer.choose([Box(5, 5, 4, 2), Box(29, 5, 4, 2), Box(15, 5, 4, 2), Box(20, 5, 4, 2)])
    assert box == Box(15, 5, 4, 2)
    # Nothing is free now: crossing a line is less bad than covering a text or leaving the paper.
    assert placer.pick([Box(15, 5, 4, 2), Box(29, 5, 4, 2), Box(5, 5, 4, 2)])[0] == 2
    assert placer.covered((15.0, 0.0), (15.0, 9.0)) == 1
    with pytest.raises(ValueError, match="no places"):
        placer.pick([])


def test_turned_boxes():
    tilted = Box(0, 0, 10, 1, 45)
    assert not overlap(tilted, Box(3, -3, 2, 2))
    assert overlap(tilted, Box(3, 3, 2, 2))
    square = [(0.0, 0.0), (4.0, 0.0), (4.0, 4.0), (0.0, 4.0)]
    assert fits(Box(2, 2, 3, 1, 30), square)
    assert not fits(Box(2, 2, 5, 1, 30), square)
    assert meets(Box(5, 2, 4, 1), square)
    assert not meets(Box(8, 2, 4, 1), square)
