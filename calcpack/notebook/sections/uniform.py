"""Equivalent uniform loads: derived, put into numbers, compared with the actual load."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any

from calcpack.equivalent import KINDS, Effect, Shape, ShapeKind, responses, shape_of
from calcpack.equivalent.derive import derivation
from calcpack.figures import free_body
from calcpack.job.model import Case, EquivalentKind
from calcpack.notebook.sections.opening import CARRIED_FORWARD
from calcpack.notebook.sections.resultants import before, resultant, resultant_term
from calcpack.notebook.study import CASE_WORDS, SpanLoads
from calcpack.notebook.work import LETTER, NOTHING, Alike, Work, summed
from calcpack.sheet import (
    Expression,
    Line,
    display_unit,
    formula,
    measured,
    number,
    shown_number,
    strong,
    total,
)
from calcpack.sheet.latex import symbol_latex

# Equivalent uniform load over the peak of a trapezoid that rises over m/2 of the span at each end.
FACTOR: dict[EquivalentKind, Callable[[Line], Expression]] = {
    "shear": lambda m: 1 - m / 2,
    "moment": lambda m: 1 - m**2 / 3,
    "deflection": lambda m: (1 - m**2 / 5) ** 2,
    "fixed-end moment": lambda m: 1 - m**2 / 2 + m**3 / 8,
    "total": lambda m: 1 - m / 2,
}
# Of a triangle: the same at m = 1.
TRIANGLE: dict[EquivalentKind, tuple[int, int]] = {
    "shear": (1, 2),
    "moment": (2, 3),
    "deflection": (16, 25),
    "fixed-end moment": (5, 8),
    "total": (1, 2),
}
WHY: dict[EquivalentKind, str] = {
    "shear": "it keeps the end reactions, so bearings and shear are right; for bending see the table",
    "moment": "it keeps the largest bending moment, on which the section is chosen; for shear see the table",
    "deflection": "it keeps the largest deflection, as stiffness needs; for strength see the table",
    "fixed-end moment": "it keeps the end moments that a frame or a continuous beam is analysed with",
    "total": "it keeps the total load, which is what foundations see; for bending see the table",
}
COLUMNS: tuple[tuple[Effect, str], ...] = (
    ("shear", "V"),
    ("moment", "M"),
    ("deflection", "δ"),
    ("end_moment", "end M"),
)
SHORT_OF: dict[Effect, str] = {
    "shear": "shear",
    "moment": "moment",
    "deflection": "deflection",
    "end_moment": "end moment",
}


def state_equivalents(work: Work) -> None:
    """Derivation for the shapes that occur, the numbers of each span, and the comparison."""
    spans = [span for span in work.study.spans if span is not None]
    work.sheet.section("Equivalent uniform loads")
    if work.study.unloaded:
        work.sheet.text(NOTHING)
        return
    if not spans:
        work.sheet.text("The beam has no span between two supports, so there is nothing to make uniform.")
        return
    criterion = work.given.equivalent
    work.sheet.text(
        [
            "Carried forward: ",
            {"strong": CARRIED_FORWARD[criterion]},
            f", as the job sets it; {WHY[criterion]}. Each span is taken alone, simply supported "
            "(for end moments: both ends fixed). The other criteria are in the table; their derivations are "
            "in the pack's appendix.",
        ]
    )
    for kind, shape in _kinds(work, spans).items():
        with work.sheet.columns([17, 7]) as column:
            work.sheet.derivation([step.as_data() for step in derivation(kind, criterion).steps])
            column()
            held = criterion == "fixed-end moment"
            work.sheet.figure(free_body(shape, held=held, width_mm=54), "Free body of the derivation.")
    for span in spans:
        _span(work, span, criterion)


def _kinds(work: Work, spans: Sequence[SpanLoads]) -> dict[ShapeKind, Shape]:
    """The shapes to derive, each with the first load of its kind; the general one where it is needed."""
    found: dict[ShapeKind, Shape] = {}
    for span in spans:
        for case in work.study.cases:
            if work.symmetric(span, case):
                for shape in work.shapes(span, case).values():
                    found.setdefault(shape.kind, shape)
            else:
                found.setdefault("general", shape_of(span.length, span.loads[case]))
    ranked: tuple[ShapeKind, ...] = ("triangle", "trapezoid", "general")
    return {kind: found[kind] for kind in ranked if kind in found}


def _span(work: Work, span: SpanLoads, criterion: EquivalentKind) -> None:
    several = len(work.study.spans) > 1
    if several:
        work.sheet.subsection(f"Span {span.number}, {work.show(span.length, 'm')}")
    for case in work.study.cases:
        if not work.shapes(span, case):
            continue
        if work.symmetric(span, case):
            _symmetric(work, span, case, criterion, several)
        else:
            _any_shape(work, span, case, criterion, several)
    _comparison(work, span, criterion)


def _symmetric(work: Work, span: SpanLoads, case: Case, criterion: EquivalentKind, several: bool) -> None:
    """All responses peak at midspan or at the ends alike, so the sources' equivalents add up."""
    terms: list[Expression | Line] = []
    curved = any(group.shape.kind != "uniform" for group in work.alike(span, case))
    for group in work.alike(span, case):
        if group.shape.kind == "uniform":
            terms.append(group.peak)
        elif group.shape.kind == "triangle":
            top, bottom = TRIANGLE[criterion]
            terms.append(number(top) / bottom * group.peak)
        else:
            terms.append(_factor(work, span, group, criterion) * group.peak)
    work.lines["equivalent", case, span.number] = work.sheet.hence(
        _symbol(case, span.number if several else None),
        summed(terms),
        "kN/m",
        says=f"Equivalent uniform {CASE_WORDS[case]}, {CARRIED_FORWARD[criterion]}",
        cite="statics, derived above" if curved else "uniform as it is",
    )


def _factor(work: Work, span: SpanLoads, group: Alike, criterion: EquivalentKind) -> Line:
    """The factor of a trapezoid, a line of its own shared by the load cases."""
    name, side_ratio = group.names[0], group.shape.side_ratio
    key = ("factor", round(side_ratio, 9), span.number)
    if key in work.lines:
        return work.lines[key]
    index = work.sources[name].index
    ratio = work.lines.get(("ratio", name))
    words = " and ".join(work.sources[each].words for each in group.names)
    if ratio is None or abs(ratio.value - side_ratio) > 1e-9:
        ratio = work.sheet.hence(
            f"m_{index}",
            2 * work.lines["depth", name] / work.lines["span", span.number - 1],
            "1",
            says=f"Twice the length over which the load from {words} rises, over the span",
        )
    work.lines[key] = work.sheet.hence(
        f"kappa_{index}",
        FACTOR[criterion](ratio),
        "1",
        says=f"Equivalent over peak for the trapezoid from {words}",
        cite="statics, derived above",
    )
    return work.lines[key]


def _symbol(case: Case, number: int | None) -> str:
    return f"w_eq,{LETTER[case]}{'' if number is None else number}"


def _any_shape(work: Work, span: SpanLoads, case: Case, criterion: EquivalentKind, several: bool) -> None:
    """Any loads: resultants and their places give the reactions; the rest follows from these."""
    sheet, letter = work.sheet, LETTER[case]
    mark = f"{letter}{span.number}" if several else letter
    length = work.lines["span", span.number - 1]
    found = responses(span.length, span.loads[case])
    rows = []
    for name, shape in work.shapes(span, case).items():
        force, moment = resultant(shape)
        rows.append([work.sources[name].words, work.show(force, "kN"), work.show(moment / force, "m")])
    sheet.table(
        [("source", "left"), ("resultant", "right"), ("from the left support", "right")],
        rows,
        caption=f"{CASE_WORDS[case].capitalize()} on the span, source by source.",
    )
    terms = {name: resultant_term(work, span, case, name) for name in work.shapes(span, case)}
    weight = sheet.hence(
        f"W_{mark}", summed(list(terms.values())), "kN", says=f"Sum of the resultants, {CASE_WORDS[case]}"
    )
    turning = []
    for name, shape in work.shapes(span, case).items():
        force, moment = resultant(shape)
        turning.append(terms[name] * measured(moment / force, "m"))
    about = sheet.hence(
        f"J_{mark}",
        summed(turning),
        "kN*m",
        says="Moment of the resultants about the left support",
        word="moment of loads about the left support",
    )
    right = sheet.hence(
        f"R_b,{mark}", about / length, "kN", says="Reaction at the right support", cite="equilibrium"
    )
    left = sheet.hence(
        f"R_a,{mark}", weight - right, "kN", says="Reaction at the left support", cite="equilibrium"
    )
    work.lines["left", case, span.number], work.lines["right", case, span.number] = left, right
    if work.simple is not None and abs(weight.value - work.study.total(case)) <= 1e-9 * weight.value:
        work.lines["total", case] = weight
    symbol = _symbol(case, span.number if several else None)
    says = f"Equivalent uniform {CASE_WORDS[case]}, {CARRIED_FORWARD[criterion]}"
    key = ("equivalent", case, span.number)
    if criterion == "shear":
        larger = left if left.value >= right.value else right
        work.lines[key] = sheet.hence(symbol, 2 * larger / length, "kN/m", says=says)
    elif criterion == "total":
        work.lines[key] = sheet.hence(symbol, weight / length, "kN/m", says=says)
    elif criterion == "moment":
        most = _moment(work, span, case, mark, left, found.moment_at)
        work.lines[key] = sheet.hence(symbol, 8 * most / length**2, "kN/m", says=says)
    elif criterion == "deflection":
        sag = sheet.take(
            f"Delta_{mark}",
            found.deflection,
            "kN*m^3",
            says="Largest deflection of the span times EI, from the exact deflection line",
            origin=f"analysis, span {span.number} alone",
            given=False,
        )
        work.lines[key] = sheet.hence(symbol, 384 * sag / (5 * length**4), "kN/m", says=says)
    else:
        end = sheet.take(
            f"M_f,{mark}",
            found.end_moment,
            "kN*m",
            says="Larger end moment with both ends fixed, from the exact moment line",
            origin=f"analysis, span {span.number} alone",
            given=False,
        )
        work.lines[key] = sheet.hence(symbol, 12 * end / length**2, "kN/m", says=says)


def _moment(work: Work, span: SpanLoads, case: Case, mark: str, left: Line, at: float) -> Line:
    """The largest moment of the span: at zero shear, the left reaction less what stands before it."""
    sheet = work.sheet
    place = sheet.take(
        f"x_0,{mark}",
        at,
        "m",
        says="Where the shear changes sign, from the left support",
        origin=f"analysis, span {span.number} alone",
        given=False,
    )
    ahead = [
        part
        for part in (resultant(before(shape, at)) for shape in work.shapes(span, case).values())
        if part[0]
    ]
    arms = [measured(force, "kN") * measured(at - moment / force, "m") for force, moment in ahead]
    return sheet.hence(
        f"M_0,{mark}",
        left * place - total(arms) if arms else left * place,
        "kN*m",
        says="Largest moment there: the reaction's moment less that of the loads before it, each at its arm",
    )


def _comparison(work: Work, span: SpanLoads, criterion: EquivalentKind) -> None:
    """Every equivalent against the actual load; what falls short is bold, and named in the last column."""
    unit, _ = display_unit("kN/m", work.study.system)
    cases = [case for case in work.study.cases if work.shapes(span, case)]
    for chosen in (cases[i : i + 2] for i in range(0, len(cases), 2)):
        columns: list[tuple[Any, str]] = [("equal", "left")]
        for case in chosen:
            columns.append(([formula(symbol_latex(_symbol(case, None))), f" {unit}"], "right"))
            columns += [(label, "right") for _, label in COLUMNS]
        columns.append(("unsafe for", "left"))
        rows: list[list[Any]] = []
        for kind in KINDS:
            row: list[Any] = [kind]
            short: set[Effect] = set()
            for case in chosen:
                compared = span.comparisons[case].row(kind)
                row.append(shown_number(compared.load, "kN/m", work.study.system))
                for effect, _ in COLUMNS:
                    text = f"{compared.ratio(effect):.3f}"
                    row.append([strong(text)] if compared.unsafe_for(effect) else text)
                short.update(compared.unsafe)
            row.append([strong(", ".join(SHORT_OF[effect] for effect in SHORT_OF if effect in short) or "–")])
            rows.append(row)
        words = " and ".join(CASE_WORDS[case] for case in chosen)
        work.sheet.table(
            columns,
            rows,
            caption=f"Span {span.number}, {words}: each equivalent, and its shear V, moment M, deflection δ "
            "and fixed-end moment over the actual ones. Bold, below 1: it falls short and is unsafe there.",
            strong_rows=[KINDS.index(criterion)],
        )
