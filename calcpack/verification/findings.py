"""All comparisons of a run, counted."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path
from typing import Any

from calcpack.progress import Follow
from calcpack.verification.comparison import Comparison
from calcpack.verification.identity import parts, version
from calcpack.verification.methods import MethodResult, run_all
from calcpack.verification.reckon import compare_all
from calcpack.verification.tables import Topic, read_topics


@dataclass(frozen=True)
class Summary:
    """A topic in numbers.

    Parameters
    ----------
    name : str
    comparisons, from_memory, by_hand : int
    largest : float
        Largest difference, of what is allowed.
    methods : int
        Other methods, those that only the tests run too.
    failing : int
    """

    name: str
    comparisons: int
    from_memory: int
    by_hand: int
    largest: float
    methods: int
    failing: int

    @classmethod
    def of(cls, name: str, comparisons: Sequence[Comparison], methods: Sequence[MethodResult]) -> Summary:
        """Count."""
        return cls(
            name,
            len(comparisons),
            sum(1 for each in comparisons if each.row.from_memory),
            sum(1 for each in comparisons if each.row.by_hand),
            max((each.share for each in comparisons), default=0.0),
            len(methods),
            sum(not each.holds for each in comparisons) + sum(not each.holds for each in methods),
        )


@dataclass(frozen=True)
class Findings:
    """What a run found."""

    topics: tuple[Topic, ...]
    comparisons: tuple[Comparison, ...]
    methods: tuple[MethodResult, ...]

    @property
    def failing(self) -> tuple[Comparison | MethodResult, ...]:
        """What does not hold."""
        wrong: list[Comparison | MethodResult] = [each for each in self.comparisons if not each.holds]
        return (*wrong, *(each for each in self.methods if not each.holds))

    @property
    def holds(self) -> bool:
        """Whether all of it holds."""
        return not self.failing

    def of(self, topic: Topic) -> tuple[tuple[Comparison, ...], tuple[MethodResult, ...]]:
        """A topic's comparisons and methods."""
        return (
            tuple(each for each in self.comparisons if each.topic is topic),
            tuple(each for each in self.methods if each.topic is topic),
        )

    @cached_property
    def summaries(self) -> tuple[Summary, ...]:
        """Topic by topic."""
        return tuple(Summary.of(topic.name, *self.of(topic)) for topic in self.topics)

    @cached_property
    def whole(self) -> Summary:
        """All topics together."""
        return Summary.of("all", self.comparisons, self.methods)

    def as_data(self) -> dict[str, Any]:
        """Plain data, for programs."""
        return {
            "program": version(),
            "holds": self.holds,
            "parts": [{"name": part.name, "files": part.files, "sha256": part.sha256} for part in parts()],
            "comparisons": [each.as_data() for each in self.comparisons],
            "methods": [each.as_data() for each in self.methods],
        }


def verify(folder: Path | None = None, follow: Follow | None = None) -> Findings:
    """Compare everything.

    Parameters
    ----------
    folder : Path
        Of the tables; the ones that come with the program where left out.
    follow : callable
        Hears how far it is: words, done, of.

    Raises
    ------
    CalcpackError
        A table is not as it should be.
    """
    topics = read_topics(folder)
    return Findings(topics, compare_all(topics, follow), run_all(topics, follow))
