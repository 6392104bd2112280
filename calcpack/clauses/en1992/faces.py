"""One face of a beam with its bars: everything the clauses ask of it, and the choice of bars."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property

from calcpack.clauses.bars import Bar
from calcpack.clauses.en1992.bending import Bending, bending, depth_limit, least_steel, steel_for
from calcpack.clauses.en1992.case import BeamCase
from calcpack.clauses.en1992.cracking import Crack, Elastic, crack_width, elastic
from calcpack.clauses.en1992.detailing import arranged, clear_between, clear_distance
from calcpack.clauses.en1992.model import Bars, Outline, within

# Sizes to choose from; the thickest only where the others do not fit.
SIZES: tuple[tuple[str, ...], ...] = (("12 mm", "16 mm", "20 mm", "25 mm"), ("32 mm",))
HANGERS = SIZES[:1]
MOST_BARS = 16


@dataclass(frozen=True)
class Face:
    """Bars along one face under the moments that stretch it.

    Parameters
    ----------
    case : BeamCase
    outline : Outline
        From the other face, the one in compression.
    bars : Bars
    moment, lasting : float [kNm]
        Design moment, and that of the quasi-permanent combination.
    compression : Bars or None
        At the other face; counted only where x/d asks for it.
    """

    case: BeamCase
    outline: Outline
    bars: Bars
    moment: float
    lasting: float
    compression: Bars | None = None

    @property
    def depth(self) -> float:
        """Effective depth d [m]."""
        return self.outline.depth - self.bars.centroid

    @cached_property
    def limit(self) -> float:
        """Of x/d."""
        return depth_limit(self.case.strength, self.case.national)

    @cached_property
    def alone(self) -> Bending:
        """Resistance without compression bars."""
        return bending(self.outline, self.case.strength, self.bars.area, self.depth)

    @property
    def doubly(self) -> bool:
        """Whether the compression bars are counted."""
        return self.compression is not None and not within(self.alone.x, self.limit * self.depth)

    @cached_property
    def bending(self) -> Bending:
        """Resistance, compression bars counted where x/d asks for them."""
        if not self.doubly or self.compression is None:
            return self.alone
        return bending(
            self.outline,
            self.case.strength,
            self.bars.area,
            self.depth,
            self.compression.area,
            self.compression.centroid,
        )

    @cached_property
    def required(self) -> tuple[float, float]:
        """Bars the moment asks for, in tension and in compression [m2]."""
        depth_2 = self.compression.centroid if self.compression else self.bars.inset
        return steel_for(self.moment, self.outline, self.case.strength, self.depth, self.limit, depth_2)

    @cached_property
    def least(self) -> float:
        """Least bars in tension [m2]."""
        return least_steel(self.outline, self.case.strength, self.depth, self.case.national)

    @property
    def most(self) -> float:
        """Most bars at a face [m2]; EN 1992-1-1, 9.2.1.1(3)."""
        return self.case.national["as_max"] * self.outline.area

    @property
    def clear(self) -> tuple[float, float]:
        """Clear distance between bars across, and the least one [m]."""
        rule = clear_distance(self.bars.bar.diameter, self.case.aggregate, self.case.national)
        return clear_between(self.bars, self.outline.web), rule

    @property
    def apart(self) -> float:
        """Bars' centres apart in the outermost layer [m]."""
        return self.clear[0] + self.bars.bar.diameter

    @cached_property
    def elastic(self) -> Elastic:
        """The section under lasting loads."""
        return elastic(self.outline, self.case.strength, self.bars.area, self.depth, self.case.creep)

    @cached_property
    def crack(self) -> Crack:
        """Cracks under the quasi-permanent combination."""
        return crack_width(
            self.outline,
            self.case.strength,
            self.elastic,
            self.lasting,
            self.bars.area,
            self.depth,
            (self.bars.bar.diameter, self.bars.inset, self.apart),
            self.case.national,
        )

    @property
    def resists(self) -> bool:
        """Moment, x/d, least and most bars."""
        found = self.bending
        return (
            within(self.moment, found.moment)
            and within(found.x, self.limit * self.depth)
            and within(self.least, self.bars.area)
            and within(self.bars.area, self.most)
        )

    @property
    def fits(self) -> bool:
        """Clear distances, and cover enough for bond."""
        clear, rule = self.clear
        bond = self.bars.bar.diameter + self.case.national["delta_c_dev"]
        return within(rule, clear) and within(bond, self.bars.inset)

    @property
    def cracks_fine(self) -> bool:
        """Width of cracks."""
        return within(self.crack.width, self.case.crack_limit)


def bars_of(case: BeamCase, size: Bar, count: int, stirrup: float) -> Bars:
    """Bars of a face, in layers as they fit inside stirrups of a diameter [m].

    Parameters
    ----------
    case : BeamCase
    size : Bar
    count : int
    stirrup : float [m]
        Diameter.

    Source: EN 1992-1-1:2004, 8.2(2) and (3).
    """
    clear = clear_distance(size.diameter, case.aggregate, case.national)
    return arranged(size, count, case.sagging.web, case.cover + stirrup, clear)


def candidates(
    case: BeamCase, stirrup: float, sizes: Sequence[Sequence[str]] | None = None
) -> Iterator[Bars]:
    """Bars to try: fewest layers, then fewest bars, then least area; thick sizes last.

    Parameters
    ----------
    case : BeamCase
    stirrup : float [m]
        Diameter.
    sizes : sequence of groups of sizes
        Where left out those of ``SIZES``, the job's own among them.

    Source: common practice.
    """
    for group in sizes if sizes is not None else case.stock.groups(SIZES):
        found = [
            bars_of(case, size, count, stirrup)
            for size in map(case.stock.bar, group)
            for count in range(2, MOST_BARS + 1)
        ]
        yield from sorted(found, key=lambda each: (len(each.layers), each.count, each.area))


def thinner(case: BeamCase) -> Iterator[tuple[tuple[str, ...], ...]]:
    """Sizes to choose from where an end support leaves little room, in turn.

    Source: common practice.
    """
    usual = case.stock.groups(SIZES)[0]
    for number in range(len(usual) - 1, 0, -1):
        yield (usual[:number],)


def choose(
    case: BeamCase,
    outline: Outline,
    moment: float,
    lasting: float,
    stirrup: float,
    *,
    compression: Sequence[Bars] = (),
    least: float = 0.0,
    sizes: Sequence[Sequence[str]] | None = None,
) -> Face:
    """The first of the candidates that does everything; else the one that comes nearest.

    Parameters
    ----------
    case : BeamCase
    outline : Outline
    moment, lasting : float [kNm]
    stirrup : float [m]
    compression : sequence of Bars
        Compression bars to try, in turn, where none are not enough.
    least : float [m2]
        Area not to go below.
    sizes : sequence of groups of sizes
        Those of ``SIZES`` with the job's own among them, where left out.

    Returns
    -------
    Face
        If nothing does everything: the first that resists and fits; else the one with most resistance
        among those that fit.

    Source: EN 1992-1-1:2004, 6.1, 5.5(4), 7.3.4, 8.2(2), 9.2.1.1; the order is common practice.
    """
    found: list[Face] = []
    for other in (None, *compression):
        for bars in candidates(case, stirrup, sizes):
            face = Face(case, outline, bars, moment, lasting, other)
            if bars.area < least or not face.fits:
                continue
            if face.resists and face.cracks_fine:
                return face
            found.append(face)
    if not found:
        return Face(case, outline, bars_of(case, case.stock.bar("12 mm"), 2, stirrup), moment, lasting)
    return next((face for face in found if face.resists), max(found, key=_nearest))


def _nearest(face: Face) -> tuple[bool, float]:
    bent = face.bending
    return within(bent.x, face.limit * face.depth), bent.moment
