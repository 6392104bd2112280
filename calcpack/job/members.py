"""Panels, beams, columns, walls and combinations: from what is given to what is meant."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from calcpack.job.entries import Entry, Problems, validated
from calcpack.job.errors import CalcpackError, nearest
from calcpack.job.fields import Spot
from calcpack.job.model import (
    CASES,
    Basis,
    Beam,
    BeamLoad,
    Case,
    Column,
    Material,
    Occupancy,
    OwnCombination,
    Panel,
    Section,
    Wall,
)
from calcpack.job.plan import CLOSE, Grid, Named, check_line, distance, outline
from calcpack.job.raw import RawBeam, RawColumn, RawCombination, RawLoad, RawPanel, RawTableLoad, RawWall
from calcpack.job.units import factor
from calcpack.job.uses import Uses, live_load, with_use


@dataclass(frozen=True)
class Surroundings:
    """What members refer to. A None stands for something named but faulty, told of already."""

    grid: Grid | None
    basis: Basis
    units: str
    materials: Mapping[str, Material | None]
    sections: Mapping[str, Section | None]
    problems: Problems
    uses: Uses

    def points(self, entry: Entry, key: str, given: Sequence[str | Spot]) -> list[Named] | None:
        """Places of the points a key lists; None with the problems noted."""
        places = [self.point(entry, f"{key}.{number}", each) for number, each in enumerate(given)]
        found = [each for each in places if each is not None]
        return found if len(found) == len(given) else None

    def point(self, entry: Entry, key: str, given: str | Spot) -> Named | None:
        """The place of the point a key names; None with the problem noted."""
        try:
            return self.grid.place(given) if self.grid else None
        except CalcpackError as error:
            self.problems.add(entry.placed(error, key))
            return None

    def material(self, name: str | None, entry: Entry) -> Material | None:
        """The material of that name."""
        if name is not None and name not in self.materials:
            remedy = nearest(name, self.materials)
            self.problems.add(entry.problem(f"there is no material '{name}'", remedy, "material"))
        return self.materials.get(name) if name is not None else None

    def section(self, name: str | None, entry: Entry) -> Section | None:
        """The section of that name."""
        if name is not None and name not in self.sections:
            remedy = nearest(name, self.sections)
            self.problems.add(entry.problem(f"there is no section '{name}'", remedy, "section"))
        return self.sections.get(name) if name is not None else None

    def use(self, raw: RawPanel, entry: Entry) -> Occupancy | None:
        """The use that a panel names."""
        if raw.use is None:
            return None
        found = self.uses.find(raw.use)
        if found is None:
            remedy = nearest(raw.use, self.uses.names)
            self.problems.add(entry.problem(f"there is no use '{raw.use}'", remedy, "use"))
        elif raw.live is not None:
            message = f"the use '{found.key}' has a live load of its own, {found.written[0]}"
            self.problems.add(entry.problem(message, "leave out the load or the use", "live"))
        return found

    @property
    def unit_weight(self) -> float:
        """Unit weight of a slab that names none [kN/m3]: common practice under either family of codes.

        With combinations of the job's own the units it is shown in tell the family.
        """
        own = self.basis.actions == "job" and self.units == "US"
        return 150 * factor("pcf") if own or self.basis.actions.startswith("ASCE") else 25.0

    def length(self, value: float) -> str:
        """A length as a message says it."""
        return f"{value / factor('ft'):.6g} ft" if self.units == "US" else f"{value:.6g} m"


def read_panel(entry: Entry, around: Surroundings) -> Panel | None:
    """A panel, its outline put in order."""
    raw = validated(RawPanel, entry, around.problems)
    if raw is None:
        return None
    material, use = around.material(raw.material, entry), around.use(raw, entry)
    points = around.points(entry, "corners", raw.corners)
    if points is None:
        return None
    try:
        corners = outline(points)
    except CalcpackError as error:
        around.problems.add(entry.placed(error, "corners"))
        return None
    own = material.unit_weight if material else around.unit_weight
    return Panel(
        mark=raw.mark,
        corners=tuple(corner.at for corner in corners),
        corner_names=tuple(str(corner) for corner in corners),
        thickness=raw.thickness or 0.0,
        unit_weight=own if raw.unit_weight is None else raw.unit_weight,
        dead=raw.dead,
        live=live_load(raw.live, use),
        roof_live=raw.roof_live,
        snow=raw.snow,
        transfer=raw.transfer,
        place=entry.place,
        **(with_use(use, around.uses) if use else {}),
    )


def read_beam(entry: Entry, loads: Sequence[Entry], around: Surroundings) -> Beam | None:
    """A beam with its loads, those of a table of loads last."""
    raw = validated(RawBeam, entry, around.problems)
    given = [read_load(each, around.problems) for each in loads]
    if raw is None:
        return None
    section, material = around.section(raw.section, entry), around.material(raw.material, entry)
    for end in ("start", "end"):
        if end in raw.fixed and end in raw.free:
            remedy = "name it under one of them"
            around.problems.add(entry.problem(f"the {end} is both fixed and free", remedy, "free"))
    points = around.points(entry, "line", raw.line)
    if points is None:
        return None
    try:
        check_line(points)
    except CalcpackError as error:
        around.problems.add(entry.placed(error, "line"))
        return None
    length = distance(points[0].at, points[-1].at)
    placed = [
        put_load(load, each, length, around)
        for load, each in zip(given, loads, strict=True)
        if load is not None
    ]
    return Beam(
        mark=raw.mark,
        points=tuple(point.at for point in points),
        point_names=tuple(str(point) for point in points),
        fixed_start="start" in raw.fixed,
        fixed_end="end" in raw.fixed,
        free_start="start" in raw.free,
        free_end="end" in raw.free,
        equivalent=raw.equivalent or around.basis.equivalent,
        design_loads=raw.design_loads or around.basis.design_loads,
        section=section,
        material=material,
        template=raw.template,
        design=raw.design,
        loads=tuple(load for load in placed if load is not None),
        place=entry.place,
    )


def read_load(entry: Entry, problems: Problems) -> RawLoad | None:
    """A load as given, whole in itself: a line load or a point load, with the keys of its kind."""
    raw = validated(RawLoad if entry.prefix else RawTableLoad, entry, problems)
    if raw is None:
        return None
    count = len(problems.found)
    if (raw.line is None) == (raw.point is None):
        message = "a load has either line or point, this one has " + (
            "both" if raw.point is not None else "neither"
        )
        problems.add(entry.problem(message, 'write for example line = "7.5 kN/m"'))
    elif raw.point is not None:
        if raw.at is None:
            problems.add(
                entry.problem("a point load needs its place", 'write for example at = "2.1 m"', "at")
            )
        for key in ("line_end", "from", "to"):
            if key in entry.data:
                problems.add(entry.problem("this key belongs to a line load", "a point load has at", key))
    elif raw.at is not None:
        problems.add(entry.problem("this key belongs to a point load", "a line load has from and to", "at"))
    return raw if len(problems.found) == count else None


def put_load(raw: RawLoad, entry: Entry, length: float, around: Surroundings) -> BeamLoad | None:
    """A load on a beam of that length; None with the problems noted where it hangs over."""
    count = len(around.problems.found)
    remedy = f"the beam is {around.length(length)} long"
    for key, value in (("at", raw.at), ("from", raw.start), ("to", raw.end)):
        if value is not None and not -CLOSE <= value <= length + CLOSE:
            where = "before the beam's start" if value < 0 else "beyond the beam's end"
            around.problems.add(entry.problem(f"'{entry.data[key]}' is {where}", remedy, key))
    start, at, end = (
        None if value is None else min(max(value, 0.0), length) for value in (raw.start, raw.at, raw.end)
    )
    if (start or 0.0) >= (length if end is None else end) - CLOSE and len(around.problems.found) == count:
        key = "from" if end is None else "to"
        around.problems.add(
            entry.problem("the load ends where it starts or before", "give from less than to", key)
        )
    if len(around.problems.found) > count:
        return None
    return BeamLoad(
        case=raw.case,
        line=raw.line,
        line_end=raw.line_end,
        start=start or 0.0,
        end=end,
        point=raw.point,
        at=at,
        place=entry.place,
    )


def read_column(entry: Entry, around: Surroundings) -> Column | None:
    """A column."""
    raw = validated(RawColumn, entry, around.problems)
    point = around.point(entry, "at", raw.at) if raw else None
    if raw is None or point is None:
        return None
    return Column(mark=raw.mark, at=point.at, point_name=str(point), place=entry.place)


def read_wall(entry: Entry, around: Surroundings) -> Wall | None:
    """A wall from one point to another."""
    raw = validated(RawWall, entry, around.problems)
    points = around.points(entry, "line", raw.line) if raw else None
    if raw is None or points is None:
        return None
    try:
        if len(points) != 2:
            raise CalcpackError(f"the wall has {len(points)} points", remedy="give its two ends")
        check_line(points)
    except CalcpackError as error:
        around.problems.add(entry.placed(error, "line"))
        return None
    one, other = points
    return Wall(mark=raw.mark, line=(one.at, other.at), point_names=(str(one), str(other)), place=entry.place)


def read_combination(entry: Entry, problems: Problems) -> OwnCombination | None:
    """A combination the job states itself."""
    raw = validated(RawCombination, entry, problems)
    if raw is None:
        return None
    factors: dict[Case, float] = {
        case: getattr(raw, case) for case in CASES if getattr(raw, case) is not None
    }
    if not raw.name.strip():
        problems.add(entry.problem("the name is empty", 'write for example name = "ULS 1"', "name"))
    if not any(factors.values()):
        problems.add(
            entry.problem("no load is in this combination", "give a factor, for example dead = 1.35")
        )
    return OwnCombination(name=raw.name, limit=raw.limit, factors=factors)
