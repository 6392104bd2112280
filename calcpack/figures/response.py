"""What a beam answers: shear, bending moment and deflection along it, extremes at their places."""

from __future__ import annotations

import itertools
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Any, Literal

import numpy as np

from calcpack.figures.beam_axis import BeamAxis, Bearing, beam_row, stacked
from calcpack.figures.diagram import FAR, Diagram, between
from calcpack.figures.drawing import HEAVY, INK, LINES, WASH, Stroke
from calcpack.figures.figure import Figure
from calcpack.figures.shapes import Array, Pair
from calcpack.sheet.display import System, show

Quantity = Literal["shear", "moment", "deflection"]
Role = Literal["upper", "lower", "line"]
CurveData = tuple[Any, Any, Role]  # places [m], values, what it is
Extreme = tuple[Quantity, float, float]  # quantity, value, place [m]


@dataclass(frozen=True)
class Manner:
    """How a quantity is drawn and said."""

    title: str
    name: str
    unit: str
    factor: float  # from SI to the unit it is shown in
    upward: int  # the side positive values are drawn on
    height: float  # of the whole diagram [mm]


MANNERS: Mapping[Quantity, Manner] = {
    "shear": Manner("shear", "shear", "kN", 1.0, 1, 17.0),
    "moment": Manner("bending moment, drawn on the tension side", "bending moment", "kN*m", 1.0, -1, 19.0),
    "deflection": Manner("deflection", "deflection", "mm", 1000.0, -1, 12.0),
}
WORTH = 0.06  # of the largest value: what is smaller is not written unless asked for


def response_figure(
    length: float,
    bearings: Sequence[Bearing],
    curves: Mapping[Quantity, Sequence[CurveData]],
    system: System = "SI",
    *,
    extremes: Sequence[Extreme] | None = None,
    reactions: Sequence[float | tuple[float, float]] = (),
    limits: Sequence[tuple[Quantity, float, float, float]] = (),
    remarks: Mapping[Quantity, str] | None = None,
    fixed: tuple[bool, bool] = (False, False),
    mark: str = "",
    width_mm: float = 120.0,
) -> Figure:
    """Diagrams of shear, bending moment and deflection under one another, over the beam with its supports.

    Parameters
    ----------
    length : float [m]
    bearings : (at [m], kind, mark) in order
        Kind is "column", "wall" or "beam".
    curves : "shear" [kN], "moment" [kNm] or "deflection" [m] -> curves (x [m], y, role)
        Roles "upper" and "lower" bound an envelope, drawn as a filled area; "line" is one curve: thin and
        dashed in an envelope, filled down to the beam where it stands alone. A jump is two points
        at one place.
    system : "SI" or "US"
    extremes : (quantity, value, at [m])
        What is written at its place; left out, what stands out among the points of every span.
    reactions : one for each bearing [kN]
        A value, or the largest and the smallest.
    limits : (quantity, from [m], to [m], value)
        Drawn as a dashed line.
    remarks : quantity -> text
        Said at the right of the diagram's title.
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
        The length is not positive, a quantity is none of these, or reactions are not one a bearing.

    Examples
    --------
    >>> x = np.linspace(0.0, 6.0, 61)
    >>> curves = {"moment": [(x, 12.0 * x * (6.0 - x) / 2, "line")]}
    >>> print(response_figure(6.0, [(0.0, "column", "C1"), (6.0, "column", "C2")], curves, mark="B5").alt)
    Bending moment of B5, largest 54.0 kN·m at 3.00 m.
    """
    axis = BeamAxis(length, tuple(bearings), fixed, width_mm)
    if reactions and len(reactions) != len(bearings):
        raise ValueError(f"{len(reactions)} reactions for {len(bearings)} bearings")
    if unknown := sorted(set(curves) - set(MANNERS)):
        raise ValueError(f"no diagram is known for {', '.join(unknown)}")
    found = list(_worst(axis, curves)) if extremes is None else list(extremes)
    strips = []
    for quantity, manner in MANNERS.items():
        if curves.get(quantity):
            strip = _Strip(axis, manner, system)
            strip.draw(
                [
                    (np.asarray(x, dtype=float), np.asarray(y, dtype=float), role)
                    for x, y, role in curves[quantity]
                ],
                [(value, at) for which, value, at in found if which == quantity],
                [(start, end, value) for which, start, end, value in limits if which == quantity],
            )
            remark = "; ".join(filter(None, [(remarks or {}).get(quantity, ""), strip.remark]))
            strips.append((manner.title, remark, strip.drawing))
    foot = beam_row(axis, system, [_reaction_lines(reaction, system) for reaction in reactions])
    sheet = stacked(axis, strips, foot, "reactions" if reactions else "")
    return sheet.finish(width_mm, _spoken(axis, found, reactions, mark, system))


class _Strip(Diagram):
    """One diagram over y = 0."""

    def __init__(self, axis: BeamAxis, manner: Manner, system: System) -> None:
        super().__init__(axis, system)
        self.manner = manner
        self.remark = ""

    def draw(
        self,
        curves: Sequence[tuple[Array, Array, Role]],
        extremes: Sequence[tuple[float, float]],
        limits: Sequence[tuple[float, float, float]],
    ) -> None:
        """The areas, the lines, then the labels, the largest first."""
        largest = max(float(np.abs(y).max()) for _, y, _ in curves)
        near = [limit for limit in limits if abs(limit[2]) <= FAR * largest]
        ends = [float(end) for _, y, _ in curves for end in (y.min(), y.max())]
        self.fit([*ends, *(value for *_, value in near)], self.manner.height, self.manner.upward)
        self.axis.baseline(self.drawing)
        self.placer.block_line(self.ends)
        self._curves(curves)
        for start, end, value in near:
            self.limit(start, end, value, f"limit {self._shown(value)}")
        far = [self._shown(limit[2]) for limit in limits if limit not in near]
        self.remark = ", ".join(f"limit {text}" for text in dict.fromkeys(far))
        for value, at in sorted(extremes, key=lambda extreme: -abs(extreme[0])):
            if abs(value) > 1e-9 * max(largest, 1e-12):
                self.value(at, value, [self._shown(value)])

    def _curves(self, curves: Sequence[tuple[Array, Array, Role]]) -> None:
        lines = {
            role: [self.line(x, y) for x, y, which in curves if which == role]
            for role in ("upper", "lower", "line")
        }
        start, end = self.ends
        bounds = [*lines["upper"], *lines["lower"]]
        if lines["upper"] and lines["lower"]:
            self.drawing.area(np.vstack([lines["upper"][0], lines["lower"][0][::-1]]), WASH)
        else:
            bounds = bounds or lines.pop("line")
            for line in bounds:
                self.drawing.area(np.vstack([[start], line, [end]]), WASH)
        for line in bounds:
            whole = np.vstack([[start], line, [end]])
            self.drawing.line(whole, Stroke(0.8), HEAVY)
            self.placer.block_line(whole)
        for line in lines.get("line", []):
            self.drawing.line(line, Stroke(0.5, INK, (3.0, 1.4)), LINES)
            self.placer.block_line(line)

    def _shown(self, value: float) -> str:
        return show(value * self.manner.factor, self.manner.unit, self.system)


def _worst(axis: BeamAxis, curves: Mapping[Quantity, Sequence[CurveData]]) -> Iterator[Extreme]:
    """What is worth writing: in every span the value farthest out, and those at its ends that stand out."""
    for quantity, data in curves.items():
        enveloped = any(role != "line" for *_, role in data)
        largest = max((float(np.abs(y).max()) for _, y, _ in data), default=0.0)
        seen: list[Pair] = []
        for (start, end), (xs, ys, role) in itertools.product(axis.spans, data):
            if enveloped and role == "line":
                continue
            x, y = between(np.asarray(xs, float), np.asarray(ys, float), start, end)
            for sign, other in ((1.0, "lower"), (-1.0, "upper")):
                if role == other or len(y) < 2:
                    continue
                out = sign * y
                places = [int(out.argmax())]
                places += [n for n, beside in ((0, 1), (len(y) - 1, len(y) - 2)) if out[n] >= out[beside]]
                for n in places:
                    value, at = float(y[n]), float(x[n])
                    new = all(abs(at - b) > 1e-6 or abs(value - a) > 1e-6 * largest for a, b in seen)
                    if new and out[n] > WORTH * largest:
                        seen.append((value, at))
                        yield quantity, value, at


def _reaction_lines(reaction: float | tuple[float, float], system: System) -> list[str]:
    if isinstance(reaction, tuple):
        largest, smallest = (show(value, "kN", system) for value in reaction)
        return [largest] if largest == smallest else [f"max {largest}", f"min {smallest}"]
    return [show(reaction, "kN", system)]


def _spoken(
    axis: BeamAxis,
    extremes: Sequence[Extreme],
    reactions: Sequence[float | tuple[float, float]],
    mark: str,
    system: System,
) -> str:
    parts: list[str] = []
    for quantity, manner in MANNERS.items():
        found = [(value, at) for which, value, at in extremes if which == quantity]
        if found:
            ends = [("largest", *max(found)), ("smallest", *min(found))]
            words = [
                f"{word} {show(value * manner.factor, manner.unit, system)} at {show(at, 'm', system)}"
                for word, value, at in ends
                if (value > 0) == (word == "largest") and value
            ]
            parts.append(", ".join([f"{manner.name}{f' of {mark}' if mark and not parts else ''}", *words]))
    if reactions:
        words = [
            f"{mark or 'support'} {' '.join(_reaction_lines(reaction, system))}"
            for (_, _, mark), reaction in zip(axis.bearings, reactions, strict=True)
        ]
        parts.append(f"reactions {', '.join(words)}")
    text = "; ".join(parts) or "No response"
    return f"{text[0].upper()}{text[1:]}."
