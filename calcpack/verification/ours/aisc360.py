"""Steel beams after AISC 360-22, beside the Manual's tables and examples."""

from __future__ import annotations

import math
from collections.abc import Callable

from calcpack.actions import LoadSet, analyse_beam
from calcpack.actions.combinations import Combination
from calcpack.clauses.aisc360 import strength
from calcpack.clauses.aisc360.design import Demands, Options, SpanOf, SteelDesign
from calcpack.clauses.aisc360.strength import Steel
from calcpack.clauses.steel import ISection, SegmentMoments, i_section
from calcpack.job.library import rolled_sections
from calcpack.job.units import factor
from calcpack.statics import BeamLine, Extreme, Load
from calcpack.verification.comparison import Ours
from calcpack.verification.eigenvalues import critical_factor
from calcpack.verification.ours.beams import loads_of
from calcpack.verification.tables import Row

KSI, KIP, FOOT, KIP_FT, INCH = factor("ksi"), factor("kip"), factor("ft"), factor("kip*ft"), 0.0254
GRADE_50 = Steel(50 * KSI, 29000 * KSI)
PHI, OMEGA = 0.90, 1.67


def shape(name: str) -> ISection:
    """A W shape."""
    return i_section(rolled_sections()[name.casefold()])


def plateau_end(section: ISection, steel: Steel = GRADE_50) -> float:
    """Where (F2-2) comes down to local buckling of the flange: L'p of Table 3-2 [m]."""
    lengths = strength.limiting_lengths(section, steel)
    plain = strength.bending_strength(section, steel, 0.0)
    if plain.flange is None:
        return lengths.plastic
    first = 0.7 * steel.yield_strength * section.elastic_modulus
    part = (plain.plastic - plain.flange) / (plain.plastic - first)
    return lengths.plastic + part * (lengths.elastic - lengths.plastic)


def table_3_2(row: Row) -> Ours:
    """Strengths [kip ft, kip], lengths [ft] and footnotes of a shape, F_y = 50 ksi."""
    section = shape(row.text("shape"))
    nominal = strength.bending_strength(section, GRADE_50, 0.0).nominal / KIP_FT
    shear = strength.shear_strength(section, GRADE_50)
    ratios = strength.slenderness(section, GRADE_50)
    flange = "slender" if ratios.slender_flange else "compact" if ratios.compact_flange else "noncompact"
    return {
        "φMp": PHI * nominal,
        "Mp/Ω": nominal / OMEGA,
        "Lp": plateau_end(section) / FOOT,
        "Lr": strength.limiting_lengths(section, GRADE_50).elastic / FOOT,
        "φVn": shear.factor.available(shear.nominal, "LRFD") / KIP,
        "Vn/Ω": shear.factor.available(shear.nominal, "ASD") / KIP,
        "flange": flange,
        "φv": "1.00" if shear.stocky else "0.90",
    }


def bending_row(row: Row) -> Ours:
    """Strength of an unbraced length [ft], with the critical stress [ksi] and what limits it."""
    section, length, cb = shape(row.text("shape")), row.number("Lb") * FOOT, row.number("Cb")
    found = strength.bending_strength(section, GRADE_50, length, cb)
    return {
        "φMn": PHI * found.nominal / KIP_FT,
        "Mn/Ω": found.nominal / OMEGA / KIP_FT,
        "Fcr": strength.critical_stress(section, GRADE_50, length, cb) / KSI,
        "zone": found.zone,
    }


def shear_row(row: Row) -> Ours:
    """Shear of a web [kip]."""
    found = strength.shear_strength(shape(row.text("shape")), GRADE_50)
    return {
        "Vn": found.nominal / KIP,
        "φVn": found.factor.available(found.nominal, "LRFD") / KIP,
        "Vn/Ω": found.factor.available(found.nominal, "ASD") / KIP,
    }


def simple_beam(loads: tuple[Load, ...], segments: int) -> list[float]:
    """C_b of each segment of a simple beam of 24 ft, W18X50, braced at equal distances."""
    span = 24 * FOOT
    line = BeamLine(span, (0.0, span))
    analysed = analyse_beam(line, [LoadSet("dead", loads)], [Combination("D", "strength", {"dead": 1.0})])
    options = Options("LRFD", unbraced_length=span / segments if segments > 1 else None)
    demands = Demands(analysed, (SpanOf(0, 0.0, span, True),), ())
    return [
        check.diagram_factor for check in SteelDesign(shape("W18X50"), GRADE_50, options, demands).bending
    ]


def diagram_row(row: Row) -> Ours:
    """C_b of one segment of a braced simple beam."""
    found = simple_beam(loads_of(row.topic, row.text("loads")), int(row.number("segments")))
    return {"Cb": found[int(row.number("segment")) - 1]}


def constants_row(row: Row) -> Ours:
    """Section constants in inches."""
    s = shape(row.text("shape"))
    return {
        "Iy": s.weak_inertia / INCH**4,
        "Sx": s.elastic_modulus / INCH**3,
        "Zx": s.plastic_modulus / INCH**3,
        "ry": s.weak_radius / INCH,
        "rts": s.shear_radius / INCH,
        "J": s.torsion / INCH**4,
        "Cw": s.warping / INCH**6,
    }


LENGTH = 9.0  # [m], elastic
SHEAR_MODULUS = 11200 * KSI  # AISC 360-22, symbols
DIAGRAMS: dict[str, Callable[[float], float]] = {  # moment at a part of the length
    "uniform": lambda x: 1.0,
    "one end moment": lambda x: 1 - x,
    "end moments, one half of the other": lambda x: 1 - x / 2,
    "end moments that bend it to and fro": lambda x: 1 - 2 * x,
    "uniform load": lambda x: 4 * x * (1 - x),
    "point load at midspan": lambda x: 1 - abs(2 * x - 1),
    "point load at the quarter": lambda x: min(4 * x, (1 - x) * 4 / 3),
    "uniform load, both ends fixed": lambda x: 6 * x - 1 - 6 * x**2,
    "uniform load, one end fixed": lambda x: 8 * (3 / 8 * x - x**2 / 2),
}


def segment_of(moment: Callable[[float], float]) -> SegmentMoments:
    """A whole length's moments as the clause takes them."""
    start, quarter, middle, three_quarters, end = (moment(part / 4) for part in range(5))
    fine = [moment(part / 2000) for part in range(2001)]
    most, least = max(fine), min(fine)
    return SegmentMoments(
        0.0,
        LENGTH,
        start,
        quarter,
        middle,
        three_quarters,
        end,
        Extreme(most if most >= -least else least, 0.0),
        Extreme(max(most, 0.0), 0.0),
        Extreme(min(least, 0.0), 0.0),
    )


def eigenvalue_row(row: Row) -> Ours:
    """C_b of (F1-1) over the eigenvalue's, in per cent more."""
    section, moment = shape("W18X50"), DIAGRAMS[row.text("diagram")]
    weak, warping = (GRADE_50.modulus * value for value in (section.weak_inertia, section.warping))
    torsion, k = SHEAR_MODULUS * section.torsion, math.pi / LENGTH
    even = k * math.sqrt(weak * (torsion + k**2 * warping))
    segment = segment_of(moment)
    factor = critical_factor(LENGTH, weak, warping, torsion, lambda x: moment(x / LENGTH))
    exact = factor * abs(segment.largest.value) / even
    return {"Cb": 100 * (strength.diagram_factor(segment) / exact - 1)}


RECKONERS = {
    "table 3-2": table_3_2,
    "table 3-10": bending_row,
    "table 3-1": diagram_row,
    "examples of bending": bending_row,
    "example of shear": shear_row,
    "table 1-1": constants_row,
    "eigenvalues": eigenvalue_row,
}
