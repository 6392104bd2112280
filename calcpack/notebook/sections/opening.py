"""The first page: where the beam stands, what the sheet shows, what it rests on."""

from __future__ import annotations

from collections.abc import Sequence

from calcpack.actions.combinations import PLACED
from calcpack.figures import key_plan
from calcpack.notebook.study import CASE_WORDS
from calcpack.notebook.work import Work
from calcpack.statics import Extreme

_DESIGN = {"actual": "actual load shapes", "equivalent": "equivalent uniform loads"}
_FOLDED = (
    " A span's equivalent load holds what beams bring to it with every span loaded; single spans of those "
    "beams are not placed apart from it."
)
CARRIED_FORWARD = {
    "shear": "equal end shear",
    "moment": "equal largest moment",
    "deflection": "equal largest deflection",
    "fixed-end moment": "equal fixed-end moment",
    "total": "equal total load",
}


def state_place(work: Work) -> None:
    """Key plan, the beam's particulars, and the schedule of what the sheet finds."""
    sheet, given = work.sheet, work.given
    sheet.section("Where this beam stands and what this sheet shows")
    with sheet.columns([10, 13]) as column:
        figure = key_plan(given.drawn_plan, given.mark, work.study.system, width_mm=74)
        sheet.figure(figure, "Framing plan; what drains to this beam is hatched.")
        column()
        sheet.facts(_particulars(work))
        if not work.study.unloaded:
            _schedule(work)


def _particulars(work: Work) -> list[tuple[str, str]]:
    given = work.given
    spans = " + ".join(
        work.show(end - start, "m") + ("" if given.between_supports(number) else " overhang")
        for number, (start, end) in enumerate(given.spans)
    )
    stands = "; ".join(
        f"{bearing.kind} {bearing.mark} at {bearing.name}"
        + (" (held against rotation)" if _held(work, bearing.at) else "")
        for bearing in given.bearings
    )
    facts = [
        ("Runs", f"{given.point_names[0]} to {given.point_names[-1]}, {spans}"),
        ("Stands on", stands),
        ("Section", _section_words(work)),
    ]
    if given.panels:
        facts.append(("Panels", ", ".join(transfer.panel.mark for transfer in given.panels)))
    if given.carried:
        carried = ", ".join(f"{each.mark} at {work.show(each.at, 'm')}" for each in given.carried)
        facts.append(("Carries beams", carried))
    return facts


def _held(work: Work, at: float) -> bool:
    start, end = work.given.fixed
    return (start and at == 0.0) or (end and at == work.given.length)


def _section_words(work: Work) -> str:
    section, material = work.given.section, work.given.material
    if section is None:
        return "not given"
    size = section.designation or " × ".join(
        work.show(section.dimensions[key] * 1000, "mm", exact=True) for key in ("width", "depth")
    )
    return f"{size}, {material.grade or material.key}" if material else size


def _schedule(work: Work) -> None:
    """The numbers somebody looks for first."""
    analysed, study = work.study.analysed, work.study
    rows: list[list[str]] = []

    def row(says: str, extreme: Extreme, unit: str, name: str) -> None:
        rows.append([says, work.show(extreme.value, unit), work.show(extreme.at, "m"), name])

    sagging = max(analysed.of_limit("strength"), key=lambda each: round(each.moment_max.value, 9))
    hogging = min(analysed.of_limit("strength"), key=lambda each: round(each.moment_min.value, 9))
    if study.significant(sagging.moment_max.value, "moment"):
        row("moment, sagging", sagging.moment_max, "kN*m", sagging.combination.name)
    if study.significant(hogging.moment_min.value, "moment"):
        row("moment, hogging", hogging.moment_min, "kN*m", hogging.combination.name)
    shear = analysed.governing_shear
    largest = Extreme(abs(shear.shear_max.value), shear.shear_max.at)
    row("shear", largest, "kN", shear.combination.name)
    if work.deflections:
        for stated in work.deflections:
            rows.append([stated.says, stated.line.shown, work.show(stated.at, "m"), stated.under])
    elif (total := analysed.deflection_total) and (live := analysed.deflection_live):
        row("deflection, total", _in_mm(total[1]), "mm", total[0].name)
        if "live" in study.cases:
            row("deflection, live load", _in_mm(live), "mm", "live load alone")
    work.sheet.table(
        [("largest", "left"), ("value", "right"), ("at", "right"), ("under", "left")],
        rows,
        caption="Distances count from the beam's start.",
    )


def _in_mm(extreme: Extreme) -> Extreme:
    return Extreme(extreme.value * 1000, extreme.at)


def state_basis(work: Work) -> None:
    """Codes, assumptions (the program's and the template's), limits and the caution."""
    sheet, given = work.sheet, work.given
    basis, actions = given.basis, given.actions
    sheet.section("Basis, assumptions and limits")
    items = [f"Actions and combinations: {actions.name}. {_capital(actions.source)}."]
    if actions.psi:
        factors = "; ".join(
            f"{CASE_WORDS[case]} category {psi['category']} ({psi['use']}): "
            f"ψ0 = {psi['psi0']:g}, ψ1 = {psi['psi1']:g}, ψ2 = {psi['psi2']:g}"
            for case, psi in actions.psi.items()
        )
        items.append(f"{_capital(factors)}. {actions.psi_source}.")
    if given.panels:
        items.append(_transfer_rule(basis.dividing_lines, basis.one_way_ratio))
    movable = [CASE_WORDS[case] for case in work.study.cases if case in PLACED]
    if movable:
        items.append(
            f"{_capital(' and '.join(movable))}: on or off, span by span, this beam's spans and those of the "
            "beams that come down on it, wherever it is worst for each effect at each point."
        )
    items.append(
        f"Design follows the {_DESIGN[given.design_loads]}; the equivalent load carried forward is that of "
        f"{CARRIED_FORWARD[given.equivalent]}, as the job sets it."
        + (_FOLDED if given.design_loads == "equivalent" and given.carried else "")
    )
    items += given.template.assumptions
    if work.deflections:
        items.append(
            "Deflections are those of the cracked beam, creep and shrinkage included where it says so."
        )
    elif work.study.stiffness is not None:
        items.append(
            "Deflections take the gross, uncracked section and the short-term modulus; creep, shrinkage and "
            "cracking come on top."
            if given.material and given.material.kind == "concrete"
            else "Deflections take the gross section."
        )
    items.append(f"This sheet does not cover: {', '.join(given.template.not_covered)}.")
    half = _half(items)
    with sheet.columns([1, 1]) as column:
        sheet.items(items[:half])
        column()
        sheet.items(items[half:])
    sheet.text(
        "Calculations prepared with a program, to be reviewed and sealed by a licensed engineer; the local "
        "code and authority govern.",
        role="caution",
    )


def _half(items: Sequence[str]) -> int:
    """How many items make up the left one of two columns of about the same length."""
    lengths = [len(item) + 30 for item in items]
    return min(range(len(items)), key=lambda cut: abs(sum(lengths[:cut]) - sum(lengths[cut:])))


def _transfer_rule(dividing_lines: str, ratio: float) -> str:
    rule = (
        "each point of a two-way panel loads its nearest supported edge (dividing lines at 45° between edges "
        "held alike)"
    )
    if dividing_lines != "45":
        rule += ", a continuous edge drawing from √3 times as far (60° at a corner with a discontinuous one)"
    return (
        f"Load transfer: {rule}; a panel held on all sides works one way from a side ratio of {ratio:g} on. "
        "Common practice; beside the elastic plate on unyielding supports it may put 11 % less moment on a "
        "beam under a long side and 24 % less on one under a short side, corners held down."
    )


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]
