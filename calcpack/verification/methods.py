"""Other methods that the analysis is compared with; what needs nothing but the program is run live."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from functools import cache
from typing import Any

from calcpack.progress import Follow
from calcpack.statics import BeamLine, Load
from calcpack.verification.beam_methods import (
    BEAMS,
    Found,
    collocation,
    direct_stiffness,
    random_beam,
    rational_stiffness,
    seeds,
    symbolic_pairs,
    worst_difference,
)
from calcpack.verification.fibres import block_and_fibres
from calcpack.verification.plate import plate
from calcpack.verification.tables import Method, Topic


@dataclass(frozen=True)
class MethodResult:
    """How far the program is from another method.

    Parameters
    ----------
    topic, method : Topic, Method
    worst : float or None
        The largest difference of all cases, as the method measures it; None where only the tests run it.
    """

    topic: Topic
    method: Method
    worst: float | None

    @property
    def share(self) -> float:
        """Of what is allowed."""
        return 0.0 if self.worst is None else self.worst / self.method.within

    @property
    def holds(self) -> bool:
        """Whether it is as near as it has to be, so far as it was run."""
        return self.share <= 1.0

    def __str__(self) -> str:
        return f"{self.topic.name}: {self.method.title}: {self.worst} of {self.method.within} allowed"

    def as_data(self) -> dict[str, Any]:
        """Plain data, for programs."""
        return {
            "topic": self.topic.name,
            "method": self.method.title,
            "by": self.method.by,
            "cases": self.method.cases,
            "allowed": self.method.within,
            "measure": self.method.measure,
            "run": "here" if self.method.live else "by the tests",
            "worst": self.worst,
            "holds": self.holds if self.method.live else None,
        }


def _random_beams(method: Method, by: Callable[[BeamLine, Sequence[Load]], Found]) -> float:
    return max(
        worst_difference(line, loads, by(line, loads)) for line, loads in map(random_beam, seeds(method))
    )


def _collocated(method: Method) -> float:
    beams = BEAMS[: method.cases]
    return max(worst_difference(line, loads, collocation(line, loads)) for line, loads in beams)


def _symbolic(method: Method) -> float:
    pairs = [pair for number in range(method.cases) for pair in symbolic_pairs(number)]
    return max(abs(ours - theirs) / max(abs(theirs), 1e-12) for ours, theirs in pairs)


PLATES = (1.0, 1.2, 1.5, 2.0, 3.0)


def _balanced(method: Method) -> float:
    return max(abs(plate(ratio).unbalanced) for ratio in PLATES[: method.cases])


RUNS: Mapping[tuple[str, str], Callable[[Method], float]] = {
    ("statics", "direct stiffness"): lambda method: _random_beams(method, direct_stiffness),
    ("statics", "rational arithmetic"): lambda method: _random_beams(method, rational_stiffness),
    ("statics", "collocation"): _collocated,
    ("statics", "singularity functions"): _symbolic,
    ("slabs", "balance of the plate"): _balanced,
    ("en1992", "block and fibres"): block_and_fibres,
}
"""File of the topic and key of the method -> what runs all its cases."""


@cache
def run(topic: str, method: Method) -> float:
    """The largest difference of a method's cases."""
    return RUNS[topic, method.key](method)


def run_all(topics: Sequence[Topic], follow: Follow | None = None) -> tuple[MethodResult, ...]:
    """Every method of the topics; those that only the tests run stay without a result."""
    methods = [(topic, method) for topic in topics for method in topic.method]
    found = []
    for number, (topic, method) in enumerate(methods):
        if follow:
            follow("other methods", number, len(methods))
        found.append(MethodResult(topic, method, run(topic.key, method) if method.live else None))
    if follow:
        follow("other methods", len(methods), len(methods))
    return tuple(found)
