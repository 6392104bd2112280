"""What beams stand on, and the order they are solved in."""

import pytest
from plans import Floor

GRID = {"x": {"A": 0.0, "B": 6.0, "C": 11.0}, "y": {"1": 0.0, "2": 4.0, "3": 8.0}}


def stands_on(frame, mark):
    return [(bearing.at, bearing.kind, bearing.mark) for bearing in frame.beams[mark].bearings]


def test_column_goes_before_wall_and_wall_before_beam():
    floor = Floor().beam("B", (0, 0), (4, 0), (8, 0), (12, 0))
    floor.wall("W", (0, -1), (0, 1)).column("C", (0, 0))
    floor.wall("V", (4, 0), (4, 3)).beam("G", (4, -2), (4, 2)).columns_at((4, -2), (4, 2))
    floor.beam("H", (8, -2), (8, 2)).columns_at((8, -2), (8, 2), (12, 0))
    frame = floor.frame()
    assert stands_on(frame, "B") == [
        (0.0, "column", "C"), (4.0, "wall", "V"), (8.0, "beam", "H"), (12.0, "column", "C6"),
    ]  # fmt: skip
    assert [bearing.name for bearing in frame.beams["B"].bearings] == [
        "(0, 0)",
        "(4, 0)",
        "(8, 0)",
        "(12, 0)",
    ]


def test_the_first_wall_in_the_file_goes_before_the_next():
    floor = (
        Floor()
        .beam("B", (0, 0), (4, 0))
        .wall("W2", (0, 0), (0, 3))
        .wall("W1", (0, 0), (-3, 0))
        .columns_at((4, 0))
    )
    assert stands_on(floor.frame(), "B")[0] == (0.0, "wall", "W2")


def test_the_beam_that_passes_carries_the_beam_that_names_the_point():
    floor = Floor().beam("G", (0, 0), (8, 0)).beam("S", (3, 0), (3, 5)).columns_at((0, 0), (8, 0), (3, 5))
    frame = floor.frame()
    assert stands_on(frame, "S") == [(0.0, "beam", "G"), (5.0, "column", "C3")]
    assert stands_on(frame, "G") == [(0.0, "column", "C1"), (8.0, "column", "C2")]
    assert frame.order == ("S", "G")
    assert list(frame.beams) == ["G", "S"]


def test_a_free_tip_carries_what_stands_on_it():
    """A girder cantilevers out to the edge beam; the edge beam names the tip, the girder leaves it free."""
    floor = Floor().beam("G", (0, 0), (6, 0), (8, 0), free_end=True).beam("E", (8, 0), (8, 5))
    floor.columns_at((0, 0), (6, 0), (8, 5))
    frame = floor.frame()
    assert stands_on(frame, "E")[0] == (0.0, "beam", "G")
    assert [carried.at for carried in frame.beams["G"].carried] == [8.0]


def test_a_drop_in_span_hangs_between_two_tips():
    floor = Floor().beam("L", (0, 0), (6, 0), (7.5, 0), free_end=True).beam("M", (7.5, 0), (12, 0))
    floor.beam("R", (12, 0), (13.5, 0), (20, 0), free_start=True).columns_at(
        (0, 0), (6, 0), (13.5, 0), (20, 0)
    )
    frame = floor.frame()
    assert stands_on(frame, "M") == [(0.0, "beam", "L"), (4.5, "beam", "R")]
    assert frame.order == ("M", "L", "R")


def test_a_beam_a_hair_beyond_the_tip_that_carries_it_stands_on_the_tip():
    floor = Floor().beam("G", (0, 0), (6, 0), (8, 0), free_end=True).beam("E", (8 + 4e-7, 0), (8, 5))
    floor.columns_at((0, 0), (6, 0), (8, 5))
    (carried,) = floor.frame().beams["G"].carried
    assert carried.at == 8.0


def test_two_beams_that_both_name_a_column_share_it():
    floor = Floor().beam("B1", (0, 0), (4, 0)).beam("B2", (4, 0), (8, 0)).columns_at((0, 0), (4, 0), (8, 0))
    frame = floor.frame()
    assert stands_on(frame, "B1")[1][1:] == stands_on(frame, "B2")[0][1:] == ("column", "C2")


def test_order_is_the_jobs_among_those_free_to_go():
    floor = Floor()
    floor.beam("Z", (0, 0), (0, 10)).beam("Y", (10, 0), (10, 10))
    floor.columns_at((0, 0), (0, 10), (10, 0), (10, 10))
    for number in (3, 1, 2):
        floor.beam(f"S{number}", (0, 2.0 * number), (10, 2.0 * number))
    assert floor.frame().order == ("S3", "S1", "S2", "Z", "Y")


def test_a_cantilever_is_one_fixed_support():
    frame = (
        Floor().beam("K", (0, 0), (2, 0), fixed_start=True, free_end=True).wall("W", (0, -1), (0, 1)).frame()
    )
    assert stands_on(frame, "K") == [(0.0, "wall", "W")]
    assert frame.beams["K"].spans == (2.0,)


def test_columns_and_walls_passed_over_are_noted_not_used():
    floor = Floor(**GRID).beam("B", "A1", "C1").columns_at("A1", "C1", "B1").wall("W", (3, -1), (3, 1))
    floor.wall("V", (8, 0), (9, 0))
    frame = floor.frame()
    assert len(frame.beams["B"].bearings) == 2
    assert frame.notes == (
        "beam B does not rest on column C3, over which it passes at B1: the point is no support in its line",
        "beam B does not rest on wall W, over which it passes at (3 m, 0 m): the point is no "
        "support in its line",
        "beam B lies over wall V from (8, 0) to (9, 0): it rests on it only at the points in its line",
        "column C3 carries nothing",
        "wall W carries nothing",
        "wall V carries nothing",
    )


def test_a_free_tip_over_a_column_is_noted():
    floor = Floor(**GRID).beam("B", "A1", "B1", "C1", free_end=True).columns_at("A1", "B1", "C1")
    frame = floor.frame()
    assert frame.notes[0] == (
        "beam B does not rest on column C3, over which it passes at C1: the point is no support in its line"
    )


def test_crossing_beams_that_do_not_name_each_other_are_noted():
    floor = (
        Floor()
        .beam("B1", (0, 0), (4, 0))
        .beam("B2", (2, -2), (2, 2))
        .columns_at((0, 0), (4, 0), (2, -2), (2, 2))
    )
    assert floor.frame().notes == (
        "beams B1 and B2 cross at (2 m, 0 m) and neither rests on the other: no load passes there",
    )


@pytest.mark.parametrize(("end", "does"), [((0, 3), "twists"), ((2, 0), "bends")])
def test_an_end_fixed_to_a_beam_is_noted(end, does):
    floor = Floor().beam("G", (-4, 0), (0, 0), free_end=True, fixed_start=True).columns_at((-4, 0))
    floor.beam("K", (0, 0), end, fixed_start=True).column("E", end)
    assert floor.frame().notes == (
        f"beam K is fixed at its start to beam G: its end moment {does} that beam, which its sheet "
        "does not follow",
    )


def test_bearings_survive_conversion_from_feet():
    foot = 0.3048
    floor = Floor().beam("G", (0, 0), (33.1 * foot, 0)).columns_at((0, 0), (33.1 * foot, 0))
    for number in range(1, 11):
        x = sum([3.1 * foot] * number)  # added up, not multiplied
        floor.beam(f"S{number}", (3.1 * number * foot, 0), (3.1 * number * foot, 12.7 * foot))
        floor.column(f"E{number}", (x, 12.7 * foot))
    assert [carried.mark for carried in floor.frame().beams["G"].carried] == [f"S{n}" for n in range(1, 11)]
