"""How much of a slab goes to which side: the dividing lines against a code table and against plate theory.

Dividing lines are a rule of practice, no theory of plates. These tests state how far they are from

BS8110  BS 8110-1:1997, Table 3.15, shear force coefficients for uniformly loaded rectangular panels supported
        on four sides with provision for torsion at corners, and Figure 3.10, by which the load v = β n lx
        stands on the middle three quarters of the supporting beam. From memory; that each column carries the
        whole load is tested below.
TIMO    S. Timoshenko, S. Woinowsky-Krieger: Theory of Plates and Shells, 2nd ed. 1959, Table 8 (simply
        supported rectangular plate under uniform load, ν = 0.3): deflection, reactions, corner force.
        From memory.
ROARK   Roark's Formulas for Stress and Strain, 7th ed., Table 11.4, case 1a: largest reaction γ. Read on
        the page.

Ratios are ours over theirs. A stated ratio is met to half a unit of its last place, both at its least and
its most, so that a change of the rule, better or worse, is noticed.
"""

from __future__ import annotations

import datetime
from functools import cache
from itertools import chain

import numpy as np
import pytest
from numpy.typing import NDArray

from calcpack.equivalent import KINDS, equivalents, loads_on, shape_of, under_panel
from calcpack.framing import Frame, frame
from calcpack.job.model import Basis, Beam, Column, Header, Job, Panel, Place, Point, Submission, Wall

HERE = Place(file="slab.toml")


def stands(
    panels: list[Panel], walls: list[Wall], beams: list[Beam], columns: list[Column], lines: str
) -> Frame:
    """Frame a floor."""
    return frame(
        Job(
            file="slab.toml",
            folder="",
            digest="",
            files={},
            job=Header(number="1", title="Slab", date=datetime.date(2026, 12, 1)),
            submission=Submission(),
            basis=Basis(dividing_lines=lines, beam_self_weight=False),  # type: ignore[arg-type]
            grid_x={},
            grid_y={},
            panels=tuple(panels),
            beams=tuple(beams),
            columns=tuple(columns),
            walls=tuple(walls),
        )
    )


def rectangle(mark: str, low: Point, high: Point, pressure: float = 1.0) -> Panel:
    corners = (low, (high[0], low[1]), high, (low[0], high[1]))
    names = tuple(f"({x:g}, {y:g})" for x, y in corners)
    return Panel(
        mark=mark, corners=corners, corner_names=names, live=pressure, transfer="two-way", place=HERE
    )


def wall(mark: str, start: Point, end: Point) -> Wall:
    return Wall(mark=mark, line=(start, end), point_names=(str(start), str(end)), place=HERE)


@cache
def shares(ratio: float, continuous: str, lines: str) -> tuple[float, ...]:
    """Parts of a panel 1 by ``ratio`` on its sides in the order long, long, short, short.

    ``continuous``: which of them have a slab on the other side, as "1100".
    """
    beyond = 2.0
    sides: list[tuple[Point, Point]] = [
        ((0, 0), (ratio, 0)),
        ((0, 1), (ratio, 1)),
        ((0, 0), (0, 1)),
        ((ratio, 0), (ratio, 1)),
    ]
    next_door: list[tuple[Point, Point]] = [
        ((0, -beyond), (ratio, 0)),
        ((0, 1), (ratio, 1 + beyond)),
        ((-beyond, 0), (0, 1)),
        ((ratio, 0), (ratio + beyond, 1)),
    ]
    panels = [rectangle("P", (0, 0), (ratio, 1))]
    walls = [wall(f"side {number}", *side) for number, side in enumerate(sides)]
    for number, (low, high) in enumerate(next_door):
        if continuous[number] == "0":
            continue
        panels.append(rectangle(f"N{number}", low, high))
        outline = [low, (high[0], low[1]), high, (low[0], high[1])]
        for k in range(4):
            ends = (outline[k], outline[(k + 1) % 4])
            if set(ends) != set(sides[number]):
                walls.append(wall(f"N{number} {k}", *ends))
    found = stands(panels, walls, [], [], lines).panels["P"]
    area = {share.carrier: share.area for share in found.shares}
    return tuple(area[f"side {number}"] for number in range(4))


# --- BS 8110-1:1997, Table 3.15 ----------------------------------------------------------------------

RATIOS = (1.0, 1.1, 1.2, 1.3, 1.4, 1.5, 1.75, 2.0)
ALIKE = (0.33, 0.36, 0.39, 0.41, 0.43, 0.45, 0.48, 0.50)
# continuous sides (long, long, short, short): β_vx of a continuous and a discontinuous long edge for each
# ratio, β_vy of a continuous and a discontinuous short edge
TABLE_3_15 = {
    "1111": (ALIKE, None, 0.33, None),
    "1110": ((0.36, 0.39, 0.42, 0.44, 0.45, 0.47, 0.50, 0.52), None, 0.36, 0.24),
    "1011": (
        (0.36, 0.40, 0.44, 0.47, 0.49, 0.51, 0.55, 0.59),
        (0.24, 0.27, 0.29, 0.31, 0.32, 0.34, 0.36, 0.38),
        0.36,
        None,
    ),
    "1010": (
        (0.40, 0.44, 0.47, 0.50, 0.52, 0.54, 0.57, 0.60),
        (0.26, 0.29, 0.31, 0.33, 0.34, 0.35, 0.38, 0.40),
        0.40,
        0.26,
    ),
    "1100": ((0.40, 0.43, 0.45, 0.47, 0.48, 0.49, 0.52, 0.54), None, None, 0.26),
    "0011": (None, (0.26, 0.30, 0.33, 0.36, 0.38, 0.40, 0.44, 0.47), 0.40, None),
    "1000": (
        (0.45, 0.48, 0.51, 0.53, 0.55, 0.57, 0.60, 0.63),
        (0.30, 0.32, 0.34, 0.35, 0.36, 0.37, 0.39, 0.41),
        None,
        0.29,
    ),
    "0010": (None, (0.29, 0.33, 0.36, 0.38, 0.40, 0.42, 0.45, 0.48), 0.45, 0.30),
    "0000": (None, ALIKE, None, 0.33),
}


def tabulated(continuous: str, column: int) -> tuple[float, ...]:
    """What the table sends to each side, in parts of q lx²: β times three quarters of the side's length."""
    long_continuous, long_free, short_continuous, short_free = TABLE_3_15[continuous]
    loads = []
    for number, held in enumerate(continuous):
        if number < 2:
            row = long_continuous if held == "1" else long_free
            assert row is not None
            loads.append(row[column] * 0.75 * RATIOS[column])
        else:
            value = short_continuous if held == "1" else short_free
            assert value is not None
            loads.append(value * 0.75)
    return tuple(loads)


def extremes(continuous: str, lines: str, held: str) -> tuple[float, float]:
    """Least and most of our share over the table's, over all ratios, on (dis)continuous sides."""
    ratios = [
        ours / theirs
        for column, ratio in enumerate(RATIOS)
        for ours, theirs, kind in zip(
            shares(ratio, continuous, lines), tabulated(continuous, column), continuous, strict=True
        )
        if kind == held
    ]
    return min(ratios), max(ratios)


def met(found: tuple[float, float], stated: tuple[float, float]) -> bool:
    return all(abs(a - b) <= 0.0051 for a, b in zip(found, stated, strict=True))


@pytest.mark.parametrize("continuous", TABLE_3_15)
def test_the_table_carries_the_whole_load(continuous: str) -> None:
    """Each column adds up to the load within the rounding of its coefficients: a misprint would show."""
    for column, ratio in enumerate(RATIOS):
        total = sum(tabulated(continuous, column))
        rounding = 0.005 * 0.75 * (2 * ratio + 2)
        assert abs(total - ratio) <= rounding
        for misprint in (0.05, -0.05):  # in the coefficient of one long side
            assert abs(total + misprint * 0.75 * ratio - ratio) > rounding


@pytest.mark.parametrize("continuous", ["1111", "0000"])
def test_sides_held_alike_agree_with_the_table(continuous: str) -> None:
    """45° lines give the table's coefficients to one unit of their last place."""
    for lines in ("45", "60 at continuous edges"):
        for column, ratio in enumerate(RATIOS):
            coefficients = [
                share / (0.75 * length)
                for share, length in zip(shares(ratio, continuous, lines), (ratio, ratio, 1, 1), strict=True)
            ]
            printed = [
                load / (0.75 * length)
                for load, length in zip(tabulated(continuous, column), (ratio, ratio, 1, 1), strict=True)
            ]
            assert all(abs(a - b) < 0.0095 for a, b in zip(coefficients, printed, strict=True))
            assert not all(abs(a - b - 0.02) < 0.0095 for a, b in zip(coefficients, printed, strict=True))
        assert met(extremes(continuous, lines, continuous[0]), (0.99, 1.01))


@pytest.mark.parametrize(
    ("continuous", "on_continuous", "on_others"),
    [
        ("1110", (0.93, 0.96), (1.39, 1.39)),
        ("1011", (0.85, 0.93), (1.31, 1.39)),
        ("1010", (0.82, 0.84), (1.24, 1.28)),
        ("1100", (0.83, 0.93), (1.28, 1.28)),
        ("0011", (0.83, 0.83), (1.06, 1.28)),
        ("1000", (0.74, 0.79), (1.11, 1.22)),
        ("0010", (0.74, 0.74), (1.04, 1.15)),
    ],
)
def test_45_degrees_where_sides_are_held_differently(
    continuous: str, on_continuous: tuple[float, float], on_others: tuple[float, float]
) -> None:
    """The table gives a continuous side half as much again as a discontinuous one; 45° lines do not.

    They leave continuous sides up to 26 % short of the table, and bring the others up to 39 % more.
    """
    assert met(extremes(continuous, "45", "1"), on_continuous)
    assert met(extremes(continuous, "45", "0"), on_others)


@pytest.mark.parametrize(
    ("continuous", "on_continuous", "on_others"),
    [
        ("1110", (0.93, 1.12), (0.80, 0.80)),
        ("1011", (0.91, 1.17), (0.78, 0.88)),
        ("1010", (1.04, 1.06), (0.91, 0.94)),
        ("1100", (1.06, 1.19), (0.74, 0.74)),
        ("0011", (1.19, 1.44), (0.70, 0.80)),
        ("1000", (1.10, 1.19), (0.84, 1.03)),
        ("0010", (1.19, 1.28), (0.81, 1.11)),
    ],
)
def test_60_degrees_where_sides_are_held_differently(
    continuous: str, on_continuous: tuple[float, float], on_others: tuple[float, float]
) -> None:
    """60° lines go further than the table.

    Continuous sides get from 9 % less to 44 % more, the others from 11 % more down to 30 % less.
    """
    assert met(extremes(continuous, "60 at continuous edges", "1"), on_continuous)
    assert met(extremes(continuous, "60 at continuous edges", "0"), on_others)


# --- the elastic plate -------------------------------------------------------------------------------


class Plate:
    """A simply supported plate 1 by ``ratio`` under unit load: M. Lévy's single series.

    Each odd term m of the deflection is sin(k x) (4/(π m k⁴)) (1 - A cosh k y + B k y sinh k y), k = m π, x
    across the short side, y along the long one from its middle. Reactions are Kirchhoff's, with the
    twisting moments' part that leaves a force at each corner.
    """

    def __init__(self, ratio: float, poisson: float = 0.3, terms: int = 2000) -> None:
        self.ratio, self.poisson = ratio, poisson
        m = np.arange(1.0, 2 * terms, 2.0)
        self.k = m * np.pi
        self.half = self.k * ratio / 2
        self.size = 4 / (np.pi * m) / self.k**4
        self.tanh = np.tanh(self.half)
        self.a, self.b = (self.half * self.tanh + 2) / 2, 0.5  # both over cosh(half)
        self.sign = np.where(m % 4 == 1, 1.0, -1.0)  # sin(m π/2)

    def _hyperbolic(self, y: float) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
        """cosh and sinh of k y over cosh(half), without overflow."""
        up = np.exp(self.k * (y - self.ratio / 2))
        down = np.exp(-self.k * (y + self.ratio / 2))
        scale = 1 + np.exp(-2 * self.half)
        return (up + down) / scale, (up - down) / scale

    @property
    def deflection(self) -> float:
        """In the middle, over q a⁴/D."""
        cosh, _ = self._hyperbolic(0.0)
        return float(np.sum(self.sign * self.size * (1 - self.a * cosh)))

    def on_long(self, y: float) -> float:
        """Reaction at a place of a long side, over q a; the load's own series is summed exactly to a half."""
        cosh, sinh = self._hyperbolic(y)
        even, odd = self.a * cosh, self.b * sinh * self.k * y
        terms = odd - even + (2 - self.poisson) * (even - 2 * self.b * cosh - odd)
        return 0.5 + float(np.sum(self.size * self.k**3 * terms))

    @property
    def _short_terms(self) -> NDArray[np.float64]:
        first = self.size * self.k * (-self.a * self.tanh + self.b * (self.tanh + self.half))
        third = self.size * self.k**3 * (-self.a * self.tanh + self.b * (3 * self.tanh + self.half))
        return np.asarray(third - (2 - self.poisson) * self.k**2 * first)

    def on_short(self, x: float) -> float:
        """Reaction at a place of a short side, over q a."""
        return float(np.sum(self._short_terms * np.sin(self.k * x)))

    @property
    def corner(self) -> float:
        """The force that holds each corner down, over q a²."""
        slope = self.size * self.k * (-self.a * self.tanh + self.b * (self.tanh + self.half))
        return float(abs(2 * (1 - self.poisson) * np.sum(self.k * slope)))

    @property
    def sides(self) -> tuple[float, float]:
        """All that one long and one short side give, over q a², integrated term by term."""
        cosh, odd = 2 * self.tanh / self.k, 2 / self.k * (self.half - self.tanh)
        even, odd = self.a * cosh, self.b * odd
        terms = odd - even + (2 - self.poisson) * (even - 2 * self.b * cosh - odd)
        long = 0.5 * self.ratio + float(np.sum(self.size * self.k**3 * terms))
        return long, float(np.sum(self._short_terms * 2 / self.k))

    def beam_moments(self) -> tuple[float, float]:
        """Largest moment of a simple beam under a long and a short side, over q a³."""
        places = (np.arange(400) + 0.5) / 400
        arms = np.minimum(places, 1 - places) / 2
        long = [self.on_long((x - 0.5) * self.ratio) for x in places]
        short = [self.on_short(x) for x in places]
        return float(np.mean(arms * long)) * self.ratio**2, float(np.mean(arms * short))


@cache
def plate(ratio: float) -> Plate:
    return Plate(ratio)


@pytest.mark.parametrize(
    ("ratio", "deflection", "long", "short", "corner"),
    [
        (1.0, "0.00406", 0.420, 0.420, 0.065),
        (1.5, "0.00772", 0.486, 0.480, 0.085),
        (2.0, "0.01013", 0.503, 0.496, 0.092),
    ],
)
def test_the_plate_is_timoshenkos(
    ratio: float, deflection: str, long: float, short: float, corner: float
) -> None:
    """Reactions to half a unit of the last place; the corner force to one (0.0859 is printed 0.085)."""
    found = plate(ratio)
    assert abs(found.deflection - float(deflection)) <= 0.5e-5
    assert abs(found.on_long(0.0) - long) <= 0.5e-3
    assert abs(found.on_short(0.5) - short) <= 0.5e-3
    assert abs(found.corner - corner) <= 1e-3
    other = Plate(ratio, poisson=0.2)  # what the table is not for
    assert abs(other.on_long(0.0) - long) > 0.5e-3
    assert abs(other.corner - corner) > 1e-3


@pytest.mark.parametrize(
    ("ratio", "reaction"),
    [
        (1.0, 0.420),
        (1.2, 0.455),
        (1.4, 0.478),
        (1.6, 0.491),
        (1.8, 0.499),
        (2.0, 0.503),
        (3.0, 0.505),
        (4.0, 0.502),
    ],
)
def test_the_largest_reaction_is_roarks(ratio: float, reaction: float) -> None:
    """To one unit of the last place: 0.4558 is printed 0.455."""
    assert abs(plate(ratio).on_long(0.0) - reaction) <= 1e-3
    assert abs(plate(ratio * 1.1 if ratio < 2 else ratio / 2).on_long(0.0) - reaction) > 1e-3


@pytest.mark.parametrize("ratio", [1.0, 1.2, 1.5, 2.0, 3.0])
def test_reactions_less_corner_forces_are_the_load(ratio: float) -> None:
    long, short = plate(ratio).sides
    assert abs(2 * long + 2 * short - 4 * plate(ratio).corner - ratio) < 1e-12
    assert 2 * long + 2 * short > 1.12 * ratio  # without the corners' holding down nothing balances


@pytest.mark.parametrize("ratio", [1.0, 1.5, 2.0])
def test_the_sides_are_the_integrals_of_the_reactions(ratio: float) -> None:
    nodes, weights = np.polynomial.legendre.leggauss(60)
    found = plate(ratio)
    long = sum(w * found.on_long(x * ratio / 2) for x, w in zip(nodes, weights, strict=True)) * ratio / 2
    short = sum(w * found.on_short((x + 1) / 2) for x, w in zip(nodes, weights, strict=True)) / 2
    assert (long, short) == pytest.approx(found.sides, abs=1e-3)


@pytest.mark.parametrize(
    ("ratio", "long", "short"),
    [(1.0, 1.000, 1.000), (1.2, 1.029, 0.962), (1.5, 1.035, 0.937), (2.0, 1.028, 0.925), (3.0, 1.017, 0.921)],
)
def test_45_degrees_share_the_load_nearly_as_the_plate_does(ratio: float, long: float, short: float) -> None:
    """Of what arrives on a side, the corners' holding down taken off half and half.

    By the rule long sides get up to 3.5 % more, short sides up to 8 % less.
    """
    by_plate = [side - plate(ratio).corner for side in plate(ratio).sides]
    by_rule = shares(ratio, "0000", "45")
    assert by_rule[0] / by_plate[0] == pytest.approx(long, abs=0.00051)
    assert by_rule[2] / by_plate[1] == pytest.approx(short, abs=0.00051)


@pytest.mark.parametrize(
    ("ratio", "long", "short"),
    [(1.0, 0.893, 0.893), (1.2, 0.941, 0.834), (1.5, 0.965, 0.792), (2.0, 0.977, 0.768), (3.0, 0.987, 0.760)],
)
def test_45_degrees_are_short_of_the_elastic_plate_in_the_beams_moment(
    ratio: float, long: float, short: float
) -> None:
    """A limit of the rule worth knowing.

    The elastic plate on unyielding sides presses on them with more than its load and pulls back at the held
    corners, which spares no beam any moment: under a long side a simple beam would bend 1 to 12 % more, under
    a short one 12 to 32 % more than by trapezoid and triangle. Real beams yield and shed load; the rule
    counts on that.
    """
    by_plate = plate(ratio).beam_moments()
    moments = [
        under_panel("moment", 1.0, 1.0, ratio, under_long=True) * ratio**2 / 8,
        under_panel("moment", 1.0, 1.0, ratio, under_long=False) / 8,
    ]
    assert moments[0] / by_plate[0] == pytest.approx(long, abs=0.00051)
    assert moments[1] / by_plate[1] == pytest.approx(short, abs=0.00051)


def test_the_shape_of_the_reaction_against_the_trapezoid() -> None:
    """Along the long side of a panel 1 by 2, over q a: the plate is fuller than the ramp near the corners."""
    stated = {0.1: (0.224, 0.1), 0.25: (0.366, 0.25), 0.5: (0.464, 0.5), 1.0: (0.503, 0.5)}
    for place, (by_plate, by_rule) in stated.items():
        assert plate(2.0).on_long(place - 1.0) == pytest.approx(by_plate, abs=0.00051)
        assert min(place, 0.5) == by_rule


# --- from a framed floor to the equivalent load ------------------------------------------------------


@pytest.mark.parametrize(("short", "long"), [(4.5, 6.0), (4.0, 4.0), (3.6, 7.0)])
def test_beams_round_a_panel_get_the_shapes_and_the_published_loads(short: float, long: float) -> None:
    corners: list[Point] = [(0, 0), (long, 0), (long, short), (0, short)]
    beams = [
        Beam(
            mark=f"B{k}",
            points=(corners[k], corners[(k + 1) % 4]),
            point_names=("start", "end"),
            equivalent="moment",
            design_loads="actual",
            place=HERE,
        )
        for k in range(4)
    ]
    columns = [
        Column(mark=f"C{k}", at=corner, point_name=str(corner), place=HERE)
        for k, corner in enumerate(corners)
    ]
    floor = stands([rectangle("P", (0, 0), (long, short), 5.5)], [], beams, columns, "45")
    for mark, span in (("B0", long), ("B1", short), ("B2", long), ("B3", short)):
        loads = loads_on(floor.beams[mark].loads["live"], 0, span)
        shape = shape_of(span, loads)
        assert shape.kind == ("trapezoid" if span > short else "triangle")
        assert shape.peak == pytest.approx(5.5 * short / 2, rel=1e-12)
        assert shape.side_ratio == pytest.approx(short / span, rel=1e-12)
        found = equivalents(span, loads)
        for kind in KINDS:
            expected = under_panel(kind, 5.5, short, long, under_long=span > short)
            assert found.of(kind) == pytest.approx(expected, rel=1e-12)
    assert set(chain.from_iterable(beam.panels for beam in floor.beams.values())) == {"P"}
