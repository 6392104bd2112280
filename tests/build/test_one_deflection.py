"""A concrete sheet states one deflection: that of its design, on page one, in its results and its checks."""

from __future__ import annotations

import json
import shutil

import pytest

from calcpack.record.audit import audit_target

SHEETS = [
    ("rope_walk", "B1", "deflection, total", "deflection, live load"),
    ("rope_walk", "B6", "deflection, total", "deflection, live load"),
    ("seed_store", "G8", "deflection, long-term", "deflection, live"),
]


def record(folder, mark):
    return json.loads((folder / "sheets" / f"{mark}.json").read_text(encoding="utf-8"))


@pytest.mark.parametrize(("job", "mark", "total", "live"), SHEETS)
def test_results_checks_and_page_one_say_the_same(job, mark, total, live, built):
    data = record(built(job), mark)
    results = data["results"]
    checks = {check["name"]: check["demand"] for check in results["checks"]}
    lines = {line["no"]: line for line in data["lines"]}
    assert results["deflection"]["total_mm"] == checks[total]
    if live in checks:
        assert results["deflection"]["live_mm"] == checks[live]
    page = (built(job) / "sheets" / f"{mark}.html").read_text(encoding="utf-8")
    opening = page[: page.index("Actions and combinations:")]
    for key, no in results["deflection_lines"].items():
        assert results["deflection"][key] == lines[no]["value"]
        assert lines[no]["shown"] in opening
    assert "deflection, total" not in opening  # the elastic one's name


def test_the_cracked_beam_deflects_more_than_the_elastic_one(built):
    # 5 w L^4 / 384 E I of the gross section, as a lower bound: B6's quasi-permanent load is at least its dead load
    results = record(built("rope_walk"), "B6")["results"]
    dead = results["total"]["dead"] / 5.0
    elastic = 5 * dead * 5.0**4 / (384 * 33e6 * 0.3 * 0.5**3 / 12) * 1000
    assert results["deflection"]["total_mm"] > 2 * elastic


def test_other_sheets_keep_the_elastic_one(built):
    assert "deflection_lines" not in record(built("seed_store"), "G1")["results"]


EDITS = {
    "another value": lambda results: results["deflection"].update(
        total_mm=results["deflection"]["total_mm"] + 1
    ),
    "another line": lambda results: results["deflection_lines"].update(total_mm="3.01"),
    "no line": lambda results: results["deflection_lines"].pop("total_mm"),
    "no live line": lambda results: results["deflection_lines"].pop("live_mm"),
}


@pytest.mark.parametrize("edit", EDITS)
def test_the_audit_holds_it_against_its_line(edit, built, tmp_path):
    path = tmp_path / "B6.json"
    shutil.copy(built("rope_walk") / "sheets/B6.json", path)
    data = json.loads(path.read_text(encoding="utf-8"))
    EDITS[edit](data["results"])
    path.write_text(json.dumps(data), encoding="utf-8")
    (sheet,) = audit_target(path, processes=1).sheets
    wrong = [each.place for each in sheet.wrong]
    assert any(place.startswith(("results.deflection", "results.deflection_lines")) for place in wrong)
