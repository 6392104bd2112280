"""Rolled sections of shared/sections: area and strong-axis inertia from their nominal dimensions."""

from __future__ import annotations

from calcpack.job.library import rolled_sections
from calcpack.job.model import Section
from calcpack.verification.comparison import Ours
from calcpack.verification.tables import Row

INCH = 0.0254
STEEL = 490.0  # [lb/ft³]


def section_named(designation: str) -> Section:
    """A rolled section by the designation exactly as it is shown."""
    found = rolled_sections()["".join(designation.split()).casefold()]
    assert found.designation == designation
    return found


def european_row(row: Row) -> Ours:
    """In cm² and cm⁴."""
    section = section_named(row.text("designation"))
    return {"A": section.area * 1e4, "Iy": section.inertia * 1e8}


def american_row(row: Row) -> Ours:
    """In in², in⁴ and lb/ft."""
    section = section_named(row.text("designation"))
    area = section.area / INCH**2
    return {"A": area, "Ix": section.inertia / INCH**4, "weight": area / 144 * STEEL}


RECKONERS = {"IPE": european_row, "HE A": european_row, "HE B": european_row, "W": american_row}
