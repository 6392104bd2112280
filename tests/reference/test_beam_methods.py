"""The exact analysis against other methods and other people's programs, on the same beams.

Direct stiffness of this package; direct stiffness in rational arithmetic, without any rounding; finite
elements (scikit-fem); collocation of the differential equation (SciPy); singularity functions (SymPy).
How many beams and how close: shared/verification/statics.toml.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
import skfem
from skfem.helpers import dd as second
from skfem.helpers import ddot

from calcpack.statics import BeamLine, LineLoad, Load, PointLoad, analyse
from calcpack.statics.stiffness import stiffness_check
from calcpack.verification.beam_methods import (
    BEAMS,
    collocation,
    direct_stiffness,
    random_beam,
    rational_stiffness,
    seeds,
    symbolic_pairs,
    worst_difference,
)
from calcpack.verification.tables import find_topic

STATICS = find_topic("statics")
DIRECT_STIFFNESS = STATICS.find_method("direct stiffness")
RATIONAL = STATICS.find_method("rational arithmetic")
FINITE_ELEMENTS = STATICS.find_method("finite elements")
COLLOCATION = STATICS.find_method("collocation")
SINGULARITY = STATICS.find_method("singularity functions")


def heavier(loads: list[Load]) -> list[Load]:
    """The first line load a hundred-thousandth heavier."""
    first = loads[0]
    assert isinstance(first, LineLoad)
    return [replace(first, first=first.first * (1 + 1e-5), last=first.last * (1 + 1e-5)), *loads[1:]]


# ---- direct stiffness ------------------------------------------------------------------------------


@pytest.mark.parametrize("seed", seeds(DIRECT_STIFFNESS))
def test_direct_stiffness(seed):
    line, loads = random_beam(seed)
    other = stiffness_check(line, loads)
    response = analyse(line, [loads])
    found = direct_stiffness(line, loads)
    assert worst_difference(line, loads, found) < DIRECT_STIFFNESS.within
    moment = np.abs(response.moment[0, :, 0]).max()
    np.testing.assert_allclose(response.support_moments[0], other.support_moments, atol=1e-8 * moment)
    np.testing.assert_allclose(response.end_moments[0], other.end_moments, atol=1e-8 * moment)
    assert worst_difference(line, heavier(loads), found) > DIRECT_STIFFNESS.within


def test_direct_stiffness_on_thirty_spans():
    line = BeamLine(150.0, tuple(5.0 * number for number in range(31)))
    loads: list[Load] = [
        LineLoad(5.0 * number, 5.0 * number + 3.3, 4.0, 9.0 + number) for number in range(30)
    ]
    assert worst_difference(line, loads, direct_stiffness(line, loads)) < DIRECT_STIFFNESS.within


def test_direct_stiffness_does_not_mind_loads_that_begin_close_together():
    line = BeamLine(10.0, (0.0, 6.0), fixed_start=True)
    loads: list[Load] = [
        LineLoad(2.0, 10.0, 5.0, 5.0), LineLoad(2.0 + 1e-5, 6.0 - 1e-5, 3.0, 4.0), PointLoad(6.0 + 1e-5, 9.0),
        PointLoad(10.0, 1.0), PointLoad(0.0, 4.0),
    ]  # fmt: skip
    assert worst_difference(line, loads, direct_stiffness(line, loads)) < 1e-10


@pytest.mark.parametrize("seed", seeds(RATIONAL))
def test_rational_arithmetic(seed):
    """Nothing but the last digits may differ."""
    line, loads = random_beam(seed)
    found = rational_stiffness(line, loads)
    assert worst_difference(line, loads, found) < RATIONAL.within
    assert worst_difference(line, heavier(loads), found) > 1e-8


# ---- finite elements: scikit-fem -------------------------------------------------------------------


@skfem.BilinearForm
def bending(u, v, _):
    return ddot(second(u), second(v))


def finite_elements(line: BeamLine, loads: list[Load]):
    places = {0.0, line.length, *line.supports}
    for load in loads:
        places |= {load.at} if isinstance(load, PointLoad) else {load.start, load.end}
    nodes = np.array(sorted(places))
    mesh = skfem.MeshLine(nodes)
    basis = skfem.Basis(mesh, skfem.ElementLineHermite(), intorder=6)

    def intensity(x):
        total = np.zeros_like(x)
        for load in loads:
            if isinstance(load, LineLoad):
                along = (x - load.start) / (load.end - load.start)
                total += np.where(
                    (along > 0) & (along < 1), load.first + (load.last - load.first) * along, 0.0
                )
        return total

    stiffness = bending.assemble(basis)
    acting = skfem.LinearForm(lambda v, w: intensity(w.x[0]) * v).assemble(basis)
    sinks, turns = basis.nodal_dofs

    def freedom(freedoms, place):
        return freedoms[np.argmin(np.abs(mesh.p[0] - place))]

    for load in loads:
        if isinstance(load, PointLoad):
            acting[freedom(sinks, load.at)] += load.force
    supported = [freedom(sinks, place) for place in line.supports]
    held = list(supported)
    held += [freedom(turns, 0.0)] if line.fixed_start else []
    held += [freedom(turns, line.length)] if line.fixed_end else []
    moved = skfem.solve(*skfem.condense(stiffness, acting, D=np.array(held)))
    return mesh.p[0], moved[sinks], -moved[turns], (acting - stiffness @ moved)[supported]


@pytest.mark.parametrize("seed", seeds(FINITE_ELEMENTS))
def test_finite_elements(seed):
    line, loads = random_beam(seed, most_spans=8)
    found = finite_elements(line, loads)
    assert worst_difference(line, loads, found) < FINITE_ELEMENTS.within
    assert worst_difference(line, heavier(loads), found) > FINITE_ELEMENTS.within


# ---- collocation of the differential equation: SciPy -----------------------------------------------


@pytest.mark.parametrize("number", range(COLLOCATION.cases))
def test_collocation(number):
    assert len(BEAMS) == COLLOCATION.cases
    line, loads = BEAMS[number]
    found = collocation(line, loads)
    assert worst_difference(line, loads, found) < COLLOCATION.within
    assert worst_difference(line, heavier(list(loads)), found) > COLLOCATION.within


# ---- singularity functions: SymPy ------------------------------------------------------------------


def test_singularity_functions_continuous_beam():
    compare_symbolic(0)


def test_singularity_functions_propped_beam_with_overhang():
    compare_symbolic(1)


def test_every_symbolic_beam_is_compared():
    assert SINGULARITY.cases == 2


def compare_symbolic(number):
    pairs = list(symbolic_pairs(number))
    assert len(pairs) >= 14
    for ours, theirs in pairs:
        assert ours == pytest.approx(theirs, rel=SINGULARITY.within)
        assert ours * (1 + 1e-5) != pytest.approx(theirs, rel=SINGULARITY.within)
