"""Second road: one beam by finite elements, and the worst placement of its movable loads by trial."""

from __future__ import annotations

import math
from itertools import pairwise
from typing import Any, NamedTuple

import numpy as np
from scipy.optimize import brentq
from second_road_job import Force, Load

MOST_PLACEMENTS = 12  # as many are tried in every subset


PER_SPAN = 3  # finite elements
XI, WEIGHTS = (np.polynomial.legendre.leggauss(4)[0] + 1) / 2, np.polynomial.legendre.leggauss(4)[1] / 2


def shapes(xi: np.ndarray, h: float) -> np.ndarray:
    """Hermite's cubics at xi from 0 to 1: deflection and rotation at the left, at the right end."""
    return np.array(
        [
            1 - 3 * xi**2 + 2 * xi**3,
            h * (xi - 2 * xi**2 + xi**3),
            3 * xi**2 - 2 * xi**3,
            h * (xi**3 - xi**2),
        ]
    )


class Solution:
    """A beam of stiffness 1 under several sets of loads.

    Hermite elements give deflection and rotation at their nodes (exact there, as the loads are integrated
    exactly) and what holds the supports. ``fields`` has load, shear, moment, rotation and deflection as
    polynomials in the cells between all places where a load begins, ends or stands.
    """

    def __init__(
        self, length: float, supports: list[float], fixed: tuple[bool, bool], sets: list[list[Load]]
    ) -> None:
        ends = sorted({0.0, length, *supports})
        coarse = np.unique(np.concatenate([np.linspace(a, b, PER_SPAN + 1) for a, b in pairwise(ends)]))
        nodes = coarse.tolist()
        for load in (load for loads in sets for load in loads):
            for place in (load.at,) if isinstance(load, Force) else (load.start, load.end):
                if min(abs(place - node) for node in nodes) > 1e-7 * length:
                    nodes.append(place)
        self.nodes = np.array(sorted(nodes))
        self.width = np.diff(self.nodes)
        self._loads(sets)
        self._displacements(coarse, supports, fixed)
        self._march(coarse, supports)

    def _node(self, place: float) -> int:
        return int(np.abs(self.nodes - place).argmin())

    def _loads(self, sets: list[list[Load]]) -> None:
        """Intensities at both ends of each cell (sets, cells, 2), forces between them (sets, cells + 1)."""
        self.spread = np.zeros((len(sets), len(self.width), 2))
        self.forces = np.zeros((len(sets), len(self.nodes)))
        for row, loads in enumerate(sets):
            for load in loads:
                if isinstance(load, Force):
                    self.forces[row, self._node(load.at)] += load.size
                    continue
                a, b = self._node(load.start), self._node(load.end)
                if a < b:
                    values = np.interp(self.nodes[a : b + 1], self.nodes[[a, b]], [load.first, load.last])
                    self.spread[row, a:b, 0] += values[:-1]
                    self.spread[row, a:b, 1] += values[1:]

    def _displacements(self, coarse: np.ndarray, supports: list[float], fixed: tuple[bool, bool]) -> None:
        """Deflections and rotations of the elements' nodes; forces and moments at what is held."""
        count = 2 * len(coarse)
        stiffness = np.zeros((count, count))
        right = np.zeros((count, len(self.spread)))
        for e, (a, b) in enumerate(pairwise(coarse)):
            h = float(b - a)
            own = slice(2 * e, 2 * e + 4)
            # second derivatives at both ends; between them they are linear
            bend = np.array([[-6 / h, -4, 6 / h, -2], [6 / h, 2, -6 / h, 4]]) / h
            stiffness[own, own] += h / 6 * bend.T @ np.array([[2, 1], [1, 2]]) @ bend
            for cell in range(self._node(a), self._node(b)):
                wide = self.width[cell]
                at_points = self.spread[:, cell, :1] * (1 - XI) + self.spread[:, cell, 1:] * XI
                there = (self.nodes[cell] - a + XI * wide) / h
                right[own] += (shapes(there, h) * WEIGHTS * wide) @ at_points.T
            last = self._node(b) + (e == len(coarse) - 2)
            for node in range(self._node(a), last):
                there = np.array([(self.nodes[node] - a) / h])
                right[own] += shapes(there, h) @ self.forces[:, node][None]
        held_at = [int(np.abs(coarse - support).argmin()) for support in supports]
        held = [2 * node for node in held_at] + [1] * fixed[0] + [count - 1] * fixed[1]
        loose = np.setdiff1d(np.arange(count), held)
        found = np.zeros_like(right)
        inner = stiffness[np.ix_(loose, loose)]
        for _ in range(2):  # the second time to take off what rounding left
            found[loose] += np.linalg.solve(inner, right[loose] - inner @ found[loose])
        residual = stiffness @ found - right
        self.deflection, self.rotation = found[::2].T, found[1::2].T
        self.reactions = -residual[[2 * node for node in held_at]].T
        self.end_moments = np.array([residual[1] * fixed[0], -residual[-1] * fixed[1]]).T

    def _march(self, coarse: np.ndarray, supports: list[float]) -> None:
        """From cell to cell by equilibrium and integration; checked at every node of the elements."""
        jumps = -self.forces
        for column, support in enumerate(supports):
            jumps[:, self._node(support)] += self.reactions[:, column]
        scale = float(np.abs(jumps).sum() + np.abs(self.spread).sum() * self.nodes[-1])
        at_nodes = {self._node(place): number for number, place in enumerate(coarse)}
        v, m = jumps[:, 0], self.end_moments[:, 0]
        r, d = self.rotation[:, 0], self.deflection[:, 0]
        rows: dict[str, list[np.ndarray]] = {name: [] for name in FIELDS}
        zero = np.zeros_like(v)
        for e, h in enumerate(self.width):
            w, slope = self.spread[:, e, 0], (self.spread[:, e, 1] - self.spread[:, e, 0]) / h
            cell = {
                "load": [w, slope, zero, zero, zero, zero],
                "shear": [v, -w, -slope / 2, zero, zero, zero],
                "moment": [m, v, -w / 2, -slope / 6, zero, zero],
                "rotation": [r, -m, -v / 2, w / 6, slope / 24, zero],
                "deflection": [d, r, -m / 2, -v / 6, w / 24, slope / 120],
            }
            for name in FIELDS:
                rows[name].append(np.stack(cell[name], axis=-1))
            v, m, r, d = (polynomial(rows[name][-1], h) for name in FIELDS[1:])
            v = v + jumps[:, e + 1]
            if (node := at_nodes.get(e + 1)) is not None:
                for value, exact, power in ((r, self.rotation, 2), (d, self.deflection, 3)):
                    gap = np.abs(value - exact[:, node]).max(initial=0.0)
                    assert gap <= 1e-9 * scale * self.nodes[-1] ** power, "an element does not fit its load"
                r, d = self.rotation[:, node], self.deflection[:, node]
        assert np.abs(v).max(initial=0.0) <= 1e-9 * scale, "forces do not balance"
        gap = np.abs(m - self.end_moments[:, 1]).max(initial=0.0)
        assert gap <= 1e-9 * scale * self.nodes[-1], "moments do not balance"
        self.fields = {name: np.stack(each, axis=1) for name, each in rows.items()}


def polynomial(coefficients: np.ndarray, x: float) -> Any:
    return coefficients @ (x ** np.arange(coefficients.shape[-1]))


FIELDS = ("load", "shear", "moment", "rotation", "deflection")
RATE = {"moment": ("shear", 1.0), "shear": ("load", -1.0), "deflection": ("rotation", 1.0)}
SAMPLES = np.linspace(0.0, 1.0, 17)


class Worst(NamedTuple):
    """A largest value and every place where it is reached."""

    value: float
    places: list[float]


def subsets(count: int) -> np.ndarray:
    return (np.arange(2**count)[:, None] >> np.arange(count)) & 1


def worst(solution: Solution, quantity: str, always: np.ndarray, placed: np.ndarray, sign: float) -> Worst:
    """The largest (sign 1) or smallest (sign -1) value of a quantity, movable sets at their worst."""
    field_, (rate, way) = solution.fields[quantity], RATE[quantity]
    powers = SAMPLES[:, None] ** np.arange(6)
    h = solution.width
    local = SAMPLES * h[:, None]  # (cells, samples)
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


def worst_reactions(solution: Solution, always: np.ndarray, placed: np.ndarray, sign: float) -> np.ndarray:
    steady = sign * always @ solution.reactions
    moving = np.flatnonzero(placed)
    parts = sign * placed[moving, None] * solution.reactions[moving]
    if len(moving) <= MOST_PLACEMENTS:
        return sign * (steady + (subsets(len(moving)) @ parts).max(axis=0))
    return sign * (steady + np.maximum(parts, 0).sum(axis=0))
