"""Second road: the job file and its tables, read with no code of the package.

Units: m, kN, kN/m, kPa. Only what is right is read: a faulty job file is not this module's affair.
"""

from __future__ import annotations

import csv
import math
import re
import tomllib
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, NamedTuple

import numpy as np
import openpyxl
from scipy.integrate import quad

CASES = ("dead", "live", "roof_live", "snow")
MOVABLE = ("live", "roof_live")
SAME = 1e-6  # [m]; nearer than this two places of the plan are one

FOOT, POUND = 0.3048, 4.4482216152605e-3  # [m], [kN]
UNITS = {
    "m": 1.0, "cm": 0.01, "mm": 0.001, "ft": FOOT, "in": FOOT / 12,
    "kN": 1.0, "N": 0.001, "kip": 1000 * POUND, "lbf": POUND,
    "kN/m": 1.0, "N/m": 0.001, "plf": POUND / FOOT, "klf": 1000 * POUND / FOOT,
    "kPa": 1.0, "MPa": 1e3, "GPa": 1e6, "psf": POUND / FOOT**2, "ksi": 1000 * POUND / (FOOT / 12) ** 2,
    "kN/m^3": 1.0, "lbf/ft^3": POUND / FOOT**3,
}  # fmt: skip

# modulus [kPa] and unit weight [kN/m3]: EN 1992-1-1 Table 3.1 and EN 1991-1-1 Table A.1; EN 1993-1-1 3.2.6
# and EN 1991-1-1 Table A.4; AISC 360 (29,000 ksi, 490 lb/ft3). From memory.
GRADES = {
    "C30/37": (33e6, 25.0),
    "S235": (210e6, 78.5),
    "S355": (210e6, 78.5),
    "A992": (29000 * UNITS["ksi"], 490 * UNITS["lbf/ft^3"]),
}
# depth, width, web, flange, root radius: EN 10365 [mm]; ASTM A6 [in] with k for design, root radius
# k less the flange. From memory.
ROLLED = {
    "IPE 270": ("mm", 270, 135, 6.6, 10.2, 15),
    "HE 200 B": ("mm", 200, 200, 9, 15, 18),
    "HE 220 A": ("mm", 210, 220, 7, 11, 18),
    "W16X31": ("in", 15.9, 5.53, 0.275, 0.440, 0.842 - 0.440),
    "W24X68": ("in", 23.7, 8.97, 0.415, 0.585, 1.09 - 0.585),
}


class Spread(NamedTuple):
    """A line load from ``first`` at ``start`` to ``last`` at ``end``."""

    start: float
    end: float
    first: float
    last: float
    source: str

    @property
    def total(self) -> float:
        return (self.end - self.start) * (self.first + self.last) / 2

    @property
    def turning(self) -> float:
        """Moment about the beam's start."""
        length = self.end - self.start
        return self.total * self.start + length**2 * (self.first + 2 * self.last) / 6

    def part(self, low: float, high: float) -> Spread | None:
        low, high = max(low, self.start), min(high, self.end)
        if high <= low:
            return None
        a, b = (
            np.interp(place, (self.start, self.end), (self.first, self.last)).item() for place in (low, high)
        )
        return Spread(low, high, a, b, self.source)

    def moved(self, by: float) -> Spread:
        return self._replace(start=self.start + by, end=self.end + by)


class Force(NamedTuple):
    """A point load."""

    at: float
    size: float
    source: str

    @property
    def total(self) -> float:
        return self.size

    @property
    def turning(self) -> float:
        return self.size * self.at

    def moved(self, by: float) -> Force:
        return self._replace(at=self.at + by)


Load = Spread | Force


@dataclass
class Slab:
    """A panel; corners counter-clockwise."""

    mark: str
    corners: np.ndarray
    pressure: dict[str, float]
    transfer: str


@dataclass
class Bar:
    """A beam."""

    mark: str
    points: np.ndarray
    fixed: tuple[bool, bool]
    free: tuple[bool, bool]
    weight: float  # [kN/m]
    stiffness: float | None  # [kNm2]
    equivalent: str
    design_loads: str
    given: list[tuple[str, Load]] = field(default_factory=list)

    @property
    def length(self) -> float:
        return math.dist(self.points[0], self.points[-1])

    @property
    def knots(self) -> list[float]:
        """Where its points are."""
        return [math.dist(self.points[0], point) for point in self.points]

    @property
    def held(self) -> list[int]:
        """Numbers of the points it stands on."""
        last = len(self.points) - 1
        return [
            k for k in range(last + 1) if not (self.free[0] and k == 0) and not (self.free[1] and k == last)
        ]


def number(text: str) -> float:
    """A quantity: ``7.5 kN/m``."""
    value, unit = text.split(maxsplit=1)
    return float(value) * UNITS[unit]


def rows(path: Path) -> list[dict[str, Any]]:
    """A table's rows, quantities as the job file would write them."""
    if path.suffix == ".csv":
        with path.open(encoding="utf-8", newline="") as stream:
            table = list(csv.reader(stream))
    else:
        sheet = openpyxl.load_workbook(path).active
        table = [["" if cell is None else str(cell) for cell in row] for row in sheet.values]
    heads = [re.fullmatch(r"(\S+)(?: \[(.+)\])?", head).groups() for head in table[0]]
    found = []
    for cells in table[1:]:
        row: dict[str, Any] = {}
        for (key, unit), cell in zip(heads, cells, strict=True):
            if cell == "":
                continue
            if key in ("corners", "at", "line") and ("(" in cell or cell[0].isalpha()):
                items = re.findall(r"\(([^)]*)\)|([A-Z]\d)", cell)
                row[key] = [
                    grid or [f"{part.strip()} {unit}" for part in pair.split(",")] for pair, grid in items
                ]
            elif key in ("free", "fixed"):
                row[key] = cell.split(", ")
            else:
                row[key] = f"{cell} {unit}" if unit else cell
        found.append(row)
    return found


def block(width: float, depth: float, flange_width: float, flange_depth: float) -> tuple[float, float]:
    """Area and inertia of a tee, summed up over its depth from the top."""
    widths = [(0.0, flange_depth, flange_width), (flange_depth, depth, width)]
    area, first, second = (
        sum(each * (b**k - a**k) / k for a, b, each in widths) for k in (1, 2, 3)
    )  # fmt: skip
    return area, second - first**2 / area


def rolled(designation: str) -> tuple[float, float]:
    """Area and inertia of a rolled section, its width integrated over the half depth."""
    unit, *sizes = ROLLED[designation]
    depth, width, web, flange, root = (size * UNITS[unit] for size in sizes)
    inner = depth / 2 - flange

    def fillet(y: float) -> float:
        return 2 * (root - math.sqrt(root**2 - (y - (inner - root)) ** 2))

    def half(power: int) -> float:
        straight = web * inner ** (power + 1) + width * ((depth / 2) ** (power + 1) - inner ** (power + 1))
        curved = quad(lambda y: fillet(y) * y**power, inner - root, inner, epsabs=0, epsrel=1e-12)[0]
        return straight / (power + 1) + curved

    return 2 * half(0), 2 * half(2)


def section(data: dict[str, Any]) -> tuple[float, float]:
    if data["shape"] == "rolled":
        return rolled(data["designation"])
    width, depth = number(data["width"]), number(data["depth"])
    return block(width, depth, number(data.get("flange_width", data["width"])),
                 number(data.get("flange_depth", data["depth"])))  # fmt: skip


def shoelace(outline: np.ndarray) -> float:
    x, y = outline.T
    return float(x @ np.roll(y, -1) - y @ np.roll(x, -1)) / 2


class Floor:
    """A job file with its tables."""

    def __init__(self, path: Path) -> None:
        data = tomllib.loads(path.read_text(encoding="utf-8"))

        def members(kind: str) -> list[dict[str, Any]]:
            table = data.get(f"{kind}s")
            return rows(path.parent / table) if table else data.get(kind, [])

        grid = data.get("grid", {"x": {}, "y": {}})
        places = {
            x + y: (number(at_x), number(at_y))
            for x, at_x in grid["x"].items()
            for y, at_y in grid["y"].items()
        }

        def point(given: Any) -> tuple[float, float]:
            return places[given] if isinstance(given, str) else (number(given[0]), number(given[1]))

        self.basis = {"equivalent": "moment", "design_loads": "actual", "dividing_lines": "45"} | data[
            "basis"
        ]
        materials = {
            key: GRADES[each["grade"]] if "grade" in each else tuple(
                number(each[value]) for value in ("modulus", "unit_weight")
            )
            for key, each in data.get("materials", {}).items()
        }  # fmt: skip
        sections = {key: section(each) for key, each in data.get("sections", {}).items()}
        concrete = 150 * UNITS["lbf/ft^3"] if self.basis["actions"].startswith("ASCE") else 25.0
        self.slabs = []
        for each in members("panel"):
            corners = [point(corner) for corner in each["corners"]]
            if len(corners) == 2:
                (a, b), (c, d) = corners
                corners = [(a, b), (c, b), (c, d), (a, d)]
            outline = np.array(corners)
            if shoelace(outline) < 0:
                outline = outline[::-1]
            heavy = materials[each["material"]][1] if "material" in each else concrete
            heavy = number(each["unit_weight"]) if "unit_weight" in each else heavy
            pressure = {case: number(each.get(case, "0 kPa")) for case in CASES}
            pressure["dead"] += heavy * number(each.get("thickness", "0 m"))
            self.slabs.append(Slab(each["mark"], outline, pressure, each.get("transfer", "auto")))
        self.columns = {}
        for each in members("column"):
            at = each["at"][0] if "columns" in data else each["at"]
            self.columns[each["mark"]] = np.array(point(at))
        self.walls = {
            each["mark"]: np.array([point(end) for end in each["line"]]) for each in members("wall")
        }
        self.bars: dict[str, Bar] = {}
        for each in members("beam"):
            area, inertia = sections[each["section"]] if "section" in each else (0.0, 0.0)
            modulus, heavy = materials[each["material"]] if "material" in each else (0.0, 0.0)
            bar = Bar(
                each["mark"],
                np.array([point(place) for place in each["line"]]),
                ("start" in each.get("fixed", []), "end" in each.get("fixed", [])),
                ("start" in each.get("free", []), "end" in each.get("free", [])),
                area * heavy,
                inertia * modulus or None,
                each.get("equivalent", self.basis["equivalent"]),
                each.get("design_loads", self.basis["design_loads"]),
            )
            self.bars[bar.mark] = bar
            for load in each.get("load", []):
                self._give(bar, load)
        for load in rows(path.parent / data["beam_loads"]) if "beam_loads" in data else []:
            self._give(self.bars[load["beam"]], load)
        self.own_combinations = data.get("combination", [])

    def _give(self, bar: Bar, load: dict[str, Any]) -> None:
        name = f"load {len(bar.given) + 1}"
        if "point" in load:
            at = load["at"][0] if isinstance(load["at"], list) else load["at"]
            bar.given.append((load["case"], Force(number(at), number(load["point"]), name)))
            return
        start = number(load["from"]) if "from" in load else 0.0
        end = number(load["to"]) if "to" in load else bar.length
        last = load.get("line_end", load["line"])
        bar.given.append((load["case"], Spread(start, end, number(load["line"]), number(last), name)))
