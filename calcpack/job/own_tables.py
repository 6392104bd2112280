"""The job's own tables of rolled sections and steel grades; they go before the office's."""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from calcpack.job.entries import Entry, Problems, validated
from calcpack.job.library import Catalogue, Grade, alike, office, rolled_area_and_inertia
from calcpack.job.model import Section
from calcpack.job.raw import RawGrade, RawRolled

LONGEST = 40  # letters of a name
SIZES = ("depth", "width", "web", "flange", "root_radius")


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


def _once(entries: Iterable[Entry], key: str, problems: Problems) -> Iterator[Entry]:
    """Rows whose name is there and not taken."""
    seen: dict[str, Entry] = {}
    for entry in entries:
        name = str(entry.data.get(key, ""))
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
    raw = validated(RawGrade, entry, problems)
    if raw is None:
        return None
    values = {key: entry.data[key] for key in entry.data if key not in ("name", "kind", "source")}
    return Grade(raw.name, raw.kind, values, _source(entry, raw.source))


def _source(entry: Entry, given: str) -> str:
    return f"{entry.file}, the job's own table" + (f": {given}" if given else "")
