"""The appendix of a pack: the derivations of all equivalents for the shapes that occur, once."""

from __future__ import annotations

import json
from collections.abc import Iterable

from calcpack.equivalent import KINDS, ShapeKind
from calcpack.equivalent.derive import derivation
from calcpack.framing import Frame
from calcpack.notebook.parameters import BeamInput
from calcpack.notebook.study import Study
from calcpack.notebook.work import Work
from calcpack.sheet import Sheet

TITLES: dict[ShapeKind, str] = {
    "triangle": "Triangle: under the short side of a two-way panel",
    "trapezoid": "Trapezoid: under the long side of a two-way panel",
    "general": "Any piecewise linear load, with point loads",
}


def shapes_that_occur(inputs: Iterable[BeamInput]) -> tuple[ShapeKind, ...]:
    """The shapes of load on the spans of some beams, in the order they are derived."""
    found: set[ShapeKind] = set()
    for given in inputs:
        study = Study(given)
        work = Work(study, Sheet(given.mark, given.header.units))
        for span in study.spans:
            for case in study.cases if span is not None else ():
                assert span is not None
                found.update(shape.kind for shape in work.shapes(span, case).values())
    return tuple(kind for kind in TITLES if kind in found)


def appendix_parameters(frame: Frame, inputs: Iterable[BeamInput]) -> str:
    """JSON text of the appendix's parameters."""
    return json.dumps({"units": frame.job.job.units, "shapes": list(shapes_that_occur(inputs))})


def state_derivations(parameters: str) -> None:
    """Write the appendix: for each shape every step once, in the order of the criteria.

    Parameters
    ----------
    parameters : str
        JSON text with ``units`` and ``shapes``.
    """
    given = json.loads(parameters)
    sheet = Sheet("Appendix", given["units"])
    if not given["shapes"]:
        sheet.section("Equivalent uniform loads")
        sheet.text("All loads of this job are uniform over their spans; there is nothing to derive.")
    for kind in given["shapes"]:
        sheet.section(TITLES[kind])
        said: set[str] = set()
        for criterion in KINDS:
            fresh = [step for step in derivation(kind, criterion).steps if step.alt not in said]
            said.update(step.alt for step in fresh)
            sheet.subsection(f"Equal {criterion}")
            sheet.derivation([step.as_data() for step in fresh])
