"""Which of the everyday shapes a load has."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from calcpack.equivalent.stretches import stretches
from calcpack.statics.loads import LineLoad, Load, PointLoad

ShapeKind = Literal["uniform", "triangle", "trapezoid", "general"]
ALIKE = 1e-9  # of the span or of the largest load


@dataclass(frozen=True)
class Shape:
    """The form of the load on a span.

    Parameters
    ----------
    kind : str
        "uniform"; "triangle" and "trapezoid", both symmetric and rising from nothing at the supports;
        else "general".
    span : float [m]
    peak : float [kN/m]
        The largest intensity by size, with its sign; 0 where nothing stands on the span.
    rise : float [m]
        Over which the load rises at each end: 0 for uniform, half the span for a triangle; 0 where general.
    lines : tuple of LineLoad
        The loads added up: no overlaps, as few as can be, none where there is no load.
    points : tuple of PointLoad
        Likewise.
    """

    kind: ShapeKind
    span: float
    peak: float
    rise: float
    lines: tuple[LineLoad, ...]
    points: tuple[PointLoad, ...]

    @property
    def side_ratio(self) -> float:
        """m = twice the rise over the span: 0 uniform, 1 triangle, between them a trapezoid."""
        return 2 * self.rise / self.span


def shape_of(span: float, loads: Sequence[Load]) -> Shape:
    """Tell the shape of the loads on a span, taken together.

    Parameters
    ----------
    span : float [m]
    loads : sequence of LineLoad, PointLoad
        Those of one source, from the span's start. Differences below 1e-9 of the span or of the
        largest load are taken for rounding; point loads at the very ends are left out.

    Returns
    -------
    Shape

    Raises
    ------
    ValueError
        The span has no length, a load lies beyond it, or something is not a finite number.

    Examples
    --------
    >>> panel = [LineLoad(0, 2, 0, 9), LineLoad(2, 4, 9, 9), LineLoad(4, 6, 9, 0)]
    >>> shape = shape_of(6, panel)
    >>> shape.kind, shape.peak, shape.rise, round(shape.side_ratio, 6)
    ('trapezoid', 9.0, 2.0, 0.666667)
    """
    parts = stretches(span, loads)
    peak = max((value for p in parts for value in (p.first, p.last)), key=lambda value: (abs(value), value))
    tiny = ALIKE * abs(peak)
    source = loads[0].source if len({load.source for load in loads}) == 1 else ""
    points = tuple(PointLoad(p.start, p.force, source) for p in parts if abs(p.force) > tiny * span)
    joined: list[tuple[float, float, float, float]] = []
    for p in parts:
        if p.length <= ALIKE * span:
            continue
        if joined:
            a, b, first, last = joined[-1]
            on_the_way = first + (p.last - first) * (b - a) / (p.end - a)
            if abs(last - p.first) <= tiny and abs(last - on_the_way) <= tiny:
                joined[-1] = (a, p.end, first, p.last)
                continue
        joined.append((p.start, p.end, p.first, p.last))
    lines = tuple(
        LineLoad(a, b, first, last, source)
        for a, b, first, last in joined
        if max(abs(first), abs(last)) > tiny
    )
    kind, rise = _kind(span, peak, lines) if not points else ("general", 0.0)
    return Shape(kind, span, peak, rise, lines, points)


def _kind(span: float, peak: float, lines: tuple[LineLoad, ...]) -> tuple[ShapeKind, float]:
    near, tiny = ALIKE * span, ALIKE * abs(peak)

    def runs(line: LineLoad, start: float, end: float, first: float, last: float) -> bool:
        return (
            abs(line.start - start) <= near
            and abs(line.end - end) <= near
            and abs(line.first - first) <= tiny
            and abs(line.last - last) <= tiny
        )

    if not lines:
        return "uniform", 0.0
    rise = lines[0].end
    outer = runs(lines[0], 0, rise, 0, peak) and runs(lines[-1], span - rise, span, peak, 0)
    if len(lines) == 1 and runs(lines[0], 0, span, peak, peak):
        return "uniform", 0.0
    if len(lines) == 2 and outer and abs(rise - span / 2) <= near:
        return "triangle", span / 2
    if len(lines) == 3 and outer and runs(lines[1], rise, span - rise, peak, peak):
        return "trapezoid", rise
    return "general", 0.0
