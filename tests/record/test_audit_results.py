"""The second method and what goes with it, over many kinds of beams, against the program and by hand."""

from __future__ import annotations

import json
import math
import time

import numpy as np
import pytest

from calcpack.framing import frame
from calcpack.job import read_job
from calcpack.job.errors import CalcpackError
from calcpack.notebook.parameters import beam_input, to_text
from calcpack.notebook.study import Study, results_of
from calcpack.notebook.templates import find_template
from calcpack.record.auditing.beam import Load, solve
from calcpack.record.auditing.demands import reduction_factor
from calcpack.record.auditing.envelopes import Worst
from calcpack.record.auditing.findings import Verdict
from calcpack.record.auditing.given import Given
from calcpack.record.auditing.plane import area, nearest_areas, strip_areas
from calcpack.record.auditing.properties import section_properties
from calcpack.record.auditing.reading import canonical, read_record
from calcpack.record.auditing.results import audit_results
from calcpack.record.auditing.sources import audit_sources
from calcpack.record.auditing.spans import span_equivalents

BASES = {
    "as it is": "",
    "equivalent loads": 'design_loads = "equivalent"\nequivalent = "shear"\n',
    "deflection": 'design_loads = "equivalent"\nequivalent = "deflection"\n',
    "60 degrees": 'dividing_lines = "60 at continuous edges"\n',
    "reduced": 'live_load_reduction = "EN 1991-1-1 6.3.1.2"\noccupancy = "B"\n',
    "ASCE": 'live_load_reduction = "ASCE 7-22 4.7"\nACTIONS',
}
FLOOR = """\
format = 1
[job]
number = "1"
title = "Drying floor"
date = 2026-12-01
[basis]
actions = "EN 1990"
BASIS[grid]
x = { A = "0 m", B = "6 m", C = "11 m", D = "15 m" }
y = { 1 = "0 m", 2 = "5 m", 3 = "9 m" }
[materials.c]
grade = "C25/30"
[sections.r]
shape = "rectangle"
width = "300 mm"
depth = "600 mm"
[sections.t]
shape = "tee"
width = "250 mm"
depth = "500 mm"
flange_width = "900 mm"
flange_depth = "120 mm"
[[panel]]
mark = "P1"
corners = ["A1", "B2"]
thickness = "180 mm"
dead = "1 kPa"
live = "3 kPa"
[[panel]]
mark = "P2"
corners = ["B1", "C2"]
thickness = "180 mm"
live = "4 kPa"
roof_live = "0.7 kPa"
snow = "1.1 kPa"
[[panel]]
mark = "P3"
corners = ["A2", "B2", ["6 m", "8 m"], ["1 m", "9 m"], "A3"]
thickness = "150 mm"
live = "2 kPa"
[[panel]]
mark = "P4"
corners = ["C1", "D2"]
thickness = "200 mm"
live = "2.5 kPa"
transfer = "one-way y"
[[beam]]
mark = "B1"
line = ["A1", "B1", "C1", "D1"]
section = "r"
material = "c"
free = ["end"]
[[beam.load]]
case = "live"
point = "9 kN"
at = "14.2 m"
[[beam]]
mark = "B2"
line = ["A2", "B2", "C2", "D2"]
section = "t"
material = "c"
fixed = ["start"]
[[beam]]
mark = "B3"
line = ["B1", "B2", ["6 m", "8 m"]]
section = "r"
material = "c"
[[beam]]
mark = "B4"
line = [["1 m", "9 m"], ["6 m", "8 m"]]
section = "r"
material = "c"
fixed = ["start", "end"]
[[beam.load]]
case = "dead"
line = "3 kN/m"
line_end = "8 kN/m"
from = "1 m"
to = "4 m"
[[beam]]
mark = "B5"
line = ["C1", "C2"]
section = "r"
material = "c"
[[beam]]
mark = "B6"
line = [["1 m", "9 m"], "A3"]
section = "r"
material = "c"
[[wall]]
mark = "W1"
line = ["A1", "A3"]
[[column]]
mark = "K1"
at = "B1"
[[column]]
mark = "K2"
at = "C1"
[[column]]
mark = "K3"
at = "B2"
[[column]]
mark = "K4"
at = "C2"
[[column]]
mark = "K5"
at = "D2"
[[column]]
mark = "K6"
at = ["6 m", "8 m"]
[[column]]
mark = "K7"
at = ["1 m", "9 m"]
"""


def studied(path):
    """Each beam's record, as far as results go, with what its notebook would hold."""
    framed = frame(read_job(path))
    for mark, beam in framed.beams.items():
        template = find_template("beam_loads", path.parent)
        given = beam_input(framed, mark, {}, template.stamp)
        results = results_of(Study(given)) | {"checks": [], "governing": None}
        record = {
            "format": 1,
            "job": {},
            "mark": mark,
            "revision": "A",
            "template": {"name": "beam_loads", "version": "1", "sha256": ""},
            "lines": [],
            "results": json.loads(json.dumps(results, default=float)),
        }
        assert beam.length > 0
        yield read_record(canonical(record), f"{mark}.json"), Given(json.loads(to_text(given)), mark)


@pytest.fixture(params=BASES)
def floor(request, tmp_path):
    basis, actions = BASES[request.param], "EN 1990"
    if "ACTIONS" in basis:
        basis, actions = basis.replace("ACTIONS", ""), "ASCE 7-22 strength"
    text = FLOOR.replace("BASIS", basis).replace('"EN 1990"', f'"{actions}"')
    (tmp_path / "job.toml").write_text(text, encoding="utf-8")
    return list(studied(tmp_path / "job.toml"))


def test_every_figure_of_many_kinds_of_beams_is_found_right(floor):
    kinds = set()
    for record, given in floor:
        findings, _ = audit_results(record, given, ())
        for each in (*findings, *audit_sources(given)):
            assert each.verdict is Verdict.AGREES, (record.mark, each)
        assert len(findings) > 30
        kinds |= {given.fixed, given.free, len(given.spans)}
    assert {(True, True), (True, False), (False, True), 1, 2, 3} <= kinds


def test_reductions_are_derived_again(floor):
    factors = {reduction_factor(given)[0] for _, given in floor}
    rules = {given.basis["live_load_reduction"] for _, given in floor}
    assert (min(factors) < 1.0) is (rules != {"none"})


def test_from_the_record_alone_what_cannot_be_checked_is_said(floor):
    for record, _ in floor:
        findings, _ = audit_results(record, None, ())
        assert not [each for each in findings if each.verdict is Verdict.WRONG]
        said = {each.place for each in findings if each.verdict is Verdict.OPEN}
        assert {"results.loads", "results.combinations", "results.deflection"} <= said
        reactions = [each for each in findings if each.place.startswith("results.reactions")]
        assert reactions
        assert all(each.verdict is Verdict.AGREES for each in reactions)


def test_a_cantilever_and_a_fixed_beam_by_hand():
    tip = solve(3.0, (0.0,), (True, False), [[Load(3, 3, 10, 10, point=True)]])
    assert tip.reactions[0, 0] == pytest.approx(10)
    assert tip.end_moments[0] == pytest.approx([-30, 0])
    assert tip.deflection[0, -1] @ 3.0 ** np.arange(6) == pytest.approx(10 * 27 / 3)
    held = solve(6.0, (0.0, 6.0), (True, True), [[Load(0, 6, 4, 4)]])
    assert held.end_moments[0] == pytest.approx([-12, -12])


def test_mechanisms_and_loads_off_the_beam_are_refused():
    with pytest.raises(ValueError, match="mechanism"):
        solve(3.0, (0.0,), (False, False), [[]])
    with pytest.raises(ValueError, match="off the beam"):
        solve(3.0, (0.0, 3.0), (False, False), [[Load(2, 4, 1, 1)]])


def test_placements_by_hand():
    """Two spans of 4 m, 2 kN/m for good, 10 kN/m on either or both: hogging 24 over the support."""
    sets = [[Load(0, 8, 2, 2)], [Load(0, 4, 10, 10)], [Load(4, 8, 10, 10)]]
    worst = Worst(solve(8.0, (0.0, 4.0, 8.0), (False, False), sets))
    always, placed = np.array([[1.0, 0, 0]]), np.array([[0, 1.0, 1.0]])
    ((high, low),) = worst.extremes("moment", always, placed)
    assert low.value == pytest.approx(-24)
    assert low.reached_at(4.0, 1e-6)
    # one span loaded: reaction at its end 7/16 of 12 x 4 less 1/16 of ... by superposition 20.5; M = R²/2w
    assert high.value == pytest.approx(20.5**2 / (2 * 12))
    assert len(high.places) == 2  # either span
    largest, smallest = worst.reactions(always[0], placed[0])
    assert largest == pytest.approx([20.5, 60, 20.5])
    assert smallest == pytest.approx([0.5, 10, 0.5])


def test_equivalents_by_hand():
    (found,) = span_equivalents(2.0, 8.0, [[Load(5, 5, 12, 12, point=True), Load(8, 8, 99, 99, point=True)]])
    assert found["shear"] == pytest.approx(2 * 6 / 6)
    assert found["moment"] == pytest.approx(8 * (12 * 6 / 4) / 36)
    assert found["deflection"] == pytest.approx(384 / 5 * (12 / 48) / 6)
    assert found["fixed_end_moment"] == pytest.approx(12 * (12 * 6 / 8) / 36)
    assert found["total"] == pytest.approx(2)


def test_panels_by_hand():
    square = [(0, 0), (4, 0), (4, 4), (0, 4)]
    assert area(square) == 16
    # with a reach of √3 on one side the dividing line stands at 60° to it
    found = nearest_areas(square, {0: math.sqrt(3), 1: 1.0, 2: 1.0, 3: 1.0})
    assert sum(found.values()) == pytest.approx(16)
    assert found[0] > 4 > found[1]
    skew = [(0, 0), (6, 0), (8, 4), (2, 4)]
    strips = strip_areas(skew, [True, False, True, False], (0.0, 1.0))
    assert strips == {0: pytest.approx(12), 2: pytest.approx(12)}  # those at a free edge hang on the other
    leaning = strip_areas(skew, [True, True, True, False], (0.0, 1.0))
    assert leaning == {0: pytest.approx(12), 1: pytest.approx(2), 2: pytest.approx(10)}
    parallel = strip_areas(skew, [True, True, True, True], (0.0, 1.0))
    assert sum(parallel.values()) == pytest.approx(24)


def test_sections_by_hand():
    tee = {
        "shape": "tee",
        "dimensions": {"width": 0.25, "depth": 0.5, "flange_width": 0.9, "flange_depth": 0.12},
    }
    found = section_properties(tee)
    assert found["area"] == pytest.approx(0.25 * 0.38 + 0.9 * 0.12)
    rolled = {
        "shape": "rolled",
        "dimensions": {"depth": 0.3, "width": 0.15, "web": 0.0071, "flange": 0.0107, "root_radius": 0.015},
    }
    found = section_properties(rolled)  # IPE 300 in every table: 53.8 cm², 8356 cm⁴
    assert found["area"] * 1e4 == pytest.approx(53.8, abs=0.05)
    assert found["inertia"] * 1e8 == pytest.approx(8356, abs=1)
    assert section_properties({"shape": "pipe", "dimensions": {}}) is None


def changed(record, path, value):
    data = json.loads(record.content)
    holder = data["results"]
    for key in path[:-1]:
        holder = holder[key]
    holder[path[-1]] = value
    return read_record(canonical(data), record.name)


@pytest.mark.parametrize(
    ("path", "value", "named"),
    [
        (("spans", 0), 6.5, "results.spans[0]"),
        (("supports", 1), 6.1, "results.supports[1]"),
        (("fixed", 0), True, "results.fixed[0]"),
        (("loads", "dead", 0, "start"), 4.0, "results.loads.dead[0].start"),
        (("loads", "dead"), [], "results.loads.dead"),
        (("total", "live"), 1.0, "results.total.live"),
        (("reactions", "dead", 1), None, "results.reactions.dead[1]"),
        (("equivalent", 0, "live", "moment"), 0.0, "results.equivalent[0].live.moment"),
        (("equivalent", 2), None, ""),
        (("combinations", 0, "name"), "1.36 G", "results.combinations[0].name"),
        (("combinations",), [], "results.combinations"),
        (("envelope", "moment_max_at"), 0.3, "results.envelope.moment_max_at"),
        (("envelope", "shear_max"), True, "results.envelope.shear_max"),
        (("deflection",), None, "results.deflection"),
        (("governing",), {"name": "x", "ratio": 1}, "results.governing"),
        (("surplus",), 5.0, "results"),
    ],
)
def test_what_is_wrong_is_named(tmp_path, path, value, named):
    (tmp_path / "job.toml").write_text(FLOOR.replace("BASIS", ""), encoding="utf-8")
    record, given = next(iter(studied(tmp_path / "job.toml")))
    findings, _ = audit_results(changed(record, path, value), given, ())
    places = [each.place for each in findings if each.verdict is not Verdict.AGREES]
    assert any(place.startswith(named) for place in places) if named else places == []


def crowded(spans, loads, case="dead"):
    """A record with as many spans and loads as somebody may write down."""
    rows = [
        {"from": 0.001 * number, "to": 0.001 * number + 5.0, "start": 1.0, "end": 2.0, "source": "x"}
        for number in range(loads)
    ]
    results = {
        "spans": [10.0 / spans] * spans,
        "supports": [10.0 / spans * number for number in range(spans + 1)],
        "fixed": [False, False],
        "loads": {case: rows},
    }
    record = {
        "format": 1, "job": {}, "mark": "B1", "revision": "A",
        "template": {"name": "", "version": "", "sha256": ""}, "lines": [], "results": results,
    }  # fmt: skip
    return read_record(canonical(record), "B1.json")


@pytest.mark.parametrize(
    ("spans", "loads", "case"), [(300, 10, "dead"), (1, 3000, "dead"), (2, 10, "wind"), (2, 10, "x" * 99)]
)
def test_results_that_no_beam_has_are_refused(spans, loads, case):
    with pytest.raises(CalcpackError, match=r"B1\.json: results: "):
        audit_results(crowded(spans, loads, case), None, ())


def test_results_as_crowded_as_may_be_are_done_in_two_seconds(allowed):
    began = time.process_time()
    audit_results(crowded(55, 950), None, ())
    assert time.process_time() - began < allowed(2.0)
