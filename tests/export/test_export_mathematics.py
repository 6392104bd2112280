"""Formulas in three tongues, and formulas that are none."""

from __future__ import annotations

from unittest import mock

import pypandoc
import pytest

from calcpack.export.mathematics import Mathematics, _checked


@pytest.fixture(scope="module")
def mathematics():
    known = Mathematics()
    known.learn([])
    return known


@pytest.mark.parametrize(
    ("latex", "typst", "spoken"),
    [
        (r"\frac{q\,S}{2}", "frac(q thin S, 2)", "q S over 2"),
        (r"\cdot \frac{3 - m^{2}}{3}", "dot.op frac(3 - m^2, 3)", "· (3 − m squared) over 3"),
        (r"w_{\text{eq}}", 'w_(upright("eq"))', "w eq"),
        (r"w_{\mathrm{eq}}", 'w_(upright("eq"))', "w eq"),
        (r"\textbf{54.0 kN·m}", 'strongwords("54.0 kN·m")', "54.0 kN·m"),
        (r"\sqrt{a + b}", "sqrt(a + b)", "square root of (a + b)"),
        (r"a\;b", "a med b", "a b"),
        (r"\text{#panic() }", 'upright("#panic() ")', None),
    ],
)
def test_forms(mathematics, latex, typst, spoken):
    formula = mathematics[latex]
    assert formula.typst == typst
    if spoken is not None:
        assert formula.spoken == spoken
        assert formula.mathml.startswith("<m")


@pytest.mark.parametrize(
    "latex",
    [r"\input{/etc/passwd}", r"\frac{", "$ a $", r"\href{http://x.test}{a}", "#panic()", "a\n\nb $c$", ""],
)
def test_what_no_converter_understands_stays_as_it_is_written(mathematics, latex):
    formula = mathematics[latex]
    assert formula.typst == ""
    assert formula.latex == latex


@pytest.mark.parametrize(
    "text",
    [
        "$ #panic() $",
        "$ #scale(x: 120%, y: 120%)[#panic()] $",
        "$ std.panic() $",
        '$ eval("1") $',
        "$ a // b $",
        "$ a /* b $",
        "$ a $ #panic() $ b $",
        "$ `a` $",
        "$ @a $",
        '$ "a $',
        "a",
    ],
)
def test_nothing_but_mathematics_is_handed_on(text):
    assert _checked(text) == ""


def test_allowed_pieces():
    assert _checked(r"$ #scale(x: 120%, y: 120%)[\(] a_1^2 / b lt.eq \# $") != ""


def test_html_cannot_leave_a_formula(mathematics):
    assert "<script" not in mathematics[r"\text{<script>alert(1)</script>}"].mathml
    for formula in (r"\class{a}{b}", r"\style{color:red}{b}", r"\text{\href{x}{y}}", r"\textcolor{red}{a}"):
        assert "style" not in mathematics[formula].mathml
        assert "href=" not in mathematics[formula].mathml


def test_one_pandoc_call_for_all_and_none_for_those_known():
    known = Mathematics()
    with mock.patch.object(pypandoc, "convert_text", wraps=pypandoc.convert_text) as pandoc:
        known.learn([f"a_{{{number}}}" for number in range(200)])
        known.learn(["a_{3}", "a_{7}"])
        assert known["a_{11}"].typst == "a_11"
    assert pandoc.call_count == 1


def test_a_formula_cannot_pass_for_another():
    known = Mathematics()
    formulas = ["a", r"\text{formula2formula}", "b\n\nformula0formula\n\n$ c $", "d"]
    known.learn(formulas)
    assert [known[formula].typst for formula in formulas] == ["a", 'upright("formula2formula")', "", "d"]


def test_an_operator_that_leads_a_chunk_keeps_its_room(mathematics):
    assert '<mo form="infix">+</mo>' in mathematics["+ b"].mathml
    assert 'form="infix"' not in mathematics["a + b"].mathml
