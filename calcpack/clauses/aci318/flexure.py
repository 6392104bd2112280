"""Bending strength by strain compatibility, its reduction factor, and the least steel, as lines."""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

from calcpack.clauses.aci318.arrangement import Group
from calcpack.clauses.aci318.limits import bound
from calcpack.clauses.aci318.materials import Checks, Materials, Size, bare, cite
from calcpack.clauses.aci318.strength import PSI, Bending
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
    sqrt,
)
from calcpack.sheet.evaluation import holds


class Demand(NamedTuple):
    """What a section is bent by.

    Parameters
    ----------
    moment : float [kNm]
        As an amount.
    words : str
        "Largest sagging moment, 12.0 ft from the start".
    origin : str
    face : str
        Which face is in tension: "bottom" or "top".
    flange : Line or None
        Width of the flange where it is in tension in a statically determinate beam (9.6.1.2).
    """

    moment: float
    words: str
    origin: str
    face: str
    flange: Line | None = None


class BendingLines(NamedTuple):
    """The lines later clauses draw on."""

    demand: Line
    steel: Line
    depth: Line
    outermost: Line
    nominal: Line
    phi: Line
    checks: Checks


def state_bending(
    sheet: Sheet,
    materials: Materials,
    size: Size,
    group: Group,
    pressed: Group | None,
    state: Bending,
    demand: Demand,
    tag: str = "",
) -> BendingLines:
    """A section's bending strength against its moment, with the strain and the steel asked for.

    Parameters
    ----------
    sheet : Sheet
    materials : Materials
    size : Size
        ``face`` is the width of the compressed face of a flanged section, None for a rectangle.
    group, pressed : Group, Group or None
        Tension bars; compression bars where they are counted.
    state : Bending
        The same section worked out beforehand: says which bars yield and how deep the block goes.
    demand : Demand
    tag : str
        One more index for the symbols, where a sheet has two sections.

    Source: ACI 318-19, 22.2, 21.2.2, 9.3.3.1, 9.6.1.2, 9.6.1.3.
    """

    def name(symbol: str) -> str:
        return indexed(symbol, tag) if tag else symbol

    moment = sheet.take(
        name("M_u"), demand.moment, "kN*m", demand.words, demand.origin, given=False, cite=cite("9.4.2")
    )
    steel = sheet.hence(
        name("A_s"),
        number(group.count) * measured(group.bar.area * 1e6, "mm^2"),
        "mm^2",
        f"{group.words} at the {demand.face}",
        group.bar.source,
    )
    depth, outermost = _depths(sheet, size, group, name)
    checks = _least_steel(sheet, materials, size, steel, depth, moment, demand, state.design, name)
    block = _Block(sheet, materials, size, steel, depth, state, name)
    if pressed is not None and state.stress_c:
        block.press(pressed)
    c = block.neutral_axis()
    a = sheet.hence(name("a"), materials.beta * c, "mm", "Depth of the stress block", cite("22.2.2.4.1"))
    strain = sheet.hence(
        name("epsilon_t"),
        number(0.003) * (outermost - c) / c,
        "1",
        "Net tensile strain of the outermost bars",
        cite("22.2.1.2, 22.2.2.1"),
    )
    ductile = sheet.require(
        strain >= materials.yield_strain + 0.003,
        f"The section is tension-controlled ({demand.face} bars)",
        cite("9.3.3.1, Table 21.2.2"),
    )
    factor: Expression = 0.65 + 0.25 * (strain - materials.yield_strain) / 0.003
    if strain.value < materials.yield_strain.value:
        factor = greatest(factor, 0.65)
    phi = sheet.hence(
        name("phi"),
        least(factor, 0.90),
        "1",
        "Strength reduction factor for bending",
        cite("Table 21.2.2"),
    )
    nominal = block.strength(c, a)
    strong = sheet.require(
        moment <= phi * nominal,
        f"Bending strength, {demand.face} bars",
        cite("9.5.1.1"),
    )
    face = "sagging" if demand.face == "bottom" else "hogging"
    checks = (
        (f"bending, {face}", strong),
        (f"net tensile strain, {face}", ductile),
        *((f"{words}, {face}", line) for words, line in checks),
    )
    return BendingLines(moment, steel, depth, outermost, nominal, phi, checks)


def _depths(sheet: Sheet, size: Size, group: Group, name: Callable[[str], str]) -> tuple[Line, Line]:
    """Effective depth, and depth of the outermost layer where it is another one."""
    diameter = measured(group.bar.diameter * 1000, "mm")
    to_first = size.height - size.cover - size.stirrup - diameter / 2
    if len(group.layers) == 1:
        depth = sheet.hence(name("d"), to_first, "mm", "Effective depth, bars in one layer")
        return depth, depth
    outermost = sheet.hence(name("d_t"), to_first, "mm", "Depth of the outermost layer")
    lift = measured((group.heights[1] - group.heights[0]) * 1000, "mm")
    depth = sheet.hence(
        name("d"),
        outermost - number(group.layers[1]) * lift / group.count,
        "mm",
        f"Effective depth; {group.layers[0]} and {group.layers[1]} bars, layers that far apart",
        cite("25.2.2"),
    )
    return depth, outermost


def _least_steel(
    sheet: Sheet,
    materials: Materials,
    size: Size,
    steel: Line,
    depth: Line,
    moment: Line,
    demand: Demand,
    design: float,
    name: Callable[[str], str],
) -> Checks:
    """The least steel; less than it where it is a third more than a moment within the strength needs."""
    width: Expression | Line = size.web
    words = "Least bending steel (strengths in psi)"
    if demand.flange is not None:
        width = least(demand.flange, 2 * size.web)
        words += "; statically determinate, flange in tension"
    most = bound("f_y least steel")
    strength: Expression = number_in(materials.fy, "psi")
    if bare(materials.fy) > most:
        strength = number(round(most / PSI))
    steel_least = sheet.hence(
        name("A_s,min"),
        greatest(3 * sqrt(number_in(materials.fc, "psi")), 200) / strength * width * depth,
        "mm^2",
        words,
        cite("9.6.1.2"),
    )
    if holds("lt", steel.value, steel_least.value) and holds("le", demand.moment, design):
        needed = _needed(sheet, materials, size, depth, moment, name)
        line = sheet.require(
            steel >= number(4) / 3 * needed,
            "Steel below the least is a third more than the moment needs",
            cite("9.6.1.3"),
        )
        return (("least steel", line),)
    return (("least steel", sheet.require(steel >= steel_least, "Least bending steel", cite("9.6.1.2"))),)


def _face(size: Size) -> Line:
    return size.web if size.face is None else size.face


def _needed(
    sheet: Sheet,
    materials: Materials,
    size: Size,
    depth: Line,
    moment: Line,
    name: Callable[[str], str],
) -> Line:
    """Steel that the moment needs; the block of so little steel stays within a flange."""
    face = _face(size)
    block = sheet.hence(
        name("a_req"),
        depth - sqrt(depth**2 - 2 * moment / (number(0.9) * 0.85 * materials.fc * face)),
        "mm",
        "Depth of the stress block that the moment needs",
        cite("22.2.2.4.1"),
        word="stress block needed",
    )
    return sheet.hence(
        name("A_s,req"),
        0.85 * materials.fc * face * block / materials.fy,
        "mm^2",
        "Steel that the moment needs",
        cite("22.2.1.1"),
        word="tension reinforcement needed",
    )


class _Block:
    """The compressed side: its forces as formulas, the neutral axis, the strength."""

    def __init__(
        self,
        sheet: Sheet,
        materials: Materials,
        size: Size,
        steel: Line,
        depth: Line,
        state: Bending,
        name: Callable[[str], str],
    ) -> None:
        self.sheet, self.materials, self.size = sheet, materials, size
        self.steel, self.depth, self.state, self.name = steel, depth, state, name
        self.pressed: Line | None = None
        self.cover: Line | None = None
        self.stress: Line | None = None
        self.winged = size.face is not None and size.flange is not None and bare(size.flange) < state.a
        self.width = size.web if self.winged or size.face is None else size.face
        self.yields = holds("ge", state.stress, bare(materials.fy))
        self.yields_c = holds("ge", state.stress_c, bare(materials.fy))

    def press(self, group: Group) -> None:
        """Count compression bars."""
        self.pressed = self.sheet.hence(
            self.name("A'_s"),
            number(group.count) * measured(group.bar.area * 1e6, "mm^2"),
            "mm^2",
            f"{group.words} in compression",
            group.bar.source,
        )
        self.cover = self.sheet.hence(
            self.name("d'"),
            measured(group.centroid * 1000, "mm")
            if group.layers[1:]
            else self.size.cover + self.size.stirrup + measured(group.bar.diameter * 1000, "mm") / 2,
            "mm",
            "Their depth from the compressed face",
            word="depth of the compression reinforcement",
        )

    @property
    def wings(self) -> Expression:
        """Force of the flange beside the web."""
        assert self.size.face is not None
        assert self.size.flange is not None
        return 0.85 * self.materials.fc * (self.size.face - self.size.web) * self.size.flange

    def neutral_axis(self) -> Line:
        """Depth to the neutral axis from equilibrium, tension and compression alike."""
        materials, fc = self.materials, self.materials.fc
        below = 0.85 * fc * materials.beta * self.width
        elastic: list[Expression] = []  # parts that grow with 1 - d/c
        if self.yields:
            balance: Expression = self.steel * materials.fy
        else:
            balance = -(number(0.003) * materials.es * self.steel)
            elastic.append(number(0.003) * materials.es * self.steel * self.depth)
        if self.winged:
            balance = balance - self.wings
        if self.pressed is not None and self.cover is not None:
            if self.yields_c:
                balance = balance - self.pressed * (materials.fy - 0.85 * fc)
            else:
                balance = balance - self.pressed * (number(0.003) * materials.es - 0.85 * fc)
                elastic.append(number(0.003) * materials.es * self.pressed * self.cover)
        words = "Depth to the neutral axis: compression and tension in balance"
        if self.yields:
            words += ", tension bars yielding"
        if self.winged:
            words += "; the block reaches below the flange"
        clause = cite("22.2.1.1, 22.2.2.4.1")
        if not elastic:
            return self.sheet.hence(self.name("c"), balance / below, "mm", words, clause)
        stiff = self.sheet.hence(
            self.name("K"), below, "kN/m", "Force of the stress block for each length of c", clause,
            word="block force over depth to the neutral axis",
        )  # fmt: skip
        lead = self.sheet.hence(
            self.name("B"), balance, "kN", "Forces that do not change with c", clause, word="auxiliary force"
        )
        turn = self.sheet.hence(
            self.name("D"),
            elastic[0] if len(elastic) == 1 else elastic[0] + elastic[1],
            "kN*m",
            "Bars that stay elastic: 0.003 E A times their depth",
            cite("22.2.1.2"),
            word="auxiliary moment",
        )
        root = sqrt(lead**2 + 4 * stiff * turn)
        return self.sheet.hence(
            self.name("c"),
            (lead + root) / (2 * stiff),
            "mm",
            f"{words}: root of K c² − B c − D = 0",
            clause,
        )

    def strength(self, c: Line, a: Line) -> Line:
        """Nominal moment about the tension bars."""
        materials, fc, depth = self.materials, self.materials.fc, self.depth
        clause = cite("22.3.1.1")
        if self.yields and not self.winged and self.pressed is None:
            return self.sheet.hence(
                self.name("M_n"),
                self.steel * materials.fy * (depth - a / 2),
                "kN*m",
                "Nominal strength",
                clause,
            )
        moment: Expression = 0.85 * fc * self.width * a * (depth - a / 2)
        if self.winged:
            assert self.size.flange is not None
            moment = moment + self.wings * (depth - self.size.flange / 2)
        if self.pressed is not None and self.cover is not None:
            stress = self.sheet.hence(
                self.name("f'_s"),
                least(materials.fy, number(0.003) * materials.es * (c - self.cover) / c),
                "MPa",
                "Stress in the compression bars",
                cite("22.2.1.2, 20.2.2.1"),
                word="stress in the compression reinforcement",
            )
            moment = moment + self.pressed * (stress - 0.85 * fc) * (depth - self.cover)
        return self.sheet.hence(
            self.name("M_n"), moment, "kN*m", "Nominal strength, moments about the tension bars", clause
        )


def state_compression_ties(sheet: Sheet, size: Size, spacing: Line, pressed: Group, stirrup: Line) -> Checks:
    """Stirrups hold the bars that are counted in compression.

    Source: ACI 318-19, 9.7.6.4.3.
    """
    bar = measured(pressed.bar.diameter * 1000, "mm")
    line = sheet.require(
        spacing <= least(16 * bar, 48 * stirrup, size.web),
        "Spacing of the stirrups that hold the compression bars",
        cite("9.7.6.4.3"),
    )
    return (("stirrups about compression bars", line),)
