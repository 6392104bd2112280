"""Equivalent uniform loads as numbers, and how far each is from the actual load."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from calcpack.equivalent.closed import UNIFORM
from calcpack.equivalent.spans import Responses, responses
from calcpack.job.model import EquivalentKind
from calcpack.statics.loads import Load

KINDS: tuple[EquivalentKind, ...] = ("shear", "moment", "deflection", "fixed-end moment", "total")
Effect = Literal["shear", "moment", "deflection", "end_moment"]
EFFECTS: tuple[Effect, ...] = ("shear", "moment", "deflection", "end_moment")
SHORT = 1e-9  # a ratio this far below one is short; less is rounding


@dataclass(frozen=True)
class Equivalents:
    """The five equivalent uniform loads of a span [kN/m], downward positive.

    Each over the whole span gives the same largest response as the actual load:

    Parameters
    ----------
    shear
        The larger end reaction of the simply supported span.
    moment, deflection
        Its largest bending moment, its largest deflection (constant stiffness).
    fixed_end_moment
        The larger end moment with both ends fixed.
    total
        The whole load.
    """

    shear: float
    moment: float
    deflection: float
    fixed_end_moment: float
    total: float

    def of(self, kind: EquivalentKind) -> float:
        """Return the one asked for [kN/m].

        >>> Equivalents(1.0, 2.0, 3.0, 4.0, 5.0).of("fixed-end moment")
        4.0
        """
        return {
            "shear": self.shear,
            "moment": self.moment,
            "deflection": self.deflection,
            "fixed-end moment": self.fixed_end_moment,
            "total": self.total,
        }[kind]


@dataclass(frozen=True)
class ComparisonRow:
    """One equivalent load [kN/m] and what it does over what the actual load does.

    ``shear``, ``moment``, ``deflection`` and ``end_moment`` are such ratios: 1 is the same, less is
    short, below zero points the other way. Where the actual response is zero the ratio is 1 if
    the equivalent's is zero too, else infinite.
    """

    kind: EquivalentKind
    load: float
    shear: float
    moment: float
    deflection: float
    end_moment: float

    def ratio(self, effect: Effect) -> float:
        """Return the ratio for one effect."""
        return {
            "shear": self.shear,
            "moment": self.moment,
            "deflection": self.deflection,
            "end_moment": self.end_moment,
        }[effect]

    def unsafe_for(self, effect: Effect) -> bool:
        """Say whether this load falls short of the actual one."""
        return self.ratio(effect) < 1 - SHORT

    @property
    def unsafe(self) -> tuple[Effect, ...]:
        """The effects for which it falls short."""
        return tuple(effect for effect in EFFECTS if self.unsafe_for(effect))


@dataclass(frozen=True)
class Comparison:
    """The five equivalents of a span against the actual load."""

    span: float
    actual: Responses
    rows: tuple[ComparisonRow, ...]

    def row(self, kind: EquivalentKind) -> ComparisonRow:
        """Return the row of one equivalent."""
        return self.rows[KINDS.index(kind)]


def equivalents(span: float, loads: Sequence[Load]) -> Equivalents:
    """Work out the uniform loads that stand for the loads on a span.

    Parameters
    ----------
    span : float [m]
        Between two supports, taken alone.
    loads : sequence of LineLoad, PointLoad
        From the span's start, as :func:`calcpack.equivalent.loads_on` gives them; point loads at
        the very ends are left out.

    Returns
    -------
    Equivalents [kN/m]
        With the sign of the response they match: a lifting load has negative equivalents. Zero
        where there is no load.

    Raises
    ------
    ValueError
        The span has no length, a load lies beyond it, or something is not a finite number.

    Source: statics; derived in :mod:`calcpack.equivalent.derive`.

    Examples
    --------
    A panel of 5 kPa and 4 m brings the beam under its short side a triangle of 10 kN/m:

    >>> from calcpack.statics.loads import LineLoad
    >>> found = equivalents(4, [LineLoad(0, 2, 0, 10), LineLoad(2, 4, 10, 0)])
    >>> round(found.shear, 6), round(found.moment, 6), round(found.deflection, 6)
    (5.0, 6.666667, 6.4)
    """
    return _equivalents(span, responses(span, loads))


def comparison(span: float, loads: Sequence[Load]) -> Comparison:
    """Set each equivalent load's shear, moment, deflection and end moment against the actual ones.

    Parameters
    ----------
    span : float [m]
    loads : sequence of LineLoad, PointLoad
        As for :func:`equivalents`.

    Returns
    -------
    Comparison
        Five rows, in the order of ``KINDS``.

    Raises
    ------
    ValueError
        As for :func:`equivalents`.

    Examples
    --------
    >>> from calcpack.statics.loads import LineLoad
    >>> row = comparison(4, [LineLoad(0, 2, 0, 10), LineLoad(2, 4, 10, 0)]).row("shear")
    >>> round(row.moment, 3), row.unsafe
    (0.75, ('moment', 'deflection', 'end_moment'))
    """
    actual = responses(span, loads)
    found = _equivalents(span, actual)
    rows = []
    for kind in KINDS:
        load = found.of(kind)
        rows.append(
            ComparisonRow(
                kind,
                load,
                shear=_ratio(UNIFORM["shear"] * load * span, actual.shear),
                moment=_ratio(UNIFORM["moment"] * load * span**2, actual.moment),
                deflection=_ratio(UNIFORM["deflection"] * load * span**4, actual.deflection),
                end_moment=_ratio(UNIFORM["fixed-end moment"] * load * span**2, actual.end_moment),
            )
        )
    return Comparison(span, actual, tuple(rows))


def _equivalents(span: float, actual: Responses) -> Equivalents:
    return Equivalents(
        shear=actual.shear / (UNIFORM["shear"] * span),
        moment=actual.moment / (UNIFORM["moment"] * span**2),
        deflection=actual.deflection / (UNIFORM["deflection"] * span**4),
        fixed_end_moment=actual.end_moment / (UNIFORM["fixed-end moment"] * span**2),
        total=actual.total / (UNIFORM["total"] * span),
    )


def _ratio(equivalent: float, actual: float) -> float:
    if actual:
        return equivalent / actual
    return math.copysign(math.inf, equivalent) if equivalent else 1.0
