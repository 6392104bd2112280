"""Equivalent uniform loads: worked out as numbers here, derived with sympy in ``derive``."""

from calcpack.equivalent.closed import equivalent_factor, under_panel
from calcpack.equivalent.shapes import Shape, ShapeKind, shape_of
from calcpack.equivalent.spans import Responses, by_source, loads_on, responses
from calcpack.equivalent.stretches import Stretch, stretches
from calcpack.equivalent.uniform import (
    EFFECTS,
    KINDS,
    Comparison,
    ComparisonRow,
    Effect,
    Equivalents,
    comparison,
    equivalents,
)

__all__ = [
    "EFFECTS",
    "KINDS",
    "Comparison",
    "ComparisonRow",
    "Effect",
    "Equivalents",
    "Responses",
    "Shape",
    "ShapeKind",
    "Stretch",
    "by_source",
    "comparison",
    "equivalent_factor",
    "equivalents",
    "loads_on",
    "responses",
    "shape_of",
    "stretches",
    "under_panel",
]
