"""The beam of one sheet, worked out once and shared by all its sections."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from typing import Any

from calcpack.actions import AnalysedBeam, LoadSet, Reduction, analyse_beam, reduction
from calcpack.actions.combinations import PLACED
from calcpack.equivalent import Comparison, Equivalents, comparison, equivalents, loads_on
from calcpack.job.model import CASES, Case
from calcpack.notebook.parameters import BeamInput
from calcpack.statics import BeamLine, LineLoad, Load, PointLoad, Response, analyse

CASE_WORDS: dict[Case, str] = {
    "dead": "dead load",
    "live": "live load",
    "roof_live": "roof live load",
    "snow": "snow load",
}
# The job file's words for an equivalent, and the field that holds it.
FIELD = {
    "shear": "shear",
    "moment": "moment",
    "deflection": "deflection",
    "fixed-end moment": "fixed_end_moment",
    "total": "total",
}


@dataclass(frozen=True)
class SpanLoads:
    """One span between two supports taken alone.

    Parameters
    ----------
    number : int
        Counted from 1 along the beam, overhangs included.
    start, end : float [m]
        From the beam's start.
    loads : mapping of case to loads
        Measured from the span's own start, point loads at its very ends left out.
    """

    number: int
    start: float
    end: float
    loads: Mapping[Case, tuple[Load, ...]]

    @property
    def length(self) -> float:
        """Clear of neighbours, from support to support [m]."""
        return self.end - self.start

    @cached_property
    def equivalents(self) -> dict[Case, Equivalents]:
        """The equivalent uniform loads of each case [kN/m]."""
        return {case: equivalents(self.length, loads) for case, loads in self.loads.items()}

    @cached_property
    def comparisons(self) -> dict[Case, Comparison]:
        """How each equivalent compares with the actual load, case by case."""
        return {case: comparison(self.length, loads) for case, loads in self.loads.items()}


class Study:
    """A beam's input with everything that follows from it.

    Parameters
    ----------
    given : BeamInput
    """

    def __init__(self, given: BeamInput) -> None:
        self.given = given
        self.system = given.header.units
        self.cases: tuple[Case, ...] = tuple(case for case in CASES if case in given.loads)

    @cached_property
    def line(self) -> BeamLine:
        """The beam as a line with supports."""
        return BeamLine(
            self.given.length,
            tuple(bearing.at for bearing in self.given.bearings),
            fixed_start=self.given.fixed[0],
            fixed_end=self.given.fixed[1],
        )

    @cached_property
    def stiffness(self) -> float | None:
        """E I of the gross section [kNm2], where section and material are known."""
        if self.given.section is None or self.given.material is None:
            return None
        return self.given.section.inertia * self.given.material.modulus

    @cached_property
    def spans(self) -> tuple[SpanLoads | None, ...]:
        """The spans taken alone; None for an overhang."""
        found: list[SpanLoads | None] = []
        for number, (start, end) in enumerate(self.given.spans):
            if not self.given.between_supports(number):
                found.append(None)
                continue
            loads = {case: loads_on(self.given.loads[case], start, end) for case in self.cases}
            found.append(SpanLoads(number + 1, start, end, loads))
        return tuple(found)

    @cached_property
    def actual(self) -> tuple[LoadSet, ...]:
        """The load sets with their actual shapes: movable cases split span by span."""
        fixed = [LoadSet(case, self.given.loads[case]) for case in self.cases if case not in PLACED]
        placed = [
            LoadSet(each.case, each.loads, f"{each.beam} span {each.span + 1}")
            for each in self.given.placements
        ]
        return (*fixed, *placed)

    @cached_property
    def reduction(self) -> Reduction | None:
        """How far live load is reduced in the beam's own design; None where the job asks for none."""
        rule = self.given.basis.live_load_reduction
        if rule == "none":
            return None
        area = sum(part.area for part in self.given.tributary)
        # A slab held along one edge only is a cantilever from this beam.
        slabs = any(sum(transfer.supported) == 1 for transfer in self.given.panels)
        return reduction(
            rule,
            area,
            category=self.given.basis.occupancy,
            cantilever=slabs or any(self.given.free),
            own_psi0=self.given.live_psi.psi0 if self.given.live_psi else None,
        )

    @cached_property
    def reduced_sources(self) -> frozenset[str]:
        """The panels and beams whose live load is reduced; none where the factor is 1."""
        if self.reduction is None or self.reduction.factor == 1.0:
            return frozenset()
        return frozenset(part.source for part in self.given.tributary if not part.exempt)

    def _lessened(self, case: Case, loads: Sequence[Load]) -> tuple[Load, ...]:
        """Loads as the beam is designed for them: live load that may be reduced times the factor."""
        if case != "live" or self.reduction is None or not self.reduced_sources:
            return tuple(loads)
        factor = self.reduction.factor
        return tuple(_times(load, factor) if load.source in self.reduced_sources else load for load in loads)

    @cached_property
    def design_sets(self) -> tuple[LoadSet, ...]:
        """The load sets the design rests on: actual, or with equivalent uniform loads in the spans."""
        return self._sets(self._lessened)

    def _sets(self, taken: Callable[[Case, Sequence[Load]], tuple[Load, ...]]) -> tuple[LoadSet, ...]:
        """The load sets of the design with each case's loads as taken."""
        if self.given.design_loads == "actual":
            return tuple(replace(each, loads=taken(each.case, each.loads)) for each in self.actual)
        whole = {case: taken(case, self.given.loads[case]) for case in self.cases}
        return (
            *(LoadSet(case, self._uniform(whole[case])) for case in self.cases if case not in PLACED),
            *(
                LoadSet(case, self._uniform(whole[case], number), f"{self.given.mark} span {number + 1}")
                for case in self.cases
                if case in PLACED
                for number in range(len(self.spans))
            ),
        )

    def _uniform(self, given: Sequence[Load], only: int | None = None) -> tuple[Load, ...]:
        """A case's loads made uniform in the spans, on all spans or on one.

        Overhangs keep their actual load, and point loads at span ends stay where they are: at
        the end of the span before them.
        """
        field = FIELD[self.given.equivalent]
        loads: list[Load] = []
        for number, (start, end) in enumerate(self.given.spans):
            if only is not None and number != only:
                continue
            span = self.spans[number]
            if span is None:
                loads += [_moved(load, start) for load in loads_on(given, start, end)]
            elif value := float(getattr(equivalents(span.length, loads_on(given, start, end)), field)):
                loads.append(LineLoad(start, end, value, value, f"equivalent {self.given.equivalent}"))
            ends = (start, end) if number == 0 else (end,)
            loads += [
                load
                for load in given
                if isinstance(load, PointLoad)
                and any(abs(load.at - at) <= 1e-9 * self.given.length for at in ends)
            ]
        return tuple(loads)

    @cached_property
    def analysed(self) -> AnalysedBeam:
        """The beam under all its combinations."""
        return analyse_beam(self.line, self.design_sets, self.given.actions.combinations, self.stiffness)

    @cached_property
    def handed_on(self) -> AnalysedBeam:
        """The beam with its live load in full: what stands below it applies its own reduction.

        The same as ``analysed`` where nothing is reduced.
        """
        if not self.reduced_sources:
            return self.analysed
        full = self._sets(lambda _, loads: tuple(loads))
        return analyse_beam(self.line, full, self.given.actions.combinations)

    @cached_property
    def by_case(self) -> Response:
        """The response to each case with every span loaded, one row a case, actual loads."""
        return analyse(self.line, [self.given.loads[case] for case in self.cases])

    @property
    def unloaded(self) -> bool:
        """Whether nothing at all stands on the beam."""
        return not any(self.given.loads.values())

    @cached_property
    def _scale(self) -> float:
        """All the load on the beam [kN], to tell a value from rounding."""
        return sum(abs(load.total) for case in self.cases for load in self.given.loads[case])

    def significant(self, value: float, kind: str) -> bool:
        """Whether a force [kN] or a moment [kNm] is more than rounding."""
        scale = self._scale * (self.given.length if kind == "moment" else 1.0)
        return abs(value) > 1e-9 * scale

    def settled(self, value: float, kind: str) -> float:
        """The value, or zero where it is no more than rounding."""
        return value if self.significant(value, kind) else 0.0

    def total(self, case: Case) -> float:
        """All of a case on the beam [kN]."""
        return sum(load.total for load in self.given.loads[case])


def _times(load: Load, factor: float) -> Load:
    if isinstance(load, PointLoad):
        return replace(load, force=factor * load.force)
    return replace(load, first=factor * load.first, last=factor * load.last)


def _moved(load: Load, by: float) -> Load:
    if isinstance(load, PointLoad):
        return PointLoad(load.at + by, load.force, load.source)
    return LineLoad(load.start + by, load.end + by, load.first, load.last, load.source)


def results_of(study: Study) -> dict[str, Any]:
    """The ``results`` of a sheet's record, in kN, m, kNm, and mm for deflections."""
    given, analysed = study.given, study.analysed
    total, live = analysed.deflection_total, analysed.deflection_live
    shear = max((abs(each.shear_max.value) for each in analysed.of_limit("strength")), default=0.0)
    return {
        "spans": [end - start for start, end in given.spans],
        "supports": [bearing.at for bearing in given.bearings],
        "fixed": list(given.fixed),
        "loads": {case: [_load(load) for load in given.loads[case]] for case in study.cases},
        "total": {case: study.total(case) for case in study.cases},
        "reactions": {
            case: [float(value) for value in study.by_case.reactions[row]]
            for row, case in enumerate(study.cases)
        },
        "equivalent": [
            None
            if span is None
            else {
                case: {field: float(getattr(values, field)) for field in FIELD.values()}
                for case, values in span.equivalents.items()
            }
            for span in study.spans
        ],
        "combinations": [
            {
                "name": each.combination.name,
                "limit": each.combination.limit,
                "moment_max": each.moment_max.value,
                "moment_min": each.moment_min.value,
                "shear_max": abs(each.shear_max.value),
                "reactions_max": list(each.reactions_max),
                "reactions_min": list(each.reactions_min),
            }
            for each in analysed.results
        ],
        "envelope": {
            "moment_max": analysed.moment_max.value,
            "moment_max_at": analysed.moment_max.at,
            "moment_min": analysed.moment_min.value,
            "moment_min_at": analysed.moment_min.at,
            "shear_max": shear,
        },
        "deflection": None
        if total is None or live is None
        else {"total_mm": abs(total[1].value) * 1000, "live_mm": abs(live.value) * 1000},
    }


def _load(load: Load) -> dict[str, Any]:
    if isinstance(load, PointLoad):
        return {"at": load.at, "force": load.force, "source": load.source}
    return {
        "from": load.start,
        "to": load.end,
        "start": load.first,
        "end": load.last,
        "source": load.source,
    }
