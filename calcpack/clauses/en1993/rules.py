"""What EN 1993-1-1 and EN 1993-1-5 give as numbers: limits, curves, factors that a country may set.

From memory of EN 1993-1-1:2005 with AC:2009 and EN 1993-1-5:2006 with AC:2009; recommended values.
"""

from __future__ import annotations

from typing import Literal, NamedTuple

from calcpack.sheet.evaluation import holds

Curves = Literal["general", "rolled"]
LoadHeight = Literal["top", "centre", "bottom"]

CODE = "EN 1993-1-1"  # :2005 with AC:2009, as the basis of the sheet says
PLATED = "EN 1993-1-5"  # :2006 with AC:2009


class ClassLimits(NamedTuple):
    """Largest c/t over ε of a part in the classes 1, 2 and 3."""

    first: float
    second: float
    third: float
    cite: str


OUTSTAND = ClassLimits(9, 10, 14, f"{CODE} Table 5.2, sheet 2")
WEB = ClassLimits(72, 83, 124, f"{CODE} Table 5.2, sheet 1")
REFERENCE_STRENGTH = 235e3  # [kPa], ε = √(235/fy)

IMPERFECTION: dict[str, float] = {"a": 0.21, "b": 0.34, "c": 0.49}  # Tables 6.3 and 6.5
SLENDER = 2.0  # h/b up to which the better curve holds
CURVE: dict[Curves, tuple[str, str]] = {"general": ("a", "b"), "rolled": ("b", "c")}
CURVE_CITE: dict[Curves, str] = {
    "general": f"{CODE} Tables 6.3 and 6.4",
    "rolled": f"{CODE} Tables 6.3 and 6.5",
}

LARGEST_DIAGRAM = 2.7  # C1, ENV 1993-1-1:1992, F.1.2(6)
THICK = 0.040  # [m] up to which the first column of Table 3.1 holds
WEB_BUCKLING = 72.0  # hw/tw over ε/η, EN 1993-1-1 6.2.6(6)
HALF = 0.5  # of the shear resistance, up to which bending is not reduced, 6.2.8(2)
STRESS_SHARE = 1.4  # EN 1993-1-5 (7.2)


class Validity(NamedTuple):
    """A limit within which the clauses of this package hold."""

    key: str
    says: str
    least: float
    largest: float
    unit: str
    cite: str

    def holds(self, value: float) -> bool:
        """Whether a value [unit] lies within, the ends included."""
        return holds("ge", value, self.least) and holds("le", value, self.largest)


LIMITS: dict[str, Validity] = {
    each.key: each
    for each in (
        Validity("thickness", "thickest part of the section", 0.0, 80.0, "mm", f"{CODE} Table 3.1"),
        Validity("yield", "nominal yield strength", 200.0, 460.0, "MPa", f"{CODE} Table 3.1"),
        Validity("class", "class of the section", 1, 3, "1", f"{CODE} 5.5.2"),
    )
}


class Factors(NamedTuple):
    """Factors that a national annex may set.

    Parameters
    ----------
    gamma_M0, gamma_M1 : float
        Partial factors for the cross-section and for instability, 6.1(1).
    eta : float
        Hardening in the shear area, 6.2.6(3) (1.0 on the safe side).
    plateau, beta : float
        λ_LT,0 and β of rolled sections, 6.3.2.3(1).
    """

    gamma_M0: float = 1.0
    gamma_M1: float = 1.0
    eta: float = 1.0
    plateau: float = 0.4
    beta: float = 0.75


RECOMMENDED = Factors()

# Length of an overhang whose tip is free, over its own: load not above the shear centre, and above it.
OVERHANG = {False: 1.0, True: 2.5}
OVERHANG_CITE = "BS 5950-1:2000 Table 14"  # continuous, held sideways and against twist at the support
