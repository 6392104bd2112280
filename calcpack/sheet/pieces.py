r"""Pieces of a formula in LaTeX: how tightly each holds together, and how they are put side by side."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import pairwise

from calcpack.sheet.display import MINUS, NO_BREAK, parse_shown
from calcpack.sheet.unit_text import unit_latex

# How tightly a piece holds together; what is looser than its place asks for goes into parentheses.
SUM, NEGATIVE, PRODUCT, HELD, ATOM = 1, 2, 3, 4, 5

_LOWERED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")


@dataclass(frozen=True)
class Piece:
    """A part of a formula that is not broken."""

    latex: str
    level: int
    width: int  # in characters, about
    digit: bool = False  # begins with a digit
    composed: bool = False  # a number with its unit or a power of ten
    split: bool = False  # a fraction
    solidus: bool = False  # a division on one line

    def least(self, level: int) -> Piece:
        """Itself, or in parentheses where it is looser than that."""
        return self if self.level >= level else self.enclosed()

    def enclosed(self) -> Piece:
        """In parentheses."""
        return Piece(rf"\left({self.latex}\right)", ATOM, self.width + 2)

    def negated(self) -> Piece:
        """With a minus sign before it."""
        held = self.least(PRODUCT)
        return replace(held, latex=f"-{held.latex}", level=NEGATIVE, width=held.width + 1, digit=False)


def value_piece(shown: str) -> Piece:
    r"""A printed value.

    Examples
    --------
    >>> print(value_piece("−54.0 kN·m").latex, value_piece("83.56 × 10⁶ mm⁴").latex)
    -54.0\,\text{kN·m} 83.56\times 10^{6}\,\text{mm⁴}
    """
    _, unit = parse_shown(shown)
    words = shown.replace(NO_BREAK, " ").rstrip("°").split(" ")
    latex = words[0].replace(MINUS, "-")
    level = ATOM
    if "×" in words:
        power = words[2].removeprefix("10").translate(_LOWERED)
        latex, level = rf"{latex}\times 10^{{{power}}}", HELD
    if unit == "deg":
        latex, level = f"{latex}°", HELD
    elif unit != "1":
        latex, level = rf"{latex}\,{unit_latex(unit)}", HELD
    negative = latex.startswith("-")
    return Piece(
        latex, NEGATIVE if negative else level, len(shown), digit=not negative, composed=level == HELD
    )


def separator(left: Piece, right: Piece, dotted: bool) -> str:
    """What stands between two factors: a dot, or just a thin space where it reads as well."""
    dot = dotted or right.digit or left.solidus or right.solidus or (left.split and right.split)
    return r" \cdot " if dot else r"\,"


def product(factors: Sequence[Piece], dotted: bool) -> Piece:
    """Factors side by side; a single one stays as it is."""
    if len(factors) == 1:
        return factors[0]
    first, *others = (each.least(PRODUCT) for each in factors)
    latex, last = first.latex, first
    for each in others:
        latex += separator(last, each, dotted) + each.latex
        last = each
    width = sum(each.width + 1 for each in factors)
    return Piece(latex, PRODUCT, width, digit=first.digit, solidus=any(each.solidus for each in factors))


def product_row(factors: Sequence[Piece], dotted: bool) -> list[str]:
    """The same, in chunks that each begin with a dot."""
    if len(factors) == 1:
        return [factors[0].latex]
    held = [each.least(PRODUCT) for each in factors]
    chunks = [held[0].latex]
    for last, each in pairwise(held):
        between = separator(last, each, dotted)
        if between == r"\,":
            chunks[-1] += between + each.latex
        else:
            chunks.append(between.lstrip() + each.latex)
    return chunks


def fraction(over: Piece, under: Piece) -> Piece:
    """One above the other."""
    width = max(over.width, under.width)
    return Piece(rf"\frac{{{over.latex}}}{{{under.latex}}}", PRODUCT, width, digit=over.digit, split=True)


def on_one_line(over: Piece, under: Piece) -> Piece:
    """One before the other, with a solidus."""
    left = over.enclosed() if over.composed else over.least(PRODUCT)
    right = under.enclosed() if under.composed else under.least(HELD)
    width = left.width + right.width + 1
    return Piece(f"{left.latex}/{right.latex}", PRODUCT, width, digit=left.digit, solidus=True)
