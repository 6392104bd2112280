"""Span over depth and deflections, 7.4.2 and 7.4.3, by hand; beams of 300 x 500, d = 450, C30, B500."""

import math
from dataclasses import replace

import numpy as np
import pytest
from cases_en1992 import beam, concrete, face

from calcpack.clauses.en1992.along import TopZone
from calcpack.clauses.en1992.case import SpanCase
from calcpack.clauses.en1992.cracking import elastic
from calcpack.clauses.en1992.deflection import basic_span_depth, deflections, interpolation, span_factor
from calcpack.clauses.en1992.faces import Face
from calcpack.clauses.en1992.model import Outline
from calcpack.clauses.en1992.samples import C30
from calcpack.clauses.en1992.service import Stiffness, grid, span_deflections, span_depths, stiffness

ROOT = math.sqrt(30)
RHO_0 = 1e-3 * ROOT
FYD = 500e3 / 1.15


def required(moment, width=0.3):
    """As fyd = fcd b d (1 - root(1 - 2 K)), K = M/(b d2 fcd)."""
    share = moment / (width * 0.45**2 * 20e3)
    return 20e3 * width * 0.45 / FYD * (1 - math.sqrt(1 - 2 * share))


def lean(rho):
    """(7.16.a), K = 1, no bars required in compression."""
    over = RHO_0 / rho
    return 11 + 1.5 * ROOT * over + 3.2 * ROOT * (over - 1) ** 1.5


# Span over depth -----------------------------------------------------------------------------------------


def test_span_over_depth_of_a_simple_span():
    """M = 90 kNm; 628 mm2 provided, so times As/As,req below 1.5 (7.17)."""
    case = beam([6.0])
    (found,) = span_depths(case, face(case, 2), None)
    area = required(90.0)
    assert found.moment == pytest.approx(90.0)
    assert found.required == pytest.approx(area, rel=1e-9)
    assert (found.ratio, found.ratio_2) == (pytest.approx(area / (0.3 * 0.45), rel=1e-9), 0.0)
    assert found.basic == pytest.approx(lean(area / 0.135), rel=1e-9)
    assert found.stress == pytest.approx(2 * math.pi * 1e-4 / area, rel=1e-9)
    assert (found.factor, found.flanged, found.long) == (1.0, 1.0, 1.0)
    assert found.limit == pytest.approx(found.basic * found.stress)
    assert found.actual == pytest.approx(6.0 / 0.45)
    # 942 mm2 are more than 1.5 times what is required; weaker bars are worth more
    assert span_depths(case, face(case, 3), None)[0].stress == 1.5
    weak = beam([6.0], strength=replace(C30, fyk=550e3))
    assert span_depths(weak, face(weak, 2), None)[0].stress == pytest.approx(found.stress / 1.1)


@pytest.mark.parametrize(("width", "factor"), [(0.9, 1.0), (0.901, 0.8)])
def test_wide_flange(width, factor):
    """b over 3 b_w: times 0.8."""
    case = beam([6.0], outline=Outline(0.3, 0.5, width, 0.15))
    (found,) = span_depths(case, face(case, 2), None)
    assert found.flanged == factor
    assert found.limit == pytest.approx(found.basic * found.stress * factor)
    assert found.ratio == pytest.approx(required(90.0, width) / (width * 0.45), rel=1e-9)


def test_long_span():
    """8 m: times 7/8."""
    case = beam([8.0])
    (found,) = span_depths(case, face(case, 3, "25 mm"), None)
    assert found.long == pytest.approx(7 / 8)
    assert found.limit == pytest.approx(found.basic * found.stress * 7 / 8)
    assert span_depths(beam([7.0]), face(beam([7.0])), None)[0].long == 1.0


def test_spans_of_a_continuous_beam():
    """K of Table 7.4N; an overhang goes by the top bars, a span that only hogs has none."""
    case = beam([6.0, 6.0], overhang=2.0)
    bottom = face(case)
    top = Face(case, case.hogging, bottom.bars, case.hog, 0.0)
    found = span_depths(case, bottom, top)
    assert [(each.number, each.factor) for each in found] == [(0, 1.3), (1, 1.5), (2, 0.4)]
    assert found[2].moment == pytest.approx(20.0 * 2.0**2 / 2)
    assert [each.number for each in span_depths(case, bottom, None)] == [0, 1]
    hogs = beam([2.0], 20.0, overhang=3.0)
    assert [each.number for each in span_depths(hogs, face(hogs), top)] == [1]


def test_bars_required_in_compression():
    """M beyond the limit of x/d: rho' over rho_0 in (7.16.b), d2 that of the bars counted, or the cover."""
    case = beam([6.0], 100.0)
    x = 0.448 * 0.45
    most = 20e3 * 0.3 * 0.8 * x * (0.45 - 0.4 * x)
    bottom = face(case, 6, "25 mm")
    for compression, near in ((None, 0.04), (replace(bottom.bars, inset=0.05), 0.0625)):
        (found,) = span_depths(case, replace(bottom, compression=compression), None)
        depth = 0.5 - 0.0525
        x = 0.448 * depth
        most = 20e3 * 0.3 * 0.8 * x * (depth - 0.4 * x)
        push = (450.0 - most) / (depth - near)
        rho_2 = push / FYD / (0.3 * depth)
        rho = (20e3 * 0.3 * 0.8 * x + push) / FYD / (0.3 * depth)
        assert (found.ratio, found.ratio_2) == pytest.approx((rho, rho_2), rel=1e-9)
        by_hand = 11 + 1.5 * ROOT * RHO_0 / (rho - rho_2) + ROOT / 12 * math.sqrt(rho_2 / RHO_0)
        assert found.basic == pytest.approx(by_hand, rel=1e-9)


def test_both_equations_meet_at_the_reference_ratio():
    assert basic_span_depth(RHO_0, 0.0, 1.0, C30) == pytest.approx(11 + 1.5 * ROOT)
    assert basic_span_depth(RHO_0 * 1.001, 0.0, 1.0, C30) == pytest.approx(11 + 1.5 * ROOT / 1.001)
    assert basic_span_depth(RHO_0 / 2, 0.0, 1.0, C30) == pytest.approx(11 + 3 * ROOT + 3.2 * ROOT)


def test_factors_for_the_way_a_span_is_held():
    """Table 7.4N."""
    national = beam([6.0]).national
    ways = {("simple", "simple"): 1.0, ("continuous", "simple"): 1.3, ("simple", "continuous"): 1.3,
            ("continuous", "continuous"): 1.5, ("free", "continuous"): 0.4}  # fmt: skip
    assert {way: span_factor(*way, national) for way in ways} == ways


# Curvature and deflection --------------------------------------------------------------------------------


def test_interpolation_between_uncracked_and_cracked():
    """(7.19): nothing below the cracking moment, 1 - beta (M_cr/M)2 from there on."""
    found = interpolation(np.array([0.0, 19.999, 20.0, 40.0, -40.0]), 20.0, 0.5)
    assert found == pytest.approx([0.0, 0.0, 0.5, 0.875, 0.875])
    assert interpolation(np.array([20.0, 40.0]), 20.0, 1.0) == pytest.approx([0.0, 0.75])


def test_an_overhang_of_two_places():
    """kappa = 1/m: from the slope -1/2 at 1 m straight and bent by half: -1/2 - 1/2 below, so upward 1."""
    found = deflections(np.array([0.0, 0.5, 1.0, 2.0]), np.array([1.0, 1.0, 1.0, 1.0]), (0.0, 1.0))
    assert found == pytest.approx([0.0, 0.125, 0.0, -1.0])


def test_uncracked_beam():
    """5 q L4/384 over E/(1 + phi) and the transformed section, and L2/8 of the shrinkage's curvature."""
    case = beam([6.0], 2.0)
    bottom = face(case)
    (found,) = span_deflections(case, bottom, None, bottom, ())
    area, ratio = bottom.bars.area, 200 / 11
    extra = (ratio - 1) * area
    x = (0.15 * 0.25 + extra * 0.45) / (0.15 + extra)
    inertia = 0.3 * 0.5**3 / 12 + 0.15 * (x - 0.25) ** 2 + extra * (0.45 - x) ** 2
    bent = 5 * 2.0 * 6.0**4 / 384 / (11e6 * inertia)
    shrunk = 4e-4 * ratio * area * (0.45 - x) / inertia * 6.0**2 / 8
    assert found.total == pytest.approx(bent + shrunk, rel=1e-5)
    assert (found.at, found.zeta, found.moment) == (3.0, 0.0, pytest.approx(9.0))
    assert found.limit == pytest.approx(6.0 / 250)
    assert (found.live, found.live_limit) == (None, None)


def test_cracked_beam_lasting_and_live():
    """The unit-load integral of the curvatures; lasting with beta = 0.5 and phi, live with beta = 1 without."""
    case = beam([6.0], 20.0, 12.0, limits=(500.0, 250.0))
    bottom = face(case)
    (found,) = span_deflections(case, bottom, None, bottom, ())
    x = (np.arange(20_000) + 0.5) / 20_000 * 3.0
    both, dead = (q * x * (6.0 - x) / 2 for q in (32.0, 20.0))

    def kappa(moment, zeta, creep, shrinkage):
        section = elastic(case.sagging, C30, bottom.bars.area, 0.45, creep)
        modulus = 33e6 / (1 + creep)
        parts = [
            moment / (modulus * inertia) + shrinkage * section.ratio * first / inertia
            for inertia, first in ((section.inertia_1, section.first_1), (section.inertia_2, section.first_2))
        ]
        return zeta * parts[1] + (1 - zeta) * parts[0]

    def zeta(moment, beta):
        cracking = 2900 * 0.3 * 0.5**2 / 6
        return np.where(moment < cracking, 0.0, 1 - beta * (cracking / moment) ** 2)

    def at_midspan(curvature):
        return float((curvature * x).sum()) * 3.0 / 20_000

    lasting = at_midspan(kappa(dead, zeta(dead, 0.5), 2.0, 4e-4))
    cracked = zeta(both, 1.0)
    live = at_midspan(kappa(both, cracked, 0.0, 0.0)) - at_midspan(kappa(dead, cracked, 0.0, 0.0))
    assert found.total == pytest.approx(lasting, rel=2e-4)
    assert found.live == pytest.approx(live, rel=2e-4)
    assert found.zeta == pytest.approx(1 - 0.5 * (36.25 / 90.0) ** 2, rel=1e-6)
    assert found.live_limit == pytest.approx(6.0 / 500)


def test_short_loads_neither_creep_nor_shrink():
    case = beam([6.0])
    bottom = face(case)
    short, lasting = (stiffness(case, bottom, None, bottom, (), creep) for creep in (0.0, 2.0))
    assert (short.modulus, short.shrinkage, short.sagging.ratio) == (33e6, 0.0, pytest.approx(200 / 33))
    assert (lasting.modulus, lasting.shrinkage) == (11e6, 4e-4)
    assert lasting.sagging.ratio == pytest.approx(200 / 11)


def test_sections_along_a_cantilever():
    """All top bars over 1 m of 2 m, then those that run through: kappa1 x 1 x 1.5 + kappa2 x 1 x 0.5."""
    case = beam([], overhang=2.0, fixed=(True, False))
    many, few = (elastic(case.hogging, C30, area, 0.45, 0.0) for area in (2e-3, 5e-4))
    zone = TopZone(0.0, 1.0, 0.0, 1.0)
    x = np.linspace(0.0, 2.0, 2001)
    moment = np.full_like(x, -100.0)
    all_cracked = (np.ones_like(x),) * 3
    along = Stiffness(few, many, few, (zone,), 33e6, 0.0)
    first, second = (100.0 / (33e6 * each.inertia_2) for each in (many, few))
    line = along.line(case, x, moment, all_cracked)
    assert float(line[-1]) == pytest.approx(first * 1.5 + second * 0.5, rel=1e-3)
    whole = Stiffness(many, many, few, (), 33e6, 0.0)
    assert float(whole.line(case, x, moment, all_cracked)[-1]) == pytest.approx(second * 2.0, rel=1e-6)


def test_overhang_and_the_span_beside_it():
    """Twice the overhang over 250; its moment and zeta are those of the hogging at the support."""
    case = beam([4.0], 20.0, 5.0, overhang=2.5, limits=(500.0, 250.0))
    bottom = face(case)
    top = Face(case, case.hogging, bottom.bars, case.hog, 0.0)
    span, over = span_deflections(case, bottom, top, top, ())
    assert (span.limit, over.limit) == (pytest.approx(4.0 / 250), pytest.approx(5.0 / 250))
    assert (span.live_limit, over.live_limit) == (pytest.approx(4.0 / 500), pytest.approx(5.0 / 500))
    assert over.moment == pytest.approx(20.0 * 2.5**2 / 2)
    assert over.zeta == pytest.approx(1 - 0.5 * (36.25 / 62.5) ** 2)
    assert over.at == 6.5
    assert (over.x[0], over.x[-1]) == (4.0, 6.5)
    # the span hogs all along: it goes by its largest hogging moment
    hogs = beam([2.0], 20.0, overhang=2.5)
    first = span_deflections(hogs, bottom, top, top, ())[0]
    assert first.moment == pytest.approx(62.5)
    assert first.zeta == pytest.approx(over.zeta)


def test_places_to_integrate_over():
    """400 parts of the shortest span; supports and breaks among them; a span holds its ends."""
    case = beam([6.0, 3.0], points=((1.2345, 10.0),))
    x = grid(case, case.service[0], 400)
    assert len(x) == 1202
    assert {0.0, 1.2345, 6.0, 9.0} <= set(x.tolist())
    bottom = face(case)
    found = span_deflections(case, bottom, None, bottom, ())
    assert [len(each.x) for each in found] == [802, 401]
    assert list(SpanCase(1.0, 2.0, "", "").holds(np.array([0.99, 1 - 1e-10, 1.5, 2 + 1e-10, 2.01]))) == [
        False, True, True, True, False,
    ]  # fmt: skip


def test_creep_and_shrinkage_of_high_strength_concrete():
    """C70: alpha_e = 200 (1 + phi)/E_cm, M_cr = f_ctm b h2/6 with f_ctm = 2.12 ln(1 + 78/10)."""
    section = elastic(Outline(0.3, 0.5, 0.3, 0.0), concrete(70.0), 1e-3, 0.45, 1.5)
    assert section.ratio == pytest.approx(200 * 2.5 / 33)
    assert section.cracking == pytest.approx(2.12 * math.log(8.8) * 1e3 * 0.3 * 0.25 / 6)
