"""Moments along the beam: the shift rule, bars that stop, the line of resistance."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from calcpack.clauses.en1992.model import CLOSE, within

Floats = NDArray[np.float64]


class TopZone(NamedTuple):
    """Where the bars over a support lie that do not run through [m]."""

    start: float
    end: float
    full_start: float  # fully anchored from here
    full_end: float


class Worst(NamedTuple):
    """Where the shifted moment comes nearest to the line of resistance."""

    at: float  # [m]
    moment: float  # [kNm], by size
    resistance: float  # [kNm]
    hogging: bool

    @property
    def ratio(self) -> float:
        """Moment over resistance."""
        return self.moment / self.resistance if self.resistance > 0 else 0.0


def shifted(x: Floats, moment: Floats, by: float) -> Floats:
    """At every place the largest of what lies within a distance on either side, not below zero.

    Parameters
    ----------
    x : array [m]
        Ascending.
    moment : array [kNm]
    by : float [m]
        a_l.

    Source: EN 1992-1-1:2004, 9.2.1.3(2).

    Examples
    --------
    >>> shifted(np.array([0.0, 1.0, 2.0, 3.0]), np.array([0.0, 5.0, -1.0, -2.0]), 1.0)
    array([5., 5., 5., 0.])
    """
    first = np.searchsorted(x, x - by - CLOSE)
    last = np.searchsorted(x, x + by + CLOSE)
    found = [moment[low:high].max() for low, high in zip(first, last, strict=True)]
    return np.asarray(np.maximum(np.asarray(found), 0.0))


def top_zones(
    x: Floats, hogging: Floats, through: float, length: float, rounding: float = 0.05
) -> tuple[TopZone, ...]:
    """Where more top bars are needed than those that run through, their anchorage added.

    Parameters
    ----------
    x, hogging : array [m], [kNm]
        Shifted hogging moment by size.
    through : float [kNm]
        Resistance of the bars that run through.
    length : float [m]
        Anchorage l_bd.
    rounding : float [m]
        Bars' lengths are multiples of it.

    Returns
    -------
    tuple of TopZone
        Those that meet are one.

    Source: EN 1992-1-1:2004, 9.2.1.3(2) and (3).

    Examples
    --------
    >>> x = np.linspace(0.0, 10.0, 11)
    >>> hogging = np.array([0.0, 0, 0, 0, 20, 50, 20, 0, 0, 0, 0])
    >>> top_zones(x, hogging, 10.0, 0.7)
    (TopZone(start=2.3, end=7.7, full_start=3.0, full_end=7.0),)
    """
    over = [not within(float(each), through) for each in hogging]
    zones: list[TopZone] = []
    for number in (int(each) for each in np.flatnonzero(over)):
        # the moment is below the resistance one place further on either side
        low, high = float(x[max(number - 1, 0)]), float(x[min(number + 1, len(x) - 1)])
        start = max(round(math.floor(round((low - length) / rounding, 6)) * rounding, 9), 0.0)
        end = min(round(math.ceil(round((high + length) / rounding, 6)) * rounding, 9), float(x[-1]))
        whole_start = 0.0 if start == 0.0 else round(start + length, 12)
        whole_end = float(x[-1]) if end == float(x[-1]) else round(end - length, 12)
        zone = TopZone(start, end, whole_start, whole_end)
        if zones and zone.start <= zones[-1].end:
            zones[-1] = TopZone(zones[-1].start, zone.end, zones[-1].full_start, zone.full_end)
        else:
            zones.append(zone)
    return tuple(zones)


def resistance(x: Floats, zones: Sequence[TopZone], through: float, full: float) -> Floats:
    """Hogging resistance along the beam [kNm]; within l_bd of a bar's end it grows in proportion.

    Parameters
    ----------
    x : array [m]
    zones : sequence of TopZone
    through, full : float [kNm]
        Resistance of the bars that run through, and of all bars.

    Source: EN 1992-1-1:2004, 9.2.1.3(3).

    Examples
    --------
    >>> zone = TopZone(2.0, 8.0, 3.0, 7.0)
    >>> resistance(np.array([1.0, 2.5, 5.0]), [zone], 10.0, 50.0)
    array([10., 30., 50.])
    """
    found = np.full_like(x, through)
    for zone in zones:
        places = [zone.start, zone.full_start, zone.full_end, zone.end]
        values = [through, full, full, through]
        if zone.full_start <= zone.start:
            places, values = places[1:], values[1:]
        if zone.full_end >= zone.end:
            places, values = places[:-1], values[:-1]
        within = (x >= zone.start) & (x <= zone.end)
        found = np.where(within, np.interp(x, places, values), found)
    return found


def nearest(x: Floats, moment: Floats, resisted: Floats, hogging: bool) -> Worst:
    """The place with the largest ratio; the first where several tie.

    Parameters
    ----------
    x : array [m]
    moment, resisted : array [kNm]
        Shifted moments by size, and the line of resistance.
    hogging : bool
        For the words.

    Source: EN 1992-1-1:2004, 9.2.1.3(1)P: the line of resistance covers the shifted moments.
    """
    ratio = moment / resisted
    number = int(np.argmax(np.round(ratio, 9)))
    return Worst(float(x[number]), float(moment[number]), float(resisted[number]), hogging)
