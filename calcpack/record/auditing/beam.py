"""The beam solved again: finite elements, cubic, on scipy's sparse matrices.

Bending stiffness is 1; deflections are times E I. Downward loads, deflections and upward reactions are
positive, sagging moments positive. Inside an element the exact moment and deflection follow from the end
values and the load, so that no mesh has to be refined.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy import sparse
from scipy.sparse.linalg import splu

from calcpack.job.errors import CalcpackError

Floats = NDArray[np.float64]
MOST = 200_000  # sets times places: more is no beam
SAME = 1e-9  # of the length: places closer together are one


@dataclass(frozen=True, slots=True)
class Load:
    """A line load from ``start`` to ``end`` [m], ``first`` to ``last`` [kN/m]; or a point load [kN].

    A point load has ``start`` equal to ``end`` and its force in ``first``.
    """

    start: float
    end: float
    first: float
    last: float
    source: str = ""
    point: bool = False

    @property
    def total(self) -> float:
        """[kN]."""
        return self.first if self.point else (self.end - self.start) * (self.first + self.last) / 2

    def times(self, factor: float) -> Load:
        """The load times a factor."""
        return Load(self.start, self.end, factor * self.first, factor * self.last, self.source, self.point)

    def moved(self, by: float) -> Load:
        """The load farther along the beam by so much [m]."""
        return Load(self.start + by, self.end + by, self.first, self.last, self.source, self.point)


def part_of(loads: Sequence[Load], start: float, end: float) -> list[Load]:
    """What of some loads lies on a stretch, point loads at its very ends left out; places unchanged.

    Examples
    --------
    >>> part_of([Load(0, 4, 0, 8), Load(2, 2, 5, 5, point=True)], 2, 4)
    [Load(start=2, end=4, first=4.0, last=8.0, source='', point=False)]
    """
    found = []
    slack = SAME * max(abs(start), abs(end))
    for load in loads:
        if load.point:
            if start + slack < load.start < end - slack:
                found.append(load)
            continue
        a, b = max(load.start, start), min(load.end, end)
        if b - a <= slack:
            continue
        rise = (load.last - load.first) / (load.end - load.start)
        first, last = load.first + rise * (a - load.start), load.last - rise * (load.end - b)
        found.append(Load(a, b, first, last, load.source))
    return found


@dataclass(frozen=True)
class Solution:
    """Elements with their exact polynomials, one set of loads a row.

    Parameters
    ----------
    nodes : (n + 1,) [m]
    shear, moment, deflection : (sets, n, degree + 1)
        Ascending powers of x - nodes[i], both sides of a node belonging to their element.
    reactions : (sets, supports) [kN]
    end_moments : (sets, 2) [kNm]
        Of the ends, zero unless fixed.
    """

    nodes: Floats
    shear: Floats
    moment: Floats
    deflection: Floats
    reactions: Floats
    end_moments: Floats

    @cached_property
    def lengths(self) -> Floats:
        """Of the elements [m]."""
        return np.diff(self.nodes)


def solve(
    length: float,
    supports: Sequence[float],
    fixed: tuple[bool, bool],
    sets: Sequence[Sequence[Load]],
) -> Solution:
    """Solve a beam under several sets of loads.

    Parameters
    ----------
    length : float [m]
    supports : places [m], ascending
    fixed : (start, end)
        Ends held against rotation.
    sets : sets of loads

    Raises
    ------
    ValueError
        The beam is a mechanism, or a load lies off it.
    CalcpackError
        More loads than any beam has.

    Examples
    --------
    >>> found = solve(8.0, (0.0, 4.0, 8.0), (False, False), [[Load(0, 8, 10, 10)]])
    >>> found.reactions.round(9)
    array([[15., 50., 15.]])
    """
    places = [0.0, length, *supports]
    for loads in sets:
        for load in loads:
            if not -SAME * length <= load.start <= load.end <= length * (1 + SAME):
                raise ValueError(f"a load stands at {load.start:g} m to {load.end:g} m, off the beam")
            places += (load.start, load.end)
    nodes = _merged(places, SAME * length)
    count = len(nodes)
    if len(sets) * len(nodes) > MOST:
        raise CalcpackError("more loads than an audit takes on")
    at = {place: _nearest(nodes, place) for place in dict.fromkeys(places)}
    h = np.diff(nodes)
    forces, intensity = _loading(nodes, at, sets)
    held = sorted({2 * at[place] for place in supports})
    held += [2 * node + 1 for node, is_fixed in ((0, fixed[0]), (count - 1, fixed[1])) if is_fixed]
    if len(held) < 2:
        raise ValueError("the beam is a mechanism")
    turned = np.zeros((2 * count, len(sets)))
    free = np.ones(2 * count, dtype=bool)
    free[held] = False
    elements = _elements(h)
    try:
        turned[free] = splu(_stiffness(elements, free)).solve(forces[free])
    except RuntimeError:  # what scipy says of a singular matrix
        raise ValueError("spans so unlike each other that the beam cannot be solved") from None
    residual = _holding(elements, turned) - forces
    reactions = -residual[[2 * at[place] for place in supports]].T
    shear, moment, deflection = _recovered(h, turned, intensity)
    ends = np.stack([moment[:, 0, 0] * fixed[0], _at_end(moment[:, -1], h[-1]) * fixed[1]], axis=1)
    return Solution(nodes, shear, moment, deflection, reactions + 0.0, ends)


def _merged(places: Sequence[float], slack: float) -> Floats:
    ordered = np.sort(np.asarray(places, dtype=float))
    found: Floats = ordered[np.concatenate([[True], np.diff(ordered) > slack])]
    return found


def _nearest(nodes: Floats, place: float) -> int:
    return int(np.abs(nodes - place).argmin())


def _loading(nodes: Floats, at: dict[float, int], sets: Sequence[Sequence[Load]]) -> tuple[Floats, Floats]:
    """Forces on the nodes (2 n, sets), and each element's load: its start value and its slope."""
    h = np.diff(nodes)
    forces = np.zeros((2 * len(nodes), len(sets)))
    intensity = np.zeros((len(sets), len(h), 2))
    for row, loads in enumerate(sets):
        for load in loads:
            first, last = at[load.start], at[load.end]
            if load.point:
                forces[2 * first, row] += load.first
            elif last > first:
                rise = (load.last - load.first) / (load.end - load.start)
                inside = slice(first, last)
                intensity[row, inside, 0] += load.first + rise * (nodes[inside] - nodes[first])
                intensity[row, inside, 1] += rise
    a, b = intensity[..., 0], intensity[..., 1] * h
    consistent = [
        h * (a / 2 + 3 * b / 20),
        h**2 * (a / 12 + b / 30),
        h * (a / 2 + 7 * b / 20),
        -(h**2) * (a / 12 + b / 20),
    ]
    for place, part in enumerate(consistent):
        np.add.at(forces, 2 * np.arange(len(h)) + place, part.T)
    return forces, intensity


def _elements(h: Floats) -> Floats:
    """Stiffness of each element, (4, 4, elements): moved and turned at its start, then at its end."""
    one = np.ones_like(h)
    found: Floats = np.array(
        [
            [12 * one, 6 * h, -12 * one, 6 * h],
            [6 * h, 4 * h**2, -6 * h, 2 * h**2],
            [-12 * one, -6 * h, 12 * one, -6 * h],
            [6 * h, 2 * h**2, -6 * h, 4 * h**2],
        ]
    ) / (h**3)
    return found


def _freedoms(count: int) -> NDArray[np.int_]:
    """Numbers of the freedoms of each element, (4, elements)."""
    return 2 * np.arange(count) + np.arange(4)[:, None]


def _stiffness(elements: Floats, free: NDArray[np.bool_]) -> sparse.csc_matrix:
    """Of the freedoms that are free, among themselves."""
    own, place = _freedoms(elements.shape[-1]), np.cumsum(free) - 1
    i = np.broadcast_to(own[:, None], elements.shape)
    j = np.broadcast_to(own[None], elements.shape)
    inner = free[i] & free[j]
    size = int(free.sum())
    return sparse.csc_matrix((elements[inner], (place[i[inner]], place[j[inner]])), shape=(size, size))


def _holding(elements: Floats, turned: Floats) -> Floats:
    """The forces that hold all freedoms where they are."""
    own = _freedoms(elements.shape[-1])
    found = np.zeros_like(turned)
    np.add.at(found, own, np.einsum("ijn,jns->ins", elements, turned[own]))
    return found


def _recovered(h: Floats, turned: Floats, intensity: Floats) -> tuple[Floats, Floats, Floats]:
    """Shear, moment and deflection of each element as polynomials, from its end values and its load."""
    a, b = intensity[..., 0], intensity[..., 1]
    v0, r0 = turned[0:-2:2].T, turned[1:-2:2].T
    v1, r1 = turned[2::2].T, turned[3::2].T
    # v(x) = v0 + r0 x - M0 x2/2 - V0 x3/6 + a x4/24 + b x5/120, with v and v' known at h.
    gap = v1 - v0 - r0 * h - a * h**4 / 24 - b * h**5 / 120
    turn = r1 - r0 - a * h**3 / 6 - b * h**4 / 24
    m0 = (2 * turn * h - 6 * gap) / h**2
    q0 = (12 * gap - 6 * turn * h) / h**3
    shear = np.stack([q0, -a, -b / 2], axis=-1)
    moment = np.stack([m0, q0, -a / 2, -b / 6], axis=-1)
    deflection = np.stack([v0, r0, -m0 / 2, -q0 / 6, a / 24, b / 120], axis=-1)
    return shear, moment, deflection


def _at_end(coefficients: Floats, h: float) -> Floats:
    found: Floats = sum(
        (coefficients[..., power] * h**power for power in range(coefficients.shape[-1])),
        start=np.zeros(coefficients.shape[:-1]),
    )
    return found
