"""The audit's own arithmetic: operations, dimensions, printed texts, and what it refuses."""

from __future__ import annotations

import json
import random
import subprocess
import sys
import time
import tracemalloc
from fractions import Fraction

import pytest

from calcpack.job.errors import CalcpackError
from calcpack.record.auditing.formulas import ARGUMENTS, Budget, evaluate, measured, read_formula
from calcpack.record.auditing.lines import work_lines
from calcpack.record.auditing.printed import (
    read_printed,
    rounded_to,
    rounding_fault,
    rounds_to,
    twelve_digits,
)
from calcpack.record.auditing.reading import read_json, read_record
from calcpack.record.auditing.units import printed_unit, unit


def num(text):
    return {"number": text}


def op(name, *args, **more):
    return {"op": name, "args": list(args), **more}


def kn(text):
    return {"quantity": text, "unit": "kN"}


WORKED = [
    (op("add", kn("2"), kn("3")), 5, (1, 0)),
    (op("sub", kn("2"), kn("3")), -1, (1, 0)),
    (op("mul", kn("2"), {"quantity": "250", "unit": "mm"}), 0.5, (1, 1)),
    (op("div", kn("2"), {"measured": "4", "unit": "m"}), 0.5, (1, -1)),
    (op("pow", {"quantity": "3", "unit": "m"}, num("2")), 9, (0, 2)),
    (op("pow", {"quantity": "4", "unit": "MPa"}, op("div", num("1"), num("2"))), 4000**0.5, None),
    (op("neg", kn("2")), -2, (1, 0)),
    (op("abs", op("neg", kn("2"))), 2, (1, 0)),
    (op("sqrt", {"quantity": "9", "unit": "m^2"}), 3, (0, 1)),
    (op("sum", kn("1"), kn("2"), kn("4")), 7, (1, 0)),
    (op("min", kn("1"), kn("-2".strip("-"))), 1, (1, 0)),
    (op("max", kn("1"), kn("2"), num("0")), 2, (1, 0)),
    (op("sin", {"quantity": "30", "unit": "deg"}), 0.5, (0, 0)),
    (op("cos", {"quantity": "60", "unit": "deg"}), 0.5, (0, 0)),
    (op("tan", {"quantity": "45", "unit": "deg"}), 1, (0, 0)),
    (op("atan", num("1")), 0.7853981633974483, (0, 0)),
    (op("log", num("10")), 2.302585092994046, (0, 0)),
    (op("exp", num("1")), 2.718281828459045, (0, 0)),
    (op("pi"), 3.141592653589793, (0, 0)),
    (op("choose", op("le", kn("1"), kn("2")), kn("5"), kn("7")), 5, (1, 0)),
    (op("choose", op("gt", kn("1"), kn("2")), kn("5"), kn("7")), 7, (1, 0)),
    (op("number_in", {"quantity": "30", "unit": "MPa"}, unit="MPa"), 30, (0, 0)),
    (op("in_unit", num("3"), unit="MPa"), 3000, (1, -2)),
    (op("eq", kn("1"), kn("1.0000000001")), 1, (0, 0)),
    (op("lt", kn("1"), kn("1.0000000001")), 0, (0, 0)),
    (op("ge", kn("1"), kn("1.0000000001")), 1, (0, 0)),
]


def test_every_operation_is_worked_out_by_hand():
    named = {name for tree, _, _ in WORKED for name in json.dumps(tree).split('"') if name in ARGUMENTS}
    assert named == set(ARGUMENTS)


@pytest.mark.parametrize(("tree", "size", "dimension"), WORKED)
def test_an_operation(tree, size, dimension):
    value = evaluate(read_formula(tree), {})
    assert float(value.size) == pytest.approx(size, rel=1e-14)
    assert dimension is None or value.dimension == dimension


@pytest.mark.parametrize(
    ("tree", "says"),
    [
        (op("add", kn("2"), num("3")), "a force and a plain number do not go together in 'add'"),
        (op("div", kn("2"), num("0")), "a division by zero"),
        (op("sqrt", op("neg", kn("2"))), "a root of a negative number"),
        (op("log", num("0")), "a logarithm of what is not above zero"),
        (op("sin", kn("1")), "'sin' works on a plain number, not a force"),
        (op("pow", kn("2"), op("sqrt", num("2"))), "a force is raised to something else than a small number"),
        (op("number_in", kn("1"), unit="m"), "a force has no number in m"),
        ({"quantity": "1", "unit": "stone"}, "there is no unit 'stone'"),
    ],
)
def test_what_does_not_go_together_is_said(tree, says):
    with pytest.raises(ValueError, match=says.replace("(", r"\(")):
        evaluate(read_formula(tree), {})


def nested(depth):
    tree = num("1")
    for _ in range(depth):
        tree = op("neg", tree)
    return tree


@pytest.mark.parametrize(
    ("tree", "says"),
    [
        (op("eval", num("1")), "no operation 'eval'"),
        (op("__import__"), "no operation"),
        (op("add", num("1")), "does not work on 1 arguments"),
        (op("add", num("1"), op("le", num("1"), num("2"))), "a comparison where none can be"),
        (op("choose", num("1"), num("1"), num("2")), "lacks one"),
        ({"number": "1e9"}, "is not a number"),
        ({"number": 5}, "no text where one should be"),
        ({"symbol": "x", "number": "1"}, "no operation"),
        ([], "none of number"),
        (nested(70), "at most 60 deep"),
        (op("sum", *[op("sum", *[num("1")] * 100)] * 15), "at most 1000 parts"),
        (op("pow", num("10"), num("1000")), "an exponent beyond 100"),
        (op("pow", num("9" * 39), num("90")), "beyond all bounds"),
        (op("exp", num("99999")), "beyond all bounds"),
    ],
)
def test_anything_else_is_refused(tree, says):
    with pytest.raises(CalcpackError, match=says):
        evaluate(read_formula(tree, Budget()), {})


def line(no, tree, **more):
    made = {
        "no": no, "kind": "hence", "symbol": "x", "says": "", "expression": tree, "inputs": {},
        "value": 1.0, "unit": "1", "shown": "1.000", "cite": "",
    }  # fmt: skip
    return made | more


def record_of(lines):
    data = {
        "format": 1, "job": {}, "mark": "B1", "revision": "A",
        "template": {"name": "", "version": "", "sha256": ""}, "lines": lines, "results": {},
    }  # fmt: skip
    return json.dumps(data).encode()


HOSTILE = {
    "deep JSON": lambda: b"[" * 1_900_000,
    "many objects": lambda: b"[" + b"{}," * 600_000 + b"{}]",
    "large": lambda: b" " * 3_000_000,
    "not a number": lambda: b'{"format": NaN}',
    "infinite": lambda: b'{"format": 1e999}',
    "long digits": lambda: b'{"format": ' + b"9" * 1_000_000 + b"}",
    "deep formula": lambda: record_of([line("1.01", nested(400))]),
    "many parts": lambda: record_of(
        [line(f"{i}.01", op("sum", *[op("exp", num("3"))] * 190)) for i in range(1, 300)]
    ),
    "tower of powers": lambda: record_of(
        [line("1.01", op("pow", num("9"), op("pow", num("9"), op("pow", num("9"), num("9")))))]
    ),
    "exp of exp": lambda: record_of([line("1.01", op("exp", op("exp", op("exp", num("9")))))]),
    "many lines": lambda: record_of([line("1.01", num("1"))] * 9_000),
    "unknown operation": lambda: record_of([line("1.01", op("system", {"symbol": "rm"}))]),
    "wrong kinds": lambda: record_of([{"no": 5}]),
}


@pytest.mark.parametrize("kind", HOSTILE)
def test_a_hostile_record_ends_in_a_clear_error_soon(kind, allowed):
    content = HOSTILE[kind]()
    tracemalloc.start()
    began = time.process_time()
    with pytest.raises(CalcpackError) as error:
        work_lines(read_record(content, "B1.json"))
    spent, (_, peak) = time.process_time() - began, tracemalloc.get_traced_memory()
    tracemalloc.stop()
    assert "B1.json" in str(error.value)
    assert spent < allowed(8.0)  # tracing makes it some four times slower than the two seconds it may take
    assert peak < 200e6


def test_a_record_that_costs_as_much_as_may_be_is_done_in_two_seconds(allowed):
    lines = [line(f"{i}.01", op("sum", *[op("atan", num("3"))] * 98)) for i in range(1, 150)]
    content = record_of(lines)
    began = time.process_time()
    worked = work_lines(read_record(content, "B1.json"))
    assert time.process_time() - began < allowed(2.0)
    assert len(worked) == 149


def test_keys_that_stand_twice_are_refused():
    with pytest.raises(CalcpackError, match="stands twice"):
        read_json(b'{"a": 1, "a": 1}', "x.json")


@pytest.mark.parametrize(
    ("value", "of", "text", "right"),
    [
        (0.125, "kN", "0.13 kN", True),  # a half away from zero
        (-0.125, "kN", "−0.13 kN", True),
        (0.125, "kN", "0.12 kN", False),
        (2.675, "m", "2.68 m", True),  # binary 2.67499...: twelve digits say 2.675
        (23.749999999999996, "kN/m", "23.8 kN/m", True),
        (4.2672, "m", "14.00 ft", True),
        (4.2672, "m", "14.01 ft", False),
        (8.356e7, "mm^4", "83.56 × 10⁶ mm⁴", True),
        (8.356e7, "mm^4", "83.56 × 10⁵ mm⁴", False),
        (1e-15, "kN", "0.0 kN", True),
        (1.0, "1", "1.000", True),
        (0.5, "deg", "0.5°", True),
        (47.88025898, "kPa", "1000 psf", True),
    ],
)
def test_printed_texts(value, of, text, right):
    assert (rounding_fault(value, unit(of), text) == "") is right


def test_units_are_exact_where_they_are_by_definition():
    assert float(unit("kip*ft").size) == pytest.approx(1.3558179483314004, rel=1e-15)
    assert unit("psi").size * 144 == unit("psf").size * 144 * 144
    assert printed_unit("kip/ft²").dimension == (1, -2)
    said = read_printed("−1.20 × 10⁻³ m")
    assert said.number * said.unit.size == -unit("mm").size * 12 / 10
    for wrong in ("", "kN**m", "kN/", "*m", "m^", "kN m", "1/1", "q", "x" * 50):
        with pytest.raises(ValueError, match="there is no unit"):
            unit(wrong)


def test_sixteen_digits_settle_only_what_exact_rounding_says_too():
    """Decimals about the halves of a last digit, where the two could part; elsewhere they would agree anyway."""
    chance, settled = random.Random(31), 0
    for _ in range(4000):
        step = Fraction(10) ** chance.randint(-6, 6)
        half = step * (2 * chance.randint(0, 10 ** chance.randint(1, 6)) + 1) / 2
        value = float(half * (1 + Fraction(chance.choice([-1, 0, 1]), 10 ** chance.randint(5, 17))))
        exact = rounded_to(twelve_digits(value), step)
        for number in (exact - step, exact, exact + step):
            sure = rounds_to(value, float(number), float(step))
            assert sure in (None, number == exact), (value, number, step)
            settled += sure is not None
    assert 6000 < settled < 12000  # neither everything nor nothing


def test_measured_takes_a_number_in_its_unit():
    assert float(measured("250", "mm").size) == 0.25


def test_the_audit_shares_no_arithmetic_with_what_it_audits():
    """Nothing of the sheet, of its analysis or of its equivalents is even loaded."""
    modules = [
        "copies", "demands", "envelopes", "files", "lines", "origins", "pages", "plane", "properties",
        "provenance", "results", "sources", "spans", "together", "inputs",
    ]  # fmt: skip
    code = "import sys\n" + "".join(f"import calcpack.record.auditing.{each}\n" for each in modules)
    code += "print(*(name for name in sys.modules if name.startswith('calcpack.')))"
    loaded = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout
    layers = {name.split(".")[1] for name in loaded.split()}
    assert layers <= {"job", "files", "processes", "record"}
    assert "calcpack.job.units" not in loaded.split()
