"""Two-way panels: closed forms, dividing lines, free edges, and the cloud of points as second road."""

import math
from itertools import pairwise

import numpy as np
import pytest
from plans import Floor, cloud, depth_area, distances, feet, share, total, turned, within

from calcpack.framing import PanelTransfer

RECTANGLE = [(0.0, 0.0), (6.0, 0.0), (6.0, 4.5), (0.0, 4.5)]
OUTLINES = {
    "rectangle": RECTANGLE,
    "parallelogram": [(0.0, 0.0), (6.0, 0.0), (8.0, 4.0), (2.0, 4.0)],
    "triangle": [(0.0, 0.0), (7.0, 0.0), (2.0, 5.0)],
    "trapezoid": [(0.0, 0.0), (8.0, 0.0), (6.0, 4.0), (1.0, 4.0)],
    "pentagon": [(0.0, 0.0), (5.0, -1.0), (8.0, 2.0), (5.0, 6.0), (0.0, 5.0)],
    "hexagon": [(0.0, 1.0), (2.0, 0.0), (6.0, 0.5), (7.0, 3.0), (4.0, 5.0), (0.5, 4.0)],
}


def walled(corners, free=(), **keys) -> PanelTransfer:
    """A panel on walls, W0 under edge 0 and so on."""
    keys.setdefault("transfer", "two-way")
    return Floor().panel("P", *corners, **keys).walls_round(*corners, free=free).frame().panels["P"]


def test_square_gives_four_equal_triangles():
    panel = walled([(0.0, 0.0), (5.0, 0.0), (5.0, 5.0), (0.0, 5.0)])
    assert len(panel.shares) == 4
    for each in panel.shares:
        assert np.array(each.depth) == pytest.approx(np.array([(0.0, 0.0), (2.5, 2.5), (5.0, 0.0)]))
        assert each.area == pytest.approx(6.25)
        assert each.ends == ()


def test_rectangle_gives_triangles_and_trapezoids():
    short, long = 4.5, 6.0
    panel = walled(RECTANGLE)
    for mark in ("W0", "W2"):
        assert share(panel, mark).depth == ((0.0, 0.0), (2.25, 2.25), (3.75, 2.25), (6.0, 0.0))
        assert share(panel, mark).area == pytest.approx(short * (2 * long - short) / 4)
    for mark in ("W1", "W3"):
        assert share(panel, mark).depth == ((0.0, 0.0), (2.25, 2.25), (4.5, 0.0))
        assert share(panel, mark).area == pytest.approx(short**2 / 4)
    assert panel.sides == (4.5, 6.0)
    assert panel.side_ratio == 0.75


def test_pressure_times_depth_is_the_load():
    floor = Floor().panel("P", *RECTANGLE, live=3.0, dead=1.5, thickness=0.16, unit_weight=25.0)
    floor.walls_round(*RECTANGLE, free=[0]).beam("B", (6.0, 0.0), (0.0, 0.0)).columns_at((0, 0), (6, 0))
    beam = floor.frame().beams["B"]
    live = beam.loads["live"]
    assert [(load.start, load.end, load.first, load.last, load.source) for load in live] == [
        (0.0, 2.25, 0.0, 6.75, "P"),
        (2.25, 3.75, 6.75, 6.75, "P"),
        (3.75, 6.0, 6.75, 0.0, "P"),
    ]
    assert total(beam.loads["dead"]) == pytest.approx(5.5 * 4.5 * (12 - 4.5) / 4)


def test_triangle_divides_along_its_angle_bisectors():
    a, b, c = 4.0, 5.0, 3.0  # a right-angled triangle: the inscribed circle has radius 1
    panel = walled([(0.0, 0.0), (4.0, 0.0), (0.0, 3.0)])
    for mark, side in (("W0", a), ("W1", b), ("W2", c)):
        assert share(panel, mark).area == pytest.approx(side * 1.0 / 2)
        assert max(depth for _, depth in share(panel, mark).depth) == pytest.approx(1.0)


def test_regular_pentagon_gives_five_equal_shares():
    corners = [(math.cos(2 * math.pi * i / 5) * 3, math.sin(2 * math.pi * i / 5) * 3) for i in range(5)]
    panel = walled(corners)
    assert [each.area for each in panel.shares] == pytest.approx([panel.area / 5] * 5)
    apothem = 3 * math.cos(math.pi / 5)
    assert [each.depth[1][1] for each in panel.shares] == pytest.approx([apothem] * 5)


def test_parallelogram_bisects_its_angles():
    panel = walled(OUTLINES["parallelogram"])
    # the ridge stands at mid-depth 2 m; the bisector of the corner at the start rises at half its angle
    half = math.atan2(4.0, 2.0) / 2
    (_, (first, depth), *_) = share(panel, "W0").depth
    assert depth == pytest.approx(2.0)
    assert math.atan2(depth, first) == pytest.approx(half)
    assert all(each.ends == () for each in panel.shares)


def test_triangles_start_from_nothing_however_the_panel_stands():
    for degrees in range(0, 90, 7):
        panel = walled([turned(math.radians(degrees), (31.7, -12.9))(corner) for corner in RECTANGLE])
        assert {each.depth[end][1] for each in panel.shares for end in (0, -1)} == {0.0}
        assert [len(each.depth) for each in panel.shares] == [4, 3, 4, 3]
        assert all(each.ends == () for each in panel.shares)


def test_three_supported_edges_of_a_rectangle():
    """The free edge's strip goes to the sides: their depth stays at its full value up to it."""
    panel = walled(RECTANGLE, free=[1])
    assert share(panel, "W0").depth == ((0.0, 0.0), (2.25, 2.25), (6.0, 2.25))
    assert share(panel, "W2").depth == ((0.0, 2.25), (3.75, 2.25), (6.0, 0.0))
    assert share(panel, "W3").depth == ((0.0, 0.0), (2.25, 2.25), (4.5, 0.0))
    assert panel.supported == (True, False, True, True)


def test_a_region_that_leaves_its_edge_still_counts_with_its_foot():
    """Supported on the two short sides, a trapezoid's middle is nearest to neither's own length."""
    corners = [(0.0, 0.0), (10.0, 0.0), (8.0, 3.0), (5.0, 3.0)]
    panel = walled(corners, free=[0, 1])
    top, left = share(panel, "W2"), share(panel, "W3")
    # beyond (8, 3) lies the part of the panel whose foot is off the top edge
    assert top.ends[0][0] == 0.0  # the top edge starts at (8, 3) and runs left
    for each in (top, left):
        assert depth_area(each) + sum(size for _, size in each.ends) == pytest.approx(each.area)
    assert top.area + left.area == pytest.approx(panel.area)
    # the corner (10, 0) is 3 m from the top edge's line and 10 × 3/√34 = 5.1 m from the left one's
    assert within(top.region, np.array([[9.9, 0.02]])).all()


def test_sixty_degree_lines_stand_at_sixty_degrees_to_the_continuous_edge():
    floor = Floor(dividing_lines="60 at continuous edges")
    floor.panel("P", (0, 0), (6, 4.5)).panel("N", (-6, 0), (0, 4.5))
    floor.walls_round(*RECTANGLE).wall("N0", (-6, 0), (0, 0)).wall("N1", (-6, 4.5), (0, 4.5)).wall(
        "N2", (-6, 0), (-6, 4.5)
    )
    panel = floor.frame().panels["P"]
    assert panel.continuous == (False, False, False, True)
    left = share(panel, "W3")
    assert left.continuous
    # at both its corners the dividing line rises at 60° from the continuous edge
    (along, depth) = left.depth[1]
    assert math.degrees(math.atan2(depth, along)) == pytest.approx(60.0)
    # against the discontinuous edge across the panel it reaches √3 to 1
    assert max(depth for _, depth in left.depth) == pytest.approx(6 * math.sqrt(3) / (1 + math.sqrt(3)))
    # and at 30° from the discontinuous one it meets
    (along, depth) = share(panel, "W0").depth[1]
    assert math.degrees(math.atan2(depth, along)) == pytest.approx(30.0)
    # between discontinuous edges it stays at 45°
    bottom = share(panel, "W0").depth
    assert bottom[-1][0] - bottom[-2][0] == pytest.approx(bottom[-2][1])


def test_two_continuous_edges_meet_at_forty_five_degrees():
    floor = Floor(dividing_lines="60 at continuous edges")
    for i, j in ((0, 0), (1, 0), (0, 1)):
        corner = (4.0 * i, 4.0 * j)
        floor.panel(f"P{i}{j}", corner, (corner[0] + 4, corner[1] + 4))
    floor.walls_round((0, 0), (4, 0), (4, 4), (0, 4))
    floor.wall("E0", (4, 0), (8, 0)).wall("E1", (8, 0), (8, 4)).wall("E2", (8, 4), (4, 4))
    floor.wall("N0", (0, 4), (0, 8)).wall("N1", (0, 8), (4, 8)).wall("N2", (4, 8), (4, 4))
    panel = floor.frame().panels["P00"]
    assert panel.continuous == (False, True, True, False)
    east = {round(along, 9): depth for along, depth in share(panel, "W1").depth}
    north = share(panel, "W2").depth
    assert north[0] == (0.0, 0.0)
    # the corner between the continuous edges: equal reach, 45°
    along, depth = north[1]
    assert depth == pytest.approx(along)
    assert east[4.0] == 0.0


def test_an_edge_continuous_over_part_draws_like_a_discontinuous_one():
    floor = Floor(dividing_lines="60 at continuous edges")
    floor.panel("P", (0, 0), (6, 4.5)).panel("N", (-6, 0), (0, 3))
    floor.walls_round(*RECTANGLE).wall("N0", (-6, 0), (0, 0)).wall("N1", (-6, 3), (0, 3)).wall(
        "N2", (-6, 0), (-6, 3)
    )
    frame = floor.frame()
    assert frame.panels["P"].continuous == (False, False, False, False)
    assert frame.panels["N"].continuous == (False, True, False, False)
    assert share(frame.panels["P"], "W3").area == pytest.approx(4.5**2 / 4)


def test_sixty_degrees_at_an_obtuse_corner_puts_a_point_load_at_the_end():
    """Beyond 120° the dividing line leans out over the continuous edge's end."""
    corners = [(0.0, 0.0), (6.0, 0.0), (8.0, 2.0), (3.0, 5.0), (0.0, 5.0)]  # 135° at (6, 0)
    floor = Floor(dividing_lines="60 at continuous edges")
    floor.panel("P", *corners).walls_round(*corners)
    floor.panel("S", (0, -4), (6, 0)).wall("S0", (0, -4), (6, -4)).wall("S1", (6, -4), (6, 0)).wall(
        "S2", (0, -4), (0, 0)
    )
    panel = floor.frame().panels["P"]
    bottom = share(panel, "W0")
    assert bottom.continuous
    ((at, size),) = bottom.ends
    assert at == 6.0
    assert size > 0.01
    assert depth_area(bottom) + size == pytest.approx(bottom.area)


@pytest.mark.parametrize("continuous", [False, True], ids=["45", "60"])
@pytest.mark.parametrize("free", [(), (1,), (0, 2), (2,)], ids=["all", "free 1", "free 0 2", "free 2"])
@pytest.mark.parametrize("name", OUTLINES)
def test_against_a_cloud_of_points(name, free, continuous):
    """Every point of a fine mesh looks for its nearest edge; histograms of feet give the depth."""
    corners = [turned(0.35, (3.0, -2.0))(corner) for corner in OUTLINES[name]]
    free = [edge for edge in free if edge < len(corners)]
    if len(corners) - len(free) < 2:
        free = free[:1]
    floor = Floor(dividing_lines="60 at continuous edges" if continuous else "45")
    floor.panel("P", *corners, transfer="two-way").walls_round(*corners, free=free)
    beyond = 3 if len(corners) > 3 else 0  # a panel on the other side of this edge
    if continuous:
        a, b = corners[beyond], corners[(beyond + 1) % len(corners)]
        x, y = b[0] - a[0], b[1] - a[1]
        far = [(p[0] + y, p[1] - x) for p in (a, b)]
        floor.panel("N", a, far[0], far[1], b).wall("N0", a, far[0]).wall("N2", far[1], b)
    panel = floor.frame().panels["P"]
    step = math.sqrt(panel.area) / 300
    points = cloud(corners, step)
    reach = np.array([math.sqrt(3) if continuous and edge == beyond else 1.0 for edge in range(len(corners))])
    away = distances(corners, points) / reach
    away[:, list(free)] = np.inf
    nearest = away.argmin(axis=1)
    for each in panel.shares:
        mine = points[nearest == each.edge]
        assert len(mine) * step**2 == pytest.approx(each.area, rel=0.02)
        assert within(each.region, mine, -1e-9).all()
        assert not within(each.region, points[nearest != each.edge], 1e-9).any()
        length = math.dist(corners[each.edge], corners[(each.edge + 1) % len(corners)])
        foot = feet(corners, each.edge, mine)
        bins = np.linspace(0.0, length, 9)
        counted = np.histogram(foot, bins)[0] * step**2
        exact = [area_between(each.depth, a, b) for a, b in pairwise(bins)]
        assert counted == pytest.approx(exact, abs=0.006 * panel.area)
        beyond_ends = {0.0: np.sum(foot < 0) * step**2, length: np.sum(foot > length) * step**2}
        ends = dict(each.ends)
        for at, size in beyond_ends.items():
            there = sum(found for place, found in ends.items() if abs(place - at) < 1e-6)
            assert size == pytest.approx(there, abs=0.004 * panel.area)


def area_between(depth, start, end):
    """Area under a piecewise linear depth between two places, by fine sampling of its own."""
    along, values = np.array(depth).T
    places = np.linspace(start, end, 2001)
    middles = (places[1:] + places[:-1]) / 2
    return float(np.interp(middles, along, values, left=0.0, right=0.0).mean() * (end - start))
