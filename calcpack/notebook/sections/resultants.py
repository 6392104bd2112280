"""Resultants of loads: as numbers, and as formulas of the lines that they come from."""

from __future__ import annotations

from calcpack.equivalent import Shape
from calcpack.job.model import Case
from calcpack.notebook.study import SpanLoads
from calcpack.notebook.work import Alike, Work
from calcpack.sheet import Expression, Line, measured
from calcpack.statics import LineLoad, PointLoad

CLOSE = 1e-9


def weight(work: Work, group: Alike, length: Line) -> Expression:
    """Resultant of loads of one shape: w L, w L/2, and for a trapezoid that rises over a, w (L - a)."""
    if group.shape.kind == "uniform":
        return group.peak * length
    if group.shape.kind == "triangle":
        return group.peak * length / 2
    return group.peak * (length - work.lines["depth", group.names[0]])


def midspan_moment(work: Work, group: Alike, length: Line) -> Expression:
    """w L²/8, w L²/12, and for a trapezoid that rises over a, w (3 L² - 4 a²)/24."""
    if group.shape.kind == "uniform":
        return group.peak * length**2 / 8
    if group.shape.kind == "triangle":
        return group.peak * length**2 / 12
    rise = work.lines["depth", group.names[0]]
    return group.peak * (3 * length**2 - 4 * rise**2) / 24


def resultant(shape: Shape) -> tuple[float, float]:
    """Force [kN] of a shape, and its moment about the left support [kNm]."""
    force = sum(line.total for line in shape.lines) + sum(point.force for point in shape.points)
    moment = sum(load.total * _centre(load) for load in shape.lines) + sum(
        point.force * point.at for point in shape.points
    )
    return force, moment


def resultant_term(work: Work, span: SpanLoads, case: Case, name: str) -> Expression | Line:
    """The resultant of one source on a span, from the line that gives it where there is one."""
    shape = work.shapes(span, case)[name]
    force, _ = resultant(shape)
    for key in ("force", "resultant"):
        line = work.lines.get((key, case, name))
        if line is not None and abs(line.value - force) <= CLOSE * abs(force):
            return line
    if shape.kind != "general" and (peak := work.lines.get(("peak", case, name))) is not None:
        return weight(work, Alike(shape, (name,), peak), work.lines["span", span.number - 1])
    return measured(force, "kN")


def before(shape: Shape, at: float) -> Shape:
    """The part of a shape that stands before a place."""
    lines = []
    for load in shape.lines:
        if load.end <= at:
            lines.append(load)
        elif load.start < at:
            value = load.first + (load.last - load.first) * (at - load.start) / (load.end - load.start)
            lines.append(LineLoad(load.start, at, load.first, value, load.source))
    points = tuple(
        PointLoad(point.at, point.force, point.source)
        for point in shape.points
        if point.at < at - CLOSE * shape.span
    )
    return Shape("general", shape.span, shape.peak, 0.0, tuple(lines), points)


def _centre(load: LineLoad) -> float:
    length, both = load.end - load.start, load.first + load.last
    return load.start + length * (load.first + 2 * load.last) / (3 * both) if both else load.start
