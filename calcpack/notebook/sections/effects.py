"""Combinations, reactions, shears, moments and deflections."""

from __future__ import annotations

from calcpack.actions import AnalysedBeam, Combination, CombinationResult
from calcpack.figures import response_figure
from calcpack.figures.response import CurveData, Quantity
from calcpack.job.model import Case
from calcpack.notebook.sections.resultants import CLOSE, before, midspan_moment, resultant
from calcpack.notebook.study import CASE_WORDS, SpanLoads
from calcpack.notebook.work import LETTER, NOTHING, Work, summed
from calcpack.sheet import Expression, Line, measured, number, total
from calcpack.statics import Extreme

SAMPLES = 120
Deflected = tuple[Combination, Extreme]  # under which combination, and the largest


def state_combinations(work: Work) -> None:
    """Every combination with its extremes, the governing ones marked."""
    study, analysed = work.study, work.study.analysed
    work.sheet.section("Combinations")
    if study.unloaded:
        work.sheet.text(NOTHING)
        return
    moment, shear = analysed.governing_moment, analysed.governing_shear
    supports = range(len(work.given.bearings))
    listed = supports if len(supports) <= 4 else ()
    hogging = any(study.significant(each.moment_min.value, "moment") for each in analysed.results)
    rows, strong = [], []
    for number_, result in enumerate(analysed.results):
        governs = [words for words, of in (("M", moment), ("V", shear)) if of is result]
        if governs:
            strong.append(number_)
        rows.append(
            [
                result.combination.name,
                result.combination.situation or "strength",
                result.combination.cite,
                work.show(result.moment_max.value, "kN*m"),
                *([work.show(result.moment_min.value, "kN*m")] if hogging else []),
                work.show(abs(result.shear_max.value), "kN"),
                *(work.show(result.reactions_max[at], "kN") for at in listed),
                f"governs {' and '.join(governs)}" if governs else "",
            ]
        )
    work.sheet.table(
        [
            ("combination", "left"),
            ("limit state", "left"),
            ("clause", "left"),
            ("max M", "right"),
            *([("min M", "right")] if hogging else []),
            ("max V", "right"),
            *((f"max R{at + 1}", "right") for at in listed),
            ("", "left"),
        ],
        rows,
        caption="Largest moments, shear (by size) and reactions of each combination, live load where it is "
        f"worst for each{_lessened(work)}; all but strength are service combinations.{_names(work)}",
        strong_rows=strong,
    )
    if study.given.design_loads == "actual":
        _by_hand(work, moment, shear)


def _lessened(work: Work) -> str:
    """That the live load of the combinations is the reduced one, where it is."""
    factor = work.lines.get("reduction")
    if not work.study.reduced_sources:
        return ""
    return f" and reduced as in line {factor.no}" if factor is not None else " and reduced"


def _names(work: Work) -> str:
    named = ", ".join(f"{symbol} {CASE_WORDS[case]}" for case, symbol in _symbols(work).items())
    return f" {named}."


def _symbols(work: Work) -> dict[Case, str]:
    own: dict[Case, str] = {"dead": "G", "live": "Q", "roof_live": "Qr", "snow": "S"}
    american: dict[Case, str] = {"dead": "D", "live": "L", "roof_live": "Lr", "snow": "S"}
    table = own if work.given.actions.family == "EN" else american
    return {case: table[case] for case in work.study.cases}


def _by_hand(work: Work, moment: CombinationResult, shear: CombinationResult) -> None:
    """A beam on two supports: the governing values from the cases, where all loads are symmetric."""
    span, sheet = work.simple, work.sheet
    if span is None or not _whole_or_alike(work):
        return
    if not all(work.symmetric(span, case) for case in work.study.cases):
        _by_moments(work, span, moment, shear)
        return
    length = work.lines["span", 0]
    for case in work.study.cases:
        letter, words = LETTER[case], CASE_WORDS[case]
        work.lines["reaction", case] = sheet.hence(
            f"R_{letter}",
            work.lines["total", case] / 2,
            "kN",
            says=f"Reaction at each end, {words}: the load is symmetric",
            cite="equilibrium",
        )
        work.lines["moment", case] = sheet.hence(
            f"M_{letter}",
            summed([midspan_moment(work, group, length) for group in work.alike(span, case)]),
            "kN*m",
            says=f"Largest moment, {words}, at midspan, shape by shape",
            cite="statics",
        )
    for result, symbol, key, unit, words in (
        (moment, "M_max", "moment", "kN*m", "Largest moment"),
        (shear, "V_max", "reaction", "kN", "Largest shear, at the supports"),
    ):
        factors = [
            (factor, _reduced(work, case, work.lines[key, case]))
            for case, factor in result.combination.factors.items()
            if case in work.study.cases
        ]
        work.lines[key] = sheet.hence(
            symbol,
            summed([_times(factor, line) for factor, line in factors]),
            unit,
            says=f"{words}, under {result.combination.name}",
            cite=result.combination.cite,
        )


def _by_moments(work: Work, span: SpanLoads, moment: CombinationResult, shear: CombinationResult) -> None:
    """Any load on two supports: the governing values from the cases' reactions and resultants.

    Only where all loads together are the worst placement, and the reactions stand on the sheet.
    """
    cases = [case for case in work.study.cases if work.shapes(span, case)]
    factors = {case: factor for case, factor in moment.combination.factors.items() if case in cases}
    always, placed = work.study.analysed.factors(moment.combination)
    together = work.study.analysed.response.combined(always + placed)
    most = moment.moment_max
    if (
        any(work.symmetric(span, case) for case in cases)
        or shear is not moment
        or abs(together.curve("moment").largest.value - most.value) > CLOSE * abs(most.value)
    ):
        return
    sheet = work.sheet
    ends = {
        end: sheet.hence(
            f"R_{letter},max",
            summed(
                [
                    _times(factor, _reduced(work, case, work.lines[end, case, span.number]))
                    for case, factor in factors.items()
                ]
            ),
            "kN",
            says=f"Reaction at the {end} support, under {moment.combination.name}",
            cite=moment.combination.cite,
        )
        for end, letter in (("left", "a"), ("right", "b"))
    }
    place = sheet.take(
        "x_0", most.at, "m", says="Where the shear changes sign", origin="analysis", given=False
    )
    arms: list[Expression] = []
    for case, factor in factors.items():
        for shape in work.shapes(span, case).values():
            force, turning = resultant(before(shape, most.at))
            if force:
                arm = measured(most.at - turning / force, "m")
                acting = _reduced(work, case, measured(force, "kN"))
                arms.append(number(factor) * acting * arm)
    sheet.hence(
        "M_max",
        ends["left"] * place - total(arms) if arms else ends["left"] * place,
        "kN*m",
        says=f"Largest moment, under {moment.combination.name}: that of the reaction less that of the loads "
        "before",
        cite=moment.combination.cite,
    )


def _times(factor: float, term: Expression | Line) -> Expression | Line:
    return term if factor == 1 else number(factor) * term


def _whole_or_alike(work: Work) -> bool:
    """Whether the live load is reduced not at all, or all of it by the line that says how far."""
    reduced = work.study.reduced_sources
    if not reduced:
        return True
    return "reduction" in work.lines and all(load.source in reduced for load in work.given.loads["live"])


def _reduced(work: Work, case: Case, effect: Expression | Line) -> Expression | Line:
    """A case's effect as the design takes it."""
    if case == "live" and work.study.reduced_sources:
        return work.lines["reduction"] * effect
    return effect


def state_effects(work: Work, *, deflection: bool = True) -> None:
    """Diagrams with the envelope and the governing combination, and the reactions.

    Parameters
    ----------
    work : Work
    deflection : bool
        Whether to draw the deflected beam; False where the design draws it within its limits. That of an
        uncracked beam is never drawn where the design works out a cracked one.
    """
    study, given, analysed = work.study, work.given, work.study.analysed
    deflected = analysed.deflection_total if deflection and study.stiffness and not work.deflections else None
    work.sheet.section(
        "Reactions, shear and moment" if deflected is None else "Reactions, shear, moment and deflection"
    )
    if study.unloaded:
        work.sheet.text(NOTHING)
        return
    governing = analysed.governing_moment
    figure = response_figure(
        given.length,
        work.bearings,
        curves_of(work, deflected),
        study.system,
        mark=given.mark,
        width_mm=170,
        fixed=given.fixed,
        extremes=extremes_of(work, deflected),
    )
    caption = (
        f"Shaded: the envelope of all strength combinations. Line: {governing.combination.name} with every "
        "span loaded."
    )
    if deflected is not None:
        caption += f" Deflection: {deflected[0].name}, E I = {work.show(study.stiffness or 0.0, 'kN*m^2')}."
    work.sheet.figure(figure, caption)
    _reactions(work)


def curves_of(work: Work, deflected: Deflected | None) -> dict[Quantity, list[CurveData]]:
    """What the figure draws: the envelope of all strength combinations, the governing one, the deflection."""
    study, analysed = work.study, work.study.analysed
    curves: dict[Quantity, list[CurveData]] = {}
    always, placed = analysed.factors(analysed.governing_moment.combination)
    governing = analysed.response.combined(always + placed)
    quantities: tuple[Quantity, ...] = ("shear", "moment")
    for quantity in quantities:
        band = analysed.band(quantity)
        curves[quantity] = [
            (*band.upper.sample(SAMPLES), "upper"),
            (*band.lower.sample(SAMPLES), "lower"),
            (*governing.curve(quantity).sample(SAMPLES), "line"),
        ]
    if deflected is not None and study.stiffness:
        result = next(each for each in analysed.results if each.combination is deflected[0])
        band = result.envelope.deflection
        high, low = (edge.sample(SAMPLES) for edge in (band.upper, band.lower))
        curves["deflection"] = [
            (high[0], high[1] / study.stiffness, "upper"),
            (low[0], low[1] / study.stiffness, "lower"),
        ]
    return curves


def extremes_of(work: Work, deflected: Deflected | None) -> list[tuple[Quantity, float, float]]:
    """Extreme values with their places, for the figure: (quantity, value, at)."""
    study, analysed = work.study, work.study.analysed
    found: list[tuple[Quantity, float, float]] = [
        ("moment", extreme.value, extreme.at)
        for extreme in (analysed.moment_max, analysed.moment_min)
        if study.significant(extreme.value, "moment")
    ]
    most, least = analysed.band("shear").largest, analysed.band("shear").smallest
    found += [
        ("shear", extreme.value, extreme.at)
        for extreme in (most, least)
        if study.significant(extreme.value, "force")
    ]
    if deflected is not None:
        found.append(("deflection", deflected[1].value, deflected[1].at))
    return found


def _reactions(work: Work) -> None:
    """What each support gets: case by case, every span loaded, and the worst of the combinations.

    What is handed on holds the live load in full; a beam that reduces its own says its own reactions apart.
    """
    study, given = work.study, work.given
    own = [study.analysed] if study.reduced_sources else []
    rows: list[list[str]] = []
    for at, bearing in enumerate(given.bearings):
        rows.append(
            [
                f"R{at + 1}",
                f"{bearing.kind} {bearing.mark} at {bearing.name}",
                *(
                    work.show(float(study.by_case.reactions[row][at]), "kN")
                    for row in range(len(study.cases))
                ),
                *(
                    work.show(value, "kN")
                    for analysed in (study.handed_on, *own)
                    for value in _strength(analysed, at)
                ),
            ]
        )
    full = "strength, live in full" if own else "strength"
    work.sheet.table(
        [
            ("", "left"),
            ("passed on to", "left"),
            *((CASE_WORDS[case], "right") for case in study.cases),
            (f"largest, {full}", "right"),
            (f"smallest, {full}", "right"),
            *((f"{each}, own design", "right") for each in ("largest", "smallest") if own),
        ],
        rows,
        caption=_reaction_words(work),
    )


def _strength(analysed: AnalysedBeam, at: int) -> tuple[float, float]:
    """The largest and the smallest reaction of a support under the strength combinations [kN]."""
    strength = analysed.of_limit("strength")
    return max(each.reactions_max[at] for each in strength), min(each.reactions_min[at] for each in strength)


def _reaction_words(work: Work) -> str:
    words = "Reactions, upward: unfactored, case by case, with every span loaded; and the worst of the "
    if not work.study.reduced_sources:
        return words + "strength combinations."
    factor = work.lines.get("reduction")
    line = f" (line {factor.no})" if factor is not None else ""
    return (
        words + "strength combinations with the live load in full. This beam's own reduction of live load"
        f"{line} is not handed on: what takes these reactions applies the reduction of its own area. Own "
        "design: with this beam's reduction, for its bearings alone."
    )
