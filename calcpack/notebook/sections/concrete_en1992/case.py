"""A beam of a sheet as the clauses of EN 1992-1-1 take it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np

from calcpack.actions import CombinationResult
from calcpack.clauses.bars import Stock
from calcpack.clauses.en1992.case import BeamCase, Given, Service, SpanCase, SupportCase
from calcpack.clauses.en1992.detailing import nominal_cover
from calcpack.clauses.en1992.flange import (
    FlangeSide,
    Segment,
    effective_side,
    reaches,
    span_zero_moments,
    support_zero_moments,
)
from calcpack.clauses.en1992.model import outline, strengths
from calcpack.clauses.en1992.national import National, national
from calcpack.job.errors import CalcpackError
from calcpack.notebook.work import Work
from calcpack.statics import Curve, PointLoad

LASTING = "quasi-permanent"
NEAR = 1e-9
LEAST_CHOSEN = 0.030  # [m], cover where the job gives none; common practice


@dataclass(frozen=True)
class Flange:
    """An effective flange: where, from what lengths, what either side gives."""

    words: str
    lengths: tuple[tuple[float, int], ...]  # share of l_0 and number of the span
    zero_moments: float  # l_0 [m]
    sides: tuple[FlangeSide, FlangeSide]
    width: float  # b_eff [m]


@dataclass(frozen=True)
class Particulars:
    """The case, and what the sheet says of how it came about."""

    case: BeamCase
    national: National
    flanges: tuple[Flange, ...]  # of the spans and of the supports; none for a rectangle
    lasting: CombinationResult
    support_width: float | None


def particulars(work: Work) -> Particulars:
    """Bring a beam and its design keys into the form the clauses take.

    Raises
    ------
    CalcpackError
        The beam is no concrete rectangle or tee, or a key does not fit.
    """
    given, design = work.given, work.given.design
    if given.section is None or given.material is None:
        raise CalcpackError("a beam designed after EN 1992-1-1 needs a section and a material")
    changes = dict(design["national_values"])
    if design["alpha_cc"] is not None:
        changes["alpha_cc"] = design["alpha_cc"]
    parameters = national(design["national"], changes)
    strength = strengths(given.material, parameters)
    web = outline(given.section, 0.0).web
    spans, supports = _spans(work), _supports(work)
    flanges = _flanges(work, web, spans) if given.section.shape == "tee" else ()
    widths = [flange.width for flange in flanges] or [web, web]
    lasting = _lasting(work)
    analysed = work.study.analysed
    limits = design["deflection_limits"]
    case = BeamCase(
        sagging=outline(given.section, widths[0]),
        hogging=outline(given.section, widths[1]).turned,
        strength=strength,
        national=parameters,
        cover=_cover(design, parameters),
        aggregate=design["aggregate"],
        exposure=design["exposure"],
        creep=design["creep"],
        shrinkage=design["shrinkage"],
        crack_limit=design["crack_width"],
        limits=(limits["live"], limits["total"]),
        moment=analysed.band("moment"),
        shear=analysed.band("shear"),
        lasting=lasting.envelope.moment,
        spans=spans,
        supports=supports,
        fixed=given.fixed,
        points=_points(work),
        service=tuple(_service(work, lasting, span) for span in spans),
        given=_given(design, work.stock),
        stock=work.stock,
    )
    _guard(case)
    return Particulars(case, parameters, flanges, lasting, design["support_width"])


def _cover(design: Mapping[str, Any], parameters: National) -> float:
    """The given nominal cover, or what the exposure asks for about stirrups of 12 mm, 30 mm at least."""
    if design["cover"] is not None:
        return float(design["cover"])
    return max(LEAST_CHOSEN, nominal_cover(0.012, design["exposure"], parameters))


def _guard(case: BeamCase) -> None:
    inside = case.sagging.web - 2 * case.cover
    if inside < 0.06 or case.sagging.depth - 2 * case.cover < 0.06:
        raise CalcpackError(
            f"a cover of {case.cover * 1e3:g} mm leaves no room for bars in a section of "
            f"{case.sagging.web * 1e3:g} × {case.sagging.depth * 1e3:g} mm",
            remedy="give a smaller cover or a larger section",
            key="design.cover",
        )


def _given(design: Mapping[str, Any], stock: Stock) -> Given:
    found: dict[str, Any] = {"bottom": None, "top": None, "stirrups": None}
    for key, needed in (
        ("bottom", ("count", "size")),
        ("top", ("count", "size")),
        ("stirrups", ("legs", "size", "spacing")),
    ):
        values = [design[key][name] for name in needed]
        if all(value is None for value in values):
            continue
        missing = [name for name, value in zip(needed, values, strict=True) if value is None]
        if missing:
            raise CalcpackError(
                f"{' and '.join(missing)} of the {key} bars is not given" if key != "stirrups"
                else f"{' and '.join(missing)} of the stirrups is not given",
                remedy=f"give {', '.join(needed)}, or leave {key} out and let the template choose",
                key=f"design.{key}",
            )  # fmt: skip
        try:
            sizes = stock.bar(design[key]["size"])
        except CalcpackError as error:
            raise CalcpackError(*(each.at(key=f"design.{key}.size") for each in error.problems)) from None
        found[key] = (values[0], sizes, *values[2:])
    return Given(**found, cot=None if design["cot_theta"] == "best" else design["cot_theta"])


def _spans(work: Work) -> tuple[SpanCase, ...]:
    given = work.given
    last = len(given.spans) - 1
    found = []
    for number, (start, end) in enumerate(given.spans):
        left = right = "continuous"
        if number == 0 and not given.fixed[0]:
            left = "free" if given.free[0] else "simple"
        if number == last and not given.fixed[1]:
            right = "free" if given.free[1] else "simple"
        found.append(SpanCase(start, end, left, right))
    return tuple(found)


def _supports(work: Work) -> tuple[SupportCase, ...]:
    given, width = work.given, work.given.design["support_width"]
    found = []
    for bearing in given.bearings:
        start, end = bearing.at <= NEAR, bearing.at >= given.length - NEAR
        free = (start and not given.fixed[0]) or (end and not given.fixed[1])
        direct = bearing.kind != "beam"
        half = width / 2 if width and direct else 0.0
        found.append(SupportCase(bearing.at, half, direct, f"{bearing.kind} {bearing.mark}", free))
    return tuple(found)


def _points(work: Work) -> tuple[float, ...]:
    loads = [load for case in work.study.cases for load in work.given.loads[case]]
    return tuple(sorted({load.at for load in loads if isinstance(load, PointLoad) and load.force}))


def _lasting(work: Work) -> CombinationResult:
    """The quasi-permanent combination with the largest moment; without one the largest for service."""
    service = work.study.analysed.of_limit("service")
    lasting = [each for each in service if each.combination.situation == LASTING]
    if not service:
        raise CalcpackError(
            "the combinations of the job have none for service, which cracks and deflections need",
            remedy="name a set such as EN 1990",
            key="basis.actions",
        )
    return max(lasting or service, key=lambda each: round(abs(each.moment_governing.value), 9))


def _service(work: Work, lasting: CombinationResult, span: SpanCase) -> Service:
    """Moments with live load where it deflects this span most."""
    analysed = work.study.analysed
    always, placed = analysed.factors(lasting.combination)
    x = np.linspace(span.start, span.end, 41)
    band = lasting.envelope.deflection
    upper, lower = np.abs(band.upper.values(x)), np.abs(band.lower.values(x))
    downward = upper.max() >= lower.max()
    at = float(x[int(np.argmax(upper if downward else lower))])
    moves = np.array([analysed.response.curve("deflection", row).at(at) for row in range(len(analysed.sets))])
    there = moves > 0 if downward else moves < 0
    live = np.array([each.case == "live" for each in analysed.sets])
    dead = np.array([each.case == "dead" for each in analysed.sets]).astype(float)

    def moment(factors: Any) -> Curve:
        return analysed.response.combined(factors).curve("moment")

    rare = moment(dead + (live & there)) if live.any() else None
    return Service(moment(always + placed * there), rare, moment(dead) if live.any() else None)


def _flanges(work: Work, web: float, spans: tuple[SpanCase, ...]) -> tuple[Flange, ...]:
    """The smallest effective flange of the spans, and that of the support with the largest hogging moment."""
    section = work.given.section
    assert section is not None
    own = section.dimensions.get("flange_width")
    sides = [
        _reaches(work, span, web) if own is None else ((own - web) / 2, (own - web) / 2) for span in spans
    ]
    found = []
    for number, span in enumerate(spans):
        zero_moments, share = span_zero_moments(span.length, span.left, span.right)
        words = "overhang" if span.overhang else "span"
        found.append(_flange(f"{words} {number + 1}", ((share, number),), zero_moments, sides[number], web))
    inner = [flange for flange, span in zip(found, spans, strict=True) if not span.overhang]
    smallest = min(inner or found, key=lambda flange: round(flange.width, 9))
    return smallest, _support_flange(work, web, spans, sides)


def _support_flange(
    work: Work, web: float, spans: tuple[SpanCase, ...], sides: list[tuple[float, float]]
) -> Flange:
    at = work.study.analysed.moment_min.at
    bearing = min(work.given.bearings, key=lambda each: abs(each.at - at))
    beside = [number for number, span in enumerate(spans) if bearing.at in (span.start, span.end)] or [0]
    lengths = [(1.0 if spans[number].overhang else 0.15, number) for number in beside]
    zero_moments = sum(share * spans[number].length for share, number in lengths)
    if all(share == 0.15 for share, _ in lengths):
        zero_moments = support_zero_moments(
            *(spans[number].length for number in beside), *([0.0] * (2 - len(beside)))
        )
    least = tuple(min(sides[number][side] for number in beside) for side in (0, 1))
    words = f"support at {bearing.kind} {bearing.mark}"
    return _flange(words, tuple(lengths), zero_moments, (least[0], least[1]), web)


def _flange(
    words: str,
    lengths: tuple[tuple[float, int], ...],
    zero_moments: float,
    sides: tuple[float, float],
    web: float,
) -> Flange:
    both = (effective_side(sides[0], zero_moments), effective_side(sides[1], zero_moments))
    return Flange(words, lengths, zero_moments, both, web + both[0].effective + both[1].effective)


def _reaches(work: Work, span: SpanCase, web: float) -> tuple[float, float]:
    given, plan = work.given, work.given.drawn_plan
    (x0, y0), (x1, y1) = given.points[0], given.points[-1]

    def place(at: float) -> tuple[float, float]:
        part = at / given.length
        return x0 + part * (x1 - x0), y0 + part * (y1 - y0)

    neighbours: list[Segment] = []
    for beam in plan["beams"]:
        if beam["mark"] != given.mark:
            ends = [(float(point[0]), float(point[1])) for point in beam["points"]]
            neighbours.append((ends[0], ends[-1]))
    for wall in plan["walls"]:
        (a, b), (c, d) = wall["line"]
        neighbours.append(((float(a), float(b)), (float(c), float(d))))
    panels = [[(float(x), float(y)) for x, y in panel["corners"]] for panel in plan["panels"]]
    return reaches((place(span.start), place(span.end)), panels, neighbours, web)
