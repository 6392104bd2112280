"""Words on a sheet stay words, whatever a job file put into them."""

from __future__ import annotations

from html.parser import HTMLParser
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcpack.job.errors import CalcpackError
from calcpack.sheet.html import blocks_html, runs_html, text_html
from calcpack.sheet.runs import check_math, check_runs, emphasis, formula, plain_text, strong

HOSTILE = '<script>alert("1")</script> & $x$ \\(y\\) \\[z\\] <img src=x onerror=alert(1)> </div>'


class Seen(HTMLParser):
    """Tags and words, as a browser would find them."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.tags: list[str] = []
        self.words = ""
        self.stretches: list[str] = []
        self.feed(text)
        self.close()

    def handle_starttag(self, tag: str, attrs: Any) -> None:
        self.tags.append(tag)
        self.stretches.append("")

    def handle_endtag(self, tag: str) -> None:
        self.stretches.append("")

    def handle_data(self, data: str) -> None:
        self.words += data
        if self.stretches:
            self.stretches[-1] += data


@given(st.text())
def test_text_is_shown_as_it_is(text: str) -> None:
    seen = Seen(text_html(text))
    assert set(seen.tags) <= {"span"}
    assert seen.words.replace("\r", "") == text.replace("\r", "") or "\x00" in text or "\r" in text
    # no stretch of text holds two dollar signs, or a backslash with anything after it
    assert all(part.count("$") <= 1 and (part == "\\" or "\\" not in part) for part in seen.stretches)


def test_hostile_words_in_every_block() -> None:
    blocks: list[dict[str, Any]] = [
        {"type": "heading", "level": 1, "number": HOSTILE, "text": HOSTILE},
        {"type": "text", "runs": [HOSTILE, strong(HOSTILE), emphasis(HOSTILE)], "role": "unsafe"},
        {"type": "list", "items": [HOSTILE]},
        {
            "type": "line", "no": "1.01", "kind": "require", "says": HOSTILE, "symbol": "w",
            "rows": [["a<b"], ["1"]],
            "cite": HOSTILE, "origin": HOSTILE, "from": [HOSTILE], "passes": False, "alt": HOSTILE,
        },
        {"type": "derivation", "steps": [{"says": HOSTILE, "rows": ["a<b"], "alt": HOSTILE}]},
        {
            "type": "table", "caption": HOSTILE, "columns": [{"head": HOSTILE, "align": "left"}],
            "rows": [[HOSTILE]], "strong_rows": [0],
        },
        {
            "type": "ratios",
            "rows": [
                {"says": HOSTILE, "demand": HOSTILE, "resistance": HOSTILE, "ratio": 1.2, "passes": False}
            ],
        },
        {"type": "figure", "svg": "<svg></svg>", "alt": HOSTILE, "caption": HOSTILE, "width_mm": 10.0},
        {"type": "columns", "widths": [1], "columns": [[{"type": "text", "runs": HOSTILE, "role": "note"}]]},
        {"type": "signoff", "rows": [dict.fromkeys(("role", "name", "licence", "date"), HOSTILE)]},
        {"type": "facts", "rows": [[HOSTILE, HOSTILE]]},
        {"type": "notation", "rows": [["w", HOSTILE, HOSTILE]]},
    ]  # fmt: skip
    for block in blocks:
        seen = Seen(blocks_html([block]))
        drawn = {"img"} if block["type"] == "figure" else set()
        assert {"script", "img"} & set(seen.tags) == drawn, block["type"]
        assert HOSTILE in seen.words, block["type"]


def test_runs() -> None:
    runs = ["of ", formula(r"w_{\text{eq}}"), strong("unsafe"), emphasis("so"), {"line": "3.05"}]
    assert check_runs(runs) == runs
    assert check_runs({"line": "3.05"}) == [{"line": "3.05"}]
    assert check_runs(("a", "b")) == ["a", "b"]
    assert plain_text(check_runs(runs)) == "of w_equnsafeso3.05"
    assert runs_html(runs) == (
        'of <span class="mathjax_process">$w_{\\text{eq}}$</span><strong>unsafe</strong><em>so</em>3.05'
    )


def test_what_cannot_be_printed_is_marked() -> None:
    assert check_runs("a\x00b\ud800") == "a\ufffdb\ufffd"


@pytest.mark.parametrize(
    "runs",
    [
        None, 5, [None], [["a"]], [{"bold": "x"}], [{"strong": "a", "em": "b"}], [{"strong": 5}], [{}],
        [{"line": "x"}], [{"line": "3.05; x"}], [{"math": r"\href{http://x}{y}"}], "x" * 30_000,
    ],
)  # fmt: skip
def test_what_are_no_runs(runs: Any) -> None:
    with pytest.raises(CalcpackError):
        check_runs(runs)


@pytest.mark.parametrize(
    "latex",
    [
        r"\input{x}", r"\write18{x}", r"\def\a{b}", r"\unicode{x}", r"\href{a}{b}", r"\class{a}{b}",
        r"\begin{document}", r"\begin{verbatim}", "a$b", "a%b", "a#b", "{a", "a}", "}{", "\x00",
        r"\style{a}{b}",
        r"\begin {x}", r"\catcode", 5, None, "a" * 30_000,
    ],
)  # fmt: skip
def test_mathematics_that_no_sheet_needs(latex: Any) -> None:
    with pytest.raises(CalcpackError):
        check_math(latex)


def test_mathematics_a_sheet_needs() -> None:
    for latex in (
        r"M(x) = \frac{q_0 x}{6 L}\left(L^2 - x^2\right)",
        r"\begin{cases} a & \text{if } b \le c \\ d & \text{otherwise} \end{cases}",
        r"\int_0^L w\,dx = 0,\quad \{a\}",
    ):
        assert check_math(latex) == latex
