"""Formulas as plain JSON, and back without evaluating anything."""

from __future__ import annotations

import json
from collections.abc import Mapping
from typing import Any

from calcpack.job.errors import CalcpackError
from calcpack.sheet.expression import DEEPEST, LARGEST, Expression, Number, Operation, Quantity, Reference
from calcpack.sheet.symbols import read_symbol


def to_json(root: Expression) -> dict[str, Any]:
    """The formula as plain data.

    Examples
    --------
    >>> q, S = Reference("q", "2.01"), Reference("S", "1.02")
    >>> to_json(q * S / 2)["args"]
    [{'op': 'mul', 'args': [{'symbol': 'q'}, {'symbol': 'S'}]}, {'number': '2'}]
    """
    match root:
        case Number():
            return {"number": root.text}
        case Quantity():
            return {"measured" if root.rounded else "quantity": root.text, "unit": root.unit}
        case Reference():
            return {"symbol": root.symbol}
        case Operation():
            tree: dict[str, Any] = {"op": root.name, "args": [to_json(each) for each in root.arguments]}
            return tree | {"unit": root.unit} if root.unit else tree
    raise TypeError(f"{root!r} is not an expression")


def shape_of(root: Expression) -> str:
    """A formula with places in place of its symbols: two formulas of one shape are the same but for those.

    Examples
    --------
    >>> q, S, w = Reference("q", "2.01"), Reference("S", "1.02"), Reference("w", "2.02")
    >>> shape_of(q * S / 2) == shape_of(w * q / 2), shape_of(q * S / 2) == shape_of(q * q / 2)
    (True, False)
    """
    places: dict[str, int] = {}

    def written(tree: Any) -> Any:
        if isinstance(tree, dict):
            if "symbol" in tree:
                return places.setdefault(tree["symbol"], len(places))
            return {key: written(each) for key, each in tree.items()}
        return [written(each) for each in tree] if isinstance(tree, list) else tree

    return json.dumps(written(to_json(root)))


_KEYS = (
    {"number"},
    {"quantity", "unit"},
    {"measured", "unit"},
    {"symbol"},
    {"op", "args"},
    {"op", "args", "unit"},
)


def from_json(tree: object, inputs: Mapping[str, str]) -> Expression:
    """Read a formula back; nothing in it is ever evaluated as code.

    Parameters
    ----------
    tree : plain data
        As :func:`to_json` writes it, from wherever.
    inputs : mapping
        Symbol -> number of the line that it stands for.

    Raises
    ------
    CalcpackError
        An unknown operation, a symbol without a line, or a tree deeper or larger than any formula.
    """
    budget = [LARGEST]

    def read(node: object, depth: int) -> Expression:
        budget[0] -= 1
        if budget[0] < 0 or depth > DEEPEST:
            raise CalcpackError("the formula is too large")
        if not isinstance(node, dict) or set(node) not in _KEYS:
            raise CalcpackError("a part of the formula is not one of number, quantity, symbol and operation")
        if any(not isinstance(value, str) for key, value in node.items() if key != "args"):
            raise CalcpackError("a part of the formula has something else where its text should be")
        if "number" in node:
            return Number(node["number"])
        if "quantity" in node:
            return Quantity(node["quantity"], node["unit"])
        if "measured" in node:
            return Quantity(node["measured"], node["unit"], rounded=True)
        if "symbol" in node:
            name = read_symbol(node["symbol"]).name
            if name != node["symbol"] or name not in inputs:
                raise CalcpackError(f"the formula's symbol '{node['symbol'][:40]}' has no line")
            return Reference(name, inputs[name])
        if not isinstance(node["args"], list):
            raise CalcpackError("the arguments of an operation are a list")
        return Operation(
            node["op"], tuple(read(each, depth + 1) for each in node["args"]), node.get("unit", "")
        )

    return read(tree, 1)
