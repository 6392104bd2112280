"""Formulas as data: written in order, stored, read back, and nothing hostile let in."""

from __future__ import annotations

import json
import time
from collections.abc import Callable
from decimal import Decimal
from random import Random
from typing import Any

import numpy as np
import pytest
from formulas import LINES, random_formula
from hypothesis import given, settings
from hypothesis import strategies as st

from calcpack.job.errors import CalcpackError
from calcpack.sheet import (
    Number,
    Operation,
    Quantity,
    Reference,
    choose,
    equal,
    expression,
    from_json,
    in_unit,
    indexed,
    measured,
    number,
    number_in,
    quantity,
    sqrt,
    to_json,
    total,
)
from calcpack.sheet.expression import DEEPEST, LARGEST, references
from calcpack.sheet.symbols import read_symbol
from calcpack.sheet.words import plain, spoken, spoken_value

q, S, m = Reference("q", "2.01"), Reference("S", "1.02"), Reference("m", "3.04")


@settings(max_examples=300, deadline=None)
@given(st.integers(0, 10**9), st.booleans())
def test_round_trip(seed: int, products_only: bool) -> None:
    formula = random_formula(Random(seed), 5, products_only=products_only)
    text = json.dumps(to_json(formula))
    assert from_json(json.loads(text), LINES) == formula


def test_the_writing_order_is_kept() -> None:
    assert plain(q * S / 2 * (3 - m**2) / 3) == "q*S/2*(3 - m^2)/3"
    assert plain(S * q + q * S) == "S*q + q*S"
    assert plain(2 - q - (S - m)) == "2 - q - (S - m)"
    assert plain(q / (S * m) * (q / S)) == "q/(S*m)*(q/S)"
    assert plain(-((q + 1) ** 2)) == "-(q + 1)^2"
    assert plain((-q) ** 2) == "(-q)^2"
    assert plain((q**2) ** 3) == "(q^2)^3"
    assert plain(total(q, S - m, -q)) == "q + (S - m) + (-q)"
    assert plain(2 * q <= 1 / S) == "2*q <= 1/S"
    assert plain(choose(q > 1, 2**q, abs(S))) == "choose(q > 1, 2^q, abs(S))"
    assert plain(in_unit(number_in(q, "MPa"), "MPa")) == "in_unit(number_in(q, MPa), MPa)"
    assert plain(1 + quantity(2.5, "kN/m^3")) == "1 + 2.5 kN/m³"


def test_spoken() -> None:
    assert spoken(q / 2 * (3 - m**2)) == "q over 2 times (3 minus m squared)"
    assert spoken(choose(q > 1, sqrt(S), -S)) == "the square root of S if q is more than 1, otherwise minus S"
    assert spoken(total(q, S)) == "q plus S"
    assert spoken(measured(12.3456789, "kN/m")) == "12.35 kilonewtons per metre"
    assert spoken(number_in(Reference("f'_c", "1.01"), "MPa") ** 0.5) == (
        "(f prime c in megapascals) to the power 0.5"
    )
    assert spoken_value("−8.36 × 10⁻⁶ m⁴") == (
        "minus 8.36 times 10 to the power minus 6 metres to the power 4"
    )
    assert spoken_value("45.0°") == "45.0 degrees"


def test_what_python_adds_up() -> None:
    assert sum([q, S]) == q + S
    assert total([q, S]) == total(q, S)


@pytest.mark.parametrize(
    ("term", "text"),
    [(2, "2"), (2.0, "2"), (0.85, "0.85"), (1e-5, "0.00001"), (Decimal("1.50"), "1.50"), ("0.70", "0.70")],
)
def test_numbers_as_printed(term: Any, text: str) -> None:
    assert expression(term) == Number(text)


def test_numbers_of_numpy() -> None:
    assert expression(np.float64(0.85)) == Number("0.85")
    assert expression(np.int64(3)) == Number("3")
    assert np.float64(2.0).item() * q == 2 * q


@pytest.mark.parametrize(
    "term", [True, None, float("nan"), float("inf"), "1e5", "x", "__import__", 1 / 3, [1], b"1"]
)
def test_what_is_no_number(term: Any) -> None:
    with pytest.raises(CalcpackError):
        expression(term)


def test_measured_values_keep_every_digit() -> None:
    for value in (1 / 3, 1e-9, 123456.789012345, 2.0):
        node = measured(value, "kN")
        assert isinstance(node, Quantity)
        assert float(node.text) == value
    assert measured(-1.5, "kN") == -Quantity("1.5", "kN", rounded=True)
    assert measured(1.5, "kN", rounded=False) == Quantity("1.5", "kN")
    with pytest.raises(CalcpackError):
        measured(float("nan"), "kN")
    with pytest.raises(CalcpackError):
        measured(1.0, "furlong")


def test_a_comparison_is_not_a_condition_of_python() -> None:
    with pytest.raises(CalcpackError, match="neither true nor false"):
        bool(q <= S)
    with pytest.raises(CalcpackError, match="neither true nor false"):
        _ = 1 <= q <= 2
    with pytest.raises(CalcpackError, match="cannot be a part of a formula"):
        _ = 1 + (q <= S)
    with pytest.raises(CalcpackError, match="first argument of 'choose' is a comparison"):
        choose(q, S, m)
    assert equal(q, S).name == "eq"


def test_one_symbol_for_two_lines_needs_an_index() -> None:
    with pytest.raises(CalcpackError) as caught:
        references(q + Reference("q", "2.02"))
    assert str(caught.value) == (
        "lines 2.01 and 2.02 are both called 'q' in one formula; give them an index: q_1, q_2"
    )
    with pytest.raises(CalcpackError, match="w_eq,1 and w_eq,2"):
        references(Reference("w_eq", "2.01") + Reference("w_eq", "2.02"))


def nested(depth: int) -> dict[str, Any]:
    tree: dict[str, Any] = {"number": "1"}
    for _ in range(depth):
        tree = {"op": "neg", "args": [tree]}
    return tree


ONE = {"number": "1"}
HOSTILE: list[Any] = [
    None,
    1,
    "q",
    [],
    {},
    {"op": "__import__", "args": [ONE]},
    {"op": "eval", "args": [ONE]},
    {"op": "add", "args": [ONE]},
    {"op": "add", "args": [ONE] * 3},
    {"op": "add", "args": "ab"},
    {"op": "add", "args": {"0": ONE, "1": ONE}},
    {"op": ["add"], "args": [ONE, ONE]},
    {"op": "add", "args": [ONE, ONE], "unit": "kN"},
    {"op": "add", "args": [ONE, ONE], "code": "x"},
    {"op": "in_unit", "args": [ONE]},
    {"op": "in_unit", "args": [ONE], "unit": "furlong"},
    {"op": "min", "args": [ONE] * 41},
    {"op": "sum", "args": []},
    {"op": "sum", "args": [ONE] * 201},
    {"op": "neg", "args": [{"op": "lt", "args": [ONE, ONE]}]},
    {"op": "choose", "args": [ONE, ONE, ONE]},
    {"number": 1},
    {"number": "1e999999999"},
    {"number": "-1"},
    {"number": "١"},
    {"number": "9" * 100},
    {"number": "nan"},
    {"quantity": "1", "unit": "kN^99"},
    {"quantity": "1"},
    {"symbol": "unknown"},
    {"symbol": "q", "line": "2.01"},
    {"symbol": r"q}\input{x}"},
    nested(DEEPEST),
    nested(20_000),
    {"op": "sum", "args": [{"op": "sum", "args": [ONE] * 200}] * 200},
]


@pytest.mark.parametrize("tree", HOSTILE, ids=range(len(HOSTILE)))
def test_hostile_trees_are_refused_at_once(tree: Any, allowed: Callable[[float], float]) -> None:
    begun = time.process_time()
    with pytest.raises(CalcpackError):
        from_json(tree, {"q": "2.01"})
    assert time.process_time() - begun < allowed(0.2)


def test_a_tree_as_large_as_may_be() -> None:
    assert from_json(nested(DEEPEST - 1), {}).depth == DEEPEST
    wide = {"op": "sum", "args": [{"op": "sum", "args": [ONE] * 198}] * 5}
    assert from_json(wide, {}).size == 1 + 5 * 199 <= LARGEST


def doubled(times: int) -> Any:
    formula: Any = q
    for _ in range(times):
        formula = formula + formula
    return formula


def lengthened(times: int) -> Any:
    formula: Any = q
    for _ in range(times):
        formula = formula + 1
    return formula


def test_a_formula_that_grows_and_grows_is_refused_before_it_is_written_out() -> None:
    assert doubled(8).size == 511
    with pytest.raises(CalcpackError, match="too large; work it out in several lines"):
        doubled(100)
    assert lengthened(DEEPEST - 1).depth == DEEPEST
    with pytest.raises(CalcpackError, match="too large"):
        lengthened(DEEPEST)


@pytest.mark.parametrize(
    ("written", "name", "latex", "said"),
    [
        ("w_eq", "w_eq", r"w_{\text{eq}}", "w eq"),
        ("φ", "phi", r"\phi", "phi"),
        ("γ_G,sup", "gamma_G,sup", r"\gamma_{\text{G,sup}}", "gamma G sup"),
        ("f'_c", "f'_c", r"f'_{\text{c}}", "f prime c"),
        ("f′_c", "f'_c", r"f'_{\text{c}}", "f prime c"),
        ("epsilon_cu", "epsilon_cu", r"\varepsilon_{\text{cu}}", "epsilon cu"),
        ("lambdabar_LT", "lambdabar_LT", r"\bar{\lambda}_{\text{LT}}", "lambda bar LT"),
        ("DL", "DL", r"\text{DL}", "DL"),
        ("bar", "bar", r"\text{bar}", "bar"),
        ("Delta w_1", "Delta w_1", r"\Delta\,w_{\text{1}}", "Delta w 1"),
        ("ell", "ell", r"\ell", "ell"),
        ("sigma_phi", "sigma_phi", r"\sigma_{\text{φ}}", "sigma phi"),
    ],
)
def test_symbols(written: str, name: str, latex: str, said: str) -> None:
    symbol = read_symbol(written)
    assert (symbol.name, symbol.latex, symbol.spoken) == (name, latex, said)
    assert read_symbol(symbol.name) == symbol


@pytest.mark.parametrize(
    "text",
    [
        "",
        " ",
        "1",
        "w_",
        "w__eq",
        "w_{eq}",
        r"\alpha",
        "w$",
        "w eq qe x",
        "w^2",
        "a\nb",
        "w_a,",
        "<b>",
        "x" * 50,
        "w_é",
    ],
)
def test_what_is_no_symbol(text: str) -> None:
    with pytest.raises(CalcpackError):
        read_symbol(text)


def test_indexed() -> None:
    assert indexed("Delta w", 2) == "Delta w_2"
    with pytest.raises(CalcpackError):
        indexed("w", "P 1")


def test_operations_as_they_are() -> None:
    with pytest.raises(CalcpackError, match="did you mean 'sqrt'"):
        Operation("sqr", (q,))
    assert number(2) ** q == Operation("pow", (Number("2"), q))
