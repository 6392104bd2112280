"""Lateral-torsional buckling against own finite elements: the equation, and C_b of the moment diagrams."""

from __future__ import annotations

import importlib.util
import math
from pathlib import Path

import pytest

from calcpack.clauses.aisc360 import strength
from calcpack.clauses.aisc360.strength import Steel
from calcpack.clauses.steel import SegmentMoments, i_section
from calcpack.job.library import rolled_sections
from calcpack.statics import Extreme
from calcpack.verification.reckon import rows

_PATH = Path(__file__).with_name("sideways.py")
_SPEC = importlib.util.spec_from_file_location("sideways_of_aisc360", _PATH)
sideways = importlib.util.module_from_spec(_SPEC)
_SPEC.loader.exec_module(sideways)

KSI = 6894.757293168
STEEL = Steel(50 * KSI, 29000 * KSI)
SHEAR_MODULUS = 11200 * KSI  # AISC 360-22, symbols
SHAPE = i_section(rolled_sections()["w18x50"])
LENGTH = 9.0  # [m], elastic


def stiffnesses(shape=SHAPE):
    return (
        STEEL.modulus * shape.weak_inertia,
        STEEL.modulus * shape.warping,
        SHEAR_MODULUS * shape.torsion,
    )


def uniform_moment(length, shape=SHAPE):
    """The closed solution, fork supports (Timoshenko and Gere, Theory of elastic stability, from memory)."""
    bending, warping, torsion = stiffnesses(shape)
    k = math.pi / length
    return k * math.sqrt(bending * (torsion + k**2 * warping))


def test_elements_find_the_closed_solution():
    found = sideways.critical_factor(LENGTH, *stiffnesses(), lambda x: 1.0, elements=8)
    assert found == pytest.approx(uniform_moment(LENGTH), rel=2e-4)
    coarse = sideways.critical_factor(LENGTH, *stiffnesses(), lambda x: 1.0, elements=1)
    assert coarse > 1.002 * uniform_moment(LENGTH)  # and one element does not


@pytest.mark.parametrize("name", ["w18x50", "w14x30", "w21x44", "w12x65", "w8x31", "w24x55"])
@pytest.mark.parametrize("length", [6.0, 9.0, 14.0])
def test_the_equation_is_the_closed_solution(name, length):
    """(F2-4) rounds G / E and takes √(I_y C_w) by way of r_ts: within 0.6 %."""
    shape = i_section(rolled_sections()[name])
    stress = strength.critical_stress(shape, STEEL, length, 1.0)
    assert stress * shape.elastic_modulus == pytest.approx(uniform_moment(length, shape), rel=0.006)


def segment(moment, length=LENGTH):
    values = [moment(length * part / 4) for part in range(5)]
    fine = [moment(length * part / 2000) for part in range(2001)]
    most, least = max(fine), min(fine)
    largest = most if most >= -least else least
    return SegmentMoments(
        0.0,
        length,
        *values,
        Extreme(largest, 0.0),
        Extreme(max(most, 0.0), 0.0),
        Extreme(min(least, 0.0), 0.0),
    )


L = LENGTH
# moment diagrams; how far (F1-1) lies from the eigenvalue [%], below it safe: shared/verification/aisc360.toml
DIAGRAMS = {
    "uniform": lambda x: 1.0,
    "one end moment": lambda x: 1 - x / L,
    "end moments, one half of the other": lambda x: 1 - x / (2 * L),
    "end moments that bend it to and fro": lambda x: 1 - 2 * x / L,
    "uniform load": lambda x: 4 * x / L * (1 - x / L),
    "point load at midspan": lambda x: 1 - abs(2 * x / L - 1),
    "point load at the quarter": lambda x: min(4 * x / L, (1 - x / L) * 4 / 3),
    "uniform load, both ends fixed": lambda x: 6 * x / L - 1 - 6 * (x / L) ** 2,
    "uniform load, one end fixed": lambda x: 8 * (3 / 8 * x / L - (x / L) ** 2 / 2),
}
STATED = {row.text("diagram"): float(row.text("Cb")) for row in rows("aisc360", "eigenvalues")}


def test_every_diagram_is_stated():
    assert list(STATED) == list(DIAGRAMS)


@pytest.mark.parametrize("name", DIAGRAMS)
def test_diagram_factor(name):
    moment = DIAGRAMS[name]
    exact = sideways.critical_factor(L, *stiffnesses(), moment) * abs(segment(moment).largest.value)
    exact /= uniform_moment(L)
    found = strength.diagram_factor(segment(moment))
    assert 100 * (found / exact - 1) == pytest.approx(STATED[name], abs=0.1)


def test_a_cantilever_is_on_the_safe_side():
    """C_b = 1 with the length from support to tip, uniform load: the eigenvalue lies well above."""
    length = 4.0
    moment = lambda x: -((1 - x / length) ** 2)  # noqa: E731
    exact = sideways.critical_factor(length, *stiffnesses(), moment, tip=True)
    assert exact > 1.3 * uniform_moment(length)


def hogging_at_one_end(part):
    return lambda x: 4 * x / L * (1 - x / L) - part * (1 - x / L)


def hogging_at_both_ends(part):
    return lambda x: 4 * x / L * (1 - x / L) - part


TOP = -SHAPE.between_flanges / 2  # where a sagging moment presses


def test_a_rail_at_the_pressed_flange_holds_the_beam():
    free = uniform_moment(L)
    sagging, hogging = (
        sideways.critical_factor(L, *stiffnesses(), lambda x, sign=sign: sign, rail=TOP) / free
        for sign in (1.0, -1.0)
    )
    assert sagging > 100
    assert hogging == pytest.approx(1.155, abs=0.002)


@pytest.mark.parametrize("part", [0.1, 0.3, 0.6, 1.0, 1.5])
@pytest.mark.parametrize("diagram", [hogging_at_one_end, hogging_at_both_ends])
def test_hogging_beside_a_larger_sagging_moment(diagram, part):
    """The top flange held all along, the bottom one at supports: what is given is below the eigenvalue.

    The hogging moment stands in (F1-1) in the place of the largest; not less than 1.
    """
    moment = diagram(part)
    hogging = -segment(moment).hogging.value
    given = strength.diagram_factor(segment(moment), hogging)
    exact = sideways.critical_factor(L, *stiffnesses(), moment, rail=TOP) * hogging / uniform_moment(L)
    assert 1.0 <= given <= strength.diagram_factor(segment(moment))
    assert given < exact
