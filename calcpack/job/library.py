"""Materials and sections: the office's tables, and what a job makes of them."""

from __future__ import annotations

import csv
import math
import re
import tomllib
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

from calcpack.job.entries import Entry, Problems, validated
from calcpack.job.errors import nearest
from calcpack.job.house import house_folder
from calcpack.job.model import Material, Section
from calcpack.job.names import alike
from calcpack.job.raw import CONCRETE_VALUES, STEEL_VALUES, RawMaterial, RawSection
from calcpack.job.units import factor

STEEL = 7850 * 2.2046226218487757 * 0.3048  # of a metre's volume [m2]: pounds a foot


@dataclass(frozen=True)
class Grade:
    """A named grade: its kind ("concrete", "steel" or "bars"), its values as text, their source."""

    name: str
    kind: str
    values: dict[str, Any]
    source: str


@lru_cache(maxsize=1)
def grades() -> dict[str, Grade]:
    """Every grade of shared/materials, by its name without spaces and capitals.

    Examples
    --------
    >>> grades()["c30/37"].values["fck"], grades()["gradE60".casefold()].kind
    ('30 MPa', 'bars')
    """
    found: dict[str, Grade] = {}
    for path in sorted(house_folder("shared").joinpath("materials").glob("*.toml")):
        table = tomllib.loads(path.read_text(encoding="utf-8"))
        common = {key: value for key, value in table.items() if key not in ("source", "kind", "grades")}
        for name, values in table["grades"].items():
            found[alike(name)] = Grade(name, table["kind"], common | values, table["source"])
    return found


@lru_cache(maxsize=1)
def rolled_sections() -> dict[str, Section]:
    """Every rolled section of shared/sections, by its designation without spaces and capitals.

    Area and inertia are those of the nominal dimensions, root fillets included.

    Examples
    --------
    >>> section = rolled_sections()["ipe300"]
    >>> round(section.area * 1e4, 1), round(section.inertia * 1e8)  # [cm2], [cm4]
    (53.8, 8356)
    """
    found: dict[str, Section] = {}
    for path in sorted(house_folder("shared").joinpath("sections").glob("*.csv")):
        first, *rest = path.read_text(encoding="utf-8").splitlines()
        header, *rows = csv.reader(rest)
        columns = [title.rstrip("]").split(" [") for title in header[1:]]
        for designation, *cells in rows:
            sizes = {
                name: float(cell) * factor(unit) for (name, unit), cell in zip(columns, cells, strict=True)
            }
            if "k_design" in sizes:
                sizes["root_radius"] = sizes.pop("k_design") - sizes["flange"]
            area, inertia = rolled_area_and_inertia(**sizes)
            found[alike(designation)] = Section(
                key=designation,
                shape="rolled",
                designation=designation,
                dimensions=sizes,
                area=area,
                inertia=inertia,
                source=first.removeprefix("# "),
            )
    return found


def rolled_area_and_inertia(
    depth: float, width: float, web: float, flange: float, root_radius: float
) -> tuple[float, float]:
    """Area and strong-axis inertia of an I-section with parallel flanges and root fillets.

    Parameters
    ----------
    depth, width, web, flange, root_radius : float [any one length]

    Returns
    -------
    area, inertia : float [that length squared; to the fourth]

    Source: integration; a fillet is a square of side r less a quarter circle, its centroid
    r (10 - 3π) / (12 - 3π) from the flange.

    Examples
    --------
    >>> rolled_area_and_inertia(2.0, 1.0, 1.0, 0.5, 0.0)  # a rectangle
    (2.0, 0.6666666666666666)
    """
    clear = depth - 2 * flange
    fillet = (1 - math.pi / 4) * root_radius**2
    own = (1 / 3 - math.pi / 16 - 1 / (9 * (4 - math.pi))) * root_radius**4
    arm = clear / 2 - root_radius * (10 - 3 * math.pi) / (12 - 3 * math.pi)
    area = 2 * width * flange + clear * web + 4 * fillet
    inertia = (width * depth**3 - (width - web) * clear**3) / 12 + 4 * (own + fillet * arm**2)
    return area, inertia


def read_material(
    key: str, entry: Entry, problems: Problems, known: Catalogue | None = None
) -> Material | None:
    """A material of the job: its grades' values with the job's own put over them."""
    named = (known or office()).grades
    given = dict(entry.data)
    merged: dict[str, Any] = {}
    sources: list[str] = []
    for name, kinds in (("grade", ("concrete", "steel")), ("bars", ("bars",))):
        if not isinstance(given.get(name), str):
            continue
        grade = named.get(alike(given[name]))
        if grade is None or grade.kind not in kinds:
            choices = [each.name for each in named.values() if each.kind in kinds]
            problems.add(
                entry.problem(f"there is no grade '{given[name]}'", nearest(given[name], choices), name)
            )
            return None
        merged |= grade.values | ({"kind": grade.kind} if name == "grade" else {})
        given[name] = grade.name
        sources.append(grade.source)
    if given.get("kind") and merged.get("kind", given["kind"]) != given["kind"]:
        problems.add(
            entry.problem(f"grade '{given['grade']}' is a {merged['kind']}", "leave out the kind", "kind")
        )
        return None
    own = [name for name in given if name not in ("kind", "grade", "bars")]
    raw = validated(RawMaterial, Entry(**{**vars(entry), "data": merged | given}), problems)
    if raw is None or not _complete(raw, own, entry, problems):
        return None
    assert raw.kind
    assert raw.modulus
    assert raw.unit_weight
    values = raw.model_dump(exclude_none=True, exclude={"kind", "grade", "modulus", "unit_weight"})
    if own:
        sources.append(f"{', '.join(own)} as given in the job" if sources else "given in the job")
    return Material(
        key=key,
        kind=raw.kind,
        grade=raw.grade or "",
        modulus=raw.modulus,
        unit_weight=raw.unit_weight,
        values=values,
        source="; ".join(sources),
    )


def _complete(raw: RawMaterial, own: list[str], entry: Entry, problems: Problems) -> bool:
    """Whether a material has what its kind needs and nothing that belongs to another kind."""
    count = len(problems.found)
    for name in ("kind", "modulus", "unit_weight"):
        if getattr(raw, name) is None:
            problems.add(
                entry.problem("a material without a grade needs this key", "add it, or name a grade", name)
            )
    if raw.kind:
        fitting = CONCRETE_VALUES if raw.kind == "concrete" else STEEL_VALUES
        if raw.kind == "steel" and raw.bars:
            problems.add(
                entry.problem("bars reinforce a concrete, this is a steel", "leave out the bars", "bars")
            )
        for name in own:
            if name not in (*fitting, "modulus", "unit_weight"):
                problems.add(entry.problem(f"a {raw.kind} has no such value", nearest(name, fitting), name))
    return len(problems.found) == count


NEEDED: dict[str, tuple[str, ...]] = {
    "rectangle": ("width", "depth"),
    "tee": ("width", "depth", "flange_width", "flange_depth"),
    "rolled": ("designation",),
}


def read_section(
    key: str, entry: Entry, problems: Problems, known: Catalogue | None = None
) -> Section | None:
    """A section of the job with its gross properties; rolled ones are known by the office unless given."""
    raw = validated(RawSection, entry, problems)
    if raw is None:
        return None
    given = raw.model_dump(exclude_none=True, exclude={"shape"})
    count = len(problems.found)
    for name in NEEDED[raw.shape]:
        if name not in given:
            problems.add(entry.problem(f"a {raw.shape} section needs this key", "", name))
    for name in given:
        if name not in NEEDED[raw.shape]:
            problems.add(
                entry.problem(
                    f"a {raw.shape} section has no such key", nearest(name, NEEDED[raw.shape]), name
                )
            )
    if len(problems.found) > count:
        return None
    if raw.shape == "rolled":
        return _rolled(key, raw.designation or "", entry, problems, known or office())
    if raw.shape == "tee" and _faulty_tee(given, entry, problems):
        return None
    effective = given.get("flange_width") == "effective"
    if effective:
        del given["flange_width"]
    area, inertia = _block_area_and_inertia(given)
    return Section(
        key=key,
        shape=raw.shape,
        dimensions=given,
        effective_flange=effective,
        area=area,
        inertia=inertia,
        source="given in the job",
    )


def _families(named: Iterable[tuple[str, Section]]) -> dict[str, tuple[Section, ...]]:
    """Sections of given families by weight; of two alike in weight the stiffer one first.

    The weight is the one a designation names (W18X50: 50 lbf/ft), else that of the area in steel.
    """
    found: dict[str, list[tuple[float, float, Section]]] = {}
    for family, section in named:
        nominal = re.fullmatch(r"[A-Z]+ ?[0-9]+X([0-9.]+)", section.designation)
        weight = float(nominal[1]) if nominal else section.area * STEEL
        found.setdefault(family, []).append((weight, -section.inertia, section))
    return {
        name: tuple(section for _, _, section in sorted(rows, key=lambda row: row[:2]))
        for name, rows in sorted(found.items())
    }


def _family(designation: str) -> str:
    """The family a designation names: "IPE 300" is of IPE, "HE 200 B" of HEB; "" if it names none."""
    parts = re.fullmatch(r"([A-Z]+) ?[0-9]+(?:X[0-9.]+| ?([A-Z]*))", designation)
    return parts[1] + (parts[2] or "") if parts else ""


@dataclass(frozen=True)
class Catalogue:
    """Grades and rolled sections by their names without spaces and capitals, sections family by family."""

    grades: Mapping[str, Grade]
    sections: Mapping[str, Section]
    families: Mapping[str, tuple[Section, ...]]

    def over(self, sections: Sequence[tuple[str, Section]], grades: Sequence[Grade]) -> Catalogue:
        """This one with others, sections with their families, put over it."""
        if not sections and not grades:
            return self
        own = {alike(section.designation): section for _, section in sections}
        kept = [
            (family, section)
            for family, rows in self.families.items()
            for section in rows
            if alike(section.designation) not in own
        ]
        named = [(family or _family(section.designation), section) for family, section in sections]
        return Catalogue(
            {**self.grades, **{alike(grade.name): grade for grade in grades}},
            {**self.sections, **own},
            _families((*kept, *(each for each in named if each[0]))),
        )


@lru_cache(maxsize=1)
def office() -> Catalogue:
    """What shared/materials and shared/sections hold."""
    return Catalogue(grades(), rolled_sections(), families())


@lru_cache(maxsize=1)
def families() -> dict[str, tuple[Section, ...]]:
    """The rolled sections of shared/sections family by family, by weight.

    Examples
    --------
    >>> list(families())
    ['HEA', 'HEB', 'IPE', 'W']
    >>> [section.designation for section in families()["IPE"][:2]]
    ['IPE 80', 'IPE 100']
    """
    return _families(
        (family, section)
        for section in rolled_sections().values()
        if (family := _family(section.designation))
    )


def _lightest(key: str, name: str, entry: Entry, problems: Problems, catalogue: Catalogue) -> Section | None:
    """A section to be chosen beam by beam."""
    known = {alike(family): family for family in catalogue.families}
    family = known.get(alike(name))
    if family is None:
        problems.add(
            entry.problem(f"there is no family '{name}'", nearest(name, known.values()), "designation")
        )
        return None
    change = {"key": key, "designation": f"lightest in {family}", "family": family}
    return catalogue.families[family][0].model_copy(update=change)


def _rolled(key: str, designation: str, entry: Entry, problems: Problems, known: Catalogue) -> Section | None:
    if open_ := re.fullmatch(r"lightest in (.{1,40})", designation):
        return _lightest(key, open_[1], entry, problems, known)
    section = known.sections.get(alike(designation))
    if section:
        return section.model_copy(update={"key": key})
    names = [each.designation for each in known.sections.values()]
    problems.add(
        entry.problem(f"there is no section '{designation}'", nearest(designation, names), "designation")
    )
    return None


def _faulty_tee(given: dict[str, Any], entry: Entry, problems: Problems) -> bool:
    count = len(problems.found)
    if given["flange_depth"] >= given["depth"]:
        problems.add(
            entry.problem("the flange is as deep as the section", "give less than depth", "flange_depth")
        )
    if given["flange_width"] != "effective" and given["flange_width"] < given["width"]:
        problems.add(
            entry.problem("the flange is narrower than the web", "give at least width", "flange_width")
        )
    return len(problems.found) > count


def _block_area_and_inertia(sizes: dict[str, float]) -> tuple[float, float]:
    """Area and inertia of a rectangle or a tee about its own centroid; without a flange width, of the web."""
    width, depth = sizes["width"], sizes["depth"]
    out = sizes.get("flange_width", width) - width
    thick = sizes.get("flange_depth", 0.0)
    web, wings = width * depth, out * thick
    centroid = (web * depth / 2 + wings * thick / 2) / (web + wings)  # from the top
    inertia = width * depth**3 / 12 + web * (depth / 2 - centroid) ** 2
    inertia += out * thick**3 / 12 + wings * (thick / 2 - centroid) ** 2
    return web + wings, inertia
