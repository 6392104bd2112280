"""Formulas keep their meaning through both converters: to MathML, and over pandoc to Typst."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path
from random import Random

import pypandoc
import pytest
import typst
from formulas import LINES, SYMBOLS, mathml_value, random_formula
from math_core import LatexToMathML

from calcpack.job.errors import CalcpackError
from calcpack.sheet import (
    PI,
    Reference,
    choose,
    equal,
    greatest,
    in_unit,
    least,
    measured,
    number,
    number_in,
    parse_shown,
    quantity,
    show,
    sqrt,
    total,
)
from calcpack.sheet.evaluation import Measured, evaluate, in_base
from calcpack.sheet.expression import Expression
from calcpack.sheet.latex import numbers_row, result, symbol_latex, symbols_row
from calcpack.sheet.unit_text import label, unit_latex


@dataclass(frozen=True)
class Printed:
    value: float
    unit: str
    shown: str


def printed(value: float, unit: str = "1", exact: bool = True) -> Printed:
    return Printed(value, unit, show(value, unit, "SI", exact))


def on_screen(formulas: list[str]) -> list[str]:
    converter = LatexToMathML()
    return [converter.convert_with_local_state(latex, displaystyle=True) for latex in formulas]


def on_paper(formulas: list[str], folder: Path) -> list[str]:
    """The formulas as Typst sets them, read off its own MathML."""
    document = "\n\n".join(f"$${latex}$$" for latex in formulas)
    source = pypandoc.convert_text(document, "typst", format="latex", extra_args=["--wrap=none"])
    path = folder / "formulas.typ"
    path.write_text(source, encoding="utf-8")
    html = typst.compile(str(path), format="html").decode()
    found = re.findall(r"<math.*?</math>", html, flags=re.DOTALL)
    assert len(found) == len(formulas)
    return found


# What each symbol, unit and constant says in MathML, and what it is worth.
PARTS = {
    "a": 1.75, "b_1": 2.5, "w_eq": 0.8, "f'_c": 3.25, "gamma_G,sup": 1.35, "lambdabar_LT": 0.55, "DL": 4.0,
}  # fmt: skip
PHI, NOMINAL = 0.9, 1.5
VALUES = PARTS | {"phi M_n": PHI * NOMINAL}
SEEN = {
    "a": 1.75, "b_1": 2.5, "w_eq": 0.8, "f′_c": 3.25, "γ_G,sup": 1.35, "λ¯_LT": 0.55, "DL": 4.0,
    "φ": PHI, "ϕ": PHI, "M_n": NOMINAL, "π": math.pi,
}  # fmt: skip


@lru_cache(maxsize=1)
def random_formulas() -> list[tuple[Expression, float]]:
    """Formulas that have a value of ordinary size."""
    random = Random(20261201)
    known = {LINES[symbol]: Measured(VALUES[symbol]) for symbol in SYMBOLS}
    found: list[tuple[Expression, float]] = []
    while len(found) < 250:
        formula = random_formula(random)
        try:
            value = evaluate(formula, known).value
        except CalcpackError:
            continue
        if 1e-6 < abs(value) < 1e9:
            found.append((formula, value))
    return found


def test_symbols_mean_the_same_on_screen() -> None:
    formulas = random_formulas()
    for (formula, value), mathml in zip(
        formulas, on_screen([" ".join(symbols_row(formula)) for formula, _ in formulas]), strict=True
    ):
        assert mathml_value(mathml, SEEN) == pytest.approx(value, rel=1e-9), " ".join(symbols_row(formula))


def test_symbols_mean_the_same_on_paper(tmp_path: Path) -> None:
    formulas = random_formulas()
    rows = [" ".join(symbols_row(formula)) for formula, _ in formulas]
    for (_, value), row, mathml in zip(formulas, rows, on_paper(rows, tmp_path), strict=True):
        assert mathml_value(mathml, SEEN) == pytest.approx(value, rel=1e-9), row


def test_numbers_mean_the_same(tmp_path: Path) -> None:
    """Negative numbers, powers of ten and units included."""
    random = Random(7)
    worth = {"a": -1.75, "b_1": 2.5, "w_eq": 8356000.0, "f'_c": -0.25, "gamma_G,sup": 1.35}
    worth |= {"lambdabar_LT": 0.00005, "DL": 4.0, "phi M_n": 2.5}
    known = {LINES[symbol]: printed(value) for symbol, value in worth.items()}
    sizes = {no: Measured(line.value) for no, line in known.items()}
    rows, values = [], []
    while len(rows) < 150:
        formula = random_formula(random, 4)
        try:
            value = evaluate(formula, sizes).value
        except CalcpackError:
            continue
        if 1e-9 < abs(value) < 1e15:
            rows.append(" ".join(numbers_row(formula, known)))
            values.append(value)
    screens, papers = on_screen(rows), on_paper(rows, tmp_path)
    for row, value, screen, paper in zip(rows, values, screens, papers, strict=True):
        assert mathml_value(screen, SEEN) == pytest.approx(value, rel=1e-9), row
        assert mathml_value(paper, SEEN) == pytest.approx(value, rel=1e-9), row


def test_numbers_with_units_mean_the_same(tmp_path: Path) -> None:
    random = Random(11)
    units = ("kN", "mm", "m", "kN/m", "kPa", "kN*m", "MPa", "1")
    known = {
        LINES[symbol]: printed(VALUES[symbol], unit) for symbol, unit in zip(SYMBOLS, units, strict=True)
    }
    sizes = {no: in_base(line.value, line.unit) for no, line in known.items()}
    worth = {label(unit): in_base(1.0, unit).value for unit in (*units, "kN/m^3") if unit != "1"}
    worth |= {"kN/m3": 1.0}  # a raised digit, normalised
    rows, values = [], []
    while len(rows) < 100:
        formula = random_formula(random, 4, products_only=True)
        value = evaluate(formula, sizes).value
        if 1e-12 < abs(value) < 1e15:
            rows.append(" ".join(numbers_row(formula, known)))
            values.append(value)
    screens, papers = on_screen(rows), on_paper(rows, tmp_path)
    for row, value, screen, paper in zip(rows, values, screens, papers, strict=True):
        assert mathml_value(screen, worth) == pytest.approx(value, rel=1e-9), row
        assert mathml_value(paper, worth) == pytest.approx(value, rel=1e-9), row


q, S, m = Reference("q", "3.01"), Reference("S", "1.02"), Reference("m", "3.04")
M, f = Reference("M_u", "5.01"), Reference("f'_c", "1.05")
b, d = Reference("b", "1.06"), Reference("d", "1.07")
V = Reference("V_c", "5.02")
GIVEN = {
    "3.01": printed(5.5, "kPa"),
    "1.02": printed(4.5, "m"),
    "3.04": printed(0.75),
    "5.01": printed(-54.0, "kN*m", exact=False),
    "1.05": printed(30.0, "MPa"),
    "1.06": printed(300.0, "mm"),
    "1.07": printed(510.0, "mm"),
    "5.02": printed(61.3, "kN"),
}


@pytest.mark.parametrize(
    ("formula", "symbols", "numbers"),
    [
        (
            q * S / 2 * (3 - m**2) / 3,
            [r"\frac{q\,S}{2}", r"\cdot \frac{3 - m^{2}}{3}"],
            [r"\frac{5.50\,\text{kPa} \cdot 4.50\,\text{m}}{2}", r"\cdot \frac{3 - 0.75^{2}}{3}"],
        ),
        (q + S - m, ["q", "+ S", "- m"], [r"5.50\,\text{kPa}", r"+ 4.50\,\text{m}", "- 0.75"]),
        (S**2, ["S^{2}"], [r"\left(4.50\,\text{m}\right)^{2}"]),
        (f**2, [r"\left(f'_{\text{c}}\right)^{2}"], [r"\left(30.0\,\text{MPa}\right)^{2}"]),
        (
            q - M,
            ["q", r"- M_{\text{u}}"],
            [r"5.50\,\text{kPa}", r"- \left(-54.0\,\text{kN·m}\right)"],
        ),
        (S / (m / 2), [r"\frac{S}{m/2}"], [r"\frac{4.50\,\text{m}}{0.75/2}"]),
        (
            q * S**2 / 8 + M,
            [r"\frac{q\,S^{2}}{8}", r"+ M_{\text{u}}"],
            [
                r"\frac{5.50\,\text{kPa} \cdot \left(4.50\,\text{m}\right)^{2}}{8}",
                r"+ \left(-54.0\,\text{kN·m}\right)",
            ],
        ),
        (
            in_unit(0.17 * sqrt(number_in(f, "MPa")), "MPa") * b * d,
            [r"0.17\,\sqrt{f'_{\text{c}}}\,b\,d"],
            [
                r"0.17 \cdot \sqrt{30.0}\,\text{MPa}",
                r"\cdot 300\,\text{mm}",
                r"\cdot 510\,\text{mm}",
            ],
        ),
        (
            V <= 0.75 * V,
            [r"V_{\text{c}}", r"\le 0.75\,V_{\text{c}}"],
            [r"61.3\,\text{kN}", r"\le 0.75", r"\cdot 61.3\,\text{kN}"],
        ),
        (equal(m, 1), ["m", "= 1"], ["0.75", "= 1"]),
        (total(q, q), ["q", "+ q"], [r"5.50\,\text{kPa}", r"+ 5.50\,\text{kPa}"]),
        (
            choose(f <= quantity(28, "MPa"), 0.85, 0.65) * V,
            [
                r"\left(\begin{cases} 0.85 & \text{if } f'_{\text{c}} \le 28\,\text{MPa} \\ "
                r"0.65 & \text{otherwise} \end{cases}\right)\,V_{\text{c}}"
            ],
            ["0.65", r"\cdot 61.3\,\text{kN}", r"\quad(\text{as }30.0\,\text{MPa} > 28\,\text{MPa})"],
        ),
        (
            number_in(M / (b * d**2), "MPa"),
            [r"\frac{M_{\text{u}}}{b\,d^{2} \cdot 1\,\text{MPa}}"],
            [
                r"\frac{-54.0\,\text{kN·m}}{300\,\text{mm} \cdot \left(510\,\text{mm}\right)^{2} "
                r"\cdot 1\,\text{MPa}}"
            ],
        ),
        (number_in(f, "psi"), [r"f'_{\text{c}}"], ["4351"]),
        (measured(12.3456789, "kN") * m, [r"12.3\,\text{kN}\,m"], [r"12.3\,\text{kN}", r"\cdot 0.75"]),
        (PI**2 * S, [r"\pi^{2}\,S"], [r"\pi^{2}", r"\cdot 4.50\,\text{m}"]),
        (2 * m / number(1) * 3, [r"\frac{2\,m}{1}", r"\cdot 3"], [r"\frac{2 \cdot 0.75}{1}", r"\cdot 3"]),
    ],
)  # fmt: skip
def test_rows(formula: Expression, symbols: list[str], numbers: list[str]) -> None:
    assert symbols_row(formula) == symbols
    assert numbers_row(formula, GIVEN) == numbers


def test_constants_follow_the_sheet_s_system() -> None:
    assert symbols_row(quantity(25, "kN/m^3") * S, "US") == [r"159.147\,\text{pcf}\,S"]


def test_a_wide_choice_of_extremes_can_be_broken() -> None:
    long = S * S * S / (m + m + m)
    wide = least(long, long * long, long * m * long * m)
    row = numbers_row(wide, GIVEN)
    assert len(row) == 3
    assert row[0].startswith(r"\min(")
    assert row[-1].endswith(")")
    assert numbers_row(greatest(S, m), GIVEN) == [r"\max\left(4.50\,\text{m}, 0.75\right)"]


def test_everything_written_is_converted(tmp_path: Path) -> None:
    """Chunks one by one, as exporters set them; bold results; every unit; every symbol."""
    chunks: list[str] = []
    for formula in (
        choose(m < 1, q * S, q / S) + q,
        choose(m >= 1, 2 * q, q) * S,
        least(q * S / 2, q * S**2 / 8),
        abs(q - S) ** 0.5,
        V > 0.75 * V,
    ):
        chunks += symbols_row(formula) + numbers_row(formula, GIVEN)
    for unit in ("kN*m", "kN/m^3", "mm^4", "kip*ft", "psf", "in^2", "1/m", "deg"):
        chunks.append(result(show(-1234567.8, unit, "SI")))
        chunks.append(unit_latex(unit))
    for symbol in ("Delta w", "psi_0", "ell", "xhat_2", "A'_s", "epsilon_cu", "W_pl,y", "X"):
        chunks.append(symbol_latex(symbol))
    chunks = list(dict.fromkeys(chunks))
    for chunk, mathml in zip(chunks, on_screen(chunks), strict=True):
        assert "merror" not in mathml, chunk
    on_paper(chunks, tmp_path)


def test_a_result_stays_text() -> None:
    shown = show(54.0, "kN*m", "SI")
    assert parse_shown(shown)[1] == "kN*m"
    assert "54.0\u00a0kN·m" in on_screen([result(shown)])[0]
    typst_text = pypandoc.convert_text(f"${result(shown)}$", "typst", format="latex")
    assert "54.0\u00a0kN·m" in typst_text


def test_only_what_was_shown_can_be_a_result() -> None:
    with pytest.raises(ValueError, match="not a shown value"):
        result(r"}\input{x}")
