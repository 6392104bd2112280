"""I-sections: fillets integrated strip by strip, torsion by hand from the two fits; stretches of diagrams."""

from __future__ import annotations

import itertools
import math

import numpy as np
import pytest
from scipy.integrate import quad

from calcpack.clauses.steel import held_points, i_section, segment_moments, stretch, torsion_constant
from calcpack.job.library import rolled_sections
from calcpack.statics import Curve

# Fillets so large that none of their terms is lost beside flanges and web [m]
DEPTH, WIDTH, WEB, FLANGE, RADIUS = 0.200, 0.180, 0.010, 0.012, 0.060


def made_up(**changes):
    sizes = {"depth": DEPTH, "width": WIDTH, "web": WEB, "flange": FLANGE, "root_radius": RADIUS, **changes}
    return rolled_sections()["w18x50"].model_copy(update={"dimensions": sizes})


def width_at(height):
    """Of the upper half, from the centre up."""
    top = DEPTH / 2 - FLANGE
    if height > top:
        return WIDTH
    into = height - (top - RADIUS)  # into the fillets, from where they begin
    return WEB + 2 * (RADIUS - math.sqrt(RADIUS**2 - into**2) if into > 0 else 0.0)


def over_the_section(integrand):
    top = DEPTH / 2 - FLANGE
    edges = (0.0, top - RADIUS, top, DEPTH / 2)
    return 2 * sum(quad(integrand, a, b, epsabs=1e-15, epsrel=1e-11)[0] for a, b in itertools.pairwise(edges))


def test_fillets_in_the_weak_inertia():
    strips = over_the_section(lambda y: width_at(y) ** 3 / 12)
    assert i_section(made_up()).weak_inertia == pytest.approx(strips, rel=1e-8)


def test_fillets_in_the_plastic_modulus():
    strips = over_the_section(lambda y: width_at(y) * y)
    assert i_section(made_up()).plastic_modulus == pytest.approx(strips, rel=1e-8)


def test_warping_and_radii_by_hand():
    """C_w = I_f h_o² / 2 with I_f = 12 x 180³ / 12 = 5.832e6 mm4 and h_o = 188 mm: 1.030631e11 mm6."""
    section = made_up()
    found = i_section(section)
    assert found.between_flanges == pytest.approx(0.188)
    assert found.warping == pytest.approx(1.03063104e-7)
    assert found.elastic_modulus == pytest.approx(section.inertia / 0.1)
    assert found.weak_radius == pytest.approx(math.sqrt(found.weak_inertia / section.area))
    squared = math.sqrt(found.weak_inertia * 1.03063104e-7) / (section.inertia / 0.1)
    assert found.shear_radius == pytest.approx(math.sqrt(squared))
    assert (found.flat_web, found.flange_outstand) == pytest.approx((0.200 - 0.144, 0.085 - 0.060))


# d 400, b 200, t_w 10, t_f 20, r 30 mm: strips 2 x 200 x 20³ / 3 = 1 066 666.667 and 360 x 10³ / 3 = 120 000,
# the ends lack 0.420 x 20⁴ = 67 200; together 1 119 466.667 mm4
SIZES = (0.400, 0.200, 0.010, 0.020, 0.030)


def test_torsion_of_american_sections_by_hand():
    """El Darwish and Johnston, disc (50² + 10 x 32.5) / 80 = 35.3125 mm, its fourth power 1 554 940.8.

    -0.042 + 0.2204 / 2 + 0.1355 x 1.5 - 0.0865 x 0.75 - 0.0725 / 4 = 0.18845.
    """
    by_hand = 1_119_466.667 + 2 * 0.18845 * 35.3125**4
    assert torsion_constant(*SIZES) * 1e12 == pytest.approx(by_hand, rel=1e-8)


def test_torsion_of_european_sections_by_hand():
    """Disc (35² + 50² - 30²) / 80 = 35.3125 mm as well; 10/20 x (0.145 + 0.1 x 1.5) = 0.1475."""
    by_hand = 1_119_466.667 + 2 * 0.1475 * 35.3125**4
    assert torsion_constant(*SIZES, european=True) * 1e12 == pytest.approx(by_hand, rel=1e-8)


def test_a_section_follows_the_fit_of_its_own_tables():
    american, european = (made_up().model_copy(update={"source": said}) for said in ("AISC", "EN 10365"))
    sizes = (DEPTH, WIDTH, WEB, FLANGE, RADIUS)
    assert i_section(american).torsion == torsion_constant(*sizes)
    assert i_section(european).torsion == torsion_constant(*sizes, european=True)


def test_without_fillets():
    """Three rectangles of round sizes: Z = 180 x 12 x 188 + 10 x 176² / 4 = 483 520 mm3."""
    found = i_section(made_up(root_radius=0.0))
    assert found.plastic_modulus == pytest.approx(483_520e-9)
    assert found.weak_inertia == pytest.approx((2 * 12 * 180**3 + 176 * 10**3) / 12 * 1e-12)


def test_a_stretch_far_from_the_start():
    """2 up to 100 m, from there 5 + 3 (x - 100)."""
    curve = Curve(np.array([0.0, 100.0, 101.0]), np.array([[2.0, 0.0], [5.0, 3.0]]))
    part = stretch(curve, 100.0, 101.0)
    assert (part.at(100.0), part.at(101.0)) == pytest.approx((5.0, 8.0))
    assert stretch(curve, 10.0, 99.0).largest.value == pytest.approx(2.0)


def test_a_stretch_that_only_sags_or_only_hogs():
    """6 + x and its opposite on 2 m: nothing of the other sense."""
    for sign in (1.0, -1.0):
        found = segment_moments(Curve(np.array([0.0, 2.0]), sign * np.array([[6.0, 1.0]])), 0.0, 2.0)
        assert (found.sagging.value, found.hogging.value) == ((8.0, 0.0) if sign > 0 else (0.0, -8.0))
        assert found.largest.value == sign * 8.0


def test_points_held_close_together():
    assert held_points(0.0, 0.02, every=0.005) == pytest.approx([0.0, 0.005, 0.01, 0.015, 0.02])
