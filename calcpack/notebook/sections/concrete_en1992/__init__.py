"""A concrete beam to EN 1992-1-1: what its template writes, in order."""

from calcpack.notebook.sections.concrete_en1992.stated import (
    begin,
    state_bending,
    state_service,
    state_shear,
    state_shown,
)

__all__ = [
    "begin",
    "state_bending",
    "state_service",
    "state_shear",
    "state_shown",
]
