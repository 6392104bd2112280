"""Working a formula out in floats, with its dimension checked at every step."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from fractions import Fraction
from typing import NamedTuple

from calcpack.job.errors import CalcpackError
from calcpack.job.units import dimension, factor, kind_of
from calcpack.sheet.expression import COMPARISONS, Expression, Number, Operation, Quantity, Reference
from calcpack.sheet.words import plain

# Two sides of a comparison closer than this, relative to the larger, count as equal: the arithmetic of
# floats must not decide whether 0.1 + 0.2 is at most 0.3. Beside zero, what a sum leaves over [kN, m].
EQUAL = 1e-9
NOTHING = 1e-12

Power = int | Fraction


class Measured(NamedTuple):
    """A value in kN and m, with the exponents of force and length."""

    value: float
    force: Power = 0
    length: Power = 0

    @property
    def dimension(self) -> tuple[Power, Power]:
        """The exponents of force and length."""
        return self.force, self.length


def in_base(value: float, unit: str) -> Measured:
    """A value in a unit, turned into kN and m.

    Examples
    --------
    >>> in_base(250.0, "mm")
    Measured(value=0.25, force=0, length=1)
    """
    return Measured(value * factor(unit), *dimension(unit))


def kind(size: Measured) -> str:
    """The dimension of a value, in words."""
    force, length = size.dimension
    if int(force) == force and int(length) == length:
        return kind_of(int(force), int(length))
    return f"force^{force}·length^{length}"


_FLOATS: dict[str, Callable[[float], float]] = {
    "sin": math.sin,
    "cos": math.cos,
    "tan": math.tan,
    "atan": math.atan,
    "log": math.log,
    "exp": math.exp,
}


def holds(relation: str, left: float, right: float) -> bool:
    """Whether a comparison holds; sides closer than ``EQUAL`` count as equal.

    Examples
    --------
    >>> holds("le", 0.1 + 0.2, 0.3), holds("lt", 0.1 + 0.2, 0.3), holds("gt", 2.0, 1.0)
    (True, False, True)
    """
    same = math.isclose(left, right, rel_tol=EQUAL, abs_tol=NOTHING)
    match relation:
        case "eq":
            return same
        case "le":
            return same or left < right
        case "ge":
            return same or left > right
        case "lt":
            return not same and left < right
        case "gt":
            return not same and left > right
    raise ValueError(f"{relation!r} is not a comparison")


def evaluate(root: Expression, known: Mapping[str, Measured]) -> Measured:
    """Work a formula out.

    Parameters
    ----------
    root : Expression
    known : mapping
        Line number -> its value.

    Returns
    -------
    Measured
        In kN and m; a comparison gives 1 or 0.

    Raises
    ------
    CalcpackError
        Unlike things added or compared, a result that is no finite number, a line that is not known.

    Examples
    --------
    >>> q, S = Reference("q", "2.01"), Reference("S", "1.02")
    >>> evaluate(q * S / 2, {"2.01": in_base(5.5, "kPa"), "1.02": in_base(4500, "mm")})
    Measured(value=12.375, force=1, length=-1)
    >>> evaluate(q + S, {"2.01": in_base(5.5, "kPa"), "1.02": in_base(4500, "mm")})
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: in 'q + S': q is a pressure and S is a length
    """
    match root:
        case Number():
            return Measured(float(root.text))
        case Quantity():
            return in_base(float(root.text), root.unit)
        case Reference():
            if root.line not in known:
                raise CalcpackError(f"there is no line {root.line} to take '{root.symbol}' from")
            return known[root.line]
        case Operation():
            try:
                result = _apply(root, [evaluate(each, known) for each in root.args])
            except (OverflowError, ZeroDivisionError, ValueError) as error:
                reason = "divides by zero" if isinstance(error, ZeroDivisionError) else "is no finite number"
                raise CalcpackError(f"'{plain(root)}' {reason}") from None
            if not math.isfinite(result.value):
                raise CalcpackError(f"'{plain(root)}' is no finite number")
            return result
    raise TypeError(f"{root!r} is not an expression")


def _wrong(node: Operation, message: str) -> CalcpackError:
    return CalcpackError(f"in '{plain(node)}': {message}")


def _is_zero(node: Expression) -> bool:
    return isinstance(node, Number) and float(node.text) == 0


def _alike(node: Operation, terms: list[tuple[Expression, Measured]]) -> tuple[Power, Power]:
    """The dimension all terms share; a bare 0 goes with any."""
    judged = [(each, size) for each, size in terms if not _is_zero(each)] or terms
    (first, reference), *others = judged
    for other, size in others:
        if size.dimension != reference.dimension:
            raise _wrong(node, f"{plain(first)} is {kind(reference)} and {plain(other)} is {kind(size)}")
    return reference.dimension


def _bare(node: Operation, size: Measured) -> float:
    if size.dimension != (0, 0):
        raise _wrong(node, f"{plain(node.args[0])} is {kind(size)}, where a plain number is needed")
    return size.value


def _apply(node: Operation, sizes: list[Measured]) -> Measured:
    terms = list(zip(node.args, sizes, strict=True))
    values = [size.value for size in sizes]
    match node.name:
        case "add" | "sum":
            return Measured(sum(values[1:], values[0]), *_alike(node, terms))
        case "sub":
            return Measured(values[0] - values[1], *_alike(node, terms))
        case "min":
            return Measured(min(values), *_alike(node, terms))
        case "max":
            return Measured(max(values), *_alike(node, terms))
        case "neg":
            return Measured(-values[0], *sizes[0].dimension)
        case "abs":
            return Measured(abs(values[0]), *sizes[0].dimension)
        case "mul":
            a, b = sizes
            return Measured(a.value * b.value, a.force + b.force, a.length + b.length)
        case "div":
            a, b = sizes
            return Measured(a.value / b.value, a.force - b.force, a.length - b.length)
        case "sqrt":
            force, length = (_simple(Fraction(power) / 2) for power in sizes[0].dimension)
            return Measured(math.sqrt(values[0]), force, length)
        case "pow":
            return _power(node, *sizes)
        case "pi":
            return Measured(math.pi)
        case "choose":
            dimension = _alike(node, terms[1:])
            return Measured(values[1] if values[0] else values[2], *dimension)
        case "number_in":
            unit = in_base(1.0, node.unit)
            if sizes[0].dimension != unit.dimension:
                raise _wrong(node, f"{plain(node.args[0])} is {kind(sizes[0])}, not {kind(unit)}")
            return Measured(values[0] / unit.value)
        case "in_unit":
            return in_base(_bare(node, sizes[0]), node.unit)
        case name if name in COMPARISONS:
            _alike(node, terms)
            return Measured(float(holds(name, *values)))
        case name:
            return Measured(_FLOATS[name](_bare(node, sizes[0])))


def _simple(power: Fraction) -> Power:
    return int(power) if power.denominator == 1 else power


def constant(node: Expression) -> Fraction | None:
    """An exponent made of bare numbers alone, exactly; None if it is anything else."""
    match node:
        case Number():
            return Fraction(node.text)
        case Operation(name="neg"):
            inner = constant(node.args[0])
            return None if inner is None else -inner
        case Operation(name="div"):
            over, under = map(constant, node.args)
            return over / under if over is not None and under else None
    return None


def _power(node: Operation, base: Measured, exponent: Measured) -> Measured:
    if exponent.dimension != (0, 0):
        raise _wrong(node, f"the exponent is {kind(exponent)}, where a plain number is needed")
    result = base.value**exponent.value
    if isinstance(result, complex):
        raise ValueError("a root of a negative number")
    if base.dimension == (0, 0):
        return Measured(result)
    exact = constant(node.args[1])
    if exact is None or exact.denominator > 12 or abs(exact) > 12:
        raise _wrong(node, f"{plain(node.args[0])} is {kind(base)}: its exponent has to be a small number")
    return Measured(result, _simple(base.force * exact), _simple(base.length * exact))


def evaluate_in(root: Expression, unit: str, known: Mapping[str, Measured]) -> float:
    """Work a formula out in a unit that fits it.

    Raises
    ------
    CalcpackError
        As :func:`evaluate`; or the unit measures something else.

    Examples
    --------
    >>> q, S = Reference("q", "2.01"), Reference("S", "1.02")
    >>> known = {"2.01": in_base(5.5, "kPa"), "1.02": in_base(4.5, "m")}
    >>> evaluate_in(q * S**2 / 8, "kN", known)
    13.921875
    >>> evaluate_in(q * S / 2, "kN", known)
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: 'q*S/2' is a line load, but kN stands for a force
    """
    result = evaluate(root, known)
    wanted = in_base(1.0, unit)
    if result.dimension != wanted.dimension:
        named = "no unit" if unit == "1" else unit
        raise CalcpackError(f"'{plain(root)}' is {kind(result)}, but {named} stands for {kind(wanted)}")
    return result.value / wanted.value + 0.0  # no negative zero
