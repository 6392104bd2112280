"""All the load on the beam: drawn case by case, and added up."""

from __future__ import annotations

from calcpack.figures import load_figure
from calcpack.notebook.study import CASE_WORDS
from calcpack.notebook.work import LETTER, Work
from calcpack.sheet import measured, total


def state_loads(work: Work) -> None:
    """Load diagram of each case, the sources' resultants, and the totals."""
    study, given = work.study, work.given
    work.sheet.section("Loads on the beam")
    uniform = {
        case: [
            (span.start, span.end, work.lines["equivalent", case, span.number].value)
            for span in study.spans
            if span is not None and ("equivalent", case, span.number) in work.lines
        ]
        for case in study.cases
    }
    figure = load_figure(
        given.length,
        [(bearing.at, bearing.kind, bearing.mark) for bearing in given.bearings],
        {case: list(given.loads[case]) for case in study.cases},
        given.mark,
        study.system,
        fixed=given.fixed,
        equivalent=uniform,
    )
    work.sheet.figure(figure, "Loads as they stand, unfactored; dashed: the equivalent carried forward.")
    rows: list[list[object]] = []
    for source in work.sources.values():
        row: list[object] = [source.words]
        for case in study.cases:
            force = _resultant(work, source.name, case)
            row.append(work.show(force, "kN") if study.significant(force, "force") else "–")
        rows.append(row)
    work.sheet.table(
        [("source", "left"), *((CASE_WORDS[case], "right") for case in study.cases)],
        rows,
        caption="Resultant of each source over the whole beam.",
    )
    for case in study.cases:
        parts = [
            force
            for name in work.sources
            if study.significant(force := _resultant(work, name, case), "force")
        ]
        work.lines["total", case] = work.sheet.hence(
            f"W_{LETTER[case]}",
            total(measured(force, "kN") for force in parts),
            "kN",
            says=f"All the {CASE_WORDS[case]} on the beam",
        )


def _resultant(work: Work, name: str, case: str) -> float:
    return sum(load.total for load in work.given.loads[case] if load.source == name)  # type: ignore[index]
