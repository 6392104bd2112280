"""What the sheets of steel beams have alike: shear in its resistance, deflection in its limits, ponding."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from calcpack.actions.combinations import PLACED
from calcpack.figures import Capacity, Figure, deflected_shape
from calcpack.figures.deflected import Deflection
from calcpack.figures.diagram import between, largest
from calcpack.figures.shapes import Array
from calcpack.job.model import Case
from calcpack.notebook.sections.strength_figures import strength_figure
from calcpack.notebook.study import CASE_WORDS
from calcpack.notebook.work import Work
from calcpack.statics import Band, envelope

SAMPLES = 121  # odd: the middle is one of them
HALF_WIDTH = 82.0  # [mm]


def shear_figure(work: Work, resistance: float) -> Figure:
    """The envelope of shears in the resistance [kN], which is the same all along."""
    whole = [Capacity(0.0, work.given.length, resistance, resistance)]
    return strength_figure(work, "shear", whole, samples=SAMPLES, width_mm=HALF_WIDTH)


def deflected_figure(work: Work, limit: Callable[[str, int], float | None]) -> Figure | None:
    """The beam deflected by each movable load alone and by the service combination that deflects most.

    Parameters
    ----------
    limit : callable
        A case's name or "total", and a span's number -> what it may deflect [m]; None: not to be drawn.

    Returns
    -------
    Figure or None
        Each span as its own worst placement bends it. None without stiffness or limits.
    """
    study, given = work.study, work.given
    total = study.analysed.deflection_total
    if total is None or not study.stiffness:
        return None
    result = next(each for each in study.analysed.results if each.combination is total[0])
    bands = [
        (f"deflection, {CASE_WORDS[case]} alone", str(case), _of_case(work, case))
        for case in study.cases
        if case != "dead"
    ]
    bands.append((f"deflection, {total[0].name}", "total", result.envelope.deflection))
    strips = []
    for title, under, band in bands:
        found = [
            (start, end, value)
            for number, (start, end) in enumerate(given.spans)
            if (value := limit(under, number)) is not None
        ]
        if found:
            strips.append(Deflection(title, *_shape(work, band), found))
    if not strips:
        return None
    first, *others = strips
    return deflected_shape(
        given.length,
        work.bearings,
        first.x,
        first.deflection,
        first.limits,
        study.system,
        title=first.title,
        further=others,
        fixed=given.fixed,
        mark=given.mark,
        width_mm=HALF_WIDTH,
    )


def state_ponding(work: Work, cite: str) -> None:
    """A word of caution about ponding where the beam carries a roof."""
    roof = [CASE_WORDS[case] for case in work.study.cases if case in ("roof_live", "snow")]
    if roof:
        work.sheet.text(
            f"This beam carries {' and '.join(roof)}: a roof that drains towards it or is nearly flat has to "
            f"be looked at for ponding, {cite}; ponded water is not in it.",
            role="caution",
        )


def _of_case(work: Work, case: Case) -> Band:
    """Deflections times E I under one case alone, placed where it is worst if it is movable."""
    analysed = work.study.analysed
    row = np.array([1.0 if each.case == case else 0.0 for each in analysed.sets])
    none = np.zeros(len(row))
    return envelope(analysed.response, *((none, row) if case in PLACED else (row, none))).deflection


def _shape(work: Work, band: Band) -> tuple[Array, Array]:
    """Of each span the edge of the band that goes farther; at supports both are zero, so no jump."""
    assert work.study.stiffness
    xs, ys = [], []
    for start, end in work.given.spans:
        edges = [between(*edge.sample(SAMPLES), start, end) for edge in (band.upper, band.lower)]
        x, y = max(edges, key=lambda edge: round(abs(largest(*edge)[0]), 12))
        xs.append(x)
        ys.append(y)
    return np.concatenate(xs), np.concatenate(ys) / work.study.stiffness
