"""The letters of the derivations: each with how it is written, spoken and placed in a product."""

from __future__ import annotations

import sympy

from calcpack.equivalent.formula import Value, letter


def _positive(name: str, latex: str, spoken: str, rank: int) -> Value:
    return letter(sympy.Symbol(name, positive=True), latex, spoken, rank)


SAME = _positive("w_eq", r"w_{\mathrm{eq}}", "w eq", 5)
PEAK = _positive("w_0", "w_0", "w 0", 10)
PRESSURE = _positive("q", "q", "q", 11)
SHORT = _positive("S", "S", "S", 12)
SPAN = _positive("L", "L", "L", 13)
RISE = _positive("a", "a", "a", 14)
RATIO = _positive("m", "m", "m", 20)
X = _positive("x", "x", "x", 30)
REACTION = _positive("R", "R", "R", 8)
HOLD = _positive("M_F", "M_F", "M F", 8)

INDEX = letter(sympy.Symbol("i", integer=True, positive=True), "i", "i", 40)
BEFORE = letter(sympy.Symbol("r", integer=True, positive=True), "r", "r", 40)
COUNT = letter(sympy.Symbol("n", integer=True, positive=True), "n", "n", 40)
T = letter(sympy.Symbol("t", positive=True), "t", "t", 31)
T0 = letter(sympy.Symbol("t_0", positive=True), "t_0", "t 0", 31)
C = letter(sympy.Symbol("c", positive=True), "c", "c", 16)
FORCE = letter(sympy.Symbol("P", positive=True), "P", "P", 9)
R_A = letter(sympy.Symbol("R_A"), "R_A", "R A", 8)
R_B = letter(sympy.Symbol("R_B"), "R_B", "R B", 8)
M_A = letter(sympy.Symbol("M_A"), "M_A", "M A", 8)
M_B = letter(sympy.Symbol("M_B"), "M_B", "M B", 8)
TURN_A = letter(sympy.Symbol("EItheta_A"), r"EI\,\theta_A", "E I theta A", 8)
TURN_B = letter(sympy.Symbol("EItheta_B"), r"EI\,\theta_B", "E I theta B", 8)

_SHAPES = {  # name of what belongs to a stretch: LaTeX and words around its number, rank in a product
    "a": ("a_{{{}}}", "a {}", 14),
    "b": ("b_{{{}}}", "b {}", 15),
    "h": ("h_{{{}}}", "h {}", 13),
    "k": ("k_{{{}}}", "k {}", 8),
    "w_1": ("w_{{{}1}}", "w {} 1", 10),
    "w_2": ("w_{{{}2}}", "w {} 2", 11),
    "P": ("P_{{{}}}", "P {}", 9),
    "W": ("W_{{{}}}", "W {}", 9),
    "J_1": ("J_{{{}1}}", "J {} 1", 25),
    "J_2": ("J_{{{}2}}", "J {} 2", 25),
    "J_3": ("J_{{{}3}}", "J {} 3", 25),
    "V": ("V_{{{}}}", "V {}", 9),
    "M": ("M_{{{}}}", "M {}", 9),
    "EItheta": (r"EI\,\theta_{{{}}}", "E I theta {}", 9),
    "EIv": (r"EI\,v_{{{}}}", "E I v {}", 9),
}


def part(name: str, index: Value = INDEX) -> Value:
    """What belongs to one stretch, as an indexed symbol: ``part("w_1")`` is w_i1."""
    latex, spoken, rank = _SHAPES[name]
    shown = str(index).replace(" ", "")
    symbol = sympy.IndexedBase(name)[index]
    return letter(symbol, latex.format(shown), spoken.format(shown.replace("+", " plus ")), rank)


A, B, H, K = part("a"), part("b"), part("h"), part("k")
FIRST, LAST, POINT, WHOLE = part("w_1"), part("w_2"), part("P"), part("W")
