"""A cross-section to scale: outline, bars, stirrup, neutral axis, dimensions and call-outs."""

from __future__ import annotations

import itertools
from collections.abc import Iterable, Sequence
from typing import Literal

import numpy as np

from calcpack.figures.drawing import (
    FILLS,
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
    WHITE,
    Drawing,
    Stroke,
)
from calcpack.figures.figure import Figure
from calcpack.figures.labels import spread
from calcpack.figures.lettering import shorten, text_width
from calcpack.figures.parts import dimension_chain, line_height
from calcpack.figures.section_shape import Outline, break_line, inner_legs, outline_of, rounded
from calcpack.figures.shapes import Pair, circle, clip_ring, pairs
from calcpack.job.model import Section
from calcpack.sheet.display import System, show

Bar = tuple[float, float, float]  # x, y from the section's bottom centre, diameter [m]
Face = Literal["top", "bottom"]

TALLEST = 52.0  # of the drawn section [mm]
CHAIN = 4.6  # a dimension chain beside the section takes up so much [mm]
GAP = 2.2  # between the section and its call-outs [mm]
BEND = 2.0  # inner radius of a stirrup's bend, in its diameters


def section_figure(
    section: Section,
    system: System = "SI",
    *,
    bars: Sequence[Bar] = (),
    stirrup: tuple[float, float, int] | None = None,
    callouts: Sequence[tuple[str, float]] = (),
    stirrup_text: str = "",
    effective_depth: tuple[float, Face] | None = None,
    neutral_axis: tuple[float, Face] | None = None,
    stress_block: float | None = None,
    mark: str = "",
    width_mm: float = 48.0,
) -> Figure:
    """The cross-section of a beam, drawn to scale, with its reinforcement.

    Parameters
    ----------
    section : Section
        Rectangle, tee (a wide flange is drawn broken off) or rolled I-shape with its root radii.
    system : "SI" or "US"
    bars : (x, y, diameter) [m]
        Centres measured from the section's bottom centre.
    stirrup : (cover, diameter, legs) [m], [m]
        Cover from the concrete's face to the stirrup.
    callouts : (text, height [m])
        What bars are called, "4 ⌀20 (1257 mm²)", and the height their layer lies at.
    stirrup_text : str
        What the stirrup is called, "⌀10 at 150".
    effective_depth : (d [m], face it is measured from)
    neutral_axis : (depth [m], face it is measured from)
    stress_block : float [m]
        Depth of the concrete in compression as the design takes it, from the neutral axis' face (the top
        where there is no neutral axis); hatched.
    mark : str
        The beam's mark, for the spoken alternative.
    width_mm : float [mm]

    Returns
    -------
    Figure

    Raises
    ------
    ValueError
        A dimension is not positive, a bar lies outside the section or a depth is more than the section's.

    Examples
    --------
    >>> rb1 = Section(
    ...     key="rb1", shape="rectangle", dimensions={"width": 0.3, "depth": 0.5}, area=0.15, inertia=0.003125
    ... )
    >>> bars = [(x, 0.06, 0.02) for x in (-0.09, 0.0, 0.09)]
    >>> figure = section_figure(
    ...     rb1, bars=bars, stirrup=(0.04, 0.01, 2), callouts=[("3 ⌀20 (942 mm²)", 0.06)], mark="B5"
    ... )
    >>> print(figure.alt)
    Section of B5: rectangle 300 mm by 500 mm; 3 ⌀20 (942 mm²) at 60 mm above the bottom; cover 40 mm.
    """
    outline = outline_of(section.shape, section.dimensions)
    _validate(outline, bars, effective_depth, neutral_axis, stress_block)
    view = _View(outline, system, width_mm)
    view.notes = list(
        _notes(outline, bars, stirrup, callouts, stirrup_text, neutral_axis, stress_block, system)
    )
    if section.shape == "rolled":
        view.notes += _plates(section, system)
    view.fit(effective_depth is not None)
    view.concrete(steel=section.shape == "rolled")
    if stress_block:
        view.block(stress_block, neutral_axis[1] if neutral_axis else "top")
    if stirrup is not None:
        view.stirrup(*stirrup, bars)
    for x, y, diameter in bars:
        view.bar(x, y, diameter)
    if neutral_axis is not None:
        view.axis_line(*neutral_axis)
    view.dimensions(section, effective_depth)
    view.write_notes()
    alt = _spoken(
        section, outline, callouts, stirrup, stirrup_text, effective_depth, neutral_axis, mark, system
    )
    return view.drawing.finish(width_mm, alt)


def _validate(
    outline: Outline,
    bars: Sequence[Bar],
    effective_depth: tuple[float, Face] | None,
    neutral_axis: tuple[float, Face] | None,
    stress_block: float | None,
) -> None:
    for x, y, diameter in bars:
        if not (0 < y < outline.depth and diameter > 0):
            raise ValueError(f"a bar at ({x}, {y}) of diameter {diameter} is not in the section")
    depths = [pair[0] for pair in (effective_depth, neutral_axis) if pair is not None]
    depths += [] if stress_block is None else [stress_block]
    for depth in depths:
        if not 0 <= depth <= outline.depth * (1 + 1e-9):
            raise ValueError(f"a depth of {depth} is not within the section's {outline.depth}")


Note = tuple[list[str], Pair]  # lines of text, the point they belong to [m]


def _notes(
    outline: Outline,
    bars: Sequence[Bar],
    stirrup: tuple[float, float, int] | None,
    callouts: Sequence[tuple[str, float]],
    stirrup_text: str,
    neutral_axis: tuple[float, Face] | None,
    stress_block: float | None,
    system: System,
) -> Iterable[Note]:
    """What is written beside the section, each with the point its line leads to."""
    for text, height in callouts:
        layer = [bar for bar in bars if abs(bar[1] - height) <= bar[2]]
        shown = [bar for bar in layer if abs(bar[0]) <= outline.drawn_width / 2]
        x, y, _ = max(shown, default=(outline.web / 2, height, 0.0))
        yield _broken(text), (x, y)
    if stirrup is not None:
        cover, diameter, _ = stirrup
        side = outline.web / 2
        # Stirrup and cover stand where no bar lies: about the middle of the height.
        if stirrup_text:
            yield _broken(stirrup_text), (side - cover - diameter / 2, outline.depth * 0.56)
        yield [f"cover {size_text(cover, system)}"], (side - cover / 2, outline.depth * 0.42)
    if neutral_axis is not None:
        depth, face = neutral_axis
        yield [f"x = {size_text(depth, system)}"], (outline.web / 2, _height(outline, depth, face))
    elif stress_block:
        yield (
            [f"a = {size_text(stress_block, system)}"],
            (
                outline.web / 2,
                _height(outline, stress_block / 2, "top"),
            ),
        )


def _plates(section: Section, system: System) -> list[Note]:
    """Thicknesses of a rolled shape's flange and web."""
    size = section.dimensions
    return [
        (
            [f"flange {size_text(size['flange'], system)}"],
            (size["width"] / 2, size["depth"] - size["flange"] / 2),
        ),
        ([f"web {size_text(size['web'], system)}"], (size["web"] / 2, size["depth"] / 2)),
    ]


def _broken(text: str) -> list[str]:
    """A call-out in two lines where it says something in brackets."""
    head, bracket, rest = text.partition(" (")
    return [head, f"({rest}"] if bracket else [text]


def _height(outline: Outline, depth: float, face: Face) -> float:
    return depth if face == "bottom" else outline.depth - depth


def size_text(value: float, system: System) -> str:
    """A size [m] in millimetres or inches: in full if that takes few decimals, else rounded.

    Examples
    --------
    >>> size_text(0.0107, "SI"), size_text(0.3, "SI"), size_text(0.13216, "SI"), size_text(0.3048, "US")
    ('10.7\\xa0mm', '300\\xa0mm', '132\\xa0mm', '12.00\\xa0in')
    """
    millimetres = round(value * 1000, 6)
    full = show(millimetres, "mm", system, exact=True)
    decimals = full.split("\u00a0")[0].partition(".")[2]
    return full if len(decimals) <= (1 if system == "SI" else 2) else show(millimetres, "mm", system)


class _View:
    """The section on paper: millimetres from its own bottom left corner of the paper."""

    def __init__(self, outline: Outline, system: System, width: float) -> None:
        self.outline, self.system, self.width = outline, system, width
        self.drawing = Drawing()
        self.notes: list[Note] = []
        self.scale, self.middle = 1.0, 0.0

    def fit(self, inner_chain: bool) -> None:
        """The scale at which section, dimensions and call-outs fit across the paper."""
        room = 0.42 * self.width
        self.notes = [([shorten(line, room, SMALL) for line in lines], at) for lines, at in self.notes]
        column = max((text_width(line, SMALL) for lines, _ in self.notes for line in lines), default=0.0)
        right = column + GAP + 1.0 if column else 1.2
        left = CHAIN * (2 if inner_chain else 1) + 0.8
        wide = self.width - left - right
        across = self.outline.drawn_width
        self.scale = min(wide / across, TALLEST / self.outline.depth)
        used = across * self.scale
        # What is left over goes to both sides alike.
        self.left = left + (wide - used) / 2
        self.middle = self.left + used / 2

    def at(self, x: float, y: float) -> Pair:
        """A point of the section on paper."""
        return self.middle + x * self.scale, y * self.scale

    def ring(self, points: Iterable[Iterable[float]]) -> list[Pair]:
        """Points of the section on paper."""
        return [self.at(x, y) for x, y in points]

    def concrete(self, steel: bool) -> None:
        """The outline; steel filled, concrete washed."""
        points = self.ring(self.outline.points.tolist())
        self.drawing.area(points, "#cdd4da" if steel else WASH, FILLS)
        if not self.outline.broken:
            self.drawing.outline(points, Stroke(MEDIUM), HEAVY)
            return
        wing = self.outline.drawn_width / 2
        ring = pairs(points)
        # A tee's ring starts at the web's foot; its two outer sides are those broken off.
        for start, end in zip(ring, [*ring[1:], ring[0]], strict=True):
            outer = abs(abs(start[0] - self.middle) - wing * self.scale) < 1e-9
            if outer and abs(start[0] - end[0]) < 1e-9:
                bottom, top = sorted((start[1], end[1]))
                self.drawing.line(break_line(start[0], bottom, top, 0.8), Stroke(HAIR), LINES)
            else:
                self.drawing.line([start, end], Stroke(MEDIUM, cap="projecting"), HEAVY)

    def block(self, depth: float, face: Face) -> None:
        """The concrete in compression, hatched."""
        low, high = sorted((_height(self.outline, 0.0, face), _height(self.outline, depth, face)))
        ring = clip_ring(self.outline.points, (-1e9, low, 1e9, high))
        if len(ring) > 2:
            self.drawing.hatch(self.ring(ring.tolist()), 45.0, 1.1, Stroke(HAIR, INK))
            edge = ring[np.isclose(ring[:, 1], high if face == "bottom" else low)]
            if len(edge) > 1:
                self.drawing.line(self.ring([edge.min(axis=0), edge.max(axis=0)]), Stroke(HAIR), LINES)

    def stirrup(self, cover: float, diameter: float, legs: int, bars: Sequence[Bar]) -> None:
        """A closed stirrup with its bends and hooks, inner legs beside the bars they hold."""
        half, depth = self.outline.web / 2 - cover, self.outline.depth
        if half <= diameter or depth / 2 <= cover + diameter:
            raise ValueError(f"a stirrup at a cover of {cover} does not fit into the section")
        outer = (BEND + 1) * diameter
        self._loop(-half, cover, half, depth - cover, outer, diameter)
        inner = inner_legs(legs, half - diameter / 2, diameter, bars)
        while len(inner) > 1:  # pairs are closed stirrups of their own, outermost first
            left, right = inner.pop(0), inner.pop()
            edge = diameter / 2
            self._loop(left - edge, cover, right + edge, depth - cover, outer, diameter)
        for x in inner:
            edge = diameter / 2
            self._loop(x - edge, cover, x + edge, depth - cover, edge, 0.0)
        # Hooks of 135 degrees about the bar at the upper left.
        bend = -half + diameter + BEND * diameter, depth - cover - diameter - BEND * diameter
        reach = max(5 * diameter, 0.05)
        step = reach / 2**0.5
        for angle in (45.0, 225.0):
            start = circle(*bend, (BEND + 0.5) * diameter, angle, angle + 1)[0]
            end = (float(start[0]) + step, float(start[1]) - step)
            self._rod(pairs([start])[0], end, diameter)

    def _loop(self, left: float, bottom: float, right: float, top: float, radius: float, size: float) -> None:
        self.drawing.outline(
            self.ring(rounded(left, bottom, right, top, radius).tolist()), Stroke(0.4), LINES
        )
        if size:
            inner = rounded(left + size, bottom + size, right - size, top - size, radius - size)
            self.drawing.outline(self.ring(inner.tolist()), Stroke(0.4), LINES)

    def _rod(self, start: Pair, end: Pair, size: float) -> None:
        """A straight piece of a stirrup, in its two edges and its end."""
        dx, dy = end[0] - start[0], end[1] - start[1]
        length = (dx * dx + dy * dy) ** 0.5
        ox, oy = -dy / length * size / 2, dx / length * size / 2
        edges = [
            (start[0] + ox, start[1] + oy),
            (end[0] + ox, end[1] + oy),
            (end[0] - ox, end[1] - oy),
            (start[0] - ox, start[1] - oy),
        ]
        self.drawing.line(self.ring(edges), Stroke(0.4), LINES)

    def bar(self, x: float, y: float, diameter: float) -> None:
        """A bar, as large as it is but never too small to be seen."""
        if abs(x) <= self.outline.drawn_width / 2:
            radius = max(diameter * self.scale / 2, 0.4)
            self.drawing.disc(*self.at(x, y), radius + 0.12, WHITE, SIGNS)
            self.drawing.disc(*self.at(x, y), radius, INK, SIGNS)

    def axis_line(self, depth: float, face: Face) -> None:
        """The neutral axis."""
        y = _height(self.outline, depth, face) * self.scale
        reach = self.outline.drawn_width / 2 * self.scale + 1.0
        line = [(self.middle - reach, y), (self.middle + reach, y)]
        self.drawing.line(line, Stroke(THIN, INK, (5.0, 1.4, 1.2, 1.4)), HEAVY)

    def dimensions(self, section: Section, effective_depth: tuple[float, Face] | None) -> None:
        """Depth and effective depth at the left, widths under and over the section."""
        letters = ("h", "b") if section.shape != "rolled" else ("", "")
        deep = self.outline.depth * self.scale
        x = self.left - 1.4
        if effective_depth is not None:
            depth, face = effective_depth
            ticks = sorted(_height(self.outline, part, face) * self.scale for part in (0.0, depth))
            self._upright(ticks, self._named("d", depth), x)
            x -= CHAIN
        self._upright([0.0, deep], self._named(letters[0], self.outline.depth), x)
        if section.shape == "tee":
            half = self.outline.drawn_width / 2 * self.scale
            label = (
                self._named("bf", self.outline.width) if self.outline.width else "flange: as the clause gives"
            )
            self._chain([-half, half], label, (self.middle, deep + 1.6))
            half = self.outline.web / 2 * self.scale
            self._chain([-half, half], self._named("bw", self.outline.web), (self.middle, -4.2))
            return
        half = self.outline.width / 2 * self.scale
        self._chain([-half, half], self._named(letters[1], self.outline.width), (self.middle, -4.2))

    def _named(self, letter: str, value: float) -> str:
        text = size_text(value, self.system)
        return f"{letter} = {text}" if letter else text

    def _chain(self, ticks: Sequence[float], label: str, origin: Pair) -> None:
        bounds = 0.4 - origin[0], self.width - 0.4 - origin[0]
        dimension_chain(self.drawing, ticks, [label], origin, bounds=bounds)

    def _upright(self, ticks: Sequence[float], label: str, x: float) -> None:
        """A chain standing on end; its label may be longer than it is."""
        dimension_chain(self.drawing, ticks, [""], (x, 0.0), 90.0)
        middle = (ticks[0] + ticks[-1]) / 2
        self.drawing.text(x - 0.6 - line_height(SMALL) / 2, middle, label, SMALL, angle=90.0)

    def write_notes(self) -> None:
        """Call-outs in a column at the right, each led to its point."""
        if not self.notes:
            return
        notes = sorted(self.notes, key=lambda note: (note[1][1], note[1][0]))
        height = line_height(SMALL)
        sizes = [height * len(lines) for lines, _ in notes]
        wanted = [y * self.scale for _, (_, y) in notes]
        gaps = [(a + b) / 2 + 0.9 for a, b in itertools.pairwise(sizes)]
        places = spread(
            wanted, gaps, sizes[0] / 2 - 1.0, self.outline.depth * self.scale + 1.0 - sizes[-1] / 2
        )
        column = self.middle + self.outline.drawn_width / 2 * self.scale + GAP
        for (lines, point), middle, size in zip(notes, places, sizes, strict=True):
            foot = (column - 0.4, middle)
            self.drawing.line([self.at(*point), foot], Stroke(HAIR, GREY), SIGNS)
            for row, line in enumerate(lines):
                y = middle + size / 2 - (row + 0.5) * height
                self.drawing.text(column, y, line, SMALL, anchor="left", level="box")


def _spoken(
    section: Section,
    outline: Outline,
    callouts: Sequence[tuple[str, float]],
    stirrup: tuple[float, float, int] | None,
    stirrup_text: str,
    effective_depth: tuple[float, Face] | None,
    neutral_axis: tuple[float, Face] | None,
    mark: str,
    system: System,
) -> str:
    width = size_text(outline.width or outline.web, system)
    name = section.designation or section.shape
    parts = [f"{name} {width} by {size_text(outline.depth, system)}"]
    if section.shape == "tee":
        parts[0] += f", web {size_text(outline.web, system)}"
    parts += [f"{text} at {size_text(height, system)} above the bottom" for text, height in callouts]
    if stirrup is not None:
        parts += [f"stirrups {stirrup_text}"] if stirrup_text else []
        parts.append(f"cover {size_text(stirrup[0], system)}")
    if effective_depth is not None:
        parts.append(f"effective depth {size_text(effective_depth[0], system)} from the {effective_depth[1]}")
    if neutral_axis is not None:
        parts.append(f"neutral axis {size_text(neutral_axis[0], system)} from the {neutral_axis[1]}")
    return f"Section{f' of {mark}' if mark else ''}: {'; '.join(parts)}."
