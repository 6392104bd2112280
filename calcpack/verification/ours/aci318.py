"""Concrete beams after ACI 318-19, beside printed examples and tables."""

from __future__ import annotations

from calcpack.clauses.aci318.deflection import cracked_depth, least_depth
from calcpack.clauses.aci318.strength import (
    INCH,
    PSI,
    Bending,
    Block,
    Steel,
    bending,
    beta_1,
    development_length,
    effective_inertia,
    least_steel,
    phi_bending,
    shear_of_concrete,
    size_effect,
)
from calcpack.verification.comparison import Ours
from calcpack.verification.tables import Row

KSI = 1000 * PSI
KIP = 1000 * PSI * INCH**2
ES = 29000 * KSI


def section(fc: float, fy: float, block: tuple[float, ...], steel: tuple[float, ...]) -> Bending:
    """Bending of a section in psi, ksi and inches: width, web and flange; area, depth, outermost depth."""
    width, web, flange = (value * INCH for value in block)
    area, depth, outermost = steel
    return bending(
        Block(width, web, flange),
        Steel(area * INCH**2, depth * INCH, outermost * INCH),
        fc * PSI,
        fy * KSI,
        ES,
    )


def example_row(row: Row) -> Ours:
    """Depth of the stress block [in], nominal moment [kip in] and φ."""
    found = section(
        row.number("fc"),
        row.number("fy"),
        (row.number("b"), row.number("bw"), row.number("hf")),
        (row.number("As"), row.number("d"), row.number("dt")),
    )
    return {"a": found.a / INCH, "Mn": found.nominal / (KIP * INCH), "φ": found.phi}


def strain_row(row: Row) -> Ours:
    """Net tensile strain, and the ratio of steel that belongs to a strain."""
    fc, strain = row.number("fc"), row.number("strain")
    # Tension of the steel and compression of the block at that strain.
    low, high = 0.0, 0.1
    for _ in range(60):
        ratio = (low + high) / 2
        found = section(fc, row.number("fy"), (12, 12, 0), (ratio * 12 * 20, 20.0, 20.0))
        low, high = (ratio, high) if found.strain > strain else (low, ratio)
    return {"ρ": ratio}


def resistance_row(row: Row) -> Ours:
    """Flexural resistance factor Mn/(b d²) [psi]."""
    found = section(row.number("fc"), row.number("fy"), (10, 10, 0), (row.number("ρ") * 200, 20.0, 20.0))
    return {"R": found.nominal / (10 * 400 * INCH**3) / PSI}


def block_row(row: Row) -> Ours:
    """Factor β1 of the stress block."""
    return {"β1": beta_1(row.number("fc") * PSI)}


def reduction_row(row: Row) -> Ours:
    """φ at a strain beyond that of yielding."""
    yielding = row.number("yield strain")
    return {"φ": phi_bending(yielding + row.number("beyond"), yielding)}


def least_row(row: Row) -> Ours:
    """Least ratio of steel."""
    return {"ρ": least_steel(row.number("fc") * PSI, row.number("fy") * KSI, 1.0, 1.0)}


def size_row(row: Row) -> Ours:
    """Size effect λs of a depth [in]."""
    return {"λs": size_effect(row.number("d") * INCH)}


def shear_row(row: Row) -> Ours:
    """Shear of a web with least stirrups [kip]."""
    width, depth = row.number("bw") * INCH, row.number("d") * INCH
    return {"Vc": shear_of_concrete(row.number("fc") * PSI, width, depth, 0.01, with_least=True) / KIP}


def _length(row: Row, confinement: float, *, top: bool, small: bool) -> float:
    diameter, fc = row.number("db"), row.number("fc")
    found = development_length(diameter * INCH, fc * PSI, 60 * KSI, confinement, top=top, small=small)
    return found / INCH


def simplified_row(row: Row) -> Ours:
    """Development length by the equation [in]."""
    return {"ld": _length(row, row.number("confinement"), top=False, small=row.number("db") <= 0.75)}


def practice_row(row: Row) -> Ours:
    """Development lengths of bottom and top bars [in]."""
    small = row.number("db") <= 0.75
    return {name: _length(row, 1.5, top=name == "top", small=small) for name in ("bottom", "top")}


def cracked_row(row: Row) -> Ours:
    """Neutral axis [in] and second moment [in⁴] of the cracked section."""
    width, depth, steel = row.number("b"), row.number("d"), row.number("n") * row.number("As")
    axis = cracked_depth(width, width, 0, steel, depth)
    return {"kd": axis, "k": axis / depth, "Icr": width * axis**3 / 3 + steel * (depth - axis) ** 2}


def inertia_row(row: Row) -> Ours:
    """Effective second moment of area."""
    return {"Ie": effective_inertia(*(row.number(name) for name in ("Ma", "Mcr", "Ig", "Icr")))}


def depth_row(row: Row) -> Ours:
    """Least depth of a span of 336 in, as span over it."""
    return {"ℓ/h": 336.0 / least_depth(336.0, row.text("held"), row.number("fy") * 1000)}


RECKONERS = {
    "bending examples": example_row,
    "ratios at a strain": strain_row,
    "resistance factors": resistance_row,
    "stress block": block_row,
    "strength reduction": reduction_row,
    "least steel": least_row,
    "size effect": size_row,
    "shear of a web": shear_row,
    "simplified development lengths": simplified_row,
    "development lengths of practice": practice_row,
    "cracked section": cracked_row,
    "effective inertia": inertia_row,
    "least depths": depth_row,
}
