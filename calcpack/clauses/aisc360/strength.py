"""Strength of doubly symmetric I-shapes in figures: Chapters B, F, G and J of AISC 360-22.

Everything in m, kN, kPa and kNm. The lines of a sheet say the same once more, see `lines` and `web_lines`.
"""

from __future__ import annotations

import math
from typing import Literal, NamedTuple

from calcpack.clauses.steel import ISection, SegmentMoments
from calcpack.sheet.evaluation import holds

Method = Literal["LRFD", "ASD"]
Zone = Literal["yielding", "inelastic", "elastic"]


class Factor(NamedTuple):
    """The resistance factor and the safety factor of a limit state.

    Examples
    --------
    >>> BENDING.available(167.0, "LRFD"), BENDING.available(167.0, "ASD")
    (150.3, 100.0)
    """

    phi: float
    omega: float
    cite: str

    def available(self, nominal: float, method: Method) -> float:
        """Design strength φ R_n or allowable strength R_n / Ω, in the unit of the nominal one.

        Source: AISC 360-22 (B3-1), (B3-2).
        """
        return self.phi * nominal if method == "LRFD" else nominal / self.omega


BENDING = Factor(0.90, 1.67, "AISC 360-22 F1")
SHEAR_STOCKY = Factor(1.00, 1.50, "AISC 360-22 G2.1(a)")
SHEAR = Factor(0.90, 1.67, "AISC 360-22 G1")
WEB_YIELDING = Factor(1.00, 1.50, "AISC 360-22 J10.2")
WEB_CRIPPLING = Factor(0.75, 2.00, "AISC 360-22 J10.3")
PLATE_BUCKLING = 5.34  # k_v of a web without stiffeners, G2.1(b)(2)


class Steel(NamedTuple):
    """A steel's yield strength and modulus [kPa]."""

    yield_strength: float
    modulus: float

    @property
    def root(self) -> float:
        """√(E / F_y)."""
        return math.sqrt(self.modulus / self.yield_strength)


class Slenderness(NamedTuple):
    """Width-to-thickness ratios of flange and web with their limits."""

    flange: float
    flange_compact: float
    flange_noncompact: float
    web: float
    web_compact: float

    @property
    def compact_flange(self) -> bool:
        """Whether the flange can yield throughout. Source: AISC 360-22 B4.1."""
        return holds("le", self.flange, self.flange_compact)

    @property
    def slender_flange(self) -> bool:
        """Whether the flange buckles before it yields. Source: AISC 360-22 B4.1."""
        return holds("gt", self.flange, self.flange_noncompact)

    @property
    def compact_web(self) -> bool:
        """Whether the web is compact in bending, as F2 and F3 ask. Source: AISC 360-22 B4.1."""
        return holds("le", self.web, self.web_compact)


def slenderness(shape: ISection, steel: Steel) -> Slenderness:
    """Flange and web of a rolled shape in bending against their limits.

    Source: AISC 360-22 B4.1 and Table B4.1b, cases 10 and 15.

    Examples
    --------
    >>> from calcpack.clauses.steel import i_section
    >>> from calcpack.job.library import rolled_sections
    >>> a992 = Steel(344738.0, 199947960.0)
    >>> found = slenderness(i_section(rolled_sections()["w18x50"]), a992)
    >>> [round(value, 2) for value in found]  # 6.57 and 45.2 in the Manual
    [6.58, 9.15, 24.08, 45.23, 90.55]
    """
    return Slenderness(
        flange=shape.width / (2 * shape.flange),
        flange_compact=0.38 * steel.root,
        flange_noncompact=1.0 * steel.root,
        web=shape.flat_web / shape.web,
        web_compact=3.76 * steel.root,
    )


def plastic_moment(shape: ISection, steel: Steel) -> float:
    """M_p [kNm]. Source: AISC 360-22 (F2-1)."""
    return steel.yield_strength * shape.plastic_modulus


def yielding_moment(shape: ISection, steel: Steel) -> float:
    """0.7 F_y S_x [kNm], where residual stresses make the first fibre yield. Source: AISC 360-22 F2.2."""
    return 0.7 * steel.yield_strength * shape.elastic_modulus


class Lengths(NamedTuple):
    """Limiting unbraced lengths [m]: for yielding, and for inelastic buckling."""

    plastic: float
    elastic: float


def limiting_lengths(shape: ISection, steel: Steel) -> Lengths:
    """L_p and L_r.

    Source: AISC 360-22 (F2-5), (F2-6), with c = 1.

    Examples
    --------
    >>> from calcpack.clauses.steel import i_section
    >>> from calcpack.job.library import rolled_sections
    >>> found = limiting_lengths(i_section(rolled_sections()["w18x50"]), Steel(344738.0, 199947960.0))
    >>> [round(value / 0.3048, 1) for value in found]  # [ft]; 5.83 and 16.9 in the Manual
    [5.8, 17.0]
    """
    ratio = shape.torsion / (shape.elastic_modulus * shape.between_flanges)
    stress = 0.7 * steel.yield_strength / steel.modulus
    return Lengths(
        1.76 * shape.weak_radius * steel.root,
        1.95 * shape.shear_radius / stress * math.sqrt(ratio + math.sqrt(ratio**2 + 6.76 * stress**2)),
    )


def critical_stress(shape: ISection, steel: Steel, unbraced: float, diagram_factor: float) -> float:
    """F_cr [kPa] of elastic lateral-torsional buckling.

    Parameters
    ----------
    unbraced : float [m]
        L_b.
    diagram_factor : float
        C_b.

    Source: AISC 360-22 (F2-4), with c = 1.
    """
    slender = (unbraced / shape.shear_radius) ** 2
    ratio = shape.torsion / (shape.elastic_modulus * shape.between_flanges)
    return diagram_factor * math.pi**2 * steel.modulus / slender * math.sqrt(1 + 0.078 * ratio * slender)


def diagram_factor(moments: SegmentMoments, demand: float | None = None) -> float:
    """C_b of a stretch between two braced points.

    Parameters
    ----------
    moments : SegmentMoments
    demand : float [kNm], optional
        The moment that is checked, by size. Left out, the largest of the stretch. A smaller one, of the
        other sense, puts itself in the place of the largest: this gives less than the equation, and not
        less than 1.0, the factor of a uniform moment of that size.

    Source: AISC 360-22 (F1-1).

    Examples
    --------
    >>> from calcpack.statics import Extreme
    >>> parabola = SegmentMoments(0, 8, 0, 6, 8, 6, 0, Extreme(8, 4), Extreme(8, 4), Extreme(0, 0))
    >>> round(diagram_factor(parabola), 3)  # 1.14 in the Manual, Table 3-1
    1.136
    """
    largest = abs(moments.largest.value) if demand is None else abs(demand)
    if largest == 0.0:
        return 1.0
    below = (
        2.5 * largest + 3 * abs(moments.quarter) + 4 * abs(moments.middle) + 3 * abs(moments.three_quarters)
    )
    return max(12.5 * largest / below, 1.0)


class Bending(NamedTuple):
    """Nominal bending strength, and where it comes from [kNm].

    ``flange`` is None where the flange is compact.
    """

    plastic: float
    zone: Zone
    buckling: float
    flange: float | None
    nominal: float


def zone_of(unbraced: float, lengths: Lengths) -> Zone:
    """Where an unbraced length stands against the limiting ones; at a limit, below it.

    Parameters
    ----------
    unbraced : float [m]
        L_b.
    lengths : Lengths

    Source: AISC 360-22 F2.2.
    """
    if holds("le", unbraced, lengths.plastic):
        return "yielding"
    return "inelastic" if holds("le", unbraced, lengths.elastic) else "elastic"


def bending_strength(shape: ISection, steel: Steel, unbraced: float, diagram_factor: float = 1.0) -> Bending:
    """Nominal bending strength of a shape with a compact web.

    Parameters
    ----------
    shape : ISection
    steel : Steel
    unbraced : float [m]
        Between points braced against sideways movement of the compression flange or against twist; 0 where
        it is held all along.
    diagram_factor : float
        C_b.

    Raises
    ------
    ValueError
        The web is not compact: F2 and F3 do not hold.

    Source: AISC 360-22 F2 and F3.

    Examples
    --------
    >>> from calcpack.clauses.steel import i_section
    >>> from calcpack.job.library import rolled_sections
    >>> shape, kip_ft = i_section(rolled_sections()["w18x50"]), 1.355818
    >>> found = bending_strength(shape, Steel(344738.0, 199947960.0), 6.0 * 0.3048)
    >>> found.zone, round(0.9 * found.nominal / kip_ft)  # φMp = 379 in the Manual
    ('inelastic', 376)
    """
    ratios = slenderness(shape, steel)
    if not ratios.compact_web:
        raise ValueError("the web is not compact: AISC 360-22 F2 and F3 do not hold")
    plastic, first = plastic_moment(shape, steel), yielding_moment(shape, steel)
    lengths = limiting_lengths(shape, steel)
    zone = zone_of(unbraced, lengths)
    if zone == "yielding":
        buckling = plastic
    elif zone == "inelastic":
        along = (unbraced - lengths.plastic) / (lengths.elastic - lengths.plastic)
        buckling = min(diagram_factor * (plastic - (plastic - first) * along), plastic)
    else:
        stress = critical_stress(shape, steel, unbraced, diagram_factor)
        buckling = min(stress * shape.elastic_modulus, plastic)
    flange = None if ratios.compact_flange else _flange_strength(shape, steel, ratios)
    return Bending(plastic, zone, buckling, flange, min(buckling, flange if flange is not None else plastic))


def _flange_strength(shape: ISection, steel: Steel, ratios: Slenderness) -> float:
    """Local buckling of a flange that is not compact. Source: AISC 360-22 (F3-1), (F3-2)."""
    if ratios.slender_flange:
        return 0.9 * steel.modulus * flange_factor(ratios.web) * shape.elastic_modulus / ratios.flange**2
    plastic, first = plastic_moment(shape, steel), yielding_moment(shape, steel)
    along = (ratios.flange - ratios.flange_compact) / (ratios.flange_noncompact - ratios.flange_compact)
    return plastic - (plastic - first) * along


def flange_factor(web_slenderness: float) -> float:
    """k_c, the web's restraint of a slender flange, from 0.35 to 0.76.

    Parameters
    ----------
    web_slenderness : float
        h / t_w.

    Source: AISC 360-22 F3.2(b).

    Examples
    --------
    >>> flange_factor(64.0), flange_factor(20.0), flange_factor(200.0)
    (0.5, 0.76, 0.35)
    """
    return min(max(4 / math.sqrt(web_slenderness), 0.35), 0.76)


class Shear(NamedTuple):
    """Nominal shear strength of the web [kN], its coefficient and the factors that go with it."""

    stocky: bool
    coefficient: float
    nominal: float
    factor: Factor


def shear_strength(shape: ISection, steel: Steel) -> Shear:
    """Shear strength of a rolled I-shape without stiffeners.

    Source: AISC 360-22 G2.1, (G2-1) to (G2-4).

    Examples
    --------
    >>> from calcpack.clauses.steel import i_section
    >>> from calcpack.job.library import rolled_sections
    >>> found = shear_strength(i_section(rolled_sections()["w18x50"]), Steel(344738.0, 199947960.0))
    >>> found.stocky, round(found.factor.available(found.nominal, "LRFD") / 4.448222)  # 192 in the Manual
    (True, 192)
    """
    ratio = shape.flat_web / shape.web
    stocky = holds("le", ratio, 2.24 * steel.root)
    limit = 1.10 * math.sqrt(PLATE_BUCKLING) * steel.root
    coefficient = 1.0 if stocky else min(limit / ratio, 1.0)
    nominal = 0.6 * steel.yield_strength * shape.depth * shape.web * coefficient
    return Shear(stocky, coefficient, nominal, SHEAR_STOCKY if stocky else SHEAR)


def web_yielding(shape: ISection, steel: Steel, bearing_length: float, from_end: float) -> float:
    """Web local yielding under a force on the flange [kN].

    Parameters
    ----------
    bearing_length : float [m]
        Along the beam.
    from_end : float [m]
        The force's distance from the beam's nearer end.

    Source: AISC 360-22 (J10-2) farther than the depth from the end, else (J10-3).
    """
    spread = (5 if from_end > shape.depth else 2.5) * (shape.flange + shape.root_radius)
    return steel.yield_strength * shape.web * (spread + bearing_length)


def web_crippling(shape: ISection, steel: Steel, bearing_length: float, from_end: float) -> float:
    """Web local crippling under a force on the flange [kN], Q_f = 1.

    Parameters
    ----------
    bearing_length : float [m]
        Along the beam.
    from_end : float [m]
        The force's distance from the beam's nearer end.

    Source: AISC 360-22 (J10-4) at half the depth from the end or farther, else (J10-5a), (J10-5b).

    Examples
    --------
    >>> shape = ISection(0.4, 0.2, 0.01, 0.01, 0.0, *[1.0] * 10)
    >>> steel = Steel(250e3, 200e6)
    >>> [round(web_crippling(shape, steel, lb, at), 1) for lb, at in ((0.1, 1.0), (0.08, 0.0), (0.1, 0.0))]
    [989.9, 452.5, 509.1]
    """
    ratio, thickness = bearing_length / shape.depth, math.pow(shape.web / shape.flange, 1.5)
    root = math.sqrt(steel.modulus * steel.yield_strength * shape.flange / shape.web)
    if from_end >= shape.depth / 2:
        return 0.80 * shape.web**2 * (1 + 3 * ratio * thickness) * root
    if ratio <= 0.2:
        return 0.40 * shape.web**2 * (1 + 3 * ratio * thickness) * root
    return 0.40 * shape.web**2 * (1 + (4 * ratio - 0.2) * thickness) * root
