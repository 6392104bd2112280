"""Strength figures that are hard to draw: many zones, wide flanges, ratios beyond one, jumps."""

from __future__ import annotations

import functools
import itertools
from collections.abc import Callable
from functools import partial

import numpy as np
from figure_cases import HOSTILE, responses

from calcpack.figures import Figure, bar_layout, capacity_figure, deflected_shape, section_figure
from calcpack.job.library import rolled_sections
from calcpack.job.model import Section
from calcpack.statics.loads import LineLoad

STOPS = (0.0, 6.0, 11.5, 17.0)
THREE = [(at, "column", f"C{n}") for n, at in enumerate(STOPS, 1)]
TWO = [(0.0, "column", "C1"), (6.0, "beam", "B9")]


def section(shape, **dimensions):
    return Section(key="s", shape=shape, dimensions=dimensions, area=0.1, inertia=0.001)


RB = section("rectangle", width=0.3, depth=0.55)
TEE = section("tee", width=0.3, depth=0.6, flange_width=1.5, flange_depth=0.16)
FOUR = [(x, 0.06, 0.02) for x in (-0.09, -0.03, 0.03, 0.09)]
TWO_UP = [(x, 0.492, 0.016) for x in (-0.092, 0.092)]
SIX = [(x, y, 0.025) for y in (0.065, 0.115) for x in (-0.085, 0.0, 0.085)]


@functools.cache
def three_spans():
    sets = [
        [LineLoad(0, 17, 14, 14)],
        *([LineLoad(a, b, 22, 22)] for a, b in itertools.pairwise(STOPS)),
    ]
    curves, _ = responses(17.0, STOPS, sets, [1.35, 0, 0, 0], [0, 1.5, 1.5, 1.5], 40000.0)
    return {name: tuple((x, y) for x, y, _ in found) for name, found in curves.items()}


def three(quantity, capacity, system="SI", **options):
    return capacity_figure(
        17.0, THREE, quantity, three_spans()[quantity], capacity, system, mark="B6", **options
    )


MOMENTS = [
    (0, 1.2, 120, 60),
    (1.2, 4.4, 200, 60, 200, 60),
    (4.4, 4.8, 200, 60, 120, 200),
    (4.8, 7.4, 120, 200),
    (7.4, 9.5, 140, 60),
    (9.5, 13, 120, 200),
    (13, 17, 160, 60),
]
SHEARS = [
    (start, end, held, held)
    for start, end, held in [
        (0, 2, 190),
        (2, 4, 110),
        (4, 8, 230),
        (8, 9.5, 90),
        (9.5, 13, 210),
        (13, 17, 180),
    ]
]
PARABOLA = np.linspace(0.0, 6.0, 61)


def simple(quantity="moment", capacity=((0.0, 6.0, 90.0, 30.0),), system="SI", **options):
    x = PARABOLA
    y = 12.0 * x * (6.0 - x) / 2 if quantity == "moment" else 36.0 - 12.0 * x
    return capacity_figure(
        6.0, TWO, quantity, ((x, y), (x, np.minimum(y, 0.0))), list(capacity), system, mark="B5", **options
    )


LAYERS = [
    ("bottom", 0.0, 17.0, "3 ⌀20"),
    ("bottom", 1.2, 4.8, "2 ⌀20"),
    ("bottom", 12.8, 16.2, "1 ⌀20"),
    ("top", 0.0, 5.0, "2 ⌀12"),
    ("top", 4.2, 7.8, "4 ⌀20"),
    ("top", 7.0, 10.3, "2 ⌀12"),
    ("top", 9.6, 13.4, "4 ⌀20"),
    ("top", 12.6, 17.0, "2 ⌀12"),
]
ZONES = [
    (0.0, 1.2, 0.1, "⌀10 at 100, 12 pcs"),
    (1.2, 4.4, 0.2, "⌀10 at 200, 16 pcs"),
    (4.4, 7.4, 0.1, "⌀10 at 100, 30 pcs"),
    (7.4, 9.5, 0.2, "⌀10 at 200, 11 pcs"),
    (9.5, 13.0, 0.1, "⌀10 at 100, 35 pcs"),
    (13.0, 17.0, 0.15, "⌀10 at 150, 27 pcs"),
]
NARROW = [
    (0.0, 0.6, 0.1, "⌀10 at 100, 6 pcs"),
    (0.6, 1.2, 0.15, "⌀10 at 150, 4 pcs"),
    (1.2, 4.8, 0.2, "⌀10 at 200, 18 pcs"),
    (4.8, 5.4, 0.15, "⌀10 at 150, 4 pcs"),
    (5.4, 6.0, 0.1, "⌀10 at 100, 6 pcs"),
]
SINE = 0.0084 * np.sin(np.pi * PARABOLA / 6)


def sagging(factor=1.0, system="SI", **options):
    options = {"mark": "B5", "width_mm": 80, **options}
    return deflected_shape(6.0, TWO, PARABOLA, factor * SINE, [(0.0, 6.0, 0.024)], system, **options)


def three_deflected():
    (x, upper), (_, lower) = three_spans()["deflection"]
    spans = list(itertools.pairwise(STOPS))
    return deflected_shape(
        17.0,
        THREE,
        x,
        upper,
        [(a, b, (b - a) / 250) for a, b in spans],
        title="deflection, total",
        further=[("deflection, least", x, lower, [(a, b, (b - a) / 1500) for a, b in spans])],
        mark="B6",
        width_mm=170,
    )


STRENGTH: dict[str, Callable[[], Figure]] = {
    "section": partial(
        section_figure,
        RB,
        bars=FOUR + TWO_UP,
        stirrup=(0.04, 0.01, 2),
        callouts=[("4 ⌀20 (1257 mm²)", 0.06), ("2 ⌀16 (402 mm²)", 0.492)],
        stirrup_text="⌀10 at 150",
        effective_depth=(0.49, "top"),
        neutral_axis=(0.132, "top"),
        stress_block=0.106,
        mark="B5",
    ),
    "section, inches, four legs": partial(
        section_figure,
        RB,
        "US",
        bars=FOUR,
        stirrup=(0.04, 0.01, 4),
        callouts=[("4 #6 (1.76 in²)", 0.06)],
        stirrup_text="#3 at 6 in",
        effective_depth=(0.49, "top"),
        stress_block=0.106,
    ),
    "section, tee": partial(
        section_figure,
        TEE,
        bars=[*SIX, (-0.085, 0.54, 0.016), (0.085, 0.54, 0.016)],
        stirrup=(0.04, 0.01, 3),
        callouts=[("6 ⌀25 (2945 mm²)", 0.065), ("2 ⌀16 (402 mm²)", 0.54)],
        stirrup_text="⌀10 at 125",
        effective_depth=(0.51, "top"),
        neutral_axis=(0.045, "top"),
        stress_block=0.036,
    ),
    "section, tee hogging": partial(
        section_figure,
        TEE,
        bars=[(x, 0.54, 0.02) for x in (-0.4, -0.25, -0.085, 0.0, 0.085, 0.25, 0.4)],
        stirrup=(0.04, 0.01, 2),
        callouts=[("7 ⌀20 (2199 mm²)", 0.54)],
        effective_depth=(0.54, "bottom"),
        neutral_axis=(0.15, "bottom"),
        stress_block=0.12,
    ),
    "section, tee without flange width": partial(
        section_figure, section("tee", width=0.3, depth=0.6, flange_depth=0.16)
    ),
    "section, slab": partial(
        section_figure,
        section("rectangle", width=1.0, depth=0.3),
        bars=[(-0.44 + 0.88 * n / 9, 0.05, 0.016) for n in range(10)],
        stirrup=(0.03, 0.01, 4),
        callouts=[("10 ⌀16 (2011 mm²)", 0.05)],
        stirrup_text="⌀10 at 150",
        effective_depth=(0.25, "top"),
        neutral_axis=(0.05, "top"),
    ),
    "section, rolled": partial(section_figure, rolled_sections()["ipe300"], mark="B9"),
    "section, rolled with axis": partial(
        section_figure, rolled_sections()["he200b"], neutral_axis=(0.1, "top")
    ),
    "section, rolled, inches": partial(section_figure, rolled_sections()["w18x50"], "US"),
    "section, hostile": partial(section_figure, RB, bars=FOUR, callouts=[(HOSTILE, 0.06)], mark=HOSTILE),
    "bars": partial(bar_layout, 17.0, THREE, LAYERS, ZONES, mark="B6"),
    "bars, narrow zones": partial(
        bar_layout, 6.0, TWO, [("bottom", 0.0, 6.0, "4 ⌀20")], NARROW, mark="B5", width_mm=110
    ),
    "bars, feet": partial(
        bar_layout, 6.0, TWO, [("top", -0.2, 6.2, "2 #5")], [(0.0, 6.0, 0.1016, "#3 at 4 in, 59 pcs")], "US"
    ),
    "bars, hostile": partial(
        bar_layout, 6.0, TWO, [("top", 2.0, 2.1, HOSTILE * 9)], [(0.0, 6.0, 0.01, HOSTILE * 9)], width_mm=90
    ),
    "capacity, moment": partial(three, "moment", MOMENTS),
    "capacity, exceeded, feet": partial(three, "moment", [(0, 17, 130, 130)], "US", width_mm=110),
    "capacity, shear": partial(three, "shear", SHEARS, compared=[(0.5, 5.5), (6.5, 11.0), (12.0, 16.5)]),
    "capacity, simple": partial(simple, width_mm=80),
    "capacity, far": partial(simple, "shear", [(0.0, 6.0, 500.0, 500.0)], width_mm=80),
    "capacity, none": partial(simple, capacity=[(0.0, 2.0, 0.0, 0.0), (2.0, 6.0, 60.0, 0.0)], width_mm=80),
    "capacity, cantilever": partial(
        capacity_figure,
        3.0,
        [(0.0, "wall", HOSTILE)],
        "moment",
        ((PARABOLA / 2, 0 * PARABOLA), (PARABOLA / 2, -6 * (3 - PARABOLA / 2) ** 2)),
        [(0.0, 1.5, 20.0, 70.0), (1.5, 3.0, 20.0, 30.0)],
        width_mm=80,
        fixed=(True, False),
    ),
    "deflected": sagging,
    "deflected, far limit, inches": partial(sagging, 0.5, "US"),
    "deflected, beyond": partial(sagging, 4.0),
    "deflected, upward": partial(sagging, -1.0, width_mm=120),
    "deflected, three spans": three_deflected,
    "deflected, nothing": partial(sagging, 0.0),
}


@functools.cache
def strong(name: str) -> Figure:
    """The case's figure, drawn once for all tests that only look at it."""
    return STRENGTH[name]()
