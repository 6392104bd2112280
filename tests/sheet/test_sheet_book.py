"""A sheet written from top to bottom: its blocks, its errors, what a notebook shows of it."""

from __future__ import annotations

import json
from dataclasses import dataclass
from typing import Any

import nbformat
import pytest
from nbclient import NotebookClient

from calcpack.export.blocks import read_blocks
from calcpack.job.errors import CalcpackError
from calcpack.sheet import (
    Line,
    Reference,
    Sheet,
    Source,
    absolute,
    choose,
    equal,
    formula,
    is_shown_as,
    measured,
    number,
    quantity,
    strong,
    total,
)


@dataclass(frozen=True)
class Drawing:
    svg: str = "<svg xmlns='http://www.w3.org/2000/svg'></svg>"
    alt: str = "bending moment, largest 54.0 kN·m at 3.00 m"
    width_mm: float = 100.0


def small_sheet(system: Any = "SI") -> tuple[Sheet, dict[str, Line]]:
    sheet = Sheet("B5", system)
    sheet.section("Given values")
    lines = {
        "q": sheet.take("q", 5.5, "kPa", "Pressure on panel P1", "panel P1 live"),
        "S": sheet.take("S", 4.5, "m", "Short side", "panel P1 corners"),
        "L": sheet.take("L", 6.0, "m", "Long side", "panel P1 corners"),
    }
    sheet.section("Load")
    lines["m"] = sheet.hence("m", lines["S"] / lines["L"], "1", "Side ratio of panel P1", "common practice")
    lines["w"] = sheet.hence(
        "w_eq",
        lines["q"] * lines["S"] / 2 * (3 - lines["m"] ** 2) / 3,
        "kN/m",
        ["Equal largest moment, derived in ", {"line": "1.01"}],
        [Source("statics", ""), "derived above"],
    )
    lines["M"] = sheet.hence("M_u", lines["w"] * lines["L"] ** 2 / 8, "kN*m", "Largest moment")
    lines["MR"] = sheet.take("M_Rd", 64.25, "kN*m", "Resistance", "section, by hand", given=False)
    lines["ok"] = sheet.require(lines["M"] <= 0.9 * lines["MR"], "Bending", Source("EN 1992-1-1", "6.1"))
    return sheet, lines


def test_a_line_worked_out() -> None:
    sheet, lines = small_sheet()
    block = next(each for each in sheet.blocks if each.get("no") == "2.02")
    assert block == {
        "type": "line",
        "no": "2.02",
        "kind": "hence",
        "says": ["Equal largest moment, derived in ", {"line": "1.01"}],
        "symbol": r"w_{\text{eq}}",
        "rows": [
            [r"\frac{q\,S}{2}", r"\cdot \frac{3 - m^{2}}{3}"],
            [r"\frac{5.50\,\text{kPa} \cdot 4.50\,\text{m}}{2}", r"\cdot \frac{3 - 0.750^{2}}{3}"],
            ["\\textbf{10.05\u00a0kN/m}"],
        ],
        "cite": "statics; derived above",
        "origin": "",
        "from": ["1.01", "1.02", "2.01"],
        "passes": None,
        "alt": "w eq equals q times S over 2 times (3 minus m squared) over 3, "
        "which is 10.05 kilonewtons per metre",
    }
    assert lines["w"].value == pytest.approx(5.5 * 4.5 / 2 * (3 - 0.75**2) / 3, rel=1e-15)
    assert all(is_shown_as(line.value, line.unit, line.shown) for line in lines.values() if line.symbol)


def test_a_value_brought_in_has_one_row() -> None:
    sheet, _ = small_sheet("US")
    block = sheet.blocks[1]
    assert block["rows"] == [["\\textbf{114.87\u00a0psf}"]]
    assert (block["kind"], block["origin"], block["from"]) == ("take", "panel P1 live", [])
    assert block["alt"] == "q equals 114.87 pounds per square foot"


def test_a_requirement_is_a_comparison_without_a_symbol() -> None:
    sheet, lines = small_sheet()
    block = sheet.blocks[-1]
    assert block["symbol"] == ""
    assert block["rows"] == [
        [r"M_{\text{u}}", r"\le 0.9\,M_{\text{Rd}}"],
        [r"45.2\,\text{kN·m}", r"\le 0.9", r"\cdot 64.3\,\text{kN·m}"],
        ["\\textbf{45.2\u00a0kN·m}", "\\le \\textbf{57.8\u00a0kN·m}"],
    ]
    assert block["passes"] is True
    assert block["alt"] == (
        "M u is at most 0.9 times M Rd: 45.2 kilonewton metres against 57.8 kilonewton metres, satisfied"
    )
    check = lines["ok"].check("bending")
    assert check["ratio"] == pytest.approx(lines["M"].value / (0.9 * 64.25), rel=1e-12)
    assert (check["unit"], check["passes"], check["cite"]) == ("kN*m", True, "EN 1992-1-1 6.1")
    assert sheet.failed == []


def test_a_requirement_that_fails() -> None:
    sheet, lines = small_sheet()
    failing = sheet.require(lines["MR"] >= 2 * lines["M"], "Twice as much")
    assert failing.passes is False
    assert sheet.failed == [failing]
    assert sheet.blocks[-1]["rows"][0] == [r"M_{\text{Rd}}", r"\ge 2\,M_{\text{u}}"]
    check = failing.check("twice")
    assert check["demand"] == pytest.approx(2 * lines["M"].value)
    assert check["ratio"] > 1
    nothing = sheet.require(absolute(lines["m"] - lines["m"]) <= 0 * lines["m"], "No difference")
    assert nothing.check("none")["ratio"] == 0.0
    some = sheet.require(lines["m"] <= 0 * lines["m"], "None at all")
    assert some.check("some")["ratio"] > 1
    assert sheet.require(equal(lines["m"], 0.75), "As drawn").check("drawn")["passes"]
    with pytest.raises(CalcpackError, match="requires nothing"):
        lines["m"].check("m")


def test_a_requirement_of_two_printed_values_has_two_rows() -> None:
    sheet, lines = small_sheet()
    sheet.require(lines["S"] < lines["L"], "Short is shorter")
    assert sheet.blocks[-1]["rows"] == [["S", "< L"], [r"4.50\,\text{m}", r"< 6.00\,\text{m}"]]


def test_rows_that_say_nothing_new_are_left_out() -> None:
    sheet, lines = small_sheet()
    sheet.hence("M_Ed", lines["M"], "kN*m", "The same")
    assert sheet.blocks[-1]["rows"] == [[r"M_{\text{u}}"], ["\\textbf{45.2\u00a0kN·m}"]]
    sheet.hence("g", quantity(25, "kN/m^3") * quantity(0.16, "m"), "kPa", "Own weight")
    assert sheet.blocks[-1]["rows"] == [
        [r"25\,\text{kN/m³}", r"\cdot 0.16\,\text{m}"],
        ["\\textbf{4.00\u00a0kPa}"],
    ]
    sheet.hence("n", number(2) * 3, "1", "Six")
    assert sheet.blocks[-1]["rows"] == [["2", r"\cdot 3"], [r"\textbf{6.000}"]]
    sheet.hence("M_0", measured(-3.25, "kN*m"), "kN*m", "Negative")
    assert sheet.blocks[-1]["rows"] == [[r"-3.25\,\text{kN·m}"], ["\\textbf{\u22123.25\u00a0kN·m}"]]


def test_values_may_be_shown_in_a_unit_of_the_author_s_choice() -> None:
    sheet = Sheet("B1", "US")
    sheet.section("Material")
    strength = sheet.take("f'_c", 27.57902917, "MPa", "Strength", "material c4", us="psi")
    assert strength.shown == "4000\u00a0psi"
    assert strength.unit == "MPa"
    area = sheet.hence("A_s", strength * quantity(1, "mm^2") / strength, "mm^2", "Area", us="in^2")
    assert area.shown.endswith("in²")
    in_si = Sheet("B1")
    in_si.section("Material")
    assert in_si.take("f'_c", 30.0, "MPa", "Strength", "c30", us="psi").shown == "30.0\u00a0MPa"


@pytest.mark.parametrize("system", ["SI", "US"])
def test_blocks_are_what_exporters_take(system: str) -> None:
    sheet, lines = small_sheet(system)
    sheet.subsection("Span 2")
    sheet.text(["see ", lines["w"].link, lines["w"].math, strong("unsafe")], "caution")
    sheet.items(["one", [formula("w_1"), " two"]])
    sheet.facts({"Program": "calcpack"})
    sheet.facts([("a", "b")])
    sheet.table(["a", ("b", "right"), {"head": "c", "align": "center"}], [["1", "2", "3"]], "Table", [0])
    sheet.ratios([{"says": "bending", "demand": "1", "resistance": "2 kN", "ratio": 0.5, "passes": True}])
    sheet.figure(Drawing(), "Loads")
    sheet.derivation([{"says": "Moments about A", "rows": [r"M = \frac{w L^2}{8}"], "alt": "M equals"}])
    with sheet.columns([1, 2]) as move_on:
        sheet.text("left")
        move_on()
        sheet.require(lines["m"] <= 1, "in a column")
    sheet.signoff([{"role": "prepared", "name": "", "licence": "", "date": ""}])
    sheet.notation()
    blocks = read_blocks(json.loads(json.dumps(sheet.blocks)))
    assert len(blocks) == len(sheet.blocks)
    assert [block["type"] for block in sheet.blocks[-3:]] == ["columns", "signoff", "notation"]


def test_derivations_from_objects() -> None:
    @dataclass(frozen=True)
    class Step:
        says: tuple[str, ...] = ("Moments",)
        rows: tuple[str, ...] = ("M = 0",)
        alt: str = "M is zero"

    sheet = Sheet("B1")
    sheet.derivation([Step()])
    assert sheet.blocks[0]["steps"] == [{"says": ["Moments"], "rows": ["M = 0"], "alt": "M is zero"}]


def test_notation_has_each_symbol_once() -> None:
    sheet, _ = small_sheet()
    sheet.take("q_2", 3.0, "kPa", "Pressure on panel P2", "panel P2 live")
    sheet.take("kappa_x", 3.0, "1", "Something of the author's", "here", word="a word of its own")
    sheet.take("zeta", 0.05, "1", "Damping", "here")
    sheet.notation()
    rows = sheet.blocks[-1]["rows"]
    assert [row[0] for row in rows] == [
        "L", "m", r"M_{\text{Rd}}", r"M_{\text{u}}", "q", "S", r"w_{\text{eq}}",
        r"\kappa_{\text{x}}", r"\zeta",
    ]  # fmt: skip
    assert rows[4] == ["q", "live load, on the panel", "kPa"]
    assert rows[1][2] == "–"
    assert rows[-2][1] == "a word of its own"
    assert rows[-1][1] == "Damping"


def test_numbers_run_on_past_ninety_nine() -> None:
    sheet = Sheet("B1")
    sheet.section("Many")
    for _ in range(100):
        line = sheet.take("x", 1.0, "m", "Place", "here")
    assert line.no == "1.100"


def test_one_symbol_twice() -> None:
    sheet, lines = small_sheet()
    again = sheet.take("q", 2.0, "kPa", "Pressure on panel P2", "panel P2 live")
    assert again.no != lines["q"].no
    with pytest.raises(CalcpackError) as caught:
        sheet.hence("q_sum", lines["q"] + again, "kPa", "Both")
    assert str(caught.value) == (
        "line 2.07: lines 1.01 and 2.06 are both called 'q' in one formula; give them an index: q_1, q_2"
    )
    assert sheet.hence("q_sum", 2 * again, "kPa", "Twice the second").no == "2.07"


def wrong_lines() -> list[tuple[Any, str]]:
    return [
        (
            lambda s, x: s.hence("w", x["q"] * x["S"], "kN", "w"),
            "line 2.06: 'q*S' is a line load, but kN stands for",
        ),
        (
            lambda s, x: s.hence("w", x["q"], "furlong", "w"),
            "line 2.06: unit 'furlong' is not one the sheet knows",
        ),
        (lambda s, x: s.hence("w{", x["q"], "kPa", "w"), "line 2.06: 'w{' is not a symbol"),
        (lambda s, x: s.take("w", float("nan"), "kPa", "w", "o"), "line 2.06: nan is not a finite number"),
        (lambda s, x: s.take("w", "5 kPa", "kPa", "w", "o"), "line 2.06: '5 kPa' is not a number"),
        (lambda s, x: s.require(x["q"], "w"), "line 2.06: what must hold is a comparison"),
        (
            lambda s, x: s.require(x["q"] <= 3, "w"),
            "line 2.06: in 'q <= 3': q is a pressure and 3 is a plain number",
        ),
        (lambda s, x: s.hence("w", x["ok"] * 2, "1", "w"), "line 2.05 states what must hold"),
        (
            lambda s, x: s.hence("w", Reference("q", "9.01"), "kPa", "w"),
            "line 2.06: 'q' of line 9.01 is not on this",
        ),
        (
            lambda s, x: s.hence("w", Reference("z", "1.01"), "kPa", "w"),
            "line 2.06: 'z' of line 1.01 is not on this",
        ),
        (lambda s, x: s.hence("w", x["q"], "kPa", 5), "line 2.06: 5 is not a run of text"),
        (lambda s, x: s.table(["a"], [["1", "2"]]), "row 1 of the table has 2 cells for 1 columns"),
        (lambda s, x: s.table(["a"], [["1"]], strong_rows=[1]), "a row to set in bold is not in the table"),
        (lambda s, x: s.table([("a", "middle")], []), "a column cannot be aligned 'middle'"),
        (lambda s, x: s.text("a", "loud"), "a text's role cannot be 'loud'"),
        (lambda s, x: s.figure(Drawing(svg="<p>")), "a figure is one <svg> element"),
        (lambda s, x: s.figure(Drawing(alt=" ")), "words that say what it shows"),
        (lambda s, x: s.derivation([{"says": "", "rows": [r"\input{x}"], "alt": ""}]), "has the command"),
        (lambda s, x: s.columns([0]).__enter__(), "each column has a width above 0"),
        (lambda s, x: s.record(job={}, template={}, results={}), "template.name: Field required"),
    ]


@pytest.mark.parametrize("number_", range(20))
def test_what_an_author_can_get_wrong(number_: int) -> None:
    act, message = wrong_lines()[number_]
    sheet, lines = small_sheet()
    before = len(sheet.blocks), len(sheet.lines)
    with pytest.raises(CalcpackError) as caught:
        act(sheet, lines)
    assert message in str(caught.value)
    assert (len(sheet.blocks), len(sheet.lines)) == before


def test_columns_keep_to_themselves() -> None:
    sheet, _ = small_sheet()
    context = sheet.columns([1])
    move_on = context.__enter__()
    with pytest.raises(CalcpackError, match="inside columns"):
        sheet.columns([1]).__enter__()
    with pytest.raises(CalcpackError, match="only 1 columns"):
        move_on()
    context.__exit__(None, None, None)


def test_the_start_of_a_sheet() -> None:
    with pytest.raises(CalcpackError, match="a line stands in a section; begin one"):
        Sheet("B1").take("q", 1.0, "kPa", "Pressure", "here")
    with pytest.raises(CalcpackError, match="units are 'SI' or 'US', not 'metric'"):
        Sheet("B1", "metric")  # type: ignore[arg-type]


def test_choosing_says_why() -> None:
    sheet, lines = small_sheet()
    sheet.hence("k", choose(lines["m"] < 0.5, 1, 1 + lines["m"]), "1", "Factor")
    assert sheet.blocks[-1]["rows"][1] == ["1", "+ 0.750", r"\quad(\text{as }0.750 \ge 0.5)"]


def test_the_same_input_gives_the_same_blocks() -> None:
    assert json.dumps(small_sheet()[0].blocks) == json.dumps(small_sheet()[0].blocks)


def test_nothing_is_shown_outside_of_a_notebook(capsys: pytest.CaptureFixture[str]) -> None:
    sheet, _ = small_sheet()
    sheet.show()
    sheet.emit_record(job={}, template={"name": "t", "version": "1", "sha256": ""}, results={})
    assert capsys.readouterr() == ("", "")


CELLS = (
    "from calcpack.sheet import Sheet\n"
    "sheet = Sheet('B1')\n"
    "sheet.section('Load of $5 & more')\n"
    "q = sheet.take('q', 5.5, 'kPa', 'Pressure', 'panel P1 live')",
    "with sheet.columns([1, 1]) as move_on:\n    sheet.text('left')\n    move_on()\n    sheet.text('right')",
    "sheet.hence('q_2', 2 * q, 'kPa', 'Twice')",
    "sheet.emit_record(job={'revision': 'B'}, results={},\n"
    "                  template={'name': 't', 'version': '1', 'sha256': ''})",
)


def test_a_notebook_shows_each_block_once_and_the_record_last() -> None:
    notebook = nbformat.v4.new_notebook(cells=[nbformat.v4.new_code_cell(cell) for cell in CELLS])
    NotebookClient(notebook, timeout=60, kernel_name="python3").execute()
    outputs = [cell["outputs"] for cell in notebook["cells"]]
    assert all(output["output_type"] == "display_data" for cell in outputs for output in cell)
    shown = [
        block["type"]
        for cell in outputs
        for output in cell
        for block in output["data"].get("application/vnd.calcpack.blocks+json", {"blocks": []})["blocks"]
    ]
    assert shown == ["heading", "line", "columns", "line"]
    assert "<span>$</span>5 &amp; more" in outputs[0][0]["data"]["text/html"]
    record = outputs[-1][-1]["data"]["application/vnd.calcpack.record+json"]
    assert (record["revision"], [line["no"] for line in record["lines"]]) == ("B", ["1.01", "1.02"])


def test_sums_of_many_lines() -> None:
    sheet, _ = small_sheet()
    parts = [sheet.take(f"F_{number_}", 1.5, "kN", "Force", "here") for number_ in range(1, 5)]
    line = sheet.hence("F", total(parts), "kN", "All")
    assert line.value == 6.0
    assert sheet.blocks[-1]["rows"][1] == [r"1.5\,\text{kN}", *[r"+ 1.5\,\text{kN}"] * 3]


def repeated():
    sheet = Sheet("B1")
    sheet.section("Bars")
    lines = []
    with sheet.repeating():
        for face, value in (("sag", 20), ("hog", 16)):
            bar = sheet.take(f"phi_{face}", value, "mm", "Bars", "chosen", word="bar")
            lines.append(sheet.hence(f"A_{face}", 3 * bar**2, "mm^2", "Area", word="area"))
            sheet.require(
                lines[-1] >= sheet.take(f"m_{face}", 9, "mm^2", "Least", "job", word="least"), "Enough"
            )
        more = sheet.hence("A_all", 4 * bar**2, "mm^2", "Area", word="area of all")
    again = sheet.hence("A_out", 3 * bar**2, "mm^2", "Area", word="area outside")
    return sheet, lines, more, again


def test_a_formula_that_stands_already_is_shown_in_short_and_kept_in_full():
    sheet, (_, hog), more, again = repeated()
    blocks = {block["no"]: block for block in sheet.blocks if block["type"] == "line"}
    assert blocks[hog.no]["like"] == "1.02"
    assert blocks[hog.no]["rows"] == [["\\textbf{768\xa0mm²}"]]
    assert blocks["1.08"]["like"] == "1.04"
    assert "".join(blocks["1.08"]["rows"][0]) == "\\textbf{768\xa0mm²}\\ge \\textbf{9.00\xa0mm²}"
    # another number in the formula, or no repetition asked for: in full
    assert "like" not in blocks[more.no]
    assert "like" not in blocks[again.no]
    assert hog.expression is not None
    assert hog.inputs == {"phi_hog": "1.05"}


def test_symbols_that_differ_by_their_place_stand_once_in_the_notation():
    sheet, *_ = repeated()
    sheet.notation()
    meanings = [(row[0], row[1]) for row in sheet.blocks[-1]["rows"]]
    assert ("\\phi", "bar") in meanings
    assert [meaning for _, meaning in meanings].count("area") == 1
