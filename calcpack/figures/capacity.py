"""What a beam is asked for against what it can do, along its length."""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterator, Sequence
from typing import Any, Literal, NamedTuple

import numpy as np

from calcpack.figures.beam_axis import BeamAxis, Bearing, beam_row, stacked
from calcpack.figures.diagram import Diagram, between
from calcpack.figures.drawing import HAIR, HEAVY, INK, LINES, SMALL, WASH, Stroke
from calcpack.figures.figure import Figure
from calcpack.figures.labels import Box, Placer
from calcpack.figures.lettering import text_width
from calcpack.figures.parts import arrow, line_height
from calcpack.figures.shapes import Array
from calcpack.sheet.display import System, show, shown_number

Force = Literal["moment", "shear"]
Samples = tuple[Any, Any]  # places [m], values; a jump is two points at one place

HEIGHT = 34.0  # of the whole diagram [mm]
STEPS = 400  # places at which demand and capacity are compared
# The fullest wording of the title and of what is said beside it that fit next to each other is taken.
TITLES = {
    "moment": (
        "bending moment and resistance, drawn on the tension side",
        "moment and resistance, on the tension side",
        "moment, tension side",
    ),
    "shear": ("shear and resistance",),
}
WHOLE = ("heavy line: resistance", "heavy: resistance")
CUT = ("heavy line: resistance, not to scale beyond three times the demand", "resistance not to scale", "cut")
UNITS = {"moment": "kN*m", "shear": "kN"}
CAPACITY = Stroke(1.5, INK)


class Capacity(NamedTuple):
    """What a stretch of the beam can carry, each way; sloped where the values at its end are given."""

    start: float
    end: float
    positive: float
    negative: float
    positive_end: float | None = None
    negative_end: float | None = None


class Governing(NamedTuple):
    """A place where a ratio is written: demand and capacity with the demand's sign."""

    at: float
    demand: float
    capacity: float

    @property
    def ratio(self) -> float:
        """Demand over capacity, by size; infinite without any."""
        return abs(self.demand / self.capacity) if self.capacity else math.inf


def ratio_text(ratio: float) -> str:
    """A ratio in two decimals, in more where these would hide that it is beyond one.

    Examples
    --------
    >>> ratio_text(0.7649), ratio_text(1.0004), ratio_text(math.inf)
    ('0.76', '1.0004', 'without limit')
    """
    if not math.isfinite(ratio):
        return "without limit"
    hidden = ratio > 1 and round(ratio, 2) <= 1
    return f"{ratio:.6g}" if hidden else f"{ratio:.2f}"


def capacity_figure(
    length: float,
    bearings: Sequence[Bearing],
    quantity: Force,
    demand: tuple[Samples, Samples],
    capacity: Sequence[Capacity | tuple[float, ...]],
    system: System = "SI",
    *,
    governing: Sequence[Governing | tuple[float, float, float]] | None = None,
    compared: Sequence[tuple[float, float]] = (),
    fixed: tuple[bool, bool] = (False, False),
    mark: str = "",
    width_mm: float = 170.0,
) -> Figure:
    """The envelope of a moment or shear with the resistance drawn over it, and the ratio where it is worst.

    Parameters
    ----------
    length : float [m]
    bearings : (at [m], kind, mark) in order
    quantity : "moment" or "shear"
        A moment is drawn on the tension side, sagging below the beam.
    demand : (upper, lower)
        Each (places [m], values [kNm] or [kN]), as a curve's ``sample`` gives them.
    capacity : sequence of (from [m], to [m], positive, negative)
        What the beam can carry in each direction, as amounts; a stretch whose capacity changes evenly has
        the values at its end behind these (see :class:`Capacity`).
    system : "SI" or "US"
    governing : sequence of (at [m], demand, capacity), optional
        Where ratios are written; left out, the worst place each way is found.
    compared : sequence of (from [m], to [m]), optional
        Where demand and capacity are compared; left out, everywhere.
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
        No such quantity, no capacity, a negative one, or stretches that are not in order.

    Examples
    --------
    >>> x = np.linspace(0.0, 6.0, 61)
    >>> figure = capacity_figure(
    ...     6.0,
    ...     [(0.0, "column", "C1"), (6.0, "column", "C2")],
    ...     "moment",
    ...     ((x, 12.0 * x * (6.0 - x) / 2), (x, 0.0 * x)),
    ...     [(0.0, 6.0, 90.0, 30.0)],
    ...     mark="B5",
    ... )
    >>> print(figure.alt)
    Bending moment and resistance of B5: largest ratio 0.60 at 3.00 m (54.0 of 90.0 kN·m).
    """
    if quantity not in TITLES:
        raise ValueError(f"no resistance is drawn for {quantity!r}")
    stretches = _stretches(capacity, length)
    upper, lower = ((np.asarray(x, dtype=float), np.asarray(y, dtype=float)) for x, y in demand)
    ranges = list(compared) or [(0.0, length)]
    if governing is None:
        places = list(_worst((upper, lower), stretches, ranges, length))
    else:
        places = [Governing(*place) for place in governing]
    places.sort(key=lambda place: -place.ratio)
    axis = BeamAxis(length, tuple(bearings), fixed, width_mm)
    strip = _Strip(axis, quantity, system)
    strip.draw(upper, lower, stretches, ranges, places)
    title, remark = _heading(TITLES[quantity], CUT if strip.cut else WHOLE, width_mm)
    sheet = stacked(axis, [(title, remark, strip.drawing)], beam_row(axis, system))
    return sheet.finish(width_mm, _spoken(quantity, places, mark, system))


def _heading(titles: Sequence[str], remarks: Sequence[str], width: float) -> tuple[str, str]:
    """A title and a remark that fit beside each other, both as full as may be."""
    for title, remark in itertools.product(titles, remarks):
        if text_width(title, SMALL, bold=True) + text_width(remark, SMALL) + 4.0 <= width:
            return title, remark
    return titles[-1], remarks[-1]


def _stretches(capacity: Sequence[Capacity | tuple[float, ...]], length: float) -> list[Capacity]:
    found = [Capacity(*stretch) for stretch in capacity]
    if not found:
        raise ValueError("no capacity is given")
    last = -1e-9 * length
    for stretch in found:
        if stretch.start < last - 1e-6 * length or stretch.end <= stretch.start:
            raise ValueError(f"the stretch from {stretch.start} to {stretch.end} is not in order")
        if min(value for value in stretch[2:] if value is not None) < 0:
            raise ValueError("a capacity is an amount, not negative")
        last = stretch.end
    return found


def _ends(stretch: Capacity, sign: float) -> tuple[float, float]:
    """A stretch's capacity at its start and end, with its sign."""
    if sign > 0:
        end = stretch.positive if stretch.positive_end is None else stretch.positive_end
        return stretch.positive, end
    end = stretch.negative if stretch.negative_end is None else stretch.negative_end
    return -stretch.negative, -end


def _worst(
    demand: tuple[tuple[Array, Array], tuple[Array, Array]],
    stretches: Sequence[Capacity],
    ranges: Sequence[tuple[float, float]],
    length: float,
) -> Iterator[Governing]:
    """The place of the largest ratio each way, if the beam is asked for anything that way."""
    largest = max(float(np.abs(y).max()) for _, y in demand)
    for sign, (xs, ys) in zip((1.0, -1.0), demand, strict=True):
        best: Governing | None = None
        for stretch in stretches:
            for start, end in ranges:
                low, high = max(stretch.start, start), min(stretch.end, end)
                if high < low:
                    continue
                x, y = between(xs, ys, low, high)
                first, last = _ends(stretch, sign)
                held = first + (last - first) * (x - stretch.start) / (stretch.end - stretch.start)
                asked = np.maximum(y * sign, 0.0)
                with np.errstate(divide="ignore", invalid="ignore"):
                    ratio = np.where(asked > 1e-9 * largest, asked / np.abs(held), 0.0)
                n = int(ratio.argmax())
                if ratio[n] > 0 and (best is None or ratio[n] > best.ratio * (1 + 1e-9)):
                    best = Governing(float(x[n]), float(y[n]), float(held[n]))
        if best is not None:
            yield best


class _Strip(Diagram):
    """Demand and resistance over y = 0."""

    def __init__(self, axis: BeamAxis, quantity: Force, system: System) -> None:
        super().__init__(axis, system)
        self.quantity: Force = quantity
        self.cut = False  # a resistance is drawn smaller than it is

    def draw(
        self,
        upper: tuple[Array, Array],
        lower: tuple[Array, Array],
        stretches: Sequence[Capacity],
        ranges: Sequence[tuple[float, float]],
        places: Sequence[Governing],
    ) -> None:
        """Demand filled, capacity heavy over it, what is beyond it hatched; then the words."""
        ends = [float(upper[1].max()), float(lower[1].min())]
        needed = max(abs(value) for value in ends)
        held = [value for stretch in stretches for sign in (1.0, -1.0) for value in _ends(stretch, sign)]
        # A resistance far beyond the demand would flatten it: it is cut, and said.
        cut = 3.0 * needed if needed > 0 else math.inf
        ends += [max(min(value, cut), -cut) for value in held]
        self.fit(ends, HEIGHT, -1.0 if self.quantity == "moment" else 1.0)
        self.axis.baseline(self.drawing)
        for line in (upper, lower):
            self._demand(*line)
        for sign, line in ((1.0, upper), (-1.0, lower)):
            if any(abs(value) > 1e-9 for stretch in stretches for value in _ends(stretch, sign)):
                self._capacity(stretches, sign, cut)
            self._beyond(line, stretches, sign, ranges)
        for number, place in enumerate(places):
            self._place(place, bold=number == 0)
        self._key(stretches, cut)

    def _demand(self, x: Array, y: Array) -> None:
        ring = self.closed(x, y)
        self.drawing.area(ring, WASH)
        self.drawing.line(ring, Stroke(0.6), LINES)
        self.placer.block_line(ring)

    def _capacity(self, stretches: Sequence[Capacity], sign: float, cut: float) -> None:
        points: list[tuple[float, float]] = []
        for stretch in stretches:
            for at, value in zip((stretch.start, stretch.end), _ends(stretch, sign), strict=True):
                points.append(self.at(at, max(min(value, cut), -cut)))
        first, last = points[0][0], points[-1][0]
        line = [(first, 0.0), *points, (last, 0.0)]
        self.drawing.line(line, CAPACITY, HEAVY)
        self.placer.block_line(line)

    def _beyond(
        self,
        line: tuple[Array, Array],
        stretches: Sequence[Capacity],
        sign: float,
        ranges: Sequence[tuple[float, float]],
    ) -> None:
        """What the beam is asked for beyond its capacity, densely hatched."""
        for stretch in stretches:
            for start, end in ranges:
                low, high = max(stretch.start, start), min(stretch.end, end)
                if high - low < 1e-9:
                    continue
                x, y = between(*line, low, high)
                fine = np.unique(np.concatenate([x, np.linspace(low, high, STEPS // 4)]))
                first, last = _ends(stretch, sign)
                held = first + (last - first) * (fine - stretch.start) / (stretch.end - stretch.start)
                asked = np.interp(fine, x, y)
                more = np.maximum(sign * asked, np.abs(held)) * sign
                if (np.abs(more) - np.abs(held)).max() <= 1e-9 * max(np.abs(asked).max(), 1e-12):
                    continue
                across = self.axis.x(0.0) + fine * self.axis.scale
                edge = np.column_stack([across, held * self.scale])
                ring = np.vstack([np.column_stack([across, more * self.scale]), edge[::-1]])
                self.drawing.hatch(ring, 45.0, 0.8, Stroke(HAIR, INK))

    def _place(self, place: Governing, bold: bool) -> None:
        """The ratio where it is worst, with an arrow from nothing to the demand."""
        x, y = self.at(place.at, place.demand)
        unit = UNITS[self.quantity]
        asked = shown_number(abs(place.demand), unit, self.system)
        words = [
            f"ratio {ratio_text(place.ratio)}",
            f"({asked} of {show(abs(place.capacity), unit, self.system)})",
        ]
        if abs(y) > 2.0:
            arrow(self.drawing, (x, 0.0), (x, y), Stroke(HAIR, INK), 1.4)
        self.placer.block_line([(x, 0.0), (x, y)])
        self.value(place.at, place.demand, words, bold=bold)

    def _key(self, stretches: Sequence[Capacity], cut: float) -> None:
        """Each capacity's value at its line, in the stretch's middle where there is room."""
        unit, height = UNITS[self.quantity], line_height(SMALL)
        written: list[tuple[float, str]] = []
        for sign in (1.0, -1.0):
            for stretch in stretches:
                first, last = _ends(stretch, sign)
                if abs(first) < 1e-9 or abs(first - last) > 1e-9 * abs(first):
                    continue
                text = show(abs(first), unit, self.system)
                if abs(first) > cut:
                    self.cut = True
                y = max(min(first, cut), -cut) * self.scale
                side = 1.0 if y > 0 else -1.0
                width = text_width(text, SMALL)
                left, right = self.axis.x(stretch.start), self.axis.x(stretch.end)
                if width + 0.6 > right - left or (y, text) in written:
                    continue
                middle, reach = (left + right) / 2, (right - left - width) / 2
                options = [
                    Box(middle + part * reach, y + off * side * (0.9 + height / 2), width + 0.4, height)
                    for off in (1.0, -1.0)
                    for part in (0.0, 0.5, -0.5, 0.9, -0.9)
                ]
                _, box = self.placer.pick(options)
                if self.placer.cost(box) < Placer.CROSSING:
                    self.placer.block(box)
                    written.append((y, text))
                    self.drawing.text(box.x, box.y, text, SMALL, level="box")


def _spoken(quantity: Force, places: Sequence[Governing], mark: str, system: System) -> str:
    name = {"moment": "Bending moment", "shear": "Shear"}[quantity]
    head = f"{name} and resistance{f' of {mark}' if mark else ''}"
    words = []
    for place in places:
        asked = shown_number(abs(place.demand), UNITS[quantity], system)
        held = show(abs(place.capacity), UNITS[quantity], system)
        words.append(f"ratio {ratio_text(place.ratio)} at {show(place.at, 'm', system)} ({asked} of {held})")
    return f"{head}: largest {', other way '.join(words)}." if words else f"{head}: nothing is asked for."
