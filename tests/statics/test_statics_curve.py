from __future__ import annotations

import numpy as np
import pytest

from calcpack.statics import BeamLine, Curve, Extreme, LineLoad, PointLoad, analyse


def curve(breaks, *pieces, preferred=()):
    degree = max(len(piece) for piece in pieces)
    return Curve(
        np.array(breaks, dtype=float),
        np.array([[*piece, *[0.0] * (degree - len(piece))] for piece in pieces], dtype=float),
        preferred,
    )


def test_largest_looks_at_both_sides_of_jumps_and_at_turning_points():
    jumping = curve([0, 1, 2], [1.0, 3.0], [-2.0, 1.0])
    assert jumping.largest == Extreme(4.0, 1.0)
    assert jumping.smallest == Extreme(-2.0, 1.0)
    turning = curve([0, 2], [0.0, 2.0, -1.0])
    assert turning.largest == pytest.approx((1.0, 1.0))


def test_of_equal_extremes_the_first_is_named_whatever_the_rounding():
    for noise in (-1e-13, 0.0, 1e-13):
        twice = curve([0, 1, 2, 3, 4], [0.0, 5.0], [5.0, -5.0], [0.0, 5.0 + noise], [5.0 + noise, -5.0])
        assert twice.largest.at == 1.0


def test_a_plateau_gives_its_middle_whatever_the_rounding():
    for noise in (-1e-13, 0.0, 1e-13):
        flat = curve([0, 1, 2, 5, 6], [0.0, 5.0], [5.0, noise], [5.0 + noise], [5.0, -5.0])
        assert flat.largest.at == pytest.approx(3.0)


def test_a_plateau_over_a_support_names_the_support():
    response = analyse(BeamLine(4.0, (0.0, 4.0)), [[PointLoad(2.0, 10.0)]])
    assert response.curve("shear").largest == Extreme(5.0, 0.0)
    assert response.curve("shear").smallest == Extreme(-5.0, 4.0)
    assert response.curve("moment").largest == pytest.approx((10.0, 2.0))


def test_four_point_bending_names_midspan():
    response = analyse(BeamLine(6.0, (0.0, 6.0)), [[PointLoad(1.7, 10.0), PointLoad(4.3, 10.0)]])
    assert response.curve("moment").largest == pytest.approx((17.0, 3.0))


def test_largest_absolute_keeps_its_sign_and_of_two_alike_takes_the_first():
    response = analyse(
        BeamLine(4.0, (0.0, 4.0)), [[LineLoad(0.0, 4.0, 6.0, 6.0)], [LineLoad(0.0, 4.0, -6.0, -6.0)]]
    )
    assert response.curve("shear", 0).largest_absolute == pytest.approx((12.0, 0.0))
    assert response.curve("shear", 1).largest_absolute == pytest.approx((-12.0, 0.0))
    uneven = analyse(BeamLine(4.0, (0.0, 4.0)), [[PointLoad(3.0, 4.0)]])
    assert uneven.curve("shear").largest_absolute == pytest.approx((-3.0, 4.0))


def test_zero_at_an_end_is_the_smallest_moment_of_a_simple_beam():
    response = analyse(BeamLine(7.3, (0.0, 7.3)), [[LineLoad(0.0, 7.3, 6.1, 2.3)]])
    smallest = response.curve("moment").smallest
    assert smallest.at == 0.0
    assert smallest.value == pytest.approx(0.0, abs=1e-12)


def test_values_on_either_side():
    response = analyse(BeamLine(4.0, (0.0, 4.0)), [[PointLoad(1.0, 4.0)]])
    shear = response.curve("shear")
    assert shear.at(1.0, side="left") == pytest.approx(3.0)
    assert shear.at(1.0, side="right") == pytest.approx(-1.0)
    assert shear.at(1.0 + 1e-10, side="left") == pytest.approx(3.0)  # the same place
    assert shear.at(4.0) == pytest.approx(-1.0)
    assert shear.at(0.0, side="left") == pytest.approx(3.0)
    for place in (-0.1, 4.1, float("nan")):
        with pytest.raises(ValueError, match="off the beam"):
            shear.at(place)


def test_zeros():
    assert curve([0, 2], [-1.0, 1.0]).zeros() == pytest.approx((1.0,))
    assert curve([0, 1, 2], [3.0], [-3.0]).zeros() == (1.0,)
    assert curve([0, 1, 2], [3.0], [2.0]).zeros() == ()
    assert curve([0, 2], [1.0, -2.0, 1.0]).zeros() == pytest.approx((1.0,))  # touches
    assert curve([0, 1, 3, 4], [1.0, -1.0], [0.0], [0.0, -1.0]).zeros() == pytest.approx((2.0,))  # stretch
    assert curve([0, 1, 2], [1.0, -1.0], [0.0, -1.0]).zeros() == pytest.approx((1.0,))  # at a break
    assert curve([0, 1, 2], [0.0, 1.0], [1.0, -1.0]).zeros() == (0.0, 2.0)  # both ends


def test_sample_shows_both_sides_of_every_break_and_stays_in_order():
    response = analyse(BeamLine(4.0, (0.0, 4.0)), [[PointLoad(1.0, 4.0)]])
    x, y = response.curve("shear").sample(9)
    assert np.all(np.diff(x) >= 0)
    assert y[x == 1.0] == pytest.approx([3.0, -1.0])
    assert len(x) == 9 - 3 + 4
    assert set(np.linspace(0, 4, 9)) <= set(x.tolist())
    moment = response.curve("moment")
    x, y = moment.sample(50)
    np.testing.assert_allclose(y, np.where(x <= 1, 3 * x, 4 - x), atol=1e-12)
