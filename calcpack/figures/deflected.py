"""The deflected beam with what each span may deflect."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, NamedTuple

import numpy as np

from calcpack.figures.beam_axis import BeamAxis, Bearing, beam_row, stacked
from calcpack.figures.diagram import FAR, Diagram, between, largest
from calcpack.figures.drawing import GREY, HAIR, HATCHING, HEAVY, LINES, WASH, Stroke
from calcpack.figures.figure import Figure
from calcpack.figures.shapes import Array
from calcpack.sheet.display import System, show

HEIGHT = 15.0  # of a whole strip [mm]
WORTH = 0.04  # of the largest deflection: a span's own is not written where it is less

Limit = tuple[float, float, float]  # from, to [m], limit [m]


class Deflection(NamedTuple):
    """One strip: what it shows, the curve [m], [m], and the limits that belong to it."""

    title: str
    x: Any
    deflection: Any
    limits: Sequence[Limit]


def deflected_shape(
    length: float,
    bearings: Sequence[Bearing],
    x: Any,
    deflection: Any,
    limits: Sequence[Limit],
    system: System = "SI",
    *,
    title: str = "deflection",
    further: Sequence[Deflection | tuple[str, Any, Any, Sequence[Limit]]] = (),
    fixed: tuple[bool, bool] = (False, False),
    mark: str = "",
    width_mm: float = 120.0,
) -> Figure:
    """The deflected beam, each span's largest deflection and its limit.

    Parameters
    ----------
    length : float [m]
    bearings : (at [m], kind, mark) in order
    x : (n,) [m]
    deflection : (n,) [m]
        Downward positive.
    limits : (from [m], to [m], limit [m])
        One a span; drawn on the side the span deflects to.
    system : "SI" or "US"
    title : str
        What the curve shows: "deflection under live load".
    further : sequence of (title, x, deflection, limits)
        More strips under the first.
    fixed : (bool, bool)
        Whether start and end are held against rotation.
    mark : str
        The beam's mark, for the spoken alternative.
    width_mm : float [mm]

    Returns
    -------
    Figure

    Raises
    ------
    ValueError
        The length is not positive, a curve has no points or a limit is not positive.

    Examples
    --------
    >>> x = np.linspace(0.0, 6.0, 61)
    >>> bearings = [(0.0, "column", "C1"), (6.0, "column", "C2")]
    >>> print(deflected_shape(6.0, bearings, x, 0.0084 * np.sin(np.pi * x / 6), [(0.0, 6.0, 0.024)]).alt)
    Deflection: 8.40 mm at 3.00 m (limit 24.0 mm).
    """
    axis = BeamAxis(length, tuple(bearings), fixed, width_mm)
    shown = [Deflection(title, x, deflection, limits), *(Deflection(*item) for item in further)]
    strips, spoken = [], []
    for item in shown:
        strip = _Strip(axis, system)
        strip.draw(np.asarray(item.x, dtype=float), np.asarray(item.deflection, dtype=float), item.limits)
        far = list(dict.fromkeys(strip.far))
        remark = f"limit{'s' if len(far) > 1 else ''} {', '.join(far)}" if far else ""
        strips.append((item.title, remark, strip.drawing))
        spoken.append(f"{item.title}: {', '.join(strip.words) or 'none'}")
    sheet = stacked(axis, strips, beam_row(axis, system))
    text = "; ".join(spoken)
    head = f"{mark}: {text}" if mark else text[0].upper() + text[1:]
    return sheet.finish(width_mm, f"{head}.")


class _Strip(Diagram):
    """One deflected beam over y = 0."""

    def __init__(self, axis: BeamAxis, system: System) -> None:
        super().__init__(axis, system)
        self.far: list[str] = []  # limits too far off to be drawn
        self.words: list[str] = []

    def draw(self, x: Array, y: Array, limits: Sequence[Limit]) -> None:
        """The curve, the limits on the side each span deflects to, then the values."""
        if not len(x) or len(x) != len(y):
            raise ValueError(f"a deflected beam of {len(x)} places and {len(y)} deflections")
        if any(not limit[2] > 0 for limit in limits):
            raise ValueError("a limit of deflection is a positive amount")
        most = float(np.abs(y).max())
        found = [largest(*between(x, y, *span)) for span in self.axis.spans]
        worth = WORTH * most
        sided = [(start, end, _side(found, start, end, worth) * value) for start, end, value in limits]
        near = [limit for limit in sided if abs(limit[2]) <= FAR * most]
        self.fit([float(y.max()), float(y.min()), *(value for *_, value in near)], HEIGHT, -1.0)
        self.drawing.line(self.ends, Stroke(HAIR, GREY, (3.0, 1.6)), LINES)
        self.placer.block_line(self.ends)
        line = self.line(x, y)
        self.drawing.area(self.closed(x, y), WASH)
        self.drawing.line(line, Stroke(1.3, cap="round"), HEAVY)
        self.placer.block_line(line)
        for start, end, value in near:
            self.limit(start, end, value, f"limit {self._shown(abs(value))}")
        self.far = [self._shown(abs(limit[2])) for limit in sided if limit not in near]
        for value, at in sorted(found, key=lambda pair: -abs(pair[0])):
            if abs(value) > max(worth, 1e-9):
                self._value(value, at, limits)

    def _shown(self, value: float) -> str:
        return show(round(value * 1000, 9), "mm", self.system)

    def _value(self, value: float, at: float, limits: Sequence[Limit]) -> None:
        said = self._shown(value)
        words = said if self.axis.at_bearing(at) else f"{said} at {show(at, 'm', self.system)}"
        own = next((limit for start, end, limit in limits if start - 1e-9 <= at <= end + 1e-9), None)
        self.words.append(f"{words} (limit {self._shown(own)})" if own is not None else words)
        self.drawing.line([self.at(at, 0.0), self.at(at, value)], Stroke(HAIR, GREY), HATCHING)
        self.value(at, value, [said])


def _side(found: Sequence[tuple[float, float]], start: float, end: float, worth: float) -> float:
    """The side the part of the beam between two places deflects to: up only where worth saying."""
    inside = [value for value, at in found if start - 1e-9 <= at <= end + 1e-9]
    return -1.0 if max(inside, key=abs, default=0.0) < -worth else 1.0
