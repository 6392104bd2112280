"""The worst of a combination, movable load placed set by set wherever it adds."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Literal

import numpy as np

from calcpack.job.errors import CalcpackError
from calcpack.record.auditing.beam import Floats, Solution
from calcpack.record.auditing.polynomials import slope, value, zeros

Quantity = Literal["shear", "moment", "deflection"]
SAME = 1e-9
MOST = 1_500_000  # sets times pieces: more is no beam


@dataclass(frozen=True)
class Extreme:
    """An extreme value, and where it is reached: places, and stretches along which it is constant [m]."""

    value: float
    places: tuple[float, ...]
    stretches: tuple[tuple[float, float], ...]

    def reached_at(self, place: float, slack: float) -> bool:
        """Whether it is reached at a place, within a slack [m]."""
        return any(abs(place - other) <= slack for other in self.places) or any(
            start - slack <= place <= end + slack for start, end in self.stretches
        )


@dataclass(frozen=True)
class _Pieces:
    """Every set's polynomials on pieces within which none of them changes sign (local t from 0 to 1)."""

    start: Floats  # (pieces,) [m]
    length: Floats
    coefficients: Floats  # (sets, pieces, degree + 1) in t
    positive: Floats  # (sets, pieces), 1 where above zero


class Worst:
    """A solved beam under load sets, ready for combinations.

    Parameters
    ----------
    solution : Solution
    """

    def __init__(self, solution: Solution) -> None:
        self.solution = solution

    def _pieces(self, quantity: Quantity) -> _Pieces:
        if quantity not in self._cut:
            self._cut[quantity] = self._divided(quantity)
        return self._cut[quantity]

    @cached_property
    def _cut(self) -> dict[Quantity, _Pieces]:
        return {}

    def _divided(self, quantity: Quantity) -> _Pieces:
        found: Floats = getattr(self.solution, quantity)
        h = self.solution.lengths
        scaled = found * h[:, None] ** np.arange(found.shape[-1])
        sets, elements = scaled.shape[:2]
        changes = zeros(scaled).transpose(1, 0, 2).reshape(elements, -1)
        edge = np.zeros((elements, 1))
        knots = np.sort(np.concatenate([edge, changes, edge + 1.0], axis=1), axis=1)
        own, first = np.nonzero(np.diff(knots, axis=1) > 0)
        a, b = knots[own, first], knots[own, first + 1]
        if sets * len(a) > MOST:
            raise CalcpackError("more loads than an audit takes on")
        parts = _between(scaled[:, own], a, b - a)
        start = self.solution.nodes[own] + a * h[own]
        positive = (value(parts, np.array(0.5)) > 0).astype(float)
        return _Pieces(start, (b - a) * h[own], parts, positive)

    def extremes(self, quantity: Quantity, always: Floats, placed: Floats) -> list[tuple[Extreme, Extreme]]:
        """Largest and smallest value of each of several combinations.

        Parameters
        ----------
        quantity : str
        always, placed : (combinations, sets)
            Factors of what is there, and of what may be there or not.
        """
        pieces = self._pieces(quantity)
        if always.size * len(pieces.start) > MOST:
            raise CalcpackError("more loads than an audit takes on")
        steady = np.tensordot(always, pieces.coefficients, axes=1)
        upper = steady + np.tensordot(placed, pieces.positive[..., None] * pieces.coefficients, axes=1)
        lower = steady + np.tensordot(placed, (1 - pieces.positive[..., None]) * pieces.coefficients, axes=1)
        return list(zip(_extremes(pieces, upper, 1.0), _extremes(pieces, lower, -1.0), strict=True))

    def reactions(self, always: Floats, placed: Floats) -> tuple[Floats, Floats]:
        """Largest and smallest reaction of each support [kN]."""
        steady = always @ self.solution.reactions
        moved = placed[:, None] * self.solution.reactions
        return steady + np.maximum(moved, 0).sum(axis=0), steady + np.minimum(moved, 0).sum(axis=0)


def _between(coefficients: Floats, start: Floats, length: Floats) -> Floats:
    """Polynomials in t written for t = start + length s."""
    degree = coefficients.shape[-1]
    moved = np.zeros_like(coefficients)
    for power in range(degree - 1, -1, -1):
        # Horner's rule on polynomials: moved = moved * (start + length s) + coefficient
        shifted = moved * start[:, None]
        shifted[..., 1:] += moved[..., :-1] * length[:, None]
        shifted[..., 0] += coefficients[..., power]
        moved = shifted
    return moved


def _extremes(pieces: _Pieces, curves: Floats, sign: float) -> list[Extreme]:
    """The largest (sign 1) or smallest (sign -1) value of each curve, with all its places."""
    turns = zeros(slope(curves))
    edge = np.zeros((*curves.shape[:-1], 1))
    t = np.concatenate([edge, turns, edge + 1.0], axis=-1)
    values = value(curves[..., None, :], t)
    inside = sign * value(curves, np.full(curves.shape[:-1], 0.37))
    found = []
    for row in range(len(curves)):
        best = float((sign * values[row]).max())
        slack = SAME * max(float(np.abs(values[row]).max()), 1e-300)
        reached = sign * values[row] >= best - slack
        places = (pieces.start[:, None] + t[row] * pieces.length[:, None])[reached]
        flat = reached.all(axis=1) & (inside[row] >= best - slack)
        stretches = tuple(
            (float(start), float(start + length))
            for start, length in zip(pieces.start[flat], pieces.length[flat], strict=True)
        )
        found.append(Extreme(sign * best, tuple(np.unique(places).tolist()), stretches))
    return found
