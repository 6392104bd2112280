"""Lines and outlines in the plan."""

import math

import pytest

from calcpack.framing.plane import (
    Boxes,
    Line,
    Tolerance,
    area,
    clipped,
    gaps,
    inside,
    smallest_box,
    without_repeats,
)

SQUARE = ((0.0, 0.0), (2.0, 0.0), (2.0, 2.0), (0.0, 2.0))


def test_place_and_point_undo_each_other():
    line = Line((1.0, 2.0), (4.0, 6.0))
    along, left = line.place((0.3, -7.0))
    assert line.point(along, left) == pytest.approx((0.3, -7.0))
    assert line.length == 5.0


def test_distance_counts_from_the_ends_beyond_them():
    line = Line((0.0, 0.0), (4.0, 0.0))
    assert line.distance((2.0, 3.0)) == 3.0
    assert line.distance((7.0, 4.0)) == 5.0
    assert line.distance((-3.0, 4.0)) == 5.0


def test_beside_gives_the_stretch_and_the_widest_gap():
    line = Line((0.0, 0.0), (10.0, 0.0))
    assert line.beside(Line((2.0, 0.0), (14.0, 1.2))) == pytest.approx((2.0, 10.0, 0.8))
    assert line.beside(Line((11.0, 0.0), (14.0, 0.0))) is None
    assert line.beside(Line((3.0, 0.0), (3.0, 5.0))) is None  # square to it: no extent along it


def test_crossing():
    line = Line((0.0, 0.0), (10.0, 0.0))
    assert line.crossing(Line((3.0, 4.0), (3.0, 2.0))) == pytest.approx(3.0)
    assert line.crossing(Line((3.0, 4.0), (5.0, 4.0))) is None


def test_area_far_from_the_origin_keeps_its_accuracy():
    far = tuple((x + 5e5, y + 4e6) for x, y in SQUARE)
    assert area(far) == 4.0
    assert area(far[::-1]) == -4.0
    assert area(SQUARE[:2]) == 0.0


def test_a_corner_on_the_dividing_line_stays_where_it_is():
    part = clipped(SQUARE, lambda p: p[0] - p[1] + 1e-14, 1e-12)
    assert part == ((0.0, 0.0), (2.0, 2.0), (0.0, 2.0))


def test_nothing_is_left_of_an_outline_wholly_beyond():
    assert clipped(SQUARE, lambda p: p[0] + 1.0, 1e-12) == ()
    assert clipped(SQUARE, lambda p: p[0] - 9.0, 1e-12) == SQUARE
    assert without_repeats([(0.0, 0.0), (0.0, 0.0), (1.0, 0.0), (0.0, 0.0)], 1e-12) == ()


def test_inside_is_negative_outside():
    assert inside(SQUARE, (0.5, 1.0)) == 0.5
    assert inside(SQUARE, (-0.25, 1.0)) == -0.25


def test_smallest_box_stands_along_an_edge():
    turned = [
        (math.cos(0.3) * x - math.sin(0.3) * y, math.sin(0.3) * x + math.cos(0.3) * y) for x, y in SQUARE
    ]
    assert smallest_box(turned) == pytest.approx((2.0, 2.0))
    assert smallest_box(((0.0, 0.0), (6.0, 0.0), (0.0, 4.0))) == pytest.approx((4.0, 6.0))


def test_gaps_shorter_than_one_place_are_none():
    assert gaps([(0.0, 1.0), (1.0 + 1e-7, 3.0)], 3.0, 1e-6) == ()
    assert gaps([(2.0, 2.5), (0.5, 1.0)], 3.0, 1e-6) == ((0.0, 0.5), (1.0, 2.0), (2.5, 3.0))
    assert gaps([], 3.0, 1e-6) == ((0.0, 3.0),)


def test_tolerance_grows_with_the_plan_only_beyond_a_kilometre():
    assert Tolerance.of([(0.0, 0.0), (60.0, 80.0)]).close == 1e-6
    assert Tolerance.of([(0.0, 0.0), (6000.0, 8000.0)]).close == pytest.approx(1e-5)
    assert Tolerance.of([]).close == 1e-6


def test_boxes_find_what_may_touch():
    boxes = Boxes([SQUARE, [(5.0, 5.0)], [(2.004, 1.0), (3.0, 1.0)]], 0.005)
    assert boxes.near([(2.0, 0.0), (2.0, 2.0)]) == [0, 2]
    assert boxes.near([(5.001, 5.0)]) == [1]
    assert Boxes([], 0.005).near([(0.0, 0.0)]) == []
