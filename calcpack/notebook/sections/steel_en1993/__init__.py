"""A rolled I-beam to EN 1993-1-1: what its template writes, in order."""

from calcpack.notebook.sections.steel_en1993.given import design_of
from calcpack.notebook.sections.steel_en1993.results import state_steel_results, worst_of
from calcpack.notebook.sections.steel_en1993.stated import (
    state_steel_bearing,
    state_steel_buckling,
    state_steel_resistance,
    state_steel_section,
)

__all__ = [
    "design_of",
    "state_steel_bearing",
    "state_steel_buckling",
    "state_steel_resistance",
    "state_steel_results",
    "state_steel_section",
    "worst_of",
]
