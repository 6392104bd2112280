"""A quantity along the beam: a piecewise polynomial with its extremes, zeros and samples."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property
from typing import Literal, NamedTuple

import numpy as np
from numpy.typing import NDArray

from calcpack.statics.line import SAME_PLACE
from calcpack.statics.polynomials import Floats, crossings, derivative, evaluate

SAME_VALUE = 1e-9
"""Values closer together than this part of a curve's largest absolute value are the same."""


class Extreme(NamedTuple):
    """A largest or smallest value and the place [m] where it is reached."""

    value: float
    at: float


@dataclass(frozen=True, eq=False)
class Curve:
    """A quantity along the beam, polynomial between its breaks; it may jump at a break.

    Parameters
    ----------
    breaks : (n + 1,) [m]
    coefficients : (n, degree + 1)
        Ascending powers of x - breaks[i] on piece i.
    preferred : tuple of float [m]
        The supports: where the same value is reached all along a stretch, a support in it is
        named rather than its middle.

    Examples
    --------
    >>> curve = Curve(np.array([0.0, 2.0, 4.0]), np.array([[5.0, 0.0], [-5.0, 1.0]]))
    >>> curve.at(2.0), curve.at(2.0, side="left"), curve.largest, curve.smallest
    (-5.0, 5.0, Extreme(value=5.0, at=1.0), Extreme(value=-5.0, at=2.0))
    >>> curve.zeros()
    (2.0,)
    """

    breaks: Floats
    coefficients: Floats
    preferred: tuple[float, ...] = ()

    def at(self, x: float, side: Literal["left", "right"] = "right") -> float:
        """Value at x, where it jumps the one on the given side.

        The start has a right side and the end a left side only, whichever is asked for. Places off
        the beam raise ValueError.
        """
        return float(self.values(np.array(x), side))

    def values(self, x: Floats, side: Literal["left", "right"] = "right") -> Floats:
        """Values at many places, as `at` gives them."""
        slack = SAME_PLACE * self.length
        if not np.all((x >= self.breaks[0] - slack) & (x <= self.breaks[-1] + slack)):
            raise ValueError("a place off the beam")
        # a place within the slack of a break is that break
        near = self.breaks[np.searchsorted((self.breaks[1:] + self.breaks[:-1]) / 2, x)]
        x = np.where(np.abs(near - x) <= slack, near, x)
        piece = np.searchsorted(self.breaks, x, side="left" if side == "left" else "right") - 1
        piece = np.clip(piece, 0, len(self.coefficients) - 1)
        return evaluate(self.coefficients[piece], x - self.breaks[piece])

    @property
    def length(self) -> float:
        """From the first break to the last [m]."""
        return float(self.breaks[-1] - self.breaks[0])

    def sample(self, n: int = 200) -> tuple[Floats, Floats]:
        """Places and values for a plot: n evenly spaced, and every break from both sides.

        Both sides of a break are given, so that a jump is drawn as a vertical line.
        """
        even = np.linspace(self.breaks[0], self.breaks[-1], n)
        inner = even[~np.isin(even, self.breaks)]
        x = np.concatenate([self.breaks[:-1], inner, self.breaks[1:]])
        piece = np.concatenate(
            [
                np.arange(len(self.coefficients)),
                np.searchsorted(self.breaks, inner) - 1,
                np.arange(len(self.coefficients)),
            ]
        )
        order = np.lexsort((x, piece))
        x, piece = x[order], piece[order]
        return x, evaluate(self.coefficients[piece], x - self.breaks[piece])

    @cached_property
    def _candidates(self) -> tuple[Floats, Floats]:
        """Places and values (n, degree + 1): each piece's left end, its turning points, its right end.

        Where a piece turns fewer times than it might, its right end stands in.
        """
        widths = np.diff(self.breaks)
        turns = crossings(derivative(self.coefficients), widths)
        local = np.concatenate([np.zeros((len(widths), 1)), turns, widths[:, None]], axis=1)
        local = np.where(np.isnan(local), widths[:, None], local)
        return self.breaks[:-1, None] + local, evaluate(self.coefficients[:, None, :], local)

    @cached_property
    def _slack(self) -> float:
        """Differences below this are rounding."""
        return SAME_VALUE * float(np.abs(self._candidates[1]).max(initial=0.0))

    def _first_stretch(self, reached: Callable[[Floats], NDArray[np.bool_]]) -> float | None:
        """The place to name for what is first reached along the beam."""
        stretches = self._stretches(reached)
        return self._place(*stretches[0]) if stretches else None

    def _place(self, start: float, end: float) -> float:
        slack = SAME_PLACE * self.length
        for place in self.preferred:
            if start - slack <= place <= end + slack:
                return place
        return (start + end) / 2

    def _stretches(self, reached: Callable[[Floats], NDArray[np.bool_]]) -> list[tuple[float, float]]:
        """Points and stretches where the candidates reach something, in order.

        Candidates that follow each other and all reach it are one stretch: between two of them the
        curve is monotone.
        """
        places, values = self._candidates
        hits = reached(values)
        slack = SAME_PLACE * self.length
        found: list[tuple[float, float]] = []
        joined = False
        for place, hit in zip(places.ravel().tolist(), hits.ravel().tolist(), strict=True):
            if hit and (joined or (found and place - found[-1][1] <= slack)):
                found[-1] = (found[-1][0], place)
            elif hit:
                found.append((place, place))
            joined = hit
        return found

    @cached_property
    def largest(self) -> Extreme:
        """The largest value and its place.

        Reached at several places: the first along the beam. Reached all along a stretch: a support
        in it, else its middle. Values within 1e-9 of the largest absolute value count as reached, so
        that rounding does not decide.
        """
        value = float(self._candidates[1].max())
        place = self._first_stretch(lambda values: values >= value - self._slack)
        assert place is not None
        return Extreme(value, place)

    @cached_property
    def smallest(self) -> Extreme:
        """The smallest value and its place, by the rule of `largest`."""
        value = float(self._candidates[1].min())
        place = self._first_stretch(lambda values: values <= value + self._slack)
        assert place is not None
        return Extreme(value, place)

    @property
    def largest_absolute(self) -> Extreme:
        """The value that is farthest from zero, with its sign; of two alike the first along the beam."""
        return farthest(self.largest, self.smallest)

    def zeros(self) -> tuple[float, ...]:
        """Places [m] where the curve is, touches or passes through zero, also with a jump.

        A stretch of zero gives one place: a support in it, else its middle. Ends count.
        """
        slack = self._slack
        near = [self._place(*stretch) for stretch in self._stretches(lambda values: np.abs(values) <= slack)]
        widths = np.diff(self.breaks)
        roots = crossings(self.coefficients, widths) + self.breaks[:-1, None]
        before = evaluate(self.coefficients[:-1], widths[:-1])
        after = self.coefficients[1:, 0]
        jumped = (np.minimum(before, after) < -slack) & (np.maximum(before, after) > slack)
        stretches = self._stretches(lambda values: np.abs(values) <= slack)
        close = SAME_PLACE * self.length
        for place in (*roots[~np.isnan(roots)].tolist(), *self.breaks[1:-1][jumped].tolist()):
            known = any(a - close <= place <= b + close for a, b in stretches)
            if not known and not any(abs(place - other) <= close for other in near):
                near.append(place)
        return tuple(sorted(near))


def farthest(largest: Extreme, smallest: Extreme) -> Extreme:
    """Of the largest and the smallest value the one farther from zero, alike: the first along the beam."""
    slack = SAME_VALUE * max(abs(largest.value), abs(smallest.value))
    if abs(abs(largest.value) - abs(smallest.value)) <= slack:
        return min(largest, smallest, key=lambda extreme: extreme.at)
    return max(largest, smallest, key=lambda extreme: abs(extreme.value))
