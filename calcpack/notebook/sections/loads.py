"""All the load on the beam: drawn case by case, and added up."""

from __future__ import annotations

from calcpack.figures import load_figure
from calcpack.job.model import Case
from calcpack.notebook.sections.reduction import state_reduction
from calcpack.notebook.sections.resultants import CLOSE, weight
from calcpack.notebook.study import CASE_WORDS
from calcpack.notebook.work import LETTER, NOTHING, Work, summed
from calcpack.sheet import Expression, Line, measured


def state_loads(work: Work) -> None:
    """Load diagram of each case, the sources' resultants, the totals; a live-load reduction behind them."""
    study, given = work.study, work.given
    work.sheet.section("Loads on the beam")
    if study.unloaded:
        work.sheet.text(NOTHING)
        return
    uniform: dict[str, list[tuple[float, float, float]]] = {
        case: [
            (span.start, span.end, work.lines["equivalent", case, span.number].value)
            for span in study.spans
            if span is not None and ("equivalent", case, span.number) in work.lines
        ]
        for case in study.cases
    }
    figure = load_figure(
        given.length,
        work.bearings,
        {case: list(given.loads[case]) for case in study.cases},
        given.mark,
        study.system,
        fixed=given.fixed,
        equivalents=uniform,
        width_mm=170,
    )
    work.sheet.figure(figure, "Loads as they stand, unfactored; dashed: the equivalent carried forward.")
    missing = [case for case in study.cases if ("total", case) not in work.lines]
    if missing and not _by_formula(work):
        _resultants(work)
    for case in missing:
        work.lines["total", case] = work.sheet.hence(
            f"W_{LETTER[case]}", _total(work, case), "kN", says=f"All the {CASE_WORDS[case]} on the beam"
        )
    state_reduction(work)


def _by_formula(work: Work) -> bool:
    """Whether all load is of everyday shapes on a single span, and the totals come from formulas."""
    span = work.simple
    return (
        span is not None
        and not work.given.carried
        and all(work.symmetric(span, case) for case in work.study.cases)
    )


def _resultants(work: Work) -> None:
    """What each source amounts to."""
    rows: list[list[str]] = []
    for source in work.sources.values():
        row = [source.words]
        for case in work.study.cases:
            force = _resultant(work, source.name, case)
            row.append(work.show(force, "kN") if work.study.significant(force, "force") else "–")
        rows.append(row)
    work.sheet.table(
        [("source", "left"), *((CASE_WORDS[case], "right") for case in work.study.cases)],
        rows,
        caption="Resultant of each source over the whole beam.",
    )


def _total(work: Work, case: Case) -> Expression | Line:
    """By formula for the everyday shapes on a single span, else the sum of the table's column."""
    span = work.simple
    if span is not None and _by_formula(work):
        length = work.lines["span", 0]
        return summed([weight(work, group, length) for group in work.alike(span, case)])
    terms: list[Expression | Line] = []
    for name in work.sources:
        force = _resultant(work, name, case)
        line = work.lines.get(("force", case, name), work.lines.get(("resultant", case, name)))
        if line is not None and abs(line.value - force) <= CLOSE * abs(force):
            terms.append(line)
        elif work.study.significant(force, "force"):
            terms.append(measured(force, "kN"))
    return summed(terms)


def _resultant(work: Work, name: str, case: Case) -> float:
    return sum(load.total for load in work.given.loads[case] if load.source == name)
