"""Whole sheets of steel beams: every check in the record, both methods, both unit systems; choice."""

from __future__ import annotations

from pathlib import Path

import pytest

from calcpack.framing import frame
from calcpack.job import read_job
from calcpack.job.errors import CalcpackError
from calcpack.job.library import families, rolled_sections
from calcpack.notebook import load_sheet, sections
from calcpack.notebook.lightest import Worst, choose_sections, lightest
from calcpack.notebook.parameters import beam_input, to_text
from calcpack.notebook.sections import steel_aisc360
from calcpack.notebook.sections.closing import record_results
from calcpack.notebook.templates import find_template
from calcpack.sheet import check_record

JOB = """
format = 1
[job]
number = "1"
title = "Seed shed"
date = 2026-12-01
units = "{units}"
[basis]
actions = "{actions}"
[grid]
x = {{ A = "0 m", B = "7 m", C = "13 m" }}
y = {{ 1 = "0 m", 2 = "5 m" }}
[materials.s]
grade = "A992"
[sections.main]
shape = "rolled"
designation = "{main}"
[sections.small]
shape = "rolled"
designation = "{small}"
[[beam]]
mark = "G1"
line = ["A1", "B1", "C1", ["14.5 m", "0 m"]]
free = ["end"]
section = "main"
material = "s"
template = "steel_beam_aisc360"
[beam.design]
{design}
[[beam.load]]
case = "dead"
line = "9 kN/m"
[[beam.load]]
case = "live"
line = "14 kN/m"
[[beam.load]]
case = "snow"
point = "8 kN"
at = "14.5 m"
[[beam]]
mark = "F1"
line = [["3.5 m", "0 m"], ["3.5 m", "5 m"]]
section = "small"
material = "s"
template = "{template}"
[[beam.load]]
case = "live"
line = "6 kN/m"
[[column]]
mark = "K1"
at = "A1"
[[column]]
mark = "K2"
at = "B1"
[[column]]
mark = "K3"
at = "C1"
[[column]]
mark = "K4"
at = ["3.5 m", "5 m"]
"""
GIVEN = {
    "units": "SI",
    "actions": "ASCE 7-22 strength",
    "main": "W18X50",
    "small": "W12X26",
    "design": "",
    "template": "steel_beam_aisc360",
}


def job(folder: Path, **changes):
    path = folder / "job.toml"
    path.write_text(JOB.format(**GIVEN | changes), encoding="utf-8")
    return read_job(path)


def begun(framed, mark="G1"):
    beam = framed.beams[mark].beam
    template = find_template(beam.template, Path(framed.job.folder))
    return load_sheet(to_text(beam_input(framed, mark, template.settle(beam.design, mark), template.stamp)))


def written(folder: Path, mark="G1", **changes):
    """The sheet of a beam with everything on it, and the results of its record."""
    work = begun(frame(job(folder, **changes)), mark)
    beam = steel_aisc360.design_beam(work)
    sections.state_place(work)
    steel_aisc360.state_shown(work, beam)
    for state in (
        sections.state_given,
        sections.state_loads,
        sections.state_combinations,
        sections.state_effects,
    ):
        state(work)
    for state in (
        steel_aisc360.state_section,
        steel_aisc360.state_bending,
        steel_aisc360.state_shear,
        steel_aisc360.state_deflection,
    ):
        state(work, beam)
    sections.state_checks(work)
    sections.state_summary(work)
    sections.state_notation(work)
    return work, beam, record_results(work)


def names(results):
    return [check["name"] for check in results["checks"]]


DESIGNS = {
    "": "bending, span 1|bending, span 2|bending, overhang 3",
    'braced = "at beams"': "bending, span 1, sagging|bending, span 1, hogging|bending, span 2"
    "|bending, overhang 3",
    'braced = "continuous"': "bending, span 1, sagging|bending, span 1, hogging|bending, span 2, sagging"
    "|bending, span 2, hogging|bending, overhang 3",
    'unbraced_length = "2 m"': "bending, span 1, sagging|bending, span 1, hogging|bending, span 2, sagging"
    "|bending, span 2, hogging|bending, overhang 3",
}


@pytest.mark.parametrize("design", DESIGNS)
def test_every_check_is_in_the_record(tmp_path, design):
    """Of bending the segment that is used most is written out; the schedule has every span and sense."""
    work, beam, results = written(tmp_path, design=design)
    schedule = next(block for block in work.sheet.blocks if block["type"] == "ratios")
    spoken = {str(row["says"]): row["ratio"] for row in schedule["rows"] if "bending" in str(row["says"])}
    assert sorted(spoken) == sorted(DESIGNS[design].split("|"))
    (bending,) = [name for name in names(results) if name.startswith("bending")]
    assert spoken[bending] == max(spoken.values())
    others = [name.split(",")[0] for name in names(results) if not name.startswith("bending")]
    assert others == ["shear", "web yielding", "web crippling", "deflection", "deflection"]
    figures = dict(zip(names(results), _ratios(beam), strict=True))
    assert figures[bending] == pytest.approx(spoken[bending])
    for check in results["checks"]:
        assert check["ratio"] == pytest.approx(figures[check["name"]], rel=1e-9)
        assert check["passes"] == (check["ratio"] <= 1 + 1e-9)
    assert results["governing"]["ratio"] == pytest.approx(max(figures.values()))
    others = [row["ratio"] for row in schedule["rows"] if str(row["says"]) not in spoken]
    assert sorted(others) == pytest.approx(sorted(figures[name] for name in figures if name != bending))
    table = next(
        block
        for block in work.sheet.blocks
        if block["type"] == "table" and str(block["caption"]).startswith("Stretches between braced points")
    )
    assert len(table["rows"]) == len(beam.design.bending)
    assert table["strong_rows"] == [beam.design.bending.index(beam.governing)]


def _ratios(beam):
    design = beam.design
    return [
        max(each.ratio for each in beam.bending),
        design.shear_demand.value / design.shear_available,
        *(each.ratio for each in beam.web),
        *(each.ratio for each in beam.deflection),
    ]


def test_si_and_us_agree(tmp_path):
    ratios = [
        [
            check["ratio"]
            for check in written(tmp_path, units=units, design='bearing_length = "100 mm"')[2]["checks"]
        ]
        for units in ("SI", "US")
    ]
    assert ratios[0] == pytest.approx(ratios[1], rel=1e-9)


@pytest.mark.parametrize(
    ("actions", "method"), [("ASCE 7-22 strength", "LRFD"), ("ASCE 7-22 allowable", "ASD")]
)
def test_the_combinations_decide_the_method(tmp_path, actions, method):
    work, beam, _ = written(tmp_path, actions=actions)
    assert beam.design.options.method == method
    symbols = {line.symbol for line in work.sheet.lines.values()}
    assert ("phi_b" in symbols) == (method == "LRFD")
    assert ("Omega_b" in symbols) == (method == "ASD")


@pytest.mark.parametrize(
    ("changes", "said"),
    [
        ({"actions": "EN 1990"}, "do not say whether to design by LRFD or by ASD"),
        ({"design": 'unbraced_length = "10 mm"'}, "braced points stand too close"),
        ({"design": 'unbraced_length = "2 m"\nbraced = "at beams"'}, "the beam is braced at beams"),
        ({"design": 'bearing_length = "0 mm"'}, "a bearing has a length"),
        ({"design": "Cb = 0.5"}, "below the least value"),
        ({"design": 'Cb = "best"'}, "a plain number is expected"),
    ],
)
def test_what_a_job_cannot_ask(tmp_path, changes, said):
    with pytest.raises(CalcpackError, match=said):
        written(tmp_path, **changes)


def test_the_job_sets_method_and_diagram_factor(tmp_path):
    work, beam, _ = written(
        tmp_path, actions="EN 1990", design='method = "ASD"\nCb = 1.1\nforces = "in the web"'
    )
    assert (beam.design.options.method, beam.design.web) == ("ASD", ())
    assert {each.diagram_factor for each in beam.bending} <= {1.0, 1.1}
    assert any("J10 does not apply" in str(block) for block in work.sheet.blocks)


def test_a_failing_beam_is_finished(tmp_path):
    work, beam, results = written(tmp_path, main="W8X10")
    assert not beam.design.passes
    assert not all(check["passes"] for check in results["checks"])
    assert any(block.get("role") == "unsafe" for block in work.sheet.blocks)


def test_a_noncompact_flange_is_written(tmp_path):
    work, _, _ = written(tmp_path, main="W12X65", small="W8X31")
    assert "M_n,f" in {line.symbol for line in work.sheet.lines.values()}


def test_roof_loads_bring_a_caution(tmp_path):
    work, _, _ = written(tmp_path)
    assert any("ponding" in str(block.get("runs")) for block in work.sheet.blocks)
    work, _, _ = written(tmp_path, mark="F1")
    assert not any("ponding" in str(block.get("runs")) for block in work.sheet.blocks)


def test_the_record_holds(tmp_path):
    work, _, results = written(tmp_path)
    record = work.sheet.record(
        job=work.given.header.model_dump(mode="json"),
        template={"name": "x", "version": "1", "sha256": "0" * 64},
        results=results,
    )
    check_record(record)
    cited = [line for line in work.sheet.lines.values() if "AISC" in line.cite]
    assert len(cited) > 18


# The lightest shape of a family


def test_families_are_in_order_of_weight():
    assert list(families()) == ["HEA", "HEB", "IPE", "W"]
    weights = [float(section.designation.rpartition("X")[2]) for section in families()["W"]]
    assert weights == sorted(weights)
    assert sum(map(len, families().values())) == len(rolled_sections())


def test_an_unknown_family_is_refused(tmp_path):
    with pytest.raises(CalcpackError, match="there is no family 'IPN'; did you mean 'IPE'"):
        job(tmp_path, small="lightest in IPN")


def test_lightest_takes_the_first_that_passes(tmp_path):
    framed = frame(job(tmp_path, small="lightest in IPE"))
    seen = []

    def judge(tried, mark):
        beam = tried.beams[mark]
        weight = next(load.first for load in beam.loads["dead"] if load.source == "self weight")
        assert weight == pytest.approx(beam.beam.section.area * beam.beam.material.unit_weight)
        seen.append(beam.beam.section.designation)
        return Worst("made up", 6.0 - len(seen))

    chosen = lightest(framed, "F1", families()["IPE"], judge)
    assert seen == ["IPE 80", "IPE 100", "IPE 120", "IPE 140", "IPE 160"]
    assert (chosen.designation, chosen.key, chosen.family, chosen.open) == ("IPE 160", "small", "IPE", False)
    assert [(each.designation, each.ratio) for each in chosen.tried] == [
        ("IPE 80", 5.0),
        ("IPE 100", 4.0),
        ("IPE 120", 3.0),
        ("IPE 140", 2.0),
    ]


def test_none_passes(tmp_path):
    framed = frame(job(tmp_path, small="lightest in IPE"))
    ratios = iter([9.0, 4.0, 2.0, 1.5, *[3.0] * 40])
    chosen = lightest(framed, "F1", families()["IPE"], lambda *_: Worst("made up", next(ratios)))
    assert (chosen.designation, chosen.fits) == ("IPE 140", False)
    assert len(chosen.tried) == len(families()["IPE"]) - 1


def test_a_section_looked_at_whole_comes_nearer_than_one_that_was_not(tmp_path):
    framed = frame(job(tmp_path, small="lightest in IPE"))
    found = iter([Worst("plastic moment", 1.05, whole=False), Worst("deflection", 1.6), Worst("shear", 1.4)])
    chosen = lightest(framed, "F1", families()["IPE"][:3], lambda *_: next(found))
    assert (chosen.designation, chosen.fits) == ("IPE 120", False)


def test_chosen_by_the_template(tmp_path):
    """The shape chosen passes, each lighter one of the family fails, and its weight is carried down."""
    open_ = frame(job(tmp_path, small="lightest in W"))
    assert open_.beams["F1"].beam.section.open
    settled = choose_sections(open_)
    chosen = settled.beams["F1"].beam.section
    assert not chosen.open
    place = [section.designation for section in families()["W"]].index(chosen.designation)
    assert [each.designation for each in chosen.tried] == [
        section.designation for section in families()["W"][:place]
    ]
    for each in (*chosen.tried, chosen):
        work = begun(frame(job(tmp_path, small=each.designation)), "F1")
        design = steel_aisc360.design_beam(work).design
        assert design.passes == (each is chosen)
        if each is not chosen and each.fails != "plastic moment":
            assert max(design.ratios) == pytest.approx(each.ratio, rel=1e-9)
    named = frame(job(tmp_path, small=chosen.designation))
    assert settled.supports == named.supports
    work = begun(settled, "F1")
    beam = steel_aisc360.design_beam(work)
    sections.state_given(work)
    steel_aisc360.state_section(work, beam)
    said = str(work.sheet.blocks)
    assert f"{chosen.designation} is the lightest W section" in said
    assert f"The {len(chosen.tried)} lighter ones were tried and fail" in said
    assert f"Next lighter: {chosen.tried[-1].designation}, {chosen.tried[-1].fails}" in said


def test_nothing_to_choose_changes_nothing(tmp_path):
    framed = frame(job(tmp_path))
    assert choose_sections(framed) is framed


def test_a_template_that_cannot_judge(tmp_path):
    framed = frame(job(tmp_path, small="lightest in W", template="beam_loads"))
    with pytest.raises(CalcpackError, match="'beam_loads' does not judge it") as caught:
        choose_sections(framed)
    (problem,) = caught.value.problems
    assert (problem.mark, problem.key, problem.file) == ("beam F1", "section", "job.toml")
