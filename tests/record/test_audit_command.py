"""The command as it is typed: every kind of target, traces, sensitivity, the document, the exit status."""

from __future__ import annotations

import json
import re
import shlex
import shutil
import sys
import time

import pypdf
import pytest

from calcpack import cli
from calcpack.job.errors import CalcpackError
from calcpack.record.audit import audit_target, choose_sheet, open_sheet
from calcpack.record.audit_sensitivity import sensitivity
from calcpack.record.audit_trace import trace, who_uses
from calcpack.record.auditing.files import find_target
from calcpack.record.auditing.reading import canonical


def run(monkeypatch, capsys, *words):
    monkeypatch.setattr(sys, "argv", ["calcpack", *map(str, words)])
    status = 0
    try:
        cli.main()
    except SystemExit as stop:
        status = int(stop.code or 0)
    said = capsys.readouterr()
    return status, said.out, said.err


@pytest.mark.parametrize("target", [".", "pack.pdf", "sheets/B1.json", "sheets/J1.pdf", "sheets"])
def test_every_kind_of_target_is_found_right(loft, monkeypatch, capsys, target):
    status, out, _ = run(monkeypatch, capsys, "audit", loft / target)
    assert status == 0, out
    assert "none is wrong" in out


def test_all_json_and_report(loft, tmp_path, monkeypatch, capsys):
    _, out, _ = run(
        monkeypatch, capsys, "audit", loft, "--all", "--sheet", "J1", "--report", tmp_path / "a.pdf"
    )
    assert "Sheet J1" in out
    assert "results.reactions.dead" in out
    pages = "".join(page.extract_text() for page in pypdf.PdfReader(tmp_path / "a.pdf").pages)
    assert "nothing is wrong" in pages
    assert "Sheet J1" in pages
    _, out, _ = run(monkeypatch, capsys, "audit", loft, "--json")
    data = json.loads(out)
    assert data["passes"] is True
    assert [sheet["mark"] for sheet in data["sheets"]] == ["B1", "B2", "J1"]


def test_the_report_is_the_same_every_time(loft):
    from calcpack.record.audit_report import audit_report

    audit = audit_target(loft, processes=1)
    assert audit_report(audit) == audit_report(audit)


def edited(loft, tmp_path, change, name="B1.json"):
    folder = tmp_path / "out"
    shutil.copytree(loft, folder)
    record = folder / "sheets" / name
    data = json.loads(record.read_bytes())
    change(data)
    record.write_bytes(canonical(data))
    return folder


def test_a_wrong_line_is_shown_with_exit_status_1(loft, tmp_path, monkeypatch, capsys):
    def change(data):
        data["lines"][-3]["value"] *= 1.001
        data["job"]["title"] = "[bold]x[/bold]"

    folder = edited(loft, tmp_path, change)
    status, out, _ = run(monkeypatch, capsys, "audit", folder, "--report", tmp_path / "a.pdf")
    assert status == 1
    assert "What is wrong" in out
    assert "[bold]x[/bold]" in out
    pages = "".join(page.extract_text() for page in pypdf.PdfReader(tmp_path / "a.pdf").pages)
    assert "something is wrong" in pages


def test_unreadable_input_ends_with_status_2(loft, tmp_path, monkeypatch, capsys):
    broken = tmp_path / "x.json"
    broken.write_text("{", encoding="utf-8")
    assert run(monkeypatch, capsys, "audit", broken)[::2] == (2, "error: x.json: it is no JSON\n")
    (tmp_path / "x.pdf").write_bytes(b"%PDF-1.7 nothing")
    status, _, err = run(monkeypatch, capsys, "audit", tmp_path / "x.pdf")
    assert (status, err) == (2, "error: x.pdf: it is no readable PDF: it is cut off or damaged\n")
    status, _, err = run(monkeypatch, capsys, "audit", tmp_path / "none")
    assert status == 2
    assert "there is no '" in err
    assert run(monkeypatch, capsys, "audit", loft, "--svg", "x.svg")[0] == 2
    assert (
        "has 3 sheets; name one with --sheet" in run(monkeypatch, capsys, "audit", loft, "--trace", "3.01")[2]
    )
    assert run(monkeypatch, capsys, "audit", loft, "--sheet", "B9")[0] == 2


def test_a_pack_without_attachments_takes_its_records_from_a_folder(loft, tmp_path):
    writer = pypdf.PdfWriter()
    for page in pypdf.PdfReader(loft / "pack.pdf").pages:
        writer.add_page(page)
    writer.write(tmp_path / "bare.pdf")
    with pytest.raises(CalcpackError, match="--record"):
        audit_target(tmp_path / "bare.pdf")
    audit = audit_target(tmp_path / "bare.pdf", records=loft, processes=1)
    assert audit.passes
    assert {sheet.count("pages")[1] > 20 for sheet in audit.sheets} == {True}
    # without a notebook, what cannot be checked is said
    reasons = " ".join(each.remark for each in audit.sheets[0].open)
    assert "no notebook at hand" in reasons


def test_the_job_file_can_be_named(loft):
    job = loft.parent / "job.toml"
    audit = audit_target(loft / "sheets" / "B1.json", job=job, processes=1)
    assert audit.passes
    assert not [each for each in audit.sheets[0].open if each.place == "input"]
    assert any(each.place == "job file, panel P1" for each in audit.sheets[0].findings)


def test_another_version_of_a_template_is_said_in_words(loft, tmp_path):
    folder = edited(loft, tmp_path, lambda data: data["template"].update(version="0.9", sha256="ab"))
    audit = audit_target(folder / "sheets" / "B1.json", processes=1)
    said = [each.remark for each in audit.sheets[0].open if each.place == "template beam_loads"]
    assert said[0].startswith("the sheet was made with version 0.9, here is version")


def one_sheet(loft, mark):
    return open_sheet(choose_sheet(find_target(loft), mark))


def test_a_trace_ends_in_the_job_file(loft, monkeypatch, capsys):
    _, out, _ = run(monkeypatch, capsys, "audit", loft, "--sheet", "B1", "--trace", "W_q")
    assert "job file: panel P3, live = '2.5 kPa'" in out or "measured" not in out
    record = one_sheet(loft, "B1").record
    line = next(each for each in record.lines if each.symbol == "w_g1")
    root = trace(record, line.no, {"panel": [{"mark": "P1", "live": "3 kPa", "dead": "1.2 kPa"}]})

    def leaves(branch):
        return [branch.head] if not branch.branches else [x for each in branch.branches for x in leaves(each)]

    assert "job file: panel P1, dead = '1.2 kPa'" in leaves(root)
    takes = {each.no for each in record.lines if each.kind == "take"}
    assert all(head.startswith("job file") or head.split()[0] in takes for head in leaves(root))


def test_who_uses_a_line(loft):
    record = one_sheet(loft, "B1").record
    given = next(each for each in record.lines if each.kind == "take" and each.origin == "panel P1 live")
    root = who_uses(record, given.no)
    direct = {line.no for line in record.lines if given.no in line.inputs.values()}
    assert {each.head.split()[0] for each in root.branches} == direct
    with pytest.raises(CalcpackError, match=r"there is no line '99\.01'"):
        who_uses(record, "99.01")


def test_sensitivity_is_the_derivative_through_the_formulas(loft, tmp_path, monkeypatch, capsys):
    opened = one_sheet(loft, "J1")
    found = sensitivity(opened.record, opened.lines)
    assert "governing check" in found.says
    # by hand: a limit of stress or buckling goes with the inverse of what resists
    factor = next(each for each in found.influences if each.line.symbol.startswith("gamma_M"))
    assert factor.relative == pytest.approx(1.0, rel=1e-9)
    for each in found.influences[:6]:
        assert each.relative == pytest.approx(by_small_change(opened, each.line), rel=2e-4, abs=1e-4)
    status, out, _ = run(
        monkeypatch, capsys, "audit", loft, "--sensitivity", "J1", "--svg", tmp_path / "s.svg"
    )
    assert status == 0
    assert "1 % more gives" in out
    drawn = (tmp_path / "s.svg").read_text(encoding="utf-8")
    assert drawn.startswith("<svg")
    assert f"{found.influences[0].relative:+.2f} %".replace("-", "\u2212") in drawn


def by_small_change(opened, line):
    """How the ratio changes with one take a ten-thousandth larger, and smaller."""
    from calcpack.record.auditing.formulas import Value, evaluate, measured

    target = next(
        each
        for each in opened.lines
        if each.sides is not None
        and each.line.cite == governing(opened)["cite"]
        and float(each.sides[0].size / each.sides[1].size)
        == pytest.approx(governing(opened)["ratio"], rel=1e-6)
    )

    def ratio(scale):
        values = {}
        for each in opened.lines:
            no = each.line.no
            if each.line.kind == "require":
                continue
            known = {symbol: values[source] for symbol, source in each.line.inputs.items()}
            size = evaluate(each.formula, known)
            if no == line.no:
                size = Value(size.size * scale, 0.0, size.force, size.length)
            values[no] = size
        known = {symbol: values[source] for symbol, source in target.line.inputs.items()}
        left, right = (evaluate(side, known).size for side in target.formula.args)
        return float(left / right)

    assert measured(1.0, "m").size == 1
    return (ratio(1 + 1e-4) - ratio(1 - 1e-4)) / (2e-4 * ratio(1.0))


def governing(opened):
    results = opened.record.results
    return next(each for each in results["checks"] if each["name"] == results["governing"]["name"])


def test_a_load_sheet_is_moved_by_its_largest_moment_or_load(loft):
    opened = one_sheet(loft, "B1")
    found = sensitivity(opened.record, opened.lines)
    line = next(each for each in opened.record.lines if each.no == found.no)
    assert line.symbol.startswith("M")
    assert found.shown == line.shown
    assert not [
        each.no
        for each in opened.record.lines
        if each.symbol.startswith("M") and each.unit == line.unit and abs(each.value) > abs(line.value)
    ]
    # the moment of a uniform load goes with the square of the span; the joist's load stays in the middle
    span = next(each for each in found.influences if each.line.symbol == "ell_1")
    assert 1.0 < span.relative <= 2.0
    # B2 carries its shear equivalent forward: no line works out a moment, all the load on it decides
    opened = one_sheet(loft, "B2")
    found = sensitivity(opened.record, opened.lines)
    assert next(each for each in opened.record.lines if each.no == found.no).symbol == "W_g"
    joist = next(each for each in found.influences if each.line.symbol.startswith("F_"))
    assert joist.derivative == pytest.approx(1.0, rel=1e-9)


def test_a_sheet_without_lines_has_nothing_to_move(loft, tmp_path):
    folder = edited(loft, tmp_path, lambda data: data.update(lines=[]))
    opened = one_sheet(folder, "B1")
    with pytest.raises(CalcpackError, match="no check, no moment and no load"):
        sensitivity(opened.record, opened.lines)


def test_from_a_pdf_alone_to_the_governing_line_in_three_commands(loft, tmp_path, monkeypatch, capsys):
    monkeypatch.chdir(tmp_path)
    monkeypatch.setenv("COLUMNS", "200")
    shutil.copy(loft / "sheets" / "J1.pdf", "my sheet.pdf")
    status, out, _ = run(monkeypatch, capsys, "audit", "my sheet.pdf")
    assert status == 0
    ways = [shlex.split(row.split("  ")[0]) for row in out.splitlines() if row.startswith("calcpack audit")]
    assert [way[:3] for way in ways] == [["calcpack", "audit", "my sheet.pdf"]] * 3
    decisive = next(row.split() for row in out.split("What decides")[1].splitlines() if row.startswith("J1"))
    record = json.loads((loft / "sheets" / "J1.json").read_bytes())
    line = next(each for each in record["lines"] if each["no"] == decisive[1])
    assert line["kind"] == "require"
    assert float(decisive[-1]) == pytest.approx(record["results"]["governing"]["ratio"], abs=5e-4)
    status, out, _ = run(monkeypatch, capsys, *ways[0][1:])
    assert status == 0
    assert out.startswith(f"{line['no']}  ")
    assert " ≤ " in out.splitlines()[0]
    status, out, _ = run(monkeypatch, capsys, *ways[1][1:])
    assert status == 0
    assert f"What moves line {line['no']} of sheet J1" in out
    given = next(row.split()[0] for row in out.splitlines() if re.match(r"[0-9]+\.[0-9]+ ", row))
    status, out, _ = run(monkeypatch, capsys, *ways[2][1:-1], given)
    assert status == 0
    assert line["no"] in out


@pytest.fixture
def many(loft, tmp_path):
    """Two hundred sheets: the same records under other marks."""
    folder = tmp_path / "many" / "sheets"
    folder.mkdir(parents=True)
    records = [json.loads(path.read_bytes()) for path in sorted((loft / "sheets").glob("*.json"))]
    for number in range(200):
        data = records[number % len(records)] | {"mark": f"M{number}"}
        (folder / f"M{number}.json").write_bytes(canonical(data))
    return folder.parent


@pytest.mark.slow
def test_two_hundred_sheets_are_audited_in_twenty_seconds(many, allowed):
    began = time.process_time()  # of one process alone, whatever else the machine does
    audit = audit_target(many, processes=1)
    assert time.process_time() - began < allowed(20.0)
    assert len(audit.sheets) == 200
    assert audit.passes


def test_several_processes_find_the_same_and_tell_of_their_progress(many):
    for path in sorted((many / "sheets").glob("*.json"))[20:]:
        path.unlink()
    told = []
    audit = audit_target(many, follow=lambda *step: told.append(step), processes=2)
    assert told[-1] == ("auditing the sheets", 20, 20)
    assert [step[1] for step in told[2:]] == list(range(21))
    assert audit == audit_target(many, processes=1)
