"""A diagram along a beam: values over the beam's line, limits and called-out values beside them."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from calcpack.figures.beam_axis import BeamAxis
from calcpack.figures.callout import call_out
from calcpack.figures.drawing import GREY, INK, LINES, SMALL, Drawing, Stroke
from calcpack.figures.labels import Box, Placer
from calcpack.figures.lettering import text_width
from calcpack.figures.parts import line_height
from calcpack.figures.shapes import Array, Pair, simplified
from calcpack.sheet.display import System, show

FAR = 3.0  # a limit farther off than so many times the largest value is said, not drawn
LIMIT = Stroke(0.6, INK, (3.0, 1.4))
CLOSE = 1e-9  # [m] places nearer than this are one


class Diagram:
    """A drawing over y = 0, the beam's line, with a scale for its values.

    Parameters
    ----------
    axis : BeamAxis
    system : "SI" or "US"
    """

    def __init__(self, axis: BeamAxis, system: System) -> None:
        self.axis, self.system = axis, system
        self.drawing, self.placer = Drawing(), Placer(axis.bounds())
        self.scale = 1.0

    def fit(self, values: Sequence[float], height: float, upward: float) -> None:
        """Choose the scale with which all values and zero take a height [mm]; ``upward`` is 1 or -1."""
        ends = [0.0, *values]
        self.scale = upward * height / ((max(ends) - min(ends)) or 1.0)

    def at(self, x: float, y: float) -> Pair:
        """A place along the beam [m] and a value, on paper [mm]."""
        return self.axis.x(x), y * self.scale

    @property
    def ends(self) -> tuple[Pair, Pair]:
        """The beam's ends on paper [mm]."""
        return self.at(0.0, 0.0), self.at(self.axis.length, 0.0)

    def line(self, x: Array, y: Array) -> Array:
        """A curve on paper [mm], without points that are not needed."""
        return simplified(np.column_stack([self.axis.x(0.0) + x * self.axis.scale, y * self.scale]))

    def closed(self, x: Array, y: Array) -> Array:
        """A curve with the way down to the beam's line at its two ends."""
        line = self.line(x, y)
        return np.vstack([[line[0][0], 0.0], line, [line[-1][0], 0.0]])

    def limit(self, start: float, end: float, value: float, text: str) -> None:
        """A dashed line from one place to another [m], its words beside it."""
        left, right = self.at(start, value), self.at(end, value)
        line = [(left[0] + 0.3, left[1]), (right[0] - 0.3, right[1])]
        self.drawing.line(line, LIMIT, LINES)
        self.placer.block_line(line)
        width, height = text_width(text, SMALL, italic=True), line_height(SMALL)
        middle, half = (left[0] + right[0]) / 2, (right[0] - left[0]) / 2
        out = -1.0 if left[1] < 0 else 1.0
        box = self.placer.choose(
            Box(middle + part * (half - width / 2), left[1] + side * (height / 2 + 0.3), width, height)
            for side in (out, -out)
            for part in (0.9, -0.9, 0.5, -0.5, 0.0)
        )
        self.drawing.text(box.x, box.y, text, SMALL, level="box", italic=True, tone=GREY)

    def value(self, at: float, value: float, words: Sequence[str], *, bold: bool = False) -> None:
        """Words called out at a value, away from the beam's line; the first are followed by the place.

        The place is left unsaid where it is a bearing or an end.
        """
        place = [] if self.axis.at_bearing(at) else [f"at {show(at, 'm', self.system)}"]
        point = self.at(at, value)
        call_out(
            self.drawing,
            self.placer,
            point,
            [words[0], *place, *words[1:]],
            self.axis.width,
            out=1.0 if point[1] > 0 else -1.0,
            bold=bold,
        )


def between(x: Array, y: Array, start: float, end: float) -> tuple[Array, Array]:
    """A curve's points between two places, these included, on the inner side of a jump there.

    Parameters
    ----------
    x, y : (n,)
        Places [m], rising, a jump being two points at one place; values.
    start, end : float [m]

    Examples
    --------
    >>> x, y = between(np.array([0.0, 2.0, 2.0, 4.0]), np.array([0.0, 8.0, 1.0, 3.0]), 1.0, 2.0)
    >>> x.tolist(), y.tolist()
    ([1.0, 2.0], [4.0, 8.0])
    """
    inside = (x > start + CLOSE) & (x < end - CLOSE)
    # The last point at or before the start and the first at or after the end are the inner sides.
    first = int(np.searchsorted(x, start + CLOSE, side="right")) - 1
    last = int(np.searchsorted(x, end - CLOSE, side="left"))
    return (
        np.array([start, *x[inside], end]),
        np.array([_value(x, y, first, 1, start), *y[inside], _value(x, y, last, -1, end)]),
    )


def _value(x: Array, y: Array, number: int, way: int, at: float) -> float:
    """The value at a place on the way from one point to the next; a curve's own end beyond it."""
    one, other = (min(max(n, 0), len(x) - 1) for n in (number, number + way))
    step = x[other] - x[one]
    part = 0.0 if abs(step) < 1e-12 else (at - x[one]) / step
    return float(y[one] + (y[other] - y[one]) * min(max(part, 0.0), 1.0))


def largest(x: Array, y: Array) -> tuple[float, float]:
    """The value farthest from zero, and its place."""
    n = int(np.abs(y).argmax())
    return float(y[n]), float(x[n])
