"""Deflections of every span: span over depth, and from curvatures."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from calcpack.clauses.en1992.along import TopZone
from calcpack.clauses.en1992.bending import steel_for
from calcpack.clauses.en1992.case import BeamCase, Floats, Service, places
from calcpack.clauses.en1992.cracking import Elastic, elastic
from calcpack.clauses.en1992.deflection import (
    LASTING,
    SINGLE,
    basic_span_depth,
    curvature,
    deflections,
    interpolation,
    span_factor,
)
from calcpack.clauses.en1992.faces import Face
from calcpack.clauses.en1992.model import within
from calcpack.statics import Curve

POINTS = 400  # intervals a span
LONG = 7.0  # [m], 7.4.2(2)


@dataclass(frozen=True)
class SpanDepth:
    """Span over depth of one span and what it may be."""

    number: int
    moment: float  # [kNm], by size
    required: float  # bars in tension [m2]
    ratio: float  # ρ
    ratio_2: float
    factor: float  # K
    basic: float
    stress: float  # 310 MPa over σ_s
    flanged: float
    long: float
    limit: float
    actual: float


@dataclass(frozen=True)
class SpanDeflection:
    """Deflections of one span [m]; limits None where none are asked for."""

    number: int
    x: Floats
    line: Floats
    at: float
    total: float
    limit: float | None
    live: float | None  # what live load adds, short term; None without live load
    live_at: float
    live_limit: float | None
    moment: float  # largest lasting moment [kNm], by size: sagging, of an overhang hogging
    zeta: float  # there


def span_depths(case: BeamCase, bottom: Face, top: Face | None) -> tuple[SpanDepth, ...]:
    """Span over depth of every span that has a sagging moment, and of every overhang.

    Parameters
    ----------
    case : BeamCase
    bottom, top : Face
        Bars of the spans and of the supports; lengths in m, moments in kNm.

    Source: EN 1992-1-1:2004, 7.4.2(2).
    """
    found = []
    for number, span in enumerate(case.spans):
        face = top if span.overhang else bottom
        if face is None:
            continue
        x = case.places
        inside = span.holds(x)
        values = -case.moment.lower.values(x) if span.overhang else case.moment.upper.values(x)
        moment = float(values[inside].max())
        depth_2 = face.compression.centroid if face.compression else face.bars.inset
        required, required_2 = steel_for(moment, face.outline, case.strength, face.depth, face.limit, depth_2)
        if required <= 0:
            continue
        width = face.outline.block_width
        ratio, ratio_2 = (each / (width * face.depth) for each in (required, required_2))
        factor = span_factor(span.left, span.right, case.national)
        basic = basic_span_depth(ratio, ratio_2, factor, case.strength)
        stress = min(500e3 / case.strength.fyk * face.bars.area / required, 1.5)
        flanged = 1.0 if within(width, 3 * face.outline.web) else 0.8
        long = min(LONG / span.length, 1.0)
        limit = basic * stress * flanged * long
        found.append(
            SpanDepth(
                number,
                moment,
                required,
                ratio,
                ratio_2,
                factor,
                basic,
                stress,
                flanged,
                long,
                limit,
                span.length / face.depth,
            )
        )
    return tuple(found)


@dataclass(frozen=True)
class Stiffness:
    """Sections along the beam for one kind of load."""

    sagging: Elastic
    hogging: Elastic
    through: Elastic  # hogging, with the bars that run through alone
    zones: tuple[TopZone, ...]
    modulus: float  # [kPa]
    shrinkage: float

    def line(self, case: BeamCase, x: Floats, moment: Floats, zeta: tuple[Floats, Floats, Floats]) -> Floats:
        """Deflection line [m]."""
        kappa = [
            curvature(np.abs(moment), degree, section, self.modulus, self.shrinkage)
            for degree, section in zip(zeta, (self.sagging, self.hogging, self.through), strict=True)
        ]
        full = np.zeros_like(x, dtype=bool)
        for zone in self.zones:
            full |= (x >= zone.full_start) & (x <= zone.full_end)
        signed = np.where(moment >= 0, kappa[0], np.where(full, -kappa[1], -kappa[2]))
        return deflections(x, signed, [each.at for each in case.supports], case.fixed)

    def zeta(self, moment: Floats, beta: float) -> tuple[Floats, Floats, Floats]:
        """ζ with each of the sections."""
        one, two, three = (
            interpolation(moment, each.cracking, beta) for each in (self.sagging, self.hogging, self.through)
        )
        return one, two, three


def stiffness(
    case: BeamCase, bottom: Face, top: Face | None, through: Face, zones: tuple[TopZone, ...], creep: float
) -> Stiffness:
    """The sections for a load that creeps by so much; without creep without shrinkage.

    Parameters
    ----------
    case : BeamCase
    bottom, top, through : Face
    zones : tuple of TopZone
        Where all the top bars lie [m].
    creep : float
        φ(∞, t0).

    Source: EN 1992-1-1:2004, 7.4.3(5), (7.20), and (6).
    """
    over = top or through

    def section(face: Face) -> Elastic:
        return elastic(face.outline, case.strength, face.bars.area, face.depth, creep)

    return Stiffness(
        section(bottom),
        section(over),
        section(through),
        zones,
        case.strength.ecm / (1 + creep),
        case.shrinkage if creep else 0.0,
    )


def span_deflections(
    case: BeamCase,
    bottom: Face,
    top: Face | None,
    through: Face,
    zones: tuple[TopZone, ...],
    points: int = POINTS,
) -> tuple[SpanDeflection, ...]:
    """The largest deflection of every span.

    Parameters
    ----------
    points : int
        Intervals a span of the integration.

    Source: EN 1992-1-1:2004, 7.4.3.
    """
    lasting = stiffness(case, bottom, top, through, zones, case.creep)
    short = stiffness(case, bottom, top, through, zones, 0.0)
    found = []
    live_factor, total_factor = case.limits
    for number, (span, service) in enumerate(zip(case.spans, case.service, strict=True)):
        x = grid(case, service, points)
        moment = service.lasting.values(x)
        zeta = lasting.zeta(moment, LASTING)
        line = lasting.line(case, x, moment, zeta)
        inside = span.holds(x)
        own, places_in = line[inside], x[inside]
        most = int(np.argmax(np.abs(own)))
        reach = 2 * span.length if span.overhang else span.length
        live = None
        live_at = span.start
        if service.rare is not None and service.dead is not None:
            rare = service.rare.values(x)
            cracked = short.zeta(rare, SINGLE)
            both = short.line(case, x, rare, cracked)
            dead = short.line(case, x, service.dead.values(x), cracked)
            added = np.abs((both - dead)[inside])
            live, live_at = float(added.max()), float(places_in[int(np.argmax(added))])
        bent = moment[inside]
        hogging = span.overhang or bent.max() <= 0
        heavy = int(np.argmin(bent) if hogging else np.argmax(bent))
        degree = zeta[1] if hogging else zeta[0]
        found.append(
            SpanDeflection(
                number,
                places_in,
                own,
                float(places_in[most]),
                float(abs(own[most])),
                reach / total_factor if total_factor else None,
                live,
                live_at,
                reach / live_factor if live_factor and live is not None else None,
                float(abs(bent[heavy])),
                float(degree[inside][heavy]),
            )
        )
    return tuple(found)


def grid(case: BeamCase, service: Service, points: int) -> Floats:
    """Places to integrate over: even within every span, supports and breaks of the moment among them.

    Parameters
    ----------
    case : BeamCase
    service : Service
    points : int
        Intervals of the shortest span.

    Source: geometry.
    """
    curves: list[Curve] = [service.lasting]
    ends = sorted({each.start for each in case.spans} | {each.end for each in case.spans})
    step = min(each.length for each in case.spans) / points
    return places(case.length, [*ends, *(float(at) for curve in curves for at in curve.breaks)], step)
