"""Units as an auditor knows them: exact, read from the record's spelling and from the printed one."""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property, lru_cache

# International foot; pound-force of 0.45359237 kg at 9.80665 m/s2 (ISO 80000-4). Base: kN and m.
_FT = Fraction(3048, 10000)
_IN = _FT / 12
_LBF = Fraction(45359237, 10**8) * Fraction(980665, 10**5) / 1000
_PI = Fraction("3.14159265358979323846264338327950288419716939937510")

# name: (in kN and m, exponent of force, exponent of length)
_KNOWN: dict[str, tuple[Fraction, int, int]] = {
    "m": (Fraction(1), 0, 1),
    "cm": (Fraction(1, 100), 0, 1),
    "mm": (Fraction(1, 1000), 0, 1),
    "N": (Fraction(1, 1000), 1, 0),
    "kN": (Fraction(1), 1, 0),
    "MN": (Fraction(1000), 1, 0),
    "Pa": (Fraction(1, 1000), 1, -2),
    "kPa": (Fraction(1), 1, -2),
    "MPa": (Fraction(1000), 1, -2),
    "GPa": (Fraction(10**6), 1, -2),
    "ft": (_FT, 0, 1),
    "in": (_IN, 0, 1),
    "lbf": (_LBF, 1, 0),
    "kip": (1000 * _LBF, 1, 0),
    "plf": (_LBF / _FT, 1, -1),
    "klf": (1000 * _LBF / _FT, 1, -1),
    "psf": (_LBF / _FT**2, 1, -2),
    "ksf": (1000 * _LBF / _FT**2, 1, -2),
    "psi": (_LBF / _IN**2, 1, -2),
    "ksi": (1000 * _LBF / _IN**2, 1, -2),
    "pcf": (_LBF / _FT**3, 1, -3),
    "rad": (Fraction(1), 0, 0),
    "deg": (_PI / 180, 0, 0),
}
_LONGEST = 40
_PIECE = re.compile(r"([*/]?)([A-Za-z]+|1)(?:\^(-?[0-9]))?")
_RAISED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")


@dataclass(frozen=True)
class Unit:
    """A unit: its size in kN and m, and its dimension."""

    size: Fraction
    force: int
    length: int

    @cached_property
    def near(self) -> float:
        """Its size in sixteen digits."""
        return float(self.size)

    @property
    def dimension(self) -> tuple[int, int]:
        """Exponents of force and length."""
        return self.force, self.length


@lru_cache(maxsize=1024)
def unit(text: str) -> Unit:
    """A unit in the record's spelling.

    Parameters
    ----------
    text : str
        "kN*m", "kN/m^3", "1/m", "1".

    Raises
    ------
    ValueError
        It is none that a sheet can have.

    Examples
    --------
    >>> unit("kN/m^3").dimension, unit("mm").size, unit("1").dimension
    ((1, -3), Fraction(1, 1000), (0, 0))
    """
    if not 0 < len(text) <= _LONGEST:
        raise ValueError(f"there is no unit '{text[:_LONGEST]}'")
    size, force, length, place = Fraction(1), 0, 0, 0
    while place < len(text):
        match = _PIECE.match(text, place)
        if not match or bool(match[1]) != bool(place):
            raise ValueError(f"there is no unit '{text}'")
        if match[2] == "1":
            if place or match[3]:
                raise ValueError(f"there is no unit '{text}'")
        elif match[2] not in _KNOWN:
            raise ValueError(f"there is no unit '{text}'")
        else:
            power = int(match[3] or 1) * (-1 if match[1] == "/" else 1)
            one, of_force, of_length = _KNOWN[match[2]]
            size *= one**power
            force += power * of_force
            length += power * of_length
        place = match.end()
    return Unit(size, force, length)


@lru_cache(maxsize=1024)
def printed_unit(text: str) -> Unit:
    """A unit as a sheet prints it behind a number; nothing stands for a plain number.

    Examples
    --------
    >>> printed_unit("kN·m").dimension, printed_unit("in⁴").dimension, printed_unit("").dimension
    ((1, 1), (0, 4), (0, 0))
    """
    if text in ("", "°"):
        return unit("deg" if text else "1")
    plain = re.sub("[⁰¹²³⁴⁵⁶⁷⁸⁹⁻]+", lambda found: "^" + found[0].translate(_RAISED), text)
    return unit(plain.replace("·", "*"))


_NAMES = {
    (0, 0): "a plain number",
    (0, 1): "a length",
    (0, 2): "an area",
    (0, 3): "a section modulus",
    (0, 4): "a second moment of area",
    (1, 0): "a force",
    (1, 1): "a moment",
    (1, -1): "a line load",
    (1, -2): "a pressure",
    (1, -3): "a unit weight",
}


def dimension_words(force: Fraction | int, length: Fraction | int) -> str:
    """A dimension in words.

    Examples
    --------
    >>> dimension_words(1, -2), dimension_words(0, Fraction(1, 2))
    ('a pressure', 'force^0 length^1/2')
    """
    found = _NAMES.get((int(force), int(length))) if force == int(force) and length == int(length) else None
    return found or f"force^{force} length^{length}"
