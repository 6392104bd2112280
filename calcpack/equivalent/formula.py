"""Formulas that read as one would write them, each carrying the sympy value it stands for.

A printer of a computer algebra system puts terms in an order of its own. Here a formula is put
together from parts in the order wanted: every part knows its LaTeX, how it is spoken and its
value, so what is shown, what is read aloud and what is proved are one thing. A chain of equal
forms is checked when it is written (:func:`chain`): a slip in the arrangement is an error.

The LaTeX keeps to fractions, roots, powers, subscripts, integrals, sums and brackets.
"""

from __future__ import annotations

import itertools
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace
from typing import Any

import sympy

SUM, PRODUCT, ATOM = 0, 1, 2  # how firmly a form holds together

Value = Any  # a sympy expression; sympy has no types of its own


@dataclass(frozen=True)
class Letter:
    """How a symbol is written and spoken, and where it stands in a product."""

    latex: str
    spoken: str
    rank: int


_LETTERS: dict[Value, Letter] = {}


def letter(value: Value, latex: str, spoken: str, rank: int) -> Value:
    """Enter a sympy symbol (or indexed one) in the alphabet and return it.

    In a product letters stand in the order of ``rank``, smallest first.
    """
    _LETTERS[value] = Letter(latex, spoken, rank)
    return value


@dataclass(frozen=True)
class Form:
    """A part of a formula.

    ``body`` and ``spoken_body`` are without the leading minus, which ``minus`` tells.
    """

    body: str
    spoken_body: str
    value: Value
    level: int = ATOM
    minus: bool = False

    @property
    def latex(self) -> str:
        """The formula as LaTeX."""
        return ("-" if self.minus else "") + self.body

    @property
    def spoken(self) -> str:
        """The formula in words."""
        return ("minus " if self.minus else "") + self.spoken_body


@dataclass(frozen=True)
class Row:
    """One or more equations on one line: LaTeX, words, and the equations as sympy has them."""

    latex: str
    spoken: str
    equations: tuple[Value, ...]


def named(latex: str, spoken: str, value: Value) -> Form:
    """Return a form that shows a name and stands for a value."""
    return Form(latex, spoken, value)


def of(value: Value) -> Form:
    r"""Write a symbol, a number or a single product of powers.

    Raises ValueError for a sum or for a symbol not in the alphabet.

    >>> x = letter(sympy.Symbol("x_doc"), "x", "x", 9)
    >>> of(-3 * x**2 / 8).latex
    '-\\frac{3 x^{2}}{8}'
    >>> of(-3 * x**2 / 8).spoken
    'minus 3 x squared over 8'
    """
    coefficient, rest = sympy.sympify(value).as_coeff_Mul()
    if not coefficient.is_Rational:
        raise ValueError(f"{value} is not a single product")
    factors = []
    for base, exponent in rest.as_powers_dict().items():
        if base == 1:
            continue
        if base not in _LETTERS or not exponent.is_Integer:
            raise ValueError(f"{value}: {base}**{exponent} is not a power of a known letter")
        factors.append((_LETTERS[base], int(exponent)))
    factors.sort(key=lambda factor: factor[0].rank)
    top = [_raised(one, exponent) for one, exponent in factors if exponent > 0]
    bottom = [_raised(one, -exponent) for one, exponent in factors if exponent < 0]
    if abs(coefficient.p) != 1 or not top:
        top.insert(0, (str(abs(coefficient.p)),) * 2)
    if coefficient.q != 1:
        bottom.insert(0, (str(coefficient.q),) * 2)
    latex, spoken = (" ".join(part[k] for part in top) for k in (0, 1))
    level = ATOM if len(top) == 1 and not factors else PRODUCT
    if bottom:
        under, spoken_under = (" ".join(part[k] for part in bottom) for k in (0, 1))
        latex, spoken = rf"\frac{{{latex}}}{{{under}}}", f"{spoken} over {spoken_under}"
    elif len(top) == 1:
        level = ATOM if not factors or factors[0][1] == 1 else PRODUCT
    return Form(latex, spoken, value, level, minus=bool(coefficient < 0))


def add(*terms: Form) -> Form:
    """Add terms in the order given, with their signs between them."""
    if len(terms) == 1:
        return terms[0]
    latex, spoken = terms[0].latex, terms[0].spoken
    for term in terms[1:]:
        latex += (" - " if term.minus else " + ") + term.body
        spoken += (" minus " if term.minus else " plus ") + term.spoken_body
    return Form(latex, spoken, sympy.Add(*(term.value for term in terms)), SUM)


def _add_sorted(terms: Sequence[Form]) -> Form:
    """Add terms in their order, but let none of the negative ones lead."""
    first = next((number for number, term in enumerate(terms) if not term.minus), 0)
    return add(*terms[first:], *terms[:first])


def minus(form: Form) -> Form:
    """Turn the sign of a form."""
    held = bracketed(form) if form.level == SUM else form
    return replace(held, value=-form.value, minus=not held.minus)


def bracketed(form: Form) -> Form:
    """Put a form in brackets, square ones round others."""
    low, high = ("[", "]") if r"\left(" in form.latex else ("(", ")")
    return Form(
        rf"\left{low}{form.latex}\right{high}",
        f"open bracket {form.spoken} close bracket",
        form.value,
        ATOM,
    )


def times(*factors: Form, dot: bool = False) -> Form:
    r"""Multiply in the order given; sums go into brackets.

    ``dot`` puts a multiplication dot between them.
    """
    held = [bracketed(one) if one.level == SUM else one for one in factors]
    return Form(
        (r" \cdot " if dot else " ").join(one.body for one in held),
        " times ".join(one.spoken_body for one in held),
        sympy.Mul(*(one.value for one in factors)),
        PRODUCT,
        minus=sum(one.minus for one in held) % 2 == 1,
    )


def over(top: Form, bottom: Form) -> Form:
    """Write a fraction."""
    return Form(
        rf"\frac{{{top.body}}}{{{bottom.latex}}}",
        f"the fraction {top.spoken_body} over {bottom.spoken}"
        if SUM in (top.level, bottom.level)
        else f"{top.spoken_body} over {bottom.spoken}",
        top.value / bottom.value,
        PRODUCT,
        minus=top.minus,
    )


def power(base: Form, exponent: int) -> Form:
    """Raise a form to a whole power."""
    held = base if base.level == ATOM and not base.minus else bracketed(base)
    return Form(
        rf"{held.body}^{{{exponent}}}",
        f"{held.spoken_body} {_spoken_power(exponent)}",
        base.value**exponent,
        PRODUCT,
    )


def root(under: Form) -> Form:
    """Write a square root."""
    return Form(
        rf"\sqrt{{{under.latex}}}",
        f"the square root of {under.spoken}, end of root,",
        sympy.sqrt(under.value),
    )


def series(value: Value, by: Sequence[Value] = (), *, falling: bool = False) -> Form:
    """Write a sum of products, sorted by rising powers of the letters ``by``, the first letter first.

    >>> x = letter(sympy.Symbol("x_doc"), "x", "x", 9)
    >>> series(x**2 / 3 + 1 - x, [x]).spoken
    '1 minus x plus x squared over 3'
    """
    return _add_sorted(_terms(value, by, falling=falling))


def _terms(value: Value, by: Sequence[Value], *, falling: bool = False) -> list[Form]:
    def place(form: Form) -> tuple[Any, ...]:
        powers = form.value.as_powers_dict()
        degrees = [int(powers.get(symbol, 0)) for symbol in by]
        return (*((-d if falling else d) for d in degrees), form.body)

    return sorted((of(term) for term in sympy.Add.make_args(sympy.expand(value))), key=place)


def fronted(value: Value, front: Value, by: Sequence[Value] = ()) -> Form:
    """Write ``front`` times what is left, sorted by rising powers of ``by``."""
    rest = sympy.expand(value / front)
    if len(sympy.Add.make_args(rest)) == 1:
        return of(rest * front)
    return times(of(front), series(rest, by))


def grouped(value: Value, front: Value, variable: Value, by: Sequence[Value] = ()) -> Form:
    """Write ``front`` times a polynomial in ``variable``, the coefficient of each power kept together.

    Coefficients of several terms go into brackets, sorted by rising powers of ``by``.
    """
    poly = sympy.Poly(sympy.expand(value / front), variable)
    if len(poly.terms()) == 1 and len(sympy.Add.make_args(sympy.expand(value))) == 1:
        return of(value)
    parts = [
        _coefficient(coefficient, variable**degree, by)
        for (degree,), coefficient in sorted(poly.terms())
        if coefficient != 0
    ]
    inside = _add_sorted(parts)
    return inside if front == 1 else times(of(front), inside)


def _coefficient(value: Value, power_of: Value, by: Sequence[Value]) -> Form:
    terms = sympy.Add.make_args(sympy.expand(value))
    if len(terms) == 1:
        return of(value * power_of)
    content, rest = sympy.expand(value).primitive()
    if _terms(rest, by)[0].minus:
        content, rest = -content, -rest
    inside = series(rest, by)
    top: list[Form] = []
    if abs(content.p) != 1:
        top.append(of(sympy.Integer(abs(content.p))))
    top.append(inside)
    if power_of != 1:
        top.append(of(power_of))
    form = times(*top) if len(top) > 1 else inside
    if content.q != 1:
        form = over(form, of(sympy.Integer(content.q)))
    elif len(top) == 1:
        form = bracketed(form)
    return replace(form, value=value * power_of, minus=bool(content < 0))


def neat(value: Value, variable: Value, by: Sequence[Value] = ()) -> Form:
    """Write a polynomial that starts with 1: as a power if it is one, else by rising powers.

    >>> m = letter(sympy.Symbol("m_doc"), "m", "m", 9)
    >>> neat(1 - 2 * m**2 / 5 + m**4 / 25, m).latex
    '\\\\left(1 - \\\\frac{m^{2}}{5}\\\\right)^{2}'
    """
    value = sympy.expand(value)
    if len(sympy.Add.make_args(value)) > 2:
        _, factors = sympy.factor_list(sympy.together(value).as_numer_denom()[0])
        repeated = [(f, n) for f, n in factors if n > 1 and f.has(variable)]
        if len(repeated) == 1 and sum(f.has(variable) for f, _ in factors) == 1:
            factor, exponent = repeated[0]
            inside = series(factor / factor.subs(variable, 0), by or (variable,))
            return replace(power(inside, exponent), value=value)
    return series(value, by or (variable,))


def integral(inner: Form, variable: Form, low: Form, high: Form) -> Form:
    """Write a definite integral of a polynomial; its value is worked out."""
    anti = sympy.Poly(inner.value, variable.value).integrate(variable.value).as_expr()
    value = anti.subs(variable.value, high.value) - anti.subs(variable.value, low.value)
    held = bracketed(inner) if inner.level == SUM else inner
    return Form(
        rf"\int_{{{low.latex}}}^{{{high.latex}}} {held.latex}\,\mathrm{{d}}{variable.latex}",
        f"the integral from {low.spoken} to {high.spoken} of {held.spoken} d {variable.spoken}",
        sympy.expand(value),
        PRODUCT,
    )


def total(inner: Form, index: Value, low: Form, high: Form) -> Form:
    """Write a sum over an index."""
    held = bracketed(inner) if inner.level == SUM else inner
    return Form(
        rf"\sum_{{{of(index).latex}={low.latex}}}^{{{high.latex}}} {held.latex}",
        f"the sum over {of(index).spoken} from {low.spoken} to {high.spoken} of {held.spoken}",
        sympy.Sum(inner.value, (index, low.value, high.value)),
        PRODUCT,
    )


def chain(left: Form, *right: Form) -> Row:
    """Write ``left = right = right ...``; the forms right of the first sign must all be equal.

    Raises ValueError where two forms differ: a slip in the arrangement.
    """
    for one, other in itertools.pairwise(right):
        if not _equal(one.value, other.value):
            raise ValueError(f"{one.latex} and {other.latex} differ")
    return Row(
        " = ".join([left.latex, *(form.latex for form in right)]),
        " equals ".join([left.spoken, *(form.spoken for form in right)]),
        (sympy.Eq(left.value, right[-1].value, evaluate=False),),
    )


def beside(*rows: Row) -> Row:
    """Put equations on one line."""
    return Row(
        r", \quad ".join(row.latex for row in rows),
        "; ".join(row.spoken for row in rows),
        tuple(equation for row in rows for equation in row.equations),
    )


def within(row: Row, low: Form, variable: Form, high: Form) -> Row:
    """Add the range in which an equation holds."""
    return replace(
        row,
        latex=rf"{row.latex} \quad \left({low.latex} \le {variable.latex} \le {high.latex}\right)",
        spoken=f"{row.spoken}, for {variable.spoken} from {low.spoken} to {high.spoken}",
    )


def _equal(one: Value, other: Value) -> bool:
    difference = sympy.expand(one - other)
    return bool(difference == 0) or bool(sympy.simplify(difference) == 0)


def _raised(one: Letter, exponent: int) -> tuple[str, str]:
    if exponent == 1:
        return one.latex, one.spoken
    return f"{one.latex}^{{{exponent}}}", f"{one.spoken} {_spoken_power(exponent)}"


def _spoken_power(exponent: int) -> str:
    return {2: "squared", 3: "cubed"}.get(exponent, f"to the power {exponent}")


def runs(text: str) -> tuple[str | dict[str, str], ...]:
    """Cut a sentence of ours into words and formulas: what stands between dollar signs is LaTeX.

    >>> runs("The rise $a$ ends.")
    ('The rise ', {'math': 'a'}, ' ends.')
    """
    pieces = text.split("$")
    cut: Iterable[str | dict[str, str]] = (
        {"math": piece} if number % 2 else piece for number, piece in enumerate(pieces)
    )
    return tuple(piece for piece in cut if piece)
