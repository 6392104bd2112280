"""Reinforcing bars by their size: metric ones by diameter, US ones by number."""

from __future__ import annotations

import csv
import math
import re
from dataclasses import dataclass
from functools import lru_cache
from typing import Literal

from calcpack.job.errors import CalcpackError
from calcpack.job.house import house_folder
from calcpack.job.units import factor

# "20 mm", "20", "Ø20"; "#8", "No. 8", "no 8". A bare number is a diameter in mm.
_METRIC = re.compile(r"(?:[øØ⌀]\s*)?(\d+)(?:\.0*)?\s*(?:mm)?", re.IGNORECASE)
_US = re.compile(r"(?:#|no\.?)\s*(\d+)", re.IGNORECASE)


@dataclass(frozen=True)
class Bar:
    """A bar of a standard size.

    Parameters
    ----------
    name : str
        "20 mm", "#8".
    diameter : float [m]
        Nominal.
    area : float [m2]
        Nominal.
    source : str
        The table it is from.
    """

    name: str
    diameter: float
    area: float
    source: str = ""


@lru_cache(maxsize=1)
def _tables() -> dict[str, tuple[Bar, ...]]:
    return {system: _table(system) for system in ("metric", "us")}


def _table(system: str) -> tuple[Bar, ...]:
    path = house_folder("shared").joinpath("bars", f"{system}.csv")
    first, *rest = path.read_text(encoding="utf-8").splitlines()
    header, *rows = csv.reader(rest)
    units = [factor(title.split("[")[1].rstrip("]")) for title in header[1:]]
    found = []
    for name, *cells in rows:
        values = [float(cell) * unit for cell, unit in zip(cells, units, strict=True)]
        diameter = values[0]
        area = values[1] if len(values) > 1 else math.pi * diameter**2 / 4
        found.append(Bar(name, diameter, area, first.removeprefix("# ")))
    return tuple(found)


def bar_sizes(system: Literal["metric", "us"]) -> tuple[Bar, ...]:
    """The bars of a system, thinnest first.

    Parameters
    ----------
    system : str
        "metric" (6 to 40 mm) or "us" (#3 to #18).

    Returns
    -------
    tuple of Bar

    Source: EN 10080:2005, Table 6; ASTM A615/A615M, Table 1 (from memory).

    Examples
    --------
    >>> [each.name for each in bar_sizes("us")][:3]
    ['#3', '#4', '#5']
    """
    return _tables()[system]


def bar(size: str) -> Bar:
    """The bar of a size as a job names it.

    Parameters
    ----------
    size : str
        "20 mm" or "20" (a diameter in mm); "#8" or "No. 8".

    Returns
    -------
    Bar

    Raises
    ------
    CalcpackError
        There is no such size; the nearest one is named.

    Source: EN 10080:2005, Table 6; ASTM A615/A615M, Table 1 (from memory).

    Examples
    --------
    >>> found = bar("No. 8")
    >>> found.name, round(found.diameter * 1e3, 1), round(found.area * 1e6)  # [mm], [mm2]
    ('#8', 25.4, 510)
    >>> bar("20").name
    '20 mm'
    """
    text = size.strip()
    for system, pattern, form in (("metric", _METRIC, "{} mm"), ("us", _US, "#{}")):
        match = pattern.fullmatch(text)
        if match and len(match[1]) <= 6:
            number = int(match[1])
            name = form.format(number)
            sizes = _tables()[system]
            for each in sizes:
                if each.name == name:
                    return each
            close = min(sizes, key=lambda each: abs(_number(each) - number))
            raise CalcpackError(f"there is no bar '{size}'", remedy=f"the nearest is '{close.name}'")
    raise CalcpackError(f"'{size}' is not a bar size", remedy="write a diameter ('20 mm') or a number ('#8')")


def _number(each: Bar) -> int:
    """The number in a bar's name."""
    return int(re.sub(r"\D", "", each.name))
