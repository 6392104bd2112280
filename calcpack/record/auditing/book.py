"""Where the results of a record are ticked off: every leaf is compared, or named as not checkable."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from typing import Any

from calcpack.record.auditing.findings import Finding, Verdict
from calcpack.record.auditing.lines import relative

AGREEMENT = 1e-9  # of the value
NOISE = 1e-12  # of all there is


def leaves(data: object, path: str) -> Iterator[tuple[str, Any]]:
    """Every number, text and truth value of nested data, with its path.

    Examples
    --------
    >>> list(leaves({"a": [1, {"b": None}]}, "results"))
    [('results.a[0]', 1), ('results.a[1].b', None)]
    """
    if isinstance(data, Mapping):
        for key, each in data.items():
            yield from leaves(each, f"{path}.{key}")
    elif isinstance(data, Sequence) and not isinstance(data, str):
        for place, each in enumerate(data):
            yield from leaves(each, f"{path}[{place}]")
    else:
        yield path, data


def figure(value: float) -> str:
    """A number for a reader of the audit."""
    return f"{value + 0.0:.7g}"


class Book:
    """The findings on a record's results, and which of its leaves have been looked at.

    Parameters
    ----------
    results : mapping
        As stated.
    """

    def __init__(self, results: Mapping[str, Any]) -> None:
        self.stated = dict(leaves(results, "results"))
        self.findings: list[Finding] = []
        self._open = dict.fromkeys(self.stated)

    def seen(self, path: str) -> None:
        """A leaf needs no further look."""
        self._open.pop(path, None)

    def compare(
        self, path: str, again: float, unit: str, says: str, *, scale: float = 0.0, group: str = "results"
    ) -> bool:
        """Hold a stated number against one worked out again; say whether they agree."""
        self.seen(path)
        stated = self.stated.get(path)
        if isinstance(stated, bool) or not isinstance(stated, int | float):
            self.wrong(path, f"a number is missing here, it should be {figure(again)} {unit}", says)
            return False
        apart = abs(stated - again)
        agrees = apart <= AGREEMENT * max(abs(stated), abs(again)) + NOISE * scale
        self.findings.append(
            Finding(
                group,
                path,
                says,
                f"{figure(stated)} {unit}" if agrees else f"{stated!r} {unit}",
                f"{figure(again)} {unit}" if agrees else f"{again:.12g} {unit}",
                relative(stated, again) if apart > NOISE * scale else "0",
                Verdict.AGREES if agrees else Verdict.WRONG,
                "" if agrees else "it is not what is worked out again",
            )
        )
        return agrees

    def settle(self, path: str, holds: bool, remark: str, says: str = "", other: str = "") -> bool:
        """A leaf that is right or wrong for a reason in words."""
        self.seen(path)
        stated = self.stated.get(path)
        self.findings.append(
            Finding(
                "results",
                path,
                says,
                "" if stated is None else str(stated),
                other,
                "",
                Verdict.AGREES if holds else Verdict.WRONG,
                "" if holds else remark,
            )
        )
        return holds

    def wrong(self, path: str, remark: str, says: str = "") -> None:
        """Something is missing or of another kind."""
        self.seen(path)
        self.findings.append(Finding("results", path, says, verdict=Verdict.WRONG, remark=remark))

    def leave_open(self, prefix: str, remark: str, says: str = "") -> None:
        """What begins so and has not been looked at cannot be checked from the files at hand."""
        paths = [path for path in self._open if path.startswith(prefix)]
        if not paths:
            return
        for path in paths:
            self.seen(path)
        count = f"{len(paths)} figures" if len(paths) > 1 else "one figure"
        self.findings.append(Finding("results", prefix, says or count, verdict=Verdict.OPEN, remark=remark))

    def close(self) -> tuple[Finding, ...]:
        """All findings; a leaf that nobody has looked at is named as not checkable."""
        parents: dict[str, list[str]] = {}
        for path in self._open:
            if self.stated[path] is None:
                continue
            parents.setdefault(path.rsplit(".", 1)[0], []).append(path.rsplit(".", 1)[1])
        for parent, names in parents.items():
            listed = ", ".join(names[:6]) + (" ..." if len(names) > 6 else "")
            self.findings.append(
                Finding(
                    "results",
                    parent,
                    listed,
                    verdict=Verdict.OPEN,
                    remark="nothing at hand to work it out from",
                )
            )
        return tuple(self.findings)
