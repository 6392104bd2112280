"""From a beam's input to a steel beam worked out."""

from __future__ import annotations

from typing import Any

from calcpack.clauses.en1993.design import Conditions, SteelBeam, design
from calcpack.clauses.en1993.rules import Factors
from calcpack.clauses.en1993.section import Profile, profile_of
from calcpack.clauses.en1993.segments import segments
from calcpack.notebook.work import Work


def design_of(work: Work) -> SteelBeam:
    """The steel beam of a sheet, worked out.

    Parameters
    ----------
    work : Work
        Its design keys are those of the template ``steel_beam_en1993``.

    Raises
    ------
    CalcpackError
        The section is no rolled one, the material no steel, or points held are given twice.
    """
    given = work.given
    keys: dict[str, Any] = given.design
    parts = segments(
        given.spans,
        [bearing.at for bearing in given.bearings],
        braced=keys["braced"],
        unbraced=keys["unbraced_length"],
        beams=[carried.at for carried in given.carried],
        tip_held=keys["tip_held"],
    )
    held = keys["web_held"]
    conditions = Conditions(
        curves=keys["buckling_curves"],
        load_height=keys["load_height"],
        diagram=keys["C1"],
        bearing_length=keys["bearing_length"],
        bears_at_supports=held not in ("at supports", "everywhere"),
        bears_at_loads=held not in ("at loads", "everywhere"),
    )
    return design(profile_in(work), work.study.analysed, parts, conditions, given.fixed)


def profile_in(work: Work) -> Profile:
    """The beam's section with its steel and the factors of the job.

    Raises
    ------
    CalcpackError
        The section is no rolled one, or the material no steel.
    """
    keys: dict[str, Any] = work.given.design
    factors = Factors(keys["gamma_M0"], keys["gamma_M1"], keys["eta"], keys["plateau"], keys["beta"])
    return profile_of(work.given.section, work.given.material, factors)
