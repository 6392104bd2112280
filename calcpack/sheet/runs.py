r"""Words on a sheet: plain strings with mathematics, emphasis and links to lines among them.

Runs are a string, or a list of strings and of ``{"math": latex}``, ``{"strong": str}``, ``{"em": str}``,
``{"line": "3.05"}``. Strings are data and are escaped wherever they are printed. Mathematics is the
author's: it may hold the commands listed here and nothing else.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from typing import Any

from calcpack.job.errors import CalcpackError

Run = str | dict[str, str]
Checked = str | Sequence[Run]  # as they stand in a block
Runs = Checked | dict[str, str]  # as an author may give them

_KINDS = ("math", "strong", "em", "line")
_LINE = re.compile(r"[0-9]{1,3}\.[0-9]{2,3}")
_LONGEST = 20_000

_COMMAND_LIST = (
    "frac dfrac tfrac sqrt left right cdot times div pm le ge ne lt gt approx leq geq neq equiv text "
    "textbf mathrm mathbf mathit mathsf quad qquad bar hat tilde dot ddot vec overline underline "
    "circ prime partial infty int sum prod lim min max sin cos tan cot arcsin arccos arctan ln log "
    "exp ldots cdots dots ell to rightarrow Rightarrow Leftrightarrow begin end displaystyle alpha "
    "beta gamma delta epsilon varepsilon zeta eta theta vartheta iota kappa lambda mu nu xi pi rho "
    "sigma tau upsilon phi varphi chi psi omega Gamma Delta Theta Lambda Xi Pi Sigma Upsilon Phi Psi "
    "Omega big Big bigl bigr Bigl Bigr langle rangle lvert rvert vert lfloor rfloor lceil rceil "
    "operatorname boldsymbol limits mid colon "
)
_COMMANDS = frozenset(_COMMAND_LIST.split())
_ENVIRONMENTS = frozenset({"cases", "aligned", "matrix", "pmatrix"})
_TOKEN = re.compile(r"\\([A-Za-z]+|.|\Z)", re.DOTALL)
_SPACING = frozenset(" ,:;!\\{}|%&_#$")


def check_math(latex: object) -> str:
    r"""Mathematics as it may stand on a sheet.

    Raises
    ------
    CalcpackError
        A command that is not listed, unbalanced braces, or a dollar sign.

    Examples
    --------
    >>> check_math(r"w_{\text{eq}}")
    'w_{\\text{eq}}'
    >>> check_math(r"\input{file}")
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: the formula '\input{file}' has the command '\input'; no sheet needs it
    """
    if not isinstance(latex, str) or len(latex) > _LONGEST:
        raise CalcpackError("a formula is a text of ordinary length")
    shown = latex if len(latex) <= 60 else latex[:57] + "..."
    for match in _TOKEN.finditer(latex):
        name = match[1]
        if name not in _COMMANDS and name not in _SPACING:
            message = f"the formula '{shown}' has the command '\\{name}'"
            raise CalcpackError(message, remedy="no sheet needs it")
    for name in re.findall(r"\\(?:begin|end)\b(?:\{([a-z]*)\})?", latex):
        if name not in _ENVIRONMENTS:
            raise CalcpackError(f"the formula '{shown}' has an environment that no sheet needs")
    bare = _TOKEN.sub("", latex)
    if re.search(r"[$%#\x00-\x08\x0b-\x1f\x7f]", bare):
        raise CalcpackError(f"the formula '{shown}' has a character that no formula needs")
    depth = 0
    for letter in bare:
        depth += (letter == "{") - (letter == "}")
        if depth < 0:
            break
    if depth:
        raise CalcpackError(f"the braces of the formula '{shown}' do not match")
    return latex


def formula(latex: str) -> dict[str, str]:
    """Mathematics among words."""
    return {"math": check_math(latex)}


def strong(text: str) -> dict[str, str]:
    """Words that must not be overlooked."""
    return {"strong": text}


def emphasis(text: str) -> dict[str, str]:
    """Words set apart."""
    return {"em": text}


def check_runs(runs: object) -> str | list[Run]:
    """Runs as they go into a block, or an error that says what is wrong with them.

    Examples
    --------
    >>> check_runs(["as ", {"line": "3.05"}])
    ['as ', {'line': '3.05'}]
    >>> check_runs([{"bold": "x"}])
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: {'bold': 'x'} is not a run of text; use one of math, strong, em, line
    """
    if isinstance(runs, str):
        return _text(runs)
    if isinstance(runs, dict) or not isinstance(runs, Sequence):
        runs = [runs]
    checked: list[Run] = []
    for run in runs:
        if isinstance(run, str):
            checked.append(_text(run))
            continue
        if not isinstance(run, dict) or len(run) != 1 or not set(run) <= set(_KINDS):
            raise CalcpackError(
                f"{run!r:.60} is not a run of text", remedy="use one of math, strong, em, line"
            )
        ((kind, value),) = run.items()
        if kind == "math":
            check_math(value)
        elif kind == "line" and not (isinstance(value, str) and _LINE.fullmatch(value)):
            raise CalcpackError(f"{value!r:.60} is not the number of a line")
        checked.append({kind: _text(value)})
    return checked


def _text(value: Any) -> str:
    if not isinstance(value, str):
        raise CalcpackError(f"{value!r:.60} is not a text")
    if len(value) > _LONGEST:
        raise CalcpackError(f"'{value[:40]}...' is too long for a sheet")
    # Control characters, and a lone half of a surrogate pair, cannot be printed or stored.
    return re.sub("[\x00-\x08\x0b-\x1f\x7f\ud800-\udfff]", "\ufffd", value)


_WORDS = {
    "cdot": "·", "times": "×", "le": "≤", "ge": "≥", "leq": "≤", "geq": "≥", "ne": "≠", "lt": "<", "gt": ">",
    "approx": "≈", "frac": "", "left": "", "right": "", "text": "", "textbf": "", "mathrm": "", "quad": " ",
    "varepsilon": "epsilon", "displaystyle": "",
}  # fmt: skip


def _plain_math(latex: str) -> str:
    text = re.sub(r"\\frac\{([^{}]*)\}\{([^{}]*)\}", r"(\1)/(\2)", latex)
    text = _TOKEN.sub(lambda token: _WORDS.get(token[1], token[1] if token[1].isalpha() else " "), text)
    return " ".join(re.sub(r"[{}]", "", text).split())


def plain_text(runs: Checked) -> str:
    r"""Runs as plain words, for the record and for names.

    Examples
    --------
    >>> plain_text(["Load ", {"math": r"w_{\text{eq}}"}, ", see ", {"line": "3.05"}])
    'Load w_eq, see 3.05'
    """
    if isinstance(runs, str):
        return runs
    texts = []
    for run in runs:
        if isinstance(run, str):
            texts.append(run)
        else:
            ((kind, value),) = run.items()
            texts.append(_plain_math(value) if kind == "math" else value)
    return "".join(texts)
