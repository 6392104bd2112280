"""The job file's own shape: which keys there are and what each can hold, quantities in SI already."""

from __future__ import annotations

from typing import Literal

from pydantic import BaseModel, ConfigDict, Field

from calcpack.job.fields import (
    Area,
    Factor,
    FlangeWidth,
    Force,
    Length,
    LineLoad,
    Mark,
    Plain,
    PointGiven,
    Pressure,
    Share,
    Size,
    Strain,
    Stress,
    UnitWeight,
)
from calcpack.job.model import Case, EquivalentKind


class Raw(BaseModel):
    """A table of the job file as given."""

    model_config = ConfigDict(frozen=True, extra="forbid", strict=True)


class RawValues(Raw):
    """Values of a material or a grade, with the symbols of the standard they belong to."""

    bars: str | None = None  # the grade of a concrete's bars; no grade has any
    modulus: Stress | None = None
    unit_weight: UnitWeight | None = None
    # concrete, EN 1992-1-1
    fck: Stress | None = None
    fcm: Stress | None = None
    fctm: Stress | None = None
    fctk_005: Stress | None = None
    fctk_095: Stress | None = None
    eps_c1: Strain | None = None
    eps_cu1: Strain | None = None
    eps_c2: Strain | None = None
    eps_cu2: Strain | None = None
    n: Plain | None = None
    eps_c3: Strain | None = None
    eps_cu3: Strain | None = None
    # concrete, ACI 318: f'c
    fc: Stress | None = None
    # reinforcement: EN (fyk, k, eps_uk) and ASTM (fy)
    fyk: Stress | None = None
    k: Plain | None = None
    eps_uk: Strain | None = None
    Es: Stress | None = None
    # structural steel; fy for the reinforcement of a concrete, too
    fy: Stress | None = None
    fu: Stress | None = None
    fy_thick: Stress | None = None
    fu_thick: Stress | None = None
    G: Stress | None = None


class RawMaterial(RawValues):
    """A material: a grade, or its values key by key, or some of both."""

    kind: Literal["concrete", "steel"] | None = None
    grade: str | None = None


BAR_VALUES = ("fyk", "fy", "k", "eps_uk", "Es")
STEEL_VALUES = ("fy", "fu", "fy_thick", "fu_thick", "G")
_GENERAL = ("kind", "grade", "bars", "modulus", "unit_weight")
CONCRETE_VALUES = tuple(
    name
    for name in RawMaterial.model_fields
    if name not in _GENERAL and (name not in STEEL_VALUES or name in BAR_VALUES)
)


class RawSection(Raw):
    """A cross-section; which keys it needs depends on its shape."""

    shape: Literal["rectangle", "tee", "rolled"]
    width: Size | None = None
    depth: Size | None = None
    flange_width: FlangeWidth | None = None
    flange_depth: Size | None = None
    designation: str | None = None


class RawRolled(Raw):
    """A rolled section of the job's own table."""

    designation: str
    family: str = ""
    depth: Size
    width: Size
    web: Size
    flange: Size
    root_radius: Length = 0.0
    source: str = ""


class RawGrade(RawValues):
    """A grade of the job's own table; which values it needs depends on its kind."""

    name: str
    kind: Literal["concrete", "reinforcement", "steel"] = "steel"
    source: str = ""


class RawBar(Raw):
    """A bar size of the job's own table."""

    name: str
    diameter: Size
    area: Area | None = None
    source: str = ""


class RawUse(Raw):
    """An occupancy of the job's own table."""

    name: str
    says: str = ""
    uniform: Pressure
    point: Force | None = None
    category: Literal["", "A", "B", "C", "D", "E", "F", "G"] = ""
    psi0: Share | None = None
    psi1: Share | None = None
    psi2: Share | None = None
    reduced: str = ""
    source: str = ""


class RawPanel(Raw):
    """A slab panel."""

    mark: Mark
    corners: list[PointGiven]
    thickness: Size | None = None
    unit_weight: UnitWeight | None = None
    material: str | None = None
    dead: Pressure = 0.0
    live: Pressure | None = None
    use: str | None = None
    roof_live: Pressure = 0.0
    snow: Pressure = 0.0
    transfer: Literal["auto", "two-way", "one-way x", "one-way y"] = "auto"


class RawBeam(Raw):
    """A beam without its loads, which are read one by one."""

    mark: Mark
    line: list[PointGiven]
    fixed: list[Literal["start", "end"]] = []
    free: list[Literal["start", "end"]] = []
    equivalent: EquivalentKind | None = None
    design_loads: Literal["actual", "equivalent"] | None = None
    section: str | None = None
    material: str | None = None
    template: str = "beam_loads"
    design: dict[str, object] = {}


class RawLoad(Raw):
    """A load on a beam."""

    case: Case
    line: LineLoad | None = None
    line_end: LineLoad | None = None
    start: Length | None = Field(None, alias="from")
    end: Length | None = Field(None, alias="to")
    point: Force | None = None
    at: Length | None = None


class RawTableLoad(RawLoad):
    """A load on a beam in a table of its own."""

    beam: str


class RawColumn(Raw):
    """A column."""

    mark: Mark
    at: PointGiven


class RawWall(Raw):
    """A wall."""

    mark: Mark
    line: list[PointGiven]


class RawCombination(Raw):
    """A combination of the job's own."""

    name: str
    limit: Literal["strength", "service"]
    dead: Factor | None = None
    live: Factor | None = None
    roof_live: Factor | None = None
    snow: Factor | None = None


class RawGrid(Raw):
    """The grid lines that cross the x and the y axis."""

    x: dict[str, Length] = {}
    y: dict[str, Length] = {}
