"""One-way panels: strips, their skew, free ends, cantilever slabs."""

import math
from itertools import pairwise

import numpy as np
import pytest
from plans import Floor, cloud, depth_area, share, turned

from calcpack.framing import PanelTransfer
from calcpack.framing.plane import area
from calcpack.statics import LineLoad

RECTANGLE = [(0.0, 0.0), (9.0, 0.0), (9.0, 4.0), (0.0, 4.0)]


def walled(corners, free=(), **keys) -> PanelTransfer:
    return Floor().panel("P", *corners, **keys).walls_round(*corners, free=free).frame().panels["P"]


def carriers(panel):
    return [each.carrier for each in panel.shares]


def test_long_rectangle_gives_half_its_width_to_each_long_side():
    panel = walled(RECTANGLE)
    assert panel.transfer == "one-way"
    assert panel.direction == (0.0, 1.0)
    assert carriers(panel) == ["W0", "W2"]
    assert share(panel, "W0").depth == ((0.0, 2.0), (9.0, 2.0))
    assert share(panel, "W0").region == ((0.0, 0.0), (9.0, 0.0), (9.0, 2.0), (0.0, 2.0))
    assert share(panel, "W2").region == ((9.0, 4.0), (0.0, 4.0), (0.0, 2.0), (9.0, 2.0))


def test_a_turned_rectangle_goes_by_its_own_sides():
    panel = walled([turned(0.5, (10.0, 3.0))(corner) for corner in RECTANGLE])
    assert panel.rectangle
    assert panel.sides == pytest.approx((4.0, 9.0))
    assert carriers(panel) == ["W0", "W2"]
    assert panel.direction == pytest.approx((-math.sin(0.5), math.cos(0.5)))
    assert np.array(share(panel, "W2").depth) == pytest.approx(np.array([(0.0, 2.0), (9.0, 2.0)]))


def test_a_turned_rectangle_given_to_the_millimetre_is_still_one():
    corners = [tuple(round(value, 3) for value in turned(0.5)(corner)) for corner in RECTANGLE]
    panel = walled(corners)
    assert panel.rectangle
    assert carriers(panel) == ["W0", "W2"]  # no sliver to the short sides
    assert sum(each.area for each in panel.shares) == pytest.approx(panel.area, rel=1e-12)
    for each in panel.shares:
        assert depth_area(each) == pytest.approx(each.area, rel=1e-12)
        assert [depth for _, depth in each.depth] == pytest.approx([2.0] * 2, abs=2e-3)


def test_given_direction_overrules_the_sides():
    panel = walled(RECTANGLE, transfer="one-way x")
    assert carriers(panel) == ["W1", "W3"]
    assert share(panel, "W1").depth == ((0.0, 4.5), (4.0, 4.5))


def test_skew_edge_spreads_the_strips_over_its_length():
    """Strips along y on a slope of 30°: half a strip's length, times the cosine of the skew."""
    rise = 6.0 * math.tan(math.radians(30))
    corners = [(0.0, 0.0), (6.0, 0.0), (6.0, 4.0 + rise), (0.0, 4.0)]
    panel = walled(corners, transfer="one-way y")
    bottom, top = share(panel, "W0"), share(panel, "W2")
    assert np.array(bottom.depth) == pytest.approx(np.array([(0.0, 2.0), (6.0, (4.0 + rise) / 2)]))
    cosine = math.cos(math.radians(30))
    length = 6.0 / cosine
    # the top edge runs from (6, 4 + rise) down to (0, 4)
    assert np.array(top.depth) == pytest.approx(
        np.array([(0.0, (4.0 + rise) / 2 * cosine), (length, 2.0 * cosine)])
    )
    assert bottom.area == pytest.approx(panel.area / 2)
    assert depth_area(top) == pytest.approx(panel.area / 2)
    assert carriers(panel) == ["W0", "W2"]


def test_strips_of_a_triangle_run_out_to_nothing():
    panel = walled([(0.0, 0.0), (6.0, 0.0), (2.0, 4.0)], transfer="one-way y")
    assert np.array(share(panel, "W0").depth) == pytest.approx(np.array([(0.0, 0.0), (2.0, 2.0), (6.0, 0.0)]))
    assert share(panel, "W1").area == pytest.approx(4.0)
    assert share(panel, "W2").area == pytest.approx(2.0)


def test_strips_that_run_out_to_nothing_end_at_zero_however_the_panel_stands():
    for degrees in range(5, 90, 7):
        move = turned(math.radians(degrees), (31.7, -12.9))
        panel = walled([move(corner) for corner in RECTANGLE[:3]], transfer="one-way y")
        ends = [each.depth[end][1] for each in panel.shares for end in (0, -1)]
        assert ends.count(0.0) == 4  # nothing, not next to nothing


def test_strips_with_one_free_end_give_all_to_the_other():
    """The strip's length jumps where its far end passes from a free to a supported edge."""
    corners = [(0.0, 0.0), (6.0, 0.0), (6.0, 4.0), (3.0, 4.0), (0.0, 3.0)]
    panel = walled(corners, free=[2], transfer="one-way y")
    depth = share(panel, "W0").depth
    assert depth == ((0.0, 1.5), (3.0, 2.0), (3.0, 4.0), (6.0, 4.0))
    assert share(panel, "W3").area == pytest.approx(10.5 / 2)
    assert share(panel, "W0").area == pytest.approx(10.5 / 2 + 12.0)
    assert area(share(panel, "W0").region) == pytest.approx(10.5 / 2 + 12.0)


def test_where_the_depth_jumps_one_load_ends_and_the_next_begins():
    corners = [(0.0, 0.0), (6.0, 0.0), (6.0, 4.0), (3.0, 4.0), (0.0, 3.0)]
    floor = Floor().panel("P", *corners, live=2.0, transfer="one-way y").walls_round(*corners, free=[0, 2])
    beam = floor.beam("B", (0, 0), (6, 0)).columns_at((0, 0), (6, 0)).frame().beams["B"]
    assert beam.loads["live"] == (LineLoad(0.0, 3.0, 3.0, 4.0, "P"), LineLoad(3.0, 6.0, 8.0, 8.0, "P"))


def test_strips_off_a_discontinuous_edge_are_noted():
    frame = Floor().panel("P", *RECTANGLE, transfer="one-way y").walls_round(*RECTANGLE, free=[2]).frame()
    assert [each.carrier for each in frame.panels["P"].shares] == ["W0"]
    assert frame.supports["W0"]["live"] == pytest.approx(36.0)
    assert frame.notes[0] == (
        "panel P: strips cantilever off the edge from (0, 0) to (9, 0), over which the slab does not continue"
    )


def test_cantilever_slab_puts_all_on_its_edge():
    floor = Floor().panel("K", (0, 4), (6, 5.5), live=2.0).panel("P", (0, 0), (6, 4))
    floor.walls_round((0, 0), (6, 0), (6, 4), (0, 4))
    panel = floor.frame().panels["K"]
    assert panel.transfer == "one-way"
    assert panel.direction == (0.0, 1.0)
    assert panel.reason == "supported on one side only: cantilever slab"
    (only,) = panel.shares
    assert only.carrier == "W2"
    assert only.depth == ((0.0, 1.5), (6.0, 1.5))
    assert floor.frame().notes == ()
    assert floor.frame().supports["W2"]["live"] == pytest.approx(6.0 * 1.5 * 2.0 + 4.0 * (12 - 4) / 4)


def test_a_cantilever_slab_wider_than_its_edge_loads_the_ends():
    """A balcony that flares: what lies beyond the ends comes down on them."""
    floor = Floor().panel("P", (0, 0), (6, 4)).panel("K", (0, 4), (6, 4), (7, 6), (-1, 6))
    floor.walls_round((0, 0), (6, 0), (6, 4), (0, 4))
    (only,) = floor.frame().panels["K"].shares
    # the wall starts at (6, 4) and runs left
    assert np.array(only.depth) == pytest.approx(np.array([(0.0, 2.0), (6.0, 2.0)]))
    assert np.array(only.ends) == pytest.approx(np.array([(0.0, 1.0), (6.0, 1.0)]))


def test_balanced_cantilever_slabs_are_noted():
    floor = Floor().panel("P", (0, 0), (6, 2)).panel("K", (0, 2), (6, 4)).wall("W", (0, 2), (6, 2))
    assert floor.frame().notes == (
        "panels P and K are both cantilever slabs off the edge from (6, 2) to (0, 2): they only "
        "balance each other",
    )


SKEW = [(0.0, 0.0), (7.0, -1.0), (9.0, 3.0), (4.0, 6.0), (1.0, 5.0)]


@pytest.mark.parametrize("direction", ["x", "y"])
@pytest.mark.parametrize("free", [(), (1,), (3,)])
def test_against_a_cloud_of_points(direction, free):
    """Every point of a fine mesh looks along its strip for the two ends and takes the nearer half."""
    panel = walled(SKEW, free=free, transfer=f"one-way {direction}")
    axis = np.array((1.0, 0.0) if direction == "x" else (0.0, 1.0))
    step = 0.02
    points = cloud(SKEW, step)
    outline = np.array(SKEW)
    along = np.roll(outline, -1, axis=0) - outline
    along /= np.linalg.norm(along, axis=1)[:, None]
    normal = np.stack([-along[:, 1], along[:, 0]], axis=1)
    rate = normal @ axis
    away = ((points[:, None, :] - outline[None]) * normal[None]).sum(axis=2)
    with np.errstate(divide="ignore"):
        reach = np.where(rate > 0, away / rate, np.inf), np.where(rate < 0, away / -rate, np.inf)
    edge = np.stack([each.argmin(axis=1) for each in reach])
    way = np.stack([each.min(axis=1) for each in reach])
    held = np.array([number not in free for number in range(len(SKEW))])[edge]
    taken = np.where(held.all(axis=0), way.argmin(axis=0), held.argmax(axis=0))
    mine = np.take_along_axis(edge, taken[None], axis=0)[0]
    for each in panel.shares:
        # the points the edge takes, moved along their strips onto the edge
        chosen = mine == each.edge
        assert chosen.sum() * step**2 == pytest.approx(each.area, rel=0.02)
        ended = points[chosen] + axis * np.where(taken[chosen] == 0, -way[0, chosen], way[1, chosen])[:, None]
        place = ((ended - outline[each.edge]) * along[each.edge]).sum(axis=1)
        length = math.dist(SKEW[each.edge], SKEW[(each.edge + 1) % len(SKEW)])
        bins = np.linspace(0.0, length, 7)
        counted = np.histogram(place, bins)[0] * step**2
        exact = [depth_between(each.depth, a, b) for a, b in pairwise(bins)]
        assert counted == pytest.approx(exact, abs=0.006 * panel.area)
    assert sum(each.area for each in panel.shares) == pytest.approx(panel.area, rel=1e-12)


def depth_between(depth, start, end):
    places = np.linspace(start, end, 4001)
    middles = (places[1:] + places[:-1]) / 2
    return float(sum(depth_at(depth, place) for place in middles) / len(middles) * (end - start))


def depth_at(depth, place):
    for (a, p), (b, q) in pairwise(depth):
        if a < place < b:
            return p + (place - a) / (b - a) * (q - p)
    return 0.0
