"""A whole floor worked out a second time, by other methods and with no code of the package.

``second_road_job`` reads the job with tomllib, csv and openpyxl and unit factors of its own;
``second_road_plan`` measures what drains to an edge; ``second_road_elements`` solves beams by finite
elements and finds worst placements by trying every subset, or point by point where there are too many.
Here every load, and the load of every placement for itself, is carried down through the floor.

Units: m, kN, kN/m, kPa, kNm; sagging, downward loads and deflections, upward reactions positive.
"""

from __future__ import annotations

import math
from collections import defaultdict
from functools import cached_property
from itertools import pairwise
from typing import Any

import numpy as np
from second_road_elements import Solution, polynomial, worst, worst_reactions
from second_road_job import CASES, MOVABLE, SAME, Bar, Floor, Force, Load, Slab, Spread, shoelace
from second_road_plan import Cell, Side, shares

Key = tuple[str, ...]  # ("all", case) or ("placed", case, beam, number of the span)


def divided(load: Load, stops: list[float]) -> dict[int, Load]:
    """A load's parts by the span they stand on; a force on a support with the span that ends there."""
    if isinstance(load, Force):
        return {max(0, int(np.searchsorted(np.array(stops) + 1e-9, load.at)) - 1): load}
    parts = {k: load.part(a, b) for k, (a, b) in enumerate(pairwise(stops))}
    return {k: part for k, part in parts.items() if part and part.end - part.start > 1e-9}


class Beam:
    """A beam of the floor with all that has come down on it."""

    def __init__(self, bar: Bar, loads: dict[Key, list[Load]]) -> None:
        self.bar = bar
        self.loads = {key: each for key, each in loads.items() if each}
        self.supports = [bar.knots[k] for k in bar.held]
        self.stops = sorted({0.0, bar.length, *self.supports})
        self.keys = list(self.loads)
        self.solution = Solution(bar.length, self.supports, bar.fixed, [self.loads[key] for key in self.keys])

    @property
    def cases(self) -> list[str]:
        return [case for case in CASES if self.of(case)]

    def of(self, case: str) -> list[Load]:
        """A case's loads, every span loaded."""
        return self.loads.get(("all", case), [])

    def reactions(self, key: Key) -> np.ndarray:
        if key not in self.keys:
            return np.zeros(len(self.supports))
        return self.solution.reactions[self.keys.index(key)]

    @cached_property
    def alone(self) -> list[dict[str, list[Load]] | None]:
        """Each span's loads by case, without forces over its supports; None for an overhang."""
        found: list[dict[str, list[Load]] | None] = []
        for a, b in pairwise(self.stops):
            if not {a, b} <= set(self.supports):
                found.append(None)
                continue
            found.append({case: self.inside(case, a, b) for case in self.cases})
        return found

    def inside(self, case: str, a: float, b: float) -> list[Load]:
        kept: list[Load] = []
        for load in self.of(case):
            if isinstance(load, Force):
                if a + SAME < load.at < b - SAME:
                    kept.append(load.moved(-a))
            elif (part := load.part(a, b)) and part.end - part.start > SAME:
                kept.append(part.moved(-a))
        return kept

    @cached_property
    def equivalents(self) -> list[dict[str, dict[str, float]] | None]:
        """Uniform loads that do to a span alone what its loads do, by trying 1 kN/m for comparison."""
        found: list[dict[str, dict[str, float]] | None] = []
        for (a, b), loads in zip(pairwise(self.stops), self.alone, strict=True):
            if loads is None:
                found.append(None)
                continue
            length = b - a
            sets = [[Spread(0.0, length, 1.0, 1.0, "")], *loads.values()]
            pinned = Solution(length, [0.0, length], (False, False), sets)
            built_in = Solution(length, [0.0, length], (True, True), sets)
            rows_ = []
            for k, each in enumerate(sets):
                one = np.eye(len(sets))[k]
                largest = [
                    max((worst(pinned, quantity, one, 0 * one, sign).value for sign in (1.0, -1.0)), key=abs)
                    for quantity in ("moment", "deflection")
                ]
                rows_.append(
                    [
                        max(pinned.reactions[k], key=abs),
                        *largest,
                        -max(built_in.end_moments[k], key=abs),
                        sum(load.total for load in each),
                    ]
                )
            names = ("shear", "moment", "deflection", "fixed_end_moment", "total")
            found.append(
                {
                    case: {name: float(v / unit) for name, v, unit in zip(names, row, rows_[0], strict=True)}
                    for case, row in zip(loads, rows_[1:], strict=True)
                }
            )
        return found

    @cached_property
    def design(self) -> tuple[Solution, list[str], list[bool]]:
        """The sets the design rests on: solved; the case of each; which of them can be placed."""
        if self.bar.design_loads == "actual":
            keys = [key for key in self.keys if (key[0] == "placed") == (key[1] in MOVABLE)]
            sets = [self.loads[key] for key in keys]
            cases = [key[1] for key in keys]
        else:
            sets, cases = [], []
            for case in self.cases:
                spans = [self._uniform(case, number_) for number_ in range(len(self.stops) - 1)]
                parts = spans if case in MOVABLE else [[load for span in spans for load in span]]
                sets += parts
                cases += [case] * len(parts)
        solution = Solution(self.bar.length, self.supports, self.bar.fixed, sets)
        return solution, cases, [case in MOVABLE for case in cases]

    def _uniform(self, case: str, span: int) -> list[Load]:
        """A span's loads as its equivalent; an overhang's as they are; forces over supports stay."""
        a, b = self.stops[span : span + 2]
        ends = (a, b) if span == 0 else (b,)
        found = self.equivalents[span]
        over = [
            load
            for load in self.of(case)
            if isinstance(load, Force) and any(abs(load.at - end) < SAME for end in ends)
        ]
        if found is None:
            return [*(load.moved(a) for load in self.inside(case, a, b)), *over]
        value = found[case][self.bar.equivalent.replace("fixed-end moment", "fixed_end_moment")]
        return [Spread(a, b, value, value, ""), *over]

    def factors(self, combination: dict[str, float]) -> tuple[np.ndarray, np.ndarray]:
        _, cases, movable = self.design
        row = np.array([combination.get(case, 0.0) for case in cases])
        moving = np.array(movable, dtype=bool)
        return np.where(moving, 0.0, row), np.where(moving, row, 0.0)

    def combined(self, combination: dict[str, float]) -> dict[str, Any]:
        """A combination's worst."""
        solution, factors = self.design[0], self.factors(combination)
        return {
            "moment_max": worst(solution, "moment", *factors, 1.0),
            "moment_min": worst(solution, "moment", *factors, -1.0),
            "shear_max": max(abs(worst(solution, "shear", *factors, sign).value) for sign in (1.0, -1.0)),
            "reactions_max": worst_reactions(solution, *factors, 1.0),
            "reactions_min": worst_reactions(solution, *factors, -1.0),
        }

    def moment(self, combination: dict[str, float], x: float, sign: float) -> float:
        """The worst moment of a combination at one place."""
        solution, (always, placed) = self.design[0], self.factors(combination)
        e = min(int(np.searchsorted(solution.nodes, x, side="right")) - 1, len(solution.width) - 1)
        values = sign * polynomial(solution.fields["moment"][:, e], x - solution.nodes[e])
        return sign * float(always @ values + np.maximum(placed * values, 0).sum())

    def deflected(self, combination: dict[str, float]) -> float:
        """The largest deflection by size [m]."""
        assert self.bar.stiffness
        solution, factors = self.design[0], self.factors(combination)
        return max(abs(worst(solution, "deflection", *factors, sign).value) for sign in (1.0, -1.0)) / (
            self.bar.stiffness
        )


class Carried:
    """A floor with every load, and every placement for itself, carried down."""

    def __init__(self, floor: Floor) -> None:
        self.floor = floor
        self.on_beams: dict[str, list[tuple[Slab, list[Cell], dict[float, float]]]] = defaultdict(list)
        self.on_walls: dict[str, dict[str, float]] = defaultdict(lambda: defaultdict(float))
        self.beyond_ends = 0  # how often a panel drains to a beam from beyond the end of its edge
        for slab in floor.slabs:
            for piece, cells, points in shares(floor, slab):
                if piece.kind == "beam":
                    self.on_beams[piece.mark].append((slab, cells, points))
                    self.beyond_ends += len(points)
                    continue
                area = sum(Spread(*cell, "").total for cell in cells) + sum(points.values())
                for case in CASES:
                    self.on_walls[piece.mark][case] += area * slab.pressure[case]
        self.bearings = {mark: self._bearings(bar) for mark, bar in floor.bars.items()}
        self.order: list[str] = []
        self.beams: dict[str, Beam] = {}
        arriving: dict[str, dict[Key, list[Load]]] = defaultdict(lambda: defaultdict(list))
        self.supports = {
            mark: {case: self.on_walls[mark][case] for case in CASES}
            for mark in (*floor.columns, *floor.walls)
        }
        while len(self.order) < len(floor.bars):
            mark = next(each for each in floor.bars if each not in self.order and self._ready(each))
            self.order.append(mark)
            loads = self._own(floor.bars[mark])
            for key, down in arriving[mark].items():
                loads[key] = [*loads.get(key, []), *down]
            beam = self.beams[mark] = Beam(floor.bars[mark], loads)
            for number_, (kind, below) in enumerate(self.bearings[mark]):
                point = beam.bar.points[beam.bar.held[number_]]
                for key in beam.keys:
                    size = float(beam.reactions(key)[number_])
                    if not size:
                        continue
                    if kind == "beam":
                        at = self._place_on(floor.bars[below], point)
                        arriving[below][key].append(Force(at, size, mark))
                    elif key[0] == "all":
                        self.supports[below][key[1]] += size

    def _ready(self, mark: str) -> bool:
        """Whether all that stand on a beam are solved."""
        above = {other for other, row in self.bearings.items() if ("beam", mark) in row}
        return above <= set(self.order)

    def _bearings(self, bar: Bar) -> list[tuple[str, str]]:
        """Under each held point: a column, else a wall, else the beam that passes or is free there."""
        found = []
        for number_ in bar.held:
            point = bar.points[number_]
            under = [
                ("column", mark) for mark, at in self.floor.columns.items() if math.dist(at, point) < SAME
            ]
            under += [("wall", mark) for mark, ends in self.floor.walls.items() if reaches(ends, point)]
            for mark, other in self.floor.bars.items():
                own = [other.points[k] for k in other.held]
                if (
                    other is not bar
                    and reaches(other.points[[0, -1]], point)
                    and all(math.dist(each, point) > SAME for each in own)
                ):
                    under.append(("beam", mark))
            found.append(under[0])
        return found

    def _place_on(self, bar: Bar, point: np.ndarray) -> float:
        at = Side(*bar.points[[0, -1]]).foot(point)
        return next((knot for knot in bar.knots if abs(knot - at) <= SAME), at)

    def _own(self, bar: Bar) -> dict[Key, list[Load]]:
        """A beam's own loads: each case whole, and movable cases span by span."""
        loads: dict[Key, list[Load]] = defaultdict(list)
        if bar.weight and self.floor.basis.get("beam_self_weight", True):
            loads["all", "dead"].append(Spread(0.0, bar.length, bar.weight, bar.weight, "self weight"))
        for slab, cells, points in self.on_beams[bar.mark]:
            for case in CASES:
                p = slab.pressure[case]
                if p:
                    loads["all", case] += [
                        Spread(c.start, c.end, p * c.first, p * c.last, slab.mark) for c in cells
                    ]
                    loads["all", case] += [Force(at, p * area, slab.mark) for at, area in points.items()]
        for case, load in bar.given:
            loads["all", case].append(load)
        stops = sorted({0.0, bar.length, *(bar.knots[k] for k in bar.held)})
        for case in MOVABLE:
            for load in loads["all", case]:
                for span, part in divided(load, stops).items():
                    loads["placed", case, bar.mark, str(span)].append(part)
        return dict(loads)

    @cached_property
    def applied(self) -> dict[str, float]:
        """All that was put on the floor."""
        total = {
            case: sum(s.pressure[case] * shoelace(s.corners) for s in self.floor.slabs) for case in CASES
        }
        for bar in self.floor.bars.values():
            total["dead"] += bar.weight * bar.length
            for case, load in bar.given:
                total[case] += load.total
        return total


def reaches(ends: np.ndarray, point: np.ndarray) -> bool:
    """Whether a point is on a line between its ends."""
    line = Side(*ends)
    return abs(line.distance(point)) < SAME and -SAME < line.foot(point) < line.length + SAME
