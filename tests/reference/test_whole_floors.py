"""Whole floors from the job file to every figure of every beam, against a second road to the same figures.

The second road (``second_road.py`` and its parts) shares no code with the package. Combinations are written
out here by hand from the standards.
"""

from __future__ import annotations

import csv
import shutil
from collections.abc import Callable, Iterable, Iterator
from dataclasses import replace
from functools import cache
from itertools import pairwise
from pathlib import Path
from typing import Any, NamedTuple

import openpyxl
import pytest
from second_road import Beam, Carried
from second_road_job import CASES, MOVABLE, Floor, Force

from calcpack.framing import frame
from calcpack.job import read_job
from calcpack.notebook.parameters import beam_input
from calcpack.notebook.study import Study, results_of
from calcpack.notebook.templates import find_template
from calcpack.verification.tables import find_topic

FLOORS = ("press_floor", "apple_store", "turned_hall")
SECOND_ROAD = find_topic("floors").find_method("second road")
EXACT = SECOND_ROAD.within  # relative

# --- combinations, by hand ---------------------------------------------------------------------------------

Factors = frozenset[tuple[str, float]]
Combination = tuple[str, Factors]  # limit, factors


def of(limit: str, *terms: dict[str, float]) -> list[Combination]:
    return [(limit, frozenset(each.items())) for each in terms]


# EN 1990, Table A1.1, category D: ψ0 = 0.7, ψ1 = 0.7, ψ2 = 0.6; snow up to 1000 m: 0.5, 0.2, 0. From memory.
# (6.10a) γG G + γQ ψ0,1 Q1 + γQ ψ0,i Qi; (6.10b) ξ γG G + γQ Q1 + γQ ψ0,i Qi; γG 1.35 (ξ 0.85) or 1, γQ 1.5.
PRESS_FLOOR = [
    *(
        each
        for dead in (1.35, 1.0)
        for each in of(
            "strength",
            {"dead": dead},
            {"dead": dead, "live": 1.05},
            {"dead": dead, "snow": 0.75},
            {"dead": dead, "live": 1.05, "snow": 0.75},
        )
    ),
    *(
        each
        for dead in (1.1475, 1.0)
        for each in of(
            "strength",
            {"dead": dead},
            {"dead": dead, "live": 1.5},
            {"dead": dead, "live": 1.5, "snow": 0.75},
            {"dead": dead, "snow": 1.5},
            {"dead": dead, "snow": 1.5, "live": 1.05},
        )
    ),
    # (6.14b) G + Q1 + ψ0,i Qi; (6.15b) G + ψ1,1 Q1 + ψ2,i Qi; (6.16b) G + ψ2,i Qi
    *of(
        "service",
        {"dead": 1.0},
        {"dead": 1.0, "live": 1.0},
        {"dead": 1.0, "live": 1.0, "snow": 0.5},
        {"dead": 1.0, "snow": 1.0},
        {"dead": 1.0, "snow": 1.0, "live": 0.7},
        {"dead": 1.0, "live": 0.7},
        {"dead": 1.0, "snow": 0.2},
        {"dead": 1.0, "snow": 0.2, "live": 0.6},
        {"dead": 1.0, "live": 0.6},
    ),
]
# ASCE 7-22, 2.4.1, 1 to 4; Appendix CC.2 for service; roof live load alike, common practice. From memory.
APPLE_STORE = [
    *of(
        "strength",
        {"dead": 1.0},
        {"dead": 1.0, "live": 1.0},
        {"dead": 1.0, "roof_live": 1.0},
        {"dead": 1.0, "snow": 0.7},
        {"dead": 1.0, "live": 0.75},
        {"dead": 1.0, "live": 0.75, "roof_live": 0.75},
        {"dead": 1.0, "live": 0.75, "snow": 0.525},  # 0.75 (0.7 S)
    ),
    *of(
        "service",
        {"dead": 1.0, "live": 1.0},
        {"dead": 1.0, "roof_live": 1.0},
        {"dead": 1.0, "snow": 0.5},
        {"dead": 1.0, "live": 0.5},
    ),
]
# As the job file states them.
TURNED_HALL = [
    *of(
        "strength",
        {"dead": 1.3, "live": 1.45, "snow": 0.6},
        {"dead": 1.3, "live": 0.9, "snow": 1.55},
        {"dead": 1.3, "live": 0.9, "roof_live": 1.4},
        {"dead": 0.85, "live": 1.45, "roof_live": 1.4},
    ),
    *of(
        "service",
        {"dead": 1.0, "live": 1.0, "snow": 0.5},
        {"dead": 1.0, "live": 0.45, "roof_live": 0.3},
    ),
]
COMBINATIONS = {"press_floor": PRESS_FLOOR, "apple_store": APPLE_STORE, "turned_hall": TURNED_HALL}


def for_cases(combinations: Iterable[Combination], cases: Iterable[str]) -> set[Combination]:
    """Combinations with the cases that occur alone."""
    there = set(cases)
    cut = (
        (limit, frozenset(each for each in factors if each[0] in there)) for limit, factors in combinations
    )
    return {each for each in cut if each[1]}


def says_as_much(one: Combination, other: Combination) -> bool:
    """Whether a combination covers another: nothing but more movable load, which may be there or not."""
    first, second = dict(one[1]), dict(other[1])
    return one[0] == other[0] and all(
        first.get(case, 0.0) >= second.get(case, 0.0)
        if case in MOVABLE
        else first.get(case, 0.0) == second.get(case, 0.0)
        for case in CASES
    )


# --- both roads ------------------------------------------------------------------------------------------


@pytest.fixture(scope="module")
def job_file(tmp_path_factory):
    """Path of a floor's job file by its name; the panels of the store as a workbook."""
    here = Path(__file__).parent / "floors"
    folder = tmp_path_factory.mktemp("floors")
    shutil.copytree(here, folder, dirs_exist_ok=True)
    book = openpyxl.Workbook()
    sheet = book.active
    with (folder / "apple_store" / "panels.csv").open(encoding="utf-8", newline="") as stream:
        for row in csv.reader(stream):
            sheet.append([as_number(cell) for cell in row])
    book.save(folder / "apple_store" / "panels.xlsx")
    (folder / "apple_store" / "panels.csv").unlink()
    paths = {name: folder / f"{name}.toml" for name in FLOORS}
    paths["apple_store"] = folder / "apple_store" / "job.toml"
    return paths.__getitem__


def as_number(cell: str) -> str | float | None:
    try:
        return float(cell)
    except ValueError:
        return cell or None


class Program(NamedTuple):
    """What the package makes of a floor."""

    supports: dict[str, dict[str, float]]
    applied: dict[str, float]
    order: tuple[str, ...]
    results: dict[str, dict[str, Any]]  # mark -> results of the record
    combinations: dict[str, list[Combination]]  # mark -> in the order of the results


@cache
def program(path: Path) -> Program:
    framed = frame(read_job(path))
    results, combinations = {}, {}
    for mark, beam in framed.beams.items():
        template = find_template(beam.beam.template, path.parent)
        given = beam_input(framed, mark, template.settle(beam.beam.design, mark), template.stamp)
        results[mark] = results_of(Study(given))
        combinations[mark] = [
            (each.limit, frozenset(each.factors.items())) for each in given.actions.combinations
        ]
    return Program(framed.supports, framed.applied, framed.order, results, combinations)


@cache
def second_road(path: Path) -> Carried:
    return Carried(Floor(path))


class Pair(NamedTuple):
    """A figure by both roads."""

    kind: str
    where: str
    first: float
    second: float
    scale: float  # the largest of its kind on the beam or the floor

    @property
    def apart(self) -> float:
        """Relative difference; of what is a thousandth of its kind or less, to that thousandth."""
        return abs(self.first - self.second) / max(abs(self.second), 1e-3 * self.scale, 1e-12)


def paired(
    kind: str, where: str, first: Iterable[float], second: Iterable[float], scale: float = 0.0
) -> Iterator[Pair]:
    ours, theirs = [float(each) for each in first], [float(each) for each in second]
    scale = max([scale, *(abs(each) for each in theirs)])
    for number, (one, other) in enumerate(zip(ours, theirs, strict=True)):
        yield Pair(kind, f"{where} [{number}]", one, other, scale)


def pairs_of(first: Program, second: Carried, combinations: list[Combination]) -> Iterator[Pair]:
    """Every figure of a floor."""
    there = [case for case in CASES if second.applied[case]]
    yield from paired(
        "applied", "floor", (first.applied[case] for case in there), map(second.applied.get, there)
    )
    for case in there:
        marks = list(second.supports)
        yield from paired(
            "supports",
            case,
            (first.supports[m][case] for m in marks),
            (second.supports[m][case] for m in marks),
        )
    for mark, beam in second.beams.items():
        yield from pairs_of_beam(mark, first.results[mark], first.combinations[mark], beam, combinations)


def pairs_of_beam(
    mark: str,
    results: dict[str, Any],
    combined: list[Combination],
    beam: Beam,
    combinations: list[Combination],
) -> Iterator[Pair]:
    ends = beam.stops
    yield from paired("spans", mark, results["spans"], (b - a for a, b in pairwise(ends)))
    assert list(results["loads"]) == beam.cases
    for case in beam.cases:
        yield from paired(
            "loads", f"{mark} {case} total", [results["total"][case]], [sum_of(beam.of(case))[0]]
        )
        sources = sorted({load.source for load in beam.of(case)})
        assert sorted({load["source"] for load in results["loads"][case]}) == sources
        for source in sources:
            ours = resultant(load for load in results["loads"][case] if load["source"] == source)
            theirs = sum_of(load for load in beam.of(case) if load.source == source)
            yield from paired("loads", f"{mark} {case} {source} total", ours[:1], theirs[:1])
            yield from paired("loads", f"{mark} {case} {source} moment about the start", ours[1:], theirs[1:])
        yield from paired(
            "reactions", f"{mark} {case}", results["reactions"][case], beam.reactions(("all", case))
        )
    for number, (ours, theirs) in enumerate(zip(results["equivalent"], beam.equivalents, strict=True)):
        assert (ours is None) == (theirs is None)
        for case, found in (theirs or {}).items():
            assert set(ours[case]) == set(found)
            where = f"{mark} span {number + 1} {case}"
            yield from paired(
                "equivalents", f"{where} {list(found)}", map(ours[case].get, found), found.values()
            )
    yield from pairs_of_combinations(mark, results, combined, beam, combinations)


def sum_of(loads: Iterable[Any]) -> tuple[float, float]:
    """All of some loads of the second road, and their moment about the beam's start."""
    kept = list(loads)
    return sum(load.total for load in kept), sum(load.turning for load in kept)


def resultant(loads: Iterable[dict[str, Any]]) -> tuple[float, float]:
    """The same of loads as the record has them."""
    force = moment = 0.0
    for load in loads:
        if "at" in load:
            force += load["force"]
            moment += load["force"] * load["at"]
            continue
        length = load["to"] - load["from"]
        for part, third in ((load["start"], 1 / 3), (load["end"], 2 / 3)):
            force += part * length / 2
            moment += part * length / 2 * (load["from"] + third * length)
    return force, moment


def pairs_of_combinations(
    mark: str,
    results: dict[str, Any],
    combined: list[Combination],
    beam: Beam,
    combinations: list[Combination],
) -> Iterator[Pair]:
    expected = for_cases(combinations, beam.cases)
    assert set(combined) <= expected
    assert all(any(says_as_much(one, other) for one in combined) for other in expected)
    worst = [beam.combined(dict(factors)) for _, factors in combined]
    shown = results["combinations"]
    assert [each["limit"] for each in shown] == [limit for limit, _ in combined]
    bending = max(abs(each[key].value) for each in worst for key in ("moment_max", "moment_min"))
    for key in ("moment_max", "moment_min"):
        ours, theirs = [each[key] for each in shown], [each[key].value for each in worst]
        yield from paired("moments", f"{mark} {key} by combination", ours, theirs, bending)
    ours, theirs = [each["shear_max"] for each in shown], [each["shear_max"] for each in worst]
    yield from paired("shears", f"{mark} by combination", ours, theirs)
    for ours, each in zip(shown, worst, strict=True):
        for key in ("reactions_max", "reactions_min"):
            yield from paired("worst reactions", f"{mark} {ours['name']} {key}", ours[key], each[key])
    strength = [k for k, (limit, _) in enumerate(combined) if limit == "strength"]
    envelope = results["envelope"]
    largest = max(worst[k]["shear_max"] for k in strength)
    yield from paired("envelope", f"{mark} shear_max", [envelope["shear_max"]], [largest])
    for key, sign, choose in (("moment_max", 1.0, max), ("moment_min", -1.0, min)):
        value = choose(worst[k][key].value for k in strength)
        yield Pair("envelope", f"{mark} {key}", envelope[key], value, bending)
        at = envelope[f"{key}_at"]
        there = choose(beam.moment(dict(combined[k][1]), at, sign) for k in strength)
        yield Pair("envelope", f"{mark} {key} at its place", there, value, bending)
        ties = [k for k in strength if abs(worst[k][key].value - value) <= 1e-9 * bending]
        places = [place for k in ties for place in worst[k][key].places]
        if max(places) - min(places) <= 1e-7 * beam.bar.length:  # else reached at several places
            yield Pair("places", f"{mark} {key}", at, places[0], beam.bar.length * 1e3)
    assert (results["deflection"] is None) == (beam.bar.stiffness is None)
    if beam.bar.stiffness:
        service = [beam.deflected(dict(factors)) for limit, factors in combined if limit == "service"]
        ours = [results["deflection"][key] for key in ("total_mm", "live_mm")]
        yield from paired(
            "deflections", mark, ours, [1e3 * max(service), 1e3 * beam.deflected({"live": 1.0})]
        )


KINDS = {
    "applied", "supports", "spans", "loads", "reactions", "equivalents", "moments", "shears",
    "worst reactions", "envelope", "places", "deflections",
}  # fmt: skip


# --- the tests ------------------------------------------------------------------------------------------


def test_as_many_floors_as_the_manual_says():
    assert len(FLOORS) == SECOND_ROAD.cases


@pytest.mark.parametrize("name", FLOORS)
def test_both_roads_agree(job_file, name):
    path = job_file(name)
    pairs = list(pairs_of(program(path), second_road(path), COMBINATIONS[name]))
    assert {pair.kind for pair in pairs} == KINDS
    assert [pair for pair in sorted(pairs, key=lambda pair: -pair.apart) if not pair.apart < EXACT] == []


@pytest.mark.parametrize("name", FLOORS)
@pytest.mark.parametrize(
    ("heavier", "seen"),
    [
        (1.0001, KINDS - {"spans", "places"}),
        (1.01, KINDS - {"spans"}),  # where the largest moment is moves little with one load
    ],
)
def test_a_little_more_load_on_one_panel_is_told_apart(job_file, name, heavier, seen):
    path = job_file(name)
    floor = Floor(path)
    slab = floor.slabs[{"press_floor": 3, "apple_store": 0, "turned_hall": 3}[name]]
    slab.pressure["dead" if name == "turned_hall" else "live"] *= heavier
    pairs = pairs_of(program(path), Carried(floor), COMBINATIONS[name])
    assert {pair.kind for pair in pairs if pair.apart > EXACT} >= seen


def test_a_ten_thousandth_of_the_plan_is_told_apart(job_file):
    path = job_file("turned_hall")
    floor = Floor(path)
    for points in (
        *(slab.corners for slab in floor.slabs),
        *(bar.points for bar in floor.bars.values()),
        *floor.columns.values(),
    ):
        points *= 1.0001
    pairs = pairs_of(program(path), Carried(floor), TURNED_HALL)
    assert {pair.kind for pair in pairs if pair.apart > EXACT} == KINDS


@pytest.mark.parametrize("name", FLOORS)
def test_every_panel_is_felt_at_the_supports(job_file, name):
    """By a ten-thousandth of its dead load."""
    path = job_file(name)
    ours, floor = program(path).supports, Floor(path)
    for slab in floor.slabs:
        dead = slab.pressure["dead"]
        slab.pressure["dead"] = dead * 1.0001
        theirs = Carried(floor).supports
        slab.pressure["dead"] = dead
        pairs = paired(
            "supports", slab.mark, (ours[m]["dead"] for m in theirs), (theirs[m]["dead"] for m in theirs)
        )
        assert max(pair.apart for pair in pairs) > EXACT


def with_beam(mark: str, **changed: Any) -> Callable[[Floor], None]:
    return lambda floor: floor.bars.update({mark: replace(floor.bars[mark], **changed)})


def with_panel(number: int, transfer: str) -> Callable[[Floor], None]:
    return lambda floor: setattr(floor.slabs[number], "transfer", transfer)


RULES: dict[str, tuple[str, Callable[[Floor], None]]] = {
    "45° lines at continuous edges": ("press_floor", lambda floor: floor.basis.update(dividing_lines="45")),
    "a free edge": ("press_floor", lambda floor: floor.walls.update(extra=floor.slabs[5].corners[[2, 3]])),
    "an end built in": ("press_floor", with_beam("G2", fixed=(False, False))),
    "a rectangle of ratio 2": ("apple_store", lambda floor: floor.basis.update(one_way_ratio=2.001)),
    "a beam's own weight": ("apple_store", with_beam("F1", weight=0.0)),
    "one-way strips askew": ("turned_hall", with_panel(1, "auto")),
    "strips along the plan's x": ("turned_hall", with_panel(1, "one-way y")),
    "equivalent design loads": ("turned_hall", with_beam("N1", design_loads="actual")),
    "each beam its own equivalent": ("turned_hall", with_beam("T1", equivalent="moment")),
}


@pytest.mark.parametrize("rule", RULES)
def test_the_floors_feel_the_rule(job_file, rule):
    """With the rule turned over in the second road alone, the two no longer agree."""
    name, change = RULES[rule]
    path = job_file(name)
    floor = Floor(path)
    change(floor)
    second = Carried(floor)
    there = [case for case in CASES if second.applied[case]]
    ours = program(path).supports
    pairs = [
        pair
        for case in there
        for pair in paired(
            "supports", case, (ours[m][case] for m in ours), (second.supports[m][case] for m in ours)
        )
    ]
    if max(pair.apart for pair in pairs) < EXACT:  # the rule is about the design of beams alone
        pairs = list(pairs_of(program(path), second, COMBINATIONS[name]))
    assert max(pair.apart for pair in pairs) > 1e3 * EXACT


def test_placements_reach_the_girders_span_by_span(job_file):
    """Every secondary's spans loaded together are not its worst."""
    path = job_file("apple_store")
    second, ours = second_road(path), program(path)
    girder = second.beams["GB"]
    assert len(girder.design[1]) > 20  # more than can be tried in every subset
    merged: dict[tuple[str, ...], list[Any]] = {}
    for key, loads in girder.loads.items():
        key = (*key[:3], "0") if key[0] == "placed" and key[2] != "GB" else key
        merged.setdefault(key, []).extend(loads)
    together = Beam(girder.bar, merged)
    results, combined = ours.results["GB"], ours.combinations["GB"]
    pairs = pairs_of_beam("GB", results, combined, together, APPLE_STORE)
    apart = {pair.kind for pair in pairs if pair.apart > 1e3 * EXACT}
    assert apart == {"moments", "shears", "worst reactions", "envelope", "deflections"}


@pytest.mark.parametrize("name", FLOORS)
def test_beams_are_solved_after_those_they_carry(job_file, name):
    path = job_file(name)
    second, order = second_road(path), program(path).order
    assert sorted(order) == sorted(second.beams)
    for mark, below in second.bearings.items():
        for kind, carrier in below:
            assert kind != "beam" or order.index(mark) < order.index(carrier)


def test_the_floors_are_what_they_are_for(job_file):
    press, store, hall = (second_road(job_file(name)) for name in FLOORS)
    assert press.beyond_ends > 0  # a panel drains past the end of an edge
    assert press.bearings["J1"][1] == ("beam", "T1")
    assert {kind for kind, _ in press.bearings["T1"]} == {"beam"}  # on G2 and G1: three levels
    assert press.bearings["E1"] == [("beam", "K1"), ("beam", "K2")]
    assert [found is None for found in store.beams["F5"].equivalents] == [True, False, False, False, True]
    assert all(kind == "beam" for mark in ("F1", "F2", "F3", "F4", "F5") for kind, _ in store.bearings[mark])
    assert {load.at for load in hall.beams["M1"].of("live") if isinstance(load, Force)} == {
        0.0,
        hall.beams["M1"].supports[1],  # what hangs over either end of the edge, one on an inner support
    }
    parts = [load for load in hall.beams["L1"].of("live") if load.source == "Q1"]
    assert parts[-1].end == pytest.approx(3.1)
    assert parts[-1].last == pytest.approx(3.5 * 2.0)  # the joint is under the flat part
    assert {bar.equivalent for bar in hall.floor.bars.values() if bar.design_loads == "equivalent"} == {
        "shear", "moment", "deflection", "fixed-end moment", "total",
    }  # fmt: skip
