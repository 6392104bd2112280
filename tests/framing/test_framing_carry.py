"""Loads of beams, reactions handed down, placements, supports."""

import numpy as np
import pytest
from plans import CONCRETE, SECTION, Floor, moment_about, total

from calcpack.framing import describe
from calcpack.framing.carry import by_span
from calcpack.statics import BeamLine, LineLoad, PointLoad, analyse

SELF = 0.15 * 25.0


def two_levels() -> Floor:
    """Two bays of slab on three secondaries; the middle one stands on two girders."""
    floor = Floor(x={"A": 0.0, "B": 8.0}, y={"1": 0.0, "2": 4.0, "3": 8.0})
    floor.panel("P1", "A1", "B2", dead=2.0, live=3.0).panel("P2", "A2", "B3", dead=2.0, live=5.0)
    floor.beam("S", "A2", "B2", section=SECTION, material=CONCRETE)
    floor.beam("G1", "A1", "A3").beam("G2", "B1", "B3").beam("E1", "A1", "B1").beam("E3", "A3", "B3")
    return floor.columns_at("A1", "B1", "A3", "B3")


def test_secondary_comes_down_on_its_girders():
    frame = two_levels().frame()
    secondary, girder = frame.beams["S"], frame.beams["G1"]
    # both panels have a ratio of 2: strips of 2 m from either side
    assert [(load.first, load.source) for load in secondary.loads["live"]] == [(6.0, "P1"), (10.0, "P2")]
    assert [(load.first, load.source) for load in secondary.loads["dead"]] == [
        (SELF, "self weight"), (4.0, "P1"), (4.0, "P2"),
    ]  # fmt: skip
    assert secondary.reactions["live"] == pytest.approx((64.0, 64.0))
    assert secondary.reactions["dead"] == pytest.approx((4 * (8.0 + SELF),) * 2)
    assert girder.loads["live"] == (PointLoad(4.0, pytest.approx(64.0), "S"),)
    (carried,) = girder.carried
    assert (carried.mark, carried.at) == ("S", 4.0)
    assert carried.reactions["live"] == pytest.approx(64.0)
    assert frame.supports["C1"]["live"] == pytest.approx(32.0 + 0.5 * 2 * 3.0 * 8)
    assert frame.applied == pytest.approx({"dead": 128.0 + 8 * SELF, "live": 256.0})


def test_three_levels():
    floor = Floor()
    floor.beam("G", (0, 0), (10, 0)).columns_at((0, 0), (10, 0))
    floor.beam("H", (4, 0), (4, 6)).column("E", (4, 6))
    floor.beam("S", (4, 2), (9, 2), loads=[{"case": "snow", "point": 10.0, "at": 1.0}]).column("F", (9, 2))
    frame = floor.frame()
    assert frame.order == ("S", "H", "G")
    assert frame.beams["S"].reactions["snow"] == pytest.approx((8.0, 2.0))
    assert frame.beams["H"].reactions["snow"] == pytest.approx((8.0 * 4 / 6, 8.0 * 2 / 6))
    assert frame.beams["G"].reactions["snow"] == pytest.approx((8.0 * 4 / 6 * 0.6, 8.0 * 4 / 6 * 0.4))
    assert all(beam.placements == () for beam in frame.beams.values())  # snow is one set


def test_continuous_secondary_reaches_its_girders_span_by_span():
    """Two equal spans under live load w: 3/8, 10/8, 3/8 of wL; one span loaded: 7/16, 5/8, -1/16."""
    floor = Floor()
    for number, x in enumerate((0.0, 6.0, 12.0)):
        floor.beam(f"G{number}", (x, -3), (x, 3)).column(f"L{number}", (x, -3)).column(f"R{number}", (x, 3))
    floor.beam("S", (0, 0), (6, 0), (12, 0), loads=[{"case": "live", "line": 8.0}])
    frame = floor.frame()
    load = 8.0 * 6.0
    assert frame.beams["S"].reactions["live"] == pytest.approx((3 / 8 * load, 10 / 8 * load, 3 / 8 * load))
    assert [(each.beam, each.span) for each in frame.beams["S"].placements] == [("S", 0), ("S", 1)]
    assert [each.loads for each in frame.beams["S"].placements] == [
        (LineLoad(0.0, 6.0, 8.0, 8.0, "load 1"),), (LineLoad(6.0, 12.0, 8.0, 8.0, "load 1"),),
    ]  # fmt: skip
    middle, first = frame.beams["G1"], frame.beams["G0"]
    assert middle.loads["live"] == (PointLoad(3.0, pytest.approx(10 / 8 * load), "S"),)
    assert [(each.beam, each.span) for each in middle.placements] == [("S", 0), ("S", 1)]
    for each in middle.placements:
        assert each.loads == (PointLoad(3.0, pytest.approx(5 / 8 * load), "S"),)
    # the worst on the outer girder is the near span alone, more than all spans loaded
    forces = [each.loads[0].force for each in first.placements]
    assert forces == pytest.approx([7 / 16 * load, -1 / 16 * load])
    assert max(forces) > frame.beams["S"].reactions["live"][0]


def test_placements_that_arrive_by_several_routes_are_one():
    """One secondary on two beams that both stand on the same girder."""
    floor = Floor()
    floor.beam("G", (0, 0), (12, 0)).columns_at((0, 0), (12, 0))
    floor.beam("H1", (3, 0), (3, 6)).beam("H2", (9, 0), (9, 6)).columns_at((3, 6), (9, 6))
    floor.beam("S", (3, 3), (9, 3), loads=[{"case": "live", "line": 4.0}])
    girder = floor.frame().beams["G"]
    (only,) = girder.placements
    assert (only.case, only.beam, only.span) == ("live", "S", 0)
    assert only.loads == (PointLoad(3.0, pytest.approx(6.0), "H1"), PointLoad(9.0, pytest.approx(6.0), "H2"))
    assert girder.loads["live"] == only.loads


def test_placements_are_ordered_by_case_then_beam_then_span():
    floor = Floor()
    floor.beam(
        "G", (0, 0), (5, 0), (9, 0), loads=[{"case": "live", "line": 1.0}, {"case": "roof_live", "line": 2.0}]
    )
    floor.columns_at((0, 0), (5, 0), (9, 0), (3, 4))
    floor.beam("A", (3, 0), (3, 4), loads=[{"case": "live", "line": 3.0}])
    found = [(each.case, each.beam, each.span) for each in floor.frame().beams["G"].placements]
    assert found == [
        ("live", "G", 0), ("live", "G", 1), ("live", "A", 0), ("roof_live", "G", 0), ("roof_live", "G", 1),
    ]  # fmt: skip


def test_own_loads_keep_the_files_numbering_across_cases():
    loads = [
        {"case": "dead", "line": 7.5},
        {"case": "live", "point": 12.0, "at": 2.1},
        {"case": "dead", "line": 2.0, "line_end": 6.0, "start": 1.0, "end": 3.0},
    ]
    frame = Floor().beam("B", (0, 0), (6, 0), loads=loads).columns_at((0, 0), (6, 0)).frame()
    assert frame.beams["B"].loads["dead"] == (
        LineLoad(0.0, 6.0, 7.5, 7.5, "load 1"), LineLoad(1.0, 3.0, 2.0, 6.0, "load 3"),
    )  # fmt: skip
    assert frame.beams["B"].loads["live"] == (PointLoad(2.1, 12.0, "load 2"),)
    assert frame.beams["B"].point_loads["live"] == (PointLoad(2.1, 12.0, "load 2"),)


@pytest.mark.parametrize(
    ("keys", "basis", "expected"),
    [
        ({"section": SECTION, "material": CONCRETE}, {}, {"dead": 6 * SELF}),
        ({"section": SECTION, "material": CONCRETE}, {"beam_self_weight": False}, {}),
        ({"section": SECTION}, {}, {}),
        ({"material": CONCRETE}, {}, {}),
    ],
)
def test_self_weight_needs_section_material_and_the_basis(keys, basis, expected):
    frame = Floor(**basis).beam("B", (0, 0), (6, 0), **keys).columns_at((0, 0), (6, 0)).frame()
    assert frame.applied == pytest.approx(expected)
    assert {case: total(loads) for case, loads in frame.beams["B"].loads.items()} == pytest.approx(expected)


def test_cases_are_those_that_occur_anywhere_and_every_beam_has_them_all():
    floor = (
        Floor().beam("B1", (0, 0), (6, 0), loads=[{"case": "snow", "line": 1.0}]).beam("B2", (0, 3), (6, 3))
    )
    floor.columns_at((0, 0), (6, 0), (0, 3), (6, 3))
    frame = floor.frame()
    assert frame.cases == ("snow",)
    assert frame.beams["B2"].loads == {"snow": ()}
    assert frame.beams["B2"].reactions == {"snow": (0.0, 0.0)}
    assert frame.supports["C4"] == {"snow": 0.0}
    assert Floor().beam("B", (0, 0), (6, 0)).columns_at((0, 0), (6, 0)).frame().cases == ()


def test_loads_are_divided_at_supports_and_points_over_them_go_to_the_span_before():
    loads = [
        LineLoad(1.0, 7.0, 0.0, 12.0, "a"), PointLoad(0.0, 1.0), PointLoad(4.0, 2.0), PointLoad(8.0, 3.0),
    ]  # fmt: skip
    first, second = by_span(loads, (0.0, 4.0, 8.0))
    assert first == [LineLoad(1.0, 4.0, 0.0, 6.0, "a"), PointLoad(0.0, 1.0), PointLoad(4.0, 2.0)]
    assert second == [LineLoad(4.0, 7.0, 6.0, 12.0, "a"), PointLoad(8.0, 3.0)]


def test_a_panel_load_over_a_support_is_placed_in_two_spans():
    corners = [(0.0, 0.0), (10.0, 0.0), (10.0, 6.0), (0.0, 6.0)]
    floor = Floor().panel("P", *corners, live=2.0).walls_round(*corners, free=[0])
    floor.beam("B", (0, 0), (4, 0), (10, 0)).column("C", (4, 0))
    beam = floor.frame().beams["B"]
    assert [(load.start, load.end) for load in beam.loads["live"]] == [(0.0, 3.0), (3.0, 7.0), (7.0, 10.0)]
    spans = [
        [(load.start, load.end, load.first, load.last) for load in each.loads] for each in beam.placements
    ]
    assert spans == [
        [(0.0, 3.0, 0.0, 6.0), (3.0, 4.0, 6.0, 6.0)],
        [(4.0, 7.0, 6.0, 6.0), (7.0, 10.0, 6.0, 0.0)],
    ]


def test_an_overhang_is_a_span_of_its_own():
    floor = Floor().beam("B", (0, 0), (6, 0), (8, 0), free_end=True, loads=[{"case": "live", "line": 5.0}])
    beam = floor.columns_at((0, 0), (6, 0)).frame().beams["B"]
    assert beam.spans == (6.0, 2.0)
    assert [each.span for each in beam.placements] == [0, 1]
    assert beam.reactions["live"] == pytest.approx((5 * 8 * 2 / 6, 5 * 8 * 4 / 6))


def test_uplift_is_handed_down_and_noted():
    floor = Floor().beam("G", (0, -2), (0, 2)).columns_at((0, -2), (0, 2), (2, 0))
    floor.beam("B", (0, 0), (2, 0), (8, 0), free_end=True, loads=[{"case": "dead", "line": 3.0}])
    frame = floor.frame()
    assert frame.beams["G"].loads["dead"] == (PointLoad(2.0, pytest.approx(-24.0), "B"),)
    assert frame.supports["C3"]["dead"] == pytest.approx(48.0)
    assert frame.notes == (
        "beam G lifts off at (0, -2) under dead load: column C1 has to hold it down",
        "beam G lifts off at (0, 2) under dead load: column C2 has to hold it down",
        "beam B lifts off at (0, 0) under dead load: beam G has to hold it down",
    )


@pytest.mark.parametrize("size", [0.7, 1.1, 2.3, 3.7, 5.9])
def test_a_reaction_of_nothing_is_no_uplift(size):
    """The overhang just balances the span: P L/2 = w a²/2."""
    loads = [
        {"case": "dead", "point": size, "at": 3.0},
        {"case": "dead", "line": 1.5 * size, "start": 6.0},
    ]
    floor = Floor().beam("B", (0, 0), (6, 0), (8, 0), free_end=True, loads=loads).columns_at((0, 0), (6, 0))
    frame = floor.frame()
    assert frame.supports["C1"]["dead"] == pytest.approx(0.0, abs=1e-12)
    assert frame.notes == ()


def test_a_load_straight_over_a_support_goes_into_it():
    loads = [{"case": "live", "point": 9.0, "at": 6.0}]
    floor = Floor().beam("G", (0, -2), (0, 2)).columns_at((6, 0), (0, -2), (0, 2))
    frame = floor.beam("B", (0, 0), (6, 0), loads=loads).frame()
    assert frame.supports["C1"]["live"] == 9.0
    assert frame.beams["G"].loads["live"] == ()  # no load of nothing
    assert frame.beams["G"].placements == ()


def test_walls_get_what_the_slab_puts_on_them_directly():
    corners = [(0.0, 0.0), (6.0, 0.0), (6.0, 4.0), (0.0, 4.0)]
    floor = Floor().panel("P", *corners, dead=1.0, live=2.0, roof_live=0.5, snow=0.25).walls_round(*corners)
    frame = floor.frame()
    assert frame.supports["W0"] == pytest.approx({"dead": 8.0, "live": 16.0, "roof_live": 4.0, "snow": 2.0})
    assert frame.applied == {"dead": 24.0, "live": 48.0, "roof_live": 12.0, "snow": 6.0}


def test_reactions_are_in_equilibrium_and_placements_add_up():
    frame = two_levels().frame()
    for beam in frame.beams.values():
        for case in frame.cases:
            loads = beam.loads[case]
            forces = [PointLoad(b.at, r) for b, r in zip(beam.bearings, beam.reactions[case], strict=True)]
            assert total(loads) == pytest.approx(total(forces))
            assert moment_about(loads, 0.0) == pytest.approx(moment_about(forces, 0.0))
        line = BeamLine(beam.length, tuple(b.at for b in beam.bearings))
        placed = [load for each in beam.placements for load in each.loads]
        one, other = (analyse(line, [loads]).curve("moment").values(np.linspace(0.1, beam.length - 0.1, 7))
                      for loads in (placed, beam.loads["live"]))  # fmt: skip
        assert one == pytest.approx(other)


def test_summary_is_plain_data_in_words():
    frame = two_levels().frame()
    rows = describe(frame)
    assert list(rows) == ["panels", "beams", "order", "supports", "applied", "cases", "notes"]
    assert rows["panels"][0] == {
        "mark": "P1", "sides": [4.0, 8.0], "ratio": 2.0, "rectangle": True, "area": 32.0,
        "transfer": "one-way", "direction": [0.0, 1.0],
        "reason": "rectangle supported on four sides, long/short = 2 ≥ 2: spans one way, the short way",
        "pressures": {"dead": 2.0, "live": 3.0},
        "shares": [
            {"edge": "A1–B1", "carrier": "E1", "kind": "beam", "area": 16.0, "continuous": False},
            {"edge": "B2–A2", "carrier": "S", "kind": "beam", "area": 16.0, "continuous": True},
        ],
    }  # fmt: skip
    girder = rows["beams"][1]
    assert girder["bearings"] == [
        {"at": 0.0, "point": "A1", "kind": "column", "mark": "C1"},
        {"at": 8.0, "point": "A3", "kind": "column", "mark": "C3"},
    ]
    assert (girder["mark"], girder["carries"], girder["spans"]) == ("G1", ["S"], [8.0])
    assert girder["totals"]["live"] == pytest.approx(64.0)
    assert girder["reactions"]["live"] == pytest.approx([32.0, 32.0])
    assert rows["order"] == ["S", "G1", "G2", "E1", "E3"]
    assert describe(two_levels().frame()) == rows
