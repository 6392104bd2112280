"""A floor said in other ways has the same figures: in other units, mirrored, turned, walked backwards."""

from __future__ import annotations

import math
import re
from collections import defaultdict
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest

from calcpack.framing import Frame, frame
from calcpack.job import read_job
from calcpack.job.model import Beam, BeamLoad, Job, Point
from calcpack.notebook.parameters import beam_input
from calcpack.notebook.study import Study, results_of
from calcpack.notebook.templates import find_template
from calcpack.verification.tables import find_topic

FLOORS = Path(__file__).parent / "floors"
NAMES = ("press_floor", "turned_hall")
OTHER_UNITS = find_topic("floors").find_method("other units")
MOVED = find_topic("floors").find_method("moved")
SAME = OTHER_UNITS.within  # of the largest of its kind
TURNS = (17.3, 90.0, 201.0)  # [degrees]

FOOT, POUND = 0.3048, 4.4482216152605e-3  # [m], [kN], exact by definition
US_UNITS = {
    "m": ("ft", FOOT),
    "mm": ("in", FOOT / 12 * 1000),
    "kN": ("kip", 1000 * POUND),
    "kN/m": ("plf", POUND / FOOT),
    "kPa": ("psf", POUND / FOOT**2),
    "GPa": ("ksi", 1000 * POUND / (FOOT / 12) ** 2 / 1e6),
    "kN/m^3": ("pcf", POUND / FOOT**3),
}

Results = dict[str, Any]


def figures(framed: Frame) -> Results:
    """All that a floor's sheets and its job.json have of figures."""
    beams = {}
    for mark, beam in framed.beams.items():
        template = find_template(beam.beam.template, FLOORS)
        given = beam_input(framed, mark, template.settle(beam.beam.design, mark), template.stamp)
        beams[mark] = results_of(Study(given))
    return {"supports": framed.supports, "applied": framed.applied, "beams": beams}


def leaves(value: Any, path: tuple[Any, ...] = ()) -> Iterator[tuple[tuple[Any, ...], Any]]:
    """Every single value with its place."""
    if isinstance(value, dict):
        for key, inner in value.items():
            yield from leaves(inner, (*path, key))
    elif isinstance(value, list | tuple):
        for number, inner in enumerate(value):
            yield from leaves(inner, (*path, number))
    else:
        yield path, value


def kind(path: tuple[Any, ...]) -> str:
    """What a figure is: lengths, forces and moments are of the kind of their key."""
    if path[0] in ("supports", "applied") or path[2] in ("total", "reactions"):
        return str(path[0] if path[0] != "beams" else path[2])
    return " ".join(str(part) for part in path[2:] if isinstance(part, str) and part not in CASES)


CASES = ("dead", "live", "roof_live", "snow")


def differences(first: Results, second: Results) -> dict[str, float]:
    """For each kind the largest difference, as a part of the largest of its kind. Words must be the same."""
    ours, theirs = dict(leaves(first)), dict(leaves(second))
    assert list(ours) == list(theirs)
    largest: dict[str, float] = defaultdict(float)
    apart: dict[str, float] = defaultdict(float)
    for path, value in ours.items():
        other = theirs[path]
        if not isinstance(value, float):
            assert value == other, path
            continue
        largest[kind(path)] = max(largest[kind(path)], abs(value))
        apart[kind(path)] = max(apart[kind(path)], abs(value - other))
    return {name: apart[name] / max(largest[name], 1e-6) for name in largest}


def too_far(found: dict[str, float]) -> dict[str, float]:
    return {name: apart for name, apart in found.items() if not apart <= SAME}


@pytest.fixture(scope="module")
def floors() -> dict[str, tuple[Job, Results]]:
    """Each floor as it is."""
    jobs = {name: read_job(FLOORS / f"{name}.toml") for name in NAMES}
    return {name: (job, figures(frame(job))) for name, job in jobs.items()}


# --- other units ----------------------------------------------------------------------------------------


def in_us_units(text: str, factor: float = 1.0) -> str:
    """A job file with each quantity converted; lengths a little longer for a test that has to fail."""

    def converted(match: re.Match[str]) -> str:
        unit, size = US_UNITS[match["unit"]]
        stretch = factor if unit == "ft" else 1.0
        return f'"{float(match["number"]) / size * stretch!r} {unit}"'

    text = re.sub(r'"(?P<number>-?[0-9.]+) (?P<unit>[kGm][A-Za-z/^0-9]*)"', converted, text)
    return text.replace("date = 2026-12-01", 'date = 2026-12-01\nunits = "US"')


def test_as_many_floors_as_the_manual_says():
    assert len(NAMES) == OTHER_UNITS.cases
    assert len(NAMES) + len(TURNS) + len(NAMES) == MOVED.cases  # mirrored, turned, walked backwards
    assert MOVED.within == SAME
    assert all(f"{degrees:g}°" in MOVED.says for degrees in TURNS)


@pytest.mark.parametrize("name", NAMES)
def test_us_units(floors, tmp_path, name):
    text = in_us_units((FLOORS / f"{name}.toml").read_text(encoding="utf-8"))
    assert not re.search(r'[0-9] (m|mm|kN|kN/m|kPa|GPa)"', text)
    job = tmp_path / "job.toml"
    job.write_text(text, encoding="utf-8")
    read = read_job(job)
    assert read.job.units == "US"
    assert too_far(differences(floors[name][1], figures(frame(read)))) == {}


def test_lengths_converted_a_little_wrong_are_told_apart(floors, tmp_path):
    """A foot of 0.30480001 m."""
    text = (FLOORS / "press_floor.toml").read_text(encoding="utf-8")
    job = tmp_path / "job.toml"
    job.write_text(in_us_units(text, 0.3048 / 0.30480001), encoding="utf-8")
    found = differences(floors["press_floor"][1], figures(frame(read_job(job))))
    same = {name for name in found if name not in too_far(found)}
    assert same == set()


# --- another place and another way ----------------------------------------------------------------------


def moved(job: Job, move: Callable[[Point], Point], mirrored: bool) -> Job:
    """A job with every point of the plan somewhere else."""

    def put(points: tuple[Point, ...]) -> tuple[Point, ...]:
        return tuple(move(point) for point in points)

    turn = slice(None, None, -1 if mirrored else 1)  # outlines stay counter-clockwise
    panels = tuple(
        panel.model_copy(
            update={"corners": put(panel.corners)[turn], "corner_names": panel.corner_names[turn]}
        )
        for panel in job.panels
    )
    return job.model_copy(
        update={
            "panels": panels,
            "beams": tuple(beam.model_copy(update={"points": put(beam.points)}) for beam in job.beams),
            "columns": tuple(column.model_copy(update={"at": move(column.at)}) for column in job.columns),
            "walls": tuple(wall.model_copy(update={"line": put(wall.line)}) for wall in job.walls),
        }
    )


def ordered(results: Results) -> Results:
    """Loads in an order that no panel's first edge decides; no place for a moment of zero."""
    beams = {}
    for mark, each in results["beams"].items():
        envelope = dict(each["envelope"])
        for key, other in (("moment_max", "moment_min"), ("moment_min", "moment_max")):
            if abs(envelope[key]) <= SAME * abs(envelope[other]):  # so at more than one end
                envelope[f"{key}_at"] = None
        loads = {case: sorted(row, key=place_of) for case, row in each["loads"].items()}
        beams[mark] = each | {"loads": loads, "envelope": envelope}
    return results | {"beams": beams}


def place_of(load: dict[str, Any]) -> tuple[Any, ...]:
    start = load.get("from", load.get("at"))
    return load["source"], "at" in load, round(start, 6), round(load.get("to", start), 6)


@pytest.mark.parametrize("name", NAMES)
def test_mirrored(floors, name):
    """In the line x = 0; beams keep their start."""
    job, results = floors[name]
    found = figures(frame(moved(job, lambda at: (-at[0], at[1]), mirrored=True)))
    assert too_far(differences(ordered(results), ordered(found))) == {}


@pytest.mark.parametrize("degrees", TURNS)
def test_turned_and_shifted(floors, degrees):
    """Only a floor whose panels name no direction of the plan."""
    job, results = floors["press_floor"]
    sine, cosine = math.sin(math.radians(degrees)), math.cos(math.radians(degrees))

    def move(at: Point) -> Point:
        return 20 + at[0] * cosine - at[1] * sine, -35 + at[0] * sine + at[1] * cosine

    found = figures(frame(moved(job, move, mirrored=False)))
    assert too_far(differences(ordered(results), ordered(found))) == {}


def backwards(job: Job) -> Job:
    """Every beam from its other end."""
    return job.model_copy(update={"beams": tuple(walked_backwards(beam) for beam in job.beams)})


def walked_backwards(beam: Beam) -> Beam:
    length = math.dist(beam.points[0], beam.points[-1])

    def turned(load: BeamLoad) -> BeamLoad:
        if load.point is not None:
            return load.model_copy(update={"at": length - load.at})
        last = load.line if load.line_end is None else load.line_end
        end = length if load.end is None else load.end
        return load.model_copy(
            update={"start": length - end, "end": length - load.start, "line": last, "line_end": load.line}
        )

    return beam.model_copy(
        update={
            "points": beam.points[::-1],
            "point_names": beam.point_names[::-1],
            "fixed_start": beam.fixed_end,
            "fixed_end": beam.fixed_start,
            "free_start": beam.free_end,
            "free_end": beam.free_start,
            "loads": tuple(turned(load) for load in beam.loads),
        }
    )


def results_backwards(results: Results) -> Results:
    """What the results of the beams walked backwards should be."""
    beams = {}
    for mark, each in results["beams"].items():
        length = sum(each["spans"])
        loads = {case: [load_backwards(load, length) for load in row] for case, row in each["loads"].items()}
        beams[mark] = each | {
            "spans": each["spans"][::-1],
            "supports": [length - at for at in each["supports"][::-1]],
            "fixed": each["fixed"][::-1],
            "loads": loads,
            "reactions": {case: row[::-1] for case, row in each["reactions"].items()},
            "equivalent": each["equivalent"][::-1],
            "combinations": [
                row | {key: row[key][::-1] for key in ("reactions_max", "reactions_min")}
                for row in each["combinations"]
            ],
            "envelope": each["envelope"]
            | {key: length - each["envelope"][key] for key in ("moment_max_at", "moment_min_at")},
        }
    return results | {"beams": beams}


def load_backwards(load: dict[str, Any], length: float) -> dict[str, Any]:
    if "at" in load:
        return load | {"at": length - load["at"]}
    return load | {
        "from": length - load["to"],
        "to": length - load["from"],
        "start": load["end"],
        "end": load["start"],
    }


@pytest.mark.parametrize("name", NAMES)
def test_walked_backwards_in_a_mirror(floors, name):
    job, results = floors[name]
    found = figures(frame(backwards(moved(job, lambda at: (at[0], 7.5 - at[1]), mirrored=True))))
    expected = results_backwards(results)
    assert too_far(differences(ordered(expected), ordered(found))) == {}
