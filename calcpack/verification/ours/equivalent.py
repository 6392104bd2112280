"""Equivalent uniform loads, and single spans under the shapes of load that panels give."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from calcpack.equivalent import Responses, equivalent_factor, equivalents, responses
from calcpack.statics import LineLoad, Load
from calcpack.verification.comparison import Ours
from calcpack.verification.ours.beams import loads_of
from calcpack.verification.tables import Row

PRESSURE = 5.5  # [kPa]


def panel_loads(pressure: float, short: float, long: float) -> tuple[list[Load], list[Load]]:
    """Triangle and trapezoid of a panel with 45° dividing lines."""
    peak, rise = pressure * short / 2, short / 2
    triangle: list[Load] = [LineLoad(0, rise, 0, peak), LineLoad(rise, short, peak, 0)]
    trapezoid: list[Load] = [LineLoad(0, rise, 0, peak), LineLoad(long - rise, long, peak, 0)]
    if long > short:
        trapezoid.insert(1, LineLoad(rise, long - rise, peak, peak))
    return triangle, trapezoid


def panel_row(row: Row) -> Ours:
    """Equivalent loads of the beams under the short and the long side [kN/m], by sums over the load."""
    kind: Any = row.text("kind")
    short, long = row.number("S"), row.number("L")
    triangle, trapezoid = panel_loads(row.number("q"), short, long)
    return {
        "short side": equivalents(short, triangle).of(kind),
        "long side": equivalents(long, trapezoid).of(kind),
    }


def read_responses(found: Responses, what: str) -> float:
    """ "shear", "moment", "moment_at", "end moment 0", or one of them "/ total"."""
    if what.startswith("end moment"):
        return float(found.end_moments[int(what.split()[-1])])
    name, _, total = what.partition(" / ")
    value = float(getattr(found, name))
    return value / found.total if total else value


def span_row(row: Row, loads: Sequence[Load] | None = None) -> Ours:
    """An entry of a table for a span of 1, with the table's loads or with others."""
    found = responses(1.0, tuple(loads or loads_of(row.topic, row.text("loads"))))
    return {"published": read_responses(found, row.text("read"))}


def triangle_row(row: Row) -> Ours:
    """The triangle's equivalent over its peak."""
    kind: Any = row.text("kind")
    return {"factor": equivalent_factor(kind, 1.0)}


RECKONERS = {"beams under panels": panel_row, "single spans": span_row, "triangle": triangle_row}
