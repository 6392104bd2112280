"""What the clauses of EN 1992-1-1 work with: strengths, outlines, bars; limits of validity as data."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from typing import NamedTuple

from calcpack.clauses.bars import Bar
from calcpack.clauses.en1992.national import STANDARD, National
from calcpack.job.errors import CalcpackError
from calcpack.job.model import Material, Section
from calcpack.sheet.evaluation import holds

CLOSE = 1e-9  # [m] within which two places are one


def within(demand: float, capacity: float) -> bool:
    """Whether a demand does not pass a capacity; as on a sheet, two that are equal but for rounding do not.

    Examples
    --------
    >>> within(0.1 + 0.2, 0.3), within(0.3001, 0.3)
    (True, False)
    """
    return holds("le", demand, capacity)


class Limit(NamedTuple):
    """Within what a value has to lie for the clauses to hold."""

    symbol: str
    least: float
    most: float
    unit: str
    clause: str

    @property
    def words(self) -> str:
        """As the sheet says it."""
        unit = "" if self.unit == "1" else f" {self.unit}"
        return f"{self.least:g} to {self.most:g}{unit} ({STANDARD}, {self.clause})"


# One table for the guard and for the sheet; stresses in MPa.
LIMITS = {
    "fck": Limit("f_ck", 12.0, 90.0, "MPa", "3.1.2(2)P"),
    "fyk": Limit("f_yk", 400.0, 600.0, "MPa", "3.2.2(3)P"),
}


def guard(name: str, value: float) -> float:
    """The value, if it lies within its limits.

    Parameters
    ----------
    name : str
        "fck" or "fyk".
    value : float [MPa]

    Raises
    ------
    CalcpackError
        Outside them; value, bounds and clause are named.

    Examples
    --------
    >>> guard("fck", 30.0)
    30.0
    >>> guard("fyk", 275.0)
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: material: f_yk = 275 MPa is out of range; it has to be from 400 to \
600 MPa (EN 1992-1-1, 3.2.2(3)P)
    """
    limit = LIMITS[name]
    if not limit.least <= value <= limit.most:
        raise CalcpackError(
            f"{limit.symbol} = {value:g} {limit.unit} is out of range",
            remedy=f"it has to be from {limit.words}",
            key="material",
        )
    return value


@dataclass(frozen=True)
class Strengths:
    """Concrete and bars with their design values; stresses in kPa, strains plain.

    Parameters
    ----------
    fck, fcm, fctm, fctk, ecm : float [kPa]
        fctk is the 5 % fractile.
    eps_cu : float
        Ultimate strain of the rectangular block, eps_cu3.
    eps_cu2 : float
        That of the parabola-rectangle.
    lam, eta : float
        Of the rectangular block.
    fcd, fctd, fyk, fyd, es : float [kPa]
    """

    fck: float
    fcm: float
    fctm: float
    fctk: float
    ecm: float
    eps_cu: float
    eps_cu2: float
    lam: float
    eta: float
    fcd: float
    fctd: float
    fyk: float
    fyd: float
    es: float

    @property
    def eps_yd(self) -> float:
        """Strain at which the bars yield."""
        return self.fyd / self.es


def block_factors(fck: float) -> tuple[float, float]:
    """λ and η of the rectangular stress block.

    Parameters
    ----------
    fck : float [MPa]

    Returns
    -------
    lam, eta : float

    Source: EN 1992-1-1:2004, 3.1.7(3), (3.19) to (3.22).

    Examples
    --------
    >>> block_factors(30.0), block_factors(70.0)
    ((0.8, 1.0), (0.75, 0.9))
    """
    if fck <= 50.0:
        return 0.8, 1.0
    return 0.8 - (fck - 50.0) / 400.0, 1.0 - (fck - 50.0) / 200.0


def strengths(material: Material, national: National) -> Strengths:
    """Design values of a material.

    Parameters
    ----------
    material : Material
    national : National

    Returns
    -------
    Strengths

    Raises
    ------
    CalcpackError
        It is no concrete with fck and bars with fyk, or they are out of range.

    Source: EN 1992-1-1:2004, 3.1.6, 3.1.7, 3.2.7, Table 3.1.

    Examples
    --------
    >>> from calcpack.clauses.en1992.national import national
    >>> values = {"fck": 30e3, "fctm": 2900.0, "fctk_005": 2000.0, "fyk": 500e3, "Es": 200e6}
    >>> c30 = Material(key="c", kind="concrete", modulus=33e6, unit_weight=25.0, values=values)
    >>> found = strengths(c30, national())
    >>> found.fcd, round(found.fyd, 1)
    (20000.0, 434782.6)
    """
    values = {key: value for key, value in material.values.items() if isinstance(value, int | float)}
    for key, remedy in (
        ("fck", "name an EN 1992 grade such as C30/37, or give fck"),
        ("fyk", 'name its bars, bars = "B500B", or give fyk'),
    ):
        if material.kind != "concrete" or key not in values:
            raise CalcpackError(
                f"material '{material.key}' has no {key}, which EN 1992-1-1 needs",
                remedy=remedy,
                key="material",
            )
    fck = guard("fck", values["fck"] / 1e3)
    fyk = guard("fyk", values["fyk"] / 1e3)
    fctm = values.get("fctm") or 1e3 * mean_tensile_strength(fck)
    fctk = values.get("fctk_005") or 0.7 * fctm
    high = fck > 50.0
    eps_cu = 1e-3 * (2.6 + 35.0 * ((90.0 - fck) / 100.0) ** 4) if high else 3.5e-3
    lam, eta = block_factors(fck)
    es = values.get("Es", 200e6)
    return Strengths(
        fck=fck * 1e3,
        fcm=values.get("fcm") or (fck + 8.0) * 1e3,
        fctm=fctm,
        fctk=fctk,
        ecm=material.modulus,
        eps_cu=values.get("eps_cu3") or eps_cu,
        eps_cu2=values.get("eps_cu2") or eps_cu,
        lam=lam,
        eta=eta,
        fcd=national["alpha_cc"] * fck * 1e3 / national["gamma_C"],
        fctd=national["alpha_ct"] * fctk / national["gamma_C"],
        fyk=fyk * 1e3,
        fyd=fyk * 1e3 / national["gamma_S"],
        es=es,
    )


def mean_tensile_strength(fck: float) -> float:
    """fctm [MPa] from fck [MPa], for a concrete that is given by its strength alone.

    Parameters
    ----------
    fck : float [MPa]

    Source: EN 1992-1-1:2004, Table 3.1, last column.

    Examples
    --------
    >>> round(mean_tensile_strength(30.0), 2), round(mean_tensile_strength(70.0), 2)
    (2.9, 4.61)
    """
    if fck <= 50.0:
        return float(0.3 * fck ** (2 / 3))
    return 2.12 * math.log(1 + (fck + 8.0) / 10.0)


@dataclass(frozen=True)
class Outline:
    """A cross-section seen from the face in compression.

    Parameters
    ----------
    web, depth : float [m]
    width, flange : float [m]
        Width and depth of the flange; the web's width and 0 where there is none.
    flange_in_tension : bool
        The flange lies at the far face.
    """

    web: float
    depth: float
    width: float
    flange: float
    flange_in_tension: bool = False

    @property
    def turned(self) -> Outline:
        """The same section with the other face in compression."""
        return replace(self, flange_in_tension=not self.flange_in_tension)

    @property
    def block_width(self) -> float:
        """Width at the face in compression [m]."""
        return self.web if self.flange_in_tension else self.width

    @property
    def block_flange(self) -> float:
        """Depth over which that width holds before the web begins [m]; 0 for a rectangle."""
        return 0.0 if self.flange_in_tension or self.width <= self.web else self.flange

    @property
    def area(self) -> float:
        """Gross area [m2]."""
        return self.web * self.depth + (self.width - self.web) * self.flange

    @property
    def centroid(self) -> float:
        """Of the gross concrete, from the face in compression [m]."""
        wings = (self.width - self.web) * self.flange
        at = self.depth - self.flange / 2 if self.flange_in_tension else self.flange / 2
        return (self.web * self.depth**2 / 2 + wings * at) / self.area

    @property
    def inertia(self) -> float:
        """Of the gross concrete about its centroid [m4]."""
        wings = (self.width - self.web) * self.flange
        at = self.depth - self.flange / 2 if self.flange_in_tension else self.flange / 2
        own = self.web * self.depth**3 / 12 + (self.width - self.web) * self.flange**3 / 12
        return (
            own
            + self.web * self.depth * (self.depth / 2 - self.centroid) ** 2
            + wings * (at - self.centroid) ** 2
        )

    @property
    def tension_width(self) -> float:
        """Mean width of the tension zone of the uncracked section; the web's with the flange in compression.

        Source: EN 1992-1-1:2004, 9.2.1.1(1).
        """
        if not self.flange_in_tension or self.width <= self.web:
            return self.web
        zone = self.depth - self.centroid
        out = min(self.flange, zone)
        return self.web + (self.width - self.web) * out / zone


def outline(section: Section, flange_width: float) -> Outline:
    """The outline of a job's section with its top in compression.

    Parameters
    ----------
    section : Section
        Dimensions in m.
    flange_width : float [m]
        Effective, of a tee.

    Raises
    ------
    CalcpackError
        The section is no rectangle or tee.

    Source: EN 1992-1-1:2004, 5.3.2.1(1)P for the width of the flange.
    """
    sizes = section.dimensions
    if section.shape == "rolled":
        raise CalcpackError(
            f"section '{section.key}' is a rolled one",
            remedy="a concrete beam is a rectangle or a tee",
            key="section",
        )
    if section.shape == "rectangle":
        return Outline(sizes["width"], sizes["depth"], sizes["width"], 0.0)
    return Outline(sizes["width"], sizes["depth"], flange_width, sizes["flange_depth"])


@dataclass(frozen=True)
class Bars:
    """Bars along a face, in layers.

    Parameters
    ----------
    bar : Bar
    layers : tuple of int
        Bars in each layer, the outermost first.
    inset : float [m]
        From the concrete's face to the bars' surface: cover and stirrup.
    pitch : float [m]
        From layer to layer, centre to centre.
    """

    bar: Bar
    layers: tuple[int, ...]
    inset: float
    pitch: float

    @property
    def count(self) -> int:
        """How many there are."""
        return sum(self.layers)

    @property
    def area(self) -> float:
        """All of them [m2]."""
        return self.count * self.bar.area

    @property
    def centroid(self) -> float:
        """From the face to the centre of them all [m]."""
        first = self.inset + self.bar.diameter / 2
        return (
            first + sum(number * layer for layer, number in enumerate(self.layers)) * self.pitch / self.count
        )

    @property
    def words(self) -> str:
        """As a bar list says it."""
        layers = f" ({' + '.join(str(number) for number in self.layers)})" if self.layers[1:] else ""
        return f"{self.count} \u00d7 {self.bar.name}{layers}"


@dataclass(frozen=True)
class Stirrups:
    """Upright stirrups of one size."""

    bar: Bar
    legs: int

    @property
    def area(self) -> float:
        """Of all legs in one cut [m2]."""
        return self.legs * self.bar.area
