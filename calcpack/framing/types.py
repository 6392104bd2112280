"""What framing hands on: how each panel drains, what each beam carries."""

from __future__ import annotations

from dataclasses import dataclass, field
from itertools import pairwise
from typing import Literal

from calcpack.job.model import Beam, Case, Job, Panel, Point
from calcpack.statics.loads import Load, PointLoad


@dataclass(frozen=True)
class Bearing:
    """What stands under one of a beam's points."""

    at: float  # [m] from the beam's start
    kind: Literal["column", "wall", "beam"]
    mark: str
    name: str  # the point, as the user says it


@dataclass(frozen=True)
class EdgeShare:
    """A part of a panel edge held by one beam or wall, and what drains to it.

    Parameters
    ----------
    edge : int
        Number of the panel's edge; it runs from corner ``edge`` to corner ``edge + 1``.
    carrier, carrier_kind : str
        The mark of what carries it, "beam" or "wall".
    region : tuple of points [m]
        The outline of what drains here (plan coordinates, counter-clockwise).
    depth : tuple of (along, depth) [m]
        The drained depth at right angles to the edge, piecewise linear in the distance along the
        carrier from its start; two entries may share a distance where the depth jumps. Pressure times
        depth is the load. One-way it is the reach, at right angles to the edge, of the strips that end there.
    ends : tuple of (along, area) [m], [m2]
        What drains to a point of the carrier from beyond the edge's end.
    area : float [m2]
        All that drains here.
    continuous : bool
        Panels cover the other side of the whole edge.
    """

    edge: int
    carrier: str
    carrier_kind: Literal["beam", "wall"]
    region: tuple[Point, ...]
    depth: tuple[tuple[float, float], ...]
    ends: tuple[tuple[float, float], ...]
    area: float
    continuous: bool


@dataclass(frozen=True)
class PanelTransfer:
    """How a panel hands its load on."""

    panel: Panel
    area: float  # [m2]
    sides: tuple[float, float]  # short and long side of the rectangle, or of the smallest box about it [m]
    rectangle: bool
    transfer: Literal["two-way", "one-way"]
    direction: Point | None  # unit vector of the span, one-way only
    reason: str  # why it goes this way, in words
    supported: tuple[bool, ...]  # edge by edge
    continuous: tuple[bool, ...]
    shares: tuple[EdgeShare, ...]

    @property
    def side_ratio(self) -> float:
        """Short over long side."""
        return self.sides[0] / self.sides[1]


@dataclass(frozen=True)
class CarriedReaction:
    """A beam that comes down on this one."""

    mark: str
    at: float  # [m]
    reactions: dict[Case, float]  # [kN], every span loaded


@dataclass(frozen=True)
class Placement:
    """One span of one beam loaded: what that puts on this beam."""

    case: Case
    beam: str
    span: int  # counted from 0
    loads: tuple[Load, ...]


@dataclass(frozen=True)
class FramedBeam:
    """A beam with everything it stands on and everything that stands on it.

    ``loads`` has every span loaded, case by case; ``placements`` splits the movable cases
    (those of ``PLACED_CASES``) span by span, the beams above included, and sums to ``loads``.
    ``reactions`` are those of ``loads``, unfactored, at each bearing in order.
    """

    beam: Beam
    length: float
    bearings: tuple[Bearing, ...]
    loads: dict[Case, tuple[Load, ...]]
    carried: tuple[CarriedReaction, ...]
    placements: tuple[Placement, ...]
    reactions: dict[Case, tuple[float, ...]]
    panels: tuple[str, ...]  # marks of the panels that drain to it

    @property
    def spans(self) -> tuple[float, ...]:
        """Lengths between the listed points, overhangs included [m]."""
        ends = sorted({0.0, self.length, *(bearing.at for bearing in self.bearings)})
        return tuple(b - a for a, b in pairwise(ends))

    @property
    def point_loads(self) -> dict[Case, tuple[PointLoad, ...]]:
        """The point loads among ``loads``."""
        return {
            case: tuple(load for load in loads if isinstance(load, PointLoad))
            for case, loads in self.loads.items()
        }


PLACED_CASES: tuple[Case, ...] = ("live", "roof_live")


@dataclass(frozen=True)
class Frame:
    """The whole floor, carried down to columns and walls."""

    job: Job
    panels: dict[str, PanelTransfer]
    beams: dict[str, FramedBeam]  # in the job file's order
    order: tuple[str, ...]  # in the order solved
    supports: dict[str, dict[Case, float]]  # column or wall mark -> case -> [kN]
    applied: dict[Case, float]  # [kN]
    cases: tuple[Case, ...]  # those that occur anywhere
    notes: tuple[str, ...] = field(default=())  # worth a second look, not wrong
