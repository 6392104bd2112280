"""Development and where bars end: what a sheet writes, worked by hand to the standard's own words."""

import math

import pytest
from aci_samples import KIP, KIP_FT, KSI, PSI, begin, bounded, group

from calcpack.clauses.aci318.arrangement import Group
from calcpack.clauses.aci318.detailing import (
    Development,
    End,
    available,
    is_small,
    state_development,
    state_end,
    state_service_stress,
    state_spacing,
    state_top_length,
)
from calcpack.clauses.aci318.flexure import BendingLines
from calcpack.clauses.aci318.strength import INCH, development_length
from calcpack.clauses.bars import Bar


def developed(size, count, width, fc, *, fy=60, top=False, cover=1.5):
    sheet, materials, box = begin(fc, fy, width=width, cover=cover)
    bars = group(count, size, width, 20, cover)
    stone = sheet.take("d_agg", 19.05, "mm", "", "test")
    layer = state_spacing(sheet, box, bars, stone, state_service_stress(sheet, materials), "bottom")
    outermost = sheet.take("d_t", bars.outermost * 1000, "mm", "", "test")
    return sheet, state_development(sheet, materials, box, bars, layer, outermost, top=top)


def test_confinement_counts_up_to_2_5():
    """25.4.2.4: No. 6, 2.25 in to the face, bars 5.75 in apart: min(2.25, 2.875) / 0.75 = 3, taken as 2.5."""
    sheet, found = developed("#6", 3, 16, 3600)
    ratio = next(line for line in sheet.lines.values() if line.symbol == "kappa_b")
    assert ratio.value == pytest.approx(2.5)
    # 3/40 x 60000 / 60 x 0.8 / 2.5 x 0.75 = 18 in
    assert found.length.value / 25.4 == pytest.approx(18.0)
    number = development_length(0.75 * INCH, 3600 * PSI, 60 * KSI, 3.0, top=False, small=True)
    assert number / INCH == pytest.approx(18.0)


def test_half_the_distance_of_close_bars_confines_less():
    """No. 8, 3 in 12 in: 3.625 in apart, 1.8125 in against 2.375 in to the face; 75 in / 1.8125 at 3600 psi."""
    _, found = developed("#8", 3, 12, 3600)
    assert found.length.value / 25.4 == pytest.approx(75 / 1.8125)


@pytest.mark.parametrize(("fc", "inches", "least"), [(3650, 12.0, True), (3550, 12.0842, False)])
def test_the_least_length_is_written_where_it_counts(fc, inches, least):
    """25.4.2.1(b), 12 in: No. 4 needs 3/40 x 60000 x 0.8 / 2.5 x 0.5 = 720 in over the root, 60.42 and 59.58."""
    _, found = developed("#4", 3, 16, fc)
    assert found.length.value / 25.4 == pytest.approx(inches, rel=1e-5)
    assert bounded(found.length) is least
    number = development_length(0.5 * INCH, fc * PSI, 60 * KSI, 2.5, top=False, small=True)
    assert number / INCH == pytest.approx(inches, rel=1e-5)


@pytest.mark.parametrize(
    ("diameter", "small"), [(0.01905, True), (0.019, True), (0.0192, False), (0.02, False)]
)
def test_small_bars_are_no_6_and_thinner(diameter, small):
    """Table 25.4.2.5, ψs = 0.8: No. 6 is 3/4 in, 19 mm in SI."""
    bars = group(2, "#6", 12, 20)
    assert is_small(Group(Bar("x", diameter, 1e-4), bars.layers, bars.cage)) is small


LAYER = [("M_u", 100, "kN*m"), ("A_s", 1500, "mm^2"), ("d", 254, "mm"), ("d_t", 254, "mm")]


def shallow(diameter=1.27, length=40.0):
    """M_n = 50 kip ft at d = 10 in; a No. 10 bar, 12 diameters of which are 15.24 in; lengths in in."""
    sheet, *_ = begin()
    values = [*LAYER, ("M_n", 50 * KIP_FT, "kN*m"), ("phi", 0.9, "1")]
    lines = BendingLines(*(sheet.take(symbol, value, unit, "", "test") for symbol, value, unit in values), ())
    lengths = (sheet.take(symbol, value * 25.4, "mm", "", "test")
               for symbol, value in (("ell_d", length), ("d_b", diameter)))  # fmt: skip
    return sheet, lines, Development(*lengths)


@pytest.mark.parametrize(
    ("kind", "beyond", "inches"),
    [("confined", 0.0, 39.0), ("confined", 4.0, 43.0), ("support", 0.0, 30.0), ("support", 4.0, 34.0),
     ("inflection", 0.0, 45.24)],
)  # fmt: skip
def test_where_the_moment_rises_by_the_shear(kind, beyond, inches):
    """9.7.3.8.3 with V_u = 20 kip: 600 / 20 = 30 in, 1.3 times that where the reaction presses on the ends.

    At a point of inflection the greater of d (10 in) and 12 bar diameters (15.24 in) is added.
    """
    end = End(20 * KIP, "place", kind, beyond * INCH)
    assert available(end, 50 * KIP_FT, 10 * INCH, 1.27 * INCH) / INCH == pytest.approx(inches)
    sheet, lines, found = shallow()
    ((name, line),) = state_end(sheet, lines, found, end, "A")
    assert name == f"development, {'inflection' if kind == 'inflection' else 'support'}"
    assert line.check(name)["capacity"] / 25.4 == pytest.approx(inches)
    assert line.check(name)["demand"] / 25.4 == pytest.approx(40.0)


def test_a_deep_section_runs_on_by_its_own_depth():
    end = End(20 * KIP, "place", "inflection")
    assert available(end, 50 * KIP_FT, 20 * INCH, 1.0 * INCH) / INCH == pytest.approx(50.0)


def test_bars_end_at_a_support_where_nothing_else_is_said():
    """Straight ends with no embedment past the centre: M_n / V_u alone."""
    assert available(End(20 * KIP, "place", "support"), 50 * KIP_FT, 0.25, 0.03) / INCH == pytest.approx(30.0)


def test_without_shear_the_moment_does_not_rise():
    for shear in (0.0, -5.0):
        assert available(End(shear, "place", "support"), 50.0, 0.25, 0.03) == math.inf
    assert available(End(0.005, "place", "support"), 50.0, 0.25, 0.03) == pytest.approx(10_000.0)


def test_top_bars_of_a_shallow_section_run_on_by_twelve_diameters():
    """9.7.3.8.4: 60 in of hogging, then the greatest of d = 10, 12 d_b = 15.24 and 160/16 = 10 in."""
    sheet, lines, found = shallow()
    lengths = (sheet.take(symbol, value * 0.0254, "m", "", "test")
               for symbol, value in (("x_h", 60.0), ("ell_n", 160.0), ("w_2", 8.0)))  # fmt: skip
    line = state_top_length(sheet, lines, found, *lengths)
    assert line.value / 0.0254 == pytest.approx(75.24)
