"""The job's own tables of sections, grades, bars and occupancies; they go before the office's."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator

from calcpack.job.entries import Entry, Problems, validated
from calcpack.job.errors import nearest
from calcpack.job.library import Catalogue, Grade, office, rolled_area_and_inertia
from calcpack.job.model import BarSize, Occupancy, Section
from calcpack.job.names import alike, bar_name
from calcpack.job.raw import BAR_VALUES, CONCRETE_VALUES, STEEL_VALUES, RawBar, RawGrade, RawRolled, RawUse

LONGEST = 40  # letters of a name
THICKEST = 0.1  # diameter of a bar [m]
UNROUND = 0.25  # part of its circle by which a bar's nominal area may differ
SIZES = ("depth", "width", "web", "flange", "root_radius")
GENERAL = ("modulus", "unit_weight")
# What a grade of a kind needs (one of each), and all the values it can have.
FITTING: dict[str, tuple[tuple[tuple[str, ...], ...], tuple[str, ...]]] = {
    "concrete": (
        (("fck", "fc"), ("modulus",), ("unit_weight",)),
        (*GENERAL, *(name for name in CONCRETE_VALUES if name not in BAR_VALUES)),
    ),
    "steel": ((("fy",), ("modulus",), ("unit_weight",)), (*GENERAL, *STEEL_VALUES)),
    "reinforcement": ((("fyk", "fy"), ("Es",)), BAR_VALUES),
}


def catalogue(sections: Iterable[Entry], grades: Iterable[Entry], problems: Problems) -> Catalogue:
    """The office's sections and grades with the job's own put over them.

    Parameters
    ----------
    sections, grades : iterable of Entry
        Rows of the tables ``rolled_sections`` and ``grades``.
    problems : Problems
        Faults of single rows go here.

    Returns
    -------
    Catalogue
        A row of the job's own replaces what the office calls by the same name; others are added. A section
        without a family belongs to the one its designation names (IPE 300: IPE), if any.
    """
    own = [
        found for entry in _once(sections, "designation", problems) if (found := _section(entry, problems))
    ]
    named = [grade for entry in _once(grades, "name", problems) if (grade := _grade(entry, problems))]
    return office().over(own, named)


def bar_sizes(entries: Iterable[Entry], problems: Problems) -> tuple[BarSize, ...]:
    """The job's own bars, thinnest first.

    Parameters
    ----------
    entries : iterable of Entry
        Rows of the table ``bars``. Without an area a bar has that of its circle.
    problems : Problems
        Faults of single rows go here.
    """
    found = [size for entry in _once(entries, "name", problems, bars=True) if (size := _bar(entry, problems))]
    return tuple(sorted(found, key=lambda each: (each.diameter, each.area, each.name)))


def occupancies(entries: Iterable[Entry], problems: Problems) -> tuple[Occupancy, ...]:
    """The job's own uses, in the order of their table.

    Parameters
    ----------
    entries : iterable of Entry
        Rows of the table ``occupancies``.
    problems : Problems
        Faults of single rows go here.
    """
    found = (_use(entry, problems) for entry in _once(entries, "name", problems))
    return tuple(use for use in found if use)


def _once(entries: Iterable[Entry], key: str, problems: Problems, *, bars: bool = False) -> Iterator[Entry]:
    """Rows whose name is there and not taken."""
    seen: dict[str, Entry] = {}
    for entry in entries:
        name = str(entry.data.get(key, ""))
        name = bar_name(name) if bars else name
        if len(name) > LONGEST:
            problems.add(entry.problem(f"this name has {len(name)} letters", f"at most {LONGEST}", key))
        elif (other := seen.setdefault(alike(name), entry)) is not entry:
            message = f"the name is taken by the row in line {other.line}"
            problems.add(entry.problem(message, "leave one out", key))
        else:
            yield entry


def _section(entry: Entry, problems: Problems) -> tuple[str, Section] | None:
    """A row as a family and a section."""
    raw = validated(RawRolled, entry, problems)
    if raw is None:
        return None
    fault = None
    if raw.web >= raw.width:
        fault = "the web is as thick as the section is wide", "web"
    elif 2 * raw.flange >= raw.depth:
        fault = "the two flanges take up the whole depth", "flange"
    elif raw.root_radius < 0 or 2 * raw.root_radius > min(raw.width - raw.web, raw.depth - 2 * raw.flange):
        fault = "the fillets do not fit between web and flanges", "root_radius"
    if fault:
        problems.add(entry.problem(fault[0], "compare the row with its source", fault[1]))
        return None
    sizes = {name: float(getattr(raw, name)) for name in SIZES}
    area, inertia = rolled_area_and_inertia(**sizes)
    return raw.family, Section(
        key=raw.designation,
        shape="rolled",
        designation=raw.designation,
        dimensions=sizes,
        area=area,
        inertia=inertia,
        source=_source(entry, raw.source),
    )


def _grade(entry: Entry, problems: Problems) -> Grade | None:
    """A row as a grade, with the values its kind needs and no others."""
    raw = validated(RawGrade, entry, problems)
    if raw is None:
        return None
    values = {key: entry.data[key] for key in entry.data if key not in ("name", "kind", "source")}
    needed, fitting = FITTING[raw.kind]
    count = len(problems.found)
    for names in needed:
        if not set(names) & set(values):
            message, remedy = f"a {raw.kind} needs this key", ""
            if names[1:]:
                remedy = f"give {names[0]} (EN) or {names[1]} (US)"
            problems.add(entry.problem(message, remedy, names[0]))
    for name in values:
        if name not in fitting:
            problems.add(entry.problem(f"a {raw.kind} has no such value", nearest(name, fitting), name))
    if len(problems.found) > count:
        return None
    kind = "bars" if raw.kind == "reinforcement" else raw.kind
    return Grade(raw.name, kind, values, _source(entry, raw.source))


def _bar(entry: Entry, problems: Problems) -> BarSize | None:
    raw = validated(RawBar, entry, problems)
    if raw is None:
        return None
    circle = math.pi * raw.diameter**2 / 4
    area = circle if raw.area is None else raw.area
    fault = None
    if not raw.name.strip():
        fault = "this text is empty", "write for example 20 mm", "name"
    elif raw.diameter > THICKEST:
        fault = "no bar is as thick as that", "look at the column's unit", "diameter"
    elif abs(area - circle) > UNROUND * circle:
        message = f"the area of this diameter's circle is {circle * 1e6:.4g} mm²"
        fault = message, "compare the row with its source", "area"
    if fault:
        problems.add(entry.problem(*fault))
        return None
    return BarSize(
        name=bar_name(raw.name), diameter=raw.diameter, area=area, source=_source(entry, raw.source)
    )


def _use(entry: Entry, problems: Problems) -> Occupancy | None:
    raw = validated(RawUse, entry, problems)
    if raw is None:
        return None
    given = [raw.psi0, raw.psi1, raw.psi2]
    psi = [each for each in given if each is not None]
    fault = None
    if psi and len(psi) < 3:
        key = next(f"psi{place}" for place, each in enumerate(given) if each is None)
        fault = "this key is missing", "give all of psi0, psi1, psi2, or none", key
    elif psi and not psi[0] >= psi[1] >= psi[2]:
        fault = "ψ0, ψ1, ψ2 do not descend", "compare the row with its source", "psi1"
    elif psi and not raw.category:
        fault = "factors are of a category", "name the one they take the place of, A to G", "category"
    if fault:
        problems.add(entry.problem(*fault))
        return None
    written = str(entry.data["uniform"]), str(entry.data.get("point", ""))
    return Occupancy(
        key=raw.name,
        says=raw.says,
        uniform=raw.uniform,
        point=raw.point,
        bounds=None,
        written=written,
        category=raw.category,
        reduced="" if raw.reduced.casefold() == "yes" else raw.reduced,
        cite=_source(entry, raw.source),
        psi=(psi[0], psi[1], psi[2]) if psi else None,
    )


def _source(entry: Entry, given: str) -> str:
    return f"{entry.file}, the job's own table" + (f": {given}" if given else "")
