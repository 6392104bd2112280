"""A beam said in SI and in US units has the same strength: every check of the four strength templates."""

from __future__ import annotations

import json
from typing import Any

import pytest
from test_units_agree import in_us_units

from calcpack.framing import frame
from calcpack.job import read_job
from calcpack.job.house import house_folder
from calcpack.notebook.lightest import choose_sections
from calcpack.notebook.parameters import beam_input, to_text
from calcpack.notebook.sections.closing import record_results
from calcpack.notebook.templates import find_template
from calcpack.verification.tables import find_topic

STRENGTH = find_topic("floors").find_method("strength in other units")
SAME = STRENGTH.within

# A girder of two spans and an overhang under a slab, with a secondary beam and a point load.
JOB = """\
format = 1
[job]
number = "41"
title = "Kelp store"
date = 2026-12-01
[basis]
actions = "{actions}"
occupancy = "{occupancy}"
[grid]
x = {{ A = "0 m", B = "7.2 m", C = "13.1 m", D = "14.6 m" }}
y = {{ 1 = "0 m", 2 = "4.4 m" }}
[materials.m]
{material}
[sections.s]
{section}
[[panel]]
mark = "P1"
corners = ["A1", "B2"]
thickness = "150 mm"
dead = "1.3 kPa"
live = "3.1 kPa"
[[panel]]
mark = "P2"
corners = ["B1", "C2"]
thickness = "150 mm"
live = "2.7 kPa"
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
line = ["A1", "B1", "C1", "D1"]
free = ["end"]
section = "s"
material = "m"
template = "{template}"
[beam.design]
{design}
[[beam.load]]
case = "live"
point = "{point}"
at = "2.9 m"
[[beam.load]]
case = "dead"
line = "2.3 kN/m"
from = "7.2 m"
to = "14.6 m"
"""
EUROCODE = {"actions": "EN 1990", "occupancy": "B", "point": "21 kN"}
AMERICAN = {"actions": "ASCE 7-22 strength", "occupancy": "", "point": "21 kN"}
CONCRETE = 'shape = "rectangle"\nwidth = "350 mm"\ndepth = "600 mm"'
ROLLED = 'shape = "rolled"\ndesignation = "{}"'
# Bars are named by their number or their diameter in mm, in either system.
MEMBERS = {
    "steel_beam_en1993": EUROCODE
    | {
        "material": 'grade = "S275"',
        "section": ROLLED.format("IPE 400"),
        "design": 'unbraced_length = "2.4 m"\nbearing_length = "110 mm"',
    },
    "steel_beam_aisc360": AMERICAN
    | {
        "material": 'grade = "A992"',
        "section": ROLLED.format("W16X50"),
        "design": 'unbraced_length = "2.4 m"\nbearing_length = "110 mm"',
    },
    "concrete_beam_en1992": EUROCODE
    | {
        "material": 'grade = "C30/37"\nbars = "B500B"',
        "section": CONCRETE,
        "design": 'cover = "30 mm"\nbottom = { count = 4, size = "20" }\ntop = { count = 4, size = "20" }\n'
        'stirrups = { legs = 2, size = "10", spacing = "140 mm" }',
    },
    "concrete_beam_aci318": AMERICAN
    | {
        "material": 'grade = "4000 psi"\nbars = "Grade 60"',
        "section": CONCRETE,
        "design": 'cover = "40 mm"\nbottom = { count = 4, size = "#6" }\ntop = { count = 4, size = "#6" }\n'
        'stirrups = { legs = 2, size = "#3", spacing = "140 mm" }\naggregate = "20 mm"',
    },
}


def text_of(template: str, **changes: str) -> str:
    return JOB.format(template=template, **MEMBERS[template] | changes)


def results_of_sheet(folder: Any, text: str) -> dict[str, Any]:
    """From the text of a job to the results in the record, by the cells of the template's own notebook."""
    path = folder / "job.toml"
    path.write_text(text, encoding="utf-8")
    framed = choose_sections(frame(read_job(path)))
    beam = framed.beams["G1"].beam
    template = find_template(beam.template, folder)
    given = beam_input(framed, "G1", template.settle(beam.design, "G1"), template.stamp)
    source = house_folder("report_templates") / beam.template / "notebook.ipynb"
    cells = [
        "".join(cell["source"])
        for cell in json.loads(source.read_text(encoding="utf-8"))["cells"]
        if cell["cell_type"] == "code"
    ]
    names: dict[str, Any] = {"PARAMETERS": to_text(given)}
    for cell in cells[1:]:
        if "write_record" not in cell:
            exec(compile(cell, str(source), "exec"), names)  # the house's own code
    return record_results(names["work"])


def ratios(results: dict[str, Any]) -> list[float]:
    return [check["ratio"] for check in results["checks"]]


def test_as_many_templates_as_the_manual_says():
    assert len(MEMBERS) == STRENGTH.cases


@pytest.mark.parametrize("template", MEMBERS)
def test_every_check_has_the_same_ratio(tmp_path, template):
    text = text_of(template)
    si, us = results_of_sheet(tmp_path, text), results_of_sheet(tmp_path, in_us_units(text))
    assert len(si["checks"]) >= 6
    assert [each["cite"] for each in si["checks"]] == [each["cite"] for each in us["checks"]]
    for one, other in zip(si["checks"], us["checks"], strict=True):
        assert other["ratio"] == pytest.approx(one["ratio"], rel=SAME, abs=SAME), one["name"]
        assert one["passes"] is other["passes"]
        assert one["unit"] == other["unit"], one["name"]
        assert [other["demand"], other["capacity"]] == pytest.approx(
            [one["demand"], one["capacity"]], rel=SAME, abs=SAME
        )
    assert us["governing"]["ratio"] == pytest.approx(si["governing"]["ratio"], rel=SAME)


@pytest.mark.parametrize("template", MEMBERS)
def test_the_comparison_can_fail(tmp_path, template):
    """A foot of 0.30480001 m moves some ratio by more than is let pass."""
    text = text_of(template)
    si = results_of_sheet(tmp_path, text)
    us = results_of_sheet(tmp_path, in_us_units(text, 0.3048 / 0.30480001))
    assert any(
        abs(one - other) > SAME * max(one, other) for one, other in zip(ratios(si), ratios(us), strict=True)
    )


@pytest.mark.parametrize("template", ["steel_beam_en1993", "steel_beam_aisc360"])
def test_the_same_section_is_chosen(tmp_path, template):
    text = text_of(template, section=ROLLED.format("lightest in IPE"))
    chosen = []
    for each in (text, in_us_units(text)):
        path = tmp_path / "job.toml"
        path.write_text(each, encoding="utf-8")
        section = choose_sections(frame(read_job(path))).beams["G1"].beam.section
        chosen.append(section)
    assert chosen[0].designation == chosen[1].designation
    assert [each.fails for each in chosen[0].tried] != []
    for one, other in zip(chosen[0].tried, chosen[1].tried, strict=True):
        assert other.ratio == pytest.approx(one.ratio, rel=SAME)
