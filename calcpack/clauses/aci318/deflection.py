"""Least depth, cracked sections, immediate and long-term deflections, as lines."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import NamedTuple

from calcpack.clauses.aci318.materials import Checks, Materials, Size, cite, psi
from calcpack.sheet import (
    Expression,
    Line,
    Sheet,
    indexed,
    measured,
    number,
    number_in,
    sqrt,
)
from calcpack.sheet.evaluation import holds

# Time-dependent factor of sustained loads by their duration.
# Source: ACI 318-19, Table 24.2.4.1.3.
DURATIONS = {"3 months": 1.0, "6 months": 1.2, "12 months": 1.4, "5 years": 2.0}

# Least depth as a part of the span, by how its ends are held: Table 9.3.1.1.
LEAST_DEPTH = {
    "simply supported": "16",
    "one end continuous": "18.5",
    "both ends continuous": "21",
    "cantilever": "8",
}


def least_depth(span: float, held: str, fy: float) -> float:
    """Depth from which on deflections of a normalweight beam need not be worked out, in the span's unit.

    Parameters
    ----------
    span : float
    held : str
        A key of ``LEAST_DEPTH``.
    fy : float [psi]

    Source: ACI 318-19, Table 9.3.1.1 and 9.3.1.1.1.

    Examples
    --------
    >>> least_depth(240, "simply supported", 60_000), least_depth(240, "cantilever", 40_000)
    (15.0, 24.0)
    """
    return span / float(LEAST_DEPTH[held]) * (0.4 + fy / 100_000)


def state_least_depth(sheet: Sheet, materials: Materials, size: Size, span: Line, held: str) -> Line:
    """Least depth of Table 9.3.1.1; below it the deflections decide.

    Source: ACI 318-19, Table 9.3.1.1 and 9.3.1.1.1.
    """
    line = sheet.hence(
        "h_min",
        span / number(LEAST_DEPTH[held]) * (0.4 + number_in(materials.fy, "psi") / 100_000),
        "mm",
        f"Depth below which deflections have to be worked out, {held} (strength in psi)",
        cite("Table 9.3.1.1, 9.3.1.1.1"),
        word="depth below which deflections have to be worked out",
    )
    kept = holds("ge", size.height.value, line.value)
    sheet.text(
        ["The beam's ", size.height.shown, " are ", "no less than this" if kept else "less than this",
         "; deflections are worked out all the same."],
        role="note",
    )  # fmt: skip
    return line


class Gross(NamedTuple):
    """The uncracked section, each a line."""

    inertia: Line
    top: Line
    rupture: Line
    ratio: Line


def state_gross(sheet: Sheet, materials: Materials, size: Size) -> Gross:
    """Gross section, modulus of rupture, ratio of the moduli.

    Source: statics; ACI 318-19, 19.2.3.1.
    """
    b, h = size.web, size.height
    if size.face is not None and size.flange is not None:
        wings = (size.face - b) * size.flange
        top = sheet.hence(
            "y_top",
            (b * h**2 / 2 + (size.face - b) * size.flange**2 / 2) / (b * h + wings),
            "mm",
            "Centroid of the gross section from the top",
            word="depth to the centroid of the gross section",
        )
        inertia = sheet.hence(
            "I_g",
            b * h**3 / 12
            + b * h * (h / 2 - top) ** 2
            + (size.face - b) * size.flange**3 / 12
            + wings * (top - size.flange / 2) ** 2,
            "mm^4",
            "Gross second moment of area, effective flange included",
        )
    else:
        top = sheet.hence("y_top", h / 2, "mm", "Centroid of the gross section from the top",
                          word="depth to the centroid of the gross section")  # fmt: skip
        inertia = sheet.hence("I_g", b * h**3 / 12, "mm^4", "Gross second moment of area")
    rupture = sheet.hence(
        "f_r",
        psi(7.5 * materials.lightweight * sqrt(number_in(materials.fc, "psi"))),
        "MPa",
        "Modulus of rupture (strength in psi)",
        cite("19.2.3.1"),
        us="psi",
    )
    ratio = sheet.hence(
        "n", materials.es / materials.ec, "1", "Ratio of the moduli", word="ratio of the moduli"
    )
    return Gross(inertia, top, rupture, ratio)


class Bent(NamedTuple):
    """A section bent under service loads.

    Parameters
    ----------
    moment : float [kNm]
        Largest, as an amount.
    words : str
    steel, depth : Line
        Tension bars and their effective depth.
    top : bool
        The top is in tension.
    tag : str
        Index of the symbols.
    """

    moment: float
    words: str
    steel: Line
    depth: Line
    top: bool
    tag: str = ""


def state_effective_inertia(sheet: Sheet, materials: Materials, size: Size, gross: Gross, bent: Bent) -> Line:
    """Cracking moment, cracked section and effective second moment of area of one section.

    Parameters
    ----------
    size : Size
    gross : Gross
    bent : Bent

    Source: ACI 318-19, Eq. (24.2.3.5b), Table 24.2.3.5; cracked section by elastic theory.
    """

    def name(symbol: str) -> str:
        return indexed(symbol, bent.tag) if bent.tag else symbol

    moment = sheet.take(
        name("M_a"), bent.moment, "kN*m", bent.words, "analysis, service combination", given=False,
        cite=cite("24.2.3.5"),
    )  # fmt: skip
    edge: Expression | Line = gross.top if bent.top else size.height - gross.top
    cracking = sheet.hence(
        name("M_cr"), gross.rupture * gross.inertia / edge, "kN*m", "Cracking moment", cite("Eq. (24.2.3.5b)")
    )
    cracked = _cracked(sheet, size, gross, bent, name)
    part = (number(2) / 3 * cracking / moment) ** 2
    whole = moment.value <= 2 / 3 * cracking.value
    return sheet.hence(
        name("I_e"),
        gross.inertia.as_expression() if whole else cracked / (1 - part * (1 - cracked / gross.inertia)),
        "mm^4",
        f"Effective second moment of area; the moment is {'no more' if whole else 'more'} than 2/3 of the "
        "cracking moment",
        cite("Table 24.2.3.5"),
    )


def cracked_depth(width: float, web: float, flange: float, steel: float, depth: float) -> float:
    """Depth to the neutral axis of a cracked elastic section, lengths in one unit.

    Parameters
    ----------
    width, web, flange : float
        Of the compressed side; without a flange its depth does not matter, the width is the web's.
    steel : float
        Transformed area n A_s of the tension bars.
    depth : float
        Effective depth.

    Source: elastic theory, first moments about the neutral axis; compression bars left out.

    Examples
    --------
    >>> round(cracked_depth(12, 12, 0, 8 * 3.0, 17.5), 3)
    6.602
    """

    def axis(b: float, wings: float) -> float:
        lead = steel + wings * flange
        return float((-lead + (lead**2 + 2 * b * (steel * depth + wings * flange**2 / 2)) ** 0.5) / b)

    first = axis(width, 0.0)
    return first if first <= flange else axis(web, width - web)


def _cracked(sheet: Sheet, size: Size, gross: Gross, bent: Bent, name: Callable[[str], str]) -> Line:
    """Cracked second moment of area; a flange counts on the compressed side only."""
    face = size.web if bent.top or size.face is None else size.face
    flange = bent.depth if face is size.web or size.flange is None else size.flange
    steel = gross.ratio * bent.steel
    depth = cracked_depth(
        face.value,
        size.web.value,
        flange.value,
        gross.ratio.value * bent.steel.value,
        bent.depth.value,
    )
    words = "Neutral axis of the cracked section, compression bars left out"
    if depth <= flange.value:
        axis = sheet.hence(
            name("c_cr"),
            (sqrt(steel**2 + 2 * face * steel * bent.depth) - steel) / face,
            "mm",
            words,
            "elastic theory",
            word="neutral axis of the cracked section",
        )
        inertia = face * axis**3 / 3 + steel * (bent.depth - axis) ** 2
    else:
        wings = (face - size.web) * flange
        lead = steel + wings
        axis = sheet.hence(
            name("c_cr"),
            (sqrt(lead**2 + 2 * size.web * (steel * bent.depth + wings * flange / 2)) - lead) / size.web,
            "mm",
            f"{words}; below the flange",
            "elastic theory",
            word="neutral axis of the cracked section",
        )
        inertia = (
            face * axis**3 / 3
            - (face - size.web) * (axis - flange) ** 3 / 3
            + steel * (bent.depth - axis) ** 2
        )
    return sheet.hence(name("I_cr"), inertia, "mm^4", "Cracked second moment of area", "elastic theory")


def state_average(sheet: Sheet, sagging: Line, hogging: Sequence[Line]) -> Line:
    """Average of the sections of a continuous span; a single section as it is.

    Source: ACI 318-19, 24.2.3.6.
    """
    if not hogging:
        return sagging
    ends: Expression | Line = hogging[0]
    if hogging[1:]:
        ends = (hogging[0] + hogging[1]) / 2
    return sheet.hence(
        "I_e", (sagging + ends) / 2, "mm^4", "Average of the critical sections", cite("24.2.3.6")
    )


class Sag(NamedTuple):
    """Deflections of a span times E I, by the analysis [kNm3]."""

    live: float
    sustained: float
    origin: str


class Limits(NamedTuple):
    """Span over so much, and what is asked of the deflections."""

    live: float
    total: float
    reach: Expression  # the span, or twice an overhang


class Deflections(NamedTuple):
    """What is stated of a span's deflections.

    Parameters
    ----------
    checks : Checks
    growth : Line
        λ_Δ, the multiplier for creep and shrinkage.
    live : Line or None [mm]
        Immediate, under live load; None without any.
    after : Line [mm]
        After attachment of partitions.
    """

    checks: Checks
    growth: Line
    live: Line | None
    after: Line


def state_deflection(
    sheet: Sheet,
    materials: Materials,
    inertia: Line,
    sag: Sag,
    limits: Limits,
    duration: str,
    compression: Expression | None,
    words: str,
) -> Deflections:
    """Immediate and long-term deflections of a span against their limits.

    Parameters
    ----------
    inertia : Line [mm^4]
    sag : Sag
    limits : Limits
    duration : str
        A key of ``DURATIONS``.
    compression : Expression or None
        Ratio ρ' of compression bars at midspan, or at the support of a cantilever.
    words : str
        Which span.

    Source: ACI 318-19, 24.2.3.4, 24.2.4.1.1, Table 24.2.4.1.3, Table 24.2.2.
    """
    rigidity = materials.ec * inertia
    checks: Checks = ()
    immediate: Line | None = None
    if sag.live:
        basis = sheet.take(
            "D_L", sag.live, "kN*m^3", f"Deflection times E I under live load, {words}", sag.origin,
            given=False, word="deflection times E I under live load",
        )  # fmt: skip
        immediate = sheet.hence(
            "Delta_L", basis / rigidity, "mm", "Immediate deflection under live load", cite("24.2.3.4")
        )
        line = sheet.require(
            immediate <= limits.reach / number(limits.live),
            f"Immediate deflection under live load, {words}",
            cite("Table 24.2.2"),
        )
        checks = (("deflection, live", line),)
    basis = sheet.take(
        "D_sus", sag.sustained, "kN*m^3", f"Deflection times E I under sustained load, {words}", sag.origin,
        given=False, word="deflection times E I under sustained load",
    )  # fmt: skip
    sustained = sheet.hence(
        "Delta_sus", basis / rigidity, "mm", "Immediate deflection under sustained load", cite("24.2.3.4")
    )
    xi = sheet.take(
        "xi", DURATIONS[duration], "1", f"Time-dependent factor for {duration}", "design.load_duration",
        cite("Table 24.2.4.1.3"), word="time-dependent factor of sustained load",
    )  # fmt: skip
    growth = sheet.hence(
        "lambda_Delta",
        xi / (1 + 50 * (measured(0.0, "1") if compression is None else compression)),
        "1",
        "Multiplier for creep and shrinkage"
        + (
            ", with the ratio of the bars in the compressed face"
            if compression is not None
            else ", no bars there"
        ),
        cite("24.2.4.1.1"),
        word="multiplier for creep and shrinkage",
    )
    after = growth * sustained
    total = sheet.hence(
        "Delta_after",
        after + immediate if immediate is not None else after,
        "mm",
        "Deflection after attachment of partitions: all creep and shrinkage, and the live load",
        cite("Table 24.2.2"),
    )
    line = sheet.require(
        total <= limits.reach / number(limits.total),
        f"Deflection after attachment of partitions, {words}",
        cite("Table 24.2.2"),
    )
    return Deflections((*checks, ("deflection, long-term", line)), growth, immediate, total)
