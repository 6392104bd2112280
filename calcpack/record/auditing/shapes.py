"""What data of a notebook must look like before anything is worked out from it.

A shape is a kind (``str``, ``bool``, ``int``, ``float``), a list ``[shape]``, a row ``(shape, shape)``, a
table ``{key: shape}`` that may have other keys beside, or an :class:`Each`, :class:`Few` or :class:`Maybe`.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

MOST = 2_000  # entries of one list or table
FARTHEST = 1e12  # [kN], [m]: no quantity of a building is beyond
Shape = Any


@dataclass(frozen=True)
class Each:
    """A table with keys of one's own, each value of one shape."""

    shape: Shape


@dataclass(frozen=True)
class Few:
    """A list of at most so many entries."""

    shape: Shape
    most: int


@dataclass(frozen=True)
class Maybe:
    """A shape, or null, or not there at all."""

    shape: Shape


_KINDS = {str: "a text", bool: "true or false", int: "a whole number", float: "a number"}


def misfit(data: object, shape: Shape, place: str = "") -> str:
    """Where data are not of a shape, in words; "" where they are.

    Parameters
    ----------
    data : plain data
    shape : Shape
    place : str
        Of the data, for the words.

    Examples
    --------
    >>> shape = {"mark": str, "ends": (float, float), "loads": Each([float]), "note": Maybe(str)}
    >>> misfit({"mark": "B1", "ends": [0, 4.5], "loads": {"dead": [1.0]}, "more": 1}, shape)
    ''
    >>> misfit({"mark": "B1", "ends": [0, 4.5], "loads": {"dead": ["x"]}}, shape)
    'loads.dead[0]: a number is expected'
    """
    if isinstance(shape, type):
        return "" if _is_of(data, shape) else f"{place}: {_KINDS[shape]} is expected"
    if isinstance(shape, Maybe):
        return "" if data is None else misfit(data, shape.shape, place)
    if isinstance(shape, Mapping | Each):
        return _table_misfit(data, shape, place)
    if not isinstance(data, list):
        return f"{place}: a list is expected"
    if isinstance(shape, Few):
        if len(data) > shape.most:
            return f"{place}: more than {shape.most} entries"
        shape = [shape.shape]
    if isinstance(shape, tuple) and len(data) != len(shape):
        return f"{place}: {len(shape)} entries are expected"
    if len(data) > MOST:
        return f"{place}: more than {MOST} entries"
    shapes = shape if isinstance(shape, tuple) else shape * len(data)
    rows = ((f"{place}[{number}]", *row) for number, row in enumerate(zip(data, shapes, strict=True)))
    return next(filter(None, (misfit(each, of, at) for at, each, of in rows)), "")


def _table_misfit(data: object, shape: Mapping[str, Shape] | Each, place: str) -> str:
    if not isinstance(data, dict):
        return f"{place}: a table is expected"
    if len(data) > MOST:
        return f"{place}: more than {MOST} entries"
    wanted = dict.fromkeys(data, shape.shape) if isinstance(shape, Each) else shape
    for key, of in wanted.items():
        at = f"{place}.{key[:40]}" if place else key[:40]
        if key not in data and not isinstance(of, Maybe):
            return f"{at}: it is missing"
        if fault := misfit(data.get(key), of, at):
            return fault
    return ""


def _is_of(data: object, kind: type) -> bool:
    if kind in (int, float):
        of = int if kind is int else int | float
        return (
            isinstance(data, of)
            and not isinstance(data, bool)
            and abs(data) <= FARTHEST
            and math.isfinite(data)
        )
    return isinstance(data, kind)
