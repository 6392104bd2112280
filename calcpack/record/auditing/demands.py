"""What a beam is designed for, derived again: reduced live load, equivalent loads, load sets, factors."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from calcpack.record.auditing.beam import SAME, Floats, Load, part_of
from calcpack.record.auditing.given import CASES, Given
from calcpack.record.auditing.spans import span_equivalents

MOVABLE = ("live", "roof_live")
FIELD = {"fixed-end moment": "fixed_end_moment"}
_FOOT = 0.3048


@dataclass(frozen=True)
class Demand:
    """Load sets with the case each belongs to."""

    cases: tuple[str, ...]
    sets: tuple[tuple[Load, ...], ...]

    def factors(self, combinations: Sequence[Mapping[str, Any]]) -> tuple[Floats, Floats]:
        """Factors of combinations, one a row: of what is there, and of what may be placed."""
        rows = np.array(
            [[float(each["factors"].get(case, 0.0)) for case in self.cases] for each in combinations]
        ).reshape(len(combinations), len(self.cases))
        movable = np.array([case in MOVABLE for case in self.cases], dtype=bool)
        return np.where(movable, 0.0, rows), np.where(movable, rows, 0.0)

    def only(self, case: str) -> tuple[Floats, Floats]:
        """Factors of one case alone, placed wherever it is worst."""
        row = np.array([[1.0 if each == case else 0.0 for each in self.cases]])
        return np.zeros_like(row), row


def reduction_factor(given: Given) -> tuple[float, frozenset[str]]:
    """How far live load is reduced, and that of which sources.

    Source: ASCE/SEI 7-22, 4.7.2; EN 1991-1-1:2002, 6.3.1.2(10), with ψ0 = 0.7 for categories A to D (both
    from memory), unless the job states its own.
    """
    rule = given.basis.get("live_load_reduction", "none")
    if rule == "none":
        return 1.0, frozenset()
    area = math.fsum(float(part["area"]) for part in given.tributary)
    sources = frozenset(str(part["source"]) for part in given.tributary if not part["exempt"])
    if rule == "ASCE 7-22 4.7":
        slab = any(sum(map(bool, panel["supported"])) == 1 for panel in given.panels)
        influence = (1.0 if slab or any(given.free) else 2.0) * area
        if influence < 400 * _FOOT**2 * (1 - 1e-12):
            return 1.0, frozenset()
        factor = max(0.25 + 15 * _FOOT / math.sqrt(influence), 0.5)
    else:
        category = given.basis.get("occupancy") or "B"
        if category not in ("A", "B", "C", "D") or area <= 0:
            return 1.0, frozenset()
        psi0 = (given.data.get("live_psi") or {"psi0": 0.7})["psi0"]
        factor = min(5 / 7 * psi0 + 10 / area, 1.0)
        factor = max(factor, 0.6) if category in ("C", "D") else factor
    return (factor, sources) if factor != 1.0 else (1.0, frozenset())


def design_demand(given: Given) -> Demand:
    """The load sets the beam's design rests on.

    Dead load and snow are one set each; live and roof live load one a placement. With equivalent loads,
    each span between supports has its uniform load, an overhang its actual one, and point loads at the
    ends of spans stay where they are.
    """
    factor, reduced = reduction_factor(given)

    def lessened(case: str, loads: Sequence[Load]) -> tuple[Load, ...]:
        if case != "live" or not reduced:
            return tuple(loads)
        return tuple(load.times(factor) if load.source in reduced else load for load in loads)

    cases = [case for case in CASES if case in given.loads]
    steady = [case for case in cases if case not in MOVABLE]
    if given.design_loads != "equivalent":
        named = [*steady, *(each.case for each in given.placements)]
        sets = [given.loads[case] for case in steady]
        sets += [lessened(each.case, each.loads) for each in given.placements]
        return Demand(tuple(named), tuple(sets))
    uniform = {case: _uniform(given, lessened(case, given.loads[case])) for case in cases}
    named, made = [], []
    for case in steady:
        named.append(case)
        made.append(tuple(load for span in uniform[case] for load in span))
    for case in cases:
        if case in MOVABLE:
            for span in uniform[case]:
                named.append(case)
                made.append(tuple(span))
    return Demand(tuple(named), tuple(made))


def _uniform(given: Given, loads: Sequence[Load]) -> list[list[Load]]:
    """A case's loads span by span, those of spans between supports made uniform."""
    stands = set(given.supports)
    field = FIELD.get(given.equivalent, given.equivalent)
    found: list[list[Load]] = []
    for number, (start, end) in enumerate(given.spans):
        if start in stands and end in stands:
            (values,) = span_equivalents(start, end, [loads])
            own = [Load(start, end, values[field], values[field])] if values[field] else []
        else:
            own = part_of(loads, start, end)
        ends = (start, end) if number == 0 else (end,)
        own += [
            load
            for load in loads
            if load.point and any(abs(load.start - at) <= SAME * given.length for at in ends)
        ]
        found.append(own)
    return found
