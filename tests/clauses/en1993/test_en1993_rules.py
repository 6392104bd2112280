"""The numbers of EN 1993-1-1 and -1-5 that everything else draws on, each by what it does."""

import math
from dataclasses import replace

import pytest
from beams_en1993 import profile

from calcpack.clauses.en1993.bearing import bearing
from calcpack.clauses.en1993.buckling import imperfection
from calcpack.clauses.en1993.design import Conditions, LocalForce
from calcpack.clauses.en1993.lines_bearing import force_beside_moment
from calcpack.clauses.en1993.lines_profile import take_factors, take_profile
from calcpack.clauses.en1993.rules import (
    LARGEST_DIAGRAM,
    LIMITS,
    OUTSTAND,
    OVERHANG,
    RECOMMENDED,
    WEB,
)
from calcpack.clauses.en1993.samples import IPE_330, uniform
from calcpack.clauses.en1993.section import part_class, yield_strength
from calcpack.job.model import Material
from calcpack.sheet import Sheet

IPE = profile("IPE 330")


@pytest.mark.parametrize(
    ("key", "inside", "outside"),
    [("thickness", (0.0, 80.0, 80.0 * (1 + 0.9e-9)), (80.01,)), ("yield", (200.0, 460.0), (199.9, 460.1)),
     ("class", (1, 2, 3), (0.99, 4))],
)  # fmt: skip
def test_limits_of_validity(key, inside, outside):
    """Table 3.1: parts up to 80 mm, S235 to S460; classes 1 to 3."""
    assert all(LIMITS[key].holds(value) for value in inside)
    assert not any(LIMITS[key].holds(value) for value in outside)


@pytest.mark.parametrize(
    ("limits", "bounds"), [(OUTSTAND, (9, 10, 14)), (WEB, (72, 83, 124))], ids=["outstand", "web"]
)
def test_classes(limits, bounds):
    """Table 5.2: c/t over epsilon of an outstand in compression, and of a web in bending."""
    for rank, bound in enumerate(bounds, start=1):
        assert part_class(0.8 * bound, 0.8, limits) == rank
        assert part_class(0.8 * bound * 1.0001, 0.8, limits) == rank + 1


@pytest.mark.parametrize(
    ("depth", "curves", "curve"),
    [(0.32, "general", ("a", 0.21)), (0.321, "general", ("b", 0.34)), (0.32, "rolled", ("b", 0.34)),
     (0.321, "rolled", ("c", 0.49))],
)  # fmt: skip
def test_imperfection_factors(depth, curves, curve):
    """Tables 6.3 to 6.5: by h/b up to 2 and beyond; b = 160 mm."""
    assert imperfection(replace(IPE, shape=IPE.shape._replace(depth=depth)), curves) == curve


def test_recommended_factors():
    """6.1(1), 6.2.6(3) on the safe side, 6.3.2.3(1)."""
    assert RECOMMENDED == (1.0, 1.0, 1.0, 0.4, 0.75)


def test_bounds_from_other_standards():
    """ENV 1993-1-1, F.1.2(6): C1 up to 2.7; BS 5950-1 Table 14: 1.0 L and, loads on top, 2.5 L."""
    assert LARGEST_DIAGRAM == 2.7
    assert OVERHANG == {False: 1.0, True: 2.5}


def test_strength_by_thickness():
    """Table 3.1, S355: 355 up to 40 mm, 335 beyond."""
    steel = Material(
        key="s", kind="steel", modulus=210e6, unit_weight=78.5, values={"fy": 355e3, "fy_thick": 335e3}
    )
    assert [yield_strength(steel, thickness) for thickness in (0.040, 0.0401)] == [355e3, 335e3]


def test_strength_factor_and_slenderness_of_webs():
    """epsilon = root(235/fy); h_w/t_w up to 72 epsilon/eta (6.2.6(6))."""
    strong = profile("IPE 330", "S460")
    assert strong.epsilon == pytest.approx(math.sqrt(235 / 460), rel=1e-12)
    for share, buckles in ((0.999, False), (1.001, True)):
        web = strong.web_depth / (72 * strong.epsilon * share)
        assert replace(strong, shape=strong.shape._replace(web=web)).web_may_buckle is buckles


def test_shear_that_takes_nothing_away():
    """Up to half of V_pl,Rd (6.2.8(2)); at 0.503 of it rho = 0.006^2."""
    thin = replace(IPE, shape=IPE.shape._replace(root_radius=0.0))
    assert IPE.bending_with_shear(0.5 * IPE.shear) == IPE.bending
    assert thin.bending_with_shear(0.503 * thin.shear) < thin.bending
    lost = 0.006**2 * thin.web_depth**2 * 0.0075 / 4
    assert thin.bending_with_shear(0.503 * thin.shear) == pytest.approx(
        thin.bending - lost * 235e3, rel=1e-12
    )


@pytest.mark.parametrize(("share", "passes"), [(0.995, True), (1.005, False)])
def test_force_together_with_bending(share, passes):
    """EN 1993-1-5 (7.2): eta_2 + 0.8 eta_1 up to 1.4."""
    web = bearing(IPE, 0.1, None)
    moment = share * 0.5 / 0.8 * IPE.shape.elastic_modulus * 235e3
    force = LocalForce(None, 2.0, share * 0.9 * web.resistance, "G", moment, None, web)
    sheet = Sheet("B1")
    sheet.section("Bearing")
    given, partial = take_profile(sheet, IPE), take_factors(sheet, IPE)
    line = force_beside_moment(sheet, given, partial, force, "at 2 m")
    assert line.passes is passes
    assert line.check("both")["ratio"] == pytest.approx(share)


def test_the_sample_beam():
    """22.28 kN/m over 5.7 m: 90.48 kNm, 63.5 kN; IPE 330 in S235, E = 210, G = 80.77 GPa."""
    found = uniform(5.7, 22.28, Conditions())
    assert (found.bending.value, found.shear.value) == pytest.approx((22.28 * 5.7**2 / 8, 22.28 * 2.85))
    assert [(each.segment.start, each.segment.end) for each in found.segments] == [(0.0, 5.7)]
    assert found.segments[0].twisting == pytest.approx(22.28 * 2.85)
    assert [each.support for each in found.forces] == [0, 1]
    assert (IPE_330.strength, IPE_330.modulus, IPE_330.shear_modulus) == (235e3, 210e6, 80.77e6)
