"""What the design sections of a concrete beam hand on to each other."""

from __future__ import annotations

from dataclasses import dataclass, field

from calcpack.clauses.aci318.flexure import BendingLines
from calcpack.clauses.aci318.materials import Checks, Materials, Size
from calcpack.notebook.sections.concrete_aci318.design import Design
from calcpack.notebook.sections.concrete_aci318.faces import Face
from calcpack.notebook.work import Work
from calcpack.sheet import Line, Sheet

ENVELOPE = "analysis, strength envelope"


@dataclass
class Written:
    """The lines so far.

    Parameters
    ----------
    work : Work
    design : Design
    materials, size : Materials, Size
    clear : Line [m]
        The shortest clear span.
    bent : dict
        The lines of each bent section by the face in tension, "bottom" and "top".
    shear_strengths : dict
        The design strength by the spacing of the stirrups [m].
    """

    work: Work
    design: Design
    materials: Materials
    size: Size
    clear: Line
    bent: dict[str, BendingLines] = field(default_factory=dict)
    shear_strengths: dict[float, Line] = field(default_factory=dict)

    @property
    def sheet(self) -> Sheet:
        """What is written on."""
        return self.work.sheet

    @property
    def faces(self) -> tuple[tuple[str, Face], ...]:
        """Both faces by their name."""
        return ("bottom", self.design.bottom), ("top", self.design.top)

    @property
    def mark(self) -> str:
        """The beam, as an origin names it."""
        return f"beam {self.work.given.mark}"

    @property
    def determinate(self) -> bool:
        """Whether statics alone gives the moments."""
        return len(self.work.given.bearings) + sum(self.work.given.fixed) == 2

    def tag(self, face: str) -> str:
        """The index of a face's symbols: none where only one face is in tension."""
        both = self.design.bottom.task is not None and self.design.top.task is not None
        return {"bottom": "1", "top": "2"}[face] if both else ""

    def note(self, checks: Checks) -> None:
        """Keep checks for the record."""
        self.work.checks.extend(checks)
