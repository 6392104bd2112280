"""A beam designed: bars and stirrups taken as given or chosen, and all that follows from them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from typing import NamedTuple

from calcpack.clauses.en1992.along import TopZone, Worst, nearest, resistance, shifted, top_zones
from calcpack.clauses.en1992.anchorage import Anchorage, anchorage, good_bond
from calcpack.clauses.en1992.case import BeamCase, Floats, SupportCase
from calcpack.clauses.en1992.faces import HANGERS, SIZES, Face, bars_of, candidates, choose, thinner
from calcpack.clauses.en1992.model import Bars, Stirrups, within
from calcpack.clauses.en1992.service import SpanDeflection, SpanDepth, span_deflections, span_depths
from calcpack.clauses.en1992.stirrups import CLOSEST, ShearDesign, shear_design, stirrup_sizes

MORE = (1.15, 1.3, 1.5)  # bottom bars over those that strength asks for, until deflection is satisfied


class EndAnchorage(NamedTuple):
    """Anchorage of the bottom bars at a support where the beam ends."""

    support: SupportCase
    shear: float  # [kN], at the face
    force: float  # F_Ed [kN]
    stress: float  # σ_sd [kPa]
    length: Anchorage
    bent: bool
    room: float | None  # behind the face [m]; None where the support's width is not given


@dataclass(frozen=True)
class Design:
    """A beam with its bars and stirrups.

    Parameters
    ----------
    case : BeamCase
    bottom : Face
        Under the sagging moments; with none of them bars that hold the stirrups.
    top : Face or None
        All bars over the supports, under the hogging moments.
    through : Face
        Those top bars that run through, under what an end support may still hold.
    shear : ShearDesign
    """

    case: BeamCase
    bottom: Face
    top: Face | None
    through: Face
    shear: ShearDesign

    @cached_property
    def sagging(self) -> Floats:
        """Shifted sagging moments at ``case.places`` [kNm]."""
        return shifted(self.case.places, self.case.moment.upper.values(self.case.places), self.shear.shift)

    @cached_property
    def hogging(self) -> Floats:
        """Shifted hogging moments by size at ``case.places`` [kNm]."""
        lower = self.case.moment.lower.values(self.case.places)
        return shifted(self.case.places, -lower, self.shear.shift)

    @cached_property
    def stopped(self) -> Anchorage:
        """Anchorage of the top bars that do not run through, at full stress."""
        face = self.top or self.through
        return self._anchorage(face, self.case.strength.fyd, top=True)

    def _anchorage(self, face: Face, stress: float, *, top: bool, bent: bool = False) -> Anchorage:
        below = self.case.sagging.depth - face.bars.inset - face.bars.bar.diameter / 2
        return anchorage(
            face.bars.bar.diameter,
            stress,
            min(face.bars.inset, face.clear[0] / 2),
            good_bond(top, self.case.sagging.depth, below),
            self.case.strength,
            bent=bent,
        )

    @cached_property
    def zones(self) -> tuple[TopZone, ...]:
        """Where the top bars lie that do not run through."""
        if self.top is None or self.top.bars.count == self.through.bars.count:
            return ()
        return top_zones(self.case.places, self.hogging, self.through.bending.moment, self.stopped.length)

    @cached_property
    def top_resistance(self) -> Floats:
        """Hogging resistance at ``case.places`` [kNm]."""
        full = self.top.bending.moment if self.top else self.through.bending.moment
        through = self.through.bending.moment if self.zones else full
        return resistance(self.case.places, self.zones, through, full)

    @cached_property
    def along(self) -> Worst:
        """Where the shifted moments come nearest to the resistance."""
        x = self.case.places
        bottom = resistance(x, (), self.bottom.bending.moment, self.bottom.bending.moment)
        found = [
            nearest(x, self.sagging, bottom, False),
            nearest(x, self.hogging, self.top_resistance, True),
        ]
        return max(found, key=lambda worst: round(worst.ratio, 9))

    @cached_property
    def ends(self) -> tuple[EndAnchorage, ...]:
        """Anchorage of the bottom bars at every support where the beam ends.

        Source: EN 1992-1-1:2004, 9.2.1.4(2), (9.3), and (3).
        """
        if not self.case.sag:
            return ()
        found = []
        for number, support in enumerate(self.case.supports):
            if not support.end:
                continue
            shear = next(each.v_face for each in self.shear.places if each.support == number)
            force = shear * self.shear.shift / self.shear.arm
            stress = min(force / self.bottom.bars.area, self.case.strength.fyd)
            straight = self._anchorage(self.bottom, stress, top=False)
            room = 2 * support.half - self.case.cover if support.half else None
            bent = room is not None and straight.length > room
            length = self._anchorage(self.bottom, stress, top=False, bent=True) if bent else straight
            found.append(EndAnchorage(support, shear, force, stress, length, bent, room))
        return tuple(found)

    @property
    def end(self) -> EndAnchorage | None:
        """The end support that asks most of the anchorage."""
        return max(
            self.ends,
            key=lambda each: round(each.length.length / each.room if each.room else each.length.length, 9),
            default=None,
        )

    @property
    def held(self) -> bool:
        """Bars enough for the force at every end support. Source: EN 1992-1-1:2004, 9.2.1.4(2)."""
        strong = self.bottom.bars.area * self.case.strength.fyd
        return all(within(each.force, strong) for each in self.ends)

    @property
    def anchored(self) -> bool:
        """Room for the bottom bars at every end support whose width is given."""
        return all(each.room is None or within(each.length.length, each.room) for each in self.ends)

    @cached_property
    def span_depths(self) -> tuple[SpanDepth, ...]:
        """Span over depth, span by span."""
        return span_depths(self.case, self.bottom, self.top)

    @cached_property
    def deflections(self) -> tuple[SpanDeflection, ...]:
        """Deflections, span by span."""
        return span_deflections(self.case, self.bottom, self.top, self.through, self.zones)

    @property
    def deflects_fine(self) -> bool:
        """The total deflection of every span within its limit."""
        return all(each.limit is None or within(each.total, each.limit) for each in self.deflections)


def design_beam(case: BeamCase) -> Design:
    """Design a beam: what the job gives is taken, the rest chosen.

    Parameters
    ----------
    case : BeamCase

    Returns
    -------
    Design
        Where no choice satisfies everything, the one that comes nearest.

    Notes
    -----
    Stirrups: the thinnest and fewest legs that carry the shear at a practical spacing. Bars: fewest layers,
    then fewest bars, then least area. Bottom bars beyond what strength asks for, up to half as much again,
    only where the deflection asks for them.

    Source: EN 1992-1-1:2004, as each function of this package names its clause; lengths in m, forces in kN.
    """
    found: Design | None = None
    for stirrups in stirrup_sizes(case):
        found = _with(case, stirrups)
        if _shear_fine(found.shear):
            break
    assert found is not None
    return found


def _with(case: BeamCase, stirrups: Stirrups) -> Design:
    """With stirrups of one size; thinner bottom bars where an end support has no room to anchor others."""
    first = _deflecting(case, stirrups, case.stock.groups(SIZES))
    if first.anchored or case.given.bottom:
        return first
    for sizes in thinner(case):
        design = _deflecting(case, stirrups, sizes)
        face = design.bottom
        if design.anchored and face.resists and face.fits and face.cracks_fine:
            return design
    return first


def _deflecting(case: BeamCase, stirrups: Stirrups, sizes: Sequence[Sequence[str]]) -> Design:
    """With as many more bottom bars as deflection and the force at the end supports ask for."""
    first: Design | None = None
    held: Design | None = None
    for more in (None, *MORE) if case.given.bottom is None else (None,):
        design = _faces(case, stirrups, more, sizes)
        first = first or design
        if not case.sag or (design.deflects_fine and design.held):
            return design
        if design.held and held is None:
            held = design
    assert first is not None
    return held or first


def _faces(case: BeamCase, stirrups: Stirrups, more: float | None, sizes: Sequence[Sequence[str]]) -> Design:
    diameter = stirrups.bar.diameter
    bottom = _bottom(case, diameter, more, sizes)
    top, through = _top(case, diameter, bottom)
    if bottom.compression is not None:
        bottom = replace(bottom, compression=through.bars)
    depths = [face.depth for face, used in ((bottom, case.sag), (top, case.hog)) if face and used]
    counted = [
        face.compression.bar.diameter
        for face in (bottom, top)
        if face and face.doubly and face.compression is not None
    ]
    shear = shear_design(case, stirrups, min(depths or [bottom.depth]), min(counted, default=None))
    return Design(case, bottom, top, through, shear)


def _lasting(case: BeamCase) -> tuple[float, float]:
    return max(case.lasting.largest.value, 0.0), max(-case.lasting.smallest.value, 0.0)


def _bottom(case: BeamCase, stirrup: float, more: float | None, sizes: Sequence[Sequence[str]]) -> Face:
    lasting, _ = _lasting(case)
    hangers = _hangers(case, stirrup)
    if case.given.bottom:
        count, size = case.given.bottom
        face = Face(case, case.sagging, bars_of(case, size, count, stirrup), case.sag, lasting)
        if not case.sag or face.alone.x <= face.limit * face.depth:
            return face
        tried = [replace(face, compression=bars) for bars in hangers]
        deep = (each for each in tried if within(each.bending.x, each.limit * each.depth))
        return next(deep, tried[-1])
    if not case.sag:
        return Face(case, case.sagging, hangers[0], 0.0, 0.0)
    face = choose(case, case.sagging, case.sag, lasting, stirrup, compression=hangers, sizes=sizes)
    if more:
        least = more * max(face.required[0], face.least)
        face = choose(
            case, case.sagging, case.sag, lasting, stirrup, compression=hangers, least=least, sizes=sizes
        )
    return face


def _hangers(case: BeamCase, stirrup: float) -> Sequence[Bars]:
    """Top bars that may serve in compression: the given ones alone where the job gives them."""
    if case.given.top:
        count, size = case.given.top
        return [bars_of(case, size, count, stirrup)]
    return sorted(
        (each for each in candidates(case, stirrup, case.stock.groups(HANGERS)) if len(each.layers) == 1),
        key=lambda each: (each.area, each.count),
    )


def _top(case: BeamCase, stirrup: float, bottom: Face) -> tuple[Face | None, Face]:
    """Top bars under the hogging moments, and those of them that run through."""
    _, lasting = _lasting(case)
    outline, moment = case.hogging, case.end_moment
    least = bottom.compression.area if bottom.doubly and bottom.compression else 0.0
    top: Face | None = None
    if case.given.top:
        count, size = case.given.top
        bars = bars_of(case, size, count, stirrup)
        through = Face(case, outline, bars, moment, 0.0)
        if case.hog:
            top = Face(case, outline, bars, case.hog, lasting, bottom.bars)
        return top, through
    if case.hog:
        top = choose(case, outline, case.hog, lasting, stirrup, compression=(bottom.bars,), least=least)
        tried = [
            Face(case, outline, bars_of(case, top.bars.bar, count, stirrup), moment, 0.0)
            for count in range(2, top.bars.layers[0] + 1)
        ]
        enough = [each for each in tried if each.bars.area >= least and (not moment or each.resists)]
        if enough:
            return top, enough[0]
        # the end supports, or the bars counted in compression, ask for more than the hogging moments
        ask = max(moment, case.hog)
        more = choose(case, outline, ask, lasting, stirrup, compression=(bottom.bars,), least=least)
        return replace(more, moment=case.hog), replace(more, moment=moment, lasting=0.0, compression=None)
    if not moment:
        bars = next(each for each in _hangers(case, stirrup) if each.area >= least)
        return None, Face(case, outline, bars, 0.0, 0.0)
    return None, choose(case, outline, moment, 0.0, stirrup, least=least, sizes=case.stock.groups(HANGERS))


def _shear_fine(shear: ShearDesign) -> bool:
    fine = all(within(shear.ratio(number), 1) for number in range(len(shear.places)))
    _, force, carried = shear.along
    return fine and within(force, carried) and within(CLOSEST, min(shear.spacings))
