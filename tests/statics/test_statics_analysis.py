"""The analysis against the equations it claims to solve, on beams drawn at random."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from random_beams import QUICK, loaded_lines

from calcpack.statics import BeamLine, LineLoad, PointLoad, Response, analyse
from calcpack.statics.polynomials import derivative, evaluate

CLOSE = 1e-9


def scales(line, loads):
    """Sizes of the forces and moments at play, to judge differences by."""
    force = sum(
        abs(load.force)
        if isinstance(load, PointLoad)
        else (abs(load.first) + abs(load.last)) * (load.end - load.start)
        for load in loads
    )
    return force + 1e-12, (force + 1e-12) * line.length


def moved(loads, place):
    """Sum of force × distance to a place."""
    total = 0.0
    for load in loads:
        if isinstance(load, PointLoad):
            total += load.force * (place - load.at)
        else:
            h = load.end - load.start
            centre = (load.first * h / 2 * (load.start + h / 3)) + (load.last * h / 2 * (load.end - h / 3))
            total += load.total * place - centre
    return total


def imbalance(line, loads, response):
    """How far forces, and moments about the end, are from balance, as parts of what acts."""
    force, moment = scales(line, loads)
    forces = sum(load.total for load in loads) - response.reactions[0].sum()
    arms = line.length - np.array(line.supports)
    moments = (
        response.end_moments[0, 0]
        + response.reactions[0] @ arms
        - moved(loads, line.length)
        - response.end_moments[0, 1]
    )
    return abs(forces) / force, abs(moments) / moment


@QUICK
@given(loaded_lines())
def test_forces_and_moments_balance(case):
    line, (loads,) = case
    assert max(imbalance(line, loads, analyse(line, [loads]))) < CLOSE


def test_imbalance_tells_a_load_apart_that_is_wrong_by_a_millionth():
    line = BeamLine(9.0, (0.0, 4.0, 8.0), fixed_start=True)
    loads = [LineLoad(0.0, 5.0, 3.0, 8.0), PointLoad(8.5, 4.0)]
    response = analyse(line, [loads])
    assert max(imbalance(line, loads, response)) < CLOSE
    wrong = [loads[0], PointLoad(8.5, 4.0 * (1 + 1e-6))]
    assert min(imbalance(line, wrong, response)) > CLOSE


def faults(line, loads, response: Response):
    """Every equation of the beam that is not met, as parts of what is at play."""
    widths = np.diff(response.breaks)
    force, moment = scales(line, loads)
    turn, sink = moment * line.length, moment * line.length**2
    size = {"shear": force, "moment": moment, "rotation": turn, "deflection": sink}
    right = {name: evaluate(getattr(response, name)[0], widths) for name in size}
    left = {name: getattr(response, name)[0, :, 0] for name in size}
    found = []
    # dV/dx = -w, dM/dx = V, dθ/dx = M, dv/dx = -θ, as polynomials
    for of, slope, sign in (
        ("shear", "load", -1),
        ("moment", "shear", 1),
        ("rotation", "moment", 1),
        ("deflection", "rotation", -1),
    ):
        difference = derivative(getattr(response, of)[0]) - sign * getattr(response, slope)[0]
        powers = np.arange(difference.shape[-1])
        found.append(np.abs(difference * widths[:, None] ** (powers + 1)).max() / size[of])
    # no jump but that of the shear, by what stands there
    for name in ("moment", "rotation", "deflection"):
        found.append(np.abs(right[name][:-1] - left[name][1:]).max(initial=0.0) / size[name])
    jumps = np.zeros(len(response.breaks))
    for support, reaction in zip(line.supports, response.reactions[0], strict=True):
        jumps[np.argmin(np.abs(response.breaks - support))] += reaction
    for load in loads:
        if isinstance(load, PointLoad):
            jumps[np.argmin(np.abs(response.breaks - load.at))] -= load.force
    shear = np.concatenate([left["shear"], [0.0]]) - np.concatenate([[0.0], right["shear"]])
    found.append(np.abs(shear - jumps).max() / force)
    # ends: no moment unless fixed, no rotation where fixed
    ends = (
        (line.fixed_start, left["moment"][0], response.end_moments[0, 0], left["rotation"][0]),
        (line.fixed_end, right["moment"][-1], response.end_moments[0, 1], right["rotation"][-1]),
    )
    for fixed, bending, given_moment, rotation in ends:
        found.append(abs(bending - given_moment) / moment)
        found.append(abs(rotation) / turn if fixed else abs(given_moment) / moment)
    # supports do not settle
    deflection = response.curve("deflection")
    found += [abs(deflection.at(place, side)) / sink for place in line.supports for side in ("left", "right")]
    return found


@QUICK
@given(loaded_lines())
def test_every_equation_of_the_beam_is_met(case):
    """Equilibrium, bending, continuity and supports: what meets them all is the one solution."""
    line, (loads,) = case
    assert max(faults(line, loads, analyse(line, [loads]))) < CLOSE


@pytest.mark.parametrize("name", ["shear", "moment", "rotation", "deflection", "reactions"])
def test_the_equations_tell_a_solution_apart_that_is_wrong_by_a_millionth(name):
    line = BeamLine(9.0, (0.0, 4.0, 8.0), fixed_start=True)
    loads = [LineLoad(0.0, 5.0, 3.0, 8.0), PointLoad(8.5, 4.0)]
    response = analyse(line, [loads])
    parts = {key: getattr(response, key) for key in vars(response) if not key.startswith("_")}
    parts[name] = parts[name] * (1 + 1e-6)
    assert max(faults(line, loads, response)) < CLOSE < max(faults(line, loads, Response(**parts)))


@QUICK
@given(loaded_lines())
def test_the_load_is_the_load_given(case):
    line, (loads,) = case
    response = analyse(line, [loads])
    middles = (response.breaks[1:] + response.breaks[:-1]) / 2
    expected = np.zeros(len(middles))
    for load in loads:
        if isinstance(load, LineLoad) and load.end - load.start > line.tolerance:
            along = (middles - load.start) / (load.end - load.start)
            there = (along > 0) & (along < 1)
            expected += np.where(there, load.first + (load.last - load.first) * along, 0.0)
    wide = np.diff(response.breaks) > 1e-6 * line.length  # narrower, merged places move the middle
    np.testing.assert_allclose(
        response.curve("load").values(middles)[wide], expected[wide], atol=1e-6, rtol=1e-6
    )


@QUICK
@given(loaded_lines(sets=3))
def test_superposition(case):
    line, sets = case
    factors = [1.35, -0.5, 2.0]
    scaled = [
        PointLoad(load.at, load.force * factor)
        if isinstance(load, PointLoad)
        else LineLoad(load.start, load.end, load.first * factor, load.last * factor)
        for factor, loads in zip(factors, sets, strict=True)
        for load in loads
    ]
    together = analyse(line, [scaled])
    added = analyse(line, sets).combined(factors)
    force, moment = scales(line, scaled)
    np.testing.assert_allclose(together.breaks, added.breaks)
    np.testing.assert_allclose(together.reactions, added.reactions, atol=CLOSE * force)
    np.testing.assert_allclose(together.support_moments, added.support_moments, atol=CLOSE * moment)
    np.testing.assert_allclose(
        together.deflection[..., 0], added.deflection[..., 0], atol=CLOSE * moment * line.length**2
    )


def mirrored(line, loads):
    turned = BeamLine(
        line.length,
        tuple(line.length - place for place in reversed(line.supports)),
        line.fixed_end,
        line.fixed_start,
    )
    return turned, [
        PointLoad(line.length - load.at, load.force)
        if isinstance(load, PointLoad)
        else LineLoad(line.length - load.end, line.length - load.start, load.last, load.first)
        for load in loads
    ]


@QUICK
@given(loaded_lines())
def test_a_mirrored_beam_gives_the_mirrored_answer(case):
    line, (loads,) = case
    one = analyse(line, [loads])
    turned, turned_loads = mirrored(line, loads)
    two = analyse(turned, [turned_loads])
    force, moment = scales(line, loads)
    np.testing.assert_allclose(one.reactions, two.reactions[:, ::-1], atol=CLOSE * force)
    np.testing.assert_allclose(one.end_moments, two.end_moments[:, ::-1], atol=CLOSE * moment)
    x = np.linspace(0.0, line.length, 41)[1:-1] + 1e-4 * line.length
    for quantity, sign, size in (
        ("moment", 1, moment),
        ("rotation", -1, moment * line.length),
        ("deflection", 1, moment * line.length**2),
    ):
        here = one.curve(quantity).values(x)
        there = two.curve(quantity).values(line.length - x)
        np.testing.assert_allclose(here, sign * there, atol=CLOSE * size)


def test_signs():
    """Loads down: a simple beam sags, its left half turns clockwise going down, so θ < 0 there."""
    response = analyse(BeamLine(4.0, (0.0, 4.0)), [[LineLoad(0.0, 4.0, 6.0, 6.0)]])
    assert response.curve("moment").at(2.0) == pytest.approx(12.0)
    assert response.curve("shear").at(0.0) == pytest.approx(12.0)
    assert response.curve("shear").at(4.0) == pytest.approx(-12.0)
    assert response.curve("deflection").at(2.0) > 0
    assert response.curve("rotation").at(0.0) == pytest.approx(-6.0 * 4**3 / 24)
    assert response.support_rotations[0] == pytest.approx([-16.0, 16.0])


def test_a_point_load_over_a_support_goes_straight_into_its_reaction():
    line = BeamLine(10.0, (0.0, 4.0, 10.0))
    for number, place in enumerate(line.supports):
        response = analyse(line, [[PointLoad(place, 30.0)]])
        expected = np.zeros(3)
        expected[number] = 30.0
        assert np.array_equal(response.reactions[0], expected)
        assert not response.moment.any()
        assert not response.shear.any()


def test_a_point_load_over_a_support_leaves_the_spans_as_they_were():
    """On top of others too, where the answer must not change by one bit."""
    line = BeamLine(10.0, (0.0, 4.0, 8.0), fixed_start=True)
    loads = [LineLoad(0.0, 10.0, 2.0, 7.0), PointLoad(10.0, 3.0)]
    with_it = analyse(line, [[*loads, PointLoad(0.0, 5.0), PointLoad(4.0, 5.0), PointLoad(8.0, 5.0)]])
    without = analyse(line, [loads])
    assert np.array_equal(with_it.moment, without.moment)
    np.testing.assert_allclose(with_it.reactions - without.reactions, 5.0)


def test_point_loads_at_free_tips():
    response = analyse(BeamLine(9.0, (2.0, 6.0)), [[PointLoad(0.0, 5.0)], [PointLoad(9.0, 5.0)]])
    np.testing.assert_allclose(response.support_moments, [[-10.0, 0.0], [0.0, -15.0]], atol=1e-12)
    np.testing.assert_allclose(response.reactions, [[7.5, -2.5], [-3.75, 8.75]])
    assert response.curve("shear", 0).at(0.0) == -5.0
    assert response.curve("shear", 1).at(9.0) == pytest.approx(5.0)


def test_a_fixed_end_takes_no_part_in_what_stands_over_it():
    response = analyse(BeamLine(3.0, (0.0,), fixed_start=True), [[PointLoad(0.0, 8.0), PointLoad(3.0, 2.0)]])
    assert response.reactions[0] == pytest.approx([10.0])
    assert response.end_moments[0] == pytest.approx([-6.0, 0.0])


def test_places_closer_than_a_billionth_of_the_length_are_one():
    line = BeamLine(10.0, (0.0, 5.0, 10.0))
    response = analyse(
        line,
        [
            [
                LineLoad(0.0, 5.0 + 4e-9, 3.0, 3.0),
                PointLoad(5.0 - 4e-9, 7.0),
                PointLoad(2.0, 1.0),
                PointLoad(2.0 + 8e-9, 1.0),
            ]
        ],
    )
    assert response.breaks.tolist() == [0.0, 2.0, 5.0, 10.0]
    assert response.reactions.sum() == pytest.approx(24.0)


def test_a_line_load_shorter_than_that_counts_as_a_point_load():
    line = BeamLine(10.0, (0.0, 10.0))
    short = analyse(line, [[LineLoad(4.0, 4.0 + 5e-9, 2e9, 2e9)]])
    assert short.reactions[0] == pytest.approx([6.0, 4.0])


def test_no_loads_and_no_sets():
    line = BeamLine(10.0, (0.0, 4.0, 10.0))
    nothing = analyse(line, [[]])
    assert not nothing.reactions.any()
    assert nothing.curve("moment").largest.value == 0.0
    assert analyse(line, []).sets == 0


def test_thirty_unequal_spans_with_slivers_between_loads():
    """Nothing is lost to rounding: every equation still holds to 1e-9 of what is at play nearby."""
    spans = [0.5 + 7.5 * ((7 * i) % 10) / 9 for i in range(30)]
    supports = np.concatenate([[0.0], np.cumsum(spans)])
    length = float(supports[-1])
    line = BeamLine(length, tuple(supports.tolist()))
    loads = [LineLoad(0.0, length, 4.0, 9.0)]
    for start, end in line.spans:
        middle = (start + end) / 2
        loads += [
            PointLoad(middle, 20.0),
            LineLoad(middle, middle + 5e-7, 40.0, 0.0),
            PointLoad(middle + 1e-6, 3.0),
        ]
    response = analyse(line, [loads])
    assert max(imbalance(line, loads, response)) < 1e-13
    assert max(faults(line, loads, response)) < 1e-13


def test_combinations_many_at_once_and_wrong_numbers_of_factors():
    line = BeamLine(6.0, (0.0, 6.0))
    response = analyse(line, [[PointLoad(3.0, 2.0)], [LineLoad(0.0, 6.0, 1.0, 1.0)]])
    both = response.combined(np.array([[1.0, 1.0], [2.0, 0.0]]))
    assert both.sets == 2
    assert both.curve("moment", 1).largest.value == pytest.approx(6.0)
    with pytest.raises(ValueError, match="1 factors for 2 load sets"):
        response.combined([1.0])


def test_results_cannot_be_changed_by_mistake():
    response = analyse(BeamLine(6.0, (0.0, 6.0)), [[PointLoad(3.0, 2.0)]])
    with pytest.raises(ValueError, match="read-only"):
        response.moment[0, 0, 0] = 1.0


def test_zero_shear():
    line = BeamLine(8.0, (0.0, 6.0))
    response = analyse(line, [[LineLoad(0.0, 6.0, 10.0, 10.0), PointLoad(8.0, 6.0)]])
    # R = 30 - 6 × 2/6 = 28 kN: shear is zero at 2.8 m, and turns over at the support
    assert response.zero_shear() == pytest.approx((2.8, 6.0))
