"""Concrete beams after EN 1992-1-1, beside printed tables and examples."""

from __future__ import annotations

from dataclasses import replace

from calcpack.clauses.en1992.anchorage import anchorage
from calcpack.clauses.en1992.bending import bending, block_force, depth_limit, least_steel, steel_for
from calcpack.clauses.en1992.cracking import crack_width, elastic
from calcpack.clauses.en1992.deflection import basic_span_depth
from calcpack.clauses.en1992.detailing import nominal_cover
from calcpack.clauses.en1992.flange import effective_side, span_zero_moments
from calcpack.clauses.en1992.model import Outline, Strengths, block_factors
from calcpack.clauses.en1992.national import national
from calcpack.clauses.en1992.samples import C30
from calcpack.clauses.en1992.shear import (
    concrete_shear,
    largest_leg_spacing,
    largest_spacing,
    least_stirrups,
    truss,
)
from calcpack.job.library import grades
from calcpack.job.units import parse_quantity
from calcpack.verification.comparison import Ours
from calcpack.verification.tables import Row

NATIONAL = national()


def concrete(fck: float, alpha_cc: float = 1.0, **own: float) -> Strengths:
    """A concrete with B500 bars; strengths in MPa."""
    lam, eta = block_factors(fck)
    high = fck > 50
    eps = 2.6e-3 + 35e-3 * ((90 - fck) / 100) ** 4 if high else 3.5e-3
    found = replace(
        C30, fck=fck * 1e3, fcd=alpha_cc * fck * 1e3 / 1.5, lam=lam, eta=eta, eps_cu=eps, eps_cu2=eps
    )
    return replace(found, **{key: value * 1e3 for key, value in own.items()})


def lever_arm(k: float, strength: Strengths, limit: float = 0.6) -> float:
    """z/d of a section bent by K = M/(b d² fck)."""
    moment = k * 0.3 * 0.5**2 * strength.fck
    area, area_2 = steel_for(moment, Outline(0.3, 0.6, 0.3, 0.0), strength, 0.5, limit, 0.05)
    assert area_2 == 0.0
    return moment / (area * strength.fyd) / 0.5


def lever_row(row: Row) -> Ours:
    """z/d at a concrete's strength."""
    return {"z/d": lever_arm(row.number("K"), concrete(row.number("fck"), row.number("αcc")))}


def design_row(row: Row) -> Ours:
    """Steel that a moment asks for [mm²]."""
    width, depth = row.number("b") / 1e3, row.number("d") / 1e3
    outline = Outline(width, depth + 0.06, width, 0.0)
    strength = concrete(row.number("fck"), 0.85)
    area, area_2 = steel_for(row.number("M"), outline, strength, depth, 0.45, 0.05)
    return {"As": area * 1e6, "As2": area_2 * 1e6}


def resistance_row(row: Row) -> Ours:
    """Moment [kNm] and lever arm [mm] of a section with its steel."""
    width, depth = row.number("b") / 1e3, row.number("d") / 1e3
    found = bending(
        Outline(width, 0.6, width, 0.0), concrete(row.number("fck"), 0.85), row.number("As") * 1e-6, depth
    )
    return {"M": found.moment, "z": found.z * 1e3}


def balanced_row(row: Row) -> Ours:
    """K of a section whose neutral axis is at a part of its depth."""
    force, about = block_force(
        Outline(0.3, 0.6, 0.3, 0.0), concrete(row.number("fck"), 0.85), row.number("x/d") * 0.5
    )
    return {"K": (force * 0.5 - about) / (0.3 * 0.5**2 * row.number("fck") * 1e3)}


def axis_row(row: Row) -> Ours:
    """Limit of the neutral axis without redistribution."""
    return {"x/d": depth_limit(concrete(row.number("fck")), NATIONAL)}


def block_row(row: Row) -> Ours:
    """λ and η of the stress block."""
    lam, eta = block_factors(row.number("fck"))
    return {"λ": lam, "η": eta}


def least_row(row: Row) -> Ours:
    """Least reinforcement over b d, d = 450 mm."""
    strength = concrete(row.number("fck"), fctm=row.number("fctm"))
    return {"ρ": least_steel(Outline(0.3, 0.5, 0.3, 0.0), strength, 0.45, NATIONAL) / 0.135}


def shear_row(row: Row) -> Ours:
    """Shear stress that the concrete carries [MPa], by ratio of bars."""
    depth = row.number("d") / 1e3
    return {
        quantity.column: concrete_shear(
            0.3, depth, float(quantity.column[:-2]) / 100 * 0.3 * depth, C30, NATIONAL
        )
        / (0.3 * depth)
        / 1e3
        for quantity in row.table.compared
    }


def strut_row(row: Row) -> Ours:
    """Shear stress that the struts carry [MPa]."""
    strength = concrete(row.number("fck"))
    found = {
        cot: truss(0.3, 0.45, 1e-3, cot, strength, NATIONAL)[1] / (0.3 * 0.45) / 1e3 for cot in (2.5, 1.0)
    }
    return {"cot 2.5": found[2.5], "cot 1.0": found[1.0]}


def tie_row(row: Row) -> Ours:
    """Shear that stirrups carry [kN]."""
    per_length = row.number("Asw") * 1e-6 / (row.number("s") / 1e3)
    return {"V": truss(0.3, row.number("z") / 1e3, per_length, row.number("cot"), C30, NATIONAL)[0]}


def stirrup_row(row: Row) -> Ours:
    """Least ratio of stirrups [%]."""
    return {"ρw": least_stirrups(0.3, concrete(row.number("fck")), NATIONAL) / 0.3 * 100}


def spacing_row(row: Row) -> Ours:
    """Largest spacings of stirrups along and across the beam [mm]."""
    depth = row.number("d") / 1e3
    return {
        "along": largest_spacing(depth, NATIONAL) * 1e3,
        "across": largest_leg_spacing(depth, NATIONAL) * 1e3,
    }


def anchorage_row(row: Row) -> Ours:
    """Anchorage lengths of straight bars in C25/30 [mm], good and other bond."""
    tensile = 0.7 * 0.3 * 25 ** (2 / 3)
    strength = concrete(25, fctk=tensile, fctd=tensile / 1.5)
    found = {
        bond: anchorage(row.number("size") / 1e3, strength.fyd, row.number("cover") / 1e3, bond, strength)
        for bond in (True, False)
    }
    return {
        "good": found[True].basic * found[True].alpha * 1e3,
        "other": found[False].basic * found[False].alpha * 1e3,
    }


def crack_row(row: Row) -> Ours:
    """Crack width [mm] of the bars the table allows at a stress, on what the table's footnote assumes."""
    stress, size = row.number("stress"), row.number("size")
    rho = 0.4 * 2.9 * 0.5 / stress / 0.25
    area = rho * 2.5 * 0.04
    outline = Outline(1.0, 0.4, 1.0, 0.0)
    section = replace(elastic(outline, C30, area, 0.36, 0.0), x_2=0.06)
    moment = stress * 1e3 * section.inertia_2 / (section.ratio * (0.36 - 0.06))
    found = crack_width(outline, C30, section, moment, area, 0.36, (size / 1e3, 0.025, 0.1), NATIONAL)
    return {"wk": found.width * 1e3}


def span_depth_row(row: Row) -> Ours:
    """Span over depth of C30/37 at 1.5 % and 0.5 % of steel."""
    factor = NATIONAL[row.text("K")]
    return {
        "1.5 %": basic_span_depth(0.015, 0.0, factor, C30),
        "0.5 %": basic_span_depth(0.005, 0.0, factor, C30),
    }


def cover_row(row: Row) -> Ours:
    """Nominal cover [mm]."""
    return {"c": nominal_cover(row.number("size") / 1e3, row.text("exposure"), NATIONAL) * 1e3}


def flange_row(row: Row) -> Ours:
    """Distance of zero moments and effective width of one side [m], an end span."""
    zero, _ = span_zero_moments(row.number("span"), "simple", "continuous")
    return {"l0": zero, "b_eff,i": effective_side(row.number("bi"), zero).effective}


def grade_row(row: Row) -> Ours:
    """Strengths [MPa], modulus [GPa] and ultimate strain [‰] of a grade of shared/materials."""
    values = grades()[row.text("grade").casefold()].values
    return {
        "fcm": parse_quantity(values["fcm"], "stress") / 1e3,
        "fctm": parse_quantity(values["fctm"], "stress") / 1e3,
        "Ecm": parse_quantity(values["modulus"], "stress") / 1e6,
        "εcu2": values["eps_cu2"] * 1e3,
    }


RECKONERS = {
    "concrete grades": grade_row,
    "lever arms": lever_row,
    "steel for a moment": design_row,
    "moment of a section": resistance_row,
    "balanced moment": balanced_row,
    "limit of the neutral axis": axis_row,
    "stress block": block_row,
    "least reinforcement": least_row,
    "shear of the concrete": shear_row,
    "struts": strut_row,
    "stirrups": tie_row,
    "least stirrups": stirrup_row,
    "spacings": spacing_row,
    "anchorage lengths": anchorage_row,
    "largest bars": crack_row,
    "span over depth": span_depth_row,
    "cover": cover_row,
    "effective flange": flange_row,
}
