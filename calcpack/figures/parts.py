"""What several figures draw: dimension chains, supports, arrows."""

from __future__ import annotations

import itertools
import math
from collections.abc import Sequence

from calcpack.figures.drawing import (
    GREY,
    HAIR,
    HEAVY,
    INK,
    LINES,
    MEDIUM,
    SMALL,
    THIN,
    WHITE,
    Drawing,
    Stroke,
)
from calcpack.figures.labels import Box
from calcpack.figures.lettering import ASCENT, DESCENT, MM, text_width
from calcpack.figures.shapes import Pair
from calcpack.sheet.display import System, show

PEN = Stroke(THIN)
DIMENSION = Stroke(HAIR, GREY)


def line_height(size: float) -> float:
    """Height of a line of text [mm] at a size [pt]."""
    return (ASCENT + DESCENT) * size * MM


def upright(angle: float) -> float:
    """The angle [degrees], or its opposite, at which text is read without turning the page over.

    Examples
    --------
    >>> upright(180.0), upright(-90.0), upright(30.0)
    (0.0, 90.0, 30.0)
    """
    angle = (angle + 180.0) % 360.0 - 180.0
    if angle > 90.0 + 1e-9:
        return angle - 180.0
    return angle + 180.0 if angle <= -90.0 + 1e-9 else angle + 0.0


def length(value: float, system: System) -> str:
    """A length [m] with its unit: in full if in whole millimetres or hundredths of a foot, else rounded.

    Examples
    --------
    >>> length(4.125, "SI"), length(11.0, "US"), length(4.45982, "SI")
    ('4.125\\xa0m', '36.09\\xa0ft', '4.46\\xa0m')
    """
    full = show(value, "m", system, exact=True)
    decimals = full.split("\u00a0")[0].partition(".")[2]
    return full if len(decimals) <= (3 if system == "SI" else 2) else show(value, "m", system)


def free_row(rows: list[float], left: float, right: float, gap: float) -> int:
    """The first row whose last label ends clear of a new one; the new one is entered.

    Parameters
    ----------
    rows : list of float [mm]
        Where the last label of each row ends; changed.
    left, right : float [mm]
        Of the new label; labels come from left to right.
    gap : float [mm]

    Examples
    --------
    >>> rows: list[float] = []
    >>> [free_row(rows, left, left + 5.0, 1.0) for left in (0.0, 4.0, 7.0)], rows
    ([0, 1, 0], [12.0, 9.0])
    """
    row = next((n for n, last in enumerate(rows) if last + gap <= left), len(rows))
    rows[row : row + 1] = [right]
    return row


def ticked_line(
    drawing: Drawing, ticks: Sequence[float], origin: Pair = (0.0, 0.0), cos: float = 1.0, sin: float = 0.0
) -> None:
    """A dimension line with a slash at each tick [mm], rising along its direction."""

    def at(along: float, off: float) -> Pair:
        return origin[0] + along * cos - off * sin, origin[1] + along * sin + off * cos

    drawing.line([at(ticks[0] - 0.8, 0), at(ticks[-1] + 0.8, 0)], DIMENSION)
    for tick in ticks:
        drawing.line([at(tick - 0.6, -0.6), at(tick + 0.6, 0.6)], Stroke(THIN))


def dimension_chain(
    drawing: Drawing,
    ticks: Sequence[float],
    labels: Sequence[str],
    origin: Pair = (0.0, 0.0),
    angle: float = 0.0,
    *,
    size: float = SMALL,
    bounds: Pair = (-math.inf, math.inf),
    italic: bool = False,
) -> float:
    """A line of dimensions: a slash at each tick, a label above each part or, where it is too wide, below.

    Parameters
    ----------
    drawing : Drawing
    ticks : (n + 1,) [mm]
        Along the line from its origin, rising.
    labels : (n,)
    origin, angle : [mm], [degrees]
        Where the line starts and runs to.
    bounds : [mm]
        Labels keep between these distances along the line.

    Returns
    -------
    float
        How far it reaches below the line [mm].
    """
    cos, sin = math.cos(math.radians(angle)), math.sin(math.radians(angle))

    def at(along: float, off: float) -> Pair:
        return origin[0] + along * cos - off * sin, origin[1] + along * sin + off * cos

    ticked_line(drawing, ticks, origin, cos, sin)
    rows: list[float] = []  # where the last label of each row below the line ends
    step = line_height(size) + 0.2
    reading = upright(angle)
    for (start, end), label in zip(itertools.pairwise(ticks), labels, strict=True):
        width = text_width(label, size, italic=italic)
        middle = (start + end) / 2
        if width + 1.0 <= end - start:
            off = 0.5 + step / 2
        else:
            middle = min(max(middle, bounds[0] + width / 2), bounds[1] - width / 2)
            row = free_row(rows, middle - width / 2, middle + width / 2, 1.2)
            off = -0.5 - step * (row + 0.5)
        drawing.text(*at(middle, off), label, size, angle=reading, italic=italic)
    return 0.8 + step * len(rows)


def span_dimensions(
    drawing: Drawing,
    places: Sequence[float],
    scale: float,
    origin: Pair,
    system: System,
    bounds: Pair,
) -> float:
    """A horizontal chain over places [m] along a beam at a scale [mm/m]; returns its reach below the line."""
    labels = [length(b - a, system) for a, b in itertools.pairwise(places)]
    return dimension_chain(drawing, [place * scale for place in places], labels, origin, bounds=bounds)


def arrow(
    drawing: Drawing,
    start: Pair,
    tip: Pair,
    stroke: Stroke = PEN,
    head: float = 1.5,
    layer: int = LINES,
) -> None:
    """A line with a slender filled head [mm] at its tip."""
    length = math.dist(start, tip)
    if length < 1e-9:
        return
    ux, uy = (tip[0] - start[0]) / length, (tip[1] - start[1]) / length
    neck = (tip[0] - ux * head, tip[1] - uy * head)
    half = head * 0.24
    drawing.line([start, (neck[0] + ux * 0.2, neck[1] + uy * 0.2)], stroke, layer)
    drawing.area(
        [tip, (neck[0] - uy * half, neck[1] + ux * half), (neck[0] + uy * half, neck[1] - ux * half)],
        stroke.tone,
        layer,
    )


def support(drawing: Drawing, x: float, y: float, kind: str) -> Box:
    """What stands under a beam at (x, y): a triangle, on a column's head, a wall or a crossing beam if said.

    Returns
    -------
    Box
        What it takes up.
    """
    half, height, foot = 1.3, 2.0, 1.3
    drawing.area([(x, y), (x + half, y - height), (x - half, y - height)], WHITE, HEAVY)
    drawing.outline([(x, y), (x + half, y - height), (x - half, y - height)], Stroke(THIN), HEAVY)
    low = y - height - foot
    if kind == "column":
        for side in (-0.6, 0.6):
            drawing.line([(x + side, y - height), (x + side, low)], Stroke(THIN))
    elif kind == "wall":
        shape = [(x - 1.3, low), (x + 1.3, low), (x + 1.3, y - height), (x - 1.3, y - height)]
        drawing.outline(shape, Stroke(THIN))
        drawing.hatch(shape, 45.0, 0.7, Stroke(HAIR, INK))
    elif kind == "beam":  # seen from its end
        shape = [(x - 0.5, low), (x + 0.5, low), (x + 0.5, y - height), (x - 0.5, y - height)]
        drawing.area(shape, INK)
    return Box(x, (y + low) / 2, 2 * half, y - low)


def held_end(drawing: Drawing, x: float, y: float, side: int) -> Box:
    """An end held against rotation at (x, y); ``side`` is -1 at a beam's start and 1 at its end."""
    rise, depth = 2.4, 1.3 * side
    drawing.line([(x, y - rise), (x, y + rise)], Stroke(MEDIUM), HEAVY)
    shape = [(x, y - rise), (x + depth, y - rise), (x + depth, y + rise), (x, y + rise)]
    drawing.hatch(shape, 45.0, 0.8, Stroke(HAIR))
    return Box(x + depth / 2, y, abs(depth), 2 * rise)
