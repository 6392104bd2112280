"""What a beam does under its load sets: exact piecewise polynomials."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Literal

import numpy as np

from calcpack.statics.curve import Curve
from calcpack.statics.line import BeamLine
from calcpack.statics.polynomials import Floats, crossings, evaluate

Quantity = Literal["load", "shear", "moment", "rotation", "deflection"]


@dataclass(frozen=True, eq=False)
class Response:
    """A beam under several load sets, with stiffness EI taken as 1.

    Signs: load and deflection v downward, reactions upward, moments sagging, rotation
    anticlockwise (the beam runs to the right); shear is what the forces to the left of a section
    push up in sum. So dV/dx = -w, dM/dx = V, dθ/dx = M and dv/dx = -θ.

    Attributes
    ----------
    line : BeamLine
    breaks : (n + 1,) [m]
        Where a load begins, ends or stands, the supports and both ends.
    load, shear, moment, rotation, deflection : (sets, n, degree + 1)
        Ascending coefficients in x - breaks[i] on each of the n pieces; the load is linear,
        the deflection of degree 5. [kN/m], [kN], [kNm], rotation × EI [kNm²], deflection × EI [kNm³].
    reactions : (sets, supports) [kN]
    end_moments : (sets, 2) [kNm]
        Moment in the beam at its start and at its end where that is fixed, else zero.
    """

    line: BeamLine
    breaks: Floats
    load: Floats
    shear: Floats
    moment: Floats
    rotation: Floats
    deflection: Floats
    reactions: Floats
    end_moments: Floats

    def __post_init__(self) -> None:
        for array in vars(self).values():
            if isinstance(array, np.ndarray):
                array.flags.writeable = False  # curves and envelopes look into these

    @property
    def sets(self) -> int:
        """How many load sets there are."""
        return len(self.load)

    @cached_property
    def support_moments(self) -> Floats:
        """Moment over each support (sets, supports) [kNm]."""
        return self._at_supports(self.moment)

    @cached_property
    def support_rotations(self) -> Floats:
        """Rotation × EI over each support (sets, supports) [kNm²]."""
        return self._at_supports(self.rotation)

    def sign_changes(self, quantity: Quantity) -> Floats:
        """Where each set's quantity changes sign inside the pieces: (sets, n, degree), from a piece's start.

        Filled up with nan; worked out once, as every envelope of this response asks for them.
        """
        if quantity not in self._sign_changes:
            self._sign_changes[quantity] = crossings(getattr(self, quantity), np.diff(self.breaks))
        return self._sign_changes[quantity]

    @cached_property
    def _sign_changes(self) -> dict[Quantity, Floats]:
        return {}

    def _at_supports(self, coefficients: Floats) -> Floats:
        places = np.searchsorted(self.breaks, self.line.supports)
        last = len(self.breaks) - 1
        pieces = np.minimum(places, last - 1)
        inside = np.where(places == last, self.breaks[-1] - self.breaks[-2], 0.0)
        return evaluate(coefficients[:, pieces], inside)

    def combined(self, factors: Sequence[float] | Floats) -> Response:
        """The load sets added up with a factor each.

        Parameters
        ----------
        factors : (sets,), or (combinations, sets)

        Returns
        -------
        Response with one set, or with one for each combination.
        """
        rows = np.atleast_2d(np.asarray(factors, dtype=float))
        if rows.shape[-1] != self.sets:
            raise ValueError(f"{rows.shape[-1]} factors for {self.sets} load sets")

        def total(values: Floats) -> Floats:
            return np.tensordot(rows, values, axes=1)

        return Response(
            self.line, self.breaks, total(self.load), total(self.shear), total(self.moment),
            total(self.rotation), total(self.deflection), total(self.reactions), total(self.end_moments),
        )  # fmt: skip

    def curve(self, quantity: Quantity, row: int = 0) -> Curve:
        """One quantity of one load set along the beam: values, extremes, zeros, samples."""
        return Curve(self.breaks, getattr(self, quantity)[row], self.line.supports)

    def zero_shear(self, row: int = 0) -> tuple[float, ...]:
        """Places [m] where the shear of one load set is or passes through zero."""
        return self.curve("shear", row).zeros()
