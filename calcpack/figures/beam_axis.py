"""What all figures along a beam share: the axis, the beam with its supports, strips under one another."""

from __future__ import annotations

import itertools
from collections.abc import Sequence
from dataclasses import dataclass

from calcpack.figures.drawing import (
    BODY,
    GREY,
    HAIR,
    HATCHING,
    LINES,
    PALE,
    SMALL,
    Drawing,
    Stroke,
)
from calcpack.figures.labels import spread
from calcpack.figures.lettering import shorten, text_width
from calcpack.figures.parts import held_end, line_height, span_dimensions, support
from calcpack.sheet.display import System

Lines = list[tuple[str, float]]  # lines of text with their size [pt]
Bearing = tuple[float, str, str]  # [m] from the beam's start; "column", "wall" or "beam"; its mark
GUIDE = Stroke(HAIR, PALE, (1.2, 1.6))
BEAM = Stroke(1.5)
SIDE = 7.0  # free margin beside a beam [mm]
STRIP_GAP = 2.4  # [mm]


@dataclass(frozen=True)
class BeamAxis:
    """A beam laid along the paper.

    Parameters
    ----------
    length : float [m]
    bearings : what stands under it, in order
    fixed : whether its start and its end are held against rotation
    width : float [mm]
        Of the paper.
    """

    length: float
    bearings: tuple[Bearing, ...]
    fixed: tuple[bool, bool]
    width: float

    def __post_init__(self) -> None:
        if not self.length > 0:
            raise ValueError(f"a beam of length {self.length} cannot be drawn")

    @property
    def scale(self) -> float:
        """[mm/m]."""
        return (self.width - 2 * SIDE) / self.length

    def x(self, at: float) -> float:
        """A distance from the beam's start [m] on paper [mm]."""
        return SIDE + at * self.scale

    @property
    def stops(self) -> list[float]:
        """The ends and what stands under the beam, in order [m]."""
        return sorted({0.0, self.length, *(bearing[0] for bearing in self.bearings)})

    @property
    def spans(self) -> list[tuple[float, float]]:
        """From one stop to the next, overhangs included [m]."""
        return list(itertools.pairwise(self.stops))

    def at_bearing(self, at: float) -> bool:
        """Whether a place is over a bearing or at an end, where it needs no saying."""
        return any(abs(at - place) < 1e-6 * max(self.length, 1.0) for place in self.stops)

    def guides(self, drawing: Drawing, top: float, foot: float) -> None:
        """Faint upright lines through the ends and what stands under the beam."""
        for at in self.stops:
            drawing.line([(self.x(at), top), (self.x(at), foot)], GUIDE, HATCHING)

    def bounds(self) -> tuple[float, float, float, float]:
        """Between what labels keep: the paper's sides."""
        return 0.4, -1e9, self.width - 0.4, 1e9

    def baseline(self, drawing: Drawing) -> None:
        """The line a diagram stands on."""
        drawing.line([(self.x(0.0), 0.0), (self.x(self.length), 0.0)], Stroke(0.6), LINES)


def beam_row(axis: BeamAxis, system: System, notes: Sequence[Sequence[str]] = ()) -> Drawing:
    """The beam with its supports, their marks, notes under each (reactions, say) and the spans' lengths.

    The beam's line stands at y = 0. ``notes`` holds the lines of text of each bearing, in order.
    """
    drawing = Drawing()
    drawing.line([(axis.x(0.0), 0.0), (axis.x(axis.length), 0.0)], BEAM, LINES)
    ends = {0.0: axis.fixed[0], axis.length: axis.fixed[1]}
    for number, (place, held) in enumerate(ends.items()):
        if held:
            held_end(drawing, axis.x(place), 0.0, 1 if number else -1)
    blocks: list[Lines] = []
    low = 0.0
    for number, (at, kind, mark) in enumerate(axis.bearings):
        held = any(fixed and abs(at - place) < 1e-9 for place, fixed in ends.items())
        low = min(low, -2.8 if held else support(drawing, axis.x(at), -0.26, kind).bounds()[1])
        lines = [(shorten(mark, 18.0, BODY), BODY)] if mark else []
        blocks.append(lines + [(text, SMALL) for text in (notes[number] if number < len(notes) else ())])
    if any(blocks):
        low = _under(drawing, axis, low, blocks)
    line = low - 4.0
    span_dimensions(
        drawing, axis.stops, axis.scale, (axis.x(0.0), line), system, (0.5 - SIDE, axis.width - SIDE - 0.5)
    )
    return drawing


def _under(drawing: Drawing, axis: BeamAxis, foot: float, blocks: list[Lines]) -> float:
    """Blocks of lines under the supports, led aside where these stand close; returns their foot."""
    widths = [max((text_width(text, size) for text, size in lines), default=0.0) for lines in blocks]
    heights = [sum(line_height(size) for _, size in lines) for lines in blocks]
    rows = 1
    while rows < 4 and sum(widths) / rows + 1.6 * len(widths) > axis.width - 1.0:
        rows += 1
    xs = [axis.x(at) for at, _, _ in axis.bearings]
    gaps = [(one + two) / 2 / rows + 1.6 for one, two in itertools.pairwise(widths)]
    moved = spread(xs, gaps, 0.5 + widths[0] / 2, axis.width - 0.5 - widths[-1] / 2)
    led = any(abs(a - b) > 1.5 for a, b in zip(xs, moved, strict=True)) or rows > 1
    first = foot - (2.4 if led else 0.5)
    lowest = foot
    for number, (x, aside, lines) in enumerate(zip(xs, moved, blocks, strict=True)):
        top = y = first - (number % rows) * (max(heights) + 0.5)
        if led and lines:
            drawing.line([(x, foot - 0.2), (aside, first + 0.3), (aside, top)], Stroke(HAIR, GREY), HATCHING)
        for text, size in lines:
            drawing.text(aside, y - line_height(size) / 2, text, size, level="box")
            y -= line_height(size)
        lowest = min(lowest, y)
    return lowest


def stacked(
    axis: BeamAxis, strips: Sequence[tuple[str, str, Drawing]], foot: Drawing, foot_title: str = ""
) -> Drawing:
    """Strips under one another, each with a title at left and a remark at right, the beam under them.

    Each strip and the foot have their own y = 0 at the beam's line.
    """
    sheet = Drawing()
    y = 0.0
    for title, remark, strip in strips:
        _, bottom, _, top = strip.extent()
        y -= line_height(SMALL) / 2
        sheet.text(0.5, y, title, SMALL, anchor="left", bold=True, level="box")
        if remark:
            sheet.text(axis.width - 0.5, y, remark, SMALL, anchor="right", tone=GREY, level="box")
        y -= line_height(SMALL) / 2 + 0.6 + max(top, 0.0)
        sheet.paste(strip, 0.0, y)
        y += min(bottom, 0.0) - STRIP_GAP
    y -= 0.6
    if foot_title:
        box = sheet.text(0.5, y, foot_title, SMALL, anchor="left", bold=True, level="under")
        y = box.bounds()[1] - 0.6 - foot.extent()[3]
    if strips:
        axis.guides(sheet, -line_height(SMALL), y)
    sheet.paste(foot, 0.0, y)
    return sheet
