"""A beam as the clauses see it: sections, moments and shears along it, what the job gives."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from functools import cached_property
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from calcpack.clauses.bars import OFFICE, Bar, Stock
from calcpack.clauses.en1992.model import CLOSE, Outline, Strengths
from calcpack.clauses.en1992.national import National
from calcpack.statics import Band, Curve

Floats = NDArray[np.float64]
STEP = 0.02  # [m], at most, between places where moments along the beam are compared


class SpanCase(NamedTuple):
    """A span or an overhang; how its ends are held: "simple", "continuous" or "free"."""

    start: float
    end: float
    left: str
    right: str

    @property
    def length(self) -> float:
        """From support to support, or to the tip [m]."""
        return self.end - self.start

    @property
    def overhang(self) -> bool:
        """One end is free."""
        return "free" in (self.left, self.right)

    def holds(self, x: Floats) -> NDArray[np.bool_]:
        """Which of some places [m] lie within, the ends included."""
        return (x >= self.start - CLOSE) & (x <= self.end + CLOSE)


class SupportCase(NamedTuple):
    """A support: its place, half its width along the beam, whether it holds the beam from below."""

    at: float
    half: float
    direct: bool
    words: str
    end: bool  # turns freely at an end of the beam


class Given(NamedTuple):
    """What the job says of bars; None where the program chooses."""

    bottom: tuple[int, Bar] | None = None
    top: tuple[int, Bar] | None = None
    stirrups: tuple[int, Bar, float] | None = None  # legs, bar, spacing [m]
    cot: float | None = None


class Service(NamedTuple):
    """Moments of one span for its deflections [kNm]; live ones None without live load."""

    lasting: Curve
    rare: Curve | None
    dead: Curve | None


@dataclass(frozen=True)
class BeamCase:
    """A beam to design.

    Parameters
    ----------
    sagging, hogging : Outline
        With the effective flange of the spans and of the supports, each from its face in compression.
    strength, national
    cover, aggregate : float [m]
        Nominal cover of the stirrups; largest aggregate.
    exposure : str
    creep, shrinkage : float
    crack_limit : float [m]
    limits : (float or None, float or None)
        Span over ... for the live and the total deflection.
    moment, shear : Band
        Envelopes of the strength combinations [kNm], [kN].
    lasting : Band
        Moments of the quasi-permanent combination [kNm].
    spans, supports
    fixed : (bool, bool)
    points : tuple of float [m]
        Where point loads stand.
    service : tuple of Service
        One a span.
    given : Given
    stock : Stock
        The bars to choose from.
    """

    sagging: Outline
    hogging: Outline
    strength: Strengths
    national: National
    cover: float
    aggregate: float
    exposure: str
    creep: float
    shrinkage: float
    crack_limit: float
    limits: tuple[float | None, float | None]
    moment: Band
    shear: Band
    lasting: Band
    spans: tuple[SpanCase, ...]
    supports: tuple[SupportCase, ...]
    fixed: tuple[bool, bool] = (False, False)
    points: tuple[float, ...] = ()
    service: tuple[Service, ...] = ()
    given: Given = field(default_factory=Given)
    stock: Stock = OFFICE

    @property
    def length(self) -> float:
        """Of the beam [m]."""
        return self.spans[-1].end

    @cached_property
    def scale(self) -> float:
        """The largest moment by size [kNm], to tell a moment from rounding."""
        return abs(self.moment.largest_absolute.value)

    @cached_property
    def sag(self) -> float:
        """Largest sagging moment, 0 where there is none worth the name [kNm]."""
        value = self.moment.largest.value
        return value if value > 1e-6 * self.scale else 0.0

    @cached_property
    def hog(self) -> float:
        """Largest hogging moment by size [kNm]."""
        value = -self.moment.smallest.value
        return value if value > 1e-6 * self.scale else 0.0

    @cached_property
    def end_moment(self) -> float:
        """What an end support that turns freely may still hold [kNm], 9.2.1.2(1)."""
        return self.national["beta_1"] * self.sag if any(each.end for each in self.supports) else 0.0

    @cached_property
    def places(self) -> Floats:
        """Places to compare moments at, the envelope's breaks and extremes among them [m]."""
        return places(
            self.length,
            [
                *self.moment.upper.breaks,
                *self.moment.lower.breaks,
                self.moment.largest.at,
                self.moment.smallest.at,
            ],
        )


def places(length: float, among: Sequence[float], step: float = STEP) -> Floats:
    """Places from 0 to a length, certain ones among them.

    Parameters
    ----------
    length : float [m]
    among : sequence of float [m]
    step : float [m]
        At most, between neighbours.

    Source: geometry.

    Examples
    --------
    >>> places(1.0, [0.3], 0.5)
    array([0. , 0.3, 0.5, 1. ])
    """
    even = np.linspace(0.0, length, max(int(np.ceil(round(length / step, 9))), 2) + 1)
    found = np.unique(np.concatenate([even, np.clip(np.asarray(among, dtype=float), 0.0, length)]))
    clear = np.concatenate([[True], np.diff(found) > 1e-9 * length])
    return np.asarray(found[clear])
