"""Strengths, outlines, bars in layers: EN 1992-1-1, Table 3.1, 3.1.7, 8.2, 7.3.4 at their bounds."""

import math

import pytest
from cases_en1992 import NATIONAL, RECTANGLE, concrete

from calcpack.clauses.bars import bar
from calcpack.clauses.en1992.cracking import crack_width, elastic
from calcpack.clauses.en1992.detailing import arranged, clear_between, clear_distance, fitting
from calcpack.clauses.en1992.model import (
    Bars,
    Outline,
    Stirrups,
    block_factors,
    guard,
    mean_tensile_strength,
    outline,
    strengths,
)
from calcpack.clauses.en1992.national import merge, national, national_names
from calcpack.clauses.en1992.samples import C30
from calcpack.clauses.en1992.shear import strut_factor
from calcpack.job.errors import CalcpackError
from calcpack.job.model import Material, Section

TEE = Outline(0.3, 0.6, 0.9, 0.15)


@pytest.mark.parametrize(
    ("name", "inside", "outside"),
    [("fck", (12.0, 90.0), (11.95, 90.1)), ("fyk", (400.0, 600.0), (399.0, 601.0))],
)
def test_limits_of_validity(name, inside, outside):
    """3.1.2(2)P: C12 to C90; 3.2.2(3)P: 400 to 600 MPa."""
    assert [guard(name, value) for value in inside] == list(inside)
    for value in outside:
        with pytest.raises(CalcpackError, match="is out of range"):
            guard(name, value)


def test_strengths_of_c30():
    """Table 3.1: 30, 38, 2.9, 2.0 (0.7 x 2.9 = 2.03 by the formula), 33 GPa, 3.5 per mille; B500 at 200 GPa."""
    found = concrete(30.0)
    assert (found.fck, found.fcm, found.fyk, found.es) == (30e3, 38e3, 500e3, 200e6)
    assert (found.fctm, found.fctk) == pytest.approx((0.3 * 30 ** (2 / 3) * 1e3, 0.21 * 30 ** (2 / 3) * 1e3))
    assert (found.fcd, found.fyd) == pytest.approx((20e3, 500e3 / 1.15))
    assert found.fctd == pytest.approx(found.fctk / 1.5)
    assert (found.eps_cu, found.eps_cu2, found.lam, found.eta) == (3.5e-3, 3.5e-3, 0.8, 1.0)
    assert found.eps_yd == pytest.approx(500 / 1.15 / 200e3)
    bare = Material(
        key="c", kind="concrete", modulus=33e6, unit_weight=25.0, values={"fck": 30e3, "fyk": 500e3}
    )
    assert strengths(bare, NATIONAL).es == 200e6  # 3.2.7(4)
    assert (C30.fck, C30.fcm, C30.fctm, C30.fctk, C30.ecm) == (30e3, 38e3, 2900.0, 2000.0, 33e6)
    assert (C30.eps_cu, C30.eps_cu2, C30.lam, C30.eta, C30.fyk, C30.es) == (
        3.5e-3,
        3.5e-3,
        0.8,
        1.0,
        500e3,
        200e6,
    )
    assert (C30.fcd, C30.fyd, C30.fctd) == pytest.approx((30e3 / 1.5, 500e3 / 1.15, 2000 / 1.5))


def test_high_strength_begins_above_50_mpa():
    """(3.19) to (3.22), Table 3.1: at 50 as below; at 50.4 by the other formulas."""
    assert block_factors(50.0) == (0.8, 1.0)
    assert block_factors(50.4) == pytest.approx((0.8 - 0.4 / 400, 1 - 0.4 / 200), rel=1e-12)
    assert mean_tensile_strength(50.0) == pytest.approx(0.3 * 50 ** (2 / 3), rel=1e-12)
    assert mean_tensile_strength(50.4) == pytest.approx(2.12 * math.log(1 + 58.4 / 10), rel=1e-12)
    assert concrete(50.0).eps_cu == 3.5e-3
    assert concrete(50.4).eps_cu == pytest.approx((2.6 + 35 * 0.396**4) * 1e-3, rel=1e-12)
    assert strut_factor(concrete(50.0), NATIONAL) == pytest.approx(0.6 * 0.8)


# Outlines ------------------------------------------------------------------------------------------------


def test_outline_of_a_section():
    sizes = {"width": 0.3, "depth": 0.5}
    assert (
        outline(Section(key="r", shape="rectangle", dimensions=sizes, area=0.15, inertia=0.003), 0.9)
        == RECTANGLE
    )
    tee = Section(key="t", shape="tee", dimensions=sizes | {"flange_depth": 0.15}, area=0.2, inertia=0.004)
    assert outline(tee, 0.9) == Outline(0.3, 0.5, 0.9, 0.15)


def test_flange_in_compression_and_in_tension():
    """Area 300 x 600 + 600 x 150; centroid 225 from the flange's face; inertia about it by parts."""
    assert TEE.area == pytest.approx(0.27)
    assert TEE.centroid == pytest.approx((0.18 * 0.3 + 0.09 * 0.075) / 0.27)
    assert TEE.turned.centroid == pytest.approx(0.6 - TEE.centroid)
    own = 0.3 * 0.6**3 / 12 + 0.6 * 0.15**3 / 12
    parts = 0.18 * (0.3 - 0.225) ** 2 + 0.09 * (0.225 - 0.075) ** 2
    assert TEE.inertia == pytest.approx(own + parts)
    assert TEE.turned.inertia == pytest.approx(TEE.inertia)
    assert (TEE.block_width, TEE.block_flange) == (0.9, 0.15)
    assert (TEE.turned.block_width, TEE.turned.block_flange) == (0.3, 0.0)
    assert (RECTANGLE.block_width, RECTANGLE.block_flange) == (0.3, 0.0)


def test_mean_width_of_the_tension_zone():
    """9.2.1.1(1): the web with the flange pressed; else over the 225 mm in tension, 150 of them 900 wide."""
    assert TEE.tension_width == 0.3
    assert RECTANGLE.turned.tension_width == 0.3
    assert TEE.turned.tension_width == pytest.approx((0.9 * 0.15 + 0.3 * 0.075) / 0.225)


# Bars ----------------------------------------------------------------------------------------------------


def test_bars_in_layers():
    """4 + 2 of 20 mm, 43 mm in, layers 41 apart: centroid 53 + 41 x 2/6."""
    both = Bars(bar("20 mm"), (4, 2), 0.043, 0.041)
    assert (both.count, both.words) == (6, "6 × 20 mm (4 + 2)")
    assert both.area == pytest.approx(6 * math.pi * 1e-4)
    assert both.centroid == pytest.approx(0.053 + 0.041 * 2 / 6)
    one = Bars(bar("20 mm"), (3,), 0.043, 0.041)
    assert (one.words, one.centroid) == ("3 × 20 mm", pytest.approx(0.053))
    assert Stirrups(bar("8 mm"), 4).area == pytest.approx(4 * math.pi * 16e-6)


@pytest.mark.parametrize(("width", "number"), [(0.2699, 4), (0.27, 5)])
def test_bars_side_by_side(width, number):
    """Five of 20 mm 21 apart, 43 mm in on both sides: 86 + 100 + 84 = 270 mm (8.2(2))."""
    assert fitting(bar("20 mm"), width, 0.043, 0.021) == number


def test_layers_of_bars():
    """The outer layer full, at least two in the inner one; halves where two layers cannot hold them."""
    for count, layers in ((5, (5,)), (6, (4, 2)), (7, (5, 2)), (10, (5, 5)), (12, (6, 6))):
        found = arranged(bar("20 mm"), count, 0.27, 0.043, 0.021)
        assert found.layers == layers
        assert found.pitch == pytest.approx(0.041)
    assert arranged(bar("20 mm"), 3, 0.15, 0.043, 0.021).layers == (2, 1)


def test_clear_distances():
    """Three of 20 mm: (300 - 86 - 60)/2; a single one: what is left of the web. Rule: 8.2(2)."""
    assert clear_between(Bars(bar("20 mm"), (3,), 0.043, 0.041), 0.3) == pytest.approx(0.077)
    assert clear_between(Bars(bar("20 mm"), (1,), 0.043, 0.041), 0.3) == pytest.approx(0.194)
    assert [clear_distance(size, aggregate, NATIONAL) for size, aggregate in
            ((0.012, 0.010), (0.016, 0.016), (0.025, 0.016))] == pytest.approx([0.020, 0.021, 0.025])  # fmt: skip


# Cracks --------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(("apart", "near"), [(0.2499, True), (0.25, True), (0.2501, False)])
def test_bars_close_enough_for_the_crack_spacing(apart, near):
    """7.3.4(3): 5 (c + phi/2) = 5 (40 + 10) = 250 mm; beyond 1.3 (h - x) (7.14)."""
    section = elastic(RECTANGLE, C30, 1e-3, 0.45, 2.0)
    found = crack_width(RECTANGLE, C30, section, 90.0, 1e-3, 0.45, (0.02, 0.04, apart), NATIONAL)
    assert found.near is near
    close = 3.4 * 0.04 + 0.8 * 0.5 * 0.425 * 0.02 / found.ratio
    assert found.spacing == pytest.approx(close if near else 1.3 * (0.5 - section.x_2), rel=1e-12)


@pytest.mark.parametrize("depth", [0.45, 0.37])
def test_effective_tension_area(depth):
    """7.3.2(3): 2.5 (h - d) with bars near the face, (h - x)/3 with bars far from it."""
    section = elastic(RECTANGLE, C30, 1e-3, depth, 2.0)
    found = crack_width(RECTANGLE, C30, section, 60.0, 1e-3, depth, (0.02, 0.04, 0.1), NATIONAL)
    assert found.height == pytest.approx(min(2.5 * (0.5 - depth), (0.5 - section.x_2) / 3), rel=1e-12)
    stress = 200 * 3 / 33 * 60.0 * (depth - section.x_2) / section.inertia_2
    rho = 1e-3 / (0.3 * found.height)
    assert (found.stress, found.ratio) == pytest.approx((stress, rho), rel=1e-12)
    stiffened = stress - 0.4 * 2900 / rho * (1 + 200 / 33 * rho)
    assert found.strain == pytest.approx(max(stiffened, 0.6 * stress) / 200e6, rel=1e-12)
    assert found.width == pytest.approx(found.strain * found.spacing, rel=1e-12)


# National parameters -------------------------------------------------------------------------------------


def test_sets_of_national_parameters():
    assert "recommended" in national_names()
    own = national(changes={"gamma_C": 1.4, "alpha_cc": None})
    assert (own["gamma_C"], own["alpha_cc"]) == (1.4, 1.0)
    assert own.name.endswith("with gamma_C as given in the job")
    assert own.cite("gamma_C") == "EN 1992-1-1, Table 2.1N"
    with pytest.raises(CalcpackError, match="there is no such parameter"):
        national(changes={"gamma_c": 1.4})


def test_what_differs_from_the_recommended_values():
    """Lengths in mm, the others plain; the standard's symbol and both values."""
    ours = {"file": "a.toml", "name": "Annex A", "source": "office",
            "values": {"gamma_C": 1.4, "delta_c_dev": 0.005}, "cover": {"XC1": 0.02}}  # fmt: skip
    assert [each.words for each in national(ours).differing] == [
        "γ_C = 1.4 (recommended 1.5)",
        "Δc_dev = 5 mm (recommended 10 mm)",
        "c_min,dur of XC1 = 20 mm (recommended 15 mm)",
    ]


def test_a_value_that_is_no_number():
    base = NATIONAL.model_dump()
    with pytest.raises(CalcpackError, match="the national set 'ours': input should be a valid number"):
        merge(base, {"name": "ours", "source": "office", "values": {"gamma_C": {"value": "much"}}})
