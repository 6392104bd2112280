"""Random formulas, and a reader that works formulas out again from the MathML they were set as."""

from __future__ import annotations

import math
import re
import unicodedata
from collections.abc import Mapping
from random import Random
from xml.etree.ElementTree import Element, fromstring

from calcpack.sheet.expression import Expression, Number, Operation, Quantity, Reference

SYMBOLS = ("a", "b_1", "w_eq", "f'_c", "gamma_G,sup", "lambdabar_LT", "DL", "phi M_n")
LINES = {symbol: f"1.{place + 1:02d}" for place, symbol in enumerate(SYMBOLS)}
BINARY = ("add", "sub", "mul", "div", "mul", "div", "add", "sub")
EXTREMES = ("min", "max", "sum")
FUNCTIONS = ("abs", "sin", "cos", "tan", "atan", "exp")


def random_formula(random: Random, depth: int = 5, *, products_only: bool = False) -> Expression:
    """A formula of plain numbers, or with ``products_only`` one that fits any units."""
    if depth == 0 or random.random() < 0.12:
        if random.random() < 0.75:
            symbol = random.choice(SYMBOLS)
            return Reference(symbol, LINES[symbol])
        if products_only and random.random() < 0.5:
            return Quantity(random.choice(["25", "0.5", "300"]), random.choice(["kN/m^3", "mm", "kPa"]))
        return Number(random.choice(["2", "3", "0.85", "12"]))

    def inner() -> Expression:
        return random_formula(random, depth - 1, products_only=products_only)

    draw = random.random()
    if draw < 0.1:
        return Operation("pow", (inner(), Number(random.choice(["2", "3"]))))
    if products_only:
        return Operation(random.choice(["mul", "div"]), (inner(), inner()))
    if draw < 0.15:
        return Operation("pow", (Operation("abs", (inner(),)), Operation("div", (Number("1"), Number("3")))))
    if draw < 0.22:
        return Operation("neg", (inner(),))
    if draw < 0.28:
        return Operation("sqrt", (Operation("abs", (inner(),)),))
    if draw < 0.34:
        return Operation(random.choice(FUNCTIONS), (inner(),))
    if draw < 0.42:
        return Operation(random.choice(EXTREMES), tuple(inner() for _ in range(random.randint(2, 3))))
    return Operation(random.choice(BINARY), (inner(), inner()))


def mathml_value(mathml: str, values: Mapping[str, float]) -> float:
    """Work out a formula from its MathML; ``values`` by what stands there, scripts joined by ``_``."""
    return _Reader(values).row(list(fromstring(re.sub(r"&ApplyFunction;", "", mathml))))


_NAMES = {
    "min": min, "max": max, "sin": math.sin, "cos": math.cos, "tan": math.tan,
    "arctan": math.atan, "exp": math.exp, "ln": math.log,
}  # fmt: skip


def _text(element: Element) -> str:
    text = unicodedata.normalize("NFKC", "".join(element.itertext()))
    return re.sub(r"\s", "", text).replace("\u0304", "¯")


def identity(element: Element) -> str:
    """What a symbol says, without how it is set."""
    if element.tag == "msub":
        return f"{_text(element[0])}_{_text(element[1])}"
    if element.tag == "msubsup":  # a prime stands above the index
        return f"{_text(element[0])}{_text(element[2])}_{_text(element[1])}"
    return _text(element)


class _Reader:
    """A parser by descent: sums of products of factors, as one reads a line of mathematics."""

    def __init__(self, values: Mapping[str, float]) -> None:
        self.values = values

    def row(self, elements: list[Element]) -> float:
        """A whole row; spaces have no meaning beyond setting factors apart."""
        items = [each for each in self._flat(elements) if each.tag != "mspace" and _text(each)]
        value, place = self.sum(items, 0)
        assert place == len(items), f"{_text(items[place])!r} is left over"
        return value

    def _flat(self, elements: list[Element]) -> list[Element]:
        """Rows without fences or functions are just there for grouping."""
        flat: list[Element] = []
        for each in elements:
            children = [child for child in each if child.tag != "mspace"]
            fenced = bool(children) and children[0].tag == "mo" and _text(children[0]) in "(|"
            if each.tag in ("mrow", "mpadded") and not fenced:
                flat += self._flat(list(each))
            else:
                flat.append(each)
        return flat

    def sum(self, items: list[Element], place: int) -> tuple[float, int]:
        sign = 1.0
        if _text(items[place]) in "−-":
            sign, place = -1.0, place + 1
        total, place = self.product(items, place)
        total *= sign
        while place < len(items) and _text(items[place]) in "+−-":
            sign = 1.0 if _text(items[place]) == "+" else -1.0
            term, place = self.product(items, place + 1)
            total += sign * term
        return total, place

    def product(self, items: list[Element], place: int) -> tuple[float, int]:
        value, place = self.factor(items, place)
        while place < len(items):
            sign = _text(items[place])
            if sign in ("+", "−", "-", ",", "≤"):
                break
            if sign == "/":
                other, place = self.factor(items, place + 1)
                value /= other
            else:
                other, place = self.factor(items, place + (sign in ("⋅", "×")))
                value *= other
        return value, place

    def factor(self, items: list[Element], place: int) -> tuple[float, int]:
        element = items[place]
        name = _text(element)
        if name in _NAMES:
            if items[place + 1].tag == "mrow":
                return _NAMES[name](*self.fenced(items[place + 1])), place + 2
            end = self.closing(items, place + 1)  # parentheses that do not grow with what they hold
            return _NAMES[name](*self.arguments(items[place + 2 : end])), end + 1
        return self.single(element), place + 1

    def fenced(self, element: Element) -> list[float]:
        return self.arguments(self._flat(list(element)[1:-1]))

    @staticmethod
    def closing(items: list[Element], place: int) -> int:
        depth = 0
        for end in range(place, len(items)):
            depth += {"(": 1, ")": -1}.get(_text(items[end]), 0)
            if depth == 0:
                return end
        raise AssertionError("a parenthesis is not closed")

    def arguments(self, items: list[Element]) -> list[float]:
        parts: list[list[Element]] = [[]]
        for each in items:
            if each.tag == "mo" and _text(each) == ",":
                parts.append([])
            else:
                parts[-1].append(each)
        return [self.row(part) for part in parts]

    def single(self, element: Element) -> float:
        children = list(element)
        match element.tag:
            case "mn":
                return float(_text(element))
            case "mfrac":
                return self.row([children[0]]) / self.row([children[1]])
            case "msqrt":
                return math.sqrt(self.row(children))
            case "msup" if "′" not in _text(children[1]):
                return float(self.row([children[0]]) ** self.row([children[1]]))
            case "msubsup" if "′" not in _text(children[2]):
                base = f"{_text(children[0])}_{_text(children[1])}"
                return float(self.values[base] ** self.row([children[2]]))
            case "mrow":
                inner = self.fenced(element)
                assert len(inner) == 1
                return abs(inner[0]) if _text(children[0]) == "|" else inner[0]
        return self.values[identity(element)]
