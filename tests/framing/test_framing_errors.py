"""Every fault of a plan, in whole messages."""

import pytest
from plans import Floor

from calcpack.job.errors import CalcpackError

GRID = {"x": {"A": 0.0, "B": 6.0, "C": 11.0}, "y": {"1": 0.0, "2": 4.0, "3": 8.0}}
MEET = (
    "each names the point as a support of its own; "
    "put a column or a wall there, or let one of them pass under it without naming it"
)


def problems(floor: Floor, **move) -> list[str]:
    with pytest.raises(CalcpackError) as caught:
        floor.frame(**move)
    return [str(problem) for problem in caught.value.problems]


def walled(free=(), **keys) -> Floor:
    return Floor(**GRID).panel("P1", "A1", "B2", **keys).walls_round("A1", "B1", "B2", "A2", free=free)


def test_no_support():
    assert problems(walled(free=range(4))) == [
        "floor.toml:1: panel P1: corners: the panel has no support: no beam and no wall runs along "
        "any of its "
        "edges; give a beam or a wall the same two points as an edge of the panel"
    ]


def test_edge_supported_in_part():
    floor = (
        walled(free=[0]).beam("B1", (1, 0), (2.5, 0)).wall("V", (4, 0), (5, 0)).columns_at((1, 0), (2.5, 0))
    )
    assert problems(floor) == [
        "floor.toml:1: panel P1: corners: the edge from A1 to B1 is supported only in part, by "
        "beam B1 and wall V: "
        "nothing runs along it from A1 to (1, 0) and from (2.5, 0) to (4, 0) and from (5, 0) to B1; "
        "support it along its whole length, or divide the panel where the support ends"
    ]


def test_a_cantilever_tip_under_part_of_an_edge():
    floor = walled(free=[0, 2]).beam("B1", (-3, 0), "A1", (2, 0), free_end=True).columns_at((-3, 0), "A1")
    assert problems(floor) == [
        "floor.toml:1: panel P1: corners: the edge from A1 to B1 is supported only in part, by beam B1: "
        "nothing runs along it from (2, 0) to B1; "
        "support it along its whole length, or divide the panel where the support ends"
    ]


def test_two_supports_on_one_stretch():
    floor = walled().beam("B1", (4, 0), (-2, 0)).columns_at((4, 0), (-2, 0))
    assert problems(floor) == [
        "floor.toml:1: panel P1: corners: the edge from A1 to B1 has two supports on the same stretch: "
        "beam B1 and wall W0 both run along it from A1 to (4, 0); "
        "take one of them away there, or let one end where the other begins"
    ]


def test_two_supports_under_a_shared_edge_are_said_for_both_panels():
    floor = walled().panel("P2", "B1", "C2").wall("X", "C1", "C2").beam("B1", "B1", "B2")
    found = problems(floor)
    assert [text[:33] for text in found] == [
        "floor.toml:1: panel P1: corners: ",
        "floor.toml:6: panel P2: corners: ",
    ]
    assert all("beam B1 and wall W1 both run along it" in text for text in found)


def test_beam_beside_an_edge():
    floor = walled(free=[0]).beam("B1", (0, 0.0003), (6, 0.0003)).columns_at((0, 0.0003), (6, 0.0003))
    assert problems(floor) == [
        "floor.toml:1: panel P1: corners: beam B1 runs 0.3 mm beside the edge from A1 to B1, too "
        "near to be clear of "
        "it and too far to carry it; give both the same points, or one of them more decimals"
    ]
    floor.units = "US"
    assert "beam B1 runs 0.011811 in beside" in problems(floor)[0]


def test_beam_beside_part_of_an_edge_is_not_also_a_partly_supported_edge():
    floor = walled(free=[0]).wall("V", (0, 0), (3, 0)).beam("B1", (3, 0.002), (6, 0.002))
    (only,) = problems(floor.columns_at((3, 0.002), (6, 0.002)))
    assert "beam B1 runs 2 mm beside the edge from A1 to B1" in only


def test_beam_and_wall_under_the_inside():
    floor = walled().beam("B1", (3, 0), (3, 4)).wall("V", (4, 1), (8, 1))
    assert problems(floor) == [
        "floor.toml:1: panel P1: corners: beam B1 runs under the inside of the panel, from (3, 0) to (3, 4); "
        "divide the panel along beam B1: a panel ends where it is supported",
        "floor.toml:1: panel P1: corners: wall V runs under the inside of the panel, from (4, 1) "
        "to (6 m, 1 m); "
        "divide the panel along wall V: a panel ends where it is supported",
    ]


def test_overlapping_panels():
    floor = walled().panel("P2", (4, 2), "C3").wall("X", (4, 2), (11, 2))
    (only,) = [text for text in problems(floor) if "overlap" in text]
    assert only == (
        "floor.toml:6: panel P2: corners: the panel and panel P1 overlap about (5 m, 3 m); "
        "every part of the floor belongs to one panel"
    )


def test_a_panel_given_twice_overlaps():
    floor = walled().panel("P2", "A1", "B2")
    assert problems(floor) == [
        "floor.toml:6: panel P2: corners: the panel and panel P1 overlap about (3 m, 2 m); "
        "every part of the floor belongs to one panel"
    ]


def test_cantilever_slab_with_nothing_beyond():
    assert problems(walled(free=[0, 1, 3])) == [
        "floor.toml:1: panel P1: corners: the panel is a cantilever slab off the edge from B2 to "
        "A2, its only "
        "support, and is not continuous over it: no panel lies on the other side; "
        "continue the slab over the whole of that edge, or support another edge"
    ]


def test_cantilever_slab_continuous_over_part_only():
    floor = walled().panel("K", (0, 4), (7, 5)).wall("X", "B2", (7, 4))
    assert problems(floor) == [
        "floor.toml:6: panel K: corners: the panel is a cantilever slab off the edge from A2 to "
        "(7, 4), its only "
        "support, and is not continuous over it: panel P1 covers only part of the other side; "
        "continue the slab over the whole of that edge, or support another edge"
    ]


@pytest.mark.parametrize("transfer", ["two-way", "one-way y"])
def test_a_given_transfer_does_not_hold_up_a_cantilever_slab(transfer):
    (only,) = problems(walled(free=[0, 1, 3], transfer=transfer))
    assert "is a cantilever slab off the edge from B2 to A2" in only


def test_strips_without_support_at_either_end():
    assert problems(walled(free=[1, 3], transfer="one-way x")) == [
        "floor.toml:1: panel P1: transfer: the strips between the edge from A2 to A1 and the edge "
        "from B1 to B2 have "
        "no support at either end; turn the span, or support one of the two edges"
    ]


def test_the_line_of_the_key_is_named_where_the_job_knows_it():
    floor = walled(free=[1, 3], transfer="one-way x")
    floor.lines["panel P1 transfer"] = 77
    assert problems(floor)[0].startswith("floor.toml:77: panel P1: transfer: ")


def test_beam_that_only_falls_over():
    floor = Floor(**GRID).beam("B1", "A1", "B1", free_end=True).columns_at("A1")
    floor.beam("B2", "A2", "B2", free_start=True, free_end=True)
    remedy = "it needs two supports, or one support with that end fixed"
    assert problems(floor) == [
        f"floor.toml:1: beam B1: line: the beam falls over: it is held only at A1, about which it "
        f"turns over; {remedy}",
        f"floor.toml:3: beam B2: line: the beam falls over: it is held nowhere; {remedy}",
    ]


def test_a_beam_balanced_on_one_middle_support_falls_over():
    floor = Floor(**GRID).beam("B1", "A1", "B1", "C1", free_start=True, free_end=True).columns_at("B1")
    assert "it is held only at B1, about which it turns over" in problems(floor)[0]


def test_nothing_under_an_end_and_under_a_middle_point():
    floor = Floor(**GRID).beam("B1", "A1", "B1", "C1").column("K", (0.004, 0)).columns_at("C1")
    assert problems(floor) == [
        "floor.toml:1: beam B1: line: nothing stands under A1: no column, no wall and no beam "
        "(column K misses it by 4 mm); support the beam there, or name that end in 'free'",
        "floor.toml:1: beam B1: line: nothing stands under B1: no column, no wall and no beam; "
        "support the beam there, or take the point out of its line",
    ]


def test_two_beams_that_stand_on_each_other_are_said_once():
    floor = Floor(**GRID).beam("B1", "A1", "B1").beam("B2", "B1", "C1").columns_at("A1", "C1")
    assert problems(floor) == [
        f"floor.toml:1: beam B1: line: nothing stands under B1, where the beam meets beam B2: {MEET}"
    ]


def test_two_candidates():
    floor = Floor().beam("S", (0, 0), (0, 5)).beam("G1", (-3, 0), (3, 0)).beam("G2", (-3, -3), (3, 3))
    floor.columns_at((0, 5), (-3, 0), (3, 0), (-3, -3), (3, 3))
    assert problems(floor) == [
        "floor.toml:1: beam S: line: beam G1 and beam G2 both pass under (0, 0): it is not clear "
        "which of them carries "
        "the beam; put a column there, or end one of them before it"
    ]


def test_ring_of_four():
    """A pinwheel: each beam starts on the last and runs past under the next."""
    floor = Floor()
    floor.beam("B1", (1, 1), (6, 1)).beam("B2", (4, 1), (4, 6))
    floor.beam("B3", (4, 3), (-1, 3)).beam("B4", (1, 3), (1, -2))
    floor.columns_at((6, 1), (4, 6), (-1, 3), (1, -2))
    assert problems(floor) == [
        "floor.toml:1: beam B1: line: the beams stand on each other in a ring: "
        "B1 stands on B4, B4 on B3, B3 on B2, B2 on B1; put a column or a wall under one of these points"
    ]


def test_two_rings_are_both_named_and_what_they_carry_is_not():
    floor = Floor()
    for mark, x in (("A", 0.0), ("B", 20.0)):
        floor.beam(f"{mark}1", (x + 1, 1), (x + 6, 1)).beam(f"{mark}2", (x + 4, 1), (x + 4, 6))
        floor.beam(f"{mark}3", (x + 4, 3), (x - 1, 3)).beam(f"{mark}4", (x + 1, 3), (x + 1, -2))
        floor.columns_at((x + 6, 1), (x + 4, 6), (x - 1, 3), (x + 1, -2))
    floor.beam("S", (5.5, 1), (5.5, 4)).columns_at((5.5, 4))
    found = problems(floor)
    assert len(found) == 2
    assert "A1 stands on A4, A4 on A3, A3 on A2, A2 on A1;" in found[0]
    assert "B1 stands on B4, B4 on B3, B3 on B2, B2 on B1;" in found[1]


def test_everything_wrong_is_said_at_once_from_top_to_bottom():
    floor = walled(free=range(4)).beam("B1", "A3", "C3")
    floor.panel("P2", "A1", "B2").beam("B3", "C1", "C2", free_end=True).column("K", "C1")
    found = problems(floor)
    lines = [int(text.split(":")[1]) for text in found]
    assert lines == sorted(lines)
    for words in ("no support", "overlap", "nothing stands under A3", "falls over"):
        assert any(words in text for text in found), words
