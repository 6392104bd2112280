"""Units as the sheet writes them: parsed, exact, spelled for text, for formulas and aloud.

A unit of the record is plain ASCII: ``kN*m``, ``kN/m^3``, ``mm^2``, ``1``. Everything printed is
spelled from its parts here, and can be read back.
"""

from __future__ import annotations

import math
import re
from collections.abc import Iterable
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache

Parts = tuple[tuple[str, int], ...]

_FOOT = Fraction(3048, 10000)
_INCH = _FOOT / 12
# The pound-force by definition: 0.45359237 kg at 9.80665 m/s2 (ISO 80000-4), here in kN.
_POUND = Fraction(45359237, 100000000) * Fraction(980665, 100000) / 1000
_MILLI = Fraction(1, 1000)


@dataclass(frozen=True)
class _Atom:
    factor: Fraction  # to kN, m and radians
    force: int
    length: int
    spoken: str  # one
    plural: str


def _atom(factor: Fraction | int, force: int, length: int, spoken: str, plural: str = "") -> _Atom:
    return _Atom(Fraction(factor), force, length, spoken, plural or spoken + "s")


ATOMS: dict[str, _Atom] = {
    "m": _atom(1, 0, 1, "metre"),
    "cm": _atom(Fraction(1, 100), 0, 1, "centimetre"),
    "mm": _atom(_MILLI, 0, 1, "millimetre"),
    "N": _atom(_MILLI, 1, 0, "newton"),
    "kN": _atom(1, 1, 0, "kilonewton"),
    "MN": _atom(1000, 1, 0, "meganewton"),
    "Pa": _atom(_MILLI, 1, -2, "pascal"),
    "kPa": _atom(1, 1, -2, "kilopascal"),
    "MPa": _atom(1000, 1, -2, "megapascal"),
    "GPa": _atom(1000000, 1, -2, "gigapascal"),
    "ft": _atom(_FOOT, 0, 1, "foot", "feet"),
    "in": _atom(_INCH, 0, 1, "inch", "inches"),
    "lbf": _atom(_POUND, 1, 0, "pound", "pounds"),
    "kip": _atom(1000 * _POUND, 1, 0, "kip"),
    "psf": _atom(_POUND / _FOOT**2, 1, -2, "pound per square foot", "pounds per square foot"),
    "ksf": _atom(1000 * _POUND / _FOOT**2, 1, -2, "kip per square foot", "kips per square foot"),
    "psi": _atom(_POUND / _INCH**2, 1, -2, "pound per square inch", "pounds per square inch"),
    "ksi": _atom(1000 * _POUND / _INCH**2, 1, -2, "kip per square inch", "kips per square inch"),
    "plf": _atom(_POUND / _FOOT, 1, -1, "pound per foot", "pounds per foot"),
    "klf": _atom(1000 * _POUND / _FOOT, 1, -1, "kip per foot", "kips per foot"),
    "pcf": _atom(_POUND / _FOOT**3, 1, -3, "pound per cubic foot", "pounds per cubic foot"),
    "rad": _atom(1, 0, 0, "radian"),
    "deg": _atom(Fraction(math.pi / 180), 0, 0, "degree"),
}

_SUPERSCRIPTS = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")
_PLAIN = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")
_FACTOR = re.compile(r"([A-Za-z]+)(?:\^(-?[0-9]))?")


@lru_cache(maxsize=512)
def parts(unit: str) -> Parts:
    """Factors of a unit with their exponents, in writing order; () for "1".

    Raises
    ------
    ValueError
        The unit is not one the sheet knows.

    Examples
    --------
    >>> parts("kN/m^3")
    (('kN', 1), ('m', -3))
    >>> parts("1/m")
    (('m', -1),)
    """
    found: list[tuple[str, int]] = []
    if len(unit) > 40 or not unit:
        raise ValueError(f"unit {unit[:40]!r} is not one the sheet knows")
    for position, piece in enumerate(re.split(r"(?=[*/])", unit)):
        sign = -1 if piece.startswith("/") else 1
        bare = piece.lstrip("*/") if position else piece
        if bare == "1" and position == 0:
            continue
        match = _FACTOR.fullmatch(bare)
        if not match or match[1] not in ATOMS:
            raise ValueError(f"unit {unit!r} is not one the sheet knows")
        found.append((match[1], sign * int(match[2] or 1)))
    return tuple(found)


@lru_cache(maxsize=512)
def exact_factor(unit: str) -> Fraction:
    """What one of the unit is in kN and m, exactly (degrees excepted).

    Examples
    --------
    >>> exact_factor("ft"), exact_factor("MPa"), exact_factor("1")
    (Fraction(381, 1250), Fraction(1000, 1), Fraction(1, 1))
    """
    result = Fraction(1)
    for name, exponent in parts(unit):
        result *= ATOMS[name].factor ** exponent
    return result


@lru_cache(maxsize=512)
def exponents(unit: str) -> tuple[int, int]:
    """Exponents of force and length.

    Examples
    --------
    >>> exponents("kN*m"), exponents("kPa"), exponents("1")
    ((1, 1), (1, -2), (0, 0))
    """
    found = parts(unit)
    return (
        sum(ATOMS[name].force * exponent for name, exponent in found),
        sum(ATOMS[name].length * exponent for name, exponent in found),
    )


def _joined(found: Parts, times: str, power: Iterable[str]) -> str:
    over = [text for (_, exponent), text in zip(found, power, strict=True) if exponent > 0]
    under = [text for (_, exponent), text in zip(found, power, strict=True) if exponent < 0]
    return "/".join([times.join(over) or "1", *under])


@lru_cache(maxsize=512)
def label(unit: str) -> str:
    """The unit as printed in text; "" for "1".

    Examples
    --------
    >>> label("kN*m"), label("kN/m^3"), label("in^4"), label("deg"), label("1")
    ('kN·m', 'kN/m³', 'in⁴', '°', '')
    """
    if unit == "deg":
        return "°"
    found = parts(unit)
    if not found:
        return ""
    powers = [
        name + (str(abs(exponent)).translate(_SUPERSCRIPTS) if abs(exponent) != 1 else "")
        for name, exponent in found
    ]
    return _joined(found, "·", powers)


@lru_cache(maxsize=512)
def unit_of(text: str) -> str:
    """The unit whose label this is: the way back from :func:`label`.

    Examples
    --------
    >>> unit_of("kN·m"), unit_of("kN/m³"), unit_of("")
    ('kN*m', 'kN/m^3', '1')
    """
    if text in ("", "°"):
        return "deg" if text else "1"
    plain = re.sub("[⁰¹²³⁴⁵⁶⁷⁸⁹⁻]+", lambda found: "^" + found[0].translate(_PLAIN), text)
    unit = plain.replace("·", "*")
    parts(unit)
    return unit


def unit_latex(unit: str) -> str:
    r"""The unit for a formula, as one piece of text that can be searched for; "" for "1".

    Examples
    --------
    >>> unit_latex("kN*m"), unit_latex("kN/m^3"), unit_latex("1")
    ('\\text{kN·m}', '\\text{kN/m³}', '')
    """
    text = label(unit)
    return rf"\text{{{text}}}" if text else ""


_POWERS = {2: "square", 3: "cubic"}


@lru_cache(maxsize=512)
def unit_spoken(unit: str) -> str:
    """The unit as read aloud, in the plural; "" for "1".

    Examples
    --------
    >>> unit_spoken("kN*m"), unit_spoken("kN/m^3"), unit_spoken("mm^4")
    ('kilonewton metres', 'kilonewtons per cubic metre', 'millimetres to the power 4')
    """

    def said(name: str, exponent: int, plural: bool) -> str:
        word = ATOMS[name].plural if plural else ATOMS[name].spoken
        if exponent == 1:
            return word
        return f"{_POWERS[exponent]} {word}" if exponent in _POWERS else f"{word} to the power {exponent}"

    found = parts(unit)
    over = [(name, exponent) for name, exponent in found if exponent > 0]
    under = [(name, -exponent) for name, exponent in found if exponent < 0]
    words = [said(name, exponent, place == len(over) - 1) for place, (name, exponent) in enumerate(over)]
    if over and under:  # "kilonewtons per metre", but "kilonewton metres"
        words = [said(name, exponent, True) for name, exponent in over]
    words += ["per " + said(name, exponent, False) for name, exponent in under]
    return " ".join(words)
