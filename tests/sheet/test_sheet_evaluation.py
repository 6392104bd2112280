"""Formulas worked out in floats, against sympy and against mpmath; dimensions held together."""

from __future__ import annotations

import math
from random import Random
from typing import Any

import mpmath
import pytest
import sympy
from formulas import LINES, SYMBOLS, random_formula
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from calcpack.job.errors import CalcpackError
from calcpack.sheet import (
    PI,
    Expression,
    Number,
    Operation,
    Quantity,
    Reference,
    choose,
    equal,
    greatest,
    in_unit,
    least,
    log,
    number,
    number_in,
    quantity,
    sin,
    sqrt,
    total,
)
from calcpack.sheet.evaluation import Measured, evaluate, evaluate_in, holds, in_base

VALUES = st.fixed_dictionaries({symbol: st.integers(1, 400).map(lambda n: n / 100) for symbol in SYMBOLS})


def with_mpmath(node: Expression, values: dict[str, float]) -> Any:
    match node:
        case Number():
            return mpmath.mpf(node.text)
        case Reference():
            return mpmath.mpf(values[node.symbol])
    assert isinstance(node, Operation)
    args = [with_mpmath(each, values) for each in node.args]
    table: dict[str, Any] = {
        "add": lambda a, b: a + b, "sub": lambda a, b: a - b, "mul": lambda a, b: a * b,
        "div": lambda a, b: a / b, "pow": lambda a, b: a**b, "neg": lambda a: -a, "sqrt": mpmath.sqrt,
        "abs": abs, "min": min, "max": max, "sum": lambda *a: sum(a), "sin": mpmath.sin, "cos": mpmath.cos,
        "tan": mpmath.tan, "atan": mpmath.atan, "exp": mpmath.exp, "log": mpmath.log,
    }  # fmt: skip
    return table[node.name](*args)


def with_sympy(node: Expression) -> Any:
    match node:
        case Number():
            return sympy.Rational(node.text)
        case Reference():
            return sympy.Symbol(node.symbol)
    assert isinstance(node, Operation)
    args = [with_sympy(each) for each in node.args]
    table: dict[str, Any] = {
        "add": lambda a, b: a + b, "sub": lambda a, b: a - b, "mul": lambda a, b: a * b,
        "div": lambda a, b: a / b, "pow": lambda a, b: a**b, "neg": lambda a: -a, "sqrt": sympy.sqrt,
        "abs": sympy.Abs, "min": sympy.Min, "max": sympy.Max, "sum": lambda *a: sum(a), "sin": sympy.sin,
        "cos": sympy.cos, "tan": sympy.tan, "atan": sympy.atan, "exp": sympy.exp,
    }  # fmt: skip
    return table[node.name](*args)


@settings(max_examples=300, deadline=None)
@given(st.integers(0, 10**9), VALUES)
def test_random_formulas_against_mpmath(seed: int, values: dict[str, float]) -> None:
    formula = random_formula(Random(seed), 5)
    known = {LINES[symbol]: Measured(value) for symbol, value in values.items()}
    with mpmath.workdps(60):
        try:
            expected = with_mpmath(formula, values)
        except (ZeroDivisionError, OverflowError):
            assume(False)
        assume(mpmath.isfinite(expected) and 1e-3 < abs(expected) < 1e12)
        try:
            found = evaluate(formula, known)
        except CalcpackError:  # a step on the way is too large, or too small, for a float
            assume(False)
        # a difference of near-equal terms, tan beside a pole: floats lose digits there, not all of them
        assert found.value == pytest.approx(float(expected), rel=1e-6)
        assert found.dimension == (0, 0)


def test_random_formulas_against_sympy() -> None:
    random = Random(5)
    values = {symbol: 0.5 + 0.25 * place for place, symbol in enumerate(SYMBOLS)}
    known = {LINES[symbol]: Measured(value) for symbol, value in values.items()}
    compared = 0
    for _ in range(120):
        formula = random_formula(random, 3)
        try:
            found = evaluate(formula, known).value
        except CalcpackError:
            continue
        exact = with_sympy(formula).evalf(
            40, subs={symbol: sympy.Float(value, 40) for symbol, value in values.items()}
        )
        assert found == pytest.approx(float(exact), rel=1e-9, abs=1e-12)
        compared += 1
    assert compared > 100


def test_units_of_random_products_against_their_exponents() -> None:
    random = Random(3)
    units = ("kN", "mm", "m", "kN/m", "kPa", "kN*m", "MPa", "1")
    known = {LINES[symbol]: in_base(1.5, unit) for symbol, unit in zip(SYMBOLS, units, strict=True)}
    kilonewton, metre = sympy.symbols("kN m", positive=True)

    def unit_of(node: Expression) -> Any:
        match node:
            case Reference():
                force, length = known[node.line].dimension
            case Quantity():
                force, length = in_base(1.0, node.unit).dimension
            case Operation(name="mul"):
                return unit_of(node.args[0]) * unit_of(node.args[1])
            case Operation(name="div"):
                return unit_of(node.args[0]) / unit_of(node.args[1])
            case Operation(name="pow", arguments=(base, Number(text=text))):
                return unit_of(base) ** int(text)
            case _:
                force, length = 0, 0
        return kilonewton**force * metre**length

    for _ in range(200):
        formula = random_formula(random, 4, products_only=True)
        force, length = evaluate(formula, known).dimension
        assert sympy.simplify(unit_of(formula) - kilonewton**force * metre**length) == 0


q, S, m, M = (Reference(name, f"1.0{place}") for place, name in enumerate(("q", "S", "m", "M"), start=1))
KNOWN = {
    "1.01": in_base(5.5, "kPa"), "1.02": in_base(4500.0, "mm"), "1.03": in_base(0.75, "1"),
    "1.04": in_base(-54.0, "kN*m"),
}  # fmt: skip


@pytest.mark.parametrize(
    ("formula", "unit", "value"),
    [
        (q * S / 2 * (3 - m**2) / 3, "kN/m", 5.5 * 4.5 / 2 * (3 - 0.75**2) / 3),
        (sqrt(abs(M) / q), "m", math.nan),  # m^(3/2) is no length
        ((abs(M) / q) ** (number(1) / 3), "mm", (54 / 5.5) ** (1 / 3) * 1000),
        (sqrt(q) * sqrt(q), "kPa", 5.5),
        (in_unit(0.17 * sqrt(number_in(q, "MPa")), "MPa"), "kPa", 0.17 * math.sqrt(0.0055) * 1000),
        (greatest(q, 0), "kPa", 5.5),
        (least(0, M), "kN*m", -54.0),
        (total(q, q, q), "kPa", 16.5),
        (choose(m >= 0.75, q, 2 * q), "kPa", 5.5),
        (choose(equal(m, 0.5), q, 2 * q), "kPa", 11.0),
        (PI * S**2 / 4, "m^2", math.pi * 4.5**2 / 4),
        (quantity(25, "kN/m^3") * S, "kPa", 112.5),
        (-M, "kN*m", 54.0),
        (sin(in_unit(number(30), "deg")) * q, "kPa", 2.75),
        (log(m), "1", math.log(0.75)),
        (S**-2, "1/m^2", 4.5**-2),
    ],
)
def test_values(formula: Expression, unit: str, value: float) -> None:
    if math.isnan(value):
        with pytest.raises(CalcpackError, match=r"force\^0·length\^3/2"):
            evaluate_in(formula, unit, KNOWN)
    else:
        assert evaluate_in(formula, unit, KNOWN) == pytest.approx(value, rel=1e-14)


@pytest.mark.parametrize(
    ("formula", "message"),
    [
        (q + S, "in 'q + S': q is a pressure and S is a length"),
        (q - 1, "in 'q - 1': q is a pressure and 1 is a plain number"),
        (total(q, q, S), "in 'q + q + S': q is a pressure and S is a length"),
        (least(q, S), "in 'min(q, S)': q is a pressure and S is a length"),
        (q <= S, "in 'q <= S': q is a pressure and S is a length"),
        (choose(m < 1, q, S), "in 'choose(m < 1, q, S)': q is a pressure and S is a length"),
        (sin(S), "in 'sin(S)': S is a length, where a plain number is needed"),
        (q**m, "in 'q^m': q is a pressure: its exponent has to be a small number"),
        (m**S, "in 'm^S': the exponent is a length, where a plain number is needed"),
        (number_in(S, "MPa"), "in 'number_in(S, MPa)': S is a length, not a pressure"),
        (in_unit(S, "MPa"), "in 'in_unit(S, MPa)': S is a length, where a plain number is needed"),
        (m / (m - m), "'m/(m - m)' divides by zero"),
        (sqrt(M), "'sqrt(M)' is no finite number"),
        ((m - 1) ** 0.5, "'(m - 1)^0.5' is no finite number"),
        (log(m - m), "'log(m - m)' is no finite number"),
        (number("1" + "0" * 39) ** 99, "is no finite number"),
        (Reference("x", "9.09") + 1, "there is no line 9.09 to take 'x' from"),
    ],
)
def test_what_cannot_be_worked_out(formula: Expression, message: str) -> None:
    with pytest.raises(CalcpackError) as caught:
        evaluate(formula, KNOWN)
    assert message in str(caught.value)


def test_a_unit_that_does_not_fit() -> None:
    with pytest.raises(CalcpackError, match="'q' is a pressure, but kN stands for a force"):
        evaluate_in(q, "kN", KNOWN)
    with pytest.raises(CalcpackError, match="'q' is a pressure, but no unit stands for a plain number"):
        evaluate_in(q, "1", KNOWN)


@pytest.mark.parametrize(
    ("relation", "left", "right", "expected"),
    [
        ("le", 0.1 + 0.2, 0.3, True),
        ("lt", 0.1 + 0.2, 0.3, False),
        ("ge", 0.3, 0.1 + 0.2, True),
        ("gt", 0.1 + 0.2, 0.3, False),
        ("eq", 0.1 + 0.2, 0.3, True),
        ("le", 1.0 + 1e-6, 1.0, False),
        ("eq", 1.0, 1.0 + 1e-6, False),
        ("ge", -1e-15, 0.0, True),
        ("ge", -1e-6, 0.0, False),
        ("lt", 1.0, 2.0, True),
        ("gt", 1.0, 2.0, False),
    ],
)
def test_comparisons(relation: str, left: float, right: float, expected: bool) -> None:
    assert holds(relation, left, right) is expected
