"""Lateral-torsional buckling in numbers: the critical moment of the actual diagram, and what it leaves.

C1 is the lesser of two published estimates, ends of a segment free to turn in plan and to warp:

* Serna, López, Puente and Yong, Equivalent uniform moment factors for lateral-torsional buckling of steel
  members, Journal of Constructional Steel Research 62 (2006) 566-580 (from memory), from the quarter points;
* the energy of one half sine wave of twist (Timoshenko and Gere, Theory of elastic stability, chapter 6),
  from the whole diagram: it sees what stands between the quarter points, but is an upper bound by itself.

C2 is from the same half sine wave; it gives the 0.46 and 0.55 that are printed for a uniform load and for a
load at midspan. For loads below the shear centre C2 is taken as for C1 = 1, on the safe side. C1 is nowhere
taken above 2.7, the bound of ENV 1993-1-1:1992, Annex F.

Where the top flange is held all along, the bottom flange buckles where the beam hogs, twisting about the
held one: :func:`held_factor`.

Beside eigenvalues (tests/clauses/en1993/test_en1993_eigenvalue.py) M_cr is at most 3 % high with loads at the
shear centre or below and at most 5 % high with loads on the top flange; it is up to 20 % low, with loads far
from the middle or below the shear centre up to 45 %.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from calcpack.clauses.en1993.rules import CURVE, IMPERFECTION, SLENDER, Curves, Factors
from calcpack.clauses.en1993.section import Profile
from calcpack.clauses.steel import SegmentMoments, stretch
from calcpack.sheet.evaluation import holds
from calcpack.statics import Curve, LineLoad, Load

Floats = NDArray[np.float64]
_HALF_WAVES = 16
_POINTS, _WEIGHTS = np.polynomial.legendre.leggauss(48)


def quarter_points(moments: SegmentMoments) -> float:
    """C1 after Serna et al. from the moments at the quarters of a segment and the largest one in it.

    Parameters
    ----------
    moments : SegmentMoments [kNm]

    Source: Serna et al. (2006): √(35 Mmax² / (Mmax² + 9 M2² + 16 M3² + 9 M4²)).

    Examples
    --------
    >>> from calcpack.statics import Extreme
    >>> none = Extreme(0.0, 0.0)
    >>> even = SegmentMoments(0.0, 4.0, 5.0, 5.0, 5.0, 5.0, 5.0, Extreme(5.0, 2.0), Extreme(5.0, 2.0), none)
    >>> quarter_points(even)
    1.0
    """
    most = moments.largest.value
    spread = most**2 + 9 * moments.quarter**2 + 16 * moments.middle**2 + 9 * moments.three_quarters**2
    return math.sqrt(35 * most**2 / spread) if most else 1.0


def wave_share(moment: Curve, start: float, end: float, largest: float) -> float:
    """Mean of (M/Mmax)² over a segment, weighted with the square of the half sine wave: 1/C1² of its energy.

    Parameters
    ----------
    moment : Curve
        [kNm]
    start, end : float [m]
    largest : float [kNm]

    Source: Timoshenko and Gere, Theory of elastic stability, chapter 6: energy of one half wave.

    Examples
    --------
    A load at midspan, for which ENV 1993-1-1:1992, Table F.1.2 prints C1 = 1.365:

    >>> triangle = Curve(np.array([0.0, 1.0, 2.0]), np.array([[0.0, 1.0], [1.0, -1.0]]))
    >>> round(1 / math.sqrt(wave_share(triangle, 0.0, 2.0, 1.0)), 2)
    1.37
    """
    x, weights, values = _integrated(stretch(moment, start, end))
    wave = np.sin(np.pi * (x - start) / (end - start)) ** 2
    return float(2 * np.sum(weights * (values / largest) ** 2 * wave) / (end - start))


def _integrated(part: Curve, bends: Sequence[float] = ()) -> tuple[Floats, Floats, Floats]:
    """Places of a segment, their weights in an integral over it, and the moments there."""
    places = np.unique(np.concatenate([part.breaks, bends]))
    middle, half = (places[1:] + places[:-1]) / 2, np.diff(places) / 2
    x = middle[:, None] + half[:, None] * _POINTS
    return x, half[:, None] * _WEIGHTS, part.values(x)


def held_factor(profile: Profile, moment: Curve, start: float, end: float, length: float) -> float:
    """How much larger M_cr is under this hogging than under an even one, the top flange held all along.

    Parameters
    ----------
    profile : Profile
    moment : Curve
        [kNm]; its sagging parts are left out.
    start, end : float [m]
        The segment; at its ends the bottom flange is held.
    length : float [m]
        Buckling length.

    Source: energy of the first sixteen half waves of twist about the held flange; the bottom flange works
    like a strut that torsion steadies (Trahair, Flexural-torsional buckling of structures, chapter 8).
    Sagging, which steadies too, and loads below the top flange are left out, on the safe side.

    Examples
    --------
    >>> from calcpack.clauses.en1993.samples import IPE_330
    >>> even = Curve(np.array([0.0, 6.0]), np.array([[-10.0]]))
    >>> round(held_factor(IPE_330, even, 0.0, 6.0, 6.0), 9)
    1.0
    """
    part = stretch(moment, start, end)
    x, weights, values = _integrated(part, part.zeros())
    hogging = np.maximum(-values, 0.0)
    largest = -part.smallest.value
    order = np.arange(1, _HALF_WAVES + 1)
    slopes = np.cos(order[:, None, None] * np.pi * (x - start) / (end - start))
    pressed = np.einsum("xy,axy,bxy->ab", weights * hogging / largest, slopes, slopes) * 2 / (end - start)
    warping, torsion = held_stiffness(profile, length)
    stiff = np.sqrt(order**4 * warping + order**2 * torsion)
    scaled = pressed * np.outer(order, order) / np.outer(stiff, stiff)
    return float(1 / (np.linalg.eigvalsh(scaled)[-1] * (warping + torsion)))


def held_stiffness(profile: Profile, length: float) -> tuple[float, float]:
    """π² E (Iw + Iz h²/4) / L² and G It [kNm2]: what resists twist about the held top flange.

    Parameters
    ----------
    profile : Profile
    length : float [m]

    Source: Trahair, Flexural-torsional buckling of structures, chapter 8.
    """
    s = profile.shape
    about_top = s.warping + s.weak_inertia * s.depth**2 / 4
    return math.pi**2 * profile.modulus * about_top / length**2, profile.shear_modulus * s.torsion


def twisting_load(
    loads: Sequence[tuple[Load, float]], start: float, end: float, *, above: bool = True
) -> float:
    """Loads times the square of the half sine wave at their place [kN]: what their height works on.

    Point loads above the shear centre count with the sine itself, which is larger: the twist moves towards
    them, and the square would leave M_cr up to 10 % high under loads far from the middle.

    Parameters
    ----------
    loads : sequence of (load, factor)
        Downward positive, measured from the beam's start.
    start, end : float [m]
        The segment, where the wave is zero.
    above : bool
        Whether the loads stand above the shear centre.

    Source: work of the load at its height, Timoshenko and Gere, Theory of elastic stability, chapter 6.

    Examples
    --------
    >>> from calcpack.statics import PointLoad
    >>> round(twisting_load([(LineLoad(0, 6, 10, 10), 1.0), (PointLoad(3.0, 5.0), 2.0)], 0.0, 6.0), 9)
    40.0
    """
    length = end - start
    wave = 2 * math.pi / length
    found = 0.0
    for load, factor in loads:
        if not isinstance(load, LineLoad):
            if start < load.at < end:
                wave_there = math.sin(math.pi * (load.at - start) / length)
                found += factor * load.force * (wave_there if above else wave_there**2)
            continue
        first, last = max(load.start, start), min(load.end, end)
        if last <= first:
            continue
        slope = (load.last - load.first) / (load.end - load.start)
        base = load.first + slope * (start - load.start)

        def up_to(x: float, base: float = base, slope: float = slope) -> float:
            swing = (base + slope * x) * math.sin(wave * x) / wave + slope * math.cos(wave * x) / wave**2
            return (base * x + slope * x**2 / 2 - swing) / 2

        found += factor * (up_to(last - start) - up_to(first - start))
    return found


def load_factor(diagram: float, length: float, twisting: float, moment: float) -> float:
    """C2 = C1 L F / (π² M), F the load times the square of the half sine wave.

    Parameters
    ----------
    diagram : float
        C1.
    length : float [m]
    twisting : float [kN]
        From :func:`twisting_load`.
    moment : float [kNm]
        Largest by size.

    Source: the same half sine wave as :func:`twisting_load`.

    Examples
    --------
    10 kN/m over 6 m, for which ENV 1993-1-1:1992, Table F.1.2 prints 0.459:

    >>> round(load_factor(1.132, 6.0, 30.0, 45.0), 3)
    0.459
    """
    return diagram * length * twisting / (math.pi**2 * abs(moment)) if moment else 0.0


def critical_moment(profile: Profile, length: float, diagram: float, height_term: float) -> float:
    """M_cr of a doubly symmetric section, ends held sideways and against twist, free to warp [kNm].

    Parameters
    ----------
    profile : Profile
    length : float [m]
    diagram : float
        C1.
    height_term : float [m]
        C2 z_g, z_g positive above the shear centre.

    Source: NCCI SN003b, equation (1) with k = kw = 1 (from memory); ENV 1993-1-1:1992, (F.2).
    """
    s = profile.shape
    euler = math.pi**2 * profile.modulus * s.weak_inertia / length**2
    arm = s.warping / s.weak_inertia + profile.shear_modulus * s.torsion / euler
    return diagram * euler * (math.sqrt(arm + height_term**2) - height_term)


class Reduction(NamedTuple):
    """The way from a slenderness to a reduction factor."""

    alpha: float
    phi: float
    chi: float
    correction: float  # f of 6.3.2.3(2); 1 in the general case
    reduced: float  # χ_LT, or χ_LT,mod


def imperfection(profile: Profile, curves: Curves) -> tuple[str, float]:
    """Buckling curve and α_LT of a rolled I-section, Tables 6.3 to 6.5.

    Parameters
    ----------
    profile : Profile
    curves : "general" or "rolled"

    Source: EN 1993-1-1:2005, 6.3.2.2(1) with Tables 6.3 and 6.4, 6.3.2.3(1) with Table 6.5.

    Examples
    --------
    >>> from calcpack.job.library import rolled_sections
    >>> from calcpack.clauses.steel import i_section
    >>> ipe = Profile("IPE 330", i_section(rolled_sections()["ipe330"]), 235e3, 210e6, 81e6)
    >>> imperfection(ipe, "rolled"), imperfection(ipe, "general")
    (('c', 0.49), ('b', 0.34))
    """
    stocky, slender = CURVE[curves]
    curve = stocky if holds("le", profile.shape.depth / profile.shape.width, SLENDER) else slender
    return curve, IMPERFECTION[curve]


def reduction(
    slenderness: float, alpha: float, curves: Curves, factors: Factors, diagram: float
) -> Reduction:
    """χ_LT at a slenderness.

    Parameters
    ----------
    slenderness : float
        λ_LT.
    alpha : float
        Imperfection factor.
    curves : "general" or "rolled"
    factors : Factors
        λ_LT,0 and β, of rolled sections only.
    diagram : float
        C1, for k_c = 1/√C1 in f.

    Source: EN 1993-1-1:2005, (6.56), (6.57), (6.58); k_c as for Table 6.6, 1/√C1.

    Examples
    --------
    Exactly on the plateau nothing is lost:

    >>> reduction(0.4, 0.49, "rolled", Factors(), 1.0).chi
    1.0
    >>> reduction(0.2, 0.34, "general", Factors(), 1.0).chi
    1.0
    >>> round(reduction(1.0, 0.34, "general", Factors(), 1.0).chi, 4)  # curve b; tables print 0.5970
    0.597
    """
    if curves == "general":
        phi = 0.5 * (1 + alpha * (slenderness - 0.2) + slenderness**2)
        chi = min(1.0, 1 / (phi + math.sqrt(phi**2 - slenderness**2)))
        return Reduction(alpha, phi, chi, 1.0, chi)
    plateau, beta = factors.plateau, factors.beta
    phi = 0.5 * (1 + alpha * (slenderness - plateau) + beta * slenderness**2)
    root = math.sqrt(phi**2 - beta * slenderness**2)
    chi = min(1.0, 1 / slenderness**2, 1 / (phi + root))
    share = 1 / math.sqrt(diagram)
    correction = min(1.0, 1 - 0.5 * (1 - share) * (1 - 2.0 * (slenderness - 0.8) ** 2))
    return Reduction(alpha, phi, chi, correction, min(1.0, 1 / slenderness**2, chi / correction))
