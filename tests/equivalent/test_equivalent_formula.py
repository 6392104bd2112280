"""Formulas are written the way asked for, and say what they stand for."""

from __future__ import annotations

import pytest
import sympy

from calcpack.equivalent.formula import (
    add,
    beside,
    chain,
    grouped,
    integral,
    letter,
    minus,
    named,
    neat,
    of,
    over,
    power,
    root,
    runs,
    series,
    times,
    total,
    within,
)

W = letter(sympy.Symbol("w_test", positive=True), "w", "w", 1)
L = letter(sympy.Symbol("L_test", positive=True), "L", "L", 2)
M = letter(sympy.Symbol("m_test", positive=True), "m", "m", 3)
X = letter(sympy.Symbol("x_test", positive=True), "x", "x", 4)
I = letter(sympy.Symbol("i_test", integer=True), "i", "i", 5)  # noqa: E741


@pytest.mark.parametrize(
    ("value", "latex", "spoken"),
    [
        (sympy.Integer(7), "7", "7"),
        (sympy.Integer(0), "0", "0"),
        (sympy.Rational(5, 384), r"\frac{5}{384}", "5 over 384"),
        (L / W, r"\frac{L}{w}", "L over w"),
        (1 / L, r"\frac{1}{L}", "1 over L"),
        (-L, "-L", "minus L"),
        (X * L * W, "w L x", "w L x"),
        (5 * W * L**4 / 384, r"\frac{5 w L^{4}}{384}", "5 w L to the power 4 over 384"),
        (-(M**2) / 3, r"-\frac{m^{2}}{3}", "minus m squared over 3"),
    ],
)
def test_a_single_product(value: sympy.Expr, latex: str, spoken: str) -> None:
    form = of(value)
    assert (form.latex, form.spoken, form.value) == (latex, spoken, value)


@pytest.mark.parametrize("value", [L + W, sympy.sqrt(L), sympy.Symbol("never entered"), 1.5 * L])
def test_what_is_no_product_of_known_letters_is_refused(value: sympy.Expr) -> None:
    with pytest.raises(ValueError, match=r"not a"):
        of(value)


def test_terms_keep_the_order_asked_for() -> None:
    value = -(M**2) / 3 + 1
    assert series(value, (M,)).latex == r"1 - \frac{m^{2}}{3}"
    assert series(value, (M,)).value == value
    assert series(L - X, (X,)).latex == "L - x"
    assert series(X - L, (L,)).latex == "x - L"
    assert series(X - L, (X,)).latex == "x - L"  # a minus does not lead where it need not
    assert series(-X - L, (X,)).latex == "-L - x"
    assert series(1 + X + X**2, (X,), falling=True).latex == "x^{2} + x + 1"


def test_brackets_go_round_sums_only_and_square_ones_outside() -> None:
    inside = series(1 - M, (M,))
    assert times(of(W), of(L)).latex == "w L"
    assert times(of(W), inside).latex == r"w \left(1 - m\right)"
    assert times(of(L), add(times(of(W), inside), of(X))).latex == r"L \left[w \left(1 - m\right) + x\right]"
    assert power(inside, 2).latex == r"\left(1 - m\right)^{2}"
    assert power(of(L), 2).latex == "L^{2}"
    assert power(of(L / 2), 2).latex == r"\left(\frac{L}{2}\right)^{2}"
    assert minus(inside).latex == r"-\left(1 - m\right)"
    assert add(of(X), minus(inside)).latex == r"x - \left(1 - m\right)"
    assert over(of(W), inside).latex == r"\frac{w}{1 - m}"
    assert root(inside).latex == r"\sqrt{1 - m}"
    assert times(of(-W), inside).latex == r"-w \left(1 - m\right)"
    assert times(of(-W), of(-L)).latex == "w L"


def test_spoken_forms_tell_where_a_bracket_or_a_fraction_ends() -> None:
    inside = series(1 - M, (M,))
    assert times(of(W), inside).spoken == "w times open bracket 1 minus m close bracket"
    assert over(inside, of(L)).spoken == "the fraction 1 minus m over L"
    assert minus(of(X)).spoken == "minus x"


def test_coefficients_stay_together() -> None:
    value = sympy.expand(W * ((L - M) * X / 2 - X**3 / (6 * M)))
    form = grouped(value, W, X, (M,))
    assert form.latex == r"w \left[\frac{\left(L - m\right) x}{2} - \frac{x^{3}}{6 m}\right]"
    assert sympy.expand(form.value - value) == 0
    turned = grouped(sympy.expand(X - (L - M) * X**2 / 4), 1, X, (M,))
    assert turned.latex == r"x - \frac{\left(L - m\right) x^{2}}{4}"
    whole = grouped(sympy.expand(X + (L - M) * X**2 * 3), 1, X, (M,))
    assert whole.latex == r"x + 3 \left(L - m\right) x^{2}"


def test_a_perfect_power_is_written_as_one() -> None:
    assert neat((1 - M**2 / 5) ** 2, M).latex == r"\left(1 - \frac{m^{2}}{5}\right)^{2}"
    assert neat(1 - M**2 / 2 + M**3 / 8, M).latex == r"1 - \frac{m^{2}}{2} + \frac{m^{3}}{8}"
    assert neat(1 - M / 2, M).latex == r"1 - \frac{m}{2}"


def test_integrals_and_sums_are_worked_out() -> None:
    form = integral(of(W * X**2), of(X), of(sympy.Integer(0)), of(L))
    assert form.latex == r"\int_{0}^{L} w x^{2}\,\mathrm{d}x"
    assert form.value == W * L**3 / 3
    squares = total(of(I**2), I, of(sympy.Integer(1)), of(sympy.Integer(4)))
    assert squares.latex == r"\sum_{i=1}^{4} i^{2}"
    assert squares.value.doit() == 30


def test_a_chain_of_unequal_forms_is_refused() -> None:
    name = named("y", "y", sympy.Symbol("y"))
    row = chain(name, power(series(1 - M, (M,)), 2), series(1 - 2 * M + M**2, (M,)))
    assert row.latex == r"y = \left(1 - m\right)^{2} = 1 - 2 m + m^{2}"
    assert row.spoken.startswith("y equals open bracket")
    with pytest.raises(ValueError, match="differ"):
        chain(name, power(series(1 - M, (M,)), 2), series(1 - 2 * M + M**3, (M,)))


def test_equations_beside_each_other_and_their_range() -> None:
    row = within(chain(of(W), of(L)), of(sympy.Integer(0)), of(X), of(L))
    assert row.latex == r"w = L \quad \left(0 \le x \le L\right)"
    both = beside(row, chain(of(X), of(M)))
    assert both.latex.endswith(r", \quad x = m")
    assert both.equations == (sympy.Eq(W, L), sympy.Eq(X, M))


def test_sentences_are_cut_at_dollar_signs() -> None:
    assert runs("$a$ and $b$") == ({"math": "a"}, " and ", {"math": "b"})
    assert runs("no formula") == ("no formula",)
