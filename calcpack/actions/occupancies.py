"""Imposed loads by occupancy, read as data from shared/live_loads."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass
from functools import cache
from typing import Any

from calcpack.job.house import house_folder
from calcpack.job.units import parse_quantity


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


@dataclass(frozen=True)
class OccupancyTable:
    """One standard's occupancies, with the source they come from."""

    name: str
    source: str
    reduction: str
    uses: tuple[Occupancy, ...]


@cache
def occupancy_tables() -> tuple[OccupancyTable, ...]:
    """Every table of shared/live_loads, by name.

    Examples
    --------
    >>> [table.name for table in occupancy_tables()]
    ['ASCE 7-22', 'EN 1991-1-1']
    >>> offices = next(use for use in occupancy_tables()[1].uses if use.key == "B")
    >>> offices.uniform, offices.point, offices.bounds
    (3.0, 4.5, (2.0, 3.0))
    """
    files = sorted(house_folder("shared").joinpath("live_loads").glob("*.toml"))
    return tuple(_table(tomllib.loads(path.read_text(encoding="utf-8"))) for path in files)


def _table(data: dict[str, Any]) -> OccupancyTable:
    uses = tuple(_use(entry) for entry in data["use"])
    return OccupancyTable(data["name"], data["source"], data["reduction"], uses)


def _use(entry: dict[str, str]) -> Occupancy:
    point = entry.get("point", "")
    bounds = None
    if "least" in entry:
        bounds = parse_quantity(entry["least"], "pressure"), parse_quantity(entry["most"], "pressure")
    return Occupancy(
        key=entry["key"],
        says=entry["says"],
        uniform=parse_quantity(entry["uniform"], "pressure"),
        point=parse_quantity(point, "force") if point else None,
        bounds=bounds,
        written=(entry["uniform"], point),
        category=entry.get("category", ""),
        reduced=entry.get("reduced", ""),
        cite=entry["cite"],
    )
