"""A stored formula as plain text, for the terminal."""

from __future__ import annotations

from calcpack.record.auditing.formulas import Part

_BETWEEN = {"add": " + ", "sub": " − ", "mul": " · ", "div": " / ", "pow": "^"}
_RELATION = {"eq": " = ", "le": " ≤ ", "lt": " < ", "ge": " ≥ ", "gt": " > "}
# How tightly an operation holds its parts together.
_RANK = {"add": 1, "sub": 1, "neg": 1, "mul": 2, "div": 2, "pow": 3}


def written(part: Part) -> str:
    """A formula on one line, with no more brackets than it needs.

    Examples
    --------
    >>> from calcpack.record.auditing.formulas import read_formula
    >>> total = {"op": "add", "args": [{"symbol": "g"}, {"symbol": "q"}]}
    >>> written(read_formula({"op": "mul", "args": [total, {"quantity": "4", "unit": "m"}]}))
    '(g + q) · 4 m'
    """
    if part.op == "symbol":
        return part.text
    if part.op in ("number", "quantity", "measured"):
        return f"{part.text} {part.unit}".rstrip() if part.unit != "1" else part.text
    if part.op in _RELATION:
        return _RELATION[part.op].join(map(written, part.args))
    if part.op in _BETWEEN:
        left, right = part.args
        strict = part.op in ("sub", "div", "pow")
        return _held(left, part, part.op == "pow") + _BETWEEN[part.op] + _held(right, part, strict)
    if part.op == "neg":
        return f"−{_held(part.args[0], part, True)}"
    if part.op in ("number_in", "in_unit"):
        return f"{_held(part.args[0], part, True)} [{part.unit}]"
    if part.op == "choose":
        test, one, other = map(written, part.args)
        return f"({one} if {test}, else {other})"
    return f"{part.op}({', '.join(map(written, part.args))})" if part.args else part.op


def _held(inner: Part, outer: Part, strict: bool) -> str:
    """A part of an operation, in brackets where the operation holds tighter than the part does."""
    own, around = _RANK.get(inner.op, 9), _RANK.get(outer.op, 4)
    return f"({written(inner)})" if own < around or (strict and own == around) else written(inner)
