"""How the bars of a beam after EN 1992-1-1 came about, in words."""

from __future__ import annotations

from collections.abc import Sequence

from calcpack.clauses.bars import Stock
from calcpack.clauses.en1992.design import Design
from calcpack.clauses.en1992.faces import SIZES, Face
from calcpack.notebook.work import Work


def _area(work: Work, area: float) -> str:
    return work.show(area * 1e6, "mm^2")


def _asked(work: Work, face: Face) -> str:
    tension, compression = face.required
    words = f"bending asks for {_area(work, tension)}, least {_area(work, face.least)}"
    if compression:
        words += f", and {_area(work, compression)} in compression"
    return words


def _listed(sizes: Sequence[str]) -> str:
    if all(size.endswith(" mm") for size in sizes):
        sizes = [*(size.removesuffix(" mm") for size in sizes[:-1]), sizes[-1]]
    return ", ".join(sizes)


def _rule(stock: Stock) -> str:
    first, second = (_listed(group) for group in stock.groups(SIZES))
    return (
        f"fewest layers, then fewest bars, then least area, of {first} ({second} only where these "
        "do not fit), that satisfy moment, x/d, least reinforcement, spacing and crack width"
    )


def bottom_words(work: Work, design: Design) -> str:
    """Bottom bars."""
    face, case = design.bottom, design.case
    bars = f"{face.bars.words} = {_area(work, face.bars.area)}"
    if case.given.bottom:
        return f"Bottom, as the job gives them: {bars}; {_asked(work, face)}."
    if not case.sag:
        return f"Bottom: {bars}, to hold the stirrups; no moment stretches them."
    if not (face.resists and face.fits and face.cracks_fine):
        return (
            f"Bottom, chosen: {bars}; {_asked(work, face)}. No bars that fit satisfy moment, x/d, spacing "
            "and crack width; these come nearest. The section is too small."
        )
    return (
        f"Bottom, chosen: {bars}; {_asked(work, face)}. Rule: {_rule(case.stock)}; more, up to half as much "
        "again, where the deflection or the force at an end support asks for it, and thinner ones where an "
        "end support has no room to anchor them."
    )


def top_words(work: Work, design: Design) -> list[str]:
    """Top bars: over the supports, and those that run through."""
    case, through = design.case, design.through
    words = []
    if design.top:
        bars = f"{design.top.bars.words} = {_area(work, design.top.bars.area)}"
        if case.given.top:
            return [f"Top, as the job gives them, all running through: {bars}; {_asked(work, design.top)}."]
        enough = design.top.resists and design.top.fits and design.top.cracks_fine
        rule = "chosen by the same rule" if enough else "none that fit satisfy everything, these come nearest"
        words.append(f"Top over supports, {rule}: {bars}; {_asked(work, design.top)}.")
        if not design.zones:
            return [*words, "They all run through."]
        count = f"{through.bars.count} of them run through"
    else:
        bars = f"{through.bars.words} = {_area(work, through.bars.area)}"
        if case.given.top:
            return [f"Top, as the job gives them, running through: {bars}."]
        count = f"Top, chosen: {bars}, running through"
    if case.end_moment:
        count += (
            f": they hold {case.national['beta_1']:g} of the span's moment at end supports that are taken to "
            f"turn freely (9.2.1.2(1)) and the least reinforcement there, {_area(work, through.least)}"
        )
    return [*words, f"{count}."]


def stirrup_words(work: Work, design: Design) -> str:
    """Stirrups."""
    shear, case = design.shear, design.case
    size = f"{shear.stirrups.legs} legs of {shear.stirrups.bar.name}"
    if case.given.stirrups:
        spacing = work.show(case.given.stirrups[2] * 1e3, "mm", exact=True)
        return f"Stirrups, as the job gives them: {size} at {spacing} all along."
    return (
        f"Stirrups, chosen: {size}; {zone_words(work, design)}. Rule: the thinnest with the fewest legs "
        "that carry the shear at 75 mm or more; spacings in steps of 25 mm up to 300 mm, closer from each "
        "support on as far as the wide spacing does not carry the shear."
    )


def zone_words(work: Work, design: Design) -> str:
    """Spacings from start to end."""
    zones = design.shear.zones
    if len(zones) == 1:
        return f"{work.show(zones[0].spacing * 1e3, 'mm', exact=True)} all along"
    return "spacing " + ", ".join(
        f"{work.show(zone.spacing * 1e3, 'mm', exact=True)} from {work.show(zone.start, 'm')} to "
        f"{work.show(zone.end, 'm')}"
        for zone in zones
    )
