"""From the panels down to columns and walls: the loads of every beam, solved in order."""

from __future__ import annotations

import math
from collections import defaultdict
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from itertools import pairwise

from calcpack.framing.notes import idle, lifting
from calcpack.framing.plan import Plan
from calcpack.framing.plane import area
from calcpack.framing.types import (
    PLACED_CASES,
    Bearing,
    CarriedReaction,
    EdgeShare,
    Frame,
    FramedBeam,
    PanelTransfer,
    Placement,
)
from calcpack.job.model import CASES, Beam, BeamLoad, Case, Panel
from calcpack.statics import BeamLine, LineLoad, Load, PointLoad, analyse

PlacementKey = tuple[Case, str, int]
SELF_WEIGHT = "self weight"


@dataclass
class _Arriving:
    """What has come down on one beam so far."""

    loads: defaultdict[Case, list[Load]] = field(default_factory=lambda: defaultdict(list))
    placements: defaultdict[PlacementKey, list[Load]] = field(default_factory=lambda: defaultdict(list))
    carried: list[CarriedReaction] = field(default_factory=list)


def carry_down(
    plan: Plan,
    panels: Mapping[str, PanelTransfer],
    found: Mapping[str, tuple[Bearing, ...]],
    order: Sequence[str],
    notes: Sequence[str],
) -> Frame:
    """Load every beam, solve it, and hand its reactions on.

    Every case of the whole floor is in every beam's ``loads`` and ``reactions``, where
    nothing is there as an empty tuple or zeros.
    """
    cases = _cases(plan)
    columns_and_walls = [*(c.mark for c in plan.job.columns), *(w.mark for w in plan.job.walls)]
    pressing: dict[str, dict[Case, list[float]]] = {
        mark: {case: [] for case in cases} for mark in columns_and_walls
    }
    shares: defaultdict[str, list[tuple[Panel, EdgeShare]]] = defaultdict(list)
    for transfer in panels.values():
        for share in transfer.shares:
            if share.carrier_kind == "beam":
                shares[share.carrier].append((transfer.panel, share))
                continue
            for case in cases:
                pressing[share.carrier][case].append(share.area * transfer.panel.pressure(case))

    arriving: defaultdict[str, _Arriving] = defaultdict(_Arriving)
    solved: dict[str, FramedBeam] = {}
    for mark in order:
        beam = plan.by_mark[mark]
        row = found[mark]
        knots = [0.0, *(bearing.at for bearing in row), plan.beams[mark].length]
        own = {case: _own_loads(plan, beam, case, shares[mark], knots) for case in cases}
        marks = tuple(dict.fromkeys(panel.mark for panel, _ in shares[mark]))
        solved[mark], passed_on = _solved(plan, beam, row, own, arriving[mark], marks)
        for number, bearing in enumerate(row):
            reactions = {case: solved[mark].reactions[case][number] for case in cases}
            if bearing.kind != "beam":
                for case, reaction in reactions.items():
                    pressing[bearing.mark][case].append(reaction)
                continue
            at = _place_on(plan, bearing.mark, beam, bearing)
            below = arriving[bearing.mark]
            below.carried.append(CarriedReaction(mark, at, reactions))
            for case, reaction in reactions.items():
                if reaction:
                    below.loads[case].append(PointLoad(at, reaction, mark))
            for key, forces in passed_on.items():
                if forces[number]:
                    below.placements[key].append(PointLoad(at, forces[number], mark))
    supports = {
        mark: {case: math.fsum(forces) for case, forces in row.items()} for mark, row in pressing.items()
    }
    return Frame(
        job=plan.job,
        panels=dict(panels),
        beams={beam.mark: solved[beam.mark] for beam in plan.job.beams},
        order=tuple(order),
        supports=supports,
        applied={case: _applied(plan, case) for case in cases},
        cases=cases,
        notes=(*notes, *idle(plan, panels, found), *lifting(plan, solved)),
    )


def _self_weight(plan: Plan, beam: Beam) -> float:
    """A beam's own weight [kN/m]; nothing where its section or material is not known."""
    if not plan.job.basis.beam_self_weight or beam.section is None or beam.material is None:
        return 0.0
    return beam.section.area * beam.material.unit_weight


def _cases(plan: Plan) -> tuple[Case, ...]:
    """The cases that occur anywhere, in their usual order."""
    there: set[Case] = {case for panel in plan.job.panels for case in CASES if panel.pressure(case)}
    there.update(load.case for beam in plan.job.beams for load in beam.loads)
    if any(_self_weight(plan, beam) for beam in plan.job.beams):
        there.add("dead")
    return tuple(case for case in CASES if case in there)


def _own_loads(
    plan: Plan, beam: Beam, case: Case, shares: Iterable[tuple[Panel, EdgeShare]], knots: Sequence[float]
) -> list[Load]:
    """A beam's loads but for those of the beams it carries: its weight, the panels', those given."""
    length = plan.beams[beam.mark].length
    loads: list[Load] = []
    if case == "dead" and (weight := _self_weight(plan, beam)):
        loads.append(LineLoad(0.0, length, weight, weight, SELF_WEIGHT))
    for panel, share in shares:
        loads += _panel_loads(panel.mark, panel.pressure(case), share, knots, plan.tolerance.noise)
    for number, load in enumerate(beam.loads, 1):
        if load.case == case:
            loads.append(_given(load, length, f"load {number}"))
    return loads


def _given(load: BeamLoad, length: float, source: str) -> Load:
    """A load given on a beam, with what was left out."""
    if load.point is not None:
        return PointLoad(min(load.at or 0.0, length), load.point, source)
    first = load.line or 0.0
    last = first if load.line_end is None else load.line_end
    return LineLoad(load.start, length if load.end is None else min(load.end, length), first, last, source)


def _panel_loads(
    source: str, pressure: float, share: EdgeShare, knots: Sequence[float], noise: float
) -> list[Load]:
    """A panel's share as loads; breaks that fall on a support by but the noise are moved onto it."""
    if not pressure:
        return []

    def settled(along: float) -> float:
        nearest = min(knots, key=lambda knot: abs(knot - along))
        return nearest if abs(nearest - along) <= noise else along

    loads: list[Load] = []
    places = [(settled(along), depth) for along, depth in share.depth]
    for (start, first), (end, last) in pairwise(places):
        if end > start and (first or last):
            loads.append(LineLoad(start, end, pressure * first, pressure * last, source))
    loads += [PointLoad(settled(along), pressure * size, source) for along, size in share.ends]
    return loads


def by_span(loads: Iterable[Load], ends: Sequence[float]) -> list[list[Load]]:
    """Loads sorted into the spans between given places.

    A line load that crosses a place is divided there. A point load on a place belongs to the span
    that ends there, one at the very start to the first span; over a support this is of no effect, since
    the load goes straight into it.

    Parameters
    ----------
    loads : loads
    ends : ascending places [m], from the beam's start to its end

    Returns
    -------
    list of loads, span by span

    Examples
    --------
    >>> by_span([LineLoad(1.0, 5.0, 0.0, 8.0)], (0.0, 3.0, 6.0))  # doctest: +NORMALIZE_WHITESPACE
    [[LineLoad(start=1.0, end=3.0, first=0.0, last=4.0, source='')],
     [LineLoad(start=3.0, end=5.0, first=4.0, last=8.0, source='')]]
    """
    spans: list[list[Load]] = [[] for _ in ends[1:]]
    for load in loads:
        for number, (low, high) in enumerate(pairwise(ends)):
            if isinstance(load, PointLoad):
                if low < load.at <= high or (number == 0 and load.at <= low):
                    spans[number].append(load)
                continue
            start, end = max(low, load.start), min(high, load.end)
            if end > start:
                spans[number].append(_cut(load, start, end))
    return spans


def _cut(load: LineLoad, start: float, end: float) -> LineLoad:
    if (start, end) == (load.start, load.end):
        return load
    slope = (load.last - load.first) / (load.end - load.start)
    first = load.first + slope * (start - load.start)
    last = load.last if end == load.end else load.first + slope * (end - load.start)
    return LineLoad(start, end, first, last, load.source)


def _solved(
    plan: Plan,
    beam: Beam,
    row: tuple[Bearing, ...],
    own: Mapping[Case, list[Load]],
    arrived: _Arriving,
    panels: tuple[str, ...],
) -> tuple[FramedBeam, dict[PlacementKey, tuple[float, ...]]]:
    """A beam analysed; also the reactions that each placement alone makes."""
    length = plan.beams[beam.mark].length
    cases = list(own)
    loads = {case: (*own[case], *arrived.loads[case]) for case in cases}
    ends = sorted({0.0, length, *(bearing.at for bearing in row)})
    placed: defaultdict[PlacementKey, list[Load]] = defaultdict(list)
    for case in PLACED_CASES:
        for span, part in enumerate(by_span(own.get(case, ()), ends)):
            if part:
                placed[case, beam.mark, span] = part
    for key, forces in arrived.placements.items():
        placed[key] += forces
    keys = sorted(placed, key=lambda key: (CASES.index(key[0]), plan.rank[key[1]], key[2]))

    line = BeamLine(length, tuple(bearing.at for bearing in row), beam.fixed_start, beam.fixed_end)
    sets = [*(loads[case] for case in cases), *(placed[key] for key in keys)]
    reactions = [tuple(map(float, each)) for each in analyse(line, sets).reactions] if sets else []
    framed = FramedBeam(
        beam=beam,
        length=length,
        bearings=row,
        loads=loads,
        carried=tuple(arrived.carried),
        placements=tuple(Placement(*key, tuple(placed[key])) for key in keys),
        reactions=dict(zip(cases, reactions, strict=False)),
        panels=panels,
    )
    return framed, dict(zip(keys, reactions[len(cases) :], strict=True))


def _place_on(plan: Plan, carrier: str, beam: Beam, bearing: Bearing) -> float:
    """Where a beam's bearing comes down on another beam [m] from that beam's start."""
    line = plan.beams[carrier]
    along, _ = line.place(plan.beams[beam.mark].point(bearing.at))
    for knot in plan.places(plan.by_mark[carrier]):
        if abs(along - knot) <= plan.tolerance.close:
            return knot
    return along


def _applied(plan: Plan, case: Case) -> float:
    """All that is put on the floor in a case [kN]: on panels, on beams, and the beams themselves."""
    forces = []
    for panel in plan.job.panels:
        forces.append(panel.pressure(case) * area(panel.corners))
    for beam in plan.job.beams:
        forces += [load.total for load in _own_loads(plan, beam, case, (), ())]
    return math.fsum(forces)
