"""Exact analysis of a beam: three-moment equations, then integration piece by piece.

Between neighbouring breaks every load set is linear, so that shear, moment, rotation and
deflection are polynomials of degree 2, 3, 4 and 5. Overhangs are integrated from their tips, each
span as a simple beam; the moments over the supports follow from the equality of rotations on
either side of each (É. Clapeyron's three-moment equations, 1857), with all load sets
as right-hand sides of the one system.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence

import numpy as np

from calcpack.statics.line import BeamLine
from calcpack.statics.loads import LineLoad, Load, PointLoad
from calcpack.statics.polynomials import Floats, evaluate, integral
from calcpack.statics.response import Response


def analyse(line: BeamLine, load_sets: Sequence[Sequence[Load]]) -> Response:
    """A beam of constant stiffness under any number of load sets, exactly.

    Parameters
    ----------
    line : BeamLine
    load_sets : sequence of sequences of LineLoad and PointLoad
        Loads may lie anywhere on the beam and over each other. Places closer
        together than 1e-9 of the length count as one; a point load over a support goes
        straight into its reaction.

    Returns
    -------
    Response with one row for each load set.

    Raises
    ------
    ValueError
        If a load is off the beam, runs backwards or is not finite.

    Source: Bernoulli-Euler beam theory; three-moment equations as in S. Timoshenko, Strength of
    Materials, part I, "Continuous beams" (from memory).

    Examples
    --------
    >>> response = analyse(BeamLine(8.0, (0.0, 4.0, 8.0)), [[LineLoad(0.0, 8.0, 10.0, 10.0)]])
    >>> response.support_moments.round(9) + 0.0
    array([[  0., -20.,   0.]])
    >>> response.reactions.round(9)
    array([[15., 50., 15.]])
    """
    loads = [(row, _snapped(line, load)) for row, loads in enumerate(load_sets) for load in loads]
    breaks = _breaks(line, (load for _, load in loads))
    distributed, points = _on_pieces(breaks, len(load_sets), loads)
    return _Integration(line, breaks, distributed, points).response()


def _snapped(line: BeamLine, load: Load) -> Load:
    numbers = (load.force,) if isinstance(load, PointLoad) else (load.first, load.last)
    if not all(math.isfinite(number) for number in numbers):
        raise ValueError(f"a load must be finite: {load!r}")
    if isinstance(load, PointLoad):
        return PointLoad(line.snapped(load.at), load.force)
    if load.end < load.start:
        raise ValueError(f"a line load must not run backwards: {load!r}")
    return LineLoad(line.snapped(load.start), line.snapped(load.end), load.first, load.last)


def _breaks(line: BeamLine, loads: Iterable[Load]) -> Floats:
    """All places where something changes; ends and supports stand exactly."""
    held = np.unique([0.0, line.length, *line.supports])
    places = set[float]()
    for load in loads:
        places.update((load.at,) if isinstance(load, PointLoad) else (load.start, load.end))
    kept: list[float] = []
    for place in sorted(places):
        near = np.abs(held - place).min() <= line.tolerance
        if not near and not (kept and place - kept[-1] <= line.tolerance):
            kept.append(place)
    return np.sort(np.concatenate([held, kept]))


def _on_pieces(breaks: Floats, sets: int, loads: Iterable[tuple[int, Load]]) -> tuple[Floats, Floats]:
    """Line loads as linear functions on the pieces, point loads at the breaks."""
    distributed = np.zeros((sets, len(breaks) - 1, 2))
    points = np.zeros((sets, len(breaks)))
    middles = (breaks[1:] + breaks[:-1]) / 2

    def nearest(place: float) -> int:
        return int(np.searchsorted(middles, place))

    for row, load in loads:
        if isinstance(load, PointLoad):
            points[row, nearest(load.at)] += load.force
            continue
        first, last = nearest(load.start), nearest(load.end)
        if first == last:  # shorter than what counts as one place
            points[row, first] += load.total
            continue
        start = breaks[first]
        slope = (load.last - load.first) / (breaks[last] - start)
        distributed[row, first:last, 0] += load.first + slope * (breaks[first:last] - start)
        distributed[row, first:last, 1] += slope
    return distributed, points


class _Integration:
    """One analysis under way: what is known of the pieces is filled in stretch by stretch."""

    def __init__(self, line: BeamLine, breaks: Floats, load: Floats, points: Floats) -> None:
        self.line, self.breaks, self.load, self.points = line, breaks, load, points
        self.widths = np.diff(breaks)
        sets, pieces, _ = load.shape
        zero = np.zeros((sets, pieces))
        # what the load of a piece alone adds from its left to its right end
        self.shear_gain, self.moment_gain = self._gains(-load)
        # values at the left end of every piece
        self.shear, self.moment = zero.copy(), zero.copy()
        self.rotation, self.deflection = zero.copy(), zero.copy()
        self.at = [int(place) for place in np.searchsorted(breaks, line.supports)]

    def _gains(self, coefficients: Floats) -> tuple[Floats, Floats]:
        """What integrating once and twice over each piece adds."""
        once = integral(coefficients)
        return evaluate(once, self.widths), evaluate(integral(once), self.widths)

    def response(self) -> Response:
        sets, last = len(self.load), len(self.breaks) - 1
        first_support, last_support = self.at[0], self.at[-1]
        left, right = slice(0, first_support), slice(last_support, last)
        spans = [slice(a, b) for a, b in zip(self.at, self.at[1:], strict=False)]
        before = np.zeros((sets, len(self.at)))  # shear just left of each support
        after = np.zeros((sets, len(self.at)))  # and just right of it
        moments = np.zeros((sets, len(self.at)))

        if first_support > 0:
            before[:, 0], moments[:, 0] = self._sum_shear_and_moment(left, np.zeros(sets), np.zeros(sets))
        if last_support < last:
            after[:, -1], moments[:, -1] = self._overhang_root(right)
            self._sum_shear_and_moment(right, after[:, -1], moments[:, -1])
        for number, span in enumerate(spans):
            after[:, number] = self._simple_shear(span)
            before[:, number + 1], _ = self._sum_shear_and_moment(span, after[:, number], np.zeros(sets))
        if spans:
            self._solve_three_moments(spans, moments)
        for number, span in enumerate(spans):
            length = self.breaks[span.stop] - self.breaks[span.start]
            change = (moments[:, number + 1] - moments[:, number]) / length
            after[:, number] += change
            before[:, number + 1] += change
            self._sum_shear_and_moment(span, after[:, number], moments[:, number])

        shear = integral(-self.load, self.shear)
        moment = integral(shear, self.moment)
        self._sum_rotation_and_deflection(moment, left, right, spans)
        rotation = integral(moment, self.rotation)
        deflection = integral(-rotation, self.deflection)
        end_moments = np.zeros((sets, 2))
        if self.line.fixed_start:
            end_moments[:, 0] = moments[:, 0]
        if self.line.fixed_end:
            end_moments[:, 1] = moments[:, -1]
        reactions = after - before + self.points[:, self.at]
        return Response(
            self.line, self.breaks, self.load, shear, moment, rotation, deflection, reactions, end_moments
        )

    def _sum_shear_and_moment(self, part: slice, shear: Floats, moment: Floats) -> tuple[Floats, Floats]:
        """Carry shear and moment from the left of a stretch to its right, point loads on the way.

        A point load at the left end of a stretch counts only at a free tip: elsewhere it stands
        over the support. Returned are the values at the right end, before what stands there.
        """
        jumps = self.points[:, part].copy()
        if part.start == self.at[0] or part.start > 0:
            jumps[:, 0] = 0.0
        ends = np.cumsum(self.shear_gain[:, part] - jumps, axis=1) + shear[:, None]
        # shear at the left of a piece: what the pieces before left, less the point load here
        self.shear[:, part] = np.concatenate(
            [shear[:, None] - jumps[:, :1], ends[:, :-1] - jumps[:, 1:]], axis=1
        )
        gains = self.shear[:, part] * self.widths[part] + self.moment_gain[:, part]
        sums = np.cumsum(gains, axis=1) + moment[:, None]
        self.moment[:, part] = np.concatenate([moment[:, None], sums[:, :-1]], axis=1)
        return ends[:, -1], sums[:, -1]

    def _overhang_root(self, part: slice) -> tuple[Floats, Floats]:
        """Shear and moment at the support of the right overhang, from the loads beyond it."""
        arms = self.breaks[part] - self.breaks[part.start]
        forces = -self.shear_gain[:, part]
        # a piece's load about its own left end: force × width, less what it does about its right end
        about_left = forces * self.widths[part] + self.moment_gain[:, part]
        beyond = self.points[:, part.start + 1 : part.stop + 1]
        arms_beyond = self.breaks[part.start + 1 : part.stop + 1] - self.breaks[part.start]
        shear = forces.sum(axis=1) + beyond.sum(axis=1)
        moment = -(about_left + forces * arms).sum(axis=1) - (beyond * arms_beyond).sum(axis=1)
        return shear, moment

    def _simple_shear(self, span: slice) -> Floats:
        """Left reaction of a span taken as a simple beam, loads over its supports left out."""
        right_arms = self.breaks[span.stop] - self.breaks[span]
        forces = -self.shear_gain[:, span]
        about_right = -self.moment_gain[:, span] + forces * (right_arms - self.widths[span])
        inner = self.points[:, span.start + 1 : span.stop] * right_arms[1:]
        return np.asarray((about_right.sum(axis=1) + inner.sum(axis=1)) / right_arms[0])

    def _solve_three_moments(self, spans: list[slice], moments: Floats) -> None:
        """Fill in the moments over the supports; those at unfixed ends are there already.

        A span of length L with end moments a and b, simple beam moment m, starts with the rotation
        -∫m(L - x)dx/L - L(2a + b)/6 and ends with ∫mx dx/L + L(a + 2b)/6. Every inner support
        has the same rotation on both sides, a fixed end has none.
        """
        size = len(self.at)
        matrix = np.zeros((size, size))
        right_side = np.zeros((size, len(moments)))
        area, about_right = self._gains(integral(integral(-self.load, self.shear), self.moment))
        for number, span in enumerate(spans):
            length = self.breaks[span.stop] - self.breaks[span.start]
            right_arms = self.breaks[span.stop] - self.breaks[span.start + 1 : span.stop + 1]
            start = (about_right[:, span] + area[:, span] * right_arms).sum(axis=1) / length
            end = area[:, span].sum(axis=1) - start
            matrix[number, number : number + 2] += length / 3, length / 6
            matrix[number + 1, number : number + 2] += length / 6, length / 3
            right_side[number] -= start
            right_side[number + 1] -= end
        for row, fixed in ((0, self.line.fixed_start), (size - 1, self.line.fixed_end)):
            if not fixed:  # the moment is known: an overhang's, or none
                matrix[row] = 0.0
                matrix[row, row] = 1.0
                right_side[row] = moments[:, row]
        moments[:] = np.linalg.solve(matrix, right_side).T

    def _sum_rotation_and_deflection(
        self, moment: Floats, left: slice, right: slice, spans: list[slice]
    ) -> None:
        """Integrate twice more: each span between its supports, overhangs outward from theirs."""
        area, rise = self._gains(moment)
        sink = -rise
        turn_first = turn_last = np.zeros(len(moment))
        for number, span in enumerate(spans):
            length = self.breaks[span.stop] - self.breaks[span.start]
            right_arms = self.breaks[span.stop] - self.breaks[span.start + 1 : span.stop + 1]
            turn = (sink[:, span] - area[:, span] * right_arms).sum(axis=1) / length
            turn_last = self._outward(span, area, sink, turn)
            if number == 0:
                turn_first = turn
        if right.stop > right.start:
            self._outward(right, area, sink, turn_last)
        if left.stop > left.start:
            turns = turn_first[:, None] - np.cumsum(area[:, left][:, ::-1], axis=1)[:, ::-1]
            self.rotation[:, left] = turns
            gains = sink[:, left] - turns * self.widths[left]
            self.deflection[:, left] = -np.cumsum(gains[:, ::-1], axis=1)[:, ::-1]

    def _outward(self, part: slice, area: Floats, sink: Floats, turn: Floats) -> Floats:
        """From a support to the right, with the rotation there; returns that at the far end."""
        turns = np.cumsum(area[:, part], axis=1) + turn[:, None]
        self.rotation[:, part] = np.concatenate([turn[:, None], turns[:, :-1]], axis=1)
        gains = sink[:, part] - self.rotation[:, part] * self.widths[part]
        sums = np.cumsum(gains, axis=1)
        self.deflection[:, part] = np.concatenate([np.zeros((len(turn), 1)), sums[:, :-1]], axis=1)
        return np.asarray(turns[:, -1])
