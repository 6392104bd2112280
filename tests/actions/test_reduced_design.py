"""A floor whose live load is reduced: in each beam's own design, and nowhere else."""

from __future__ import annotations

import math
from functools import cache
from pathlib import Path

import pytest

from calcpack.framing import frame
from calcpack.job import read_job
from calcpack.notebook.parameters import beam_input, from_text, to_text
from calcpack.notebook.sections import (
    state_checks,
    state_combinations,
    state_effects,
    state_equivalents,
    state_given,
    state_loads,
    state_transfer,
)
from calcpack.notebook.sections.closing import state_summary
from calcpack.notebook.study import Study, results_of
from calcpack.notebook.templates import find_template
from calcpack.notebook.work import Work
from calcpack.sheet import Sheet

FOOT = 0.3048
SQUARE_FOOT = FOOT**2

# Panels of 30 by 12 ft beside one another, one-way onto beams B1 to B3; B2 comes down on girders G1 and G2.
FLOOR = """
format = 1
[job]
number = "77"
title = "Seed loft"
date = 2026-12-01
units = "{units}"
[basis]
actions = "{actions}"
live_load_reduction = "{rule}"
occupancy = "{occupancy}"
design_loads = "{design}"
[grid]
x = {{ A = "0 ft", B = "{long} ft" }}
y = {{ 1 = "0 ft", 2 = "12 ft", 3 = "24 ft" }}
[sections.s]
shape = "rolled"
designation = "W18X50"
[materials.m]
grade = "A992"
[[panel]]
mark = "P1"
corners = ["A1", "B2"]
thickness = "5 in"
dead = "15 psf"
live = "{live} psf"
[[panel]]
mark = "P2"
corners = ["A2", "B3"]
thickness = "5 in"
dead = "15 psf"
live = "{other} psf"
{beams}
[[column]]
mark = "C1"
at = "A1"
[[column]]
mark = "C2"
at = "B1"
[[column]]
mark = "C3"
at = "A3"
[[column]]
mark = "C4"
at = "B3"
{more}
"""
BEAMS = {"B1": ["A1", "B1"], "B2": ["A2", "B2"], "B3": ["A3", "B3"], "G1": ["B1", "B3"], "G2": ["A1", "A3"]}
DEFAULTS = {
    "units": "US",
    "actions": "ASCE 7-22 strength",
    "rule": "ASCE 7-22 4.7",
    "occupancy": "",
    "design": "actual",
    "long": "30",
    "live": "50",
    "other": "50",
    "more": "",
}


@pytest.fixture(scope="module")
def floor(tmp_path_factory):
    """The floor with some of its values changed, framed."""

    @cache
    def build(items):
        values = {**DEFAULTS, **dict(items)}
        beams = "".join(
            f'[[beam]]\nmark = "{mark}"\nline = {line}\nsection = "s"\nmaterial = "m"\n'.replace("'", '"')
            + values.pop(mark, "")
            for mark, line in BEAMS.items()
        )
        path = tmp_path_factory.mktemp("floor") / "job.toml"
        path.write_text(FLOOR.format(beams=beams, **values), encoding="utf-8")
        return frame(read_job(path))

    return lambda **changes: build(tuple(sorted(changes.items())))


def study(framed, mark):
    template = find_template("beam_loads", Path())
    given = beam_input(framed, mark, template.settle({}, mark), template.stamp)
    return Study(given)


def written(framed, mark):
    """The load sheet of a beam from its loads to its checks."""
    found = study(framed, mark)
    work = Work(found, Sheet(mark, found.system))
    for section in (
        state_given,
        state_transfer,
        state_equivalents,
        state_loads,
        state_combinations,
        state_effects,
        state_checks,
    ):
        section(work)
    return work


def said(work):
    """All paragraphs and tables of a sheet, as text."""
    return " ".join(str(block) for block in work.sheet.blocks).replace("\\xa0", " ")


def moments(found):
    return [
        value
        for each in results_of(found)["combinations"]
        for value in (each["moment_max"], each["moment_min"], each["shear_max"], *each["reactions_max"])
    ]


B2_FACTOR = 0.25 + 15 / math.sqrt(2 * 360)  # 30 ft by half of 12 ft on either side


def test_areas_are_those_that_drain_and_come_down(floor):
    framed = floor()
    own = study(framed, "B2")
    assert own.reduction.area == pytest.approx(360 * SQUARE_FOOT)
    assert own.reduction.factor == pytest.approx(B2_FACTOR, rel=1e-12)
    girder = study(framed, "G1")
    assert girder.reduction.area == pytest.approx(180 * SQUARE_FOOT)  # half of B2's
    (part,) = girder.given.tributary
    assert (part.kind, part.source) == ("beam", "B2")
    assert part.whole == pytest.approx(360 * SQUARE_FOOT)
    assert part.reaction / part.total == pytest.approx(0.5)
    assert girder.reduction.factor == 1.0  # 2 x 180 ft² is less than 400
    wide = study(floor(long="40"), "G1")
    assert wide.reduction.area == pytest.approx(240 * SQUARE_FOOT)
    assert wide.reduction.factor == pytest.approx(0.25 + 15 / math.sqrt(480), rel=1e-12)


@pytest.mark.parametrize("design", ["actual", "equivalent"])
def test_the_design_is_that_of_a_floor_with_the_reduced_load(floor, design):
    reduced = study(floor(design=design), "B2")
    same = study(
        floor(design=design, rule="none", live=repr(50 * B2_FACTOR), other=repr(50 * B2_FACTOR)), "B2"
    )
    assert moments(reduced) == pytest.approx(moments(same), rel=1e-9)
    assert results_of(reduced)["deflection"] == pytest.approx(results_of(same)["deflection"], rel=1e-9)
    full = study(floor(design=design, rule="none"), "B2")
    assert moments(reduced) != pytest.approx(moments(full), rel=1e-3)


def test_a_girder_is_designed_for_its_own_factor_on_what_comes_down(floor):
    factor = 0.25 + 15 / math.sqrt(480)
    reduced = study(floor(long="40"), "G1")
    same = study(floor(long="40", rule="none", live=repr(50 * factor), other=repr(50 * factor)), "G1")
    assert moments(reduced) == pytest.approx(moments(same), rel=1e-9)


def test_nothing_that_is_handed_on_is_reduced(floor):
    reduced, full = floor(long="40"), floor(long="40", rule="none")
    assert reduced.supports == full.supports
    assert reduced.applied == full.applied
    for mark in BEAMS:
        one, other = results_of(study(reduced, mark)), results_of(study(full, mark))
        for key in ("loads", "total", "reactions", "equivalent", "spans"):
            assert one[key] == other[key]
    assert sum(each["live"] for each in reduced.supports.values()) == pytest.approx(reduced.applied["live"])


def test_heavy_live_loads_are_kept_and_their_area_does_not_count(floor):
    found = study(floor(other="125"), "B2")
    assert found.reduction.area == pytest.approx(180 * SQUARE_FOOT)
    assert found.reduced_sources == frozenset()  # 2 x 180 ft² is less than 400
    wide = study(floor(long="40", other="125"), "B2")
    factor = 0.25 + 15 / math.sqrt(2 * 240)
    assert wide.reduced_sources == {"P1"}
    same = study(floor(long="40", rule="none", live=repr(50 * factor), other="125"), "B2")
    assert moments(wide) == pytest.approx(moments(same), rel=1e-9)
    # what comes down from a beam with such a panel is not reduced at all
    (part,) = study(floor(long="80", other="125"), "G1").given.tributary
    assert part.area == 0
    assert part.exempt == "panel P2: heavier than 100 psf (4.7.3)"


def test_loads_given_on_a_beam_are_kept(floor):
    own = '[[beam.load]]\ncase = "live"\npoint = "3 kip"\nat = "10 ft"\n'
    found = study(floor(B2=own, long="40"), "B2")
    assert found.reduced_sources == {"P1", "P2"}
    live = [each for each in found.design_sets if each.case == "live"]
    points = [load.force for each in live for load in each.loads if load.source == "load 1"]
    assert points == [pytest.approx(3 * 4.4482216152605)]
    (part,) = study(floor(B2=own, long="40"), "G1").given.tributary
    assert part.exempt == "beam B2 has live load of its own"
    assert "given on the beam, not over an area" in said(written(floor(B2=own, long="40"), "B2"))


def test_assembly_and_garages_are_kept(floor):
    for category, reason in (("C", "assembly (4.7.5)"), ("F", "garage (4.7.4)")):
        found = study(floor(occupancy=category, long="40"), "B2")
        assert {part.exempt for part in found.given.tributary} == {reason}
        assert found.reduction.factor == 1.0
    work = written(floor(occupancy="C", long="40"), "B2")
    assert "No live load on this beam may be reduced" in said(work)
    assert "names no use" not in said(work)


def test_an_overhang_halves_the_influence_area(floor):
    assert study(floor(), "B2").reduction.element_factor == 2.0
    free = 'free = ["end"]\nfixed = ["start"]\n'
    girder = study(floor(G1=free, long="40", more=""), "G1")
    assert girder.reduction.element_factor == 1.0


@pytest.mark.parametrize(("category", "least"), [("A", 0.0), ("B", 0.0), ("C", 0.6), ("D", 0.6)])
def test_the_eurocode_rule(floor, category, least):
    framed = floor(actions="EN 1990", rule="EN 1991-1-1 6.3.1.2", occupancy=category, units="SI", long="120")
    found = study(framed, "B2")
    area = 120 * 12 * SQUARE_FOOT
    assert found.reduction.area == pytest.approx(area)
    assert found.reduction.factor == pytest.approx(max(0.5 + 10 / area, least), rel=1e-12)
    assert written(framed, "B2").lines["reduction"].value == pytest.approx(found.reduction.factor, rel=1e-12)


def test_storage_is_not_reduced(floor):
    framed = floor(actions="EN 1990", rule="EN 1991-1-1 6.3.1.2", occupancy="E")
    assert study(framed, "B2").reduced_sources == frozenset()
    assert "category E is none of A to D" in said(written(framed, "B2"))


def test_the_sheet_says_what_it_does(floor):
    work = written(floor(), "B2")
    lines = {line.symbol: line for line in work.sheet.lines.values()}
    assert lines["A_T"].value == pytest.approx(360 * SQUARE_FOOT)
    assert lines["A_I"].value == pytest.approx(720 * SQUARE_FOOT)
    assert lines["K_LL"].value == 2.0
    assert work.lines["reduction"].value == pytest.approx(B2_FACTOR, rel=1e-12)
    assert "are not reduced, so that the supports carry all that is applied" in said(work)
    assert "The job names no use of the floor" in said(work)
    # the lines by hand come to what the analysis finds
    assert work.lines["moment"].value == pytest.approx(work.study.analysed.moment_max.value, rel=1e-9)
    assert work.lines["reaction"].value == pytest.approx(
        abs(work.study.analysed.governing_shear.shear_max.value), rel=1e-9
    )
    assert work.sheet.failed == []


def test_a_girder_s_sheet_by_hand(floor):
    work = written(floor(long="40"), "G1")
    lines = {line.symbol: line for line in work.sheet.lines.values()}
    assert lines["A_T"].value == pytest.approx(240 * SQUARE_FOOT)
    assert lines["M_max"].value == pytest.approx(work.study.analysed.moment_max.value, rel=1e-9)
    assert work.sheet.failed == []


def test_where_some_live_load_is_kept_no_line_says_otherwise(floor):
    work = written(floor(long="40", other="125"), "B2")
    assert "M_max" not in {line.symbol for line in work.sheet.lines.values()}
    assert work.sheet.failed == []


def test_a_small_area_is_said_to_be_small(floor):
    work = written(floor(long="14"), "B1")
    assert "The influence area is less than 400.0 ft²: the live load is not reduced" in said(work)
    assert "reduction" not in work.lines
    assert "Live-load reduction" not in said(written(floor(long="14", rule="none"), "B1"))


def test_both_unit_systems_agree(floor):
    american, metric = (written(floor(long="40", units=units), "B2") for units in ("US", "SI"))
    assert american.lines["reduction"].value == pytest.approx(metric.lines["reduction"].value, rel=1e-12)
    assert moments(american.study) == pytest.approx(moments(metric.study), rel=1e-12)
    shown = [line.shown for line in metric.sheet.lines.values() if line.symbol == "A_I"]
    assert shown == ["89.19\u00a0m²"]


def test_the_parameters_keep_the_areas(floor):
    given = study(floor(), "B2").given
    assert from_text(to_text(given)).tributary == given.tributary
    assert study(floor(rule="none"), "B2").given.tributary == ()


def test_just_beyond_the_least_area_the_sheet_reduces(floor):
    work = written(floor(long="35"), "B1")  # 35 ft by 6 ft, twice that: 420 ft²
    assert work.lines["reduction"].value == pytest.approx(0.25 + 15 / math.sqrt(420), rel=1e-12)
    assert work.study.reduction.factor == work.lines["reduction"].value
    assert "Interior beam or edge beam" in said(work)
    cantilever = 'free = ["end"]\nfixed = ["start"]\n'
    assert "Cantilever, overhang" in said(written(floor(G1=cantilever, long="40"), "G1"))


def reaction_table(work):
    return next(
        block
        for block in work.sheet.blocks
        if block["type"] == "table" and str(block["caption"]).startswith("Reactions, upward")
    )


def test_what_is_handed_on_is_not_reduced(floor):
    """Two supports, all loads symmetric: 1.2 D + 1.6 L of each case's reaction, L in full."""
    work = written(floor(), "B2")
    given, full = work.study.given, work.study.handed_on
    dead, live = (given.reactions[case] for case in ("dead", "live"))
    for at in (0, 1):
        largest = max(each.reactions_max[at] for each in full.of_limit("strength"))
        own = max(each.reactions_max[at] for each in work.study.analysed.of_limit("strength"))
        assert largest == pytest.approx(1.2 * dead[at] + 1.6 * live[at], rel=1e-9)
        assert own == pytest.approx(1.2 * dead[at] + 1.6 * B2_FACTOR * live[at], rel=1e-9)
    table = reaction_table(work)
    assert [str(column["head"]) for column in table["columns"]][-4:] == [
        "largest, strength, live in full", "smallest, strength, live in full",
        "largest, own design", "smallest, own design",
    ]  # fmt: skip
    number = work.lines["reduction"].no
    assert f"This beam's own reduction of live load (line {number}) is not handed on" in said(work)
    state_summary(work)
    assert "The live load handed on is in full" in said(work)
    # what comes down on the girder is what B2 hands on
    girder = study(floor(), "G1")
    assert [each.reactions["live"] for each in girder.given.carried if each.mark == "B2"] == pytest.approx(
        [live[0]]
    )


def test_without_reduction_one_pair_of_strength_reactions(floor):
    work = written(floor(rule="none"), "B2")
    assert work.study.handed_on is work.study.analysed
    assert len(reaction_table(work)["columns"]) == 6
    assert "own design" not in said(work)


def test_equivalent_loads_are_handed_on_in_full_too(floor):
    framed = floor()
    found = study(framed, "B2")
    given = found.given.model_copy(update={"design_loads": "equivalent"})
    even = type(found)(given)
    live = [
        load
        for each in even._sets(lambda _, loads: tuple(loads))
        if each.case == "live"
        for load in each.loads
    ]
    reduced = [load for each in even.design_sets if each.case == "live" for load in each.loads]
    assert reduced[0].first == pytest.approx(B2_FACTOR * live[0].first, rel=1e-9)
