"""What must hold: equilibrium, agreement with a second method, and the deflection limits asked for."""

from __future__ import annotations

from itertools import pairwise
from typing import Any

from calcpack.equivalent import loads_on, responses
from calcpack.notebook.study import CASE_WORDS
from calcpack.notebook.work import NOTHING, Work, summed
from calcpack.sheet import Expression, Line, absolute, measured, number
from calcpack.statics import LineLoad, PointLoad
from calcpack.statics.stiffness import stiffness_check


def state_checks(work: Work) -> None:
    """Equilibrium case by case, the second method, deflection limits."""
    work.sheet.section("Checks")
    if work.study.unloaded:
        work.sheet.text(NOTHING)
        return
    work.lines["agreement"] = work.sheet.take(
        "epsilon",
        1e-6,
        "1",
        says="Agreement asked for of two roads",
        origin="template",
        word="agreement asked for",
    )
    _equilibrium(work)
    _three_moments(work)
    _second_method(work)
    _deflection_limits(work)


def _equilibrium(work: Work) -> None:
    """Forces, and moments about the beam's start, of each case with every span loaded."""
    study, given, sheet = work.study, work.given, work.sheet
    near, rows = work.lines["agreement"], []
    forces: list[tuple[Expression, str]] = []
    moments: list[tuple[float, float, str]] = []
    for row, case in enumerate(study.cases):
        load = work.lines["total", case]
        start, end = (float(value) for value in study.by_case.end_moments[row])
        reactions = [float(value) for value in study.by_case.reactions[row]]
        upward = sum(reactions)
        # sagging positive: what holds the start turns the beam by -M, what holds the end by +M
        turning = sum(value * bearing.at for value, bearing in zip(reactions, given.bearings, strict=True))
        turning += end - start
        loads = sum(_moment(each) for each in given.loads[case])
        rows.append(
            [
                CASE_WORDS[case],
                work.show(upward, "kN"),
                load.shown,
                work.show(turning, "kN*m"),
                work.show(loads, "kN*m"),
            ]
        )
        if study.significant(load.value, "force"):
            whole = load if load.value > 0 else absolute(load)
            forces.append((absolute(measured(upward, "kN") - load) / whole, CASE_WORDS[case]))
        if study.significant(loads, "moment"):
            moments.append((turning, loads, CASE_WORDS[case]))
    sheet.table(
        [
            ("every span loaded", "left"),
            ("sum of reactions", "right"),
            ("load", "right"),
            ("moment of reactions", "right"),
            ("moment of loads", "right"),
        ],
        rows,
        caption="Equilibrium, case by case; moments about the beam's start"
        + (", end moments of held ends counted with the reactions." if any(given.fixed) else "."),
    )
    for difference, words in forces:
        sheet.require(difference <= near, says=f"Equilibrium of forces, {words}", cite="equilibrium")
    if moments:
        turning, loads, words = max(moments, key=lambda each: round(abs(each[0] / each[1] - 1), 9))
        apart = absolute(measured(turning, "kN*m") - measured(loads, "kN*m"))
        sheet.require(
            apart / measured(abs(loads), "kN*m") <= near,
            says=f"Equilibrium of moments, where it is farthest off: {words}",
            cite="equilibrium",
        )


def _moment(load: LineLoad | PointLoad) -> float:
    """Moment of a load about the beam's start [kNm]."""
    if isinstance(load, PointLoad):
        return load.force * load.at
    length = load.end - load.start
    return load.total * load.start + length**2 * (load.first + 2 * load.last) / 6


def _three_moments(work: Work) -> None:
    """At each inner support, the moments on both sides turn the two spans' ends alike (Clapeyron)."""
    study, sheet = work.study, work.sheet
    combination = study.analysed.governing_moment.combination
    always, placed = study.analysed.factors(combination)
    exact = study.analysed.response.combined(always + placed)
    moments = {
        bearing.at: study.settled(float(exact.support_moments[0][at]), "moment")
        for at, bearing in enumerate(work.given.bearings)
    }
    fixed = {}
    for span in study.spans:
        if span is not None:
            loads = [
                scaled(load, combination.factors[each.case])
                for each in study.design_sets
                for load in loads_on(each.loads, span.start, span.end)
                if each.case in combination.factors
            ]
            fixed[span.number] = responses(span.length, loads).end_moments
    rows = [
        [
            f"span {number_}",
            work.show(span.length, "m"),
            *(work.show(value, "kN*m") for value in ends),
            *(work.show(moments[at], "kN*m") for at in (span.start, span.end)),
        ]
        for number_, ends in fixed.items()
        if (span := study.spans[number_ - 1]) is not None
    ]
    pairs = [(one, other) for one, other in pairwise(study.spans) if one is not None and other is not None]
    if not pairs:
        return
    sheet.table(
        [
            (f"{combination.name}, every span loaded", "left"),
            ("length", "right"),
            ("fixed end, left", "right"),
            ("fixed end, right", "right"),
            ("support moment, left", "right"),
            ("right", "right"),
        ],
        rows,
        caption="Moments of each span with both ends fixed (hogging positive), and the support moments of "
        "the continuous beam (sagging positive).",
    )
    for left, right in pairs:
        one, other = work.lines["span", left.number - 1], work.lines["span", right.number - 1]
        (a, b), (c, d) = fixed[left.number], fixed[right.number]
        words = f"at the support between spans {left.number} and {right.number}"
        outer = [
            measured(moments[at], "kN*m") * length
            for at, length in ((left.start, one), (right.end, other))
            if moments[at]
        ]
        bent = sheet.hence(
            f"T_M{left.number}",
            summed([2 * measured(moments[left.end], "kN*m") * (one + other), *outer]),
            "kN*m^2",
            says=f"Three-moment equation {words}: turning by the support moments",
            cite="Clapeyron",
            word="turning by support moments, times 6 EI",
        )
        loaded = sheet.hence(
            f"T_w{left.number}",
            one * (measured(a, "kN*m") + 2 * measured(b, "kN*m"))
            + other * (2 * measured(c, "kN*m") + measured(d, "kN*m")),
            "kN*m^2",
            says="Turning by the loads, from the moments with fixed ends",
            cite="Clapeyron",
            word="turning by loads, times 6 EI",
        )
        sheet.require(
            absolute(bent + loaded) / loaded <= work.lines["agreement"],
            says="The two cancel, over the turning by the loads",
            cite="Clapeyron",
        )


def _second_method(work: Work) -> None:
    """The governing combination, every span loaded, solved once more by direct stiffness."""
    study, given, sheet = work.study, work.given, work.sheet
    combination = study.analysed.governing_moment.combination
    always, placed = study.analysed.factors(combination)
    exact = study.analysed.response.combined(always + placed)
    factored = [
        scaled(load, combination.factors[each.case])
        for each in study.design_sets
        for load in each.loads
        if each.case in combination.factors
    ]
    second = stiffness_check(study.line, factored)
    rows: list[list[str]] = []
    pairs: list[tuple[float, float]] = []
    weighing = sum(abs(load.total) for load in factored)
    for at, bearing in enumerate(given.bearings):
        one, other = float(exact.reactions[0][at]), _steady(float(second.reactions[at]))
        hogging = [float(values[at]) for values in (exact.support_moments[0], second.support_moments)]
        rows.append(
            [
                f"{bearing.kind} {bearing.mark}",
                work.show(one, "kN"),
                work.show(other, "kN"),
                *(work.show(study.settled(value, "moment"), "kN*m") for value in hogging),
            ]
        )
        pairs.append((one, other))
    sheet.table(
        [
            ("support", "left"),
            ("reaction, exact", "right"),
            ("by stiffness", "right"),
            ("moment, exact", "right"),
            ("by stiffness", "right"),
        ],
        rows,
        caption=f"{combination.name}, every span loaded, solved a second time by direct stiffness with cubic "
        "elements.",
    )
    # what is no more than rounding must not choose
    one, other = max(pairs, key=lambda pair: round(abs(pair[0] - pair[1]) / weighing, 9))
    weight: list[Expression | Line] = [
        number(combination.factors[case]) * work.lines["total", case]
        for case in study.cases
        if case in combination.factors
    ]
    if study.given.design_loads == "equivalent":
        weight = [measured(sum(load.total for load in factored), "kN")]
    sheet.require(
        absolute(measured(one, "kN") - measured(other, "kN")) / summed(weight) <= work.lines["agreement"],
        says="The reaction on which the two methods differ most, against the load",
        cite="second method",
    )


def scaled(load: LineLoad | PointLoad, factor: float) -> LineLoad | PointLoad:
    """A load times a factor."""
    if isinstance(load, PointLoad):
        return PointLoad(load.at, factor * load.force, load.source)
    return LineLoad(load.start, load.end, factor * load.first, factor * load.last, load.source)


def _steady(value: float) -> float:
    """A value without the last digits, which differ from one linear algebra library to another."""
    return float(f"{value:.9g}")


def _deflection_limits(work: Work) -> None:
    """Span over so much, for the live and the total deflection, where the job sets limits."""
    if any(name.startswith("deflection") for name, _ in work.checks):
        return  # a design section has looked at them in its own way
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
            says=f"Deflection under {words}: at most "
            f"{'twice the overhang' if overhang else 'span'} over {limit:g}",
            cite="limit as given",
        )
        work.checks.append((f"deflection, {words}", line))


def _span_at(work: Work, at: float) -> int:
    """The span that a place lies in, the last one for the beam's end."""
    spans = work.given.spans
    return next((number for number, (_, end) in enumerate(spans) if at < end), len(spans) - 1)


def governing_check(work: Work) -> tuple[str, Line, float] | None:
    """Name, requirement and ratio of what the beam uses most; None without checks."""
    rated = [(name, line, float(line.check(name)["ratio"])) for name, line in work.checks]
    return max(rated, key=lambda each: each[2], default=None)


def checks_of(work: Work) -> list[dict[str, Any]]:
    """The ``checks`` of the record: what is required of the beam, not of the calculation."""
    return [line.check(name) for name, line in work.checks]
