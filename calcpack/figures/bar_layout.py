"""Where a concrete beam's bars and stirrups lie along it."""

from __future__ import annotations

import itertools
from collections.abc import Sequence
from typing import Literal, NamedTuple

from calcpack.figures.beam_axis import BeamAxis, Bearing, beam_row
from calcpack.figures.drawing import (
    FILLS,
    GREY,
    HAIR,
    HATCHING,
    HEAVY,
    LINES,
    MEDIUM,
    SMALL,
    THIN,
    WASH,
    Drawing,
    Stroke,
)
from calcpack.figures.figure import Figure
from calcpack.figures.lettering import shorten, text_width
from calcpack.figures.parts import free_row, length, line_height, ticked_line
from calcpack.sheet.display import System

HEIGHT = 11.0  # of the drawn beam [mm]; its depth is not to scale
EDGE = 1.7  # from the beam's face to the axis of its outermost bars [mm]
LEVEL = 1.0  # from one layer of bars to the next, inside the beam [mm]
ROW = 4.4  # from one bar drawn out to the next [mm]
CLOSEST = 0.55  # stirrups closer than this on paper are not all drawn [mm]


class Bars(NamedTuple):
    """Bars side by side: at which face, from where to where along the beam [m], what they are called."""

    face: Literal["top", "bottom"]
    start: float
    end: float
    text: str


class Zone(NamedTuple):
    """Stirrups at one spacing: from where to where, how far apart [m], what they are called."""

    start: float
    end: float
    spacing: float
    text: str


def bar_layout(
    length_m: float,
    bearings: Sequence[Bearing],
    layers: Sequence[Bars | tuple[str, float, float, str]],
    stirrup_zones: Sequence[Zone | tuple[float, float, float, str]],
    system: System = "SI",
    *,
    fixed: tuple[bool, bool] = (False, False),
    mark: str = "",
    width_mm: float = 170.0,
) -> Figure:
    """The reinforcement seen from the side: bars in the beam and drawn out over and under it, stirrup zones.

    Parameters
    ----------
    length_m : float [m]
        Of the beam.
    bearings : (at [m], kind, mark) in order
    layers : (face, from [m], to [m], text)
        "top" or "bottom" bars, outermost layer first; the text says what they are ("4 ⌀20"), their length
        is written behind it.
    stirrup_zones : (from [m], to [m], spacing [m], text) in order
        "⌀10 at 150, 12 pcs".
    system : "SI" or "US"
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
        The length is not positive, bars or a zone end before they start, a face is neither top nor bottom,
        or a spacing is not positive.

    Examples
    --------
    >>> figure = bar_layout(
    ...     6.0,
    ...     [(0.0, "column", "C1"), (6.0, "column", "C2")],
    ...     [("bottom", 0.0, 6.0, "4 ⌀20"), ("top", 0.0, 6.0, "2 ⌀16")],
    ...     [(0.0, 6.0, 0.15, "⌀10 at 150, 40 pcs")],
    ...     mark="B5",
    ... )
    >>> print(figure.alt)
    Reinforcement of B5: bottom 4 ⌀20 from 0.00 m to 6.00 m; top 2 ⌀16 from 0.00 m to 6.00 m; stirrups \
⌀10 at 150, 40 pcs from 0.00 m to 6.00 m.
    """
    axis = BeamAxis(length_m, tuple(bearings), fixed, width_mm)
    bars, zones = _validated(layers, stirrup_zones)
    sheet = Drawing()
    levels = {face: _levels([bar for bar in bars if bar.face == face], axis) for face in ("top", "bottom")}
    _concrete(sheet, axis, zones)
    _inside(sheet, axis, levels)
    above = _drawn_out(sheet, axis, levels["top"], HEIGHT + 2.6, 1.0, system)
    low = _zones(sheet, axis, zones, -2.2, system)
    low = _drawn_out(sheet, axis, levels["bottom"], low - 1.6, -1.0, system)
    foot = beam_row(axis, system)
    top = foot.extent()[3]
    foot_y = low - 2.4 - top
    axis.guides(sheet, above, foot_y)
    sheet.paste(foot, 0.0, foot_y)
    return sheet.finish(width_mm, _spoken(bars, zones, mark, system))


def _validated(
    layers: Sequence[Bars | tuple[str, float, float, str]],
    zones: Sequence[Zone | tuple[float, float, float, str]],
) -> tuple[list[Bars], list[Zone]]:
    bars: list[Bars] = []
    for face, start, end, text in layers:
        if face not in ("top", "bottom"):
            raise ValueError(f"bars lie at the top or the bottom, not at {face!r}")
        if not start < end:
            raise ValueError(f"bars from {start} to {end} have no length")
        bars.append(Bars("top" if face == "top" else "bottom", start, end, text))
    found = [Zone(*zone) for zone in zones]
    for zone in found:
        if not (zone.start < zone.end and zone.spacing > 0):
            raise ValueError(f"a stirrup zone from {zone.start} to {zone.end} at {zone.spacing}")
    return bars, found


def _levels(bars: Sequence[Bars], axis: BeamAxis) -> list[list[Bars]]:
    """Bars that do not lie on one another, nor their words, share a level; the first is the outermost."""
    levels: list[list[Bars]] = []
    for bar in bars:
        need = text_width(bar.text, SMALL) + 16.0  # with its length behind it
        left, right = axis.x(bar.start), axis.x(bar.end)
        slack = max(0.0, need - (right - left)) / 2
        for level in levels:
            if all(
                right + slack < axis.x(other.start) - 1.0 or axis.x(other.end) < left - slack - 1.0
                for other in level
            ):
                level.append(bar)
                break
        else:
            levels.append([bar])
    return levels


def _concrete(sheet: Drawing, axis: BeamAxis, zones: Sequence[Zone]) -> None:
    """The beam from the side with its stirrups at their true spacing."""
    left, right = axis.x(0.0), axis.x(axis.length)
    face = [(left, 0.0), (right, 0.0), (right, HEIGHT), (left, HEIGHT)]
    sheet.area(face, WASH, FILLS)
    sheet.outline(face, Stroke(MEDIUM), HEAVY)
    for zone in zones:
        count = max(1, round((zone.end - zone.start) / zone.spacing))
        # Too many to tell apart: every second, third ... is drawn, the first and the last of all.
        step = next(n for n in itertools.count(1) if n * zone.spacing * axis.scale >= CLOSEST or n >= count)
        for number in range(0, count + 1, step):
            x = axis.x(zone.start + (zone.end - zone.start) * number / count)
            sheet.line([(x, EDGE - 0.6), (x, HEIGHT - EDGE + 0.6)], Stroke(HAIR, GREY), LINES)


def _inside(sheet: Drawing, axis: BeamAxis, levels: dict[str, list[list[Bars]]]) -> None:
    """The bars where they lie in the beam."""
    for face, stacked in levels.items():
        for number, level in enumerate(stacked):
            off = EDGE + number * LEVEL
            y = off if face == "bottom" else HEIGHT - off
            for bar in level:
                sheet.line([(axis.x(bar.start), y), (axis.x(bar.end), y)], Stroke(1.2), HEAVY)


def _drawn_out(
    sheet: Drawing, axis: BeamAxis, levels: Sequence[Sequence[Bars]], first: float, way: float, system: System
) -> float:
    """The bars once more, over or under the beam, with their words; returns how far they reach."""
    y = first if way > 0 else first - line_height(SMALL) - 0.4
    reach = first
    for level in levels:
        for bar in level:
            left, right = axis.x(bar.start), axis.x(bar.end)
            sheet.line([(left, y), (right, y)], Stroke(1.2), HEAVY)
            for x in (left, right):
                sheet.line([(x, y - 0.7), (x, y + 0.7)], Stroke(THIN), LINES)
            text = f"{shorten(bar.text, 60.0, SMALL)}, {length(bar.end - bar.start, system)}"
            half = text_width(text, SMALL) / 2
            middle = min(max((left + right) / 2, 0.4 + half), axis.width - 0.4 - half)
            sheet.text(middle, y + 0.5 + line_height(SMALL) / 2, text, SMALL, level="box", mask=True)
        reach = y + line_height(SMALL) + 0.6 if way > 0 else y - 0.8
        y += way * ROW
    return reach


def _zones(sheet: Drawing, axis: BeamAxis, zones: Sequence[Zone], top: float, system: System) -> float:
    """A chain under the beam: each zone's stirrups and its length; returns its foot."""
    if not zones:
        return top + 1.0
    height = line_height(SMALL)
    rows: list[float] = []  # where the last label of each row under the lengths ends
    y = top - height - 0.6
    ticked_line(sheet, sorted({axis.x(end) for zone in zones for end in (zone.start, zone.end)}), (0.0, y))
    for zone in zones:
        left, right = axis.x(zone.start), axis.x(zone.end)
        size = length(zone.end - zone.start, system)
        text = shorten(zone.text, 60.0, SMALL)
        middle = (left + right) / 2
        if max(text_width(text, SMALL), text_width(size, SMALL)) + 1.0 <= right - left:
            sheet.text(middle, y + 0.5 + height / 2, text, SMALL, level="box", mask=True)
            sheet.text(middle, y - 0.6 - height / 2, size, SMALL, level="box", tone=GREY, mask=True)
            continue
        # Too narrow: both hang under the chain, led to their zone.
        both = f"{text}, {size}"
        half = text_width(both, SMALL) / 2
        place = min(max(middle, 0.4 + half), axis.width - 0.4 - half)
        row = free_row(rows, place - half, place + half, 1.6) + 1
        foot = y - 0.6 - height * (row + 0.5)
        sheet.line([(middle, y), (place, foot + height / 2)], Stroke(HAIR, GREY), HATCHING)
        sheet.text(place, foot, both, SMALL, level="box", mask=True)
    return y - 0.8 - height * (1 + len(rows))


def _spoken(bars: Sequence[Bars], zones: Sequence[Zone], mark: str, system: System) -> str:
    parts = [
        f"{bar.face} {bar.text} from {length(bar.start, system)} to {length(bar.end, system)}" for bar in bars
    ]
    parts += [
        f"stirrups {zone.text} from {length(zone.start, system)} to {length(zone.end, system)}"
        for zone in zones
    ]
    head = f"Reinforcement{f' of {mark}' if mark else ''}"
    return f"{head}: {'; '.join(parts) or 'none'}."
