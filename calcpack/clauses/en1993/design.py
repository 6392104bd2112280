"""A steel beam worked out: every strength combination tried, the worst of each check kept. Numbers only."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from calcpack.actions import AnalysedBeam, CombinationResult
from calcpack.clauses.en1993 import bearing as local
from calcpack.clauses.en1993 import buckling
from calcpack.clauses.en1993.rules import HALF, LARGEST_DIAGRAM, OVERHANG, Curves, LoadHeight
from calcpack.clauses.en1993.section import Profile
from calcpack.clauses.en1993.segments import Segment, tried
from calcpack.clauses.steel import Arrangement, SegmentMoments, segment_moments
from calcpack.statics import Curve, PointLoad

SAMPLES = 240
PLACES = 1e-6  # [m] within which two forces stand at one place
NOTHING = 1e-6  # part of the largest effect below which there is nothing to check


class Buckling(NamedTuple):
    """One segment under one arrangement of one combination, all the way to M_b,Rd."""

    segment: Segment
    arrangement: Arrangement
    moments: SegmentMoments
    demand: float  # [kNm], by size
    length: float  # [m]
    diagram: float  # C1, or the factor of the held top flange
    share: float  # 1/C1² by the energy of the half wave
    twisting: float  # [kN]
    load: float  # C2
    height: float  # z_g [m]
    critical: float  # [kNm]
    slenderness: float
    reduction: buckling.Reduction
    resistance: float  # [kNm]

    @property
    def ratio(self) -> float:
        """Demand over resistance."""
        return self.demand / self.resistance


class Effect(NamedTuple):
    """A design value, where it stands, and under which combination."""

    value: float
    at: float  # [m]
    combination: str


class Beside(NamedTuple):
    """Moment and shear at one place, where the shear is so large that it reduces the bending resistance."""

    at: float
    moment: float
    shear: float
    resistance: float


class LocalForce(NamedTuple):
    """A force on a flange, and the web under it."""

    support: int | None  # counted from 0 along the beam; None for a point load
    at: float  # [m]
    force: float  # [kN]
    combination: str
    moment: float  # [kNm], by size, largest at the place
    beyond: float | None  # [m], from the stiff bearing to the beam's end
    bearing: local.Bearing


@dataclass(frozen=True)
class Conditions:
    """What the job settles about a beam beside its section.

    Parameters
    ----------
    curves : "general" or "rolled"
    load_height : "top", "centre" or "bottom"
    diagram : float, optional
        C1 given by the job; else from each diagram.
    bearing_length : float [m]
    bears_at_supports, bears_at_loads : bool
        Whether forces come in over a flange; else end plates, cleats or stiffeners bring them into the web.
    """

    curves: Curves = "general"
    load_height: LoadHeight = "top"
    diagram: float | None = None
    bearing_length: float = 0.1
    bears_at_supports: bool = True
    bears_at_loads: bool = True


@dataclass(frozen=True)
class SteelBeam:
    """The worst of each check; made by :func:`design`."""

    profile: Profile
    conditions: Conditions
    bending: Effect
    shear: Effect
    beside: Beside | None
    segments: tuple[Buckling, ...]  # the worst of each segment, along the beam
    forces: tuple[LocalForce, ...]

    @property
    def buckling(self) -> Buckling | None:
        """The segment that is used most."""
        return max(self.segments, key=lambda each: round(each.ratio, 12), default=None)

    @property
    def force(self) -> LocalForce | None:
        """The local force that is used most."""
        return max(
            self.forces, key=lambda each: round(each.force / each.bearing.resistance, 12), default=None
        )

    @property
    def interaction(self) -> LocalForce | None:
        """The local force that is used most together with the bending moment, EN 1993-1-5 7.2."""
        return max(self.forces, key=lambda each: round(self.together(each), 12), default=None)

    def together(self, each: LocalForce) -> float:
        """η2 + 0.8 η1, EN 1993-1-5 (7.2)."""
        elastic = self.profile.shape.elastic_modulus * self.profile.strength / self.profile.factors.gamma_M0
        return each.force / each.bearing.resistance + 0.8 * each.moment / elastic


def design(
    profile: Profile,
    analysed: AnalysedBeam,
    parts: Sequence[Segment],
    conditions: Conditions,
    fixed: tuple[bool, bool] = (False, False),
) -> SteelBeam:
    """Work out a steel beam.

    Parameters
    ----------
    profile : Profile
    analysed : AnalysedBeam
    parts : sequence of Segment
    conditions : Conditions
    fixed : (bool, bool)
        Ends held against rotation: what holds them is no bearing.

    Notes
    -----
    Bending and shear go by the envelope about all strength combinations. Each segment is tried for each
    strength combination under several arrangements of live load (:func:`segments.tried`): buckling depends
    on the shape of a diagram, which an envelope does not have.

    Source: EN 1993-1-1:2005, 6.2.5, 6.2.6, 6.2.8, 6.3.2; EN 1993-1-5:2006, 6 and 7.2.

    Examples
    --------
    >>> from calcpack.actions import Combination, LoadSet, analyse_beam
    >>> from calcpack.job.library import rolled_sections
    >>> from calcpack.clauses.en1993.segments import segments
    >>> from calcpack.clauses.steel import i_section
    >>> from calcpack.statics import BeamLine, LineLoad
    >>> ipe = Profile("IPE 330", i_section(rolled_sections()["ipe330"]), 235e3, 210e6, 81e6)
    >>> beam = analyse_beam(
    ...     BeamLine(5.7, (0.0, 5.7)),
    ...     [LoadSet("dead", (LineLoad(0, 5.7, 22.28, 22.28),))],
    ...     [Combination("G", "strength", {"dead": 1.0})],
    ... )
    >>> found = design(ipe, beam, segments([(0, 5.7)], [0, 5.7]), Conditions(curves="rolled"))
    >>> round(found.bending.value, 2), round(found.shear.value, 2), round(found.segments[0].resistance)
    (90.48, 63.5, 92)
    """
    return SteelBeam(
        profile,
        conditions,
        _bending(analysed),
        _shear(analysed),
        beside_shear(profile, analysed),
        buckling_of(profile, analysed, parts, conditions),
        local_forces(profile, analysed, conditions, fixed),
    )


def _bending(analysed: AnalysedBeam) -> Effect:
    result = analysed.governing_moment
    most = result.moment_governing
    return Effect(most.value, most.at, result.combination.name)


def _shear(analysed: AnalysedBeam) -> Effect:
    result = analysed.governing_shear
    return Effect(abs(result.shear_max.value), result.shear_max.at, result.combination.name)


def beside_shear(profile: Profile, analysed: AnalysedBeam) -> Beside | None:
    """The place where moment and shear together use most, if the shear passes half its resistance anywhere.

    Parameters
    ----------
    profile : Profile
    analysed : AnalysedBeam [m, kN, kNm]

    Both are taken from their envelopes, as if they stood there at one time.

    Source: EN 1993-1-1:2005, 6.2.8.
    """
    moment, shear = analysed.band("moment"), analysed.band("shear")
    if abs(shear.largest_absolute.value) <= HALF * profile.shear:
        return None
    curves = (moment.upper, moment.lower, shear.upper, shear.lower)
    breaks = np.unique(np.concatenate([curve.breaks for curve in curves]))
    places = np.union1d(breaks, np.linspace(breaks[0], breaks[-1], SAMPLES + 1))
    worst: Beside | None = None
    for x in places.tolist():
        for side in ("left", "right"):
            forces = [abs(curve.at(x, side)) for curve in (shear.upper, shear.lower)]
            if max(forces) <= HALF * profile.shear:
                continue
            bent = max(abs(curve.at(x, side)) for curve in (moment.upper, moment.lower))
            found = Beside(x, bent, max(forces), profile.bending_with_shear(max(forces)))
            if worst is None or _used(found) > _used(worst) + 1e-12:
                worst = found
    return worst


def _used(beside: Beside) -> float:
    return beside.moment / max(beside.resistance, 1e-9)


def buckling_of(
    profile: Profile, analysed: AnalysedBeam, parts: Sequence[Segment], conditions: Conditions
) -> tuple[Buckling, ...]:
    """The worst arrangement of each segment that bends at all.

    Parameters
    ----------
    profile : Profile
    analysed : AnalysedBeam [m, kN, kNm]
    parts : sequence of Segment
    conditions : Conditions

    Source: EN 1993-1-1:2005, 6.3.2.
    """
    band = analysed.band("moment")
    scale = max(abs(band.largest.value), abs(band.smallest.value))
    worst = []
    for part in parts:
        found = []
        for each in tried(analysed, part):
            moments = segment_moments(each.moment, part.start, part.end)
            if part.held_top:
                moments = moments._replace(largest=moments.hogging)
            if abs(moments.largest.value) > NOTHING * scale:
                found.append(_checked(profile, analysed, part, each, moments, conditions))
        if found:
            worst.append(max(found, key=lambda each: round(each.ratio, 12)))
    return tuple(worst)


def _checked(
    profile: Profile,
    analysed: AnalysedBeam,
    part: Segment,
    arrangement: Arrangement,
    moments: SegmentMoments,
    conditions: Conditions,
) -> Buckling:
    demand = abs(moments.largest.value)
    height = height_of(profile, conditions.load_height)
    length, diagram, share, twisting, load = part.length, 1.0, 1.0, 0.0, 0.0
    above = conditions.load_height == "top"
    if part.free_tip:
        length *= OVERHANG[above]
        critical = buckling.critical_moment(profile, length, diagram, 0.0)
    elif part.held_top:
        diagram = buckling.held_factor(profile, arrangement.moment, part.start, part.end, length)
        critical = diagram * sum(buckling.held_stiffness(profile, length)) / profile.shape.depth
    else:
        if conditions.diagram is None:
            share = buckling.wave_share(arrangement.moment, part.start, part.end, demand)
            diagram = min(LARGEST_DIAGRAM, buckling.quarter_points(moments), 1 / share**0.5)
        else:
            diagram = conditions.diagram
        loads = [
            (load, factor)
            for each, factor in zip(analysed.sets, arrangement.factors, strict=True)
            if factor
            for load in each.loads
        ]
        if height:
            twisting = max(buckling.twisting_load(loads, part.start, part.end, above=above), 0.0)
        load = buckling.load_factor(diagram if above else 1.0, length, twisting, demand)
        critical = buckling.critical_moment(profile, length, diagram, load * height)
    slenderness = (profile.modulus_of_section * profile.strength / critical) ** 0.5
    alpha = buckling.imperfection(profile, conditions.curves)[1]
    even = 1.0 if part.held_top else diagram
    found = buckling.reduction(slenderness, alpha, conditions.curves, profile.factors, even)
    resistance = found.reduced * profile.modulus_of_section * profile.strength / profile.factors.gamma_M1
    return Buckling(
        part, arrangement, moments, demand, length, diagram, share, twisting, load,
        height if twisting else 0.0, critical, slenderness, found, resistance,
    )  # fmt: skip


def height_of(profile: Profile, where: LoadHeight) -> float:
    """z_g: how far above the shear centre the load stands [m].

    Parameters
    ----------
    profile : Profile
    where : "top", "centre" or "bottom"

    Source: geometry; z_g as in ENV 1993-1-1:1992, F.1.2.
    """
    return {"top": 0.5, "centre": 0.0, "bottom": -0.5}[where] * profile.shape.depth


def local_forces(
    profile: Profile, analysed: AnalysedBeam, conditions: Conditions, fixed: tuple[bool, bool]
) -> tuple[LocalForce, ...]:
    """Forces on the flanges at supports and under point loads, each with the web's resistance.

    Parameters
    ----------
    profile : Profile
    analysed : AnalysedBeam [m, kN, kNm]
    conditions : Conditions
    fixed : (bool, bool)
        Ends held against rotation.

    Source: EN 1993-1-5:2006, 6.1 and Figure 6.1.
    """
    found = []
    if conditions.bears_at_supports:
        found += _reactions(profile, analysed, conditions, fixed)
    if conditions.bears_at_loads:
        found += _point_loads(profile, analysed, conditions)
    return tuple(sorted(found, key=lambda each: each.at))


def _reactions(
    profile: Profile, analysed: AnalysedBeam, conditions: Conditions, fixed: tuple[bool, bool]
) -> list[LocalForce]:
    line, found = analysed.line, []
    for number, at in enumerate(line.supports):
        to_end = min(at, line.length - at)
        if to_end <= PLACES and fixed[0 if at <= PLACES else 1]:
            continue
        result = max(
            analysed.of_limit("strength"),
            key=lambda each, number=number: round(each.reactions_max[number], 9),  # type: ignore[misc]
        )
        beyond = None
        if to_end <= PLACES:
            beyond = 0.0
        elif to_end < profile.web_depth:
            beyond = max(to_end - conditions.bearing_length / 2, 0.0)
        force = result.reactions_max[number]
        if force > 0:
            found.append(_force(profile, analysed, conditions, number, at, force, result, beyond))
    return found


def _point_loads(profile: Profile, analysed: AnalysedBeam, conditions: Conditions) -> list[LocalForce]:
    supports = analysed.line.supports
    places: list[float] = []
    for each in analysed.sets:
        for load in each.loads:
            if isinstance(load, PointLoad) and not any(
                abs(load.at - other) <= PLACES for other in (*places, *supports)
            ):
                places.append(load.at)
    found = []
    for at in sorted(places):
        sums = np.array(
            [
                sum(
                    load.force
                    for load in each.loads
                    if isinstance(load, PointLoad) and abs(load.at - at) <= PLACES
                )
                for each in analysed.sets
            ]
        )
        forces = []
        for result in analysed.of_limit("strength"):
            always, placed = analysed.factors(result.combination)
            forces.append((float(always @ sums + np.maximum(placed * sums, 0.0).sum()), result))
        force, result = max(forces, key=lambda pair: round(pair[0], 9))
        to_end = min(at, analysed.line.length - at)
        beyond = max(to_end - conditions.bearing_length / 2, 0.0) if to_end < profile.web_depth else None
        if force > 0:
            found.append(_force(profile, analysed, conditions, None, at, force, result, beyond))
    return found


def _force(
    profile: Profile,
    analysed: AnalysedBeam,
    conditions: Conditions,
    support: int | None,
    at: float,
    force: float,
    result: CombinationResult,
    beyond: float | None,
) -> LocalForce:
    band = analysed.band("moment")
    moment = max(abs(_value(curve, at)) for curve in (band.upper, band.lower))
    if moment < NOTHING * max(abs(band.largest.value), abs(band.smallest.value)):
        moment = 0.0
    web = local.bearing(profile, conditions.bearing_length, beyond)
    return LocalForce(support, at, force, result.combination.name, moment, beyond, web)


def _value(curve: Curve, at: float) -> float:
    return max((curve.at(at, "left"), curve.at(at, "right")), key=abs)
