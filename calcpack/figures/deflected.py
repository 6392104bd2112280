"""The deflected beam with what each span may deflect."""

from __future__ import annotations

import itertools
from collections.abc import Sequence
from typing import Any, NamedTuple

import numpy as np

from calcpack.figures.beam_axis import BeamAxis, Bearing, beam_row, stacked
from calcpack.figures.callout import call_out
from calcpack.figures.drawing import GREY, HAIR, HATCHING, HEAVY, INK, LINES, SMALL, WASH, Drawing, Stroke
from calcpack.figures.figure import Figure
from calcpack.figures.labels import Box, Placer
from calcpack.figures.lettering import text_width
from calcpack.figures.parts import line_height
from calcpack.figures.shapes import Array, simplified
from calcpack.sheet.display import System, show

HEIGHT = 15.0  # of a whole strip [mm]
WORTH = 0.04  # of the largest deflection: a span's own is not written where it is less
FAR = 3.0  # a limit farther off than so many times the largest deflection is said, not drawn

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


class _Strip:
    """One deflected beam over y = 0."""

    def __init__(self, axis: BeamAxis, system: System) -> None:
        self.axis, self.system = axis, system
        self.drawing, self.placer = Drawing(), Placer(axis.bounds())
        self.far: list[str] = []  # limits too far off to be drawn
        self.words: list[str] = []

    def draw(self, x: Array, y: Array, limits: Sequence[Limit]) -> None:
        """The curve, the limits on the side each span deflects to, then the values."""
        if not len(x) or len(x) != len(y):
            raise ValueError(f"a deflected beam of {len(x)} places and {len(y)} deflections")
        if any(not limit[2] > 0 for limit in limits):
            raise ValueError("a limit of deflection is a positive amount")
        largest = float(np.abs(y).max())
        found = [self._span(x, y, start, end) for start, end in self._spans()]
        worth = WORTH * largest
        sided = [(start, end, _side(found, start, end, worth) * value) for start, end, value in limits]
        near = [limit for limit in sided if abs(limit[2]) <= FAR * largest]
        ends = [0.0, float(y.max()), float(y.min()), *(value for *_, value in near)]
        self.scale = -HEIGHT / ((max(ends) - min(ends)) or 1.0)
        start, end = (self.axis.x(0.0), 0.0), (self.axis.x(self.axis.length), 0.0)
        self.drawing.line([start, end], Stroke(HAIR, GREY, (3.0, 1.6)), LINES)
        self.placer.block_line([start, end])
        line = simplified(np.column_stack([self.axis.x(0.0) + x * self.axis.scale, y * self.scale]))
        self.drawing.area(np.vstack([[start], line, [end]]), WASH)
        self.drawing.line(line, Stroke(1.3, cap="round"), HEAVY)
        self.placer.block_line(line)
        for limit in sided:
            self._limit(limit, drawn=limit in near)
        for value, at in sorted(found, key=lambda pair: -abs(pair[0])):
            if abs(value) > max(worth, 1e-9):
                self._value(value, at, limits)

    def _spans(self) -> list[tuple[float, float]]:
        stops = sorted({0.0, self.axis.length, *(bearing[0] for bearing in self.axis.bearings)})
        return list(itertools.pairwise(stops))

    def _span(self, x: Array, y: Array, start: float, end: float) -> tuple[float, float]:
        """The largest deflection of a span, and its place."""
        inside = np.flatnonzero((x >= start - 1e-9) & (x <= end + 1e-9))
        if not len(inside):
            return 0.0, start
        n = inside[int(np.abs(y[inside]).argmax())]
        return float(y[n]), float(x[n])

    def _limit(self, limit: Limit, drawn: bool) -> None:
        start, end, value = limit
        text = f"limit {self._shown(abs(value))}"
        if not drawn:
            self.far.append(self._shown(abs(value)))
            return
        y = value * self.scale
        line = [(self.axis.x(start) + 0.4, y), (self.axis.x(end) - 0.4, y)]
        self.drawing.line(line, Stroke(0.6, INK, (3.0, 1.4)), LINES)
        self.placer.block_line(line)
        width, height = text_width(text, SMALL, italic=True), line_height(SMALL)
        middle, half = (line[0][0] + line[1][0]) / 2, (line[1][0] - line[0][0]) / 2
        out = -1.0 if y < 0 else 1.0
        box = self.placer.choose(
            Box(middle + part * (half - width / 2), y + side * (height / 2 + 0.3), width, height)
            for side in (out, -out)
            for part in (0.9, -0.9, 0.5, -0.5, 0.0)
        )
        self.drawing.text(box.x, box.y, text, SMALL, level="box", italic=True, tone=GREY)

    def _shown(self, value: float) -> str:
        return show(round(value * 1000, 9), "mm", self.system)

    def _value(self, value: float, at: float, limits: Sequence[Limit]) -> None:
        words = [self._shown(value)]
        if not self.axis.at_bearing(at):
            words.append(f"at {show(at, 'm', self.system)}")
        said = " ".join(words)
        own = next((limit for start, end, limit in limits if start - 1e-9 <= at <= end + 1e-9), None)
        self.words.append(f"{said} (limit {self._shown(own)})" if own is not None else said)
        point = self.axis.x(at), value * self.scale
        self.drawing.line([(point[0], 0.0), point], Stroke(HAIR, GREY), HATCHING)
        call_out(self.drawing, self.placer, point, words, self.axis.width, out=-1.0 if value > 0 else 1.0)


def _side(found: Sequence[tuple[float, float]], start: float, end: float, worth: float) -> float:
    """The side the part of the beam between two places deflects to: up only where worth saying."""
    inside = [value for value, at in found if start - 1e-9 <= at <= end + 1e-9]
    return -1.0 if max(inside, key=abs, default=0.0) < -worth else 1.0
