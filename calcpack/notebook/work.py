"""A sheet in the making: the study of its beam, the page it is written on, and the lines so far."""

from __future__ import annotations

from collections.abc import Hashable, Sequence
from dataclasses import dataclass, field
from functools import cached_property
from typing import Any, Literal, NamedTuple

from calcpack.clauses.bars import Stock, stock_of
from calcpack.equivalent import Shape, shape_of
from calcpack.framing.types import EdgeShare, PanelTransfer
from calcpack.job.model import Case
from calcpack.notebook.parameters import BeamInput, from_text
from calcpack.notebook.study import SpanLoads, Study
from calcpack.sheet import Expression, Line, Sheet, show, total

LETTER: dict[Case, str] = {"dead": "g", "live": "q", "roof_live": "r", "snow": "s"}
SELF_WEIGHT = "self weight"
NOTHING = (
    "Nothing stands on this beam: no panel drains to it, no beam comes down on it, it has no load of its own "
    "and no section and material to weigh it by."
)


@dataclass(frozen=True)
class Source:
    """Where a load on the beam comes from, with the number that its symbols carry.

    Parameters
    ----------
    name : str
        As in the loads: a panel's mark, a beam's mark, ``self weight``, ``load 2``.
    kind : str
        "panel", "beam", "self weight" or "own".
    index : int
        Self weight is 0, the others count from 1.
    """

    name: str
    kind: str
    index: int

    @property
    def words(self) -> str:
        """As an engineer would say it."""
        if self.kind == "self weight":
            return "self weight of the beam"
        return f"{self.kind} {self.name}" if self.kind != "own" else f"given {self.name}"


@dataclass(frozen=True)
class Alike:
    """Loads of one shape on a span: the shape, the sources, the sum of their peaks."""

    shape: Shape
    names: tuple[str, ...]
    peak: Expression | Line


def summed(terms: Sequence[Expression | Line]) -> Expression | Line:
    """The sum of terms; a single one as it is."""
    return total(terms) if len(terms) > 1 else terms[0]


class StatedDeflection(NamedTuple):
    """A deflection of a beam's design, stated everywhere in place of the elastic one.

    Parameters
    ----------
    key : "total_mm" or "live_mm"
        Its field in the results.
    says : str
        "deflection, final".
    at : float [m]
        From the beam's start.
    under : str
        What it holds: "G + 0.6 Q, creep and shrinkage".
    line : Line [mm]
    """

    key: Literal["total_mm", "live_mm"]
    says: str
    at: float
    under: str
    line: Line


@dataclass
class Work:
    """What the sections of a sheet share.

    ``deflections`` are those of a design that works out a cracked beam; without any the elastic ones are
    stated. ``lines`` keeps the lines that later sections draw on, under a key that says what they are:
    ``("peak", "dead", "P1")``. ``checks`` are the requirements on the beam itself, by name.
    """

    study: Study
    sheet: Sheet
    lines: dict[Hashable, Line] = field(default_factory=dict)
    checks: list[tuple[str, Line]] = field(default_factory=list)
    deflections: tuple[StatedDeflection, ...] = ()

    @property
    def given(self) -> BeamInput:
        """The beam's input."""
        return self.study.given

    def show(self, value: float, unit: str, *, exact: bool = False) -> str:
        """A value in words of the job's unit system."""
        return show(value, unit, self.study.system, exact)

    @property
    def bearings(self) -> list[tuple[float, str, str]]:
        """Where the beam rests, as figures take it: place [m], kind, mark."""
        return [(each.at, each.kind, each.mark) for each in self.given.bearings]

    @cached_property
    def stock(self) -> Stock:
        """The bars there are, the job's own before the office's."""
        return stock_of(self.given.bars)

    @cached_property
    def sources(self) -> dict[str, Source]:
        """All sources of load on the beam by name: self weight, panels, beams, own loads."""
        panels = {transfer.panel.mark for transfer in self.given.panels}
        beams = {carried.mark for carried in self.given.carried}
        found: dict[str, Source] = {}
        names = dict.fromkeys(load.source for case in self.study.cases for load in self.given.loads[case])
        ranked = sorted(names, key=lambda name: (name not in panels, name not in beams))
        for name in ranked:
            if name == SELF_WEIGHT:
                found[name] = Source(name, "self weight", 0)
            else:
                kind = "panel" if name in panels else "beam" if name in beams else "own"
                index = 1 + sum(source.index > 0 for source in found.values())
                found[name] = Source(name, kind, index)
        return found

    def share(self, transfer: PanelTransfer) -> EdgeShare:
        """The share of a panel that drains to this beam."""
        return next(share for share in transfer.shares if share.carrier == self.given.mark)

    def shapes(self, span: SpanLoads, case: Case) -> dict[str, Shape]:
        """The shape of each source's load on a span in a case, in the order of the sources."""
        by_source: dict[str, list[Any]] = {}
        for load in span.loads[case]:
            by_source.setdefault(load.source, []).append(load)
        shapes = {name: shape_of(span.length, by_source[name]) for name in self.sources if name in by_source}
        return {name: shape for name, shape in shapes.items() if shape.lines or shape.points}

    def symmetric(self, span: SpanLoads, case: Case) -> bool:
        """Whether every load on the span is a uniform, triangular or trapezoidal one."""
        return all(
            shape.kind != "general" and ("peak", case, name) in self.lines
            for name, shape in self.shapes(span, case).items()
        )

    def alike(self, span: SpanLoads, case: Case) -> list[Alike]:
        """The symmetric loads of a case, those of one shape put together."""
        groups: dict[tuple[str, float], tuple[Shape, list[str]]] = {}
        for name, shape in self.shapes(span, case).items():
            key = (shape.kind, round(shape.side_ratio, 9))
            groups.setdefault(key, (shape, []))[1].append(name)
        return [
            Alike(shape, tuple(names), summed([self.lines["peak", case, name] for name in names]))
            for shape, names in groups.values()
        ]

    @property
    def simple(self) -> SpanLoads | None:
        """The one span of a beam on two supports at its ends, turning freely; else None."""
        if len(self.study.spans) == 1 and not any(self.given.fixed):
            return self.study.spans[0]
        return None

    def stated(self, key: Hashable, value: float) -> Line | None:
        """The line under a key, if it says this value (by size) already."""
        line = self.lines.get(key)
        if line is None or abs(abs(line.value) - abs(value)) > 1e-9 * abs(value):
            return None
        return line


def load_sheet(parameters: str) -> Work:
    """Begin the sheet of a beam.

    Parameters
    ----------
    parameters : str
        JSON text, as the notebook's first cell holds it.

    Returns
    -------
    Work

    Raises
    ------
    CalcpackError
        The text is not a beam's parameters.
    """
    given = from_text(parameters)
    return Work(Study(given), Sheet(given.mark, given.header.units))
