"""Doubly symmetric I-sections, and the moment diagrams that lateral-torsional buckling looks at.

Shared by the steel standards: what follows from a section's dimensions and from statics alone.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from calcpack.actions.analysis import AnalysedBeam
from calcpack.actions.combinations import Combination
from calcpack.job.model import Section
from calcpack.statics import Curve, Extreme
from calcpack.statics.curve import farthest
from calcpack.statics.polynomials import shifted

Floats = NDArray[np.float64]


class ISection(NamedTuple):
    """A doubly symmetric I-section: nominal dimensions and what follows from them.

    Parameters
    ----------
    depth, width, web, flange, root_radius : float [m]
        Overall depth d, flange width b, web and flange thickness, radius of the fillets.
    area : float [m2]
    inertia, weak_inertia : float [m4]
        About the strong axis and about the weak one.
    elastic_modulus, plastic_modulus : float [m3]
        About the strong axis: S_x and Z_x, or W_el and W_pl.
    weak_radius : float [m]
        Radius of gyration about the weak axis.
    torsion : float [m4]
        Saint-Venant's constant.
    warping : float [m6]
    shear_radius : float [m]
        r_ts, the radius of gyration that AISC 360-22 F2 goes by: the root of √(I_y C_w) / S_x.
    between_flanges : float [m]
        h_o, between the centroids of the flanges.
    """

    depth: float
    width: float
    web: float
    flange: float
    root_radius: float
    area: float
    inertia: float
    weak_inertia: float
    elastic_modulus: float
    plastic_modulus: float
    weak_radius: float
    torsion: float
    warping: float
    shear_radius: float
    between_flanges: float

    @property
    def flat_web(self) -> float:
        """Web between the fillets [m]."""
        return self.depth - 2 * (self.flange + self.root_radius)

    @property
    def flange_outstand(self) -> float:
        """Half the flange less half the web and the fillet [m]."""
        return (self.width - self.web) / 2 - self.root_radius


def i_section(section: Section) -> ISection:
    """The constants of a rolled I-section, fillets included.

    Parameters
    ----------
    section : Section
        With the dimensions depth, width, web, flange and root_radius [m].

    Returns
    -------
    ISection

    Raises
    ------
    ValueError
        The section is no rolled one.

    Source: integration over flanges, web and fillets; warping from the flanges alone, thin against their
    distance; torsion as the tables the section comes from have it, see `torsion_constant`.

    Examples
    --------
    >>> from calcpack.job.library import rolled_sections
    >>> s = i_section(rolled_sections()["w18x50"])
    >>> inch = 0.0254
    >>> [round(v, 1) for v in (s.elastic_modulus / inch**3, s.plastic_modulus / inch**3)]
    [89.0, 100.9]
    >>> round(s.weak_radius / inch, 2), round(s.shear_radius / inch, 2), round(s.torsion / inch**4, 2)
    (1.65, 1.98, 1.24)
    """
    if section.shape != "rolled":
        raise ValueError(f"a {section.shape} is no I-section")
    d, b, tw, tf, r = (section.dimensions[key] for key in ("depth", "width", "web", "flange", "root_radius"))
    clear, apart = d - 2 * tf, d - tf
    # a fillet: a square of side r less a quarter circle
    fillet = (1 - math.pi / 4) * r**2
    from_corner = r * (10 - 3 * math.pi) / (12 - 3 * math.pi)
    own = (1 / 3 - math.pi / 16 - 1 / (9 * (4 - math.pi))) * r**4
    weak = (2 * tf * b**3 + clear * tw**3) / 12 + 4 * (own + fillet * (tw / 2 + from_corner) ** 2)
    plastic = b * tf * apart + tw * clear**2 / 4 + 4 * fillet * (clear / 2 - from_corner)
    warping = tf * b**3 * apart**2 / 24
    elastic = section.inertia / (d / 2)
    return ISection(
        depth=d,
        width=b,
        web=tw,
        flange=tf,
        root_radius=r,
        area=section.area,
        inertia=section.inertia,
        weak_inertia=weak,
        elastic_modulus=elastic,
        plastic_modulus=plastic,
        weak_radius=math.sqrt(weak / section.area),
        torsion=torsion_constant(d, b, tw, tf, r, european=section.source.startswith("EN ")),
        warping=warping,
        shear_radius=math.sqrt(math.sqrt(weak * warping) / elastic),
        between_flanges=apart,
    )


def torsion_constant(
    depth: float, width: float, web: float, flange: float, root_radius: float, *, european: bool = False
) -> float:
    """Saint-Venant's torsion constant of an I-section with parallel flanges [m4].

    Flanges and web as strips, less what the flanges lack at their ends, and what the discs inscribed at the
    two joints add. The two fits of that last part differ by some 2 %; each is the one that the printed
    tables of its own sections follow.

    Parameters
    ----------
    depth, width, web, flange, root_radius : float [m]
    european : bool
        The fit behind tables of European sections.

    Source: El Darwish and Johnston, Torsion of structural shapes, ASCE Journal of the Structural Division
    91 (1965), as behind the AISC Manual; European sections: the formula printed with their producers'
    tables. Both from memory.

    Examples
    --------
    >>> ipe300 = (0.300, 0.150, 0.0071, 0.0107, 0.015)
    >>> [round(torsion_constant(*ipe300, european=fit) * 1e8, 1) for fit in (True, False)]  # [cm4]
    [20.1, 19.9]
    """
    ratio, fillet = web / flange, root_radius / flange
    strips = 2 * width * flange**3 / 3 + (depth - 2 * flange) * web**3 / 3 - 0.420 * flange**4
    if european:
        disc = ((root_radius + web / 2) ** 2 + (root_radius + flange) ** 2 - root_radius**2) / (
            2 * root_radius + flange
        )
        return strips + 2 * ratio * (0.145 + 0.1 * fillet) * disc**4
    disc = ((flange + root_radius) ** 2 + web * (root_radius + web / 4)) / (2 * root_radius + flange)
    joint = -0.042 + 0.2204 * ratio + 0.1355 * fillet - 0.0865 * ratio * fillet - 0.0725 * ratio**2
    return strips + 2 * joint * disc**4


class SegmentMoments(NamedTuple):
    """Moments [kNm] of one stretch between two points held sideways, sagging positive.

    ``largest`` is the one farthest from zero, with its sign; ``sagging`` is zero or more, ``hogging`` zero or
    less.
    """

    start: float  # [m]
    end: float
    first: float
    quarter: float
    middle: float
    three_quarters: float
    last: float
    largest: Extreme
    sagging: Extreme
    hogging: Extreme

    @property
    def length(self) -> float:
        """From one held point to the other [m]."""
        return self.end - self.start


def stretch(curve: Curve, start: float, end: float) -> Curve:
    """The part of a curve between two places.

    Parameters
    ----------
    curve : Curve
    start, end : float [m]
        Beyond the curve's ends they count as these.

    Raises
    ------
    ValueError
        There is nothing between them.

    Examples
    --------
    >>> line = Curve(np.array([0.0, 4.0]), np.array([[0.0, 2.0]]))
    >>> part = stretch(line, 1.0, 3.0)
    >>> part.at(1.0), part.at(3.0), part.largest
    (2.0, 6.0, Extreme(value=6.0, at=3.0))
    """
    start, end = max(start, float(curve.breaks[0])), min(end, float(curve.breaks[-1]))
    slack = 1e-9 * curve.length
    if end - start <= slack:
        raise ValueError("a stretch has a length")
    inside = curve.breaks[(curve.breaks > start + slack) & (curve.breaks < end - slack)]
    breaks = np.concatenate([[start], inside, [end]])
    owner = np.searchsorted(curve.breaks, (breaks[1:] + breaks[:-1]) / 2) - 1
    return Curve(
        breaks, shifted(curve.coefficients[owner], breaks[:-1] - curve.breaks[owner]), curve.preferred
    )


def segment_moments(moment: Curve, start: float, end: float) -> SegmentMoments:
    """The moments of a stretch that factors for the moment diagram are made from.

    Parameters
    ----------
    moment : Curve
        One diagram of moments that act together, not an envelope.
    start, end : float [m]

    Examples
    --------
    >>> parabola = Curve(np.array([0.0, 4.0]), np.array([[0.0, 4.0, -1.0]]))
    >>> found = segment_moments(parabola, 0.0, 4.0)
    >>> found.quarter, found.middle, found.three_quarters, found.largest.value
    (3.0, 4.0, 3.0, 4.0)
    """
    part = stretch(moment, start, end)
    places = np.linspace(part.breaks[0], part.breaks[-1], 5)
    first, quarter, middle, three_quarters, last = (float(value) for value in part.values(places))
    most, least = part.largest, part.smallest
    return SegmentMoments(
        start=float(part.breaks[0]),
        end=float(part.breaks[-1]),
        first=first,
        quarter=quarter,
        middle=middle,
        three_quarters=three_quarters,
        last=last,
        largest=farthest(most, least),
        sagging=Extreme(max(most.value, 0.0), most.at),
        hogging=Extreme(min(least.value, 0.0), least.at),
    )


class Arrangement(NamedTuple):
    """A combination with its movable loads in one arrangement: moments that act together.

    Parameters
    ----------
    combination : Combination
    factors : tuple of float
        One for each load set of the beam, zero where it is not there.
    moment : Curve
        [kNm], sagging positive.
    sense : int
        1 where it was arranged for sagging, -1 for hogging, 0 where everything is loaded.
    at : float [m]
        The place it was arranged for; not a number where everything is loaded.
    """

    combination: Combination
    factors: tuple[float, ...]
    moment: Curve
    sense: int
    at: float


def arrangements(
    analysed: AnalysedBeam, start: float, end: float, limit: str = "strength"
) -> tuple[Arrangement, ...]:
    """The diagrams to try for a stretch: each combination, with its movable load where it is worst.

    For each combination the arrangement that gives the largest sagging moment in the stretch, the one that
    gives the largest hogging moment, and the one with everything loaded; each once.

    Parameters
    ----------
    analysed : AnalysedBeam
    start, end : float [m]
    limit : "strength" or "service"

    Examples
    --------
    >>> from calcpack.actions import LoadSet, analyse_beam
    >>> from calcpack.statics import BeamLine, LineLoad
    >>> beam = analyse_beam(
    ...     BeamLine(8.0, (0.0, 4.0, 8.0)),
    ...     [LoadSet("live", (LineLoad(0, 4, 8, 8),)), LoadSet("live", (LineLoad(4, 8, 8, 8),))],
    ...     [Combination("1.6 L", "strength", {"live": 1.6})],
    ... )
    >>> [(each.sense, each.factors) for each in arrangements(beam, 0.0, 4.0)]
    [(1, (1.6, 0.0)), (-1, (1.6, 1.6))]
    """
    found: dict[tuple[str, tuple[float, ...]], Arrangement] = {}
    for result in analysed.of_limit(limit):
        always, placed = analysed.factors(result.combination)
        band = result.envelope.moment
        wanted: list[tuple[int, float]] = [
            (1, stretch(band.upper, start, end).largest.at),
            (-1, stretch(band.lower, start, end).smallest.at),
            (0, math.nan),
        ]
        for sense, at in wanted:
            factors = always + (placed if sense == 0 else placed * _adding(analysed, at, sense))
            key = (result.combination.name, tuple(float(value) for value in factors))
            if key not in found:
                moment = analysed.response.combined(factors).curve("moment")
                found[key] = Arrangement(result.combination, key[1], moment, sense, at)
    return tuple(found.values())


def _adding(analysed: AnalysedBeam, at: float, sense: int) -> Floats:
    """1 for each load set whose moment at a place is of the wanted sign, else 0."""
    response = analysed.response
    values = np.array([response.curve("moment", row).at(at) for row in range(response.sets)])
    slack = 1e-12 * np.abs(values).max(initial=0.0)
    return np.asarray(sense * values > slack, dtype=float)


def held_points(start: float, end: float, *, every: float | None = None, at: Sequence[float] = ()) -> Floats:
    """Where a span is held sideways: at its ends, and every so far from its start or at given places [m].

    Places outside the span and places that stand at its ends are left out.

    Parameters
    ----------
    start, end : float [m]
    every : float [m], optional
    at : sequence of float [m]

    Raises
    ------
    ValueError
        ``every`` is not more than nothing.

    Examples
    --------
    >>> held_points(2.0, 10.0, every=3.0).tolist(), held_points(0.0, 6.0, at=(2.0, 6.0, 9.0)).tolist()
    ([2.0, 5.0, 8.0, 10.0], [0.0, 2.0, 6.0])
    """
    slack = 1e-6 * (end - start)
    places = list(at)
    if every is not None:
        if every <= 0:
            raise ValueError("points held sideways have a distance between them")
        places += [start + number * every for number in range(1, math.ceil((end - start) / every))]
    inside = sorted(place for place in places if start + slack < place < end - slack)
    kept = [place for number, place in enumerate(inside) if number == 0 or place - inside[number - 1] > slack]
    return np.array([start, *kept, end])
