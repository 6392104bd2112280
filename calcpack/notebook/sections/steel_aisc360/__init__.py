"""A rolled I-beam to AISC 360-22: what its template writes, in order."""

from calcpack.notebook.sections.steel_aisc360.beam import SteelBeam
from calcpack.notebook.sections.steel_aisc360.shown import state_shown, worst_of
from calcpack.notebook.sections.steel_aisc360.stated import design_beam, state_bending, state_section
from calcpack.notebook.sections.steel_aisc360.web import state_deflection, state_shear

__all__ = [
    "SteelBeam",
    "design_beam",
    "state_bending",
    "state_deflection",
    "state_section",
    "state_shear",
    "state_shown",
    "worst_of",
]
