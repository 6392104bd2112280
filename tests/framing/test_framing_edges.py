"""What runs along the edges of panels."""

import math

import numpy as np
import pytest
from plans import Floor, depth_area, share, total, turned

from calcpack.framing.edges import panel_edges
from calcpack.framing.plan import Plan

GRID = {"x": {"A": 0.0, "B": 6.0, "C": 11.0}, "y": {"1": 0.0, "2": 4.0, "3": 8.0}}


def test_beams_end_to_end_share_a_triangle_at_a_joint_in_its_middle():
    corners = [(0.0, 0.0), (5.0, 0.0), (5.0, 4.0), (0.0, 4.0)]
    floor = Floor().panel("P", *corners, live=2.0).walls_round(*corners, free=[1, 3])
    floor.wall("L", (0, 0), (0, 4))
    floor.beam("B1", (5, 0), (5, 2)).beam("B2", (5, 4), (5, 2)).columns_at((5, 0), (5, 2), (5, 4))
    frame = floor.frame()
    panel = frame.panels["P"]
    assert share(panel, "B1").depth == ((0.0, 0.0), (2.0, 2.0))
    assert share(panel, "B2").depth == ((0.0, 0.0), (2.0, 2.0))  # it runs the other way
    assert share(panel, "B1").area == pytest.approx(2.0)
    assert total(frame.beams["B2"].loads["live"]) == pytest.approx(4.0)
    # the regions meet on the line through the joint, square to the edge
    assert max(y for _, y in share(panel, "B1").region) == pytest.approx(2.0)
    assert min(y for _, y in share(panel, "B2").region) == pytest.approx(2.0)


def test_a_joint_off_the_middle_and_a_wall_in_between():
    corners = [(0.0, 0.0), (6.0, 0.0), (6.0, 4.0), (0.0, 4.0)]
    floor = Floor().panel("P", *corners).walls_round(*corners, free=[0])
    floor.beam("B1", (0, 0), (1, 0)).wall("M", (4.5, 0), (1, 0)).beam("B2", (4.5, 0), (6, 0))
    floor.columns_at((0, 0), (6, 0))
    panel = floor.frame().panels["P"]
    assert share(panel, "B1").depth == ((0.0, 0.0), (1.0, 1.0))
    assert np.array(share(panel, "M").depth) == pytest.approx(
        np.array([(0.0, 1.5), (0.5, 2.0), (2.5, 2.0), (3.5, 1.0)])
    )
    assert share(panel, "B2").depth == ((0.0, 1.5), (1.5, 0.0))
    assert sum(each.area for each in panel.shares) == pytest.approx(24.0)


def test_end_loads_go_to_whoever_holds_that_end():
    """Free edges that flare: what lies beyond the long edge's ends goes to the two outer beams."""
    floor = Floor().panel("K", (0, 0), (6, 0), (7, 2), (-1, 2)).panel("P", (0, -4), (6, 0))
    floor.wall("W1", (0, -4), (6, -4)).wall("W2", (6, -4), (6, 0)).wall("W3", (0, -4), (0, 0))
    floor.beam("B1", (0, 0), (2, 0)).beam("B2", (2, 0), (4, 0)).beam("B3", (4, 0), (6, 0))
    floor.columns_at((2, 0), (4, 0))
    panel = floor.frame().panels["K"]
    assert [share(panel, mark).ends for mark in ("B1", "B2", "B3")] == [
        ((0.0, pytest.approx(1.0)),),
        (),
        ((2.0, pytest.approx(1.0)),),
    ]
    for each in panel.shares:
        assert depth_area(each) + sum(size for _, size in each.ends) == pytest.approx(each.area)
    assert share(panel, "B1").area == pytest.approx(5.0)
    assert share(panel, "B2").area == pytest.approx(4.0)


def test_a_beam_over_several_panels_and_a_cantilever_tip_carries_edges_where_they_are():
    floor = Floor(**GRID).panel("P1", "A1", "B2").panel("P2", "B1", "C2")
    floor.beam("G", "A2", "B2", "C2", free_end=True)
    for mark, a, b in (
        ("W1", "A1", "B1"),
        ("W2", "B1", "C1"),
        ("W3", "A1", "A2"),
        ("W4", "B1", "B2"),
        ("W5", "C1", "C2"),
    ):
        floor.wall(mark, a, b)
    frame = floor.frame()
    first, second = share(frame.panels["P1"], "G"), share(frame.panels["P2"], "G")
    assert (first.depth[0][0], first.depth[-1][0]) == (0.0, 6.0)
    assert (second.depth[0][0], second.depth[-1][0]) == (6.0, 11.0)
    assert frame.beams["G"].panels == ("P1", "P2")
    assert frame.beams["G"].spans == (6.0, 5.0)


def test_micrometres_apart_is_one_place_and_loses_no_load():
    off = 4e-7
    floor = Floor().panel("P1", (0, 0), (6, 4), live=3.0).panel("P2", (6 + off, off), (11, 4 - off), live=2.0)
    floor.beam("B", (0, off), (6 - off, 0), (11 + off, 0)).columns_at((off, 0), (6, off), (11, 0))
    floor.wall("T1", (0, 4), (6, 4)).wall("T2", (6, 4), (11, 4)).wall("L", (0, 0), (0, 4 + off))
    floor.wall("M", (6, 0), (6, 4)).wall("R", (11, 0), (11, 4))
    frame = floor.frame()
    assert sum(forces["live"] for forces in frame.supports.values()) == pytest.approx(
        frame.applied["live"], rel=1e-12
    )
    beam = frame.beams["B"]
    assert beam.loads["live"][0].start == 0.0
    places = [bearing.at for bearing in beam.bearings]
    assert places[1] in [load.start for load in beam.loads["live"]]


def test_neighbours_and_continuity_edge_by_edge():
    floor = Floor(**GRID).panel("P1", "A1", "B2").panel("P2", "B1", "C2").panel("P3", (0, 4), (3, 8))
    edges = panel_edges(Plan(floor.job()))
    assert [edge.neighbours for edge in edges[0]] == [(), ("P2",), ("P3",), ()]
    assert [edge.continuous for edge in edges[0]] == [False, True, False, False]
    assert not any(edge.supported for row in edges for edge in row)


def test_panels_that_touch_at_a_corner_are_no_neighbours():
    floor = Floor(**GRID).panel("P1", "A1", "B2").panel("P2", (6 - 1e-7, 4 - 1e-7), "C3")
    edges = panel_edges(Plan(floor.job()))
    assert all(edge.neighbours == () for row in edges for edge in row)


def test_a_break_that_falls_on_a_support_falls_on_it_exactly():
    corners = [(0.0, 0.0), (9.0, 0.0), (9.0, 4.1), (0.0, 4.1)]
    floor = Floor().panel("P", *corners, transfer="two-way").walls_round(*corners, free=[0])
    floor.beam("B", (0, 0), (2.05, 0), (6.95, 0), (9, 0)).columns_at((2.05, 0), (6.95, 0))
    for degrees in range(0, 90, 7):
        beam = floor.frame(move=turned(math.radians(degrees), (31.7, -12.9))).beams["B"]
        breaks = {place for load in beam.loads["live"] for place in (load.start, load.end)}
        assert breaks == {0.0, *(bearing.at for bearing in beam.bearings), beam.length}
        assert [len(each.loads) for each in beam.placements] == [1, 1, 1]


def test_a_beam_of_the_next_bay_that_overshoots_by_millimetres_is_no_fault():
    corners = [(0.0, 0.0), (6.0, 0.0), (6.0, 4.0), (0.0, 4.0)]
    floor = Floor().panel("P", *corners).walls_round(*corners)
    floor.beam("B", (-5, -0.001), (0.003, -0.001)).columns_at((-5, -0.001), (0.003, -0.001))
    assert [each.carrier for each in floor.frame().panels["P"].shares] == ["W0", "W1", "W2", "W3"]


def test_panels_that_meet_over_nothing_are_noted():
    floor = Floor(**GRID).panel("P1", "A1", "B2").panel("P2", "B1", "C2")
    floor.wall("W1", "A1", "C1").wall("W2", "A2", "C2")
    assert floor.frame().notes == (
        "panels P1 and P2 meet at the edge from B1 to B2 with nothing under it: it is a free edge of both",
    )
