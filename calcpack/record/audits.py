"""The audit of what is signed, verified and issued."""

from __future__ import annotations

import importlib
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from calcpack.job.errors import CalcpackError


@dataclass(frozen=True)
class AuditResult:
    """Whether the audit passes; None where it could not be made, with the reason."""

    passes: bool | None
    says: str


def audit(path: Path) -> AuditResult:
    """Audit a pack, a sheet or a folder.

    Parameters
    ----------
    path : Path
    """
    try:
        auditing: Any = importlib.import_module("calcpack.record.auditing")
        target = auditing.audit_target
    except (ImportError, AttributeError):
        return AuditResult(None, "not audited: this installation of calcpack has no audit")
    try:
        report = target(path)
    except CalcpackError as error:
        return AuditResult(None, f"not audited: {error.problems[0]}")
    says = "the audit passes" if report.passes else "the audit does not pass"
    return AuditResult(bool(report.passes), says)
