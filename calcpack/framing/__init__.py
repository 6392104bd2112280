"""The floor plan carried down: which panel loads which beam, and what reaches columns and walls."""

from __future__ import annotations

from calcpack.framing.bearings import bearings, check_falling, solving_order
from calcpack.framing.carry import carry_down
from calcpack.framing.notes import passed_over, twisting
from calcpack.framing.plan import Plan
from calcpack.framing.summary import describe
from calcpack.framing.transfer import transfers
from calcpack.framing.types import (
    PLACED_CASES,
    Bearing,
    CarriedReaction,
    EdgeShare,
    Frame,
    FramedBeam,
    PanelTransfer,
    Placement,
)
from calcpack.job.model import Job

__all__ = [
    "PLACED_CASES",
    "Bearing",
    "CarriedReaction",
    "EdgeShare",
    "Frame",
    "FramedBeam",
    "PanelTransfer",
    "Placement",
    "describe",
    "frame",
]


def frame(job: Job) -> Frame:
    """Carry a floor's loads from its panels through its beams down to columns and walls.

    Parameters
    ----------
    job : Job
        As read. Lengths in m, loads in kPa, kN/m and kN.

    Returns
    -------
    Frame
        Panels with what drains to each edge, beams with their loads, bearings and unfactored
        reactions [kN], the order they were solved in, and the totals per column and wall.

    Raises
    ------
    CalcpackError
        With every problem of the plan at once: panels without support or over each other, edges
        supported in part or twice, beams that stand on nothing, on two things or in a ring.

    Source: tributary areas by nearest edge or by strips (see ``draining``); reactions by the exact
    analysis of ``statics``.

    Examples
    --------
    A slab of 6 m by 4 m on four walls, 5 kPa: the short walls get triangles of 4 m².

    >>> from calcpack.job.model import Basis, Header, Job, Panel, Place, Submission, Wall
    >>> place = Place(file="job.toml")
    >>> corners, names = ((0.0, 0.0), (6.0, 0.0), (6.0, 4.0), (0.0, 4.0)), ("A1", "B1", "B2", "A2")
    >>> panel = Panel(mark="P1", corners=corners, corner_names=names, live=5.0, place=place)
    >>> walls = tuple(
    ...     Wall(mark=f"W{a}", line=(corners[a], corners[b]), point_names=(names[a], names[b]), place=place)
    ...     for a, b in [(0, 1), (1, 2), (2, 3), (3, 0)]
    ... )
    >>> job = Job(
    ...     file="job.toml", folder="", digest="", files={}, basis=Basis(), submission=Submission(),
    ...     job=Header(number="1", title="Store", date="2026-12-01"), grid_x={}, grid_y={}, beams=(),
    ...     columns=(), panels=(panel,), walls=walls,
    ... )
    >>> [round(forces["live"], 9) for forces in frame(job).supports.values()]
    [40.0, 20.0, 40.0, 20.0]
    """
    plan = Plan(job)
    panels, notes = transfers(plan)
    found = bearings(plan)
    check_falling(plan)
    order = solving_order(plan, found)
    plan.problems.tell()
    return carry_down(plan, panels, found, order, [*notes, *passed_over(plan), *twisting(plan, found)])
