"""Critical moments of the clauses beside eigenvalues, over spans of 3, 6 and 12 m."""

from __future__ import annotations

import math
from collections.abc import Sequence
from functools import cache

from calcpack.clauses.en1993.buckling import (
    critical_moment,
    load_factor,
    quarter_points,
    twisting_load,
    wave_share,
)
from calcpack.clauses.en1993.rules import LARGEST_DIAGRAM
from calcpack.clauses.steel import segment_moments
from calcpack.statics import BeamLine, Curve, LineLoad, Load, PointLoad, analyse
from calcpack.verification.comparison import Ours
from calcpack.verification.eigenvalues import critical_factor
from calcpack.verification.ours.en1993 import profile
from calcpack.verification.tables import Row

IPE = profile("IPE 330", 235e3)
SHAPE = IPE.shape
WEAK, WARPING, TORSION = 210e6 * SHAPE.weak_inertia, 210e6 * SHAPE.warping, 80.77e6 * SHAPE.torsion
HALF = SHAPE.depth / 2
LENGTHS = (3.0, 6.0, 12.0)
HEIGHTS = {"top": HALF, "centre": 0.0, "bottom": -HALF}


def diagram(length: float, loads: Sequence[Load] = (), start: float = 0.0, end: float = 0.0) -> Curve:
    """Moments of a beam on two supports under loads and end moments, as one curve."""
    curve = analyse(BeamLine(length, (0.0, length)), [list(loads) or [LineLoad(0, length, 0, 0)]]).curve(
        "moment"
    )
    coefficients = curve.coefficients.copy()
    slope = (end - start) / length
    coefficients[:, 0] += start + slope * curve.breaks[:-1]
    coefficients[:, 1] += slope
    return Curve(curve.breaks, coefficients)


def own(curve: Curve, loads: Sequence[Load], height: float) -> float:
    """M_cr of the clauses under a whole diagram."""
    length = float(curve.breaks[-1])
    moments = segment_moments(curve, 0.0, length)
    largest = abs(moments.largest.value)
    share = wave_share(curve, 0.0, length, largest)
    c1 = min(LARGEST_DIAGRAM, quarter_points(moments), 1 / math.sqrt(share))
    twisting = twisting_load([(load, 1.0) for load in loads], 0.0, length, above=height > 0)
    c2 = load_factor(c1 if height > 0 else 1.0, length, twisting, largest)
    return critical_moment(IPE, length, c1, c2 * height)


def eigenvalue(
    curve: Curve,
    loads: Sequence[Load],
    height: float,
    elements: int = 12,
    top_held: float | None = None,
) -> float:
    """The critical moment by finite elements."""
    length = float(curve.breaks[-1])
    largest = abs(segment_moments(curve, 0.0, length).largest.value)
    lines = [load for load in loads if isinstance(load, LineLoad)]

    def intensity(x: float) -> float:
        return sum(
            load.first + (load.last - load.first) * (x - load.start) / (load.end - load.start)
            for load in lines
            if load.start <= x <= load.end
        )

    points = [(load.at, load.force) for load in loads if isinstance(load, PointLoad)]
    factor = critical_factor(
        length, WEAK, WARPING, TORSION, curve.at, intensity, points, height,
        elements=elements, top_held=top_held,
    )  # fmt: skip
    return factor * largest


def shapes(length: float) -> dict[str, tuple[list[Load], float, float]]:
    """Loads and the end moments that hold the beam: wL²/12, PL/8 and theirs of one end."""
    uniform: list[Load] = [LineLoad(0, length, 1, 1)]
    middle: list[Load] = [PointLoad(length / 2, 1)]
    thirds: list[Load] = [PointLoad(length / 3, 1), PointLoad(2 * length / 3, 1)]
    gable: list[Load] = [LineLoad(0, length / 2, 0, 1), LineLoad(length / 2, length, 1, 0)]
    return {
        "uniform": (uniform, 0.0, 0.0),
        "middle": (middle, 0.0, 0.0),
        "thirds": (thirds, 0.0, 0.0),
        "gable": (gable, 0.0, 0.0),
        "uniform, held": (uniform, -(length**2) / 12, -(length**2) / 12),
        "uniform, one end held": (uniform, 0.0, -(length**2) / 8),
        "middle, held": (middle, -length / 8, -length / 8),
        "middle, one end held": (middle, 0.0, -3 * length / 16),
    }


@cache
def extremes(name: str, where: str) -> tuple[float, float]:
    """Least and most of the clauses' M_cr over the eigenvalue's."""
    ratios = []
    for length in LENGTHS:
        loads, start, end = shapes(length)[name]
        curve = diagram(length, loads, start, end)
        ratios.append(own(curve, loads, HEIGHTS[where]) / eigenvalue(curve, loads, HEIGHTS[where]))
    return min(ratios), max(ratios)


def eigenvalue_row(row: Row) -> Ours:
    """M_cr over the eigenvalue's, least and most over the spans, with the load at three heights."""
    found: dict[str, float | str] = {}
    for where in HEIGHTS:
        least, most = extremes(row.text("shape"), where)
        found |= {f"{where} least": least, f"{where} most": most}
    return found
