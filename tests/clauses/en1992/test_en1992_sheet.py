"""The lines of a sheet against the numbers of the clauses, and what the sheet says."""

import json

import pytest
from beams_en1992 import ALL, BEAM, COLUMN, HEAD, worked, written

from calcpack.clauses.en1992.detailing import nominal_cover
from calcpack.clauses.en1992.shear import (
    concrete_shear,
    largest_leg_spacing,
    largest_spacing,
    least_stirrups,
    truss,
)
from calcpack.job.errors import CalcpackError
from calcpack.sheet.runs import plain_text

SAME = 1e-9


def line(work, symbol):
    return next(each for each in work.sheet.lines.values() if each.symbol == symbol)


def checks(work):
    return {name: each.check(name) for name, each in work.checks}


@pytest.mark.parametrize("mark", ALL)
def test_lines_and_numbers_agree(mark):
    work, beam = written(mark)
    design, found = beam.design, checks(work)
    for tag, face in beam.tags:
        where = {"sag": "span", "hog": "support"}[tag]
        assert found[f"bending, {where}"]["capacity"] == pytest.approx(face.bending.moment, rel=SAME)
        assert found[f"bending, {where}"]["demand"] == pytest.approx(face.moment, rel=SAME)
        assert found[f"neutral axis, {where}"]["demand"] == pytest.approx(
            face.bending.x / face.depth, rel=SAME
        )
        assert found[f"neutral axis, {where}"]["capacity"] == pytest.approx(face.limit, rel=SAME)
        bars = {"sag": "bottom", "hog": "top"}[tag]
        least = found[f"least reinforcement, {bars}"]
        assert least["demand"] == pytest.approx(face.least * 1e6, rel=SAME)
        assert least["capacity"] == pytest.approx(face.bars.area * 1e6, rel=SAME)
        spacing = found[f"bar spacing, {bars}"]
        clear, rule = face.clear
        assert (spacing["demand"], spacing["capacity"]) == pytest.approx((rule * 1e3, clear * 1e3), rel=SAME)
        if face.lasting > 0:
            assert found[f"crack width, {where}"]["demand"] == pytest.approx(face.crack.width * 1e3, rel=SAME)
    shear = design.shear
    ties, _ = shear.capacity(min(shear.spacings))
    _, struts = shear.capacity(1.0)
    assert found["shear, stirrups"]["capacity"] == pytest.approx(ties, rel=SAME)
    assert found["shear, struts"]["capacity"] == pytest.approx(struts, rel=SAME)
    assert found["shear, struts"]["demand"] == pytest.approx(max(place.v_face for place in shear.places))
    assert line(work, "a_l").value == pytest.approx(shear.shift * 1e3, rel=SAME)
    if design.end is not None:
        found_e = design.end.length
        assert line(work, "l_bd,e").value == pytest.approx(found_e.length * 1e3, rel=SAME)
        assert line(work, "f_bd,e").value == pytest.approx(found_e.bond / 1e3, rel=SAME)
        assert line(work, "l_b,e").value == pytest.approx(found_e.basic * 1e3, rel=SAME)
        assert line(work, "alpha_e,a").value == pytest.approx(found_e.alpha, rel=SAME)
    if design.zones:
        assert line(work, "l_bd,t").value == pytest.approx(design.stopped.length * 1e3, rel=SAME)
    closest = max(design.span_depths, key=lambda each: each.actual / each.limit)
    assert line(work, "lambda_lim").value == pytest.approx(closest.limit, rel=SAME)
    assert line(work, "lambda_s").value == pytest.approx(closest.actual, rel=SAME)


@pytest.mark.parametrize("mark", ALL)
def test_detailing_agrees(mark):
    work, beam = written(mark)
    design, case, found = beam.design, beam.design.case, checks(work)
    shear, national = design.shear, case.national
    widest = max(zone.spacing for zone in shear.zones)
    least = least_stirrups(case.sagging.web, case.strength, national)
    thick = max(face.bars.bar.diameter for face in (design.bottom, design.top, design.through) if face)
    areas = [face.bars.area for _, face in beam.tags]
    stirrup = shear.stirrups.bar.diameter
    expected = {
        "cover": (nominal_cover(stirrup, case.exposure, national) * 1e3, case.cover * 1e3),
        "cover for bond": (thick * 1e3 + 10, (case.cover + stirrup) * 1e3),
        "most reinforcement": (max(areas) * 1e6, 0.04 * case.sagging.area * 1e6),
        "stirrup spacing": (widest * 1e3, largest_spacing(shear.depth, national) * 1e3),
        "stirrup legs": (shear.legs_apart * 1e3, largest_leg_spacing(shear.depth, national) * 1e3),
        "least stirrups": (least / case.sagging.web, shear.stirrups.area / widest / case.sagging.web),
        "shear along the beam": shear.along[1:],
        "moments along the beam": (design.along.moment, design.along.resistance),
    }
    if design.end is not None and design.end.room is not None:
        expected["anchorage at the end support"] = (design.end.length.length * 1e3, design.end.room * 1e3)
    if design.end is not None:
        force = design.bottom.bars.area * case.strength.fyd
        expected["bars at the end support"] = (design.end.force, force)
    for name, sides in expected.items():
        assert (found[name]["demand"], found[name]["capacity"]) == pytest.approx(sides, rel=SAME), name
        assert found[name]["passes"] == (found[name]["demand"] <= found[name]["capacity"] * (1 + SAME)), name


def test_effective_flange_agrees():
    work, beam = written("slab")
    case = beam.design.case
    assert line(work, "b_eff,sag").value == pytest.approx(case.sagging.width * 1e3, rel=SAME)
    assert line(work, "b_eff,hog").value == pytest.approx(case.hogging.width * 1e3, rel=SAME)
    # shorter span 5 m, a slab of 5 m on one side: b_i = 2.35 m, l_0 = 0.85 x 5 m
    assert case.sagging.width == pytest.approx(0.3 + min(0.2 * 2.35 + 0.1 * 4.25, 0.2 * 4.25))


@pytest.mark.parametrize("mark", ALL)
def test_concrete_shear_and_curvature_agree(mark):
    work, beam = written(mark)
    design, case = beam.design, beam.design.case
    place = design.shear.places[design.shear.governing]
    face = design.bottom if case.supports[place.support].end or not design.top else design.top
    carried = concrete_shear(
        case.sagging.web, design.shear.depth, face.bars.area, case.strength, case.national
    )
    assert line(work, "V_Rd,c").value == pytest.approx(carried, rel=SAME)
    governing = max(design.deflections, key=lambda each: each.total / each.limit)
    assert line(work, "zeta").value == pytest.approx(governing.zeta, abs=SAME)
    assert line(work, "M_qp,s").value == pytest.approx(governing.moment, rel=SAME)
    assert checks(work)["deflection, total"]["demand"] == pytest.approx(governing.total * 1e3, rel=SAME)


@pytest.mark.parametrize("mark", ALL)
def test_both_systems_of_units_find_the_same(mark):
    one, other = checks(written(mark)[0]), checks(written(mark, "US")[0])
    assert one.keys() == other.keys()
    for name, check in one.items():
        assert other[name]["ratio"] == pytest.approx(check["ratio"], rel=SAME)
        assert other[name]["passes"] == check["passes"]


@pytest.mark.parametrize("mark", ALL)
def test_what_is_shown_is_what_is_found(mark):
    work, _ = written(mark)
    shown = next(block for block in work.sheet.blocks if block["type"] == "columns" and any(
        each["type"] == "ratios" for column in block["columns"] for each in column))  # fmt: skip
    rows = next(each for column in shown["columns"] for each in column if each["type"] == "ratios")["rows"]
    found = checks(work)
    assert len(rows) >= 6
    for row in rows:
        assert row["ratio"] == found[row["says"]]["ratio"]
        assert row["passes"] == found[row["says"]]["passes"]
    assert len({name for name, _ in work.checks}) == len(work.checks)


@pytest.mark.parametrize("mark", ["simple", "slab", "tip", "thin", "strong"])
def test_what_is_chosen_satisfies(mark):
    work, _ = written(mark)
    unmet = [name for name, check in checks(work).items() if not check["passes"]]
    assert unmet in ([], ["deflection, total"], ["deflection, live load"])


def test_compression_bars_are_counted_where_the_neutral_axis_asks_for_them():
    work, beam = written("heavy")
    face = beam.design.bottom
    assert face.doubly
    assert line(work, "sigma_s2,sag").value > 0
    assert checks(work)["neutral axis, span"]["passes"]
    assert "stirrups about compression bars" in checks(work)
    balance = next(each for each in work.sheet.lines.values() if each.says == "The forces balance")
    assert balance.passes


def test_the_block_reaches_into_the_web():
    work, beam = written("thin")
    assert beam.design.case.strength.lam * beam.design.bottom.bending.x > beam.design.case.sagging.flange
    assert line(work, "F_f,sag").value > 0
    assert line(work, "cot theta").origin == "beam thin design.cot_theta"


def test_bars_in_compression_under_a_flange():
    work, beam = written("full")
    face = beam.design.bottom
    assert face.doubly
    assert face.case.strength.lam * face.bending.x > face.outline.block_flange
    assert next(each for each in work.sheet.lines.values() if each.says == "The forces balance").passes


def test_given_bars_are_checked_not_changed():
    work, beam = written("given")
    design = beam.design
    assert (design.bottom.bars.count, design.bottom.bars.bar.name) == (6, "25 mm")
    assert (design.through.bars.count, design.through.bars.bar.name) == (4, "20 mm")
    assert {zone.spacing for zone in design.shear.zones} == {0.15}
    texts = [
        plain_text(item) for block in work.sheet.blocks if block["type"] == "list" for item in block["items"]
    ]
    assert any("as the job gives them: 6 × 25 mm" in text for text in texts)
    assert line(work, "alpha_cc").value == 0.85
    assert line(work, "alpha_cc").origin == "beam given design.alpha_cc"


def test_nothing_passes_for_its_name_alone():
    """A failing requirement does not stop the sheet, and is said on it."""
    job = HEAD.format(units="SI") + "".join(COLUMN.format(mark=mark) for mark in ("A1", "C1"))
    job += BEAM.format(
        mark="hopeless", line='["A1", "C1"]', keys="", section="low", material="c30",
        design='bottom = { count = 2, size = "12 mm" }', dead=40, live=40,
    )  # fmt: skip
    work, beam = worked(job, "hopeless")
    failed = {name for name, check in checks(work).items() if not check["passes"]}
    assert {"bending, span", "moments along the beam", "crack width, span", "deflection, total"} <= failed
    assert beam.design.bottom.bars.count == 2


@pytest.mark.parametrize(
    ("design", "message"),
    [
        ('national = "recomended"', "did you mean 'recommended'?"),
        ("bottom = { count = 3 }", "size of the bottom bars is not given"),
        ('bottom = { count = 3, size = "19 mm" }', "there is no bar '19 mm'"),
        ('cover = "140 mm"', "leaves no room for bars"),
    ],
)
def test_errors_name_the_key(design, message):
    job = HEAD.format(units="SI") + "".join(COLUMN.format(mark=mark) for mark in ("A1", "B1"))
    job += BEAM.format(
        mark="wrong",
        line='["A1", "B1"]',
        keys="",
        section="r",
        material="c30",
        design=design,
        dead=10,
        live=5,
    )
    with pytest.raises(CalcpackError) as error:
        worked(job, "wrong")
    assert message in str(error.value)


def test_the_record_holds_every_check():
    work, _ = written("simple")
    from calcpack.notebook.sections.closing import record_results

    results = record_results(work)
    json.dumps(results)
    assert len(results["checks"]) == len(work.checks) >= 15
    assert all(check["cite"].startswith("EN 1992-1-1") for check in results["checks"])
    assert results["governing"]["ratio"] == max(check["ratio"] for check in results["checks"])


def test_struts_do_not_depend_on_the_spacing():
    _, beam = written("simple")
    case, shear = beam.design.case, beam.design.shear
    one = truss(case.sagging.web, shear.arm, 1e-3, shear.cot, case.strength, case.national)
    assert one[1] == shear.capacity(0.1)[1]


def deep(depth, load):
    """A span of 5 m, B1 to C1, of some depth."""
    section = f'[sections.deep]\nshape = "rectangle"\nwidth = "300 mm"\ndepth = "{depth} mm"\n'
    job = HEAD.format(units="SI") + section + "".join(COLUMN.format(mark=mark) for mark in ("B1", "C1"))
    job += BEAM.format(
        mark="D",
        line='["B1", "C1"]',
        keys="",
        section="deep",
        material="c30",
        design="",
        dead=load,
        live=load,
    )
    return worked(job, "D")


def test_bottom_bars_grow_where_an_end_support_pulls_at_them_most():
    work, beam = deep(1600, 70)
    found = checks(work)
    # short and deep, the force at the support, V a_l / z = V cot θ / 2, asks for more than bending does
    assert found["bars at the end support"]["passes"]
    assert found["bars at the end support"]["ratio"] > found["bending, span"]["ratio"]
    assert beam.design.bottom.bars.area > 1.1 * beam.design.bottom.required[0]


def test_a_deep_beam_is_said_to_be_none_of_these_clauses():
    for depth, is_deep in ((1650, False), (1700, True)):
        found = checks(deep(depth, 20)[0])
        assert ("no deep beam" in found) is is_deep
    assert found["no deep beam"]["demand"] == pytest.approx(5.1)
    assert found["no deep beam"]["capacity"] == pytest.approx(5.0)
    assert not found["no deep beam"]["passes"]


def test_a_size_that_is_none_is_told_with_its_key():
    job = HEAD.format(units="SI") + "".join(COLUMN.format(mark=mark) for mark in ("B1", "C1"))
    job += BEAM.format(
        mark="D", line='["B1", "C1"]', keys="", section="r", material="c30",
        design='bottom = { count = 2, size = "23 mm" }', dead=9, live=9,
    )  # fmt: skip
    with pytest.raises(CalcpackError) as caught:
        worked(job, "D")
    assert str(caught.value) == "design.bottom.size: there is no bar '23 mm'; the nearest is '25 mm'"
