"""The span a derivation speaks of, with its letters; a load beside its uniform equivalents."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from typing import TYPE_CHECKING

from calcpack.figures.drawing import (
    BODY,
    GREY,
    HAIR,
    HEAVY,
    INK,
    LINES,
    MEDIUM,
    SIGNS,
    SMALL,
    THIN,
    WASH,
    Drawing,
    Stroke,
)
from calcpack.figures.figure import Figure
from calcpack.figures.labels import spread
from calcpack.figures.lettering import MM, text_width
from calcpack.figures.load_stack import pile, point_loads
from calcpack.figures.parts import arrow, dimension_chain, held_end, line_height, support
from calcpack.figures.shapes import Pair, circle, pairs
from calcpack.sheet.display import System, show
from calcpack.statics.loads import Load

if TYPE_CHECKING:
    from calcpack.equivalent import Shape  # sympy is not needed to draw

HEIGHT = 9.0  # of the load's peak [mm]
LETTER = 9.0  # [pt]
NAMES = {"fixed_end_moment": "fixed-end moment"}
# Of the general load: a few stretches, as parts of the span and of the height; the middle one is told.
GENERAL = ((0.0, 0.0, 0.30, 0.55), (0.30, 0.62, 0.68, 1.0), (0.68, 0.5, 1.0, 0.3))


def free_body(shape: Shape, *, held: bool = False, width_mm: float = 62.0) -> Figure:
    """A span under a load of a shape, with the letters of its derivation.

    Parameters
    ----------
    shape : Shape
        Uniform, triangle and trapezoid are drawn in their own proportions; the general load is
        shown by one stretch of it.
    held : bool
        Both ends held against rotation, with end moments, instead of simply supported.
    width_mm : float [mm]

    Returns
    -------
    Figure

    Examples
    --------
    >>> from calcpack.equivalent import shape_of
    >>> from calcpack.statics.loads import LineLoad
    >>> shape = shape_of(6.0, [LineLoad(0.0, 6.0, 4.0, 4.0)])
    >>> print(free_body(shape).alt)
    Span L on two supports under a uniform load w 0; reactions R.
    """
    drawing = Drawing()
    margin = 13.0 if held else 6.0
    left, right = margin, width_mm - margin
    span = right - left
    drawing.line([(left, 0.0), (right, 0.0)], Stroke(1.4), LINES)
    general = shape.kind == "general"
    _ends(drawing, (left, right), held, ("R_A", "R_B") if general else ("R", "R"), general)
    if general:
        _stretches(drawing, left, span)
    else:
        _symmetric(drawing, shape, left, span)
    low = -20.0 if general else -13.4
    dimension_chain(drawing, [left, right], ["L"], (0.0, low), size=LETTER, italic=True)
    return drawing.finish(width_mm, _spoken(shape, held))


def letters(
    drawing: Drawing, x: float, y: float, symbol: str, size: float = LETTER, anchor: str = "middle"
) -> None:
    """A symbol such as ``w_0``: in italics, what follows the bar small and lowered.

    ``anchor`` says where x is: "left", "middle" or "right" of it. The capitals' middle is at y.
    """
    base, _, index = symbol.partition("_")
    small = 0.72 * size
    width, tail = text_width(base, size, italic=True), text_width(index, small, italic=True)
    start = x - {"left": 0.0, "middle": 0.5, "right": 1.0}[anchor] * (width + tail + 0.3)
    drawing.text(start, y, base, size, anchor="left", italic=True)
    if index:
        drop = 0.32 * size * MM
        drawing.text(start + width + 0.3, y - drop, index, small, anchor="left", italic=not index.isdigit())


def _ends(drawing: Drawing, ends: Pair, held: bool, names: tuple[str, str], general: bool) -> None:
    moments = ("M_A", "M_B") if general else ("M_F", "M_F")
    for number, (x, name) in enumerate(zip(ends, names, strict=True)):
        side = 1 if number else -1
        if held:
            held_end(drawing, x, 0.0, side)
            # On a span that sags its held ends are turned back: at the start anticlockwise.
            arc = circle(x, 0.0, 4.6, 125.0, 235.0) if side < 0 else circle(x, 0.0, 4.6, 55.0, -55.0)
            before, tip = pairs(arc[[-3, -1]])
            drawing.line(arc[:-1], Stroke(THIN), LINES)
            arrow(drawing, before, tip, Stroke(THIN), 1.6)
            letters(drawing, x + side * 5.4, 3.2, moments[number], anchor="left" if side > 0 else "right")
        else:
            support(drawing, x, -0.24, "")
        foot = -3.0 if held else -3.1
        arrow(drawing, (x, foot - 5.2), (x, foot), Stroke(MEDIUM), 1.8, SIGNS)
        letters(drawing, x + side * -1.2, foot - 3.6, name, anchor="left" if side < 0 else "right")


def _symmetric(drawing: Drawing, shape: Shape, left: float, span: float) -> None:
    """The load in its own proportions, its rise and its peak."""
    part = shape.rise / shape.span
    right, rise = left + span, part * span
    top = HEIGHT + 0.8
    ring = [(left, 0.8), (right, 0.8), (right - rise, top), (left + rise, top)]
    _loaded(drawing, ring)
    _small_arrows(drawing, ring, 0.8)
    peak = left + max(rise, span / 2) if shape.kind != "uniform" else left + span / 2
    letters(drawing, peak, top + 2.2, "w_0")
    high = top + (5.4 if shape.kind == "triangle" else 1.6)
    starts = [left] if shape.kind == "triangle" else [left, right - rise]
    for start in starts[: 2 if part > 0 else 0]:
        dimension_chain(drawing, [start, start + rise], ["a"], (0.0, high), size=LETTER, italic=True)
        for x in (start, start + rise):
            foot = 1.0 if x in (left, right) else top + (3.9 if shape.kind == "triangle" else 0.0)
            drawing.line([(x, foot), (x, high)], Stroke(HAIR, GREY))


def _stretches(drawing: Drawing, left: float, span: float) -> None:
    """Three stretches, the middle one with its letters."""
    for number, (start, first, end, last) in enumerate(GENERAL):
        x1, x2 = left + start * span, left + end * span
        ring = [(x1, 0.8), (x2, 0.8), (x2, 0.8 + last * HEIGHT), (x1, 0.8 + first * HEIGHT)]
        if number == 1:
            _loaded(drawing, ring)
            _small_arrows(drawing, ring, 0.8)
            letters(drawing, x1 + 0.8, ring[3][1] + 3.2, "w_i1", anchor="left")
            letters(drawing, x2 + 0.8, ring[2][1] + 1.6, "w_i2", anchor="left")
            arrow(drawing, (x1, 0.8 + HEIGHT + 4.0), (x1, 0.4), Stroke(MEDIUM), 1.8, SIGNS)
            letters(drawing, x1 - 0.8, 0.8 + HEIGHT + 2.4, "P_i", anchor="right")
            for y, x, name in ((-13.0, x1, "a_i"), (-16.4, x2, "b_i")):
                drawing.line([(left, y), (x, y)], Stroke(HAIR, GREY))
                for tick in (left, x):
                    drawing.line([(tick - 0.6, y - 0.6), (tick + 0.6, y + 0.6)], Stroke(THIN))
                drawing.line([(x, -0.6), (x, y)], Stroke(HAIR, GREY))
                letters(drawing, (left + x) / 2, y + 1.7, name, BODY)
        else:
            drawing.outline(ring, Stroke(HAIR, GREY, (2.0, 1.2)))


def _loaded(drawing: Drawing, ring: Sequence[Pair]) -> None:
    drawing.area(ring, WASH)
    drawing.outline(ring, Stroke(THIN), LINES)


def _small_arrows(drawing: Drawing, ring: Sequence[Pair], foot: float) -> None:
    """Arrows of a line load under its upper side (from the fourth point to the third)."""
    (left, _), (right, _) = ring[0], ring[1]
    (x2, y2), (x1, y1) = ring[2], ring[3]
    count = max(3, round((right - left) / 4.0))
    for n in range(count + 1):
        x = left + (right - left) * n / count
        if x < x1:
            top = foot + (y1 - foot) * (x - left) / (x1 - left)
        elif x > x2:
            top = foot + (y2 - foot) * (right - x) / (right - x2)
        else:
            top = y1 if x2 == x1 else y1 + (y2 - y1) * (x - x1) / (x2 - x1)
        if top - foot > 1.6:
            arrow(drawing, (x, top), (x, foot), Stroke(HAIR, GREY), 1.0)


def _spoken(shape: Shape, held: bool) -> str:
    load = {
        "uniform": "under a uniform load w 0",
        "triangle": "under a triangular load: nothing at the supports, w 0 at midspan, a from there",
        "trapezoid": "under a trapezoidal load: nothing at the supports, w 0 from a inside each",
        "general": "cut into stretches: i from a i to b i, its load from w i1 to w i2, P i at its start",
    }[shape.kind]
    ends = "between held ends" if held else "on two supports"
    forces = "reactions R A and R B" if shape.kind == "general" else "reactions R"
    moments = " and end moments " + ("M A and M B" if shape.kind == "general" else "M F") if held else ""
    return f"Span L {ends} {load}; {forces}{moments}."


def equivalents_figure(
    span: float,
    loads: Sequence[Load],
    values: Mapping[str, float],
    chosen: str = "",
    system: System = "SI",
    width_mm: float = 90.0,
) -> Figure:
    """The actual load on a span, and each uniform load that stands for it as a level line.

    Parameters
    ----------
    span : float [m]
    loads : loads [kN/m], [kN] from the span's start
    values : kind -> uniform load [kN/m]
    chosen : str
        The kind carried forward, drawn thick.
    system : "SI" or "US"
    width_mm : float [mm]

    Returns
    -------
    Figure

    Examples
    --------
    >>> from calcpack.statics.loads import LineLoad
    >>> loads = [LineLoad(0.0, 3.0, 0.0, 9.0), LineLoad(3.0, 6.0, 9.0, 0.0)]
    >>> print(equivalents_figure(6.0, loads, {"shear": 4.5, "moment": 6.0}, "moment").alt)
    Load up to 9.00 kN/m and its uniform equivalents: shear 4.50 kN/m, moment 6.00 kN/m (carried forward).
    """
    drawing = Drawing()
    texts = {kind: f"{NAMES.get(kind, kind)} {show(value, 'kN/m', system)}" for kind, value in values.items()}
    room = max((text_width(text, SMALL, bold=kind == chosen) for kind, text in texts.items()), default=0.0)
    left, right = 2.0, width_mm - room - 8.0
    layers = pile(span, loads)
    top = max([0.0, *(float(layer.top.max()) for layer in layers), *values.values()])
    scale = 20.0 / top if top > 0 else 1.0
    for layer in layers:
        for piece in layer.pieces():
            ring = [(left + x / span * (right - left), y * scale) for x, y in piece]
            drawing.area(ring, WASH)
            drawing.outline(ring, Stroke(HAIR, GREY), LINES)
    for at, group in point_loads(loads):
        x = left + at / span * (right - left)
        arrow(drawing, (x, 20.0), (x, 0.2), Stroke(MEDIUM), 2.0, SIGNS)
        drawing.text(x, 20.6, show(sum(load.force for load in group), "kN", system), SMALL, level="base")
    drawing.line([(left, 0.0), (right, 0.0)], Stroke(1.4), LINES)
    for x in (left, right):
        support(drawing, x, -0.24, "")
    ordered = sorted(values, key=lambda kind: values[kind])
    gaps = [line_height(SMALL) + 0.1] * (len(ordered) - 1)
    places = spread([values[kind] * scale for kind in ordered], gaps, 1.0, math.inf)
    for kind, place in zip(ordered, places, strict=True):
        y, bold = values[kind] * scale, kind == chosen
        stroke = Stroke(1.3) if bold else Stroke(0.5, INK, (2.4, 1.2))
        drawing.line([(left, y), (right, y)], stroke, HEAVY)
        drawing.line([(right, y), (right + 4.0, place)], Stroke(HAIR, GREY))
        drawing.text(right + 4.8, place, texts[kind], SMALL, anchor="left", bold=bold)
    peak = max((layer.peak()[1] for layer in layers), key=abs, default=0.0)
    listed = ", ".join(
        f"{text}{' (carried forward)' if kind == chosen else ''}" for kind, text in texts.items()
    )
    alt = f"Load up to {show(peak, 'kN/m', system)} and its uniform equivalents: {listed or 'none'}."
    return drawing.finish(width_mm, alt)
