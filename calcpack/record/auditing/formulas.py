"""Stored formulas, read within bounds and worked out in thirty digits with their dimensions.

Only the operations listed here exist. The arithmetic is mpmath's; beside each value goes a bound on what
binary arithmetic of sixteen digits may have lost, so that a difference can be told from rounding.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any

import mpmath

from calcpack.job.errors import CalcpackError
from calcpack.record.auditing.units import dimension_words, unit

CONTEXT = mpmath.MPContext()
CONTEXT.dps = 30
Real = Any  # mpmath.mpf

ARGUMENTS: dict[str, tuple[int, int]] = {
    "add": (2, 2), "sub": (2, 2), "mul": (2, 2), "div": (2, 2), "pow": (2, 2), "neg": (1, 1), "abs": (1, 1),
    "sqrt": (1, 1), "sum": (1, 200), "min": (2, 40), "max": (2, 40), "pi": (0, 0),
    "sin": (1, 1), "cos": (1, 1), "tan": (1, 1), "atan": (1, 1), "log": (1, 1), "exp": (1, 1),
    "eq": (2, 2), "le": (2, 2), "lt": (2, 2), "ge": (2, 2), "gt": (2, 2), "choose": (3, 3),
    "number_in": (1, 1), "in_unit": (1, 1),
}  # fmt: skip
COMPARISONS = frozenset({"eq", "le", "lt", "ge", "gt"})
DEEPEST = 60
LARGEST = 1_000  # parts of a formula
MOST_PARTS = 30_000  # of all formulas of a record
STEEPEST = 100  # exponent of a plain number; one with a unit has at most 12
_RANGE = 1e120  # no quantity of a building is beyond
_ROUNDING = 2.0**-52
# Sides of a comparison as close as this count as equal: relative to the larger; beside zero [kN, m].
EQUAL, NOTHING = 1e-9, 1e-12
_LEAVES = {
    "symbol": frozenset({"symbol"}),
    "quantity": frozenset({"quantity", "unit"}),
    "measured": frozenset({"measured", "unit"}),
    "number": frozenset({"number"}),
}
_PARTS = frozenset({"op", "args", "unit"})
_DECIMAL = re.compile(r"[0-9]{1,40}(?:\.[0-9]{1,40})?")


@dataclass(frozen=True, slots=True)
class Part:
    """A part of a formula.

    Parameters
    ----------
    op : str
        "number", "quantity", "measured", "symbol" or one of ``ARGUMENTS``.
    text : str
        The number as written, or the symbol.
    unit : str
    args : tuple of Part
    """

    op: str
    text: str = ""
    unit: str = ""
    args: tuple[Part, ...] = ()

    def walk(self) -> Iterator[Part]:
        """Every part, in writing order."""
        yield self
        for each in self.args:
            yield from each.walk()

    @property
    def symbols(self) -> dict[str, None]:
        """What it draws on, in order of appearance."""
        return {part.text: None for part in self.walk() if part.op == "symbol"}


class Budget:
    """How many parts the formulas of one record may still have."""

    def __init__(self, parts: int = MOST_PARTS) -> None:
        self.left = parts

    def spend(self) -> None:
        """One part."""
        self.left -= 1
        if self.left < 0:
            raise CalcpackError(f"the formulas have more than {MOST_PARTS} parts in all")


def read_formula(tree: object, budget: Budget | None = None) -> Part:
    """Read a stored formula.

    Raises
    ------
    CalcpackError
        Anything but a listed operation, a number, a quantity or a symbol; too deep; too large.

    Examples
    --------
    >>> read_formula({"op": "system", "args": []})
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: a formula has no operation 'system'
    """
    all_parts, own = budget or Budget(), Budget(LARGEST)

    def read(node: object, depth: int) -> Part:
        all_parts.spend()
        own.left -= 1
        if depth > DEEPEST or own.left < 0:
            raise CalcpackError(f"a formula is at most {DEEPEST} deep and has at most {LARGEST} parts")
        if not isinstance(node, dict) or len(node) > 3:
            raise CalcpackError("a part of the formula is none of number, quantity, symbol, operation")
        keys = node.keys()
        for kind, whole in _LEAVES.items():
            if kind in node and keys <= whole:
                text, of = node[kind], node.get("unit", "")
                if not isinstance(text, str) or not isinstance(of, str) or len(text) > 82:
                    raise CalcpackError("a part of the formula has no text where one should be")
                if kind != "symbol" and not _DECIMAL.fullmatch(text):
                    raise CalcpackError(f"'{text[:40]}' is not a number")
                if kind in ("quantity", "measured") and not of:
                    raise CalcpackError(f"{text[:40]} has no unit")
                return Part(kind, text, of)
        name, args, of = node.get("op"), node.get("args"), node.get("unit", "")
        if not isinstance(name, str) or name not in ARGUMENTS:
            raise CalcpackError(f"a formula has no operation '{str(name)[:40]}'")
        if not keys <= _PARTS or not isinstance(args, list) or not isinstance(of, str):
            raise CalcpackError(f"'{name}' is not written as an operation is")
        least, most = ARGUMENTS[name]
        if not least <= len(args) <= most:
            raise CalcpackError(f"'{name}' does not work on {len(args)} arguments")
        if bool(of) != (name in ("number_in", "in_unit")):
            raise CalcpackError(f"'{name}' has a unit that it should not have, or lacks it")
        parts = tuple(read(each, depth + 1) for each in args)
        for place, part in enumerate(parts):
            if (part.op in COMPARISONS) != (name == "choose" and place == 0):
                raise CalcpackError(f"'{name}' has a comparison where none can be, or lacks one")
        return Part(name, "", of, parts)

    return read(tree, 1)


class Value:
    """A value in kN and m, what sixteen digits may have lost of it, its dimension.

    Parameters
    ----------
    size : mpmath.mpf
    slack : float
    force, length : Fraction or int
        Exponents.

    Attributes
    ----------
    near : float
        Its size in sixteen digits.
    """

    __slots__ = ("force", "length", "near", "size", "slack")

    def __init__(
        self, size: Real, slack: float = 0.0, force: Fraction | int = 0, length: Fraction | int = 0
    ) -> None:
        self.size, self.slack, self.force, self.length = size, slack, force, length
        self.near = float(size)

    @property
    def dimension(self) -> tuple[Fraction | int, Fraction | int]:
        """Exponents of force and length."""
        return self.force, self.length


@lru_cache(maxsize=1024)
def factor(text: str) -> Real:
    """The size of a unit in kN and m, in thirty digits."""
    size = unit(text).size
    return CONTEXT.mpf(size.numerator) / size.denominator


@lru_cache(maxsize=8192)
def _real(text: str) -> Real:
    return CONTEXT.mpf(text)


@lru_cache(maxsize=8192)
def measured(number: float | str, of: str) -> Value:
    """A number of a unit."""
    known = unit(of)
    size = (_real(number) if isinstance(number, str) else CONTEXT.mpf(number)) * factor(of)
    return Value(size, abs(float(size)) * _ROUNDING, *known.dimension)


@lru_cache(maxsize=8192)
def _number(text: str) -> Value:
    return Value(_real(text), abs(float(text)) * _ROUNDING)


def same(left: Real, right: Real) -> bool:
    """Whether two sides of a comparison count as equal."""
    return bool(abs(left - right) <= max(EQUAL * max(abs(left), abs(right)), NOTHING))


def holds(relation: str, left: Real, right: Real) -> bool:
    """Whether a comparison holds.

    Examples
    --------
    >>> holds("le", 0.1 + 0.2, 0.3), holds("lt", 0.1 + 0.2, 0.3)
    (True, False)
    """
    if relation == "eq":
        return same(left, right)
    if relation in ("le", "ge"):
        return same(left, right) or bool(left < right if relation == "le" else left > right)
    return not same(left, right) and bool(left < right if relation == "lt" else left > right)


def evaluate(part: Part, known: Mapping[str, Value]) -> Value:
    """Work a formula out.

    Parameters
    ----------
    part : Part
    known : mapping
        Symbol -> value.

    Raises
    ------
    ValueError
        Dimensions that do not go together, a division by zero, a root of a negative number.
    CalcpackError
        An exponent or a value beyond all bounds.

    Examples
    --------
    >>> tree = {"op": "div", "args": [{"symbol": "w"}, {"quantity": "2", "unit": "m"}]}
    >>> float(evaluate(read_formula(tree), {"w": measured(5.0, "kN")}).size)
    2.5
    """
    if part.op == "symbol":
        return known[part.text]
    if part.op == "number":
        return _number(part.text)
    if part.op in ("quantity", "measured"):
        return measured(part.text, part.unit)
    result = _OPERATIONS[part.op](part, [evaluate(each, known) for each in part.args])
    if not abs(result.near) < _RANGE or not result.slack < _RANGE:
        raise CalcpackError(f"'{part.op}' gives a value beyond all bounds")
    return result


def _is_zero(part: Part) -> bool:
    return part.op == "number" and not _real(part.text)


def _alike(part: Part, values: list[Value], start: int = 0) -> tuple[Fraction | int, Fraction | int]:
    """The dimension that all arguments share; a bare 0 goes with any."""
    first = values[start]
    if all(each.force == first.force and each.length == first.length for each in values[start:]):
        return first.dimension
    rows = list(zip(part.args[start:], values[start:], strict=True))
    judged = [value for each, value in rows if not _is_zero(each)] or [value for _, value in rows]
    for value in judged[1:]:
        if value.dimension != judged[0].dimension:
            raise ValueError(
                f"{dimension_words(*judged[0].dimension)} and {dimension_words(*value.dimension)} "
                f"do not go together in '{part.op}'"
            )
    return judged[0].dimension


def _plain(part: Part, value: Value) -> Value:
    if value.dimension != (0, 0):
        raise ValueError(f"'{part.op}' works on a plain number, not {dimension_words(*value.dimension)}")
    return value


def _sum(part: Part, values: list[Value]) -> Value:
    sizes = [-value.size if part.op == "sub" and place else value.size for place, value in enumerate(values)]
    most = max(abs(value.near) for value in values)
    slack = sum(value.slack for value in values) + len(values) * most * _ROUNDING
    return Value(sum(sizes[1:], sizes[0]), slack, *_alike(part, values))


def _extreme(part: Part, values: list[Value]) -> Value:
    pick = min if part.op == "min" else max
    slack = max(value.slack for value in values)
    return Value(pick(value.size for value in values), slack, *_alike(part, values))


def _product(part: Part, values: list[Value]) -> Value:
    a, b = values
    slack = abs(a.near) * b.slack + abs(b.near) * a.slack + abs(a.near * b.near) * _ROUNDING
    return Value(a.size * b.size, slack, a.force + b.force, a.length + b.length)


def _quotient(part: Part, values: list[Value]) -> Value:
    a, b = values
    if not b.size:
        raise ValueError("a division by zero")
    near = abs(a.near / b.near)
    slack = (a.slack + near * b.slack) / abs(b.near) + near * _ROUNDING
    return Value(a.size / b.size, slack, a.force - b.force, a.length - b.length)


def _root(part: Part, values: list[Value]) -> Value:
    (a,) = values
    if a.size < 0:
        raise ValueError("a root of a negative number")
    size = CONTEXT.sqrt(a.size)
    near = float(size)
    slack = (min(a.slack / (2 * near), a.slack**0.5) if near else a.slack**0.5) + near * _ROUNDING
    return Value(size, slack, _times(a.force, Fraction(1, 2)), _times(a.length, Fraction(1, 2)))


def _times(exponent: Fraction | int, by: Fraction) -> Fraction | int:
    """An exponent of a dimension times a number, whole where it is."""
    found = exponent * by
    return int(found) if found.denominator == 1 else found


def _constant(part: Part) -> Fraction | None:
    """An exponent made of bare numbers alone."""
    if part.op == "number":
        return Fraction(part.text)
    if part.op == "neg":
        inner = _constant(part.args[0])
        return None if inner is None else -inner
    if part.op == "div":
        over, under = map(_constant, part.args)
        return over / under if over is not None and under else None
    return None


def _power(part: Part, values: list[Value]) -> Value:
    base, exponent = values
    if exponent.dimension != (0, 0):
        raise ValueError(f"an exponent is a plain number, not {dimension_words(*exponent.dimension)}")
    if abs(exponent.size) > STEEPEST:
        raise CalcpackError(f"an exponent beyond {STEEPEST}")
    if base.size < 0 and exponent.size != int(exponent.size):
        raise ValueError("a root of a negative number")
    if not base.size and exponent.size < 0:
        raise ValueError("a division by zero")
    size = base.size**exponent.size
    near, steep = abs(base.near), abs(exponent.near)
    slack = abs(float(size)) * _ROUNDING
    if near:
        grows = abs(float(CONTEXT.log(near)))
        slack += abs(float(size)) * (steep * base.slack / near + grows * exponent.slack)
    if base.dimension == (0, 0):
        return Value(size, slack)
    exact = _constant(part.args[1])
    if exact is None or exact.denominator > 12 or abs(exact) > 12:
        raise ValueError(
            f"{dimension_words(*base.dimension)} is raised to something else than a small number"
        )
    return Value(size, slack, _times(base.force, exact), _times(base.length, exact))


def _negative(part: Part, values: list[Value]) -> Value:
    (a,) = values
    return Value(-a.size if part.op == "neg" else abs(a.size), a.slack, a.force, a.length)


def _function(part: Part, values: list[Value]) -> Value:
    (a,) = values
    x = _plain(part, a).size
    if part.op == "log" and x <= 0:
        raise ValueError("a logarithm of what is not above zero")
    if part.op == "exp" and x > 280:
        raise CalcpackError("'exp' gives a value beyond all bounds")
    size = {
        "sin": CONTEXT.sin,
        "cos": CONTEXT.cos,
        "tan": CONTEXT.tan,
        "atan": CONTEXT.atan,
        "log": CONTEXT.log,
        "exp": CONTEXT.exp,
    }[part.op](x)
    near = abs(float(size))
    slope = {"tan": 1 + near**2, "log": 1 / abs(float(x)) if x else 0.0, "exp": near}.get(part.op, 1.0)
    return Value(size, slope * a.slack + near * _ROUNDING)


def _comparison(part: Part, values: list[Value]) -> Value:
    _alike(part, values)
    return Value(CONTEXT.mpf(1 if holds(part.op, values[0].size, values[1].size) else 0))


def _choice(part: Part, values: list[Value]) -> Value:
    taken = values[1] if values[0].size else values[2]
    return Value(taken.size, taken.slack, *_alike(part, values, 1))


def _number_in(part: Part, values: list[Value]) -> Value:
    (a,) = values
    if a.dimension != unit(part.unit).dimension:
        raise ValueError(f"{dimension_words(*a.dimension)} has no number in {part.unit}")
    size = a.size / factor(part.unit)
    return Value(size, a.slack / float(factor(part.unit)) + abs(float(size)) * _ROUNDING)


def _in_unit(part: Part, values: list[Value]) -> Value:
    a = _plain(part, values[0])
    size = a.size * factor(part.unit)
    slack = a.slack * float(factor(part.unit)) + abs(float(size)) * _ROUNDING
    return Value(size, slack, *unit(part.unit).dimension)


_OPERATIONS: dict[str, Callable[[Part, list[Value]], Value]] = {
    "add": _sum,
    "sub": _sum,
    "sum": _sum,
    "mul": _product,
    "div": _quotient,
    "pow": _power,
    "neg": _negative,
    "abs": _negative,
    "sqrt": _root,
    "min": _extreme,
    "max": _extreme,
    "pi": lambda part, values: Value(+CONTEXT.pi, 4 * _ROUNDING),
    "choose": _choice,
    "number_in": _number_in,
    "in_unit": _in_unit,
    **dict.fromkeys(("sin", "cos", "tan", "atan", "log", "exp"), _function),
    **dict.fromkeys(COMPARISONS, _comparison),
}
