"""Sections written once out of sight, to know on the first page what later pages find."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import replace
from typing import Any

from calcpack.notebook.sections.given import state_given
from calcpack.notebook.work import Work
from calcpack.sheet import Line, Sheet, show


class Draft(Sheet):
    """A sheet that goes on from another one, unseen and without changing it.

    Examples
    --------
    >>> sheet = Sheet("B1")
    >>> sheet.section("Given")
    >>> draft = Draft(sheet)
    >>> draft.take("q", 3.0, "kPa", "Pressure", "job").no, len(sheet.lines)
    ('1.01', 0)
    """

    def __init__(self, sheet: Sheet) -> None:
        super().__init__(sheet.mark, sheet.system)
        self.lines = dict(sheet.lines)
        self._sections, self._count = sheet._sections, sheet._count
        self._words = dict(sheet._words)
        self._repeating, self._shapes = sheet._repeating, dict(sheet._shapes)

    def show(self) -> None:
        """Nothing is shown."""


def draft_of(work: Work) -> Work:
    """The same work on a draft: what is written on it is not on the sheet."""
    return replace(work, sheet=Draft(work.sheet), lines=dict(work.lines), checks=[])


def rehearsal_of(work: Work) -> Work:
    """A draft with the given values written, where the sheet itself does not have them yet."""
    draft = draft_of(work)
    if ("span", 0) not in draft.lines:
        state_given(draft)
    return draft


def ratio_rows(work: Work, checks: Iterable[tuple[str, Line]]) -> list[dict[str, Any]]:
    """Checks as rows of a schedule with bars: demand, resistance, ratio."""
    rows = []
    for name, line in checks:
        check = line.check(name)
        rows.append(
            {
                "says": name,
                "demand": show(check["demand"], check["unit"], work.study.system),
                "resistance": show(check["capacity"], check["unit"], work.study.system),
                "ratio": check["ratio"],
                "passes": check["passes"],
            }
        )
    return rows
