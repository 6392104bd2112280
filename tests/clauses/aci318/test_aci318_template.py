"""The template on whole beams: what is given is checked, what is left out is chosen, units do not matter."""

import pytest

from calcpack.framing import frame
from calcpack.job import read_job
from calcpack.job.errors import CalcpackError
from calcpack.notebook import load_sheet
from calcpack.notebook.parameters import beam_input, to_text
from calcpack.notebook.sections import concrete_aci318 as aci
from calcpack.notebook.sections import state_given, state_loads, state_transfer
from calcpack.notebook.sections.closing import record_results
from calcpack.notebook.templates import find_template

HEAD = """format = 1
[job]
number = "1"
title = "Kiln loft"
date = 2026-12-01
units = "{units}"
[basis]
actions = "{actions}"
[grid]
x = {{ A = "0 ft", B = "22 ft", C = "44 ft", D = "50 ft" }}
y = {{ 1 = "0 ft", 2 = "14 ft", 3 = "28 ft" }}
[materials.c]
grade = "4000 psi"
bars = "Grade 60"
[sections.rect]
shape = "rectangle"
width = "14 in"
depth = "24 in"
[sections.tee]
shape = "tee"
width = "14 in"
depth = "24 in"
flange_width = "effective"
flange_depth = "6 in"
[sections.wide]
shape = "tee"
width = "14 in"
depth = "24 in"
flange_width = "150 in"
flange_depth = "6 in"
"""
PANELS = """
[[panel]]
mark = "P1"
corners = ["A1", "B2"]
thickness = "6 in"
live = "100 psf"
[[panel]]
mark = "P2"
corners = ["A2", "B3"]
thickness = "6 in"
live = "100 psf"
"""
GIVEN = """
cover = "1.5 in"
bottom = { count = 4, size = "#8" }
top = { count = 5, size = "#8" }
stirrups = { legs = 2, size = "#3", spacing = "6 in" }
support_width = "16 in"
aggregate = "0.75 in"
"""


def beam(line, section="rect", design="", loads=(("dead", "2 klf"), ("live", "1.5 klf")), more=""):
    text = f'[[beam]]\nmark = "B"\nline = {line}\nsection = "{section}"\nmaterial = "c"\n'
    text += f'template = "concrete_beam_aci318"\n{more}[beam.design]\n{design}\n'
    for case, value in loads:
        text += f'[[beam.load]]\ncase = "{case}"\nline = "{value}"\n'
    return text


def columns(*points):
    return "".join(f'[[column]]\nmark = "C{n}"\nat = "{point}"\n' for n, point in enumerate(points))


@pytest.fixture
def sheet_of(tmp_path):
    """Writes the design sections of beam B of a job and gives the work and the design."""

    def write(text, units="US", actions="ASCE 7-22 strength"):
        path = tmp_path / "job.toml"
        path.write_text(HEAD.format(units=units, actions=actions) + text, encoding="utf-8")
        framed = frame(read_job(path))
        template = find_template("concrete_beam_aci318", tmp_path)
        design = template.settle(framed.beams["B"].beam.design, "B")
        work = load_sheet(to_text(beam_input(framed, "B", design, template.stamp)))
        state_given(work)
        state_transfer(work)
        state_loads(work)
        written = aci.state_shown(aci.begin(work))
        aci.state_design(written)
        aci.state_load_checks(work)
        return work, written

    return write


def ratios(work):
    return {check["name"]: check["ratio"] for check in record_results(work)["checks"]}


TWO = beam('["A1", "B1", "C1"]', design=GIVEN) + columns("A1", "B1", "C1")
CASES = {
    "simple": beam('["A1", "B1"]', design="") + columns("A1", "B1"),
    "two spans": beam('["A1", "B1", "C1"]', design='support_width = "16 in"') + columns("A1", "B1", "C1"),
    "overhang": beam('["A1", "B1", "C1", "D1"]', more='free = ["end"]\n') + columns("A1", "B1", "C1"),
    "cantilever": beam('["C1", "D1"]', more='fixed = ["start"]\nfree = ["end"]\n') + columns("C1"),
    "held ends": beam('["A1", "B1"]', more='fixed = ["start", "end"]\n') + columns("A1", "B1"),
    "roof": beam('["A1", "B1"]', loads=(("dead", "1 klf"), ("snow", "1 klf"))) + columns("A1", "B1"),
    "self weight": beam('["A1", "B1"]', loads=()) + columns("A1", "B1"),
    "dead only": beam('["A1", "B1"]', loads=(("dead", "1 klf"),)) + columns("A1", "B1"),
}


@pytest.mark.parametrize("units", ["SI", "US"])
@pytest.mark.parametrize("case", CASES)
def test_what_is_chosen_satisfies_strength(case, units, sheet_of):
    work, written = sheet_of(CASES[case], units)
    failed = [name for name, line in work.checks if not line.passes and not name.startswith("deflection")]
    assert not failed
    named = {name.split(",")[0] for name, _ in work.checks}
    assert {"bending", "shear", "torsion", "net tensile strain", "least steel", "size of the web"} <= named
    assert ("bending, hogging" in ratios(work)) is (written.design.top.task is not None)
    assert all(line.cite.startswith("ACI 318-19") for _, line in work.checks)


def test_units_do_not_change_a_ratio(sheet_of):
    one, other = (ratios(sheet_of(TWO, units)[0]) for units in ("SI", "US"))
    assert one.keys() == other.keys()
    for name, ratio in one.items():
        assert ratio == pytest.approx(other[name], rel=1e-9), name


def test_the_rehearsal_is_what_follows(sheet_of):
    work, _ = sheet_of(TWO)
    shown = next(block for block in walk(work.sheet.blocks) if block["type"] == "ratios")
    strength = [name for name, _ in work.checks]
    assert [row["says"] for row in shown["rows"]] == strength
    assert [row["ratio"] for row in shown["rows"]] == [line.check("x")["ratio"] for _, line in work.checks]


def walk(blocks):
    for block in blocks:
        if block["type"] == "columns":
            for column in block["columns"]:
                yield from walk(column)
        yield block


def test_given_bars_are_kept_and_checked(sheet_of):
    poor = GIVEN.replace("count = 5", "count = 2").replace('"6 in"', '"18 in"')
    work, written = sheet_of(beam('["A1", "B1", "C1"]', design=poor) + columns("A1", "B1", "C1"))
    assert written.design.top.group.words == "2 #8"
    assert written.design.spacings[0] == pytest.approx(18 * 0.0254)
    failed = {name for name, line in work.checks if not line.passes}
    assert {"bending, hogging", "stirrup spacing, in the whole beam", "shear, in the whole beam"} <= failed
    results = record_results(work)
    assert results["governing"]["ratio"] == max(check["ratio"] for check in results["checks"])


def test_a_size_alone_or_a_count_alone_binds_the_choice(sheet_of):
    for key, words in (('bottom = { size = "#6" }', "#6"), ("bottom = { count = 5 }", "5 #")):
        _, written = sheet_of(beam('["A1", "B1"]', design=key) + columns("A1", "B1"))
        assert words in written.design.bottom.group.words


def test_least_cover_fails_when_it_is_less(sheet_of):
    text = beam('["A1", "B1"]', design='cover = "1 in"') + columns("A1", "B1")
    work, _ = sheet_of(text)
    assert [line.passes for name, line in work.checks if name == "cover"] == [False]


def test_shear_is_taken_at_d_from_a_column_and_at_the_face_of_a_beam(sheet_of):
    _, written = sheet_of(TWO)
    depth = written.design.web.depth
    at = {(each.span, each.left): each.at for each in written.design.criticals}
    assert at[1, True] == pytest.approx(8 * 0.0254 + depth)
    assert at[1, False] == pytest.approx(22 * 0.3048 - 8 * 0.0254 - depth)
    carried = beam('["A1", "A2"]', loads=(("dead", "1 klf"),))
    girder = '[[beam]]\nmark = "G"\nline = [["-5 ft", "0 ft"], ["5 ft", "0 ft"]]\n'
    girder += 'section = "rect"\nmaterial = "c"\n'
    posts = (
        '[[column]]\nmark = "X1"\nat = ["-5 ft", "0 ft"]\n[[column]]\nmark = "X2"\nat = ["5 ft", "0 ft"]\n'
    )
    _, written = sheet_of(carried + girder + posts + '[[column]]\nmark = "X3"\nat = "A2"\n')
    first = next(each for each in written.design.criticals if each.left)
    assert first.at == pytest.approx(0.0)
    assert "a beam carries it" in first.words


def test_hogging_is_that_of_the_column_s_face(sheet_of):
    work, written = sheet_of(TWO)
    lower = work.study.analysed.band("moment").lower
    face = 22 * 0.3048 - 8 * 0.0254
    assert written.design.top.extreme.value == pytest.approx(-lower.at(face))
    assert written.design.top.extreme.value < -lower.at(22 * 0.3048)


def test_the_flange_follows_from_the_plan(sheet_of):
    others = "".join(
        f'[[beam]]\nmark = "{mark}"\nline = {line}\nsection = "rect"\nmaterial = "c"\n'
        for mark, line in (("N", '["A1", "B1"]'), ("S", '["A3", "B3"]'), ("W", '["A1", "A2", "A3"]'),
                           ("E", '["B1", "B2", "B3"]'))
    )  # fmt: skip
    posts = columns("A1", "A2", "A3", "B1", "B2", "B3")
    for section in ("tee", "wide"):
        work, written = sheet_of(PANELS + beam('["A2", "B2"]', section=section) + others + posts)
        widths = {line.symbol: line.value / 25.4 for line in work.sheet.lines.values()}
        by_hand = 14 + 2 * min(8 * 6, (14 * 12 - 14) / 2, 22 * 12 / 8)
        assert widths["b_f" if section == "tee" else "b_f,max"] == pytest.approx(by_hand)
    assert [line.passes for name, line in work.checks if name == "flange width"] == [False]
    moved = others.replace('["A1", "B1"]', '["A2", "B2"]')
    _, written = sheet_of(PANELS + beam('["A1", "B1"]', section="tee") + moved + posts)
    edge = 14 + min(6 * 6, (14 * 12 - 14) / 2, 22 * 12 / 12)
    assert written.size.face.value / 25.4 == pytest.approx(edge)


@pytest.mark.parametrize(
    ("change", "message"),
    [
        (('grade = "4000 psi"', 'grade = "C30/37"'), "ACI 318 needs f'c of the concrete"),
        (('grade = "4000 psi"', 'grade = "4000 psi"\nfc = "2000 psi"'), "is below 2500 psi"),
        (('shape = "rectangle"\nwidth = "14 in"', 'shape = "rectangle"\nwidth = "3 in"'), "no bars fit"),
        (('actions = "ASCE 7-22 strength"', 'actions = "ASCE 7-22 allowable"'), "designs for strength"),
    ],
)
def test_what_the_template_cannot_do_is_an_error(change, message, tmp_path):
    text = HEAD.format(units="US", actions="ASCE 7-22 strength") + CASES["simple"]
    path = tmp_path / "job.toml"
    path.write_text(text.replace(*change), encoding="utf-8")
    framed = frame(read_job(path))
    template = find_template("concrete_beam_aci318", tmp_path)
    given = beam_input(framed, "B", template.settle(framed.beams["B"].beam.design, "B"), template.stamp)
    with pytest.raises(CalcpackError) as caught:
        aci.settle(load_sheet(to_text(given)))
    assert message in str(caught.value)
    assert "beam B" in str(caught.value)


def test_an_unknown_bar_is_an_error_that_says_where(sheet_of):
    text = beam('["A1", "B1"]', design='bottom = { count = 3, size = "#12" }') + columns("A1", "B1")
    with pytest.raises(CalcpackError, match=r"beam B: design\.bottom\.size: there is no bar '#12'"):
        sheet_of(text)


def test_zones_cover_the_beam_and_hold_their_shear(sheet_of):
    _, written = sheet_of(
        beam('["A1", "B1", "C1"]', loads=(("dead", "3 klf"), ("live", "3 klf"))) + columns("A1", "B1", "C1")
    )
    design = written.design
    assert len({zone.spacing for zone in design.zones}) == 2
    assert design.zones[0].start == 0.0
    assert design.zones[-1].stop == pytest.approx(44 * 0.3048)
    for one, other in zip(design.zones, design.zones[1:], strict=False):
        assert one.stop == pytest.approx(other.start)
    area = design.legs * design.stirrup.area
    for zone in design.zones:
        assert zone.shear <= design.web.strength(area, zone.spacing) * (1 + 1e-9)


def test_mixed_codes_are_said_aloud(sheet_of):
    work, _ = sheet_of(CASES["simple"], actions="EN 1990")
    unsafe = [block for block in work.sheet.blocks if block.get("role") == "unsafe"]
    assert any("EN 1990" in str(block["runs"]) for block in unsafe)
