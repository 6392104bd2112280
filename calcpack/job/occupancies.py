"""Imposed loads by occupancy: data of shared/live_loads, a job's own before them."""

from __future__ import annotations

import tomllib
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import cache
from typing import Any

from calcpack.job.house import house_folder
from calcpack.job.model import Occupancy
from calcpack.job.names import alike
from calcpack.job.units import parse_quantity


@dataclass(frozen=True)
class OccupancyTable:
    """One standard's occupancies, with the source they come from."""

    name: str
    source: str
    reduction: str
    uses: tuple[Occupancy, ...]

    def beside(self, own: Sequence[Occupancy]) -> list[Occupancy]:
        """The uses that a job's own do not stand in for."""
        replaced = {alike(use.key) for use in own}
        return [use for use in self.uses if alike(use.key) not in replaced]


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


def applying(actions: str, own: Sequence[Occupancy] = ()) -> Iterator[tuple[Occupancy, str]]:
    """The uses a job may name, each with its source: its own, then those of its actions' standard.

    Parameters
    ----------
    actions : str
        ``basis.actions``; for "job" the tables of every standard apply.
    own : sequence of Occupancy
        The job's own; they stand in for ours of the same name.

    Examples
    --------
    >>> found = dict((use.key, source) for use, source in applying("EN 1990"))
    >>> found["C1"]
    'EN 1991-1-1 Table 6.2'
    >>> "dining" in found
    False
    """
    for use in own:
        yield use, use.cite
    for table in occupancy_tables():
        if actions == "job" or actions.split(" ")[0] == table.name.split(" ")[0]:
            for use in table.beside(own):
                yield use, f"{table.name} {use.cite}"


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
