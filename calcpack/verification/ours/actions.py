"""Live loads of occupancies and their reduction by area."""

from __future__ import annotations

from functools import cache

from calcpack.actions import Occupancy, occupancy_tables
from calcpack.actions.reduction import FOOT, asce_factor, en_factor
from calcpack.verification.comparison import Ours
from calcpack.verification.tables import Row

PSF = 0.04788025898  # [kPa]
POUND = 0.0044482216  # [kN]


@cache
def uses() -> dict[tuple[str, str], Occupancy]:
    """Every occupancy by its standard and key."""
    return {(table.name, use.key): use for table in occupancy_tables() for use in table.uses}


def en_row(row: Row) -> Ours:
    """Uniform [kPa] and concentrated load [kN] of a category."""
    use = uses()["EN 1991-1-1", row.text("category")]
    return {"qk": use.uniform, "Qk": _point(use)}


def _point(use: Occupancy, size: float = 1.0) -> float | str:
    return "none" if use.point is None else use.point / size


def asce_row(row: Row) -> Ours:
    """Uniform [psf, kPa] and concentrated load [lb] of an occupancy."""
    use = uses()["ASCE 7-22", row.text("occupancy")]
    return {"L0": use.uniform / PSF, "point": _point(use, POUND), "metric": use.uniform}


def column_row(row: Row) -> Ours:
    """A reduced live load of an interior column, in the unit of the load that is given."""
    spacing = row.number("spacing") * (FOOT if row.text("in") == "ft" else 1.0)
    return {"L": row.number("L0") * asce_factor(spacing**2, 4.0, floors=2)}


def influence_row(row: Row) -> Ours:
    """L/L0 at an influence area [ft²]."""
    return {"L/L0": asce_factor(row.number("area") * FOOT**2, 1.0)}


def area_row(row: Row) -> Ours:
    """α_A at an area [m²]."""
    return {"αA": en_factor(row.number("area"), row.number("ψ0"), row.text("category"))}


RECKONERS = {
    "columns": column_row,
    "influence areas": influence_row,
    "areas": area_row,
    "EN 1991-1-1": en_row,
    "ASCE 7-22": asce_row,
    "ASCE 7-22 metric": asce_row,
}
