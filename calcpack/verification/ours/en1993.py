"""Steel beams after EN 1993-1-1, beside worked examples, tables of resistances and of factors."""

from __future__ import annotations

import math
from functools import cache

import numpy as np

from calcpack.actions import AnalysedBeam, Combination, LoadSet, analyse_beam
from calcpack.clauses.en1993.buckling import (
    critical_moment,
    load_factor,
    quarter_points,
    reduction,
    wave_share,
)
from calcpack.clauses.en1993.design import Conditions, SteelBeam, design
from calcpack.clauses.en1993.rules import RECOMMENDED
from calcpack.clauses.en1993.section import Profile, profile_of
from calcpack.clauses.en1993.segments import segments
from calcpack.clauses.steel import segment_moments
from calcpack.job.library import rolled_sections
from calcpack.job.model import Material
from calcpack.statics import BeamLine, Curve, LineLoad
from calcpack.verification.comparison import Ours
from calcpack.verification.tables import Row

IMPERFECTIONS = {"a": 0.21, "b": 0.34, "c": 0.49, "d": 0.76}
DIAGRAMS = {  # moment over 6 m, the largest of the simple span, work of the load on half a sine wave
    "uniform load": (Curve(np.array([0.0, 6.0]), np.array([[0.0, 3.0, -0.5]])), 4.5, 3.0),
    "load at midspan": (Curve(np.array([0.0, 3.0, 6.0]), np.array([[0.0, 0.5], [1.5, -0.5]])), 1.5, 1.0),
    "uniform load, ends held": (Curve(np.array([0.0, 6.0]), np.array([[-3.0, 3.0, -0.5]])), 4.5, 3.0),
}


def profile(name: str, strength: float, shear_modulus: float = 80.77e6) -> Profile:
    """A rolled section in a steel of that yield strength [kPa]."""
    steel = Material(
        key="s", kind="steel", modulus=210e6, unit_weight=78.5, values={"fy": strength, "G": shear_modulus}
    )
    return profile_of(rolled_sections()[name.lower().replace(" ", "")], steel)


def unrestrained_beam(load: float) -> AnalysedBeam:
    """A simple beam of 5.70 m under a uniform load [kN/m]."""
    return analyse_beam(
        BeamLine(5.7, (0.0, 5.7)),
        [LoadSet("dead", (LineLoad(0, 5.7, load, load),))],
        [Combination("ULS", "strength", {"dead": 1.0})],
    )


PRINTED = Conditions("rolled", "top", 1.127)


@cache
def unrestrained(load: float, conditions: Conditions = PRINTED) -> SteelBeam:
    """The worked example: IPE 330, S235, 5.70 m, load on the top flange."""
    beam = unrestrained_beam(load)
    return design(profile("IPE 330", 235e3), beam, segments([(0, 5.7)], [0, 5.7]), conditions)


def _example(what: str, load: float) -> float:
    beam = unrestrained(load)
    found, section = beam.segments[0], beam.profile
    values = {
        "M_Ed": beam.bending.value,
        "V_Ed": beam.shear.value,
        "c/tf": section.shape.flange_outstand / section.shape.flange,
        "c/tw": section.shape.flat_web / section.shape.web,
        "M_c,Rd": section.bending,
        "M_cr": found.critical,
        "lambda_LT": found.slenderness,
        "phi_LT": found.reduction.phi,
        "chi_LT": found.reduction.chi,
        "f": found.reduction.correction,
        "chi_LT,mod": found.reduction.reduced,
        "M_b,Rd": found.resistance,
        "A_v": section.shear_area * 1e6,
        "V_pl,Rd": section.shear,
    }
    return float(values[what])


def example_row(row: Row) -> Ours:
    """A figure of the worked example, in kN, m, mm²."""
    return {"printed": _example(row.text("symbol"), row.number("load"))}


def own_factors_row(row: Row) -> Ours:
    """The same with C1 from the diagram [kNm]."""
    found = unrestrained(row.number("load"), Conditions("rolled"))
    return {"M_b,Rd": found.segments[0].resistance}


def resistance_row(row: Row) -> Ours:
    """Constants [cm] and resistances [kNm, kN] of a section in S235."""
    found = profile(row.text("section"), 235e3)
    return {
        "Wpl": found.shape.plastic_modulus * 1e6,
        "Avz": found.shear_area * 1e4,
        "Iz": found.shape.weak_inertia * 1e8,
        "Iw": found.shape.warping * 1e9,
        "Mpl": found.bending,
        "Vpl": found.shear,
    }


def curve_row(row: Row) -> Ours:
    """Reduction factors of a slenderness by buckling curve."""
    slenderness = row.number("slenderness")
    return {
        curve: reduction(slenderness, alpha, "general", RECOMMENDED, 1.0).reduced
        for curve, alpha in IMPERFECTIONS.items()
    }


def end_moments_row(row: Row) -> Ours:
    """C1 of a moment that changes linearly from 1 to ψ."""
    line = Curve(np.array([0.0, 6.0]), np.array([[1.0, (row.number("ψ") - 1) / 6]]))
    share = wave_share(line, 0.0, 6.0, 1.0)
    return {"C1": min(quarter_points(segment_moments(line, 0.0, 6.0)), 1 / math.sqrt(share))}


def loads_row(row: Row) -> Ours:
    """C1 by quarter points and by energy, and C2 with the printed C1."""
    curve, largest, work = DIAGRAMS[row.text("diagram")]
    found: dict[str, float | str] = {
        "C1 by quarter points": quarter_points(segment_moments(curve, 0, 6)),
        "C1 by energy": 1 / math.sqrt(wave_share(curve, 0, 6, largest)),
    }
    if row.text("C2"):
        found["C2"] = load_factor(float(row.text("C1 by energy")), 6.0, work, largest)
    return found


def printed_constants_row(row: Row) -> Ours:
    """Critical moment and the Euler load [kNm, kN] from the example's printed constants."""
    ipe = profile("IPE 330", 235e3)
    weak = row.number("Iz") * 1e-8
    constants = ipe.shape._replace(
        weak_inertia=weak, torsion=row.number("It") * 1e-8, warping=row.number("Iw") * 1e-12
    )
    exact = Profile("IPE 330", constants, 235e3, 210e6, 80.77e6)
    return {
        "Ncr": math.pi**2 * 210e6 * weak / 5.7**2,
        "Mcr": critical_moment(exact, 5.7, row.number("C1"), row.number("C2 zg") * 1e-3),
    }


GRADES = {"S235": 235e3, "S355": 355e3, "S460": 460e3}  # [kPa]


def class_row(row: Row) -> Ours:
    """Class of a section in bending."""
    return {"class": str(profile(row.text("section"), GRADES[row.text("grade")]).section_class)}


def constants_row(row: Row) -> Ours:
    """Torsion constant and the other constants of a section [cm]."""
    s = profile(row.text("section"), 235e3).shape
    return {
        "Iz": s.weak_inertia * 1e8,
        "Wpl": s.plastic_modulus * 1e6,
        "It": s.torsion * 1e8,
        "Iw": s.warping * 1e9,
    }


RECKONERS = {
    "unrestrained beam": example_row,
    "unrestrained beam, own factors": own_factors_row,
    "resistances": resistance_row,
    "buckling curves": curve_row,
    "end moments": end_moments_row,
    "loads": loads_row,
    "printed constants": printed_constants_row,
    "section classes": class_row,
    "constants": constants_row,
}
