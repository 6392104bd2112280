"""What must hold: equilibrium, agreement with a second method, and the deflection limits asked for."""

from __future__ import annotations

from typing import Any

from calcpack.notebook.study import CASE_WORDS
from calcpack.notebook.work import LETTER, Work
from calcpack.sheet import Expression, Line, absolute, greatest, measured, number, total
from calcpack.statics import LineLoad, PointLoad
from calcpack.statics.stiffness import stiffness_check

TOLERANCE = "0.000001"  # relative, for two roads to one number


def state_checks(work: Work) -> None:
    """Equilibrium case by case, the second method, deflection limits."""
    work.sheet.section("Checks")
    for row, case in enumerate(work.study.cases):
        _equilibrium(work, row, case)
    _second_method(work)
    _deflection_limits(work)


def _equilibrium(work: Work, row: int, case: str) -> None:
    """Forces, and moments about the beam's start."""
    study, given, sheet = work.study, work.given, work.sheet
    letter, load = LETTER[case], work.lines["total", case]  # type: ignore[index]
    reactions = [float(value) for value in study.by_case.reactions[row]]
    upward = sheet.hence(
        f"R_sum,{letter}",
        total(measured(value, "kN") for value in reactions),
        "kN",
        says=f"Sum of the reactions, {CASE_WORDS[case]}",  # type: ignore[index]
        cite="equilibrium",
    )
    sheet.require(
        absolute(upward - load) <= number(TOLERANCE) * load,
        says=f"They carry all the {CASE_WORDS[case]}",  # type: ignore[index]
        cite="equilibrium",
    )
    start, end = (float(value) for value in study.by_case.end_moments[row])
    turning = [
        measured(value, "kN") * measured(bearing.at, "m")
        for value, bearing in zip(reactions, given.bearings, strict=True)
        if bearing.at > 0
    ]
    # sagging positive: the wall at the start turns the beam with -M, at the end with +M
    held = [measured(-start, "kN*m"), measured(end, "kN*m")] if any(given.fixed) else []
    loads = sum(_moment(each) for each in given.loads[case])  # type: ignore[index]
    sheet.require(
        absolute(total([*turning, *held]) - measured(loads, "kN*m"))
        <= number(TOLERANCE) * load * _length(work),
        says=f"Moments about the beam's start: reactions against {CASE_WORDS[case]}",  # type: ignore[index]
        cite="equilibrium",
    )


def _moment(load: LineLoad | PointLoad) -> float:
    """Moment of a load about the beam's start [kNm]."""
    if isinstance(load, PointLoad):
        return load.force * load.at
    length = load.end - load.start
    return load.total * load.start + length**2 * (load.first + 2 * load.last) / 6


def _second_method(work: Work) -> None:
    """The governing combination, every span loaded, solved once more by direct stiffness."""
    study, given, sheet = work.study, work.given, work.sheet
    combination = study.analysed.governing_moment.combination
    always, placed = study.analysed.factors(combination)
    exact = study.analysed.response.combined(always + placed)
    factored = [
        _scaled(load, combination.factors.get(each.case, 0.0))
        for each in study.design_sets
        for load in each.loads
        if combination.factors.get(each.case, 0.0)
    ]
    second = stiffness_check(study.line, factored)
    rows, differences = [], []
    for at, bearing in enumerate(given.bearings):
        one, other = float(exact.reactions[0][at]), _steady(float(second.reactions[at]))
        rows.append(
            [
                f"R{at + 1}, {bearing.kind} {bearing.mark}",
                work.show(one, "kN"),
                work.show(other, "kN"),
            ]
        )
        differences.append(absolute(measured(one, "kN") - measured(other, "kN")))
    sheet.table(
        [(f"{combination.name}, every span loaded", "left"), ("exact", "right"), ("direct stiffness", "right")],
        rows,
        caption="The beam solved a second time by direct stiffness with cubic elements.",
    )
    weight = total(measured(load.total, "kN") for load in factored if load.total)
    sheet.require(
        (greatest(*differences) if len(differences) > 1 else differences[0]) <= number(TOLERANCE) * weight,
        says="Largest difference between the two methods' reactions, against the load",
        cite="second method",
    )


def _scaled(load: LineLoad | PointLoad, factor: float) -> LineLoad | PointLoad:
    if isinstance(load, PointLoad):
        return PointLoad(load.at, factor * load.force, load.source)
    return LineLoad(load.start, load.end, factor * load.first, factor * load.last, load.source)


def _steady(value: float) -> float:
    """A value without the last digits, which differ from one linear algebra library to another."""
    return float(f"{value:.9g}")


def _deflection_limits(work: Work) -> None:
    """Span over so much, for the live and the total deflection, where the job sets limits."""
    limits = work.given.design.get("deflection_limits") or {}
    analysed = work.study.analysed
    total_, live = analysed.deflection_total, analysed.deflection_live
    if total_ is None or live is None:
        return
    for key, symbol, extreme, words in (
        ("live", "delta_live", live, "live load"),
        ("total", "delta_total", total_[1], total_[0].name),
    ):
        limit = limits.get(key)
        if not limit:
            continue
        number_ = _span_at(work, extreme.at)
        span = work.lines["span", number_]
        found = work.sheet.take(
            symbol,
            abs(extreme.value) * 1000,
            "mm",
            says=f"Largest deflection, {words}",
            origin="analysis, deflection line",
            given=False,
        )
        overhang = not work.given.between_supports(number_)
        reach = 2 * span if overhang else span
        line = work.sheet.require(
            found <= reach / number(limit),
            says=f"Deflection under {words}: at most {'twice the overhang' if overhang else 'span'} over {limit:g}",
            cite="limit set by the job",
        )
        work.checks.append((f"deflection, {words}", line))


def _span_at(work: Work, at: float) -> int:
    """The span that a place lies in, the last one for the beam's end."""
    spans = work.given.spans
    return next((number for number, (_, end) in enumerate(spans) if at < end), len(spans) - 1)


def _length(work: Work) -> Line | Expression:
    """The beam's whole length, as its spans make it up."""
    spans = [work.lines["span", number_] for number_ in range(len(work.given.spans))]
    return total(spans) if len(spans) > 1 else spans[0]


def checks_of(work: Work) -> list[dict[str, Any]]:
    """The ``checks`` of the record: what is required of the beam, not of the calculation."""
    return [line.check(name) for name, line in work.checks]
