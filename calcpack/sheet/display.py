"""How a value is written on the sheet, and how what is written is read back.

Rounding is exact: the value to twelve significant digits, which leaves the noise of binary arithmetic
behind, is turned into the shown unit by exact fractions and rounded half away from zero at the printed
digits, so that whoever recomputes a printed text by hand finds the same digits.
"""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from decimal import Decimal
from fractions import Fraction
from functools import lru_cache
from typing import Literal

from calcpack.sheet.unit_text import exact_factor, exponents, label, parts, unit_of

System = Literal["SI", "US"]

NO_BREAK = "\u00a0"
MINUS = "\u2212"

_LEAST = 3  # significant figures of a computed value, at least
_MOST = 4  # and no more decimals than give this many
_FULL = 8  # a given value is shown in full up to so many significant figures
_CUT = 6  # and cut to so many beyond that

# Decimals an engineer expects of a unit; any other unit goes by significant figures alone.
_NATURAL = {
    "m": 2, "mm": 0, "cm": 1, "kN": 1, "N": 0, "kN/m": 2, "kPa": 2, "MPa": 1, "kN*m": 1, "kN/m^3": 1,
    "m^2": 2, "m^3": 3, "ft": 2, "in": 2, "kip": 1, "klf": 3, "plf": 0, "psf": 0, "ksf": 2, "ksi": 1,
    "psi": 0, "pcf": 0, "kip*ft": 1, "ft^2": 1, "in^2": 2, "in^3": 1, "1": 3, "rad": 5, "deg": 1,
}  # fmt: skip
_NATURAL_GIVEN = {**_NATURAL, "1": 0}  # a count or a factor is given as it is
_LARGE = 10**6  # from here on, and below _SMALL, powers of ten are split off in threes
_SMALL = Fraction(1, 10**4)

_TO_US = {
    "m": "ft", "cm": "in", "mm": "in", "kN": "kip", "MN": "kip", "N": "lbf",
    "Pa": "psf", "kPa": "psf", "MPa": "ksi", "GPa": "ksi",
}  # fmt: skip
_TO_SI = {
    "ft": "m", "in": "mm", "lbf": "kN", "kip": "kN", "psf": "kPa", "ksf": "kPa", "psi": "MPa", "ksi": "MPa",
    "plf": "kN/m", "klf": "kN/m", "pcf": "kN/m^3",
}  # fmt: skip
_WHOLE_US = {"kN/m": "klf", "N/m": "plf", "kN/m^2": "psf", "kN/m^3": "pcf"}


@lru_cache(maxsize=512)
def shown_unit(unit: str, system: System) -> str:
    """The unit, in the record's spelling, that a system shows for a unit of the record.

    Examples
    --------
    >>> shown_unit("kN*m", "US"), shown_unit("kN/m", "US"), shown_unit("mm^4", "US")
    ('kip*ft', 'klf', 'in^4')
    >>> shown_unit("ft", "US"), shown_unit("ft", "SI"), shown_unit("kN*m", "SI")
    ('ft', 'm', 'kN*m')
    """
    if system == "US" and unit in _WHOLE_US:
        return _WHOLE_US[unit]
    table = _TO_US if system == "US" else _TO_SI
    found = parts(unit)
    if not any(name in table for name, _ in found):
        return unit
    if unit in table:
        return table[unit]
    text = "1"
    for name, exponent in found:
        other = table.get(name, name)
        if len(parts(other)) != 1:
            raise ValueError(f"unit {unit!r} has no {system} counterpart")
        text += f"{'*' if exponent > 0 else '/'}{other}"
        text += f"^{abs(exponent)}" if abs(exponent) != 1 else ""
    return text.removeprefix("1*")


def display_unit(unit: str, system: System) -> tuple[str, float]:
    """The printed label of a unit in a system, and the factor that turns a value into it.

    Parameters
    ----------
    unit : str
        As in the record: "kN*m", "mm", "1".
    system : "SI" or "US"

    Returns
    -------
    (str, float)
        The label and the factor [shown unit per unit].

    Raises
    ------
    ValueError
        The unit is not one the sheet knows.

    Examples
    --------
    >>> display_unit("kN*m", "SI")
    ('kN·m', 1.0)
    >>> label, factor = display_unit("kPa", "US")
    >>> f"{label} {factor:.4f}"
    'psf 20.8854'
    """
    other = shown_unit(unit, system)
    return label(other), float(exact_factor(unit) / exact_factor(other))


def _rounded(size: Fraction, decimals: int) -> int:
    """``size`` in units of its last printed digit, halves upward; size is not negative."""
    scaled: Fraction = size * 10**decimals
    return math.floor(scaled + Fraction(1, 2))


def _digits(size: Fraction, decimals: int) -> str:
    whole = str(_rounded(size, decimals)).rjust(decimals + 1, "0")
    return f"{whole[:-decimals]}.{whole[-decimals:]}" if decimals else whole


def _order(size: Fraction) -> int:
    """The power of ten of the first digit."""
    guess = len(str(size.numerator)) - len(str(size.denominator))
    ten: Fraction = Fraction(10) ** guess
    return guess if size >= ten else guess - 1


def _decimals_for(size: Fraction, significant: int) -> int:
    """Decimals that show so many significant figures, once rounded."""
    decimals = significant - 1 - _order(size)
    if decimals > 0 and _rounded(size, decimals) >= 10**significant:
        decimals -= 1  # 9.996 becomes 10.0, not 10.00
    return max(decimals, 0)


def _given_decimals(size: Fraction, natural: int) -> int:
    """Decimals that show a given value in full."""
    first = min(natural, _decimals_for(size, _MOST))
    for decimals in range(first, max(first, _FULL - 1 - _order(size)) + 1):
        if abs(Fraction(_rounded(size, decimals), 10**decimals) - size) <= size / 10**11:
            return decimals
    cut = max(first, _decimals_for(size, _CUT))
    while cut > first and _rounded(size, cut) % 10 == 0:
        cut -= 1
    return cut


def _computed_decimals(size: Fraction, natural: int) -> int:
    return max(_decimals_for(size, _LEAST), min(natural, _decimals_for(size, _MOST)))


def _power_of_ten(size: Fraction) -> int:
    """The multiple of three split off a very large or very small value."""
    if _SMALL <= size < _LARGE:
        return 0
    return 3 * math.floor(_order(size) / 3)


def decimal_of(value: float) -> Fraction:
    """A value as the decimal fraction that is printed of it: twelve significant digits.

    Examples
    --------
    >>> decimal_of(23.749999999999996) == Fraction(95, 4)
    True
    """
    return Fraction(f"{float(value):.12g}")


def _converted(value: float, unit: str, shown_in: str) -> Fraction:
    if not math.isfinite(value):
        raise ValueError(f"{value} cannot be shown")
    if exponents(unit) != exponents(shown_in):
        raise ValueError(f"a value in {unit!r} cannot be shown in {shown_in!r}")
    return decimal_of(value) * (exact_factor(unit) / exact_factor(shown_in))


@lru_cache(maxsize=4096)
def _number(value: float, unit: str, shown_in: str, exact: bool) -> str:
    number = _converted(value, unit, shown_in)
    size = abs(number)
    natural = (_NATURAL_GIVEN if exact else _NATURAL).get(shown_in)
    # A thousand times finer than the expected decimals is nothing: what a sum leaves over.
    floor = Fraction(1, 10**12) if natural is None or exact else Fraction(1, 2 * 10 ** (natural + 3))
    if size < floor:
        return _digits(Fraction(0), natural or 0)
    ten = _power_of_ten(size)
    size /= Fraction(10) ** ten
    if exact:
        decimals = _given_decimals(size, 0 if ten else natural or 0)
    else:
        decimals = _computed_decimals(size, 2 if ten else natural or 0)
    text = (MINUS if number < 0 else "") + _digits(size, decimals)
    return text + (f"{NO_BREAK}×{NO_BREAK}10{_raised(ten)}" if ten else "")


def _raised(power: int) -> str:
    return str(power).translate(str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻"))


def shown_number(
    value: float, unit: str, system: System, exact: bool = False, *, shown_in: str | None = None
) -> str:
    """The number of :func:`show`, without its unit.

    Examples
    --------
    >>> shown_number(10.0562, "kN/m", "SI"), shown_number(-0.0, "kN", "SI")
    ('10.06', '0.0')
    """
    return _number(float(value), unit, shown_in or shown_unit(unit, system), exact)


def show(value: float, unit: str, system: System, exact: bool = False, *, shown_in: str | None = None) -> str:
    """A value as the sheet prints it, with a no-break space before the unit.

    A computed value has at least 3 significant figures, and the decimals its unit usually has as long as
    these make no more than 4. Halves are rounded away from zero, on the shortest decimal form of the
    value. The minus sign is U+2212; a negative zero is not shown.

    Parameters
    ----------
    value : float [unit]
    unit : str
        As in the record.
    system : "SI" or "US"
    exact : bool
        A given value: shown in full up to 8 significant figures, to 6 beyond that.
    shown_in : str
        A unit to show it in instead of the system's own.

    Raises
    ------
    ValueError
        The unit is not one the sheet knows, or the value is not a finite number.

    Examples
    --------
    >>> print(show(54.0, "kN*m", "SI"), show(4.125, "m", "SI", exact=True), show(4.5, "m", "SI", exact=True))
    54.0 kN·m 4.125 m 4.50 m
    >>> print(show(4.2672, "m", "US", exact=True), show(-12.345, "kN", "SI"), show(0.00416, "m^4", "SI"))
    14.00 ft −12.3 kN 0.00416 m⁴
    >>> print(show(8.356e7, "mm^4", "SI"), show(27.5790292, "MPa", "US", exact=True, shown_in="psi"))
    83.56 × 10⁶ mm⁴ 4000 psi
    """
    other = shown_in or shown_unit(unit, system)
    return with_unit(_number(float(value), unit, other, exact), other)


def with_unit(number: str, unit: str) -> str:
    """A printed number with its unit, a no-break space between them."""
    text = label(unit)
    return number + (text if text in ("", "°") else NO_BREAK + text)


def shown_column(values: Sequence[float], unit: str, system: System) -> list[str]:
    """The numbers of a table column with one count of decimals for all, that of the largest of them.

    Examples
    --------
    >>> shown_column([110.66, 9.125, 0.0], "kN*m", "SI")
    ['110.7', '9.1', '0.0']
    """
    if not values:
        return []
    other = shown_unit(unit, system)
    numbers = [_converted(float(value), unit, other) for value in values]
    largest = max(abs(number) for number in numbers)
    natural = _NATURAL.get(other, 0)
    decimals = _computed_decimals(largest, natural) if largest else natural
    texts = []
    for number in numbers:
        negative = number < 0 and _rounded(abs(number), decimals) > 0
        texts.append((MINUS if negative else "") + _digits(abs(number), decimals))
    return texts


_SHOWN = re.compile(
    rf"([-{MINUS}]?)([0-9]{{1,30}}(?:\.[0-9]{{1,30}})?)"
    r"(?:\s?×\s?10([⁻]?[⁰¹²³⁴⁵⁶⁷⁸⁹]{1,2}))?"
    r"(?:(°)|\s(\S{1,40}))?"
)


def parse_shown(text: str) -> tuple[Decimal, str]:
    """The number and the record unit that a printed text says; its exponent is the last printed digit's.

    Raises
    ------
    ValueError
        The text is not one :func:`show` writes.

    Examples
    --------
    >>> parse_shown("−12.30 kN·m")
    (Decimal('-12.30'), 'kN*m')
    >>> parse_shown("83.56 × 10⁶ mm⁴")
    (Decimal('8.356E+7'), 'mm^4')
    """
    match = _SHOWN.fullmatch(text)
    if not match:
        raise ValueError(f"{text[:60]!r} is not a shown value")
    sign, digits, power, degree, unit = match.groups()
    number = Decimal(("-" if sign else "") + digits)
    if power:
        number = number.scaleb(int(power.translate(str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-"))))
    return number, unit_of(degree or unit or "")


def is_shown_as(value: float, unit: str, text: str) -> bool:
    """Whether a printed text is the value rounded at the printed digits, in whatever unit it is printed.

    Examples
    --------
    >>> is_shown_as(10.0562, "kN/m", "10.06 kN/m"), is_shown_as(10.0562, "kN/m", "10.05 kN/m")
    (True, False)
    """
    number, other = parse_shown(text)
    if not math.isfinite(value) or exponents(other) != exponents(unit):
        return False
    exact = decimal_of(value) * (exact_factor(unit) / exact_factor(other))
    exponent = number.as_tuple().exponent
    assert isinstance(exponent, int)  # the pattern lets no NaN through
    step = Fraction(10) ** exponent
    nearest = math.floor(abs(exact) / step + Fraction(1, 2)) * step
    return Fraction(number) == (-nearest if exact < 0 else nearest)
