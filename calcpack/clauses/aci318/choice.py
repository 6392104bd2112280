"""Bars and stirrups chosen where a job does not give them: the fewest that satisfy the clauses."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from typing import NamedTuple

from calcpack.clauses.aci318.arrangement import Cage, Group, arranged, crack_spacing
from calcpack.clauses.aci318.strength import (
    INCH,
    PHI_SHEAR,
    Bending,
    Block,
    Steel,
    bending,
    least_steel,
    least_stirrups,
    root,
    shear_of_concrete,
    stirrup_limits,
)
from calcpack.clauses.bars import OFFICE, Stock
from calcpack.sheet.evaluation import holds

MOST_BARS = 20
# Sizes that beams are usually reinforced with, thinnest first (common practice).
MAIN = {
    "US": ("#5", "#6", "#7", "#8", "#9", "#10", "#11"),
    "SI": ("12 mm", "14 mm", "16 mm", "20 mm", "25 mm", "28 mm", "32 mm"),
}
STIRRUPS = {"US": ("#3", "#4", "#5"), "SI": ("10 mm", "12 mm", "16 mm")}
STEP = {"US": INCH, "SI": 0.025}
CLOSEST = {"US": 3 * INCH, "SI": 0.075}  # stirrups closer than this are thickened instead


class Strengths(NamedTuple):
    """Material values [kPa]."""

    fc: float
    fy: float
    fyt: float
    modulus: float

    @property
    def yield_strain(self) -> float:
        """f_y / E_s."""
        return self.fy / self.modulus


@dataclass(frozen=True)
class Task:
    """A section that has to be reinforced on its tension side.

    Parameters
    ----------
    demand : float [kNm]
    block : Block
        Its compressed side.
    least_width : float [m]
        Width that the least steel goes by (9.6.1.2).
    cage : Cage
    strengths : Strengths
    also : function of (Group, Bending) -> bool
        What else the bars have to satisfy: their development.
    """

    demand: float
    block: Block
    least_width: float
    cage: Cage
    strengths: Strengths
    also: Callable[[Group, Bending], bool] = lambda group, state: True

    def state(self, group: Group, pressed: Group | None = None) -> Bending:
        """The section at its strength."""
        steel = Steel(group.area, group.depth, group.outermost)
        if pressed is not None:
            steel = steel._replace(area_c=pressed.area, depth_c=pressed.centroid)
        strengths = self.strengths
        return bending(self.block, steel, strengths.fc, strengths.fy, strengths.modulus)

    def least(self, group: Group) -> float:
        """Least tension steel [m2]. Source: ACI 318-19, 9.6.1.2."""
        return least_steel(self.strengths.fc, self.strengths.fy, self.least_width, group.depth)

    def ductile(self, state: Bending) -> bool:
        """Whether the section is tension-controlled.

        Source: ACI 318-19, Table 21.2.2 and 9.3.3.1.
        """
        return holds("ge", state.strain, self.strengths.yield_strain + 0.003)

    def strong(self, state: Bending) -> bool:
        """Whether the section carries its moment, tension-controlled. Source: 9.5.1.1, 9.3.3.1."""
        return self.ductile(state) and holds("ge", state.design, self.demand)

    def suits(self, group: Group, pressed: Group | None = None) -> bool:
        """Whether bars satisfy every clause that this choice looks at.

        Source: ACI 318-19, 25.2.1, 9.6.1.2, Table 24.3.2, 9.3.3.1, 9.5.1.1.
        """
        if not group.fits or group.area < self.least(group):
            return False
        clear_cover = self.cage.cover + self.cage.stirrup
        if group.spacing > crack_spacing(2 / 3 * self.strengths.fy, clear_cover):
            return False
        state = self.state(group, pressed)
        return self.strong(state) and self.also(group, state)


class Chosen(NamedTuple):
    """Tension bars, the compression bars they need, and whether all is satisfied."""

    group: Group
    pressed: Group | None
    satisfied: bool


def candidates(
    cage: Cage, sizes: Sequence[str], fewest: int, most: int, stock: Stock = OFFICE
) -> Iterable[Group]:
    """Groups of bars: one layer before two, few bars before many, thin before thick."""
    bars = [stock.bar(size) for size in sizes]
    for layers in (1, 2):
        for count in range(fewest, most + 1):
            for each in bars:
                group = arranged(count, each, cage)
                if len(group.layers) == layers and group.fits:
                    yield group


def choose_bars(
    task: Task, sizes: Sequence[str], fewest: int = 2, most: int = MOST_BARS, stock: Stock = OFFICE
) -> Chosen:
    """The fewest bars that satisfy the clauses, in one layer if possible; with compression bars if needed.

    Parameters
    ----------
    task : Task
    sizes : sequence of str
        Thinnest first.
    fewest, most : int
        How many bars there may be.
    stock : Stock
        The bars that the sizes name.

    Returns
    -------
    Chosen
        Where nothing satisfies, the strongest ductile group, marked so.

    Raises
    ------
    ValueError
        Not even two of the thinnest bars fit side by side.

    Examples
    --------
    >>> from calcpack.clauses.aci318.strength import PSI
    >>> cage = Cage(12 * INCH, 20 * INCH, 1.5 * INCH, 0.375 * INCH, 0.75 * INCH)
    >>> strengths = Strengths(4000 * PSI, 60000 * PSI, 60000 * PSI, 29e6 * PSI)
    >>> task = Task(200.0, Block(12 * INCH, 12 * INCH), 12 * INCH, cage, strengths)
    >>> choose_bars(task, MAIN["US"]).group.words
    '2 #10'
    """
    groups = list(candidates(task.cage, sizes, fewest, most, stock))
    if not groups:
        raise ValueError("no bars fit into the web")
    for group in groups:
        if task.suits(group):
            return Chosen(group, None, True)
    for pressed in groups:  # compression bars are no more than the tension bars they help
        for group in groups:
            if pressed.area <= group.area and task.suits(group, pressed):
                return Chosen(group, pressed, True)
    pairs: list[tuple[Group, Group | None]] = [(each, None) for each in groups]
    pairs += [(each, each) for each in groups]  # as many bars in compression as in tension
    ductile = [pair for pair in pairs if task.ductile(task.state(*pair))]
    strongest = max(ductile or pairs[:1], key=lambda pair: task.state(*pair).design)
    return Chosen(*strongest, False)


class Web(NamedTuple):
    """What shear is carried with, apart from the stirrups' spacing.

    Parameters
    ----------
    width, depth : float [m]
        Web width and effective depth.
    steel_ratio : float
    strengths : Strengths
    """

    width: float
    depth: float
    steel_ratio: float
    strengths: Strengths

    def enough(self, area: float, spacing: float) -> bool:
        """Whether stirrups of an area [m2] at a spacing [m] are no less than the least. Source: 9.6.3.4."""
        least = least_stirrups(self.strengths.fc, self.strengths.fyt, self.width)
        return holds("ge", area / spacing, least)

    def concrete(self, with_least: bool = True) -> float:
        """V_c [kN], of a web with the least stirrups or less. Source: ACI 318-19, Table 22.5.5.1."""
        fc = self.strengths.fc
        return shear_of_concrete(fc, self.width, self.depth, self.steel_ratio, with_least=with_least)

    def strength(self, area: float, spacing: float) -> float:
        """φ V_n with stirrups of an area [m2] at a spacing [m] [kN].

        Source: ACI 318-19, 22.5.1.1, 22.5.8.5.3, bounded by 22.5.1.2.
        """
        carried = area * self.strengths.fyt * self.depth / spacing
        carried = min(carried, 8 * root(self.strengths.fc) * self.width * self.depth)
        return PHI_SHEAR * (self.concrete(self.enough(area, spacing)) + carried)

    def without(self) -> float:
        """Shear up to which no stirrups are needed, φ λ √f'c b_w d (9.6.3.1) [kN]."""
        return PHI_SHEAR * root(self.strengths.fc) * self.width * self.depth

    def widest(self, demand: float, area: float) -> float:
        """Largest spacing that a shear [kN] allows stirrups of an area [m2] [m].

        Source: ACI 318-19, 22.5.8.5.3, 9.6.3.4, Table 9.7.6.2.2.
        """
        needed = demand / PHI_SHEAR - self.concrete()
        along, _ = stirrup_limits(self.strengths.fc, self.width, self.depth, needed)
        spacing = min(along, area / least_stirrups(self.strengths.fc, self.strengths.fyt, self.width))
        if needed > 0:
            spacing = min(spacing, area * self.strengths.fyt * self.depth / needed)
        return spacing


def rounded_down(length: float, step: float) -> float:
    """A length cut to whole steps, in the unit of both.

    Examples
    --------
    >>> round(rounded_down(0.2499, 0.025), 3), round(rounded_down(0.25, 0.025), 3)
    (0.225, 0.25)
    """
    return round(math.floor(length / step + 1e-9) * step, 12)


def legs_needed(web: Web, cage: Cage, demand: float) -> int:
    """How many legs a web needs.

    Parameters
    ----------
    web : Web
    cage : Cage
    demand : float [kN]
        V_u.

    Source: ACI 318-19, Table 9.7.6.2.2.
    """
    needed = demand / PHI_SHEAR - web.concrete()
    _, across = stirrup_limits(web.strengths.fc, web.width, web.depth, needed)
    room = cage.width - 2 * cage.cover - cage.stirrup
    return max(2, math.ceil(room / across - 1e-9) + 1)
