"""Shear, forces on the flange and deflection of a steel beam to AISC 360-22."""

from __future__ import annotations

from calcpack.clauses.aisc360 import lines, shape_lines, strength, web_lines
from calcpack.notebook.sections._steel_aisc360 import SteelBeam, deflection_name, force_name, span_words
from calcpack.notebook.study import CASE_WORDS
from calcpack.notebook.work import Work
from calcpack.sheet import Line, number

AISC = shape_lines.AISC


def state_shear(work: Work, beam: SteelBeam) -> None:
    """Shear of the web, and the web under forces on the flange."""
    sheet, design = work.sheet, beam.design
    method = design.options.method
    steel, shape = beam.basis["steel"], beam.basis["shape"]
    sheet.section("Shear, and the web under forces on the flange")
    governing = work.study.analysed.governing_shear.combination.name
    most = design.shear_demand
    demand = sheet.take(
        "V_r",
        most.value,
        "kN",
        f"Largest shear, at {work.show(most.at, 'm')}",
        f"analysis, {governing}",
        given=False,
        word="required shear strength",
    )
    found = lines.state_shear(sheet, design.shear, method, steel, shape, beam.basis["slender"].web)
    line = sheet.require(
        demand <= found.available, "Required against available strength: shear", f"{AISC} G1"
    )
    work.checks.append(("shear", line))
    if not design.options.seated:
        sheet.text(
            "Supports and point loads are connected in the web, as the job says: J10 does not apply.",
            role="note",
        )
        return
    _state_web(work, beam)


def _state_web(work: Work, beam: SteelBeam) -> None:
    sheet, design = work.sheet, beam.design
    method, steel, shape = design.options.method, beam.basis["steel"], beam.basis["shape"]
    if not design.web:
        return
    chosen = work.given.design["bearing_length"] is None
    bearing = sheet.take(
        "l_b",
        design.options.bearing_length * 1000,
        "mm",
        "Length of bearing along the beam",
        "template's choice, the job sets none" if chosen else f"beam {work.given.mark} design.bearing_length",
        word="length of bearing",
    )
    factors: dict[str, Line] = {}
    demands: dict[tuple[str, float], Line] = {}
    for check in design.web:
        if check.limit not in factors:
            limit, index = (
                (strength.WEB_YIELDING, "y") if check.limit == "yielding" else (strength.WEB_CRIPPLING, "n")
            )
            factors[check.limit] = shape_lines.state_factor(
                sheet, limit, method, index, f"web local {check.limit}"
            )
        name, key = force_name(work, check), (check.force.name, check.force.at)
        if key not in demands:
            demands[key] = sheet.take(
                f"R_r,{len(demands) + 1}",
                check.force.force,
                "kN",
                f"Largest {'reaction' if check.force.support else 'load'}, {name.split(', ')[1]}, "
                f"{work.show(check.from_end, 'm')} from the beam's end",
                "analysis, strength combinations",
                given=False,
                word="required strength under a force on the flange",
            )
        if check.limit == "yielding":
            found = web_lines.state_web_yielding(
                sheet, design.shape, check.from_end, method, steel, shape, bearing, factors[check.limit]
            )
        else:
            found = web_lines.state_web_crippling(
                sheet,
                design.shape,
                design.options.bearing_length,
                check.from_end,
                method,
                steel,
                shape,
                bearing,
                factors[check.limit],
            )
        line = sheet.require(demands[key] <= found, f"Required against available: {name}", f"{AISC} J10")
        work.checks.append((name, line))
    if any(check.ratio > 1 for check in design.web):
        sheet.text("A longer bearing or stiffeners to J10.8 are needed.", role="unsafe")


def state_deflection(work: Work, beam: SteelBeam) -> None:
    """Each span under the variable loads alone and under the service combinations."""
    sheet, design = work.sheet, beam.design
    sheet.section("Deflection")
    for check in design.deflection:
        name = deflection_name(work, check)
        under = f"{CASE_WORDS[check.under]} alone" if check.kind == "live" else check.under  # type: ignore[index]
        found = sheet.take(
            f"delta_{check.kind},{check.span.number + 1}",
            check.found * 1000,
            "mm",
            f"Largest deflection, {span_words(work, check.span.number)}, {under}, "
            f"at {work.show(check.at, 'm')}",
            "analysis, E and I of this sheet",
            given=False,
        )
        span = work.lines["span", check.span.number]
        limit = design.options.live_limit if check.kind == "live" else design.options.total_limit
        line = sheet.require(
            found <= (span if check.span.supported else 2 * span) / number(limit),
            f"{'Span' if check.span.supported else 'Twice the overhang'} over {limit:g}",
            _limit_cite(work, check.kind),
        )
        work.checks.append((name, line))
    roof = [CASE_WORDS[case] for case in work.study.cases if case in ("roof_live", "snow")]
    if roof:
        sheet.text(
            f"This beam carries {' and '.join(roof)}: a roof that drains towards it or is nearly flat has to "
            f"be looked at for ponding, {AISC} B3.10 and ASCE 7-22 chapter 8; ponded water is not in it.",
            role="caution",
        )


def _limit_cite(work: Work, kind: str) -> str:
    default = {"live": 360, "total": 240}[kind]
    limit = work.given.design["deflection_limits"][kind]
    return "common practice for floors" if limit == default else "limit set by the job"
