"""Beams of the tables by the exact analysis; EI is 1 throughout."""

from __future__ import annotations

from collections.abc import Sequence
from functools import lru_cache

import numpy as np

from calcpack.statics import BeamLine, Envelope, LineLoad, Load, PointLoad, Response, analyse, envelope
from calcpack.verification.arithmetic import worked_out
from calcpack.verification.comparison import Ours
from calcpack.verification.tables import Row, Topic

QUANTITIES = ("shear", "moment", "rotation", "deflection")


def line_of(topic: Topic, name: str) -> BeamLine:
    """A beam of a topic by its name."""
    data, values = topic.lines[name], topic.values
    supports = tuple(worked_out(place, values) for place in data["supports"])
    fixed = data.get("fixed", ())
    return BeamLine(worked_out(data["length"], values), supports, "start" in fixed, "end" in fixed)


def loads_of(topic: Topic, name: str) -> tuple[Load, ...]:
    """Loads of a topic by their name: lines (from, to, first, last) and points (at, force)."""
    found: list[Load] = []
    for cells in topic.loads[name]:
        numbers = [worked_out(cell, topic.values) for cell in cells]
        if len(numbers) == 2:
            found.append(PointLoad(at=numbers[0], force=numbers[1]))
        else:
            found.append(LineLoad(start=numbers[0], end=numbers[1], first=numbers[2], last=numbers[3]))
    return tuple(found)


def read_off(response: Response, what: str, number: float | None = None) -> float:
    """What a table speaks of, off an analysis.

    Parameters
    ----------
    response : Response
        Of one set of loads.
    what : str
        "reaction 0", "end moment 1", "support moment 1", "moment at" (the place ``number``),
        "moment largest", "deflection smallest", "moment largest place",
        "deflection largest place from the end".
    number : float
        Where.
    """
    first, *rest = what.split()
    if first == "reaction":
        return float(response.reactions[0, int(rest[0])])
    if what.startswith("end moment"):
        return float(response.end_moments[0, int(rest[1])])
    if what.startswith("support moment"):
        return float(response.support_moments[0, int(rest[1])])
    curve = response.curve(first, 0)  # type: ignore[arg-type]
    if rest == ["at"]:
        assert number is not None
        return curve.at(number)
    extreme = getattr(curve, rest[0])
    if rest[1:] == ["place"]:
        return float(extreme.at)
    if rest[1:] == ["place", "from", "the", "end"]:
        return float(response.line.length - extreme.at)
    return float(extreme.value)


def formula_row(row: Row, loads: Sequence[Load] | None = None) -> Ours:
    """An entry of a table of beam formulas, with the table's loads or with others."""
    line = line_of(row.topic, row.text("line"))
    response = analyse(line, [list(loads or loads_of(row.topic, row.text("loads")))])
    where = row.number("at") if row.text("at") else None
    found = read_off(response, row.text("read").removeprefix("inverse "), where)
    if row.text("read").startswith("inverse "):
        found = 1 / found
    return {"published": found / row.number("over")}


def equal_spans(count: int, span: float) -> BeamLine:
    """A beam over so many equal spans."""
    return BeamLine(count * span, tuple(span * number for number in range(count + 1)))


def _loaded(numbers: range, span: float) -> list[Load]:
    return [LineLoad(span * number, span * (number + 1), 1.0, 1.0) for number in numbers]


@lru_cache(maxsize=8)
def _all_loaded(count: int) -> Response:
    return analyse(equal_spans(count, 1.0), [_loaded(range(count), 1.0)])


def equal_span_row(row: Row) -> Ours:
    """One span of equal spans, all loaded: of w l, w l², l."""
    count, number = int(row.number("spans")), int(row.number("span")) - 1
    response = _all_loaded(count)
    shear, moment = response.curve("shear"), response.curve("moment")
    turn = next(x for x in response.zero_shear() if number < x < number + 1)
    inside = [x - number for x in moment.zeros() if number + 1e-6 < x < number + 1 - 1e-6]
    # A point of inflection too many or too few is a difference.
    named = ("first inflection", "second inflection")
    places = dict(zip(named, inside, strict=False)) if len(inside) <= 2 else {}
    return {
        "shear left": -shear.at(float(number), "left") if number else 0.0,
        "shear right": shear.at(float(number), "right"),
        "moment over it": -moment.at(float(number)) + 0.0,
        "largest moment": moment.at(turn),
        "its place": turn - number,
        **{name: places.get(name, float("nan")) for name in named},
    }


def inflections(row: Row) -> int:
    """How many points of inflection the span of a row has."""
    number = int(row.number("span")) - 1
    zeros = _all_loaded(int(row.number("spans"))).curve("moment").zeros()
    return sum(1 for x in zeros if number + 1e-6 < x < number + 1 - 1e-6)


@lru_cache(maxsize=8)
def worst_placement(count: int) -> Envelope:
    """Envelope of a unit load that stands on any of so many equal spans of 1."""
    line = equal_spans(count, 1.0)
    response = analyse(line, [_loaded(range(k, k + 1), 1.0) for k in range(count)])
    return envelope(response, np.zeros(count), np.ones(count))


def placement_row(row: Row) -> Ours:
    """The worst placement of a live load on equal spans: of w l² and w l."""
    worst = worst_placement(int(row.number("spans")))
    inner = worst.moment.upper.values(np.linspace(1.0, 2.0, 2001)).max()
    return {
        "sagging": worst.moment.largest.value,
        "sagging in an inner span": float(inner),
        "hogging": worst.moment.smallest.value,
        "its place": worst.moment.smallest.at,
        "end reaction": float(worst.reactions_max[0]),
        "inner reaction": float(worst.reactions_max[1]),
    }


RECKONERS = {
    "simple beams": formula_row,
    "beams held at an end": formula_row,
    "cantilevers and overhangs": formula_row,
    "continuous beams": formula_row,
    "equal spans": equal_span_row,
    "worst placement": placement_row,
}
