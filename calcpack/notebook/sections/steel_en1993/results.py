"""What a steel sheet shows first: each check with its ratio, the conditions, and the figures."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, NamedTuple

from calcpack.clauses.en1993.design import LocalForce, SteelBeam
from calcpack.clauses.en1993.lines_profile import RANK
from calcpack.clauses.en1993.rules import LIMITS, STRESS_SHARE, WEB_BUCKLING
from calcpack.clauses.en1993.section import Profile
from calcpack.figures import Capacity, Figure, Governing, section_figure
from calcpack.notebook.sections.steel_en1993.given import design_of, profile_in
from calcpack.notebook.sections.steel_figures import HALF_WIDTH, deflected_figure, shear_figure, state_ponding
from calcpack.notebook.sections.strength_figures import strength_figure
from calcpack.notebook.study import Study
from calcpack.notebook.work import Work
from calcpack.sheet import Sheet
from calcpack.statics import Extreme

SAMPLES = 121  # odd: the middle is one of them
WIDTH = 170.0  # of a figure over the whole page [mm]
SENSE = {1: "placed to sag it", -1: "placed to hog it", 0: "everything loaded"}
HEIGHT = {"top": "on the top flange", "centre": "at mid-depth", "bottom": "on the bottom flange"}
HELD = {
    "ends": "at the supports",
    "at beams": "at the supports and where beams come down",
    "continuous": "top flange all along, bottom flange at the supports",
}


class Shown(NamedTuple):
    """One row of the schedule."""

    says: str
    demand: float
    resistance: float
    unit: str

    @property
    def ratio(self) -> float:
        """Demand over resistance."""
        return self.demand / self.resistance


def place(work: Work, at: float) -> str:
    """A distance from the beam's start, in words."""
    return work.show(at, "m")


def force_name(work: Work, force: LocalForce) -> str:
    """What presses on the flange: a support by its mark, or a point load."""
    if force.support is None:
        return "point load"
    bearing = work.given.bearings[force.support]
    return f"{bearing.kind} {bearing.mark}"


def shown_of(work: Work, beam: SteelBeam) -> list[Shown]:
    """The checks of the sheet before they are written, with the same numbers."""
    bent = f"bending, at {place(work, beam.bending.at)}"
    rows = [
        Shown(bent, abs(beam.bending.value), beam.profile.bending, "kN*m"),
        Shown(f"shear, at {place(work, beam.shear.at)}", beam.shear.value, beam.profile.shear, "kN"),
    ]
    if beam.beside is not None:
        says = f"bending beside shear, at {place(work, beam.beside.at)}"
        rows.append(Shown(says, beam.beside.moment, beam.beside.resistance, "kN*m"))
    if (worst := beam.buckling) is not None:
        part = worst.segment
        says = f"lateral-torsional buckling, {place(work, part.start)} to {place(work, part.end)}"
        rows.append(Shown(says, worst.demand, worst.resistance, "kN*m"))
    if (force := beam.force) is not None:
        rows.append(Shown(f"web, {force_name(work, force)}", force.force, force.bearing.resistance, "kN"))
    if (both := beam.interaction) is not None and both.moment:
        rows.append(
            Shown(f"web with bending, {force_name(work, both)}", beam.together(both), STRESS_SHARE, "1")
        )
    for words, extreme, limit in deflections_of(work):
        rows.append(Shown(f"deflection, {words}", abs(extreme.value) * 1000, limit * 1000, "mm"))
    return rows


def deflections_of(work: Work) -> list[tuple[str, Extreme, float]]:
    """Words, largest deflection [m] and its limit [m], live load and total."""
    limits = work.given.design["deflection_limits"]
    analysed = work.study.analysed
    found = []
    if analysed.deflection_live and limits["live"] and "live" in work.study.cases:
        extreme = analysed.deflection_live
        found.append(("live", extreme, reach(work, extreme.at) / limits["live"]))
    if analysed.deflection_total and limits["total"]:
        extreme = analysed.deflection_total[1]
        found.append(("total", extreme, reach(work, extreme.at) / limits["total"]))
    return found


def reach(work: Work, at: float) -> float:
    """Length that a deflection at a place is measured by: the span, or twice the overhang [m]."""
    spans = work.given.spans
    number = next((number for number, (_, end) in enumerate(spans) if at < end), len(spans) - 1)
    start, end = spans[number]
    return (end - start) * (1 if work.given.between_supports(number) else 2)


def state_steel_results(work: Work, beam: SteelBeam) -> None:
    """The schedule of checks, what the design rests on, and resistance drawn over the envelope."""
    sheet, given = work.sheet, work.given
    sheet.section("Steel design: summary of checks")
    rows = shown_of(work, beam)
    with sheet.columns([7, 17]) as column:
        assert given.section is not None
        figure = section_figure(given.section, work.study.system, mark=given.mark, width_mm=44)
        sheet.figure(figure, f"{beam.profile.name}, {RANK[beam.profile.section_class]} in bending.")
        column()
        sheet.ratios(
            {
                "says": row.says,
                "demand": work.show(row.demand, row.unit),
                "resistance": work.show(row.resistance, row.unit),
                "ratio": row.ratio,
                "passes": row.ratio <= 1,
            }
            for row in rows
        )
        _verdict(work, beam, rows)
        _conditions(work, beam)
    _figures(work, beam)
    state_ponding(work, "EN 1990 A1.4.3 and EN 1991-1-3")


def worst_of(study: Study) -> tuple[str, float, bool]:
    """The check that is used most, its ratio of demand to resistance, and whether all were looked at.

    A section outside the limits of validity, or whose bending resistance is too small already, is not looked
    at any further.

    Raises
    ------
    CalcpackError
        The section is no rolled one, the material no steel, or points held are given twice.
    """
    work = Work(study, Sheet(study.given.mark, study.system))
    profile = profile_in(work)
    for key, value in values_of(profile).items():
        if not LIMITS[key].holds(value):
            return LIMITS[key].says, max(value / LIMITS[key].largest, LIMITS[key].least / value), False
    slender = profile.web_depth / profile.shape.web / (WEB_BUCKLING * profile.epsilon / profile.factors.eta)
    if profile.web_may_buckle:
        return "slenderness of the web", slender, False
    moment = abs(study.analysed.governing_moment.moment_governing.value)
    if moment > profile.bending:
        return "bending", moment / profile.bending, False
    worst = max(shown_of(work, design_of(work)), key=lambda row: round(row.ratio, 12))
    return worst.says, worst.ratio, True


def values_of(profile: Profile) -> dict[str, float]:
    """What the limits of validity bound: by their keys, each in the limit's unit."""
    return {
        "thickness": profile.thickness * 1e3,
        "yield": profile.strength / 1e3,
        "class": profile.section_class,
    }


def outside(beam: SteelBeam) -> list[str]:
    """The limits of validity that the beam lies outside of, in words."""
    values = values_of(beam.profile)
    return [
        limit.says + (" (class 4 is not covered)" if key == "class" else "")
        for key, limit in LIMITS.items()
        if not limit.holds(values[key])
    ]


def _verdict(work: Work, beam: SteelBeam, rows: list[Shown]) -> None:
    most = max(rows, key=lambda row: round(row.ratio, 12))
    unmet = [row.says for row in rows if row.ratio > 1]
    unmet = outside(beam) + unmet
    if beam.profile.web_may_buckle:
        unmet.append("slenderness of the web (shear buckling is not covered)")
    if unmet:
        work.sheet.text(f"Not satisfied: {'; '.join(unmet)}.", role="unsafe")
    else:
        work.sheet.text(f"Largest ratio: {most.says}, {most.ratio:.2f}.")


def _conditions(work: Work, beam: SteelBeam) -> None:
    """What the design keys settle, in words."""
    keys: dict[str, Any] = work.given.design
    held = HELD[keys["braced"]]
    if keys["unbraced_length"]:
        flange = "bottom flange" if keys["braced"] == "continuous" else "beam"
        held += f"; {flange} every {work.show(keys['unbraced_length'], 'm')} from each span's start"
    if any(not work.given.between_supports(number) for number in range(len(work.given.spans))):
        held += f"; tips of overhangs {'held' if keys['tip_held'] else 'free'}"
    limits = ", ".join(
        f"{words} span/{keys['deflection_limits'][words]:g}"
        for words in ("live", "total")
        if keys["deflection_limits"][words]
    )
    curves = "general case, 6.3.2.2" if keys["buckling_curves"] == "general" else "rolled sections, 6.3.2.3"
    facts = [
        ("Held", f"{held}, sideways and against twist"),
        ("Load acts", HEIGHT[keys["load_height"]]),
        ("Buckling curves", curves),
        ("Bearing", f"{work.show(keys['bearing_length'] * 1000, 'mm')} stiff; web held {keys['web_held']}"),
    ]
    if limits:
        facts.append(
            ("Deflection", f"{limits} (the template's 360 and 250 are common practice)")
            if (keys["deflection_limits"]["live"], keys["deflection_limits"]["total"]) == (360, 250)
            else ("Deflection", limits)
        )
    work.sheet.facts(facts)


def _figures(work: Work, beam: SteelBeam) -> None:
    """Moment and shear envelopes under their resistances, and the deflected beam; two fit side by side."""
    width = HALF_WIDTH if len(work.given.spans) == 1 else WIDTH
    moment = (
        _moment_figure(work, beam, width),
        (
            "Moments of all strength combinations within the resistance: of the section, and of each segment "
            "to buckling sideways under its worst arrangement."
        ),
    )
    shear = (
        shear_figure(work, beam.profile.shear),
        "Shear of all strength combinations, and the plastic shear resistance.",
    )
    drawn = [moment, shear]
    if (deflected := deflected_figure(work, _limit(work))) is not None:
        drawn.append((deflected, "Each span as its worst placement of load bends it, with its limit."))
    if width > HALF_WIDTH:
        work.sheet.figure(*drawn.pop(0))
    for pair in [drawn[n : n + 2] for n in range(0, len(drawn), 2)]:
        with work.sheet.columns([1, 1]) as column:
            for number, (figure, caption) in enumerate(pair):
                if number:
                    column()
                work.sheet.figure(figure, caption)


def _moment_figure(work: Work, beam: SteelBeam, width: float) -> Figure:
    governing = None
    if (worst := beam.buckling) is not None:
        signed = worst.moments.largest
        sign = 1.0 if signed.value >= 0 else -1.0
        governing = [Governing(signed.at, signed.value, sign * worst.resistance)]
    stretches = capacities(beam, work.given.length)
    return strength_figure(work, "moment", stretches, samples=SAMPLES, governing=governing, width_mm=width)


def _limit(work: Work) -> Callable[[str, int], float | None]:
    """What a span may deflect, live load alone or in total [m]."""
    limits: dict[str, float] = work.given.design["deflection_limits"]

    def limit(under: str, number: int) -> float | None:
        if not limits.get(under):
            return None
        start, end = work.given.spans[number]
        return (end - start) * (1 if work.given.between_supports(number) else 2) / limits[under]

    return limit


def capacities(beam: SteelBeam, length: float) -> list[Capacity]:
    """Resistance to bending along the beam, each way: no more than the section's, nor a segment's."""
    plastic = beam.profile.bending
    found, last = [], 0.0
    for each in beam.segments:
        part = each.segment
        if part.start > last + 1e-9:
            found.append(Capacity(last, part.start, plastic, plastic))
        least = min(plastic, each.resistance)
        found.append(Capacity(part.start, part.end, plastic if part.held_top else least, least))
        last = part.end
    if last < length - 1e-9:
        found.append(Capacity(last, length, plastic, plastic))
    return found
