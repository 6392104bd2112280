from __future__ import annotations

import math

import pytest

from calcpack.statics import BeamLine, LineLoad, PointLoad, analyse


@pytest.mark.parametrize(
    ("beam", "words"),
    [
        ((4.0, ()), "a mechanism"),
        ((4.0, (0.0,)), "a mechanism"),
        ((4.0, (2.0,)), "a mechanism"),
        ((4.0, (0.0, 0.0)), "none repeated"),
        ((4.0, (0.0, 2e-9)), "none repeated"),
        ((4.0, (3.0, 1.0)), "ascending"),
        ((4.0, (0.0, 4.1)), "off the beam"),
        ((4.0, (-0.1, 4.0)), "off the beam"),
        ((4.0, (0.0, math.nan)), "off the beam"),
        ((0.0, (0.0, 0.0)), "positive"),
        ((math.inf, (0.0, 1.0)), "positive and finite"),
        ((4.0, (1.0, 4.0), True), "the start is fixed but has no support"),
        ((4.0, (0.0, 3.0), False, True), "the end is fixed but has no support"),
        ((4.0, (2.0,), True), "the start is fixed"),
    ],
)
def test_beams_that_cannot_stand_are_refused(beam, words):
    with pytest.raises(ValueError, match=words):
        BeamLine(*beam)


def test_supports_that_all_but_touch_an_end_are_moved_onto_it():
    line = BeamLine(5.0, (1e-10, 5.0 - 1e-10))
    assert line.supports == (0.0, 5.0)
    assert line.spans == ((0.0, 5.0),)


@pytest.mark.parametrize(
    ("load", "words"),
    [
        (PointLoad(5.1, 1.0), "off the beam"),
        (PointLoad(math.nan, 1.0), "off the beam"),
        (PointLoad(1.0, math.inf), "finite"),
        (LineLoad(-0.1, 2.0, 1.0, 1.0), "off the beam"),
        (LineLoad(0.0, 5.1, 1.0, 1.0), "off the beam"),
        (LineLoad(3.0, 2.0, 1.0, 1.0), "backwards"),
        (LineLoad(0.0, 2.0, math.nan, 1.0), "finite"),
    ],
)
def test_loads_that_make_no_sense_are_refused(load, words):
    with pytest.raises(ValueError, match=words):
        analyse(BeamLine(5.0, (0.0, 5.0)), [[load]])
