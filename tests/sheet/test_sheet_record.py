"""The record: its form, its canonical text, and what is refused as a record."""

from __future__ import annotations

import copy
import datetime
import json
import time
from collections.abc import Callable
from typing import Any

import numpy as np
import pytest

from calcpack.job.errors import CalcpackError
from calcpack.job.model import Header
from calcpack.sheet import Sheet, Source, check_record, from_json, read_record, write_json
from calcpack.sheet.evaluation import evaluate_in, in_base

TEMPLATE = {"name": "beam_loads", "version": "1.0", "sha256": "ab"}


def record_of(**results: Any) -> dict[str, Any]:
    sheet = Sheet("B5")
    sheet.section("Load")
    q = sheet.take("q", 5.5, "kPa", "Pressure, §1 €", "panel P1 live")
    S = sheet.take("S", 4.5, "m", "Short side", "panel P1 corners")
    M = sheet.take("M_0", -1.25, "kN*m", "Moment at the end", "analysis", given=False)
    w = sheet.hence("w", q * S / 2, "kN/m", ["Peak ", {"math": r"w_{\text{eq}}"}], Source("statics"))
    sheet.require(w <= 4 * w - w, "holds")
    sheet.require(-M * 2 < M, "does not")
    job = Header(number="2417", title="Boat workshop", date=datetime.date(2026, 12, 1))
    return sheet.record(job=job, template=TEMPLATE, results=results)


def test_the_form_of_a_record() -> None:
    record = record_of(spans=[4.5])
    assert list(record) == ["format", "job", "mark", "revision", "template", "lines", "results"]
    assert record["format"] == 1
    assert (record["mark"], record["revision"], record["job"]["date"]) == ("B5", "A", "2026-12-01")
    take, hence, require = record["lines"][0], record["lines"][3], record["lines"][4]
    assert take == {
        "no": "1.01", "kind": "take", "symbol": "q", "says": "Pressure, §1 €",
        "expression": {"quantity": "5.5", "unit": "kPa"}, "inputs": {}, "value": 5.5, "unit": "kPa",
        "shown": "5.50\u00a0kPa", "cite": "", "origin": "panel P1 live",
    }  # fmt: skip
    assert hence == {
        "no": "1.04", "kind": "hence", "symbol": "w", "says": "Peak w_eq",
        "expression": {
            "op": "div",
            "args": [{"op": "mul", "args": [{"symbol": "q"}, {"symbol": "S"}]}, {"number": "2"}],
        },
        "inputs": {"q": "1.01", "S": "1.02"}, "value": 12.375, "unit": "kN/m", "shown": "12.38\u00a0kN/m",
        "cite": "statics",
    }  # fmt: skip
    assert (require["passes"], require["value"], require["shown"]) == (True, 1.0, "satisfied")
    assert record["lines"][5]["passes"] is False


def test_every_line_can_be_worked_out_again_from_the_record_alone() -> None:
    record = json.loads(write_json(record_of()))
    known = {}
    for line in record["lines"]:
        value = evaluate_in(from_json(line["expression"], line["inputs"]), line["unit"], known)
        assert value == line["value"]
        if line["kind"] != "require":
            known[line["no"]] = in_base(value, line["unit"])


def test_canonical_text() -> None:
    record = record_of(spans=np.array([4.5, 6.0]), count=np.int64(2), small=1e-07, zero=-0.0, none=None)
    text = write_json(record)
    assert text == write_json(record_of(spans=[4.5, 6.0], count=2, small=1e-07, zero=0.0, none=None))
    assert text.endswith("}\n")
    assert '"says": "Pressure, §1 €"' in text
    assert json.loads(text) == record
    assert read_record(text) == record
    assert '"zero": 0.0' in text


@pytest.mark.parametrize(
    "value", [float("nan"), float("inf"), {1, 2}, object(), b"x", datetime.date(2026, 1, 1)]
)
def test_results_are_plain_data(value: Any) -> None:
    with pytest.raises(CalcpackError, match=r"record\.results\.found"):
        record_of(found=value)


def edited(change: Callable[[dict[str, Any]], Any]) -> dict[str, Any]:
    record = copy.deepcopy(record_of())
    change(record)
    return record


def set_(line: int, key: str, value: Any) -> Callable[[dict[str, Any]], Any]:
    return lambda record: record["lines"][line].__setitem__(key, value)


@pytest.mark.parametrize(
    ("change", "message"),
    [
        (lambda r: r.update(format=2), "format: Input should be 1"),
        (lambda r: r.pop("lines"), "lines: Field required"),
        (lambda r: r.update(extra=1), "extra: Extra inputs are not permitted"),
        (lambda r: r["template"].pop("sha256"), "template.sha256: Field required"),
        (lambda r: r["lines"][0].pop("value"), "lines.0.value: Field required"),
        (set_(0, "value", "5.5"), "lines.0.value"),
        (set_(0, "value", float("nan")), "lines.0.value: Input should be a finite number"),
        (set_(0, "no", "1"), "lines.0.no"),
        (set_(0, "kind", "guess"), "lines.0.kind"),
        (set_(1, "no", "1.01"), "line 1.01: its number is given twice"),
        (set_(3, "inputs", {"q": "1.01"}), "line 1.04: the formula's symbol 'S' has no line"),
        (
            set_(3, "inputs", {"q": "1.01", "S": "1.09"}),
            "'S' is taken from line 1.09, which does not come before it",
        ),
        (
            set_(3, "inputs", {"q": "1.01", "S": "1.04"}),
            "'S' is taken from line 1.04, which does not come before it",
        ),
        (set_(3, "inputs", {"q": "1.01", "S": "1.03"}), "'S' is not what line 1.03 gives"),
        (
            set_(3, "inputs", {"q": "1.01", "S": "1.02", "M_0": "1.03"}),
            "its inputs are not what its formula draws on",
        ),
        (set_(3, "expression", {"op": "eval", "args": []}), "there is no operation 'eval'"),
        (set_(3, "unit", "furlong"), "unit 'furlong' is not one the sheet knows"),
        (set_(3, "shown", "12.38 kN"), "'12.38 kN' is not shown in a unit like kN/m"),
        (set_(3, "shown", "about 12"), "'about 12' is not a shown value"),
        (set_(3, "symbol", "φ"), "its symbol 'φ' is not written plainly"),
        (set_(3, "origin", "x"), "an origin that only a 'take' has"),
        (set_(3, "passes", True), "a verdict that only a 'require' has"),
        (set_(4, "passes", False), "do not say the same"),
        (set_(4, "expression", {"number": "1"}), "its inputs are not what"),
        (set_(4, "symbol", "x"), "a requirement has no symbol"),
    ],
)
def test_what_is_no_record(change: Callable[[dict[str, Any]], Any], message: str) -> None:
    with pytest.raises(CalcpackError) as caught:
        check_record(edited(change))
    assert message in str(caught.value)


def test_every_problem_is_named_up_to_a_number() -> None:
    record = record_of()
    for line in record["lines"][:4]:
        line["unit"] = "furlong"
    with pytest.raises(CalcpackError) as caught:
        check_record(record)
    assert [problem.key for problem in caught.value.problems] == [
        "line 1.01", "line 1.02", "line 1.03", "line 1.04",
    ]  # fmt: skip
    record["lines"] = [{}] * 1000
    with pytest.raises(CalcpackError) as caught:
        check_record(record)
    assert len(caught.value.problems) == 50


@pytest.mark.parametrize(
    "text",
    [
        "",
        "{",
        "[]",
        "null",
        '{"format": 1, "format": 1}',
        "[" * 100_000,
        '{"a": ' * 50_000,
        "NaN",
        '"' + "x" * 10,
    ],
)
def test_texts_that_are_no_record(text: str, allowed: Callable[[float], float]) -> None:
    begun = time.process_time()
    with pytest.raises(CalcpackError):
        read_record(text)
    assert time.process_time() - begun < allowed(0.5)


def test_sources() -> None:
    assert str(Source("ACI 318-19", "22.5.5.1", "from memory")) == "ACI 318-19 22.5.5.1 (from memory)"
    assert str(Source("statics")) == "statics"
