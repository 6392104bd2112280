"""How bars lie in a web of round sizes, worked by hand: 12 in wide, 20 in deep, 1.5 in cover, No. 3 stirrups.

Between the stirrups there are 12 - 2 (1.5 + 0.375) = 8.25 in.
"""

import pytest
from aci_samples import PSI, cage, group

from calcpack.clauses.aci318.arrangement import Group, arranged, crack_spacing, least_cover
from calcpack.clauses.aci318.strength import INCH
from calcpack.clauses.bars import Bar, bar

WEB = cage(12, 20)


def test_four_bars_side_by_side():
    """4 No. 8: (8.25 - 1) / 3 from centre to centre, the outer ones 3.625 in from the middle."""
    four = group(4, "#8", 12, 20)
    assert four.spacing / INCH == pytest.approx(7.25 / 3)
    assert [x / INCH for x, _ in four.places] == pytest.approx([-3.625, -3.625 / 3, 3.625 / 3, 3.625])
    assert {round(y / INCH, 9) for _, y in four.places} == {2.375}


def test_two_bars_side_by_side():
    two = group(2, "#8", 12, 20)
    assert two.spacing / INCH == pytest.approx(7.25)
    assert [x / INCH for x, _ in two.places] == pytest.approx([-3.625, 3.625])


def test_a_bar_alone_stands_in_the_middle():
    one = group(1, "#8", 12, 20)
    assert one.spacing / INCH == pytest.approx(7.25)
    assert one.places == [(0.0, pytest.approx(2.375 * INCH))]


def test_layers_are_a_bar_diameter_apart_or_an_inch():
    """25.2.2 asks for 1 in between layers; a thicker bar keeps its own diameter by common practice."""
    for size, step in (("#5", 1.625), ("#8", 2.0), ("#10", 2.54)):
        heights = Group(bar(size), (2, 2), WEB).heights
        assert (heights[1] - heights[0]) / INCH == pytest.approx(step)


def test_the_second_layer_stands_over_the_outer_bars():
    five = group(5, "#8", 12, 20)
    assert five.layers == (4, 1)
    assert five.words == "5 #8 in two layers"
    assert group(4, "#8", 12, 20).words == "4 #8"
    assert five.places[4] == (0.0, pytest.approx(4.375 * INCH))
    assert [x / INCH for x, _ in group(6, "#8", 12, 20).places[4:]] == pytest.approx([-3.625, 3.625])


@pytest.mark.parametrize(
    ("count", "layers", "fits"),
    [(1, (1,), True), (4, (4,), True), (5, (4, 1), True), (8, (4, 4), True), (9, (5, 4), False),
     (12, (6, 6), False)],
)  # fmt: skip
def test_one_layer_before_two(count, layers, fits):
    """Four No. 8 go side by side: 4 + 3 x 1 = 7 in, a fifth would need 9 in of the 8.25."""
    found = arranged(count, bar("#8"), WEB)
    assert (found.layers, found.fits) == (layers, fits)


def test_no_bar_goes_into_a_web_that_is_all_cover():
    assert arranged(1, bar("#8"), cage(4, 20)).layers == (1,)
    for width in (2, 4):
        assert not arranged(1, bar("#8"), cage(width, 20)).fits


def test_three_layers_do_not_count_as_fitting():
    assert Group(bar("#8"), (2, 2), WEB).fits
    assert not Group(bar("#8"), (2, 2, 2), WEB).fits


@pytest.mark.parametrize(
    ("stress", "cover", "spacing"),
    [(40_000, 2.0, 10.0), (40_000, 1.2, 12.0), (40_000, 1.0, 12.0), (60_000, 0.0, 8.0), (20_000, 4.0, 20.0)],
)
def test_spacing_for_crack_control(stress, cover, spacing):
    """Table 24.3.2: the lesser of 15 (40 000 / f_s) - 2.5 c_c and 12 (40 000 / f_s)."""
    assert crack_spacing(stress * PSI, cover * INCH) / INCH == pytest.approx(spacing)


@pytest.mark.parametrize(("diameter", "inches"), [(0.016, 1.5), (0.0161, 2.0)])
def test_cover_of_thicker_stirrups_in_the_weather(diameter, inches):
    """Table 20.5.1.3.1: 1.5 in up to No. 5 (16 mm), 2 in for No. 6 and above."""
    assert least_cover("weather", diameter, diameter) / INCH == pytest.approx(inches)


def test_thick_main_bars_in_the_weather_stand_behind_their_stirrups():
    """Main bars of 25 mm need 50.8 mm, stirrups of 10 mm stand before them: 40.8 mm."""
    assert least_cover("weather", 0.010, 0.025) == pytest.approx(0.0408)
    thin = Bar("x", 0.016, 2e-4)
    assert least_cover("weather", 0.010, thin.diameter) == pytest.approx(0.0381)
