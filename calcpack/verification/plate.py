"""The elastic plate on unyielding sides, which dividing lines are compared with."""

from __future__ import annotations

from functools import cache, cached_property

import numpy as np
from numpy.typing import NDArray


class Plate:
    """A simply supported plate 1 by ``ratio`` under unit load: M. Lévy's single series.

    Each odd term m of the deflection is sin(k x) (4/(π m k⁴)) (1 - A cosh k y + B k y sinh k y), k = m π, x
    across the short side, y along the long one from its middle. Reactions are Kirchhoff's, with the
    twisting moments' part that leaves a force at each corner.
    """

    def __init__(self, ratio: float, poisson: float = 0.3, terms: int = 2000) -> None:
        self.ratio, self.poisson = ratio, poisson
        m = np.arange(1.0, 2 * terms, 2.0)
        self.k = m * np.pi
        self.half = self.k * ratio / 2
        self.size = 4 / (np.pi * m) / self.k**4
        self.tanh = np.tanh(self.half)
        self.a, self.b = (self.half * self.tanh + 2) / 2, 0.5  # both over cosh(half)
        self.sign = np.where(m % 4 == 1, 1.0, -1.0)  # sin(m π/2)

    def _hyperbolic(self, y: float) -> tuple[NDArray[np.float64], NDArray[np.float64]]:
        """cosh and sinh of k y over cosh(half), without overflow."""
        up = np.exp(self.k * (y - self.ratio / 2))
        down = np.exp(-self.k * (y + self.ratio / 2))
        scale = 1 + np.exp(-2 * self.half)
        return (up + down) / scale, (up - down) / scale

    @property
    def deflection(self) -> float:
        """In the middle, over q a⁴/D."""
        cosh, _ = self._hyperbolic(0.0)
        return float(np.sum(self.sign * self.size * (1 - self.a * cosh)))

    def on_long(self, y: float) -> float:
        """Reaction at a place of a long side, over q a; the load's own series is summed exactly to a half."""
        cosh, sinh = self._hyperbolic(y)
        even, odd = self.a * cosh, self.b * sinh * self.k * y
        terms = odd - even + (2 - self.poisson) * (even - 2 * self.b * cosh - odd)
        return 0.5 + float(np.sum(self.size * self.k**3 * terms))

    @property
    def _short_terms(self) -> NDArray[np.float64]:
        first = self.size * self.k * (-self.a * self.tanh + self.b * (self.tanh + self.half))
        third = self.size * self.k**3 * (-self.a * self.tanh + self.b * (3 * self.tanh + self.half))
        return np.asarray(third - (2 - self.poisson) * self.k**2 * first)

    def on_short(self, x: float) -> float:
        """Reaction at a place of a short side, over q a."""
        return float(np.sum(self._short_terms * np.sin(self.k * x)))

    @property
    def corner(self) -> float:
        """The force that holds each corner down, over q a²."""
        slope = self.size * self.k * (-self.a * self.tanh + self.b * (self.tanh + self.half))
        return float(abs(2 * (1 - self.poisson) * np.sum(self.k * slope)))

    @property
    def sides(self) -> tuple[float, float]:
        """All that one long and one short side give, over q a², integrated term by term."""
        cosh, odd = 2 * self.tanh / self.k, 2 / self.k * (self.half - self.tanh)
        even, odd = self.a * cosh, self.b * odd
        terms = odd - even + (2 - self.poisson) * (even - 2 * self.b * cosh - odd)
        long = 0.5 * self.ratio + float(np.sum(self.size * self.k**3 * terms))
        return long, float(np.sum(self._short_terms * 2 / self.k))

    @property
    def unbalanced(self) -> float:
        """All reactions less corner forces and load, over q a²."""
        long, short = self.sides
        return 2 * long + 2 * short - 4 * self.corner - self.ratio

    @cached_property
    def beam_moments(self) -> tuple[float, float]:
        """Largest moment of a simple beam under a long and a short side, over q a³."""
        places = (np.arange(400) + 0.5) / 400
        arms = np.minimum(places, 1 - places) / 2
        long = [self.on_long((x - 0.5) * self.ratio) for x in places]
        short = [self.on_short(x) for x in places]
        return float(np.mean(arms * long)) * self.ratio**2, float(np.mean(arms * short))


@cache
def plate(ratio: float) -> Plate:
    """The plate of that side ratio."""
    return Plate(ratio)
