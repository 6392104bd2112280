"""The stretches of a beam that may buckle sideways between the points that hold it."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise
from typing import Literal, NamedTuple

import numpy as np

from calcpack.actions import AnalysedBeam
from calcpack.clauses.steel import Arrangement, arrangements, held_points
from calcpack.job.errors import CalcpackError

Braced = Literal["ends", "at beams", "continuous"]


class Segment(NamedTuple):
    """A stretch between two points held sideways and against twist.

    Parameters
    ----------
    start, end : float [m]
    length : float [m]
        The length its critical moment is worked out with: its own, or the longer one the job gives.
    held_top : bool
        The top flange is held all along: only hogging can make it buckle.
    free_tip : bool
        It runs to the free tip of an overhang, which nothing holds.
    """

    start: float
    end: float
    length: float
    held_top: bool = False
    free_tip: bool = False


def segments(
    spans: Sequence[tuple[float, float]],
    supports: Sequence[float],
    *,
    braced: Braced = "ends",
    unbraced: float | None = None,
    beams: Sequence[float] = (),
    tip_held: bool = False,
) -> tuple[Segment, ...]:
    """Cut a beam where it is held.

    Parameters
    ----------
    spans : sequence of (start, end) [m]
        Overhangs included.
    supports : sequence of float [m]
        Every support holds the beam sideways and against twist.
    braced : "ends", "at beams" or "continuous"
        Held at supports alone; also where beams come down; or its top flange all along.
    unbraced : float [m], optional
        Distance of points held, counted from each span's start; of a span shorter than that, the length to
        work with. Under "continuous" it is the bottom flange that is held there.
    beams : sequence of float [m]
        Where beams come down.
    tip_held : bool
        The tips of overhangs are held too.

    Raises
    ------
    CalcpackError
        Points held are given twice over.

    Source: EN 1993-1-1:2005, 6.3.2.1: between points held sideways and against twist.

    Examples
    --------
    >>> [part[:3] for part in segments([(0, 7)], [0, 7], unbraced=3.0)]
    [(0.0, 3.0, 3.0), (3.0, 6.0, 3.0), (6.0, 7.0, 1.0)]
    >>> [part[:3] for part in segments([(0, 7)], [0, 7], unbraced=8.0)]
    [(0.0, 7.0, 8.0)]
    >>> parts = segments([(0, 6), (6, 8)], [0, 6], braced="at beams", beams=[2])
    >>> [(part.start, part.free_tip) for part in parts]
    [(0.0, False), (2.0, False), (6.0, True)]
    """
    if unbraced is not None and braced == "at beams":
        raise CalcpackError(
            "a beam held where beams come down takes no unbraced length",
            remedy="leave out unbraced_length, or set braced = 'ends'",
            key="design.unbraced_length",
        )
    found = []
    for start, end in spans:
        at = beams if braced == "at beams" else ()
        points = [float(point) for point in held_points(start, end, every=unbraced, at=at)]
        for first, last in pairwise(points):
            length = max(unbraced, last - first) if unbraced and len(points) == 2 else last - first
            free = not tip_held and any(end not in supports and end in (first, last) for end in (start, end))
            found.append(Segment(first, last, length, braced == "continuous", free))
    return tuple(found)


def tried(analysed: AnalysedBeam, part: Segment) -> tuple[Arrangement, ...]:
    """The diagrams that a segment is tried under: each strength combination in several arrangements.

    Parameters
    ----------
    analysed : AnalysedBeam [m, kNm]
    part : Segment [m]

    Beside those that sag and hog the segment most, and everything loaded, those that sag and hog it most at
    its quarter points: a lower but fuller diagram may buckle it sooner.

    Source: EN 1990:2002, 6.4.3.1: live load placed where it is least favourable.

    Examples
    --------
    >>> from calcpack.actions import Combination, LoadSet, analyse_beam
    >>> from calcpack.statics import BeamLine, LineLoad
    >>> beam = analyse_beam(
    ...     BeamLine(8.0, (0.0, 4.0, 8.0)),
    ...     [LoadSet("live", (LineLoad(0, 4, 8, 8),)), LoadSet("live", (LineLoad(4, 8, 8, 8),))],
    ...     [Combination("1.5 Q", "strength", {"live": 1.5})],
    ... )
    >>> [each.factors for each in tried(beam, Segment(0.0, 4.0, 4.0))]
    [(1.5, 0.0), (1.5, 1.5), (0.0, 1.5)]
    """
    found = {
        (each.combination.name, each.factors): each for each in arrangements(analysed, part.start, part.end)
    }
    response = analysed.response
    curves = [response.curve("moment", row) for row in range(response.sets)]
    for quarter in (0.25, 0.5, 0.75):
        at = part.start + quarter * (part.end - part.start)
        there = np.array([curve.at(at) for curve in curves])
        slack = 1e-12 * np.abs(there).max()
        for result in analysed.of_limit("strength"):
            always, placed = analysed.factors(result.combination)
            for sense in (1, -1):
                factors = always + np.where(sense * there > slack, placed, 0.0)
                key = (result.combination.name, tuple(float(value) for value in factors))
                if key not in found:
                    moment = response.combined(factors).curve("moment")
                    found[key] = Arrangement(result.combination, key[1], moment, sense, at)
    return tuple(found.values())
