"""Stirrups along a beam: where shear is checked, the spacing there, and the zones."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal, NamedTuple

import numpy as np

from calcpack.clauses.en1992.case import BeamCase, places
from calcpack.clauses.en1992.model import CLOSE, Stirrups, within
from calcpack.clauses.en1992.shear import (
    ARM,
    best_cot,
    largest_leg_spacing,
    largest_spacing,
    least_stirrups,
    truss,
)

# Legs, and the sizes tried with so many.
Side = Literal["left", "right"]
SIDES: tuple[tuple[Side, float], ...] = (("left", -1.0), ("right", 1.0))
TRIED: tuple[tuple[int, tuple[str, ...]], ...] = (
    (2, ("8 mm", "10 mm", "12 mm")),
    (4, ("10 mm", "12 mm")),
    (6, ("12 mm", "16 mm")),
)
STEP = 0.025  # [m], spacings are multiples of it
CLOSEST, WIDEST = 0.075, 0.300  # [m], common practice
ROUND = 0.05  # [m], ends of zones
FINE = 0.01  # [m], between places where zones may end


class ShearPlace(NamedTuple):
    """A face of a support, or a place beside it, where shear is checked."""

    support: int
    side: Side  # of the support
    face: float  # [m] from the beam's start
    at: float  # [m]
    v_face: float  # [kN]
    v_at: float
    why: str  # "" where shear is checked at d from the face


class Zone(NamedTuple):
    """A length of one spacing [m]."""

    start: float
    end: float
    spacing: float


@dataclass(frozen=True)
class ShearDesign:
    """Stirrups along the beam.

    Parameters
    ----------
    stirrups : Stirrups
    cot : float
        Of the strut angle, one for the beam.
    depth : float [m]
        d, the least along the beam.
    places : tuple of ShearPlace
    spacings : tuple of float [m]
        At each place.
    zones : tuple of Zone
    widest : float [m]
        What the least ratio and 9.2.2(6) allow.
    """

    case: BeamCase
    stirrups: Stirrups
    cot: float
    depth: float
    places: tuple[ShearPlace, ...]
    spacings: tuple[float, ...]
    zones: tuple[Zone, ...]
    widest: float

    @property
    def arm(self) -> float:
        """z [m]."""
        return ARM * self.depth

    def capacity(self, spacing: float) -> tuple[float, float]:
        """V_Rd,s and V_Rd,max at a spacing [kN]."""
        case = self.case
        return truss(
            case.sagging.web,
            self.arm,
            self.stirrups.area / spacing,
            self.cot,
            case.strength,
            case.national,
        )

    @property
    def shift(self) -> float:
        """a_l of the shift rule [m]; EN 1992-1-1, 9.2.1.3(2), (9.2)."""
        return self.arm * self.cot / 2

    @property
    def legs_apart(self) -> float:
        """Centres of the legs across the web [m]."""
        inside = self.case.sagging.web - 2 * self.case.cover - self.stirrups.bar.diameter
        return inside / (self.stirrups.legs - 1)

    @property
    def governing(self) -> int:
        """Of the places with the closest spacing the one with the largest ratio."""
        closest = [at for at, each in enumerate(self.spacings) if within(each, min(self.spacings))]
        return max(closest, key=lambda number: round(self.ratio(number), 9))

    @property
    def largest(self) -> int:
        """The place with the largest shear at a face."""
        return max(range(len(self.places)), key=lambda number: round(self.places[number].v_face, 9))

    def ratio(self, number: int) -> float:
        """The larger of the two ratios at a place."""
        ties, struts = self.capacity(self.spacings[number])
        place = self.places[number]
        return max(place.v_at / ties, place.v_face / struts)

    @property
    def along(self) -> tuple[float, float, float]:
        """The zone place with the largest ratio of shear to V_Rd,s: place [m], shear, V_Rd,s [kN].

        Between the faces of supports and d beyond them only what stands above the checked shear is left out.
        """
        found = []
        for zone in self.zones:
            ties, _ = self.capacity(zone.spacing)
            x = places(zone.end - zone.start, []) + zone.start
            shear = checked_shear(self.case, x, self.places)
            most = int(np.argmax(shear))
            found.append((float(x[most]), float(shear[most]), ties))
        return max(found, key=lambda each: each[1] / each[2])


def shear_places(case: BeamCase, depth: float) -> tuple[ShearPlace, ...]:
    """Where shear is checked: at d from the face of every support, or at the face.

    Parameters
    ----------
    case : BeamCase
    depth : float [m]

    Returns
    -------
    tuple of ShearPlace
        At the face itself where a point load stands within 2 d of it, or another beam carries this one.

    Source: EN 1992-1-1:2004, 6.2.1(8).
    """
    found = []
    for number, support in enumerate(case.supports):
        for side, way in SIDES:
            face = support.at + way * support.half
            if (face if side == "left" else case.length - face) <= CLOSE:
                continue
            why = ""
            if not support.direct:
                why = "carried by a beam"
            elif any(CLOSE < way * (point - support.at) <= support.half + 2 * depth for point in case.points):
                why = "point load near"
            room = face if side == "left" else case.length - face
            at = face if why else face + way * min(depth, room)
            found.append(
                ShearPlace(
                    number,
                    side,
                    face,
                    at,
                    _shear(case, face, side),
                    _shear(case, at, side),
                    why,
                )
            )
    return tuple(found)


def _shear(case: BeamCase, at: float, side: Side) -> float:
    return max(abs(case.shear.upper.at(at, side)), abs(case.shear.lower.at(at, side)))


def checked_shear(case: BeamCase, x: np.ndarray, at: Sequence[ShearPlace]) -> np.ndarray:
    """Shear by size [kN] at places [m], between a support and its place of check that of the place.

    Parameters
    ----------
    case : BeamCase
    x : array [m]
    at : sequence of ShearPlace

    Source: EN 1992-1-1:2004, 6.2.1(8).
    """
    both = [
        np.maximum(np.abs(case.shear.upper.values(x, side)), np.abs(case.shear.lower.values(x, side)))
        for side in ("left", "right")
    ]
    shear = np.maximum(*both)
    for place in at:
        support = case.supports[place.support].at
        low, high = sorted((support, place.at))
        own = np.asarray(both[0] if place.side == "left" else both[1])
        within = (x > low + CLOSE) & (x < high - CLOSE)
        shear = np.where(within, np.minimum(own, place.v_at), shear)
        ends = np.abs(x - support) <= CLOSE
        shear = np.where(ends, 0.0, shear)
    return shear


def spacing_limit(case: BeamCase, stirrups: Stirrups, depth: float, held: float | None) -> float:
    """Widest legal spacing [m]: least ratio, 0.75 d, and 15 diameters of counted compression bars.

    Parameters
    ----------
    case : BeamCase
    stirrups : Stirrups
    depth : float [m]
        d.
    held : float [m] or None
        Diameter of compression bars that are counted.

    Source: EN 1992-1-1:2004, 9.2.2(5) and (6), 9.2.1.2(3).
    """
    limits = [
        stirrups.area / least_stirrups(case.sagging.web, case.strength, case.national),
        largest_spacing(depth, case.national),
    ]
    if held is not None:
        limits.append(15 * held)  # 9.2.1.2(3)
    return min(limits)


def shear_design(case: BeamCase, stirrups: Stirrups, depth: float, held: float | None) -> ShearDesign:
    """Stirrups of one size laid out along the beam, at the given spacing where the job gives one.

    Parameters
    ----------
    case : BeamCase
    stirrups : Stirrups
    depth : float [m]
    held : float [m] or None
        Diameter of compression bars that are counted.

    Returns
    -------
    ShearDesign
        Where no spacing is enough it has the closest one, and does not pass.

    Source: EN 1992-1-1:2004, 6.2.3 and 9.2.2.
    """
    at = shear_places(case, depth)
    widest = spacing_limit(case, stirrups, depth, held)
    if case.given.stirrups:
        spacings = [case.given.stirrups[2]] * len(at)
        cot = case.given.cot or _cot(case, stirrups, spacings[0])
        zones: tuple[Zone, ...] = (Zone(0.0, case.length, spacings[0]),)
        return ShearDesign(case, stirrups, cot, depth, at, tuple(spacings), zones, widest)
    practical = _multiple(min(widest, WIDEST))
    tried = [practical - STEP * step for step in range(round((practical - CLOSEST) / STEP) + 1)]
    tried = tried if tried else [practical]
    spacings = [_spacing(case, stirrups, depth, place, tried, case.given.cot) for place in at]
    cot = case.given.cot or _cot(case, stirrups, min(spacings))
    spacings = [max(_spacing(case, stirrups, depth, place, tried, cot), min(spacings)) for place in at]
    found = ShearDesign(case, stirrups, cot, depth, at, tuple(spacings), (), widest)
    return ShearDesign(case, stirrups, cot, depth, at, tuple(spacings), _zones(found, practical), widest)


def _multiple(spacing: float) -> float:
    return max(math.floor(spacing / STEP + CLOSE), 1) * STEP


def _cot(case: BeamCase, stirrups: Stirrups, spacing: float) -> float:
    return best_cot(case.sagging.web, stirrups.area / spacing, case.strength, case.national)


def _spacing(
    case: BeamCase,
    stirrups: Stirrups,
    depth: float,
    place: ShearPlace,
    tried: Sequence[float],
    cot: float | None,
) -> float:
    """The widest spacing that carries the shear at a place; the closest where none does."""
    for spacing in tried:
        ties, struts = truss(
            case.sagging.web,
            ARM * depth,
            stirrups.area / spacing,
            cot or _cot(case, stirrups, spacing),
            case.strength,
            case.national,
        )
        if place.v_at <= ties and place.v_face <= struts:
            return spacing
    return tried[-1]


def _zones(design: ShearDesign, practical: float) -> tuple[Zone, ...]:
    """In every span: close spacing from each support on as far as the wide one does not carry the shear."""
    case, zones = design.case, []
    enough, _ = design.capacity(practical)
    for span in case.spans:
        x = places(span.length, [], FINE) + span.start
        over = checked_shear(case, x, design.places) > enough
        ends = {}
        for place, spacing in zip(design.places, design.spacings, strict=True):
            support = case.supports[place.support].at
            if place.side == "right" and abs(support - span.start) <= CLOSE:
                ends["start"] = spacing
            elif place.side == "left" and abs(support - span.end) <= CLOSE:
                ends["end"] = spacing
        middle = span.start + span.length / 2
        if span.overhang:
            middle = span.end if "start" in ends else span.start
        first, last = x[over & (x <= middle)], x[over & (x >= middle)]
        left = span.start + _up(float(first.max()) + FINE - span.start) if first.size else span.start
        right = span.end - _up(span.end - float(last.min()) + FINE) if last.size else span.end
        left_spacing, right_spacing = ends.get("start", practical), ends.get("end", practical)
        if left_spacing == practical:
            left = span.start
        if right_spacing == practical:
            right = span.end
        if left >= right - CLOSE:
            zones.append(Zone(span.start, span.end, min(left_spacing, right_spacing)))
            continue
        if left > span.start:
            zones.append(Zone(span.start, left, left_spacing))
        zones.append(Zone(left, right, practical))
        if right < span.end:
            zones.append(Zone(right, span.end, right_spacing))
    joined: list[Zone] = []
    for zone in zones:
        if joined and abs(joined[-1].spacing - zone.spacing) <= CLOSE:
            joined[-1] = Zone(joined[-1].start, zone.end, zone.spacing)
        else:
            joined.append(zone)
    return tuple(joined)


def _up(length: float) -> float:
    return math.ceil(length / ROUND - CLOSE) * ROUND


def stirrup_sizes(case: BeamCase) -> list[Stirrups]:
    """Stirrups to try, the given ones alone where the job gives them; legs near enough to each other.

    Parameters
    ----------
    case : BeamCase
        Web and cover in m.

    Source: EN 1992-1-1:2004, 9.2.2(8).
    """
    if case.given.stirrups:
        legs, size, _ = case.given.stirrups
        return [Stirrups(size, legs)]
    stock = case.stock
    found = [Stirrups(stock.bar(size), legs) for legs, usual in TRIED for size in stock.among(usual)]
    most = largest_leg_spacing(0.8 * case.sagging.depth, case.national)
    inside = case.sagging.web - 2 * case.cover
    return [each for each in found if within((inside - each.bar.diameter) / (each.legs - 1), most)] or found[
        -1:
    ]
