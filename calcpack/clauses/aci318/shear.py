"""One-way shear, stirrups, and the torsion below which none is taken, as lines."""

from __future__ import annotations

from typing import NamedTuple

from calcpack.clauses.aci318.materials import Checks, Materials, Size, cite, psi, root, shared
from calcpack.clauses.bars import Bar
from calcpack.sheet import Line, Sheet, greatest, least, measured, number, number_in, quantity, sqrt
from calcpack.sheet.evaluation import holds


class Stirrups(NamedTuple):
    """Stirrups with their legs, each a line but the bar."""

    bar: Bar
    legs: int
    area: Line
    spacing: Line


class Concrete(NamedTuple):
    """What shear is carried with beside the stirrups."""

    depth: Line
    phi: Line
    strength: Line
    unit: Line  # b_w d √f'c, the force that limits are multiples of
    checks: Checks

    def leaves_little(self, demand: Line) -> bool:
        """Whether stirrups have to carry no more than 4 λ √f'c b_w d. Source: ACI 318-19, Table 9.7.6.2.2."""
        needed = demand.value / self.phi.value - self.strength.value
        return holds("le", needed, 4 * self.unit.value)


def state_concrete(
    sheet: Sheet,
    materials: Materials,
    size: Size,
    depth: Line,
    steel: Line,
    stirrups: Stirrups,
    *,
    with_least: bool,
) -> Concrete:
    """Shear carried by the concrete.

    Parameters
    ----------
    sheet : Sheet
    materials, size : Materials, Size
    depth, steel : Line [mm], [mm^2]
        Of the section with the smaller effective depth.
    stirrups : Stirrups
    with_least : bool
        Whether they are no less than the least ones.

    Source: ACI 318-19, Tables 21.2.1 and 22.5.5.1, 22.5.5.1.1, 22.5.5.1.3, 22.5.3.1.
    """
    phi = sheet.take("phi_v", 0.75, "1", "Strength reduction factor for shear", "the standard",
                     cite("Table 21.2.1"), word="strength reduction factor for shear")  # fmt: skip
    unit = sheet.hence(
        "V_1",
        psi(materials.lightweight * root(materials.fc)) * size.web * depth,
        "kN",
        "λ√f′c over the web (strength in psi); limits of shear are multiples of it",
        cite("22.5.3.1"),
        word="shear of λ√f'c over the web",
    )
    if with_least:
        strength = sheet.hence(
            "V_c",
            2 * unit,
            "kN",
            "Shear strength of the concrete, with no less than the least stirrups",
            cite("Table 22.5.5.1 (a)"),
        )
        return Concrete(depth, phi, strength, unit, ())
    ratio = sheet.hence("rho_w", steel / (size.web * depth), "1", "Steel ratio of the web", cite("22.5.5.1"))
    effect = sheet.hence(
        "lambda_s",
        least(sqrt(2 / (1 + number_in(depth, "in") / 10)), 1),
        "1",
        "Size effect, as there are less than the least stirrups (depth in inches)",
        cite("22.5.5.1.3"),
    )
    strength = sheet.hence(
        "V_c",
        least(8 * effect * ratio ** (number(1) / 3), 5) * unit,
        "kN",
        "Shear strength of the concrete, with less than the least stirrups",
        cite("Table 22.5.5.1 (c), 22.5.5.1.1"),
    )
    return Concrete(depth, phi, strength, unit, ())


def state_least_stirrups(
    sheet: Sheet, materials: Materials, size: Size, concrete: Concrete, demand: Line, stirrups: Stirrups
) -> Checks:
    """Where stirrups are needed, and that they are no less than the least.

    Source: ACI 318-19, 9.6.3.1 and 9.6.3.4.
    """
    free = sheet.hence(
        "V_0",
        concrete.phi * concrete.unit,
        "kN",
        "Shear above which the least stirrups are needed",
        cite("9.6.3.1"),
        word="shear up to which a beam needs no stirrups",
    )
    fc, fyt = materials.fc, materials.fyt
    needed = sheet.hence(
        "A_v,min",
        greatest(psi(0.75 * sqrt(number_in(fc, "psi"))), quantity(50, "psi"))
        * size.web
        * stirrups.spacing
        / fyt,
        "mm^2",
        "Least stirrup area at this spacing (strength in psi)",
        cite("9.6.3.4"),
        word="least shear reinforcement",
    )
    if demand.value <= free.value:
        sheet.text(
            [f"The largest shear is within {free.shown}, line ", free.link, ": no stirrups are asked for."]
        )
        return ()
    line = sheet.require(
        stirrups.area >= needed,
        f"Least stirrups; needed where the shear is above {free.shown}",
        cite("9.6.3.1, 9.6.3.4"),
    )
    return (("least stirrups", line),)


def state_zone(
    sheet: Sheet,
    materials: Materials,
    size: Size,
    concrete: Concrete,
    demand: Line,
    stirrups: Stirrups,
    words: str,
    tag: str = "",
) -> tuple[Line, Checks]:
    """Shear strength of a stretch with one stirrup spacing, and the spacing's limits.

    Parameters
    ----------
    demand : Line [kN]
    words : str
        Which stretch: "near the supports".
    tag : str
        Index of the symbols.

    Returns
    -------
    (Line, checks)
        φ V_n, and the requirements.

    Source: ACI 318-19, 22.5.1.1, 22.5.1.2, 22.5.8.5.3, 9.5.1.1, Table 9.7.6.2.2.
    """
    index = f",{tag}" if tag else ""
    depth, strength, unit = concrete.depth, concrete.strength, concrete.unit
    carried = sheet.hence(
        f"V_s{index}",
        least(stirrups.area * materials.fyt * depth / stirrups.spacing, 8 * unit),
        "kN",
        f"Shear carried by the stirrups {words}",
        cite("22.5.8.5.3, 22.5.1.2"),
    )
    design = sheet.hence(
        f"phi V_n{index}",
        concrete.phi * (strength + carried),
        "kN",
        f"Design shear strength {words}",
        cite("22.5.1.1"),
    )
    strong = sheet.require(demand <= design, f"Shear strength {words}", cite("9.5.1.1"))
    wide = concrete.leaves_little(demand)
    part, most = (2, 24) if wide else (4, 12)
    along = sheet.require(
        stirrups.spacing <= least(depth / part, quantity(most, "in")),
        f"Spacing of the stirrups {words}; they have to carry {'no more' if wide else 'more'} than 4λ√f′c bd",
        cite("Table 9.7.6.2.2"),
    )
    checks: Checks = ((f"shear, {words}", strong), (f"stirrup spacing, {words}", along))
    return design, checks


def state_section_limit(
    sheet: Sheet, size: Size, concrete: Concrete, demand: Line, stirrups: Stirrups
) -> Checks:
    """The web is wide enough for its largest shear, and its stirrups have legs enough across it.

    Source: ACI 318-19, 22.5.1.2 and Table 9.7.6.2.2.
    """
    limit = sheet.require(
        demand <= concrete.phi * (concrete.strength + 8 * concrete.unit),
        "Size of the web for the largest shear",
        cite("22.5.1.2"),
    )
    wide = concrete.leaves_little(demand)
    depth = concrete.depth if wide else concrete.depth / 2
    across = sheet.require(
        shared(size.web - 2 * size.cover - size.stirrup, stirrups.legs - 1)
        <= least(depth, quantity(24 if wide else 12, "in")),
        f"Legs across the web, {stirrups.legs} of them",
        cite("Table 9.7.6.2.2"),
    )
    return (("size of the web", limit), ("stirrup legs across", across))


def state_torsion(sheet: Sheet, materials: Materials, size: Size, phi: Line) -> Checks:
    """The torsion that may be neglected, of the web alone, and that none above it is taken.

    Source: ACI 318-19, 22.7.1.1, Table 22.7.4.1(a), 9.2.4.4, 22.7.2.1.
    """
    area, edge = size.web * size.height, 2 * (size.web + size.height)
    threshold = sheet.hence(
        "T_th",
        psi(materials.lightweight * root(materials.fc)) * area**2 / edge,
        "kN*m",
        "Threshold torsion of the web, flanges left out (strength in psi)",
        cite("Table 22.7.4.1(a)"),
        word="threshold torsion",
    )
    torsion = sheet.take(
        "T_u",
        0.0,
        "kN*m",
        "Torsion taken: the beam holds the slab up and lets it turn",
        "assumption of the load transfer",
        word="factored torsion",
    )
    line = sheet.require(
        torsion <= phi * threshold, "Torsion is below what may be neglected", cite("22.7.1.1")
    )
    return (("torsion", line),)


def take_stirrups(
    sheet: Sheet, bar: Bar, legs: int, spacing: float, origin: str, *, words: str, tag: str = ""
) -> Stirrups:
    """Stirrup area and spacing as lines; ``spacing`` in m."""
    index = f"_{tag}" if tag else ""
    area = sheet.hence(
        "A_v" + (f",{tag}" if tag else ""),
        number(legs) * measured(bar.area * 1e6, "mm^2"),
        "mm^2",
        f"{legs} legs of {bar.name}",
        bar.source,
    )
    line = sheet.take(f"s{index}", spacing * 1000, "mm", f"Spacing of the stirrups {words}".rstrip(), origin,
                      word="spacing of the stirrups")  # fmt: skip
    return Stirrups(bar, legs, area, line)
