"""Published equivalent loads, fixed-end moments and deflections against our own.

What is published, with its sources: shared/verification/equivalent.toml. A formula is met to 1e-12, a printed
decimal to half a unit of its last place.
"""

from __future__ import annotations

import math
from fractions import Fraction

import pytest
import sympy
from published import published, wrong

from calcpack.equivalent import comparison, under_panel
from calcpack.equivalent.derive import derivation
from calcpack.equivalent.letters import PRESSURE, RATIO, SHORT
from calcpack.statics import LineLoad
from calcpack.verification.comparison import Comparison
from calcpack.verification.ours.beams import loads_of
from calcpack.verification.ours.equivalent import panel_loads, span_row
from calcpack.verification.reckon import compare_row

EXACT = 1e-12


def same(value: float, expected: float) -> bool:
    return math.isclose(value, expected, rel_tol=EXACT)


# --- equivalent loads of the beams under a panel -----------------------------------------------------


@pytest.mark.parametrize("row", published("equivalent", "beams under panels"))
def test_published_rules_for_beams_under_panels(row) -> None:
    """By the sums over the load, by the closed form, by what sympy derives."""
    assert wrong(row) == []
    q, short, long, kind = row.number("q"), row.number("S"), row.number("L"), row.text("kind")
    for each, shape in zip(compare_row(row), ("triangle", "trapezoid"), strict=True):
        under_long = shape == "trapezoid"
        assert same(under_panel(kind, q, short, long, under_long=under_long), each.value)
        shown = derivation(shape, kind).result.rhs
        assert same(float(shown.subs({PRESSURE: q, SHORT: short, RATIO: short / long})), each.value)
        # a millimetre of a side is not lost in the tolerance
        assert not same(under_panel(kind, q, short - 0.001, long, under_long=under_long), each.value)


def test_the_published_moment_rule_is_short_of_no_moment_but_not_the_shear_rule() -> None:
    """What the two published pairs leave open: load matched for shear is 8 to 25 % short in moment."""
    for long, least in ((4.0, 0.75), (6.0, 0.78), (8.0, 0.81)):
        table = comparison(long, panel_loads(5, 4, long)[1])
        assert table.row("moment").unsafe == ()
        assert table.row("shear").unsafe == ("moment", "deflection", "end_moment")
        assert least <= table.row("shear").moment <= least + 0.04


# --- shapes in tables --------------------------------------------------------------------------------


@pytest.mark.parametrize("row", published("equivalent", "single spans"))
def test_tables_of_single_spans(row) -> None:
    assert wrong(row) == []


@pytest.mark.parametrize("row", published("equivalent", "single spans"))
def test_a_load_a_little_off_is_noticed(row) -> None:
    """A millionth more load where the entry is a formula; where it is a decimal, more than its rounding."""
    (each,) = compare_row(row)
    size = 1e-6 if each.is_formula else 0.2
    more = (LineLoad(0, 0.25, size, size), LineLoad(0.25, 0.3, 0, 5 * size))
    off = span_row(row, (*loads_of(row.topic, row.text("loads")), *more))
    assert not Comparison(row, each.quantity, off["published"]).holds


def test_the_derived_end_moments_are_the_tabulated_ones() -> None:
    """5 w L²/96 and (w L²/12)(1 - 2α² + α³), read off the derivations: w_eq L²/12 with α = m/2."""
    alpha = sympy.Symbol("alpha")
    factor = derivation("trapezoid", "fixed-end moment").factor
    assert sympy.expand(factor.subs(RATIO, 2 * alpha) - (1 - 2 * alpha**2 + alpha**3)) == 0
    triangle = derivation("triangle", "fixed-end moment").factor
    assert triangle / 12 == sympy.Rational(5, 96)
    deflection = derivation("trapezoid", "deflection").factor
    tabulated = (25 - 40 * alpha**2 + 16 * alpha**4) / sympy.Integer(1920)
    assert sympy.expand(deflection.subs(RATIO, 2 * alpha) * sympy.Rational(5, 384) - tabulated) == 0
    assert derivation("triangle", "deflection").factor * sympy.Rational(5, 384) == sympy.Rational(1, 120)


@pytest.mark.parametrize("row", published("equivalent", "triangle"))
def test_the_triangle_in_fractions(row) -> None:
    """From the tables' own entries: (1/4)/(1/2), (1/12)/(1/8), (1/120)/(5/384), (5/96)/(1/12)."""
    assert wrong(row) == []
    expected = Fraction(row.text("factor").removeprefix("= "))
    assert Fraction(str(derivation("triangle", row.text("kind")).factor)) == expected
