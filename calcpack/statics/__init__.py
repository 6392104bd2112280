"""Exact analysis of a beam under piecewise linear loads, without a mesh."""

from calcpack.statics.analysis import analyse
from calcpack.statics.curve import Curve, Extreme
from calcpack.statics.envelope import Band, Envelope, enclosing, envelope
from calcpack.statics.line import BeamLine
from calcpack.statics.loads import LineLoad, Load, PointLoad
from calcpack.statics.response import Quantity, Response

__all__ = [
    "Band",
    "BeamLine",
    "Curve",
    "Envelope",
    "Extreme",
    "LineLoad",
    "Load",
    "PointLoad",
    "Quantity",
    "Response",
    "analyse",
    "enclosing",
    "envelope",
]
