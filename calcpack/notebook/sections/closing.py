"""The last page: summary, signatures, notation, provenance, and the record."""

from __future__ import annotations

from typing import Any

from calcpack.figures import influence_figure
from calcpack.notebook.sections.checks import checks_of, governing_check
from calcpack.notebook.study import CASE_WORDS, results_of
from calcpack.notebook.work import Work
from calcpack.sheet import Line
from calcpack.sheet.influence import influences
from calcpack.sheet.runs import Runs, plain_text


def state_summary(work: Work) -> None:
    """The result in a few sentences, and the sign-off block."""
    study, given, analysed = work.study, work.given, work.study.analysed
    sheet = work.sheet
    sheet.section("Summary and sign-off")
    unmet = [line for line in sheet.lines.values() if line.passes is False]
    if unmet:
        which = ", ".join(f"{plain_text(line.says)} (line {line.no})" for line in unmet)
        sheet.text(f"Not satisfied: {which}.", role="unsafe")
    moment, shear = analysed.governing_moment, analysed.governing_shear
    parts = [
        f"Design moment {work.show(moment.moment_governing.value, 'kN*m')} at "
        f"{work.show(moment.moment_governing.at, 'm')} under {moment.combination.name}; design shear "
        f"{work.show(abs(shear.shear_max.value), 'kN')} under {shear.combination.name}."
    ]
    for at, bearing in enumerate(given.bearings):
        loads = ", ".join(
            f"{work.show(float(study.by_case.reactions[row][at]), 'kN')} {CASE_WORDS[case]}"
            for row, case in enumerate(study.cases)
        )
        parts.append(f"To {bearing.kind} {bearing.mark}: {loads}.")
    if study.reduced_sources:
        parts.append("The live load handed on is in full, not reduced.")
    if not unmet:
        parts.append("All checks on this sheet are satisfied.")
    sheet.text(" ".join(parts))
    _show_influence(work)
    header = given.header
    sheet.signoff(
        [
            {"role": role, "name": person.name, "licence": person.licence, "date": ""}
            for role, person in (
                ("prepared", header.prepared),
                ("checked", header.checked),
                ("approved", header.approved),
            )
        ]
    )


MOST_BARS = 8


def _show_influence(work: Work) -> None:
    """On the screen, which given values move what decides on this sheet."""
    found = _deciding(work)
    if found is None:
        return
    target, says = found
    moving = influences(work.sheet.lines, target)[:MOST_BARS]
    if moving:
        bars = [(each.line.no, plain_text(each.line.says), each.relative) for each in moving]
        caption: Runs = [f"What moves the {says}, line ", target.link, ", most."]
        work.sheet.figure(influence_figure(bars, says), caption, screen=True)


def _deciding(work: Work) -> tuple[Line, str] | None:
    """The requirement with the largest ratio, else the design moment, else the largest moment or load."""
    if governing := governing_check(work):
        name, line, _ = governing
        return line, f"ratio of the governing check, {name}"
    worked = [line for line in work.sheet.lines.values() if line.kind == "hence"]
    kinds = (
        [line for line in worked if line.symbol == "M_max"],
        [line for line in worked if line.symbol.startswith("M") and line.unit == "kN*m"],
        [line for line in worked if line.symbol.startswith("W_")],
    )
    found = next((lines for lines in kinds if lines), None)
    if found is None:
        return None
    most = max(found, key=lambda line: abs(line.value))
    says = plain_text(most.says)
    return most, says[:1].lower() + says[1:]


def state_notation(work: Work) -> None:
    """The symbols of this sheet, and what it was made from."""
    given, sheet = work.given, work.sheet
    sheet.section("Provenance and notation")
    template = given.template
    sheet.text(
        f"Made by {given.program} with the template {template.name} {template.version} (SHA-256 "
        f"{template.sha256[:16]}…) from {given.job_file} (SHA-256 of all input {given.input[:16]}…).",
        role="note",
    )
    sheet.notation()


def write_record(work: Work) -> None:
    """Put the sheet's record into the notebook, as its last output."""
    given = work.given
    work.sheet.emit_record(
        job=given.header.model_dump(mode="json"),
        revision=given.header.revision,
        template={
            "name": given.template.name,
            "version": given.template.version,
            "sha256": given.template.sha256,
        },
        results=record_results(work),
    )


def record_results(work: Work) -> dict[str, Any]:
    """Results with the checks, and the one that governs."""
    governing = governing_check(work)
    return results_of(work.study) | {
        **_stated_deflections(work),
        "checks": checks_of(work),
        "governing": governing and {"name": governing[0], "ratio": governing[2]},
    }


def _stated_deflections(work: Work) -> dict[str, Any]:
    """The deflections of the design, with the lines that state them, in place of the elastic ones."""
    if not work.deflections:
        return {}
    found = {each.key: each.line for each in work.deflections}
    return {
        "deflection": {key: found[key].value if key in found else 0.0 for key in ("total_mm", "live_mm")},
        "deflection_lines": {key: line.no for key, line in found.items()},
    }
