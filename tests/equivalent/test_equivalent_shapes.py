"""Telling the shape of a load."""

from __future__ import annotations

import random

import pytest

from calcpack.equivalent import equivalent_factor, equivalents, shape_of
from calcpack.statics import LineLoad, Load, PointLoad


def trapezoid(span: float, rise: float, peak: float) -> list[Load]:
    return [
        LineLoad(0, rise, 0, peak, "P1"),
        LineLoad(rise, span - rise, peak, peak, "P1"),
        LineLoad(span - rise, span, peak, 0, "P1"),
    ]


def cut_up(loads: list[Load], rng: random.Random) -> list[Load]:
    """The same load in more pieces, in any order, some as two loads on top of each other."""
    pieces: list[Load] = []
    for load in loads:
        assert isinstance(load, LineLoad)
        middle = load.start + rng.uniform(0.1, 0.9) * (load.end - load.start)
        there = load.first + (load.last - load.first) * (middle - load.start) / (load.end - load.start)
        part = rng.uniform(0.2, 0.8)
        pieces += [
            LineLoad(load.start, middle, part * load.first, part * there, load.source),
            LineLoad(load.start, middle, (1 - part) * load.first, (1 - part) * there, load.source),
            LineLoad(middle, load.end, there, load.last, load.source),
        ]
    rng.shuffle(pieces)
    return pieces


@pytest.mark.parametrize("seed", range(30))
def test_shapes_are_told_however_the_load_is_cut_up(seed: int) -> None:
    rng = random.Random(seed)
    span, peak = rng.uniform(1, 14), rng.choice([-1, 1]) * rng.uniform(0.5, 60)
    rise = rng.uniform(0.05, 0.45) * span
    for loads, kind, expected in (
        (trapezoid(span, rise, peak), "trapezoid", rise),
        (
            [LineLoad(0, span / 2, 0, peak, "P1"), LineLoad(span / 2, span, peak, 0, "P1")],
            "triangle",
            span / 2,
        ),
        ([LineLoad(0, span, peak, peak, "P1")], "uniform", 0.0),
    ):
        shape = shape_of(span, cut_up(loads, rng))
        assert shape.kind == kind
        assert shape.rise == pytest.approx(expected, rel=1e-9)
        assert shape.peak == pytest.approx(peak, rel=1e-12)
        assert len(shape.lines) == len(loads)
        assert shape.points == ()
        assert {line.source for line in shape.lines} == {"P1"}


def test_the_side_ratio_gives_the_equivalents() -> None:
    for loads in (trapezoid(6, 2, 9), trapezoid(6, 2.999, 9), [LineLoad(0, 6, 9, 9)]):
        shape = shape_of(6, loads)
        found = equivalents(6, loads)
        assert found.moment == pytest.approx(
            shape.peak * equivalent_factor("moment", shape.side_ratio), rel=1e-12
        )


def test_rounding_is_overlooked_and_more_is_not() -> None:
    for error, kind in ((1e-11, "trapezoid"), (1e-7, "general")):
        wrong_place = [
            LineLoad(0, 2 + error, 0, 9),
            LineLoad(2 + error, 4, 9, 9),
            LineLoad(4, 6, 9, 0),
        ]
        wrong_size = [LineLoad(0, 2, 9 * error, 9), *trapezoid(6, 2, 9)[1:]]
        assert shape_of(6, wrong_place).kind == kind
        assert shape_of(6, wrong_size).kind == kind
    nearly = shape_of(
        6, [LineLoad(0, 3 - 1e-11, 0, 9), LineLoad(3 - 1e-11, 3 + 1e-11, 9, 9), LineLoad(3 + 1e-11, 6, 9, 0)]
    )
    assert nearly.kind == "triangle"
    assert nearly.rise == 3


@pytest.mark.parametrize(
    "loads",
    [
        [PointLoad(3, 5)],
        [LineLoad(0, 6, 4, 4), PointLoad(2, 5)],
        [LineLoad(0, 6, 0, 9)],  # one slope
        [LineLoad(0, 3, 4, 4)],  # half the span
        [LineLoad(1, 5, 4, 4)],  # symmetric, but not to the supports
        [LineLoad(0, 2, 0, 9), LineLoad(2, 6, 9, 0)],  # skew triangle
        [LineLoad(0, 2, 0, 9), LineLoad(2, 5, 9, 9), LineLoad(5, 6, 9, 0)],  # skew trapezoid
        [LineLoad(0, 3, 9, 0), LineLoad(3, 6, 0, 9)],  # triangle upside down
        [LineLoad(0, 2, 0, 9), LineLoad(2, 3, 9, 10), LineLoad(3, 4, 10, 9), LineLoad(4, 6, 9, 0)],
        [LineLoad(0, 2, 1, 9), LineLoad(2, 4, 9, 9), LineLoad(4, 6, 9, 1)],  # on top of a uniform load
        [LineLoad(0, 2, 0, 9), LineLoad(4, 6, 9, 0)],  # a gap in the middle
    ],
)
def test_anything_else_is_general(loads: list[Load]) -> None:
    shape = shape_of(6, loads)
    assert shape.kind == "general"
    assert shape.rise == 0
    again = equivalents(6, [*shape.lines, *shape.points])
    assert again.moment == pytest.approx(equivalents(6, loads).moment, rel=1e-12)
    assert again.fixed_end_moment == pytest.approx(equivalents(6, loads).fixed_end_moment, rel=1e-12)


def test_no_load_is_uniform_and_empty() -> None:
    shape = shape_of(6, [])
    assert (shape.kind, shape.peak, shape.lines, shape.points) == ("uniform", 0, (), ())
    assert shape_of(6, [PointLoad(0, 5), PointLoad(6, 5)]).kind == "uniform"


def test_loads_of_several_sources_have_none() -> None:
    shape = shape_of(6, [LineLoad(0, 6, 1, 1, "P1"), LineLoad(0, 6, 2, 2, "P2")])
    assert shape.lines == (LineLoad(0, 6, 3, 3, ""),)
