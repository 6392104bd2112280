"""Bar spacing, crack control, development and where bars end, as lines."""

from __future__ import annotations

from typing import NamedTuple

from calcpack.clauses.aci318.arrangement import Group
from calcpack.clauses.aci318.flexure import BendingLines
from calcpack.clauses.aci318.materials import Checks, Materials, Size, bare, cite, root, shared
from calcpack.clauses.aci318.strength import INCH, LEAST_DEVELOPMENT, development_length, grade_factor
from calcpack.sheet import (
    Expression,
    Line,
    Sheet,
    greatest,
    indexed,
    least,
    measured,
    number,
    number_in,
    quantity,
)


def state_service_stress(sheet: Sheet, materials: Materials) -> Line:
    """Stress of the bars under service loads, as 24.3.2.1 permits: two thirds of f_y.

    Source: ACI 318-19, 24.3.2.1.
    """
    return sheet.hence(
        "f_s",
        number(2) / 3 * materials.fy,
        "MPa",
        "Stress of the bars under service loads, without working it out",
        cite("24.3.2.1"),
        word="stress of the bars under service loads",
    )


class Layer(NamedTuple):
    """The bars of an outermost layer."""

    diameter: Line
    spacing: Line | None  # centre to centre; None for a single bar
    checks: Checks


def state_spacing(
    sheet: Sheet, size: Size, group: Group, aggregate: Line, stress: Line, face: str, tag: str = ""
) -> Layer:
    """Clear distances of bars, and their spacing for crack control.

    Parameters
    ----------
    group : Group
    aggregate, stress : Line [mm], [MPa]
        Largest size; stress of the bars under service loads.
    face : str
        "bottom" or "top".
    tag : str
        Index of the symbols.

    Source: ACI 318-19, 25.2.1, 24.3.2, 24.3.2.1.
    """

    def name(symbol: str) -> str:
        return indexed(symbol, tag) if tag else symbol

    diameter = sheet.take(
        name("d_b"), group.bar.diameter * 1000, "mm", f"Diameter of {group.bar.name}", group.bar.source
    )
    if group.layers[0] < 2:
        return Layer(diameter, None, ())
    spacing = sheet.hence(
        name("s_b"),
        shared(size.web - 2 * (size.cover + size.stirrup) - diameter, group.layers[0] - 1),
        "mm",
        f"Distance of the {face} bars from centre to centre, {group.layers[0]} side by side",
        word="distance of bars, centre to centre",
    )
    clear = sheet.require(
        spacing - diameter >= greatest(quantity(1, "in"), diameter, number(4) / 3 * aggregate),
        f"Clear distance of the {face} bars",
        cite("25.2.1"),
    )
    ratio = quantity(40_000, "psi") / stress
    spread = sheet.require(
        spacing
        <= least(quantity(15, "in") * ratio - 2.5 * (size.cover + size.stirrup), quantity(12, "in") * ratio),
        f"Distance of the {face} bars for crack control",
        cite("Table 24.3.2"),
    )
    checks = ((f"clear distance, {face} bars", clear), (f"crack control, {face} bars", spread))
    return Layer(diameter, spacing, checks)


class Development(NamedTuple):
    """A development length with its bar's diameter."""

    length: Line
    diameter: Line


def state_development(
    sheet: Sheet,
    materials: Materials,
    size: Size,
    group: Group,
    layer: Layer,
    outermost: Line,
    *,
    top: bool,
    tag: str = "",
) -> Development:
    """Development length of straight bars in tension; no credit for stirrups (K_tr = 0).

    Parameters
    ----------
    group : Group
    layer : Layer
    outermost : Line [mm]
        Depth of the outermost layer.
    top : bool
        More than 12 in of fresh concrete below the bars.
    tag : str

    Source: ACI 318-19, Eq. (25.4.2.4a), Table 25.4.2.5, 25.4.2.1.
    """

    def name(symbol: str) -> str:
        return indexed(symbol, tag) if tag else symbol

    edge: Expression = size.height - outermost
    if layer.spacing is not None:
        edge = least(edge, layer.spacing / 2)
    ratio = sheet.hence(
        name("kappa_b"),
        least(edge / layer.diameter, 2.5),
        "1",
        f"Confinement of {group.bar.name}: concrete to its centre, or half the distance, no stirrups counted",
        cite("25.4.2.4"),
        word="confinement term of the development length",
    )
    psi_t = "1.3" if top else "1.0"
    psi_s = "0.8" if is_small(group) else "1.0"
    psi_g = f"{grade_factor(bare(materials.fy)):g}"
    stress = number_in(materials.fy, "psi") / (materials.lightweight * root(materials.fc))
    factors = number(psi_t) * number("1.0") * number(psi_s) * number(psi_g)
    plain = number(3) / 40 * stress * factors / ratio * layer.diameter
    known = development_length(
        group.bar.diameter,
        bare(materials.fc),
        bare(materials.fy),
        ratio.value,
        top=top,
        small=is_small(group),
    )
    short = known == LEAST_DEVELOPMENT * INCH
    length = sheet.hence(
        name("ell_d"),
        greatest(plain, quantity(LEAST_DEVELOPMENT, "in")) if short else plain,
        "mm",
        f"Development length; ψt = {psi_t}, ψe = 1.0, ψs = {psi_s}, ψg = {psi_g} (strengths in psi)",
        cite("Eq. (25.4.2.4a), Table 25.4.2.5"),
        word="development length",
    )
    return Development(length, layer.diameter)


def is_small(group: Group) -> bool:
    """Whether a bar is No. 6 (19 mm) or smaller. Source: ACI 318-19, Table 25.4.2.5, ψs."""
    return group.bar.diameter <= 0.0191


class End(NamedTuple):
    """A place where sagging moment dies out.

    Parameters
    ----------
    shear : float [kN]
    words : str
        "support at A1", "point of inflection 1.2 m from the start".
    kind : "confined", "support" or "inflection"
        A simple support whose reaction presses on the bars' end; another simple support; a point of
        inflection.
    beyond : float [m]
        Embedment past the centre of a simple support.
    """

    shear: float
    words: str
    kind: str
    beyond: float = 0.0


def available(end: End, nominal: float, depth: float, diameter: float) -> float:
    """Development length that the moment's rise near an end allows [m].

    Parameters
    ----------
    nominal : float [kNm]
    depth, diameter : float [m]

    Source: ACI 318-19, 9.7.3.8.3.

    Examples
    --------
    >>> available(End(100.0, "support", "confined", 0.1), 100.0, 0.5, 0.02)
    1.4000000000000001
    """
    if end.shear <= 0:
        return float("inf")
    extra = max(depth, 12 * diameter) if end.kind == "inflection" else end.beyond
    return (1.3 if end.kind == "confined" else 1.0) * nominal / end.shear + extra


def state_end(sheet: Sheet, bending: BendingLines, development: Development, end: End, tag: str) -> Checks:
    """Sagging bars small enough to be developed where the moment rises.

    Source: ACI 318-19, 9.7.3.8.3.
    """
    shear = sheet.take(
        f"V_u,{tag}", end.shear, "kN", f"Factored shear at the {end.words}", "analysis, envelope", given=False
    )
    nominal = 1.3 * bending.nominal if end.kind == "confined" else bending.nominal
    rise = nominal / shear
    if end.kind == "inflection":
        reach: Expression = rise + greatest(bending.depth, 12 * development.diameter)
    else:
        reach = rise + measured(end.beyond * 1000, "mm") if end.beyond else rise
    words = {
        "confined": "their ends pressed on by the reaction",
        "support": "straight ends",
        "inflection": "running on by d or 12 bar diameters",
    }[end.kind]
    line = sheet.require(
        development.length <= reach,
        f"Development of the bottom bars at the {end.words}, {words}",
        cite("9.7.3.8.3"),
    )
    return ((f"development, {end.kind if end.kind == 'inflection' else 'support'}", line),)


def state_top_length(
    sheet: Sheet, bending: BendingLines, development: Development, hogging: Line, clear: Line, half: Line
) -> Line:
    """How far top bars run from the centre of a support.

    Parameters
    ----------
    hogging : Line [m]
        How far from the support any combination hogs.
    clear : Line [m]
        The longest clear span.
    half : Line [mm]
        Half the support's width.

    Source: ACI 318-19, 9.7.3.8.4, 9.7.3.3, 9.7.3.4.
    """
    return sheet.hence(
        "ell_top",
        greatest(
            hogging + greatest(bending.depth, 12 * development.diameter, clear / 16),
            half + development.length,
        ),
        "m",
        "Top bars run at least so far to each side of the support's centre: past the hogging moment, and "
        "developed from the face",
        cite("9.7.3.8.4, 9.7.3.4"),
        word="length of the top bars from the support's centre",
    )
