"""One strip of a load figure: shares piled up and named, point loads as arrows."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from calcpack.figures.beam_axis import BeamAxis
from calcpack.figures.drawing import (
    HAIR,
    HEAVY,
    INK,
    LINES,
    MEDIUM,
    SIGNS,
    SMALL,
    WASH,
    WHITE,
    Drawing,
    Stroke,
)
from calcpack.figures.labels import Box, Placer, fits, spread
from calcpack.figures.lettering import shorten, text_width
from calcpack.figures.load_stack import Layer, point_loads, together
from calcpack.figures.parts import arrow, line_height
from calcpack.figures.parts import length as length_text
from calcpack.figures.shapes import Pair, pairs
from calcpack.sheet.display import System, show
from calcpack.statics.loads import Load, PointLoad

ARROW = 5.0  # of a point load, above the pile [mm]
SOURCE_ROOM = 24.0  # a longer name is shortened [mm]

Flag = tuple[float, list[Box]]  # where an arrow starts, the boxes of its lines of text


@dataclass(frozen=True)
class Pattern:
    """How a source's share is filled: a tone, and hatching at angles and a spacing [mm]."""

    tone: str
    angles: tuple[float, ...] = ()
    spacing: float = 1.3


PATTERNS = (
    Pattern(WASH),
    Pattern(WHITE, (45.0,)),
    Pattern(WHITE, (135.0,)),
    Pattern("#cdd4da"),
    Pattern(WHITE, (90.0,)),
    Pattern(WASH, (45.0,), 0.8),
    Pattern(WHITE, (45.0, 135.0), 1.6),
    Pattern(WASH, (90.0,), 0.8),
)


class LoadStrip:
    """One case's loads over y = 0."""

    def __init__(self, axis: BeamAxis, scale: float, patterns: Mapping[str, Pattern], system: System) -> None:
        self.axis, self.scale, self.patterns, self.system = axis, scale, patterns, system
        self.drawing = Drawing()
        self.placer = Placer(axis.bounds())
        self.surface: list[list[Pair]] = []
        self.even: list[list[Pair]] = []  # the dashed lines of the equivalents
        self.remark = ""

    def draw(
        self, layers: list[Layer], loads: Sequence[Load], even: Sequence[tuple[float, float, float]]
    ) -> None:
        """Fills first, then what is written on them, then what stands above."""
        self.axis.baseline(self.drawing)
        for layer in layers:
            for piece in layer.pieces():
                self._fill(piece, self.patterns[layer.source])
        for start, end, value in even:
            line = [(self.axis.x(start), value * self.scale), (self.axis.x(end), value * self.scale)]
            self.drawing.line(line, Stroke(MEDIUM, INK, (4.0, 2.0)), HEAVY)
            self.placer.block_line(line)
            self.even.append(line)
        points = point_loads(loads)
        for at, _ in points:
            x = self.axis.x(at)
            self._keep_clear(x, self._top(x - 1.0, x + 1.0) + ARROW)
        outside = [layer for layer in layers if not self._write_inside(layer)]
        self._points(points)
        for layer in outside:
            self._with_leader(layer, _named(layer, self.system))
        if layers:
            at, value = together(layers)
            if abs(value) > max(abs(layer.peak()[1]) for layer in layers) * (1 + 1e-9):
                text = f"together {show(value, 'kN/m', self.system)}"
                place = self._above(self.axis.x(at), text, 0.4, (0.0, self.axis.width))
                if self.placer.cost(place) == 0:
                    self._write(place, text)
                else:  # said beside the title where the drawing has no room for it
                    self.remark = f"; {text}"
        for start, end, value in even:
            text = f"equivalent {show(value, 'kN/m', self.system)}"
            self._along(start, end, value, text)

    def _fill(self, piece: list[Pair], pattern: Pattern) -> None:
        ring = [(self.axis.x(x), y * self.scale) for x, y in piece]
        if pattern.tone != WHITE:
            self.drawing.area(ring, pattern.tone)
        for angle in pattern.angles:
            self.drawing.hatch(ring, angle, pattern.spacing)
        self.drawing.outline(ring, Stroke(0.4), LINES)
        self.placer.block_line([*ring, ring[0]])
        self.surface.append(ring)

    def _top(self, left: float, right: float) -> float:
        """The highest point of the pile between two places on paper."""
        top = 0.0
        for ring in self.surface:
            for (x1, y1), (x2, y2) in zip(ring, [*ring[1:], ring[0]], strict=True):
                a, b = (x1, x2) if x1 <= x2 else (x2, x1)
                if b < left or a > right:
                    continue
                for x in (max(a, left), min(b, right)):
                    y = max(y1, y2) if b - a < 1e-9 else y1 + (y2 - y1) * (x - x1) / (x2 - x1)
                    top = max(top, y)
        return top

    def _write_inside(self, layer: Layer) -> bool:
        """A source's name and value in its own share, where there is room, nearest to its peak."""
        text = _named(layer, self.system)
        width, height = text_width(text, SMALL), line_height(SMALL)
        peak = self.axis.x(layer.peak()[0])
        for piece in layer.pieces():
            ring = pairs([(self.axis.x(x), y * self.scale) for x, y in piece])
            left, right = min(x for x, _ in ring), max(x for x, _ in ring)
            for off in (0.0, *(sign * step * 3.0 for step in range(1, 30) for sign in (-1, 1))):
                x = peak + off
                if not left + width / 2 <= x <= right - width / 2:
                    continue
                low, high = _reach(ring, x - width / 2, x + width / 2)
                box = Box(x, (low + high) / 2, width + 0.8, height - 0.3)
                if high - low > height and fits(box, ring) and self.placer.cost(box) == 0:
                    self.placer.block(box)
                    self.drawing.text(
                        box.x, box.y, text, SMALL, mask=bool(self.patterns[layer.source].angles)
                    )
                    return True
        return False

    def _points(self, points: Sequence[tuple[float, list[PointLoad]]]) -> None:
        """An arrow for each point load; its name lies above it or, where there is no room, stands."""
        texts = [
            (self.axis.x(at), [_point_text(load, self.system) for load in group]) for at, group in points
        ]
        level = max((self._top(x - 1.0, x + 1.0) + ARROW for x, _ in texts), default=0.0)
        flags = self._lying(texts) or self._upright(texts, level)
        for (x, lines), (_, group), (tail, boxes) in zip(texts, points, flags, strict=True):
            up = sum(load.force for load in group) < 0
            start, tip = ((x, 0.3), (x, tail)) if up else ((x, tail), (x, 0.3))
            self.drawing.line([start, tip], Stroke(2.4, WHITE), HEAVY)
            arrow(self.drawing, start, tip, Stroke(MEDIUM), 2.2, SIGNS)
            for box, line in zip(boxes, lines, strict=True):
                self.drawing.text(box.x, box.y, line, SMALL, level="box", angle=box.angle)
                if box.angle and abs(box.x - x) > 0.05:
                    self.drawing.line([(x, tail), (box.x, box.bounds()[1] - 0.3)], Stroke(0.4), SIGNS)
            self.placer.block(*boxes)
            self._keep_clear(x, tail)

    def _keep_clear(self, x: float, top: float) -> None:
        """No text close to an arrow."""
        for side in (x - 0.7, x, x + 0.7):
            self.placer.block_line([(side, 0.0), (side, top)])

    def _lying(self, texts: Sequence[tuple[float, list[str]]]) -> list[Flag]:
        """Names over the arrows, clear of dashed lines, in few rows; none where there is no room for one."""
        flags: list[Flag] = []
        trial = Placer(self.axis.bounds())
        for line in self.even:
            trial.block_line(line)
        for x, lines in texts:
            width = max(text_width(line, SMALL) for line in lines)
            height = line_height(SMALL)
            middle = min(max(x, 0.5 + width / 2), self.axis.width - 0.5 - width / 2)
            foot = self._top(middle - width / 2, middle + width / 2) + ARROW
            for row in range(2 + len(self.even)):
                low = foot + row * height
                block = Box(middle, low + height * len(lines) / 2, width + 1.6, height * len(lines))
                if trial.cost(block) == 0 and not trial.covered((x, 0.0), (x, low - 0.2)):
                    break
            else:
                return []
            trial.block(block)
            trial.block_line([(x, 0.0), (x, low)])
            lifts = range(len(lines) - 1, -1, -1)
            flags.append((low - 0.1, [Box(middle, low + height * (n + 0.5), width, height) for n in lifts]))
        return flags

    def _upright(self, texts: Sequence[tuple[float, list[str]]], level: float) -> list[Flag]:
        """Names standing on end side by side, over their arrows or led to them."""
        height = line_height(SMALL)
        wanted = [x + (n - (len(lines) - 1) / 2) * height for x, lines in texts for n in range(len(lines))]
        gaps = [height + 0.1] * (len(wanted) - 1)
        places = iter(spread(wanted, gaps, 0.5 + height / 2, self.axis.width - 0.5 - height / 2))
        flags: list[Flag] = []
        for _, lines in texts:
            boxes = []
            for line in lines:
                width = text_width(line, SMALL)
                boxes.append(Box(next(places), level + 1.6 + width / 2, width, height, 90.0))
            flags.append((level, boxes))
        return flags

    def _with_leader(self, layer: Layer, text: str) -> None:
        """A name above the pile, led straight down into a share too thin to be written in."""
        loaded = np.flatnonzero(np.abs(layer.own).max(axis=1) > 1e-9)
        reach = self.axis.x(layer.breaks[loaded[0]]), self.axis.x(layer.breaks[loaded[-1] + 1])
        box = self._above(self.axis.x(layer.peak()[0]), text, 2.0, reach)
        self._write(box, text)
        places = [box.x + part * box.width for part in (0.0, -0.2, 0.2, -0.4, 0.4, -0.48, 0.48)]
        foot = box.bounds()[1]
        found = [self._share_at(layer, min(max(x, reach[0] + 0.6), reach[1] - 0.6)) for x in places]
        # Into the thickest part, but through nobody's name.
        x, y, _ = max(
            found, key=lambda at: round(at[2], 1) - 9.0 * self.placer.covered((at[0], foot), at[:2])
        )
        self.drawing.line([(x, foot), (x, y)], Stroke(HAIR, INK), SIGNS)
        self.placer.block_line([(x, foot - 0.2), (x, y)])
        self.drawing.disc(x, y, 0.4, INK, SIGNS)

    def _share_at(self, layer: Layer, x: float) -> tuple[float, float, float]:
        """The middle of a share under a place on paper, and how thick it is there."""
        at = (x - self.axis.x(0.0)) / self.axis.scale
        n = min(max(int(np.searchsorted(layer.breaks, at)) - 1, 0), len(layer.own) - 1)
        part = (at - layer.breaks[n]) / (layer.breaks[n + 1] - layer.breaks[n])
        base = layer.base[n, 0] + (layer.base[n, 1] - layer.base[n, 0]) * part
        top = layer.top[n, 0] + (layer.top[n, 1] - layer.top[n, 0]) * part
        return x, float(base + top) / 2 * self.scale, float(abs(top - base)) * self.scale

    def _above(self, middle: float, text: str, lift: float, reach: Pair) -> Box:
        """The place for a line of text over the pile, over a stretch and as near to its middle as can be."""
        width, height = text_width(text, SMALL), line_height(SMALL)
        low, high = 0.5 + width / 2, self.axis.width - 0.5 - width / 2
        shifts = sorted((3.0 * step for step in range(-20, 21)), key=abs)
        xs = [middle + shift for shift in shifts if reach[0] <= middle + shift <= reach[1]]
        xs = list(dict.fromkeys(min(max(x, low), high) for x in xs))
        places = [self._over(x, width, height, lift + row * height) for row in range(5) for x in xs]
        return self.placer.pick(places, penalty=0.01)[1]

    def _write(self, box: Box, text: str) -> None:
        self.drawing.text(box.x, box.y, text, SMALL, level="box")
        self.placer.block(box)

    def _over(self, x: float, width: float, height: float, lift: float) -> Box:
        top = self._top(x - width / 2, x + width / 2)
        return Box(x, top + lift + height / 2, width + 0.8, height)

    def _along(self, start: float, end: float, value: float, text: str) -> None:
        """A dashed line's value, over it or under it."""
        width, height = text_width(text, SMALL, italic=True) + 1.6, line_height(SMALL)
        places = [
            Box(self.axis.x(start + (end - start) * part), value * self.scale + off, width, height)
            for off in (height / 2 + 0.5, -height / 2 - 0.5)
            for part in (0.5, 0.3, 0.7, 0.12, 0.88)
        ]
        box = self.placer.choose(places, penalty=0.01)
        self.drawing.text(box.x, box.y, text, SMALL, level="box", italic=True, mask=True)


def _reach(ring: Sequence[Pair], left: float, right: float) -> Pair:
    """Between what heights an outline is open over the whole of a stretch."""
    low, high = [], []
    for x in (left, (left + right) / 2, right):
        levels = [
            y1 + (y2 - y1) * (x - x1) / (x2 - x1)
            for (x1, y1), (x2, y2) in zip(ring, [*ring[1:], ring[0]], strict=True)
            if abs(x2 - x1) > 1e-9 and min(x1, x2) <= x <= max(x1, x2)
        ]
        if not levels:
            return 0.0, 0.0
        low.append(min(levels))
        high.append(max(levels))
    return max(low), min(high)


def _named(layer: Layer, system: System) -> str:
    return _with_value(shorten(layer.source, SOURCE_ROOM, SMALL), _value(layer, system))


def _with_value(source: str, value: str) -> str:
    """A name and its value; "load 4" and a number next to it are kept apart."""
    numbered = " " in source and source[-1:].isdigit()
    return f"{source}{':' if numbered else ''} {value}".strip()


def _value(layer: Layer, system: System) -> str:
    ends = layer.ends()
    if ends is not None and abs(ends[0] - ends[1]) > 1e-9 * abs(ends[0]):
        return f"{show(ends[0], 'kN/m', system)} to {show(ends[1], 'kN/m', system)}"
    return show(layer.peak()[1], "kN/m", system)


def _point_text(load: PointLoad, system: System) -> str:
    return _with_value(shorten(load.source, SOURCE_ROOM, SMALL), show(load.force, "kN", system))


def spoken_loads(layers: Sequence[Layer], loads: Sequence[Load], system: System) -> str:
    """A case's loads in words."""
    parts = []
    for layer in layers:
        even = layer.ends() is not None
        where = "" if even else f", largest at {length_text(layer.peak()[0], system)}"
        parts.append(f"{_with_value(layer.source, _value(layer, system))}{where}")
    for at, group in point_loads(loads):
        parts += [
            f"{_with_value(load.source, show(load.force, 'kN', system))} at {length_text(at, system)}"
            for load in group
        ]
    return "; ".join(parts) or "none"
