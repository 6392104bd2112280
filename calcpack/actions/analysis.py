"""A beam under its combinations: the worst of each, with live load placed span by span."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from calcpack.actions.combinations import PLACED, Combination
from calcpack.job.model import Case
from calcpack.statics import (
    Band,
    BeamLine,
    Envelope,
    Extreme,
    Load,
    Response,
    analyse,
    enclosing,
    envelope,
)

Floats = NDArray[np.float64]


@dataclass(frozen=True)
class LoadSet:
    """Loads that come and go together.

    Parameters
    ----------
    case : case
    loads : tuple of loads
    label : str
        For a movable case, the span loaded: ``B7 span 2``.
    """

    case: Case
    loads: tuple[Load, ...]
    label: str = ""


@dataclass(frozen=True)
class CombinationResult:
    """A combination with its worst effects (downward, sagging, upward reactions positive)."""

    combination: Combination
    envelope: Envelope
    moment_max: Extreme  # [kNm] at [m]
    moment_min: Extreme
    shear_max: Extreme  # largest absolute value [kN]
    reactions_max: tuple[float, ...]  # [kN]
    reactions_min: tuple[float, ...]

    @property
    def moment_governing(self) -> Extreme:
        """The larger of the two moments by size."""
        return max(self.moment_max, self.moment_min, key=lambda extreme: abs(extreme.value))


@dataclass(frozen=True)
class AnalysedBeam:
    """A beam's response to every load set, and every combination's worst.

    Parameters
    ----------
    line : BeamLine
    sets : tuple of LoadSet
        One row of ``response`` each.
    stiffness : float or None
        E I [kNm2]; None where it is not known, then there are no deflections.
    """

    line: BeamLine
    sets: tuple[LoadSet, ...]
    response: Response
    combinations: tuple[Combination, ...]
    stiffness: float | None

    def factors(self, combination: Combination) -> tuple[Floats, Floats]:
        """Factors of a combination on the load sets: always there, and placed where worst."""
        row = np.array([combination.factors.get(each.case, 0.0) for each in self.sets])
        movable = np.array([each.case in PLACED for each in self.sets], dtype=bool)
        return np.where(movable, 0.0, row), np.where(movable, row, 0.0)

    @cached_property
    def results(self) -> tuple[CombinationResult, ...]:
        """Every combination's worst, in the set's order."""
        return tuple(self._result(combination) for combination in self.combinations)

    def _result(self, combination: Combination) -> CombinationResult:
        worst = envelope(self.response, *self.factors(combination))
        return CombinationResult(
            combination,
            worst,
            worst.moment.largest,
            worst.moment.smallest,
            worst.shear.largest_absolute,
            tuple(float(value) for value in worst.reactions_max),
            tuple(float(value) for value in worst.reactions_min),
        )

    def of_limit(self, limit: str) -> tuple[CombinationResult, ...]:
        """The results of a limit state, "strength" or "service"."""
        return tuple(result for result in self.results if result.combination.limit == limit)

    def band(self, quantity: Literal["moment", "shear", "deflection"], limit: str = "strength") -> Band:
        """The envelope about all combinations of a limit state, exact at every point.

        Deflections are times E I.
        """
        key = (quantity, limit)
        if key not in self._bands:
            self._bands[key] = enclosing([getattr(each.envelope, quantity) for each in self.of_limit(limit)])
        return self._bands[key]

    @cached_property
    def _bands(self) -> dict[tuple[str, str], Band]:
        return {}

    @cached_property
    def governing_moment(self) -> CombinationResult:
        """The strength combination with the largest moment by size, the first where several tie."""
        return max(self.of_limit("strength"), key=lambda each: round(abs(each.moment_governing.value), 9))

    @cached_property
    def governing_shear(self) -> CombinationResult:
        """The strength combination with the largest shear, the first where several tie."""
        return max(self.of_limit("strength"), key=lambda each: round(abs(each.shear_max.value), 9))

    @cached_property
    def moment_max(self) -> Extreme:
        """Largest sagging moment over the strength combinations."""
        return max((each.moment_max for each in self.of_limit("strength")), key=lambda e: round(e.value, 9))

    @cached_property
    def moment_min(self) -> Extreme:
        """Largest hogging moment over the strength combinations (negative)."""
        return min((each.moment_min for each in self.of_limit("strength")), key=lambda e: round(e.value, 9))

    @cached_property
    def deflections(self) -> tuple[tuple[Combination, Extreme], ...]:
        """Largest deflection by size of each service combination [m] at [m]."""
        if self.stiffness is None:
            return ()
        return tuple((each.combination, self._deflection(each.envelope)) for each in self.of_limit("service"))

    @cached_property
    def deflection_total(self) -> tuple[Combination, Extreme] | None:
        """The service combination that deflects most, and by how much [m]."""
        return max(self.deflections, key=lambda each: round(abs(each[1].value), 15), default=None)

    @cached_property
    def deflection_live(self) -> Extreme | None:
        """Largest deflection of the live load alone, placed where it is worst [m]."""
        if self.stiffness is None:
            return None
        nothing = np.zeros(len(self.sets))
        live = np.array([1.0 if each.case == "live" else 0.0 for each in self.sets])
        return self._deflection(envelope(self.response, nothing, live))

    def _deflection(self, worst: Envelope) -> Extreme:
        assert self.stiffness is not None
        most = worst.deflection.largest_absolute
        return Extreme(most.value / self.stiffness, most.at)


def analyse_beam(
    line: BeamLine,
    sets: Sequence[LoadSet],
    combinations: Sequence[Combination],
    stiffness: float | None = None,
) -> AnalysedBeam:
    """Analyse a beam under load sets and combine them.

    Parameters
    ----------
    line : BeamLine
    sets : sequence of LoadSet
        Those of movable cases one a placement, the others one a case.
    combinations : sequence of Combination
    stiffness : float [kNm2], optional

    Returns
    -------
    AnalysedBeam

    Examples
    --------
    >>> from calcpack.statics import LineLoad
    >>> beam = analyse_beam(
    ...     BeamLine(6.0, (0.0, 6.0)),
    ...     [LoadSet("dead", (LineLoad(0, 6, 10, 10),)), LoadSet("live", (LineLoad(0, 6, 4, 4),))],
    ...     [Combination("1.35 G + 1.5 Q", "strength", {"dead": 1.35, "live": 1.5})],
    ... )
    >>> beam.moment_max.value == (1.35 * 10 + 1.5 * 4) * 6**2 / 8
    True
    """
    rows = tuple(sets)
    return AnalysedBeam(
        line, rows, analyse(line, [each.loads for each in rows]), tuple(combinations), stiffness
    )
