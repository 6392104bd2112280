"""Units at the edge of the program: text with a unit in, plain SI floats (m, kN, rad) out.

A unit is taken apart here, by a strict pattern, into names and small exponents; only single names are
ever looked up in pint's registry, so no text from a job file is evaluated as an expression. Factors are
exact fractions until the very last step, so that "1 ft" is the float 0.3048.
"""

from __future__ import annotations

import math
import re
from fractions import Fraction
from functools import lru_cache
from typing import TYPE_CHECKING, Any, NamedTuple

from calcpack.job.errors import CalcpackError, closest

if TYPE_CHECKING:
    from pint import UnitRegistry


class Unit(NamedTuple):
    """A unit as a factor to SI and the exponents of force and length."""

    factor: Fraction
    force: int
    length: int


class Kind(NamedTuple):
    """What a quantity can be: its dimension, its name with article, an example of how it is written."""

    force: int
    length: int
    name: str
    example: str


KINDS = {
    "length": Kind(0, 1, "a length", "4.5 m"),
    "area": Kind(0, 2, "an area", "0.12 m^2"),
    "section modulus": Kind(0, 3, "a section modulus", "557 cm^3"),
    "inertia": Kind(0, 4, "a second moment of area", "8356 cm^4"),
    "force": Kind(1, 0, "a force", "12 kN"),
    "moment": Kind(1, 1, "a moment", "54 kN*m"),
    "line load": Kind(1, -1, "a line load", "7.5 kN/m"),
    "pressure": Kind(1, -2, "a pressure", "2.4 kPa"),
    "stress": Kind(1, -2, "a stress", "30 MPa"),
    "unit weight": Kind(1, -3, "a unit weight", "25 kN/m^3"),
    "angle": Kind(0, 0, "an angle", "45 deg"),
}

_FOOT = Fraction("0.3048")
_INCH = _FOOT / 12
_POUND = Fraction("0.45359237") * Fraction("9.80665") / 1000  # [kN], exact by definition
_PI = Fraction("3.14159265358979323846264338327950288419716939937510")

# The units of everyday drawings, exact, so that most runs need not load pint, and those that pint lacks or
# reads otherwise (it takes lb for a mass). A test holds every name that pint knows against pint.
_COMMON = {
    "rad": Unit(Fraction(1), 0, 0),
    "deg": Unit(_PI / 180, 0, 0),
    "m": Unit(Fraction(1), 0, 1),
    "cm": Unit(Fraction(1, 100), 0, 1),
    "mm": Unit(Fraction(1, 1000), 0, 1),
    "ft": Unit(_FOOT, 0, 1),
    "in": Unit(_INCH, 0, 1),
    "N": Unit(Fraction(1, 1000), 1, 0),
    "kN": Unit(Fraction(1), 1, 0),
    "MN": Unit(Fraction(1000), 1, 0),
    "lb": Unit(_POUND, 1, 0),
    "lbs": Unit(_POUND, 1, 0),
    "lbf": Unit(_POUND, 1, 0),
    "pound": Unit(_POUND, 1, 0),
    "pounds": Unit(_POUND, 1, 0),
    "kip": Unit(1000 * _POUND, 1, 0),
    "kips": Unit(1000 * _POUND, 1, 0),
    "plf": Unit(_POUND / _FOOT, 1, -1),
    "klf": Unit(1000 * _POUND / _FOOT, 1, -1),
    "Pa": Unit(Fraction(1, 1000), 1, -2),
    "kPa": Unit(Fraction(1), 1, -2),
    "MPa": Unit(Fraction(1000), 1, -2),
    "GPa": Unit(Fraction(10**6), 1, -2),
    "psf": Unit(_POUND / _FOOT**2, 1, -2),
    "ksf": Unit(1000 * _POUND / _FOOT**2, 1, -2),
    "psi": Unit(_POUND / _INCH**2, 1, -2),
    "ksi": Unit(1000 * _POUND / _INCH**2, 1, -2),
    "pcf": Unit(_POUND / _FOOT**3, 1, -3),
}

_ONE = Unit(Fraction(1), 0, 0)
_LONGEST = 80  # characters of a quantity; of its unit half
_PLAIN = str.maketrans(
    {"−": "-", "’": "'", "′": "'", "″": '"', "”": '"', "“": '"', "\u00a0": " ", "\u202f": " ", "\u2009": " "}
    | {"·": "*", "⋅": "*", "×": "*", "\u00b5": "µ", "\u03bc": "µ"}
)
_RAISED = str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹", "-0123456789")
_NAME = re.compile(
    r"(?P<name>[A-Za-zµ_]{1,32}|1(?![0-9.]))"
    r"(?:(?:\^|\*\*)(?P<power>-?[1-9])|(?P<bare>[1-9]))?(?![0-9.])"
)
_JOIN = re.compile(r"\s*(?P<sign>\*(?!\*)|-|/|\bper\b|(?<=\s))\s*")
_NUMBER = r"[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]{1,3})?"
_QUANTITY = re.compile(rf"(?P<number>{_NUMBER})\s*(?P<unit>[^\s0-9.,][^,]*)?")
_INCHES = (
    r"(?P<whole>[0-9]+(?:\.[0-9]*)?|\.[0-9]+)??"
    r"(?:(?(whole)[ -]+)(?P<over>[0-9]{1,4})/(?P<under>[1-9][0-9]{0,3}))?"
)
_FEET_AND_INCHES = re.compile(
    rf"(?P<sign>[+-]?)(?:(?P<feet>[0-9]+(?:\.[0-9]*)?)\s*(?:'|ft|foot|feet)(?:\s*-\s*|\s*)(?=[0-9.]|$))?"
    rf'(?:{_INCHES}\s*(?P<mark>"|\'\'|in|inch|inches))?'
)


@lru_cache(maxsize=1)
def _registry() -> UnitRegistry[Any]:
    """pint's registry with exact numbers; loading it takes longer than everything else here."""
    from pint import UnitRegistry

    return UnitRegistry(non_int_type=Fraction)


def _unknown(unit: str) -> CalcpackError:
    shown = unit.strip()[: _LONGEST // 2]
    close = closest(shown, _COMMON) if shown.isalpha() else None
    remedy = f"did you mean '{close}'?" if close else "write it like 'kN/m^2', 'mm' or 'psf'"
    return CalcpackError(f"there is no unit '{shown}'", remedy=remedy)


@lru_cache(maxsize=512)
def _named(name: str) -> Unit:
    """A single unit name."""
    if name in _COMMON:
        return _COMMON[name]
    registry = _registry()
    if not registry.parse_unit_name(name):
        raise _unknown(name)
    value, base = registry.get_base_units(name)
    powers: dict[str, Any] = dict(base.dimensionality)
    mass, length, time = (powers.pop(f"[{each}]", 0) for each in ("mass", "length", "time"))
    if (mass, length, time) == (1, 0, 0) and not powers:
        raise CalcpackError(f"'{name}' is a mass", remedy="give the weight, for example in kN or lb")
    force, rest = int(mass), int(length - mass)
    if powers or (force, rest, -2 * force) != (mass, length - mass, time) or not (force or rest):
        raise CalcpackError(f"'{name}' is no unit of length, force or stress")
    return Unit(Fraction(str(value)) / 1000**force, force, rest)  # pint's base is N, ours kN


@lru_cache(maxsize=2048)
def _unit(unit: str) -> Unit:
    """A whole unit, names joined by ``*``, ``/``, a hyphen or a space, from left to right."""
    text = _spelled_out(unit.translate(_PLAIN).strip())
    if not text or len(text) > _LONGEST // 2:
        raise _unknown(unit)
    result, place, sign = _ONE, 0, 1
    while True:
        match = _NAME.match(text, place)
        if not match:
            raise _unknown(unit)
        power = sign * int(match["power"] or match["bare"] or 1)
        if match["name"] != "1":
            one = _named(match["name"])
            result = Unit(
                result.factor * one.factor**power,
                result.force + one.force * power,
                result.length + one.length * power,
            )
        place = match.end()
        if place == len(text):
            return result
        join = _JOIN.match(text, place)
        if not join:
            raise _unknown(unit)
        sign = -1 if join["sign"] in ("/", "per") else 1
        place = join.end()


def _spelled_out(text: str) -> str:
    """Raised digits as ordinary exponents: m² becomes m^2."""
    return re.sub("[⁻⁰¹²³⁴⁵⁶⁷⁸⁹]+", lambda match: "^" + match[0].translate(_RAISED), text)


def factor(unit: str) -> float:
    """What one of a unit is in SI (m, kN and what follows from them; angles in rad).

    Parameters
    ----------
    unit : str
        For example "kN*m", "kPa", "mm^2", "psf", "kip-ft", "1".

    Raises
    ------
    CalcpackError
        There is no such unit, or it is none of length and force.

    Source: international foot and pound and standard gravity, exact by definition; the rest by pint.

    Examples
    --------
    >>> factor("mm"), factor("kN/m^2"), factor("ft"), factor("1")
    (0.001, 1.0, 0.3048, 1.0)
    """
    return float(_unit(unit).factor)


def dimension(unit: str) -> tuple[int, int]:
    """The exponents of force and length in a unit.

    Raises
    ------
    CalcpackError
        There is no such unit, or it is none of length and force.

    Examples
    --------
    >>> dimension("kPa"), dimension("kip*ft"), dimension("mm"), dimension("1")
    ((1, -2), (1, 1), (0, 1), (0, 0))
    """
    known = _unit(unit)
    return known.force, known.length


def kind_of(force: int, length: int) -> str:
    """A dimension in words, as a message names it.

    Examples
    --------
    >>> kind_of(1, -2), kind_of(0, 1), kind_of(2, 0)
    ('a pressure', 'a length', 'force^2')
    """
    if not force and not length:
        return "a plain number"
    for kind in KINDS.values():
        if (kind.force, kind.length) == (force, length):
            return kind.name
    parts = {"force": force, "length": length}
    return "·".join(f"{name}^{power}" if power != 1 else name for name, power in parts.items() if power)


def parse_quantity(text: object, kind: str) -> float:
    """Read a quantity with its unit.

    Parameters
    ----------
    text : str
        "4.5 m", "14 ft 6 in", "14'-6 1/2\\"", "50 psf"; anything else than a string is refused.
    kind : str
        What it has to be, one of ``KINDS``: "length", "pressure", "line load", "force", "stress" ...

    Returns
    -------
    float
        In m, kN and what follows from them (kN/m, kPa, kN/m³); angles in rad.

    Raises
    ------
    CalcpackError
        No unit, an unknown unit, the wrong dimension, no finite number.

    Examples
    --------
    >>> parse_quantity("4.5 m", "length"), parse_quantity("2.4 kPa", "pressure")
    (4.5, 2.4)
    >>> round(parse_quantity("14 ft 6 in", "length"), 4), parse_quantity("14'-6\\"", "length")
    (4.4196, 4.4196)
    """
    expected = KINDS[kind]
    example = f'for example "{expected.example}"'
    if isinstance(text, bool) or not isinstance(text, str | int | float):
        raise CalcpackError(f"{expected.name} is a text with a unit, {example}")
    if not isinstance(text, str):
        raise CalcpackError(f"{expected.name} needs its unit, {example}")
    plain = text.translate(_PLAIN).strip()
    if len(plain) > _LONGEST:
        raise CalcpackError(f"'{plain[:24]}...' is no quantity", remedy=f"give {expected.name}, {example}")
    if kind == "length" and (value := _feet_and_inches(plain)) is not None:
        return float(value)
    match = _QUANTITY.fullmatch(plain)
    if not match:
        comma = re.match(r"[+-]?[0-9]+,[0-9]", plain)
        remedy = f"the decimal sign is a point, {example}" if comma else f"give {expected.name}, {example}"
        raise CalcpackError(f"'{text}' is no quantity", remedy=remedy)
    if not match["unit"]:
        raise CalcpackError(f"{expected.name} needs its unit, {example}")
    unit = _unit(match["unit"])
    if (unit.force, unit.length) != (expected.force, expected.length):
        message = f"'{text}' is {kind_of(unit.force, unit.length)}, not {expected.name}"
        raise CalcpackError(message, remedy=f'give it like "{expected.example}"')
    try:
        value = Fraction(match["number"]) * unit.factor
        result = float(value)
    except OverflowError:
        result = math.inf
    if not math.isfinite(result):
        raise CalcpackError(f"'{text}' is no finite number", remedy=f"give {expected.name}, {example}")
    return result


def _feet_and_inches(text: str) -> Fraction | None:
    """Feet, inches and fractions of an inch [m]; None if the text is not written so."""
    match = _FEET_AND_INCHES.fullmatch(text)
    if not match or not (match["feet"] or match["whole"] or match["over"]):
        return None
    if match["mark"] and not (match["whole"] or match["over"]):
        return None
    inches = Fraction(match["whole"] or 0)
    if match["over"]:
        inches += Fraction(int(match["over"]), int(match["under"]))
    length = Fraction(match["feet"] or 0) * _FOOT + inches * _INCH
    return -length if match["sign"] == "-" else length
