"""Floors for tests, said in few words, and a slow second road to what a panel drains."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from itertools import pairwise

import numpy as np

from calcpack.framing import EdgeShare, Frame, PanelTransfer, frame
from calcpack.job.model import (
    Basis,
    Beam,
    BeamLoad,
    Column,
    Header,
    Job,
    Material,
    Panel,
    Place,
    Point,
    Section,
    Submission,
    Wall,
)
from calcpack.statics import LineLoad, PointLoad

FILE = "floor.toml"
CONCRETE = Material(key="c30", kind="concrete", modulus=33e6, unit_weight=25.0)
SECTION = Section(key="rb1", shape="rectangle", area=0.3 * 0.5, inertia=0.3 * 0.5**3 / 12)


class Floor:
    """A job under construction: points are grid names or pairs; each thing stands on a line of its own."""

    def __init__(self, x: dict[str, float] | None = None, y: dict[str, float] | None = None, **basis: object):
        self.x, self.y = x or {}, y or {}
        self.basis = Basis(**basis)
        self.units = "SI"
        self.lines: dict[str, int] = {}
        self.panels: list[Panel] = []
        self.beams: list[Beam] = []
        self.columns: list[Column] = []
        self.walls: list[Wall] = []
        self._line = 0

    def point(self, point: str | Point) -> tuple[Point, str]:
        if isinstance(point, str):
            return (self.x[point[0]], self.y[point[1:]]), point
        return (float(point[0]), float(point[1])), f"({point[0]:g}, {point[1]:g})"

    def points(self, points: Iterable[str | Point]) -> tuple[tuple[Point, ...], tuple[str, ...]]:
        places, names = zip(*map(self.point, points), strict=True)
        return places, names

    def place(self) -> Place:
        self._line += 1
        return Place(file=FILE, line=self._line)

    def panel(self, mark: str, *corners: str | Point, **keys: object) -> Floor:
        """Two corners make a rectangle along the axes, three or more an outline (counter-clockwise)."""
        if len(corners) == 2:
            (ax, ay), (bx, by) = self.point(corners[0])[0], self.point(corners[1])[0]
            names = {self.point(corner) for corner in corners}
            grid = {(self.x[a], self.y[b]): a + b for a in self.x for b in self.y}
            places = ((ax, ay), (bx, ay), (bx, by), (ax, by))
            labels = tuple(dict(names).get(p, grid.get(p, f"({p[0]:g}, {p[1]:g})")) for p in places)
        else:
            places, labels = self.points(corners)
        keys.setdefault("live", 1.0)
        self.panels.append(Panel(mark=mark, corners=places, corner_names=labels, place=self.place(), **keys))
        return self

    def beam(
        self, mark: str, *points: str | Point, loads: Iterable[dict[str, object]] = (), **keys: object
    ) -> Floor:
        places, names = self.points(points)
        place = self.place()
        own = tuple(BeamLoad(place=self.place(), **load) for load in loads)
        choice = {"equivalent": "moment", "design_loads": "actual"}
        self.beams.append(
            Beam(mark=mark, points=places, point_names=names, loads=own, place=place, **choice, **keys)
        )
        return self

    def column(self, mark: str, at: str | Point) -> Floor:
        place, name = self.point(at)
        self.columns.append(Column(mark=mark, at=place, point_name=name, place=self.place()))
        return self

    def columns_at(self, *points: str | Point) -> Floor:
        for point in points:
            self.column(f"C{len(self.columns) + 1}", point)
        return self

    def wall(self, mark: str, start: str | Point, end: str | Point) -> Floor:
        places, names = self.points((start, end))
        self.walls.append(Wall(mark=mark, line=places, point_names=names, place=self.place()))
        return self

    def walls_round(self, *corners: str | Point, free: Iterable[int] = ()) -> Floor:
        """A wall along every edge of an outline but the free ones: W0, W1, ..."""
        for number, (a, b) in enumerate(zip(corners, (*corners[1:], corners[0]), strict=True)):
            if number not in free:
                self.wall(f"W{number}", a, b)
        return self

    def job(self, move: Callable[[Point], Point] | None = None, mirrored: bool = False) -> Job:
        """The job, all points moved; a mirroring move turns the outlines round too."""
        panels, beams, columns, walls = self.panels, self.beams, self.columns, self.walls
        if move is not None:
            turn = -1 if mirrored else 1
            panels = [
                p.model_copy(
                    update={
                        "corners": tuple(map(move, p.corners))[::turn],
                        "corner_names": p.corner_names[::turn],
                    }
                )
                for p in panels
            ]
            beams = [b.model_copy(update={"points": tuple(map(move, b.points))}) for b in beams]
            columns = [c.model_copy(update={"at": move(c.at)}) for c in columns]
            walls = [w.model_copy(update={"line": tuple(map(move, w.line))}) for w in walls]
        return Job(
            file=FILE, folder="", digest="", files={}, basis=self.basis, submission=Submission(),
            job=Header(number="1", title="Floor", date="2026-12-01", units=self.units),
            grid_x=self.x if move is None else {}, grid_y=self.y if move is None else {},
            panels=tuple(panels), beams=tuple(beams), columns=tuple(columns), walls=tuple(walls),
            lines=self.lines,
        )  # fmt: skip

    def frame(self, **move: object) -> Frame:
        return frame(self.job(**move))


def turned(angle: float, by: Point = (0.0, 0.0)) -> Callable[[Point], Point]:
    """A move of the plan: turned about the origin, then shifted."""
    c, s = math.cos(angle), math.sin(angle)
    return lambda p: (c * p[0] - s * p[1] + by[0], s * p[0] + c * p[1] + by[1])


def share(transfer: PanelTransfer, carrier: str) -> EdgeShare:
    (found,) = (each for each in transfer.shares if each.carrier == carrier)
    return found


def depth_area(share: EdgeShare) -> float:
    """What comes down along the edge [m2]."""
    return sum((b - a) * (p + q) / 2 for (a, p), (b, q) in pairwise(share.depth))


def total(loads: Iterable[LineLoad | PointLoad]) -> float:
    return sum(load.total for load in loads)


def moment_about(loads: Iterable[LineLoad | PointLoad], place: float) -> float:
    """Moment of loads about a place [kNm], positive where they lie beyond it."""
    result = 0.0
    for load in loads:
        if isinstance(load, PointLoad):
            result += load.force * (load.at - place)
            continue
        length = load.end - load.start  # a rectangle and a triangle
        result += load.first * length * (load.start + length / 2 - place)
        result += (load.last - load.first) * length / 2 * (load.start + 2 * length / 3 - place)
    return result


# the second road: a panel as a cloud of points, each looking for its nearest edge


def cloud(corners: Iterable[Point], step: float) -> np.ndarray:
    """Cell centres of a square mesh that lie in a convex outline."""
    outline = np.array(list(corners))
    low, high = outline.min(axis=0), outline.max(axis=0)
    # the mesh is set off by a fraction of the step so that no row falls on a dividing line
    xs = np.arange(low[0] + 0.4137 * step, high[0], step)
    ys = np.arange(low[1] + 0.5771 * step, high[1], step)
    points = np.stack(np.meshgrid(xs, ys), axis=-1).reshape(-1, 2)
    return points[(distances(outline, points) > 0).all(axis=1)]


def distances(corners: Iterable[Point], points: np.ndarray) -> np.ndarray:
    """Distance of every point to the line of every edge, inside positive."""
    outline = np.array(list(corners))
    along = np.roll(outline, -1, axis=0) - outline
    along /= np.linalg.norm(along, axis=1)[:, None]
    way = points[:, None, :] - outline[None, :, :]
    return along[None, :, 0] * way[..., 1] - along[None, :, 1] * way[..., 0]


def feet(corners: Iterable[Point], edge: int, points: np.ndarray) -> np.ndarray:
    """Distance along an edge of the foot of every point."""
    outline = np.array(list(corners))
    along = outline[(edge + 1) % len(outline)] - outline[edge]
    return (points - outline[edge]) @ (along / np.linalg.norm(along))


def within(region: Iterable[Point], points: np.ndarray, margin: float = 0.0) -> np.ndarray:
    """Which points lie in a convex region, by more than a margin (negative: by less than that outside)."""
    return (distances(region, points) > margin).all(axis=1)
