"""Live load reduced for the area that the beam carries."""

from __future__ import annotations

from calcpack.actions.reduction import (
    ASCE,
    ASCE_CONSTANT,
    ASCE_LEAST,
    EN_AREA,
    EN_LEAST,
    EN_LEAST_CATEGORIES,
    LEAST_INFLUENCE,
    Reduction,
)
from calcpack.notebook.tributary import Tributary
from calcpack.notebook.work import Work, summed
from calcpack.sheet import Expression, Line, greatest, least, measured, number, quantity, sqrt

ASCE_CLAUSE = "ASCE 7-22 4.7.2"
EN_CLAUSE = "EN 1991-1-1 6.3.1.2(10)"


def state_reduction(work: Work) -> None:
    """The area that counts, the factor on it, and what is reduced by it; nothing where none is asked for."""
    found = work.study.reduction
    if found is None or "live" not in work.study.cases:
        return
    work.sheet.section("Live-load reduction")
    _exempt(work)
    counted = [part for part in work.given.tributary if not part.exempt and part.area > 0]
    if not counted:
        work.sheet.text(f"No live load on this beam may be reduced under {found.rule}.")
    else:
        area = _area(work, counted)
        factor = _asce(work, found, area) if found.rule == ASCE else _en(work, found, area)
        if factor is not None:
            work.lines["reduction"] = factor
    _scope(work, found)


def _exempt(work: Work) -> None:
    """Which live loads keep their full value, and why."""
    named = {part.source for part in work.given.tributary}
    rows = [[f"{part.kind} {part.source}", part.exempt] for part in work.given.tributary if part.exempt]
    rows += [
        [source.words, "given on the beam, not over an area"]
        for source in work.sources.values()
        if source.name not in named and any(load.source == source.name for load in work.given.loads["live"])
    ]
    if rows:
        work.sheet.table(
            [("live load that keeps its full value", "left"), ("why", "left")],
            rows,
            caption="Its area does not count below.",
        )


def _area(work: Work, counted: list[Tributary]) -> Line:
    """Areas source by source, and their sum."""
    sheet, parts = work.sheet, []
    for part in counted:
        index = work.sources[part.source].index
        if part.kind == "panel":
            line = sheet.take(
                f"A_T{index}",
                part.area,
                "m^2",
                says=f"Area of panel {part.source} that drains to this beam",
                origin=f"panel {part.source}, transfer",
                given=False,
            )
        else:
            share = measured(part.reaction, "kN") / measured(part.total, "kN")
            line = sheet.hence(
                f"A_T{index}",
                measured(part.whole, "m^2") * share
                if part.reaction < part.total
                else measured(part.whole, "m^2"),
                "m^2",
                says=f"Area of beam {part.source}, in proportion to its live reaction here",
                cite="common practice",
            )
        parts.append(line)
    return sheet.hence("A_T", summed(parts), "m^2", says="Area whose live load this beam carries")


def _asce(work: Work, found: Reduction, area: Line) -> Line | None:
    sheet = work.sheet
    element = sheet.take(
        "K_LL",
        found.element_factor,
        "1",
        says="Interior beam or edge beam"
        if found.element_factor > 1
        else "Cantilever, overhang, or a cantilever slab beside the beam",
        origin="framing plan",
        cite="ASCE 7-22 Table 4.7-1",
    )
    influence = sheet.hence(
        "A_I", element * area, "m^2", says="Influence area", cite=ASCE_CLAUSE, word="influence area"
    )
    if influence.value < LEAST_INFLUENCE * (1 - 1e-12):
        sheet.text(
            f"The influence area is less than {work.show(LEAST_INFLUENCE, 'm^2')}: the live load is "
            f"not reduced ({ASCE_CLAUSE})."
        )
        return None
    # 15 ft, or the same in metres: the standard prints its numbers for areas in ft² and in m².
    length = quantity(15, "ft") if work.study.system == "US" else quantity(4.572, "m")
    return sheet.hence(
        "alpha_L",
        greatest(number(ASCE_CONSTANT) + length / sqrt(influence), number(ASCE_LEAST["one floor"])),
        "1",
        says="Factor on the live load, member supporting one floor",
        cite=f"{ASCE_CLAUSE} (4.7-1)",
        word="live load reduction factor",
    )


def _en(work: Work, found: Reduction, area: Line) -> Line:
    sheet = work.sheet
    own = work.given.live_psi
    psi = sheet.take(
        "psi_0",
        found.psi0,
        "1",
        says=f"Combination factor, category {found.category}",
        origin="basis occupancy",
        cite=own.source if own else "EN 1990 Table A1.1",
    )
    basic = sheet.take(
        "A_0",
        EN_AREA,
        "m^2",
        says="Reference area",
        origin="recommended value",
        cite=EN_CLAUSE,
        word="reference area of the live load reduction",
    )
    formula: Expression = number(5) / 7 * psi + basic / area
    words = "Factor on the live load, at most 1"
    if found.category in EN_LEAST_CATEGORIES:
        formula = greatest(formula, number(EN_LEAST))
        words += f", in category {found.category} at least {EN_LEAST:g}"
    return sheet.hence(
        "alpha_A",
        least(formula, number(1)),
        "1",
        says=words,
        cite=f"{EN_CLAUSE} (6.1)",
        word="live load reduction factor",
    )


def _scope(work: Work, found: Reduction) -> None:
    """What rests on the reduced load and what does not; what nobody has said about the use."""
    reduced = work.study.reduced_sources
    names = [source.words for source in work.sources.values() if source.name in reduced]
    if names:
        work.sheet.text(
            f"The design of this beam from here on (combinations, effects, checks) takes the live load of "
            f"{', '.join(names)} times this factor. The loads above, and the reactions passed on case by "
            "case, are not reduced, so that the supports carry all that is applied.",
            role="note",
        )
    unnamed = any(each.panel.live and not each.panel.use for each in work.given.panels)
    if found.rule == ASCE and not found.category and (unnamed or work.given.carried):
        work.sheet.text(
            "The job names no use of the floor: live loads above 100 psf are kept in full, but assembly uses "
            "(4.7.5) and garages for passenger vehicles (4.7.4) may not be reduced either. Make sure that "
            "no panel here is one; category C, F or G as occupancy of the basis rules the reduction out.",
            role="caution",
        )
    if found.rule != ASCE and not work.given.basis.occupancy:
        work.sheet.text(
            f"The job names no use of the floor: category {found.category} is taken.", role="caution"
        )
