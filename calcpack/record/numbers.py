"""Whether the numbers of what is signed, verified or issued pass their audit."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from calcpack.job.errors import CalcpackError
from calcpack.record.folder import MANIFEST, PACK


@dataclass(frozen=True)
class NumbersResult:
    """Whether the audit passes; None where it could not be made, with the reason."""

    passes: bool | None
    says: str


def audited(path: Path) -> NumbersResult:
    """Audit a pack, or the record behind a sheet for the screen; the pack for the folder's first page.

    Parameters
    ----------
    path : Path
    """
    from calcpack.record.audit import audit_target  # brings the whole of the analysis with it

    target, records = path, None
    if path.suffix.lower() != ".pdf":
        record = path.with_suffix(".json")
        target = record if record.is_file() else path.with_name(PACK)
    elif (path.parent / MANIFEST).is_file() and (path.parent / "sheets").is_dir():
        records = path.parent
    try:
        audit = audit_target(target)
    except CalcpackError as error:
        if records is None:
            return NumbersResult(None, f"not audited: {error.problems[0]}")
        try:
            audit = audit_target(target, records=records)  # a pack without attachments
        except CalcpackError as other:
            return NumbersResult(None, f"not audited: {other.problems[0]}")
    if audit.passes:
        return NumbersResult(True, f"the audit of {len(audit.sheets)} sheets passes")
    return NumbersResult(False, "the audit does not pass")
