"""How much of a slab goes to which side: dividing lines beside a code table and the elastic plate."""

from __future__ import annotations

import datetime
from collections.abc import Sequence
from functools import cache

from calcpack.equivalent import under_panel
from calcpack.framing import Frame, frame
from calcpack.job.model import Basis, Beam, Column, Header, Job, Panel, Place, Point, Submission, Wall
from calcpack.verification.comparison import Ours
from calcpack.verification.plate import plate
from calcpack.verification.tables import Row, Topic

HERE = Place(file="slab.toml")
BEYOND = 2.0  # depth of the slabs next door, in short sides
PART = 0.75  # of a side, on which the code's load stands


def stands(
    panels: Sequence[Panel],
    walls: Sequence[Wall],
    beams: Sequence[Beam],
    columns: Sequence[Column],
    lines: str,
) -> Frame:
    """A floor of panels, walls, beams and columns, carried down."""
    return frame(
        Job(
            file="slab.toml",
            folder="",
            digest="",
            files={},
            job=Header(number="1", title="Slab", date=datetime.date(2026, 12, 1)),
            submission=Submission(),
            basis=Basis(dividing_lines=lines, beam_self_weight=False),  # type: ignore[arg-type]
            grid_x={},
            grid_y={},
            panels=tuple(panels),
            beams=tuple(beams),
            columns=tuple(columns),
            walls=tuple(walls),
        )
    )


def rectangle(mark: str, low: Point, high: Point, pressure: float = 1.0) -> Panel:
    """A two-way panel between two corners."""
    corners = (low, (high[0], low[1]), high, (low[0], high[1]))
    names = tuple(f"({x:g}, {y:g})" for x, y in corners)
    return Panel(
        mark=mark, corners=corners, corner_names=names, live=pressure, transfer="two-way", place=HERE
    )


def wall(mark: str, start: Point, end: Point) -> Wall:
    """A wall under a side."""
    return Wall(mark=mark, line=(start, end), point_names=(str(start), str(end)), place=HERE)


@cache
def shares(ratio: float, continuous: str, lines: str) -> tuple[float, ...]:
    """Parts of a panel 1 by ``ratio`` on its sides in the order long, long, short, short.

    ``continuous``: which of them have a slab on the other side, as "1100".
    """
    sides: list[tuple[Point, Point]] = [
        ((0, 0), (ratio, 0)),
        ((0, 1), (ratio, 1)),
        ((0, 0), (0, 1)),
        ((ratio, 0), (ratio, 1)),
    ]
    next_door: list[tuple[Point, Point]] = [
        ((0, -BEYOND), (ratio, 0)),
        ((0, 1), (ratio, 1 + BEYOND)),
        ((-BEYOND, 0), (0, 1)),
        ((ratio, 0), (ratio + BEYOND, 1)),
    ]
    panels = [rectangle("P", (0, 0), (ratio, 1))]
    walls = [wall(f"side {number}", *side) for number, side in enumerate(sides)]
    for number, (low, high) in enumerate(next_door):
        if continuous[number] == "0":
            continue
        panels.append(rectangle(f"N{number}", low, high))
        outline = [low, (high[0], low[1]), high, (low[0], high[1])]
        for k in range(4):
            ends = (outline[k], outline[(k + 1) % 4])
            if set(ends) != set(sides[number]):
                walls.append(wall(f"N{number} {k}", *ends))
    found = stands(panels, walls, [], [], lines).panels["P"]
    area = {share.carrier: share.area for share in found.shares}
    return tuple(area[f"side {number}"] for number in range(4))


def coefficients(topic: Topic) -> dict[str, dict[str, list[float]]]:
    """The code's table: continuous sides -> side -> coefficient for each ratio."""
    found: dict[str, dict[str, list[float]]] = topic.data["coefficients"]
    return found


def ratios(topic: Topic) -> list[float]:
    """Side ratios of the code's table."""
    found: list[float] = topic.data["ratios"]
    return found


def tabulated(topic: Topic, continuous: str, column: int) -> tuple[float, ...]:
    """What the table sends to each side, in parts of q lx²: β times three quarters of the side's length."""
    table = coefficients(topic)[continuous]
    loads = []
    for number, held in enumerate(continuous):
        edge = "continuous" if held == "1" else "discontinuous"
        if number < 2:
            loads.append(table[f"long {edge}"][column] * PART * ratios(topic)[column])
        else:
            loads.append(table[f"short {edge}"][0] * PART)
    return tuple(loads)


def extremes(topic: Topic, continuous: str, lines: str, held: str) -> tuple[float, float]:
    """Least and most of our share over the table's, over all ratios, on (dis)continuous sides."""
    found = [
        ours / theirs
        for column, ratio in enumerate(ratios(topic))
        for ours, theirs, kind in zip(
            shares(ratio, continuous, lines), tabulated(topic, continuous, column), continuous, strict=True
        )
        if kind == held
    ]
    return min(found), max(found)


def alike_row(row: Row) -> Ours:
    """Coefficients of a long and a short side where all sides are held alike."""
    ratio = row.number("ratio")
    found = shares(ratio, row.text("continuous"), row.text("lines"))
    return {"βvx": found[0] / (PART * ratio), "βvy": found[2] / PART}


def differently_row(row: Row) -> Ours:
    """Ours over the table's where sides are held differently."""
    continuous, lines = row.text("continuous"), row.text("lines")
    on_continuous = extremes(row.topic, continuous, lines, "1")
    on_others = extremes(row.topic, continuous, lines, "0")
    return {
        "continuous least": on_continuous[0],
        "continuous most": on_continuous[1],
        "others least": on_others[0],
        "others most": on_others[1],
    }


def timoshenko_row(row: Row) -> Ours:
    """Deflection, reactions in the middle of the sides, corner force of the plate."""
    found = plate(row.number("ratio"))
    return {
        "deflection": found.deflection,
        "long side": found.on_long(0.0),
        "short side": found.on_short(0.5),
        "corner": found.corner,
    }


def roark_row(row: Row) -> Ours:
    """The plate's largest reaction."""
    return {"γ": plate(row.number("ratio")).on_long(0.0)}


def share_row(row: Row) -> Ours:
    """The rule's share of the load over the plate's, the corners' holding down taken off half and half."""
    ratio = row.number("ratio")
    by_plate = [side - plate(ratio).corner for side in plate(ratio).sides]
    by_rule = shares(ratio, "0000", "45")
    return {"long side": by_rule[0] / by_plate[0], "short side": by_rule[2] / by_plate[1]}


def moment_row(row: Row) -> Ours:
    """The rule's largest moment of a simple beam under a side over the plate's."""
    ratio = row.number("ratio")
    long, short = plate(ratio).beam_moments
    return {
        "long side": under_panel("moment", 1.0, 1.0, ratio, under_long=True) * ratio**2 / 8 / long,
        "short side": under_panel("moment", 1.0, 1.0, ratio, under_long=False) / 8 / short,
    }


def reaction_row(row: Row) -> Ours:
    """Along the long side of a panel 1 by 2: the plate's reaction and the rule's load."""
    place = row.number("place")
    return {"plate": plate(2.0).on_long(place - 1.0), "rule": min(place, 0.5)}


RECKONERS = {
    "sides held alike": alike_row,
    "sides held differently, 45": differently_row,
    "sides held differently, 60": differently_row,
    "the plate": timoshenko_row,
    "largest reaction of the plate": roark_row,
    "load on a side": share_row,
    "moment of a beam": moment_row,
    "reaction along a side": reaction_row,
}
