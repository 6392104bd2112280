"""Derivations of equivalent uniform loads, worked out by sympy while the program runs."""

from __future__ import annotations

import functools

from calcpack.equivalent import general, symmetric
from calcpack.equivalent.shapes import ShapeKind
from calcpack.equivalent.steps import Derivation, Step
from calcpack.job.model import EquivalentKind

__all__ = ["Derivation", "Step", "derivation"]


@functools.cache
def derivation(shape: ShapeKind, kind: EquivalentKind, *, panel: bool = True) -> Derivation:
    r"""Derive the uniform load that stands for a load of a shape.

    Parameters
    ----------
    shape : str
        "uniform", "triangle", "trapezoid" (both symmetric) or "general" (any piecewise-linear load
        with point loads).
    kind : str
        What it has in common with the actual load: "shear", "moment", "deflection",
        "fixed-end moment" or "total".
    panel : bool
        End a triangle's or trapezoid's derivation in terms of the panel that brings it, with 45° dividing
        lines: pressure q, short side S, side ratio m = S/L. Without it, the load's peak w_0 and
        m = 2a/L remain.

    Returns
    -------
    Derivation
        The same object each time it is asked for.

    Source: equilibrium and linear bending of a straight span.

    Examples
    --------
    >>> derivation("trapezoid", "moment").latex
    'w_{\\mathrm{eq}} = \\frac{q S}{2} \\left(1 - \\frac{m^{2}}{3}\\right)'
    >>> derivation("triangle", "deflection", panel=False).result
    Eq(w_eq, 16*w_0/25)
    """
    if shape == "general":
        return general.derive(kind)
    return symmetric.derive(shape, kind, panel=panel)
