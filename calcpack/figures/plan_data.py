"""The framing plan as figures take it: plain data, read into arrays."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any, NotRequired, TypedDict

import numpy as np

from calcpack.figures.shapes import Array, Pair

Coordinates = Sequence[float]


class GridData(TypedDict):
    """Grid lines [m]: ``x`` crosses the x axis, ``y`` the y axis."""

    x: Mapping[str, float]
    y: Mapping[str, float]


class PanelData(TypedDict):
    """A panel: outline [m], a note such as its load, how it spans."""

    mark: str
    corners: Sequence[Coordinates]
    note: NotRequired[str]
    transfer: NotRequired[str]  # "two-way" | "one-way"; left out: no span arrows
    direction: NotRequired[Coordinates | None]  # unit vector of a one-way span


class BeamData(TypedDict):
    """A beam through its points [m]; ``free`` names the ends without support."""

    mark: str
    points: Sequence[Coordinates]
    free: NotRequired[Sequence[bool]]


class ColumnData(TypedDict):
    """A column."""

    mark: str
    at: Coordinates


class WallData(TypedDict):
    """A wall along a line."""

    mark: str
    line: Sequence[Coordinates]


class RegionData(TypedDict):
    """A part of a panel that drains to the marked beam."""

    panel: str
    outline: Sequence[Coordinates]


class PlanData(TypedDict):
    """A framing plan; whatever is missing is not drawn."""

    grid: NotRequired[GridData]
    panels: NotRequired[Sequence[PanelData]]
    beams: NotRequired[Sequence[BeamData]]
    columns: NotRequired[Sequence[ColumnData]]
    walls: NotRequired[Sequence[WallData]]
    regions: NotRequired[Sequence[RegionData]]


@dataclass(frozen=True)
class PanelShape:
    """A panel as drawn."""

    mark: str
    corners: Array
    note: str
    directions: tuple[Pair, ...]  # of its span: two for two-way, one for one-way, none where not said


@dataclass(frozen=True)
class BeamShape:
    """A beam as drawn."""

    mark: str
    points: Array
    free: tuple[bool, bool]


@dataclass(frozen=True)
class PlanShape:
    """A whole plan as drawn [m]."""

    grid_x: tuple[tuple[str, float], ...]
    grid_y: tuple[tuple[str, float], ...]
    panels: tuple[PanelShape, ...]
    beams: tuple[BeamShape, ...]
    columns: tuple[tuple[str, Array], ...]
    walls: tuple[tuple[str, Array], ...]
    regions: tuple[tuple[str, Array], ...]

    def extent(self) -> tuple[float, float, float, float]:
        """Left, bottom, right, top of everything [m]."""
        points = [panel.corners for panel in self.panels]
        points += [beam.points for beam in self.beams]
        points += [line for _, line in self.walls]
        points += [at.reshape(1, 2) for _, at in self.columns]
        xs = [x for _, x in self.grid_x] + [x for item in points for x in item[:, 0].tolist()]
        ys = [y for _, y in self.grid_y] + [y for item in points for y in item[:, 1].tolist()]
        return min(xs, default=0.0), min(ys, default=0.0), max(xs, default=0.0), max(ys, default=0.0)

    def beam(self, mark: str) -> BeamShape:
        """The beam with a mark.

        Raises
        ------
        ValueError
            There is none.
        """
        for beam in self.beams:
            if beam.mark == mark:
                return beam
        raise ValueError(f"no beam {mark!r} in the plan")


def read_plan(plan: PlanData) -> PlanShape:
    """The plan's plain data as arrays, grid lines in order."""
    nothing: GridData = {"x": {}, "y": {}}
    grid = plan.get("grid", nothing)
    return PlanShape(
        grid_x=_rising(grid["x"]),
        grid_y=_rising(grid["y"]),
        panels=tuple(_panel(panel) for panel in plan.get("panels", ())),
        beams=tuple(
            BeamShape(beam["mark"], _array(beam["points"]), _pair(beam.get("free", (False, False))))
            for beam in plan.get("beams", ())
        ),
        columns=tuple((column["mark"], _array(column["at"])) for column in plan.get("columns", ())),
        walls=tuple((wall["mark"], _array(wall["line"])) for wall in plan.get("walls", ())),
        regions=tuple((region["panel"], _array(region["outline"])) for region in plan.get("regions", ())),
    )


def _panel(panel: PanelData) -> PanelShape:
    corners = _array(panel["corners"])
    return PanelShape(panel["mark"], corners, panel.get("note", ""), span_directions(corners, panel))


def span_directions(corners: Array, panel: Mapping[str, Any] | PanelData) -> tuple[Pair, ...]:
    """Unit vectors of a panel's span arrows: along the first edge and across it where it is two-way."""
    transfer, direction = panel.get("transfer"), panel.get("direction")
    if transfer == "one-way" and direction is not None:
        return ((float(direction[0]), float(direction[1])),)
    if transfer == "two-way":
        side = corners[1] - corners[0]
        x, y = (side / max(float(np.hypot(*side)), 1e-12)).tolist()
        return (x, y), (-y, x)
    return ()


def _rising(lines: Mapping[str, float]) -> tuple[tuple[str, float], ...]:
    return tuple(sorted(((name, float(at)) for name, at in lines.items()), key=lambda line: line[1]))


def _array(points: Any) -> Array:
    return np.asarray(points, dtype=float)


def _pair(free: Sequence[bool]) -> tuple[bool, bool]:
    return bool(free[0]), bool(free[1])
