"""Which way a panel spans, and the reason in words."""

import math

import pytest
from plans import Floor, turned

from calcpack.framing import PanelTransfer


def rectangle(long, short, free=(), move=None, **basis) -> PanelTransfer:
    corners = [(0.0, 0.0), (long, 0.0), (long, short), (0.0, short)]
    floor = Floor(**basis).panel("P", *corners).walls_round(*corners, free=free)
    return floor.frame(move=move).panels["P"]


def test_ratio_of_exactly_two_is_one_way():
    panel = rectangle(9.0, 4.5)
    assert panel.transfer == "one-way"
    assert (
        panel.reason == "rectangle supported on four sides, long/short = 2 ≥ 2: spans one way, the short way"
    )


def test_ratio_just_under_two_is_two_way_and_reads_so():
    panel = rectangle(8.9999, 4.5)
    assert panel.transfer == "two-way"
    assert panel.reason == "rectangle supported on four sides, long/short = 1.99998 < 2: spans two ways"


@pytest.mark.parametrize("short", [7.0, 11.0, 13.7, 0.1])
def test_ratio_of_exactly_two_survives_conversion_from_feet_and_turning(short):
    foot = 0.3048
    for move in (None, turned(0.4, (123.4 * foot, -77.7 * foot))):
        assert rectangle(2 * short * foot, short * foot, move=move).transfer == "one-way"
        assert rectangle(1.99999 * short * foot, short * foot, move=move).transfer == "two-way"


def test_the_ratio_is_the_jobs():
    assert rectangle(6.0, 4.0, one_way_ratio=1.5).transfer == "one-way"
    panel = rectangle(6.0, 4.0, one_way_ratio=1.6)
    assert panel.reason == "rectangle supported on four sides, long/short = 1.5 < 1.6: spans two ways"


def test_two_opposite_sides_span_between_them_whatever_the_ratio():
    panel = rectangle(9.0, 3.0, free=[0, 2])
    assert (panel.transfer, panel.direction) == ("one-way", (1.0, 0.0))
    assert panel.reason == "rectangle supported on two opposite sides: spans one way, between them"
    assert rectangle(9.0, 3.0, free=[1, 3]).direction == (0.0, 1.0)


def test_two_sides_that_meet_and_three_sides_span_two_ways():
    panel = rectangle(9.0, 3.0, free=[0, 1])
    assert (panel.transfer, panel.direction) == ("two-way", None)
    assert panel.reason == "rectangle supported on two sides that meet: spans two ways"
    assert rectangle(9.0, 3.0, free=[2]).reason == "rectangle supported on three sides: spans two ways"


def test_what_is_no_rectangle_spans_two_ways():
    corners = [(0.0, 0.0), (12.0, 0.0), (13.0, 3.0), (1.0, 3.0)]
    floor = Floor().panel("P", *corners).walls_round(*corners)
    panel = floor.frame().panels["P"]
    assert panel.transfer == "two-way"
    assert panel.reason == "not a rectangle, supported on four sides: spans two ways"
    assert not panel.rectangle
    assert panel.sides == pytest.approx((3.0, 13.0))


def test_given_transfers_are_taken_as_given():
    corners = [(0.0, 0.0), (9.0, 0.0), (9.0, 3.0), (0.0, 3.0)]
    for given, reason, direction in (
        ("two-way", "two-way as given", None),
        ("one-way x", "one-way along x as given", (1.0, 0.0)),
        ("one-way y", "one-way along y as given", (0.0, 1.0)),
    ):
        panel = Floor().panel("P", *corners, transfer=given).walls_round(*corners).frame().panels["P"]
        assert (panel.reason, panel.direction) == (reason, direction)


def test_sixty_degrees_do_not_touch_one_way_panels():
    floor = Floor(dividing_lines="60 at continuous edges")
    floor.panel("P", (0, 0), (9, 3)).panel("N", (0, 3), (9, 6))
    floor.walls_round((0, 0), (9, 0), (9, 3), (0, 3))
    floor.wall("N1", (9, 3), (9, 6)).wall("N2", (0, 6), (9, 6)).wall("N3", (0, 3), (0, 6))
    frame = floor.frame()
    assert [each.depth for each in frame.panels["P"].shares] == [((0.0, 1.5), (9.0, 1.5))] * 2
    assert frame.panels["P"].continuous == (False, False, True, False)


@pytest.mark.parametrize("degrees", [0.0, 17.0, 45.0, 90.0, 213.0])
def test_turning_a_plan_changes_no_decision(degrees):
    move = turned(math.radians(degrees))
    assert rectangle(6.0, 4.0, move=move).transfer == "two-way"
    assert rectangle(6.0, 3.0, move=move).transfer == "one-way"
    assert rectangle(6.0, 4.0, free=[1, 3], move=move).transfer == "one-way"
