"""What bends and shears a concrete beam, read from its analysis where ACI 318-19 asks for it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Literal, NamedTuple

import numpy as np
from numpy.typing import NDArray

from calcpack.actions.combinations import PLACED
from calcpack.clauses.aci318.detailing import End
from calcpack.clauses.aci318.flange import Wing
from calcpack.job.model import Case, Point
from calcpack.notebook.work import Work
from calcpack.statics import Band, Envelope, Extreme, PointLoad, envelope

Side = Literal["left", "right"]
SAMPLES = 400  # places looked at along a span
DRAWN = 80  # places along a span of a deflected beam


@dataclass(frozen=True)
class Stretch:
    """A span or an overhang with what stands at its ends.

    Parameters
    ----------
    number : int
        Counted from 1.
    start, end : float [m]
    supported : (bool, bool)
    half : float [m]
        Half the width of a support.
    """

    number: int
    start: float
    end: float
    supported: tuple[bool, bool]
    half: float

    @property
    def length(self) -> float:
        """From centre to centre [m]."""
        return self.end - self.start

    @property
    def clear(self) -> float:
        """From face to face [m]."""
        return self.length - self.half * sum(self.supported)

    @property
    def overhang(self) -> bool:
        """Whether one end is free."""
        return not all(self.supported)


class Critical(NamedTuple):
    """The place near a support where shear is looked at."""

    at: float  # [m]
    shear: float  # [kN], as an amount
    words: str
    span: int
    left: bool


class Service(NamedTuple):
    """A span under service loads: moments [kNm] as amounts, deflections times E I [kNm3]."""

    sagging: float
    hogging: tuple[float, float]  # at start and end
    live: float
    sustained: float
    x: NDArray[np.float64]  # [m], places along it
    live_line: NDArray[np.float64]  # there
    sustained_line: NDArray[np.float64]


class Actions:
    """The effects of a beam's actions, place by place.

    Parameters
    ----------
    work : Work
    support : float [m]
        Width of the supports.
    sustained_live : float
        Part of the live load that stays.
    """

    def __init__(self, work: Work, support: float, sustained_live: float) -> None:
        self.work, self.given, self.analysed = work, work.given, work.study.analysed
        self.half, self.sustained_live = support / 2, sustained_live
        self.moment: Band = self.analysed.band("moment")
        self.shear: Band = self.analysed.band("shear")
        places = {bearing.at for bearing in self.given.bearings}
        self.stretches = tuple(
            Stretch(n + 1, start, end, (start in places, end in places), self.half)
            for n, (start, end) in enumerate(self.given.spans)
        )

    # Bending

    @property
    def sagging(self) -> Extreme | None:
        """The largest sagging moment, if there is any."""
        most = self.moment.largest
        if most.value > 0 and self.work.study.significant(most.value, "moment"):
            return most
        # a beam that nothing bends is looked at as one that sags, so that its sheet is whole
        return Extreme(0.0, most.at) if self.hogging is None else None

    @property
    def hogging(self) -> Extreme | None:
        """The largest hogging moment as an amount, at the faces of columns (ACI 318-19, 9.4.2.1)."""
        least = self.moment.smallest
        if not (least.value < 0 and self.work.study.significant(least.value, "moment")):
            return None
        lower, length = self.moment.lower, self.given.length
        windows = [
            (max(bearing.at - self.half, 0.0), min(bearing.at + self.half, length))
            for bearing in self.given.bearings
            if bearing.kind == "column" and self.half > 0
        ]
        places = [x for x in np.linspace(0, length, SAMPLES + 1).tolist() if not _inside(x, windows)]
        places += [x for window in windows for x in window]
        places += [bearing.at for bearing in self.given.bearings if not _inside(bearing.at, windows)]
        if not _inside(least.at, windows):
            places.append(least.at)
        x = np.array(places)
        values = np.minimum(lower.values(x, "right"), lower.values(x, "left")).tolist()
        value, at = min(zip(values, places, strict=True), key=lambda pair: (round(pair[0], 9), pair[1]))
        return Extreme(-value, at) if value < 0 else None

    def hogging_reach(self, stretch: Stretch, left: bool) -> float:
        """How far from an end any combination hogs [m]."""
        xs = np.linspace(stretch.start, stretch.end, SAMPLES + 1)
        values = self.moment.lower.values(xs, "right" if left else "left")
        if not left:
            values = values[::-1]
        scale = max(abs(self.moment.smallest.value), abs(self.moment.largest.value))
        over = np.flatnonzero(values > -1e-6 * scale)
        return float(over[0]) * stretch.length / SAMPLES if len(over) else stretch.length

    def hogs(self, stretch: Stretch, left: bool) -> bool:
        """Whether a stretch hogs at an end."""
        x = stretch.start if left else stretch.end
        value = self.moment.lower.at(x, "right" if left else "left")
        return value < 0 and self.work.study.significant(value, "moment")

    # Shear

    def shears(self, places: Sequence[float], sides: Sequence[Side] = ("left", "right")) -> list[float]:
        """Largest shear at each of some places, by size [kN]; at a jump that of the side asked for."""
        x = np.array(places, dtype=float)
        found = [
            np.abs(curve.values(x, side)) for curve in (self.shear.upper, self.shear.lower) for side in sides
        ]
        return [float(value) for value in np.max(found, axis=0)]

    def shear_at(self, x: float) -> float:
        """Largest shear at a place, by size [kN]."""
        return self.shears([x])[0]

    def largest_shear(self, start: float, end: float) -> float:
        """Largest shear over a stretch, by size [kN]."""
        breaks = [x for x in self.shear.upper.breaks.tolist() if start < x < end]
        inside = self.shears([*breaks, *np.linspace(start, end, 60).tolist()[1:-1]])
        ends: tuple[tuple[float, Side], ...] = ((start, "right"), (end, "left"))
        return max(*inside, *(self.shears([x], [side])[0] for x, side in ends))

    def critical(self, depth: float) -> list[Critical]:
        """The critical section at every supported end of every stretch.

        At d from the face where the support pushes up on the beam's underside and no point load stands
        between; else at the face. Source: ACI 318-19, 9.4.3.2.
        """
        found = []
        for stretch in self.stretches:
            for left, supported in zip((True, False), stretch.supported, strict=True):
                if supported:
                    found.append(self._critical(stretch, left, depth))
        return found

    def _critical(self, stretch: Stretch, left: bool, depth: float) -> Critical:
        at, sign = (stretch.start, 1.0) if left else (stretch.end, -1.0)
        index = next(n for n, bearing in enumerate(self.given.bearings) if bearing.at == at)
        bearing = self.given.bearings[index]
        face = at + sign * min(self.half, stretch.length / 2)
        away = at + sign * min(self.half + depth, stretch.length / 2)
        low, high = sorted((face, away))
        loads = (load for each in self.analysed.sets for load in each.loads)
        point = any(isinstance(load, PointLoad) and low - 1e-9 <= load.at <= high + 1e-9 for load in loads)
        pushed = all(each.reactions_min[index] >= -1e-9 for each in self.analysed.of_limit("strength"))
        if bearing.kind == "beam" or point or not pushed:
            x = face
            why = (
                "a beam carries it"
                if bearing.kind == "beam"
                else "a point load is near"
                if point
                else "uplift"
            )
            words = f"at the face of the support at {bearing.name} ({why})"
        else:
            x = away
            words = f"at d from the face of the support at {bearing.name}"
        middle = (stretch.start + stretch.end) / 2
        reach = (x, max(x, middle)) if left else (min(x, middle), x)
        if stretch.overhang:
            reach = (x, stretch.end) if left else (stretch.start, x)
        shear = self.largest_shear(*reach) if reach[1] > reach[0] else self.shear_at(x)
        return Critical(x, shear, words, stretch.number, left)

    def zone_reach(self, critical: Critical, strength: float) -> float:
        """How far from the support's centre the shear is above a strength [m]; 0 if nowhere."""
        stretch = self.stretches[critical.span - 1]
        xs = np.linspace(stretch.start, stretch.end, SAMPLES + 1).tolist()
        shears = self.shears(xs)
        inner = range(1, SAMPLES)
        quiet = min(inner, key=lambda n: (round(shears[n], 9), n))
        if stretch.overhang:
            quiet = SAMPLES if critical.left else 0
        step = stretch.length / SAMPLES
        if critical.left:
            over = [n for n in inner if n <= quiet and xs[n] >= critical.at - 1e-9 and shears[n] > strength]
            return (max(over) + 1) * step if over else 0.0
        over = [n for n in inner if n >= quiet and xs[n] <= critical.at + 1e-9 and shears[n] > strength]
        return (SAMPLES - min(over) + 1) * step if over else 0.0

    # Where the bottom bars have to be developed

    def ends(self, cover: float) -> list[End]:
        """Simple supports and points of inflection. Source: ACI 318-19, 9.7.3.8.3."""
        found = []
        for stretch in self.stretches:
            if stretch.overhang:
                continue
            for left in (True, False):
                x = stretch.start if left else stretch.end
                if self.hogs(stretch, left):
                    place = self._inflection(stretch, left)
                    if place is not None:
                        words = f"point of inflection {self.work.show(place, 'm')} from the start"
                        found.append(End(self.shear_at(place), words, "inflection"))
                    continue
                bearing = next(each for each in self.given.bearings if each.at == x)
                kind = "support" if bearing.kind == "beam" else "confined"
                beyond = max(self.half - cover, 0.0)
                found.append(End(self._end_shear(stretch, left), f"support at {bearing.name}", kind, beyond))
        return found

    def _end_shear(self, stretch: Stretch, left: bool) -> float:
        x = stretch.start if left else stretch.end
        return self.shears([x], ["right" if left else "left"])[0]

    def _inflection(self, stretch: Stretch, left: bool) -> float | None:
        """Where the span begins to sag, seen from an end; None where it sags from the end on or nowhere."""
        upper = self.moment.upper
        inside = [x for x in upper.zeros() if stretch.start < x < stretch.end]
        first = upper.at(stretch.start if left else stretch.end, "right" if left else "left")
        if first >= 0 or not inside:
            return None
        return min(inside) if left else max(inside)

    # Service

    def _sets(self, factors: Mapping[Case, float]) -> Envelope:
        """An envelope with every case times its factor, movable cases where they are worst."""
        rows = [(factors.get(each.case, 0.0), each.case in PLACED) for each in self.analysed.sets]
        always = np.array([0.0 if movable else factor for factor, movable in rows])
        placed = np.array([factor if movable else 0.0 for factor, movable in rows])
        return envelope(self.analysed.response, always, placed)

    @property
    def service_factors(self) -> tuple[str, dict[Case, float]]:
        """The service combination that deflects the beam most: its name and factors."""
        governing = self.analysed.deflection_total
        if governing is None:
            return "D", {"dead": 1.0}
        return governing[0].name, dict(governing[0].factors)

    def service(self) -> list[Service]:
        """Every stretch under the governing service combination."""
        _, factors = self.service_factors
        full = self._sets(factors)
        variable = self._sets({case: factor for case, factor in factors.items() if case != "dead"})
        sustained = self._sets({"dead": 1.0, "live": self.sustained_live})
        return [
            Service(
                max(_largest(full.moment, stretch, "upper"), 0.0),
                (
                    max(-full.moment.lower.at(stretch.start, "right"), 0.0),
                    max(-full.moment.lower.at(stretch.end, "left"), 0.0),
                ),
                max(_largest(variable.deflection, stretch, "upper"), 0.0),
                max(_largest(sustained.deflection, stretch, "upper"), 0.0),
                x,
                variable.deflection.upper.values(x),
                sustained.deflection.upper.values(x),
            )
            for stretch in self.stretches
            for x in [np.linspace(stretch.start, stretch.end, DRAWN + 1)]
        ]


def _inside(x: float, windows: list[tuple[float, float]]) -> bool:
    return any(low < x < high or (x in (low, high) and low == high) for low, high in windows)


def _largest(band: Band, stretch: Stretch, edge: str) -> float:
    """Largest value of an edge of a band over a stretch; the envelope's pieces and a fine row of places."""
    curve = band.upper if edge == "upper" else band.lower
    breaks = [x for x in curve.breaks.tolist() if stretch.start <= x <= stretch.end]
    places = [*breaks, *np.linspace(stretch.start, stretch.end, SAMPLES + 1).tolist()]
    if stretch.start <= curve.largest.at <= stretch.end:
        places.append(curve.largest.at)
    return float(curve.values(np.array(places)).max())


# The slab beside the beam


def wings_of(work: Work, web: float) -> tuple[Wing, ...]:
    """The slab on each side of a beam that hands load to it, with the clear distance to the next web.

    Parameters
    ----------
    work : Work
    web : float [m]
        Width of this web; the next one is taken as wide.
    """
    start, end = work.given.points[0], work.given.points[-1]
    length = float(np.hypot(end[0] - start[0], end[1] - start[1]))
    along = ((end[0] - start[0]) / length, (end[1] - start[1]) / length)
    found = []
    for side in (1.0, -1.0):
        across = (-along[1] * side, along[0] * side)
        reach = [
            max(_dot(corner, start, across) for corner in transfer.panel.corners)
            for transfer in work.given.panels
            if sum(_dot(corner, start, across) for corner in transfer.panel.corners) > 0
        ]
        if not reach:
            continue
        near = _neighbours(work, start, along, across, length)
        if near:
            distance, words = min(near)
            found.append(Wing(max(distance - web, 0.0), words))
        else:
            found.append(Wing(max(max(reach) - web / 2, 0.0), "the panel's far edge"))
    return tuple(found)


def _dot(point: Point, origin: Point, direction: tuple[float, float]) -> float:
    return (point[0] - origin[0]) * direction[0] + (point[1] - origin[1]) * direction[1]


def _neighbours(
    work: Work, start: Point, along: tuple[float, float], across: tuple[float, float], length: float
) -> list[tuple[float, str]]:
    """Beams and walls that run beside a beam, with their distance from line to line [m]."""
    plan = work.given.plan
    lines = [(f"beam {beam['mark']}", beam["points"]) for beam in plan["beams"]]
    lines += [(f"wall {wall['mark']}", wall["line"]) for wall in plan["walls"]]
    found = []
    for words, points in lines:
        offsets = [_dot(point, start, across) for point in points]
        reach = [_dot(point, start, along) for point in points]
        parallel = max(offsets) - min(offsets) < 1e-6
        beside = min(reach) < length - 1e-6 and max(reach) > 1e-6
        if parallel and beside and offsets[0] > 1e-6:
            found.append((offsets[0], words))
    return found
