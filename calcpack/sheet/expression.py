"""Formulas as data: an unchangeable tree of numbers, symbols and named operations.

Written with Python's operators on lines: ``q * S / 2 * (3 - m**2) / 3``. The tree keeps the order in
which it was written.
"""

from __future__ import annotations

import operator
import re
from collections.abc import Iterator
from dataclasses import dataclass, field
from decimal import Decimal
from typing import NoReturn

from calcpack.job.errors import CalcpackError, nearest
from calcpack.sheet.unit_text import parts

# Name of each operation and how many arguments it takes, at least and at most.
OPERATIONS: dict[str, tuple[int, int]] = {
    "add": (2, 2), "sub": (2, 2), "mul": (2, 2), "div": (2, 2), "pow": (2, 2), "neg": (1, 1),
    "sqrt": (1, 1), "abs": (1, 1), "min": (2, 40), "max": (2, 40), "sum": (1, 200),
    "sin": (1, 1), "cos": (1, 1), "tan": (1, 1), "atan": (1, 1), "log": (1, 1), "exp": (1, 1), "pi": (0, 0),
    "eq": (2, 2), "le": (2, 2), "lt": (2, 2), "ge": (2, 2), "gt": (2, 2), "choose": (3, 3),
    "number_in": (1, 1), "in_unit": (1, 1),
}  # fmt: skip
COMPARISONS = frozenset({"eq", "le", "lt", "ge", "gt"})
WITH_UNIT = frozenset({"number_in", "in_unit"})
DEEPEST = 60
LARGEST = 1000  # nodes

_DECIMAL = re.compile(r"[0-9]{1,40}(?:\.[0-9]{1,40})?")
_PRINTABLE = 9  # significant digits of a constant written as a float


class Arithmetic:
    """Anything formulas can be written with."""

    __slots__ = ()

    def as_expression(self) -> Expression:
        """The formula this stands for."""
        raise NotImplementedError

    def __add__(self, other: Term) -> Operation:
        return operation("add", self, other)

    def __radd__(self, other: int | float | Decimal | str) -> Expression:
        if isinstance(other, int) and other == 0:  # the start of Python's own sum()
            return self.as_expression()
        return operation("add", other, self)

    def __sub__(self, other: Term) -> Operation:
        return operation("sub", self, other)

    def __rsub__(self, other: Term) -> Operation:
        return operation("sub", other, self)

    def __mul__(self, other: Term) -> Operation:
        return operation("mul", self, other)

    def __rmul__(self, other: Term) -> Operation:
        return operation("mul", other, self)

    def __truediv__(self, other: Term) -> Operation:
        return operation("div", self, other)

    def __rtruediv__(self, other: Term) -> Operation:
        return operation("div", other, self)

    def __pow__(self, other: Term) -> Operation:
        return operation("pow", self, other)

    def __rpow__(self, other: Term) -> Operation:
        return operation("pow", other, self)

    def __neg__(self) -> Operation:
        return operation("neg", self)

    def __abs__(self) -> Operation:
        return operation("abs", self)

    def __le__(self, other: Term) -> Operation:
        return operation("le", self, other)

    def __lt__(self, other: Term) -> Operation:
        return operation("lt", self, other)

    def __ge__(self, other: Term) -> Operation:
        return operation("ge", self, other)

    def __gt__(self, other: Term) -> Operation:
        return operation("gt", self, other)

    def __bool__(self) -> NoReturn:
        raise CalcpackError(
            "a formula is neither true nor false",
            remedy="state a comparison with require, choose between values with choose",
        )


@dataclass(frozen=True)
class Expression(Arithmetic):
    """A formula; one of :class:`Number`, :class:`Quantity`, :class:`Reference`, :class:`Operation`."""

    @property
    def args(self) -> tuple[Expression, ...]:
        """What an operation works on; nothing for the others."""
        return ()

    @property
    def depth(self) -> int:
        """How deep the tree goes."""
        return 1

    @property
    def size(self) -> int:
        """How many nodes it has, written out."""
        return 1

    def as_expression(self) -> Expression:
        """Itself."""
        return self


@dataclass(frozen=True)
class Number(Expression):
    """A pure number, as the decimal text it is printed as."""

    text: str

    def __post_init__(self) -> None:
        if not isinstance(self.text, str) or not _DECIMAL.fullmatch(self.text):
            raise CalcpackError(f"'{str(self.text)[:40]}' is not a number", remedy="write it like 0.85")


@dataclass(frozen=True)
class Quantity(Expression):
    """A constant with a unit: written by somebody, or worked out beside the sheet and printed rounded."""

    text: str
    unit: str
    rounded: bool = False

    def __post_init__(self) -> None:
        Number(self.text)
        check_unit(self.unit)


@dataclass(frozen=True)
class Reference(Expression):
    """The value of an earlier line."""

    symbol: str
    line: str


@dataclass(frozen=True)
class Operation(Expression):
    """A named operation on formulas; ``unit`` belongs to ``number_in`` and ``in_unit`` alone."""

    name: str
    arguments: tuple[Expression, ...]
    unit: str = ""
    _depth: int = field(init=False, compare=False, repr=False)
    _size: int = field(init=False, compare=False, repr=False)

    def __post_init__(self) -> None:
        if self.name not in OPERATIONS:
            raise CalcpackError(
                f"there is no operation '{self.name[:40]}'", remedy=nearest(self.name, OPERATIONS)
            )
        least, most = OPERATIONS[self.name]
        if not least <= len(self.arguments) <= most:
            raise CalcpackError(f"'{self.name}' cannot take {len(self.arguments)} arguments")
        if self.name in WITH_UNIT:
            check_unit(self.unit)
        elif self.unit:
            raise CalcpackError(f"'{self.name}' takes no unit")
        for place, argument in enumerate(self.arguments):
            compares = isinstance(argument, Operation) and argument.name in COMPARISONS
            if compares != (self.name == "choose" and place == 0):
                raise CalcpackError(
                    "a comparison cannot be a part of a formula"
                    if compares
                    else "the first argument of 'choose' is a comparison"
                )
        object.__setattr__(self, "_depth", 1 + max((each.depth for each in self.arguments), default=0))
        object.__setattr__(self, "_size", 1 + sum(each.size for each in self.arguments))
        if self._depth > DEEPEST or self._size > LARGEST:
            raise CalcpackError("the formula is too large", remedy="work it out in several lines")

    @property
    def args(self) -> tuple[Expression, ...]:
        """What it works on."""
        return self.arguments

    @property
    def depth(self) -> int:
        """How deep the tree goes."""
        return self._depth

    @property
    def size(self) -> int:
        """How many nodes it has, written out."""
        return self._size


Term = Arithmetic | int | float | Decimal | str


def check_unit(unit: object) -> None:
    """Raise a CalcpackError unless a sheet knows the unit."""
    try:
        parts(str(unit))
    except ValueError as error:
        raise CalcpackError(str(error), remedy="write it like kN/m^2, mm or psf") from None


def expression(term: Term) -> Expression:
    """A formula from a line, a formula or a bare number.

    Raises
    ------
    CalcpackError
        It is none of these, or a float that nobody would print.

    Examples
    --------
    >>> expression(0.85), expression("1.0"), expression(-2)
    (Number(text='0.85'), Number(text='1.0'), Operation(name='neg', arguments=(Number(text='2'),), unit=''))
    >>> expression(1 / 3)
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: 0.3333333333333333 is too long to print; write number(1) / 3, or 0.33
    """
    if isinstance(term, Arithmetic):
        return term.as_expression()
    if not isinstance(term, int | float | Decimal | str):
        try:
            term = operator.index(term)  # numpy's whole numbers
        except TypeError:
            raise CalcpackError(f"{term!r:.60} cannot be a part of a formula") from None
    if isinstance(term, bool):
        raise CalcpackError(f"{term} cannot be a part of a formula")
    if isinstance(term, str):
        return Number(term)
    decimal = Decimal(repr(float(term))) if isinstance(term, float) else Decimal(term)
    if not decimal.is_finite():
        raise CalcpackError(f"{term} cannot be a part of a formula")
    if isinstance(term, float) and len(decimal.normalize().as_tuple().digits) > _PRINTABLE:
        raise CalcpackError(
            f"{float(term)} is too long to print",
            remedy=f"write number(1) / 3, or {float(term):.2g}",
        )
    if isinstance(term, float) and decimal == decimal.to_integral_value():
        decimal = decimal.to_integral_value()
    text = format(abs(decimal), "f")
    return -Number(text) if decimal < 0 else Number(text)


def operation(name: str, *terms: Term, unit: str = "") -> Operation:
    """An operation on anything formulas are written with."""
    return Operation(name, tuple(expression(term) for term in terms), unit)


def walk(root: Expression) -> Iterator[Expression]:
    """Every node, in writing order."""
    pending = [root]
    while pending:
        node = pending.pop()
        yield node
        pending.extend(reversed(node.args))


def references(root: Expression) -> dict[str, str]:
    """Symbol -> line of everything a formula draws on, in order of appearance.

    Raises
    ------
    CalcpackError
        Two lines go by the same symbol.
    """
    found: dict[str, str] = {}
    for node in walk(root):
        if isinstance(node, Reference) and found.setdefault(node.symbol, node.line) != node.line:
            raise CalcpackError(
                f"lines {found[node.symbol]} and {node.line} are both called '{node.symbol}' in one formula",
                remedy=f"give them an index: {node.symbol}_1, {node.symbol}_2"
                if "_" not in node.symbol
                else f"give them one more index: {node.symbol},1 and {node.symbol},2",
            )
    return found
