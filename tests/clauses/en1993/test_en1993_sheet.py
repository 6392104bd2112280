"""Whole sheets, from a job file to the record, without a kernel."""

import json
import tomllib
from types import SimpleNamespace

import numpy as np
import pytest

from calcpack.framing import frame
from calcpack.job import read_job
from calcpack.job.errors import CalcpackError
from calcpack.job.house import house_folder
from calcpack.job.library import families
from calcpack.notebook import load_sheet, sections
from calcpack.notebook.lightest import choose_sections
from calcpack.notebook.parameters import beam_input, to_text
from calcpack.notebook.sections import steel_en1993 as steel
from calcpack.notebook.sections import steel_figures
from calcpack.notebook.sections.closing import record_results
from calcpack.notebook.sections.steel_en1993.results import shown_of
from calcpack.notebook.templates import find_template
from calcpack.record.auditing.findings import Verdict
from calcpack.record.auditing.given import Given
from calcpack.record.auditing.inputs import audit_job, job_facts

JOB = """
format = 1
[job]
number = "31"
title = "Net loft"
date = 2026-12-01
units = "{units}"
[basis]
actions = "EN 1990"
occupancy = "B"
[grid]
x = {{ A = "0 m", B = "6 m", C = "11 m" }}
y = {{ 1 = "0 m", 2 = "3 m" }}
[materials.s]
grade = "{grade}"
[sections.girder]
shape = "{shape}"
{size}
[[panel]]
mark = "P1"
corners = ["A1", "B2"]
thickness = "150 mm"
live = "3 kPa"
[[panel]]
mark = "P2"
corners = ["B1", "C2"]
thickness = "150 mm"
live = "3 kPa"
[[wall]]
mark = "W1"
line = ["A2", "C2"]
[[column]]
mark = "C1"
at = "A1"
[[column]]
mark = "C2"
at = "B1"
[[column]]
mark = "C3"
at = "C1"
[[beam]]
mark = "G1"
line = ["A1", "B1", "C1"]
section = "girder"
material = "s"
template = "steel_beam_en1993"
design = {{ {design} }}
[[beam.load]]
case = "live"
point = "60 kN"
at = "0.4 m"
"""


def work_of(tmp_path, units="SI", grade="S275", size='designation = "IPE 330"', shape="rolled", design=""):
    path = tmp_path / "job.toml"
    path.write_text(JOB.format(units=units, grade=grade, size=size, shape=shape, design=design))
    framed = frame(read_job(path))
    template = find_template("steel_beam_en1993", tmp_path)
    given = template.settle(framed.beams["G1"].beam.design, "G1")
    return load_sheet(to_text(beam_input(framed, "G1", given, template.stamp)))


def written(work):
    for state in (
        "place", "basis", "given", "transfer", "equivalents", "loads", "combinations", "effects",
    ):  # fmt: skip
        getattr(sections, f"state_{state}")(work)
    beam = steel.design_of(work)
    steel.state_steel_results(work, beam)
    given, partial, epsilon = steel.state_steel_section(work, beam)
    steel.state_steel_resistance(work, beam, given, partial, epsilon)
    steel.state_steel_buckling(work, beam, given, partial)
    steel.state_steel_bearing(work, beam, given, partial)
    sections.state_checks(work)
    sections.state_summary(work)
    sections.state_notation(work)
    return beam, record_results(work)


DESIGNS = {
    "plain": "",
    "rolled": 'buckling_curves = "rolled", unbraced_length = "2 m", load_height = "bottom"',
    "held": 'braced = "continuous", buckling_curves = "rolled", web_held = "at supports"',
    "factors": 'gamma_M0 = 1.05, gamma_M1 = 1.1, C1 = 1.0, load_height = "centre", web_held = "everywhere"',
}


@pytest.mark.parametrize("design", DESIGNS)
def test_both_unit_systems_agree_and_the_schedule_says_what_the_lines_say(tmp_path, design):
    found = {}
    for units in ("SI", "US"):
        work = work_of(tmp_path, units, design=DESIGNS[design])
        beam, results = written(work)
        found[units] = results
        # before the lines, and after them
        shown = [row.ratio for row in shown_of(work, beam)]
        assert shown == pytest.approx([check["ratio"] for check in results["checks"]], rel=1e-9)
        assert [row.ratio <= 1 for row in shown_of(work, beam)] == [
            check["passes"] for check in results["checks"]
        ]
    si, us = (found[units]["checks"] for units in ("SI", "US"))
    assert [check["cite"] for check in si] == [check["cite"] for check in us]
    assert [check["ratio"] for check in us] == pytest.approx([check["ratio"] for check in si], rel=1e-9)
    governing = found["SI"]["governing"]
    assert governing["ratio"] == max(check["ratio"] for check in si)


def test_checks_are_complete(tmp_path):
    _, results = written(work_of(tmp_path))
    names = [check["name"] for check in results["checks"]]
    assert names == [
        "bending",
        "shear",
        "lateral-torsional buckling, 0.00\u00a0m to 6.00\u00a0m",
        "web under the force at column C1",
        "force with bending at column C2",
        "deflection, live load",
        "deflection, G + Q",
    ]
    assert all(check["cite"] for check in results["checks"])


def test_deflection_limits_left_out_and_given(tmp_path):
    work = work_of(tmp_path)
    assert work.given.design["deflection_limits"] == {"live": 360, "total": 250}
    assert work_of(tmp_path, design="deflection_limits = { live = 500 }").given.design[
        "deflection_limits"
    ] == {"live": 500, "total": 250}


def test_a_beam_too_weak_is_finished_and_said_to_be(tmp_path):
    work = work_of(tmp_path, size='designation = "IPE 160"')
    beam, results = written(work)
    assert beam.beside is not None
    ratios = {check["name"]: check["ratio"] for check in results["checks"]}
    assert ratios["bending beside shear"] == pytest.approx(beam.beside.moment / beam.beside.resistance)
    assert [row.ratio for row in shown_of(work, beam)] == pytest.approx(list(ratios.values()), rel=1e-9)
    failing = [check["name"] for check in results["checks"] if not check["passes"]]
    assert any(name.startswith("lateral-torsional") for name in failing)
    assert "bending" in failing
    assert any("Not satisfied" in json.dumps(block) for block in work.sheet.blocks)


def test_class_4_is_not_satisfied_in_words(tmp_path):
    """A steel of the job's own, far stronger than S460: its flanges buckle first."""
    work = work_of(tmp_path, grade="S460", size='designation = "HE 300 A"')
    material = work.given.material.model_copy(update={"values": {"fy": 900e3, "fy_thick": 900e3}})
    work.study.given = work.given.model_copy(update={"material": material})
    beam, results = written(work)
    assert beam.profile.section_class == 4
    unmet = {check["name"] for check in results["checks"] if not check["passes"]}
    assert {"class of the section", "nominal yield strength"} <= unmet
    assert "nominal yield strength; class of the section (class 4 is not covered)" in json.dumps(
        work.sheet.blocks
    )


@pytest.mark.parametrize(
    ("keys", "words"),
    [
        ({"shape": "rectangle", "size": 'width = "200 mm"\ndepth = "300 mm"'}, "needs a rolled section"),
        ({"grade": "C30/37"}, "gives no fy"),
        ({"design": 'braced = "at beams", unbraced_length = "2 m"'}, "takes no unbraced length"),
    ],
)
def test_what_cannot_be_designed_is_refused(tmp_path, keys, words):
    with pytest.raises(CalcpackError, match=words):
        steel.design_of(work_of(tmp_path, **keys))


@pytest.mark.parametrize(
    "design", ['buckling_curves = "wild"', "eta = 1.5", "gamma_M0 = 0.5", "bearing_length = 100", "x = 1"]
)
def test_keys_outside_what_the_template_knows_are_refused(tmp_path, design):
    with pytest.raises(CalcpackError, match="design"):
        work_of(tmp_path, design=design)


def test_wide_flanges_of_the_other_library_work_too(tmp_path):
    _, results = written(work_of(tmp_path, "US", "A992", 'designation = "W14X30"'))
    assert results["governing"]["ratio"] > 0


def test_template_says_what_it_does_not_cover():
    text = (house_folder("report_templates") / "steel_beam_en1993" / "template.toml").read_text("utf-8")
    settings = tomllib.loads(text)
    assert any("class 4" in each for each in settings["not_covered"])
    assert (
        settings["parameters"]["gamma_M0"]["default"] == settings["parameters"]["gamma_M1"]["default"] == 1.0
    )


# The lightest section of a family


def loft(tmp_path, designation, grade="S275", design="", more="", live="60 kN"):
    path = tmp_path / "job.toml"
    text = JOB.format(
        units="SI", grade=grade, size=f'designation = "{designation}"', shape="rolled", design=design
    )
    path.write_text(more + text.replace("60 kN", live))
    return frame(read_job(path))


def ratio_with(tmp_path, designation, **changes):
    work = started(loft(tmp_path, designation, **changes))
    beam = steel.design_of(work)
    return max(row.ratio for row in shown_of(work, beam))


def started(framed):
    template = find_template("steel_beam_en1993", framed.job.folder)
    given = template.settle(framed.beams["G1"].beam.design, "G1")
    return load_sheet(to_text(beam_input(framed, "G1", given, template.stamp)))


@pytest.mark.parametrize("family", ["IPE", "HEA", "HEB", "W"])
def test_the_lightest_that_passes_is_chosen(tmp_path, family):
    settled = choose_sections(loft(tmp_path, f"lightest in {family}"))
    chosen = settled.beams["G1"].beam.section
    rows = [each.designation for each in families()[family]]
    place = rows.index(chosen.designation)
    assert [each.designation for each in chosen.tried] == rows[:place]
    assert chosen.fits
    assert place > 0
    assert ratio_with(tmp_path, chosen.designation) <= 1
    for each in chosen.tried[-3:]:
        assert each.ratio > 1
        found = ratio_with(tmp_path, each.designation)
        # outside the limits of validity a section fails whatever its ratios
        assert found == pytest.approx(each.ratio, rel=1e-9) or each.fails in ("bending", CLASS)
    work = started(settled)
    _, results = written(work)
    assert all(check["passes"] for check in results["checks"])
    said = " ".join(str(block) for block in work.sheet.blocks)
    assert f"{chosen.designation} is the lightest {family} section that passes" in said
    assert f"Next lighter: {chosen.tried[-1].designation}, " in said


CLASS = "class of the section"


def test_a_section_of_class_4_is_never_chosen(tmp_path):
    """A web 482 mm high and 2.5 mm thick is far beyond 124 ε."""
    (tmp_path / "own.csv").write_text(
        "designation,family,depth [mm],width [mm],web [mm],flange [mm],root_radius [mm]\n"
        "thin,own,500,200,2.5,9,10\nstout,own,500,200,9,14,21\n"
    )
    own = 'rolled_sections = "own.csv"\n'
    work = started(loft(tmp_path, "thin", more=own, live="1 kN"))
    says, ratio, whole = steel.worst_of(work.study)
    assert (says, whole) == (CLASS, False)
    assert ratio == pytest.approx(4 / 3)
    chosen = choose_sections(loft(tmp_path, "lightest in own", more=own)).beams["G1"].beam.section
    assert (chosen.designation, chosen.tried[0].fails) == ("stout", CLASS)


def test_where_none_passes_the_nearest_is_shown_with_what_it_lacks(tmp_path):
    settled = choose_sections(loft(tmp_path, "lightest in IPE", live="6000 kN"))
    chosen = settled.beams["G1"].beam.section
    assert not chosen.fits
    assert len(chosen.tried) == len(families()["IPE"]) - 1
    work = started(settled)
    _, results = written(work)
    assert not all(check["passes"] for check in results["checks"])
    said = " ".join(str(block) for block in work.sheet.blocks)
    assert f"None of the {len(families()['IPE'])} IPE sections passes all checks" in said
    assert "is the lightest" not in said
    assert "Not satisfied" in said


def audited(tmp_path, settled, asked, change=lambda section: None):
    """What an audit finds wrong with a chosen section where the job asks for this designation."""
    text = (tmp_path / "job.toml").read_text()
    size = next(line for line in text.splitlines() if line.startswith("designation"))
    inputs = {"job.toml": text.replace(size, f'designation = "{asked}"').encode()}
    given = find_template("steel_beam_en1993", settled.job.folder)
    design = given.settle(settled.beams["G1"].beam.design, "G1")
    data = json.loads(to_text(beam_input(settled, "G1", design, given.stamp)))
    change(data["section"])
    found = audit_job(Given(data, "G1.ipynb"), job_facts(SimpleNamespace(inputs=inputs)).data)
    return [(each.place, each.remark, each.recomputed) for each in found if each.verdict is Verdict.WRONG]


@pytest.mark.parametrize("live", ["60 kN", "6000 kN"])
def test_an_audit_holds_the_chosen_section_against_its_family(tmp_path, live):
    settled = choose_sections(loft(tmp_path, "lightest in IPE", live=live))
    asked = "lightest in IPE"
    assert audited(tmp_path, settled, asked) == []
    place = "job file, section lightest in"
    assert audited(tmp_path, settled, "lightest in HEB") == [
        (f"{place} HEB", "the section is none of the family", "HEB")
    ]
    ((where, _, theirs),) = audited(tmp_path, settled, asked, lambda section: section.update(area=0.5))
    assert (where, theirs[:4]) == ("job file, section area", f"{settled.beams['G1'].beam.section.area}"[:4])
    for tried in ([], None, [7], {"designation": "IPE 80"}):
        ((where, says, theirs),) = audited(
            tmp_path, settled, asked, lambda section, tried=tried: section.update(tried=tried)
        )
        assert (where, theirs) == (f"{place} IPE", "IPE 80")
        assert says == "the sections tried are not those passed over"


# Figures and words the sheets of both steel templates share


def test_the_deflected_shape_has_no_jump_and_ends_at_its_supports(tmp_path):
    work = work_of(tmp_path)
    (combination, extreme) = work.study.analysed.deflection_total
    result = next(each for each in work.study.analysed.results if each.combination is combination)
    x, y = steel_figures._shape(work, result.envelope.deflection)
    most = abs(y).max()
    assert most == pytest.approx(abs(extreme.value), rel=1e-3)
    for at in (0.0, 6.0, 11.0):
        assert abs(y[abs(x - at) < 1e-9]).max() < 1e-9 * most
    assert abs(np.diff(y)).max() < 0.08 * most
    assert np.all(np.diff(x) >= 0)


def test_both_deflections_are_drawn_with_their_limits(tmp_path):
    work = work_of(tmp_path)
    written(work)
    (figure,) = [
        str(block) for block in figures_of(work.sheet.blocks) if "deflection, live load alone" in str(block)
    ]
    assert "limit 16.7 mm" in figure
    assert "limit 24.0 mm" in figure


def figures_of(blocks):
    for block in blocks:
        if block["type"] == "figure":
            yield block["alt"]
        elif block["type"] == "columns":
            for column in block["columns"]:
                yield from figures_of(column)


def test_snow_asks_for_a_look_at_ponding(tmp_path):
    loft(tmp_path, "IPE 330")
    text = (tmp_path / "job.toml").read_text().replace('case = "live"', 'case = "snow"')
    (tmp_path / "job.toml").write_text(text)
    work = started(frame(read_job(tmp_path / "job.toml")))
    written(work)
    assert "ponding, EN 1990 A1.4.3" in str(work.sheet.blocks)
    plain = work_of(tmp_path)
    written(plain)
    assert "ponding" not in str(plain.sheet.blocks)


def test_demands_are_drawn_from_the_lines_that_state_them(tmp_path):
    """A beam on two supports: M_Ed is M_max of the combinations, not a second figure of the analysis."""
    path = tmp_path / "job.toml"
    loft(tmp_path, "IPE 330")
    text = path.read_text().partition("[[beam.load]]")[0].replace('["A1", "B1", "C1"]', '["A1", "B1"]')
    cut = text.index('[[panel]]\nmark = "P2"')
    path.write_text(text[:cut] + text[text.index("[[wall]]") :].replace('["A2", "C2"]', '["A2", "B2"]'))
    work = started(frame(read_job(path)))
    written(work)
    symbols = {line.symbol: line for line in work.sheet.lines.values()}
    assert symbols["M_Ed"].kind == symbols["V_Ed"].kind == "hence"
    assert symbols["M_Ed"].value == pytest.approx(symbols["M_max"].value, rel=1e-12)
