"""One span between two supports, taken alone: what its loads do to it.

The span is cut wherever the load breaks and wherever a point load stands. Along each stretch the
load is linear, so shear, moment, rotation and deflection are polynomials of degree 2, 3, 4 and 5;
the sums here are those that :mod:`calcpack.equivalent.general` derives and a sheet prints.
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
NOTHING = 1e-13  # of what the loads would do if none lifted: less is rounding


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


@dataclass(frozen=True)
class Responses:
    """What the loads do to a span taken alone; of each the largest by size, with its sign.

    Parameters
    ----------
    shear : float [kN]
        The larger end reaction of the simply supported span, upward positive.
    moment, moment_at : float [kNm], [m]
        Its largest bending moment (sagging positive) and the place.
    deflection, deflection_at : float [kNm³], [m]
        Its largest deflection times bending stiffness (downward positive) and the place.
    end_moment : float [kNm]
        The larger end moment with both ends fixed, hogging positive.
    total : float [kN]
        All the load.
    reactions : (float, float) [kN]
        Both end reactions of the simply supported span.
    end_moments : (float, float) [kNm]
        Both end moments with both ends fixed, hogging positive.
    """

    shear: float
    moment: float
    moment_at: float
    deflection: float
    deflection_at: float
    end_moment: float
    total: float
    reactions: tuple[float, float]
    end_moments: tuple[float, float]


def loads_on(loads: Iterable[Load], start: float, end: float) -> tuple[Load, ...]:
    """Cut the loads of a beam down to one span, measured from the span's start.

    Point loads at the very ends of the span are left out: they go straight into the supports.

    Parameters
    ----------
    loads : iterable of LineLoad, PointLoad
    start, end : float [m]
        Where the span lies on the beam.

    Returns
    -------
    tuple of LineLoad, PointLoad
        In the order given.

    Raises
    ------
    ValueError
        The span has no length.

    Examples
    --------
    >>> loads_on([LineLoad(0, 4, 0, 8), PointLoad(2, 5), PointLoad(3, 7)], 2, 4)
    (LineLoad(start=0.0, end=2, first=4.0, last=8, source=''), PointLoad(at=1, force=7, source=''))
    """
    if not end > start:
        raise ValueError(f"a span from {start} m to {end} m has no length")
    kept: list[Load] = []
    for load in loads:
        if isinstance(load, PointLoad):
            if start + AT_THE_END < load.at < end - AT_THE_END:
                kept.append(PointLoad(load.at - start, load.force, load.source))
            continue
        a, b = max(load.start, start), min(load.end, end)
        if b - a <= SAME_PLACE * (end - start):
            continue
        slope = (load.last - load.first) / (load.end - load.start)
        first = load.first if a == load.start else load.first + slope * (a - load.start)
        last = load.last if b == load.end else load.last - slope * (load.end - b)
        kept.append(LineLoad(float(a - start), b - start, first, last, load.source))
    return tuple(kept)


def by_source(loads: Iterable[Load]) -> dict[str, tuple[Load, ...]]:
    """Sort loads by where they come from, in the order first met.

    Examples
    --------
    >>> list(by_source([PointLoad(1, 2, "B7"), LineLoad(0, 4, 1, 1, "self weight"), PointLoad(3, 2, "B7")]))
    ['B7', 'self weight']
    """
    sorted_: dict[str, tuple[Load, ...]] = {}
    for load in loads:
        sorted_[load.source] = (*sorted_.get(load.source, ()), load)
    return sorted_


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


def responses(span: float, loads: Sequence[Load]) -> Responses:
    """Work out what the loads do to the span taken alone.

    Parameters
    ----------
    span : float [m]
    loads : sequence of LineLoad, PointLoad
        Measured from the span's start; lifting loads are negative. Point loads at the very ends
        are left out.

    Returns
    -------
    Responses
        Of each response the one largest by size, with its sign; of two alike the positive one.
        All zero where there is no load.

    Raises
    ------
    ValueError
        The span has no length, a load lies beyond it, or something is not a finite number.

    Examples
    --------
    A symmetric triangle of 6 kN/m on 4 m: 1/4, 1/12 and 1/120 of w L, w L² and w L⁴, 5/96 of w L².

    >>> r = responses(4, [LineLoad(0, 2, 0, 6), LineLoad(2, 4, 6, 0)])
    >>> r.shear, r.moment, round(r.deflection, 9), round(r.end_moment, 9), r.total
    (6.0, 8.0, 12.8, 5.0, 12.0)
    """
    parts = stretches(span, loads)
    # What the same loads would do, all pressing down, bounds what rounding can leave behind.
    size = sum(abs(p.force) + max(abs(p.first), abs(p.last)) * p.length for p in parts)
    left, right = parts[0].shear, -parts[-1].shear_at(parts[-1].length)
    hold = _end_moments(span, parts)

    moments = [(p.moment, p.start) for p in parts]
    moments += [(p.moment_at(t), p.start + t) for p in parts for t in p.shear_zeros()]
    one_way = all(p.force >= 0 and p.first >= 0 and p.last >= 0 for p in parts) or all(
        p.force <= 0 and p.first <= 0 and p.last <= 0 for p in parts
    )
    deflections = [(p.deflection, p.start) for p in parts]
    for p in parts:
        # Loads all one way bend the span one way, and its rotation passes zero just once.
        if one_way and p.rotation * p.rotation_at(p.length) > 0:
            continue
        deflections += [(p.deflection_at(t), p.start + t) for t in p.rotation_zeros()]

    def settled(value: float, power: int) -> float:
        return value if abs(value) > NOTHING * size * span**power else 0.0

    moment, moment_at = max(moments, key=_by_size)
    deflection, deflection_at = max(deflections, key=_by_size)
    return Responses(
        shear=settled(_larger(left, right), 0),
        moment=settled(moment, 1),
        moment_at=moment_at,
        deflection=settled(deflection, 3),
        deflection_at=deflection_at,
        end_moment=settled(_larger(*hold), 1),
        total=settled(math.fsum(p.force + p.total for p in parts), 0),
        reactions=(settled(left, 0), settled(right, 0)),
        end_moments=(settled(hold[0], 1), settled(hold[1], 1)),
    )


def _larger(*values: float) -> float:
    return max(values, key=lambda value: (abs(value), value))


def _by_size(found: tuple[float, float]) -> tuple[float, float, float]:
    value, at = found
    return abs(value), value, -at


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


def _end_moments(span: float, parts: Sequence[Stretch]) -> tuple[float, float]:
    start, end = [], []
    for p in parts:
        first, second, third = p.load_moments()
        rest = span - p.start
        start.append((p.force * p.start * rest**2 + span**2 * first - 2 * span * second + third) / span**2)
        end.append((p.force * p.start**2 * rest + span * second - third) / span**2)
    return math.fsum(start), math.fsum(end)
