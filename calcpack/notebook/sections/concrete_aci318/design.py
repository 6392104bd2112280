"""A concrete beam to ACI 318-19 settled: what the job gives, and what is chosen where it gives nothing."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import NamedTuple

from calcpack.clauses.aci318.arrangement import Cage, Group, arranged
from calcpack.clauses.aci318.choice import (
    CLOSEST,
    STEP,
    STIRRUPS,
    Strengths,
    Web,
    legs_needed,
    rounded_down,
)
from calcpack.clauses.aci318.flange import Wing, wing_width
from calcpack.clauses.aci318.limits import bound, guard
from calcpack.clauses.aci318.strength import INCH
from calcpack.clauses.bars import Bar
from calcpack.job.errors import CalcpackError
from calcpack.job.model import Material, Section
from calcpack.notebook.sections.concrete_aci318.actions import Actions, Critical, Stretch, wings_of
from calcpack.notebook.sections.concrete_aci318.faces import Face, is_high, read_bar, settle_faces
from calcpack.notebook.work import Work

COVER = {
    "US": {"inside": 1.5 * INCH, "weather": 2 * INCH, "ground": 3 * INCH},
    "SI": {"inside": 0.040, "weather": 0.055, "ground": 0.080},
}
AGGREGATE = {"US": 0.75 * INCH, "SI": 0.020}


class Zone(NamedTuple):
    """A stretch of the beam with one stirrup spacing [m]; ``end`` says which of the two spacings it has."""

    start: float
    stop: float
    spacing: float
    shear: float  # [kN], largest in it
    at_end: bool


@dataclass(frozen=True)
class Design:
    """A beam with its reinforcement.

    Parameters
    ----------
    actions : Actions
    section : Section
    material : Material
    strengths : Strengths
    cage : Cage
    wings : tuple of Wing
    flange_width : float or None [m]
        Of a tee.
    bottom, top : Face
    through : bool
        The top bars run through the whole beam.
    stirrup : Bar
    legs : int
    spacings : (float, float) [m]
        Near the supports and elsewhere; alike where one does for all.
    criticals : tuple of Critical
    zones : tuple of Zone
    how : tuple of str
        How what the job leaves open was chosen, and what was found missing.
    """

    actions: Actions
    section: Section
    material: Material
    strengths: Strengths
    cage: Cage
    wings: tuple[Wing, ...]
    flange_width: float | None
    bottom: Face
    top: Face
    through: bool
    stirrup: Bar
    legs: int
    spacings: tuple[float, float]
    criticals: tuple[Critical, ...]
    zones: tuple[Zone, ...]
    how: tuple[str, ...]

    @property
    def top_is_high(self) -> bool:
        """Whether top bars have more than 12 in of fresh concrete below them."""
        return is_high(self.top.group)

    @property
    def clear_span(self) -> float:
        """The shortest clear span, of an overhang where there is no other [m]."""
        return shortest(self.actions.stretches).clear

    @property
    def web(self) -> Web:
        """What shear is carried with: the smaller effective depth, its steel."""
        return _web(self.cage, self.strengths, self.bottom, self.top)

    @property
    def running(self) -> Group:
        """The top bars in the middle of a span: all of them, or two of them."""
        if self.through or self.top.task is None:
            return self.top.group
        return arranged(2, self.top.group.bar, self.cage)


def shortest(stretches: Sequence[Stretch]) -> Stretch:
    """The shortest clear span, of an overhang where there is no other."""
    spans = [each for each in stretches if not each.overhang] or list(stretches)
    return min(spans, key=lambda each: each.clear)


def settle(work: Work) -> Design:
    """Read the design keys of a beam, check them, and choose what they leave open.

    Parameters
    ----------
    work : Work

    Returns
    -------
    Design

    Raises
    ------
    CalcpackError
        The section or material is not one of reinforced concrete by ACI 318, a value is outside of the
        limits, or no bars fit.
    """
    given, keys = work.given, work.given.design
    section, material = _concrete(work)
    strengths = _strengths(work, material)
    actions = Actions(work, keys["support_width"], keys["sustained_live"])
    if min(each.clear for each in actions.stretches) <= 0:
        raise CalcpackError(
            "the supports are as wide as a span", mark=f"beam {given.mark}", key="design.support_width"
        )
    system = work.study.system
    how: list[str] = []
    cover = keys["cover"]
    if cover is None:
        cover = COVER[system][keys["exposure"]]
        how.append(f"cover {work.show(cover * 1000, 'mm')}: the least for this exposure, in round numbers")
    wings = wings_of(work, section.dimensions["width"])
    flange = _flange(section, wings, shortest(actions.stretches).clear)
    aggregate = keys["aggregate"] or AGGREGATE[system]
    best: Design | None = None
    for size, more in _stirrup_trials(work, keys["stirrups"]["size"]):
        stirrup = read_bar(work, size, "design.stirrups.size")
        cage = Cage(
            section.dimensions["width"], section.dimensions["depth"], cover, stirrup.diameter, aggregate
        )
        best = _with_stirrups(work, actions, section, material, strengths, cage, wings, flange, stirrup, more)
        if keys["stirrups"]["spacing"] or best.spacings[0] >= CLOSEST[system] * (1 - 1e-9):
            break
    assert best is not None
    if not keys["stirrups"]["spacing"] and best.spacings[0] < CLOSEST[system] * (1 - 1e-9):
        how.append(
            f"no stirrups at {work.show(CLOSEST[system] * 1000, 'mm')} or more carry the shear: the section "
            "is too small"
        )
    return replace(best, how=(*how, *best.how))


def _concrete(work: Work) -> tuple[Section, Material]:
    section, material = work.given.section, work.given.material
    mark = f"beam {work.given.mark}"
    if section is None or section.shape == "rolled":
        raise CalcpackError(
            "this template designs rectangles and tees",
            remedy="give a concrete section",
            mark=mark,
            key="section",
        )
    if material is None or not {"fc", "fy", "Es"} <= material.values.keys():
        raise CalcpackError(
            "ACI 318 needs f'c of the concrete and f_y of its bars",
            remedy="name a grade like '4000 psi' and bars like 'Grade 60'",
            mark=mark,
            key="material",
        )
    name = work.given.actions.name
    if "allowable" in name:
        raise CalcpackError(
            f"'{name}' are combinations for allowable stresses, ACI 318 designs for strength",
            remedy="set basis.actions to 'ASCE 7-22 strength'",
            mark=mark,
            key="basis.actions",
        )
    return section, material


def _strengths(work: Work, material: Material) -> Strengths:
    fc, fy, es = (float(material.values[name]) for name in ("fc", "fy", "Es"))
    guard({"f'_c": fc, "f_y": fy}, work.study.system, f"beam {work.given.mark}")
    return Strengths(fc, fy, min(fy, bound("f_yt")), es)


def _flange(section: Section, wings: tuple[Wing, ...], clear: float) -> float | None:
    """Width of a tee's flange as far as it acts [m]."""
    if section.shape != "tee":
        return None
    if not section.effective_flange:
        return section.dimensions["flange_width"]
    slab = section.dimensions["flange_depth"]
    both = len(wings) == 2
    return section.dimensions["width"] + sum(wing_width(slab, each.clear, clear, both=both) for each in wings)


def _stirrup_trials(work: Work, given: str | None) -> list[tuple[str, int]]:
    """Sizes of stirrups with the legs they have beyond the needed ones, in the order they are tried."""
    sizes = (given,) if given else work.stock.among(STIRRUPS[work.study.system])
    return [(size, more) for more in (0, 2) for size in sizes]


def _with_stirrups(
    work: Work,
    actions: Actions,
    section: Section,
    material: Material,
    strengths: Strengths,
    cage: Cage,
    wings: tuple[Wing, ...],
    flange: float | None,
    stirrup: Bar,
    more: int,
) -> Design:
    """The design with stirrups of one size."""
    how: list[str] = []
    bottom, top, through = settle_faces(work, actions, section, strengths, cage, flange, how)
    web = _web(cage, strengths, bottom, top)
    criticals = tuple(actions.critical(web.depth))
    largest = max((each.shear for each in criticals), default=0.0)
    keys, system = work.given.design["stirrups"], work.study.system
    legs = keys["legs"]
    if legs is None:
        legs = legs_needed(web, cage, largest) + more
        how.append(f"{legs} stirrup legs: as many as their distance across the web asks for"
                   + (", and two more for strength" if more else ""))  # fmt: skip
    if not keys["size"]:
        tried = ", ".join(work.stock.among(STIRRUPS[system]))
        how.append(
            f"stirrups {stirrup.name}: the thinnest of {tried} that need not stand "
            f"closer than {work.show(CLOSEST[system] * 1000, 'mm')}"
        )
    area = legs * stirrup.area
    if keys["spacing"]:
        spacings = (keys["spacing"], keys["spacing"])
    else:
        most = min(_tie_spacing(bottom, stirrup, cage), _tie_spacing(top, stirrup, cage))
        spacings = _spacings(web, area, largest, most, STEP[system])
        how.append(
            f"stirrup spacing: the widest that strength, the least stirrups and Table 9.7.6.2.2 allow, in "
            f"steps of {work.show(STEP[system] * 1000, 'mm')}, closer near the supports only as far as the "
            "shear asks for it; stirrups stand in the whole beam"
        )
    zones = _zones(actions, criticals, web, area, spacings, STEP[system])
    return Design(
        actions, section, material, strengths, cage, wings, flange, bottom, top, through, stirrup, legs,
        spacings, criticals, tuple(zones), tuple(how),
    )  # fmt: skip


def _tie_spacing(face: Face, stirrup: Bar, cage: Cage) -> float:
    """Spacing of stirrups about compression bars, 9.7.6.4.3 [m]."""
    if face.pressed is None:
        return math.inf
    return min(16 * face.pressed.bar.diameter, 48 * stirrup.diameter, cage.width)


def _spacings(web: Web, area: float, largest: float, most: float, step: float) -> tuple[float, float]:
    wide = max(rounded_down(min(web.widest(0.0, area), most), step), step)
    close = max(rounded_down(min(web.widest(largest, area), most), step), step)
    return close, wide


def _web(cage: Cage, strengths: Strengths, bottom: Face, top: Face) -> Web:
    bent = [face.group for face in (bottom, top) if face.task is not None] or [bottom.group]
    least = min(bent, key=lambda group: group.depth)
    return Web(cage.width, least.depth, least.area / (cage.width * least.depth), strengths)


def _zones(
    actions: Actions,
    criticals: Sequence[Critical],
    web: Web,
    area: float,
    spacings: tuple[float, float],
    step: float,
) -> list[Zone]:
    """Stretches of one stirrup spacing, span by span."""
    close, wide = spacings
    zones: list[Zone] = []
    strength = web.strength(area, wide)
    for stretch in actions.stretches:
        ends = {each.left: each for each in criticals if each.span == stretch.number}
        first = ends[True].at if True in ends else stretch.start
        last = ends[False].at if False in ends else stretch.end
        reach = {True: 0.0, False: 0.0}
        if close < wide - 1e-9:
            for left, each in ends.items():
                over = actions.zone_reach(each, strength)
                reach[left] = math.ceil(over / step - 1e-9) * step
        left_end, right_start = stretch.start + reach[True], stretch.end - reach[False]
        if left_end >= right_start - 1e-9:
            shear = max((each.shear for each in ends.values()), default=0.0)
            zones.append(Zone(stretch.start, stretch.end, close, shear, True))
            continue
        if reach[True]:
            zones.append(Zone(stretch.start, left_end, close, ends[True].shear, True))
        middle = (max(left_end, first), min(right_start, last))
        shear = actions.largest_shear(*middle) if middle[1] > middle[0] else actions.shear_at(middle[0])
        zones.append(Zone(left_end, right_start, wide, shear, False))
        if reach[False]:
            zones.append(Zone(right_start, stretch.end, close, ends[False].shear, True))
    return _joined(zones)


def _joined(zones: Sequence[Zone]) -> list[Zone]:
    """Zones of one spacing that meet at a support as one."""
    found: list[Zone] = []
    for zone in zones:
        last = found[-1] if found else None
        if last is not None and last.spacing == zone.spacing and last.at_end == zone.at_end:
            found[-1] = last._replace(stop=zone.stop, shear=max(last.shear, zone.shear))
        else:
            found.append(zone)
    return found
