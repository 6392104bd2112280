"""Bending and shear of ACI 318-19 as plain numbers, to choose bars with; the sheet's lines are apart."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import NamedTuple

from scipy.optimize import brentq

from calcpack.clauses.aci318.limits import bound
from calcpack.job.units import factor
from calcpack.sheet.evaluation import holds

PSI = factor("psi")  # [kPa]
INCH = factor("inch")  # [m]
CRUSHING = 0.003  # 22.2.2.1
PHI_SHEAR = 0.75  # Table 21.2.1
LEAST_DEVELOPMENT = 12  # [in], 25.4.2.1(b)


@dataclass(frozen=True)
class Block:
    """What the compressed side of a section looks like.

    Parameters
    ----------
    width : float [m]
        Of the compression face.
    web : float [m]
    flange : float [m]
        Depth over which the face's width holds; 0 where face and web are alike.
    """

    width: float
    web: float
    flange: float = 0.0

    @property
    def flanged(self) -> bool:
        """Whether the face is wider than the web."""
        return self.flange > 0 and self.width > self.web

    def area(self, depth: float) -> float:
        """Area of the compressed block of a depth [m2]."""
        wings = (self.width - self.web) * min(depth, self.flange) if self.flanged else 0.0
        return self.web * depth + wings

    def moment(self, depth: float) -> float:
        """Moment of that area about the compressed face [m3]."""
        thick = min(depth, self.flange)
        wings = (self.width - self.web) * thick**2 / 2 if self.flanged else 0.0
        return self.web * depth**2 / 2 + wings


class Steel(NamedTuple):
    """Tension bars, and compression bars where they count.

    Parameters
    ----------
    area, depth, outermost : float [m2], [m], [m]
        Of the tension bars: area, depth of their centroid, depth of the outermost layer.
    area_c, depth_c : float [m2], [m]
    """

    area: float
    depth: float
    outermost: float
    area_c: float = 0.0
    depth_c: float = 0.0


class Bending(NamedTuple):
    """A section at its nominal strength.

    Parameters
    ----------
    c, a : float [m]
        Depth to the neutral axis; depth of the stress block.
    stress, stress_c : float [kPa]
        In the tension and in the compression bars.
    strain : float
        Net tensile strain of the outermost layer.
    phi : float
    nominal : float [kNm]
    """

    c: float
    a: float
    stress: float
    stress_c: float
    strain: float
    phi: float
    nominal: float

    @property
    def design(self) -> float:
        """φ Mn [kNm]."""
        return self.phi * self.nominal


def beta_1(fc: float) -> float:
    """Depth of the stress block over depth to the neutral axis.

    Parameters
    ----------
    fc : float [kPa]

    Source: ACI 318-19, Table 22.2.2.4.3.

    Examples
    --------
    >>> [round(beta_1(psi * PSI), 3) for psi in (3000, 4000, 5000, 8000, 10000)]
    [0.85, 0.85, 0.8, 0.65, 0.65]
    """
    return min(0.85, max(0.65, 0.85 - 0.05 * (fc / PSI - 4000) / 1000))


def phi_bending(strain: float, yield_strain: float) -> float:
    """Strength reduction factor of a section by its net tensile strain, stirrups other than spirals.

    Parameters
    ----------
    strain, yield_strain : float
        ε_t of the outermost bars, and ε_ty.

    Source: ACI 318-19, Table 21.2.2.

    Examples
    --------
    >>> [round(phi_bending(strain, 0.002), 4) for strain in (0.002, 0.0035, 0.005, 0.02)]
    [0.65, 0.775, 0.9, 0.9]
    """
    return min(0.90, max(0.65, 0.65 + 0.25 * (strain - yield_strain) / 0.003))


def bending(block: Block, steel: Steel, fc: float, fy: float, modulus: float) -> Bending:
    """Nominal bending strength by strain compatibility, with the rectangular stress block.

    Parameters
    ----------
    block : Block
    steel : Steel
        Compression bars count only where they lie within the stress block.
    fc, fy, modulus : float [kPa]
        Of the concrete; yield strength and modulus of the bars.

    Returns
    -------
    Bending

    Source: ACI 318-19, 22.2.1, 22.2.2.1 and 22.2.2.4.

    Examples
    --------
    A beam 12 in wide with 3.0 in2 at 17.5 in, 4000 psi, Grade 60:

    >>> found = bending(Block(12 * INCH, 12 * INCH), Steel(3 * INCH**2, 17.5 * INCH, 17.5 * INCH),
    ...                 4000 * PSI, 60000 * PSI, 29e6 * PSI)
    >>> round(found.a / INCH, 3), found.phi, round(found.nominal / (PSI * INCH**3) / 12000, 1)  # [kip ft]
    (4.412, 0.9, 229.4)
    """
    beta = beta_1(fc)

    def stresses(c: float) -> tuple[float, float]:
        tension = min(fy, CRUSHING * modulus * (steel.depth - c) / c)
        pressed = steel.area_c > 0 and steel.depth_c < beta * c
        compression = min(fy, CRUSHING * modulus * (c - steel.depth_c) / c) if pressed else 0.0
        return tension, compression

    def out_of_balance(c: float) -> float:
        tension, compression = stresses(c)
        added = steel.area_c * (compression - 0.85 * fc) if compression else 0.0
        return 0.85 * fc * block.area(beta * c) + added - steel.area * tension

    c = float(brentq(out_of_balance, 1e-6 * steel.depth, steel.depth, xtol=1e-14, rtol=1e-14))
    tension, compression = stresses(c)
    a = beta * c
    nominal = 0.85 * fc * (block.area(a) * steel.depth - block.moment(a))
    if compression:
        nominal += steel.area_c * (compression - 0.85 * fc) * (steel.depth - steel.depth_c)
    strain = CRUSHING * (steel.outermost - c) / c
    return Bending(c, a, tension, compression, strain, phi_bending(strain, fy / modulus), nominal)


def root(fc: float) -> float:
    """√f'c as shear and development take it [kPa]; at most 100 psi.

    Parameters
    ----------
    fc : float [kPa]

    Source: ACI 318-19, 22.5.3.1 and 25.4.1.4.

    Examples
    --------
    >>> round(root(4900 * PSI) / PSI, 6), round(root(12000 * PSI) / PSI, 6)
    (70.0, 100.0)
    """
    return min(math.sqrt(fc / PSI) * PSI, bound("root f'_c"))


def least_steel(fc: float, fy: float, width: float, depth: float) -> float:
    """Least tension steel of a beam [m2].

    Parameters
    ----------
    fc, fy : float [kPa]
    width, depth : float [m]
        Web, or for a flange in tension as 9.6.1.2 has it; effective depth.

    Source: ACI 318-19, 9.6.1.2.

    Examples
    --------
    >>> round(least_steel(4000 * PSI, 60000 * PSI, 12 * INCH, 17.5 * INCH) / INCH**2, 2)
    0.7
    """
    fy = min(fy, bound("f_y least steel"))
    return max(3 * math.sqrt(fc / PSI), 200.0) * PSI / fy * width * depth


def size_effect(depth: float) -> float:
    """Size effect factor λs of shear.

    Parameters
    ----------
    depth : float [m]
        Effective depth.

    Source: ACI 318-19, 22.5.5.1.3.

    Examples
    --------
    >>> size_effect(10 * INCH), round(size_effect(30 * INCH), 4)
    (1.0, 0.7071)
    """
    return min(1.0, math.sqrt(2 / (1 + depth / INCH / 10)))


def shear_of_concrete(
    fc: float, width: float, depth: float, steel_ratio: float, *, with_least: bool
) -> float:
    """Shear that the concrete carries, no axial force, normalweight concrete [kN].

    Parameters
    ----------
    fc : float [kPa]
    width, depth : float [m]
    steel_ratio : float
        Tension steel over web width times effective depth.
    with_least : bool
        The least stirrups of 9.6.3.4 are there.

    Source: ACI 318-19, Table 22.5.5.1, rows (a) and (c), and 22.5.5.1.1.

    Examples
    --------
    >>> kip = 1000 * PSI * INCH**2
    >>> round(shear_of_concrete(4000 * PSI, 12 * INCH, 20 * INCH, 0.01, with_least=True) / kip, 2)
    30.36
    """
    stress = 2.0 if with_least else 8 * size_effect(depth) * steel_ratio ** (1 / 3)
    return min(stress, 5.0) * root(fc) * width * depth


def stirrup_limits(fc: float, width: float, depth: float, carried: float) -> tuple[float, float]:
    """Largest spacing of stirrups along the beam and of their legs across it [m].

    Parameters
    ----------
    fc : float [kPa]
    width, depth : float [m]
    carried : float [kN]
        Shear that the stirrups have to carry, V_s required.

    Source: ACI 318-19, Table 9.7.6.2.2.

    Examples
    --------
    >>> along, across = stirrup_limits(4000 * PSI, 12 * INCH, 20 * INCH, 0.0)
    >>> round(along / INCH, 2), round(across / INCH, 2)
    (10.0, 20.0)
    """
    if holds("le", carried, 4 * root(fc) * width * depth):
        return min(depth / 2, 24 * INCH), min(depth, 24 * INCH)
    return min(depth / 4, 12 * INCH), min(depth / 2, 12 * INCH)


def least_stirrups(fc: float, fyt: float, width: float) -> float:
    """Least stirrup area over its spacing [m2/m].

    Parameters
    ----------
    fc, fyt : float [kPa]
    width : float [m]
        Of the web.

    Source: ACI 318-19, 9.6.3.4.

    Examples
    --------
    >>> round(least_stirrups(4000 * PSI, 60000 * PSI, 12 * INCH) / INCH, 4)  # [in2/in]
    0.01
    """
    return max(0.75 * math.sqrt(fc / PSI), 50.0) * PSI * width / fyt


def effective_inertia(moment: float, cracking: float, gross: float, cracked: float) -> float:
    """Effective second moment of area I_e, in the unit of the two given.

    Parameters
    ----------
    moment, cracking : float [kNm]
        M_a of the service loads, and M_cr.
    gross, cracked : float [m4]
        I_g and I_cr.

    Source: ACI 318-19, Table 24.2.3.5.

    Examples
    --------
    >>> effective_inertia(60.0, 90.0, 100.0, 40.0), round(effective_inertia(90.0, 90.0, 100.0, 40.0), 2)
    (100.0, 54.55)
    """
    if moment <= 2 / 3 * cracking:
        return gross
    return cracked / (1 - (2 / 3 * cracking / moment) ** 2 * (1 - cracked / gross))


def development_length(
    bar: float, fc: float, fy: float, confinement: float, *, top: bool, small: bool
) -> float:
    """Development length of a deformed bar in tension, uncoated, normalweight concrete [m].

    Parameters
    ----------
    bar : float [m]
        Diameter.
    fc, fy : float [kPa]
    confinement : float
        (c_b + K_tr)/d_b; more than 2.5 counts as 2.5.
    top : bool
        More than 12 in of fresh concrete below.
    small : bool
        No. 6 (19 mm) or smaller.

    Source: ACI 318-19, Eq. (25.4.2.4a), Table 25.4.2.5, and 25.4.2.1(b): at least 12 in.

    Examples
    --------
    >>> round(development_length(INCH, 4000 * PSI, 60000 * PSI, 2.5, top=False, small=False) / INCH, 1)
    28.5
    """
    psi_t, psi_s, psi_g = 1.3 if top else 1.0, 0.8 if small else 1.0, grade_factor(fy)
    length = 3 / 40 * fy / root(fc) * psi_t * psi_s * psi_g / min(confinement, 2.5) * bar
    return max(length, LEAST_DEVELOPMENT * INCH)


def grade_factor(fy: float) -> float:
    """Reinforcement grade factor ψg, by the yield strength of the grade.

    Grade 420 of metric orders is Grade 60, though 420 MPa are 60.9 ksi; 550 MPa are 79.8 ksi.

    Parameters
    ----------
    fy : float [kPa]

    Source: ACI 318-19, Table 25.4.2.5; ACI 318M-19 says it by the metric grades.

    Examples
    --------
    >>> [grade_factor(ksi * 1000 * PSI) for ksi in (40, 60, 80, 100)]
    [1.0, 1.0, 1.15, 1.3]
    >>> [grade_factor(mpa * 1000) for mpa in (280, 420, 550, 690)]
    [1.0, 1.0, 1.15, 1.3]
    """
    ksi = fy / (1000 * PSI)
    return 1.0 if ksi <= 61 else 1.15 if ksi <= 81 else 1.3
