"""What a steel beam to AISC 360-22 shows first: every check's ratio, and how its section was chosen."""

from __future__ import annotations

from typing import Any

from calcpack.clauses.aisc360 import strength
from calcpack.clauses.aisc360.shape_lines import AISC
from calcpack.notebook.sections.steel_aisc360.beam import (
    SteelBeam,
    bending_name,
    deflection_name,
    force_name,
    steel_design,
)
from calcpack.notebook.study import Study
from calcpack.notebook.work import Work
from calcpack.sheet import Sheet


def state_shown(work: Work, beam: SteelBeam) -> None:
    """The schedule: each check's demand, resistance and ratio, worst first."""
    design, sheet = beam.design, work.sheet
    rows = sorted(_shown(work, beam), key=lambda row: -round(row["ratio"], 12))
    sheet.ratios(rows)
    failed = [row["says"] for row in rows if not row["passes"]]
    if not design.covered:
        failed.insert(0, "web not compact, bending strength not covered")
    if failed:
        sheet.text(f"Not satisfied: {'; '.join(failed)}.", role="unsafe")
    else:
        sheet.text(
            f"All requirements are satisfied by {design.options.method} to {AISC}; {rows[0]['says']} governs."
        )


def _shown(work: Work, beam: SteelBeam) -> list[dict[str, Any]]:
    return [
        {
            "says": says,
            "demand": work.show(demand, unit),
            "resistance": work.show(resistance, unit),
            "ratio": demand / resistance,
            "passes": demand <= resistance * (1 + 1e-9),
        }
        for says, demand, resistance, unit in _rows(work, beam)
    ]


def _rows(work: Work, beam: SteelBeam) -> list[tuple[str, float, float, str]]:
    """Each check's name, demand, resistance and unit."""
    design = beam.design
    found = [(bending_name(work, each), each.demand, each.available, "kN*m") for each in beam.bending]
    found.append(("shear", design.shear_demand.value, design.shear_available, "kN"))
    found += [
        (f"web {each.limit}, {force_name(work, each)}", each.force.force, each.available, "kN")
        for each in beam.web
    ]
    found += [
        (deflection_name(work, each), each.found * 1000, each.allowed * 1000, "mm")
        for each in beam.deflection
    ]
    return found


def worst_of(study: Study) -> tuple[str, float, bool]:
    """The check that is used most, its ratio of demand to resistance, and whether all were looked at.

    A shape whose plastic moment is too small already is not looked at any further.

    Raises
    ------
    CalcpackError
        The section is no rolled I-shape, the material no steel, a key of the design does not fit.
    """
    beam = SteelBeam(steel_design(study))
    design = beam.design
    if not design.covered:
        return "web not compact", design.slenderness.web / design.slenderness.web_compact, False
    moment = abs(study.analysed.band("moment").largest_absolute.value)
    plastic = strength.BENDING.available(
        strength.plastic_moment(design.shape, design.steel), design.options.method
    )
    if moment > plastic:
        return "plastic moment", moment / plastic, False
    rows = _rows(Work(study, Sheet(study.given.mark, study.system)), beam)
    name, demand, resistance, _ = max(rows, key=lambda row: round(row[1] / row[2], 12))
    return name, demand / resistance, True
