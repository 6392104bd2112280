"""Figures that are hard to draw: crowded, long, askew, with hostile marks."""

from __future__ import annotations

import functools
import itertools
import math
from collections.abc import Callable
from functools import partial

import numpy as np

from calcpack.equivalent import equivalents, shape_of
from calcpack.figures import (
    Figure,
    equivalents_figure,
    free_body,
    key_plan,
    load_figure,
    panel_drainage,
    response_figure,
)
from calcpack.statics.analysis import analyse
from calcpack.statics.envelope import envelope
from calcpack.statics.line import BeamLine
from calcpack.statics.loads import LineLoad, PointLoad

HOSTILE = "$x$ <b> & 'q' \"z\""


def rectangle(mark, a, b, c, d, note="", transfer="two-way", direction=None):
    corners = [[a, b], [c, b], [c, d], [a, d]]
    return {"mark": mark, "corners": corners, "note": note, "transfer": transfer, "direction": direction}


def small_floor(mark="B5"):
    return {
        "grid": {"x": {"A": 0, "B": 6, "C": 11}, "y": {"1": 0, "2": 4.5, "3": 9}},
        "panels": [
            rectangle("P1", 0, 0, 6, 4.5, "5.50 kPa"),
            rectangle("P2", 6, 0, 11, 4.5, "5.50 kPa"),
            rectangle("P3", 0, 4.5, 6, 9, "6.10 kPa"),
            rectangle("P4", 6, 4.5, 11, 9, "6.10 kPa", "one-way", [1, 0]),
        ],
        "beams": [
            {"mark": "B1", "points": [[0, 0], [6, 0]]},
            {"mark": "B2", "points": [[6, 0], [11, 0]]},
            {"mark": mark, "points": [[0, 4.5], [6, 4.5]]},
            {"mark": "B6", "points": [[6, 4.5], [11, 4.5]]},
            {"mark": "B7", "points": [[0, 9], [6, 9], [11, 9]]},
            {"mark": "B9", "points": [[6, 0], [6, 4.5], [6, 9]]},
            {"mark": "B10", "points": [[11, 0], [11, 9]]},
        ],
        "columns": [
            {"mark": f"C{n}", "at": at}
            for n, at in enumerate([[6, 0], [11, 0], [6, 9], [11, 9], [6, 4.5]], 1)
        ],
        "walls": [{"mark": "W1", "line": [[0, 0], [0, 9]]}],
        "regions": [
            {"panel": "P1", "outline": [[0, 4.5], [2.25, 2.25], [3.75, 2.25], [6, 4.5]]},
            {"panel": "P3", "outline": [[0, 4.5], [6, 4.5], [3.75, 6.75], [2.25, 6.75]]},
        ],
    }


def bays(across, up, wide=6.0, deep=5.0):
    """A floor of equal bays, a beam on every line of every bay."""
    xs, ys = [n * wide for n in range(across + 1)], [n * deep for n in range(up + 1)]
    ends = [([a, y], [b, y]) for y in ys for a, b in itertools.pairwise(xs)]
    ends += [([x, a], [x, b]) for x in xs for a, b in itertools.pairwise(ys)]
    return {
        "grid": {
            "x": {chr(65 + n % 26) * (n // 26 + 1): x for n, x in enumerate(xs)},
            "y": {str(n + 1): y for n, y in enumerate(ys)},
        },
        "panels": [
            rectangle(f"P{j * across + i + 1}", xs[i], ys[j], xs[i + 1], ys[j + 1], "5.50 kPa")
            for j in range(up)
            for i in range(across)
        ],
        "beams": [{"mark": f"B{n}", "points": list(pair)} for n, pair in enumerate(ends, 1)],
        "columns": [
            {"mark": f"C{n}", "at": [x, y]} for n, (x, y) in enumerate([(x, y) for y in ys for x in xs], 1)
        ],
    }


def with_region(plan, mark):
    """The plan with a triangle of the first panel draining to a beam."""
    beam = next(beam for beam in plan["beams"] if beam["mark"] == mark)
    (a, y), (b, _) = beam["points"]
    panel = next(p["mark"] for p in plan["panels"] if p["corners"][0] == [a, y])
    return {
        **plan,
        "regions": [{"panel": panel, "outline": [[a, y], [b, y], [(a + b) / 2, y + (b - a) / 2]]}],
    }


def skew_floor():
    return {
        "grid": {"x": {"A": 0, "B": 5.5}, "y": {"1": 0, "2": 4.2}},
        "panels": [
            {
                "mark": "P1",
                "corners": [[0, 0], [5.5, 0], [7, 4.2], [1.5, 4.2]],
                "note": "4.90 kPa",
                "transfer": "two-way",
            },
            {
                "mark": "P2",
                "corners": [[5.5, 0], [9.5, 0], [7, 4.2]],
                "note": "4.90 kPa",
                "transfer": "two-way",
            },
        ],
        "beams": [
            {"mark": "B1", "points": [[0, 0], [5.5, 0], [9.5, 0]]},
            {"mark": "B2", "points": [[1.5, 4.2], [7, 4.2]]},
            {"mark": "B3", "points": [[0, 0], [1.5, 4.2]]},
            {"mark": "B4", "points": [[5.5, 0], [7, 4.2]]},
            {"mark": "B5", "points": [[9.5, 0], [7, 4.2], [6, 5.88]], "free": [False, True]},
        ],
        "columns": [
            {"mark": f"C{n}", "at": at}
            for n, at in enumerate([[0, 0], [5.5, 0], [9.5, 0], [7, 4.2], [1.5, 4.2]], 1)
        ],
        "regions": [
            {"panel": "P1", "outline": [[5.5, 0], [7, 4.2], [5.2, 2.9], [4.1, 1.3]]},
            {"panel": "P2", "outline": [[5.5, 0], [7, 4.2], [7.2, 1.5]]},
        ],
    }


def crowded_grid():
    """Grid lines 0.4 m apart in a floor of 14 m, long names among them."""
    plan = small_floor()
    near = {"A": 0, "A'": 0.4, "A.2": 0.8, "B": 6, "B (old wall)": 6.3, "C": 11}
    return {**plan, "grid": {"x": near, "y": {"1": 0, "1a": 0.3, "2": 4.5, "2a": 4.7, "2b": 4.9, "3": 9}}}


def hostile_floor():
    plan = small_floor(HOSTILE)
    plan["panels"][0]["mark"] = "P$1$"
    plan["grid"]["x"] = {"$A$": 0, "<B>": 6, "&C": 11}
    plan["columns"][0]["mark"] = "梁\n\x07C"
    return plan


def share(edge, carrier, region, area, kind="beam", continuous=False):
    return {
        "edge": edge,
        "carrier": carrier,
        "carrier_kind": kind,
        "region": region,
        "area": area,
        "continuous": continuous,
    }


def divided(long=6.0, short=4.5, **changes):
    half = short / 2
    corners = [[0, 0], [long, 0], [long, short], [0, short]]
    trapezoid, triangle = (long + long - short) / 2 * half, half * half
    return {
        "mark": "P1",
        "note": "5.50 kPa",
        "transfer": "two-way",
        "direction": None,
        "corners": corners,
        "shares": [
            share(0, "B1", [[0, 0], [long, 0], [long - half, half], [half, half]], trapezoid),
            share(1, "B9", [[long, 0], [long, short], [long - half, half]], triangle, continuous=True),
            share(
                2,
                "B5",
                [[long, short], [0, short], [half, half], [long - half, half]],
                trapezoid,
                continuous=True,
            ),
            share(3, "W1", [[0, short], [0, 0], [half, half]], triangle, "wall"),
        ],
        **changes,
    }


def sixty():
    """Only the upper edge continuous: its dividing lines stand at 60 degrees to it."""
    d = 4.5 / (1 + math.sqrt(3))
    corners = [[0, 0], [6, 0], [6, 4.5], [0, 4.5]]
    return {
        "mark": "P3",
        "note": "6.10 kPa",
        "transfer": "two-way",
        "corners": corners,
        "shares": [
            share(0, "B1", [[0, 0], [6, 0], [6 - d, d], [d, d]], (6 - d) * d),
            share(1, "B9", [[6, 0], [6, 4.5], [6 - d, d]], 4.5 * d / 2),
            share(2, "B5", [[6, 4.5], [0, 4.5], [d, d], [6 - d, d]], (6 - d) * (4.5 - d), continuous=True),
            share(3, "B2", [[0, 4.5], [0, 0], [d, d]], 4.5 * d / 2),
        ],
    }


def turned(panel, angle):
    cos, sin = math.cos(angle), math.sin(angle)

    def turn(points):
        return [[x * cos - y * sin, x * sin + y * cos] for x, y in points]

    shares = [{**item, "region": turn(item["region"])} for item in panel["shares"]]
    return {**panel, "corners": turn(panel["corners"]), "shares": shares}


def triangle_panel():
    a, b, c = np.array([5.5, 0.0]), np.array([9.5, 0.0]), np.array([7.0, 4.2])
    sides = [float(np.hypot(*side)) for side in (b - c, a - c, a - b)]
    middle = ((sides[0] * a + sides[1] * b + sides[2] * c) / sum(sides)).tolist()
    return {
        "mark": HOSTILE,
        "note": "4.90 kPa",
        "transfer": "two-way",
        "corners": [a.tolist(), b.tolist(), c.tolist()],
        "shares": [
            share(0, "B1", [a.tolist(), b.tolist(), middle], 2.4),
            share(1, "B5", [b.tolist(), c.tolist(), middle], 2.9),
            share(2, "B4", [c.tolist(), a.tolist(), middle], 2.7),
        ],
    }


def trapezoid(start, end, rise, load, source):
    parts = [LineLoad(start, start + rise, 0, load, source)]
    if end - rise > start + rise + 1e-9:
        parts.append(LineLoad(start + rise, end - rise, load, load, source))
    return [*parts, LineLoad(end - rise, end, load, 0, source)]


TWO = [(0.0, "column", "C1"), (6.0, "beam", "B9")]
PLAIN_LOADS = {
    "dead": [
        *trapezoid(0, 6, 2.25, 9.0, "P1"),
        *trapezoid(0, 6, 2.25, 9.0, "P3"),
        LineLoad(0, 6, 4.125, 4.125, "self weight"),
        PointLoad(2.1, 12, "B7"),
    ],
    "live": [*trapezoid(0, 6, 2.25, 6.75, "P1"), *trapezoid(0, 6, 2.25, 6.75, "P3")],
}
FIVE = [
    (0, "wall", "W1"),
    (5, "column", "C1"),
    (9, "column", "C2"),
    (14, "column", "C3"),
    (18, "beam", "B12"),
]
BAYS = [(0, 5), (5, 9), (9, 14), (14, 18)]
CROWDED_LOADS = {
    "dead": [
        *(load for n, (a, b) in enumerate(BAYS, 1) for load in trapezoid(a, b, 2, 8.0, f"P{n}")),
        LineLoad(0, 20, 3.2, 3.2, "self weight"),
        LineLoad(0, 20, 7.5, 7.5, "load 1"),
        *(
            PointLoad(x, 20 + x, f"B{20 + n}")
            for n, x in enumerate([1, 2, 2.4, 3, 6, 7, 10, 10.5, 11, 12, 16, 17, 20])
        ),
    ],
    "live": [load for n, (a, b) in enumerate(BAYS, 1) for load in trapezoid(a, b, 2, 4.0, f"P{n}")],
    "snow": [LineLoad(0, 20, 0.4, 0.4, "P9"), PointLoad(3, 2, HOSTILE), PointLoad(3, 4, "B99")],
    "roof_live": [LineLoad(3, 9, 2, 5, "load 4"), PointLoad(15, -8, "B7")],
}
UPLIFT = {"snow": [LineLoad(0, 4, -3, -6, "uplift"), LineLoad(0, 4, 3, 3, "self weight")]}


def responses(length, supports, sets, always, placed, stiffness=None, fixed=(False, False)):
    """Curves of an envelope (of the one set where nothing is placed), and the reactions."""
    response = analyse(BeamLine(length, tuple(supports), *fixed), sets)
    worst = envelope(response, np.array(always, float), np.array(placed, float))
    curves = {}
    for quantity in ("shear", "moment", "deflection"):
        if quantity == "deflection" and not stiffness:
            continue
        factor = 1 / stiffness if quantity == "deflection" else 1.0
        band = getattr(worst, quantity)
        found = [
            (x, y * factor, role) for role in ("upper", "lower") for x, y in [getattr(band, role).sample(200)]
        ]
        curves[quantity] = found if any(placed) else [(*found[0][:2], "line")]
    return curves, list(zip(worst.reactions_max.tolist(), worst.reactions_min.tolist(), strict=True))


def five_spans(width_mm, system="SI"):
    stops = [0, 5, 9, 14, 18, 23]
    sets = [
        [LineLoad(0, 23, 8, 8)],
        *([LineLoad(a, b, 14, 14)] for a, b in itertools.pairwise(stops)),
    ]
    curves, reactions = responses(23.0, stops, sets, [1.35] + [0] * 5, [0] + [1.5] * 5, 40000.0)
    bearings = [(at, "column", f"C{n}") for n, at in enumerate(stops, 1)]
    limits = [("deflection", a, b, (b - a) / 500) for a, b in itertools.pairwise(stops)]
    return response_figure(
        23.0, bearings, curves, system, reactions=reactions, limits=limits, mark="B6", width_mm=width_mm
    )


def jumps():
    points = [PointLoad(x, 20.0 + 3 * x) for x in (1, 1.4, 2.2, 3, 4.5, 5.5, 7.5)]
    sets = [
        [*points, LineLoad(0, 9, 3, 3)],
        [LineLoad(0, 5, 10, 10)],
        [LineLoad(5, 8, 10, 10)],
        [LineLoad(8, 9, 10, 10)],
    ]
    curves, reactions = responses(9.0, [0, 5.0, 8.0], sets, [1.2, 0, 0, 0], [0, 1.6, 1.6, 1.6])
    bearings = [(0, "wall", "W1"), (5.0, "beam", "B17"), (8.0, "column", "C4")]
    return response_figure(9.0, bearings, curves, reactions=reactions, mark="B8")


def close_supports():
    sets = [
        [LineLoad(0, 8, 10, 10)],
        [LineLoad(0, 0.6, 9, 9)],
        [LineLoad(0.6, 7.2, 9, 9)],
        [LineLoad(7.2, 8, 9, 9)],
    ]
    curves, reactions = responses(8.0, [0, 0.6, 7.2, 8], sets, [1.35, 0, 0, 0], [0, 1.5, 1.5, 1.5])
    bearings = [(0, "wall", "W1"), (0.6, "column", "C1"), (7.2, "column", "C2"), (8, "wall", "W2")]
    return response_figure(8.0, bearings, curves, reactions=reactions, width_mm=90)


def many_supports():
    stops = list(range(12))
    curves, reactions = responses(11.5, stops, [[LineLoad(0, 11.5, 30, 30)]], [1.35], [0])
    bearings = [(at, "column", f"C{100 + at}") for at in stops]
    spread = [(largest, largest - 5) for largest, _ in reactions]
    return response_figure(11.5, bearings, curves, reactions=spread, width_mm=120)


def cantilever():
    load = [LineLoad(0, 3, 10, 4), PointLoad(3, 5)]
    curves, reactions = responses(3.0, [0], [load], [1], [0], 9000.0, (True, False))
    largest = [value for value, _ in reactions]
    return response_figure(
        3.0, [(0, "wall", HOSTILE)], curves, reactions=largest, fixed=(True, False), width_mm=75
    )


def simple_span():
    curves, reactions = responses(6.0, [0, 6], [[LineLoad(0, 6, 12, 12)]], [1], [0], 20000.0)
    return response_figure(
        6.0,
        TWO,
        curves,
        extremes=[
            ("moment", 54.0, 3.0),
            ("shear", 36.0, 0.0),
            ("shear", -36.0, 6.0),
            ("deflection", 0.0101, 3.0),
        ],
        reactions=[value for value, _ in reactions],
        limits=[("deflection", 0, 6, 0.024)],
        mark="B5",
        width_mm=100,
    )


SHAPES = {
    "uniform": [LineLoad(0, 6, 4, 4)],
    "triangle": [LineLoad(0, 3, 0, 9), LineLoad(3, 6, 9, 0)],
    "trapezoid": trapezoid(0, 6, 2.25, 9, ""),
    "steep": trapezoid(0, 6, 0.5, 9, ""),
    "general": [LineLoad(0, 2, 3, 5), PointLoad(2, 7)],
}


def level_loads(name):
    found = equivalents(6.0, SHAPES[name])
    kinds = ("shear", "moment", "deflection", "fixed_end_moment", "total")
    return equivalents_figure(6.0, SHAPES[name], {kind: getattr(found, kind) for kind in kinds}, "moment")


CASES: dict[str, Callable[[], Figure]] = {
    "plan": partial(key_plan, small_floor(), "B5"),
    "plan, upright beam": partial(key_plan, small_floor(), "B9"),
    "plan, continuous beam, feet": partial(key_plan, small_floor(), "B7", "US"),
    "plan, all beams": partial(key_plan, small_floor(), width_mm=100),
    "plan, large floor": partial(key_plan, with_region(bays(12, 8), "B54"), "B54"),
    "plan, long floor": partial(key_plan, with_region(bays(10, 1, 6, 6), "B4"), "B4"),
    "plan, long floor, all beams": partial(key_plan, bays(10, 1, 6, 6), width_mm=170),
    "plan, tall floor, all beams": partial(key_plan, bays(1, 7, 6, 6), width_mm=75),
    "plan, many bays": partial(key_plan, bays(6, 4), width_mm=170),
    "plan, askew": partial(key_plan, skew_floor(), "B4"),
    "plan, askew, all beams": partial(key_plan, skew_floor()),
    "plan, crowded grid": partial(key_plan, crowded_grid(), "B5"),
    "plan, hostile": partial(key_plan, hostile_floor(), HOSTILE),
    "plan, hostile, all beams": partial(key_plan, hostile_floor(), width_mm=120),
    "plan, one beam": partial(key_plan, {"beams": [{"mark": "B1", "points": [[0, 0], [6, 0]]}]}, "B1"),
    "panel": partial(panel_drainage, divided()),
    "panel, feet": partial(panel_drainage, divided(), "US", 60),
    "panel, long": partial(panel_drainage, divided(12.0, 2.6)),
    "panel, sixty degrees": partial(panel_drainage, sixty(), width_mm=60),
    "panel, turned": partial(panel_drainage, turned(divided(), 0.4)),
    "panel, triangle": partial(panel_drainage, triangle_panel()),
    "loads": partial(load_figure, 6.0, TWO, PLAIN_LOADS, "B5"),
    "loads, equivalents": partial(
        load_figure, 6.0, TWO, PLAIN_LOADS, "B5", equivalents={"dead": [(0, 6, 19.2)], "live": [(0, 6, 12.1)]}
    ),
    "loads, narrow, feet": partial(load_figure, 6.0, TWO, PLAIN_LOADS, "B5", "US", width_mm=75),
    "loads, crowded": partial(load_figure, 20.0, FIVE, CROWDED_LOADS, "B6", width_mm=160),
    "loads, uplift": partial(load_figure, 4.0, FIVE[:1], UPLIFT, "B7", fixed=(True, False), width_mm=80),
    "loads, none": partial(load_figure, 6.0, TWO, {"dead": []}, "B5"),
    "response": simple_span,
    "response, five spans": partial(five_spans, 160),
    "response, five spans, narrow, feet": partial(five_spans, 100, "US"),
    "response, jumps": jumps,
    "response, close supports": close_supports,
    "response, many supports": many_supports,
    "response, cantilever": cantilever,
    **{f"free body, {name}": partial(free_body, shape_of(6.0, loads)) for name, loads in SHAPES.items()},
    **{
        f"held, {name}": partial(free_body, shape_of(6.0, loads), held=True) for name, loads in SHAPES.items()
    },
    **{f"level loads, {name}": partial(level_loads, name) for name in ("trapezoid", "general")},
}


@functools.cache
def drawn(name: str) -> Figure:
    """The case's figure, drawn once for all tests that only look at it."""
    return CASES[name]()
