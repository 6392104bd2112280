"""A span taken alone: its equivalent uniform loads, by the same elements."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from calcpack.record.auditing.beam import Load, part_of, solve
from calcpack.record.auditing.envelopes import Worst

FIELDS = ("shear", "moment", "deflection", "fixed_end_moment", "total")


def span_equivalents(start: float, end: float, sets: Sequence[Sequence[Load]]) -> list[dict[str, float]]:
    """Equivalent uniform loads of a span between two supports, one mapping a set [kN/m].

    Parameters
    ----------
    start, end : float [m]
        On the beam.
    sets : sets of loads
        In the beam's coordinates; point loads at the span's very ends are left out.

    Examples
    --------
    >>> (found,) = span_equivalents(0.0, 4.0, [[Load(0, 2, 0, 6), Load(2, 4, 6, 0)]])
    >>> [round(found[field], 6) for field in FIELDS]
    [3.0, 4.0, 3.84, 3.75, 3.0]
    """
    span = end - start
    own = [[load.moved(-start) for load in part_of(loads, start, end)] for loads in sets]
    own = [[_inside(load, span) for load in loads] for loads in own]
    simple = solve(span, (0.0, span), (False, False), own)
    held = solve(span, (0.0, span), (True, True), own)
    each_alone, nothing = np.eye(len(own)), np.zeros((len(own), len(own)))
    worst = Worst(simple)
    moments = worst.extremes("moment", each_alone, nothing)
    deflections = worst.extremes("deflection", each_alone, nothing)
    found = []
    for row, loads in enumerate(own):
        moment, sag = (
            _farther(*(each.value for each in extremes[row])) for extremes in (moments, deflections)
        )
        found.append(
            {
                "shear": 2 * _farther(*map(float, simple.reactions[row])) / span,
                "moment": 8 * moment / span**2,
                "deflection": 384 * sag / (5 * span**4),
                "fixed_end_moment": 12 * _farther(*(-float(end) for end in held.end_moments[row])) / span**2,
                "total": sum(load.total for load in loads) / span,
            }
        )
    return found


def _inside(load: Load, span: float) -> Load:
    return Load(max(load.start, 0.0), min(load.end, span), load.first, load.last, load.source, load.point)


def _farther(*values: float) -> float:
    """The value farthest from zero; of two alike the positive one."""
    return max(values, key=lambda value: (abs(value), value))
