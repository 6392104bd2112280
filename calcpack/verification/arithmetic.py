"""Formulas in the reference tables, read and worked out as arithmetic; nothing in them is ever run."""

from __future__ import annotations

import ast
import math
import operator
from collections.abc import Callable, Mapping

_TWO: dict[type[ast.operator], Callable[[float, float], float]] = {
    ast.Add: operator.add,
    ast.Sub: operator.sub,
    ast.Mult: operator.mul,
    ast.Div: operator.truediv,
    ast.Pow: math.pow,
}


def worked_out(formula: str, letters: Mapping[str, float]) -> float:
    """Value of a formula of numbers, letters, ``+ - * / **``, ``sqrt``, ``log`` (natural) and ``pi``.

    Parameters
    ----------
    formula : str
    letters : mapping
        Value of each letter.

    Returns
    -------
    float

    Raises
    ------
    ValueError
        It is no such formula, or a letter has no value.

    Examples
    --------
    >>> worked_out("5*w*l**4/384", {"w": 10.0, "l": 6.0})
    168.75
    """
    try:
        return _value(ast.parse(formula.strip(), mode="eval").body, letters)
    except (SyntaxError, ArithmeticError, KeyError) as error:
        raise ValueError(f"'{formula}' cannot be worked out: {error}") from None


def _value(node: ast.expr, letters: Mapping[str, float]) -> float:
    match node:
        case ast.Constant(value=int() | float() as number) if not isinstance(number, bool):
            return float(number)
        case ast.Name(id="pi"):
            return math.pi
        case ast.Name(id=name):
            return letters[name]
        case ast.UnaryOp(op=ast.USub(), operand=inner):
            return -_value(inner, letters)
        case ast.BinOp(left=left, op=op, right=right) if type(op) in _TWO:
            return _TWO[type(op)](_value(left, letters), _value(right, letters))
        case ast.Call(func=ast.Name(id="sqrt" | "log" as name), args=[inner], keywords=[]):
            return (math.sqrt if name == "sqrt" else math.log)(_value(inner, letters))
    raise ValueError(f"'{ast.unparse(node)}' is no part of a formula")
