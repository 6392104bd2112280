r"""Formulas in LaTeX: with symbols, with the printed numbers of the lines they draw on, and the result.

Only what pandoc's Typst writer and math-core both set correctly is written. Two habits follow from that:
a division inside a fraction is written with a solidus (pandoc flattens a fraction that stands alone in
another), and units and indices are ``\text``, which stays searchable text on paper and on screen.
A row is a list of chunks; a formula may be broken between two of them, and an operator leads its chunk.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Protocol

from calcpack.sheet.display import System, parse_shown, shown_number
from calcpack.sheet.evaluation import evaluate, in_base
from calcpack.sheet.expression import (
    COMPARISONS,
    Expression,
    Number,
    Operation,
    Quantity,
    Reference,
    references,
)
from calcpack.sheet.pieces import (
    ATOM,
    HELD,
    PRODUCT,
    SUM,
    Piece,
    fraction,
    on_one_line,
    product,
    product_row,
    value_piece,
)
from calcpack.sheet.symbols import read_symbol
from calcpack.sheet.unit_text import label, unit_latex
from calcpack.sheet.words import shown_constant


class Printed(Protocol):
    """What a formula with numbers needs of a line it draws on."""

    @property
    def value(self) -> float:
        """The value [unit]."""

    @property
    def unit(self) -> str:
        """The record's unit."""

    @property
    def shown(self) -> str:
        """The value as printed."""


_WIDE = 60  # characters from which on the arguments of min and max may be broken apart
_RELATIONS = {"eq": "=", "le": r"\le", "lt": "<", "ge": r"\ge", "gt": ">"}
_OPPOSITES = {"eq": r"\ne", "le": ">", "lt": r"\ge", "ge": "<", "gt": r"\le"}
_FUNCTIONS = {
    "sin": r"\sin", "cos": r"\cos", "tan": r"\tan", "atan": r"\arctan", "log": r"\ln", "exp": r"\exp",
    "min": r"\min", "max": r"\max",
}  # fmt: skip


def result(shown: str) -> str:
    r"""A printed value as the bold last row of a line.

    Examples
    --------
    >>> print(result("54.0 kN·m"))
    \textbf{54.0 kN·m}
    """
    parse_shown(shown)
    return rf"\textbf{{{shown}}}"


def symbol_latex(symbol: str) -> str:
    r"""A symbol for a formula.

    Examples
    --------
    >>> print(symbol_latex("A_s,min"))
    A_{\text{s,min}}
    """
    return read_symbol(symbol).latex


def symbols_row(root: Expression, system: System = "SI") -> list[str]:
    r"""The formula with its symbols, in chunks.

    Examples
    --------
    >>> q, S, m = Reference("q", "2.01"), Reference("S", "1.02"), Reference("m", "3.04")
    >>> print(*symbols_row(q * S / 2 * (3 - m**2) / 3), sep=" | ")
    \frac{q\,S}{2} | \cdot \frac{3 - m^{2}}{3}
    """
    return _Writer(None, system).row(root)


def numbers_row(root: Expression, known: Mapping[str, Printed], system: System = "SI") -> list[str]:
    """The formula with the printed numbers of the lines it draws on, in chunks.

    Where it chooses between values, the one taken is written, and why.

    Parameters
    ----------
    root : Expression
    known : mapping
        Line number -> that line.
    system : "SI" or "US"
        For constants; a line's number is printed as the line has it.
    """
    writer = _Writer(known, system)
    return [*writer.row(root), *writer.reasons]


def _terms(node: Expression, sign: str = "+") -> Iterator[tuple[str, Expression]]:
    """A chain of sums and differences as signed terms, in writing order."""
    match node:
        case Operation(name="add" | "sub", arguments=(left, right)):
            yield from _terms(left, sign)
            if node.name == "add":
                yield from _terms(right)
            else:
                yield "-", right
        case Operation(name="sum"):
            for place, each in enumerate(node.args):
                yield from _terms(each, "+" if place else sign)
        case _:
            yield sign, node


def _chain(node: Expression) -> Iterator[tuple[bool, Expression]]:
    """A chain of products and quotients as factors, each with whether it divides, in writing order."""
    match node:
        case Operation(name="mul" | "div", arguments=(left, right)):
            yield from _chain(left)
            if node.name == "mul" and isinstance(right, Operation) and right.name == "mul":
                yield from _chain(right)
            else:
                yield node.name == "div", right
        case _:
            yield False, node


class _Writer:
    """Writes one row; ``known`` is None for symbols."""

    def __init__(self, known: Mapping[str, Printed] | None, system: System) -> None:
        self.system = system
        self.known = known
        self.numbers = known is not None
        self.reasons: dict[str, None] = {}

    # Rows: the outermost operations, broken into chunks.

    def row(self, root: Expression) -> list[str]:
        match root:
            case Operation(name=name) if name in COMPARISONS:
                left, right = map(self.row, root.args)
                return [*left, f"{_RELATIONS[name]} {right[0]}", *right[1:]]
            case Operation(name="choose") if self.numbers:
                return self.row(self.taken(root))
            case Operation(name="add" | "sub" | "sum"):
                return self.sum_row(root)
            case Operation(name="mul" | "div"):
                return product_row(self.factors(root, 0), self.numbers)
            case Operation(name="min" | "max"):
                return self.extreme_row(root)
            case Operation(name="in_unit"):
                return self.in_unit_row(root)
        return [self.piece(root, 0).latex]

    def sum_row(self, root: Operation) -> list[str]:
        chunks: list[str] = []
        for place, (sign, term) in enumerate(_terms(root)):
            piece = self.piece(term, 0)
            held = piece.least(PRODUCT if place else SUM)
            chained = held is piece and isinstance(term, Operation) and term.name in ("mul", "div")
            first, *others = self.row(term) if chained else [held.latex]
            chunks += [f"{sign} {first}" if place else first, *others]
        return chunks

    def extreme_row(self, root: Operation) -> list[str]:
        whole = self.piece(root, 0)
        if whole.width < _WIDE:
            return [whole.latex]
        inner = [self.piece(each, 0).latex for each in root.args]
        chunks = [f"{each}," for each in inner[:-1]] + [f"{inner[-1]})"]
        return [f"{_FUNCTIONS[root.name]}({chunks[0]}", *chunks[1:]]

    def in_unit_row(self, root: Operation) -> list[str]:
        inner = root.args[0]
        if not self.numbers:
            return self.row(inner)
        if self.piece(inner, 0).level < PRODUCT:
            return [self.piece(root, 0).latex]
        *others, last = self.row(inner)
        return [*others, rf"{last}\,{unit_latex(root.unit)}"]

    # Pieces: parts that are not broken. ``nested`` counts the fractions and exponents around them.

    def piece(self, node: Expression, nested: int) -> Piece:
        match node:
            case Number():
                return Piece(node.text, ATOM, len(node.text), digit=True)
            case Quantity():
                return value_piece(shown_constant(node, self.system))
            case Reference():
                return self.reference(node)
            case Operation(name="add" | "sub" | "sum"):
                return self.sum(node, nested)
            case Operation(name="mul" | "div"):
                return product(self.factors(node, nested), self.numbers)
            case Operation(name="neg"):
                return self.piece(node.args[0], nested).negated()
            case Operation(name="pow"):
                return self.power(node, nested)
            case Operation(name="choose"):
                return self.piece(self.taken(node), nested) if self.numbers else self.cases(node)
            case Operation(name="number_in"):
                return self.number_in(node, nested)
            case Operation(name="in_unit"):
                return self.in_unit(node, nested)
            case Operation(name="pi"):
                return Piece(r"\pi", ATOM, 1)
            case Operation(name="sqrt" | "abs"):
                inner = self.piece(node.args[0], nested)
                latex = rf"\sqrt{{{inner.latex}}}" if node.name == "sqrt" else rf"\left|{inner.latex}\right|"
                return Piece(latex, ATOM, inner.width + 2)
            case Operation():
                pieces = [self.piece(each, nested) for each in node.args]
                inside = ", ".join(each.latex for each in pieces)
                width = 4 + sum(each.width + 2 for each in pieces)
                return Piece(rf"{_FUNCTIONS[node.name]}\left({inside}\right)", HELD, width)
        raise TypeError(f"{node!r} is not an expression")

    def reference(self, node: Reference) -> Piece:
        if self.known is not None:
            return value_piece(self.known[node.line].shown)
        symbol = read_symbol(node.symbol)
        level = PRODUCT if " " in symbol.name else ATOM if symbol.simple else HELD
        return Piece(symbol.latex, level, len(symbol.spoken))

    def sum(self, node: Operation, nested: int) -> Piece:
        latex, width = "", 0
        for place, (sign, term) in enumerate(_terms(node)):
            piece = self.piece(term, nested).least(PRODUCT if place else SUM)
            latex += f" {sign} {piece.latex}" if place else piece.latex
            width += piece.width + 3
        return Piece(latex, SUM, width)

    def power(self, node: Operation, nested: int) -> Piece:
        base, exponent = node.args
        foot = self.piece(base, nested).least(ATOM)
        top = self.piece(exponent, nested + 1)
        return Piece(f"{foot.latex}^{{{top.latex}}}", HELD, foot.width + top.width, digit=foot.digit)

    def factors(self, node: Expression, nested: int) -> list[Piece]:
        """The factors of a chain; each run of divisors stands under what goes before it."""
        groups: list[tuple[list[Expression], list[Expression]]] = []
        for divides, factor in _chain(node):
            if divides:
                groups[-1][1].append(factor)
            elif groups and not groups[-1][1]:
                groups[-1][0].append(factor)
            else:
                groups.append(([factor], []))
        pieces: list[Piece] = []
        for over, under in groups:
            if under:
                top, bottom = (
                    product([self.piece(each, nested + 1) for each in side], self.numbers)
                    for side in (over, under)
                )
                pieces.append(on_one_line(top, bottom) if nested else fraction(top, bottom))
            else:
                pieces += [self.piece(each, nested) for each in over]
        return pieces

    # Values that hold in one unit only, and values chosen.

    def number_in(self, node: Operation, nested: int) -> Piece:
        inner = node.args[0]
        if not isinstance(inner, Reference):
            return self.piece(Operation("div", (inner, Quantity("1", node.unit))), nested)
        if self.known is None:
            return self.reference(inner)
        line = self.known[inner.line]
        if parse_shown(line.shown)[1] == node.unit:
            return value_piece(line.shown.removesuffix(label(node.unit)).rstrip())
        return value_piece(shown_number(line.value, line.unit, "SI", shown_in=node.unit))

    def in_unit(self, node: Operation, nested: int) -> Piece:
        inner = self.piece(node.args[0], nested)
        if not self.numbers:
            return inner
        held = inner.least(PRODUCT)
        unit = "°" if node.unit == "deg" else rf"\,{unit_latex(node.unit)}"
        level = HELD if held.level == ATOM else PRODUCT
        return Piece(held.latex + unit, level, held.width + 4, digit=held.digit, composed=True)

    def cases(self, node: Operation) -> Piece:
        condition, then, otherwise = node.args
        assert isinstance(condition, Operation)
        when = " ".join(self.row_on_one_line(condition, _RELATIONS))
        first, second = self.piece(then, 1), self.piece(otherwise, 1)
        latex = (
            rf"\begin{{cases}} {first.latex} & \text{{if }} {when} \\ "
            rf"{second.latex} & \text{{otherwise}} \end{{cases}}"
        )
        return Piece(latex, SUM, max(first.width, second.width) + len(when) + 4)

    def row_on_one_line(self, condition: Operation, relations: Mapping[str, str]) -> tuple[str, str, str]:
        left, right = (self.piece(each, 1) for each in condition.args)
        return left.latex, relations[condition.name], right.latex

    def taken(self, node: Operation) -> Expression:
        """The value that the numbers choose; why is kept for the end of the row."""
        condition, then, otherwise = node.args
        assert isinstance(condition, Operation)
        assert self.known is not None
        lines = {no: self.known[no] for no in references(condition).values()}
        sizes = {no: in_base(line.value, line.unit) for no, line in lines.items()}
        true = evaluate(condition, sizes).value == 1.0
        reason = " ".join(self.row_on_one_line(condition, _RELATIONS if true else _OPPOSITES))
        self.reasons.setdefault(rf"\quad(\text{{as }}{reason})")
        return then if true else otherwise
