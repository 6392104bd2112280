"""A span between two supports, cut where its loads break, and walked from end to end.

Along each stretch the load is linear, so shear, moment, rotation and deflection are polynomials of
degree 2, 3, 4 and 5; the sums here are those that :mod:`calcpack.equivalent.general` derives and a
sheet prints.
"""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np

from calcpack.statics.loads import LineLoad, Load, PointLoad

SAME_PLACE = 1e-12  # of the span: nearer than this, two places are one
AT_THE_END = 1e-9  # [m]: a point load this near a support goes straight into it


@dataclass(frozen=True, slots=True)
class Stretch:
    """A part of a span along which the load is linear, with what the span does at its start.

    Parameters
    ----------
    start, end : float [m]
    first, last : float [kN/m]
        Load at its start and end.
    force : float [kN]
        The point load at its start; 0 where none stands.
    shear, moment : float [kN], [kNm]
        Just after its start, the point load included.
    rotation, deflection : float [kNm²], [kNm³]
        At its start, times the bending stiffness.
    """

    start: float
    end: float
    first: float
    last: float
    force: float
    shear: float = 0.0
    moment: float = 0.0
    rotation: float = 0.0
    deflection: float = 0.0

    @property
    def length(self) -> float:
        """How long it is [m]."""
        return self.end - self.start

    @property
    def slope(self) -> float:
        """How the load changes along it [kN/m²]."""
        return (self.last - self.first) / self.length

    @property
    def total(self) -> float:
        """Its distributed load [kN]."""
        return (self.first + self.last) / 2 * self.length

    def load_moments(self) -> tuple[float, float, float]:
        """Return the integrals of w·x, w·x² and w·x³ along it, x from the span's start [kNm..]."""
        a, b, h, first, last = self.start, self.end, self.length, self.first, self.last
        return (
            h / 6 * (first * (2 * a + b) + last * (a + 2 * b)),
            h / 12 * (first * (3 * a * a + 2 * a * b + b * b) + last * (a * a + 2 * a * b + 3 * b * b)),
            h / 20 * first * (4 * a**3 + 3 * a * a * b + 2 * a * b * b + b**3)
            + h / 20 * last * (a**3 + 2 * a * a * b + 3 * a * b * b + 4 * b**3),
        )

    def shear_at(self, t: float) -> float:
        """Shear [kN] at the distance t from its start."""
        return self.shear - t * (self.first + t * self.slope / 2)

    def moment_at(self, t: float) -> float:
        """Bending moment [kNm] at the distance t from its start."""
        return self.moment + t * (self.shear - t * (self.first / 2 + t * self.slope / 6))

    def rotation_at(self, t: float) -> float:
        """Rotation times bending stiffness [kNm²] at the distance t from its start."""
        return self.rotation - t * (
            self.moment + t * (self.shear / 2 - t * (self.first / 6 + t * self.slope / 24))
        )

    def deflection_at(self, t: float) -> float:
        """Deflection times bending stiffness [kNm³] at the distance t from its start."""
        return self.deflection + t * (
            self.rotation
            - t * (self.moment / 2 + t * (self.shear / 6 - t * (self.first / 24 + t * self.slope / 120)))
        )

    def shear_zeros(self) -> list[float]:
        """Return where along it the shear vanishes, from its start [m]."""
        inside = self.first**2 + 2 * self.slope * self.shear
        if inside < 0:
            return []
        # The two roots of k t²/2 + w t - V in the form that survives k = 0 and loses no digits.
        sum_ = self.first + math.copysign(math.sqrt(inside), self.first)
        roots = [2 * self.shear / sum_] if sum_ else []
        if self.slope:
            roots.append(-sum_ / self.slope)
        return [t for t in roots if 0 <= t <= self.length]

    def rotation_zeros(self) -> list[float]:
        """Return where along it the rotation vanishes, from its start [m]."""
        h = self.length
        quartic = np.array(
            [
                self.slope * h**4 / 24,
                self.first * h**3 / 6,
                -self.shear * h * h / 2,
                -self.moment * h,
                self.rotation,
            ]
        )
        scale = float(np.abs(quartic).max())
        if not scale:
            return []
        quartic[np.abs(quartic) < 1e-15 * scale] = 0.0
        zeros = []
        for root in np.roots(quartic):
            if abs(root.imag) > 1e-6 or not -1e-6 <= root.real <= 1 + 1e-6:
                continue
            t = float(root.real) * h
            for _ in range(3):  # Newton; the rotation's slope is the moment
                moment = self.moment_at(t)
                t += self.rotation_at(t) / moment if moment else 0.0
            zeros.append(min(max(t, 0.0), h))
        return zeros


def stretches(span: float, loads: Sequence[Load]) -> tuple[Stretch, ...]:
    """Add the loads up, cut the simply supported span where they break, and walk along it.

    Parameters
    ----------
    span : float [m]
    loads : sequence of LineLoad, PointLoad
        Measured from the span's start. Point loads at the very ends are left out.

    Returns
    -------
    tuple of Stretch
        From support to support without gaps.

    Raises
    ------
    ValueError
        The span has no length, a load lies beyond it, or something is not a finite number.

    Examples
    --------
    A load of 6 kN/m on the first half of a span of 4 m.

    >>> [(s.start, s.end, s.shear, s.moment) for s in stretches(4, [LineLoad(0, 2, 6, 6)])]
    [(0.0, 2.0, 9.0, 0.0), (2.0, 4.0, -3.0, 6.0)]
    """
    lines, points = _checked(span, loads)
    places = _places(span, lines, points)
    spot = _Snap(places)
    forces = dict.fromkeys(places, 0.0)
    for point in points:
        forces[spot(point.at)] += point.force
    snapped = [(spot(line.start), spot(line.end), line) for line in lines]
    bare: list[Stretch] = []
    for a, b in itertools.pairwise(places):
        first = last = 0.0
        for start, end, line in snapped:
            if start <= a and b <= end:
                slope = (line.last - line.first) / (end - start)
                first += line.first + slope * (a - start)
                last += line.last - slope * (end - b)
        bare.append(Stretch(a, b, first, last, forces[a]))
    return _walk(span, bare)


def _checked(span: float, loads: Iterable[Load]) -> tuple[list[LineLoad], list[PointLoad]]:
    if not (span > 0 and math.isfinite(span)):
        raise ValueError(f"a span of {span} m cannot be analysed")
    lines: list[LineLoad] = []
    points: list[PointLoad] = []
    for load in loads:
        if isinstance(load, PointLoad):
            places, sizes = (load.at, load.at), (load.force, 0.0)
        else:
            places, sizes = (load.start, load.end), (load.first, load.last)
        if not all(map(math.isfinite, (*places, *sizes))):
            raise ValueError(f"{load} is not made of finite numbers")
        if places[0] < -AT_THE_END or places[1] > span + AT_THE_END or places[1] < places[0]:
            raise ValueError(f"{load} does not lie on a span of {span} m")
        if isinstance(load, LineLoad):
            lines.append(load)
        elif AT_THE_END < load.at < span - AT_THE_END:
            points.append(load)
    return lines, points


def _places(span: float, lines: Sequence[LineLoad], points: Sequence[PointLoad]) -> list[float]:
    near = SAME_PLACE * span
    wanted = sorted({x for line in lines for x in (line.start, line.end)} | {point.at for point in points})
    places = [0.0]
    for x in wanted:
        if places[-1] + near < x < span - near:
            places.append(float(x))
    return [*places, float(span)]


class _Snap:
    """Takes a place to the cut it belongs to."""

    def __init__(self, places: Sequence[float]) -> None:
        self.places = np.array(places)

    def __call__(self, x: float) -> float:
        return float(self.places[int(np.argmin(np.abs(self.places - x)))])


def _walk(span: float, bare: Sequence[Stretch]) -> tuple[Stretch, ...]:
    """Reactions and start rotation from the sums over the whole span, then on from cut to cut."""
    about_start = math.fsum(p.force * p.start + p.load_moments()[0] for p in bare)
    all_load = math.fsum(p.force + p.total for p in bare)
    shear = all_load - about_start / span
    rotation = math.fsum(_start_rotation(span, p) for p in bare)
    moment = deflection = 0.0
    walked: list[Stretch] = []
    for p in bare:
        shear -= p.force
        part = Stretch(p.start, p.end, p.first, p.last, p.force, shear, moment, rotation, deflection)
        walked.append(part)
        h = part.length
        shear, moment = part.shear_at(h), part.moment_at(h)
        rotation, deflection = part.rotation_at(h), part.deflection_at(h)
    return tuple(walked)


def _start_rotation(span: float, p: Stretch) -> float:
    first, second, third = p.load_moments()
    point = p.force * p.start * (span - p.start) * (2 * span - p.start)
    return (point + 2 * span**2 * first - 3 * span * second + third) / (6 * span)
