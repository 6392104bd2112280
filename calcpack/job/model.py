"""The job as understood: frozen, complete, in SI (m, kN, kN/m, kPa, kN/m³).

The reader makes these from the job file; every later stage works from them alone.
"""

from __future__ import annotations

import datetime
from dataclasses import dataclass
from typing import Any, Literal

from pydantic import BaseModel, ConfigDict

Point = tuple[float, float]
Case = Literal["dead", "live", "roof_live", "snow"]
CASES: tuple[Case, ...] = ("dead", "live", "roof_live", "snow")
EquivalentKind = Literal["shear", "moment", "deflection", "fixed-end moment", "total"]


@dataclass(frozen=True)
class Occupancy:
    """What a use of a floor asks for.

    Parameters
    ----------
    key, says : str
        Its short name in the table, and in words.
    uniform : float [kPa]
    point : float or None [kN]
        Concentrated load; None where the table has none.
    bounds : (float, float) or None [kPa]
        Between which a national choice lies.
    written : (str, str)
        Uniform and concentrated load as the table writes them.
    category : str
        EN 1990 category, the key of the combination factors; "" where there is none.
    reduced : str
        Why area does not reduce it; "" where it does.
    cite : str
    psi : (float, float, float) or None
        ψ0, ψ1, ψ2 that a job states of its own; None where the category's hold.
    """

    key: str
    says: str
    uniform: float
    point: float | None
    bounds: tuple[float, float] | None
    written: tuple[str, str]
    category: str
    reduced: str
    cite: str
    psi: tuple[float, float, float] | None = None


class Frozen(BaseModel):
    """A settled part of the job: no unknown keys, no later change."""

    model_config = ConfigDict(frozen=True, extra="forbid")


class Place(Frozen):
    """Where something stands in the user's files."""

    file: str
    line: int | None = None


class Person(Frozen):
    """Somebody who answers for the sheet."""

    name: str = ""
    licence: str = ""


class Header(Frozen):
    """The title block (ISO 7200 fields)."""

    number: str
    title: str
    site: str = ""
    client: str = ""
    authority: str = ""
    permit: str = ""
    contact: str = ""
    revision: str = "A"
    date: datetime.date
    units: Literal["SI", "US"] = "SI"
    prepared: Person = Person()
    checked: Person = Person()
    approved: Person = Person()


class Submission(Frozen):
    """How the authority wants the pack."""

    paper: Literal["A4", "Letter"] = "A4"
    check_level: Literal["self", "second person", "third party"] = "second person"
    attachments: bool = True
    allow_markup: bool = False


class Basis(Frozen):
    """What the calculation rests on."""

    actions: str = "EN 1990"
    occupancy: str = ""  # EN 1990 category of the live load, A to H; "" where the set needs none
    one_way_ratio: float = 2.0
    dividing_lines: Literal["45", "60 at continuous edges"] = "45"
    equivalent: EquivalentKind = "moment"
    design_loads: Literal["actual", "equivalent"] = "actual"
    live_load_reduction: Literal["none", "ASCE 7-22 4.7", "EN 1991-1-1 6.3.1.2"] = "none"
    beam_self_weight: bool = True


class Material(Frozen):
    """A material with all its values known."""

    key: str
    kind: Literal["concrete", "steel"]
    grade: str = ""
    modulus: float  # [kPa]
    unit_weight: float  # [kN/m3]
    values: dict[str, float | str] = {}  # the grade's further values, stresses in kPa
    source: str = ""  # where the values come from


class Tried(Frozen):
    """A lighter section that was tried and does not do."""

    designation: str
    fails: str  # what fails most
    ratio: float  # of demand to resistance there


class Section(Frozen):
    """A cross-section with its gross properties.

    With ``family`` the job asks for the lightest of a family that does. Until one is chosen for a beam the
    section is ``open``, with the values of the lightest of all; then ``tried`` says which lighter ones fail.
    """

    key: str
    shape: Literal["rectangle", "tee", "rolled"]
    designation: str = ""
    # [m]: width, depth, flange_width, flange_depth, web, flange, root_radius
    dimensions: dict[str, float] = {}
    effective_flange: bool = False  # a tee whose flange width a design clause has yet to give
    area: float  # [m2]; for an effective flange that of the web over the full depth
    inertia: float  # [m4], about the horizontal axis
    source: str = ""
    family: str = ""  # "W", "IPE", one of the job's own, where the lightest of it is asked for
    tried: tuple[Tried, ...] = ()
    fits: bool = True  # False where none of the family does and this one comes nearest

    @property
    def open(self) -> bool:
        """Whether a section of the family has yet to be chosen."""
        return bool(self.family) and self.designation.startswith("lightest in ")


class BarSize(Frozen):
    """A bar size of the job's own."""

    name: str
    diameter: float  # [m]
    area: float  # [m2]
    source: str


class Psi(Frozen):
    """Combination factors of the live load that the job states itself, in place of the table's."""

    psi0: float
    psi1: float
    psi2: float
    use: str  # "archive"
    source: str


class Panel(Frozen):
    """A slab panel: a convex outline with its loads."""

    mark: str
    corners: tuple[Point, ...]  # [m], counter-clockwise, no three on a line
    corner_names: tuple[str, ...]  # as the user would say them: "A1", "(3.2, 1.0)"
    thickness: float = 0.0  # [m]
    unit_weight: float = 0.0  # [kN/m3]
    dead: float = 0.0  # [kPa], superimposed
    live: float = 0.0
    use: str = ""  # what the live load is for, where the job names a use in place of a load
    use_source: str = ""  # where its live load comes from
    unreduced: str = ""  # why the live load of this use is not reduced for area; "" where it may be
    roof_live: float = 0.0
    snow: float = 0.0
    transfer: Literal["auto", "two-way", "one-way x", "one-way y"] = "auto"
    place: Place

    def pressure(self, case: Case) -> float:
        """Load on the panel in a case [kPa]; dead is the slab's own weight and what lies on it."""
        own = self.thickness * self.unit_weight if case == "dead" else 0.0
        return float(getattr(self, case)) + own


class BeamLoad(Frozen):
    """A load given on a beam itself: a line load from start to end, or a point load."""

    case: Case
    line: float | None = None  # [kN/m] at start
    line_end: float | None = None  # [kN/m] at end; None: as at start
    start: float = 0.0  # [m] from the beam's start
    end: float | None = None  # [m]; None: the beam's end
    point: float | None = None  # [kN]
    at: float | None = None  # [m]
    place: Place


class Beam(Frozen):
    """A beam through its points: start, every support in order, end."""

    mark: str
    points: tuple[Point, ...]
    point_names: tuple[str, ...]
    fixed_start: bool = False
    fixed_end: bool = False
    free_start: bool = False
    free_end: bool = False
    equivalent: EquivalentKind
    design_loads: Literal["actual", "equivalent"]
    section: Section | None = None
    material: Material | None = None
    template: str = "beam_loads"
    design: dict[str, Any] = {}
    loads: tuple[BeamLoad, ...] = ()
    place: Place


class Column(Frozen):
    """A column under a point."""

    mark: str
    at: Point
    point_name: str
    place: Place


class Wall(Frozen):
    """A wall along a line."""

    mark: str
    line: tuple[Point, Point]
    point_names: tuple[str, str]
    place: Place


class OwnCombination(Frozen):
    """A combination the job file states itself."""

    name: str
    limit: Literal["strength", "service"]
    factors: dict[Case, float]


class DataFile(Frozen):
    """A TOML file beside the job file that a design key names."""

    name: str
    sha256: str
    data: dict[str, Any]
    lines: dict[str, int] = {}  # dotted key -> line


class Job(Frozen):
    """A whole job as read."""

    file: str  # the job file's name, no folder
    folder: str  # where it stands; used to find files beside it, never shown
    digest: str  # SHA-256 over the job file, its tables and data files, in the order read
    files: dict[str, str]  # name -> SHA-256 of each file read
    job: Header
    submission: Submission
    basis: Basis
    grid_x: dict[str, float]
    grid_y: dict[str, float]
    panels: tuple[Panel, ...]
    beams: tuple[Beam, ...]
    columns: tuple[Column, ...]
    walls: tuple[Wall, ...]
    combinations: tuple[OwnCombination, ...] = ()
    # what "lightest in FAMILY" chooses from: family -> its sections by weight, the job's own among them
    candidates: dict[str, tuple[Section, ...]] = {}
    bars: tuple[BarSize, ...] = ()  # the job's own bar sizes
    psi: Psi | None = None  # the job's own
    occupancies: tuple[Occupancy, ...] = ()  # the job's own
    data_files: dict[str, DataFile] = {}  # name -> what a design key named
    lines: dict[str, int] = {}  # "beam B1 section" -> line in the job file, for errors found later
