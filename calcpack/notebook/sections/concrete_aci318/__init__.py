"""A concrete beam to ACI 318-19: what its template writes, in order."""

from calcpack.notebook.sections.concrete_aci318.bars import state_bars
from calcpack.notebook.sections.concrete_aci318.deflection import state_deflections
from calcpack.notebook.sections.concrete_aci318.design import settle
from calcpack.notebook.sections.concrete_aci318.shear import state_shear
from calcpack.notebook.sections.concrete_aci318.stated import (
    begin,
    state_bending_strength,
    state_design,
    state_load_checks,
    state_shown,
)

__all__ = [
    "begin",
    "settle",
    "state_bars",
    "state_bending_strength",
    "state_deflections",
    "state_design",
    "state_load_checks",
    "state_shear",
    "state_shown",
]
