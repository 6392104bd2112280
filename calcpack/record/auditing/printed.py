"""Printed texts read back, and whether one is a value correctly rounded."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property, lru_cache

from calcpack.record.auditing.units import Unit, dimension_words, printed_unit

_TEXT = re.compile(
    r"(?P<sign>[-\u2212]?)(?P<whole>[0-9]{1,30})(?:\.(?P<part>[0-9]{1,30}))?"
    r"(?:\s?×\s?10(?P<power>⁻?[⁰¹²³⁴⁵⁶⁷⁸⁹]{1,2}))?"
    r"(?:(?P<degree>°)|\s(?P<unit>\S{1,40}))?"
)
_RAISED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")


@dataclass(frozen=True)
class Printed:
    """What a printed text says.

    Parameters
    ----------
    number : Fraction [its own unit]
    step : Fraction
        One of the last printed digit.
    unit : Unit
    """

    number: Fraction
    step: Fraction
    unit: Unit

    @cached_property
    def near(self) -> float:
        """The number in kN and m, in sixteen digits."""
        return float(self.number * self.unit.size)

    @cached_property
    def near_step(self) -> float:
        """The step in kN and m, in sixteen digits."""
        return float(self.step * self.unit.size)


@lru_cache(maxsize=4096)
def read_printed(text: str) -> Printed:
    """Read a printed value.

    Raises
    ------
    ValueError
        It is not a number with a unit.

    Examples
    --------
    >>> read_printed("−12.30 kN·m").number, read_printed("83.56 × 10⁶ mm⁴").step
    (Fraction(-123, 10), Fraction(10000, 1))
    """
    match = _TEXT.fullmatch(text)
    if not match:
        raise ValueError(f"'{text[:60]}' is no printed value")
    part = match["part"] or ""
    power = int((match["power"] or "0").translate(_RAISED)) - len(part)
    step = Fraction(10) ** power
    number = int(match["whole"] + part) * step
    return Printed(
        -number if match["sign"] else number, step, printed_unit(match["degree"] or match["unit"] or "")
    )


def twelve_digits(value: float) -> Fraction:
    """A value as the decimal of twelve significant digits nearest to it.

    Examples
    --------
    >>> twelve_digits(0.1 + 0.2)
    Fraction(3, 10)
    """
    if not math.isfinite(value):
        raise ValueError(f"{value} is no finite number")
    return Fraction(f"{value:.11e}")


def rounded_to(value: Fraction, step: Fraction) -> Fraction:
    """A value rounded to a multiple of a step, halves away from zero.

    Examples
    --------
    >>> rounded_to(Fraction(-25, 10), Fraction(1)), rounded_to(Fraction(125, 1000), Fraction(1, 100))
    (Fraction(-3, 1), Fraction(13, 100))
    """
    count = math.floor(abs(value) / step + Fraction(1, 2))
    return -count * step if value < 0 else count * step


def rounds_to(near: float, number: float, step: float) -> bool | None:
    """Whether a value rounds to a number, where sixteen digits of all three tell; None where they do not.

    Examples
    --------
    >>> rounds_to(10.0562, 10.06, 0.01), rounds_to(10.0562, 10.05, 0.01), rounds_to(10.055, 10.06, 0.01)
    (True, False, None)
    """
    apart = abs(near - number)
    lost = 1e-9 * step + 1e-11 * (abs(near) + abs(number))  # twelve digits count, see above
    if apart < step / 2 - lost:
        return True
    return False if apart > step / 2 + lost else None


def rounding_fault(value: float, unit: Unit, text: str) -> str:
    """What is wrong with a value's printed text; "" if nothing.

    Examples
    --------
    >>> from calcpack.record.auditing.units import unit
    >>> rounding_fault(10.0562, unit("kN/m"), "10.06 kN/m")
    ''
    >>> rounding_fault(10.0562, unit("kN/m"), "10.05 kN/m")
    'the value rounds to 10.06, 10.05 is printed'
    >>> rounding_fault(10.0562, unit("kN/m"), "10.06 kN")
    'the value is a line load, a force is printed'
    """
    try:
        said = read_printed(text)
        if said.unit.dimension == unit.dimension and rounds_to(value * unit.near, said.near, said.near_step):
            return ""
        exact = twelve_digits(value) * unit.size / said.unit.size
    except ValueError as error:
        return str(error)
    if said.unit.dimension != unit.dimension:
        return (
            f"the value is {dimension_words(*unit.dimension)}, "
            f"{dimension_words(*said.unit.dimension)} is printed"
        )
    right = rounded_to(exact, said.step)
    if right == said.number:
        return ""
    return f"the value rounds to {decimal(right, said.step)}, {decimal(said.number, said.step)} is printed"


def decimal(number: Fraction, step: Fraction) -> str:
    """A multiple of a power of ten written out as a decimal.

    Examples
    --------
    >>> decimal(Fraction(-123, 10), Fraction(1, 100)), decimal(Fraction(83560000), Fraction(10000))
    ('-12.30', '83560000')
    """
    places = max(0, len(str(step.denominator)) - 1)
    count = abs(number) * 10**places
    digits = str(int(count)).rjust(places + 1, "0")
    whole = f"{digits[:-places]}.{digits[-places:]}" if places else digits
    return f"-{whole}" if number < 0 else whole
