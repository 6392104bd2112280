"""Symbols of formulas: written plainly (``w_eq``, ``f'_c``, ``gamma_G,sup``), set for paper, said aloud.

A symbol is a letter, a Greek name or a short word; then perhaps ``bar`` or ``hat``, primes, and after an
underscore its index of letters and digits, with commas between parts. Two or three of them with spaces
between, ``Delta w`` or ``phi M_n``, stand for one quantity. Nothing else is let through, so that a symbol
can never carry anything into a formula.
"""

from __future__ import annotations

import re
from functools import lru_cache
from typing import NamedTuple

from calcpack.job.errors import CalcpackError

_GREEK = {
    "alpha": "α", "beta": "β", "gamma": "γ", "delta": "δ", "epsilon": "ε", "zeta": "ζ", "eta": "η",
    "theta": "θ", "kappa": "κ", "lambda": "λ", "mu": "μ", "nu": "ν", "xi": "ξ", "pi": "π", "rho": "ρ",
    "sigma": "σ", "tau": "τ", "phi": "φ", "chi": "χ", "psi": "ψ", "omega": "ω",
    "Gamma": "Γ", "Delta": "Δ", "Theta": "Θ", "Lambda": "Λ", "Xi": "Ξ", "Pi": "Π", "Sigma": "Σ",
    "Phi": "Φ", "Psi": "Ψ", "Omega": "Ω",
}  # fmt: skip
_NAMES = {letter: name for name, letter in _GREEK.items()} | {
    "µ": "mu",
    "ϕ": "phi",
    "ɛ": "epsilon",
    "ℓ": "ell",
}
_COMMANDS = {name: "\\" + name for name in _GREEK} | {"epsilon": r"\varepsilon", "ell": r"\ell"}
_ACCENTS = ("bar", "hat")
_LONGEST = 40
_ONE = re.compile(
    r"(?P<base>[A-Za-z]{1,12})(?P<primes>'{0,2})"
    r"(?:_(?P<index>[A-Za-z0-9]{1,12}(?:,[A-Za-z0-9]{1,12}){0,3}))?"
)


class Symbol(NamedTuple):
    """A symbol taken apart."""

    name: str  # in plain letters, Greek by name
    latex: str
    spoken: str
    base: str  # the name without its index
    indices: tuple[str, ...]
    simple: bool  # an exponent can stand on it as it is


def _part(text: str, whole: str) -> Symbol:
    match = _ONE.fullmatch(text)
    if not match:
        raise CalcpackError(
            f"'{whole[:_LONGEST]}' is not a symbol",
            remedy="write it like w_eq, f'_c or gamma_G,sup",
        )
    base, primes = match["base"], match["primes"]
    stem, accent = base, ""
    for each in _ACCENTS:
        bare = base.removesuffix(each)
        if bare != base and (len(bare) == 1 or bare in _COMMANDS):
            stem, accent = bare, each
    latex = _COMMANDS.get(stem) or (stem if len(stem) == 1 else rf"\text{{{stem}}}")
    if accent:
        latex = rf"\{accent}{{{latex}}}"
    words = [stem, accent, *(["prime"] * len(primes))]
    latex += primes
    index = tuple(match["index"].split(",")) if match["index"] else ()
    if index:
        latex += rf"_{{\text{{{','.join(_GREEK.get(each, each) for each in index)}}}}}"
        words += index
    return Symbol(text, latex, " ".join(word for word in words if word), base + primes, index, not primes)


@lru_cache(maxsize=2048)
def read_symbol(text: str) -> Symbol:
    r"""A symbol as its author writes it, in plain letters or with Greek ones.

    Raises
    ------
    CalcpackError
        It holds anything but what a symbol is made of.

    Examples
    --------
    >>> print(read_symbol("w_eq").latex, read_symbol("f'_c").latex, read_symbol("γ_G,sup").latex)
    w_{\text{eq}} f'_{\text{c}} \gamma_{\text{G,sup}}
    >>> print(read_symbol("lambdabar_LT").latex, "|", read_symbol("phi M_n").spoken)
    \bar{\lambda}_{\text{LT}} | phi M n
    >>> read_symbol(r"w}\input{x}")
    Traceback (most recent call last):
    calcpack.job.errors.CalcpackError: 'w}\input{x}' is not a symbol; write it like w_eq, f'_c or gamma_G,sup
    """
    plain = "".join(_NAMES.get(letter, letter) for letter in text.replace("\u2032", "'"))
    pieces = plain.split(" ")
    if len(text) > _LONGEST or len(pieces) > 3:
        raise CalcpackError(f"'{text[:_LONGEST]}' is too long for a symbol", remedy="shorten it")
    parts = [_part(piece, text) for piece in pieces]
    if len(parts) == 1:
        return parts[0]
    return Symbol(
        plain,
        r"\,".join(part.latex for part in parts),
        " ".join(part.spoken for part in parts),
        " ".join(part.base for part in parts),
        parts[-1].indices,
        False,
    )


def indexed(symbol: str, index: str | int) -> str:
    """The symbol with one more part in its index.

    Examples
    --------
    >>> indexed("q", 1), indexed("w_eq", "live")
    ('q_1', 'w_eq,live')
    """
    name = f"{symbol},{index}" if read_symbol(symbol).indices else f"{symbol}_{index}"
    return read_symbol(name).name
