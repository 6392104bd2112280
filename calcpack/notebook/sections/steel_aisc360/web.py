"""Shear, forces on the flange and deflection of a steel beam to AISC 360-22."""

from __future__ import annotations

from calcpack.clauses.aisc360 import lines, shape_lines, strength, web_lines
from calcpack.clauses.aisc360.design import DeflectionCheck, ForceCheck
from calcpack.clauses.aisc360.shape_lines import AISC, available
from calcpack.notebook.sections.steel_aisc360.beam import SteelBeam, deflection_name, force_name, span_words
from calcpack.notebook.sections.steel_figures import deflected_figure, shear_figure, state_ponding
from calcpack.notebook.study import CASE_WORDS
from calcpack.notebook.work import Work
from calcpack.sheet import Line, number


def state_shear(work: Work, beam: SteelBeam) -> None:
    """Shear of the web, and the web under forces on the flange."""
    sheet, design = work.sheet, beam.design
    method = design.options.method
    sheet.section("Shear, and the web under forces on the flange")
    most = design.shear_demand
    says, word = f"Largest shear, at {work.show(most.at, 'm')}", "required shear strength"
    stated = work.stated("reaction", most.value)
    if stated is not None:
        demand = sheet.hence("V_r", stated, "kN", says, word=word)
    else:
        origin = f"analysis, {work.study.analysed.governing_shear.combination.name}"
        demand = sheet.take("V_r", most.value, "kN", says, origin, given=False, word=word)
    found = lines.state_shear(
        sheet, design.shear, method, beam.basis["steel"], beam.basis["shape"], beam.basis["slender"].web
    )
    line = sheet.require(
        demand <= available(found.factor, found.nominal, method),
        "Required against available: shear",
        f"{AISC} G1",
    )
    work.checks.append(("shear", line))
    if not design.options.seated:
        sheet.text(
            "Supports and point loads are connected in the web, as the job says: J10 does not apply.",
            role="note",
        )
    elif design.web:
        _state_web(work, beam)


def _state_web(work: Work, beam: SteelBeam) -> None:
    sheet, design = work.sheet, beam.design
    if len(design.web) > len(beam.web):
        _forces(work, beam)
    chosen = work.given.design["bearing_length"] is None
    bearing = sheet.take(
        "l_b",
        design.options.bearing_length * 1000,
        "mm",
        "Length of bearing along the beam",
        "chosen by the template" if chosen else f"beam {work.given.mark} design.bearing_length",
        word="length of bearing",
    )
    demands: dict[tuple[str, float], Line] = {}
    for check in beam.web:
        key = (check.force.name, check.force.at)
        if key not in demands:
            demands[key] = _demand(work, check, len(demands) + 1)
        _state_force(work, beam, check, demands[key], bearing)
    if any(check.ratio > 1 for check in design.web):
        sheet.text("A longer bearing or stiffeners to J10.8 are needed.", role="unsafe")


def _forces(work: Work, beam: SteelBeam) -> None:
    """Every force with both of its ratios."""
    checks = beam.design.web
    rows = [
        [
            ("at " if one.force.support else "under ") + force_name(work, one),
            work.show(one.force.at, "m"),
            work.show(one.force.force, "kN"),
            *(
                text
                for each in (one, other)
                for text in (work.show(each.available, "kN"), work.show(each.ratio, "1"))
            ),
        ]
        for one, other in zip(checks[::2], checks[1::2], strict=True)
    ]
    work.sheet.table(
        [
            ("force on the flange", "left"),
            ("from the start", "right"),
            ("largest", "right"),
            ("yielding", "right"),
            ("ratio", "right"),
            ("crippling", "right"),
            ("ratio", "right"),
        ],
        rows,
        caption="Reactions and point loads, strength combinations, and what the web can take of each; the "
        "worst of either kind is worked out below.",
    )


def _demand(work: Work, check: ForceCheck, index: int) -> Line:
    force = check.force
    return work.sheet.take(
        f"R_r,{index}",
        force.force,
        "kN",
        f"Largest {'reaction at' if force.support else 'load of'} {force_name(work, check)}",
        "analysis, strength",
        given=False,
        word="required strength under a force on the flange",
    )


def _state_force(work: Work, beam: SteelBeam, check: ForceCheck, demand: Line, bearing: Line) -> None:
    sheet, design = work.sheet, beam.design
    method, steel, shape = design.options.method, beam.basis["steel"], beam.basis["shape"]
    if check.limit == "yielding":
        limit, index = strength.WEB_YIELDING, "y"
        nominal = web_lines.state_web_yielding(sheet, design.shape, check.from_end, steel, shape, bearing)
    else:
        limit, index = strength.WEB_CRIPPLING, "n"
        nominal = web_lines.state_web_crippling(
            sheet, design.shape, design.options.bearing_length, check.from_end, steel, shape, bearing
        )
    factor = shape_lines.state_factor(sheet, limit, method, index, f"web local {check.limit}")
    name = f"web {check.limit}, {force_name(work, check)}"
    line = sheet.require(
        demand <= available(factor, nominal, method), f"Required against available: {name}", limit.cite
    )
    work.checks.append((name, line))


def state_deflection(work: Work, beam: SteelBeam) -> None:
    """The worst span under the variable loads alone and under the service combinations."""
    sheet, design = work.sheet, beam.design
    sheet.section("Deflection")
    if len(design.deflection) > len(beam.deflection):
        _deflections(work, beam)
    for check in beam.deflection:
        name = deflection_name(work, check)
        found = sheet.take(
            f"delta_{check.kind}",
            check.found * 1000,
            "mm",
            f"Largest under {_under(check)}, at {work.show(check.at, 'm')}",
            "analysis, E and I of the shape",
            given=False,
        )
        span = work.lines["span", check.span.number]
        limit = design.options.live_limit if check.kind == "live" else design.options.total_limit
        line = sheet.require(
            found <= (span if check.span.supported else 2 * span) / number(limit),
            f"At most {'the span' if check.span.supported else 'twice the overhang'} over {limit:g}: {name}",
            _limit_cite(work, check.kind),
        )
        work.checks.append((name, line))
    _figures(work, beam)
    state_ponding(work, f"{AISC} B3.10 and ASCE 7-22 chapter 8")


def _under(check: DeflectionCheck) -> str:
    return f"{CASE_WORDS[check.under]} alone" if check.kind == "live" else check.under  # type: ignore[index]


def _deflections(work: Work, beam: SteelBeam) -> None:
    work.sheet.table(
        [
            ("", "left"),
            ("under", "left"),
            ("at", "right"),
            ("found", "right"),
            ("allowed", "right"),
            ("ratio", "right"),
        ],
        [
            [
                span_words(work, check.span.number),
                _under(check),
                work.show(check.at, "m"),
                work.show(check.found * 1000, "mm"),
                work.show(check.allowed * 1000, "mm"),
                work.show(check.ratio, "1"),
            ]
            for check in beam.design.deflection
        ],
        caption="Largest deflections by size, span by span; the worst of either kind is worked out below.",
    )


def _figures(work: Work, beam: SteelBeam) -> None:
    """Shear in its strength, and the deflected beam in its limits."""
    options = beam.design.options

    def limit(under: str, number: int) -> float | None:
        start, end = work.given.spans[number]
        reach = (end - start) * (1 if work.given.between_supports(number) else 2)
        return reach / (options.total_limit if under == "total" else options.live_limit)

    with work.sheet.columns([1, 1]) as column:
        work.sheet.figure(
            shear_figure(work, beam.design.shear_available),
            "Shear of all strength combinations, and the available strength.",
        )
        column()
        if (figure := deflected_figure(work, limit)) is not None:
            work.sheet.figure(figure, "Each span as its worst placement of load bends it, with its limit.")


def _limit_cite(work: Work, kind: str) -> str:
    default = {"live": 360, "total": 240}[kind]
    limit = work.given.design["deflection_limits"][kind]
    return "common practice" if limit == default else "limit set by the job"
