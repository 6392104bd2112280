"""One span between two supports, taken alone: what its loads do to it."""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from calcpack.equivalent.stretches import AT_THE_END, SAME_PLACE, Stretch, stretches
from calcpack.statics.loads import LineLoad, Load, PointLoad

NOTHING = 1e-13  # of what the loads would do if none lifted: less is rounding


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
    size = sum(
        abs(load.force)
        if isinstance(load, PointLoad)
        else max(abs(load.first), abs(load.last)) * (load.end - load.start)
        for load in loads
    )
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


def _end_moments(span: float, parts: Sequence[Stretch]) -> tuple[float, float]:
    start, end = [], []
    for p in parts:
        first, second, third = p.load_moments()
        rest = span - p.start
        start.append((p.force * p.start * rest**2 + span**2 * first - 2 * span * second + third) / span**2)
        end.append((p.force * p.start**2 * rest + span * second - third) / span**2)
    return math.fsum(start), math.fsum(end)
