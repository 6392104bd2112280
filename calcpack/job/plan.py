"""Points of the plan: grid lines, named points, straight lines and convex outlines."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise

from calcpack.job.errors import CalcpackError, nearest
from calcpack.job.fields import Spot, shown
from calcpack.job.model import Point

CLOSE = 1e-6  # [m]; nearer than this two places are one
MOST_LINES = 400  # grid lines one way
MOST_POINTS = 200  # points of a beam or corners of a panel

_LABEL = re.compile(r"[^\s,;()\[\]\"]{1,12}")


def _fault(message: str, remedy: str) -> CalcpackError:
    return CalcpackError(message, remedy=remedy)


@dataclass(frozen=True)
class Named:
    """A place in the plan and its coordinates' names: grid labels, or what the user wrote."""

    at: Point
    names: tuple[str, str]
    on_grid: bool

    def __str__(self) -> str:
        return "".join(self.names) if self.on_grid else f"({self.names[0]}, {self.names[1]})"


@dataclass(frozen=True)
class Grid:
    """The grid: labels and where their lines stand [m]."""

    x: dict[str, float]
    y: dict[str, float]

    @cached_property
    def points(self) -> dict[str, list[tuple[str, str]]]:
        """Every grid point's name, and the pairs of lines it could mean."""
        found: dict[str, list[tuple[str, str]]] = {}
        for x in self.x:
            for y in self.y:
                found.setdefault(x + y, []).append((x, y))
        return found

    def faults(self) -> list[tuple[str, str, str]]:
        """What is wrong with the labels: key, message, remedy.

        Examples
        --------
        >>> Grid({"A": 0.0, "A1": 6.0}, {"1": 0.0, "11": 4.5}).faults()[0][1]
        "'A11' would be a grid point twice: A with 11, A1 with 1"
        """
        found = []
        for axis, lines in (("x", self.x), ("y", self.y)):
            if len(lines) > MOST_LINES:
                found.append((axis, f"there are more than {MOST_LINES} grid lines", ""))
            found += [
                (
                    f"{axis}.{label}",
                    f"'{label}' cannot be a grid label",
                    "up to 12 signs, no space , ; ( ) [ ]",
                )
                for label in lines
                if not _LABEL.fullmatch(label)
            ]
        if not found:
            for name, pairs in self.points.items():
                if len(pairs) > 1:
                    meanings = ", ".join(f"{x} with {y}" for x, y in pairs)
                    message = f"'{name}' would be a grid point twice: {meanings}"
                    found.append(("", message, "give the grid lines other labels"))
        return found

    def place(self, given: str | Spot) -> Named:
        """The place of a grid point or a pair of coordinates; an error if there is none."""
        if isinstance(given, Spot):
            return Named((given.x, given.y), given.texts, False)
        name = given.strip()
        pairs = self.points.get(name)
        if not pairs:
            raise _fault(f"there is no grid point {shown(name)}", self._remedy(name))
        x, y = pairs[0]
        return Named((self.x[x], self.y[y]), (x, y), True)

    def _remedy(self, name: str) -> str:
        """What a mistyped name could mean: its parts swapped, or points that share a line with it."""
        if not self.points:
            return "give [grid] with x and y first"
        word = name.casefold()
        if turned := [
            x + y
            for y in self.y
            if word.startswith(y.casefold())
            for x in self.x
            if word == f"{y}{x}".casefold()
        ]:
            return f"did you mean '{turned[0]}'?"
        level = [x + y for y in self.y if name.endswith(y) for x in self.x]
        upright = [x + y for x in self.x if name.startswith(x) for y in self.y]
        return nearest(name, upright + level or self.points)


def distance(a: Point, b: Point) -> float:
    """The distance of two points [m].

    Examples
    --------
    >>> distance((0.0, 0.0), (3.0, 4.0))
    5.0
    """
    return math.hypot(b[0] - a[0], b[1] - a[1])


def _off(point: Point, start: Point, end: Point) -> float:
    """How far a point stands from the line through two others [m]."""
    along = (end[0] - start[0], end[1] - start[1])
    across = along[0] * (point[1] - start[1]) - along[1] * (point[0] - start[0])
    return abs(across) / math.hypot(*along)


def check_line(points: Sequence[Named]) -> None:
    """Refuse points that do not follow one another along one straight line.

    Examples
    --------
    >>> check_line([Named((x, 0.0), (f"{x:g}", "1"), True) for x in (0.0, 4.0, 4.0)])
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: 41 is named twice; give each point once
    """
    if not 2 <= len(points) <= MOST_POINTS:
        raise _fault(
            f"the line has {_counted(len(points))}", f"give 2 to {MOST_POINTS}: start, supports in order, end"
        )
    for place, one in enumerate(points):
        for other in points[place + 1 :]:
            if distance(one.at, other.at) <= CLOSE:
                both = (
                    f"{one} is named twice" if str(one) == str(other) else f"{one} and {other} are one place"
                )
                raise _fault(both, "give each point once")
    first, last = points[0], max(points, key=lambda point: distance(points[0].at, point.at))
    for point in points:
        if (off := _off(point.at, first.at, last.at)) > CLOSE:
            message = f"{point} stands {_millimetres(off)} off the line from {first} to {last}"
            raise _fault(message, "a beam is straight; make it two, or move the point")
    for one, other in pairwise(points):
        along = (last.at[0] - first.at[0], last.at[1] - first.at[1])
        if (other.at[0] - one.at[0]) * along[0] + (other.at[1] - one.at[1]) * along[1] < 0:
            raise _fault(
                f"{other} comes before {one} on the line", "list the points in order from start to end"
            )


def _counted(count: int) -> str:
    return "1 point" if count == 1 else f"{count} points"


def _millimetres(length: float) -> str:
    return f"{length:.3f} m" if length >= 0.1 else f"{length * 1000:.3g} mm"


def outline(corners: Sequence[Named]) -> tuple[Named, ...]:
    """A panel's outline: convex, counter-clockwise, no corner on the line of its neighbours.

    Parameters
    ----------
    corners : sequence of Named
        Two opposite corners of a rectangle parallel to the axes, or three and more in turn.

    Returns
    -------
    tuple of Named
        Beginning with the first corner that is one.

    Raises
    ------
    CalcpackError
        Too few corners, corners on one line, an outline that crosses itself or turns inward.

    Examples
    --------
    >>> corners = Named((6.0, 4.0), ("B", "2"), True), Named((0.0, 0.0), ("A", "1"), True)
    >>> [str(corner) for corner in outline(corners)]
    ['B2', 'A2', 'A1', 'B1']
    """
    if not 2 <= len(corners) <= MOST_POINTS:
        raise _fault(
            f"the outline has {_counted(len(corners))}", f"give 2 opposite corners, or 3 to {MOST_POINTS}"
        )
    turn = _rectangle(*corners) if len(corners) == 2 else list(corners)
    for place, one in enumerate(turn):
        for other in turn[place + 1 :]:
            if distance(one.at, other.at) <= CLOSE:
                both = (
                    f"{one} is named twice" if str(one) == str(other) else f"{one} and {other} are one place"
                )
                raise _fault(both, "give each corner once; the outline closes by itself")
    first, last = turn[0], max(turn, key=lambda corner: distance(turn[0].at, corner.at))
    if all(_off(corner.at, first.at, last.at) <= CLOSE for corner in turn):
        raise _fault("all corners stand on one line", "give corners that enclose an area")
    kept = _bends(turn)
    turns = [_turn(*three) for three in _triples(kept)]
    rounds = round(sum(turns) / math.tau)
    if abs(rounds) != 1:
        raise _fault("the outline crosses itself", "list the corners in turn")
    for angle, corner in zip(turns, kept, strict=True):
        if angle * rounds < 0:
            raise _fault(f"the outline turns inward at {corner}", "a panel is convex; divide it into several")
    return tuple(kept) if rounds > 0 else (kept[0], *reversed(kept[1:]))


def _rectangle(one: Named, other: Named) -> list[Named]:
    """The four corners, the two given ones opposite."""
    if any(abs(a - b) <= CLOSE for a, b in zip(one.at, other.at, strict=True)):
        raise _fault(
            f"{one} and {other} span no rectangle",
            "two corners stand opposite each other, neither level nor upright",
        )
    on_grid = one.on_grid and other.on_grid
    second = Named((other.at[0], one.at[1]), (other.names[0], one.names[1]), on_grid)
    fourth = Named((one.at[0], other.at[1]), (one.names[0], other.names[1]), on_grid)
    return [one, second, other, fourth]


def _triples(turn: Sequence[Named]) -> list[tuple[Named, Named, Named]]:
    """Each corner between its neighbours."""
    return [(turn[place - 1], turn[place], turn[(place + 1) % len(turn)]) for place in range(len(turn))]


def _turn(before: Named, corner: Named, after: Named) -> float:
    """By how much the outline turns at a corner, to the left positive [rad]."""
    (ax, ay), (bx, by) = _step(before, corner), _step(corner, after)
    return math.atan2(ax * by - ay * bx, ax * bx + ay * by)


def _step(one: Named, other: Named) -> Point:
    return other.at[0] - one.at[0], other.at[1] - one.at[1]


def _bends(turn: Sequence[Named]) -> list[Named]:
    """The outline without those corners that stand on the line of their neighbours."""
    kept = list(turn)
    place = 0
    while place < len(kept):
        before, corner, after = kept[place - 1], kept[place], kept[(place + 1) % len(kept)]
        if _off(corner.at, before.at, after.at) > CLOSE:
            place += 1
        elif abs(_turn(before, corner, after)) > math.pi / 2:
            raise _fault(f"the outline runs back on itself at {corner}", "list the corners in turn")
        else:
            del kept[place]
            place = max(place - 1, 0)
    return kept
