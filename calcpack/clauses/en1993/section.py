"""The cross-section as EN 1993-1-1 sees it, in numbers: strength, class, resistance to bending and shear."""

from __future__ import annotations

import math
from dataclasses import dataclass

from calcpack.clauses.en1993.rules import (
    HALF,
    OUTSTAND,
    RECOMMENDED,
    REFERENCE_STRENGTH,
    THICK,
    WEB,
    WEB_BUCKLING,
    ClassLimits,
    Factors,
)
from calcpack.clauses.steel import ISection, i_section
from calcpack.job.errors import CalcpackError
from calcpack.job.model import Material, Section
from calcpack.sheet.evaluation import holds


@dataclass(frozen=True)
class Profile:
    """A rolled I-section of one steel.

    Parameters
    ----------
    name : str
    shape : ISection [m]
    strength : float [kPa]
        Yield strength for its thickest part.
    modulus, shear_modulus : float [kPa]
    factors : Factors
    """

    name: str
    shape: ISection
    strength: float
    modulus: float
    shear_modulus: float
    factors: Factors = RECOMMENDED

    @property
    def epsilon(self) -> float:
        """ε = √(235/fy), Table 5.2."""
        return math.sqrt(REFERENCE_STRENGTH / self.strength)

    @property
    def web_depth(self) -> float:
        """h_w, clear between the flanges [m]."""
        return self.shape.depth - 2 * self.shape.flange

    @property
    def thickness(self) -> float:
        """Of the thickest part [m]."""
        return max(self.shape.flange, self.shape.web)

    @property
    def flange_class(self) -> int:
        """Class of the compressed flange, Table 5.2."""
        return part_class(self.shape.flange_outstand / self.shape.flange, self.epsilon, OUTSTAND)

    @property
    def web_class(self) -> int:
        """Class of the web in bending, Table 5.2."""
        return part_class(self.shape.flat_web / self.shape.web, self.epsilon, WEB)

    @property
    def section_class(self) -> int:
        """The less favourable of the two, 5.5.2(6)."""
        return max(self.flange_class, self.web_class)

    @property
    def modulus_of_section(self) -> float:
        """W_y: plastic in classes 1 and 2, else elastic [m3], 6.2.5(2) and 6.3.2.1(3)."""
        return self.shape.plastic_modulus if self.section_class in (1, 2) else self.shape.elastic_modulus

    @property
    def shear_area(self) -> float:
        """A_v of a rolled I-section, load parallel to the web [m2], 6.2.6(3) a)."""
        s = self.shape
        flanges = s.area - 2 * s.width * s.flange + (s.web + 2 * s.root_radius) * s.flange
        return max(flanges, self.factors.eta * self.web_depth * s.web)

    @property
    def web_may_buckle(self) -> bool:
        """Whether shear buckling of an unstiffened web has to be looked at, 6.2.6(6)."""
        return self.web_depth / self.shape.web > WEB_BUCKLING * self.epsilon / self.factors.eta

    @property
    def bending(self) -> float:
        """M_c,Rd [kNm], 6.2.5."""
        return self.modulus_of_section * self.strength / self.factors.gamma_M0

    @property
    def shear(self) -> float:
        """V_pl,Rd [kN], 6.2.6(2)."""
        return self.shear_area * self.strength / math.sqrt(3) / self.factors.gamma_M0

    def bending_with_shear(self, shear: float) -> float:
        """M_V,Rd [kNm] beside a shear force [kN], 6.2.8.

        In classes 1 and 2 equation (6.30); in class 3 the web's part of the elastic modulus is taken with
        the reduced strength of 6.2.8(3).
        """
        if abs(shear) <= HALF * self.shear:
            return self.bending
        rho = (2 * abs(shear) / self.shear - 1) ** 2
        s, web = self.shape, self.web_depth
        if self.section_class in (1, 2):
            lost = rho * (web * s.web) ** 2 / (4 * s.web)
        else:
            lost = rho * s.web * web**3 / (6 * s.depth)
        return min((self.modulus_of_section - lost) * self.strength / self.factors.gamma_M0, self.bending)


def part_class(slenderness: float, epsilon: float, limits: ClassLimits) -> int:
    """Class of a part from its c/t, 1 to 4; exactly at a limit it is still in the better class.

    Parameters
    ----------
    slenderness : float
        c/t.
    epsilon : float
        ε = √(235 MPa/f_y).
    limits : ClassLimits

    Source: EN 1993-1-1:2005, Table 5.2.

    Examples
    --------
    >>> part_class(9.0, 1.0, OUTSTAND), part_class(9.01, 1.0, OUTSTAND), part_class(124.01, 1.0, WEB)
    (1, 2, 4)
    """
    bounds = (limits.first, limits.second, limits.third)
    return 1 + sum(holds("gt", slenderness, bound * epsilon) for bound in bounds)


def yield_strength(material: Material, thickness: float) -> float:
    """f_y for the thickness [m] of the thickest part [kPa].

    Parameters
    ----------
    material : Material
        fy and fy_thick [kPa].
    thickness : float [m]

    Source: EN 1993-1-1:2005, Table 3.1: one value up to 40 mm, one from there to 80 mm.

    Raises
    ------
    CalcpackError
        The material has no yield strength, or none for parts over 40 mm.
    """
    key = "fy" if holds("le", thickness, THICK) else "fy_thick"
    value = material.values.get(key)
    if material.kind != "steel" or not isinstance(value, int | float):
        raise CalcpackError(
            f"material {material.key} gives no {key} for a part {thickness * 1000:g} mm thick",
            remedy=f"name a steel grade such as S275, or give {key}",
            key="material",
        )
    return float(value)


def profile_of(section: Section | None, material: Material | None, factors: Factors = RECOMMENDED) -> Profile:
    """A section and a material of the job as a profile.

    Parameters
    ----------
    section : Section
        A rolled one; dimensions in m.
    material : Material
        A steel; strengths in kPa.
    factors : Factors

    Raises
    ------
    CalcpackError
        The section is not a rolled one, or the material not a steel.

    Source: EN 1993-1-1:2005, Table 3.1 and 3.2.6.

    Examples
    --------
    >>> from calcpack.job.library import rolled_sections
    >>> steel = Material(key="s235", kind="steel", modulus=210e6, unit_weight=78.5, values={"fy": 235e3})
    >>> ipe = profile_of(rolled_sections()["ipe300"], steel)
    >>> ipe.section_class, round(ipe.bending, 1), round(ipe.shear_area * 1e6), round(ipe.shear, 1)
    (1, 147.7, 2568, 348.4)
    """
    if section is None or section.shape != "rolled":
        raise CalcpackError(
            "a steel beam needs a rolled section",
            remedy="give the beam a section with shape = 'rolled' and a designation such as 'IPE 300'",
            key="section",
        )
    if material is None:
        raise CalcpackError(
            "a steel beam needs a material", remedy="name a grade such as S275", key="material"
        )
    shape = i_section(section)
    strength = yield_strength(material, max(shape.flange, shape.web))
    given = material.values.get("G")
    poisson = 0.3  # EN 1993-1-1 3.2.6
    shear_modulus = float(given) if isinstance(given, int | float) else material.modulus / (2 * (1 + poisson))
    return Profile(section.designation, shape, strength, material.modulus, shear_modulus, factors)
