"""EN 1993-1-1 steel beams beside printed answers: worked examples, tables of resistances, tables of factors.

Printed values carry their own rounding; each row names its source. "From memory": recalled, not copied.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from calcpack.actions import Combination, LoadSet, analyse_beam
from calcpack.clauses.en1993.buckling import (
    critical_moment,
    load_factor,
    quarter_points,
    reduction,
    wave_share,
)
from calcpack.clauses.en1993.design import Conditions, design
from calcpack.clauses.en1993.rules import RECOMMENDED
from calcpack.clauses.en1993.section import Profile, profile_of
from calcpack.clauses.en1993.segments import segments
from calcpack.clauses.steel import segment_moments
from calcpack.job.library import rolled_sections
from calcpack.job.model import Material
from calcpack.statics import BeamLine, Curve, LineLoad


def profile(name: str, strength: float, shear_modulus: float = 80.77e6) -> Profile:
    steel = Material(
        key="s", kind="steel", modulus=210e6, unit_weight=78.5, values={"fy": strength, "G": shear_modulus}
    )
    return profile_of(rolled_sections()[name.lower().replace(" ", "")], steel)


# Multi-storey steel buildings, part 4 (Steel Buildings in Europe, 2008), worked example A.1: simply
# supported, laterally unrestrained beam, the same as Access Steel SX001a-EN-EU. IPE 330, S235, span 5.70 m,
# load on the top flange; pages 4-58 to 4-62. Page 4-61 read, the others from memory.


def unrestrained():
    ipe = profile("IPE 330", 235e3)
    beam = analyse_beam(
        BeamLine(5.7, (0.0, 5.7)),
        [LoadSet("dead", (LineLoad(0, 5.7, 22.28, 22.28),))],
        [Combination("ULS", "strength", {"dead": 1.0})],
    )
    conditions = Conditions("rolled", "top", 1.127)
    return design(ipe, beam, segments([(0, 5.7)], [0, 5.7]), conditions)


@pytest.mark.parametrize(
    ("what", "printed", "rounding"),
    [
        ("M_Ed", 90.48, 0.005),
        ("V_Ed", 63.50, 0.005),
        ("c/tf", 5.07, 0.005),
        ("c/tw", 36.1, 0.05),
        ("M_c,Rd", 189.0, 0.1),  # 804.3 cm3 printed
        ("M_cr", 113.9, 0.6),  # C2 = 0.454 printed, 0.457 here: half a per cent
        ("lambda_LT", 1.288, 0.004),
        ("phi_LT", 1.340, 0.006),
        ("chi_LT", 0.480, 0.0025),
        ("f", 0.984, 0.0025),  # kc = 0.94 printed, 1/sqrt(1.127) = 0.942 here
        ("chi_LT,mod", 0.488, 0.003),
        ("M_b,Rd", 92.24, 0.5),
        ("A_v", 3081, 0.5),
        ("V_pl,Rd", 418.0, 0.5),
    ],
)
def test_unrestrained_beam(what, printed, rounding):
    beam = unrestrained()
    found, section = beam.segments[0], beam.profile
    own = {
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
    }[what]
    assert own == pytest.approx(printed, abs=rounding)


def test_unrestrained_beam_with_its_own_factors():
    """C1 from the diagram in place of the printed 1.127: less than one per cent apart."""
    found = unrestrained()
    own = design(
        found.profile,
        analyse_beam(
            BeamLine(5.7, (0.0, 5.7)),
            [LoadSet("dead", (LineLoad(0, 5.7, 22.28, 22.28),))],
            [Combination("ULS", "strength", {"dead": 1.0})],
        ),
        segments([(0, 5.7)], [0, 5.7]),
        Conditions("rolled"),
    )
    assert own.segments[0].resistance == pytest.approx(92.24, rel=0.01)


# Resistances of European sections in S235, γM0 = 1.0, from tables of the European mills' catalogue
# (EN 10365 sections): Mpl,y,Rd = Wpl,y fy and Vpl,z,Rd = Avz fy/√3 with the printed Wpl,y [cm3], Avz [cm2].
# From memory.
TABLE = {
    # name: Wpl,y, Avz, Iz [cm4], Iw [1000 cm6], Mpl [kNm], Vpl [kN]
    "IPE 200": (220.6, 14.00, 142.4, 12.99, 51.8, 190.0),
    "IPE 300": (628.4, 25.68, 603.8, 125.9, 147.7, 348.4),
    "IPE 400": (1307, 42.69, 1318, 490.0, 307.1, 579.2),
    "IPE 500": (2194, 59.87, 2142, 1249, 515.6, 812.3),
    "HE 200 A": (429.5, 18.08, 1336, 108.0, 100.9, 245.3),
    "HE 300 A": (1383, 37.28, 6310, 1200, 325.0, 505.8),
    "HE 200 B": (642.5, 24.83, 2003, 171.1, 151.0, 336.9),
    "HE 300 B": (1869, 47.43, 8563, 1688, 439.2, 643.5),
}


@pytest.mark.parametrize("name", TABLE)
def test_resistances_of_the_section_tables(name):
    plastic, shear_area, weak, warping, moment, shear = TABLE[name]
    found = profile(name, 235e3)
    assert found.shape.plastic_modulus * 1e6 == pytest.approx(plastic, rel=1e-3)
    assert found.shear_area * 1e4 == pytest.approx(shear_area, rel=1e-3)
    assert found.shape.weak_inertia * 1e8 == pytest.approx(weak, rel=1e-3)
    assert found.shape.warping * 1e9 == pytest.approx(warping, rel=2e-3)
    assert found.bending == pytest.approx(moment, rel=1e-3)
    assert found.shear == pytest.approx(shear, rel=1e-3)


# Reduction factors of the buckling curves, as printed in tables of the European recommendations (ECCS) to
# four digits; the general case of 6.3.2.2 follows the same curves. From memory.
CURVES = {
    # slenderness: a, b, c, d
    0.5: (0.9243, 0.8842, 0.8430, 0.7793),
    1.0: (0.6656, 0.5970, 0.5399, 0.4671),
    1.5: (0.3724, 0.3422, 0.3145, 0.2766),
    2.0: (0.2229, 0.2095, 0.1962, 0.1766),
}


@pytest.mark.parametrize("slenderness", CURVES)
def test_buckling_curves(slenderness):
    for alpha, printed in zip((0.21, 0.34, 0.49, 0.76), CURVES[slenderness], strict=True):
        found = reduction(slenderness, alpha, "general", RECOMMENDED, 1.0).reduced
        assert found == pytest.approx(printed, abs=5.1e-5)


# C1 under end moments, NCCI SN003b-EN-EU, Table 3.1, k = 1 (from memory). Double curvature is
# printed on the safe side: eigenvalues at -0.5 are 2.44 to 2.59.
@pytest.mark.parametrize(
    ("psi", "printed"),
    [
        (1.0, 1.00),
        (0.75, 1.14),
        (0.5, 1.31),
        (0.25, 1.52),
        (0.0, 1.77),
        (-0.25, 2.05),
        (-0.5, 2.33),
        (-0.75, 2.57),
    ],
)
def test_diagram_factor_under_end_moments(psi, printed):
    line = Curve(np.array([0.0, 6.0]), np.array([[1.0, (psi - 1) / 6]]))
    share = wave_share(line, 0.0, 6.0, 1.0)
    found = min(quarter_points(segment_moments(line, 0.0, 6.0)), 1 / math.sqrt(share))
    assert found == pytest.approx(printed, rel=0.07)
    if psi >= 0:
        assert found == pytest.approx(printed, rel=0.03)


# C1 and C2 under loads: NCCI SN003b Table 3.2 (C1 1.127, 1.348, 2.578) and ENV 1993-1-1:1992 Table F.1.2,
# k = 1 (C1 1.132, 1.365; C2 0.459, 0.553). From memory. The quarter points leave a load at midspan 7 % short.
def test_factors_under_loads():
    parabola = Curve(np.array([0.0, 6.0]), np.array([[0.0, 3.0, -0.5]]))
    quarters, share = quarter_points(segment_moments(parabola, 0, 6)), wave_share(parabola, 0, 6, 4.5)
    assert quarters == pytest.approx(1.132, rel=0.005)
    assert 1 / math.sqrt(share) == pytest.approx(1.132, rel=0.02)
    assert load_factor(1.132, 6.0, 3.0, 4.5) == pytest.approx(0.459, abs=5e-4)
    triangle = Curve(np.array([0.0, 3.0, 6.0]), np.array([[0.0, 0.5], [1.5, -0.5]]))
    quarters, share = quarter_points(segment_moments(triangle, 0, 6)), wave_share(triangle, 0, 6, 1.5)
    assert quarters == pytest.approx(1.365, rel=0.07)
    assert 1 / math.sqrt(share) == pytest.approx(1.365, rel=0.006)
    assert load_factor(1.365, 6.0, 1.0, 1.5) == pytest.approx(0.553, abs=5e-4)
    held = Curve(np.array([0.0, 6.0]), np.array([[-3.0, 3.0, -0.5]]))  # both ends held
    assert quarter_points(segment_moments(held, 0, 6)) == pytest.approx(2.578, rel=0.003)


# Critical moment of the same worked example from its printed section constants and factors, page 4-61:
# 1.127 x 502.75 kN x (...) with It = 28.15 cm4, Iw = 199100 cm6, Iz = 788.1 cm4, C2 zg = 74.91 mm.
def test_critical_moment_from_printed_constants():
    ipe = profile("IPE 330", 235e3)
    printed = ipe.shape._replace(weak_inertia=788.1e-8, torsion=28.15e-8, warping=199100e-12)
    exact = Profile("IPE 330", printed, 235e3, 210e6, 80.77e6)
    assert math.pi**2 * 210e6 * 788.1e-8 / 5.7**2 == pytest.approx(502.75, abs=0.01)
    assert critical_moment(exact, 5.7, 1.127, 0.07491) == pytest.approx(113.9, abs=0.05)
