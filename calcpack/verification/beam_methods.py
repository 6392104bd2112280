"""Beams by other methods: direct stiffness, in fractions too, collocation and singularity functions."""

from __future__ import annotations

import random
from collections.abc import Iterator, Sequence
from fractions import Fraction
from itertools import pairwise
from typing import Any

import numpy as np
import scipy.integrate
import sympy
from numpy.typing import ArrayLike
from sympy.physics.continuum_mechanics.beam import Beam

from calcpack.statics import BeamLine, LineLoad, Load, PointLoad, analyse
from calcpack.statics.stiffness import stiffness_check
from calcpack.verification.tables import Method

Found = tuple[ArrayLike, ArrayLike, ArrayLike, ArrayLike]
"""Nodes, deflections, rotations, reactions by another method."""


# ---- beams at random -------------------------------------------------------------------------------


def random_beam(seed: int, most_spans: int = 6) -> tuple[BeamLine, list[Load]]:
    """A beam of every kind, on a grid of centimetres so that its numbers are exact decimals."""
    draw = random.Random(seed)

    def length() -> int:
        return draw.randint(80, 900)

    first, last = draw.choice(["free", "pinned", "fixed"]), draw.choice(["free", "pinned", "fixed"])
    places = [length() if first == "free" else 0]
    for _ in range(draw.randint(1, most_spans)):
        places.append(places[-1] + length())
    total = places[-1] + (length() if last == "free" else 0)
    if draw.random() < 0.1:
        places, first, last = [0], "fixed", "free"
    line = BeamLine(total / 100, tuple(place / 100 for place in places), first == "fixed", last == "fixed")
    loads: list[Load] = []
    for _ in range(draw.randint(1, 6)):
        start, end = sorted(draw.sample(range(total + 1), 2))
        loads.append(
            LineLoad(start / 100, end / 100, draw.randint(-200, 900) / 10, draw.randint(0, 900) / 10)
        )
        at = draw.choice([0, total, *places, draw.randint(0, total)])
        loads.append(PointLoad(at / 100, draw.randint(-100, 900) / 10))
    return line, loads


def seeds(method: Method) -> range:
    """The seeds of a method's random beams."""
    return range(method.first, method.first + method.cases)


def apart(values: ArrayLike, others: ArrayLike) -> float:
    """Largest difference, as a part of the largest value."""
    ours, theirs = np.asarray(values, dtype=float), np.asarray(others, dtype=float)
    return float(np.abs(ours - theirs).max() / max(np.abs(theirs).max(), 1e-9))


def worst_difference(line: BeamLine, loads: Sequence[Load], found: Found) -> float:
    """Of the analysis to what another method found: deflections, rotations and reactions."""
    nodes, deflections, rotations, reactions = found
    response = analyse(line, [list(loads)])
    places = np.asarray(nodes, dtype=float)
    return max(
        apart(response.curve("deflection").values(places), deflections),
        apart(response.curve("rotation").values(places), rotations),
        apart(response.reactions[0], reactions),
    )


# ---- direct stiffness ------------------------------------------------------------------------------


def direct_stiffness(line: BeamLine, loads: Sequence[Load]) -> Found:
    """By the package's own second solver."""
    other = stiffness_check(line, list(loads))
    return other.nodes, other.deflections, other.rotations, other.reactions


def exact(number: float) -> Fraction:
    """The decimal meant."""
    return Fraction(round(number * 1000), 1000)


def _elements(
    nodes: Sequence[Fraction], loads: Sequence[Load]
) -> tuple[list[list[Fraction]], list[Fraction]]:
    """Stiffness and nodal forces: (7a + 3b)L/20 and (3a + 2b)L²/60 at the end with intensity a."""
    size = 2 * len(nodes)
    matrix = [[Fraction(0)] * size for _ in range(size)]
    acting = [Fraction(0)] * size
    for load in loads:
        if isinstance(load, PointLoad):
            acting[2 * nodes.index(exact(load.at))] += exact(load.force)
    for number, (left, right) in enumerate(pairwise(nodes)):
        h = right - left
        element = (
            (12, 6 * h, -12, 6 * h), (6 * h, 4 * h * h, -6 * h, 2 * h * h),
            (-12, -6 * h, 12, -6 * h), (6 * h, 2 * h * h, -6 * h, 4 * h * h),
        )  # fmt: skip
        for row in range(4):
            for column in range(4):
                matrix[2 * number + row][2 * number + column] += element[row][column] / h**3
        for load in loads:
            if isinstance(load, PointLoad) or exact(load.start) > left or exact(load.end) < right:
                continue
            start, end, first, last = map(exact, (load.start, load.end, load.first, load.last))
            a, b = (first + (last - first) * (x - start) / (end - start) for x in (left, right))
            acting[2 * number] += (7 * a + 3 * b) * h / 20
            acting[2 * number + 1] += (3 * a + 2 * b) * h * h / 60
            acting[2 * number + 2] += (3 * a + 7 * b) * h / 20
            acting[2 * number + 3] -= (2 * a + 3 * b) * h * h / 60
    return matrix, acting


def _eliminated(rows: list[list[Fraction]]) -> list[Fraction]:
    """Solve a banded system; freedoms of neighbouring nodes only are coupled."""
    band = 6
    for pivot in range(len(rows)):
        for below in range(pivot + 1, min(pivot + band, len(rows))):
            factor = rows[below][pivot] / rows[pivot][pivot]
            if factor:
                for column in (*range(pivot, min(pivot + band, len(rows))), len(rows)):
                    rows[below][column] -= factor * rows[pivot][column]
    solved = [Fraction(0)] * len(rows)
    for pivot in reversed(range(len(rows))):
        known = sum(rows[pivot][j] * solved[j] for j in range(pivot + 1, min(pivot + band, len(rows))))
        solved[pivot] = (rows[pivot][-1] - known) / rows[pivot][pivot]
    return solved


def rational_stiffness(line: BeamLine, loads: Sequence[Load]) -> Found:
    """Deflections and rotations at all breaks, and reactions, without rounding.

    Nodes at all breaks, so that each element has one linear load, whose nodal forces are the fixed end ones.
    """
    places = {Fraction(0), exact(line.length), *map(exact, line.supports)}
    for load in loads:
        places |= {exact(load.at)} if isinstance(load, PointLoad) else {exact(load.start), exact(load.end)}
    nodes = sorted(places)
    size = 2 * len(nodes)
    matrix, acting = _elements(nodes, loads)
    supported = [2 * nodes.index(exact(place)) for place in line.supports]
    held = {*supported, *([1] if line.fixed_start else []), *([size - 1] if line.fixed_end else [])}
    free = [number for number in range(size) if number not in held]
    solved = _eliminated([[matrix[i][j] for j in free] + [acting[i]] for i in free])
    moved = [Fraction(0)] * size
    for number, value in zip(free, solved, strict=True):
        moved[number] = value
    reactions = [acting[i] - sum(matrix[i][j] * moved[j] for j in range(size)) for i in supported]
    sinks, turns = moved[0::2], moved[1::2]
    return (
        [float(node) for node in nodes],
        [float(sink) for sink in sinks],
        [-float(turn) for turn in turns],
        [float(reaction) for reaction in reactions],
    )


# ---- collocation of the differential equation: SciPy -----------------------------------------------


def _breaks(line: BeamLine, loads: Sequence[Load]) -> np.ndarray[Any, Any]:
    places = {0.0, line.length, *line.supports}
    for load in loads:
        places |= {load.at} if isinstance(load, PointLoad) else {load.start, load.end}
    return np.array(sorted(places))


def _standing(loads: Sequence[Load], node: float) -> float:
    return sum(load.force for load in loads if isinstance(load, PointLoad) and load.at == node)


def collocation(line: BeamLine, loads: Sequence[Load]) -> Found:
    """All pieces stretched to 0..1 and solved side by side, coupled by their ends.

    Unknowns of a piece: deflection, slope dv/dx, moment, shear. Point loads and reactions make the
    shear jump; over a support the jump is unknown and the deflection known instead.
    """
    nodes = _breaks(line, loads)
    widths, count = np.diff(nodes), len(nodes) - 1

    def slopes(t: Any, y: Any) -> Any:
        _, turn, moment, shear = y.reshape(4, count, -1)
        x = nodes[:-1, None] + widths[:, None] * t
        pressing = np.zeros_like(x)
        for load in loads:
            if isinstance(load, LineLoad):
                there = (nodes[:-1] >= load.start) & (nodes[1:] <= load.end)
                along = (x - load.start) / (load.end - load.start)
                pressing += np.where(there[:, None], load.first + (load.last - load.first) * along, 0.0)
        h = widths[:, None]
        return np.concatenate([turn * h, -moment * h, shear * h, -pressing * h])

    def conditions(left: Any, right: Any) -> Any:
        left, right = left.reshape(4, count), right.reshape(4, count)
        unmet = []
        for number, node in enumerate(nodes):
            standing = _standing(loads, node)
            before = right[:, number - 1] if number else None
            after = left[:, number] if number < count else None
            held = node in line.supports
            if before is not None and after is not None:
                unmet += [after[0] - before[0], after[1] - before[1], after[2] - before[2]]
                unmet.append(after[0] if held else after[3] - before[3] + standing)
                continue
            end = after if before is None else before
            fixed = line.fixed_start if before is None else line.fixed_end
            assert end is not None
            unmet.append(end[1] if fixed else end[2])
            unmet.append(end[0] if held else end[3] + (standing if before is None else -standing))
        return np.array(unmet)

    grid = np.linspace(0.0, 1.0, 41)
    solved = scipy.integrate.solve_bvp(slopes, conditions, grid, np.zeros((4 * count, 41)), tol=1e-6)
    assert solved.success
    start, end = solved.sol(0.0).reshape(4, count), solved.sol(1.0).reshape(4, count)
    reactions = []
    for place in line.supports:
        number = int(np.argmin(np.abs(nodes - place)))
        before = end[3, number - 1] if number else 0.0
        after = start[3, number] if number < count else 0.0
        reactions.append(after - before + _standing(loads, place))
    return nodes, np.append(start[0], end[0, -1]), -np.append(start[1], end[1, -1]), reactions


BEAMS: tuple[tuple[BeamLine, tuple[Load, ...]], ...] = (
    (BeamLine(5.0, (0.0, 5.0)), (LineLoad(1.0, 4.0, 2.0, 9.0), PointLoad(4.0, 3.0))),
    (BeamLine(5.0, (0.0, 5.0), fixed_end=True), (LineLoad(0.0, 2.0, 0.0, 8.0), LineLoad(2.0, 5.0, 8.0, 1.0))),
    (BeamLine(6.0, (0.0, 6.0), True, True), (LineLoad(2.0, 5.0, 4.0, 4.0), PointLoad(2.0, -7.0))),
    (BeamLine(3.0, (0.0,), fixed_start=True), (LineLoad(1.0, 3.0, 4.0, 2.0), PointLoad(3.0, 5.0))),
    (
        BeamLine(9.5, (1.5, 5.0, 9.5)),
        (LineLoad(0.0, 5.0, 3.0, 6.0), PointLoad(5.0, 8.0), PointLoad(0.0, 2.0)),
    ),
)
"""A simple, a propped, a fixed, a cantilever and a continuous beam."""


# ---- singularity functions: SymPy ------------------------------------------------------------------


def _continuous() -> tuple[Any, list[Any], list[Any], BeamLine, list[Load]]:
    beam = Beam(8, 1, 1)
    unknown = [beam.apply_support(place, "roller") for place in (0, 4, 8)]
    beam.apply_load(10, 0, 0, end=3)
    beam.apply_load(sympy.Rational(3), 1, 1, end=3)
    beam.apply_load(5, 6, -1)
    loads: list[Load] = [LineLoad(0, 3, 10, 10), LineLoad(1, 3, 0, 6), PointLoad(6, 5)]
    return beam, unknown, [], BeamLine(8.0, (0.0, 4.0, 8.0)), loads


def _propped_with_overhang() -> tuple[Any, list[Any], list[Any], BeamLine, list[Load]]:
    beam = Beam(7, 1, 1)
    reaction, moment = beam.apply_support(0, "fixed")
    unknown = [reaction, beam.apply_support(5, "roller")]
    beam.apply_load(6, 2, 0, end=7)
    beam.apply_load(4, 7, -1)
    loads: list[Load] = [LineLoad(2, 7, 6, 6), PointLoad(7, 4)]
    return beam, unknown, [moment], BeamLine(7.0, (0.0, 5.0), fixed_start=True), loads


def symbolic_pairs(number: int) -> Iterator[tuple[float, float]]:
    """Ours and SymPy's figures of one of the two beams.

    With load down as positive SymPy's reactions come out negative, the rest as here.
    """
    beam, unknown, moments, line, loads = (_continuous, _propped_with_overhang)[number]()
    beam.solve_for_reaction_loads(*unknown, *moments)
    x = beam.variable
    response = analyse(line, [loads])
    for ours, symbol in zip(response.reactions[0], unknown, strict=True):
        yield float(ours), -float(beam.reaction_loads[symbol])
    for quantity, expression, sign in (
        ("shear", beam.shear_force(), 1),
        ("moment", beam.bending_moment(), 1),
        ("rotation", beam.slope(), -1),
        ("deflection", beam.deflection(), 1),
    ):
        for place in (sympy.Rational(1, 2), sympy.Rational(5, 2), sympy.Rational(13, 2)):
            ours = response.curve(quantity).at(float(place))  # type: ignore[arg-type]
            yield ours, sign * float(expression.subs(x, place))
