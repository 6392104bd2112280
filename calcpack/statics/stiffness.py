"""A second road to the same beam: the direct stiffness method.

Elements with cubic (Hermite) shape functions, loads turned into nodal ones by exact integration
against those functions. For a beam of constant stiffness that makes the nodal values exact whatever the
loads between the nodes; only rounding is left. Nothing here is shared with the exact
piecewise road but the beam and the loads.

Source: direct stiffness method, as in J. S. Przemieniecki, Theory of Matrix Structural Analysis (from
memory).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from calcpack.statics.line import BeamLine
from calcpack.statics.loads import Load, PointLoad

SHORTEST = 0.02
"""Shortest element between load breaks, as a part of its stretch between supports: shorter ones would only
add rounding, as loads are integrated exactly wherever the nodes are."""

_GAUSS, _WEIGHTS = np.polynomial.legendre.leggauss(3)  # exact to degree 5: cubic shape × linear load


@dataclass(frozen=True, eq=False)
class StiffnessResult:
    """A beam under one load set, with stiffness EI taken as 1; signs as in `Response`.

    Attributes
    ----------
    nodes : (n,) [m]
        Ends, supports, and where loads begin, end and stand.
    deflections, rotations : (n,) [kNm³], [kNm²]
    reactions, support_moments : (supports,) [kN], [kNm]
    end_moments : (2,) [kNm]
        At start and end where fixed, else zero.
    """

    nodes: NDArray[np.float64]
    deflections: NDArray[np.float64]
    rotations: NDArray[np.float64]
    reactions: NDArray[np.float64]
    support_moments: NDArray[np.float64]
    end_moments: NDArray[np.float64]


def stiffness_check(line: BeamLine, loads: Sequence[Load]) -> StiffnessResult:
    """Reactions, support moments and nodal deflections by the direct stiffness method.

    Parameters
    ----------
    line : BeamLine
    loads : sequence of LineLoad and PointLoad
        On the beam.

    Examples
    --------
    >>> from calcpack.statics.loads import LineLoad
    >>> result = stiffness_check(BeamLine(8.0, (0.0, 4.0, 8.0)), [LineLoad(0.0, 8.0, 10.0, 10.0)])
    >>> result.reactions.round(9)
    array([15., 50., 15.])
    >>> result.support_moments.round(9) + 0.0
    array([  0., -20.,   0.])
    """
    nodes = _nodes(line, loads)
    size = 2 * len(nodes)
    stiffness = np.zeros((size, size))
    acting = np.zeros(size)
    elements = list(pairwise(nodes.tolist()))
    element_loads = [_consistent(start, end, loads, end == line.length) for start, end in elements]
    for number, (start, end) in enumerate(elements):
        freedoms = slice(2 * number, 2 * number + 4)
        stiffness[freedoms, freedoms] += _element(end - start)
        acting[freedoms] += element_loads[number]

    supported = [int(np.argmin(np.abs(nodes - place))) for place in line.supports]
    held = [2 * node for node in supported]
    if line.fixed_start:
        held.append(1)
    if line.fixed_end:
        held.append(size - 1)
    free = np.setdiff1d(np.arange(size), held)
    moved = np.zeros(size)
    if len(free):
        # forces and moments, short and long elements: scaled to a unit diagonal first
        scale = 1 / np.sqrt(np.diag(stiffness)[free])
        scaled = stiffness[np.ix_(free, free)] * scale * scale[:, None]
        moved[free] = np.linalg.solve(scaled, acting[free] * scale) * scale
    holding = acting - stiffness @ moved  # what supports push up, and turn clockwise, to hold the beam

    moments = np.zeros(len(nodes))
    for number, (start, end) in enumerate(elements):
        freedoms = slice(2 * number, 2 * number + 4)
        forces = _element(end - start) @ moved[freedoms] - element_loads[number]
        if number == 0:
            moments[0] = forces[1]
        moments[number + 1] = -forces[3]
    return StiffnessResult(
        nodes=nodes,
        deflections=moved[0::2],
        rotations=-moved[1::2],
        reactions=holding[[2 * node for node in supported]],
        support_moments=moments[supported],
        end_moments=np.array(
            [moments[0] if line.fixed_start else 0.0, moments[-1] if line.fixed_end else 0.0]
        ),
    )


def _nodes(line: BeamLine, loads: Sequence[Load]) -> NDArray[np.float64]:
    anchors = sorted({0.0, line.length, *line.supports})
    places: set[float] = set()
    for load in loads:
        places.update((load.at,) if isinstance(load, PointLoad) else (load.start, load.end))
    nodes = list(anchors)
    for start, end in pairwise(anchors):
        shortest = SHORTEST * (end - start)
        last = start
        for place in sorted(places):
            if last + shortest <= place <= end - shortest:
                nodes.append(place)
                last = place
    return np.array(sorted(nodes))


def _element(length: float) -> NDArray[np.float64]:
    """Stiffness of one element; freedoms: deflection (down) and slope dv/dx, left then right."""
    h = length
    matrix = [
        [12, 6 * h, -12, 6 * h],
        [6 * h, 4 * h**2, -6 * h, 2 * h**2],
        [-12, -6 * h, 12, -6 * h],
        [6 * h, 2 * h**2, -6 * h, 4 * h**2],
    ]
    return np.array(matrix) / h**3


def _shapes(t: NDArray[np.float64] | float, length: float) -> NDArray[np.float64]:
    """Hermite functions at t = 0..1 along an element, one a row."""
    return np.array(
        [
            1 - 3 * t**2 + 2 * t**3,
            length * (t - 2 * t**2 + t**3),
            3 * t**2 - 2 * t**3,
            length * (t**3 - t**2),
        ]
    )


def _consistent(start: float, end: float, loads: Sequence[Load], last: bool) -> NDArray[np.float64]:
    """Nodal loads of one element; a point load on a node goes to the element that starts there."""
    length = end - start
    total = np.zeros(4)
    for load in loads:
        if isinstance(load, PointLoad):
            if start <= load.at < end or (last and load.at >= end) or (start == 0.0 and load.at < 0):
                total += load.force * _shapes(min(max((load.at - start) / length, 0.0), 1.0), length)
            continue
        low, high = max(start, load.start), min(end, load.end)
        if high > low:
            x = (low + high) / 2 + (high - low) / 2 * _GAUSS
            along = (x - load.start) / (load.end - load.start)
            intensity = load.first + (load.last - load.first) * along
            total += _shapes((x - start) / length, length) @ (intensity * _WEIGHTS) * ((high - low) / 2)
    return total
