"""Reinforcing bars by their size: metric ones by diameter, US ones by number."""

from __future__ import annotations

import csv
import math
import re
from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache
from typing import Literal

from calcpack.job.errors import CalcpackError, nearest
from calcpack.job.house import house_folder
from calcpack.job.model import BarSize
from calcpack.job.names import alike, bar_name
from calcpack.job.units import factor

_METRIC = re.compile(r"[0-9]+ mm")
_US = re.compile(r"#[0-9]+")


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
    own : bool
        Whether that is a table of the job's own.
    """

    name: str
    diameter: float
    area: float
    source: str = ""
    own: bool = False

    @property
    def words(self) -> str:
        """The bar in a bar list: "#8", "⌀20 mm", or the name of one of the job's own."""
        return f"\u2300{self.name}" if _METRIC.fullmatch(self.name) else self.name

    @property
    def cite(self) -> str:
        """Its source where that is the job's own table."""
        return self.source if self.own else ""


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
    return OFFICE.bar(size)


@dataclass(frozen=True)
class Stock:
    """The bars a job can have: the office's, the job's own before them.

    Parameters
    ----------
    own : tuple of Bar

    Examples
    --------
    >>> sizes = [BarSize(name="D18", diameter=0.018, area=255e-6, source="bars.csv")]
    >>> stock = stock_of(sizes)
    >>> stock.bar("d18").area, stock.bar("20 mm").own
    (0.000255, False)
    >>> stock.among(("12 mm", "16 mm", "20 mm"))
    ('12 mm', '16 mm', 'D18', '20 mm')
    """

    own: tuple[Bar, ...] = ()

    def bar(self, size: str) -> Bar:
        """The bar of a size as a job names it.

        Raises
        ------
        CalcpackError
            There is no such size; the nearest one is named.
        """
        name = bar_name(size)
        bars = [*self.own, *(each for system in _tables().values() for each in system)]
        for each in bars:
            if alike(each.name) == alike(name):
                return each
        if wanted := _numbered(name):
            numbered = [(each, found) for each in bars if (found := _numbered(each.name))]
            near = [(abs(found[1] - wanted[1]), each) for each, found in numbered if found[0] == wanted[0]]
            _, close = min(near, key=lambda each: each[0])
            raise CalcpackError(f"there is no bar '{size}'", remedy=f"the nearest is '{close.name}'")
        remedy = "write a diameter ('20 mm') or a number ('#8')"
        if self.own:
            remedy += f", or one of your own: {nearest(name, [each.name for each in self.own])}"
        raise CalcpackError(f"'{size}' is not a bar size", remedy=remedy)

    def among(self, usual: Sequence[str], above: float = 0.0) -> tuple[str, ...]:
        """Sizes to choose from, thinnest first: usual ones, and the job's own within their range.

        Parameters
        ----------
        usual : sequence of str
            Thinnest first.
        above : float [m]
            The range begins beyond this diameter, if it is given, else at the thinnest usual size.
        """
        bars = [self.bar(size) for size in usual]
        if not self.own:
            return tuple(each.name for each in bars)
        least, most = min(each.diameter for each in bars), max(each.diameter for each in bars)
        found = {
            each.name: each
            for each in self.own
            if (above < each.diameter if above else least <= each.diameter) and each.diameter <= most
        }
        found |= {each.name: each for each in bars}
        return tuple(sorted(found, key=lambda name: (found[name].diameter, found[name].area)))

    def groups(self, usual: Sequence[Sequence[str]]) -> tuple[tuple[str, ...], ...]:
        """Groups of usual sizes, each with the job's own that fall into it.

        Examples
        --------
        >>> stock_of([BarSize(name="28 mm", diameter=0.028, area=616e-6, source="")]).groups(
        ...     (("20 mm", "25 mm"), ("32 mm",))
        ... )
        (('20 mm', '25 mm'), ('28 mm', '32 mm'))
        """
        found: list[tuple[str, ...]] = []
        for group in usual:
            above = self.bar(found[-1][-1]).diameter if found else 0.0
            found.append(self.among(group, above))
        return tuple(found)


OFFICE = Stock()


def stock_of(sizes: Sequence[BarSize]) -> Stock:
    """The bars of a job with its own sizes."""
    return Stock(tuple(Bar(each.name, each.diameter, each.area, each.source, True) for each in sizes))


def _numbered(name: str) -> tuple[str, int] | None:
    """Kind and number of a size's name: "20 mm" is ("mm", 20), "#8" is ("#", 8); None for another name."""
    kind = "mm" if _METRIC.fullmatch(name) else "#" if _US.fullmatch(name) else ""
    return (kind, int(name.strip("# m"))) if kind else None
