"""The job file: read, checked as a whole, understood in SI.

``read_job`` is loaded when first asked for, so that a module which only wants units does not pay for
the reader.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from calcpack.job.reader import read_job

__all__ = ["read_job"]


def __getattr__(name: str) -> Any:
    if name == "read_job":
        from calcpack.job.reader import read_job

        return read_job
    raise AttributeError(f"module 'calcpack.job' has no attribute {name!r}")
