"""The worst a beam can see at every point, when some load sets may be there or not."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from calcpack.statics.curve import Curve, Extreme, farthest
from calcpack.statics.polynomials import Floats, crossings, evaluate, shifted
from calcpack.statics.response import Quantity, Response

SAME_SPLIT = 1e-12
"""Sign changes closer together than this part of the length are one: below it all is rounding."""


@dataclass(frozen=True, eq=False)
class Band:
    """The largest and the smallest a quantity can be, at every point of the beam."""

    upper: Curve
    lower: Curve

    @property
    def largest(self) -> Extreme:
        """The largest value anywhere and its place; ties as `Curve.largest` has them."""
        return self.upper.largest

    @property
    def smallest(self) -> Extreme:
        """The smallest value anywhere and its place."""
        return self.lower.smallest

    @property
    def largest_absolute(self) -> Extreme:
        """The value farthest from zero, with its sign; of two alike the first along the beam."""
        return farthest(self.largest, self.smallest)


@dataclass(frozen=True, eq=False)
class Envelope:
    """Worst values of one combination with its movable load placed at its worst; made by `envelope`.

    Each band is worked out when it is first asked for.
    """

    response: Response
    always: Floats
    placed: Floats

    @cached_property
    def moment(self) -> Band:
        """Bending moment [kNm]."""
        return self._band("moment")

    @cached_property
    def shear(self) -> Band:
        """Shear [kN]."""
        return self._band("shear")

    @cached_property
    def rotation(self) -> Band:
        """Rotation × EI [kNm²]."""
        return self._band("rotation")

    @cached_property
    def deflection(self) -> Band:
        """Deflection × EI [kNm³]."""
        return self._band("deflection")

    @property
    def reactions_max(self) -> Floats:
        """Largest reaction of each support (supports,) [kN]."""
        moved = self.placed[:, None] * self.response.reactions
        return np.asarray(self.always @ self.response.reactions + np.maximum(moved, 0).sum(axis=0))

    @property
    def reactions_min(self) -> Floats:
        """Smallest reaction of each support (supports,) [kN]; negative where the beam lifts off."""
        moved = self.placed[:, None] * self.response.reactions
        return np.asarray(self.always @ self.response.reactions + np.minimum(moved, 0).sum(axis=0))

    def _band(self, quantity: Quantity) -> Band:
        response = self.response
        coefficients: Floats = getattr(response, quantity)
        there = self.placed > 0
        steady = np.tensordot(self.always, coefficients, axes=1)
        parts = self.placed[there, None, None] * coefficients[there]
        breaks = _split(response.breaks, response.sign_changes(quantity)[there])
        steady, parts = _on(breaks, response.breaks, steady), _on(breaks, response.breaks, parts)
        adds = evaluate(parts, np.diff(breaks) / 2)[..., None] > 0
        supports = response.line.supports
        return Band(
            Curve(breaks, steady + np.where(adds, parts, 0.0).sum(axis=0), supports),
            Curve(breaks, steady + np.where(adds, 0.0, parts).sum(axis=0), supports),
        )


def envelope(
    response: Response, always: Sequence[float] | Floats, placed: Sequence[float] | Floats
) -> Envelope:
    """Worst placement at every point, exactly.

    At each point the upper curve is the sum of what is always there and of those placed sets that
    add there, the lower that of those that take away. The pieces are split where a placed set's
    polynomial changes sign, so that the envelope is a piecewise polynomial too.

    Parameters
    ----------
    response : Response
    always : (sets,)
        Factor of each load set that is there whatever else is.
    placed : (sets,)
        Factor, zero or more, of each load set that may be there or not. A set may have both: then
        it is there with the first factor at least and with the sum at most.

    Raises
    ------
    ValueError
        If the number of factors is not that of the sets or a placed factor is negative.

    Examples
    --------
    Two spans of 4 m with 2 kN/m on both for good and 10 kN/m on either or both:

    >>> from calcpack.statics import BeamLine, LineLoad, analyse
    >>> line = BeamLine(8.0, (0.0, 4.0, 8.0))
    >>> sets = [[LineLoad(0, 8, 2, 2)], [LineLoad(0, 4, 10, 10)], [LineLoad(4, 8, 10, 10)]]
    >>> worst = envelope(analyse(line, sets), [1, 0, 0], [0, 1, 1])
    >>> round(worst.moment.smallest.value, 9), worst.moment.smallest.at
    (-24.0, 4.0)
    >>> round(worst.moment.largest.value, 3), round(worst.moment.largest.at, 3)
    (17.51, 1.708)
    >>> worst.reactions_max.round(9)
    array([20.5, 60. , 20.5])
    """
    fixed, moved = np.asarray(always, dtype=float), np.asarray(placed, dtype=float)
    if fixed.shape != (response.sets,) or moved.shape != (response.sets,):
        raise ValueError(f"{fixed.shape} and {moved.shape} factors for {response.sets} load sets")
    if not np.all(moved >= 0):
        raise ValueError("a placed set's factor must not be negative")
    return Envelope(response, fixed, moved)


def enclosing(bands: Sequence[Band]) -> Band:
    """The band about several: at every point the largest of the upper and the smallest of the lower.

    For the envelope over all combinations of one beam; ValueError if there is no band.
    """
    if not bands:
        raise ValueError("no band to enclose")
    band = bands[0]
    for other in bands[1:]:
        band = Band(_outer(band.upper, other.upper, 1.0), _outer(band.lower, other.lower, -1.0))
    return band


def _outer(first: Curve, second: Curve, sign: float) -> Curve:
    """The larger (sign 1) or smaller (sign -1) of two curves at every point."""
    slack = SAME_SPLIT * first.length
    breaks = _merged(np.concatenate([first.breaks, second.breaks]), slack)
    one, two = (_on(breaks, curve.breaks, curve.coefficients) for curve in (first, second))
    finer = _split(breaks, crossings(one - two, np.diff(breaks)))
    one, two = _on(finer, breaks, one), _on(finer, breaks, two)
    ahead = sign * evaluate(one - two, np.diff(finer) / 2) >= 0
    return Curve(finer, np.where(ahead[:, None], one, two), first.preferred)


def _merged(places: Floats, slack: float) -> Floats:
    """Ascending, each place once."""
    places = np.sort(places)
    first = np.concatenate([[True], np.diff(places) > slack])
    return np.asarray(places[first])


def _split(breaks: Floats, inside: Floats) -> Floats:
    """Breaks with the places in (..., pieces, k), counted from each piece's start, added."""
    places = (inside + breaks[:-1, None]).ravel()
    places = places[~np.isnan(places)]
    slack = SAME_SPLIT * (breaks[-1] - breaks[0])
    after = np.clip(np.searchsorted(breaks, places), 1, len(breaks) - 1)
    clear = (breaks[after] - places > slack) & (places - breaks[after - 1] > slack)
    if not clear.any():
        return breaks
    return np.sort(np.concatenate([breaks, _merged(places[clear], slack)]))


def _on(finer: Floats, breaks: Floats, coefficients: Floats) -> Floats:
    """Piecewise polynomials (..., pieces, degree + 1) written on finer pieces."""
    middles = (finer[1:] + finer[:-1]) / 2
    owner = np.searchsorted(breaks, middles) - 1
    return shifted(coefficients[..., owner, :], finer[:-1] - breaks[owner])
