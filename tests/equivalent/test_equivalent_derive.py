"""The derivations: proved step by step, and three roads to one number."""

from __future__ import annotations

import json
import math
import random
import re
import subprocess
import sys
from typing import Any

import math_core
import pypandoc
import pytest
import sympy

from calcpack.equivalent import KINDS, equivalent_factor, equivalents, responses, stretches
from calcpack.equivalent.derive import Derivation, derivation
from calcpack.equivalent.letters import PEAK, PRESSURE, RATIO, RISE, SAME, SHORT, SPAN, X
from calcpack.equivalent.symmetric import half_span, uniform_response
from calcpack.statics import LineLoad, Load, PointLoad

SHAPES = ("uniform", "triangle", "trapezoid", "general")
SYMMETRIC = SHAPES[:3]
EVERY = [(shape, kind) for shape in SHAPES for kind in KINDS]


def derived(shape: str, kind: str, *, panel: bool = True) -> Derivation:
    return derivation(shape, kind, panel=panel)  # type: ignore[arg-type]


# --- what is derived ---------------------------------------------------------------------------------


def test_the_results_in_their_usual_form() -> None:
    """Read off the sheet: as one would write them, in the side ratio."""
    half, third = r"\frac{q S}{2} \left(", r"\right)"
    shown = {kind: derived("trapezoid", kind).latex.removeprefix(r"w_{\mathrm{eq}} = ") for kind in KINDS}
    assert shown == {
        "shear": half + r"1 - \frac{m}{2}" + third,
        "moment": half + r"1 - \frac{m^{2}}{3}" + third,
        "deflection": half + r"1 - \frac{m^{2}}{5}" + third + "^{2}",
        "fixed-end moment": half + r"1 - \frac{m^{2}}{2} + \frac{m^{3}}{8}" + third,
        "total": half + r"1 - \frac{m}{2}" + third,
    }
    short = {kind: derived("triangle", kind).result.rhs / (PRESSURE * SHORT) for kind in KINDS}
    assert [str(short[kind]) for kind in KINDS] == ["1/4", "1/3", "8/25", "5/16", "1/4"]
    assert all(derived("uniform", kind).result.rhs == PEAK for kind in KINDS)


@pytest.mark.parametrize("kind", KINDS)
def test_derived_closed_and_numeric_agree(kind: str) -> None:
    """sympy's result, the closed form, the sums over the actual loads: for any side ratio."""
    rng = random.Random(kind)
    factor = derived("trapezoid", kind).factor
    assert factor is not None
    for _ in range(25):
        m, span, q = rng.uniform(0.01, 1), rng.uniform(1, 12), rng.uniform(0.5, 20)
        short = m * span
        peak = q * short / 2
        loads = [
            LineLoad(0, short / 2, 0, peak),
            LineLoad(short / 2, span - short / 2, peak, peak),
            LineLoad(span - short / 2, span, peak, 0),
        ]
        by_sympy = float(derived("trapezoid", kind).result.rhs.subs({PRESSURE: q, SHORT: short, RATIO: m}))
        assert math.isclose(by_sympy, peak * equivalent_factor(kind, m), rel_tol=1e-12)  # type: ignore[arg-type]
        assert math.isclose(by_sympy, equivalents(span, loads).of(kind), rel_tol=1e-12)  # type: ignore[arg-type]
        assert not math.isclose(by_sympy, peak * equivalent_factor(kind, m * 0.999), rel_tol=1e-12)  # type: ignore[arg-type]
    assert derived("triangle", kind).factor == factor.subs(RATIO, 1)
    assert derived("uniform", kind).factor == factor.subs(RATIO, 0) == 1


@pytest.mark.parametrize("kind", KINDS)
def test_without_the_panel_the_peak_and_the_ratio_remain(kind: str) -> None:
    plain = derived("trapezoid", kind, panel=False)
    assert plain.result.rhs.free_symbols == {PEAK, RATIO}
    assert (
        sympy.expand(
            plain.result.rhs.subs(PEAK, PRESSURE * SHORT / 2) - derived("trapezoid", kind).result.rhs
        )
        == 0
    )
    assert len(plain.steps) == len(derived("trapezoid", kind).steps) - 1
    assert "w_0" in plain.latex
    assert "q" not in plain.latex.replace("eq", "")


# --- the statics behind it ---------------------------------------------------------------------------


@pytest.mark.parametrize("shape", SYMMETRIC)
def test_the_half_span_satisfies_equilibrium_and_bending(shape: str) -> None:
    half = half_span(shape)  # type: ignore[arg-type]
    middle = SPAN / 2
    for piece in half.pieces:
        assert sympy.simplify(sympy.diff(piece.shear, X) + piece.load) == 0
        assert sympy.simplify(sympy.diff(piece.moment, X) - piece.shear) == 0
        assert sympy.simplify(sympy.diff(piece.rotation, X) + piece.moment) == 0
    first, last = half.pieces[0], half.pieces[-1]
    assert first.moment.subs(X, 0) == 0
    assert sympy.simplify(last.rotation.subs(X, middle)) == 0
    assert sympy.simplify(last.shear.subs(X, middle)) == 0
    for before, after in zip(half.pieces, half.pieces[1:], strict=False):
        for name in ("load", "shear", "moment", "rotation"):
            there = [getattr(piece, name).subs(X, before.high) for piece in (before, after)]
            assert sympy.simplify(there[0] - there[1]) == 0, name
    area = sum(sympy.integrate(piece.rotation, (X, piece.low, piece.high)) for piece in half.pieces)
    assert sympy.simplify(area - half.deflection) == 0
    held = sum(sympy.integrate(piece.moment - half.hold, (X, piece.low, piece.high)) for piece in half.pieces)
    assert sympy.simplify(held) == 0


def test_a_uniform_load_does_what_every_table_says() -> None:
    assert [uniform_response(kind).latex for kind in KINDS] == [
        r"\frac{w_{\mathrm{eq}} L}{2}",
        r"\frac{w_{\mathrm{eq}} L^{2}}{8}",
        r"\frac{5 w_{\mathrm{eq}} L^{4}}{384}",
        r"\frac{w_{\mathrm{eq}} L^{2}}{12}",
        r"w_{\mathrm{eq}} L",
    ]


@pytest.mark.parametrize("shape", SYMMETRIC)
@pytest.mark.parametrize("kind", KINDS)
def test_every_equation_shown_is_true(shape: str, kind: str) -> None:
    """Put the solved half span into each equation of each step; both sides must be the same."""
    half = half_span(shape)  # type: ignore[arg-type]
    known: dict[Any, Any] = {
        sympy.Symbol("W"): half.total,
        sympy.Symbol("M_max"): half.moment,
        sympy.Symbol("EIv_max"): half.deflection,
        sympy.Symbol("R", positive=True): half.reaction,
        sympy.Symbol("M_F", positive=True): half.hold,
    }
    for piece in half.pieces:
        tag = f"_{piece.tag}" if piece.tag else ""
        for name, value in (
            ("w", piece.load),
            ("V", piece.shear),
            ("M", piece.moment),
            ("EItheta", piece.rotation),
        ):
            known[sympy.Function(name + tag)(X)] = value
    answer = {"shear": half.reaction, "moment": half.moment, "deflection": half.deflection,
              "fixed-end moment": half.hold, "total": half.total}[kind]  # fmt: skip
    load = answer / uniform_response(kind).value * SAME  # type: ignore[arg-type]
    equations = [equation for one in derived(shape, kind).steps for equation in one.equations]
    assert len(equations) >= 4
    for equation in equations:
        if equation.rhs == 0 and equation.lhs.has(X):
            continue  # the place of zero shear: stated, then solved
        left, right = equation.lhs.subs(known), equation.rhs.subs(known)
        if left == X:
            assert right == half.top
            continue
        panel = {PRESSURE: 2 * PEAK / SHORT, RATIO: 2 * RISE / SPAN}
        difference = (left - right).subs(SAME, load).subs(panel)
        assert sympy.simplify(difference) == 0, equation


# --- the general load --------------------------------------------------------------------------------


def spans_of_loads(seed: int) -> tuple[float, list[Load]]:
    rng = random.Random(seed)
    span = rng.uniform(2, 12)
    cuts = sorted(rng.uniform(0, span) for _ in range(3))
    loads: list[Load] = [
        LineLoad(0, cuts[0], rng.uniform(0, 20), rng.uniform(0, 20)),
        LineLoad(cuts[0], cuts[2], rng.uniform(0, 20), rng.uniform(0, 20)),
        LineLoad(cuts[1], span, rng.uniform(0, 20), 0),
        PointLoad(cuts[1], rng.uniform(0, 50)),
        PointLoad(rng.uniform(0.05, 0.95) * span, rng.uniform(0, 50)),
    ]
    return span, loads


class Worked:
    """The equations of a general derivation, worked out with numbers in the order they are shown."""

    def __init__(self, span: float, loads: list[Load]) -> None:
        self.parts = stretches(span, loads)
        self.count = len(self.parts)
        self.values: dict[Any, Any] = {SPAN: span}
        for number, part in enumerate(self.parts, 1):
            for name, value in (
                ("a", part.start),
                ("b", part.end),
                ("w_1", part.first),
                ("w_2", part.last),
                ("P", part.force),
            ):
                self.values[sympy.IndexedBase(name)[number]] = value
        self.functions: dict[str, Any] = {}
        self.i = sympy.Symbol("i", integer=True, positive=True)
        self.n = sympy.Symbol("n", integer=True, positive=True)

    def at(self, value: Any, number: int | None = None, **more: Any) -> float:
        """A number for an expression, of one stretch or of the whole span."""
        filled = value if number is None else value.xreplace({self.i: sympy.Integer(number)})
        filled = filled.xreplace({self.n: sympy.Integer(self.count)}).doit()
        numbers = {**self.values, **more.get("places", {})}
        return float(filled.xreplace({key: sympy.Float(number) for key, number in numbers.items()}))

    def take(self, equation: Any) -> None:
        left, right = equation.lhs, equation.rhs
        if isinstance(left, sympy.Indexed) and left.indices[0] == self.i:
            for number in range(1, self.count + 1):
                self.values[left.xreplace({self.i: sympy.Integer(number)})] = self.at(right, number)
        elif isinstance(left, sympy.Indexed):  # what the next stretch starts from
            for number in range(1, self.count):
                self.values[left.xreplace({self.i: sympy.Integer(number)})] = self.at(right, number)
        elif left.is_Function:
            self.functions[left.func.__name__] = right
        elif left.is_Symbol and left not in self.values:
            self.values[left] = self.at(right)

    def follow(self, shown: Derivation, skip: tuple[str, ...]) -> None:
        self.values[sympy.IndexedBase("M")[1]] = 0
        for one in shown.steps:
            for equation in one.equations:
                if str(equation.lhs) not in skip and equation.rhs != 0:
                    self.take(equation)


@pytest.mark.parametrize("seed", range(4))
def test_the_general_sums_give_the_numbers_moment(seed: int) -> None:
    span, loads = spans_of_loads(seed)
    worked = Worked(span, loads)
    shown = derivation("general", "moment")
    worked.follow(shown, skip=("t_0", "M_max", "w_eq", "L**2*w_eq/8"))
    for number, part in enumerate(worked.parts, 1):
        assert worked.values[sympy.IndexedBase("V")[number]] == pytest.approx(part.shear, abs=1e-9)
        assert worked.values[sympy.IndexedBase("M")[number]] == pytest.approx(part.moment, abs=1e-9)
    root = next(e.rhs for one in shown.steps for e in one.equations if str(e.lhs) == "t_0")
    t0 = sympy.Symbol("t_0", positive=True)
    along = next(e.rhs for one in shown.steps for e in one.equations if str(e.lhs) == "M_max")
    found = [
        worked.at(along, number, places={t0: worked.at(root, number)})
        for number, part in enumerate(worked.parts, 1)
        if part.shear >= 0 >= part.shear_at(part.length)
    ]
    largest = max([*found, *(part.moment for part in worked.parts)])
    last = shown.result.rhs.subs(sympy.Symbol("M_max"), largest)
    assert worked.at(last) == pytest.approx(equivalents(span, loads).moment, rel=1e-11)


@pytest.mark.parametrize("kind", ["shear", "fixed-end moment", "total"])
@pytest.mark.parametrize("seed", range(3))
def test_the_general_sums_give_the_numbers(kind: str, seed: int) -> None:
    span, loads = spans_of_loads(seed)
    worked = Worked(span, loads)
    shown = derived("general", kind)
    for one in shown.steps[:-1]:
        for equation in one.equations:
            if equation.lhs.is_Add or equation.rhs == 0 or equation.rhs.has(sympy.Symbol("c", positive=True)):
                continue
            worked.take(equation)
    assert worked.at(shown.result.rhs) == pytest.approx(equivalents(span, loads).of(kind), rel=1e-11)  # type: ignore[arg-type]


def test_the_general_deflection_gives_the_numbers() -> None:
    span, loads = spans_of_loads(7)
    worked = Worked(span, loads)
    shown = derivation("general", "deflection")
    start = sympy.Symbol("EItheta_A")
    sums = [e.rhs for one in shown.steps for e in one.equations if e.lhs == start and e.rhs.has(sympy.Sum)]
    for one in shown.steps[:5]:
        for equation in one.equations:
            if equation.rhs != 0:
                worked.take(equation)
        worked.values.setdefault(sympy.IndexedBase("M")[1], 0)
    assert worked.at(sums[0]) == pytest.approx(worked.parts[0].rotation, rel=1e-11)
    t = sympy.Symbol("t", positive=True)
    along = {str(e.lhs.func): e.rhs for one in shown.steps for e in one.equations if e.lhs.is_Function}
    for number, part in enumerate(worked.parts, 1):
        worked.values[sympy.IndexedBase("EItheta")[number]] = part.rotation
        worked.values[sympy.IndexedBase("EIv")[number]] = part.deflection
        worked.values[sympy.IndexedBase("M")[number]] = part.moment
        half = {t: part.length / 2}
        assert worked.at(along["EItheta"], number, places=half) == pytest.approx(
            part.rotation_at(part.length / 2)
        )
        assert worked.at(along["EIv"], number, places=half) == pytest.approx(
            part.deflection_at(part.length / 2)
        )
    largest = responses(span, loads).deflection
    result = shown.result.rhs.subs(sympy.Symbol("EIv_max"), largest)
    assert worked.at(result) == pytest.approx(equivalents(span, loads).deflection, rel=1e-12)


def test_end_moments_of_a_point_load_follow_from_the_rotations() -> None:
    """Compatibility solved again from the equations on the sheet."""
    hold = derivation("general", "fixed-end moment").steps[3]
    turns = derivation("general", "fixed-end moment").steps[2]
    one, other, start, end = hold.equations
    known = {turn.lhs: turn.rhs for turn in turns.equations}
    solved = sympy.solve(
        [equation.lhs - equation.rhs.subs(known) for equation in (one, other)],
        [start.lhs, end.lhs],
        dict=True,
    )[0]
    assert sympy.simplify(solved[start.lhs] - start.rhs) == 0
    assert sympy.simplify(solved[end.lhs] - end.rhs) == 0


# --- how it is shown ---------------------------------------------------------------------------------


@pytest.mark.parametrize(("shape", "kind"), EVERY)
def test_a_derivation_is_plain_data_of_a_page_at_most(shape: str, kind: str) -> None:
    shown = derived(shape, kind)
    block = json.loads(json.dumps(shown.block()))
    assert block["type"] == "derivation"
    assert 3 <= len(block["steps"]) <= 8
    assert sum(len(one["rows"]) for one in block["steps"]) <= 20
    for one in block["steps"]:
        assert one["rows"]
        assert one["alt"].endswith(".")
        sentence = "".join(run if isinstance(run, str) else run["math"] for run in one["says"])
        assert sentence.endswith(".")
        assert sentence[0].isupper()
        assert not re.search(r"[\\{}_^$]", one["alt"]), one["alt"]
    assert shown.latex == block["steps"][-1]["rows"][-1]
    assert shown.latex.startswith(r"w_{\mathrm{eq}} = ")


@pytest.mark.parametrize(("shape", "kind"), EVERY)
def test_no_formula_leads_with_a_minus(shape: str, kind: str) -> None:
    for one in derived(shape, kind).steps:
        for row in one.rows:
            assert not re.search(r"(left[(\[]|= |frac\{)-", row), row


ALLOWED = re.compile(r"frac|sqrt|left|right|int|sum|mathrm|theta|xi|tau|cdot|le|quad|max|,")


def test_the_latex_keeps_to_what_both_converters_know() -> None:
    rows = {row for shape, kind in EVERY for one in derived(shape, kind).steps for row in one.rows}
    words = {
        run["math"]
        for shape, kind in EVERY
        for one in derived(shape, kind).steps
        for run in one.says
        if isinstance(run, dict)
    }
    used = {name for row in rows | words for name in re.findall(r"\\([A-Za-z]+|.)", row)}
    assert all(ALLOWED.fullmatch(name) for name in used)
    every = sorted(rows | words)
    to_mathml = math_core.LatexToMathML()
    for row in every:
        mathml = to_mathml.convert_with_local_state(row, displaystyle=True)
        assert mathml.startswith("<math")
        assert "error" not in mathml.lower()
    typst = pypandoc.convert_text("\n\n".join(f"$${row}$$" for row in every), "typst", format="latex")
    assert typst.count("$ ") >= len(every)
    assert "\\frac" not in typst
    assert "mi(" not in typst


def test_asking_twice_gives_the_same_object_and_fresh_data() -> None:
    one = derived("trapezoid", "moment")
    assert one is derived("trapezoid", "moment")
    block = one.block()
    block["steps"][0]["rows"].append("scribble")
    block["steps"][0]["says"][1]["math"] = "scribble"
    assert "scribble" not in json.dumps(one.block())


def test_a_derivation_is_the_same_in_every_process() -> None:
    """sympy orders some things by hash: two processes with different hashes must write the same bytes."""
    code = (
        "import hashlib, json\n"
        "from calcpack.equivalent.derive import derivation\n"
        "from calcpack.equivalent import KINDS\n"
        "shapes = ('uniform', 'triangle', 'trapezoid', 'general')\n"
        "every = [derivation(shape, kind).block() for shape in shapes for kind in KINDS]\n"
        "print(hashlib.sha256(json.dumps(every).encode()).hexdigest())\n"
    )
    seen = []
    for seed in ("1", "77"):
        done = subprocess.run(
            [sys.executable, "-c", code],
            env={"PYTHONHASHSEED": seed},
            capture_output=True,
            text=True,
            check=True,
        )
        seen.append(done.stdout.strip())
    assert seen[0] == seen[1]


def test_a_derivation_takes_no_time_again() -> None:
    begun = derivation.cache_info()
    derived("trapezoid", "deflection")
    derived("trapezoid", "deflection")
    ended = derivation.cache_info()
    assert ended.hits + ended.misses == begun.hits + begun.misses + 2
    assert ended.misses <= begun.misses + 1
