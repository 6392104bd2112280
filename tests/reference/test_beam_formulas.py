"""Beam tables of handbooks against the analysis.

The sources; all but HICKS are cited from memory:

AISC   AISC Steel Construction Manual, 15th ed., Table 3-23 "Shears, Moments and Deflections" (by number of
       the diagram), and Table 3-22c "Continuous Beams" for equal spans.
ROARK  W. C. Young, R. G. Budynas, A. M. Sadegh: Roark's Formulas for Stress and Strain, 8th ed.,
       Table 8.1 "Shear, moment, slope, and deflection formulas for elastic straight beams" (case).
SDM    Steel Designers' Manual, tables of moments, shears and deflections (simple and fixed beams).
NILSON A. H. Nilson, D. Darwin, C. W. Dolan: Design of Concrete Structures, fixed end moments.
HICKS  T. G. Hicks: Civil Engineering Formulas, Table 2.1 "Uniformly Loaded Continuous Beams over Equal
       Spans", page 50 (read on the page), and figure 2.3 (n), (o), page 37.

Two kinds of rows. A formula is met to 1e-11. A printed decimal is met to half a unit of its last place, the
rounding the table itself has. EI is 1 throughout.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from decimal import Decimal
from fractions import Fraction
from math import sqrt

import numpy as np
import pytest

from calcpack.statics import BeamLine, Extreme, LineLoad, Load, PointLoad, Response, analyse, envelope

EXACT = 1e-11


def printed(number: float, decimal: str) -> bool:
    """Whether a number rounds to the decimal as printed."""
    places = -int(Decimal(decimal).as_tuple().exponent)
    return abs(number - float(decimal)) <= 0.5001 * 10**-places


@dataclass(frozen=True)
class Row:
    """One entry of a table: what the source says, and how to read the same off the analysis."""

    source: str
    says: str
    line: BeamLine
    loads: tuple[Load, ...]
    read: Callable[[Response], float]
    expected: float | str  # a formula's number, or the decimal as printed

    def met(self, loads: tuple[Load, ...] | None = None) -> bool:
        """Whether the analysis agrees, with the table's loads or with others."""
        value = self.read(analyse(self.line, [loads or self.loads]))
        if isinstance(self.expected, str):
            return printed(value, self.expected)
        return abs(value - self.expected) <= EXACT * abs(self.expected)


def reaction(number: int) -> Callable[[Response], float]:
    return lambda response: float(response.reactions[0, number])


def at(quantity: str, x: float) -> Callable[[Response], float]:
    return lambda response: response.curve(quantity, 0).at(x)  # type: ignore[arg-type]


def extreme(quantity: str, which: str) -> Callable[[Response], Extreme]:
    return lambda response: getattr(response.curve(quantity, 0), which)  # type: ignore[arg-type]


def value(quantity: str, which: str = "largest") -> Callable[[Response], float]:
    return lambda response: extreme(quantity, which)(response).value


def place(quantity: str, which: str = "largest") -> Callable[[Response], float]:
    return lambda response: extreme(quantity, which)(response).at


def end_moment(number: int) -> Callable[[Response], float]:
    return lambda response: float(response.end_moments[0, number])


def support_moment(number: int) -> Callable[[Response], float]:
    return lambda response: float(response.support_moments[0, number])


def scaled(read: Callable[[Response], float], by: float) -> Callable[[Response], float]:
    """A coefficient: the value as a multiple of what the table multiplies."""
    return lambda response: read(response) / by


L, W, P, A = 6.0, 10.0, 24.0, 1.75
B = L - A
SIMPLE = BeamLine(L, (0.0, L))
PROPPED = BeamLine(L, (0.0, L), fixed_end=True)  # as both tables draw it: simple left, fixed right
FIXED = BeamLine(L, (0.0, L), fixed_start=True, fixed_end=True)
CANTILEVER = BeamLine(L, (L,), fixed_end=True)  # as AISC draws it: fixed right

UNIFORM = (LineLoad(0.0, L, W, W),)
RISING = (LineLoad(0.0, L, 0.0, W),)
FALLING = (LineLoad(0.0, L, W, 0.0),)
TRIANGLE = (LineLoad(0.0, L / 2, 0.0, W), LineLoad(L / 2, L, W, 0.0))
TRAPEZOID = (LineLoad(0.0, A, 0.0, W), LineLoad(A, L - A, W, W), LineLoad(L - A, L, W, 0.0))
TOTAL = W * L / 2  # of the rising, falling and triangular loads
CENTRE = (PointLoad(L / 2, P),)
ANYWHERE = (PointLoad(A, P),)
C1, B1 = 1.2, 2.5  # partial load: from C1 over B1
PARTIAL = (LineLoad(C1, C1 + B1, W, W),)
LEFT_PART = (LineLoad(0.0, A, W, W),)
R_PARTIAL = W * B1 / (2 * L) * (2 * (L - C1 - B1) + B1)

OVER = 2.0  # overhang
OVERHANG = BeamLine(L + OVER, (0.0, L))

# fmt: off
SIMPLE_ROWS = [
    Row("AISC 3-23.1", "R = wl/2", SIMPLE, UNIFORM, reaction(0), W * L / 2),
    Row("AISC 3-23.1", "M = wl²/8", SIMPLE, UNIFORM, value("moment"), W * L**2 / 8),
    Row("AISC 3-23.1", "M at l/2", SIMPLE, UNIFORM, place("moment"), L / 2),
    Row("AISC 3-23.1", "Δ = 5wl⁴/384EI", SIMPLE, UNIFORM, value("deflection"), 5 * W * L**4 / 384),
    Row("AISC 3-23.2", "R1 = W/3", SIMPLE, RISING, reaction(0), TOTAL / 3),
    Row("AISC 3-23.2", "R2 = 2W/3", SIMPLE, RISING, reaction(1), 2 * TOTAL / 3),
    Row("AISC 3-23.2", "M at l/√3", SIMPLE, RISING, place("moment"), L / sqrt(3)),
    Row("AISC 3-23.2", "M = 2Wl/9√3", SIMPLE, RISING, value("moment"), 2 * TOTAL * L / (9 * sqrt(3))),
    Row("AISC 3-23.2", "0.1283 Wl", SIMPLE, RISING, scaled(value("moment"), TOTAL * L), "0.1283"),
    Row(
        "AISC 3-23.2", "Δ at l√(1 - √(8/15))",
        SIMPLE, RISING, place("deflection"), L * sqrt(1 - sqrt(8 / 15)),
    ),
    Row("AISC 3-23.2", "0.5193 l", SIMPLE, RISING, scaled(place("deflection"), L), "0.5193"),
    Row(
        "AISC 3-23.2", "0.01304 Wl³/EI",
        SIMPLE, RISING, scaled(value("deflection"), TOTAL * L**3), "0.01304",
    ),
    Row(
        "AISC 3-23.2", "Mx = Wx(l² - x²)/3l²",
        SIMPLE, RISING, at("moment", 2), TOTAL * 2 * (L**2 - 4) / (3 * L**2),
    ),
    Row("ROARK 8.1.2e", "θA = 7wl³/360EI", SIMPLE, RISING, at("rotation", 0), -7 * W * L**3 / 360),
    Row("ROARK 8.1.2e", "θB = wl³/45EI", SIMPLE, RISING, at("rotation", L), W * L**3 / 45),
    Row("AISC 3-23.3", "M = Wl/6", SIMPLE, TRIANGLE, value("moment"), TOTAL * L / 6),
    Row("AISC 3-23.3", "M at the centre", SIMPLE, TRIANGLE, place("moment"), L / 2),
    Row("AISC 3-23.3", "Δ = Wl³/60EI", SIMPLE, TRIANGLE, value("deflection"), TOTAL * L**3 / 60),
    Row(
        "AISC 3-23.3, HICKS 2.3n", "Mx = Wx(1/2 - 2x²/3l²)",
        SIMPLE, TRIANGLE, at("moment", 2), TOTAL * 2 * (0.5 - 8 / (3 * L**2)),
    ),
    Row(
        "SDM trapezoid", "M = w(3l² - 4a²)/24",
        SIMPLE, TRAPEZOID, value("moment"), W * (3 * L**2 - 4 * A**2) / 24,
    ),
    Row("SDM trapezoid", "R = w(l - a)/2", SIMPLE, TRAPEZOID, reaction(0), W * (L - A) / 2),
    Row(
        "SDM trapezoid", "Δ = w(5l² - 4a²)²/1920EI",
        SIMPLE, TRAPEZOID, value("deflection"), W * (5 * L**2 - 4 * A**2) ** 2 / 1920,
    ),
    Row("AISC 3-23.4", "R1 = wb(2c + b)/2l", SIMPLE, PARTIAL, reaction(0), R_PARTIAL),
    Row("AISC 3-23.4", "M at a + R1/w", SIMPLE, PARTIAL, place("moment"), C1 + R_PARTIAL / W),
    Row(
        "AISC 3-23.4", "M = R1(a + R1/2w)",
        SIMPLE, PARTIAL, value("moment"), R_PARTIAL * (C1 + R_PARTIAL / (2 * W)),
    ),
    Row("AISC 3-23.5", "R1 = wa(2l - a)/2l", SIMPLE, LEFT_PART, reaction(0), W * A / (2 * L) * (2 * L - A)),
    Row(
        "AISC 3-23.5", "M = R1²/2w",
        SIMPLE, LEFT_PART, value("moment"), (W * A / (2 * L) * (2 * L - A)) ** 2 / (2 * W),
    ),
    Row(
        "AISC 3-23.5, HICKS 2.3o", "Δx = wx(a²(2l - a)² - 2ax²(2l - a) + lx³)/24EIl, x < a",
        SIMPLE, LEFT_PART, at("deflection", 1.0),
        W / (24 * L) * (A**2 * (2 * L - A) ** 2 - 2 * A * (2 * L - A) + L),
    ),
    Row(
        "AISC 3-23.5, HICKS 2.3o", "Δx = wa²(l - x)(4xl - 2x² - a²)/24EIl, x > a",
        SIMPLE, LEFT_PART, at("deflection", 4.0), W * A**2 * (L - 4) / (24 * L) * (16 * L - 32 - A**2),
    ),
    Row(
        "HICKS 2.3n", "Δx = Wx(5l² - 4x²)²/480EIl²",
        SIMPLE, TRIANGLE, at("deflection", 2), TOTAL * 2 * (5 * L**2 - 16) ** 2 / (480 * L**2),
    ),
    Row("AISC 3-23.7", "M = Pl/4", SIMPLE, CENTRE, value("moment"), P * L / 4),
    Row("AISC 3-23.7", "Δ = Pl³/48EI", SIMPLE, CENTRE, value("deflection"), P * L**3 / 48),
    Row("AISC 3-23.8", "M = Pab/l", SIMPLE, ANYWHERE, value("moment"), P * A * B / L),
    Row("AISC 3-23.8", "M under the load", SIMPLE, ANYWHERE, place("moment"), A),
    Row(
        "AISC 3-23.8", "Δ under the load = Pa²b²/3EIl",
        SIMPLE, ANYWHERE, at("deflection", A), P * A**2 * B**2 / (3 * L),
    ),
    Row(
        "AISC 3-23.8", "Δ at √(a(a + 2b)/3) from the farther support",
        SIMPLE, ANYWHERE, lambda r: L - r.curve("deflection").largest.at, sqrt(B * (B + 2 * A) / 3),
    ),
    Row(
        "AISC 3-23.8", "Δ = Pab(a + 2b)√(3a(a + 2b))/27EIl",
        SIMPLE, ANYWHERE, value("deflection"), P * A * B * (B + 2 * A) * sqrt(3 * B * (B + 2 * A)) / (27 * L),
    ),
    Row("AISC 3-23.9", "M = Pa", SIMPLE, (PointLoad(A, P), PointLoad(B, P)), value("moment"), P * A),
    Row(
        "AISC 3-23.9", "Δ = Pa(3l² - 4a²)/24EI",
        SIMPLE, (PointLoad(A, P), PointLoad(B, P)), value("deflection"), P * A * (3 * L**2 - 4 * A**2) / 24,
    ),
]

HELD_ROWS = [
    Row("AISC 3-23.12", "R1 = 3wl/8", PROPPED, UNIFORM, reaction(0), 3 * W * L / 8),
    Row("AISC 3-23.12", "M = wl²/8", PROPPED, UNIFORM, end_moment(1), -W * L**2 / 8),
    Row("AISC 3-23.12", "M1 = 9wl²/128", PROPPED, UNIFORM, value("moment"), 9 * W * L**2 / 128),
    Row("AISC 3-23.12", "M1 at 3l/8", PROPPED, UNIFORM, place("moment"), 3 * L / 8),
    Row("AISC 3-23.12", "Δ at l(1 + √33)/16", PROPPED, UNIFORM, place("deflection"), L * (1 + sqrt(33)) / 16),
    Row(
        "AISC 3-23.12", "Δ = wl⁴/185EI",
        PROPPED, UNIFORM, lambda r: W * L**4 / value("deflection")(r), "185",
    ),
    Row("AISC 3-23.13", "R1 = 5P/16", PROPPED, CENTRE, reaction(0), 5 * P / 16),
    Row("AISC 3-23.13", "M = 3Pl/16", PROPPED, CENTRE, end_moment(1), -3 * P * L / 16),
    Row("AISC 3-23.13", "M1 = 5Pl/32", PROPPED, CENTRE, value("moment"), 5 * P * L / 32),
    Row("AISC 3-23.13", "Δ at l/√5", PROPPED, CENTRE, place("deflection"), L / sqrt(5)),
    Row("AISC 3-23.13", "Δ = Pl³/48EI√5", PROPPED, CENTRE, value("deflection"), P * L**3 / (48 * sqrt(5))),
    Row(
        "AISC 3-23.14", "R1 = Pb²(a + 2l)/2l³",
        PROPPED, ANYWHERE, reaction(0), P * B**2 * (A + 2 * L) / (2 * L**3),
    ),
    Row(
        "AISC 3-23.14", "M2 = Pab(a + l)/2l²",
        PROPPED, ANYWHERE, end_moment(1), -P * A * B * (A + L) / (2 * L**2),
    ),
    Row("ROARK 8.1.2c", "RA = wl/10", PROPPED, RISING, reaction(0), W * L / 10),
    Row("ROARK 8.1.2c", "MB = wl²/15", PROPPED, RISING, end_moment(1), -W * L**2 / 15),
    Row("ROARK 8.1.2c", "M at 0.4472 l", PROPPED, RISING, scaled(place("moment"), L), "0.4472"),
    Row("ROARK 8.1.2c", "0.0298 wl²", PROPPED, RISING, scaled(value("moment"), W * L**2), "0.0298"),
    Row("ROARK 8.1.2c", "y at 0.4472 l", PROPPED, RISING, scaled(place("deflection"), L), "0.4472"),
    Row("ROARK 8.1.2c", "0.00239 wl⁴/EI", PROPPED, RISING, scaled(value("deflection"), W * L**4), "0.00239"),
    Row("ROARK 8.1.2c", "RA = 11wl/40", PROPPED, FALLING, reaction(0), 11 * W * L / 40),
    Row("ROARK 8.1.2c", "MB = 7wl²/120", PROPPED, FALLING, end_moment(1), -7 * W * L**2 / 120),
    Row("ROARK 8.1.2c", "M at 0.329 l", PROPPED, FALLING, scaled(place("moment"), L), "0.329"),
    Row("ROARK 8.1.2c", "y at 0.4025 l", PROPPED, FALLING, scaled(place("deflection"), L), "0.4025"),
    Row("SDM propped", "triangle: 5wl²/64", PROPPED, TRIANGLE, end_moment(1), -5 * W * L**2 / 64),
    Row("AISC 3-23.15", "M = wl²/12", FIXED, UNIFORM, end_moment(0), -W * L**2 / 12),
    Row("AISC 3-23.15", "M1 = wl²/24", FIXED, UNIFORM, value("moment"), W * L**2 / 24),
    Row("AISC 3-23.15", "Δ = wl⁴/384EI", FIXED, UNIFORM, value("deflection"), W * L**4 / 384),
    Row("AISC 3-23.16", "M = Pl/8", FIXED, CENTRE, end_moment(1), -P * L / 8),
    Row("AISC 3-23.16", "Δ = Pl³/192EI", FIXED, CENTRE, value("deflection"), P * L**3 / 192),
    Row("AISC 3-23.17", "R1 = Pb²(3a + b)/l³", FIXED, ANYWHERE, reaction(0), P * B**2 * (3 * A + B) / L**3),
    Row("AISC 3-23.17", "M1 = Pab²/l²", FIXED, ANYWHERE, end_moment(0), -P * A * B**2 / L**2),
    Row("AISC 3-23.17", "M2 = Pa²b/l²", FIXED, ANYWHERE, end_moment(1), -P * A**2 * B / L**2),
    Row("AISC 3-23.17", "Ma = 2Pa²b²/l³", FIXED, ANYWHERE, value("moment"), 2 * P * A**2 * B**2 / L**3),
    Row(
        "AISC 3-23.17", "Δ at 2al/(3a + b) from the farther end",
        FIXED, ANYWHERE, lambda r: L - r.curve("deflection").largest.at, 2 * B * L / (3 * B + A),
    ),
    Row(
        "AISC 3-23.17", "Δ = 2Pa³b²/3EI(3a + b)²",
        FIXED, ANYWHERE, value("deflection"), 2 * P * B**3 * A**2 / (3 * (3 * B + A) ** 2),
    ),
    Row("NILSON", "rising: wl²/30", FIXED, RISING, end_moment(0), -W * L**2 / 30),
    Row("NILSON", "rising: wl²/20", FIXED, RISING, end_moment(1), -W * L**2 / 20),
    Row("ROARK 8.1.2d", "RA = 3wl/20", FIXED, RISING, reaction(0), 3 * W * L / 20),
    Row("ROARK 8.1.2d", "M at 0.548 l", FIXED, RISING, scaled(place("moment"), L), "0.548"),
    Row("ROARK 8.1.2d", "y at 0.525 l", FIXED, RISING, scaled(place("deflection"), L), "0.525"),
    Row("ROARK 8.1.2d", "0.001309 wl⁴/EI", FIXED, RISING, scaled(value("deflection"), W * L**4), "0.001309"),
    Row("NILSON", "triangle: 5wl²/96", FIXED, TRIANGLE, end_moment(0), -5 * W * L**2 / 96),
    Row(
        "SDM fixed", "trapezoid: w(l³ - a²(2l - a))/12l",
        FIXED, TRAPEZOID, end_moment(0), -W * (L**3 - A**2 * (2 * L - A)) / (12 * L),
    ),
    Row(
        "SDM fixed", "left part: wa²(6l² - 8al + 3a²)/12l²",
        FIXED, LEFT_PART, end_moment(0), -W * A**2 * (6 * L**2 - 8 * A * L + 3 * A**2) / (12 * L**2),
    ),
    Row(
        "SDM fixed", "left part: wa³(4l - 3a)/12l²",
        FIXED, LEFT_PART, end_moment(1), -W * A**3 * (4 * L - 3 * A) / (12 * L**2),
    ),
]

FREE_ROWS = [
    Row("AISC 3-23.18", "M = Wl/3", CANTILEVER, RISING, end_moment(1), -TOTAL * L / 3),
    Row("AISC 3-23.18", "Δ = Wl³/15EI", CANTILEVER, RISING, at("deflection", 0), TOTAL * L**3 / 15),
    Row("AISC 3-23.19", "R = wl", CANTILEVER, UNIFORM, reaction(0), W * L),
    Row("AISC 3-23.19", "M = wl²/2", CANTILEVER, UNIFORM, end_moment(1), -W * L**2 / 2),
    Row("AISC 3-23.19", "Δ = wl⁴/8EI", CANTILEVER, UNIFORM, value("deflection"), W * L**4 / 8),
    Row("AISC 3-23.21", "M = Pb", CANTILEVER, ANYWHERE, value("moment", "smallest"), -P * B),
    Row(
        "AISC 3-23.21", "Δ at the tip = Pb²(3l - b)/6EI",
        CANTILEVER, ANYWHERE, at("deflection", 0), P * B**2 * (3 * L - B) / 6,
    ),
    Row("AISC 3-23.21", "Δ at the load = Pb³/3EI", CANTILEVER, ANYWHERE, at("deflection", A), P * B**3 / 3),
    Row("AISC 3-23.22", "Δ = Pl³/3EI", CANTILEVER, (PointLoad(0.0, P),), value("deflection"), P * L**3 / 3),
    Row(
        "ROARK 8.1.2a", "falling to the wall: 11wl⁴/120EI",
        CANTILEVER, FALLING, value("deflection"), 11 * W * L**4 / 120,
    ),
    Row(
        "AISC 3-23.24", "R1 = w(l² - a²)/2l",
        OVERHANG, (LineLoad(0.0, L + OVER, W, W),), reaction(0), W / (2 * L) * (L**2 - OVER**2),
    ),
    Row(
        "AISC 3-23.24", "R2 = w(l + a)²/2l",
        OVERHANG, (LineLoad(0.0, L + OVER, W, W),), reaction(1), W / (2 * L) * (L + OVER) ** 2,
    ),
    Row(
        "AISC 3-23.24", "M1 = w(l + a)²(l - a)²/8l²",
        OVERHANG, (LineLoad(0.0, L + OVER, W, W),), value("moment"),
        W / (8 * L**2) * (L + OVER) ** 2 * (L - OVER) ** 2,
    ),
    Row(
        "AISC 3-23.24", "M1 at l(1 - a²/l²)/2",
        OVERHANG, (LineLoad(0.0, L + OVER, W, W),), place("moment"), L / 2 * (1 - OVER**2 / L**2),
    ),
    Row(
        "AISC 3-23.24", "Δ at the tip = wa(4a²l - l³ + 3a³)/24EI",
        OVERHANG, (LineLoad(0.0, L + OVER, W, W),), at("deflection", L + OVER),
        W * OVER / 24 * (4 * OVER**2 * L - L**3 + 3 * OVER**3),
    ),
    Row(
        "AISC 3-23.25", "R1 = wa²/2l, downward",
        OVERHANG, (LineLoad(L, L + OVER, W, W),), reaction(0), -W * OVER**2 / (2 * L),
    ),
    Row(
        "AISC 3-23.25", "Δ at l/√3",
        OVERHANG, (LineLoad(L, L + OVER, W, W),), place("deflection", "smallest"), L / sqrt(3),
    ),
    Row(
        "AISC 3-23.25", "Δ = wa²l²/18√3EI, upward",
        OVERHANG, (LineLoad(L, L + OVER, W, W),), value("deflection", "smallest"),
        -W * OVER**2 * L**2 / (18 * sqrt(3)),
    ),
    Row(
        "AISC 3-23.25", "0.03208 wa²l²/EI",
        OVERHANG, (LineLoad(L, L + OVER, W, W),),
        scaled(value("deflection", "smallest"), -W * OVER**2 * L**2), "0.03208",
    ),
    Row(
        "AISC 3-23.25", "Δ at the tip = wa³(4l + 3a)/24EI",
        OVERHANG, (LineLoad(L, L + OVER, W, W),), value("deflection"), W * OVER**3 * (4 * L + 3 * OVER) / 24,
    ),
    Row(
        "AISC 3-23.26", "R1 = Pa/l, downward",
        OVERHANG, (PointLoad(L + OVER, P),), reaction(0), -P * OVER / L,
    ),
    Row(
        "AISC 3-23.26", "Δ at the tip = Pa²(l + a)/3EI",
        OVERHANG, (PointLoad(L + OVER, P),), value("deflection"), P * OVER**2 * (L + OVER) / 3,
    ),
    Row(
        "AISC 3-23.26", "0.06415 Pal²/EI",
        OVERHANG, (PointLoad(L + OVER, P),), scaled(value("deflection", "smallest"), -P * OVER * L**2),
        "0.06415",
    ),
]


# fmt: on
def equal_spans(count: int) -> BeamLine:
    return BeamLine(count * L, tuple(L * number for number in range(count + 1)))


def loaded(*spans: int) -> tuple[Load, ...]:
    return tuple(LineLoad(L * span, L * (span + 1), W, W) for span in spans)


WL, WLL = W * L, W * L**2

# fmt: off
CONTINUOUS_ROWS = [
    Row("AISC 3-23.29", "R1 = 7wl/16", equal_spans(2), loaded(0), reaction(0), 7 * WL / 16),
    Row("AISC 3-23.29", "R2 = 5wl/8", equal_spans(2), loaded(0), reaction(1), 5 * WL / 8),
    Row("AISC 3-23.29", "R3 = wl/16, downward", equal_spans(2), loaded(0), reaction(2), -WL / 16),
    Row("AISC 3-23.29", "M = 49wl²/512", equal_spans(2), loaded(0), value("moment"), 49 * WLL / 512),
    Row("AISC 3-23.29", "M at 7l/16", equal_spans(2), loaded(0), place("moment"), 7 * L / 16),
    Row("AISC 3-23.29", "M1 = wl²/16", equal_spans(2), loaded(0), support_moment(1), -WLL / 16),
    Row("AISC 3-23.30", "R1 = 13P/32", equal_spans(2), CENTRE, reaction(0), 13 * P / 32),
    Row("AISC 3-23.30", "M = 13Pl/64", equal_spans(2), CENTRE, value("moment"), 13 * P * L / 64),
    Row("AISC 3-23.30", "M1 = 3Pl/32", equal_spans(2), CENTRE, support_moment(1), -3 * P * L / 32),
    Row(
        "AISC 3-23.31", "M1 = Pab(l + a)/4l²",
        equal_spans(2), ANYWHERE, support_moment(1), -P * A * B * (L + A) / (4 * L**2),
    ),
    Row("AISC 3-22c, 2", "both: M2 = wl²/8", equal_spans(2), loaded(0, 1), support_moment(1), -WLL / 8),
    Row("AISC 3-22c, 2", "both: R2 = 1.25 wl", equal_spans(2), loaded(0, 1), reaction(1), 1.25 * WL),
    Row(
        "AISC 3-22c, 2", "both: 0.070 wl²",
        equal_spans(2), loaded(0, 1), scaled(value("moment"), WLL), "0.070",
    ),
    Row("AISC 3-22c, 3", "all: 0.400 wl", equal_spans(3), loaded(0, 1, 2), scaled(reaction(0), WL), "0.400"),
    Row("AISC 3-22c, 3", "all: 1.100 wl", equal_spans(3), loaded(0, 1, 2), scaled(reaction(1), WL), "1.100"),
    Row("AISC 3-22c, 3", "all: wl²/10", equal_spans(3), loaded(0, 1, 2), support_moment(2), -WLL / 10),
    Row(
        "AISC 3-22c, 3", "all: 0.080 wl²",
        equal_spans(3), loaded(0, 1, 2), scaled(value("moment"), WLL), "0.080",
    ),
    Row(
        "AISC 3-22c, 3", "all: 0.025 wl²",
        equal_spans(3), loaded(0, 1, 2), scaled(at("moment", 1.5 * L), WLL), "0.025",
    ),
    Row(
        "AISC 3-22c, 3", "outer two: 0.1013 wl²",
        equal_spans(3), loaded(0, 2), scaled(value("moment"), WLL), "0.1013",
    ),
    Row(
        "AISC 3-22c, 3", "outer two: -0.050 wl²",
        equal_spans(3), loaded(0, 2), scaled(at("moment", 1.5 * L), WLL), "-0.050",
    ),
    Row(
        "AISC 3-22c, 3", "middle: 0.075 wl²",
        equal_spans(3), loaded(1), scaled(value("moment"), WLL), "0.075",
    ),
    Row(
        "AISC 3-22c, 3", "first two: -0.1167 wl²",
        equal_spans(3), loaded(0, 1), scaled(support_moment(1), WLL), "-0.1167",
    ),
    Row(
        "AISC 3-22c, 3", "first two: 1.200 wl",
        equal_spans(3), loaded(0, 1), scaled(reaction(1), WL), "1.200",
    ),
    Row(
        "AISC 3-22c, 3", "all: 0.0069 wl⁴/EI",
        equal_spans(3), loaded(0, 1, 2), scaled(value("deflection"), W * L**4), "0.0069",
    ),
    Row(
        "AISC 3-22c, 3", "all, at 0.446 l",
        equal_spans(3), loaded(0, 1, 2), scaled(place("deflection"), L), "0.446",
    ),
]

# fmt: on
ROWS = SIMPLE_ROWS + HELD_ROWS + FREE_ROWS + CONTINUOUS_ROWS


def name(row: Row) -> str:
    return f"{row.source}: {row.says}"


@pytest.mark.parametrize("row", ROWS, ids=name)
def test_table_is_met(row):
    assert row.met(), (row.read(analyse(row.line, [row.loads])), row.expected)


def heavier(load: Load, by: float) -> Load:
    if isinstance(load, PointLoad):
        return replace(load, force=load.force * by)
    return replace(load, first=load.first * by, last=load.last * by)


def moved(load: Load, by: float) -> Load:
    if isinstance(load, PointLoad):
        return replace(load, at=abs(load.at - by))
    return replace(load, start=load.start + by)


@pytest.mark.parametrize("row", ROWS, ids=name)
def test_tolerance_tells_other_loads_apart(row):
    """Formulas: a load heavier, moved or added by a millionth; printed decimals: by a twentieth."""
    by = 0.05 if isinstance(row.expected, str) else 1e-6
    others = [
        tuple(heavier(load, 1 + by) for load in row.loads),
        tuple(moved(load, by * L) for load in row.loads),
        (*row.loads, PointLoad(0.37 * L, by * sum(load.total for load in row.loads))),
    ]
    assert not all(row.met(loads) for loads in others)


# HICKS Table 2.1, each span by its left support: shear left and right of it [wl], moment over it [wl²],
# the span's largest moment [wl²], its place [l], points of inflection [l]; the right half is the mirror
# image. The inflections are met to one unit of the last place, some being cut off rather than rounded.
# Misprints, corrected here: six spans, second span has 0.533 for the place where the table's own shear
# of 55/104 vanishes (0.529), and 0.0340 for the moment there; five spans, second span has 0.783 for 0.784.
EQUAL_SPANS = {
    1: [("0", "1/2", "0", "0.125", "0.500", [])],
    2: [
        ("0", "3/8", "0", "0.0703", "0.375", ["0.750"]),
        ("5/8", "5/8", "1/8", "0.0703", "0.625", ["0.250"]),
    ],
    3: [
        ("0", "4/10", "0", "0.080", "0.400", ["0.800"]),
        ("6/10", "5/10", "1/10", "0.025", "0.500", ["0.276", "0.724"]),
    ],
    4: [
        ("0", "11/28", "0", "0.0772", "0.393", ["0.786"]),
        ("17/28", "15/28", "3/28", "0.0364", "0.536", ["0.266", "0.806"]),
        ("13/28", "13/28", "2/28", "0.0364", "0.464", ["0.194", "0.734"]),
    ],
    5: [
        ("0", "15/38", "0", "0.0779", "0.395", ["0.789"]),
        ("23/38", "20/38", "4/38", "0.0332", "0.526", ["0.268", "0.784"]),
        ("18/38", "19/38", "3/38", "0.0461", "0.500", ["0.196", "0.804"]),
    ],
    6: [
        ("0", "41/104", "0", "0.0777", "0.394", ["0.788"]),
        ("63/104", "55/104", "11/104", "0.0341", "0.529", ["0.268", "0.790"]),
        ("49/104", "51/104", "8/104", "0.0433", "0.490", ["0.196", "0.785"]),
        ("53/104", "53/104", "9/104", "0.0433", "0.510", ["0.215", "0.804"]),
    ],
    7: [
        ("0", "56/142", "0", "0.0778", "0.394", ["0.789"]),
        ("86/142", "75/142", "15/142", "0.0338", "0.528", ["0.268", "0.788"]),
        ("67/142", "70/142", "11/142", "0.0440", "0.493", ["0.196", "0.790"]),
        ("72/142", "71/142", "12/142", "0.0405", "0.500", ["0.215", "0.785"]),
    ],
}


@pytest.mark.parametrize("count", EQUAL_SPANS)
def test_equal_spans_as_printed(count):
    response = analyse(equal_spans(count), [loaded(*range(count))])
    shear, moment = response.curve("shear"), response.curve("moment")
    for number, (left, right, over, largest, at_, inflections) in enumerate(EQUAL_SPANS[count]):
        start = number * L
        if number:
            assert -shear.at(start, "left") == pytest.approx(float(Fraction(left)) * WL, rel=EXACT)
        assert shear.at(start, "right") == pytest.approx(float(Fraction(right)) * WL, rel=EXACT)
        assert moment.at(start) == pytest.approx(-float(Fraction(over)) * WLL, rel=EXACT, abs=1e-12)
        turn = next(x for x in response.zero_shear() if start < x < start + L)
        assert printed((turn - start) / L, at_)
        assert printed(moment.at(turn) / WLL, largest)
        inside = [x - start for x in moment.zeros() if start + 1e-6 < x < start + L - 1e-6]
        assert len(inside) == len(inflections)
        assert [x / L for x in inside] == pytest.approx([float(place) for place in inflections], abs=1e-3)


def patterns(count: int):
    line = equal_spans(count)
    response = analyse(line, [loaded(span) for span in range(count)])
    return envelope(response, np.zeros(count), np.ones(count))


@pytest.mark.parametrize(
    ("count", "sagging", "inner", "hogging", "end_reaction", "inner_reaction"),
    [
        # live load on the worst spans, coefficients of wl² and wl: AISC 3-22c, from memory
        (2, "0.0957", None, "-0.125", "0.4375", "1.250"),
        (3, "0.1013", "0.075", "-0.1167", "0.450", "1.200"),
        (4, "0.0996", "0.0805", "-0.1205", "0.446", "1.223"),
    ],
)
def test_worst_placement_on_equal_spans(count, sagging, inner, hogging, end_reaction, inner_reaction):
    worst = patterns(count)
    assert printed(worst.moment.largest.value / WLL, sagging)
    assert printed(worst.moment.smallest.value / WLL, hogging)
    assert worst.moment.smallest.at == L
    assert printed(worst.reactions_max[0] / WL, end_reaction)
    assert printed(worst.reactions_max[1] / WL, inner_reaction)
    if inner is not None:
        x = np.linspace(L, 2 * L, 2001)
        assert printed(worst.moment.upper.values(x).max() / WLL, inner)
    assert not printed(1.02 * worst.moment.largest.value / WLL, sagging)
