"""Second road: one beam by finite elements, and the worst placement of its movable loads by trial."""

from __future__ import annotations

import math
from typing import Any, NamedTuple

import numpy as np
from scipy.optimize import brentq
from second_road_job import Force, Load

MOST_PLACEMENTS = 12  # as many are tried in every subset


class Solution:
    """A beam of stiffness 1 under several sets of loads: Hermite elements.

    ``fields`` gives load, shear, moment, rotation and deflection within each element.
    """

    def __init__(
        self, length: float, supports: list[float], fixed: tuple[bool, bool], sets: list[list[Load]]
    ) -> None:
        places = [0.0, length, *supports]
        for load in (load for loads in sets for load in loads):
            places += [load.at] if isinstance(load, Force) else [load.start, load.end]
        nodes: list[float] = sorted({0.0, length, *supports})
        for place in sorted(places):
            if min(abs(place - node) for node in nodes) > 1e-7 * length:
                nodes.append(place)
        self.nodes = np.array(sorted(nodes))
        self.width = np.diff(self.nodes)
        self._loads(sets)
        self._displacements(supports, fixed)
        self._march(supports)

    def _node(self, place: float) -> int:
        return int(np.abs(self.nodes - place).argmin())

    def _loads(self, sets: list[list[Load]]) -> None:
        """Intensities at both ends of each element (sets, elements, 2), forces on nodes (sets, nodes)."""
        self.spread = np.zeros((len(sets), len(self.width), 2))
        self.forces = np.zeros((len(sets), len(self.nodes)))
        for number_, loads in enumerate(sets):
            for load in loads:
                if isinstance(load, Force):
                    self.forces[number_, self._node(load.at)] += load.size
                    continue
                a, b = self._node(load.start), self._node(load.end)
                if a < b:
                    ends = self.nodes[[a, b]]
                    values = np.interp(self.nodes[a : b + 1], ends, [load.first, load.last])
                    self.spread[number_, a:b, 0] += values[:-1]
                    self.spread[number_, a:b, 1] += values[1:]

    def _displacements(self, supports: list[float], fixed: tuple[bool, bool]) -> None:
        """Nodal deflections and rotations; residual forces at what is held.

        Assembled in extended precision and solved with refinement, since elements may be short.
        """
        count = 2 * len(self.nodes)
        stiffness = np.zeros((count, count), dtype=np.longdouble)
        right = np.zeros((count, len(self.spread)), dtype=np.longdouble)
        right[::2] = self.forces.T
        points, weights = np.polynomial.legendre.leggauss(4)
        xi = (points + 1) / 2
        for e, h in enumerate(self.width.astype(np.longdouble)):
            six, four, two = 6 / h**2, 4 / h, 2 / h
            twelve = 12 / h**3
            stiffness[2 * e : 2 * e + 4, 2 * e : 2 * e + 4] += np.array(
                [
                    [twelve, six, -twelve, six],
                    [six, four, -six, two],
                    [-twelve, -six, twelve, -six],
                    [six, two, -six, four],
                ]
            )
            shapes = np.array(
                [
                    1 - 3 * xi**2 + 2 * xi**3,
                    h * (xi - 2 * xi**2 + xi**3),
                    3 * xi**2 - 2 * xi**3,
                    h * (xi**3 - xi**2),
                ]
            )
            at_points = self.spread[:, e, :1] * (1 - xi) + self.spread[:, e, 1:] * xi
            right[2 * e : 2 * e + 4] += (shapes * weights / 2 * h) @ at_points.T
        held = [2 * self._node(support) for support in supports]
        held += [1] * fixed[0] + [count - 1] * fixed[1]
        open_ = np.setdiff1d(np.arange(count), held)
        found = np.zeros_like(right)
        loose = stiffness[np.ix_(open_, open_)]
        scale = 1 / np.sqrt(np.diag(loose))[:, None]
        inverse = np.linalg.inv((scale * loose * scale.T).astype(float))
        for _ in range(8):
            found[open_] += scale * (inverse @ (scale * (right[open_] - loose @ found[open_])).astype(float))
        residual = (stiffness @ found - right).astype(float)
        self.deflection, self.rotation = found[::2].T.astype(float), found[1::2].T.astype(float)
        self.reactions = -residual[[2 * self._node(support) for support in supports]].T
        self.end_moments = np.array([residual[1] * fixed[0], -residual[-1] * fixed[1]]).T

    def _march(self, supports: list[float]) -> None:
        """Shear and moment at each element's left end, from equilibrium; checked at the far end."""
        jumps = -self.forces
        for column, support in enumerate(supports):
            jumps[:, self._node(support)] += self.reactions[:, column]
        first, last, h = self.spread[..., 0], self.spread[..., 1], self.width
        shear, moment = [jumps[:, 0]], [self.end_moments[:, 0]]
        for e in range(len(h)):
            moment.append(
                moment[-1] + shear[-1] * h[e] - first[:, e] * h[e] ** 2 / 2
                - (last[:, e] - first[:, e]) * h[e] ** 2 / 6
            )  # fmt: skip
            shear.append(shear[-1] - h[e] * (first[:, e] + last[:, e]) / 2 + jumps[:, e + 1])
        scale = float(np.abs(jumps).sum()) + 1e-9
        assert np.abs(shear[-1]).max(initial=0.0) < 1e-9 * scale, "forces do not balance"
        assert np.abs(moment[-1] - self.end_moments[:, 1]).max(initial=0.0) < 1e-9 * scale * self.nodes[-1]
        self.shear, self.moment = np.array(shear[:-1]).T, np.array(moment[:-1]).T
        slope = (last - first) / h
        nothing = np.zeros_like(first)
        v, m, r, d = self.shear, self.moment, self.rotation[:, :-1], self.deflection[:, :-1]
        powers = {
            "load": [first, slope, nothing, nothing, nothing, nothing],
            "shear": [v, -first, -slope / 2, nothing, nothing, nothing],
            "moment": [m, v, -first / 2, -slope / 6, nothing, nothing],
            "rotation": [r, -m, -v / 2, first / 6, slope / 24, nothing],
            "deflection": [d, r, -m / 2, -v / 6, first / 24, slope / 120],
        }
        self.fields = {name: np.stack(each, axis=-1) for name, each in powers.items()}


RATE = {"moment": ("shear", 1.0), "shear": ("load", -1.0), "deflection": ("rotation", 1.0)}
SAMPLES = np.linspace(0.0, 1.0, 17)


class Worst(NamedTuple):
    """A largest value and every place where it is reached."""

    value: float
    places: list[float]


def subsets(count: int) -> np.ndarray:
    return (np.arange(2**count)[:, None] >> np.arange(count)) & 1


def worst(solution: Solution, quantity: str, always: np.ndarray, placed: np.ndarray, sign: float) -> Worst:
    """The largest (sign 1) or smallest (sign -1) value of a quantity with movable sets placed at their worst."""
    field_, (rate, way) = solution.fields[quantity], RATE[quantity]
    powers = SAMPLES[:, None] ** np.arange(6) * 1.0
    h = solution.width
    local = SAMPLES * h[:, None]  # (elements, samples)
    values = np.einsum("aek,ek,sk->aes", field_, h[:, None] ** np.arange(6), powers)
    steady = sign * np.tensordot(always, values, axes=1)
    moving = np.flatnonzero(placed)
    parts = sign * placed[moving, None, None] * values[moving]
    everywhere = np.abs(parts).max(axis=(1, 2), initial=0.0) > 0
    moving, parts = moving[everywhere], parts[everywhere]
    if len(moving) <= MOST_PLACEMENTS:
        trials = subsets(len(moving))
        curves = steady.ravel() + trials @ parts.reshape(len(moving), steady.size)
        top = curves.max(axis=0).reshape(steady.shape)
    else:
        top = steady + np.maximum(parts, 0.0).sum(axis=0)

    def refined(e: int, s: int) -> tuple[float, float]:
        """The largest value near a sample of an element, and its place."""
        best, at = float(top[e, s]), float(local[e, s])
        low, high = local[e, max(s - 1, 0)], local[e, min(s + 1, len(SAMPLES) - 1)]
        for _ in range(5):
            there = polynomial(field_[moving, e], at) * placed[moving] * sign > 0
            factors = always.copy()
            factors[moving] += placed[moving] * there
            row, slope = factors @ field_[:, e], factors @ solution.fields[rate][:, e] * sign * way
            if not polynomial(slope, low) > 0 > polynomial(slope, high):
                break
            at = brentq(lambda x, slope=slope: polynomial(slope, x), low, high, xtol=1e-14, rtol=1e-14)
            value = sign * polynomial(row, at)
            if value <= best * (1 + 1e-15):
                break
            best = value
        return best, at

    most = float(top.max())
    span = float(np.abs(top).max())
    padded = np.pad(top, ((0, 0), (1, 1)), constant_values=-math.inf)
    peaks = (top >= padded[:, :-2]) & (top >= padded[:, 2:]) & (top >= most - 3e-3 * span)
    found = []
    for e, s in np.argwhere(peaks):
        value, at = refined(int(e), int(s))
        found.append((value, float(solution.nodes[e] + at)))
    most = max(value for value, _ in found)
    return Worst(sign * most, sorted(at for value, at in found if value >= most - 1e-9 * span))


def polynomial(coefficients: np.ndarray, x: float) -> Any:
    return coefficients @ (x ** np.arange(coefficients.shape[-1]))


def worst_reactions(solution: Solution, always: np.ndarray, placed: np.ndarray, sign: float) -> np.ndarray:
    steady = sign * always @ solution.reactions
    moving = np.flatnonzero(placed)
    parts = sign * placed[moving, None] * solution.reactions[moving]
    if len(moving) <= MOST_PLACEMENTS:
        return sign * (steady + (subsets(len(moving)) @ parts).max(axis=0))
    return sign * (steady + np.maximum(parts, 0).sum(axis=0))
