"""Beams to design, made by hand: no job file."""

from itertools import pairwise

from calcpack.actions import AnalysedBeam, Combination, LoadSet, analyse_beam
from calcpack.clauses.en1993.rules import RECOMMENDED, Factors
from calcpack.clauses.en1993.section import Profile, profile_of
from calcpack.job.library import rolled_sections
from calcpack.job.model import Material
from calcpack.statics import BeamLine, LineLoad, PointLoad

GRADES = {"S235": 235e3, "S275": 275e3, "S355": 355e3, "S460": 460e3}


def profile(name: str, grade: str = "S235", factors: Factors = RECOMMENDED) -> Profile:
    strength = GRADES[grade]
    values = {"fy": strength, "fy_thick": strength - 20e3, "G": 80.77e6}
    steel = Material(key="s", kind="steel", modulus=210e6, unit_weight=78.5, values=values)
    return profile_of(rolled_sections()[name.lower().replace(" ", "")], steel, factors)


def analysed(
    spans: list[float],
    dead: float = 0.0,
    live: float = 0.0,
    points: list[tuple[float, float]] = (),
    overhang: float = 0.0,
) -> AnalysedBeam:
    """A continuous beam with uniform dead load, live load span by span, and dead point loads."""
    places = [0.0]
    for span in spans:
        places.append(places[-1] + span)
    length = places[-1] + overhang
    ends = [*places, length] if overhang else places
    own = [LineLoad(0, length, dead, dead)] if dead else []
    sets = [LoadSet("dead", (*own, *(PointLoad(at, force) for at, force in points)))]
    if live:
        sets += [
            LoadSet("live", (LineLoad(a, b, live, live),), f"span {n}")
            for n, (a, b) in enumerate(pairwise(ends))
        ]
    combinations = [
        Combination("1.35 G + 1.5 Q", "strength", {"dead": 1.35, "live": 1.5}),
        Combination("G + 1.5 Q", "strength", {"dead": 1.0, "live": 1.5}),
        Combination("G + Q", "service", {"dead": 1.0, "live": 1.0}),
    ]
    return analyse_beam(BeamLine(length, tuple(places)), sets, combinations, stiffness=2e4)
