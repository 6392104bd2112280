"""The web under local forces: by hand, at its limits, lines against numbers."""

import math

import pytest
from beams_en1993 import analysed, profile

from calcpack.clauses.en1993.bearing import bearing
from calcpack.clauses.en1993.design import Conditions, LocalForce, design
from calcpack.clauses.en1993.lines_bearing import bearing as write
from calcpack.clauses.en1993.lines_bearing import force_beside_moment
from calcpack.clauses.en1993.lines_profile import take_factors, take_profile
from calcpack.clauses.en1993.rules import Factors
from calcpack.clauses.en1993.segments import segments
from calcpack.sheet import Sheet

IPE = profile("IPE 330")


def test_inside_the_beam_by_hand():
    # IPE 330, S235, ss = 100 mm: hw = 307 mm, m1 = 160/7.5 = 21.33, kF = 6,
    # Fcr = 0.9 x 6 x 210000 x 7.5^3 / 307 = 1558.3 kN; without m2 ly = 229.2 mm, lambda = 0.509 > 0.5, so
    # m2 = 0.02 (307/11.5)^2 = 14.25, ly = 100 + 23 (1 + 5.966) = 260.2 mm, lambda = 0.5425,
    # chi = 0.9217, FRd = 0.9217 x 260.2 x 7.5 x 235 = 422.7 kN
    found = bearing(IPE, 0.1, None)
    assert found.second == pytest.approx(14.25, abs=0.01)
    assert found.loaded * 1000 == pytest.approx(260.2, abs=0.1)
    assert found.critical == pytest.approx(1558.3, abs=0.5)
    assert found.slenderness == pytest.approx(0.5425, abs=2e-4)
    assert found.resistance == pytest.approx(422.7, abs=0.3)


def test_at_the_end_by_hand():
    # kF = 2 + 6 x 100/307 = 3.954, Fcr = 1027.0 kN, le = min(323.8, 100) = 100 mm; m2 = 14.25:
    # ly = min(260.2, 100 + 11.5 sqrt(10.67 + 75.61 + 14.25) = 215.3, 100 + 11.5 x 5.966 = 168.6) mm
    # lambda = sqrt(168.6 x 7.5 x 235 / 1027000) = 0.5379, chi = 0.9295, FRd = 276.2 kN
    found = bearing(IPE, 0.1, 0.0)
    assert found.coefficient == pytest.approx(3.954, abs=1e-3)
    assert found.effective == pytest.approx(0.1)
    assert found.loaded * 1000 == pytest.approx(168.6, abs=0.1)
    assert found.slenderness == pytest.approx(0.5379, abs=2e-4)
    assert found.resistance == pytest.approx(276.2, abs=0.3)


def test_stocky_web_is_not_reduced_and_m2_stays_out():
    hem = profile("HE 200 B")
    found = bearing(hem, 0.1, None)
    assert found.slenderness < 0.5
    assert (found.second, found.reduction) == (0.0, 1.0)
    # 100 + 2 x 15 (1 + sqrt(200/9)) = 271.4 mm; x 9 x 235
    assert found.resistance == pytest.approx(0.2714 * 0.009 * 235e3, rel=1e-3)


def test_effective_length_at_the_end_is_bounded_by_the_web():
    """A long bearing: l_e = kF E tw^2 / (2 fy hw) takes over."""
    found = bearing(IPE, 0.6, 0.0)
    assert found.coefficient == 6.0
    assert found.effective == pytest.approx(6 * 210e6 * 0.0075**2 / (2 * 235e3 * 0.307))
    assert found.effective < 0.6


def test_middle_one_of_the_three_lengths():
    """A short bearing at the end: (6.11) governs where l_e is small against the flange's part."""
    short = bearing(IPE, 0.0, 0.0)
    bent = 0.0115 * math.sqrt(160 / 7.5 / 2 + short.second)
    assert short.loaded == pytest.approx(bent)
    assert short.coefficient == 2.0


def test_longer_bearing_and_more_beam_beyond_help():
    assert bearing(IPE, 0.15, 0.0).resistance > bearing(IPE, 0.1, 0.0).resistance
    assert bearing(IPE, 0.1, 0.1).resistance > bearing(IPE, 0.1, 0.0).resistance
    assert bearing(profile("IPE 330", factors=Factors(gamma_M1=1.1)), 0.1, None).resistance == pytest.approx(
        bearing(IPE, 0.1, None).resistance / 1.1
    )


def worked(beam, spans, supports, fixed=(False, False), **conditions):
    return design(IPE, beam, segments(spans, supports), Conditions(**conditions), fixed)


def test_which_forces_press():
    beam = analysed([6.0, 5.0], 8.0, 12.0, points=[(2.0, 30.0), (2.0, 5.0), (6.0, 9.0)], overhang=1.0)
    spans, supports = [(0, 6), (6, 11), (11, 12)], [0, 6, 11]
    found = worked(beam, spans, supports).forces
    assert [(each.support, each.at) for each in found] == [(0, 0.0), (None, 2.0), (1, 6.0), (2, 11.0)]
    assert [each.beyond for each in found] == [0.0, None, None, None]
    assert found[1].force == pytest.approx(1.35 * 35)
    assert found[1].combination == "1.35 G + 1.5 Q"
    reactions = beam.of_limit("strength")[0].reactions_max
    assert [found[k].force for k in (0, 2, 3)] == pytest.approx(reactions)
    assert found[2].moment == pytest.approx(max(abs(beam.band("moment").lower.at(6.0)), 0))
    assert found[0].moment == 0.0
    none = worked(beam, spans, supports, bears_at_supports=False, bears_at_loads=False)
    assert none.forces == ()
    assert none.force is None
    loads = worked(beam, spans, supports, bears_at_supports=False)
    assert [each.at for each in loads.forces] == [2.0]
    assert [each.at for each in worked(beam, spans, supports, fixed=(True, False)).forces] == [2.0, 6.0, 11.0]


def test_short_overhang_counts_what_lies_beyond():
    beam = analysed([6.0], 8.0, overhang=0.25)
    found = worked(beam, [(0, 6), (6, 6.25)], [0, 6]).forces
    assert found[1].beyond == pytest.approx(0.25 - 0.05)


def test_force_with_bending_by_hand():
    beam = analysed([6.0, 5.0], 8.0, 12.0)
    found = worked(beam, [(0, 6), (6, 11)], [0, 6, 11])
    inner = found.interaction
    assert inner.support == 1
    # IPE 330: Wel,y 713.1 cm3 (tables, from memory)
    by_hand = inner.force / inner.bearing.resistance + 0.8 * inner.moment / (713.1e-6 * 235e3)
    assert found.together(inner) == pytest.approx(by_hand, rel=1e-3)


@pytest.mark.parametrize("name", ["IPE 330", "HE 200 B", "IPE 600"])
@pytest.mark.parametrize("beyond", [None, 0.0, 0.08])
@pytest.mark.parametrize("stiff", [0.05, 0.1, 0.6])
def test_lines_say_what_the_numbers_say(name, beyond, stiff):
    steel = profile(name, "S355", Factors(1.05, 1.1))
    force = LocalForce(0, 0.0, 150.0, "1.35 G + 1.5 Q", 60.0, beyond, bearing(steel, stiff, beyond))
    sheet = Sheet("B1")
    sheet.section("Bearing")
    given, partial = take_profile(sheet, steel), take_factors(sheet, steel)
    lines = write(sheet, given, partial, force, Conditions(bearing_length=stiff), "at the end")
    assert lines.resistance.value == pytest.approx(force.bearing.resistance, rel=1e-12)
    elastic = steel.shape.elastic_modulus * steel.strength / 1.05
    ratio = (150 / force.bearing.resistance + 0.8 * 60 / elastic) / 1.4
    for known in (lines, None):
        both = force_beside_moment(sheet, given, partial, force, "at the end", known)
        assert both.check("both")["ratio"] == pytest.approx(ratio, rel=1e-12)


def test_no_effective_length_inside_the_beam():
    assert bearing(IPE, 0.1, None).effective == 0.0
