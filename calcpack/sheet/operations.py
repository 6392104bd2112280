"""What formulas are written with beside Python's own operators."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from decimal import Decimal

from calcpack.job.errors import CalcpackError
from calcpack.sheet.expression import Expression, Number, Operation, Quantity, Term, expression, operation


def number(value: Term) -> Expression:
    """A bare number to write a formula with: ``number(1) / 3``."""
    return expression(value)


def quantity(value: Term, unit: str) -> Expression:
    """A constant with its unit, printed as it is written: ``quantity(25, "kN/m^3")``."""
    plain = expression(value)
    if isinstance(plain, Operation) and isinstance(plain.args[0], Number):
        return -Quantity(plain.args[0].text, unit)
    if not isinstance(plain, Number):
        raise CalcpackError("a constant is a number and a unit")
    return Quantity(plain.text, unit)


def measured(value: float, unit: str, *, rounded: bool = True) -> Expression:
    """A value worked out beside the sheet: kept in full, printed rounded as a line's value is.

    Examples
    --------
    >>> measured(12.345678901234, "kN")
    Quantity(text='12.345678901234', unit='kN', rounded=True)
    """
    decimal = Decimal(repr(float(value)))
    if not decimal.is_finite():
        raise CalcpackError(f"{value} cannot be a part of a formula")
    node = Quantity(format(abs(decimal), "f"), unit, rounded=rounded)
    return -node if decimal < 0 else node


def _named(name: str) -> Callable[..., Operation]:
    def build(*terms: Term) -> Operation:
        return operation(name, *terms)

    build.__name__ = build.__qualname__ = name
    build.__doc__ = f"The operation ``{name}`` on lines, formulas and numbers."
    return build


sqrt, sin, cos, tan, atan, log, exp = map(_named, ("sqrt", "sin", "cos", "tan", "atan", "log", "exp"))
least, greatest, absolute, equal = _named("min"), _named("max"), _named("abs"), _named("eq")
PI = Operation("pi", ())


def total(*terms: Term | Iterable[Term]) -> Operation:
    """The sum of any number of terms, or of any number of them in a list, in their order."""
    flat: list[Term] = []
    for term in terms:
        if isinstance(term, Iterable) and not isinstance(term, str):
            flat.extend(term)
        else:
            flat.append(term)
    return operation("sum", *flat)


def choose(condition: Term, then: Term, otherwise: Term) -> Operation:
    """One of two values, by a comparison.

    Examples
    --------
    >>> f = measured(30.0, "MPa")
    >>> choose(f <= quantity(28, "MPa"), 0.85, 0.65).name
    'choose'
    """
    return operation("choose", condition, then, otherwise)


def number_in(term: Term, unit: str) -> Operation:
    """How many of a unit a value is: a bare number, for formulas that hold in one unit only.

    The formula prints as the standard does, without the unit; the line's words should name it.
    """
    return operation("number_in", term, unit=unit)


def in_unit(term: Term, unit: str) -> Operation:
    """A bare number taken as so many of a unit: the way back from :func:`number_in`.

    Examples
    --------
    >>> f = quantity(30, "MPa")
    >>> in_unit(0.17 * sqrt(number_in(f, "MPa")), "MPa").unit
    'MPa'
    """
    return operation("in_unit", term, unit=unit)
