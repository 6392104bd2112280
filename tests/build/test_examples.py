"""Every shipped example builds; its headline numbers are those of a hand calculation."""

from __future__ import annotations

import csv
import hashlib
import json
import math
import re
from pathlib import Path

import pytest

from calcpack.record.audit import audit_target, open_sheet
from calcpack.record.audit_sensitivity import sensitivity
from calcpack.record.auditing.files import find_target

EXAMPLES = ["rope_walk", "seed_store"]
KIP, FOOT = 4.4482216152605, 0.3048


def record(folder, mark):
    return json.loads((folder / "sheets" / f"{mark}.json").read_text(encoding="utf-8"))


@pytest.mark.parametrize("name", EXAMPLES)
def test_the_folder_holds_what_it_should(name, built):
    folder = built(name)
    job = json.loads((folder / "job.json").read_text(encoding="utf-8"))
    assert 8 <= len(job["beams"]) <= 15
    for mark in job["beams"]:
        for ending in ("ipynb", "html", "pdf", "json"):
            assert (folder / "sheets" / f"{mark}.{ending}").stat().st_size > 1000
    assert (folder / "pack.pdf").read_bytes().startswith(b"%PDF-")
    assert (folder / "index.html").read_text(encoding="utf-8").startswith("<!DOCTYPE html>")
    rows = list(csv.DictReader((folder / "schedule.csv").read_text(encoding="utf-8").splitlines()))
    assert [row["mark"] for row in rows] == job["beams"]
    assert sorted(job["order"]) == sorted(job["beams"])


@pytest.mark.parametrize("name", EXAMPLES)
def test_supports_carry_what_is_applied(name, built):
    job = json.loads((built(name) / "job.json").read_text(encoding="utf-8"))
    for case, applied in job["applied"].items():
        carried = math.fsum(forces.get(case, 0.0) for forces in job["supports"].values())
        assert carried == pytest.approx(applied, rel=1e-9, abs=1e-9)
    assert job["applied"]["dead"] > 100


@pytest.mark.parametrize("name", EXAMPLES)
def test_the_manifest_names_every_file(name, built):
    folder = built(name)
    lines = (folder / "manifest.sha256").read_text(encoding="utf-8").splitlines()
    named = dict(reversed(line.split("  ", 1)) for line in lines)
    files = {path.relative_to(folder).as_posix() for path in folder.rglob("*") if path.is_file()}
    assert set(named) == files - {"manifest.sha256"}
    for file, digest in named.items():
        assert hashlib.sha256((folder / file).read_bytes()).hexdigest() == digest


def test_beam_between_two_triangles(built):
    """B7 by hand: triangles of 5.85 and 3.0 kPa over 2.25 m from both sides, 4.5 m span."""
    found = record(built("rope_walk"), "B7")["results"]
    own = 0.3 * 0.6 * 25
    dead = 2 * 5.85 * 2.25 * 4.5**2 / 12 + own * 4.5**2 / 8
    live = 2 * 3.0 * 2.25 * 4.5**2 / 12
    assert found["envelope"]["moment_max"] == pytest.approx(1.35 * dead + 1.5 * live, rel=1e-9)
    assert found["reactions"]["live"] == pytest.approx([2 * 3.0 * 2.25 * 4.5 / 4] * 2, rel=1e-9)
    assert found["equivalent"][0]["live"]["moment"] == pytest.approx(2 * 2 / 3 * 3.0 * 2.25, rel=1e-9)
    assert found["equivalent"][0]["live"]["shear"] == pytest.approx(2 * 1 / 2 * 3.0 * 2.25, rel=1e-9)
    inertia, modulus = 0.3 * 0.6**3 / 12, 33e6  # Ecm of C30/37, EN 1992-1-1 Table 3.1
    live_mm = 2 * 3.0 * 2.25 * 4.5**4 / (120 * modulus * inertia) * 1000
    assert found["deflection"]["live_mm"] == pytest.approx(live_mm, rel=1e-9)


def test_joist_comes_down_on_its_girder(built):
    """J1 takes 2.5 m of one-way slab on both sides; half of it stands on B8 at 2.5 m."""
    joist, girder = (record(built("rope_walk"), mark)["results"] for mark in ("J1", "B8"))
    assert joist["reactions"]["live"] == pytest.approx([3.0 * 2.5 * 6 / 2] * 2, rel=1e-9)
    (point,) = [load for load in girder["loads"]["live"] if load["source"] == "J1"]
    assert (point["at"], point["force"]) == pytest.approx((2.5, 22.5))
    square = 4.0 * 2.5 * 5 / 2  # triangle of the square panel P5
    assert girder["reactions"]["live"] == pytest.approx([(22.5 + square) / 2] * 2, rel=1e-9)


def test_two_way_and_one_way_panels_in_us_units(built):
    """F1 by hand, in kips and feet: trapezoids 7 ft deep from both sides over 20 ft."""
    found = record(built("seed_store"), "F1")["results"]
    trapezoid = 0.125 * 7 * (20 - 7)  # [kip] from one side, live
    assert [value / KIP for value in found["reactions"]["live"]] == pytest.approx([trapezoid] * 2, rel=1e-9)
    peak = 2 * 0.125 * 7
    moment = peak * (3 * 20**2 - 4 * 7**2) / 24
    service = next(each for each in found["combinations"] if each["name"] == "D + L")
    dead = next(each for each in found["combinations"] if each["name"] == "1.4 D")["moment_max"] / 1.4
    assert (service["moment_max"] - dead) / (KIP * FOOT) == pytest.approx(moment, rel=1e-9)


def test_patterns_of_live_load_reach_further_than_all_spans_loaded(built):
    """G1 overhangs: with only the overhang loaded the far support is relieved."""
    found = record(built("seed_store"), "G1")["results"]
    strength = [each for each in found["combinations"] if each["name"] == "1.2 D + 1.6 L"]
    together = [
        1.2 * dead + 1.6 * live
        for dead, live in zip(found["reactions"]["dead"], found["reactions"]["live"], strict=True)
    ]
    worst = strength[0]["reactions_max"]
    assert all(one >= other - 1e-9 for one, other in zip(worst, together, strict=True))
    assert any(one > other * 1.01 for one, other in zip(worst, together, strict=True))


@pytest.mark.parametrize("name", EXAMPLES)
@pytest.mark.parametrize("file", [".", "pack.pdf"])
def test_an_audit_finds_nothing_wrong(name, file, built):
    audit = audit_target(built(name) / file, processes=1)
    assert [(each.place, each.remark) for each in audit.all for each in each.wrong] == []
    assert sum(len(sheet.findings) for sheet in audit.sheets) > 3000


@pytest.mark.parametrize("name", EXAMPLES)
def test_what_is_drawn_to_move_the_result_is_what_the_audit_derives(name, built):
    """Two evaluators that share no code: floats with a small step, thirty digits with a smaller one."""
    drawn = 0
    for files in find_target(built(name)).sheets:
        opened = open_sheet(files)
        shown = [block for block in opened.notebook.blocks if block.get("screen")]
        if opened.record.mark == "Appendix":
            assert shown == []
            continue
        (block,) = shown
        exact = sensitivity(opened.record, opened.lines)
        rows = " ".join(block["alt"].partition("for one per cent of each value. ")[2].split()).split("; ")
        known = {
            " ".join(f"{each.line.says}: {each.relative:+.2f} per cent".split()) for each in exact.influences
        }
        assert set(rows) <= known
        assert len(rows) == min(8, len(exact.influences))
        assert rows[0].endswith(f"{exact.influences[0].relative:+.2f} per cent".lstrip("+-"))
        assert block["caption"][1] == {"line": exact.no}
        assert "filled raises" in files.screen_bytes().decode("utf-8")
        assert not any("filled raises" in text for text in files.page_texts())
        drawn += 1
    assert drawn >= 10


def test_the_audit_in_the_readme_is_that_of_the_example(built):
    readme = (Path(__file__).parents[2] / "README.md").read_text(encoding="utf-8")
    sheet = record(built("rope_walk"), "B1")
    bond = next(line for line in sheet["lines"] if line["says"] == "Cover of the bars, for bond")
    governing = sheet["results"]["governing"]
    assert re.search(rf"\nB1 +{bond['no']}  {governing['name']} +{governing['ratio']:.3g}\n", readme)
    assert f"calcpack audit B1.pdf --trace {bond['no']}\n{bond['no']}  " in readme
    assert re.search(rf"\nB1 +{len(sheet['lines'])} ", readme)


def test_a_figure_names_final_deflections_as_their_table_does(built):
    held = 0
    for files in find_target(built("rope_walk")).sheets:
        notebook = open_sheet(files).notebook
        for table in notebook.tables:
            heads = [column["head"] for column in table["columns"]]
            if "final" not in heads:
                continue
            (spoken,) = (each["alt"] for each in notebook.blocks if "final deflection" in each.get("alt", ""))
            final, at = heads.index("final"), heads.index("at")
            for row in table["rows"]:
                assert f"{row[final]} at {row[at]}".replace("\xa0", " ") in spoken.replace("\xa0", " ")
                held += 1
    assert held >= 5


@pytest.mark.parametrize("name", EXAMPLES)
def test_comparisons_of_a_requirement_are_not_joined_as_if_they_were_equal(name, built):
    count = 0
    for files in find_target(built(name)).sheets:
        page = files.screen_bytes().decode("utf-8")
        for part in page.split('<div class="line require')[1:]:
            assert 'class="sign"' not in part.partition('class="notes"')[0]
            count += 1
    assert count > 50
