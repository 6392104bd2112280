"""The equations of AISC 360-22 one by one: worked by hand, at their limits, and on both sides of them.

A made-up shape with round numbers serves where a hand should follow; it need not be one that is rolled.
"""

from __future__ import annotations

import math

import pytest

from calcpack.clauses.aisc360 import strength
from calcpack.clauses.aisc360.strength import Steel
from calcpack.clauses.steel import ISection, SegmentMoments, i_section
from calcpack.job.library import rolled_sections
from calcpack.statics import Extreme
from calcpack.verification.reckon import compare_row, rows

STEEL = Steel(250e3, 200e6)  # [kPa]; E / F_y = 800
# d 400, b 200, t_w 8, t_f 16, r 12 mm; Z 1.2e-3, S 1.0e-3 m3, r_y 45 mm, J 5e-7 m4, r_ts 55 mm, h_o 384 mm
SHAPE = ISection(
    0.4, 0.2, 0.008, 0.016, 0.012, 9e-3, 2e-4, 2e-5, 1.0e-3, 1.2e-3, 0.045, 5e-7, 7e-7, 0.055, 0.384
)
ROOT = math.sqrt(800)
EXACT = 1e-12


def with_flange(slenderness):
    """The made-up shape with another flange width."""
    return SHAPE._replace(width=2 * SHAPE.flange * slenderness)


def with_web(slenderness):
    """The made-up shape with another web."""
    return SHAPE._replace(web=SHAPE.flat_web / slenderness)


def test_by_hand():
    assert strength.plastic_moment(SHAPE, STEEL) == pytest.approx(300.0, rel=EXACT)
    assert strength.yielding_moment(SHAPE, STEEL) == pytest.approx(175.0, rel=EXACT)
    lengths = strength.limiting_lengths(SHAPE, STEEL)
    assert lengths.plastic == pytest.approx(1.76 * 0.045 * 28.2842712, rel=1e-8)
    # J / (S h) = 1.302083e-3, 0.7 F_y / E = 8.75e-4, squares 1.695421e-6 and 6.76 x 7.65625e-7 = 5.175625e-6,
    # root of the sum 2.621268e-3, with the first 3.923351e-3, root 0.06263666
    assert lengths.elastic == pytest.approx(1.95 * 0.055 / 8.75e-4 * 0.06263666, rel=1e-6)


def test_inelastic_by_hand():
    lengths = strength.limiting_lengths(SHAPE, STEEL)
    middle = (lengths.plastic + lengths.elastic) / 2
    found = strength.bending_strength(SHAPE, STEEL, middle, 1.1)
    assert found.zone == "inelastic"
    assert found.nominal == pytest.approx(1.1 * (300 + 175) / 2, rel=EXACT)
    assert strength.bending_strength(SHAPE, STEEL, middle, 2.0).nominal == pytest.approx(300.0, rel=EXACT)


def test_elastic_by_hand():
    # L / r_ts = 200, squared 40000; π² E / 40000 = 49348.02 kPa; 0.078 x 1.302083e-3 x 40000 = 4.0625,
    # the root of 5.0625 is 2.25
    found = strength.critical_stress(SHAPE, STEEL, 11.0, 1.2)
    assert found == pytest.approx(1.2 * 49348.022 * 2.25, rel=1e-7)
    strong = strength.bending_strength(SHAPE, STEEL, 11.0, 1.2)
    assert strong.zone == "elastic"
    assert strong.nominal == pytest.approx(133.23966, rel=1e-7)
    assert strength.bending_strength(SHAPE, STEEL, 11.0, 3.0).nominal == pytest.approx(300.0, rel=EXACT)


def test_at_the_limiting_lengths():
    lengths = strength.limiting_lengths(SHAPE, STEEL)
    at_plastic, at_elastic = (
        strength.bending_strength(SHAPE, STEEL, each) for each in (lengths.plastic, lengths.elastic)
    )
    assert (at_plastic.zone, at_elastic.zone) == ("yielding", "inelastic")
    assert at_plastic.nominal == pytest.approx(300.0, rel=EXACT)
    assert at_elastic.nominal == pytest.approx(175.0, rel=EXACT)
    beyond = strength.bending_strength(SHAPE, STEEL, lengths.elastic * 1.000001)
    assert beyond.zone == "elastic"
    # L_r is where (F2-4) gives 0.7 F_y: 1.95 and 6.76 are the rounded solution of that
    assert beyond.nominal == pytest.approx(175.0, rel=2e-3)


def test_zones_end_at_their_limits():
    lengths = strength.Lengths(2.0, 6.0)
    zones = [strength.zone_of(length, lengths) for length in (2.0, 2.001, 6.0, 6.001)]
    assert zones == ["yielding", "inelastic", "inelastic", "elastic"]


def test_held_all_along():
    assert strength.bending_strength(SHAPE, STEEL, 0.0).nominal == pytest.approx(300.0, rel=EXACT)


def test_flange_exactly_compact_and_beside():
    at = strength.bending_strength(with_flange(0.38 * ROOT), STEEL, 0.0)
    assert (at.flange, at.nominal) == (None, at.plastic)
    beside = strength.bending_strength(with_flange(0.38 * ROOT * 1.001), STEEL, 0.0)
    assert beside.flange is not None
    assert beside.nominal == pytest.approx(beside.plastic, rel=1e-3)
    assert beside.nominal < beside.plastic


def test_flange_exactly_noncompact():
    at = strength.bending_strength(with_flange(1.0 * ROOT), STEEL, 0.0)
    assert at.nominal == pytest.approx(175.0, rel=EXACT)
    half = strength.bending_strength(with_flange((0.38 + 1.0) / 2 * ROOT), STEEL, 0.0)
    assert half.nominal == pytest.approx((300 + 175) / 2, rel=EXACT)


def test_slender_flange():
    shape = with_flange(40.0)
    assert strength.slenderness(shape, STEEL).slender_flange
    factor = 4 / math.sqrt(344 / 8)
    assert strength.bending_strength(shape, STEEL, 0.0).nominal == pytest.approx(
        0.9 * 200e6 * factor * 1e-3 / 1600, rel=1e-9
    )


def test_the_flange_and_the_length_each_limit():
    shape = with_flange(20.0)
    short, long = (strength.bending_strength(shape, STEEL, each) for each in (0.0, 11.0))
    assert short.nominal == short.flange < short.buckling
    assert long.nominal == long.buckling < long.flange


def test_web_exactly_compact_and_beyond():
    assert strength.slenderness(with_web(3.76 * ROOT), STEEL).compact_web
    with pytest.raises(ValueError, match="web is not compact"):
        strength.bending_strength(with_web(3.76 * ROOT * 1.001), STEEL, 0.0)


def test_slenderness_by_hand():
    found = strength.slenderness(SHAPE, STEEL)
    assert found.flange == pytest.approx(6.25)
    assert found.web == pytest.approx(43.0)
    assert found.flange_compact == pytest.approx(10.748023, rel=1e-7)
    assert found.flange_noncompact == pytest.approx(28.284271, rel=1e-7)
    assert found.web_compact == pytest.approx(106.34886, rel=1e-7)


def test_shear_by_hand():
    found = strength.shear_strength(SHAPE, STEEL)
    assert found.nominal == pytest.approx(0.6 * 250e3 * 0.4 * 0.008)
    assert (found.factor.phi, found.factor.omega) == (1.0, 1.5)


def test_shear_at_its_limits():
    for slenderness, stocky, coefficient in (
        (2.24 * ROOT, True, 1.0),
        (2.24 * ROOT * 1.001, False, 1.0),
        (1.10 * math.sqrt(5.34) * ROOT, False, 1.0),
        (1.10 * math.sqrt(5.34) * ROOT * 1.005, False, 1 / 1.005),
        (1.10 * math.sqrt(5.34) * ROOT * 1.25, False, 0.8),
    ):
        found = strength.shear_strength(with_web(slenderness), STEEL)
        assert found.stocky == stocky
        assert found.coefficient == pytest.approx(coefficient, rel=1e-12)
        assert (found.factor.phi, found.factor.omega) == ((1.0, 1.5) if stocky else (0.9, 1.67))


def test_web_yielding_by_hand():
    # k = 28 mm: 250 N/mm2 x 8 mm x (5 x 28 + 100) mm = 480 kN; near the end (70 + 100) mm: 340 kN
    assert strength.web_yielding(SHAPE, STEEL, 0.1, 0.401) == pytest.approx(480.0)
    for near in (0.4, 0.0):
        assert strength.web_yielding(SHAPE, STEEL, 0.1, near) == pytest.approx(340.0)


def test_web_crippling_by_hand():
    # √(E F_y t_f / t_w) = √(200000 x 250 x 2) = 10000 N/mm2; t_w² = 64 mm2; (t_w / t_f)^1.5 = 0.35355339
    inside = 0.80 * 64 * 10000 * (1 + 3 * 0.25 * 0.35355339) / 1000
    for far in (0.2, 1.0):
        assert strength.web_crippling(SHAPE, STEEL, 0.1, far) == pytest.approx(inside, rel=1e-8)
    long = 0.40 * 64 * 10000 * (1 + (4 * 0.25 - 0.2) * 0.35355339) / 1000
    assert strength.web_crippling(SHAPE, STEEL, 0.1, 0.199) == pytest.approx(long, rel=1e-8)
    short = 0.40 * 64 * 10000 * (1 + 3 * 0.15 * 0.35355339) / 1000
    assert strength.web_crippling(SHAPE, STEEL, 0.06, 0.0) == pytest.approx(short, rel=1e-8)
    # both lines meet where the bearing is one fifth of the depth
    at = strength.web_crippling(SHAPE, STEEL, 0.08, 0.0)
    assert strength.web_crippling(SHAPE, STEEL, 0.08 * 1.000001, 0.0) == pytest.approx(at, rel=1e-6)


def test_factors():
    both = [
        (each.phi, each.omega)
        for each in (
            strength.BENDING,
            strength.SHEAR,
            strength.SHEAR_STOCKY,
            strength.WEB_YIELDING,
            strength.WEB_CRIPPLING,
        )
    ]
    assert both == [(0.9, 1.67), (0.9, 1.67), (1.0, 1.5), (1.0, 1.5), (0.75, 2.0)]
    assert strength.WEB_CRIPPLING.available(100.0, "LRFD") == 75.0
    assert strength.WEB_CRIPPLING.available(100.0, "ASD") == 50.0


def moments(quarter, middle, three_quarters, largest, other=0.0):
    upper, lower = max(largest, other), min(largest, other)
    return SegmentMoments(
        0, 1, 0, quarter, middle, three_quarters, 0, Extreme(largest, 0), Extreme(upper, 0), Extreme(lower, 0)
    )


def test_diagram_factor_by_hand():
    # 12.5 x 10 / (25 + 3 x 2 + 4 x 5 + 3 x 8) = 125 / 75
    assert strength.diagram_factor(moments(2, -5, 8, 10)) == pytest.approx(125 / 75)
    assert strength.diagram_factor(moments(0, 0, 0, 0)) == 1.0
    assert strength.diagram_factor(moments(10, 10, 10, 10)) == 1.0
    # a moment so small: 12.5 x 0.008 / (0.02 + 3 x 0.004 + 4 x 0.008 + 3 x 0.004) = 0.1 / 0.076
    assert strength.diagram_factor(moments(0.004, 0.008, 0.004, 0.008)) == pytest.approx(100 / 76)
    # the smaller sense: 12.5 x 6 / (15 + 6 + 20 + 24) = 75 / 65, and never below 1
    assert strength.diagram_factor(moments(2, -5, 8, 10), 6.0) == pytest.approx(75 / 65)
    assert strength.diagram_factor(moments(2, -5, 8, 10), 1.0) == 1.0


def test_constants_against_thin_plates():
    """Without fillets and with thin plates: closed forms of a section made of three rectangles."""
    w = rolled_sections()["w18x50"]
    bare = w.model_copy(update={"dimensions": {**w.dimensions, "root_radius": 0.0}})
    found = i_section(bare)
    d, b, tw, tf = (w.dimensions[key] for key in ("depth", "width", "web", "flange"))
    assert found.plastic_modulus == pytest.approx(b * d**2 / 4 - (b - tw) * (d - 2 * tf) ** 2 / 4)
    assert found.weak_inertia == pytest.approx((2 * tf * b**3 + (d - 2 * tf) * tw**3) / 12)
    assert found.between_flanges == pytest.approx(d - tf)
    assert found.flat_web == pytest.approx(d - 2 * tf)
    with_fillets = i_section(w)
    assert found.plastic_modulus < with_fillets.plastic_modulus < 1.04 * found.plastic_modulus


# EN 10365 and producers' tables: shared/verification/en1993.toml
@pytest.mark.parametrize("row", rows("en1993", "constants"), ids=lambda row: row.label)
def test_european_constants(row):
    s = i_section(rolled_sections()["".join(row.label.split()).casefold()])
    found = (s.weak_inertia * 1e8, s.plastic_modulus * 1e6, s.torsion * 1e8, s.warping * 1e9)
    printed = [float(row.text(column)) for column in ("Iz", "Wpl", "It", "Iw")]
    assert found == pytest.approx(printed, rel=1e-3)
    assert all(each.holds for each in compare_row(row))


def test_no_i_section():
    w = rolled_sections()["w18x50"]
    with pytest.raises(ValueError, match="no I-section"):
        i_section(w.model_copy(update={"shape": "rectangle"}))
