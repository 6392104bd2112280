"""Showing blocks in a notebook; anywhere else there is nothing to show them on."""

from __future__ import annotations

import sys
from collections.abc import Callable, Sequence
from typing import Any

from calcpack.sheet.html import blocks_html, text_html

BLOCKS_MIME = "application/vnd.calcpack.blocks+json"
RECORD_MIME = "application/vnd.calcpack.record+json"


def _display() -> Callable[..., object] | None:
    """The notebook's way to show something; None outside of a kernel."""
    module = sys.modules.get("IPython")
    shell = module.get_ipython() if module is not None else None
    if module is None or getattr(shell, "kernel", None) is None:
        return None
    found: Callable[..., object] = module.display.display
    return found


def blocks_bundle(blocks: Sequence[dict[str, Any]]) -> dict[str, Any]:
    """Blocks as a notebook output: as data, and as HTML for the screen."""
    return {BLOCKS_MIME: {"blocks": list(blocks)}, "text/html": blocks_html(blocks)}


def record_bundle(record: dict[str, Any]) -> dict[str, Any]:
    """A record as a notebook output."""
    words = f"Record of sheet {record['mark']}: {len(record['lines'])} lines."
    return {RECORD_MIME: record, "text/html": f"<p><small>{text_html(words)}</small></p>"}


def put(bundle: dict[str, Any]) -> bool:
    """Show an output; whether there was anything to show it on."""
    display = _display()
    if display is None:
        return False
    display(bundle, raw=True)
    return True
