"""What holds for every plan: nothing is lost, nothing depends on where the plan stands."""

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from plans import CONCRETE, SECTION, Floor, cloud, depth_area, distances, moment_about, total, turned, within

from calcpack.framing import frame
from calcpack.framing.plane import area
from calcpack.statics import BeamLine, PointLoad
from calcpack.statics.stiffness import stiffness_check

lengths = st.floats(2.0, 9.0).map(lambda value: round(value, 2))


@st.composite
def convex(draw) -> list[tuple[float, float]]:
    """Corners on an ellipse, none close to the next: 3 to 7."""
    count = draw(st.integers(3, 7))
    steps = draw(st.lists(st.floats(0.4, 1.0), min_size=count, max_size=count))
    angles = np.cumsum(steps) / sum(steps) * 2 * math.pi
    wide, high = draw(st.floats(2.0, 8.0)), draw(st.floats(2.0, 8.0))
    move = turned(draw(st.floats(0.0, 6.3)), (draw(st.floats(-50.0, 50.0)), draw(st.floats(-50.0, 50.0))))
    return [move((wide * math.cos(angle), high * math.sin(angle))) for angle in angles]


@st.composite
def slabs(draw) -> tuple[Floor, list[tuple[float, float]], list[int]]:
    """A panel on walls, some edges free, some continued beyond."""
    corners = draw(convex())
    edges = range(len(corners))
    free = sorted(draw(st.sets(st.sampled_from(edges), max_size=len(corners) - 2)))
    beyond = draw(st.none() | st.sampled_from(edges))
    way = draw(st.sampled_from(["auto", "two-way"]))
    floor = Floor(dividing_lines=draw(st.sampled_from(["45", "60 at continuous edges"])))
    floor.panel("P", *corners, live=3.0, transfer=way).walls_round(*corners, free=free)
    if beyond is not None:
        a, b = corners[beyond], corners[(beyond + 1) % len(corners)]
        x, y = b[0] - a[0], b[1] - a[1]
        c, d = (b[0] + y, b[1] - x), (a[0] + y, a[1] - x)
        floor.panel("N", a, d, c, b, live=2.0).wall("N0", a, d).wall("N1", d, c).wall("N2", c, b)
    return floor, corners, free


@settings(max_examples=60, deadline=None)
@given(slabs())
def test_regions_tile_the_panel_and_hold_the_nearest_points(slab):
    floor, corners, free = slab
    panel = floor.frame().panels["P"]
    assert sum(each.area for each in panel.shares) == pytest.approx(panel.area, rel=1e-10)
    points = cloud(corners, math.sqrt(panel.area) / 25)
    uneven = floor.basis.dividing_lines != "45"
    reach = np.array([math.sqrt(3) if uneven and beyond else 1.0 for beyond in panel.continuous])
    if panel.transfer == "one-way":
        return  # a rectangle by chance
    away = distances(corners, points) / reach
    away[:, free] = np.inf
    nearest = away.argmin(axis=1)
    for each in panel.shares:
        assert area(each.region) == pytest.approx(each.area)
        assert depth_area(each) + sum(size for _, size in each.ends) == pytest.approx(each.area, rel=1e-10)
        assert all(depth >= 0 for _, depth in each.depth)
        assert within(each.region, points[nearest == each.edge], -1e-9).all()
        assert not within(each.region, points[nearest != each.edge], 1e-9).any()


@settings(max_examples=60, deadline=None)
@given(convex(), st.sampled_from(["x", "y"]), st.data())
def test_strips_tile_the_panel(corners, direction, data):
    free = data.draw(st.none() | st.integers(0, len(corners) - 1))
    floor = Floor().panel("P", *corners, transfer=f"one-way {direction}")
    floor.walls_round(*corners, free=[] if free is None else [free])
    result = floor.frame()
    panel = result.panels["P"]
    assert sum(each.area for each in panel.shares) == pytest.approx(panel.area, rel=1e-10)
    for each in panel.shares:
        assert each.ends == ()
        assert depth_area(each) == pytest.approx(each.area, rel=1e-10)
        assert area(each.region) == pytest.approx(each.area, rel=1e-10)
    assert sum(row["live"] for row in result.supports.values()) == pytest.approx(
        result.applied["live"], rel=1e-10
    )


@st.composite
def floors(draw) -> Floor:
    """Two bays by two with a continuous secondary across, on girders, sometimes with a balcony."""
    x = np.cumsum([0.0, draw(lengths), draw(lengths)])
    y = np.cumsum([0.0, draw(lengths), draw(lengths)])
    floor = Floor(
        x=dict(zip("ABC", map(float, x), strict=True)),
        y=dict(zip("123", map(float, y), strict=True)),
        dividing_lines=draw(st.sampled_from(["45", "60 at continuous edges"])),
        one_way_ratio=draw(st.sampled_from([1.5, 2.0])),
    )
    loads = st.floats(0.0, 8.0)
    for number, (a, b) in enumerate((("A1", "B2"), ("B1", "C2"), ("A2", "B3"), ("B2", "C3"))):
        floor.panel(
            f"P{number}", a, b, dead=draw(loads), live=draw(loads), roof_live=draw(loads), snow=draw(loads)
        )
    self_weight = {"section": SECTION, "material": CONCRETE}
    floor.beam("S", "A2", "B2", "C2", **self_weight)
    floor.beam("E", "A1", "B1", "C1").beam("T", "C3", "B3", "A3", **self_weight)
    own = [{"case": "live", "point": draw(loads), "at": draw(st.floats(0.0, 4.0))}]
    own += [{"case": "live", "line": draw(loads), "line_end": draw(loads), "start": 0.5}]
    for mark, line in (("G1", "A"), ("G2", "B"), ("G3", "C")):
        floor.beam(mark, f"{line}1", f"{line}3", loads=own, **self_weight)
    floor.columns_at("A1", "B1", "C1", "A3", "B3", "C3")
    if draw(st.booleans()):
        right, up = float(x[2]) + 1.2, float(y[1])
        floor.panel("K", "C1", (right, 0.0), (right, up), "C2")
    return floor


@settings(max_examples=40, deadline=None)
@given(floors())
def test_no_load_is_lost_on_its_way_down(floor):
    result = floor.frame()
    for case in result.cases:
        reached = sum(row[case] for row in result.supports.values())
        assert reached == pytest.approx(result.applied[case], rel=1e-9)
        panels = sum(panel.area * panel.panel.pressure(case) for panel in result.panels.values())
        assert result.applied[case] >= panels * (1 - 1e-12)
    for beam in result.beams.values():
        for case in result.cases:
            forces = [PointLoad(b.at, r) for b, r in zip(beam.bearings, beam.reactions[case], strict=True)]
            size = sum(abs(load.total) for load in beam.loads[case]) + 1e-12
            assert total(forces) == pytest.approx(total(beam.loads[case]), abs=1e-9 * size)
            moments = [moment_about(each, 0.0) for each in (forces, beam.loads[case])]
            assert moments[0] == pytest.approx(moments[1], abs=1e-9 * size * beam.length)


@settings(max_examples=20, deadline=None)
@given(floors())
def test_reactions_by_a_second_method(floor):
    """Direct stiffness with the same loads."""
    for beam in floor.frame().beams.values():
        line = BeamLine(beam.length, tuple(bearing.at for bearing in beam.bearings))
        for case, loads in beam.loads.items():
            if loads:
                again = stiffness_check(line, loads).reactions
                size = sum(abs(load.total) for load in loads) + 1e-12
                assert np.array(beam.reactions[case]) == pytest.approx(np.array(again), abs=1e-8 * size)


@settings(max_examples=30, deadline=None)
@given(floors())
def test_placements_add_up_to_all_spans_loaded(floor):
    for beam in floor.frame().beams.values():
        for case in ("live", "roof_live"):
            placed = [load for each in beam.placements if each.case == case for load in each.loads]
            everywhere = beam.loads.get(case, ())
            for place in (0.0, beam.length / 3):
                size = sum(abs(load.total) for load in placed) * beam.length + 1e-12
                assert moment_about(placed, place) == pytest.approx(
                    moment_about(everywhere, place), abs=1e-9 * size
                )
            assert len({(each.case, each.beam, each.span) for each in beam.placements}) == len(
                beam.placements
            )


@settings(max_examples=40, deadline=None)
@given(
    floors(), st.floats(0.0, 6.3), st.floats(-1e3, 1e3), st.floats(-1e3, 1e3), st.sampled_from([1.0, -1.0])
)
def test_a_plan_moved_turned_or_mirrored_carries_the_same(floor, angle, right, up, side):
    turn = turned(angle, (right, up))
    job = floor.job(move=lambda p: turn((side * p[0], p[1])), mirrored=side < 0)
    one, other = floor.frame(), frame(job)
    assert one.order == other.order
    for case, force in one.applied.items():
        assert other.applied[case] == pytest.approx(force, rel=1e-9)
        for mark, row in one.supports.items():
            assert other.supports[mark][case] == pytest.approx(row[case], abs=1e-8 * (force + 1e-12))
    for mark, panel in one.panels.items():
        assert other.panels[mark].transfer == panel.transfer
        assert other.panels[mark].sides == pytest.approx(panel.sides)
        areas = {each.carrier: each.area for each in panel.shares}
        assert {each.carrier: each.area for each in other.panels[mark].shares} == pytest.approx(areas)


@settings(max_examples=10, deadline=None)
@given(floors())
def test_same_job_same_frame(floor):
    assert floor.frame() == floor.frame()
