"""Loads on a line, as plain numbers."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class LineLoad:
    """A load that runs linearly from one place to another.

    Parameters
    ----------
    start, end : float [m]
        From the beam's start; start < end.
    first, last : float [kN/m]
        Intensity at start and at end, downward positive.
    source : str
        Where it comes from: a panel's mark, ``self weight``, ``load 2``.
    """

    start: float
    end: float
    first: float
    last: float
    source: str = ""

    @property
    def total(self) -> float:
        """Resultant [kN]."""
        return (self.first + self.last) / 2 * (self.end - self.start)


@dataclass(frozen=True, slots=True)
class PointLoad:
    """A force [kN], downward positive, at a distance [m] from the beam's start."""

    at: float
    force: float
    source: str = ""

    @property
    def total(self) -> float:
        """Resultant [kN]."""
        return self.force


Load = LineLoad | PointLoad
