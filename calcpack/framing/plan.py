"""The job seen as a plan: its lines, the names of its points, and how its faults are reported."""

from __future__ import annotations

from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from calcpack.framing.plane import Boxes, Line, Tolerance, edges
from calcpack.job.entries import Problems
from calcpack.job.errors import Problem
from calcpack.job.model import Beam, Column, Job, Panel, Point, Wall
from calcpack.job.units import factor

Thing = Panel | Beam | Column | Wall
NEARLY = 0.005
"""Two lines no further apart than this [m], yet not one, are a slip of the pen."""


class Plan:
    """A job's geometry, ready to be looked up.

    Parameters
    ----------
    job : Job
        Outlines convex, beams straight with their points in order, loads on them, as the reader
        makes sure.

    Attributes
    ----------
    tolerance : Tolerance
    panels : tuple of tuples of Line
        The edges of each panel, in the job's order.
    beams : dict of mark -> Line
        From a beam's first point to its last.
    walls : dict of mark -> Line
    problems : Problems
        What was found wrong so far.
    """

    def __init__(self, job: Job) -> None:
        self.job = job
        self.problems = Problems()
        self.tolerance = Tolerance.of(_points(job))
        self.panels = tuple(edges(panel.corners) for panel in job.panels)
        self.by_mark: dict[str, Beam] = {beam.mark: beam for beam in job.beams}
        self.rank = {beam.mark: number for number, beam in enumerate(job.beams)}
        self.rank_of_panel = {panel.mark: number for number, panel in enumerate(job.panels)}
        self.beams = {beam.mark: Line(beam.points[0], beam.points[-1]) for beam in job.beams}
        self.walls = {wall.mark: Line(*wall.line) for wall in job.walls}
        self.panel_boxes = Boxes((panel.corners for panel in job.panels), NEARLY)
        self._beam_marks, self._wall_marks = list(self.beams), list(self.walls)
        self._beam_boxes = Boxes(((line.start, line.end) for line in self.beams.values()), NEARLY)
        self._wall_boxes = Boxes(((line.start, line.end) for line in self.walls.values()), NEARLY)
        self._column_boxes = Boxes(([column.at] for column in job.columns), NEARLY)

    def beams_near(self, *points: Point) -> list[str]:
        """Marks of the beams whose box comes near that about these points, in the job's order."""
        return [self._beam_marks[number] for number in self._beam_boxes.near(points)]

    def walls_near(self, *points: Point) -> list[str]:
        """Marks of the walls likewise."""
        return [self._wall_marks[number] for number in self._wall_boxes.near(points)]

    def columns_near(self, *points: Point) -> list[Column]:
        """The columns likewise."""
        return [self.job.columns[number] for number in self._column_boxes.near(points)]

    def places(self, beam: Beam) -> tuple[float, ...]:
        """Distance of each of a beam's points from its start [m]; first and last are the ends exactly."""
        line = self.beams[beam.mark]
        return (0.0, *(line.place(point)[0] for point in beam.points[1:-1]), line.length)

    # words

    def name(self, point: Point) -> str:
        """A point as the user says it: a grid point, or any name given to it, or its coordinates."""
        places, names = self._names
        near = np.hypot(*(places - point).T) <= self.tolerance.close
        if near.any():
            return names[int(near.argmax())]
        return f"({self.length(point[0])}, {self.length(point[1])})"

    @cached_property
    def _names(self) -> tuple[NDArray[np.float64], list[str]]:
        named = _named_points(self.job)
        return np.array([place for place, _ in named]).reshape(-1, 2), [name for _, name in named]

    def stretch(self, line: Line, start: float, end: float) -> str:
        """A part of a line in words: from here to there."""
        return f"from {self.name(line.point(start))} to {self.name(line.point(end))}"

    def length(self, value: float) -> str:
        """A length in the job's units, short."""
        if self.job.job.units == "US":
            unit = "in" if 0 < abs(value) < factor("ft") else "ft"
        else:
            unit = "mm" if 0 < abs(value) < 0.1 else "m"
        return f"{round(value / factor(unit), 9) + 0.0:.5g} {unit}"

    def fault(self, thing: Thing, key: str, message: str, remedy: str) -> None:
        """Note a problem, with its place in the user's files."""
        mark = f"{type(thing).__name__.lower()} {thing.mark}"
        place = thing.place
        line = self.job.lines.get(f"{mark} {key}") if place.file == self.job.file else None
        self.problems.add(
            Problem(message, remedy, place.file, place.line if line is None else line, mark, key)
        )


def _points(job: Job) -> list[Point]:
    return [
        *(corner for panel in job.panels for corner in panel.corners),
        *(point for beam in job.beams for point in beam.points),
        *(column.at for column in job.columns),
        *(point for wall in job.walls for point in wall.line),
    ]


def _named_points(job: Job) -> list[tuple[Point, str]]:
    grid = [((x, y), f"{a}{b}") for a, x in job.grid_x.items() for b, y in job.grid_y.items()]
    given: list[tuple[Point, str]] = []
    for panel in job.panels:
        given += zip(panel.corners, panel.corner_names, strict=False)
    for beam in job.beams:
        given += zip(beam.points, beam.point_names, strict=False)
    given += [(column.at, column.point_name) for column in job.columns]
    for wall in job.walls:
        given += zip(wall.line, wall.point_names, strict=False)
    return grid + given
