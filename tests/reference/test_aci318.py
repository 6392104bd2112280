"""ACI 318-19 against printed examples and tables; all recalled from memory.

Each row names its source and how it is rounded there; the tolerance is half a unit of the last printed digit
where the source carries full figures, else said beside it. Strength reduction is applied apart from what the
source does, as limits of φ changed between editions.
"""

from __future__ import annotations

import math

import pytest

from calcpack.clauses.aci318.deflection import cracked_depth, least_depth
from calcpack.clauses.aci318.strength import (
    INCH,
    PSI,
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

KSI = 1000 * PSI
KIP = 1000 * PSI * INCH**2
ES = 29000 * KSI


def inches(*values):
    return [value * INCH for value in values]


def section(fc, fy, block, steel):
    width, web, flange = inches(*block)
    area, depth, outermost = steel
    return bending(
        Block(width, web, flange),
        Steel(area * INCH**2, depth * INCH, outermost * INCH),
        fc * PSI,
        fy * KSI,
        ES,
    )


# name, f'c, fy, (width, web, flange), (As, d, dt), printed a [in], printed Mn [kip in], half a printed unit
EXAMPLES = [
    # Wight & MacGregor, Reinforced Concrete: Mechanics and Design, 6th ed., Example 4-1: a = 4.65 in,
    # Mn = 240 kip ft
    ("four No. 8 in 12 by 20", 4000, 60, (12, 12, 0), (3.16, 17.5, 17.5), 4.65, 2880, 6),
    # Nilson, Darwin & Dolan, Design of Concrete Structures, 13th ed., Example 3.4: a = 4.18 in,
    # Mn = 2,970,000 lb in = 248 kip ft
    ("three No. 8 in 10 by 25", 4000, 60, (10, 10, 0), (2.37, 23.0, 23.0), 4.18, 2970, 6),
    # the same, chapter 3, isolated T beam with six No. 10: a = 7.13 in of the web,
    # Mn = 6,330,000 + 4,080,000 lb in
    ("tee with six No. 10", 3000, 60, (28, 10, 6), (7.62, 26.0, 27.5), 7.13, 10410, 12),
]


@pytest.mark.parametrize("row", EXAMPLES, ids=lambda row: row[0])
def test_bending_examples(row):
    _, fc, fy, block, steel, a, moment, half = row
    found = section(fc, fy, block, steel)
    assert found.a / INCH == pytest.approx(a, abs=0.006)
    assert found.nominal / (KIP * INCH) == pytest.approx(moment, abs=half)
    assert found.phi == 0.9  # each of them is tension-controlled


def test_half_a_printed_unit_would_see_one_percent():
    _, fc, fy, block, steel, a, moment, half = EXAMPLES[0]
    found = section(fc, fy * 1.01, block, steel)
    assert found.nominal / (KIP * INCH) != pytest.approx(moment, abs=half)
    assert found.a / INCH != pytest.approx(a, abs=0.006)


# Nilson, Darwin & Dolan, 13th ed., Table A.4, f_y = 60 ksi: ρ at a net tensile strain of 0.005 and of 0.004
STEEL_RATIOS = [(3000, 0.0135, 0.0155), (4000, 0.0181, 0.0206), (5000, 0.0213, 0.0243)]


@pytest.mark.parametrize(("fc", "at_005", "at_004"), STEEL_RATIOS)
def test_steel_ratio_of_a_strain(fc, at_005, at_004):
    for ratio, strain in ((at_005, 0.005), (at_004, 0.004)):
        found = section(fc, 60, (12, 12, 0), (ratio * 12 * 20, 20.0, 20.0))
        # ρ is printed to 0.0001; the strain follows as (0.003 + strain) / ρ
        slack = 0.00006 / ratio * (0.003 + strain)
        assert found.strain == pytest.approx(strain, abs=slack)


# the same, Table A.5a: flexural resistance factor R = Mn/(b d²) [psi], f_y = 60 ksi
RESISTANCE = [
    (4000, 0.0050, 287),
    (4000, 0.0100, 547),
    (4000, 0.0150, 781),
    (3000, 0.0100, 529),
    (5000, 0.0100, 558),
]


@pytest.mark.parametrize(("fc", "ratio", "printed"), RESISTANCE)
def test_resistance_factor(fc, ratio, printed):
    found = section(fc, 60, (10, 10, 0), (ratio * 200, 20.0, 20.0))
    assert found.nominal / (10 * 400 * INCH**3) / PSI == pytest.approx(printed, abs=1.0)


# ACI 318-19, Table 22.2.2.4.3: 0.85 up to 4000 psi, 0.05 less a 1000 psi, 0.65 from 8000 psi on
@pytest.mark.parametrize(
    ("fc", "value"), [(2500, 0.85), (4000, 0.85), (4500, 0.825), (6000, 0.75), (8000, 0.65), (12000, 0.65)]
)
def test_stress_block_factor(fc, value):
    assert beta_1(fc * PSI) == pytest.approx(value)


# ACI 318-19, Table 21.2.2 and R21.2.2: 0.65 up to ε_ty, 0.90 from ε_ty + 0.003 on, linear between
@pytest.mark.parametrize("yield_strain", [0.00138, 0.00207, 0.00276])
def test_strength_reduction(yield_strain):
    points = [(0.0, 0.65), (0.5, 0.775), (1.0, 0.90)]
    for share, value in points:
        assert phi_bending(yield_strain + share * 0.003, yield_strain) == pytest.approx(value)
    assert phi_bending(yield_strain - 0.001, yield_strain) == 0.65
    assert phi_bending(0.02, yield_strain) == 0.90


# Least steel ratios as textbooks print them (Nilson, Table A.4): 200/f_y up to 4000 psi, then 3√f'c/f_y
@pytest.mark.parametrize(
    ("fc", "fy", "ratio"),
    [(3000, 60, 0.0033), (4000, 60, 0.0033), (5000, 60, 0.0035), (6000, 60, 0.0039), (4000, 40, 0.0050)],
)
def test_least_steel_ratio(fc, fy, ratio):
    assert least_steel(fc * PSI, fy * KSI, 1.0, 1.0) == pytest.approx(ratio, abs=0.00006)


# ACI 318-19, R22.5.5.1.3 and common tables of λ_s: √(2/(1 + d/10))
@pytest.mark.parametrize(
    ("depth", "value"),
    [(8, 1.0), (10, 1.0), (12, 0.95), (16, 0.88), (20, 0.82), (24, 0.77), (30, 0.71), (40, 0.63)],
)
def test_size_effect(depth, value):
    assert size_effect(depth * INCH) == pytest.approx(value, abs=0.006)


def test_shear_of_a_web():
    """2√f'c b d of a web 16 by 22 in, 4000 psi: 44.5 kip (Nilson, chapter 4, of that web)."""
    found = shear_of_concrete(4000 * PSI, 16 * INCH, 22 * INCH, 0.01, with_least=True)
    assert found / KIP == pytest.approx(44.5, abs=0.06)


# ACI 318-19, Table 25.4.2.3, clear spacing and cover of a bar diameter with least stirrups, or 2 d_b and d_b:
# f_y/(25√f'c) d_b for No. 6 and smaller, f_y/(20√f'c) d_b for the others; else f_y·3/(50√f'c), 3/(40√f'c).
# It is the equation with (c_b + K_tr)/d_b = 1.5 and 1.0.
@pytest.mark.parametrize(
    ("confinement", "small", "divisor"),
    [(1.5, True, 25), (1.5, False, 20), (1.0, True, 50 / 3), (1.0, False, 40 / 3)],
)
@pytest.mark.parametrize("fc", [3000, 4000, 6000])
def test_simplified_development_lengths(confinement, small, divisor, fc):
    d_b = 0.75 if small else 1.128
    found = development_length(d_b * INCH, fc * PSI, 60 * KSI, confinement, top=False, small=small)
    assert found / INCH == pytest.approx(60000 / (divisor * math.sqrt(fc)) * d_b, rel=1e-9)


# Tables of development lengths used in practice, 4000 psi, Grade 60, uncoated, the better case of the
# simplified rules: bottom and top bars [in], rounded up to whole inches
LENGTHS = [
    ("#4", 0.5, 19, 25),
    ("#5", 0.625, 24, 31),
    ("#6", 0.75, 29, 37),
    ("#7", 0.875, 42, 54),
    ("#8", 1.0, 48, 62),
    ("#9", 1.128, 54, 70),
    ("#10", 1.27, 61, 79),
    ("#11", 1.41, 67, 87),
]


@pytest.mark.parametrize(("size", "diameter", "bottom", "top"), LENGTHS)
def test_development_lengths_of_practice(size, diameter, bottom, top):
    for printed, high in ((bottom, False), (top, True)):
        found = development_length(
            diameter * INCH, 4000 * PSI, 60 * KSI, 1.5, top=high, small=diameter <= 0.75
        )
        assert math.ceil(found / INCH - 1e-9) == printed, size


def test_cracked_elastic_section():
    """Nilson, 13th ed., Example 3.2: three No. 8 in 10 by 25 in, n = 8: k = 0.33, kd = 7.6 in.

    The neutral axis is printed to 0.1 in; the second moment is worked out by hand, 10·7.63³/3 + 18.96·15.37².
    """
    depth = cracked_depth(10, 10, 0, 8 * 2.37, 23)
    assert depth == pytest.approx(7.6, abs=0.05)
    assert 10 * depth**3 / 3 + 8 * 2.37 * (23 - depth) ** 2 == pytest.approx(5960, rel=0.01)


# ACI 318-19, Table 24.2.3.5: limits of the formula, worked out by hand
@pytest.mark.parametrize(
    ("moment", "cracking", "gross", "cracked", "value"),
    [
        (60, 90, 3.0, 1.0, 3.0),
        (120, 90, 3.0, 1.0, 1 / (1 - 0.25 * 2 / 3)),
        (90, 90, 2.0, 1.0, 1 / (1 - 4 / 9 / 2)),
    ],
)
def test_effective_inertia(moment, cracking, gross, cracked, value):
    assert effective_inertia(moment, cracking, gross, cracked) == pytest.approx(value)


# ACI 318-19, Table 9.3.1.1 with Grade 60: ℓ/16, ℓ/18.5, ℓ/21, ℓ/8; Grade 40: 0.8 of it
@pytest.mark.parametrize(
    ("held", "part"),
    [("simply supported", 16), ("one end continuous", 18.5), ("both ends continuous", 21), ("cantilever", 8)],
)
def test_least_depth(held, part):
    assert least_depth(336.0, held, 60_000) == pytest.approx(336 / part)
    assert least_depth(336.0, held, 40_000) == pytest.approx(0.8 * 336 / part)
