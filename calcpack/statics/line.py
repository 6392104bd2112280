"""A straight beam and what holds it."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise

SAME_PLACE = 1e-9
"""Places closer together than this part of the beam's length are one place."""


@dataclass(frozen=True, slots=True)
class BeamLine:
    """A straight beam of constant stiffness on supports that do not settle.

    Parameters
    ----------
    length : float [m]
        From end to end, overhangs included.
    supports : tuple of float [m]
        Distances from the beam's start, ascending. A support holds the beam up and down and
        lets it turn; one within 1e-9 of the length from an end is moved onto that end.
    fixed_start, fixed_end : bool
        The end is held against rotation too; it needs a support there. A cantilever is one
        support with its end fixed.

    Raises
    ------
    ValueError
        If the beam is a mechanism (fewer than two of supports and fixed ends together), if
        supports are repeated, out of order or off the beam, or if a fixed end has no support.

    Examples
    --------
    >>> BeamLine(8.0, (0.0, 6.0)).spans
    ((0.0, 6.0),)
    >>> BeamLine(2.0, (0.0,), fixed_start=True).spans
    ()
    """

    length: float
    supports: tuple[float, ...]
    fixed_start: bool = False
    fixed_end: bool = False

    def __post_init__(self) -> None:
        if not (math.isfinite(self.length) and self.length > 0):
            raise ValueError(f"a beam's length must be positive and finite, not {self.length!r}")
        supports = tuple(self.snapped(place) for place in self.supports)
        if any(b - a <= self.tolerance for a, b in pairwise(supports)):
            raise ValueError(f"supports must be ascending and none repeated: {self.supports!r}")
        if len(supports) + self.fixed_start + self.fixed_end < 2:
            raise ValueError("a mechanism: fewer than two of supports and fixed ends together")
        if self.fixed_start and supports[:1] != (0.0,):
            raise ValueError("the start is fixed but has no support")
        if self.fixed_end and supports[-1:] != (self.length,):
            raise ValueError("the end is fixed but has no support")
        object.__setattr__(self, "supports", supports)

    @property
    def tolerance(self) -> float:
        """Distance [m] below which two places are one."""
        return SAME_PLACE * self.length

    @property
    def spans(self) -> tuple[tuple[float, float], ...]:
        """Start and end [m] of every stretch between two supports, overhangs left out."""
        return tuple(pairwise(self.supports))

    def snapped(self, place: float) -> float:
        """The place [m], moved onto an end it all but touches; ValueError if off the beam."""
        if not -self.tolerance <= place <= self.length + self.tolerance:
            raise ValueError(f"{place!r} m is off the beam, which is {self.length!r} m long")
        if place <= self.tolerance:
            return 0.0
        return self.length if place >= self.length - self.tolerance else float(place)
