"""Critical moments beside eigenvalues of a beam in sideways deflection and twist: how far off, stated.

The element of ``eigenvalue_en1993`` is checked first against closed solutions.
"""

import math

import numpy as np
import pytest
from eigenvalue_en1993 import critical_factor

from calcpack.clauses.en1993.buckling import (
    critical_moment,
    held_factor,
    held_stiffness,
    wave_share,
)
from calcpack.statics import LineLoad, PointLoad
from calcpack.verification.ours.en1993_eigenvalues import (
    HALF,
    HEIGHTS,
    IPE,
    SHAPE,
    TORSION,
    WARPING,
    WEAK,
    diagram,
    eigenvalue,
    extremes,
    own,
    shapes,
)
from calcpack.verification.reckon import rows

STATED = {
    row.text("shape"): tuple(
        (float(row.text(f"{where} least")), float(row.text(f"{where} most"))) for where in HEIGHTS
    )
    for row in rows("en1993", "eigenvalues")
}
"""Shape -> (lowest, highest) at the top flange, at the shear centre, at the bottom flange."""


def even(length):
    return (math.pi / length) * math.sqrt(WEAK * (TORSION + WARPING * (math.pi / length) ** 2))


# The element itself.


@pytest.mark.parametrize("length", [3.0, 6.0, 12.0])
def test_element_under_an_even_moment(length):
    found = critical_factor(length, WEAK, WARPING, TORSION, lambda x: 1.0)
    assert found == pytest.approx(even(length), rel=1e-5)


def test_element_cantilever_with_a_load_at_its_tip():
    # Timoshenko and Gere: P = 4.013 sqrt(E Iz G It) / L^2 for a section that does not warp (from memory)
    found = critical_factor(
        4.0, WEAK, 1e-9, TORSION, lambda x: x - 4.0, held=[0.0], clamped=[0.0], elements=80
    )
    assert found == pytest.approx(4.013 * math.sqrt(WEAK * TORSION) / 16, rel=5e-3)


def test_element_is_fine_enough():
    curve = diagram(6.0, [PointLoad(3.0, 1.0)])
    coarse, fine = (eigenvalue(curve, [PointLoad(3.0, 1.0)], HALF, elements=n) for n in (12, 48))
    assert coarse == pytest.approx(fine, rel=1e-3)


# The clauses beside it: lowest and highest M_cr over the eigenvalue's, over spans of 3, 6 and 12 m, as
# shared/verification/en1993.toml states them.


@pytest.mark.parametrize("name", STATED)
@pytest.mark.parametrize(("where", "height"), [("top", HALF), ("centre", 0.0), ("bottom", -HALF)])
def test_shape_and_load_height_beside_the_eigenvalue(name, where, height):
    ratios = []
    for length in (3.0, 6.0, 12.0):
        loads, start, end = shapes(length)[name]
        curve = diagram(length, loads, start, end)
        ratios.append(own(curve, loads, height) / eigenvalue(curve, loads, height))
    assert (min(ratios), max(ratios)) == extremes(name, where)
    low, high = STATED[name][("top", "centre", "bottom").index(where)]
    assert low <= min(ratios), ratios
    assert max(ratios) <= high, ratios


@pytest.mark.parametrize("psi", [1.0, 0.75, 0.5, 0.25, 0.0, -0.25, -0.5, -0.75, -1.0])
def test_end_moments_beside_the_eigenvalue(psi):
    for length in (3.0, 6.0, 12.0):
        curve = diagram(length, start=1.0, end=psi)
        ratio = own(curve, [], 0.0) / eigenvalue(curve, [], 0.0)
        assert 0.92 <= ratio <= 1.021


def test_arbitrary_diagrams_beside_the_eigenvalue():
    """End moments and two loads at random: never more than 3 % high, on top 5 %."""
    rng = np.random.default_rng(7)
    for _ in range(25):
        length = float(rng.choice([3.0, 6.0, 12.0]))
        places, forces = rng.uniform(0.1, 0.9, 2) * length, rng.uniform(0.3, 1.0, 2)
        loads = [PointLoad(float(a), float(f)) for a, f in zip(places, forces, strict=True)]
        start, end = (float(-value) * length / 4 for value in rng.uniform(0, 1, 2))
        curve = diagram(length, loads, start, end)
        for height, high in ((HALF, 1.05), (0.0, 1.03), (-HALF, 1.03)):
            assert own(curve, loads, height) / eigenvalue(curve, loads, height) <= high


def test_a_wrong_factor_would_be_seen():
    """The bounds above are tight enough to fail: without C1, or with a load height left out."""
    loads = [LineLoad(0, 6.0, 1, 1)]
    curve = diagram(6.0, loads)
    assert critical_moment(IPE, 6.0, 1.0, 0.0) / eigenvalue(curve, loads, 0.0) < 0.9
    assert own(curve, loads, 0.0) / eigenvalue(curve, loads, HALF) > 1.2


# The top flange held all along.


@pytest.mark.parametrize("length", [3.0, 6.0, 12.0])
@pytest.mark.parametrize("hold", [1.0, 1.2, 1.5])
def test_top_flange_held_under_uniform_load(length, hold):
    """Load on the held flange: beside the eigenvalue never high, and low as sagging is left out."""
    loads = [LineLoad(0, length, 1, 1)]
    curve = diagram(length, loads, -hold * length**2 / 12, -hold * length**2 / 12)
    factor = held_factor(IPE, curve, 0.0, length, length)
    found = factor * sum(held_stiffness(IPE, length)) / SHAPE.depth
    ratio = found / eigenvalue(curve, loads, HALF, elements=24, top_held=HALF)
    assert 0.80 <= ratio <= 1.002


@pytest.mark.parametrize("length", [3.0, 6.0, 12.0])
@pytest.mark.parametrize(("start", "end"), [(-1.0, -1.0), (-1.0, 0.0), (-1.0, -0.5)])
def test_top_flange_held_under_end_moments(length, start, end):
    curve = diagram(length, start=start, end=end)
    found = held_factor(IPE, curve, 0.0, length, length) * sum(held_stiffness(IPE, length)) / SHAPE.depth
    assert found == pytest.approx(eigenvalue(curve, [], 0.0, elements=24, top_held=HALF), rel=2e-3)


def test_even_moment_has_the_share_of_one_and_its_size_does_not_matter():
    assert wave_share(diagram(5.0, start=7.0, end=7.0), 0.0, 5.0, 7.0) == pytest.approx(1.0, rel=1e-12)
    small, large = (diagram(5.0, start=-size, end=0.3 * size) for size in (1e-3, 1e3))
    one, other = (held_factor(IPE, curve, 0.0, 5.0, 5.0) for curve in (small, large))
    assert one == pytest.approx(other, rel=1e-9)
