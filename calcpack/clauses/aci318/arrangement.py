"""How bars lie in a beam: layers, clear distances, depths."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

from calcpack.clauses.aci318.strength import INCH, PSI
from calcpack.clauses.bars import Bar

MOST_LAYERS = 2


@dataclass(frozen=True)
class Cage:
    """The web that bars have to fit into.

    Parameters
    ----------
    width, depth : float [m]
    cover : float [m]
        To the stirrup.
    stirrup : float [m]
        Diameter.
    aggregate : float [m]
        Nominal largest size.
    """

    width: float
    depth: float
    cover: float
    stirrup: float
    aggregate: float

    def clear_needed(self, bar: Bar) -> float:
        """Least clear distance between parallel bars of a layer [m].

        Source: ACI 318-19, 25.2.1.
        """
        return max(INCH, bar.diameter, 4 / 3 * self.aggregate)

    def layer_gap(self, bar: Bar) -> float:
        """Clear distance kept between layers [m]: 25.2.2 asks for 1 in; a bar diameter by common practice."""
        return max(INCH, bar.diameter)

    def most(self, bar: Bar) -> int:
        """How many bars fit side by side. Source: ACI 318-19, 25.2.1."""
        room = self.width - 2 * (self.cover + self.stirrup)
        need = self.clear_needed(bar)
        return int((room + need) / (bar.diameter + need) + 1e-9)


@dataclass(frozen=True)
class Group:
    """Bars near one face of a beam.

    Parameters
    ----------
    bar : Bar
    layers : tuple of int
        Bars in each layer, the outermost first.
    cage : Cage

    Examples
    --------
    >>> from calcpack.clauses.bars import bar
    >>> cage = Cage(12 * INCH, 20 * INCH, 1.5 * INCH, 0.375 * INCH, 0.75 * INCH)
    >>> group = arranged(5, bar("#8"), cage)
    >>> group.layers, group.fits, round(group.depth / INCH, 3), round(group.outermost / INCH, 3)
    ((4, 1), True, 17.225, 17.625)
    """

    bar: Bar
    layers: tuple[int, ...]
    cage: Cage

    @property
    def count(self) -> int:
        """All bars."""
        return sum(self.layers)

    @property
    def area(self) -> float:
        """Their area [m2]."""
        return self.count * self.bar.area

    @property
    def words(self) -> str:
        """ "4 #8", "5 #8 in two layers"."""
        return f"{self.count} {self.bar.words}" + (" in two layers" if self.layers[1:] else "")

    @property
    def fits(self) -> bool:
        """Whether every layer has its clear distances."""
        return len(self.layers) <= MOST_LAYERS and max(self.layers) <= self.cage.most(self.bar)

    @property
    def spacing(self) -> float:
        """Distance of the outermost layer's bars, centre to centre [m]."""
        room = self.cage.width - 2 * (self.cage.cover + self.cage.stirrup) - self.bar.diameter
        return room / max(self.layers[0] - 1, 1)

    @cached_property
    def heights(self) -> tuple[float, ...]:
        """Centre of each layer from the face [m]."""
        first = self.cage.cover + self.cage.stirrup + self.bar.diameter / 2
        step = self.bar.diameter + self.cage.layer_gap(self.bar)
        return tuple(first + place * step for place in range(len(self.layers)))

    @property
    def centroid(self) -> float:
        """Of all bars, from the face [m]."""
        return sum(n * y for n, y in zip(self.layers, self.heights, strict=True)) / self.count

    @property
    def depth(self) -> float:
        """Effective depth d [m]."""
        return self.cage.depth - self.centroid

    @property
    def outermost(self) -> float:
        """Depth of the outermost layer, d_t [m]."""
        return self.cage.depth - self.heights[0]

    @property
    def places(self) -> list[tuple[float, float]]:
        """Each bar's (from the web's centre line, from the face) [m]; upper layers over the outer bars."""
        found: list[tuple[float, float]] = []
        half = self.cage.width / 2 - self.cage.cover - self.cage.stirrup - self.bar.diameter / 2
        for number, height in zip(self.layers, self.heights, strict=True):
            step = 2 * half / max(number - 1, 1)
            found += [(0.0 if number == 1 else -half + step * place, height) for place in range(number)]
        return found


def arranged(count: int, bar: Bar, cage: Cage) -> Group:
    """Bars in one layer where they fit, else in two, the outer one full.

    Parameters
    ----------
    count : int
    bar : Bar
    cage : Cage

    Returns
    -------
    Group
        Where even two layers are too few, with the bars shared between them: it does not fit.
    """
    most = cage.most(bar)
    if count <= most:
        return Group(bar, (count,), cage)
    if count - most <= most:
        return Group(bar, (most, count - most), cage)
    half = count // 2
    return Group(bar, (count - half, half) if half else (count,), cage)


def crack_spacing(stress: float, cover: float) -> float:
    """Largest spacing of the bars next to a tension face [m].

    Parameters
    ----------
    stress : float [kPa]
        Under service loads; 2/3 of f_y may stand for it (24.3.2.1).
    cover : float [m]
        Clear cover of the bars themselves.

    Source: ACI 318-19, Table 24.3.2.

    Examples
    --------
    >>> [round(crack_spacing(40000 * PSI, inches * INCH) / INCH, 2) for inches in (2, 0)]
    [10.0, 12.0]
    """
    ratio = 40_000 * PSI / stress
    return min(15 * INCH * ratio - 2.5 * cover, 12 * INCH * ratio)


COVERS = {
    "inside": "not exposed to weather or in contact with ground",
    "weather": "exposed to weather or in contact with ground",
    "ground": "cast against and permanently in contact with ground",
}


def least_cover(exposure: str, stirrup: float, main: float) -> float:
    """Least specified cover of a beam's stirrups, cast in place, not prestressed [m].

    Parameters
    ----------
    exposure : str
        A key of ``COVERS``.
    stirrup, main : float [m]
        Diameters; the main bars, which lie behind the stirrups, have a cover of their own.

    Source: ACI 318-19, Table 20.5.1.3.1.

    Examples
    --------
    >>> [round(least_cover(each, 0.5 * INCH, 1.0 * INCH) / INCH, 3) for each in COVERS]
    [1.5, 1.5, 3.0]
    >>> round(least_cover("weather", 0.375 * INCH, 1.0 * INCH) / INCH, 3)
    1.625
    """
    if exposure == "weather":
        needed = [(1.5 if size <= 0.01605 else 2.0) * INCH for size in (stirrup, main)]  # No. 5 is 16 mm
        return max(needed[0], needed[1] - stirrup)
    return 3.0 * INCH if exposure == "ground" else 1.5 * INCH
