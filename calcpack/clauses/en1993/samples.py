"""A profile and a beam that the examples of this package are worked with."""

from __future__ import annotations

from calcpack.actions import Combination, LoadSet, analyse_beam
from calcpack.clauses.en1993.design import Conditions, SteelBeam, design
from calcpack.clauses.en1993.section import Profile
from calcpack.clauses.en1993.segments import segments
from calcpack.clauses.steel import i_section
from calcpack.job.library import rolled_sections
from calcpack.statics import BeamLine, LineLoad

IPE_330 = Profile("IPE 330", i_section(rolled_sections()["ipe330"]), 235e3, 210e6, 80.77e6)
"""IPE 330 in S235."""


def uniform(span: float, load: float, conditions: Conditions, profile: Profile = IPE_330) -> SteelBeam:
    """A beam on two supports under a uniform load, held at its ends; span [m], load [kN/m]."""
    analysed = analyse_beam(
        BeamLine(span, (0.0, span)),
        [LoadSet("dead", (LineLoad(0, span, load, load),))],
        [Combination("G", "strength", {"dead": 1.0})],
    )
    return design(profile, analysed, segments([(0, span)], [0, span]), conditions)
