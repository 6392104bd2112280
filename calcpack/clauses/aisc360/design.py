"""A steel beam worked out in figures: what is checked where, with which demand, and how it comes out.

Nothing is written here; the sheet's sections write from it, and the choice of a section tries with it.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise
from typing import Literal, NamedTuple

import numpy as np

from calcpack.actions.analysis import AnalysedBeam
from calcpack.clauses.aisc360 import strength
from calcpack.clauses.aisc360.strength import Method, Steel
from calcpack.clauses.steel import (
    Arrangement,
    ISection,
    SegmentMoments,
    arrangements,
    held_points,
    segment_moments,
    stretch,
)
from calcpack.job.model import CASES, Case
from calcpack.sheet.evaluation import holds
from calcpack.statics import Extreme, envelope
from calcpack.statics.curve import farthest

Flange = Literal["both", "top", "bottom"]
SENSES: dict[Flange, tuple[int, ...]] = {"both": (0,), "top": (1,), "bottom": (-1,)}
NOTHING = 1e-9  # a demand below this part of the largest one is no more than rounding


class SpanOf(NamedTuple):
    """A span: its number from 0, where it runs [m], whether a support stands at both of its ends."""

    number: int
    start: float
    end: float
    supported: bool

    @property
    def length(self) -> float:
        """[m]."""
        return self.end - self.start


class Concentrated(NamedTuple):
    """A force that comes in through a flange: what brings it, its place [m], its largest value [kN]."""

    name: str
    at: float
    force: float
    support: bool


class Options(NamedTuple):
    """What the job may set, settled.

    Parameters
    ----------
    method : "LRFD" or "ASD"
    unbraced_length : float or None [m]
        None: from support to support.
    braced : "by length", "at beams" or "continuous"
        How the top flange is held sideways.
    bottom_with_top : bool
        Whether the bottom flange is held wherever the top one is; else at supports alone.
    diagram_factor : float or None
        C_b where the job sets it; None: from the moment diagram.
    bearing_length : float [m]
    seated : bool
        Whether supports and loads bear on the flanges.
    live_limit, total_limit : float
        Span over so much.
    """

    method: Method
    unbraced_length: float | None = None
    braced: str = "by length"
    bottom_with_top: bool = False
    diagram_factor: float | None = None
    bearing_length: float = 0.1
    seated: bool = True
    live_limit: float = 360.0
    total_limit: float = 240.0


@dataclass(frozen=True)
class Demands:
    """A beam's actions as the design looks at them.

    Parameters
    ----------
    analysed : AnalysedBeam
        With E I, for deflections.
    spans : tuple of SpanOf
    forces : tuple of Concentrated
    carried_at : tuple of float [m]
        Where beams come in.
    """

    analysed: AnalysedBeam
    spans: tuple[SpanOf, ...]
    forces: tuple[Concentrated, ...]
    carried_at: tuple[float, ...] = ()


class Segment(NamedTuple):
    """A stretch between two braced points, and which flange is braced there.

    ``free`` is a cantilever's: its end is not braced, C_b = 1.
    """

    span: SpanOf
    start: float
    end: float
    flange: Flange
    held: bool  # all along
    free: bool

    @property
    def unbraced(self) -> float:
        """L_b [m]."""
        return 0.0 if self.held else self.end - self.start


class BendingCheck(NamedTuple):
    """Bending of a segment under its worst arrangement.

    ``demand`` is the moment by size [kNm], ``at`` its place [m], ``sagging`` its sense.
    """

    segment: Segment
    arrangement: Arrangement
    moments: SegmentMoments
    demand: float
    at: float
    sagging: bool
    diagram_factor: float
    strength: strength.Bending
    available: float

    @property
    def ratio(self) -> float:
        """Demand over available strength."""
        return self.demand / self.available


class ForceCheck(NamedTuple):
    """Web local yielding or crippling under a force on the flange [kN]."""

    limit: Literal["yielding", "crippling"]
    force: Concentrated
    from_end: float
    available: float

    @property
    def ratio(self) -> float:
        """Demand over available strength."""
        return self.force.force / self.available


class DeflectionCheck(NamedTuple):
    """Largest deflection of a span by size [m], and what it may be; a cantilever counts twice its length."""

    kind: Literal["live", "total"]
    span: SpanOf
    under: str  # the combination's name, or the case
    found: float
    at: float
    allowed: float

    @property
    def ratio(self) -> float:
        """Found over allowed."""
        return self.found / self.allowed


@dataclass(frozen=True)
class SteelDesign:
    """A beam of one shape, checked."""

    shape: ISection
    steel: Steel
    options: Options
    demands: Demands

    @cached_property
    def slenderness(self) -> strength.Slenderness:
        """Flange and web against their limits."""
        return strength.slenderness(self.shape, self.steel)

    @cached_property
    def covered(self) -> bool:
        """Whether F2 and F3 hold at all: the web is compact."""
        return self.slenderness.compact_web

    @cached_property
    def segments(self) -> tuple[Segment, ...]:
        """The stretches between braced points."""
        return segments(self.demands.spans, self.options, self.demands.carried_at)

    @cached_property
    def bending(self) -> tuple[BendingCheck, ...]:
        """Every segment that bends, along the beam; none where the web is not compact."""
        if not self.covered:
            return ()
        worst = self.demands.analysed.band("moment").largest_absolute.value
        found = [
            check
            for segment in self.segments
            for sense in SENSES[segment.flange]
            if (check := self._worst(segment, sense, NOTHING * abs(worst))) is not None
        ]
        return tuple(sorted(found, key=lambda each: (each.segment.span.number, not each.sagging)))

    def carries(self, segment: Segment, sagging: bool) -> float:
        """Available strength [kNm] of a stretch: as checked, else under a uniform moment."""
        for check in self.bending:
            if check.segment == segment and (segment.flange == "both" or check.sagging == sagging):
                return check.available
        nominal = strength.bending_strength(self.shape, self.steel, segment.unbraced).nominal
        return strength.BENDING.available(nominal, self.options.method)

    def _worst(self, segment: Segment, sense: int, nothing: float) -> BendingCheck | None:
        """The arrangement with the largest ratio; ties go to the first."""
        tried = [
            check
            for each in arrangements(self.demands.analysed, segment.start, segment.end)
            if (check := self._check(segment, each, sense)).demand > nothing
        ]
        return max(tried, key=lambda each: round(each.ratio, 12), default=None)

    def _check(self, segment: Segment, arrangement: Arrangement, sense: int) -> BendingCheck:
        moments = segment_moments(arrangement.moment, segment.start, segment.end)
        extreme = {0: moments.largest, 1: moments.sagging, -1: moments.hogging}[sense]
        demand = abs(extreme.value)
        if segment.free or segment.held:
            factor = 1.0
        elif self.options.diagram_factor is not None:
            factor = self.options.diagram_factor
        else:
            factor = strength.diagram_factor(moments, demand)
        nominal = strength.bending_strength(self.shape, self.steel, segment.unbraced, factor)
        return BendingCheck(
            segment,
            arrangement,
            moments,
            demand,
            extreme.at,
            extreme.value > 0,
            factor,
            nominal,
            strength.BENDING.available(nominal.nominal, self.options.method),
        )

    @cached_property
    def shear(self) -> strength.Shear:
        """Shear strength of the web."""
        return strength.shear_strength(self.shape, self.steel)

    @property
    def shear_available(self) -> float:
        """Available shear strength [kN]."""
        return self.shear.factor.available(self.shear.nominal, self.options.method)

    @property
    def shear_demand(self) -> Extreme:
        """The largest shear by size [kN] at [m]."""
        found = self.demands.analysed.band("shear").largest_absolute
        return Extreme(abs(found.value), found.at)

    @cached_property
    def web(self) -> tuple[ForceCheck, ...]:
        """Web yielding and crippling under every force; none where nothing bears on flanges."""
        if not self.options.seated:
            return ()
        return tuple(check for force in self.demands.forces for check in self._under(force))

    def _under(self, force: Concentrated) -> tuple[ForceCheck, ForceCheck]:
        shape, steel, options = self.shape, self.steel, self.options
        from_end = min(force.at, self.demands.analysed.line.length - force.at)
        given = (shape, steel, options.bearing_length, from_end)
        return (
            ForceCheck(
                "yielding",
                force,
                from_end,
                strength.WEB_YIELDING.available(strength.web_yielding(*given), options.method),
            ),
            ForceCheck(
                "crippling",
                force,
                from_end,
                strength.WEB_CRIPPLING.available(strength.web_crippling(*given), options.method),
            ),
        )

    @cached_property
    def deflection(self) -> tuple[DeflectionCheck, ...]:
        """Each span's worst under the variable loads one by one, and under the service combinations."""
        analysed, options = self.demands.analysed, self.options
        tried = [
            check
            for span in self.demands.spans
            for check in (
                _deflection(analysed, span, "live", options.live_limit),
                _deflection(analysed, span, "total", options.total_limit),
            )
        ]
        return tuple(check for check in tried if check is not None)

    @property
    def ratios(self) -> tuple[float, ...]:
        """Every ratio of demand to strength, or of deflection to limit."""
        return (
            *(each.ratio for each in self.bending),
            self.shear_demand.value / self.shear_available,
            *(each.ratio for each in self.web),
            *(each.ratio for each in self.deflection),
        )

    @property
    def passes(self) -> bool:
        """Whether all that is checked holds."""
        return self.covered and all(holds("le", ratio, 1.0) for ratio in self.ratios)


def segments(spans: Sequence[SpanOf], options: Options, carried_at: Sequence[float]) -> tuple[Segment, ...]:
    """The stretches between braced points.

    A span is braced at both of its ends, both flanges. Between them the top flange is braced as the job
    says, the bottom flange alike or not at all. A cantilever is braced at its support only, but for a bottom
    flange that is braced with the top one; its C_b is 1.

    Examples
    --------
    >>> spans = [SpanOf(0, 0.0, 8.0, True), SpanOf(1, 8.0, 10.0, False)]
    >>> options = Options("LRFD", unbraced_length=4.0)
    >>> [(each.flange, each.start, each.end) for each in segments(spans, options, ())]
    [('top', 0.0, 4.0), ('top', 4.0, 8.0), ('bottom', 0.0, 8.0), ('both', 8.0, 10.0)]
    """
    found = []
    for span in spans:
        places = carried_at if options.braced == "at beams" else ()
        every = options.unbraced_length if options.braced == "by length" else None
        points = [float(place) for place in held_points(span.start, span.end, every=every, at=places)]
        held = options.braced == "continuous"
        parts = list(pairwise(points))
        both = options.bottom_with_top or (len(parts) == 1 and not held)
        if not span.supported and not options.bottom_with_top:
            found.append(Segment(span, span.start, span.end, "both", False, True))
            continue
        if both:
            found += [Segment(span, a, b, "both", held, not span.supported) for a, b in parts]
            continue
        found += [Segment(span, a, b, "top", held, False) for a, b in parts]
        found.append(Segment(span, span.start, span.end, "bottom", False, False))
    return tuple(found)


def _deflection(
    analysed: AnalysedBeam, span: SpanOf, kind: Literal["live", "total"], limit: float
) -> DeflectionCheck | None:
    """The worst of a span; None where no such load acts."""
    if analysed.stiffness is None:
        return None
    tried: list[tuple[float, float, str]] = []
    sets = analysed.sets
    if kind == "live":
        for case in CASES[1:]:
            if any(each.case == case for each in sets):
                extreme = _case_deflection(analysed, span, case)
                tried.append((abs(extreme.value), extreme.at, case))
    else:
        for result in analysed.of_limit("service"):
            band = result.envelope.deflection
            extreme = farthest(
                stretch(band.upper, span.start, span.end).largest,
                stretch(band.lower, span.start, span.end).smallest,
            )
            tried.append((abs(extreme.value), extreme.at, result.combination.name))
    if not tried:
        return None
    value, at, under = max(tried, key=lambda each: round(each[0], 12))
    reach = span.length * (1 if span.supported else 2)
    return DeflectionCheck(kind, span, under, value / analysed.stiffness, at, reach / limit)


def _case_deflection(analysed: AnalysedBeam, span: SpanOf, case: Case) -> Extreme:
    """Largest deflection by size × E I [kNm3] under one case alone, placed where it is worst."""
    row = np.array([1.0 if each.case == case else 0.0 for each in analysed.sets])
    none = np.zeros(len(row))
    worst = envelope(analysed.response, *((row, none) if case == "snow" else (none, row))).deflection
    return farthest(
        stretch(worst.upper, span.start, span.end).largest,
        stretch(worst.lower, span.start, span.end).smallest,
    )
