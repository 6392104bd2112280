"""The envelope against every placement there is."""

from __future__ import annotations

from itertools import pairwise, product

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from random_beams import QUICK, load_lists, loaded_lines

from calcpack.statics import BeamLine, LineLoad, PointLoad, analyse, enclosing, envelope

QUANTITIES = ("moment", "shear", "rotation", "deflection")


def all_placements(response, always, placed):
    """Every one of the 2^n combinations."""
    choices = product(*[(0.0, factor) if factor else (0.0,) for factor in placed])
    return response.combined(np.array([np.add(always, choice) for choice in choices]))


@settings(QUICK, max_examples=40)
@given(loaded_lines(sets=5, most_spans=4), st.lists(st.sampled_from([0.0, 1.0, 1.5]), min_size=5, max_size=5))
def test_nothing_is_worse_and_everything_is_reached(case, placed):
    line, sets = case
    response = analyse(line, sets)
    always = np.array([1.35, 0.7, 0.0, 0.0, -0.3])
    every = all_placements(response, always, placed)
    worst = envelope(response, always, placed)
    x = np.unique(np.concatenate([np.linspace(0, line.length, 101), response.breaks]))
    for quantity in QUANTITIES:
        band = getattr(worst, quantity)
        for side in ("left", "right"):
            values = np.array([every.curve(quantity, row).values(x, side) for row in range(every.sets)])
            slack = 1e-9 * (np.abs(values).max() + 1e-12)
            np.testing.assert_allclose(band.upper.values(x, side), values.max(axis=0), atol=slack)
            np.testing.assert_allclose(band.lower.values(x, side), values.min(axis=0), atol=slack)
        extremes = [every.curve(quantity, row).largest.value for row in range(every.sets)]
        assert band.largest.value == pytest.approx(max(extremes), abs=slack)
        extremes = [every.curve(quantity, row).smallest.value for row in range(every.sets)]
        assert band.smallest.value == pytest.approx(min(extremes), abs=slack)
    np.testing.assert_allclose(worst.reactions_max, every.reactions.max(axis=0), atol=1e-9 * 1e3)
    np.testing.assert_allclose(worst.reactions_min, every.reactions.min(axis=0), atol=1e-9 * 1e3)


def span_by_span(spans, load, overhang=0.0):
    supports = np.concatenate([[0.0], np.cumsum(spans)])
    length = float(supports[-1]) + overhang
    line = BeamLine(length, tuple(supports.tolist()))
    places = sorted({*supports.tolist(), length})
    return line, [[LineLoad(a, b, load, load)] for a, b in pairwise(places)]


def test_an_envelope_that_forgot_one_span_or_has_a_millionth_too_much_is_told_apart():
    line, sets = span_by_span([5.0, 6.0, 4.0], 3.0)
    response = analyse(line, sets)
    every = all_placements(response, [1.0] * 3, [1.5] * 3)
    largest = max(every.curve("moment", row).largest.value for row in range(every.sets))
    assert envelope(response, [1.0] * 3, [1.5] * 3).moment.largest.value == pytest.approx(largest, rel=1e-12)
    heavier = envelope(response, [1.0] * 3, [1.5, 1.5, 1.5 * (1 + 1e-6)])
    assert heavier.moment.largest.value != pytest.approx(largest, rel=1e-9)
    short = envelope(response, [1.0] * 3, [1.5, 1.5, 0.0])
    assert short.moment.largest.value < largest * (1 - 1e-3)


def test_a_point_of_an_unloaded_span_sees_signs_change_within_the_span():
    """Between a span's fixed points neighbours lift, beyond them they press: the split is inside."""
    line, sets = span_by_span([6.0, 6.0, 6.0, 6.0], 10.0)
    band = envelope(analyse(line, sets), [0.0] * 4, [1.0] * 4).moment
    assert len(band.upper.breaks) > len(line.supports)
    assert band.upper.at(7.0) > 0 > band.lower.at(7.0)


@pytest.mark.parametrize(
    ("spans", "case"),
    [([6.0, 4.0], 0), ([3.0, 3.0, 3.0], 1), ([5.0, 2.0, 7.0], 2)],
)
def test_upper_and_lower_have_no_gaps(spans, case):
    line, sets = span_by_span(spans, 8.0, overhang=1.5 * (case == 2))
    worst = envelope(analyse(line, sets), np.zeros(len(sets)), np.ones(len(sets)))
    for curve in (worst.moment.upper, worst.moment.lower, worst.deflection.upper, worst.deflection.lower):
        inner = curve.breaks[1:-1]
        size = max(abs(curve.largest.value), abs(curve.smallest.value))
        np.testing.assert_allclose(
            curve.values(inner, "left"), curve.values(inner, "right"), atol=1e-9 * size
        )


def test_only_what_is_always_there():
    line, sets = span_by_span([5.0, 6.0], 3.0)
    response = analyse(line, sets)
    worst = envelope(response, [1.0, 1.0], [0.0, 0.0])
    combined = response.combined([1.0, 1.0])
    assert worst.moment.largest == combined.curve("moment").largest
    assert worst.moment.smallest == combined.curve("moment").smallest
    assert np.array_equal(worst.reactions_max, worst.reactions_min)


def test_uplift_at_a_support_opposite_a_loaded_overhang():
    line, sets = span_by_span([6.0], 10.0, overhang=3.0)
    worst = envelope(analyse(line, sets), [0.0, 0.0], [1.0, 1.0])
    assert worst.reactions_min[0] == pytest.approx(-10 * 3 * 1.5 / 6)
    assert worst.reactions_max[0] == pytest.approx(30.0)


def test_shear_largest_absolute_of_a_two_span_beam():
    """5/8 of a span's load either side of the middle support."""
    line, sets = span_by_span([4.0, 4.0], 10.0)
    worst = envelope(analyse(line, sets), [0.0, 0.0], [1.0, 1.0])
    assert abs(worst.shear.largest_absolute.value) == pytest.approx(25.0)
    assert worst.shear.smallest == pytest.approx((-25.0, 4.0))
    assert worst.shear.largest == pytest.approx((25.0, 4.0))


def test_sets_that_do_nothing_and_sets_that_are_equal():
    line = BeamLine(8.0, (0.0, 4.0, 8.0))
    same = [LineLoad(0.0, 4.0, 5.0, 5.0)]
    worst = envelope(analyse(line, [[], same, same, [PointLoad(4.0, 9.0)]]), [0.0] * 4, [1.0] * 4)
    once = envelope(analyse(line, [same]), [0.0], [2.0])
    assert worst.moment.largest == pytest.approx(once.moment.largest)
    assert worst.moment.smallest == pytest.approx(once.moment.smallest)
    np.testing.assert_allclose(worst.reactions_max, once.reactions_max + np.array([0.0, 9.0, 0.0]))


def test_wrong_factors_are_refused():
    response = analyse(BeamLine(4.0, (0.0, 4.0)), [[PointLoad(1.0, 1.0)]])
    with pytest.raises(ValueError, match="factors for 1 load sets"):
        envelope(response, [1.0, 1.0], [0.0])
    with pytest.raises(ValueError, match="must not be negative"):
        envelope(response, [1.0], [-1.0])
    with pytest.raises(ValueError, match="must not be negative"):
        envelope(response, [1.0], [float("nan")])
    with pytest.raises(ValueError, match="no band"):
        enclosing([])


@settings(QUICK, max_examples=40)
@given(st.data())
def test_the_band_about_several(data):
    line, sets = span_by_span([5.0, 6.0], 3.0, overhang=1.0)
    response = analyse(line, [*sets, data.draw(load_lists(line))])
    always = [[1.35, 1.35, 1.35, 0.0], [1.0, 1.0, 1.0, 1.5], [0.9, 0.9, 0.9, -1.5]]
    envelopes = [envelope(response, row, [0.5, 0.5, 0.5, 0.3]) for row in always]
    x = np.unique(np.concatenate([np.linspace(0, line.length, 201), response.breaks]))
    for quantity in ("moment", "shear"):
        bands = [getattr(each, quantity) for each in envelopes]
        about = enclosing(bands)
        for side in ("left", "right"):
            upper = np.max([band.upper.values(x, side) for band in bands], axis=0)
            lower = np.min([band.lower.values(x, side) for band in bands], axis=0)
            np.testing.assert_allclose(
                about.upper.values(x, side), upper, atol=1e-9 * (1 + np.abs(upper).max())
            )
            np.testing.assert_allclose(
                about.lower.values(x, side), lower, atol=1e-9 * (1 + np.abs(lower).max())
            )
        assert about.largest.value == pytest.approx(max(band.largest.value for band in bands))
