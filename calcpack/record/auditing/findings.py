"""What an audit finds: one entry a line, a number, a hash; each agrees, is wrong, or cannot be checked."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from enum import StrEnum
from typing import Any


class Verdict(StrEnum):
    """What became of a check."""

    AGREES = "agrees"
    WRONG = "wrong"
    OPEN = "not checkable"


@dataclass(frozen=True, slots=True)
class Finding:
    """One thing looked at.

    Parameters
    ----------
    group : str
        "lines", "results", "loads", "panels", "second copy", "pages", "provenance", "pack".
    place : str
        Where it stands: "line 4.03", "results.total.dead".
    says : str
        What it is, in words.
    printed, recomputed, difference : str
        As stated, as worked out again, and how far apart.
    verdict : Verdict
    remark : str
        What is wrong, or why it cannot be checked.
    """

    group: str
    place: str
    says: str = ""
    printed: str = ""
    recomputed: str = ""
    difference: str = ""
    verdict: Verdict = Verdict.AGREES
    remark: str = ""

    def __reduce__(self) -> tuple[type[Finding], tuple[str, ...]]:
        """Sent from process to process by the hundred thousand: by its parts, without looking them up."""
        parts = self.group, self.place, self.says, self.printed, self.recomputed, self.difference
        return Finding, (*parts, self.verdict, self.remark)

    def data(self) -> dict[str, str]:
        """As plain data."""
        return {
            "group": self.group,
            "place": self.place,
            "says": self.says,
            "printed": self.printed,
            "recomputed": self.recomputed,
            "difference": self.difference,
            "verdict": str(self.verdict),
            "remark": self.remark,
        }


def wrong(
    group: str, place: str, remark: str, *, says: str = "", printed: str = "", other: str = ""
) -> Finding:
    """A finding that is wrong for a reason in words."""
    return Finding(group, place, says, printed, other, "", Verdict.WRONG, remark)


def unchecked(group: str, place: str, remark: str, says: str = "") -> Finding:
    """A finding that cannot be checked, with the reason."""
    return Finding(group, place, says, verdict=Verdict.OPEN, remark=remark)


def good(group: str, place: str, says: str = "") -> Finding:
    """A finding that agrees, where no number is to be shown."""
    return Finding(group, place, says)


@dataclass(frozen=True)
class Decisive:
    """What decides on a sheet.

    Parameters
    ----------
    mark : str
        The sheet's.
    no : str
        Number of the line.
    says : str
        "bending", "largest moment".
    shown : str
        A ratio, or the line's printed value.
    ratio : float or None
        Demand over capacity; None on a sheet without checks.
    """

    mark: str
    no: str
    says: str
    shown: str
    ratio: float | None = None

    def data(self) -> dict[str, object]:
        """As plain data."""
        return {"line": self.no, "says": self.says, "shown": self.shown, "ratio": self.ratio}


@dataclass(frozen=True)
class SheetAudit:
    """All that was found on one sheet, or, under the mark "", on the files of the pack together."""

    mark: str
    findings: tuple[Finding, ...]
    header: Mapping[str, Any] = field(default_factory=dict)  # its title block, as stated
    decisive: Decisive | None = None

    @property
    def wrong(self) -> tuple[Finding, ...]:
        """What is wrong."""
        return tuple(each for each in self.findings if each.verdict is Verdict.WRONG)

    @property
    def open(self) -> tuple[Finding, ...]:
        """What could not be checked."""
        return tuple(each for each in self.findings if each.verdict is Verdict.OPEN)

    @property
    def farthest(self) -> float:
        """The largest difference between a figure that agrees and its recomputation, as a part of it."""
        apart = (each.difference for each in self.findings if each.verdict is Verdict.AGREES)
        return max((float(each) for each in apart if each), default=0.0)

    def count(self, group: str) -> tuple[int, int]:
        """How many of a group agree, of how many that were checked."""
        found = Counter(each.verdict for each in self.findings if each.group == group)
        return found[Verdict.AGREES], found[Verdict.AGREES] + found[Verdict.WRONG]

    def data(self) -> dict[str, Any]:
        """As plain data."""
        return {
            "mark": self.mark,
            "revision": str(self.header.get("revision", "")),
            "wrong": len(self.wrong),
            "not_checkable": len(self.open),
            "decisive": None if self.decisive is None else self.decisive.data(),
            "findings": [each.data() for each in self.findings],
        }


@dataclass(frozen=True)
class Audit:
    """An audit of a target: its sheets, and the files together."""

    target: str
    sheets: tuple[SheetAudit, ...]
    together: SheetAudit = field(default_factory=lambda: SheetAudit("", ()))
    program: str = ""

    @property
    def all(self) -> tuple[SheetAudit, ...]:
        """Every part, the files together last."""
        return (*self.sheets, self.together)

    @property
    def passes(self) -> bool:
        """Whether nothing is wrong."""
        return not any(each.wrong for each in self.all)

    def data(self) -> dict[str, Any]:
        """As plain data."""
        return {
            "format": 1,
            "target": self.target,
            "program": self.program,
            "passes": self.passes,
            "sheets": [each.data() for each in self.sheets],
            "together": self.together.data(),
        }


def groups_of(audits: Iterable[SheetAudit]) -> Sequence[str]:
    """The groups that occur, in their usual order."""
    there = {finding.group for audit in audits for finding in audit.findings}
    return [group for group in GROUPS if group in there]


GROUPS = ("lines", "origins", "results", "loads", "panels", "second copy", "pages", "provenance", "pack")
"""The groups of findings, in the order they are shown."""
