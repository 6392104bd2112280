"""Beams to design, made by hand: no job file, no sheet."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise

from calcpack.actions import Combination, LoadSet, analyse_beam
from calcpack.clauses.bars import bar
from calcpack.clauses.en1992.case import BeamCase, Given, Service, SpanCase, SupportCase
from calcpack.clauses.en1992.faces import Face
from calcpack.clauses.en1992.model import Bars, Outline, Strengths, strengths
from calcpack.clauses.en1992.national import national
from calcpack.clauses.en1992.samples import C30
from calcpack.job.model import Material
from calcpack.statics import BeamLine, LineLoad, PointLoad

NATIONAL = national()
RECTANGLE = Outline(0.3, 0.5, 0.3, 0.0)
B500 = {"fyk": 500e3, "Es": 200e6}


def concrete(fck: float, **values: float) -> Strengths:
    """Strengths [kPa] of a concrete given by its strength [MPa] alone, with B500."""
    material = Material(
        key="c", kind="concrete", modulus=33e6, unit_weight=25.0, values=B500 | {"fck": fck * 1e3} | values
    )
    return strengths(material, NATIONAL)


def beam(
    spans: list[float],
    dead: float = 20.0,
    live: float = 0.0,
    *,
    overhang: float = 0.0,
    start: float = 0.0,
    points: tuple[tuple[float, float], ...] = (),
    half: float = 0.0,
    direct: bool = True,
    fixed: tuple[bool, bool] = (False, False),
    outline: Outline = RECTANGLE,
    strength: Strengths = C30,
    **changes: object,
) -> BeamCase:
    """A beam on columns under uniform loads [kN/m] and dead point loads (place [m], force [kN]).

    The design combination is G + Q on all spans at once, the lasting one G.
    """
    places = [start]
    for span in spans:
        places.append(places[-1] + span)
    length = places[-1] + overhang
    sets = [
        LoadSet("dead", (LineLoad(0.0, length, dead, dead), *(PointLoad(at, force) for at, force in points)))
    ]
    if live:
        sets.append(LoadSet("live", (LineLoad(0.0, length, live, live),)))
    combinations = [
        Combination("G + Q", "strength", {"dead": 1.0, "live": 1.0}),
        Combination("G", "service", {"dead": 1.0}),
    ]
    line = BeamLine(length, tuple(places), fixed_start=fixed[0], fixed_end=fixed[1])
    analysed = analyse_beam(line, sets, combinations)
    ends = [0.0, *places] if start else places
    ends = [*ends, length] if overhang else ends
    kinds = ["free" if start else "continuous" if fixed[0] else "simple"]
    kinds += ["continuous"] * (len(ends) - 2)
    kinds += ["free" if overhang else "continuous" if fixed[1] else "simple"]
    parts = tuple(
        SpanCase(first, last, kinds[number], kinds[number + 1])
        for number, (first, last) in enumerate(pairwise(ends))
    )
    supports = tuple(
        SupportCase(
            at,
            half,
            direct,
            f"column {number}",
            (at == 0.0 and not fixed[0]) or (at == length and not fixed[1]),
        )
        for number, at in enumerate(places)
    )
    response = analysed.response
    lasting = response.combined([1.0, 0.0][: len(sets)]).curve("moment")
    rare = response.combined([1.0] * len(sets)).curve("moment")
    service = Service(lasting, rare if live else None, lasting if live else None)
    case = BeamCase(
        sagging=outline,
        hogging=outline.turned,
        strength=strength,
        national=NATIONAL,
        cover=0.03,
        aggregate=0.016,
        exposure="XC1",
        creep=2.0,
        shrinkage=4e-4,
        crack_limit=4e-4,
        limits=(None, 250.0),
        moment=analysed.band("moment"),
        shear=analysed.band("shear"),
        lasting=analysed.of_limit("service")[0].envelope.moment,
        spans=parts,
        supports=supports,
        fixed=fixed,
        points=tuple(at for at, _ in points),
        service=(service,) * len(parts),
    )
    return replace(case, **changes)


def given(bottom=None, top=None, stirrups=None, cot=None) -> Given:
    """Bars as a job gives them: (count, size), (legs, size, spacing [m])."""

    def sized(each):
        return each and (each[0], bar(each[1]), *each[2:])

    return Given(sized(bottom), sized(top), sized(stirrups), cot)


def face(
    case: BeamCase, count: int = 3, size: str = "20 mm", moment: float = 0.0, lasting: float = 0.0, **keys
) -> Face:
    """Bottom bars in one layer, 40 mm from the face."""
    return Face(case, case.sagging, Bars(bar(size), (count,), 0.04, 0.041), moment, lasting, **keys)
